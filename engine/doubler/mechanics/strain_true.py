"""Engineering and true stress and strain, and the limit that necking sets to the conversion."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Area, Strain, Stress
from doubler.catalogue.limits import POSITIVE, Condition, above, condition

_OVER = (
    "the strain lies beyond necking, where it is no longer even along the bar and the conversion does not hold; "
    "work from the area at the neck"
)


def _before(necking_strain: Any, strain: Any) -> Any:
    return True if necking_strain is None else strain <= necking_strain


BEFORE_NECKING: Condition = condition(_OVER, lambda strain, necking_strain: _before(necking_strain, strain))
_UNSQUASHED = above(-1.0)


@worksheet_function(
    "STRAIN_TRUE", valid={"strain": _UNSQUASHED, "necking_strain": POSITIVE}, conditions=(BEFORE_NECKING,)
)
def true_strain(strain: Strain, necking_strain: Strain | None = None) -> Strain:  # noqa: ARG001, judged by the condition
    r"""True (logarithmic) strain from engineering strain, up to necking.

    .. math:: \varepsilon_t = \ln(1 + \varepsilon)

    Parameters
    ----------
    strain : strain
        Engineering strain, extension positive.
    necking_strain : strain, optional
        Engineering strain at which the bar begins to neck (at the largest load); a strain beyond it is refused.

    Returns
    -------
    strain : strain
        True strain, extension positive.

    Notes
    -----
    The strain must be even along the gauge length: up to necking in tension, without barrelling in compression.
    Without necking_strain that is for the engineer to see to.

    References
    ----------
    N. E. Dowling, Mechanical Behavior of Materials, chapter on the tension test (from memory).

    Examples
    --------
    >>> cell('=STRAIN_TRUE("5 %")')
    [[0.04879016417, 'mm/mm']]
    """
    return np.log1p(strain)


@worksheet_function("STRAIN_ENGINEERING_FROM_TRUE", valid={"necking_strain": POSITIVE}, conditions=(BEFORE_NECKING,))
def engineering_strain(strain: Strain, necking_strain: Strain | None = None) -> Strain:  # noqa: ARG001, judged by the condition
    r"""Engineering strain from true (logarithmic) strain, up to necking.

    .. math:: \varepsilon = e^{\varepsilon_t} - 1

    Parameters
    ----------
    strain : strain
        True strain, extension positive.
    necking_strain : strain, optional
        True strain at which the bar begins to neck; a strain beyond it is refused.

    Returns
    -------
    strain : strain
        Engineering strain, extension positive.

    Notes
    -----
    The strain must be even along the gauge length: up to necking in tension, without barrelling in compression.
    Without necking_strain that is for the engineer to see to.

    References
    ----------
    N. E. Dowling, Mechanical Behavior of Materials, chapter on the tension test (from memory).

    Examples
    --------
    >>> cell('=STRAIN_ENGINEERING_FROM_TRUE("5 %")')
    [[0.05127109638, 'mm/mm']]
    """
    return np.expm1(strain)


@worksheet_function(
    "STRESS_TRUE", valid={"strain": _UNSQUASHED, "necking_strain": POSITIVE}, conditions=(BEFORE_NECKING,)
)
def true_stress(stress: Stress, strain: Strain, necking_strain: Strain | None = None) -> Stress:  # noqa: ARG001, judged by the condition
    r"""True stress (load over present area) from engineering stress and strain, up to necking.

    .. math:: \sigma_t = \sigma (1 + \varepsilon)

    Parameters
    ----------
    stress : stress
        Engineering stress (load over original area), tension positive.
    strain : strain
        Engineering strain, extension positive.
    necking_strain : strain, optional
        Engineering strain at which the bar begins to neck (at the largest load); a strain beyond it is refused.

    Returns
    -------
    stress : stress
        True stress, tension positive.

    Notes
    -----
    The volume stays the same, so the strain should be mostly plastic; where it is elastic the error is of the size
    :math:`(1 - 2\nu)\varepsilon`, small in metals. The strain must be even along the gauge length: up to necking.

    References
    ----------
    N. E. Dowling, Mechanical Behavior of Materials, chapter on the tension test (from memory).

    Examples
    --------
    >>> cell('=STRESS_TRUE("400 MPa", "5 %", "MPa")')
    420.0
    """
    return stress * (1.0 + strain)


@worksheet_function("STRESS_ENGINEERING", valid={"necking_strain": POSITIVE}, conditions=(BEFORE_NECKING,))
def engineering_stress(stress: Stress, strain: Strain, necking_strain: Strain | None = None) -> Stress:  # noqa: ARG001, judged by the condition
    r"""Engineering stress (load over original area) from true stress and true strain, up to necking.

    .. math:: \sigma = \sigma_t e^{-\varepsilon_t}

    Parameters
    ----------
    stress : stress
        True stress (load over present area), tension positive.
    strain : strain
        True strain, extension positive.
    necking_strain : strain, optional
        True strain at which the bar begins to neck; a strain beyond it is refused.

    Returns
    -------
    stress : stress
        Engineering stress, tension positive.

    Notes
    -----
    The volume stays the same, so the strain should be mostly plastic; the strain must be even along the gauge
    length: up to necking.

    References
    ----------
    N. E. Dowling, Mechanical Behavior of Materials, chapter on the tension test (from memory).

    Examples
    --------
    >>> cell('=STRESS_ENGINEERING("420 MPa", "5 %", "MPa")')
    399.5163583
    """
    return stress * np.exp(-strain)


@worksheet_function("STRAIN_TRUE_FROM_AREA", valid={"first_area": POSITIVE, "area": POSITIVE})
def true_from_area(first_area: Area, area: Area) -> Strain:
    r"""True strain from the change of the cross-section; holds at a neck as well.

    .. math:: \varepsilon_t = \ln \frac{A_0}{A}

    Parameters
    ----------
    first_area : area
        Area of the section before straining.
    area : area
        Area of the same section now: at a neck, its smallest.

    Returns
    -------
    strain : strain
        True strain at that section, extension positive.

    Notes
    -----
    The volume stays the same: plastic strain that is large beside the elastic one.

    References
    ----------
    N. E. Dowling, Mechanical Behavior of Materials, chapter on the tension test (from memory).

    Examples
    --------
    >>> cell('=STRAIN_TRUE_FROM_AREA("78.5 mm^2", "50 mm^2")')
    [[0.4510756194, 'mm/mm']]
    """
    return np.log(first_area / area)
