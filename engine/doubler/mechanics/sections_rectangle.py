"""Section properties of solid and hollow rectangular sections; the axis of bending lies along the width."""

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

_HOLLOW = (
    condition(
        "the hollow must be given by both its height and its width",
        lambda inner_height, inner_width: (inner_height is None) == (inner_width is None),
    ),
    condition(
        "the hollow must be lower than the section",
        lambda height, inner_height: inner_height is None or inner_height < height,
    ),
    condition(
        "the hollow must be narrower than the section",
        lambda width, inner_width: inner_width is None or inner_width < width,
    ),
)
_ODD_FIFTH_POWERS = 31.0 / 32.0 * 1.0369277551433699
"""Sum of 1/n^5 over odd n: 31/32 of the zeta function at 5."""

_SIZES = {"height": POSITIVE, "width": POSITIVE, "inner_height": NOT_NEGATIVE, "inner_width": NOT_NEGATIVE}


def _hollow(inner_height: Values, inner_width: Values) -> tuple[Values, Values]:
    return (0.0, 0.0) if inner_height is None or inner_width is None else (inner_height, inner_width)


def _cubes(height: Values, width: Values, inner_h: Values, inner_b: Values) -> Values:
    """Return b·h³ less that of the hollow; by products, since a power of arrays costs ten of them."""
    return width * height * height * height - inner_b * inner_h * inner_h * inner_h


@worksheet_function("SECTION_RECTANGLE_AREA", valid=_SIZES, conditions=_HOLLOW)
def area(height: Length, width: Length, inner_height: Length | None = None, inner_width: Length | None = None) -> Area:
    """Area of a solid or hollow rectangular section.

    .. math:: A = h b - h_i b_i

    Parameters
    ----------
    height : length
        Height of the rectangle, across the axis of bending.
    width : length
        Width of the rectangle, along the axis of bending.
    inner_height : length, optional
        Height of a centred rectangular hollow; left out for a solid section.
    inner_width : length, optional
        Width of a centred rectangular hollow; left out for a solid section.

    Returns
    -------
    area : area
        Area of the section.

    Notes
    -----
    Sharp corners.

    References
    ----------
    J. M. Gere, Mechanics of Materials, appendix on properties of plane areas (from memory).

    Examples
    --------
    >>> cell('=SECTION_RECTANGLE_AREA("30 mm", "20 mm", , , "mm^2")')
    600.0
    >>> cell('=SECTION_RECTANGLE_AREA("30 mm", "20 mm", "26 mm", "16 mm", "mm^2")')
    184.0
    """
    inner_h, inner_b = _hollow(inner_height, inner_width)
    return height * width - inner_h * inner_b


@worksheet_function("SECTION_RECTANGLE_SECOND_MOMENT", valid=_SIZES, conditions=_HOLLOW)
def second_moment(
    height: Length, width: Length, inner_height: Length | None = None, inner_width: Length | None = None
) -> SecondMoment:
    r"""Second moment of area of a solid or hollow rectangular section about its centre line along the width.

    .. math:: I = \frac{b h^3 - b_i h_i^3}{12}

    Parameters
    ----------
    height : length
        Height of the rectangle, across the axis of bending.
    width : length
        Width of the rectangle, along the axis of bending.
    inner_height : length, optional
        Height of a centred rectangular hollow; left out for a solid section.
    inner_width : length, optional
        Width of a centred rectangular hollow; left out for a solid section.

    Returns
    -------
    second_moment : second moment
        Second moment of area about the centre line along the width.

    Notes
    -----
    Sharp corners, centred hollow. Exchange height and width for the other axis.

    References
    ----------
    J. M. Gere, Mechanics of Materials, appendix on properties of plane areas (from memory).

    Examples
    --------
    >>> cell('=SECTION_RECTANGLE_SECOND_MOMENT("30 mm", "20 mm", , , "mm^4")')
    45000.0
    """
    inner_h, inner_b = _hollow(inner_height, inner_width)
    return _cubes(height, width, inner_h, inner_b) / 12.0


