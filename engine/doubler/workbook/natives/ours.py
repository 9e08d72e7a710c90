"""Our own worksheet functions, called over lanes: the one seam between the evaluation and the catalogue.

A call over lanes is one call of the kernel: the lanes of each argument are handed on as one array. Where some
lanes hold text, logicals or nothing, the lanes are sorted by what they hold, and there is one call for each sort.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from doubler.catalogue.cells import CellResult, bind_all, call_cells
from doubler.catalogue.evaluation import Outcome, evaluate
from doubler.catalogue.forms import Bound
from doubler.catalogue.plan import CallError, plan_for
from doubler.catalogue.record import WorksheetFunction, lookup
from doubler.errors import ErrorValue
from doubler.workbook.lanes import (
    NUMBER,
    Grid,
    Mixed,
    as_mixed,
    broadcast,
    from_scalars,
    lanes_shape,
    scalars,
    tidy,
)
from doubler.workbook.natives.registry import OMITTED

Refusals: TypeAlias = list[tuple[Any, str]]
"""Lanes that got an error value (True for all of them), and why."""

Rule: TypeAlias = Callable[[Refusals, Sequence[Any]], Any]


def find(name: str) -> Rule | None:
    """Return the rule of one of our worksheet functions; None where there is none of that name.

    The rule is called with the list to which it adds the reasons of its refusals, and with its arguments.
    """
    from doubler import mechanics

    mechanics.load()
    function = lookup(name)
    if function is None:
        return None
    known = function
    return lambda refusals, arguments: call(known, refusals, arguments)


def call(function: WorksheetFunction, refusals: Refusals, arguments: Sequence[Any]) -> Any:
    """Call one of our functions with arguments over lanes.

    Parameters
    ----------
    function : WorksheetFunction
    refusals : list
        Gets the lanes without a result, and why.
    arguments : sequence
        Values over lanes, grids, or `OMITTED`.

    Returns
    -------
    scalar, array over lanes, or Grid
    """
    given = [None if a is OMITTED else a[0] if isinstance(a, tuple) else a for a in arguments]
    shape = lanes_shape(given)
    if shape == (1, 1):
        result = call_cells(function, [_constant(a) for a in given])
        refusals += [(True, _named(function, reason)) for reason in result.reasons]
        return _grid(result.grid, ())
    flat = [_flattened(a, shape) for a in given]
    parts = _sorts(flat, shape[0] * shape[1])
    results: list[tuple[Any, list[list[Any]]]] = []
    for where, part in parts:
        count = shape[0] * shape[1] if where is None else int(where.size)
        grid, why = _one_sort(function, part, count)
        for lanes, reason in why:
            mask = np.zeros(shape[0] * shape[1], np.bool_)
            mask[_within(where, lanes)] = True
            refusals.append((mask.reshape(shape), reason))
        results.append((where, grid))
    if len(results) == 1 and results[0][0] is None:
        return _grid(results[0][1], shape)
    return _grid(_merged(results, shape[0] * shape[1]), shape)


def _named(function: WorksheetFunction, reason: str) -> str:
    return reason if reason.startswith(f"{function.name}:") else f"{function.name}: {reason}"


def _constant(argument: Any) -> Any:
    """Return an argument that is the same in all lanes as the catalogue takes it."""
    if isinstance(argument, Grid):
        cells = [tidy(cell) for cell in argument.cells]
        width = argument.columns
        return [cells[row * width : (row + 1) * width] for row in range(argument.rows)]
    return tidy(argument)


def _flattened(argument: Any, shape: tuple[int, int]) -> Any:
    """Return an argument with its lanes along one axis: (rows of) scalars, float64 arrays and `Mixed`."""
    if isinstance(argument, Grid):
        cells = [_flat(cell, shape) for cell in argument.cells]
        width = argument.columns
        return [cells[row * width : (row + 1) * width] for row in range(argument.rows)]
    return _flat(argument, shape)


def _flat(value: Any, shape: tuple[int, int]) -> Any:
    value = tidy(value)
    if not isinstance(value, np.ndarray | Mixed):
        return value
    if isinstance(value, np.ndarray) and value.dtype == np.bool_:
        value = as_mixed(value)
    full = broadcast(value, shape)
    if isinstance(full, Mixed):
        return Mixed(full.numbers.ravel(), full.slot.ravel(), full.items)
    return np.ascontiguousarray(full).ravel()


def _sorts(flat: list[Any], count: int) -> list[tuple[NDArray[np.int64] | None, list[Any]]]:
    """Sort the lanes by what they hold that is no number; (None, arguments) where all lanes are of one sort."""
    mixed = [cell for cell in _cells(flat) if isinstance(cell, Mixed)]
    if not mixed:
        return [(None, flat)]
    key = np.zeros(count, np.int64)
    for value in mixed:
        _, key = np.unique(key * (len(value.items) + 1) + value.slot + 1, return_inverse=True)
    parts: list[tuple[NDArray[np.int64] | None, list[Any]]] = []
    order = np.argsort(key, kind="stable")
    bounds = np.searchsorted(key[order], np.arange(int(key.max()) + 2))
    for first, last in zip(bounds[:-1].tolist(), bounds[1:].tolist(), strict=True):
        where = order[first:last]
        parts.append((where, [_part(argument, where) for argument in flat]))
    return parts


def _cells(flat: list[Any]) -> list[Any]:
    return [cell for a in flat for cell in ([c for row in a for c in row] if isinstance(a, list) else [a])]


def _part(argument: Any, where: NDArray[np.int64]) -> Any:
    """Return some lanes of an argument; what is no number there is the same in all of them."""
    if isinstance(argument, list):
        return [[_part(cell, where) for cell in row] for row in argument]
    if isinstance(argument, Mixed):
        slot = int(argument.slot[where[0]])
        return argument.numbers[where] if slot == NUMBER else argument.items[slot]
    return argument[where] if isinstance(argument, np.ndarray) else argument


def _within(where: NDArray[np.int64] | None, lanes: Any) -> Any:
    if where is None:
        return slice(None) if lanes is True else lanes
    return where if lanes is True else where[lanes]


def _one_sort(
    function: WorksheetFunction, arguments: list[Any], count: int
) -> tuple[list[list[Any]], list[tuple[Any, str]]]:
    """Call over lanes that are all of one sort: a grid of arrays over the lanes, and the refusals."""
    try:
        bound, wanted = bind_all(function, arguments, lanes=True)
        plan = plan_for(function, tuple(b.unit for b in bound), wanted)
    except CallError as error:
        return [[error.value]], [(True, f"{function.name}: {reason}") for reason in error.reasons]
    vectors = [b.shape for b, a in zip(bound, function.arguments, strict=True) if b.shape != (1, 1) and not a.entries]
    sheet = vectors[0] if vectors else (1, 1)
    if any(s != sheet for s in vectors) or (function.result.extra_axes and vectors):
        return _each(function, arguments, count)
    values = [_with_lane_axis(b, bool(vectors), a.entries) for b, a in zip(bound, function.arguments, strict=True)]
    try:
        outcome = evaluate(function, plan, values)
    except (CallError, ValueError, FloatingPointError):
        # A kernel that refuses one lane refuses them all; each alone then shows which.
        return _each(function, arguments, count)
    show_unit = wanted is None and plan.result_unit is not None
    unit = plan.result_unit.text if show_unit and plan.result_unit is not None else None
    return _laid_out(function, bound, outcome, sheet, unit, count)


def _with_lane_axis(bound: Bound, vectors: bool, entries: bool) -> Any:
    """Give a one-column argument beside vectors an axis for the vectors' entries."""
    if vectors and entries and isinstance(bound.values, np.ndarray):
        return bound.values[None]
    return bound.values


