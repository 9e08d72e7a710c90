"""Names for units that arithmetic made: kN over mm² is GPa."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from functools import lru_cache

from doubler.units import Dimension

_METRIC = (
    "mm", "m", "cm", "µm", "km", "mm^2", "m^2", "cm^2", "mm^3", "m^3", "cm^3", "mm^4", "m^4", "cm^4", "mm^6",
    "m^6",
    "N", "kN", "MN", "MPa", "kPa", "Pa", "GPa", "N·mm", "N·m", "kN·m", "kN·mm", "N/mm", "N/m", "kN/m",
    "N·mm^2", "N·m^2", "kN·m^2", "N/mm^3", "N/m^3", "kN/m^3", "kg", "g", "t", "kg/m^3", "kg/mm^3", "g/cm^3",
    "t/mm^3", "kg/m",
    "m/s", "mm/s", "km/h", "m/s^2", "mm/s^2", "s", "ms", "h", "Hz", "kHz", "rad/s", "K", "1/K", "1/mm", "1/m", "mm/N",
    "m/N", "W", "kW", "N/mm/K", "MPa/K", "MPa^2", "mm^2/N", "kg·m^2", "A", "V", "MPa·m^0.5", "kN·mm^2", "N^2", "kN^2",
    "mm/s", "µm/m", "%", "deg", "rad", "N·mm/rad", "m^3/s", "kg/s", "mm/K", "m^2/s",
)  # fmt: skip
_US = (
    "in", "ft", "in^2", "ft^2", "in^3", "ft^3", "in^4", "ft^4", "in^6", "lbf", "kip", "psi", "ksi", "Msi", "psf", "ksf",
    "lbf·in", "lbf·ft", "kip·in", "kip·ft", "lbf/in", "lbf/ft", "kip/in", "kip/ft", "lbf·in^2", "lbf/in^3", "lbf/ft^3",
    "lb", "lb/in^3", "lb/ft^3", "ft/s", "in/s", "ft/s^2", "in/s^2", "degR", "1/in", "1/ft", "in/lbf", "hp",
    "ksi·in^0.5",
    "mi", "mph", "slug", "psi^2", "ksi^2", "lbf^2", "in/min", "rpm", "lb/ft", "lb/in", "kip^2",
)  # fmt: skip


@lru_cache(maxsize=1)
def _table() -> dict[Dimension, list[tuple[float, str, str]]]:
    from doubler.units import UnitError, parse_unit

    table: dict[Dimension, list[tuple[float, str, str]]] = {}
    for system, texts in (("metric", _METRIC), ("us", _US)):
        for text in texts:
            try:
                unit = parse_unit(text)
            except UnitError:
                continue
            table.setdefault(unit.dimension.without_angle(), []).append((unit.scale, text, system))
    return table


@lru_cache(maxsize=4096)
def name_unit(dimension: Dimension, scale: float, system: str = "") -> str | None:
    """Return the usual name of a unit of that dimension and scale, or None where it has none.

    Parameters
    ----------
    dimension : Dimension
    scale : float
        Factor to coherent SI.
    system : {'metric', 'us', ''}
        The system to prefer where both have a name for it.
    """
    if dimension == Dimension.none():
        return {1.0: "1", 0.01: "%"}.get(round(scale, 12))
    fits = [(text, own) for known, text, own in _table().get(dimension, ()) if abs(known / scale - 1) < 1e-9]
    fits.sort(key=lambda pair: pair[1] != system if system else False)
    return fits[0][0] if fits else None


def names_of(dimension: Dimension, system: str = "") -> list[tuple[float, str]]:
    """Return the usual units of a dimension with their scales, those of the system first."""
    fits = sorted(_table().get(dimension, ()), key=lambda row: row[2] != system if system else False)
    return [(scale, text) for scale, text, _ in fits]


def power_text(exponents: Mapping[str, Fraction]) -> str:
    """Write units with their exponents: ``kN/mm^2``.

    Examples
    --------
    >>> power_text({"kN": Fraction(1), "mm": Fraction(-2)})
    'kN/mm^2'
    """
    over = [_raised(text, e) for text, e in exponents.items() if e > 0]
    under = [_raised(text, -e) for text, e in exponents.items() if e < 0]
    if not over and not under:
        return "1"
    top = "·".join(over) or "1"
    if not under:
        return top
    return f"{top}/{under[0]}" if len(under) == 1 else f"{top}/({'·'.join(under)})"


def _raised(text: str, exponent: Fraction) -> str:
    compound = any(sign in text for sign in "/·*^- ") and exponent != 1
    shown = f"({text})" if compound or ("/" in text) else text
    return shown if exponent == 1 else f"{shown}^{float(exponent):g}"
