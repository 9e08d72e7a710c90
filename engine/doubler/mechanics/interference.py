"""The pressure between shaft and hub of an interference fit."""

from __future__ import annotations

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Length, Modulus, Pressure, Ratio
from doubler.catalogue.limits import NOT_NEGATIVE, POISSON, POSITIVE, condition


@worksheet_function(
    "STRESS_INTERFERENCE_PRESSURE",
    valid={
        "interference": NOT_NEGATIVE,
        "interface_radius": POSITIVE,
        "outer_radius": POSITIVE,
        "hub_modulus": POSITIVE,
        "hub_poissons_ratio": POISSON,
        "shaft_modulus": POSITIVE,
        "shaft_poissons_ratio": POISSON,
        "inner_radius": NOT_NEGATIVE,
    },
    conditions=(
        condition(
            "the interface radius must be smaller than the outer radius",
            lambda interface_radius, outer_radius: interface_radius < outer_radius,
        ),
        condition(
            "the inner radius of the shaft must be smaller than the interface radius",
            lambda inner_radius, interface_radius: inner_radius is None or inner_radius < interface_radius,
        ),
    ),
)
def interference_pressure(
    interference: Length,
    interface_radius: Length,
    outer_radius: Length,
    hub_modulus: Modulus,
    hub_poissons_ratio: Ratio,
    shaft_modulus: Modulus,
    shaft_poissons_ratio: Ratio,
    inner_radius: Length = None,
) -> Pressure:
    r"""Pressure between shaft and hub of an interference fit.

    .. math:: p = \frac{\delta}{c\,(k_h + k_s)}

    .. math:: k_h = \frac{1}{E_h}\left(\frac{b^2 + c^2}{b^2 - c^2} + \nu_h\right)

    .. math:: k_s = \frac{1}{E_s}\left(\frac{c^2 + a^2}{c^2 - a^2} - \nu_s\right)

    Parameters
    ----------
    interference : length
        Radial interference: half the difference of the diameters before assembly.
    interface_radius : length
        Radius of the joint, c.
    outer_radius : length
        Outer radius of the hub, b.
    hub_modulus : modulus
        Young's modulus of the hub.
    hub_poissons_ratio : ratio
        Poisson's ratio of the hub.
    shaft_modulus : modulus
        Young's modulus of the shaft.
    shaft_poissons_ratio : ratio
        Poisson's ratio of the shaft.
    inner_radius : length
        Inner radius of a hollow shaft, a; left out for a solid shaft.

    Returns
    -------
    pressure : pressure
        Contact pressure, uniform.

    Notes
    -----
    Both parts equally long, free to grow along the axis, linear elastic, at one temperature and at rest. At
    the edge of a hub shorter than its shaft the pressure is higher. The stresses follow with
    STRESS_THICK_CYLINDER_HOOP: this pressure inside the hub and outside the shaft.

    References
    ----------
    A. P. Boresi, R. J. Schmidt, Advanced Mechanics of Materials, section 11.4; R. G. Budynas, J. K. Nisbett,
    Shigley's Mechanical Engineering Design, section 3-16 (from memory).

    Examples
    --------
    >>> cell('=STRESS_INTERFERENCE_PRESSURE("0.02 mm","20 mm","40 mm","207 GPa",0.29,"207 GPa",0.29)')
    [[77.625, 'MPa']]
    """
    joint, outer = interface_radius**2, outer_radius**2
    bore = 0.0 if inner_radius is None else inner_radius**2
    hub = ((outer + joint) / (outer - joint) + hub_poissons_ratio) / hub_modulus
    shaft = ((joint + bore) / (joint - bore) - shaft_poissons_ratio) / shaft_modulus
    return interference / (interface_radius * (hub + shaft))
