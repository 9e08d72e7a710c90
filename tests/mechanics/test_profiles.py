"""Profiles: outlines against plates added up, closed forms of other shapes, torsion and shear, refusals."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler.catalogue.formula_text import evaluate_text
from doubler.mechanics import outline as plane
from doubler.mechanics import profile_bending, profile_sections, profile_shear_centre, profile_torsion

PLATES = {
    # Each plate: x and y of its middle, width, depth.
    "I": ({"depth": 100.0, "width": 60.0, "web": 5.0, "flange": 8.0, "bottom_width": 40.0, "bottom_flange": 10.0},
          [(0.0, 96.0, 60.0, 8.0), (0.0, 5.0, 40.0, 10.0), (0.0, 51.0, 5.0, 82.0)]),
    "channel": ({"depth": 80.0, "width": 40.0, "web": 4.0, "flange": 6.0},
                [(20.0, 77.0, 40.0, 6.0), (20.0, 3.0, 40.0, 6.0), (2.0, 40.0, 4.0, 68.0)]),
    "tee": ({"depth": 60.0, "width": 90.0, "web": 30.0, "flange": 20.0},
            [(0.0, 50.0, 90.0, 20.0), (0.0, 20.0, 30.0, 40.0)]),
    "angle": ({"depth": 80.0, "width": 50.0, "web": 6.0, "flange": 8.0},
              [(25.0, 4.0, 50.0, 8.0), (3.0, 44.0, 6.0, 72.0)]),
    "zee": ({"depth": 70.0, "width": 30.0, "web": 4.0, "flange": 5.0},
            [(-13.0, 67.5, 30.0, 5.0), (13.0, 2.5, 30.0, 5.0), (0.0, 35.0, 4.0, 60.0)]),
    "box": ({"depth": 100.0, "width": 50.0, "web": 3.0, "flange": 4.0},
            [(0.0, 98.0, 50.0, 4.0), (0.0, 2.0, 50.0, 4.0), (-23.5, 50.0, 3.0, 92.0), (23.5, 50.0, 3.0, 92.0)]),
    "hat": ({"depth": 40.0, "width": 50.0, "web": 3.0, "flange": 4.0, "bottom_width": 20.0, "bottom_flange": 5.0},
            [(0.0, 38.0, 50.0, 4.0), (-23.5, 18.0, 3.0, 36.0), (23.5, 18.0, 3.0, 36.0), (35.0, 2.5, 20.0, 5.0),
             (-35.0, 2.5, 20.0, 5.0)]),
}  # fmt: skip


def of_plates(plates):
    x, y, b, h = np.array(plates).T
    area = b * h
    x_bar, y_bar = np.sum(area * x) / area.sum(), np.sum(area * y) / area.sum()
    about_x = np.sum(b * h**3 / 12.0 + area * (y - y_bar) ** 2)
    about_y = np.sum(h * b**3 / 12.0 + area * (x - x_bar) ** 2)
    return area.sum(), x_bar, y_bar, about_x, about_y, np.sum(area * (x - x_bar) * (y - y_bar))


@pytest.mark.parametrize("shape", PLATES)
def test_properties_are_those_of_the_plates(shape) -> None:
    given, plates = PLATES[shape]
    area, x, y, about_x, about_y, product = of_plates(plates)
    assert profile_sections.area(shape, **given) == pytest.approx(area)
    np.testing.assert_allclose(profile_sections.centroid(shape, **given), [x, y], atol=1e-10)
    assert profile_sections.second_moment(shape, **given) == pytest.approx(about_x)
    assert profile_sections.second_moment(shape, **given, axis="y") == pytest.approx(about_y)
    assert profile_sections.product(shape, **given) == pytest.approx(product, abs=1e-6)
    assert profile_sections.radius_of_gyration(shape, **given) == pytest.approx(np.sqrt(about_x / area))
    largest, smallest = profile_bending.principal(shape, **given)
    values = np.linalg.eigvalsh([[about_x, -product], [-product, about_y]])
    np.testing.assert_allclose([smallest, largest], values, rtol=1e-10)
    angle = profile_bending.principal_angle(shape, **given)
    turned = about_x * np.cos(angle) ** 2 + about_y * np.sin(angle) ** 2 - product * np.sin(2.0 * angle)
    assert turned == pytest.approx(largest)
    high = max(p[1] + p[3] / 2.0 for p in plates)
    assert profile_bending.section_modulus(shape, **given) == pytest.approx(about_x / max(high - y, y))


@pytest.mark.parametrize("shape", PLATES)
def test_plastic_modulus_and_first_moment_against_thin_slices(shape) -> None:
    given, plates = PLATES[shape]
    for axis, turn in (("x", False), ("y", True)):
        lows = np.array([(p[0] - p[2] / 2, p[0] + p[2] / 2, p[3]) if turn else (p[1] - p[3] / 2, p[1] + p[3] / 2, p[2])
                         for p in plates])  # fmt: skip
        edges = np.linspace(lows[:, 0].min(), lows[:, 1].max(), 200001)
        y, step = (edges[1:] + edges[:-1]) / 2.0, edges[1] - edges[0]
        breadth = sum(np.where((y > low) & (y < high), width, 0.0) for low, high, width in lows)
        half = y[np.searchsorted(np.cumsum(breadth), breadth.sum() / 2.0)]
        plastic = np.sum(np.abs(y - half) * breadth) * step
        assert profile_bending.plastic_modulus(shape, **given, axis=axis) == pytest.approx(plastic, rel=1e-4)
        if axis == "x":
            centre = np.sum(y * breadth) / breadth.sum()
            for at in (None, 0.3 * given["depth"], 0.9 * given["depth"]):
                level = centre if at is None else at
                first = np.sum(((y - centre) * breadth)[y > level]) * step
                assert profile_bending.first_moment(shape, **given, at=at) == pytest.approx(first, rel=1e-3)


@pytest.mark.parametrize("shape", ["I", "tee", "box", "channel"])
def test_shear_area_is_the_energy_of_vq_over_ib(shape) -> None:
    given, plates = PLATES[shape]
    spans = np.array([(p[1] - p[3] / 2, p[1] + p[3] / 2, p[2]) for p in plates])
    edges = np.linspace(0.0, given["depth"], 100001)
    y, step = (edges[1:] + edges[:-1]) / 2.0, edges[1] - edges[0]
    breadth = sum(np.where((y > low) & (y < high), width, 0.0) for low, high, width in spans)
    centre = np.sum(y * breadth) / breadth.sum()
    first = np.cumsum((centre - y) * breadth) * step
    second = np.sum((y - centre) ** 2 * breadth) * step
    expected = second**2 / np.sum(first**2 / breadth * step)
    assert profile_torsion.shear_area(shape, **given) == pytest.approx(expected, rel=1e-3)


def test_trapezium_with_like_sides_is_a_rectangle() -> None:
    given = {"depth": 50.0, "width": 30.0, "bottom_width": 30.0}
    assert profile_sections.area("trapezium", **given) == pytest.approx(1500.0)
    assert profile_sections.second_moment("trapezium", **given) == pytest.approx(30.0 * 50.0**3 / 12.0)
    assert profile_bending.plastic_modulus("trapezium", **given) == pytest.approx(30.0 * 50.0**2 / 4.0)
    assert profile_torsion.shear_area("trapezium", **given) == pytest.approx(1250.0)
    assert profile_bending.first_moment("trapezium", **given) == pytest.approx(30.0 * 50.0**2 / 8.0)


def test_square_box_has_no_principal_direction_out_of_rounding() -> None:
    assert profile_bending.principal_angle("box", 33.3, 33.3, 1.7, 1.7) == 0.0
    assert abs(profile_bending.principal_angle("box", 20.0, 50.0, 1.7, 1.7)) == pytest.approx(np.pi / 2.0)


def test_fillets_add_their_corners_exactly() -> None:
    sharp = profile_sections.area("I", 200.0, 100.0, 5.6, 8.5)
    assert profile_sections.area("I", 200.0, 100.0, 5.6, 8.5, fillet=12.0) == pytest.approx(
        sharp + (4.0 - np.pi) * 12.0**2
    )


@given(st.floats(0.1, 3.0), st.floats(-50.0, 50.0), st.floats(-50.0, 50.0), st.integers(3, 12))
@settings(deadline=None)
def test_regular_polygons_are_alike_in_all_directions_wherever_they_lie(turn, x, y, corners) -> None:
    angle = turn + 2.0 * np.pi * np.arange(corners) / corners
    shape = plane.closed(x + 10.0 * np.cos(angle), y + 10.0 * np.sin(angle))
    area = corners / 2.0 * 100.0 * np.sin(2.0 * np.pi / corners)
    second = area * 100.0 / 12.0 * (2.0 + np.cos(2.0 * np.pi / corners))
    assert plane.area(shape) == pytest.approx(area)
    np.testing.assert_allclose(plane.centroid(shape), (x, y), atol=1e-9)
    np.testing.assert_allclose(plane.second_moments(shape), (second, second, 0.0), atol=1e-8)
    assert plane.contains(shape, np.array(x), np.array(y))
    clockwise = plane.closed((x + 10.0 * np.cos(angle))[::-1], (y + 10.0 * np.sin(angle))[::-1])
    assert plane.area(clockwise) == pytest.approx(area)


def test_shear_centre_of_a_channel_balances_the_flow_in_its_flanges() -> None:
    depth, across, wall = 102.0, 51.0, 2.0
    h, b = depth - wall, across - wall / 2.0
    second = wall * h**3 / 12.0 + 2.0 * b * wall * (h / 2.0) ** 2  # about x, of the middle lines
    s = (np.arange(4000) + 0.5) / 4000.0 * b
    flange_force = np.sum(wall * s * h / 2.0 / second) * b / 4000.0  # for a unit shear force
    x, y = profile_shear_centre.shear_centre("channel", depth, across, wall, wall)
    assert x == pytest.approx(wall / 2.0 - flange_force * h, rel=1e-6)
    assert y == depth / 2.0


@pytest.mark.parametrize(
    ("shape", "given", "place"),
    [
        ("I", {"flange": 4.0}, (0.0, 40.0)),
        ("I", {"flange": 4.0, "bottom_width": 20.0}, (0.0, 2.0 + 76.0 * 8.0 / 9.0)),
        ("tee", {"flange": 4.0}, (0.0, 78.0)),
        ("angle", {"flange": 4.0}, (1.5, 2.0)),
        ("zee", {"flange": 4.0}, (0.0, 40.0)),
        ("box", {"flange": 4.0}, (0.0, 40.0)),
    ],
)
def test_shear_centres_by_symmetry_and_by_crossing_walls(shape, given, place) -> None:
    found = profile_shear_centre.shear_centre(shape, 80.0, 40.0, 3.0, **given)
    np.testing.assert_allclose(found, place, atol=1e-12)


def test_torsion_constants_of_open_and_closed_walls() -> None:
    box = profile_torsion.torsion_constant("box", 103.0, 53.0, 3.0, 3.0)
    assert box == pytest.approx(4.0 * (100.0 * 50.0) ** 2 / (300.0 / 3.0))
    tee = profile_torsion.torsion_constant("tee", 103.0, 60.0, 4.0, 6.0)
    assert tee == pytest.approx((60.0 * 6.0**3 + 100.0 * 4.0**3) / 3.0 - 0.105 * (2.0 * 6.0**4 + 4.0**4))


@pytest.mark.parametrize(
    ("formula", "words"),
    [
        ('=SECTION_PROFILE_AREA("I", "200 mm", "100 mm", "5 mm")', "needs flange"),
        ('=SECTION_PROFILE_AREA("tee", "200 mm", "100 mm", "5 mm", "5 mm", "9 mm")', "has no bottom_width"),
        ('=SECTION_PROFILE_AREA("I", "20 mm", "100 mm", "5 mm", "10 mm")', "must fit"),
        ('=SECTION_PROFILE_AREA("rail", "20 mm", "100 mm", "5 mm", "10 mm")', "rail"),
        ('=SECTION_PROFILE_AREA("box", "20 mm", "-100 mm", "5 mm", "2 mm")', "width must be positive"),
        ('=SECTION_PROFILE_FIRST_MOMENT("box","20 mm","30 mm","5 mm","2 mm",,,,"21 mm")', "inside the depth"),
        ('=SECTION_PROFILE_TORSION_CONSTANT("I", "20 mm", "10 mm", "5 mm", "5 mm")', "three times"),
        ('=SECTION_PROFILE_SHEAR_CENTRE("channel","90 mm","40 mm","2 mm","2 mm","30 mm")', "like flanges"),
        ('=SECTION_PROFILE_SHEAR_CENTRE("hat","90 mm","40 mm","2 mm","2 mm","30 mm")', "hat"),
        ('=SECTION_PROFILE_WARPING_CONSTANT("zee","90 mm","40 mm","2 mm","2 mm","30 mm")', "like flanges"),
    ],
)
def test_sections_that_cannot_be_are_refused(formula, words) -> None:
    assert words in "; ".join(evaluate_text(formula).reasons)
