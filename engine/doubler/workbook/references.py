"""Reference text to syntax: cells, ranges, whole rows and columns, spans of sheets, tables, other workbooks."""

from __future__ import annotations

import re

from doubler.catalogue.record import CATEGORIES
from doubler.workbook.model import Address
from doubler.workbook.syntax import Axis, CellRef, ExternalRef, NameRef, Node, RangeRef, TableRef

LAST_ROW = 1_048_576
LAST_COLUMN = 16_384

_CELL = re.compile(r"(\$?)([A-Za-z]{1,3})(\$?)([0-9]{1,7})\Z")
_COLUMN = re.compile(r"(\$?)([A-Za-z]{1,3})\Z")
_ROW = re.compile(r"(\$?)([0-9]{1,7})\Z")
_STORAGE_PREFIX = re.compile(
    r"^(?:_xlfn\.|_xlws\.|_xlpm\.|_xludf\.|_xll\.|doubler\.functions\.)+"
    rf"|^(?:\[\d+\]|'[^']+'|[\w.-]+)!(?=(?:{'|'.join(CATEGORIES)})_)",
    re.IGNORECASE,
)
"""Prefixes under which files store newer functions, and those of our add-ins.

LibreOffice saves ``DOUBLER.FUNCTIONS.NAME``, Excel the add-in's file: ``[1]!NAME`` or ``'C:\\…\\file.xlam'!NAME``.
"""


def column_number(letters: str) -> int:
    """Return the number of a column from its letters: A is 1, XFD is 16384."""
    number = 0
    for letter in letters.upper():
        number = number * 26 + ord(letter) - 64
    return number


def column_letters(number: int) -> str:
    """Return the letters of a column from its number, from 1."""
    letters = ""
    while number:
        number, rest = divmod(number - 1, 26)
        letters = chr(65 + rest) + letters
    return letters


def address_text(address: Address) -> str:
    """Return an address as it is written: ``(5, 3)`` is ``C5``."""
    return f"{column_letters(address[1])}{address[0]}"


def without_prefix(name: str) -> str:
    """Return a function's or variable's name without the prefix under which files store the newer ones and add-ins'."""
    return _STORAGE_PREFIX.sub("", name)


def read_reference(text: str, host: Address) -> Node:
    """Read a reference as it stands in a formula at `host`.

    Parameters
    ----------
    text : str
        A reference, a defined name, or a structured reference.
    host : (int, int)
        Row and column of the formula's cell; references that are not anchored are kept relative to it.

    Returns
    -------
    Node
        A `CellRef`, `RangeRef`, `TableRef`, `NameRef` or `ExternalRef`.
    """
    sheet_text, body = _split_sheet(text)
    if sheet_text is not None and "[" in sheet_text:
        return ExternalRef(text)
    if sheet_text is None and "[" in body:
        return _read_table(body, text)
    sheet, last_sheet = _span(sheet_text)
    area = read_area(body, host, sheet, last_sheet)
    if area is not None:
        return area
    return NameRef(without_prefix(body), sheet)


def read_area(body: str, host: Address, sheet: str | None, last_sheet: str | None = None) -> CellRef | RangeRef | None:
    """Read ``A1``, ``$A1:B$2``, ``A:C`` or ``1:3``; None where the text is none of them."""
    first, colon, last = body.partition(":")
    if not colon:
        cell = _cell(first, host)
        if cell is None:
            return None
        row, column = cell
        if last_sheet is not None:
            return RangeRef(sheet, row, column, row, column, last_sheet)
        return CellRef(sheet, row, column)
    if "!" in last:
        last = last.rpartition("!")[2]
    start, end = _cell(first, host), _cell(last, host)
    if start is not None and end is not None:
        return RangeRef(sheet, start[0], start[1], end[0], end[1], last_sheet)
    left, right = _COLUMN.match(first), _COLUMN.match(last)
    if left and right:
        a, b = (_axis(column_number(m.group(2)), bool(m.group(1)), host[1]) for m in (left, right))
        return RangeRef(sheet, None, a, None, b, last_sheet)
    top, bottom = _ROW.match(first), _ROW.match(last)
    if top and bottom:
        a, b = (_axis(int(m.group(2)), bool(m.group(1)), host[0]) for m in (top, bottom))
        return RangeRef(sheet, a, None, b, None, last_sheet)
    return None


def _split_sheet(text: str) -> tuple[str | None, str]:
    if text.startswith("'"):
        at = 1
        while (at := text.find("'", at)) >= 0 and text[at : at + 2] == "''":
            at += 2
        if at > 0 and text[at + 1 : at + 2] == "!":
            return text[1:at].replace("''", "'"), text[at + 2 :]
        return None, text
    # A structured reference may hold an exclamation mark in a column's name.
    bracket = text.find("[")
    mark = text.find("!")
    if mark < 0 or (0 < bracket < mark and "]" not in text[bracket:mark]):
        return None, text
    return text[:mark], text[mark + 1 :]


def _span(sheet_text: str | None) -> tuple[str | None, str | None]:
    if sheet_text is None:
        return None, None
    first, colon, last = sheet_text.partition(":")
    return (first, last) if colon else (sheet_text, None)


def _axis(number: int, anchored: bool, own: int) -> Axis:
    return Axis(number if anchored else number - own, anchored)


def _cell(text: str, host: Address) -> tuple[Axis, Axis] | None:
    match = _CELL.match(text)
    if match is None:
        return None
    column, row = column_number(match.group(2)), int(match.group(4))
    if not (1 <= row <= LAST_ROW and column <= LAST_COLUMN):
        return None
    return _axis(row, bool(match.group(3)), host[0]), _axis(column, bool(match.group(1)), host[1])


def _read_table(body: str, text: str) -> Node:
    """Read ``Table[…]``: items such as ``#Totals`` and ``@``, and the column or columns, unescaped."""
    table, _, rest = body.partition("[")
    if table.startswith("'") or table.isdigit() or not rest.endswith("]"):
        return ExternalRef(text)
    inner = rest[:-1]
    items: list[str] = []
    columns: list[str] = []
    this_row = inner.startswith("@")
    if this_row:
        items.append("#This Row")
        inner = inner[1:]
    parts = _bracketed(inner)
    if parts is None:
        if inner.startswith("#"):
            items.append(_item(inner))
        elif inner:
            columns.append(_unescape(inner))
    else:
        for part in parts:
            if part.startswith("#"):
                items.append(_item(part))
            else:
                columns.append(_unescape(part))
    if not table and not inner and not items:
        return ExternalRef(text)
    return TableRef(table, tuple(items), tuple(columns[:2]))


def _bracketed(inner: str) -> list[str] | None:
    """Split ``[#Data],[a]:[b]`` into its bracketed parts; None where the text has no brackets of its own."""
    if not inner.lstrip().startswith("["):
        return None
    parts: list[str] = []
    at = 0
    while at < len(inner):
        if inner[at] != "[":
            at += 1
            continue
        at += 1
        part = ""
        while at < len(inner) and inner[at] != "]":
            if inner[at] == "'" and at + 1 < len(inner):
                part += inner[at]
                at += 1
            part += inner[at]
            at += 1
        parts.append(part)
        at += 1
    return parts


def _unescape(name: str) -> str:
    return re.sub(r"'(.)", r"\1", name)


def _item(text: str) -> str:
    known = {
        "#headers": "#Headers",
        "#data": "#Data",
        "#totals": "#Totals",
        "#all": "#All",
        "#this row": "#This Row",
    }
    return known.get(text.strip().lower(), text.strip())
