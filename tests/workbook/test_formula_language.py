"""The spreadsheet's language: tables, names, arrays, intersections, spans of sheets, dates from 1904."""

import numpy as np
import pytest

from doubler.workbook.model import Table
from workbook.evaluated_books import area, book, run, sheet, shown, values

BARS = Table("Bars", "S", area("A1:C5"), ("name", "load", "bar's [kN]"), 1, 1)


def with_table(cells: dict[str, object]) -> object:
    front = {"A1": "name", "B1": "load", "C1": "bar's [kN]", "A2": "p", "B2": 1, "C2": 10, "A3": "q", "B3": 2}
    front |= {"C3": 20, "A4": "r", "B4": 3, "C4": 30, "B5": "=SUM(Bars[load])"}
    return book(sheet("S", front | cells), tables=(BARS,))


@pytest.mark.parametrize(
    ("formula", "value"),
    [
        ("=SUM(Bars[load])", 6.0),
        ("=SUM(Bars[bar''s '[kN']])", 60.0),
        ("=Bars[[#Totals],[load]]", 6.0),
        ("=Bars[[#Headers],[load]]", "load"),
        ("=ROWS(Bars[#Data])", 3.0),
        ("=ROWS(Bars[#All])", 5.0),
        ("=SUM(Bars[[load]:[bar''s '[kN']]])", 66.0),
        ("=COUNTA(Bars[#Headers])", 3.0),
        ("=SUM(Bars)", 66.0),
        ("=Bars[nosuch]", "#REF!"),
    ],
)
def test_structured_references(formula: str, value: object) -> None:
    assert shown(run(with_table({"E9": formula})), "E9") == value


def test_this_row_of_a_table_is_the_row_of_each_copy() -> None:
    found = run(with_table({f"E{row}": "=Bars[[#This Row],[load]]*2" for row in (2, 3, 4, 7)}))
    assert [shown(found, f"E{row}") for row in (2, 3, 4, 7)] == [2.0, 4.0, 6.0, "#VALUE!"]


def test_names_are_absolute_relative_constant_and_formulas() -> None:
    whole = book(
        sheet("S", {"A1": 5, "B1": 7, "C1": "=here*2", "C2": "=left+1", "B2": 40, "C3": "=twice", "C4": "=ten"}),
        names={"here": "S!$A$1", "left": "S!XFD1", "twice": "S!$A$1*2", "ten": "10"},
    )
    found = run(whole)
    assert [shown(found, f"C{k}") for k in (1, 2, 3, 4)] == [10.0, 41.0, 10.0, 10.0]


def test_a_name_that_leads_back_to_itself_is_not_evaluated() -> None:
    whole = book(sheet("S", {"A1": "=a+1"}), names={"a": "b", "b": "a"})
    assert "leads back to itself" in shown(run(whole), "A1")


def test_a_range_where_one_value_is_due_meets_the_own_row_or_column() -> None:
    cells = {"A1": 10, "A2": 20, "A3": 30, "B2": "=A1:A3*2", "B5": "=A1:A3*2", "C2": "=$A:$A+1", "D2": "=SQRT(A1:A3)"}
    assert values(cells, "B2", "B5", "C2") == [40.0, "#VALUE!", 21.0]
    assert values({"A1": 1, "B1": 2, "B3": "=A1:B1*5"}, "B3") == [10.0]


def test_legacy_arrays_fill_their_range_and_repeat_single_rows() -> None:
    cells = {"A1": 1, "A2": 2, "B1:C3": "{=A1:A2*10}", "D1:D2": "{=5}"}
    found = run(cells)
    assert [shown(found, place) for place in ("B1", "C1", "B2", "C2", "B3")] == [10.0, 10.0, 20.0, 20.0, "#N/A"]
    assert shown(found, "D2") == 5.0


def test_a_spilled_array_is_read_by_its_cells_and_as_a_whole() -> None:
    cells = {"A1": 3, "B1:B3": "#=SEQUENCE(A1)*2", "C1": "=SUM(B1#)", "C2": "=B2", "C3": "=SUM(B1:B5)", "C4": "=A1#"}
    found = run(cells, {"A1": 3.0})
    assert [shown(found, f"C{k}") for k in (1, 2, 3, 4)] == [12.0, 4.0, 12.0, "#REF!"]


def test_unions_intersections_and_spans_of_sheets() -> None:
    whole = book(
        sheet("S", {"A1": 1, "A2": 2, "B1": 3, "B2": 4, "C1": "=SUM((A1,B2))", "C2": "=SUM(A1:B2 B1:B9)",
                    "C3": "=SUM(A1 B2)", "C4": "=SUM(S:T!A1)", "C5": "=COUNT((A1:A2,B1:B2))"}),
        sheet("Mid", {"A1": 10}),
        sheet("T", {"A1": 100}),
    )  # fmt: skip
    found = run(whole)
    assert [shown(found, f"C{k}") for k in range(1, 6)] == [5.0, 7.0, "#NULL!", 111.0, 4.0]


def test_omitted_arguments_and_whole_lines() -> None:
    cells = {"A1": 1, "A2": 2, "B1": "=SUM(A:A)", "B2": "=IF(TRUE,,5)", "B3": "=SUM(1:1)-B1", "B4": "=ROUND(2.6,)"}
    found = run({k: v for k, v in cells.items() if k != "B3"} | {"A9": 4})
    assert [shown(found, place) for place in ("B1", "B2", "B4")] == [7.0, 0.0, 3.0]


def test_dates_count_from_1904_where_the_workbook_says_so() -> None:
    cells = {"A1": "=DATE(2026,3,14)", "A2": "=YEAR(A1)", "A3": '=TEXT(A1,"yyyy-mm-dd")', "A4": "=WEEKDAY(A1)"}
    old, new = run(book(sheet("S", cells), date1904=True)), run(cells)
    assert shown(new, "A1") - shown(old, "A1") == 1462.0
    for place, value in (("A2", 2026.0), ("A3", "2026-03-14"), ("A4", 7.0)):
        assert shown(old, place) == shown(new, place) == value


def test_a_circle_through_a_range_is_found() -> None:
    assert "circular" in shown(run({"A1": 1, "A2": "=SUM(A1:A3)"}), "A2")


def test_ranges_that_move_with_the_copies_are_windows() -> None:
    cells = {f"A{k}": float(k) for k in range(1, 41)} | {f"B{k}": f"=SUM(A{k}:A{k + 2})" for k in range(1, 31)}
    found = run(cells, {"A3": np.array([3.0, 100.0])})
    assert shown(found, "B1") == [6.0, 103.0]
    assert shown(found, "B30") == [93.0, 93.0]


def test_constant_offsets_and_indirect_places_move_with_their_copies() -> None:
    cells = {f"A{k}": float(k) for k in range(1, 8)} | {f"B{k}": f"=OFFSET(A{k},1,0)" for k in range(1, 6)}
    cells["C1"] = '=SUM(INDIRECT("A1:A3"))'
    cells["C2"] = "=SUM(OFFSET($A$1,ROW()-1,0,2,1))"
    found = run(cells)
    assert [shown(found, f"B{k}") for k in (1, 5)] == [2.0, 6.0]
    assert [shown(found, "C1"), shown(found, "C2")] == [6.0, 5.0]


def test_every_native_function_names_a_unit_rule_and_has_words() -> None:
    from doubler.workbook.natives import NATIVES

    assert len(NATIVES) > 250
    for function in NATIVES.values():
        assert function.units
