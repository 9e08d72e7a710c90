"""Cell styles of our own in a marked copy: clones with our fill and border, and the record sheet's own."""

from __future__ import annotations

from copy import deepcopy
from typing import TYPE_CHECKING

from doubler.workbook.package_edit import PackageEdit, sibling
from doubler.workbook.xml_guard import MAIN, STRICT, child, children

if TYPE_CHECKING:
    from lxml.etree import _Element

INK = "FF1C2A30"
_MARKS = {
    # severity: line of the border, its colour, the fill; the line tells the severity without colour too
    "error": ("medium", "FFA01C36", "FFF6D9DC"),
    "warning": ("mediumDashed", "FF9A5B00", "FFF8E3B6"),
    "note": ("dotted", "FF28548F", "FFD9E4F4"),
}
_STYLES_TYPE = "application/vnd.openxmlformats-officedocument.spreadsheetml.styles+xml"
# What the stylesheet of a workbook without one holds at least (ISO/IEC 29500-1, 18.8).
_SMALLEST = (
    '<styleSheet xmlns="{space}"><fonts count="1"><font><sz val="11"/><name val="Calibri"/></font></fonts>'
    '<fills count="2"><fill><patternFill patternType="none"/></fill><fill><patternFill patternType="gray125"/></fill>'
    '</fills><borders count="1"><border><left/><right/><top/><bottom/><diagonal/></border></borders>'
    '<cellStyleXfs count="1"><xf numFmtId="0" fontId="0" fillId="0" borderId="0"/></cellStyleXfs>'
    '<cellXfs count="1"><xf numFmtId="0" fontId="0" fillId="0" borderId="0" xfId="0"/></cellXfs>'
    '<cellStyles count="1"><cellStyle name="Normal" xfId="0" builtinId="0"/></cellStyles></styleSheet>'
)
_BEFORE = {
    "fonts": ("numFmts",),
    "fills": ("numFmts", "fonts"),
    "borders": ("numFmts", "fonts", "fills"),
    "cellXfs": ("numFmts", "fonts", "fills", "borders", "cellStyleXfs"),
}


