"""Failure of plies: reserve, index and mode of one ply, and of the first ply of a laminate to fail."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Ratio, ShearStrain, Strain, Stress, Text
from doubler.catalogue.limits import POSITIVE, Limit, between, condition
from doubler.mechanics.ply_criteria import MODES, criterion_modes, index_of, max_stress, mode_factors

Criterion = Literal["max stress", "Tsai-Hill", "Tsai-Wu", "Hashin"]
_STRENGTHS = {
    "tension_1": POSITIVE,
    "compression_1": POSITIVE,
    "tension_2": POSITIVE,
    "compression_2": POSITIVE,
    "shear": POSITIVE,
}
_LIMITS = _STRENGTHS | {
    "interaction": between(-1.0, 1.0, low_open=True, high_open=True),
    "shear_23": POSITIVE,
}
_STRESSED = condition(
    "there is no reserve where no stress acts",
    lambda sigma_1, sigma_2, tau_12: (sigma_1 != 0.0) | (sigma_2 != 0.0) | (tau_12 != 0.0),
)
_STRAINED = condition(
    "there is no reserve where no strain acts",
    lambda strain_1, strain_2, shear_strain: (strain_1 != 0.0) | (strain_2 != 0.0) | (shear_strain != 0.0),
)
_STRAIN_LIMITS = dict.fromkeys(
    _STRENGTHS,
    Limit(
        0.0,
        0.5,
        True,
        False,
        "must be above 0 and at most 0.5 (50 %); a bare number is a ratio: write its unit, such as %",
    ),
)
_NOTHING = (np.zeros(1), np.zeros(1), np.zeros(1))


def named_modes(criterion: str, factors: Any, plain: Any) -> Any:
    """Return the governing mode's name of each lane, from the factors of the modes on the last axis.

    `plain` are those of the greatest stress, which name the mode where a criterion knows none.
    """
    chosen = plain if criterion.startswith("Tsai") else factors
    return np.array(MODES, dtype=object)[np.argmin(chosen, axis=-1)]


@worksheet_function("PLY_RESERVE", valid=_LIMITS, conditions=(_STRESSED,))
def reserve(
    criterion: Criterion,
    sigma_1: Stress,
    sigma_2: Stress,
    tau_12: Stress,
    tension_1: Stress,
    compression_1: Stress,
    tension_2: Stress,
    compression_2: Stress,
    shear: Stress,
    interaction: Ratio = -0.5,
    shear_23: Stress | None = None,
) -> Ratio:
    r"""Factor on a ply's stresses together at which it fails, by a criterion of choice.

    .. math:: F(k\,\sigma_1,\ k\,\sigma_2,\ k\,\tau_{12}) = 1

    .. math:: \text{Tsai-Hill:}\ F = \frac{\sigma_1^2 - \sigma_1\sigma_2}{X^2} + \frac{\sigma_2^2}{Y^2} +
        \frac{\tau^2}{S^2}

    .. math:: \text{Tsai-Wu:}\ F = f_1\sigma_1 + f_2\sigma_2 + f_{11}\sigma_1^2 + f_{22}\sigma_2^2 + f_{66}\tau^2 +
        2 f_{12}\sigma_1\sigma_2

    Parameters
    ----------
    criterion : choice
        max stress, Tsai-Hill, Tsai-Wu or Hashin.
    sigma_1 : stress
        Stress along the fibres, tension positive.
    sigma_2 : stress
        Stress across the fibres, tension positive.
    tau_12 : stress
        Shear stress, of either sign.
    tension_1 : stress
        Strength Xt in tension along the fibres.
    compression_1 : stress
        Strength Xc in compression along the fibres, a positive magnitude.
    tension_2 : stress
        Strength Yt in tension across the fibres.
    compression_2 : stress
        Strength Yc in compression across the fibres, a positive magnitude.
    shear : stress
        Strength S in shear in the plane of the ply.
    interaction : ratio, optional
        Tsai-Wu's F12/√(F11 F22), between -1 and 1; -0.5 where left out. The other criteria do not use it.
    shear_23 : stress, optional
        Hashin's shear strength across the fibres (23); half of compression_2 where left out.

    Returns
    -------
    ratio : ratio
        Reserve factor k by proportional load: the margin is one less.

    Notes
    -----
    Tsai-Hill takes X and Y by the signs of the stresses. Hashin's modes of 1980 in plane stress: fibre tension (with
    shear), fibre compression, matrix tension, matrix compression. The root of the quadratic is taken, not the square
    root of the index.

    References
    ----------
    S. W. Tsai, E. M. Wu, 1971; Z. Hashin, 1980; A. K. Kaw, Mechanics of Composite Materials, section 2.8 (from memory).

    Examples
    --------
    >>> cell('=PLY_RESERVE("max stress","500 MPa","20 MPa","0 MPa","1500 MPa","1 GPa","50 MPa","200 MPa","70 MPa")')
    2.5
    """
    modes = criterion_modes(
        criterion, (tension_1, compression_1, tension_2, compression_2, shear), interaction, shear_23
    )
    return mode_factors(modes, _NOTHING, (sigma_1, sigma_2, tau_12)).min(axis=-1)


@worksheet_function("PLY_INDEX", valid=_LIMITS)
def index(
    criterion: Criterion,
    sigma_1: Stress,
    sigma_2: Stress,
    tau_12: Stress,
    tension_1: Stress,
    compression_1: Stress,
    tension_2: Stress,
    compression_2: Stress,
    shear: Stress,
    interaction: Ratio = -0.5,
    shear_23: Stress | None = None,
) -> Ratio:
    r"""Failure index of a ply by a criterion of choice: it fails where the index reaches one.

    .. math:: F(\sigma_1,\ \sigma_2,\ \tau_{12})

    Parameters
    ----------
    criterion : choice
        max stress, Tsai-Hill, Tsai-Wu or Hashin.
    sigma_1 : stress
        Stress along the fibres, tension positive.
    sigma_2 : stress
        Stress across the fibres, tension positive.
    tau_12 : stress
        Shear stress, of either sign.
    tension_1 : stress
        Strength Xt in tension along the fibres.
    compression_1 : stress
        Strength Xc in compression along the fibres, a positive magnitude.
    tension_2 : stress
        Strength Yt in tension across the fibres.
    compression_2 : stress
        Strength Yc in compression across the fibres, a positive magnitude.
    shear : stress
        Strength S in shear in the plane of the ply.
    interaction : ratio, optional
        Tsai-Wu's F12/√(F11 F22), between -1 and 1; -0.5 where left out. The other criteria do not use it.
    shear_23 : stress, optional
        Hashin's shear strength across the fibres (23); half of compression_2 where left out.

    Returns
    -------
    ratio : ratio
        Value of the criterion; for max stress the largest ratio of stress to strength.

    Notes
    -----
    An index is no ratio of loads (but for max stress): for a margin use PLY_RESERVE. Tsai-Wu's can be negative.

    References
    ----------
    S. W. Tsai, E. M. Wu, 1971; Z. Hashin, 1980; A. K. Kaw, Mechanics of Composite Materials, section 2.8 (from memory).

    Examples
    --------
    >>> cell('=PLY_INDEX("Tsai-Hill","500 MPa","20 MPa","0 MPa","1500 MPa","1 GPa","50 MPa","200 MPa","70 MPa")')
    0.2666666667
    """
    strengths = (tension_1, compression_1, tension_2, compression_2, shear)
    stress = (sigma_1, sigma_2, tau_12)
    if criterion == "max stress":
        along = np.maximum(sigma_1 / tension_1, -sigma_1 / compression_1)
        across = np.maximum(sigma_2 / tension_2, -sigma_2 / compression_2)
        return np.maximum(np.maximum(along, across), np.abs(tau_12) / shear)
    return index_of(criterion_modes(criterion, strengths, interaction, shear_23), stress)


@worksheet_function("PLY_MODE", valid=_LIMITS, conditions=(_STRESSED,))
def mode(
    criterion: Criterion,
    sigma_1: Stress,
    sigma_2: Stress,
    tau_12: Stress,
    tension_1: Stress,
    compression_1: Stress,
    tension_2: Stress,
    compression_2: Stress,
    shear: Stress,
    interaction: Ratio = -0.5,
    shear_23: Stress | None = None,
) -> Text:
    r"""How a ply fails as its stresses grow together: of the fibre, of the matrix, or in shear.

    .. math:: \arg\min_{\text{modes}} k

    Parameters
    ----------
    criterion : choice
        max stress, Tsai-Hill, Tsai-Wu or Hashin.
    sigma_1 : stress
        Stress along the fibres, tension positive.
    sigma_2 : stress
        Stress across the fibres, tension positive.
    tau_12 : stress
        Shear stress, of either sign.
    tension_1 : stress
        Strength Xt in tension along the fibres.
    compression_1 : stress
        Strength Xc in compression along the fibres, a positive magnitude.
    tension_2 : stress
        Strength Yt in tension across the fibres.
    compression_2 : stress
        Strength Yc in compression across the fibres, a positive magnitude.
    shear : stress
        Strength S in shear in the plane of the ply.
    interaction : ratio, optional
        As for PLY_RESERVE.
    shear_23 : stress, optional
        As for PLY_RESERVE.

    Returns
    -------
    mode : text
        fibre tension, fibre compression, matrix tension, matrix compression, or shear.

    Notes
    -----
    Tsai-Hill and Tsai-Wu know no modes: for them the stress nearest to its own strength names it. Hashin has no mode of
    shear alone: it counts to fibre or matrix.

    References
    ----------
    Z. Hashin, Failure Criteria for Unidirectional Fiber Composites, 1980 (from memory).

    Examples
    --------
    >>> cell('=PLY_MODE("Hashin","500 MPa","20 MPa","0 MPa","1500 MPa","1 GPa","50 MPa","200 MPa","70 MPa")')
    'matrix tension'
    """
    strengths = (tension_1, compression_1, tension_2, compression_2, shear)
    stress = (sigma_1, sigma_2, tau_12)
    factors = mode_factors(criterion_modes(criterion, strengths, interaction, shear_23), _NOTHING, stress)
    return named_modes(criterion, factors, mode_factors(max_stress(*strengths), _NOTHING, stress))


@worksheet_function("PLY_RESERVE_STRAIN", valid=_STRAIN_LIMITS, conditions=(_STRAINED,))
def reserve_strain(
    strain_1: Strain,
    strain_2: Strain,
    shear_strain: ShearStrain,
    tension_1: Strain,
    compression_1: Strain,
    tension_2: Strain,
    compression_2: Strain,
    shear: ShearStrain,
) -> Ratio:
    r"""Factor on a ply's strains together at which it fails, by the greatest strain.

    .. math:: k = \min\left(\frac{e_1}{\varepsilon_1},\ \frac{e_2}{\varepsilon_2},\ \frac{g}{|\gamma_{12}|}\right)

    Parameters
    ----------
    strain_1 : strain
        Strain along the fibres from load alone, extension positive.
    strain_2 : strain
        Strain across the fibres from load alone, extension positive.
    shear_strain : shear strain
        Engineering shear strain, of either sign.
    tension_1 : strain
        Strain at failure in tension along the fibres.
    compression_1 : strain
        Strain at failure in compression along the fibres, a positive magnitude.
    tension_2 : strain
        Strain at failure in tension across the fibres.
    compression_2 : strain
        Strain at failure in compression across the fibres, a positive magnitude.
    shear : shear strain
        Engineering shear strain at failure.

    Returns
    -------
    ratio : ratio
        Reserve factor k by proportional load: the margin is one less.

    Notes
    -----
    Each strain against its own limit; they do not act upon each other. A limit above 50 % is refused: it would be a
    number of ‰ or µε without its unit, and the reserve far too large. The free thermal strain is no cause of failure:
    take it off the total strains of PLY_STRAIN first.

    References
    ----------
    A. K. Kaw, Mechanics of Composite Materials, section 2.8 (from memory).

    Examples
    --------
    >>> cell('=PLY_RESERVE_STRAIN("3000 µε","-2 mm/m","0 µε","1 %","8 mm/m","4 mm/m","1.2 %","1.5 %")')
    3.333333333
    """
    strain = (strain_1, strain_2, shear_strain)
    modes = max_stress(tension_1, compression_1, tension_2, compression_2, shear)
    return mode_factors(modes, _NOTHING, strain).min(axis=-1)
