"""Order and spread of numbers: medians, ranks, percentiles, deviations."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.coerce import to_number
from doubler.workbook.lanes import shape_of
from doubler.workbook.natives.aggregates import Entries, finished, lenient
from doubler.workbook.natives.by_lane import by_lane, numbers_in
from doubler.workbook.natives.registry import native

Rule = Callable[..., Any]


def in_order(block: Any) -> Any:
    """Add up along the first axis, one after the other, so that a lane's sum does not depend on the other lanes."""
    total = np.zeros(block.shape[1:])
    for row in block:
        total = total + row
    return total


def average(block: Any) -> Any:
    """Arithmetic mean along the first axis."""
    return in_order(block) / float(len(block))


def squares(block: Any) -> Any:
    """Sum of squared deviations from the mean along the first axis."""
    return in_order(np.square(block - average(block)))


def over_numbers(rule: Rule, least: int, few: ErrorValue, bad: ErrorValue) -> Callable[..., Any]:
    """Lift a rule on a block of numbers (one a row, lanes beside each other) over the numbers of all arguments.

    Where every argument holds numbers in all lanes the rule runs once on the whole block, else lane by lane.
    """

    def single(*values: Any) -> Any:
        numbers = numbers_in(values)
        if isinstance(numbers, ErrorValue):
            return numbers
        if len(numbers) < least:
            return few
        with lenient():
            result = float(rule(np.array(numbers).reshape(-1, 1))[0])
        return result if np.isfinite(result) else bad

    each = by_lane(single)

    def lifted(*arguments: Any) -> Any:
        entries = Entries(arguments)
        if entries.errors or any(valid is not None for _, valid in entries.values):
            return each(*arguments)
        shapes = [shape_of(v) for v, _ in entries.values if len(shape_of(v)) == 2]
        if not shapes:
            return each(*arguments)
        shape = np.broadcast_shapes(*shapes)
        rows: list[Any] = []
        for value, _ in entries.values:
            rows += list(value) if len(shape_of(value)) == 1 else [value]
        if len(rows) < least:
            return few
        block = np.empty((len(rows), shape[0] * shape[1]))
        for at, row in enumerate(rows):
            block[at] = np.broadcast_to(row, shape).ravel() if shape_of(row) else row
        with lenient():
            result = np.asarray(rule(block)).reshape(shape)
        if np.isfinite(result).all():
            return finished(result, [])
        return each(*arguments)

    return lifted


def _declare(
    names: str,
    units: str,
    rule: Rule,
    least: int = 1,
    few: ErrorValue = ErrorValue.NUM,
    bad: ErrorValue = ErrorValue.NUM,
) -> None:
    native(*names.split(), arguments="r*r", units=units)(over_numbers(rule, least, few, bad))


def _middle(block: Any) -> Any:
    ordered = np.sort(block, axis=0)
    half = len(ordered) // 2
    return ordered[half] if len(ordered) % 2 else (ordered[half - 1] + ordered[half]) / 2.0


def _geometric(block: Any) -> Any:
    logs = in_order(np.log(np.where(block > 0.0, block, np.nan))) / float(len(block))
    return np.exp(np.ascontiguousarray(logs))


def _harmonic(block: Any) -> Any:
    return float(len(block)) / in_order(1.0 / np.where(block > 0.0, block, np.nan))


def _standardised_power(block: Any, power: int) -> Any:
    deviation = np.sqrt(squares(block) / (len(block) - 1.0))
    scaled = (block - average(block)) / deviation
    factor = scaled
    for _ in range(power - 1):
        factor = factor * scaled
    return in_order(factor)


def _skew(block: Any) -> Any:
    n = float(len(block))
    return n / ((n - 1.0) * (n - 2.0)) * _standardised_power(block, 3)


def _kurtosis(block: Any) -> Any:
    n = float(len(block))
    lead = n * (n + 1.0) / ((n - 1.0) * (n - 2.0) * (n - 3.0))
    return lead * _standardised_power(block, 4) - 3.0 * (n - 1.0) ** 2 / ((n - 2.0) * (n - 3.0))


