"""Unit rules of the functions that look up and pick: the unit of the cell that they return, keys against keys.

A table of mixed quantities, one a row with its unit beside it, is no fault: where the key is a constant, the row that
it picks is found; where it is not, and the cells that it may pick have unlike units, the result is not traced.
"""

from __future__ import annotations

from doubler.workbook.alike import NotTraced
from doubler.workbook.carried import BLANK, RATIO, Carried, State
from doubler.workbook.syntax import Call, Node, Omitted
from doubler.workbook.unit_walk import Block, Walk

Line = tuple[Carried, ...]


def _units(nodes: list[Carried] | Line) -> set[object]:
    return {(n.dimension, n.readings[0].scale) for n in nodes if n.state is State.KNOWN and not n.opens}


def _key(walk: Walk, key: Node, among: list[Carried]) -> None:
    """Compare a key with the keys among which it is looked up, where these are of one unit."""
    wanted = walk.one(key)
    numbers = [node for node in among if node.state in (State.KNOWN, State.UNKNOWN, State.CONTRADICTORY)]
    if wanted.state in (State.KNOWN, State.UNKNOWN) and numbers and len(_units(numbers)) <= 1:
        walk.alike([wanted, *numbers], "compared")


def _number(walk: Walk, node: Node) -> int | None:
    """Return a position given as a constant, in the formula or in a cell, or by MATCH of a constant."""
    if isinstance(node, Call) and node.name in ("MATCH", "XMATCH") and len(node.arguments) >= 2:
        walk.node(node)
        return _position(walk, node.arguments[0], node.arguments[1])
    found = walk.one(node)
    if found.value is not None and found.state is State.LITERAL:
        return int(found.value)
    held = walk.around.constant(node, walk.host)
    return int(held) if isinstance(held, float) else None


def _position(walk: Walk, key: Node, keys: Node) -> int | None:
    """Return the place at which a constant key stands among the keys, from 1; None where that is not fixed."""
    held = walk.around.constant(key, walk.host)
    if not isinstance(held, str | float):
        return None
    grid = walk.around.key_grid(keys, walk.host)
    line = [row[0] for row in grid] if len(grid) > 1 else list(grid[0]) if grid else []
    for at, entry in enumerate(line, start=1):
        same = (
            entry.casefold() == held.casefold() if isinstance(entry, str) and isinstance(held, str) else entry == held
        )
        if same:
            return at
    return None


def _one_of(walk: Walk, nodes: list[Carried] | Line) -> Carried:
    """Return the unit of whichever of some cells is taken."""
    if len(_units(nodes)) > 1:
        raise NotTraced("which cell it takes is not fixed, and the cells have unlike units")
    return walk.alike(list(nodes), "put into one range") if nodes else BLANK


def down_first_column(walk: Walk, call: Call) -> Carried:
    """VLOOKUP: the key is of the first column's unit, the result of the chosen column's."""
    table = walk.block(call.arguments[1])
    _key(walk, call.arguments[0], list(table.by_column[0]))
    return _chosen(walk, call, table.by_column, table.by_row)


def along_first_row(walk: Walk, call: Call) -> Carried:
    """HLOOKUP: the key is of the first row's unit, the result of the chosen row's."""
    table = walk.block(call.arguments[1])
    if not table.by_row:
        raise NotTraced("HLOOKUP reads a table too large to follow")
    _key(walk, call.arguments[0], list(table.by_row[0]))
    across = tuple(zip(*table.by_row, strict=True))
    return _chosen(walk, call, table.by_row, across)


def _chosen(walk: Walk, call: Call, lines: tuple[Line, ...], crossing: tuple[Line, ...]) -> Carried:
    """Return the unit of the chosen line; where it holds unlike ones, that of the entry which a constant key picks."""
    number = _number(walk, call.arguments[2])
    if number is None or not 1 <= number <= len(lines):
        return _any_line(walk, [line for line in lines[1:] if line])
    line = lines[number - 1]
    if len(_units(line)) > 1 and crossing:
        grid = walk.around.key_grid(call.arguments[1], walk.host)
        keys = [row[0] for row in grid] if call.name == "VLOOKUP" else grid[0]
        held = walk.around.constant(call.arguments[0], walk.host)
        for at, entry in enumerate(keys):
            if isinstance(entry, str) and isinstance(held, str) and entry.casefold() == held.casefold():
                return crossing[at][number - 1]
    return _one_of(walk, line)


def _any_line(walk: Walk, lines: list[Line]) -> Carried:
    """Return the one unit that all lines share, whichever is taken."""
    return _one_of(walk, list({id(node): node for line in lines for node in line}.values()))


