"""The Python call: plain numbers in consistent units, arrays, or pint quantities; and pickling."""

import pickle
import subprocess
import sys

import numpy as np
import pint
import pytest

from doubler import mechanics
from doubler.catalogue import CallError, Refusal, lookup, names
from doubler.catalogue.forms import ArgumentError
from doubler.errors import ErrorValue
from doubler.mechanics.axial import axial, direct_shear

mechanics.load()
UNITS = pint.UnitRegistry()
Q = UNITS.Quantity


def test_numbers_in_consistent_units_give_a_number() -> None:
    result = axial(12000.0, 150.0)
    assert result == 80.0
    assert type(result) is float
    assert axial(force=12000, area=150) == 80.0


def test_arrays_give_an_array_of_their_shape() -> None:
    np.testing.assert_array_equal(axial(np.array([12.0, 24.0]), 12.0), [1.0, 2.0])
    np.testing.assert_array_equal(axial([12.0, 24.0], [12.0, 12.0]), [1.0, 2.0])
    assert axial(np.ones((3, 2)), 2.0).shape == (3, 2)


def test_a_long_array_is_the_kernel_of_its_numbers() -> None:
    force = np.random.default_rng(3).normal(size=300_000)
    np.testing.assert_array_equal(axial(force, 3.0), force / 3.0)


def test_quantities_of_any_registry_give_a_quantity() -> None:
    stress = axial(Q(12.0, "kN"), Q(150.0, "mm**2"))
    assert stress.to("MPa").magnitude == pytest.approx(80.0, rel=1e-15)
    assert str(stress.units) == "megapascal"
    us = axial(Q(12.0, "kip"), Q(2.0, "inch**2"))
    assert (us.magnitude, str(us.units)) == (6.0, "kip_per_square_inch")


def test_quantities_of_arrays_keep_their_shape() -> None:
    stress = axial(Q(np.array([12.0, 24.0]), "kN"), Q(150.0, "mm**2"))
    np.testing.assert_allclose(stress.magnitude, [80.0, 160.0], rtol=1e-15)


def test_pure_numbers_may_stand_beside_quantities() -> None:
    assert direct_shear(Q(18.0, "kN"), Q(50.0, "mm**2"), 2.0).magnitude == pytest.approx(180.0)
    assert direct_shear(Q(18.0, "kN"), Q(50.0, "mm**2")).magnitude == pytest.approx(360.0)


@pytest.mark.parametrize(
    ("arguments", "says"),
    [
        ((Q(12.0, "kN"), 150.0), "area is a bare number beside quantities; give it a unit too"),
        ((Q(12.0, "pound"), Q(1.0, "mm**2")), "lb is a mass and a force is due; write lbf"),
        ((Q(12.0, "kN"), Q(1.0, "mm")), "mm is a length and an area is due"),
        ((Q(12.0, "kN"), Q(1.0, "acre")), "no factor of its own for pint's acre"),
        ((Q(12.0, "kN"), Q(-1.0, "mm**2")), "area must be positive; it is -1 mm^2"),
        ((1.0, 0.0), "area must be positive; it is 0"),
        ((np.nan, 1.0), "no finite result"),
        ((1e308, 1e-300), "no finite result"),
        ((1.0, np.array([1.0, np.nan])), "area must be positive; it is nan"),
    ],
)
def test_what_has_no_result_raises_with_the_reason(arguments: tuple[object, object], says: str) -> None:
    with pytest.raises(CallError) as caught:
        axial(*arguments)
    assert says in str(caught.value)
    assert str(caught.value).startswith("STRESS_AXIAL: ")


def test_all_bad_quantities_are_told_at_once() -> None:
    with pytest.raises(CallError) as caught:
        axial(Q(12.0, "pound"), Q(1.0, "mm"))
    assert len(caught.value.reasons) == 2


def test_missing_and_unknown_arguments_are_python_s_own_errors() -> None:
    with pytest.raises(TypeError):
        axial(1.0)
    with pytest.raises(TypeError):
        axial(1.0, 2.0, colour=3.0)


@pytest.mark.parametrize("name", names())
def test_a_record_is_the_same_object_after_pickling(name: str) -> None:
    function = lookup(name)
    assert pickle.loads(pickle.dumps(function)) is function


def test_a_record_finds_its_declaration_in_a_fresh_process() -> None:
    packed = pickle.dumps(axial).hex()
    code = f"import pickle; f = pickle.loads(bytes.fromhex('{packed}')); print(f.name, f(12000.0, 150.0))"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stdout.split() == ["STRESS_AXIAL", "80.0"]


def test_results_and_errors_can_be_pickled() -> None:
    from doubler.catalogue import call_cells

    result = call_cells(axial, ("12 kN", "150 mm^2"))
    assert pickle.loads(pickle.dumps(result)).grid == result.grid
    assert str(pickle.loads(pickle.dumps(Refusal("a reason")))) == "a reason"
    error = pickle.loads(pickle.dumps(CallError("STRESS_AXIAL", ["one", "two"])))
    assert error.reasons == ("one", "two")
    unread = pickle.loads(pickle.dumps(ArgumentError("a reason", ErrorValue.NA)))
    assert (str(unread), unread.value) == ("a reason", ErrorValue.NA)


def test_an_argument_left_out_keeps_its_default_beside_quantities() -> None:
    shear_out = lookup("STRESS_LUG_SHEAR_OUT")
    assert shear_out is not None
    given = [Q(30.0, "kN"), Q(20.0, "mm"), Q(16.0, "mm"), Q(8.0, "mm")]
    assert shear_out(*given).to("MPa").magnitude == shear_out(*given, Q(0.0, "deg")).to("MPa").magnitude
