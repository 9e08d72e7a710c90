"""Forces on the fasteners of a group: in-plane load and moment, and moments that pull on the fasteners."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Area, Force, Length, Moment, Values, column, row
from doubler.catalogue.limits import NOT_NEGATIVE, POSITIVE, condition

LengthColumn: Any = column(Length)
AreaColumn: Any = column(Area)
ForceParts: Any = row(Force, "x", "y", "resultant")
Point: Any = row(Length, "x", "y")

_SAME_PLACE = 1e-6
"""Fasteners nearer than this share of the group's size stand in one place."""

_PAIRED = condition(
    "give as many x as y for the group's fasteners",
    lambda group_x, group_y: group_x.shape[-1] == group_y.shape[-1],
)
_AREAS = condition(
    "give one area a fastener, or one area for all",
    lambda group_x, areas: areas is None or areas.shape[-1] in (1, group_x.shape[-1]),
)


def _centred(group_x: Values, group_y: Values, areas: Values) -> tuple[Values, ...]:
    """Return the weights (sum one), the centroid, and the positions from it."""
    weights = np.ones_like(group_x + group_y) if areas is None else areas * np.ones_like(group_x + group_y)
    weights = weights / weights.sum(axis=-1, keepdims=True)
    x0 = (weights * group_x).sum(axis=-1, keepdims=True)
    y0 = (weights * group_y).sum(axis=-1, keepdims=True)
    return weights, x0, y0, group_x - x0, group_y - y0


def _fitting(group_x: Values, group_y: Values, areas: Values) -> bool:
    """Return whether the columns have lengths that go together; another condition says so where they do not."""
    length = group_x.shape[-1]
    return bool(group_y.shape[-1] == length and (areas is None or areas.shape[-1] in (1, length)))


def _size(group_x: Values, group_y: Values) -> Values:
    return np.hypot(np.ptp(group_x, axis=-1), np.ptp(group_y, axis=-1))


def _nearest(x: Values, y: Values, group_x: Values, group_y: Values) -> tuple[Values, Values]:
    """Return the index of the fastener nearest to (x, y), and its distance."""
    distance = np.hypot(group_x - x[..., np.newaxis], group_y - y[..., np.newaxis])
    return np.argmin(distance, axis=-1), np.min(distance, axis=-1)


def _is_one_of(x: Values, y: Values, group_x: Values, group_y: Values) -> Any:
    if group_x.shape[-1] != group_y.shape[-1]:
        return True
    return _nearest(x, y, group_x, group_y)[1] <= _SAME_PLACE * _size(group_x, group_y)


def _weight_at(x: Values, y: Values, group_x: Values, group_y: Values, weights: Values) -> Values:
    index = _nearest(x, y, group_x, group_y)[0][..., np.newaxis]
    whole = np.broadcast_to(weights, (*index.shape[:-1], weights.shape[-1]))
    return np.take_along_axis(whole, index, -1)[..., 0]


def _spread_out(group_x: Values, group_y: Values, areas: Values) -> Any:
    """Return whether the fasteners do not all stand on one line."""
    if not _fitting(group_x, group_y, areas):
        return True
    weights, _, _, dx, dy = _centred(group_x, group_y, areas)
    ixx, iyy, ixy = ((weights * part).sum(axis=-1) for part in (dy * dy, dx * dx, dx * dy))
    return ixx * iyy - ixy**2 > 1e-9 * (ixx + iyy) ** 2


_ONE_OF_THE_GROUP = condition("there is no fastener of the group at (x, y); give the place of one of them", _is_one_of)
_APART = condition(
    "the fasteners must not all stand in one place",
    lambda group_x, group_y: (group_x.shape[-1] != group_y.shape[-1]) | (_size(group_x, group_y) > 0.0),
)


