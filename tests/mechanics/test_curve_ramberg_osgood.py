"""The Ramberg–Osgood curve: round trip, slopes by differences, fit of made records."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq

from doubler.catalogue import CallError
from doubler.mechanics import curve_ramberg_osgood as ro
from doubler.mechanics import curve_ramberg_osgood_fit as ro_fit

MODULUS, PROOF = st.floats(1e3, 5e5), st.floats(5.0, 2500.0)
EXPONENT = st.one_of(st.floats(1.0, 60.0), st.sampled_from([1.0, 200.0, 1000.0]))
RATIO = st.floats(0.0, 1.6)


@settings(max_examples=200)
@given(MODULUS, PROOF, EXPONENT, RATIO, st.sampled_from([0.002, 0.0001, 0.01]), st.sampled_from([1.0, -1.0]))
def test_stress_and_strain_go_round(
    modulus: float, proof: float, exponent: float, ratio: float, offset: float, sign: float
) -> None:
    stress = sign * min(ratio, 1.6 ** (20.0 / max(exponent, 20.0))) * proof
    strain = ro.strain(stress, modulus, proof, exponent, offset)
    assert ro.stress(strain, modulus, proof, exponent, offset) == pytest.approx(stress, rel=1e-12, abs=1e-12)


@settings(max_examples=100)
@given(MODULUS, PROOF, EXPONENT, st.floats(1e-9, 0.5))
def test_the_inverse_agrees_with_bracketed_root_finding(
    modulus: float, proof: float, exponent: float, strain: float
) -> None:
    top = min(strain * modulus, proof * (strain / 0.002) ** (1.0 / exponent)) * 1.001

    def off(stress: float) -> float:
        return stress / modulus + 0.002 * (stress / proof) ** exponent - strain

    known = brentq(off, 0.0, top, xtol=1e-14 * top, rtol=1e-14)
    assert ro.stress(strain, modulus, proof, exponent) == pytest.approx(known, rel=1e-11)


def test_a_million_lanes_go_round_at_once() -> None:
    random = np.random.default_rng(2)
    lanes = 200_000
    stress, exponent = random.uniform(-500.0, 500.0, lanes), random.uniform(1.0, 50.0, lanes)
    strain = ro.strain(stress, 70e3, 400.0, exponent)
    np.testing.assert_allclose(ro.stress(strain, 70e3, 400.0, exponent), stress, rtol=1e-12, atol=1e-12)


@settings(max_examples=30)
@given(st.floats(2.0, 40.0), st.floats(0.05, 1.1))
def test_moduli_are_the_slopes_of_the_curve(exponent: float, ratio: float) -> None:
    stress, step = 400.0 * ratio, 400.0 * ratio * 1e-5
    around = [ro.strain(stress + s, 70e3, 400.0, exponent) for s in (-step, step)]
    assert ro.tangent(stress, 70e3, 400.0, exponent) == pytest.approx(2.0 * step / (around[1] - around[0]), rel=1e-6)
    strain = ro.strain(stress, 70e3, 400.0, exponent)
    assert ro.secant(stress, 70e3, 400.0, exponent) == pytest.approx(stress / strain, rel=1e-12)
    assert ro.secant(-stress, 70e3, 400.0, exponent) == ro.secant(stress, 70e3, 400.0, exponent)
    assert ro.plastic_strain(stress, 400.0, exponent) == pytest.approx(strain - stress / 70e3, rel=1e-8)


def test_at_zero_both_moduli_are_youngs_and_at_the_proof_stress_the_plastic_strain_is_the_offset() -> None:
    assert ro.secant(0.0, 70e3, 400.0, 20.0) == ro.tangent(0.0, 70e3, 400.0, 20.0) == 70e3
    assert ro.stress(0.0, 70e3, 400.0, 20.0) == 0.0
    assert ro.plastic_strain(-400.0, 400.0, 20.0) == -0.002
    assert ro.strain(400.0, 70e3, 400.0, 20.0, 0.001) == pytest.approx(400.0 / 70e3 + 0.001)


@settings(max_examples=40)
@given(st.floats(100.0, 1000.0), st.floats(3.0, 40.0))
def test_the_exponent_of_two_points_leads_through_both(proof: float, exponent: float) -> None:
    strength = proof * (0.05 / 0.002) ** (1.0 / exponent)
    assert ro.exponent(proof, strength, 0.05) == pytest.approx(exponent, rel=1e-9)
    e = 70e3
    s70, s85 = (
        brentq(lambda s, k=k: s / ro.strain(s, e, proof, exponent) - k * e, 1e-6, 3 * proof) for k in (0.7, 0.85)
    )
    assert ro.exponent_from_secants(s70, s85) == pytest.approx(exponent, rel=1e-6)


def test_limits_of_the_curve() -> None:
    for bad in (
        (1.0, 0.0, 400.0, 20.0),
        (1.0, 70e3, 0.0, 20.0),
        (1.0, 70e3, 400.0, 0.9),
        (1.0, 70e3, 400.0, 20.0, 0.0),
    ):
        for function in (ro.strain, ro.stress, ro.secant, ro.tangent):
            with pytest.raises(CallError, match="must be"):
                function(*bad)
    with pytest.raises(CallError, match="strength must be above proof_stress"):
        ro.exponent(400.0, 400.0, 0.05)
    with pytest.raises(CallError, match="uniform_strain above offset"):
        ro.exponent(400.0, 450.0, 0.001)
    with pytest.raises(CallError, match="stress_70 must be above"):
        ro.exponent_from_secants(400.0, 410.0)


@settings(max_examples=25)
@given(st.floats(6.0, 40.0), st.floats(200.0, 600.0), st.floats(-0.001, 0.003))
def test_the_fit_gives_back_the_curve_that_made_the_record(exponent: float, proof: float, toe: float) -> None:
    stress = np.linspace(0.0, proof * 10.0 ** (1.0 / exponent), 400)
    strain = ro.strain(stress, 70e3, proof, exponent) + toe
    low, high = 0.02 * proof, 0.25 * proof
    extra = (0.002, 0.0005, 0.02, low, high)
    assert ro_fit.fit_exponent(strain, stress, *extra) == pytest.approx(exponent, rel=2e-2)
    assert ro_fit.fit_proof(strain, stress, *extra) == pytest.approx(proof, rel=2e-3)
    assert ro_fit.fit_error(strain, stress, *extra) < 2e-3
    found = ro_fit.fit_exponent(np.stack([strain, strain]), np.stack([stress, 2.0 * stress]), *extra[:3])
    assert found[0] == pytest.approx(found[1], rel=1e-9)


def test_the_fit_error_tells_a_curve_of_another_shape() -> None:
    stress = np.linspace(0.0, 300.0, 200)
    strain = np.where(stress < 200.0, stress / 70e3, 200.0 / 70e3 + (stress - 200.0) / 3e3)
    assert ro_fit.fit_error(strain, stress, 0.002, 0.0005, 0.02, 0.0, 150.0) > 0.02


def test_the_fit_refuses_a_curve_without_enough_of_the_knee() -> None:
    stress = np.linspace(0.0, 200.0, 50)
    with pytest.raises(CallError, match="fewer than three points before its largest stress"):
        ro_fit.fit_exponent(stress / 70e3, stress)
    with pytest.raises(CallError, match="from_plastic must be below"):
        ro_fit.fit_exponent(stress / 70e3, stress, 0.002, 0.01, 0.001)
