"""Slopes of a test curve beyond its elastic line: chord, secant and tangent modulus."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Modulus, Strain, Stress
from doubler.catalogue.limits import POSITIVE, condition
from doubler.mechanics.curve_elastic_line import fitted
from doubler.mechanics.curve_record import RECORD, Strains, Stresses, between_points, first_reaching, peak, together

_FEWEST_TANGENT = 3


def _first_reached(strains: Any, first: Any) -> Any:
    return first_reaching(strains, first)[2]


def _last_reached(strains: Any, last: Any) -> Any:
    return first_reaching(strains, last)[2]


@worksheet_function(
    "CURVE_MODULUS_CHORD",
    conditions=(
        *RECORD,
        condition("first must be below last", lambda first, last: first < last),
        condition("first lies outside the strains of the curve", _first_reached),
        condition("last lies outside the strains of the curve", _last_reached),
    ),
)
def chord_modulus(strains: Strains, stresses: Stresses, first: Strain, last: Strain) -> Modulus:
    r"""Chord modulus between two strains of a test curve, interpolated between its points.

    .. math:: E_c = \frac{\sigma(\varepsilon_2) - \sigma(\varepsilon_1)}{\varepsilon_2 - \varepsilon_1}

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.
    first : strain
        Strain at which the chord begins, such as 1000 µε.
    last : strain
        Strain at which it ends, such as 3000 µε.

    Returns
    -------
    modulus : modulus
        Chord modulus.

    Notes
    -----
    Two places alone make the slope: noise goes into it in full. The strains are those of the record, toe included.

    References
    ----------
    In the manner of ASTM E111 and D3039 (from memory).

    Examples
    --------
    >>> cell('=CURVE_MODULUS_CHORD({0;0.002;0.004}, {"0 MPa";"100 MPa";"180 MPa"}, 0.001, 0.003, "GPa")')
    45.0
    """
    strains, stresses = together(strains, stresses)
    start = first_reaching(strains, first)[:2]
    end = first_reaching(strains, last)[:2]
    return (between_points(stresses, *end) - between_points(stresses, *start)) / (last - first)


def _reached_stress(stresses: Any, stress: Any) -> Any:
    return first_reaching(stresses, stress)[2]


_ON_CURVE = condition("the stress lies outside those of the curve", _reached_stress)


def _strain_grows(strains: Any, stresses: Any, stress: Any, toe_strain: Any) -> Any:
    if strains.shape[-1] != stresses.shape[-1]:
        return True  # told by the other conditions
    strains, stresses = together(strains, stresses)
    return (between_points(strains, *first_reaching(stresses, stress)[:2]) > toe_strain) & (stress > 0.0)


@worksheet_function(
    "CURVE_MODULUS_SECANT",
    conditions=(
        *RECORD,
        _ON_CURVE,
        condition("the stress must be positive, and its strain lie beyond the toe", _strain_grows),
    ),
)
def secant_modulus(strains: Strains, stresses: Stresses, stress: Stress, toe_strain: Strain = 0.0) -> Modulus:
    r"""Secant modulus of a test curve at a stress, from the origin or from the toe.

    .. math:: E_s = \frac{\sigma}{\varepsilon(\sigma) - \varepsilon_0}

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.
    stress : stress
        Stress at which the secant meets the curve for the first time.
    toe_strain : strain
        Strain of the toe, from CURVE_TOE; 0 for a curve that starts at the origin.

    Returns
    -------
    modulus : modulus
        Secant modulus.

    Notes
    -----
    Linear between the points. The origin decides: an unseen toe falsifies a secant at low stress most, wherefore ASTM
    E111 leaves the secant modulus out of its scope.

    References
    ----------
    Definition; ASTM E111, section 1.2, on its scope.

    Examples
    --------
    >>> cell('=CURVE_MODULUS_SECANT({0;0.002;0.004}, {"0 MPa";"100 MPa";"160 MPa"}, "130 MPa", , "GPa")')
    43.33333333
    """
    strains, stresses = together(strains, stresses)
    return stress / (between_points(strains, *first_reaching(stresses, stress)[:2]) - toe_strain)


def _near(stresses: Any, stress: Any, half_width: Any) -> Any:
    """Return the points of the first rise whose stress lies near the one wanted."""
    stress, half_width = np.asarray(stress)[..., np.newaxis], np.asarray(half_width)[..., np.newaxis]
    before = np.arange(stresses.shape[-1]) <= peak(stresses)[..., np.newaxis]
    return before & (np.abs(stresses - stress) <= half_width)


def _enough_near(strains: Any, stresses: Any, stress: Any, half_width: Any) -> Any:
    if strains.shape[-1] != stresses.shape[-1]:
        return True  # told by the other conditions
    strains, near = together(strains, _near(stresses, stress, half_width))
    low = np.min(np.where(near, strains, np.inf), axis=-1)
    high = np.max(np.where(near, strains, -np.inf), axis=-1)
    return (np.sum(near, axis=-1) >= _FEWEST_TANGENT) & (high > low)


@worksheet_function(
    "CURVE_MODULUS_TANGENT",
    valid={"half_width": POSITIVE},
    conditions=(
        *RECORD,
        _ON_CURVE,
        condition(
            "fewer than three points of the curve with unlike strains lie within half_width of the stress; widen it",
            _enough_near,
        ),
    ),
)
def tangent_modulus(strains: Strains, stresses: Stresses, stress: Stress, half_width: Stress) -> Modulus:
    r"""Tangent modulus of a test curve at a stress, by regression over the points around it.

    .. math:: E_t = \frac{d\sigma}{d\varepsilon}

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.
    stress : stress
        Stress at which the tangent is wanted.
    half_width : stress
        Points up to this much above and below it are used, up to the largest stress.

    Returns
    -------
    modulus : modulus
        Tangent modulus.

    Notes
    -----
    A narrow band follows the curve and its noise, a wide one neither: state it beside the result.

    References
    ----------
    In the manner of ASTM E111 (from memory).

    Examples
    --------
    >>> cell('=CURVE_MODULUS_TANGENT({0;0.002;0.004;0.006;0.01}, {"0 MPa";"100 MPa";"160 MPa";"190 MPa";"220 MPa"}, '
    ...      '"160 MPa", "65 MPa", "GPa")')
    14.14285714
    """
    near = _near(stresses, stress, half_width)
    return fitted(strains, stresses, near).slope
