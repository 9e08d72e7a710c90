"""Sums, counts and means of the cells that meet criteria."""

from __future__ import annotations

import re
from collections.abc import Callable
from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.coerce import CannotEvaluateError, compare, fold, number_from_text
from doubler.workbook.lanes import Grid, Mixed, as_mixed, broadcast
from doubler.workbook.lift import F8
from doubler.workbook.matching import wildcard
from doubler.workbook.natives.aggregates import finished, lenient, where_true
from doubler.workbook.natives.registry import native

_CRITERION = re.compile(r"(<=|>=|<>|<|>|=)?(.*)\Z", re.DOTALL)


def criterion(value: Any) -> Callable[[Any], bool]:
    """Return the test that a criterion stands for: ``">=3"``, ``"ab*"``, ``5``, ``"<>"`` and the like."""
    if not isinstance(value, str):
        wanted = 0.0 if value is None else value
        if type(wanted) is float:
            return lambda cell: _is_number(cell, wanted)
        return lambda cell: type(cell) is type(wanted) and cell == wanted
    match = _CRITERION.match(value)
    assert match is not None
    operator, operand = match[1] or "=", match[2]
    number = _operand(operand)
    if operand == "":
        if match[1] is None:
            return lambda cell: cell is None or cell == ""
        return (lambda cell: cell is None) if operator == "=" else lambda cell: cell is not None
    if operator in {"=", "<>"}:
        equal = _equality(operand, number)
        if operator == "<>" and type(number) is float:
            return lambda cell: cell != number or type(cell) is not float  # text that spells it is another thing here
        return equal if operator == "=" else lambda cell: not equal(cell)
    holds: dict[str, Callable[[int], bool]] = {
        "<": lambda order: order < 0,
        "<=": lambda order: order <= 0,
        ">": lambda order: order > 0,
        ">=": lambda order: order >= 0,
    }
    test = holds[operator]

    def ordered(cell: Any) -> bool:
        if type(cell) is not type(number):
            return False
        order = compare(cell, number)
        return isinstance(order, int) and test(order)

    return ordered


def _operand(text: str) -> Any:
    upper = text.strip().upper()
    if upper in {"TRUE", "FALSE"}:
        return upper == "TRUE"
    try:
        return ErrorValue(upper)
    except ValueError:
        pass
    try:
        number = number_from_text(text)
    except CannotEvaluateError:
        return text
    return text if isinstance(number, ErrorValue) else number


def _spelt(cell: Any) -> float | None:
    """Return the number that a text spells; None for anything else."""
    if not isinstance(cell, str):
        return None
    try:
        number = number_from_text(cell)
    except CannotEvaluateError:
        return None
    return number if isinstance(number, float) else None


def _is_number(cell: Any, wanted: float) -> bool:
    """Whether a cell holds a number, or is text that spells it: to a criterion of equality both are one."""
    return (type(cell) is float and cell == wanted) or _spelt(cell) == wanted


def _equality(text: str, wanted: Any) -> Callable[[Any], bool]:
    if type(wanted) is float:
        return lambda cell: _is_number(cell, wanted)
    if not isinstance(wanted, str):
        folded = fold(text)
        return lambda cell: (
            (type(cell) is type(wanted) and cell == wanted) or (isinstance(cell, str) and fold(cell) == folded)
        )
    pattern = wildcard(wanted)
    if pattern is not None:
        return lambda cell: isinstance(cell, str) and pattern.fullmatch(cell) is not None
    folded = fold(wanted)
    return lambda cell: isinstance(cell, str) and fold(cell) == folded