class MarkingStyles:
    """Adds styles to a workbook's stylesheet.

    Parameters
    ----------
    edit : PackageEdit
        The changes to the package.
    """

    def __init__(self, edit: PackageEdit) -> None:
        from lxml import etree

        part = next(iter(edit.package.related(edit.workbook_part, "styles")), None)
        if part is None or not edit.package.has(part):
            # Some readers look under this name and no other.
            part = "xl/styles.xml" if not edit.has("xl/styles.xml") else edit.free_name("xl/styles{}.xml")
            space = STRICT if edit.strict else MAIN
            edit.add(part, etree.fromstring(_SMALLEST.format(space=space)), _STYLES_TYPE)
            edit.relate(edit.workbook_part, "styles", part)
        self._root = edit.root(part)
        self._marked: dict[tuple[int, str], int] = {}
        self._parts: dict[tuple[object, ...], int] = {}

    def marked(self, style: int, severity: str) -> int:
        """Return a style like another one, with our mark for a severity."""
        known = self._marked.get((style, severity))
        if known is not None:
            return known
        line, colour, fill = _MARKS[severity]
        listed = children(self._list("cellXfs"), "xf")
        original = listed[style] if style < len(listed) else listed[0]
        clone = deepcopy(original)
        if self._has_fill(original):
            clone.set("fontId", str(self._dark_font(int(original.get("fontId") or 0))))
            clone.set("applyFont", "1")
        clone.set("fillId", str(self.fill(fill)))
        clone.set("applyFill", "1")
        clone.set("borderId", str(self.border(line, colour)))
        clone.set("applyBorder", "1")
        self._marked[style, severity] = number = self._append("cellXfs", clone)
        return number

    def own(
        self,
        font: int,
        fill: int = 0,
        border: int = 0,
        *,
        horizontal: str = "left",
        wrap: bool = True,
        unlocked: bool = False,
    ) -> int:
        """Add a style of the record's own sheet."""
        cells = self._list("cellXfs")
        values = {
            "numFmtId": "0", "fontId": str(font), "fillId": str(fill), "borderId": str(border), "xfId": "0",
            "applyFont": "1", "applyFill": "1", "applyBorder": "1", "applyAlignment": "1",
        }  # fmt: skip
        style = sibling(cells, "xf", values)
        style.append(
            sibling(cells, "alignment", {"horizontal": horizontal, "vertical": "top", "wrapText": str(int(wrap))})
        )
        if unlocked:
            style.set("applyProtection", "1")
            style.append(sibling(cells, "protection", {"locked": "0"}))
        return self._append("cellXfs", style)

    def font(self, name: str, size: float, *, bold: bool = False, colour: str = INK) -> int:
        """Add a font."""
        fonts = self._list("fonts")
        font = sibling(fonts, "font")
        if bold:
            font.append(sibling(fonts, "b"))
        font.append(sibling(fonts, "sz", {"val": f"{size:g}"}))
        font.append(sibling(fonts, "color", {"rgb": colour}))
        font.append(sibling(fonts, "name", {"val": name}))
        return self._append("fonts", font)

    def fill(self, colour: str) -> int:
        """Add a solid fill, or return the one that was added."""
        key = ("fill", colour)
        if key not in self._parts:
            fills = self._list("fills")
            fill = sibling(fills, "fill")
            pattern = sibling(fills, "patternFill", {"patternType": "solid"})
            pattern.append(sibling(fills, "fgColor", {"rgb": colour}))
            pattern.append(sibling(fills, "bgColor", {"indexed": "64"}))
            fill.append(pattern)
            self._parts[key] = self._append("fills", fill)
        return self._parts[key]

    def border(self, line: str, colour: str) -> int:
        """Add a border all round, or return the one that was added."""
        key = ("border", line, colour)
        if key not in self._parts:
            borders = self._list("borders")
            border = sibling(borders, "border")
            for side in ("left", "right", "top", "bottom"):
                edge = sibling(borders, side, {"style": line})
                edge.append(sibling(borders, "color", {"rgb": colour}))
                border.append(edge)
            border.append(sibling(borders, "diagonal"))
            self._parts[key] = self._append("borders", border)
        return self._parts[key]

    def _has_fill(self, style: _Element) -> bool:
        fills = children(self._list("fills"), "fill")
        number = int(style.get("fillId") or 0)
        if number >= len(fills):
            return False
        pattern = child(fills[number], "patternFill")
        return pattern is None or pattern.get("patternType", "none") not in ("none", "gray125")

    def _dark_font(self, number: int) -> int:
        """Return a font like another one in our ink: our pale fill comes under what may be white."""
        key = ("font", number)
        if key not in self._parts:
            fonts = self._list("fonts")
            listed = children(fonts, "font")
            font = deepcopy(listed[number]) if number < len(listed) else sibling(fonts, "font")
            colour = child(font, "color")
            if colour is not None:
                colour.attrib.clear()
                colour.set("rgb", INK)
            self._parts[key] = self._append("fonts", font)
        return self._parts[key]

    def _list(self, name: str) -> _Element:
        found = child(self._root, name)
        if found is None:
            found = sibling(self._root, name)
            before = [one for earlier in _BEFORE[name] for one in children(self._root, earlier)]
            self._root.insert(self._root.index(before[-1]) + 1 if before else 0, found)
            if name == "cellXfs":
                found.append(sibling(found, "xf", {"numFmtId": "0", "fontId": "0", "fillId": "0", "borderId": "0"}))
            elif name == "fills":
                for kind in ("none", "gray125"):
                    fill = sibling(found, "fill")
                    fill.append(sibling(found, "patternFill", {"patternType": kind}))
                    found.append(fill)
        return found

    def _append(self, name: str, element: _Element) -> int:
        listing = self._list(name)
        listing.append(element)
        count = sum(isinstance(one.tag, str) for one in listing)
        listing.set("count", str(count))
        return count - 1
