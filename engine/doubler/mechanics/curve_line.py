"""A straight line through paired columns by least squares: slope, intercept, their standard errors, quality of fit."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Ratio, X, Y, YPerX, column
from doubler.catalogue.limits import Condition, condition
from doubler.mechanics.curve_elastic_line import fitted

XColumn: Any = column(X)
YColumn: Any = column(Y)
_TWO = 2


def _spread(x: Any) -> Any:
    return np.max(x, axis=-1) > np.min(x, axis=-1)


_PAIRS: tuple[Condition, ...] = (
    condition("the two columns must be equally long", lambda x, y: x.shape[-1] == y.shape[-1]),
    condition("x is the same in all rows: there is no slope", _spread),
)
_ERRORS: tuple[Condition, ...] = (
    *_PAIRS,
    condition("give three rows at least: two always fit", lambda x: x.shape[-1] > _TWO),
)
_THROUGH_ZERO: tuple[Condition, ...] = (
    _PAIRS[0],
    condition("x is zero in all rows: there is no slope", lambda x: np.any(x != 0.0, axis=-1)),
)
_VARIED: tuple[Condition, ...] = (
    *_ERRORS,
    condition("y is the same in all rows: nothing is there to be explained", lambda y: np.ptp(y, axis=-1) > 0.0),
)
_TWO_ROWS = condition("give two rows at least: one always fits", lambda x: x.shape[-1] > 1)


def _through_zero(x: Any, y: Any) -> tuple[Any, Any]:
    """Return the slope through the origin and the sum of x²."""
    square = np.sum(x * x, axis=-1)
    return np.sum(x * y, axis=-1) / square, square


@worksheet_function("CURVE_LINE_SLOPE", conditions=_PAIRS)
def slope(x: XColumn, y: YColumn) -> YPerX:
    r"""Slope of the straight line of least squares through paired columns.

    .. math:: b = \frac{\sum (x_i - \bar x)(y_i - \bar y)}{\sum (x_i - \bar x)^2}

    Parameters
    ----------
    x : column of quantity
        What is set or measured without much error, such as extension.
    y : column of quantity
        What follows it, such as force; as many rows.

    Returns
    -------
    slope : quantity
        Slope, of the dimension of y over x: a stiffness from force and extension, a modulus from stress and strain.

    Notes
    -----
    All rows count equally, and the error lies in y. Look at the points: a curve, or one wrong row, gives a slope all
    the same.

    References
    ----------
    N. R. Draper, H. Smith, Applied Regression Analysis, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=CURVE_LINE_SLOPE({"0 mm";"1 mm";"2 mm";"3 mm"}, '
    ...      '{"0.1 kN";"2.0 kN";"4.1 kN";"6.0 kN"}, "kN/mm")')
    1.98
    """
    return fitted(x, y).slope


@worksheet_function("CURVE_LINE_INTERCEPT", conditions=_PAIRS)
def intercept(x: XColumn, y: YColumn) -> Y:
    r"""Value at x = 0 of the straight line of least squares through paired columns.

    .. math:: a = \bar y - b \bar x

    Parameters
    ----------
    x : column of quantity
        What is set or measured without much error, such as extension.
    y : column of quantity
        What follows it, such as force; as many rows.

    Returns
    -------
    intercept : quantity
        What the line gives where x is zero.

    Notes
    -----
    All rows count equally, and the error lies in y. Far from the points it is an extrapolation: see
    CURVE_LINE_INTERCEPT_ERROR.

    References
    ----------
    N. R. Draper, H. Smith, Applied Regression Analysis, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=CURVE_LINE_INTERCEPT({"0 mm";"1 mm";"2 mm";"3 mm"}, '
    ...      '{"0.1 kN";"2.0 kN";"4.1 kN";"6.0 kN"}, "kN")')
    0.08
    """
    return fitted(x, y).intercept


@worksheet_function("CURVE_LINE_SLOPE_ERROR", conditions=_ERRORS)
def slope_error(x: XColumn, y: YColumn) -> YPerX:
    r"""Standard error of the slope of the straight line through paired columns.

    .. math:: s_b = \sqrt{\frac{\sum (y_i - a - b x_i)^2}{(n - 2)\sum (x_i - \bar x)^2}}

    Parameters
    ----------
    x : column of quantity
        What is set or measured without much error, such as extension.
    y : column of quantity
        What follows it, such as force; as many rows.

    Returns
    -------
    error : quantity
        One standard deviation of the slope.

    Notes
    -----
    The scatter is the same along the line, independent from row to row; one standard deviation, no confidence bound.

    References
    ----------
    N. R. Draper, H. Smith, Applied Regression Analysis, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=CURVE_LINE_SLOPE_ERROR({"0 mm";"1 mm";"2 mm";"3 mm"}, '
    ...      '{"0.1 kN";"2.0 kN";"4.1 kN";"6.0 kN"}, "kN/mm")')
    0.02828427125
    """
    return fitted(x, y).slope_error


@worksheet_function("CURVE_LINE_INTERCEPT_ERROR", conditions=_ERRORS)
def intercept_error(x: XColumn, y: YColumn) -> Y:
    r"""Standard error of the intercept of the straight line through paired columns.

    .. math:: s_a = s \sqrt{\frac{1}{n} + \frac{\bar x^2}{\sum (x_i - \bar x)^2}}, \quad
        s^2 = \frac{\sum (y_i - a - b x_i)^2}{n - 2}

    Parameters
    ----------
    x : column of quantity
        What is set or measured without much error, such as extension.
    y : column of quantity
        What follows it, such as force; as many rows.

    Returns
    -------
    error : quantity
        One standard deviation of the intercept.

    Notes
    -----
    The scatter is the same along the line, independent from row to row; one standard deviation, no confidence bound.

    References
    ----------
    N. R. Draper, H. Smith, Applied Regression Analysis, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=CURVE_LINE_INTERCEPT_ERROR({"0 mm";"1 mm";"2 mm";"3 mm"}, '
    ...      '{"0.1 kN";"2.0 kN";"4.1 kN";"6.0 kN"}, "kN")')
    0.05291502622
    """
    return fitted(x, y).intercept_error


@worksheet_function("CURVE_LINE_R_SQUARED", conditions=_VARIED)
def r_squared(x: XColumn, y: YColumn) -> Ratio:
    r"""Coefficient of determination of the straight line through paired columns.

    .. math:: r^2 = 1 - \frac{\sum (y_i - a - b x_i)^2}{\sum (y_i - \bar y)^2}

    Parameters
    ----------
    x : column of quantity
        What is set or measured without much error, such as extension.
    y : column of quantity
        What follows it, such as force; as many rows.

    Returns
    -------
    r_squared : ratio
        1 where all points lie on the line, 0 where it explains nothing.

    Notes
    -----
    High values do not prove a straight line: a gentle curve has 0.99 as well.

    References
    ----------
    N. R. Draper, H. Smith, Applied Regression Analysis, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=CURVE_LINE_R_SQUARED({"0 mm";"1 mm";"2 mm";"3 mm"}, '
    ...      '{"0.1 kN";"2.0 kN";"4.1 kN";"6.0 kN"})')
    0.9995920449
    """
    return fitted(x, y).r_squared


@worksheet_function("CURVE_LINE_SLOPE_ORIGIN", conditions=_THROUGH_ZERO)
def slope_origin(x: XColumn, y: YColumn) -> YPerX:
    r"""Slope of the straight line of least squares that is held to the origin.

    .. math:: b = \frac{\sum x_i y_i}{\sum x_i^2}

    Parameters
    ----------
    x : column of quantity
        What is set or measured without much error, such as extension.
    y : column of quantity
        What follows it, such as force; as many rows.

    Returns
    -------
    slope : quantity
        Slope, of the dimension of y over x.

    Notes
    -----
    Only where zero of x surely belongs to zero of y: slack or a toe falsifies the slope. All rows count equally.

    References
    ----------
    N. R. Draper, H. Smith, Applied Regression Analysis, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=CURVE_LINE_SLOPE_ORIGIN({"0 mm";"1 mm";"2 mm";"3 mm"}, '
    ...      '{"0.1 kN";"2.0 kN";"4.1 kN";"6.0 kN"}, "kN/mm")')
    2.014285714
    """
    return _through_zero(x, y)[0]


@worksheet_function("CURVE_LINE_SLOPE_ORIGIN_ERROR", conditions=(*_THROUGH_ZERO, _TWO_ROWS))
def slope_origin_error(x: XColumn, y: YColumn) -> YPerX:
    r"""Standard error of the slope of the straight line that is held to the origin.

    .. math:: s_b = \sqrt{\frac{\sum (y_i - b x_i)^2}{(n - 1)\sum x_i^2}}

    Parameters
    ----------
    x : column of quantity
        What is set or measured without much error, such as extension.
    y : column of quantity
        What follows it, such as force; as many rows.

    Returns
    -------
    error : quantity
        One standard deviation of the slope.

    Notes
    -----
    The scatter is the same along the line, independent from row to row; one standard deviation, no confidence bound.

    References
    ----------
    N. R. Draper, H. Smith, Applied Regression Analysis, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=CURVE_LINE_SLOPE_ORIGIN_ERROR({"0 mm";"1 mm";"2 mm";"3 mm"}, '
    ...      '{"0.1 kN";"2.0 kN";"4.1 kN";"6.0 kN"}, "kN/mm")')
    0.02020305089
    """
    slope, square = _through_zero(x, y)
    off = np.sum((y - slope[..., np.newaxis] * x) ** 2, axis=-1)
    return np.sqrt(off / ((x.shape[-1] - 1) * square))
