"""Matrices, and arrays put in another order."""

from __future__ import annotations

from collections.abc import Callable
from functools import cmp_to_key
from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.coerce import compare, to_logical, to_number
from doubler.workbook.lanes import Grid
from doubler.workbook.natives.by_lane import Rows, by_lane
from doubler.workbook.natives.registry import OMITTED, native

LARGEST_ARRAY = 1_048_576
"""An array with more entries is refused."""


@native("TRANSPOSE", arguments="a", units="transpose")
def transpose(area: Any) -> Any:
    """Rows as columns."""
    if not isinstance(area, Grid):
        return area
    cells = [area.cell(row, column) for column in range(area.columns) for row in range(area.rows)]
    return Grid(area.columns, area.rows, cells=[0.0 if cell is None else cell for cell in cells])


def rows_of(value: Any) -> Rows:
    """Return a lane's argument as rows."""
    return value if isinstance(value, list) else [[value]]


def _matrix(value: Any) -> Any:
    rows = rows_of(value)
    for row in rows:
        for cell in row:
            if isinstance(cell, ErrorValue):
                return cell
            if type(cell) is not float:
                return ErrorValue.VALUE
    return np.array(rows)


def _as_rows(result: Any) -> Any:
    if not np.isfinite(result).all():
        return ErrorValue.NUM
    return result.tolist()


def _product(first: Any, second: Any) -> Any:
    a, b = _matrix(first), _matrix(second)
    for item in (a, b):
        if isinstance(item, ErrorValue):
            return item
    if a.shape[1] != b.shape[0]:
        return ErrorValue.VALUE
    total = np.zeros((a.shape[0], b.shape[1]))
    for k in range(a.shape[1]):
        total = total + a[:, k : k + 1] * b[k : k + 1, :]
    return _as_rows(total)


def _inverse(value: Any) -> Any:
    a = _matrix(value)
    if isinstance(a, ErrorValue):
        return a
    if a.shape[0] != a.shape[1]:
        return ErrorValue.VALUE
    try:
        return _as_rows(np.linalg.inv(a))
    except np.linalg.LinAlgError:
        return ErrorValue.NUM


def _determinant(value: Any) -> Any:
    a = _matrix(value)
    if isinstance(a, ErrorValue):
        return a
    return float(np.linalg.det(a)) if a.shape[0] == a.shape[1] else ErrorValue.VALUE


native("MMULT", arguments="aa", units="matrix_product")(by_lane(_product))
native("MINVERSE", arguments="a", units="inverse")(by_lane(_inverse))
native("MDETERM", arguments="a", units="determinant")(by_lane(_determinant))


def whole_numbers(values: tuple[Any, ...], defaults: tuple[float, ...]) -> list[float] | ErrorValue:
    """Return arguments as numbers, the omitted ones by their defaults."""
    found: list[float] = []
    for at, default in enumerate(defaults):
        value: Any = values[at] if at < len(values) else OMITTED
        number = default if value is OMITTED or value is None else to_number(value)
        if isinstance(number, ErrorValue):
            return number
        found.append(number)
    return found


def _unit_matrix(size: Any) -> Any:
    number = to_number(size)
    if isinstance(number, ErrorValue):
        return number
    return np.eye(int(number)).tolist() if 1 <= number <= 1000 else ErrorValue.VALUE


native("MUNIT", arguments="v", units="number")(by_lane(_unit_matrix))


def _sequence(*values: Any) -> Any:
    numbers = whole_numbers(values, (1.0, 1.0, 1.0, 1.0))
    if isinstance(numbers, ErrorValue):
        return numbers
    rows, columns = int(numbers[0]), int(numbers[1])
    if rows < 1 or columns < 1:
        return ErrorValue.CALC if rows == 0 or columns == 0 else ErrorValue.VALUE
    if rows * columns > LARGEST_ARRAY:
        return ErrorValue.NUM
    return [[numbers[2] + numbers[3] * (r * columns + c) for c in range(columns)] for r in range(rows)]


