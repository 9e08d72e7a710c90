"""Strain gauges: a gauge in its strain field and its bridge as a circuit, read, and solved back."""

import numpy as np
from scipy.integrate import quad
from scipy.optimize import brentq


def _bridge(arm: float, others: tuple[float, float, float]) -> float:
    """Output over excitation of four arms in a ring, from Kirchhoff's nodes: arm and others[0] on one side."""
    # Nodes: 0 top at one volt, 1 left, 2 right, 3 bottom at zero.
    branches = [(0, 1, arm), (1, 3, others[0]), (0, 2, others[1]), (2, 3, others[2])]
    matrix = np.zeros((4, 4))
    for i, j, resistance in branches:
        matrix[np.ix_([i, j], [i, j])] += np.array([[1, -1], [-1, 1]]) / resistance
    left, right = np.linalg.solve(matrix[np.ix_([1, 2], [1, 2])], -matrix[[1, 2], 0])
    return float(right - left)


def from_resistance() -> float:
    """Strain at which a gauge of 350 Ω and factor 2.07 has grown by 0.94 Ω."""
    return 1e6 * brentq(lambda strain: 350 * (1 + 2.07 * strain) - 350.94, -1, 1, xtol=1e-16)


def shunt() -> float:
    """Strain whose change of the arm gives the bridge the same output as the resistor laid across it."""
    both = np.linalg.inv([[1 / 120 + 1 / 48e3]])[0, 0]
    output = _bridge(both, (120.0, 120.0, 120.0))
    return 1e6 * brentq(
        lambda strain: _bridge(120 * (1 + 2.11 * strain), (120.0, 120.0, 120.0)) - output, -0.1, 0.1, xtol=1e-16
    )


def factor_at() -> float:
    """Gauge factor brought along from 24 °C to 163 °C by its slope."""
    return 2.09 + quad(lambda _: 2.09 * -0.7e-4, 24, 163)[0]


def factor_corrected() -> float:
    """Strain of a gauge of factor 2.145 whose change an indicator, set to 2.00, shows as 1320 µε."""
    change = brentq(lambda ratio: ratio / 2.00 - 1320e-6, 0, 1, xtol=1e-16)
    return 1e6 * brentq(lambda strain: 2.145 * strain - change, 0, 1, xtol=1e-16)


def lead_corrected() -> float:
    """A gauge of 120 Ω with two leads of 1.6 Ω in its arm: relative change of the arm for a strain, by difference.

    The bridge is balanced with its leads, and the indicator takes the arm's relative change for the gauge's.
    """

    def shown(strain: float) -> float:
        arm = 120 * (1 + 2.05 * strain) + 2 * 1.6
        return (arm / (120 + 2 * 1.6) - 1) / 2.05

    return 1e6 * brentq(lambda strain: shown(strain) - 815e-6, 0, 0.1, xtol=1e-16)


_NU0, _KT = 0.285, 0.012
"""Poisson's ratio of the beam of calibration and transverse sensitivity."""


def _reading(along: float, across: float, factor: float = 2.05) -> float:
    """What a gauge shows in a field: axial and transverse sensitivity are those that the beam of calibration gives."""
    # Unknown Fa, Ft: Ft = Kt Fa and, on the beam (along 1, across −ν0), Fa − ν0 Ft = factor.
    axial, transverse = np.linalg.solve([[-_KT, 1.0], [1.0, -_NU0]], [0.0, factor])
    return float((axial * along + transverse * across) / factor)


def thermal_output() -> float:
    """A grid that grows by 13.4 on a part that grows by 22.9 (1e-6 1/K), in both directions, heated by 65 K."""
    stretched = (22.9e-6 - 13.4e-6) * 65
    change = -9.2e-6 * 65 + 2.05 * _reading(stretched, stretched)
    return 1e6 * change / 2.05


def thermal_output_corrected() -> float:
    """Strain of a gauge of factor 2.12 under an indicator at 2.05, with an output of −180 µε (given for 2.00)."""

    def shown(strain: float) -> float:
        resistance = 2.12 * strain + 2.00 * -180e-6
        return resistance / 2.05

    return 1e6 * brentq(lambda strain: shown(strain) - 940e-6, -0.1, 0.1, xtol=1e-16)


def tee_corrected() -> list[float]:
    """Two strains whose readings are those given: linear equations of the forward model."""
    matrix = [[_reading(1, 0), _reading(0, 1)], [_reading(0, 1), _reading(1, 0)]]
    return list(1e6 * np.linalg.solve(matrix, [860e-6, -245e-6]))


def rosette_corrected() -> list[float]:
    """State of strain whose three readings, at 0°, 60° and 120°, are those given; then the strains along the gauges."""

    def seen(angle: float) -> tuple[np.ndarray, np.ndarray]:
        """Strain along and across that direction of the unit states ex, ey, gxy."""
        states = [np.diag([1.0, 0.0]), np.diag([0.0, 1.0]), np.array([[0.0, 0.5], [0.5, 0.0]])]
        along, across = np.array([np.cos(angle), np.sin(angle)]), np.array([-np.sin(angle), np.cos(angle)])
        return np.array([along @ s @ along for s in states]), np.array([across @ s @ across for s in states])

    fields = [seen(np.radians(degrees)) for degrees in (0, 60, 120)]
    matrix = [[_reading(a, t) for a, t in zip(along, across, strict=True)] for along, across in fields]
    state = np.linalg.solve(matrix, [612e-6, -141e-6, 288e-6])
    return [1e6 * float(along @ state) for along, _ in fields]
