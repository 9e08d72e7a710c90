"""CONVERT, with the spreadsheet program's own unit codes."""

from __future__ import annotations

from typing import Any

from doubler.errors import ErrorValue
from doubler.units import convert
from doubler.workbook.coerce import CannotEvaluateError, to_number, to_text
from doubler.workbook.convert_codes import convert_code
from doubler.workbook.lanes import Grid, lane_by_lane, shape_of
from doubler.workbook.lift import NumericRule
from doubler.workbook.natives.registry import native

_MULTIPLES = {
    "mi": ("m", 1609.344),
    "Nmi": ("m", 1852.0),
    "yd": ("m", 0.9144),
    "mph": ("m/s", 0.44704),
    "HP": ("W", 745.6998715822702),
    "h": ("W", 745.6998715822702),
    "PS": ("W", 735.49875),
    "yr": ("day", 365.25),
    "e": ("J", 1e-7),
    "BTU": ("J", 1055.05585262),
    "dyn": ("N", 1e-5),
    "dy": ("N", 1e-5),
}
"""Codes as multiples of another one. Sources: NIST SP 811 (2008), appendix B; the year of 365.25 days from the function
reference of Office Open XML (ISO/IEC 29500-1, 18.17.7.46)."""


def _known(code: str) -> tuple[Any, float]:
    """Return the unit of a code and a factor on it."""
    stem, factor = _MULTIPLES.get(code, (code, 1.0))
    unit = convert_code(stem)
    if unit is None:
        raise CannotEvaluateError(f"the unit code {code!r} of CONVERT is not known here")
    return unit, factor


def _factor(source: str, target: str) -> tuple[float, float] | ErrorValue:
    """Return factor and summand from one unit to another."""
    (a, times), (b, over) = _known(source), _known(target)
    if a.dimension != b.dimension:
        return ErrorValue.NA
    if a.offset or b.offset:
        zero = float(convert(0.0, a, b))
        return float(convert(1.0, a, b)) - zero, zero
    return a.scale * times / (b.scale * over), 0.0


def _single(number: Any, source: Any, target: Any) -> Any:
    value, a, b = to_number(number), to_text(source), to_text(target)
    for item in (value, a, b):
        if isinstance(item, ErrorValue):
            return item
    assert isinstance(value, float)
    found = _factor(str(a), str(b))
    return found if isinstance(found, ErrorValue) else value * found[0] + found[1]


@native("CONVERT", arguments="vvv", units="convert")
def converted(number: Any, source: Any, target: Any) -> Any:
    """Number in another unit."""
    if isinstance(source, str) and isinstance(target, str) and shape_of(number) and not isinstance(number, Grid):
        found = _factor(source, target)
        if isinstance(found, ErrorValue):
            return lane_by_lane(lambda n: n if isinstance(n, ErrorValue) else found, [number])
        factor, zero = found
        return NumericRule(lambda value: value * factor + zero)(number)
    return lane_by_lane(_single, [number, source, target])
