"""Elastic and short columns: end fixity, slenderness, Euler's load, Johnson's parabola."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import (
    Area,
    Force,
    Length,
    Modulus,
    Ratio,
    SecondMoment,
    Stress,
)
from doubler.catalogue.limits import NOT_NEGATIVE, POSITIVE, condition

Ends = Literal["pinned-pinned", "fixed-fixed", "fixed-pinned", "fixed-free", "fixed-guided", "pinned-guided"]
_END_FACTORS = {
    "pinned-pinned": 1.0,
    "fixed-fixed": 0.5,
    "fixed-pinned": np.pi / 4.493409457909064,
    "fixed-free": 2.0,
    "fixed-guided": 1.0,
    "pinned-guided": 2.0,
}
"""Effective over true length; 4.4934… is the first positive root of tan x = x."""

SIZES = {
    "length": POSITIVE,
    "second_moment": POSITIVE,
    "area": POSITIVE,
    "modulus": POSITIVE,
    "end_factor": POSITIVE,
}
_BEYOND = (
    "the elastic buckling stress lies above the proportional limit, where Euler's formula is unsafe; use "
    "BUCKLING_COLUMN (Johnson) or BUCKLING_TANGENT_STRESS"
)
ROUNDING = 1.0 + 1e-9


def euler_load(length: Any, second_moment: Any, modulus: Any, end_factor: Any) -> Any:
    """Return the elastic critical load of a column."""
    return np.pi**2 * modulus * second_moment / (end_factor * length) ** 2


def transition_squared(modulus: Any, yield_strength: Any) -> Any:
    """Return the square of the slenderness at which Johnson's parabola touches Euler's curve."""
    return 2.0 * np.pi**2 * modulus / yield_strength


def column_stress(squared: Any, modulus: Any, yield_strength: Any) -> Any:
    """Return Johnson's stress below the transition and Euler's above, from the square of the slenderness."""
    share = squared / transition_squared(modulus, yield_strength)
    return yield_strength * np.where(share < 1.0, 1.0 - 0.5 * share, 0.5 / np.maximum(share, 1.0))


@worksheet_function("BUCKLING_END_FACTOR")
def end_factor(ends: Ends) -> Ratio:
    r"""Effective length factor of a column from the fixity of its ends.

    .. math:: K = \frac{L_e}{L}

    Parameters
    ----------
    ends : choice
        pinned-pinned, fixed-fixed, fixed-pinned, fixed-free (a mast), fixed-guided or pinned-guided (guided: free to
        move sideways, held against turning).

    Returns
    -------
    ratio : ratio
        Effective over true length: 1, 0.5, 0.699, 2, 1 and 2.

    Notes
    -----
    Ideal ends. No real end is fully fixed: design codes take larger factors, such as 0.65 for fixed-fixed and 0.8 for
    fixed-pinned (common practice). The fixity coefficient of some handbooks is 1/K².

    References
    ----------
    S. P. Timoshenko, J. M. Gere, Theory of Elastic Stability, section 2.1 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_END_FACTOR("fixed-pinned")')
    0.6991556596
    """
    return np.array([_END_FACTORS[ends]])


@worksheet_function("BUCKLING_SLENDERNESS", valid={name: SIZES[name] for name in SIZES if name != "modulus"})
def slenderness(length: Length, second_moment: SecondMoment, area: Area, end_factor: Ratio = 1.0) -> Ratio:
    r"""Slenderness of a column: effective length over radius of gyration.

    .. math:: \lambda = \frac{K L}{r}, \quad r = \sqrt{I / A}

    Parameters
    ----------
    length : length
        Length between the supports against the bending looked at.
    second_moment : second moment
        Second moment of area about the axis of that bending.
    area : area
        Area of the section.
    end_factor : ratio, optional
        Effective over true length, from BUCKLING_END_FACTOR; 1 (pinned ends) where left out.

    Returns
    -------
    ratio : ratio
        Slenderness.

    Notes
    -----
    Uniform section. Take both principal axes, each with its own length and ends; the larger slenderness governs.

    References
    ----------
    J. M. Gere, Mechanics of Materials, chapter on columns (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_SLENDERNESS("2 m", "40000 mm^4", "400 mm^2", 0.5)')
    100.0
    """
    return end_factor * length * np.sqrt(area / second_moment)


@worksheet_function(
    "BUCKLING_EULER",
    valid=SIZES | {"proportional_limit": POSITIVE},
    conditions=(
        condition(
            _BEYOND,
            lambda length, second_moment, area, modulus, proportional_limit, end_factor: (
                euler_load(length, second_moment, modulus, end_factor) <= ROUNDING * proportional_limit * area
            ),
        ),
    ),
)
def euler(
    length: Length,
    second_moment: SecondMoment,
    area: Area,  # noqa: ARG001, judged by the condition
    modulus: Modulus,
    proportional_limit: Stress,  # noqa: ARG001, judged by the condition
    end_factor: Ratio = 1.0,
) -> Force:
    r"""Critical load of a slender elastic column, by Euler; a magnitude.

    .. math:: P_{cr} = \frac{\pi^2 E I}{(K L)^2}, \quad \frac{P_{cr}}{A} \le \sigma_p

    Parameters
    ----------
    length : length
        Length between the supports against the bending looked at.
    second_moment : second moment
        Second moment of area about the axis of that bending.
    area : area
        Area of the section; it serves the check of the stress alone.
    modulus : modulus
        Young's modulus in compression.
    proportional_limit : stress
        Stress up to which the material is linear in compression; half the yield strength is a usual choice for a
        rolled section (common practice).
    end_factor : ratio, optional
        Effective over true length, from BUCKLING_END_FACTOR; 1 (pinned ends) where left out.

    Returns
    -------
    force : force
        Critical compressive force, a positive magnitude.

    Notes
    -----
    Straight, centrally loaded, uniform, elastic; walls that do not cripple, no twisting (BUCKLING_TORSIONAL). Refused
    where the stress passes the proportional limit. It has no margin for crookedness: see BUCKLING_SECANT_LOAD.

    References
    ----------
    S. P. Timoshenko, J. M. Gere, Theory of Elastic Stability, section 2.1 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_EULER("2 m", "40000 mm^4", "400 mm^2", "70 GPa", "200 MPa", 1, "N")')
    6908.723081
    """
    return euler_load(length, second_moment, modulus, end_factor)


@worksheet_function(
    "BUCKLING_EULER_STRESS",
    valid={"slenderness": POSITIVE, "modulus": POSITIVE, "proportional_limit": POSITIVE},
    conditions=(
        condition(
            _BEYOND,
            lambda slenderness, modulus, proportional_limit: (
                np.pi**2 * modulus / slenderness**2 <= ROUNDING * proportional_limit
            ),
        ),
    ),
)
def euler_stress(
    slenderness: Ratio,
    modulus: Modulus,
    proportional_limit: Stress,  # noqa: ARG001, judged by the condition
) -> Stress:
    r"""Critical stress of a slender elastic column, by Euler; a magnitude.

    .. math:: \sigma_{cr} = \frac{\pi^2 E}{\lambda^2} \le \sigma_p

    Parameters
    ----------
    slenderness : ratio
        Effective length over radius of gyration, from BUCKLING_SLENDERNESS.
    modulus : modulus
        Young's modulus in compression.
    proportional_limit : stress
        Stress up to which the material is linear in compression.

    Returns
    -------
    stress : stress
        Critical compressive stress, a positive magnitude.

    Notes
    -----
    Straight, centrally loaded, uniform, elastic. Refused where the stress passes the proportional limit.

    References
    ----------
    S. P. Timoshenko, J. M. Gere, Theory of Elastic Stability, section 2.1 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_EULER_STRESS(100, "70 GPa", "200 MPa", "MPa")')
    69.08723081
    """
    return np.pi**2 * modulus / slenderness**2


@worksheet_function("BUCKLING_TRANSITION", valid={"modulus": POSITIVE, "yield_strength": POSITIVE})
def transition(modulus: Modulus, yield_strength: Stress) -> Ratio:
    r"""Slenderness at which Johnson's parabola passes into Euler's curve.

    .. math:: \lambda_1 = \sqrt{\frac{2 \pi^2 E}{\sigma_y}}

    Parameters
    ----------
    modulus : modulus
        Young's modulus in compression.
    yield_strength : stress
        Yield strength in compression, or the crippling stress of thin walls.

    Returns
    -------
    ratio : ratio
        Slenderness where both curves give half the yield strength, with one slope.

    Notes
    -----
    Below it a column is short (Johnson), above it slender (Euler).

    References
    ----------
    R. G. Budynas, J. K. Nisbett, Shigley's Mechanical Engineering Design, 9th edition, equation (4-45).

    Examples
    --------
    >>> cell('=BUCKLING_TRANSITION("210 GPa", "250 MPa")')
    128.766981
    """
    return np.sqrt(transition_squared(modulus, yield_strength))


@worksheet_function(
    "BUCKLING_COLUMN_STRESS", valid={"slenderness": NOT_NEGATIVE, "modulus": POSITIVE, "yield_strength": POSITIVE}
)
def stress(slenderness: Ratio, modulus: Modulus, yield_strength: Stress) -> Stress:
    r"""Critical stress of a column of any slenderness: Johnson's parabola, then Euler; a magnitude.

    .. math:: \sigma_{cr} = \sigma_y \left(1 - \frac{\sigma_y \lambda^2}{4 \pi^2 E}\right) \ \text{where}\ \lambda <
        \lambda_1, \quad \frac{\pi^2 E}{\lambda^2} \ \text{else}

    Parameters
    ----------
    slenderness : ratio
        Effective length over radius of gyration, from BUCKLING_SLENDERNESS.
    modulus : modulus
        Young's modulus in compression.
    yield_strength : stress
        Yield strength in compression, or the crippling stress of thin walls (BUCKLING_CRIPPLING).

    Returns
    -------
    stress : stress
        Critical compressive stress, a positive magnitude.

    Notes
    -----
    Straight, centrally loaded, uniform. The parabola is a fit to tests of short columns. Both curves meet at half
    the yield strength, so that Euler's is used where the material is linear; a material whose proportional limit is
    below half its yield strength needs BUCKLING_TANGENT_STRESS.

    References
    ----------
    R. G. Budynas, J. K. Nisbett, Shigley's Mechanical Engineering Design, 9th edition, equations (4-45), (4-46).

    Examples
    --------
    >>> cell('=BUCKLING_COLUMN_STRESS(60, "210 GPa", "250 MPa", "MPa")')
    222.8603972
    """
    return column_stress(slenderness**2, modulus, yield_strength)


@worksheet_function("BUCKLING_COLUMN", valid=SIZES | {"yield_strength": POSITIVE})
def column(
    length: Length,
    second_moment: SecondMoment,
    area: Area,
    modulus: Modulus,
    yield_strength: Stress,
    end_factor: Ratio = 1.0,
) -> Force:
    r"""Critical load of a column of any slenderness: Johnson's parabola, then Euler; a magnitude.

    .. math:: P_{cr} = A \sigma_y \left(1 - \frac{\sigma_y (K L / r)^2}{4 \pi^2 E}\right), \quad \text{or}\ \frac{\pi^2
        E I}{(K L)^2} \ \text{beyond the transition}

    Parameters
    ----------
    length : length
        Length between the supports against the bending looked at.
    second_moment : second moment
        Second moment of area about the axis of that bending.
    area : area
        Area of the section.
    modulus : modulus
        Young's modulus in compression.
    yield_strength : stress
        Yield strength in compression, or the crippling stress of thin walls (BUCKLING_CRIPPLING).
    end_factor : ratio, optional
        Effective over true length, from BUCKLING_END_FACTOR; 1 (pinned ends) where left out.

    Returns
    -------
    force : force
        Critical compressive force, a positive magnitude.

    Notes
    -----
    Straight, centrally loaded, uniform, no twisting. The curves meet at half the yield strength; a material whose
    proportional limit is below that needs BUCKLING_TANGENT_STRESS.

    References
    ----------
    R. G. Budynas, J. K. Nisbett, Shigley's Mechanical Engineering Design, 9th edition, equations (4-45), (4-46).

    Examples
    --------
    >>> cell('=BUCKLING_COLUMN("1.2 m", "40000 mm^4", "100 mm^2", "210 GPa", "250 MPa", 1, "kN")')
    22.28603972
    """
    squared = (end_factor * length) ** 2 * area / second_moment
    return area * column_stress(squared, modulus, yield_strength)
