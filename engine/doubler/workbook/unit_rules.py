"""The unit rule of each native worksheet function, by name.

A rule takes the walk and the call, and returns the unit of the result; it raises `UnitFault` where the arguments
contradict each other, and `NotTraced` where the unit of the result is not fixed by them.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import replace
from fractions import Fraction

from doubler.workbook.alike import NotTraced, UnitFault, describe, independent, note_constraint, require_ratio
from doubler.workbook.carried import (
    BLANK,
    LOGICAL,
    NONE,
    RATIO,
    TEXT,
    Carried,
    Hidden,
    Reading,
    State,
    divide,
    literal,
    multiply,
    power,
)
from doubler.workbook.syntax import Call, NameRef, Node, Omitted
from doubler.workbook.unit_walk import Block, Walk, spoilt

Rule = Callable[[Walk, Call], Carried | Block]
DEGREE = math.pi / 180

_ENVELOPES = frozenset(
    {"MIN", "MAX", "MINA", "MAXA", "LARGE", "SMALL", "MEDIAN", "AGGREGATE", "MODE", "QUARTILE", "PERCENTILE"}
)


def _what(name: str) -> str:
    return "enveloped" if name in _ENVELOPES else "added"


def _all(walk: Walk, arguments: tuple[Node, ...]) -> list[Carried]:
    return [item for argument in arguments for item in walk.items(argument)]


def same(walk: Walk, call: Call) -> Carried:
    """All arguments have one unit, and so has the result."""
    return walk.alike(_all(walk, call.arguments), _what(call.name))


def first(walk: Walk, call: Call) -> Carried:
    """The result has the unit of the first argument; the others are counts, ranks or digits."""
    found = walk.single(walk.node(call.arguments[0]), _what(call.name)) if call.arguments else BLANK
    for argument in call.arguments[1:]:
        walk.node(argument)
    return found


def second(walk: Walk, call: Call) -> Carried:
    """The result has the unit of what follows the function number (SUBTOTAL, AGGREGATE)."""
    skip = 2 if call.name == "AGGREGATE" else 1
    return walk.alike(_all(walk, call.arguments[skip:]), "added")


def rounded(walk: Walk, call: Call) -> Carried:
    """The result has the unit of the first argument; the number of digits is a pure number."""
    return first(walk, call)


def to_multiple(walk: Walk, call: Call) -> Carried:
    """Number and multiple have one unit, and so has the result."""
    return walk.alike([walk.one(argument) for argument in call.arguments[:2]], "compared")


def ratio(walk: Walk, call: Call) -> Carried:
    """The argument is a pure number of scale 1, and so is the result."""
    nodes = [walk.one(argument) for argument in call.arguments]
    bad = spoilt(nodes)
    if bad is not None:
        return bad
    for node in nodes:
        require_ratio(node, call.name)
        _settle_ratio(walk, node)
    return replace(RATIO, sources=independent(tuple(s for n in nodes for s in n.sources)))


def logarithm(walk: Walk, call: Call) -> Carried:
    """LN, LOG, LOG10: of a ratio; of a quantity the number in its own unit is meant, as in fits of test data."""
    node = walk.one(call.arguments[0])
    for argument in call.arguments[1:]:
        require_ratio(walk.one(argument), call.name)
    if node.state is State.KNOWN and not node.opens and node.dimension != NONE:
        meant = Hidden(f"{call.name} of a number", node.dimension, node.readings[0].scale)
        return replace(RATIO, sources=independent(node.sources), hidden=(*node.hidden, meant))
    return ratio(walk, Call(call.name, call.arguments[:1]))


def _settle_ratio(walk: Walk, node: Carried) -> None:
    note_constraint(node, NONE, (Reading(1.0),), walk.constraints, "")


def _plainly_degrees(number: float) -> bool:
    """Return whether a number typed as an angle is one of degrees: whole, and more than a turn in radians."""
    return abs(number) > 2 * math.pi and number % 7.5 in (0.0, 2.5, 5.0) and abs(number) <= 360


def angle_in(walk: Walk, call: Call) -> Carried:
    """The argument is an angle in radians, and the result a pure number."""
    node = walk.one(call.arguments[0])
    if node.state is State.CONTRADICTORY:
        return node
    if node.state is State.KNOWN and not node.opens:
        if node.dimension != NONE:
            raise UnitFault("unit-clash", f"{call.name} wants an angle and gets {describe(node)}", node)
        if not any(math.isclose(r.scale, 1.0, rel_tol=1e-9) for r in node.readings):
            scale = node.readings[0].scale
            given = "degrees" if math.isclose(scale, DEGREE, rel_tol=1e-6) else describe(node)
            raise UnitFault("angle-unit", f"{call.name} takes radians and gets {given}", node, None, 1 / scale)
    if node.state is State.LITERAL and node.value is not None and _plainly_degrees(node.value):
        given = f"the number {node.value:g}, which is an angle in degrees"
        raise UnitFault("angle-unit", f"{call.name} takes radians and gets {given}", node, None, 1 / DEGREE)
    _settle_ratio(walk, node)
    return replace(RATIO, sources=independent(node.sources), factors=())


def angle_out(walk: Walk, call: Call) -> Carried:
    """The argument is a pure number, and the result an angle in radians."""
    found = ratio(walk, call)
    return found if found.state is State.CONTRADICTORY else replace(found, angle_mark=True)


def angle_of_two(walk: Walk, call: Call) -> Carried:
    """Both arguments have one unit; the result is an angle in radians."""
    found = walk.alike([walk.one(argument) for argument in call.arguments], "compared")
    if found.state is State.CONTRADICTORY:
        return found
    return replace(RATIO, angle_mark=True, sources=independent(found.sources))


def to_radians(walk: Walk, call: Call) -> Carried:
    """Turn degrees into radians."""
    return _turned(walk, call, DEGREE, 1.0, "degrees")


def to_degrees(walk: Walk, call: Call) -> Carried:
    """Turn radians into degrees."""
    return _turned(walk, call, 1.0, DEGREE, "radians")


def _turned(walk: Walk, call: Call, old: float, new: float, wanted: str) -> Carried:
    node = walk.one(call.arguments[0])
    if node.state is State.CONTRADICTORY:
        return node
    result = Carried(State.KNOWN, readings=(Reading(new),), angle_mark=True)
    if node.state is State.KNOWN and not node.opens:
        if node.dimension != NONE:
            raise UnitFault("unit-clash", f"{call.name} wants an angle and gets {describe(node)}", node)
        fits = any(math.isclose(r.scale, old, rel_tol=1e-6) for r in node.readings)
        firm = node.angle_mark or not math.isclose(node.readings[0].scale, 1.0, rel_tol=1e-9)
        if not fits and (firm and not all(s.weak for s in node.sources)):
            raise UnitFault(
                "angle-unit",
                f"{call.name} takes {wanted} and gets {describe(node)}",
                node,
                None,
                old / node.readings[0].scale,
            )
    note_constraint(node, NONE, (Reading(old),), walk.constraints, "", True)
    return replace(result, sources=independent(node.sources))


def number(walk: Walk, call: Call) -> Carried:
    """The result is a pure number whatever the arguments are."""
    for argument in call.arguments:
        walk.items(argument)
    return RATIO


def pi(walk: Walk, call: Call) -> Carried:
    """The constant π, which is also half a conversion of angles."""
    del call
    return literal(math.pi, "3.14159265358979", walk.next_position())


def not_available(walk: Walk, call: Call) -> Carried:
    """NA: an error value has no unit and bends to those of the other branches, as an empty cell does."""
    del walk, call
    return BLANK


def times_pi(walk: Walk, call: Call) -> Carried:
    """SQRTPI: the root of the argument times a pure number."""
    return power(walk.one(call.arguments[0]), Fraction(1, 2))


def rooted(exponent: Fraction) -> Rule:
    """Return the rule of a root or another fixed power."""

    def rule(walk: Walk, call: Call) -> Carried:
        return power(walk.one(call.arguments[0]), exponent)

    return rule


def power_sum(exponent: int) -> Rule:
    """Return the rule of a sum of powers (SUMSQ, VAR)."""

    def rule(walk: Walk, call: Call) -> Carried:
        found = walk.alike(_all(walk, call.arguments), "added")
        flat = replace(found, readings=tuple(replace(r, weight=0.0, zero=0.0) for r in found.readings))
        return power(flat, Fraction(exponent))

    return rule


def spread(walk: Walk, call: Call) -> Carried:
    """The result has the arguments' unit; of temperatures it is a difference (STDEV, AVEDEV)."""
    found = walk.alike(_all(walk, call.arguments), "added")
    return replace(found, readings=tuple(replace(r, weight=0.0, zero=0.0) for r in found.readings))


