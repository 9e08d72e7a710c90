"""One worksheet's XML, read in one pass: cells with typed stored values and whole formulas."""

from __future__ import annotations

import contextlib
import io
import math
from dataclasses import dataclass, field
from datetime import date, datetime, time
from typing import IO, TYPE_CHECKING

from doubler.errors import ErrorValue, InputError
from doubler.workbook.addresses import (
    MAX_COLUMN,
    MAX_ROW,
    cell_name,
    column_number,
    full_name,
    parse_area,
    parse_cell,
)
from doubler.workbook.model import Address, Area, Cell, Scalar, Sheet, Validation
from doubler.workbook.package import Package
from doubler.workbook.sheet_scan import NotPlainError, Scan, attributes, plain_text
from doubler.workbook.shift import MovableFormula
from doubler.workbook.strings_part import rich_text, unescape
from doubler.workbook.xml_guard import children, is_true, local_name, main_tags, stream_part

if TYPE_CHECKING:
    from lxml.etree import _Element

_VALIDATION_EXTENSION = "{http://schemas.microsoft.com/office/spreadsheetml/2009/9/main}dataValidation"
_ROW, _COLUMN, _MERGED, _VALIDATION = (main_tags(name) for name in ("row", "col", "mergeCell", "dataValidation"))
_FILTER = main_tags("autoFilter")
_ERRORS = {member.value: member for member in ErrorValue}


@dataclass(slots=True)
class SheetContext:
    """What a sheet's cells refer to outside of their own part."""

    package: Package
    texts: list[str]
    dynamic: frozenset[str] | None
    """Values of a cell's ``cm`` that mean a dynamic array; None, meaning all, where the file does not say."""
    date1904: bool


@dataclass(slots=True)
class _Reading:
    """The state of one pass."""

    sheet: Sheet
    context: SheetContext
    columns: dict[str, int] = field(default_factory=dict)
    marks: dict[str, dict[str, str]] = field(default_factory=dict)
    shared: dict[str, tuple[MovableFormula, int, int]] = field(default_factory=dict)
    waiting: list[tuple[Address, str]] = field(default_factory=list)
    row: int = 0
    space: str = ""
    tags: tuple[str, str, str, str] = ("", "", "", "")
    """Full names of c, v, f and is; a name is compared as a whole, which is quicker than cutting it."""

    def where(self, row: int, column: int) -> str:
        return f"{self.context.package.path}, cell {full_name(self.sheet.name, row, column)}"


def read_sheet(sheet: Sheet, context: SheetContext) -> None:
    """Fill a sheet from its part.

    Parameters
    ----------
    sheet : Sheet
        The sheet, empty but for its name, part and visibility.
    context : SheetContext
        Shared texts and what else the workbook holds for its cells.

    Raises
    ------
    InputError
        Where the part is damaged.
    """
    package = context.package
    reading = _Reading(sheet, context)
    with package.open(sheet.part) as stream:
        try:
            around = _scan_cells(stream, reading)
        except NotPlainError:
            around = None
            reading = _Reading(sheet, context)
            sheet.cells, sheet.hidden_rows = {}, set()
    if around is not None:
        _parse_part(io.BytesIO(around), reading)
    else:
        with package.open(sheet.part) as stream:
            _parse_part(stream, reading)
    for (row, column), index in reading.waiting:
        sheet.cells[row, column].formula = _copy_of(index, row, column, reading)


def _scan_cells(stream: IO[bytes], reading: _Reading) -> bytes:
    """Read all cells the quick way; return what stands around them in the part."""
    cells, hidden = reading.sheet.cells, reading.sheet.hidden_rows
    columns = reading.columns
    count = 0
    scan = Scan(stream)
    for number, tag, raw in scan.rows():
        row = _row(number, reading)
        if "hidden" in tag and is_true(attributes(tag).get("hidden")):
            hidden.add(row)
        for letters, digits, style, kind, metadata, marks, formula, stored, inline in raw:
            column = columns.get(letters)
            if column is None:
                _address(f"{letters}{number}", reading)
                column = columns[letters]
            if digits != number:
                raise NotPlainError  # the parser says what is wrong
            value: Scalar
            if not kind or kind == "n":
                if not stored:
                    value = None
                else:
                    try:
                        value = float(stored)
                    except ValueError:
                        value = _odd_number(plain_text(stored))
                    else:
                        if value - value != 0.0:
                            value = ErrorValue.NUM
            elif kind == "inlineStr":
                value = unescape(plain_text(inline.split(">", 2)[2])) if inline else None
            elif stored or kind == "str":
                value = _typed(kind, plain_text(stored), row, column, reading)
            else:
                value = None
            cell = cells[row, column] = Cell(value, None, int(style) if style else 0)
            if formula:
                if "&" in formula:
                    formula = plain_text(formula)  # noqa: PLW2901  the same formula, read
                if "_x" in formula:
                    formula = unescape(formula)  # noqa: PLW2901
                if not marks and formula[0] != "=":
                    cell.formula = formula
                    continue
            if marks or formula:
                about = reading.marks.get(marks)
                if about is None:
                    about = reading.marks[marks] = attributes(marks)
                _read_formula(cell, about, formula, metadata or None, row, column, reading)
        count += len(raw)
        if len(cells) != count:
            raise NotPlainError  # a cell stands there twice
    return scan.around


