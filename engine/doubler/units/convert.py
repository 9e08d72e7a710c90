"""Numbers from one unit to another, and factors in words."""

from __future__ import annotations

from fractions import Fraction
from typing import Any

from doubler.units.dimension import Dimension
from doubler.units.grammar import parse_unit
from doubler.units.table import atoms
from doubler.units.unit import Unit, UnitError


def factor(frm: Unit, to: Unit) -> float:
    """Return what a number in `frm` is multiplied by to stand in `to`, rounded once where both are exact."""
    if frm.exact is not None and to.exact is not None:
        return float(frm.exact / to.exact)
    return frm.scale / to.scale


def convert(value: Any, frm: Unit, to: Unit) -> Any:
    """Convert a number or an array.

    Parameters
    ----------
    value : float or array
    frm, to : Unit

    Returns
    -------
    float or array
        In `to`. An absolute temperature (°C, °F) moves with its zero; a difference does not.

    Raises
    ------
    UnitError
        The units are of unlike dimensions.

    Examples
    --------
    >>> convert(1.0, parse_unit("in"), parse_unit("mm"))
    25.4
    >>> convert(20.0, parse_unit("°C"), parse_unit("K"))
    293.15
    """
    if frm.dimension != to.dimension and frm.dimension.without_angle() != to.dimension.without_angle():
        raise UnitError(f"{frm.text} ({frm.dimension.name}) cannot be converted to {to.text} ({to.dimension.name})")
    if (frm.offset or to.offset) and "change" not in (frm.kind, to.kind):
        return (value * frm.scale + frm.offset - to.offset) / to.scale
    ratio = factor(frm, to)
    return value if ratio == 1.0 else value * ratio


def known_units_of(dimension: Dimension) -> list[Unit]:
    """Return the single units of that dimension, each once."""
    return list(dict.fromkeys(unit for unit in atoms().values() if unit.dimension == dimension and not unit.offset))


_SHOWN = (
    "MPa", "GPa", "kPa", "Pa", "psi", "ksi", "Msi", "N", "kN", "MN", "lbf", "kip", "mm", "m", "cm", "in", "ft",
    "µm", "N·m", "kN·m", "N·mm", "kN·mm", "lbf·in", "lbf·ft", "kip·in", "kip·ft", "mm^2", "cm^2", "m^2", "in^2",
    "ft^2", "mm^3", "cm^3", "m^3", "in^3", "mm^4", "cm^4", "m^4", "in^4", "N/mm", "kN/m", "N/m", "kN/mm", "lbf/in",
    "lbf/ft", "kip/in", "kg", "t", "lb", "s", "K", "rad", "deg", "1/K", "kg/m^3", "lb/in^3", "mm/mm", "µε", "%",
)  # fmt: skip


def name_for(dimension: Dimension, scale: float) -> str | None:
    """Return the familiar unit of that dimension and factor: kN/mm² is GPa; None where there is none.

    Examples
    --------
    >>> unit = parse_unit("kN/mm^2")
    >>> name_for(unit.dimension, unit.scale)
    'GPa'
    """
    for text in _SHOWN:
        unit = parse_unit(text)
        if unit.dimension == dimension and abs(unit.scale - scale) <= 1e-9 * scale:
            return text
    return None


def factor_in_words(ratio: float) -> str:
    """Say by how much a number is off.

    Parameters
    ----------
    ratio : float
        Number found over number right.

    Examples
    --------
    >>> factor_in_words(1000.0)
    '1000 times too large'
    >>> factor_in_words(1 / 25.4)
    '25.4 times too small'
    """
    if ratio >= 1:
        return f"{_plain(ratio)} times too large"
    return f"{_plain(1 / ratio)} times too small"


def _plain(number: float) -> str:
    rounded = float(f"{number:.7g}")
    if rounded == int(rounded) and rounded < 1e7:
        return str(int(rounded))
    power = Fraction(rounded).limit_denominator(1)
    if rounded >= 1e7 and power > 0 and set(str(int(rounded)).lstrip("1")) <= {"0"}:
        return f"10^{len(str(int(rounded))) - 1}"
    return f"{rounded:.7g}" if rounded < 1e7 else f"{rounded:.6g}"
