"""What a fault does to the margins: one that hides a negative margin comes first, and the message says so."""

from pathlib import Path

import pytest
from tests.check.written_sheets import Fault, all_written, build

from doubler.check.examination import CheckReport, check

BOOKS = {book.name: book for book in all_written()}


def checked(tmp_path: Path, name: str, **edits: str) -> CheckReport:
    return check(build(BOOKS[name], tmp_path / f"{name}.xlsx", Fault("x", next(iter(edits)), edits)))


@pytest.mark.parametrize(
    ("name", "edits", "kind", "cell"),
    [
        ("strap_symbols", {"sl": "={F}/{A}", "F": "40"}, "unit-scale", "C14"),
        ("beam_brackets", {"m1": "={Fty}/({SF}*{sb})", "P": "11000"}, "margin-form", "B25"),
        ("us_beam", {"m2": "={Ftu}*1000/({FS}*{fs})-1", "w": "3000"}, "allowable-mixed", "C20"),
    ],
)
def test_a_fault_that_hides_a_negative_margin_comes_first(
    tmp_path: Path, name: str, edits: dict[str, str], kind: str, cell: str
) -> None:
    report = checked(tmp_path, name, **edits)
    first = report.findings[0]
    assert (first.kind, first.cell, first.turns) == (kind, cell, True), [f.message for f in report.findings]
    assert "as written, -" in first.message


def test_a_margin_that_a_fault_spoils_stands_under_it(tmp_path: Path) -> None:
    report = checked(tmp_path, "beam_brackets", M="={P}*{L}")
    wrong = [f for f in report.findings if f.severity != "note"]
    assert [(f.kind, f.cell) for f in wrong] == [("unit-scale", "B20")]
    assert "Sheet1!B25" in wrong[0].follows


def test_a_margin_that_stays_negative_when_the_fault_is_mended_is_told_too(tmp_path: Path) -> None:
    report = checked(tmp_path, "beam_brackets", M="={P}*{L}", P="20000")
    wrong = {f.kind for f in report.findings if f.severity != "note"}
    assert wrong == {"unit-scale", "negative-margin"}
