"""The unit that a formula's plain arithmetic carries beside the number, and the algebra of such units.

A cell holds a number, not a quantity. What is carried is the unit in which that number would have to be read for the
arithmetic to be physically true: kN over mm² is the unit kN/mm², scale and all. A literal may be a pure number or the
constant of a conversion, and nothing tells which until the unit is compared with another; so a node carries all the
*readings* that its literals allow, and a comparison leaves those that agree.
"""

from __future__ import annotations

import enum
import math
from collections.abc import Iterable
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import Final

from doubler.units import Dimension
from doubler.workbook.conversions import conversion
from doubler.workbook.model import Address

Key = tuple[str, Address]
"""A cell: sheet name and address."""

MOST_READINGS: Final = 48
NONE: Final = Dimension.none()


class State(enum.Enum):
    """What is known of the unit of a node."""

    KNOWN = "known unit"
    LITERAL = "literal"
    UNKNOWN = "unknown"
    CONTRADICTORY = "contradictory"
    TEXT = "text"
    LOGICAL = "logical"
    BLANK = "blank"


@dataclass(frozen=True, slots=True)
class Use:
    """A literal taken as a conversion constant: as typed, and the exponent with which it acts."""

    position: int
    value: float
    text: str
    exponent: Fraction


@dataclass(frozen=True, slots=True)
class Factor:
    """A multiplicative literal of a formula.

    Attributes
    ----------
    position
        Tells the literals of one formula apart.
    value, text
        The number, and the digits as typed.
    exponent
        The exponent with which it acts on the result.
    common
        True where it multiplies the whole result, False inside one term of a sum.
    cell
        The cell that holds the literal where it is not typed in the formula itself.
    """

    position: int
    value: float
    text: str
    exponent: Fraction
    common: bool = True
    cell: Key | None = None


@dataclass(frozen=True, slots=True)
class Reading:
    """One way to read the number: its scale to coherent SI, and the literals that are then conversions.

    `weight` counts absolute temperatures (1 for a temperature, 0 for a difference), and `zero` is the temperature in
    kelvin at which the number is zero.
    """

    scale: float
    used: tuple[Use, ...] = ()
    weight: float = 0.0
    zero: float = 0.0


@dataclass(frozen=True, slots=True)
class Source:
    """A declared unit that entered: the cell or the place where it is declared, and its exponent.

    `exponent` is None where the unit acts otherwise than as a factor of the whole; `weak` where only a label's words
    say that the cell is a pure number.
    """

    place: Key
    cell: Key
    text: str
    exponent: Fraction | None
    system: str = ""
    weak: bool = False


@dataclass(frozen=True, slots=True)
class Open:
    """An undeclared input: the cell (or the head of its column), and its exponent; None inside one term of a sum."""

    key: Key
    exponent: Fraction | None


@dataclass(frozen=True, slots=True)
class Hidden:
    """A literal that must carry a unit for the formula to hold (an empirical formula)."""

    text: str
    dimension: Dimension
    scale: float


@dataclass(frozen=True, slots=True)
class Carried:
    """The unit of a node. See the module; `shifted` where a number was added to a quantity, as in ``=1.5+0.25*B1``."""

    state: State
    dimension: Dimension = NONE
    readings: tuple[Reading, ...] = (Reading(1.0),)
    factors: tuple[Factor, ...] = ()
    opens: tuple[Open, ...] = ()
    sources: tuple[Source, ...] = ()
    hidden: tuple[Hidden, ...] = ()
    value: float | None = None
    angle_mark: bool = False
    rooted_at: tuple[Key, ...] = ()
    shifted: bool = False

    @property
    def settled(self) -> bool:
        """Whether the unit is known without any undeclared input."""
        return self.state is State.KNOWN and not self.opens

    @property
    def takes_any(self) -> bool:
        """Whether the node takes the unit of what it is added to or compared with."""
        return self.state in (State.LITERAL, State.BLANK, State.TEXT, State.LOGICAL)


TEXT = Carried(State.TEXT)
LOGICAL = Carried(State.LOGICAL)
BLANK = Carried(State.BLANK, value=0.0)
RATIO = Carried(State.KNOWN)
MOST_ROOTS = 8
MOST_KEPT: Final = 64
"""Literals and declared units that a node remembers; a long chain without a declared unit, row upon
row, would else hand on all that came before, and where it reads a row twice, twice as much each time."""
MOST_OPENS: Final = 256
"""Undeclared inputs that a node remembers."""
MOST_PAIRS: Final = 512
"""Pairs of readings that a product tries; of more, those with the fewest conversions."""
MOST_USES: Final = 16
"""Conversions within one reading of a number; a reading that takes more is none that was meant."""


def contradictory(roots: Iterable[Key] = ()) -> Carried:
    """Return what a node carries once its units were found to contradict each other at `roots`.

    Each root once and no more than the first few: where both sides of a product hang on one root, and the next row on
    both, the roots would else double from row to row.
    """
    return Carried(State.CONTRADICTORY, rooted_at=tuple(dict.fromkeys(roots))[:MOST_ROOTS])


