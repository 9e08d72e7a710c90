"""Rules on numbers lifted over lanes and grids: fast where all lanes hold numbers, exact where some do not.

A rule is one NumPy expression. Over lanes of numbers it runs once on the whole array. NumPy is set to raise
on a division by zero, an overflow or an invalid operation (`strict`); then, and where some lanes hold no
numbers, the rule runs again without raising, and the lanes it fails in get their error value one by one. So
the fast path costs nothing extra, and one failing lane never spoils the others.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.coerce import to_number
from doubler.workbook.lanes import (
    NUMBER,
    Floats,
    Grid,
    Mixed,
    Slots,
    broadcast,
    compact,
    lane_by_lane,
    plain,
    shape_of,
    tidy,
)

F8 = np.dtype(np.float64)


def strict() -> Any:
    """Return the context in which evaluation runs: floating-point faults raise, underflow does not."""
    return np.errstate(divide="raise", over="raise", invalid="raise", under="ignore")


def _lenient() -> Any:
    return np.errstate(divide="ignore", over="ignore", invalid="ignore", under="ignore")


def numbers_of(value: Any) -> tuple[float | Floats, Slots | None, list[Any]]:
    """Return lanes as arithmetic reads them.

    Returns
    -------
    numbers : float or float64 array
        0 in the lanes that hold an error.
    slot : int array or None
        For each lane the index of its error, -1 where there is none; None where no lane holds an error.
    errors : list of ErrorValue
    """
    if isinstance(value, np.ndarray):
        return (value if value.dtype == F8 else value.astype(F8)), None, []
    if isinstance(value, Mixed):
        return _numbers_of_mixed(value)
    number = to_number(value)
    if isinstance(number, ErrorValue):
        return 0.0, np.zeros((1, 1), np.int32), [number]
    return number, None, []


def _numbers_of_mixed(value: Mixed) -> tuple[Floats, Slots | None, list[Any]]:
    items = [to_number(item) for item in value.items]
    if all(isinstance(item, ErrorValue) for item in items):
        return value.numbers, value.slot, items
    # One look-up for all lanes: what each item counts as, and which error it is, if it is one.
    amounts = np.array([0.0 if isinstance(item, ErrorValue) else item for item in items])
    faults = np.array([k if isinstance(item, ErrorValue) else NUMBER for k, item in enumerate(items)], np.int32)
    odd = value.slot >= 0
    numbers = np.where(odd, amounts[value.slot], value.numbers)
    slot = np.where(odd, faults[value.slot], NUMBER).astype(np.int32)
    if slot.max() == NUMBER:
        return numbers, None, []
    return numbers, slot, items


def with_errors(numbers: Any, errors: list[tuple[Slots, list[Any]]]) -> Any:
    """Put errors into lanes of numbers; where a lane has several, the first in the list stands."""
    if not errors:
        return numbers
    shape = np.broadcast_shapes(shape_of(numbers), *(slot.shape for slot, _ in errors))
    slot = np.full(shape, NUMBER, np.int32)
    items: list[Any] = []
    for more, faults in errors:
        slot = np.where((slot == NUMBER) & (more >= 0), more + len(items), slot).astype(np.int32)
        items += faults
    result = compact(np.where(slot >= 0, 0.0, numbers), slot, items)
    return tidy(result)


class NumericRule:
    """A rule from numbers to a number, lane by lane.

    Parameters
    ----------
    vector
        The rule as a NumPy expression; in lanes where it has no result it gives NaN or infinity, or raises.
    fault
        Called with the numbers of a lane in which the rule has no finite result: gives the lane's error
        value, or the number that stands after all.
    """

    __slots__ = ("fault", "vector")

    def __init__(self, vector: Callable[..., Any], fault: Callable[..., ErrorValue | float] | None = None) -> None:
        self.vector = vector
        self.fault = fault or (lambda *_: ErrorValue.NUM)

    def __call__(self, *arguments: Any) -> Any:  # noqa: D102  the class says it
        scalar = True
        for argument in arguments:
            kind = type(argument)
            if kind is float:
                continue
            if kind is np.ndarray and argument.dtype is F8:
                scalar = False
                continue
            return self._general(arguments)
        if scalar:
            return self.scalar(*arguments)
        try:
            return self.vector(*arguments)
        except FloatingPointError:
            return self._checked(arguments, [])

    def scalar(self, *numbers: float) -> float | ErrorValue:
        """Apply the rule to Python floats."""
        try:
            result = float(self.vector(*numbers))
        except FloatingPointError:
            return self.fault(*numbers)
        return result if math.isfinite(result) else self.fault(*numbers)

    def _general(self, arguments: tuple[Any, ...]) -> Any:
        for argument in arguments:
            if isinstance(argument, Grid):
                return over_grids(self, arguments)
        numbers: list[Any] = []
        errors: list[tuple[Slots, list[Any]]] = []
        for argument in arguments:
            amount, slot, faults = numbers_of(argument)
            numbers.append(amount)
            if slot is not None:
                if not isinstance(argument, Mixed) and not errors and all(shape_of(a) == () for a in arguments):
                    return faults[0]
                errors.append((slot, faults))
        if all(type(number) is float for number in numbers):
            return with_errors(self.scalar(*numbers), errors) if not errors else with_errors(0.0, errors)
        if not errors:
            try:
                return self.vector(*numbers)
            except FloatingPointError:
                pass
        return self._checked(tuple(numbers), errors)

    def _checked(self, numbers: tuple[Any, ...], errors: list[tuple[Slots, list[Any]]]) -> Any:
        with _lenient():
            result = np.asarray(self.vector(*numbers))
        bad = ~np.isfinite(result)
        if bad.any():
            result = np.where(bad, 0.0, result)
            slot = np.full(result.shape, NUMBER, np.int32)
            where = np.nonzero(bad)
            lanes = [np.broadcast_to(number, result.shape)[where].tolist() for number in numbers]
            redone = [self.fault(*lane) for lane in zip(*lanes, strict=True)]
            items = list(dict.fromkeys(item for item in redone if isinstance(item, ErrorValue)))
            result[where] = [0.0 if isinstance(item, ErrorValue) else item for item in redone]
            slot[where] = [items.index(item) if isinstance(item, ErrorValue) else NUMBER for item in redone]
            errors = [*errors, (slot, items)]
        return with_errors(result, errors)


def over_grids(rule: Callable[..., Any], arguments: tuple[Any, ...]) -> Grid:
    """Apply a rule on lanes to grids cell by cell; unlike sizes give #N/A where one of them ends."""
    grids = [argument for argument in arguments if isinstance(argument, Grid)]
    rows = max(grid.rows for grid in grids)
    columns = max(grid.columns for grid in grids)
    arrays = []
    for argument in arguments:
        if isinstance(argument, Grid):
            arrays.append(fitted(argument, rows, columns))
        elif isinstance(argument, np.ndarray | Mixed):
            arrays.append(argument)
        else:
            arrays.append(argument)
    result = rule(*arrays)
    if shape_of(result) != ():
        shape = shape_of(result)
        full = (rows, columns, *shape[-2:])
        return Grid(rows, columns, data=broadcast(result, full) if shape != full else result)
    return Grid(rows, columns, cells=[result] * (rows * columns))


