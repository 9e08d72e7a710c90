"""Stress concentration, notches, lugs and brittle criteria: limits of the formulas, invariants, refusals."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from doubler.catalogue.formula_text import evaluate_text
from doubler.mechanics import brittle, concentration, concentration_fillet, criteria, lug, notch

STRESSES = st.floats(-500.0, 500.0).map(lambda value: round(value, 6))
STEPS = (
    concentration_fillet.fillet_plate,
    concentration_fillet.fillet_plate_bending,
    concentration_fillet.fillet_shaft,
    concentration_fillet.fillet_shaft_bending,
)


@pytest.mark.parametrize("function", STEPS)
def test_fillet_factors_are_above_one_fall_with_the_radius_and_meet_between_their_ranges(function) -> None:
    for share in (0.05, 0.2, 0.5, 0.8):
        smaller, step = 1.0 - share, share / 2.0
        radii = step / np.geomspace(0.1, 20.0, 60)
        factors = function(1.0, smaller, radii)
        assert np.all(factors > 0.97)
        assert factors[-1] > factors[0]
        below, above = function(1.0, smaller, step / 2.0 * np.array([1.0 + 1e-9, 1.0 - 1e-9]))
        assert above == pytest.approx(below, rel=0.04)


@given(st.floats(0.001, 0.999))
def test_hole_factor_falls_from_three_to_two(share) -> None:
    factor = concentration.hole(1.0, share)
    assert 2.0 <= factor <= 3.0
    peak = concentration.plate_hole(-10.0, 5.0, 5.0 * share, 2.0)
    assert peak == pytest.approx(-factor * 10.0 / (5.0 * (1.0 - share) * 2.0))


def test_groove_is_shallow_or_deep_at_its_ends() -> None:
    assert concentration.groove(1000.0, 999.0, 0.5) == pytest.approx(3.0, rel=0.02)
    deep = 4.0 / np.pi * np.sqrt(50.0)
    assert concentration.groove(1e9, 100.0, 1.0) == pytest.approx(deep, rel=0.03)


@given(st.floats(0.01, 1.0), st.floats(1.0, 5.0), st.floats(200.0, 2000.0), st.floats(0.02, 1.0))
def test_neubers_rule_holds_at_the_stress_found(share, factor, coefficient, exponent) -> None:
    modulus, nominal = 7e4, share * coefficient * 0.002**exponent
    stress = notch.neuber(nominal, factor, modulus, coefficient, exponent)
    strain = stress / modulus + (stress / coefficient) ** (1.0 / exponent)
    assert stress * strain == pytest.approx((factor * nominal) ** 2 / modulus, rel=1e-9)
    assert stress <= factor * nominal * (1.0 + 1e-12)
    assert notch.neuber(-nominal, factor, modulus, coefficient, exponent) == -stress


def test_fatigue_factor_between_one_and_the_elastic_one() -> None:
    assert notch.fatigue_factor(2.4, 0.0) == 1.0
    assert notch.fatigue_factor(2.4, 1.0) == pytest.approx(2.4)
    assert notch.sensitivity(1.0, 0.0) == 1.0
    assert notch.neuber(0.0, 3.0, 7e4, 700.0, 0.1) == 0.0


@given(STRESSES, STRESSES, STRESSES)
def test_brittle_criteria_stand_in_their_order(sx, sy, txy) -> None:
    for strengths in ((200.0, 200.0), (200.0, 700.0)):
        rankine = brittle.rankine(sx, sy, txy, *strengths)
        modified = brittle.modified_mohr(sx, sy, txy, *strengths)
        coulomb = brittle.coulomb_mohr(sx, sy, txy, *strengths)
        assert 0.0 <= rankine <= modified + 1e-9
        assert modified <= coulomb + 1e-9


@given(STRESSES, STRESSES, STRESSES)
def test_equal_strengths_give_the_ductile_criteria(sx, sy, txy) -> None:
    assert brittle.coulomb_mohr(sx, sy, txy, 9.0, 9.0) == pytest.approx(criteria.tresca(sx, sy, txy), abs=1e-9)
    assert brittle.drucker_prager(sx, sy, 0.0, txy, 0.0, 0.0, 9.0, 9.0) == pytest.approx(
        criteria.von_mises(sx, sy, txy), abs=1e-9
    )


@given(st.floats(50.0, 500.0), st.floats(1.0, 5.0))
def test_each_criterion_gives_the_tensile_strength_at_either_uniaxial_strength(tensile, ratio) -> None:
    strengths = (tensile, tensile * ratio)
    for function in (brittle.rankine, brittle.coulomb_mohr, brittle.modified_mohr):
        assert function(tensile, 0.0, 0.0, *strengths) == pytest.approx(tensile)
        assert function(0.0, -tensile * ratio, 0.0, *strengths) == pytest.approx(tensile)
    for state in (tensile, -tensile * ratio):
        assert brittle.drucker_prager(0.0, state, 0.0, 0.0, 0.0, 0.0, *strengths) == pytest.approx(tensile)


def test_lug_round_its_end_and_at_an_angle() -> None:
    shortest = lug.lug_shear_out(1e3, 20.0, 16.0, 8.0)
    assert shortest == pytest.approx(1e3 / (2.0 * 8.0 * 12.0))
    y = 8.0 * np.sin(np.radians(40.0))
    length = np.sqrt(20.0**2 - y**2) - 8.0 * np.cos(np.radians(40.0))
    assert lug.lug_shear_out(1e3, 20.0, 16.0, 8.0, np.radians(40.0)) == pytest.approx(1e3 / (16.0 * length))
    assert lug.lug_net(1e3, 40.0, 16.0, 8.0) == pytest.approx(1e3 / 192.0)
    across = lug.lug_oblique(1e3, np.pi / 2.0, 9e9, 3e3, 1.5)
    assert across == pytest.approx(1.0)
    both = lug.lug_oblique(1e3, np.pi / 4.0, 4e3, 3e3, 1.0)
    share = 1e3 / np.sqrt(2.0) * (1.0 + both)
    assert (share / 4e3) ** 1.6 + (share / 3e3) ** 1.6 == pytest.approx(1.0)


@pytest.mark.parametrize(
    ("formula", "words"),
    [
        ('=STRESS_CONCENTRATION_HOLE("10 mm","10 mm")', "smaller than the width"),
        ('=STRESS_PLATE_HOLE("1 kN","10 mm","11 mm","1 mm","MPa")', "smaller than the width"),
        ('=STRESS_CONCENTRATION_ELLIPSE("10 mm","0 mm")', "half_along must be positive"),
        ('=STRESS_CONCENTRATION_PIN("10 mm","1 mm")', "0.15 to 0.75"),
        ('=STRESS_CONCENTRATION_PIN("10 mm","8 mm")', "0.15 to 0.75"),
        ('=STRESS_CONCENTRATION_GROOVE("10 mm","8 mm","1.1 mm")', "depth of a groove"),
        ('=STRESS_CONCENTRATION_GROOVE("10 mm","10 mm","1.1 mm")', "smaller than width"),
        ('=STRESS_CONCENTRATION_STEP_PLATE("10 mm","10 mm","1 mm")', "no fillet"),
        ('=STRESS_CONCENTRATION_STEP_PLATE("10 mm","8 mm","11 mm")', "0.1 to 20"),
        ('=STRESS_CONCENTRATION_STEP_SHAFT_BENDING("10 mm","8 mm","0.04 mm")', "0.1 to 20"),
        ('=STRESS_CONCENTRATION_STEP_SHAFT_TORSION("10 mm","8 mm","0.2 mm")', "0.25 to 4"),
        ("=STRESS_FATIGUE_FACTOR(0.9,0.5)", "at least 1"),
        ("=STRESS_FATIGUE_FACTOR(2,1.5)", "from 0 to 1"),
        ('=STRESS_NEUBER("9 MPa",3,"70 GPa","700 MPa",10)', "from 0.02 to 1"),
        ('=STRESS_NEUBER("377 MPa",3,"70 GPa","700 MPa",0.1)', "whole section yields"),
        ('=STRESS_NEUBER("-377 MPa",3,"70 GPa","700 MPa",0.1)', "whole section yields"),
        ('=STRESS_COULOMB_MOHR("1 MPa","1 MPa","1 MPa","9 MPa","-9 MPa")', "compressive_strength must be positive"),
        ('=STRESS_MODIFIED_MOHR("1 MPa","1 MPa","1 MPa","9 MPa","8 MPa")', "not be below tensile_strength"),
        ('=STRESS_LUG_NET("1 kN","10 mm","10 mm","1 mm")', "smaller than width"),
        ('=STRESS_LUG_SHEAR_OUT("1 kN","5 mm","10 mm","1 mm")', "above half of hole_diameter"),
        ('=STRESS_LUG_SHEAR_OUT("1 kN","9 mm","10 mm","1 mm","50 deg")', "0 to 45°"),
        ('=MARGIN_LUG_OBLIQUE("1 kN","91 deg","9 kN","9 kN",1)', "0 to 90°"),
        ('=MARGIN_LUG_OBLIQUE("0 kN","9 deg","9 kN","9 kN",1)', "unloaded lug"),
        ('=MARGIN_LUG_OBLIQUE("1 kN","9 deg","9 kN","9 kN",0.9)', "at least 1"),
    ],
)
def test_outside_its_limits_there_is_a_reason_and_no_number(formula, words) -> None:
    assert words in "; ".join(evaluate_text(formula).reasons)


def test_angles_at_the_ends_of_their_range_are_taken() -> None:
    assert evaluate_text('=MARGIN_LUG_OBLIQUE("1 kN","90 deg","9 kN","9 kN",1)').reasons == ()
    assert evaluate_text('=STRESS_LUG_SHEAR_OUT("1 kN","9 mm","10 mm","1 mm","45 deg")').reasons == ()


@pytest.mark.parametrize(
    "function",
    [
        concentration_fillet.fillet_plate,
        concentration_fillet.fillet_plate_bending,
        concentration_fillet.fillet_shaft,
        concentration_fillet.fillet_shaft_bending,
        concentration_fillet.fillet_shaft_torsion,
    ],
)
def test_no_fillet_ever_lowers_the_stress(function) -> None:
    height = np.linspace(0.25, 4.0, 40)[:, np.newaxis]
    left = np.geomspace(1e-3, 0.99, 60)
    larger = np.broadcast_to(100.0, (40, 60)).reshape(-1)
    smaller = np.broadcast_to(100.0 * left, (40, 60)).reshape(-1)
    radius = (50.0 * (1.0 - left) / height).reshape(-1)
    assert np.min(function(larger, smaller, radius)) >= 1.0
