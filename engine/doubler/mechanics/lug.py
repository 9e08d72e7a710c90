"""Lugs: net section, shear-out, and a load at an angle."""

from __future__ import annotations

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Angle, Force, Length, Ratio, Stress
from doubler.catalogue.limits import AT_LEAST_ONE, NOT_NEGATIVE, POSITIVE, condition


@worksheet_function(
    "STRESS_LUG_NET",
    valid={"width": POSITIVE, "hole_diameter": POSITIVE, "thickness": POSITIVE},
    conditions=(
        condition(
            "hole_diameter must be smaller than width",
            lambda width, hole_diameter: hole_diameter < width,
        ),
    ),
)
def lug_net(force: Force, width: Length, hole_diameter: Length, thickness: Length) -> Stress:
    r"""Mean stress of a lug's net section beside its hole.

    .. math:: \sigma = \frac{F}{(w - d)\, t}

    Parameters
    ----------
    force : force
        Load along the lug, tension positive.
    width : length
        Width of the lug at the hole.
    hole_diameter : length
        Diameter of the hole: of the bush's outside where there is a bush.
    thickness : length
        Thickness of the lug, without bush flanges and chamfers.

    Returns
    -------
    stress : stress
        Mean stress, tension positive.

    Notes
    -----
    A mean, for an ultimate check of a ductile lug whose hole lies on its centre line; brittle or slender lugs
    tear below it. For fatigue multiply by STRESS_CONCENTRATION_PIN.

    References
    ----------
    M. C.-Y. Niu, Airframe Stress Analysis and Sizing, chapter on lugs (from memory).

    Examples
    --------
    >>> cell('=STRESS_LUG_NET("30 kN", "40 mm", "16 mm", "8 mm", "MPa")')
    156.25
    """
    return force / ((width - hole_diameter) * thickness)


@worksheet_function(
    "STRESS_LUG_SHEAR_OUT",
    valid={
        "edge_distance": POSITIVE,
        "hole_diameter": POSITIVE,
        "thickness": POSITIVE,
    },
    conditions=(
        condition(
            "contact_angle must lie from 0 to 45°",
            lambda contact_angle: (contact_angle >= 0.0) & (contact_angle <= 0.25 * np.pi * (1.0 + 1e-12)),
        ),
        condition(
            "edge_distance is measured from the hole's centre and must be above half of hole_diameter",
            lambda edge_distance, hole_diameter: edge_distance > 0.5 * hole_diameter,
        ),
    ),
)
def lug_shear_out(
    force: Force, edge_distance: Length, hole_diameter: Length, thickness: Length, contact_angle: Angle = 0.0
) -> Stress:
    r"""Mean shear stress on the two planes along which a pin tears out through a lug's end.

    .. math:: \tau = \frac{F}{2 t \left(\sqrt{e^2 - r^2\sin^2\varphi} - r \cos\varphi\right)}, \quad r =
        \frac{d}{2}

    Parameters
    ----------
    force : force
        Load of the pin towards the end.
    edge_distance : length
        From the hole's centre to the end of the lug.
    hole_diameter : length
        Diameter of the hole: of the bush's outside where there is a bush.
    thickness : length
        Thickness of the lug, without bush flanges and chamfers.
    contact_angle : angle
        Angle from the load to where each plane leaves the hole; left out: 0, the shortest planes.

    Returns
    -------
    stress : stress
        Mean shear stress, of the sign of the force.

    Notes
    -----
    The end is taken round about the hole's centre, which is safe for a square one. A contact angle of 40° is
    common practice; at most 45° is accepted. A mean, for an ultimate check; bearing is a check of its own
    (STRESS_BEARING).

    References
    ----------
    E. F. Bruhn, Analysis and Design of Flight Vehicle Structures, chapter D1 (from memory; there with 40°).

    Examples
    --------
    >>> cell('=STRESS_LUG_SHEAR_OUT("30 kN", "20 mm", "16 mm", "8 mm", , "MPa")')
    156.25
    """
    radius = 0.5 * hole_diameter
    length = np.sqrt(edge_distance**2 - (radius * np.sin(contact_angle)) ** 2) - radius * np.cos(contact_angle)
    return 0.5 * force / (thickness * length)


@worksheet_function(
    "MARGIN_LUG_OBLIQUE",
    valid={
        "force": NOT_NEGATIVE,
        "axial_allowable": POSITIVE,
        "transverse_allowable": POSITIVE,
        "factor": AT_LEAST_ONE,
    },
    conditions=(
        condition(
            "angle must lie from 0 to 90°",
            lambda angle: (angle >= 0.0) & (angle <= 0.5 * np.pi * (1.0 + 1e-12)),
        ),
        condition("force is zero; an unloaded lug has no margin", lambda force: force > 0.0),
    ),
)
def lug_oblique(
    force: Force, angle: Angle, axial_allowable: Force, transverse_allowable: Force, factor: Ratio
) -> Ratio:
    r"""Margin of safety of a lug whose load stands at an angle to it.

    .. math:: MS = \frac{1}{\left(R_a^{1.6} + R_{tr}^{1.6}\right)^{0.625}} - 1

    .. math:: R_a = \frac{k F \cos\alpha}{F_a}, \quad R_{tr} = \frac{k F \sin\alpha}{F_{tr}}

    Parameters
    ----------
    force : force
        Load of the pin.
    angle : angle
        Angle of the load from the lug's axis, 0 to 90°.
    axial_allowable : force
        Allowable load along the lug: the smallest of bearing, shear-out and net section.
    transverse_allowable : force
        Allowable load across the lug.
    factor : ratio
        All factors together on the load: fitting factor, and the factor of safety where the load is a limit
        load; 1 where the load has them.

    Returns
    -------
    margin : ratio
        Margin of safety; negative where the lug fails.

    Notes
    -----
    For loads that pull away from the lug's root. Both allowables at one level, yield or ultimate.

    References
    ----------
    E. F. Bruhn, Analysis and Design of Flight Vehicle Structures, chapter D1 (the exponent 1.6; from memory).

    Examples
    --------
    >>> cell('=MARGIN_LUG_OBLIQUE("20 kN", "0 deg", "46 kN", "30 kN", 1.15)')
    1.0
    """
    along = factor * force * np.cos(angle) / axial_allowable
    across = factor * force * np.sin(angle) / transverse_allowable
    return (np.maximum(along, 0.0) ** 1.6 + across**1.6) ** -0.625 - 1.0
