"""Unit rules of the functions that look up, pick and fit: the unit of the column they return, keys against keys."""

from __future__ import annotations

from dataclasses import replace

from doubler.workbook.alike import NotTraced, UnitFault, describe, require_ratio
from doubler.workbook.carried import BLANK, RATIO, Carried, Reading, State, divide, multiply
from doubler.workbook.syntax import Call, Node, Omitted
from doubler.workbook.unit_walk import Block, Walk


def _key(walk: Walk, key: Node, among: list[Carried]) -> None:
    """Compare a key with the keys among which it is looked up."""
    wanted = walk.one(key)
    numbers = [node for node in among if node.state in (State.KNOWN, State.UNKNOWN, State.CONTRADICTORY)]
    if wanted.state in (State.KNOWN, State.UNKNOWN) and numbers:
        walk.alike([wanted, *numbers], "compared")


def _number(walk: Walk, node: Node) -> int | None:
    """Return a position given as a constant, in the formula or in a cell."""
    found = walk.one(node)
    if found.value is not None and found.state is State.LITERAL:
        return int(found.value)
    held = walk.around.constant(node, walk.host)
    return int(held) if isinstance(held, float) else None


def down_first_column(walk: Walk, call: Call) -> Carried:
    """VLOOKUP: the key is of the first column's unit, the result of the chosen column's."""
    table = walk.block(call.arguments[1])
    _key(walk, call.arguments[0], list(table.by_column[0]))
    return _chosen(walk, call.arguments[2], table.by_column)


def along_first_row(walk: Walk, call: Call) -> Carried:
    """HLOOKUP: the key is of the first row's unit, the result of the chosen row's."""
    table = walk.block(call.arguments[1])
    if not table.by_row:
        raise NotTraced("HLOOKUP reads a table too large to follow")
    _key(walk, call.arguments[0], list(table.by_row[0]))
    return _chosen(walk, call.arguments[2], table.by_row)


def _chosen(walk: Walk, index: Node, lines: tuple[tuple[Carried, ...], ...]) -> Carried:
    number = _number(walk, index)
    if number is not None and 1 <= number <= len(lines):
        return walk.alike(list(lines[number - 1]), "put into one column")
    return _any_line(walk, [line for line in lines[1:] if line])


def _any_line(walk: Walk, lines: list[tuple[Carried, ...]]) -> Carried:
    """Return the one unit that all lines share, whichever is taken."""
    items = {id(node): node for line in lines for node in line}
    firm = [node for node in items.values() if node.state is State.KNOWN]
    units = {(node.dimension, node.readings[0].scale) for node in firm}
    if len(units) > 1:
        raise NotTraced("the column that it takes is not fixed, and the columns have unlike units")
    return walk.alike(list(items.values()), "put into one range") if items else BLANK


def indexed(walk: Walk, call: Call) -> Carried:
    """INDEX: the unit of the column, or the row, that is taken."""
    block = walk.block(call.arguments[0])
    given = list(call.arguments[1:])
    for argument in given:
        walk.node(argument)
    if block.columns == 1 or not block.columns:
        return walk.single(block)
    rows_alike = _lines_alike(block.by_row)
    if block.rows == 1:
        number = _number(walk, given[-1]) if given else None
        return _pick(walk, block.by_column, number)
    column = given[1] if len(given) > 1 and not isinstance(given[1], Omitted) else None
    number = _number(walk, column) if column is not None else None
    if number == 0:
        number = None
    if number is not None and 1 <= number <= block.columns:
        return _pick(walk, block.by_column, number)
    if not _lines_alike(block.by_column) and rows_alike and given:
        # Units stand by the row: every row has one unit.
        return _pick(walk, block.by_row, _number(walk, given[0]))
    return _any_line(walk, list(block.by_column))


def _lines_alike(lines: tuple[tuple[Carried, ...], ...]) -> bool:
    """Return whether each line is of one unit."""
    return bool(lines) and all(
        len({(n.dimension, n.readings[0].scale) for n in line if n.state is State.KNOWN}) <= 1 for line in lines
    )


def _pick(walk: Walk, lines: tuple[tuple[Carried, ...], ...], number: int | None) -> Carried:
    if number is not None and 1 <= number <= len(lines):
        items = list(lines[number - 1])
        return walk.alike(items, "put into one column") if items else BLANK
    return _any_line(walk, list(lines))


def matched(walk: Walk, call: Call) -> Carried:
    """MATCH: the key is of the unit of what it is looked up among; the result is a position."""
    _key(walk, call.arguments[0], walk.items(call.arguments[1]))
    return RATIO


def across_to(walk: Walk, call: Call) -> Carried:
    """XLOOKUP: key against the lookup column; the result of the returned column's unit."""
    _key(walk, call.arguments[0], walk.items(call.arguments[1]))
    found = walk.items(call.arguments[2])
    if len(call.arguments) > 3:
        found += walk.items(call.arguments[3])
    return walk.alike(found, "put into one column")


def looked_up(walk: Walk, call: Call) -> Carried:
    """LOOKUP: key against the first vector; the result of the last one's unit."""
    table = walk.block(call.arguments[1])
    if len(call.arguments) > 2:
        _key(walk, call.arguments[0], table.items)
        return walk.alike(walk.items(call.arguments[2]), "put into one column")
    lines = table.by_row if table.columns > table.rows else table.by_column
    if not lines:
        raise NotTraced("LOOKUP reads a table too large to follow")
    _key(walk, call.arguments[0], list(lines[0]))
    return walk.alike(list(lines[-1]), "put into one column")


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


