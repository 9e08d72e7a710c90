"""The mended copy: its mends are right, marked, recalculated; all else stays; the original is untouched."""

from pathlib import Path

import pytest
from tests.check.written_sheets import Fault, Written, all_written, build

from doubler.check.examination import check
from doubler.check.mended_copy import write_mended
from doubler.errors import InputError
from doubler.workbook.addresses import parse_cell

BOOKS = {book.name: book for book in all_written()}
MENDED = ("pasted-number", "pattern-break", "short-range", "text-number", "margin-form", "allowable-mixed")
CASES = [(book, fault) for book in BOOKS.values() for fault in book.faults if fault.kind in MENDED]


@pytest.mark.parametrize(("book", "fault"), CASES, ids=[f"{b.name}-{f.number}-{f.kind}" for b, f in CASES])
def test_a_mended_copy_gives_the_values_of_the_clean_twin(book: Written, fault: Fault, tmp_path: Path) -> None:
    path = build(book, tmp_path / "wrong.xlsx", fault)
    before = path.read_bytes()
    report = check(path)
    done = write_mended(report, tmp_path / "mended.xlsx")
    assert path.read_bytes() == before
    clean = check(build(book, tmp_path / "clean.xlsx"))
    after = check(tmp_path / "mended.xlsx")
    sheet, address = book.address(fault.at.split("|")[0])
    key = (sheet, parse_cell(address))
    if not done:
        pytest.skip("the mend is not beyond doubt")
    assert key in {mend.key for _, mend in done}
    assert after.book.number(key) == pytest.approx(clean.book.number(key), rel=1e-9)
    assert not [f for f in after.findings if f.kind == fault.kind and (f.sheet, f.cell) == (sheet, address)]
    assert not [f for f in after.findings if f.kind == "stale-value"]
    assert after.book.workbook.sheet(sheet).comments[key[1]].count("Mended by doubler")


def test_the_workbook_itself_is_never_the_target(tmp_path: Path) -> None:
    path = build(BOOKS["strap_symbols"], tmp_path / "book.xlsx")
    with pytest.raises(InputError, match="is the file that is read"):
        write_mended(check(path), path)
