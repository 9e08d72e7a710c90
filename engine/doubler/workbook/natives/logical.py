"""Conditions: the branches of IF and its kin, and the logical functions."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.coerce import compare, to_logical
from doubler.workbook.lanes import (
    Grid,
    Mixed,
    as_mixed,
    broadcast,
    compact,
    from_scalars,
    scalars,
    select,
    shape_of,
)
from doubler.workbook.lift import F8, ScalarRule, fitted
from doubler.workbook.natives.registry import native

Later = Callable[[], Any]

_as_condition = ScalarRule(to_logical)


def condition(value: Any) -> Any:
    """Return lanes as a condition reads them: logicals, and errors where there is none."""
    if isinstance(value, np.ndarray) and value.dtype == np.bool_:
        return value
    if isinstance(value, np.ndarray) and value.dtype == F8:
        return value != 0.0
    return _as_condition(value)


def unwrapped(value: Any, rows: int, columns: int) -> Any:
    """Return a grid's array fitted to a size; anything else as it is."""
    return fitted(value, rows, columns) if isinstance(value, Grid) else value


def branch(test: Any, yes: Later, no: Later) -> Any:
    """Choose between two branches, lane by lane; a branch that no lane takes is not evaluated."""
    if isinstance(test, Grid):
        first, second = yes(), no()
        grids = [item for item in (test, first, second) if isinstance(item, Grid)]
        rows, columns = max(g.rows for g in grids), max(g.columns for g in grids)
        value = branch(
            fitted(test, rows, columns),
            lambda: unwrapped(first, rows, columns),
            lambda: unwrapped(second, rows, columns),
        )
        return regrid(value, rows, columns)
    truth = condition(test)
    if isinstance(truth, bool):
        return yes() if truth else no()
    if isinstance(truth, ErrorValue):
        return truth
    errors = None
    if isinstance(truth, Mixed):
        truth, errors = split_condition(truth)
    if truth.all():
        value = yes()
    elif not truth.any():
        value = no()
    else:
        first, second = yes(), no()
        if isinstance(first, Grid) or isinstance(second, Grid):
            return _grid_branch(truth, first, second)
        value = select(truth, first, second)
    if errors is None:
        return value
    return select(errors.slot >= 0, errors, value)


def _grid_branch(truth: Any, first: Any, second: Any) -> Any:
    grids = [item for item in (first, second) if isinstance(item, Grid)]
    rows, columns = max(g.rows for g in grids), max(g.columns for g in grids)
    return regrid(select(truth, unwrapped(first, rows, columns), unwrapped(second, rows, columns)), rows, columns)


def regrid(value: Any, rows: int, columns: int) -> Grid:
    """Make a grid of an array whose leading axes are those of a grid."""
    shape = (rows, columns, *(shape_of(value)[-2:] or (1, 1)))
    return Grid(rows, columns, data=broadcast(value, shape))


def split_condition(truth: Mixed) -> tuple[Any, Mixed]:
    """Split a condition into its truth by lane, and its errors."""
    value = np.array([item is True for item in truth.items], np.bool_)[truth.slot]
    wrong = np.array([isinstance(item, ErrorValue) for item in truth.items])[truth.slot]
    return value, Mixed(truth.numbers, np.where(wrong, truth.slot, -1).astype(np.int32), truth.items)


@native("IF", arguments="vl;l", units="branches")
def if_else(test: Any, yes: Later, no: Later = lambda: False) -> Any:
    """Choose by a condition."""
    return branch(test, yes, no)


@native("IFS", arguments="ll*ll", units="ifs")
def first_true(*pairs: Later) -> Any:
    """Choose the value of the first condition that holds."""
    if not pairs:
        return ErrorValue.NA
    return branch(pairs[0](), pairs[1], lambda: first_true(*pairs[2:]))


def _replaced(value: Any, other: Later, caught: Callable[[Any], bool]) -> Any:
    if isinstance(value, Grid):
        second = other()
        rows, columns = value.rows, value.columns
        if isinstance(second, Grid):
            rows, columns = max(rows, second.rows), max(columns, second.columns)
        fitted_second = unwrapped(second, rows, columns)
        return regrid(_replaced(fitted(value, rows, columns), lambda: fitted_second, caught), rows, columns)
    if isinstance(value, Mixed):
        hits = np.array([caught(item) for item in value.items])[value.slot] & (value.slot >= 0)
        if not hits.any():
            return value
        replacement = other()
        if replacement is None:
            replacement = 0.0
        return select(hits, replacement, value)
    if isinstance(value, np.ndarray) or not caught(value):
        return value
    return other()


@native("IFERROR", arguments="vl", units="branches:0")
def if_error(value: Any, other: Later) -> Any:
    """Replace any error value."""
    return _replaced(value, other, lambda item: isinstance(item, ErrorValue))


@native("IFNA", arguments="vl", units="branches:0")
def if_not_available(value: Any, other: Later) -> Any:
    """Replace #N/A."""
    return _replaced(value, other, lambda item: item is ErrorValue.NA)


