"""The forms in which a cell can give an argument (contract, section 1), each turned into numbers and one unit.

A cell value is a float, text, a bool, an `ErrorValue`, None (an empty cell), or, when a workbook is evaluated over
many cases, a float64 array with one number a case (a *lane*). A range is a list of rows of cell values.
"""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import chain
from typing import Any

import numpy as np

from doubler.catalogue.annotations import Alike, Array, Quantity
from doubler.catalogue.record import Argument
from doubler.errors import ErrorValue, InputError
from doubler.units import (
    ConsistentSet,
    Unit,
    UnitError,
    consistent_set,
    convert,
    kind,
    parse_quantity,
    parse_unit,
    split_heading,
)

_BARE = re.compile(r"\s*[+\-−]?(?:\d+\.?\d*|\.\d+)(?:[eE][+\-−]?\d+)?\s*")
Grid = Sequence[Sequence[Any]]


class ArgumentError(InputError):
    """One argument cannot be read; `value` is the error value that the cell shows."""

    def __init__(self, reason: str, value: ErrorValue = ErrorValue.VALUE) -> None:
        super().__init__(reason)
        self.value = value


@dataclass(frozen=True, slots=True)
class Bound:
    """An argument as read.

    Attributes
    ----------
    values
        float64 array: ``(1,)`` or ``(lanes,)`` for a scalar, ``(n,)`` or ``(n, 1 or lanes)`` for a vector,
        ``(1 or lanes, entries)`` for a whole column; text or a list of texts for text arguments; None where omitted.
    unit
        The unit in which the values stand; None for a pure number or text.
    shape
        Rows and columns of the vector in the sheet; ``(1, 1)`` for a scalar.
    blanks
        For a vector: (element, error value, reason) of elements that hold no number.
    """

    values: Any
    unit: Unit | None
    shape: tuple[int, int] = (1, 1)
    blanks: tuple[tuple[int, ErrorValue, str], ...] = ()


OMITTED = Bound(None, None)


def is_number(value: Any) -> bool:
    """Return whether a cell value is a number (or an array of numbers over cases)."""
    return isinstance(value, float | int | np.ndarray | np.floating) and not isinstance(value, bool)


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
    numbers = _rectangle(given) if isinstance(given, list | tuple) and not argument.is_text else None
    if numbers is not None:
        return _bind_numbers(argument, *numbers, chosen, lanes)
    cells = [list(row) for row in given] if isinstance(given, list | tuple) else [[given]]
    cells = _trim(cells)
    flat = [cell for row in cells for cell in row]
    if all(cell is None for cell in flat):
        if argument.optional and not isinstance(given, list | tuple):
            return OMITTED
        raise ArgumentError(f"{argument.name} is an empty cell; fill it in ({due(argument)})")
    if argument.is_text:
        return _bind_text(argument, flat)
    if not argument.entries and len(flat) == 2 and len(cells) == 1 and _is_paired(cells):
        return _bind_pair(argument, *flat)
    if len(flat) == 1 and not argument.entries:
        return _bind_scalar(argument, flat[0], chosen)
    return _bind_range(argument, cells, chosen, lanes)


_LARGE = 16
"""Rows from which on a range is looked at as a whole before it is looked at cell by cell."""


def _rectangle(rows: Sequence[Any]) -> tuple[str | None, Array] | None:
    """Return a large range of nothing but numbers, under a heading or without, as one array; None where it is not that.

    A recalculation hands whole columns over: their types and their values are read without a step of Python for each.
    """
    end = len(rows)
    while end > 1 and len(rows[end - 1]) == 1 and rows[end - 1][0] is None:
        end -= 1
    if end < _LARGE or not rows[0]:
        return None
    width = len(rows[0])
    heading = rows[0][0] if width == 1 and type(rows[0][0]) is str else None
    body = rows[1 if heading is not None else 0 : end]
    if set(map(len, body)) != {width} or not set(map(type, chain.from_iterable(body))) <= {float, int}:
        return None
    try:
        flat = np.fromiter(chain.from_iterable(body), np.float64, len(body) * width)
    except OverflowError:  # a whole number beyond every float
        return None
    return (heading, flat.reshape(-1, width)) if np.isfinite(flat).all() else None


