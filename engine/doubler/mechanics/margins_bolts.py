"""Margins of one bolt and its hole: tension with preload, shear, both, separation, bearing, tear-out."""

from __future__ import annotations

from typing import Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Force, Length, Ratio, Stress, Values
from doubler.catalogue.limits import AT_LEAST_ONE, NOT_NEGATIVE, POSITIVE, between, condition
from doubler.mechanics.proportional import factor_on_all

Rule = Literal["exponents 2 and 3", "squares", "linear"]
_EXPONENTS = {"exponents 2 and 3": (2.0, 3.0), "squares": (2.0, 2.0), "linear": (1.0, 1.0)}
_NO_LOAD = "there is no finite margin at zero load"
_LOADED = condition(_NO_LOAD, lambda force: force != 0.0)
_FACTORS = {"safety_factor": AT_LEAST_ONE, "fitting_factor": AT_LEAST_ONE}


@worksheet_function(
    "MARGIN_BOLT_TENSION",
    valid={
        "external": NOT_NEGATIVE,
        "allowable": POSITIVE,
        "preload": NOT_NEGATIVE,
        "share": between(0.0, 1.0),
        **_FACTORS,
    },
    conditions=(condition(_NO_LOAD, lambda external, preload: (external > 0.0) | (preload > 0.0)),),
)
def tension(
    external: Force, allowable: Force, preload: Force, share: Ratio, safety_factor: Ratio, fitting_factor: Ratio = 1.0
) -> Ratio:
    r"""Margin of a preloaded bolt in tension, on its total load.

    .. math:: MS = \frac{R}{\max\left(F_0 + \Phi\, f P,\; f P\right)} - 1, \quad f = FS \cdot FF

    Parameters
    ----------
    external : force
        External pull on the bolt at limit load, factors not included; a push is refused.
    allowable : force
        Tension allowable of the bolt, yield or ultimate.
    preload : force
        Largest preload; zero must be written where there is none.
    share : ratio
        Share of the pull that the bolt feels while the joint is closed (STIFFNESS_BOLT_SHARE); 1 is on the safe side.
    safety_factor : ratio
        Factor of safety, on the external pull alone.
    fitting_factor : ratio, optional
        Fitting factor, on the external pull alone; 1 where left out.

    Returns
    -------
    margin : ratio
        Margin of safety on the total bolt load.

    Notes
    -----
    Total load method: the preload has no factor, and the margin is not a factor by which the pull may grow. Past
    separation the bolt carries the pull alone. Bending of the bolt and prying are not in it.

    References
    ----------
    J. A. Chambers, NASA TM-106943 (1995), margins of the bolt in tension (from memory).

    Examples
    --------
    >>> cell('=MARGIN_BOLT_TENSION("8 kN", "30 kN", "20 kN", 0.25, 1.5)')
    0.3043478261
    """
    factored = safety_factor * fitting_factor * external
    return allowable / np.maximum(preload + share * factored, factored) - 1.0


@worksheet_function(
    "MARGIN_BOLT_SHEAR",
    valid={"allowable": POSITIVE, "shear_planes": AT_LEAST_ONE, **_FACTORS},
    conditions=(_LOADED,),
)
def shear(
    force: Force, allowable: Force, safety_factor: Ratio, shear_planes: Ratio = 1.0, fitting_factor: Ratio = 1.0
) -> Ratio:
    r"""Margin of a bolt in shear.

    .. math:: MS = \frac{n R_s}{FS \cdot FF \, |V|} - 1

    Parameters
    ----------
    force : force
        Shear force on the bolt at limit load, factors not included; taken by magnitude.
    allowable : force
        Shear allowable of one plane; that of the thread where the thread is in the plane.
    safety_factor : ratio
        Factor of safety on the force.
    shear_planes : ratio, optional
        Number of planes that share the force equally; 1 where left out.
    fitting_factor : ratio, optional
        Fitting factor; 1 where left out.

    Returns
    -------
    margin : ratio
        Margin of safety in shear.

    Notes
    -----
    Friction from preload is not counted on.

    References
    ----------
    J. A. Chambers, NASA TM-106943 (1995), margins of the bolt in shear (from memory).

    Examples
    --------
    >>> cell('=MARGIN_BOLT_SHEAR("18 kN", "22 kN", 1.5, 2)')
    0.6296296296
    """
    return shear_planes * allowable / (safety_factor * fitting_factor * np.abs(force)) - 1.0


