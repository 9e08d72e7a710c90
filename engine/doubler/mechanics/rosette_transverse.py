"""Transverse sensitivity of strain gauges: its error, and readings freed from it."""

from __future__ import annotations

from typing import Any

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Ratio, Strain, row
from doubler.catalogue.limits import POISSON, between
from doubler.mechanics.hooke import stacked
from doubler.mechanics.rosette import Layout, in_plane

Corrected: Any = row(Strain, "ea", "eb", "ec")
CorrectedTee: Any = row(Strain, "ea", "eb")
_KT = {"transverse_sensitivity": between(-0.1, 0.1), "calibration_poissons_ratio": POISSON}


def _freed(indicated: Any, trace: Any, sensitivity: Any, ratio: Any) -> Any:
    """Return the strain along a gauge from its reading and the sum of two perpendicular readings."""
    scale = 1.0 - ratio * sensitivity
    return scale / (1.0 - sensitivity) * (indicated - sensitivity / (1.0 + sensitivity) * trace)


@worksheet_function("STRAIN_TRANSVERSE_ERROR", valid=_KT)
def error(strain_ratio: Ratio, transverse_sensitivity: Ratio, calibration_poissons_ratio: Ratio = 0.285) -> Ratio:
    r"""Relative error that transverse sensitivity brings into a gauge's reading.

    .. math:: n = \frac{K_t (\varepsilon_t/\varepsilon_a + \nu_0)}{1 - \nu_0 K_t}

    Parameters
    ----------
    strain_ratio : ratio
        Strain across the gauge over strain along it.
    transverse_sensitivity : ratio
        Transverse sensitivity Kt of the gauges, from their data sheet: a fraction such as 0.009, or 0.9 %.
    calibration_poissons_ratio : ratio, optional
        Poisson's ratio of the beam on which the gauge factor was found; 0.285 where left out.

    Returns
    -------
    error : ratio
        Error of the reading: −0.1 means that it shows 10 % too little.

    Notes
    -----
    Zero where the strain ratio is that of the calibration, −ν0. One sensitivity for all the gauges. A magnitude
    above 10 % is refused as a percentage written as a number.

    References
    ----------
    Strain gauge transverse sensitivity: makers' technical notes of the trade (from memory); C. C. Perry, H. R.
    Lissner, The Strain Gage Primer (from memory).

    Examples
    --------
    >>> cell('=STRAIN_TRANSVERSE_ERROR(-3.5, 0.03)')
    -0.09728175904
    """
    return (
        transverse_sensitivity
        * (strain_ratio + calibration_poissons_ratio)
        / (1.0 - calibration_poissons_ratio * transverse_sensitivity)
    )


@worksheet_function("STRAIN_GAUGE_INDICATED", valid=_KT)
def indicated(
    strain_along: Strain,
    strain_across: Strain,
    transverse_sensitivity: Ratio,
    calibration_poissons_ratio: Ratio = 0.285,
) -> Strain:
    r"""Strain that a gauge shows in a field of two strains, transverse sensitivity included.

    .. math:: \hat\varepsilon = \frac{\varepsilon_a + K_t \varepsilon_t}{1 - \nu_0 K_t}

    Parameters
    ----------
    strain_along : strain
        Strain along the gauge, extension positive.
    strain_across : strain
        Strain across the gauge.
    transverse_sensitivity : ratio
        Transverse sensitivity Kt of the gauges, from their data sheet: a fraction such as 0.009, or 0.9 %.
    calibration_poissons_ratio : ratio, optional
        Poisson's ratio of the beam on which the gauge factor was found; 0.285 where left out.

    Returns
    -------
    strain : strain
        Indicated strain.

    Notes
    -----
    One sensitivity for all the gauges. A magnitude above 10 % is refused as a percentage written as a number.

    References
    ----------
    Strain gauge transverse sensitivity: makers' technical notes of the trade (from memory); C. C. Perry, H. R.
    Lissner, The Strain Gage Primer (from memory).

    Examples
    --------
    >>> cell('=STRAIN_GAUGE_INDICATED("200 µε", "-700 µε", 0.03, "µε")')
    180.5436482
    """
    return (strain_along + transverse_sensitivity * strain_across) / (
        1.0 - calibration_poissons_ratio * transverse_sensitivity
    )


