"""Contact of cylinders and buckling of columns and plates, by spectral solutions of their equations."""

import numpy as np
from numpy.polynomial.legendre import Legendre, leggauss
from scipy.linalg import eigh


def hertz_width() -> float:
    """Half width of the strip at which the pressure of Gauss-Chebyshev nodes carries the force, in mm.

    Slope of a half plane: ∫ p(s)/(x − s) ds = π E*/2 · x/R at the points between the nodes; the load then goes with
    the square of the width.
    """
    count = 9
    index = np.arange(1, count + 1)
    nodes, weights = np.cos(index * np.pi / (count + 1)), np.pi / (count + 1) * np.sin(index * np.pi / (count + 1)) ** 2
    places = np.cos((2 * np.arange(1, count + 2) - 1) * np.pi / (2 * (count + 1)))
    soft = (1 - 0.29**2) / 205e3 + (1 - 0.33**2) / 72e3
    radius = 1 / (1 / 25 - 1 / 60)
    slopes = places / radius * np.pi / (2 * soft)
    pressure = np.linalg.lstsq(weights / (places[:, None] - nodes), slopes, rcond=None)[0]
    load_of_unit_width = float(weights @ pressure)
    return float(np.sqrt(1800.0 / 18.0 / load_of_unit_width))


def _bubbles(count: int, held: int, start: int = 0):
    """Values, slopes and curvatures of (1 − x²)ʰ Pn at Gauss points on −1 … 1, and the weights."""
    points, weights = leggauss(count + 12)
    edge = Legendre.fromroots([-1.0, 1.0] * held)
    shapes = [edge * Legendre.basis(n) for n in range(start, start + count)]
    return (*(np.array([shape.deriv(k)(points) if k else shape(points) for shape in shapes]) for k in range(3)),
            points, weights)  # fmt: skip


def euler_stress() -> float:
    """Smallest load of a pinned column of slenderness 118: ∫E I w″² = P ∫w′² on ten polynomials; MPa."""
    _, slopes, bends, _, weights = _bubbles(10, 1)
    # Length 2 in the polynomials stands for 118 radii of gyration: stress = load/A, I = A (2/118)².
    bending, work = (bends * weights) @ bends.T, (slopes * weights) @ slopes.T
    return float(eigh(bending, work, eigvals_only=True)[0] * 72e3 * (2 / 118) ** 2)


def plate() -> float:
    """Least stress of a simply supported square plate in compression, Ritz with polynomials; MPa."""
    values, slopes, bends, _, weights = _bubbles(8, 1)
    mass, slope, bend, mixed = (
        (left * weights) @ right.T
        for left, right in ((values, values), (slopes, slopes), (bends, bends), (values, bends))
    )
    poisson = 0.33
    energy = (
        np.kron(bend, mass)
        + np.kron(mass, bend)
        + poisson * (np.kron(mixed, mixed.T) + np.kron(mixed.T, mixed))
        + 2 * (1 - poisson) * np.kron(slope, slope)
    )
    value = eigh(energy, np.kron(slope, mass), eigvals_only=True)[0]
    # Side 2 in the polynomials stands for 120 mm; the load for each length is σ t.
    rigidity = 71e3 * 1.5**3 / (12 * (1 - poisson**2))
    return float(value * rigidity * (2 / 120) ** 2 / 1.5)


def plate_factor() -> float:
    """Least factor on compression, bending and shear together of a clamped plate: finite elements of Bogner and Fox.

    Twelve by twelve elements of 16 degrees of freedom (value, both slopes, twist), loads by Gauss's quadrature.
    """
    cells, length, width, thickness = 12, 300.0, 200.0, 2.5
    compression, bending, shear = 22.0, 35.0, 18.0
    rigidity = 71e3 * thickness**3 / (12 * (1 - 0.33**2))
    points, weights = leggauss(5)
    places, weights = 0.5 * (points + 1), 0.5 * weights

    def cubic(h: float) -> np.ndarray:
        """Hermite's four shapes on an element of that length: values, slopes, curvatures at the Gauss points."""
        s = places
        value = [1 - 3 * s**2 + 2 * s**3, h * (s - 2 * s**2 + s**3), 3 * s**2 - 2 * s**3, h * (s**3 - s**2)]
        slope = [-6 * s + 6 * s**2, h * (1 - 4 * s + 3 * s**2), 6 * s - 6 * s**2, h * (3 * s**2 - 2 * s)]
        bend = [-6 + 12 * s, h * (-4 + 6 * s), 6 - 12 * s, h * (6 * s - 2)]
        return np.array([value, np.array(slope) / h, np.array(bend) / h**2])

    hx, hy = length / cells, width / cells
    in_x, in_y = cubic(hx), cubic(hy)
    area = np.einsum("a,b->ab", weights * hx, weights * hy).ravel()

    def surface(dx: int, dy: int) -> np.ndarray:
        return np.einsum("ia,jb->ijab", in_x[dx], in_y[dy]).reshape(16, -1)

    xx, yy, xy, wx, wy = surface(2, 0), surface(0, 2), surface(1, 1), surface(1, 0), surface(0, 1)
    energy = rigidity * (
        (xx * area) @ xx.T + (yy * area) @ yy.T
        + 0.33 * ((xx * area) @ yy.T + (yy * area) @ xx.T) + 2 * (1 - 0.33) * (xy * area) @ xy.T
    )  # fmt: skip
    size = (cells + 1) ** 2 * 4
    stiffness, work = np.zeros((size, size)), np.zeros((size, size))
    for row in range(cells):
        y = np.tile(hy * (row + places), len(places))
        along = (compression + bending * (1 - 2 * y / width)) * area
        turned = (wx * area) @ wy.T
        load = thickness * ((wx * along) @ wx.T + shear * (turned + turned.T))
        for column in range(cells):
            # Shape i·4+j: i over the value and slope at both x ends, j over those at both y ends.
            degrees = [
                4 * ((column + i // 2) * (cells + 1) + row + j // 2) + 2 * (i % 2) + j % 2
                for i in range(4)
                for j in range(4)
            ]
            stiffness[np.ix_(degrees, degrees)] += energy
            work[np.ix_(degrees, degrees)] += load
    nodes = np.arange((cells + 1) ** 2)
    edge = (nodes // (cells + 1) % cells == 0) | (nodes % (cells + 1) % cells == 0)
    # Clamped: value and both slopes vanish on the edges, and with them the twist.
    free = np.concatenate([4 * node + np.arange(4) for node in nodes[~edge]])
    inverse = eigh(work[np.ix_(free, free)], stiffness[np.ix_(free, free)], eigvals_only=True)
    return float(1 / inverse[-1])
