"""Strains and stresses of the plies of a laminate under loads, moments and a change of temperature."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import (
    Angle,
    Curvature,
    Length,
    LineLoad,
    Modulus,
    Ratio,
    Strain,
    Stress,
    TemperatureChange,
    ThermalExpansion,
    column,
    of,
    row,
)
from doubler.catalogue.limits import AT_LEAST_ONE, condition
from doubler.mechanics.laminate import (
    LAMINATE,
    STIFF,
    THERMAL_TOGETHER,
    Laminate,
    free_strains,
    laminate,
    middle_strains,
    ply_strains,
    ply_stresses,
)

Angles: Any = column(Angle)
Lengths: Any = column(Length)
Moduli: Any = column(Modulus)
Ratios: Any = column(Ratio)
Forces: Any = column(LineLoad)
Moments: Any = column(of("moment_per_length"))
Expansions: Any = column(ThermalExpansion)
Place = Literal["lower", "middle", "upper"]
MiddleStrains: Any = row(Strain, "ex", "ey", "gxy")
Curvatures: Any = row(Curvature, "kx", "ky", "kxy")
PlyStrains: Any = row(Strain, "e1", "e2", "g12")
PlyStresses: Any = row(Stress, "s1", "s2", "t12")
_PLY = (
    condition(
        "ply is the number of a ply: a whole number up to the number of angles",
        lambda ply, angles: (ply == np.round(ply)) & (ply <= angles.shape[-1]),
    ),
)


def _places(stack: Laminate, place: str) -> Any:
    """Return z/h at that place of every ply."""
    lower, upper = stack.faces[..., :-1], stack.faces[..., 1:]
    return {"lower": lower, "middle": 0.5 * (lower + upper), "upper": upper}[place]


def _at(values: Any, ply: Any) -> Any:
    """Return the components of the chosen ply of each lane."""
    chosen = ply.astype(np.int64)[..., np.newaxis, np.newaxis] - 1
    lanes = np.broadcast_shapes(values.shape[:-2], chosen.shape[:-2])
    count = values.shape[-2]
    chosen = np.broadcast_to(np.clip(chosen, 0, count - 1), (*lanes, 1, 3))
    return np.take_along_axis(np.broadcast_to(values, (*lanes, count, 3)), chosen, axis=-2)[..., 0, :]


@worksheet_function("PLY_LAMINATE_STRAIN", valid=STIFF, conditions=(*LAMINATE, THERMAL_TOGETHER))
def laminate_strain(
    loads: Forces,
    moments: Moments,
    angles: Angles,
    thicknesses: Lengths,
    modulus_1: Moduli,
    modulus_2: Moduli,
    poissons_ratio: Ratios,
    shear_modulus: Moduli,
    materials: Ratios | None = None,
    expansion_1: Expansions | None = None,
    expansion_2: Expansions | None = None,
    temperature_change: TemperatureChange | None = None,
) -> MiddleStrains:
    r"""Strains of the middle plane of a laminate under loads, moments and a change of temperature.

    .. math:: \begin{bmatrix} \boldsymbol\varepsilon^0 \\ \boldsymbol\kappa \end{bmatrix} = \begin{bmatrix}
        \mathbf A & \mathbf B \\ \mathbf B & \mathbf D \end{bmatrix}^{-1} \begin{bmatrix} \mathbf N + \mathbf N^T
        \\ \mathbf M + \mathbf M^T \end{bmatrix}

    Parameters
    ----------
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
    strains : strain
        A row of ex, ey and the engineering shear strain gxy, with the thermal strain in them.

    Notes
    -----
    Classical lamination theory: thin, plies bonded, plane sections stay plane, linear elastic. z runs upwards from
    the middle of the laminate.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=PLY_LAMINATE_STRAIN({100;0;0},{0;0;0},{"deg";0;90},{1;1},150000,10000,0.3,5000,"N-mm")')
    [[0.001463917526, -5.489690722e-05, 0.0]]
    """
    stack = laminate(angles, thicknesses, modulus_1, modulus_2, poissons_ratio, shear_modulus, materials)
    free = free_strains(expansion_1, expansion_2, temperature_change, materials, angles.shape[-1])
    return middle_strains(stack, loads, moments, free)[..., :3]


@worksheet_function("PLY_LAMINATE_CURVATURE", valid=STIFF, conditions=(*LAMINATE, THERMAL_TOGETHER))
def laminate_curvature(
    loads: Forces,
    moments: Moments,
    angles: Angles,
    thicknesses: Lengths,
    modulus_1: Moduli,
    modulus_2: Moduli,
    poissons_ratio: Ratios,
    shear_modulus: Moduli,
    materials: Ratios | None = None,
    expansion_1: Expansions | None = None,
    expansion_2: Expansions | None = None,
    temperature_change: TemperatureChange | None = None,
) -> Curvatures:
    r"""Curvatures of a laminate under loads, moments and a change of temperature.

    .. math:: \boldsymbol\varepsilon(z) = \boldsymbol\varepsilon^0 + z\,\boldsymbol\kappa

    Parameters
    ----------
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
    curvatures : curvature
        A row of kx, ky and the twist kxy (of the engineering shear strain), positive where the upper face is longer.

    Notes
    -----
    Classical lamination theory: thin, plies bonded, plane sections stay plane, linear elastic. z runs upwards from
    the middle of the laminate.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=PLY_LAMINATE_CURVATURE({0;0;0},{100;0;0},{"deg";0;90},{1;1},150000,10000,0.3,5000,"N-mm")')
    [[0.004391752577, -0.0001646907216, 0.0]]
    """
    stack = laminate(angles, thicknesses, modulus_1, modulus_2, poissons_ratio, shear_modulus, materials)
    free = free_strains(expansion_1, expansion_2, temperature_change, materials, angles.shape[-1])
    return middle_strains(stack, loads, moments, free)[..., 3:] / stack.height


@worksheet_function("PLY_STRAIN", valid=STIFF | {"ply": AT_LEAST_ONE}, conditions=(*LAMINATE, *_PLY, THERMAL_TOGETHER))
def ply_strain(
    ply: Ratio,
    place: Place,
    loads: Forces,
    moments: Moments,
    angles: Angles,
    thicknesses: Lengths,
    modulus_1: Moduli,
    modulus_2: Moduli,
    poissons_ratio: Ratios,
    shear_modulus: Moduli,
    materials: Ratios | None = None,
    expansion_1: Expansions | None = None,
    expansion_2: Expansions | None = None,
    temperature_change: TemperatureChange | None = None,
) -> PlyStrains:
    r"""Strains of a ply of a laminate in its own axes, under loads, moments and a change of temperature.

    .. math:: \boldsymbol\varepsilon_{12} = \mathbf T_\varepsilon (\boldsymbol\varepsilon^0 + z\,\boldsymbol\kappa)

    Parameters
    ----------
    ply : ratio
        Number of the ply, 1 for the lowest; a column of numbers gives a row of results for each.
    place : choice
        lower, middle or upper: where in the thickness of the ply.
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
    strains : strain
        A row of e1 (along the fibres), e2 (across) and the engineering shear strain g12: total strains, the thermal
        strain in them.

    Notes
    -----
    Classical lamination theory: thin, plies bonded, plane sections stay plane, linear elastic. Free edges and holes,
    where stresses across the plies arise, are not in it.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=PLY_STRAIN(2,"upper",{100;0;0},{0;0;0},{"deg";0;90},{1;1},150000,10000,0.3,5000,"N-mm")')
    [[-5.489690722e-05, 0.003385309278, 0.0]]
    """
    stack = laminate(angles, thicknesses, modulus_1, modulus_2, poissons_ratio, shear_modulus, materials)
    free = free_strains(expansion_1, expansion_2, temperature_change, materials, angles.shape[-1])
    strains = ply_strains(stack, middle_strains(stack, loads, moments, free), _places(stack, place))
    return _at(strains, ply)


@worksheet_function("PLY_STRESS", valid=STIFF | {"ply": AT_LEAST_ONE}, conditions=(*LAMINATE, *_PLY, THERMAL_TOGETHER))
def ply_stress(
    ply: Ratio,
    place: Place,
    loads: Forces,
    moments: Moments,
    angles: Angles,
    thicknesses: Lengths,
    modulus_1: Moduli,
    modulus_2: Moduli,
    poissons_ratio: Ratios,
    shear_modulus: Moduli,
    materials: Ratios | None = None,
    expansion_1: Expansions | None = None,
    expansion_2: Expansions | None = None,
    temperature_change: TemperatureChange | None = None,
) -> PlyStresses:
    r"""Stresses of a ply of a laminate in its own axes, under loads, moments and a change of temperature.

    .. math:: \boldsymbol\sigma_{12} = \mathbf Q\left[\mathbf T_\varepsilon (\boldsymbol\varepsilon^0 +
        z\,\boldsymbol\kappa) - \boldsymbol\alpha\,\Delta T\right]

    Parameters
    ----------
    ply : ratio
        Number of the ply, 1 for the lowest; a column of numbers gives a row of results for each.
    place : choice
        lower, middle or upper: where in the thickness of the ply.
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
    stresses : stress
        A row of s1 (along the fibres), s2 (across), t12, tension positive.

    Notes
    -----
    Classical lamination theory: thin, plies bonded, plane sections stay plane, linear elastic. Free edges and holes,
    where stresses across the plies arise, are not in it.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=PLY_STRESS(2,"upper",{100;0;0},{0;0;0},{"deg";0;90},{1;1},150000,10000,0.3,5000,"N-mm")')
    [[1.932989691, 33.89175258, 0.0]]
    """
    stack = laminate(angles, thicknesses, modulus_1, modulus_2, poissons_ratio, shear_modulus, materials)
    free = free_strains(expansion_1, expansion_2, temperature_change, materials, angles.shape[-1])
    strains = ply_strains(stack, middle_strains(stack, loads, moments, free), _places(stack, place))
    return _at(ply_stresses(stack, strains, free), ply)
