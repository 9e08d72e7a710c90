"""Elastic constants of anisotropic and mixed materials, and from waves: by turned tensors, inverses and roots."""

from collections.abc import Callable
from typing import Any

import numpy as np
from numpy.polynomial.legendre import leggauss
from scipy.integrate import quad
from scipy.linalg import eigh
from scipy.optimize import brentq

from published.derivations.tensors import about_z, compliance_tensor, isotropic, stiffness_tensor, turned

_FIBRE = (138.0, 9.5, 0.31, 0.42, 4.7)
"""E1, E2, ν12, ν23, G12 of a unidirectional material in GPa."""


def _about_x(angle: float) -> np.ndarray:
    c, s = np.cos(angle), np.sin(angle)
    return np.array([[1, 0, 0], [0, c, s], [0, -s, c]])


def transverse_compliance() -> list[list[float]]:
    """Strains of unit stresses; the shear compliance 23 is the one that a turn about the fibre does not change."""
    young, across, poisson, poisson_23, shear = _FIBRE
    matrix = np.zeros((6, 6))
    matrix[0, 0], matrix[1, 1], matrix[2, 2] = 1 / young, 1 / across, 1 / across
    for i, j, value in ((0, 1, poisson / young), (0, 2, poisson / young), (1, 2, poisson_23 / across)):
        matrix[i, j] = matrix[j, i] = -value
    matrix[3, 3] = matrix[5, 5] = 1 / shear

    def change(compliance_23: float) -> float:
        matrix[4, 4] = compliance_23
        tensor = compliance_tensor(matrix)
        return turned(tensor, _about_x(np.pi / 4))[1, 1, 1, 1] - tensor[1, 1, 1, 1]

    matrix[4, 4] = brentq(change, 1e-3, 10, xtol=1e-15)
    return matrix.tolist()


def transverse_stiffness() -> list[list[float]]:
    return np.linalg.inv(np.array(transverse_compliance())).tolist()


def orthotropic_compliance() -> list[list[float]]:
    """Inverse of the stiffness matrix, whose entries are ratios of Poisson's ratios to a determinant."""
    e1, e2, e3, p12, p23, p13 = 125.0, 9.0, 7.5, 0.32, 0.45, 0.28
    p21, p32, p31 = p12 * e2 / e1, p23 * e3 / e2, p13 * e3 / e1
    det = (1 - p12 * p21 - p23 * p32 - p31 * p13 - 2 * p21 * p32 * p13) / (e1 * e2 * e3)
    normal = [
        [(1 - p23 * p32) / (e2 * e3 * det), (p21 + p31 * p23) / (e2 * e3 * det), (p31 + p21 * p32) / (e2 * e3 * det)],
        [(p12 + p32 * p13) / (e1 * e3 * det), (1 - p13 * p31) / (e1 * e3 * det), (p32 + p12 * p31) / (e1 * e3 * det)],
        [(p13 + p12 * p23) / (e1 * e2 * det), (p23 + p21 * p13) / (e1 * e2 * det), (1 - p12 * p21) / (e1 * e2 * det)],
    ]
    matrix = np.zeros((6, 6))
    matrix[:3, :3] = np.linalg.inv(normal)
    matrix[3:, 3:] = np.linalg.inv(np.diag([4.8, 3.1, 4.1]))
    return matrix.tolist()


def orthotropic_stress() -> list[float]:
    """Stresses that give the strains, by numpy's solution of the compliances."""
    matrix = np.array(orthotropic_compliance())[:3, :3] / 1e3
    return list(np.linalg.solve(matrix, np.array([1450e-6, -600e-6, 220e-6])))


def _verdict(poisson_23: float) -> str:
    """Whether no state of stress gives energy back: all eigenvalues of the compliances are positive."""
    e1, e2, e3, p12, p13 = 125.0, 9.0, 7.5, 0.32, 0.28
    matrix = np.array(
        [[1 / e1, -p12 / e1, -p13 / e1], [-p12 / e1, 1 / e2, -poisson_23 / e2], [-p13 / e1, -poisson_23 / e2, 1 / e3]]
    )
    return "stable" if np.linalg.eigvalsh(matrix)[0] > 0 else "not stable"


def orthotropic_check() -> str:
    return _verdict(0.45)


def orthotropic_check_near_its_end() -> str:
    """Just within the ratio ν23 (1.0824) at which the smallest eigenvalue vanishes."""
    return _verdict(1.082)


def orthotropic_check_beyond_its_end() -> str:
    return _verdict(1.083)


def _averaged(tensor: Any) -> np.ndarray:
    """Mean of a tensor over all turns: trapezoids in two of Euler's angles, Gauss in the cosine of the third."""
    cosines, weights = leggauss(5)
    angles = np.arange(9) * 2 * np.pi / 9
    mean = np.zeros((3, 3, 3, 3))
    for cosine, weight in zip(cosines, weights, strict=True):
        tilt = _about_x(np.arccos(cosine))
        for one in angles:
            for two in angles:
                mean += weight / 2 / 81 * turned(tensor, about_z(one) @ tilt @ about_z(two))
    return mean


def _averages() -> tuple[list[float], list[float]]:
    """Bulk and shear moduli of the mean stiffness (Voigt) and of the mean compliance (Reuss), in GPa."""
    compliance = np.array(transverse_compliance())
    voigt = _averaged(stiffness_tensor(np.linalg.inv(compliance)))
    reuss = _averaged(compliance_tensor(compliance))
    bulk = [np.einsum("iijj", voigt) / 9, 1 / np.einsum("iijj", reuss)]
    shear = [voigt[0, 1, 0, 1], 1 / (4 * reuss[0, 1, 0, 1])]
    return [*bulk, sum(bulk) / 2], [*shear, sum(shear) / 2]