def _parse_part(stream: IO[bytes], reading: _Reading) -> None:
    """Read a part, or what stands around its cells, through the XML parser."""
    sheet = reading.sheet
    tags = (*_ROW, *_COLUMN, *_MERGED, *_VALIDATION, *_FILTER, _VALIDATION_EXTENSION)
    with contextlib.closing(stream):
        for element in stream_part(stream, f"{reading.context.package.path}, part {sheet.part}", tags):
            tag = element.tag
            if tag in _ROW:
                _read_row(element, reading)
            elif tag in _COLUMN:
                _read_hidden_columns(element, sheet)
            elif tag in _MERGED:
                sheet.merged += _areas(element.get("ref"))
            elif tag in _FILTER:
                sheet.filtered += filtered_areas(element)
            else:
                _read_validation(element, sheet)


def _read_row(element: _Element, reading: _Reading) -> None:
    text = element.get("r")
    row = reading.row = _row(text, reading) if text else reading.row + 1
    if (space := element.tag[:-3]) != reading.space:
        reading.space = space
        reading.tags = (f"{space}c", f"{space}v", f"{space}f", f"{space}is")
    cell_tag = reading.tags[0]
    if is_true(element.get("hidden")):
        reading.sheet.hidden_rows.add(row)
    cells = reading.sheet.cells
    columns = reading.columns
    column = 0
    for cell in element:
        if cell.tag != cell_tag:
            continue
        reference = cell.get("r")
        if reference:
            letters = reference.rstrip("0123456789")
            column = columns.get(letters, 0)
            if not column or reference[len(letters) :] != text:
                cell_row, column = _address(reference, reading)
                if cell_row != row:
                    raise InputError(
                        f"{reading.where(cell_row, column)} stands in row {row} of its part; the "
                        "workbook is damaged, save it again"
                    )
                columns[letters] = column
        else:
            column += 1
            if column > MAX_COLUMN:
                raise InputError(
                    f"{reading.context.package.path}, sheet '{reading.sheet.name}': row {row} is "
                    "longer than a sheet is wide"
                )
        address = (row, column)
        if address in cells:
            raise InputError(
                f"{reading.where(row, column)} is stored twice; the workbook is damaged, save it "
                "again in a spreadsheet program"
            )
        cells[address] = _read_cell(cell, row, column, reading)


def _read_cell(element: _Element, row: int, column: int, reading: _Reading) -> Cell:
    stored: str | None = None
    formula: _Element | None = None
    kind = element.get("t")
    value: Scalar = None
    _, value_tag, formula_tag, inline_tag = reading.tags
    for child in element:
        tag = child.tag
        if tag == value_tag:
            stored = child.text
            if stored is None and kind == "str":
                stored = ""
        elif tag == formula_tag:
            formula = child
        elif tag == inline_tag and kind == "inlineStr":
            value = rich_text(child)
    if stored is not None:
        if kind is None or kind == "n":
            try:
                value = float(stored)
            except ValueError:
                value = _odd_number(stored)
            else:
                if not math.isfinite(value):
                    value = ErrorValue.NUM
        else:
            value = _typed(kind, stored, row, column, reading)
    style = element.get("s")
    cell = Cell(value, None, int(style) if style and style.isdigit() else 0)
    if formula is not None:
        about = {str(key): str(mark) for key, mark in formula.attrib.items()}
        _read_formula(cell, about, unescape(formula.text or ""), element.get("cm"), row, column, reading)
    return cell


def _typed(kind: str, stored: str, row: int, column: int, reading: _Reading) -> Scalar:
    """Read a stored value that is not a plain number."""
    if kind == "s":
        texts = reading.context.texts
        index = int(stored) if stored.strip().isdigit() else -1
        if not 0 <= index < len(texts):
            raise InputError(
                f"{reading.where(row, column)} refers to shared text {stored!r}, which the workbook "
                "lacks; it is damaged, save it again"
            )
        return texts[index]
    if kind == "b":
        return is_true(stored)
    if kind == "e":
        return _ERRORS.get(stored.strip(), ErrorValue.VALUE)
    if kind == "d":
        return _serial(stored.strip(), date1904=reading.context.date1904)
    return unescape(stored)


def _odd_number(stored: str) -> Scalar:
    """Read what stands where a number should: nothing, or a text that some writers leave there."""
    return unescape(stored) if stored.strip() else None