def unknown(key: Key) -> Carried:
    """Return what an undeclared input carries."""
    return Carried(State.UNKNOWN, opens=(Open(key, Fraction(1)),))


def literal(value: float, text: str, position: int, cell: Key | None = None) -> Carried:
    """Return what a constant of a formula carries: a pure number, or the constant of a conversion."""
    size = abs(value)
    readings = [Reading(1.0)]
    found = conversion(size, text)
    if found is not None:
        readings.append(Reading(1 / found.factor, (Use(position, size, text, Fraction(1)),)))
    factors = (Factor(position, size, text, Fraction(1), True, cell),) if size not in (0.0, 1.0) else ()
    return Carried(State.LITERAL, NONE, tuple(readings), factors, value=value)


def known(
    dimension: Dimension, scale: float, source: Source, *, offset: float = 0.0, absolute: bool = False
) -> Carried:
    """Return what a cell with a declared unit carries."""
    reading = Reading(scale, (), 1.0 if absolute else 0.0, offset if absolute else 0.0)
    straight = dimension.without_angle()
    return Carried(
        State.KNOWN,
        straight,
        (reading,),
        sources=(source,),
        angle_mark=dimension is not straight,
    )


def _merge_states(left: Carried, right: Carried) -> State:
    states = {left.state, right.state}
    if State.CONTRADICTORY in states:
        return State.CONTRADICTORY
    if State.KNOWN in states:
        return State.KNOWN
    return State.UNKNOWN if State.UNKNOWN in states else State.LITERAL


def multiply(left: Carried, right: Carried) -> Carried:
    """Return the unit of a product."""
    state = _merge_states(left, right)
    if state is State.CONTRADICTORY:
        return contradictory((*left.rooted_at, *right.rooted_at))
    value = None
    if left.value is not None and right.value is not None:
        value = left.value * right.value
    most = MOST_READINGS if len(left.readings) * len(right.readings) <= MOST_PAIRS else MOST_READINGS // 3
    pure_left, pure_right = left.state is State.LITERAL, right.state is State.LITERAL
    readings = _limit(
        _times(a, b, left.value if pure_left else None, right.value if pure_right else None)
        for a in left.readings[:most]
        for b in right.readings[:most]
    )
    return Carried(
        state,
        left.dimension * right.dimension,
        readings,
        _add_factors(left.factors, right.factors),
        _add_opens(left.opens, right.opens),
        _add_sources(left.sources, right.sources),
        add_hidden(left.hidden, right.hidden),
        value,
        left.angle_mark != right.angle_mark,
        shifted=left.shifted or right.shifted,
    )


def _times(a: Reading, b: Reading, left_value: float | None, right_value: float | None) -> Reading:
    """Multiply two readings; a temperature times a literal stays one, times anything else it is a difference."""
    scale, used = a.scale * b.scale, _add_uses(a.used, b.used)
    if a.weight == 0.0 and b.weight == 0.0:
        return Reading(scale, used)
    hot, other, value = (a, b, right_value) if a.weight else (b, a, left_value)
    if value is None or (b.weight and a.weight):
        return Reading(scale, used)
    if other.used:
        return Reading(scale, used, hot.weight, hot.zero)
    return Reading(scale, used, hot.weight * value, hot.zero * value)


def power(node: Carried, exponent: Fraction) -> Carried:
    """Return the unit of a node raised to a constant exponent."""
    if node.state is State.CONTRADICTORY or exponent == 1:
        return node
    number = float(exponent)
    readings = []
    for r in node.readings:
        used = tuple(replace(u, exponent=u.exponent * exponent) for u in r.used)
        # Only the inverse of a literal factor can stand beside a temperature; a power of a temperature is none.
        readings.append(Reading(r.scale**number, used))
    value = None
    if node.value is not None and (node.value > 0 or exponent.denominator == 1) and node.value != 0:
        value = float(node.value**number) if abs(number * math.log10(abs(node.value) or 1)) < 250 else None
    return Carried(
        node.state,
        node.dimension**exponent,
        _limit(readings),
        tuple(replace(f, exponent=f.exponent * exponent) for f in node.factors),
        tuple(o if o.exponent is None else replace(o, exponent=o.exponent * exponent) for o in node.opens),
        tuple(s if s.exponent is None else replace(s, exponent=s.exponent * exponent) for s in node.sources),
        node.hidden,
        value,
        node.angle_mark and exponent in (1, -1),
        shifted=node.shifted,
    )


def divide(left: Carried, right: Carried) -> Carried:
    """Return the unit of a quotient."""
    return multiply(left, power(right, Fraction(-1)))


