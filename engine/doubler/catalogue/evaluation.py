"""The numbers of a call put through its kernel: scaled, held against the limits, computed, scaled back."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from doubler.catalogue import blocks
from doubler.catalogue.annotations import Array
from doubler.catalogue.limits import Refusal
from doubler.catalogue.plan import CallError, Plan, folded
from doubler.catalogue.record import WorksheetFunction
from doubler.errors import ErrorValue


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
    rule
        The same without the value: which limit it was.
    """

    lanes: Any
    value: ErrorValue
    reason: str
    rule: str = ""


@dataclass(frozen=True, slots=True)
class Outcome:
    """What a kernel gave: values in the result's unit (NaN where failed), and the failures."""

    values: Any
    failures: tuple[Failure, ...] = ()


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
        return _evaluate_long(function, plan, values, lanes)
    scaled = scaled_values(plan, values)
    if not within_limits(function, scaled):
        return _evaluate_valid_lanes(function, plan, scaled, values)
    return run_kernel(function, plan, scaled)


def scaled_values(plan: Plan, values: Sequence[Any]) -> list[Any]:
    """Bring all arguments to the kernel's units."""
    with np.errstate(all="ignore"):
        return [_scaled(*step) for step in zip(values, plan.factors, plan.offsets, strict=True)]


def _long_lanes(function: WorksheetFunction, values: Sequence[Any]) -> int:
    """Return how many lanes there are where evaluating in blocks pays and is possible, else 0."""
    if function.result.quantity is None:
        return 0
    longest = 0
    for argument, value in zip(function.arguments, values, strict=True):
        if isinstance(value, np.ndarray):
            if value.ndim != (2 if argument.entries else 1) or value.shape[0] not in (1, longest or value.shape[0]):
                return 0
            longest = max(longest, value.shape[0] if value.shape[0] > 1 else 0)
    return longest if longest > blocks.BLOCK else 0


def _evaluate_long(function: WorksheetFunction, plan: Plan, values: Sequence[Any], lanes: int) -> Outcome:
    """Evaluate block by block into one array; what is the same in all lanes is scaled and checked once."""
    plan = folded(plan)
    long = [isinstance(value, np.ndarray) and value.shape[0] > 1 for value in values]
    steps = list(zip(plan.factors, plan.offsets, strict=True))
    fixed = scaled_values(plan, [None if on else value for value, on in zip(values, long, strict=True)])
    fixed_limits = all(
        argument.limit is None or value is None or argument.limit.all_within(value)
        for argument, value in zip(function.arguments, fixed, strict=True)
    )
    limited = [(i, a.limit) for i, a in enumerate(function.arguments) if long[i] and a.limit is not None]
    varying = [(i, steps[i] != (None, 0.0)) for i, on in enumerate(long) if on]
    tail = _result_shape(function)
    out = np.empty((lanes, *tail))
    size = blocks.size_for(lanes)

    def share(start: int, stop: int) -> list[tuple[slice, Failure]]:
        failures: list[tuple[slice, Failure]] = []
        scaled, given = list(fixed), list(values)
        most = min(size, stop - start)
        room = {i: np.empty((most, *values[i].shape[1:])) for i, changed in varying if changed}
        marks = np.empty((most, *tail), dtype=bool)
        with np.errstate(all="ignore"):
            for begin in range(start, stop, size):
                piece = slice(begin, min(begin + size, stop))
                for index, _ in varying:
                    given[index] = values[index][piece]
                    scaled[index] = _scaled(given[index], *steps[index], room.get(index))
                # The limits are looked at after the kernel has run: its arguments are then in the core's cache. What it
                # gave for lanes outside them is thrown away.
                fault: Exception | None = None
                raw: Any = None  # the last block's memory, still in the core's cache, is taken for the next
                try:
                    raw = function.kernel(*scaled)
                except Exception as error:  # told below where the limits hold, else the limits are to blame
                    fault = error
                if not (fixed_limits and all(limit.all_within(scaled[i]) for i, limit in limited)) or not (
                    _conditions_hold(function, scaled)
                ):
                    outcome = _evaluate_valid_lanes(function, plan, scaled, given)
                elif fault is not None:
                    raise CallError(function.name, [str(fault)]) if isinstance(fault, Refusal) else fault
                else:
                    outcome = _into(function, plan, raw, out[piece], marks[: piece.stop - begin])
                for failure in outcome.failures:
                    out[piece] = outcome.values
                    failures.append((piece, failure))
        return failures

    return Outcome(out, _merged(lanes, blocks.in_shares(lanes, share)))


