"""Every form in which an argument can be given (contract, section 1), and what each refuses."""

import math
import re
from typing import Any

import numpy as np
import pytest

from doubler import mechanics
from doubler.catalogue import CellResult, call_cells, lookup, names
from doubler.catalogue.one_cell import due
from doubler.errors import ErrorValue

mechanics.load()
VALUE, NUM, NA, DIV0 = ErrorValue.VALUE, ErrorValue.NUM, ErrorValue.NA, ErrorValue.DIV0


def call(name: str, *arguments: Any) -> CellResult:
    function = lookup(name)
    assert function is not None
    return call_cells(function, arguments)


def axial(*arguments: Any) -> CellResult:
    return call("STRESS_AXIAL", *arguments)


AREA = "150 mm^2"


@pytest.mark.parametrize(
    ("force", "rows"),
    [
        ("12 kN", [[80.0]]),
        ([["12 kN"]], [[80.0]]),
        ([[12.0, "kN"]], [[80.0]]),
        ([["kN"], [12.0]], [[80.0]]),
        ([["Axial load [kN]"], [12.0], [24.0]], [[80.0], [160.0]]),
        ([["Axial load (kN)"], [12.0], [24.0]], [[80.0], [160.0]]),
        ([["Axial load, kN"], [12.0], [24.0]], [[80.0], [160.0]]),
        ([["kN", 12.0, 24.0]], [[80.0, 160.0]]),
        ([["Axial load [kN]", 12.0, 24.0]], [[80.0, 160.0]]),
        ([[12.0, "kN"], [24000.0, "N"]], [[80.0], [160.0]]),
        ([["12 kN"], ["24000 N"]], [[80.0], [160.0]]),
        ([["12 kN", "24 kN"]], [[80.0, 160.0]]),
        ((("kN",), (12.0,), (24.0,)), [[80.0], [160.0]]),
        ([["kN"], [12], [np.float64(24.0)]], [[80.0], [160.0]]),
    ],
)
def test_form_is_read(force: Any, rows: list[list[float]]) -> None:
    result = axial(force, AREA, "MPa")
    assert result.grid == rows
    assert not result.reasons


@pytest.mark.parametrize(
    ("chosen", "force", "area", "stress"),
    [
        ("N-mm", 12000.0, 150.0, 80.0),
        ("N-m", 12000.0, 150e-6, 80e6),
        ("lbf-in", 6000.0, 2.0, 3000.0),
        ("kip-in", 6.0, 2.0, 3.0),
    ],
)
def test_bare_numbers_are_read_in_each_set_and_the_result_is_given_in_it(
    chosen: str, force: float, area: float, stress: float
) -> None:
    assert axial(force, area, chosen).grid[0][0] == pytest.approx(stress, rel=1e-14)
    assert axial([[force], [force]], area, chosen).grid[1][0] == pytest.approx(stress, rel=1e-14)
    assert axial([[force, force]], area, chosen).grid[0][1] == pytest.approx(stress, rel=1e-14)


def test_a_block_of_bare_numbers_gives_a_block() -> None:
    assert axial([[12.0, 24.0], [36.0, 48.0]], 12.0, "N-mm").grid == [[1.0, 2.0], [3.0, 4.0]]


def test_text_with_its_unit_beside_bare_numbers_in_a_set_keeps_its_unit() -> None:
    assert axial("12 kN", 150.0, "N-mm").grid == [[80.0]]


def test_a_number_without_dimension_is_given_bare() -> None:
    assert call("STRESS_DIRECT_SHEAR", "18 kN", "50 mm^2", 2.0, "MPa").grid == [[180.0]]
    assert call("STRESS_DIRECT_SHEAR", "18 kN", "50 mm^2", [[1.0], [2.0]], "MPa").grid == [[360.0], [180.0]]
    assert call("STRESS_DIRECT_SHEAR", "18 kN", "50 mm^2", [["planes"], [1.0], [2.0]], "MPa").grid == [[360.0], [180.0]]


@pytest.mark.parametrize("left_out", [(), (None,)])
def test_an_optional_argument_left_out_has_its_default(left_out: tuple[None, ...]) -> None:
    assert call("STRESS_DIRECT_SHEAR", "18 kN", "50 mm^2", *left_out, "MPa").grid == [[360.0]]


