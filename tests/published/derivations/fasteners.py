"""Fasteners, bolts and lugs: rigid plates on springs, bodies in balance, quadrature over the real shapes."""

from itertools import product

import numpy as np
from scipy.integrate import dblquad, quad
from scipy.optimize import brentq, minimize


def direct_shear() -> float:
    """Even stress over two round faces of 8 mm that balances 18 kN; the faces by quadrature in x and y."""
    face = dblquad(lambda *_: 1.0, -4, 4, lambda x: -np.sqrt(16 - x * x), lambda x: np.sqrt(16 - x * x))[0]
    return brentq(lambda stress: 2 * face * stress - 18e3, 0, 1e4, xtol=1e-12)


def heel() -> float:
    """Springs of one stiffness under a turn about the heel, by least energy (kN, mm)."""
    arms = np.array([18.0, 45.0, 72.0, 99.0]) / 100

    def energy(turn: np.ndarray) -> tuple[float, np.ndarray]:
        forces = turn[0] * arms
        return 0.5 * np.sum(forces**2) - 9.5 * turn[0], np.array([np.sum(forces * arms) - 9.5])

    return float(minimize(energy, [1.0], jac=True, tol=1e-12).x[0] * arms[-1])


_X = np.array([0.0, 50.0, 95.0, 10.0])
_Y = np.array([0.0, 5.0, 60.0, 70.0])
_AREAS = np.array([20.0, 30.0, 50.0, 30.0])


def shear() -> list[float]:
    """A rigid plate on springs that are stiff as their areas: 3 by 3 stiffness of two shifts and a turn."""
    stiffness, sums = np.zeros((3, 3)), []
    for x, y, area in zip(_X, _Y, _AREAS, strict=True):
        motion = np.array([[1, 0, -y], [0, 1, x]])
        stiffness += area * motion.T @ motion
        sums.append(area * motion)
    load = np.array([2500.0, -4000.0, 120e3 + 140 * -4000.0 - 30 * 2500.0])
    force = sums[2] @ np.linalg.solve(stiffness, load)
    return [*force, float(np.linalg.norm(force))]


def tension() -> float:
    """A rigid plate on springs along z: 3 by 3 stiffness of a lift and two slopes, from the origin.

    The moments are given about the centroid, so the pull's own moment about the origin is added.
    """
    shapes = np.stack([np.ones(4), _X, _Y])
    stiffness = (shapes * _AREAS) @ shapes.T
    x, y = centroid()
    load = np.array([6000.0, 6000.0 * x - -90e3, 6000.0 * y + 210e3])
    lift, slope_x, slope_y = np.linalg.solve(stiffness, load)
    return float(_AREAS[2] * (lift + slope_x * _X[2] + slope_y * _Y[2]))


def centroid() -> list[float]:
    """The point about which the areas' first moments vanish: least squares of the distances."""
    weights = np.sqrt(_AREAS)
    return [float(np.linalg.lstsq(weights[:, None], weights * places, rcond=None)[0][0]) for places in (_X, _Y)]


def _bolt_at(pull: float) -> float:
    """Tension of a bolt of 1 on members of 3 (so a share of 0.25), which lift off when they are no longer pressed."""
    preload, bolt, members = 22.0, 1.0, 3.0

    def rest(stretch: float) -> float:
        return preload + bolt * stretch - max(preload - members * stretch, 0.0) - pull

    return preload + bolt * brentq(rest, -1, 100, xtol=1e-13)


def bolt_load() -> list[list[float]]:
    return [[_bolt_at(pull)] for pull in (6.0, 28.0, 35.0)]


def preload() -> list[float]:
    """Least, middle and largest of the preloads at all corners of the scatter and the loss (SI units)."""

    def at(scatter: float, loss: float) -> float:
        tight = brentq(lambda force: 0.18 * 8e-3 * force - 24.0, 0, 1e6, xtol=1e-9)
        return (1 + scatter) * tight * (1 - loss) / 1e3

    corners = [at(scatter, loss) for scatter, loss in product((-0.3, 0.3), (0.0, 0.06))]
    return [min(corners), at(0, 0), max(corners)]


