"""Section properties of profiles (I, channel, tee, angle, zee, box, hat, trapezium) about axes along x and y."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Area, Length, SecondMoment, row
from doubler.catalogue.limits import POSITIVE, condition
from doubler.mechanics import outline as plane
from doubler.mechanics.profile_outlines import Shape, given, outline, sound

Axis = Literal["x", "y"]

Centroid: Any = row(Length, "x", "y")
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


@worksheet_function("SECTION_PROFILE_AREA", valid=_SIZES, conditions=_SOUND)
def area(
    shape: Shape,
    depth: Length,
    width: Length | None = None,
    web: Length | None = None,
    flange: Length | None = None,
    bottom_width: Length | None = None,
    bottom_flange: Length | None = None,
    fillet: Length | None = None,
) -> Area:
    r"""Area of a profile.

    .. math:: A = \frac{1}{2} \oint \left(x \, dy - y \, dx\right)

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
    area : area
        Area of the section.

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
    >>> cell('=SECTION_PROFILE_AREA("I", "200 mm", "100 mm", "5.6 mm", "8.5 mm", , , "12 mm", "cm^2")')
    28.48410658
    """
    section = outline(shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet))
    return plane.area(section)


@worksheet_function("SECTION_PROFILE_CENTROID", valid=_SIZES, conditions=_SOUND)
def centroid(
    shape: Shape,
    depth: Length,
    width: Length | None = None,
    web: Length | None = None,
    flange: Length | None = None,
    bottom_width: Length | None = None,
    bottom_flange: Length | None = None,
    fillet: Length | None = None,
) -> Centroid:
    r"""Place of the centroid of a profile.

    .. math:: \bar{x} = \frac{1}{A} \int x \, dA, \quad \bar{y} = \frac{1}{A} \int y \, dA

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
    centroid : centroid
        Coordinates of the centroid: x, y.

    Notes
    -----
    The depth lies along y, the width along x; x from the centre line of a symmetric profile or of a zee's
    web, from the outer face of the web of a channel or angle; y from the foot.

    Zee: upper flange to the left, lower to the right. Corners sharp but for the root fillets, each followed
    by 16 chords of the same area.

    References
    ----------
    Green's theorem over the section's outline; the formula is J. M. Gere, Mechanics of Materials, appendix on
    plane areas (from memory).

    Examples
    --------
    >>> cell('=SECTION_PROFILE_CENTROID("tee", "60 mm", "90 mm", "30 mm", "20 mm", , , , "mm")')
    [[0.0, 38.0]]
    """
    section = outline(shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet))
    return np.stack(plane.centroid(section), axis=-1)


@worksheet_function("SECTION_PROFILE_SECOND_MOMENT", valid=_SIZES, conditions=_SOUND)
def second_moment(
    shape: Shape,
    depth: Length,
    width: Length | None = None,
    web: Length | None = None,
    flange: Length | None = None,
    bottom_width: Length | None = None,
    bottom_flange: Length | None = None,
    fillet: Length | None = None,
    axis: Axis = "x",
) -> SecondMoment:
    r"""Second moment of area of a profile about its centroidal x or y axis.

    .. math:: I_x = \int (y - \bar{y})^2 dA, \quad I_y = \int (x - \bar{x})^2 dA

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
    second_moment : second moment
        Second moment about the axis.

    Notes
    -----
    The axes are principal ones only where the profile is symmetric about one of them; an angle or a zee bends
    about others.

    Zee: upper flange to the left, lower to the right. Corners sharp but for the root fillets, each followed
    by 16 chords of the same area.

    References
    ----------
    Green's theorem over the section's outline; the formula is J. M. Gere, Mechanics of Materials, appendix on
    plane areas (from memory).

    Examples
    --------
    >>> cell('=SECTION_PROFILE_SECOND_MOMENT("I", "200 mm", "100 mm", "5.6 mm", "8.5 mm", , , "12 mm", "x", "cm^4")')
    1943.167141
    """
    section = outline(shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet))
    about_x, about_y, _ = plane.second_moments(section)
    return about_x if axis == "x" else about_y


@worksheet_function("SECTION_PROFILE_PRODUCT", valid=_SIZES, conditions=_SOUND)
def product(
    shape: Shape,
    depth: Length,
    width: Length | None = None,
    web: Length | None = None,
    flange: Length | None = None,
    bottom_width: Length | None = None,
    bottom_flange: Length | None = None,
    fillet: Length | None = None,
) -> SecondMoment:
    r"""Product of inertia of a profile about its centroidal x and y axes.

    .. math:: I_{xy} = \int (x - \bar{x})(y - \bar{y}) \, dA

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
    product : second moment
        Product of inertia; zero where x or y is an axis of symmetry.

    Notes
    -----
    The depth lies along y, the width along x; x from the centre line of a symmetric profile or of a zee's
    web, from the outer face of the web of a channel or angle; y from the foot.

    Zee: upper flange to the left, lower to the right. Corners sharp but for the root fillets, each followed
    by 16 chords of the same area.

    References
    ----------
    Green's theorem over the section's outline; the formula is J. M. Gere, Mechanics of Materials, appendix on
    plane areas (from memory).

    Examples
    --------
    >>> cell('=SECTION_PROFILE_PRODUCT("angle", "200 mm", "160 mm", "30 mm", , , , , "cm^4")')
    -1607.272727
    """
    section = outline(shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet))
    return plane.second_moments(section)[2]


@worksheet_function("SECTION_PROFILE_RADIUS", valid=_SIZES, conditions=_SOUND)
def radius_of_gyration(
    shape: Shape,
    depth: Length,
    width: Length | None = None,
    web: Length | None = None,
    flange: Length | None = None,
    bottom_width: Length | None = None,
    bottom_flange: Length | None = None,
    fillet: Length | None = None,
    axis: Axis = "x",
) -> Length:
    r"""Radius of gyration of a profile about its centroidal x or y axis.

    .. math:: \rho = \sqrt{I / A}

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
    radius : length
        Radius of gyration.

    Notes
    -----
    An angle or a zee has a smaller one about its principal axis: see SECTION_PROFILE_PRINCIPAL.

    Zee: upper flange to the left, lower to the right. Corners sharp but for the root fillets, each followed
    by 16 chords of the same area.

    References
    ----------
    Green's theorem over the section's outline; the formula is J. M. Gere, Mechanics of Materials, appendix on
    plane areas (from memory).

    Examples
    --------
    >>> cell('=SECTION_PROFILE_RADIUS("I", "200 mm", "100 mm", "5.6 mm", "8.5 mm", , , "12 mm", "x", "mm")')
    82.59500387
    """
    section = outline(shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet))
    about_x, about_y, _ = plane.second_moments(section)
    return np.sqrt((about_x if axis == "x" else about_y) / plane.area(section))
