"""Plane strain at a point: strains in turned axes, principal strains, directions, largest shear strains."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Angle, Ratio, ShearStrain, Strain
from doubler.catalogue.limits import POISSON, condition

DIRECTED = condition(
    "the strain is alike in every direction of the plane, so that none is principal",
    lambda strain_x, strain_y, shear_strain: (strain_x != strain_y) | (shear_strain != 0.0),
)


def radius(strain_x: Any, strain_y: Any, shear_strain: Any) -> Any:
    """Return the radius of Mohr's circle of strain: half the largest shear strain in the plane."""
    across = strain_x - strain_y
    return 0.5 * np.sqrt(across * across + shear_strain * shear_strain)


def direction(strain_x: Any, strain_y: Any, shear_strain: Any) -> Any:
    """Return the angle from x to the larger principal strain, above −90° and at most 90°."""
    # Adding 0.0 turns -0.0 into 0.0, so that a state without shear gives +90° and not −90°.
    angle = 0.5 * np.arctan2(shear_strain + 0.0, strain_x - strain_y)
    # A shear below zero and too small to turn the axes would give -90 degrees for the direction of +90.
    return np.where(angle <= -0.5 * np.pi, 0.5 * np.pi, angle)


@worksheet_function("STRAIN_ROTATED_NORMAL")
def rotated_normal(strain_x: Strain, strain_y: Strain, shear_strain: ShearStrain, angle: Angle) -> Strain:
    r"""Normal strain in a direction at an angle from x; extension positive.

    .. math:: \varepsilon_{x1} = \frac{\varepsilon_x + \varepsilon_y}{2} + \frac{\varepsilon_x -
        \varepsilon_y}{2}\cos 2\theta +
        \frac{\gamma_{xy}}{2}\sin 2\theta

    Parameters
    ----------
    strain_x : strain
        Normal strain in x, extension positive.
    strain_y : strain
        Normal strain in y, extension positive.
    shear_strain : shear strain
        Engineering shear strain γxy, twice the tensor shear strain; positive where the right angle between +x and +y
        closes.
    angle : angle
        Angle of the direction, counter-clockwise from x. For the direction at right angles to it add 90°.

    Returns
    -------
    strain : strain
        Normal strain in that direction: what a strain gauge at that angle would read.

    Notes
    -----
    Geometry alone: it holds for any material, at small strains, strains in the plane.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.7 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_ROTATED_NORMAL("340 µε", "110 µε", "180 µε", "30 deg", "µε")')
    360.4422863
    """
    half = 0.5 * (strain_x - strain_y)
    return 0.5 * (strain_x + strain_y) + half * np.cos(2.0 * angle) + 0.5 * shear_strain * np.sin(2.0 * angle)


@worksheet_function("STRAIN_ROTATED_SHEAR")
def rotated_shear(strain_x: Strain, strain_y: Strain, shear_strain: ShearStrain, angle: Angle) -> ShearStrain:
    r"""Engineering shear strain in axes turned by an angle.

    .. math:: \gamma_{x1y1} = -(\varepsilon_x - \varepsilon_y)\sin 2\theta + \gamma_{xy}\cos 2\theta

    Parameters
    ----------
    strain_x : strain
        Normal strain in x, extension positive.
    strain_y : strain
        Normal strain in y, extension positive.
    shear_strain : shear strain
        Engineering shear strain γxy, twice the tensor shear strain; positive where the right angle between +x and +y
        closes.
    angle : angle
        Angle of the direction, counter-clockwise from x. For the direction at right angles to it add 90°.

    Returns
    -------
    shear_strain : shear strain
        Engineering shear strain in the turned axes.

    Notes
    -----
    Geometry alone: it holds for any material, at small strains, strains in the plane.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.7 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_ROTATED_SHEAR("340 µε", "110 µε", "180 µε", "30 deg", "µε")')
    -109.1858429
    """
    return shear_strain * np.cos(2.0 * angle) - (strain_x - strain_y) * np.sin(2.0 * angle)


