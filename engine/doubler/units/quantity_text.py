"""A number and its unit in one text: ``12.5 kN``."""

from __future__ import annotations

import re
from functools import lru_cache

from doubler.units.grammar import parse_unit
from doubler.units.unit import Unit, UnitError

_QUANTITY = re.compile(r"^\s*(?P<number>[+\-−]?(?:\d+\.?\d*|\.\d+)(?:[eE][+\-−]?\d+)?)(?P<unit>.*)$", re.DOTALL)
_COMMAS = re.compile(r"^\s*[+\-−]?\d{1,3}(?:,\d{3})+(?:\.\d+)?(?=\s|[A-Za-z%°µμ]|$)")
_DECIMAL_COMMA = re.compile(r"^\s*[+\-−]?\d[\d. ]*,\d+")
_MIXED = re.compile(r"^\s*[+\-−]?\d+(?:\.\d+)?\s+\d+\s*/\s*\d+")
_FRACTION = re.compile(r"^\s*[+\-−]?\d+\s*/\s*\d+")
_TWO_NUMBERS = re.compile(r"^\s*[+\-−]?[\d.]+\s*[A-Za-z'\"]+\s*[+\-−]?\d")


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
    if _DECIMAL_COMMA.match(text):
        raise UnitError(f"{text!r} holds a comma in its number; write a decimal point and no thousands separators")
    if _MIXED.match(text) or _FRACTION.match(text):
        raise UnitError(f"{text!r} holds a fraction; write a decimal number, such as 1.25 in for 1 1/4 in")
    if _TWO_NUMBERS.match(text) and not re.match(r"^\s*[+\-−]?[\d.]+[eE]", text):
        second = re.match(r"^\s*[+\-−]?[\d.]+\s*([A-Za-z'\"]+)\s+[+\-−]?\d", text)
        if second:
            raise UnitError(f"{text!r} holds two numbers; write one, such as 42 in for 3 ft 6 in")