def _bind_numbers(
    argument: Argument, heading: str | None, numbers: Array, chosen: ConsistentSet | None, lanes: bool
) -> Bound:
    """Read a range of numbers as `_bind_range` would, which is for any range."""
    if heading is None:
        unit = bare_unit(argument, chosen, float(numbers[0, 0]))
    elif _is_heading(heading):
        unit = heading_unit(argument, heading, chosen)
    else:
        raise ArgumentError(f"{argument.name}, entry 2: a bare number among texts; write its unit")
    flat = numbers.reshape(-1)
    shape = (numbers.shape[0], numbers.shape[1])
    if argument.entries:
        return Bound(flat[np.newaxis], unit, shape)
    return Bound(flat[:, np.newaxis] if lanes else flat, unit, shape)


def _trim(cells: list[list[Any]]) -> list[list[Any]]:
    """Drop the empty rows and columns at the end: a whole-column reference ends where its values end."""
    if not cells or not cells[0]:
        return [[None]]
    while len(cells) > 1 and all(cell is None for cell in cells[-1]):
        cells.pop()
    while len(cells[0]) > 1 and all(row[-1] is None for row in cells):
        cells = [row[:-1] for row in cells]
    return cells


def due(argument: Argument) -> str:
    """Say what is due, with an example to copy."""
    if argument.choices:
        return "one of " + ", ".join(f'"{choice}"' for choice in argument.choices)
    if argument.quantity is None:
        return "text"
    if isinstance(argument.quantity, Alike):
        return 'a value with its unit, such as "250 MPa"'
    own = kind(argument.quantity.kind)
    if own.dimensionless:
        return f"{own.article_name}, such as 0.3" if own.name == "ratio" else f"{own.article_name}, such as 0.002"
    return f'{own.article_name}, such as "{own.example}"'


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
        value, unit = _quantity(argument, cell)
        return Bound(np.array([value]), unit)
    number = _number(argument, cell)
    return Bound(np.atleast_1d(np.asarray(number, dtype=np.float64)), bare_unit(argument, chosen, number))


def _number(argument: Argument, cell: Any) -> Any:
    """Return a cell's number (or its numbers over cases), or say what stands there instead."""
    if isinstance(cell, ErrorValue):
        raise ArgumentError(f"{argument.name} is the error {cell}", cell)
    if not is_number(cell):
        raise ArgumentError(f"{argument.name} is {_shown(cell)}; write {due(argument)}")
    if not _is_finite(cell):
        raise ArgumentError(
            f"{argument.name} is {_short(cell)}, not a finite number; write {due(argument)}", ErrorValue.NUM
        )
    return cell


def _is_finite(number: Any) -> bool:
    """Return whether a number is finite; numbers over cases are looked at when they are evaluated."""
    try:
        return isinstance(number, np.ndarray) or math.isfinite(number)
    except OverflowError:  # a whole number beyond every float
        return False


def _short(number: Any) -> str:
    return "too large" if isinstance(number, int) else f"{number:g}"


def _shown(cell: Any) -> str:
    return str(cell).upper() if isinstance(cell, bool) else repr(cell) if isinstance(cell, str) else str(cell)


def _quantity(argument: Argument, text: str) -> tuple[float, Unit | None]:
    """Read text such as ``12 kN`` and see that its unit fits the argument."""
    if not text.strip():
        raise ArgumentError(f"{argument.name} is empty text; write {due(argument)}")
    if _BARE.fullmatch(text):
        dimensionless = isinstance(argument.quantity, Quantity) and kind(argument.quantity.kind).dimensionless
        mend = f"the number {text.strip()} without quotes" if dimensionless else due(argument)
        raise ArgumentError(f"{argument.name} is the text {text!r}, which has no unit; write {mend}")
    try:
        value, unit = parse_quantity(text)
    except UnitError as error:
        raise ArgumentError(f"{argument.name}: {error}") from error
    return value, _fitting(argument, unit)


def _fitting(argument: Argument, unit: Unit, place: str = "") -> Unit:
    if isinstance(argument.quantity, Quantity):
        why_not = kind(argument.quantity.kind).accepts(unit)
        if why_not:
            raise ArgumentError(f"{place or argument.name}: {why_not}")
    return unit


