"""Torsion: closed forms, the rectangle's series against a finite-difference membrane, walls and cells."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from doubler.catalogue.formula_text import evaluate_text
from doubler.catalogue.plan import CallError
from doubler.mechanics import torsion, torsion_cells, torsion_rectangle, torsion_walls

SIZES = st.floats(0.5, 200.0)
TORQUES = st.floats(-1e6, 1e6)


def membrane(width: float, thickness: float, points: int) -> tuple[float, float]:
    """Return J and the largest slope of Prandtl's stress function on a square grid, by sine transforms."""
    m, n = points, round(points * thickness / width)
    step = width / m
    i, j = np.arange(1, m), np.arange(1, n)
    left = np.sin(np.pi * np.outer(i, i) / m)
    right = np.sin(np.pi * np.outer(j, j) / n)
    stiff = (2 - 2 * np.cos(np.pi * i / m))[:, None] + (2 - 2 * np.cos(np.pi * j / n))[None, :]
    load = np.full((m - 1, n - 1), 2.0 * step**2)
    heap = left @ ((left @ load @ right) * (4.0 / (m * n)) / stiff) @ right
    middle = heap[m // 2 - 1]
    slope = (4.0 * middle[0] - middle[1]) / (2.0 * step)
    return 2.0 * float(heap.sum()) * step**2, float(slope)


@pytest.mark.parametrize("ratio", [1.0, 1.5, 2.5])
def test_rectangle_agrees_with_a_membrane_of_finite_differences(ratio) -> None:
    constant, slope = membrane(ratio, 1.0, 300)
    assert torsion_rectangle.torsion_constant(np.array(ratio), np.array(1.0)) == pytest.approx(constant, rel=2e-4)
    assert torsion_rectangle.torsion_rectangle(constant, ratio, 1.0) == pytest.approx(slope, rel=2e-4)


@given(SIZES, SIZES, TORQUES)
def test_rectangle_takes_its_sides_in_either_order(width, thickness, torque) -> None:
    for function in (torsion_rectangle.torsion_rectangle, torsion_rectangle.torsion_rectangle_side):
        assert function(torque, width, thickness) == function(torque, thickness, width)
    long_side = abs(torsion_rectangle.torsion_rectangle(torque, width, thickness))
    assert abs(torsion_rectangle.torsion_rectangle_side(torque, width, thickness)) <= long_side * (1.0 + 1e-12)


def test_square_is_stressed_alike_on_its_sides_and_a_strip_as_a_strip() -> None:
    square = torsion_rectangle.torsion_rectangle_side(1.0, 2.0, 2.0)
    assert torsion_rectangle.torsion_rectangle(1.0, 2.0, 2.0) == pytest.approx(square, rel=1e-14)
    assert torsion_rectangle.torsion_rectangle(1.0, 1e6, 1.0) == pytest.approx(3e-6, rel=1e-5)
    assert torsion_rectangle.twist_rate_rectangle(1.0, 1e6, 1.0, 1.0) == pytest.approx(3e-6, rel=1e-5)


@given(TORQUES, SIZES, st.floats(0.0, 0.99))
def test_round_bar_is_the_torsion_formula_at_its_surface(torque, outer, share) -> None:
    inner = share * outer
    polar = np.pi / 32.0 * (outer**4 - inner**4)
    expected = torsion.torsion(torque, outer / 2.0, polar)
    assert torsion.torsion_round(torque, outer, inner) == pytest.approx(expected, rel=1e-9)
    assert torsion.torsion_round(-torque, outer, inner) == -torsion.torsion_round(torque, outer, inner)


def test_round_ellipse_is_a_circle_and_a_thin_tube_is_bredts() -> None:
    assert torsion.torsion_ellipse(100.0, 3.0, 3.0) == pytest.approx(torsion.torsion_round(100.0, 3.0))
    assert torsion.torsion_ellipse(100.0, 3.0, 2.0) == torsion.torsion_ellipse(100.0, 2.0, 3.0)
    area, wall = np.pi / 4.0 * 100.0**2, 0.01
    assert torsion.torsion_closed(1e6, area, wall) == pytest.approx(torsion.torsion_round(1e6, 100.01, 99.99), rel=2e-4)
    assert torsion.torsion_shear_flow(1e6, area) == pytest.approx(torsion.torsion_closed(1e6, area, wall) * wall)


def test_ellipse_and_triangle_satisfy_their_stress_functions() -> None:
    # φ = k·boundary polynomial with ∇²φ = −2 (Gθ = 1): the torque is 2∫φ, the stress −∂φ/∂n.
    a, b = 3.0, 2.0
    torque, stress = np.pi * a**3 * b**3 / (a**2 + b**2), 2.0 * a**2 * b / (a**2 + b**2)
    assert torsion.torsion_ellipse(torque, 2 * a, 2 * b) == pytest.approx(stress, rel=1e-12)
    side = 2.0
    height = side * np.sqrt(3.0) / 2.0
    assert torsion.torsion_triangle(height**4 / (15.0 * np.sqrt(3.0)), side) == pytest.approx(height / 2.0, rel=1e-12)


def two_cells(**changes):
    given = {
        "enclosed_areas": [2000.0, 3000.0],
        "wall_lengths": [140.0, 160.0, 50.0],
        "wall_thicknesses": [2.0, 1.5, 1.0],
        "wall_cells": [1.0, 2.0, 1.0],
        "wall_neighbours": [0.0, 0.0, 2.0],
    }
    return {name: np.array(value) for name, value in (given | changes).items()}


def test_cells_twist_alike_and_carry_the_torque() -> None:
    given = two_cells()
    stresses = np.array([torsion_cells.torsion_cells(1e6, **given, wall=float(wall)) for wall in (1, 2, 3)])
    flows = stresses * given["wall_thicknesses"]
    assert flows[2] == pytest.approx(flows[0] - flows[1])
    assert 2.0 * (2000.0 * flows[0] + 3000.0 * flows[1]) == pytest.approx(1e6)
    lines = flows * given["wall_lengths"] / given["wall_thicknesses"]
    rates = (lines[0] + lines[2]) / (2.0 * 2000.0), (lines[1] - lines[2]) / (2.0 * 3000.0)
    assert rates[0] == pytest.approx(rates[1])
    assert torsion_cells.twist_rate_cells(1e6, **given, shear_modulus=27e3) == pytest.approx(rates[0] / 27e3)
    assert torsion_cells.torsion_cells_max(-1e6, **given) == pytest.approx(np.abs(stresses).max())


def test_one_cell_is_bredts() -> None:
    one = {
        "enclosed_areas": np.array([8000.0]),
        "wall_lengths": np.array([100.0, 80.0, 100.0, 80.0]),
        "wall_thicknesses": np.array([2.0, 1.0, 2.0, 3.0]),
        "wall_cells": np.ones(4),
        "wall_neighbours": np.zeros(4),
    }
    assert torsion_cells.torsion_cells_max(1e6, **one) == pytest.approx(torsion.torsion_closed(1e6, 8000.0, 1.0))
    rate = torsion_walls.twist_rate_closed(1e6, 8000.0, one["wall_lengths"], one["wall_thicknesses"], 27e3)
    assert torsion_cells.twist_rate_cells(1e6, **one, shear_modulus=27e3) == pytest.approx(rate)


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        ({"wall_neighbours": [0.0, 0.0, 3.0]}, "another's"),
        ({"wall_cells": [1.0, 1.5, 1.0]}, "cell's number"),
        ({"wall_cells": [1.0, 1.0, 1.0], "wall_neighbours": [0.0, 0.0, 0.0]}, "no wall"),
        ({"wall_neighbours": [2.0, 1.0, 2.0]}, "outside behind it"),
        ({"wall_lengths": [100.0, 160.0, 50.0]}, "too short to go round"),
        ({"wall_lengths": [140.0, 160.0]}, "every wall needs one entry"),
        ({"wall_thicknesses": [2.0, 0.0, 1.0]}, "must be positive"),
    ],
)
def test_cells_that_do_not_hold_together_are_refused(changes, words) -> None:
    with pytest.raises(CallError, match=words):
        torsion_cells.torsion_cells_max(1e6, **two_cells(**changes))


