"""Finding a value in a row or column, as the lookup functions and criteria do: exact, approximate, by wildcards."""

from __future__ import annotations

import re
from collections.abc import Sequence
from functools import lru_cache
from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.coerce import compare, fold
from doubler.workbook.lanes import Grid, Mixed, lane_by_lane, scalars
from doubler.workbook.lift import F8

ABSENT = -1


@lru_cache(maxsize=1024)
def wildcard(pattern: str) -> re.Pattern[str] | None:
    """Return the pattern of a text with ``*``, ``?`` and their escape ``~``; None where it has none of them."""
    if not any(mark in pattern for mark in "*?~"):
        return None
    parts = []
    at = 0
    while at < len(pattern):
        mark = pattern[at]
        if mark == "~" and pattern[at + 1 : at + 2] in {"*", "?", "~"}:
            at += 1
            parts.append(re.escape(pattern[at]))
        elif mark == "*":
            parts.append(".*")
        elif mark == "?":
            parts.append(".")
        else:
            parts.append(re.escape(mark))
        at += 1
    return re.compile("".join(parts), re.IGNORECASE | re.DOTALL)


def kind_of(value: Any) -> int:
    """Return 0 for a number, 1 for text, 2 for a logical, 3 for anything else."""
    if isinstance(value, bool):
        return 2
    if isinstance(value, float):
        return 0
    return 1 if isinstance(value, str) else 3


def find_exact(key: Any, values: Sequence[Any], wild: bool, backwards: bool = False) -> int:
    """Return the place of the first (or last) value that equals the key, from 0; `ABSENT` where there is none."""
    kind = kind_of(key)
    pattern = wildcard(key) if wild and isinstance(key, str) else None
    folded = fold(key) if isinstance(key, str) else None
    places = range(len(values) - 1, -1, -1) if backwards else range(len(values))
    for place in places:
        value = values[place]
        if kind_of(value) != kind:
            continue
        if folded is None:
            if value == key and kind != 3:
                return place
        elif pattern.fullmatch(value) if pattern is not None else fold(value) == folded:
            return place
    return ABSENT


def find_below(key: Any, values: Sequence[Any]) -> int:
    """Return the place of the last value not above the key, by bisection of values taken to ascend.

    Values of another kind than the key are passed over. For values that do not ascend the result is that of the
    bisection, as in the spreadsheet program.
    """
    kind = kind_of(key)
    places = [place for place, value in enumerate(values) if kind_of(value) == kind]
    low, high = 0, len(places) - 1
    while low <= high:
        middle = (low + high) // 2
        order = compare(values[places[middle]], key)
        if isinstance(order, int) and order <= 0:
            low = middle + 1
        else:
            high = middle - 1
    return places[high] if high >= 0 else ABSENT


def find_above(key: Any, values: Sequence[Any]) -> int:
    """Return the place of the last value not below the key among values that descend."""
    kind = kind_of(key)
    found = ABSENT
    for place, value in enumerate(values):
        if kind_of(value) != kind:
            continue
        order = compare(value, key)
        if not isinstance(order, int) or order < 0:
            break
        found = place
        if order == 0:
            break
    return found


def find_next(key: Any, values: Sequence[Any], larger: bool, backwards: bool) -> int:
    """Return the place of the key, or else of the next larger or smaller value, in values of any order."""
    exact = find_exact(key, values, False, backwards)
    if exact != ABSENT:
        return exact
    kind = kind_of(key)
    best = ABSENT
    for place, value in enumerate(values):
        if kind_of(value) != kind:
            continue
        order = compare(value, key)
        if not isinstance(order, int) or (order < 0) == larger:
            continue
        if best == ABSENT:
            best = place
            continue
        against = compare(value, values[best])
        if isinstance(against, int) and (against < 0 if larger else against > 0):
            best = place
    return best


def single_place(key: Any, values: Sequence[Any], mode: str) -> float | ErrorValue:
    """Return the place of one key: mode ``exact``, ``below`` or ``above``; #N/A where there is none."""
    if isinstance(key, ErrorValue):
        return key
    if key is None:
        key = 0.0
    if mode == "exact":
        place = find_exact(key, values, True)
    else:
        place = find_below(key, values) if mode == "below" else find_above(key, values)
    return float(place) if place >= 0 else ErrorValue.NA


