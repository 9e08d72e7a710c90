"""Elementary functions of numbers: roots, exponentials, logarithms, trigonometry, combinatorics."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.lift import NumericRule, contiguous, refused
from doubler.workbook.natives.registry import native
from doubler.workbook.operators import power, power_fault

LARGEST_ANGLE = 134_217_728.0
"""2^27: from here on the trigonometric functions of the spreadsheet program have no result."""


def _one(name: str, vector: Callable[..., Any], units: str, fault: Callable[..., Any] | None = None) -> None:
    native(name, arguments="v", units=units)(NumericRule(vector, fault))


def _bounded(ufunc: Callable[..., Any]) -> Callable[..., Any]:
    """Refuse angles beyond the range of the spreadsheet program."""
    function = contiguous(ufunc)

    def rule(angle: Any) -> Any:
        return refused(function(angle), np.abs(angle) >= LARGEST_ANGLE)

    return rule


def _divided(*_: float) -> ErrorValue:
    return ErrorValue.DIV0


_sin, _cos, _tan = _bounded(np.sin), _bounded(np.cos), _bounded(np.tan)
_exp, _log, _log10 = contiguous(np.exp), contiguous(np.log), contiguous(np.log10)
_arctan = contiguous(np.arctan)

_one("ABS", np.abs, "same")
_one("SIGN", np.sign, "sign")
_one("SQRT", np.sqrt, "root:2")
_one("SQRTPI", lambda x: np.sqrt(x * math.pi), "root:2")
_one("EXP", _exp, "pure")
_one("LN", _log, "pure")
_one("LOG10", _log10, "pure")
_one("SIN", _sin, "angle_in")
_one("COS", _cos, "angle_in")
_one("TAN", _tan, "angle_in")
_one("SEC", lambda x: 1.0 / _cos(x), "angle_in")
_one("CSC", lambda x: 1.0 / _sin(x), "angle_in", lambda x: ErrorValue.DIV0 if x == 0.0 else ErrorValue.NUM)
_one("COT", lambda x: 1.0 / _tan(x), "angle_in", lambda x: ErrorValue.DIV0 if x == 0.0 else ErrorValue.NUM)
_one("ASIN", contiguous(np.arcsin), "angle_out")
_one("ACOS", contiguous(np.arccos), "angle_out")
_one("ATAN", _arctan, "angle_out")
_one("ACOT", lambda x: math.pi / 2.0 - _arctan(x), "angle_out")
_one("SINH", contiguous(np.sinh), "pure")
_one("COSH", contiguous(np.cosh), "pure")
_one("TANH", contiguous(np.tanh), "pure")
_one("ASINH", contiguous(np.arcsinh), "pure")
_one("ACOSH", contiguous(np.arccosh), "pure")
_one("ATANH", contiguous(np.arctanh), "pure")
_one("RADIANS", lambda x: x / 180.0 * math.pi, "to_radians")
_one("DEGREES", lambda x: x / math.pi * 180.0, "to_degrees")


def _signum_log_fault(number: float, base: float) -> ErrorValue:
    return ErrorValue.DIV0 if number > 0.0 and base == 1.0 else ErrorValue.NUM


def _log_over(number: Any, base: Any) -> Any:
    return refused(_log(number) / _log(base), np.less_equal(base, 0.0))


_log_to_base = NumericRule(_log_over, _signum_log_fault)
_log_to_ten = NumericRule(_log10)


@native("LOG", arguments="v;v", units="pure")
def logarithm(number: Any, base: Any = 10.0) -> Any:
    """Logarithm to a base, 10 where none is given."""
    if type(base) is float and base == 10.0:
        return _log_to_ten(number)
    return _log_to_base(number, base)


native("POWER", arguments="vv", units="power")(NumericRule(power, power_fault))


@native("PI", arguments="", units="number")
def pi() -> float:
    """Ratio of a circle's circumference to its diameter."""
    return math.pi


_atan2 = contiguous(np.arctan2)


def _angle(x: Any, y: Any) -> Any:
    return refused(_atan2(y, x), np.equal(x, 0.0) & np.equal(y, 0.0))


native("ATAN2", arguments="vv", units="angle_of_two")(NumericRule(_angle, _divided))