def _limit(readings: Iterable[Reading]) -> tuple[Reading, ...]:
    """Drop readings that are alike, and keep those with the fewest conversions where there are very many."""
    kept: dict[tuple[float, float], Reading] = {}
    for reading in sorted(readings, key=lambda r: len(r.used)):
        key = (float(f"{reading.scale:.9e}"), float(f"{reading.zero:.6e}") + reading.weight)
        kept.setdefault(key, reading)
    found = list(kept.values())[:MOST_READINGS]
    while len(found) > 1 and len(found[-1].used) > MOST_USES:
        found.pop()
    if found and len(found[0].used) > MOST_USES:
        found[0] = replace(found[0], used=found[0].used[:MOST_USES])
    return tuple(found)


def _add_uses(left: tuple[Use, ...], right: tuple[Use, ...]) -> tuple[Use, ...]:
    if not left or not right:
        return left or right
    merged: dict[int, Use] = {u.position: u for u in left}
    for use in right:
        held = merged.get(use.position)
        merged[use.position] = use if held is None else replace(use, exponent=use.exponent + held.exponent)
    return tuple(u for u in merged.values() if u.exponent)


def _add_factors(left: tuple[Factor, ...], right: tuple[Factor, ...]) -> tuple[Factor, ...]:
    if not left or not right:
        return left or right
    return few_factors(left + right)


def few_factors(factors: tuple[Factor, ...]) -> tuple[Factor, ...]:
    """Return factors as they are; of very many each once, with its exponents added, and the first of them only."""
    if len(factors) <= MOST_KEPT:
        return factors
    merged: dict[tuple[int, Key | None, bool], Factor] = {}
    for factor in factors:
        key = (factor.position, factor.cell, factor.common)
        held = merged.get(key)
        exponent = factor.exponent if held is None else held.exponent + factor.exponent
        merged[key] = factor if held is None or not factor.common else replace(held, exponent=exponent)
    return tuple(merged.values())[:MOST_KEPT]


def add_hidden(*parts: tuple[Hidden, ...]) -> tuple[Hidden, ...]:
    """Put together the literals that must carry a unit; of very many each once."""
    found = tuple(item for part in parts for item in part)
    return found if len(found) <= MOST_KEPT else tuple(dict.fromkeys(found))[:MOST_KEPT]


def _add_opens(left: tuple[Open, ...], right: tuple[Open, ...]) -> tuple[Open, ...]:
    if not left or not right:
        return left or right
    merged: dict[Key, Open] = {o.key: o for o in left}
    for item in right:
        held = merged.get(item.key)
        if held is None:
            merged[item.key] = item
        elif held.exponent is None or item.exponent is None:
            merged[item.key] = replace(item, exponent=None)
        else:
            merged[item.key] = replace(item, exponent=held.exponent + item.exponent)
    return few_opens(tuple(o for o in merged.values() if o.exponent is None or o.exponent != 0))


def few_opens(opens: tuple[Open, ...]) -> tuple[Open, ...]:
    """Return undeclared inputs as they are; of very many the first, none of which can then cancel any more."""
    if len(opens) <= MOST_OPENS:
        return opens
    return tuple(o if o.exponent is None else replace(o, exponent=None) for o in opens[:MOST_OPENS])


def _add_sources(left: tuple[Source, ...], right: tuple[Source, ...]) -> tuple[Source, ...]:
    if not left or not right:
        return left or right
    merged: dict[Key, Source] = {s.cell: s for s in left}
    for item in right:
        held = merged.get(item.cell)
        if held is None:
            merged[item.cell] = item
        elif held.exponent is None or item.exponent is None:
            merged[item.cell] = replace(item, exponent=None)
        else:
            merged[item.cell] = replace(item, exponent=held.exponent + item.exponent)
    return tuple(merged.values())[:MOST_KEPT]


def inside_sum(nodes: list[Carried]) -> tuple[tuple[Factor, ...], tuple[Open, ...], tuple[Source, ...]]:
    """Return factors, opens and sources of a sum: only what acts alike on all terms acts on the whole."""
    count = len(nodes)
    factors: list[Factor] = []
    for node in nodes:
        factors += [f if count == 1 else replace(f, common=False) for f in node.factors]
    opens: dict[Key, list[Open]] = {}
    sources: dict[Key, list[Source]] = {}
    for node in nodes:
        for item in node.opens:
            opens.setdefault(item.key, []).append(item)
        for source in node.sources:
            sources.setdefault(source.cell, []).append(source)
    merged_opens = tuple(
        items[0] if len(items) == count and len({i.exponent for i in items}) == 1 else replace(items[0], exponent=None)
        for items in opens.values()
    )
    # A unit that is declared at one place for many cells acts on the sum when each term has it alike.
    by_place: list[dict[Key, set[Fraction | None]]] = []
    for node in nodes:
        places: dict[Key, set[Fraction | None]] = {}
        for source in node.sources:
            places.setdefault(source.place, set()).add(source.exponent)
        by_place.append(places)
    merged_sources = []
    for sources_of_cell in sources.values():
        first = sources_of_cell[0]
        everywhere = all(places.get(first.place) == {first.exponent} for places in by_place)
        merged_sources.append(first if everywhere else replace(first, exponent=None))
    return few_factors(tuple(factors)), few_opens(merged_opens), tuple(merged_sources)[:MOST_KEPT]
