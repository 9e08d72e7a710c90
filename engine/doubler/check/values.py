"""Findings about values: stale ones, errors, numbers kept as text, empty cells read as numbers."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator
from typing import Any

from doubler.check.finding import Finding
from doubler.check.usage import ARITHMETIC, PASSED, TOTAL, Use, uses_of
from doubler.errors import ErrorValue
from doubler.workbook.addresses import cell_name
from doubler.workbook.evaluate import NotEvaluated, evaluate
from doubler.workbook.examined import Examined, Key, cell_name_of, shown
from doubler.workbook.geometry import OutsideError
from doubler.workbook.graph import Group
from doubler.workbook.model import Address
from doubler.workbook.program import REASON
from doubler.workbook.syntax import Call, CellRef, Node

RELATIVE = 1e-9
"""Stored and recalculated numbers that differ by less are the same number, rounded on the way."""

_NUMBER_TEXT = re.compile(r"^\s*[+\-−]?\s*(?:\d[\d\s.,'’\u00a0]*|[.,]\d+)(?:[eE][+\-]?\d+)?\s*%?\s*$")


def stale_values(book: Examined, relative: float = RELATIVE) -> Iterator[Finding]:
    """Find stored values that are not what the formula gives; what only follows from them stands under them."""
    stale: dict[Key, Any] = {}
    empty: list[Key] = []
    placeholders = _placeholders(book)
    for key, cell in book.formulas():
        value = book.value(key)
        if isinstance(value, NotEvaluated):
            continue
        missing = cell.value is None or (placeholders and value != 0.0)
        if missing and value not in (None, ""):
            empty.append(key)
        elif (
            not _same(cell.value, value, relative)
            and not _cancelled(book, key, cell.value, value)
            and not _both_reasons(book, key, cell.value, value)
        ):
            stale[key] = value
    if empty:
        yield _never_stored(book, empty)
    roots, follows = _roots_of_stale(book, stale)
    for key in roots:
        unit = _unit_text(book, key)
        value, stored = stale[key], book.stored(key)
        yield Finding(
            key[0],
            cell_name(*key[1]),
            "stale-value",
            "error",
            f"The cell shows {shown(stored, unit)} and its formula gives {shown(value, unit)}; recalculate and save "
            "the workbook.",
            shown(stored, unit),
            shown(value, unit),
            tuple(dict.fromkeys(cell_name_of(read) for read in list(book.cells_read(key))[:12])),
            tuple(cell_name_of(other) for other in follows[key]),
        )


def _placeholders(book: Examined) -> bool:
    """Return whether a writer put 0 for every formula's value, and asks for them to be calculated on opening."""
    return book.workbook.calculated_on_load and all(cell.value in (None, 0.0) for _, cell in book.formulas())


def _never_stored(book: Examined, empty: list[Key]) -> Finding:
    first = empty[0]
    total = sum(1 for _ in book.formulas())
    what = "No formula holds" if len(empty) == total else f"{len(empty)} of {total} formulas hold no"
    value = "a stored value" if len(empty) == total else "stored value"
    return Finding(
        first[0],
        cell_name(*first[1]),
        "stale-value",
        "note",
        f"{what} {value}, so the cells show nothing until they are recalculated; open and save the workbook in a "
        "spreadsheet program.",
        "no stored value",
        shown(book.value(first)),
        tuple(cell_name_of(key) for key in empty[1:12]),
    )


def _same(stored: Any, value: Any, relative: float = RELATIVE) -> bool:
    if isinstance(stored, bool) or isinstance(value, bool):
        # Some programs keep a logical as the number 1 or 0.
        return isinstance(stored, bool | float) and isinstance(value, bool | float) and stored == value
    if isinstance(stored, ErrorValue) and isinstance(value, ErrorValue):
        return True  # programs differ in the kind of error; that there is one has a finding of its own
    if isinstance(stored, float) and isinstance(value, float):
        return math.isclose(stored, value, rel_tol=relative, abs_tol=1e-12)
    if stored in (None, "") and value in (None, ""):
        return True
    if isinstance(stored, str) and isinstance(value, float):
        return stored == f"{value:.15g}"  # some programs keep a number as the text that spells it
    if value is None and stored == 0.0:
        return True
    return bool(stored == value)


def _both_reasons(book: Examined, key: Key, stored: Any, value: Any) -> bool:
    """Return whether both are words of UNIT_REASON: each program and version words a reason in its own way."""
    tree = book.tree(key)
    if not isinstance(tree, Call) or tree.name != REASON:
        return False
    return isinstance(stored, str) and isinstance(value, str) and bool(stored) and bool(value)


def _cancelled(book: Examined, key: Key, stored: Any, value: Any) -> bool:
    """Return whether the two differ by no more than rounding in the last digits of what the formula reads."""
    if not isinstance(stored, float) or not isinstance(value, float):
        return False
    largest = max((abs(n) for read in book.cells_read(key) if (n := book.number(read)) is not None), default=0.0)
    return abs(stored - value) <= 1e-13 * largest


