"""The cell's edge: whether the unit that a formula carries is the one that its cell declares."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

from doubler.units import Dimension
from doubler.workbook.alike import describe, hidden_literal, independent
from doubler.workbook.carried import NONE, RATIO, Carried, Hidden, Key, Reading, State, Use
from doubler.workbook.conversions import conversion, factor_text, factor_words
from doubler.workbook.declared import Declared
from doubler.workbook.roles import is_margin
from doubler.workbook.unit_literals import (
    ACCELERATION,
    DEGREE,
    EXPLAINS,
    carries_scale,
    fitted,
    gravity,
    is_odd_power,
    slip,
    turns,
    typed_in,
)
from doubler.workbook.unit_names import name_unit
from doubler.workbook.unit_verdicts import Fault


@dataclass(frozen=True, slots=True)
class Edge:
    """What the comparison gave: faults, or the reading under which all is sound."""

    faults: tuple[Fault, ...] = ()
    uses: tuple[Use, ...] = ()
    hidden: tuple[Hidden, ...] = ()
    notes: tuple[str, ...] = ()
    agrees: bool = True


def judge_edge(carried: Carried, declared: Declared, words: str, value: object, cell: str) -> Edge:
    """Compare the unit that a formula carries with the one that its cell declares.

    Parameters
    ----------
    carried : Carried
        Of a formula in which a unit entered.
    declared : Declared
    words : str
        The words of the cell's label, which may explain a literal.
    value : object
        The stored value, for the text of what stands there.
    cell : str
        The cell as it is written, for the message.
    """
    unit = declared.unit
    dimension = unit.dimension.without_angle()
    if carried.dimension != dimension:
        return _other_dimension(carried, declared, dimension, cell, value)
    fits = [r for r in carried.readings if math.isclose(r.scale, unit.scale, rel_tol=1e-9)]
    if fits:
        return _fits(carried, declared, fits[0], words, cell)
    return _other_scale(carried, declared, cell, value)


def _shown(declared: Declared) -> str:
    return "a pure number" if declared.unit.text in ("1", "") else declared.unit.text


def _value(value: object, declared: Declared, factor: float | None) -> tuple[str, str]:
    text = declared.unit.text
    if isinstance(value, float) and factor and value:
        return f"{value:.6g} {text}", f"{value / factor:.6g} {text}"
    return "", ""


def named(carried: Carried, reading: Reading | None = None) -> str:
    """Write a carried unit with its usual name where it has one: 'kN/mm^2, which is GPa'."""
    shown = describe(carried)
    if reading is not None and reading is not carried.readings[0]:
        name = _name(carried, reading)
        return name or f"{shown} times {carried.readings[0].scale / reading.scale:g}"
    name = _name(carried, carried.readings[0])
    if shown == "1":
        return "a pure number"
    return shown if name is None or name in (shown, "1") else f"{shown}, which is {name}"


def _name(carried: Carried, reading: Reading) -> str | None:
    system = next((s.system for s in carried.sources if s.system), "")
    return name_unit(carried.dimension, reading.scale, system)


def _other_dimension(carried: Carried, declared: Declared, dimension: Dimension, cell: str, value: object) -> Edge:
    if declared.weak and not is_margin(declared.text):
        return Edge(agrees=False)
    scale = declared.unit.scale
    most = replace(carried, readings=tuple(sorted(carried.readings, key=_conversions, reverse=True)))
    hidden = (
        gravity(carried, dimension, scale) or hidden_literal(most, dimension, scale) or typed_in(most, dimension, scale)
    )
    if hidden is None and (carried.hidden or carried.shifted or is_odd_power(carried, dimension)):
        hidden = fitted(most, dimension, scale)
    if isinstance(hidden, Reading):
        weight = replace(carried, dimension=dimension, readings=(hidden,), sources=independent(carried.sources))
        factor = _round(declared.unit.scale / hidden.scale)
        return Edge((_scale_fault(weight, declared, factor, cell, value, hidden),))
    if hidden is not None:
        known_one = hidden.dimension == ACCELERATION
        return Edge(hidden=(hidden,), notes=() if known_one else notes_of((hidden,), cell))
    found = named(carried)
    name = _name(carried, carried.readings[0])
    if declared.weak:
        message = (
            f"{cell} is labelled as a pure number ({declared.text}) but its formula gives {found}: check what it "
            f"divides by what"
        )
    else:
        mend = f", or label the cell {name}" if name and name != "1" else ""
        message = (
            f"{cell} is labelled {_shown(declared)}, {_kind(dimension)}, but its formula gives {found}, "
            f"{_kind(carried.dimension)}: check what it multiplies and divides{mend}"
        )
    shown = describe(carried) if carried.dimension != NONE else "a pure number"
    fault = Fault(
        "unit-label",
        "error",
        message,
        None,
        shown,
        _shown(declared),
        source_cells(carried),
        ((carried, _due(declared)),),
    )
    return Edge((fault,))


def _kind(dimension: Dimension) -> str:
    name = dimension.name
    return name if name[:2] in ("a ", "an") or " " in name else f"{'an' if name[0] in 'aeiou' else 'a'} {name}"


def _due(declared: Declared) -> Carried:
    return Carried(State.KNOWN, declared.unit.dimension.without_angle(), (Reading(declared.unit.scale),))


def _fits(carried: Carried, declared: Declared, reading: Reading, words: str, cell: str) -> Edge:
    if declared.absolute and declared.unit.offset != reading.zero and abs(reading.weight - 1) < 1e-6:
        shift = reading.zero - declared.unit.offset
        if min(abs(abs(shift) - 273.15), abs(abs(shift) - 255.372)) < 0.6:
            size = abs(shift) / declared.unit.scale
            message = (
                f"{cell} is labelled {declared.unit.text}, but its formula gives a temperature whose zero lies "
                f"elsewhere: add or subtract {size:g}"
            )
            return Edge((Fault("unit-scale", "error", message, None, "", declared.unit.text, source_cells(carried)),))
    odd = slip(carried, reading) if not reading.used else None
    if odd is not None and not EXPLAINS.search(words):
        verb = "multiplies" if odd.exponent > 0 else "divides"
        message = (
            f"{cell} is labelled {_shown(declared)}, with which its inputs agree already, but {odd.text} {verb} it "
            f"and converts nothing: delete {odd.text}, or mend the unit of the input that it is to convert"
        )
        factor = _round(odd.value ** float(odd.exponent))
        meant = tuple(r for r in carried.readings if any(u.position == odd.position for u in r.used))
        sides = ((replace(carried, readings=meant), _due(declared)),) if meant else ()
        fault = Fault("unit-scale", "warning", message, factor, "", "", source_cells(carried), sides)
        return Edge((fault,))
    return Edge(uses=reading.used, agrees=odd is None)


def _other_scale(carried: Carried, declared: Declared, cell: str, value: object) -> Edge:
    if declared.weak and _ratio_scale(carried, declared):
        return Edge(agrees=False)
    reading = best_reading(carried, declared)
    factor = _round(declared.unit.scale / reading.scale)
    turned = turns(carried, declared.unit.scale, declared.unit.text)
    if turned is not None:
        return Edge(uses=turned.used)
    if carries_scale(carried, factor):
        note = f"{cell} holds only if a literal of its formula carries a factor of {factor_text(1 / factor)}"
        return Edge(notes=(note,))
    return Edge((_scale_fault(carried, declared, factor, cell, value, reading),))


def _round(factor: float) -> float:
    return float(f"{factor:.12g}")


def _ratio_scale(carried: Carried, declared: Declared) -> bool:
    """Return whether a pure number by its label is one written as a percentage or in microstrain."""
    ratio = carried.readings[0].scale / declared.unit.scale
    single = len({s.text for s in carried.sources if not s.weak}) <= 1
    return single and any(math.isclose(ratio, s, rel_tol=1e-9) for s in (0.01, 1e-3, 1e-6, DEGREE))


def _conversions(reading: Reading) -> int:
    """Count the plain conversions of a reading, doubtful ones against it."""
    held = [conversion(use.value) for use in reading.used]
    return sum(1 if one is not None and one.strong else -1 for one in held)


def best_reading(carried: Carried, declared: Declared) -> Reading:
    """Return the reading to name in a message: a unit with a name, with the plain conversions made."""

    def rank(reading: Reading) -> tuple[bool, int, float]:
        return (
            _name(carried, reading) is None,
            -_conversions(reading),
            abs(math.log(declared.unit.scale / reading.scale)),
        )

    return min(carried.readings, key=rank)


def _scale_fault(
    carried: Carried, declared: Declared, factor: float, cell: str, value: object, reading: Reading
) -> Fault:
    found, expected = _value(value, declared, factor)
    name = _name(carried, reading)
    size = factor if factor >= 1 else 1 / factor
    mend = f"{'divide' if factor > 1 else 'multiply'} the formula by {factor_text(size)}"
    relabel = f", or label the cell {name}" if name and name not in ("1", declared.unit.text) else ""
    kind = "unit-scale"
    turned = math.isclose(size, 180 / math.pi, rel_tol=1e-6)
    in_degrees = turned and carried.dimension != NONE and any(s.text in ("deg", "°") for s in carried.sources)
    if in_degrees or (carried.dimension == NONE and (turned or (carried.angle_mark and declared.unit.scale != 1.0))):
        kind = "angle-unit"
        given = "radians" if math.isclose(reading.scale, 1.0, rel_tol=1e-9) and not in_degrees else "degrees"
        turn = {"radians": "write DEGREES(…)", "degrees": "write RADIANS(…) around the angle"}[given]
        message = (
            f"{cell} is labelled {_shown(declared)}, but its formula gives {given} and is {factor_words(factor)}: "
            f"{mend}, or {turn}"
        )
    else:
        message = (
            f"{cell} is labelled {_shown(declared)}, but its formula gives {named(carried, reading)}: it is "
            f"{factor_words(factor)}; {mend}{relabel}"
        )
    return Fault(
        kind,
        "error",
        message,
        factor,
        found or named(carried, reading),
        expected or _shown(declared),
        source_cells(carried),
        ((carried, _due(declared)),),
    )


def source_cells(*nodes: Carried) -> tuple[Key, ...]:
    """Return the cells whose units entered."""
    return tuple(dict.fromkeys(s.cell for node in nodes for s in node.sources))


def fault_inside(
    kind: str, words: str, first: Carried, second: Carried | None, factor: float | None, cell: str
) -> Fault:
    """Return the fault of a formula whose units contradict each other inside it."""
    from doubler.workbook.unit_verdicts import cell_text

    nodes = [first] if second is None else [first, second]
    told: list[str] = []
    for node in nodes:
        own = source_cells(node)
        if own and len(own) <= 3:
            told.append(f"{describe(node)} from {' and '.join(cell_text(key) for key in own)}")
    where = f" ({'; '.join(told)})" if told else ""
    mend = ""
    if factor is not None and second is not None:
        size = factor if factor >= 1 else 1 / factor
        verb = "multiply" if factor > 1 else "divide"
        mend = f"; {verb} the {describe(second)} term by {factor_text(size)}, or mend its label"
    elif kind == "angle-unit" and factor is not None:
        mend = "; write RADIANS(…) around the angle" if factor > 1 else "; the angle is in radians already"
    elif second is not None:
        mend = "; take the term that does not belong out, or mend its label"
    message = f"in {cell}, {words}{where}{mend}"
    expected = describe(first) if second is not None else ""
    found = describe(second if second is not None else first)
    sides: tuple[tuple[Carried, Carried], ...] = ()
    if second is not None:
        sides = ((second, first),)
    elif kind == "unit-scale" and first.dimension == NONE:
        sides = ((first, RATIO),)
    return Fault(kind, "error", message, factor, found, expected, source_cells(*nodes), sides)


def notes_of(hidden: Sequence[Hidden], cell: str) -> tuple[str, ...]:
    """Return what must be said of literals inside a formula that were taken to carry a unit."""
    return tuple(
        f"{cell} holds only if its {item.text} is in {name_unit(item.dimension, item.scale) or item.dimension.name}: "
        f"the formula is traced under that reading"
        for item in hidden
    )
