"""What cells give when one formula says something else: only what hangs on it is built and evaluated anew."""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import replace
from weakref import WeakKeyDictionary

from doubler.workbook.evaluate import Evaluation, NotEvaluated, evaluate
from doubler.workbook.examined import Examined, Key, Read
from doubler.workbook.graph import build_graph
from doubler.workbook.model import Address, Cell, Scalar, Workbook

_ASKS = re.compile(r"\b(?:SUBTOTAL|AGGREGATE|ISFORMULA|FORMULATEXT|CELL|INDIRECT|OFFSET)\s*\(", re.IGNORECASE)
"""Functions for which it matters whether a cell holds a formula, or which read more than their references say."""
_MOST = 0.5
"""Where more of all formulas than this hang on the change, all of them are built anew."""


def values_altered(
    book: Examined, formulas: Mapping[Key, str], wanted: Iterable[Key]
) -> dict[Key, Scalar | NotEvaluated]:
    """Return what some cells give with other formulas in some cells; the workbook itself stays.

    Parameters
    ----------
    book : Examined
        The workbook.
    formulas : mapping of Key to str
        The cells that are changed, and their formulas without the leading ``=``.
    wanted : iterable of Key
        Cells that are changed, or formula cells that hang on them.

    Returns
    -------
    dict of Key to value

    Notes
    -----
    Every other formula cell is held at the value that it has: the same numbers come out, and the work does not grow
    with the size of the workbook's other parts.
    """
    keys = list(wanted)
    values = evaluate(build_graph(_altered(book, formulas)), None, keys)
    return {key: _value(values, key) for key in keys}


def _value(values: Evaluation, key: Key) -> Scalar | NotEvaluated:
    value: Scalar | NotEvaluated = values.value(*key)
    return value


def _altered(book: Examined, formulas: Mapping[Key, str]) -> Workbook:
    """Return the workbook to evaluate: the changed formulas, those that hang on them, and what all of these read."""
    reached = book.downstream(formulas)
    held = None if len(reached) > _MOST * len(book.graph.groups) + 64 else _held(book)
    if held is None:
        return with_formulas(book.workbook, formulas)
    kept: dict[str, dict[Address, Cell]] = {sheet.name: {} for sheet in book.workbook.sheets}
    still = {sheet.name: sheet.cells for sheet in held.sheets}
    work = list(_reads_of_changed(book, formulas))
    for key in reached:
        cell = book.cell(key)
        if cell is not None:
            kept[key[0]][key[1]] = cell
            work += book.cells_read(key)
    while work:
        name, address = work.pop()
        cell = still[name].get(address)
        if address not in kept[name] and cell is not None:
            kept[name][address] = cell
            if cell.formula is not None:
                work += book.cells_read((name, address))
    sheets = [
        replace(sheet, cells={address: cells[address] for address in sorted(cells)})
        for sheet in book.workbook.sheets
        for cells in (kept[sheet.name],)
    ]
    return with_formulas(replace(held, sheets=sheets), formulas)


def _reads_of_changed(book: Examined, formulas: Mapping[Key, str]) -> Iterator[Key]:
    """Yield the cells that the changed formulas read."""
    bare = replace(book.workbook, sheets=[replace(sheet, cells={}) for sheet in book.workbook.sheets])
    graph = build_graph(with_formulas(bare, formulas))
    for index in range(len(graph.groups)):
        for sheet, area in graph.places_read(index):
            yield from book.cells_of(Read(book.workbook.sheets[sheet].name, area))


_HELD: WeakKeyDictionary[Examined, list[Workbook | None]] = WeakKeyDictionary()


def _held(book: Examined) -> Workbook | None:
    """Return the workbook with numbers for its formulas; None where that could make a difference."""
    known = _HELD.get(book)
    if known is None:
        known = _HELD[book] = [_hold(book)]
    return known[0]


def _hold(book: Examined) -> Workbook | None:
    if any(group.area is not None or group.spills for group in book.graph.groups):
        return None
    if any(cell.formula is not None and _ASKS.search(cell.formula) for _, cell in book.formulas()):
        return None
    sheets = []
    for sheet in book.workbook.sheets:
        cells = dict(sheet.cells)
        for address, cell in sheet.cells.items():
            if cell.formula is not None:
                value = book.value((sheet.name, address))
                if value is not None and not isinstance(value, NotEvaluated):
                    cells[address] = Cell(value, None, cell.style)
        sheets.append(replace(sheet, cells=cells))
    return replace(book.workbook, sheets=sheets)


def with_formulas(workbook: Workbook, formulas: Mapping[Key, str]) -> Workbook:
    """Return a copy of a workbook with some formulas in place of what stands there."""
    sheets = []
    for sheet in workbook.sheets:
        mine = {key[1]: text for key, text in formulas.items() if key[0] == sheet.name}
        if not mine:
            sheets.append(sheet)
            continue
        cells = dict(sheet.cells)
        for address, text in mine.items():
            cells[address] = Cell(None, text, cells[address].style if address in cells else 0)
        sheets.append(replace(sheet, cells=cells))
    return replace(workbook, sheets=sheets)
