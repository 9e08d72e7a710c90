"""Sizing by closed forms: putting the answer back in gives the wanted margin; factors of which one applies."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler import mechanics
from doubler.catalogue import call_cells, lookup
from doubler.errors import ErrorValue, InputError
from doubler.mechanics import margins, margins_factors, margins_sizing, sections_round

mechanics.load()
FEW = settings(max_examples=40, deadline=None)
LOAD, ALLOWABLE = st.floats(1.0, 1e5), st.floats(10.0, 2e3)
FACTOR, WANTED = st.floats(1.0, 2.5), st.floats(0.0, 3.0)


@given(allowable=ALLOWABLE, safety=FACTOR, fitting=FACTOR, wanted=WANTED, sign=st.sampled_from([-1.0, 1.0]))
@FEW
def test_the_largest_load_has_the_wanted_margin_and_the_allowable_s_sign(allowable, safety, fitting, wanted, sign):
    load = margins_sizing.largest_load(sign * allowable, safety, fitting, wanted)
    assert np.sign(load) == sign
    assert margins.strength(load, sign * allowable, safety, fitting) == pytest.approx(wanted, abs=1e-9)


@given(load=LOAD, safety=FACTOR, fitting=FACTOR, wanted=WANTED)
@FEW
def test_the_required_allowable_has_the_wanted_margin(load, safety, fitting, wanted) -> None:
    allowable = margins_sizing.required_allowable(-load, safety, fitting, wanted)
    assert margins.strength(-load, allowable, safety, fitting) == pytest.approx(wanted, abs=1e-9)


@given(load=LOAD, allowable=ALLOWABLE, safety=FACTOR, fitting=FACTOR, wanted=WANTED)
@FEW
def test_the_required_section_has_the_wanted_margin(load, allowable, safety, fitting, wanted) -> None:
    for function in (margins_sizing.required_area, margins_sizing.required_modulus):
        size = function(-load, allowable, safety, fitting, wanted)
        assert margins.strength(load / size, allowable, safety, fitting) == pytest.approx(wanted, abs=1e-9)


@given(moment=LOAD, torque=LOAD, bore=st.floats(0.0, 0.9), safety=FACTOR, wanted=WANTED)
@FEW
def test_the_required_shaft_has_the_wanted_margin(moment, torque, bore, safety, wanted) -> None:
    diameter = margins_sizing.required_shaft(moment, -torque, 300.0, safety, bore, 1.15, wanted)
    bending = moment / sections_round.section_modulus(diameter, bore * diameter)
    shear = torque * diameter / 2.0 / sections_round.torsion_constant(diameter, bore * diameter)
    stress = np.sqrt(bending**2 + 3.0 * shear**2)
    assert margins.strength(stress, 300.0, safety, 1.15) == pytest.approx(wanted, abs=1e-8)


@pytest.mark.parametrize(
    ("call", "word"),
    [
        (lambda: margins_sizing.largest_load(0.0, 1.5), "must not be zero"),
        (lambda: margins_sizing.largest_load(10.0, 0.9), "at least 1"),
        (lambda: margins_sizing.largest_load(10.0, 1.5, 1.0, -0.1), "margin must not be negative"),
        (lambda: margins_sizing.required_allowable(0.0, 1.5), "sizes the part"),
        (lambda: margins_sizing.required_area(0.0, 100.0, 1.5), "sizes the part"),
        (lambda: margins_sizing.required_area(10.0, -100.0, 1.5), "allowable must be positive"),
        (lambda: margins_sizing.required_modulus(0.0, 100.0, 1.5), "sizes the part"),
        (lambda: margins_sizing.required_shaft(0.0, 0.0, 100.0, 1.5), "sizes the part"),
        (lambda: margins_sizing.required_shaft(1.0, 0.0, 100.0, 1.5, 1.0), "bore_ratio must be"),
        (lambda: margins_factors.special_factor(np.array([1.25, 0.9])), "at least 1"),
        (lambda: margins_factors.total_factor(0.9, np.array([1.25])), "at least 1"),
    ],
)
def test_outside_its_range_there_is_no_result(call, word: str) -> None:
    with pytest.raises(InputError, match=word):
        call()


@given(factors=st.lists(st.floats(1.0, 3.0), min_size=1, max_size=6))
@FEW
def test_of_special_factors_the_highest_alone_applies(factors: list[float]) -> None:
    names = [f"factor {index}" for index in range(len(factors))]
    assert margins_factors.special_factor(np.array(factors)) == max(factors)
    assert factors[names.index(str(margins_factors.special_factor_name(np.array(factors), names)))] == max(factors)
    assert margins_factors.total_factor(1.5, np.array(factors), 1.1) == pytest.approx(1.65 * max(factors))


@pytest.mark.parametrize("bad", [ErrorValue.NA, ErrorValue.REF])
def test_an_error_among_the_factors_is_that_error(bad: ErrorValue) -> None:
    function = lookup("MARGIN_SPECIAL_FACTOR")
    assert function is not None
    assert call_cells(function, [[[1.25], [bad]]]).grid == [[bad]]
