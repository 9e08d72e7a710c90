"""Ranges as arguments: headed columns and rows, paired columns, bare numbers, texts; each gap told by its place."""

from __future__ import annotations

import re
from collections.abc import Sequence
from itertools import chain
from typing import Any

import numpy as np

from doubler.catalogue.annotations import Array, Quantity
from doubler.catalogue.one_cell import (
    ArgumentError,
    Bound,
    bare_unit,
    checked_number,
    due,
    fitting,
    is_finite,
    is_number,
    read_quantity,
    short,
    shown,
    unit_hint,
)
from doubler.catalogue.record import Argument
from doubler.errors import ErrorValue
from doubler.units import (
    ConsistentSet,
    Unit,
    UnitError,
    consistent_set,
    convert,
    kind,
    parse_unit,
    split_heading,
)

_MISSING = re.compile(
    r"n\.?\s*/?\s*a\.?|nan|none|null|nil|no|tb[cd]|to be "
    r"(?:confirmed|determined)|missing|blank|fail(?:s|ed)?|err(?:or)?|"
    r"inf(?:inite|inity)?|∞|high|large|ok|[-–—?.xX*]+|#.*|>.*|<.*|",
    re.IGNORECASE,
)
_LARGE = 16
"""Rows from which on a range is looked at as a whole before it is looked at cell by cell."""


def rectangle(rows: Sequence[Any]) -> tuple[str | None, Array] | None:
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


def bind_numbers(
    argument: Argument, heading: str | None, numbers: Array, chosen: ConsistentSet | None, lanes: bool
) -> Bound:
    """Read a range of numbers as `bind_range` would, which is for any range."""
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


def bind_range(argument: Argument, cells: list[list[Any]], chosen: ConsistentSet | None, lanes: bool) -> Bound:
    """Read a range by what its first cells hold: paired columns, a heading, texts, or bare numbers."""
    rows, columns = len(cells), len(cells[0])
    first = cells[0][0]
    if columns == 2 and is_paired(cells):
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
    """Return whether a range's first text is its heading and not the first of its values.

    A word that stands for a missing value is none: taken for a heading, a margin that could not be computed would
    drop out of an envelope.
    """
    stripped = text.strip()
    if _MISSING.fullmatch(stripped):
        raise ArgumentError(
            f"entry 1 is {text!r}, which may stand for a missing value; write a number, or a heading with its unit in "
            "brackets such as 'Margin [-]'"
        )
    if stripped.startswith("1/") and not stripped[2:3].isdigit():  # a unit: 1/K, 1/GPa
        return True
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
        return fitting(argument, unit)
    if dimensionless:
        return None
    if chosen is not None:
        return bare_unit(argument, chosen, 0.0)
    raise ArgumentError(
        f'{argument.name}: the heading {heading!r} names no unit; write it as in "{label} [{unit_hint(argument)}]"'
    )


def is_paired(cells: list[list[Any]]) -> bool:
    """Return whether the second of two columns holds units: text, and where there is none an error or a gap."""
    seconds = [row[1] for row in cells]
    return (
        any(isinstance(cell, str) for cell in seconds)
        and all(cell is None or isinstance(cell, str | ErrorValue) for cell in seconds)
        and not any(isinstance(row[0], str) for row in cells)
    )


def bind_pair(argument: Argument, value: Any, text: str) -> Bound:
    """Read a value cell with its unit cell at the right."""
    if value is None:
        raise ArgumentError(f"{argument.name} is an empty cell beside {text!r}; fill it in ({due(argument)})")
    checked = checked_number(argument, value)
    try:
        unit = fitting(argument, parse_unit(text))
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
                raise ArgumentError(f"{place} has no unit beside it; write one, such as {unit_hint(argument)}")
            values.append(gap)
            continue
        try:
            units.append(fitting(argument, parse_unit(text), place))
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
        value, own = read_quantity(argument, cell)
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
        if is_number(cell) and is_finite(cell):
            continue
        place = f"{argument.name}, entry {index + offset}"
        if isinstance(cell, ErrorValue):
            value, reason = cell, f"{place} is the error {cell}"
        elif cell is None:
            value, reason = ErrorValue.VALUE, f"{place} is an empty cell; fill it in"
        elif is_number(cell):
            value, reason = ErrorValue.NUM, f"{place} is {short(cell)}; write a finite number"
        else:
            value, reason = ErrorValue.VALUE, f"{place} is {shown(cell)}, not a number; write a number"
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
