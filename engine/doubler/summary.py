"""``summary.xlsx``: every case's outputs, the envelope with the governing cases, and a chart of margins by case.

The sheet of cases is written row by row as the results come in; memory does not grow with their number.
"""

from __future__ import annotations

import io
import math
from collections.abc import Iterable, Mapping, Sequence
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
FONT = "Liberation Sans"


class Summary:
    """The summary workbook in the making.

    Parameters
    ----------
    inputs : sequence of Port
        The inputs that the cases set.
    outputs : sequence of Port
        All outputs.
    """

    def __init__(self, inputs: Sequence[Port], outputs: Sequence[Port]) -> None:
        from openpyxl import Workbook

        self.inputs, self.outputs = list(inputs), list(outputs)
        self.margins = [port for port in outputs if port.is_margin]
        self.rows = 0
        self._book = Workbook(write_only=True)
        self._envelope = self._book.create_sheet("Envelope")
        self._cases = self._book.create_sheet("Cases")
        ports: list[Port | None] = [None, *self.inputs, *self.outputs]
        heads = [("Case", ""), *((port.name, _unit(port)) for port in (*self.inputs, *self.outputs))]
        if self.margins:
            ports += [self.margins[0], None, self.margins[0], self.margins[0]]
            heads += [(text, "") for text in ("Lowest margin", "Which", "Zero or above", "Below zero")]
        self._ports = ports
        self._begin(heads)
        self._looks = [_Look(self._cases, number_format=_number_format(port)) for port in ports]

    def _begin(self, heads: Sequence[tuple[str, str]]) -> None:
        from openpyxl.utils import get_column_letter

        sheet = self._cases
        for column, (head, unit) in enumerate(heads, start=1):
            width = 24 if column == 1 else min(max(len(head), len(unit), 8) + 3, 30)
            sheet.column_dimensions[get_column_letter(column)].width = width
        sheet.freeze_panes = "B3"
        sheet.print_title_rows, sheet.print_title_cols = "1:2", "A:A"
        sheet.page_setup.scale = 60
        _set_up_page(sheet)
        own = _Look(sheet, bold=True, color="FFFFFF", fill=INK)
        given = _Look(sheet, bold=True, color="FFFFFF", fill=TEAL)
        units = _Look(sheet, color=GREY, fill="F2F4F5", size=9)
        last_given = 1 + len(self.inputs)
        sheet.append([(given if 1 < i <= last_given else own).cell(head) for i, (head, _) in enumerate(heads, start=1)])
        sheet.append([units.cell(unit) for _, unit in heads])

    def take(self, batch: CaseBatch, results: Mapping[str, Any]) -> None:
        """Write the rows of a batch of cases, with their results by output."""
        count = len(batch.names)
        given = [_listed(batch.values[port], count) for port in self.inputs]
        found = [_listed(results[port.name], count) for port in self.outputs]
        margins = [(port.name, _listed(results[port.name], count)) for port in self.margins]
        for index, name in enumerate(batch.names):
            row: list[Scalar] = [name, *(values[index] for values in given), *(values[index] for values in found)]
            if margins:
                worst, which = _lowest((values[index], margin) for margin, values in margins)
                number = worst if isinstance(worst, float) else None
                above = number if number is not None and number >= 0 else None
                row += [worst, which, above, number if above is None else None]
            self._cases.append([look.cell(value) for look, value in zip(self._looks, row, strict=True)])
        self.rows += count

    def write(self, target: Path, title: str, lines: Sequence[EnvelopeLine]) -> None:
        """Finish the workbook and write it, in full or not at all.

        Parameters
        ----------
        target : Path
            The ``.xlsx`` file.
        title : str
            What was filled, for the head of the sheet.
        lines : sequence of EnvelopeLine
            The envelope over all cases.
        """
        self._mark_negative()
        self._write_envelope(title, lines)
        stream = io.BytesIO()
        self._book.save(stream)
        write_file(target, [stream.getbuffer()])

    def abandon(self) -> None:
        """Let go of the workbook and its temporary files; nothing is written."""
        for sheet in (self._envelope, self._cases):
            if not sheet.closed:
                sheet.close()
                sheet._writer.cleanup()

    def _mark_negative(self) -> None:
        from openpyxl.formatting.rule import CellIsRule
        from openpyxl.styles import Font, PatternFill
        from openpyxl.utils import get_column_letter

        last = self.rows + 2
        for column, port in enumerate(self._ports, start=1):
            if port is not None and port.is_margin and column > 1 + len(self.inputs):
                letter = get_column_letter(column)
                rule = CellIsRule(
                    operator="lessThan",
                    formula=["0"],
                    font=Font(color=RUST, bold=True),
                    fill=PatternFill(bgColor=BLUSH),
                )
                self._cases.conditional_formatting.add(f"{letter}3:{letter}{last}", rule)
        self._cases.auto_filter.ref = f"A2:{get_column_letter(len(self._ports))}{last}"

    def _write_envelope(self, title: str, lines: Sequence[EnvelopeLine]) -> None:
        sheet = self._envelope
        for letter, width in zip("ABCDEFGH", (24, 38, 9, 12, 24, 12, 24, 12), strict=True):
            sheet.column_dimensions[letter].width = width
        sheet.freeze_panes = "A6"
        sheet.row_dimensions[5].height = 28
        _set_up_page(sheet)
        sheet.page_setup.fitToWidth, sheet.page_setup.fitToHeight = 1, 0
        sheet.sheet_properties.pageSetUpPr.fitToPage = True
        if self.margins and self.rows:
            self._add_chart(len(lines) + 8, lines)
        below = sum(line.below_zero > 0 for line in lines)
        lost = sum(line.not_computed > 0 for line in lines)
        sheet.append([_Look(sheet, size=15, bold=True).cell(f"Envelope of {title}")])
        sheet.append([_Look(sheet, bold=True, color=RUST if below or lost else TEAL).cell(self._verdict(below, lost))])
        caution = (
            "An aid to calculation: to be checked and approved under the applicable codes by a qualified engineer."
        )
        sheet.append([_Look(sheet, color=GREY, size=9).cell(caution)])
        sheet.append([])
        head = _Look(sheet, bold=True, color="FFFFFF", fill=INK, wrap=True)
        heads = ("Output", "What it is", "Unit", "Lowest", "Governing case", "Highest", "In case", "Cases below zero")
        sheet.append([head.cell(text) for text in heads])
        for line in lines:
            sheet.append(_envelope_row(sheet, line))

    def _verdict(self, below: int, lost: int) -> str:
        margins = f"{below} of {len(self.margins)} margins fall below zero" if below else "No margin falls below zero"
        outputs = f"{lost} outputs could not be computed" if lost else "Every output was computed"
        return f"{self.rows} load cases. {margins}. {outputs} in every case."

    def _add_chart(self, row: int, lines: Sequence[EnvelopeLine]) -> None:
        """Draw the lowest margin of every case, what is below zero in the colour of what is wrong."""
        from openpyxl.chart import BarChart, Reference
        from openpyxl.chart.shapes import GraphicalProperties
        from openpyxl.drawing.line import LineProperties

        cases, column, last = self._cases, len(self._ports) - 1, self.rows + 2
        chart = BarChart()
        chart.type = "col"
        chart.title = "Lowest margin of safety by case"
        chart.style = 10
        chart.height, chart.width = 9.5, 32
        chart.gapWidth = 30 if self.rows < 60 else 0
        chart.overlap = 100
        chart.legend.position = "t"
        data = Reference(cases, min_col=column, max_col=column + 1, min_row=1, max_row=last)
        chart.add_data(data, titles_from_data=True)
        chart.set_categories(Reference(cases, min_col=1, min_row=2, max_row=last))
        for series, colour in zip(chart.series, (TEAL, RUST), strict=True):
            series.graphicalProperties = GraphicalProperties(solidFill=colour)
            series.invertIfNegative = False
        lowest = min((x for x in (_lowest_of(line) for line in lines) if x is not None), default=0.0)
        # What lies near zero is to be seen; a bar that reaches the top has plenty.
        chart.y_axis.scaling.min = math.floor(min(lowest, 0.0) * 4) / 4
        chart.y_axis.scaling.max = 2.0
        chart.y_axis.title = "margin of safety (shown up to 2)"
        chart.y_axis.number_format = "0.00"
        chart.y_axis.delete = False
        chart.x_axis.delete = False
        chart.x_axis.tickLblPos = "low"
        chart.x_axis.tickLblSkip = max(1, self.rows // 25)
        chart.y_axis.majorGridlines.spPr = GraphicalProperties(ln=LineProperties(solidFill="D5DADD", w=6350))
        self._envelope.add_chart(chart, f"A{row}")


class _Look:
    """How cells look: made once, then given to every cell that looks so."""

    def __init__(
        self,
        sheet: Any,
        *,
        size: float = 10,
        bold: bool = False,
        color: str = INK,
        fill: str | None = None,
        wrap: bool = False,
        indent: int = 0,
        number_format: str = "General",
    ) -> None:
        from openpyxl.cell import WriteOnlyCell
        from openpyxl.styles import Alignment, Font, PatternFill

        self._make = WriteOnlyCell
        self._sheet = sheet
        model = WriteOnlyCell(sheet)
        model.font = Font(name=FONT, size=size, bold=bold, color=color)
        if fill is not None:
            model.fill = PatternFill("solid", fgColor=fill)
        model.number_format = number_format
        side = "left" if indent else None
        model.alignment = Alignment(vertical="center", wrap_text=wrap, horizontal=side, indent=indent)
        self._style = model._style

    def cell(self, value: Scalar) -> Any:
        """Return a cell that looks so; text never becomes a formula."""
        cell = self._make(self._sheet)
        if isinstance(value, ErrorValue):
            cell._value, cell.data_type = str(value), "e"
        elif isinstance(value, str):
            cell._value, cell.data_type = value, "s"
        else:
            cell.value = value
        cell._style = self._style
        return cell


def _envelope_row(sheet: Any, line: EnvelopeLine) -> list[Any]:
    margin = line.port.is_margin
    bad = line.below_zero > 0 or line.not_computed > 0
    fill = (BLUSH if bad else PALE) if margin else None
    shown = _number_format(line.port)
    plain, wrapped = _Look(sheet, fill=fill, indent=1), _Look(sheet, fill=fill, wrap=True)
    number = _Look(sheet, fill=fill, number_format=shown)
    lowest = _Look(sheet, fill=fill, bold=True, color=RUST if margin and bad else INK, number_format=shown)
    return [
        _Look(sheet, fill=fill, bold=margin).cell(line.port.name),
        wrapped.cell(line.port.label),
        plain.cell(_unit(line.port)),
        lowest.cell(line.lowest.value),
        plain.cell(line.lowest.case),
        number.cell(line.highest.value),
        plain.cell(line.highest.case),
        _Look(sheet, fill=fill, number_format="0").cell(float(line.below_zero) if margin else None),
    ]


def _lowest_of(line: EnvelopeLine) -> float | None:
    value = line.lowest.value
    return value if line.port.is_margin and isinstance(value, float) else None


def _lowest(found: Iterable[tuple[Scalar, str]]) -> tuple[Scalar, str]:
    """Return the lowest margin of a case and which it is; an error governs."""
    best: tuple[Scalar, str] = (None, "")
    for value, name in found:
        if isinstance(value, ErrorValue):
            return value, name
        if isinstance(value, float) and (not isinstance(best[0], float) or value < best[0]):
            best = value, name
    return best


def _listed(values: Any, count: int) -> list[Scalar]:
    if isinstance(values, list):
        return values
    return list(values.tolist()) if isinstance(values, np.ndarray) else [values] * count


def _unit(port: Port) -> str:
    return "" if port.unit is None or port.unit.text == "1" else port.unit.text


def _number_format(port: Port | None) -> str:
    if port is None:
        return "General"
    return "0.000" if port.is_margin else "#,##0.###" if port.unit is not None else "General"


def _set_up_page(sheet: Any) -> None:
    sheet.page_setup.orientation = "landscape"
    sheet.oddFooter.left.text = "doubler summary"
    sheet.oddFooter.right.text = "page &P of &N"
