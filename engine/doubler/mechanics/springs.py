"""Springs in series and in parallel."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Stiffness, column
from doubler.catalogue.limits import POSITIVE

StiffnessColumn: Any = column(Stiffness)


@worksheet_function("STIFFNESS_SERIES", valid={"stiffnesses": POSITIVE})
def series(stiffnesses: StiffnessColumn) -> Stiffness:
    r"""Stiffness of springs one behind the other, each carrying the whole force.

    .. math:: \frac{1}{k} = \sum_i \frac{1}{k_i}

    Parameters
    ----------
    stiffnesses : column of stiffness
        Stiffness of each spring.

    Returns
    -------
    stiffness : stiffness
        Stiffness of the chain; below the smallest of them.

    Notes
    -----
    Linear springs along one line.

    References
    ----------
    J. E. Shigley, Mechanical Engineering Design, chapter on deflection and stiffness (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_SERIES({"300 N/mm";"600 N/mm"}, "N/mm")')
    200.0
    """
    return 1.0 / np.sum(1.0 / stiffnesses, axis=-1)


@worksheet_function("STIFFNESS_PARALLEL", valid={"stiffnesses": POSITIVE})
def parallel(stiffnesses: StiffnessColumn) -> Stiffness:
    r"""Stiffness of springs side by side, all with the same deflection.

    .. math:: k = \sum_i k_i

    Parameters
    ----------
    stiffnesses : column of stiffness
        Stiffness of each spring.

    Returns
    -------
    stiffness : stiffness
        Stiffness of them together.

    Notes
    -----
    Linear springs; the part that joins them does not turn.

    References
    ----------
    J. E. Shigley, Mechanical Engineering Design, chapter on deflection and stiffness (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_PARALLEL({"300 N/mm";"600 N/mm"}, "N/mm")')
    900.0
    """
    return np.sum(stiffnesses, axis=-1)
