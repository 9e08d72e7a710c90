"""A formula changed: what is built anew in part gives what a workbook built anew in whole gives."""

import itertools
from pathlib import Path

import openpyxl
import pytest
from tests.check.written_sheets import all_written, build

from doubler.check.altered import values_altered, with_formulas
from doubler.workbook.evaluate import NotEvaluated, evaluate
from doubler.workbook.examined import Examined
from doubler.workbook.graph import build_graph

BOOKS = all_written()[::4]


def same(first: object, second: object) -> bool:
    if isinstance(first, NotEvaluated) or isinstance(second, NotEvaluated):
        return isinstance(first, NotEvaluated) and isinstance(second, NotEvaluated)
    return first == second


@pytest.mark.parametrize("written", BOOKS, ids=lambda book: book.name)
def test_the_part_gives_what_the_whole_gives(tmp_path: Path, written) -> None:
    book = Examined.read(build(written, tmp_path / "book.xlsx", None))
    tried = 0
    for key, cell in itertools.islice(book.formulas(), 0, None, 3):
        changed = {key: f"({cell.formula})*1.25"}
        wanted = [key, *sorted(book.downstream([key]))]
        whole = evaluate(build_graph(with_formulas(book.workbook, changed)), None, wanted)
        part = values_altered(book, changed, wanted)
        assert all(same(part[one], whole.value(*one)) for one in wanted), key
        tried += 1
    assert tried


@pytest.mark.parametrize(
    ("formulas", "changed"),
    [
        ({"A1": "=SUBTOTAL(9,B1:B2)", "A2": "=SUBTOTAL(9,A1,B1:B2)", "A3": "=A2+1"}, "A3"),
        ({"A1": "=A2+1", "A2": "=A1+1", "A3": "=B1*2", "A4": "=A3+A1"}, "A3"),
        ({"A1": '=IF(B1>0,"","x")', "A2": "=COUNTA(A1:A1)", "A3": "=A2*2"}, "A2"),
        ({"A1": "=C9", "A2": "=COUNTBLANK(A1:A1)", "A3": "=A2*2"}, "A2"),
    ],
)
def test_circles_subtotals_and_empty_texts_are_as_they_were(
    tmp_path: Path, formulas: dict[str, str], changed: str
) -> None:
    page = (made := openpyxl.Workbook()).active
    page["B1"], page["B2"] = 3.0, 4.0
    for at, text in formulas.items():
        page[at] = text
    made.save(tmp_path / "book.xlsx")
    book = Examined.read(tmp_path / "book.xlsx")
    key = (page.title, (int(changed[1:]), 1))
    altered = {key: formulas[changed][1:] + "+5"}
    wanted = [key, *sorted(book.downstream([key]))]
    whole = evaluate(build_graph(with_formulas(book.workbook, altered)), None, wanted)
    part = values_altered(book, altered, wanted)
    assert [str(part[one]) for one in wanted] == [str(whole.value(*one)) for one in wanted]


def test_a_new_formula_that_reads_what_hangs_on_it_is_a_circle(tmp_path: Path) -> None:
    page = (made := openpyxl.Workbook()).active
    page["A1"], page["A2"], page["A3"] = 2.0, "=A1*2", "=A2+1"
    made.save(tmp_path / "book.xlsx")
    book = Examined.read(tmp_path / "book.xlsx")
    key = (page.title, (2, 1))
    assert isinstance(values_altered(book, {key: "A3*2"}, [key])[key], NotEvaluated)
