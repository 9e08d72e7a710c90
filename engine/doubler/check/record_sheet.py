"""The sheet 'Check record' of a marked copy: what was checked, findings, margins, sign-off; and reading it again."""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from pathlib import Path
from xml.sax.saxutils import escape

from doubler.check.dispositions import Disposition, Earlier, FindingKey, SignOff
from doubler.check.finding import FAMILY_OF
from doubler.check.marking_styles import MarkingStyles
from doubler.check.record_content import CAUTION, Content, Margin
from doubler.errors import InputError
from doubler.workbook.addresses import cell_name, split_sheet
from doubler.workbook.model import Sheet
from doubler.workbook.package_edit import cell_text, sibling
from doubler.workbook.xml_guard import MAIN, STRICT

SHEET_NAME = "Check record"
ROLES = ("Author", "Checker", "Approver")
SIGN_OFF_COLUMNS = {"Name": 4, "Date": 6, "Signature": 7}
HEADINGS = (
    "No.", "Severity", "Kind", "Cell", "Finding", "Formula, numbers put in, result", "Disposition", "By", "Date",
    "Cells behind",
)  # fmt: skip
WIDTHS = (5, 10, 16, 16, 42, 40, 24, 11, 11, 10)
LAST = len(HEADINGS)
MOST_WRITTEN = 300
"""Margins, lowest first, whose formulas are written with their numbers."""
_LETTERS = ("", *"ABCDEFGHIJ")
_SHA = "SHA-256 of the file"
_DIGITS = re.compile(r"[0-9a-f]{16}")


@dataclass
class _Styles:
    """The styles of the sheet, by what they are for."""

    title: int
    heading: int
    label: int
    text: int
    formula: int
    number: int
    entry: int

    @classmethod
    def added(cls, styles: MarkingStyles) -> _Styles:
        line = styles.border("thin", "FFC6CCC6")
        plain, bold = styles.font("Arial", 9), styles.font("Arial", 9, bold=True)
        return cls(
            title=styles.own(styles.font("Arial", 15, bold=True, colour="FF0B5860"), wrap=False),
            heading=styles.own(bold, styles.fill("FFE6E8E1"), line),
            label=styles.own(bold, 0, line),
            text=styles.own(plain, 0, line),
            formula=styles.own(styles.font("Courier New", 8), 0, line),
            number=styles.own(plain, 0, line, horizontal="right"),
            entry=styles.own(plain, styles.fill("FFFFFBE6"), line, unlocked=True),
        )


@dataclass
class _Page:
    """Rows under way, as XML text: a sheet of thousands of margins is written at once."""

    styles: _Styles
    rows: list[str] = field(default_factory=list)
    merged: list[str] = field(default_factory=list)

    def line(
        self, cells: dict[int, tuple[str, int]], merge: tuple[tuple[int, int], ...] = (), height: float = 0
    ) -> None:
        """Write a row: text and style by column; merged columns get the style of their first."""
        number = len(self.rows) + 1
        for first, last in merge:
            self.merged.append(f"{cell_name(number, first)}:{cell_name(number, last)}")
            for column in range(first + 1, last + 1):
                cells.setdefault(column, ("", cells[first][1]))
        size = f' ht="{height:g}" customHeight="1"' if height else ""
        pieces = [f'<row r="{number}"{size}>']
        for column, (text, style) in sorted(cells.items()):
            head = f'<c r="{_LETTERS[column]}{number}" s="{style}"'
            if text:
                pieces.append(
                    f'{head} t="inlineStr"><is><t xml:space="preserve">{escape(cell_text(text))}</t></is></c>'
                )
            else:
                pieces.append(f"{head}/>")
        pieces.append("</row>")
        self.rows.append("".join(pieces))


