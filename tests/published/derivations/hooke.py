"""Stress, strain and energy of isotropic material: from stiffness tensors, deformation gradients and quadrature."""

import numpy as np
from scipy.integrate import quad, solve_ivp
from scipy.optimize import brentq

from published.derivations.tensors import PAIRS, isotropic, stiffness_matrix


def _tensor(components: tuple[float, ...]) -> np.ndarray:
    stress = np.zeros((3, 3))
    for (i, j), value in zip(PAIRS, components, strict=True):
        stress[i, j] = stress[j, i] = value
    return stress


def _strain(stress: np.ndarray, young: float, poisson: float) -> np.ndarray:
    """Strain tensor that the stiffness tensor turns into that stress."""
    stiffness = isotropic(young, poisson).reshape(9, 9)
    return np.linalg.lstsq(stiffness, stress.reshape(9), rcond=None)[0].reshape(3, 3)


def _energy_parts(components: tuple[float, ...], young: float, poisson: float) -> tuple[float, float]:
    stress = _tensor(components)
    strain = _strain(stress, young, poisson)
    mean, dilatation = np.trace(stress) / 3, np.trace(strain)
    whole = 0.5 * np.sum(stress * strain)
    return 0.5 * mean * dilatation, whole - 0.5 * mean * dilatation


def energy_dilatation() -> float:
    return _energy_parts((220.0, -75.0, 140.0, 0.0, 0.0, 0.0), 70e3, 0.33)[0]


def energy_distortion() -> float:
    return _energy_parts((220.0, -75.0, 140.0, 60.0, -35.0, 90.0), 70e3, 0.33)[1]


def energy_shear() -> float:
    return quad(lambda strain: 27e3 * strain, 0, brentq(lambda strain: 27e3 * strain - 95, 0, 1))[0]


def energy_uniaxial() -> float:
    """Work along the stress-strain line, in psi = in·lbf/in³."""
    return quad(lambda strain: 10.3e6 * strain, 0, brentq(lambda strain: 10.3e6 * strain - 38e3, 0, 1))[0]


def stress_plane_strain() -> list[float]:
    elastic = np.diag([850e-6, -320e-6, 0]) - 17e-6 * 45 * np.eye(3)
    elastic[0, 1] = elastic[1, 0] = 260e-6 / 2
    stress = np.einsum("ijkl,kl->ij", isotropic(193e3, 0.29), elastic)
    return [stress[0, 0], stress[1, 1], stress[2, 2], stress[0, 1]]


def stress_shear() -> float:
    """A shear strain of a material of E = 200 GPa, ν = 0.25 (so G = 80 GPa), from the stiffness tensor."""
    strain = np.zeros((3, 3))
    strain[0, 1] = strain[1, 0] = -1350e-6 / 2
    return np.einsum("ijkl,kl->ij", isotropic(200e3, 0.25), strain)[0, 1]


def strain_3d() -> list[float]:
    strain = _strain(_tensor((90.0, -40.0, 25.0, 33.0, -12.0, 18.0)), 114e3, 0.34) + 8.6e-6 * 120 * np.eye(3)
    normal = [strain[i, i] for i in range(3)]
    return [1e6 * value for value in (*normal, 2 * strain[0, 1], 2 * strain[1, 2], 2 * strain[2, 0])]


def strain_plane_strain() -> list[float]:
    """The stress in z that holds the total strain in z at zero, found by a root finder."""

    def total(stress_z: float) -> np.ndarray:
        return _strain(_tensor((90.0, -40.0, stress_z, 33.0, 0.0, 0.0)), 114e3, 0.34) + 8.6e-6 * 120 * np.eye(3)

    strain = total(brentq(lambda stress_z: total(stress_z)[2, 2], -1e3, 1e3, xtol=1e-13))
    return [1e6 * strain[0, 0], 1e6 * strain[1, 1], 2e6 * strain[0, 1]]


def strain_plane_stress() -> list[float]:
    strain = _strain(_tensor((90.0, -40.0, 0.0, 33.0, 0.0, 0.0)), 114e3, 0.34) + 8.6e-6 * 120 * np.eye(3)
    return [1e6 * strain[0, 0], 1e6 * strain[1, 1], 1e6 * strain[2, 2], 2e6 * strain[0, 1]]


def _free_surface(strain_x: float, strain_y: float, young: float, poisson: float) -> np.ndarray:
    """Stresses with none in z, from the stiffness matrix and a root for the strain in z."""
    matrix = stiffness_matrix(isotropic(young, poisson))[:3, :3]
    strain_z = brentq(lambda z: matrix[2] @ np.array([strain_x, strain_y, z]), -0.1, 0.1, xtol=1e-16)
    return matrix @ np.array([strain_x, strain_y, strain_z])


