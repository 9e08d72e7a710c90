"""Calls of a form that was met before: the same function, texts and units, and other numbers.

Reading a call means finding what its texts and units say; a recalculation asks the same of ten thousand cells that
differ in their numbers alone. What was found is kept for each form, so that such a call costs its factors, its limits
and its kernel. Whatever is not plainly of a known form, or has no result, is left to the general way, which says why.
"""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any, TypeAlias

import numpy as np

from doubler.catalogue.evaluation import scaled_values, shift
from doubler.catalogue.one_cell import Bound
from doubler.catalogue.plan import Plan
from doubler.catalogue.record import WorksheetFunction
from doubler.units import Unit

MOST_FORMS = 20_000
"""Forms kept; a sheet has a few for each function that it uses."""

_QUANTITY = re.compile(r"([+-]?\d+(?:\.\d+)?) ([^\W\d_][^,;]*)", re.ASCII).fullmatch
"""A plain number, a blank, and text that begins with a letter."""

Form: TypeAlias = tuple[Any, ...]


@dataclass(frozen=True, slots=True)
class Familiar:
    """What is known of calls of one form.

    Attributes
    ----------
    fixed
        The kernel's arguments, with None in the places of the numbers.
    places
        For each number: which argument it is, its factor (None for none) and what is added.
    factor, shift
        Of the result.
    unit
        Of the result; its text where the cell beside shows it.
    """

    fixed: tuple[Any, ...]
    places: tuple[tuple[int, float | None, float], ...]
    factor: float
    shift: float
    unit: Unit | None
    shown: str | None


_known: dict[Form, Familiar] = {}


def form_of(function: WorksheetFunction, arguments: Sequence[Any]) -> tuple[Form, list[float]] | None:
    """Return the form of a call and its numbers; None where an argument is no number, text, or value with its unit."""
    declared = function.arguments
    count = len(declared)
    marks: list[Any] = [function.kernel]
    numbers: list[float] = []
    for index, given in enumerate(arguments):
        kind = type(given)
        if kind is float:
            numbers.append(given)
            marks.append(0)
        elif kind is str:
            found = None if index >= count or declared[index].is_text else _QUANTITY(given)
            if found is None:
                marks.append(given)
            else:
                numbers.append(float(found[1]))
                marks.append((found[2],))
        elif given is None:
            marks.append(None)
        elif (kind is list or kind is tuple) and len(given) == 1 and len(given[0]) == 2:
            value, unit = given[0]
            if type(value) is not float or type(unit) is not str:
                return None
            numbers.append(value)
            marks.append((unit, 1))
        else:
            return None
    return (tuple(marks), numbers) if numbers else None


def answer(
    function: WorksheetFunction, form: Form, numbers: Sequence[float]
) -> tuple[float, str | None, Unit | None] | None:
    """Return value, unit to show and unit of a call; None where its form is not known or it has no result."""
    known = _known.get(form)
    if known is None:
        return None
    scaled = list(known.fixed)
    for (index, factor, offset), number in zip(known.places, numbers, strict=True):
        value = number if factor is None else number * factor
        if offset:
            value += offset
        limit = function.arguments[index].limit
        if number - number != 0.0 or (limit is not None and not limit.all_within(value)):
            return None
        scaled[index] = np.array([value])
    try:
        with np.errstate(all="ignore"):
            if function.conditions:
                named = {argument.name: value for argument, value in zip(function.arguments, scaled, strict=True)}
                if not all(np.all(rule.check(named)) for rule in function.conditions):
                    return None
            raw = function.kernel(*scaled)
            result = float(raw.item() * known.factor - known.shift)
    except Exception:  # the general way meets it again and says what it is
        return None
    return (result, known.shown, known.unit) if math.isfinite(result) else None


def learn(
    function: WorksheetFunction,
    form: Form,
    numbers: Sequence[float],
    bound: Sequence[Bound],
    plan: Plan,
    show_unit: bool,
) -> None:
    """Keep what was found of a call that gave one finite number; each argument is a cell, or one with its unit."""
    if function.result.quantity is None or function.result.extra_axes or len(_known) >= MOST_FORMS:
        return
    values = [item.values for item in bound]
    wanted = [index for index, mark in enumerate(form[1:]) if mark == 0 or type(mark) is tuple]
    for index, number in zip(wanted, numbers, strict=True):
        read = values[index] if index < len(values) else None
        if not isinstance(read, np.ndarray) or read.shape != (1,) or read[0] != number:
            return
    if any(isinstance(value, list) for value in values):
        return
    fixed = scaled_values(plan, [None if index in wanted else value for index, value in enumerate(values)])
    unit = plan.result_unit
    _known[form] = Familiar(
        tuple(fixed),
        tuple((index, plan.factors[index], plan.offsets[index]) for index in wanted),
        plan.result_factor,
        shift(plan),
        unit,
        unit.text if show_unit and unit is not None else None,
    )
