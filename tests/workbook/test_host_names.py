"""Names under which spreadsheet programs store our functions: read as the plain names everywhere."""

from pathlib import Path

import openpyxl
import pytest
from openpyxl.worksheet.formula import ArrayFormula

from doubler.check.examination import check
from doubler.workbook.evaluate import evaluate_formula
from doubler.workbook.parse import parse

CALL = '("12 kN","150 mm^2","MPa")'
STORED = [
    "DOUBLER.FUNCTIONS.STRESS_AXIAL",
    "doubler.functions.stress_axial",
    "_xll.STRESS_AXIAL",
    "_xlfn._xll.STRESS_AXIAL",
    "_xludf.stress_axial",
    "[1]!STRESS_AXIAL",
    "'C:\\add ins\\doubler_addin.xlam'!STRESS_AXIAL",
    "doubler_addin.xlam!STRESS_AXIAL",
]


@pytest.mark.parametrize("name", STORED)
def test_a_stored_name_is_the_plain_function(name: str) -> None:
    assert parse(f"={name}{CALL}") == parse(f"=STRESS_AXIAL{CALL}")
    assert evaluate_formula(f"=1+{name}{CALL}*2").grid == [[161.0]]


def test_the_function_of_another_add_in_stays_what_it_is() -> None:
    assert parse("=[1]!MAX(1)") != parse("=MAX(1)")


def test_a_checked_workbook_with_stored_names_is_sound(tmp_path: Path) -> None:
    made = openpyxl.Workbook()
    sheet = made.active
    for row, (label, value) in enumerate([("Load [kN]", 12.0), ("Area [mm^2]", 150.0)], 1):
        sheet.cell(row, 1).value, sheet.cell(row, 2).value = label, value
    for row, name in enumerate(STORED[:5], 3):
        sheet.cell(row, 1).value = "Stress [MPa]"
        sheet.cell(row, 2).value = f'={name}(B1*1000,B2,"N-mm")'
        sheet.cell(row, 3).value = f"=DOUBLER.FUNCTIONS.UNIT_REASON(B{row})"
    sheet["E12"] = ArrayFormula("E12:F12", f"=DOUBLER.FUNCTIONS.STRESS_AXIAL{CALL[:-7]})")
    path = tmp_path / "stored.xlsx"
    made.save(path)
    found = check(path)
    assert not [finding for finding in found.findings if finding.severity != "note"], found.findings
    assert not any("not known" in finding.message for finding in found.findings)
