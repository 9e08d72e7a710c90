"""Unit rules of the project's own worksheet functions, taken from their declarations."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from doubler.workbook.alike import NotTraced, UnitFault, describe, independent
from doubler.workbook.carried import RATIO, TEXT, Carried, Reading, Source, State
from doubler.workbook.syntax import Binary, Call, Node, Omitted
from doubler.workbook.unit_rules import Rule
from doubler.workbook.unit_walk import Walk


def rule_of_ours(name: str) -> Rule | None:
    """Return the unit rule of one of the project's worksheet functions, or None where there is none of that name."""
    from doubler import catalogue

    function = catalogue.lookup(name)
    if function is None:
        return None

    def rule(walk: Walk, call: Call) -> Carried:
        return ours(walk, call, function)

    return rule


def ours(walk: Walk, call: Call, function: Any) -> Carried:
    """Return the unit of a call of one of the project's functions.

    The arguments are read as the function itself reads them, with a stand-in for each number, so that a form or a unit
    that the function refuses is a fault here too; a bare number is compared with the unit that its cell declares.
    """
    from doubler.catalogue.cells import bind_all
    from doubler.catalogue.plan import CallError, plan_for
    from doubler.errors import InputError

    attached = [_attached(walk, argument) for argument in call.arguments]
    grids = [
        None if isinstance(a, Omitted) else f"1 {put[1]}" if put else _given(walk, a)
        for a, put in zip(call.arguments, attached, strict=True)
    ]
    nodes = [RATIO if isinstance(a, Omitted) else None for a in call.arguments]
    sources: tuple[Source, ...] = ()
    for index, argument in enumerate(call.arguments):
        if nodes[index] is None:
            put = attached[index]
            found = _unit_of(walk, put[0] if put else argument)
            nodes[index] = found
            sources += found.sources
    for node in nodes:
        if node is not None and node.state is State.CONTRADICTORY:
            return node
    try:
        bound, wanted = bind_all(function, grids)
        plan = plan_for(function, tuple(b.unit for b in bound), wanted)
    except (CallError, InputError) as error:
        if any(
            node is not None and node.state is State.TEXT and _is_bare(g) for node, g in zip(nodes, grids, strict=True)
        ):
            raise NotTraced(f"{function.name} takes text that a formula puts together") from error
        raise UnitFault("unit-clash", str(error), nodes[0] or RATIO) from error
    for item, node, given, put, argument in zip(bound, nodes, grids, attached, function.arguments, strict=False):
        if item.unit is not None and node is not None and (put or _is_bare(given)):
            _bare_fits(function.name, argument.name, item.unit, node)
    if function.result.quantity is None:
        return TEXT
    if plan.result_unit is None:
        return replace(RATIO, sources=independent(sources))
    unit = plan.result_unit
    mark = unit.dimension != unit.dimension.without_angle()
    system = unit.system
    own = tuple(replace(s, system=system) for s in independent(sources))
    return Carried(State.KNOWN, unit.dimension.without_angle(), (Reading(unit.scale),), sources=own, angle_mark=mark)


def _unit_of(walk: Walk, argument: Node) -> Carried:
    """Return the unit that an argument's cells declare; unlike ones are the function's own business."""
    items = walk.items(argument)
    bad = [node for node in items if node.state is State.CONTRADICTORY]
    if bad:
        return bad[0]
    numbers = [node for node in items if node.state is State.KNOWN]
    return numbers[0] if numbers else (items[0] if items else RATIO)


def _attached(walk: Walk, argument: Node) -> tuple[Node, str] | None:
    """Return number and unit of an argument such as ``B3&" "&B$2`` or ``UNIT_ATTACH(B3,B$2)``, else None."""
    if isinstance(argument, Call) and argument.name == "UNIT_ATTACH" and len(argument.arguments) == 2:
        number, *pieces = argument.arguments
    elif isinstance(argument, Binary) and argument.operator == "&":
        number, *pieces = _joined(argument)
    else:
        return None
    texts = [_given(walk, piece) for piece in pieces]
    if not all(isinstance(text, str) for text in texts) or isinstance(_given(walk, number), str):
        return None
    return number, "".join(texts).strip()


def _joined(node: Node) -> list[Node]:
    """Return what a chain of ``&`` joins, from left to right."""
    if isinstance(node, Binary) and node.operator == "&":
        return [*_joined(node.left), *_joined(node.right)]
    return [node]


def _given(walk: Walk, argument: Node) -> Any:
    """Return an argument as the function gets it, with 1 for each number that is computed."""
    grid = walk.around.text_grid(argument, walk.host)
    if len(grid) == 1 and len(grid[0]) == 1:
        return grid[0][0]
    return grid


def _is_bare(given: Any) -> bool:
    if isinstance(given, list):
        cells = [cell for row in given for cell in row]
        return bool(cells) and not any(isinstance(cell, str) for cell in cells)
    return isinstance(given, float)


def _bare_fits(function: str, name: str, unit: Any, node: Carried) -> None:
    """Compare the unit in which a bare number is taken with the one that its cell declares."""
    if not node.settled:
        return
    own = unit.dimension.without_angle()
    if node.dimension != own:
        raise UnitFault("unit-clash", f"{function} takes {name} in {unit.text} and gets {describe(node)}", node)
    if not any(abs(r.scale / unit.scale - 1) < 1e-9 for r in node.readings):
        factor = node.readings[0].scale / unit.scale
        raise UnitFault(
            "unit-scale", f"{function} takes {name} in {unit.text} and gets {describe(node)}", node, None, factor
        )
