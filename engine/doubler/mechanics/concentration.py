"""Stress concentration at holes, notches and pins: factors on the mean stress of the net section unless said."""

from __future__ import annotations

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Force, Length, Ratio, Stress
from doubler.catalogue.limits import POSITIVE, condition

HOLE_INSIDE = condition(
    "the hole's diameter must be smaller than the width",
    lambda width, diameter: diameter < width,
)


@worksheet_function(
    "STRESS_CONCENTRATION_HOLE", valid={"width": POSITIVE, "diameter": POSITIVE}, conditions=(HOLE_INSIDE,)
)
def hole(width: Length, diameter: Length) -> Ratio:
    r"""Stress concentration factor of a round hole in the middle of a strip in tension, on its net section.

    .. math:: K_{tn} = 3 - 3.13\frac{d}{w} + 3.66\left(\frac{d}{w}\right)^2 - 1.53\left(\frac{d}{w}\right)^3

    Parameters
    ----------
    width : length
        Width of the strip.
    diameter : length
        Diameter of the hole.

    Returns
    -------
    factor : ratio
        Largest stress over the mean stress of the net section, F/((w − d)t).

    Notes
    -----
    Linear elastic, flat, hole on the centre line and open: a loaded pin has STRESS_CONCENTRATION_PIN. 3 for a
    very wide strip (exact), 2 as the hole nears the edges.

    References
    ----------
    R. B. Heywood's and Peterson’s charts as fitted in Pytel, Kiusalaas, Mechanics of Materials, section 12.7
    (from memory).

    Examples
    --------
    >>> cell('=STRESS_CONCENTRATION_HOLE("250 mm", "100 mm")')
    2.23568
    """
    x = diameter / width
    return 3.0 + x * (-3.13 + x * (3.66 - 1.53 * x))


@worksheet_function(
    "STRESS_PLATE_HOLE",
    valid={"width": POSITIVE, "diameter": POSITIVE, "thickness": POSITIVE},
    conditions=(HOLE_INSIDE,),
)
def plate_hole(force: Force, width: Length, diameter: Length, thickness: Length) -> Stress:
    r"""Largest stress at a round hole in the middle of a strip in tension.

    .. math:: \sigma_{max} = K_{tn} \frac{F}{(w - d)\, t}

    Parameters
    ----------
    force : force
        Load along the strip, tension positive.
    width : length
        Width of the strip.
    diameter : length
        Diameter of the hole.
    thickness : length
        Thickness of the strip.

    Returns
    -------
    stress : stress
        Stress at the hole's edge, of the sign of the force.

    Notes
    -----
    Kₜₙ as STRESS_CONCENTRATION_HOLE gives it. Linear elastic, open hole on the centre line.

    References
    ----------
    Peterson's Stress Concentration Factors, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=STRESS_PLATE_HOLE("100 kN", "250 mm", "100 mm", "20 mm", "MPa")')
    74.52266667
    """
    return hole.kernel(width, diameter) * force / ((width - diameter) * thickness)


@worksheet_function("STRESS_CONCENTRATION_ELLIPSE", valid={"half_across": POSITIVE, "half_along": POSITIVE})
def ellipse(half_across: Length, half_along: Length) -> Ratio:
    r"""Stress concentration factor of an elliptical hole in a wide plate in tension, on its gross section.

    .. math:: K_t = 1 + \frac{2a}{b}

    Parameters
    ----------
    half_across : length
        Semi-axis across the load, a.
    half_along : length
        Semi-axis along the load, b.

    Returns
    -------
    factor : ratio
        Largest stress over the stress far from the hole.

    Notes
    -----
    Exact for an infinite plate, linear elastic; the hole must be small against the plate. Tends to a crack as
    b vanishes, where it has no meaning.

    References
    ----------
    C. E. Inglis, Transactions of the Institution of Naval Architects 55, 1913 (from memory).

    Examples
    --------
    >>> cell('=STRESS_CONCENTRATION_ELLIPSE("10 mm", "5 mm")')
    5.0
    """
    return 1.0 + 2.0 * half_across / half_along


