import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler.catalogue import CallError, cell
from doubler.errors import InputError
from doubler.mechanics import strain, strain_true

STRAINS = st.floats(-0.5, 0.5)


def test_a_strain_from_a_length_keeps_its_sign() -> None:
    assert cell('=STRAIN_ENGINEERING("-0.12 mm","200 mm","µε")') == -600.0


@pytest.mark.parametrize("length", ["0 mm", "-200 mm"])
def test_a_length_that_is_not_positive_is_refused(length: str) -> None:
    with pytest.raises(InputError, match="length must be positive"):
        cell(f'=STRAIN_ENGINEERING("0.12 mm","{length}")')


def test_a_part_shortened_by_its_whole_length_is_refused() -> None:
    with pytest.raises(InputError, match="whole length"):
        cell('=STRAIN_ENGINEERING("-10 mm","10 mm")')


@pytest.mark.parametrize(("ratio", "holds"), [(-0.99, True), (0.5, True), (-1.0, False), (0.51, False)])
def test_poissons_ratio_has_its_range(ratio: float, holds: bool) -> None:
    if holds:
        assert strain.transverse(1e-3, ratio) == pytest.approx(-ratio * 1e-3)
    else:
        with pytest.raises(CallError, match="poissons_ratio"):
            strain.transverse(1e-3, ratio)


def test_arrays_and_scalars_agree() -> None:
    stress = np.array([-120.0, 0.0, 300.0])
    assert strain.axial(stress, 200e3).tolist() == [strain.axial(float(s), 200e3) for s in stress]


@settings(max_examples=30)
@given(STRAINS, STRAINS, STRAINS)
def test_the_finite_change_of_volume_is_the_ratio_of_volumes(x: float, y: float, z: float) -> None:
    expected = float(np.prod(1.0 + np.array([x, y, z]))) - 1.0
    assert strain.volumetric_finite(x, y, z) == pytest.approx(expected, abs=1e-12)


@settings(max_examples=30)
@given(STRAINS)
def test_true_and_engineering_strain_go_round(value: float) -> None:
    there = strain_true.true_strain(value)
    assert strain_true.engineering_strain(there) == pytest.approx(value, rel=1e-12, abs=1e-300)
    stress = strain_true.true_stress(400.0, value)
    assert strain_true.engineering_stress(stress, there) == pytest.approx(400.0, rel=1e-12)


def test_true_strain_from_length_and_from_area_agree_where_the_volume_stays() -> None:
    assert strain_true.true_from_area(100.0, 100.0 / 1.25) == pytest.approx(strain_true.true_strain(0.25), rel=1e-14)


@pytest.mark.parametrize(
    "formula",
    [
        '=STRAIN_TRUE("21 %","20 %")',
        '=STRAIN_ENGINEERING_FROM_TRUE("21 %","20 %")',
        '=STRESS_TRUE("400 MPa","21 %","20 %","MPa")',
        '=STRESS_ENGINEERING("400 MPa","21 %","20 %","MPa")',
    ],
)
def test_beyond_necking_there_is_no_conversion(formula: str) -> None:
    with pytest.raises(InputError, match="beyond necking"):
        cell(formula)
    assert cell(formula.replace('"21 %"', '"20 %"'))


def test_a_strain_of_minus_one_has_no_true_strain() -> None:
    with pytest.raises(CallError, match="above -1"):
        strain_true.true_strain(-1.0)


def test_shear_and_thermal_strains_follow_their_stress_and_their_heating() -> None:
    assert strain.shear(-80.0, 80e3) == pytest.approx(-1e-3)
    assert strain.thermal(12e-6, -50.0) == pytest.approx(-6e-4)
    assert cell('=STRAIN_THERMAL("10 µm/m/K","18 Δ°F","µε")') == pytest.approx(100.0)
