"""Test curves with two gauges: Poisson's ratio, and the shear of a ±45° tension test."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Modulus, Ratio, ShearStrain, Stress
from doubler.catalogue.limits import POSITIVE, Condition, condition
from doubler.mechanics.curve_elastic_line import WINDOW, fitted, window
from doubler.mechanics.curve_record import (
    RECORD,
    Strains,
    Stresses,
    between_points,
    break_point,
    first_reaching,
    together,
)

_TRANSVERSE = condition(
    "the columns of axial and of transverse strain must be equally long",
    lambda strains, transverse_strains: strains.shape[-1] == transverse_strains.shape[-1],
)


@worksheet_function("CURVE_POISSON", conditions=(*RECORD, _TRANSVERSE, *WINDOW))
def poisson(
    strains: Strains,
    transverse_strains: Strains,
    stresses: Stresses,
    low: Stress | None = None,
    high: Stress | None = None,
) -> Ratio:
    r"""Poisson's ratio from an axial and a transverse gauge, by the slopes of both over the stress.

    .. math:: \nu = -\frac{d\varepsilon_t / d\sigma}{d\varepsilon_l / d\sigma}

    Parameters
    ----------
    strains : column of strain
        Axial strain, in the order of the test; extension positive.
    transverse_strains : column of strain
        Transverse strain at the same moments; negative where the bar becomes thinner.
    stresses : column of stress
        Engineering stress at the same moments; tension positive.
    low : stress, optional
        Lower end of the window of the regressions. Without low and high the window is found in the axial curve.
    high : stress, optional
        Upper end of the window.

    Returns
    -------
    poissons_ratio : ratio
        Poisson's ratio.

    Notes
    -----
    In the elastic part. Slopes, so that a zero error of either gauge drops out. Of an anisotropic material it is the
    ratio for this pair of directions, which may be above 0.5.

    References
    ----------
    In the manner of ASTM E132 (from memory).

    Examples
    --------
    >>> cell('=CURVE_POISSON({0;0.001;0.002;0.003}, {0.0001;-0.0002;-0.0005;-0.0008}, '
    ...      '{"0 MPa";"70 MPa";"140 MPa";"210 MPa"}, "0 MPa", "210 MPa")')
    0.3
    """
    strains, transverse_strains, stresses = together(strains, transverse_strains, stresses)
    chosen = window(strains, stresses, low, high)
    return -fitted(stresses, transverse_strains, chosen).slope / fitted(stresses, strains, chosen).slope


def _same(strains: Any, transverse_strains: Any, stresses: Any) -> bool:
    return bool(strains.shape[-1] == transverse_strains.shape[-1] == stresses.shape[-1])


def _first_reached(strains: Any, transverse_strains: Any, stresses: Any, first: Any) -> Any:
    return not _same(strains, transverse_strains, stresses) or first_reaching(strains - transverse_strains, first)[2]


def _last_reached(strains: Any, transverse_strains: Any, stresses: Any, last: Any) -> Any:
    return not _same(strains, transverse_strains, stresses) or first_reaching(strains - transverse_strains, last)[2]


_SHEAR: tuple[Condition, ...] = (
    *RECORD,
    _TRANSVERSE,
    condition("first must be below last", lambda first, last: first < last),
    condition("first lies outside the shear strains of the test", _first_reached),
    condition("last lies outside the shear strains of the test", _last_reached),
)


@worksheet_function("CURVE_SHEAR_MODULUS_45", conditions=_SHEAR)
def shear_modulus_45(
    strains: Strains,
    transverse_strains: Strains,
    stresses: Stresses,
    first: ShearStrain = 0.002,
    last: ShearStrain = 0.006,
) -> Modulus:
    r"""In-plane shear modulus of a ply from the tension test of a ±45° laminate: a chord.

    .. math:: G_{12} = \frac{\Delta\tau_{12}}{\Delta\gamma_{12}}, \quad \tau_{12} = \frac{\sigma_x}{2}, \quad
        \gamma_{12} = \varepsilon_x - \varepsilon_y

    Parameters
    ----------
    strains : column of strain
        Axial strain, in the order of the test; extension positive.
    transverse_strains : column of strain
        Transverse strain at the same moments; negative where the strip becomes narrower.
    stresses : column of stress
        Axial stress at the same moments; tension positive.
    first : shear strain
        Engineering shear strain at which the chord begins: 2000 µε.
    last : shear strain
        Engineering shear strain at which it ends: 6000 µε.

    Returns
    -------
    modulus : modulus
        Chord shear modulus.

    Notes
    -----
    A balanced and symmetric ±45° laminate of one ply, so that no shear force couples in; away from the free edges.
    Linear between the points; noise goes into a chord in full.

    References
    ----------
    In the manner of ASTM D3518 (from memory).

    Examples
    --------
    >>> cell('=CURVE_SHEAR_MODULUS_45({0;0.001;0.002;0.004}, {0;-0.0008;-0.0016;-0.0033}, '
    ...      '{"0 MPa";"17 MPa";"33 MPa";"60 MPa"}, , , "GPa")')
    3.966966967
    """
    strains, transverse_strains, stresses = together(strains, transverse_strains, stresses)
    shear = strains - transverse_strains
    start, end = first_reaching(shear, first)[:2], first_reaching(shear, last)[:2]
    return 0.5 * (between_points(stresses, *end) - between_points(stresses, *start)) / (last - first)


@worksheet_function("CURVE_SHEAR_STRENGTH_45", valid={"limit": POSITIVE}, conditions=(*RECORD, _TRANSVERSE))
def shear_strength_45(
    strains: Strains, transverse_strains: Strains, stresses: Stresses, limit: ShearStrain = 0.05
) -> Stress:
    r"""Largest in-plane shear stress of a ±45° tension test up to a shear strain.

    .. math:: \tau_{12m} = \max_{\gamma_{12} \le \gamma_{limit}} \frac{\sigma_x}{2}

    Parameters
    ----------
    strains : column of strain
        Axial strain, in the order of the test; extension positive.
    transverse_strains : column of strain
        Transverse strain at the same moments; negative where the strip becomes narrower.
    stresses : column of stress
        Axial stress at the same moments; tension positive.
    limit : shear strain
        Engineering shear strain up to which it is looked for: 5 %, beyond which the plies have turned too far.

    Returns
    -------
    stress : stress
        Largest shear stress, interpolated at the limit where the curve goes beyond it.

    Notes
    -----
    A balanced and symmetric ±45° laminate of one ply. No material strength in shear: the laminate holds on by its
    fibres, and its plies are not in pure shear.

    References
    ----------
    In the manner of ASTM D3518 (from memory).

    Examples
    --------
    >>> cell('=CURVE_SHEAR_STRENGTH_45({0;0.01;0.02;0.03}, {0;-0.01;-0.02;-0.03}, '
    ...      '{"0 MPa";"100 MPa";"140 MPa";"160 MPa"}, , "MPa")')
    75.0
    """
    strains, transverse_strains, stresses = together(strains, transverse_strains, stresses)
    shear = strains - transverse_strains
    bound = np.asarray(limit)[..., np.newaxis]
    index, share, reached = first_reaching(shear, limit)
    unbroken = reached & (index + share <= break_point(stresses))
    at_limit = np.where(unbroken, between_points(stresses, index, share), -np.inf)
    before = np.logical_not(np.logical_or.accumulate(shear > bound, axis=-1))
    inside = np.max(np.where(before, stresses, -np.inf), axis=-1)
    return 0.5 * np.maximum(inside, at_limit)
