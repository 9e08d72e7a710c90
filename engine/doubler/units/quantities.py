"""The kinds of quantity that an argument can ask for, and which units each accepts.

Two quantities of one dimension are told apart here: a moment is no energy, a temperature no temperature difference,
an angle no ratio, a rotational speed no frequency.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from fractions import Fraction

from doubler.units import table
from doubler.units.dimension import Dimension, name_dimensions
from doubler.units.grammar import parse_unit
from doubler.units.table import ANGLE, ENERGY, FORCE, LENGTH, MASS, NONE, PRESSURE, TEMPERATURE, TIME
from doubler.units.unit import Unit, UnitError

_WEIGHT = LENGTH / TIME**2


@dataclass(frozen=True, slots=True)
class QuantityKind:
    """A kind of quantity.

    Attributes
    ----------
    name
        ``"force"``, ``"second_moment"`` …
    dimension
        Its dimension.
    metric, us
        The unit of a result where none was asked for.
    example
        A value to copy into a cell.
    """

    name: str
    dimension: Dimension
    metric: str
    us: str
    example: str

    @property
    def dimensionless(self) -> bool:
        """Whether a bare number is a value of it: ratios and strains."""
        return self.dimension.is_none

    @property
    def words(self) -> str:
        """The name as words."""
        return self.name.replace("_", " ")

    @property
    def article_name(self) -> str:
        """The name with its article: ``a force``, ``an area``."""
        return f"{'an' if self.name[0] in 'aeiou' else 'a'} {self.words}"

    def default_unit(self, system: str) -> str:
        """Return the unit of a result where none was asked for."""
        return self.us if system == "us" else self.metric

    def accepts(self, unit: Unit) -> str | None:
        """Return None where a value in `unit` can be such a quantity, else one sentence that says why not.

        Examples
        --------
        >>> kind("force").accepts(parse_unit("kN"))
        >>> kind("force").accepts(parse_unit("lb"))
        'lb is a mass and a force is due; write lbf'
        """
        if self._fits(unit):
            return self._refuse_alike(unit)
        mend = self._mend(unit)
        return f"{unit.text} is {_with_article(unit)} and {self.article_name} is due; write {mend}"

    def _fits(self, unit: Unit) -> bool:
        if unit.dimension == self.dimension:
            return True
        # The radian is a ratio: a shear strain, a curvature or a stiffness may be given with or without it.
        angle_free = unit.dimension.without_angle() == self.dimension.without_angle()
        return angle_free and self.name in _ANGLE_OR_NOT

    def _refuse_alike(self, unit: Unit) -> str | None:
        if self.name in _NO_ENERGY and unit.kind == "energy":
            return f"{unit.text} is an energy and {self.article_name} is due; write {self.metric}"
        if self.name == "temperature" and unit.kind == "change":
            return f"{unit.text} is a temperature difference and a temperature is due; write {unit.text.lstrip('Δ')}"
        return None

    def _mend(self, unit: Unit) -> str:
        if self.name == "acceleration" and unit.text == "g":
            return "g0 for the acceleration of free fall, else m/s^2"
        if unit.dimension == self.dimension / _WEIGHT * Dimension.none() or unit.dimension * _WEIGHT == self.dimension:
            if unit.system == "us":
                return _POUNDS.sub("lbf", unit.text) if _POUNDS.search(unit.text) else self.us
            return f"{self.metric} (the weight of 1 kg is 9.80665 N)" if self.name == "force" else self.metric
        if self.name == "frequency" and unit.dimension == ANGLE / TIME:
            return f"Hz (1 {unit.text} is {unit.scale / 6.283185307179586:.6g} Hz)"
        if self.name == "angular_speed" and unit.dimension == NONE / TIME:
            return "rpm or rad/s (1 Hz is 60 rpm)"
        if self.name == "angle" and unit.dimension.is_none:
            return "deg or rad"
        if self.name == "ratio" and unit.dimension == ANGLE:
            return "a pure number"
        if self.dimensionless:
            return "a pure number" if self.name == "ratio" else f"{self.metric} or µε"
        return self.metric if unit.system != "us" else self.us


def _with_article(unit: Unit) -> str:
    if unit.dimension.is_none:
        return "a ratio"
    if unit.kind == "energy":
        return "an energy"
    name = unit.dimension.name
    if "^" in name or "·" in name:
        return f"a quantity of {name}"
    return f"{'an' if name[0] in 'aeiou' else 'a'} {name.replace('_', ' ')}"


_POUNDS = re.compile(r"(?<![A-Za-z])(?:lbs|lbm|lb|pounds|pound)(?![A-Za-z])")
_ANGLE_OR_NOT = frozenset(
    {
        "shear_strain",
        "curvature",
        "twist_rate",
        "rotational_stiffness",
        "torsional_stiffness",
        "rotational_compliance",
    }
)
_NO_ENERGY = frozenset({"moment"})

_PER_ANGLE = NONE / ANGLE
_SECOND = LENGTH**4
_TABLE: tuple[tuple[str, Dimension, str, str, str], ...] = (
    ("force", FORCE, "N", "lbf", "12 kN"),
    ("length", LENGTH, "mm", "in", "25 mm"),
    ("area", LENGTH**2, "mm^2", "in^2", "150 mm^2"),
    ("volume", LENGTH**3, "mm^3", "in^3", "4200 mm^3"),
    ("second_moment", _SECOND, "mm^4", "in^4", "1.2e6 mm^4"),
    ("warping_constant", LENGTH**6, "mm^6", "in^6", "3e9 mm^6"),
    ("moment", ENERGY, "N·m", "lbf·in", "1.5 kN·m"),
    ("stress", PRESSURE, "MPa", "ksi", "250 MPa"),
    ("pressure", PRESSURE, "MPa", "psi", "0.6 MPa"),
    ("modulus", PRESSURE, "GPa", "Msi", "70 GPa"),
    ("strain", NONE, "mm/mm", "in/in", "1500 µε"),
    ("shear_strain", NONE, "mm/mm", "in/in", "1500 µε"),
    ("ratio", NONE, "1", "1", "0.3"),
    ("angle", ANGLE, "deg", "deg", "30 deg"),
    ("temperature", TEMPERATURE, "°C", "°F", "20 °C"),
    ("temperature_change", TEMPERATURE, "K", "Δ°F", "60 K"),
    ("thermal_expansion", NONE / TEMPERATURE, "1/K", "1/°F", "23 µm/m/K"),
    ("energy", ENERGY, "J", "ft·lbf", "40 J"),
    ("energy_density", PRESSURE, "MJ/m^3", "in·lbf/in^3", "1.2 MJ/m^3"),
    ("stiffness", FORCE / LENGTH, "N/mm", "lbf/in", "5 kN/mm"),
    ("rotational_stiffness", ENERGY / ANGLE, "N·m/rad", "lbf·in/rad", "800 N·m/rad"),
    ("bending_stiffness", FORCE * LENGTH**2, "N·mm^2", "lbf·in^2", "8e9 N·mm^2"),
    ("torsional_stiffness", FORCE * LENGTH**2, "N·mm^2", "lbf·in^2", "8e9 N·mm^2"),
    ("plate_stiffness", ENERGY, "N·mm", "lbf·in", "9e5 N·mm"),
    ("line_load", FORCE / LENGTH, "N/mm", "lbf/in", "12 N/mm"),
    ("shear_flow", FORCE / LENGTH, "N/mm", "lbf/in", "40 N/mm"),
    ("moment_per_length", FORCE, "N·mm/mm", "lbf·in/in", "150 N·mm/mm"),
    ("angular_speed", ANGLE / TIME, "rpm", "rpm", "3000 rpm"),
    ("frequency", NONE / TIME, "Hz", "Hz", "50 Hz"),
    ("time", TIME, "s", "s", "10 s"),
    ("mass", MASS, "kg", "lb", "12 kg"),
    ("mass_per_length", MASS / LENGTH, "kg/m", "lb/in", "7.8 kg/m"),
    ("density", MASS / LENGTH**3, "kg/m^3", "lb/in^3", "2700 kg/m^3"),
    ("speed", LENGTH / TIME, "m/s", "ft/s", "5100 m/s"),
    ("acceleration", LENGTH / TIME**2, "m/s^2", "ft/s^2", "9.80665 m/s^2"),
    ("curvature", NONE / LENGTH, "1/m", "1/in", "0.02 1/m"),
    ("twist_rate", ANGLE / LENGTH, "deg/m", "deg/in", "1.5 deg/m"),
    ("compliance", NONE / PRESSURE, "1/GPa", "1/Msi", "0.014 1/GPa"),
    ("flexibility", LENGTH / FORCE, "mm/N", "in/lbf", "2e-5 mm/N"),
    ("stress_intensity", PRESSURE * LENGTH ** Fraction(1, 2), "MPa·√m", "ksi·√in", "30 MPa·√m"),
    ("stress_squared", PRESSURE**2, "MPa^2", "ksi^2", "2500 MPa^2"),
    ("stress_cubed", PRESSURE**3, "MPa^3", "ksi^3", "1e6 MPa^3"),
    ("voltage", table.VOLTAGE, "V", "V", "5 V"),
    ("voltage_ratio", NONE, "mV/V", "mV/V", "1.2 mV/V"),
    ("resistance", table.VOLTAGE / table.CURRENT, "Ω", "Ω", "350 Ω"),
    ("current", table.CURRENT, "A", "A", "0.01 A"),
    ("power", table.POWER, "W", "ft·lbf/s", "1.5 kW"),
)
KINDS: dict[str, QuantityKind] = {row[0]: QuantityKind(*row) for row in _TABLE}
"""Every kind of quantity, by name."""

name_dimensions({"ratio": NONE})
name_dimensions({row[0].replace("_", " "): row[1] for row in _TABLE})


def kind(name: str) -> QuantityKind:
    """Return the kind of quantity of that name; KeyError where there is none."""
    return KINDS[name]


class ConsistentSet:
    """A set of units that agree with one another, so that formulas need no factors.

    Parameters
    ----------
    name : str
        ``"N-mm"``, ``"N-m"``, ``"lbf-in"`` or ``"kip-in"``.
    length, force : str
        Its length and force; the mass follows, the time is the second, the angle the radian.
    temperature : str
        The unit of a temperature difference.
    """

    __slots__ = ("_angle", "_current", "_length", "_mass", "_temperature", "_time", "_units", "name")

    def __init__(self, name: str, length: str, force: str, temperature: str) -> None:
        self.name = name
        self._length, self._time = parse_unit(length), parse_unit("s")
        self._mass = parse_unit(force) / self._length * self._time**2
        self._temperature, self._current, self._angle = (
            parse_unit(temperature),
            parse_unit("A"),
            parse_unit("rad"),
        )
        self._units: dict[Dimension, Unit] = {}

    def unit_for(self, wanted: Dimension | str) -> Unit:
        """Return the set's unit of a dimension, or of a kind of quantity by name.

        Examples
        --------
        >>> [consistent_set("N-mm").unit_for(name).text for name in ("force", "stress", "moment", "density")]
        ['N', 'MPa', 'N·mm', 't/mm^3']
        """
        dimension = KINDS[wanted].dimension if isinstance(wanted, str) else wanted
        found = self._units.get(dimension)
        if found is None:
            found = self._units[dimension] = self._build(dimension)
        return found

    def _build(self, dimension: Dimension) -> Unit:
        parts = (self._length, self._mass, self._time, self._temperature, self._current, self._angle)
        scale: Fraction | float = Fraction(1)
        for part, power in zip(parts, dimension.exponents, strict=True):
            if power == 0:
                continue
            if power.denominator == 1 and part.exact is not None and isinstance(scale, Fraction):
                scale *= part.exact**power.numerator
            else:
                scale = float(scale) * part.scale ** float(power)
        system = self._length.system
        for text in _FAMILIAR:
            unit = parse_unit(text)
            if unit.dimension == dimension and unit.scale == float(scale) and unit.kind != "energy":
                return unit if unit.offset == 0 else Unit(unit.text, dimension, scale, system=system)
        return Unit(self._text(dimension), dimension, scale, system=system)

    def _text(self, dimension: Dimension) -> str:
        """Write a unit of the set by force and length (and time, temperature …)."""
        length, mass, *rest = dimension.exponents
        force = mass
        length = length - mass
        time = rest[0] + 2 * mass
        names = (self.name.split("-")[0], self.name.split("-")[1], "s", self._temperature.text, "A", "rad")
        powers = (force, length, time, *rest[1:])
        above = "·".join(_powered(n, p) for n, p in zip(names, powers, strict=True) if p > 0)
        below = [_powered(n, -p) for n, p in zip(names, powers, strict=True) if p < 0]
        under = f"({'·'.join(below)})" if len(below) > 1 else "".join(below)
        return (above or "1") + (f"/{under}" if below else "")

    def bare_input(self, name: str) -> Unit:
        """Return the unit in which a bare number of that kind is read; refuse angles and temperatures.

        Raises
        ------
        UnitError
            A set does not say whether an angle is in degrees or radians, nor a temperature in which degrees.
        """
        if name in ("angle", "twist_rate"):
            raise UnitError(f'a bare angle reads two ways in the set {self.name}; write "30 deg" or "0.52 rad"')
        if name == "temperature":
            raise UnitError(f'a bare temperature reads two ways in the set {self.name}; write "20 °C" or "68 °F"')
        if name == "angular_speed":
            raise UnitError(
                f'a bare rotational speed reads two ways in the set {self.name}; write "3000 rpm" or "314 rad/s"'
            )
        return self.unit_for(name)

    def __repr__(self) -> str:
        return f"<ConsistentSet {self.name}>"


def _powered(name: str, power: Fraction) -> str:
    if power == 1:
        return name
    return f"{name}^{power}" if power.denominator == 1 else f"{name}^({power})"


_FAMILIAR = (
    "N", "mm", "MPa", "N·mm", "t", "s", "K", "A", "rad", "mm^2", "mm^3", "mm^4", "t/mm^3", "N/mm", "m", "Pa", "kg",
    "N·m", "m^2", "m^3", "m^4", "kg/m^3", "N/m", "lbf", "in", "psi", "lbf·in", "slinch", "in^2", "in^3", "in^4",
    "lbf/in", "kip", "ksi", "kip·in", "kip/in", "Δ°F", "Hz", "rad/s", "1",
)  # fmt: skip
_SETS = {
    "N-mm": ("mm", "N", "K"),
    "N-m": ("m", "N", "K"),
    "lbf-in": ("in", "lbf", "Δ°F"),
    "kip-in": ("in", "kip", "Δ°F"),
}
CONSISTENT_SETS = tuple(_SETS)
_built: dict[str, ConsistentSet] = {}


def consistent_set(text: str) -> ConsistentSet | None:
    """Return the consistent set of that name, or None where the text names none.

    Raises
    ------
    UnitError
        The text differs from a set's name only by its case or its dash.

    Examples
    --------
    >>> consistent_set("N-mm").name
    'N-mm'
    >>> consistent_set("MPa") is None
    True
    """
    name = text.strip()
    if name in _SETS:
        found = _built.get(name)
        if found is None:
            found = _built.setdefault(name, ConsistentSet(name, *_SETS[name]))
        return found
    folded = name.casefold().replace("–", "-").replace("_", "-")
    for known in _SETS:
        if folded == known.casefold():
            raise UnitError(f"{text!r} is no consistent set; write {known}")
    return None
