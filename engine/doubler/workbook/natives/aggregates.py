"""Sums, counts, means, extremes and products over ranges and values."""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.lanes import NUMBER, Grid, Mixed, compact, shape_of, tidy
from doubler.workbook.lift import F8, fitted, numbers_of, with_errors
from doubler.workbook.natives.registry import native

LARGE_BLOCK = 16
"""From this many cells on, a grid that is the same in all lanes is taken as one array."""


class Entries:
    """The numbers among a function's arguments, in order, and the errors met.

    Attributes
    ----------
    values
        Pairs: a float, an array over lanes, or a one-dimensional block of numbers that hold in all lanes; and
        None or the mask of the lanes in which the entry is a number.
    errors
        Errors over lanes, as `with_errors` takes them.
    """

    __slots__ = ("errors", "values")

    def __init__(self, arguments: Sequence[Any]) -> None:
        self.values: list[tuple[Any, Any]] = []
        self.errors: list[tuple[Any, list[Any]]] = []
        for argument in arguments:
            self._take(argument)

    def _take(self, argument: Any) -> None:
        if isinstance(argument, tuple):
            for area in argument:
                self._take(area)
        elif isinstance(argument, Grid):
            if argument.lane_constant and argument.rows * argument.columns >= LARGE_BLOCK:
                self._block(argument.data)
            else:
                for cell in argument.cells:
                    self._cell(cell)
        else:
            self._value(argument)

    def _block(self, data: Any) -> None:
        if isinstance(data, Mixed):
            slot = data.slot.ravel()
            faults = [k for k, item in enumerate(data.items) if isinstance(item, ErrorValue)]
            if faults:
                hits = slot[np.isin(slot, faults)]
                if hits.size:
                    self._error(data.items[hits[0]])
            block = data.numbers.ravel()[slot == NUMBER]
            if block.size:
                self.values.append((block, None))
        elif data.dtype == F8:
            self.values.append((data.ravel(), None))

    def _cell(self, cell: Any) -> None:
        """Take a cell of a range: what is neither number nor error is passed over."""
        if type(cell) is float:
            self.values.append((cell, None))
        elif isinstance(cell, np.ndarray):
            if cell.dtype == F8:
                self.values.append((cell, None))
        elif isinstance(cell, Mixed):
            faults = [isinstance(item, ErrorValue) for item in cell.items]
            if any(faults):
                wrong = np.array(faults)[cell.slot] & (cell.slot >= 0)
                self.errors.append((np.where(wrong, cell.slot, NUMBER), cell.items))
            self.values.append((cell.numbers, cell.slot == NUMBER))
        elif isinstance(cell, ErrorValue):
            self._error(cell)

    def _value(self, value: Any) -> None:
        """Take a value written as an argument: text and logicals count as the numbers they stand for."""
        numbers, slot, faults = numbers_of(value)
        if slot is not None:
            self.errors.append((slot, faults))
        self.values.append((numbers, None))

    def _error(self, error: ErrorValue) -> None:
        self.errors.append((np.zeros((1, 1), np.int32), [error]))

    def count(self) -> Any:
        """Count the numbers, over lanes."""
        fixed = 0
        varying: Any = 0.0
        for numbers, valid in self.values:
            if valid is not None:
                varying = varying + valid
            else:
                fixed += numbers.size if shape_of(numbers) and numbers.ndim == 1 else 1
        return varying + float(fixed)

    def fold(self, ufunc: np.ufunc, start: float) -> Any:
        """Combine the numbers one after the other, from `start`."""
        total: Any = start
        for numbers, valid in self.values:
            if type(numbers) is not float and numbers.ndim == 1:
                if type(total) is float:
                    total = float(ufunc.accumulate(np.concatenate(([total], numbers)))[-1])
                else:
                    for number in numbers.tolist():
                        total = ufunc(total, number)
            else:
                total = ufunc(total, numbers if valid is None else np.where(valid, numbers, start))
                if not shape_of(total):
                    total = float(total)
        return total

    def mapped(self, function: Any) -> Entries:
        """Return the same entries with a function applied to every number."""
        other = Entries(())
        other.errors = self.errors
        for numbers, valid in self.values:
            result = function(numbers)
            other.values.append((float(result) if not shape_of(result) else result, valid))
        return other


