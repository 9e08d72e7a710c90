"""Cubic crystals: stiffness and compliance, directional modulus, anisotropy, averages over a polycrystal."""

from __future__ import annotations

from typing import Any

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Compliance, Modulus, Ratio, row
from doubler.catalogue.limits import POSITIVE, condition
from doubler.mechanics.hooke import stacked

Constants: Any = row(Modulus, "c11", "c12", "c44")
Compliances: Any = row(Compliance, "s11", "s12", "s44")
Averages: Any = row(Modulus, "voigt", "reuss", "hill")
_SOFT = {"s11": POSITIVE, "s44": POSITIVE}
_STIFF = {"c11": POSITIVE, "c44": POSITIVE}
_STABLE = (
    condition(
        "C11 - C12 and C11 + 2·C12 must be positive for a stable crystal",
        lambda c11, c12: (c11 - c12 > 0.0) & (c11 + 2.0 * c12 > 0.0),
    ),
)
_STABLE_SOFT = (
    condition(
        "S11 - S12 and S11 + 2·S12 must be positive for a stable crystal",
        lambda s11, s12: (s11 - s12 > 0.0) & (s11 + 2.0 * s12 > 0.0),
    ),
)
_DIRECTED = condition(
    "the direction h, k, l must not be zero in all three", lambda h, k, l: (h != 0.0) | (k != 0.0) | (l != 0.0)
)


def _inverse(diagonal: Any, side: Any, shear: Any) -> Any:
    """Return the three constants of the inverse of a cubic matrix."""
    room = (diagonal - side) * (diagonal + 2.0 * side)
    return stacked((diagonal + side) / room, -side / room, 1.0 / shear)


@worksheet_function("MODULUS_CUBIC_COMPLIANCE", valid=_STIFF, conditions=_STABLE)
def compliance(c11: Modulus, c12: Modulus, c44: Modulus) -> Compliances:
    r"""Compliances of a cubic crystal from its stiffnesses.

    .. math:: S_{11} = \frac{C_{11} + C_{12}}{(C_{11} - C_{12})(C_{11} + 2C_{12})}, \quad S_{12} =
        \frac{-C_{12}}{(C_{11} - C_{12})(C_{11} + 2C_{12})}, \quad S_{44} = \frac{1}{C_{44}}

    Parameters
    ----------
    c11 : modulus
        Stiffness C11 in the cube axes.
    c12 : modulus
        Stiffness C12.
    c44 : modulus
        Stiffness C44, the shear modulus on the cube faces.

    Returns
    -------
    compliances : compliance
        A row of s11, s12, s44.

    Notes
    -----
    Linear elastic, in the cube axes; engineering shear strain.

    References
    ----------
    J. F. Nye, Physical Properties of Crystals, chapter 8 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_CUBIC_COMPLIANCE("160 GPa", "110 GPa", "80 GPa", "1/GPa")')
    [[0.01421052632, -0.005789473684, 0.0125]]
    """
    return _inverse(c11, c12, c44)


@worksheet_function("MODULUS_CUBIC_STIFFNESS", valid=_SOFT, conditions=_STABLE_SOFT)
def stiffness(s11: Compliance, s12: Compliance, s44: Compliance) -> Constants:
    r"""Stiffnesses of a cubic crystal from its compliances.

    .. math:: C_{11} = \frac{S_{11} + S_{12}}{(S_{11} - S_{12})(S_{11} + 2S_{12})}, \quad C_{12} =
        \frac{-S_{12}}{(S_{11} - S_{12})(S_{11} + 2S_{12})}, \quad C_{44} = \frac{1}{S_{44}}

    Parameters
    ----------
    s11 : compliance
        Compliance S11 in the cube axes, 1/E along a cube edge.
    s12 : compliance
        Compliance S12, mostly negative.
    s44 : compliance
        Compliance S44 to engineering shear strain.

    Returns
    -------
    stiffnesses : modulus
        A row of c11, c12, c44.

    Notes
    -----
    Linear elastic, in the cube axes; engineering shear strain.

    References
    ----------
    J. F. Nye, Physical Properties of Crystals, chapter 8 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_CUBIC_STIFFNESS("0.008 1/GPa", "-0.002 1/GPa", "0.0125 1/GPa", "GPa")')
    [[150.0, 50.0, 80.0]]
    """
    return _inverse(s11, s12, s44)