@worksheet_function(
    "MARGIN_BOLT_COMBINED",
    valid={
        "tension": NOT_NEGATIVE,
        "tension_allowable": POSITIVE,
        "shear_allowable": POSITIVE,
        **_FACTORS,
    },
    conditions=(condition(_NO_LOAD, lambda tension, shear: (tension != 0.0) | (shear != 0.0)),),
)
def combined(
    tension: Force,
    shear: Force,
    tension_allowable: Force,
    shear_allowable: Force,
    safety_factor: Ratio,
    rule: Rule,
    fitting_factor: Ratio = 1.0,
) -> Ratio:
    r"""Margin of a bolt in tension and shear together, by the factor on both that reaches the interaction's limit.

    .. math:: \left(k \frac{f T}{R_t}\right)^{a} + \left(k \frac{f |V|}{R_s}\right)^{b} = 1, \quad MS = k - 1,
        \quad f = FS \cdot FF

    Parameters
    ----------
    tension : force
        Tension of the bolt at limit load, factors not included; zero where it is pushed.
    shear : force
        Shear force at limit load, factors not included; taken by magnitude.
    tension_allowable : force
        Tension allowable.
    shear_allowable : force
        Shear allowable for all planes that carry the force.
    safety_factor : ratio
        Factor of safety on both.
    rule : choice
        exponents 2 and 3 (tension squared, shear cubed: full shank in the shear plane), squares, or linear.
    fitting_factor : ratio, optional
        Fitting factor; 1 where left out.

    Returns
    -------
    margin : ratio
        Margin of safety by proportional load.

    Notes
    -----
    Both loads grow together. For a preload that stays while they grow use MARGIN_INTERACTION_CONSTANT. The
    exponents hold for steel bolts in tests; squares are safer, linear the safest.

    References
    ----------
    Exponents 2 and 3: J. A. Chambers, NASA TM-106943 (1995), equation (59), there with a short cut for the margin
    that is on the unsafe side and is not used here.

    Examples
    --------
    >>> cell('=MARGIN_BOLT_COMBINED("10 kN", "8 kN", "30 kN", "24 kN", 1.5, "exponents 2 and 3")')
    0.5097553325
    """
    factor = safety_factor * fitting_factor
    first, second = factor * tension / tension_allowable, factor * np.abs(shear) / shear_allowable
    ratios = np.stack(np.broadcast_arrays(first, second), axis=-1)
    return factor_on_all(ratios, np.array(_EXPONENTS[rule])) - 1.0


@worksheet_function(
    "MARGIN_BOLT_SEPARATION",
    valid={"external": POSITIVE, "preload": POSITIVE, "separation_factor": AT_LEAST_ONE},
)
def separation(external: Force, preload: Force, separation_factor: Ratio) -> Ratio:
    r"""Margin of a preloaded joint against opening.

    .. math:: MS = \frac{F_{0,min}}{FS_{sep} \, P} - 1

    Parameters
    ----------
    external : force
        Pull that separates the joint at this bolt, at limit load, factors not included.
    preload : force
        Least preload: scatter, relaxation and temperature taken off.
    separation_factor : ratio
        Factor of safety against separation.

    Returns
    -------
    margin : ratio
        Margin against separation.

    Notes
    -----
    The share of the pull that the bolt takes is not counted on, which is on the safe side.

    References
    ----------
    J. A. Chambers, NASA TM-106943 (1995), equation (68); its factors are 1.2 for structure and 1.4 for pressure.

    Examples
    --------
    >>> cell('=MARGIN_BOLT_SEPARATION("10 kN", "18 kN", 1.2)')
    0.5
    """
    return preload / (separation_factor * external) - 1.0


