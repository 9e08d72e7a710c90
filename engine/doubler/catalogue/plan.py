"""Factors resolved once for a combination of units, and the numbers put through a kernel with them.

Everything here is about one call shape: a function, the unit of each argument, and the unit wanted of the result. The
plan of such a shape is kept, so that a warm call costs the factors and the kernel.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np

from doubler.catalogue.annotations import Alike, Array, Quantity
from doubler.catalogue.limits import Refusal
from doubler.catalogue.record import Argument, WorksheetFunction
from doubler.errors import ErrorValue, InputError
from doubler.units import ConsistentSet, Dimension, Unit, consistent_set, kind, parse_unit
from doubler.units import factor as unit_factor

BLOCK = 8192
"""Lanes evaluated at a time, so that the live arrays stay in cache."""


class CallError(InputError):
    """A worksheet function could not be called so; every bad argument is named.

    Attributes
    ----------
    value
        The error value that a cell shows.
    """

    def __init__(self, function: str, reasons: Sequence[str], value: ErrorValue = ErrorValue.VALUE) -> None:
        super().__init__(f"{function}: " + "; ".join(reasons))
        self.reasons = tuple(reasons)
        self.value = value


@dataclass(frozen=True, slots=True)
class Failure:
    """Lanes without a result, and why.

    Attributes
    ----------
    lanes
        True where there is no result; one element stands for all.
    value
        The error value of those lanes.
    reason
        One sentence, with the first offending value.
    """

    lanes: Any
    value: ErrorValue
    reason: str


@dataclass(frozen=True, slots=True)
class Outcome:
    """What a kernel gave: values in the result's unit (NaN where failed), and the failures."""

    values: Any
    failures: tuple[Failure, ...] = ()


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
    """

    factors: tuple[float | None, ...]
    offsets: tuple[float, ...]
    units: tuple[Unit | None, ...]
    result_factor: float
    result_offset: float
    result_unit: Unit | None


@lru_cache(maxsize=1024)
def _internal_unit(dimension: Dimension, system: str) -> Unit:
    """Return the unit of the set in which kernels compute: a familiar set keeps round numbers round."""
    chosen = consistent_set("lbf-in" if system == "us" else "N-mm")
    assert chosen is not None
    return chosen.unit_for(dimension)


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


@lru_cache(maxsize=4096)
def plan_for(function: WorksheetFunction, units: tuple[Unit | None, ...], result: str | None) -> Plan:
    """Return the plan of one call shape.

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
        factor = 1.0 if unit is None else unit_factor(unit, _internal_unit(unit.dimension, system))
        factors.append(None if factor == 1.0 else factor)
        offsets.append(0.0 if unit is None or _is_change(argument.quantity) else unit.offset)
    try:
        result_unit = _result_unit(function, result, system, letters, first)
    except InputError as error:
        reasons.append(str(error))
        result_unit = None
    if reasons:
        raise CallError(function.name, reasons)
    scale = 1.0 if result_unit is None else unit_factor(_internal_unit(result_unit.dimension, system), result_unit)
    offset = 0.0 if result_unit is None or _is_change(function.result.quantity) else result_unit.offset
    return Plan(tuple(factors), tuple(offsets), units, scale, offset, result_unit)


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


def evaluate(function: WorksheetFunction, plan: Plan, values: Sequence[Any]) -> Outcome:
    """Put values through the kernel: scale, check the limits, compute, scale back.

    Parameters
    ----------
    function : WorksheetFunction
    plan : Plan
    values : sequence
        One an argument: a float64 array of at least one axis (lanes first; a column argument has its entries on the
        last axis), text (or a list of texts) for a text argument, None where omitted.

    Returns
    -------
    Outcome
        Values in the result's unit. A lane outside the limits has NaN and its reason.
    """
    lanes = _long_lanes(function, values)
    if lanes:
        out = np.empty(lanes)
        failures: list[Failure] = []
        for start in range(0, lanes, BLOCK):
            piece = slice(start, start + BLOCK)
            part = [v[piece] if isinstance(v, np.ndarray) and v.size > 1 else v for v in values]
            outcome = _evaluate_block(function, plan, part, out[piece])
            for failure in outcome.failures:
                where = np.zeros(lanes, dtype=bool)
                where[piece] = failure.lanes
                failures.append(Failure(where, failure.value, failure.reason))
        return Outcome(out, tuple(failures))
    return _evaluate_block(function, plan, values, None)


def _long_lanes(function: WorksheetFunction, values: Sequence[Any]) -> int:
    """Return how many lanes there are where evaluating in blocks pays and is possible, else 0."""
    if function.result.extra_axes or function.result.quantity is None:
        return 0
    longest = 0
    for argument, value in zip(function.arguments, values, strict=True):
        if isinstance(value, np.ndarray) and value.size > 1:
            if value.ndim != 1 or argument.entries or longest not in (0, value.size):
                return 0
            longest = value.size
    return longest if longest > 2 * BLOCK else 0


