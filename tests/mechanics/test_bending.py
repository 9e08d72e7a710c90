"""Bending, shear and mean stresses: equilibrium over the section, signs, refusals."""

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from doubler.catalogue.formula_text import evaluate_text
from doubler.catalogue.plan import CallError
from doubler.mechanics import axial, bending, shear

MOMENTS = st.floats(-1e6, 1e6)


def angle_section() -> tuple[np.ndarray, np.ndarray, float]:
    """Return y, z and area of many small squares of an angle 60 × 40 × 10, from its centroid."""
    step = 0.25
    y, z = np.meshgrid(np.arange(step / 2, 40, step), np.arange(step / 2, 60, step))
    inside = (y < 10.0) | (z < 10.0)
    y, z = y[inside], z[inside]
    return y - y.mean(), z - z.mean(), step**2


Y, Z, PIECE = angle_section()
I_Y, I_Z, I_YZ = (float(np.sum(product) * PIECE) for product in (Z**2, Y**2, Y * Z))
AREA = float(Y.size * PIECE)


@given(MOMENTS, MOMENTS)
def test_unsymmetric_stress_is_in_equilibrium_with_its_moments(moment_y, moment_z) -> None:
    stress = bending.bending_unsymmetric(moment_y, moment_z, Y, Z, I_Y, I_Z, I_YZ)
    size = 1.0 + abs(moment_y) + abs(moment_z)
    assert np.sum(stress) * PIECE == pytest.approx(0.0, abs=1e-9 * size)
    assert np.sum(stress * Z) * PIECE == pytest.approx(moment_y, abs=1e-9 * size)
    assert np.sum(-stress * Y) * PIECE == pytest.approx(moment_z, abs=1e-9 * size)


@given(st.floats(-1e5, 1e5), MOMENTS, MOMENTS)
def test_principal_axes_need_no_product_of_inertia(force, moment_y, moment_z) -> None:
    whole = bending.axial_biaxial(force, moment_y, moment_z, Y[:9], Z[:9], AREA, I_Y, I_Z)
    bent = bending.bending_unsymmetric(moment_y, moment_z, Y[:9], Z[:9], I_Y, I_Z, 0.0)
    np.testing.assert_allclose(whole, axial.axial(force, AREA) + bent, rtol=1e-9, atol=1e-6)


@given(MOMENTS, MOMENTS)
def test_neutral_axis_carries_no_stress(moment_y, moment_z) -> None:
    assume(abs(moment_y) + abs(moment_z) > 1.0)
    angle = bending.neutral_axis_angle(moment_y, moment_z, I_Y, I_Z, I_YZ)
    assert -np.pi / 2.0 < angle <= np.pi / 2.0
    y, z = 10.0 * np.cos(angle), 10.0 * np.sin(angle)
    stress = bending.bending_unsymmetric(moment_y, moment_z, float(y), float(z), I_Y, I_Z, I_YZ)
    assert stress == pytest.approx(0.0, abs=1e-12 * (abs(moment_y) + abs(moment_z)))


@given(st.floats(-1e4, 1e4), st.floats(-1e4, 1e4))
def test_shear_flow_of_an_angle_is_in_equilibrium_with_its_forces(shear_y, shear_z) -> None:
    # Thin legs along y and z from the corner; the flow followed from each free end to the corner.
    leg_y, leg_z, wall, count = 40.0, 60.0, 1.0, 400
    y_bar = leg_y**2 / 2.0 / (leg_y + leg_z)
    z_bar = leg_z**2 / 2.0 / (leg_y + leg_z)
    share = (np.arange(count) + 0.5) / count
    y_leg = (leg_y * share - y_bar, np.full(count, -z_bar), leg_y * wall / count)
    z_leg = (np.full(count, -y_bar), leg_z * share - z_bar, leg_z * wall / count)

    about_y = sum(float(np.sum(z**2) * piece) for _, z, piece in (y_leg, z_leg))
    about_z = sum(float(np.sum(y**2) * piece) for y, _, piece in (y_leg, z_leg))
    product = sum(float(np.sum(y * z) * piece) for y, z, piece in (y_leg, z_leg))
    resultants = []
    for (y, z, piece), length in ((y_leg, leg_y), (z_leg, leg_z)):
        outer_first = slice(None, None, -1)
        q_y, q_z = (np.cumsum(v[outer_first]) * piece - v[outer_first] * piece / 2.0 for v in (z, y))
        flow = shear.shear_flow_unsymmetric(shear_y, shear_z, q_y, q_z, about_y, about_z, product)
        resultants.append(float(-np.sum(flow) * length / count))  # positive away from the corner
    size = 1.0 + abs(shear_y) + abs(shear_z)
    assert resultants == pytest.approx([shear_y, shear_z], abs=2e-4 * size)


