"""Findings as cell comments in a marked copy: appended to the comments that are there, with the boxes they need."""

from __future__ import annotations

import re
from collections.abc import Mapping
from typing import TYPE_CHECKING

from doubler.workbook.addresses import cell_name
from doubler.workbook.model import Address
from doubler.workbook.package_edit import PackageEdit, cell_text, sibling
from doubler.workbook.xml_guard import MAIN, STRICT, child, children, local_name, relationship_id

if TYPE_CHECKING:
    from lxml.etree import _Element

AUTHOR = "doubler check"
_COMMENTS_TYPE = "application/vnd.openxmlformats-officedocument.spreadsheetml.comments+xml"
_DRAWING_TYPE = "application/vnd.openxmlformats-officedocument.vmlDrawing"
_XML_SPACE = "{http://www.w3.org/XML/1998/namespace}space"
# What stands before <legacyDrawing> in a worksheet (ISO/IEC 29500-1, 18.3.1.99 and annex A).
_BEFORE_DRAWING = frozenset(
    re.split(
        " ",
        "sheetPr dimension sheetViews sheetFormatPr cols sheetData sheetCalcPr sheetProtection protectedRanges "
        "scenarios autoFilter sortState dataConsolidate customSheetViews mergeCells phoneticPr conditionalFormatting "
        "dataValidations hyperlinks printOptions pageMargins pageSetup headerFooter rowBreaks colBreaks "
        "customProperties cellWatches ignoredErrors smartTags drawing",
    )
)
_SHAPE_TYPE = (
    '<v:shapetype id="_x0000_t202" coordsize="21600,21600" o:spt="202" path="m,l,21600r21600,l21600,xe">'
    '<v:stroke joinstyle="miter"/><v:path gradientshapeok="t" o:connecttype="rect"/></v:shapetype>'
)
_SHAPE = (
    '<v:shape id="_x0000_s{number}" type="#_x0000_t202" style="position:absolute;margin-left:60pt;margin-top:2pt;'
    'width:{width}pt;height:{height}pt;z-index:{order};visibility:hidden" fillcolor="#fbfaf5" strokecolor="#0b5860" '
    'o:insetmode="auto"><v:fill color2="#fbfaf5"/><v:shadow on="t" color="black" obscured="t"/>'
    '<v:path o:connecttype="none"/><v:textbox style="mso-direction-alt:auto"><div style="text-align:left"></div>'
    '</v:textbox><x:ClientData ObjectType="Note"><x:MoveWithCells/><x:SizeWithCells/>'
    "<x:Anchor>{anchor}</x:Anchor><x:AutoFill>False</x:AutoFill><x:Row>{row}</x:Row>"
    "<x:Column>{column}</x:Column></x:ClientData></v:shape>"
)
_DRAWING = (
    '<xml xmlns:v="urn:schemas-microsoft-com:vml" xmlns:o="urn:schemas-microsoft-com:office:office" '
    'xmlns:x="urn:schemas-microsoft-com:office:excel"><o:shapelayout v:ext="edit">'
    '<o:idmap v:ext="edit" data="{block}"/></o:shapelayout>' + _SHAPE_TYPE + "{shapes}</xml>"
)
_SPACES = (
    (b"v", b"urn:schemas-microsoft-com:vml"),
    (b"o", b"urn:schemas-microsoft-com:office:office"),
    (b"x", b"urn:schemas-microsoft-com:office:excel"),
)
_SHAPE_NUMBER = re.compile(rb"_x0000_s(\d+)")


def add_comments(edit: PackageEdit, sheet_part: str, texts: Mapping[Address, str], block: int) -> list[Address]:
    """Write comments into a sheet.

    Parameters
    ----------
    edit : PackageEdit
        The changes to the package.
    sheet_part : str
        The sheet.
    texts : mapping of (int, int) to str
        What to write, by cell; where a comment stands already, it goes below it.
    block : int
        A number of its own for the sheet's boxes, should it need a new drawing.

    Returns
    -------
    list of (int, int)
        Cells with a thread of comments: a thread is not ours to write into, so they get no comment.
    """
    threaded = _threaded(edit, sheet_part)
    wanted = {at: text for at, text in texts.items() if cell_name(*at) not in threaded}
    skipped = [at for at in texts if at not in wanted]
    if not wanted:
        return skipped
    part = next((one for one in edit.package.related(sheet_part, "comments") if edit.package.has(one)), None)
    root = edit.root(part) if part is not None else _new_comments(edit, sheet_part)
    boxes = _write(root, wanted)
    everything = [_place(one.get("ref")) for one in _listing(root)]
    _draw(edit, sheet_part, boxes, [at for at in everything if at is not None], block)
    return skipped


