"""Small workbooks for tests: sheets written as the cells that an engineer would type."""

from __future__ import annotations

from pathlib import Path

from doubler.workbook.graph import build_graph
from doubler.workbook.model import Cell, Sheet, Workbook
from doubler.workbook.references import column_number
from doubler.workbook.unit_flow import trace
from doubler.workbook.unit_verdicts import Tracing, UnitFinding

Value = float | str | bool | None


def cell_of(text: str) -> tuple[int, int]:
    letters = "".join(c for c in text if c.isalpha())
    return int(text[len(letters) :]), column_number(letters)


def sheet_of(name: str, cells: dict[str, Value], formats: dict[str, int] | None = None) -> Sheet:
    sheet = Sheet(name, f"xl/worksheets/{name}.xml")
    for place, value in cells.items():
        style = (formats or {}).get(place, 0)
        if isinstance(value, str) and value.startswith("="):
            sheet.cells[cell_of(place)] = Cell(None, value[1:], style)
        else:
            held = float(value) if isinstance(value, int) and not isinstance(value, bool) else value
            sheet.cells[cell_of(place)] = Cell(held, None, style)
    return sheet


def book(*sheets: Sheet, number_formats: list[str] | None = None) -> Workbook:
    return Workbook(Path("made.xlsx"), "0", list(sheets), number_formats=number_formats or ["General"])


def rows(*lines: tuple[Value, ...], start: str = "A1") -> dict[str, Value]:
    """Lay lines out as rows of cells from `start` on; None leaves a cell empty."""
    from doubler.workbook.references import address_text

    top, left = cell_of(start)
    return {
        address_text((top + i, left + j)): value
        for i, line in enumerate(lines)
        for j, value in enumerate(line)
        if value is not None
    }


def traced(*sheets: Sheet | dict[str, Value], number_formats: list[str] | None = None) -> Tracing:
    made = [s if isinstance(s, Sheet) else sheet_of(f"S{i + 1}", s) for i, s in enumerate(sheets)]
    workbook = book(*made, number_formats=number_formats)
    return trace(workbook, build_graph(workbook))


def told(tracing: Tracing) -> list[tuple[str, str, str]]:
    """Return place, kind and severity of each finding."""
    return [(finding.place, finding.kind, finding.severity) for finding in tracing.findings]


def only(tracing: Tracing) -> UnitFinding:
    assert len(tracing.findings) == 1, [f.message for f in tracing.findings]
    return tracing.findings[0]