def test_a_group_of_cells_away_from_the_outside_is_refused() -> None:
    given = two_cells(
        enclosed_areas=[9.0, 9.0, 9.0],
        wall_lengths=[10.0, 10.0, 3.0],
        wall_cells=[1.0, 2.0, 2.0],
        wall_neighbours=[0.0, 3.0, 3.0],
    )
    with pytest.raises(CallError, match="outside behind it"):
        torsion_cells.torsion_cells_max(1e6, **given)


def test_wall_asked_for_must_exist() -> None:
    with pytest.raises(CallError, match="from 1 to 3"):
        torsion_cells.torsion_cells(1e6, **two_cells(), wall=4.0)


def test_slit_open_walls_add_up_and_thick_ones_are_refused() -> None:
    lengths, walls = np.array([25.0, 50.0, 25.0]), np.array([1.5, 2.5, 1.5])
    constant = (2 * 25.0 * 1.5**3 + 50.0 * 2.5**3) / 3.0
    assert torsion_walls.torsion_open(1e4, lengths, walls) == pytest.approx(1e4 * 2.5 / constant)
    assert torsion_walls.twist_rate_open(1e4, lengths, walls, 7e4) == pytest.approx(1e4 / (7e4 * constant))
    with pytest.raises(CallError, match="not thin"):
        torsion_walls.torsion_open(1e4, lengths, np.array([1.5, 5.5, 1.5]))
    with pytest.raises(CallError, match="wall_lengths has 3, wall_thicknesses has 2"):
        torsion_walls.torsion_open(1e4, lengths, np.array([1.5, 1.5]))


