"""Torsion, warping and shear of profiles (I, channel, tee, angle, zee, box, hat)."""

from __future__ import annotations

from typing import Literal

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Area, Length, TorsionConstant, WarpingConstant
from doubler.catalogue.limits import POSITIVE, condition
from doubler.mechanics import outline as plane
from doubler.mechanics import profile_walls
from doubler.mechanics.profile_outlines import Shape, given, outline, sound

Axis = Literal["x", "y"]
Thin = Literal["I", "channel", "tee", "angle", "zee", "box", "hat"]
Warped = Literal["I", "channel", "zee"]

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
    condition(
        "each wall must be at least three times as long as it is thick",
        lambda shape, depth, width, web, flange, bottom_width, bottom_flange, fillet: profile_walls.thin(
            shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet)
        ),
    ),
)


@worksheet_function("SECTION_PROFILE_TORSION_CONSTANT", valid=_SIZES, conditions=_SOUND)
def torsion_constant(
    shape: Thin,
    depth: Length,
    width: Length | None = None,
    web: Length | None = None,
    flange: Length | None = None,
    bottom_width: Length | None = None,
    bottom_flange: Length | None = None,
    fillet: Length | None = None,
) -> TorsionConstant:
    r"""Torsion constant of a thin-walled profile.

    .. math:: J = \frac{1}{3} \sum b t^3 - 0.105 \sum_{\text{free ends}} t^4 \text{ (open)}, \quad J =
        \frac{4 A_m^2}{\oint ds/t} \text{ (box)}

    Parameters
    ----------
    shape : thin
        I, channel, tee, angle, zee, box, hat.
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
    torsion_constant : second moment
        Torsion constant.

    Notes
    -----
    Walls along their middle lines; 0.105 t⁴ is what each free end of a wall takes off. What fillets and
    junctions add is left out, which is safe. Ends free to warp.

    Each wall must be at least three times as long as thick; a box must be closed along its whole length, and
    its own walls' bt³/3 are left out.

    References
    ----------
    S. P. Timoshenko and J. N. Goodier, Theory of Elasticity, chapter on torsion (open and closed thin
    sections; from memory); end loss from the Saint-Venant series of a long rectangle.

    Examples
    --------
    >>> cell('=SECTION_PROFILE_TORSION_CONSTANT("box", "103 mm", "53 mm", "3 mm", "3 mm", , , , "cm^4")')
    100.0
    """
    return profile_walls.torsion_constant(shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet))


@worksheet_function("SECTION_PROFILE_WARPING_CONSTANT", valid=_SIZES, conditions=_SOUND)
def warping_constant(
    shape: Warped,
    depth: Length,
    width: Length | None = None,
    web: Length | None = None,
    flange: Length | None = None,
    bottom_width: Length | None = None,
    bottom_flange: Length | None = None,
    fillet: Length | None = None,
) -> WarpingConstant:
    r"""Warping constant of an I, channel or zee about its shear centre.

    .. math:: C_w = h^2 \frac{I_{f1} I_{f2}}{I_{f1} + I_{f2}} \text{ (I)}, \quad C_w = \frac{t b^3
        h^2}{12} \frac{3 b t + 2 h t_w}{6 b t + h t_w} \text{ (channel)}, \quad C_w = \frac{t b^3
        h^2}{12} \frac{b t + 2 h t_w}{2 b t + h t_w} \text{ (zee)}

    Parameters
    ----------
    shape : warped
        I, channel or zee.
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
    warping_constant : warping constant
        Warping constant.

    Notes
    -----
    Thin walls along their middle lines: h between the flanges' middles, b from the web's middle. Channel and
    zee with like flanges only.

    References
    ----------
    S. P. Timoshenko and J. M. Gere, Theory of Elastic Stability, appendix (from memory).

    Examples
    --------
    >>> cell('=SECTION_PROFILE_WARPING_CONSTANT("I", "77.5 mm", "37.5 mm", "2.5 mm", "2.5 mm", , , , "mm^6")')
    30899047.85
    """
    return profile_walls.warping_constant(shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet))


@worksheet_function("SECTION_PROFILE_SHEAR_AREA", valid=_SIZES, conditions=_SOUND[:1])
def shear_area(
    shape: Shape,
    depth: Length,
    width: Length | None = None,
    web: Length | None = None,
    flange: Length | None = None,
    bottom_width: Length | None = None,
    bottom_flange: Length | None = None,
    fillet: Length | None = None,
    axis: Axis = "y",
) -> Area:
    r"""Shear area of a profile, for deflection by shear.

    .. math:: A_s = \frac{I^2}{\int Q^2 / b \; ds}

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
        The shear force's direction: y (along the depth) or x (along the width).

    Returns
    -------
    shear_area : area
        Area by which the shear force is divided for the mean shear strain.

    Notes
    -----
    From the strain energy of the stress VQ/(Ib) over the section, for a shear force along the axis given. For
    an angle or a zee, which do not bend straight, five sixths of the walls along the force (common practice).
    Not for the largest shear stress.

    References
    ----------
    S. P. Timoshenko, Strength of Materials, part I, on shear deflection by strain energy (from memory).

    Examples
    --------
    >>> cell('=SECTION_PROFILE_SHEAR_AREA("I", "200 mm", "100 mm", "5.6 mm", "8.5 mm", , , "12 mm", "y", "mm^2")')
    1134.692688
    """
    if shape in ("angle", "zee"):
        return profile_walls.parallel_walls(
            shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet), axis
        )
    section = outline(shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet))
    return plane.shear_area(section if axis == "y" else section.quarter_turn())
