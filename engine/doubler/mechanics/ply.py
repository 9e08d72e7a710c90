"""One ply in plane stress: its stiffness in its own axes and turned, invariants, strains and stresses."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Angle, Modulus, Ratio, Strain, Stress, row, square
from doubler.catalogue.limits import POSITIVE, Condition, condition
from doubler.mechanics.hooke import stacked
from doubler.mechanics.laminate import reduced, times, to_ply, turned

Stiffnesses: Any = square(Modulus, 3)
Invariants: Any = row(Modulus, "U1", "U2", "U3", "U4", "U5")
Moduli: Any = row(Modulus, "Ex", "Ey", "Gxy")
Strains: Any = row(Strain, "ex", "ey", "gxy")
Stresses: Any = row(Stress, "s1", "s2", "t12")
PLY = {"modulus_1": POSITIVE, "modulus_2": POSITIVE, "shear_modulus": POSITIVE}
STABLE_PLY: Condition = condition(
    "poissons_ratio is too large for a stable material: its magnitude must stay below √(E1/E2); see that ν12 and ν21 "
    "are not exchanged",
    lambda modulus_1, modulus_2, poissons_ratio: poissons_ratio**2 * modulus_2 < modulus_1,
)


@worksheet_function("PLY_STIFFNESS", valid=PLY, conditions=(STABLE_PLY,))
def stiffness(
    modulus_1: Modulus,
    modulus_2: Modulus,
    poissons_ratio: Ratio,
    shear_modulus: Modulus,
) -> Stiffnesses:
    r"""Reduced stiffness Q of a ply in plane stress, in its own axes, 3 by 3.

    .. math:: Q_{11} = \frac{E_1}{1 - \nu_{12}\nu_{21}}, \ Q_{22} = \frac{E_2}{1 - \nu_{12}\nu_{21}}, \ Q_{12} =
        \nu_{12} Q_{22}, \ Q_{66} = G_{12}

    Parameters
    ----------
    modulus_1 : modulus
        Young's modulus along the fibres.
    modulus_2 : modulus
        Young's modulus across the fibres.
    poissons_ratio : ratio
        Poisson's ratio ν12: contraction across under stress along the fibres.
    shear_modulus : modulus
        Shear modulus G12.

    Returns
    -------
    stiffnesses : modulus
        Three rows of three, in the order 1, 2, 12: stresses from strains (engineering shear).

    Notes
    -----
    Plane stress, linear elastic, orthotropic. :math:`\nu_{21} = \nu_{12} E_2/E_1`.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=PLY_STIFFNESS("150 GPa", "10 GPa", 0.3, "5 GPa", "GPa")')
    [[150.9054326, 3.018108652, 0.0],
     [3.018108652, 10.06036217, 0.0],
     [0.0, 0.0, 5.0]]
    """
    return reduced(modulus_1, modulus_2, poissons_ratio, shear_modulus)


@worksheet_function("PLY_STIFFNESS_TURNED", valid=PLY, conditions=(STABLE_PLY,))
def stiffness_turned(
    angle: Angle,
    modulus_1: Modulus,
    modulus_2: Modulus,
    poissons_ratio: Ratio,
    shear_modulus: Modulus,
) -> Stiffnesses:
    r"""Stiffness of a ply in plane stress in axes x, y to which its fibres are inclined, 3 by 3.

    .. math:: \bar{\mathbf Q} = \mathbf T_\varepsilon^{T}\,\mathbf Q\,\mathbf T_\varepsilon

    Parameters
    ----------
    angle : angle
        Angle from x to the fibres, counter-clockwise.
    modulus_1 : modulus
        Young's modulus along the fibres.
    modulus_2 : modulus
        Young's modulus across the fibres.
    poissons_ratio : ratio
        Poisson's ratio ν12: contraction across under stress along the fibres.
    shear_modulus : modulus
        Shear modulus G12.

    Returns
    -------
    stiffnesses : modulus
        Three rows of three, in the order x, y, xy: stresses from strains (engineering shear).

    Notes
    -----
    Plane stress, linear elastic, orthotropic.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=PLY_STIFFNESS_TURNED("90 deg", "150 GPa", "10 GPa", 0.3, "5 GPa", "GPa")')
    [[10.06036217, 3.018108652, 0.0],
     [3.018108652, 150.9054326, 0.0],
     [0.0, 0.0, 5.0]]
    """
    return turned(reduced(modulus_1, modulus_2, poissons_ratio, shear_modulus), angle)


@worksheet_function("PLY_INVARIANTS", valid=PLY, conditions=(STABLE_PLY,))
def invariants(
    modulus_1: Modulus,
    modulus_2: Modulus,
    poissons_ratio: Ratio,
    shear_modulus: Modulus,
) -> Invariants:
    r"""Invariants of a ply's stiffness: what is the same in all axes.

    .. math:: U_1 = \tfrac18(3 Q_{11} + 3 Q_{22} + 2 Q_{12} + 4 Q_{66}), \ U_2 = \tfrac12(Q_{11} - Q_{22}), \ U_3 =
        \tfrac18(Q_{11} + Q_{22} - 2 Q_{12} - 4 Q_{66})

    .. math:: U_4 = \tfrac18(Q_{11} + Q_{22} + 6 Q_{12} - 4 Q_{66}), \ U_5 = \tfrac18(Q_{11} + Q_{22} - 2 Q_{12} + 4
        Q_{66})

    Parameters
    ----------
    modulus_1 : modulus
        Young's modulus along the fibres.
    modulus_2 : modulus
        Young's modulus across the fibres.
    poissons_ratio : ratio
        Poisson's ratio ν12: contraction across under stress along the fibres.
    shear_modulus : modulus
        Shear modulus G12.

    Returns
    -------
    invariants : modulus
        A row of U1 to U5.

    Notes
    -----
    Plane stress, linear elastic, orthotropic. A quasi-isotropic laminate of such plies has the stiffnesses U1, U4 and
    the shear modulus U5.

    References
    ----------
    S. W. Tsai, N. J. Pagano, 1968; R. M. Jones, Mechanics of Composite Materials, section 2.7 (from memory).

    Examples
    --------
    >>> cell('=PLY_INVARIANTS("150 GPa", "10 GPa", 0.3, "5 GPa", "GPa")')
    [[63.6167002, 70.42253521, 16.86619718, 19.88430584, 21.86619718]]
    """
    q = reduced(modulus_1, modulus_2, poissons_ratio, shear_modulus)
    q11, q22, q12, q66 = q[..., 0, 0], q[..., 1, 1], q[..., 0, 1], q[..., 2, 2]
    return stacked(
        (3.0 * q11 + 3.0 * q22 + 2.0 * q12 + 4.0 * q66) / 8.0,
        0.5 * (q11 - q22),
        (q11 + q22 - 2.0 * q12 - 4.0 * q66) / 8.0,
        (q11 + q22 + 6.0 * q12 - 4.0 * q66) / 8.0,
        (q11 + q22 - 2.0 * q12 + 4.0 * q66) / 8.0,
    )


def _compliance(angle: Any, modulus_1: Any, modulus_2: Any, poissons_ratio: Any, shear_modulus: Any) -> Any:
    """Return strains in x, y from stresses in x, y, 3 × 3."""
    own = np.zeros((*np.broadcast_shapes(*map(np.shape, (modulus_1, modulus_2, poissons_ratio, shear_modulus))), 3, 3))
    own[..., 0, 0], own[..., 1, 1], own[..., 2, 2] = 1.0 / modulus_1, 1.0 / modulus_2, 1.0 / shear_modulus
    own[..., 0, 1] = own[..., 1, 0] = -poissons_ratio / modulus_1
    back = np.swapaxes(to_ply(-angle), -1, -2)
    return np.matmul(np.swapaxes(back, -1, -2), np.matmul(own, back))


@worksheet_function("PLY_MODULI_TURNED", valid=PLY, conditions=(STABLE_PLY,))
def moduli_turned(
    angle: Angle,
    modulus_1: Modulus,
    modulus_2: Modulus,
    poissons_ratio: Ratio,
    shear_modulus: Modulus,
) -> Moduli:
    r"""Young's moduli and shear modulus of a free ply in axes to which its fibres are inclined.

    .. math:: \frac{1}{E_x} = \frac{c^4}{E_1} + \left(\frac{1}{G_{12}} - \frac{2\nu_{12}}{E_1}\right) s^2 c^2 +
        \frac{s^4}{E_2}

    Parameters
    ----------
    angle : angle
        Angle from x to the fibres, counter-clockwise.
    modulus_1 : modulus
        Young's modulus along the fibres.
    modulus_2 : modulus
        Young's modulus across the fibres.
    poissons_ratio : ratio
        Poisson's ratio ν12: contraction across under stress along the fibres.
    shear_modulus : modulus
        Shear modulus G12.

    Returns
    -------
    moduli : modulus
        A row of Ex, Ey, Gxy: each under that one stress alone.

    Notes
    -----
    Plane stress, linear elastic, orthotropic. The ply shears under tension, and is free to do so.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=PLY_MODULI_TURNED("90 deg", "150 GPa", "10 GPa", 0.3, "5 GPa", "GPa")')
    [[10.0, 150.0, 5.0]]
    """
    compliance = _compliance(angle, modulus_1, modulus_2, poissons_ratio, shear_modulus)
    return 1.0 / np.diagonal(compliance, axis1=-2, axis2=-1)


@worksheet_function("PLY_STRAIN_TURNED", valid=PLY, conditions=(STABLE_PLY,))
def strain_turned(
    sigma_x: Stress,
    sigma_y: Stress,
    tau_xy: Stress,
    angle: Angle,
    modulus_1: Modulus,
    modulus_2: Modulus,
    poissons_ratio: Ratio,
    shear_modulus: Modulus,
) -> Strains:
    r"""Strains of a free ply in axes to which its fibres are inclined, from the stresses in them.

    .. math:: \boldsymbol\varepsilon_{xy} = \bar{\mathbf S}\,\boldsymbol\sigma_{xy}

    Parameters
    ----------
    sigma_x : stress
        Normal stress in x, tension positive.
    sigma_y : stress
        Normal stress in y, tension positive.
    tau_xy : stress
        Shear stress.
    angle : angle
        Angle from x to the fibres, counter-clockwise.
    modulus_1 : modulus
        Young's modulus along the fibres.
    modulus_2 : modulus
        Young's modulus across the fibres.
    poissons_ratio : ratio
        Poisson's ratio ν12: contraction across under stress along the fibres.
    shear_modulus : modulus
        Shear modulus G12.

    Returns
    -------
    strains : strain
        A row of ex, ey and the engineering shear strain gxy.

    Notes
    -----
    Plane stress, linear elastic, orthotropic, without thermal strain. For a ply in a laminate use PLY_STRAIN.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=PLY_STRAIN_TURNED("100 MPa","0 MPa","0 MPa","45 deg","150 GPa","10 GPa",0.3,"5 GPa","µε")')
    [[7566.666667, -2433.333333, -4666.666667]]
    """
    stresses = stacked(sigma_x, sigma_y, tau_xy)
    return times(_compliance(angle, modulus_1, modulus_2, poissons_ratio, shear_modulus), stresses)


@worksheet_function("PLY_STRESS_TURNED")
def stress_turned(sigma_x: Stress, sigma_y: Stress, tau_xy: Stress, angle: Angle) -> Stresses:
    r"""Stresses in a ply's own axes from those in axes to which its fibres are inclined.

    .. math:: \sigma_1 = c^2\sigma_x + s^2\sigma_y + 2 s c\,\tau_{xy}, \quad \tau_{12} = s c\,(\sigma_y - \sigma_x)
        + (c^2 - s^2)\,\tau_{xy}

    Parameters
    ----------
    sigma_x : stress
        Normal stress in x, tension positive.
    sigma_y : stress
        Normal stress in y, tension positive.
    tau_xy : stress
        Shear stress.
    angle : angle
        Angle from x to the fibres, counter-clockwise.

    Returns
    -------
    stresses : stress
        A row of s1 (along the fibres), s2 (across), t12.

    Notes
    -----
    Equilibrium alone: holds for any material in plane stress.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=PLY_STRESS_TURNED("100 MPa", "0 MPa", "0 MPa", "45 deg", "MPa")')
    [[50.0, 50.0, -50.0]]
    """
    return times(np.swapaxes(to_ply(-angle), -1, -2), stacked(sigma_x, sigma_y, tau_xy))
