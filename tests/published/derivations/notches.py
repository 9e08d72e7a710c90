"""Stress concentration and notch sensitivity: finite elements of a stepped shaft, and a series."""

from functools import cache

import numpy as np
from scipy.sparse import coo_matrix
from scipy.sparse.linalg import spsolve

_SMALL = 16.0
"""Radius of the thin part in mm."""


def _graded(first: float, length: float, count: int) -> np.ndarray:
    """Ends of elements, growing evenly from a first size over a length (with their middles)."""
    growth = np.roots([first, *[0.0] * (count - 2), -length, length - first])  # first·(qⁿ − 1) = length·(q − 1)
    ratio = max(root.real for root in growth if abs(root.imag) < 1e-9)
    ends = np.concatenate([[0.0], np.cumsum(first * ratio ** np.arange(count))])
    return np.interp(np.arange(2 * count + 1) / 2, np.arange(count + 1), ends)


def _mesh(fillet: float, step: float, arc: int, deep: int) -> tuple[np.ndarray, np.ndarray]:
    """Nodes z, r of a grid of quadratic elements, fine at the fillet: first index along the shaft.

    The fillet is an arc from the thin part up to a step that is lower than its radius.
    """
    reached = np.arccos(1 - step / fillet)
    reach = _graded(reached * fillet / arc, 45.0, 14)
    angles = np.linspace(reached, 0, 2 * arc + 1)
    along = np.concatenate([-reach[:0:-1] - fillet * np.sin(reached), -fillet * np.sin(angles), reach[1:]])
    rise = np.where(along < 0, fillet - np.sqrt(np.maximum(fillet**2 - along**2, 0)), 0.0)
    outer = np.where(along <= -fillet * np.sin(reached) + 1e-12, _SMALL + step, _SMALL + rise)
    depth = 1 - _graded(0.7 / _SMALL / 6, 1.0, deep)[::-1]
    return np.repeat(along[:, None], len(depth), 1), outer[:, None] * depth


def _shapes(x: float, y: float) -> tuple[np.ndarray, np.ndarray]:
    """Nine Lagrange shapes and their slopes on −1 … 1 in both directions."""

    def line(s: float) -> tuple[np.ndarray, np.ndarray]:
        return np.array([s * (s - 1) / 2, 1 - s * s, s * (s + 1) / 2]), np.array([s - 0.5, -2 * s, s + 0.5])

    (fx, dx), (fy, dy) = line(x), line(y)
    return np.outer(fx, fy).ravel(), np.stack([np.outer(dx, fy).ravel(), np.outer(fx, dy).ravel()])


def _strains(z: np.ndarray, r: np.ndarray, place: tuple[float, float], wave: int) -> tuple[np.ndarray, ...]:
    """Strains r, θ, z, rz, rθ, θz of the nodes' ur, uθ, uz (as cos, sin, cos of wave·θ), Jacobian, and radius."""
    values, local = _shapes(*place)
    jacobian = np.einsum("kn,aen->eka", local, np.stack([z, r]))
    slopes = np.einsum("eak,kn->ean", np.linalg.inv(jacobian), local)
    radius = r @ values
    by_z, by_r, over = slopes[:, 0], slopes[:, 1], values / np.maximum(radius, 1e-9)[:, None]
    matrix = np.zeros((len(z), 6, 9, 3))
    matrix[:, 0, :, 0], matrix[:, 1, :, 0], matrix[:, 1, :, 1] = by_r, over, wave * over
    matrix[:, 2, :, 2], matrix[:, 3, :, 0], matrix[:, 3, :, 2] = by_z, by_z, by_r
    matrix[:, 4, :, 0], matrix[:, 4, :, 1] = -wave * over, by_r - over
    matrix[:, 5, :, 1], matrix[:, 5, :, 2] = by_z, -wave * over
    return matrix.reshape(len(z), 6, 27), np.linalg.det(jacobian), radius


