"""The forms in which a cell can give an argument (contract, section 1), each turned into numbers and one unit.

A cell value is a float, text, a bool, an `ErrorValue`, None (an empty cell), or, when a workbook is evaluated over
many cases, a float64 array with one number a case (a *lane*). A range is a list of rows of cell values.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from doubler.catalogue.one_cell import (
    OMITTED,
    ArgumentError,
    Bound,
    bare_unit,
    checked_number,
    due,
    is_number,
    read_quantity,
)
from doubler.catalogue.ranges import bind_numbers, bind_pair, bind_range, is_paired, rectangle
from doubler.catalogue.record import Argument
from doubler.errors import ErrorValue
from doubler.units import (
    ConsistentSet,
)

__all__ = ["OMITTED", "ArgumentError", "Bound", "bind", "due", "is_number"]

Grid = Sequence[Sequence[Any]]


def bind(argument: Argument, given: Any, chosen: ConsistentSet | None, lanes: bool = False) -> Bound:
    """Read one argument.

    Parameters
    ----------
    argument : Argument
    given : cell value or list of rows
    chosen : ConsistentSet or None
        The set that the last argument names, if it names one.
    lanes : bool, optional
        Whether some cell values are arrays over cases; vectors then get an axis for them.

    Raises
    ------
    ArgumentError
        With one sentence that says what to write.
    """
    numbers = rectangle(given) if isinstance(given, list | tuple) and not argument.is_text else None
    if numbers is not None:
        return bind_numbers(argument, *numbers, chosen, lanes)
    cells = [list(row) for row in given] if isinstance(given, list | tuple) else [[given]]
    cells = _trim(cells)
    flat = [cell for row in cells for cell in row]
    if all(cell is None for cell in flat):
        if argument.optional and not isinstance(given, list | tuple):
            return OMITTED
        raise ArgumentError(f"{argument.name} is an empty cell; fill it in ({due(argument)})")
    if argument.is_text:
        return _bind_text(argument, flat)
    if not argument.entries and len(flat) == 2 and len(cells) == 1 and is_paired(cells):
        return bind_pair(argument, *flat)
    if len(flat) == 1 and not argument.entries:
        return _bind_scalar(argument, flat[0], chosen)
    return bind_range(argument, cells, chosen, lanes)


def _trim(cells: list[list[Any]]) -> list[list[Any]]:
    """Drop the empty rows and columns at the end: a whole-column reference ends where its values end."""
    if not cells or not cells[0]:
        return [[None]]
    while len(cells) > 1 and all(cell is None for cell in cells[-1]):
        cells.pop()
    while len(cells[0]) > 1 and all(row[-1] is None for row in cells):
        cells = [row[:-1] for row in cells]
    return cells


def _bind_text(argument: Argument, flat: list[Any]) -> Bound:
    for cell in flat:
        if isinstance(cell, ErrorValue):
            raise ArgumentError(f"{argument.name} is the error {cell}", cell)
    if argument.entries:
        return Bound([_text_of(cell) for cell in flat], None)
    if len(flat) != 1:
        raise ArgumentError(f"{argument.name} is one text, not a range of {len(flat)} cells")
    text = _text_of(flat[0])
    if argument.choices:
        for choice in argument.choices:
            if text.strip().casefold() == choice.casefold():
                return Bound(choice, None)
        raise ArgumentError(f"{argument.name} is {text!r}; write {due(argument)}")
    return Bound(text, None)


def _text_of(cell: Any) -> str:
    if cell is None:
        return ""
    return f"{cell:g}" if isinstance(cell, float) else str(cell)


def _bind_scalar(argument: Argument, cell: Any, chosen: ConsistentSet | None) -> Bound:
    if isinstance(cell, str):
        value, unit = read_quantity(argument, cell)
        return Bound(np.array([value]), unit)
    number = checked_number(argument, cell)
    return Bound(np.atleast_1d(np.asarray(number, dtype=np.float64)), bare_unit(argument, chosen, number))
