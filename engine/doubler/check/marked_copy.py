"""A copy of a checked workbook with its findings marked: comments, a fill and border of ours, and a record sheet."""

from __future__ import annotations

from bisect import bisect_left
from typing import TYPE_CHECKING

from doubler.check.finding import SEVERITIES
from doubler.check.marking_comments import add_comments
from doubler.check.marking_styles import MarkingStyles
from doubler.check.record_content import Content, cells_of
from doubler.check.record_sheet import SHEET_NAME, record_sheet
from doubler.errors import InputError
from doubler.workbook.addresses import cell_name, parse_cell
from doubler.workbook.model import Address
from doubler.workbook.package import Package
from doubler.workbook.package_edit import PackageEdit, changed_since, sibling
from doubler.workbook.xml_guard import child, children

if TYPE_CHECKING:
    from lxml.etree import _Element

_SHEET_TYPE = "application/vnd.openxmlformats-officedocument.spreadsheetml.worksheet+xml"


def marked_copy(content: Content) -> list[bytes | memoryview]:
    """Return the marked copy of a record's workbook as pieces of bytes.

    Parameters
    ----------
    content : Content
        What the record holds.

    Raises
    ------
    InputError
        The workbook's file is no longer the one that was checked.
    """
    package = Package(content.report.path)
    changed_since(package, content.report.sha256)
    edit = PackageEdit(package)
    styles = MarkingStyles(edit)
    marks, notes = _marks(content)
    for number, sheet in enumerate(content.report.book.workbook.sheets, start=1):
        if sheet.name in marks:
            _mark(edit.root(sheet.part), marks[sheet.name], styles)
        if sheet.name in notes:
            # Far from the blocks of 1024 boxes that a spreadsheet program hands out itself, from 1 upwards.
            add_comments(edit, sheet.part, notes[sheet.name], 60 + number)
    _add_sheet(edit, styles, content)
    return edit.assemble()


def _marks(content: Content) -> tuple[dict[str, dict[Address, str]], dict[str, dict[Address, str]]]:
    """Return the worst severity of each cell, and the comment of each cell, by sheet."""
    marks: dict[str, dict[Address, str]] = {}
    notes: dict[str, dict[Address, str]] = {}
    for entry in content.entries:  # worst first
        finding = entry.finding
        for sheet, at in cells_of(content.report.book, finding.cell, finding.sheet):
            marks.setdefault(sheet, {}).setdefault(at, finding.severity)
        text = f"Finding {entry.number} · {finding.severity} · {finding.kind}\n{finding.message}"
        own = notes.setdefault(entry.at[0], {})
        own[entry.at[1]] = f"{own[entry.at[1]]}\n\n{text}" if entry.at[1] in own else text
    assert all(severity in SEVERITIES for cells in marks.values() for severity in cells.values())
    return marks, notes


def _mark(root: _Element, cells: dict[Address, str], styles: MarkingStyles) -> None:
    """Give cells our mark; one that the sheet lacks is put in, empty."""
    data = child(root, "sheetData")
    if data is None:
        return
    rows: dict[int, _Element] = {}
    last = 0
    for row in children(data, "row"):
        last = int(row.get("r") or last + 1)
        rows[last] = row
    by_row: dict[int, dict[int, str]] = {}
    for (row_number, column), severity in cells.items():
        by_row.setdefault(row_number, {})[column] = severity
    order = sorted(rows)
    for row_number in sorted(by_row):
        found = rows.get(row_number)
        if found is None:
            found = sibling(data, "row", {"r": str(row_number)})
            place = bisect_left(order, row_number)
            order.insert(place, row_number)
            rows[row_number] = found
            if place + 1 < len(order):
                rows[order[place + 1]].addprevious(found)
            else:
                data.append(found)
        _mark_row(root, found, row_number, by_row[row_number], styles)


def _mark_row(root: _Element, row: _Element, number: int, wanted: dict[int, str], styles: MarkingStyles) -> None:
    cells: dict[int, _Element] = {}
    column = 0
    for cell in children(row, "c"):
        reference = cell.get("r")
        column = parse_cell(reference)[1] if reference else column + 1
        cells[column] = cell
    for column, severity in sorted(wanted.items()):
        found = cells.get(column)
        if found is None:
            found = sibling(row, "c", {"r": cell_name(number, column)})
            inherited = row.get("s") if row.get("customFormat") in ("1", "true") else _column_style(root, column)
            if inherited:
                found.set("s", inherited)
            behind = min((other for other in cells if other > column), default=None)
            if behind is not None:
                cells[behind].addprevious(found)
            else:
                before = [cells[other] for other in cells if other < column]
                row.insert(max((row.index(one) + 1 for one in before), default=0), found)
            cells[column] = found
        style = found.get("s") or "0"
        found.set("s", str(styles.marked(int(style) if style.isdigit() else 0, severity)))


def _column_style(root: _Element, column: int) -> str | None:
    columns = child(root, "cols")
    for one in children(columns, "col") if columns is not None else ():
        if int(one.get("min") or 0) <= column <= int(one.get("max") or 0):
            style: str | None = one.get("style")
            return style
    return None


def _add_sheet(edit: PackageEdit, styles: MarkingStyles, content: Content) -> None:
    book = edit.root(edit.workbook_part)
    sheets = child(book, "sheets")
    if sheets is None:
        raise InputError(f"{edit.package.path} is damaged: it lists no sheets; save it again in a spreadsheet program")
    listed = children(sheets, "sheet")
    taken = {one.get("name", "").casefold() for one in listed}
    name, number = SHEET_NAME, 2
    while name.casefold() in taken:
        name, number = f"{SHEET_NAME} ({number})", number + 1
    part = edit.free_name("xl/worksheets/sheetCheck{}.xml")
    edit.add(part, record_sheet(content, styles, strict=edit.strict), _SHEET_TYPE)
    identity = edit.relate(edit.workbook_part, "worksheet", part)
    largest = max((int(one.get("sheetId") or 0) for one in listed), default=0)
    sheets.append(
        sibling(
            sheets,
            "sheet",
            {"name": name, "sheetId": str(largest + 1), f"{{{edit.relationship_space}}}id": identity},
        )
    )
