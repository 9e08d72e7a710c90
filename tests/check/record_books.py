"""Workbooks for the tests of the check record."""

import zipfile
from pathlib import Path

import openpyxl
from openpyxl.comments import Comment

from doubler.check.examination import check
from doubler.check.record import Record, write_record
from doubler.demo_data import templates_folder

DATE = "2031-05-06"


def colleague() -> Path:
    """Return the demo's workbook, which has faults on purpose."""
    return templates_folder() / "demo" / "colleague_bracket.xlsx"


def small_book(path: Path, load: float = 12.0, *, comment: str = "", sheet: str = "Lug") -> Path:
    """Build a sheet with a stress 1000 times too small, and a margin that rests on it."""
    book = openpyxl.Workbook()
    page = book.active
    page.title = sheet
    rows = [
        ("Load F [kN]", load),
        ("Area A [mm²]", 80.0),
        ("Stress σ [MPa]", "=B1/B2"),
        ("Yield strength [MPa]", 355.0),
        ("Safety factor", 1.5),
        ("Margin of safety", "=B4/(B5*B3)-1"),
    ]
    for number, (label, value) in enumerate(rows, start=1):
        page.cell(number, 1, label)
        page.cell(number, 2, value)
    if comment:
        page["B3"].comment = Comment(comment, "engineer")
    book.save(path)
    return path


def recorded(path: Path, folder: Path) -> Record:
    """Check a workbook and write its record."""
    return write_record(check(path), folder, DATE)


def parts(path: Path) -> dict[str, bytes]:
    """Return the parts of a package."""
    with zipfile.ZipFile(path) as package:
        return {name: package.read(name) for name in package.namelist()}
