"""Mean stresses of bars, pins and contact faces: axial, direct shear, bearing."""

from __future__ import annotations

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Area, Force, Length, Ratio, Stress
from doubler.catalogue.limits import AT_LEAST_ONE, POSITIVE


@worksheet_function("STRESS_AXIAL", valid={"area": POSITIVE})
def axial(force: Force, area: Area) -> Stress:
    r"""Mean normal stress on a section; tension positive.

    .. math:: \sigma = \frac{F}{A}

    Parameters
    ----------
    force : force
        Axial force through the centroid of the section, tension positive.
    area : area
        Area of the section that carries it.

    Returns
    -------
    stress : stress
        Mean normal stress, tension positive.

    Notes
    -----
    Uniform over the section only away from load introductions, holes and steps (Saint-Venant's principle). A
    compressed bar may buckle first.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 1.2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_AXIAL("12 kN", "150 mm^2", "MPa")')
    80.0
    """
    return force / area


@worksheet_function("STRESS_DIRECT_SHEAR", valid={"area": POSITIVE, "shear_planes": AT_LEAST_ONE})
def direct_shear(force: Force, area: Area, shear_planes: Ratio = 1.0) -> Stress:
    r"""Mean shear stress of a pin, a bolt or a glued face that is cut straight across.

    .. math:: \tau = \frac{V}{n A}

    Parameters
    ----------
    force : force
        Force that shears the part.
    area : area
        Area of one shear plane.
    shear_planes : ratio
        Number of planes that share the force equally: 1 for single shear, 2 for double shear.

    Returns
    -------
    stress : stress
        Mean shear stress, of the sign of the force.

    Notes
    -----
    A mean: the true distribution is uneven, and a pin bends as well where its joint is not close-fitting.
    Planes share equally only in a symmetric joint.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 1.6 (from memory).

    Examples
    --------
    >>> cell('=STRESS_DIRECT_SHEAR("18 kN", "50 mm^2", 2, "MPa")')
    180.0
    """
    return force / (shear_planes * area)


@worksheet_function("STRESS_PIN_SHEAR", valid={"diameter": POSITIVE, "shear_planes": AT_LEAST_ONE})
def pin_shear(force: Force, diameter: Length, shear_planes: Ratio = 1.0) -> Stress:
    r"""Mean shear stress of a solid round pin or bolt shank.

    .. math:: \tau = \frac{4 V}{n \pi d^2}

    Parameters
    ----------
    force : force
        Force that shears the pin.
    diameter : length
        Diameter where it is sheared; for a thread in the shear plane, the diameter of its stress area.
    shear_planes : ratio
        Number of planes that share the force equally: 1 for single shear, 2 for double shear.

    Returns
    -------
    stress : stress
        Mean shear stress, of the sign of the force.

    Notes
    -----
    A mean over the section; bending of the pin is not in it.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 1.6 (from memory).

    Examples
    --------
    >>> cell('=STRESS_PIN_SHEAR("30 kN", "12 mm", 2, "MPa")')
    132.6291192
    """
    return force / (shear_planes * (0.25 * np.pi) * diameter**2)


@worksheet_function("STRESS_BEARING", valid={"diameter": POSITIVE, "thickness": POSITIVE})
def bearing(force: Force, diameter: Length, thickness: Length) -> Stress:
    r"""Mean bearing stress of a pin or bolt on the wall of its hole, over the projected area.

    .. math:: \sigma_b = \frac{F}{d\,t}

    Parameters
    ----------
    force : force
        Force that the pin brings onto this plate.
    diameter : length
        Diameter of the pin.
    thickness : length
        Thickness in bearing: without countersink and chamfer.

    Returns
    -------
    stress : stress
        Mean bearing stress, of the sign of the force. It is a compression whatever the direction of the
        force.

    Notes
    -----
    Compare with a bearing allowable of the same edge distance and of the same projected-area form.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 1.6 (from memory).

    Examples
    --------
    >>> cell('=STRESS_BEARING("9 kN", "6 mm", "3 mm", "MPa")')
    500.0
    """
    return force / (diameter * thickness)
