"""Equivalent stresses of brittle materials in plane stress, compared with the strength in tension."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Stress
from doubler.catalogue.limits import POSITIVE, condition
from doubler.mechanics import plane_stress
from doubler.mechanics.tensor_stress import second_deviatoric

_STRENGTHS = {"tensile_strength": POSITIVE, "compressive_strength": POSITIVE}
STRONGER_PRESSED = condition(
    "compressive_strength must not be below tensile_strength; give both as positive numbers",
    lambda tensile_strength, compressive_strength: compressive_strength >= tensile_strength,
)


def _outer(sigma_x: Any, sigma_y: Any, tau_xy: Any) -> tuple[Any, Any]:
    """Return the largest and the smallest of the two in-plane principal stresses and the zero across the plane."""
    largest = plane_stress.principal_max.kernel(sigma_x, sigma_y, tau_xy)
    smallest = plane_stress.principal_min.kernel(sigma_x, sigma_y, tau_xy)
    return np.maximum(largest, 0.0), np.minimum(smallest, 0.0)


@worksheet_function("STRESS_RANKINE", valid=_STRENGTHS, conditions=(STRONGER_PRESSED,))
def rankine(
    sigma_x: Stress, sigma_y: Stress, tau_xy: Stress, tensile_strength: Stress, compressive_strength: Stress
) -> Stress:
    r"""Equivalent stress by the largest normal stress (Rankine), in plane stress.

    .. math:: \sigma_R = \max\left(\sigma_1,\ -\frac{S_t}{S_c}\sigma_3\right), \quad \sigma_1 \ge 0 \ge
        \sigma_3

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress on the x face in the y direction.
    tensile_strength : stress
        Ultimate strength in tension.
    compressive_strength : stress
        Ultimate strength in compression, as a positive number.

    Returns
    -------
    stress : stress
        Equivalent stress, not negative.

    Notes
    -----
    Compare with tensile_strength. For brittle materials; where one principal stress pulls and the other
    presses harder it is unsafe: take STRESS_COULOMB_MOHR or STRESS_MODIFIED_MOHR there.

    References
    ----------
    W. J. M. Rankine, 1857; Hibbeler, Mechanics of Materials, section 10.7 (from memory).

    Examples
    --------
    >>> cell('=STRESS_RANKINE("0 MPa", "0 MPa", "100 MPa", "200 MPa", "600 MPa", "MPa")')
    100.0
    """
    pull, push = _outer(sigma_x, sigma_y, tau_xy)
    return np.maximum(pull, -push * (tensile_strength / compressive_strength))


@worksheet_function("STRESS_COULOMB_MOHR", valid=_STRENGTHS, conditions=(STRONGER_PRESSED,))
def coulomb_mohr(
    sigma_x: Stress, sigma_y: Stress, tau_xy: Stress, tensile_strength: Stress, compressive_strength: Stress
) -> Stress:
    r"""Equivalent stress by Coulomb and Mohr, in plane stress.

    .. math:: \sigma_{CM} = \sigma_1 - \frac{S_t}{S_c}\sigma_3, \quad \sigma_1 \ge 0 \ge \sigma_3

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress on the x face in the y direction.
    tensile_strength : stress
        Strength in tension.
    compressive_strength : stress
        Strength in compression, as a positive number.

    Returns
    -------
    stress : stress
        Equivalent stress, not negative.

    Notes
    -----
    Compare with tensile_strength. σ₁ and σ₃ are the largest and the smallest of the two in-plane principal
    stresses and of the zero across the plane. With equal strengths it is the Tresca stress. For brittle
    materials it is on the safe side of tests (common practice).

    References
    ----------
    Budynas, Nisbett, Shigley's Mechanical Engineering Design, sections 5-6 and 5-9 (from memory).

    Examples
    --------
    >>> cell('=STRESS_COULOMB_MOHR("0 MPa", "0 MPa", "210 MPa", "300 MPa", "700 MPa", "MPa")')
    300.0
    """
    pull, push = _outer(sigma_x, sigma_y, tau_xy)
    return pull - push * (tensile_strength / compressive_strength)


@worksheet_function("STRESS_MODIFIED_MOHR", valid=_STRENGTHS, conditions=(STRONGER_PRESSED,))
def modified_mohr(
    sigma_x: Stress, sigma_y: Stress, tau_xy: Stress, tensile_strength: Stress, compressive_strength: Stress
) -> Stress:
    r"""Equivalent stress by the modified Mohr criterion, in plane stress.

    .. math:: \sigma_{MM} = \max\left(\sigma_1,\ \left(1 - \frac{S_t}{S_c}\right)\sigma_1 -
        \frac{S_t}{S_c}\sigma_3\right), \quad \sigma_1 \ge 0 \ge \sigma_3

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress on the x face in the y direction.
    tensile_strength : stress
        Ultimate strength in tension.
    compressive_strength : stress
        Ultimate strength in compression, as a positive number.

    Returns
    -------
    stress : stress
        Equivalent stress, not negative.

    Notes
    -----
    Compare with tensile_strength. For brittle cast materials; follows tests closer than STRESS_COULOMB_MOHR,
    and so with less reserve. The second term governs where the material is pressed harder than pulled.

    References
    ----------
    Budynas, Nisbett, Shigley's Mechanical Engineering Design, section 5-9, equations 5-32a to c (from memory).

    Examples
    --------
    >>> cell('=STRESS_MODIFIED_MOHR("100 MPa", "-300 MPa", "0 MPa", "200 MPa", "600 MPa", "MPa")')
    166.6666667
    """
    pull, push = _outer(sigma_x, sigma_y, tau_xy)
    ratio = tensile_strength / compressive_strength
    return np.maximum(pull, (1.0 - ratio) * pull - ratio * push)


@worksheet_function("STRESS_DRUCKER_PRAGER", valid=_STRENGTHS, conditions=(STRONGER_PRESSED,))
def drucker_prager(
    sigma_x: Stress,
    sigma_y: Stress,
    sigma_z: Stress,
    tau_xy: Stress,
    tau_yz: Stress,
    tau_zx: Stress,
    tensile_strength: Stress,
    compressive_strength: Stress,
) -> Stress:
    r"""Equivalent stress by Drucker and Prager of a three-dimensional state.

    .. math:: \sigma_{DP} = \max\left(\tfrac12\left[\left(1 + \frac{S_t}{S_c}\right)\sqrt{3 J_2} +
        \left(1 - \frac{S_t}{S_c}\right) I_1\right],\ 0\right)

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    sigma_z : stress
        Normal stress on the z face, tension positive.
    tau_xy : stress
        Shear stress on the x face in the y direction.
    tau_yz : stress
        Shear stress on the y face in the z direction.
    tau_zx : stress
        Shear stress on the z face in the x direction.
    tensile_strength : stress
        Strength in tension.
    compressive_strength : stress
        Strength in compression, as a positive number.

    Returns
    -------
    stress : stress
        Equivalent stress, not negative; zero where pressure alone keeps the state safe.

    Notes
    -----
    Compare with tensile_strength. The cone through both uniaxial strengths. It has no end in hydrostatic
    compression, and is unsafe for strongly unlike strengths under two equal pressures. With equal strengths
    it is the von Mises stress.

    References
    ----------
    D. C. Drucker, W. Prager, Quarterly of Applied Mathematics 10, 1952 (from memory).

    Examples
    --------
    >>> cell('=STRESS_DRUCKER_PRAGER("-60 MPa","0 MPa","0 MPa","0 MPa","0 MPa","0 MPa","20 MPa","60 MPa","MPa")')
    20.0
    """
    ratio = tensile_strength / compressive_strength
    mises = np.sqrt(3.0 * second_deviatoric(sigma_x, sigma_y, sigma_z, tau_xy, tau_yz, tau_zx))
    return np.maximum(0.5 * ((1.0 + ratio) * mises + (1.0 - ratio) * (sigma_x + sigma_y + sigma_z)), 0.0)
