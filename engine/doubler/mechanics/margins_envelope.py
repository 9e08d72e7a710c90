"""The envelope of margins: the lowest one, and the item that governs."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Ratio, Text, column
from doubler.mechanics.table_rows import aligned

RatioColumn: Any = column(Ratio)
TextColumn: Any = column(Text)


@worksheet_function("MARGIN_ENVELOPE")
def envelope(margins: RatioColumn) -> Ratio:
    r"""Lowest margin of a column; an error or an empty cell among them is an error, never passed over.

    .. math:: MS_{min} = \min_i MS_i

    Parameters
    ----------
    margins : column of ratio
        Margins of safety, one an entry.

    Returns
    -------
    margin : ratio
        The lowest margin.

    Notes
    -----
    MIN of a spreadsheet passes over text and empty cells; this one does not. A text in the first cell of a column
    is taken for its heading.

    References
    ----------
    Common practice.

    Examples
    --------
    >>> cell('=MARGIN_ENVELOPE({0.4;0.15;1.2})')
    0.15
    """
    return np.min(margins, axis=-1)


@worksheet_function("MARGIN_GOVERNING")
def governing(margins: RatioColumn, names: TextColumn) -> Text:
    r"""Name of the item with the lowest margin; of equal ones the first.

    .. math:: i^* = \arg\min_i MS_i

    Parameters
    ----------
    margins : column of ratio
        Margins of safety, one an entry.
    names : column of text
        Name of each entry; a heading above them is passed over.

    Returns
    -------
    name : text
        The governing item.

    Notes
    -----
    An error or an empty cell among the margins is an error, never passed over.

    References
    ----------
    Common practice.

    Examples
    --------
    >>> cell('=MARGIN_GOVERNING({0.4;0.15;1.2}, {"net section";"bearing";"shear-out"})')
    'bearing'
    """
    found = np.array(aligned(names, margins.shape[-1], "names"), dtype=object)
    return found[np.argmin(margins, axis=-1)]


@worksheet_function("MARGIN_COUNT_NEGATIVE")
def count_negative(margins: RatioColumn) -> Ratio:
    r"""How many margins of a column are below zero.

    .. math:: n = \left|\{\, i : MS_i < 0 \,\}\right|

    Parameters
    ----------
    margins : column of ratio
        Margins of safety, one an entry.

    Returns
    -------
    count : ratio
        Number of margins below zero.

    Notes
    -----
    An error or an empty cell among the margins is an error, never passed over.

    References
    ----------
    Common practice.

    Examples
    --------
    >>> cell('=MARGIN_COUNT_NEGATIVE({0.4;-0.15;1.2})')
    1.0
    """
    return np.sum(margins < 0.0, axis=-1).astype(np.float64)
