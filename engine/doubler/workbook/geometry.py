"""Where a formula's references lie, for one copy or over a run of copies."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from doubler.workbook.coerce import CannotEvaluateError
from doubler.workbook.model import Area, Workbook
from doubler.workbook.program import Slot
from doubler.workbook.references import LAST_COLUMN, LAST_ROW
from doubler.workbook.syntax import Axis, Binary, CellRef, Node, RangeRef

LARGEST_WINDOW = 512
"""A range that moves with the copies and has more cells than this is read copy by copy."""


@dataclass(frozen=True, slots=True)
class Run:
    """Consecutive copies of one formula.

    Attributes
    ----------
    sheet
        Index of the sheet.
    row, column
        The first copy's cell.
    count
        How many copies.
    down, across
        (1, 0) where they stand below each other, (0, 1) beside each other, (0, 0) for one cell.
    """

    sheet: int
    row: int
    column: int
    count: int = 1
    down: int = 0
    across: int = 0

    def cell(self, lane: int) -> tuple[int, int]:
        """Return row and column of a copy."""
        return self.row + lane * self.down, self.column + lane * self.across

    @property
    def last(self) -> tuple[int, int]:
        """Row and column of the last copy."""
        return self.cell(self.count - 1)


Place = tuple[int, Area]
"""Index of a sheet, and a rectangle on it."""


class OutsideError(Exception):
    """A reference leads off the sheet, or to a sheet that is not there: #REF!."""


class Geometry:
    """Finds what the references of one workbook cover."""

    def __init__(self, workbook: Workbook) -> None:
        self.workbook = workbook
        self.sheets = {sheet.name.casefold(): index for index, sheet in enumerate(workbook.sheets)}

    def sheet(self, name: str | None, own: int) -> int:
        """Return the index of a sheet; `OutsideError` where there is none of that name."""
        if name is None:
            return own
        index = self.sheets.get(name.casefold())
        if index is None:
            raise OutsideError
        return index

    def places(self, node: Node, run: Run, lane: int = 0) -> list[Place]:
        """Return the rectangles that a reference covers in one copy, in the order written."""
        host = run.cell(lane)
        if isinstance(node, CellRef):
            row, column = node.row.at(host[0]), node.column.at(host[1])
            _inside(row, column)
            return [(self.sheet(node.sheet, run.sheet), Area(row, column, row, column))]
        if isinstance(node, RangeRef):
            return self._range(node, run, host)
        if isinstance(node, Binary):
            left, right = self.places(node.left, run, lane), self.places(node.right, run, lane)
            if node.operator == ",":
                return left + right
            if node.operator == ":":
                return [_hull(left + right)]
            return [place for a in left for b in right for place in _overlap(a, b)]
        raise CannotEvaluateError("a reference that is computed is not evaluated here")

    def _range(self, node: RangeRef, run: Run, host: tuple[int, int]) -> list[Place]:
        rows = _span(node.first_row, node.last_row, host[0], LAST_ROW)
        columns = _span(node.first_column, node.last_column, host[1], LAST_COLUMN)
        area = Area(rows[0], columns[0], rows[1], columns[1])
        first = self.sheet(node.sheet, run.sheet)
        if node.last_sheet is None:
            return [(first, area)]
        last = self.sheet(node.last_sheet, run.sheet)
        return [(sheet, area) for sheet in range(min(first, last), max(first, last) + 1)]

    def met(self, node: Node, run: Run, lane: int = 0) -> Place | None:
        """Return the one cell in which a range meets the own row or column; None where it does not."""
        places = self.places(node, run, lane)
        if len(places) != 1:
            return None
        sheet, area = places[0]
        row, column = run.cell(lane)
        tall, wide = area.last_row > area.first_row, area.last_column > area.first_column
        if not tall and not wide:
            return places[0]
        if tall and not wide and area.first_row <= row <= area.last_row:
            return sheet, Area(row, area.first_column, row, area.first_column)
        if wide and not tall and area.first_column <= column <= area.last_column:
            return sheet, Area(area.first_row, column, area.first_row, column)
        if tall and wide and (row, column) in area and sheet != run.sheet:
            return sheet, Area(row, column, row, column)
        return None

    def must_split(self, slot: Slot, run: Run) -> bool:
        """Whether a run's copies must be evaluated one by one for the sake of this reference."""
        if run.count == 1:
            return False
        try:
            if slot.way in ("spill", "reason"):
                return True
            if slot.way == "meet":
                ends = self.met(slot.node, run), self.met(slot.node, run, run.count - 1)
                return ends[0] is None or ends[1] is None or not isinstance(slot.node, RangeRef)
            if isinstance(slot.node, CellRef):
                self.places(slot.node, run)
                self.places(slot.node, run, run.count - 1)
                return False
            if not isinstance(slot.node, RangeRef) or slot.node.last_sheet is not None:
                return True
            ends_along = (
                (slot.node.first_row, slot.node.last_row)
                if run.down
                else (slot.node.first_column, slot.node.last_column)
            )
            if ends_along[0] is None or ends_along[1] is None or (ends_along[0].anchored and ends_along[1].anchored):
                return False
            if ends_along[0].anchored != ends_along[1].anchored:
                return True
            _, area = self.places(slot.node, run)[0]
            self.places(slot.node, run, run.count - 1)
            return cells_in(area) > LARGEST_WINDOW
        except OutsideError:
            return True

    def covered(self, slot: Slot, run: Run) -> Iterator[Place]:
        """Yield the rectangles that a reference covers over all copies of a run (for a run that need not be split)."""
        if slot.way == "place":
            return
        lanes = (0,) if run.count == 1 else (0, run.count - 1)
        try:
            if slot.way == "meet":
                ends = [self.met(slot.node, run, lane) for lane in lanes]
                found = [[place] for place in ends if place is not None]
            else:
                found = [self.places(slot.node, run, lane) for lane in lanes]
        except OutsideError:
            return
        if not found:
            return
        if len(found) == 1:
            yield from found[0]
        else:
            for first, last in zip(*found, strict=True):
                yield _hull([first, last])


def cells_in(area: Area) -> int:
    """Return how many cells a rectangle has."""
    return (area.last_row - area.first_row + 1) * (area.last_column - area.first_column + 1)


def moves(axis: Axis | None, step: int) -> int:
    """Return by how much a coordinate moves from copy to copy."""
    return 0 if axis is None or axis.anchored else step


def _span(first: Axis | None, last: Axis | None, own: int, end: int) -> tuple[int, int]:
    if first is None or last is None:
        return 1, end
    a, b = sorted((first.at(own), last.at(own)))
    if a < 1 or b > end:
        raise OutsideError
    return a, b


def _inside(row: int, column: int) -> None:
    if not (1 <= row <= LAST_ROW and 1 <= column <= LAST_COLUMN):
        raise OutsideError


def _hull(places: list[Place]) -> Place:
    sheets = {sheet for sheet, _ in places}
    if len(sheets) != 1:
        raise OutsideError
    areas = [area for _, area in places]
    return sheets.pop(), Area(
        min(area.first_row for area in areas),
        min(area.first_column for area in areas),
        max(area.last_row for area in areas),
        max(area.last_column for area in areas),
    )


def _overlap(a: Place, b: Place) -> list[Place]:
    if a[0] != b[0]:
        return []
    top, left = max(a[1].first_row, b[1].first_row), max(a[1].first_column, b[1].first_column)
    bottom, right = min(a[1].last_row, b[1].last_row), min(a[1].last_column, b[1].last_column)
    return [(a[0], Area(top, left, bottom, right))] if top <= bottom and left <= right else []
