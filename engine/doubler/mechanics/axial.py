"""Direct stresses and strains of bars: axial, direct shear, bearing."""

from __future__ import annotations

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Area, Force, Stress
from doubler.catalogue.limits import POSITIVE


@worksheet_function("STRESS_AXIAL", valid={"area": POSITIVE})
def axial(force: Force, area: Area) -> Stress:
    r"""Mean normal stress on a section; tension positive.

    .. math:: \sigma = \frac{F}{A}

    Parameters
    ----------
    force : force
        Axial force through the centroid of the section, tension positive.
    area : area
        Area of the section that carries it.

    Returns
    -------
    stress : stress
        Mean normal stress, tension positive.

    Notes
    -----
    Uniform over the section only away from load introductions, holes and steps (Saint-Venant's principle). A compressed
    bar may buckle first.

    References
    ----------
    J. M. Gere, Mechanics of Materials, section 1.2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_AXIAL("12 kN", "150 mm^2", "MPa")')
    80.0
    """
    return force / area
