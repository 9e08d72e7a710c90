"""The demo's colleague: a workbook of another layout than the templates, with faults put in on purpose.

The faults are listed beside it as data (`colleague_faults.yaml`), so that the demo and the tests can say which of them
a check found.
"""

from __future__ import annotations

from dataclasses import dataclass

from openpyxl import Workbook
from openpyxl.styles import Alignment, Border, Font, PatternFill, Side
from openpyxl.worksheet.properties import PageSetupProperties
from openpyxl.worksheet.worksheet import Worksheet

NAME = "colleague_bracket.xlsx"


@dataclass(frozen=True)
class Fault:
    """A fault put in: where a check is to show it, of which kind, and what is wrong there."""

    sheet: str
    cell: str
    kind: str
    words: str
    other_cell: str = ""


STALE_AT = ("Bracket", 10, 2)
STALE_SHARE = 0.93
"""The stale stored value is this share of the right one."""

FAULTS = (
    Fault("Data", "B11", "text-number", "the preload is stored as text and multiplied in Bracket!B13"),
    Fault("Data", "B12", "blank-input", "the friction coefficient is empty and read by Bracket!B13", "Bracket!B13"),
    Fault("Data", "B17", "modulus-mismatch", "G is 71000 MPa; E and ν give 80769 MPa", "Data!B16"),
    Fault("Data", "B22", "poisson-range", "a Poisson's ratio of 0.62"),
    Fault("Bracket", "B5", "unit-label", "an area that is labelled mm"),
    Fault("Bracket", "B6", "angle-unit", "degrees go into SIN"),
    Fault("Bracket", "B9", "unit-scale", "kN·m over mm³ times 1000 is GPa; the label says MPa"),
    Fault("Bracket", "B10", "stale-value", "the stored value is 7 % below what the formula gives"),
    Fault("Bracket", "B15", "error-value", "the bolt M18 is not in the table, so the cell shows #N/A"),
    Fault("Cases", "D9", "pasted-number", "a moment pasted over the formula of its column"),
    Fault("Cases", "G11", "negative-margin", "the arm is too weak in this case"),
)

_DATA = (
    (4, "Vertical load on the arm [kN]", 18.5),
    (5, "Arm length [mm]", 260),
    (6, "Inclination of the tie [deg]", 35),
    (7, "Plate width [mm]", 90),
    (8, "Plate thickness [mm]", 12),
    (9, "Bolt diameter [mm]", 16),
    (10, "Number of bolts", 4),
    (11, "Preload of a bolt [kN]", "32"),
    (12, "Friction coefficient", None),
    (15, "Plate: yield strength [MPa]", 355),
    (16, "Plate: Young's modulus E [MPa]", 210000),
    (17, "Plate: shear modulus G [MPa]", 71000),
    (18, "Plate: Poisson's ratio", 0.3),
    (21, "Bolt: Young's modulus E [MPa]", 205000),
    (22, "Bolt: Poisson's ratio", 0.62),
    (23, "Bolt: yield strength [MPa]", 640),
    (26, "Safety factor", 1.5),
)

_BRACKET = (
    (4, "Section modulus [mm³]", "=Data!B8*Data!B7^2/6"),
    (5, "Plate area [mm]", "=Data!B7*Data!B8"),
    (6, "Horizontal part of the load [kN]", "=Data!B4*SIN(Data!B6)"),
    (7, "Bending moment [kN·m]", "=Data!B4*Data!B5/1000"),
    (9, "Bending stress [MPa]", "=B7*1000/B4"),
    (10, "Shear stress of the plate [MPa]", "=Data!B4*1000/(Data!B7*Data!B8)"),
    (11, "Bolt shear stress [MPa]", "=Data!B4*1000/(Data!B10*PI()/4*Data!B9^2)"),
    (13, "Slip resistance [kN]", "=Data!B11*Data!B10*Data!B12"),
    (15, "Stress area of the bolt [mm²]", '=VLOOKUP("M18",D5:E8,2,FALSE)'),
)

_BOLTS = (("M12", 84.3), ("M16", 157), ("M20", 245), ("M24", 353))
_CASES = (
    ("calm", 6.5, 260), ("flood", 11.2, 260), ("ice", 14.0, 260), ("service", 7.5, 240), ("gate jammed", 12.5, 260),
    ("debris", 21.0, 260), ("ladder in use", 3.2, 300),
)  # fmt: skip
_INK, _LINE = "333A56", "C9CCDA"


