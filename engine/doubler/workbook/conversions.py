"""Literals that may be conversion constants, and literals that are plain coefficients.

A formula's literal is *conversion-like* when, to the precision with which it is typed, it is a factor between two
units: a power of ten, 25.4, 6.895, 0.3048, 57.2958 … or a power, an inverse or a decimal multiple of one. Whether it
*is* a conversion is not for this module to say: that follows from the units on both sides of the formula.
"""

from __future__ import annotations

import math
from bisect import bisect_left
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache

INCH = 0.0254
FOOT = 0.3048
POUND = 0.45359237
GRAVITY = 9.80665
POUND_FORCE = POUND * GRAVITY

_STRONG_NAMES = {
    25.4: "25.4 (mm in an inch)",
    0.3048: "0.3048 (m in a foot)",
    4.4482216152605: "4.448222 (N in a lbf)",
    6.894757293168361: "6.894757 (MPa in a ksi)",
    0.45359237: "0.45359237 (kg in a lb)",
    9.80665: "9.80665 (m/s² in g)",
}


@dataclass(frozen=True, slots=True)
class Conversion:
    """A conversion constant that a literal may stand for.

    Attributes
    ----------
    factor
        The exact constant.
    strong
        True where engineers write the number hardly ever for another purpose, so that it wants an explanation when it
        converts nothing.
    """

    factor: float
    strong: bool


def _decimal_constants() -> list[float]:
    inch, foot, force = INCH, FOOT, POUND_FORCE
    found = [25.4**n for n in (1, 2, 3, 4, 6)] + [FOOT**n for n in (1, 2, 3, 4)]
    found += [
        force, force / inch**2, force / foot**2, force / inch, force / foot, force * inch, force * foot,
        force * inch**2, POUND, POUND / inch**3, POUND / foot**3, POUND / foot, POUND / inch,
        GRAVITY, GRAVITY / inch, GRAVITY / foot, 14.593902937206364,
        180 / math.pi, math.pi / 30, 745.6998715822702, 63025.35746439, 5252.113122032, 101325.0, 1055.05585262,
        1609.344, 1852.0 / 3600, force / inch**1.5, 25.4**0.5,
        5 / 9, 1 / 3.6, 360.0, 2 * math.pi, inch * force * inch,
    ]  # fmt: skip
    return found


def _build() -> tuple[list[float], list[float]]:
    pairs: dict[float, float] = {}
    for constant in _decimal_constants():
        for value in (constant, 1 / constant):
            mantissa = value / 10 ** math.floor(math.log10(value))
            pairs[mantissa] = value
    ordered = sorted(pairs)
    return ordered, [pairs[m] for m in ordered]


_MANTISSAS, _ORIGINALS = _build()
_STRONG_MANTISSAS = [c / 10 ** math.floor(math.log10(c)) for s in _STRONG_NAMES for c in (s, 1 / s, s * s, 1 / (s * s))]

_WHOLE = {
    float(n)
    for n in (
        3,
        5,
        9,
        12,
        16,
        27,
        30,
        36,
        60,
        144,
        180,
        200,
        360,
        550,
        1440,
        1728,
        1760,
        2000,
        2240,
        3600,
        5280,
        20736,
    )
} | {33000.0, 86400.0, 12e3, 12e6, 144e3, 3600e3}
_WHOLE_STRONG = {144.0, 1728.0, 20736.0, 12e3, 12e6, 144e3}


def typed_tolerance(value: float, text: str) -> float:
    """Return how far the true constant may lie from the literal, by the digits with which it is typed."""
    if value == 0.0:
        return 0.0
    digits = significant_digits(value, text)
    last = 10.0 ** (math.floor(math.log10(abs(value))) - digits + 1)
    # Truncated digits are met as often as rounded ones, once there are enough of them to be meant as a constant.
    return last if digits >= 3 else 0.5 * last if digits == 2 else 1e-9 * abs(value)


@lru_cache(maxsize=4096)
def significant_digits(value: float, text: str) -> int:
    """Count the significant digits of a literal as typed; without its text, those of its shortest form."""
    shown = text or repr(value)
    mantissa = shown.lower().split("e")[0].replace("-", "").replace("+", "").replace(",", "")
    digits = mantissa.replace(".", "").lstrip("0")
    if "." not in mantissa:
        digits = digits.rstrip("0") or "1"
    return max(len(digits), 1)


