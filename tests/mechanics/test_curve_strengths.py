"""Strengths, elongations and energies of test curves."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad

from doubler.catalogue import CallError, cell
from doubler.mechanics import curve_ductility, curve_elongation, curve_strength


def metal(modulus=70e3, proof=400.0, exponent=20.0, top=430.0, count=1500, toe=0.0):
    stress = np.linspace(0.0, top, count)
    return stress / modulus + 0.002 * (stress / proof) ** exponent + toe, stress


def steel() -> tuple[np.ndarray, np.ndarray]:
    """A curve with a yield point: 310 upper, 280 lower, 420 at most, break at 300."""
    elastic = np.linspace(0.0, 310.0, 60)
    strain = np.concatenate(
        [
            elastic / 200e3,
            [0.0018, 0.0025],
            np.linspace(0.003, 0.02, 30),
            np.linspace(0.021, 0.3, 300),
            [0.3001, 0.3001],
        ]
    )
    plateau = 285.0 + 2.0 * np.sin(np.linspace(0.0, 20.0, 30))
    harden = 420.0 - 135.0 * (np.linspace(-0.8, 1.0, 300) - 0.3) ** 2 / 1.1**2
    harden = np.where(
        np.linspace(-0.8, 1.0, 300) < 0.3, harden, 420.0 - 245.0 * (np.linspace(-0.8, 1.0, 300) - 0.3) ** 2
    )
    return strain, np.concatenate([elastic, [282.0, 280.0], plateau, harden, [100.0, 0.0]])


@settings(max_examples=30)
@given(st.floats(8.0, 40.0), st.floats(0.0005, 0.004), st.floats(-0.001, 0.005))
def test_proof_stress_of_a_ramberg_osgood_curve_is_its_definition(exponent: float, offset: float, toe: float) -> None:
    expected = 400.0 * (offset / 0.002) ** (1.0 / exponent)
    strain, stress = metal(exponent=exponent, top=1.1 * expected, toe=toe)
    found = curve_strength.proof_stress(strain, stress, offset, 20.0, 100.0)
    assert found == pytest.approx(expected, rel=2e-4)
    assert curve_strength.proof_stress(strain, stress, offset) == pytest.approx(expected, rel=2e-3)


def test_a_curve_that_ends_or_breaks_before_the_offset_has_no_proof_stress() -> None:
    strain, stress = metal(top=380.0)
    with pytest.raises(CallError, match="ends or breaks before it crosses"):
        curve_strength.proof_stress(strain, stress)
    broken = np.append(strain, [strain[-1], strain[-1] + 0.0001]), np.append(stress, [30.0, 0.0])
    with pytest.raises(CallError, match="ends or breaks before it crosses"):
        curve_strength.proof_stress(*broken)
    one = np.append(strain, strain[-1] + 0.003), np.append(stress, 0.0)
    with pytest.raises(CallError, match="ends or breaks before it crosses"):
        curve_strength.proof_stress(*one)
    with pytest.raises(CallError, match="offset must be positive"):
        curve_strength.proof_stress(*metal(), 0.0)


def test_yield_point() -> None:
    strain, stress = steel()
    assert curve_strength.upper_yield(strain, stress) == 310.0
    assert curve_strength.lower_yield(strain, stress) == 280.0
    assert 282.5 < curve_strength.lower_yield(strain, stress, 0.002) < 284.0
    assert curve_strength.strength(stress) == pytest.approx(420.0, abs=0.01)
    both = curve_strength.upper_yield(np.stack([strain, strain]), np.stack([stress, stress * 2.0]))
    assert both == pytest.approx([310.0, 620.0])
    with pytest.raises(CallError, match="no finite result"):
        curve_strength.lower_yield(strain, stress, 0.5)


def test_a_round_curve_and_a_drop_at_the_strength_are_no_yield_point() -> None:
    strain, stress = metal()
    with pytest.raises(CallError, match="has no yield point"):
        curve_strength.upper_yield(strain, stress)
    necked = np.append(strain, strain[-1] + np.linspace(0.001, 0.05, 20)), np.append(stress, np.linspace(429, 350, 20))
    with pytest.raises(CallError, match="has no yield point"):
        curve_strength.upper_yield(*necked)
    noisy = stress + 0.4 * np.random.default_rng(5).normal(size=stress.size)
    with pytest.raises(CallError, match="has no yield point"):
        curve_strength.lower_yield(strain, noisy)


@pytest.mark.parametrize("toe", [0.0, 0.004])
def test_elongations_of_the_steel_whatever_its_toe(toe: float) -> None:
    strain, stress = steel()
    top, end = int(np.argmax(stress)), stress.size - 3
    for part, share in (("plastic", 1.0), ("total", 0.0)):
        uniform = curve_elongation.uniform_elongation(strain + toe, stress, part)
        assert uniform == pytest.approx(strain[top] - share * stress[top] / 200e3, abs=1e-6)
        broken = curve_elongation.break_elongation(strain + toe, stress, part)
        assert broken == pytest.approx(strain[end] - share * stress[end] / 200e3, abs=1e-6)


@pytest.mark.parametrize(
    ("tail", "expected"),
    [
        ([300.0, 310.0], 310.0),
        ([300.0, 310.0, 0.0], 310.0),
        ([300.0, 310.0, 150.0, 0.0, 0.0], 310.0),
        ([300.0, 310.0, 305.0, 290.0, 3.0], 290.0),
        ([310.0, 300.0, 280.0, 250.0], 250.0),
        ([300.0, 310.0, 309.0, 270.0], 270.0),
        ([310.0, 250.0, 190.0, 120.0, 60.0, 2.0, 0.0], 60.0),
        ([310.0, 305.0, 240.0, 245.0, 250.0, 240.0, 200.0], 200.0),
    ],
)
def test_the_break_is_told_from_necking_and_from_a_yield_drop(tail: list[float], expected: float) -> None:
    stress = np.array([0.0, 50.0, 100.0, 150.0, 200.0, 250.0, *tail])
    strain = stress[:6] / 100e3
    strain = np.append(strain, 0.005 + 0.001 * np.arange(len(tail)))
    at = 6 + tail.index(expected) if expected in tail else 6
    total = curve_elongation.break_elongation(strain, stress, "total", 0.0, 260.0)
    assert total == pytest.approx(strain[at], rel=1e-9)


def test_energies_agree_with_an_integral() -> None:
    strain, stress = metal(count=4000)
    up_to = 380.0
    energy, _ = quad(lambda s: s * (1.0 / 70e3 + 0.002 * 20.0 / 400.0 * (s / 400.0) ** 19), 0.0, up_to)
    assert curve_elongation.resilience(strain, stress, up_to) == pytest.approx(energy, rel=1e-6)
    whole, _ = quad(lambda s: s * (1.0 / 70e3 + 0.002 * 20.0 / 400.0 * (s / 400.0) ** 19), 0.0, 430.0)
    assert curve_elongation.toughness(strain, stress) == pytest.approx(whole, rel=1e-6)
    fallen = np.append(strain, strain[-1] + 0.1), np.append(stress, 0.0)
    assert curve_elongation.toughness(*fallen) == pytest.approx(whole, rel=1e-6)
    assert curve_elongation.resilience(strain, stress, np.array([100.0, 200.0])) == pytest.approx(
        [100.0**2 / 140e3, 200.0**2 / 140e3], rel=1e-5
    )
    with pytest.raises(CallError, match="stress lies outside"):
        curve_elongation.resilience(strain, stress, 500.0)


def test_the_ductility_rule_includes_its_limit_and_works_on_columns() -> None:
    assert curve_ductility.ductility(0.05) == "ductile"
    assert cell('=CURVE_DUCTILITY({"12 %";"4.9 %"})') == [["ductile"], ["brittle"]]
    with pytest.raises(CallError, match="elongation must not be negative"):
        curve_ductility.ductility(-0.01)


@settings(max_examples=20)
@given(st.floats(0.02, 0.6))
def test_considere_the_strength_is_the_top_of_the_engineering_curve(n: float) -> None:
    true = np.linspace(1e-3, 2.0 * n, 20001)
    engineering = 500.0 * true**n * np.exp(-true)
    assert curve_ductility.flow_strength(500.0, n) == pytest.approx(engineering.max(), rel=1e-6)
    necking = np.log1p(curve_ductility.flow_necking_strain(n))
    assert necking == pytest.approx(true[np.argmax(engineering)], rel=1e-3)
    assert curve_ductility.flow_stress(n, 500.0, n) == pytest.approx(500.0 * n**n)
    with pytest.raises(CallError, match="beyond necking"):
        curve_ductility.flow_stress(1.01 * n, 500.0, n)


def test_an_area_that_grows_in_tension_is_refused() -> None:
    with pytest.raises(CallError, match="must not be above first_area"):
        curve_elongation.reduction_of_area(80.0, 81.0)
