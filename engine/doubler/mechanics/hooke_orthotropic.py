"""Checks of orthotropic constants, and Hooke's law in the material's own axes, normal components."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Modulus, Ratio, Strain, Stress, Text, row
from doubler.catalogue.limits import POSITIVE
from doubler.mechanics.hooke import stacked
from doubler.mechanics.moduli_orthotropic import NORMAL_LIMITS, STABLE, inverse, normal_compliances

Strains: Any = row(Strain, "e1", "e2", "e3")
Stresses: Any = row(Stress, "s1", "s2", "s3")


def _times(matrix: tuple[Any, ...], one: Any, two: Any, three: Any) -> Any:
    """Return the symmetric matrix (11, 22, 33, 12, 23, 13) times three components."""
    a11, a22, a33, a12, a23, a13 = matrix
    return stacked(
        a11 * one + a12 * two + a13 * three, a12 * one + a22 * two + a23 * three, a13 * one + a23 * two + a33 * three
    )


@worksheet_function("STRAIN_HOOKE_ORTHOTROPIC", valid=NORMAL_LIMITS, conditions=STABLE)
def strains(
    sigma_1: Stress,
    sigma_2: Stress,
    sigma_3: Stress,
    modulus_1: Modulus,
    modulus_2: Modulus,
    modulus_3: Modulus,
    poissons_ratio_12: Ratio,
    poissons_ratio_23: Ratio,
    poissons_ratio_13: Ratio,
) -> Strains:
    r"""Normal strains of an orthotropic material from its normal stresses, in its own axes.

    .. math:: \varepsilon_1 = \frac{\sigma_1}{E_1} - \frac{\nu_{12}}{E_1}\sigma_2 - \frac{\nu_{13}}{E_1}\sigma_3,
        \quad \varepsilon_2 = -\frac{\nu_{12}}{E_1}\sigma_1 + \frac{\sigma_2}{E_2} - \frac{\nu_{23}}{E_2}\sigma_3,
        \quad \dots

    Parameters
    ----------
    sigma_1 : stress
        Normal stress in direction 1, tension positive.
    sigma_2 : stress
        Normal stress in direction 2, tension positive.
    sigma_3 : stress
        Normal stress in direction 3, tension positive.
    modulus_1 : modulus
        Young's modulus in direction 1.
    modulus_2 : modulus
        Young's modulus in direction 2.
    modulus_3 : modulus
        Young's modulus in direction 3.
    poissons_ratio_12 : ratio
        Poisson's ratio ν12: contraction in 2 under stress in 1, E1 being the modulus that goes with it.
    poissons_ratio_23 : ratio
        Poisson's ratio ν23: contraction in 3 under stress in 2.
    poissons_ratio_13 : ratio
        Poisson's ratio ν13: contraction in 3 under stress in 1.

    Returns
    -------
    strains : strain
        A row of e1, e2, e3, extension positive.

    Notes
    -----
    Linear elastic, small strains, in the axes of orthotropy, strains from stress alone. Shear is apart: γ12 =
    τ12/G12 (STRAIN_SHEAR, STRESS_HOOKE_SHEAR).

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=STRAIN_HOOKE_ORTHOTROPIC("-155 MPa","0 MPa","0 MPa","155 GPa","12 GPa","12 GPa",0.248,0.458,0.248,"µε")')
    [[-1000.0, 248.0, 248.0]]
    """
    return _times(
        normal_compliances(modulus_1, modulus_2, modulus_3, poissons_ratio_12, poissons_ratio_23, poissons_ratio_13),
        sigma_1,
        sigma_2,
        sigma_3,
    )


@worksheet_function("STRESS_HOOKE_ORTHOTROPIC", valid=NORMAL_LIMITS, conditions=STABLE)
def stresses(
    strain_1: Strain,
    strain_2: Strain,
    strain_3: Strain,
    modulus_1: Modulus,
    modulus_2: Modulus,
    modulus_3: Modulus,
    poissons_ratio_12: Ratio,
    poissons_ratio_23: Ratio,
    poissons_ratio_13: Ratio,
) -> Stresses:
    r"""Normal stresses of an orthotropic material from its normal strains, in its own axes.

    .. math:: \boldsymbol\sigma = \mathbf S^{-1} \boldsymbol\varepsilon

    Parameters
    ----------
    strain_1 : strain
        Normal strain in direction 1, extension positive.
    strain_2 : strain
        Normal strain in direction 2, extension positive.
    strain_3 : strain
        Normal strain in direction 3, extension positive.
    modulus_1 : modulus
        Young's modulus in direction 1.
    modulus_2 : modulus
        Young's modulus in direction 2.
    modulus_3 : modulus
        Young's modulus in direction 3.
    poissons_ratio_12 : ratio
        Poisson's ratio ν12: contraction in 2 under stress in 1, E1 being the modulus that goes with it.
    poissons_ratio_23 : ratio
        Poisson's ratio ν23: contraction in 3 under stress in 2.
    poissons_ratio_13 : ratio
        Poisson's ratio ν13: contraction in 3 under stress in 1.

    Returns
    -------
    stresses : stress
        A row of s1, s2, s3, tension positive.

    Notes
    -----
    Linear elastic, small strains, in the axes of orthotropy, strains from stress alone. Shear is apart: γ12 =
    τ12/G12 (STRAIN_SHEAR, STRESS_HOOKE_SHEAR).

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_HOOKE_ORTHOTROPIC("-1000 µε","248 µε","248 µε","155 GPa","12 GPa","12 GPa",0.25,0.45,0.25,"MPa")')
    [[-155.022209, -0.04441791045, -0.04441791045]]
    """
    return _times(
        inverse(
            *normal_compliances(
                modulus_1, modulus_2, modulus_3, poissons_ratio_12, poissons_ratio_23, poissons_ratio_13
            )
        ),
        strain_1,
        strain_2,
        strain_3,
    )


@worksheet_function(
    "MODULUS_POISSON_RECIPROCAL", valid={"modulus_1": POSITIVE, "modulus_2": POSITIVE}, conditions=STABLE[:1]
)
def reciprocal(poissons_ratio_12: Ratio, modulus_1: Modulus, modulus_2: Modulus) -> Ratio:
    r"""The other Poisson's ratio of a plane of orthotropy, by the symmetry of the compliance.

    .. math:: \nu_{21} = \nu_{12}\frac{E_2}{E_1}

    Parameters
    ----------
    poissons_ratio_12 : ratio
        Poisson's ratio ν12: contraction in 2 under stress in 1.
    modulus_1 : modulus
        Young's modulus in direction 1.
    modulus_2 : modulus
        Young's modulus in direction 2.

    Returns
    -------
    ratio : ratio
        Poisson's ratio ν21: contraction in 1 under stress in 2.

    Notes
    -----
    Linear elastic. Refused where the magnitude of ν12 reaches √(E1/E2): the material would not be stable.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_POISSON_RECIPROCAL(0.3, "150 GPa", "10 GPa")')
    0.02
    """
    return poissons_ratio_12 * modulus_2 / modulus_1


@worksheet_function("MODULUS_ORTHOTROPIC_CHECK", valid=NORMAL_LIMITS)
def check(
    modulus_1: Modulus,
    modulus_2: Modulus,
    modulus_3: Modulus,
    poissons_ratio_12: Ratio,
    poissons_ratio_23: Ratio,
    poissons_ratio_13: Ratio,
) -> Text:
    r"""Whether the constants of an orthotropic material are possible, and which rule is broken.

    .. math:: |\nu_{ij}| < \sqrt{E_i / E_j}, \quad 1 - \nu_{12}\nu_{21} - \nu_{23}\nu_{32} - \nu_{13}\nu_{31} -
        2\nu_{21}\nu_{32}\nu_{13} > 0

    Parameters
    ----------
    modulus_1 : modulus
        Young's modulus in direction 1.
    modulus_2 : modulus
        Young's modulus in direction 2.
    modulus_3 : modulus
        Young's modulus in direction 3.
    poissons_ratio_12 : ratio
        Poisson's ratio ν12: contraction in 2 under stress in 1, E1 being the modulus that goes with it.
    poissons_ratio_23 : ratio
        Poisson's ratio ν23: contraction in 3 under stress in 2.
    poissons_ratio_13 : ratio
        Poisson's ratio ν13: contraction in 3 under stress in 1.

    Returns
    -------
    verdict : text
        "stable", or the rules that are broken.

    Notes
    -----
    The elastic energy of every strain must be positive. Possible constants need not be right ones.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_ORTHOTROPIC_CHECK("155 GPa","12 GPa","12 GPa",0.248,0.458,0.248)')
    'stable'
    """
    given = {
        "modulus_1": modulus_1,
        "modulus_2": modulus_2,
        "modulus_3": modulus_3,
        "poissons_ratio_12": poissons_ratio_12,
        "poissons_ratio_23": poissons_ratio_23,
        "poissons_ratio_13": poissons_ratio_13,
    }
    held = np.stack(np.broadcast_arrays(*(rule.check(given) for rule in STABLE)), axis=-1)
    flat = held.reshape(-1, held.shape[-1])
    verdicts = np.empty(len(flat), dtype=object)
    for lane, holds in enumerate(flat):
        broken = [rule.words for rule, good in zip(STABLE, holds, strict=True) if not good]
        verdicts[lane] = "; ".join(broken) if broken else "stable"
    return verdicts.reshape(held.shape[:-1])
