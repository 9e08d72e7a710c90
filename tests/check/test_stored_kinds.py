"""What other programs store for the same value is no stale value."""

from pathlib import Path
from typing import Any

import pytest

from doubler.check.examination import report_on
from doubler.errors import ErrorValue
from doubler.workbook.examined import Examined
from doubler.workbook.model import Cell, Sheet, Workbook


def kinds(stored: Any, formula: str, **about: Any) -> list[tuple[str, str]]:
    cells = {(1, 1): Cell(2.0), (1, 2): Cell(stored, formula)}
    book = Workbook(Path("a.xlsx"), "", [Sheet("S", "", cells)], **about)
    return [(f.kind, f.severity) for f in report_on(Examined(book), Path("a.xlsx")).findings]


@pytest.mark.parametrize(
    ("stored", "formula", "stale"),
    [
        (1.0, "A1>1", False),
        (0.0, "A1>1", True),
        (True, "A1>1", False),
        ("4", "A1*2", False),
        ("5", "A1*2", True),
        ("4 N", "A1*2", True),
        (ErrorValue.VALUE, "SQRT(-A1)", False),
        (3.0, "A1*2", True),
        ("", "A1*2", True),
    ],
)
def test_the_same_value_of_another_kind(stored: Any, formula: str, stale: bool) -> None:
    assert (("stale-value", "error") in kinds(stored, formula)) is stale


def test_zeros_that_a_writer_puts_down_for_the_program_to_calculate() -> None:
    assert kinds(0.0, "A1*2", calculated_on_load=True) == [("stale-value", "note")]
    assert kinds(0.0, "A1*2") == [("stale-value", "error")]
    assert kinds(3.0, "A1*2", calculated_on_load=True) == [("stale-value", "error")]
    assert kinds(0.0, "A1*0", calculated_on_load=True) == []


def test_a_reason_is_told_once_a_sheet() -> None:
    cells = {(row, 1): Cell(1.0, f"NOSUCH({row})") for row in range(1, 30)}
    book = Workbook(Path("a.xlsx"), "", [Sheet("S", "", cells)])
    found = report_on(Examined(book), Path("a.xlsx")).findings
    assert [f.kind for f in found].count("not-recalculated") == 1
    assert len(next(f for f in found if f.kind == "not-recalculated").follows) == 28
