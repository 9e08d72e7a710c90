"""Ranges that stop short of the filled cells they plainly mean."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator
from dataclasses import dataclass

from doubler.check.altered import values_altered
from doubler.check.fills import Fills, walk
from doubler.check.finding import Finding
from doubler.check.recognise import quantity_at
from doubler.workbook.addresses import area_name, cell_name
from doubler.workbook.examined import Examined, Key, cell_name_of, shown
from doubler.workbook.geometry import OutsideError, Run
from doubler.workbook.graph import Group
from doubler.workbook.model import Address, Area, Cell, Sheet
from doubler.workbook.syntax import Axis, Call, RangeRef

_TAKES_ALL = {
    "SUM", "MIN", "MAX", "AVERAGE", "COUNT", "COUNTA", "PRODUCT", "SUMSQ", "MEDIAN", "LARGE", "SMALL",
    "SUMPRODUCT", "SUBTOTAL", "AGGREGATE", "STDEV", "STDEV.S", "STDEV.P", "VAR", "VLOOKUP", "MATCH", "INDEX",
    "LOOKUP", "XLOOKUP", "SUMIF", "COUNTIF", "SUMIFS", "COUNTIFS", "AVERAGEIF", "MINIFS", "MAXIFS",
    "MARGIN_ENVELOPE", "MARGIN_GOVERNING", "MARGIN_COUNT_NEGATIVE",
}  # fmt: skip
MOST_MISSED = 200


@dataclass(frozen=True, slots=True)
class _Line:
    """A range of one column or one row, as a formula names it."""

    key: Key
    sheet: Sheet
    area: Area
    function: str
    down: bool

    def beyond(self, side: int) -> list[Address]:
        """Return the filled cells that go on from the range's end (1) or start (-1)."""
        row, column = (
            (self.area.last_row, self.area.last_column) if side > 0 else (self.area.first_row, self.area.first_column)
        )
        step = (side, 0) if self.down else (0, side)
        found: list[Address] = []
        while len(found) < MOST_MISSED:
            row, column = row + step[0], column + step[1]
            cell = self.sheet.cells.get((row, column))
            if cell is None or not _holds_number(cell) or (self.sheet.name, (row, column)) == self.key:
                break
            found.append((row, column))
        return found


def short_ranges(book: Examined) -> Iterator[Finding]:
    """Find totals, extremes and lookups whose range leaves out cells that are filled as its own are."""
    lines = list(_lines(book))
    covered: dict[str, list[tuple[Area, str, Key]]] = {}
    for line in lines:
        covered.setdefault(line.sheet.name, []).append((line.area, line.function, line.key))
    fills = Fills(book)
    seen: set[tuple[Key, Area]] = set()
    for line in lines:
        if (line.key, line.area) in seen:
            continue
        seen.add((line.key, line.area))
        missed = [a for side in (1, -1) for a in _missed(book, fills, line, side, covered[line.sheet.name])]
        if missed:
            yield _finding(book, line, missed)


def _lines(book: Examined) -> Iterator[_Line]:
    for group in book.graph.groups:
        tree = group.resolved or group.tree
        if tree is None:
            continue
        for call in walk(tree):
            if not isinstance(call, Call) or call.name not in _TAKES_ALL:
                continue
            ranges = [one for one in call.arguments if isinstance(one, RangeRef) and one.last_sheet is None]
            for argument in ranges:
                mates = [one for one in ranges if one is not argument] if call.name == "SUMPRODUCT" else []
                yield from _line(book, group, call.name, argument, mates)


def _line(book: Examined, group: Group, function: str, node: RangeRef, mates: list[RangeRef]) -> Iterator[_Line]:
    if None in (node.first_row, node.last_row, node.first_column, node.last_column):
        return
    run = group.run
    if run.count > 1 and _moves_along(node, run.down, run.across):
        return
    for lane in range(run.count):
        try:
            ((index, area),) = book.graph.geometry.places(node, run, lane)
        except OutsideError:
            continue
        key = (book.workbook.sheets[run.sheet].name, run.cell(lane))
        if not all(_goes_on(book, run, mate, lane, area) for mate in mates):
            continue  # multiplied with a range that ends there
        tall, wide = area.last_row - area.first_row, area.last_column - area.first_column
        lookup = function in ("VLOOKUP", "INDEX")
        if tall >= 1 and (wide == 0 or lookup):
            yield _Line(key, book.workbook.sheets[index], area, function, down=True)
        elif wide >= 1 and tall == 0:
            yield _Line(key, book.workbook.sheets[index], area, function, down=False)


def _goes_on(book: Examined, run: Run, mate: RangeRef, lane: int, area: Area) -> bool:
    """Return whether a range of the same shape has a number beyond its end, or before its start, too."""
    try:
        ((index, other),) = book.graph.geometry.places(mate, run, lane)
    except OutsideError:
        return True
    shape = area.last_row - area.first_row, area.last_column - area.first_column
    if shape != (other.last_row - other.first_row, other.last_column - other.first_column):
        return True
    step = (1, 0) if shape[0] else (0, 1)
    ends = (
        (other.last_row + step[0], other.last_column + step[1]),
        (other.first_row - step[0], other.first_column - step[1]),
    )
    cells = (book.workbook.sheets[index].cells.get(end) for end in ends)
    return any(cell is not None and _holds_number(cell) for cell in cells)


