"""Sums, differences, comparisons, envelopes and branches: operands that must have one unit."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

from doubler.units import Dimension
from doubler.workbook.carried import (
    BLANK,
    LOGICAL,
    NONE,
    TEXT,
    Carried,
    Hidden,
    Key,
    Reading,
    Source,
    State,
    Use,
    _add_uses,
    add_hidden,
    contradictory,
    inside_sum,
)
from doubler.workbook.conversions import conversion, is_simple_coefficient

RATIO_SCALES = (1.0, 0.01, 0.001, 1e-6, 1e-9)
"""Scales at which a pure number is written: one, percent, per mille, ppm or microstrain, ppb."""


class UnitFault(Exception):
    """A fault inside a formula, found while its units were carried.

    Attributes
    ----------
    kind
        Kind of finding: ``unit-clash``, ``unit-scale``, ``unit-label`` or ``angle-unit``.
    words
        What is wrong, without the mend.
    first, second
        The two sides that disagree, where there are two.
    factor
        The scale of the first over that of the second where only scales differ.
    """

    def __init__(
        self,
        kind: str,
        words: str,
        first: Carried,
        second: Carried | None = None,
        factor: float | None = None,
    ) -> None:
        super().__init__(words)
        self.kind = kind
        self.words = words
        self.first = first
        self.second = second
        self.factor = factor


class NotTraced(Exception):
    """The units of a formula can't be followed; the message says why. `cells` is what it hangs on."""

    def __init__(self, reason: str, cells: tuple[Key, ...] = ()) -> None:
        super().__init__(reason)
        self.reason = reason
        self.cells = cells


@dataclass(frozen=True, slots=True)
class Constraint:
    """What one formula says of an undeclared input: its dimension, and the scales that its readings allow."""

    key: Key
    dimension: Dimension
    scales: tuple[float, ...]
    system: str
    angle_mark: bool = False


def describe(node: Carried) -> str:
    """Write a node's unit as an engineer would: from the units that entered, else by name or dimension."""
    from doubler.workbook.unit_names import name_unit, power_text

    scale = node.readings[0].scale
    plain = [s for s in node.sources if s.exponent is not None and s.text not in ("1", "-", "")]
    if len(plain) == len([s for s in node.sources if s.text not in ("1", "-", "")]) and plain:
        exponents: dict[str, Fraction] = {}
        for source in plain:
            assert source.exponent is not None
            exponents[source.text] = exponents.get(source.text, Fraction(0)) + source.exponent
        if len(exponents) <= 3 and not node.readings[0].used:
            return power_text(exponents)
    named = name_unit(node.dimension, scale, next((s.system for s in node.sources if s.system), ""))
    return named or node.dimension.name


def together(
    nodes: Sequence[Carried], constraints: list[Constraint], *, signs: Sequence[int] = (), what: str = "added"
) -> Carried:
    """Return the one unit of operands that must be alike.

    Parameters
    ----------
    nodes : sequence of Carried
    constraints : list of Constraint
        Takes what follows for undeclared inputs.
    signs : sequence of int, optional
        The sign of each operand in a sum; left out, the result is one of the operands (an envelope, a branch).
    what : str
        How the operands meet, for the message: 'added', 'compared', 'enveloped'.

    Raises
    ------
    UnitFault
        Where they are unlike.
    """
    bad = [node for node in nodes if node.state is State.CONTRADICTORY]
    if bad:
        return contradictory(key for node in bad for key in node.rooted_at)
    weights = signs or [0] * len(nodes)
    terms = [(n, s) for n, s in zip(nodes, weights, strict=True) if n.state in (State.KNOWN, State.UNKNOWN)]
    literals = [(n, s) for n, s in zip(nodes, weights, strict=True) if n.state is State.LITERAL]
    if not terms:
        return _without_units(nodes, [n for n, _ in literals], signs)
    sure = [(n, s) for n, s in terms if not n.opens]
    loose = [n for n, _ in terms if n.opens]
    factors, opens, sources = inside_sum([n for n, _ in terms])
    hidden = add_hidden(*(n.hidden for n, _ in terms))
    if not sure:
        one = loose[0]
        alike = all(n.dimension == one.dimension and n.opens == one.opens for n in loose)
        exact = opens if alike else tuple(replace(o, exponent=None) for o in opens)
        state = State.KNOWN if all(n.state is State.KNOWN for n in loose) else State.UNKNOWN
        return Carried(state, one.dimension, one.readings, factors, exact, sources, hidden)
    reference, readings, extra = _agree(sure, what, bool(signs))
    readings = _with_literals(reference, readings, literals)
    if signs:
        readings = tuple(_shifted(r, literals) for r in readings)
    system = next((s.system for s in sources if s.system), "")
    for node in loose:
        note_constraint(node, reference.dimension, readings, constraints, system, reference.angle_mark)
    return Carried(
        State.KNOWN,
        reference.dimension,
        readings,
        factors,
        (),
        sources,
        add_hidden(hidden, extra),
        None,
        reference.angle_mark,
        shifted=any(n.shifted for n, _ in sure) or (bool(signs) and any(n.value != 0.0 for n, _ in literals)),
    )


