"""Sections of profiles: integrals over widths and walls, and the membrane of torsion by finite differences."""

import numpy as np
from scipy.integrate import dblquad, quad
from scipy.sparse import coo_matrix
from scipy.sparse.linalg import spsolve


def product() -> float:
    """Angle of 120 mm by 80 mm, 8 mm upright and 10 mm flat: double integrals over its two rectangles; cm⁴."""

    def over(of_x: int, of_y: int, x0: float = 0.0, y0: float = 0.0) -> float:
        """Integral of (x − x0) and (y − y0) to those powers."""
        upright, flat = (
            dblquad(lambda y, x: (x - x0) ** of_x * (y - y0) ** of_y, *ends)[0]
            for ends in ((0, 8, 0, 120), (8, 80, 0, 10))
        )
        return upright + flat

    area = over(0, 0)
    return over(1, 1, over(1, 0) / area, over(0, 1) / area) / 1e4


def radius() -> float:
    """I of 160 mm by 80 mm with true round fillets of 9 mm: integrals of its width over the depth."""

    def width(y: float) -> float:
        out = min(y, 160 - y)
        if out < 7.4:
            return 80.0
        into = out - 7.4
        return 5.0 + (2 * (9 - np.sqrt(81 - (9 - into) ** 2)) if into < 9 else 0.0)

    kinks = [7.4, 16.4, 143.6, 152.6]
    area = quad(width, 0, 160, points=kinks)[0]
    inertia = quad(lambda y: width(y) * (y - 80) ** 2, 0, 160, points=kinks)[0]
    return float(np.sqrt(inertia / area))


Wall = tuple[tuple[float, float], tuple[float, float], float]
"""A wall's ends and thickness, walls in the order of the path from one free end to the other."""

_CHANNEL: list[Wall] = [
    ((42.5, 0.0), (0.0, 0.0), 3.0),
    ((0.0, 0.0), (0.0, 97.0), 5.0),
    ((0.0, 97.0), (42.5, 97.0), 3.0),
]


def _points(walls: list[Wall], count: int = 12) -> tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray]:
    """Gauss points x, y of all walls, their areas, and the directions of the walls there."""
    places, weights = np.polynomial.legendre.leggauss(count)
    found: list[list[float]] = []
    for (x1, y1), (x2, y2), thickness in walls:
        length = np.hypot(x2 - x1, y2 - y1)
        for place, weight in zip(places, weights, strict=True):
            share = (place + 1) / 2
            direction = ((x2 - x1) / length, (y2 - y1) / length)
            found.append([x1 + share * (x2 - x1), y1 + share * (y2 - y1), weight * length / 2 * thickness, *direction])
    table = np.array(found)
    return table[:, 0], table[:, 1], table[:, 2], table[:, 3:]


def _flow_to(walls: list[Wall], wall: int, share: float, middle: float) -> float:
    """First moment about y = middle of all that stands between the free end and a place."""
    whole = 0.0
    for number, ((_, y1), (_, y2), _) in enumerate(walls[: wall + 1]):
        (xa, _), (xb, _), thickness = walls[number]
        length = np.hypot(xb - xa, y2 - y1)
        until = share if number == wall else 1.0
        whole += quad(lambda s, a=y1, b=y2: a + s * (b - a) - middle, 0, until)[0] * length * thickness
    return whole


def shear_centre() -> list[float]:
    """Channel of 100 mm by 45 mm, web 5 mm, flanges 3 mm: moment of the shear flow of a vertical force about the web.

    x is from the outer face of the web, y from the foot.
    """
    _, y, area, _ = _points(_CHANNEL)
    middle = float(np.sum(y * area) / np.sum(area))
    inertia = float(np.sum((y - middle) ** 2 * area))
    moment = 0.0
    for wall, ((x1, y1), (x2, y2), _) in enumerate(_CHANNEL):
        flow = quad(lambda s, wall=wall: _flow_to(_CHANNEL, wall, s, middle), 0, 1)[0]
        # Along the path the flow of a unit force up is −Q/I; its lever about the web's foot is constant on a wall.
        moment += -flow / inertia * (x1 * (y2 - y1) - y1 * (x2 - x1))
    return [2.5 + moment, 1.5 + middle]


