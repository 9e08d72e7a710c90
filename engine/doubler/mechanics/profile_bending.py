"""Bending of profiles (I, channel, tee, angle, zee, box, hat, …): section moduli, first moment, principal axes."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Angle, FirstMoment, Length, SecondMoment, SectionModulus, row
from doubler.catalogue.limits import NOT_NEGATIVE, POSITIVE, condition
from doubler.mechanics import outline as plane
from doubler.mechanics.profile_outlines import Shape, given, outline, sound

Axis = Literal["x", "y"]
Principal: Any = row(SecondMoment, "I1", "I2")

_SIZES = {
    "depth": POSITIVE,
    "width": POSITIVE,
    "web": POSITIVE,
    "flange": POSITIVE,
    "bottom_width": POSITIVE,
    "bottom_flange": POSITIVE,
    "fillet": POSITIVE,
}
_SOUND = (
    condition(
        "the walls (and fillets) must fit into the depth and the width of the section",
        lambda shape, depth, width, web, flange, bottom_width, bottom_flange, fillet: sound(
            shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet)
        ),
    ),
)


@worksheet_function("SECTION_PROFILE_MODULUS", valid=_SIZES, conditions=_SOUND)
def section_modulus(
    shape: Shape,
    depth: Length,
    width: Length | None = None,
    web: Length | None = None,
    flange: Length | None = None,
    bottom_width: Length | None = None,
    bottom_flange: Length | None = None,
    fillet: Length | None = None,
    axis: Axis = "x",
) -> SectionModulus:
    """Elastic section modulus of a profile for its farthest fibre.

    .. math:: W = I / c_{max}

    Parameters
    ----------
    shape : choice
        I, channel, tee, angle, zee, box, hat or trapezium.
    depth : length
        Overall depth, along y.
    width : length, optional
        Overall width of the (upper) flange, along x; the horizontal leg of an angle, the crown of a hat, the
        upper side of a trapezium.
    web : length, optional
        Thickness of the web (of each side wall of a box or hat, of the upright leg of an angle).
    flange : length, optional
        Thickness of the (upper) flange, of the horizontal leg of an angle (its web's where left out).
    bottom_width : length, optional
        Width of the lower flange where it differs; of each lip of a hat; of the lower side of a trapezium.
    bottom_flange : length, optional
        Thickness of the lower flange (of the lips of a hat) where it differs.
    fillet : length, optional
        Radius at the root between web and flange: I, channel, tee, angle.
    axis : choice, optional
        The axis through the centroid: x (along the width) or y (along the depth).

    Returns
    -------
    section_modulus : volume
        Elastic section modulus, the smaller of the two sides'.

    Notes
    -----
    For bending about the axis given; where that is no principal axis (angle, zee) the bar must be held to it.

    Zee: upper flange to the left, lower to the right. Corners sharp but for the root fillets, each followed
    by 16 chords of the same area.

    References
    ----------
    Green's theorem over the section's outline; the formula is J. M. Gere, Mechanics of Materials, appendix on
    plane areas (from memory).

    Examples
    --------
    >>> cell('=SECTION_PROFILE_MODULUS("I", "200 mm", "100 mm", "5.6 mm", "8.5 mm", , , "12 mm", "x", "cm^3")')
    194.3167141
    """
    section = outline(shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet))
    section = section if axis == "x" else section.quarter_turn()
    low, high = plane.extremes(section)
    level = plane.centroid(section)[1]
    return plane.second_moments(section)[0] / np.maximum(high - level, level - low)


@worksheet_function("SECTION_PROFILE_PLASTIC_MODULUS", valid=_SIZES, conditions=_SOUND)
def plastic_modulus(
    shape: Shape,
    depth: Length,
    width: Length | None = None,
    web: Length | None = None,
    flange: Length | None = None,
    bottom_width: Length | None = None,
    bottom_flange: Length | None = None,
    fillet: Length | None = None,
    axis: Axis = "x",
) -> SectionModulus:
    r"""Plastic section modulus of a profile.

    .. math:: Z = \int |y - y_p| \, dA, \quad y_p \text{ halves the area}

    Parameters
    ----------
    shape : choice
        I, channel, tee, angle, zee, box, hat or trapezium.
    depth : length
        Overall depth, along y.
    width : length, optional
        Overall width of the (upper) flange, along x; the horizontal leg of an angle, the crown of a hat, the
        upper side of a trapezium.
    web : length, optional
        Thickness of the web (of each side wall of a box or hat, of the upright leg of an angle).
    flange : length, optional
        Thickness of the (upper) flange, of the horizontal leg of an angle (its web's where left out).
    bottom_width : length, optional
        Width of the lower flange where it differs; of each lip of a hat; of the lower side of a trapezium.
    bottom_flange : length, optional
        Thickness of the lower flange (of the lips of a hat) where it differs.
    fillet : length, optional
        Radius at the root between web and flange: I, channel, tee, angle.
    axis : choice, optional
        The axis through the centroid: x (along the width) or y (along the depth).

    Returns
    -------
    plastic_modulus : volume
        Plastic section modulus.

    Notes
    -----
    Equal yield in tension and compression, no hardening, no buckling of the walls; bending about the axis
    given, the bar held to it.

    Zee: upper flange to the left, lower to the right. Corners sharp but for the root fillets, each followed
    by 16 chords of the same area.

    References
    ----------
    Green's theorem over the section's outline; the formula is J. M. Gere, Mechanics of Materials, appendix on
    plane areas (from memory).

    Examples
    --------
    >>> cell('=SECTION_PROFILE_PLASTIC_MODULUS("I", "200 mm", "100 mm", "5.6 mm", "8.5 mm", , , "12 mm", "x", "cm^3")')
    220.6385775
    """
    section = outline(shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet))
    section = section if axis == "x" else section.quarter_turn()
    return plane.plastic_modulus(section)


@worksheet_function(
    "SECTION_PROFILE_FIRST_MOMENT",
    valid=_SIZES | {"at": NOT_NEGATIVE},
    conditions=(
        *_SOUND,
        condition("the cut must lie inside the depth", lambda depth, at: at is None or at <= depth),
    ),
)
def first_moment(
    shape: Shape,
    depth: Length,
    width: Length | None = None,
    web: Length | None = None,
    flange: Length | None = None,
    bottom_width: Length | None = None,
    bottom_flange: Length | None = None,
    fillet: Length | None = None,
    at: Length | None = None,
) -> FirstMoment:
    r"""First moment of area of the part of a profile above a cut along its width.

    .. math:: Q = \int_{y > y_c} (y - \bar{y}) \, dA

    Parameters
    ----------
    shape : choice
        I, channel, tee, angle, zee, box, hat or trapezium.
    depth : length
        Overall depth, along y.
    width : length, optional
        Overall width of the (upper) flange, along x; the horizontal leg of an angle, the crown of a hat, the
        upper side of a trapezium.
    web : length, optional
        Thickness of the web (of each side wall of a box or hat, of the upright leg of an angle).
    flange : length, optional
        Thickness of the (upper) flange, of the horizontal leg of an angle (its web's where left out).
    bottom_width : length, optional
        Width of the lower flange where it differs; of each lip of a hat; of the lower side of a trapezium.
    bottom_flange : length, optional
        Thickness of the lower flange (of the lips of a hat) where it differs.
    fillet : length, optional
        Radius at the root between web and flange: I, channel, tee, angle.
    at : length, optional
        Height of the cut above the foot; left out: at the centroid.

    Returns
    -------
    first_moment : volume
        First moment about the centroidal x axis.

    Notes
    -----
    For the shear stress VQ/(It). Zero at the foot and at the top; largest at the centroid.

    Zee: upper flange to the left, lower to the right. Corners sharp but for the root fillets, each followed
    by 16 chords of the same area.

    References
    ----------
    Green's theorem over the section's outline; the formula is J. M. Gere, Mechanics of Materials, appendix on
    plane areas (from memory).

    Examples
    --------
    >>> cell('=SECTION_PROFILE_FIRST_MOMENT("tee", "60 mm", "90 mm", "30 mm", "20 mm", , , , "40 mm", "mm^3")')
    21600.0
    """
    section = outline(shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet))
    level = plane.centroid(section)[1] if at is None else at
    return plane.first_moment_above(section, level)


@worksheet_function("SECTION_PROFILE_PRINCIPAL", valid=_SIZES, conditions=_SOUND)
def principal(
    shape: Shape,
    depth: Length,
    width: Length | None = None,
    web: Length | None = None,
    flange: Length | None = None,
    bottom_width: Length | None = None,
    bottom_flange: Length | None = None,
    fillet: Length | None = None,
) -> Principal:
    r"""Principal second moments of area of a profile: the largest and the smallest.

    .. math:: I_{1,2} = \frac{I_x + I_y}{2} \pm \sqrt{\left(\frac{I_x - I_y}{2}\right)^2 + I_{xy}^2}

    Parameters
    ----------
    shape : choice
        I, channel, tee, angle, zee, box, hat or trapezium.
    depth : length
        Overall depth, along y.
    width : length, optional
        Overall width of the (upper) flange, along x; the horizontal leg of an angle, the crown of a hat, the
        upper side of a trapezium.
    web : length, optional
        Thickness of the web (of each side wall of a box or hat, of the upright leg of an angle).
    flange : length, optional
        Thickness of the (upper) flange, of the horizontal leg of an angle (its web's where left out).
    bottom_width : length, optional
        Width of the lower flange where it differs; of each lip of a hat; of the lower side of a trapezium.
    bottom_flange : length, optional
        Thickness of the lower flange (of the lips of a hat) where it differs.
    fillet : length, optional
        Radius at the root between web and flange: I, channel, tee, angle.

    Returns
    -------
    principal : principal
        The largest and the smallest second moment about centroidal axes.

    Notes
    -----
    Zee: upper flange to the left, lower to the right. Corners sharp but for the root fillets, each followed
    by 16 chords of the same area.

    References
    ----------
    Green's theorem over the section's outline; the formula is J. M. Gere, Mechanics of Materials, appendix on
    plane areas (from memory).

    Examples
    --------
    >>> cell('=SECTION_PROFILE_PRINCIPAL("angle", "200 mm", "160 mm", "30 mm", , , , , "cm^4")')
    [[4724.073447, 1119.881099]]
    """
    section = outline(shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet))
    return np.stack(plane.principal(*plane.second_moments(section)), axis=-1)


@worksheet_function("SECTION_PROFILE_PRINCIPAL_ANGLE", valid=_SIZES, conditions=_SOUND)
def principal_angle(
    shape: Shape,
    depth: Length,
    width: Length | None = None,
    web: Length | None = None,
    flange: Length | None = None,
    bottom_width: Length | None = None,
    bottom_flange: Length | None = None,
    fillet: Length | None = None,
) -> Angle:
    r"""Angle from the x axis to the axis of the largest second moment, counter-clockwise.

    .. math:: \tan 2\theta = \frac{-2 I_{xy}}{I_x - I_y}

    Parameters
    ----------
    shape : choice
        I, channel, tee, angle, zee, box, hat or trapezium.
    depth : length
        Overall depth, along y.
    width : length, optional
        Overall width of the (upper) flange, along x; the horizontal leg of an angle, the crown of a hat, the
        upper side of a trapezium.
    web : length, optional
        Thickness of the web (of each side wall of a box or hat, of the upright leg of an angle).
    flange : length, optional
        Thickness of the (upper) flange, of the horizontal leg of an angle (its web's where left out).
    bottom_width : length, optional
        Width of the lower flange where it differs; of each lip of a hat; of the lower side of a trapezium.
    bottom_flange : length, optional
        Thickness of the lower flange (of the lips of a hat) where it differs.
    fillet : length, optional
        Radius at the root between web and flange: I, channel, tee, angle.

    Returns
    -------
    angle : angle
        Angle to the axis of the largest second moment, within ±90°.

    Notes
    -----
    Where both principal second moments are equal every axis is principal, and the angle is zero.

    The depth lies along y, the width along x; x from the centre line of a symmetric profile or of a zee's
    web, from the outer face of the web of a channel or angle; y from the foot.

    References
    ----------
    Green's theorem over the section's outline; the formula is J. M. Gere, Mechanics of Materials, appendix on
    plane areas (from memory).

    Examples
    --------
    >>> cell('=SECTION_PROFILE_PRINCIPAL_ANGLE("angle", "200 mm", "160 mm", "30 mm", , , , , "deg")')
    31.5558975
    """
    section = outline(shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet))
    return plane.principal_angle(*plane.second_moments(section))
