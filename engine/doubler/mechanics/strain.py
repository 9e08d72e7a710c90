"""Strains of a bar and of a block: extension, Poisson contraction, shear, temperature, change of volume."""

from __future__ import annotations

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import (
    Length,
    Modulus,
    Ratio,
    ShearStrain,
    Strain,
    Stress,
    TemperatureChange,
    ThermalExpansion,
)
from doubler.catalogue.limits import POISSON, POSITIVE, above, condition

UNSQUASHED = above(-1.0)


@worksheet_function(
    "STRAIN_ENGINEERING",
    valid={"length": POSITIVE},
    conditions=(
        condition(
            "the part cannot be shortened by its whole length", lambda elongation, length: elongation + length > 0.0
        ),
    ),
)
def engineering(elongation: Length, length: Length) -> Strain:
    r"""Engineering strain: change of length for each unit of original length; longer is positive.

    .. math:: \varepsilon = \frac{\Delta L}{L_0}

    Parameters
    ----------
    elongation : length
        Change of length, positive where the part grows longer.
    length : length
        Length before the change (the gauge length of a test bar).

    Returns
    -------
    strain : strain
        Engineering strain, extension positive.

    Notes
    -----
    A mean over the length: beyond necking of a test bar it depends on the gauge length.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 1.2 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_ENGINEERING("0.12 mm", "200 mm", "µε")')
    600.0
    """
    return elongation / length


@worksheet_function("STRAIN_AXIAL", valid={"modulus": POSITIVE})
def axial(stress: Stress, modulus: Modulus) -> Strain:
    r"""Axial strain of a bar under uniaxial stress; extension positive.

    .. math:: \varepsilon = \frac{\sigma}{E}

    Parameters
    ----------
    stress : stress
        Axial stress, tension positive.
    modulus : modulus
        Young's modulus.

    Returns
    -------
    strain : strain
        Axial strain, extension positive.

    Notes
    -----
    Linear elastic and uniaxial: nothing holds the sides. Beyond the proportional limit the strain is larger; with
    stress in other directions use STRAIN_HOOKE_PLANE_STRESS or STRAIN_HOOKE_3D.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 1.5 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_AXIAL("120 MPa", "200 GPa", "µε")')
    600.0
    """
    return stress / modulus


@worksheet_function("STRAIN_TRANSVERSE", valid={"poissons_ratio": POISSON})
def transverse(strain: Strain, poissons_ratio: Ratio) -> Strain:
    r"""Strain across a bar that is strained along its axis; a stretched bar grows thinner.

    .. math:: \varepsilon_t = -\nu \varepsilon

    Parameters
    ----------
    strain : strain
        Axial strain, extension positive.
    poissons_ratio : ratio
        Poisson's ratio.

    Returns
    -------
    strain : strain
        Transverse strain, extension positive: of the sign opposite to the axial strain where Poisson's ratio is
        positive.

    Notes
    -----
    Linear elastic, isotropic, uniaxial stress.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 1.5 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_TRANSVERSE("600 µε", 0.3, "µε")')
    -180.0
    """
    return -poissons_ratio * strain


@worksheet_function("STRAIN_SHEAR", valid={"shear_modulus": POSITIVE})
def shear(shear_stress: Stress, shear_modulus: Modulus) -> ShearStrain:
    r"""Engineering shear strain under a shear stress.

    .. math:: \gamma = \frac{\tau}{G}

    Parameters
    ----------
    shear_stress : stress
        Shear stress.
    shear_modulus : modulus
        Shear modulus.

    Returns
    -------
    shear_strain : shear strain
        Engineering shear strain (the change of the right angle, in radians), of the sign of the stress. The tensor
        shear strain is half of it.

    Notes
    -----
    Linear elastic, isotropic, or in the axes of orthotropy.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 1.6 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_SHEAR("80 MPa", "80 GPa", "µε")')
    1000.0
    """
    return shear_stress / shear_modulus


