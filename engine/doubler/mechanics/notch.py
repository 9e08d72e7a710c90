"""Notches beyond elastic theory: notch sensitivity, fatigue factor, Neuber's rule."""

from __future__ import annotations

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Length, Modulus, Ratio, Stress
from doubler.catalogue.limits import AT_LEAST_ONE, NOT_NEGATIVE, POSITIVE, Limit, condition


@worksheet_function("STRESS_NOTCH_SENSITIVITY", valid={"radius": POSITIVE, "material_length": NOT_NEGATIVE})
def sensitivity(radius: Length, material_length: Length) -> Ratio:
    r"""Notch sensitivity in fatigue, by Peterson.

    .. math:: q = \frac{1}{1 + a/r}

    Parameters
    ----------
    radius : length
        Radius of the notch.
    material_length : length
        Peterson's length of the material, a.

    Returns
    -------
    sensitivity : ratio
        Between 0 (the notch does no harm) and 1 (its elastic factor holds in full).

    Notes
    -----
    The length falls with the strength of the material: take it from tests or a material's record.

    References
    ----------
    R. E. Peterson, in Sines, Waisman, Metal Fatigue, 1959 (from memory).

    Examples
    --------
    >>> cell('=STRESS_NOTCH_SENSITIVITY("1.5 mm", "0.5 mm")')
    0.75
    """
    return radius / (radius + material_length)


@worksheet_function(
    "STRESS_FATIGUE_FACTOR",
    valid={"concentration": AT_LEAST_ONE, "sensitivity": Limit(0.0, 1.0, False, False, "must lie from 0 to 1")},
)
def fatigue_factor(concentration: Ratio, sensitivity: Ratio) -> Ratio:
    r"""Fatigue notch factor from the elastic factor and the notch sensitivity.

    .. math:: K_f = 1 + q\,(K_t - 1)

    Parameters
    ----------
    concentration : ratio
        Elastic stress concentration factor.
    sensitivity : ratio
        Notch sensitivity, 0 to 1; 1 is always safe.

    Returns
    -------
    factor : ratio
        Fatigue limit without the notch over that with it.

    Notes
    -----
    At long life. On the same nominal stress as the elastic factor.

    References
    ----------
    Budynas, Nisbett, Shigley's Mechanical Engineering Design, section 6-10 (from memory).

    Examples
    --------
    >>> cell('=STRESS_FATIGUE_FACTOR(2.4, 0.75)')
    2.05
    """
    return 1.0 + sensitivity * (concentration - 1.0)


@worksheet_function(
    "STRESS_NEUBER",
    valid={
        "concentration": AT_LEAST_ONE,
        "modulus": POSITIVE,
        "strength_coefficient": POSITIVE,
        "hardening_exponent": Limit(0.02, 1.0, False, False, "must lie from 0.02 to 1"),
    },
    conditions=(
        condition(
            "the nominal stress itself passes the 0.2 % proof stress of the curve, so that the whole section yields "
            "and Neuber's rule with an elastic nominal strain is unsafe",
            lambda nominal_stress, strength_coefficient, hardening_exponent: (
                np.abs(nominal_stress) <= strength_coefficient * 0.002**hardening_exponent * (1.0 + 1e-9)
            ),
        ),
    ),
)
def neuber(
    nominal_stress: Stress,
    concentration: Ratio,
    modulus: Modulus,
    strength_coefficient: Stress,
    hardening_exponent: Ratio,
) -> Stress:
    r"""Local stress at a notch that yields, by Neuber's rule with a Ramberg–Osgood curve.

    .. math:: \sigma\varepsilon = \frac{(K_t S)^2}{E}, \quad \varepsilon = \frac{\sigma}{E} +
        \left(\frac{\sigma}{K'}\right)^{1/n'}

    Parameters
    ----------
    nominal_stress : stress
        Nominal stress S, in the same section as the concentration factor.
    concentration : ratio
        Elastic stress concentration factor.
    modulus : modulus
        Young's modulus.
    strength_coefficient : stress
        Coefficient K' of the stress-strain curve.
    hardening_exponent : ratio
        Exponent n' of the stress-strain curve, 0.02 to 1.

    Returns
    -------
    stress : stress
        Local stress, of the sign of the nominal stress. The local strain is (K S)²/(E σ).

    Notes
    -----
    The section as a whole stays elastic: a nominal stress beyond the 0.2 % proof stress of the curve, K'·0.002ⁿ', is
    refused. For loading from zero with the monotonic or the stabilised cyclic
    curve; for a range of a hysteresis loop give half the range. Overestimates the strain in thick parts (plane
    strain), which is safe.

    References
    ----------
    H. Neuber, Journal of Applied Mechanics 28, 1961 (from memory).

    Examples
    --------
    >>> cell('=STRESS_NEUBER("200 MPa", 3, "70 GPa", "700 MPa", 0.1, "MPa")')
    421.049302
    """
    elastic = concentration * np.abs(nominal_stress)
    power = 1.0 / hardening_exponent
    # Either part of the strain alone would give a larger stress: from the smaller of the two, Newton falls to the root.
    plastic = strength_coefficient * (elastic**2 / (modulus * strength_coefficient)) ** (1.0 / (power + 1.0))
    start = np.minimum(elastic, plastic)
    stress = start
    for _ in range(12):
        flow = modulus * (stress / strength_coefficient) ** power
        stress = stress - (stress * (stress + flow) - elastic**2) / (2.0 * stress + (1.0 + power) * flow)
    return np.where(elastic > 0.0, np.sign(nominal_stress) * stress, 0.0)