def _without_units(nodes: Sequence[Carried], literals: list[Carried], signs: Sequence[int]) -> Carried:
    if not literals:
        for state, node in ((State.LOGICAL, LOGICAL), (State.TEXT, TEXT)):
            if any(n.state is state for n in nodes):
                return node
        return BLANK
    if len(literals) == 1 and len(nodes) == 1:
        return literals[0]
    value = None
    if signs and len(literals) == len(nodes) and all(n.value is not None for n in literals):
        value = float(sum(s * (n.value or 0.0) for n, s in zip(literals, signs, strict=True)))
    return Carried(State.LITERAL, NONE, (Reading(1.0),), (), value=value)


def _agree(
    sure: list[tuple[Carried, int]], what: str, summed: bool
) -> tuple[Carried, tuple[Reading, ...], tuple[Hidden, ...]]:
    """Leave the readings that all operands share."""
    reference = _reference(sure)
    readings: list[Reading] | None = None
    extra: list[Hidden] = []
    for node, sign in sure:
        own = node
        if node.dimension != reference.dimension:
            carried_by = hidden_literal(node, reference.dimension, reference.readings[0].scale)
            if carried_by is None and summed:
                carried_by = _term_of_fit(node, reference)
            if carried_by is None:
                raise UnitFault("unit-clash", f"{describe(reference)} and {describe(node)} are {what}", reference, node)
            extra.append(carried_by)
            own = replace(node, dimension=reference.dimension, readings=reference.readings)
        if readings is None:
            readings = [replace(r, weight=sign * r.weight, zero=sign * r.zero) if summed else r for r in own.readings]
            continue
        kept = []
        for held in readings:
            for other in own.readings:
                if math.isclose(held.scale, other.scale, rel_tol=1e-9):
                    kept.append(_joined(held, other, sign, summed))
                    break
        if not kept:
            raise _scale_clash(reference, node, what)
        if not summed and not any(_same_zero(r, own) for r in kept):
            raise UnitFault("unit-clash", f"a temperature and a temperature difference are {what}", reference, node)
        readings = kept
    assert readings is not None
    return reference, tuple(readings), tuple(extra)


def _reference(sure: list[tuple[Carried, int]]) -> Carried:
    """Return the operand whose dimension most share; among equals the first that is not a pure number by its label."""
    counts: dict[Dimension, int] = {}
    for node, _ in sure:
        counts[node.dimension] = counts.get(node.dimension, 0) + (1 if _firm(node) else 0)
    best = max(counts.values())
    return next(node for node, _ in sure if counts[node.dimension] == best)


def _firm(node: Carried) -> bool:
    return not any(s.weak for s in node.sources)


def _joined(held: Reading, other: Reading, sign: int, summed: bool) -> Reading:
    used = _add_uses_once(held.used, other.used)
    if not summed:
        return replace(held, used=used)
    return Reading(held.scale, used, held.weight + sign * other.weight, held.zero + sign * other.zero)


def _add_uses_once(left: tuple[Use, ...], right: tuple[Use, ...]) -> tuple[Use, ...]:
    held = {u.position for u in left}
    return left + tuple(u for u in right if u.position not in held)


def _same_zero(reading: Reading, node: Carried) -> bool:
    return any(
        math.isclose(reading.weight, r.weight, abs_tol=1e-6) and abs(reading.zero - r.zero) < 0.6
        for r in node.readings
        if math.isclose(r.scale, reading.scale, rel_tol=1e-9)
    )


def _scale_clash(reference: Carried, node: Carried, what: str) -> UnitFault:
    factor = node.readings[0].scale / reference.readings[0].scale
    kind = "angle-unit" if reference.angle_mark and node.angle_mark else "unit-clash"
    return UnitFault(kind, f"{describe(reference)} and {describe(node)} are {what}", reference, node, factor)


def _with_literals(
    reference: Carried,
    readings: tuple[Reading, ...],
    literals: list[tuple[Carried, int]],
) -> tuple[Reading, ...]:
    """A number beside a ratio means that the ratio is a plain one."""
    counts = [n for n, _ in literals if n.value != 0.0]
    if not counts or reference.dimension != NONE or reference.angle_mark or any(r.weight for r in readings):
        return readings
    plain = tuple(r for r in readings if math.isclose(r.scale, 1.0, rel_tol=1e-9))
    if plain:
        return plain
    scale = readings[0].scale
    inputs = [s for s in reference.sources if not s.weak]
    if len(inputs) < 2 or any(math.isclose(scale, s) for s in RATIO_SCALES[1:2]):
        return readings
    from doubler.workbook.conversions import factor_words

    raise UnitFault(
        "unit-scale",
        f"the ratio in {describe(reference)} stands beside a plain number and is {factor_words(1 / scale)}",
        reference,
        None,
        1 / scale,
    )


