"""The largest load or the smallest section for a wanted margin, where a closed form gives it."""

from __future__ import annotations

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Area, Force, Length, Moment, Ratio, SectionModulus, Stress, Values, X
from doubler.catalogue.limits import AT_LEAST_ONE, NOT_NEGATIVE, POSITIVE, between, condition

_WANTED = {"margin": NOT_NEGATIVE, "safety_factor": AT_LEAST_ONE, "fitting_factor": AT_LEAST_ONE}


def _no_load(name: str) -> str:
    return f"with {name} zero no section is needed; give the load that sizes the part"


def _needed(load: Values, safety_factor: Values, fitting_factor: Values, margin: Values) -> Values:
    """Return the load that the part must carry."""
    return np.abs(load) * safety_factor * fitting_factor * (1.0 + margin)


@worksheet_function(
    "MARGIN_LARGEST_LOAD",
    conditions=(condition("the allowable must not be zero", lambda allowable: allowable != 0.0),),
    valid=_WANTED,
)
def largest_load(allowable: X, safety_factor: Ratio, fitting_factor: Ratio = 1.0, margin: Ratio = 0.0) -> X:
    r"""Largest limit load, stress or strain that leaves a wanted margin.

    .. math:: A = \frac{R}{FS \cdot FF \, (1 + MS)}

    Parameters
    ----------
    allowable : quantity
        Allowable; the result has its sign.
    safety_factor : ratio
        Factor of safety.
    fitting_factor : ratio, optional
        Fitting factor; 1 where left out.
    margin : ratio, optional
        Wanted margin of safety; 0 where left out.

    Returns
    -------
    load : quantity
        Largest limit load.

    Notes
    -----
    Right where stress grows in proportion to load.

    References
    ----------
    NASA-STD-5001B, section 3.2 (definition, solved for the load).

    Examples
    --------
    >>> cell('=MARGIN_LARGEST_LOAD("45 kN", 1.5, 1.2, 0.25)')
    [[20.0, 'kN']]
    """
    return allowable / (safety_factor * fitting_factor * (1.0 + margin))


@worksheet_function(
    "MARGIN_REQUIRED_ALLOWABLE",
    valid=_WANTED,
    conditions=(condition(_no_load("load"), lambda applied: applied != 0.0),),
)
def required_allowable(applied: X, safety_factor: Ratio, fitting_factor: Ratio = 1.0, margin: Ratio = 0.0) -> X:
    r"""Smallest allowable that leaves a wanted margin under a limit load.

    .. math:: R = FS \cdot FF \, (1 + MS) \, |A|

    Parameters
    ----------
    applied : quantity
        Limit load, stress or strain; taken by magnitude.
    safety_factor : ratio
        Factor of safety.
    fitting_factor : ratio, optional
        Fitting factor; 1 where left out.
    margin : ratio, optional
        Wanted margin of safety; 0 where left out.

    Returns
    -------
    allowable : quantity
        Smallest allowable, as a magnitude.

    Notes
    -----
    Right where stress grows in proportion to load.

    References
    ----------
    NASA-STD-5001B, section 3.2 (definition, solved for the allowable).

    Examples
    --------
    >>> cell('=MARGIN_REQUIRED_ALLOWABLE("20 kN", 1.5, 1.2, 0.25, "kN")')
    45.0
    """
    return _needed(applied, safety_factor, fitting_factor, margin)


@worksheet_function(
    "SECTION_REQUIRED_AREA",
    valid={"allowable": POSITIVE} | _WANTED,
    conditions=(condition(_no_load("force"), lambda force: force != 0.0),),
)
def required_area(
    force: Force, allowable: Stress, safety_factor: Ratio, fitting_factor: Ratio = 1.0, margin: Ratio = 0.0
) -> Area:
    r"""Smallest area for an axial or a shear force with a wanted margin.

    .. math:: A = \frac{FS \cdot FF \, (1 + MS) \, |F|}{R}

    Parameters
    ----------
    force : force
        Limit force; taken by magnitude.
    allowable : stress
        Allowable of the mean stress: of tension, compression or shear as the force is.
    safety_factor : ratio
        Factor of safety.
    fitting_factor : ratio, optional
        Fitting factor; 1 where left out.
    margin : ratio, optional
        Wanted margin of safety; 0 where left out.

    Returns
    -------
    area : area
        Smallest area.

    Notes
    -----
    Mean stress alone: no buckling, no stress concentration.

    References
    ----------
    Common practice.

    Examples
    --------
    >>> cell('=SECTION_REQUIRED_AREA("60 kN", "450 MPa", 1.5, , 0.2, "mm^2")')
    240.0
    """
    return _needed(force, safety_factor, fitting_factor, margin) / allowable


