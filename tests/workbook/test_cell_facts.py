"""Facts of cells: whether a formula stands there, its text, and what CELL tells without a window."""

import numpy as np
import pytest

from workbook.evaluated_books import book, run, sheet, shown

CELLS = {"A1": 2, "A2": "=A1*3", "A3": "word", "A4": '=""'}


@pytest.mark.parametrize(
    ("formula", "value"),
    [
        ("=ISFORMULA(A1)", False),
        ("=ISFORMULA(A2)", True),
        ("=ISFORMULA(A9)", False),
        ("=IF(ISFORMULA(A2),A2,0)", 6.0),
        ("=FORMULATEXT(A2)", "=A1*3"),
        ("=FORMULATEXT(A1)", "#N/A"),
        ('=CELL("row",B7)', 7.0),
        ('=CELL("COL",B7:D9)', 2.0),
        ('=CELL("address",$A3)', "$A$3"),
        ('=CELL("contents",A2)', 6.0),
        ('=CELL("type",A1)', "v"),
        ('=CELL("type",A3)', "l"),
        ('=CELL("type",A9)', "b"),
    ],
)
def test_facts(formula: str, value: object) -> None:
    assert shown(run({**CELLS, "C5": formula}), "C5") == value


@pytest.mark.parametrize(
    "formula", ['=CELL("filename",A1)', '=CELL("row")', "=CELL(A3,A1)", "=ISFORMULA(OFFSET(A1,A1,0))"]
)
def test_what_the_file_does_not_tell_is_said(formula: str) -> None:
    assert "not evaluated" in shown(run({**CELLS, "C5": formula}), "C5")


def test_each_copy_asks_of_its_own_cell_and_cases_still_vary() -> None:
    found = run({**CELLS, **{f"C{k}": f'=ISFORMULA(A{k})&CELL("contents",A{k})' for k in range(1, 4)}},
                {"A1": np.array([1.0, 2.0])})  # fmt: skip
    assert [shown(found, f"C{k}") for k in range(1, 4)] == [["FALSE1", "FALSE2"], ["TRUE3", "TRUE6"], "FALSEword"]


def test_another_sheet_is_named_in_an_address() -> None:
    workbook = book(sheet("S", {"B1": "=CELL(\"address\",'My sheet'!B2)"}), sheet("My sheet", {"B2": 1}))
    assert shown(run(workbook), "B1") == "'My sheet'!$B$2"