def _serial(text: str, *, date1904: bool) -> Scalar:
    """Turn an ISO 8601 date or time into the sheet's day count; a text that is neither stays text."""
    try:
        if ":" in text and "-" not in text.split("T", maxsplit=1)[0]:
            clock = time.fromisoformat(text.lstrip("T"))
            return (clock.hour * 3600 + clock.minute * 60 + clock.second + clock.microsecond / 1e6) / 86400
        moment = datetime.fromisoformat(text).replace(tzinfo=None)
    except ValueError:
        return text
    start = date(1904, 1, 1) if date1904 else date(1899, 12, 30)
    past = moment - datetime(start.year, start.month, start.day)
    serial = past.days + (past.seconds + past.microseconds / 1e6) / 86400
    # The day count holds a 29 February 1900 that never was; days before it are one lower.
    return serial - 1 if not date1904 and serial < 61 else serial


def _read_formula(
    cell: Cell, about: dict[str, str], text: str, metadata: str | None, row: int, column: int, reading: _Reading
) -> None:
    kind = about.get("t")
    text = text.removeprefix("=")
    if kind == "shared":
        index = about.get("si", "")
        cell.shared = int(index) if index.isdigit() else None
        if not text:
            if index in reading.shared:
                cell.formula = _copy_of(index, row, column, reading)
            else:
                reading.waiting.append(((row, column), index))
            return
        if index not in reading.shared or about.get("ref"):
            reading.shared[index] = (MovableFormula(text), row, column)
    elif kind == "array":
        cell.array_range = about.get("ref") or cell_name(row, column)
        dynamic = reading.context.dynamic
        cell.dynamic = metadata is not None and metadata != "0" and (dynamic is None or metadata in dynamic)
    elif kind == "dataTable":
        cell.array_range = about.get("ref") or cell_name(row, column)
        text = _data_table(about)
    cell.formula = text or None


def _data_table(about: dict[str, str]) -> str:
    """Write a what-if table as the spreadsheet shows it: TABLE(row input, column input)."""
    first, second = about.get("r1", ""), about.get("r2", "")
    if is_true(about.get("dt2D")):
        return f"TABLE({first},{second})"
    return f"TABLE({first},)" if is_true(about.get("dtr")) else f"TABLE(,{first})"


def _copy_of(index: str, row: int, column: int, reading: _Reading) -> str:
    try:
        formula, first_row, first_column = reading.shared[index]
    except KeyError:
        raise InputError(
            f"{reading.where(row, column)} copies shared formula {index}, which the sheet lacks; the "
            "workbook is damaged, save it again"
        ) from None
    return formula.moved(row - first_row, column - first_column)


def _row(text: str, reading: _Reading) -> int:
    row = int(text) if text.strip().isdigit() else 0
    if not 1 <= row <= MAX_ROW:
        raise InputError(
            f"{reading.context.package.path}, sheet '{reading.sheet.name}' has a row numbered "
            f"{text!r}; the workbook is damaged, save it again"
        )
    return row


def _address(reference: str, reading: _Reading) -> Address:
    try:
        row, column = parse_cell(reference)
    except InputError as error:
        raise InputError(
            f"{reading.context.package.path}, sheet '{reading.sheet.name}': {error}; the workbook is "
            "damaged, save it again"
        ) from None
    reading.columns[reference.rstrip("0123456789")] = column_number(reference.rstrip("0123456789").replace("$", ""))
    return row, column


def _areas(text: str | None) -> list[Area]:
    """Read areas separated by blanks; what is no area is left out, as it can't cover a cell."""
    found = []
    for piece in (text or "").split():
        try:
            found.append(parse_area(piece))
        except InputError:
            continue
    return found


def filtered_areas(element: _Element) -> list[Area]:
    """Return the area of an ``autoFilter`` element where it holds criteria; none where it only offers buttons."""
    return _areas(element.get("ref")) if children(element, "filterColumn") else []


def _read_hidden_columns(element: _Element, sheet: Sheet) -> None:
    if not is_true(element.get("hidden")):
        return
    first, last = element.get("min", ""), element.get("max", "")
    if first.isdigit() and last.isdigit():
        sheet.hidden_columns.update(range(max(int(first), 1), min(int(last), MAX_COLUMN) + 1))


def _read_validation(element: _Element, sheet: Sheet) -> None:
    formulas: dict[str, str] = {}
    where = element.get("sqref")
    for child in element:
        name = local_name(child)
        if name in {"formula1", "formula2"}:
            inner = children(child, "f")
            formulas[name] = unescape((inner[0].text if inner else child.text) or "")
        elif name == "sqref":
            where = child.text
    sheet.validations.append(
        Validation(
            areas=tuple(_areas(where)),
            kind=element.get("type", "none"),
            operator=element.get("operator", "between"),
            formula1=formulas.get("formula1"),
            formula2=formulas.get("formula2"),
            allow_blank=is_true(element.get("allowBlank")),
        )
    )
