"""Margins of safety and reserve factors of one load against one allowable, strength and stiffness apart."""

from __future__ import annotations

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Ratio, Values, X
from doubler.catalogue.limits import AT_LEAST_ONE, POSITIVE, condition

_NO_LOAD = "there is no finite margin at zero load; give the largest margin to be reported (cap), if one is"
_FACTORS = {
    "safety_factor": AT_LEAST_ONE,
    "fitting_factor": AT_LEAST_ONE,
    "other_factor": AT_LEAST_ONE,
    "cap": POSITIVE,
}
_SIGNS = (
    condition("the allowable must not be zero", lambda allowable: np.min(allowable) > 0.0 or allowable != 0.0),
    condition(
        "a positive load stands against a negative (compressive) allowable; take the allowable of the load's own sign",
        # The usual case is settled by one look at the least allowable.
        lambda applied, allowable: np.min(allowable) > 0.0 or (allowable > 0.0) | (applied <= 0.0),
    ),
    condition(_NO_LOAD, lambda applied, cap: cap is not None or applied != 0.0),
)


def _margin(applied: Values, allowable: Values, factors: Values, cap: Values) -> Values:
    """Return allowable/(factors × applied) − 1 of magnitudes; only a cap makes it finite at zero load."""
    margin = np.abs(allowable / (factors * applied)) - 1.0  # the factors are positive
    return margin if cap is None else np.minimum(margin, cap)


@worksheet_function("MARGIN_STRENGTH", valid=_FACTORS, conditions=_SIGNS)
def strength(
    applied: X,
    allowable: X,
    safety_factor: Ratio,
    fitting_factor: Ratio = 1.0,
    other_factor: Ratio = 1.0,
    cap: Ratio | None = None,
) -> Ratio:
    r"""Margin of safety of a load, stress or strain against its allowable; negative means not strong enough.

    .. math:: MS = \frac{|R|}{FS \cdot FF \cdot f \, |A|} - 1

    Parameters
    ----------
    applied : quantity
        Applied load, stress or strain at limit load, factors not included; taken by magnitude.
    allowable : quantity
        Allowable of the same kind, taken by magnitude: a compressive one may stand as a positive magnitude
        (common practice) or with its sign.
    safety_factor : ratio
        Factor of safety on the applied load.
    fitting_factor : ratio, optional
        Fitting factor; 1 where left out.
    other_factor : ratio, optional
        Product of the other factors that multiply the applied load; 1 where left out.
    cap : ratio, optional
        Largest margin to be reported; left out for none. Given, a zero load has this margin.

    Returns
    -------
    margin : ratio
        Margin of safety; zero where the allowable is just reached.

    Notes
    -----
    Load and allowable are taken by magnitude, so that compressive and shear allowables can stand as positive
    magnitudes (common practice). A positive load against a negative allowable is refused; a compressive load
    against a tension allowable can't be told from its numbers: see MARGIN_BY_SIGN, which picks the allowable.
    A zero load has no finite margin and is refused, unless a cap is given.

    Right where stress grows in proportion to load. Factors below 1 are refused.

    References
    ----------
    NASA-STD-5001B, section 3.2 (definition, as publicly transcribed).

    Examples
    --------
    >>> cell('=MARGIN_STRENGTH("200 MPa", "450 MPa", 1.5)')
    0.5
    >>> cell('=MARGIN_STRENGTH("-20 kN", "45 kN", 1.5, 1.15)')
    0.3043478261
    """
    return _margin(applied, allowable, safety_factor * (fitting_factor * other_factor), cap)


@worksheet_function(
    "MARGIN_YIELD",
    valid={
        "yield_allowable": POSITIVE,
        "yield_factor": AT_LEAST_ONE,
        "fitting_factor": AT_LEAST_ONE,
        "other_factor": AT_LEAST_ONE,
        "cap": POSITIVE,
    },
    conditions=(condition(_NO_LOAD, lambda applied, cap: cap is not None or applied != 0.0),),
)
def yielding(
    applied: X,
    yield_allowable: X,
    yield_factor: Ratio,
    fitting_factor: Ratio = 1.0,
    other_factor: Ratio = 1.0,
    cap: Ratio | None = None,
) -> Ratio:
    r"""Margin of safety against yield (no detrimental permanent set) of a limit load.

    .. math:: MS_y = \frac{R_y}{FS_y \cdot FF \cdot f \, |A|} - 1

    Parameters
    ----------
    applied : quantity
        Load, stress or equivalent stress at limit load, factors not included; taken by magnitude.
    yield_allowable : quantity
        Yield allowable of the same kind, a positive magnitude.
    yield_factor : ratio
        Factor of safety for yield.
    fitting_factor : ratio, optional
        Fitting factor; 1 where left out.
    other_factor : ratio, optional
        Product of the other factors that multiply the applied load; 1 where left out.
    cap : ratio, optional
        Largest margin to be reported; left out for none. Given, a zero load has this margin.

    Returns
    -------
    margin : ratio
        Margin of safety against yield.

    Notes
    -----
    Against the yield allowable with the yield factor alone; the ultimate margin is a check of its own
    (MARGIN_ULTIMATE).

    References
    ----------
    NASA-STD-5001B, section 3.2 (definition, as publicly transcribed).

    Examples
    --------
    >>> cell('=MARGIN_YIELD("200 MPa", "345 MPa", 1.15)')
    0.5
    """
    return _margin(applied, yield_allowable, yield_factor * fitting_factor * other_factor, cap)