def finished(numbers: Any, errors: list[tuple[Any, list[Any]]]) -> Any:
    """Return an aggregate with its errors; a lane without a finite number is #NUM!."""
    if not shape_of(numbers):
        number = float(numbers)
        if math.isfinite(number):
            return with_errors(number, errors)
        return with_errors(0.0, [*errors, (np.zeros((1, 1), np.int32), [ErrorValue.NUM])])
    bad = ~np.isfinite(numbers)
    if bad.any():
        numbers = np.where(bad, 0.0, numbers)
        errors = [*errors, (np.where(bad, 0, NUMBER).astype(np.int32), [ErrorValue.NUM])]
    return tidy(with_errors(numbers, errors))


def where_true(mask: Any, error: ErrorValue) -> list[tuple[Any, list[Any]]]:
    """Return an error over the lanes where the mask is true, as `with_errors` takes it."""
    mask = np.asarray(mask)
    if not mask.any():
        return []
    shape = mask.shape or (1, 1)
    return [(np.where(mask, 0, NUMBER).astype(np.int32).reshape(shape), [error])]


def lenient() -> Any:
    """Return the context in which an aggregate runs: faults are looked for at its end."""
    return np.errstate(all="ignore")


@native("SUM", arguments="r*r", units="same")
def total(*arguments: Any) -> Any:
    """Sum of the numbers."""
    entries = Entries(arguments)
    with lenient():
        return finished(entries.fold(np.add, 0.0), entries.errors)


@native("SUMSQ", arguments="r*r", units="power_sum:2")
def sum_of_squares(*arguments: Any) -> Any:
    """Sum of the squares of the numbers."""
    entries = Entries(arguments)
    with lenient():
        return finished(entries.mapped(np.square).fold(np.add, 0.0), entries.errors)


@native("PRODUCT", arguments="r*r", units="product")
def product(*arguments: Any) -> Any:
    """Product of the numbers; 0 where there are none."""
    entries = Entries(arguments)
    with lenient():
        count = entries.count()
        return finished(np.where(np.equal(count, 0.0), 0.0, entries.fold(np.multiply, 1.0)), entries.errors)


@native("MIN", arguments="r*r", units="same")
def smallest(*arguments: Any) -> Any:
    """Smallest of the numbers; 0 where there are none."""
    return _extreme(Entries(arguments), np.minimum, math.inf)


@native("MAX", arguments="r*r", units="same")
def largest(*arguments: Any) -> Any:
    """Largest of the numbers; 0 where there are none."""
    return _extreme(Entries(arguments), np.maximum, -math.inf)


def _extreme(entries: Entries, ufunc: np.ufunc, start: float) -> Any:
    if not entries.errors and entries.values and all(v is None and shape_of(n) != () for n, v in entries.values):
        found, *rest = (numbers if numbers.ndim == 2 else ufunc.reduce(numbers) for numbers, _ in entries.values)
        for numbers in rest:
            found = ufunc(found, numbers)
        return found if shape_of(found) else float(found)
    with lenient():
        found = entries.fold(ufunc, start)
        if entries.values and all(valid is None for _, valid in entries.values):
            return with_errors(found, entries.errors) if entries.errors else found
        return finished(np.where(np.isinf(found), 0.0, found), entries.errors)


@native("AVERAGE", arguments="r*r", units="same")
def mean(*arguments: Any) -> Any:
    """Arithmetic mean of the numbers."""
    entries = Entries(arguments)
    with lenient():
        count = entries.count()
        none = np.equal(count, 0.0)
        result = np.divide(entries.fold(np.add, 0.0), np.where(none, 1.0, count))
        return finished(result, [*entries.errors, *where_true(none, ErrorValue.DIV0)])


