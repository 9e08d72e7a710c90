"""To pint quantities and back: the only place that touches pint, and only when a quantity is given or asked for."""

from __future__ import annotations

import re
import sys
import threading
from fractions import Fraction
from functools import cache, lru_cache
from typing import Any

from doubler.units.grammar import parse_unit
from doubler.units.table import PREFIX_WORDS, PREFIXES, atoms, pint_names
from doubler.units.unit import Unit, UnitError

_lock = threading.Lock()
_reading = threading.RLock()
_registry: Any = None
_BASE_UNITS = ("meter", "kilogram", "second", "kelvin", "ampere", "radian")


def registry() -> Any:
    """Return the registry of our own in which quantities are given back; built once, under a lock.

    Pint's application registry is left as it is found. A quantity of any registry is taken.
    """
    global _registry  # noqa: PLW0603  # built once, when the first quantity is asked for
    if _registry is None:
        with _lock:
            if _registry is None:
                import pint

                _registry = pint.UnitRegistry()
    return _registry


def is_pint_quantity(item: Any) -> bool:
    """Return whether an object is a pint quantity, without importing pint where nobody did."""
    pint = sys.modules.get("pint")
    return pint is not None and isinstance(item, pint.Quantity)


def from_pint(quantity: Any) -> tuple[Any, Unit]:
    """Take a pint quantity apart.

    Returns
    -------
    value : float or array
    unit : Unit
        With the factor of our own table, whatever the registry or the release holds; °C and °F keep their zero.

    Raises
    ------
    UnitError
        The quantity is in a unit that our table does not hold.
    """
    return quantity.magnitude, _unit_of(tuple(quantity.unit_items()))


@lru_cache(maxsize=1024)
def _unit_of(items: tuple[tuple[str, Any], ...]) -> Unit:
    if not items:
        return parse_unit("1")
    parts = [(_known(name), Fraction(power).limit_denominator(12)) for name, power in items]
    if len(parts) == 1 and parts[0][1] == 1:
        return parts[0][0]
    whole = parse_unit("1")
    for part, power in sorted(parts, key=lambda pair: pair[1] < 0):
        change = Unit(part.text, part.dimension, part.exact or part.scale, system=part.system, kind=part.kind)
        whole = whole * change**power if power > 0 else whole / change**-power
    return whole


def _known(name: str) -> Unit:
    """Return our unit of pint's name for it, prefixes included."""
    symbol = _symbols().get(name)
    if symbol is not None:
        return atoms()[symbol]
    for word, prefix in PREFIX_WORDS.items():
        symbol = _symbols().get(name.removeprefix(word)) if name.startswith(word) else None
        if symbol is not None:
            unit = atoms()[symbol]
            scale = PREFIXES[prefix] * unit.exact if unit.exact is not None else float(PREFIXES[prefix]) * unit.scale
            return Unit(prefix + symbol, unit.dimension, scale, system=unit.system, kind=unit.kind)
    raise UnitError(
        f"doubler has no factor of its own for pint's {name}; convert the quantity first, as in "
        f'quantity.to("mm"), or quantity.to_base_units()'
    )


@cache
def _symbols() -> dict[str, str]:
    found = {name: symbol for symbol, name in pint_names().items()}
    return found | _OTHER_NAMES


_OTHER_NAMES = {
    "force_pound": "lbf",
    "force_ounce": "ozf",
    "force_kilogram": "kgf",
    "pound_force_per_square_inch": "psi",
    "kip_per_square_inch": "ksi",
    "turn": "rev",
    "revolutions_per_minute": "rpm",
    "degree_Celsius": "°C",
    "degree_Fahrenheit": "°F",
    "delta_degree_Celsius": "Δ°C",
    "delta_degree_Fahrenheit": "Δ°F",
}
"""What pint's releases call units that our table names otherwise."""


def to_pint(value: Any, unit: Unit) -> Any:
    """Return a pint quantity of our registry.

    Parameters
    ----------
    value : float or array
    unit : Unit

    Returns
    -------
    pint.Quantity
        In pint's unit of the same name where there is one, else in SI base units.
    """
    own = registry()
    units = _pint_unit(unit)
    if units is not None:
        return own.Quantity(value, units)
    base = own.dimensionless
    for name, power in zip(_BASE_UNITS, unit.dimension.exponents, strict=True):
        if power:
            base = base * own.Unit(name) ** float(power)
    return own.Quantity(value * unit.scale + unit.offset, base)


def _pint_unit(unit: Unit) -> Any:
    """Return pint's unit for ours, but only where pint's factor is the same as ours.

    Pint fills its tables when they are first read, and fails where several threads do that at once: one at a time.
    """
    with _reading:
        return _found_in_pint(unit, unit.text)


@lru_cache(maxsize=1024)
def _found_in_pint(unit: Unit, _text: str) -> Any:
    own = registry()
    if unit.offset:
        return own.Unit("degree_Celsius" if "C" in unit.text else "degree_Fahrenheit")
    if unit.kind == "change":
        return own.Unit({"Δ°C": "delta_degree_Celsius", "Δ°F": "delta_degree_Fahrenheit"}.get(unit.text, "kelvin"))
    try:
        found = own.Unit(_WORD.sub(_pint_word, unit.text.translate(_WRITTEN)))
        quantity = own.Quantity(1.0, found)
        same = abs(float(quantity.to_base_units().magnitude) - unit.scale) <= 1e-9 * unit.scale
        return found if same and _unit_of(tuple(quantity.unit_items())).dimension == unit.dimension else None
    except Exception:  # whatever pint cannot read is given in base units, which it can
        return None


_WRITTEN = str.maketrans({"²": "2", "³": "3", "⁴": "4", "⁶": "6", "·": "*", "-": "*", "^": None})
_WORD = re.compile(r"(?P<symbol>g0|[A-Za-zµ%Ω]+)(?P<power>\d+)?")


def _pint_word(match: re.Match[str]) -> str:
    unit = atoms()[match["symbol"]]
    power = f" ** {match['power']}" if match["power"] else ""
    return f"{pint_names()[unit.text]}{power}"
