"""Lookups: by key in a table's first column or row, by position, in vectors."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.coerce import WholeLineError, to_logical, to_number
from doubler.workbook.lanes import Grid, Mixed, as_mixed, lane_by_lane
from doubler.workbook.lift import NumericRule
from doubler.workbook.matching import (
    ABSENT,
    as_column,
    find_above,
    find_below,
    find_exact,
    find_next,
    pick,
    places,
    wildcard,
)
from doubler.workbook.natives.by_lane import by_lane
from doubler.workbook.natives.registry import OMITTED, native

_before = NumericRule(lambda number: number // 1.0 - 1.0)


def _table(value: Any) -> Grid:
    return value if isinstance(value, Grid) else Grid(1, 1, cells=[value])


def _first_line(table: Grid, rows: bool) -> Grid:
    """Return a table's first column (or row), kept with the table so that what is learnt of it is kept too."""
    line = table.memo.get(("line", rows))
    if line is None:
        line = table.part(0, 0, 1, table.columns) if rows else table.part(0, 0, table.rows, 1)
        table.memo["line", rows] = line
    result: Grid = line
    return result


def _approximate(value: Any) -> Any:
    """Return whether a lookup is approximate: a logical, or one for each lane."""
    return lane_by_lane(to_logical, [value])


def _searched(key: Any, line: Grid, approximate: Any) -> Any:
    from doubler.workbook.natives.logical import branch

    return branch(approximate, lambda: places(key, line, "below"), lambda: places(key, line, "exact"))


def _position_error(number: Any) -> Any:
    """Return #VALUE! where a column or row number is below 1."""
    value = to_number(number)
    if isinstance(value, ErrorValue):
        return value
    return value // 1.0 if value >= 1.0 else ErrorValue.VALUE


def _checked(found: Any, key: Any, number: Any, size: int) -> Any:
    """Let a column or row number beyond the table be #REF! whether the key is found or not; an error key stands."""
    if type(number) is float and number <= size:
        return found

    def single(value: Any, one_key: Any, one_number: Any) -> Any:
        if isinstance(one_key, ErrorValue) or isinstance(one_number, ErrorValue) or one_number <= size:
            return value
        return ErrorValue.REF

    return lane_by_lane(single, [found, key, number])


@native("VLOOKUP", arguments="vrv;v", units="lookup:2")
def vertical(key: Any, table: Any, column: Any, approximate: Any = True) -> Any:
    """Find the key in the first column and return that row's entry of another column."""
    table = _table(table)
    number = lane_by_lane(_position_error, [column])
    if isinstance(number, ErrorValue):
        return number
    row = _searched(key, _first_line(table, False), _approximate(approximate))
    return _checked(pick(table, row, _before(number)), key, number, table.columns)


@native("HLOOKUP", arguments="vrv;v", units="lookup:2")
def horizontal(key: Any, table: Any, row: Any, approximate: Any = True) -> Any:
    """Find the key in the first row and return that column's entry of another row."""
    table = _table(table)
    number = lane_by_lane(_position_error, [row])
    if isinstance(number, ErrorValue):
        return number
    column = _searched(key, _first_line(table, True), _approximate(approximate))
    return _checked(pick(table, _before(number), column), key, number, table.rows)


_after = NumericRule(lambda place: place + 1.0)


@native("MATCH", arguments="va;v", units="match")
def position(key: Any, vector: Any, way: Any = 1.0) -> Any:
    """Position of a key in a row or column, from 1."""
    if isinstance(vector, Grid) and vector.rows > 1 and vector.columns > 1:
        return ErrorValue.NA
    way = lane_by_lane(to_number, [way])
    if isinstance(way, ErrorValue):
        return way
    if type(way) is not float:
        return by_lane(_match_one)(key, _table(vector), way)
    line = _table(vector)
    column = as_column(line)
    mode = "exact" if way == 0.0 else "below" if way > 0.0 else "above"
    return _after(places(key, column, mode))


def _match_one(key: Any, rows: Any, way: Any) -> Any:
    values = [cell for row in rows for cell in row]
    number = to_number(way)
    if isinstance(number, ErrorValue):
        return number
    place = (
        find_exact(key, values, True)
        if number == 0.0
        else find_below(key, values)
        if number > 0.0
        else find_above(key, values)
    )
    return float(place + 1) if place != ABSENT else ErrorValue.NA


@native("INDEX", arguments="a;vvv", units="index")
def entry(table: Any, row: Any = None, column: Any = None, area: Any = 1.0) -> Any:
    """Entry of a table at a row and column; 0 or left out for a whole row or column."""
    if isinstance(table, tuple):
        number = to_number(area) if not hasattr(area, "shape") else ErrorValue.VALUE
        if isinstance(number, ErrorValue):
            return number
        if not 1 <= number <= len(table):
            return ErrorValue.REF
        table = table[int(number) - 1]
    table = _table(table)
    if column is None and table.rows == 1 and table.columns > 1:
        row, column = 1.0, row
    whole_table = table
    try:
        row_at, column_at = _index_part(row, table.rows), _index_part(column, table.columns)
    except _WholeLineError:
        raise WholeLineError(lambda r, c: entry(whole_table, r, c), row, column) from None
    for part in (row_at, column_at):
        if isinstance(part, ErrorValue):
            return part
    if row_at is None and column_at is None:
        return table if table.rows * table.columns > 1 else table.cell(0, 0)
    if row_at is None or column_at is None:
        return _line(table, row_at, column_at)
    return pick(table, row_at, column_at)


