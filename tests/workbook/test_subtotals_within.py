"""Subtotals pass over subtotals and hidden rows: expected values by hand from the rules named in the module."""

import numpy as np
import pytest

from doubler.workbook.model import Area
from workbook.evaluated_books import book, run, sheet, shown

COLUMN = {
    "A1": "load", "A2": 1, "A3": 2, "A4": "=SUBTOTAL(9,A2:A3)", "A5": 10, "A6": 20, "A7": "=SUBTOTAL(9,A5:A6)",
}  # fmt: skip


@pytest.mark.parametrize(
    ("formula", "value"),
    [
        ("=SUBTOTAL(9,A2:A7)", 33.0),
        ("=SUBTOTAL(1,A2:A7)", 33.0 / 4),
        ("=SUBTOTAL(2,A:A)", 4.0),
        ("=SUBTOTAL(4,A1:A7)", 20.0),
        ("=SUM(A2:A7)", 66.0),
        ("=SUBTOTAL(9,A2:A4,A5:A7)", 33.0),
        ("=AGGREGATE(9,0,A2:A7)", 33.0),
        ("=AGGREGATE(9,4,A2:A7)", 66.0),
        ("=SUBTOTAL(9,A2:A7)*2", 66.0),
    ],
)
def test_other_subtotals_are_passed_over(formula: str, value: float) -> None:
    assert shown(run({**COLUMN, "C1": formula}), "C1") == value


@pytest.mark.parametrize(
    ("formula", "value"),
    [
        ("=SUBTOTAL(9,B1:B4)", 15.0),
        ("=SUBTOTAL(109,B1:B4)", 13.0),
        ("=SUBTOTAL(103,B1:B4)", 3.0),
        ("=AGGREGATE(9,5,B1:B4)", 13.0),
        ("=AGGREGATE(9,4,B1:B4)", 15.0),
        ("=SUBTOTAL(109,A1:B4)", 26.0),
    ],
)
def test_hidden_rows_are_passed_over_where_the_number_says_so(formula: str, value: float) -> None:
    hidden = sheet("S", {f"{c}{k}": 2.0 ** (k - 1) for c in "AB" for k in range(1, 5)} | {"D9": formula})
    hidden.hidden_rows.add(2)
    assert shown(run(book(hidden)), "D9") == value


def test_a_row_that_a_filter_hides_is_always_passed_over() -> None:
    filtered = sheet(
        "S", {"A1": "n", "A2": 1, "A3": 2, "A4": 4, "B9": "=SUBTOTAL(9,A2:A4)", "B8": "=SUBTOTAL(2,A2:A4)"}
    )
    filtered.hidden_rows.add(3)
    assert shown(run(book(filtered)), "B9") == 7.0
    filtered.filtered.append(Area(1, 1, 4, 1))
    assert shown(run(book(filtered)), "B9") == 5.0
    assert shown(run(book(filtered)), "B8") == 2.0


def test_over_cases_and_in_copies() -> None:
    cells = {**COLUMN, "B2": 5, "B3": "=SUBTOTAL(9,B2:B2)", "A8": "=SUBTOTAL(9,A2:A7)", "B8": "=SUBTOTAL(9,B2:B7)"}
    found = run(cells, {"A2": np.array([1.0, 100.0])})
    assert shown(found, "A8") == [33.0, 132.0]
    assert shown(found, "B8") == 5.0


@pytest.mark.parametrize(
    "formula",
    ["=SUBTOTAL(9,A2:A8)", "=AGGREGATE(14,0,A2:A7,1)", "=SUBTOTAL(9,A4:A4)"],
)
def test_what_cannot_be_told_is_said(formula: str) -> None:
    cells = {**COLUMN, "A8": "=SUBTOTAL(9,A5:A6)+1", "C1": formula}
    assert "its subtotal passes over" in shown(run(cells), "C1")


def test_a_number_that_is_computed_passes_over_subtotals_but_tells_nothing_of_hidden_rows() -> None:
    cells = {**COLUMN, "D1": 9, "C1": "=SUBTOTAL(D1,A2:A7)"}
    assert shown(run(cells), "C1") == 33.0
    hidden = sheet("S", cells)
    hidden.hidden_rows.add(2)
    assert "by a number that is computed" in shown(run(book(hidden)), "C1")
