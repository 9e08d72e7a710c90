"""How a result is given: unit, set, value and unit side by side, rows, errors."""

from typing import Any

import numpy as np
import pytest

from doubler import mechanics
from doubler.catalogue import CellResult, WorksheetFunction, call_cells, lookup
from doubler.catalogue.annotations import Force, Length, Moment, Ratio, Stress, Text, column, row, square
from doubler.catalogue.limits import POSITIVE, Refusal
from doubler.errors import ErrorValue

mechanics.load()


def axial(*arguments: Any) -> CellResult:
    function = lookup("STRESS_AXIAL")
    assert function is not None
    return call_cells(function, arguments)


def own(kernel: Any, **valid: Any) -> WorksheetFunction:
    """Declare a function for one test, without entering it in the catalogue."""
    return WorksheetFunction("UNIT_OWN", kernel, valid, ())


@pytest.mark.parametrize(
    ("force", "area", "cells"),
    [
        ("12 kN", "150 mm^2", [80.0, "MPa"]),
        ("12 kip", "2 in^2", [6.0, "ksi"]),
        ("12 kip", "1 in²", [12.0, "ksi"]),
        ("1 kN", "1 in^2", [1.5500031000062, "MPa"]),
        ("1 lbf", "1 mm^2", [4.4482216152605, "MPa"]),
    ],
)
def test_unit_left_out_is_metric_unless_every_input_is_us_customary(force: str, area: str, cells: list[Any]) -> None:
    ((value, unit),) = axial(force, area).grid
    assert value == pytest.approx(cells[0], rel=1e-14)
    assert unit == cells[1]


def test_bare_ratios_do_not_make_us_inputs_metric() -> None:
    function = lookup("STRESS_DIRECT_SHEAR")
    assert function is not None
    assert call_cells(function, ("12 kip", "2 in^2", 2.0)).grid == [[3.0, "ksi"]]


@pytest.mark.parametrize(
    ("wanted", "value"),
    [
        ("MPa", 80.0),
        ("N/mm2", 80.0),
        ("GPa", 0.08),
        ("Pa", 8e7),
        ("ksi", 11.603019018416738),
        ("N-mm", 80.0),
        ("N-m", 8e7),
    ],
)
def test_unit_or_set_wanted(wanted: str, value: float) -> None:
    (cells,) = axial("12 kN", "150 mm^2", wanted).grid
    assert cells == [pytest.approx(value, rel=1e-14)]


@pytest.mark.parametrize(
    ("wanted", "says"),
    [
        ("mm", "the result cannot be given in mm: mm is a length and a stress is due; write MPa"),
        ("mpa", "'mpa' has the wrong case; write MPa"),
        ("n-mm", "write N-mm"),
        (5.0, "the last argument names a unit or a set"),
        ([["MPa", "ksi"]], "it is a range"),
        (True, "the last argument names a unit or a set"),
    ],
)
def test_a_unit_that_the_result_cannot_have_is_refused(wanted: Any, says: str) -> None:
    result = axial("12 kN", "150 mm^2", wanted)
    assert result.grid == [[ErrorValue.VALUE]]
    assert says in result.reasons[0]


def test_an_error_as_the_unit_wanted_passes_on() -> None:
    assert axial("12 kN", "150 mm^2", ErrorValue.REF).grid == [[ErrorValue.REF]]


def test_vector_with_units_beside_or_below() -> None:
    assert axial([["kN"], [12.0], [24.0]], "150 mm^2").grid == [[80.0, "MPa"], [160.0, "MPa"]]
    assert axial([["kN", 12.0, 24.0]], "150 mm^2").grid == [[80.0, 160.0], ["MPa", "MPa"]]


def test_scalars_go_with_vectors_and_vectors_with_vectors() -> None:
    assert axial("12 kN", [["mm2"], [150.0], [300.0]], "MPa").grid == [[80.0], [40.0]]
    assert axial([["kN"], [12.0], [24.0]], [["mm2"], [150.0], [300.0]], "MPa").grid == [[80.0], [80.0]]


def test_overflow_is_an_error_and_warns_nobody(recwarn: pytest.WarningsRecorder) -> None:
    result = axial("1e308 kN", "1e-300 mm2", "Pa")
    assert result.grid == [[ErrorValue.NUM]]
    assert "no finite result" in result.reasons[0]
    assert not recwarn.list


