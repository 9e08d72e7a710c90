"""Quantities in cells (convert, attach, read a unit) and interpolation in a user's table, never beyond it."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Annotated, Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Alike, Ratio, Text, Values, X, Y, column
from doubler.catalogue.limits import Refusal, condition
from doubler.errors import InputError
from doubler.units import parse_quantity, parse_unit, split_heading

Z = Annotated[Values, Alike("z")]
TextColumn: Any = column(Text)
XColumn: Any = column(X)
YColumn: Any = column(Y)
ZColumn: Any = column(Z)

_SLACK = 1e-12
"""What rounding may add to a value at the table's end, such as 212 °F in a table that ends at 100 °C."""


def _within(column: Values, value: Values) -> Values:
    """Return whether a value lies in the range of a column, rounding apart."""
    low, high = np.min(column, axis=-1), np.max(column, axis=-1)
    slack = _SLACK * np.maximum(np.abs(low), np.abs(high))
    return (value >= low - slack) & (value <= high + slack)


_RISING = condition(
    "the table's first column must rise or fall throughout, without a value twice",
    lambda table_x: np.all(np.diff(table_x, axis=-1) > 0.0, axis=-1) | np.all(np.diff(table_x, axis=-1) < 0.0, axis=-1),
)
_INSIDE = condition(
    "the value lies outside the table, and there is no extrapolation; extend the table from its source",
    lambda value, table_x: _within(table_x, value),
)


def _parsed(cells: Sequence[str]) -> str:
    """Return the unit of a quantity, of a value with its unit beside it, of a heading, or itself."""
    texts = [text.strip() for text in cells if text.strip()]
    if len(texts) not in (1, 2):
        raise Refusal("give one cell, or a value with its unit at its right")
    if len(texts) == 2:
        return str(parse_unit(texts[1]).text)
    if texts[0][0].isdigit() or texts[0][0] in "+-.−":
        return str(parse_quantity(texts[0])[1].text)
    label, unit, _ = split_heading(texts[0])
    return str(parse_unit(label if unit is None else unit).text)


def _grid(first: Values, second: Values, values: Values) -> tuple[Values, Values, Values]:
    """Return the two axes and the values of a complete grid that is given row by row."""
    if any(np.any(column != column[:1]) for column in (first, second, values)):
        raise Refusal("the table must be the same in all cases")
    xs, ys = np.unique(first[0]), np.unique(second[0])
    if xs.size * ys.size != first.shape[-1] or min(xs.size, ys.size) < 2:
        raise Refusal(
            f"the table has {first.shape[-1]} rows; {xs.size} values of its first argument and "
            f"{ys.size} of its second, "
            f"at least two of each, need {xs.size * ys.size}, one row a pair"
        )
    grid = np.full((xs.size, ys.size), np.nan)
    grid[np.searchsorted(xs, first[0]), np.searchsorted(ys, second[0])] = values[0]
    if np.isnan(grid).any():
        raise Refusal("a pair of the table's arguments stands twice and another is missing; give one row a pair")
    return xs, ys, grid


@worksheet_function("UNIT_CONVERT")
def convert(value: X) -> X:
    r"""A quantity in another unit, named by the last argument.

    .. math:: x' = x \, s / s'

    Parameters
    ----------
    value : quantity
        The quantity.

    Returns
    -------
    converted : quantity
        The same quantity in the unit wanted.

    Notes
    -----
    Temperatures are converted as temperatures, with their zero. The factors are exact where the units are
    defined exactly.

    References
    ----------
    NIST Special Publication 811, appendix B.

    Examples
    --------
    >>> cell('=UNIT_CONVERT("1 in", "mm")')
    25.4
    >>> cell('=UNIT_CONVERT("10.5 Msi", "GPa")')
    72.39495158
    """
    return value


@worksheet_function("UNIT_ATTACH")
def attach(number: Ratio, unit: Text) -> Text:
    r"""A number and a unit put together as text that every function reads as a quantity.

    .. math:: \text{“12.5”} \; \text{“kN”} \to \text{“12.5 kN”}

    Parameters
    ----------
    number : ratio
        The bare number.
    unit : text
        The unit in which it stands.

    Returns
    -------
    quantity : text
        The quantity as text.

    Notes
    -----
    The number is written with all the digits that tell it from its neighbours.

    References
    ----------
    Common practice.

    Examples
    --------
    >>> cell('=UNIT_ATTACH(12.5, "kN")')
    '12.5 kN'
    """
    try:
        text = parse_unit(unit).text
    except InputError as error:
        raise Refusal(str(error)) from error
    texts = [f"{value:.15g}" if float(f"{value:.15g}") == value else repr(float(value)) for value in np.ravel(number)]
    return np.array([f"{value} {text}" for value in texts], dtype=object).reshape(np.shape(number))


