"""Straight lines through data, correlation, and sums over pairs."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.coerce import to_logical, to_number
from doubler.workbook.natives.by_lane import Rows, by_lane
from doubler.workbook.natives.registry import OMITTED, native

Pairs = tuple[list[float], list[float]]


def _flat(area: Any) -> list[Any]:
    return [cell for row in area for cell in row] if isinstance(area, list) else [area]


def pairs_of(first: Any, second: Any) -> Pairs | ErrorValue:
    """Return the places where both ranges hold numbers; #N/A for unlike sizes."""
    a, b = _flat(first), _flat(second)
    if len(a) != len(b):
        return ErrorValue.NA
    found: Pairs = ([], [])
    for one, other in zip(a, b, strict=True):
        for item in (one, other):
            if isinstance(item, ErrorValue):
                return item
        if type(one) is float and type(other) is float:
            found[0].append(one)
            found[1].append(other)
    return found


def _moments(pairs: Pairs) -> tuple[float, float, float, float, float]:
    """Return means of both, and the sums of squared deviations and of their products."""
    a, b = pairs
    n = len(a)
    mean_a, mean_b = math.fsum(a) / n, math.fsum(b) / n
    aa = math.fsum((x - mean_a) ** 2 for x in a)
    bb = math.fsum((y - mean_b) ** 2 for y in b)
    ab = math.fsum((x - mean_a) * (y - mean_b) for x, y in zip(a, b, strict=True))
    return mean_a, mean_b, aa, bb, ab


def _line(rule: Callable[[Pairs, tuple[float, float, float, float, float]], Any], least: int = 2) -> Callable[..., Any]:
    """Lift a rule on y, x pairs and their moments."""

    def single(known_y: Any, known_x: Any) -> Any:
        pairs = pairs_of(known_y, known_x)
        if isinstance(pairs, ErrorValue):
            return pairs
        if len(pairs[0]) < least:
            return ErrorValue.DIV0
        try:
            return rule(pairs, _moments(pairs))
        except ZeroDivisionError:
            return ErrorValue.DIV0

    return by_lane(single)


def _steyx(pairs: Pairs, m: tuple[float, float, float, float, float]) -> float:
    return math.sqrt(max((m[2] - m[4] * m[4] / m[3]) / (len(pairs[0]) - 2), 0.0))


_correlation = _line(lambda _, m: m[4] / math.sqrt(m[2] * m[3]))
native("SLOPE", arguments="aa", units="slope")(_line(lambda _, m: m[4] / m[3]))
native("INTERCEPT", arguments="aa", units="intercept")(_line(lambda _, m: m[0] - m[4] / m[3] * m[1]))
native("CORREL", "PEARSON", arguments="aa", units="correlation")(_correlation)
native("RSQ", arguments="aa", units="correlation")(_line(lambda _, m: m[4] * m[4] / (m[2] * m[3])))
native("STEYX", arguments="aa", units="intercept")(_line(_steyx, 3))
native("COVAR", "COVARIANCE.P", arguments="aa", units="covariance")(_line(lambda p, m: m[4] / len(p[0]), 1))
native("COVARIANCE.S", arguments="aa", units="covariance")(_line(lambda p, m: m[4] / (len(p[0]) - 1)))


def _forecast(x: Any, known_y: Any, known_x: Any) -> Any:
    at, pairs = to_number(x), pairs_of(known_y, known_x)
    if isinstance(at, ErrorValue):
        return at
    if isinstance(pairs, ErrorValue):
        return pairs
    if not pairs[0]:
        return ErrorValue.NA
    m = _moments(pairs)
    return m[0] + m[4] / m[3] * (at - m[1]) if m[3] else ErrorValue.DIV0


native("FORECAST", "FORECAST.LINEAR", arguments="vaa", units="forecast")(by_lane(_forecast))


def _numbers(area: Any) -> Any:
    cells = _flat(area)
    for cell in cells:
        if isinstance(cell, ErrorValue):
            return cell
        if type(cell) is not float:
            return ErrorValue.VALUE
    return np.array(cells)


def _design(known_y: Any, known_x: Any) -> Any:
    """Return y, and x as a matrix with one column a variable; an error where they do not fit together."""
    y = _numbers(known_y)
    if isinstance(y, ErrorValue):
        return y
    if known_x is OMITTED or known_x is None:
        return y, np.arange(1.0, len(y) + 1.0).reshape(-1, 1)
    x = _numbers(known_x)
    if isinstance(x, ErrorValue):
        return x
    rows, columns = (len(known_x), len(known_x[0])) if isinstance(known_x, list) else (1, 1)
    if x.size == y.size:
        return y, x.reshape(-1, 1)
    matrix = x.reshape(rows, columns)
    tall = isinstance(known_y, list) and len(known_y) > 1
    if tall and rows == y.size:
        return y, matrix
    if not tall and columns == y.size:
        return y, matrix.T
    return ErrorValue.REF


def _fit(y: Any, x: Any, constant: bool) -> Any:
    """Least squares by centred columns; coefficients of x, then the constant."""
    if constant and x.shape[1] == 1:
        mean_y, mean_x, _, square, product = _moments((y.tolist(), x[:, 0].tolist()))
        slope = product / square if square else 0.0
        return np.array([slope]), mean_y - slope * mean_x
    if constant:
        mean_x, mean_y = x.mean(axis=0), y.mean()
        slopes, *_ = np.linalg.lstsq(x - mean_x, y - mean_y, rcond=None)
        return slopes, float(mean_y - mean_x @ slopes)
    slopes, *_ = np.linalg.lstsq(x, y, rcond=None)
    return slopes, 0.0


def _flag(value: Any, default: bool) -> bool | ErrorValue:
    return default if value is OMITTED or value is None else to_logical(value)


