"""Thin-walled vessels under internal pressure: cylinder and sphere."""

from __future__ import annotations

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Length, Modulus, Pressure, Ratio, Stress
from doubler.catalogue.limits import NOT_NEGATIVE, POISSON, POSITIVE, condition

THIN = condition(
    "the wall is not thin: radius / thickness must be at least 10; take the thick-walled formula",
    lambda radius, thickness: radius >= 10.0 * thickness,
)


@worksheet_function(
    "STRESS_THIN_CYLINDER_HOOP",
    valid={"pressure": NOT_NEGATIVE, "radius": POSITIVE, "thickness": POSITIVE},
    conditions=(THIN,),
)
def thin_cylinder_hoop(pressure: Pressure, radius: Length, thickness: Length) -> Stress:
    r"""Hoop stress of a thin-walled cylinder under internal pressure.

    .. math:: \sigma_\theta = \frac{p r}{t}

    Parameters
    ----------
    pressure : pressure
        Internal pressure above the outside.
    radius : length
        Inner radius of the vessel; the mean radius gives a result nearer the mean over the wall.
    thickness : length
        Thickness of the wall, without corrosion allowance and lining.

    Returns
    -------
    stress : stress
        Circumferential tension.

    Notes
    -----
    Membrane stress away from ends, supports and openings. Thin wall: radius / thickness at least 10 (common
    practice). With the inner radius the stress at the bore is up to 5 % higher than this at that limit
    (Lamé). Internal pressure alone: under external pressure a thin wall buckles first.

    References
    ----------
    J. M. Gere, Mechanics of Materials, sections 8.2 and 8.3 (from memory).

    Examples
    --------
    >>> cell('=STRESS_THIN_CYLINDER_HOOP("1.5 MPa", "1000 mm", "20 mm", "MPa")')
    75.0
    """
    return pressure * radius / thickness


@worksheet_function(
    "STRESS_THIN_CYLINDER_AXIAL",
    valid={"pressure": NOT_NEGATIVE, "radius": POSITIVE, "thickness": POSITIVE},
    conditions=(THIN,),
)
def thin_cylinder_axial(pressure: Pressure, radius: Length, thickness: Length) -> Stress:
    r"""Longitudinal stress of a thin-walled cylinder with closed ends under internal pressure.

    .. math:: \sigma_x = \frac{p r}{2 t}

    Parameters
    ----------
    pressure : pressure
        Internal pressure above the outside.
    radius : length
        Inner radius of the vessel; the mean radius gives a result nearer the mean over the wall.
    thickness : length
        Thickness of the wall, without corrosion allowance and lining.

    Returns
    -------
    stress : stress
        Longitudinal tension.

    Notes
    -----
    The ends close the vessel and the wall carries their load; with pistons or anchored ends it is another.
    Membrane stress away from ends, supports and openings. Thin wall: radius / thickness at least 10 (common
    practice). Internal pressure alone: under external pressure a thin wall buckles first.

    References
    ----------
    J. M. Gere, Mechanics of Materials, sections 8.2 and 8.3 (from memory).

    Examples
    --------
    >>> cell('=STRESS_THIN_CYLINDER_AXIAL("1.5 MPa", "1000 mm", "20 mm", "MPa")')
    37.5
    """
    return 0.5 * pressure * radius / thickness


@worksheet_function(
    "STRESS_THIN_SPHERE",
    valid={"pressure": NOT_NEGATIVE, "radius": POSITIVE, "thickness": POSITIVE},
    conditions=(THIN,),
)
def thin_sphere(pressure: Pressure, radius: Length, thickness: Length) -> Stress:
    r"""Membrane stress of a thin-walled sphere under internal pressure.

    .. math:: \sigma = \frac{p r}{2 t}

    Parameters
    ----------
    pressure : pressure
        Internal pressure above the outside.
    radius : length
        Inner radius of the vessel; the mean radius gives a result nearer the mean over the wall.
    thickness : length
        Thickness of the wall, without corrosion allowance and lining.

    Returns
    -------
    stress : stress
        Tension, the same in all directions of the wall.

    Notes
    -----
    Membrane stress away from ends, supports and openings. Thin wall: radius / thickness at least 10 (common
    practice). With the inner radius the stress at the bore is up to 1 % higher than this at that limit
    (Lamé). Internal pressure alone: under external pressure a thin wall buckles first.

    References
    ----------
    J. M. Gere, Mechanics of Materials, sections 8.2 and 8.3 (from memory).

    Examples
    --------
    >>> cell('=STRESS_THIN_SPHERE("0.8 MPa", "1000 mm", "10 mm", "MPa")')
    40.0
    """
    return 0.5 * pressure * radius / thickness


