"""Elastic constants of an isotropic material: any two of E, ν, G, K, λ, M give each of the others."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Modulus, Ratio
from doubler.catalogue.limits import POISSON, POSITIVE, condition
from doubler.mechanics.moduli_pairs import chosen, is_settled, is_stable, refuse_unless_settled, solve, value_of

_LIMITS = {"young": POSITIVE, "poissons_ratio": POISSON, "shear": POSITIVE, "bulk": POSITIVE, "p_wave": POSITIVE}


def _stable(young: Any, poissons_ratio: Any, shear: Any, bulk: Any, lame: Any, p_wave: Any, branch: Any) -> Any:
    given = (young, poissons_ratio, shear, bulk, lame, p_wave)
    return not is_settled(given, branch) or is_stable(solve(given, branch))


def _finite(young: Any, poissons_ratio: Any, shear: Any, bulk: Any, lame: Any, p_wave: Any, branch: Any) -> Any:
    given = (young, poissons_ratio, shear, bulk, lame, p_wave)
    return not is_settled(given, branch) or solve(given, branch).compressibility > 0.0


_ANY = (
    condition(
        "Poisson's ratio and Lamé's first constant are both zero and leave the other constants open; give another one",
        lambda poissons_ratio, lame: (
            True if poissons_ratio is None or lame is None else (poissons_ratio != 0.0) | (lame != 0.0)
        ),
    ),
    condition(
        "these two constants belong to no stable isotropic material (its moduli are positive and its Poisson's ratio "
        "lies between -1 and 0.5); see that neither is misread or exchanged with another",
        _stable,
    ),
)
_COMPRESSIBLE = (
    *_ANY,
    condition("the material is incompressible (Poisson's ratio 0.5), so that this modulus is infinite", _finite),
)


def _constant(name: str, given: Sequence[Any], branch: str | None) -> Any:
    refuse_unless_settled(given, branch)
    if name in chosen(given):
        return np.broadcast_arrays(*(value for value in given if value is not None))[chosen(given).index(name)]
    return value_of(name, solve(given, branch))


@worksheet_function("MODULUS_YOUNG", valid=_LIMITS, conditions=_ANY)
def young_modulus(
    young: Modulus | None = None,
    poissons_ratio: Ratio | None = None,
    shear: Modulus | None = None,
    bulk: Modulus | None = None,
    lame: Modulus | None = None,
    p_wave: Modulus | None = None,
    branch: Literal["positive", "negative"] | None = None,
) -> Modulus:
    r"""Young's modulus from any two elastic constants of an isotropic material.

    .. math:: E = 2G(1 + \nu) = \frac{9KG}{3K + G} = \frac{G(3\lambda + 2G)}{\lambda + G} = \dots

    Parameters
    ----------
    young : modulus, optional
        Young's modulus E.
    poissons_ratio : ratio, optional
        Poisson's ratio ν.
    shear : modulus, optional
        Shear modulus G.
    bulk : modulus, optional
        Bulk modulus K.
    lame : modulus, optional
        Lamé's first constant λ; may be negative.
    p_wave : modulus, optional
        P-wave modulus M = λ + 2G, of a bar whose sides are held.
    branch : {"positive", "negative"}, optional
        Sign of Poisson's ratio: asked for with E and M alone, which two materials share.

    Returns
    -------
    modulus : modulus
        Young's modulus.

    Notes
    -----
    Exactly two of the constants, the others left out or their cells empty. Linear elastic, isotropic: rolled,
    extruded and printed materials often are not, and then no two constants give the third. Two constants that are
    each rounded may give a third that is far off: ν from E and G, and all from K near ν = 0.5.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_YOUNG(, 0.3, "80 GPa", "GPa")')
    208.0
    """
    given = (young, poissons_ratio, shear, bulk, lame, p_wave)
    return _constant("young", given, branch)


@worksheet_function("MODULUS_SHEAR", valid=_LIMITS, conditions=_ANY)
def shear_modulus(
    young: Modulus | None = None,
    poissons_ratio: Ratio | None = None,
    shear: Modulus | None = None,
    bulk: Modulus | None = None,
    lame: Modulus | None = None,
    p_wave: Modulus | None = None,
    branch: Literal["positive", "negative"] | None = None,
) -> Modulus:
    r"""Shear modulus from any two elastic constants of an isotropic material.

    .. math:: G = \frac{E}{2(1 + \nu)} = \frac{3KE}{9K - E} = \frac{M - \lambda}{2} = \dots

    Parameters
    ----------
    young : modulus, optional
        Young's modulus E.
    poissons_ratio : ratio, optional
        Poisson's ratio ν.
    shear : modulus, optional
        Shear modulus G.
    bulk : modulus, optional
        Bulk modulus K.
    lame : modulus, optional
        Lamé's first constant λ; may be negative.
    p_wave : modulus, optional
        P-wave modulus M = λ + 2G, of a bar whose sides are held.
    branch : {"positive", "negative"}, optional
        Sign of Poisson's ratio: asked for with E and M alone, which two materials share.

    Returns
    -------
    modulus : modulus
        Shear modulus.

    Notes
    -----
    Exactly two of the constants, the others left out or their cells empty. Linear elastic, isotropic: rolled,
    extruded and printed materials often are not, and then no two constants give the third. Two constants that are
    each rounded may give a third that is far off: ν from E and G, and all from K near ν = 0.5.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_SHEAR("200 GPa", 0.25, "GPa")')
    80.0
    """
    given = (young, poissons_ratio, shear, bulk, lame, p_wave)
    return _constant("shear", given, branch)


@worksheet_function("MODULUS_BULK", valid=_LIMITS, conditions=_COMPRESSIBLE)
def bulk_modulus(
    young: Modulus | None = None,
    poissons_ratio: Ratio | None = None,
    shear: Modulus | None = None,
    bulk: Modulus | None = None,
    lame: Modulus | None = None,
    p_wave: Modulus | None = None,
    branch: Literal["positive", "negative"] | None = None,
) -> Modulus:
    r"""Bulk modulus from any two elastic constants of an isotropic material.

    .. math:: K = \frac{E}{3(1 - 2\nu)} = \frac{EG}{3(3G - E)} = \lambda + \frac{2G}{3} = \dots

    Parameters
    ----------
    young : modulus, optional
        Young's modulus E.
    poissons_ratio : ratio, optional
        Poisson's ratio ν.
    shear : modulus, optional
        Shear modulus G.
    bulk : modulus, optional
        Bulk modulus K.
    lame : modulus, optional
        Lamé's first constant λ; may be negative.
    p_wave : modulus, optional
        P-wave modulus M = λ + 2G, of a bar whose sides are held.
    branch : {"positive", "negative"}, optional
        Sign of Poisson's ratio: asked for with E and M alone, which two materials share.

    Returns
    -------
    modulus : modulus
        Bulk modulus: pressure from all sides for unit loss of volume.

    Notes
    -----
    Exactly two of the constants, the others left out or their cells empty. Linear elastic, isotropic: rolled,
    extruded and printed materials often are not, and then no two constants give the third. Two constants that are
    each rounded may give a third that is far off: ν from E and G, and all from K near ν = 0.5.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_BULK("210 GPa", , "78 GPa", "GPa")')
    227.5
    """
    given = (young, poissons_ratio, shear, bulk, lame, p_wave)
    return _constant("bulk", given, branch)


@worksheet_function("MODULUS_POISSON", valid=_LIMITS, conditions=_ANY)
def poissons_ratio_of(
    young: Modulus | None = None,
    poissons_ratio: Ratio | None = None,
    shear: Modulus | None = None,
    bulk: Modulus | None = None,
    lame: Modulus | None = None,
    p_wave: Modulus | None = None,
    branch: Literal["positive", "negative"] | None = None,
) -> Ratio:
    r"""Poisson's ratio from any two elastic constants of an isotropic material.

    .. math:: \nu = \frac{E}{2G} - 1 = \frac{3K - 2G}{2(3K + G)} = \frac{\lambda}{2(\lambda + G)} = \dots

    Parameters
    ----------
    young : modulus, optional
        Young's modulus E.
    poissons_ratio : ratio, optional
        Poisson's ratio ν.
    shear : modulus, optional
        Shear modulus G.
    bulk : modulus, optional
        Bulk modulus K.
    lame : modulus, optional
        Lamé's first constant λ; may be negative.
    p_wave : modulus, optional
        P-wave modulus M = λ + 2G, of a bar whose sides are held.
    branch : {"positive", "negative"}, optional
        Sign of Poisson's ratio: asked for with E and M alone, which two materials share.

    Returns
    -------
    ratio : ratio
        Poisson's ratio.

    Notes
    -----
    Exactly two of the constants, the others left out or their cells empty. Linear elastic, isotropic: rolled,
    extruded and printed materials often are not, and then no two constants give the third. Two constants that are
    each rounded may give a third that is far off: ν from E and G, and all from K near ν = 0.5.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_POISSON("208 GPa", , "80 GPa")')
    0.3
    """
    given = (young, poissons_ratio, shear, bulk, lame, p_wave)
    return _constant("poissons_ratio", given, branch)


@worksheet_function("MODULUS_LAME", valid=_LIMITS, conditions=_COMPRESSIBLE)
def lame_constant(
    young: Modulus | None = None,
    poissons_ratio: Ratio | None = None,
    shear: Modulus | None = None,
    bulk: Modulus | None = None,
    lame: Modulus | None = None,
    p_wave: Modulus | None = None,
    branch: Literal["positive", "negative"] | None = None,
) -> Modulus:
    r"""Lamé's first constant from any two elastic constants of an isotropic material.

    .. math:: \lambda = \frac{E\nu}{(1 + \nu)(1 - 2\nu)} = K - \frac{2G}{3} = M - 2G = \dots

    Parameters
    ----------
    young : modulus, optional
        Young's modulus E.
    poissons_ratio : ratio, optional
        Poisson's ratio ν.
    shear : modulus, optional
        Shear modulus G.
    bulk : modulus, optional
        Bulk modulus K.
    lame : modulus, optional
        Lamé's first constant λ; may be negative.
    p_wave : modulus, optional
        P-wave modulus M = λ + 2G, of a bar whose sides are held.
    branch : {"positive", "negative"}, optional
        Sign of Poisson's ratio: asked for with E and M alone, which two materials share.

    Returns
    -------
    modulus : modulus
        Lamé's first constant; negative where Poisson's ratio is. The second one is the shear modulus.

    Notes
    -----
    Exactly two of the constants, the others left out or their cells empty. Linear elastic, isotropic: rolled,
    extruded and printed materials often are not, and then no two constants give the third. Two constants that are
    each rounded may give a third that is far off: ν from E and G, and all from K near ν = 0.5.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_LAME("200 GPa", 0.25, "GPa")')
    80.0
    """
    given = (young, poissons_ratio, shear, bulk, lame, p_wave)
    return _constant("lame", given, branch)


@worksheet_function("MODULUS_P_WAVE", valid=_LIMITS, conditions=_COMPRESSIBLE)
def p_wave_modulus(
    young: Modulus | None = None,
    poissons_ratio: Ratio | None = None,
    shear: Modulus | None = None,
    bulk: Modulus | None = None,
    lame: Modulus | None = None,
    p_wave: Modulus | None = None,
    branch: Literal["positive", "negative"] | None = None,
) -> Modulus:
    r"""P-wave (constrained) modulus from any two elastic constants of an isotropic material.

    .. math:: M = \lambda + 2G = K + \frac{4G}{3} = \frac{E(1 - \nu)}{(1 + \nu)(1 - 2\nu)} = \dots

    Parameters
    ----------
    young : modulus, optional
        Young's modulus E.
    poissons_ratio : ratio, optional
        Poisson's ratio ν.
    shear : modulus, optional
        Shear modulus G.
    bulk : modulus, optional
        Bulk modulus K.
    lame : modulus, optional
        Lamé's first constant λ; may be negative.
    p_wave : modulus, optional
        P-wave modulus M = λ + 2G, of a bar whose sides are held.
    branch : {"positive", "negative"}, optional
        Sign of Poisson's ratio: asked for with E and M alone, which two materials share.

    Returns
    -------
    modulus : modulus
        P-wave modulus: stress over strain of a bar whose sides are held.

    Notes
    -----
    Exactly two of the constants, the others left out or their cells empty. Linear elastic, isotropic: rolled,
    extruded and printed materials often are not, and then no two constants give the third. Two constants that are
    each rounded may give a third that is far off: ν from E and G, and all from K near ν = 0.5.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_P_WAVE("200 GPa", 0.25, "GPa")')
    240.0
    """
    given = (young, poissons_ratio, shear, bulk, lame, p_wave)
    return _constant("p_wave", given, branch)