@worksheet_function("SECTION_BOLT_GROUP_CENTROID", valid={"areas": POSITIVE}, conditions=(_PAIRED, _AREAS))
def centroid(group_x: LengthColumn, group_y: LengthColumn, areas: AreaColumn | None = None) -> Point:
    r"""Centroid of a group of fasteners, weighted by their areas.

    .. math:: x_c = \frac{\sum A_i x_i}{\sum A_i}, \quad y_c = \frac{\sum A_i y_i}{\sum A_i}

    Parameters
    ----------
    group_x : column of length
        x of each fastener.
    group_y : column of length
        y of each fastener.
    areas : column of area, optional
        Area of each fastener; one serves for all; left out: all equal.

    Returns
    -------
    centroid : length
        x and y of the centroid.

    Notes
    -----
    Areas stand for stiffness: fasteners of one material and one grip.

    References
    ----------
    Common practice (elastic centroid of a group).

    Examples
    --------
    >>> cell('=SECTION_BOLT_GROUP_CENTROID({"0 mm";"60 mm"}, {"0 mm";"30 mm"}, {"100 mm^2";"50 mm^2"}, "mm")')
    [[20.0, 10.0]]
    """
    _, x0, y0, _, _ = _centred(group_x, group_y, areas)
    return np.concatenate([x0, y0], axis=-1)


@worksheet_function(
    "STRESS_BOLT_GROUP_SHEAR",
    valid={"areas": POSITIVE},
    conditions=(_PAIRED, _AREAS, _APART, _ONE_OF_THE_GROUP),
)
def shear(
    x: Length,
    y: Length,
    group_x: LengthColumn,
    group_y: LengthColumn,
    force_x: Force,
    force_y: Force,
    load_x: Length,
    load_y: Length,
    moment: Moment,
    areas: AreaColumn | None = None,
) -> ForceParts:
    r"""Shear force on one fastener of a group under an in-plane load and moment, by the elastic centroid.

    .. math:: F_{x} = w_i F_x - \frac{w_i M_c (y_i - y_c)}{\sum w r^2}, \quad F_{y} = w_i F_y + \frac{w_i M_c
        (x_i - x_c)}{\sum w r^2}, \quad M_c = M + (x_F - x_c) F_y - (y_F - y_c) F_x, \quad w_i = A_i / \sum A

    Parameters
    ----------
    x : length
        x of the fastener; give the group's column for all of them.
    y : length
        y of the fastener.
    group_x : column of length
        x of every fastener of the group.
    group_y : column of length
        y of every fastener of the group.
    force_x : force
        Load on the group along x.
    force_y : force
        Load on the group along y.
    load_x : length
        x of the point at which the load acts.
    load_y : length
        y of the point at which the load acts.
    moment : moment
        Moment on the group beside the load's own, counter-clockwise positive; zero where there is none.
    areas : column of area, optional
        Area of each fastener; one serves for all; left out: all equal.

    Returns
    -------
    force : force
        Force on the fastener along x, along y, and their resultant.

    Notes
    -----
    Elastic method: rigid plate, fasteners that give in proportion to load over area, no friction. The sum over
    the group is the load. The method of the instantaneous centre allows more, and is not this one.

    References
    ----------
    E. F. Bruhn, Analysis and Design of Flight Vehicle Structures, chapter D1 (from memory).

    Examples
    --------
    >>> cell('=STRESS_BOLT_GROUP_SHEAR(0, 40, {0;0}, {40;-40}, 0, 6000, 50, 0, 0, , "N-mm")')
    [[-3750.0, 3000.0, 4802.343178]]
    """
    weights, x0, y0, dx, dy = _centred(group_x, group_y, areas)
    x0, y0 = x0[..., 0], y0[..., 0]
    about = moment + (load_x - x0) * force_y - (load_y - y0) * force_x
    turn = about / (weights * (dx**2 + dy**2)).sum(axis=-1)
    share = _weight_at(x, y, group_x, group_y, weights)
    along_x = share * (force_x - turn * (y - y0))
    along_y = share * (force_y + turn * (x - x0))
    return np.stack(np.broadcast_arrays(along_x, along_y, np.hypot(along_x, along_y)), axis=-1)


