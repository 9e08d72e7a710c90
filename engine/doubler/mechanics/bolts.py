"""One preloaded bolt: preload from torque, stiffness share, and the load that it carries in the joint."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import (
    Angle,
    Area,
    Force,
    Length,
    Modulus,
    Moment,
    Ratio,
    Stiffness,
    row,
)
from doubler.catalogue.limits import NOT_NEGATIVE, POSITIVE, Limit, between, condition

Thread = Literal["ISO", "unified"]
Preloads: Any = row(Force, "least", "nominal", "largest")
_SHARE = between(0.0, 1.0)
_FRACTION = between(0.0, 1.0, high_open=True)


@worksheet_function(
    "SECTION_BOLT_STRESS_AREA",
    valid={"diameter": POSITIVE, "pitch": POSITIVE},
    conditions=(
        condition(
            "the pitch must be below a third of the diameter, as in every standard thread",
            lambda diameter, pitch: 3.0 * pitch < diameter,
        ),
    ),
)
def stress_area(diameter: Length, pitch: Length, thread: Thread = "ISO") -> Area:
    r"""Tensile stress area of an ISO metric or a unified thread.

    .. math:: A_s = \frac{\pi}{4} \left(d - c\,P\right)^2, \quad c = 0.938194 \text{ (ISO)},\; 0.9743 \text{ (unified)}

    Parameters
    ----------
    diameter : length
        Nominal (major) diameter.
    pitch : length
        Pitch: one divided by the threads per length.
    thread : choice, optional
        ISO or unified; ISO where left out.

    Returns
    -------
    area : area
        Tensile stress area.

    Notes
    -----
    Both standards' own definitions; the unified one gives about two per cent less for the same thread. Tolerances
    are not in it.

    References
    ----------
    ISO 898-1 and ASME B1.1, definitions of the tensile stress area (from memory).

    Examples
    --------
    >>> cell('=SECTION_BOLT_STRESS_AREA("10 mm", "1.5 mm", , "mm^2")')
    57.9895969
    """
    return np.pi / 4.0 * (diameter - (0.938194 if thread == "ISO" else 0.9743) * pitch) ** 2


@worksheet_function(
    "STRESS_BOLT_PRELOAD",
    valid={
        "torque": POSITIVE,
        "diameter": POSITIVE,
        "nut_factor": POSITIVE,
        "scatter": _FRACTION,
        "relaxation": _FRACTION,
    },
)
def preload(torque: Moment, diameter: Length, nut_factor: Ratio, scatter: Ratio, relaxation: Ratio) -> Preloads:
    r"""Preload of a bolt from its tightening torque, with its scatter: least, nominal and largest.

    .. math:: F = \frac{T}{K d}, \quad F_{min} = (1 - \Gamma)(1 - s) F, \quad F_{max} = (1 + \Gamma) F

    Parameters
    ----------
    torque : moment
        Tightening torque, the running torque taken off.
    diameter : length
        Nominal diameter.
    nut_factor : ratio
        Nut factor (torque coefficient) of this finish and lubricant.
    scatter : ratio
        Scatter of the preload as a fraction, such as 0.25 for ± 25 %.
    relaxation : ratio
        Fraction of the preload that is lost after tightening, taken off the least one; 0 must be written.

    Returns
    -------
    preload : force
        Least, nominal and largest preload.

    Notes
    -----
    Nut factor method. Use the least one for separation and slip, the largest one for the strength of the bolt.
    A preload by temperature is not in it.

    References
    ----------
    J. A. Chambers, NASA TM-106943 (1995), section on preload (from memory).

    Examples
    --------
    >>> cell('=STRESS_BOLT_PRELOAD("50 N*m", "10 mm", 0.2, 0.25, 0.05, "kN")')
    [[17.8125, 25.0, 31.25]]
    """
    nominal = torque / (nut_factor * diameter)
    parts = ((1.0 - scatter) * (1.0 - relaxation) * nominal, nominal, (1.0 + scatter) * nominal)
    return np.stack(np.broadcast_arrays(*parts), axis=-1)


def _lead(pitch: Any, pitch_diameter: Any) -> Any:
    return pitch / (np.pi * pitch_diameter)


@worksheet_function(
    "STRESS_BOLT_PRELOAD_FRICTION",
    valid={
        "torque": POSITIVE,
        "pitch": POSITIVE,
        "pitch_diameter": POSITIVE,
        "thread_friction": NOT_NEGATIVE,
        "bearing_diameter": POSITIVE,
        "bearing_friction": NOT_NEGATIVE,
        "flank_angle": Limit(0.0, np.pi / 4.0, False, False, "must lie from 0 to 45°"),
    },
    conditions=(
        condition(
            "the thread friction and the lead are so large that no torque tightens the thread",
            lambda pitch, pitch_diameter, thread_friction, flank_angle: (
                thread_friction
                * _lead(pitch, pitch_diameter)
                / np.cos(np.pi / 6.0 if flank_angle is None else flank_angle)
                < 1.0
            ),
        ),
    ),
)
def preload_friction(
    torque: Moment,
    pitch: Length,
    pitch_diameter: Length,
    thread_friction: Ratio,
    bearing_diameter: Length,
    bearing_friction: Ratio,
    flank_angle: Angle | None = None,
) -> Force:
    r"""Preload of a bolt from its tightening torque and the friction of thread and head.

    .. math:: F = \frac{T}{\frac{d_2}{2}\,\frac{\tan\beta + \mu_t/\cos\alpha}{1 - \mu_t \tan\beta/\cos\alpha} +
        \mu_b \frac{d_b}{2}}, \quad \tan\beta = \frac{P}{\pi d_2}

    Parameters
    ----------
    torque : moment
        Tightening torque, the running torque taken off.
    pitch : length
        Pitch (lead of a single-start thread).
    pitch_diameter : length
        Pitch diameter of the thread.
    thread_friction : ratio
        Coefficient of friction in the thread.
    bearing_diameter : length
        Mean diameter of the face that turns (nut or head).
    bearing_friction : ratio
        Coefficient of friction under that face.
    flank_angle : angle, optional
        Half of the thread angle; 30 degrees where left out.

    Returns
    -------
    preload : force
        Preload, without scatter.

    Notes
    -----
    Power screw method. Friction varies from bolt to bolt: take the lowest for the largest preload and the highest
    for the least.

    References
    ----------
    J. E. Shigley, Mechanical Engineering Design, chapter on screws and fasteners (from memory).

    Examples
    --------
    >>> cell('=STRESS_BOLT_PRELOAD_FRICTION("50 N*m", "1.5 mm", "9.026 mm", 0.12, "13 mm", 0.12, , "kN")')
    30.29472502
    """
    flank = np.cos(np.pi / 6.0 if flank_angle is None else flank_angle)
    lead = _lead(pitch, pitch_diameter)
    thread = pitch_diameter / 2.0 * (lead + thread_friction / flank) / (1.0 - thread_friction * lead / flank)
    return torque / (thread + bearing_friction * bearing_diameter / 2.0)


@worksheet_function(
    "STIFFNESS_BOLT_MEMBERS",
    valid={
        "grip": POSITIVE,
        "hole": POSITIVE,
        "bearing_diameter": POSITIVE,
        "modulus": POSITIVE,
        "cone_angle": Limit(0.0, np.pi / 4.0, True, False, "must be above 0 and at most 45°"),
    },
    conditions=(
        condition(
            "the bearing diameter must be larger than the hole",
            lambda hole, bearing_diameter: bearing_diameter > hole,
        ),
    ),
)
def members(
    grip: Length, hole: Length, bearing_diameter: Length, modulus: Modulus, cone_angle: Angle | None = None
) -> Stiffness:
    r"""Stiffness of the clamped parts of a bolted joint, as two cones of pressure that meet half way.

    .. math:: k_c = \frac{\pi E d \tan\alpha}{2 \ln\dfrac{(l \tan\alpha + D - d)(D + d)}{(l \tan\alpha + D + d)
        (D - d)}}

    Parameters
    ----------
    grip : length
        Thickness of the clamped parts.
    hole : length
        Diameter of the hole.
    bearing_diameter : length
        Outer diameter of the bearing face at both ends.
    modulus : modulus
        Young's modulus of the clamped parts, all of one material.
    cone_angle : angle, optional
        Half of the cone's angle; 30 degrees where left out.

    Returns
    -------
    stiffness : stiffness
        Stiffness of the clamped parts in compression.

    Notes
    -----
    Frustum method: parts wider than the cones, one material, the same at both ends. Edges cut the cones off and
    make the parts softer, which raises the bolt's share.

    References
    ----------
    J. E. Shigley, Mechanical Engineering Design, section on member stiffness (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_BOLT_MEMBERS("20 mm", "10 mm", "15 mm", "70 GPa", , "kN/mm")')
    776.9837734
    """
    slope = np.tan(np.pi / 6.0 if cone_angle is None else cone_angle)
    spread = grip * slope
    above = (spread + bearing_diameter - hole) * (bearing_diameter + hole)
    below = (spread + bearing_diameter + hole) * (bearing_diameter - hole)
    return np.pi * modulus * hole * slope / (2.0 * np.log(above / below))


@worksheet_function(
    "STIFFNESS_BOLT_SHARE", valid={"bolt": POSITIVE, "members": POSITIVE, "loading_plane_factor": _SHARE}
)
def share(bolt: Stiffness, members: Stiffness, loading_plane_factor: Ratio = 1.0) -> Ratio:
    r"""Share of an external load that a preloaded bolt feels while its joint stays closed.

    .. math:: \Phi = n \, \frac{k_b}{k_b + k_c}

    Parameters
    ----------
    bolt : stiffness
        Stiffness of the bolt.
    members : stiffness
        Stiffness of the clamped parts.
    loading_plane_factor : ratio, optional
        Distance of the loaded planes over the grip; 1 (load under head and nut) where left out, on the safe side
        for the bolt.

    Returns
    -------
    share : ratio
        Share of the external load that adds to the bolt's load.

    Notes
    -----
    Linear, joint closed. Once it opens the bolt carries the whole load: see STRESS_BOLT_LOAD.

    References
    ----------
    J. A. Chambers, NASA TM-106943 (1995), section on joint stiffness (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_BOLT_SHARE("250 kN/mm", "750 kN/mm", 0.5)')
    0.125
    """
    return loading_plane_factor * bolt / (bolt + members)


@worksheet_function("STRESS_BOLT_LOAD", valid={"preload": NOT_NEGATIVE, "external": NOT_NEGATIVE, "share": _SHARE})
def load(preload: Force, external: Force, share: Ratio) -> Force:
    r"""Tension of a preloaded bolt under an external pull on its joint, closed or open.

    .. math:: F_b = \max\left(F_0 + \Phi P,\; P\right)

    Parameters
    ----------
    preload : force
        Preload.
    external : force
        External pull on this bolt, factors included where they are wanted.
    share : ratio
        Share of it that the bolt feels while the joint is closed (STIFFNESS_BOLT_SHARE).

    Returns
    -------
    force : force
        Tension of the bolt.

    Notes
    -----
    The joint opens where :math:`F_0 + \Phi P` falls below P; from there the bolt carries P alone. Prying is not in
    it. A push on the joint is refused.

    References
    ----------
    J. A. Chambers, NASA TM-106943 (1995), section on joint separation (from memory).

    Examples
    --------
    >>> cell('=STRESS_BOLT_LOAD("20 kN", {"kN";8;40}, 0.25, "kN")')
    [[22.0], [40.0]]
    """
    return np.maximum(preload + share * external, external)