@worksheet_function("STRAIN_TEE_CORRECTED", valid=_KT)
def tee(
    strain_a: Strain, strain_b: Strain, transverse_sensitivity: Ratio, calibration_poissons_ratio: Ratio = 0.285
) -> CorrectedTee:
    r"""Strains of two gauges at right angles, freed from transverse sensitivity.

    .. math:: \varepsilon_a = \frac{(1 - \nu_0 K_t)(\hat\varepsilon_a - K_t\hat\varepsilon_b)}{1 - K_t^2}, \quad
        \varepsilon_b = \frac{(1 - \nu_0 K_t)(\hat\varepsilon_b - K_t\hat\varepsilon_a)}{1 - K_t^2}

    Parameters
    ----------
    strain_a : strain
        Indicated strain of gauge a.
    strain_b : strain
        Indicated strain of gauge b, at right angles to a.
    transverse_sensitivity : ratio
        Transverse sensitivity Kt of the gauges, from their data sheet: a fraction such as 0.009, or 0.9 %.
    calibration_poissons_ratio : ratio, optional
        Poisson's ratio of the beam on which the gauge factor was found; 0.285 where left out.

    Returns
    -------
    strains : strain
        A row of ea, eb.

    Notes
    -----
    One sensitivity for all the gauges. A magnitude above 10 % is refused as a percentage written as a number.

    References
    ----------
    Strain gauge transverse sensitivity: makers' technical notes of the trade (from memory); C. C. Perry, H. R.
    Lissner, The Strain Gage Primer (from memory).

    Examples
    --------
    >>> cell('=STRAIN_TEE_CORRECTED("1000 µε", "-300 µε", 0.01, "µε")')
    [[1000.241474, -309.1474147]]
    """
    trace = strain_a + strain_b
    return stacked(
        *(_freed(own, trace, transverse_sensitivity, calibration_poissons_ratio) for own in (strain_a, strain_b))
    )


@worksheet_function("STRAIN_ROSETTE_CORRECTED", valid=_KT)
def rosette(
    strain_a: Strain,
    strain_b: Strain,
    strain_c: Strain,
    layout: Layout,
    transverse_sensitivity: Ratio,
    calibration_poissons_ratio: Ratio = 0.285,
) -> Corrected:
    r"""Strains of the three gauges of a rosette, freed from transverse sensitivity.

    .. math:: \varepsilon_i = \frac{1 - \nu_0 K_t}{1 - K_t}\left(\hat\varepsilon_i - \frac{K_t}{1 +
        K_t}(\hat\varepsilon_x + \hat\varepsilon_y)\right)

    Parameters
    ----------
    strain_a : strain
        Indicated strain of gauge a, which points along x; extension positive.
    strain_b : strain
        Indicated strain of gauge b: at 45° (rectangular) or 60° (delta) counter-clockwise from a.
    strain_c : strain
        Indicated strain of gauge c: at 90° (rectangular) or 120° (delta) counter-clockwise from a.
    layout : {"rectangular", "delta"}
        Which rosette it is.
    transverse_sensitivity : ratio
        Transverse sensitivity Kt of the gauges, from their data sheet: a fraction such as 0.009, or 0.9 %.
    calibration_poissons_ratio : ratio, optional
        Poisson's ratio of the beam on which the gauge factor was found; 0.285 where left out.

    Returns
    -------
    strains : strain
        A row of ea, eb, ec, to be given to STRAIN_ROSETTE and its like.

    Notes
    -----
    One sensitivity for all the gauges. A magnitude above 10 % is refused as a percentage written as a number.
    The sum of the indicated strains in x and y is taken from the readings as the layout says.

    References
    ----------
    Strain gauge transverse sensitivity: makers' technical notes of the trade (from memory); C. C. Perry, H. R.
    Lissner, The Strain Gage Primer (from memory).

    Examples
    --------
    >>> cell('=STRAIN_ROSETTE_CORRECTED("475 µε", "-225 µε", "-325 µε", "rectangular", 0.01, "µε")')
    [[476.934681, -228.1208746, -328.8430968]]
    """
    x, y, _ = in_plane(strain_a, strain_b, strain_c, layout)
    readings = (strain_a, strain_b, strain_c)
    return stacked(*(_freed(own, x + y, transverse_sensitivity, calibration_poissons_ratio) for own in readings))
