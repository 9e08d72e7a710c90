"""Stress from change of temperature: signs, equilibrium, and degrees that are differences."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from doubler.catalogue.formula_text import cell, evaluate_text
from doubler.mechanics import thermal_pair, thermal_stress

CHANGES = st.floats(-200.0, 200.0)
MODULI = st.floats(1e4, 3e5)
SIZES = st.floats(0.5, 20.0)
EXPANSIONS = st.floats(0.0, 3e-5)


@given(CHANGES)
def test_heating_compresses_a_held_bar(change) -> None:
    held = thermal_stress.restrained(change, 2e5, 1.2e-5)
    assert held == pytest.approx(-2.4 * change)
    gap = thermal_stress.gap(change, 100.0, 0.01, 2e5, 1.2e-5)
    give = thermal_stress.yielding(change, 100.0, 0.01, 2e5, 1.2e-5)
    assert gap <= 0.0
    assert gap == pytest.approx(min(held + 20.0, 0.0))
    assert abs(give) == pytest.approx(max(abs(held) - 20.0, 0.0))
    assert give * held >= 0.0
    assert thermal_stress.gap(change, 100.0, 0.0, 2e5, 1.2e-5) == pytest.approx(min(held, 0.0))


@given(CHANGES, st.floats(0.0, 0.5))
def test_plate_is_held_two_ways(change, ratio) -> None:
    stress = thermal_stress.plate(change, 7e4, 2.3e-5, ratio)
    assert (stress - ratio * stress) / 7e4 + 2.3e-5 * change == pytest.approx(0.0, abs=1e-15)
    assert thermal_stress.plate_gradient(change, 7e4, 2.3e-5, ratio) == pytest.approx(stress / 2.0)


@given(CHANGES, SIZES, SIZES, MODULI, MODULI, EXPANSIONS, EXPANSIONS)
def test_a_pair_keeps_equal_length_and_no_force(change, area, other, e_1, e_2, a_1, a_2) -> None:
    first = thermal_pair.pair(change, area, other, e_1, e_2, a_1, a_2)
    second = thermal_pair.pair(change, other, area, e_2, e_1, a_2, a_1)
    assert first * area + second * other == pytest.approx(0.0, abs=1e-6)
    assert first / e_1 + a_1 * change == pytest.approx(second / e_2 + a_2 * change, abs=1e-12)


@given(CHANGES, SIZES, SIZES, MODULI, MODULI, EXPANSIONS, EXPANSIONS)
def test_a_strip_of_two_layers_by_plane_sections(change, t_1, t_2, e_1, e_2, a_1, a_2) -> None:
    layers = ((0.0, t_1, e_1, a_1), (t_1, t_1 + t_2, e_2, a_2))
    matrix, load = np.zeros((2, 2)), np.zeros(2)
    for low, high, modulus, expansion in layers:
        i0, i1, i2 = high - low, (high**2 - low**2) / 2.0, (high**3 - low**3) / 3.0
        matrix += modulus * np.array([[i0, i1], [i1, i2]])
        load += modulus * expansion * change * np.array([i0, i1])
    strain, curvature = np.linalg.solve(matrix, load)
    given = (change, t_1, t_2, e_1, e_2, a_1, a_2)
    assert thermal_pair.bimetal_curvature(*given) == pytest.approx(curvature, abs=1e-9)
    face = e_1 * (strain + curvature * t_1 - a_1 * change)
    assert thermal_pair.bimetal_strip(*given) == pytest.approx(face, abs=1e-4)


@pytest.mark.parametrize(("degree", "per"), [("°C", "1/°C"), ("°C", "1/K"), ("K", "1/°C"), ("Δ°C", "ppm/K")])
def test_a_change_in_degrees_is_a_difference(degree, per) -> None:
    expansion = "11.7" if per.startswith("ppm") else "11.7e-6"
    stress = cell(f'=STRESS_THERMAL_RESTRAINED("-40 {degree}","200 GPa","{expansion} {per}","MPa")')
    assert stress == pytest.approx(93.6)


def test_fahrenheit_is_a_difference_too() -> None:
    assert cell('=STRESS_THERMAL_RESTRAINED("60 °F","29000 ksi","6.6e-6 1/°F","ksi")') == pytest.approx(-11.484)
    metric = cell('=STRESS_THERMAL_RESTRAINED("-90 °F","200 GPa","12e-6 1/K","MPa")')
    assert metric == pytest.approx(120.0)


@pytest.mark.parametrize(
    ("formula", "words"),
    [
        ('=STRESS_THERMAL_RESTRAINED("9 K","0 GPa","12e-6 1/K","MPa")', "modulus must be positive"),
        ('=STRESS_THERMAL_RESTRAINED("9 K","9 GPa","12e-6","MPa")', "expansion"),
        ('=STRESS_THERMAL_GAP("9 K","0 m","1 mm","9 GPa","12e-6 1/K","MPa")', "length must be positive"),
        ('=STRESS_THERMAL_GAP("9 K","1 m","-1 mm","9 GPa","12e-6 1/K","MPa")', "gap must not be negative"),
        ('=STRESS_THERMAL_YIELDING("9 K","1 m","-1 mm","9 GPa","12e-6 1/K","MPa")', "give must not be negative"),
        ('=STRESS_THERMAL_PLATE("9 K","9 GPa","12e-6 1/K",0.51,"MPa")', "poissons_ratio must be"),
        ('=STRESS_THERMAL_PAIR("9 K","0 cm2","2 cm2","9 GPa","9 GPa","1e-6 1/K","2e-6 1/K")', "area must be"),
        ('=STRESS_BIMETAL_STRIP("9 K","0 mm","2 mm","9 GPa","9 GPa","1 ppm/K","2 ppm/K")', "thickness must be"),
    ],
)
def test_outside_its_limits_there_is_a_reason_and_no_number(formula, words) -> None:
    assert words in "; ".join(evaluate_text(formula).reasons)
