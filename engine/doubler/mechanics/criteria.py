"""Equivalent stresses of ductile materials: von Mises and Tresca, in plane stress and in three dimensions."""

from __future__ import annotations

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Stress
from doubler.mechanics import plane_stress
from doubler.mechanics.tensor_stress import principal_values, second_deviatoric


@worksheet_function("STRESS_VON_MISES")
def von_mises(sigma_x: Stress, sigma_y: Stress, tau_xy: Stress) -> Stress:
    r"""Von Mises equivalent stress in plane stress.

    .. math:: \sigma_{vM} = \sqrt{\sigma_x^2 - \sigma_x\sigma_y + \sigma_y^2 + 3\tau_{xy}^2}

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress on the x face in the y direction.

    Returns
    -------
    stress : stress
        Equivalent stress, not negative.

    Notes
    -----
    Compare with the yield strength in tension. For ductile materials that yield equally in tension and
    compression; it says nothing of brittle fracture, of buckling or of fatigue.

    References
    ----------
    R. von Mises, 1913; R. G. Budynas, J. K. Nisbett, Shigley's Mechanical Engineering Design, section 5-5
    (from memory).

    Examples
    --------
    >>> cell('=STRESS_VON_MISES("80 MPa", "-40 MPa", "25 MPa", "MPa")')
    114.3459663
    """
    return np.sqrt(sigma_x * (sigma_x - sigma_y) + sigma_y * sigma_y + 3.0 * tau_xy * tau_xy)


@worksheet_function("STRESS_TRESCA")
def tresca(sigma_x: Stress, sigma_y: Stress, tau_xy: Stress) -> Stress:
    r"""Tresca equivalent stress in plane stress.

    .. math:: \sigma_T = \max\left(|\sigma_1 - \sigma_2|,\ |\sigma_1|,\ |\sigma_2|\right)

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress on the x face in the y direction.

    Returns
    -------
    stress : stress
        Equivalent stress, not negative: twice the largest shear stress on any plane.

    Notes
    -----
    Takes the third principal stress, zero, into account. Compare with the yield strength in tension; up to 15
    % above the von Mises stress, never below it. For ductile materials.

    References
    ----------
    H. Tresca, 1864; Budynas, Nisbett, Shigley's Mechanical Engineering Design, section 5-4 (from memory).

    Examples
    --------
    >>> cell('=STRESS_TRESCA("80 MPa", "-40 MPa", "25 MPa", "MPa")')
    130.0
    """
    return 2.0 * plane_stress.shear_max_plane.kernel(sigma_x, sigma_y, tau_xy)


@worksheet_function("STRESS_VON_MISES_3D")
def von_mises_3d(
    sigma_x: Stress, sigma_y: Stress, sigma_z: Stress, tau_xy: Stress, tau_yz: Stress, tau_zx: Stress
) -> Stress:
    r"""Von Mises equivalent stress of a three-dimensional state.

    .. math:: \sigma_{vM} = \sqrt{3 J_2}

    .. math:: J_2 = \tfrac16\left[(\sigma_x-\sigma_y)^2 + (\sigma_y-\sigma_z)^2 + (\sigma_z-\sigma_x)^2\right]
        + \tau_{xy}^2 + \tau_{yz}^2 + \tau_{zx}^2

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

    Returns
    -------
    stress : stress
        Equivalent stress, not negative; zero for a hydrostatic state.

    Notes
    -----
    Compare with the yield strength in tension. For ductile materials that yield equally in tension and
    compression; it says nothing of brittle fracture, of buckling or of fatigue.

    References
    ----------
    R. von Mises, 1913; Budynas, Nisbett, Shigley's Mechanical Engineering Design, section 5-5 (from memory).

    Examples
    --------
    >>> cell('=STRESS_VON_MISES_3D("80 MPa","60 MPa","20 MPa","20 MPa","10 MPa","40 MPa","MPa")')
    95.39392014
    """
    return np.sqrt(3.0 * second_deviatoric(sigma_x, sigma_y, sigma_z, tau_xy, tau_yz, tau_zx))


@worksheet_function("STRESS_TRESCA_3D")
def tresca_3d(
    sigma_x: Stress, sigma_y: Stress, sigma_z: Stress, tau_xy: Stress, tau_yz: Stress, tau_zx: Stress
) -> Stress:
    r"""Tresca equivalent stress of a three-dimensional state.

    .. math:: \sigma_T = \sigma_1 - \sigma_3

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

    Returns
    -------
    stress : stress
        Equivalent stress, not negative; zero for a hydrostatic state.

    Notes
    -----
    Compare with the yield strength in tension. For ductile materials.

    References
    ----------
    H. Tresca, 1864; Budynas, Nisbett, Shigley's Mechanical Engineering Design, section 5-4 (from memory).

    Examples
    --------
    >>> cell('=STRESS_TRESCA_3D("80 MPa","60 MPa","20 MPa","20 MPa","10 MPa","40 MPa","MPa")')
    110.0
    """
    principal = principal_values(sigma_x, sigma_y, sigma_z, tau_xy, tau_yz, tau_zx)
    return principal[..., 0] - principal[..., 2]