@pytest.mark.parametrize(
    ("bad", "value", "says"),
    [
        (None, VALUE, 'force is missing, or its cell is empty; write a force, such as "12 kN"'),
        ([[None]], VALUE, "force is an empty cell"),
        ([], VALUE, "force is an empty cell"),
        ([[]], VALUE, "force is an empty cell"),
        ("", VALUE, 'force is empty text; write a force, such as "12 kN"'),
        ("   ", VALUE, "force is empty text"),
        (True, VALUE, 'force is TRUE; write a force, such as "12 kN"'),
        (False, VALUE, "force is FALSE"),
        (NA, NA, "force is the error #N/A"),
        ([[DIV0]], DIV0, "force is the error #DIV/0!"),
        (12000.0, VALUE, 'force is the bare number 12000 and has no unit; write a force, such as "12 kN", or name a'),
        ("12000", VALUE, "force is the text '12000', which has no unit"),
        (math.nan, NUM, "force is nan, not a finite number"),
        (-math.inf, NUM, "force is -inf, not a finite number"),
        ("12,5 kN", VALUE, "write a decimal point"),
        ("12 lb", VALUE, "lb is a mass and a force is due; write lbf"),
        ("12 MPa", VALUE, "MPa is a stress and a force is due; write N"),
        ("12 KN", VALUE, "'KN' has the wrong case; write kN"),
        (object, VALUE, "force is <class 'object'>; write a force"),
        ([[None, "kN"]], VALUE, "force is an empty cell beside 'kN'"),
        ([[NA, "kN"]], NA, "force is the error #N/A"),
        ([[True, "kN"]], VALUE, "force is TRUE"),
        ([[math.inf, "kN"]], NUM, "force is inf, not a finite number"),
        ([[12.0, "kn"]], VALUE, "'kn' has the wrong case; write kN"),
        ([[12.0, "mm"]], VALUE, "mm is a length and a force is due"),
        ([[12.0, "kN"], [13.0, "mm"]], VALUE, "force, row 2: mm is a length"),
        ([[12.0, "kN"], [13.0, "kn"]], VALUE, "force, row 2: 'kn' has the wrong case"),
        ([[12.0, "kN"], [13.0, None]], VALUE, "force, row 2 has no unit beside it; write one, such as N"),
        ([["Load"], [12.0]], VALUE, "the heading 'Load' names no unit; write it as in \"Load [N]\""),
        ([["Load [kn]"], [12.0]], VALUE, "heading 'Load [kn]': 'kn' has the wrong case"),
        ([["Load [mm]"], [12.0]], VALUE, "mm is a length"),
        ([["12 kN"], [13.0]], VALUE, "force, entry 2: a bare number among texts; write its unit"),
        ([["12 kN"], ["13 mm"]], VALUE, "mm is a length"),
        ([["kN"], [None], [None]], VALUE, "is the text 'kN'; write a force"),
        ([["kN"], [NA]], NA, "force, entry 2 is the error #N/A"),
    ],
)
def test_a_bad_argument_is_an_error_value_with_what_to_write(bad: Any, value: ErrorValue, says: str) -> None:
    result = axial(bad, AREA, "MPa")
    assert result.grid == [[value]]
    assert len(result.reasons) == 1
    assert says in result.reasons[0]
    assert result.reasons[0].startswith("STRESS_AXIAL: ")


def test_text_of_a_pure_number_is_refused_where_a_number_is_due() -> None:
    result = call("STRESS_DIRECT_SHEAR", "18 kN", "50 mm^2", "2", "MPa")
    assert result.grid == [[VALUE]]
    assert "write the number 2 without quotes" in result.reasons[0]


GAPS = [(None, VALUE), (NA, NA), (True, VALUE), ("x", VALUE), (math.nan, NUM), (math.inf, NUM)]


@pytest.mark.parametrize(("gap", "value"), GAPS)
@pytest.mark.parametrize("length", [3, 40])
def test_an_entry_that_is_no_number_spoils_itself_alone(gap: Any, value: ErrorValue, length: int) -> None:
    numbers = [[12.0] for _ in range(length)]
    numbers[1] = [gap]
    expected = [[80.0] for _ in range(length)]
    expected[1] = [value]  # type: ignore[list-item]
    headed = axial([["kN"], *numbers], AREA, "MPa")
    assert headed.grid == expected
    assert "force, entry 3 is" in headed.reasons[0]
    bare = axial([[12000.0 if n == [12.0] else n[0]] for n in numbers], 150.0, "N-mm")
    assert bare.grid == expected
    assert "force, entry 2 is" in bare.reasons[0]


@pytest.mark.parametrize(("gap", "value"), [(g, v) for g, v in GAPS if g != "x"])
def test_a_row_without_a_number_in_paired_columns_spoils_itself_alone(gap: Any, value: ErrorValue) -> None:
    result = axial([[12.0, "kN"], [gap, "kN"], [24.0, "kN"]], AREA, "MPa")
    assert result.grid == [[80.0], [value], [160.0]]