def _write(root: _Element, wanted: Mapping[Address, str]) -> list[Address]:
    """Write the texts and return the cells that had no comment."""
    authors = child(root, "authors")
    if authors is None:
        authors = sibling(root, "authors")
        root.insert(0, authors)
    author = sibling(authors, "author")
    author.text = AUTHOR
    authors.append(author)
    number = str(len(children(authors, "author")) - 1)
    listing = child(root, "commentList")
    if listing is None:
        listing = sibling(root, "commentList")
        root.insert(root.index(authors) + 1, listing)
    known = {comment.get("ref"): comment for comment in children(listing, "comment")}
    new = []
    for at, text in sorted(wanted.items()):
        before = known.get(cell_name(*at))
        if before is None:
            comment = sibling(listing, "comment", {"ref": cell_name(*at), "authorId": number})
            holder = sibling(listing, "text")
            comment.append(holder)
            listing.append(comment)
            new.append(at)
        else:
            found = child(before, "text")
            holder = found if found is not None else sibling(before, "text")
            if found is None:
                before.append(holder)
            _plain_to_run(holder)
        run = sibling(holder, "r")
        piece = sibling(holder, "t")
        piece.text = cell_text(text if before is None else f"\n\n{text}")
        piece.set(_XML_SPACE, "preserve")
        run.append(piece)
        last = [one for one in holder if local_name(one) in ("t", "r")]
        holder.insert(holder.index(last[-1]) + 1 if last else 0, run)
    return new


def _plain_to_run(holder: _Element) -> None:
    """Put a plain text into a run: runs behind it are not read otherwise."""
    plain = child(holder, "t")
    if plain is not None:
        run = sibling(holder, "r")
        holder.replace(plain, run)
        run.append(plain)
        plain.set(_XML_SPACE, "preserve")


def _draw(edit: PackageEdit, sheet_part: str, boxes: list[Address], everything: list[Address], block: int) -> None:
    """Add the boxes in which a spreadsheet program shows the comments."""
    sheet = edit.root(sheet_part)
    legacy = child(sheet, "legacyDrawing")
    relation = edit.package.relationships(sheet_part).get(relationship_id(legacy) or "") if legacy is not None else None
    if relation is not None and edit.package.has(relation.target):
        old = edit.raw(relation.target)
        end = old.rfind(b"</xml>")
        if boxes and end >= 0:
            # Prefixes are the writer's choice; where they are not ours, each of our boxes says what they mean.
            known = all(b"xmlns:" + name + b'="' + space in old[:4096] for name, space in _SPACES)
            spaces = "" if known else "".join(f' xmlns:{name.decode()}="{space.decode()}"' for name, space in _SPACES)
            number = max([1024 * block, *(int(digits) for digits in _SHAPE_NUMBER.findall(old))]) + 1
            kind = "" if b"_x0000_t202" in old else _SHAPE_TYPE.replace("<v:shapetype", f"<v:shapetype{spaces}")
            ours = kind + _shapes(boxes, number).replace("<v:shape ", f"<v:shape{spaces} ")
            edit.replace(relation.target, old[:end] + ours.encode() + old[end:])
            return
        if not boxes:
            return
        # A drawing that can't be added to: only its comments' boxes would be lost, so all are drawn anew.
    part = edit.free_name("xl/drawings/vmlDrawingCheck{}.vml")
    edit.declare_extension("vml", _DRAWING_TYPE)
    edit.add(part, _DRAWING.format(block=block, shapes=_shapes(everything, 1024 * block + 1)).encode())
    identity = edit.relate(sheet_part, "vmlDrawing", part)
    name = f"{{{edit.relationship_space}}}id"
    if legacy is not None:
        legacy.attrib.clear()
        legacy.set(name, identity)
        return
    element = sibling(sheet, "legacyDrawing", {name: identity})
    places = [i for i, one in enumerate(sheet) if local_name(one) in _BEFORE_DRAWING]
    sheet.insert(places[-1] + 1 if places else 0, element)


def _shapes(boxes: list[Address], number: int) -> str:
    pieces = []
    for order, (row, column) in enumerate(boxes, start=1):
        top = max(row - 2, 0)
        # Columns and rows from 0, each with an offset in pixels: left, top, right, bottom.
        anchor = f"{column}, 12, {top}, 8, {column + 5}, 20, {top + 8}, 4"
        pieces.append(
            _SHAPE.format(
                number=number + order - 1,
                width=280,
                height=120,
                order=order,
                anchor=anchor,
                row=row - 1,
                column=column - 1,
            )
        )
    return "".join(pieces)


def _new_comments(edit: PackageEdit, sheet_part: str) -> _Element:
    from lxml import etree

    space = STRICT if edit.strict else MAIN
    root = etree.Element(f"{{{space}}}comments", nsmap={None: space})
    for name in ("authors", "commentList"):
        root.append(sibling(root, name))
    part = edit.free_name("xl/commentsCheck{}.xml")
    edit.add(part, root, _COMMENTS_TYPE)
    edit.relate(sheet_part, "comments", part)
    return root


def _listing(root: _Element) -> list[_Element]:
    listing = child(root, "commentList")
    return [] if listing is None else children(listing, "comment")


def _threaded(edit: PackageEdit, sheet_part: str) -> set[str]:
    found: set[str] = set()
    for part in edit.package.related(sheet_part, "threadedComment"):
        if edit.package.has(part):
            found |= {one.get("ref", "") for one in edit.package.root(part)}
    return found


def _place(text: str | None) -> Address | None:
    from doubler.errors import InputError
    from doubler.workbook.addresses import parse_cell

    try:
        return parse_cell((text or "").partition(":")[0])
    except InputError:
        return None
