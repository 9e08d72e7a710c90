"""Hertz contact: spheres, cylinders and ellipses against each other and against their pressures' resultant."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler.catalogue.formula_text import evaluate_text
from doubler.mechanics import contact, contact_cylinders, contact_elliptical

RADII = st.floats(5.0, 200.0)
ELASTIC = (210e3, 0.3, 70e3, 0.33)


@given(st.floats(1.0, 1e4), RADII, RADII)
@settings(deadline=None)
def test_spheres_carry_their_force_and_are_round_ellipses(force, first, second) -> None:
    pressure = contact.spheres(force, first, *ELASTIC, second)
    size = contact.spheres_radius(force, first, *ELASTIC, second)
    assert 2.0 / 3.0 * np.pi * size**2 * pressure == pytest.approx(force)
    general = contact_elliptical.elliptical(force, first, first, second, second, 0.4, *ELASTIC)
    assert general == pytest.approx(pressure, rel=1e-9)
    np.testing.assert_allclose(
        contact_elliptical.elliptical_axes(force, first, first, second, second, 0.4, *ELASTIC), size, rtol=1e-6
    )


@given(st.floats(1.0, 1e4), RADII, RADII, st.floats(1.0, 50.0))
def test_cylinders_carry_their_force(force, first, second, length) -> None:
    pressure = contact_cylinders.cylinders(force, first, length, *ELASTIC, second)
    half = contact_cylinders.cylinders_width(force, first, length, *ELASTIC, second)
    assert np.pi / 2.0 * half * pressure * length == pytest.approx(force)


@given(st.floats(1.0, 1e4), RADII, RADII, RADII, RADII, st.floats(-3.0, 3.0))
@settings(deadline=None)
def test_ellipses_meet_the_gap_of_their_surfaces(force, r1, r1_across, r2, r2_across, angle) -> None:
    from scipy.special import ellipe, ellipkm1

    given = (r1, r1_across, r2, r2_across, angle)
    pressure = contact_elliptical.elliptical(force, *given, *ELASTIC)
    long, short = contact_elliptical.elliptical_axes(force, *given, *ELASTIC)
    assert 2.0 / 3.0 * np.pi * long * short * pressure == pytest.approx(force)
    square = (short / long) ** 2
    curvatures = [1.0 / r for r in given[:4]]
    total = sum(curvatures) / 2.0
    if 1.0 - square < 1e-4:
        return
    first, second = ellipkm1(square), ellipe(1.0 - square)
    contact_modulus = contact.plane_modulus(*ELASTIC)
    scale = pressure * short / (contact_modulus * long**2 * (1.0 - square))
    slow = scale * (first - second)
    fast = scale * (second / square - first)
    assert slow + fast == pytest.approx(total, rel=1e-7)
    turned = np.hypot(
        (curvatures[0] - curvatures[1]) + (curvatures[2] - curvatures[3]) * np.cos(2.0 * angle),
        (curvatures[2] - curvatures[3]) * np.sin(2.0 * angle),
    )
    assert fast - slow == pytest.approx(turned / 2.0, rel=1e-5, abs=1e-9)


def test_a_flat_is_a_very_large_radius_and_a_hollow_is_softer() -> None:
    flat = contact.spheres(100.0, 10.0, *ELASTIC)
    assert contact.spheres(100.0, 10.0, *ELASTIC, 1e12) == pytest.approx(flat)
    assert contact.spheres(100.0, 10.0, *ELASTIC, -20.0) < flat
    assert contact_cylinders.cylinders(100.0, 10.0, 5.0, *ELASTIC, -20.0) < contact_cylinders.cylinders(
        100.0, 10.0, 5.0, *ELASTIC
    )


@given(st.floats(0.0, 0.5))
def test_shear_below_is_the_largest_on_a_fine_grid(ratio) -> None:
    z = np.linspace(1e-4, 2.0, 20001)
    along = -(1.0 + ratio) * (1.0 - z * np.arctan(1.0 / z)) + 0.5 / (1.0 + z**2)
    spheres = np.max(np.abs(along + 1.0 / (1.0 + z**2))) / 2.0
    assert contact.spheres_shear(1.0, ratio) == pytest.approx(spheres, rel=1e-6)
    root = np.sqrt(1.0 + z**2)
    down, across = -1.0 / root, -((1.0 + 2.0 * z**2) / root - 2.0 * z)
    states = np.sort([down, across, ratio * (down + across)], axis=0)
    assert contact_cylinders.cylinders_shear(1.0, ratio) == pytest.approx(np.max(states[2] - states[0]) / 2.0, rel=1e-6)


@pytest.mark.parametrize(
    ("formula", "words"),
    [
        ('=STRESS_HERTZ_SPHERES("-1 N","10 mm","9 GPa",0.3,"9 GPa",0.3)', "force must not be negative"),
        ('=STRESS_HERTZ_SPHERES("1 N","0 mm","9 GPa",0.3,"9 GPa",0.3)', "touch at one place"),
        ('=STRESS_HERTZ_SPHERES("1 N","10 mm","9 GPa",0.3,"9 GPa",0.3,"-10 mm")', "touch at one place"),
        ('=STRESS_HERTZ_SPHERES_SHEAR("1 MPa",0.6)', "poissons_ratio must be"),
        ('=STRESS_HERTZ_SPHERES("1 kN","10 mm","70 GPa",0.3,"70 GPa",0.3,"-10.001 mm")', "half of the smaller radius"),
        ('=STRESS_HERTZ_SPHERES_RADIUS("9 MN","10 mm","70 GPa",0.3,"70 GPa",0.3)', "half of the smaller radius"),
        ('=STRESS_HERTZ_CYLINDERS("9 kN","6 mm","9 mm","70 GPa",.3,"70 GPa",.3,"-6.01 mm")', "half of the smaller"),
        (
            '=STRESS_HERTZ_CYLINDERS_WIDTH("9 kN","6 mm","9 mm","70 GPa",.3,"70 GPa",.3,"-6.01 mm")',
            "half of the smaller",
        ),
        ('=STRESS_HERTZ_CYLINDERS("1 N","10 mm","0 mm","9 GPa",0.3,"9 GPa",0.3)', "length must be positive"),
        ('=STRESS_HERTZ_CYLINDERS("1 N","-10 mm","9 mm","9 GPa",0.3,"9 GPa",0.3)', "touch at one place"),
        ('=STRESS_HERTZ_CYLINDERS_SHEAR("1 MPa",-0.1)', "poissons_ratio must be"),
        ('=STRESS_HERTZ_SLIDING_TENSION("1 MPa",-0.1)', "friction must not be negative"),
        ('=STRESS_HERTZ_ELLIPTICAL("1N","0cm","1cm","8cm","2cm","0°","9GPa",.3,"9GPa",.3)', "must not be zero"),
        ('=STRESS_HERTZ_ELLIPTICAL("1N","1cm","1km","1cm","9km","0°","9GPa",.3,"9GPa",.3)', "10,000 times"),
        ('=STRESS_HERTZ_ELLIPTICAL("1kN","9mm","9mm","-9.001mm","-9.001mm","0°","9GPa",.3,"9GPa",.3)', "half of the"),
        ('=STRESS_HERTZ_ELLIPTICAL("1N","1cm","-1cm","8cm","8cm","0°","9GPa",.3,"9GPa",.3)', "curve apart"),
    ],
)
def test_outside_its_limits_there_is_a_reason_and_no_number(formula, words) -> None:
    assert words in "; ".join(evaluate_text(formula).reasons)


def test_arrays_give_what_single_values_give() -> None:
    lanes = np.random.default_rng(5).uniform(5.0, 90.0, size=(6, 8))
    singles = [contact_elliptical.elliptical(*(float(v) for v in lane), *ELASTIC) for lane in lanes.T]
    np.testing.assert_allclose(contact_elliptical.elliptical(*lanes, *ELASTIC), singles, rtol=1e-12)