@worksheet_function("STRAIN_PRINCIPAL_MAX")
def principal_max(strain_x: Strain, strain_y: Strain, shear_strain: ShearStrain) -> Strain:
    r"""Algebraically larger principal strain in the plane; extension positive.

    .. math:: \varepsilon_1 = \frac{\varepsilon_x + \varepsilon_y}{2} + \sqrt{\left(\frac{\varepsilon_x -
        \varepsilon_y}{2}\right)^2 + \left(\frac{\gamma_{xy}}{2}\right)^2}

    Parameters
    ----------
    strain_x : strain
        Normal strain in x, extension positive.
    strain_y : strain
        Normal strain in y, extension positive.
    shear_strain : shear strain
        Engineering shear strain γxy, twice the tensor shear strain; positive where the right angle between +x and +y
        closes.

    Returns
    -------
    strain : strain
        Principal strain, extension positive.

    Notes
    -----
    In the plane alone. At a free surface the strain through the thickness, STRAIN_OUT_OF_PLANE, is the third one and
    may be larger. Geometry alone: small strains of any material.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.7 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_PRINCIPAL_MAX("475 µε", "-325 µε", "-600 µε", "µε")')
    575.0
    """
    return 0.5 * (strain_x + strain_y) + radius(strain_x, strain_y, shear_strain)


@worksheet_function("STRAIN_PRINCIPAL_MIN")
def principal_min(strain_x: Strain, strain_y: Strain, shear_strain: ShearStrain) -> Strain:
    r"""Algebraically smaller principal strain in the plane; extension positive.

    .. math:: \varepsilon_2 = \frac{\varepsilon_x + \varepsilon_y}{2} - \sqrt{\left(\frac{\varepsilon_x -
        \varepsilon_y}{2}\right)^2 + \left(\frac{\gamma_{xy}}{2}\right)^2}

    Parameters
    ----------
    strain_x : strain
        Normal strain in x, extension positive.
    strain_y : strain
        Normal strain in y, extension positive.
    shear_strain : shear strain
        Engineering shear strain γxy, twice the tensor shear strain; positive where the right angle between +x and +y
        closes.

    Returns
    -------
    strain : strain
        Principal strain, extension positive.

    Notes
    -----
    In the plane alone. At a free surface the strain through the thickness, STRAIN_OUT_OF_PLANE, is the third one and
    may be smaller. Geometry alone: small strains of any material.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.7 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_PRINCIPAL_MIN("475 µε", "-325 µε", "-600 µε", "µε")')
    -425.0
    """
    return 0.5 * (strain_x + strain_y) - radius(strain_x, strain_y, shear_strain)


@worksheet_function("STRAIN_PRINCIPAL_ANGLE", conditions=(DIRECTED,))
def principal_angle(strain_x: Strain, strain_y: Strain, shear_strain: ShearStrain) -> Angle:
    r"""Angle from x to the direction of the larger principal strain, counter-clockwise.

    .. math:: \tan 2\theta_p = \frac{\gamma_{xy}}{\varepsilon_x - \varepsilon_y}

    Parameters
    ----------
    strain_x : strain
        Normal strain in x, extension positive.
    strain_y : strain
        Normal strain in y, extension positive.
    shear_strain : shear strain
        Engineering shear strain γxy, twice the tensor shear strain; positive where the right angle between +x and +y
        closes.

    Returns
    -------
    angle : angle
        Above −90° and at most 90°. The smaller principal strain lies at right angles.

    Notes
    -----
    The branch is settled by the signs of both parts, so that the angle always belongs to the larger strain. In an
    isotropic material the principal stresses have the same directions. Small strains.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.7 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_PRINCIPAL_ANGLE("340 µε", "110 µε", "180 µε", "deg")')
    19.02352127
    """
    return direction(strain_x, strain_y, shear_strain)


