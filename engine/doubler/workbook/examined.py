"""A workbook as the rules see it: cells, formulas, values recalculated, units traced, words, and who reads whom."""

from __future__ import annotations

from collections import deque
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path
from typing import Any

from doubler.workbook.addresses import full_name
from doubler.workbook.coerce import CannotEvaluateError
from doubler.workbook.declared import Declarations, declare
from doubler.workbook.evaluate import Evaluation, NotEvaluated, evaluate
from doubler.workbook.geometry import OutsideError, Place, cells_in
from doubler.workbook.graph import Graph, build_graph
from doubler.workbook.labels import Label
from doubler.workbook.model import Address, Area, Cell, Scalar, Workbook
from doubler.workbook.reader import read_workbook
from doubler.workbook.syntax import CellRef, Node
from doubler.workbook.unit_flow import trace
from doubler.workbook.unit_verdicts import Tracing

Key = tuple[str, Address]
"""A cell: its sheet's name as written, and its address."""

WIDEST = 4096
"""A range with more cells than this is not taken apart into cells."""


@dataclass(frozen=True, slots=True)
class Read:
    """One reference of a formula: a rectangle on a sheet."""

    sheet: str
    area: Area

    @property
    def single(self) -> Address | None:
        """The address where it is one cell, else None."""
        area = self.area
        one = (area.first_row, area.first_column) == (area.last_row, area.last_column)
        return (area.first_row, area.first_column) if one else None


class Examined:
    """One workbook, evaluated and traced.

    Attributes
    ----------
    workbook, graph, declarations
        The workbook, its formulas and its declared units.
    values
        Every formula cell recalculated.
    """

    def __init__(self, workbook: Workbook) -> None:
        self.workbook = workbook
        self.graph: Graph = build_graph(workbook)
        self.declarations: Declarations = declare(workbook)
        self.values: Evaluation = evaluate(self.graph)
        self._reads: dict[Key, list[Read]] = {}
        self._read_cells: dict[Key, tuple[Key, ...]] = {}
        self._cells = {sheet.name: sheet.cells for sheet in workbook.sheets}

    @classmethod
    def read(cls, path: Path | str) -> Examined:
        """Read and examine a workbook."""
        return cls(read_workbook(path))

    @cached_property
    def tracing(self) -> Tracing:
        """The units, traced through every formula."""
        return trace(self.workbook, self.graph, self.declarations)

    def cell(self, key: Key) -> Cell | None:
        """Return a cell, or None where there is none."""
        cells = self._cells.get(key[0])
        return None if cells is None else cells.get(key[1])

    def value(self, key: Key) -> Any:
        """Return a cell's value: recalculated for a formula, else the constant; `NotEvaluated` where not known."""
        cell = self.cell(key)
        if cell is not None and cell.formula is None and cell.value is not None:
            return cell.value
        if cell is None or cell.formula is None:
            group = self.graph.group_at(*key)
            if group is None:
                return None if cell is None else cell.value
        try:
            return self.values.value(*key)
        except KeyError:
            return None if cell is None else cell.value

    def number(self, key: Key) -> float | None:
        """Return a cell's value where it is a number, else None; where it could not be recalculated, the stored one."""
        value = self.value(key)
        if isinstance(value, NotEvaluated):
            cell = self.cell(key)
            value = None if cell is None else cell.value
        return value if isinstance(value, float) and not isinstance(value, bool) else None

    def stored(self, key: Key) -> Scalar:
        """Return the value that the file shows."""
        cell = self.cell(key)
        return None if cell is None else cell.value

    def label(self, key: Key) -> Label:
        """Return the words that belong to a cell."""
        return self.declarations.label(*key)

    def formulas(self) -> Iterator[tuple[Key, Cell]]:
        """Yield every formula cell."""
        for sheet, address, cell in self.workbook.formulas():
            yield (sheet.name, address), cell

    def tree(self, key: Key) -> Node | None:
        """Return a formula's syntax tree, names and table references replaced where that could be done."""
        found = self.graph.group_at(*key)
        if found is None:
            return None
        group = self.graph.groups[found[0]]
        return group.resolved or group.tree

    def reads(self, key: Key) -> list[Read]:
        """Return what a formula reads, reference by reference, in the order in which it names them."""
        known = self._reads.get(key)
        if known is not None:
            return known
        found = self.graph.group_at(*key)
        reads: list[Read] = []
        if found is not None:
            group = self.graph.groups[found[0]]
            slots = group.program.slots if group.program is not None else ()
            for slot in slots:
                try:
                    places = self.graph.geometry.places(slot.node, group.run, found[1])
                except (OutsideError, CannotEvaluateError):
                    continue
                reads += [self._read(place) for place in places]
        self._reads[key] = reads
        return reads

    def _read(self, place: Place) -> Read:
        return Read(self.workbook.sheets[place[0]].name, place[1])

    def cells_read(self, key: Key) -> tuple[Key, ...]:
        """Return the cells that a formula reads and that hold something; of very large ranges those that are filled."""
        known = self._read_cells.get(key)
        if known is None:
            known = self._read_cells[key] = self._single_cells(key)
        return known

    def _single_cells(self, key: Key) -> tuple[Key, ...]:
        """Return the cells that a formula reads; where it reads single cells only, without the way over areas."""
        at = self.graph.group_at(*key)
        if at is None:
            return ()
        group = self.graph.groups[at[0]]
        row, column = group.run.cell(at[1])
        found: list[Key] = []
        for slot in group.program.slots if group.program is not None else ():
            node = slot.node
            if not isinstance(node, CellRef):
                return tuple(cell for read in self.reads(key) for cell in self.cells_of(read))
            name = self.workbook.sheets[group.run.sheet].name
            if node.sheet is not None:
                index = self.graph.sheet_index(node.sheet)
                if index is None:
                    continue
                name = self.workbook.sheets[index].name
            address = (node.row.at(row), node.column.at(column))
            if address in self._cells[name]:
                found.append((name, address))
        return tuple(found)

    def cells_of(self, read: Read) -> Iterator[Key]:
        """Yield the filled cells of a reference."""
        cells = self._cells.get(read.sheet)
        if cells is None:
            return
        area = read.area
        if cells_in(area) <= WIDEST:
            for row in range(area.first_row, area.last_row + 1):
                for column in range(area.first_column, area.last_column + 1):
                    if (row, column) in cells:
                        yield read.sheet, (row, column)
        else:
            for address in cells:
                if address in area:
                    yield read.sheet, address

    @cached_property
    def readers(self) -> dict[Key, list[Key]]:
        """For each cell that is read the formula cells that read it."""
        found: dict[Key, list[Key]] = {}
        for key, _ in self.formulas():
            for read in set(self.cells_read(key)):
                found.setdefault(read, []).append(key)
        return found

    def downstream(self, roots: Iterable[Key]) -> set[Key]:
        """Return all formula cells that depend on some cells, without those themselves."""
        found: set[Key] = set()
        work = deque(roots)
        while work:
            for reader in self.readers.get(work.popleft(), ()):
                if reader not in found:
                    found.add(reader)
                    work.append(reader)
        return found


def cell_name_of(key: Key) -> str:
    """Write a cell with its sheet, as findings do."""
    return full_name(key[0], *key[1])


def shown(value: Any, unit: str = "") -> str:
    """Write a value as a finding shows it."""
    if value is None:
        return "empty"
    if isinstance(value, bool):
        return str(value).upper()
    text = f"{value:.7g}" if isinstance(value, float) else repr(value) if isinstance(value, str) else str(value)
    return f"{text} {unit}" if unit and isinstance(value, float) else text
