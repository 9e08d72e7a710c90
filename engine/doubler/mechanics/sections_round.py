"""Section properties of solid and hollow round sections."""

from __future__ import annotations

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import (
    Area,
    FirstMoment,
    Length,
    SecondMoment,
    SectionModulus,
    TorsionConstant,
    Values,
)
from doubler.catalogue.limits import NOT_NEGATIVE, POSITIVE, condition

_HOLLOW = condition(
    "the inner diameter must be smaller than the outer diameter",
    lambda diameter, inner_diameter: inner_diameter is None or inner_diameter < diameter,
)


def _bore(inner_diameter: Values) -> Values:
    return 0.0 if inner_diameter is None else inner_diameter


def _fourth_powers(diameter: Values, inner_diameter: Values) -> Values:
    """Return the difference of the fourth powers, as a product of which a thin wall loses no digit."""
    bore = _bore(inner_diameter)
    return (diameter - bore) * (diameter + bore) * (diameter * diameter + bore * bore)


@worksheet_function(
    "SECTION_ROUND_AREA", valid={"diameter": POSITIVE, "inner_diameter": NOT_NEGATIVE}, conditions=(_HOLLOW,)
)
def area(diameter: Length, inner_diameter: Length | None = None) -> Area:
    r"""Area of a solid or hollow round section.

    .. math:: A = \frac{\pi}{4} \left(D^2 - d^2\right)

    Parameters
    ----------
    diameter : length
        Outer diameter.
    inner_diameter : length, optional
        Inner diameter; left out (or zero) for a solid section.

    Returns
    -------
    area : area
        Area of the section.

    Notes
    -----
    Exact for concentric circles.

    References
    ----------
    J. M. Gere, Mechanics of Materials, appendix on properties of plane areas (from memory).

    Examples
    --------
    >>> cell('=SECTION_ROUND_AREA("20 mm", , "mm^2")')
    314.1592654
    >>> cell('=SECTION_ROUND_AREA("20 mm", "10 mm", "mm^2")')
    235.619449
    """
    return np.pi / 4.0 * (diameter**2 - _bore(inner_diameter) ** 2)


@worksheet_function(
    "SECTION_ROUND_SECOND_MOMENT",
    valid={"diameter": POSITIVE, "inner_diameter": NOT_NEGATIVE},
    conditions=(_HOLLOW,),
)
def second_moment(diameter: Length, inner_diameter: Length | None = None) -> SecondMoment:
    r"""Second moment of area of a solid or hollow round section about any diameter.

    .. math:: I = \frac{\pi}{64} \left(D^4 - d^4\right)

    Parameters
    ----------
    diameter : length
        Outer diameter.
    inner_diameter : length, optional
        Inner diameter; left out (or zero) for a solid section.

    Returns
    -------
    second_moment : second moment
        Second moment of area about a diameter.

    Notes
    -----
    Exact for concentric circles.

    References
    ----------
    J. M. Gere, Mechanics of Materials, appendix on properties of plane areas (from memory).

    Examples
    --------
    >>> cell('=SECTION_ROUND_SECOND_MOMENT("20 mm", , "mm^4")')
    7853.981634
    """
    return np.pi / 64.0 * _fourth_powers(diameter, inner_diameter)


@worksheet_function(
    "SECTION_ROUND_POLAR_MOMENT",
    valid={"diameter": POSITIVE, "inner_diameter": NOT_NEGATIVE},
    conditions=(_HOLLOW,),
)
def polar_moment(diameter: Length, inner_diameter: Length | None = None) -> SecondMoment:
    r"""Polar second moment of area of a solid or hollow round section about its centre.

    .. math:: I_p = \frac{\pi}{32} \left(D^4 - d^4\right)

    Parameters
    ----------
    diameter : length
        Outer diameter.
    inner_diameter : length, optional
        Inner diameter; left out (or zero) for a solid section.

    Returns
    -------
    polar_moment : second moment
        Polar second moment about the centre.

    Notes
    -----
    For a round section, and for no other, it is the torsion constant too.

    References
    ----------
    J. M. Gere, Mechanics of Materials, appendix on properties of plane areas (from memory).

    Examples
    --------
    >>> cell('=SECTION_ROUND_POLAR_MOMENT("20 mm", "16 mm", "mm^4")')
    9273.981513
    """
    return np.pi / 32.0 * _fourth_powers(diameter, inner_diameter)


