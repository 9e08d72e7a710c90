"""Workbooks that are no stress calculations: no false alarm, no crash, and what was not judged is said."""

from pathlib import Path

import pytest

from check.other_books import BUILDERS, build
from doubler.check.examination import CheckReport, check
from doubler.check.record import write_record
from doubler.check.revisions import compare


@pytest.fixture(scope="module")
def reports(tmp_path_factory: pytest.TempPathFactory) -> dict[str, CheckReport]:
    folder = tmp_path_factory.mktemp("others")
    return {name: check(build(name, folder)) for name in BUILDERS}


@pytest.mark.parametrize("name", BUILDERS)
def test_no_false_alarm(reports: dict[str, CheckReport], name: str) -> None:
    assert [(f.kind, f.cell, f.message) for f in reports[name].findings if f.severity != "note"] == []


@pytest.mark.parametrize("name", BUILDERS)
def test_what_was_not_judged_is_said_once_with_all_that_hangs_on_it(reports: dict[str, CheckReport], name: str) -> None:
    report = reports[name]
    for kind, judged in (("not-recalculated", report.recalculated), ("not-traced", report.traced)):
        told = [f for f in report.findings if f.kind == kind]
        assert sum(1 + len(f.follows) for f in told) == report.formulas - judged
        assert len(told) <= 1


@pytest.mark.parametrize("name", BUILDERS)
def test_the_record_is_written_and_the_book_is_no_other_than_itself(
    reports: dict[str, CheckReport], tmp_path: Path, name: str
) -> None:
    report = reports[name]
    comparison = compare(report, report)
    assert comparison.changes == []
    assert comparison.moved == 0
    assert not comparison.gone
    assert not comparison.new
    record = write_record(report, tmp_path, "2031-05-06", comparison)
    assert "No input, formula, unit or margin changed." in record.html.read_text(encoding="utf-8")


def test_a_total_of_products_ends_where_the_range_it_is_multiplied_with_ends(
    reports: dict[str, CheckReport], tmp_path: Path
) -> None:
    import openpyxl

    assert not [f for f in reports["gradebook"].findings if f.kind == "short-range"]
    path = build("gradebook", tmp_path)
    book = openpyxl.load_workbook(path)
    page = book.active
    page["B1"], page["B2"] = 0.1, "Test 0"  # now both ranges leave out a filled cell
    book.save(path)
    assert [f for f in check(path).findings if f.kind == "short-range"]
