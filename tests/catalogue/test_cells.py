"""The call from a cell: every argument form of the contract, in and out."""

import math

import pytest

from doubler import mechanics
from doubler.catalogue import CellResult, call_cells, lookup
from doubler.errors import ErrorValue

mechanics.load()


def axial(*arguments: object) -> CellResult:
    function = lookup("STRESS_AXIAL")
    assert function is not None
    return call_cells(function, arguments)


def test_text_arguments_and_a_unit_give_a_number() -> None:
    assert axial("12 kN", "150 mm^2", "MPa").grid == [[80.0]]


def test_a_second_call_with_the_same_texts_gives_the_same() -> None:
    first = axial("12.5 kN", "150 mm^2", "ksi")
    assert axial("12.5 kN", "150 mm^2", "ksi").grid == first.grid


def test_without_a_result_argument_value_and_unit_stand_side_by_side() -> None:
    assert axial("12 kN", "150 mm^2").grid == [[80.0, "MPa"]]


def test_us_customary_inputs_alone_give_ksi() -> None:
    assert axial("12 kip", "2 in^2").grid == [[6.0, "ksi"]]


def test_mixed_inputs_give_metric() -> None:
    assert axial("12 kN", "1 in^2").grid[0][1] == "MPa"


def test_value_and_unit_cell_side_by_side() -> None:
    assert axial([[12.0, "kN"]], [[150.0, "mm2"]], "MPa").grid == [[80.0]]


def test_headed_column_gives_a_column_of_the_same_length() -> None:
    column = [["Axial load [kN]"], [12.0], [24.0]]
    assert axial(column, "150 mm^2", "MPa").grid == [[80.0], [160.0]]
    assert axial([["kN"], [12.0], [24.0]], "150 mm^2").grid == [[80.0, "MPa"], [160.0, "MPa"]]


def test_headed_row_gives_a_row() -> None:
    assert axial([["kN", 12.0, 24.0]], "150 mm^2", "MPa").grid == [[80.0, 160.0]]


def test_paired_columns_have_each_their_own_unit() -> None:
    assert axial([[12.0, "kN"], [12000.0, "N"]], "150 mm^2", "MPa").grid == [[80.0], [80.0]]


def test_bare_numbers_are_read_in_the_named_set() -> None:
    assert axial(12000.0, 150.0, "N-mm").grid == [[80.0]]
    assert axial([[12000.0], [24000.0]], 150.0, "N-mm").grid == [[80.0], [160.0]]


def test_a_bare_number_where_a_unit_is_due_says_what_to_write() -> None:
    result = axial(12000.0, "150 mm^2", "MPa")
    assert result.grid == [[ErrorValue.VALUE]]
    assert "no unit" in result.reasons[0]
    assert '"' in result.reasons[0]


def test_all_bad_arguments_are_reported_at_once() -> None:
    result = axial("12 MPa", "150 mm")
    assert result.grid == [[ErrorValue.VALUE]]
    assert len(result.reasons) == 2
    assert "force" in result.reasons[0]
    assert "area" in result.reasons[1]


def test_unlike_lengths_are_an_error() -> None:
    result = axial([["kN"], [1.0], [2.0]], [["mm2"], [1.0], [2.0], [3.0]])
    assert "2 values" in result.reasons[0]
    assert "3" in result.reasons[0]


def test_an_error_cell_passes_on_as_itself() -> None:
    assert axial(ErrorValue.DIV0, "150 mm^2", "MPa").grid == [[ErrorValue.DIV0]]


def test_one_row_outside_validity_does_not_spoil_the_others() -> None:
    result = axial("12 kN", [["mm2"], [150.0], [0.0], [-3.0]], "MPa")
    assert result.grid == [[80.0], [ErrorValue.NUM], [ErrorValue.NUM]]
    assert "area must be positive" in result.reasons[0]


def test_an_empty_cell_is_never_read_as_zero() -> None:
    assert axial(None, "150 mm^2", "MPa").grid == [[ErrorValue.VALUE]]
    result = axial([["kN"], [12.0], [None], [24.0]], "150 mm^2", "MPa")
    assert result.grid == [[80.0], [ErrorValue.VALUE], [160.0]]
    assert "empty" in result.reasons[0]


def test_a_whole_column_ends_where_its_values_end() -> None:
    column = [["kN"], [12.0], [24.0], *[[None]] * 50]
    assert axial(column, "150 mm^2", "MPa").grid == [[80.0], [160.0]]


def test_a_logical_is_no_number() -> None:
    assert axial(True, "150 mm^2", "N-mm").grid == [[ErrorValue.VALUE]]


def test_a_unit_of_another_dimension_for_the_result_is_refused() -> None:
    result = axial("12 kN", "150 mm^2", "mm")
    assert result.grid == [[ErrorValue.VALUE]]
    assert "mm" in result.reasons[0]


def test_too_many_arguments_are_refused() -> None:
    assert "at most 3" in axial("12 kN", "150 mm^2", "MPa", "MPa").reasons[0]


def test_a_missing_argument_is_named() -> None:
    assert "area is missing" in axial("12 kN").reasons[0]


@pytest.mark.parametrize("bad", [math.nan, math.inf])
def test_numbers_that_are_not_finite_give_no_result(bad: float) -> None:
    assert axial(bad, 150.0, "N-mm").grid == [[ErrorValue.NUM]]


@pytest.mark.parametrize("word", ["n/a", "-", "TBD", "#N/A", "fails", "?"])
def test_a_word_for_a_missing_value_is_no_heading_that_drops_out(word: str) -> None:
    """A margin that could not be computed must not drop out of an envelope because it stands first."""
    from doubler.workbook.evaluate import evaluate_formula

    found = evaluate_formula(f'=MARGIN_ENVELOPE({{"{word}";0.2;0.3}})')
    assert found.grid == [[ErrorValue.VALUE]]
    assert "may stand for a missing value" in found.reasons[0]


def test_units_that_are_equal_and_spelt_unlike_are_told_apart() -> None:
    """A plan kept for in/in was given back for mm/mm, whose results are then wanted in metric units."""
    from doubler.workbook.evaluate import evaluate_formula

    assert evaluate_formula('=UNIT_OF("1 N/m2")').grid == [["N/m2"]]
    assert evaluate_formula('=UNIT_OF("1 N/m²")').grid == [["N/m²"]]
    american = evaluate_formula('=STRAIN_TRUE("0.001 in/in")').grid
    metric = evaluate_formula('=STRAIN_TRUE("0.001 mm/mm")').grid
    assert american[0][0] == metric[0][0]


def test_a_quantity_goes_through_pint_under_each_of_its_spellings() -> None:
    from doubler.units import from_pint, parse_unit, to_pint

    for text in ("µε", "ppm", "µm/m", "ppm"):
        value, unit = from_pint(to_pint(3.0, parse_unit(text)))
        assert value * unit.scale == pytest.approx(3e-6)
    assert from_pint(to_pint(3.0, parse_unit("ppm")))[0] == 3.0
