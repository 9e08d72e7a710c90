"""The corpus runner: its table, and what it says of crashes, hangs and values that are not reproduced.

A corpus itself is not part of the repository: set DOUBLER_CORPUS to its folders, parted by the path separator.
"""

import os
from pathlib import Path

import openpyxl
import pytest
import xlsxwriter

from corpus import run


def test_values_reproduced_missed_and_never_stored(tmp_path: Path) -> None:
    with xlsxwriter.Workbook(str(tmp_path / "stored.xlsx")) as book:
        sheet = book.add_worksheet()
        sheet.write(0, 0, 2)
        sheet.write_formula(0, 1, "=A1*3", None, 6)
        sheet.write_formula(0, 2, "=A1*3", None, 7)
        sheet.write_formula(0, 3, "=NOSUCH(A1)", None, 7)
    with xlsxwriter.Workbook(str(tmp_path / "never.xlsx")) as book:
        book.add_worksheet().write_formula(0, 0, "=1+1")
    stored, never = run.examine(tmp_path / "stored.xlsx"), run.examine(tmp_path / "never.xlsx")
    assert (stored.formulas, stored.evaluated, stored.stored, stored.reproduced) == (3, 2, 2, 1)
    assert stored.missed == [("Sheet1!C1", "7.0", "6.0", "differs")]
    assert list(stored.reasons) == ["the function NOSUCH is not known here"]
    assert never.missed[0][3] == "never stored by its writer"
    assert not [line for line in never.told if "stale-value" in line]
    line = run.table(["x"], {"x": [stored, never]})[-1]
    assert line.startswith("| x | 2 | 0 | 0 | 4 | 3 | 3 | 1 (33.3 %)")


def test_a_refusal_a_crash_and_a_hang_are_told_apart(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    (tmp_path / "none.xlsx").write_bytes(b"")
    assert "is empty" in run.examine(tmp_path / "none.xlsx").refused
    openpyxl.Workbook().save(tmp_path / "good.xlsx")

    def fail(_: Path) -> None:
        raise ZeroDivisionError("of ours")

    monkeypatch.setattr("doubler.check.examination.check", fail)
    assert "of ours" in run.examined_aside(tmp_path / "good.xlsx").trouble
    monkeypatch.setattr(run, "SECONDS", 0.2)
    monkeypatch.setattr("doubler.check.examination.check", lambda _: __import__("time").sleep(5))
    assert run.examined_aside(tmp_path / "good.xlsx").trouble == "hang: more than 0.2 s"


@pytest.mark.skipif("DOUBLER_CORPUS" not in os.environ, reason="no corpus is given in DOUBLER_CORPUS")
def test_the_corpus_is_evaluated() -> None:
    folders = [Path(text) for text in os.environ["DOUBLER_CORPUS"].split(os.pathsep)]
    results = [run.examined_aside(path) for folder in folders for path in run.workbooks(folder)]
    assert not [result.trouble for result in results if result.trouble]
    assert all(r.evaluated + sum(r.reasons.values()) == r.formulas for r in results)
    stored = sum(result.stored for result in results)
    assert sum(result.reproduced for result in results) >= 0.9 * stored
