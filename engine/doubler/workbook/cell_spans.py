"""Where each cell stands in the bytes of a sheet's XML, so that it can be changed and all else stay."""

from __future__ import annotations

import re
from array import array
from bisect import bisect_left
from collections.abc import Collection
from dataclasses import dataclass, field
from xml.parsers import expat

from doubler.errors import InputError
from doubler.workbook.addresses import parse_area, parse_cell
from doubler.workbook.model import Address, Area
from doubler.workbook.xml_guard import MAIN, STRICT, is_true, refuse_doctype

_START_TAG = re.compile(rb"""<[^\s/>]+(?:\s+[^\s=/>]+\s*=\s*(?:"[^"]*"|'[^']*'))*\s*/?>""")
_ATTRIBUTE = re.compile(rb"""\s+([^\s=/>]+)\s*=\s*(?:"[^"]*"|'[^']*')""")
_ENCODING = re.compile(rb"""<\?xml[^>]*?\sencoding\s*=\s*["']([^"']*)["']""")
_NAMES = {
    f"{space}}}{name}": name for space in (MAIN, STRICT) for name in ("sheetData", "row", "c", "f", "v", "is", "col")
}


@dataclass(slots=True)
class CellSpan:
    """One ``c`` element: offsets of its start tag, its end, and what stands in it."""

    start: int
    tag_end: int
    end: int = 0
    empty_tag: bool = False
    formula: tuple[int, int] | None = None
    value: tuple[int, int] | None = None
    inline: tuple[int, int] | None = None


@dataclass(slots=True)
class RowSpan:
    """One ``row`` element: offsets of its start tag and its end tag, and where each of its cells begins."""

    start: int
    tag_end: int
    content_end: int = 0
    empty_tag: bool = False
    style: str | None = None
    columns: list[int] = field(default_factory=list)
    starts: list[int] = field(default_factory=list)


class SheetSpans:
    """The places of some cells in a sheet's part.

    Parameters
    ----------
    data : bytes
        The part as unpacked.
    where : str
        File and part, for messages.
    wanted : collection of tuple of int, optional
        Rows and columns of the cells to be found; None finds all.

    Attributes
    ----------
    cells
        The wanted cells that the sheet holds.
    rows
        The rows of wanted cells that the sheet holds.
    arrays
        Areas filled by one formula.
    prefix
        Namespace prefix of the sheet's elements with its colon, or nothing.
    """

    def __init__(self, data: bytes, where: str, wanted: Collection[Address] | None = None) -> None:
        refuse_doctype(data[:65_536], where)
        self.data = data
        self.cells: dict[Address, CellSpan] = {}
        self.rows: dict[int, RowSpan] = {}
        self.arrays: list[Area] = []
        self.column_styles: list[tuple[int, int, str]] = []
        self.encoding = self._encoding(where)
        self.prefix = ""
        self.sheet_data: RowSpan | None = None
        self._row_numbers = array("q")
        self._row_starts = array("q")
        self._wanted = None if wanted is None else set(wanted)
        self._wanted_rows = None if wanted is None else {row for row, _ in wanted}
        self._parse(where)
        if self.sheet_data is None:
            raise InputError(f"{where} holds no sheet data; the workbook is damaged, save it again")

    def row_place(self, row: int) -> int:
        """Return the offset at which a row that the sheet lacks is to be put in."""
        assert self.sheet_data is not None
        number = bisect_left(self._row_numbers, row)
        return self._row_starts[number] if number < len(self._row_starts) else self.sheet_data.content_end

    def default_style(self, row: int, column: int) -> str | None:
        """Return the style that a cell has which the sheet lacks: its row's, else its column's."""
        if row in self.rows and self.rows[row].style is not None:
            return self.rows[row].style
        return next((style for first, last, style in self.column_styles if first <= column <= last), None)

    def _encoding(self, where: str) -> str:
        if self.data[:2] in {b"\xff\xfe", b"\xfe\xff", b"<\0", b"\0<"}:
            raise InputError(f"{where} is in UTF-16, which can't be filled; save it again in a spreadsheet program")
        match = _ENCODING.match(self.data[self.data.find(b"<") : 200])
        return match[1].decode("ascii", "replace") if match else "utf-8"

    def _parse(self, where: str) -> None:
        parser = expat.ParserCreate(namespace_separator="}")
        parser.StartElementHandler = handler = _Handler(self, parser)
        parser.EndElementHandler = handler.end
        try:
            parser.Parse(self.data, True)
        except expat.ExpatError as error:
            raise InputError(
                f"{where} is not well-formed XML ({error}); the workbook is damaged, save it again"
            ) from None


