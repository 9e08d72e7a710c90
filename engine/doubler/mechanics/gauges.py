"""Readings of strain gauges corrected: lead wires, gauge factor, output from temperature."""

from __future__ import annotations

from typing import Literal

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Ratio, Resistance, Strain, TemperatureChange, ThermalExpansion
from doubler.catalogue.limits import NOT_NEGATIVE, POISSON, POSITIVE, between, condition

Wires = Literal["two", "three"]


@worksheet_function("STRAIN_LEAD_CORRECTED", valid={"lead_resistance": NOT_NEGATIVE, "gauge_resistance": POSITIVE})
def lead(strain: Strain, lead_resistance: Resistance, gauge_resistance: Resistance, wires: Wires) -> Strain:
    r"""Strain of a quarter bridge, freed from the resistance of its lead wires.

    .. math:: \varepsilon = \hat\varepsilon\left(1 + \frac{n R_L}{R_g}\right)

    Parameters
    ----------
    strain : strain
        Indicated strain.
    lead_resistance : resistance
        Resistance of one lead wire.
    gauge_resistance : resistance
        Resistance of the gauge.
    wires : {"two", "three"}
        Lead wires to the gauge: with two, both stand in its arm; with three, one does.

    Returns
    -------
    strain : strain
        Strain, larger in magnitude than the one indicated.

    Notes
    -----
    n is 2 for two wires and 1 for three. Not for a reading that was set by a shunt at the gauge, which has the
    correction in it. The shift of zero from warm wires, which a two-wire gauge shows, is not corrected.

    References
    ----------
    E. O. Doebelin, Measurement Systems, chapter on strain gauges (from memory).

    Examples
    --------
    >>> cell('=STRAIN_LEAD_CORRECTED("980 µε", "3.5 ohm", "350 ohm", "two", "µε")')
    999.6
    """
    in_arm = 2.0 if wires == "two" else 1.0
    return strain * (1.0 + in_arm * lead_resistance / gauge_resistance)


@worksheet_function("STRAIN_GAUGE_FACTOR_CORRECTED", valid={"set_factor": POSITIVE, "gauge_factor": POSITIVE})
def gauge_factor(strain: Strain, set_factor: Ratio, gauge_factor: Ratio) -> Strain:
    r"""Strain read with the indicator set to another gauge factor than the gauge's own.

    .. math:: \varepsilon = \hat\varepsilon\frac{k_{set}}{k}

    Parameters
    ----------
    strain : strain
        Indicated strain.
    set_factor : ratio
        Gauge factor to which the indicator was set.
    gauge_factor : ratio
        Gauge factor of the gauge, at the temperature of the test.

    Returns
    -------
    strain : strain
        Strain as the gauge saw it.

    Notes
    -----
    Linear: quarter bridges at large strain need STRAIN_FROM_BRIDGE.

    References
    ----------
    E. O. Doebelin, Measurement Systems, chapter on strain gauges (from memory).

    Examples
    --------
    >>> cell('=STRAIN_GAUGE_FACTOR_CORRECTED("1050 µε", 2, 2.1, "µε")')
    1000.0
    """
    return strain * set_factor / gauge_factor


@worksheet_function(
    "STRAIN_GAUGE_FACTOR_AT",
    valid={"gauge_factor": POSITIVE},
    conditions=(
        condition(
            "the gauge factor would no longer be positive; see the unit of the coefficient",
            lambda coefficient, temperature_change: coefficient * temperature_change > -1.0,
        ),
    ),
)
def factor_at(gauge_factor: Ratio, coefficient: ThermalExpansion, temperature_change: TemperatureChange) -> Ratio:
    r"""Gauge factor at a temperature other than that of its data sheet.

    .. math:: k(T) = k_0 (1 + c\,\Delta T)

    Parameters
    ----------
    gauge_factor : ratio
        Gauge factor of the data sheet, at room temperature.
    coefficient : thermal expansion
        Relative change of the gauge factor for each degree, such as "1e-4 1/K" (0.01 % for each kelvin).
    temperature_change : temperature change
        Temperature of the test less that of the data sheet.

    Returns
    -------
    gauge_factor : ratio
        Gauge factor at the temperature.

    Notes
    -----
    Linear, as data sheets give it; within their range of temperature.

    References
    ----------
    E. O. Doebelin, Measurement Systems, chapter on strain gauges (from memory).

    Examples
    --------
    >>> cell('=STRAIN_GAUGE_FACTOR_AT(2, "1e-4 1/K", "100 K")')
    2.02
    """
    return gauge_factor * (1.0 + coefficient * temperature_change)


