"""Thick-walled cylinders and spheres under pressure, by Lamé."""

from __future__ import annotations

from typing import Any, Literal

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Length, Pressure, Ratio, Stress
from doubler.catalogue.limits import NOT_NEGATIVE, POISSON, POSITIVE, condition

WALL = condition(
    "the inner radius must be smaller than the outer radius",
    lambda inner_radius, outer_radius: inner_radius < outer_radius,
)
IN_WALL = condition(
    "the radius asked for must lie in the wall, from inner_radius to outer_radius",
    # A wall's own radii, converted from another unit, may miss it by the last digit.
    lambda inner_radius, outer_radius, radius: (
        (radius >= inner_radius * (1.0 - 1e-12)) & (radius <= outer_radius * (1.0 + 1e-12))
    ),
)


@worksheet_function(
    "STRESS_THICK_CYLINDER_RADIAL",
    valid={
        "inner_pressure": NOT_NEGATIVE,
        "outer_pressure": NOT_NEGATIVE,
        "inner_radius": POSITIVE,
        "outer_radius": POSITIVE,
    },
    conditions=(
        WALL,
        IN_WALL,
    ),
)
def radial(
    inner_pressure: Pressure,
    outer_pressure: Pressure,
    inner_radius: Length,
    outer_radius: Length,
    radius: Length,
) -> Stress:
    r"""Radial stress in the wall of a thick-walled cylinder; tension positive.

    .. math:: \sigma_r = \frac{p_i a^2 - p_o b^2}{b^2 - a^2} - \frac{(p_i - p_o)\, a^2 b^2}{(b^2 - a^2)\,
        r^2}

    Parameters
    ----------
    inner_pressure : pressure
        Pressure in the bore.
    outer_pressure : pressure
        Pressure outside.
    inner_radius : length
        Inner radius.
    outer_radius : length
        Outer radius.
    radius : length
        Radius at which the stress is asked for.

    Returns
    -------
    stress : stress
        Radial stress: minus the pressure at either surface.

    Notes
    -----
    Linear elastic, homogeneous, away from the ends. Hoop, radial and axial stress are principal stresses. A
    wall under outer pressure may buckle first.

    References
    ----------
    G. Lamé, 1833; A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, section 11.3 (from memory).

    Examples
    --------
    >>> cell('=STRESS_THICK_CYLINDER_RADIAL("300 MPa","0 MPa","10 mm","50 mm","25 mm","MPa")')
    -37.5
    """
    mean, swing = _constants(inner_pressure, outer_pressure, inner_radius, outer_radius)
    return mean - swing / radius**2


@worksheet_function(
    "STRESS_THICK_CYLINDER_HOOP",
    valid={
        "inner_pressure": NOT_NEGATIVE,
        "outer_pressure": NOT_NEGATIVE,
        "inner_radius": POSITIVE,
        "outer_radius": POSITIVE,
    },
    conditions=(
        WALL,
        IN_WALL,
    ),
)
def hoop(
    inner_pressure: Pressure,
    outer_pressure: Pressure,
    inner_radius: Length,
    outer_radius: Length,
    radius: Length,
) -> Stress:
    r"""Hoop stress in the wall of a thick-walled cylinder; tension positive.

    .. math:: \sigma_\theta = \frac{p_i a^2 - p_o b^2}{b^2 - a^2} + \frac{(p_i - p_o)\, a^2 b^2}{(b^2 -
        a^2)\, r^2}

    Parameters
    ----------
    inner_pressure : pressure
        Pressure in the bore.
    outer_pressure : pressure
        Pressure outside.
    inner_radius : length
        Inner radius.
    outer_radius : length
        Outer radius.
    radius : length
        Radius at which the stress is asked for.

    Returns
    -------
    stress : stress
        Circumferential stress, largest at the bore.

    Notes
    -----
    Linear elastic, homogeneous, away from the ends. Hoop, radial and axial stress are principal stresses. A
    wall under outer pressure may buckle first.

    References
    ----------
    G. Lamé, 1833; A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, section 11.3 (from memory).

    Examples
    --------
    >>> cell('=STRESS_THICK_CYLINDER_HOOP("300 MPa","0 MPa","10 mm","50 mm","10 mm","MPa")')
    325.0
    """
    mean, swing = _constants(inner_pressure, outer_pressure, inner_radius, outer_radius)
    return mean + swing / radius**2


def _constants(inner_pressure: Any, outer_pressure: Any, inner_radius: Any, outer_radius: Any) -> tuple[Any, Any]:
    """Return Lamé's two constants: stresses are mean ± swing / r²."""
    inner, outer = inner_radius**2, outer_radius**2
    metal = outer - inner
    mean = (inner_pressure * inner - outer_pressure * outer) / metal
    return mean, (inner_pressure - outer_pressure) * inner * outer / metal