def average_bulk() -> list[float]:
    return _averages()[0]


def average_shear() -> list[float]:
    return _averages()[1]


def anisotropy() -> float:
    """Contraction of the mean stiffness with the mean compliance, less that of an isotropic material (six)."""
    compliance = np.array(transverse_compliance())
    stiffness = _averaged(stiffness_tensor(np.linalg.inv(compliance)))
    return float(np.einsum("ijkl,ijkl->", stiffness, _averaged(compliance_tensor(compliance))) - 6)


_CUBIC = (168.4, 121.4, 75.4)
"""C11, C12, C44 of a crystal in GPa."""


def _cubic_tensor() -> np.ndarray:
    c11, c12, c44 = _CUBIC
    matrix = np.diag([c11 - c12] * 3 + [c44] * 3)
    matrix[:3, :3] += c12
    return stiffness_tensor(matrix)


def cubic_bulk() -> float:
    """A third of the trace of the stress over the growth of volume, under equal strains."""
    stress = np.einsum("ijkl,kl->ij", _cubic_tensor(), np.eye(3) * 1e-3)
    return float(np.trace(stress) / 3 / 3e-3)


def cubic_stiffness() -> list[float]:
    matrix = np.diag([0.0149 + 0.0062] * 3 + [0.0133] * 3)
    matrix[:3, :3] -= 0.0062
    inverse = np.linalg.inv(matrix)
    return [inverse[0, 0], inverse[0, 1], inverse[3, 3]]


def zener() -> float:
    """Shear modulus on the cube faces over that in axes turned by 45° about a cube edge."""
    tensor = _cubic_tensor()
    return float(tensor[0, 1, 0, 1] / turned(tensor, about_z(np.pi / 4))[0, 1, 0, 1])


def halpin_tsai() -> float:
    """Shear of a fibre in its cylinder of matrix (for shape factor 1 the same): a potential of two rings.

    The displacement along the fibre is A r cosθ within, (B r + C/r) cosθ without; it and the shear stress pass
    the interface, and the outer face is displaced by r cosθ: the mean stress there is the modulus.
    """
    fibre, matrix, share = 22.0, 1.35, 0.58
    radius = np.sqrt(share)
    equations = [[radius, -radius, -1 / radius], [fibre, -matrix, matrix / radius**2], [0, 1, 1]]
    _, b, c = np.linalg.solve(equations, [0, 0, 1])
    return float(matrix * (b - c))


def mix_across() -> float:
    """Mean stress over mean strain of layers in series."""
    mean = quad(lambda place: 1 / (14.5 if place < 0.55 else 3.4), 0, 1, points=[0.55])[0]
    return 1 / mean


def mix_poisson() -> float:
    """Contraction of layers side by side that are stretched alike: the widths' changes added up."""
    return quad(lambda place: 0.22 if place < 0.57 else 0.36, 0, 1, points=[0.57])[0]


def at_temperature() -> float:
    return float(71.0 * np.interp(93.0, [21.0, 66.0, 121.0], [1.0, 0.975, 0.93]))


def _wave_speeds(young: float, poisson: float, density: float) -> tuple[float, float]:
    """Longitudinal and shear speed in an oblique direction: eigenvalues of the acoustic (Christoffel) matrix."""
    direction = np.array([2, -1, 3]) / np.sqrt(14)
    acoustic = np.einsum("ijkl,j,l->ik", isotropic(young, poisson), direction, direction)
    squares = np.linalg.eigvalsh(acoustic) / density
    return float(np.sqrt(squares[2])), float(np.sqrt(squares[0]))


def _inverted(wanted: Callable[[float, float], float]) -> float:
    """A property of the material (E, ν) in which waves go 6320 and 3130 m/s at 2700 kg/m³."""

    def poisson_off(poisson: float) -> float:
        longitudinal, shear = _wave_speeds(1.0, poisson, 1.0)
        return longitudinal / shear - 6320 / 3130

    poisson = brentq(poisson_off, -0.5, 0.49, xtol=1e-15)
    young = brentq(lambda value: _wave_speeds(value, poisson, 2700.0)[1] - 3130, 1e9, 1e12, rtol=1e-14)
    return wanted(young, poisson)


def sonic_bulk() -> float:
    return _inverted(lambda young, poisson: np.einsum("iijj", isotropic(young, poisson)) / 9 / 1e9)


def sonic_poisson() -> float:
    return _inverted(lambda _, poisson: poisson)


def sonic_p_wave() -> float:
    """Stress over strain with no strain sideways."""
    return _inverted(lambda young, poisson: isotropic(young, poisson)[0, 0, 0, 0] / 1e9)


def sonic_shear() -> float:
    return _inverted(lambda young, poisson: isotropic(young, poisson)[0, 1, 0, 1] / 1e9)


def sonic_rod() -> float:
    """Modulus of a free rod of 0.4 m whose first mode, at half a wave a length, has the frequency of 5050 m/s.

    The mode is that of a spectral model: ∫E u′v′ = ω² ∫ρ u v on ten Legendre polynomials.
    """
    points, weights = leggauss(16)
    shapes = [np.polynomial.legendre.Legendre.basis(n) for n in range(10)]
    values = np.array([shape(points) for shape in shapes])
    slopes = np.array([shape.deriv()(points) if i else np.zeros(16) for i, shape in enumerate(shapes)]) * 2 / 0.4
    squares = eigh((slopes * weights) @ slopes.T, 2700.0 * (values * weights) @ values.T, eigvals_only=True)
    wanted = (2 * np.pi * 5050.0 / (2 * 0.4)) ** 2
    return wanted / squares[1] / 1e9