def raised(walk: Walk, call: Call) -> Carried:
    """POWER, as the operator ``^``."""
    return walk.raised(call.arguments[0], call.arguments[1])


def product(walk: Walk, call: Call) -> Carried:
    """The product of all arguments; a range whose length is not fixed must be of pure numbers."""
    result: Carried | None = None
    for argument in call.arguments:
        found = walk.node(argument)
        if isinstance(found, Block):
            items = found.items
            if found.rows * found.columns <= 12 and all(len(row) == found.columns for row in found.by_row):
                nodes = [item for row in found.by_row for item in row]
            elif all(item.dimension == NONE for item in items):
                nodes = items
            else:
                raise NotTraced("it multiplies a long range of quantities with units")
        else:
            nodes = [found]
        for node in nodes:
            if node.state in (State.TEXT, State.BLANK):
                continue
            result = node if result is None else multiply(result, node)
    return result or BLANK


def sum_of_products(walk: Walk, call: Call) -> Carried:
    """The product of the ranges' units; each range has one unit."""
    result: Carried | None = None
    for argument in call.arguments:
        node = walk.one(argument)
        if node.state in (State.LOGICAL, State.BLANK, State.TEXT):
            continue
        result = node if result is None else multiply(result, node)
    return result or RATIO


def sum_of_squares_between(walk: Walk, call: Call) -> Carried:
    """SUMXMY2 and its kin: both ranges have one unit; the result has its square."""
    return power(walk.alike([walk.one(argument) for argument in call.arguments], "compared"), Fraction(2))


