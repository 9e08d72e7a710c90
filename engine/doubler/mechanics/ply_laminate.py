"""Stiffness of laminates: A, B and D, and the moduli of a plate that stretches or bends alike."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Angle, Force, Length, Modulus, Ratio, Stiffness, column, of, row, square
from doubler.mechanics.laminate import LAMINATE, STIFF, Laminate, laminate

Angles: Any = column(Angle)
Lengths: Any = column(Length)
Moduli: Any = column(Modulus)
Ratios: Any = column(Ratio)
Loading = Literal["in plane", "bending"]
StretchStiffnesses: Any = square(Stiffness, 3)
CoupledStiffnesses: Any = square(Force, 3)
BendingStiffnesses: Any = square(of("plate_stiffness"), 3)
EffectiveModuli: Any = row(Modulus, "Ex", "Ey", "Gxy")
EffectiveRatios: Any = row(Ratio, "nu_xy", "nu_yx")


@worksheet_function("PLY_LAMINATE_A", valid=STIFF, conditions=LAMINATE)
def stretching(
    angles: Angles,
    thicknesses: Lengths,
    modulus_1: Moduli,
    modulus_2: Moduli,
    poissons_ratio: Ratios,
    shear_modulus: Moduli,
    materials: Ratios | None = None,
) -> StretchStiffnesses:
    r"""Stiffness A of a laminate in its plane, 3 by 3.

    .. math:: A_{ij} = \sum_k \bar Q_{ij}^{(k)} (z_k - z_{k-1})

    Parameters
    ----------
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

    Returns
    -------
    stiffnesses : stiffness
        Three rows of three, in the order x, y, xy: forces per length from strains of the middle plane.

    Notes
    -----
    Classical lamination theory: thin, plies bonded, plane sections stay plane, linear elastic. z is measured from the
    middle of the laminate upwards; A does not depend on the order of the plies.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=PLY_LAMINATE_A({"deg";0;90},{1;1},150000,10000,0.3,5000,,"N-mm")')
    [[160965.7948, 6036.217304, 0.0],
     [6036.217304, 160965.7948, 0.0],
     [0.0, 0.0, 10000.0]]
    """
    stack = laminate(angles, thicknesses, modulus_1, modulus_2, poissons_ratio, shear_modulus, materials)
    return stack.block(0) * stack.height[..., np.newaxis]


@worksheet_function("PLY_LAMINATE_B", valid=STIFF, conditions=LAMINATE)
def coupling(
    angles: Angles,
    thicknesses: Lengths,
    modulus_1: Moduli,
    modulus_2: Moduli,
    poissons_ratio: Ratios,
    shear_modulus: Moduli,
    materials: Ratios | None = None,
) -> CoupledStiffnesses:
    r"""Stiffness B of a laminate that couples stretching and bending, 3 by 3.

    .. math:: B_{ij} = \tfrac12\sum_k \bar Q_{ij}^{(k)} (z_k^2 - z_{k-1}^2)

    Parameters
    ----------
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

    Returns
    -------
    stiffnesses : force
        Three rows of three, in the order x, y, xy: forces per length from curvatures, moments from strains.

    Notes
    -----
    Classical lamination theory: thin, plies bonded, plane sections stay plane, linear elastic. z is measured from the
    middle of the laminate upwards; B is zero where the stack is symmetric.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=PLY_LAMINATE_B({"deg";0;90},{1;1},150000,10000,0.3,5000,,"N-mm")')
    [[-70422.53521, 0.0, 0.0],
     [0.0, 70422.53521, 0.0],
     [0.0, 0.0, 0.0]]
    """
    stack = laminate(angles, thicknesses, modulus_1, modulus_2, poissons_ratio, shear_modulus, materials)
    return stack.block(1) * stack.height[..., np.newaxis] ** 2


@worksheet_function("PLY_LAMINATE_D", valid=STIFF, conditions=LAMINATE)
def bending(
    angles: Angles,
    thicknesses: Lengths,
    modulus_1: Moduli,
    modulus_2: Moduli,
    poissons_ratio: Ratios,
    shear_modulus: Moduli,
    materials: Ratios | None = None,
) -> BendingStiffnesses:
    r"""Stiffness D of a laminate in bending, 3 by 3.

    .. math:: D_{ij} = \tfrac13\sum_k \bar Q_{ij}^{(k)} (z_k^3 - z_{k-1}^3)

    Parameters
    ----------
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

    Returns
    -------
    stiffnesses : plate stiffness
        Three rows of three, in the order x, y, xy: moments per length from curvatures.

    Notes
    -----
    Classical lamination theory: thin, plies bonded, plane sections stay plane, linear elastic. z is measured from the
    middle of the laminate upwards; a laminate that is not symmetric bends more softly than D says.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=PLY_LAMINATE_D({"deg";0;90},{1;1},150000,10000,0.3,5000,,"N-mm")')
    [[53655.26492, 2012.072435, 0.0],
     [2012.072435, 53655.26492, 0.0],
     [0.0, 0.0, 3333.333333]]
    """
    stack = laminate(angles, thicknesses, modulus_1, modulus_2, poissons_ratio, shear_modulus, materials)
    return stack.block(2) * stack.height[..., np.newaxis] ** 3


def _diagonal_compliances(stack: Laminate, loading: str) -> Any:
    """Return the 3 × 3 compliance of that loading, made an even plate's modulus by its thickness."""
    whole = stack.compliance()
    return whole[..., :3, :3] if loading == "in plane" else whole[..., 3:, 3:] / 12.0


