"""Strengths from a test curve: proof stress by offset, upper and lower yield, tensile strength."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Strain, Stress
from doubler.catalogue.limits import NOT_NEGATIVE, POSITIVE, condition
from doubler.mechanics.curve_elastic_line import WINDOW, elastic_line
from doubler.mechanics.curve_record import (
    RECORD,
    TENSION,
    Strains,
    Stresses,
    between_points,
    break_point,
    first_reaching,
    together,
)

StressColumn: Any = Stresses
_YIELD_DROP = 0.005
_YIELD_LENGTH = 0.0005


def _crossing(strains: Any, stresses: Any, offset: Any, low: Any, high: Any) -> tuple[Any, Any, Any]:
    """Find where the curve crosses the offset line: the point before, the share of the step, and whether unbroken."""
    line = elastic_line(strains, stresses, low, high)
    start = (line.foot + offset)[..., np.newaxis]
    strains, stresses, start = together(strains, stresses, start)
    below = line.slope[..., np.newaxis] * (strains - start) - stresses
    index, share, reached = first_reaching(below, np.zeros(below.shape[:-1]))
    return index, share, reached & (index + share <= break_point(stresses))


def _crosses(strains: Any, stresses: Any, offset: Any, low: Any, high: Any) -> Any:
    if strains.shape[-1] != stresses.shape[-1]:
        return True  # told by ALIKE
    return _crossing(strains, stresses, offset, low, high)[2]


@worksheet_function(
    "CURVE_PROOF_STRESS",
    valid={"offset": POSITIVE},
    conditions=(
        *RECORD,
        *WINDOW,
        condition(
            "the curve ends or breaks before it crosses the offset line: there is no such proof stress", _crosses
        ),
    ),
)
def proof_stress(
    strains: Strains,
    stresses: Stresses,
    offset: Strain = 0.002,
    low: Stress | None = None,
    high: Stress | None = None,
) -> Stress:
    r"""Proof stress of a test curve: where a line parallel to its elastic part, shifted by the offset, meets it.

    .. math:: \sigma_p = E\,(\varepsilon - \varepsilon_0 - \varepsilon_{offset}) = \sigma(\varepsilon)

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.
    offset : strain
        Permanent strain that defines the proof stress: 0.002 for Rp0.2.
    low : stress, optional
        Lower end of the window of the modulus. Without low and high the window is found in the curve.
    high : stress, optional
        Upper end of the window.

    Returns
    -------
    stress : stress
        Proof stress at the first crossing, linear between the points.

    Notes
    -----
    The line starts at the foot of the elastic line, so a toe is compensated. A material with a yield point has an
    upper and a lower yield strength instead. A curve that breaks before the crossing has no proof stress.

    References
    ----------
    In the manner of ISO 6892-1 and ASTM E8 (from memory).

    Examples
    --------
    >>> cell('=CURVE_PROOF_STRESS({0;0.001;0.002;0.003;0.005;0.01}, '
    ...      '{"0 MPa";"70 MPa";"140 MPa";"210 MPa";"240 MPa";"250 MPa"}, 0.002, "0 MPa", "220 MPa", "MPa")')
    240.8823529
    """
    index, share, _ = _crossing(strains, stresses, offset, low, high)
    return between_points(stresses, index, share)


def _yield_segment(strains: Any, stresses: Any) -> tuple[Any, Any, Any]:
    """Find the first stress that drops and is exceeded only later.

    Returns
    -------
    begin, end, found
        Index of the upper yield, index of the first later point that exceeds it, and whether there is such a place.
    """
    strains, stresses = together(strains, stresses)
    count = stresses.shape[-1]
    before = np.concatenate([np.full((*stresses.shape[:-1], 1), -np.inf), stresses[..., :-1]], axis=-1)
    record = stresses > np.maximum.accumulate(before, axis=-1)
    # Each record opens a segment that runs up to the next one: reduced over all lanes in one flat array.
    starts = np.flatnonzero(record)
    shape = record.shape
    lowest, farthest = np.zeros(record.size), np.zeros(record.size)
    lowest[starts] = np.minimum.reduceat(stresses.ravel(), starts)
    farthest[starts] = np.maximum.reduceat(strains.ravel(), starts)
    lowest, farthest = lowest.reshape(shape), farthest.reshape(shape)
    drop = lowest <= (1.0 - _YIELD_DROP) * stresses
    long = farthest - strains >= _YIELD_LENGTH
    exceeded = stresses < np.max(stresses, axis=-1, keepdims=True)
    fits = record & drop & long & exceeded & (stresses > 0.0)
    begin = np.argmax(fits, axis=-1)
    after = record & (np.arange(count) > begin[..., np.newaxis])
    return begin, np.argmax(after, axis=-1), np.any(fits, axis=-1)


def _yields(strains: Any, stresses: Any) -> Any:
    return True if strains.shape[-1] != stresses.shape[-1] else _yield_segment(strains, stresses)[2]


_YIELD_POINT = condition(
    "the curve has no yield point: nowhere does the stress drop by 0.5 %, stay below for 0.05 % of strain, and rise "
    "beyond it later; use CURVE_PROOF_STRESS",
    _yields,
)


@worksheet_function("CURVE_UPPER_YIELD", conditions=(*RECORD, _YIELD_POINT))
def upper_yield(strains: Strains, stresses: Stresses) -> Stress:
    r"""Upper yield strength of a test curve with a yield point.

    .. math:: R_{eH} = \sigma_i: \quad \min_{i < k < j} \sigma_k \le 0.995\,\sigma_i

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.

    Returns
    -------
    stress : stress
        The highest stress before the first drop of 0.5 % or more after which it is not exceeded over 0.05 % of
        strain.

    Notes
    -----
    The stress must rise beyond it in the end: where the upper yield is the largest stress of the test, the two can't
    be told apart here, and there is no result. Depends on the testing rate and on the stiffness of the machine.

    References
    ----------
    In the manner of ISO 6892-1, annex A (from memory).

    Examples
    --------
    >>> cell('=CURVE_UPPER_YIELD({0;0.0015;0.002;0.01;0.02;0.1}, '
    ...      '{"0 MPa";"310 MPa";"280 MPa";"285 MPa";"330 MPa";"420 MPa"}, "MPa")')
    310.0
    """
    return np.take_along_axis(
        together(stresses, strains)[0], _yield_segment(strains, stresses)[0][..., np.newaxis], axis=-1
    )[..., 0]


@worksheet_function("CURVE_LOWER_YIELD", valid={"transient": NOT_NEGATIVE}, conditions=(*RECORD, _YIELD_POINT))
def lower_yield(strains: Strains, stresses: Stresses, transient: Strain = 0.0) -> Stress:
    r"""Lower yield strength of a test curve with a yield point.

    .. math:: R_{eL} = \min_{i < k < j,\; \varepsilon_k > \varepsilon_i + \varepsilon_{transient}} \sigma_k

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.
    transient : strain
        Strain after the upper yield whose points are left out, as a first undershoot of the machine; 0 leaves out
        none, which is on the safe side.

    Returns
    -------
    stress : stress
        The lowest stress from the upper yield until it is exceeded.

    Notes
    -----
    Without transient a first undershoot counts, and the result is rather too low. There is no result where the
    transient reaches beyond the yielding.

    References
    ----------
    In the manner of ISO 6892-1, annex A (from memory).

    Examples
    --------
    >>> cell('=CURVE_LOWER_YIELD({0;0.0015;0.002;0.01;0.02;0.1}, '
    ...      '{"0 MPa";"310 MPa";"280 MPa";"285 MPa";"330 MPa";"420 MPa"}, , "MPa")')
    280.0
    """
    strains, stresses = together(strains, stresses)
    begin, end, _ = _yield_segment(strains, stresses)
    index = np.arange(strains.shape[-1])
    start = np.take_along_axis(strains, begin[..., np.newaxis], -1) + np.asarray(transient)[..., np.newaxis]
    inside = (index > begin[..., np.newaxis]) & (index < end[..., np.newaxis]) & (strains >= start)
    lowest = np.min(np.where(inside, stresses, np.inf), axis=-1)
    return np.where(np.isfinite(lowest), lowest, np.nan)


@worksheet_function("CURVE_STRENGTH", conditions=(TENSION,))
def strength(stresses: StressColumn) -> Stress:
    r"""Tensile strength: the largest engineering stress of a test curve.

    .. math:: R_m = \max_i \sigma_i

    Parameters
    ----------
    stresses : column of stress
        Engineering stress; tension positive.

    Returns
    -------
    stress : stress
        Tensile strength.

    Notes
    -----
    The largest that was recorded: a test that was stopped, or a record with a point of noise, says no more than that.

    References
    ----------
    In the manner of ISO 6892-1 and ASTM E8 (from memory).

    Examples
    --------
    >>> cell('=CURVE_STRENGTH({"0 MPa";"310 MPa";"280 MPa";"420 MPa";"390 MPa"}, "MPa")')
    420.0
    """
    return np.max(stresses, axis=-1)