def _roots_of_stale(book: Examined, stale: dict[Key, Any]) -> tuple[list[Key], dict[Key, list[Key]]]:
    """Part the stale cells into roots and those that are right for the stale values that they read."""
    roots: list[Key] = []
    carried: list[Key] = []
    for key in stale:
        before = {read: book.stored(read) for read in book.cells_read(key) if read in stale}
        if before and _same(book.stored(key), _with_stored(book, key, before)):
            carried.append(key)
        else:
            roots.append(key)
    follows: dict[Key, list[Key]] = {root: [] for root in roots}
    if carried:
        lost = set(carried)
        for root in roots:
            reached = book.downstream([root]) & lost
            follows[root] = sorted(reached)
            lost -= reached
        roots += sorted(lost)
        follows |= {key: [] for key in lost}
    return roots, follows


def _with_stored(book: Examined, key: Key, before: dict[Key, Any]) -> Any:
    return evaluate(book.graph, before, [key]).value(*key)


def _unit_text(book: Examined, key: Key) -> str:
    declared = book.declarations.unit(*key)
    return declared.unit.text if declared is not None and not declared.weak else ""


def error_values(book: Examined) -> Iterator[Finding]:
    """Find the cells that show an error value, each at its root."""
    wrong: dict[Key, ErrorValue] = {}
    for key, cell in book.formulas():
        value = book.value(key)
        shows = cell.value if isinstance(value, NotEvaluated) or cell.value is not None else value
        if isinstance(shows, ErrorValue):
            wrong[key] = shows
        elif isinstance(value, ErrorValue):
            wrong[key] = value
    for sheet in book.workbook.sheets:
        for address, cell in sheet.cells.items():
            if cell.formula is None and isinstance(cell.value, ErrorValue):
                wrong.setdefault((sheet.name, address), cell.value)
    roots = [key for key in wrong if not any(read in wrong for read in book.cells_read(key))]
    for key in roots:
        error = wrong[key]
        follows = sorted(book.downstream([key]) & set(wrong))
        on_purpose = error is ErrorValue.NA and _asks_for_na(book.tree(key))
        lost = isinstance(book.value(key), NotEvaluated)
        reason = book.values.reason(*key) if book.graph.group_at(*key) and not lost else None
        why = f": {reason.removeprefix(f'{error}: ').rstrip('.')}" if reason else ""
        yield Finding(
            key[0],
            cell_name(*key[1]),
            "error-value",
            "note" if on_purpose else "error",
            f"The cell shows {error}{why}; "
            f"{'it is asked for by NA()' if on_purpose else 'mend the formula or what it reads'}.",
            str(error),
            "",
            tuple(dict.fromkeys(cell_name_of(read) for read in list(book.cells_read(key))[:12])),
            tuple(cell_name_of(other) for other in follows),
        )


def _asks_for_na(tree: Node | None) -> bool:
    if isinstance(tree, Call):
        return tree.name == "NA" or any(_asks_for_na(argument) for argument in tree.arguments)
    return False


def _single_uses(book: Examined) -> Iterator[tuple[Group, list[Use], set[Node]]]:
    for group in book.graph.groups:
        tree = group.resolved or group.tree
        if tree is not None:
            uses, tested = uses_of(tree)
            yield group, uses, tested


def text_numbers(book: Examined) -> Iterator[Finding]:
    """Find numbers that are kept as text and reckoned with, or skipped by a total."""
    texts = {
        (sheet.name, address)
        for sheet in book.workbook.sheets
        for address, cell in sheet.cells.items()
        if cell.formula is None and isinstance(cell.value, str) and _NUMBER_TEXT.match(cell.value)
    }
    if not texts:
        return
    used: dict[Key, dict[str, list[Key]]] = {}
    for key, how, reader in _uses_of_cells(book, texts):
        used.setdefault(key, {}).setdefault(how, []).append(reader)
    for key, ways in used.items():
        if TOTAL not in ways and ARITHMETIC not in ways:
            continue
        text = str(book.stored(key)).strip()
        readers = [*ways.get(TOTAL, []), *ways.get(ARITHMETIC, [])]
        skipped = TOTAL in ways
        what = (
            f"{cell_name(*ways[TOTAL][0][1])} leaves it out of its total"
            if skipped
            else f"{cell_name(*readers[0][1])} reckons with it"
        )
        yield Finding(
            key[0],
            cell_name(*key[1]),
            "text-number",
            "error" if skipped else "warning",
            f"The number {text} is kept as text, and {what}; write it as a number.",
            f"text {text!r}",
            f"number {text}",
            tuple(dict.fromkeys(cell_name_of(reader) for reader in readers))[:12],
        )