@worksheet_function(
    "STIFFNESS_CYLINDER_GROWTH",
    valid={
        "pressure": NOT_NEGATIVE,
        "radius": POSITIVE,
        "thickness": POSITIVE,
        "modulus": POSITIVE,
        "poissons_ratio": POISSON,
    },
    conditions=(THIN,),
)
def cylinder_growth(
    pressure: Pressure, radius: Length, thickness: Length, modulus: Modulus, poissons_ratio: Ratio
) -> Length:
    r"""Radial growth of a thin-walled cylinder with closed ends under internal pressure.

    .. math:: \Delta r = \frac{p r^2}{E t}\left(1 - \frac{\nu}{2}\right)

    Parameters
    ----------
    pressure : pressure
        Internal pressure above the outside.
    radius : length
        Inner radius of the vessel; the mean radius gives a result nearer the mean over the wall.
    thickness : length
        Thickness of the wall, without corrosion allowance and lining.
    modulus : modulus
        Young's modulus of the wall.
    poissons_ratio : ratio
        Poisson's ratio of the wall.

    Returns
    -------
    growth : length
        Increase of the radius.

    Notes
    -----
    Linear elastic. Membrane stress away from ends, supports and openings. Thin wall: radius / thickness at
    least 10 (common practice). With the inner radius the stress at the bore is up to 5 % higher than this at
    that limit (Lamé). Internal pressure alone: under external pressure a thin wall buckles first.

    References
    ----------
    J. M. Gere, Mechanics of Materials, sections 8.2 and 8.3 (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_CYLINDER_GROWTH("0.8 MPa", "1000 mm", "10 mm", "200 GPa", 0.25, "mm")')
    0.35
    """
    return pressure * radius**2 / (modulus * thickness) * (1.0 - 0.5 * poissons_ratio)


@worksheet_function(
    "STIFFNESS_SPHERE_GROWTH",
    valid={
        "pressure": NOT_NEGATIVE,
        "radius": POSITIVE,
        "thickness": POSITIVE,
        "modulus": POSITIVE,
        "poissons_ratio": POISSON,
    },
    conditions=(THIN,),
)
def sphere_growth(
    pressure: Pressure, radius: Length, thickness: Length, modulus: Modulus, poissons_ratio: Ratio
) -> Length:
    r"""Radial growth of a thin-walled sphere under internal pressure.

    .. math:: \Delta r = \frac{p r^2}{2 E t}(1 - \nu)

    Parameters
    ----------
    pressure : pressure
        Internal pressure above the outside.
    radius : length
        Inner radius of the vessel; the mean radius gives a result nearer the mean over the wall.
    thickness : length
        Thickness of the wall, without corrosion allowance and lining.
    modulus : modulus
        Young's modulus of the wall.
    poissons_ratio : ratio
        Poisson's ratio of the wall.

    Returns
    -------
    growth : length
        Increase of the radius.

    Notes
    -----
    Linear elastic. Membrane stress away from ends, supports and openings. Thin wall: radius / thickness at
    least 10 (common practice). With the inner radius the stress at the bore is up to 1 % higher than this at
    that limit (Lamé). Internal pressure alone: under external pressure a thin wall buckles first.

    References
    ----------
    J. M. Gere, Mechanics of Materials, sections 8.2 and 8.3 (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_SPHERE_GROWTH("0.8 MPa", "1000 mm", "10 mm", "200 GPa", 0.25, "mm")')
    0.15
    """
    return 0.5 * pressure * radius**2 / (modulus * thickness) * (1.0 - poissons_ratio)