@cache
def _factor(wave: int, fillet: float, step: float, arc: int = 20, deep: int = 12, poisson: float = 0.3) -> float:
    """Largest principal stress of the fillet over the nominal stress of the thin part: tension (0), bending (1)."""
    z, r = _mesh(fillet, step, arc, deep)
    numbers = np.arange(z.size).reshape(z.shape)
    elements = np.array(
        [
            numbers[i : i + 3, j : j + 3].ravel()
            for i in range(0, z.shape[0] - 1, 2)
            for j in range(0, z.shape[1] - 1, 2)
        ]
    )
    ez, er = z.ravel()[elements], r.ravel()[elements]
    lame, shear = poisson / ((1 + poisson) * (1 - 2 * poisson)), 1 / (2 * (1 + poisson))
    elastic = np.diag([2 * shear] * 3 + [shear] * 3)
    elastic[:3, :3] += lame
    points, weights = np.polynomial.legendre.leggauss(3)
    stiffness = np.zeros((len(elements), 27, 27))
    for x, wx in zip(points, weights, strict=True):
        for y, wy in zip(points, weights, strict=True):
            matrix, jacobian, radius = _strains(ez, er, (x, y), wave)
            scaled = matrix * (np.abs(jacobian) * radius * wx * wy)[:, None, None]
            stiffness += np.swapaxes(scaled, 1, 2) @ elastic @ matrix
    degrees = (3 * elements[:, :, None] + np.arange(3)).reshape(len(elements), 27)
    rows, columns = np.repeat(degrees, 27, 1).ravel(), np.tile(degrees, (1, 27)).ravel()
    whole = coo_matrix((stiffness.ravel(), (rows, columns))).tocsr()

    load, end = np.zeros(3 * z.size), numbers[-1]
    for j in range(0, len(end) - 1, 2):
        inner, outer = r[-1, j], r[-1, j + 2]
        for x, wx in zip(points, weights, strict=True):
            values = np.array([x * (x - 1) / 2, 1 - x * x, x * (x + 1) / 2])
            radius = inner + (outer - inner) * (x + 1) / 2
            load[3 * end[j : j + 3] + 2] += (
                values * wx * (outer - inner) / 2 * radius * (radius / _SMALL if wave else 1)
            )
    held = set(3 * numbers[0] + 2)  # the far end of the thick part is a plane of symmetry
    if wave:
        held |= {3 * numbers[0, 0], *(3 * numbers[:, 0] + 2)}
    else:
        held |= {*(3 * np.arange(z.size) + 1), *(3 * numbers[:, 0])}
    free = np.setdiff1d(np.arange(3 * z.size), list(held))
    moved = np.zeros(3 * z.size)
    moved[free] = spsolve(whole[free][:, free].tocsc(), load[free])

    surface = slice(deep - 1, None, deep)
    largest = 0.0
    for x in np.linspace(-1, 1, 9):
        matrix, _, _ = _strains(ez[surface], er[surface], (x, 1.0), wave)
        rr, _, zz, rz, *_ = np.einsum("ij,ejk,ek->ie", elastic, matrix, moved[degrees[surface]])
        meridian = (rr + zz) / 2 + np.hypot((rr - zz) / 2, rz)
        largest = max(largest, float(np.max(meridian[14 : arc + 17])))
    return largest


def step_shaft() -> float:
    return _factor(0, 4.0, 2.0)


def step_shaft_sharp() -> float:
    return _factor(0, 0.96, 0.864)


def step_shaft_bending() -> float:
    return _factor(1, 4.0, 2.0)


def step_shaft_bending_sharp() -> float:
    return _factor(1, 0.96, 0.864)


def sensitivity() -> float:
    """Series of powers of −a/r, for a/r = 0.2243/0.8."""
    return float(np.sum((-0.2243 / 0.8) ** np.arange(60)))


def fatigue_factor() -> float:
    """Kt shrunk towards one by the series of the sensitivity: the line from (0, 1) to (1, Kt) read at q."""
    return float(np.interp(sensitivity(), [0, 1], [1, 2.35]))
