"""The units that are read, each with its exact factor. What stands not here is refused, never guessed.

Factors: NIST SP 811 (2008), Appendix B, and BIPM SI Brochure; inch, pound, standard gravity and calorie-free derived
units are exact by definition there.
"""

from __future__ import annotations

import math
from fractions import Fraction
from functools import cache
from typing import NamedTuple

from doubler.units.dimension import Dimension
from doubler.units.unit import System, Unit

_D = Dimension.of
NONE = Dimension.none()
LENGTH, MASS, TIME, TEMPERATURE = _D(length=1), _D(mass=1), _D(time=1), _D(temperature=1)
CURRENT, ANGLE = _D(current=1), _D(angle=1)
FORCE = _D(length=1, mass=1, time=-2)
PRESSURE = _D(length=-1, mass=1, time=-2)
ENERGY = FORCE * LENGTH
POWER = ENERGY / TIME
VOLTAGE = POWER / CURRENT

INCH, FOOT, POUND, GRAVITY = (
    Fraction(254, 10000),
    Fraction(3048, 10000),
    Fraction(45359237, 10**8),
    Fraction(980665, 10**5),
)
LBF = POUND * GRAVITY
PSI = LBF / INCH**2
PREFIXES = {
    "T": Fraction(10**12),
    "G": Fraction(10**9),
    "M": Fraction(10**6),
    "k": Fraction(1000),
    "h": Fraction(100),
    "da": Fraction(10),
    "d": Fraction(1, 10),
    "c": Fraction(1, 100),
    "m": Fraction(1, 1000),
    "µ": Fraction(1, 10**6),
    "n": Fraction(1, 10**9),
}
PREFIX_WORDS = {
    "tera": "T",
    "giga": "G",
    "mega": "M",
    "kilo": "k",
    "hecto": "h",
    "deca": "da",
    "deci": "d",
    "centi": "c",
    "milli": "m",
    "micro": "µ",
    "nano": "n",
}
"""The prefixes as words, as pint spells them."""
_PREFIX_WORD = {"G": "giga", "M": "mega", "k": "kilo", "c": "centi", "m": "milli", "µ": "micro", "": ""}


class _Row(NamedTuple):
    symbol: str
    factor: Fraction | float
    dimension: Dimension
    system: System
    prefixes: str
    spellings: str
    pint: str


# symbol, factor to SI, dimension, system, prefixes admitted (space-separated), other spellings, pint's name
_ROWS = (
    _Row("m", Fraction(1), LENGTH, "metric", "n µ m c d k", "metre metres meter meters", "meter"),
    _Row("g", Fraction(1, 1000), MASS, "metric", "m k", "gram grams", "gram"),
    _Row("t", Fraction(1000), MASS, "metric", "", "tonne tonnes Mg", "metric_ton"),
    _Row("s", Fraction(1), TIME, "", "µ m", "sec second seconds", "second"),
    _Row("min", Fraction(60), TIME, "", "", "minute minutes", "minute"),
    _Row("h", Fraction(3600), TIME, "", "", "hr hour hours", "hour"),
    _Row("N", Fraction(1), FORCE, "metric", "m da k M G", "newton newtons", "newton"),
    _Row("Pa", Fraction(1), PRESSURE, "metric", "h k M G T", "pascal pascals", "pascal"),
    _Row("bar", Fraction(10**5), PRESSURE, "metric", "m", "bars", "bar"),
    _Row("atm", Fraction(101325), PRESSURE, "metric", "", "", "standard_atmosphere"),
    _Row("torr", Fraction(101325, 760), PRESSURE, "metric", "", "Torr", "torr"),
    _Row("kgf", GRAVITY, FORCE, "metric", "", "kp", "kilogram_force"),
    _Row("J", Fraction(1), ENERGY, "metric", "m k M", "joule joules", "joule"),
    _Row("W", Fraction(1), POWER, "metric", "m k M", "watt watts", "watt"),
    _Row("K", Fraction(1), TEMPERATURE, "", "", "kelvin kelvins", "kelvin"),
    _Row("A", Fraction(1), CURRENT, "", "m", "ampere amperes", "ampere"),
    _Row("V", Fraction(1), VOLTAGE, "", "µ m k", "volt volts", "volt"),
    _Row("Ω", Fraction(1), VOLTAGE / CURRENT, "", "m k M", "ohm ohms \u2126", "ohm"),
    _Row("rad", Fraction(1), ANGLE, "", "m µ", "radian radians", "radian"),
    _Row("deg", math.pi / 180.0, ANGLE, "", "", "° degree degrees", "degree"),
    _Row("arcmin", math.pi / 10800.0, ANGLE, "", "", "", "arcminute"),
    _Row("rev", 2.0 * math.pi, ANGLE, "", "", "revolution revolutions", "revolution"),
    _Row("rpm", math.pi / 30.0, ANGLE / TIME, "", "", "r/min rev/min", "rpm"),
    _Row("Hz", Fraction(1), NONE / TIME, "", "k M", "hertz", "hertz"),
    _Row("%", Fraction(1, 100), NONE, "", "", "percent pct", "percent"),
    _Row("‰", Fraction(1, 1000), NONE, "", "", "", ""),
    _Row("ppm", Fraction(1, 10**6), NONE, "", "", "", "ppm"),
    _Row("µε", Fraction(1, 10**6), NONE, "", "", "ue uε ustrain µstrain microstrain microstrains ustr", ""),
    _Row("mε", Fraction(1, 1000), NONE, "", "", "mstrain millistrain", ""),
    _Row("strain", Fraction(1), NONE, "", "", "ε", ""),
    _Row("in", INCH, LENGTH, "us", "µ", "inch inches", "inch"),
    _Row("ft", FOOT, LENGTH, "us", "", "foot feet", "foot"),
    _Row("yd", 3 * FOOT, LENGTH, "us", "", "yard yards", "yard"),
    _Row("mil", INCH / 1000, LENGTH, "us", "", "mils thou", "thou"),
    _Row("lb", POUND, MASS, "us", "", "lbs lbm pound pounds", "pound"),
    _Row("oz", POUND / 16, MASS, "us", "", "", "ounce"),
    _Row("slug", LBF / FOOT, MASS, "us", "", "slugs", "slug"),
    _Row("slinch", LBF / INCH, MASS, "us", "", "slinches blob", "slinch"),
    _Row("lbf", LBF, FORCE, "us", "", "", "pound_force"),
    _Row("ozf", LBF / 16, FORCE, "us", "", "", "ounce_force"),
    _Row("kip", 1000 * LBF, FORCE, "us", "", "kips klbf", "kip"),
    _Row("psi", PSI, PRESSURE, "us", "", "", "psi"),
    _Row("ksi", 1000 * PSI, PRESSURE, "us", "", "kpsi", "ksi"),
    _Row("Msi", 10**6 * PSI, PRESSURE, "us", "", "Mpsi", "megapsi"),
    _Row("psf", LBF / FOOT**2, PRESSURE, "us", "", "", ""),
    _Row("ksf", 1000 * LBF / FOOT**2, PRESSURE, "us", "", "", ""),
    _Row("pcf", POUND / FOOT**3, MASS / LENGTH**3, "us", "", "", ""),
    _Row("plf", LBF / FOOT, FORCE / LENGTH, "us", "", "", ""),
    _Row("klf", 1000 * LBF / FOOT, FORCE / LENGTH, "us", "", "", ""),
    _Row("g0", GRAVITY, LENGTH / TIME**2, "", "", "gn g_n", "standard_gravity"),
    _Row("1", Fraction(1), NONE, "", "", "", ""),
)
_DEGREE_SPELLINGS = {
    "C": ("°C", "degC", "℃", "deg C", "deg.C", "º C", "° C", "celsius", "Celsius"),
    "F": ("°F", "degF", "℉", "deg F", "deg.F", "° F", "fahrenheit", "Fahrenheit"),
}
_CHANGES = {
    "Δ°C": (Fraction(1), "metric", ("ΔC", "Δ°C", "delta_degC", "ΔdegC", "Δ °C", "delta °C", "K diff")),
    "Δ°F": (Fraction(5, 9), "us", ("ΔF", "Δ°F", "delta_degF", "ΔdegF", "Δ °F", "delta °F")),
    "ΔK": (Fraction(1), "", ("ΔK", "delta_K")),
}
COMPACT_MOMENTS = ("Nm", "Nmm", "Ncm", "kNm", "kNmm", "kNcm", "MNm", "MNmm", "daNm")


