"""Elastic strain energy for each unit of volume: uniaxial, shear, general, and its two parts."""

from __future__ import annotations

from typing import Any

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import EnergyDensity, Modulus, Ratio, Stress
from doubler.catalogue.limits import POISSON, POSITIVE
from doubler.mechanics.tensor_stress import second_deviatoric

_ELASTIC = {"modulus": POSITIVE, "poissons_ratio": POISSON}


def _distortion(stresses: tuple[Any, ...], modulus: Any, poissons_ratio: Any) -> Any:
    return second_deviatoric(*stresses) * (1.0 + poissons_ratio) / modulus


def _dilatation(sigma_x: Any, sigma_y: Any, sigma_z: Any, modulus: Any, poissons_ratio: Any) -> Any:
    return (1.0 - 2.0 * poissons_ratio) / (6.0 * modulus) * (sigma_x + sigma_y + sigma_z) ** 2


@worksheet_function("STRAIN_ENERGY_UNIAXIAL", valid={"modulus": POSITIVE})
def uniaxial(stress: Stress, modulus: Modulus) -> EnergyDensity:
    r"""Elastic energy for each unit of volume of a bar under axial stress.

    .. math:: u = \frac{\sigma^2}{2E}

    Parameters
    ----------
    stress : stress
        Axial stress; its sign does not matter. At the proportional limit the result is the modulus of resilience.
    modulus : modulus
        Young's modulus.

    Returns
    -------
    energy_density : energy density
        Strain energy for each unit of volume.

    Notes
    -----
    Linear elastic, uniaxial.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 2.7 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_ENERGY_UNIAXIAL("200 MPa", "200 GPa", "MJ/m^3")')
    0.1
    """
    return stress**2 / (2.0 * modulus)


@worksheet_function("STRAIN_ENERGY_SHEAR", valid={"shear_modulus": POSITIVE})
def shear(shear_stress: Stress, shear_modulus: Modulus) -> EnergyDensity:
    r"""Elastic energy for each unit of volume under pure shear.

    .. math:: u = \frac{\tau^2}{2G}

    Parameters
    ----------
    shear_stress : stress
        Shear stress; its sign does not matter.
    shear_modulus : modulus
        Shear modulus.

    Returns
    -------
    energy_density : energy density
        Strain energy for each unit of volume.

    Notes
    -----
    Linear elastic.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 3.9 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_ENERGY_SHEAR("80 MPa", "80 GPa", "MJ/m^3")')
    0.04
    """
    return shear_stress**2 / (2.0 * shear_modulus)


@worksheet_function("STRAIN_ENERGY_DENSITY", valid=_ELASTIC)
def density(
    sigma_x: Stress,
    sigma_y: Stress,
    sigma_z: Stress,
    tau_xy: Stress,
    tau_yz: Stress,
    tau_zx: Stress,
    modulus: Modulus,
    poissons_ratio: Ratio,
) -> EnergyDensity:
    r"""Elastic energy for each unit of volume under any stress of an isotropic material.

    .. math:: u = \frac{1}{2E}\left[\sigma_x^2 + \sigma_y^2 + \sigma_z^2 - 2\nu(\sigma_x\sigma_y +
        \sigma_y\sigma_z + \sigma_z\sigma_x)\right] + \frac{1 + \nu}{E}(\tau_{xy}^2 + \tau_{yz}^2 + \tau_{zx}^2)

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

    Returns
    -------
    energy_density : energy density
        Strain energy for each unit of volume, not negative.

    Notes
    -----
    Linear elastic, isotropic. The sum of STRAIN_ENERGY_DISTORTION and STRAIN_ENERGY_DILATATION.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 3 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_ENERGY_DENSITY("200 MPa","0 MPa","0 MPa","80 MPa","0 MPa","0 MPa","200 GPa",0.25,"MJ/m^3")')
    0.14
    """
    # The sum of two squares, so that rounding can't make it negative.
    dilatation = _dilatation(sigma_x, sigma_y, sigma_z, modulus, poissons_ratio)
    return _distortion((sigma_x, sigma_y, sigma_z, tau_xy, tau_yz, tau_zx), modulus, poissons_ratio) + dilatation


@worksheet_function("STRAIN_ENERGY_DISTORTION", valid=_ELASTIC)
def distortion(
    sigma_x: Stress,
    sigma_y: Stress,
    sigma_z: Stress,
    tau_xy: Stress,
    tau_yz: Stress,
    tau_zx: Stress,
    modulus: Modulus,
    poissons_ratio: Ratio,
) -> EnergyDensity:
    r"""Part of the elastic energy that changes the shape; it sets the von Mises stress.

    .. math:: u_d = \frac{1 + \nu}{E} J_2 = \frac{1 + \nu}{3E}\sigma_{vm}^2

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

    Returns
    -------
    energy_density : energy density
        Energy of distortion for each unit of volume.

    Notes
    -----
    Linear elastic, isotropic. :math:`J_2` is the second invariant of the stress deviator.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_ENERGY_DISTORTION("300 MPa","0 MPa","0 MPa","0 MPa","0 MPa","0 MPa","200 GPa",0.25,"MJ/m^3")')
    0.1875
    """
    return _distortion((sigma_x, sigma_y, sigma_z, tau_xy, tau_yz, tau_zx), modulus, poissons_ratio)


@worksheet_function("STRAIN_ENERGY_DILATATION", valid=_ELASTIC)
def dilatation(
    sigma_x: Stress, sigma_y: Stress, sigma_z: Stress, modulus: Modulus, poissons_ratio: Ratio
) -> EnergyDensity:
    r"""Part of the elastic energy that changes the volume.

    .. math:: u_v = \frac{1 - 2\nu}{6E}(\sigma_x + \sigma_y + \sigma_z)^2 = \frac{\sigma_m^2}{2K}

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    sigma_z : stress
        Normal stress on the z face, tension positive.
    modulus : modulus
        Young's modulus.
    poissons_ratio : ratio
        Poisson's ratio.

    Returns
    -------
    energy_density : energy density
        Energy of the change of volume for each unit of volume.

    Notes
    -----
    Linear elastic, isotropic. Zero in an incompressible material.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_ENERGY_DILATATION("300 MPa","0 MPa","0 MPa","200 GPa",0.25,"MJ/m^3")')
    0.0375
    """
    return _dilatation(sigma_x, sigma_y, sigma_z, modulus, poissons_ratio)
