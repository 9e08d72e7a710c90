"""The envelope: the lowest margin and its item; nothing that can't be computed drops out of it."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler import mechanics
from doubler.catalogue import call_cells, lookup
from doubler.catalogue.formula_text import evaluate_text
from doubler.errors import ErrorValue
from doubler.mechanics import margins_envelope

mechanics.load()

MARGINS = st.lists(st.floats(-1.0, 20.0), min_size=1, max_size=12)
NAMES = [["Check"], ["net section"], ["bearing"], ["shear-out"]]


def call(name: str, *arguments: object):
    function = lookup(name)
    assert function is not None
    return call_cells(function, arguments)


@given(values=MARGINS)
@settings(max_examples=40, deadline=None)
def test_the_governing_item_has_the_lowest_margin(values: list[float]) -> None:
    names = [f"item {index}" for index in range(len(values))]
    found = margins_envelope.governing(np.array(values), names)
    assert values[names.index(str(found))] == margins_envelope.envelope(np.array(values)) == min(values)
    assert margins_envelope.count_negative(np.array(values)) == sum(value < 0.0 for value in values)


def test_of_equal_margins_the_first_governs() -> None:
    assert margins_envelope.governing(np.array([0.5, 0.2, 0.2]), ["a", "b", "c"]) == "b"


@pytest.mark.parametrize("name", ["MARGIN_ENVELOPE", "MARGIN_GOVERNING", "MARGIN_COUNT_NEGATIVE"])
@pytest.mark.parametrize("bad", [ErrorValue.DIV0, ErrorValue.NA, ErrorValue.NUM])
def test_an_error_among_the_margins_is_that_error(name: str, bad: ErrorValue) -> None:
    more = [NAMES[1:]] if name == "MARGIN_GOVERNING" else []
    assert call(name, [[0.4], [bad], [-0.2]], *more).grid == [[bad]]


@pytest.mark.parametrize("name", ["MARGIN_ENVELOPE", "MARGIN_COUNT_NEGATIVE"])
@pytest.mark.parametrize("bad", ["n/a", None, True, "-"])
def test_text_a_logical_or_an_empty_cell_is_an_error_too(name: str, bad: object) -> None:
    found = call(name, [[0.4], [bad], [1.2]])
    assert found.grid == [[ErrorValue.VALUE]]
    assert "entry 2" in found.reasons[0]


def test_headings_stand_above_both_columns() -> None:
    assert call("MARGIN_GOVERNING", [["MS"], [0.4], [0.1], [1.2]], NAMES).grid == [["bearing"]]
    assert call("MARGIN_GOVERNING", [[0.4], [0.1], [1.2]], NAMES[1:]).grid == [["bearing"]]


def test_names_over_other_rows_are_refused() -> None:
    found = call("MARGIN_GOVERNING", [[0.4], [0.1]], [*NAMES[1:], ["more"]])
    assert found.grid == [[ErrorValue.VALUE]]
    assert "same rows" in found.reasons[0]


def test_an_error_upstream_reaches_the_envelope() -> None:
    found = evaluate_text('=MARGIN_ENVELOPE(MARGIN_STRENGTH({"200 MPa";"0 MPa"}, "450 MPa", 1.5))')
    assert found.grid == [[ErrorValue.NUM]]


def test_over_cases_each_lane_has_its_own_governing_item() -> None:
    lanes = np.array([[0.4, 0.1, 1.2], [0.0, 0.1, -0.2]])
    assert list(margins_envelope.governing(lanes, ["a", "b", "c"])) == ["b", "c"]
    assert list(margins_envelope.envelope(lanes)) == [0.1, -0.2]


def test_an_empty_margin_at_the_end_never_shifts_the_names() -> None:
    for margins in ([[0.4], [0.1], [None]], [["MS"], [0.4], [0.1], [None]]):
        names = NAMES if margins[0] == ["MS"] else NAMES[1:]
        found = call("MARGIN_GOVERNING", margins, names)
        assert found.grid == [[ErrorValue.VALUE]]
        assert "same rows" in found.reasons[0]


def test_names_without_the_heading_that_the_margins_have_are_taken_as_they_stand() -> None:
    assert call("MARGIN_GOVERNING", [["MS"], [0.4], [0.1], [1.2]], NAMES[1:]).grid == [["bearing"]]
    assert call("MARGIN_GOVERNING", [["MS", 0.4, 0.1]], [["Check", "net section", "bearing"]]).grid == [["bearing"]]


def test_a_heading_above_the_names_alone_is_refused() -> None:
    found = call("MARGIN_GOVERNING", [[0.4], [0.1], [1.2]], NAMES)
    assert found.grid == [[ErrorValue.VALUE]]
