"""The quick way through a sheet's cells: scanned as text, where the part is written as nearly all programs write it.

An XML parser makes an object of every element, five for each formula cell; that takes longer than all that is done with
the cells afterwards. Here each row is cut out and its cells are found by one pattern, which has to account for every
character of the row: where it does not, the scan gives up and the part goes through the parser.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass
from typing import IO

from doubler.workbook.xml_guard import MAIN, STRICT

CHUNK = 1 << 21

_HEAD_END = re.compile(rb"<sheetData\s*(/?)>")
_NAMESPACE = re.compile(
    rf'\A(?:\ufeff)?\s*(?:<\?xml[^>]*?(?:\sencoding="([^"]*)")?[^>]*\?>)?\s*<worksheet\s(?:[^<>]*\s)?xmlns="'
    rf'(?:{re.escape(MAIN)}|{re.escape(STRICT)})"[^<>]*>'
)
_CELL = re.compile(
    r'<c r="([A-Z]{1,3})([0-9]{1,7})"(?: s="([0-9]{1,6})")?(?: t="([a-zA-Z]{1,9})")?(?: cm="([0-9]+)")?(?: ph="[01]")?'
    r"(?: ?/>|>(?:<f( [^<>]*?)?(?: ?/>|>([^<]*)</f>))?(?:<v>([^<]*)</v>|<v ?/>)?"
    r'(?:(<is><t(?: xml:space="preserve")?>[^<]*)</t></is>)?</c>)\s*(?=<c |\Z)'
)
_ROW_NUMBER = re.compile(r'<row r="([0-9]{1,7})"')
_ATTRIBUTE = re.compile(r'\s([A-Za-z0-9:]+)="([^"&]*)"')
_ENTITY = re.compile(r"&([^;]*);?")
_ENTITIES = {"lt": "<", "gt": ">", "amp": "&", "quot": '"', "apos": "'"}

RawCell = tuple[str, str, str, str, str, str, str, str, str]
"""Column letters, row, style, kind, metadata, attributes of the formula, formula, value, and inline text with the
tags before it: as written."""


class NotPlainError(Exception):
    """The part is not written in the plain form; it has to go through the parser."""


@dataclass(slots=True)
class Scan:
    """The scan of one sheet's part.

    Attributes
    ----------
    stream
        The unpacked part.
    around
        What stands before and after the cells, with an empty element in their place: filled when all rows are read.
    """

    stream: IO[bytes]
    around: bytes = b""

    def rows(self) -> Iterator[tuple[str, str, list[RawCell]]]:
        """Yield the rows: number, opening tag, and cells.

        Raises
        ------
        NotPlainError
            Anywhere on the way.
        """
        head = b""
        while (found := _HEAD_END.search(head)) is None:
            more = self.stream.read(CHUNK)
            if not more or len(head) > CHUNK:
                raise NotPlainError
            head += more
        before, rest = head[: found.start()], head[found.end() :]
        _refuse_unusual(before)
        if found[1]:
            self.around = before + b"<sheetData/>" + rest + self.stream.read()
            return
        while True:
            end = rest.find(b"</sheetData>")
            cut = end if end >= 0 else rest.rfind(b"</row>") + len(b"</row>")
            if end >= 0 or cut > len(b"</row>"):
                yield from _rows(_decoded(rest[:cut]))
                rest = rest[cut:]
            if end >= 0:
                self.around = before + b"<sheetData/>" + rest[len(b"</sheetData>") :] + self.stream.read()
                return
            more = self.stream.read(CHUNK)
            if not more:
                raise NotPlainError
            rest += more


def _refuse_unusual(before: bytes) -> None:
    found = _NAMESPACE.match(_decoded(before))
    if found is None or (found[1] or "UTF-8").lower() not in {"utf-8", "utf8", "us-ascii", "ascii"}:
        raise NotPlainError


def _decoded(data: bytes) -> str:
    try:
        text = data.decode("utf-8")
    except UnicodeDecodeError:
        raise NotPlainError from None
    return text.replace("\r\n", "\n").replace("\r", "\n") if "\r" in text else text


def _rows(text: str) -> Iterator[tuple[str, str, list[RawCell]]]:
    parts = text.split("</row>")
    if parts.pop().strip():
        yield from _empty_rows(text[text.rfind("</row>") + 6 :] if "</row>" in text else text)
    for part in parts:
        start = part.find(">") + 1
        while start and part[start - 2] == "/" and "<" in part[start:]:
            yield from _empty_rows(part[:start])
            part = part[start:]  # noqa: PLW2901  what comes before it has been read
            start = part.find(">") + 1
        tag = part[:start].lstrip()
        number = _ROW_NUMBER.match(tag)
        if number is None:
            raise NotPlainError
        cells: list[RawCell] = _CELL.findall(part, start)
        if part.count("<c ", start) != len(cells) or part.count("<", start, start + 3) != part.count(
            "<c ", start, start + 3
        ):
            raise NotPlainError
        if not cells and part[start:].strip():
            raise NotPlainError
        yield number[1], tag, cells


def _empty_rows(text: str) -> Iterator[tuple[str, str, list[RawCell]]]:
    for piece in text.split("/>"):
        tag = piece.strip()
        if tag:
            number = _ROW_NUMBER.match(tag)
            if number is None or "<" in tag[1:] or ">" in tag:
                raise NotPlainError
            yield number[1], tag, []


def attributes(text: str) -> dict[str, str]:
    """Return the attributes that stand in a tag.

    Parameters
    ----------
    text : str
        The tag, or what follows its name.
    """
    found = dict(_ATTRIBUTE.findall(text))
    if len(found) != text.count("="):
        raise NotPlainError
    return found


def plain_text(text: str) -> str:
    """Return text with its entities replaced.

    Parameters
    ----------
    text : str
        As it stands in the XML.
    """
    if "&" not in text:
        return text

    def replace(found: re.Match[str]) -> str:
        name = found[1]
        try:
            if name.startswith("#x"):
                return chr(int(name[2:], 16))
            return chr(int(name[1:])) if name.startswith("#") else _ENTITIES[name]
        except (KeyError, ValueError, OverflowError):
            raise NotPlainError from None

    return _ENTITY.sub(replace, text)
