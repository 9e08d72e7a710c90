import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler.catalogue import CallError, cell
from doubler.errors import InputError
from doubler.mechanics import gauge_bridges, gauges

RATIO = 0.3
# Strain of each arm, in units of ε, with 1 and 2 neighbours and 1 and 3 opposite.
ARMS = {
    "quarter": (1, 0, 0, 0),
    "half bending": (1, -1, 0, 0),
    "half axial": (1, -RATIO, 0, 0),
    "half opposite": (1, 0, 1, 0),
    "full bending": (1, -1, 1, -1),
    "full axial": (1, -RATIO, 1, -RATIO),
    "full bending poisson": (1, -1, RATIO, -RATIO),
}


def wheatstone(strain: float, factor: float, bridge: str) -> float:
    """Solve the two dividers of the bridge with their four resistances."""
    one, two, three, four = (350.0 * (1 + factor * strain * part) for part in ARMS[bridge])
    return one / (one + two) - four / (three + four)


@pytest.mark.parametrize("bridge", ARMS)
@settings(max_examples=25)
@given(strain=st.floats(-0.04, 0.04), factor=st.floats(1.8, 2.4))
def test_a_bridge_gives_what_its_four_resistances_give_and_goes_round(bridge, strain, factor) -> None:
    found = gauge_bridges.output(strain, factor, bridge, RATIO)
    assert found == pytest.approx(wheatstone(strain, factor, bridge), abs=1e-15)
    assert abs(found) < 0.1
    assert gauge_bridges.strain(found, factor, bridge, RATIO) == pytest.approx(strain, abs=1e-14)


@pytest.mark.parametrize("bridge", ["half axial", "full axial", "full bending poisson"])
def test_a_bridge_with_gauges_across_asks_for_poissons_ratio(bridge: str) -> None:
    with pytest.raises(CallError, match="give poissons_ratio"):
        gauge_bridges.output(1e-3, 2.0, bridge)
    with pytest.raises(CallError, match="give poissons_ratio"):
        gauge_bridges.strain(1e-3, 2.0, bridge)


def test_a_bridge_without_a_name_of_its_own_is_refused() -> None:
    with pytest.raises(InputError, match='"full bending"'):
        cell('=STRAIN_FROM_BRIDGE("1 mV/V",2,"full")')


def test_millivolts_written_as_a_ratio_are_refused() -> None:
    with pytest.raises(InputError, match="voltage_ratio must be at least"):
        cell('=STRAIN_FROM_BRIDGE(1.2,2,"quarter")')


def test_a_strain_that_was_written_in_the_wrong_unit_is_refused() -> None:
    with pytest.raises(CallError, match="no gauge can follow"):
        gauge_bridges.output(1000.0, 2.0, "quarter")
    with pytest.raises(CallError, match="no gauge can follow"):
        gauge_bridges.output(-0.6, 2.0, "quarter")


def test_the_quarter_bridge_reads_low_in_tension_and_high_in_compression() -> None:
    assert gauge_bridges.output(0.01, 2.0, "quarter") < 0.005
    assert gauge_bridges.output(-0.01, 2.0, "quarter") < -0.005


def test_resistance_strain_and_factor_agree() -> None:
    factor = gauge_bridges.gauge_factor(0.152, 120.0, 5.4864e-4)
    assert gauge_bridges.from_resistance(0.152, 120.0, factor) == pytest.approx(5.4864e-4, rel=1e-14)
    with pytest.raises(CallError, match="must not be zero"):
        gauge_bridges.gauge_factor(0.1, 120.0, 0.0)


def test_a_shunt_feigns_the_strain_of_the_resistance_it_leaves() -> None:
    left = 1 / (1 / 350.0 + 1 / 100e3)
    expected = (left - 350.0) / 350.0 / 2.05
    assert gauge_bridges.shunt(350.0, 100e3, 2.05) == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize(("wires", "in_arm"), [("two", 2), ("three", 1)])
def test_lead_wires_take_their_share_of_the_gauge_factor(wires: str, in_arm: int) -> None:
    factor, strain, gauge, lead = 2.0, 1e-3, 350.0, 4.0
    change = gauge * factor * strain
    indicated = change / (gauge + in_arm * lead) / factor
    assert gauges.lead(indicated, lead, gauge, wires) == pytest.approx(strain, rel=1e-12)
    with pytest.raises(CallError, match="lead_resistance"):
        gauges.lead(indicated, -1.0, gauge, wires)


def test_the_gauge_factor_is_brought_to_the_gauges_own() -> None:
    assert gauges.gauge_factor(1050e-6, 2.0, 2.1) == pytest.approx(1e-3)
    assert gauges.factor_at(2.0, -1e-4, 50.0) == pytest.approx(1.99)
    with pytest.raises(CallError, match="unit of the coefficient"):
        gauges.factor_at(2.0, -0.02, 50.0)


def test_thermal_output_is_none_where_the_grid_suits_the_part() -> None:
    grown, grid = 23e-6, 15e-6
    suited = -2.0 * (grown - grid)
    assert gauges.thermal_output(suited, 2.0, grown, grid, 80.0) == pytest.approx(0.0, abs=1e-18)


def test_thermal_output_counts_what_the_gauge_feels_from_the_side() -> None:
    kt, nu0 = 0.03, 0.285
    mismatch = 10e-6 * 50.0
    both_ways = (mismatch + kt * mismatch) / (1 - nu0 * kt)
    assert gauges.thermal_output(0.0, 2.0, 23e-6, 13e-6, 50.0, kt, nu0) == pytest.approx(both_ways, rel=1e-12)


def test_thermal_output_is_taken_off_before_the_factor_is_corrected() -> None:
    # A gauge of factor 2.1 under 1000 µε, with a resistance change of 2.0 · 150 µε from temperature.
    change = 2.1 * 1000e-6 + 2.0 * 150e-6
    indicated = change / 1.9
    assert gauges.thermal_corrected(indicated, 150e-6, 1.9, 2.1) == pytest.approx(1000e-6, rel=1e-12)


def test_lanes_of_readings_are_kept_apart() -> None:
    readings = np.array([1e-3, -2e-3])
    both = gauge_bridges.strain(readings, 2.0, "half axial", 0.3)
    assert both.tolist() == [gauge_bridges.strain(float(v), 2.0, "half axial", 0.3) for v in readings]
