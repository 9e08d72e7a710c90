"""UNIT_REASON, the companion of our worksheet functions: why a cell, or a call, gives an error value."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.coerce import CannotEvaluateError
from doubler.workbook.lanes import Grid, from_scalars, scalars, shape_of, tidy
from doubler.workbook.natives.registry import native

NAME = "UNIT_REASON"

Told = Iterable[tuple[Any, str]]
"""Lanes that got an error value (True for all of them), and why."""


@native(NAME, arguments="o*a", units="text")
def reason_of_call(function: Any, *arguments: Any) -> Any:
    """Say why a call of one of our functions gives an error value: its name, then the arguments of the call."""
    from doubler.workbook.natives.ours import find

    name = tidy(function)
    if isinstance(name, Grid):
        name = tidy(name.cell(0, 0))
    if isinstance(name, ErrorValue):
        return f"the formula itself gives {name}"
    if not isinstance(name, str):
        if shape_of(name):
            raise CannotEvaluateError(f"{NAME} is given a function's name that differs from case to case")
        return ""
    rule = find(name.upper())
    if rule is None:
        return f"there is no worksheet function {name}"
    refusals: list[tuple[Any, str]] = []
    value = rule(refusals, arguments)
    shapes = [np.shape(lanes) for lanes, _ in refusals if lanes is not True]
    shape = shapes[0] if shapes else shape_of(value) if not isinstance(value, Grid) else ()
    return _texts(refusals, shape, lambda _: True)


def reason_of_cell(value: Any, told: Told, copy: int) -> Any:
    """Say why a cell shows an error value; empty text in the lanes in which it shows none.

    Parameters
    ----------
    value : scalar or array over lanes
        Of the cell.
    told : iterable
        The refusals of the group to which it belongs.
    copy : int
        Which of the group's copies it is.

    Returns
    -------
    str or array over lanes
    """
    value = tidy(value)
    own = [(lanes if lanes is True else lanes[copy if lanes.shape[0] > 1 else 0][None], text) for lanes, text in told]
    if not shape_of(value):
        values = [value]
        return _texts(own, (), lambda at: _itself(values[at]))
    found = scalars(value)
    return _texts(own, shape_of(value), lambda at: _itself(found[at]))


def _itself(value: Any) -> str | bool:
    return f"the formula itself gives {value}" if isinstance(value, ErrorValue) else False


def _texts(told: Sequence[tuple[Any, str]], shape: tuple[int, ...], otherwise: Any) -> Any:
    """Return the reasons of each lane joined; `otherwise` says what stands where there is none, False for no error."""
    texts = []
    for at in range(int(np.prod(shape))):
        instead = otherwise(at)
        mine = [text for lanes, text in told if lanes is True or lanes.ravel()[at if lanes.size > 1 else 0]]
        texts.append("" if instead is False else "; ".join(dict.fromkeys(mine)) or ("" if instead is True else instead))
    return from_scalars(texts, shape)
