"""Stresses and curvature from change of temperature in parts that are held."""

from __future__ import annotations

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import (
    Length,
    Modulus,
    Ratio,
    Stress,
    TemperatureChange,
    ThermalExpansion,
)
from doubler.catalogue.limits import NOT_NEGATIVE, POISSON, POSITIVE


@worksheet_function("STRESS_THERMAL_RESTRAINED", valid={"modulus": POSITIVE})
def restrained(temperature_change: TemperatureChange, modulus: Modulus, expansion: ThermalExpansion) -> Stress:
    r"""Stress of a bar whose length is held while its temperature changes; tension positive.

    .. math:: \sigma = -E \alpha \Delta T

    Parameters
    ----------
    temperature_change : temperature change
        Change of temperature since the part was free of stress; heating positive.
    modulus : modulus
        Young's modulus.
    expansion : thermal expansion
        Coefficient of thermal expansion, mean over the change.

    Returns
    -------
    stress : stress
        Axial stress: compression when heated.

    Notes
    -----
    Linear elastic, modulus and coefficient even over the change. A heated bar is compressed and may buckle.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 2.5 (from memory).

    Examples
    --------
    >>> cell('=STRESS_THERMAL_RESTRAINED("-40 °C","200 GPa","11.7e-6 1/K","MPa")')
    93.6
    """
    return -modulus * expansion * temperature_change


@worksheet_function("STRESS_THERMAL_GAP", valid={"length": POSITIVE, "gap": NOT_NEGATIVE, "modulus": POSITIVE})
def gap(
    temperature_change: TemperatureChange,
    length: Length,
    gap: Length,
    modulus: Modulus,
    expansion: ThermalExpansion,
) -> Stress:
    r"""Stress of a heated bar that first closes a gap at its end; tension positive.

    .. math:: \sigma = -E \max\left(\alpha \Delta T - \frac{g}{L},\ 0\right)

    Parameters
    ----------
    temperature_change : temperature change
        Change of temperature since the part was free of stress; heating positive.
    length : length
        Length of the bar between its ends.
    gap : length
        Gap at the temperature of assembly.
    modulus : modulus
        Young's modulus.
    expansion : thermal expansion
        Coefficient of thermal expansion, mean over the change.

    Returns
    -------
    stress : stress
        Axial stress: compression once the gap is closed, zero before, and zero when cooled.

    Notes
    -----
    Linear elastic, modulus and coefficient even over the change. A heated bar is compressed and may buckle.
    The supports beyond the gap are rigid, and do not hold the bar back in tension.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 2.5 (from memory).

    Examples
    --------
    >>> cell('=STRESS_THERMAL_GAP("80 °C","2.5 m","0.5 mm","200 GPa","12e-6 1/K","MPa")')
    -152.0
    """
    # Adding 0.0 turns -0.0 into 0.0.
    return -modulus * np.maximum(expansion * temperature_change - gap / length, 0.0) + 0.0


@worksheet_function("STRESS_THERMAL_YIELDING", valid={"length": POSITIVE, "give": NOT_NEGATIVE, "modulus": POSITIVE})
def yielding(
    temperature_change: TemperatureChange,
    length: Length,
    give: Length,
    modulus: Modulus,
    expansion: ThermalExpansion,
) -> Stress:
    r"""Stress of a bar held between supports that give way by an amount; tension positive.

    .. math:: \sigma = -\operatorname{sign}(\alpha \Delta T)\, E \max\left(|\alpha \Delta T| -
        \frac{s}{L},\ 0\right)

    Parameters
    ----------
    temperature_change : temperature change
        Change of temperature since the part was free of stress; heating positive.
    length : length
        Length of the bar between its ends.
    give : length
        How far the supports together give way in the direction of the load on them.
    modulus : modulus
        Young's modulus.
    expansion : thermal expansion
        Coefficient of thermal expansion, mean over the change.

    Returns
    -------
    stress : stress
        Axial stress: compression when heated, tension when cooled.

    Notes
    -----
    Linear elastic, modulus and coefficient even over the change. A heated bar is compressed and may buckle.
    The bar is fast to both supports.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 2.5 (from memory).

    Examples
    --------
    >>> cell('=STRESS_THERMAL_YIELDING("-40 °C","2.5 m","0.5 mm","200 GPa","11.7e-6 1/K","MPa")')
    53.6
    """
    strain = expansion * temperature_change
    return -np.sign(strain) * modulus * np.maximum(np.abs(strain) - give / length, 0.0) + 0.0


@worksheet_function("STRESS_THERMAL_PLATE", valid={"modulus": POSITIVE, "poissons_ratio": POISSON})
def plate(
    temperature_change: TemperatureChange,
    modulus: Modulus,
    expansion: ThermalExpansion,
    poissons_ratio: Ratio,
) -> Stress:
    r"""Stress of a plate held in all directions of its plane while its temperature changes.

    .. math:: \sigma = -\frac{E \alpha \Delta T}{1 - \nu}

    Parameters
    ----------
    temperature_change : temperature change
        Change of temperature since the part was free of stress; heating positive.
    modulus : modulus
        Young's modulus.
    expansion : thermal expansion
        Coefficient of thermal expansion, mean over the change.
    poissons_ratio : ratio
        Poisson's ratio.

    Returns
    -------
    stress : stress
        Stress in the plane, the same in all directions, tension positive: compression when heated.

    Notes
    -----
    Linear elastic, even temperature, flat. A heated plate may buckle.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter on thermal stress (from memory).

    Examples
    --------
    >>> cell('=STRESS_THERMAL_PLATE("50 °C","70 GPa","23e-6 1/K",0.3,"MPa")')
    -115.0
    """
    return -modulus * expansion * temperature_change / (1.0 - poissons_ratio)


@worksheet_function("STRESS_THERMAL_PLATE_GRADIENT", valid={"modulus": POSITIVE, "poissons_ratio": POISSON})
def plate_gradient(
    temperature_difference: TemperatureChange,
    modulus: Modulus,
    expansion: ThermalExpansion,
    poissons_ratio: Ratio,
) -> Stress:
    r"""Bending stress of a plate kept flat with one face hotter than the other; tension positive.

    .. math:: \sigma_{hot} = -\frac{E \alpha (T_{hot} - T_{cold})}{2 (1 - \nu)}

    Parameters
    ----------
    temperature_difference : temperature change
        Temperature of the face asked for above the other face.
    modulus : modulus
        Young's modulus.
    expansion : thermal expansion
        Coefficient of thermal expansion, mean over the change.
    poissons_ratio : ratio
        Poisson's ratio.

    Returns
    -------
    stress : stress
        Stress at the surface of the face asked for, the same in all directions: compression where it is the
        hotter one. The other face has the opposite sign.

    Notes
    -----
    Linear through the thickness, edges held against rotation and free to move in the plane. A change of the
    mean temperature comes on top where they are held. The same number holds for the wall of a long cylinder,
    thin against its radius, away from its ends.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter on thermal stress (from memory).

    Examples
    --------
    >>> cell('=STRESS_THERMAL_PLATE_GRADIENT("60 °C","70 GPa","23e-6 1/K",0.3,"MPa")')
    -69.0
    """
    return -0.5 * modulus * expansion * temperature_difference / (1.0 - poissons_ratio)