@worksheet_function(
    "MARGIN_ULTIMATE",
    valid={
        "ultimate_allowable": POSITIVE,
        "ultimate_factor": AT_LEAST_ONE,
        "fitting_factor": AT_LEAST_ONE,
        "other_factor": AT_LEAST_ONE,
        "cap": POSITIVE,
    },
    conditions=(condition(_NO_LOAD, lambda applied, cap: cap is not None or applied != 0.0),),
)
def ultimate(
    applied: X,
    ultimate_allowable: X,
    ultimate_factor: Ratio,
    fitting_factor: Ratio = 1.0,
    other_factor: Ratio = 1.0,
    cap: Ratio | None = None,
) -> Ratio:
    r"""Margin of safety against rupture or collapse of a limit load.

    .. math:: MS_u = \frac{R_u}{FS_u \cdot FF \cdot f \, |A|} - 1

    Parameters
    ----------
    applied : quantity
        Load or stress at limit load, factors not included; taken by magnitude.
    ultimate_allowable : quantity
        Ultimate allowable of the same kind, a positive magnitude.
    ultimate_factor : ratio
        Factor of safety for ultimate load; 1 where the load is an ultimate load already.
    fitting_factor : ratio, optional
        Fitting factor; 1 where left out.
    other_factor : ratio, optional
        Product of the other factors that multiply the applied load; 1 where left out.
    cap : ratio, optional
        Largest margin to be reported; left out for none. Given, a zero load has this margin.

    Returns
    -------
    margin : ratio
        Margin of safety against ultimate failure.

    Notes
    -----
    Against the ultimate allowable with the ultimate factor alone; the yield margin is a check of its own
    (MARGIN_YIELD).

    References
    ----------
    NASA-STD-5001B, section 3.2 (definition, as publicly transcribed).

    14 CFR 25.303: 1.5 on limit load unless otherwise specified.

    Examples
    --------
    >>> cell('=MARGIN_ULTIMATE("200 MPa", "450 MPa", 1.5)')
    0.5
    """
    return _margin(applied, ultimate_allowable, ultimate_factor * fitting_factor * other_factor, cap)


@worksheet_function(
    "MARGIN_STABILITY",
    valid={"critical": POSITIVE} | _FACTORS,
    conditions=(condition(_NO_LOAD, lambda applied, cap: cap is not None or applied != 0.0),),
)
def stability(
    applied: X,
    critical: X,
    safety_factor: Ratio,
    fitting_factor: Ratio = 1.0,
    other_factor: Ratio = 1.0,
    cap: Ratio | None = None,
) -> Ratio:
    r"""Margin of safety of a load or stress against the one at which the part buckles.

    .. math:: MS_s = \frac{R_{cr}}{FS \cdot FF \cdot f \, |A|} - 1

    Parameters
    ----------
    applied : quantity
        Load or stress that could make the part buckle; taken by magnitude (a tension, which can't, is so
        judged on the safe side).
    critical : quantity
        Buckling load or stress, a positive magnitude, knock-down included.
    safety_factor : ratio
        Factor of safety on the applied load.
    fitting_factor : ratio, optional
        Fitting factor; 1 where left out.
    other_factor : ratio, optional
        Product of the other factors that multiply the applied load; 1 where left out.
    cap : ratio, optional
        Largest margin to be reported; left out for none. Given, a zero load has this margin.

    Returns
    -------
    margin : ratio
        Margin of safety against buckling.

    Notes
    -----
    The load at buckling must include imperfection and plasticity where they matter.

    References
    ----------
    NASA-STD-5001B, section 3.2 (definition, as publicly transcribed).

    Examples
    --------
    >>> cell('=MARGIN_STABILITY("-40 kN", "90 kN", 1.5)')
    0.5
    """
    return _margin(applied, critical, safety_factor * (fitting_factor * other_factor), cap)