def _plate(carried: Values, force: Values, safety_factor: Values, fitting_factor: Values) -> Values:
    return carried / (safety_factor * fitting_factor * np.abs(force)) - 1.0


@worksheet_function(
    "MARGIN_BOLT_BEARING",
    valid={"diameter": POSITIVE, "thickness": POSITIVE, "bearing_allowable": POSITIVE, **_FACTORS},
    conditions=(_LOADED,),
)
def bearing(
    force: Force,
    diameter: Length,
    thickness: Length,
    bearing_allowable: Stress,
    safety_factor: Ratio,
    fitting_factor: Ratio = 1.0,
) -> Ratio:
    r"""Margin of a plate in bearing under a bolt.

    .. math:: MS = \frac{F_{br}\, D\, t}{FS \cdot FF \, |V|} - 1

    Parameters
    ----------
    force : force
        Force that the bolt brings onto the plate at limit load, factors not included; taken by magnitude.
    diameter : length
        Diameter of the bolt.
    thickness : length
        Thickness in bearing: without countersink and chamfer.
    bearing_allowable : stress
        Bearing allowable for this edge distance, on the projected area.
    safety_factor : ratio
        Factor of safety on the force.
    fitting_factor : ratio, optional
        Fitting or bearing factor; 1 where left out.

    Returns
    -------
    margin : ratio
        Margin of safety in bearing.

    Notes
    -----
    Close-fitting bolt; tear-out and net section are checks of their own.

    References
    ----------
    J. A. Chambers, NASA TM-106943 (1995), equations (69) to (74).

    Examples
    --------
    >>> cell('=MARGIN_BOLT_BEARING("8000 lbf", "0.5 in", "0.25 in", "100 ksi", 1)')
    0.5625
    """
    return _plate(bearing_allowable * diameter * thickness, force, safety_factor, fitting_factor)


@worksheet_function(
    "MARGIN_BOLT_TEAR_OUT",
    valid={
        "diameter": POSITIVE,
        "thickness": POSITIVE,
        "edge_distance": POSITIVE,
        "shear_allowable": POSITIVE,
        **_FACTORS,
    },
    conditions=(
        _LOADED,
        condition(
            "the edge distance must be at least 1.5 diameters; nearer to the edge the two-plane formula does not hold",
            lambda diameter, edge_distance: edge_distance >= 1.5 * diameter * (1.0 - 1e-12),
        ),
    ),
)
def tear_out(
    force: Force,
    diameter: Length,
    thickness: Length,
    edge_distance: Length,
    shear_allowable: Stress,
    safety_factor: Ratio,
    fitting_factor: Ratio = 1.0,
) -> Ratio:
    r"""Margin of a plate against tearing out between bolt and edge along two planes.

    .. math:: MS = \frac{2 F_{su}\, t \left(e - D/2\right)}{FS \cdot FF \, |V|} - 1

    Parameters
    ----------
    force : force
        Force on the plate towards its edge at limit load, factors not included; taken by magnitude.
    diameter : length
        Diameter of the hole.
    thickness : length
        Thickness of the plate.
    edge_distance : length
        Distance from the centre of the hole to the edge, along the force.
    shear_allowable : stress
        Shear allowable of the plate.
    safety_factor : ratio
        Factor of safety on the force.
    fitting_factor : ratio, optional
        Fitting factor; 1 where left out.

    Returns
    -------
    margin : ratio
        Margin of safety against tear-out.

    Notes
    -----
    The source recommends two diameters of edge distance, never below 1.5, and closer analysis below a margin of 0.5.

    References
    ----------
    J. A. Chambers, NASA TM-106943 (1995), equations (69) to (74).

    Examples
    --------
    >>> cell('=MARGIN_BOLT_TEAR_OUT("8000 lbf", "0.5 in", "0.25 in", "0.75 in", "40 ksi", 1)')
    0.25
    """
    area = 2.0 * thickness * (edge_distance - diameter / 2.0)
    return _plate(shear_allowable * area, force, safety_factor, fitting_factor)
