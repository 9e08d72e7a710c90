"""Thin walls of profiles along their middle lines: torsion, warping, walls along a shear force."""

from __future__ import annotations

import numpy as np

from doubler.catalogue.annotations import Values
from doubler.catalogue.limits import Refusal
from doubler.mechanics.profile_outlines import dimensions

_SLENDER = 3.0
_END_LOSS = 0.105  # of t⁴ a free end: half of 0.63/3, the deficit of a long rectangle's torsion constant


def _walls(shape: str, named: dict[str, Values]) -> list[tuple[Values, Values, int]]:
    """Return length, thickness and number of free ends of each wall."""
    d = dimensions(shape, named)
    depth, across, web = d["depth"], d["width"], d["web"]
    flange, bottom, foot = d["flange"], d["bottom_width"], d["bottom_flange"]
    if shape == "I":
        return [(across, flange, 2), (bottom, foot, 2), (depth - (flange + foot) / 2.0, web, 0)]
    if shape in ("channel", "zee"):
        flanges = [(across - web / 2.0, flange, 1), (bottom - web / 2.0, foot, 1)]
        return [*flanges, (depth - (flange + foot) / 2.0, web, 0)]
    if shape == "tee":
        return [(across, flange, 2), (depth - flange / 2.0, web, 1)]
    if shape == "angle":
        return [(depth - flange / 2.0, web, 1), (across - web / 2.0, flange, 1)]
    if shape == "hat":
        side = depth - (flange + foot) / 2.0
        lip = bottom + web / 2.0
        return [(across - web, flange, 0), (side, web, 0), (side, web, 0), (lip, foot, 1), (lip, foot, 1)]
    return [
        (depth - flange, web, 0),
        (depth - flange, web, 0),
        (across - web, flange, 0),
        (across - web, flange, 0),
    ]


def thin(shape: str, named: dict[str, Values]) -> Values:
    """Return where every wall is long beside its thickness."""
    try:
        walls = _walls(shape, named)
    except Refusal:
        return True  # the kernel says what is missing
    return np.logical_and.reduce(np.broadcast_arrays(*(length >= _SLENDER * wall for length, wall, _ in walls)))


def torsion_constant(shape: str, named: dict[str, Values]) -> Values:
    """Return the torsion constant: Bredt's for a box, the sum over the walls for an open profile."""
    walls = _walls(shape, named)
    if shape == "box":
        enclosed = walls[0][0] * walls[2][0]
        return 4.0 * enclosed**2 / sum(length / wall for length, wall, _ in walls)
    return sum(length * wall**3 / 3.0 - ends * _END_LOSS * wall**4 for length, wall, ends in walls)


def warping_constant(shape: str, named: dict[str, Values]) -> Values:
    """Return the warping constant about the shear centre."""
    d = dimensions(shape, named)
    flange, foot, web = d["flange"], d["bottom_flange"], d["web"]
    height = d["depth"] - (flange + foot) / 2.0
    if shape == "I":
        upper, lower = flange * d["width"] ** 3 / 12.0, foot * d["bottom_width"] ** 3 / 12.0
        return height**2 * upper * lower / (upper + lower)
    if named["bottom_width"] is not None or named["bottom_flange"] is not None:
        raise Refusal(
            f"the warping constant of a {shape} is for like flanges; leave bottom_width and bottom_flange out"
        )
    arm = d["width"] - web / 2.0
    flanges, walls = arm * flange, height * web
    share = (3.0 * flanges + 2.0 * walls) / (6.0 * flanges + walls)
    if shape == "zee":
        share = (flanges + 2.0 * walls) / (2.0 * flanges + walls)
    return flange * arm**3 * height**2 / 12.0 * share


def shear_centre(shape: str, named: dict[str, Values]) -> tuple[Values, Values]:
    """Return x and y of the shear centre, in the axes of the profile's outline."""
    d = dimensions(shape, named)
    flange, foot, web, depth = d["flange"], d["bottom_flange"], d["web"], d["depth"]
    nowhere = np.zeros_like(depth)
    if shape == "tee":
        return nowhere, depth - flange / 2.0
    if shape == "angle":
        return web / 2.0, flange / 2.0
    if shape == "I":
        upper, lower = flange * d["width"] ** 3, foot * d["bottom_width"] ** 3
        return nowhere, foot / 2.0 + (depth - (flange + foot) / 2.0) * upper / (upper + lower)
    if named["bottom_width"] is not None or named["bottom_flange"] is not None:
        raise Refusal(f"the shear centre of a {shape} is for like flanges; leave bottom_width and bottom_flange out")
    if shape != "channel":
        return nowhere, depth / 2.0
    arm = d["width"] - web / 2.0
    out = 3.0 * arm**2 * flange / (6.0 * arm * flange + (depth - flange) * web)
    return web / 2.0 - out, depth / 2.0


def parallel_walls(shape: str, named: dict[str, Values], axis: str) -> Values:
    """Return five sixths of the area of the walls that lie along a shear force."""
    d = dimensions(shape, named)
    if axis == "y":
        return 5.0 / 6.0 * d["depth"] * d["web"]
    if shape == "angle":
        return 5.0 / 6.0 * d["width"] * d["flange"]
    return 5.0 / 6.0 * (d["width"] * d["flange"] + d["bottom_width"] * d["bottom_flange"])
