"""Margins of loads that act together: interaction of ratios, always by the true proportional load."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Ratio, Values, X, column
from doubler.catalogue.limits import AT_LEAST_ONE, NOT_NEGATIVE, POSITIVE, condition
from doubler.mechanics.proportional import factor_on_all, factor_on_scaled

RatioColumn: Any = column(Ratio)

_LENGTHS = condition(
    "give one exponent a ratio, or one exponent for all",
    lambda ratios, exponents: exponents.shape[-1] in (1, ratios.shape[-1]),
)
_NO_LOAD = "there is no finite margin where every ratio is zero; a largest margin to be reported (cap) can be given"

Pair = Literal[
    "bolt tension and shear",
    "bolt tension and shear, squares",
    "plate compression and shear",
    "plate bending and shear",
    "plate bending and compression",
    "cylinder compression and torsion",
    "cylinder bending and torsion",
    "tube bending and torsion",
    "lug axial and transverse",
    "linear",
]
_EXPONENTS = {
    "bolt tension and shear": (2.0, 3.0),
    "bolt tension and shear, squares": (2.0, 2.0),
    "plate compression and shear": (1.0, 2.0),
    "plate bending and shear": (2.0, 2.0),
    "plate bending and compression": (1.75, 1.0),
    "cylinder compression and torsion": (1.0, 2.0),
    "cylinder bending and torsion": (1.5, 2.0),
    "tube bending and torsion": (2.0, 2.0),
    "lug axial and transverse": (1.6, 1.6),
    "linear": (1.0, 1.0),
}


def _capped(factor: Values, cap: Values) -> Values:
    return factor - 1.0 if cap is None else np.minimum(factor - 1.0, cap)


@worksheet_function(
    "MARGIN_INTERACTION",
    valid={"ratios": NOT_NEGATIVE, "exponents": POSITIVE, "cap": POSITIVE},
    conditions=(
        _LENGTHS,
        condition(_NO_LOAD, lambda ratios, cap: np.any(ratios > 0.0, axis=-1) | (cap is not None)),
    ),
)
def interaction(ratios: RatioColumn, exponents: RatioColumn, cap: Ratio | None = None) -> Ratio:
    r"""Margin of several loads acting together, by the factor on all that brings the interaction to one.

    .. math:: \sum_i \left(k R_i\right)^{e_i} = 1, \quad MS = k - 1

    Parameters
    ----------
    ratios : column of ratio
        Stress or load ratios, each applied × factors / allowable, none negative.
    exponents : column of ratio
        Exponent of each ratio; one value serves for all.
    cap : ratio, optional
        Largest margin to be reported; left out for none. Given, a zero load has this margin.

    Returns
    -------
    margin : ratio
        Margin of safety, :math:`k - 1`.

    Notes
    -----
    Solved for k, as the loads grow together in proportion. A short cut such as :math:`1/\sqrt{\sum R_i^{e_i}}
    - 1` is the same only where all exponents are 2, and can be far on the unsafe side elsewhere. Factors of
    safety belong in the ratios. A ratio that relieves (a negative one) is refused: leave it out, which is
    safe.

    References
    ----------
    F. R. Shanley, Strength of Materials; general exponents are common practice (from memory).

    Examples
    --------
    >>> cell('=MARGIN_INTERACTION({0.5;0.5}, {2;3})')
    0.5097553325
    """
    return _capped(factor_on_all(ratios, exponents), cap)


@worksheet_function(
    "MARGIN_INTERACTION_CONSTANT",
    valid={"ratios": NOT_NEGATIVE, "constant_ratios": NOT_NEGATIVE, "exponents": POSITIVE, "cap": POSITIVE},
    conditions=(
        _LENGTHS,
        condition(
            "give one constant ratio for each ratio that is scaled (zero where there is none)",
            lambda ratios, constant_ratios: constant_ratios.shape[-1] == ratios.shape[-1],
        ),
        condition(
            "the constant loads alone reach the interaction's limit; no factor on the others helps",
            lambda constant_ratios, exponents: (
                exponents.shape[-1] not in (1, constant_ratios.shape[-1])
                or np.sum(constant_ratios**exponents, axis=-1) < 1.0
            ),
        ),
        condition(_NO_LOAD, lambda ratios, cap: np.any(ratios > 0.0, axis=-1) | (cap is not None)),
    ),
)
def interaction_constant(
    ratios: RatioColumn, constant_ratios: RatioColumn, exponents: RatioColumn, cap: Ratio | None = None
) -> Ratio:
    r"""Margin of loads acting together, where one part of each stays constant and the other grows.

    .. math:: \sum_i \left(C_i + k R_i\right)^{e_i} = 1, \quad MS = k - 1

    Parameters
    ----------
    ratios : column of ratio
        Ratios of the loads that grow, applied × factors / allowable, none negative.
    constant_ratios : column of ratio
        Ratios of the loads that stay constant (preload, pressure), in the same order; zero where there is
        none.
    exponents : column of ratio
        Exponent of each ratio; one value serves for all.
    cap : ratio, optional
        Largest margin to be reported; left out for none. Given, a zero load has this margin.

    Returns
    -------
    margin : ratio
        Margin of safety on the loads that grow, :math:`k - 1`.

    Notes
    -----
    Constant and growing part of one ratio add, so both must act in one sense.

    References
    ----------
    Common practice.

    Examples
    --------
    >>> cell('=MARGIN_INTERACTION_CONSTANT({0.3;0.4}, {0.2;0}, {2;2})')
    0.7342340287
    """
    return _capped(factor_on_scaled(ratios, constant_ratios, exponents), cap)


@worksheet_function(
    "MARGIN_CONSTANT_LOAD",
    valid={
        "allowable": POSITIVE,
        "safety_factor": AT_LEAST_ONE,
        "constant_factor": AT_LEAST_ONE,
        "fitting_factor": AT_LEAST_ONE,
        "cap": POSITIVE,
    },
    conditions=(
        condition(
            "the constant load must act in the sense of the applied load; a load that relieves is not counted",
            lambda applied, constant: applied * constant >= 0.0,
        ),
        condition(
            "the constant load alone reaches the allowable; no factor on the applied load helps",
            lambda constant, allowable, constant_factor, fitting_factor: (
                np.abs(constant) * constant_factor * fitting_factor < allowable
            ),
        ),
        condition(
            "there is no finite margin at zero load; a largest margin to be reported (cap) can be given",
            lambda applied, cap: (applied != 0.0) | (cap is not None),
        ),
    ),
)
def constant_load(
    applied: X,
    constant: X,
    allowable: X,
    safety_factor: Ratio,
    constant_factor: Ratio = 1.0,
    fitting_factor: Ratio = 1.0,
    cap: Ratio | None = None,
) -> Ratio:
    r"""Margin of a load that grows beside one that stays constant, such as a preload or a pressure.

    .. math:: MS = \frac{R - FF \, f_c |C|}{FS \cdot FF \, |A|} - 1

    Parameters
    ----------
    applied : quantity
        Load or stress that grows, at limit load; taken by magnitude.
    constant : quantity
        Load or stress that stays constant, of the same sense; taken by magnitude.
    allowable : quantity
        Allowable of their sum, a positive magnitude.
    safety_factor : ratio
        Factor of safety on the applied load.
    constant_factor : ratio, optional
        Factor on the constant load; 1 where left out.
    fitting_factor : ratio, optional
        Fitting factor; 1 where left out.
    cap : ratio, optional
        Largest margin to be reported; left out for none. Given, a zero load has this margin.

    Returns
    -------
    margin : ratio
        Margin of safety on the load that grows.

    Notes
    -----
    A constant load of the opposite sense is refused: to count on its relief is the engineer's own decision.

    References
    ----------
    Common practice.

    Examples
    --------
    >>> cell('=MARGIN_CONSTANT_LOAD("10 kN", "20 kN", "50 kN", 1.5)')
    1.0
    """
    left = allowable - np.abs(constant) * constant_factor * fitting_factor
    return _capped(left / (safety_factor * fitting_factor * np.abs(applied)), cap)


@worksheet_function(
    "MARGIN_INTERACTION_PAIR",
    valid={"first": NOT_NEGATIVE, "second": NOT_NEGATIVE, "cap": POSITIVE},
    conditions=(
        condition(
            _NO_LOAD.replace("every ratio is", "both ratios are"),
            lambda first, second, cap: (first > 0.0) | (second > 0.0) | (cap is not None),
        ),
    ),
)
def interaction_pair(first: Ratio, second: Ratio, pair: Pair, cap: Ratio | None = None) -> Ratio:
    r"""Margin of two loads acting together, with the published exponents of a named pair.

    .. math:: \left(k R_1\right)^{e_1} + \left(k R_2\right)^{e_2} = 1, \quad MS = k - 1

    Parameters
    ----------
    first : ratio
        Ratio of the load that the pair names first, applied × factors / allowable.
    second : ratio
        Ratio of the load that the pair names second.
    pair : choice
        The pair: bolt tension and shear (2, 3), or with squares (2, 2); plate compression and shear (1, 2),
        bending and shear (2, 2), bending and compression (1.75, 1); cylinder compression and torsion (1, 2),
        bending and torsion (1.5, 2); tube bending and torsion (2, 2); lug axial and transverse (1.6, 1.6);
        linear (1, 1).
    cap : ratio, optional
        Largest margin to be reported; left out for none. Given, a zero load has this margin.

    Returns
    -------
    margin : ratio
        Margin of safety by proportional load.

    Notes
    -----
    Plates: flat, long, simply supported. Cylinders: thin, buckling. Tubes: round, strength. The exponents are
    fits to tests of such parts, and hold for no others.

    References
    ----------
    Bolts with exponents 2 and 3: J. A. Chambers, NASA TM-106943 (1995), equation (59). Plates, cylinders,
    tubes: E. F. Bruhn, Analysis and Design of Flight Vehicle Structures, chapters C4, C5, C8 (from memory).
    Lugs: F. P. Cozzone, M. A. Melcon and F. M. Hoblit, Analysis of lugs and shear pins (from memory).

    Examples
    --------
    >>> cell('=MARGIN_INTERACTION_PAIR(0.5, 0.5, "bolt tension and shear")')
    0.5097553325
    """
    shape = np.broadcast(first, second)
    ratios = np.stack([np.broadcast_to(first, shape.shape), np.broadcast_to(second, shape.shape)], axis=-1)
    return _capped(factor_on_all(ratios, np.array(_EXPONENTS[pair])), cap)


@worksheet_function(
    "MARGIN_INTERACTION_TUBE",
    valid={"compression": NOT_NEGATIVE, "bending": NOT_NEGATIVE, "torsion": NOT_NEGATIVE, "cap": POSITIVE},
    conditions=(
        condition(
            _NO_LOAD,
            lambda compression, bending, torsion, cap: (
                cap is not None or (compression > 0.0) | (bending > 0.0) | (torsion > 0.0)
            ),
        ),
    ),
)
def interaction_tube(compression: Ratio, bending: Ratio, torsion: Ratio, cap: Ratio | None = None) -> Ratio:
    r"""Margin of a round tube in compression, bending and torsion together.

    .. math:: R_c + \sqrt{R_b^2 + R_s^2} = 1, \quad MS = \frac{1}{R_c + \sqrt{R_b^2 + R_s^2}} - 1

    Parameters
    ----------
    compression : ratio
        Ratio of axial compression, factors included.
    bending : ratio
        Ratio of bending, factors included.
    torsion : ratio
        Ratio of torsional shear, factors included.
    cap : ratio, optional
        Largest margin to be reported; left out for none. Given, a zero load has this margin.

    Returns
    -------
    margin : ratio
        Margin of safety by proportional load (exact: every ratio is of the first degree).

    Notes
    -----
    Round tubes; bending amplified by the compression must be in the bending ratio.

    References
    ----------
    E. F. Bruhn, Analysis and Design of Flight Vehicle Structures, chapter C4 (from memory).

    Examples
    --------
    >>> cell('=MARGIN_INTERACTION_TUBE(0.2, 0.3, 0.4)')
    0.4285714286
    """
    return _capped(1.0 / (compression + np.sqrt(bending**2 + torsion**2)), cap)