def _mask(area: Grid, wanted: Any) -> Any:
    """Return where the cells of a range meet a criterion, over lanes: an array of shape (rows, columns, lanes …)."""
    data = area.data
    if isinstance(wanted, Grid):
        wanted = wanted.cell(0, 0)
    if isinstance(wanted, np.ndarray | Mixed):
        if isinstance(wanted, np.ndarray) and wanted.dtype == F8:
            mixed = as_mixed(data)
            held = (mixed.numbers == wanted) & (mixed.slot < 0)
            for code, item in enumerate(mixed.items):
                number = _spelt(item)
                if number is not None:
                    held = held | ((mixed.slot == code) & (wanted == number))
            return held
        from doubler.workbook.lanes import scalars

        shape = np.broadcast_shapes(data.shape, wanted.shape)
        cells, tests = scalars(broadcast(data, shape)), scalars(broadcast(wanted, shape))
        each = [criterion(test)(cell) for cell, test in zip(cells, tests, strict=True)]
        return np.array(each, np.bool_).reshape(shape)
    test = criterion(wanted)
    mixed = as_mixed(data)
    items = np.array([*(test(item) for item in mixed.items), False], np.bool_)
    numbers = mixed.numbers
    match = _CRITERION.match(wanted) if isinstance(wanted, str) else None
    operand = _operand(match[2]) if match is not None else wanted
    if wanted is None:
        operand = 0.0
    operator = (match[1] or "=") if match is not None else "="
    if (type(operand) is float and match is not None) or (type(operand) is float and not isinstance(wanted, str)):
        ufunc = {"=": np.equal, "<>": np.not_equal, "<": np.less, "<=": np.less_equal}
        ufunc |= {">": np.greater, ">=": np.greater_equal}
        truth: Any = ufunc[operator](numbers, operand)
    else:
        truth = np.full(numbers.shape, test(0.0))
    return np.where(mixed.slot >= 0, items[mixed.slot], truth)


def _masks(pairs: tuple[Any, ...]) -> Any:
    """Return where all of several criteria are met; #VALUE! where the ranges differ in size."""
    mask: Any = None
    size = None
    for area, wanted in zip(pairs[::2], pairs[1::2], strict=True):
        grid = area if isinstance(area, Grid) else Grid(1, 1, cells=[area])
        if size is not None and (grid.rows, grid.columns) != size:
            return ErrorValue.VALUE
        size = grid.rows, grid.columns
        here = _mask(grid, str(wanted) if isinstance(wanted, ErrorValue) else wanted)
        mask = here if mask is None else mask & here
    return mask


class _Chosen:
    """The numbers of a range where a mask holds, and the errors there."""

    def __init__(self, area: Grid, mask: Any) -> None:
        mixed = as_mixed(area.data)
        self.count_mask = mask & (mixed.slot < 0)
        self.numbers = np.broadcast_to(mixed.numbers, np.broadcast_shapes(mixed.numbers.shape, mask.shape))
        faults = np.array([*(isinstance(item, ErrorValue) for item in mixed.items), False], np.bool_)
        wrong = mask & faults[mixed.slot]
        self.errors: list[tuple[Any, list[Any]]] = []
        if wrong.any():
            for code, item in enumerate(mixed.items):
                hit = (wrong & (mixed.slot == code)).any(axis=(0, 1))
                if hit.any():
                    self.errors.append((np.where(hit, 0, -1).astype(np.int32), [item]))

    def total(self) -> Any:
        """Sum, one cell after the other."""
        chosen = np.where(self.count_mask, self.numbers, 0.0)
        flat = chosen.reshape(-1, *chosen.shape[2:])
        with lenient():
            if flat.shape[1:] == (1, 1):
                return float(np.add.accumulate(np.concatenate(([0.0], flat.ravel())))[-1])
            result: Any = np.zeros(flat.shape[1:])
            for line in flat:
                result = result + line
            return result

    def count(self) -> Any:
        """How many numbers were chosen."""
        found = self.count_mask.sum(axis=(0, 1)).astype(F8)
        return float(found[0, 0]) if found.shape == (1, 1) else found

    def extreme(self, ufunc: np.ufunc, start: float) -> Any:
        """Largest or smallest; 0 where none was chosen."""
        found = ufunc.reduce(np.where(self.count_mask, self.numbers, start), axis=(0, 1))
        found = np.where(np.isinf(found), 0.0, found)
        return float(found[0, 0]) if found.shape == (1, 1) else found


def _sized(area: Any, like: Grid) -> Grid:
    grid = area if isinstance(area, Grid) else Grid(1, 1, cells=[area])
    if (grid.rows, grid.columns) == (like.rows, like.columns):
        return grid
    if grid.rows >= like.rows and grid.columns >= like.columns:
        return grid.part(0, 0, like.rows, like.columns)
    raise CannotEvaluateError("the range to sum is smaller than the range of the criterion")


