"""Dispositions and sign-off: carried while the cells behind them stand, and void when one of them changes."""

import json
from pathlib import Path
from typing import Any

import openpyxl

from check.record_books import recorded, small_book
from doubler.check.record import Record


def enter(record: Record, kind: str, text: str, by: str = "R. Roe", date: str = "6 May") -> None:
    """Enter a disposition in the marked workbook, and sign."""
    book = openpyxl.load_workbook(record.workbook)
    page = book["Check record"]
    for row in page.iter_rows():
        if row[2].value == kind and row[3].value:
            row[6].value, row[7].value, row[8].value = text, by, date
        if row[0].value == "Checker":
            row[3].value, row[5].value = "R. Roe", "6 May"
    book.save(record.workbook)


def of_kind(record: Record, kind: str) -> dict[str, Any]:
    found = json.loads(record.json.read_text(encoding="utf-8"))
    return next(one for one in found["findings"] if one["kind"] == kind)


def test_a_disposition_is_carried_to_the_next_record_and_to_the_one_after(tmp_path: Path) -> None:
    book = small_book(tmp_path / "lug.xlsx")
    record = recorded(book, tmp_path / "out")
    assert "disposition" not in of_kind(record, "unit-scale")
    enter(record, "unit-scale", "to be mended in issue B")
    for _ in range(2):
        record = recorded(book, tmp_path / "out")
        assert of_kind(record, "unit-scale")["disposition"] == {
            "text": "to be mended in issue B",
            "by": "R. Roe",
            "date": "6 May",
        }
        assert "to be mended in issue B" in record.html.read_text(encoding="utf-8")
        sheet = openpyxl.load_workbook(record.workbook)["Check record"]
        assert any(row[6].value == "to be mended in issue B" for row in sheet.iter_rows())


def test_changing_an_input_behind_a_finding_voids_its_disposition_and_the_sign_off(tmp_path: Path) -> None:
    book = small_book(tmp_path / "lug.xlsx")
    enter(recorded(book, tmp_path / "out"), "unit-scale", "accepted")
    page = recorded(book, tmp_path / "out").html.read_text(encoding="utf-8")
    assert "<td>R. Roe</td>" in page
    small_book(book, 12.5)
    record = recorded(book, tmp_path / "out")
    assert "disposition" not in of_kind(record, "unit-scale")
    page = record.html.read_text(encoding="utf-8")
    assert "cells behind it changed" in page
    assert "that sign-off does not hold for it" in page
    assert "<td>R. Roe</td>" not in page


def test_changing_a_cell_that_bears_on_no_finding_leaves_its_disposition(tmp_path: Path) -> None:
    book = small_book(tmp_path / "lug.xlsx")
    enter(recorded(book, tmp_path / "out"), "unit-scale", "accepted")
    changed = openpyxl.load_workbook(book)
    changed["Lug"]["A9"] = "a note of no weight"
    changed.save(book)
    record = recorded(book, tmp_path / "out")
    assert of_kind(record, "unit-scale")["disposition"]["text"] == "accepted"


def test_changing_the_unit_that_an_input_declares_voids_the_disposition(tmp_path: Path) -> None:
    book = small_book(tmp_path / "lug.xlsx")
    enter(recorded(book, tmp_path / "out"), "unit-scale", "accepted")
    changed = openpyxl.load_workbook(book)
    changed["Lug"]["A2"] = "Area A [cm²]"
    changed.save(book)
    record = recorded(book, tmp_path / "out")
    assert "disposition" not in of_kind(record, "unit-scale")


def test_a_disposition_of_a_finding_that_is_gone_is_told(tmp_path: Path) -> None:
    book = small_book(tmp_path / "lug.xlsx")
    enter(recorded(book, tmp_path / "out"), "unit-scale", "to be mended")
    mended = openpyxl.load_workbook(book)
    mended["Lug"]["B3"] = "=B1*1000/B2"
    mended.save(book)
    page = recorded(book, tmp_path / "out").html.read_text(encoding="utf-8")
    assert "finding is gone" in page
    assert "to be mended" in page
