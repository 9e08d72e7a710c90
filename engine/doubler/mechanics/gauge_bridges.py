"""Strain gauge bridges: output from strain, strain from output, each with its non-linearity; shunt calibration."""

from __future__ import annotations

from typing import Any, Literal

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Ratio, Resistance, Strain, VoltageRatio
from doubler.catalogue.limits import POISSON, POSITIVE, Refusal, between, condition

Bridge = Literal[
    "quarter", "half bending", "half axial", "half opposite", "full bending", "full axial", "full bending poisson"
]
_NEEDS_RATIO = ("half axial", "full axial", "full bending poisson")
_LIMITS = {"gauge_factor": POSITIVE, "poissons_ratio": POISSON}


def _constants(bridge: str, poissons_ratio: Any) -> tuple[Any, Any, Any]:
    """Return gain, base and bend of ``output = gain·x / (base + bend·x)``, x being gauge factor times strain."""
    if bridge in _NEEDS_RATIO and poissons_ratio is None:
        raise Refusal(f"the bridge {bridge!r} has gauges across the strain; give poissons_ratio")
    ratio = 0.0 if poissons_ratio is None else poissons_ratio
    table: dict[str, tuple[Any, Any, Any]] = {
        "quarter": (1.0, 4.0, 2.0),
        "half bending": (1.0, 2.0, 0.0),
        "half axial": (1.0 + ratio, 4.0, 2.0 * (1.0 - ratio)),
        "half opposite": (1.0, 2.0, 1.0),
        "full bending": (1.0, 1.0, 0.0),
        "full axial": (1.0 + ratio, 2.0, 1.0 - ratio),
        "full bending poisson": (1.0 + ratio, 2.0, 0.0),
    }
    return table[bridge]


_ALIVE = condition(
    "no gauge can follow such a strain: gauge factor times strain must stay below 1 in magnitude; see its unit",
    lambda strain, gauge_factor: abs(strain * gauge_factor) < 1.0,
)


@worksheet_function("STRAIN_BRIDGE_OUTPUT", valid=_LIMITS, conditions=(_ALIVE,))
def output(strain: Strain, gauge_factor: Ratio, bridge: Bridge, poissons_ratio: Ratio | None = None) -> VoltageRatio:
    r"""Output of a strain gauge bridge over its supply voltage, from the strain.

    .. math:: \frac{V_o}{V_s} = \frac{g\,k\varepsilon}{b + c\,k\varepsilon}

    Parameters
    ----------
    strain : strain
        Strain ε of the main gauges, extension positive.
    gauge_factor : ratio
        Gauge factor.
    bridge : choice
        How the gauges are wired: "quarter", "half bending", "half axial", "half opposite", "full bending",
        "full axial" or "full bending poisson"; see the notes.
    poissons_ratio : ratio, optional
        Poisson's ratio of the part; asked for where gauges lie across the strain.

    Returns
    -------
    output : voltage ratio
        Output over supply voltage, mV/V where no unit is asked for.

    Notes
    -----
    Arms of the bridge by the strain they see (1 and 2 are neighbours, 1 and 3 lie opposite): quarter: ε; half
    bending: ε, −ε; half axial: ε, −νε; half opposite: ε and ε opposite; full bending: ε, −ε, ε, −ε (also a
    torsion bridge at 45°); full axial: ε, −νε, ε, −νε; full bending poisson: ε, −ε, νε, −νε. The relation is
    the exact one, with its non-linearity. Positive output is that of a positive ε in arm 1: check the sign of
    the wiring. Equal arms, balanced at zero, no lead resistance, no load on the output; gauge factor positive.
    In the formula k is the gauge factor; g, b, c are 1, 4, 2 (quarter), 1, 2, 0 (half bending), 1 + ν, 4, 2(1 −
    ν) (half axial), 1, 2, 1 (half opposite), 1, 1, 0 (full bending), 1 + ν, 2, 1 − ν (full axial) and 1 + ν, 2,
    0 (full bending poisson).

    References
    ----------
    E. O. Doebelin, Measurement Systems, chapter on strain gauges (from memory).

    Examples
    --------
    >>> cell('=STRAIN_BRIDGE_OUTPUT("1000 µε", 2.1, "full bending", "mV/V")')
    2.1
    """
    gain, base, bend = _constants(bridge, poissons_ratio)
    change = gauge_factor * strain
    return gain * change / (base + bend * change)