@worksheet_function("PLY_LAMINATE_MODULI", valid=STIFF, conditions=LAMINATE)
def moduli(
    loading: Loading,
    angles: Angles,
    thicknesses: Lengths,
    modulus_1: Moduli,
    modulus_2: Moduli,
    poissons_ratio: Ratios,
    shear_modulus: Moduli,
    materials: Ratios | None = None,
) -> EffectiveModuli:
    r"""Effective Young's moduli and shear modulus of a laminate: those of an even plate of its thickness.

    .. math:: E_x = \frac{1}{h\,a_{11}}, \ E_y = \frac{1}{h\,a_{22}}, \ G_{xy} = \frac{1}{h\,a_{66}};
        \quad E_x^b = \frac{12}{h^3 d_{11}}, \ \dots

    Parameters
    ----------
    loading : choice
        in plane, or bending.
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

    Returns
    -------
    moduli : modulus
        A row of Ex, Ey, Gxy.

    Notes
    -----
    Classical lamination theory: thin, plies bonded, plane sections stay plane, linear elastic. a and d are blocks
    of the inverse of the whole 6 × 6 matrix: a laminate that is not symmetric is free to bend as it is stretched.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=PLY_LAMINATE_MODULI("in plane",{"deg";0;90;90;0},{1;1;1;1},150000,10000,0.3,5000,,"N-mm")')
    [[80369.71831, 80369.71831, 5000.0]]
    """
    stack = laminate(angles, thicknesses, modulus_1, modulus_2, poissons_ratio, shear_modulus, materials)
    return 1.0 / np.diagonal(_diagonal_compliances(stack, loading), axis1=-2, axis2=-1)


@worksheet_function("PLY_LAMINATE_POISSON", valid=STIFF, conditions=LAMINATE)
def poisson(
    loading: Loading,
    angles: Angles,
    thicknesses: Lengths,
    modulus_1: Moduli,
    modulus_2: Moduli,
    poissons_ratio: Ratios,
    shear_modulus: Moduli,
    materials: Ratios | None = None,
) -> EffectiveRatios:
    r"""Effective Poisson's ratios of a laminate, in its plane or in bending.

    .. math:: \nu_{xy} = -\frac{a_{12}}{a_{11}}, \quad \nu_{yx} = -\frac{a_{12}}{a_{22}}

    Parameters
    ----------
    loading : choice
        in plane, or bending.
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

    Returns
    -------
    ratios : ratio
        A row of nu_xy (contraction in y under load in x) and nu_yx.

    Notes
    -----
    Classical lamination theory: thin, plies bonded, plane sections stay plane, linear elastic. They may pass one
    half, or be negative. A laminate that is not symmetric is free to bend as it is stretched.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 4 (from memory).

    Examples
    --------
    >>> cell('=PLY_LAMINATE_POISSON("in plane",{"deg";45;-45},{"mm";1;1},{"GPa";150},{"GPa";10},0.3,{"GPa";5})')
    [[0.5603008003, 0.5603008003]]
    """
    compliance = _diagonal_compliances(
        laminate(angles, thicknesses, modulus_1, modulus_2, poissons_ratio, shear_modulus, materials), loading
    )
    crossed = -compliance[..., 0, 1]
    return np.stack([crossed / compliance[..., 0, 0], crossed / compliance[..., 1, 1]], axis=-1)
