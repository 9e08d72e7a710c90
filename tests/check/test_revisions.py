"""Two revisions: moved rows and renamed sheets are no changes; inputs, formulas, units, margins and findings are."""

from dataclasses import replace
from pathlib import Path

from tests.check.written_sheets import Fault, Written, all_written, build

from doubler.check.examination import check
from doubler.check.revisions import Comparison, compare

BOOKS = {book.name: book for book in all_written()}


def compared(tmp_path: Path, new: Written, old: Written, new_fault=None, old_fault=None) -> Comparison:
    earlier = check(build(old, tmp_path / "old.xlsx", old_fault))
    return compare(check(build(new, tmp_path / "new.xlsx", new_fault)), earlier)


def moved(book: Written, down: int, sheet: str) -> Written:
    """The same workbook with its rows further down and its sheets renamed."""
    names = {name: f"{sheet} {name}" for name in book.sheets}
    cells = {(names[s], r + down, c): text for (s, r, c), text in book.cells.items()}
    tags = {tag: (names[s], r + down, c) for tag, (s, r, c) in book.tags.items()}
    return replace(book, cells=cells, tags=tags, sheets=list(names.values()), lines=[])


def test_moved_rows_and_renamed_sheets_are_no_changes(tmp_path: Path) -> None:
    for name in ("strap_symbols", "several_sheets", "lug_left_unit", "section_builtup"):
        book = BOOKS[name]
        plain = replace(book, lines=[])
        result = compared(tmp_path, moved(plain, 3, "Rev B"), plain)
        assert [c.as_object() for c in result.changes] == []
        assert not result.gone
        assert not result.new


def test_a_changed_input_shows_with_the_margins_that_it_changes(tmp_path: Path) -> None:
    book = BOOKS["strap_symbols"]
    result = compared(tmp_path, book, book, Fault("x", "F", {"F": "13.5"}))
    assert [(c.what, c.cell) for c in result.changes] == [
        ("input", "Strap!C4"), ("margin", "Strap!C16"), ("margin", "Strap!C17"), ("margin", "Strap!C18"),
    ]  # fmt: skip
    assert (result.changes[0].before, result.changes[0].after) == ("12.5 kN", "13.5 kN")


def test_formulas_and_units_that_change_are_told(tmp_path: Path) -> None:
    book = BOOKS["strap_symbols"]
    changed = Fault("x", "A", {"A": "={w}*{t}", "Strap!D6": "cm", "t": "0.3"})
    result = compared(tmp_path, book, book, changed)
    assert {(c.what, c.cell) for c in result.changes if c.what != "margin"} == {
        ("formula", "Strap!C13"), ("unit", "Strap!C6"), ("input", "Strap!C6"),
    }  # fmt: skip


def test_findings_gone_left_and_new(tmp_path: Path) -> None:
    book = BOOKS["strap_symbols"]
    by_kind = {fault.kind: fault for fault in book.faults}
    result = compared(tmp_path, book, book, by_kind["blank-input"], by_kind["margin-form"])
    assert "margin-form" in [f.kind for f in result.gone]
    assert "blank-input" in [f.kind for f in result.new]
    same = compared(tmp_path, book, book, by_kind["margin-form"], by_kind["margin-form"])
    assert [f.kind for f in same.left if f.severity == "error"] == ["margin-form"]
    assert not same.gone
    assert not same.new