def _shifted(reading: Reading, literals: list[tuple[Carried, int]]) -> Reading:
    """Move the zero of a temperature by a literal added to it."""
    if not reading.weight or not literals:
        return reading
    shift = sum(sign * (n.value or 0.0) for n, sign in literals)
    return replace(reading, zero=reading.zero - shift * reading.scale)


def note_constraint(
    node: Carried,
    dimension: Dimension,
    readings: Sequence[Reading],
    constraints: list[Constraint],
    system: str,
    angle_mark: bool = False,
) -> None:
    """Note what a node with one undeclared input says of it when the whole has a known unit."""
    if len(node.opens) != 1 or node.opens[0].exponent in (None, 0):
        return
    item = node.opens[0]
    exponent = item.exponent
    assert exponent is not None
    wanted = (dimension / node.dimension) ** (1 / exponent)
    scales = sorted(
        {
            float(f"{(target.scale / own.scale) ** float(1 / exponent):.12e}")
            for target in readings
            if not weak_use(target)
            for own in node.readings
            if not weak_use(own)
        }
    )
    if scales:
        constraints.append(Constraint(item.key, wanted, tuple(scales), system, angle_mark))


def weak_use(reading: Reading) -> bool:
    """Return whether a reading takes a literal for a conversion that is as likely a plain coefficient."""
    for use in reading.used:
        found = conversion(use.value ** float(use.exponent))
        if found is None or not found.strong:
            return True
    return False


def hidden_literal(node: Carried, dimension: Dimension, scale: float) -> Hidden | None:
    """Return the literal that can carry the unit which a node lacks for having `dimension`, or None."""
    for factor in sorted(node.factors, key=lambda f: not f.common):
        if not factor.exponent or is_simple_coefficient(factor.value, factor.text):
            continue
        found = conversion(factor.value, factor.text)
        if found is not None and not _physical(factor.value) and not _plain_decimal(factor.value):
            continue
        exponent = 1 / factor.exponent
        return Hidden(
            factor.text or f"{factor.value:g}",
            (dimension / node.dimension) ** exponent,
            (scale / node.readings[0].scale) ** float(exponent),
        )
    return None


def _term_of_fit(node: Carried, reference: Carried) -> Hidden | None:
    """Take the coefficient of a term of a polynomial in one quantity, ``=3-3.13*t+3.66*t^2``, for one with a unit."""
    cells = {s.cell for s in (*node.sources, *reference.sources)}
    powers = {s.exponent for s in (*node.sources, *reference.sources)}
    typed = [f for f in node.factors if f.exponent and f.value != 1.0]
    if len(cells) != 1 or None in powers or not typed or not reference.factors:
        return None
    return Hidden(
        typed[0].text or f"{typed[0].value:g}",
        reference.dimension / node.dimension,
        reference.readings[0].scale / node.readings[0].scale,
    )


def _plain_decimal(value: float) -> bool:
    """Return whether a decimal below 1 is the inverse of a whole number, as 0.0625 is of 16: seldom a conversion."""
    if value >= 1.0:
        return False
    inverse, power = 1 / value, -math.log10(value)
    return math.isclose(inverse, round(inverse), rel_tol=1e-12) and abs(power - round(power)) > 1e-12


def _physical(value: float) -> bool:
    """Return whether a number is the acceleration of gravity in some unit, which is also a conversion constant."""
    return any(abs(value / g - 1) < 2e-3 for g in (9.80665, 9806.65, 386.0886, 32.17405))


def require_ratio(node: Carried, what: str) -> Carried:
    """Return the node as a pure number of scale 1, as an exponent, a logarithm or an exponential wants it."""
    if node.state in (State.CONTRADICTORY, State.UNKNOWN) or node.takes_any:
        return node
    if node.opens:
        return node
    if node.dimension != NONE:
        raise UnitFault("unit-clash", f"{what} wants a pure number and gets {describe(node)}", node)
    plain = tuple(r for r in node.readings if math.isclose(r.scale, 1.0, rel_tol=1e-9))
    if not plain:
        kind = "angle-unit" if node.angle_mark else "unit-scale"
        raise UnitFault(
            kind,
            f"{what} wants a pure number and gets {describe(node)}",
            node,
            None,
            1 / node.readings[0].scale,
        )
    return replace(node, readings=plain)


def independent(sources: Sequence[Source]) -> tuple[Source, ...]:
    """Return the sources without exponents, for a result that does not scale with them."""
    return tuple(replace(s, exponent=None) for s in sources)


__all__ = [
    "Constraint",
    "NotTraced",
    "UnitFault",
    "_add_uses",
    "describe",
    "hidden_literal",
    "independent",
    "note_constraint",
    "require_ratio",
    "together",
    "weak_use",
]
