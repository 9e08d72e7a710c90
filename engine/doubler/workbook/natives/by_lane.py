"""Rules that see one lane at a time: every argument a Python scalar or a list of rows of them.

For functions whose work is not worth, or not capable of, one expression over all lanes. A rule is called once
where its arguments are the same in all lanes.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from typing import Any, TypeAlias

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.coerce import to_number
from doubler.workbook.lanes import Grid, Mixed, broadcast, from_scalars, lanes_shape, scalars

Rows: TypeAlias = list[list[Any]]
"""A grid of one lane: rows of Python scalars."""


def by_lane(rule: Callable[..., Any]) -> Callable[..., Any]:
    """Lift a rule on one lane's scalars and rows over all lanes.

    The rule gets for a `Grid` a list of rows, for several areas a tuple of them, and gives a scalar or a list
    of rows. Results that are grids must have one size in all lanes; where they have not, the shorter are
    filled up with #N/A.
    """

    def lifted(*arguments: Any) -> Any:
        shape = lanes_shape(_flat(arguments))
        count = shape[0] * shape[1]
        if count == 1:
            return _as_value(rule(*(next(_lanes(argument, shape)) for argument in arguments)))
        columns = [_lanes(argument, shape) for argument in arguments]
        results = [rule(*(next(column) for column in columns)) for _ in range(count)]
        return joined(results, shape)

    return lifted


def joined(results: list[Any], shape: tuple[int, int]) -> Any:
    """Put the results of all lanes together again."""
    if not any(isinstance(result, list) for result in results):
        return from_scalars(results, shape)
    grids = [result if isinstance(result, list) else [[result]] for result in results]
    rows, columns = max(len(g) for g in grids), max(len(g[0]) for g in grids)
    cells = []
    for row in range(rows):
        for column in range(columns):
            lane = [g[row][column] if row < len(g) and column < len(g[row]) else ErrorValue.NA for g in grids]
            cells.append(from_scalars(lane, shape))
    return Grid(rows, columns, cells=cells)


def _flat(arguments: tuple[Any, ...]) -> Iterator[Any]:
    for argument in arguments:
        if isinstance(argument, tuple):
            yield from argument
        else:
            yield argument


def _as_value(result: Any) -> Any:
    if isinstance(result, list):
        if not result or not result[0]:
            return ErrorValue.CALC
        return Grid(
            len(result),
            len(result[0]),
            data=from_scalars([c for r in result for c in r], _grid_shape(result)),
        )
    return result


def _grid_shape(rows: Rows) -> tuple[int, int, int, int]:
    return len(rows), len(rows[0]), 1, 1


def _lanes(argument: Any, shape: tuple[int, int]) -> Iterator[Any]:
    """Yield an argument lane by lane."""
    count = shape[0] * shape[1]
    if isinstance(argument, tuple):
        parts = [_lanes(area, shape) for area in argument]
        for _ in range(count):
            yield tuple(next(part) for part in parts)
    elif isinstance(argument, Grid):
        if argument.lanes_shape() == (1, 1):
            rows = _rows(argument, [_single(cell) for cell in argument.cells])
            for _ in range(count):
                yield rows
        else:
            cells = [scalars(broadcast(cell, shape)) for cell in argument.cells]
            for lane in zip(*cells, strict=True):
                yield _rows(argument, list(lane))
    elif isinstance(argument, np.ndarray | Mixed):
        yield from scalars(broadcast(argument, shape))
    else:
        for _ in range(count):
            yield argument


def _single(cell: Any) -> Any:
    return scalars(cell)[0] if isinstance(cell, np.ndarray | Mixed) else cell


def _rows(grid: Grid, cells: list[Any]) -> Rows:
    return [cells[row * grid.columns : (row + 1) * grid.columns] for row in range(grid.rows)]


def numbers_in(values: tuple[Any, ...]) -> list[float] | ErrorValue:
    """Return the numbers among a lane's arguments, as the statistical functions take them, or an error.

    In ranges text, logicals and empty cells are passed over; written as arguments they count as numbers.
    """
    found: list[float] = []
    for value in values:
        if isinstance(value, tuple):
            inner = numbers_in(value)
            if isinstance(inner, ErrorValue):
                return inner
            found += inner
        elif isinstance(value, list):
            for row in value:
                for cell in row:
                    if isinstance(cell, ErrorValue):
                        return cell
                    if type(cell) is float:
                        found.append(cell)
        else:
            number = to_number(value)
            if isinstance(number, ErrorValue):
                return number
            found.append(number)
    return found
