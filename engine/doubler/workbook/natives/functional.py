"""Functions that call a function value: MAP, REDUCE, SCAN, BYROW, BYCOL, MAKEARRAY."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from doubler.errors import ErrorValue
from doubler.workbook.coerce import CannotEvaluateError, to_number
from doubler.workbook.lanes import Grid
from doubler.workbook.natives.registry import OMITTED, native


def _grid(value: Any) -> Grid:
    return value if isinstance(value, Grid) else Grid(1, 1, cells=[value])


def _one(value: Any) -> Any:
    """Return a function's result as one cell."""
    if isinstance(value, Grid):
        return value.cell(0, 0) if value.rows * value.columns == 1 else ErrorValue.CALC
    return value


def _callable(value: Any) -> bool:
    return callable(value) and hasattr(value, "body")


@native("MAP", arguments="aa*a", units="none", with_frame=True)
def map_cells(frame: Any, *arguments: Any) -> Any:
    """Call a function for each cell of one array or, place by place, of several."""
    function, arrays = arguments[-1], [_grid(argument) for argument in arguments[:-1]]
    if not _callable(function):
        return ErrorValue.VALUE
    rows, columns = max(g.rows for g in arrays), max(g.columns for g in arrays)
    cells = []
    for row in range(rows):
        for column in range(columns):
            inside = all(row < g.rows and column < g.columns for g in arrays)
            cells.append(_one(function(frame, *[g.cell(row, column) for g in arrays])) if inside else ErrorValue.NA)
    return Grid(rows, columns, cells=cells)


def _folded(frame: Any, start: Any, array: Any, function: Any) -> list[Any] | ErrorValue:
    if not _callable(function):
        return ErrorValue.VALUE
    cells = _grid(array).cells
    value, rest = (cells[0], cells[1:]) if start is OMITTED else (start, cells)
    steps = [value] if start is OMITTED else []
    for cell in rest:
        value = function(frame, value, cell)
        steps.append(value)
    return steps


@native("REDUCE", arguments="oaa", units="none", with_frame=True)
def reduce_cells(frame: Any, start: Any, array: Any, function: Any) -> Any:
    """Carry a value through all cells of an array."""
    steps = _folded(frame, start, array, function)
    return steps if isinstance(steps, ErrorValue) else steps[-1]


@native("SCAN", arguments="oaa", units="none", with_frame=True)
def scan_cells(frame: Any, start: Any, array: Any, function: Any) -> Any:
    """Carry a value through all cells of an array and show each step."""
    steps = _folded(frame, start, array, function)
    if isinstance(steps, ErrorValue):
        return steps
    grid = _grid(array)
    return Grid(grid.rows, grid.columns, cells=[_one(step) for step in steps])


def _by_lines(by_row: bool) -> Callable[..., Any]:
    def rule(frame: Any, array: Any, function: Any) -> Any:
        if not _callable(function):
            return ErrorValue.VALUE
        grid = _grid(array)
        count = grid.rows if by_row else grid.columns
        cells = []
        for at in range(count):
            line = grid.part(at, 0, 1, grid.columns) if by_row else grid.part(0, at, grid.rows, 1)
            cells.append(_one(function(frame, line)))
        return Grid(count, 1, cells=cells) if by_row else Grid(1, count, cells=cells)

    return rule


native("BYROW", arguments="aa", units="none", with_frame=True)(_by_lines(True))
native("BYCOL", arguments="aa", units="none", with_frame=True)(_by_lines(False))


@native("MAKEARRAY", arguments="vva", units="none", with_frame=True)
def make_array(frame: Any, rows: Any, columns: Any, function: Any) -> Any:
    """Call a function for each row and column number."""
    if hasattr(rows, "shape") or hasattr(columns, "shape"):
        raise CannotEvaluateError("the size of an array differs by case")
    high, wide = to_number(rows), to_number(columns)
    for number in (high, wide):
        if isinstance(number, ErrorValue):
            return number
    if not _callable(function) or high < 1 or wide < 1 or high * wide > 100_000:  # type: ignore[operator]
        return ErrorValue.VALUE
    h, w = int(high), int(wide)  # type: ignore[arg-type]
    cells = [_one(function(frame, float(r + 1), float(c + 1))) for r in range(h) for c in range(w)]
    return Grid(h, w, cells=cells)