def _laid_out(
    function: WorksheetFunction,
    bound: Sequence[Bound],
    outcome: Outcome,
    sheet: tuple[int, int],
    unit: str | None,
    count: int,
) -> tuple[list[list[Any]], list[tuple[Any, str]]]:
    """Arrange an outcome as the sheet shows it, each cell an array over the lanes."""
    extra, length = function.result.extra_axes, sheet[0] * sheet[1]
    values = np.asarray(outcome.values)
    tail = values.shape[values.ndim - extra :]
    head = (length, count) if sheet != (1, 1) else (count,)
    values = np.broadcast_to(values, (*head, *tail)).reshape(length, count, *tail)
    lost: list[tuple[NDArray[np.bool_], ErrorValue]] = []
    why: list[tuple[Any, str]] = []
    for failure in outcome.failures:
        mask = np.broadcast_to(failure.lanes, head).reshape(length, count)
        lost.append((mask, failure.value))
        lanes = mask.any(axis=0)
        # The reason names the first offending value, which is another lane's for all but one.
        told = failure.rule if failure.rule and lanes.sum() > 1 else failure.reason
        why.append((lanes, f"{function.name}: {told}"))
    blanks = {}
    for item in bound:
        for index, value, reason in item.blanks:
            blanks[index] = value
            why.insert(0, (True, f"{function.name}: {reason}"))
    width = tail[1] if extra == 2 else tail[0] if extra else 1
    cells: list[Any] = []
    for index in range(length):
        faults = [(mask[index], value) for mask, value in lost]
        block = values[index].reshape(count, -1)
        for k in range(block.shape[1]):
            cells.append(blanks.get(index) or _cell(block[:, k], faults))
    if extra or sheet == (1, 1):
        grid = [cells[at : at + width] for at in range(0, len(cells), width)]
    else:
        grid = [cells[at : at + sheet[1]] for at in range(0, len(cells), sheet[1])]
    if unit is not None:
        grid = [*grid, [unit] * sheet[1]] if sheet[0] == 1 and sheet[1] > 1 else [[*row, unit] for row in grid]
    return grid, why