def quotient(walk: Walk, call: Call) -> Carried:
    """QUOTIENT: the unit of the first argument over that of the second."""
    return divide(walk.one(call.arguments[0]), walk.one(call.arguments[1]))


def inverse(walk: Walk, call: Call) -> Carried:
    """MINVERSE: the inverse of the one unit of its entries."""
    return power(walk.one(call.arguments[0]), Fraction(-1))


def determinant(walk: Walk, call: Call) -> Carried:
    """MDETERM: the unit of the entries to the power of the size."""
    block = walk.block(call.arguments[0])
    return power(walk.single(block), Fraction(block.rows))


def text(walk: Walk, call: Call) -> Carried:
    """The result is text."""
    for argument in call.arguments:
        walk.node(argument)
    return TEXT


def logical(walk: Walk, call: Call) -> Carried:
    """The result is a logical value."""
    nodes = [item for argument in call.arguments for item in walk.items(argument)]
    return spoilt(nodes) or LOGICAL


def branches(skip: int) -> Rule:
    """Return the rule of a function whose result is one of its arguments from the place `skip` on."""

    def rule(walk: Walk, call: Call) -> Carried:
        for argument in call.arguments[:skip]:
            walk.node(argument)
        return _branch(walk, list(call.arguments[skip:]))

    return rule


def _branch(walk: Walk, nodes: list[Node]) -> Carried:
    found = [walk.one(node) for node in nodes if not isinstance(node, Omitted)]
    return walk.alike(found, "alternatives of one result") if found else BLANK


def conditions(walk: Walk, call: Call) -> Carried:
    """IFS: conditions and results in turn."""
    for argument in call.arguments[::2]:
        walk.node(argument)
    return _branch(walk, list(call.arguments[1::2]))


def switched(walk: Walk, call: Call) -> Carried:
    """SWITCH: the expression is compared with each value; the results are alternatives."""
    rest = call.arguments[1:]
    key = walk.one(call.arguments[0])
    values = [walk.one(value) for value in rest[: len(rest) - len(rest) % 2 : 2]]
    walk.alike([key, *values], "compared")
    results = list(rest[1::2]) + ([rest[-1]] if len(rest) % 2 else [])
    return _branch(walk, results)


def let(walk: Walk, call: Call) -> Carried | Block:
    """LET: names with their values, then the result."""
    arguments = call.arguments
    for at in range(0, len(arguments) - 1, 2):
        name = arguments[at]
        if isinstance(name, NameRef):
            walk.bind(name.name, walk.node(arguments[at + 1]))
    return walk.node(arguments[-1])


def passed(walk: Walk, call: Call) -> Carried | Block:
    """The result is the first argument, arranged in another way."""
    for argument in call.arguments[1:]:
        walk.node(argument)
    return walk.node(call.arguments[0])


def turned_over(walk: Walk, call: Call) -> Carried | Block:
    """TRANSPOSE: rows and columns change places."""
    block = walk.node(call.arguments[0])
    return block if isinstance(block, Carried) else Block(block.columns, block.rows, block.by_row, block.by_column)


def untraceable(reason: str) -> Rule:
    """Return the rule of a function whose unit is not fixed by its arguments."""

    def rule(walk: Walk, call: Call) -> Carried:
        del walk
        raise NotTraced(f"{call.name} {reason}")

    return rule


def rule_for(name: str) -> Rule | None:
    """Return the unit rule of a worksheet function, native or ours, or None."""
    from doubler.workbook.unit_table import RULES

    found = RULES.get(name)
    if found is not None:
        return found
    from doubler.workbook.unit_ours import rule_of_ours

    return rule_of_ours(name)
