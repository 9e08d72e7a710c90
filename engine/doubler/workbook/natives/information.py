"""What kind of value a cell holds: ISNUMBER and its kin, N, T, TYPE, ERROR.TYPE, and NA."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.coerce import to_number
from doubler.workbook.lanes import Grid, Mixed, lane_by_lane
from doubler.workbook.lift import F8, NumericRule, over_grids
from doubler.workbook.natives.registry import native


class KindTest:
    """A test that asks what kind of value a lane holds, not which number."""

    __slots__ = ("holds",)

    def __init__(self, holds: Callable[[Any], bool]) -> None:
        self.holds = holds

    def __call__(self, value: Any) -> Any:  # noqa: D102  the class says it
        if isinstance(value, Grid):
            return over_grids(self, (value,))
        if isinstance(value, Mixed):
            truths = np.array([*(self.holds(item) for item in value.items), self.holds(0.0)], np.bool_)
            return truths[value.slot]
        if isinstance(value, np.ndarray):
            return np.full(value.shape, self.holds(0.0 if value.dtype == F8 else True), np.bool_)
        return self.holds(value)


_TESTS: dict[str, Callable[[Any], bool]] = {
    "ISNUMBER": lambda value: type(value) is float,
    "ISTEXT": lambda value: isinstance(value, str),
    "ISNONTEXT": lambda value: not isinstance(value, str),
    "ISLOGICAL": lambda value: isinstance(value, bool),
    "ISBLANK": lambda value: value is None,
    "ISERROR": lambda value: isinstance(value, ErrorValue),
    "ISNA": lambda value: value is ErrorValue.NA,
    "ISERR": lambda value: isinstance(value, ErrorValue) and value is not ErrorValue.NA,
}

for _name, _test in _TESTS.items():
    native(_name, arguments="v", units="logical")(KindTest(_test))


@native("NA", arguments="", units="same")
def not_available() -> ErrorValue:
    """Return the error value #N/A."""
    return ErrorValue.NA


@native("ISREF", arguments="p", units="logical")
def is_reference(place: Any) -> bool:
    """Whether the argument is a reference."""
    return not isinstance(place, ErrorValue)


def _even(number: Any) -> Any:
    return np.where(np.mod(np.trunc(number), 2.0) == 0.0, 1.0, 0.0)


_evenness = NumericRule(_even)


def _parity(wanted: float) -> Callable[[Any], Any]:
    def single(value: Any) -> Any:
        if isinstance(value, bool):
            return ErrorValue.VALUE
        number = to_number(value)
        if isinstance(number, ErrorValue):
            return number
        return float(_even(number)) == wanted

    def rule(value: Any) -> Any:
        if isinstance(value, np.ndarray) and value.dtype == F8:
            return _even(value) == wanted
        return lane_by_lane(single, [value])

    return rule


native("ISEVEN", arguments="v", units="logical")(_parity(1.0))
native("ISODD", arguments="v", units="logical")(_parity(0.0))


def _number_of(value: Any) -> Any:
    if isinstance(value, ErrorValue) or type(value) is float:
        return value
    return float(value) if isinstance(value, bool) else 0.0


def _text_of(value: Any) -> Any:
    return value if isinstance(value, str | ErrorValue) else ""


def _first(value: Any) -> Any:
    return value.cell(0, 0) if isinstance(value, Grid) else value


@native("N", arguments="r", units="same")
def number_of(value: Any) -> Any:
    """Number that a value stands for; 0 for text."""
    value = _first(value)
    if isinstance(value, np.ndarray) and value.dtype == F8:
        return value
    return lane_by_lane(_number_of, [value])


@native("T", arguments="r", units="text")
def text_of(value: Any) -> Any:
    """Return the value if it is text, else empty text."""
    return lane_by_lane(_text_of, [_first(value)])


def _type_of(value: Any) -> float:
    if isinstance(value, bool):
        return 4.0
    if isinstance(value, str):
        return 2.0
    return 16.0 if isinstance(value, ErrorValue) else 1.0


@native("TYPE", arguments="r", units="number")
def type_of(value: Any) -> Any:
    """Number of a value's kind."""
    if isinstance(value, Grid) and value.rows * value.columns > 1:
        return 64.0
    return lane_by_lane(_type_of, [_first(value)])


_ERROR_NUMBERS = {
    ErrorValue.NULL: 1.0,
    ErrorValue.DIV0: 2.0,
    ErrorValue.VALUE: 3.0,
    ErrorValue.REF: 4.0,
    ErrorValue.NAME: 5.0,
    ErrorValue.NUM: 6.0,
    ErrorValue.NA: 7.0,
    ErrorValue.GETTING_DATA: 8.0,
    ErrorValue.SPILL: 9.0,
    ErrorValue.CALC: 14.0,
}


@native("ERROR.TYPE", arguments="v", units="number")
def error_type(value: Any) -> Any:
    """Number of an error value; #N/A for anything else."""
    return lane_by_lane(
        lambda item: _ERROR_NUMBERS.get(item, ErrorValue.NA) if isinstance(item, ErrorValue) else ErrorValue.NA, [value]
    )
