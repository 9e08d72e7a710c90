"""The Ramberg–Osgood curve fitted to a test curve, with the error of the fit."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Ratio, Strain, Stress
from doubler.catalogue.limits import POSITIVE, condition
from doubler.mechanics.curve_elastic_line import WINDOW, Line, elastic_line, fitted
from doubler.mechanics.curve_ramberg_osgood import stress_at
from doubler.mechanics.curve_record import RECORD, Strains, Stresses, peak, together

_FEWEST = 3
_VALID = {"offset": POSITIVE, "from_plastic": POSITIVE, "to_plastic": POSITIVE}


def _fit(
    strains: Any, stresses: Any, offset: Any, span: tuple[Any, Any], window: tuple[Any, Any]
) -> tuple[Line, Line, Any, Any]:
    """Return the elastic line, that of ln σ over ln(plastic strain / offset), its points, and strains from the foot."""
    elastic = elastic_line(strains, stresses, *window)
    slope, foot, offset, first, last = (
        np.asarray(item)[..., np.newaxis] for item in (elastic.slope, elastic.foot, offset, *span)
    )
    strains, stresses, slope, foot, offset, first, last = together(strains, stresses, slope, foot, offset, first, last)
    plastic = strains - foot - stresses / slope
    before = np.arange(strains.shape[-1]) <= peak(stresses)[..., np.newaxis]
    chosen = before & (plastic >= first) & (plastic <= last) & (stresses > 0.0)
    x = np.log(np.where(chosen, plastic / offset, 1.0))
    y = np.log(np.where(chosen, stresses, 1.0))
    return elastic, fitted(x, y, chosen), chosen, strains - foot


def _fits(strains: Any, stresses: Any, offset: Any, from_plastic: Any, to_plastic: Any, low: Any, high: Any) -> Any:
    if strains.shape[-1] != stresses.shape[-1]:
        return True  # told by ALIKE
    line = _fit(strains, stresses, offset, (from_plastic, to_plastic), (low, high))[1]
    return (line.points >= _FEWEST) & (line.slope > 0.0) & (line.slope <= 1.0)


_FIT = (
    *RECORD,
    *WINDOW,
    condition("from_plastic must be below to_plastic", lambda from_plastic, to_plastic: from_plastic < to_plastic),
    condition(
        "between from_plastic and to_plastic the curve has fewer than three points before its largest stress, or does "
        "not harden there with an exponent of 1 or more",
        _fits,
    ),
)


@worksheet_function("CURVE_RO_FIT_EXPONENT", valid=_VALID, conditions=_FIT)
def fit_exponent(
    strains: Strains,
    stresses: Stresses,
    offset: Strain = 0.002,
    from_plastic: Strain = 0.0005,
    to_plastic: Strain = 0.02,
    low: Stress | None = None,
    high: Stress | None = None,
) -> Ratio:
    r"""Exponent of the Ramberg–Osgood curve that fits a test curve.

    .. math:: \min \sum_i \left(\ln \sigma_i - \ln \sigma_p - \tfrac1n \ln \frac{\varepsilon_{pl,i}}{\varepsilon_p}
        \right)^2

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.
    offset : strain
        Plastic strain that defines the proof stress: 0.002 for the 0.2 % proof stress.
    from_plastic : strain
        Least plastic strain of the points used: below it, it is a small difference of large numbers.
    to_plastic : strain
        Largest plastic strain of the points used.
    low : stress, optional
        Lower end of the window of the modulus. Without low and high the window is found in the curve.
    high : stress, optional
        Upper end of the window.

    Returns
    -------
    exponent : ratio
        Exponent n.

    Notes
    -----
    The elastic line comes first, with the toe taken off; then ln σ is fitted over the logarithm of the plastic
    strain, points up to the largest stress. Each point has one vote: many points in one place weigh there.

    References
    ----------
    W. Ramberg, W. R. Osgood, NACA Technical Note 902, 1943; the fit by logarithms is common practice.

    Examples
    --------
    >>> cell('=CURVE_RO_FIT_EXPONENT({0;0.002;0.004;0.0068;0.0073;0.0083;0.0108}, {"0 MPa";"140 MPa";"280 MPa";'
    ...      '"400 MPa";"410 MPa";"425 MPa";"445 MPa"}, , , , "0 MPa", "290 MPa")')
    13.26225917
    """
    return 1.0 / _fit(strains, stresses, offset, (from_plastic, to_plastic), (low, high))[1].slope


@worksheet_function("CURVE_RO_FIT_PROOF", valid=_VALID, conditions=_FIT)
def fit_proof(
    strains: Strains,
    stresses: Stresses,
    offset: Strain = 0.002,
    from_plastic: Strain = 0.0005,
    to_plastic: Strain = 0.02,
    low: Stress | None = None,
    high: Stress | None = None,
) -> Stress:
    r"""Proof stress of the Ramberg–Osgood curve that fits a test curve.

    .. math:: \min \sum_i \left(\ln \sigma_i - \ln \sigma_p - \tfrac1n \ln \frac{\varepsilon_{pl,i}}{\varepsilon_p}
        \right)^2

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.
    offset : strain
        Plastic strain that defines the proof stress: 0.002 for the 0.2 % proof stress.
    from_plastic : strain
        Least plastic strain of the points used: below it, it is a small difference of large numbers.
    to_plastic : strain
        Largest plastic strain of the points used.
    low : stress, optional
        Lower end of the window of the modulus. Without low and high the window is found in the curve.
    high : stress, optional
        Upper end of the window.

    Returns
    -------
    stress : stress
        Proof stress of the fitted curve; near to CURVE_PROOF_STRESS where the fit is good there.

    Notes
    -----
    The elastic line comes first, with the toe taken off; then ln σ is fitted over the logarithm of the plastic
    strain, points up to the largest stress. Each point has one vote: many points in one place weigh there.

    References
    ----------
    W. Ramberg, W. R. Osgood, NACA Technical Note 902, 1943; the fit by logarithms is common practice.

    Examples
    --------
    >>> cell('=CURVE_RO_FIT_PROOF({0;0.002;0.004;0.0068;0.0073;0.0083;0.0108}, {"0 MPa";"140 MPa";"280 MPa";'
    ...      '"400 MPa";"410 MPa";"425 MPa";"445 MPa"}, , , , "0 MPa", "290 MPa", "MPa")')
    419.9064363
    """
    return np.exp(_fit(strains, stresses, offset, (from_plastic, to_plastic), (low, high))[1].intercept)


@worksheet_function("CURVE_RO_FIT_ERROR", valid=_VALID, conditions=_FIT)
def fit_error(
    strains: Strains,
    stresses: Stresses,
    offset: Strain = 0.002,
    from_plastic: Strain = 0.0005,
    to_plastic: Strain = 0.02,
    low: Stress | None = None,
    high: Stress | None = None,
) -> Ratio:
    r"""Largest error in stress of the Ramberg–Osgood curve that fits a test curve, up to the end of the fit.

    .. math:: e = \max_i \left|\frac{\sigma_{RO}(\varepsilon_i - \varepsilon_0)}{\sigma_i} - 1\right|

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.
    offset : strain
        Plastic strain that defines the proof stress: 0.002 for the 0.2 % proof stress.
    from_plastic : strain
        Least plastic strain of the points used: below it, it is a small difference of large numbers.
    to_plastic : strain
        Largest plastic strain of the points used.
    low : stress, optional
        Lower end of the window of the modulus. Without low and high the window is found in the curve.
    high : stress, optional
        Upper end of the window.

    Returns
    -------
    error : ratio
        The largest by magnitude, over the points of the fit, at their strains.

    Notes
    -----
    A judgement of the fit where it was made, not beyond: report it beside the exponent, with the plastic strains
    between which the points lie.

    References
    ----------
    W. Ramberg, W. R. Osgood, NACA Technical Note 902, 1943; the fit by logarithms is common practice.

    Examples
    --------
    >>> cell('=CURVE_RO_FIT_ERROR({0;0.002;0.004;0.0068;0.0073;0.0083;0.0108}, {"0 MPa";"140 MPa";"280 MPa";'
    ...      '"400 MPa";"410 MPa";"425 MPa";"445 MPa"}, , , , "0 MPa", "290 MPa", "%")')
    0.3231575334
    """
    elastic, line, chosen, shifted = _fit(strains, stresses, offset, (from_plastic, to_plastic), (low, high))
    modulus, proof, power = (
        item[..., np.newaxis] for item in (elastic.slope, np.exp(line.intercept), 1.0 / line.slope)
    )
    found = stress_at(shifted, modulus, proof, power, np.asarray(offset)[..., np.newaxis])
    off = np.abs(found / np.where(chosen, stresses, 1.0) - 1.0)
    return np.max(np.where(chosen, off, 0.0), axis=-1)
