"""The record of a tension test as columns: what it must be like, and where it first reaches a value."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue.annotations import Strain, Stress, column
from doubler.catalogue.limits import Condition, condition

Strains: Any = column(Strain)
Stresses: Any = column(Stress)

_BACKWARD = 0.05
_UNLOADED = 0.1

ALIKE = condition(
    "the columns of strain and of stress must be equally long",
    lambda strains, stresses: strains.shape[-1] == stresses.shape[-1],
)
THREE_POINTS = condition("give three points of the curve at least", lambda strains: strains.shape[-1] > 2)
TENSION = condition(
    "no stress of the curve is positive; for a compression test give strains and stresses as magnitudes",
    lambda stresses: np.max(stresses, axis=-1) > 0.0,
)


def together(*columns: Any) -> tuple[Any, ...]:
    """Return the columns with the same lanes."""
    return tuple(np.broadcast_arrays(*columns))


def peak(stresses: Any) -> Any:
    """Return the index of the largest stress, of the first where several are alike."""
    return np.argmax(stresses, axis=-1)


def at(entries: Any, index: Any) -> Any:
    """Return the entry of each lane at its index."""
    return np.take_along_axis(entries, np.asarray(index)[..., np.newaxis], -1)[..., 0]


def _forward(strains: Any, stresses: Any) -> Any:
    """Return where the curve holds no unloading: strain and stress falling back together before the largest stress."""
    if strains.shape[-1] != stresses.shape[-1]:
        return True  # told by ALIKE
    strains, stresses = together(strains, stresses)
    highest = np.max(stresses, axis=-1, keepdims=True)
    reached, risen = np.maximum.accumulate(strains, axis=-1), np.maximum.accumulate(stresses, axis=-1)
    back = (reached - strains > _BACKWARD * np.abs(reached)) & (risen - stresses > _UNLOADED * highest)
    before = np.arange(strains.shape[-1]) < peak(stresses)[..., np.newaxis]
    return ~np.any(back & before, axis=-1)


FORWARD = condition(
    "strain and stress fall back together before the largest stress: take unloading loops out of the record, and give "
    "its points in the order of the test",
    _forward,
)
RECORD: tuple[Condition, ...] = (ALIKE, THREE_POINTS, TENSION, FORWARD)


def first_reaching(driver: Any, level: Any) -> tuple[Any, Any, Any]:
    """Find where each lane of `driver` first comes up to a level.

    Returns
    -------
    index, share, reached
        The point before, the part of the way to the next one, and whether there is such a place.
    """
    level = np.asarray(level)[..., np.newaxis]
    up = driver >= level
    reached = np.any(up, axis=-1)
    after = np.argmax(up, axis=-1)
    on_first = after == 0
    before = np.where(on_first, 0, after - 1)
    after = np.where(on_first, min(1, driver.shape[-1] - 1), after)
    wide = np.broadcast_to(driver, up.shape)
    lower, upper = at(wide, before), at(wide, after)
    with np.errstate(all="ignore"):
        share = np.where(on_first, 0.0, (level[..., 0] - lower) / (upper - lower))
    # A level below the first point is not on the curve: only on the first point itself.
    return before, share, reached & (~on_first | (lower == level[..., 0]))


def between_points(entries: Any, index: Any, share: Any) -> Any:
    """Return the values of a column at these places."""
    wide = np.broadcast_to(entries, (*np.shape(index), entries.shape[-1]))
    lower, upper = at(wide, index), at(wide, np.minimum(index + 1, entries.shape[-1] - 1))
    return lower + share * (upper - lower)


def area_until(strains: Any, stresses: Any, index: Any, share: Any) -> Any:
    """Return the area under the curve from its first point to a place."""
    steps = np.diff(strains, axis=-1) * 0.5 * (stresses[..., 1:] + stresses[..., :-1])
    whole = np.concatenate([np.zeros((*steps.shape[:-1], 1)), np.cumsum(steps, axis=-1)], axis=-1)
    wide = np.broadcast_to(whole, (*np.shape(index), whole.shape[-1]))
    start_strain, start = (
        between_points(strains, index, np.zeros_like(share)),
        between_points(stresses, index, np.zeros_like(share)),
    )
    end_strain, end = between_points(strains, index, share), between_points(stresses, index, share)
    return at(wide, index) + (end_strain - start_strain) * 0.5 * (start + end)


_SPENT = 0.02
_FALL = 0.1
_STEEPER = 5.0
_HALF = 0.5
_LAST_FALL = 0.25


def break_point(stresses: Any) -> Any:
    """Return the index of the last point before the specimen breaks.

    A break is a fall of a tenth of the strength or more, at or after the largest stress, five times as steep as the
    step before it, after which the stress stays below half the strength, but for one point that may lie in the fall.
    A fall to the very last point counts if it is a quarter of the strength. Without any, the break is the last point
    at 2 % of the strength or more.
    """
    highest = np.max(stresses, axis=-1, keepdims=True)
    count = stresses.shape[-1]
    index = np.arange(count)
    fall = np.zeros_like(stresses)
    fall[..., :-1] = stresses[..., :-1] - stresses[..., 1:]
    before = np.concatenate([np.zeros_like(fall[..., :1]), np.abs(fall[..., :-1])], axis=-1)
    from_here = np.maximum.accumulate(stresses[..., ::-1], axis=-1)[..., ::-1]
    later = np.concatenate([from_here[..., 2:], np.full_like(from_here[..., :2], -np.inf)], axis=-1)
    gone = np.where(index < count - 2, later <= _HALF * highest, fall > _LAST_FALL * highest)
    steep = (fall > _STEEPER * before) & (fall > _FALL * highest) & gone & (index >= peak(stresses)[..., np.newaxis])
    last = count - 1 - np.argmax((stresses >= _SPENT * highest)[..., ::-1], axis=-1)
    return np.where(np.any(steep, axis=-1), np.minimum(np.argmax(steep, axis=-1), last), last)
