"""What a formula's literals may stand for: gravity, a typed allowable, turns of a shaft, a slip."""

from __future__ import annotations

import math
import re

from doubler.units import Dimension, kind
from doubler.workbook.carried import NONE, Carried, Factor, Hidden, Reading
from doubler.workbook.conversions import conversion, is_simple_coefficient

DEGREE = math.pi / 180
GRAVITY = 9.80665
_LOAD, _MOMENT = kind("force").dimension, kind("moment").dimension
ACCELERATION = Dimension.of(length=1, time=-2)

EXPLAINS = re.compile(
    r"\bper (?:thousand|1000|million)\b|\bthousands?\b|\bmillions?\b|\bblocks?\b|\bcycles?\b|\bpercent\w*\b|"
    r"[x×]\s?10+\b|"
    r"\blimits?\b|\ballow\w*\b|\bimperfection\b|\btoleranc\w*\b|\bpermissible\b|\bmax(?:imum)?\.? (?:deflection|sag)\b|"
    r"\binitial\b|\bprecision\b|\bslope\b|\bbow\b|\bout[- ]of\b|\bmesh\b|\bstep\b|\bincrement\b|\bshim\b|"
    r"\bmisalignment\b|"
    r"\bL/\d+|\bcriteri\w+\b|\bdrift\b|\bserviceability\b",
    re.IGNORECASE,
)
"""Words of a label that explain a power of 1000 which converts nothing: a limit of span/1000, a number in thousands."""

NATURAL = (0.02, 50.0)
"""Between these lie the coefficients of formulas whose numbers carry no unit."""


def gravity(carried: Carried, dimension: Dimension, scale: float) -> Hidden | Reading | None:
    """Take a literal that is the acceleration of gravity for it; a reading is that by which the result misses."""
    for factor in carried.factors:
        if not factor.exponent or abs(factor.exponent) != 1:
            continue
        lacking = (dimension / carried.dimension) ** (1 / factor.exponent)
        if lacking != ACCELERATION:
            continue
        for unit_scale, value in ((1.0, 9.80665), (1e-3, 9806.65), (0.3048, 32.17405), (0.0254, 386.0886)):
            if abs(factor.value / value - 1) > 2e-3:
                continue
            sign = 1.0 if factor.exponent > 0 else -1.0
            own = [r for r in carried.readings if all(u.position != factor.position for u in r.used)]
            for reading in own:
                if math.isclose(reading.scale * unit_scale**sign, scale, rel_tol=2e-3):
                    return Hidden(factor.text or f"{factor.value:g}", ACCELERATION, unit_scale)
            if own:
                best = max(own, key=lambda r: len(r.used))
                return Reading(best.scale * unit_scale**sign)
    return None


_COEFFICIENTS = frozenset({24, 30, 32, 36, 48, 60, 64, 72, 96, 100, 120, 128, 144, 180, 192, 360, 384, 1000})
_STRESS = kind("stress").dimension


def typed_in(carried: Carried, dimension: Dimension, scale: float) -> Hidden | None:
    """Take a whole number for an allowable or a modulus typed into the formula: ``=400/D5-1``, ``/(210*B2)``."""
    for factor in carried.factors:
        if not factor.exponent or abs(factor.exponent) != 1 or factor.value < 20 or factor.value in _COEFFICIENTS:
            continue
        lacking = (dimension / carried.dimension) ** (1 / factor.exponent)
        if lacking == _STRESS or (dimension == NONE and lacking in (_LOAD, _MOMENT)):
            sign = 1 if factor.exponent > 0 else -1
            return Hidden(factor.text or f"{factor.value:g}", lacking, (scale / carried.readings[0].scale) ** sign)
    return None


_PLAIN = frozenset({0.25, 0.5, 1.0, 1.5, 2.0, 3.0, 4.0})


def is_odd_power(carried: Carried, dimension: Dimension) -> bool:
    """Return whether a broken power of a quantity with a coefficient is plainly empirical: ``=0.3*B1^(2/3)``."""
    broken = [e.denominator for e in (dimension / carried.dimension).exponents if e.denominator > 1]
    typed = [f.value for f in carried.factors if f.exponent and f.value != 1.0]
    if not broken or not typed:
        return False
    return max(broken) > 2 or any(value not in _PLAIN for value in typed)


def fitted(carried: Carried, dimension: Dimension, scale: float) -> Hidden | None:
    """Take a coefficient of a fit, ``=1.5+0.25*B1``, for the one that carries the unit."""
    for factor in carried.factors:
        if factor.exponent and factor.value != 1.0:
            power = 1 / factor.exponent
            need = (scale / carried.readings[0].scale) ** float(power)
            return Hidden(factor.text or f"{factor.value:g}", (dimension / carried.dimension) ** power, need)
    return None


def slip(carried: Carried, reading: Reading) -> Factor | None:
    """Return a literal that looks like a conversion, acts on the whole, and converts nothing."""
    if reading.weight or (carried.dimension == NONE and math.isclose(reading.scale, 1.0)):
        return None
    found: Factor | None = None
    product = 1.0
    for factor in carried.factors:
        held = conversion(factor.value, factor.text)
        if held is None or not held.strong or not factor.common or not factor.exponent or factor.cell is not None:
            continue
        if abs(factor.value / GRAVITY - 1) < 2e-3:
            continue
        product *= factor.value ** float(factor.exponent)
        found = found or factor
    return found if found is not None and abs(product - 1) > 1e-3 else None


def carries_scale(carried: Carried, factor: float) -> bool:
    """Return whether an empirical literal may have taken a factor up: 0.0125 for 12.5/1000."""
    for item in carried.factors:
        if not item.exponent or is_simple_coefficient(item.value, item.text):
            continue
        if conversion(item.value, item.text) is not None or NATURAL[0] <= item.value <= NATURAL[1]:
            continue
        rest = item.value * factor ** float(-1 / item.exponent)
        if NATURAL[0] <= rest <= NATURAL[1]:
            return True
    return False


_TURNS = ("Hz", "rpm", "rev", "rps", "cps")
TURN = 2 * math.pi


def turns(carried: Carried, scale: float, text: str) -> Reading | None:
    """Return the reading of a conversion between turns and radians: ``=2*PI()*B1/60`` of rpm, ``=B1/60`` in Hz.

    A turn is 2π radians, and a hertz is a turn a second or a plain inverse second; only the π in the formula tells.
    """
    texts = [text, *(s.text for s in carried.sources)]
    if not any(mark in part for part in texts for mark in _TURNS):
        return None
    holds_pi = any(abs(f.value - math.pi) < 1e-5 or abs(f.value - TURN) < 1e-5 for f in carried.factors)
    counts_turns = any(mark in text for mark in ("Hz", "rev", "rps", "cps"))
    if holds_pi == counts_turns:
        return None
    for reading in carried.readings:
        if any(abs(u.value - math.pi) < 1e-5 for u in reading.used):
            continue
        for turn in (TURN, 1 / TURN):
            if math.isclose(reading.scale * turn, scale, rel_tol=1e-6):
                return reading
    return None
