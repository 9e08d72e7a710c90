"""To pint quantities and back: the only place that touches pint, and only when a quantity is given or asked for."""

from __future__ import annotations

import sys
import threading
from fractions import Fraction
from functools import lru_cache
from typing import Any

from doubler.units.dimension import Dimension
from doubler.units.unit import Unit, UnitError

_lock = threading.Lock()
_registry: Any = None
_BASE_UNITS = ("meter", "kilogram", "second", "kelvin", "ampere", "radian")
_AXES = {"[length]": 0, "[mass]": 1, "[time]": 2, "[temperature]": 3, "[current]": 4}


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
        With the factor that pint's own registry gives; °C and °F keep their zero.

    Raises
    ------
    UnitError
        The quantity has a dimension that the trade does not use.
    """
    own = quantity._REGISTRY
    return quantity.magnitude, _unit_of(own, str(quantity.units), quantity.units)


@lru_cache(maxsize=1024)
def _unit_of(own: Any, text: str, units: Any) -> Unit:
    zero, one = own.Quantity(0.0, units).to_base_units(), own.Quantity(1.0, units).to_base_units()
    exponents: list[Fraction | int] = [0] * 6
    for name, power in one.dimensionality.items():
        if name not in _AXES:
            raise UnitError(f"{text} has the dimension {name}, which no formula here takes")
        exponents[_AXES[name]] = Fraction(power).limit_denominator(12)
    for name, power in units._units.items():
        if name in _ANGLES:
            exponents[5] += Fraction(power).limit_denominator(12)
    dimension = Dimension(tuple(exponents))
    scale = float(one.magnitude - zero.magnitude)
    change = text.startswith("delta_")
    kind = "change" if change else "energy" if "joule" in text else ""
    return Unit(_shown(text), dimension, scale, offset=float(zero.magnitude), system=_system(text), kind=kind)


_ANGLES = frozenset({"radian", "degree", "arcminute", "arcsecond", "turn", "revolution", "milliradian", "gradian"})
_US = (
    "inch",
    "foot",
    "pound",
    "psi",
    "kip",
    "slug",
    "degree_Fahrenheit",
    "ksi",
    "force_pound",
    "slinch",
    "thou",
)


def _system(text: str) -> Any:
    us = any(word in text for word in _US)
    metric = any(word in text for word in ("meter", "newton", "pascal", "gram", "joule", "watt", "bar"))
    return "us" if us and not metric else "metric" if metric else ""


def _shown(text: str) -> str:
    return text.replace(" ** ", "^").replace(" * ", "·").replace(" / ", "/")


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


@lru_cache(maxsize=1024)
def _pint_unit(unit: Unit) -> Any:
    """Return pint's unit for ours, but only where pint's factor is the same as ours."""
    from doubler.units.table import pint_names

    own = registry()
    if unit.offset:
        return own.Unit("degree_Celsius" if "C" in unit.text else "degree_Fahrenheit")
    if unit.kind == "change":
        return own.Unit({"Δ°C": "delta_degree_Celsius", "Δ°F": "delta_degree_Fahrenheit"}.get(unit.text, "kelvin"))
    names = pint_names()
    words = unit.text.replace("²", "^2").replace("·", " * ").replace("^", " ** ")
    for symbol in sorted(names, key=len, reverse=True):
        words = _replace_symbol(words, symbol, names[symbol])
    try:
        found = own.Unit(words)
        same = abs(float(own.Quantity(1.0, found).to_base_units().magnitude) - unit.scale) <= 1e-9 * unit.scale
        return found if same and _unit_of(own, str(found), found).dimension == unit.dimension else None
    except Exception:  # whatever pint cannot read is given in base units, which it can
        return None


def _replace_symbol(words: str, symbol: str, name: str) -> str:
    import re

    return re.sub(rf"(?<![A-Za-zµ_°]){re.escape(symbol)}(?![A-Za-zµ_°])", name, words)
