"""Stresses of flat discs of even thickness that rotate, solid or with a bore."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import AngularSpeed, Density, Length, Ratio, Stress
from doubler.catalogue.limits import NOT_NEGATIVE, POISSON, POSITIVE, condition

BORE = condition(
    "the inner radius must be smaller than the outer radius",
    lambda inner_radius, outer_radius: inner_radius is None or inner_radius < outer_radius,
)
IN_DISC = condition(
    "the radius asked for must lie in the disc, from the bore (or the centre) to outer_radius",
    # The disc's own radii, converted from another unit, may miss it by the last digit.
    lambda inner_radius, outer_radius, radius: (
        (radius <= outer_radius * (1.0 + 1e-12)) & (inner_radius is None or radius >= inner_radius * (1.0 - 1e-12))
    ),
)


def _bore_terms(radius: Any, outer_radius: Any, inner_radius: Any) -> tuple[Any, Any]:
    """Return a² and a²b²/r²: both zero in a solid disc, at its centre too."""
    if inner_radius is None:
        return 0.0, 0.0
    return inner_radius**2, (inner_radius * outer_radius / radius) ** 2


@worksheet_function(
    "STRESS_DISC_RADIAL",
    valid={
        "outer_radius": POSITIVE,
        "radius": NOT_NEGATIVE,
        "density": POSITIVE,
        "poissons_ratio": POISSON,
        "inner_radius": POSITIVE,
    },
    conditions=(
        BORE,
        IN_DISC,
    ),
)
def disc_radial(
    angular_speed: AngularSpeed,
    outer_radius: Length,
    radius: Length,
    density: Density,
    poissons_ratio: Ratio,
    inner_radius: Length = None,
) -> Stress:
    r"""Radial stress of a rotating disc; tension positive.

    .. math:: \sigma_r = \frac{3+\nu}{8} \rho \omega^2 \left(a^2 + b^2 - \frac{a^2 b^2}{r^2} - r^2\right)

    Parameters
    ----------
    angular_speed : angular speed
        Speed of rotation.
    outer_radius : length
        Outer radius.
    radius : length
        Radius at which the stress is asked for.
    density : density
        Density.
    poissons_ratio : ratio
        Poisson's ratio.
    inner_radius : length
        Radius of a central bore; left out for a solid disc.

    Returns
    -------
    stress : stress
        Radial stress: zero at rim and bore.

    Notes
    -----
    Even thickness, thin against the radius (plane stress), linear elastic, free at its rim and bore: blades
    and shrink pressures come on top.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, section 11.7; S. P. Timoshenko, J. N.
    Goodier, Theory of Elasticity, section on rotating disks (from memory).

    Examples
    --------
    >>> cell('=STRESS_DISC_RADIAL("1000 rad/s","300 mm","0 mm","7850 kg/m^3",0.29,"MPa")')
    290.548125
    """
    bore, term = _bore_terms(radius, outer_radius, inner_radius)
    return 0.125 * (3.0 + poissons_ratio) * density * angular_speed**2 * (bore + outer_radius**2 - term - radius**2)


@worksheet_function(
    "STRESS_DISC_HOOP",
    valid={
        "outer_radius": POSITIVE,
        "radius": NOT_NEGATIVE,
        "density": POSITIVE,
        "poissons_ratio": POISSON,
        "inner_radius": POSITIVE,
    },
    conditions=(
        BORE,
        IN_DISC,
    ),
)
def disc_hoop(
    angular_speed: AngularSpeed,
    outer_radius: Length,
    radius: Length,
    density: Density,
    poissons_ratio: Ratio,
    inner_radius: Length = None,
) -> Stress:
    r"""Hoop stress of a rotating disc; tension positive.

    .. math:: \sigma_\theta = \frac{3+\nu}{8} \rho \omega^2 \left(a^2 + b^2 + \frac{a^2 b^2}{r^2} -
        \frac{1+3\nu}{3+\nu} r^2\right)

    Parameters
    ----------
    angular_speed : angular speed
        Speed of rotation.
    outer_radius : length
        Outer radius.
    radius : length
        Radius at which the stress is asked for.
    density : density
        Density.
    poissons_ratio : ratio
        Poisson's ratio.
    inner_radius : length
        Radius of a central bore; left out for a solid disc.

    Returns
    -------
    stress : stress
        Circumferential stress: largest at the bore, or at the centre of a solid disc.

    Notes
    -----
    Even thickness, thin against the radius (plane stress), linear elastic, free at its rim and bore: blades
    and shrink pressures come on top. The smallest bore doubles the stress at the centre of a solid disc.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, section 11.7; S. P. Timoshenko, J. N.
    Goodier, Theory of Elasticity, section on rotating disks (from memory).

    Examples
    --------
    >>> cell('=STRESS_DISC_HOOP("1000 rad/s","300 mm","100 mm","7850 kg/m^3",0.29,"100 mm","MPa")')
    595.03
    """
    bore, term = _bore_terms(radius, outer_radius, inner_radius)
    inside = (3.0 + poissons_ratio) * (bore + outer_radius**2 + term) - (1.0 + 3.0 * poissons_ratio) * radius**2
    return 0.125 * density * angular_speed**2 * inside


@worksheet_function(
    "STRESS_DISC_HOOP_MEAN",
    valid={"outer_radius": POSITIVE, "density": POSITIVE, "inner_radius": POSITIVE},
    conditions=(BORE,),
)
def disc_hoop_mean(
    angular_speed: AngularSpeed, outer_radius: Length, density: Density, inner_radius: Length = None
) -> Stress:
    r"""Mean hoop stress over a radial section of a rotating disc.

    .. math:: \bar\sigma_\theta = \frac{\rho \omega^2 (b^3 - a^3)}{3 (b - a)}

    Parameters
    ----------
    angular_speed : angular speed
        Speed of rotation.
    outer_radius : length
        Outer radius.
    density : density
        Density.
    inner_radius : length
        Radius of a central bore; left out for a solid disc.

    Returns
    -------
    stress : stress
        Mean circumferential tension.

    Notes
    -----
    Equilibrium of half the disc, whatever the material: a perfectly plastic disc is fully plastic where this
    reaches its yield strength (Tresca), and burst speeds are estimated from it. Even thickness, free at rim
    and bore.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, section 11.7; S. P. Timoshenko, J. N.
    Goodier, Theory of Elasticity, section on rotating disks (from memory).

    Examples
    --------
    >>> cell('=STRESS_DISC_HOOP_MEAN("1350 rad/s","300 mm","7850 kg/m^3","100 mm","MPa")')
    619.95375
    """
    bore = np.zeros_like(outer_radius) if inner_radius is None else inner_radius
    return density * angular_speed**2 * (outer_radius**2 + outer_radius * bore + bore**2) / 3.0