class _WholeLineError(Exception):
    pass


def _index_part(value: Any, size: int) -> Any:
    """Return a position from 0; None for a whole line, unless there is only one entry."""
    if value is None:
        return 0.0 if size == 1 else None
    number = _before(value)
    if type(number) is float and number < 0.0:
        if number < -1.0:
            return ErrorValue.VALUE
        return 0.0 if size == 1 else None
    if isinstance(number, np.ndarray | Mixed) and (as_mixed(number).numbers < 0.0).any():

        def single(place: Any) -> Any:
            if isinstance(place, ErrorValue) or place >= 0.0:
                return place
            if place < -1.0:
                return ErrorValue.VALUE
            if size == 1:
                return 0.0
            raise _WholeLineError

        return lane_by_lane(single, [number])
    return number


def _line(table: Grid, row: Any, column: Any) -> Any:
    fixed = row if column is None else column
    size = table.rows if column is None else table.columns
    if type(fixed) is not float:
        if column is None:
            cells = [pick(table, fixed, float(c)) for c in range(table.columns)]
            return Grid(1, table.columns, cells=cells)
        return Grid(table.rows, 1, cells=[pick(table, float(r), fixed) for r in range(table.rows)])
    if fixed >= size:
        return ErrorValue.REF
    if column is None:
        return table.part(int(fixed), 0, 1, table.columns)
    return table.part(0, int(fixed), table.rows, 1)


@native("LOOKUP", arguments="va;a", units="lookup_vector")
def vector_lookup(key: Any, vector: Any, result: Any = None) -> Any:
    """Find the last entry not above the key and return the like-placed entry of the result vector."""
    table = _table(vector)
    if result is None and table.rows > 1 and table.columns > 1:
        wide = table.columns > table.rows
        line = _first_line(table, wide)
        last = (
            table.part(table.rows - 1, 0, 1, table.columns) if wide else table.part(0, table.columns - 1, table.rows, 1)
        )
        return pick(as_column(last), places(key, as_column(line), "below"), 0.0)
    target = as_column(_table(result)) if result is not None else as_column(table)
    return pick(target, places(key, as_column(table), "below"), 0.0)


def _xplace(key: Any, rows: Any, match: Any, search: Any) -> int | ErrorValue:
    values = [cell for row in rows for cell in row]
    numbers = [to_number(match), to_number(search)]
    for number in (key, *numbers):
        if isinstance(number, ErrorValue):
            return number
    backwards = numbers[1] in {-1.0, -2.0}
    if numbers[0] == 0.0:
        if key is None:
            return next((k for k, value in enumerate(values) if value is None), ABSENT)
        return find_exact(key, values, False, backwards)
    if numbers[0] == 2.0:
        return find_exact(key, values, wildcard(key) is not None if isinstance(key, str) else False, backwards)
    if numbers[0] in {1.0, -1.0}:
        return find_next(key, values, numbers[0] == 1.0, backwards)
    return ErrorValue.VALUE


@native("XMATCH", arguments="va;vv", units="match")
def extended_match(key: Any, vector: Any, match: Any = 0.0, search: Any = 1.0) -> Any:
    """Position of a key in a row or column: exact by default, or the next larger or smaller one, or by wildcards."""

    def one(k: Any, rows: Any, m: Any, s: Any) -> Any:
        place = _xplace(k, rows, m, s)
        if isinstance(place, ErrorValue):
            return place
        return float(place + 1) if place != ABSENT else ErrorValue.NA

    return by_lane(one)(key, _table(vector), match, search)


@native("XLOOKUP", arguments="vaa;ovv", units="xlookup")
def extended_lookup(
    key: Any, vector: Any, result: Any, absent: Any = OMITTED, match: Any = 0.0, search: Any = 1.0
) -> Any:
    """Find a key in a row or column and return the like-placed row or column of another range."""

    def one(k: Any, rows: Any, results: Any, none: Any, m: Any, s: Any) -> Any:
        place = _xplace(k, rows, m, s)
        if isinstance(place, ErrorValue):
            return place
        if place == ABSENT:
            return ErrorValue.NA if none is OMITTED else none
        if len(rows) == 1 and len(rows[0]) > 1:
            found = [[row[place]] for row in results if place < len(row)]
        else:
            found = [results[place]] if place < len(results) else []
        if not found:
            return ErrorValue.VALUE
        return found[0][0] if len(found) == 1 and len(found[0]) == 1 else found

    return by_lane(one)(key, _table(vector), _table(result), absent, match, search)
