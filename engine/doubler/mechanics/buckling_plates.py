"""Buckling of flat rectangular plates: coefficients from exact series, elastic stress, loads that act together."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Length, Modulus, Ratio, Stress
from doubler.catalogue.limits import AT_LEAST_ONE, NOT_NEGATIVE, POISSON, POSITIVE, between, condition
from doubler.mechanics.buckling_columns import ROUNDING
from doubler.mechanics.plate_modes import Held, compression_coefficient, plate_coefficient

Edges = Literal[
    "simply supported",
    "clamped",
    "clamped-simply supported",
    "simply supported-clamped",
    "simply supported-free",
    "free-simply supported",
    "clamped-free",
    "free-clamped",
]
AllEdges = Literal["simply supported", "clamped"]
_HELD: dict[str, Held] = {
    "simply supported": (1, 1),
    "clamped": (2, 2),
    "clamped-simply supported": (2, 1),
    "simply supported-clamped": (1, 2),
    "simply supported-free": (1, 0),
    "free-simply supported": (0, 1),
    "clamped-free": (2, 0),
    "free-clamped": (0, 2),
}
SHAPES = {"thickness": POSITIVE, "width": POSITIVE, "modulus": POSITIVE, "poissons_ratio": POISSON}
THIN = condition(
    "the plate is no thin plate: its width must be at least 10 times its thickness",
    lambda thickness, width: width >= 10.0 * thickness * (1.0 - 1e-9),
)


def plate_unit(thickness: Any, width: Any, modulus: Any, poissons_ratio: Any) -> Any:
    """Return the stress at k = 1: π²E/(12(1 − ν²)) (t/b)²."""
    return np.pi**2 * modulus / (12.0 * (1.0 - poissons_ratio**2)) * (thickness / width) ** 2


@worksheet_function(
    "BUCKLING_PLATE_K",
    valid={"aspect": between(0.05, 1000.0), "stress_ratio": between(-1.0, 1.0), "poissons_ratio": POISSON},
)
def coefficient(edges: Edges, aspect: Ratio, stress_ratio: Ratio = 1.0, poissons_ratio: Ratio = 0.3) -> Ratio:
    r"""Buckling coefficient of a rectangular plate in compression, in bending in its plane, or in both.

    .. math:: w = Y(y)\,\sin\frac{m \pi x}{a}, \quad k = \min_{m} k_m\left(\frac{a}{m b}\right), \quad
        \text{supported edges:}\ k = \min_m \left(\frac{m b}{a} + \frac{a}{m b}\right)^2

    Parameters
    ----------
    edges : choice
        The two edges along the load, the more compressed one named first: simply supported, clamped (both alike),
        clamped-simply supported, simply supported-clamped, simply supported-free, free-simply supported,
        clamped-free, free-clamped.
    aspect : ratio
        Length along the load over width, 0.05 to 1000.
    stress_ratio : ratio, optional
        Stress at the second edge over that at the first: 1 (even compression) where left out, -1 for pure bending.
    poissons_ratio : ratio, optional
        Poisson's ratio; 0.3 where left out. It counts only where an edge is free.

    Returns
    -------
    ratio : ratio
        Coefficient k of the larger compressive stress, for BUCKLING_PLATE with the width b.

    Notes
    -----
    The loaded edges are simply supported, so that the mode is exact along the load; across it is solved to about nine
    digits by Ritz's method with twelve polynomials. Flat, thin, elastic, isotropic.

    References
    ----------
    S. P. Timoshenko, J. M. Gere, Theory of Elastic Stability, sections 9.2 to 9.6 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_PLATE_K("simply supported", 3)')
    4.0
    """
    return compression_coefficient(_HELD[edges], aspect, stress_ratio, poissons_ratio)


@worksheet_function("BUCKLING_PLATE_K_SHEAR", valid={"aspect": between(1.0, 5.0)})
def coefficient_shear(edges: AllEdges, aspect: Ratio) -> Ratio:
    r"""Buckling coefficient of a rectangular plate in shear, from a double series.

    .. math:: w = \sum_{i,j} c_{ij}\, X_i(x)\, Y_j(y), \quad \delta(U - k\,W) = 0

    Parameters
    ----------
    edges : choice
        All four edges: simply supported or clamped.
    aspect : ratio
        Longer over shorter side, 1 to 5.

    Returns
    -------
    ratio : ratio
        Coefficient k of the shear stress, for BUCKLING_PLATE with the shorter side as width.

    Notes
    -----
    Ritz's method with 12 (beyond an aspect of 2: 18) by 9 polynomials: right to 0.01 % within these limits. For a
    longer plate use BUCKLING_PLATE_K_SHEAR_FIT. Flat, thin, elastic, isotropic.

    References
    ----------
    S. P. Timoshenko, J. M. Gere, Theory of Elastic Stability, section 9.7 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_PLATE_K_SHEAR("simply supported", 1)')
    9.324533333
    """
    return plate_coefficient(1 if edges == "simply supported" else 2, aspect, 0.0, 0.0, 1.0)


@worksheet_function("BUCKLING_PLATE_K_SHEAR_FIT", valid={"aspect": AT_LEAST_ONE})
def coefficient_shear_fit(edges: AllEdges, aspect: Ratio) -> Ratio:
    r"""Buckling coefficient of a rectangular plate in shear, by the usual parabola.

    .. math:: k = 5.34 + 4.00\left(\frac{b}{a}\right)^2 \ \text{or}\ 8.98 + 5.60\left(\frac{b}{a}\right)^2

    Parameters
    ----------
    edges : choice
        All four edges: simply supported (the first form) or clamped (the second).
    aspect : ratio
        Longer over shorter side a/b, at least 1.

    Returns
    -------
    ratio : ratio
        Coefficient k of the shear stress, for BUCKLING_PLATE with the shorter side as width.

    Notes
    -----
    A fit: with supported edges up to 0.8 % above the exact value near an aspect of 1.5 and 3 % below it at 2.
    BUCKLING_PLATE_K_SHEAR is exact up to an aspect of 5. Flat, thin, elastic, isotropic.

    References
    ----------
    G. Gerard, H. Becker, Handbook of Structural Stability, part I, NACA TN 3781 (1957) (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_PLATE_K_SHEAR_FIT("simply supported", 2)')
    6.34
    """
    long, short = (5.34, 4.0) if edges == "simply supported" else (8.98, 5.6)
    return long + short / aspect**2


@worksheet_function(
    "BUCKLING_PLATE",
    valid=SHAPES | {"coefficient": POSITIVE, "proportional_limit": POSITIVE},
    conditions=(
        THIN,
        condition(
            "the elastic buckling stress lies above the proportional limit, where it is unsafe; use "
            "BUCKLING_PLATE_PLASTIC",
            lambda coefficient, thickness, width, modulus, poissons_ratio, proportional_limit: (
                coefficient * plate_unit(thickness, width, modulus, poissons_ratio) <= ROUNDING * proportional_limit
            ),
        ),
    ),
)
def stress(
    coefficient: Ratio,
    thickness: Length,
    width: Length,
    modulus: Modulus,
    poissons_ratio: Ratio,
    proportional_limit: Stress,  # noqa: ARG001, judged by the condition
) -> Stress:
    r"""Elastic buckling stress of a flat plate from its coefficient; a magnitude.

    .. math:: \sigma_{cr} = k\,\frac{\pi^2 E}{12\,(1 - \nu^2)}\left(\frac{t}{b}\right)^2 \le \sigma_p

    Parameters
    ----------
    coefficient : ratio
        Coefficient k, from BUCKLING_PLATE_K, BUCKLING_PLATE_K_SHEAR or a chart that uses this formula.
    thickness : length
        Thickness.
    width : length
        Width to which the coefficient belongs: across the compression; in shear the shorter side.
    modulus : modulus
        Young's modulus in compression.
    poissons_ratio : ratio
        Poisson's ratio.
    proportional_limit : stress
        Stress up to which the material is linear; in shear that of shear, 1/√3 of the other by von Mises.

    Returns
    -------
    stress : stress
        Buckling stress, a positive magnitude: compression, or shear where the coefficient is for shear.

    Notes
    -----
    Some charts put π²/(12(1 − ν²)) into their coefficient (about 0.9 k): not to be mixed. Flat, thin, elastic,
    isotropic. A plate held on all edges may carry more than this load, buckled.

    References
    ----------
    S. P. Timoshenko, J. M. Gere, Theory of Elastic Stability, section 9.2 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_PLATE(4, "1.6 mm", "100 mm", "72 GPa", 0.3, "200 MPa", "MPa")')
    66.63609829
    """
    return coefficient * plate_unit(thickness, width, modulus, poissons_ratio)


def _factor(
    edges: str,
    compression: Any,
    bending: Any,
    shear: Any,
    length: Any,
    width: Any,
    thickness: Any,
    modulus: Any,
    poissons_ratio: Any,
) -> Any:
    unit = plate_unit(thickness, width, modulus, poissons_ratio)
    return plate_coefficient(
        1 if edges == "simply supported" else 2,
        length / width,
        compression / unit,
        bending / unit,
        np.abs(shear) / unit,
    )


def _elastic(
    edges: str,
    compression: Any,
    bending: Any,
    shear: Any,
    length: Any,
    width: Any,
    thickness: Any,
    modulus: Any,
    poissons_ratio: Any,
    proportional_limit: Any,
) -> Any:
    """Return where the von Mises stress at buckling lies within the proportional limit."""
    try:
        factor = _factor(edges, compression, bending, shear, length, width, thickness, modulus, poissons_ratio)
    except np.linalg.LinAlgError:
        return True  # other limits are broken, and are told
    return factor * np.sqrt((compression + bending) ** 2 + 3.0 * shear**2) <= ROUNDING * proportional_limit


@worksheet_function(
    "BUCKLING_PLATE_FACTOR",
    valid=SHAPES
    | {
        "compression": NOT_NEGATIVE,
        "bending": NOT_NEGATIVE,
        "length": POSITIVE,
        "proportional_limit": POSITIVE,
    },
    conditions=(
        THIN,
        condition(
            "the length must be 0.5 to 5 times the width; a longer plate buckles as its part of that length",
            lambda length, width: (length >= 0.5 * width * (1.0 - 1e-9)) & (length <= 5.0 * width * (1.0 + 1e-9)),
        ),
        condition(
            "there is no factor where no stress acts",
            lambda compression, bending, shear: (compression > 0.0) | (bending > 0.0) | (shear != 0.0),
        ),
        condition(
            "at this load the plate buckles beyond the proportional limit (von Mises), where the elastic factor is "
            "unsafe; use BUCKLING_PLATE_PLASTIC for each stress and MARGIN_INTERACTION_PAIR",
            _elastic,
        ),
    ),
)
def factor(
    edges: AllEdges,
    compression: Stress,
    bending: Stress,
    shear: Stress,
    length: Length,
    width: Length,
    thickness: Length,
    modulus: Modulus,
    poissons_ratio: Ratio,
    proportional_limit: Stress,  # noqa: ARG001, judged by the condition
) -> Ratio:
    r"""Factor on compression, bending and shear together at which a flat plate buckles, from a double series.

    .. math:: \delta\left(U - \mu\,(W_c + W_b + W_s)\right) = 0

    Parameters
    ----------
    edges : choice
        All four edges: simply supported or clamped.
    compression : stress
        Even compressive stress along the length, a positive magnitude; zero where there is none. A tension is left out,
        which is safe.
    bending : stress
        Stress of bending in the plane at the edges along the length, a positive magnitude.
    shear : stress
        Shear stress, of either sign.
    length : length
        Side along the compression.
    width : length
        Side across it, 1/5 to 2 times the length.
    thickness : length
        Thickness.
    modulus : modulus
        Young's modulus in compression.
    poissons_ratio : ratio
        Poisson's ratio.
    proportional_limit : stress
        Stress up to which the material is linear in compression.

    Returns
    -------
    ratio : ratio
        Reserve factor by proportional load: the margin is one less.

    Notes
    -----
    The exact interaction of this very plate, to about 0.02 %, without interaction exponents. Flat, thin, elastic,
    isotropic.

    References
    ----------
    S. P. Timoshenko, J. M. Gere, Theory of Elastic Stability, chapter 9 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_PLATE_FACTOR("clamped","10 MPa","0 MPa","0 MPa","0.2 m","0.2 m","2 mm","70 GPa",0.3,"0.2 GPa")')
    6.373453991
    """
    return _factor(edges, compression, bending, shear, length, width, thickness, modulus, poissons_ratio)