def bare_unit(argument: Argument, chosen: ConsistentSet | None, cell: Any) -> Unit | None:
    """Return the unit of a bare number: none for a dimensionless argument, else the one of the chosen set."""
    quantity = argument.quantity
    if isinstance(quantity, Quantity):
        own = kind(quantity.kind)
        if own.dimensionless:
            return None
        if chosen is not None:
            try:
                return chosen.bare_input(own.name)
            except UnitError as error:
                raise ArgumentError(f"{argument.name}: {error}") from error
    elif chosen is not None:
        return parse_unit("1")
    shown = "an array of bare numbers" if isinstance(cell, np.ndarray) else f"the bare number {cell:g}"
    raise ArgumentError(
        f"{argument.name} is {shown} and has no unit; write {due(argument)}, "
        f'or name a consistent set such as "N-mm" as the last argument'
    )


def _bind_range(argument: Argument, cells: list[list[Any]], chosen: ConsistentSet | None, lanes: bool) -> Bound:
    rows, columns = len(cells), len(cells[0])
    first = cells[0][0]
    if columns == 2 and _is_paired(cells):
        return _bind_pairs(argument, cells, lanes)
    if isinstance(first, str) and 1 in (rows, columns):
        flat = [cell for row in cells for cell in row]
        if not _is_heading(first):
            return _bind_texts(argument, flat, (rows, columns), lanes)
        unit = heading_unit(argument, first, chosen)
        shape = (rows - 1, 1) if columns == 1 else (1, columns - 1)
        return _vector(argument, flat[1:], unit, shape, lanes, offset=2)
    sample = next((cell for row in cells for cell in row if is_number(cell)), None)
    if sample is None:
        raise ArgumentError(f"{argument.name} is a range without numbers; write {due(argument)}")
    unit = bare_unit(argument, chosen, sample)
    return _vector(argument, [cell for row in cells for cell in row], unit, (rows, columns), lanes)


def _is_heading(text: str) -> bool:
    stripped = text.strip()
    return not (stripped[:1].isdigit() or (stripped[:1] in "+-.−" and stripped[1:2].isdigit()))


def heading_unit(argument: Argument, heading: str, chosen: ConsistentSet | None) -> Unit | None:
    """Return the unit that the first cell of a headed column names."""
    label, text, _ = split_heading(heading)
    dimensionless = isinstance(argument.quantity, Quantity) and kind(argument.quantity.kind).dimensionless
    for candidate in (text, None if text else label):
        if candidate is None or consistent_set(candidate) is not None:
            continue
        try:
            unit = parse_unit(candidate)
        except UnitError as error:
            if text is not None and not dimensionless:
                raise ArgumentError(f"{argument.name}: heading {heading!r}: {error}") from error
            continue
        return _fitting(argument, unit)
    if dimensionless:
        return None
    if chosen is not None:
        return bare_unit(argument, chosen, 0.0)
    raise ArgumentError(
        f'{argument.name}: the heading {heading!r} names no unit; write it as in "{label} [{_unit_hint(argument)}]"'
    )


def _unit_hint(argument: Argument) -> str:
    return kind(argument.quantity.kind).metric if isinstance(argument.quantity, Quantity) else "MPa"


def _is_paired(cells: list[list[Any]]) -> bool:
    """Return whether the second of two columns holds units: text, and where there is none an error or a gap."""
    seconds = [row[1] for row in cells]
    return (
        any(isinstance(cell, str) for cell in seconds)
        and all(cell is None or isinstance(cell, str | ErrorValue) for cell in seconds)
        and not any(isinstance(row[0], str) for row in cells)
    )


def _bind_pair(argument: Argument, value: Any, text: str) -> Bound:
    """Read a value cell with its unit cell at the right."""
    if value is None:
        raise ArgumentError(f"{argument.name} is an empty cell beside {text!r}; fill it in ({due(argument)})")
    checked = _number(argument, value)
    try:
        unit = _fitting(argument, parse_unit(text))
    except UnitError as error:
        raise ArgumentError(f"{argument.name}: {error}") from error
    return Bound(np.atleast_1d(np.asarray(checked, dtype=np.float64)), unit)


