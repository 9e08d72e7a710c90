"""Margins and sizing: growing the load, or the part, until the factored load is what the part carries."""

from collections.abc import Callable

import numpy as np
from scipy.integrate import dblquad
from scipy.optimize import brentq


def _growth(left: Callable[[float], float]) -> float:
    """Share by which the load may grow until nothing is left."""
    return brentq(left, 1e-3, 100, xtol=1e-14) - 1


def stability() -> float:
    """Growth of the load at which the factored load is the one that buckles the column.

    The column (2.1e9 N·mm² over 900 mm, pinned) is a chain of 400 stiff links with springs between them, its
    buckling load an eigenvalue, corrected for the links' length.
    """

    def load(links: int) -> float:
        turns = np.diag(np.full(links - 1, 2.0)) - np.eye(links - 1, k=1) - np.eye(links - 1, k=-1)
        return float(np.linalg.eigvalsh(turns)[0] * 2.1e9 * (links / 900.0) ** 2)

    critical = (4 * load(400) - load(200)) / 3
    return _growth(lambda grown: critical - 1.5 * 1.1 * grown * 13.6e3)


def count_negative() -> float:
    column = np.sort([0.31, -0.02, 0.0, 2.4, -0.4, -1e-9, 0.07])
    return float(np.searchsorted(column, 0.0))


def _carried(force: float, factors: float) -> Callable[[float], float]:
    return lambda area: 385.0 - factors * force / area


def required_area() -> float:
    """The area at which the load, grown by the wanted margin, is at its allowable."""
    return brentq(_carried(38e3, 1.5 * 1.15 * 1.12), 1, 1e5, xtol=1e-10)


def required_modulus() -> float:
    """Breadth of a rectangle 30 mm deep whose edge is at its allowable, the stress from quadrature; its I/c."""

    def inertia(breadth: float) -> float:
        return dblquad(lambda y, _: y * y, 0, breadth, -15, 15)[0]

    moment = 1.5 * 1.15 * 1.12 * 2.6e6
    breadth = brentq(lambda value: 385.0 - moment * 15 / inertia(value), 10, 1000, xtol=1e-10)
    return inertia(breadth) / 15


def required_shaft() -> float:
    """Outer diameter of a hollow shaft whose surface is at its allowable.

    Bending and torsion stress with the second moment of area by Gauss's quadrature over the radius, principal
    stresses as eigenvalues, and the equivalent stress from their differences.
    """
    radii, weights = np.polynomial.legendre.leggauss(8)
    factor = 1.5 * 1.15 * 1.12

    def equivalent(outer: float) -> float:
        inner = 0.6 * outer
        span = (outer - inner) / 4
        polar = sum(
            weight * span * 2 * np.pi * (span * (radius + 1) + inner / 2) ** 3
            for radius, weight in zip(radii, weights, strict=True)
        )
        normal, shear = factor * 520e3 * outer / 2 / (polar / 2), factor * 840e3 * outer / 2 / polar
        one, two = np.linalg.eigvalsh([[normal, shear], [shear, 0.0]])
        return float(np.sqrt(((one - two) ** 2 + one**2 + two**2) / 2))

    return brentq(lambda outer: equivalent(outer) - 310.0, 5, 500, xtol=1e-12)


def largest_load() -> float:
    """The load whose margin, found by growing it, is the wanted one."""

    def margin(load: float) -> float:
        return _growth(lambda grown: 52.0 - 1.5 * 1.15 * grown * load)

    return brentq(lambda load: margin(load) - 0.12, 10, 60, xtol=1e-12)


def required_allowable() -> float:
    """The allowable with which the margin, found by growing the load, is the wanted one."""

    def margin(allowable: float) -> float:
        return _growth(lambda grown: allowable - 1.5 * 1.15 * grown * 27.0)

    return brentq(lambda allowable: margin(allowable) - 0.12, 10, 200, xtol=1e-12)


_TABLE = [
    ("Alloy 1", "A", 24.0, 455.0, "Report 3, table 1"),
    ("Alloy 1", "B", 24.0, 471.0, "Report 3, table 1"),
    ("Alloy 2", "A", 24.0, 310.0, "Report 5, table 2"),
    ("Alloy 1", "A", 149.0, 372.0, "Report 3, figure 9"),
    ("Alloy 1", "A", 82.0, 430.0, "Report 3, figure 8"),
]
"""Material, basis, temperature in °C, allowable in MPa, source: in no order."""


def allowable() -> float:
    rows = sorted(row[2:4] for row in _TABLE if row[:2] == ("Alloy 1", "A"))
    return float(np.interp(113.0, *zip(*rows, strict=True)))


def allowable_source() -> str:
    """The two rows nearest to 113 °C on either side, found by looking at all."""
    rows = [(row[2], number, row[4]) for number, row in enumerate(_TABLE, start=1) if row[:2] == ("Alloy 1", "A")]
    below = max(row for row in rows if row[0] <= 113)
    above = min(row for row in rows if row[0] >= 113)
    return "; ".join(f"row {number}: {source}" for _, number, source in (below, above))