@native("CHOOSE", arguments="vl*l", units="branches:1")
def choose(index: Any, *values: Later) -> Any:
    """Choose the value of that number, from 1."""
    from doubler.workbook.lift import numbers_of, with_errors

    if isinstance(index, Grid):
        results = [choose(cell, *values) for cell in index.cells]
        if any(isinstance(result, Grid) for result in results):
            return _choose_columns(index, results)
        return Grid(index.rows, index.columns, cells=results)
    numbers, slot, faults = numbers_of(index)
    if type(numbers) is float:
        if slot is not None:
            return faults[0]
        place = int(numbers)
        return values[place - 1]() if 1 <= place <= len(values) else ErrorValue.VALUE
    whole = np.trunc(numbers)
    result: Any = ErrorValue.VALUE
    for place in np.unique(whole).tolist():
        if 1 <= place <= len(values):
            result = select(whole == place, values[int(place) - 1](), result)
    return result if slot is None else with_errors_over(result, slot, faults, with_errors)


def with_errors_over(value: Any, slot: Any, faults: list[Any], attach: Any) -> Any:
    """Put errors over lanes that need not hold numbers."""
    return select(slot >= 0, attach(np.zeros(slot.shape), [(slot, faults)]), value)


def _choose_columns(index: Grid, results: list[Any]) -> Any:
    """CHOOSE({1,2}, a, b): the columns side by side."""
    rows = max(item.rows for item in results if isinstance(item, Grid))
    if index.rows != 1:
        return ErrorValue.VALUE
    cells = []
    for row in range(rows):
        for item in results:
            cells.append(item.cell(min(row, item.rows - 1), 0) if isinstance(item, Grid) else item)
    return Grid(rows, len(results), cells=cells)


@native("SWITCH", arguments="lll*l", units="switch")
def switch(subject: Later, *rest: Later) -> Any:
    """Choose by equality with the first argument; a last unpaired argument is the default."""
    value = subject()
    equal = ScalarRule(_equal)

    def step(at: int) -> Any:
        if at + 1 >= len(rest):
            return rest[at]() if at < len(rest) else ErrorValue.NA
        return branch(equal(value, rest[at]()), rest[at + 1], lambda: step(at + 2))

    return step(0)


def _equal(left: Any, right: Any) -> Any:
    order = compare(left, right)
    return order if isinstance(order, ErrorValue) else order == 0


def _logicals(arguments: tuple[Any, ...]) -> Any:
    """Yield conditions over lanes; in ranges text and empty cells are passed over (None)."""
    for argument in arguments:
        if isinstance(argument, tuple):
            yield from _logicals(argument)
        elif isinstance(argument, Grid):
            for cell in argument.cells:
                if isinstance(cell, str) or cell is None:
                    continue
                yield _ranged(cell)
        elif argument is None:
            yield False
        else:
            yield condition(argument)


def _ranged(cell: Any) -> Any:
    if isinstance(cell, Mixed):
        return from_scalars(
            [None if isinstance(item, str) or item is None else to_logical(item) for item in scalars(cell)],
            cell.shape,
        )
    return condition(cell)


def _junction(arguments: tuple[Any, ...], combine: Callable[[Any, Any], Any], start: bool) -> Any:
    result: Any = start
    seen: Any = False
    errors: list[Mixed] = []
    for truth in _logicals(arguments):
        if isinstance(truth, ErrorValue):
            errors.append(as_mixed(broadcast(truth, (1, 1))))
            continue
        value: Any = truth
        known: Any = True
        if isinstance(truth, Mixed):
            value, wrong = split_condition(truth)
            empty = np.array([item is None for item in truth.items])[truth.slot]
            value = np.where(empty, start, value) if combine is not np.logical_xor else value & ~empty
            known = ~empty
            if (wrong.slot >= 0).any():
                errors.append(wrong)
        result = combine(result, value)
        seen = np.logical_or(seen, known)
    if not errors and not np.any(~np.asarray(seen)):
        return result if shape_of(result) else bool(result)
    final: Any = result if shape_of(result) else bool(result)
    if np.any(~np.asarray(seen)):
        final = select(np.asarray(seen).reshape(shape_of(seen) or (1, 1)), final, ErrorValue.VALUE)
    for wrong in reversed(errors):
        final = select(wrong.slot >= 0, compact(wrong.numbers, wrong.slot, wrong.items), final)
    from doubler.workbook.lanes import tidy

    return tidy(final)


@native("AND", arguments="r*r", units="logical")
def all_true(*arguments: Any) -> Any:
    """Whether all conditions hold."""
    return _junction(arguments, np.logical_and, True)


@native("OR", arguments="r*r", units="logical")
def any_true(*arguments: Any) -> Any:
    """Whether any condition holds."""
    return _junction(arguments, np.logical_or, False)


@native("XOR", arguments="r*r", units="logical")
def odd_true(*arguments: Any) -> Any:
    """Whether an odd number of the conditions holds."""
    return _junction(arguments, np.logical_xor, False)


def _not(value: Any) -> Any:
    truth = to_logical(value)
    return truth if isinstance(truth, ErrorValue) else not truth


native("NOT", arguments="v", units="logical")(ScalarRule(_not))


@native("TRUE", arguments="", units="logical")
def true() -> bool:
    """Return the logical TRUE."""
    return True


@native("FALSE", arguments="", units="logical")
def false() -> bool:
    """Return the logical FALSE."""
    return False