@worksheet_function(
    "STRESS_BOLT_GROUP_TENSION",
    valid={"areas": POSITIVE},
    conditions=(
        _PAIRED,
        _AREAS,
        condition(
            "the fasteners stand on one line and carry no moment about it; use STRESS_BOLT_GROUP_HEEL, or add a row",
            _spread_out,
        ),
        _ONE_OF_THE_GROUP,
    ),
)
def tension(
    x: Length,
    y: Length,
    group_x: LengthColumn,
    group_y: LengthColumn,
    force: Force,
    moment_x: Moment,
    moment_y: Moment,
    areas: AreaColumn | None = None,
) -> Force:
    r"""Tension of one fastener of a group under a pull and moments out of the plane, by the elastic centroid.

    .. math:: F_i = w_i \left(P + b\,(x_i - x_c) + c\,(y_i - y_c)\right), \quad \begin{bmatrix} J_{xy} & J_{xx}
        \\ J_{yy} & J_{xy} \end{bmatrix} \begin{bmatrix} b \\ c \end{bmatrix} = \begin{bmatrix} M_x \\ -M_y
        \end{bmatrix}, \quad J_{xx} = \sum w\,(y - y_c)^2

    Parameters
    ----------
    x : length
        x of the fastener; give the group's column for all of them.
    y : length
        y of the fastener.
    group_x : column of length
        x of every fastener of the group.
    group_y : column of length
        y of every fastener of the group.
    force : force
        Pull on the group through its centroid, tension positive.
    moment_x : moment
        Moment about the x axis, right-handed with z along the pull: positive stretches fasteners at larger y.
    moment_y : moment
        Moment about the y axis, right-handed: positive stretches fasteners at smaller x.
    areas : column of area, optional
        Area of each fastener; one serves for all; left out: all equal.

    Returns
    -------
    force : force
        Force on the fastener, tension positive.

    Notes
    -----
    Elastic method about the centroid: right while the preloaded faces stay closed all over. Where they part the
    fitting turns about its compressed edge: see STRESS_BOLT_GROUP_HEEL. Prying is not in it. A negative force
    means that contact carries it.

    References
    ----------
    E. F. Bruhn, Analysis and Design of Flight Vehicle Structures, chapter D1 (from memory).

    Examples
    --------
    >>> cell('=STRESS_BOLT_GROUP_TENSION(40, 30, {40;-40;-40;40}, {30;30;-30;-30}, 4000, 240000, 0, , "N-mm")')
    3000.0
    """
    weights, x0, y0, dx, dy = _centred(group_x, group_y, areas)
    jxx, jyy, jxy = ((weights * part).sum(axis=-1) for part in (dy * dy, dx * dx, dx * dy))
    area = jxx * jyy - jxy**2
    slope_x = -(moment_y * jxx + moment_x * jxy) / area
    slope_y = (moment_x * jyy + moment_y * jxy) / area
    share = _weight_at(x, y, group_x, group_y, weights)
    return share * (force + slope_x * (x - x0[..., 0]) + slope_y * (y - y0[..., 0]))


def _has_arm(arm: Values, group_arms: Values) -> Any:
    nearest = np.min(np.abs(group_arms - arm[..., np.newaxis]), axis=-1)
    return nearest <= _SAME_PLACE * np.max(np.abs(group_arms), axis=-1)


@worksheet_function(
    "STRESS_BOLT_GROUP_HEEL",
    valid={"arm": NOT_NEGATIVE, "group_arms": NOT_NEGATIVE, "moment": NOT_NEGATIVE},
    conditions=(
        condition(
            "all fasteners stand on the heel line and carry no moment", lambda group_arms: group_arms.max(axis=-1) > 0.0
        ),
        condition("there is no fastener of the group at this arm; give the arm of one of them", _has_arm),
    ),
)
def heel(arm: Length, group_arms: LengthColumn, moment: Moment) -> Force:
    r"""Tension of one fastener of a group that turns about its compressed edge (heel) under a moment.

    .. math:: F_i = \frac{M d_i}{\sum_j d_j^2}

    Parameters
    ----------
    arm : length
        Distance of the fastener from the heel line; give the group's column for all of them.
    group_arms : column of length
        Distance of every fastener of the group from the heel line.
    moment : moment
        Moment that lifts the fitting off about the heel, as a positive magnitude.

    Returns
    -------
    force : force
        Tension of the fastener.

    Notes
    -----
    Heel method: rigid fitting, equal fasteners, contact along the heel line alone, preload left out. A pull on the
    group enters as its moment about the heel. Prying is not in it.

    References
    ----------
    J. E. Shigley, Mechanical Engineering Design, chapter on bolted joints (from memory).

    Examples
    --------
    >>> cell('=STRESS_BOLT_GROUP_HEEL("80 mm", {"20 mm";"80 mm"}, "680 N*m", "kN")')
    8.0
    """
    return moment * arm / (group_arms**2).sum(axis=-1)