@native("COUNT", arguments="r*r", units="count")
def count_numbers(*arguments: Any) -> Any:
    """How many of the cells and arguments are numbers; errors and text are passed over."""
    number: Any = 0.0
    for argument in arguments:
        if isinstance(argument, Grid | tuple):
            number = number + Entries((argument,)).count()
        else:
            _, slot, _ = numbers_of(argument)
            number = number + (1.0 if slot is None else np.asarray(slot == NUMBER, F8))
    return tidy(number) if shape_of(number) else float(number)


def count_where(arguments: Sequence[Any], holds: Any) -> Any:
    """Count the cells and arguments for which `holds` is true of what is no number; numbers count by `holds(0.0)`."""
    number: Any = 0.0
    numbers_count = float(holds(0.0))
    for argument in arguments:
        if isinstance(argument, tuple):
            number = number + count_where(argument, holds)
            continue
        if isinstance(argument, Grid) and not argument.lane_constant:
            number = number + count_where(argument.cells, holds)
            continue
        value = argument.data if isinstance(argument, Grid) else argument
        if isinstance(value, Mixed):
            weights = np.array([*(float(holds(item)) for item in value.items), numbers_count])
            amounts = weights[value.slot]
        elif isinstance(value, np.ndarray):
            amounts = np.full(value.shape, numbers_count if value.dtype == F8 else float(holds(True)))
        else:
            number = number + float(holds(value))
            continue
        number = number + (amounts.sum() if isinstance(argument, Grid) else amounts)
    return tidy(number) if shape_of(number) else float(number)


@native("COUNTA", arguments="r*r", units="count")
def count_filled(*arguments: Any) -> Any:
    """How many of the cells and arguments are not empty."""
    literal_gaps = sum(1.0 for argument in arguments if argument is None)
    return count_where(arguments, lambda item: item is not None) + literal_gaps


@native("COUNTBLANK", arguments="r", units="count")
def count_blank(area: Any) -> Any:
    """How many cells are empty or hold empty text."""
    found = count_where((area,), lambda item: item is None or item == "")
    if isinstance(area, Grid):
        found = found + float(area.whole[0] * area.whole[1] - area.rows * area.columns)
    return found


@native("SUMPRODUCT", arguments="a*a", units="sumproduct")
def sum_of_products(*arguments: Any) -> Any:
    """Sum of the products of like-placed entries; what is no number counts as 0."""
    grids = [argument if isinstance(argument, Grid) else Grid(1, 1, cells=[argument]) for argument in arguments]
    if len({grid.whole for grid in grids}) > 1:
        return ErrorValue.VALUE
    rows, columns = max(grid.rows for grid in grids), max(grid.columns for grid in grids)
    errors: list[tuple[Any, list[Any]]] = []
    product: Any = 1.0
    with lenient():
        for grid in grids:
            data = fitted(grid, rows, columns)
            if isinstance(data, Mixed):
                errors += _grid_errors(data)
                numbers = data.numbers
            else:
                numbers = data if data.dtype == F8 else np.zeros(data.shape)
            product = product * numbers
        flat = product.reshape(rows * columns, *product.shape[2:])
        result: Any = 0.0
        if flat.shape[1:] == (1, 1):
            result = float(np.add.accumulate(np.concatenate(([0.0], flat.ravel())))[-1])
        else:
            for line in flat:
                result = result + line
        return finished(result, errors)


def _grid_errors(data: Mixed) -> list[tuple[Any, list[Any]]]:
    """Return the first error, row by row, in each lane of a grid's array."""
    faults = np.array([isinstance(item, ErrorValue) for item in data.items])
    if not faults.any():
        return []
    slot = data.slot.reshape(-1, *data.slot.shape[2:])
    wrong = faults[slot] & (slot >= 0)
    first = wrong.argmax(axis=0)
    found = np.take_along_axis(slot, first[None], axis=0)[0]
    found = np.where(wrong.any(axis=0), found, NUMBER).astype(np.int32)
    kept = compact(np.zeros(found.shape), found, data.items)
    return [(found, data.items)] if isinstance(kept, Mixed) else []