def _factorial(number: Any) -> Any:
    whole = np.trunc(number)
    table = np.array([float(math.factorial(k)) for k in range(171)])
    outside = (whole < 0.0) | (whole > 170.0)
    return refused(table[np.where(outside, 0, whole).astype(np.int64)], outside)


_one("FACT", _factorial, "number")


def _double_factorial(number: Any) -> Any:
    table = [1.0, 1.0]
    while len(table) <= 300:
        table.append(table[-2] * len(table))
    whole = np.trunc(number)
    outside = (whole < -1.0) | (whole > 300.0)
    return refused(np.array(table)[np.where(outside | (whole < 0.0), 0, whole).astype(np.int64)], outside)


_one("FACTDOUBLE", _double_factorial, "number")


def _combinations(count: float, chosen: float) -> float | ErrorValue:
    n, k = math.trunc(count), math.trunc(chosen)
    if n < 0 or k < 0 or n < k:
        return ErrorValue.NUM
    try:
        return float(math.comb(n, k))
    except OverflowError:
        return ErrorValue.NUM


def _permutations(count: float, chosen: float) -> float | ErrorValue:
    n, k = math.trunc(count), math.trunc(chosen)
    if n < 0 or k < 0 or n < k:
        return ErrorValue.NUM
    try:
        return float(math.perm(n, k))
    except OverflowError:
        return ErrorValue.NUM


def each_number(rule: Callable[..., Any]) -> Callable[..., Any]:
    """Lift a rule on Python floats that returns a number or an error; for what NumPy has no expression for."""
    from doubler.workbook.coerce import to_number
    from doubler.workbook.lift import ScalarRule

    def single(*values: Any) -> Any:
        numbers = [to_number(value) for value in values]
        for number in numbers:
            if isinstance(number, ErrorValue):
                return number
        try:
            result = rule(*numbers)
        except (OverflowError, ValueError, ZeroDivisionError):
            return ErrorValue.NUM
        if isinstance(result, float) and not math.isfinite(result):
            return ErrorValue.NUM
        return result

    return ScalarRule(single)


native("COMBIN", arguments="vv", units="number")(each_number(_combinations))
native("COMBINA", arguments="vv", units="number")(
    each_number(lambda n, k: _combinations(math.trunc(n) + math.trunc(k) - 1, k) if n or k else 1.0)
)
native("PERMUT", arguments="vv", units="number")(each_number(_permutations))
native("GAMMALN", "GAMMALN.PRECISE", arguments="v", units="number")(
    each_number(lambda x: math.lgamma(x) if x > 0.0 else ErrorValue.NUM)
)
native("GAMMA", arguments="v", units="number")(
    each_number(lambda x: ErrorValue.NUM if x <= 0.0 and x == math.trunc(x) else math.gamma(x))
)
native("ERF.PRECISE", arguments="v", units="pure")(each_number(math.erf))
native("ERFC", "ERFC.PRECISE", arguments="v", units="pure")(each_number(math.erfc))


@native("ERF", arguments="v;v", units="pure")
def error_function(lower: Any, upper: Any = None) -> Any:
    """Error function, from 0 or between two limits."""
    rule = each_number(math.erf) if upper is None else each_number(lambda a, b: math.erf(b) - math.erf(a))
    return rule(lower) if upper is None else rule(lower, upper)


def _integers(values: tuple[Any, ...]) -> list[int] | ErrorValue:
    from doubler.workbook.natives.by_lane import numbers_in

    numbers = numbers_in(values)
    if isinstance(numbers, ErrorValue):
        return numbers
    if any(number < 0.0 or number >= 2.0**53 for number in numbers):
        return ErrorValue.NUM
    return [math.trunc(number) for number in numbers]


def _declare_divisors() -> None:
    from doubler.workbook.natives.by_lane import by_lane

    def divisor(*values: Any) -> Any:
        whole = _integers(values)
        return whole if isinstance(whole, ErrorValue) else float(math.gcd(*whole))

    def multiple(*values: Any) -> Any:
        whole = _integers(values)
        return whole if isinstance(whole, ErrorValue) else float(math.lcm(*whole))

    native("GCD", arguments="r*r", units="number")(by_lane(divisor))
    native("LCM", arguments="r*r", units="number")(by_lane(multiple))


_declare_divisors()
