"""The Python call of a worksheet function: numbers and arrays in consistent units, or pint quantities."""

from __future__ import annotations

import inspect
from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np

from doubler.catalogue.annotations import Alike, Quantity
from doubler.catalogue.evaluation import Outcome, evaluate
from doubler.catalogue.plan import CallError, Plan, plan_for
from doubler.catalogue.record import Argument, WorksheetFunction
from doubler.errors import InputError
from doubler.units import Unit, from_pint, is_pint_quantity, kind, to_pint


def call(function: WorksheetFunction, positional: Sequence[Any], named: Mapping[str, Any]) -> Any:
    """Evaluate with plain numbers (consistent units) or with pint quantities, and raise outside the limits.

    Parameters
    ----------
    function : WorksheetFunction
    positional, named
        The kernel's arguments: floats, arrays or pint quantities; text for choices and names.

    Returns
    -------
    float, numpy.ndarray, str or pint.Quantity
        A quantity where any argument was one.

    Raises
    ------
    CallError
        An argument has the wrong dimension, lacks its unit, or lies outside its limit of validity.
    TypeError
        Arguments are missing or unknown.
    """
    binding = inspect.signature(function.kernel).bind(*positional, **named)
    named_here = set(binding.arguments)
    binding.apply_defaults()
    given = [binding.arguments[argument.name] for argument in function.arguments]
    with_units = any(is_pint_quantity(item) for item in given)
    reasons: list[str] = []
    values: list[Any] = []
    units: list[Unit | None] = []
    single = True
    for argument, item in zip(function.arguments, given, strict=True):
        try:
            # A default stands in the kernel's own units.
            value, unit = _read(argument, item, with_units and argument.name in named_here)
        except InputError as error:
            reasons.append(str(error))
            continue
        if isinstance(value, np.ndarray):
            single = single and value.ndim <= (1 if argument.entries else 0)
            value = value[np.newaxis] if value.ndim == (1 if argument.entries else 0) else value
        values.append(value)
        units.append(unit)
    if reasons:
        raise CallError(function.name, reasons)
    plan = plan_for(function, tuple(units), None) if with_units else _plain_plan(len(values))
    outcome = evaluate(function, plan, values)
    if outcome.failures:
        raise CallError(
            function.name, list(dict.fromkeys(f.reason for f in outcome.failures)), outcome.failures[0].value
        )
    return _shaped(outcome, plan, single)


def _plain_plan(count: int) -> Plan:
    return Plan((None,) * count, (0.0,) * count, (None,) * count, 1.0, 0.0, None)


def _read(argument: Argument, item: Any, with_units: bool) -> tuple[Any, Unit | None]:
    if item is None or argument.is_text:
        return item, None
    unit: Unit | None = None
    if is_pint_quantity(item):
        item, unit = from_pint(item)
        if isinstance(argument.quantity, Quantity):
            why_not = kind(argument.quantity.kind).accepts(unit)
            if why_not:
                raise InputError(f"{argument.name}: {why_not}")
    elif with_units and _needs_unit(argument):
        raise InputError(f"{argument.name} is a bare number beside quantities; give it a unit too")
    return np.asarray(item, dtype=np.float64), unit


def _needs_unit(argument: Argument) -> bool:
    return isinstance(argument.quantity, Alike) or (
        isinstance(argument.quantity, Quantity) and not kind(argument.quantity.kind).dimensionless
    )


def _shaped(outcome: Outcome, plan: Plan, single: bool) -> Any:
    values = outcome.values
    if single and values.ndim:
        values = values[0]
    if isinstance(values, np.ndarray) and values.ndim == 0:
        values = values.item()
    elif isinstance(values, np.floating):
        values = float(values)
    return values if plan.result_unit is None else to_pint(values, plan.result_unit)
