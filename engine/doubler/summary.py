"""``summary.xlsx``: every case's outputs, the envelope with the governing cases, and a chart of margins by case."""

from __future__ import annotations

import os
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from doubler.errors import ErrorValue, InputError
from doubler.workbook.model import Scalar
from doubler.workbook.template import Port

INK, TEAL, PALE, RUST, BLUSH, GREY = "1D3244", "1F6F6B", "E4EFEE", "A63A24", "F9E3DC", "6B7780"
"""Our colours: headings, what holds, its ground, what is below zero, its ground, remarks."""


@dataclass(frozen=True, slots=True)
class Extreme:
    """The lowest or highest value of an output over all cases.

    Attributes
    ----------
    value
        A number, or the error value of the first case that has one: what could not be computed governs.
    case
        The name of the case that gives it.
    """

    value: Scalar
    case: str


@dataclass(frozen=True, slots=True)
class EnvelopeLine:
    """One output over all cases."""

    port: Port
    lowest: Extreme
    highest: Extreme
    below_zero: int
    not_computed: int


def envelope(
    outputs: Sequence[Port], results: Mapping[str, Sequence[Scalar]], names: Sequence[str]
) -> list[EnvelopeLine]:
    """Return lowest and highest value of every numeric output, with the governing cases.

    Parameters
    ----------
    outputs : sequence of Port
    results : mapping
        By the port's name: one value a case.
    names : sequence of str
        The cases' names, in the same order.

    Returns
    -------
    list of EnvelopeLine
        Outputs that give text only have no line. Margins come first, the lowest of them on top.
    """
    lines = []
    for port in outputs:
        values = results[port.name]
        faults = [i for i, value in enumerate(values) if isinstance(value, ErrorValue)]
        numbers = [i for i, value in enumerate(values) if isinstance(value, float) and not isinstance(value, bool)]
        if faults:
            lost = Extreme(values[faults[0]], names[faults[0]])
            low = high = lost
        elif numbers:
            least = min(numbers, key=lambda i: values[i])  # type: ignore[arg-type, return-value]  # floats only
            most = max(numbers, key=lambda i: values[i])  # type: ignore[arg-type, return-value]  # floats only
            low, high = Extreme(values[least], names[least]), Extreme(values[most], names[most])
        else:
            continue
        below = sum(1 for i in numbers if values[i] < 0) if port.is_margin else 0  # type: ignore[operator]
        lines.append(EnvelopeLine(port, low, high, below, len(faults)))
    return sorted(lines, key=_order)


def _order(line: EnvelopeLine) -> tuple[bool, bool, float]:
    value = line.lowest.value
    number = value if isinstance(value, float) else float("-inf")
    return (
        not line.port.is_margin,
        line.port.is_margin and isinstance(value, float),
        number if line.port.is_margin else 0,
    )


def write_summary(
    target: Path,
    title: str,
    inputs: Mapping[Port, Sequence[Scalar]],
    outputs: Sequence[Port],
    results: Mapping[str, Sequence[Scalar]],
    names: Sequence[str],
) -> list[EnvelopeLine]:
    """Write the summary workbook, in full or not at all.

    Parameters
    ----------
    target : Path
        The ``.xlsx`` file to write.
    title : str
        What was filled, for the head of the sheet.
    inputs : mapping of Port to values
        The inputs that the cases set, one value a case.
    outputs, results, names
        As `envelope` takes them.

    Returns
    -------
    list of EnvelopeLine
        The envelope as written.
    """
    from openpyxl import Workbook

    lines = envelope(outputs, results, names)
    book = Workbook()
    sheet = book.active
    sheet.title = "Envelope"
    cases = book.create_sheet("Cases")
    margins = [line.port for line in lines if line.port.is_margin]
    lowest_column = _write_cases(cases, inputs, outputs, results, names, margins)
    _write_envelope(sheet, title, lines, len(names))
    if margins:
        _add_chart(sheet, cases, lowest_column, len(names), len(lines) + 8)
    part = target.with_name(f".{target.name}.part")
    try:
        book.save(part)
        os.replace(part, target)
    except OSError as error:
        part.unlink(missing_ok=True)
        raise InputError(f"{target}: cannot be written ({error.strerror or error})") from error
    return lines


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
    _set_up_page(sheet, "A1")