def _title(sheet: Worksheet, words: str, widths: dict[str, float]) -> None:
    sheet["A1"] = words
    sheet["A1"].font = Font(name="Arial", size=13, bold=True, color=_INK)
    sheet["A2"] = "Sluice gate G2, ladder bracket (invented); working copy"
    sheet["A2"].font = Font(name="Arial", size=9, italic=True, color="6A7088")
    for column, width in widths.items():
        sheet.column_dimensions[column].width = width


def _pairs(sheet: Worksheet, rows: tuple[tuple[int, str, object], ...]) -> None:
    for row, label, value in rows:
        sheet.cell(row, 1, label).font = Font(name="Arial", size=10)
        cell = sheet.cell(row, 2)
        cell.value = value
        cell.font = Font(name="Arial", size=10)
        cell.alignment = Alignment(horizontal="right")
        cell.border = Border(bottom=Side(style="thin", color=_LINE))
        cell.number_format = "0.00" if isinstance(value, str) and value.startswith("=") else "General"


def _head(sheet: Worksheet, row: int, column: int, words: str) -> None:
    cell = sheet.cell(row, column, words)
    cell.font = Font(name="Arial", size=10, bold=True, color="FFFFFF")
    cell.fill = PatternFill("solid", fgColor=_INK)
    cell.alignment = Alignment(horizontal="center", wrap_text=True)


def build() -> Workbook:
    """Return the colleague's workbook, without stored values."""
    book = Workbook()
    data = book.active
    data.title = "Data"
    _title(data, "Bracket: data", {"A": 38, "B": 14})
    _pairs(data, _DATA)
    bracket = book.create_sheet("Bracket")
    _title(bracket, "Bracket: arm, plate and bolts", {"A": 38, "B": 14, "C": 4, "D": 12, "E": 14})
    _pairs(bracket, _BRACKET)
    _head(bracket, 4, 4, "Bolt")
    _head(bracket, 4, 5, "Area [mm²]")
    for row, (name, area) in enumerate(_BOLTS, 5):
        bracket.cell(row, 4, name)
        bracket.cell(row, 5, area)
    cases = book.create_sheet("Cases")
    _title(cases, "Bracket: load cases of the arm", {"A": 18, "B": 10, "C": 10, "D": 12, "E": 12, "F": 12, "G": 12})
    heads = ("Case", "Load", "Lever", "Moment", "Stress", "Allowable", "Margin of safety")
    for column, (words, unit) in enumerate(zip(heads, ("", "kN", "mm", "kN·m", "MPa", "MPa", "-"), strict=True), 1):
        _head(cases, 4, column, words)
        cases.cell(5, column, unit or None).alignment = Alignment(horizontal="center")
    for row, (name, load, lever) in enumerate(_CASES, 6):
        cases.cell(row, 1, name)
        cases.cell(row, 2, load)
        cases.cell(row, 3, lever)
        # The number pasted on purpose: from an older load of that case.
        cases.cell(row, 4, 1.62 if row == 9 else f"=B{row}*C{row}/1000").number_format = "0.000"
        cases.cell(row, 5, f"=D{row}*1000000/Bracket!$B$4").number_format = "0.0"
        cases.cell(row, 6, "=Data!$B$15/Data!$B$26").number_format = "0.0"
        cases.cell(row, 7, f"=F{row}/E{row}-1").number_format = "0.00"
        for column in range(1, 8):
            cases.cell(row, column).font = Font(name="Arial", size=10)
    for sheet in book.worksheets:
        sheet.sheet_properties.pageSetUpPr = PageSetupProperties(fitToPage=True)
        sheet.page_setup.fitToWidth, sheet.page_setup.fitToHeight = 1, 0
        sheet.page_setup.paperSize = 9
    return book


def faults_text() -> str:
    """Return the list of faults as YAML."""
    lines = [
        "# Faults put into colleague_bracket.xlsx on purpose; a check is to show each at its cell (or at other_cell).",
        "# Built by workbook_templates/build.py.",
    ]
    for fault in FAULTS:
        lines += [f"- sheet: {fault.sheet}", f"  cell: {fault.cell}", f"  kind: {fault.kind}"]
        lines.append(f'  words: "{fault.words}"')
        if fault.other_cell:
            lines.append(f"  other_cell: {fault.other_cell}")
    return "\n".join(lines) + "\n"