def indexed(walk: Walk, call: Call) -> Carried:
    """INDEX: the unit of the column, or the row, that is taken."""
    block = walk.block(call.arguments[0])
    given = list(call.arguments[1:])
    numbers = [None if isinstance(argument, Omitted) else _number(walk, argument) for argument in given]
    if block.columns == 1 or block.rows == 1:
        entries = [node for row in block.by_row for node in row]
        number = numbers[-1] if numbers and block.rows == 1 else numbers[0] if numbers else None
        if number is not None and 1 <= number <= len(entries):
            return entries[number - 1]
        return _one_of(walk, block.items)
    row, column = ((number or None) for number in [*numbers, None, None][:2])
    if row is not None and column is not None and row <= len(block.by_row) and column <= block.columns:
        return block.by_row[row - 1][column - 1]
    if column is not None and column <= block.columns:
        return _one_of(walk, block.by_column[column - 1])
    if row is not None and row <= len(block.by_row):
        return _one_of(walk, block.by_row[row - 1])
    return _any_line(walk, list(block.by_column))


def matched(walk: Walk, call: Call) -> Carried:
    """MATCH: the key is of the unit of what it is looked up among; the result is a position."""
    _key(walk, call.arguments[0], walk.items(call.arguments[1]))
    return RATIO


def across_to(walk: Walk, call: Call) -> Carried:
    """XLOOKUP: key against the lookup column; the result of the returned column's unit."""
    _key(walk, call.arguments[0], walk.items(call.arguments[1]))
    found = _entry(walk, call, call.arguments[2])
    return walk.alike([found, *walk.items(call.arguments[3])], "alternatives") if len(call.arguments) > 3 else found


def _entry(walk: Walk, call: Call, values: Node) -> Carried:
    """Return the unit of the entry that a constant key picks from a vector of values, or the one of all."""
    items = walk.items(values)
    if len(_units(items)) > 1:
        block = walk.block(values)
        at = _position(walk, call.arguments[0], call.arguments[1])
        entries = [node for row in block.by_row for node in row]
        if at is not None and min(block.rows, block.columns) == 1 and at <= len(entries):
            return entries[at - 1]
    return _one_of(walk, items)


def looked_up(walk: Walk, call: Call) -> Carried:
    """LOOKUP: key against the first vector; the result of the last one's unit."""
    table = walk.block(call.arguments[1])
    if len(call.arguments) > 2:
        _key(walk, call.arguments[0], table.items)
        return _entry(walk, call, call.arguments[2])
    lines = table.by_row if table.columns > table.rows else table.by_column
    if not lines:
        raise NotTraced("LOOKUP reads a table too large to follow")
    _key(walk, call.arguments[0], list(lines[0]))
    return _one_of(walk, lines[-1])


def stacked(walk: Walk, call: Call) -> Block:
    """HSTACK, VSTACK: the arguments' entries beside or below each other."""
    blocks = [walk.block(argument) for argument in call.arguments]
    if call.name == "HSTACK":
        columns = tuple(column for block in blocks for column in block.by_column)
        return Block(max(b.rows for b in blocks), len(columns), columns, ())
    wide = max(block.columns for block in blocks)
    by_column = tuple(
        tuple(node for block in blocks if at < block.columns for node in block.by_column[at]) for at in range(wide)
    )
    return Block(sum(b.rows for b in blocks), wide, by_column, ())


def by_criteria(walk: Walk, call: Call) -> Carried:
    """SUMIF, AVERAGEIF: the unit of the range that is summed."""
    _criterion(walk, call.arguments[0], call.arguments[1])
    summed = call.arguments[2] if len(call.arguments) > 2 else call.arguments[0]
    return walk.alike(walk.items(summed), "added")


def by_many_criteria(walk: Walk, call: Call) -> Carried:
    """SUMIFS, MAXIFS and their kin: the unit of the first range."""
    for at in range(1, len(call.arguments) - 1, 2):
        _criterion(walk, call.arguments[at], call.arguments[at + 1])
    return walk.alike(walk.items(call.arguments[0]), "added" if call.name in ("SUMIFS", "AVERAGEIFS") else "enveloped")


def counted_by_criteria(walk: Walk, call: Call) -> Carried:
    """COUNTIF, COUNTIFS: a count."""
    for at in range(0, len(call.arguments) - 1, 2):
        _criterion(walk, call.arguments[at], call.arguments[at + 1])
    return RATIO


def _criterion(walk: Walk, over: Node, criterion: Node) -> None:
    _key(walk, criterion, walk.items(over))


def ranked(walk: Walk, call: Call) -> Carried:
    """RANK: the value is of the range's unit; the result is a count."""
    _key(walk, call.arguments[0], walk.items(call.arguments[1]))
    return RATIO