def _bind_pairs(argument: Argument, cells: list[list[Any]], lanes: bool) -> Bound:
    """Read n values, each with its own unit; all are brought to the unit of the first."""
    units: list[Unit | None] = []
    values: list[Any] = []
    for index, (value, text) in enumerate(cells, start=1):
        place = f"{argument.name}, row {index}"
        if value is None or isinstance(value, ErrorValue) or not isinstance(text, str):
            units.append(None)
            gap = text if isinstance(text, ErrorValue) and not isinstance(value, ErrorValue) else value
            if is_number(gap):
                raise ArgumentError(f"{place} has no unit beside it; write one, such as {_unit_hint(argument)}")
            values.append(gap)
            continue
        try:
            units.append(_fitting(argument, parse_unit(text), place))
        except UnitError as error:
            raise ArgumentError(f"{place}: {error}") from error
        values.append(value)
    unit = next((own for own in units if own is not None), None)
    for index, other in enumerate(units, start=1):
        if other is not None and unit is not None and other.dimension != unit.dimension:
            raise ArgumentError(
                f"{argument.name}, row {index}: {other.text} and {unit.text} are unlike; give one kind of quantity"
            )
    brought = [
        value if own is None or unit is None or own == unit or not is_number(value) else convert(value, own, unit)
        for value, own in zip(values, units, strict=True)
    ]
    return _vector(argument, brought, unit, (len(cells), 1), lanes)


def _bind_texts(argument: Argument, flat: list[Any], shape: tuple[int, int], lanes: bool) -> Bound:
    """Read a vector whose cells hold texts such as ``12 kN``."""
    values: list[Any] = []
    unit: Unit | None = None
    for index, cell in enumerate(flat):
        if not isinstance(cell, str):
            if cell is None or isinstance(cell, ErrorValue):
                values.append(cell)
                continue
            raise ArgumentError(f"{argument.name}, entry {index + 1}: a bare number among texts; write its unit")
        value, own = _quantity(argument, cell)
        unit = unit or own
        if unit is not None and own is not None and own != unit:
            if own.dimension != unit.dimension:
                raise ArgumentError(f"{argument.name}, entry {index + 1}: {own.text} and {unit.text} are unlike")
            value = float(convert(value, own, unit))
        values.append(value)
    return _vector(argument, values, unit, shape, lanes)


def _vector(
    argument: Argument,
    flat: list[Any],
    unit: Unit | None,
    shape: tuple[int, int],
    lanes: bool,
    offset: int = 1,
) -> Bound:
    if not flat:
        raise ArgumentError(f"{argument.name} has a heading and no values under it")
    blanks: list[tuple[int, ErrorValue, str]] = []
    values = list(flat)
    for index, cell in enumerate(flat):
        if is_number(cell) and _is_finite(cell):
            continue
        place = f"{argument.name}, entry {index + offset}"
        if isinstance(cell, ErrorValue):
            value, reason = cell, f"{place} is the error {cell}"
        elif cell is None:
            value, reason = ErrorValue.VALUE, f"{place} is an empty cell; fill it in"
        elif is_number(cell):
            value, reason = ErrorValue.NUM, f"{place} is {_short(cell)}; write a finite number"
        else:
            value, reason = ErrorValue.VALUE, f"{place} is {_shown(cell)}, not a number; write a number"
        blanks.append((index, value, reason))
    bad = {index for index, _, _ in blanks}
    stand_in = next((cell for index, cell in enumerate(flat) if index not in bad), None)
    if stand_in is None:
        raise ArgumentError(blanks[0][2], blanks[0][1])
    for index, _, _ in blanks:
        values[index] = stand_in  # computed with, then overlaid by the error: the reason stays the true one
    if argument.entries:
        if blanks:
            told = f"{blanks[0][2]} (the whole column is one argument and must hold numbers)"
            raise ArgumentError(told, blanks[0][1])
        stacked = np.stack(np.broadcast_arrays(*[np.atleast_1d(v) for v in values]), axis=-1).astype(np.float64)
        return Bound(stacked, unit, shape)
    if lanes:
        stacked = np.stack(np.broadcast_arrays(*[np.atleast_1d(v) for v in values]), axis=0).astype(np.float64)
        return Bound(stacked, unit, shape, tuple(blanks))
    return Bound(np.array(values, dtype=np.float64), unit, shape, tuple(blanks))
