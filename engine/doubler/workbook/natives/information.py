"""What kind of value a cell holds: ISNUMBER and its kin, and NA."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from doubler.errors import ErrorValue
from doubler.workbook.lift import ScalarRule
from doubler.workbook.natives.registry import native


def _is_number(value: Any) -> bool:
    return isinstance(value, int | float) and not isinstance(value, bool)


_TESTS: dict[str, Callable[[Any], bool]] = {
    "ISNUMBER": _is_number,
    "ISTEXT": lambda value: isinstance(value, str),
    "ISNONTEXT": lambda value: not isinstance(value, str),
    "ISLOGICAL": lambda value: isinstance(value, bool),
    "ISBLANK": lambda value: value is None,
    "ISERROR": lambda value: isinstance(value, ErrorValue),
    "ISNA": lambda value: value is ErrorValue.NA,
    "ISERR": lambda value: isinstance(value, ErrorValue) and value is not ErrorValue.NA,
}

for _name, _test in _TESTS.items():
    native(_name, arguments="v", units="logical")(ScalarRule(_test))


@native("NA", arguments="", units="same")
def not_available() -> ErrorValue:
    """Return the error value #N/A."""
    return ErrorValue.NA
