"""The second engine beside ours: matches, differences, and what it is not asked for."""

from pathlib import Path
from typing import Any

import openpyxl
import pytest
from openpyxl.worksheet.table import Table

from doubler.workbook.addresses import parse_cell
from doubler.workbook.evaluate import evaluate
from doubler.workbook.graph import build_graph
from doubler.workbook.reader import read_workbook
from doubler.workbook.second import SecondRecalculation, recalculate


def second(folder: Path, cells: dict[str, Any], table: str = "", spoil: dict[str, Any] | None = None) -> Any:
    """Recalculate a sheet twice; `spoil` changes our constants, as if our reading were wrong."""
    book = openpyxl.Workbook()
    sheet = book.active
    sheet.title = "S"
    for place, value in cells.items():
        sheet[place] = value
    if table:
        sheet.add_table(Table(displayName="Loads", ref=table))
    book.create_sheet("T")["A1"] = 4
    path = folder / "book.xlsx"
    book.save(path)
    read = read_workbook(path)
    for place, value in (spoil or {}).items():
        read.sheets[0].cells[parse_cell(place)].value = value
    graph = build_graph(read)
    return recalculate(graph, evaluate(graph))


def verdict(found: SecondRecalculation, place: str) -> str:
    return found.verdict(("S", parse_cell(place)))


def test_plain_formulas_and_ours_match(tmp_path: Path) -> None:
    cells = {
        "A1": 12, "B1": "kN", "A2": 150, "B2": "mm^2", "A3": '=STRESS_AXIAL(A1:B1,A2:B2,"MPa")', "A4": "=250/A3-1",
        "A5": "=IF(A4>0,\"ok\",\"low\")", "A6": "=SUM(A1:A2)*SQRT(A2)", "A7": "=1/0", "A8": '="MS "&A4',
    }  # fmt: skip
    found = second(tmp_path, cells)
    assert len(found.matches) == 6
    assert not found.differences
    assert not found.not_evaluated
    assert found.as_object() == {"match": 6, "differ": 0, "not_evaluated": 0}


def test_a_difference_is_told_with_both_values(tmp_path: Path) -> None:
    found = second(tmp_path, {"A1": 2, "A2": "=A1*3", "A3": "=5+5"}, spoil={"A1": 3.0})
    assert [(d.where, d.ours, d.theirs) for d in found.differences] == [(("S", (2, 1)), 9.0, 6.0)]
    assert verdict(found, "A2") == "differ"
    assert verdict(found, "A3") == "match"


@pytest.mark.parametrize(
    ("formula", "reason"),
    [
        ("=B1:B9*1", "implicit intersection"),
        ("=SUM(S:T!A1)", "span of sheets"),
        ('=TEXT(A1,"0.0E+0")', "TEXT"),
        ("=DATE(2026,1,A1)", "DATE"),
        ("=SUM({1,2}*A1)", "array constant"),
        ('=STRESS_AXIAL("1 kN",,"MPa")', "leaves out an argument"),
        ("=SUM(Loads[x])", "refers to a table"),
        ("=NOSUCH(1)", "ours is not evaluated either"),
        ('=STRESS_AXIAL("12 kN","150 mm^2")', "several cells has no room"),
    ],
)
def test_a_weak_point_is_never_a_difference_nor_is_what_depends_on_it(
    tmp_path: Path, formula: str, reason: str
) -> None:
    cells = {"A1": 3, "A5": formula, "A6": "=A5", "B5": "kept", "D1": "x", "D2": 7, "D3": 8, "C9": "=A1+1"}
    found = second(tmp_path, cells, table="D1:D3", spoil={"A1": 3.0})
    assert not found.differences
    assert reason in verdict(found, "A5")
    assert verdict(found, "A6") not in {"match", "differ"}
    assert verdict(found, "C9") == "match"


def test_a_file_that_the_second_engine_cannot_open_is_no_difference(tmp_path: Path) -> None:
    book = openpyxl.Workbook()
    book.active["A1"] = "=1+1"
    path = tmp_path / "gone.xlsx"
    book.save(path)
    graph = build_graph(read_workbook(path))
    path.write_bytes(b"no workbook")
    found = recalculate(graph, evaluate(graph))
    assert found.as_object() == {"match": 0, "differ": 0, "not_evaluated": 1}
    assert "could not evaluate the workbook" in next(iter(found.not_evaluated))
