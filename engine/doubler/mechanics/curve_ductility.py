"""Ductile or brittle by elongation, and the power-law flow curve with its strength at necking."""

from __future__ import annotations

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Ratio, Strain, Stress, Text
from doubler.catalogue.limits import NOT_NEGATIVE, POSITIVE, between, condition

_EXPONENT = between(0.0, 1.0, low_open=True)


@worksheet_function("CURVE_DUCTILITY", valid={"elongation": NOT_NEGATIVE, "limit": POSITIVE})
def ductility(elongation: Strain, limit: Strain = 0.05) -> Text:
    r"""Whether a material counts as ductile or brittle by its elongation at break: the 5 % rule.

    .. math:: A \ge 0.05 \Rightarrow \text{ductile}, \quad A < 0.05 \Rightarrow \text{brittle}

    Parameters
    ----------
    elongation : strain
        Elongation at break, from a tension test.
    limit : strain
        Elongation from which on the material counts as ductile; 5 % is the rule's.

    Returns
    -------
    class : text
        "ductile" or "brittle".

    Notes
    -----
    A rule for choosing a static criterion, at the temperature and rate of the test: cold, impact, notches, thick
    sections and hydrogen make a ductile material break brittle. For a ductile material von Mises or Tresca, for a
    brittle one Coulomb–Mohr or modified Mohr suit.

    References
    ----------
    R. G. Budynas, J. K. Nisbett, Shigley's Mechanical Engineering Design, section 5-1 (from memory).

    Examples
    --------
    >>> cell('=CURVE_DUCTILITY("12 %")')
    'ductile'
    >>> cell('=CURVE_DUCTILITY("0.6 %")')
    'brittle'
    """
    elongation, limit = np.broadcast_arrays(elongation, limit)
    return np.where(elongation >= limit, "ductile", "brittle").astype(object)


_BEFORE_NECKING = condition(
    "the true strain lies beyond necking, which is at a true strain of the exponent's size",
    lambda true_strain, exponent: true_strain <= exponent,
)


@worksheet_function(
    "CURVE_FLOW_STRESS",
    valid={"true_strain": NOT_NEGATIVE, "strength_coefficient": POSITIVE, "exponent": _EXPONENT},
    conditions=(_BEFORE_NECKING,),
)
def flow_stress(true_strain: Strain, strength_coefficient: Stress, exponent: Ratio) -> Stress:
    r"""True stress of a power-law flow curve, up to necking.

    .. math:: \sigma_t = K \varepsilon_t^n

    Parameters
    ----------
    true_strain : strain
        True strain, up to the exponent, where the bar begins to neck.
    strength_coefficient : stress
        Strength coefficient K: true stress at a true strain of 1.
    exponent : ratio
        Strain-hardening exponent n, above 0 and at most 1.

    Returns
    -------
    stress : stress
        True stress.

    Notes
    -----
    For strains so large that their elastic part does not count: the law has no elastic slope at zero. Tension at a
    steady temperature and rate.

    References
    ----------
    G. E. Dieter, Mechanical Metallurgy, section 8-3 (from memory).

    Examples
    --------
    >>> cell('=CURVE_FLOW_STRESS(0.1, "530 MPa", 0.26, "MPa")')
    291.2566631
    """
    return strength_coefficient * true_strain**exponent


@worksheet_function("CURVE_FLOW_STRENGTH", valid={"strength_coefficient": POSITIVE, "exponent": _EXPONENT})
def flow_strength(strength_coefficient: Stress, exponent: Ratio) -> Stress:
    r"""Tensile strength, as engineering stress, of a material with a power-law flow curve.

    .. math:: R_m = K \left(\frac{n}{e}\right)^n

    Parameters
    ----------
    strength_coefficient : stress
        Strength coefficient K: true stress at a true strain of 1.
    exponent : ratio
        Strain-hardening exponent n, above 0 and at most 1.

    Returns
    -------
    strength : stress
        Largest engineering stress.

    Notes
    -----
    By Considère's condition the load is largest where the true stress equals its own slope: at a true strain of n.
    The volume stays the same.

    References
    ----------
    G. E. Dieter, Mechanical Metallurgy, section 8-3 (from memory).

    Examples
    --------
    >>> cell('=CURVE_FLOW_STRENGTH("530 MPa", 0.26, "MPa")')
    287.9070998
    """
    return strength_coefficient * (exponent / np.e) ** exponent


@worksheet_function("CURVE_FLOW_NECKING_STRAIN", valid={"exponent": _EXPONENT})
def flow_necking_strain(exponent: Ratio) -> Strain:
    r"""Engineering strain at which a bar with a power-law flow curve begins to neck.

    .. math:: \varepsilon = e^n - 1

    Parameters
    ----------
    exponent : ratio
        Strain-hardening exponent n, above 0 and at most 1.

    Returns
    -------
    strain : strain
        Engineering strain at the largest load, extension positive: the limit of the conversions to true stress and
        strain.

    Notes
    -----
    By Considère's condition, in tension; a bar of even section without notch.

    References
    ----------
    G. E. Dieter, Mechanical Metallurgy, section 8-3 (from memory).

    Examples
    --------
    >>> cell('=CURVE_FLOW_NECKING_STRAIN(0.26, "%")')
    29.69300867
    """
    return np.expm1(exponent)