native("SEQUENCE", arguments="v;ooo", units="number")(by_lane(_sequence))


def _filter(area: Any, keep: Any, empty: Any = OMITTED) -> Any:
    rows, mask = rows_of(area), rows_of(keep)
    flat = [cell for row in mask for cell in row]
    truth = [to_logical(cell) for cell in flat]
    for item in truth:
        if isinstance(item, ErrorValue):
            return item
    if len(mask[0]) == 1 and len(mask) == len(rows):
        found = [row for row, kept in zip(rows, truth, strict=True) if kept]
    elif len(mask) == 1 and len(flat) == len(rows[0]):
        found = [[cell for cell, kept in zip(row, truth, strict=True) if kept] for row in rows]
        found = found if any(truth) else []
    else:
        return ErrorValue.VALUE
    if not found:
        return ErrorValue.CALC if empty is OMITTED else empty
    return _filled(found)


def _filled(rows: Rows) -> Rows:
    """Return rows with empty cells as the 0 that they show in an array."""
    return [[0.0 if cell is None else cell for cell in row] for row in rows]


native("FILTER", arguments="aa;o", units="reshape")(by_lane(_filter))


def _rank_of(value: Any) -> int:
    return 3 if isinstance(value, ErrorValue) else 4 if value is None else 0


def ordering(descending: bool) -> Callable[[Any, Any], int]:
    """Return the order of sorting: numbers, text, logicals; errors and empty cells always at the end."""

    def order(left: Any, right: Any) -> int:
        a, b = _rank_of(left), _rank_of(right)
        if a or b:
            return a - b
        found = compare(left, right)
        assert isinstance(found, int)
        return -found if descending else found

    return order


def _turned(rows: Rows) -> Rows:
    return [list(column) for column in zip(*rows, strict=True)]


def _sort(area: Any, *options: Any) -> Any:
    numbers = whole_numbers(options[:2], (1.0, 1.0))
    across: Any = OMITTED if len(options) < 3 else options[2]
    by_column = False if across is OMITTED else to_logical(across)
    if isinstance(numbers, ErrorValue):
        return numbers
    if isinstance(by_column, ErrorValue):
        return by_column
    rows = _turned(rows_of(area)) if by_column else rows_of(area)
    index, way = int(numbers[0]), int(numbers[1])
    if not 1 <= index <= len(rows[0]) or way not in {1, -1}:
        return ErrorValue.VALUE
    compared = ordering(way == -1)

    def order(a: list[Any], b: list[Any]) -> int:
        return compared(a[index - 1], b[index - 1])

    found = sorted(rows, key=cmp_to_key(order))
    return _filled(_turned(found) if by_column else found)


native("SORT", arguments="a;ooo", units="reshape")(by_lane(_sort))


def _sort_by(area: Any, *keys: Any) -> Any:
    rows = rows_of(area)
    columns: list[tuple[list[Any], Callable[[Any, Any], int]]] = []
    for at in range(0, len(keys), 2):
        cells = [cell for row in rows_of(keys[at]) for cell in row]
        way = whole_numbers(keys[at + 1 : at + 2], (1.0,))
        if isinstance(way, ErrorValue):
            return way
        if len(cells) != len(rows) or way[0] not in {1.0, -1.0}:
            return ErrorValue.VALUE
        columns.append((cells, ordering(way[0] == -1.0)))

    def order(a: int, b: int) -> int:
        for cells, rule in columns:
            found = rule(cells[a], cells[b])
            if found:
                return found
        return 0

    return _filled([rows[at] for at in sorted(range(len(rows)), key=cmp_to_key(order))])


native("SORTBY", arguments="aa;o*ao", units="reshape")(by_lane(_sort_by))


