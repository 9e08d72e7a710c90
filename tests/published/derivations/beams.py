"""Bars and beams: elements of beam theory, linear stress fields in balance, series, motion in time."""

from itertools import pairwise

import numpy as np
from scipy.integrate import quad, solve_ivp

_LENGTH, _STIFFNESS = 1.6, 210e9 * 4.2e-7


def _beam(supports: str, at: float, load_at: float, force: float, couple: float) -> tuple[float, float]:
    """Deflection and slope at a place, from cubic elements between the ends, the load and the place."""
    nodes = sorted({0.0, at, load_at, _LENGTH})
    matrix, load = np.zeros((2 * len(nodes), 2 * len(nodes))), np.zeros(2 * len(nodes))
    for first, (left, right) in enumerate(pairwise(nodes)):
        h = right - left
        element = np.array(
            [[12, 6 * h, -12, 6 * h], [6 * h, 4 * h * h, -6 * h, 2 * h * h], [-12, -6 * h, 12, -6 * h],
             [6 * h, 2 * h * h, -6 * h, 4 * h * h]]
        )  # fmt: skip
        span = slice(2 * first, 2 * first + 4)
        matrix[span, span] += _STIFFNESS / h**3 * element
    place = nodes.index(load_at)
    load[2 * place : 2 * place + 2] = force, couple
    last = 2 * len(nodes)
    held = {
        "cantilever": [0, 1],
        "simply supported": [0, last - 2],
        "fixed-fixed": [0, 1, last - 2, last - 1],
        "propped": [0, 1, last - 2],
    }[supports]
    free = [row for row in range(last) if row not in held]
    moved = np.zeros(last)
    moved[free] = np.linalg.solve(matrix[np.ix_(free, free)], load[free])
    return float(moved[2 * nodes.index(at)]), float(moved[2 * nodes.index(at) + 1])


def slope_couple() -> float:
    return _beam("propped", 0.45, 1.1, 0.0, 320.0)[1] * 1e3


def slope_couple_fixed() -> float:
    return _beam("fixed-fixed", 1.25, 0.7, 0.0, -320.0)[1] * 1e3


def slope_force() -> float:
    return _beam("propped", 1.25, 0.7, 900.0, 0.0)[1] * 1e3


def slope_force_supported() -> float:
    return _beam("simply supported", 0.45, 1.1, 900.0, 0.0)[1] * 1e3


def deflection_couple() -> float:
    return _beam("fixed-fixed", 0.45, 1.1, 0.0, 320.0)[0] * 1e3


def deflection_couple_supported() -> float:
    return _beam("simply supported", 1.25, 0.7, 0.0, 320.0)[0] * 1e3


def frequency_mass() -> float:
    """Time of ten passages through rest of a mass of 3.2 kg on 45 N/mm, integrated in time."""
    found = solve_ivp(
        lambda _, state: [state[1], -45e3 / 3.2 * state[0]],
        (0, 1),
        [1e-3, 0.0],
        events=lambda _, state: state[0],
        rtol=1e-12,
        atol=1e-15,
    )
    passages = found.t_events[0]
    return float(10 / 2 / (passages[10] - passages[0]))


def _corners() -> np.ndarray:
    """Stress at the corners of 40 mm by 60 mm: a linear field whose resultants are the force and the moments."""
    points, weights = np.polynomial.legendre.leggauss(3)
    y, z = np.meshgrid(20 * points, 30 * points)
    area = np.outer(weights * 30, weights * 20)
    shapes = np.stack([np.ones_like(y), z, y])
    matrix = np.einsum("iab,jab,ab->ij", shapes, shapes, area)
    field = np.linalg.solve(matrix, [-36e3, 1.1e6, -0.7e6])
    return np.array([field @ [1, z, y] for z in (-30, 30) for y in (-20, 20)])


def axial_biaxial_max() -> float:
    return float(_corners().max())


def axial_biaxial_min() -> float:
    return float(_corners().min())


def shear_flow_unsymmetric() -> float:
    """Four booms of a zee: growth of their forces along the bar balances the shear; flow after the first two, N/mm."""
    y, z = np.array([-30.0, 0, 0, 40]), np.array([50.0, 50, -50, -50])
    area = np.array([400.0, 200, 300, 300])
    shapes = np.stack([y, z])
    slopes = np.linalg.solve((shapes * area) @ shapes.T, [3.2e3, -7.5e3])
    growth = area * (slopes @ shapes)
    return float(-growth[:2].sum())


def curved_general() -> float:
    """Plane sections of a curved bar of trapezoidal section: hoop strain (a + b r)/r, both from balance by quadrature.

    Inside at 60 mm (40 mm wide), outside at 130 mm (18 mm wide); stress at the inside, in MPa.
    """

    def width(radius: float) -> float:
        return 40 - 22 * (radius - 60) / 70

    def over(weight) -> float:
        return quad(lambda radius: weight(radius) * width(radius), 60, 130)[0]

    centroid = over(lambda r: r) / over(lambda _: 1.0)
    shapes = (lambda r: 1 / r, lambda _: 1.0)
    matrix = [[over(shape) for shape in shapes], [over(lambda r, s=shape: s(r) * (centroid - r)) for shape in shapes]]
    field = np.linalg.solve(matrix, [-8.5e3, 2.4e6])
    return float(field[0] / 60 + field[1])


def twist_rate_open() -> float:
    """Saint-Venant's series of each strip, which knows the ends that the thin-wall formula leaves out; in rad/m."""

    def constant(length: float, thickness: float) -> float:
        odd = np.arange(1, 60, 2)
        series = np.sum(np.tanh(odd * np.pi * length / (2 * thickness)) / odd**5)
        return length * thickness**3 * (1 / 3 - 64 * thickness / (np.pi**5 * length) * series)

    whole = 2 * constant(160.0, 0.4) + constant(300.0, 0.5)
    return 1.4e3 / (27.5e3 * whole) * 1e3
