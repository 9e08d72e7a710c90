"""The unit codes of the spreadsheet's own CONVERT function that engineers use."""

from __future__ import annotations

from functools import lru_cache

from doubler.units import Unit, UnitError, parse_unit

_CODES = {
    "g": "g", "sg": "slug", "lbm": "lb", "ozm": "oz", "ton": None,
    "m": "m", "mi": "mi", "in": "in", "ft": "ft", "yd": "yd",
    "yr": None, "day": "d", "d": "d", "hr": "h", "mn": "min", "min": "min", "sec": "s", "s": "s",
    "Pa": "Pa", "p": "Pa", "atm": "atm", "at": "atm", "psi": "psi", "N": "N", "lbf": "lbf",
    "J": "J", "flb": "ft·lbf", "W": "W", "w": "W", "HP": "hp", "h": "hp",
    "C": "°C", "cel": "°C", "F": "°F", "fah": "°F", "K": "K", "kel": "K", "Rank": "degR",
    "m2": "m^2", "m^2": "m^2", "in2": "in^2", "in^2": "in^2", "ft2": "ft^2", "ft^2": "ft^2",
    "m3": "m^3", "m^3": "m^3", "in3": "in^3", "in^3": "in^3", "ft3": "ft^3", "ft^3": "ft^3",
    "m/s": "m/s", "m/sec": "m/s", "m/h": "m/h", "mph": "mph", "kn": "kn",
}  # fmt: skip
_PREFIXED = ("m^2", "m2", "m^3", "m3", "Pa", "sec", "g", "m", "s", "p", "N", "J", "W", "w", "m/s")
_POWERS = {"m^2": 2, "m2": 2, "m^3": 3, "m3": 3}
_PREFIXES = {"G": 1e9, "M": 1e6, "k": 1e3, "h": 1e2, "e": 1e1, "d": 1e-1, "c": 1e-2, "m": 1e-3, "u": 1e-6, "n": 1e-9}


@lru_cache(maxsize=512)
def convert_code(code: str) -> Unit | None:
    """Return the unit of a code of CONVERT, or None where it is not known here.

    Examples
    --------
    >>> convert_code("mm").scale
    0.001
    """
    text = _CODES.get(code)
    if text is not None:
        return _parsed(text)
    for stem in _PREFIXED:
        prefix = code[: -len(stem)]
        if code.endswith(stem) and prefix in _PREFIXES:
            base_text = _CODES[stem]
            base = _parsed(base_text) if base_text else None
            if base is None:
                return None
            return Unit(
                code, base.dimension, base.scale * _PREFIXES[prefix] ** _POWERS.get(stem, 1), system=base.system
            )
    return None


def _parsed(text: str) -> Unit | None:
    try:
        return parse_unit(text)
    except UnitError:
        return None