def _merged(lanes: int, found: Sequence[tuple[slice, Failure]]) -> tuple[Failure, ...]:
    """Put the failures of blocks together: one for each rule, with the reason of the first lane that broke it."""
    merged: dict[tuple[ErrorValue, str], Failure] = {}
    for piece, failure in found:
        key = (failure.value, failure.rule)
        if key not in merged:
            merged[key] = Failure(np.zeros(lanes, dtype=bool), failure.value, failure.reason, failure.rule)
        merged[key].lanes[piece] |= failure.lanes
    return tuple(merged.values())


def _into(function: WorksheetFunction, plan: Plan, raw: Any, out: Array, marks: Any) -> Outcome:
    """Scale what the kernel gave for a block into `out`; `marks` is room for one bool a number."""
    if plan.result_factor != 1.0:
        np.multiply(raw, plan.result_factor, out=out)
    else:
        out[...] = raw
    if plan.result_offset:
        out -= shift(plan)
    return Outcome(out) if _all_finite(out, marks) else _without_lost(function, out)


def _all_finite(values: Array, marks: Any) -> bool:
    """Return whether all numbers are finite; `marks` is room for one bool a number.

    The sum of numbers of which one is NaN or infinite is not finite: a finite one settles it in one quick pass. (One
    that is not may be the overflow of a sum of finite numbers: then each is looked at.)
    """
    if math.isfinite(np.einsum("i->", values.reshape(-1))):
        return True
    np.isfinite(values, out=marks)
    return bool(np.logical_and.reduce(marks, axis=None))


def _scaled(value: Any, factor: float | None, offset: float, out: Any = None) -> Any:
    """Bring an argument to the kernel's units; `out` may be longer than the value."""
    if not isinstance(value, np.ndarray) or (factor is None and not offset):
        return value
    room = None if out is None else out[: value.shape[0]]
    if factor is not None:
        value = np.multiply(value, factor, out=room)
    return np.add(value, offset, out=room) if offset else value


def within_limits(function: WorksheetFunction, scaled: Sequence[Any]) -> bool:
    """Return whether every argument, in the kernel's units, meets its limit and every condition holds."""
    arguments = function.arguments
    for argument, value in zip(arguments, scaled, strict=True):
        if argument.limit is not None and value is not None and not argument.limit.all_within(value):
            return False
    return _conditions_hold(function, scaled)


def _conditions_hold(function: WorksheetFunction, scaled: Sequence[Any]) -> bool:
    if not function.conditions:
        return True
    named = {argument.name: value for argument, value in zip(function.arguments, scaled, strict=True)}
    with np.errstate(all="ignore"):
        return all(bool(np.all(rule.check(named))) for rule in function.conditions)


def run_kernel(function: WorksheetFunction, plan: Plan, scaled: Sequence[Any]) -> Outcome:
    """Compute with arguments that meet their limits, and scale the result."""
    with np.errstate(all="ignore"):
        raw = _raw(function, scaled)
    if function.result.quantity is None:
        return Outcome(np.asarray(raw, dtype=object))
    values = np.asarray(raw if plan.result_factor == 1.0 else raw * plan.result_factor, dtype=np.float64)
    if plan.result_offset:
        values = values - shift(plan)
    return Outcome(values) if np.isfinite(values).all() else _without_lost(function, values)


def _raw(function: WorksheetFunction, scaled: Sequence[Any]) -> Any:
    try:
        return function.kernel(*scaled)
    except Refusal as refusal:
        raise CallError(function.name, [str(refusal)]) from refusal


def shift(plan: Plan) -> float:
    """Return what is taken off the result at last: the zero of °C or °F, in that unit."""
    return plan.result_offset / (plan.result_unit.scale if plan.result_unit else 1.0)


def _without_lost(function: WorksheetFunction, values: Array) -> Outcome:
    """Say which lanes have no finite result; NaN stands in them."""
    finite: Any = np.isfinite(values)
    lanes = finite
    for _ in range(function.result.extra_axes):
        lanes = lanes.all(axis=-1)
    why = "there is no finite result for these values"
    lost = Failure(~lanes, ErrorValue.NUM, why, why)
    return Outcome(np.where(finite, values, np.nan), (lost,))


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

    def fail(where: Any, value: ErrorValue, reason: str, rule: str) -> None:
        nonlocal good
        fresh = good & np.broadcast_to(where, shape)
        if fresh.any():
            failures.append(Failure(fresh, value, reason, rule))
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
            words = f"{argument.name} {argument.limit.words}"
            fail(where, ErrorValue.NUM, f"{words}; it is {shown}", words)
    named = {argument.name: value for argument, value in zip(arguments, scaled, strict=True)}
    for rule in function.conditions:
        with np.errstate(all="ignore"):
            fail(~np.asarray(rule.check(named), dtype=bool), ErrorValue.NUM, rule.words, rule.words)

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
            failures.append(Failure(where, failure.value, failure.reason, failure.rule))
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