@lru_cache(maxsize=4096)
def conversion(value: float, text: str = "") -> Conversion | None:
    """Return the conversion constant that a literal may stand for, or None.

    Examples
    --------
    >>> conversion(6.895, "6.895").factor
    6.894757293168361
    >>> conversion(1000.0).strong, conversion(100.0).strong
    (True, False)
    >>> conversion(7.3) is None
    True
    """
    if value <= 0.0 or value == 1.0 or not math.isfinite(value):
        return None
    exponent = math.log10(value)
    if abs(exponent - round(exponent)) < 1e-12:
        power = round(exponent)
        return Conversion(10.0**power, power % 3 == 0)
    if value in _WHOLE or (1 / value) in _WHOLE:
        return Conversion(value, value in _WHOLE_STRONG)
    if abs(value - math.pi) < 1.0e-5:
        return Conversion(math.pi, False)
    if significant_digits(value, text) < 2:
        return None
    scale = 10.0 ** math.floor(exponent)
    mantissa, tolerance = value / scale, typed_tolerance(value, text) / scale
    best: float | None = None
    for index in range(bisect_left(_MANTISSAS, mantissa - tolerance), len(_MANTISSAS)):
        if _MANTISSAS[index] > mantissa + tolerance:
            break
        if best is None or abs(_MANTISSAS[index] - mantissa) < abs(best - mantissa):
            best = _MANTISSAS[index]
    if best is None:
        return None
    digits = significant_digits(value, text)
    if digits < 3 and not (math.isclose(best, 1.8) or math.isclose(best, 3.6) or (digits == 2 and value == 9.8)):
        return None
    strong = any(math.isclose(best, m, rel_tol=1e-9) for m in _STRONG_MANTISSAS) and digits >= 3
    return Conversion(best * scale, strong)


_SIMPLE_ROOTS = (
    math.sqrt(2),
    math.sqrt(3),
    1 / math.sqrt(2),
    1 / math.sqrt(3),
    math.pi,
    2 * math.pi,
    math.pi**2,
    2 / 3,
    1 / 3,
)


_LARGE_COEFFICIENTS = {105.0, 120.0, 128.0, 144.0, 162.0, 180.0, 185.0, 192.0, 256.0, 360.0, 384.0, 768.0, 1000.0}


@lru_cache(maxsize=4096)
def is_simple_coefficient(value: float, text: str = "") -> bool:
    """Return whether a literal is of the kind that formulas carry as pure numbers.

    Whole numbers up to 100 and the larger ones of beam, plate and angle formulas, decimals of at most two places below
    5, eighths below 10, and π, √2, √3 and their inverses as far as they are typed. A whole number such as 500 is rather
    a length or a load that was typed in.
    """
    size = abs(value)
    if size == 0.0:
        return True
    if size == round(size) and (size <= 100.0 or size in _LARGE_COEFFICIENTS):
        return True
    if 0.1 <= size < 5.0 and round(size, 2) == size:
        return True
    if size < 10.0 and (size * 8) == round(size * 8):
        return True
    tolerance = typed_tolerance(size, text.lstrip("+-"))
    return any(abs(size - root) <= tolerance for root in _SIMPLE_ROOTS)


def matches(product: float, factor: float, tolerance: float) -> bool:
    """Return whether a product of typed literals is a factor, within the precision of the typed digits."""
    return abs(product / factor - 1.0) <= max(tolerance, 1e-9)


_FRIENDLY = (
    (25.4, "25.4"), (6.894757293168361, "6.894757"), (4.4482216152605, "4.448222"), (0.3048, "0.3048"),
    (12.0, "12"), (144.0, "144"), (1728.0, "1728"), (60.0, "60"), (3600.0, "3600"), (GRAVITY, "9.80665"),
    (POUND, "0.45359237"), (180 / math.pi, "57.29578"), (645.16, "25.4²"), (25.4**3, "25.4³"), (25.4**4, "25.4⁴"),
)  # fmt: skip


def factor_words(factor: float) -> str:
    """Say a factor between the number as written and the number that is due.

    Examples
    --------
    >>> factor_words(1000.0)
    '1000 times too large'
    >>> factor_words(1 / 25.4)
    '25.4 times too small'
    """
    size, side = (factor, "large") if factor >= 1.0 else (1 / factor, "small")
    return f"{factor_text(size)} times too {side}"


def factor_text(size: float) -> str:
    """Write a factor as an engineer knows it."""
    for value, text in _FRIENDLY:
        if math.isclose(size, value, rel_tol=1e-6):
            return text
    power = math.log10(size) if size > 0 else 0.0
    if abs(power - round(power)) < 1e-9:
        return f"{10 ** round(power):d}" if 0 <= power <= 4 else f"1e{round(power)}"
    return f"{size:.7g}"


def as_fraction(value: float) -> Fraction:
    """Return an exponent as a fraction; 0.5, 0.333333 and 1.5 are meant as such."""
    return Fraction(value).limit_denominator(1000)
