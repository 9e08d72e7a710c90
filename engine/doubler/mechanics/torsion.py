"""Shear stress in torsion in closed form: round, elliptical, triangular bars, one thin-walled cell."""

from __future__ import annotations

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Area, Length, Moment, ShearFlow, Stress, TorsionConstant
from doubler.catalogue.limits import NOT_NEGATIVE, POSITIVE, condition

BORE_INSIDE = condition(
    "the inner diameter must be smaller than the outer diameter",
    lambda outer_diameter, inner_diameter: inner_diameter is None or inner_diameter < outer_diameter,
)


@worksheet_function("STRESS_TORSION", valid={"radius": NOT_NEGATIVE, "polar_second_moment": POSITIVE})
def torsion(torque: Moment, radius: Length, polar_second_moment: TorsionConstant) -> Stress:
    r"""Shear stress of a round bar in torsion at a radius.

    .. math:: \tau = \frac{T r}{J}

    Parameters
    ----------
    torque : moment
        Torque about the axis of the bar.
    radius : length
        Radius at which the stress is asked for.
    polar_second_moment : second moment
        Polar second moment of area of the round section.

    Returns
    -------
    stress : stress
        Shear stress, of the sign of the torque.

    Notes
    -----
    For round sections, solid or hollow, alone: of any other section the polar second moment is not the
    torsion constant and this formula is wrong. Linear elastic, away from steps and keyways.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 3.3, the torsion formula (from memory).

    Examples
    --------
    >>> cell('=STRESS_TORSION("500 N*m", "25 mm", "245624.2 mm^4", "MPa")')
    50.89075099
    """
    return torque * radius / polar_second_moment


@worksheet_function(
    "STRESS_TORSION_ROUND",
    valid={"outer_diameter": POSITIVE, "inner_diameter": NOT_NEGATIVE},
    conditions=(BORE_INSIDE,),
)
def torsion_round(torque: Moment, outer_diameter: Length, inner_diameter: Length = None) -> Stress:
    r"""Largest shear stress of a solid or hollow round bar in torsion, at its surface.

    .. math:: \tau_{max} = \frac{16\, T D}{\pi (D^4 - d^4)}

    Parameters
    ----------
    torque : moment
        Torque about the axis of the bar.
    outer_diameter : length
        Outer diameter.
    inner_diameter : length
        Inner diameter; left out for a solid bar.

    Returns
    -------
    stress : stress
        Shear stress at the outer surface, of the sign of the torque.

    Notes
    -----
    Linear elastic, away from steps and keyways; a thin wall may buckle first.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 3.3 (from memory).

    Examples
    --------
    >>> cell('=STRESS_TORSION_ROUND("4 kN*m", "80 mm", "60 mm", "MPa")')
    58.20523633
    """
    outer = outer_diameter * outer_diameter
    inner = 0.0 if inner_diameter is None else inner_diameter * inner_diameter
    return (16.0 / np.pi) * torque * outer_diameter / ((outer - inner) * (outer + inner))


# A circle of the enclosed area has the radius √(A/π): the widest that any wall can stand from the middle of its cell.
THIN_CELL = condition(
    "the wall is not thin: its thickness must be at most a third of √(enclosed_area/π), the radius of a circle of that "
    "area; of a thick round tube STRESS_TORSION_ROUND is exact",
    lambda enclosed_area, thickness: 9.0 * thickness**2 <= enclosed_area / np.pi * (1.0 + 1e-9),
)