def _uses_of_cells(book: Examined, wanted: set[Key]) -> Iterator[tuple[Key, str, Key]]:
    """Yield cell, use and reader for each use of the wanted cells."""
    by_sheet: dict[str, list[Address]] = {}
    for sheet, address in wanted:
        by_sheet.setdefault(sheet, []).append(address)
    for group, uses, _ in _single_uses(book):
        for use in uses:
            for lane in range(group.run.count):
                try:
                    places = book.graph.geometry.places(use.node, group.run, lane)
                except OutsideError:
                    continue
                reader = (book.workbook.sheets[group.run.sheet].name, group.run.cell(lane))
                for index, area in places:
                    name = book.workbook.sheets[index].name
                    for address in by_sheet.get(name, ()):
                        if address in area and _belongs(book, (name, address), use):
                            yield (name, address), use.how, reader


def _belongs(book: Examined, key: Key, use: Use) -> bool:
    """Return whether a text in a range stands among numbers and is not the range's heading."""
    if isinstance(use.node, CellRef):
        return True
    row, column = key[1]
    around = [(row + 1, column), (row - 1, column), (row, column - 1), (row, column + 1)]
    return any(book.number((key[0], address)) is not None for address in around)


def blank_inputs(book: Examined) -> Iterator[Finding]:
    """Find empty cells that a formula reads as a number.

    In a workbook none of whose formulas has a unit, which is no calculation of the trade but perhaps a form, a field
    may stay empty on purpose: there it is a note.
    """
    found: dict[Key, list[Key]] = {}
    for group, uses, tested in _single_uses(book):
        singles = [use for use in uses if isinstance(use.node, CellRef) and use.node not in tested]
        for use in singles:
            if use.how not in (ARITHMETIC, PASSED):
                continue
            for lane in range(group.run.count):
                reader = (book.workbook.sheets[group.run.sheet].name, group.run.cell(lane))
                if isinstance(book.value(reader), str):
                    continue  # IF(C5="","",…) asks another cell first, and shows no number
                key = _blank(book, use, group, lane)
                if key is not None and (use.how == ARITHMETIC or _is_quantity(book, reader)):
                    found.setdefault(key, []).append(reader)
    measured = bool(found) and any(_is_quantity(book, key) for key, _ in book.formulas())
    waiting = _not_filled_in(book, found)
    if waiting:
        yield _rows_waiting(waiting)
    for key, readers in found.items():
        if key in waiting:
            continue
        first = cell_name_of(readers[0]) if readers[0][0] != key[0] else cell_name(*readers[0][1])
        label = book.label(key).text
        named = f" ({label})" if label else ""
        yield Finding(
            key[0],
            cell_name(*key[1]),
            "blank-input",
            "error" if measured else "note",
            f"The cell{named} is empty and {first} reads it as 0; write its value, or point the formula at the right "
            "cell.",
            "empty",
            "a number",
            tuple(dict.fromkeys(cell_name_of(reader) for reader in readers))[:12],
        )


def _not_filled_in(book: Examined, found: dict[Key, list[Key]]) -> dict[Key, list[Key]]:
    """Return the empty cells of a form's rows that nobody has filled in: their formula reads nothing else there."""
    waiting: dict[Key, list[Key]] = {}
    for key, readers in found.items():
        for reader in readers:
            row = reader[1][0]
            same = [read.single for read in book.reads(reader) if read.sheet == reader[0] and read.single is not None]
            here = [address for address in same if address[0] == row]
            if reader[0] != key[0] or row != key[1][0] or len(here) < 2:
                break
            if any((reader[0], address) not in found for address in here) or not _goes_on(book, reader):
                break
        else:
            waiting[key] = readers
    return waiting


def _goes_on(book: Examined, reader: Key) -> bool:
    """Return whether a formula is a copy of the one above it, which has something to read."""
    at = book.graph.group_at(*reader)
    return at is not None and book.graph.groups[at[0]].run.count >= 2


def _rows_waiting(waiting: dict[Key, list[Key]]) -> Finding:
    first = next(iter(waiting))
    rows = sorted({key[1][0] for key in waiting if key[0] == first[0]})
    named = ", ".join(str(row) for row in rows[:6]) + (", …" if len(rows) > 6 else "")
    return Finding(
        first[0],
        cell_name(*first[1]),
        "blank-input",
        "note",
        f"Row{'s' if len(rows) > 1 else ''} {named} {'are' if len(rows) > 1 else 'is'} not filled in; the formulas "
        "there read 0.",
        "empty",
        "",
        tuple(dict.fromkeys(cell_name_of(reader) for readers in waiting.values() for reader in readers))[:12],
    )


def _blank(book: Examined, use: Use, group: Group, lane: int) -> Key | None:
    try:
        places = book.graph.geometry.places(use.node, group.run, lane)
    except OutsideError:
        return None
    index, area = places[0]
    address = (area.first_row, area.first_column)
    sheet = book.workbook.sheets[index]
    cell = sheet.cells.get(address)
    if cell is not None and (cell.formula is not None or cell.value is not None):
        return None
    key = (sheet.name, address)
    if book.graph.group_at(*key) is not None:
        return None
    return key


def _is_quantity(book: Examined, key: Key) -> bool:
    declared = book.declarations.unit(*key)
    return declared is not None and not declared.weak