def _moves_along(node: RangeRef, down: int, across: int) -> bool:
    """Return whether a range slides with the copies in the direction in which it extends: a window."""
    rows, columns = (node.first_row, node.last_row), (node.first_column, node.last_column)

    def loose(ends: tuple[Axis | None, Axis | None]) -> bool:
        return any(axis is not None and not axis.anchored for axis in ends)

    tall = node.first_row != node.last_row
    return bool((down and tall and loose(rows)) or (across and not tall and loose(columns)))


def _holds_number(cell: Cell) -> bool:
    if cell.formula is not None:
        return isinstance(cell.value, float) or cell.value is None
    return isinstance(cell.value, float) and not isinstance(cell.value, bool)


def _missed(
    book: Examined, fills: Fills, line: _Line, side: int, covered: list[tuple[Area, str, Key]]
) -> list[Address]:
    beyond = line.beyond(side)
    if not beyond:
        return []
    area, name = line.area, line.sheet.name
    inside = (area.last_row, area.last_column) if side > 0 else (area.first_row, area.first_column)
    if line.function in ("VLOOKUP", "INDEX"):
        inside = (inside[0], area.first_column)
        beyond = [(row, area.first_column) for row, _ in beyond]
    own = line.sheet.cells.get(inside)
    if own is None or not _holds_number(own):
        return []
    trees = fills.trees[name]
    missed: list[Address] = []
    for address in beyond:
        cell = line.sheet.cells.get(address)
        if cell is None or (cell.formula is None) != (own.formula is None):
            break
        if any(read.sheet == name and _overlap(read.area, line.area) for read in book.reads((name, address))):
            break  # it sums up the range itself
        if not (_margin(book, (name, inside)) and _margin(book, (name, address))):
            if cell.formula is not None and trees.get(address) is not trees.get(inside):
                break
            if not _same_words(book, name, inside, address, down=line.down):
                break
        if _another_block(line, address, covered):
            return []
        missed.append(address)
    if any(line.key == (name, address) for address in missed):
        return []
    return missed


def _margin(book: Examined, key: Key) -> bool:
    """Return whether a cell is a margin of safety: an envelope means all that stand together, whatever their mode."""
    return quantity_at(book, key) == "margin of safety"


def _same_words(book: Examined, sheet: str, inside: Address, beyond: Address, *, down: bool) -> bool:
    """Return whether two cells stand under the same header (or beside the same label) and in the same unit."""
    first, second = book.label((sheet, inside)), book.label((sheet, beyond))
    if down and first.above != second.above:
        return False
    if not down and (first.left != second.left or _numbered(second.above) != _numbered(first.above)):
        return False
    one, two = book.declarations.unit(sheet, inside), book.declarations.unit(sheet, beyond)
    if (one is None) != (two is None):
        return False
    return one is None or two is None or one.unit == two.unit


_NUMBERED = re.compile(
    r"^(?:(?:load )?cases?|lc|no\.?|nos\.?|nr\.?|n°|#|ids?|items?|pos\.?|points?|pts?\.?|nodes?|elem(?:ent)?s?|eid|nid|"
    r"rows?|lines?|steps?|runs?|stations?|plies|ply|bolts?|fasteners?|blocks?|members?|bars?|years?)(?!\w)"
    r"(?: (?:no\.?|id|nr\.?|#))?$",
    re.IGNORECASE,
)


def _numbered(headers: tuple[str, ...]) -> bool:
    """Return whether a column holds the numbers by which its rows are called."""
    return any(_NUMBERED.match(text.strip()) for text in headers[:2])


def _another_block(line: _Line, address: Address, covered: list[tuple[Area, str, Key]]) -> bool:
    """Return whether another formula takes the cell into a range of its own that leaves this range out."""
    return any(
        key != line.key and address in area and not _overlap(area, line.area)
        for area, function, key in covered
        if function
    )


def _overlap(a: Area, b: Area) -> bool:
    return not (
        a.last_row < b.first_row
        or b.last_row < a.first_row
        or a.last_column < b.first_column
        or b.last_column < a.first_column
    )


def _finding(book: Examined, line: _Line, missed: list[Address]) -> Finding:
    area = line.area
    rows = [row for row, _ in missed] + [area.first_row, area.last_row]
    columns = [column for _, column in missed] + [area.first_column, area.last_column]
    due = Area(min(rows), min(columns), max(rows), max(columns))
    wrong, right = area_name(area), area_name(due)
    formula = book.workbook.sheet(line.key[0]).cells[line.key[1]].formula or ""  # type: ignore[union-attr]
    mended = formula.replace(wrong, right) if wrong in formula else None
    severity, effect = "warning", ""
    if mended is not None:
        now, then = book.value(line.key), values_altered(book, {line.key: mended}, [line.key])[line.key]
        if isinstance(now, float) and isinstance(then, float):
            changes = not math.isclose(now, then, rel_tol=1e-12)
            severity = "error" if changes else "warning"
            effect = (
                f" (it gives {shown(now)} and would give {shown(then)})"
                if changes
                else " (the result stays the same today)"
            )
    cells = [cell_name(*address) for address in missed]
    listed = cells[0] if len(cells) == 1 else f"{cells[0]} to {cells[-1]}"
    return Finding(
        line.key[0],
        cell_name(*line.key[1]),
        "short-range",
        severity,
        f"{line.function} over {wrong} leaves out {listed}, filled as the range is{effect}; write {right}.",
        wrong,
        right,
        tuple(cell_name_of((line.sheet.name, address)) for address in missed[:12]),
    )
