"""Plane stress at a point, and the criteria of ductile yielding, against matrices and against each other."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from doubler.catalogue.formula_text import evaluate_text
from doubler.catalogue.plan import CallError
from doubler.mechanics import criteria, plane_stress

STRESSES = st.floats(-1e3, 1e3).map(lambda value: round(value, 6))
ANGLES = st.floats(-6.3, 6.3)


def tensor(sx: float, sy: float, txy: float) -> np.ndarray:
    return np.array([[sx, txy], [txy, sy]])


@given(STRESSES, STRESSES, STRESSES)
def test_principal_stresses_are_the_eigenvalues(sx, sy, txy) -> None:
    smallest, largest = np.linalg.eigvalsh(tensor(sx, sy, txy))
    assert plane_stress.principal_max(sx, sy, txy) == pytest.approx(largest, abs=1e-9)
    assert plane_stress.principal_min(sx, sy, txy) == pytest.approx(smallest, abs=1e-9)


@given(STRESSES, STRESSES, STRESSES, ANGLES)
def test_rotation_is_that_of_the_matrix_and_keeps_the_invariants(sx, sy, txy, angle) -> None:
    turn = np.array([[np.cos(angle), np.sin(angle)], [-np.sin(angle), np.cos(angle)]])
    turned = turn @ tensor(sx, sy, txy) @ turn.T
    normal = plane_stress.rotated_normal(sx, sy, txy, angle)
    across = plane_stress.rotated_normal(sx, sy, txy, angle + np.pi / 2.0)
    shear = plane_stress.rotated_shear(sx, sy, txy, angle)
    assert [normal, across, shear] == pytest.approx([turned[0, 0], turned[1, 1], turned[0, 1]], abs=1e-8)
    for function in (criteria.von_mises, criteria.tresca, plane_stress.principal_max, plane_stress.shear_max_plane):
        assert function(normal, across, shear) == pytest.approx(function(sx, sy, txy), abs=1e-6)


@given(STRESSES, STRESSES, STRESSES)
def test_directions_give_the_stresses_they_name(sx, sy, txy) -> None:
    if np.hypot(sx - sy, txy) < 1e-3:
        return
    angle = plane_stress.principal_angle(sx, sy, txy)
    assert -np.pi / 2.0 < angle <= np.pi / 2.0
    largest = plane_stress.principal_max(sx, sy, txy)
    assert plane_stress.rotated_normal(sx, sy, txy, angle) == pytest.approx(largest, abs=1e-8)
    assert plane_stress.rotated_shear(sx, sy, txy, angle) == pytest.approx(0.0, abs=1e-8)
    slant = plane_stress.shear_max_angle(sx, sy, txy)
    assert -np.pi / 2.0 < slant <= np.pi / 2.0
    in_plane = plane_stress.shear_max_in_plane(sx, sy, txy)
    assert plane_stress.rotated_shear(sx, sy, txy, slant) == pytest.approx(in_plane, abs=1e-8)
    assert plane_stress.rotated_normal(sx, sy, txy, slant) == pytest.approx((sx + sy) / 2.0, abs=1e-8)


@given(STRESSES, STRESSES, STRESSES)
def test_tresca_lies_between_von_mises_and_its_fifteen_per_cent(sx, sy, txy) -> None:
    mises, tresca = criteria.von_mises(sx, sy, txy), criteria.tresca(sx, sy, txy)
    assert mises - 1e-9 <= tresca <= 2.0 / np.sqrt(3.0) * mises + 1e-9


@given(STRESSES, STRESSES, STRESSES)
def test_criteria_in_the_plane_are_those_in_three_dimensions(sx, sy, txy) -> None:
    state = (sx, sy, 0.0, txy, 0.0, 0.0)
    assert criteria.von_mises(sx, sy, txy) == pytest.approx(criteria.von_mises_3d(*state), abs=1e-8)
    assert criteria.tresca(sx, sy, txy) == pytest.approx(criteria.tresca_3d(*state), abs=1e-8)


def test_the_zero_stress_across_the_plane_governs_where_both_others_have_one_sign() -> None:
    assert plane_stress.shear_max_in_plane(80.0, 40.0, 0.0) == 20.0
    assert plane_stress.shear_max_plane(80.0, 40.0, 0.0) == 40.0
    assert criteria.tresca(-80.0, -40.0, 0.0) == 80.0


def test_circle_holds_the_principal_stresses() -> None:
    centre, radius = plane_stress.mohr_centre(50.0, -10.0), plane_stress.mohr_radius(50.0, -10.0, 40.0)
    assert (centre + radius, centre - radius) == (70.0, -30.0)


@pytest.mark.parametrize("state", [(0.0, 0.0, 0.0), (30.0, 30.0, 0.0), (-5.0, -5.0, -0.0)])
def test_no_direction_where_all_are_alike(state) -> None:
    for function in (plane_stress.principal_angle, plane_stress.shear_max_angle):
        with pytest.raises(CallError, match="none is principal"):
            function(*state)


@pytest.mark.parametrize(("shear", "degrees"), [(0.0, 90.0), (-0.0, 90.0)])
def test_a_zero_of_either_sign_gives_one_direction(shear, degrees) -> None:
    assert np.degrees(plane_stress.principal_angle(-60.0, 0.0, shear)) == pytest.approx(degrees)


def test_arrays_give_what_single_values_give() -> None:
    states = np.random.default_rng(1).normal(scale=100.0, size=(3, 20))
    for function in (
        plane_stress.principal_max,
        plane_stress.principal_min,
        plane_stress.principal_angle,
        plane_stress.shear_max_plane,
        plane_stress.shear_max_angle,
        criteria.von_mises,
        criteria.tresca,
    ):
        singles = [function(*(float(x) for x in state)) for state in states.T]
        np.testing.assert_allclose(function(*states), singles, rtol=1e-13)


def test_a_bad_lane_does_not_spoil_the_others() -> None:
    result = evaluate_text('=STRESS_PRINCIPAL_ANGLE({"MPa";10;0},{"MPa";0;0},{"MPa";0;0},"deg")')
    assert result.grid[0] == [0.0]
    assert "none is principal" in result.reasons[0]
    assert not isinstance(result.grid[1][0], float) or np.isnan(result.grid[1][0])


@pytest.mark.parametrize(
    ("formula", "words"),
    [
        ('=STRESS_VON_MISES("50 MPa", "10 MPa", "3 kN", "MPa")', "kN is a force"),
        ('=STRESS_VON_MISES(50, "10 MPa", "3 MPa", "MPa")', "sigma_x"),
        ('=STRESS_PRINCIPAL_MAX("50 MPa", "10 MPa", "3 MPa", "mm")', "result"),
    ],
)
def test_bad_units_are_refused_with_a_sentence(formula, words) -> None:
    assert words in "; ".join(evaluate_text(formula).reasons)