def rosette_tee() -> list[float]:
    return list(_free_surface(780e-6, -415e-6, 10.5e6, 0.32)[:2] / 1e3)


def strain_shear() -> float:
    """Twice the tensor shear strain under 57 MPa with E = 72.8 GPa, ν = 0.3, whose G is 28 GPa."""
    return 2e6 * _strain(_tensor((0.0, 0.0, 0.0, 57.0, 0.0, 0.0)), 72.8e3, 0.3)[0, 1]


def strain_thermal() -> float:
    """Growth of a bar of unit length, heated from 0 to 85 °F, by the differential dL = α dT (first order in α)."""
    return 1e6 * quad(lambda _: 12.8e-6, 0, 85)[0]


def _gradient(strains: tuple[float, float, float], share: float) -> float:
    """Volume of a unit cube whose edges have that share of the strains: a determinant."""
    return float(np.linalg.det(np.eye(3) + share * np.diag(strains)))


def strain_volumetric() -> float:
    """Rate at which the volume grows with the strains: a central difference, exact for a cubic after Richardson."""
    strains = (900e-6, -260e-6, 145e-6)

    def rate(step: float) -> float:
        return (_gradient(strains, step) - _gradient(strains, -step)) / (2 * step)

    return 1e6 * (4 * rate(1.0) - rate(2.0)) / 3


def strain_volumetric_finite() -> float:
    return _gradient((0.25, -0.1, 0.04), 1.0) - 1


def stress_true() -> float:
    """Load over the area that keeps the volume: A from dA/dL = −A/L, integrated numerically."""
    area = solve_ivp(lambda length, area: -area / length, (1.0, 1.08), [1.0], rtol=1e-12, atol=1e-14).y[0, -1]
    return 365.0 / area


def stress_engineering() -> float:
    """Load over the first area: length from dL/dε = L, integrated numerically; area from the volume."""
    length = solve_ivp(lambda _, length: length, (0.0, 0.11), [1.0], rtol=1e-12, atol=1e-14).y[0, -1]
    return 62.0 / length


def _principal() -> np.ndarray:
    return np.linalg.eigvalsh(np.array([[84.0, -37.0], [-37.0, -22.0]]))


def mohr_centre() -> float:
    return float(np.mean(_principal()))


def mohr_radius() -> float:
    return float(np.ptp(_principal()) / 2)


def thermal_plate_gradient() -> float:
    """Plate held flat and free to grow: balance of the stresses through the thickness by Gauss's quadrature."""
    heights, weights = np.polynomial.legendre.leggauss(6)
    free = 17.3e-6 * (72 * heights / 2)

    def surface(total: float, free_strain: float) -> float:
        return float(_free_surface(total - free_strain, total - free_strain, 193e3, 0.29)[0])

    def resultant(total: float) -> float:
        return sum(weight * surface(total, strain) for weight, strain in zip(weights, free, strict=True))

    total = brentq(resultant, -1e-2, 1e-2, xtol=1e-16)
    return surface(total, 17.3e-6 * 36)


def modulus_biaxial() -> float:
    return float(_free_surface(1e-3, 1e-3, 114.0, 0.34)[0] / 1e-3)


def modulus_plane_strain() -> float:
    """Stress over strain of a strip with no strain in y and no stress in z."""
    return float(_free_surface(1e-3, 0.0, 72.0, 0.33)[0] / 1e-3)


def _plane_strain_compliance(young: float, poisson: float) -> np.ndarray:
    return np.linalg.inv(stiffness_matrix(isotropic(young, poisson))[:2, :2])


def modulus_plane_strain_poisson() -> float:
    """Contraction in y under stress in x, with no strain in z."""
    compliance = _plane_strain_compliance(72.0, 0.33)
    return float(-compliance[1, 0] / compliance[0, 0])


def _plane_stress_pair() -> tuple[float, float]:
    """The constants whose plane strain is the plane stress of E = 72 GPa, ν = 0.33: two roots, one in the other."""

    def young(poisson: float) -> float:
        return brentq(lambda value: 1 / _plane_strain_compliance(value, poisson)[0, 0] - 72.0, 1.0, 200.0, xtol=1e-13)

    def contraction(poisson: float) -> float:
        compliance = _plane_strain_compliance(young(poisson), poisson)
        return float(-compliance[1, 0] / compliance[0, 0])

    poisson = brentq(lambda value: contraction(value) - 0.33, 0.01, 0.45, xtol=1e-15)
    return young(poisson), poisson


def modulus_plane_stress() -> float:
    return _plane_stress_pair()[0]


def modulus_plane_stress_poisson() -> float:
    return _plane_stress_pair()[1]
