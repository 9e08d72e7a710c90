"""Shear stress of beams in bending: VQ/It, its largest value in common sections, and shear flow."""

from __future__ import annotations

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Area, FirstMoment, Force, Length, SecondMoment, ShearFlow, Stress
from doubler.catalogue.limits import NOT_NEGATIVE, POSITIVE, condition
from doubler.mechanics.bending import POSITIVE_DEFINITE


@worksheet_function("STRESS_SHEAR_BEAM", valid={"second_moment": POSITIVE, "thickness": POSITIVE})
def shear_beam(force: Force, first_moment: FirstMoment, second_moment: SecondMoment, thickness: Length) -> Stress:
    r"""Shear stress of a beam at a cut through its section.

    .. math:: \tau = \frac{V Q}{I t}

    Parameters
    ----------
    force : force
        Shear force along a principal axis, through the shear centre.
    first_moment : volume
        First moment about the neutral axis of the area on one side of the cut.
    second_moment : second moment
        Second moment of area of the whole section about the neutral axis.
    thickness : length
        Width of the cut; where the cut severs several walls, their sum.

    Returns
    -------
    stress : stress
        Mean shear stress along the cut.

    Notes
    -----
    Linear elastic, prismatic. A mean over the cut: close to the truth where the cut is narrow and its edges
    run parallel to the force, up to some 10 % and more low in a section wider than deep. The section is free
    of twist only when the force passes through its shear centre.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 5.8, the shear formula (from memory).

    Examples
    --------
    >>> cell('=STRESS_SHEAR_BEAM("80 kN", "735000 mm^3", "155.6e6 mm^4", "15 mm", "MPa")')
    25.19280206
    """
    return force * first_moment / (second_moment * thickness)


@worksheet_function("STRESS_SHEAR_FLOW", valid={"second_moment": POSITIVE})
def shear_flow(force: Force, first_moment: FirstMoment, second_moment: SecondMoment) -> ShearFlow:
    r"""Shear flow of a beam at a cut: the force along the beam per unit length that a joint there must carry.

    .. math:: q = \frac{V Q}{I}

    Parameters
    ----------
    force : force
        Shear force along a principal axis, through the shear centre.
    first_moment : volume
        First moment about the neutral axis of the area that the joint attaches.
    second_moment : second moment
        Second moment of area of the whole section about the neutral axis.

    Returns
    -------
    flow : shear flow
        Force per length.

    Notes
    -----
    A row of fasteners at the pitch s carries q·s each. Linear elastic, prismatic.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 5.11 (from memory).

    Examples
    --------
    >>> cell('=STRESS_SHEAR_FLOW("500 N", "120000 mm^3", "16.2e6 mm^4", "N/mm")')
    3.703703704
    """
    return force * first_moment / second_moment


@worksheet_function(
    "STRESS_SHEAR_FLOW_UNSYMMETRIC",
    valid={"second_moment_y": POSITIVE, "second_moment_z": POSITIVE},
    conditions=(POSITIVE_DEFINITE,),
)
def shear_flow_unsymmetric(
    shear_y: Force,
    shear_z: Force,
    first_moment_y: FirstMoment,
    first_moment_z: FirstMoment,
    second_moment_y: SecondMoment,
    second_moment_z: SecondMoment,
    product_of_inertia: SecondMoment,
) -> ShearFlow:
    r"""Shear flow in an open thin-walled section whose axes are not principal.

    .. math:: q = -\frac{(V_z I_z - V_y I_{yz}) Q_y + (V_y I_y - V_z I_{yz}) Q_z}{I_y I_z - I_{yz}^2}

    Parameters
    ----------
    shear_y : force
        Shear force along y, through the shear centre.
    shear_z : force
        Shear force along z, through the shear centre.
    first_moment_y : volume
        First moment :math:`\int z\, dA` of the wall from its free edge up to the point.
    first_moment_z : volume
        First moment :math:`\int y\, dA` of the wall from its free edge up to the point.
    second_moment_y : second moment
        Second moment of area about the y axis, :math:`\int z^2 dA`.
    second_moment_z : second moment
        Second moment of area about the z axis, :math:`\int y^2 dA`.
    product_of_inertia : second moment
        Product of inertia :math:`\int y z\, dA` about the centroid, with its sign.

    Returns
    -------
    flow : shear flow
        Positive in the direction in which the wall was followed from its free edge.

    Notes
    -----
    Open section: the flow is zero at the free edge. Divided by the wall thickness it is the shear stress. y
    and z pass through the centroid. Walls thin enough that the stress is even across them.

    References
    ----------
    T. H. G. Megson, Aircraft Structures for Engineering Students, section 17.2 (from memory, axes renamed).

    Examples
    --------
    >>> cell('=STRESS_SHEAR_FLOW_UNSYMMETRIC("0 N","-4kN","5 cm3","0 cm3","100 cm4","40 cm4","0 cm4","kN/m")')
    20.0
    """
    determinant = second_moment_y * second_moment_z - product_of_inertia**2
    share_z = shear_z * second_moment_z - shear_y * product_of_inertia
    share_y = shear_y * second_moment_y - shear_z * product_of_inertia
    return -(share_z * first_moment_y + share_y * first_moment_z) / determinant


