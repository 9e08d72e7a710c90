"""Unit rules of the functions that fit, correlate and convert."""

from __future__ import annotations

from dataclasses import replace

from doubler.workbook.alike import NotTraced, UnitFault, describe, require_ratio
from doubler.workbook.carried import RATIO, Carried, Reading, State, divide, multiply
from doubler.workbook.syntax import Call, Node, Omitted
from doubler.workbook.unit_walk import Block, Walk


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
