"""What the slots of a group's program read: cells, strips of cells along the copies, rectangles, places.

A reader is a function from the store of values to the value read. It is made once for a group and a set of
inputs; what holds only constants is gathered then and there.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any, TypeAlias

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.coerce import CannotEvaluateError
from doubler.workbook.geometry import Geometry, OutsideError, Place, Run, cells_in, moves
from doubler.workbook.graph import Graph
from doubler.workbook.lanes import Grid, Mixed, broadcast, concatenated, filled, from_scalars, reshape, shape_of
from doubler.workbook.model import Area, Scalar
from doubler.workbook.occupancy import Occupancy
from doubler.workbook.program import Slot
from doubler.workbook.syntax import CellRef, RangeRef

SMALL_AREA = 256
"""Up to this many cells a rectangle is kept as a list of cells, above as one array."""


LARGEST_AREA = 1 << 24
"""A range with more cells than this, empty ones between filled ones counted, is not evaluated."""


class Store:
    """The values of all groups and inputs, by index.

    Attributes
    ----------
    epoch
        Tells one block of cases from the next.
    run
        Tells one evaluation from the next.
    refusals
        Of each group in which one of our functions gave an error value: in which lanes, and why.
    """

    __slots__ = ("epoch", "refusals", "run", "values")

    def __init__(self, size: int) -> None:
        self.values: list[Any] = [None] * size
        self.refusals: dict[int, list[tuple[Any, str]]] = {}
        self.epoch = 0
        self.run = 0


Reader: TypeAlias = Callable[[Store], Any]


class SheetPlace:
    """Where a reference lies, for ROW, COLUMN and their kin.

    Attributes
    ----------
    sheet
        Its name; `index` its number from 0.
    row, column
        First row and column: numbers, or arrays over the copies.
    area
        The rectangle in the first copy.
    """

    __slots__ = ("area", "areas", "column", "index", "row", "sheet")

    def __init__(self, sheet: str, index: int, row: Any, column: Any, area: Area, areas: int) -> None:
        self.sheet = sheet
        self.index = index
        self.row = row
        self.column = column
        self.area = area
        self.areas = areas


class Binder:
    """Makes readers for the groups of a graph, with inputs put in place of some cells."""

    def __init__(self, graph: Graph, inputs: dict[tuple[int, int, int], int]) -> None:
        self.graph = graph
        self.geometry: Geometry = graph.geometry
        self.sheets = graph.workbook.sheets
        self.occupancy: list[Occupancy] = list(graph.occupancy)
        self._areas: dict[Place, Reader] = {}
        self._used: dict[int, tuple[int, int]] = {}
        self.varying: set[int] = set()
        touched = set()
        for (sheet, row, column), node in inputs.items():
            if sheet not in touched:
                touched.add(sheet)
                self.occupancy[sheet] = self.occupancy[sheet].copied()
            self.occupancy[sheet].override(row, column, node)

    def reader(self, slot: Slot, run: Run) -> Reader:
        """Return the reader of a slot for a run of copies."""
        try:
            if slot.way == "place":
                return self._place(slot, run)
            if slot.way == "spill":
                return self._spill(slot, run)
            if slot.way == "reason":
                return self._reason(slot, run)
            if slot.way == "meet":
                return self._meet(slot, run)
            if slot.way == "cell":
                assert isinstance(slot.node, CellRef)
                return self._cell_reference(slot.node, run)
            return self._grid(slot, run)
        except OutsideError:
            return constant(ErrorValue.REF)

    def _reason(self, slot: Slot, run: Run) -> Reader:
        """Read why a cell shows an error value: the refusals of its group, and which copy it is."""
        sheet, area = self.geometry.places(slot.node, run)[0]
        node, copy = self.occupancy[sheet].at(area.first_row, area.first_column) or (-1, 0)
        return lambda store: (store.refusals.get(node, ()), copy)

    def _cell_reference(self, node: CellRef, run: Run) -> Reader:
        sheet, area = self.geometry.places(node, run)[0]
        self.geometry.places(node, run, run.count - 1)
        down, across = moves(node.row, run.down), moves(node.column, run.across)
        return self.strip(sheet, area.first_row, area.first_column, down, across, run.count)

    def _meet(self, slot: Slot, run: Run) -> Reader:
        met = self.geometry.met(slot.node, run)
        if met is None:
            return constant(ErrorValue.VALUE)
        sheet, area = met
        last = self.geometry.met(slot.node, run, run.count - 1)
        assert last is not None
        down = int(last[1].first_row > area.first_row)
        across = int(last[1].first_column > area.first_column)
        return self.strip(sheet, area.first_row, area.first_column, down, across, run.count)

    def _spill(self, slot: Slot, run: Run) -> Reader:
        sheet, area = self.geometry.places(slot.node, run)[0]
        found = self.occupancy[sheet].at(area.first_row, area.first_column)
        if found is None or found[0] >= len(self.graph.groups) or self.graph.groups[found[0]].area is None:
            return constant(ErrorValue.REF)
        group = found[0]
        return lambda store: store.values[group]

    def _grid(self, slot: Slot, run: Run) -> Reader:
        places = self.geometry.places(slot.node, run)
        if not places:
            return constant(ErrorValue.NULL)
        if len(places) > 1:
            readers = [self.area(place) for place in places]
            return lambda store: tuple(read(store) for read in readers)
        place = places[0]
        if run.count == 1:
            return self.area(place)
        down, across = self._window_moves(slot, run)
        if not down and not across:
            return self.area(place)
        return self._window(place, down, across, run.count)

    @staticmethod
    def _window_moves(slot: Slot, run: Run) -> tuple[int, int]:
        if isinstance(slot.node, CellRef):
            return moves(slot.node.row, run.down), moves(slot.node.column, run.across)
        assert isinstance(slot.node, RangeRef)
        return moves(slot.node.first_row, run.down), moves(slot.node.first_column, run.across)

    def _window(self, place: Place, down: int, across: int, count: int) -> Reader:
        """Read a rectangle that moves with the copies: each of its cells is a strip."""
        sheet, area = place
        rows, columns = area.last_row - area.first_row + 1, area.last_column - area.first_column + 1
        strips = [
            self.strip(sheet, row, column, down, across, count)
            for row in range(area.first_row, area.last_row + 1)
            for column in range(area.first_column, area.last_column + 1)
        ]
        return lambda store: Grid(rows, columns, cells=[read(store) for read in strips], reference=True)

    def constant_at(self, sheet: int, row: int, column: int) -> Scalar:
        """Return the constant in a cell; None where it is empty."""
        cell = self.sheets[sheet].cells.get((row, column))
        return None if cell is None else cell.value

    def strip(self, sheet: int, row: int, column: int, down: int, across: int, count: int) -> Reader:
        """Read the cells that one reference means in consecutive copies."""
        if count == 1 or not (down or across):
            return self.single(sheet, row, column)
        pieces: list[tuple[Reader, int]] = []
        lane = 0
        while lane < count:
            r, c = row + lane * down, column + lane * across
            found = self.occupancy[sheet].at(r, c)
            if found is None:
                values: list[Scalar] = []
                while lane < count and found is None:
                    values.append(self.constant_at(sheet, r, c))
                    lane += 1
                    r, c = row + lane * down, column + lane * across
                    found = self.occupancy[sheet].at(r, c) if lane < count else None
                pieces.append((constant(from_scalars(values, (len(values), 1))), len(values)))
                continue
            node, first = found
            length = self._stretch(node, first, sheet, r, c, down, count - lane)
            whole = node < len(self.graph.groups) and self.graph.groups[node].area is None
            pieces.append((self._slice(node, first, first + length) if whole else self.single(sheet, r, c), length))
            lane += length
        return pieces[0][0] if len(pieces) == 1 else _joined_strip(pieces)

    def _stretch(self, node: int, first: int, sheet: int, row: int, column: int, down: int, most: int) -> int:
        """Return how many consecutive cells belong to consecutive copies of one group."""
        if node >= len(self.graph.groups) or self.graph.groups[node].area is not None:
            return 1
        length = 1
        if down:
            runs = self.occupancy[sheet].runs(column, row, row + most - 1)
            top, end, group, _ = next(iter(runs))
            if group == node and top == row and self.graph.groups[node].run.down:
                length = end - row + 1
        else:
            while length < most and self.occupancy[sheet].at(row, column + length) == (node, first + length):
                length += 1
        return length

    def _slice(self, node: int, first: int, last: int) -> Reader:
        """Read some copies of a group."""
        if (first, last) == (0, self.graph.groups[node].run.count):
            return lambda store: store.values[node]

        def read(store: Store) -> Any:
            value = store.values[node]
            return value if shape_of(value) == () or value.shape[0] == 1 else value[first:last]

        return read

    def single(self, sheet: int, row: int, column: int) -> Reader:
        """Read one cell."""
        found = self.occupancy[sheet].at(row, column)
        if found is None:
            return constant(self.constant_at(sheet, row, column))
        node, lane = found
        if node >= len(self.graph.groups):
            return lambda store: store.values[node]
        group = self.graph.groups[node]
        if group.area is not None:
            return self._from_array(node, row - group.area.first_row, column - group.area.first_column)
        if group.run.count == 1:
            return lambda store: store.values[node]

        def read(store: Store) -> Any:
            value = store.values[node]
            if shape_of(value) == () or value.shape[0] == 1:
                return value
            return _alone(value[lane : lane + 1])

        return read

    def _from_array(self, node: int, row: int, column: int) -> Reader:
        spills = self.graph.groups[node].spills

        def read(store: Store) -> Any:
            value = store.values[node]
            if not isinstance(value, Grid):
                return value if not spills or (row, column) == (0, 0) else None
            r = 0 if value.rows == 1 and not spills else row
            c = 0 if value.columns == 1 and not spills else column
            if r < value.rows and c < value.columns:
                return filled(value.cell(r, c))
            return None if spills else ErrorValue.NA

        return read

    def area(self, place: Place) -> Reader:
        """Read a rectangle that does not move with the copies."""
        reader = self._areas.get(place)
        if reader is None:
            reader = self._areas[place] = self._area(place)
        return reader

    def _area(self, place: Place) -> Reader:
        sheet, full = place
        area = self._cut(sheet, full)
        rows, columns = area.last_row - area.first_row + 1, area.last_column - area.first_column + 1
        if rows * columns > LARGEST_AREA:
            raise CannotEvaluateError(
                f"it reads a range of {rows * columns:,} cells between the first and the last filled one, more than "
                f"the {LARGEST_AREA:,} that are evaluated at once; let it read the filled columns only"
            )
        whole = (full.last_row - full.first_row + 1, full.last_column - full.first_column + 1)
        corner = (area.first_row, area.first_column)
        nodes = self.occupancy[sheet].groups(area)
        if not nodes:
            values = [
                self.constant_at(sheet, row, column)
                for row in range(area.first_row, area.last_row + 1)
                for column in range(area.first_column, area.last_column + 1)
            ]
            data = from_scalars(values, (rows, columns, 1, 1))
            return constant(Grid(rows, columns, data=data, reference=True, whole=whole, place=corner))
        if cells_in(area) <= SMALL_AREA:
            readers = [
                self.single(sheet, row, column)
                for row in range(area.first_row, area.last_row + 1)
                for column in range(area.first_column, area.last_column + 1)
            ]

            def gather(store: Store) -> Grid:
                return Grid(
                    rows, columns, cells=[read(store) for read in readers], reference=True, whole=whole, place=corner
                )

            return self._kept(gather, nodes)
        parts = [
            self._column(sheet, c, area.first_row, area.last_row)
            for c in range(area.first_column, area.last_column + 1)
        ]

        def assemble(store: Store) -> Grid:
            pieces = [[piece(store) for piece in column] for column in parts]
            cases = max(piece.shape[3] for column in pieces for piece in column)
            stacked = [
                concatenated([broadcast(piece, (piece.shape[0], 1, 1, cases)) for piece in column], 0)
                for column in pieces
            ]
            return Grid(rows, columns, data=concatenated(stacked, 1), reference=True, whole=whole, place=corner)

        return self._kept(assemble, nodes)

    def _kept(self, gather: Callable[[Store], Grid], nodes: set[int]) -> Reader:
        """Gather a rectangle once a block; once an evaluation where nothing in it varies by case."""
        last: list[Any] = [None, None, None]
        binder = self

        def read(store: Store) -> Grid:
            epoch = store.epoch if not nodes.isdisjoint(binder.varying) else -store.run
            if last[0] is not store or last[1] != epoch:
                last[:] = [store, epoch, gather(store)]
            grid: Grid = last[2]
            return grid

        return read

    def _column(self, sheet: int, column: int, first: int, last: int) -> list[Reader]:
        """Return the readers of a column's pieces, each giving an array of shape (rows, 1, 1, cases or 1)."""
        pieces: list[Reader] = []

        def fixed(start: int, end: int) -> None:
            if start <= end:
                values = [self.constant_at(sheet, row, column) for row in range(start, end + 1)]
                pieces.append(constant(from_scalars(values, (len(values), 1, 1, 1))))

        at = first
        for top, end, node, lane in self.occupancy[sheet].runs(column, first, last):
            fixed(at, top - 1)
            at = end + 1
            group = self.graph.groups[node] if node < len(self.graph.groups) else None
            if group is None or group.area is not None or group.run.count == 1:
                for row in range(top, end + 1):
                    pieces.append(_as_rows(self.single(sheet, row, column), 1))
            else:
                count = end - top + 1
                pieces.append(_as_rows(self._slice(node, lane, lane + count), count))
        fixed(at, last)
        return pieces

    def _cut(self, sheet: int, area: Area) -> Area:
        """Cut a rectangle to the rows and columns that its sheet uses; at least one cell is left."""
        if cells_in(area) <= 4096:
            return area
        if sheet not in self._used:
            rows, columns = 1, 1
            for row, column in self.sheets[sheet].cells:
                rows, columns = max(rows, row), max(columns, column)
            for column, pieces in self.occupancy[sheet].columns.items():
                columns = max(columns, column)
                rows = max(rows, pieces[-1][1])
            self._used[sheet] = rows, columns
        rows, columns = self._used[sheet]
        last_row = max(area.first_row, min(area.last_row, rows))
        return Area(
            area.first_row,
            area.first_column,
            last_row,
            max(area.first_column, min(area.last_column, columns)),
        )

    def _place(self, slot: Slot, run: Run) -> Reader:
        places = self.geometry.places(slot.node, run)
        if not places:
            return constant(ErrorValue.NULL)
        sheet, area = places[0]
        row: Any = float(area.first_row)
        column: Any = float(area.first_column)
        if run.count > 1:
            down, across = self._window_moves(slot, run)
            lanes = np.arange(run.count, dtype=np.float64).reshape(-1, 1)
            row = row + lanes if down else row
            column = column + lanes if across else column
        return constant(SheetPlace(self.sheets[sheet].name, sheet, row, column, area, len(places)))


def constant(value: Any) -> Reader:
    """Return the reader of something that never changes."""
    return lambda _: value


def _alone(value: Any) -> Any:
    """Return one copy's lanes; as a scalar where there is one case only."""
    if value.shape != (1, 1):
        return value
    if isinstance(value, Mixed):
        slot = int(value.slot[0, 0])
        return value.items[slot] if slot >= 0 else float(value.numbers[0, 0])
    return value.item()


def _as_rows(read: Reader, count: int) -> Reader:
    def rows(store: Store) -> Any:
        value = read(store)
        shape = shape_of(value) or (1, 1)
        full = broadcast(value, (count, shape[1]))
        return reshape(full, (count, 1, 1, shape[1]))

    return rows


def _joined_strip(pieces: list[tuple[Reader, int]]) -> Reader:
    def read(store: Store) -> Any:
        values = []
        for piece, length in pieces:
            value = piece(store)
            values.append(broadcast(value, (length, shape_of(value)[1] if shape_of(value) else 1)))
        cases = max(value.shape[1] for value in values)
        return concatenated([broadcast(value, (value.shape[0], cases)) for value in values], 0)

    return read