def _fit(walk: Walk, ys: Node, xs: Node | None) -> tuple[Carried, Carried]:
    y = walk.single(walk.node(ys), "put into one column")
    x = RATIO if xs is None or isinstance(xs, Omitted) else walk.single(walk.node(xs), "put into one column")
    return y, x


def _flat(node: Carried) -> Carried:
    return replace(node, readings=tuple(replace(r, weight=0.0, zero=0.0) for r in node.readings))


def slope(walk: Walk, call: Call) -> Carried:
    """SLOPE, and the first entry of LINEST: y per x."""
    xs = call.arguments[1] if len(call.arguments) > 1 else None
    y, x = _fit(walk, call.arguments[0], xs)
    return divide(_flat(y), _flat(x))


def intercept(walk: Walk, call: Call) -> Carried:
    """INTERCEPT, STEYX: the unit of y."""
    return _fit(walk, call.arguments[0], call.arguments[1])[0]


def line_fit(walk: Walk, call: Call) -> Block:
    """LINEST: slope, then intercept; of more than one x the slopes are of unlike units and are not followed."""
    xs = call.arguments[1] if len(call.arguments) > 1 else None
    if xs is not None and not isinstance(xs, Omitted):
        block = walk.block(xs)
        if block.columns > 1 and block.rows > 1:
            raise NotTraced("LINEST over several columns gives coefficients of unlike units")
    y, x = _fit(walk, call.arguments[0], xs)
    steep = divide(_flat(y), _flat(x))
    return Block(1, 2, ((steep,), (y,)), ((steep, y),))


def forecast(walk: Walk, call: Call) -> Carried:
    """FORECAST: x against the xs; the result of y's unit."""
    y, x = _fit(walk, call.arguments[1], call.arguments[2])
    walk.alike([walk.one(call.arguments[0]), x], "compared")
    return y


def trend(walk: Walk, call: Call) -> Carried:
    """TREND, GROWTH: new x against the xs; the result of y's unit."""
    xs = call.arguments[1] if len(call.arguments) > 1 else None
    y, x = _fit(walk, call.arguments[0], xs)
    if len(call.arguments) > 2 and not isinstance(call.arguments[2], Omitted):
        walk.alike([walk.one(call.arguments[2]), x], "compared")
    return y


def correlation(walk: Walk, call: Call) -> Carried:
    """CORREL, RSQ: a pure number."""
    for argument in call.arguments:
        walk.one(argument)
    return RATIO


def covariance(walk: Walk, call: Call) -> Carried:
    """COVAR: the product of both units."""
    return multiply(_flat(walk.one(call.arguments[0])), _flat(walk.one(call.arguments[1])))


def matrix_product(walk: Walk, call: Call) -> Carried:
    """MMULT: the product of the units, where each matrix has one; a matrix with unlike entries is not followed."""
    blocks = [walk.block(argument) for argument in call.arguments]
    units: list[Carried] = []
    for block in blocks:
        firm = {(n.dimension, n.readings[0].scale) for n in block.items if n.state is State.KNOWN}
        if len(firm) > 1:
            raise NotTraced("it multiplies a matrix whose entries have unlike units")
        units.append(walk.single(block))
    return multiply(units[0], units[1])


def standardised(walk: Walk, call: Call) -> Carried:
    """STANDARDIZE: value, mean and deviation have one unit; the result is a pure number."""
    walk.alike([_flat(walk.one(argument)) for argument in call.arguments], "compared")
    return RATIO


def ranked(walk: Walk, call: Call) -> Carried:
    """RANK: the value is of the range's unit; the result is a count."""
    _key(walk, call.arguments[0], walk.items(call.arguments[1]))
    return RATIO


def converted(walk: Walk, call: Call) -> Carried:
    """CONVERT: the number is in the first unit named, the result in the second."""
    from doubler.workbook.convert_codes import convert_code

    node = walk.one(call.arguments[0])
    codes = [walk.around.constant(argument, walk.host) for argument in call.arguments[1:3]]
    units = [convert_code(code) if isinstance(code, str) else None for code in codes]
    if units[0] is None or units[1] is None:
        raise NotTraced("CONVERT names a unit whose dimension is not known here")
    old, new = units[0], units[1]
    if node.state is State.KNOWN and not node.opens:
        own = old.dimension.without_angle()
        if node.dimension != own:
            raise UnitFault("unit-clash", f"CONVERT takes {codes[0]} and gets {describe(node)}", node)
        if not any(abs(r.scale / old.scale - 1) < 1e-9 for r in node.readings):
            factor = node.readings[0].scale / old.scale
            raise UnitFault("unit-scale", f"CONVERT takes {codes[0]} and gets {describe(node)}", node, None, factor)
        hot = any(r.weight for r in node.readings)
        reading = Reading(new.scale, (), 1.0 if hot else 0.0, new.offset if hot else 0.0)
        return replace(node, dimension=new.dimension.without_angle(), readings=(reading,), factors=())
    return Carried(State.KNOWN, new.dimension.without_angle(), (Reading(new.scale),))


def normal_probability(walk: Walk, call: Call) -> Carried:
    """NORMDIST: value, mean and deviation have one unit; the result is a pure number."""
    walk.alike([_flat(walk.one(argument)) for argument in call.arguments[:3]], "compared")
    return RATIO


def normal_quantile(walk: Walk, call: Call) -> Carried:
    """NORMINV: mean and deviation have one unit, and so has the result."""
    require_ratio(walk.one(call.arguments[0]), call.name)
    return walk.alike([walk.one(call.arguments[1]), _flat(walk.one(call.arguments[2]))], "compared")
