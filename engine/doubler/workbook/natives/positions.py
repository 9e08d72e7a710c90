"""Where cells lie: ROW, COLUMN, ROWS, COLUMNS, ADDRESS, AREAS, SHEET."""

from __future__ import annotations

import re
from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.coerce import to_logical, to_number, to_text
from doubler.workbook.lanes import Grid
from doubler.workbook.lift import ScalarRule
from doubler.workbook.natives.registry import OMITTED, native
from doubler.workbook.references import LAST_COLUMN, LAST_ROW, column_letters


def _own(frame: Any, axis: int) -> Any:
    first = float(frame.cell[1 + axis])
    if frame.copies == 1:
        return first
    step = frame.steps[axis]
    return first + np.arange(frame.copies, dtype=np.float64).reshape(-1, 1) * step if step else first


@native("ROW", arguments=";p", units="number", with_frame=True)
def row(frame: Any, place: Any = None) -> Any:
    """Row number of a reference, or of the formula's own cell."""
    if place is None:
        return _own(frame, 0)
    if isinstance(place, ErrorValue):
        return place
    return _numbers(place.row, place.area.last_row - place.area.first_row + 1, True)


@native("COLUMN", arguments=";p", units="number", with_frame=True)
def column(frame: Any, place: Any = None) -> Any:
    """Column number of a reference, or of the formula's own cell."""
    if place is None:
        return _own(frame, 1)
    if isinstance(place, ErrorValue):
        return place
    return _numbers(place.column, place.area.last_column - place.area.first_column + 1, False)


def _numbers(first: Any, count: int, down: bool) -> Any:
    if count == 1:
        return first
    if type(first) is not float or count > 100_000:
        return first
    cells: list[Any] = [first + k for k in range(count)]
    return Grid(count, 1, cells=cells) if down else Grid(1, count, cells=cells)


@native("ROWS", arguments="r", units="number")
def rows(area: Any) -> Any:
    """How many rows a range or array has."""
    if isinstance(area, ErrorValue):
        return area
    return float(area.whole[0]) if isinstance(area, Grid) else 1.0


@native("COLUMNS", arguments="r", units="number")
def columns(area: Any) -> Any:
    """How many columns a range or array has."""
    if isinstance(area, ErrorValue):
        return area
    return float(area.whole[1]) if isinstance(area, Grid) else 1.0


@native("AREAS", arguments="r", units="number")
def areas(reference: Any) -> Any:
    """How many areas a reference has."""
    if isinstance(reference, ErrorValue):
        return reference
    return float(len(reference)) if isinstance(reference, tuple) else 1.0


@native("SHEET", arguments="p", units="number")
def sheet(place: Any) -> Any:
    """Number of a reference's sheet, from 1."""
    return place if isinstance(place, ErrorValue) else float(place.index + 1)


def _address(row_number: Any, column_number: Any, kind: Any, a1: Any, name: Any) -> Any:
    numbers: list[float] = []
    for item in (row_number, column_number, 1.0 if kind is OMITTED else kind):
        number = to_number(item)
        if isinstance(number, ErrorValue):
            return number
        numbers.append(number // 1.0)
    style = True if a1 is OMITTED else to_logical(a1)
    if isinstance(style, ErrorValue):
        return style
    r, c, way = int(numbers[0]), int(numbers[1]), int(numbers[2])
    if not (1 <= r <= LAST_ROW and 1 <= c <= LAST_COLUMN and 1 <= way <= 4):
        return ErrorValue.VALUE
    fixed_row, fixed_column = way in {1, 2}, way in {1, 3}
    if style:
        text = f"{'$' if fixed_column else ''}{column_letters(c)}{'$' if fixed_row else ''}{r}"
    else:
        text = f"R{r}" if fixed_row else f"R[{r}]"
        text += f"C{c}" if fixed_column else f"C[{c}]"
    if name is OMITTED:
        return text
    sheet_name = to_text(name)
    if isinstance(sheet_name, ErrorValue):
        return sheet_name
    quoted = sheet_name if re.fullmatch(r"[A-Za-z_][\w.]*", sheet_name) or not sheet_name else f"'{sheet_name}'"
    return f"{quoted}!{text}"


_address_rule = ScalarRule(_address)


@native("ADDRESS", arguments="vv;ooo", units="text")
def address(row_number: Any, column_number: Any, kind: Any = OMITTED, a1: Any = OMITTED, name: Any = OMITTED) -> Any:
    """Text of a reference."""
    return _address_rule(row_number, column_number, kind, a1, name)
