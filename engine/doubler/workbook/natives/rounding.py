"""Rounding and division with remainder."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.lift import NumericRule, refused
from doubler.workbook.natives.registry import native

LARGEST_QUOTIENT = 2.0**50
"""From here on MOD has no result: the remainder would be lost in the quotient's last digits."""

_POWERS = 10.0 ** np.arange(0, 309, dtype=np.float64)


def _power_of_ten(digits: Any) -> Any:
    return _POWERS[np.minimum(np.abs(digits), 308).astype(np.int64)]


def _scaled(number: Any, digits: Any) -> tuple[Any, Any]:
    """Return number · 10^digits with the error of the binary representation taken out, and the power of ten."""
    whole = np.trunc(digits)
    tens = _power_of_ten(whole)
    scaled = np.where(whole >= 0.0, np.multiply(number, tens), np.divide(number, tens))
    return scaled, np.where(whole >= 0.0, tens, -tens)


def _back(rounded: Any, tens: Any) -> Any:
    size = np.abs(tens)
    return np.where(tens > 0.0, np.divide(rounded, size), np.multiply(rounded, size))


def _snapped(scaled: Any) -> Any:
    """Take a scaled number that is within 1e-15 relative of a multiple of 1/2 as that multiple.

    The spreadsheet program rounds the decimal number of 15 digits that is shown, not the binary one: 1.005 to
    two digits is 1.01 there, though the stored binary number is a little less than 1.005.
    """
    halves = np.round(scaled * 2.0) / 2.0
    close = np.abs(scaled - halves) <= np.abs(scaled) * 8.0e-16
    return np.where(close, halves, scaled)


def _rounded(number: Any, digits: Any, way: Any) -> Any:
    with np.errstate(over="ignore", invalid="ignore"):
        scaled, tens = _scaled(number, digits)
        result = _back(way(_snapped(scaled)), tens)
    # Digits beyond those that a double holds change nothing.
    beyond = (np.abs(scaled) >= 2.0**52) & (tens > 0.0)
    return np.where(beyond, number, result)


def _half_away(scaled: Any) -> Any:
    return np.copysign(np.floor(np.abs(scaled) + 0.5), scaled)


def _away(scaled: Any) -> Any:
    return np.copysign(np.ceil(np.abs(scaled)), scaled)


def _plain_zero(result: Any) -> Any:
    return result + 0.0


def _two(name: str, way: Any) -> Any:
    rule = NumericRule(lambda number, digits: _plain_zero(_rounded(number, digits, way)))
    return native(name, arguments="vv", units="rounded")(rule)


_two("ROUND", _half_away)
_two("ROUNDUP", _away)
_two("ROUNDDOWN", np.trunc)

_truncated = NumericRule(lambda number, digits: _plain_zero(_rounded(number, digits, np.trunc)))


@native("TRUNC", arguments="v;v", units="rounded")
def truncated(number: Any, digits: Any = 0.0) -> Any:
    """Cut a number's digits off."""
    return _truncated(number, digits)


native("INT", arguments="v", units="rounded")(NumericRule(np.floor))


def _remainder(number: Any, divisor: Any) -> Any:
    none = np.equal(divisor, 0.0)
    safe = np.where(none, 1.0, divisor)
    quotient = np.divide(number, safe)
    result = number - safe * np.floor(quotient)
    return refused(_plain_zero(result), none | (np.abs(quotient) >= LARGEST_QUOTIENT))


def _division_fault(_: float, divisor: float) -> ErrorValue:
    return ErrorValue.DIV0 if divisor == 0.0 else ErrorValue.NUM


native("MOD", arguments="vv", units="rounded")(NumericRule(_remainder, _division_fault))
native("QUOTIENT", arguments="vv", units="ratio_of_two")(
    NumericRule(lambda number, divisor: np.trunc(np.divide(number, divisor)) + 0.0, _division_fault)
)


def _near_whole(quotient: Any) -> Any:
    """Take a quotient that is a whole number but for the rounding of its division as that whole number."""
    whole = np.round(quotient)
    return np.where(np.abs(quotient - whole) <= np.abs(quotient) * 4.5e-16, whole, quotient)