def _cell(values: Any, faults: list[tuple[NDArray[np.bool_], ErrorValue]]) -> Any:
    """Return one cell over lanes, with the error values of the lanes that failed."""
    if values.dtype == object:
        found = as_mixed(from_scalars(values.tolist(), values.shape))
    elif faults and any(mask.any() for mask, _ in faults):
        found = as_mixed(values)
    else:
        return values
    numbers, slot, items = found.numbers.copy(), found.slot.copy(), list(found.items)
    for mask, value in faults:
        if mask.any():
            slot[mask] = len(items)
            numbers[mask] = 0.0
            items.append(value)
    return Mixed(numbers, slot, items)


def _each(function: WorksheetFunction, arguments: list[Any], count: int) -> tuple[list[list[Any]], Refusals]:
    """Call lane by lane: for the shapes and refusals that concern single lanes."""
    results: list[CellResult] = []
    why: Refusals = []
    for lane in range(count):
        result = call_cells(function, [_lane(argument, lane) for argument in arguments])
        results.append(result)
        why += [(np.array([lane]), _named(function, reason)) for reason in result.reasons]
    rows = max(len(r.grid) for r in results)
    columns = max(len(r.grid[0]) for r in results)
    grid: list[list[Any]] = []
    for row in range(rows):
        line = []
        for column in range(columns):
            lanes = [
                r.grid[row][column]
                if row < len(r.grid) and column < len(r.grid[row])
                else r.grid[0][0]
                if isinstance(r.grid[0][0], ErrorValue)
                else ErrorValue.NA
                for r in results
            ]
            line.append(from_scalars(lanes, (count,)))
        grid.append(line)
    return grid, why


def _lane(argument: Any, lane: int) -> Any:
    if isinstance(argument, list):
        return [[_lane(cell, lane) for cell in row] for row in argument]
    return float(argument[lane]) if isinstance(argument, np.ndarray) else argument


def _merged(results: list[tuple[Any, list[list[Any]]]], count: int) -> list[list[Any]]:
    """Put the sorts of lanes together again; a sort that failed as a whole shows its error in every cell."""
    rows = max(len(grid) for _, grid in results)
    columns = max(len(grid[0]) for _, grid in results)
    merged: list[list[Any]] = []
    for row in range(rows):
        line: list[Any] = []
        for column in range(columns):
            lanes: list[Any] = [None] * count
            for where, grid in results:
                inside = row < len(grid) and column < len(grid[row])
                first = grid[0][0]
                cell = grid[row][column] if inside else first if isinstance(first, ErrorValue) else ErrorValue.NA
                size = len(where)
                values = scalars(cell) if isinstance(cell, np.ndarray | Mixed) else [cell] * size
                for at, value in zip(where.tolist(), values, strict=True):
                    lanes[at] = value
            line.append(from_scalars(lanes, (count,)))
        merged.append(line)
    return merged


def _grid(rows: list[list[Any]], shape: tuple[int, ...]) -> Any:
    """Return the rows of a result as a value over lanes."""
    cells = [_shaped(cell, shape) for row in rows for cell in row]
    if len(cells) == 1:
        return cells[0]
    return Grid(len(rows), len(rows[0]), cells=cells)


def _shaped(cell: Any, shape: tuple[int, ...]) -> Any:
    if isinstance(cell, Mixed):
        return Mixed(cell.numbers.reshape(shape), cell.slot.reshape(shape), cell.items)
    if isinstance(cell, np.ndarray):
        return cell.reshape(shape)
    return float(cell) if isinstance(cell, int) and not isinstance(cell, bool) else cell