@pytest.mark.parametrize(
    "formula",
    [
        '=STRESS_TORSION_ROUND("1 kN*m", "50 mm", "50 mm", "MPa")',
        '=STRESS_TORSION_ROUND("1 kN*m", "0 mm", , "MPa")',
        '=STRESS_TORSION("1 kN*m", "-1 mm", "5 cm^4", "MPa")',
        '=STRESS_TORSION("1 kN*m", "1 mm", "0 cm^4", "MPa")',
        '=STRESS_TORSION_CLOSED("1 kN*m", "1 m^2", "0 mm", "MPa")',
        '=STRESS_TORSION_CLOSED("1 kN*m", "314 mm^2", "3.34 mm", "MPa")',
        '=STIFFNESS_TWIST_RATE_CLOSED("1 kN*m", "900 mm^2", {"mm";30;30;30}, {"mm";1;1;1}, "27 GPa")',
        '=STRESS_TORSION_ELLIPSE("1 kN*m", "1 mm", "0 mm", "MPa")',
        '=STRESS_TORSION_TRIANGLE("1 kN*m", "-1 mm", "MPa")',
        '=STRESS_TORSION_RECTANGLE("1 kN*m", "10 mm", "0 mm", "MPa")',
    ],
)
def test_sizes_that_cannot_be_are_refused(formula) -> None:
    assert evaluate_text(formula).reasons


def test_arrays_give_what_single_values_give() -> None:
    torque, width, thick = np.random.default_rng(3).uniform(1.0, 50.0, size=(3, 12))
    for function in (torsion_rectangle.torsion_rectangle, torsion_rectangle.torsion_rectangle_side):
        singles = [function(float(t), float(a), float(b)) for t, a, b in zip(torque, width, thick, strict=True)]
        np.testing.assert_allclose(function(torque, width, thick), singles, rtol=1e-13)
    lanes = np.array([[2000.0, 3000.0], [1000.0, 2500.0]])
    given = two_cells()
    many = torsion_cells.torsion_cells_max(np.array([1e6, 2e6]), **(given | {"enclosed_areas": lanes}))
    assert many[0] == pytest.approx(torsion_cells.torsion_cells_max(1e6, **given))
    second = torsion_cells.torsion_cells_max(2e6, **(given | {"enclosed_areas": lanes[1]}))
    assert many[1] == pytest.approx(second)


def test_cells_one_inside_the_other_reach_the_outside_through_each_other() -> None:
    nested = {
        "enclosed_areas": np.array([500.0, 300.0, 100.0]),
        "wall_lengths": np.array([120.0, 80.0, 40.0]),
        "wall_thicknesses": np.array([2.0, 2.0, 2.0]),
        "wall_cells": np.array([1.0, 2.0, 3.0]),
        "wall_neighbours": np.array([0.0, 1.0, 2.0]),
    }
    stresses = [torsion_cells.torsion_cells(1e6, **nested, wall=float(wall)) for wall in (1, 2, 3)]
    flows = np.cumsum(np.array(stresses) * 2.0)
    assert 2.0 * np.sum(flows * nested["enclosed_areas"]) == pytest.approx(1e6)