@given(st.floats(-1e5, 1e5), MOMENTS, MOMENTS)
def test_extremes_of_a_rectangle_are_those_of_its_corners(force, moment_y, moment_z) -> None:
    b, h = 30.0, 50.0
    y, z = np.array([-b, -b, b, b]) / 2.0, np.array([-h, h, -h, h]) / 2.0
    corners = bending.axial_biaxial(force, moment_y, moment_z, y, z, b * h, b * h**3 / 12.0, h * b**3 / 12.0)
    sizes = (force, moment_y, moment_z, b * h, b * h**2 / 6.0, h * b**2 / 6.0)
    assert bending.axial_biaxial_max(*sizes) == pytest.approx(corners.max(), abs=1e-9)
    assert bending.axial_biaxial_min(*sizes) == pytest.approx(corners.min(), abs=1e-9)


def test_signs_of_bending_moments() -> None:
    assert bending.axial_biaxial(0.0, 1.0, 0.0, 0.0, 1.0, 1.0, 1.0, 1.0) > 0.0
    assert bending.axial_biaxial(0.0, 0.0, 1.0, 1.0, 0.0, 1.0, 1.0, 1.0) < 0.0
    assert bending.bending(10.0, -2.0, 5.0) == -4.0
    assert bending.bending_modulus(-10.0, 5.0) == -2.0


def test_rectangle_and_ring_are_vq_over_it() -> None:
    width, depth = 30.0, 50.0
    first, second = width * depth**2 / 8.0, width * depth**3 / 12.0
    assert shear.shear_rectangle(9e3, width, depth) == pytest.approx(shear.shear_beam(9e3, first, second, width))
    outer, inner = 4.0, 3.2
    first, second = (outer**3 - inner**3) / 12.0, np.pi / 64.0 * (outer**4 - inner**4)
    expected = shear.shear_beam(1500.0, first, second, outer - inner)
    assert shear.shear_round(1500.0, outer, inner) == pytest.approx(expected)
    assert shear.shear_round(1500.0, outer) == pytest.approx(4.0 * 1500.0 / (3.0 * np.pi / 4.0 * outer**2))
    assert shear.shear_flow(9e3, first, second) == pytest.approx(shear.shear_beam(9e3, first, second, 2.0) * 2.0)


def test_mean_stresses() -> None:
    assert axial.pin_shear(30e3, 12.0, 2.0) == pytest.approx(axial.direct_shear(30e3, np.pi * 36.0, 2.0))
    assert axial.bearing(-9e3, 6.0, 3.0) == -500.0
    assert shear.shear_mean_web(45e3, 2175.0) == pytest.approx(45e3 / 2175.0)


@pytest.mark.parametrize(
    ("formula", "words"),
    [
        ('=STRESS_AXIAL("12 kN", "0 mm^2", "MPa")', "area must be positive"),
        ('=STRESS_AXIAL("12 kg", "10 mm^2", "MPa")', "mass"),
        ('=STRESS_DIRECT_SHEAR("12 kN", "10 mm^2", 0.5, "MPa")', "at least 1"),
        ('=STRESS_PIN_SHEAR("12 kN", "-3 mm", 1, "MPa")', "diameter must be positive"),
        ('=STRESS_BEARING("12 kN", "3 mm", "0 mm", "MPa")', "thickness must be positive"),
        ('=STRESS_BENDING("1 kN*m", "3 mm", "-5 mm^4", "MPa")', "second_moment must be positive"),
        ('=STRESS_BENDING("1 kJ", "3 mm", "5 mm^4", "MPa")', "energy"),
        ('=STRESS_BENDING_MODULUS("1 kN*m", "0 mm^3", "MPa")', "section_modulus must be positive"),
        ('=STRESS_BENDING_UNSYMMETRIC("1 Nm","1 Nm","1 mm","1 mm","4 mm4","4 mm4","4 mm4","MPa")', "no section"),
        ('=STRESS_NEUTRAL_AXIS_ANGLE("0 Nm","0 Nm","4 mm4","4 mm4","1 mm4","deg")', "both zero"),
        ('=STRESS_SHEAR_BEAM("1 kN", "1 mm^3", "1 mm^4", "0 mm", "MPa")', "thickness must be positive"),
        ('=STRESS_SHEAR_ROUND("1 kN", "10 mm", "10 mm", "MPa")', "smaller than the outer"),
        ('=STRESS_SHEAR_RECTANGLE("1 kN", "10 mm", "0 mm", "MPa")', "depth must be positive"),
        ('=STRESS_SHEAR_RECTANGLE("1 kN", "51 mm", "50 mm", "MPa")', "wider than deep"),
        ('=STRESS_SHEAR_MEAN_WEB("1 kN", "0 mm^2", "MPa")', "web_area must be positive"),
    ],
)
def test_outside_its_limits_there_is_a_reason_and_no_number(formula, words) -> None:
    assert words in "; ".join(evaluate_text(formula).reasons)


def test_arrays_give_what_single_values_give() -> None:
    lanes = np.random.default_rng(4).uniform(1.0, 9.0, size=(8, 10))
    singles = [bending.axial_biaxial(*(float(v) for v in lane)) for lane in lanes.T]
    np.testing.assert_allclose(bending.axial_biaxial(*lanes), singles, rtol=1e-13)
    with pytest.raises(CallError, match="area must be positive; it is 0"):
        axial.axial(np.array([1.0, 2.0]), np.array([1.0, 0.0]))
