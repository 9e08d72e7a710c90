"""SUBTOTAL and AGGREGATE: one of several statistics, chosen by a number."""

from __future__ import annotations

from typing import Any

from doubler.errors import ErrorValue
from doubler.workbook.coerce import CannotEvaluateError, to_number
from doubler.workbook.lanes import Grid, Mixed
from doubler.workbook.natives.registry import NATIVES, native

_BY_NUMBER = (
    "AVERAGE", "COUNT", "COUNTA", "MAX", "MIN", "PRODUCT", "STDEV.S", "STDEV.P", "SUM", "VAR.S", "VAR.P",
    "MEDIAN", "MODE.SNGL", "LARGE", "SMALL", "PERCENTILE.INC", "QUARTILE.INC", "PERCENTILE.EXC", "QUARTILE.EXC",
)  # fmt: skip
IGNORE_ERRORS = {2.0, 3.0, 6.0, 7.0}
"""The options of AGGREGATE under which error values are passed over."""


def _fixed(value: Any, function: str) -> float | ErrorValue:
    if isinstance(value, Grid | Mixed) or hasattr(value, "shape"):
        raise CannotEvaluateError(f"the statistic that {function} gives differs by case")
    number = to_number(value)
    return number if isinstance(number, ErrorValue) else float(int(number))


@native("SUBTOTAL", arguments="vr*r", units="subtotal")
def subtotal(number: Any, *areas: Any) -> Any:
    """Statistic of a range. Other subtotals and hidden rows in it are refused before (`subtotals_within`)."""
    chosen = _fixed(number, "SUBTOTAL")
    if isinstance(chosen, ErrorValue):
        return chosen
    at = int(chosen) - 100 if chosen > 100 else int(chosen)
    if not 1 <= at <= 11:
        return ErrorValue.VALUE
    return NATIVES[_BY_NUMBER[at - 1]].rule(*areas)


def _without_errors(area: Any) -> Any:
    """Let error values in a range be empty cells."""
    if isinstance(area, tuple):
        return tuple(_without_errors(part) for part in area)
    if not isinstance(area, Grid):
        return area
    cells: list[Any] = []
    for cell in area.cells:
        if isinstance(cell, Mixed):
            items = [None if isinstance(item, ErrorValue) else item for item in cell.items]
            cells.append(Mixed(cell.numbers, cell.slot, items))
        else:
            cells.append(None if isinstance(cell, ErrorValue) else cell)
    return Grid(area.rows, area.columns, cells=cells, reference=True)


@native("AGGREGATE", arguments="vva*a", units="subtotal")
def aggregate(number: Any, option: Any, *areas: Any) -> Any:
    """Statistic of a range, error values passed over where the option says so."""
    chosen, how = _fixed(number, "AGGREGATE"), _fixed(option, "AGGREGATE")
    for item in (chosen, how):
        if isinstance(item, ErrorValue):
            return item
    if not 1.0 <= chosen <= 19.0 or not 0.0 <= how <= 7.0:  # type: ignore[operator]
        return ErrorValue.VALUE
    at = int(chosen)  # type: ignore[arg-type]
    given = [_without_errors(area) for area in areas] if how in IGNORE_ERRORS else list(areas)
    if at >= 14:
        if len(given) != 2:
            return ErrorValue.VALUE
        parameter = given[1].cell(0, 0) if isinstance(given[1], Grid) else given[1]
        return NATIVES[_BY_NUMBER[at - 1]].rule(given[0], parameter)
    return NATIVES[_BY_NUMBER[at - 1]].rule(*given)
