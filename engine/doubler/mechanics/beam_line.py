"""The deflection line of a single-span beam: end values from the supports, then one polynomial for all cases.

With x from the first end, v positive in the sense of the load and M positive where it makes the beam's middle go that
way, E I v'' = -M. Each case gives M0 and V0 (moment and shear at the first end) and the slope E I v'0; a couple's are
those of a force, differentiated by its place, since a couple is a pair of forces on a vanishing arm.
"""

from __future__ import annotations

from typing import Literal

import numpy as np

from doubler.catalogue.annotations import Values

Support = Literal["cantilever", "simply supported", "fixed-fixed", "propped"]


def _force_ends(supports: Support, a: Values, length: Values) -> tuple[Values, Values, Values]:
    """Return M0, V0 and E I v'0 of a unit force at a."""
    b = length - a
    if supports == "cantilever":
        return -a, 1.0, 0.0
    if supports == "simply supported":
        return 0.0, b / length, a * b * (length + b) / (6.0 * length)
    if supports == "fixed-fixed":
        return -a * b**2 / length**2, b**2 * (length + 2.0 * a) / length**3, 0.0
    prop = a**2 * (3.0 * length - a) / (2.0 * length**3)
    return prop * length - a, 1.0 - prop, 0.0


def _couple_ends(supports: Support, a: Values, length: Values) -> tuple[Values, Values, Values]:
    """Return M0, V0 and E I v'0 of a unit couple at a."""
    b = length - a
    if supports == "cantilever":
        return -1.0, 0.0, 0.0
    if supports == "simply supported":
        return 0.0, -1.0 / length, b**2 / (2.0 * length) - length / 6.0
    if supports == "fixed-fixed":
        return -b * (b - 2.0 * a) / length**2, -6.0 * a * b / length**3, 0.0
    prop = 3.0 * a * (2.0 * length - a) / (2.0 * length**3)
    return prop * length - 1.0, -prop, 0.0


def _load_ends(supports: Support, length: Values) -> tuple[Values, Values, Values]:
    """Return M0, V0 and E I v'0 of a unit load per length."""
    if supports == "cantilever":
        return -(length**2) / 2.0, length, 0.0
    if supports == "simply supported":
        return 0.0, length / 2.0, length**3 / 24.0
    if supports == "fixed-fixed":
        return -(length**2) / 12.0, length / 2.0, 0.0
    return -(length**2) / 8.0, 5.0 / 8.0 * length, 0.0


def _line(x: Values, ends: tuple[Values, Values, Values]) -> Values:
    moment, shear, slope = ends
    return slope * x - moment * x**2 / 2.0 - shear * x**3 / 6.0


def _slope(x: Values, ends: tuple[Values, Values, Values]) -> Values:
    moment, shear, slope = ends
    return slope - moment * x - shear * x**2 / 2.0


def force_deflection(
    supports: Support, x: Values, force: Values, a: Values, length: Values, rigidity: Values
) -> Values:
    """Return the deflection at x under a force at a."""
    return force / rigidity * (_line(x, _force_ends(supports, a, length)) + np.maximum(x - a, 0.0) ** 3 / 6.0)


def force_slope(supports: Support, x: Values, force: Values, a: Values, length: Values, rigidity: Values) -> Values:
    """Return the slope at x under a force at a."""
    return force / rigidity * (_slope(x, _force_ends(supports, a, length)) + np.maximum(x - a, 0.0) ** 2 / 2.0)


def couple_deflection(
    supports: Support, x: Values, couple: Values, a: Values, length: Values, rigidity: Values
) -> Values:
    """Return the deflection at x under a couple at a."""
    return couple / rigidity * (_line(x, _couple_ends(supports, a, length)) - np.maximum(x - a, 0.0) ** 2 / 2.0)


def couple_slope(supports: Support, x: Values, couple: Values, a: Values, length: Values, rigidity: Values) -> Values:
    """Return the slope at x under a couple at a."""
    return couple / rigidity * (_slope(x, _couple_ends(supports, a, length)) - np.maximum(x - a, 0.0))


def line_load_deflection(supports: Support, x: Values, load: Values, length: Values, rigidity: Values) -> Values:
    """Return the deflection at x under a load per length over the whole beam."""
    return load / rigidity * (_line(x, _load_ends(supports, length)) + x**4 / 24.0)


def line_load_slope(supports: Support, x: Values, load: Values, length: Values, rigidity: Values) -> Values:
    """Return the slope at x under a load per length over the whole beam."""
    return load / rigidity * (_slope(x, _load_ends(supports, length)) + x**3 / 6.0)