def record_sheet(content: Content, styles: MarkingStyles, *, strict: bool = False) -> bytes:
    """Return the sheet's XML.

    Parameters
    ----------
    content : Content
        What the record holds.
    styles : MarkingStyles
        The stylesheet of the copy, to which the sheet's styles are added.
    strict : bool
        Whether the package is of the strict form of the standard.
    """
    from lxml import etree

    space = STRICT if strict else MAIN
    root = etree.Element(f"{{{space}}}worksheet", nsmap={None: space})
    properties = sibling(root, "sheetPr")
    properties.append(sibling(root, "tabColor", {"rgb": "FF0B5860"}))
    properties.append(sibling(root, "pageSetUpPr", {"fitToPage": "1"}))
    root.append(properties)
    views = sibling(root, "sheetViews")
    views.append(sibling(root, "sheetView", {"showGridLines": "0", "workbookViewId": "0"}))
    root.append(views)
    columns = sibling(root, "cols")
    for number, width in enumerate(WIDTHS, start=1):
        values = {"min": str(number), "max": str(number), "width": str(width), "customWidth": "1"}
        columns.append(sibling(root, "col", values))
    root.append(columns)
    root.append(sibling(root, "sheetData"))
    page = _Page(_Styles.added(styles))
    _head(page, content)
    _sign_off(page, content)
    _findings(page, content)
    _margins(page, content)
    _lapsed(page, content)
    if page.merged:
        merges = sibling(root, "mergeCells", {"count": str(len(page.merged))})
        for area in page.merged:
            merges.append(sibling(root, "mergeCell", {"ref": area}))
        root.append(merges)
    margins = {"left": "0.4", "right": "0.4", "top": "0.5", "bottom": "0.6", "header": "0.3", "footer": "0.3"}
    root.append(sibling(root, "pageMargins", margins))
    root.append(sibling(root, "pageSetup", {"orientation": "landscape", "fitToWidth": "1", "fitToHeight": "0"}))
    footer = sibling(root, "headerFooter")
    odd = sibling(root, "oddFooter")
    odd.text = "&LCheck record&CPage &P of &N&R&F"
    footer.append(odd)
    root.append(footer)
    frame: bytes = etree.tostring(root, encoding="UTF-8", xml_declaration=True, standalone=True)
    rows = "".join(page.rows).encode("utf-8")
    return frame.replace(b"<sheetData/>", b"<sheetData>" + rows + b"</sheetData>", 1)


def _head(page: _Page, content: Content) -> None:
    style, report = page.styles, content.report
    counts = ", ".join(f"{n} {word if n == 1 else word + 's'}" for word, n in report.counts.items())
    lost = [f"{e.finding.sheet}!{e.finding.cell}" for e in content.unjudged]
    page.line({1: (SHEET_NAME, style.title)}, height=24)
    page.line({})
    for label, text in (
        ("Workbook", report.path.name),
        (_SHA, report.sha256),
        ("Checked with", f"doubler {content.version}"),
        ("Checked on", content.date),
        (
            "Coverage",
            f"{report.formulas} formulas: {report.recalculated} recalculated, {report.traced} traced by their units",
        ),
        ("Findings", counts),
        ("Not judged", ", ".join(lost[:40]) + (f" and {len(lost) - 40} more" if len(lost) > 40 else "") or "nothing"),
        ("Caution", CAUTION),
    ):
        height = _height(text, sum(WIDTHS[3:]))
        page.line({1: (label, style.label), 4: (text, style.text)}, ((1, 3), (4, LAST)), height)


def _sign_off(page: _Page, content: Content) -> None:
    style = page.styles
    merge = ((1, 3), (4, 5), (7, LAST))
    page.line({})
    names = {1: ("Role", style.heading)} | {c: (name, style.heading) for name, c in SIGN_OFF_COLUMNS.items()}
    page.line(names, merge)
    given = content.sign_off.fields if content.sign_off is not None else {}
    for role in ROLES:
        cells = {1: (role, style.label)}
        cells |= {column: (given.get((role, name), ""), style.entry) for name, column in SIGN_OFF_COLUMNS.items()}
        page.line(cells, merge, 24)
    if content.sign_off_void:
        text = "The workbook was changed since an earlier record was signed; that sign-off does not hold for it."
        page.line({1: (text, style.label)}, ((1, LAST),))


def _findings(page: _Page, content: Content) -> None:
    style = page.styles
    page.line({})
    page.line({column: (text, style.heading) for column, text in enumerate(HEADINGS, start=1)})
    for entry in content.entries:
        finding, written, given = entry.finding, entry.written, entry.disposition
        formula = ""
        if written is not None and written.text:
            formula = "\n".join(
                [written.text, *(f"= {text}" for text in (written.symbols, written.numbers, written.result) if text)]
            )
        page.line(
            {
                1: (str(entry.number), style.number),
                2: (finding.severity, style.label),
                3: (finding.kind, style.text),
                4: (f"{finding.sheet}!{finding.cell}", style.text),
                5: (finding.message, style.text),
                6: (formula, style.formula),
                7: (given.text if given else "", style.entry),
                8: (given.by if given else "", style.entry),
                9: (given.date if given else "", style.entry),
                10: (entry.behind, style.formula),
            },
            height=max(_height(finding.message, WIDTHS[4]), _height(formula, WIDTHS[5]), 24),
        )
    if not content.entries:
        page.line({1: ("Nothing was found.", style.text)}, ((1, LAST),))


