"""Columns under eccentric load and beams under compression: the secant formula and amplification."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Area, Force, Length, Modulus, Ratio, SecondMoment, Stress
from doubler.catalogue.limits import NOT_NEGATIVE, POSITIVE, condition
from doubler.mechanics.buckling_columns import SIZES, euler_load

Case = Literal["equal end moments", "force at midspan", "spread load"]

_BELOW_EULER = condition(
    "the compression reaches Euler's load, where the column buckles whatever its eccentricity",
    lambda compression, length, second_moment, modulus, end_factor: (
        compression < euler_load(length, second_moment, modulus, end_factor)
    ),
)
_BELOW_CRITICAL = condition(
    "the compression reaches the critical load, where the beam buckles and nothing bounds its deflection",
    lambda compression, critical: compression < critical,
)
_STEPS = 100
_SMALL = 0.1
"""Below this u the closed forms lose digits and their series is exact to rounding."""


def _half_angle(compression: Any, critical: Any) -> Any:
    """Return u = (π/2) √(P/Pe)."""
    return 0.5 * np.pi * np.sqrt(compression / critical)


def _eccentric(compression: Any, eccentricity: Any, fibre: Any, area: Any, second_moment: Any, critical: Any) -> Any:
    """Return the largest stress by the secant formula."""
    bent = eccentricity * fibre * area / second_moment / np.cos(_half_angle(compression, critical))
    return compression / area * (1.0 + bent)


@worksheet_function(
    "BUCKLING_SECANT_STRESS",
    valid=SIZES | {"compression": NOT_NEGATIVE, "eccentricity": NOT_NEGATIVE, "fibre_distance": POSITIVE},
    conditions=(_BELOW_EULER,),
)
def secant_stress(
    compression: Force,
    eccentricity: Length,
    fibre_distance: Length,
    length: Length,
    second_moment: SecondMoment,
    area: Area,
    modulus: Modulus,
    end_factor: Ratio = 1.0,
) -> Stress:
    r"""Largest compressive stress of an eccentrically loaded column, by the secant formula; a magnitude.

    .. math:: \sigma_{max} = \frac{P}{A}\left[1 + \frac{e c}{r^2}\sec\left(\frac{K L}{2}\sqrt{\frac{P}{E I}}\right)
        \right]

    Parameters
    ----------
    compression : force
        Compressive force, a positive magnitude, factors of safety included.
    eccentricity : length
        Distance of the force from the centroid, the same at both ends.
    fibre_distance : length
        Distance of the farthest fibre on the side of the force from the centroid.
    length : length
        Length between the ends.
    second_moment : second moment
        Second moment of area about the axis of bending.
    area : area
        Area of the section.
    modulus : modulus
        Young's modulus.
    end_factor : ratio, optional
        Effective over true length: 1 (pinned ends) where left out, 2 for a mast loaded at its free end.

    Returns
    -------
    stress : stress
        Largest compressive stress, a positive magnitude.

    Notes
    -----
    Elastic: valid while the result stays below the proportional limit. The stress grows faster than the load, so
    factors belong on the load. Pinned ends or a mast; with other ends the moment is elsewhere. Refused from
    Euler's load on.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 11.6 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_SECANT_STRESS("5 kN","4 mm","20 mm","1 m","40000 mm^4","400 mm^2","70 GPa",1,"MPa")')
    25.2393854
    """
    critical = euler_load(length, second_moment, modulus, end_factor)
    return _eccentric(compression, eccentricity, fibre_distance, area, second_moment, critical)


@worksheet_function(
    "BUCKLING_SECANT_DEFLECTION",
    valid={name: SIZES[name] for name in SIZES if name != "area"}
    | {"compression": NOT_NEGATIVE, "eccentricity": NOT_NEGATIVE},
    conditions=(_BELOW_EULER,),
)
def secant_deflection(
    compression: Force,
    eccentricity: Length,
    length: Length,
    second_moment: SecondMoment,
    modulus: Modulus,
    end_factor: Ratio = 1.0,
) -> Length:
    r"""Largest sideways deflection of an eccentrically loaded column.

    .. math:: v_{max} = e\left[\sec\left(\frac{K L}{2}\sqrt{\frac{P}{E I}}\right) - 1\right]

    Parameters
    ----------
    compression : force
        Compressive force, a positive magnitude.
    eccentricity : length
        Distance of the force from the centroid, the same at both ends.
    length : length
        Length between the ends.
    second_moment : second moment
        Second moment of area about the axis of bending.
    modulus : modulus
        Young's modulus.
    end_factor : ratio, optional
        Effective over true length: 1 (pinned ends) where left out, 2 for a mast loaded at its free end.

    Returns
    -------
    deflection : length
        Deflection at midspan (of a mast: at its tip), away from the force's line.

    Notes
    -----
    Elastic, pinned ends or a mast, deflections small beside the length. Refused from Euler's load on.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 11.5 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_SECANT_DEFLECTION("5 kN","4 mm","1 m","40000 mm^4","70 GPa",1,"mm")')
    1.095754161
    """
    critical = euler_load(length, second_moment, modulus, end_factor)
    half = 0.5 * _half_angle(compression, critical)
    return eccentricity * 2.0 * np.sin(half) ** 2 / np.cos(2.0 * half)


@worksheet_function(
    "BUCKLING_SECANT_LOAD",
    valid=SIZES | {"allowable": POSITIVE, "eccentricity": NOT_NEGATIVE, "fibre_distance": POSITIVE},
)
def secant_load(
    allowable: Stress,
    eccentricity: Length,
    fibre_distance: Length,
    length: Length,
    second_moment: SecondMoment,
    area: Area,
    modulus: Modulus,
    end_factor: Ratio = 1.0,
) -> Force:
    r"""Load at which an eccentrically loaded column reaches a stress, by the secant formula; a magnitude.

    .. math:: \frac{P}{A}\left[1 + \frac{e c}{r^2}\sec\left(\frac{K L}{2}\sqrt{\frac{P}{E I}}\right)\right] =
        \sigma_{all}

    Parameters
    ----------
    allowable : stress
        Stress not to be passed, at most the proportional limit in compression; a positive magnitude.
    eccentricity : length
        Distance of the force from the centroid, the same at both ends; stands for crookedness too.
    fibre_distance : length
        Distance of the farthest fibre on the side of the force from the centroid.
    length : length
        Length between the ends.
    second_moment : second moment
        Second moment of area about the axis of bending.
    area : area
        Area of the section.
    modulus : modulus
        Young's modulus.
    end_factor : ratio, optional
        Effective over true length: 1 (pinned ends) where left out, 2 for a mast loaded at its free end.

    Returns
    -------
    force : force
        Compressive force, a positive magnitude below Euler's load.

    Notes
    -----
    Elastic. The stress grows faster than the load: divide this load by the factor of safety, not the stress.
    Without eccentricity it is the lesser of Euler's load and allowable × area.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 11.6 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_SECANT_LOAD("150 MPa","4 mm","20 mm","1 m","40000 mm^4","400 mm^2","70 GPa",1,"kN")')
    17.26668426
    """
    critical = euler_load(length, second_moment, modulus, end_factor)
    top = np.minimum(critical, allowable * area)
    lanes = np.broadcast_shapes(np.shape(top), np.shape(eccentricity), np.shape(fibre_distance))
    low, high = np.zeros(lanes), np.broadcast_to(top, lanes)
    for _ in range(_STEPS):
        middle = 0.5 * (low + high)
        over = _eccentric(middle, eccentricity, fibre_distance, area, second_moment, critical) > allowable
        low, high = np.where(over, low, middle), np.where(over, middle, high)
        if np.all(high - low <= 1e-15 * high):
            break
    return 0.5 * (low + high)


@worksheet_function(
    "BUCKLING_AMPLIFICATION",
    valid={"compression": NOT_NEGATIVE, "critical": POSITIVE},
    conditions=(_BELOW_CRITICAL,),
)
def amplification(compression: Force, critical: Force) -> Ratio:
    r"""Factor by which compression enlarges a beam's deflection and moment, by the usual approximation.

    .. math:: \mu \approx \frac{1}{1 - P/P_e}

    Parameters
    ----------
    compression : force
        Compressive force, a positive magnitude, factors of safety included.
    critical : force
        Euler's load for bending in the plane of the moment, a positive magnitude.

    Returns
    -------
    ratio : ratio
        Amplified over first-order value, at least one.

    Notes
    -----
    Exact for a half-sine deflection. Within 2 % for the deflection of a pinned beam under usual loads; for moments it
    depends on the load: low for equal end moments (by up to 21 % near the critical load), high for a force at
    midspan. BUCKLING_AMPLIFICATION_MOMENT is exact.

    References
    ----------
    S. P. Timoshenko, J. M. Gere, Theory of Elastic Stability, section 1.11 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_AMPLIFICATION("20 kN", "100 kN")')
    1.25
    """
    return 1.0 / (1.0 - compression / critical)


_MOMENTS = {
    "equal end moments": (lambda u: 1.0 / np.cos(u), (1.0, 1 / 2, 5 / 24, 61 / 720, 277 / 8064)),
    "force at midspan": (lambda u: np.tan(u) / u, (1.0, 1 / 3, 2 / 15, 17 / 315, 62 / 2835)),
    "spread load": (
        lambda u: 2.0 * (1.0 / np.cos(u) - 1.0) / u**2,
        (1.0, 5 / 12, 61 / 360, 277 / 4032, 50521 / 1814400),
    ),
}
_DEFLECTIONS = {
    "equal end moments": _MOMENTS["spread load"],
    "force at midspan": (lambda u: 3.0 * (np.tan(u) - u) / u**3, (1.0, 2 / 5, 17 / 105, 62 / 945, 1382 / 51975)),
    "spread load": (
        lambda u: 12.0 * (2.0 / np.cos(u) - 2.0 - u**2) / (5.0 * u**4),
        (1.0, 61 / 150, 277 / 1680, 50521 / 756000, 540553 / 19958400),
    ),
}


def _amplified(forms: dict[str, Any], case: str, compression: Any, critical: Any) -> Any:
    """Return the closed form, or its series where u is small."""
    closed, terms = forms[case]
    u = _half_angle(compression, critical)
    square = np.minimum(u, _SMALL) ** 2
    series = terms[0] + square * (terms[1] + square * (terms[2] + square * (terms[3] + square * terms[4])))
    return np.where(u < _SMALL, series, closed(np.maximum(u, _SMALL)))


@worksheet_function(
    "BUCKLING_AMPLIFICATION_MOMENT",
    valid={"compression": NOT_NEGATIVE, "critical": POSITIVE},
    conditions=(_BELOW_CRITICAL,),
)
def amplification_moment(case: Case, compression: Force, critical: Force) -> Ratio:
    r"""Factor by which compression enlarges the largest moment of a pinned beam, exactly.

    .. math:: u = \frac{\pi}{2}\sqrt{\frac{P}{P_e}}, \quad \mu = \sec u, \ \frac{\tan u}{u}, \ \text{or}\
        \frac{2(\sec u - 1)}{u^2}

    Parameters
    ----------
    case : choice
        equal end moments (single curvature), force at midspan, or spread load (even over the length).
    compression : force
        Compressive force, a positive magnitude, factors of safety included.
    critical : force
        Euler's load of the pinned beam for bending in the plane of the moment, a positive magnitude.

    Returns
    -------
    ratio : ratio
        Largest moment over that without compression, at least one.

    Notes
    -----
    Uniform, pinned at both ends, elastic; the largest moment is at midspan in all three cases. Cases add where the
    compression is the same in each.

    References
    ----------
    S. P. Timoshenko, J. M. Gere, Theory of Elastic Stability, sections 1.3 to 1.5 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_AMPLIFICATION_MOMENT("equal end moments", "25 kN", "100 kN")')
    1.414213562
    """
    return _amplified(_MOMENTS, case, compression, critical)


@worksheet_function(
    "BUCKLING_AMPLIFICATION_DEFLECTION",
    valid={"compression": NOT_NEGATIVE, "critical": POSITIVE},
    conditions=(_BELOW_CRITICAL,),
)
def amplification_deflection(case: Case, compression: Force, critical: Force) -> Ratio:
    r"""Factor by which compression enlarges the midspan deflection of a pinned beam, exactly.

    .. math:: u = \frac{\pi}{2}\sqrt{\frac{P}{P_e}}, \quad \mu = \frac{2(\sec u - 1)}{u^2}, \ \frac{3(\tan u - u)}{u^3},
        \ \text{or}\ \frac{12(2\sec u - 2 - u^2)}{5 u^4}

    Parameters
    ----------
    case : choice
        equal end moments (single curvature), force at midspan, or spread load (even over the length).
    compression : force
        Compressive force, a positive magnitude, factors of safety included.
    critical : force
        Euler's load of the pinned beam for bending in the plane of the load, a positive magnitude.

    Returns
    -------
    ratio : ratio
        Midspan deflection over that without compression, at least one.

    Notes
    -----
    Uniform, pinned at both ends, elastic, slender.

    References
    ----------
    S. P. Timoshenko, J. M. Gere, Theory of Elastic Stability, sections 1.3 to 1.5 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_AMPLIFICATION_DEFLECTION("force at midspan", "25 kN", "100 kN")')
    1.328877796
    """
    return _amplified(_DEFLECTIONS, case, compression, critical)