def test_a_result_row_has_its_values_side_by_side() -> None:
    def kernel(force: Force, arm: Length) -> row(Moment, "one", "two"):  # type: ignore[valid-type]
        return np.stack(np.broadcast_arrays(force * arm, 2.0 * force * arm), axis=-1)

    function = own(kernel)
    assert call_cells(function, ("1 kN", "2 m", "kN·m")).grid == [[2.0, 4.0]]
    assert call_cells(function, ("1 kN", "2 m")).grid == [[2000.0, 4000.0, "N·m"]]
    assert call_cells(function, ([["kN"], [1.0], [2.0]], "2 m", "kN·m")).grid == [[2.0, 4.0], [4.0, 8.0]]
    across = call_cells(function, ([["kN", 1.0, 2.0]], "2 m", "kN·m"))
    assert across.grid == [[ErrorValue.VALUE]]
    assert "give its vectors as columns" in across.reasons[0]


def test_a_result_matrix_fills_a_block_for_one_lane_only() -> None:
    def kernel(force: Force) -> square(Force, 2):  # type: ignore[valid-type]
        return force[..., None, None] * np.eye(2)

    function = own(kernel)
    assert call_cells(function, ("3 N", "N")).grid == [[3.0, 0.0], [0.0, 3.0]]
    assert call_cells(function, ([["N"], [1.0], [2.0]], "N")).grid == [[ErrorValue.VALUE]]


def test_text_results_have_no_unit() -> None:
    def kernel(force: Force) -> Text:
        return np.where(force > 0, "tension", "compression").astype(object)

    function = own(kernel)
    assert call_cells(function, ("3 N",)).grid == [["tension"]]
    assert call_cells(function, ([["N"], [1.0], [-2.0]],)).grid == [["tension"], ["compression"]]
    assert "has no unit; leave 'MPa' out" in call_cells(function, ("3 N", "MPa")).reasons[0]


def test_a_ratio_is_a_number_alone() -> None:
    def kernel(first: Force, second: Force) -> Ratio:
        return first / second

    assert call_cells(own(kernel), ("3 kN", "6 kN")).grid == [[0.5]]
    assert call_cells(own(kernel), ("3 kN", "6 kN", "%")).grid == [[50.0]]


def test_a_whole_column_is_one_argument_and_tolerates_no_gap() -> None:
    def kernel(forces: column(Force), scale: Ratio = 1.0) -> Force:  # type: ignore[valid-type]
        return forces.sum(axis=-1) * scale

    function = own(kernel)
    for length in (2, 50):
        ones = [[1.0]] * length
        assert call_cells(function, ([["kN"], *ones], "kN")).grid == [[float(length)]]
        assert call_cells(function, ([["kN"], *ones, [None], [None]], "kN")).grid == [[float(length)]]
        assert call_cells(function, ([["kN"], *ones], [[1.0], [2.0]], "kN")).grid == [[length], [2.0 * length]]
        gap = call_cells(function, ([["kN"], *ones, [None], [1.0]], "kN"))
        assert gap.grid == [[ErrorValue.VALUE]]
        assert "the whole column is one argument" in gap.reasons[0]
    assert call_cells(function, ([[1.0, "kN"], [1.0, "N"]], "N")).grid == [[1001.0]]
    assert call_cells(function, ([[ErrorValue.NA, "kN"], [1.0, "N"]], "N")).grid == [[ErrorValue.NA]]


def test_a_kernel_that_refuses_gives_an_error_with_its_reason() -> None:
    def kernel(force: Force) -> Force:
        raise Refusal("this has no result; write something else")

    for given in ("1 N", [["N"], [1.0], [2.0]]):
        result = call_cells(own(kernel), (given, "N"))
        assert result.grid == [[ErrorValue.VALUE]]
        assert result.reasons == ("UNIT_OWN: this has no result; write something else",)


def test_a_limit_is_told_in_the_unit_given() -> None:
    def kernel(force: Force, area: Length) -> Stress:
        return force / area**2

    result = call_cells(own(kernel, area=POSITIVE), ("1 N", [["mm"], [1.0], [-2.5], [0.0]], "MPa"))
    assert result.grid == [[1.0], [ErrorValue.NUM], [ErrorValue.NUM]]
    assert result.reasons == ("UNIT_OWN: area must be positive; it is -2.5 mm",)