def places(key: Any, vector: Grid, mode: str) -> Any:
    """Return the place of a key over lanes in a row or column, from 0; #N/A where there is none."""
    if vector.lanes_shape() == (1, 1):
        values = vector.memo.get("values")
        if values is None:
            values = vector.memo["values"] = scalars(vector.data)
        if isinstance(key, np.ndarray) and key.dtype == F8:
            found = _fast_places(key, vector, values, mode)
            if found is not None:
                return found
        return lane_by_lane(lambda one: single_place(one, values, mode), [key])
    cells = vector.cells
    return lane_by_lane(lambda one, *values: single_place(one, values, mode), [key, *cells])


def _fast_places(key: Any, vector: Grid, values: list[Any], mode: str) -> Any:
    """Search numbers in numbers for all lanes at once; None where the vector does not lend itself to it."""
    prepared = vector.memo.get(mode)
    if prepared is None:
        where = np.array([place for place, value in enumerate(values) if type(value) is float], np.int64)
        numbers = np.array([values[place] for place in where], F8)
        if mode == "exact":
            order = np.argsort(numbers, kind="stable")
            prepared = numbers[order], where[order]
        else:
            rising = mode == "below" and bool(np.all(numbers[1:] >= numbers[:-1]))
            prepared = (numbers, where) if rising else ()
        vector.memo[mode] = prepared
    if not prepared or not prepared[0].size:
        return None
    numbers, where = prepared
    if mode == "exact":
        at = np.minimum(np.searchsorted(numbers, key, "left"), numbers.size - 1)
        hit = numbers[at] == key
    else:
        at = np.searchsorted(numbers, key, "right") - 1
        hit = at >= 0
    place = where[np.maximum(at, 0)].astype(F8)
    if hit.all():
        return place
    slot = np.where(hit, -1, 0).astype(np.int32)
    return Mixed(np.where(hit, place, 0.0), slot, [ErrorValue.NA])


def pick(grid: Grid, row: Any, column: Any) -> Any:
    """Return the cell of a grid at a row and column that may differ by lane, from 0; #REF! outside of it.

    Row and column are numbers, arrays of numbers, or such with errors.
    """
    if type(row) is float and type(column) is float:
        inside = 0 <= row < grid.rows and 0 <= column < grid.columns
        return grid.cell(int(row), int(column)) if inside else ErrorValue.REF
    from doubler.workbook.lift import numbers_of, with_errors
    from doubler.workbook.natives.logical import with_errors_over

    r, row_slot, row_faults = numbers_of(row)
    c, column_slot, column_faults = numbers_of(column)
    outside = np.less(r, 0) | np.greater_equal(r, grid.rows) | np.less(c, 0) | np.greater_equal(c, grid.columns)
    shape = np.broadcast_shapes(np.shape(r), np.shape(c)) or (1, 1)
    r_at = np.broadcast_to(np.where(outside, 0, r), shape).astype(np.int64)
    c_at = np.broadcast_to(np.where(outside, 0, c), shape).astype(np.int64)
    data = grid.data
    copies = np.arange(data.shape[2]).reshape(-1, 1) if data.shape[2] > 1 else 0
    cases = np.arange(data.shape[3]).reshape(1, -1) if data.shape[3] > 1 else 0
    value: Any = data[r_at, c_at, copies, cases]
    if outside.any():
        wrong = np.broadcast_to(np.where(outside, 0, -1).astype(np.int32), shape)
        value = with_errors_over(value, wrong, [ErrorValue.REF], with_errors)
    for slot, faults in ((column_slot, column_faults), (row_slot, row_faults)):
        if slot is not None:
            value = with_errors_over(value, slot, faults, with_errors)
    return value


def as_column(value: Any) -> Grid:
    """Return a row, column or single value as a column."""
    if not isinstance(value, Grid):
        return Grid(1, 1, cells=[value])
    if value.columns == 1:
        return value
    kept = value.memo.get("column")
    if kept is None:
        from doubler.workbook.lanes import reshape

        data = value.data
        kept = Grid(value.rows * value.columns, 1, data=reshape(data, (value.rows * value.columns, 1, *data.shape[2:])))
        value.memo["column"] = kept
    result: Grid = kept
    return result
