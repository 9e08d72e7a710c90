"""Findings about two columns (or rows) of like formulas, where one formula of the second reads the first one's input.

A fill over two cells has no neighbours on both sides. What tells is the pair's other rows, in which both formulas are
alike, and the input of its own that the odd one leaves unread.
"""

from __future__ import annotations

from collections.abc import Iterator

from doubler.check.fills import Fills, walk
from doubler.check.finding import Finding
from doubler.workbook.addresses import cell_name
from doubler.workbook.examined import Examined, cell_name_of
from doubler.workbook.model import Address, Sheet
from doubler.workbook.shift import MovableFormula
from doubler.workbook.syntax import Axis, CellRef, Node

_ALIKE = 2
"""Rows of the pair that need to agree."""


def odd_pairs(book: Examined) -> Iterator[Finding]:
    """Find, in two lines of like formulas side by side, the one that reads its neighbour's input instead of its own."""
    fills = Fills(book)
    for sheet in book.workbook.sheets:
        trees = fills.trees[sheet.name]
        for step in ((0, 1), (1, 0)):
            lines: dict[int, list[Address]] = {}
            for address in trees:
                beside = (address[0] + step[0], address[1] + step[1])
                if beside in trees and _two_wide(sheet, address, beside, step):
                    lines.setdefault(address[1] if step[1] else address[0], []).append(address)
            for line in lines.values():
                yield from _in_line(book, sheet, trees, line, step)


def _two_wide(sheet: Sheet, first: Address, second: Address, step: Address) -> bool:
    """Return whether nothing but the two stands in their line: no number before the first, none behind the second."""
    before, behind = (first[0] - step[0], first[1] - step[1]), (second[0] + step[0], second[1] + step[1])
    for address in (before, behind):
        cell = sheet.cells.get(address)
        if cell is not None and (cell.formula is not None or isinstance(cell.value, float)):
            return False
    return True


def _in_line(
    book: Examined, sheet: Sheet, trees: dict[Address, Node], line: list[Address], step: Address
) -> Iterator[Finding]:
    unlike = []
    for address in line:
        beside = (address[0] + step[0], address[1] + step[1])
        if trees[address] is not trees[beside]:
            unlike.append((address, beside))
    if len(unlike) != 1 or len(line) - 1 < _ALIKE:
        return
    (first, second), *_ = unlike
    own = _unread_inputs(book, sheet, trees[first], trees[second], second, step)
    if not own:
        return
    formula = MovableFormula(sheet.cells[first].formula or "").moved(*step)
    read = ", ".join(cell_name(row - step[0], column - step[1]) for row, column in own)
    left = ", ".join(cell_name(*one) for one in own)
    yield Finding(
        sheet.name,
        cell_name(*second),
        "pattern-break",
        "warning",
        f"The formula reads {read}, as the one in {cell_name(*first)} does, while the other lines read inputs of their "
        f"own and nothing reads {left}; write ={formula}, or say beside it why it differs.",
        f"={sheet.cells[second].formula or ''}",
        f"={formula}",
        tuple(cell_name_of((sheet.name, one)) for one in (first, *own)),
    )


def _unread_inputs(
    book: Examined, sheet: Sheet, first: Node, second: Node, host: Address, step: Address
) -> list[Address]:
    """Return the inputs that the second formula would read if it were a copy of the first, and that nothing reads."""
    ours, theirs = list(walk(first)), list(walk(second))
    if len(ours) != len(theirs):
        return []
    found = []
    for one, other in zip(ours, theirs, strict=True):
        if not (isinstance(one, CellRef) and isinstance(other, CellRef)):
            if type(one) is not type(other) or (not list(walk(one))[1:] and one != other):
                return []
            continue
        if one == other:
            continue
        moved = (one.row, other.row) if step[0] else (one.column, other.column)
        kept = (one.column, other.column) if step[0] else (one.row, other.row)
        if one.sheet != other.sheet or one.sheet is not None or kept[0] != kept[1] or not _stays(*moved):
            return []
        due = (one.row.at(host[0]), one.column.at(host[1]))
        cell = sheet.cells.get(due)
        if cell is None or not isinstance(cell.value, float) or cell.formula is not None:
            return []
        if book.readers.get((sheet.name, due)):
            return []
        found.append(due)
    return found


def _stays(first: Axis, second: Axis) -> bool:
    """Return whether two relative references, one step apart, mean the same line."""
    return not first.anchored and not second.anchored and second.number == first.number - 1
