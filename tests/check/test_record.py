"""The check record as a whole: what is written, under which names, and what is left alone."""

import json
from pathlib import Path

import pytest

from check.record_books import DATE, colleague, recorded, small_book
from doubler.check.examination import check
from doubler.check.record import record_paths, refuse_shared_names, write_record
from doubler.demo_data import templates_folder
from doubler.errors import InputError


def test_three_files_are_written_and_the_workbook_is_untouched(tmp_path: Path) -> None:
    book = small_book(tmp_path / "lug v2.1.xlsx")
    before = book.read_bytes()
    record = recorded(book, tmp_path / "out" / "deep")
    assert [p.name for p in (record.html, record.workbook, record.json)] == [
        "lug v2.1.check.html",
        "lug v2.1.checked.xlsx",
        "lug v2.1.findings.json",
    ]
    assert sorted(p.name for p in record.html.parent.iterdir()) == sorted(
        [record.html.name, record.workbook.name, record.json.name]
    )
    assert book.read_bytes() == before


def test_the_json_is_the_checks_object_with_formulas_hashes_and_margins(tmp_path: Path) -> None:
    record = recorded(colleague(), tmp_path)
    found = json.loads(record.json.read_text(encoding="utf-8"))
    plain = check(colleague()).as_object()
    assert {key: found[key] for key in ("workbook", "sha256", "coverage", "counts")} == {
        key: plain[key] for key in ("workbook", "sha256", "coverage", "counts")
    }
    assert found["date"] == DATE
    assert all(len(one["behind"]) == 16 for one in found["findings"])
    scale = next(one for one in found["findings"] if one["kind"] == "unit-scale")
    assert scale["formula"]["numbers"].startswith("4.81 kN·m × 1000 / ")
    lowest = found["margins"][0]
    assert (lowest["cell"], round(lowest["value"], 6)) == ("Cases!G11", -0.297802)


def test_a_margin_tells_on_which_findings_it_rests(tmp_path: Path) -> None:
    record = recorded(small_book(tmp_path / "lug.xlsx"), tmp_path)
    found = json.loads(record.json.read_text(encoding="utf-8"))
    scale = next(one for one in found["findings"] if one["kind"] == "unit-scale")
    margin = next(one for one in found["margins"] if one["cell"] == "Lug!B6")
    assert scale["number"] in margin["rests_on"]


def test_a_file_that_is_no_record_is_not_overwritten(tmp_path: Path) -> None:
    book = small_book(tmp_path / "lug.xlsx")
    (tmp_path / "out").mkdir()
    other = small_book(tmp_path / "out" / "lug.checked.xlsx")
    before = other.read_bytes()
    with pytest.raises(InputError, match="no sheet 'Check record', so it is not overwritten"):
        recorded(book, tmp_path / "out")
    assert other.read_bytes() == before


def test_a_workbook_changed_while_it_was_checked_is_refused(tmp_path: Path) -> None:
    book = small_book(tmp_path / "lug.xlsx")
    report = check(book)
    small_book(book, 13.0)
    with pytest.raises(InputError, match=r"lug\.xlsx was changed while it was being checked; check it again"):
        write_record(report, tmp_path / "out", DATE)
    assert list((tmp_path / "out").iterdir()) == []


def test_two_workbooks_whose_records_share_a_name_are_refused(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="each with its own folder for --record"):
        refuse_shared_names([Path("a/Lug.xlsx"), Path("b/lug.xlsm")], tmp_path)
    refuse_shared_names([Path("a/lug.xlsx"), Path("a/lug.xlsx"), Path("a/pin.xlsx")], tmp_path)


def test_a_workbook_with_macros_keeps_its_suffix() -> None:
    assert record_paths(Path("lug.xlsm"), Path("out")).workbook == Path("out/lug.checked.xlsm")


def test_every_margin_of_the_strap_template_is_re_derived(tmp_path: Path) -> None:
    record = recorded(templates_folder() / "tension_strap.xlsx", tmp_path)
    found = json.loads(record.json.read_text(encoding="utf-8"))
    assert {one["cell"] for one in found["margins"]} == {f"Strap!C{row}" for row in range(40, 49)}
