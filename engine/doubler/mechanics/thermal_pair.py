"""Two parts that expand unlike: side by side and equally long, or bonded into a strip that bends."""

from __future__ import annotations

from typing import Any

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import (
    Area,
    Curvature,
    Length,
    Modulus,
    Stress,
    TemperatureChange,
    ThermalExpansion,
)
from doubler.catalogue.limits import POSITIVE


@worksheet_function(
    "STRESS_THERMAL_PAIR",
    valid={"area": POSITIVE, "other_area": POSITIVE, "modulus": POSITIVE, "other_modulus": POSITIVE},
)
def pair(
    temperature_change: TemperatureChange,
    area: Area,
    other_area: Area,
    modulus: Modulus,
    other_modulus: Modulus,
    expansion: ThermalExpansion,
    other_expansion: ThermalExpansion,
) -> Stress:
    r"""Stress in one of two parallel parts of equal length that are forced to stay equally long.

    .. math:: \sigma_1 = \frac{(\alpha_2 - \alpha_1) \Delta T}{A_1 \left(\dfrac{1}{E_1 A_1} +
        \dfrac{1}{E_2 A_2}\right)}

    Parameters
    ----------
    temperature_change : temperature change
        Change of temperature since the part was free of stress; heating positive.
    area : area
        Area of the part asked for.
    other_area : area
        Area of the other part.
    modulus : modulus
        Young's modulus of the part asked for.
    other_modulus : modulus
        Young's modulus of the other part.
    expansion : thermal expansion
        Coefficient of thermal expansion of the part asked for.
    other_expansion : thermal expansion
        Coefficient of thermal expansion of the other part.

    Returns
    -------
    stress : stress
        Axial stress of the part asked for, tension positive; the other carries the opposite force.

    Notes
    -----
    Bolt and sleeve, rod in tube, a straight bar between two others: symmetric, so that nothing bends; equally
    long, linear elastic, no outer load. Two strips bonded side by side bend: STRESS_BIMETAL_STRIP.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 2.5 (from memory).

    Examples
    --------
    >>> cell('=STRESS_THERMAL_PAIR("60 K","1 cm2","2 cm2","200 GPa","100 GPa","12e-6 1/K","20e-6 1/K","MPa")')
    48.0
    """
    flexibility = 1.0 / (modulus * area) + 1.0 / (other_modulus * other_area)
    return (other_expansion - expansion) * temperature_change / (flexibility * area)


def _strip_curvature(
    change: Any, thickness: Any, other_thickness: Any, modulus: Any, other_modulus: Any, mismatch: Any
) -> Any:
    m, n = thickness / other_thickness, modulus / other_modulus
    whole = thickness + other_thickness
    bracket = 3.0 * (1.0 + m) ** 2 + (1.0 + m * n) * (m**2 + 1.0 / (m * n))
    return 6.0 * mismatch * change * (1.0 + m) ** 2 / (whole * bracket)


@worksheet_function(
    "STIFFNESS_BIMETAL_CURVATURE",
    valid={
        "thickness": POSITIVE,
        "other_thickness": POSITIVE,
        "modulus": POSITIVE,
        "other_modulus": POSITIVE,
    },
)
def bimetal_curvature(
    temperature_change: TemperatureChange,
    thickness: Length,
    other_thickness: Length,
    modulus: Modulus,
    other_modulus: Modulus,
    expansion: ThermalExpansion,
    other_expansion: ThermalExpansion,
) -> Curvature:
    r"""Curvature of a free strip of two bonded layers whose temperature changes.

    .. math:: \kappa = \frac{6 (\alpha_2 - \alpha_1) \Delta T (1 + m)^2}{h \left[3 (1 + m)^2 + (1 + m
        n)\left(m^2 + \frac{1}{m n}\right)\right]}

    .. math:: m = \frac{t_1}{t_2}, \quad n = \frac{E_1}{E_2}, \quad h = t_1 + t_2

    Parameters
    ----------
    temperature_change : temperature change
        Change of temperature since the part was free of stress; heating positive.
    thickness : length
        Thickness of the layer asked for.
    other_thickness : length
        Thickness of the other layer.
    modulus : modulus
        Young's modulus of the layer asked for.
    other_modulus : modulus
        Young's modulus of the other layer.
    expansion : thermal expansion
        Coefficient of thermal expansion of the layer asked for.
    other_expansion : thermal expansion
        Coefficient of thermal expansion of the other layer.

    Returns
    -------
    curvature : curvature
        Positive where the first layer lies on the inside of the bend: when heated and the other layer expands
        more.

    Notes
    -----
    A narrow strip, flat and free of stress before the change, no outer load, linear elastic. For a strip wide
    against its thickness use E/(1 − ν) as modulus.

    References
    ----------
    S. P. Timoshenko, Analysis of bi-metal thermostats, Journal of the Optical Society of America 11, 1925
    (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_BIMETAL_CURVATURE("90 K","1 mm","1 mm","9 GPa","9 GPa","1 ppm/K","19 ppm/K","1/m")')
    1.215
    """
    mismatch = other_expansion - expansion
    return _strip_curvature(temperature_change, thickness, other_thickness, modulus, other_modulus, mismatch)


@worksheet_function(
    "STRESS_BIMETAL_STRIP",
    valid={
        "thickness": POSITIVE,
        "other_thickness": POSITIVE,
        "modulus": POSITIVE,
        "other_modulus": POSITIVE,
    },
)
def bimetal_strip(
    temperature_change: TemperatureChange,
    thickness: Length,
    other_thickness: Length,
    modulus: Modulus,
    other_modulus: Modulus,
    expansion: ThermalExpansion,
    other_expansion: ThermalExpansion,
) -> Stress:
    r"""Stress of one layer of a free bimetal strip at its bonded face; tension positive.

    .. math:: \sigma_1 = \frac{P}{b t_1} + \frac{E_1 t_1 \kappa}{2}, \quad \frac{P}{b} =
        \frac{\kappa\,(E_1 t_1^3 + E_2 t_2^3)}{6 (t_1 + t_2)}

    Parameters
    ----------
    temperature_change : temperature change
        Change of temperature since the part was free of stress; heating positive.
    thickness : length
        Thickness of the layer asked for.
    other_thickness : length
        Thickness of the other layer.
    modulus : modulus
        Young's modulus of the layer asked for.
    other_modulus : modulus
        Young's modulus of the other layer.
    expansion : thermal expansion
        Coefficient of thermal expansion of the layer asked for.
    other_expansion : thermal expansion
        Coefficient of thermal expansion of the other layer.

    Returns
    -------
    stress : stress
        Axial stress of the layer asked for where it meets the other: tension when heated and the other layer
        expands more. The outer faces have less.

    Notes
    -----
    As STIFFNESS_BIMETAL_CURVATURE; away from the ends, where shear and peel stresses pass the force from
    layer to layer and may part the bond.

    References
    ----------
    S. P. Timoshenko, Analysis of bi-metal thermostats, Journal of the Optical Society of America 11, 1925
    (from memory).

    Examples
    --------
    >>> cell('=STRESS_BIMETAL_STRIP("90 K","1 mm","1 mm","9 GPa","9 GPa","1 ppm/K","19 ppm/K","MPa")')
    7.29
    """
    mismatch = other_expansion - expansion
    bend = _strip_curvature(temperature_change, thickness, other_thickness, modulus, other_modulus, mismatch)
    flow = bend * (modulus * thickness**3 + other_modulus * other_thickness**3) / (6.0 * (thickness + other_thickness))
    return flow / thickness + 0.5 * modulus * thickness * bend
