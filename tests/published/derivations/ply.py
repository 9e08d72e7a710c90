"""Plies and laminates: turned tensors, integrals through the thickness, loads grown until a criterion is met."""

from collections.abc import Callable, Sequence

import numpy as np
from numpy.polynomial.legendre import leggauss
from scipy.optimize import brentq

from published.derivations.tensors import about_z, plane_matrix, ply_compliance

_PLY = (142.0, 9.8, 0.29, 5.2)
"""E1, E2, ν12, G12 in GPa."""
_STRENGTHS = (1650.0, 1150.0, 54.0, 190.0, 78.0)
"""Xt, Xc, Yt, Yc, S in MPa."""


def moduli_turned() -> list[float]:
    compliance = ply_compliance(*_PLY, np.radians(32))
    return [1 / compliance[0, 0, 0, 0], 1 / compliance[1, 1, 1, 1], 1 / (4 * compliance[0, 1, 0, 1])]


def index() -> float:
    """Hill's yield function of the three-dimensional state, its constants solved from the strengths (Z as Y)."""
    _, x, y, _, s = _STRENGTHS
    # Tension in 2 and compression in 1: F, G, H from the strengths alone in 1, 2 and 3.
    f, g, h = np.linalg.solve([[0, 1, 1], [1, 0, 1], [1, 1, 0]], [1 / x**2, 1 / y**2, 1 / y**2])
    one, two, three, shear = -620.0, 21.0, 0.0, 33.0
    return f * (two - three) ** 2 + g * (three - one) ** 2 + h * (one - two) ** 2 + shear**2 / s**2


def _grown(failing: Callable[[float], float]) -> float:
    return brentq(failing, 1e-6, 1e3, xtol=1e-12) if failing(1e3) > 0 else np.inf


def mode() -> str:
    """The one of Hashin's four conditions that is met first as the stresses grow together."""
    xt, xc, yt, yc, s = _STRENGTHS
    across = yc / 2
    one, two, shear = -310.0, -88.0, 41.0
    conditions = {
        "fibre tension": lambda k: (max(k * one, 0) / xt) ** 2 + (k * shear / s) ** 2 * (one > 0) - 1,
        "fibre compression": lambda k: -min(k * one, 0) / xc - 1,
        "matrix tension": lambda k: ((k * two / yt) ** 2 + (k * shear / s) ** 2) * (two > 0) - 1,
        "matrix compression": lambda k: (
            ((k * two / (2 * across)) ** 2 + ((yc / (2 * across)) ** 2 - 1) * k * two / yc + (k * shear / s) ** 2)
            * (two < 0)
            - 1
        ),
    }
    return min(conditions, key=lambda name: _grown(conditions[name]))


def reserve_strain() -> float:
    """Growth at which the state leaves the box of the allowed strains."""

    def outside(k: float) -> float:
        one, two, shear = k * -2300e-6, k * 1900e-6, k * -5200e-6
        over = (one / 0.011, -one / 0.0085, two / 0.0045, -two / 0.013, abs(shear) / 0.016)
        return max(over) - 1

    return _grown(outside)


_ANGLES = (0.0, 45.0, 90.0, -45.0, 30.0)
_THICKNESSES = (0.2, 0.25, 0.2, 0.3, 0.2)


def _stiffness(angle: float) -> np.ndarray:
    return np.linalg.inv(plane_matrix(ply_compliance(*_PLY, np.radians(angle)))) * 1e3


def _laminate() -> tuple[np.ndarray, np.ndarray]:
    """Stiffness of loads and moments, 6 by 6, integrated through the thickness; and the ply faces."""
    faces = np.concatenate([[0.0], np.cumsum(_THICKNESSES)]) - sum(_THICKNESSES) / 2
    points, weights = leggauss(3)
    whole = np.zeros((6, 6))
    for angle, low, high in zip(_ANGLES, faces[:-1], faces[1:], strict=True):
        for point, weight in zip(points, weights, strict=True):
            z = (low + high) / 2 + point * (high - low) / 2
            shape = np.hstack([np.eye(3), z * np.eye(3)])
            whole += weight * (high - low) / 2 * shape.T @ _stiffness(angle) @ shape
    return whole, faces


def _answers(rows: Sequence[int]) -> np.ndarray:
    """Middle strains (or curvatures) of the laminate under each unit load (or moment) alone, all else free."""
    whole, _ = _laminate()
    return np.array([np.linalg.solve(whole, np.eye(6)[row])[list(rows)] for row in rows]).T


def laminate_moduli() -> list[float]:
    answers = _answers((0, 1, 2)) * sum(_THICKNESSES)
    return [1 / answers[i, i] for i in range(3)]


def laminate_moduli_bending() -> list[float]:
    answers = _answers((3, 4, 5)) * sum(_THICKNESSES) ** 3 / 12
    return [1 / answers[i, i] for i in range(3)]


def laminate_poisson() -> list[float]:
    """Contraction across over extension along, under load in x alone and in y alone."""
    answers = _answers((0, 1, 2))
    return [-answers[1, 0] / answers[0, 0], -answers[0, 1] / answers[1, 1]]


def first_failure() -> str:
    """Stresses at both faces of every ply by turned tensors; the smallest growth to one of the five strengths."""
    whole, faces = _laminate()
    middle = np.linalg.solve(whole, [60.0, -25.0, 30.0, 12.0, -8.0, 5.0])
    xt, xc, yt, yc, s = _STRENGTHS
    found = []
    for number, angle in enumerate(_ANGLES):
        for face, z in (("lower", faces[number]), ("upper", faces[number + 1])):
            xx, yy, xy = _stiffness(angle) @ (middle[:3] + z * middle[3:])
            turn = about_z(np.radians(angle))[:2, :2]
            ply = turn @ np.array([[xx, xy], [xy, yy]]) @ turn.T
            ways = {
                "fibre tension": ply[0, 0] / xt,
                "fibre compression": -ply[0, 0] / xc,
                "matrix tension": ply[1, 1] / yt,
                "matrix compression": -ply[1, 1] / yc,
                "shear": abs(ply[0, 1]) / s,
            }
            name = max(ways, key=lambda way: ways[way])
            found.append((ways[name], f"ply {number + 1}, {face} face: {name}"))
    return max(found)[1]
