"""The forms of a value at the edges of an evaluation: an input as lanes, a formula's result as its cell holds it."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np

from doubler.errors import ErrorValue, InputError
from doubler.workbook.evaluation import Where
from doubler.workbook.graph import Group
from doubler.workbook.lanes import Grid, Mixed, filled, from_scalars, scalars, shape_of, tidy
from doubler.workbook.lift import F8
from doubler.workbook.model import Address, Scalar
from doubler.workbook.program import Lambda
from doubler.workbook.references import address_text


def case_count(inputs: Mapping[Where, Any]) -> int:
    """Return how many cases the inputs hold; 1 where none of them varies."""
    counts = {len(value) for value in inputs.values() if isinstance(value, np.ndarray)}
    if len(counts) > 1:
        raise InputError(f"the inputs have unlike numbers of cases: {sorted(counts)}")
    return counts.pop() if counts else 1


def as_lanes(value: Any, sheet: str, address: Address) -> Any:
    """Bring an input into the form in which it is evaluated."""
    name = f"{sheet}!{address_text(address)}"
    if isinstance(value, np.ndarray):
        if value.ndim != 1:
            raise InputError(f"the input {name} must be a row of cases, not an array with {value.ndim} axes")
        if value.dtype == np.bool_:
            return value.reshape(1, -1)
        if value.dtype.kind in "fiu":
            numbers = value.astype(F8, copy=False)
            if not np.isfinite(numbers).all():
                case = int(np.flatnonzero(~np.isfinite(numbers))[0]) + 1
                raise InputError(f"the input {name} is no finite number in case {case}; give a number")
            return np.ascontiguousarray(numbers).reshape(1, -1)
        return from_scalars([_scalar(item, name) for item in value.tolist()], (1, len(value)))
    return _scalar(value, name)


def _scalar(value: Any, name: str) -> Scalar:
    if isinstance(value, bool | np.bool_):
        return bool(value)
    if isinstance(value, int | float | np.number):
        number = float(value)
        if not np.isfinite(number):
            raise InputError(f"the input {name} is {number}; give a finite number")
        return number
    if value is None or isinstance(value, str | ErrorValue):
        return value
    raise InputError(f"the input {name} is of no kind that a cell can hold: {value!r}")


def cell_value(value: Any, group: Group) -> Any:
    """Bring a program's result into the form in which a cell holds it."""
    if type(value) is float or (type(value) is np.ndarray and value.size > 1):
        return value
    if group.area is not None and isinstance(value, Grid):
        return value
    if isinstance(value, tuple):
        value = value[0] if len(value) == 1 else ErrorValue.VALUE
    if isinstance(value, Grid):
        value = value.cell(0, 0)
    value = tidy(value)
    if value is None:
        return 0.0
    if isinstance(value, Mixed):
        return filled(value)
    if isinstance(value, np.generic):
        return value.item()
    if isinstance(value, float | str | bool | ErrorValue | np.ndarray):
        return value
    return ErrorValue.CALC if isinstance(value, Lambda) else ErrorValue.VALUE


def shown(value: Any, lane: int, cases: int) -> Any:
    """Return one copy's values as users get them: a scalar, or an array over the cases."""
    if shape_of(value) == ():
        return value
    line = value if value.shape[0] == 1 else value[lane : lane + 1]
    if line.shape[1] == 1:
        return scalars(line)[0] if shape_of(line) else line
    if isinstance(line, Mixed):
        out = np.empty(cases, object)
        out[:] = scalars(line)
        return out
    return line[0]
