"""The first ply of a laminate to fail: the factor on its loads, and which ply, where and how."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import (
    Angle,
    Length,
    LineLoad,
    Modulus,
    Ratio,
    Stress,
    TemperatureChange,
    Text,
    ThermalExpansion,
    column,
    of,
)
from doubler.catalogue.limits import POSITIVE, Refusal, condition
from doubler.mechanics.laminate import (
    LAMINATE,
    STIFF,
    THERMAL_TOGETHER,
    Laminate,
    free_strains,
    laminate,
    middle_strains,
    of_plies,
    ply_strains,
    ply_stresses,
)
from doubler.mechanics.ply_criteria import criterion_modes, max_strain, max_stress, mode_factors
from doubler.mechanics.ply_failure import named_modes

Angles: Any = column(Angle)
Lengths: Any = column(Length)
Moduli: Any = column(Modulus)
Ratios: Any = column(Ratio)
Stresses: Any = column(Stress)
Forces: Any = column(LineLoad)
Moments: Any = column(of("moment_per_length"))
Expansions: Any = column(ThermalExpansion)
Criterion = Literal["max stress", "max strain", "Tsai-Hill", "Tsai-Wu", "Hashin"]
_INTERACTION = -0.5
_LIMITS = STIFF | {"strengths": POSITIVE}
_CONDITIONS = (
    *LAMINATE,
    THERMAL_TOGETHER,
    condition(
        "there is no reserve where neither a load nor a moment acts",
        lambda loads, moments: np.any(loads != 0.0, axis=-1) | np.any(moments != 0.0, axis=-1),
    ),
)


def _strengths(strengths: Any, materials: Any, count: int) -> tuple[Any, Any, Any, Any, Any]:
    """Return Xt, Xc, Yt, Yc, S of every ply at both faces (plies twice over on the last axis)."""
    if strengths.shape[-1] % 5:
        have = f"strengths has {strengths.shape[-1]} entries"
        raise Refusal(f"{have}; give five a material: Xt, Xc, Yt, Yc, S, then those of the next")
    each = [of_plies(strengths[..., place::5], materials, count, "strengths") for place in range(5)]
    xt, xc, yt, yc, s = (np.concatenate([values, values], axis=-1) for values in each)
    return xt, xc, yt, yc, s


def _faces(stack: Laminate, middle: Any, free: Any) -> tuple[Any, Any, Any]:
    """Return the three stresses of all plies at their lower faces, then of all at their upper ones."""
    both = [
        ply_stresses(stack, ply_strains(stack, middle, place), free)
        for place in (stack.faces[..., :-1], stack.faces[..., 1:])
    ]
    stresses = np.concatenate(np.broadcast_arrays(*both), axis=-2)
    return stresses[..., 0], stresses[..., 1], stresses[..., 2]


def _factors(
    criterion: str,
    loads: Any,
    moments: Any,
    angles: Any,
    thicknesses: Any,
    modulus_1: Any,
    modulus_2: Any,
    poissons_ratio: Any,
    shear_modulus: Any,
    strengths: Any,
    materials: Any,
    expansion_1: Any,
    expansion_2: Any,
    temperature_change: Any,
) -> tuple[Any, Any]:
    """Return the factor of each mode at both faces of each ply, and those of the greatest stress."""
    count = angles.shape[-1]
    stack = laminate(angles, thicknesses, modulus_1, modulus_2, poissons_ratio, shear_modulus, materials)
    free = free_strains(expansion_1, expansion_2, temperature_change, materials, count)
    scaled = _faces(stack, middle_strains(stack, loads, moments, None), None)
    constant = (np.zeros(1), np.zeros(1), np.zeros(1))
    if free is not None:
        constant = _faces(stack, middle_strains(stack, None, None, free), free)
    given = _strengths(strengths, materials, count)
    if criterion == "max strain":
        ratio = np.concatenate([of_plies(poissons_ratio, materials, count, "poissons_ratio")] * 2, axis=-1)
        one, two = (
            np.concatenate([of_plies(values, materials, count, "modulus")] * 2, axis=-1)
            for values in (modulus_1, modulus_2)
        )
        modes = max_strain(*given, ratio, ratio * two / one)
    else:
        modes = criterion_modes(criterion, given, _INTERACTION, None)
    return mode_factors(modes, constant, scaled), mode_factors(max_stress(*given), constant, scaled)


@worksheet_function("PLY_FIRST_RESERVE", valid=_LIMITS, conditions=_CONDITIONS)
def first_reserve(
    criterion: Criterion,
    loads: Forces,
    moments: Moments,
    angles: Angles,
    thicknesses: Lengths,
    modulus_1: Moduli,
    modulus_2: Moduli,
    poissons_ratio: Ratios,
    shear_modulus: Moduli,
    strengths: Stresses,
    materials: Ratios | None = None,
    expansion_1: Expansions | None = None,
    expansion_2: Expansions | None = None,
    temperature_change: TemperatureChange | None = None,
) -> Ratio:
    r"""Factor on the loads and moments of a laminate at which its first ply fails.

    .. math:: \min_{\text{plies, faces, modes}} k: \quad F(\boldsymbol\sigma^T + k\,\boldsymbol\sigma^{N,M}) = 1

    Parameters
    ----------
    criterion : choice
        max stress, max strain, Tsai-Hill, Tsai-Wu or Hashin.
    loads : column of line load
        Forces per length Nx, Ny, Nxy, tension positive.
    moments : column of moment per length
        Moments per length Mx, My, Mxy, positive where they pull at the upper face.
    angles : column of angle
        Angle of each ply from x to its fibres, counter-clockwise, from the lowest ply upwards.
    thicknesses : column of length
        Thickness of each ply, in the same order.
    modulus_1 : column of modulus
        Young's modulus along the fibres: one for all plies, one a ply, or one a material.
    modulus_2 : column of modulus
        Young's modulus across the fibres, likewise.
    poissons_ratio : column of ratio
        Poisson's ratio ν12, likewise.
    shear_modulus : column of modulus
        Shear modulus G12, likewise.
    strengths : column of stress
        Strengths Xt, Xc (along the fibres), Yt, Yc (across), S (shear), positive magnitudes; then those of the next
        material or ply.
    materials : column of ratio, optional
        Material of each ply: 1 for the first entry of the constants, 2 for the second; left out where there is one
        material, or where the constants stand ply by ply.
    expansion_1 : column of thermal expansion, optional
        Coefficient of thermal expansion along the fibres, entries as of the other constants; left out for no change of
        temperature.
    expansion_2 : column of thermal expansion, optional
        Coefficient of thermal expansion across the fibres.
    temperature_change : temperature change, optional
        Change of temperature since the laminate was free of stress, heating positive; after a hot cure it is negative.

    Returns
    -------
    ratio : ratio
        Reserve factor k by proportional load: the margin is one less. Zero where the thermal stresses alone break a
        ply.

    Notes
    -----
    Loads and moments grow together, the thermal stresses stay. Both faces of every ply are looked at. max strain takes
    strength over modulus as limits; Tsai-Wu has F12/√(F11 F22) = -0.5, Hashin the shear strength across the fibres
    Yc/2. Classical lamination theory, linear elastic; free edges, holes and delamination are not in it.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapters 2 and 4; Z. Hashin, 1980 (from memory).

    Examples
    --------
    >>> cell('=PLY_FIRST_RESERVE("Hashin",{50;0;0},{9;0;0},"0 deg","2 mm",15e4,1e4,.3,5e3,{1500;1000;50;99;9},,"N-mm")')
    38.96103896
    """
    factors, _ = _factors(
        criterion,
        loads,
        moments,
        angles,
        thicknesses,
        modulus_1,
        modulus_2,
        poissons_ratio,
        shear_modulus,
        strengths,
        materials,
        expansion_1,
        expansion_2,
        temperature_change,
    )
    return factors.min(axis=(-2, -1))


@worksheet_function("PLY_FIRST_FAILURE", valid=_LIMITS, conditions=_CONDITIONS)
def first_failure(
    criterion: Criterion,
    loads: Forces,
    moments: Moments,
    angles: Angles,
    thicknesses: Lengths,
    modulus_1: Moduli,
    modulus_2: Moduli,
    poissons_ratio: Ratios,
    shear_modulus: Moduli,
    strengths: Stresses,
    materials: Ratios | None = None,
    expansion_1: Expansions | None = None,
    expansion_2: Expansions | None = None,
    temperature_change: TemperatureChange | None = None,
) -> Text:
    r"""Which ply of a laminate fails first as loads and moments grow together, at which face, and how.

    .. math:: \arg\min_{\text{plies, faces, modes}} k

    Parameters
    ----------
    criterion : choice
        max stress, max strain, Tsai-Hill, Tsai-Wu or Hashin.
    loads : column of line load
        Forces per length Nx, Ny, Nxy, tension positive.
    moments : column of moment per length
        Moments per length Mx, My, Mxy, positive where they pull at the upper face.
    angles : column of angle
        Angle of each ply from x to its fibres, counter-clockwise, from the lowest ply upwards.
    thicknesses : column of length
        Thickness of each ply, in the same order.
    modulus_1 : column of modulus
        Young's modulus along the fibres: one for all plies, one a ply, or one a material.
    modulus_2 : column of modulus
        Young's modulus across the fibres, likewise.
    poissons_ratio : column of ratio
        Poisson's ratio ν12, likewise.
    shear_modulus : column of modulus
        Shear modulus G12, likewise.
    strengths : column of stress
        Strengths Xt, Xc (along the fibres), Yt, Yc (across), S (shear), positive magnitudes; then those of the next
        material or ply.
    materials : column of ratio, optional
        Material of each ply: 1 for the first entry of the constants, 2 for the second; left out where there is one
        material, or where the constants stand ply by ply.
    expansion_1 : column of thermal expansion, optional
        Coefficient of thermal expansion along the fibres, entries as of the other constants; left out for no change of
        temperature.
    expansion_2 : column of thermal expansion, optional
        Coefficient of thermal expansion across the fibres.
    temperature_change : temperature change, optional
        Change of temperature since the laminate was free of stress, heating positive; after a hot cure it is negative.

    Returns
    -------
    failure : text
        Number of the ply (1 for the lowest), its face, and the mode.

    Notes
    -----
    As PLY_FIRST_RESERVE, which gives the factor. Of plies that fail together the lowest is named. For Tsai-Hill and
    Tsai-Wu, which know no modes, the stress that first reaches its own strength names it.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapters 2 and 4; Z. Hashin, 1980 (from memory).

    Examples
    --------
    >>> cell('=PLY_FIRST_FAILURE("Hashin",{50;0;0},{9;0;0},"0 deg","2 mm",15e4,1e4,.3,5e3,{1500;1000;50;99;9},,"N-mm")')
    'ply 1, upper face: fibre tension'
    """
    factors, plain = _factors(
        criterion,
        loads,
        moments,
        angles,
        thicknesses,
        modulus_1,
        modulus_2,
        poissons_ratio,
        shear_modulus,
        strengths,
        materials,
        expansion_1,
        expansion_2,
        temperature_change,
    )
    count = angles.shape[-1]
    order = np.arange(2 * count).reshape(2, count).T.reshape(-1)  # ply by ply, its lower face first
    least = factors.min(axis=-1)[..., order]
    first = np.argmax(least <= least.min(axis=-1, keepdims=True) * (1.0 + 1e-9), axis=-1)
    place = order[first][..., np.newaxis, np.newaxis]
    here, there = (np.take_along_axis(values, place, axis=-2)[..., 0, :] for values in (factors, plain))
    modes = named_modes(criterion, here, there)
    texts = [
        f"ply {at // 2 + 1}, {'upper' if at % 2 else 'lower'} face: {name}"
        for at, name in zip(first.reshape(-1), modes.reshape(-1), strict=True)
    ]
    return np.array(texts, dtype=object).reshape(first.shape)
