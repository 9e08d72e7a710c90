"""Factors resolved once for a combination of units.

Everything here is about one call shape: a function, the unit of each argument, and the unit wanted of the result. The
plan of such a shape is kept, so that a warm call costs the factors and the kernel.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from functools import lru_cache
from typing import Any

from doubler.catalogue.annotations import Alike, Quantity
from doubler.catalogue.record import Argument, WorksheetFunction
from doubler.errors import ErrorValue, InputError
from doubler.units import ConsistentSet, Dimension, Unit, consistent_set, kind, parse_unit
from doubler.units import factor as unit_factor


class CallError(InputError):
    """A worksheet function could not be called so; every bad argument is named.

    Attributes
    ----------
    function, reasons
        Its name, and one sentence for each fault.
    value
        The error value that a cell shows.
    """

    def __init__(self, function: str, reasons: Sequence[str], value: ErrorValue = ErrorValue.VALUE) -> None:
        super().__init__(f"{function}: " + "; ".join(reasons))
        self.function = function
        self.reasons = tuple(reasons)
        self.value = value

    def __reduce__(self) -> tuple[Any, ...]:
        return CallError, (self.function, self.reasons, self.value)


@dataclass(frozen=True, slots=True)
class Plan:
    """Factors into the kernel's consistent units and out of them.

    Attributes
    ----------
    factors, offsets
        For each argument: multiply, then add; None for 'leave as it is'.
    units
        For each argument the unit in which it is given, for messages.
    result_factor, result_offset
        Multiply the kernel's result, after taking off the offset.
    result_unit
        Unit of the result; None where it is a pure number or text.
    system
        ``"metric"`` or ``"us"``: the set in which the kernel computes.
    """

    factors: tuple[float | None, ...]
    offsets: tuple[float, ...]
    units: tuple[Unit | None, ...]
    result_factor: float
    result_offset: float
    result_unit: Unit | None
    system: str = "metric"


@lru_cache(maxsize=1024)
def _internal_unit(dimension: Dimension, system: str) -> Unit:
    """Return the unit of the set in which kernels compute: a familiar set keeps round numbers round."""
    chosen = consistent_set("lbf-in" if system == "us" else "N-mm")
    assert chosen is not None
    return chosen.unit_for(dimension)


_FORCES = {"metric": ("mm", "K", ("N", "kN", "MN")), "us": ("in", "Δ°F", ("lbf", "kip"))}


@lru_cache(maxsize=8)
def _set_with(force: str, length: str, temperature: str) -> ConsistentSet:
    return ConsistentSet(f"{force}-{length}", length, force, temperature)


@lru_cache(maxsize=1024)
def folded(plan: Plan) -> Plan:
    """Return a plan with the same result and as few factors as a choice of the force unit allows.

    A formula holds in every consistent set: with forces in kN and lengths in mm a stress comes out in kN/mm², and one
    factor on the result replaces those on the arguments. On long arrays each factor left out is a pass saved; the last
    digit may differ.
    """
    given = [unit for unit, factor in zip(plan.units, plan.factors, strict=True) if unit is not None and factor]
    if not given:
        return plan
    length, temperature, forces = _FORCES["us" if plan.system == "us" else "metric"]
    best = plan
    for force in forces[1:]:
        chosen = _set_with(force, length, temperature)
        factors = tuple(_factor_in(unit, chosen) for unit in plan.units)
        if sum(f is not None for f in factors) < sum(f is not None for f in best.factors):
            result = plan.result_unit
            scale = 1.0 if result is None else unit_factor(chosen.unit_for(result.dimension), result)
            best = replace(plan, factors=factors, result_factor=scale)
    return best


def _factor_in(unit: Unit | None, chosen: ConsistentSet) -> float | None:
    factor = 1.0 if unit is None else unit_factor(unit, chosen.unit_for(unit.dimension))
    return None if factor == 1.0 else factor


def resolve_dimension(quantity: Quantity | Alike, letters: dict[str, Dimension]) -> Dimension | None:
    """Return the dimension of a quantity, or None for letters that no argument has settled."""
    if isinstance(quantity, Quantity):
        return kind(quantity.kind).dimension
    dimension = Dimension.none()
    for letter, power in quantity.powers:
        if letter not in letters:
            return None
        dimension = dimension * letters[letter] ** power
    return dimension


def plan_for(function: WorksheetFunction, units: tuple[Unit | None, ...], result: str | None) -> Plan:
    """Return the plan of one call shape; kept for units that are spelt alike and not only equal.

    mm/mm and in/in are equal and belong to unlike systems, and N/m2 is given back as it was written.

    Parameters
    ----------
    function : WorksheetFunction
    units : tuple of Unit or None
        The unit of each argument; None for text, for an omitted argument and for a pure number.
    result : str or None
        The unit or the consistent set wanted, or None.

    Raises
    ------
    CallError
        The unit wanted does not fit the result, or arguments that must be alike are not.
    """
    return _kept_plan(function, units, tuple([None if unit is None else unit.text for unit in units]), result)


@lru_cache(maxsize=4096)
def _kept_plan(
    function: WorksheetFunction, units: tuple[Unit | None, ...], _texts: tuple[str | None, ...], result: str | None
) -> Plan:
    systems = {unit.system for unit in units if unit is not None and unit.system}
    system = "us" if systems == {"us"} else "metric"
    letters: dict[str, Dimension] = {}
    first: dict[str, tuple[Argument, Unit]] = {}
    reasons: list[str] = []
    for argument, unit in zip(function.arguments, units, strict=True):
        letter = argument.quantity.letter if isinstance(argument.quantity, Alike) else None
        if letter is None or unit is None:
            continue
        if letter not in letters:
            letters[letter], first[letter] = unit.dimension, (argument, unit)
        elif letters[letter] != unit.dimension:
            other, other_unit = first[letter]
            reasons.append(
                f"{argument.name} is in {unit.text} and {other.name} in {other_unit.text}; "
                f"give both as one kind of quantity"
            )
    factors: list[float | None] = []
    offsets: list[float] = []
    for argument, unit in zip(function.arguments, units, strict=True):
        if unit is None:
            factors.append(None)
            offsets.append(0.0)
            continue
        internal = _internal_unit(unit.dimension, system)
        factor = unit_factor(unit, internal)
        factors.append(None if factor == 1.0 else factor)
        offsets.append(0.0 if _is_change(argument.quantity) else unit.offset / internal.scale)
    try:
        result_unit = _result_unit(function, result, system, letters, first)
    except InputError as error:
        reasons.append(str(error))
        result_unit = None
    if reasons:
        raise CallError(function.name, reasons)
    scale = 1.0 if result_unit is None else unit_factor(_internal_unit(result_unit.dimension, system), result_unit)
    offset = 0.0 if result_unit is None or _is_change(function.result.quantity) else result_unit.offset
    return Plan(tuple(factors), tuple(offsets), units, scale, offset, result_unit, system)


def _is_change(quantity: Quantity | Alike | None) -> bool:
    """Return whether a degree of this quantity is a difference, so that the zero of °C or °F plays no part."""
    return isinstance(quantity, Quantity) and quantity.kind == "temperature_change"


def _result_unit(
    function: WorksheetFunction,
    wanted: str | None,
    system: str,
    letters: dict[str, Dimension],
    first: dict[str, tuple[Argument, Unit]],
) -> Unit | None:
    quantity = function.result.quantity
    if quantity is None:
        if wanted is not None and consistent_set(wanted) is None:
            raise InputError(f"the result is text and has no unit; leave {wanted!r} out")
        return None
    dimension = resolve_dimension(quantity, letters)
    if wanted is not None:
        chosen = consistent_set(wanted)
        unit = _unit_in_set(chosen, quantity, dimension) if chosen is not None else parse_unit(wanted)
        if unit is None or chosen is not None:
            return unit
        if isinstance(quantity, Quantity):
            why_not = kind(quantity.kind).accepts(unit)
            if why_not:
                raise InputError(f"the result cannot be given in {wanted}: {why_not}")
        elif unit.dimension != (dimension or Dimension.none()):
            raise InputError(f"the result is a {(dimension or Dimension.none()).name} and cannot be given in {wanted}")
        return unit
    if isinstance(quantity, Quantity):
        return None if quantity.kind == "ratio" else parse_unit(kind(quantity.kind).default_unit(system))
    if quantity.letter in first:
        return first[quantity.letter][1]
    return None if dimension is None or dimension == Dimension.none() else _alike_unit(quantity, first)


def _alike_unit(quantity: Alike, first: dict[str, tuple[Argument, Unit]]) -> Unit:
    unit = parse_unit("1")
    for letter, power in sorted(quantity.powers, key=lambda pair: -pair[1]):
        own = first[letter][1]
        unit = unit * own**power if power > 0 else unit / own**-power
    return unit


def _unit_in_set(chosen: ConsistentSet, quantity: Quantity | Alike, dimension: Dimension | None) -> Unit | None:
    if dimension is None or (isinstance(quantity, Quantity) and quantity.kind == "ratio"):
        return None
    return chosen.unit_for(dimension)