@worksheet_function(
    "SECTION_ROUND_TORSION_CONSTANT",
    valid={"diameter": POSITIVE, "inner_diameter": NOT_NEGATIVE},
    conditions=(_HOLLOW,),
)
def torsion_constant(diameter: Length, inner_diameter: Length | None = None) -> TorsionConstant:
    r"""Torsion constant of a solid or closed hollow round section.

    .. math:: J = \frac{\pi}{32} \left(D^4 - d^4\right)

    Parameters
    ----------
    diameter : length
        Outer diameter.
    inner_diameter : length, optional
        Inner diameter; left out (or zero) for a solid section.

    Returns
    -------
    torsion_constant : second moment
        Torsion constant.

    Notes
    -----
    Exact for concentric circles. A tube that is slit along its length is an open section with a far smaller
    constant.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 3.3 (from memory).

    Examples
    --------
    >>> cell('=SECTION_ROUND_TORSION_CONSTANT("20 mm", , "mm^4")')
    15707.96327
    """
    return np.pi / 32.0 * _fourth_powers(diameter, inner_diameter)


@worksheet_function(
    "SECTION_ROUND_MODULUS",
    valid={"diameter": POSITIVE, "inner_diameter": NOT_NEGATIVE},
    conditions=(_HOLLOW,),
)
def section_modulus(diameter: Length, inner_diameter: Length | None = None) -> SectionModulus:
    r"""Elastic section modulus of a solid or hollow round section.

    .. math:: W = \frac{\pi}{32 D} \left(D^4 - d^4\right)

    Parameters
    ----------
    diameter : length
        Outer diameter.
    inner_diameter : length, optional
        Inner diameter; left out (or zero) for a solid section.

    Returns
    -------
    section_modulus : volume
        Elastic section modulus, :math:`I / (D/2)`.

    Notes
    -----
    For bending; the modulus for torsion is twice this one.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 5.6 (from memory).

    Examples
    --------
    >>> cell('=SECTION_ROUND_MODULUS("20 mm", , "mm^3")')
    785.3981634
    """
    return np.pi / 32.0 * _fourth_powers(diameter, inner_diameter) / diameter


@worksheet_function(
    "SECTION_ROUND_PLASTIC_MODULUS",
    valid={"diameter": POSITIVE, "inner_diameter": NOT_NEGATIVE},
    conditions=(_HOLLOW,),
)
def plastic_modulus(diameter: Length, inner_diameter: Length | None = None) -> SectionModulus:
    r"""Plastic section modulus of a solid or hollow round section.

    .. math:: Z = \frac{D^3 - d^3}{6}

    Parameters
    ----------
    diameter : length
        Outer diameter.
    inner_diameter : length, optional
        Inner diameter; left out (or zero) for a solid section.

    Returns
    -------
    plastic_modulus : volume
        Plastic section modulus.

    Notes
    -----
    Fully plastic moment divided by the yield stress: equal yield in tension and compression, no hardening, no
    buckling of the wall.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 6.10 (from memory).

    Examples
    --------
    >>> cell('=SECTION_ROUND_PLASTIC_MODULUS("20 mm", , "mm^3")')
    1333.333333
    """
    bore = _bore(inner_diameter)
    return (diameter - bore) * (diameter * (diameter + bore) + bore * bore) / 6.0