def _single(area: Any, wanted: Any, values: Any) -> _Chosen | ErrorValue:
    grid = area if isinstance(area, Grid) else Grid(1, 1, cells=[area])
    mask = _masks((grid, wanted))
    if isinstance(mask, ErrorValue):
        return mask
    return _Chosen(grid if values is None else _sized(values, grid), mask)


@native("SUMIF", arguments="rv;r", units="sum_if:last")
def sum_if(area: Any, wanted: Any, values: Any = None) -> Any:
    """Sum of the cells that meet a criterion, or of those beside them."""
    chosen = _single(area, wanted, values)
    return chosen if isinstance(chosen, ErrorValue) else finished(chosen.total(), chosen.errors)


@native("AVERAGEIF", arguments="rv;r", units="sum_if:last")
def mean_if(area: Any, wanted: Any, values: Any = None) -> Any:
    """Mean of the cells that meet a criterion, or of those beside them."""
    chosen = _single(area, wanted, values)
    return chosen if isinstance(chosen, ErrorValue) else _mean(chosen)


def _mean(chosen: _Chosen) -> Any:
    count = chosen.count()
    none = np.equal(count, 0.0)
    with lenient():
        result = np.divide(chosen.total(), np.where(none, 1.0, count))
    return finished(result, [*chosen.errors, *where_true(none, ErrorValue.DIV0)])


@native("COUNTIF", arguments="rv", units="count_if")
def count_if(area: Any, wanted: Any) -> Any:
    """How many cells meet a criterion."""
    return count_ifs(area, wanted)


@native("COUNTIFS", arguments="rv*rv", units="count_if")
def count_ifs(*pairs: Any) -> Any:
    """How many places meet all of several criteria."""
    mask = _masks(pairs)
    if isinstance(mask, ErrorValue):
        return mask
    found = mask.sum(axis=(0, 1)).astype(F8)
    result = float(found[0, 0]) if found.shape == (1, 1) else found
    if len(pairs) == 2 and isinstance(pairs[0], Grid):
        area = pairs[0]
        beyond = area.whole[0] * area.whole[1] - area.rows * area.columns
        if beyond and not isinstance(pairs[1], np.ndarray | Mixed | Grid) and criterion(pairs[1])(None):
            result = result + float(beyond)
    return result


def _several(values: Any, pairs: tuple[Any, ...]) -> _Chosen | ErrorValue:
    mask = _masks(pairs)
    if isinstance(mask, ErrorValue):
        return mask
    grid = values if isinstance(values, Grid) else Grid(1, 1, cells=[values])
    if (grid.rows, grid.columns) != mask.shape[:2]:
        return ErrorValue.VALUE
    return _Chosen(grid, mask)


@native("SUMIFS", arguments="rrv*rv", units="sum_if:0")
def sum_ifs(values: Any, *pairs: Any) -> Any:
    """Sum of the cells where all of several criteria are met."""
    chosen = _several(values, pairs)
    return chosen if isinstance(chosen, ErrorValue) else finished(chosen.total(), chosen.errors)


@native("AVERAGEIFS", arguments="rrv*rv", units="sum_if:0")
def mean_ifs(values: Any, *pairs: Any) -> Any:
    """Mean of the cells where all of several criteria are met."""
    chosen = _several(values, pairs)
    return chosen if isinstance(chosen, ErrorValue) else _mean(chosen)


@native("MAXIFS", arguments="rrv*rv", units="sum_if:0")
def largest_ifs(values: Any, *pairs: Any) -> Any:
    """Largest of the cells where all of several criteria are met; 0 where there is none."""
    chosen = _several(values, pairs)
    return chosen if isinstance(chosen, ErrorValue) else finished(chosen.extreme(np.maximum, -np.inf), chosen.errors)


@native("MINIFS", arguments="rrv*rv", units="sum_if:0")
def smallest_ifs(values: Any, *pairs: Any) -> Any:
    """Smallest of the cells where all of several criteria are met; 0 where there is none."""
    chosen = _several(values, pairs)
    return chosen if isinstance(chosen, ErrorValue) else finished(chosen.extreme(np.minimum, np.inf), chosen.errors)