@worksheet_function(
    "MARGIN_BY_SIGN",
    valid={"tension_allowable": POSITIVE} | _FACTORS,
    conditions=(
        condition(
            "the compression allowable must not be zero",
            lambda compression_allowable: compression_allowable != 0.0,
        ),
        condition(_NO_LOAD, lambda applied, cap: cap is not None or applied != 0.0),
    ),
)
def by_sign(
    applied: X,
    tension_allowable: X,
    compression_allowable: X,
    safety_factor: Ratio,
    fitting_factor: Ratio = 1.0,
    other_factor: Ratio = 1.0,
    cap: Ratio | None = None,
) -> Ratio:
    r"""Margin of safety with the allowable chosen by the load's sign: tension positive, compression negative.

    .. math:: MS = \frac{R}{FS \cdot FF \cdot f \, |A|} - 1, \quad R = R_t \text{ if } A > 0, \; |R_c|
        \text{ if } A < 0

    Parameters
    ----------
    applied : quantity
        Load, stress or strain with its sign, tension positive; factors not included.
    tension_allowable : quantity
        Allowable in tension, positive.
    compression_allowable : quantity
        Allowable in compression, as a positive magnitude or with its negative sign.
    safety_factor : ratio
        Factor of safety on the applied load.
    fitting_factor : ratio, optional
        Fitting factor; 1 where left out.
    other_factor : ratio, optional
        Product of the other factors that multiply the applied load; 1 where left out.
    cap : ratio, optional
        Largest margin to be reported; left out for none. Given, a zero load has this margin.

    Returns
    -------
    margin : ratio
        Margin of safety against the allowable of the load's own sign.

    Notes
    -----
    The choice is made a value, so that a column of load cases with both signs is judged rightly.

    References
    ----------
    NASA-STD-5001B, section 3.2 (definition); choice by sign: common practice.

    Examples
    --------
    >>> cell('=MARGIN_BY_SIGN({"200 MPa";"-200 MPa"}, "450 MPa", "330 MPa", 1.5)')
    [[0.5], [0.1]]
    """
    chosen = np.where(applied > 0.0, tension_allowable, compression_allowable)
    return _margin(applied, chosen, safety_factor * (fitting_factor * other_factor), cap)


@worksheet_function("MARGIN_RESERVE_FACTOR", valid=_FACTORS | {"cap": AT_LEAST_ONE}, conditions=_SIGNS)
def reserve_factor(
    applied: X,
    allowable: X,
    safety_factor: Ratio,
    fitting_factor: Ratio = 1.0,
    other_factor: Ratio = 1.0,
    cap: Ratio | None = None,
) -> Ratio:
    r"""Reserve factor of a load against its allowable: margin of safety plus one.

    .. math:: RF = \frac{|R|}{FS \cdot FF \cdot f \, |A|}

    Parameters
    ----------
    applied : quantity
        Applied load, stress or strain at limit load, factors not included; taken by magnitude.
    allowable : quantity
        Allowable of the same kind, taken by magnitude: a compressive one may stand as a positive magnitude
        (common practice) or with its sign.
    safety_factor : ratio
        Factor of safety on the applied load.
    fitting_factor : ratio, optional
        Fitting factor; 1 where left out.
    other_factor : ratio, optional
        Product of the other factors that multiply the applied load; 1 where left out.
    cap : ratio, optional
        Largest reserve factor to be reported; left out for none. Given, a zero load has this one.

    Returns
    -------
    reserve_factor : ratio
        Reserve factor; below 1 means not strong enough.

    Notes
    -----
    Signs, zero load and factors as in MARGIN_STRENGTH.

    References
    ----------
    Common practice; NASA-STD-5001B, section 3.2, for the margin it belongs to.

    Examples
    --------
    >>> cell('=MARGIN_RESERVE_FACTOR("200 MPa", "450 MPa", 1.5)')
    1.5
    """
    reserve = np.abs(allowable) / (safety_factor * fitting_factor * other_factor * np.abs(applied))
    return reserve if cap is None else np.minimum(reserve, cap)


@worksheet_function(
    "MARGIN_STIFFNESS",
    valid={"limit": POSITIVE, "factor": AT_LEAST_ONE, "cap": POSITIVE},
    conditions=(
        condition(
            _NO_LOAD.replace("load", "deflection"),
            lambda deflection, cap: cap is not None or deflection != 0.0,
        ),
    ),
)
def stiffness(deflection: X, limit: X, factor: Ratio = 1.0, cap: Ratio | None = None) -> Ratio:
    r"""Margin of a deflection, rotation or strain against its limit; a check of stiffness, not of strength.

    .. math:: MS = \frac{\delta_{max}}{f \, |\delta|} - 1

    Parameters
    ----------
    deflection : quantity
        Deflection, angle or elongation under the load for which the limit is set; taken by magnitude.
    limit : quantity
        The largest one allowed, positive.
    factor : ratio, optional
        Factor on the deflection, where the requirement asks for one; 1 where left out.
    cap : ratio, optional
        Largest margin to be reported; left out for none. Given, a zero load has this margin.

    Returns
    -------
    margin : ratio
        Margin of stiffness.

    Notes
    -----
    Kept apart from margins of safety: a part that is stiff enough may be too weak, and the reverse.

    References
    ----------
    Common practice.

    Examples
    --------
    >>> cell('=MARGIN_STIFFNESS("1.6 mm", "2 mm")')
    0.25
    """
    return _margin(deflection, limit, factor, cap)