def _margins(page: _Page, content: Content) -> None:
    style = page.styles
    if not content.margins:
        return
    page.line({})
    heads = (
        "", "", "Margin", "Cell", "Of what", "Numbers put in", "Re-derived", "As stored", "Agrees", "Rests on findings",
    )  # fmt: skip
    page.line({column: (text, style.heading) for column, text in enumerate(heads, start=1)})
    for place, margin in enumerate(content.margins):
        page.line(
            {
                1: ("", style.text),
                2: ("", style.text),
                3: (margin.quantity, style.text),
                4: (margin.cell, style.text),
                5: (margin.label, style.text),
                6: (formula := _margin_formula(content, margin, place), style.formula),
                7: (margin.shown, style.number),
                8: (margin.shown_stored, style.number),
                9: ("yes" if margin.confirmed else "no", style.text),
                10: (", ".join(map(str, margin.rests_on)) or "none", style.text),
            },
            height=max(_height(margin.label, WIDTHS[4]), _height(formula, WIDTHS[5])),
        )


def _margin_formula(content: Content, margin: Margin, place: int) -> str:
    """Return a margin's formula: with numbers put in for the lowest ones, as the workbook has it for the others."""
    if not margin.derived:
        return "typed in, not computed"
    if place < MOST_WRITTEN:
        return content.writer.written(margin.key).numbers
    cell = content.report.book.cell(margin.key)
    return f"={cell.formula}" if cell is not None else ""


def _lapsed(page: _Page, content: Content) -> None:
    style = page.styles
    if not content.lapsed:
        return
    page.line({})
    heads = ("Fell away", "", "Kind", "Cell", "Disposition that was entered", "Why it fell away", "", "By", "Date", "")
    page.line({column: (text, style.heading) for column, text in enumerate(heads, start=1)})
    for one in content.lapsed:
        given = one.disposition
        texts = ("", "", one.kind, f"{one.sheet}!{one.cell}", given.text, one.reason, "", given.by, given.date, "")
        page.line(
            {column: (text, style.text) for column, text in enumerate(texts, start=1)},
            height=_height(given.text, WIDTHS[4]),
        )


def _height(text: str, width: int) -> float:
    """Return the height in points that a wrapped text needs; merged cells do not grow by themselves."""
    lines = sum(max(1, -(-len(line) * 10 // (width * 12))) for line in text.split("\n"))
    return min(13.0 * max(lines, 1) + 2, 400.0)


def read_record(path: Path) -> Earlier:
    """Read the decisions out of an earlier record's marked workbook.

    Parameters
    ----------
    path : Path
        The marked workbook.

    Raises
    ------
    InputError
        It can't be read, or it is no marked workbook of a check record.
    """
    from doubler.workbook.package import Package
    from doubler.workbook.reader import sheet_listing
    from doubler.workbook.sheet_part import SheetContext, read_sheet
    from doubler.workbook.strings_part import read_shared_texts

    package = Package(path)
    part = package.workbook_part()
    named = [one for one in sheet_listing(package, part, package.root(part)) if one and one.name.startswith(SHEET_NAME)]
    if not named:
        raise InputError(
            f"{path} stands where the check record goes and has no sheet '{SHEET_NAME}', so it is not overwritten; "
            "move it, or give another folder for --record"
        )
    sheet = named[-1]
    read_sheet(sheet, SheetContext(package, read_shared_texts(package, part), frozenset(), False))
    return _earlier(sheet)


def _earlier(sheet: Sheet) -> Earlier:
    def text(row: int, column: int) -> str:
        cell = sheet.cells.get((row, column))
        value = None if cell is None else cell.value
        if isinstance(value, float):
            return f"{value:.15g}"
        return "" if value is None else str(value).strip()

    rows = sorted({row for row, _ in sheet.cells})
    sha = next((text(row, 4) for row in rows if text(row, 1) == _SHA), "")
    fields = {
        (role, name): text(row, column)
        for row in rows
        for role in ROLES
        if text(row, 1) == role
        for name, column in SIGN_OFF_COLUMNS.items()
    }
    dispositions: dict[FindingKey, Disposition] = {}
    for row in rows:
        kind, behind = text(row, 3), text(row, LAST)
        name, cell = split_sheet(text(row, 4))
        if kind not in FAMILY_OF or name is None or not _DIGITS.fullmatch(behind):
            continue
        number = 1
        while (key := (name, cell, kind, number)) in dispositions:
            number += 1
        dispositions[key] = Disposition(text(row, 7), text(row, 8), text(row, 9), behind)
    return Earlier(dispositions, SignOff(sha, fields))
