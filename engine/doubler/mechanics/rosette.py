"""Strain rosettes: strains, principal strains and stresses from three gauges or a least-squares fit of more."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Angle, Modulus, Ratio, Strain, Stress, column, row
from doubler.catalogue.limits import POISSON, POSITIVE, condition
from doubler.mechanics.hooke import stacked
from doubler.mechanics.strain_plane import direction, radius

Layout = Literal["rectangular", "delta"]
Plane: Any = row(Strain, "ex", "ey", "gxy")
Pair: Any = row(Strain, "e1", "e2")
Stresses: Any = row(Stress, "s1", "s2")
TeeStresses: Any = row(Stress, "sa", "sb")
Strains: Any = column(Strain)
Angles: Any = column(Angle)
_ELASTIC = {"modulus": POSITIVE, "poissons_ratio": POISSON}
_THREE = 3
_NOISE = 1e-12
_SPREAD = 0.01  # below it an error of a reading grows more than a hundredfold


def in_plane(strain_a: Any, strain_b: Any, strain_c: Any, layout: str) -> tuple[Any, Any, Any]:
    """Return εx, εy and γxy, with x along gauge a."""
    if layout == "rectangular":
        return strain_a, strain_c, 2.0 * strain_b - strain_a - strain_c
    return strain_a, (2.0 * (strain_b + strain_c) - strain_a) / 3.0, 2.0 / np.sqrt(3.0) * (strain_b - strain_c)


def biaxial(one: Any, two: Any, modulus: Any, poissons_ratio: Any) -> Any:
    """Return the two stresses of two perpendicular principal strains in plane stress, side by side."""
    plate = modulus / (1.0 - poissons_ratio**2)
    return stacked(plate * (one + poissons_ratio * two), plate * (two + poissons_ratio * one))


def _directed(strain_a: Any, strain_b: Any, strain_c: Any, layout: str) -> Any:
    # Readings alike leave rounding noise of a delta's strains: no direction is to be read from that.
    largest = np.maximum(np.maximum(np.abs(strain_a), np.abs(strain_b)), np.abs(strain_c))
    return radius(*in_plane(strain_a, strain_b, strain_c, layout)) > _NOISE * largest


def _design(angles: Any) -> Any:
    """Return the coefficients of εx, εy, γxy in the reading of each gauge."""
    return stacked(np.cos(angles) ** 2, np.sin(angles) ** 2, np.sin(angles) * np.cos(angles))


def _fit(strains: Any, angles: Any) -> tuple[Any, Any]:
    """Return the three strains of least squares, and the readings less what they give."""
    design = _design(angles)
    # The pseudo-inverse: exact where three gauges settle the strain, least squares where there are more.
    fitted = (np.linalg.pinv(design) @ strains[..., np.newaxis])[..., 0]
    return fitted, strains - (design @ fitted[..., np.newaxis])[..., 0]


_FIT = (
    condition(
        "the columns of strains and angles must be equally long, three gauges at least",
        lambda strains, angles: strains.shape[-1] == angles.shape[-1] >= _THREE,
    ),
    condition(
        "the gauges must point in three directions at least that lie well apart (180° apart is one direction)",
        lambda angles: (
            True if angles.shape[-1] < _THREE else np.linalg.svd(_design(angles), compute_uv=False)[..., -1] > _SPREAD
        ),
    ),
)


@worksheet_function("STRAIN_ROSETTE")
def plane(strain_a: Strain, strain_b: Strain, strain_c: Strain, layout: Layout) -> Plane:
    r"""Strains in the plane of a surface from the three gauges of a rosette.

    .. math:: \text{rectangular: } \varepsilon_x = \varepsilon_a, \ \varepsilon_y = \varepsilon_c, \ \gamma_{xy} =
        2\varepsilon_b - \varepsilon_a - \varepsilon_c; \quad \text{delta: } \varepsilon_x = \varepsilon_a, \
        \varepsilon_y = \frac{2\varepsilon_b + 2\varepsilon_c - \varepsilon_a}{3}, \ \gamma_{xy} =
        \frac{2(\varepsilon_b - \varepsilon_c)}{\sqrt 3}

    Parameters
    ----------
    strain_a : strain
        Strain read by gauge a, which points along x; extension positive.
    strain_b : strain
        Strain read by gauge b: at 45° (rectangular) or 60° (delta) counter-clockwise from a.
    strain_c : strain
        Strain read by gauge c: at 90° (rectangular) or 120° (delta) counter-clockwise from a.
    layout : {"rectangular", "delta"}
        Which rosette it is.

    Returns
    -------
    strains : strain
        A row of ex, ey, gxy, with x along gauge a; gxy is the engineering shear strain.

    Notes
    -----
    The gauges must stand counter-clockwise in the order a, b, c: seen the other way round, the shear strain and
    the angle change sign. Readings already corrected for temperature, lead wires and transverse sensitivity;
    strain even under the gauges. Geometry alone: any material, small strains.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.7 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_ROSETTE("475 µε", "-225 µε", "-325 µε", "rectangular", "µε")')
    [[475.0, -325.0, -600.0]]
    """
    return stacked(*in_plane(strain_a, strain_b, strain_c, layout))


@worksheet_function("STRAIN_ROSETTE_PRINCIPAL")
def principal(strain_a: Strain, strain_b: Strain, strain_c: Strain, layout: Layout) -> Pair:
    r"""Principal strains in the plane of a surface from the three gauges of a rosette.

    .. math:: \varepsilon_{1,2} = \frac{\varepsilon_x + \varepsilon_y}{2} \pm \frac12\sqrt{(\varepsilon_x -
        \varepsilon_y)^2 + \gamma_{xy}^2}

    Parameters
    ----------
    strain_a : strain
        Strain read by gauge a, which points along x; extension positive.
    strain_b : strain
        Strain read by gauge b: at 45° (rectangular) or 60° (delta) counter-clockwise from a.
    strain_c : strain
        Strain read by gauge c: at 90° (rectangular) or 120° (delta) counter-clockwise from a.
    layout : {"rectangular", "delta"}
        Which rosette it is.

    Returns
    -------
    strains : strain
        A row of e1 ≥ e2.

    Notes
    -----
    The gauges must stand counter-clockwise in the order a, b, c: seen the other way round, the shear strain and
    the angle change sign. Readings already corrected for temperature, lead wires and transverse sensitivity;
    strain even under the gauges. Geometry alone: any material, small strains.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.7 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_ROSETTE_PRINCIPAL("475 µε", "-225 µε", "-325 µε", "rectangular", "µε")')
    [[575.0, -425.0]]
    """
    x, y, shear = in_plane(strain_a, strain_b, strain_c, layout)
    centre, half = 0.5 * (x + y), radius(x, y, shear)
    return stacked(centre + half, centre - half)


@worksheet_function(
    "STRAIN_ROSETTE_ANGLE",
    conditions=(
        condition("the strain is alike in every direction of the plane, so that none is principal", _directed),
    ),
)
def angle(strain_a: Strain, strain_b: Strain, strain_c: Strain, layout: Layout) -> Angle:
    r"""Angle from gauge a of a rosette to the larger principal strain, counter-clockwise.

    .. math:: \tan 2\theta = \frac{\gamma_{xy}}{\varepsilon_x - \varepsilon_y}

    Parameters
    ----------
    strain_a : strain
        Strain read by gauge a, which points along x; extension positive.
    strain_b : strain
        Strain read by gauge b: at 45° (rectangular) or 60° (delta) counter-clockwise from a.
    strain_c : strain
        Strain read by gauge c: at 90° (rectangular) or 120° (delta) counter-clockwise from a.
    layout : {"rectangular", "delta"}
        Which rosette it is.

    Returns
    -------
    angle : angle
        Above −90° and at most 90°, to the larger principal strain.

    Notes
    -----
    The gauges must stand counter-clockwise in the order a, b, c: seen the other way round, the shear strain and
    the angle change sign. Readings already corrected for temperature, lead wires and transverse sensitivity;
    strain even under the gauges. Refused where the strain is the same in all directions.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.7 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_ROSETTE_ANGLE("100 µε", "300 µε", "-200 µε", "rectangular", "deg")')
    33.40070474
    """
    return direction(*in_plane(strain_a, strain_b, strain_c, layout))


@worksheet_function("STRESS_ROSETTE", valid=_ELASTIC)
def stresses(
    strain_a: Strain, strain_b: Strain, strain_c: Strain, layout: Layout, modulus: Modulus, poissons_ratio: Ratio
) -> Stresses:
    r"""Principal stresses at a free surface from the three gauges of a rosette.

    .. math:: \sigma_{1,2} = \frac{E}{1 - \nu^2}(\varepsilon_{1,2} + \nu\varepsilon_{2,1})

    Parameters
    ----------
    strain_a : strain
        Strain read by gauge a, which points along x; extension positive.
    strain_b : strain
        Strain read by gauge b: at 45° (rectangular) or 60° (delta) counter-clockwise from a.
    strain_c : strain
        Strain read by gauge c: at 90° (rectangular) or 120° (delta) counter-clockwise from a.
    layout : {"rectangular", "delta"}
        Which rosette it is.
    modulus : modulus
        Young's modulus.
    poissons_ratio : ratio
        Poisson's ratio.

    Returns
    -------
    stresses : stress
        A row of s1 ≥ s2 in the plane, tension positive; the third, at right angles to the surface, is zero.

    Notes
    -----
    The gauges must stand counter-clockwise in the order a, b, c: seen the other way round, the shear strain and
    the angle change sign. Readings already corrected for temperature, lead wires and transverse sensitivity;
    strain even under the gauges. Linear elastic, isotropic, plane stress.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.7 (from memory).

    Examples
    --------
    >>> cell('=STRESS_ROSETTE("100 µε", "300 µε", "-200 µε", "rectangular", "180 GPa", 0.28, "MPa")')
    [[41.04840465, -66.04840465]]
    """
    x, y, shear = in_plane(strain_a, strain_b, strain_c, layout)
    centre, half = 0.5 * (x + y), radius(x, y, shear)
    return biaxial(centre + half, centre - half, modulus, poissons_ratio)


@worksheet_function("STRESS_ROSETTE_TEE", valid=_ELASTIC)
def tee(strain_a: Strain, strain_b: Strain, modulus: Modulus, poissons_ratio: Ratio) -> TeeStresses:
    r"""Stresses at a free surface from two gauges at right angles that lie along the principal directions.

    .. math:: \sigma_a = \frac{E}{1 - \nu^2}(\varepsilon_a + \nu\varepsilon_b), \quad \sigma_b = \frac{E}{1 -
        \nu^2}(\varepsilon_b + \nu\varepsilon_a)

    Parameters
    ----------
    strain_a : strain
        Strain read by gauge a, extension positive.
    strain_b : strain
        Strain read by gauge b, at right angles to a.
    modulus : modulus
        Young's modulus.
    poissons_ratio : ratio
        Poisson's ratio.

    Returns
    -------
    stresses : stress
        A row of sa, sb: normal stresses in the directions of the gauges, tension positive.

    Notes
    -----
    Right as normal stresses in these two directions whatever the shear; principal stresses only where the
    gauges lie along the principal directions: a tee can't tell. Linear elastic, isotropic, plane stress.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.7 (from memory).

    Examples
    --------
    >>> cell('=STRESS_ROSETTE_TEE("1000 µε", "-300 µε", "70 GPa", 0.3, "MPa")')
    [[70.0, 0.0]]
    """
    return biaxial(strain_a, strain_b, modulus, poissons_ratio)


@worksheet_function("STRAIN_ROSETTE_FIT", conditions=_FIT)
def fit(strains: Strains, angles: Angles) -> Plane:
    r"""Strains in the plane of a surface from three or more gauges in any directions, by least squares.

    .. math:: \min \sum_i \left(\varepsilon_i - \varepsilon_x\cos^2\theta_i - \varepsilon_y\sin^2\theta_i -
        \gamma_{xy}\sin\theta_i\cos\theta_i\right)^2

    Parameters
    ----------
    strains : column of strain
        Strain read by each gauge, three at least; extension positive.
    angles : column of angle
        Direction of each gauge, counter-clockwise from x.

    Returns
    -------
    strains : strain
        A row of ex, ey, gxy; gxy is the engineering shear strain.

    Notes
    -----
    All gauges at one point, all trusted equally. With more than three see STRAIN_ROSETTE_RESIDUAL. Geometry alone:
    any material, small strains.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.7 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_ROSETTE_FIT({"800 µε";"-200 µε";"625 µε"}, {"0 deg";"60 deg";"120 deg"}, "µε")')
    [[800.0, 16.66666667, -952.6279442]]
    """
    return _fit(strains, angles)[0]


@worksheet_function(
    "STRAIN_ROSETTE_RESIDUAL",
    conditions=(
        *_FIT,
        condition("give four gauges at least: three always fit", lambda strains: strains.shape[-1] > _THREE),
    ),
)
def residual(strains: Strains, angles: Angles) -> Strain:
    r"""Largest disagreement of four or more gauges with the strain that fits them best.

    .. math:: r = \max_i \left|\varepsilon_i - \varepsilon_x\cos^2\theta_i - \varepsilon_y\sin^2\theta_i -
        \gamma_{xy}\sin\theta_i\cos\theta_i\right|

    Parameters
    ----------
    strains : column of strain
        Strain read by each gauge, three at least; extension positive.
    angles : column of angle
        Direction of each gauge, counter-clockwise from x.

    Returns
    -------
    strain : strain
        Largest residual by magnitude: a wrong gauge, angle or sign shows here.

    Notes
    -----
    Three gauges always fit: they are refused, as their zero would say nothing.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.7 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_ROSETTE_RESIDUAL({"800 µε";"-200 µε";"625 µε";"20 µε"}, {"0°";"60°";"120°";"90°"}, "µε")')
    1.666666667
    """
    return np.max(np.abs(_fit(strains, angles)[1]), axis=-1)
