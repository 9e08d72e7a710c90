"""Hooke's law of isotropic material, strain to stress: one axis, shear, plane stress, plane strain, all six."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import (
    Modulus,
    Ratio,
    ShearStrain,
    Strain,
    Stress,
    TemperatureChange,
    ThermalExpansion,
    row,
)
from doubler.catalogue.limits import POISSON, POISSON_OPEN, POSITIVE, Condition, condition

PlaneStresses: Any = row(Stress, "sx", "sy", "txy")
PlaneStrainStresses: Any = row(Stress, "sx", "sy", "sz", "txy")
AllStresses: Any = row(Stress, "sx", "sy", "sz", "txy", "tyz", "tzx")

BOTH_OR_NEITHER: Condition = condition(
    "expansion and temperature_change belong together: give both, or neither",
    lambda expansion, temperature_change: (expansion is None) == (temperature_change is None),
)


def free_strain(expansion: Any, temperature_change: Any) -> Any:
    """Return the strain of free expansion; zero where none was given."""
    return 0.0 if expansion is None or temperature_change is None else expansion * temperature_change


def stacked(*parts: Any) -> Any:
    """Return the parts side by side on a new last axis."""
    return np.stack(np.broadcast_arrays(*parts), axis=-1)


@worksheet_function("STRESS_HOOKE_UNIAXIAL", valid={"modulus": POSITIVE}, conditions=(BOTH_OR_NEITHER,))
def uniaxial(
    strain: Strain,
    modulus: Modulus,
    expansion: ThermalExpansion | None = None,
    temperature_change: TemperatureChange | None = None,
) -> Stress:
    r"""Axial stress of a bar from its measured strain; tension positive.

    .. math:: \sigma = E (\varepsilon - \alpha \Delta T)

    Parameters
    ----------
    strain : strain
        Total axial strain, extension positive.
    modulus : modulus
        Young's modulus.
    expansion : thermal expansion, optional
        Coefficient of thermal expansion; left out where the strain has no part from temperature.
    temperature_change : temperature change, optional
        Change of temperature since the part was free of stress, heating positive; given with expansion.

    Returns
    -------
    stress : stress
        Axial stress, tension positive.

    Notes
    -----
    Linear elastic, and nothing holds the sides. Beyond the proportional limit the stress is lower.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 1.5 (from memory).

    Examples
    --------
    >>> cell('=STRESS_HOOKE_UNIAXIAL("600 µε", "200 GPa", "MPa")')
    120.0
    """
    return modulus * (strain - free_strain(expansion, temperature_change))


@worksheet_function("STRESS_HOOKE_SHEAR", valid={"shear_modulus": POSITIVE})
def shear(shear_strain: ShearStrain, shear_modulus: Modulus) -> Stress:
    r"""Shear stress from engineering shear strain.

    .. math:: \tau = G \gamma

    Parameters
    ----------
    shear_strain : shear strain
        Engineering shear strain: twice the tensor shear strain.
    shear_modulus : modulus
        Shear modulus.

    Returns
    -------
    stress : stress
        Shear stress, of the sign of the strain.

    Notes
    -----
    Linear elastic.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 1.6 (from memory).

    Examples
    --------
    >>> cell('=STRESS_HOOKE_SHEAR("1000 µε", "80 GPa", "MPa")')
    80.0
    """
    return shear_modulus * shear_strain


@worksheet_function(
    "STRESS_HOOKE_PLANE_STRESS", valid={"modulus": POSITIVE, "poissons_ratio": POISSON}, conditions=(BOTH_OR_NEITHER,)
)
def plane_stress(
    strain_x: Strain,
    strain_y: Strain,
    shear_strain: ShearStrain,
    modulus: Modulus,
    poissons_ratio: Ratio,
    expansion: ThermalExpansion | None = None,
    temperature_change: TemperatureChange | None = None,
) -> PlaneStresses:
    r"""Stresses at a free surface or in a thin sheet from its strains (plane stress).

    .. math:: \sigma_x = \frac{E}{1 - \nu^2}(\varepsilon_x' + \nu\varepsilon_y'), \quad
        \sigma_y = \frac{E}{1 - \nu^2}(\varepsilon_y' + \nu\varepsilon_x'), \quad
        \tau_{xy} = \frac{E}{2(1 + \nu)}\gamma_{xy}, \quad \varepsilon' = \varepsilon - \alpha \Delta T

    Parameters
    ----------
    strain_x : strain
        Total normal strain in x, extension positive.
    strain_y : strain
        Total normal strain in y, extension positive.
    shear_strain : shear strain
        Engineering shear strain, twice the tensor shear strain; zero for principal strains.
    modulus : modulus
        Young's modulus.
    poissons_ratio : ratio
        Poisson's ratio.
    expansion : thermal expansion, optional
        Coefficient of thermal expansion; left out where the strains have no part from temperature.
    temperature_change : temperature change, optional
        Change of temperature since the part was free of stress, heating positive; given with expansion.

    Returns
    -------
    stresses : stress
        A row of sx, sy, txy; tension positive.

    Notes
    -----
    Linear elastic, isotropic, small strains, and no stress through the thickness.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.5 (from memory).

    Examples
    --------
    >>> cell('=STRESS_HOOKE_PLANE_STRESS("1000 µε", "-300 µε", "-1100 µε", "70 GPa", 0.3, "MPa")')
    [[70.0, 0.0, -29.61538462]]
    """
    free = free_strain(expansion, temperature_change)
    mechanical_x, mechanical_y = strain_x - free, strain_y - free
    plate = modulus / (1.0 - poissons_ratio**2)
    return stacked(
        plate * (mechanical_x + poissons_ratio * mechanical_y),
        plate * (mechanical_y + poissons_ratio * mechanical_x),
        0.5 * modulus / (1.0 + poissons_ratio) * shear_strain,
    )


def _stresses(strains: tuple[Any, Any, Any], free: Any, modulus: Any, poissons_ratio: Any) -> tuple[Any, Any, Any]:
    """Return the three normal stresses from the three total normal strains."""
    shear_modulus = 0.5 * modulus / (1.0 + poissons_ratio)
    lame = 2.0 * shear_modulus * poissons_ratio / (1.0 - 2.0 * poissons_ratio)
    x, y, z = (strain - free for strain in strains)
    spread = lame * (x + y + z)
    return spread + 2.0 * shear_modulus * x, spread + 2.0 * shear_modulus * y, spread + 2.0 * shear_modulus * z


@worksheet_function(
    "STRESS_HOOKE_PLANE_STRAIN",
    valid={"modulus": POSITIVE, "poissons_ratio": POISSON_OPEN},
    conditions=(BOTH_OR_NEITHER,),
)
def plane_strain(
    strain_x: Strain,
    strain_y: Strain,
    shear_strain: ShearStrain,
    modulus: Modulus,
    poissons_ratio: Ratio,
    expansion: ThermalExpansion | None = None,
    temperature_change: TemperatureChange | None = None,
) -> PlaneStrainStresses:
    r"""Stresses of a part that cannot strain in z from its strains in x and y (plane strain).

    .. math:: \sigma_i = \lambda(\varepsilon_x' + \varepsilon_y' + \varepsilon_z') + 2 G \varepsilon_i', \quad
        \tau_{xy} = G\gamma_{xy}, \quad \varepsilon_z = 0, \quad \varepsilon' = \varepsilon - \alpha\Delta T

    Parameters
    ----------
    strain_x : strain
        Total normal strain in x, extension positive.
    strain_y : strain
        Total normal strain in y, extension positive.
    shear_strain : shear strain
        Engineering shear strain, twice the tensor shear strain.
    modulus : modulus
        Young's modulus.
    poissons_ratio : ratio
        Poisson's ratio.
    expansion : thermal expansion, optional
        Coefficient of thermal expansion; left out where there is no change of temperature.
    temperature_change : temperature change, optional
        Change of temperature since the part was free of stress, heating positive; given with expansion.

    Returns
    -------
    stresses : stress
        A row of sx, sy, sz, txy; tension positive.

    Notes
    -----
    Linear elastic, isotropic, small strains; the total strain in z is zero, so that a heated part is compressed
    in z.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_HOOKE_PLANE_STRAIN("1000 µε", "-300 µε", "0 µε", "200 GPa", 0.3, "MPa")')
    [[234.6153846, 34.61538462, 80.76923077, 0.0]]
    """
    free = free_strain(expansion, temperature_change)
    normal = _stresses((strain_x, strain_y, 0.0), free, modulus, poissons_ratio)
    return stacked(*normal, 0.5 * modulus / (1.0 + poissons_ratio) * shear_strain)


@worksheet_function(
    "STRESS_HOOKE_3D", valid={"modulus": POSITIVE, "poissons_ratio": POISSON_OPEN}, conditions=(BOTH_OR_NEITHER,)
)
def three_dimensional(
    strain_x: Strain,
    strain_y: Strain,
    strain_z: Strain,
    shear_strain_xy: ShearStrain,
    shear_strain_yz: ShearStrain,
    shear_strain_zx: ShearStrain,
    modulus: Modulus,
    poissons_ratio: Ratio,
    expansion: ThermalExpansion | None = None,
    temperature_change: TemperatureChange | None = None,
) -> AllStresses:
    r"""Six stresses from six strains of an isotropic material.

    .. math:: \sigma_i = \lambda(\varepsilon_x' + \varepsilon_y' + \varepsilon_z') + 2 G \varepsilon_i', \quad
        \tau_{ij} = G\gamma_{ij}, \quad \varepsilon' = \varepsilon - \alpha\Delta T

    Parameters
    ----------
    strain_x : strain
        Total normal strain in x, extension positive.
    strain_y : strain
        Total normal strain in y, extension positive.
    strain_z : strain
        Total normal strain in z, extension positive.
    shear_strain_xy : shear strain
        Engineering shear strain in the xy plane, twice the tensor shear strain.
    shear_strain_yz : shear strain
        Engineering shear strain in the yz plane.
    shear_strain_zx : shear strain
        Engineering shear strain in the zx plane.
    modulus : modulus
        Young's modulus.
    poissons_ratio : ratio
        Poisson's ratio, below 0.5.
    expansion : thermal expansion, optional
        Coefficient of thermal expansion; left out where there is no change of temperature.
    temperature_change : temperature change, optional
        Change of temperature since the part was free of stress, heating positive; given with expansion.

    Returns
    -------
    stresses : stress
        A row of sx, sy, sz, txy, tyz, tzx; tension positive.

    Notes
    -----
    Linear elastic, small strains. Near a Poisson's ratio of 0.5 small errors of the strains become large ones of
    the mean stress.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=STRESS_HOOKE_3D("600 µε", "100 µε", "50 µε", 0, 0, "100 µε", "200 GPa", 0.3, "MPa")')
    [[178.8461538, 101.9230769, 94.23076923, 0.0, 0.0, 7.692307692]]
    """
    normal = _stresses(
        (strain_x, strain_y, strain_z), free_strain(expansion, temperature_change), modulus, poissons_ratio
    )
    shear_modulus = 0.5 * modulus / (1.0 + poissons_ratio)
    shears = (shear_modulus * gamma for gamma in (shear_strain_xy, shear_strain_yz, shear_strain_zx))
    return stacked(*normal, *shears)