@cache
def atoms() -> dict[str, Unit]:
    """Return every spelling of a single unit, with its `Unit`."""
    found: dict[str, Unit] = {}
    for row in _ROWS:
        kind = "energy" if row.symbol == "J" else ""
        unit = Unit(row.symbol, row.dimension, row.factor, system=row.system, kind=kind)
        for spelling in (row.symbol, *row.spellings.split()):
            found.setdefault(spelling, unit)
        for prefix in row.prefixes.split():
            assert isinstance(row.factor, Fraction)
            prefixed = Unit(
                prefix + row.symbol, row.dimension, PREFIXES[prefix] * row.factor, system=row.system, kind=kind
            )
            spellings = [prefix + row.symbol]
            if prefix == "µ":
                spellings.append("u" + row.symbol)
            if prefix in _PREFIX_WORD:
                spellings += [
                    _PREFIX_WORD[prefix] + word for word in row.spellings.split() if word.isalpha() and len(word) > 3
                ]
            for spelling in spellings:
                found.setdefault(spelling, prefixed)
    offsets = {"C": (Fraction(1), 273.15, "metric"), "F": (Fraction(5, 9), 459.67 * 5.0 / 9.0, "us")}
    for letter, (scale, offset, system) in offsets.items():
        shown = f"°{letter}"
        degree = Unit(shown, TEMPERATURE, scale, offset=offset, system=_system(system))
        for spelling in _DEGREE_SPELLINGS[letter]:
            found.setdefault(spelling, degree)
    for shown, (scale, system, spellings_of) in _CHANGES.items():
        change = Unit(shown, TEMPERATURE, scale, system=_system(system), kind="change")
        for spelling in (shown, *spellings_of):
            found.setdefault(spelling, change)
    for compact in COMPACT_MOMENTS:
        cut = compact.index("N") + 1
        force, arm = found[compact[:cut]], found[compact[cut:]]
        found.setdefault(compact, force * arm)
    return found


def _system(name: str) -> System:
    return "metric" if name == "metric" else "us" if name == "us" else ""


@cache
def pint_names() -> dict[str, str]:
    """Return pint's name for each symbol that pint knows under some name, prefixes spelled as pint spells them."""
    words = {prefix: word for word, prefix in PREFIX_WORDS.items()}
    found: dict[str, str] = {}
    for row in _ROWS:
        if row.pint:
            found[row.symbol] = row.pint
            for prefix in row.prefixes.split():
                found[prefix + row.symbol] = words[prefix] + row.pint
    return found