@worksheet_function("STRAIN_FROM_BRIDGE", valid=_LIMITS | {"voltage_ratio": between(-0.1, 0.1)})
def strain(
    voltage_ratio: VoltageRatio, gauge_factor: Ratio, bridge: Bridge, poissons_ratio: Ratio | None = None
) -> Strain:
    r"""Strain from the output of a strain gauge bridge over its supply voltage.

    .. math:: \varepsilon = \frac{b\,V_o/V_s}{k\,(g - c\,V_o/V_s)}

    Parameters
    ----------
    voltage_ratio : voltage ratio
        Output over supply voltage, the output at zero strain taken off: such as "1.2 mV/V". A bare number
        is a plain ratio.
    gauge_factor : ratio
        Gauge factor.
    bridge : choice
        How the gauges are wired: "quarter", "half bending", "half axial", "half opposite", "full bending",
        "full axial" or "full bending poisson"; see the notes.
    poissons_ratio : ratio, optional
        Poisson's ratio of the part; asked for where gauges lie across the strain.

    Returns
    -------
    strain : strain
        Strain ε of the main gauges, extension positive.

    Notes
    -----
    Arms of the bridge by the strain they see (1 and 2 are neighbours, 1 and 3 lie opposite): quarter: ε; half
    bending: ε, −ε; half axial: ε, −νε; half opposite: ε and ε opposite; full bending: ε, −ε, ε, −ε (also a
    torsion bridge at 45°); full axial: ε, −νε, ε, −νε; full bending poisson: ε, −ε, νε, −νε. The relation is
    the exact one, with its non-linearity. Positive output is that of a positive ε in arm 1: check the sign of
    the wiring. Equal arms, balanced at zero, no lead resistance, no load on the output; gauge factor positive.
    g, b, c as in STRAIN_BRIDGE_OUTPUT. An output beyond 100 mV/V is refused as millivolts written as a ratio.

    References
    ----------
    E. O. Doebelin, Measurement Systems, chapter on strain gauges (from memory).

    Examples
    --------
    >>> cell('=STRAIN_FROM_BRIDGE("2.1 mV/V", 2.1, "full bending", "µε")')
    1000.0
    """
    gain, base, bend = _constants(bridge, poissons_ratio)
    return base * voltage_ratio / (gauge_factor * (gain - bend * voltage_ratio))


@worksheet_function("STRAIN_FROM_RESISTANCE", valid={"gauge_resistance": POSITIVE, "gauge_factor": POSITIVE})
def from_resistance(change: Resistance, gauge_resistance: Resistance, gauge_factor: Ratio) -> Strain:
    r"""Strain from the change of a gauge's resistance.

    .. math:: \varepsilon = \frac{\Delta R}{k R}

    Parameters
    ----------
    change : resistance
        Change of resistance, growth positive.
    gauge_resistance : resistance
        Resistance of the gauge, unstrained.
    gauge_factor : ratio
        Gauge factor.

    Returns
    -------
    strain : strain
        Strain, extension positive.

    Notes
    -----
    Temperature and lead wires not in it.

    References
    ----------
    E. O. Doebelin, Measurement Systems, chapter on strain gauges (from memory).

    Examples
    --------
    >>> cell('=STRAIN_FROM_RESISTANCE("0.252 ohm", "120 ohm", 2.1, "µε")')
    1000.0
    """
    return change / (gauge_factor * gauge_resistance)


@worksheet_function(
    "STRAIN_GAUGE_FACTOR",
    valid={"gauge_resistance": POSITIVE},
    conditions=(condition("the strain must not be zero", lambda strain: strain != 0.0),),
)
def gauge_factor(change: Resistance, gauge_resistance: Resistance, strain: Strain) -> Ratio:
    r"""Gauge factor from the change of a gauge's resistance under a known strain.

    .. math:: k = \frac{\Delta R / R}{\varepsilon}

    Parameters
    ----------
    change : resistance
        Change of resistance, growth positive.
    gauge_resistance : resistance
        Resistance of the gauge, unstrained.
    strain : strain
        Strain that caused it, not zero.

    Returns
    -------
    gauge_factor : ratio
        Gauge factor.

    Notes
    -----
    Uniaxial stress along the gauge; includes the transverse sensitivity of that field.

    References
    ----------
    E. O. Doebelin, Measurement Systems, chapter on strain gauges (from memory).

    Examples
    --------
    >>> cell('=STRAIN_GAUGE_FACTOR("0.152 ohm", "120 ohm", "548.64 µε")')
    2.308739185
    """
    return change / (gauge_resistance * strain)


@worksheet_function(
    "STRAIN_SHUNT", valid={"gauge_resistance": POSITIVE, "shunt_resistance": POSITIVE, "gauge_factor": POSITIVE}
)
def shunt(gauge_resistance: Resistance, shunt_resistance: Resistance, gauge_factor: Ratio) -> Strain:
    r"""Strain that a shunt resistor across a gauge simulates.

    .. math:: \varepsilon_s = -\frac{R_g}{k (R_g + R_s)}

    Parameters
    ----------
    gauge_resistance : resistance
        Resistance of the gauge, unstrained.
    shunt_resistance : resistance
        Resistance laid across the gauge.
    gauge_factor : ratio
        Gauge factor.

    Returns
    -------
    strain : strain
        Simulated strain: negative, as the resistance falls. Laid across the neighbouring arm it reads as
        positive.

    Notes
    -----
    Exact change of resistance of the arm. The indicator should show this strain in a quarter bridge, up to the
    bridge's own non-linearity, kε/2 of the reading.

    References
    ----------
    E. O. Doebelin, Measurement Systems, chapter on strain gauges (from memory).

    Examples
    --------
    >>> cell('=STRAIN_SHUNT("350 ohm", "174650 ohm", 2, "µε")')
    -1000.0
    """
    return -gauge_resistance / (gauge_factor * (gauge_resistance + shunt_resistance))
