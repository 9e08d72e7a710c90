import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler.catalogue import CallError, cell
from doubler.errors import InputError
from doubler.mechanics import hooke, hooke_strain

STRESS = st.floats(-500.0, 500.0)
MODULUS = st.floats(1e3, 5e5)
RATIO = st.floats(-0.9, 0.45)
GROWTH = st.floats(-3e-5, 3e-5)
CHANGE = st.floats(-200.0, 200.0)


def by_matrix(strains: list[float], modulus: float, ratio: float, free: float) -> np.ndarray:
    """Invert the 6 × 6 compliance: a road that shares nothing with the kernel."""
    compliance = np.zeros((6, 6))
    compliance[:3, :3] = -ratio / modulus
    np.fill_diagonal(compliance, [1 / modulus] * 3 + [2 * (1 + ratio) / modulus] * 3)
    return np.linalg.solve(compliance, np.array(strains) - np.array([free] * 3 + [0.0] * 3))


@settings(max_examples=40)
@given(*[STRESS] * 6, MODULUS, RATIO, GROWTH, CHANGE)
def test_three_dimensions_go_round_and_agree_with_the_matrix(a, b, c, d, e, f, modulus, ratio, growth, change) -> None:
    strains = hooke_strain.three_dimensional(a, b, c, d, e, f, modulus, ratio, growth, change)
    assert by_matrix(list(strains), modulus, ratio, growth * change) == pytest.approx([a, b, c, d, e, f], abs=1e-6)
    back = hooke.three_dimensional(*strains, modulus, ratio, growth, change)
    assert list(back) == pytest.approx([a, b, c, d, e, f], abs=1e-6)


@settings(max_examples=40)
@given(STRESS, STRESS, STRESS, MODULUS, RATIO, GROWTH, CHANGE)
def test_plane_stress_goes_round_and_is_a_case_of_three_dimensions(x, y, xy, modulus, ratio, growth, change) -> None:
    ex, ey, ez, gxy = hooke_strain.plane_stress(x, y, xy, modulus, ratio, growth, change)
    back = hooke.plane_stress(ex, ey, gxy, modulus, ratio, growth, change)
    assert list(back) == pytest.approx([x, y, xy], abs=1e-6)
    whole = hooke.three_dimensional(ex, ey, ez, gxy, 0.0, 0.0, modulus, ratio, growth, change)
    assert list(whole) == pytest.approx([x, y, 0.0, xy, 0.0, 0.0], abs=1e-6)


@settings(max_examples=40)
@given(STRESS, STRESS, STRESS, MODULUS, RATIO, GROWTH, CHANGE)
def test_plane_strain_goes_round_and_is_a_case_of_three_dimensions(x, y, xy, modulus, ratio, growth, change) -> None:
    ex, ey, gxy = hooke_strain.plane_strain(x, y, xy, modulus, ratio, growth, change)
    sx, sy, sz, txy = hooke.plane_strain(ex, ey, gxy, modulus, ratio, growth, change)
    assert [sx, sy, txy] == pytest.approx([x, y, xy], abs=1e-6)
    assert sz == pytest.approx(ratio * (x + y) - modulus * growth * change, abs=1e-6)
    whole = hooke.three_dimensional(ex, ey, 0.0, gxy, 0.0, 0.0, modulus, ratio, growth, change)
    assert list(whole[:4]) == pytest.approx([sx, sy, sz, txy], abs=1e-6)


def test_a_heated_bar_that_cannot_grow_is_compressed() -> None:
    assert cell('=STRESS_HOOKE_UNIAXIAL(0,"200 GPa","12e-6 1/K","50 K","MPa")') == -120.0


@pytest.mark.parametrize("end", ['"12e-6 1/K"', ',"50 K"'])
@pytest.mark.parametrize(
    "start",
    [
        '=STRESS_HOOKE_UNIAXIAL(0.001,"200 GPa",',
        '=STRESS_HOOKE_PLANE_STRESS(0.001,0,0,"200 GPa",0.3,',
        '=STRESS_HOOKE_PLANE_STRAIN(0.001,0,0,"200 GPa",0.3,',
        '=STRESS_HOOKE_3D(0.001,0,0,0,0,0,"200 GPa",0.3,',
        '=STRAIN_HOOKE_PLANE_STRESS("1 MPa","1 MPa","1 MPa","200 GPa",0.3,',
        '=STRAIN_HOOKE_PLANE_STRAIN("1 MPa","1 MPa","1 MPa","200 GPa",0.3,',
        '=STRAIN_HOOKE_3D("1 MPa","1 MPa","1 MPa","1 MPa","1 MPa","1 MPa","200 GPa",0.3,',
    ],
)
def test_half_a_thermal_strain_is_refused_and_not_left_out(start: str, end: str) -> None:
    with pytest.raises(InputError, match="belong together"):
        cell(f"{start}{end})")


@pytest.mark.parametrize("function", [hooke.plane_strain, hooke.three_dimensional])
def test_an_incompressible_material_has_no_stress_from_strain(function) -> None:
    strains = [1e-3] * (len(function.arguments) - 4)
    with pytest.raises(CallError, match="incompressible"):
        function(*strains, 200e3, 0.5)


def test_plane_stress_holds_at_one_half() -> None:
    sx, sy, _ = hooke.plane_stress(1e-3, -0.5e-3, 0.0, 3.0, 0.5)
    assert [sx, sy] == pytest.approx([3e-3, 0.0], abs=1e-15)


def test_each_lane_of_arrays_is_its_own_case() -> None:
    ex = np.array([1e-3, -2e-3, 0.0])
    together = hooke.plane_stress(ex, 1e-4, 2e-4, 70e3, 0.33)
    assert together.shape == (3, 3)
    for lane, value in enumerate(ex):
        assert together[lane] == pytest.approx(hooke.plane_stress(float(value), 1e-4, 2e-4, 70e3, 0.33), rel=1e-15)
