"""Moduli of special states: plane strain, two axes, contact of two bodies; and a modulus at temperature."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Modulus, Ratio, Temperature, column
from doubler.catalogue.limits import POISSON, POSITIVE, between, condition
from doubler.mechanics.tables import interpolate

Temperatures: Any = column(Temperature)
Factors: Any = column(Ratio)
_ELASTIC = {"modulus": POSITIVE, "poissons_ratio": POISSON}


@worksheet_function("MODULUS_PLANE_STRAIN", valid=_ELASTIC)
def plane_strain(modulus: Modulus, poissons_ratio: Ratio) -> Modulus:
    r"""Effective Young's modulus that turns a formula of plane stress into one of plane strain.

    .. math:: E' = \frac{E}{1 - \nu^2}

    Parameters
    ----------
    modulus : modulus
        Young's modulus.
    poissons_ratio : ratio
        Poisson's ratio.

    Returns
    -------
    modulus : modulus
        Modulus of a strip that cannot strain sideways, as in bending of a wide plate.

    Notes
    -----
    To turn a whole solution of plane stress into plane strain replace Poisson's ratio as well, by
    MODULUS_PLANE_STRAIN_POISSON. Linear elastic, isotropic.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_PLANE_STRAIN("182 GPa", 0.3, "GPa")')
    200.0
    """
    return modulus / (1.0 - poissons_ratio**2)


@worksheet_function("MODULUS_PLANE_STRAIN_POISSON", valid={"poissons_ratio": POISSON})
def plane_strain_ratio(poissons_ratio: Ratio) -> Ratio:
    r"""Effective Poisson's ratio that turns a formula of plane stress into one of plane strain.

    .. math:: \nu' = \frac{\nu}{1 - \nu}

    Parameters
    ----------
    poissons_ratio : ratio
        Poisson's ratio.

    Returns
    -------
    ratio : ratio
        Effective ratio, up to 1: no material constant.

    Notes
    -----
    Goes with MODULUS_PLANE_STRAIN. Linear elastic, isotropic.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_PLANE_STRAIN_POISSON(0.25)')
    0.3333333333
    """
    return poissons_ratio / (1.0 - poissons_ratio)


@worksheet_function(
    "MODULUS_PLANE_STRESS", valid={"modulus": POSITIVE, "poissons_ratio": between(-0.5, 0.5, low_open=True)}
)
def plane_stress(modulus: Modulus, poissons_ratio: Ratio) -> Modulus:
    r"""Effective Young's modulus that turns a formula of plane strain into one of plane stress.

    .. math:: E'' = \frac{E (1 + 2\nu)}{(1 + \nu)^2}

    Parameters
    ----------
    modulus : modulus
        Young's modulus.
    poissons_ratio : ratio
        Poisson's ratio.

    Returns
    -------
    modulus : modulus
        Modulus to use in a formula that is derived for plane strain, with MODULUS_PLANE_STRESS_POISSON.

    Notes
    -----
    Linear elastic, isotropic. Undoes MODULUS_PLANE_STRAIN. Only above a Poisson's ratio of -0.5, below which no
    material in plane strain answers to it.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_PLANE_STRESS("169 GPa", 0.3, "GPa")')
    160.0
    """
    return modulus * (1.0 + 2.0 * poissons_ratio) / (1.0 + poissons_ratio) ** 2


@worksheet_function("MODULUS_PLANE_STRESS_POISSON", valid={"poissons_ratio": between(-0.5, 0.5, low_open=True)})
def plane_stress_ratio(poissons_ratio: Ratio) -> Ratio:
    r"""Effective Poisson's ratio that turns a formula of plane strain into one of plane stress.

    .. math:: \nu'' = \frac{\nu}{1 + \nu}

    Parameters
    ----------
    poissons_ratio : ratio
        Poisson's ratio.

    Returns
    -------
    ratio : ratio
        Effective ratio.

    Notes
    -----
    Goes with MODULUS_PLANE_STRESS. Linear elastic, isotropic.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_PLANE_STRESS_POISSON(0.25)')
    0.2
    """
    return poissons_ratio / (1.0 + poissons_ratio)


@worksheet_function("MODULUS_BIAXIAL", valid=_ELASTIC)
def biaxial(modulus: Modulus, poissons_ratio: Ratio) -> Modulus:
    r"""Stress over strain of a sheet that is strained equally in both directions.

    .. math:: E_b = \frac{E}{1 - \nu}

    Parameters
    ----------
    modulus : modulus
        Young's modulus.
    poissons_ratio : ratio
        Poisson's ratio.

    Returns
    -------
    modulus : modulus
        Biaxial modulus.

    Notes
    -----
    Plane stress, linear elastic, isotropic.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_BIAXIAL("70 GPa", 0.3, "GPa")')
    100.0
    """
    return modulus / (1.0 - poissons_ratio)


@worksheet_function(
    "MODULUS_CONTACT",
    valid={"modulus_1": POSITIVE, "modulus_2": POSITIVE, "poissons_ratio_1": POISSON, "poissons_ratio_2": POISSON},
)
def contact(modulus_1: Modulus, poissons_ratio_1: Ratio, modulus_2: Modulus, poissons_ratio_2: Ratio) -> Modulus:
    r"""Effective modulus of two bodies in contact.

    .. math:: \frac{1}{E^*} = \frac{1 - \nu_1^2}{E_1} + \frac{1 - \nu_2^2}{E_2}

    Parameters
    ----------
    modulus_1 : modulus
        Young's modulus of the first body.
    poissons_ratio_1 : ratio
        Poisson's ratio of the first body.
    modulus_2 : modulus
        Young's modulus of the second body.
    poissons_ratio_2 : ratio
        Poisson's ratio of the second body.

    Returns
    -------
    modulus : modulus
        Effective modulus E* as in Hertz's formulas.

    Notes
    -----
    Linear elastic, isotropic. Some books call half of it, or its inverse, by the same name.

    References
    ----------
    K. L. Johnson, Contact Mechanics, section 4.2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_CONTACT("182 GPa", 0.3, "182 GPa", 0.3, "GPa")')
    100.0
    """
    return 1.0 / ((1.0 - poissons_ratio_1**2) / modulus_1 + (1.0 - poissons_ratio_2**2) / modulus_2)


_TABLE = (
    condition(
        "the two columns of the table must be equally long, two rows at least",
        lambda table_temperature, table_factor: table_temperature.shape[-1] == table_factor.shape[-1] > 1,
    ),
    condition(
        "the table's temperatures must rise or fall throughout, without a value twice",
        lambda table_temperature: (
            np.all(np.diff(table_temperature, axis=-1) > 0.0, axis=-1)
            | np.all(np.diff(table_temperature, axis=-1) < 0.0, axis=-1)
        ),
    ),
    condition(
        "the temperature lies outside the table, and there is no extrapolation; extend the table from its source",
        lambda temperature, table_temperature: (
            (temperature >= np.min(table_temperature, axis=-1)) & (temperature <= np.max(table_temperature, axis=-1))
        ),
    ),
)


@worksheet_function(
    "MODULUS_AT_TEMPERATURE",
    valid={"modulus": POSITIVE, "table_factor": between(0.0, 2.0, low_open=True)},
    conditions=_TABLE,
)
def at_temperature(
    modulus: Modulus, temperature: Temperature, table_temperature: Temperatures, table_factor: Factors
) -> Modulus:
    r"""Modulus at a temperature by the user's table of factors; outside the table it is refused.

    .. math:: E(T) = f(T)\, E_0

    Parameters
    ----------
    modulus : modulus
        Modulus at the temperature for which the factor is 1: Young's, shear or bulk modulus.
    temperature : temperature
        Temperature of the part.
    table_temperature : column of temperature
        Temperatures of the table, rising or falling throughout.
    table_factor : column of ratio
        Factor on the modulus at each of these temperatures, such as 0.92 or 92 %.

    Returns
    -------
    modulus : modulus
        Modulus at the temperature.

    Notes
    -----
    Linear between neighbours in the table, never beyond it. No table is built in: take it from the source of
    the allowables, for the modulus, the product form and the exposure in question. A factor above 2 is refused
    as a percentage written as a number.

    References
    ----------
    Common practice.

    Examples
    --------
    >>> cell('=MODULUS_AT_TEMPERATURE("70 GPa", "60 °C", {"20 °C";"100 °C"}, {1;0.94}, "GPa")')
    67.9
    """
    return modulus * interpolate.kernel(temperature, table_temperature, table_factor)
