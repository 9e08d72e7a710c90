"""The Ramberg–Osgood curve: strain from stress and back, plastic strain, secant and tangent modulus, exponent."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Modulus, Ratio, Strain, Stress
from doubler.catalogue.limits import AT_LEAST_ONE, POSITIVE, Limit, condition

CURVE: dict[str, Limit] = {
    "modulus": POSITIVE,
    "proof_stress": POSITIVE,
    "exponent": AT_LEAST_ONE,
    "offset": POSITIVE,
}
_STEPS = 60
_STILL = 4.0 * np.finfo(float).eps


def plastic_part(stress: Any, proof_stress: Any, exponent: Any, offset: Any) -> Any:
    """Return the plastic strain, of the sign of the stress."""
    return np.sign(stress) * offset * (np.abs(stress) / proof_stress) ** exponent


def stress_at(strain: Any, modulus: Any, proof_stress: Any, exponent: Any, offset: Any) -> Any:
    """Return the stress of a strain, of its sign.

    With s = σ/σp it is the root of s + k sⁿ = e, which rises and bends upward: from above, Newton falls to it
    without overshooting. Either term alone gives a bound from above; the smaller is the start.
    """
    e = np.abs(strain) * modulus / proof_stress
    k = offset * modulus / proof_stress
    s = np.minimum(e, (e / k) ** (1.0 / exponent))
    for _ in range(_STEPS):
        power = k * s ** (exponent - 1.0)
        step = (s * (1.0 + power) - e) / (1.0 + exponent * power)
        s = np.maximum(s - step, 0.0)
        if np.all(np.abs(step) <= _STILL * s):
            break
    return np.sign(strain) * s * proof_stress


@worksheet_function("CURVE_RO_STRAIN", valid=CURVE)
def strain(stress: Stress, modulus: Modulus, proof_stress: Stress, exponent: Ratio, offset: Strain = 0.002) -> Strain:
    r"""Strain of a Ramberg–Osgood curve at a stress.

    .. math:: \varepsilon = \frac{\sigma}{E} + \varepsilon_p \left(\frac{\sigma}{\sigma_p}\right)^n

    Parameters
    ----------
    stress : stress
        Stress, tension positive; in compression the curve is the same with its sign turned.
    modulus : modulus
        Young's modulus.
    proof_stress : stress
        Proof stress, at which the plastic strain is the offset.
    exponent : ratio
        Exponent n, at least 1.
    offset : strain
        Plastic strain that defines the proof stress: 0.002 for the 0.2 % proof stress.

    Returns
    -------
    strain : strain
        Strain, of the sign of the stress.

    Notes
    -----
    One rise from zero, no unloading. A fit of the knee of metals without a yield point, good to some twice the proof
    strain; towards the strength use a fit that includes it (CURVE_RO_EXPONENT). It has no end: the strength is for
    the engineer to see to. Compression only with the proof stress of compression.

    References
    ----------
    W. Ramberg, W. R. Osgood, NACA Technical Note 902, 1943; in the form with the 0.2 % proof stress (from memory).

    Examples
    --------
    >>> cell('=CURVE_RO_STRAIN("400 MPa", "70 GPa", "400 MPa", 20)')
    [[0.007714285714, 'mm/mm']]
    """
    return stress / modulus + plastic_part(stress, proof_stress, exponent, offset)


@worksheet_function("CURVE_RO_STRESS", valid=CURVE)
def stress(strain: Strain, modulus: Modulus, proof_stress: Stress, exponent: Ratio, offset: Strain = 0.002) -> Stress:
    r"""Stress of a Ramberg–Osgood curve at a strain: the inverse of CURVE_RO_STRAIN.

    .. math:: \frac{\sigma}{E} + \varepsilon_p \left(\frac{\sigma}{\sigma_p}\right)^n = \varepsilon

    Parameters
    ----------
    strain : strain
        Strain, extension positive; in compression the curve is the same with its sign turned.
    modulus : modulus
        Young's modulus.
    proof_stress : stress
        Proof stress, at which the plastic strain is the offset.
    exponent : ratio
        Exponent n, at least 1.
    offset : strain
        Plastic strain that defines the proof stress: 0.002 for the 0.2 % proof stress.

    Returns
    -------
    stress : stress
        Stress, of the sign of the strain, to rounding.

    Notes
    -----
    One rise from zero, no unloading. By Newton's method from above, which does not fail: the curve rises and bends one
    way. It has no end: the strength and the strain at break are for the engineer to see to.

    References
    ----------
    W. Ramberg, W. R. Osgood, NACA Technical Note 902, 1943; in the form with the 0.2 % proof stress (from memory).

    Examples
    --------
    >>> cell('=CURVE_RO_STRESS("1 %", "70 GPa", "400 MPa", 20, , "MPa")')
    414.5083291
    """
    return stress_at(strain, modulus, proof_stress, exponent, offset)


@worksheet_function(
    "CURVE_RO_PLASTIC_STRAIN", valid={"proof_stress": POSITIVE, "exponent": AT_LEAST_ONE, "offset": POSITIVE}
)
def plastic_strain(stress: Stress, proof_stress: Stress, exponent: Ratio, offset: Strain = 0.002) -> Strain:
    r"""Plastic strain of a Ramberg–Osgood curve at a stress: what stays after unloading.

    .. math:: \varepsilon_{pl} = \varepsilon_p \left(\frac{\sigma}{\sigma_p}\right)^n

    Parameters
    ----------
    stress : stress
        Stress, tension positive.
    proof_stress : stress
        Proof stress, at which the plastic strain is the offset.
    exponent : ratio
        Exponent n, at least 1.
    offset : strain
        Plastic strain that defines the proof stress: 0.002 for the 0.2 % proof stress.

    Returns
    -------
    strain : strain
        Plastic strain, of the sign of the stress.

    Notes
    -----
    One rise from zero; unloading along the elastic slope.

    References
    ----------
    W. Ramberg, W. R. Osgood, NACA Technical Note 902, 1943; in the form with the 0.2 % proof stress (from memory).

    Examples
    --------
    >>> cell('=CURVE_RO_PLASTIC_STRAIN("380 MPa", "400 MPa", 20, , "µε")')
    716.9718448
    """
    return plastic_part(stress, proof_stress, exponent, offset)


@worksheet_function("CURVE_RO_SECANT", valid=CURVE)
def secant(stress: Stress, modulus: Modulus, proof_stress: Stress, exponent: Ratio, offset: Strain = 0.002) -> Modulus:
    r"""Secant modulus of a Ramberg–Osgood curve at a stress.

    .. math:: E_s = \frac{\sigma}{\varepsilon} = \frac{E}{1 + \varepsilon_p \frac{E}{\sigma_p}
        \left(\frac{|\sigma|}{\sigma_p}\right)^{n-1}}

    Parameters
    ----------
    stress : stress
        Stress; its sign does not matter.
    modulus : modulus
        Young's modulus.
    proof_stress : stress
        Proof stress, at which the plastic strain is the offset.
    exponent : ratio
        Exponent n, at least 1.
    offset : strain
        Plastic strain that defines the proof stress: 0.002 for the 0.2 % proof stress.

    Returns
    -------
    modulus : modulus
        Secant modulus; Young's modulus at zero stress.

    Notes
    -----
    One rise from zero. In compression with the proof stress of compression.

    References
    ----------
    W. Ramberg, W. R. Osgood, NACA Technical Note 902, 1943; in the form with the 0.2 % proof stress (from memory).

    Examples
    --------
    >>> cell('=CURVE_RO_SECANT("400 MPa", "70 GPa", "400 MPa", 20, , "GPa")')
    51.85185185
    """
    ratio = offset * modulus / proof_stress * (np.abs(stress) / proof_stress) ** (exponent - 1.0)
    return modulus / (1.0 + ratio)


@worksheet_function("CURVE_RO_TANGENT", valid=CURVE)
def tangent(stress: Stress, modulus: Modulus, proof_stress: Stress, exponent: Ratio, offset: Strain = 0.002) -> Modulus:
    r"""Tangent modulus of a Ramberg–Osgood curve at a stress.

    .. math:: E_t = \frac{d\sigma}{d\varepsilon} = \frac{E}{1 + n \varepsilon_p \frac{E}{\sigma_p}
        \left(\frac{|\sigma|}{\sigma_p}\right)^{n-1}}

    Parameters
    ----------
    stress : stress
        Stress; its sign does not matter.
    modulus : modulus
        Young's modulus.
    proof_stress : stress
        Proof stress, at which the plastic strain is the offset.
    exponent : ratio
        Exponent n, at least 1.
    offset : strain
        Plastic strain that defines the proof stress: 0.002 for the 0.2 % proof stress.

    Returns
    -------
    modulus : modulus
        Tangent modulus; Young's modulus at zero stress.

    Notes
    -----
    One rise from zero. For buckling beyond the proportional limit take the curve of compression.

    References
    ----------
    W. Ramberg, W. R. Osgood, NACA Technical Note 902, 1943; in the form with the 0.2 % proof stress (from memory).

    Examples
    --------
    >>> cell('=CURVE_RO_TANGENT("400 MPa", "70 GPa", "400 MPa", 20, , "GPa")')
    8.75
    """
    ratio = offset * modulus / proof_stress * (np.abs(stress) / proof_stress) ** (exponent - 1.0)
    return modulus / (1.0 + exponent * ratio)


@worksheet_function(
    "CURVE_RO_EXPONENT",
    valid={"proof_stress": POSITIVE, "strength": POSITIVE, "uniform_strain": POSITIVE, "offset": POSITIVE},
    conditions=(
        condition(
            "strength must be above proof_stress, and uniform_strain above offset",
            lambda proof_stress, strength, uniform_strain, offset: (
                (strength > proof_stress) & (uniform_strain > offset)
            ),
        ),
    ),
)
def exponent(proof_stress: Stress, strength: Stress, uniform_strain: Strain, offset: Strain = 0.002) -> Ratio:
    r"""Exponent of the Ramberg–Osgood curve through the proof stress and the strength.

    .. math:: n = \frac{\ln(\varepsilon_u / \varepsilon_p)}{\ln(\sigma_u / \sigma_p)}

    Parameters
    ----------
    proof_stress : stress
        Proof stress, at which the plastic strain is the offset.
    strength : stress
        Tensile strength, or any higher stress whose plastic strain is known.
    uniform_strain : strain
        Plastic strain at the strength.
    offset : strain
        Plastic strain that defines the proof stress: 0.002 for the 0.2 % proof stress.

    Returns
    -------
    exponent : ratio
        Exponent n.

    Notes
    -----
    Two points make the curve; between them, and more so below the proof stress, a test may lie elsewhere. The plastic
    strain at the strength is no elongation at break: that holds the neck.

    References
    ----------
    Common practice, from the two points put into the Ramberg–Osgood curve.

    Examples
    --------
    >>> cell('=CURVE_RO_EXPONENT("400 MPa", "470 MPa", "8 %")')
    22.87419747
    """
    return np.log(uniform_strain / offset) / np.log(strength / proof_stress)


@worksheet_function(
    "CURVE_RO_EXPONENT_SECANTS",
    valid={"stress_70": POSITIVE, "stress_85": POSITIVE},
    conditions=(
        condition(
            "stress_70 must be above stress_85: the secant falls as the stress rises",
            lambda stress_70, stress_85: stress_70 > stress_85,
        ),
    ),
)
def exponent_from_secants(stress_70: Stress, stress_85: Stress) -> Ratio:
    r"""Exponent of the Ramberg–Osgood curve from the stresses at the secants of 0.7 E and 0.85 E.

    .. math:: n = 1 + \frac{\ln(17/7)}{\ln(\sigma_{0.7} / \sigma_{0.85})}

    Parameters
    ----------
    stress_70 : stress
        Stress at which the curve meets the line of slope 0.7 E.
    stress_85 : stress
        Stress at which the curve meets the line of slope 0.85 E.

    Returns
    -------
    exponent : ratio
        Exponent n.

    Notes
    -----
    The curve then has its proof stress at stress_70 with the offset 3/7 of stress_70/E: give these two to the other
    Ramberg–Osgood functions, such as CURVE_RO_STRAIN.

    References
    ----------
    W. Ramberg, W. R. Osgood, NACA Technical Note 902, 1943 (the scheme read; this formula from memory).

    Examples
    --------
    >>> cell('=CURVE_RO_EXPONENT_SECANTS("45 ksi", "42 ksi")')
    13.86079527
    """
    return 1.0 + np.log(17.0 / 7.0) / np.log(stress_70 / stress_85)
