"""The operators of a formula: arithmetic, comparison and text, over lanes and grids."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.coerce import compare, to_text
from doubler.workbook.lanes import is_error
from doubler.workbook.lift import F8, NumericRule, ScalarRule, contiguous, refused

_power = contiguous(np.power)
_SPECIAL_EXPONENTS = (0.0, 0.5, 1.0, 2.0, 3.0, 4.0)


def power(base: Any, exponent: Any) -> Any:
    """Raise to a power; small whole exponents by products and 1/2 by the root, so in every lane alike."""
    if type(exponent) is float:
        return _special_power(base, exponent) if exponent in _SPECIAL_EXPONENTS else _power(base, exponent)
    result = _power(base, exponent)
    for special in _SPECIAL_EXPONENTS:
        mask = exponent == special
        if mask.any():
            base_there = np.where(mask, base, 1.0)
            result = np.where(mask, _special_power(base_there, special), result)
    return result


def _special_power(base: Any, exponent: float) -> Any:
    if exponent == 2.0:
        return base * base
    if exponent == 3.0:
        return base * base * base
    if exponent == 4.0:
        square = base * base
        return square * square
    if exponent == 0.5:
        return np.sqrt(base)
    if exponent == 1.0:
        return base
    # 0^0 has no result; anything else gives 1.
    return refused(np.ones(np.shape(base)), np.equal(base, 0.0))


def power_fault(base: float, exponent: float) -> ErrorValue | float:
    """Decide what a power without a finite result is: an odd root of a negative number, or an error."""
    if base == 0.0:
        return ErrorValue.DIV0 if exponent < 0.0 else ErrorValue.NUM
    if base < 0.0 and exponent != 0.0:
        # As spreadsheet programs do, (-8)^(1/3) is the odd root -2.
        degree = round(1.0 / exponent) if abs(exponent) > 1e-6 else 0
        if degree % 2 and abs(degree) > 1 and math.isclose(1.0 / degree, exponent, rel_tol=4e-16):
            return -float(_power(-base, exponent))
    return ErrorValue.NUM


def _quotient_fault(_: float, divisor: float) -> ErrorValue:
    return ErrorValue.DIV0 if divisor == 0.0 else ErrorValue.NUM


divide = NumericRule(np.divide, _quotient_fault)
raised = NumericRule(power, power_fault)
_add = NumericRule(np.add)
_subtract = NumericRule(np.subtract)
_multiply = NumericRule(np.multiply)
percent = NumericRule(lambda value: value / 100.0)
negative = NumericRule(np.negative)


def add(left: Any, right: Any) -> Any:
    """Sum of two values over lanes."""
    if type(left) is float and type(right) is float:
        total = left + right
        return total if math.isfinite(total) else ErrorValue.NUM
    return _add(left, right)


def subtract(left: Any, right: Any) -> Any:
    """Difference of two values over lanes."""
    if type(left) is float and type(right) is float:
        total = left - right
        return total if math.isfinite(total) else ErrorValue.NUM
    return _subtract(left, right)


def multiply(left: Any, right: Any) -> Any:
    """Product of two values over lanes."""
    if type(left) is float and type(right) is float:
        total = left * right
        return total if math.isfinite(total) else ErrorValue.NUM
    return _multiply(left, right)


def quotient(left: Any, right: Any) -> Any:
    """Quotient of two values over lanes."""
    if type(left) is float and type(right) is float:
        if right == 0.0:
            return ErrorValue.DIV0
        total = left / right
        return total if math.isfinite(total) else ErrorValue.NUM
    return divide(left, right)


NEAR = 1e-14
"""Two numbers that differ by less, relative to the larger, may agree in the 15 digits that comparison looks at."""


def alike(left: float, right: float) -> bool:
    """Whether two numbers agree in the 15 significant digits that a spreadsheet program shows and compares.

    Examples
    --------
    >>> alike(0.1 + 0.2, 0.3)
    True
    """
    if left == right:
        return True
    if abs(left - right) > NEAR * max(abs(left), abs(right)):
        return False
    return f"{left:.14e}" == f"{right:.14e}"


def compared(ufunc: Callable[..., Any], left: Any, right: Any) -> Any:
    """Compare numbers at 15 digits: lanes that differ beyond these count as equal."""
    truth = ufunc(left, right)
    if type(right) is float:
        if right == 0.0:  # no other number agrees with it in 15 digits
            return truth
        size = NEAR * abs(right)
        near = (left >= right - size) & (left <= right + size)
    else:
        with np.errstate(over="ignore"):
            near = np.abs(np.subtract(left, right)) <= NEAR * np.abs(left)
    if near.any():
        near &= np.not_equal(left, right)
        truth = np.array(truth)
        shape = truth.shape
        a, b = np.broadcast_to(left, shape), np.broadcast_to(right, shape)
        for lane in zip(*np.nonzero(near), strict=True):
            if alike(float(a[lane]), float(b[lane])):
                truth[lane] = bool(ufunc(0.0, 0.0))
    return truth


COMPARING: dict[str, np.ufunc] = {
    "=": np.equal,
    "<>": np.not_equal,
    "<": np.less,
    "<=": np.less_equal,
    ">": np.greater,
    ">=": np.greater_equal,
}
"""The NumPy function of each comparison."""


def _comparison(ufunc: Callable[..., Any], holds: Callable[[int], bool]) -> Callable[[Any, Any], Any]:
    def single(left: Any, right: Any) -> Any:
        if type(left) is float and type(right) is float and alike(left, right):
            return holds(0)
        order = compare(left, right)
        return order if isinstance(order, ErrorValue) else holds(order)

    over_lanes = ScalarRule(single)

    def rule(left: Any, right: Any) -> Any:
        a, b = type(left), type(right)
        if (a is float or (a is np.ndarray and left.dtype is F8)) and (
            b is float or (b is np.ndarray and right.dtype is F8)
        ):
            if a is float and b is float:
                return holds(0) if alike(left, right) else bool(ufunc(left, right))
            return compared(ufunc, left, right)
        return over_lanes(left, right)

    return rule


def _joined(left: Any, right: Any) -> Any:
    a, b = to_text(left), to_text(right)
    if is_error(a):
        return a
    if is_error(b):
        return b
    text = f"{a}{b}"
    return text if len(text) <= 32767 else ErrorValue.VALUE


def _signless(value: Any) -> Any:
    return value


BINARY: dict[str, Callable[[Any, Any], Any]] = {
    "+": add,
    "-": subtract,
    "*": multiply,
    "/": quotient,
    "^": raised,
    "&": ScalarRule(_joined),
    "=": _comparison(COMPARING["="], lambda order: order == 0),
    "<>": _comparison(COMPARING["<>"], lambda order: order != 0),
    "<": _comparison(COMPARING["<"], lambda order: order < 0),
    "<=": _comparison(COMPARING["<="], lambda order: order <= 0),
    ">": _comparison(COMPARING[">"], lambda order: order > 0),
    ">=": _comparison(COMPARING[">="], lambda order: order >= 0),
}
"""The value rule of each infix operator."""

UNARY: dict[str, Callable[[Any], Any]] = {"-": negative, "%": percent, "+": _signless}
"""The value rule of each prefix or postfix operator on values."""