@worksheet_function("STRAIN_SHEAR_MAX_IN_PLANE")
def shear_max_in_plane(strain_x: Strain, strain_y: Strain, shear_strain: ShearStrain) -> ShearStrain:
    r"""Largest engineering shear strain in the plane.

    .. math:: \gamma_{max} = \varepsilon_1 - \varepsilon_2 = \sqrt{(\varepsilon_x - \varepsilon_y)^2 + \gamma_{xy}^2}

    Parameters
    ----------
    strain_x : strain
        Normal strain in x, extension positive.
    strain_y : strain
        Normal strain in y, extension positive.
    shear_strain : shear strain
        Engineering shear strain γxy, twice the tensor shear strain; positive where the right angle between +x and +y
        closes.

    Returns
    -------
    shear_strain : shear strain
        Engineering shear strain, not negative, in axes at 45° to the principal ones.

    Notes
    -----
    In the plane alone; where both principal strains have one sign the shear strain through the thickness is often
    larger: STRAIN_SHEAR_MAX_SURFACE. Small strains of any material.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.7 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_SHEAR_MAX_IN_PLANE("475 µε", "-325 µε", "-600 µε", "µε")')
    1000.0
    """
    return 2.0 * radius(strain_x, strain_y, shear_strain)


@worksheet_function("STRAIN_OUT_OF_PLANE", valid={"poissons_ratio": POISSON})
def out_of_plane(strain_x: Strain, strain_y: Strain, poissons_ratio: Ratio) -> Strain:
    r"""Strain through the thickness at a free surface, from the strains in it.

    .. math:: \varepsilon_z = -\frac{\nu}{1 - \nu}(\varepsilon_x + \varepsilon_y)

    Parameters
    ----------
    strain_x : strain
        Normal strain in x, extension positive.
    strain_y : strain
        Normal strain in y, extension positive.
    poissons_ratio : ratio
        Poisson's ratio.

    Returns
    -------
    strain : strain
        Strain at right angles to the surface, extension positive.

    Notes
    -----
    Plane stress, linear elastic, isotropic; strains from stress alone, without a part from temperature.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.7 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_OUT_OF_PLANE("400 µε", "-50 µε", 0.3, "µε")')
    -150.0
    """
    return -poissons_ratio / (1.0 - poissons_ratio) * (strain_x + strain_y)


@worksheet_function("STRAIN_SHEAR_MAX_SURFACE", valid={"poissons_ratio": POISSON})
def shear_max_surface(
    strain_x: Strain, strain_y: Strain, shear_strain: ShearStrain, poissons_ratio: Ratio
) -> ShearStrain:
    r"""Largest engineering shear strain on any plane through a point of a free surface.

    .. math:: \gamma_{max} = \max(\varepsilon_1, \varepsilon_2, \varepsilon_3) - \min(\varepsilon_1, \varepsilon_2,
        \varepsilon_3), \quad \varepsilon_3 = -\frac{\nu}{1 - \nu}(\varepsilon_x + \varepsilon_y)

    Parameters
    ----------
    strain_x : strain
        Normal strain in x, extension positive.
    strain_y : strain
        Normal strain in y, extension positive.
    shear_strain : shear strain
        Engineering shear strain γxy, twice the tensor shear strain; positive where the right angle between +x and +y
        closes.
    poissons_ratio : ratio
        Poisson's ratio.

    Returns
    -------
    shear_strain : shear strain
        Engineering shear strain, not negative.

    Notes
    -----
    The strain through the thickness is that of plane stress: linear elastic, isotropic, strains from stress alone.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.7 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_SHEAR_MAX_SURFACE("400 µε", "-50 µε", 0, 0.3, "µε")')
    550.0
    """
    third = -poissons_ratio / (1.0 - poissons_ratio) * (strain_x + strain_y)
    centre, half = 0.5 * (strain_x + strain_y), radius(strain_x, strain_y, shear_strain)
    return np.maximum(centre + half, third) - np.minimum(centre - half, third)