def preload_friction() -> float:
    """Balance of one element of the thread's flank in space: normal, friction along the helix, axial and tangential.

    The flank is z = Pθ/2π − (r − r0) tan α; its normal is exact, where the usual formula drops the square of the
    sine of the lead angle.
    """
    pitch, radius, mu_thread, mu_head, head = 1.25, 7.188 / 2, 0.14, 0.11, 10.6 / 2
    normal = np.array([np.tan(np.pi / 6), -pitch / (2 * np.pi * radius), 1.0])
    normal /= np.linalg.norm(normal)
    along = np.array([0.0, 2 * np.pi * radius, pitch])
    along /= np.linalg.norm(along)
    on_bolt = normal - mu_thread * along
    thread_arm = -on_bolt[1] / on_bolt[2] * radius
    return 24e3 / (thread_arm + mu_head * head) / 1e3


def members() -> float:
    """Compression of two cones by quadrature over their height, for 1 kN."""

    def compliance(height: float) -> float:
        outer = 16.0 + 2 * np.tan(np.radians(30)) * height
        return 1 / (72.0 * np.pi / 4 * (outer**2 - 9.0**2))

    return 1 / (2 * quad(compliance, 0, 12, epsabs=1e-16)[0])


def share() -> float:
    """Chain of springs of a joint that is loaded 0.7 of its grip apart: stiffness matrix, unknown two loaded planes.

    The members between the planes (0.7) are eased, those beyond (0.15 at each end) are pressed with the bolt's ends.
    """
    bolt, whole = 310.0, 940.0
    inner, outer = whole / 0.7, whole / 0.15
    # Displacements: lower and upper end of the bolt, lower and upper loaded plane; the lower plane stands still.
    springs = [(0, 1, bolt), (0, 2, outer), (2, 3, inner), (3, 1, outer)]
    matrix = np.zeros((4, 4))
    for i, j, stiffness in springs:
        matrix[np.ix_([i, j], [i, j])] += stiffness * np.array([[1, -1], [-1, 1]])
    free = [0, 1, 3]
    moved = np.linalg.solve(matrix[np.ix_(free, free)], [0, 0, 1.0])
    return float(bolt * (moved[1] - moved[0]))


def lug_net() -> float:
    """Even stress on what the hole leaves of the lug's breadth, summed strip by strip."""
    breadth = quad(lambda y: 1.0 if abs(y) > 9.5 else 0.0, -26, 26, points=[-9.5, 9.5])[0]
    return 47e3 / (breadth * 9.0)


def lug_shear_out() -> float:
    """Length of the plane from the hole, 40° off the load, to the round end about the hole's centre: a root."""
    start = 9.5 * np.array([np.cos(np.radians(40)), np.sin(np.radians(40))])
    length = brentq(lambda run: np.hypot(start[0] + run, start[1]) - 26.0, 0, 30, xtol=1e-13)
    return 47e3 / (2 * 9.0 * length)


def lug_oblique() -> float:
    """Growth of the load at which the interaction reaches one."""
    axial, across = 1.15 * 21.0 * np.cos(np.radians(33)) / 52.0, 1.15 * 21.0 * np.sin(np.radians(33)) / 31.0
    return brentq(lambda grown: (axial * grown) ** 1.6 + (across * grown) ** 1.6 - 1, 0.1, 10, xtol=1e-13) - 1


def bolt_shear() -> float:
    """Growth of the force at which each of two planes, at the factored force, carries its allowable."""
    return brentq(lambda grown: 1.5 * 1.15 * grown * 21.5 / 2 - 24.0, 0.1, 10, xtol=1e-13) - 1
