"""SUBTOTAL and AGGREGATE pass over other subtotals, and over hidden rows where they are told to.

Which cells those are is known before anything is evaluated: the ranges of such a call are cut into the rectangles that
remain. Rules (function reference of SUBTOTAL and AGGREGATE, from memory): SUBTOTAL never takes another subtotal in, nor
a row that a filter hides; with 101 … 111 no hidden row at all. AGGREGATE passes over subtotals with the options 0 … 3,
over hidden rows with 1, 3, 5 and 7.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from doubler.workbook.coerce import CannotEvaluateError
from doubler.workbook.geometry import Geometry, OutsideError, Place, Run
from doubler.workbook.model import Address, Area, Workbook
from doubler.workbook.syntax import Axis, Binary, Call, CellRef, Node, Number, Omitted, RangeRef, nodes

NAMES = {"SUBTOTAL", "AGGREGATE"}
_CALL = re.compile(r"(?<![\w.])(?:_xlfn\.)?(?:SUBTOTAL|AGGREGATE)\(", re.IGNORECASE)
_PLAIN = re.compile(r"\s*(?:_xlfn\.)?(?:SUBTOTAL|AGGREGATE)\((?:[^()]|\([^()]*\))*\)\s*", re.IGNORECASE)
MOST_PIECES = 400
"""A range that falls into more rectangles than this is not evaluated."""


def holds_subtotal(tree: Node | None) -> bool:
    """Say whether a formula calls SUBTOTAL or AGGREGATE."""
    return any(isinstance(node, Call) and node.name in NAMES for node in nodes(tree))


@dataclass(frozen=True, slots=True)
class _Passed:
    """What one call passes over."""

    subtotals: bool
    hidden: bool
    filtered: bool


class SubtotalRanges:
    """Cuts the ranges of subtotals of one workbook.

    Parameters
    ----------
    workbook : Workbook
    geometry : Geometry
        Of the same workbook.
    """

    def __init__(self, workbook: Workbook, geometry: Geometry) -> None:
        self.workbook = workbook
        self.geometry = geometry
        self.cells: list[dict[Address, str]] = [
            {
                address: cell.formula
                for address, cell in sheet.cells.items()
                if cell.formula is not None and _CALL.search(cell.formula)
            }
            for sheet in workbook.sheets
        ]

    def cut(self, tree: Node, run: Run) -> Node:
        """Return a formula with the ranges of its subtotals cut.

        Parameters
        ----------
        tree : Node
            Resolved.
        run : Run
            The one cell in which it stands.

        Raises
        ------
        CannotEvaluateError
            Where what is passed over cannot be told.
        """
        if isinstance(tree, Call):
            arguments = tuple(self.cut(argument, run) for argument in tree.arguments)
            if tree.name in NAMES:
                arguments = self._arguments(tree.name, arguments, run)
            return Call(tree.name, arguments)
        if isinstance(tree, Binary):
            return Binary(tree.operator, self.cut(tree.left, run), self.cut(tree.right, run))
        return tree

    def _arguments(self, name: str, arguments: tuple[Node, ...], run: Run) -> tuple[Node, ...]:
        first = 1 if name == "SUBTOTAL" else 2
        if not any(self._concerned(node, run) for node in arguments[first:]):
            return arguments
        hidden = any(self._holds_hidden(place) for node in arguments[first:] for place in self._places(node, run))
        passed = _passed(name, arguments, hidden)
        return (*arguments[:first], *(self._argument(name, arguments, node, passed, run) for node in arguments[first:]))

    def _concerned(self, node: Node, run: Run) -> bool:
        """Say whether a range holds a subtotal or a hidden row at all."""
        return any(
            any(address in place[1] for address in self.cells[place[0]]) or self._holds_hidden(place)
            for place in self._places(node, run)
        )

    def _holds_hidden(self, place: Place) -> bool:
        index, area = place
        return any(area.first_row <= row <= area.last_row for row in self.workbook.sheets[index].hidden_rows)

    def _places(self, node: Node, run: Run) -> list[Place]:
        if not isinstance(node, CellRef | RangeRef | Binary):
            return []
        try:
            return self.geometry.places(node, run)
        except (OutsideError, CannotEvaluateError):
            return []

    def _argument(self, name: str, arguments: tuple[Node, ...], node: Node, passed: _Passed, run: Run) -> Node:
        if not self._concerned(node, run):
            return node
        pieces: list[Node] = []
        changed = False
        for place in self._places(node, run):
            rows, cells = self._passed_over(name, place, passed)
            changed = changed or bool(rows or cells)
            pieces += [_reference(self.workbook.sheets[place[0]].name, area) for area in _left(place[1], rows, cells)]
        if not changed:
            return node
        chosen = arguments[0]
        if not pieces or len(pieces) > MOST_PIECES or (isinstance(chosen, Number) and 14 <= chosen.value <= 19):
            raise CannotEvaluateError("its subtotal passes over cells in a way that is not evaluated here")
        union = pieces[0]
        for piece in pieces[1:]:
            union = Binary(",", union, piece)
        return union

    def _passed_over(self, name: str, place: Place, passed: _Passed) -> tuple[set[int], set[Address]]:
        """Return the rows and the single cells that are passed over in a rectangle."""
        index, area = place
        sheet = self.workbook.sheets[index]
        rows = {row for row in sheet.hidden_rows if area.first_row <= row <= area.last_row}
        if not passed.hidden:
            by_filter = {row for row in rows if any(a.first_row < row <= a.last_row for a in sheet.filtered)}
            rows = by_filter if passed.filtered else set()
        cells = {address: text for address, text in self.cells[index].items() if address in area}
        if not passed.subtotals:
            return rows, set()
        for text in cells.values():
            if not _PLAIN.fullmatch(text) or (name == "SUBTOTAL" and "AGGREGATE(" in text.upper()):
                raise CannotEvaluateError(
                    "its subtotal passes over a formula that is a subtotal only in part, which is not evaluated here"
                )
        return rows, set(cells)


def _passed(name: str, arguments: tuple[Node, ...], hidden: bool) -> _Passed:
    if name == "SUBTOTAL" and not hidden:
        return _Passed(subtotals=True, hidden=False, filtered=False)  # whichever statistic its number chooses
    number = arguments[0 if name == "SUBTOTAL" else 1] if len(arguments) > 1 else None
    value = 0.0 if name == "AGGREGATE" and isinstance(number, Omitted) else getattr(number, "value", None)
    if not isinstance(value, float):
        raise CannotEvaluateError(
            "its subtotal passes over other subtotals or hidden rows by a number that is computed"
        )
    if name == "SUBTOTAL":
        return _Passed(subtotals=True, hidden=value > 100, filtered=True)
    return _Passed(subtotals=value < 4, hidden=int(value) % 2 == 1, filtered=False)


def _left(area: Area, rows: set[int], cells: set[Address]) -> list[Area]:
    """Return the rectangles that remain of an area, from top to bottom."""
    found: list[Area] = []
    top = area.first_row
    for row in sorted(rows | {row for row, _ in cells}):
        if row > top:
            found.append(Area(top, area.first_column, row - 1, area.last_column))
        top = row + 1
        if row in rows:
            continue
        left = area.first_column
        for column in sorted(column for at, column in cells if at == row):
            if column > left:
                found.append(Area(row, left, row, column - 1))
            left = column + 1
        if left <= area.last_column:
            found.append(Area(row, left, row, area.last_column))
    if top <= area.last_row:
        found.append(Area(top, area.first_column, area.last_row, area.last_column))
    return found


def _reference(sheet: str, area: Area) -> RangeRef:
    return RangeRef(
        sheet,
        Axis(area.first_row, True),
        Axis(area.first_column, True),
        Axis(area.last_row, True),
        Axis(area.last_column, True),
    )
