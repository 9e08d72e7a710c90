import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler.catalogue import CallError, cell
from doubler.errors import InputError
from doubler.mechanics import hooke, hooke_strain, moduli, moduli_effective, moduli_sonic

RATIO = st.floats(-0.4, 0.45)


@settings(max_examples=40)
@given(st.floats(1.0, 1e6), st.floats(-0.4, 0.33))
def test_plane_strain_and_plane_stress_undo_each_other(young: float, ratio: float) -> None:
    there = moduli_effective.plane_strain(young, ratio)
    ratio_there = ratio / (1.0 - ratio)
    assert moduli_effective.plane_strain_ratio(ratio) == pytest.approx(ratio_there, rel=1e-14)
    back = there * (1 + 2 * ratio_there) / (1 + ratio_there) ** 2
    assert back == pytest.approx(young, rel=1e-12)
    assert moduli_effective.plane_stress(young, ratio) == pytest.approx(young * (1 + 2 * ratio) / (1 + ratio) ** 2)
    assert moduli_effective.plane_stress_ratio(ratio_there) == pytest.approx(ratio, abs=1e-15)


@settings(max_examples=30)
@given(RATIO, st.floats(-300, 300), st.floats(-300, 300))
def test_the_effective_constants_turn_hookes_law_of_plane_stress_into_plane_strain(ratio, x, y) -> None:
    young = 200e3
    strains = hooke_strain.plane_strain(x, y, 50.0, young, ratio)
    effective, effective_ratio = young / (1 - ratio**2), ratio / (1 - ratio)
    assert effective == pytest.approx(moduli_effective.plane_strain(young, ratio), rel=1e-15)
    by_plane_stress = [(x - effective_ratio * y) / effective, (y - effective_ratio * x) / effective]
    assert list(strains[:2]) == pytest.approx(by_plane_stress, abs=1e-15)
    shear = 2 * (1 + effective_ratio) / effective * 50.0
    assert strains[2] == pytest.approx(shear, rel=1e-12)


def test_biaxial_modulus_is_hookes_law_with_both_strains_alike() -> None:
    sx, sy, _ = hooke.plane_stress(1e-3, 1e-3, 0.0, 70e3, 0.33)
    assert sx == pytest.approx(sy)
    assert sx == pytest.approx(1e-3 * moduli_effective.biaxial(70e3, 0.33), rel=1e-14)


def test_contact_modulus_is_symmetric_and_that_of_the_soft_body_against_a_stiff_one() -> None:
    one, other = (70e3, 0.33), (210e3, 0.3)
    assert moduli_effective.contact(*one, *other) == pytest.approx(moduli_effective.contact(*other, *one), rel=1e-15)
    assert moduli_effective.contact(70e3, 0.33, 1e15, 0.3) == pytest.approx(70e3 / (1 - 0.33**2), rel=1e-9)


@pytest.mark.parametrize(("temperature", "expected"), [(20, 70.0), (60, 67.9), (125, 64.4), (150, 63.0)])
def test_a_factor_is_read_between_its_neighbours(temperature: float, expected: float) -> None:
    formula = f'=MODULUS_AT_TEMPERATURE("70 GPa","{temperature} °C",{{"20 °C";"100 °C";"150 °C"}},{{1;0.94;0.9}},"GPa")'
    assert cell(formula) == pytest.approx(expected)


def test_a_table_in_one_scale_serves_a_temperature_in_the_other() -> None:
    formula = '=MODULUS_AT_TEMPERATURE("10 Msi","140 °F",{"20 °C";"100 °C"},{1;0.94},"Msi")'
    assert cell(formula) == pytest.approx(9.7)


@pytest.mark.parametrize("temperature", [19.99, 150.01])
def test_a_temperature_outside_the_table_is_refused(temperature: float) -> None:
    with pytest.raises(CallError, match="no extrapolation"):
        moduli_effective.at_temperature(70e3, temperature, [20.0, 100.0, 150.0], [1.0, 0.94, 0.9])


@pytest.mark.parametrize(
    ("temperatures", "factors", "why"),
    [
        ([20.0, 20.0], [1.0, 0.9], "twice"),
        ([20.0, 100.0, 50.0], [1.0, 0.9, 0.8], "throughout"),
        ([20.0, 100.0], [1.0, 0.9, 0.8], "equally long"),
        ([20.0, 100.0], [100.0, 94.0], "table_factor"),
        ([20.0, 100.0], [1.0, 0.0], "table_factor"),
    ],
)
def test_a_bad_table_is_refused(temperatures, factors, why: str) -> None:
    with pytest.raises((CallError, InputError), match=why):
        moduli_effective.at_temperature(70e3, 20.0, temperatures, factors)


@settings(max_examples=40)
@given(st.floats(10.0, 500.0), RATIO, st.floats(1000.0, 2e4))
def test_speeds_of_a_known_material_give_its_constants_back(young: float, ratio: float, density: float) -> None:
    young *= 1e9
    shear = young / (2 * (1 + ratio))
    p_wave = young * (1 - ratio) / ((1 + ratio) * (1 - 2 * ratio))
    long, across = np.sqrt(p_wave / density), np.sqrt(shear / density)
    assert moduli_sonic.young(density, long, across) == pytest.approx(young, rel=1e-12)
    assert moduli_sonic.shear(density, across) == pytest.approx(shear, rel=1e-12)
    assert moduli_sonic.p_wave(density, long) == pytest.approx(p_wave, rel=1e-12)
    assert moduli_sonic.poisson(long, across) == pytest.approx(ratio, abs=1e-12)
    bulk = moduli.bulk_modulus(shear=shear, p_wave=p_wave)
    assert moduli_sonic.bulk(density, long, across) == pytest.approx(bulk, rel=1e-11)
    assert moduli_sonic.rod(density, np.sqrt(young / density)) == pytest.approx(young, rel=1e-12)


def test_exchanged_speeds_are_refused() -> None:
    for function in (moduli_sonic.young, moduli_sonic.bulk):
        with pytest.raises(CallError, match="not exchanged"):
            function(2700.0, 3000.0, 6000.0)
    with pytest.raises(CallError, match="not exchanged"):
        moduli_sonic.poisson(1.15, 1.0)