class _Handler:
    """What the parser calls at each start and end of an element."""

    def __init__(self, spans: SheetSpans, parser: expat.XMLParserType) -> None:
        self.spans = spans
        self.parser = parser
        self.row = 0
        self.column = 0
        self.open: list[str] = []
        self.row_span: RowSpan | None = None
        self.cell: CellSpan | None = None
        self.part_start: int = 0

    def __call__(self, tag: str, attributes: dict[str, str]) -> None:
        name = _NAMES.get(tag, "")
        parent = self.open[-1] if self.open else ""
        self.open.append(name)
        if name == "c" and parent == "row":
            self._cell(attributes)
        elif name == "row" and parent == "sheetData":
            self._row(attributes)
        elif name in {"f", "v", "is"} and parent == "c":
            self.part_start = self.parser.CurrentByteIndex
            if name == "f" and attributes.get("t") in {"array", "dataTable"} and "ref" in attributes:
                self.spans.arrays.append(parse_area(attributes["ref"]))
        elif name == "sheetData":
            start, tag_end, empty = self._start_tag()
            self.spans.sheet_data = RowSpan(start, tag_end, tag_end, empty)
            qualified = re.match(rb"<((?:[^\s:/>]+:)?)", self.spans.data[start:tag_end])
            self.spans.prefix = qualified[1].decode() if qualified else ""
        elif name == "col" and "style" in attributes and attributes["style"] != "0":
            self.spans.column_styles.append((int(attributes["min"]), int(attributes["max"]), attributes["style"]))

    def end(self, _tag: str) -> None:
        name = self.open.pop()
        if not name:
            return
        index = self.parser.CurrentByteIndex
        parent = self.open[-1] if self.open else ""
        if name in {"f", "v", "is"} and parent == "c":
            if self.cell is not None:
                span = (self.part_start, self._element_end(self.part_start, index))
                setattr(self.cell, {"f": "formula", "v": "value", "is": "inline"}[name], span)
        elif name == "c" and self.cell is not None and parent == "row":
            self.cell.end = self.cell.tag_end if self.cell.empty_tag else self._close(index)
            self.cell = None
        elif name == "row" and self.row_span is not None and parent == "sheetData":
            self.row_span.content_end = self.row_span.tag_end if self.row_span.empty_tag else index
            self.row_span = None
        elif name == "sheetData" and self.spans.sheet_data is not None and not self.spans.sheet_data.empty_tag:
            self.spans.sheet_data.content_end = index

    def _row(self, attributes: dict[str, str]) -> None:
        spans = self.spans
        self.row = int(attributes["r"]) if "r" in attributes else self.row + 1
        self.column = 0
        spans._row_numbers.append(self.row)
        spans._row_starts.append(self.parser.CurrentByteIndex)
        if spans._wanted_rows is None or self.row in spans._wanted_rows:
            start, tag_end, empty = self._start_tag()
            style = attributes.get("s") if is_true(attributes.get("customFormat")) else None
            self.row_span = spans.rows[self.row] = RowSpan(start, tag_end, tag_end, empty, style)

    def _cell(self, attributes: dict[str, str]) -> None:
        reference = attributes.get("r")
        spans = self.spans
        if self.row_span is None:
            return
        self.column = parse_cell(reference)[1] if reference else self.column + 1
        self.row_span.columns.append(self.column)
        self.row_span.starts.append(self.parser.CurrentByteIndex)
        address = (self.row, self.column)
        if spans._wanted is None or address in spans._wanted:
            start, tag_end, empty = self._start_tag()
            self.cell = spans.cells[address] = CellSpan(start, tag_end, tag_end, empty)

    def _start_tag(self) -> tuple[int, int, bool]:
        start = self.parser.CurrentByteIndex
        match = _START_TAG.match(self.spans.data, start)
        assert match is not None, "the parser has read this tag"
        return start, match.end(), match[0].endswith(b"/>")

    def _close(self, index: int) -> int:
        return self.spans.data.index(b">", index) + 1

    def _element_end(self, start: int, index: int) -> int:
        match = _START_TAG.match(self.spans.data, start)
        assert match is not None, "the parser has read this tag"
        return match.end() if match[0].endswith(b"/>") else self._close(index)


def split_at_type(tag: bytes) -> tuple[bytes, bytes]:
    """Cut a cell's start tag where its type attribute stands, or would be put; the closing mark is left off.

    Parameters
    ----------
    tag : bytes
        The whole start tag.

    Examples
    --------
    >>> split_at_type(b'<c r="A1" t="s" s="2">')
    (b'<c r="A1"', b' s="2"')
    """
    body = tag[:-1].removesuffix(b"/").rstrip()
    for match in _ATTRIBUTE.finditer(body):
        if match[1] == b"t":
            return body[: match.start()], body[match.end() :]
    return body, b""
