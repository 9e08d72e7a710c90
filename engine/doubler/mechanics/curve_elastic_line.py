"""The straight line through the elastic part of a test curve: its window given, or found in the curve itself."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from doubler.catalogue.limits import Condition, condition
from doubler.mechanics.curve_record import together

_LEVELS = 50
_NARROWEST = 5  # a tenth of the strength
_FEWEST_FOUND = 5
_FEWEST_GIVEN = 3
_STEEP = 0.9
_ROUNDING = 1e-6
_LARGEST_VARIATION = 0.02


@dataclass(frozen=True, slots=True)
class Line:
    """A straight line fitted by least squares, one a lane.

    Attributes
    ----------
    slope, intercept
        Of y over x.
    slope_error, intercept_error
        Their standard errors; NaN with two points.
    r_squared
        Coefficient of determination.
    points
        How many points it is fitted to.
    """

    slope: Any
    intercept: Any
    slope_error: Any
    intercept_error: Any
    r_squared: Any
    points: Any

    @property
    def foot(self) -> Any:
        """Where the line crosses zero: the strain of the toe."""
        return -self.intercept / self.slope

    @property
    def variation(self) -> Any:
        """Standard error of the slope over the slope."""
        return self.slope_error / np.abs(self.slope)


def fitted(x: Any, y: Any, chosen: Any = True) -> Line:
    """Fit y = slope × x + intercept by least squares to the chosen points of each lane."""
    x, y, chosen = together(x, y, chosen)
    points = np.sum(chosen, axis=-1)
    with np.errstate(all="ignore"):
        mean_x = np.sum(x, axis=-1, where=chosen) / points
        mean_y = np.sum(y, axis=-1, where=chosen) / points
        dx, dy = x - mean_x[..., np.newaxis], y - mean_y[..., np.newaxis]
        sxx = np.sum(dx * dx, axis=-1, where=chosen)
        slope = np.sum(dx * dy, axis=-1, where=chosen) / sxx
        off = np.sum((dy - slope[..., np.newaxis] * dx) ** 2, axis=-1, where=chosen)
        variance = off / (points - 2)
        return Line(
            slope=slope,
            intercept=mean_y - slope * mean_x,
            slope_error=np.sqrt(variance / sxx),
            intercept_error=np.sqrt(variance * (1.0 / points + mean_x**2 / sxx)),
            r_squared=1.0 - off / np.sum(dy * dy, axis=-1, where=chosen),
            points=points,
        )


def _rising(stresses: Any) -> Any:
    """Return which points come no later than the largest stress, the last of several alike."""
    count = stresses.shape[-1]
    last = count - 1 - np.argmax(stresses[..., ::-1], axis=-1)
    return np.arange(count) <= last[..., np.newaxis]


def _window_given(stresses: Any, low: Any, high: Any) -> Any:
    """Return the points of the first rise that lie between two stresses."""
    low, high = np.asarray(low)[..., np.newaxis], np.asarray(high)[..., np.newaxis]
    before = np.logical_not(np.logical_or.accumulate(stresses > high, axis=-1))
    return before & (stresses >= low) & _rising(stresses)


def _window_found(strains: Any, stresses: Any) -> Any:
    """Return the points of the window whose slope varies least among those about as steep as the steepest."""
    highest = np.max(stresses, axis=-1, keepdims=True)
    x = (strains - strains[..., :1]) / np.maximum(np.ptp(strains, axis=-1, keepdims=True), np.finfo(float).tiny)
    y = stresses / highest
    risen = np.maximum.accumulate(y, axis=-1)
    levels = np.linspace(0.0, 1.0, _LEVELS + 1)
    edges = np.stack([np.sum(risen < level, axis=-1) for level in levels], axis=-1)
    edges[..., -1] += 1  # the largest stress itself
    zero = np.zeros((*x.shape[:-1], 1))
    first, last = np.triu_indices(_LEVELS + 1, _NARROWEST)

    def total(entries: Any) -> Any:
        sums = np.concatenate([zero, np.cumsum(entries, axis=-1)], axis=-1)
        ends = np.take_along_axis(sums, edges, -1)
        return ends[..., last] - ends[..., first]

    count = (edges[..., last] - edges[..., first]).astype(np.float64)
    with np.errstate(all="ignore"):
        sum_x, sum_y = total(x), total(y)
        sxx, syy = total(x * x) - sum_x**2 / count, total(y * y) - sum_y**2 / count
        sxy = total(x * y) - sum_x * sum_y / count
        slope = sxy / sxx
        variation = np.sqrt(np.maximum(sxx * syy / sxy**2 - 1.0, 0.0) / (count - 2.0))
    usable = (count >= _FEWEST_FOUND) & (sxx > 0.0) & (slope > 0.0) & np.isfinite(variation)
    steepest = np.max(np.where(usable, slope, 0.0), axis=-1, keepdims=True)
    usable &= slope >= _STEEP * steepest
    # Windows that are straight to rounding are alike: the widest of them is taken.
    score = np.where(usable, np.maximum(variation, _ROUNDING) - 1e-9 * (last - first), np.inf)
    best = np.argmin(score, axis=-1)[..., np.newaxis]
    begin = np.take_along_axis(edges[..., first], best, -1)
    end = np.take_along_axis(edges[..., last], best, -1)
    index = np.arange(strains.shape[-1])
    found = np.take_along_axis(usable, best, -1)
    return found & (index >= begin) & (index < end) & _rising(stresses)


def window(strains: Any, stresses: Any, low: Any, high: Any) -> Any:
    """Return which points of each lane make its elastic line."""
    strains, stresses = together(strains, stresses)
    return _window_found(strains, stresses) if low is None or high is None else _window_given(stresses, low, high)


def elastic_line(strains: Any, stresses: Any, low: Any, high: Any) -> Line:
    """Return the straight line through the elastic part of a test curve."""
    return fitted(strains, stresses, window(strains, stresses, low, high))


def _both(low: Any, high: Any) -> Any:
    return (low is None) == (high is None)


def _fits(strains: Any, stresses: Any, low: Any, high: Any) -> Any:
    if low is None or high is None or strains.shape[-1] != stresses.shape[-1]:
        return True  # told by the other conditions
    line = elastic_line(strains, stresses, low, high)
    return (line.points >= _FEWEST_GIVEN) & (line.slope > 0.0) & np.isfinite(line.slope)


def _is_straight(strains: Any, stresses: Any, low: Any, high: Any) -> Any:
    if low is not None or high is not None or strains.shape[-1] != stresses.shape[-1]:
        return True  # told by the other conditions
    line = elastic_line(strains, stresses, None, None)
    return (line.points >= _FEWEST_FOUND) & (line.variation <= _LARGEST_VARIATION)


WINDOW: tuple[Condition, ...] = (
    condition("give both low and high, the ends of the window, or neither", _both),
    condition("low must be below high", lambda low, high: low is None or high is None or low < high),
    condition(
        "between low and high lie fewer than three points of the first rise, or their stress does not rise with strain",
        _fits,
    ),
    condition(
        "no straight part with five points and a slope sure to 2 % can be found; give low and high, the stresses "
        "between which the curve is straight",
        _is_straight,
    ),
)
