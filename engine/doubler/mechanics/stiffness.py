"""Stiffness of bars in tension, bending and torsion and their deflections."""

from __future__ import annotations

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import (
    Angle,
    Area,
    BendingStiffness,
    Force,
    Length,
    Modulus,
    Moment,
    RotationalStiffness,
    SecondMoment,
    Stiffness,
    TorsionConstant,
)
from doubler.catalogue.limits import POSITIVE


@worksheet_function("STIFFNESS_AXIAL", valid={"length": POSITIVE, "area": POSITIVE, "modulus": POSITIVE})
def axial(length: Length, area: Area, modulus: Modulus) -> Stiffness:
    r"""Axial stiffness of a uniform bar: force for unit elongation.

    .. math:: k = \frac{E A}{L}

    Parameters
    ----------
    length : length
        Length between the ends.
    area : area
        Area of the cross-section.
    modulus : modulus
        Young's modulus.

    Returns
    -------
    stiffness : stiffness
        Force for unit elongation.

    Notes
    -----
    Uniform, straight, linear elastic.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 2.2 (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_AXIAL("500 mm", "100 mm^2", "200 GPa", "N/mm")')
    40000.0
    """
    return modulus * area / length


@worksheet_function("STIFFNESS_ELONGATION", valid={"length": POSITIVE, "area": POSITIVE, "modulus": POSITIVE})
def elongation(force: Force, length: Length, area: Area, modulus: Modulus) -> Length:
    r"""Elongation of a uniform bar under an axial force; longer is positive.

    .. math:: \delta = \frac{F L}{E A}

    Parameters
    ----------
    force : force
        Axial force, tension positive.
    length : length
        Length between the ends.
    area : area
        Area of the cross-section.
    modulus : modulus
        Young's modulus.

    Returns
    -------
    elongation : length
        Change of length, positive where the bar grows longer.

    Notes
    -----
    Uniform, straight, linear elastic; a compressed bar must not buckle.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 2.2 (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_ELONGATION("10 kN", "500 mm", "100 mm^2", "200 GPa", "mm")')
    0.25
    """
    return force * length / (modulus * area)


@worksheet_function("STIFFNESS_BENDING", valid={"second_moment": POSITIVE, "modulus": POSITIVE})
def bending(second_moment: SecondMoment, modulus: Modulus) -> BendingStiffness:
    r"""Bending stiffness of a section: moment for unit curvature.

    .. math:: B = E I

    Parameters
    ----------
    second_moment : second moment
        Second moment of area about the axis of bending.
    modulus : modulus
        Young's modulus.

    Returns
    -------
    bending_stiffness : bending stiffness
        Moment for unit curvature.

    Notes
    -----
    Linear elastic, plane sections stay plane. For a wide plate divide by :math:`1 - \nu^2`.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 5.5 (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_BENDING("10000 mm^4", "200 GPa", "N*mm^2")')
    2000000000.0
    """
    return modulus * second_moment


@worksheet_function("STIFFNESS_CANTILEVER", valid={"length": POSITIVE, "second_moment": POSITIVE, "modulus": POSITIVE})
def cantilever(length: Length, second_moment: SecondMoment, modulus: Modulus) -> Stiffness:
    r"""Stiffness of a cantilever at its tip: transverse force for unit deflection.

    .. math:: k = \frac{3 E I}{L^3}

    Parameters
    ----------
    length : length
        Length between the ends.
    second_moment : second moment
        Second moment of area about the axis of bending.
    modulus : modulus
        Young's modulus.

    Returns
    -------
    stiffness : stiffness
        Tip force for unit tip deflection.

    Notes
    -----
    Slender (shear deflection left out), small deflections, linear elastic, built in without give.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 9.3 (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_CANTILEVER("100 mm", "1000 mm^4", "200 GPa", "N/mm")')
    600.0
    """
    return 3.0 * modulus * second_moment / (length * length * length)


@worksheet_function(
    "STIFFNESS_CANTILEVER_DEFLECTION",
    valid={"length": POSITIVE, "second_moment": POSITIVE, "modulus": POSITIVE},
)
def cantilever_deflection(force: Force, length: Length, second_moment: SecondMoment, modulus: Modulus) -> Length:
    r"""Tip deflection of a cantilever under a transverse force at its tip, positive along the force.

    .. math:: \delta = \frac{F L^3}{3 E I}

    Parameters
    ----------
    force : force
        Transverse force at the tip.
    length : length
        Length between the ends.
    second_moment : second moment
        Second moment of area about the axis of bending.
    modulus : modulus
        Young's modulus.

    Returns
    -------
    deflection : length
        Tip deflection in the sense of the force.

    Notes
    -----
    Slender (shear deflection left out), small deflections, linear elastic, built in without give.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 9.3 (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_CANTILEVER_DEFLECTION("30 N", "100 mm", "1000 mm^4", "200 GPa", "mm")')
    0.05
    """
    return force * length * length * length / (3.0 * modulus * second_moment)