@worksheet_function("UNIT_OF")
def unit_of(quantity: TextColumn) -> Text:
    r"""Unit of a quantity, of a heading, or of a value cell with its unit cell, as it is spelt there.

    .. math:: \text{“12.5 N/mm2”} \to \text{“N/mm2”}

    Parameters
    ----------
    quantity : column of text
        A quantity such as "12.5 kN", a heading such as "Axial load [kN]", a unit, or a value cell with its
        unit at the right.

    Returns
    -------
    unit : text
        The unit.

    Notes
    -----
    What can't be read is an error, with the reason.

    References
    ----------
    Common practice.

    Examples
    --------
    >>> cell('=UNIT_OF("12.5 kN")')
    'kN'
    >>> cell('=UNIT_OF("Axial load [kN]")')
    'kN'
    """
    try:
        return np.array([_parsed(quantity)], dtype=object)
    except InputError as error:
        raise Refusal(str(error)) from error


@worksheet_function(
    "UNIT_INTERPOLATE",
    conditions=(
        condition(
            "the two columns of the table must be equally long",
            lambda table_x, table_y: table_x.shape[-1] == table_y.shape[-1],
        ),
        condition("the table needs two rows at least", lambda table_x: table_x.shape[-1] > 1),
        _RISING,
        _INSIDE,
    ),
)
def interpolate(value: X, table_x: XColumn, table_y: YColumn) -> Y:
    r"""Linear interpolation in a table with units; a value outside the table is refused.

    .. math:: y = y_i + (y_{i+1} - y_i) \frac{x - x_i}{x_{i+1} - x_i}

    Parameters
    ----------
    value : quantity
        Where the table is to be read.
    table_x : column of quantity
        The table's first column, rising or falling throughout.
    table_y : column of quantity
        The table's second column.

    Returns
    -------
    result : quantity
        The interpolated value.

    Notes
    -----
    Linear between neighbours. A curve that bends between its points is cut short by the chord: the engineer
    judges whether that is safe.

    References
    ----------
    Common practice.

    Examples
    --------
    >>> cell('=UNIT_INTERPOLATE("50 °C", {"20 °C";"100 °C"}, {"70 GPa";"66 GPa"})')
    [[68.5, 'GPa']]
    """
    falling = table_x[..., :1] > table_x[..., -1:]
    x = np.where(falling, table_x[..., ::-1], table_x)
    y = np.where(falling, table_y[..., ::-1], table_y)
    if x.shape[0] == 1 and y.shape[0] == 1:
        return np.interp(value, x[0], y[0])
    after = np.clip(np.sum(x <= value[..., np.newaxis], axis=-1), 1, x.shape[-1] - 1)[..., np.newaxis]
    x, y = (
        np.broadcast_to(x, (*after.shape[:-1], x.shape[-1])),
        np.broadcast_to(y, (*after.shape[:-1], y.shape[-1])),
    )
    x0, x1 = np.take_along_axis(x, after - 1, -1)[..., 0], np.take_along_axis(x, after, -1)[..., 0]
    y0, y1 = np.take_along_axis(y, after - 1, -1)[..., 0], np.take_along_axis(y, after, -1)[..., 0]
    return y0 + (y1 - y0) * (value - x0) / (x1 - x0)


@worksheet_function(
    "UNIT_INTERPOLATE_GRID",
    conditions=(
        condition(
            "the three columns of the table must be equally long",
            lambda table_first, table_second, table_values: (
                table_first.shape[-1] == table_second.shape[-1] == table_values.shape[-1]
            ),
        ),
        condition(
            "the first argument lies outside the table, and there is no extrapolation; extend the "
            "table from its source",
            lambda first, table_first: _within(table_first, first),
        ),
        condition(
            "the second argument lies outside the table, and there is no extrapolation; extend the "
            "table from its source",
            lambda second, table_second: _within(table_second, second),
        ),
    ),
)
def interpolate_grid(first: X, second: Y, table_first: XColumn, table_second: YColumn, table_values: ZColumn) -> Z:
    r"""Bilinear interpolation in a table of two arguments, given as three columns; outside it is refused.

    .. math:: z = \sum_{i,j} w_i(x) \, w_j(y) \, z_{ij}

    Parameters
    ----------
    first : quantity
        First argument.
    second : quantity
        Second argument.
    table_first : column of quantity
        First argument of each row of the table.
    table_second : column of quantity
        Second argument of each row.
    table_values : column of quantity
        Value of each row; every pair of the two arguments' values must have its row.

    Returns
    -------
    result : quantity
        The interpolated value.

    Notes
    -----
    Linear in each argument. The table must be a complete grid, in any order of rows, the same in all cases.

    References
    ----------
    Common practice.

    Examples
    --------
    >>> cell('=UNIT_INTERPOLATE_GRID(1, 50, {0;0;2;2}, {0;100;0;100}, {10;20;30;40}, "N-mm")')
    25.0
    """
    xs, ys, zs = _grid(table_first, table_second, table_values)
    i = np.clip(np.searchsorted(xs, first, side="right"), 1, xs.size - 1)
    j = np.clip(np.searchsorted(ys, second, side="right"), 1, ys.size - 1)
    u = (first - xs[i - 1]) / (xs[i] - xs[i - 1])
    v = (second - ys[j - 1]) / (ys[j] - ys[j - 1])
    low = zs[i - 1, j - 1] * (1.0 - v) + zs[i - 1, j] * v
    high = zs[i, j - 1] * (1.0 - v) + zs[i, j] * v
    return low * (1.0 - u) + high * u
