"""Normal stress of straight beams: bending alone, with axial force, about two axes, unsymmetric."""

from __future__ import annotations

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import (
    Angle,
    Area,
    Force,
    Length,
    Moment,
    SecondMoment,
    SectionModulus,
    Stress,
)
from doubler.catalogue.limits import POSITIVE, condition

POSITIVE_DEFINITE = condition(
    "second_moment_y × second_moment_z must be above product_of_inertia²; no section has such values",
    lambda second_moment_y, second_moment_z, product_of_inertia: (
        second_moment_y * second_moment_z > product_of_inertia**2
    ),
)


@worksheet_function("STRESS_BENDING", valid={"second_moment": POSITIVE})
def bending(moment: Moment, distance: Length, second_moment: SecondMoment) -> Stress:
    r"""Bending stress at a distance from the neutral axis; tension positive.

    .. math:: \sigma = \frac{M y}{I}

    Parameters
    ----------
    moment : moment
        Bending moment about a principal axis of the section.
    distance : length
        Distance from the neutral axis, positive on the side that a positive moment stretches.
    second_moment : second moment
        Second moment of area about the neutral axis.

    Returns
    -------
    stress : stress
        Bending stress, tension positive.

    Notes
    -----
    Linear elastic, plane sections, a straight slender beam, bending about a principal axis. For a section
    without symmetry take STRESS_BENDING_UNSYMMETRIC, for a curved bar STRESS_CURVED_RECTANGLE and its like.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 5.5, the flexure formula (from memory).

    Examples
    --------
    >>> cell('=STRESS_BENDING("3 kN*m", "22 mm", "868000 mm^4", "MPa")')
    76.03686636
    """
    return moment * distance / second_moment


@worksheet_function("STRESS_BENDING_MODULUS", valid={"section_modulus": POSITIVE})
def bending_modulus(moment: Moment, section_modulus: SectionModulus) -> Stress:
    r"""Bending stress at the outer fibre from the section modulus.

    .. math:: \sigma = \frac{M}{W}

    Parameters
    ----------
    moment : moment
        Bending moment about a principal axis of the section.
    section_modulus : volume
        Elastic section modulus of the fibre asked for.

    Returns
    -------
    stress : stress
        Bending stress, of the sign of the moment; the opposite fibre has the other sign.

    Notes
    -----
    The elastic modulus, not the plastic one. A section that is not symmetric about its neutral axis has two.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 5.5 (from memory).

    Examples
    --------
    >>> cell('=STRESS_BENDING_MODULUS("2 kN*m", "16000 mm^3", "MPa")')
    125.0
    """
    return moment / section_modulus


@worksheet_function(
    "STRESS_AXIAL_BIAXIAL",
    valid={"area": POSITIVE, "second_moment_y": POSITIVE, "second_moment_z": POSITIVE},
)
def axial_biaxial(
    force: Force,
    moment_y: Moment,
    moment_z: Moment,
    y: Length,
    z: Length,
    area: Area,
    second_moment_y: SecondMoment,
    second_moment_z: SecondMoment,
) -> Stress:
    r"""Normal stress at a point under axial force and bending about both principal axes; tension positive.

    .. math:: \sigma = \frac{F}{A} + \frac{M_y z}{I_y} - \frac{M_z y}{I_z}

    Parameters
    ----------
    force : force
        Axial force at the centroid, tension positive.
    moment_y : moment
        Moment about the y axis: positive stretches the side of positive z.
    moment_z : moment
        Moment about the z axis: positive stretches the side of negative y.
    y : length
        Coordinate of the point, from the centroid.
    z : length
        Coordinate of the point, from the centroid.
    area : area
        Area of the section.
    second_moment_y : second moment
        Second moment of area about the y axis, :math:`\int z^2 dA`.
    second_moment_z : second moment
        Second moment of area about the z axis, :math:`\int y^2 dA`.

    Returns
    -------
    stress : stress
        Normal stress, tension positive.

    Notes
    -----
    x along the beam, y and z the principal axes of the section, right-handed; the moments are the
    right-handed vectors that act on the face whose outward normal is +x. Linear elastic, plane sections; no
    second-order moment of a compressed beam-column.

    References
    ----------
    T. H. G. Megson, Aircraft Structures for Engineering Students, chapter 16 (from memory).

    Examples
    --------
    >>> cell('=STRESS_AXIAL_BIAXIAL("40 kN","1 kN*m","0 Nm","0 mm","5 cm","20 cm2","100 cm4","40 cm4","MPa")')
    70.0
    """
    return force / area + moment_y * z / second_moment_y - moment_z * y / second_moment_z