_declare("MEDIAN", "same", _middle)
_declare("GEOMEAN", "same", _geometric)
_declare("HARMEAN", "same", _harmonic)
_declare("AVEDEV", "spread", lambda block: average(np.abs(block - average(block))))
_declare("DEVSQ", "power_sum:2", squares)
_declare("STDEV STDEV.S", "spread", lambda b: np.sqrt(squares(b) / (len(b) - 1.0)), 2, ErrorValue.DIV0)
_declare("STDEVP STDEV.P", "spread", lambda b: np.sqrt(squares(b) / len(b)), 1, ErrorValue.DIV0)
_declare("VAR VAR.S", "variance", lambda b: squares(b) / (len(b) - 1.0), 2, ErrorValue.DIV0)
_declare("VARP VAR.P", "variance", lambda b: squares(b) / len(b), 1, ErrorValue.DIV0)
_declare("SKEW", "number", _skew, 3, ErrorValue.DIV0, ErrorValue.DIV0)
_declare("KURT", "number", _kurtosis, 4, ErrorValue.DIV0, ErrorValue.DIV0)


def _mode(*values: Any) -> Any:
    numbers = numbers_in(values)
    if isinstance(numbers, ErrorValue):
        return numbers
    counts: dict[float, int] = {}
    for number in numbers:
        counts[number] = counts.get(number, 0) + 1
    most = max(counts.values(), default=0)
    return next(number for number, count in counts.items() if count == most) if most > 1 else ErrorValue.NA


native("MODE", "MODE.SNGL", arguments="r*r", units="same")(by_lane(_mode))


def counted_as_numbers(values: tuple[Any, ...]) -> list[float] | ErrorValue:
    """Return the numbers of a lane's arguments with text in ranges as 0 and logicals as 0 and 1 (AVERAGEA)."""
    found: list[float] = []
    for value in values:
        for cell in [c for row in value for c in row] if isinstance(value, list) else [value]:
            if isinstance(cell, ErrorValue):
                return cell
            if isinstance(cell, str) and isinstance(value, list):
                found.append(0.0)
            elif cell is not None or not isinstance(value, list):
                number = to_number(cell)
                if isinstance(number, ErrorValue):
                    return number
                found.append(number)
    return found


def _with_text(rule: Callable[[list[float]], Any]) -> Callable[..., Any]:
    def single(*values: Any) -> Any:
        numbers = counted_as_numbers(values)
        return numbers if isinstance(numbers, ErrorValue) else rule(numbers)

    return by_lane(single)


def _column(rule: Rule, least: int) -> Callable[[list[float]], Any]:
    def single(numbers: list[float]) -> Any:
        return float(rule(np.array(numbers).reshape(-1, 1))[0]) if len(numbers) >= least else ErrorValue.DIV0

    return single


native("AVERAGEA", arguments="r*r", units="same")(_with_text(_column(average, 1)))
native("MAXA", arguments="r*r", units="same")(_with_text(lambda numbers: max(numbers, default=0.0)))
native("MINA", arguments="r*r", units="same")(_with_text(lambda numbers: min(numbers, default=0.0)))
native("VARA", arguments="r*r", units="variance")(_with_text(_column(lambda b: squares(b) / (len(b) - 1.0), 2)))
native("STDEVA", arguments="r*r", units="spread")(
    _with_text(_column(lambda b: np.sqrt(squares(b) / (len(b) - 1.0)), 2))
)


def with_parameter(rule: Callable[[list[float], float], Any]) -> Callable[..., Any]:
    """Lift a rule on the sorted numbers of a range and one number more, lane by lane."""

    def single(area: Any, parameter: Any) -> Any:
        numbers = numbers_in((area if isinstance(area, list | tuple) else [[area]],))
        number = to_number(parameter)
        if isinstance(numbers, ErrorValue):
            return numbers
        if isinstance(number, ErrorValue):
            return number
        return rule(sorted(numbers), number) if numbers else ErrorValue.NUM

    return by_lane(single)


