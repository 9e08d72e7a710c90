"""How far the neutral axis of a curved bar lies inside of its centroid."""

from __future__ import annotations

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Length
from doubler.catalogue.limits import NOT_NEGATIVE, POSITIVE, condition
from doubler.mechanics.curved_beam import ROUND_BAR, circle_integrals, trapezium_integrals


@worksheet_function("SECTION_CURVED_OFFSET_RECTANGLE", valid={"inner_radius": POSITIVE, "depth": POSITIVE})
def offset_rectangle(inner_radius: Length, depth: Length) -> Length:
    r"""Distance of the neutral axis from the centroid of a curved bar of rectangular section.

    .. math:: e = R - \frac{h}{\ln(r_o/r_i)}

    Parameters
    ----------
    inner_radius : length
        Radius of the inside of the bar, from the centre of curvature.
    depth : length
        Depth of the section along the radius.

    Returns
    -------
    offset : length
        Distance from the centroid towards the centre of curvature, always positive.

    Notes
    -----
    In pure bending by Winkler and Bach. It is a small difference, given here to full accuracy however
    slightly the bar is curved.

    References
    ----------
    E. Winkler, 1858, C. Bach; A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 9 (from
    memory).

    Examples
    --------
    >>> cell('=SECTION_CURVED_OFFSET_RECTANGLE("5.25 in","1.5 in","in")')
    0.03138128495
    """
    _, _, inverse, bend = trapezium_integrals(inner_radius, depth, depth, depth)
    return bend / inverse


@worksheet_function(
    "SECTION_CURVED_OFFSET_CIRCLE",
    valid={"centroid_radius": POSITIVE, "diameter": POSITIVE},
    conditions=(ROUND_BAR,),
)
def offset_circle(centroid_radius: Length, diameter: Length) -> Length:
    r"""Distance of the neutral axis from the centroid of a curved bar of solid round section.

    .. math:: e = \frac{R - \sqrt{R^2 - d^2/4}}{2}

    Parameters
    ----------
    centroid_radius : length
        Radius of the bar's centre line, from the centre of curvature.
    diameter : length
        Diameter of the section.

    Returns
    -------
    offset : length
        Distance from the centroid towards the centre of curvature, always positive.

    Notes
    -----
    In pure bending by Winkler and Bach. It is a small difference, given here to full accuracy however
    slightly the bar is curved.

    References
    ----------
    E. Winkler, 1858, C. Bach; A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 9 (from
    memory).

    Examples
    --------
    >>> cell('=SECTION_CURVED_OFFSET_CIRCLE("60 mm","30 mm","mm")')
    0.9526249034
    """
    _, inverse, bend = circle_integrals(centroid_radius, diameter)
    return bend / inverse


@worksheet_function(
    "SECTION_CURVED_OFFSET_TRAPEZIUM",
    valid={
        "inner_radius": POSITIVE,
        "depth": POSITIVE,
        "inner_width": NOT_NEGATIVE,
        "outer_width": NOT_NEGATIVE,
    },
    conditions=(
        condition(
            "inner_width and outer_width are both zero; the section has no area",
            lambda inner_width, outer_width: inner_width + outer_width > 0.0,
        ),
    ),
)
def offset_trapezium(inner_radius: Length, depth: Length, inner_width: Length, outer_width: Length) -> Length:
    r"""Distance of the neutral axis from the centroid of a curved bar of trapezium section.

    .. math:: e = R - \frac{A}{A_m}

    Parameters
    ----------
    inner_radius : length
        Radius of the inside of the bar, from the centre of curvature.
    depth : length
        Depth of the section along the radius.
    inner_width : length
        Width of the section at the inside; zero for a triangle with its point there.
    outer_width : length
        Width of the section at the outside; zero for a triangle with its point there.

    Returns
    -------
    offset : length
        Distance from the centroid towards the centre of curvature, always positive.

    Notes
    -----
    In pure bending by Winkler and Bach. It is a small difference, given here to full accuracy however
    slightly the bar is curved.

    References
    ----------
    E. Winkler, 1858, C. Bach; A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 9 (from
    memory).

    Examples
    --------
    >>> cell('=SECTION_CURVED_OFFSET_TRAPEZIUM("50 mm","40 mm","30 mm","10 mm","mm")')
    1.775143152
    """
    _, _, inverse, bend = trapezium_integrals(inner_radius, depth, inner_width, outer_width)
    return bend / inverse