@worksheet_function("SECTION_RECTANGLE_POLAR_MOMENT", valid=_SIZES, conditions=_HOLLOW)
def polar_moment(
    height: Length, width: Length, inner_height: Length | None = None, inner_width: Length | None = None
) -> SecondMoment:
    r"""Polar second moment of area of a solid or hollow rectangular section about its centre.

    .. math:: I_p = \frac{b h^3 + h b^3 - b_i h_i^3 - h_i b_i^3}{12}

    Parameters
    ----------
    height : length
        Height of the rectangle, across the axis of bending.
    width : length
        Width of the rectangle, along the axis of bending.
    inner_height : length, optional
        Height of a centred rectangular hollow; left out for a solid section.
    inner_width : length, optional
        Width of a centred rectangular hollow; left out for a solid section.

    Returns
    -------
    polar_moment : second moment
        Polar second moment about the centre.

    Notes
    -----
    Not the torsion constant, which is smaller: see SECTION_RECTANGLE_TORSION_CONSTANT.

    References
    ----------
    J. M. Gere, Mechanics of Materials, appendix on properties of plane areas (from memory).

    Examples
    --------
    >>> cell('=SECTION_RECTANGLE_POLAR_MOMENT("30 mm", "20 mm", , , "mm^4")')
    65000.0
    """
    inner_h, inner_b = _hollow(inner_height, inner_width)
    return (width * height * (height**2 + width**2) - inner_b * inner_h * (inner_h**2 + inner_b**2)) / 12.0


@worksheet_function("SECTION_RECTANGLE_MODULUS", valid=_SIZES, conditions=_HOLLOW)
def section_modulus(
    height: Length, width: Length, inner_height: Length | None = None, inner_width: Length | None = None
) -> SectionModulus:
    r"""Elastic section modulus of a solid or hollow rectangular section, bent about the line along its width.

    .. math:: W = \frac{b h^3 - b_i h_i^3}{6 h}

    Parameters
    ----------
    height : length
        Height of the rectangle, across the axis of bending.
    width : length
        Width of the rectangle, along the axis of bending.
    inner_height : length, optional
        Height of a centred rectangular hollow; left out for a solid section.
    inner_width : length, optional
        Width of a centred rectangular hollow; left out for a solid section.

    Returns
    -------
    section_modulus : volume
        Elastic section modulus, :math:`I / (h/2)`.

    Notes
    -----
    Sharp corners, centred hollow.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 5.6 (from memory).

    Examples
    --------
    >>> cell('=SECTION_RECTANGLE_MODULUS("30 mm", "20 mm", , , "mm^3")')
    3000.0
    """
    inner_h, inner_b = _hollow(inner_height, inner_width)
    if inner_height is None:
        return width * height * height / 6.0
    return _cubes(height, width, inner_h, inner_b) / (6.0 * height)


@worksheet_function("SECTION_RECTANGLE_PLASTIC_MODULUS", valid=_SIZES, conditions=_HOLLOW)
def plastic_modulus(
    height: Length, width: Length, inner_height: Length | None = None, inner_width: Length | None = None
) -> SectionModulus:
    r"""Plastic section modulus of a solid or hollow rectangular section.

    .. math:: Z = \frac{b h^2 - b_i h_i^2}{4}

    Parameters
    ----------
    height : length
        Height of the rectangle, across the axis of bending.
    width : length
        Width of the rectangle, along the axis of bending.
    inner_height : length, optional
        Height of a centred rectangular hollow; left out for a solid section.
    inner_width : length, optional
        Width of a centred rectangular hollow; left out for a solid section.

    Returns
    -------
    plastic_modulus : volume
        Plastic section modulus.

    Notes
    -----
    Fully plastic moment divided by the yield stress: equal yield in tension and compression, no hardening, no
    buckling of the walls.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 6.10 (from memory).

    Examples
    --------
    >>> cell('=SECTION_RECTANGLE_PLASTIC_MODULUS("30 mm", "20 mm", , , "mm^3")')
    4500.0
    """
    inner_h, inner_b = _hollow(inner_height, inner_width)
    return (width * height**2 - inner_b * inner_h**2) / 4.0


@worksheet_function(
    "SECTION_RECTANGLE_FIRST_MOMENT",
    valid=_SIZES | {"at": NOT_NEGATIVE},
    conditions=(
        *_HOLLOW,
        condition("the cut must lie inside the section", lambda height, at: at is None or 2.0 * at <= height),
    ),
)
def first_moment(
    height: Length,
    width: Length,
    inner_height: Length | None = None,
    inner_width: Length | None = None,
    at: Length | None = None,
) -> FirstMoment:
    r"""First moment of area of the part of a rectangular section beyond a cut along its width.

    .. math:: Q = \frac{b}{2} \left(\frac{h^2}{4} - y^2\right) - \frac{b_i}{2} \left(\frac{h_i^2}{4} -
        y^2\right)_{+}

    Parameters
    ----------
    height : length
        Height of the rectangle, across the axis of bending.
    width : length
        Width of the rectangle, along the axis of bending.
    inner_height : length, optional
        Height of a centred rectangular hollow; left out for a solid section.
    inner_width : length, optional
        Width of a centred rectangular hollow; left out for a solid section.
    at : length, optional
        Distance of the cut from the centre line; left out: the cut at the centre line, where Q is largest.

    Returns
    -------
    first_moment : volume
        First moment about the centre line along the width.

    Notes
    -----
    For the shear stress VQ/(It).

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 5.8 (from memory).

    Examples
    --------
    >>> cell('=SECTION_RECTANGLE_FIRST_MOMENT("30 mm", "20 mm", , , , "mm^3")')
    2250.0
    """
    inner_h, inner_b = _hollow(inner_height, inner_width)
    cut = 0.0 if at is None else at
    return width / 2.0 * (height**2 / 4.0 - cut**2) - inner_b / 2.0 * np.maximum(inner_h**2 / 4.0 - cut**2, 0.0)


