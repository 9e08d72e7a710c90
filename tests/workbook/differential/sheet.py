"""The sheet on which the differential test's formulas stand, and its three sets of data.

The formulas are lines of the text files beside this module, one formula a line; ``[3x2] =…`` is an array formula over
three rows and two columns, and a line that begins with ``#`` is a heading.
"""

import re
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import openpyxl
from openpyxl.workbook.defined_name import DefinedName
from openpyxl.worksheet.formula import ArrayFormula

FOLDER = Path(__file__).parent
FIRST_ROW = 21
COLUMN = 26

FUTURE = set((FOLDER / "newer_functions.txt").read_text(encoding="utf-8").split())
"""Functions that a file stores with a prefix."""

CASES: tuple[dict[str, Any], ...] = (
    {"A1": 3.0, "A2": 1.5, "A3": -2.0, "A4": 7.25, "A5": 0.0, "A6": 12.0, "A9": 100.0, "A10": 0.1, "B5": 5.0},
    {"A1": 4.0, "A2": -0.5, "A3": 2.0, "A4": 0.3, "A5": 1.0, "A6": 9.0, "A9": 16.0, "A10": 2.5, "B5": "17"},
    {"A1": 0.5, "A2": 2.5, "A3": 0.0, "A4": -7.25, "A5": -1.0, "A6": 0.75, "A9": -8.0, "A10": 3.0, "B5": False},
)
"""The cells that vary, in each case."""

FIXED: dict[str, Any] = {
    "A7": 4.0, "A8": 4.0,
    "B1": "text", "B2": "12", "B3": True, "B6": "abc", "B7": False, "B8": -3.0, "B9": "Abd", "B10": 8.0,
    **{f"C{k + 1}": 2.0**k for k in range(10)},
    **{f"D{k + 1}": name for k, name in enumerate(
        ["alpha", "beta", "gamma", "delta", "epsilon", "zeta", "eta", "theta", "iota", "kappa"])},
    **{f"E{k + 1}": y for k, y in enumerate([2.1, 3.9, 6.2, 7.8, 10.1, 12.2, 13.8, 16.1, 18.0, 20.2])},
    **{f"F{k + 1}": x for k, x in enumerate([1.0, 2.0, 3.0, 4.0, 5.0, 6.0, 7.0, 8.0, 9.0, 10.0])},
    "G1": 2.0, "H1": -1.0, "I1": 0.0, "G2": 1.0, "H2": 3.0, "I2": 2.0, "G3": 0.5, "H3": 4.0, "I3": 7.0,
    **{f"J{k + 1}": 90.0 - 10.0 * k for k in range(8)},
    "K1": "=1/0", "K2": "=NA()", "K3": "=A1*2", "K4": "=B1", "K5": '=""', "K6": "=A1>1", "K7": "  spaced  out ",
    "L1": "b", "L2": "a", "L3": "c", "L4": "a", "L5": "B",
    "M1": 10.0, "M2": 20.0, "M3": 30.0, "M4": 40.0, "M5": 50.0,
    "N1": "x", "O1": "y", "P1": "z", "N2": 1.25, "O2": 2.5, "P2": 3.75, "N3": 7.0, "O3": 8.0, "P3": 9.0,
    "Q1": 45000.0, "Q2": 45123.75, "Q3": 36526.0, "Q4": 60.0, "Q5": 0.5,
}  # fmt: skip

NAMES = {"load": "S!$A$1", "table": "S!$N$1:$P$3", "factor": "2.5", "beside": "S!Y1"}


@dataclass(frozen=True)
class Line:
    """One formula of the test."""

    topic: str
    text: str
    rows: int = 1
    columns: int = 1
    array: bool = False


def lines() -> list[Line]:
    found = []
    for path in sorted((FOLDER / "formulas").glob("*.txt")):
        for line in path.read_text(encoding="utf-8").splitlines():
            if not line.strip() or line.startswith("#"):
                continue
            match = re.match(r"\[(\d+)x(\d+)\] (=.*)", line)
            if match:
                found.append(Line(path.stem, match[3], int(match[1]), int(match[2]), True))
            else:
                assert line.startswith("="), line
                found.append(Line(path.stem, line))
    return found


def placed(chosen: list[Line]) -> list[tuple[int, Line]]:
    """Return each formula with its row."""
    row, found = FIRST_ROW, []
    for line in chosen:
        found.append((row, line))
        row += line.rows
    return found


def stored(formula: str) -> str:
    """Return a formula as a file stores it, with the prefix of the newer functions."""
    parts = re.split(r'("(?:[^"]|"")*")', formula)
    for at in range(0, len(parts), 2):
        parts[at] = re.sub(
            r"(?<![\w.])([A-Z][A-Z0-9.]*)\(", lambda m: ("_xlfn." if m[1] in FUTURE else "") + m[0], parts[at]
        )
    return "".join(parts)


def write(path: Path, case: int, chosen: list[Line]) -> None:
    """Write the workbook of one case."""
    book = openpyxl.Workbook()
    sheet = book.active
    sheet.title = "S"
    for address, value in {**FIXED, **CASES[case]}.items():
        sheet[address] = value
        if isinstance(value, str) and not value.startswith("="):
            sheet[address].data_type = "s"
    for name, text in NAMES.items():
        book.defined_names[name] = DefinedName(name, attr_text=text)
    for number in (1, 2, 3):
        other = book.create_sheet(f"T{number}")
        other["A1"], other["A2"], other["B1"] = number * 1.5, number * 10, f"t{number}"
    for row, line in placed(chosen):
        cell = sheet.cell(row, COLUMN)
        if line.array:
            last = sheet.cell(row + line.rows - 1, COLUMN + line.columns - 1)
            cell.value = ArrayFormula(f"{cell.coordinate}:{last.coordinate}", stored(line.text))
        else:
            cell.value = stored(line.text)
    book.save(path)