@worksheet_function(
    "STRESS_TORSION_CLOSED", valid={"enclosed_area": POSITIVE, "thickness": POSITIVE}, conditions=(THIN_CELL,)
)
def torsion_closed(torque: Moment, enclosed_area: Area, thickness: Length) -> Stress:
    r"""Shear stress in the wall of a thin-walled closed section of one cell, by Bredt's formula.

    .. math:: \tau = \frac{T}{2 A_m t}

    Parameters
    ----------
    torque : moment
        Torque about the axis of the bar.
    enclosed_area : area
        Area enclosed by the middle line of the wall.
    thickness : length
        Thickness of the wall where the stress is asked for; the thinnest wall has the most.

    Returns
    -------
    stress : stress
        Mean over the thickness, of the sign of the torque.

    Notes
    -----
    A mean: the inside of a round tube is below it and the outside above it by about t/(2r), 5 % at a wall of
    a tenth of the mean radius and 17 % at a third of it, beyond which it is refused. Re-entrant corners have
    more. Warping is free, and a thin wall may buckle first.

    References
    ----------
    R. Bredt, 1896; J. M. Gere, Mechanics of Materials, section 3.10 (from memory).

    Examples
    --------
    >>> cell('=STRESS_TORSION_CLOSED("56500 N*m", "0.125 m^2", "6 mm", "MPa")')
    37.66666667
    """
    return torque / (2.0 * enclosed_area * thickness)


@worksheet_function("STRESS_TORSION_SHEAR_FLOW", valid={"enclosed_area": POSITIVE})
def torsion_shear_flow(torque: Moment, enclosed_area: Area) -> ShearFlow:
    r"""Shear flow round a thin-walled closed section of one cell in torsion.

    .. math:: q = \frac{T}{2 A_m}

    Parameters
    ----------
    torque : moment
        Torque about the axis of the bar.
    enclosed_area : area
        Area enclosed by the middle line of the wall.

    Returns
    -------
    flow : shear flow
        Force per length, the same all round the wall.

    Notes
    -----
    Thin walls and free warping. Load in a row of fasteners along the wall is this flow times their pitch.

    References
    ----------
    R. Bredt, 1896; J. M. Gere, Mechanics of Materials, section 3.10 (from memory).

    Examples
    --------
    >>> cell('=STRESS_TORSION_SHEAR_FLOW("56500 N*m", "0.125 m^2", "N/mm")')
    226.0
    """
    return torque / (2.0 * enclosed_area)


@worksheet_function("STRESS_TORSION_ELLIPSE", valid={"major_diameter": POSITIVE, "minor_diameter": POSITIVE})
def torsion_ellipse(torque: Moment, major_diameter: Length, minor_diameter: Length) -> Stress:
    r"""Largest shear stress of a solid elliptical bar in torsion, at the ends of its short diameter.

    .. math:: \tau_{max} = \frac{16\, T}{\pi\, D_1 D_2 \min(D_1, D_2)}

    Parameters
    ----------
    torque : moment
        Torque about the axis of the bar.
    major_diameter : length
        One diameter of the ellipse along an axis.
    minor_diameter : length
        The other; which of the two is longer does not matter.

    Returns
    -------
    stress : stress
        Shear stress, of the sign of the torque.

    Notes
    -----
    Saint-Venant's exact solution; warping is free.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter on torsion, elliptic section (from memory).

    Examples
    --------
    >>> cell('=STRESS_TORSION_ELLIPSE("100 N*m", "40 mm", "20 mm", "MPa")')
    31.83098862
    """
    shorter = np.minimum(major_diameter, minor_diameter)
    return (16.0 / np.pi) * torque / (major_diameter * minor_diameter * shorter)


@worksheet_function("STRESS_TORSION_TRIANGLE", valid={"side": POSITIVE})
def torsion_triangle(torque: Moment, side: Length) -> Stress:
    r"""Largest shear stress of a solid equilateral triangular bar in torsion, at the middle of a side.

    .. math:: \tau_{max} = \frac{20\, T}{a^3}

    Parameters
    ----------
    torque : moment
        Torque about the axis of the bar.
    side : length
        Side of the triangle.

    Returns
    -------
    stress : stress
        Shear stress, of the sign of the torque.

    Notes
    -----
    Saint-Venant's exact solution; warping is free.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter on torsion, triangular section (from
    memory).

    Examples
    --------
    >>> cell('=STRESS_TORSION_TRIANGLE("100 N*m", "40 mm", "MPa")')
    31.25
    """
    return 20.0 * torque / side**3
