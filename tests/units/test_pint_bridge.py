"""Quantities to pint and back: pint shows them, and decides no factor."""

import os
import subprocess
import sys

import numpy as np
import pint
import pytest

from doubler.units import UnitError, factor, from_pint, kind, parse_unit, to_pint
from doubler.units import pint_bridge as bridge
from doubler.units.table import atoms, pint_names

UNITS = pint.UnitRegistry()
# Bare unit strings that pint reads rightly, and ours beside them.
BARE = {
    "N": "N", "kN": "kN", "lbf": "lbf", "kip": "kip", "MPa": "MPa", "GPa": "GPa", "Pa": "Pa", "psi": "psi",
    "ksi": "ksi", "mm": "mm", "m": "m", "inch": "in", "foot": "ft", "thou": "mil", "kg": "kg", "pound": "lb",
    "slug": "slug",
    "second": "s", "hour": "h", "radian": "rad", "degree": "deg", "rpm": "rpm", "hertz": "Hz", "kelvin": "K",
    "delta_degC": "Δ°C", "delta_degF": "Δ°F", "joule": "J", "watt": "W", "volt": "V", "ohm": "Ω", "percent": "%",
    "bar": "bar", "kgf": "kgf", "turn": "rev", "microinch": "µin", "N/mm**2": "N/mm2", "kip/inch**2": "ksi",
    "lbf*inch": "in-lbf", "lbf*foot": "ft-lbf", "N*m": "Nm", "kN*m": "kNm", "1/kelvin": "1/K", "lbf/inch": "lbf/in",
    "lbf/inch**2": "psi", "inch**4": "in4", "pound/inch**3": "lb/in3", "kg/m**3": "kg/m3", "N*m/radian": "N·m/rad",
    "MPa*m**0.5": "MPa√m", "1/delta_degF": "1/°F", "mV/V": "mV/V", "kilopsi": "ksi", "metric_ton": "t",
}  # fmt: skip


@pytest.mark.parametrize(("pints", "ours"), BARE.items())
def test_a_pint_unit_is_ours_with_our_factor(pints: str, ours: str) -> None:
    value, unit = from_pint(UNITS.Quantity(2.5, pints))
    assert value == 2.5
    assert unit.dimension == parse_unit(ours).dimension
    assert factor(unit, parse_unit(ours)) == 1.0


@pytest.mark.parametrize(("pints", "ours"), BARE.items())
def test_our_factor_is_the_one_of_pint_to_its_rounding(pints: str, ours: str) -> None:
    one, zero = UNITS.Quantity(1.0, pints).to_base_units(), UNITS.Quantity(0.0, pints).to_base_units()
    assert parse_unit(ours).scale == pytest.approx(one.magnitude - zero.magnitude, rel=1e-12)


@pytest.mark.parametrize("symbol", sorted(pint_names()))
def test_every_unit_that_has_a_name_in_pint_comes_back(symbol: str) -> None:
    value, unit = from_pint(to_pint(3.0, atoms()[symbol]))
    assert value == 3.0
    assert unit == atoms()[symbol]


@pytest.mark.parametrize("text", ["N/mm2", "in-lbf", "kip·in", "1/GPa", "N·m/rad", "in4", "m/s2"])
def test_a_result_is_given_in_the_unit_asked_for_where_pint_has_it(text: str) -> None:
    quantity = to_pint(2.0, parse_unit(text))
    assert quantity.magnitude == 2.0
    assert from_pint(quantity)[1] == parse_unit(text)


@pytest.mark.parametrize("text", ["psf", "µε", "MPa√m", "ppm/°C"])
def test_where_pint_has_no_such_unit_the_result_is_in_base_units(text: str) -> None:
    value, unit = from_pint(to_pint(2.0, parse_unit(text)))
    assert unit.dimension == parse_unit(text).dimension
    assert value * unit.scale == pytest.approx(2.0 * parse_unit(text).scale, rel=1e-15)


def test_another_registry_with_other_factors_changes_nothing() -> None:
    odd = pint.UnitRegistry()
    odd.define("kip = 1001 * force_pound")
    assert from_pint(odd.Quantity(1.0, "kip"))[1].scale == parse_unit("kip").scale


def test_temperatures_keep_their_zero_and_differences_have_none() -> None:
    assert from_pint(UNITS.Quantity(20.0, "degC"))[1] == parse_unit("°C")
    assert from_pint(UNITS.Quantity(20.0, "delta_degC"))[1] == parse_unit("Δ°C")
    assert from_pint(UNITS.Quantity(1.0, "delta_degC/meter"))[1].offset == 0.0
    assert to_pint(68.0, parse_unit("°F")).to("degC").magnitude == pytest.approx(20.0)


def test_a_joule_is_an_energy_and_a_newton_metre_a_moment() -> None:
    assert kind("moment").accepts(from_pint(UNITS.Quantity(1.0, "joule"))[1]) is not None
    assert kind("moment").accepts(from_pint(UNITS.Quantity(1.0, "newton*meter"))[1]) is None


@pytest.mark.parametrize("name", ["furlong", "liter", "mole", "bit"])
def test_a_unit_without_a_factor_of_ours_is_refused(name: str) -> None:
    with pytest.raises(UnitError, match=f"no factor of its own for pint's {name}; convert"):
        from_pint(UNITS.Quantity(1.0, name))


def test_an_array_is_taken_as_it_is() -> None:
    given = np.array([1.0, 2.0])
    value, _ = from_pint(UNITS.Quantity(given, "kN"))
    assert value is given


def test_the_application_registry_is_left_as_it_was_found() -> None:
    before = pint.get_application_registry().get()
    to_pint(1.0, parse_unit("kN"))
    assert pint.get_application_registry().get() is before
    assert bridge.registry() is not before


def test_no_quantity_is_seen_where_nobody_imported_pint() -> None:
    code = "import sys; from doubler.units import is_pint_quantity as f; print(f(1.0), 'pint' in sys.modules)"
    done = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, text=True, check=True, env=dict(os.environ)
    )
    assert done.stdout.split() == ["False", "False"]
