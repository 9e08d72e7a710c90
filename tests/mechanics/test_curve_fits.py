"""Straight lines through test records: against SciPy, against certified data, and where they must refuse."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import stats

from doubler import mechanics
from doubler.catalogue import CallError, cell
from doubler.mechanics import curve_gauges, curve_line, curve_modulus, curve_slopes

RANDOM = np.random.default_rng(11)


def metal(modulus=70e3, proof=400.0, exponent=20.0, top=430.0, count=300, toe=0.0):
    """A noiseless Ramberg–Osgood record, evenly spaced in stress."""
    stress = np.linspace(0.0, top, count)
    return stress / modulus + 0.002 * (stress / proof) ** exponent + toe, stress


@settings(max_examples=25)
@given(st.integers(0, 10**6), st.integers(3, 40))
def test_lines_agree_with_an_independent_regression(seed: int, count: int) -> None:
    random = np.random.default_rng(seed)
    x, y = random.uniform(1.0, 9.0, count), random.normal(3.0, 2.0, count)
    known = stats.linregress(x, y)
    assert curve_line.slope(x, y) == pytest.approx(known.slope, rel=1e-9, abs=1e-12)
    assert curve_line.intercept(x, y) == pytest.approx(known.intercept, rel=1e-9, abs=1e-12)
    assert curve_line.slope_error(x, y) == pytest.approx(known.stderr, rel=1e-7)
    assert curve_line.intercept_error(x, y) == pytest.approx(known.intercept_stderr, rel=1e-7)
    assert curve_line.r_squared(x, y) == pytest.approx(known.rvalue**2, rel=1e-7, abs=1e-9)
    through, *_ = np.linalg.lstsq(x[:, None], y, rcond=None)
    assert curve_line.slope_origin(x, y) == pytest.approx(through[0], rel=1e-10)


def test_a_line_refuses_what_has_no_slope() -> None:
    with pytest.raises(CallError, match="x is the same in all rows"):
        curve_line.slope([2.0, 2.0, 2.0], [1.0, 2.0, 3.0])
    with pytest.raises(CallError, match="equally long"):
        curve_line.slope([2.0, 3.0, 4.0], [1.0, 2.0])
    with pytest.raises(CallError, match="three rows"):
        curve_line.slope_error([2.0, 3.0], [1.0, 2.0])
    with pytest.raises(CallError, match="x is zero in all rows"):
        curve_line.slope_origin([0.0, 0.0], [1.0, 2.0])
    with pytest.raises(CallError, match="y is the same"):
        curve_line.r_squared([1.0, 2.0, 3.0], [5.0, 5.0, 5.0])


@settings(max_examples=25)
@given(st.floats(1e3, 5e5), st.floats(-0.002, 0.01), st.integers(8, 60))
def test_a_proportional_curve_gives_its_own_modulus_and_toe(modulus: float, toe: float, count: int) -> None:
    stress = np.linspace(0.0, 0.004 * modulus, count)
    strain = stress / modulus + toe
    assert curve_modulus.modulus(strain, stress) == pytest.approx(modulus, rel=1e-9)
    assert curve_modulus.toe(strain, stress) == pytest.approx(toe, abs=1e-12)
    assert curve_modulus.modulus_window(strain, stress) == pytest.approx([0.0, stress[-1]])
    assert curve_modulus.modulus_fit(strain, stress) == pytest.approx([1.0, 0.0, count], abs=1e-7)


@pytest.mark.parametrize("exponent", [8.0, 12.0, 20.0, 35.0])
@pytest.mark.parametrize("noise", [0.0, 0.5])
def test_the_window_is_found_in_a_curve_with_toe_knee_and_noise(exponent: float, noise: float) -> None:
    strain, stress = metal(exponent=exponent)
    foot = 0.0007
    toe = np.linspace(0.0, 30.0, 12)
    curved = foot + 30.0 / 70e3 - (30.0 / 70e3 + foot) * (1.0 - (toe / 30.0) ** 0.5)
    keep = stress > 30.0
    strain, stress = np.concatenate([curved, strain[keep] + foot]), np.concatenate([toe, stress[keep]])
    stress = stress + noise * np.random.default_rng(3).normal(size=stress.size)
    assert curve_modulus.modulus(strain, stress) == pytest.approx(70e3, rel=0.01)
    assert curve_modulus.toe(strain, stress) == pytest.approx(foot, abs=5e-5)
    low, high = curve_modulus.modulus_window(strain, stress)
    assert 20.0 < low < high < 380.0


@pytest.mark.parametrize("tangent", [700.0, 7e3, 12e3])
def test_a_second_straight_part_is_not_taken_for_the_elastic_one(tangent: float) -> None:
    strain = np.concatenate([np.linspace(0.0, 0.004, 30), np.linspace(0.0042, 0.1, 600)])
    stress = np.where(strain <= 0.004, 70e3 * strain, 280.0 + tangent * (strain - 0.004))
    assert curve_modulus.modulus(strain, stress) == pytest.approx(70e3, rel=1e-3)


def test_an_elastic_part_below_a_tenth_of_the_strength_is_refused_rather_than_mistaken() -> None:
    strain = np.concatenate([np.linspace(0.0, 0.004, 30), np.linspace(0.0042, 0.1, 600)])
    stress = np.where(strain <= 0.004, 70e3 * strain, 280.0 + 35e3 * (strain - 0.004))
    with pytest.raises(CallError, match="no straight part"):
        curve_modulus.modulus(strain, stress)


def test_a_window_given_is_the_regression_of_its_points() -> None:
    strain, stress = metal(count=80)
    stress = stress + RANDOM.normal(size=stress.size)
    chosen = (stress >= 50.0) & (stress <= 200.0)
    known = stats.linregress(strain[chosen], stress[chosen])
    assert curve_modulus.modulus(strain, stress, 50.0, 200.0) == pytest.approx(known.slope, rel=1e-10)
    fit = curve_modulus.modulus_fit(strain, stress, 50.0, 200.0)
    assert fit == pytest.approx([known.rvalue**2, known.stderr / known.slope, chosen.sum()], rel=1e-8)
    assert curve_modulus.toe(strain, stress, 50.0, 200.0) == pytest.approx(-known.intercept / known.slope, rel=1e-8)


def test_what_has_no_straight_part_is_refused() -> None:
    strain = np.linspace(0.0, 0.01, 60)
    scatter = 300.0 * np.abs(np.random.default_rng(1).normal(size=60))
    with pytest.raises(CallError, match="no straight part"):
        curve_modulus.modulus(strain, scatter)
    with pytest.raises(CallError, match="no straight part"):
        curve_modulus.modulus(strain[:4], 70e3 * strain[:4])
    with pytest.raises(CallError, match="fewer than three points"):
        curve_modulus.modulus(strain, 70e3 * strain, 100.0, 101.0)
    with pytest.raises(CallError, match="both low and high, the ends"):
        curve_modulus.modulus(strain, 70e3 * strain, 100.0)
    with pytest.raises(CallError, match="low must be below high"):
        curve_modulus.modulus(strain, 70e3 * strain, 200.0, 100.0)
    with pytest.raises(CallError, match="give strains and stresses as magnitudes"):
        curve_modulus.modulus(-strain, -70e3 * strain)
    with pytest.raises(CallError, match="equally long"):
        curve_modulus.modulus(strain, 70e3 * strain[1:])
    with pytest.raises(CallError, match="three points"):
        curve_modulus.modulus(strain[:1], 70e3 * strain[:1] + 1.0, 0.0, 2.0)


def test_an_unloading_loop_must_be_taken_out() -> None:
    stress = np.concatenate([np.linspace(0, 200, 20), np.linspace(195, 20, 15), np.linspace(25, 400, 40)])
    with pytest.raises(CallError, match="unloading loops"):
        curve_modulus.modulus(stress / 70e3, stress)


def test_lanes_are_independent() -> None:
    strain, stress = metal()
    strains = np.stack([strain, strain * 2.0, strain[::-1], strain])
    stresses = np.stack([stress, stress, stress, stress * 0.5])
    with pytest.raises(CallError):
        curve_modulus.modulus(strains, stresses)
    keep = [0, 1, 3]
    found = curve_modulus.modulus(strains[keep], stresses[keep])
    assert found == pytest.approx([curve_modulus.modulus(strains[k], stresses[k]) for k in keep], rel=1e-12)
    windows = curve_modulus.modulus(strain, stress, np.array([0.0, 50.0]), np.array([100.0, 150.0]))
    assert windows == pytest.approx(
        [curve_modulus.modulus(strain, stress, 0.0, 100.0), curve_modulus.modulus(strain, stress, 50.0, 150.0)],
        rel=1e-12,
    )


def test_force_and_extension_are_made_a_curve_in_the_same_formula() -> None:
    mechanics.load()
    found = cell(
        '=CURVE_MODULUS(STRAIN_ENGINEERING({"0 mm";"0.05 mm";"0.1 mm";"0.15 mm";"0.2 mm"},"50 mm"),'
        'STRESS_AXIAL({"0 kN";"5.6 kN";"11.2 kN";"16.8 kN";"22.4 kN"},"80 mm^2"),,,"GPa")'
    )
    assert found == pytest.approx(70.0)


def test_chord_secant_and_tangent_of_a_known_curve() -> None:
    strain, stress = metal(count=30001)
    at = 380.0
    e = at / 70e3 + 0.002 * (at / 400.0) ** 20
    assert curve_slopes.secant_modulus(strain, stress, at) == pytest.approx(at / e, rel=1e-6)
    assert curve_slopes.secant_modulus(strain + 0.001, stress, at, 0.001) == pytest.approx(at / e, rel=1e-6)
    slope = 1.0 / (1.0 / 70e3 + 0.002 * 20.0 / 400.0 * (at / 400.0) ** 19)
    assert curve_slopes.tangent_modulus(strain, stress, at, 0.5) == pytest.approx(slope, rel=1e-3)
    assert curve_slopes.chord_modulus(strain, stress, 0.001, 0.003) == pytest.approx(70e3, rel=1e-3)


def test_slopes_refuse_what_lies_off_the_curve() -> None:
    strain, stress = metal(count=100)
    with pytest.raises(CallError, match="last lies outside"):
        curve_slopes.chord_modulus(strain, stress, 0.001, 0.5)
    with pytest.raises(CallError, match="first lies outside"):
        curve_slopes.chord_modulus(strain, stress, -0.001, 0.003)
    with pytest.raises(CallError, match="stress lies outside"):
        curve_slopes.secant_modulus(strain, stress, 431.0)
    with pytest.raises(CallError, match="beyond the toe"):
        curve_slopes.secant_modulus(strain, stress, 100.0, 0.1)
    with pytest.raises(CallError, match="widen it"):
        curve_slopes.tangent_modulus(strain, stress, 100.0, 1.0)


@settings(max_examples=20)
@given(st.floats(0.1, 0.9), st.floats(-0.001, 0.001))
def test_poissons_ratio_takes_no_notice_of_a_gauges_zero(ratio: float, zero: float) -> None:
    strain, stress = metal(count=60, top=300.0)
    assert curve_gauges.poisson(strain, zero - ratio * strain, stress) == pytest.approx(ratio, rel=1e-8)


def test_shear_of_a_45_degree_strip() -> None:
    shear = np.linspace(0.0, 0.08, 400)
    tau = 60.0 * np.tanh(shear * 5000.0 / 60.0)
    axial, across = 0.55 * shear, -0.45 * shear
    expected = (np.interp(0.006, shear, tau) - np.interp(0.002, shear, tau)) / 0.004
    assert curve_gauges.shear_modulus_45(axial, across, 2.0 * tau) == pytest.approx(expected, rel=1e-12)
    limit = curve_gauges.shear_strength_45(axial, across, 2.0 * tau, 0.01)
    assert limit == pytest.approx(np.interp(0.01, shear, tau), rel=1e-12)
    assert curve_gauges.shear_strength_45(axial[:40], across[:40], 2.0 * tau[:40]) == pytest.approx(tau[39])
    with pytest.raises(CallError, match="last lies outside the shear strains"):
        curve_gauges.shear_modulus_45(axial[:20], across[:20], tau[:20])
    with pytest.raises(CallError, match="equally long"):
        curve_gauges.shear_modulus_45(axial, across[:20], tau)
