"""Parsing the XML of a workbook that came from anywhere: no document type, no entities, no network."""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator
from typing import IO, TYPE_CHECKING

from doubler.errors import InputError

if TYPE_CHECKING:
    from lxml.etree import _Element

MAIN = "http://schemas.openxmlformats.org/spreadsheetml/2006/main"
STRICT = "http://purl.oclc.org/ooxml/spreadsheetml/main"

_HEAD = 65_536
_PROLOG = re.compile(r"\ufeff?(?:\s+|<\?.*?\?>|<!--.*?-->)*", re.DOTALL)
_ENCODING = re.compile(r"<\?xml[^>]*?\sencoding\s*=\s*[\"']([^\"']*)[\"']")
# The standard allows UTF-8 and UTF-16; the others are met in files of old writers, and keep '<' as it is.
_ENCODINGS = {"utf-8", "utf8", "utf-16", "us-ascii", "ascii", "iso-8859-1", "iso-8859-15", "windows-1252"}


def main_tags(*names: str) -> tuple[str, ...]:
    """Return element names in both namespaces of a workbook's main parts, transitional and strict."""
    return tuple(f"{{{space}}}{name}" for name in names for space in (MAIN, STRICT))


def local_name(element: _Element) -> str:
    """Return an element's name without its namespace; empty for a comment or a processing instruction."""
    tag = element.tag
    return tag.rpartition("}")[2] if isinstance(tag, str) else ""


def children(element: _Element, name: str) -> list[_Element]:
    """Return the children of one local name, in whichever namespace."""
    return [child for child in element if local_name(child) == name]


def child(element: _Element, name: str) -> _Element | None:
    """Return the first child of a local name, or None."""
    return next(iter(children(element, name)), None)


def is_true(text: str | None) -> bool:
    """Read a boolean attribute; one that is left out is false."""
    return text is not None and text.strip().lower() in {"1", "true", "on", "t"}


def relationship_id(element: _Element) -> str | None:
    """Return an element's ``r:id``, in either namespace."""
    return next((value for key, value in element.attrib.items() if key.startswith("{") and key.endswith("}id")), None)


def parse_part(data: bytes, where: str) -> _Element:
    """Parse a whole XML part.

    Parameters
    ----------
    data : bytes
        The part as unpacked.
    where : str
        File and part, for messages.

    Returns
    -------
    Element
        Its root.

    Raises
    ------
    InputError
        Where the XML is not well formed, or declares a document type or another encoding.
    """
    from lxml import etree

    refuse_doctype(data[:_HEAD], where)
    parser = etree.XMLParser(
        resolve_entities=False, no_network=True, load_dtd=False, huge_tree=True, remove_comments=True
    )
    try:
        return etree.fromstring(data, parser)
    except etree.XMLSyntaxError as error:
        raise _malformed(where, error) from None


def stream_part(stream: IO[bytes], where: str, tags: Iterable[str]) -> Iterator[_Element]:
    """Yield the elements of some names as they close, and let go of each when the next is asked for.

    Parameters
    ----------
    stream : binary file
        The part.
    where : str
        File and part, for messages.
    tags : iterable of str
        Full names of the elements wanted; none of them may hold another of them.

    Yields
    ------
    Element
        One element with all that it holds.
    """
    from lxml import etree

    source = _Guarded(stream, where)
    events = etree.iterparse(
        source,
        events=("end",),
        tag=tuple(tags),
        resolve_entities=False,
        no_network=True,
        load_dtd=False,
        huge_tree=True,
        remove_comments=True,
        remove_pis=True,
    )
    try:
        for _, element in events:
            yield element
            parent = element.getparent()
            element.clear()
            if parent is not None:
                while (before := element.getprevious()) is not None:
                    parent.remove(before)
    except etree.XMLSyntaxError as error:
        raise _malformed(where, error) from None


def refuse_doctype(head: bytes, where: str) -> None:
    """Refuse a document type declaration, which is what entities need, and encodings that could hide one.

    Parameters
    ----------
    head : bytes
        The beginning of the part.
    where : str
        File and part, for messages.

    Raises
    ------
    InputError
        Where there is one, or where the root element does not begin within `head`.
    """
    text = _decode_head(head)
    match = _PROLOG.match(text)
    rest = text[match.end() :] if match else text
    if rest.startswith("<!"):
        raise InputError(
            f"{where}: the XML declares a document type, which no workbook needs and which can hide "
            "entities; save the workbook again in a spreadsheet program"
        )
    encoding = _ENCODING.search(text[:200])
    if encoding and encoding[1].lower() not in _ENCODINGS:
        raise InputError(
            f"{where}: the XML is in the encoding {encoding[1]}; save the workbook again in a "
            "spreadsheet program, which writes UTF-8"
        )
    if not rest.startswith("<"):
        raise InputError(f"{where} is not XML; the workbook is damaged, save it again in a spreadsheet program")


def _decode_head(head: bytes) -> str:
    if head[:2] in {b"\xff\xfe", b"\xfe\xff"}:
        return head.decode("utf-16", errors="replace")
    if head[:2] == b"<\0":
        return head.decode("utf-16-le", errors="replace")
    if head[:2] == b"\0<":
        return head.decode("utf-16-be", errors="replace")
    return head.decode("utf-8-sig", errors="replace")


def _malformed(where: str, error: Exception) -> InputError:
    what = str(error).removesuffix(".").partition(" (<string>")[0]
    return InputError(
        f"{where} is not well-formed XML ({what}); the workbook is damaged, save it again in a spreadsheet program"
    )


class _Guarded:
    """A stream whose beginning was looked at before the parser sees it."""

    def __init__(self, stream: IO[bytes], where: str) -> None:
        self._stream = stream
        self._head = stream.read(_HEAD)
        refuse_doctype(self._head, where)

    def read(self, size: int = -1) -> bytes:
        if self._head:
            head, self._head = self._head, b""
            return head
        return self._stream.read(max(size, _HEAD) if size > 0 else size)
