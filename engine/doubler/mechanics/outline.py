"""Integrals over plane areas with straight edges, by Green's theorem over the edges of their outlines."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from doubler.catalogue.annotations import Values

_BISECTIONS = 60
_NODES, _WEIGHTS = np.polynomial.legendre.leggauss(8)


@dataclass(frozen=True, slots=True)
class Outline:
    """Edges of an area, the material on the left of each; edges on the last axis.

    Attributes
    ----------
    x0, y0, x1, y1
        Ends of each edge.
    """

    x0: Values
    y0: Values
    x1: Values
    y1: Values

    @property
    def cross(self) -> Values:
        """Twice the signed area between each edge and the origin."""
        return self.x0 * self.y1 - self.x1 * self.y0

    def moved(self, dx: Values, dy: Values) -> Outline:
        """Return the outline moved by (dx, dy), one shift a lane."""
        dx, dy = np.asarray(dx)[..., np.newaxis], np.asarray(dy)[..., np.newaxis]
        return Outline(self.x0 + dx, self.y0 + dy, self.x1 + dx, self.y1 + dy)

    def quarter_turn(self) -> Outline:
        """Return the outline turned by 90° counter-clockwise: what was along x is then along y."""
        return Outline(-self.y0, self.x0, -self.y1, self.x1)


def closed(x: Values, y: Values) -> Outline:
    """Return the outline of one closed loop of vertices, turned so that it counts positive."""
    following = Outline(x, y, np.roll(x, -1, axis=-1), np.roll(y, -1, axis=-1))
    clockwise = (following.cross.sum(axis=-1) < 0.0)[..., np.newaxis]
    x0, x1 = np.where(clockwise, following.x1, following.x0), np.where(clockwise, following.x0, following.x1)
    y0, y1 = np.where(clockwise, following.y1, following.y0), np.where(clockwise, following.y0, following.y1)
    return Outline(x0, y0, x1, y1)


def without(outer: Outline, hole: Outline) -> Outline:
    """Return the outline of an area with a hole cut out of it."""
    ends = ((outer.x0, hole.x1), (outer.y0, hole.y1), (outer.x1, hole.x0), (outer.y1, hole.y0))
    return Outline(*(_joined(first, second) for first, second in ends))


def _joined(first: Values, second: Values) -> Values:
    lanes = np.broadcast_shapes(first.shape[:-1], second.shape[:-1])
    return np.concatenate(
        [
            np.broadcast_to(first, (*lanes, first.shape[-1])),
            np.broadcast_to(second, (*lanes, second.shape[-1])),
        ],
        axis=-1,
    )


def area(outline: Outline) -> Values:
    """Return the area."""
    return outline.cross.sum(axis=-1) / 2.0


def centroid(outline: Outline) -> tuple[Values, Values]:
    """Return the coordinates of the centroid."""
    near = outline.moved(-outline.x0[..., 0], -outline.y0[..., 0])
    cross, six_areas = near.cross, 3.0 * near.cross.sum(axis=-1)
    x = (cross * (near.x0 + near.x1)).sum(axis=-1) / six_areas
    y = (cross * (near.y0 + near.y1)).sum(axis=-1) / six_areas
    return x + outline.x0[..., 0], y + outline.y0[..., 0]


def central(outline: Outline) -> Outline:
    """Return the outline moved so that its centroid is the origin."""
    x, y = centroid(outline)
    return outline.moved(-x, -y)


def second_moments(outline: Outline) -> tuple[Values, Values, Values]:
    """Return Ix, Iy and the product Ixy about the centroid."""
    o = central(outline)
    cross = o.cross
    about_x = (cross * (o.y0**2 + o.y0 * o.y1 + o.y1**2)).sum(axis=-1) / 12.0
    about_y = (cross * (o.x0**2 + o.x0 * o.x1 + o.x1**2)).sum(axis=-1) / 12.0
    product = (cross * (2.0 * (o.x0 * o.y0 + o.x1 * o.y1) + o.x0 * o.y1 + o.x1 * o.y0)).sum(axis=-1) / 24.0
    return about_x, about_y, product


def extremes(outline: Outline) -> tuple[Values, Values]:
    """Return the lowest and the highest y."""
    return outline.y0.min(axis=-1), outline.y0.max(axis=-1)


def above(outline: Outline, level: Values) -> tuple[Values, Values]:
    """Return the area above the line y = level, and its first moment about that line."""
    level = np.asarray(level)[..., np.newaxis]
    h0, h1 = outline.y0 - level, outline.y1 - level
    p0, p1 = np.maximum(h0, 0.0), np.maximum(h1, 0.0)
    crossing = (h0 > 0.0) != (h1 > 0.0)
    rise = np.where(crossing, np.abs(h1 - h0), 1.0)
    dx = outline.x1 - outline.x0
    height = np.maximum(p0, p1)
    mean = np.where(crossing, height**2 / (2.0 * rise), (p0 + p1) / 2.0)
    half_square = np.where(crossing, height**3 / (6.0 * rise), (p0**2 + p0 * p1 + p1**2) / 6.0)
    return -(dx * mean).sum(axis=-1), -(dx * half_square).sum(axis=-1)


def first_moment_above(outline: Outline, level: Values) -> Values:
    """Return the first moment, about the centroid, of the area above y = level."""
    cut, about_line = above(outline, level)
    return about_line + (level - centroid(outline)[1]) * cut


def plastic_modulus(outline: Outline) -> Values:
    """Return the plastic modulus for bending about the x axis: first moments about the line that halves the area."""
    low, high = extremes(outline)
    whole = area(outline)
    for _ in range(_BISECTIONS):
        middle = 0.5 * (low + high)
        too_low = above(outline, middle)[0] > 0.5 * whole
        low, high = np.where(too_low, middle, low), np.where(too_low, high, middle)
    level = 0.5 * (low + high)
    return 2.0 * above(outline, level)[1] - (centroid(outline)[1] - level) * whole


def width(outline: Outline, level: Values) -> Values:
    """Return the breadth of material on the line y = level, which meets no vertex."""
    level = np.asarray(level)[..., np.newaxis]
    upward, downward = (
        (outline.y0 < level) & (outline.y1 > level),
        (outline.y0 > level) & (outline.y1 < level),
    )
    crossing = upward | downward
    rise = np.where(crossing, outline.y1 - outline.y0, 1.0)
    x = outline.x0 + (outline.x1 - outline.x0) * (level - outline.y0) / rise
    return (np.where(upward, x, 0.0) - np.where(downward, x, 0.0)).sum(axis=-1)


def shear_area(outline: Outline) -> Values:
    """Return the area that gives the strain energy of the shear stress VQ/(Ib), for a shear force along y."""
    o = central(outline)
    levels = np.sort(o.y0, axis=-1)
    energy = np.zeros(levels.shape[:-1])
    for index in range(levels.shape[-1] - 1):
        low, high = levels[..., index], levels[..., index + 1]
        for node, weight in zip(_NODES, _WEIGHTS, strict=True):
            level = 0.5 * (low + high) + 0.5 * (high - low) * node
            breadth = width(o, level)
            inside = (breadth > 0.0) & (high > low)
            cut, about_line = above(o, level)
            first = about_line + level * cut
            energy += np.where(inside, 0.5 * (high - low) * weight * first**2 / np.where(inside, breadth, 1.0), 0.0)
    return second_moments(outline)[0] ** 2 / energy


def simple(outline: Outline) -> Values:
    """Return where no two edges of the outline cross each other."""
    sound = np.ones(outline.x0.shape[:-1], dtype=bool)
    o = central(outline)
    for index in range(o.x0.shape[-1]):
        ax, ay = o.x0[..., index, np.newaxis], o.y0[..., index, np.newaxis]
        bx, by = o.x1[..., index, np.newaxis], o.y1[..., index, np.newaxis]
        side_0 = (bx - ax) * (o.y0 - ay) - (by - ay) * (o.x0 - ax)
        side_1 = (bx - ax) * (o.y1 - ay) - (by - ay) * (o.x1 - ax)
        edge_x, edge_y = o.x1 - o.x0, o.y1 - o.y0
        side_a = edge_x * (ay - o.y0) - edge_y * (ax - o.x0)
        side_b = edge_x * (by - o.y0) - edge_y * (bx - o.x0)
        sound &= ~np.any((side_0 * side_1 < 0.0) & (side_a * side_b < 0.0), axis=-1)
    return sound


def contains(outline: Outline, x: Values, y: Values) -> Values:
    """Return where the point lies inside the outline (the ray to the right crosses an odd number of edges)."""
    x, y = np.asarray(x)[..., np.newaxis], np.asarray(y)[..., np.newaxis]
    crossing = (outline.y0 > y) != (outline.y1 > y)
    rise = np.where(crossing, outline.y1 - outline.y0, 1.0)
    meets = outline.x0 + (outline.x1 - outline.x0) * (y - outline.y0) / rise
    return (crossing & (meets > x)).sum(axis=-1) % 2 == 1


def principal(about_x: Values, about_y: Values, product: Values) -> tuple[Values, Values]:
    """Return the largest and the smallest second moment."""
    mean, radius = 0.5 * (about_x + about_y), np.hypot(0.5 * (about_x - about_y), product)
    return mean + radius, mean - radius


def principal_angle(about_x: Values, about_y: Values, product: Values) -> Values:
    """Return the angle from the x axis to the axis of the largest second moment, counter-clockwise, in radians.

    Rounding leaves a trace of product or difference where there is none; below 1e-12 of the moments it counts as none.
    """
    trace = 1e-12 * (about_x + about_y)
    product = np.where(np.abs(product) > trace, product, 0.0)
    difference = np.where(np.abs(about_x - about_y) > trace, about_x - about_y, 0.0)
    return 0.5 * np.arctan2(0.0 - 2.0 * product, difference)
