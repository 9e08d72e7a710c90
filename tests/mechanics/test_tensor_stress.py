"""Three-dimensional stress against eigenvalues, rotations and the plane through a point."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler.catalogue.plan import CallError
from doubler.mechanics import criteria, stress_on_plane, tensor_stress

STRESSES = st.floats(-1e3, 1e3).map(lambda value: round(value, 6))
STATES = st.tuples(*[STRESSES] * 6)
EULER = st.tuples(*[st.floats(-3.2, 3.2)] * 3)


def matrix(state) -> np.ndarray:
    sx, sy, sz, txy, tyz, tzx = state
    return np.array([[sx, txy, tzx], [txy, sy, tyz], [tzx, tyz, sz]])


def components(stress: np.ndarray) -> tuple[float, ...]:
    return tuple(float(stress[i, j]) for i, j in ((0, 0), (1, 1), (2, 2), (0, 1), (1, 2), (2, 0)))


def rotation(angles) -> np.ndarray:
    a, b, c = angles
    about_z = np.array([[np.cos(a), -np.sin(a), 0.0], [np.sin(a), np.cos(a), 0.0], [0.0, 0.0, 1.0]])
    about_x = np.array([[1.0, 0.0, 0.0], [0.0, np.cos(b), -np.sin(b)], [0.0, np.sin(b), np.cos(b)]])
    again = np.array([[np.cos(c), -np.sin(c), 0.0], [np.sin(c), np.cos(c), 0.0], [0.0, 0.0, 1.0]])
    return about_z @ about_x @ again


@given(STATES)
def test_principal_stresses_are_the_eigenvalues_in_falling_order(state) -> None:
    expected = np.linalg.eigvalsh(matrix(state))[::-1]
    np.testing.assert_allclose(tensor_stress.principal_3d(*state), expected, atol=1e-9)


@given(STATES)
@settings(deadline=None)
def test_directions_turn_the_tensor_into_its_principal_form(state) -> None:
    cosines = tensor_stress.principal_directions(*state)
    np.testing.assert_allclose(cosines @ cosines.T, np.eye(3), atol=1e-9)
    assert np.linalg.det(cosines) == pytest.approx(1.0)
    turned = cosines @ matrix(state) @ cosines.T
    np.testing.assert_allclose(turned, np.diag(tensor_stress.principal_3d(*state)), atol=1e-7)


@given(STATES, EULER)
def test_rotation_keeps_the_invariants_and_the_criteria(state, angles) -> None:
    turn = rotation(angles)
    turned = components(turn @ matrix(state) @ turn.T)
    size = max(1.0, np.abs(state).max())
    pairs = [
        (tensor_stress.invariant_1(*turned[:3]), tensor_stress.invariant_1(*state[:3]), 1),
        (tensor_stress.invariant_2(*turned), tensor_stress.invariant_2(*state), 2),
        (tensor_stress.invariant_3(*turned), tensor_stress.invariant_3(*state), 3),
        (tensor_stress.hydrostatic(*turned[:3]), tensor_stress.hydrostatic(*state[:3]), 1),
        (tensor_stress.shear_max_3d(*turned), tensor_stress.shear_max_3d(*state), 1),
        (tensor_stress.octahedral_shear(*turned) ** 2, tensor_stress.octahedral_shear(*state) ** 2, 2),
        (criteria.von_mises_3d(*turned) ** 2, criteria.von_mises_3d(*state) ** 2, 2),
        (criteria.tresca_3d(*turned), criteria.tresca_3d(*state), 1),
    ]
    for found, expected, power in pairs:
        assert abs(found - expected) < 1e-11 * size**power


@given(STATES)
def test_invariants_are_those_of_the_principal_stresses(state) -> None:
    s1, s2, s3 = np.linalg.eigvalsh(matrix(state))
    size = max(1.0, np.abs(state).max())
    assert tensor_stress.invariant_2(*state) == pytest.approx(s1 * s2 + s2 * s3 + s3 * s1, abs=1e-11 * size**2)
    assert tensor_stress.invariant_3(*state) == pytest.approx(np.linalg.det(matrix(state)), abs=1e-11 * size**3)
    mises = np.sqrt(0.5 * ((s1 - s2) ** 2 + (s2 - s3) ** 2 + (s3 - s1) ** 2))
    assert criteria.von_mises_3d(*state) == pytest.approx(mises, abs=1e-9)
    assert tensor_stress.octahedral_shear(*state) == pytest.approx(np.sqrt(2.0) / 3.0 * mises, abs=1e-9)


@given(STATES, st.tuples(*[st.floats(-5.0, 5.0)] * 3).filter(lambda n: np.linalg.norm(n) > 1e-3))
def test_traction_and_its_parts(state, normal) -> None:
    unit = np.array(normal) / np.linalg.norm(normal)
    vector = matrix(state) @ unit
    np.testing.assert_allclose(stress_on_plane.traction(*state, *normal), vector, atol=1e-8)
    along = float(unit @ vector)
    assert stress_on_plane.on_plane_normal(*state, *normal) == pytest.approx(along, abs=1e-8)
    shear = float(np.linalg.norm(vector - along * unit))
    assert stress_on_plane.on_plane_shear(*state, *normal) == pytest.approx(shear, abs=1e-8)


def test_octahedral_plane_carries_the_octahedral_shear() -> None:
    state = (110.0, 50.0, 0.0, 0.0, 0.0, 0.0)
    assert stress_on_plane.on_plane_shear(*state, 1.0, 1.0, 1.0) == pytest.approx(
        tensor_stress.octahedral_shear(*state)
    )


def test_hydrostatic_state_has_no_equivalent_stress() -> None:
    state = (50.0, 50.0, 50.0, 0.0, 0.0, 0.0)
    assert criteria.von_mises_3d(*state) == 0.0
    assert criteria.tresca_3d(*state) == pytest.approx(0.0, abs=1e-12)
    np.testing.assert_allclose(tensor_stress.principal_3d(*state), 50.0, rtol=1e-15)


def test_a_plane_without_a_normal_is_refused() -> None:
    for function in (stress_on_plane.traction, stress_on_plane.on_plane_normal, stress_on_plane.on_plane_shear):
        with pytest.raises(CallError, match="all zero"):
            function(1.0, 2.0, 3.0, 4.0, 5.0, 6.0, 0.0, 0.0, 0.0)


def test_many_states_give_what_single_ones_give() -> None:
    states = np.random.default_rng(2).normal(scale=100.0, size=(6, 15))
    for function in (
        tensor_stress.principal_3d,
        tensor_stress.principal_directions,
        tensor_stress.shear_max_3d,
        criteria.von_mises_3d,
        criteria.tresca_3d,
    ):
        singles = [function(*(float(x) for x in state)) for state in states.T]
        np.testing.assert_allclose(function(*states), singles, rtol=1e-9, atol=1e-9)
