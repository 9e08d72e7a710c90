"""Curved bars in bending in their plane, by Winkler and Bach."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Area, Force, Length, Moment, Stress
from doubler.catalogue.limits import NOT_NEGATIVE, POSITIVE, condition

IN_BAR = condition(
    "the radius asked for must lie in the bar",
    # The bar's own radii, converted from another unit, may miss it by the last digit.
    lambda inner_radius, depth, radius: (
        (radius >= inner_radius * (1.0 - 1e-12)) & (radius <= (inner_radius + depth) * (1.0 + 1e-12))
    ),
)
IN_ROUND_BAR = condition(
    "the radius asked for must lie in the bar",
    lambda centroid_radius, diameter, radius: (
        np.abs(radius - centroid_radius) <= 0.5 * diameter + 1e-12 * centroid_radius
    ),
)
ROUND_BAR = condition(
    "the radius of the centroid must be above half the diameter; the bar would cross its centre of curvature",
    lambda centroid_radius, diameter: centroid_radius > 0.5 * diameter,
)


def _excess(x: Any) -> Any:
    """Return artanh(x)/x − 1 for 0 < x < 1, to full relative accuracy for small x as well."""
    square = x * x
    series = square * (1 / 3 + square * (1 / 5 + square * (1 / 7 + square * (1 / 9 + square * (1 / 11 + square / 13)))))
    return np.where(x < 0.08, series, np.arctanh(x) / x - 1.0)


def _stress(force: Any, moment: Any, area: Any, inverse: Any, bend: Any, radius: Any) -> Any:
    """Return the stress at `radius`; `inverse` is ∫dA/r, and `bend` = centroid·inverse − area."""
    return force / area + moment * (area - radius * inverse) / (area * radius * bend)


def trapezium_integrals(inner_radius: Any, depth: Any, inner_width: Any, outer_width: Any) -> tuple[Any, Any, Any, Any]:
    """Return area, radius of the centroid, ∫dA/r, and centroid·∫dA/r − area without its cancellation."""
    middle = inner_radius + 0.5 * depth
    mean, slope = 0.5 * (inner_width + outer_width), (outer_width - inner_width) / depth
    excess = _excess(0.5 * depth / middle)
    area = mean * depth
    centroid = middle + slope * depth**2 / (12.0 * mean)
    inverse = (mean - slope * middle) * (depth / middle) * (1.0 + excess) + slope * depth
    bend = slope * depth**3 / (12.0 * middle) + centroid * depth * (mean / middle - slope) * excess
    return area, centroid, inverse, bend


def circle_integrals(centroid_radius: Any, diameter: Any) -> tuple[Any, Any, Any]:
    """Return area, ∫dA/r, and centroid·∫dA/r − area without its cancellation."""
    half = 0.5 * diameter
    root = np.sqrt((centroid_radius - half) * (centroid_radius + half))
    area = np.pi * half**2
    inverse = 2.0 * np.pi * half**2 / (centroid_radius + root)
    return area, inverse, area * half**2 / (centroid_radius + root) ** 2


@worksheet_function(
    "STRESS_CURVED_RECTANGLE",
    valid={"inner_radius": POSITIVE, "depth": POSITIVE, "width": POSITIVE},
    conditions=(IN_BAR,),
)
def curved_rectangle(
    force: Force, moment: Moment, inner_radius: Length, depth: Length, width: Length, radius: Length
) -> Stress:
    r"""Circumferential stress of a curved bar of rectangular section; tension positive.

    .. math:: \sigma = \frac{F}{A} + \frac{M (A - r A_m)}{A r (R A_m - A)}

    .. math:: A_m = b \ln\frac{r_i + h}{r_i}, \quad A = b h

    Parameters
    ----------
    force : force
        Axial force at the centroid of the section, tension positive.
    moment : moment
        Bending moment about the centroid: positive straightens the bar and stretches its inside.
    inner_radius : length
        Radius of the inside of the bar, from the centre of curvature.
    depth : length
        Depth of the section along the radius.
    width : length
        Width of the section.
    radius : length
        Radius at which the stress is asked for, from the centre of curvature.

    Returns
    -------
    stress : stress
        Circumferential stress, tension positive.

    Notes
    -----
    Linear elastic, plane sections, bending in the plane of curvature, which is a plane of symmetry. Radial
    stress is not in it, and wide thin flanges of a curved I or T distort and carry less. About a load beside
    the centroid, give its moment about the centroid and its force.

    References
    ----------
    E. Winkler, 1858, C. Bach; A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 9 (from
    memory).

    Examples
    --------
    >>> cell('=STRESS_CURVED_RECTANGLE("0 lbf","-8 kip*in","5.25 in","1.5 in","2.5 in","5.25 in","ksi")')
    -9.305232243
    """
    area, _, inverse, bend = trapezium_integrals(inner_radius, depth, width, width)
    return _stress(force, moment, area, inverse, bend, radius)


@worksheet_function(
    "STRESS_CURVED_CIRCLE",
    valid={"centroid_radius": POSITIVE, "diameter": POSITIVE},
    conditions=(
        ROUND_BAR,
        IN_ROUND_BAR,
    ),
)
def curved_circle(force: Force, moment: Moment, centroid_radius: Length, diameter: Length, radius: Length) -> Stress:
    r"""Circumferential stress of a curved bar of solid round section; tension positive.

    .. math:: \sigma = \frac{F}{A} + \frac{M (A - r A_m)}{A r (R A_m - A)}

    .. math:: A_m = 2\pi\left(R - \sqrt{R^2 - d^2/4}\right), \quad A = \frac{\pi d^2}{4}

    Parameters
    ----------
    force : force
        Axial force at the centroid of the section, tension positive.
    moment : moment
        Bending moment about the centroid: positive straightens the bar and stretches its inside.
    centroid_radius : length
        Radius of the bar's centre line, from the centre of curvature.
    diameter : length
        Diameter of the section.
    radius : length
        Radius at which the stress is asked for, from the centre of curvature.

    Returns
    -------
    stress : stress
        Circumferential stress, tension positive.

    Notes
    -----
    Linear elastic, plane sections, bending in the plane of curvature, which is a plane of symmetry. Radial
    stress is not in it, and wide thin flanges of a curved I or T distort and carry less. About a load beside
    the centroid, give its moment about the centroid and its force.

    References
    ----------
    E. Winkler, 1858, C. Bach; A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 9 (from
    memory).

    Examples
    --------
    >>> cell('=STRESS_CURVED_CIRCLE("10 kN","400 N*m","60 mm","30 mm","45 mm","MPa")')
    199.5806657
    """
    area, inverse, bend = circle_integrals(centroid_radius, diameter)
    return _stress(force, moment, area, inverse, bend, radius)


@worksheet_function(
    "STRESS_CURVED_TRAPEZIUM",
    valid={
        "inner_radius": POSITIVE,
        "depth": POSITIVE,
        "inner_width": NOT_NEGATIVE,
        "outer_width": NOT_NEGATIVE,
    },
    conditions=(
        IN_BAR,
        condition(
            "inner_width and outer_width are both zero; the section has no area",
            lambda inner_width, outer_width: inner_width + outer_width > 0.0,
        ),
    ),
)
def curved_trapezium(
    force: Force,
    moment: Moment,
    inner_radius: Length,
    depth: Length,
    inner_width: Length,
    outer_width: Length,
    radius: Length,
) -> Stress:
    r"""Circumferential stress of a curved bar of trapezium section; tension positive.

    .. math:: \sigma = \frac{F}{A} + \frac{M (A - r A_m)}{A r (R A_m - A)}

    .. math:: A_m = \frac{b_i r_o - b_o r_i}{h}\ln\frac{r_o}{r_i} - (b_i - b_o), \quad A = \frac{(b_i +
        b_o) h}{2}

    Parameters
    ----------
    force : force
        Axial force at the centroid of the section, tension positive.
    moment : moment
        Bending moment about the centroid: positive straightens the bar and stretches its inside.
    inner_radius : length
        Radius of the inside of the bar, from the centre of curvature.
    depth : length
        Depth of the section along the radius.
    inner_width : length
        Width of the section at the inside; zero for a triangle with its point there.
    outer_width : length
        Width of the section at the outside; zero for a triangle with its point there.
    radius : length
        Radius at which the stress is asked for, from the centre of curvature.

    Returns
    -------
    stress : stress
        Circumferential stress, tension positive.

    Notes
    -----
    Linear elastic, plane sections, bending in the plane of curvature, which is a plane of symmetry. Radial
    stress is not in it, and wide thin flanges of a curved I or T distort and carry less. About a load beside
    the centroid, give its moment about the centroid and its force.

    References
    ----------
    E. Winkler, 1858, C. Bach; A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 9 (from
    memory).

    Examples
    --------
    >>> cell('=STRESS_CURVED_TRAPEZIUM("10 kN","900 Nm","5 cm","4 cm","3 cm","1 cm","5 cm","MPa")')
    201.2505685
    """
    area, _, inverse, bend = trapezium_integrals(inner_radius, depth, inner_width, outer_width)
    return _stress(force, moment, area, inverse, bend, radius)


@worksheet_function(
    "STRESS_CURVED_GENERAL",
    valid={"area": POSITIVE, "centroid_radius": POSITIVE, "area_over_radius": POSITIVE, "radius": POSITIVE},
    conditions=(
        condition(
            "centroid_radius × area_over_radius must be above area; no section has such values",
            lambda area, centroid_radius, area_over_radius: centroid_radius * area_over_radius > area,
        ),
    ),
)
def curved_general(
    force: Force,
    moment: Moment,
    area: Area,
    centroid_radius: Length,
    area_over_radius: Length,
    radius: Length,
) -> Stress:
    r"""Circumferential stress of a curved bar of any symmetric section; tension positive.

    .. math:: \sigma = \frac{F}{A} + \frac{M (A - r A_m)}{A r (R A_m - A)}

    .. math:: A_m = \int \frac{dA}{r}

    Parameters
    ----------
    force : force
        Axial force at the centroid of the section, tension positive.
    moment : moment
        Bending moment about the centroid: positive straightens the bar and stretches its inside.
    area : area
        Area of the section.
    centroid_radius : length
        Radius of the centroid, R.
    area_over_radius : length
        The integral :math:`\int dA/r` over the section; of a section of parts, their sum.
    radius : length
        Radius at which the stress is asked for, from the centre of curvature.

    Returns
    -------
    stress : stress
        Circumferential stress, tension positive.

    Notes
    -----
    Linear elastic, plane sections, bending in the plane of curvature, which is a plane of symmetry. Radial
    stress is not in it, and wide thin flanges of a curved I or T distort and carry less. About a load beside
    the centroid, give its moment about the centroid and its force. Give the integral with all its digits: R
    A_m − A is a small difference.

    References
    ----------
    E. Winkler, 1858, C. Bach; A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 9 (from
    memory).

    Examples
    --------
    >>> cell('=STRESS_CURVED_GENERAL("0 N","900 Nm","8 cm2","68.3 mm","12.0284 mm","50 mm","MPa")')
    207.4330586
    """
    bend = centroid_radius * area_over_radius - area
    return _stress(force, moment, area, area_over_radius, bend, radius)