@worksheet_function(
    "SECTION_ROUND_FIRST_MOMENT",
    valid={"diameter": POSITIVE, "inner_diameter": NOT_NEGATIVE, "at": NOT_NEGATIVE},
    conditions=(
        _HOLLOW,
        condition("the cut must lie inside the section", lambda diameter, at: at is None or 2.0 * at <= diameter),
    ),
)
def first_moment(diameter: Length, inner_diameter: Length | None = None, at: Length | None = None) -> FirstMoment:
    r"""First moment of area of the part of a round section beyond a straight cut.

    .. math:: Q = \frac{2}{3} \left[ \left(R^2 - y^2\right)^{3/2} - \left(r^2 - y^2\right)_{+}^{3/2}
        \right]

    Parameters
    ----------
    diameter : length
        Outer diameter.
    inner_diameter : length, optional
        Inner diameter; left out (or zero) for a solid section.
    at : length, optional
        Distance of the cut from the centre; left out: the cut through the centre, where Q is largest.

    Returns
    -------
    first_moment : volume
        First moment about the centre line that is parallel to the cut.

    Notes
    -----
    For the shear stress VQ/(It); the width at the cut is twice :math:`\sqrt{R^2 - y^2}`, less the bore.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 5.9 (from memory).

    Examples
    --------
    >>> cell('=SECTION_ROUND_FIRST_MOMENT("20 mm", , , "mm^3")')
    666.6666667
    """
    cut = 0.0 if at is None else at
    outer = np.maximum((diameter / 2.0) ** 2 - cut**2, 0.0)
    inner = np.maximum((_bore(inner_diameter) / 2.0) ** 2 - cut**2, 0.0)
    return 2.0 / 3.0 * (outer**1.5 - inner**1.5)


@worksheet_function(
    "SECTION_ROUND_RADIUS",
    valid={"diameter": POSITIVE, "inner_diameter": NOT_NEGATIVE},
    conditions=(_HOLLOW,),
)
def radius_of_gyration(diameter: Length, inner_diameter: Length | None = None) -> Length:
    r"""Radius of gyration of a solid or hollow round section about any diameter.

    .. math:: \rho = \frac{\sqrt{D^2 + d^2}}{4}

    Parameters
    ----------
    diameter : length
        Outer diameter.
    inner_diameter : length, optional
        Inner diameter; left out (or zero) for a solid section.

    Returns
    -------
    radius : length
        Radius of gyration, :math:`\sqrt{I/A}`.

    Notes
    -----
    Exact for concentric circles.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 11.3 (from memory).

    Examples
    --------
    >>> cell('=SECTION_ROUND_RADIUS("20 mm", , "mm")')
    5.0
    """
    return np.sqrt(diameter**2 + _bore(inner_diameter) ** 2) / 4.0


@worksheet_function(
    "SECTION_ROUND_SHEAR_AREA",
    valid={"diameter": POSITIVE, "inner_diameter": NOT_NEGATIVE},
    conditions=(_HOLLOW,),
)
def shear_area(diameter: Length, inner_diameter: Length | None = None) -> Area:
    r"""Shear area of a solid or hollow round section, for deflection by shear.

    .. math:: A_s = A \, \frac{6 (1 + m^2)^2}{7 (1 + m^2)^2 + 20 m^2}, \quad m = \frac{d}{D}

    Parameters
    ----------
    diameter : length
        Outer diameter.
    inner_diameter : length, optional
        Inner diameter; left out (or zero) for a solid section.

    Returns
    -------
    shear_area : area
        Area by which the shear force is divided for the mean shear strain.

    Notes
    -----
    Cowper's coefficient at a Poisson's ratio of zero, where it is lowest: 6/7 of the area solid, one half for
    a thin wall. A larger Poisson's ratio makes the section slightly stiffer. Not for the largest shear
    stress.

    References
    ----------
    G. R. Cowper, The shear coefficient in Timoshenko's beam theory, Journal of Applied Mechanics 33 (1966)
    (from memory).

    Examples
    --------
    >>> cell('=SECTION_ROUND_SHEAR_AREA("20 mm", , "mm^2")')
    269.2793703
    """
    bore = _bore(inner_diameter)
    ratio = (bore / diameter) ** 2
    shape = (1.0 + ratio) ** 2
    return np.pi / 4.0 * (diameter**2 - bore**2) * 6.0 * shape / (7.0 * shape + 20.0 * ratio)
