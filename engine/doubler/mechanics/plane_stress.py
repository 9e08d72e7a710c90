"""Plane stress at a point: principal stresses, directions, largest shear, rotation, Mohr's circle."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Angle, Stress
from doubler.catalogue.limits import condition

DIRECTED = condition(
    "the stress is alike in every direction of the plane, so that none is principal",
    lambda sigma_x, sigma_y, tau_xy: (sigma_x != sigma_y) | (tau_xy != 0.0),
)


def _centre(sigma_x: Any, sigma_y: Any) -> Any:
    return 0.5 * (sigma_x + sigma_y)


def _radius(sigma_x: Any, sigma_y: Any, tau_xy: Any) -> Any:
    half = 0.5 * (sigma_x - sigma_y)
    return np.sqrt(half * half + tau_xy * tau_xy)


def _direction(sigma_x: Any, sigma_y: Any, tau_xy: Any) -> Any:
    # Adding 0.0 turns -0.0 into 0.0, so that a state without shear gives +90° and not −90°.
    angle = 0.5 * np.arctan2(2.0 * tau_xy + 0.0, sigma_x - sigma_y)
    # A shear below zero and too small to turn the axes would give -90 degrees for the direction of +90.
    return np.where(angle <= -0.5 * np.pi, 0.5 * np.pi, angle)


@worksheet_function("STRESS_PRINCIPAL_MAX")
def principal_max(sigma_x: Stress, sigma_y: Stress, tau_xy: Stress) -> Stress:
    r"""Algebraically largest principal stress in the plane; tension positive.

    .. math:: \sigma_1 = \frac{\sigma_x + \sigma_y}{2} + \sqrt{\left(\frac{\sigma_x - \sigma_y}{2}\right)^2 +
        \tau_{xy}^2}

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress; positive on the +x face in the +y direction.

    Returns
    -------
    stress : stress
        Principal stress, tension positive.

    Notes
    -----
    In the plane alone. The third principal stress of plane stress is zero and is the largest where both
    in-plane ones are compressive; STRESS_PRINCIPAL_3D gives all three.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.3 (from memory).

    Examples
    --------
    >>> cell('=STRESS_PRINCIPAL_MAX("50 MPa", "-10 MPa", "40 MPa", "MPa")')
    70.0
    """
    return _centre(sigma_x, sigma_y) + _radius(sigma_x, sigma_y, tau_xy)


@worksheet_function("STRESS_PRINCIPAL_MIN")
def principal_min(sigma_x: Stress, sigma_y: Stress, tau_xy: Stress) -> Stress:
    r"""Algebraically smallest principal stress in the plane; tension positive.

    .. math:: \sigma_2 = \frac{\sigma_x + \sigma_y}{2} - \sqrt{\left(\frac{\sigma_x - \sigma_y}{2}\right)^2 +
        \tau_{xy}^2}

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress; positive on the +x face in the +y direction.

    Returns
    -------
    stress : stress
        Principal stress, tension positive.

    Notes
    -----
    In the plane alone. The third principal stress of plane stress is zero and is the smallest where both
    in-plane ones are tensile; STRESS_PRINCIPAL_3D gives all three.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.3 (from memory).

    Examples
    --------
    >>> cell('=STRESS_PRINCIPAL_MIN("50 MPa", "-10 MPa", "40 MPa", "MPa")')
    -30.0
    """
    return _centre(sigma_x, sigma_y) - _radius(sigma_x, sigma_y, tau_xy)


@worksheet_function("STRESS_PRINCIPAL_ANGLE", conditions=(DIRECTED,))
def principal_angle(sigma_x: Stress, sigma_y: Stress, tau_xy: Stress) -> Angle:
    r"""Direction of the largest in-plane principal stress, counter-clockwise from x.

    .. math:: \theta_1 = \tfrac12 \operatorname{atan2}(2\tau_{xy},\ \sigma_x - \sigma_y)

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress; positive on the +x face in the +y direction.

    Returns
    -------
    angle : angle
        Above −90° and at most 90°. The smallest principal stress acts at 90° to it.

    Notes
    -----
    The angle belongs to the largest stress, not to whichever lies nearer to x. Where the state is the same in
    all directions there is no such direction, and no result.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.3 (from memory).

    Examples
    --------
    >>> cell('=STRESS_PRINCIPAL_ANGLE("-20 MPa", "90 MPa", "60 MPa", "deg")')
    66.25522354
    """
    return _direction(sigma_x, sigma_y, tau_xy)


@worksheet_function("STRESS_SHEAR_MAX_IN_PLANE")
def shear_max_in_plane(sigma_x: Stress, sigma_y: Stress, tau_xy: Stress) -> Stress:
    r"""Largest shear stress on planes perpendicular to the stressed plane.

    .. math:: \tau_{max} = \sqrt{\left(\frac{\sigma_x - \sigma_y}{2}\right)^2 + \tau_{xy}^2}

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress; positive on the +x face in the +y direction.

    Returns
    -------
    stress : stress
        Largest in-plane shear stress, not negative.

    Notes
    -----
    Below STRESS_SHEAR_MAX_PLANE where both in-plane principal stresses have one sign: then the largest shear
    acts on planes inclined to the stressed plane, and that one governs yielding.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.3 (from memory).

    Examples
    --------
    >>> cell('=STRESS_SHEAR_MAX_IN_PLANE("50 MPa", "-10 MPa", "40 MPa", "MPa")')
    50.0
    """
    return _radius(sigma_x, sigma_y, tau_xy)


@worksheet_function("STRESS_SHEAR_MAX_PLANE")
def shear_max_plane(sigma_x: Stress, sigma_y: Stress, tau_xy: Stress) -> Stress:
    r"""Largest shear stress on any plane through a point in plane stress.

    .. math:: \tau_{max} = \tfrac12 \max\left(|\sigma_1 - \sigma_2|,\ |\sigma_1|,\ |\sigma_2|\right)

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress; positive on the +x face in the +y direction.

    Returns
    -------
    stress : stress
        Absolute maximum shear stress, not negative.

    Notes
    -----
    Takes the third principal stress, zero, into account.

    References
    ----------
    R. C. Hibbeler, Mechanics of Materials, section 9.5 (from memory).

    Examples
    --------
    >>> cell('=STRESS_SHEAR_MAX_PLANE("80 MPa", "40 MPa", "0 MPa", "MPa")')
    40.0
    """
    radius = _radius(sigma_x, sigma_y, tau_xy)
    return np.maximum(radius, 0.5 * (np.abs(_centre(sigma_x, sigma_y)) + radius))


@worksheet_function("STRESS_SHEAR_MAX_ANGLE", conditions=(DIRECTED,))
def shear_max_angle(sigma_x: Stress, sigma_y: Stress, tau_xy: Stress) -> Angle:
    r"""Direction of the normal of the plane of largest positive in-plane shear, counter-clockwise from x.

    .. math:: \theta_s = \theta_1 - 45°

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress; positive on the +x face in the +y direction.

    Returns
    -------
    angle : angle
        Above −90° and at most 90°. At 90° to it the shear stress is as large and negative.

    Notes
    -----
    On that plane the normal stress is the mean of sigma_x and sigma_y.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.3 (from memory).

    Examples
    --------
    >>> cell('=STRESS_SHEAR_MAX_ANGLE("60 MPa", "0 MPa", "0 MPa", "deg")')
    -45.0
    """
    angle = _direction(sigma_x, sigma_y, tau_xy) - 0.25 * np.pi
    return np.where(angle <= -0.5 * np.pi, angle + np.pi, angle)


@worksheet_function("STRESS_ROTATED_NORMAL")
def rotated_normal(sigma_x: Stress, sigma_y: Stress, tau_xy: Stress, angle: Angle) -> Stress:
    r"""Normal stress on the face whose normal stands at an angle from x; tension positive.

    .. math:: \sigma_{x1} = \frac{\sigma_x + \sigma_y}{2} + \frac{\sigma_x - \sigma_y}{2}\cos 2\theta +
        \tau_{xy}\sin 2\theta

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress; positive on the +x face in the +y direction.
    angle : angle
        Angle of the face's normal, counter-clockwise from x. For the face at right angles add 90°.

    Returns
    -------
    stress : stress
        Normal stress, tension positive.

    Notes
    -----
    Equilibrium alone: it holds for any material.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_ROTATED_NORMAL("16000 psi", "6000 psi", "4000 psi", "45 deg", "psi")')
    15000.0
    """
    half = 0.5 * (sigma_x - sigma_y)
    return _centre(sigma_x, sigma_y) + half * np.cos(2.0 * angle) + tau_xy * np.sin(2.0 * angle)


@worksheet_function("STRESS_ROTATED_SHEAR")
def rotated_shear(sigma_x: Stress, sigma_y: Stress, tau_xy: Stress, angle: Angle) -> Stress:
    r"""Shear stress on the face whose normal stands at an angle from x.

    .. math:: \tau_{x1y1} = -\frac{\sigma_x - \sigma_y}{2}\sin 2\theta + \tau_{xy}\cos 2\theta

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress; positive on the +x face in the +y direction.
    angle : angle
        Angle of the face's normal, counter-clockwise from x.

    Returns
    -------
    stress : stress
        Shear stress in the turned axes, positive on the +x1 face in the +y1 direction.

    Notes
    -----
    Equilibrium alone: it holds for any material.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_ROTATED_SHEAR("16000 psi", "6000 psi", "4000 psi", "45 deg", "psi")')
    -5000.0
    """
    return tau_xy * np.cos(2.0 * angle) - 0.5 * (sigma_x - sigma_y) * np.sin(2.0 * angle)


@worksheet_function("STRESS_MOHR_CENTRE")
def mohr_centre(sigma_x: Stress, sigma_y: Stress) -> Stress:
    r"""Centre of Mohr's circle on the axis of normal stress; tension positive.

    .. math:: \sigma_c = \frac{\sigma_x + \sigma_y}{2}

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.

    Returns
    -------
    stress : stress
        Mean of the two normal stresses.

    Notes
    -----
    The circle of the stressed plane; its radius is STRESS_MOHR_RADIUS.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.4 (from memory).

    Examples
    --------
    >>> cell('=STRESS_MOHR_CENTRE("50 MPa", "-10 MPa", "MPa")')
    20.0
    """
    return _centre(sigma_x, sigma_y)


@worksheet_function("STRESS_MOHR_RADIUS")
def mohr_radius(sigma_x: Stress, sigma_y: Stress, tau_xy: Stress) -> Stress:
    r"""Radius of Mohr's circle of the stressed plane.

    .. math:: R = \sqrt{\left(\frac{\sigma_x - \sigma_y}{2}\right)^2 + \tau_{xy}^2}

    Parameters
    ----------
    sigma_x : stress
        Normal stress on the x face, tension positive.
    sigma_y : stress
        Normal stress on the y face, tension positive.
    tau_xy : stress
        Shear stress; its sign does not matter.

    Returns
    -------
    stress : stress
        Radius, not negative: the largest in-plane shear stress.

    Notes
    -----
    The centre is STRESS_MOHR_CENTRE.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 7.4 (from memory).

    Examples
    --------
    >>> cell('=STRESS_MOHR_RADIUS("50 MPa", "-10 MPa", "40 MPa", "MPa")')
    50.0
    """
    return _radius(sigma_x, sigma_y, tau_xy)
