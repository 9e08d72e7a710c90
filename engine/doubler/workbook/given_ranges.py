"""Ranges where single values are wanted, and the other way round: intersected, cut, or taken cell by cell."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING, Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.coerce import CannotEvaluateError, WholeLineError
from doubler.workbook.lanes import Grid, Mixed, lane_by_lane

if TYPE_CHECKING:
    from doubler.workbook.program import Frame, Step


def top_left(value: Any) -> Any:
    """Return a grid's first cell; anything else as it is."""
    if isinstance(value, tuple):
        value = value[0]
    return value.cell(0, 0) if isinstance(value, Grid) else value


def met_by_own_place(step: Step) -> Step:
    """Let a range that a function gives meet the formula's own row or column, as a written range does."""

    def meet(value: Any, frame: Frame) -> Any:
        if not isinstance(value, Grid) or value.rows * value.columns == 1:
            return top_left(value)
        if value.place is None:
            return value
        if frame.copies > 1:
            raise CannotEvaluateError("a range that INDEX gives meets the row or column of many copies")
        row, column = frame.cell[1] - value.place[0], frame.cell[2] - value.place[1]
        if value.columns == 1 and 0 <= row < value.rows:
            return value.cell(row, 0)
        if value.rows == 1 and 0 <= column < value.columns:
            return value.cell(0, column)
        return ErrorValue.VALUE

    def run(frame: Frame) -> Any:
        try:
            return meet(step(frame), frame)
        except WholeLineError as error:
            return by_line(error, frame)

    def by_line(lines: WholeLineError, frame: Frame) -> Any:
        def single(row: Any, column: Any) -> Any:
            value = meet(lines.line(row, column), frame)
            if isinstance(value, Grid | np.ndarray | Mixed):
                raise lines
            return value

        return lane_by_lane(single, [lines.row, lines.column])

    return run


def cut_at_index(hull: Any, start: Any, table: Any, numbers: list[Any]) -> Any:
    """Return the rectangle from a cell to the cell of a table that row and column numbers name."""
    from doubler.workbook.coerce import to_number

    if any(isinstance(number, Grid) or hasattr(number, "shape") for number in numbers):
        raise CannotEvaluateError("the end of a range depends on values that differ by case")
    found: list[float] = []
    for value in numbers:
        number = to_number(value)
        if isinstance(number, ErrorValue):
            return number
        found.append(number)
    rows, columns = table.area.last_row - table.area.first_row + 1, table.area.last_column - table.area.first_column + 1
    if len(found) == 1:
        found = [1.0, found[0]] if rows == 1 else [found[0], 1.0]
    row, column = int(found[0]), int(found[1])
    if not (1 <= row <= rows and 1 <= column <= columns):
        return ErrorValue.REF if row >= 1 and column >= 1 else ErrorValue.VALUE
    end = table.area.first_row + row - 1, table.area.first_column + column - 1
    own = start.area.first_row, start.area.first_column
    top, left = min(own[0], end[0]), min(own[1], end[1])
    base_row, base_column = min(own[0], table.area.first_row), min(own[1], table.area.first_column)
    high = min(abs(own[0] - end[0]) + 1, hull.rows - (top - base_row))
    wide = min(abs(own[1] - end[1]) + 1, hull.columns - (left - base_column))
    return hull.part(top - base_row, left - base_column, high, wide)


def over_cells(rule: Callable[..., Any], kinds: str) -> Callable[..., Any]:
    """Apply a rule that wants single values to each cell of the grids that are given in their place."""

    def run(*arguments: Any) -> Any:
        shift = len(arguments) - len(kinds)
        given = arguments[shift:]
        grids = [a for a, kind in zip(given, kinds, strict=True) if kind in "vo" and isinstance(a, Grid)]
        if not grids:
            return rule(*arguments)
        rows, columns = max(g.rows for g in grids), max(g.columns for g in grids)
        cells = []
        for row in range(rows):
            for column in range(columns):
                here = [
                    _cell_of(a, row, column) if kind in "vo" and isinstance(a, Grid) else a
                    for a, kind in zip(given, kinds, strict=True)
                ]
                cells.append(top_left(rule(*arguments[:shift], *here)))
        return Grid(rows, columns, cells=cells)

    return run


def _cell_of(grid: Grid, row: int, column: int) -> Any:
    row = 0 if grid.rows == 1 else row
    column = 0 if grid.columns == 1 else column
    return grid.cell(row, column) if row < grid.rows and column < grid.columns else ErrorValue.NA