def _unique(area: Any, across: Any = OMITTED, once: Any = OMITTED) -> Any:
    by_column = False if across is OMITTED else to_logical(across)
    exactly_once = False if once is OMITTED else to_logical(once)
    for item in (by_column, exactly_once):
        if isinstance(item, ErrorValue):
            return item
    rows = _turned(rows_of(area)) if by_column else rows_of(area)
    seen: dict[Any, list[Any]] = {}
    counts: dict[Any, int] = {}
    for row in rows:
        key = tuple((type(c), c.lower() if isinstance(c, str) else c) for c in row)
        seen.setdefault(key, row)
        counts[key] = counts.get(key, 0) + 1
    found = [row for key, row in seen.items() if not exactly_once or counts[key] == 1]
    if not found:
        return ErrorValue.CALC
    return _filled(_turned(found) if by_column else found)


native("UNIQUE", arguments="a;oo", units="reshape")(by_lane(_unique))


def _cut(keep: bool) -> Callable[..., Any]:
    def part(items: list[Any], number: float | None) -> list[Any]:
        if number is None:
            return items
        n = int(number)
        if keep:
            return items[:n] if n >= 0 else items[n:]
        return items[n:] if n >= 0 else items[:n]

    def single(area: Any, *counts: Any) -> Any:
        numbers: list[float | None] = []
        for value in counts:
            number = None if value is OMITTED or value is None else to_number(value)
            if isinstance(number, ErrorValue):
                return number
            numbers.append(number)
        numbers += [None] * (2 - len(numbers))
        rows = [part(row, numbers[1]) for row in part(rows_of(area), numbers[0])]
        return _filled(rows) if rows and rows[0] else ErrorValue.CALC

    return by_lane(single)


native("TAKE", arguments="ao;o", units="reshape")(_cut(True))
native("DROP", arguments="ao;o", units="reshape")(_cut(False))


def _chosen(columns: bool) -> Callable[..., Any]:
    def single(area: Any, *numbers: Any) -> Any:
        lines = _turned(rows_of(area)) if columns else rows_of(area)
        found = []
        for value in [cell for item in numbers for row in rows_of(item) for cell in row]:
            number = to_number(value)
            if isinstance(number, ErrorValue):
                return number
            at = int(number)
            if not 1 <= abs(at) <= len(lines):
                return ErrorValue.VALUE
            found.append(lines[at - 1] if at > 0 else lines[at])
        return _filled(_turned(found) if columns else found)

    return by_lane(single)


native("CHOOSECOLS", arguments="aa*a", units="reshape")(_chosen(True))
native("CHOOSEROWS", arguments="aa*a", units="reshape")(_chosen(False))


def _stacked(across: bool) -> Callable[..., Any]:
    def single(*areas: Any) -> Any:
        blocks = [_turned(rows_of(area)) if across else rows_of(area) for area in areas]
        width = max(len(block[0]) for block in blocks)
        rows = [[*row, *([ErrorValue.NA] * (width - len(row)))] for block in blocks for row in block]
        return _filled(_turned(rows) if across else rows)

    return by_lane(single)


native("HSTACK", arguments="a*a", units="reshape")(_stacked(True))
native("VSTACK", arguments="a*a", units="reshape")(_stacked(False))


def _line(column: bool) -> Callable[..., Any]:
    def single(area: Any, ignore: Any = OMITTED, by_column: Any = OMITTED) -> Any:
        numbers = whole_numbers((ignore, by_column), (0.0, 0.0))
        if isinstance(numbers, ErrorValue):
            return numbers
        rows = _turned(rows_of(area)) if numbers[1] else rows_of(area)
        skip_blank, skip_errors = int(numbers[0]) in {1, 3}, int(numbers[0]) in {2, 3}
        cells = [
            cell
            for row in rows
            for cell in row
            if not (skip_blank and cell is None) and not (skip_errors and isinstance(cell, ErrorValue))
        ]
        if not cells:
            return ErrorValue.CALC
        return _filled([[cell] for cell in cells] if column else [cells])

    return by_lane(single)


native("TOCOL", arguments="a;oo", units="reshape")(_line(True))
native("TOROW", arguments="a;oo", units="reshape")(_line(False))