def _write_cases(
    sheet: Any,
    inputs: Mapping[Port, Sequence[Scalar]],
    outputs: Sequence[Port],
    results: Mapping[str, Sequence[Scalar]],
    names: Sequence[str],
    margins: Sequence[Port],
) -> int:
    """Write one row a case; return the column of the lowest margin (0 where there is no margin)."""
    from openpyxl.formatting.rule import CellIsRule
    from openpyxl.styles import Font, PatternFill
    from openpyxl.utils import get_column_letter

    columns = [("Case", "", list(names), None)]
    columns += [(p.name, p.unit.text if p.unit else "", list(values), p) for p, values in inputs.items()]
    columns += [(p.name, p.unit.text if p.unit else "", list(results[p.name]), p) for p in outputs]
    lowest_column = 0
    if margins:
        worst, which = _lowest_margin(margins, results, len(names))
        columns += [("Lowest margin", "", worst, margins[0]), ("Which", "", which, None)]
        lowest_column = len(columns) - 1
    for column, (head, unit, values, port) in enumerate(columns, start=1):
        ground = TEAL if 1 < column <= 1 + len(inputs) else INK
        _put(sheet, 1, column, head, bold=True, color="FFFFFF", fill=ground)
        _put(sheet, 2, column, unit, color=GREY, fill="F2F4F5", size=9)
        shown = _number_format(port) if port else "General"
        for row, value in enumerate(values, start=3):
            _put(sheet, row, column, value, format=shown)
        longest = max(len(head), len(unit), max((len(str(v)) for v in values[:50] if isinstance(v, str)), default=0))
        sheet.column_dimensions[get_column_letter(column)].width = min(max(longest + 3, 10), 30)
        if port is not None and port.is_margin and column > 1 + len(inputs):
            letter = get_column_letter(column)
            red = {"font": Font(color=RUST, bold=True), "fill": PatternFill(bgColor=BLUSH)}
            sheet.conditional_formatting.add(
                f"{letter}3:{letter}{len(names) + 2}", CellIsRule(operator="lessThan", formula=["0"], **red)
            )
    sheet.freeze_panes = "B3"
    sheet.auto_filter.ref = f"A2:{get_column_letter(len(columns))}{len(names) + 2}"
    sheet.print_title_rows = "1:2"
    _set_up_page(sheet, None)
    return lowest_column


def _lowest_margin(
    margins: Sequence[Port], results: Mapping[str, Sequence[Scalar]], count: int
) -> tuple[list[Scalar], list[Scalar]]:
    """For each case the lowest of its margins and its name; an error governs."""
    worst: list[Scalar] = []
    which: list[Scalar] = []
    for index in range(count):
        found = [(results[port.name][index], port.name) for port in margins]
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
    chart.legend = None
    chart.add_data(Reference(cases, min_col=column, min_row=3, max_row=count + 2))
    chart.set_categories(Reference(cases, min_col=1, min_row=3, max_row=count + 2))
    series = chart.series[0]
    series.graphicalProperties = GraphicalProperties(solidFill=TEAL)
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


def _set_up_page(sheet: Any, _anchor: str | None) -> None:
    sheet.page_setup.orientation = "landscape"
    sheet.page_setup.fitToWidth = 1
    sheet.page_setup.fitToHeight = 0
    sheet.sheet_properties.pageSetUpPr.fitToPage = True
    sheet.oddFooter.left.text = "doubler summary"
    sheet.oddFooter.right.text = "page &P of &N"
