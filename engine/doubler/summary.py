"""``summary.xlsx``: every case's outputs, the envelope with the governing cases, and a chart of margins by case."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any

import numpy as np

from doubler.cases import CaseBatch
from doubler.errors import ErrorValue
from doubler.outcome import EnvelopeLine
from doubler.workbook.model import Scalar
from doubler.workbook.output import write_file
from doubler.workbook.template import Port

INK, TEAL, PALE, RUST, BLUSH, GREY = "1D3244", "1F6F6B", "E4EFEE", "A63A24", "F9E3DC", "6B7780"
"""Our colours: headings, what holds, its ground, what is below zero, its ground, remarks."""


class SummaryRows:
    """Collects what the sheet of cases shows: names, inputs and outputs, one row a case.

    Parameters
    ----------
    inputs, outputs : sequence of Port
    """

    def __init__(self, inputs: Sequence[Port], outputs: Sequence[Port]) -> None:
        self.inputs, self.outputs = list(inputs), list(outputs)
        self.names: list[str] = []
        self.columns: dict[Port, list[Scalar]] = {port: [] for port in (*inputs, *outputs)}

    def take(self, batch: CaseBatch, results: Mapping[str, Any]) -> None:
        """Add a batch of cases with their results by output."""
        self.names += batch.names
        for port in self.inputs:
            self.columns[port] += list(_listed(batch.values[port], len(batch.names)))
        for port in self.outputs:
            self.columns[port] += _listed(results[port.name], len(batch.names))


def _listed(values: Any, count: int) -> list[Scalar]:
    if isinstance(values, list):
        return values
    return list(values.tolist()) if isinstance(values, np.ndarray) else [values] * count


def write_summary(target: Path, title: str, rows: SummaryRows, lines: Sequence[EnvelopeLine]) -> None:
    """Write the summary workbook, in full or not at all.

    Parameters
    ----------
    target : Path
        The ``.xlsx`` file to write.
    title : str
        What was filled, for the head of the sheet.
    rows : SummaryRows
        All cases.
    lines : sequence of EnvelopeLine
        The envelope over them.
    """
    import io

    from openpyxl import Workbook

    book = Workbook()
    sheet = book.active
    assert sheet is not None
    sheet.title = "Envelope"
    cases = book.create_sheet("Cases")
    margins = [line.port for line in lines if line.port.is_margin]
    chart_column = _write_cases(cases, rows, margins)
    _write_envelope(sheet, title, lines, len(rows.names))
    if margins:
        _add_chart(sheet, cases, chart_column, len(rows.names), len(lines) + 8)
    stream = io.BytesIO()
    book.save(stream)
    write_file(target, [stream.getvalue()])


def _put(sheet: Any, row: int, column: int, value: Scalar, **style: Any) -> Any:
    from openpyxl.styles import Alignment, Font, PatternFill

    cell = sheet.cell(row, column)
    if isinstance(value, ErrorValue):
        cell.value, cell.data_type = str(value), "e"
    elif isinstance(value, str):
        cell.value, cell.data_type = value, "s"  # text never becomes a formula
    else:
        cell.value = value
    cell.font = Font(
        name="Liberation Sans", size=style.get("size", 10), bold=style.get("bold", False), color=style.get("color", INK)
    )
    if "fill" in style:
        cell.fill = PatternFill("solid", fgColor=style["fill"])
    if "format" in style:
        cell.number_format = style["format"]
    cell.alignment = Alignment(horizontal=style.get("align"), vertical="center", wrap_text=style.get("wrap", False))
    return cell


def _number_format(port: Port) -> str:
    return "0.000" if port.is_margin else "#,##0.###" if port.unit is not None else "General"


def _write_envelope(sheet: Any, title: str, lines: Sequence[EnvelopeLine], count: int) -> None:
    _put(sheet, 1, 1, f"Envelope of {title}", size=15, bold=True)
    below = sum(line.below_zero > 0 for line in lines)
    lost = sum(line.not_computed > 0 for line in lines)
    verdict = f"{count} load cases. "
    verdict += f"{below} of the margins fall below zero. " if below else "No margin falls below zero. "
    verdict += (
        f"{lost} outputs could not be computed in every case." if lost else "Every output was computed in every case."
    )
    _put(sheet, 2, 1, verdict, bold=True, color=RUST if below or lost else TEAL)
    caution = "An aid to calculation: to be checked and approved under the applicable codes by a qualified engineer."
    _put(sheet, 3, 1, caution, color=GREY, size=9)
    heads = ("Output", "What it is", "Unit", "Lowest", "Governing case", "Highest", "In case", "Cases below zero")
    for column, head in enumerate(heads, start=1):
        _put(sheet, 5, column, head, bold=True, color="FFFFFF", fill=INK, wrap=True)
    for row, line in enumerate(lines, start=6):
        bad = line.below_zero > 0 or line.not_computed > 0
        look: dict[str, Any] = {"fill": BLUSH if bad else PALE} if line.port.is_margin else {}
        shown = _number_format(line.port)
        _put(sheet, row, 1, line.port.name, bold=line.port.is_margin, **look)
        _put(sheet, row, 2, line.port.label, wrap=True, **look)
        _put(sheet, row, 3, line.port.unit.text if line.port.unit else "", **look)
        _put(sheet, row, 4, line.lowest.value, format=shown, bold=True, color=RUST if bad else INK, **look)
        _put(sheet, row, 5, line.lowest.case, **look)
        _put(sheet, row, 6, line.highest.value, format=shown, **look)
        _put(sheet, row, 7, line.highest.case, **look)
        _put(sheet, row, 8, float(line.below_zero) if line.port.is_margin else None, format="0", **look)
    for letter, width in zip("ABCDEFGH", (22, 34, 9, 12, 18, 12, 18, 12), strict=True):
        sheet.column_dimensions[letter].width = width
    sheet.freeze_panes = "A6"
    _set_up_page(sheet)


def _write_cases(sheet: Any, rows: SummaryRows, margins: Sequence[Port]) -> int:
    """Write one row a case; return the first of the two columns for the chart (0 where there is no margin)."""
    from openpyxl.formatting.rule import CellIsRule
    from openpyxl.styles import Font, PatternFill
    from openpyxl.utils import get_column_letter

    names = rows.names
    columns: list[tuple[str, str, list[Scalar], Port | None]] = [("Case", "", list(names), None)]
    columns += [
        (port.name, port.unit.text if port.unit else "", rows.columns[port], port)
        for port in (*rows.inputs, *rows.outputs)
    ]
    chart_column = 0
    if margins:
        worst, which = _lowest_margin(margins, rows)
        above: list[Scalar] = [v if isinstance(v, float) and v >= 0 else None for v in worst]
        below: list[Scalar] = [v if isinstance(v, float) and v < 0 else None for v in worst]
        columns += [("Lowest margin", "", worst, margins[0]), ("Which", "", which, None)]
        columns += [("Zero or above", "", above, margins[0]), ("Below zero", "", below, margins[0])]
        chart_column = len(columns) - 1
    for column, (head, unit, values, port) in enumerate(columns, start=1):
        ground = TEAL if 1 < column <= 1 + len(rows.inputs) else INK
        _put(sheet, 1, column, head, bold=True, color="FFFFFF", fill=ground)
        _put(sheet, 2, column, unit, color=GREY, fill="F2F4F5", size=9)
        shown = _number_format(port) if port else "General"
        for row, value in enumerate(values, start=3):
            _put(sheet, row, column, value, format=shown)
        longest = max(len(head), len(unit), max((len(str(v)) for v in values[:50] if isinstance(v, str)), default=0))
        sheet.column_dimensions[get_column_letter(column)].width = min(max(longest + 3, 10), 30)
        if port is not None and port.is_margin and column > 1 + len(rows.inputs):
            letter = get_column_letter(column)
            red = {"font": Font(color=RUST, bold=True), "fill": PatternFill(bgColor=BLUSH)}
            sheet.conditional_formatting.add(
                f"{letter}3:{letter}{len(names) + 2}", CellIsRule(operator="lessThan", formula=["0"], **red)
            )
    sheet.freeze_panes = "B3"
    sheet.auto_filter.ref = f"A2:{get_column_letter(len(columns))}{len(names) + 2}"
    sheet.print_title_rows = "1:2"
    _set_up_page(sheet)
    return chart_column


def _lowest_margin(margins: Sequence[Port], rows: SummaryRows) -> tuple[list[Scalar], list[Scalar]]:
    """Return for each case the lowest of its margins and which it is; an error governs."""
    worst: list[Scalar] = []
    which: list[Scalar] = []
    for index in range(len(rows.names)):
        found = [(rows.columns[port][index], port.name) for port in margins]
        lost = next(((v, n) for v, n in found if isinstance(v, ErrorValue)), None)
        numbers = [(v, n) for v, n in found if isinstance(v, float)]
        value, name = lost or min(numbers, default=(None, ""))
        worst.append(value)
        which.append(name)
    return worst, which


def _add_chart(sheet: Any, cases: Any, column: int, count: int, row: int) -> None:
    """Draw the lowest margin of every case, what is below zero in the colour of what is wrong."""
    from openpyxl.chart import BarChart, Reference
    from openpyxl.chart.shapes import GraphicalProperties

    chart = BarChart()
    chart.type = "col"
    chart.title = "Lowest margin of safety by case"
    chart.style = 10
    chart.height, chart.width = 9.5, 30
    chart.gapWidth = 30
    chart.overlap = 100
    chart.legend.position = "t"
    chart.add_data(
        Reference(cases, min_col=column, max_col=column + 1, min_row=1, max_row=count + 2), titles_from_data=True
    )
    chart.set_categories(Reference(cases, min_col=1, min_row=2, max_row=count + 2))
    for series, colour in zip(chart.series, (TEAL, RUST), strict=True):
        series.graphicalProperties = GraphicalProperties(solidFill=colour)
        series.invertIfNegative = False
    chart.y_axis.title = "margin of safety"
    chart.y_axis.number_format = "0.0"
    chart.y_axis.delete = False
    chart.x_axis.delete = False
    chart.x_axis.tickLblPos = "low"
    chart.x_axis.tickLblSkip = max(1, count // 25)
    chart.y_axis.majorGridlines.spPr = GraphicalProperties(ln=_thin_line("D5DADD"))
    sheet.add_chart(chart, f"A{row}")


def _thin_line(color: str) -> Any:
    from openpyxl.drawing.line import LineProperties

    return LineProperties(solidFill=color, w=6350)


def _set_up_page(sheet: Any) -> None:
    sheet.page_setup.orientation = "landscape"
    sheet.page_setup.fitToWidth = 1
    sheet.page_setup.fitToHeight = 0
    sheet.sheet_properties.pageSetUpPr.fitToPage = True
    sheet.oddFooter.left.text = "doubler summary"
    sheet.oddFooter.right.text = "page &P of &N"
