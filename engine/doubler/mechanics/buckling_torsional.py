"""Buckling with twist: of a column about its axis, of a beam sideways."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import (
    Area,
    Force,
    Length,
    Modulus,
    Moment,
    Ratio,
    SecondMoment,
    SectionModulus,
    Stress,
    TorsionConstant,
    WarpingConstant,
)
from doubler.catalogue.limits import AT_LEAST_ONE, NOT_NEGATIVE, POSITIVE, between, condition
from doubler.mechanics.buckling_columns import ROUNDING

_SOME_STIFFNESS = condition(
    "torsion_constant and warping_constant cannot both be zero: no section is without stiffness",
    lambda torsion_constant, warping_constant: (torsion_constant > 0.0) | (warping_constant > 0.0),
)


def _torsional_load(
    length: Any, torsion_constant: Any, warping_constant: Any, area: Any, polar: Any, modulus: Any, shear_modulus: Any
) -> Any:
    return area / polar * (shear_modulus * torsion_constant + np.pi**2 * modulus * warping_constant / length**2)


def _torsion_within(
    length: Any,
    torsion_constant: Any,
    warping_constant: Any,
    area: Any,
    polar_moment: Any,
    modulus: Any,
    shear_modulus: Any,
    proportional_limit: Any,
) -> Any:
    load = _torsional_load(length, torsion_constant, warping_constant, area, polar_moment, modulus, shear_modulus)
    return load <= ROUNDING * proportional_limit * area


@worksheet_function(
    "BUCKLING_TORSIONAL",
    valid={
        "length": POSITIVE,
        "torsion_constant": NOT_NEGATIVE,
        "warping_constant": NOT_NEGATIVE,
        "area": POSITIVE,
        "polar_moment": POSITIVE,
        "modulus": POSITIVE,
        "shear_modulus": POSITIVE,
        "proportional_limit": POSITIVE,
    },
    conditions=(
        _SOME_STIFFNESS,
        condition(
            "the torsional buckling stress lies above the proportional limit, where this formula is unsafe",
            _torsion_within,
        ),
    ),
)
def torsional(
    length: Length,
    torsion_constant: TorsionConstant,
    warping_constant: WarpingConstant,
    area: Area,
    polar_moment: SecondMoment,
    modulus: Modulus,
    shear_modulus: Modulus,
    proportional_limit: Stress,  # noqa: ARG001, judged by the condition
) -> Force:
    r"""Critical load of torsional buckling of a column with two axes of symmetry; a magnitude.

    .. math:: P_{cr} = \frac{A}{I_p}\left(G J + \frac{\pi^2 E I_\omega}{L^2}\right)

    Parameters
    ----------
    length : length
        Length between ends that cannot twist but are free to warp.
    torsion_constant : second moment
        Saint-Venant torsion constant.
    warping_constant : warping constant
        Warping constant about the shear centre.
    area : area
        Area of the section.
    polar_moment : second moment
        Polar second moment about the centroid, the sum of those about both axes.
    modulus : modulus
        Young's modulus.
    shear_modulus : modulus
        Shear modulus.
    proportional_limit : stress
        Stress up to which the material is linear in compression.

    Returns
    -------
    force : force
        Critical compressive force, a positive magnitude.

    Notes
    -----
    Shear centre and centroid in one point (doubly or point-symmetric sections); elsewhere twisting couples with
    bending and the load is lower. The least of this and both of BUCKLING_EULER governs.

    References
    ----------
    S. P. Timoshenko, J. M. Gere, Theory of Elastic Stability, section 5.4 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_TORSIONAL("1 m","700 mm^4","3e7 mm^6","375 mm^2","24 cm^4","75 GPa","21 GPa","0.2 GPa","kN")')
    57.66657797
    """
    return _torsional_load(length, torsion_constant, warping_constant, area, polar_moment, modulus, shear_modulus)


def _lateral_moment(
    length: Any, second: Any, torsion: Any, warping: Any, modulus: Any, shear_modulus: Any, factor: Any
) -> Any:
    """Return the elastic critical moment of lateral-torsional buckling."""
    minor = np.pi**2 * modulus * second / length**2
    return factor * np.sqrt(minor * (shear_modulus * torsion + np.pi**2 * modulus * warping / length**2))


def _lateral_within(
    length: Any,
    minor_second_moment: Any,
    torsion_constant: Any,
    warping_constant: Any,
    section_modulus: Any,
    modulus: Any,
    shear_modulus: Any,
    proportional_limit: Any,
    moment_factor: Any,
) -> Any:
    moment = _lateral_moment(
        length, minor_second_moment, torsion_constant, warping_constant, modulus, shear_modulus, moment_factor
    )
    return moment <= ROUNDING * proportional_limit * section_modulus


@worksheet_function(
    "BUCKLING_LATERAL_TORSIONAL",
    valid={
        "length": POSITIVE,
        "minor_second_moment": POSITIVE,
        "torsion_constant": NOT_NEGATIVE,
        "warping_constant": NOT_NEGATIVE,
        "section_modulus": POSITIVE,
        "modulus": POSITIVE,
        "shear_modulus": POSITIVE,
        "proportional_limit": POSITIVE,
        "moment_factor": AT_LEAST_ONE,
    },
    conditions=(
        _SOME_STIFFNESS,
        condition(
            "the lateral buckling stress lies above the proportional limit, where this elastic formula is unsafe",
            _lateral_within,
        ),
    ),
)
def lateral_torsional(
    length: Length,
    minor_second_moment: SecondMoment,
    torsion_constant: TorsionConstant,
    warping_constant: WarpingConstant,
    section_modulus: SectionModulus,  # noqa: ARG001, judged by the condition
    modulus: Modulus,
    shear_modulus: Modulus,
    proportional_limit: Stress,  # noqa: ARG001, judged by the condition
    moment_factor: Ratio = 1.0,
) -> Moment:
    r"""Critical moment of lateral-torsional buckling of a doubly symmetric beam; a magnitude.

    .. math:: M_{cr} = C_1 \frac{\pi}{L}\sqrt{E I_z \left(G J + \frac{\pi^2 E I_\omega}{L^2}\right)}

    Parameters
    ----------
    length : length
        Length between points held against moving sideways and against twisting, free to warp.
    minor_second_moment : second moment
        Second moment of area about the minor axis.
    torsion_constant : second moment
        Saint-Venant torsion constant.
    warping_constant : warping constant
        Warping constant; for an I of equal flanges, minor second moment × (distance of flange centres)²/4.
    section_modulus : volume
        Elastic section modulus about the major axis; it serves the check of the stress alone.
    modulus : modulus
        Young's modulus.
    shear_modulus : modulus
        Shear modulus.
    proportional_limit : stress
        Stress up to which the material is linear in compression.
    moment_factor : ratio, optional
        C1 for the course of the moment, from BUCKLING_MOMENT_FACTOR; 1 (uniform moment, the worst) where left out.

    Returns
    -------
    moment : moment
        Critical value of the largest moment about the major axis, a positive magnitude.

    Notes
    -----
    Doubly symmetric section, elastic, bent about its major axis alone, loads (if any) at the height of the shear
    centre: a load on the upper flange of a beam lowers it. Refused where the stress passes the proportional limit.

    References
    ----------
    S. P. Timoshenko, J. M. Gere, Theory of Elastic Stability, section 6.3 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_LATERAL_TORSIONAL("4 m","140 cm4","7 cm4","13e9 mm6","200 cm3","2e5 MPa","8e4 MPa","0.2 GPa")')
    [[35273.62094, 'N·m']]
    """
    return _lateral_moment(
        length, minor_second_moment, torsion_constant, warping_constant, modulus, shear_modulus, moment_factor
    )


@worksheet_function("BUCKLING_MOMENT_FACTOR", valid={"end_moment_ratio": between(-1.0, 1.0)})
def moment_factor(end_moment_ratio: Ratio) -> Ratio:
    r"""Moment factor C1 of lateral-torsional buckling for a moment that varies linearly over the length.

    .. math:: C_1 = 1.75 - 1.05\,\psi + 0.3\,\psi^2 \le 2.3

    Parameters
    ----------
    end_moment_ratio : ratio
        Smaller over larger end moment: 1 for a uniform moment (single curvature), 0 for a moment at one end alone, -1
        for equal moments of double curvature.

    Returns
    -------
    ratio : ratio
        C1, 1 to 2.3.

    Notes
    -----
    No load between the points held. Some books take the ratio with the opposite sign: uniform moment gives 1 here.

    References
    ----------
    M. G. Salvadori, Lateral Buckling of I-beams, Transactions ASCE 120 (1955) (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_MOMENT_FACTOR(0)')
    1.75
    """
    return np.minimum(1.75 - 1.05 * end_moment_ratio + 0.3 * end_moment_ratio**2, 2.3)
