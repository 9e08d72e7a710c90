"""Hertz contact of bodies of any curvature: elliptical contact, pressure and size."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Angle, Force, Length, Modulus, Pressure, Ratio, row
from doubler.catalogue.limits import POISSON, POSITIVE, condition
from doubler.mechanics.contact import NOT_SMALL, is_small, plane_modulus

SemiAxes: Any = row(Length, "semi_axis_long", "semi_axis_short")

CURVED = condition(
    "the radii must not be zero; give a very large radius where a body is flat in one direction",
    lambda radius_1, radius_1_across, radius_2, radius_2_across: (
        (radius_1 != 0.0) & (radius_1_across != 0.0) & (radius_2 != 0.0) & (radius_2_across != 0.0)
    ),
)


def _relative_curvatures(
    radius_1: Any, radius_1_across: Any, radius_2: Any, radius_2_across: Any, angle: Any
) -> tuple[Any, Any]:
    """Return A ≤ B of the gap A·x² + B·y² between the surfaces."""
    first, second = 1.0 / radius_1 - 1.0 / radius_1_across, 1.0 / radius_2 - 1.0 / radius_2_across
    total = 0.5 * (1.0 / radius_1 + 1.0 / radius_1_across + 1.0 / radius_2 + 1.0 / radius_2_across)
    spread = 0.5 * np.sqrt(first**2 + second**2 + 2.0 * first * second * np.cos(2.0 * angle))
    return 0.5 * (total - spread), 0.5 * (total + spread)


POINT_CONTACT = condition(
    "the surfaces must curve apart in every direction, at most 10,000 times as fast in one as in the other; "
    "nearer to a line of contact take STRESS_HERTZ_CYLINDERS",
    lambda radius_1, radius_1_across, radius_2, radius_2_across, angle: _opens(
        *_relative_curvatures(radius_1, radius_1_across, radius_2, radius_2_across, angle)
    ),
)


def _opens(slow: Any, fast: Any) -> Any:
    return (slow > 0.0) & (fast <= 1e4 * slow)


def _axis_ratio(slow: Any, fast: Any) -> Any:
    """Return k = short / long semi-axis, where R_D(0, 1, k²) / R_D(0, k², 1) = B / A, by bisection on ln k."""
    from scipy.special import elliprd

    wanted = fast / slow
    low, high = np.full_like(wanted, -12.0), np.zeros_like(wanted)
    for _ in range(50):
        middle = 0.5 * (low + high)
        square = np.exp(2.0 * middle)
        too_round = elliprd(0.0, 1.0, square) / elliprd(0.0, square, 1.0) < wanted
        high, low = np.where(too_round, middle, high), np.where(too_round, low, middle)
    return np.exp(0.5 * (low + high))


def _semi_axes(force: Any, contact_modulus: Any, slow: Any, fast: Any) -> tuple[Any, Any]:
    from scipy.special import elliprd

    ratio = _axis_ratio(slow, fast)
    longer = np.cbrt(force * elliprd(0.0, ratio**2, 1.0) / (2.0 * np.pi * contact_modulus * slow))
    return longer, ratio * longer


def _is_small(
    force: Any,
    radius_1: Any,
    radius_1_across: Any,
    radius_2: Any,
    radius_2_across: Any,
    angle: Any,
    modulus: Any,
    poissons_ratio: Any,
    other_modulus: Any,
    other_poissons_ratio: Any,
) -> Any:
    """Return where even the short semi-axis is small: along the most curved direction nothing reaches less far."""
    slow, fast = _relative_curvatures(radius_1, radius_1_across, radius_2, radius_2_across, angle)
    if not np.all(_opens(slow, fast)):
        return True  # told by POINT_CONTACT
    contact = plane_modulus(modulus, poissons_ratio, other_modulus, other_poissons_ratio)
    shorter = _semi_axes(force, contact, slow, fast)[1]
    return is_small(
        shorter,
        np.minimum(np.abs(radius_1), np.abs(radius_1_across)),
        np.minimum(np.abs(radius_2), np.abs(radius_2_across)),
    )


_SMALL = condition(NOT_SMALL, _is_small)


@worksheet_function(
    "STRESS_HERTZ_ELLIPTICAL",
    valid={
        "force": POSITIVE,
        "modulus": POSITIVE,
        "poissons_ratio": POISSON,
        "other_modulus": POSITIVE,
        "other_poissons_ratio": POISSON,
    },
    conditions=(
        CURVED,
        POINT_CONTACT,
        _SMALL,
    ),
)
def elliptical(
    force: Force,
    radius_1: Length,
    radius_1_across: Length,
    radius_2: Length,
    radius_2_across: Length,
    angle: Angle,
    modulus: Modulus,
    poissons_ratio: Ratio,
    other_modulus: Modulus,
    other_poissons_ratio: Ratio,
) -> Pressure:
    r"""Largest contact pressure between two bodies of any curvature.

    .. math:: p_0 = \frac{3 F}{2 \pi a b}

    .. math:: \frac{B}{A} = \frac{(a/b)^2 E(e) - K(e)}{K(e) - E(e)}, \quad e^2 = 1 - b^2/a^2

    Parameters
    ----------
    force : force
        Force that presses the bodies together.
    radius_1 : length
        One principal radius of the first body; negative where hollow.
    radius_1_across : length
        Its other principal radius.
    radius_2 : length
        One principal radius of the second body; negative where hollow.
    radius_2_across : length
        Its other principal radius.
    angle : angle
        Angle between the planes of radius_1 and radius_2.
    modulus : modulus
        Young's modulus of one body.
    poissons_ratio : ratio
        Poisson's ratio of one body.
    other_modulus : modulus
        Young's modulus of the other body.
    other_poissons_ratio : ratio
        Poisson's ratio of the other body.

    Returns
    -------
    pressure : pressure
        Pressure at the middle of the contact: the compressive stress there in size.

    Notes
    -----
    Linear elastic, smooth, without friction; the contact small against the radii and the bodies (refused
    where its short semi-axis passes half of the smallest radius). Contact pressure beyond yield flattens the
    surfaces. A flat direction takes a very large radius. The axis ratio is
    solved from Carlson's elliptic integrals to the last digits.

    References
    ----------
    H. Hertz, 1881; Johnson, Contact Mechanics, section 4.2; Boresi, Schmidt, Advanced Mechanics of Materials,
    chapter 17 (from memory).

    Examples
    --------
    >>> cell('=STRESS_HERTZ_ELLIPTICAL("1kN","6cm","13cm","8cm","20cm","60°","200GPa",.3,"200GPa",.3,"MPa")')
    998.7989096
    """
    contact = plane_modulus(modulus, poissons_ratio, other_modulus, other_poissons_ratio)
    slow, fast = _relative_curvatures(radius_1, radius_1_across, radius_2, radius_2_across, angle)
    longer, shorter = _semi_axes(force, contact, slow, fast)
    return 1.5 * force / (np.pi * longer * shorter)


@worksheet_function(
    "STRESS_HERTZ_ELLIPTICAL_AXES",
    valid={
        "force": POSITIVE,
        "modulus": POSITIVE,
        "poissons_ratio": POISSON,
        "other_modulus": POSITIVE,
        "other_poissons_ratio": POISSON,
    },
    conditions=(
        CURVED,
        POINT_CONTACT,
        _SMALL,
    ),
)
def elliptical_axes(
    force: Force,
    radius_1: Length,
    radius_1_across: Length,
    radius_2: Length,
    radius_2_across: Length,
    angle: Angle,
    modulus: Modulus,
    poissons_ratio: Ratio,
    other_modulus: Modulus,
    other_poissons_ratio: Ratio,
) -> SemiAxes:
    r"""Semi-axes of the contact ellipse between two bodies of any curvature.

    .. math:: a^3 = \frac{3 F\,[K(e) - E(e)]}{2 \pi e^2 E^* A}

    .. math:: \frac{B}{A} = \frac{(a/b)^2 E(e) - K(e)}{K(e) - E(e)}, \quad e^2 = 1 - b^2/a^2

    Parameters
    ----------
    force : force
        Force that presses the bodies together.
    radius_1 : length
        One principal radius of the first body; negative where hollow.
    radius_1_across : length
        Its other principal radius.
    radius_2 : length
        One principal radius of the second body; negative where hollow.
    radius_2_across : length
        Its other principal radius.
    angle : angle
        Angle between the planes of radius_1 and radius_2.
    modulus : modulus
        Young's modulus of one body.
    poissons_ratio : ratio
        Poisson's ratio of one body.
    other_modulus : modulus
        Young's modulus of the other body.
    other_poissons_ratio : ratio
        Poisson's ratio of the other body.

    Returns
    -------
    semi_axes : length
        A row of the long and the short semi-axis.

    Notes
    -----
    Linear elastic, smooth, without friction; the contact small against the radii and the bodies (refused
    where its short semi-axis passes half of the smallest radius). Contact pressure beyond yield flattens the
    surfaces. A flat direction takes a very large radius. The axis ratio is
    solved from Carlson's elliptic integrals to the last digits.

    References
    ----------
    H. Hertz, 1881; Johnson, Contact Mechanics, section 4.2; Boresi, Schmidt, Advanced Mechanics of Materials,
    chapter 17 (from memory).

    Examples
    --------
    >>> cell('=STRESS_HERTZ_ELLIPTICAL_AXES("1kN","6cm","13cm","8cm","2dm","60°","20GPa",.3,"20GPa",.3,"mm")')
    [[1.703951445, 1.302185269]]
    """
    contact = plane_modulus(modulus, poissons_ratio, other_modulus, other_poissons_ratio)
    slow, fast = _relative_curvatures(radius_1, radius_1_across, radius_2, radius_2_across, angle)
    longer, shorter = _semi_axes(force, contact, slow, fast)
    return np.stack(np.broadcast_arrays(longer, shorter), axis=-1)
