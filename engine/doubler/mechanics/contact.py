"""Hertz contact of spheres: pressure, size, shear below the surface."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Force, Length, Modulus, Pressure, Ratio, Stress
from doubler.catalogue.limits import NOT_NEGATIVE, POISSON, POSITIVE, between, condition

CONVEX = condition(
    "the surfaces must touch at one place: 1/radius + 1/other_radius must be positive, so that a hollow "
    "(negative radius) is wider than the body in it",
    lambda radius, other_radius: (
        (radius != 0.0)
        & (True if other_radius is None else other_radius != 0.0)
        & (1.0 / radius + (0.0 if other_radius is None else 1.0 / other_radius) > 0.0)
    ),
)


def plane_modulus(modulus: Any, poissons_ratio: Any, other_modulus: Any, other_poissons_ratio: Any) -> Any:
    """Return the contact modulus E* of two elastic bodies."""
    return 1.0 / ((1.0 - poissons_ratio**2) / modulus + (1.0 - other_poissons_ratio**2) / other_modulus)


def relative_curvature(radius: Any, other_radius: Any) -> Any:
    """Return the sum of the two curvatures; the second body is flat where its radius is left out."""
    return 1.0 / radius if other_radius is None else 1.0 / radius + 1.0 / other_radius


_SMALL = 0.5
NOT_SMALL = (
    "the contact would reach farther than half of the smaller radius, where Hertz's theory does not hold: the force is "
    "too large, or a body nearly fills the hollow that it lies in"
)


def is_small(size: Any, radius: Any, other_radius: Any) -> Any:
    """Return where a contact is small beside both bodies; the second is flat where its radius is left out."""
    smaller = np.abs(radius) if other_radius is None else np.minimum(np.abs(radius), np.abs(other_radius))
    return size <= _SMALL * smaller


def _size(
    force: Any,
    radius: Any,
    modulus: Any,
    poissons_ratio: Any,
    other_modulus: Any,
    other_poissons_ratio: Any,
    other_radius: Any,
) -> Any:
    """Return the radius of the contact between spheres."""
    contact = plane_modulus(modulus, poissons_ratio, other_modulus, other_poissons_ratio)
    return np.cbrt(0.75 * force / (contact * relative_curvature(radius, other_radius)))


_SMALL_CIRCLE = condition(
    NOT_SMALL,
    lambda force, radius, modulus, poissons_ratio, other_modulus, other_poissons_ratio, other_radius: is_small(
        _size(force, radius, modulus, poissons_ratio, other_modulus, other_poissons_ratio, other_radius),
        radius,
        other_radius,
    ),
)


@worksheet_function(
    "STRESS_HERTZ_SPHERES",
    valid={
        "force": NOT_NEGATIVE,
        "modulus": POSITIVE,
        "poissons_ratio": POISSON,
        "other_modulus": POSITIVE,
        "other_poissons_ratio": POISSON,
    },
    conditions=(CONVEX, _SMALL_CIRCLE),
)
def spheres(
    force: Force,
    radius: Length,
    modulus: Modulus,
    poissons_ratio: Ratio,
    other_modulus: Modulus,
    other_poissons_ratio: Ratio,
    other_radius: Length = None,
) -> Pressure:
    r"""Largest contact pressure between two spheres, or a sphere and a flat or a hollow.

    .. math:: p_0 = \left(\frac{6 F E^{*2}}{\pi^3 R^2}\right)^{1/3}

    .. math:: \frac{1}{R} = \frac{1}{R_1} + \frac{1}{R_2}, \quad \frac{1}{E^*} = \frac{1-\nu_1^2}{E_1} +
        \frac{1-\nu_2^2}{E_2}

    Parameters
    ----------
    force : force
        Force that presses the bodies together.
    radius : length
        Radius of one body; negative for a hollow.
    modulus : modulus
        Young's modulus of one body.
    poissons_ratio : ratio
        Poisson's ratio of one body.
    other_modulus : modulus
        Young's modulus of the other body.
    other_poissons_ratio : ratio
        Poisson's ratio of the other body.
    other_radius : length
        Radius of the other body, negative for a hollow; left out for a flat.

    Returns
    -------
    pressure : pressure
        Pressure at the middle of the contact: the compressive stress there in size.

    Notes
    -----
    Linear elastic, smooth, without friction; the contact small against the radii (refused beyond half of
    the smaller one) and the bodies. Contact pressure beyond yield flattens the surfaces.

    References
    ----------
    H. Hertz, 1881; K. L. Johnson, Contact Mechanics, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=STRESS_HERTZ_SPHERES("100 N","10 mm","210 GPa",0.3,"210 GPa",0.3,"MPa")')
    1370.879079
    """
    contact = plane_modulus(modulus, poissons_ratio, other_modulus, other_poissons_ratio)
    return np.cbrt(6.0 * force * (contact * relative_curvature(radius, other_radius)) ** 2 / np.pi**3)


@worksheet_function(
    "STRESS_HERTZ_SPHERES_RADIUS",
    valid={
        "force": NOT_NEGATIVE,
        "modulus": POSITIVE,
        "poissons_ratio": POISSON,
        "other_modulus": POSITIVE,
        "other_poissons_ratio": POISSON,
    },
    conditions=(CONVEX, _SMALL_CIRCLE),
)
def spheres_radius(
    force: Force,
    radius: Length,
    modulus: Modulus,
    poissons_ratio: Ratio,
    other_modulus: Modulus,
    other_poissons_ratio: Ratio,
    other_radius: Length = None,
) -> Length:
    r"""Radius of the contact between two spheres, or a sphere and a flat or a hollow.

    .. math:: a = \left(\frac{3 F R}{4 E^*}\right)^{1/3}

    Parameters
    ----------
    force : force
        Force that presses the bodies together.
    radius : length
        Radius of one body; negative for a hollow.
    modulus : modulus
        Young's modulus of one body.
    poissons_ratio : ratio
        Poisson's ratio of one body.
    other_modulus : modulus
        Young's modulus of the other body.
    other_poissons_ratio : ratio
        Poisson's ratio of the other body.
    other_radius : length
        Radius of the other body, negative for a hollow; left out for a flat.

    Returns
    -------
    contact_radius : length
        Radius of the circle of contact.

    Notes
    -----
    Linear elastic, smooth, without friction; the contact small against the radii (refused beyond half of
    the smaller one) and the bodies. Contact pressure beyond yield flattens the surfaces.

    References
    ----------
    H. Hertz, 1881; K. L. Johnson, Contact Mechanics, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=STRESS_HERTZ_SPHERES_RADIUS("100 N","10 mm","210 GPa",0.3,"210 GPa",0.3,"mm")')
    0.1866255578
    """
    return _size(force, radius, modulus, poissons_ratio, other_modulus, other_poissons_ratio, other_radius)


@worksheet_function(
    "STRESS_HERTZ_SPHERES_SHEAR",
    valid={"contact_pressure": NOT_NEGATIVE, "poissons_ratio": between(0.0, 0.5)},
)
def spheres_shear(contact_pressure: Pressure, poissons_ratio: Ratio) -> Stress:
    r"""Largest shear stress below the contact of spheres.

    .. math:: \tau_{max} = p_0 \max_{\zeta} \frac12\left|\frac{3}{2(1+\zeta^2)} - (1+\nu)\left(1 - \zeta
        \arctan\frac1\zeta\right)\right|, \quad \zeta = \frac{z}{a}

    Parameters
    ----------
    contact_pressure : pressure
        Largest contact pressure, as STRESS_HERTZ_SPHERES gives it.
    poissons_ratio : ratio
        Poisson's ratio of the body whose stress is asked for.

    Returns
    -------
    stress : stress
        Shear stress, not negative. With Poisson's ratio 0.3 it is 0.310 of the pressure, at 0.481 of the
        contact radius.

    Notes
    -----
    Linear elastic, smooth, without friction; the contact small against the radii and the bodies. Contact
    pressure beyond yield flattens the surfaces. On the axis of the contact. Friction raises it and brings it
    to the surface.

    References
    ----------
    H. Hertz, 1881; K. L. Johnson, Contact Mechanics, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=STRESS_HERTZ_SPHERES_SHEAR("1000 MPa", 0.3, "MPa")')
    310.020502
    """
    depth = np.full_like(poissons_ratio, 0.45)
    for _ in range(8):  # Newton on the slope; from here it settles in five for every stable Poisson's ratio
        below = 1.0 + depth**2
        reach = np.arctan(1.0 / depth)
        slope = -3.0 * depth / below**2 + (1.0 + poissons_ratio) * (reach - depth / below)
        bend = -3.0 * (1.0 - 3.0 * depth**2) / below**3 - 2.0 * (1.0 + poissons_ratio) / below**2
        depth = depth - slope / bend
    stress = 1.5 / (1.0 + depth**2) - (1.0 + poissons_ratio) * (1.0 - depth * np.arctan(1.0 / depth))
    return 0.5 * contact_pressure * stress