@worksheet_function("STIFFNESS_MIDSPAN", valid={"length": POSITIVE, "second_moment": POSITIVE, "modulus": POSITIVE})
def midspan(length: Length, second_moment: SecondMoment, modulus: Modulus) -> Stiffness:
    r"""Stiffness of a simply supported beam at mid-span: transverse force for unit deflection.

    .. math:: k = \frac{48 E I}{L^3}

    Parameters
    ----------
    length : length
        Length between the ends.
    second_moment : second moment
        Second moment of area about the axis of bending.
    modulus : modulus
        Young's modulus.

    Returns
    -------
    stiffness : stiffness
        Mid-span force for unit mid-span deflection.

    Notes
    -----
    Slender (shear deflection left out), small deflections, linear elastic.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 9.3 (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_MIDSPAN("100 mm", "1000 mm^4", "200 GPa", "N/mm")')
    9600.0
    """
    return 48.0 * modulus * second_moment / (length * length * length)


@worksheet_function(
    "STIFFNESS_MIDSPAN_DEFLECTION", valid={"length": POSITIVE, "second_moment": POSITIVE, "modulus": POSITIVE}
)
def midspan_deflection(force: Force, length: Length, second_moment: SecondMoment, modulus: Modulus) -> Length:
    r"""Mid-span deflection of a simply supported beam under a force at mid-span, positive along the force.

    .. math:: \delta = \frac{F L^3}{48 E I}

    Parameters
    ----------
    force : force
        Transverse force at mid-span.
    length : length
        Length between the ends.
    second_moment : second moment
        Second moment of area about the axis of bending.
    modulus : modulus
        Young's modulus.

    Returns
    -------
    deflection : length
        Mid-span deflection in the sense of the force.

    Notes
    -----
    Slender (shear deflection left out), small deflections, linear elastic.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 9.3 (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_MIDSPAN_DEFLECTION("480 N", "100 mm", "1000 mm^4", "200 GPa", "mm")')
    0.05
    """
    return force * length * length * length / (48.0 * modulus * second_moment)


@worksheet_function(
    "STIFFNESS_TORSIONAL", valid={"length": POSITIVE, "torsion_constant": POSITIVE, "shear_modulus": POSITIVE}
)
def torsional(length: Length, torsion_constant: TorsionConstant, shear_modulus: Modulus) -> RotationalStiffness:
    r"""Torsional stiffness of a uniform bar: torque for unit twist between its ends.

    .. math:: k_t = \frac{G J}{L}

    Parameters
    ----------
    length : length
        Length between the ends.
    torsion_constant : second moment
        Torsion constant of the section (the polar second moment for a round one).
    shear_modulus : modulus
        Shear modulus.

    Returns
    -------
    torsional_stiffness : rotational stiffness
        Torque for unit angle of twist.

    Notes
    -----
    Uniform, linear elastic, ends free to warp.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 3.3 (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_TORSIONAL("1 m", "10000 mm^4", "80 GPa", "N*m/rad")')
    800.0
    """
    return shear_modulus * torsion_constant / length


@worksheet_function(
    "STIFFNESS_TWIST", valid={"length": POSITIVE, "torsion_constant": POSITIVE, "shear_modulus": POSITIVE}
)
def twist(torque: Moment, length: Length, torsion_constant: TorsionConstant, shear_modulus: Modulus) -> Angle:
    r"""Angle of twist between the ends of a uniform bar under torque.

    .. math:: \varphi = \frac{T L}{G J}

    Parameters
    ----------
    torque : moment
        Torque, constant along the bar.
    length : length
        Length between the ends.
    torsion_constant : second moment
        Torsion constant of the section (the polar second moment for a round one).
    shear_modulus : modulus
        Shear modulus.

    Returns
    -------
    twist : angle
        Angle of twist, in the sense of the torque.

    Notes
    -----
    Uniform, linear elastic, ends free to warp.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 3.3 (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_TWIST("800 N*m", "1 m", "1e6 mm^4", "80 GPa", "rad")')
    0.01
    """
    return torque * length / (shear_modulus * torsion_constant)
