"""The table of shared texts, and the escapes for characters that XML can't hold."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

from doubler.workbook.package import Package
from doubler.workbook.xml_guard import local_name, main_tags, stream_part

if TYPE_CHECKING:
    from lxml.etree import _Element

_ESCAPE = re.compile(r"_x([0-9A-Fa-f]{4})_")


def unescape(text: str) -> str:
    r"""Return a stored text with its ``_xHHHH_`` escapes read.

    Parameters
    ----------
    text : str
        Text as it stands in the XML.

    Examples
    --------
    >>> unescape("two_x000A_lines")
    'two\nlines'
    """
    if "_x" not in text:
        return text
    decoded = _ESCAPE.sub(lambda match: chr(int(match[1], 16)), text)
    # Two escapes may spell one character beyond the basic plane; a lone half is no character.
    return decoded.encode("utf-16-le", "surrogatepass").decode("utf-16-le", "replace")


def rich_text(element: _Element) -> str:
    """Return the text of an ``si`` or ``is`` element: plain, or runs joined; phonetic hints left out."""
    parts: list[str] = []
    for piece in element:
        name = local_name(piece)
        if name == "t":
            parts.append(piece.text or "")
        elif name == "r":
            parts += [inner.text or "" for inner in piece if local_name(inner) == "t"]
    return unescape("".join(parts))


def read_shared_texts(package: Package, workbook_part: str) -> list[str]:
    """Return the shared texts of a workbook in their order; none where it has no such part.

    Parameters
    ----------
    package : Package
        The opened package.
    workbook_part : str
        Name of the part that lists the sheets.
    """
    part = next(iter(package.related(workbook_part, "sharedStrings")), None)
    if part is None or not package.has(part):
        return []
    with package.open(part) as stream:
        where = f"{package.path}, part {part}"
        return [rich_text(element) for element in stream_part(stream, where, main_tags("si"))]
