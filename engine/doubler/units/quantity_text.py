"""A number and its unit in one text: ``12.5 kN``."""

from __future__ import annotations

import re
from functools import lru_cache

from doubler.units.grammar import parse_unit
from doubler.units.unit import Unit, UnitError

_QUANTITY = re.compile(r"^\s*(?P<number>[+\-−]?(?:\d+\.?\d*|\.\d+)(?:[eE][+\-−]?\d+)?)(?P<unit>.*)$", re.DOTALL)
_COMMAS = re.compile(r"^\s*[+\-−]?\d{1,3}(?:,\d{3})+(?:\.\d+)?(?=\s|[A-Za-z%°µμ]|$)")
_COMMA = re.compile(r"^\s*[+\-−]?[\d. ]*,[\d ]*")
_FRACTION = re.compile(r"^\s*[+\-−]?(?:\d+(?:\.\d+)?\s*[\s\-]\s*)?\d+\s*/\s*\d+|^\s*[+\-−]?\d*\s*[½⅓⅔¼¾⅛⅜⅝⅞]")
_FEET = re.compile(
    r"^\s*(?P<feet>\d+(?:\.\d+)?)\s*(?:ft\.?|feet|foot|'|′)\s*[\s\-]?\s*(?P<inches>\d+(?:\.\d+)?)\s*"
    r"(?P<more>[\d/ \-]*)\s*(?:in\.?|inch|inches|\"|″|'')\s*$"
)
_SPACED = re.compile(r"^\s*[+\-−]?\d{1,3}(?:[ '’  _]\d{3})+(?![\d])")
_TIMES_TEN = re.compile(r"^\s*(?P<number>[+\-−]?[\d.]+)\s*[x×*·]\s*10\s*(?:\^|\*\*)?\s*(?P<power>[+\-−]?\d+)")
_DEGREES_MINUTES = re.compile(r"^\s*[+\-−]?[\d.]+\s*°\s*[\d.]+\s*['′]")
_POINTS = re.compile(r"^\s*[+\-−]?\d*\.\d*\.")
_TWO_NUMBERS = re.compile(r"^\s*[+\-−]?[\d.]+\s*[A-Za-z'\"]+\s+[+\-−]?\d")


@lru_cache(maxsize=16384)
def parse_quantity(text: str) -> tuple[float, Unit]:
    """Read a number and its unit.

    Parameters
    ----------
    text : str
        Such as ``12.5 kN``, ``3e6 psi``, ``-40 °C``.

    Returns
    -------
    value : float
    unit : Unit

    Raises
    ------
    UnitError
        No number, no unit, a decimal comma, a fraction, two numbers; the sentence says what to write.

    Examples
    --------
    >>> value, unit = parse_quantity("12.5 kN")
    >>> value, unit.text
    (12.5, 'kN')
    """
    _refuse_numbers(text)
    match = _QUANTITY.match(text)
    if match is None:
        raise UnitError(f"{text!r} does not begin with a number; write a number and its unit, such as 12.5 kN")
    value = float(match["number"].replace("−", "-"))
    if value in (float("inf"), float("-inf")):
        raise UnitError(f"{text!r} is larger than any number that can be kept")
    if value == 0.0 and re.search("[1-9]", re.split("[eE]", match["number"])[0]):
        raise UnitError(f"{text!r} is smaller than any number that can be kept")
    rest = match["unit"].strip()
    if not rest:
        raise UnitError(f"{text!r} has no unit; write it behind the number, such as {text.strip()} MPa")
    return value, parse_unit(rest)


def _refuse_numbers(text: str) -> None:
    if _COMMAS.match(text):
        raise UnitError(
            f"{text!r} reads two ways (a comma in the number); write {text.strip().replace(',', '', 9)!r} "
            f"or, for a decimal comma, a point"
        )
    if _COMMA.match(text):
        raise UnitError(f"{text!r} holds a comma in its number; write a decimal point and no thousands separators")
    feet = _FEET.match(text)
    if feet and not feet["more"].strip():
        whole = float(feet["feet"]) * 12.0 + float(feet["inches"])
        raise UnitError(f"{text!r} holds two numbers; write {whole:.10g} in")
    if _FRACTION.match(text) or feet:
        raise UnitError(f"{text!r} holds a fraction; write a decimal number, such as 1.25 in for 1 1/4 in")
    spaced = _SPACED.match(text)
    if spaced:
        number = re.sub(r"[^\d+\-−]", "", spaced[0])
        raise UnitError(
            f"{text!r} has a space or a mark in its number; write {(number + text[spaced.end() :])!r} if that is meant"
        )
    power = _TIMES_TEN.match(text)
    if power:
        raise UnitError(f"{text!r} holds a power of ten; write {power['number']}e{power['power']} and the unit")
    if _DEGREES_MINUTES.match(text):
        raise UnitError(f"{text!r} holds degrees and minutes; write decimal degrees, such as 30.25 deg")
    if _POINTS.match(text):
        raise UnitError(f"{text!r} has two points in its number; write one decimal point")
    if _TWO_NUMBERS.match(text) and not re.match(r"^\s*[+\-−]?[\d.]+[eE]", text):
        raise UnitError(f"{text!r} holds two numbers; write one number and its unit")