def _multiple(number: Any, step: Any, way: Any) -> Any:
    none = np.equal(step, 0.0)
    safe = np.where(none, 1.0, step)
    return np.where(none, 0.0, way(_near_whole(np.divide(number, safe))) * safe) + 0.0


def _ceiling(number: Any, step: Any) -> Any:
    return refused(_multiple(number, step, np.ceil), (np.greater(number, 0.0)) & np.less(step, 0.0))


def _floor(number: Any, step: Any) -> Any:
    bad = (np.greater(number, 0.0)) & np.less(step, 0.0)
    return refused(_multiple(number, step, np.floor), bad | (np.equal(step, 0.0) & np.not_equal(number, 0.0)))


def _floor_fault(_: float, step: float) -> ErrorValue:
    return ErrorValue.DIV0 if step == 0.0 else ErrorValue.NUM


native("CEILING", arguments="vv", units="rounded")(NumericRule(_ceiling))
native("FLOOR", arguments="vv", units="rounded")(NumericRule(_floor, _floor_fault))


def _precise(way: Any) -> NumericRule:
    return NumericRule(lambda number, step: _multiple(number, np.abs(step), way))


_ceiling_precise, _floor_precise = _precise(np.ceil), _precise(np.floor)


@native("CEILING.PRECISE", "ISO.CEILING", arguments="v;v", units="rounded")
def ceiling_precise(number: Any, step: Any = 1.0) -> Any:
    """Next multiple towards positive infinity, whatever the step's sign."""
    return _ceiling_precise(number, step)


@native("FLOOR.PRECISE", arguments="v;v", units="rounded")
def floor_precise(number: Any, step: Any = 1.0) -> Any:
    """Next multiple towards negative infinity, whatever the step's sign."""
    return _floor_precise(number, step)


def _math_way(up: bool) -> NumericRule:
    def vector(number: Any, step: Any, mode: Any) -> Any:
        size = np.abs(step)
        normal = _multiple(number, size, np.ceil if up else np.floor)
        turned = _multiple(number, size, np.floor if up else np.ceil)
        return np.where((np.not_equal(mode, 0.0)) & np.less(number, 0.0), turned, normal)

    return NumericRule(vector)


_ceiling_math, _floor_math = _math_way(True), _math_way(False)


@native("CEILING.MATH", arguments="v;ov", units="rounded")
def ceiling_math(number: Any, step: Any = 1.0, mode: Any = 0.0) -> Any:
    """Next multiple up; with a mode, negative numbers away from zero."""
    return _ceiling_math(number, step if _given(step) else 1.0, mode)


@native("FLOOR.MATH", arguments="v;ov", units="rounded")
def floor_math(number: Any, step: Any = 1.0, mode: Any = 0.0) -> Any:
    """Next multiple down; with a mode, negative numbers towards zero."""
    return _floor_math(number, step if _given(step) else 1.0, mode)


def _given(value: Any) -> bool:
    from doubler.workbook.natives.registry import OMITTED

    return value is not OMITTED


def _to_multiple(number: Any, step: Any) -> Any:
    bad = np.sign(number) * np.sign(step) < 0.0
    none = np.equal(step, 0.0)
    safe = np.where(none, 1.0, step)
    quotient = np.divide(number, safe)
    result = np.where(none, 0.0, np.copysign(np.floor(_snapped(np.abs(quotient)) + 0.5), quotient) * safe)
    return refused(result + 0.0, bad)


native("MROUND", arguments="vv", units="rounded")(NumericRule(_to_multiple))


def _even(number: Any) -> Any:
    return np.copysign(np.ceil(np.abs(number) / 2.0) * 2.0, number) + 0.0


def _odd(number: Any) -> Any:
    size = np.maximum(np.ceil((np.abs(number) + 1.0) / 2.0) * 2.0 - 1.0, 1.0)
    return np.where(np.less(number, 0.0), -size, size)


native("EVEN", arguments="v", units="rounded")(NumericRule(_even))
native("ODD", arguments="v", units="rounded")(NumericRule(_odd))
