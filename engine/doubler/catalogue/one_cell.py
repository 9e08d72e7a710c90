"""What one cell gives an argument: a number and its unit, or the sentence that says what to write instead."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from typing import Any

import numpy as np

from doubler.catalogue.annotations import Alike, Quantity
from doubler.catalogue.record import Argument
from doubler.errors import ErrorValue, InputError
from doubler.units import (
    ConsistentSet,
    Unit,
    UnitError,
    kind,
    parse_quantity,
    parse_unit,
)

_BARE = re.compile(r"\s*[+\-−]?(?:\d+\.?\d*|\.\d+)(?:[eE][+\-−]?\d+)?\s*")


class ArgumentError(InputError):
    """One argument cannot be read; `value` is the error value that the cell shows."""

    def __init__(self, reason: str, value: ErrorValue = ErrorValue.VALUE) -> None:
        super().__init__(reason, value)
        self.value = value

    def __str__(self) -> str:
        return str(self.args[0])


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
        example = 0.3 if own.name == "ratio" else 0.002
        if argument.limit is not None and not argument.limit.all_within(example):
            example = next((value for value in (2.0, 0.02, 100.0) if argument.limit.all_within(value)), example)
        return f"{own.article_name}, such as {example:g}"
    return f'{own.article_name}, such as "{own.example}"'


def checked_number(argument: Argument, cell: Any) -> Any:
    """Return a cell's number (or its numbers over cases), or say what stands there instead."""
    if isinstance(cell, ErrorValue):
        raise ArgumentError(f"{argument.name} is the error {cell}", cell)
    if not is_number(cell):
        raise ArgumentError(f"{argument.name} is {shown(cell)}; write {due(argument)}")
    if not is_finite(cell):
        raise ArgumentError(
            f"{argument.name} is {short(cell)}, not a finite number; write {due(argument)}", ErrorValue.NUM
        )
    return cell


def is_finite(number: Any) -> bool:
    """Return whether a number is finite; numbers over cases are looked at when they are evaluated."""
    try:
        return isinstance(number, np.ndarray) or math.isfinite(number)
    except OverflowError:  # a whole number beyond every float
        return False


def short(number: Any) -> str:
    """Return a number that is not finite as it is named in a message."""
    return "too large" if isinstance(number, int) else f"{number:g}"


def shown(cell: Any) -> str:
    """Return a cell value that is no number as it is named in a message."""
    return str(cell).upper() if isinstance(cell, bool) else repr(cell) if isinstance(cell, str) else str(cell)


def read_quantity(argument: Argument, text: str) -> tuple[float, Unit | None]:
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
        if "does not begin with a number" in str(error):
            raise ArgumentError(f"{argument.name} is the text {text!r}; write {due(argument)}") from error
        raise ArgumentError(f"{argument.name}: {error}") from error
    return value, fitting(argument, unit)


def fitting(argument: Argument, unit: Unit, place: str = "") -> Unit:
    """Return a unit that the argument accepts; `place` names the row of a range."""
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


def unit_hint(argument: Argument) -> str:
    """Return a unit to show where the argument has none."""
    return kind(argument.quantity.kind).metric if isinstance(argument.quantity, Quantity) else "MPa"