def _linest(known_y: Any, known_x: Any = OMITTED, constant: Any = OMITTED, statistics: Any = OMITTED) -> Any:
    return _table_of_fit(_design(known_y, known_x), _flag(constant, True), _flag(statistics, False))


def _table_of_fit(design: Any, with_constant: Any, full: Any) -> Any:
    for item in (design, with_constant, full):
        if isinstance(item, ErrorValue):
            return item
    y, x = design
    slopes, level = _fit(y, x, with_constant)
    first = [*(float(s) for s in slopes[::-1]), level]
    if not full:
        return [first]
    n, k = x.shape
    freedom = n - k - (1 if with_constant else 0)
    residual = float(np.sum((y - x @ slopes - level) ** 2))
    centre = y.mean() if with_constant else 0.0
    explained = float(np.sum((y - centre) ** 2)) - residual
    matrix = np.column_stack([x, np.ones(n)]) if with_constant else x
    blank: list[Any] = [ErrorValue.NA] * (k - 1)
    if freedom <= 0:
        errors: list[Any] = [0.0] * (k + 1)
        deviation: Any = 0.0
        ratio: Any = ErrorValue.NUM
    else:
        variance = residual / freedom
        spread = np.sqrt(np.diag(np.linalg.inv(matrix.T @ matrix)) * variance)
        errors = [float(s) for s in spread[:k][::-1]] + [float(spread[k]) if with_constant else ErrorValue.NA]
        deviation = math.sqrt(variance)
        ratio = (explained / k) / variance if variance else ErrorValue.NUM
    total = explained + residual
    determination = explained / total if total else 1.0
    return [
        first,
        errors,
        [determination, deviation, *blank],
        [ratio, float(freedom), *blank],
        [explained, residual, *blank],
    ]


native("LINEST", arguments="a;bbb", units="line_fit")(by_lane(_linest))


def _logest(known_y: Any, known_x: Any = OMITTED, constant: Any = OMITTED, statistics: Any = OMITTED) -> Any:
    design = _design(known_y, known_x)
    if isinstance(design, ErrorValue):
        return design
    if (design[0] <= 0.0).any():
        return ErrorValue.NUM
    table = _table_of_fit((np.log(design[0]), design[1]), _flag(constant, True), _flag(statistics, False))
    if isinstance(table, ErrorValue):
        return table
    return [[math.exp(item) for item in table[0]], *table[1:]]


native("LOGEST", arguments="a;bbb", units="none")(by_lane(_logest))


def _line_through(logarithmic: bool) -> Callable[..., Any]:
    def single(known_y: Any, known_x: Any = OMITTED, new_x: Any = OMITTED, constant: Any = OMITTED) -> Any:
        design = _design(known_y, known_x)
        with_constant = _flag(constant, True)
        for item in (design, with_constant):
            if isinstance(item, ErrorValue):
                return item
        y, x = design
        if logarithmic and (y <= 0.0).any():
            return ErrorValue.NUM
        slopes, level = _fit(np.log(y) if logarithmic else y, x, bool(with_constant))
        target: Any = new_x
        if new_x is OMITTED or new_x is None:
            target = known_y if known_x is OMITTED or known_x is None else known_x
            values = x
        else:
            numbers = _numbers(new_x)
            if isinstance(numbers, ErrorValue):
                return numbers
            values = _shaped(numbers, new_x, x.shape[1])
            if values is None:
                return ErrorValue.REF
        result = values @ slopes + level
        result = np.exp(result) if logarithmic else result
        return _as_rows(result.tolist(), target, x.shape[1])

    return by_lane(single)


def _shaped(numbers: Any, given: Any, variables: int) -> Any:
    if variables == 1:
        return numbers.reshape(-1, 1)
    rows = len(given) if isinstance(given, list) else 1
    matrix = numbers.reshape(rows, -1)
    if matrix.shape[1] == variables:
        return matrix
    return matrix.T if matrix.shape[0] == variables else None


def _as_rows(values: list[float], like: Any, variables: int) -> Rows | float:
    """Arrange results in the shape of the x that they belong to."""
    if not isinstance(like, list):
        return values[0]
    if variables == 1:
        width = len(like[0])
        return [values[at : at + width] for at in range(0, len(values), width)]
    return [[value] for value in values] if len(like) == len(values) else [values]


native("TREND", arguments="a;bbb", units="trend")(_line_through(False))
native("GROWTH", arguments="a;bbb", units="none")(_line_through(True))


def _over_pairs(term: Callable[[float, float], float]) -> Callable[..., Any]:
    def single(first: Any, second: Any) -> Any:
        pairs = pairs_of(first, second)
        if isinstance(pairs, ErrorValue):
            return pairs
        total = 0.0
        for a, b in zip(*pairs, strict=True):
            total += term(a, b)
        return total if math.isfinite(total) else ErrorValue.NUM

    return by_lane(single)


native("SUMX2MY2", arguments="aa", units="squares_of_two")(_over_pairs(lambda a, b: a * a - b * b))
native("SUMX2PY2", arguments="aa", units="squares_of_two")(_over_pairs(lambda a, b: a * a + b * b))
native("SUMXMY2", arguments="aa", units="squares_of_two")(_over_pairs(lambda a, b: (a - b) * (a - b)))


def _standardised(value: Any, mean: Any, deviation: Any) -> Any:
    numbers: list[float] = []
    for item in (value, mean, deviation):
        number = to_number(item)
        if isinstance(number, ErrorValue):
            return number
        numbers.append(number)
    return (numbers[0] - numbers[1]) / numbers[2] if numbers[2] > 0.0 else ErrorValue.NUM


native("STANDARDIZE", arguments="vvv", units="standardised")(by_lane(_standardised))
