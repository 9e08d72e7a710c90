"""Outlines of rolled, extruded and formed profiles from their dimensions.

The depth lies along y, the width along x; y runs up from the foot, x to the right. I, tee, box, hat and trapezium are
symmetric about x = 0; channel and angle have the outer face of their web on x = 0; the zee has its web centred there.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Literal

import numpy as np

from doubler.catalogue.annotations import Values
from doubler.catalogue.limits import Refusal
from doubler.mechanics.outline import Outline, closed, without

CHORDS = 16
"""A fillet is followed by so many chords, which enclose the same area as its arc."""

Point = tuple[Values, Values]
Shape = Literal["I", "channel", "tee", "angle", "zee", "box", "hat", "trapezium"]

NEEDS = {
    "I": ("width", "web", "flange"),
    "channel": ("width", "web", "flange"),
    "tee": ("width", "web", "flange"),
    "angle": ("width", "web"),
    "zee": ("width", "web", "flange"),
    "box": ("width", "web", "flange"),
    "hat": ("width", "web", "flange", "bottom_width"),
    "trapezium": ("width", "bottom_width"),
}
"""Which dimensions each shape needs beside its depth."""

_FILLETED = ("I", "channel", "tee", "angle")
_TWO_FLANGES = ("I", "channel", "zee", "hat")


def given(
    depth: Values,
    width: Values,
    web: Values,
    flange: Values,
    bottom_width: Values,
    bottom_flange: Values,
    fillet: Values,
) -> dict[str, Values]:
    """Return the dimensions of a profile by name; None for one that is left out."""
    return {
        "depth": depth,
        "width": width,
        "web": web,
        "flange": flange,
        "bottom_width": bottom_width,
        "bottom_flange": bottom_flange,
        "fillet": fillet,
    }


def dimensions(shape: str, named: dict[str, Values]) -> dict[str, Values]:
    """Return the dimensions with the ones left out filled in from their counterparts.

    Raises
    ------
    Refusal
        One that the shape needs is missing, or one is given that the shape has no use for.
    """
    missing = [name for name in NEEDS[shape] if named[name] is None]
    if missing:
        raise Refusal(f"the shape {shape} needs {' and '.join(missing)} too")
    allowed = {"depth", *NEEDS[shape]}
    if shape in _TWO_FLANGES:
        allowed |= {"bottom_width", "bottom_flange"}
    if shape == "angle":
        allowed |= {"flange"}
    if shape in _FILLETED:
        allowed |= {"fillet"}
    idle = [name for name, value in named.items() if value is not None and name not in allowed]
    if idle:
        raise Refusal(f"the shape {shape} has no {' and no '.join(idle)}; leave it out")
    full = dict(named)
    full["flange"] = named["web"] if named["flange"] is None else named["flange"]
    full["bottom_width"] = named["width"] if named["bottom_width"] is None else named["bottom_width"]
    full["bottom_flange"] = full["flange"] if named["bottom_flange"] is None else named["bottom_flange"]
    return full


def sound(shape: str, named: dict[str, Values]) -> Values:
    """Return where the dimensions make a section: walls thinner than what they stand in, fillets with room."""
    try:
        size = dimensions(shape, named)
    except Refusal:
        return True  # the kernel says what is missing
    if shape == "trapezium":
        return True
    depth, across, web = size["depth"], size["width"], size["web"]
    flange, bottom, foot = size["flange"], size["bottom_width"], size["bottom_flange"]
    fillet = 0.0 if size["fillet"] is None else size["fillet"]
    if shape == "tee":
        return (flange + fillet < depth) & (web + 2.0 * fillet <= across)
    if shape == "angle":
        return (flange + fillet < depth) & (web + fillet < across)
    if shape == "box":
        return (2.0 * flange < depth) & (2.0 * web < across)
    if shape == "hat":
        return (flange + foot < depth) & (2.0 * web < across)
    sides = 2.0 if shape == "I" else 1.0
    room = (web + sides * fillet <= across) & (web + sides * fillet <= bottom)
    return room & (flange + foot + 2.0 * fillet < depth)


def outline(shape: str, named: dict[str, Values]) -> Outline:
    """Return the outline of a profile."""
    d = dimensions(shape, named)
    depth, across = d["depth"], d["width"]
    bottom = d["bottom_width"]
    if shape == "trapezium":
        half, foot = across / 2.0, bottom / 2.0
        return _loop([(-foot, 0.0), (foot, 0.0), (half, depth), (-half, depth)])
    web, flange, low = d["web"], d["flange"], d["bottom_flange"]
    if shape == "box":
        half, inner = across / 2.0, across / 2.0 - web
        hole = _loop([(-inner, flange), (inner, flange), (inner, depth - flange), (-inner, depth - flange)])
        return without(_loop([(-half, 0.0), (half, 0.0), (half, depth), (-half, depth)]), hole)
    return _loop(_OPEN[shape](depth, across, web, flange, bottom, low, d["fillet"]))


def _i_section(
    depth: Values, across: Values, web: Values, flange: Values, bottom: Values, low: Values, fillet: Values
) -> list[Point]:
    half, foot, middle, top = across / 2.0, bottom / 2.0, web / 2.0, depth - flange
    return [
        *[(-foot, 0.0), (foot, 0.0), (foot, low)],
        *_corner((middle, low), 1, 1, fillet),
        *_corner((middle, top), 1, -1, fillet),
        *[(half, top), (half, depth), (-half, depth), (-half, top)],
        *_corner((-middle, top), -1, -1, fillet),
        *_corner((-middle, low), -1, 1, fillet),
        (-foot, low),
    ]


def _channel(
    depth: Values, across: Values, web: Values, flange: Values, bottom: Values, low: Values, fillet: Values
) -> list[Point]:
    return [
        *[(0.0, 0.0), (bottom, 0.0), (bottom, low)],
        *_corner((web, low), 1, 1, fillet),
        *_corner((web, depth - flange), 1, -1, fillet),
        *[(across, depth - flange), (across, depth), (0.0, depth)],
    ]


def _tee(
    depth: Values, across: Values, web: Values, flange: Values, bottom: Values, low: Values, fillet: Values
) -> list[Point]:
    half, middle, top = across / 2.0, web / 2.0, depth - flange
    return [
        *[(-middle, 0.0), (middle, 0.0)],
        *_corner((middle, top), 1, -1, fillet),
        *[(half, top), (half, depth), (-half, depth), (-half, top)],
        *_corner((-middle, top), -1, -1, fillet),
    ]


def _angle(
    depth: Values, across: Values, web: Values, flange: Values, bottom: Values, low: Values, fillet: Values
) -> list[Point]:
    return [
        *[(0.0, 0.0), (across, 0.0), (across, flange)],
        *_corner((web, flange), 1, 1, fillet),
        *[(web, depth), (0.0, depth)],
    ]


def _zee(
    depth: Values, across: Values, web: Values, flange: Values, bottom: Values, low: Values, fillet: Values
) -> list[Point]:
    half, top = web / 2.0, depth - flange
    return [
        *[(-half, 0.0), (bottom - half, 0.0), (bottom - half, low), (half, low), (half, depth)],
        *[(half - across, depth), (half - across, top), (-half, top)],
    ]


def _hat(
    depth: Values, across: Values, web: Values, flange: Values, bottom: Values, low: Values, fillet: Values
) -> list[Point]:
    half, inner, top = across / 2.0, across / 2.0 - web, depth - flange
    right = [
        (inner, top),
        (inner, 0.0),
        (half + bottom, 0.0),
        (half + bottom, low),
        (half, low),
        (half, depth),
    ]
    return [*right, *((-x, y) for x, y in reversed(right))]


_OPEN = {"I": _i_section, "channel": _channel, "tee": _tee, "angle": _angle, "zee": _zee, "hat": _hat}


def _loop(points: Sequence[Point]) -> Outline:
    flat = np.broadcast_arrays(*(np.atleast_1d(value) for point in points for value in point))
    return closed(np.stack(flat[0::2], axis=-1), np.stack(flat[1::2], axis=-1))


def _corner(at: Point, x_sense: int, y_sense: int, fillet: Values) -> list[Point]:
    """Return a re-entrant corner, rounded if there is a fillet; its centre lies from `at` in the senses given.

    The points run from the face along x to the face along y where the senses are alike, else the other way, which is
    counter-clockwise around the material in every profile above.
    """
    if fillet is None:
        return [at]
    step = np.pi / 2.0 / CHORDS
    # The end points lie on the arc; the others a little outside, so that the chords enclose the arc's own area.
    outer = (np.sqrt(1.0 + (CHORDS - 2) * np.pi / 2.0 / np.sin(step)) - 1.0) / (CHORDS - 2)
    centre_x, centre_y = at[0] + x_sense * fillet, at[1] + y_sense * fillet
    points = []
    for index in range(CHORDS + 1):
        radius = fillet if index in (0, CHORDS) else fillet * outer
        across, along = radius * np.sin(step * index), radius * np.cos(step * index)
        points.append((centre_x - x_sense * across, centre_y - y_sense * along))
    return points if x_sense == y_sense else points[::-1]