@worksheet_function("MODULUS_CUBIC_YOUNG", valid=_SOFT, conditions=(*_STABLE_SOFT, _DIRECTED))
def young(s11: Compliance, s12: Compliance, s44: Compliance, h: Ratio, k: Ratio, l: Ratio) -> Modulus:
    r"""Young's modulus of a cubic crystal in the direction [h k l].

    .. math:: \frac{1}{E} = S_{11} - 2\left(S_{11} - S_{12} - \tfrac12 S_{44}\right) (\alpha^2\beta^2 +
        \beta^2\gamma^2 + \gamma^2\alpha^2)

    Parameters
    ----------
    s11 : compliance
        Compliance S11 in the cube axes, 1/E along a cube edge.
    s12 : compliance
        Compliance S12, mostly negative.
    s44 : compliance
        Compliance S44 to engineering shear strain.
    h : ratio
        Direction index h (along the first cube edge).
    k : ratio
        Direction index k.
    l : ratio
        Direction index l; the length of the three together does not matter.

    Returns
    -------
    modulus : modulus
        Young's modulus under uniaxial stress in that direction.

    Notes
    -----
    Linear elastic. α, β, γ are the direction cosines of [h k l] to the cube edges. From stiffnesses take the
    compliances by MODULUS_CUBIC_COMPLIANCE.

    References
    ----------
    J. F. Nye, Physical Properties of Crystals, chapter 8 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_CUBIC_YOUNG("0.008 1/GPa", "-0.0028 1/GPa", "0.0086 1/GPa", 1, 1, 1, "GPa")')
    272.7272727
    """
    h2, k2, l2 = h**2, k**2, l**2
    spread = (h2 * k2 + k2 * l2 + l2 * h2) / (h2 + k2 + l2) ** 2
    return 1.0 / (s11 - 2.0 * (s11 - s12 - 0.5 * s44) * spread)


@worksheet_function("MODULUS_ZENER", valid=_STIFF, conditions=_STABLE)
def zener(c11: Modulus, c12: Modulus, c44: Modulus) -> Ratio:
    r"""Zener ratio of a cubic crystal: its elastic anisotropy; one where it is isotropic.

    .. math:: A = \frac{2 C_{44}}{C_{11} - C_{12}}

    Parameters
    ----------
    c11 : modulus
        Stiffness C11 in the cube axes.
    c12 : modulus
        Stiffness C12.
    c44 : modulus
        Stiffness C44, the shear modulus on the cube faces.

    Returns
    -------
    ratio : ratio
        Ratio of the two shear moduli; 1 where it is the same in all directions.

    Notes
    -----
    Linear elastic. Far from 1, no two of E, G, ν of a single crystal give the third.

    References
    ----------
    C. Zener, Elasticity and Anelasticity of Metals (from memory).

    Examples
    --------
    >>> cell('=MODULUS_ZENER("160 GPa", "110 GPa", "75 GPa")')
    3.0
    """
    return 2.0 * c44 / (c11 - c12)


@worksheet_function("MODULUS_CUBIC_BULK", valid={"c11": POSITIVE}, conditions=_STABLE)
def bulk(c11: Modulus, c12: Modulus) -> Modulus:
    r"""Bulk modulus of a cubic crystal, and of a polycrystal of it.

    .. math:: K = \frac{C_{11} + 2 C_{12}}{3}

    Parameters
    ----------
    c11 : modulus
        Stiffness C11 in the cube axes.
    c12 : modulus
        Stiffness C12.

    Returns
    -------
    modulus : modulus
        Bulk modulus: the same by Voigt's and by Reuss's average.

    Notes
    -----
    Linear elastic.

    References
    ----------
    J. F. Nye, Physical Properties of Crystals, chapter 8 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_CUBIC_BULK("160 GPa", "110 GPa", "GPa")')
    126.6666667
    """
    return (c11 + 2.0 * c12) / 3.0


@worksheet_function("MODULUS_CUBIC_SHEAR", valid=_STIFF, conditions=_STABLE)
def shear_averages(c11: Modulus, c12: Modulus, c44: Modulus) -> Averages:
    r"""Shear modulus of a polycrystal of cubic crystals: Voigt's, Reuss's and Hill's average.

    .. math:: G_V = \frac{C_{11} - C_{12} + 3C_{44}}{5}, \quad G_R = \frac{5 (C_{11} - C_{12}) C_{44}}{4 C_{44} + 3
        (C_{11} - C_{12})}, \quad G_H = \frac{G_V + G_R}{2}

    Parameters
    ----------
    c11 : modulus
        Stiffness C11 in the cube axes.
    c12 : modulus
        Stiffness C12.
    c44 : modulus
        Stiffness C44, the shear modulus on the cube faces.

    Returns
    -------
    moduli : modulus
        A row of voigt (upper bound), reuss (lower bound), hill (their mean).

    Notes
    -----
    Linear elastic, crystals equally in all directions: no texture, no pores. With MODULUS_CUBIC_BULK and
    MODULUS_YOUNG it gives the other constants.

    References
    ----------
    R. Hill, The Elastic Behaviour of a Crystalline Aggregate, Proc. Phys. Soc. A 65 (1952) (from memory).

    Examples
    --------
    >>> cell('=MODULUS_CUBIC_SHEAR("160 GPa", "110 GPa", "75 GPa", "GPa")')
    [[55.0, 41.66666667, 48.33333333]]
    """
    voigt = (c11 - c12 + 3.0 * c44) / 5.0
    reuss = 5.0 * (c11 - c12) * c44 / (4.0 * c44 + 3.0 * (c11 - c12))
    return stacked(voigt, reuss, 0.5 * (voigt + reuss))