@worksheet_function("STRAIN_THERMAL")
def thermal(expansion: ThermalExpansion, temperature_change: TemperatureChange) -> Strain:
    r"""Strain of a part that is free to expand, from a change of its temperature.

    .. math:: \varepsilon_{th} = \alpha \Delta T

    Parameters
    ----------
    expansion : thermal expansion
        Coefficient of thermal expansion, mean over the change.
    temperature_change : temperature change
        Change of temperature, heating positive.

    Returns
    -------
    strain : strain
        Strain, the same in all directions, extension positive.

    Notes
    -----
    Unheld, even temperature, isotropic. The coefficient is the secant one over the change, not the one at its end.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 2.5 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_THERMAL("12e-6 1/K", "50 K", "µε")')
    600.0
    """
    return expansion * temperature_change


@worksheet_function("STRAIN_VOLUMETRIC")
def volumetric(strain_x: Strain, strain_y: Strain, strain_z: Strain) -> Strain:
    r"""Volumetric strain (dilatation) of small strains; growth positive.

    .. math:: e = \varepsilon_x + \varepsilon_y + \varepsilon_z

    Parameters
    ----------
    strain_x : strain
        Normal strain in x, extension positive.
    strain_y : strain
        Normal strain in y, extension positive.
    strain_z : strain
        Normal strain in z, extension positive.

    Returns
    -------
    strain : strain
        Change of volume for each unit of volume.

    Notes
    -----
    Small strains: products of strains are left out. STRAIN_VOLUMETRIC_FINITE keeps them.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.6 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_VOLUMETRIC("600 µε", "-180 µε", "-180 µε", "µε")')
    240.0
    """
    return strain_x + strain_y + strain_z


@worksheet_function(
    "STRAIN_VOLUMETRIC_FINITE", valid={"strain_x": UNSQUASHED, "strain_y": UNSQUASHED, "strain_z": UNSQUASHED}
)
def volumetric_finite(strain_x: Strain, strain_y: Strain, strain_z: Strain) -> Strain:
    r"""Change of volume of a block from its engineering strains along its edges, of any size.

    .. math:: \frac{\Delta V}{V} = (1 + \varepsilon_x)(1 + \varepsilon_y)(1 + \varepsilon_z) - 1

    Parameters
    ----------
    strain_x : strain
        Engineering strain of the edges in x, extension positive.
    strain_y : strain
        Engineering strain of the edges in y, extension positive.
    strain_z : strain
        Engineering strain of the edges in z, extension positive.

    Returns
    -------
    strain : strain
        Change of volume for each unit of first volume.

    Notes
    -----
    The edges must stay at right angles: principal directions, without shear.

    References
    ----------
    Geometry of a block.

    Examples
    --------
    >>> cell('=STRAIN_VOLUMETRIC_FINITE(0.1, 0.1, 0.1)')
    [[0.331, 'mm/mm']]
    """
    sums = strain_x + strain_y + strain_z
    products = strain_x * strain_y + strain_y * strain_z + strain_z * strain_x
    return sums + products + strain_x * strain_y * strain_z


@worksheet_function("STRAIN_VOLUMETRIC_PRESSURE", valid={"bulk_modulus": POSITIVE})
def volumetric_pressure(pressure: Stress, bulk_modulus: Modulus) -> Strain:
    r"""Volumetric strain under a pressure from all sides; growth positive.

    .. math:: e = -\frac{p}{K}

    Parameters
    ----------
    pressure : stress
        Pressure, compression positive.
    bulk_modulus : modulus
        Bulk modulus.

    Returns
    -------
    strain : strain
        Change of volume for each unit of volume: negative under pressure. A third of it is the strain in each
        direction.

    Notes
    -----
    Linear elastic, isotropic, small strains.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.6 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_VOLUMETRIC_PRESSURE("150 MPa", "160 GPa", "µε")')
    -937.5
    """
    return -pressure / bulk_modulus