_EXTREME_LIMITS = {"area": POSITIVE, "section_modulus_y": POSITIVE, "section_modulus_z": POSITIVE}


@worksheet_function("STRESS_AXIAL_BIAXIAL_MAX", valid=_EXTREME_LIMITS)
def axial_biaxial_max(
    force: Force,
    moment_y: Moment,
    moment_z: Moment,
    area: Area,
    section_modulus_y: SectionModulus,
    section_modulus_z: SectionModulus,
) -> Stress:
    r"""Algebraically largest normal stress of a section with corners, under axial force and biaxial bending.

    .. math:: \sigma_{max} = \frac{F}{A} + \frac{|M_y|}{W_y} + \frac{|M_z|}{W_z}

    Parameters
    ----------
    force : force
        Axial force at the centroid, tension positive.
    moment_y : moment
        Moment about the principal y axis; its sign does not matter.
    moment_z : moment
        Moment about the principal z axis; its sign does not matter.
    area : area
        Area of the section.
    section_modulus_y : volume
        Elastic section modulus about the y axis.
    section_modulus_z : volume
        Elastic section modulus about the z axis.

    Returns
    -------
    stress : stress
        Largest stress, tension positive: negative where the whole section is compressed.

    Notes
    -----
    For a section symmetric about both axes that has a corner where both bending stresses are largest:
    rectangle, box, I. For a round one it is on the safe side. Linear elastic, plane sections; no second-order
    moment of a compressed beam-column. The other extreme is STRESS_AXIAL_BIAXIAL_MIN.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 8.5 (from memory).

    Examples
    --------
    >>> cell('=STRESS_AXIAL_BIAXIAL_MAX("-40 kN","1 kN*m","-2 kN*m","20 cm2","20 cm3","50 cm3","MPa")')
    70.0
    """
    return force / area + np.abs(moment_y) / section_modulus_y + np.abs(moment_z) / section_modulus_z


@worksheet_function("STRESS_AXIAL_BIAXIAL_MIN", valid=_EXTREME_LIMITS)
def axial_biaxial_min(
    force: Force,
    moment_y: Moment,
    moment_z: Moment,
    area: Area,
    section_modulus_y: SectionModulus,
    section_modulus_z: SectionModulus,
) -> Stress:
    r"""Algebraically smallest normal stress of a section with corners, under axial force and biaxial bending.

    .. math:: \sigma_{min} = \frac{F}{A} - \frac{|M_y|}{W_y} - \frac{|M_z|}{W_z}

    Parameters
    ----------
    force : force
        Axial force at the centroid, tension positive.
    moment_y : moment
        Moment about the principal y axis; its sign does not matter.
    moment_z : moment
        Moment about the principal z axis; its sign does not matter.
    area : area
        Area of the section.
    section_modulus_y : volume
        Elastic section modulus about the y axis.
    section_modulus_z : volume
        Elastic section modulus about the z axis.

    Returns
    -------
    stress : stress
        Smallest stress, compression negative: compare with the compressive allowable.

    Notes
    -----
    As STRESS_AXIAL_BIAXIAL_MAX: a section symmetric about both axes with a corner where both bending stresses
    are largest. A compressed part may buckle first.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 8.5 (from memory).

    Examples
    --------
    >>> cell('=STRESS_AXIAL_BIAXIAL_MIN("-40 kN","1 kN*m","-2 kN*m","20 cm2","20 cm3","50 cm3","MPa")')
    -110.0
    """
    return force / area - np.abs(moment_y) / section_modulus_y - np.abs(moment_z) / section_modulus_z