@worksheet_function(
    "SECTION_REQUIRED_MODULUS",
    valid={"allowable": POSITIVE} | _WANTED,
    conditions=(condition(_no_load("moment"), lambda moment: moment != 0.0),),
)
def required_modulus(
    moment: Moment, allowable: Stress, safety_factor: Ratio, fitting_factor: Ratio = 1.0, margin: Ratio = 0.0
) -> SectionModulus:
    r"""Smallest section modulus for a bending moment with a wanted margin.

    .. math:: W = \frac{FS \cdot FF \, (1 + MS) \, |M|}{R}

    Parameters
    ----------
    moment : moment
        Limit bending moment; taken by magnitude.
    allowable : stress
        Allowable of the bending stress at the extreme fibre.
    safety_factor : ratio
        Factor of safety.
    fitting_factor : ratio, optional
        Fitting factor; 1 where left out.
    margin : ratio, optional
        Wanted margin of safety; 0 where left out.

    Returns
    -------
    section_modulus : volume
        Smallest elastic section modulus.

    Notes
    -----
    Elastic bending about a principal axis; no lateral or local buckling.

    References
    ----------
    Common practice.

    Examples
    --------
    >>> cell('=SECTION_REQUIRED_MODULUS("3 kN*m", "450 MPa", 1.5, "mm^3")')
    10000.0
    """
    return _needed(moment, safety_factor, fitting_factor, margin) / allowable


@worksheet_function(
    "SECTION_REQUIRED_SHAFT",
    valid={"allowable": POSITIVE, "bore_ratio": between(0.0, 1.0, high_open=True)} | _WANTED,
    conditions=(condition(_no_load("moment and torque"), lambda moment, torque: (moment != 0.0) | (torque != 0.0)),),
)
def required_shaft(
    moment: Moment,
    torque: Moment,
    allowable: Stress,
    safety_factor: Ratio,
    bore_ratio: Ratio = 0.0,
    fitting_factor: Ratio = 1.0,
    margin: Ratio = 0.0,
) -> Length:
    r"""Smallest outer diameter of a shaft in bending and torsion with a wanted margin, by von Mises.

    .. math:: D = \left[ \frac{16\, FS \cdot FF (1 + MS)}{\pi (1 - m^4) R} \sqrt{4 M^2 + 3 T^2} \right]^{1/3}

    Parameters
    ----------
    moment : moment
        Limit bending moment; zero where there is none.
    torque : moment
        Limit torque; zero where there is none.
    allowable : stress
        Allowable of the equivalent stress.
    safety_factor : ratio
        Factor of safety.
    bore_ratio : ratio, optional
        Inner over outer diameter; 0, a solid shaft, where left out.
    fitting_factor : ratio, optional
        Fitting factor; 1 where left out.
    margin : ratio, optional
        Wanted margin of safety; 0 where left out.

    Returns
    -------
    diameter : length
        Smallest outer diameter.

    Notes
    -----
    Static strength at the outer fibre, ductile material; no fatigue, no keyway, no buckling of a thin wall.

    References
    ----------
    J. E. Shigley, Mechanical Engineering Design, chapter on shafts (from memory).

    Examples
    --------
    >>> cell('=SECTION_REQUIRED_SHAFT("400 N*m", "600 N*m", "300 MPa", 1.5, "mm")')
    32.2033792
    """
    equivalent = np.sqrt(4.0 * moment**2 + 3.0 * torque**2)
    needed = _needed(equivalent, safety_factor, fitting_factor, margin)
    return np.cbrt(16.0 * needed / (np.pi * (1.0 - bore_ratio**4) * allowable))