def warping_constant() -> float:
    """Channel of the same sizes: sectorial coordinate along the walls, made orthogonal to 1, x and y; cm⁶."""
    x, y, area, direction = _points(_CHANNEL)
    start, values = 0.0, []
    for wall, ((x1, y1), (x2, y2), _) in enumerate(_CHANNEL):
        lever = x1 * (y2 - y1) - y1 * (x2 - x1)
        chosen = slice(12 * wall, 12 * wall + 12)
        reached = (x[chosen] - x1) * direction[chosen, 0] + (y[chosen] - y1) * direction[chosen, 1]
        values.append(start + lever * reached / np.hypot(x2 - x1, y2 - y1))
        start += lever
    sectorial = np.concatenate(values)
    # Moving the pole or the start only adds 1, x and y: the least rest is that about the shear centre.
    root = np.sqrt(area)
    shapes = np.stack([np.ones_like(x), x, y], axis=1) * root[:, None]
    rest = sectorial * root - shapes @ np.linalg.lstsq(shapes, sectorial * root, rcond=None)[0]
    return float(np.sum(rest**2)) / 1e6


def warping_constant_i() -> float:
    """I with unlike flanges (60 mm by 6 mm above, 90 mm by 8 mm below, 120 mm deep): flanges that turn about one point.

    Each flange bends in its plane by the twist times its distance; the pole of least energy is the shear centre.
    """
    height = 120 - 7.0
    upper, lower = (quad(lambda x, t=thick: t * x * x, -wide / 2, wide / 2)[0] for wide, thick in ((60, 6), (90, 8)))
    matrix = np.array([[np.sqrt(upper)], [np.sqrt(lower)]])
    rest = np.linalg.lstsq(matrix, np.array([np.sqrt(upper) * height, 0.0]), rcond=None)[1]
    return float(rest[0]) / 1e6


def shear_area() -> float:
    """I of 160 mm by 80 mm without fillets: V²/(2 G As) from the energy of the shear stress VQ/(I b), by quadrature."""

    def width(y: float) -> float:
        return 80.0 if abs(y) > 72.6 else 5.0

    kinks = [-72.6, 72.6]
    inertia = quad(lambda y: width(y) * y * y, -80, 80, points=kinks)[0]

    def energy(y: float) -> float:
        outside = [kink for kink in kinks if y < kink < 80] or None
        first = quad(lambda z: width(z) * z, y, 80, points=outside)[0]
        return (first / inertia) ** 2 / width(y)

    return 1 / quad(energy, -80, 80, points=kinks)[0]


def _membrane(cells: int) -> float:
    """Torsion constant of an angle of 30 by 24 by 2 (thicknesses all 2) by finite differences of ∇²φ = −2.

    J is twice the volume under the membrane; the grid has so many cells through the thickness.
    """
    h = 2.0 / cells
    across, up = 24 * cells // 2 + 1, 30 * cells // 2 + 1
    i, j = np.meshgrid(np.arange(across), np.arange(up), indexing="ij")
    inside = (i > 0) & (j > 0) & (((i < cells) & (j < up - 1)) | ((j < cells) & (i < across - 1)))
    number = np.full(inside.shape, -1)
    number[inside] = np.arange(inside.sum())
    rows, columns, values = [number[inside]], [number[inside]], [np.full(inside.sum(), 4.0)]
    for shift in ((1, 0), (-1, 0), (0, 1), (0, -1)):
        other = np.roll(number, (-shift[0], -shift[1]), (0, 1))[inside]
        known = other >= 0
        rows.append(number[inside][known])
        columns.append(other[known])
        values.append(np.full(known.sum(), -1.0))
    matrix = coo_matrix((np.concatenate(values), (np.concatenate(rows), np.concatenate(columns)))).tocsc()
    return float(2 * h * h * np.sum(spsolve(matrix, np.full(inside.sum(), 2 * h * h))))


def torsion_constant() -> float:
    """The membrane on 8 and on 16 cells through the thickness, extrapolated by the square of the step."""
    coarse, fine = _membrane(8), _membrane(16)
    return (4 * fine - coarse) / 3


def torsion_constant_box() -> float:
    """Box of 103 mm by 63 mm with walls of 4 and 3 mm: shear flow whose work equals that of the torque, by quadrature.

    A unit of shear flow gives the torque ∮ r ds (levers to the middle line) and the twist ∮ ds/t over that.
    """
    corners = [(0.0, 0.0), (59.0, 0.0), (59.0, 100.0), (0.0, 100.0)]
    thickness = [3.0, 4.0, 3.0, 4.0]
    torque = twist = 0.0
    for number, (x1, y1) in enumerate(corners):
        x2, y2 = corners[(number + 1) % 4]
        torque += quad(lambda _, p=(x1, y1, x2, y2): p[0] * (p[3] - p[1]) - p[1] * (p[2] - p[0]), 0, 1)[0]
        twist += quad(lambda _, t=thickness[number]: 1 / t, 0, abs(x2 - x1) + abs(y2 - y1))[0]
    return torque / (twist / torque) / 1e4
