"""Elongations and energies of a test curve: uniform, at break, resilience, toughness."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Area, EnergyDensity, Length, Ratio, Strain, Stress
from doubler.catalogue.limits import POSITIVE, condition
from doubler.mechanics.curve_elastic_line import WINDOW, elastic_line
from doubler.mechanics.curve_record import (
    RECORD,
    Strains,
    Stresses,
    area_until,
    at,
    break_point,
    first_reaching,
    peak,
    together,
)

Part = Literal["plastic", "total"]


def _elongation(columns: tuple[Any, Any], index: Any, window: tuple[Any, Any], part: str) -> Any:
    """Return the strain at a point from the foot of the elastic line, without its elastic part if so wanted."""
    strains, stresses = together(*columns)
    line = elastic_line(strains, stresses, *window)
    index = np.broadcast_to(index, line.slope.shape)
    wide_strains = np.broadcast_to(strains, (*line.slope.shape, strains.shape[-1]))
    wide_stresses = np.broadcast_to(stresses, wide_strains.shape)
    elastic = at(wide_stresses, index) / line.slope if part == "plastic" else 0.0
    return at(wide_strains, index) - line.foot - elastic


@worksheet_function("CURVE_UNIFORM_ELONGATION", conditions=(*RECORD, *WINDOW))
def uniform_elongation(
    strains: Strains, stresses: Stresses, part: Part = "plastic", low: Stress | None = None, high: Stress | None = None
) -> Strain:
    r"""Elongation at the largest stress of a test curve, at which necking begins.

    .. math:: A_{gt} = \varepsilon_m - \varepsilon_0, \quad A_g = A_{gt} - R_m / E

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.
    part : choice
        "plastic" for the permanent elongation, "total" for that with its elastic part, the limit of the conversion
        to true stress.
    low : stress, optional
        Lower end of the window of the modulus. Without low and high the window is found in the curve.
    high : stress, optional
        Upper end of the window.

    Returns
    -------
    elongation : strain
        Uniform elongation, at the first of several largest stresses.

    Notes
    -----
    From the foot of the elastic line. Where the largest stress is flat, standards take the middle of the flat part;
    this takes its beginning, which is less. Where the upper yield is the largest stress it is no uniform elongation.

    References
    ----------
    In the manner of ISO 6892-1 (from memory).

    Examples
    --------
    >>> cell('=CURVE_UNIFORM_ELONGATION({0;0.001;0.002;0.003;0.05;0.1}, '
    ...      '{"0 MPa";"70 MPa";"140 MPa";"210 MPa";"280 MPa";"250 MPa"}, "plastic", "0 MPa", "220 MPa", "%")')
    4.6
    """
    return _elongation((strains, stresses), peak(together(stresses, strains)[0]), (low, high), part)


@worksheet_function("CURVE_BREAK_ELONGATION", conditions=(*RECORD, *WINDOW))
def break_elongation(
    strains: Strains, stresses: Stresses, part: Part = "plastic", low: Stress | None = None, high: Stress | None = None
) -> Strain:
    r"""Elongation at break of a test curve.

    .. math:: A_t = \varepsilon_b - \varepsilon_0, \quad A = A_t - \sigma_b / E

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.
    part : choice
        "plastic" for what remains after the break, "total" for that with its elastic part.
    low : stress, optional
        Lower end of the window of the modulus. Without low and high the window is found in the curve.
    high : stress, optional
        Upper end of the window.

    Returns
    -------
    elongation : strain
        Elongation over the gauge length of the extensometer.

    Notes
    -----
    Break: the last point before the stress falls at once by a tenth of the strength or more, five times as steeply as
    in the step before, without coming back; else the last point of 2 % of the strength or more. The extensometer must
    have stayed on, and the neck lie within its gauge length. Only elongations over equal gauge lengths compare.

    References
    ----------
    In the manner of ISO 6892-1, annex A (from memory).

    Examples
    --------
    >>> cell('=CURVE_BREAK_ELONGATION({0;0.001;0.002;0.003;0.05;0.1;0.1}, '
    ...      '{"0 MPa";"70 MPa";"140 MPa";"210 MPa";"280 MPa";"245 MPa";"2 MPa"}, "plastic", "0 MPa", "220 MPa", "%")')
    9.65
    """
    return _elongation((strains, stresses), break_point(together(stresses, strains)[0]), (low, high), part)


@worksheet_function(
    "CURVE_RESILIENCE",
    valid={"stress": POSITIVE},
    conditions=(
        *RECORD,
        condition(
            "the stress lies outside those of the curve", lambda stresses, stress: first_reaching(stresses, stress)[2]
        ),
    ),
)
def resilience(strains: Strains, stresses: Stresses, stress: Stress) -> EnergyDensity:
    r"""Modulus of resilience: energy for each unit of volume up to a stress of a test curve.

    .. math:: u_r = \int_0^{\varepsilon(\sigma)} \sigma \, d\varepsilon

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.
    stress : stress
        Stress up to which the energy is wanted, met for the first time: the proportional limit, or the proof stress.

    Returns
    -------
    energy_density : energy density
        Area under the curve, by trapezia.

    Notes
    -----
    From the first point of the record. Up to the proof stress it holds the offset's plastic work as well; the elastic
    energy alone is STRAIN_ENERGY_UNIAXIAL.

    References
    ----------
    W. D. Callister, Materials Science and Engineering, chapter 6 (from memory).

    Examples
    --------
    >>> cell('=CURVE_RESILIENCE({0;0.001;0.002;0.003;0.01}, {"0 MPa";"70 MPa";"140 MPa";"210 MPa";"250 MPa"}, '
    ...      '"140 MPa", "MJ/m^3")')
    0.14
    """
    strains, stresses = together(strains, stresses)
    return area_until(strains, stresses, *first_reaching(stresses, stress)[:2])


@worksheet_function("CURVE_TOUGHNESS", conditions=RECORD)
def toughness(strains: Strains, stresses: Stresses) -> EnergyDensity:
    r"""Tensile toughness: energy for each unit of volume up to the break of a test curve.

    .. math:: u_t = \int_0^{\varepsilon_b} \sigma \, d\varepsilon

    Parameters
    ----------
    strains : column of strain
        Engineering strain, in the order of the test; extension positive.
    stresses : column of stress
        Engineering stress, as many rows; tension positive.

    Returns
    -------
    energy_density : energy density
        Area under the curve up to its break, by trapezia.

    Notes
    -----
    From the first point of the record; break as in CURVE_BREAK_ELONGATION. Beyond necking the strain is a mean over
    the gauge length, so the energy is that of this gauge length alone. No fracture toughness.

    References
    ----------
    W. D. Callister, Materials Science and Engineering, chapter 6 (from memory).

    Examples
    --------
    >>> cell('=CURVE_TOUGHNESS({0;0.002;0.1}, {"0 MPa";"200 MPa";"300 MPa"}, "MJ/m^3")')
    24.7
    """
    strains, stresses = together(strains, stresses)
    index = break_point(stresses)
    return area_until(strains, stresses, index, np.zeros(index.shape))


@worksheet_function("CURVE_ELONGATION_AFTER_BREAK", valid={"first_length": POSITIVE, "length": POSITIVE})
def elongation_after_break(first_length: Length, length: Length) -> Strain:
    r"""Elongation after break from the gauge length on the specimen, pieces fitted together.

    .. math:: A = \frac{L_u - L_0}{L_0}

    Parameters
    ----------
    first_length : length
        Gauge length before the test.
    length : length
        Gauge length after the break.

    Returns
    -------
    elongation : strain
        Permanent elongation over this gauge length.

    Notes
    -----
    Only elongations over equal gauge lengths (4 d, 5 d, 50 mm …) compare, since the neck's share falls with length.

    References
    ----------
    In the manner of ISO 6892-1 and ASTM E8 (from memory).

    Examples
    --------
    >>> cell('=CURVE_ELONGATION_AFTER_BREAK("50 mm", "61 mm", "%")')
    22.0
    """
    return (length - first_length) / first_length


@worksheet_function(
    "CURVE_REDUCTION_OF_AREA",
    valid={"first_area": POSITIVE, "area": POSITIVE},
    conditions=(
        condition("area must not be above first_area in a tension test", lambda first_area, area: area <= first_area),
    ),
)
def reduction_of_area(first_area: Area, area: Area) -> Ratio:
    r"""Reduction of area at the neck of a broken tension specimen.

    .. math:: Z = \frac{A_0 - A_u}{A_0}

    Parameters
    ----------
    first_area : area
        Cross-section before the test.
    area : area
        Smallest cross-section after the break.

    Returns
    -------
    reduction : ratio
        Part of the section that is gone.

    Notes
    -----
    For round specimens; at the neck of a flat one the section is no rectangle any more.

    References
    ----------
    In the manner of ISO 6892-1 and ASTM E8 (from memory).

    Examples
    --------
    >>> cell('=CURVE_REDUCTION_OF_AREA("80 mm^2", "52 mm^2", "%")')
    35.0
    """
    return (first_area - area) / first_area