def _from_top(ordered: list[float], place: float) -> Any:
    at = int(np.floor(place))
    return ordered[-at] if 1 <= at <= len(ordered) else ErrorValue.NUM


def _from_bottom(ordered: list[float], place: float) -> Any:
    at = int(np.floor(place))
    return ordered[at - 1] if 1 <= at <= len(ordered) else ErrorValue.NUM


def _between(ordered: list[float], place: float) -> float:
    low = int(np.floor(place))
    part = place - low
    return ordered[low] if part == 0.0 else ordered[low] + part * (ordered[low + 1] - ordered[low])


def percentile(ordered: list[float], share: float) -> Any:
    """Interpolated percentile, both ends included."""
    return _between(ordered, share * (len(ordered) - 1)) if 0.0 <= share <= 1.0 else ErrorValue.NUM


def percentile_exclusive(ordered: list[float], share: float) -> Any:
    """Interpolated percentile, both ends excluded."""
    place = share * (len(ordered) + 1) - 1.0
    return _between(ordered, place) if 0.0 <= place <= len(ordered) - 1 else ErrorValue.NUM


def _quarters(rule: Callable[[list[float], float], Any], low: int, high: int) -> Callable[[list[float], float], Any]:
    def single(ordered: list[float], quarter: float) -> Any:
        whole = int(quarter)
        return rule(ordered, whole / 4.0) if low <= whole <= high else ErrorValue.NUM

    return single


def _percent_rank(ordered: list[float], value: float) -> Any:
    if not ordered[0] <= value <= ordered[-1]:
        return ErrorValue.NA
    if len(ordered) == 1:
        return 1.0
    below = sum(1 for number in ordered if number < value)
    if value in ordered:
        share = below / (len(ordered) - 1)
    else:
        low, high = ordered[below - 1], ordered[below]
        share = (below - 1 + (value - low) / (high - low)) / (len(ordered) - 1)
    return float(np.floor(share * 1000.0 + 1e-9) / 1000.0)


def _trimmed(ordered: list[float], share: float) -> Any:
    if not 0.0 <= share < 1.0:
        return ErrorValue.NUM
    cut = int(share * len(ordered) / 2.0)
    kept = ordered[cut : len(ordered) - cut]
    return float(average(np.array(kept).reshape(-1, 1))[0])


for _names, _rule in (
    ("LARGE", _from_top),
    ("SMALL", _from_bottom),
    ("PERCENTILE PERCENTILE.INC", percentile),
    ("PERCENTILE.EXC", percentile_exclusive),
    ("QUARTILE QUARTILE.INC", _quarters(percentile, 0, 4)),
    ("QUARTILE.EXC", _quarters(percentile_exclusive, 1, 3)),
    ("TRIMMEAN", _trimmed),
):
    native(*_names.split(), arguments="av", units="statistic:0")(with_parameter(_rule))
native("PERCENTRANK", "PERCENTRANK.INC", arguments="av", units="number")(with_parameter(_percent_rank))


def _ranked(number: Any, area: Any, order: Any, middle: bool) -> Any:
    numbers = numbers_in((area if isinstance(area, list | tuple) else [[area]],))
    value, way = to_number(number), to_number(order)
    for item in (value, numbers, way):
        if isinstance(item, ErrorValue):
            return item
    assert isinstance(numbers, list)
    if value not in numbers:
        return ErrorValue.NA
    before = sum(1 for other in numbers if (other < value if way else other > value))
    ties = numbers.count(value)
    return float(before + 1 + ((ties - 1) / 2.0 if middle else 0.0))


native("RANK", "RANK.EQ", arguments="vr;v", units="rank")(
    by_lane(lambda number, area, order=0.0: _ranked(number, area, order, False))
)
native("RANK.AVG", arguments="vr;v", units="rank")(
    by_lane(lambda number, area, order=0.0: _ranked(number, area, order, True))
)
