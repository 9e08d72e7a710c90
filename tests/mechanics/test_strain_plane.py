import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler.catalogue import CallError
from doubler.mechanics import energy, hooke, strain_plane, tensor_stress

STRAIN = st.floats(-0.01, 0.01)
ANGLE = st.floats(-3.2, 3.2)
STRESS = st.floats(-500.0, 500.0)


def turned(x: float, y: float, xy: float, angle: float) -> np.ndarray:
    """Turn the strain as a tensor: the shear is halved on the way in and doubled on the way out."""
    c, s = np.cos(angle), np.sin(angle)
    turn = np.array([[c, s], [-s, c]])
    tensor = turn @ np.array([[x, xy / 2], [xy / 2, y]]) @ turn.T
    return np.array([tensor[0, 0], tensor[1, 1], 2 * tensor[0, 1]])


@settings(max_examples=40)
@given(STRAIN, STRAIN, STRAIN, ANGLE)
def test_turning_agrees_with_the_tensor_and_engineering_shear_is_twice_its(x, y, xy, angle) -> None:
    expected = turned(x, y, xy, angle)
    assert strain_plane.rotated_normal(x, y, xy, angle) == pytest.approx(expected[0], abs=1e-15)
    assert strain_plane.rotated_normal(x, y, xy, angle + np.pi / 2) == pytest.approx(expected[1], abs=1e-15)
    assert strain_plane.rotated_shear(x, y, xy, angle) == pytest.approx(expected[2], abs=1e-15)


@settings(max_examples=40)
@given(STRAIN, STRAIN, STRAIN)
def test_principal_strains_are_the_eigenvalues_and_lie_where_the_angle_says(x, y, xy) -> None:
    low, high = np.linalg.eigvalsh([[x, xy / 2], [xy / 2, y]])
    assert strain_plane.principal_max(x, y, xy) == pytest.approx(high, abs=1e-15)
    assert strain_plane.principal_min(x, y, xy) == pytest.approx(low, abs=1e-15)
    assert strain_plane.shear_max_in_plane(x, y, xy) == pytest.approx(high - low, abs=1e-15)
    if (x, xy) != (y, 0.0):
        angle = strain_plane.principal_angle(x, y, xy)
        assert -np.pi / 2 < angle <= np.pi / 2
        assert strain_plane.rotated_normal(x, y, xy, angle) == pytest.approx(high, abs=1e-15)


def test_a_strain_alike_in_all_directions_has_no_principal_one() -> None:
    with pytest.raises(CallError, match="none is principal"):
        strain_plane.principal_angle(1e-3, 1e-3, 0.0)


def test_principal_angle_of_a_state_without_shear_is_ninety_and_not_minus_ninety() -> None:
    assert strain_plane.principal_angle(-1e-3, 1e-3, -0.0) == pytest.approx(np.pi / 2)


@settings(max_examples=40)
@given(STRAIN, STRAIN, STRAIN, st.floats(-0.9, 0.5))
def test_largest_shear_strain_of_a_surface_is_that_of_its_three_strains(x, y, xy, ratio) -> None:
    z = strain_plane.out_of_plane(x, y, ratio)
    values = np.linalg.eigvalsh([[x, xy / 2, 0], [xy / 2, y, 0], [0, 0, z]])
    expected = values[-1] - values[0]
    assert strain_plane.shear_max_surface(x, y, xy, ratio) == pytest.approx(expected, abs=1e-14)


def test_strain_through_the_thickness_leaves_it_free_of_stress() -> None:
    z = strain_plane.out_of_plane(4e-4, 1e-4, 0.3)
    assert hooke.three_dimensional(4e-4, 1e-4, z, 0.0, 0.0, 0.0, 200e3, 0.3)[2] == pytest.approx(0.0, abs=1e-12)


@settings(max_examples=40)
@given(*[STRESS] * 6, st.floats(-0.9, 0.5))
def test_energy_is_half_of_stress_times_strain_and_has_two_parts(a, b, c, d, e, f, ratio) -> None:
    young = 200e3
    compliance = np.zeros((6, 6))
    compliance[:3, :3] = -ratio / young
    np.fill_diagonal(compliance, [1 / young] * 3 + [2 * (1 + ratio) / young] * 3)
    stress = np.array([a, b, c, d, e, f])
    whole = energy.density(a, b, c, d, e, f, young, ratio)
    assert whole == pytest.approx(0.5 * stress @ compliance @ stress, abs=1e-12)
    shape = energy.distortion(a, b, c, d, e, f, young, ratio)
    assert shape + energy.dilatation(a, b, c, young, ratio) == pytest.approx(whole, abs=1e-14)
    mises = np.sqrt(3 * tensor_stress.second_deviatoric(a, b, c, d, e, f))
    assert shape == pytest.approx((1 + ratio) / (3 * young) * mises**2, abs=1e-12)


def test_energy_of_one_stress_is_that_of_the_general_form() -> None:
    none = (0.0,) * 5
    assert energy.uniaxial(-300.0, 200e3) == pytest.approx(energy.density(-300.0, *none, 200e3, 0.3), rel=1e-14)
    general = energy.density(0.0, 0.0, 0.0, 80.0, 0.0, 0.0, 200e3, 0.25)
    assert energy.shear(80.0, 80e3) == pytest.approx(general, rel=1e-14)


def test_arrays_give_each_lane_its_own_result() -> None:
    x = np.array([1e-3, -1e-3])
    both = strain_plane.shear_max_surface(x, 2e-4, 3e-4, 0.3)
    assert both.tolist() == [strain_plane.shear_max_surface(float(v), 2e-4, 3e-4, 0.3) for v in x]
