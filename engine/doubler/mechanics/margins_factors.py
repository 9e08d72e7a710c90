"""Special factors, of which the highest alone applies, and the whole factor on a load."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Ratio, Text, column
from doubler.catalogue.limits import AT_LEAST_ONE
from doubler.mechanics.table_rows import aligned

RatioColumn: Any = column(Ratio)
TextColumn: Any = column(Text)


@worksheet_function("MARGIN_SPECIAL_FACTOR", valid={"factors": AT_LEAST_ONE})
def special_factor(factors: RatioColumn) -> Ratio:
    r"""Special factor that applies where several do: the highest of them, not their product.

    .. math:: f_s = \max_i f_i

    Parameters
    ----------
    factors : column of ratio
        Special factors that bear on the part: casting, bearing, fitting and the like.

    Returns
    -------
    factor : ratio
        The one that applies beside the factor of safety.

    Notes
    -----
    For special factors that a rule says not to multiply with one another. Where the requirement asks for their
    product use PRODUCT. An error or an empty cell among them is an error.

    References
    ----------
    14 CFR 25.619 (the highest pertinent special factor; from memory).

    Examples
    --------
    >>> cell('=MARGIN_SPECIAL_FACTOR({1.25;1.15;1})')
    1.25
    """
    return np.max(factors, axis=-1)


@worksheet_function("MARGIN_SPECIAL_FACTOR_NAME", valid={"factors": AT_LEAST_ONE})
def special_factor_name(factors: RatioColumn, names: TextColumn) -> Text:
    r"""Name of the special factor that applies: the highest; of equal ones the first.

    .. math:: i^* = \arg\max_i f_i

    Parameters
    ----------
    factors : column of ratio
        Special factors that bear on the part.
    names : column of text
        Name of each; a heading above them is passed over.

    Returns
    -------
    name : text
        The factor that applies.

    Notes
    -----
    As MARGIN_SPECIAL_FACTOR.

    References
    ----------
    14 CFR 25.619 (the highest pertinent special factor; from memory).

    Examples
    --------
    >>> cell('=MARGIN_SPECIAL_FACTOR_NAME({1.25;1.15}, {"casting";"fitting"})')
    'casting'
    """
    found = np.array(aligned(names, factors.shape[-1], "names"), dtype=object)
    return found[np.argmax(factors, axis=-1)]


@worksheet_function(
    "MARGIN_TOTAL_FACTOR",
    valid={"safety_factor": AT_LEAST_ONE, "special_factors": AT_LEAST_ONE, "other_factor": AT_LEAST_ONE},
)
def total_factor(safety_factor: Ratio, special_factors: RatioColumn, other_factor: Ratio = 1.0) -> Ratio:
    r"""Whole factor on the limit load: factor of safety × highest special factor × other factors.

    .. math:: f = FS \cdot \max_i f_i \cdot f_o

    Parameters
    ----------
    safety_factor : ratio
        Factor of safety.
    special_factors : column of ratio
        Special factors of which the highest alone applies; 1 where there is none.
    other_factor : ratio, optional
        Product of factors that apply beside them; 1 where left out.

    Returns
    -------
    factor : ratio
        Factor on the limit load.

    Notes
    -----
    Give it to a margin as its factor of safety, and no fitting factor beside it: that would count it twice.

    References
    ----------
    14 CFR 25.303 and 25.619 (from memory).

    Examples
    --------
    >>> cell('=MARGIN_TOTAL_FACTOR(1.5, {1.25;1.15})')
    1.875
    """
    return safety_factor * np.max(special_factors, axis=-1) * other_factor
