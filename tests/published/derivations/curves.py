"""Test curves: regressions by numpy and SciPy, curves integrated, extremes searched."""

import numpy as np
from scipy.integrate import quad, solve_ivp
from scipy.optimize import brentq, minimize_scalar
from scipy.signal import find_peaks
from scipy.stats import linregress

_STRAINS = np.array([0, 0.0006, 0.0016, 0.0026, 0.0036, 0.0046, 0.0075, 0.0102, 0.02, 0.06, 0.09, 0.11, 0.11])
_STRESSES = np.array([0, 6, 74, 147, 217, 290, 381, 402, 430, 462, 471, 455, 12.0])
"""A record with a toe and a break, in MPa."""
_ELASTIC = (_STRESSES >= 70) & (_STRESSES <= 300)


def _line() -> tuple[float, float]:
    slope, intercept = np.polyfit(_STRAINS[_ELASTIC], _STRESSES[_ELASTIC], 1)
    return float(slope), float(intercept)


def _unloaded(index: int) -> float:
    """Strain at which a point, unloaded along the elastic slope, has no stress, from the foot of the line."""
    slope, intercept = _line()
    strain, stress = _STRAINS[index], _STRESSES[index]
    rest = brentq(lambda end: stress + slope * (end - strain), -0.1, 0.2, xtol=1e-15)
    foot = brentq(lambda start: slope * start + intercept, -0.1, 0.1, xtol=1e-15)
    return 100 * (rest - foot)


def break_elongation() -> float:
    return _unloaded(11)


def uniform_elongation() -> float:
    return _unloaded(10)


def corrected_strain() -> float:
    """Strain of the point at 290 MPa from the foot of its line, as µε."""
    slope, intercept = _line()
    return 1e6 * (0.0046 - float(np.roots([slope, intercept])[0]))


def modulus_fit() -> list[float]:
    fit = linregress(_STRAINS[_ELASTIC], _STRESSES[_ELASTIC])
    return [fit.rvalue**2, fit.stderr / fit.slope, float(np.count_nonzero(_ELASTIC))]


def modulus_window() -> list[float]:
    inside = sorted(stress for stress in _STRESSES[:11] if 70 <= stress <= 300)
    return [inside[0], inside[-1]]


def strength() -> float:
    return float(np.sort(_STRESSES)[-1])


def modulus_chord() -> float:
    """Mean tangent between the two strains: the piecewise slope integrated over the strain, GPa."""
    slopes = np.diff(_STRESSES[:9]) / np.diff(_STRAINS[:9])

    def slope(strain: float) -> float:
        return float(slopes[np.searchsorted(_STRAINS[:9], strain) - 1])

    kinks = [0.0016, 0.0026, 0.0036, 0.0046]
    return quad(slope, 0.001, 0.005, points=kinks)[0] / 0.004 / 1e3


def modulus_secant() -> float:
    """Strain at 350 MPa by a root of the interpolated record, then the slope from the toe at 520 µε, GPa."""
    strain = brentq(lambda value: np.interp(value, _STRAINS[:11], _STRESSES[:11]) - 350, 0.004, 0.01, xtol=1e-15)
    return 350 / (strain - 520e-6) / 1e3


_YIELD_STRAINS = np.array([0, 0.0014, 0.0018, 0.004, 0.009, 0.014, 0.02, 0.03, 0.1])
_YIELD_STRESSES = np.array([0, 287, 268, 259, 263, 261, 275, 301, 390.0])


def upper_yield() -> float:
    first = find_peaks(_YIELD_STRESSES, prominence=0.005 * 287)[0][0]
    return float(_YIELD_STRESSES[first])


def lower_yield() -> float:
    """Lowest valley before the upper yield is reached again."""
    top = find_peaks(_YIELD_STRESSES, prominence=0.005 * 287)[0][0]
    again = top + 1 + np.flatnonzero(_YIELD_STRESSES[top + 1 :] > _YIELD_STRESSES[top])[0]
    valleys = find_peaks(-_YIELD_STRESSES)[0]
    return float(min(_YIELD_STRESSES[valleys[(valleys > top) & (valleys < again)]]))


_AXIAL = np.array([0, 0.0008, 0.0015, 0.0024, 0.0034, 0.0045, 0.006])
_ACROSS = np.array([0.00002, -0.00022, -0.00041, -0.00066, -0.00094, -0.00128, -0.002])
_PULL = np.array([0, 57, 105, 170, 238, 300, 340.0])