def test_a_row_whose_unit_is_an_error_shows_that_error() -> None:
    assert axial([[12.0, "kN"], [24.0, NA], [24.0, "kN"]], AREA, "MPa").grid == [[80.0], [NA], [160.0]]


def test_an_empty_pair_between_others_is_an_error_and_at_the_end_is_nothing() -> None:
    result = axial([[12.0, "kN"], [None, None], [24.0, "kN"], [None, None]], AREA, "MPa")
    assert result.grid == [[80.0], [VALUE], [160.0]]


@pytest.mark.parametrize("length", [1, 15, 16, 17, 400])
def test_a_long_column_is_read_as_a_short_one(length: int) -> None:
    numbers = [[float(k)] for k in range(1, length + 1)]
    expected = [[k * 1000.0 / 150.0] for k in range(1, length + 1)]
    for trailing in ([], [[None]] * 30):
        assert axial([["kN"], *numbers, *trailing], AREA, "MPa").grid == expected
    for bad in ("x", None, True):
        numbers[-1] = [bad]  # type: ignore[list-item]
        assert axial([["kN"], *numbers, [1.0]], AREA, "MPa").grid[length - 1] == [VALUE]


def test_a_long_column_of_whole_numbers_too_large_for_a_float_is_no_fault_of_the_program() -> None:
    with pytest.raises(OverflowError):
        float(10**400)
    column = [["kN"], *[[1.0]] * 30, [10**400]]
    assert axial(column, AREA, "MPa").grid[-1] == [NUM]


def test_unlike_lengths_are_named_with_their_lengths() -> None:
    result = axial([["kN"], [1.0], [2.0]], [["mm2"], [1.0], [2.0], [3.0]], "MPa")
    assert result.grid == [[VALUE]]
    assert "force has 2 values and area has 3; give vectors of one length" in result.reasons[0]
    block = axial([[1.0, 2.0], [3.0, 4.0]], [[1.0], [2.0], [3.0], [4.0]], "N-mm")
    assert "force has 2 × 2 values and area has 4" in block.reasons[0]


def test_all_bad_arguments_are_told_at_once_and_the_first_error_value_shows() -> None:
    result = axial(NA, DIV0, "MPa")
    assert result.grid == [[NA]]
    assert [r.split(":")[1].split()[0] for r in result.reasons] == ["force", "area"]
    assert len(axial().reasons) == 2
    assert 'area is missing, or its cell is empty; write an area, such as "150 mm^2"' in axial("12 kN").reasons[0]
    assert len(axial("12 lb", "3 in").reasons) == 2


def test_the_same_texts_do_not_share_a_reading_with_look_alikes() -> None:
    assert axial("12 kN", AREA, "MPa").grid == [[80.0]]
    assert axial("12 kN", AREA, "MPa").grid == [[80.0]]
    assert axial("12 kN", AREA).grid == [[80.0, "MPa"]]
    assert axial("12 kN", AREA).grid == [[80.0, "MPa"]]
    first = axial("12 kN", AREA, "MPa")
    first.grid[0][0] = 0.0
    assert axial("12 kN", AREA, "MPa").grid == [[80.0]]
    for _ in range(2):
        assert axial("12 kN", "0 mm^2", "MPa").grid == [[NUM]]


def test_a_unit_that_begins_with_one_heads_a_column_and_is_wanted_of_a_result() -> None:
    result = call("STRAIN_THERMAL", [["1/K"], [1e-5], [2e-5]], "100 K", "mm/mm")
    assert result.grid == [[1e-3], [2e-3]]
    loads, none, constants = (
        [["N/mm"], [100.0], [0.0], [0.0]],
        [["N"], [0.0], [0.0], [0.0]],
        ("2 mm", "70 GPa", "70 GPa"),
    )
    curved = call("PLY_LAMINATE_CURVATURE", loads, none, "0 deg", *constants, 0.3, "27 GPa", "1/m")
    assert not curved.reasons
    fraction = call("STRAIN_THERMAL", [["1/2"], [1e-5]], "100 K", "mm/mm")
    assert fraction.reasons


def test_what_is_proposed_for_a_missing_number_may_be_written() -> None:
    for function in map(lookup, names()):
        assert function is not None
        for argument in function.arguments:
            proposed = re.search(r"such as ([\d.]+)$", due(argument))
            if proposed and argument.limit is not None:
                assert argument.limit.all_within(float(proposed[1])), (function.name, argument.name, due(argument))


def test_a_text_without_a_number_is_told_what_is_due() -> None:
    (reason,) = call("STRESS_PIN_SHEAR", "1 kN", "5 mm", "double").reasons
    assert reason.startswith("STRESS_PIN_SHEAR: shear_planes is the text 'double'; write a ")
    assert "kN" not in reason
