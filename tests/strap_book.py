"""A small template and its cases for the tests of filling, sweeping and sizing: a strap pulled by a force."""

from pathlib import Path
from typing import Any

from openpyxl import Workbook
from openpyxl.workbook.defined_name import DefinedName
from openpyxl.worksheet.datavalidation import DataValidation

ROWS: list[tuple[str, str, Any, str]] = [
    ("Force", "load", 12.0, "kN"),
    ("Width", "width", 40.0, "mm"),
    ("Thickness", "thickness", 5.0, "mm"),
    ("Yield strength", "yield_strength", 320.0, "MPa"),
    ("Factor of safety", "factor", 1.5, ""),
    ("Case", "case_name", "base", ""),
    ("Area", "area", "=C4*C5", "mm^2"),
    ("Stress", "stress", "=C3*1000/C9", "MPa"),
    ("Margin of safety, yield", "ms_yield", "=C6/(C7*C10)-1", ""),
    ("Verdict", "verdict", '=IF(C11<0,"fails","holds")', ""),
]


def strap_template(path: Path, changes: dict[str, Any] | None = None, names: bool = True) -> Path:
    """Write the template; `changes` replaces values by name."""
    book = Workbook()
    sheet = book.active
    sheet.title = "Strap"
    sheet["A1"] = "Strap in tension"
    for row, (label, name, value, unit) in enumerate(ROWS, start=3):
        sheet.cell(row, 1, label)
        sheet.cell(row, 3, (changes or {}).get(name, value))
        sheet.cell(row, 4, unit or None)
        if names:
            book.defined_names[name] = DefinedName(name, attr_text=f"Strap!$C${row}")
    rule = DataValidation(type="decimal", operator="greaterThan", formula1="0")
    rule.add("C4:C5")
    sheet.add_data_validation(rule)
    other = book.create_sheet("Notes")
    other["A1"] = "Kept as it is"
    book.save(path)
    return path


def cases_csv(path: Path, text: str) -> Path:
    path.write_text(text, encoding="utf-8")
    return path


GOOD = "case,load [kN],width [mm]\nlight,10,40\nheavy,0.9e3,50\nsteady,24,40\n"