@worksheet_function(
    "STRESS_SHEAR_RECTANGLE",
    valid={"width": POSITIVE, "depth": POSITIVE},
    conditions=(
        condition(
            "the section is wider than deep, where the largest shear stress lies far above 3V/(2bh) at its sides; "
            "STRESS_SHEAR_BEAM gives the mean over the width",
            lambda width, depth: width <= depth * (1.0 + 1e-9),
        ),
    ),
)
def shear_rectangle(force: Force, width: Length, depth: Length) -> Stress:
    r"""Largest shear stress of a rectangular beam, at its neutral axis.

    .. math:: \tau_{max} = \frac{3 V}{2 b h}

    Parameters
    ----------
    force : force
        Shear force along the depth.
    width : length
        Width, across the force.
    depth : length
        Depth, along the force.

    Returns
    -------
    stress : stress
        Mean over the width at the neutral axis.

    Notes
    -----
    VQ/It for the rectangle. The sides have more than this mean, and the wider the section the more: 3 % more at a
    width of half the depth, some 13 % more at b = h with Poisson's ratio 0.25 (Timoshenko and Goodier, from memory).
    A section wider than deep is refused.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 5.8 (from memory).

    Examples
    --------
    >>> cell('=STRESS_SHEAR_RECTANGLE("10 kN", "20 mm", "50 mm", "MPa")')
    15.0
    """
    return 1.5 * force / (width * depth)


@worksheet_function(
    "STRESS_SHEAR_ROUND",
    valid={"outer_diameter": POSITIVE, "inner_diameter": NOT_NEGATIVE},
    conditions=(
        condition(
            "the inner diameter must be smaller than the outer diameter",
            lambda outer_diameter, inner_diameter: inner_diameter is None or inner_diameter < outer_diameter,
        ),
    ),
)
def shear_round(force: Force, outer_diameter: Length, inner_diameter: Length = None) -> Stress:
    r"""Largest shear stress of a round bar or tube in transverse shear, at its neutral axis.

    .. math:: \tau_{max} = \frac{4 V}{3 A} \frac{D^2 + D d + d^2}{D^2 + d^2}

    Parameters
    ----------
    force : force
        Shear force.
    outer_diameter : length
        Outer diameter.
    inner_diameter : length
        Inner diameter; left out for a solid bar.

    Returns
    -------
    stress : stress
        Mean over the cut along the neutral axis.

    Notes
    -----
    VQ/It for the circle and the ring. The exact solution of a solid bar is about 4 % higher at its centre
    with Poisson's ratio 0.3 (Timoshenko and Goodier, from memory).

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 5.9, equation for the hollow circle (from memory).

    Examples
    --------
    >>> cell('=STRESS_SHEAR_ROUND("1500 lbf", "4 in", "3.2 in", "psi")')
    657.7541686
    """
    bore = np.zeros_like(outer_diameter) if inner_diameter is None else inner_diameter
    outer, inner = outer_diameter**2, bore**2
    return 16.0 * force * (outer + outer_diameter * bore + inner) / (3.0 * np.pi * (outer - inner) * (outer + inner))


@worksheet_function(
    "STRESS_SHEAR_MEAN_WEB",
    valid={"web_area": POSITIVE},
)
def shear_mean_web(force: Force, web_area: Area) -> Stress:
    r"""Mean shear stress of a web that is taken to carry the whole shear force.

    .. math:: \tau = \frac{V}{A_w}

    Parameters
    ----------
    force : force
        Shear force along the web.
    web_area : area
        Thickness of the web times its depth.

    Returns
    -------
    stress : stress
        Mean shear stress of the web.

    Notes
    -----
    Below the true largest stress: by a few per cent in an I-section with full flanges, by a third where there
    are none. Use STRESS_SHEAR_BEAM where that matters.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 5.10 (from memory).

    Examples
    --------
    >>> cell('=STRESS_SHEAR_MEAN_WEB("45 kN", "2175 mm^2", "MPa")')
    20.68965517
    """
    return force / web_area
