"""UNIT_REASON: the reason of an error value, read from the sheet."""

import numpy as np
import pytest

from doubler.errors import ErrorValue
from doubler.workbook.evaluate import evaluate_formula
from workbook.evaluated_books import run, shown

ZERO_AREA = "STRESS_AXIAL: area must be positive; it is 0 mm^2"
CELLS = {
    "A1": '=STRESS_AXIAL("1 kN","0 mm^2","MPa")',
    "A2": '=STRESS_AXIAL("1 kN","1 mm^2","MPa")',
    "A3": "=1/0",
    "A4": ErrorValue.NA,
    "A5": "=A1+1",
    **{f"B{row}": f"=UNIT_REASON(A{row})" for row in range(1, 8)},
}


@pytest.mark.parametrize(
    ("place", "reason"),
    [
        ("B1", ZERO_AREA),
        ("B2", ""),
        ("B3", "the formula itself gives #DIV/0!"),
        ("B4", "the formula itself gives #N/A"),
        ("B5", "the formula itself gives #NUM!"),
        ("B6", ""),
    ],
)
def test_a_cell_s_reason_is_given_and_nothing_where_it_shows_no_error(place: str, reason: str) -> None:
    assert shown(run(CELLS), place) == reason


def test_every_copy_of_a_filled_column_and_every_case_has_its_own_reason() -> None:
    cells = {
        **{f"A{row}": float(row - 2) for row in range(1, 5)},
        **{f"B{row}": f'=STRESS_AXIAL(12,A{row},"N-mm")' for row in range(1, 5)},
        **{f"C{row}": f"=UNIT_REASON(B{row})" for row in range(1, 5)},
    }
    found = run(cells, {"A4": np.array([2.0, 0.0, -3.0])})
    told = "STRESS_AXIAL: area must be positive"
    assert [shown(found, f"C{row}")[0] for row in (1, 2, 3)] == [told, told, ""]
    assert shown(found, "C4") == ["", told, told]


def test_the_form_of_excel_takes_the_call_itself() -> None:
    assert evaluate_formula('=UNIT_REASON("STRESS_AXIAL","1 kN","0 mm^2","MPa")').grid == [[ZERO_AREA]]
    assert evaluate_formula('=UNIT_REASON("stress_axial","1 kN","1 mm^2","MPa")').grid == [[""]]
    assert "no worksheet function NO_SUCH" in evaluate_formula('=UNIT_REASON("NO_SUCH")').grid[0][0]
    found = run({"A1": 0.0, "B1": '=UNIT_REASON("STRESS_AXIAL",12,A1,"N-mm")'}, {"A1": np.array([0.0, 1.0])})
    assert [bool(text) for text in shown(found, "B1")] == [True, False]
