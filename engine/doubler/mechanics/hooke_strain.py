"""Hooke's law of isotropic material, stress to strain: plane stress, plane strain, three dimensions."""

from __future__ import annotations

from typing import Any

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import (
    Modulus,
    Ratio,
    Strain,
    Stress,
    TemperatureChange,
    ThermalExpansion,
    row,
)
from doubler.catalogue.limits import POISSON, POSITIVE
from doubler.mechanics.hooke import BOTH_OR_NEITHER, free_strain, stacked

PlaneStressStrains: Any = row(Strain, "ex", "ey", "ez", "gxy")
PlaneStrains: Any = row(Strain, "ex", "ey", "gxy")
AllStrains: Any = row(Strain, "ex", "ey", "ez", "gxy", "gyz", "gzx")
_ELASTIC = {"modulus": POSITIVE, "poissons_ratio": POISSON}


@worksheet_function("STRAIN_HOOKE_PLANE_STRESS", valid=_ELASTIC, conditions=(BOTH_OR_NEITHER,))
def plane_stress(
    sigma_x: Stress,
    sigma_y: Stress,
    tau_xy: Stress,
    modulus: Modulus,
    poissons_ratio: Ratio,
    expansion: ThermalExpansion | None = None,
    temperature_change: TemperatureChange | None = None,
) -> PlaneStressStrains:
    r"""Strains at a free surface or in a thin sheet from its stresses (plane stress).

    .. math:: \varepsilon_x = \frac{\sigma_x - \nu\sigma_y}{E} + \alpha\Delta T, \quad
        \varepsilon_y = \frac{\sigma_y - \nu\sigma_x}{E} + \alpha\Delta T, \quad
        \varepsilon_z = -\frac{\nu}{E}(\sigma_x + \sigma_y) + \alpha\Delta T, \quad
        \gamma_{xy} = \frac{2(1 + \nu)}{E}\tau_{xy}

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress; positive on the +x face in the +y direction.
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
    strains : strain
        A row of ex, ey, ez, gxy: total strains, extension positive; gxy is the engineering shear strain.

    Notes
    -----
    Linear elastic, isotropic, small strains, and no stress through the thickness (which strains all the same).

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.5 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_HOOKE_PLANE_STRESS("120 MPa", "40 MPa", "16 MPa", "200 GPa", 0.25, "µε")')
    [[550.0, 50.0, -200.0, 200.0]]
    """
    free = free_strain(expansion, temperature_change)
    return stacked(
        (sigma_x - poissons_ratio * sigma_y) / modulus + free,
        (sigma_y - poissons_ratio * sigma_x) / modulus + free,
        -poissons_ratio * (sigma_x + sigma_y) / modulus + free,
        2.0 * (1.0 + poissons_ratio) / modulus * tau_xy,
    )


@worksheet_function("STRAIN_HOOKE_PLANE_STRAIN", valid=_ELASTIC, conditions=(BOTH_OR_NEITHER,))
def plane_strain(
    sigma_x: Stress,
    sigma_y: Stress,
    tau_xy: Stress,
    modulus: Modulus,
    poissons_ratio: Ratio,
    expansion: ThermalExpansion | None = None,
    temperature_change: TemperatureChange | None = None,
) -> PlaneStrains:
    r"""Strains of a part that cannot strain in z from its stresses in x and y (plane strain).

    .. math:: \varepsilon_x = \frac{1 + \nu}{E}\left[(1 - \nu)\sigma_x - \nu\sigma_y\right] +
        (1 + \nu)\alpha\Delta T, \quad
        \varepsilon_y = \frac{1 + \nu}{E}\left[(1 - \nu)\sigma_y - \nu\sigma_x\right] + (1 + \nu)\alpha\Delta T,
        \quad \gamma_{xy} = \frac{2(1 + \nu)}{E}\tau_{xy}

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress; positive on the +x face in the +y direction.
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
    strains : strain
        A row of ex, ey, gxy: total strains, extension positive; gxy is the engineering shear strain.

    Notes
    -----
    Linear elastic, isotropic, small strains; the total strain in z is zero. The stress in z that this takes is
    :math:`\nu(\sigma_x + \sigma_y) - E\alpha\Delta T`.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_HOOKE_PLANE_STRAIN("120 MPa", "40 MPa", "16 MPa", "200 GPa", 0.25, "µε")')
    [[500.0, 0.0, 200.0]]
    """
    widened = 1.0 + poissons_ratio
    free = widened * free_strain(expansion, temperature_change)
    return stacked(
        widened * ((1.0 - poissons_ratio) * sigma_x - poissons_ratio * sigma_y) / modulus + free,
        widened * ((1.0 - poissons_ratio) * sigma_y - poissons_ratio * sigma_x) / modulus + free,
        2.0 * widened / modulus * tau_xy,
    )


@worksheet_function("STRAIN_HOOKE_3D", valid=_ELASTIC, conditions=(BOTH_OR_NEITHER,))
def three_dimensional(
    sigma_x: Stress,
    sigma_y: Stress,
    sigma_z: Stress,
    tau_xy: Stress,
    tau_yz: Stress,
    tau_zx: Stress,
    modulus: Modulus,
    poissons_ratio: Ratio,
    expansion: ThermalExpansion | None = None,
    temperature_change: TemperatureChange | None = None,
) -> AllStrains:
    r"""Six strains from six stresses of an isotropic material.

    .. math:: \varepsilon_x = \frac{\sigma_x - \nu(\sigma_y + \sigma_z)}{E} + \alpha\Delta T, \ \dots, \quad
        \gamma_{xy} = \frac{2(1 + \nu)}{E}\tau_{xy}, \ \dots

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    sigma_z : stress
        Normal stress on the z face, tension positive.
    tau_xy : stress
        Shear stress on the x face in the y direction.
    tau_yz : stress
        Shear stress on the y face in the z direction.
    tau_zx : stress
        Shear stress on the z face in the x direction.
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
    strains : strain
        A row of ex, ey, ez, gxy, gyz, gzx: total strains, extension positive; engineering shear strains.

    Notes
    -----
    Linear elastic, small strains.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_HOOKE_3D("120 MPa","0 MPa","0 MPa","0 MPa","0 MPa","8 MPa","200 GPa",0.25,"µε")')
    [[600.0, -150.0, -150.0, 0.0, 0.0, 100.0]]
    """
    free = free_strain(expansion, temperature_change)
    softness = 2.0 * (1.0 + poissons_ratio) / modulus
    return stacked(
        (sigma_x - poissons_ratio * (sigma_y + sigma_z)) / modulus + free,
        (sigma_y - poissons_ratio * (sigma_z + sigma_x)) / modulus + free,
        (sigma_z - poissons_ratio * (sigma_x + sigma_y)) / modulus + free,
        softness * tau_xy,
        softness * tau_yz,
        softness * tau_zx,
    )