@worksheet_function("SECTION_RECTANGLE_RADIUS", valid=_SIZES, conditions=_HOLLOW)
def radius_of_gyration(
    height: Length, width: Length, inner_height: Length | None = None, inner_width: Length | None = None
) -> Length:
    r"""Radius of gyration of a solid or hollow rectangular section about its centre line along the width.

    .. math:: \rho = \sqrt{I / A}

    Parameters
    ----------
    height : length
        Height of the rectangle, across the axis of bending.
    width : length
        Width of the rectangle, along the axis of bending.
    inner_height : length, optional
        Height of a centred rectangular hollow; left out for a solid section.
    inner_width : length, optional
        Width of a centred rectangular hollow; left out for a solid section.

    Returns
    -------
    radius : length
        Radius of gyration.

    Notes
    -----
    Sharp corners, centred hollow. A column buckles about the axis of the smaller radius unless it is held.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 11.3 (from memory).

    Examples
    --------
    >>> cell('=SECTION_RECTANGLE_RADIUS("30 mm", "20 mm", , , "mm")')
    8.660254038
    """
    inner_h, inner_b = _hollow(inner_height, inner_width)
    return np.sqrt(_cubes(height, width, inner_h, inner_b) / (12.0 * (height * width - inner_h * inner_b)))


@worksheet_function("SECTION_RECTANGLE_TORSION_CONSTANT", valid={"height": POSITIVE, "width": POSITIVE})
def torsion_constant(height: Length, width: Length) -> TorsionConstant:
    r"""Torsion constant of a solid rectangular section, by the Saint-Venant series.

    .. math:: J = a b^3 \left[ \frac{1}{3} - \frac{64}{\pi^5} \frac{b}{a} \sum_{n=1,3,5,\ldots}
        \frac{1}{n^5} \tanh\frac{n \pi a}{2 b} \right], \quad a \ge b

    Parameters
    ----------
    height : length
        One side.
    width : length
        The other side.

    Returns
    -------
    torsion_constant : second moment
        Torsion constant.

    Notes
    -----
    Ends free to warp. Summed as the exact sum of :math:`1/n^5` less a remainder that falls as
    :math:`e^{-n \pi}`, so that seven terms give all digits. For a hollow section see
    SECTION_PROFILE_TORSION_CONSTANT.

    References
    ----------
    S. P. Timoshenko and J. N. Goodier, Theory of Elasticity, section on torsion of rectangular bars (from
    memory).

    Examples
    --------
    >>> cell('=SECTION_RECTANGLE_TORSION_CONSTANT("10 mm", "10 mm", "mm^4")')
    1405.77015
    """
    long, short = np.maximum(height, width), np.minimum(height, width)
    ratio = long / short
    short_of_one = (2.0 / (1.0 + np.exp(n * np.pi * ratio)) / n**5 for n in range(1, 14, 2))
    series = _ODD_FIFTH_POWERS - sum(short_of_one)
    return long * short**3 * (1.0 / 3.0 - 64.0 / np.pi**5 / ratio * series)


@worksheet_function("SECTION_RECTANGLE_SHEAR_AREA", valid={"height": POSITIVE, "width": POSITIVE})
def shear_area(height: Length, width: Length) -> Area:
    r"""Shear area of a solid rectangular section, for deflection by shear.

    .. math:: A_s = \frac{5}{6} b h

    Parameters
    ----------
    height : length
        Height of the rectangle, across the axis of bending.
    width : length
        Width of the rectangle, along the axis of bending.

    Returns
    -------
    shear_area : area
        Area by which the shear force is divided for the mean shear strain.

    Notes
    -----
    From the strain energy of the parabolic shear stress. Not for the largest shear stress, which is V/(bh) ×
    3/2.

    References
    ----------
    S. P. Timoshenko, Strength of Materials (from memory).

    Examples
    --------
    >>> cell('=SECTION_RECTANGLE_SHEAR_AREA("30 mm", "20 mm", "mm^2")')
    500.0
    """
    return 5.0 / 6.0 * width * height