def poisson() -> float:
    chosen = (_PULL >= 50) & (_PULL <= 250)
    slopes = [linregress(_PULL[chosen], strains[chosen]).slope for strains in (_AXIAL, _ACROSS)]
    return -slopes[1] / slopes[0]


_SHEAR_AXIAL = np.array([0, 0.0009, 0.0018, 0.003, 0.0045, 0.011, 0.021, 0.034])
_SHEAR_ACROSS = np.array([0, -0.0007, -0.0015, -0.0024, -0.0038, -0.0098, -0.019, -0.031])
_SHEAR_PULL = np.array([0, 16, 31, 49, 68, 108, 137, 158.0])


def _in_the_ply() -> tuple[np.ndarray, np.ndarray]:
    """Shear strain and stress in axes at 45°: both tensors turned."""
    turn = np.array([[1, 1], [-1, 1]]) / np.sqrt(2)
    strains = [turn @ np.diag([x, y]) @ turn.T for x, y in zip(_SHEAR_AXIAL, _SHEAR_ACROSS, strict=True)]
    stresses = [turn @ np.diag([pull, 0.0]) @ turn.T for pull in _SHEAR_PULL]
    return np.array([abs(2 * e[0, 1]) for e in strains]), np.array([abs(s[0, 1]) for s in stresses])


def shear_modulus_45() -> float:
    strains, stresses = _in_the_ply()
    low, high = np.interp([0.002, 0.006], strains, stresses)
    return float((high - low) / 0.004 / 1e3)


def shear_strength_45() -> float:
    strains, stresses = _in_the_ply()
    fine = np.linspace(0, 0.05, 50001)
    return float(np.interp(fine, strains, stresses).max())


def flow_necking_strain() -> float:
    """Strain at which the load of K εᵗⁿ on a thinning bar is largest, by search."""
    found = minimize_scalar(
        lambda strain: -(np.log1p(strain) ** 0.21) / (1 + strain), bounds=(0.01, 1), options={"xatol": 1e-11}
    )
    near = found.x

    def slope(strain: float) -> float:
        """Growth of the logarithm of the load."""
        return 0.21 / (np.log1p(strain) * (1 + strain)) - 1 / (1 + strain)

    return 100 * brentq(slope, near - 1e-3, near + 1e-3, xtol=1e-15)


def flow_stress() -> float:
    """From K at a true strain of one along dσ/dε = n σ/ε, integrated numerically."""
    found = solve_ivp(lambda strain, stress: 0.21 * stress / strain, (1.0, 0.07), [640.0], rtol=1e-12, atol=1e-10)
    return float(found.y[0, -1])


def ro_plastic_strain() -> float:
    """From the offset at the proof stress along dε/dσ = n ε/σ, integrated numerically."""
    found = solve_ivp(lambda stress, strain: 13 * strain / stress, (345.0, 310.0), [0.002], rtol=1e-12, atol=1e-15)
    return float(found.y[0, -1]) * 1e6


def ro_secant() -> float:
    """Strain as the integral of the tangent compliance."""

    def compliance(stress: float) -> float:
        return 1 / 71e3 + 0.002 * 13 / 345 * (stress / 345) ** 12

    return 325 / quad(compliance, 0, 325, epsabs=1e-15)[0] / 1e3


def ro_fit_error() -> float:
    """Regression of the logarithms by SciPy, then the stress at each strain by a root finder, in percent."""
    slope, intercept = _line()
    foot = -intercept / slope
    strains = _STRAINS - foot
    plastic = strains - _STRESSES / slope
    chosen = (plastic >= 0.0005) & (plastic <= 0.02) & (np.arange(13) <= 10)
    fit = linregress(np.log(plastic[chosen] / 0.002), np.log(_STRESSES[chosen]))
    proof, power = np.exp(fit.intercept), 1 / fit.slope

    def error(strain: float, stress: float) -> float:
        found = brentq(lambda value: value / slope + 0.002 * (value / proof) ** power - strain, 1, 900, xtol=1e-11)
        return abs(found / stress - 1)

    return 100 * max(error(*pair) for pair in zip(strains[chosen], _STRESSES[chosen], strict=True))