def fitted(grid: Grid, rows: int, columns: int) -> Any:
    """Return a grid's array, its single row or column left to broadcast, any other shortfall filled with #N/A."""
    data = grid.data
    if grid.rows in {1, rows} and grid.columns in {1, columns}:
        return data
    tall = grid.rows if grid.rows == 1 else rows
    wide = grid.columns if grid.columns == 1 else columns
    shape = (tall, wide, *data.shape[2:])
    filler: Any = None if grid.whole != (grid.rows, grid.columns) else ErrorValue.NA
    padded = broadcast(filler, shape)
    assert isinstance(padded, Mixed)
    slot = padded.slot.copy()
    numbers = np.zeros(shape)
    from doubler.workbook.lanes import as_mixed

    inner = as_mixed(data)
    slot[: grid.rows, : grid.columns] = np.where(inner.slot >= 0, inner.slot + 1, NUMBER)
    numbers[: grid.rows, : grid.columns] = inner.numbers
    return plain(numbers, slot, [filler, *inner.items])


class ScalarRule:
    """A rule on single values of any kind, applied lane by lane and cell by cell."""

    __slots__ = ("rule",)

    def __init__(self, rule: Callable[..., Any]) -> None:
        self.rule = rule

    def __call__(self, *arguments: Any) -> Any:  # noqa: D102  the class says it
        array = False
        for argument in arguments:
            if isinstance(argument, Grid):
                return over_grids(self, arguments)
            array = array or isinstance(argument, np.ndarray | Mixed)
        if not array:
            return self.rule(*arguments)
        return lane_by_lane(self.rule, list(arguments))


def refused(result: Any, mask: Any) -> Any:
    """Mark lanes of a result as having none: NaN there, and under `strict` a floating-point fault is raised."""
    if np.any(mask):
        return np.where(mask, np.sqrt(np.where(mask, -1.0, 0.0)), result)
    return result


def contiguous(ufunc: Callable[..., Any]) -> Callable[..., Any]:
    """Make a transcendental function independent of how its operands lie in memory.

    NumPy picks vector instructions by the layout of the operands, and these may differ from the plain ones in
    the last bit. With contiguous operands of one shape always, a lane's result does not depend on the lanes
    around it.
    """

    def apply(*operands: Any) -> Any:
        if len(operands) == 1:
            operand = operands[0]
            if type(operand) is float:
                return ufunc(np.array([operand]))[0]
            return ufunc(np.ascontiguousarray(operand))
        shape = np.broadcast_shapes(*(np.shape(operand) for operand in operands))
        if shape == ():
            return ufunc(*(np.array([operand]) for operand in operands))[0]
        return ufunc(*(np.ascontiguousarray(np.broadcast_to(operand, shape)) for operand in operands))

    return apply