@worksheet_function(
    "STRESS_CONCENTRATION_PIN",
    valid={"width": POSITIVE, "diameter": POSITIVE},
    conditions=(
        condition(
            "diameter / width must lie from 0.15 to 0.75, the range of the tests behind the fit",
            lambda width, diameter: (diameter >= 0.15 * width) & (diameter <= 0.75 * width),
        ),
    ),
)
def pin(width: Length, diameter: Length) -> Ratio:
    r"""Stress concentration factor of a hole loaded by a close-fitting pin, on the net section.

    .. math:: K_{tn} = 12.882 - 52.714\frac{d}{w} + 89.762\left(\frac{d}{w}\right)^2 -
        51.667\left(\frac{d}{w}\right)^3

    Parameters
    ----------
    width : length
        Width of the strip or lug.
    diameter : length
        Diameter of the hole.

    Returns
    -------
    factor : ratio
        Largest stress over the mean stress of the net section, F/((w − d)t).

    Notes
    -----
    Square end at least as far from the hole's centre as the width; pin close-fitting. A loose pin or a short
    end raises it. 0.15 ≤ d/w ≤ 0.75.

    References
    ----------
    M. M. Frocht, H. N. Hill, Journal of Applied Mechanics, 1940, as fitted in Pilkey, Peterson's Stress
    Concentration Factors, chart for pin and hole joints (from memory).

    Examples
    --------
    >>> cell('=STRESS_CONCENTRATION_PIN("40 mm", "20 mm")')
    2.507125
    """
    x = diameter / width
    return 12.882 + x * (-52.714 + x * (89.762 - 51.667 * x))


@worksheet_function(
    "STRESS_CONCENTRATION_GROOVE",
    valid={"width": POSITIVE, "net_width": POSITIVE, "radius": POSITIVE},
    conditions=(
        condition("net_width must be smaller than width", lambda width, net_width: net_width < width),
        condition(
            "radius must not be above the depth of a groove, half of width − net_width",
            lambda width, net_width, radius: radius <= 0.5 * (width - net_width) * (1.0 + 1e-12),
        ),
    ),
)
def groove(width: Length, net_width: Length, radius: Length) -> Ratio:
    r"""Stress concentration factor of two like grooves in a flat bar in tension, on the net section (Neuber).

    .. math:: \frac{1}{(K_t - 1)^2} = \frac{1}{(K_s - 1)^2} + \frac{1}{(K_d - 1)^2}, \quad K_s = 1 +
        2\sqrt{\frac{h}{\rho}}

    .. math:: K_d = \frac{2 (x^2 + 1)\, x}{(x^2 + 1)\arctan x + x}, \quad x^2 = \frac{d}{2 \rho}, \quad h =
        \frac{w - d}{2}

    Parameters
    ----------
    width : length
        Width of the bar outside of the grooves, w.
    net_width : length
        Width between the grooves, d.
    radius : length
        Radius at the bottom of the grooves, ρ.

    Returns
    -------
    factor : ratio
        Largest stress over the mean stress between the grooves.

    Notes
    -----
    Between a shallow notch (elliptical) and a deep one (hyperbolic), both exact, by Neuber's interpolation.
    Linear elastic, grooves opposite each other. Chart readings are up to some 15 % lower.

    References
    ----------
    H. Neuber, Theory of Notch Stresses (Kerbspannungslehre), 1937 (from memory).

    Examples
    --------
    >>> cell('=STRESS_CONCENTRATION_GROOVE("110 mm", "50 mm", "10 mm")')
    2.106790249
    """
    shallow = 2.0 * np.sqrt(0.5 * (width - net_width) / radius)
    square = 0.5 * net_width / radius
    x = np.sqrt(square)
    deep = 2.0 * (square + 1.0) * x / ((square + 1.0) * np.arctan(x) + x) - 1.0
    return 1.0 + shallow * deep / np.hypot(shallow, deep)
