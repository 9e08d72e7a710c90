"""Changing a few parts of a package and adding some, while every other part stays as it is, byte for byte."""

from __future__ import annotations

import posixpath
import re
from typing import TYPE_CHECKING

from doubler.errors import InputError
from doubler.workbook.archive import Archive
from doubler.workbook.package import Package
from doubler.workbook.xml_guard import STRICT, children

if TYPE_CHECKING:
    from lxml.etree import _Element

CONTENT_TYPES = "[Content_Types].xml"
PACKAGE_RELATIONSHIPS = "http://schemas.openxmlformats.org/package/2006/relationships"
_TRANSITIONAL = "http://schemas.openxmlformats.org/officeDocument/2006/relationships"
_STRICT = "http://purl.oclc.org/ooxml/officeDocument/relationships"
_CONTENT = "http://schemas.openxmlformats.org/package/2006/content-types"
_DECLARATION = b'<?xml version="1.0" encoding="UTF-8" standalone="yes"?>\n'
_ESCAPED = re.compile(r"_(?=x[0-9A-Fa-f]{4}_)")
_NOT_XML = re.compile("[^\t\n\r\u0020-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")
LONGEST_TEXT = 32_767
"""Characters that a cell can hold."""


class PackageEdit:
    """Changes to one package.

    Parameters
    ----------
    package : Package
        The opened package; it is only read.
    """

    def __init__(self, package: Package) -> None:
        self.package = package
        self.workbook_part = package.workbook_part()
        self._roots: dict[str, _Element] = {}
        self._raw: dict[str, bytes] = {}
        self._names: dict[str, str] = {}
        self._added: list[str] = []
        self.strict = self.root(self.workbook_part).tag == f"{{{STRICT}}}workbook"
        del self._roots[self.workbook_part.lower()]

    @property
    def relationship_space(self) -> str:
        """Namespace of ``r:id`` and beginning of the relationships' types, in the package's dialect."""
        return _STRICT if self.strict else _TRANSITIONAL

    def has(self, part: str) -> bool:
        """Say whether the package has a part, or got it here."""
        return self.package.has(part) or part.lower() in self._names

    def root(self, part: str) -> _Element:
        """Return a part's root to be changed; whoever asks for it means to change it."""
        key = part.lower()
        if key not in self._roots:
            self._roots[key] = self.package.root(part)
        return self._roots[key]

    def raw(self, part: str) -> bytes:
        """Return the bytes of a part, as they were replaced here or as the package has them."""
        return self._raw.get(part.lower()) or self.package.read(part)

    def replace(self, part: str, content: bytes) -> None:
        """Replace a part's bytes."""
        self._raw[part.lower()] = content

    def add(self, part: str, content: _Element | bytes, content_type: str = "") -> None:
        """Add a part.

        Parameters
        ----------
        part : str
            Its name, free in the package.
        content : Element or bytes
            What it holds.
        content_type : str, optional
            Its type, where the extension does not say it.
        """
        if self.has(part):
            raise ValueError(f"{part} is there already")
        self._names[part.lower()] = part
        self._added.append(part)
        if isinstance(content, bytes):
            self._raw[part.lower()] = content
        else:
            self._roots[part.lower()] = content
        if content_type:
            types = self.root(CONTENT_TYPES)
            types.append(
                types.makeelement(_in(_CONTENT, "Override"), {"PartName": f"/{part}", "ContentType": content_type})
            )

    def declare_extension(self, extension: str, content_type: str) -> None:
        """Say of what type the parts of an extension are, where the package does not yet."""
        types = (
            self.package.root(CONTENT_TYPES) if CONTENT_TYPES.lower() not in self._roots else self.root(CONTENT_TYPES)
        )
        if any(one.get("Extension", "").lower() == extension for one in children(types, "Default")):
            return
        types = self.root(CONTENT_TYPES)
        types.insert(
            0, types.makeelement(_in(_CONTENT, "Default"), {"Extension": extension, "ContentType": content_type})
        )

    def free_name(self, pattern: str) -> str:
        """Return the first free part name of a pattern such as ``xl/comments{}.xml``."""
        number = 1
        while self.has(pattern.format(number)):
            number += 1
        return pattern.format(number)

    def relate(self, part: str, kind: str, target: str) -> str:
        """Let a part refer to another, and return the relationship's identity."""
        folder, name = posixpath.split(part)
        rels = posixpath.join(folder, "_rels", f"{name}.rels")
        if not self.has(rels):
            from lxml import etree

            self.add(
                rels, etree.Element(_in(PACKAGE_RELATIONSHIPS, "Relationships"), nsmap={None: PACKAGE_RELATIONSHIPS})
            )
        root = self.root(rels)
        taken = {one.get("Id") for one in root}
        number = 1
        while (identity := f"rIdCheck{number}") in taken:
            number += 1
        values = {"Id": identity, "Type": f"{self.relationship_space}/{kind}", "Target": f"/{target}"}
        root.append(root.makeelement(_in(PACKAGE_RELATIONSHIPS, "Relationship"), values))
        return identity

    def assemble(self) -> list[bytes | memoryview]:
        """Return the changed package as pieces of bytes."""
        content = {key: _serialised(root) for key, root in self._roots.items()} | self._raw
        added = [(name, content.pop(name.lower())) for name in self._added]
        return Archive(self.package).assemble(content, added)


def _serialised(root: _Element) -> bytes:
    from lxml import etree

    return _DECLARATION + bytes(etree.tostring(root, encoding="UTF-8", xml_declaration=False))


def _in(space: str, name: str) -> str:
    return f"{{{space}}}{name}"


def sibling(element: _Element, name: str, attributes: dict[str, str] | None = None) -> _Element:
    """Make an element in the namespace of another one."""
    space = str(element.tag).rpartition("}")[0]
    return element.makeelement(f"{space}}}{name}" if space else name, attributes or {})


def cell_text(text: str) -> str:
    """Return a text as a cell or a comment can hold it: no characters that XML lacks, escapes escaped, not too long.

    Examples
    --------
    >>> cell_text("a_x000D_b")
    'a_x005F_x000D_b'
    """
    text = _ESCAPED.sub("_x005F_", _NOT_XML.sub("\ufffd", text))
    return text if len(text) <= LONGEST_TEXT else text[: LONGEST_TEXT - 1] + "…"


def changed_since(package: Package, sha256: str) -> None:
    """Refuse a package whose file is no longer the one that was looked at.

    Parameters
    ----------
    package : Package
        The package, opened again.
    sha256 : str
        The hash of the file that was looked at.

    Raises
    ------
    InputError
        Where both differ.
    """
    if package.sha256 != sha256:
        raise InputError(f"{package.path} was changed while it was being checked; check it again")
