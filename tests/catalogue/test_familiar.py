"""Calls of a known form give what the general way gives: the same number, the same error, the same reason."""

import itertools

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler import mechanics
from doubler.catalogue import call_cells, familiar, lookup
from doubler.hosts import conformance

mechanics.load()
NUMBERS = st.one_of(
    st.floats(-1e6, 1e6), st.sampled_from([0.0, -0.0, 1.0, 1e308, 1e-308, float("inf"), float("nan"), 50.0])
)
CALLS = {
    "STRESS_AXIAL": [
        lambda a, b: (a, b, "N-mm"),
        lambda a, b: ([[a, "kN"]], [[b, "mm^2"]], "MPa"),
        lambda a, b: (((a, "kip"),), ((b, "in^2"),)),
        lambda a, _: (a, "150 mm^2", "lbf-in"),
        lambda a, b: ([[a, "mm"]], b, "N-mm"),
        lambda a, b: (a, b),
    ],
    "MARGIN_OF_SAFETY": [lambda a, b: ([[a, "MPa"]], [[b, "MPa"]]), lambda a, b: ([[a, "MPa"]], [[b, "ksi"]], 1.5)],
    "SECTION_ROUND_AREA": [lambda a, b: (a, b, "N-mm"), lambda a, _: ([[a, "mm"]], None, "cm^2")],
    "UNIT_CONVERT": [lambda a, _: ([[a, "°C"]], "°F"), lambda a, _: ([[a, "kN"]], "lbf")],
}


def general(function, arguments, monkeypatch):
    with monkeypatch.context() as patch:
        patch.setattr(familiar, "form_of", lambda *_: None)
        return call_cells(function, arguments)


def same(one, other):
    left = [[repr(v) for v in row] for row in one.grid], one.reasons, one.unit
    return left == ([[repr(v) for v in row] for row in other.grid], other.reasons, other.unit)


@settings(max_examples=60)
@given(numbers=st.lists(st.tuples(NUMBERS, NUMBERS), min_size=2, max_size=5))
def test_numbers_of_every_kind_give_the_same(numbers) -> None:
    with pytest.MonkeyPatch.context() as patch:
        for name, forms in CALLS.items():
            function = lookup(name)
            if function is None:
                continue
            for form, (a, b) in itertools.product(forms, numbers):
                call_cells(function, form(7.0, 3.0))
                arguments = form(a, b)
                assert same(call_cells(function, arguments), general(function, arguments, patch)), (name, arguments)


def test_every_function_met_before_gives_the_same_for_other_numbers(monkeypatch) -> None:
    kept = 0
    for call in conformance.calls():
        if call.form not in ("pairs", "bare numbers and a set"):
            continue
        function = lookup(call.function)
        assert function is not None
        given_ = [a if a is None or len(a[0]) > 1 or len(a) > 1 else a[0][0] for a in call.arguments]
        call_cells(function, given_)
        for factor in (1.01, 0.5, -3.0):
            arguments = [changed(a, factor) for a in given_]
            form = familiar.form_of(function, arguments)
            kept += form is not None and familiar.answer(function, *form) is not None
            found, due = call_cells(function, arguments), general(function, arguments, monkeypatch)
            assert same(found, due), (call.function, arguments, found, due)
    assert kept > 500


def changed(argument, factor):
    if isinstance(argument, float):
        return argument * factor
    if (
        isinstance(argument, list)
        and len(argument) == 1
        and len(argument[0]) == 2
        and isinstance(argument[0][0], float)
    ):
        return [[argument[0][0] * factor, argument[0][1]]]
    return argument


def test_a_text_that_only_looks_like_a_quantity_is_not_taken_for_one() -> None:
    function = lookup("STRESS_AXIAL")
    assert function is not None
    call_cells(function, ("12 kN", "150 mm^2", "MPa"))
    for text in ("12,5 kN", "1e3 kN", "12  kN", "12kN", "١٢ kN"):
        form = familiar.form_of(function, (text, "150 mm^2", "MPa"))
        assert form is None or text in form[0]
    form = familiar.form_of(function, ("12.5 kN", "150 mm^2", "MPa"))
    assert form is not None
    assert form[1] == [12.5, 150.0]
