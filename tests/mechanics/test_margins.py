"""Margins of one load against one allowable: signs, factors, and what has no margin."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler import mechanics
from doubler.catalogue.formula_text import evaluate_text
from doubler.errors import ErrorValue, InputError
from doubler.mechanics import margins

mechanics.load()

SIZES = st.floats(1.0, 1e3)
FACTORS = st.floats(1.0, 4.0)
BY_MAGNITUDE = [margins.strength, margins.yielding, margins.ultimate, margins.stability, margins.reserve_factor]


@pytest.mark.parametrize("function", BY_MAGNITUDE, ids=lambda function: function.name)
def test_the_factor_of_safety_has_no_default(function) -> None:
    with pytest.raises(TypeError):
        function(200.0, 450.0)


@pytest.mark.parametrize("function", BY_MAGNITUDE, ids=lambda function: function.name)
def test_a_zero_load_has_no_margin_unless_a_cap_says_so(function) -> None:
    with pytest.raises(InputError, match="zero load"):
        function(0.0, 450.0, 1.5)
    assert function(0.0, 450.0, 1.5, cap=5.0) == 5.0


@pytest.mark.parametrize("function", BY_MAGNITUDE, ids=lambda function: function.name)
def test_a_zero_allowable_is_refused(function) -> None:
    with pytest.raises(InputError, match=r"zero|positive"):
        function(200.0, 0.0, 1.5)
    with pytest.raises(InputError, match=r"zero|positive"):
        function(200.0, 0.0, 1.5, cap=5.0)


@pytest.mark.parametrize("function", BY_MAGNITUDE, ids=lambda function: function.name)
@pytest.mark.parametrize("factor", ["safety", "fitting", "other"])
def test_a_factor_below_one_is_refused(function, factor: str) -> None:
    factors = {"safety": (0.9, 1.0, 1.0), "fitting": (1.5, 0.9, 1.0), "other": (1.5, 1.0, 0.9)}[factor]
    with pytest.raises(InputError, match="at least 1"):
        function(200.0, 450.0, *factors)


@pytest.mark.parametrize("function", BY_MAGNITUDE, ids=lambda function: function.name)
@given(applied=SIZES, allowable=SIZES, safety=FACTORS, fitting=FACTORS, other=FACTORS)
@settings(max_examples=30, deadline=None)
def test_load_grown_by_the_reserve_just_reaches_the_allowable(
    function, applied, allowable, safety, fitting, other
) -> None:
    found = function(applied, allowable, safety, fitting, other)
    reserve = found if function is margins.reserve_factor else found + 1.0
    assert applied * reserve * safety * fitting * other == pytest.approx(allowable, rel=1e-10)


def test_compression_stands_against_a_compressive_allowable_in_either_sign() -> None:
    assert margins.strength(-20.0, -45.0, 1.5) == margins.strength(-20.0, 45.0, 1.5) == pytest.approx(0.5)


@pytest.mark.parametrize("function", [margins.strength, margins.reserve_factor], ids=lambda function: function.name)
def test_tension_against_a_compressive_allowable_is_refused(function) -> None:
    with pytest.raises(InputError, match="compressive"):
        function(20.0, -45.0, 1.5)


@pytest.mark.parametrize("function", [margins.yielding, margins.ultimate, margins.stability], ids=lambda f: f.name)
def test_a_negative_allowable_is_refused(function) -> None:
    with pytest.raises(InputError, match="positive"):
        function(20.0, -45.0, 1.5)


def test_the_load_s_sign_chooses_the_allowable() -> None:
    found = margins.by_sign(np.array([200.0, -200.0]), 450.0, -330.0, 1.5)
    assert found == pytest.approx([0.5, 0.1])
    assert margins.by_sign(-200.0, 450.0, 330.0, 1.5) == pytest.approx(0.1)


def test_choice_by_sign_refuses_a_tension_allowable_that_is_negative_and_a_zero_load() -> None:
    with pytest.raises(InputError, match="tension_allowable"):
        margins.by_sign(200.0, -450.0, 330.0, 1.5)
    with pytest.raises(InputError, match="compression allowable"):
        margins.by_sign(200.0, 450.0, 0.0, 1.5)
    with pytest.raises(InputError, match="zero load"):
        margins.by_sign(0.0, 450.0, 330.0, 1.5)


@pytest.mark.parametrize("function", BY_MAGNITUDE, ids=lambda function: function.name)
def test_a_cap_hides_only_what_is_above_it(function) -> None:
    plain = function(np.array([10.0, 200.0, 900.0]), 450.0, 1.5)
    capped = function(np.array([10.0, 200.0, 900.0]), 450.0, 1.5, cap=2.0)
    assert capped == pytest.approx(np.minimum(plain, 2.0))


@pytest.mark.parametrize("function", BY_MAGNITUDE, ids=lambda function: function.name)
def test_arrays_agree_with_scalars(function) -> None:
    loads = np.array([-300.0, -10.0, 5.0, 250.0])
    assert list(function(loads, 450.0, 1.5)) == [function(load, 450.0, 1.5) for load in loads]


def test_a_deflection_has_its_own_margin() -> None:
    assert margins.stiffness(-1.6, 2.0) == pytest.approx(0.25)
    with pytest.raises(InputError, match="zero deflection"):
        margins.stiffness(0.0, 2.0)
    with pytest.raises(InputError, match="limit must be positive"):
        margins.stiffness(1.6, 0.0)


def test_one_case_without_a_margin_is_an_error_and_spares_the_others() -> None:
    found = evaluate_text('=MARGIN_STRENGTH({"200 MPa";"0 MPa";"300 MPa"}, "450 MPa", 1.5)')
    assert found.grid == [[0.5], [ErrorValue.NUM], [0.0]]
    assert "zero load" in found.reasons[0]


def test_load_and_allowable_of_unlike_kind_are_refused() -> None:
    found = evaluate_text('=MARGIN_STRENGTH("200 MPa", "45 kN", 1.5)')
    assert found.grid == [[ErrorValue.VALUE]]
    assert "allowable is in kN and applied in MPa" in found.reasons[0]


def test_unlike_units_of_one_kind_are_brought_together() -> None:
    assert evaluate_text('=MARGIN_STRENGTH("10 ksi", "68.94757293168361 MPa", 1)').grid[0][0] == pytest.approx(0.0)
