"""Hertz contact of parallel cylinders: pressure, width, shear below the surface, sliding."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Force, Length, Modulus, Pressure, Ratio, Stress
from doubler.catalogue.limits import NOT_NEGATIVE, POISSON, POSITIVE, between, condition
from doubler.mechanics.contact import CONVEX, NOT_SMALL, is_small, plane_modulus, relative_curvature


def _half_width(
    force: Any,
    radius: Any,
    length: Any,
    modulus: Any,
    poissons_ratio: Any,
    other_modulus: Any,
    other_poissons_ratio: Any,
    other_radius: Any,
) -> Any:
    """Return the half width of the contact between cylinders."""
    contact = plane_modulus(modulus, poissons_ratio, other_modulus, other_poissons_ratio)
    curvature = relative_curvature(radius, other_radius)
    # Surfaces that do not touch along one line are told by CONVEX.
    return np.sqrt(np.maximum(4.0 * force / (np.pi * length * contact * curvature), 0.0))


_NARROW = condition(
    NOT_SMALL,
    lambda force, radius, length, modulus, poissons_ratio, other_modulus, other_poissons_ratio, other_radius: is_small(
        _half_width(force, radius, length, modulus, poissons_ratio, other_modulus, other_poissons_ratio, other_radius),
        radius,
        other_radius,
    ),
)


@worksheet_function(
    "STRESS_HERTZ_CYLINDERS",
    valid={
        "force": NOT_NEGATIVE,
        "length": POSITIVE,
        "modulus": POSITIVE,
        "poissons_ratio": POISSON,
        "other_modulus": POSITIVE,
        "other_poissons_ratio": POISSON,
    },
    conditions=(CONVEX, _NARROW),
)
def cylinders(
    force: Force,
    radius: Length,
    length: Length,
    modulus: Modulus,
    poissons_ratio: Ratio,
    other_modulus: Modulus,
    other_poissons_ratio: Ratio,
    other_radius: Length = None,
) -> Pressure:
    r"""Largest contact pressure between two parallel cylinders, or a cylinder and a flat or a hollow.

    .. math:: p_0 = \left(\frac{F E^*}{\pi L R}\right)^{1/2}

    .. math:: \frac{1}{R} = \frac{1}{R_1} + \frac{1}{R_2}, \quad \frac{1}{E^*} = \frac{1-\nu_1^2}{E_1} +
        \frac{1-\nu_2^2}{E_2}

    Parameters
    ----------
    force : force
        Force that presses the bodies together.
    radius : length
        Radius of one body; negative for a hollow.
    length : length
        Length of the line of contact.
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
        Pressure on the middle line of the contact: the compressive stress there in size.

    Notes
    -----
    Linear elastic, smooth, without friction; the contact small against the radii (refused beyond half of
    the smaller one) and the bodies. Contact pressure beyond yield flattens the surfaces. Even load along
    the line; a cylinder's sharp ends carry more.

    References
    ----------
    H. Hertz, 1881; K. L. Johnson, Contact Mechanics, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=STRESS_HERTZ_CYLINDERS("24.1 kN","40 mm","20 mm","200 GPa",0.29,"200 GPa",0.29,"40 mm","MPa")')
    1447.036746
    """
    contact = plane_modulus(modulus, poissons_ratio, other_modulus, other_poissons_ratio)
    return np.sqrt(force * contact * relative_curvature(radius, other_radius) / (np.pi * length))


@worksheet_function(
    "STRESS_HERTZ_CYLINDERS_WIDTH",
    valid={
        "force": NOT_NEGATIVE,
        "length": POSITIVE,
        "modulus": POSITIVE,
        "poissons_ratio": POISSON,
        "other_modulus": POSITIVE,
        "other_poissons_ratio": POISSON,
    },
    conditions=(CONVEX, _NARROW),
)
def cylinders_width(
    force: Force,
    radius: Length,
    length: Length,
    modulus: Modulus,
    poissons_ratio: Ratio,
    other_modulus: Modulus,
    other_poissons_ratio: Ratio,
    other_radius: Length = None,
) -> Length:
    r"""Half width of the contact between two parallel cylinders, or a cylinder and a flat or a hollow.

    .. math:: b = \left(\frac{4 F R}{\pi L E^*}\right)^{1/2}

    Parameters
    ----------
    force : force
        Force that presses the bodies together.
    radius : length
        Radius of one body; negative for a hollow.
    length : length
        Length of the line of contact.
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
    half_width : length
        Half the width of the strip of contact.

    Notes
    -----
    Linear elastic, smooth, without friction; the contact small against the radii (refused beyond half of
    the smaller one) and the bodies. Contact pressure beyond yield flattens the surfaces.

    References
    ----------
    H. Hertz, 1881; K. L. Johnson, Contact Mechanics, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=STRESS_HERTZ_CYLINDERS_WIDTH("1 kN","40 mm","20 mm","200 GPa",0.29,"200 GPa",0.29,"mm")')
    0.1527193569
    """
    return _half_width(
        force, radius, length, modulus, poissons_ratio, other_modulus, other_poissons_ratio, other_radius
    )


@worksheet_function(
    "STRESS_HERTZ_CYLINDERS_SHEAR",
    valid={"contact_pressure": NOT_NEGATIVE, "poissons_ratio": between(0.0, 0.5)},
)
def cylinders_shear(contact_pressure: Pressure, poissons_ratio: Ratio) -> Stress:
    r"""Largest shear stress below the contact of parallel cylinders.

    .. math:: \tau_{max} = p_0 \max\left(0.30028,\ \frac{w}{1 + w^2} - \nu w\right), \quad w^2 = \frac{2
        (1 - \nu)}{1 + 2\nu + \sqrt{1 + 8\nu}}

    .. math:: 0.30028 = \max_\zeta \left(\zeta - \frac{\zeta^2}{\sqrt{1+\zeta^2}}\right), \quad \zeta =
        \frac{z}{b}

    Parameters
    ----------
    contact_pressure : pressure
        Largest contact pressure, as STRESS_HERTZ_CYLINDERS gives it.
    poissons_ratio : ratio
        Poisson's ratio of the body whose stress is asked for.

    Returns
    -------
    stress : stress
        Shear stress, not negative. From Poisson's ratio 0.243 on it is 0.300 of the pressure, at 0.786 of the
        half width.

    Notes
    -----
    Linear elastic, smooth, without friction; the contact small against the radii and the bodies. Contact
    pressure beyond yield flattens the surfaces. On the middle plane, in plane strain: with a Poisson's ratio
    below 0.243 the stress along the cylinders is the smallest in size and the shear on planes inclined to
    them governs (the second term). Friction raises it and brings it to the surface.

    References
    ----------
    H. Hertz, 1881; K. L. Johnson, Contact Mechanics, chapter 4 (from memory); the second term is the largest
    difference of the stresses given there, in closed form.

    Examples
    --------
    >>> cell('=STRESS_HERTZ_CYLINDERS_SHEAR("1000 MPa", 0.3, "MPa")')
    300.283106
    """
    square = 2.0 * (1.0 - poissons_ratio) / (1.0 + 2.0 * poissons_ratio + np.sqrt(1.0 + 8.0 * poissons_ratio))
    root = np.sqrt(square)
    along = root / (1.0 + square) - poissons_ratio * root
    return np.maximum(0.3002831060007776, along) * contact_pressure


@worksheet_function("STRESS_HERTZ_SLIDING_TENSION", valid={"contact_pressure": NOT_NEGATIVE, "friction": NOT_NEGATIVE})
def sliding_tension(contact_pressure: Pressure, friction: Ratio) -> Stress:
    r"""Largest tensile stress at the surface of sliding parallel cylinders, at the trailing edge.

    .. math:: \sigma = 2 \mu\, p_0

    Parameters
    ----------
    contact_pressure : pressure
        Largest contact pressure, as STRESS_HERTZ_CYLINDERS gives it.
    friction : ratio
        Coefficient of friction; the whole contact slides.

    Returns
    -------
    stress : stress
        Tension in the direction of sliding.

    Notes
    -----
    Linear elastic, like materials (unlike ones shift the pressure a little). It opens cracks in brittle
    surfaces.

    References
    ----------
    J. O. Smith, C. K. Liu, Journal of Applied Mechanics 20, 1953; Johnson, Contact Mechanics, section 7.1
    (from memory).

    Examples
    --------
    >>> cell('=STRESS_HERTZ_SLIDING_TENSION("1000 MPa", 0.1, "MPa")')
    200.0
    """
    return 2.0 * friction * contact_pressure
