"""Stress on a plane through a point of a three-dimensional state: the traction, its normal and shear part."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Ratio, Stress, row
from doubler.catalogue.limits import condition
from doubler.mechanics.tensor_stress import tensor

Traction: Any = row(Stress, "t_x", "t_y", "t_z")

UNIT_NORMAL = condition(
    "n_x, n_y, n_z are all zero; give the components of the plane's normal",
    lambda n_x, n_y, n_z: (n_x != 0.0) | (n_y != 0.0) | (n_z != 0.0),
)


@worksheet_function("STRESS_TRACTION", conditions=(UNIT_NORMAL,))
def traction(
    sigma_x: Stress,
    sigma_y: Stress,
    sigma_z: Stress,
    tau_xy: Stress,
    tau_yz: Stress,
    tau_zx: Stress,
    n_x: Ratio,
    n_y: Ratio,
    n_z: Ratio,
) -> Traction:
    r"""Stress vector on a plane given by its normal.

    .. math:: t_i = \sigma_{ij}\, n_j

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
    n_x : ratio
        Component of the plane's outward normal along x; the three need not make a unit vector.
    n_y : ratio
        Component along y.
    n_z : ratio
        Component along z.

    Returns
    -------
    traction : stress
        A row of the components along x, y and z.

    Notes
    -----
    The components of the normal are scaled to a unit vector. Equilibrium alone: it holds for any material.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_TRACTION("80 MPa","60 MPa","20 MPa","20 MPa","10 MPa","40 MPa",1,2,1,"MPa")')
    [[65.31972647, 61.23724357, 32.65986324]]
    """
    return _traction(tensor(sigma_x, sigma_y, sigma_z, tau_xy, tau_yz, tau_zx), _unit(n_x, n_y, n_z))


def _unit(n_x: Any, n_y: Any, n_z: Any) -> Any:
    normal = np.stack(np.broadcast_arrays(n_x, n_y, n_z), axis=-1)
    return normal / np.linalg.norm(normal, axis=-1, keepdims=True)


def _traction(stress: Any, normal: Any) -> Any:
    return np.matmul(stress, normal[..., np.newaxis])[..., 0]


@worksheet_function("STRESS_ON_PLANE_NORMAL", conditions=(UNIT_NORMAL,))
def on_plane_normal(
    sigma_x: Stress,
    sigma_y: Stress,
    sigma_z: Stress,
    tau_xy: Stress,
    tau_yz: Stress,
    tau_zx: Stress,
    n_x: Ratio,
    n_y: Ratio,
    n_z: Ratio,
) -> Stress:
    r"""Normal stress on a plane given by its normal; tension positive.

    .. math:: \sigma_n = \mathbf n \cdot \boldsymbol\sigma\, \mathbf n

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
    n_x : ratio
        Component of the plane's outward normal along x; the three need not make a unit vector.
    n_y : ratio
        Component along y.
    n_z : ratio
        Component along z.

    Returns
    -------
    stress : stress
        Normal stress, tension positive.

    Notes
    -----
    The components of the normal are scaled to a unit vector. Equilibrium alone: it holds for any material.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_ON_PLANE_NORMAL("80 MPa","60 MPa","20 MPa","20 MPa","10 MPa","40 MPa",1,2,1,"MPa")')
    90.0
    """
    normal = _unit(n_x, n_y, n_z)
    return np.sum(_traction(tensor(sigma_x, sigma_y, sigma_z, tau_xy, tau_yz, tau_zx), normal) * normal, axis=-1)


@worksheet_function("STRESS_ON_PLANE_SHEAR", conditions=(UNIT_NORMAL,))
def on_plane_shear(
    sigma_x: Stress,
    sigma_y: Stress,
    sigma_z: Stress,
    tau_xy: Stress,
    tau_yz: Stress,
    tau_zx: Stress,
    n_x: Ratio,
    n_y: Ratio,
    n_z: Ratio,
) -> Stress:
    r"""Resultant shear stress on a plane given by its normal.

    .. math:: \tau_n = |\mathbf t - \sigma_n \mathbf n|

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
    n_x : ratio
        Component of the plane's outward normal along x; the three need not make a unit vector.
    n_y : ratio
        Component along y.
    n_z : ratio
        Component along z.

    Returns
    -------
    stress : stress
        Resultant shear stress, not negative.

    Notes
    -----
    The components of the normal are scaled to a unit vector. Equilibrium alone: it holds for any material.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_ON_PLANE_SHEAR("80 MPa","60 MPa","20 MPa","20 MPa","10 MPa","40 MPa",1,2,1,"MPa")')
    31.3581462
    """
    normal = _unit(n_x, n_y, n_z)
    vector = _traction(tensor(sigma_x, sigma_y, sigma_z, tau_xy, tau_yz, tau_zx), normal)
    along = np.sum(vector * normal, axis=-1, keepdims=True)
    return np.linalg.norm(vector - along * normal, axis=-1)
