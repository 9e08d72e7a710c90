"""Young's modulus from a test curve, with the window of its regression and its quality; the toe."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Modulus, Ratio, Strain, Stress, row
from doubler.mechanics.curve_elastic_line import WINDOW, elastic_line, window
from doubler.mechanics.curve_record import RECORD, Strains, Stresses, together
from doubler.mechanics.hooke import stacked

Window: Any = row(Stress, "low", "high")
Fit: Any = row(Ratio, "r_squared", "variation", "points")


@worksheet_function("CURVE_MODULUS", conditions=(*RECORD, *WINDOW))
def modulus(strains: Strains, stresses: Stresses, low: Stress | None = None, high: Stress | None = None) -> Modulus:
    r"""Young's modulus from the elastic part of a test curve, by regression.

    .. math:: E = \frac{\sum (\varepsilon_i - \bar\varepsilon)(\sigma_i - \bar\sigma)}{\sum (\varepsilon_i -
        \bar\varepsilon)^2}

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.
    low : stress, optional
        Lower end of the window of the regression. Without low and high the window is found in the curve.
    high : stress, optional
        Upper end of the window.

    Returns
    -------
    modulus : modulus
        Young's modulus.

    Notes
    -----
    The window is looked for among all that span a tenth of the strength or more with five points or more: of those
    within a tenth of the steepest slope, the one whose slope has the least coefficient of variation. See
    CURVE_MODULUS_WINDOW and CURVE_MODULUS_FIT, and report both beside the modulus. A slope less sure than 2 % is
    refused. Unloading loops must have been taken out. The strain must come from an extensometer or gauges on the
    specimen, not from the travel of the machine.

    References
    ----------
    In the manner of ASTM E111 and ISO 6892-1, annex G (from memory).

    Examples
    --------
    >>> cell('=CURVE_MODULUS({0;0.001;0.002;0.003;0.006}, {"0 MPa";"70 MPa";"140 MPa";"210 MPa";"300 MPa"}, '
    ...      '"0 MPa", "220 MPa", "GPa")')
    70.0
    """
    return elastic_line(strains, stresses, low, high).slope


@worksheet_function("CURVE_MODULUS_WINDOW", conditions=(*RECORD, *WINDOW))
def modulus_window(
    strains: Strains, stresses: Stresses, low: Stress | None = None, high: Stress | None = None
) -> Window:
    r"""Lowest and highest stress of the points to which the elastic line of a test curve is fitted.

    .. math:: \sigma_{low} \le \sigma_i \le \sigma_{high}

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.
    low : stress, optional
        Lower end of the window of the regression. Without low and high the window is found in the curve.
    high : stress, optional
        Upper end of the window.

    Returns
    -------
    window : stress
        A row of low, high: the stresses of the first and last point used.

    Notes
    -----
    The window that CURVE_MODULUS, CURVE_TOE and CURVE_PROOF_STRESS use; belongs beside the modulus in a report.

    References
    ----------
    In the manner of ASTM E111 and ISO 6892-1, annex G (from memory).

    Examples
    --------
    >>> cell('=CURVE_MODULUS_WINDOW({0;0.001;0.002;0.003;0.004;0.005;0.01}, '
    ...      '{"0 MPa";"70 MPa";"140 MPa";"210 MPa";"280 MPa";"310 MPa";"350 MPa"}, , , "MPa")')
    [[0.0, 280.0]]
    """
    strains, stresses = together(strains, stresses)
    chosen = window(strains, stresses, low, high)
    lowest = np.min(np.where(chosen, stresses, np.inf), axis=-1)
    return stacked(lowest, np.max(np.where(chosen, stresses, -np.inf), axis=-1))


@worksheet_function("CURVE_MODULUS_FIT", conditions=(*RECORD, *WINDOW))
def modulus_fit(strains: Strains, stresses: Stresses, low: Stress | None = None, high: Stress | None = None) -> Fit:
    r"""How well the elastic line of a test curve fits: r², coefficient of variation of the slope, number of points.

    .. math:: V = \frac{s_E}{E} = \sqrt{\frac{1/r^2 - 1}{n - 2}}

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.
    low : stress, optional
        Lower end of the window of the regression. Without low and high the window is found in the curve.
    high : stress, optional
        Upper end of the window.

    Returns
    -------
    fit : ratio
        A row of r_squared, variation (standard error of the modulus over the modulus), points.

    Notes
    -----
    The variation says how sure the slope of these points is, not how right the extensometer. Common practice asks for
    less than 1 %.

    References
    ----------
    In the manner of ASTM E111 and ISO 6892-1, annex G (from memory).

    Examples
    --------
    >>> cell('=CURVE_MODULUS_FIT({0;0.001;0.002;0.003;0.006}, {"1 MPa";"69 MPa";"141 MPa";"209 MPa";"300 MPa"}, '
    ...      '"0 MPa", "220 MPa")')
    [[0.9998678996, 0.008127664152, 4.0]]
    """
    line = elastic_line(strains, stresses, low, high)
    return stacked(line.r_squared, line.variation, line.points.astype(np.float64))


@worksheet_function("CURVE_TOE", conditions=(*RECORD, *WINDOW))
def toe(strains: Strains, stresses: Stresses, low: Stress | None = None, high: Stress | None = None) -> Strain:
    r"""Strain at which the elastic line of a test curve crosses zero stress: the toe, to be taken off all strains.

    .. math:: \varepsilon_0 = \bar\varepsilon - \bar\sigma / E

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.
    low : stress, optional
        Lower end of the window of the regression. Without low and high the window is found in the curve.
    high : stress, optional
        Upper end of the window.

    Returns
    -------
    strain : strain
        Strain of the toe: positive where slack or seating came first, negative where the record began under load.

    Notes
    -----
    For a toe that comes from slack, seating or alignment. Where the material itself stiffens as it is first loaded,
    a compensation would hide that. CURVE_CORRECTED_STRAIN takes the toe off; the proof stress and the plastic
    elongations do so by themselves.

    References
    ----------
    In the manner of ASTM D638, annex on toe compensation (from memory).

    Examples
    --------
    >>> cell('=CURVE_TOE({0;0.001;0.002;0.003;0.004}, {"0 MPa";"35 MPa";"105 MPa";"175 MPa";"245 MPa"}, '
    ...      '"30 MPa", "250 MPa")')
    [[0.0005, 'mm/mm']]
    """
    return elastic_line(strains, stresses, low, high).foot


@worksheet_function("CURVE_CORRECTED_STRAIN")
def corrected_strain(strain: Strain, toe_strain: Strain) -> Strain:
    r"""Strain of a test curve with the toe taken off, so that the elastic line starts at zero.

    .. math:: \varepsilon' = \varepsilon - \varepsilon_0

    Parameters
    ----------
    strain : strain
        Strain as recorded; a whole column gives a column.
    toe_strain : strain
        Strain of the toe, from CURVE_TOE.

    Returns
    -------
    strain : strain
        Strain from the foot of the elastic line; negative within the toe, where points belong to no property.

    Notes
    -----
    The same shift for all points of a test.

    References
    ----------
    In the manner of ASTM D638, annex on toe compensation (from memory).

    Examples
    --------
    >>> cell('=CURVE_CORRECTED_STRAIN(0.0035, 0.0005)')
    [[0.003, 'mm/mm']]
    """
    return strain - toe_strain
