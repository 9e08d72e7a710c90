"""Sheets that were written without looking at the rules: the fault is found, and the clean twin is silent.

Their first measure, before anything was mended for them, stands in docs/findings/measured.md.
"""

from __future__ import annotations

from pathlib import Path

import pytest
from tests.check.seeded.measure import outcome
from tests.check.written_sheets import Written, read_written

BOOKS = [read_written(path) for path in sorted((Path(__file__).parent / "blind").glob("*.txt"))]


@pytest.mark.parametrize("book", BOOKS, ids=lambda book: book.name)
def test_the_fault_is_found_and_the_clean_twin_is_silent(book: Written, tmp_path: Path) -> None:
    clean = outcome(book, None, tmp_path)
    assert not clean.strays, [finding.message for finding in clean.strays]
    assert clean.report.traced == clean.report.recalculated == clean.report.formulas
    for fault in book.faults:
        wrong = outcome(book, fault, tmp_path)
        assert wrong.found, [finding.message for finding in wrong.report.findings]
        assert not wrong.strays, [finding.message for finding in wrong.strays]


def test_the_sheets_are_there() -> None:
    assert len(BOOKS) >= 20
    assert all(book.faults for book in BOOKS)