@worksheet_function(
    "STRESS_BENDING_UNSYMMETRIC",
    valid={"second_moment_y": POSITIVE, "second_moment_z": POSITIVE},
    conditions=(POSITIVE_DEFINITE,),
)
def bending_unsymmetric(
    moment_y: Moment,
    moment_z: Moment,
    y: Length,
    z: Length,
    second_moment_y: SecondMoment,
    second_moment_z: SecondMoment,
    product_of_inertia: SecondMoment,
) -> Stress:
    r"""Bending stress at a point of a section whose axes are not principal; tension positive.

    .. math:: \sigma = \frac{(M_y I_z + M_z I_{yz}) z - (M_z I_y + M_y I_{yz}) y}{I_y I_z - I_{yz}^2}

    Parameters
    ----------
    moment_y : moment
        Moment about the y axis: positive stretches the side of positive z.
    moment_z : moment
        Moment about the z axis: positive stretches the side of negative y.
    y : length
        Coordinate of the point, from the centroid.
    z : length
        Coordinate of the point, from the centroid.
    second_moment_y : second moment
        Second moment of area about the y axis, :math:`\int z^2 dA`.
    second_moment_z : second moment
        Second moment of area about the z axis, :math:`\int y^2 dA`.
    product_of_inertia : second moment
        Product of inertia :math:`\int y z\, dA` about the centroid, with its sign.

    Returns
    -------
    stress : stress
        Bending stress, tension positive.

    Notes
    -----
    Axes and signs as in STRESS_AXIAL_BIAXIAL, but y and z any perpendicular axes through the centroid. Linear
    elastic, plane sections; the section is free of twist only when the load passes through its shear centre.

    References
    ----------
    T. H. G. Megson, Aircraft Structures for Engineering Students, section 16.2.2 (from memory, axes renamed).

    Examples
    --------
    >>> cell('=STRESS_BENDING_UNSYMMETRIC("1 kN*m","0 Nm","1 cm","4 cm","200 cm4","100 cm4","50 cm4","MPa")')
    20.0
    """
    determinant = second_moment_y * second_moment_z - product_of_inertia**2
    along_z = moment_y * second_moment_z + moment_z * product_of_inertia
    along_y = moment_z * second_moment_y + moment_y * product_of_inertia
    return (along_z * z - along_y * y) / determinant


@worksheet_function(
    "STRESS_NEUTRAL_AXIS_ANGLE",
    valid={"second_moment_y": POSITIVE, "second_moment_z": POSITIVE},
    conditions=(
        POSITIVE_DEFINITE,
        condition(
            "moment_y and moment_z are both zero; an unbent section has no neutral axis",
            lambda moment_y, moment_z: (moment_y != 0.0) | (moment_z != 0.0),
        ),
    ),
)
def neutral_axis_angle(
    moment_y: Moment,
    moment_z: Moment,
    second_moment_y: SecondMoment,
    second_moment_z: SecondMoment,
    product_of_inertia: SecondMoment,
) -> Angle:
    r"""Angle of the neutral axis of unsymmetric bending, from the y axis towards the z axis.

    .. math:: \tan\alpha = \frac{M_z I_y + M_y I_{yz}}{M_y I_z + M_z I_{yz}}

    Parameters
    ----------
    moment_y : moment
        Moment about the y axis: positive stretches the side of positive z.
    moment_z : moment
        Moment about the z axis: positive stretches the side of negative y.
    second_moment_y : second moment
        Second moment of area about the y axis, :math:`\int z^2 dA`.
    second_moment_z : second moment
        Second moment of area about the z axis, :math:`\int y^2 dA`.
    product_of_inertia : second moment
        Product of inertia :math:`\int y z\, dA` about the centroid, with its sign.

    Returns
    -------
    angle : angle
        Above −90° and at most 90°; the axis passes through the centroid.

    Notes
    -----
    The fibres farthest from this line on each side carry the largest tension and compression. No axial force.

    References
    ----------
    T. H. G. Megson, Aircraft Structures for Engineering Students, section 16.2.3 (from memory, axes renamed).

    Examples
    --------
    >>> cell('=STRESS_NEUTRAL_AXIS_ANGLE("1 kN*m","0 Nm","2e6 mm^4","1e6 mm^4","1e6 mm^4","deg")')
    45.0
    """
    along_z = moment_y * second_moment_z + moment_z * product_of_inertia
    along_y = moment_z * second_moment_y + moment_y * product_of_inertia
    turned = np.where((along_z < 0.0) | ((along_z == 0.0) & (along_y < 0.0)), -1.0, 1.0)
    return np.arctan2(turned * along_y, turned * along_z)