def _evaluate_block(function: WorksheetFunction, plan: Plan, values: Sequence[Any], out: Array | None) -> Outcome:
    scaled = list(values)
    for index, factor in enumerate(plan.factors):
        if factor is not None and scaled[index] is not None:
            scaled[index] = scaled[index] * factor
        if plan.offsets[index] and scaled[index] is not None:
            scaled[index] = scaled[index] + plan.offsets[index]
    if not within_limits(function, scaled):
        return _evaluate_valid_lanes(function, plan, scaled, values)
    return run_kernel(function, plan, scaled, out)


def within_limits(function: WorksheetFunction, scaled: Sequence[Any]) -> bool:
    """Return whether every argument, in the kernel's units, meets its limit and every condition holds."""
    arguments = function.arguments
    for argument, value in zip(arguments, scaled, strict=True):
        if argument.limit is not None and value is not None and not argument.limit.all_within(value):
            return False
    if function.conditions:
        named = {argument.name: value for argument, value in zip(arguments, scaled, strict=True)}
        return all(bool(np.all(rule.check(named))) for rule in function.conditions)
    return True


def run_kernel(function: WorksheetFunction, plan: Plan, scaled: Sequence[Any], out: Array | None = None) -> Outcome:
    """Compute with arguments that meet their limits, and scale the result."""
    try:
        with np.errstate(all="ignore"):
            raw = function.kernel(*scaled)
    except Refusal as refusal:
        raise CallError(function.name, [str(refusal)]) from refusal
    if function.result.quantity is None:
        return Outcome(np.asarray(raw, dtype=object))
    values = np.multiply(raw, plan.result_factor, out=out) if plan.result_factor != 1.0 or out is not None else raw
    values = np.asarray(values, dtype=np.float64)
    if plan.result_offset:
        values = values - plan.result_offset / (plan.result_unit.scale if plan.result_unit else 1.0)
    finite = np.isfinite(values)
    if finite.all():
        return Outcome(values)
    for _ in range(function.result.extra_axes):
        finite = finite.all(axis=-1)
    lost = Failure(~finite, ErrorValue.NUM, "there is no finite result for these values")
    return Outcome(np.where(np.isfinite(values), values, np.nan), (lost,))


def _evaluate_valid_lanes(
    function: WorksheetFunction, plan: Plan, scaled: Sequence[Any], given: Sequence[Any]
) -> Outcome:
    """Evaluate the lanes that meet every limit; the others get NaN and a reason."""
    arguments = function.arguments
    shape = np.broadcast_shapes(
        *(
            value.shape[:-1] if argument.entries else value.shape
            for argument, value in zip(arguments, scaled, strict=True)
            if isinstance(value, np.ndarray)
        )
    )
    good = np.ones(shape, dtype=bool)
    failures: list[Failure] = []

    def fail(where: Any, value: ErrorValue, reason: str) -> None:
        nonlocal good
        fresh = good & np.broadcast_to(where, shape)
        if fresh.any():
            failures.append(Failure(fresh, value, reason))
            good = good & ~fresh

    for index, argument in enumerate(arguments):
        value = scaled[index]
        if argument.limit is None or value is None:
            continue
        outside = ~argument.limit.within(value)
        if outside.any():
            shown = f"{np.broadcast_to(given[index], outside.shape)[outside][0]:.6g}"
            unit = plan.units[index]
            shown += f" {unit.text}" if unit is not None and unit.text not in ("", "1") else ""
            where = outside.any(axis=-1) if argument.entries else outside
            fail(where, ErrorValue.NUM, f"{argument.name} {argument.limit.words}; it is {shown}")
    named = {argument.name: value for argument, value in zip(arguments, scaled, strict=True)}
    for rule in function.conditions:
        with np.errstate(all="ignore"):
            fail(~np.asarray(rule.check(named), dtype=bool), ErrorValue.NUM, rule.words)

    blank = np.full(shape + _result_shape(function), np.nan)
    if function.result.quantity is None:
        blank = np.full(shape, "", dtype=object)
    if good.any():
        kept = [
            _lanes_of(value, good, shape, argument.entries) for argument, value in zip(arguments, scaled, strict=True)
        ]
        outcome = run_kernel(function, plan, kept)
        blank[good] = outcome.values
        for failure in outcome.failures:
            where = np.zeros(shape, dtype=bool)
            where[good] = failure.lanes
            failures.append(Failure(where, failure.value, failure.reason))
    return Outcome(blank, tuple(failures))


def _result_shape(function: WorksheetFunction) -> tuple[int, ...]:
    if function.result.names:
        return (len(function.result.names),)
    return (function.result.size, function.result.size) if function.result.size else ()


def _lanes_of(value: Any, good: Any, shape: tuple[int, ...], entries: bool) -> Any:
    if not isinstance(value, np.ndarray):
        return value
    whole = (*shape, value.shape[-1]) if entries else shape
    return np.broadcast_to(value, whole)[good]
