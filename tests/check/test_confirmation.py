"""The second engine in `doubler check`: counts under coverage, and a word where the two disagree."""

import json
from pathlib import Path

import openpyxl
import pytest

from doubler.check.confirmation import confirmed
from doubler.check.examination import report_on
from doubler.cli import main
from doubler.workbook.examined import Examined
from doubler.workbook.reader import read_workbook


def written(folder: Path) -> Path:
    book = openpyxl.Workbook()
    sheet = book.active
    sheet.title = "S"
    sheet["A1"], sheet["A2"], sheet["A3"], sheet["A4"] = 2, "=A1*3", "=A2+1", "=DATE(2026,1,1)"
    path = folder / "book.xlsx"
    book.save(path)
    return path


def test_counts_are_an_extra_key_and_only_on_demand(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    path = written(tmp_path)
    assert main(["check", str(path), "--json", "-", "--second"]) == 0
    (found,) = json.loads(capsys.readouterr().out)
    assert found["coverage"]["second"] == {"match": 2, "differ": 0, "not_evaluated": 1}
    assert main(["check", str(path), "--json", "-"]) == 0
    (found,) = json.loads(capsys.readouterr().out)
    assert "second" not in found["coverage"]


def test_a_disagreement_is_one_warning_at_its_root(tmp_path: Path) -> None:
    path = written(tmp_path)
    read = read_workbook(path)
    read.sheets[0].cells[1, 1].value = 5.0
    report = confirmed(report_on(Examined(read), path, ()))
    (finding,) = report.findings
    assert (finding.cell, finding.kind, finding.severity) == ("A2", "not-recalculated", "warning")
    assert (finding.found, finding.expected, finding.follows) == ("15", "6", ("S!A3",))
