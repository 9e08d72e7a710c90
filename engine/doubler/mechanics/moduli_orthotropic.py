"""Compliance and stiffness of orthotropic and transversely isotropic material, and whether it is stable."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Compliance, Modulus, Ratio, square
from doubler.catalogue.limits import POSITIVE, Condition, between, condition

Compliances: Any = square(Compliance, 6)
Stiffnesses: Any = square(Modulus, 6)
NORMAL_LIMITS = {f"modulus_{axis}": POSITIVE for axis in "123"}
LIMITS = NORMAL_LIMITS | {f"shear_modulus_{plane}": POSITIVE for plane in ("12", "23", "13")}
_TRANSVERSE_LIMITS = {
    "modulus_1": POSITIVE,
    "modulus_2": POSITIVE,
    "shear_modulus_12": POSITIVE,
    "poissons_ratio_23": between(-1.0, 1.0, low_open=True, high_open=True),
}


def normal_compliances(
    modulus_1: Any, modulus_2: Any, modulus_3: Any, ratio_12: Any, ratio_23: Any, ratio_13: Any
) -> tuple[Any, Any, Any, Any, Any, Any]:
    """Return S11, S22, S33, S12, S23, S13."""
    return (
        1.0 / modulus_1,
        1.0 / modulus_2,
        1.0 / modulus_3,
        -ratio_12 / modulus_1,
        -ratio_23 / modulus_2,
        -ratio_13 / modulus_1,
    )


def inverse(s11: Any, s22: Any, s33: Any, s12: Any, s23: Any, s13: Any) -> tuple[Any, Any, Any, Any, Any, Any]:
    """Return the inverse of the symmetric 3 × 3 matrix, in the same order."""
    c11, c12, c13 = s22 * s33 - s23**2, s13 * s23 - s12 * s33, s12 * s23 - s13 * s22
    determinant = s11 * c11 + s12 * c12 + s13 * c13
    return (
        c11 / determinant,
        (s11 * s33 - s13**2) / determinant,
        (s11 * s22 - s12**2) / determinant,
        c12 / determinant,
        (s12 * s13 - s11 * s23) / determinant,
        c13 / determinant,
    )


def _matrix(normal: tuple[Any, ...], shears: tuple[Any, Any, Any]) -> Any:
    """Return the 6 × 6 matrix of the three axes and three planes."""
    a11, a22, a33, a12, a23, a13 = normal
    lanes = np.broadcast_shapes(*(np.shape(part) for part in (*normal, *shears)))
    matrix = np.zeros((*lanes, 6, 6))
    for place, value in zip(range(6), (a11, a22, a33, *shears), strict=True):
        matrix[..., place, place] = value
    for row, column, value in ((0, 1, a12), (1, 2, a23), (0, 2, a13)):
        matrix[..., row, column] = matrix[..., column, row] = value
    return matrix


def _pair_room(first: Any, second: Any, ratio: Any) -> Any:
    """Return 1 − ν12 ν21."""
    return 1.0 - ratio**2 * second / first


def _room(modulus_1: Any, modulus_2: Any, modulus_3: Any, ratio_12: Any, ratio_23: Any, ratio_13: Any) -> Any:
    """Return 1 − ν12 ν21 − ν23 ν32 − ν13 ν31 − 2 ν21 ν32 ν13."""
    ratio_21, ratio_32 = ratio_12 * modulus_2 / modulus_1, ratio_23 * modulus_3 / modulus_2
    ratio_31 = ratio_13 * modulus_3 / modulus_1
    single = ratio_12 * ratio_21 + ratio_23 * ratio_32 + ratio_13 * ratio_31
    return 1.0 - single - 2.0 * ratio_21 * ratio_32 * ratio_13


STABLE: tuple[Condition, ...] = (
    condition(
        "poissons_ratio_12 is too large for a stable material: its magnitude must stay below √(E1/E2); see that ν12 "
        "and ν21 are not exchanged",
        lambda modulus_1, modulus_2, poissons_ratio_12: _pair_room(modulus_1, modulus_2, poissons_ratio_12) > 0.0,
    ),
    condition(
        "poissons_ratio_23 is too large for a stable material: its magnitude must stay below √(E2/E3); see that ν23 "
        "and ν32 are not exchanged",
        lambda modulus_2, modulus_3, poissons_ratio_23: _pair_room(modulus_2, modulus_3, poissons_ratio_23) > 0.0,
    ),
    condition(
        "poissons_ratio_13 is too large for a stable material: its magnitude must stay below √(E1/E3); see that ν13 "
        "and ν31 are not exchanged",
        lambda modulus_1, modulus_3, poissons_ratio_13: _pair_room(modulus_1, modulus_3, poissons_ratio_13) > 0.0,
    ),
    condition(
        "the three Poisson's ratios together belong to no stable material: "
        "1 - ν12·ν21 - ν23·ν32 - ν13·ν31 - 2·ν21·ν32·ν13 must be positive",
        lambda modulus_1, modulus_2, modulus_3, poissons_ratio_12, poissons_ratio_23, poissons_ratio_13: (
            _room(modulus_1, modulus_2, modulus_3, poissons_ratio_12, poissons_ratio_23, poissons_ratio_13) > 0.0
        ),
    ),
)
_TRANSVERSE_STABLE = (
    condition(
        "the two Poisson's ratios together belong to no stable material: 1 - ν23 - 2·ν12²·E2/E1 must be positive; see "
        "that ν12 and ν21 are not exchanged",
        lambda modulus_1, modulus_2, poissons_ratio_12, poissons_ratio_23: (
            1.0 - poissons_ratio_23 - 2.0 * poissons_ratio_12**2 * modulus_2 / modulus_1 > 0.0
        ),
    ),
)


@worksheet_function("MODULUS_ORTHOTROPIC_COMPLIANCE", valid=LIMITS, conditions=STABLE)
def compliance(
    modulus_1: Modulus,
    modulus_2: Modulus,
    modulus_3: Modulus,
    poissons_ratio_12: Ratio,
    poissons_ratio_23: Ratio,
    poissons_ratio_13: Ratio,
    shear_modulus_12: Modulus,
    shear_modulus_23: Modulus,
    shear_modulus_13: Modulus,
) -> Compliances:
    r"""Compliance matrix of an orthotropic material in its own axes, 6 by 6.

    .. math:: S_{ii} = \frac{1}{E_i}, \quad S_{ij} = -\frac{\nu_{ij}}{E_i} = -\frac{\nu_{ji}}{E_j}, \quad S_{44} =
        \frac{1}{G_{12}}, \ S_{55} = \frac{1}{G_{23}}, \ S_{66} = \frac{1}{G_{13}}

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
    shear_modulus_12 : modulus
        Shear modulus in the 12 plane.
    shear_modulus_23 : modulus
        Shear modulus in the 23 plane.
    shear_modulus_13 : modulus
        Shear modulus in the 13 plane.

    Returns
    -------
    compliances : compliance
        Six rows of six: strains from stresses.

    Notes
    -----
    Rows and columns stand in the order 11, 22, 33, 12, 23, 31, as the results of STRAIN_HOOKE_3D do; many books
    (Voigt) put 23, 31, 12 last: exchange rows and columns before mixing. Shear strains are engineering ones.
    Linear elastic.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_ORTHOTROPIC_COMPLIANCE("160 GPa","10 GPa","8 GPa",0.3,0.4,0.25,"5 GPa","3 GPa","4 GPa","1/GPa")')
    [[0.00625, -0.001875, -0.0015625, 0.0, 0.0, 0.0],
     [-0.001875, 0.1, -0.04, 0.0, 0.0, 0.0],
     [-0.0015625, -0.04, 0.125, 0.0, 0.0, 0.0],
     [0.0, 0.0, 0.0, 0.2, 0.0, 0.0],
     [0.0, 0.0, 0.0, 0.0, 0.3333333333, 0.0],
     [0.0, 0.0, 0.0, 0.0, 0.0, 0.25]]
    """
    normal = normal_compliances(
        modulus_1, modulus_2, modulus_3, poissons_ratio_12, poissons_ratio_23, poissons_ratio_13
    )
    return _matrix(normal, (1.0 / shear_modulus_12, 1.0 / shear_modulus_23, 1.0 / shear_modulus_13))


@worksheet_function("MODULUS_ORTHOTROPIC_STIFFNESS", valid=LIMITS, conditions=STABLE)
def stiffness(
    modulus_1: Modulus,
    modulus_2: Modulus,
    modulus_3: Modulus,
    poissons_ratio_12: Ratio,
    poissons_ratio_23: Ratio,
    poissons_ratio_13: Ratio,
    shear_modulus_12: Modulus,
    shear_modulus_23: Modulus,
    shear_modulus_13: Modulus,
) -> Stiffnesses:
    r"""Stiffness matrix of an orthotropic material in its own axes, 6 by 6.

    .. math:: \mathbf C = \mathbf S^{-1}

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
    shear_modulus_12 : modulus
        Shear modulus in the 12 plane.
    shear_modulus_23 : modulus
        Shear modulus in the 23 plane.
    shear_modulus_13 : modulus
        Shear modulus in the 13 plane.

    Returns
    -------
    stiffnesses : modulus
        Six rows of six: stresses from strains.

    Notes
    -----
    Rows and columns stand in the order 11, 22, 33, 12, 23, 31, as the results of STRAIN_HOOKE_3D do; many books
    (Voigt) put 23, 31, 12 last: exchange rows and columns before mixing. Shear strains are engineering ones.
    Linear elastic.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_ORTHOTROPIC_STIFFNESS("160 GPa","10 GPa","8 GPa",0.3,0.4,0.25,"5 GPa","3 GPa","4 GPa","GPa")')
    [[162.1854112, 4.417320546, 3.440860215, 0.0, 0.0, 0.0],
     [4.417320546, 11.5882011, 3.76344086, 0.0, 0.0, 0.0],
     [3.440860215, 3.76344086, 9.247311828, 0.0, 0.0, 0.0],
     [0.0, 0.0, 0.0, 5.0, 0.0, 0.0],
     [0.0, 0.0, 0.0, 0.0, 3.0, 0.0],
     [0.0, 0.0, 0.0, 0.0, 0.0, 4.0]]
    """
    normal = inverse(
        *normal_compliances(modulus_1, modulus_2, modulus_3, poissons_ratio_12, poissons_ratio_23, poissons_ratio_13)
    )
    return _matrix(normal, (shear_modulus_12, shear_modulus_23, shear_modulus_13))


@worksheet_function("MODULUS_TRANSVERSE_COMPLIANCE", valid=_TRANSVERSE_LIMITS, conditions=_TRANSVERSE_STABLE)
def transverse_compliance(
    modulus_1: Modulus,
    modulus_2: Modulus,
    poissons_ratio_12: Ratio,
    poissons_ratio_23: Ratio,
    shear_modulus_12: Modulus,
) -> Compliances:
    r"""Compliance matrix of a transversely isotropic material (a single fibre direction), 6 by 6.

    .. math:: S_{11} = \frac{1}{E_1}, \ S_{22} = S_{33} = \frac{1}{E_2}, \ S_{12} = S_{13} = -\frac{\nu_{12}}{E_1}, \
        S_{23} = -\frac{\nu_{23}}{E_2}, \ S_{44} = S_{66} = \frac{1}{G_{12}}, \ S_{55} = \frac{2(1 + \nu_{23})}{E_2}

    Parameters
    ----------
    modulus_1 : modulus
        Young's modulus along the axis of symmetry (the fibre).
    modulus_2 : modulus
        Young's modulus across it, the same in 2 and 3.
    poissons_ratio_12 : ratio
        Poisson's ratio ν12: contraction across under stress along the axis.
    poissons_ratio_23 : ratio
        Poisson's ratio ν23 in the isotropic plane.
    shear_modulus_12 : modulus
        Shear modulus along the axis, the same in 12 and 13.

    Returns
    -------
    compliances : compliance
        Six rows of six: strains from stresses.

    Notes
    -----
    The 23 plane is isotropic, so that G23 = E2/(2(1 + ν23)). Rows and columns stand in the order 11, 22, 33,
    12, 23, 31, as the results of STRAIN_HOOKE_3D do; many books (Voigt) put 23, 31, 12 last: exchange rows and
    columns before mixing. Shear strains are engineering ones.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_TRANSVERSE_COMPLIANCE("160 GPa","10 GPa",0.3,0.25,"5 GPa","1/GPa")')
    [[0.00625, -0.001875, -0.001875, 0.0, 0.0, 0.0],
     [-0.001875, 0.1, -0.025, 0.0, 0.0, 0.0],
     [-0.001875, -0.025, 0.1, 0.0, 0.0, 0.0],
     [0.0, 0.0, 0.0, 0.2, 0.0, 0.0],
     [0.0, 0.0, 0.0, 0.0, 0.25, 0.0],
     [0.0, 0.0, 0.0, 0.0, 0.0, 0.2]]
    """
    shear_modulus_23 = 0.5 * modulus_2 / (1.0 + poissons_ratio_23)
    normal = normal_compliances(
        modulus_1, modulus_2, modulus_2, poissons_ratio_12, poissons_ratio_23, poissons_ratio_12
    )
    return _matrix(normal, (1.0 / shear_modulus_12, 1.0 / shear_modulus_23, 1.0 / shear_modulus_12))


@worksheet_function("MODULUS_TRANSVERSE_STIFFNESS", valid=_TRANSVERSE_LIMITS, conditions=_TRANSVERSE_STABLE)
def transverse_stiffness(
    modulus_1: Modulus,
    modulus_2: Modulus,
    poissons_ratio_12: Ratio,
    poissons_ratio_23: Ratio,
    shear_modulus_12: Modulus,
) -> Stiffnesses:
    r"""Stiffness matrix of a transversely isotropic material (a single fibre direction), 6 by 6.

    .. math:: \mathbf C = \mathbf S^{-1}

    Parameters
    ----------
    modulus_1 : modulus
        Young's modulus along the axis of symmetry (the fibre).
    modulus_2 : modulus
        Young's modulus across it, the same in 2 and 3.
    poissons_ratio_12 : ratio
        Poisson's ratio ν12: contraction across under stress along the axis.
    poissons_ratio_23 : ratio
        Poisson's ratio ν23 in the isotropic plane.
    shear_modulus_12 : modulus
        Shear modulus along the axis, the same in 12 and 13.

    Returns
    -------
    stiffnesses : modulus
        Six rows of six: stresses from strains.

    Notes
    -----
    The 23 plane is isotropic, so that G23 = E2/(2(1 + ν23)). Rows and columns stand in the order 11, 22, 33,
    12, 23, 31, as the results of STRAIN_HOOKE_3D do; many books (Voigt) put 23, 31, 12 last: exchange rows and
    columns before mixing. Shear strains are engineering ones.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_TRANSVERSE_STIFFNESS("160 GPa","10 GPa",0.3,0.25,"5 GPa","GPa")')
    [[162.4365482, 4.060913706, 4.060913706, 0.0, 0.0, 0.0],
     [4.060913706, 10.76818951, 2.768189509, 0.0, 0.0, 0.0],
     [4.060913706, 2.768189509, 10.76818951, 0.0, 0.0, 0.0],
     [0.0, 0.0, 0.0, 5.0, 0.0, 0.0],
     [0.0, 0.0, 0.0, 0.0, 4.0, 0.0],
     [0.0, 0.0, 0.0, 0.0, 0.0, 5.0]]
    """
    shear_modulus_23 = 0.5 * modulus_2 / (1.0 + poissons_ratio_23)
    normal = inverse(
        *normal_compliances(modulus_1, modulus_2, modulus_2, poissons_ratio_12, poissons_ratio_23, poissons_ratio_12)
    )
    return _matrix(normal, (shear_modulus_12, shear_modulus_23, shear_modulus_12))