@worksheet_function(
    "STRAIN_THERMAL_OUTPUT",
    valid={
        "gauge_factor": POSITIVE,
        "transverse_sensitivity": between(-0.1, 0.1),
        "calibration_poissons_ratio": POISSON,
    },
)
def thermal_output(
    resistance_coefficient: ThermalExpansion,
    gauge_factor: Ratio,
    specimen_expansion: ThermalExpansion,
    grid_expansion: ThermalExpansion,
    temperature_change: TemperatureChange,
    transverse_sensitivity: Ratio = 0.0,
    calibration_poissons_ratio: Ratio = 0.285,
) -> Strain:
    r"""Thermal output (apparent strain) of an unloaded gauge when its temperature changes.

    .. math:: \varepsilon_{T} = \left[\frac{\beta}{k} + \frac{1 + K_t}{1 - \nu_0 K_t}(\alpha_s -
        \alpha_g)\right]\Delta T

    Parameters
    ----------
    resistance_coefficient : thermal expansion
        Relative change of the grid's resistance for each degree, β.
    gauge_factor : ratio
        Gauge factor.
    specimen_expansion : thermal expansion
        Coefficient of thermal expansion of the part.
    grid_expansion : thermal expansion
        Coefficient of thermal expansion of the grid.
    temperature_change : temperature change
        Change of temperature since the zero was taken.
    transverse_sensitivity : ratio, optional
        Transverse sensitivity Kt, a fraction; zero where left out.
    calibration_poissons_ratio : ratio, optional
        Poisson's ratio of the beam of calibration; 0.285 where left out.

    Returns
    -------
    strain : strain
        Apparent strain in an indicator set to the gauge factor.

    Notes
    -----
    The part is free to expand; coefficients even over the change. Real gauges bend away from this: for a
    correction take the curve of their lot from the data sheet.

    References
    ----------
    E. O. Doebelin, Measurement Systems, chapter on strain gauges (from memory).

    Examples
    --------
    >>> cell('=STRAIN_THERMAL_OUTPUT("-20e-6 1/K", 2, "23e-6 1/K", "15e-6 1/K", "50 K", "µε")')
    -100.0
    """
    mismatch = (specimen_expansion - grid_expansion) * (1.0 + transverse_sensitivity)
    spread = mismatch / (1.0 - calibration_poissons_ratio * transverse_sensitivity)
    return (resistance_coefficient / gauge_factor + spread) * temperature_change


@worksheet_function(
    "STRAIN_THERMAL_OUTPUT_CORRECTED",
    valid={"set_factor": POSITIVE, "gauge_factor": POSITIVE, "output_factor": POSITIVE},
)
def thermal_corrected(
    strain: Strain, thermal_output: Strain, set_factor: Ratio, gauge_factor: Ratio, output_factor: Ratio = 2.0
) -> Strain:
    r"""Strain freed from thermal output (apparent strain), then brought to the gauge's own factor.

    .. math:: \varepsilon = \left(\hat\varepsilon - \varepsilon_T\frac{k_T}{k_{set}}\right)\frac{k_{set}}{k}

    Parameters
    ----------
    strain : strain
        Indicated strain.
    thermal_output : strain
        Apparent strain at the temperature of the test, from the data sheet or a gauge on an unloaded piece.
    set_factor : ratio
        Gauge factor to which the indicator was set.
    gauge_factor : ratio
        Gauge factor of the gauge at the temperature of the test.
    output_factor : ratio, optional
        Gauge factor for which the thermal output is given; 2 where left out, as data sheets mostly have it.

    Returns
    -------
    strain : strain
        Strain from stress alone, where the thermal output is that of a free piece of the same material.

    Notes
    -----
    The thermal output must be taken off before the gauge factor is corrected, as here. What is left holds no
    strain of free expansion: for the total strain add STRAIN_THERMAL.

    References
    ----------
    E. O. Doebelin, Measurement Systems, chapter on strain gauges (from memory).

    Examples
    --------
    >>> cell('=STRAIN_THERMAL_OUTPUT_CORRECTED("1200 µε", "150 µε", 2, 2.1, "µε")')
    1000.0
    """
    return (strain * set_factor - thermal_output * output_factor) / gauge_factor
