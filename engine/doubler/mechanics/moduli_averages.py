"""Averages over all directions of any anisotropic stiffness: bulk and shear modulus after Voigt, Reuss, Hill."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Modulus, Ratio, column, row
from doubler.catalogue.limits import condition
from doubler.mechanics.hooke import stacked

Entries: Any = column(Modulus)
Averages: Any = row(Modulus, "voigt", "reuss", "hill")
_SIZE = 36
_UNEVEN = 1e-6


def _matrix(stiffness: Any) -> Any:
    """Return the 36 entries as matrices on the last two axes."""
    return stiffness.reshape((*stiffness.shape[:-1], 6, 6))


def _is_symmetric(stiffness: Any) -> Any:
    if stiffness.shape[-1] != _SIZE:
        return True
    matrix = _matrix(stiffness)
    largest = np.max(np.abs(matrix), axis=(-2, -1))
    return np.max(np.abs(matrix - np.swapaxes(matrix, -1, -2)), axis=(-2, -1)) <= _UNEVEN * largest


def _is_stable(stiffness: Any) -> Any:
    if stiffness.shape[-1] != _SIZE:
        return True
    return np.linalg.eigvalsh(_matrix(stiffness))[..., 0] > 0.0


_RULES = (
    condition("the stiffness must be six rows of six numbers", lambda stiffness: stiffness.shape[-1] == _SIZE),
    condition("the stiffness must be symmetric; see that no entry is misread", _is_symmetric),
    condition(
        "the stiffness belongs to no stable material: it must be positive definite; see that no entry is misread",
        _is_stable,
    ),
)


def _averages(stiffness: Any) -> tuple[Any, Any, Any, Any]:
    """Return K after Voigt and Reuss, then G after Voigt and Reuss."""
    c = _matrix(stiffness)
    s = np.linalg.inv(c)

    def sums(matrix: Any) -> tuple[Any, Any, Any]:
        direct = matrix[..., 0, 0] + matrix[..., 1, 1] + matrix[..., 2, 2]
        side = matrix[..., 0, 1] + matrix[..., 1, 2] + matrix[..., 0, 2]
        return direct, side, matrix[..., 3, 3] + matrix[..., 4, 4] + matrix[..., 5, 5]

    direct, side, shears = sums(c)
    soft_direct, soft_side, soft_shears = sums(s)
    return (
        (direct + 2.0 * side) / 9.0,
        1.0 / (soft_direct + 2.0 * soft_side),
        (direct - side + 3.0 * shears) / 15.0,
        15.0 / (4.0 * (soft_direct - soft_side) + 3.0 * soft_shears),
    )


@worksheet_function("MODULUS_AVERAGE_BULK", conditions=_RULES)
def bulk(stiffness: Entries) -> Averages:
    r"""Bulk modulus of a polycrystal of any crystals: Voigt's, Reuss's and Hill's average.

    .. math:: K_V = \frac{C_{11} + C_{22} + C_{33} + 2(C_{12} + C_{23} + C_{13})}{9}, \quad K_R = \frac{1}{S_{11} +
        S_{22} + S_{33} + 2(S_{12} + S_{23} + S_{13})}

    Parameters
    ----------
    stiffness : column of modulus
        The stiffness matrix, six rows of six: normal components first; the three shears (engineering
        strain) in any order.

    Returns
    -------
    moduli : modulus
        A row of voigt, reuss, hill (their mean).

    Notes
    -----
    Linear elastic, grains equally in all directions: no texture, no pores. Voigt (equal strain in all grains) is
    an upper bound, Reuss (equal stress) a lower one. Bare numbers need a set as the last argument, such as
    "N-mm" for MPa.

    References
    ----------
    R. Hill, The Elastic Behaviour of a Crystalline Aggregate, Proc. Phys. Soc. A 65 (1952) (from memory).

    Examples
    --------
    >>> cell('=MODULUS_AVERAGE_BULK(MODULUS_TRANSVERSE_STIFFNESS("160 GPa","10 GPa",0.3,0.25,"5 GPa","MPa"),"N-mm")')
    [[22861.44012, 6722.689076, 14792.0646]]
    """
    voigt, reuss, _, _ = _averages(stiffness)
    return stacked(voigt, reuss, 0.5 * (voigt + reuss))


@worksheet_function("MODULUS_AVERAGE_SHEAR", conditions=_RULES)
def shear(stiffness: Entries) -> Averages:
    r"""Shear modulus of a polycrystal of any crystals: Voigt's, Reuss's and Hill's average.

    .. math:: 15 G_V = C_{11} + C_{22} + C_{33} - C_{12} - C_{23} - C_{13} + 3(C_{44} + C_{55} + C_{66}), \quad
        \frac{15}{G_R} = 4(S_{11} + S_{22} + S_{33} - S_{12} - S_{23} - S_{13}) + 3(S_{44} + S_{55} + S_{66})

    Parameters
    ----------
    stiffness : column of modulus
        The stiffness matrix, six rows of six: normal components first; the three shears (engineering
        strain) in any order.

    Returns
    -------
    moduli : modulus
        A row of voigt, reuss, hill (their mean).

    Notes
    -----
    Linear elastic, grains equally in all directions: no texture, no pores. Voigt (equal strain in all grains) is
    an upper bound, Reuss (equal stress) a lower one. Bare numbers need a set as the last argument, such as
    "N-mm" for MPa.

    References
    ----------
    R. Hill, The Elastic Behaviour of a Crystalline Aggregate, Proc. Phys. Soc. A 65 (1952) (from memory).

    Examples
    --------
    >>> cell('=MODULUS_AVERAGE_SHEAR(MODULUS_TRANSVERSE_STIFFNESS("160 GPa","10 GPa",0.3,0.25,"5 GPa","MPa"),"N-mm")')
    [[14338.86069, 5190.311419, 9764.586053]]
    """
    _, _, voigt, reuss = _averages(stiffness)
    return stacked(voigt, reuss, 0.5 * (voigt + reuss))


@worksheet_function("MODULUS_ANISOTROPY", conditions=_RULES)
def anisotropy(stiffness: Entries) -> Ratio:
    r"""Universal index of elastic anisotropy of any material; zero where it is isotropic.

    .. math:: A^U = 5\frac{G_V}{G_R} + \frac{K_V}{K_R} - 6

    Parameters
    ----------
    stiffness : column of modulus
        The stiffness matrix, six rows of six: normal components first; the three shears (engineering
        strain) in any order.

    Returns
    -------
    index : ratio
        Index, not negative.

    Notes
    -----
    Linear elastic. For cubic crystals it rises with the Zener ratio A as 6(A − 1)²/(5A). Bare numbers need a
    set as the last argument, such as "N-mm".

    References
    ----------
    S. I. Ranganathan, M. Ostoja-Starzewski, Universal Elastic Anisotropy Index, Phys. Rev. Lett. 101 (2008)
    (from memory).

    Examples
    --------
    >>> cell('=MODULUS_ANISOTROPY(MODULUS_TRANSVERSE_STIFFNESS("160 GPa","10 GPa",0.3,0.25,"5 GPa","MPa"),"N-mm")')
    11.21374168
    """
    bulk_voigt, bulk_reuss, shear_voigt, shear_reuss = _averages(stiffness)
    return 5.0 * shear_voigt / shear_reuss + bulk_voigt / bulk_reuss - 6.0