@worksheet_function(
    "STRESS_THICK_CYLINDER_AXIAL",
    valid={
        "inner_pressure": NOT_NEGATIVE,
        "outer_pressure": NOT_NEGATIVE,
        "inner_radius": POSITIVE,
        "outer_radius": POSITIVE,
        "poissons_ratio": POISSON,
    },
    conditions=(WALL,),
)
def axial(
    inner_pressure: Pressure,
    outer_pressure: Pressure,
    inner_radius: Length,
    outer_radius: Length,
    poissons_ratio: Ratio,
    ends: Literal["closed", "open", "held"],
) -> Stress:
    r"""Axial stress in the wall of a thick-walled cylinder; tension positive.

    .. math:: \sigma_x = \frac{p_i a^2 - p_o b^2}{b^2 - a^2} \quad \text{closed ends}

    .. math:: \sigma_x = 0 \quad \text{open ends}

    .. math:: \sigma_x = 2 \nu\, \frac{p_i a^2 - p_o b^2}{b^2 - a^2} \quad \text{held length}

    Parameters
    ----------
    inner_pressure : pressure
        Pressure in the bore.
    outer_pressure : pressure
        Pressure outside.
    inner_radius : length
        Inner radius.
    outer_radius : length
        Outer radius.
    poissons_ratio : ratio
        Poisson's ratio; it matters only where the length is held.
    ends : choice
        "closed": the wall carries both pressures on the ends; "open": pistons carry them; "held": no axial
        strain.

    Returns
    -------
    stress : stress
        Axial stress, even over the wall.

    Notes
    -----
    Linear elastic, homogeneous, away from the ends. Hoop, radial and axial stress are principal stresses. A
    wall under outer pressure may buckle first.

    References
    ----------
    G. Lamé, 1833; A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, section 11.3 (from memory).

    Examples
    --------
    >>> cell('=STRESS_THICK_CYLINDER_AXIAL("300 MPa","0 MPa","10 mm","50 mm",0.3,"closed","MPa")')
    12.5
    """
    mean, _ = _constants(inner_pressure, outer_pressure, inner_radius, outer_radius)
    share = {"closed": 1.0, "open": 0.0, "held": 2.0 * poissons_ratio}[ends]
    return mean * share


@worksheet_function(
    "STRESS_THICK_SPHERE_RADIAL",
    valid={
        "inner_pressure": NOT_NEGATIVE,
        "outer_pressure": NOT_NEGATIVE,
        "inner_radius": POSITIVE,
        "outer_radius": POSITIVE,
    },
    conditions=(
        WALL,
        IN_WALL,
    ),
)
def sphere_radial(
    inner_pressure: Pressure,
    outer_pressure: Pressure,
    inner_radius: Length,
    outer_radius: Length,
    radius: Length,
) -> Stress:
    r"""Radial stress in the wall of a thick-walled sphere; tension positive.

    .. math:: \sigma_r = \frac{p_i a^3 - p_o b^3}{b^3 - a^3} - \frac{(p_i - p_o)\, a^3 b^3}{(b^3 - a^3)\,
        r^3}

    Parameters
    ----------
    inner_pressure : pressure
        Pressure in the bore.
    outer_pressure : pressure
        Pressure outside.
    inner_radius : length
        Inner radius.
    outer_radius : length
        Outer radius.
    radius : length
        Radius at which the stress is asked for.

    Returns
    -------
    stress : stress
        Radial stress: minus the pressure at either surface.

    Notes
    -----
    Linear elastic, homogeneous, away from openings. A wall under outer pressure may buckle first.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter on spherical coordinates, the hollow sphere
    (from memory).

    Examples
    --------
    >>> cell('=STRESS_THICK_SPHERE_RADIAL("100 MPa","0 MPa","10 mm","20 mm","10 mm","MPa")')
    -100.0
    """
    inner, outer = inner_radius**3, outer_radius**3
    swing = (inner_pressure - outer_pressure) * inner * outer / radius**3
    return (inner_pressure * inner - outer_pressure * outer - swing) / (outer - inner)


@worksheet_function(
    "STRESS_THICK_SPHERE_HOOP",
    valid={
        "inner_pressure": NOT_NEGATIVE,
        "outer_pressure": NOT_NEGATIVE,
        "inner_radius": POSITIVE,
        "outer_radius": POSITIVE,
    },
    conditions=(
        WALL,
        IN_WALL,
    ),
)
def sphere_hoop(
    inner_pressure: Pressure,
    outer_pressure: Pressure,
    inner_radius: Length,
    outer_radius: Length,
    radius: Length,
) -> Stress:
    r"""Circumferential stress in the wall of a thick-walled sphere; tension positive.

    .. math:: \sigma_\theta = \frac{p_i a^3 - p_o b^3}{b^3 - a^3} + \frac{(p_i - p_o)\, a^3 b^3}{2 (b^3 -
        a^3)\, r^3}

    Parameters
    ----------
    inner_pressure : pressure
        Pressure in the bore.
    outer_pressure : pressure
        Pressure outside.
    inner_radius : length
        Inner radius.
    outer_radius : length
        Outer radius.
    radius : length
        Radius at which the stress is asked for.

    Returns
    -------
    stress : stress
        Stress in the wall, the same in all its directions and largest at the bore.

    Notes
    -----
    Linear elastic, homogeneous, away from openings. A wall under outer pressure may buckle first.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter on spherical coordinates, the hollow sphere
    (from memory).

    Examples
    --------
    >>> cell('=STRESS_THICK_SPHERE_HOOP("100 MPa","0 MPa","10 mm","20 mm","10 mm","MPa")')
    71.42857143
    """
    inner, outer = inner_radius**3, outer_radius**3
    swing = (inner_pressure - outer_pressure) * inner * outer / radius**3
    return (inner_pressure * inner - outer_pressure * outer + 0.5 * swing) / (outer - inner)
