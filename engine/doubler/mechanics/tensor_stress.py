"""The stress tensor in three dimensions: principal stresses, directions, largest shear, invariants."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Ratio, Stress, StressCubed, StressSquared, row, square

Principal: Any = row(Stress, "sigma_1", "sigma_2", "sigma_3")
Directions: Any = square(Ratio, 3)


def tensor(sigma_x: Any, sigma_y: Any, sigma_z: Any, tau_xy: Any, tau_yz: Any, tau_zx: Any) -> Any:
    """Return the components as symmetric matrices on the last two axes."""
    lanes = np.broadcast_arrays(sigma_x, tau_xy, tau_zx, tau_xy, sigma_y, tau_yz, tau_zx, tau_yz, sigma_z)
    stacked = np.stack(lanes, axis=-1)
    return stacked.reshape((*stacked.shape[:-1], 3, 3))


def principal_values(sigma_x: Any, sigma_y: Any, sigma_z: Any, tau_xy: Any, tau_yz: Any, tau_zx: Any) -> Any:
    """Return the principal stresses on the last axis, largest first."""
    return np.linalg.eigvalsh(tensor(sigma_x, sigma_y, sigma_z, tau_xy, tau_yz, tau_zx))[..., ::-1]


def second_deviatoric(sigma_x: Any, sigma_y: Any, sigma_z: Any, tau_xy: Any, tau_yz: Any, tau_zx: Any) -> Any:
    """Return the second invariant of the stress deviator."""
    normal = (sigma_x - sigma_y) ** 2 + (sigma_y - sigma_z) ** 2 + (sigma_z - sigma_x) ** 2
    return normal / 6.0 + tau_xy**2 + tau_yz**2 + tau_zx**2


@worksheet_function("STRESS_PRINCIPAL_3D")
def principal_3d(
    sigma_x: Stress, sigma_y: Stress, sigma_z: Stress, tau_xy: Stress, tau_yz: Stress, tau_zx: Stress
) -> Principal:
    r"""Three principal stresses, largest first; tension positive.

    .. math:: \det(\boldsymbol\sigma - \sigma \mathbf I) = 0

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
    stresses : stress
        A row of sigma_1 ≥ sigma_2 ≥ sigma_3, tension positive.

    Notes
    -----
    Eigenvalues of the symmetric tensor by LAPACK, sound where two or three of them fall together.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_PRINCIPAL_3D("1 MPa","5 MPa","1 MPa","1 MPa","1 MPa","3 MPa","MPa")')
    [[6.0, 3.0, -2.0]]
    """
    return principal_values(sigma_x, sigma_y, sigma_z, tau_xy, tau_yz, tau_zx)


@worksheet_function("STRESS_PRINCIPAL_DIRECTIONS")
def principal_directions(
    sigma_x: Stress, sigma_y: Stress, sigma_z: Stress, tau_xy: Stress, tau_yz: Stress, tau_zx: Stress
) -> Directions:
    r"""Direction cosines of the three principal stresses, one direction a row.

    .. math:: (\boldsymbol\sigma - \sigma_i \mathbf I)\,\mathbf n_i = 0, \quad |\mathbf n_i| = 1

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
    cosines : ratio
        Three rows (of sigma_1, sigma_2, sigma_3), each with the cosines to x, y, z; right-handed.

    Notes
    -----
    The sense of a direction is free; here the largest cosine of the first two is positive and the third
    completes a right-handed set. Where two principal stresses are equal, any perpendicular pair in their
    plane is principal, and one is given.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_PRINCIPAL_DIRECTIONS("-10 MPa","30 MPa","0 MPa","15 MPa","0 MPa","0 MPa")')
    [[0.316227766, 0.9486832981, 0.0], [0.0, 0.0, 1.0], [0.9486832981, -0.316227766, 0.0]]
    """
    vectors = np.linalg.eigh(tensor(sigma_x, sigma_y, sigma_z, tau_xy, tau_yz, tau_zx))[1]
    first, second = _pointed(vectors[..., 2]), _pointed(vectors[..., 1])
    # Adding 0.0 leaves no negative zeros for a sheet to show.
    return np.stack([first, second, np.cross(first, second)], axis=-2) + 0.0


def _pointed(vectors: Any) -> Any:
    """Return each vector in the sense in which its largest component is positive."""
    largest = np.argmax(np.abs(vectors), axis=-1)[..., np.newaxis]
    return vectors * np.sign(np.take_along_axis(vectors, largest, axis=-1))


@worksheet_function("STRESS_SHEAR_MAX_3D")
def shear_max_3d(
    sigma_x: Stress, sigma_y: Stress, sigma_z: Stress, tau_xy: Stress, tau_yz: Stress, tau_zx: Stress
) -> Stress:
    r"""Largest shear stress on any plane through a point.

    .. math:: \tau_{max} = \frac{\sigma_1 - \sigma_3}{2}

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
        Absolute maximum shear stress, not negative.

    Notes
    -----
    Acts on planes at 45° to the directions of sigma_1 and sigma_3.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_SHEAR_MAX_3D("80 MPa","60 MPa","20 MPa","20 MPa","10 MPa","40 MPa","MPa")')
    55.0
    """
    principal = principal_values(sigma_x, sigma_y, sigma_z, tau_xy, tau_yz, tau_zx)
    return 0.5 * (principal[..., 0] - principal[..., 2])


@worksheet_function("STRESS_HYDROSTATIC")
def hydrostatic(sigma_x: Stress, sigma_y: Stress, sigma_z: Stress) -> Stress:
    r"""Mean normal stress, the hydrostatic part of the stress; tension positive.

    .. math:: \sigma_m = \frac{\sigma_x + \sigma_y + \sigma_z}{3}

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    sigma_z : stress
        Normal stress on the z face, tension positive.

    Returns
    -------
    stress : stress
        Mean normal stress, tension positive: the negative of a pressure.

    Notes
    -----
    Alike in all axes. It is also the normal stress on the octahedral planes.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_HYDROSTATIC("80 MPa","60 MPa","20 MPa","MPa")')
    53.33333333
    """
    return (sigma_x + sigma_y + sigma_z) / 3.0


@worksheet_function("STRESS_OCTAHEDRAL_SHEAR")
def octahedral_shear(
    sigma_x: Stress, sigma_y: Stress, sigma_z: Stress, tau_xy: Stress, tau_yz: Stress, tau_zx: Stress
) -> Stress:
    r"""Shear stress on the octahedral planes, equally inclined to the three principal directions.

    .. math:: \tau_{oct} = \sqrt{\tfrac23 J_2}

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
        Octahedral shear stress, not negative.

    Notes
    -----
    It is √2/3 of the von Mises stress; :math:`J_2` is the second invariant of the deviator.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_OCTAHEDRAL_SHEAR("80 MPa","60 MPa","20 MPa","20 MPa","10 MPa","40 MPa","MPa")')
    44.96912521
    """
    return np.sqrt(second_deviatoric(sigma_x, sigma_y, sigma_z, tau_xy, tau_yz, tau_zx) / 1.5)


@worksheet_function("STRESS_INVARIANT_1")
def invariant_1(sigma_x: Stress, sigma_y: Stress, sigma_z: Stress) -> Stress:
    r"""First invariant of the stress tensor; tension positive.

    .. math:: I_1 = \sigma_x + \sigma_y + \sigma_z

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    sigma_z : stress
        Normal stress on the z face, tension positive.

    Returns
    -------
    invariant : stress
        The sum of the normal stresses, the same in all axes.

    Notes
    -----
    Three times the hydrostatic stress.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_INVARIANT_1("-10 MPa","30 MPa","0 MPa","MPa")')
    20.0
    """
    return sigma_x + sigma_y + sigma_z


@worksheet_function("STRESS_INVARIANT_2")
def invariant_2(
    sigma_x: Stress, sigma_y: Stress, sigma_z: Stress, tau_xy: Stress, tau_yz: Stress, tau_zx: Stress
) -> StressSquared:
    r"""Second invariant of the stress tensor.

    .. math:: I_2 = \sigma_x\sigma_y + \sigma_y\sigma_z + \sigma_z\sigma_x - \tau_{xy}^2 - \tau_{yz}^2 -
        \tau_{zx}^2

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
    invariant : stress squared
        The sum of the principal minors, the same in all axes.

    Notes
    -----
    Of the tensor itself, with the sign that makes the characteristic equation σ³ − I₁σ² + I₂σ − I₃ = 0; some
    books take the opposite sign.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_INVARIANT_2("-10 MPa","30 MPa","0 MPa","15 MPa","0 MPa","0 MPa","MPa^2")')
    -525.0
    """
    products = sigma_x * sigma_y + sigma_y * sigma_z + sigma_z * sigma_x
    return products - tau_xy**2 - tau_yz**2 - tau_zx**2


@worksheet_function("STRESS_INVARIANT_3")
def invariant_3(
    sigma_x: Stress, sigma_y: Stress, sigma_z: Stress, tau_xy: Stress, tau_yz: Stress, tau_zx: Stress
) -> StressCubed:
    r"""Third invariant of the stress tensor, its determinant.

    .. math:: I_3 = \det \boldsymbol\sigma

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
    invariant : stress cubed
        The product of the principal stresses, the same in all axes.

    Notes
    -----
    Zero in plane stress.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_INVARIANT_3("1 MPa","5 MPa","1 MPa","1 MPa","1 MPa","3 MPa","MPa^3")')
    -36.0
    """
    diagonal = sigma_x * sigma_y * sigma_z + 2.0 * tau_xy * tau_yz * tau_zx
    return diagonal - sigma_x * tau_yz**2 - sigma_y * tau_zx**2 - sigma_z * tau_xy**2
