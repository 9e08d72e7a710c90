"""Workbooks written as text, as an engineer would lay them out, and the faults that are seeded into them.

One file holds one workbook. A line is a row, ``|`` parts its cells, ``=…`` is a formula, ``'…`` a text, and ``{name}``
behind a cell names it, so that formulas and faults can speak of it: ``={F}/{A}``; ``{$F}`` is anchored, ``{r}``,
``{r-1}`` is the row's own number. Lines with ``!`` say the rest::

    !sheet Strap            a new sheet               !name load {F}       a defined name
    !format {s} 0.0" MPa"   a number format           !merge A1:C1         !comment {F} from the test report
    !hide row 5             (or column C, sheet X)    !iterate

Behind the line ``---`` stand the faults, each of them an edit of the clean workbook::

    fault unit-scale at sig
      sig: ={F}/{A}
      stored sig: 12        a stored value that is not the formula's
"""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from pathlib import Path

from openpyxl import Workbook
from openpyxl.comments import Comment
from openpyxl.utils import get_column_letter

from doubler.workbook.evaluate import NotEvaluated, evaluate
from doubler.workbook.graph import build_graph
from doubler.workbook.model import Scalar
from doubler.workbook.package import Package
from doubler.workbook.reader import workbook_from
from doubler.workbook.writer import write_filled

_TAG = re.compile(r"(?:^|\s+)\{([A-Za-z_]\w*)\}$")
_USE = re.compile(r"\{(\$?)([A-Za-z_]\w*)([+-]\d+)?\}")
_NUMBER = re.compile(r"^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$")

Place = tuple[str, int, int]


@dataclass
class Fault:
    """A fault to be seeded: its kind, the tag or address where it is to be found, and the edits that make it."""

    kind: str
    at: str
    edits: dict[str, str] = field(default_factory=dict)
    stored: dict[str, str] = field(default_factory=dict)
    lines: list[str] = field(default_factory=list)
    number: int = 0


@dataclass
class Written:
    """A workbook as written: cells by sheet and address, the places of tags, directives, faults."""

    name: str
    cells: dict[Place, str] = field(default_factory=dict)
    tags: dict[str, Place] = field(default_factory=dict)
    lines: list[tuple[str, str]] = field(default_factory=list)
    sheets: list[str] = field(default_factory=list)
    faults: list[Fault] = field(default_factory=list)

    def place(self, text: str) -> Place:
        """Return the place of a tag, an address or ``Sheet!A1``."""
        if text in self.tags:
            return self.tags[text]
        sheet, _, address = text.rpartition("!")
        match = re.fullmatch(r"([A-Z]+)(\d+)", address)
        assert match, f"{self.name}: no such tag or address: {text}"
        column = 0
        for letter in match[1]:
            column = column * 26 + ord(letter) - 64
        return sheet or self.sheets[0], int(match[2]), column

    def address(self, text: str) -> tuple[str, str]:
        """Return the sheet and the address that a tag stands for."""
        sheet, row, column = self.place(text)
        return sheet, f"{get_column_letter(column)}{row}"


def read_written(path: Path) -> Written:
    """Read one workbook's text."""
    book = Written(path.stem)
    text, _, faults = path.read_text(encoding="utf-8").partition("\n---\n")
    sheet, row = "Sheet1", 0
    for line in text.split("\n"):
        if line.startswith("!sheet "):
            sheet, row = line[7:].strip(), 0
            book.sheets.append(sheet)
        elif line.startswith("!"):
            book.lines.append((sheet, line[1:]))
        else:
            if not book.sheets:
                book.sheets.append(sheet)
            row += 1
            for column, cell in enumerate(line.split("|"), 1):
                content = cell.strip()
                match = _TAG.search(content)
                if match:
                    book.tags[match[1]] = (sheet, row, column)
                    content = content[: match.start()]
                if content:
                    book.cells[sheet, row, column] = content
    _read_faults(book, faults)
    return book


def _read_faults(book: Written, text: str) -> None:
    for line in text.split("\n"):
        content = line.strip()
        if not content:
            continue
        if content.startswith("fault "):
            _, kind, _, at = content.split(None, 3)
            book.faults.append(Fault(kind, at, number=len(book.faults) + 1))
        elif content.startswith("!"):
            book.faults[-1].lines.append(content[1:])
        elif content.startswith("stored "):
            place, _, value = content[7:].partition(":")
            book.faults[-1].stored[place.strip()] = value.strip()
        else:
            place, _, value = content.partition(":")
            book.faults[-1].edits[place.strip()] = value.strip()


def _value(text: str) -> Scalar:
    if _NUMBER.match(text):
        return float(text)
    return text.removeprefix("'")


def _formula(book: Written, text: str, place: Place) -> str:
    def used(match: re.Match[str]) -> str:
        anchored, name, offset = match.groups()
        if name == "r":
            return str(place[1] + int(offset or 0))
        sheet, row, column = book.place(name)
        letters = get_column_letter(column)
        address = f"${letters}${row}" if anchored else f"{letters}{row}"
        return address if sheet == place[0] else f"'{sheet}'!{address}"

    return _USE.sub(used, text)


def build(book: Written, target: Path, fault: Fault | None = None) -> Path:
    """Write the workbook, clean or with one fault; every formula stores what it gives, except where the fault says so.

    Parameters
    ----------
    book : Written
    target : Path
        The file to write.
    fault : Fault, optional
        The fault to seed.

    Returns
    -------
    Path
        `target`.
    """
    cells = dict(book.cells)
    for place, text in (fault.edits if fault else {}).items():
        cells[book.place(place)] = text
    made = Workbook()
    made.remove(made.active)
    for name in book.sheets:
        made.create_sheet(name)
    for place, text in cells.items():
        if not text:
            continue
        cell = made[place[0]].cell(place[1], place[2])
        if text.startswith("="):
            cell.value = _formula(book, text, place)
        else:
            cell.value = _value(text)
            if text.startswith("'"):
                cell.data_type = "s"
    for sheet, line in [
        *book.lines,
        *((book.place(fault.at.split("|")[0])[0], line) for line in (fault.lines if fault else ())),
    ]:
        _direct(book, made, sheet, line)
    raw = target.with_name(f"raw_{target.name}")
    made.save(raw)
    _store(book, raw, target, fault)
    raw.unlink()
    return target


def _direct(book: Written, made: Workbook, sheet: str, line: str) -> None:
    verb, _, rest = line.partition(" ")
    rest = _formula(book, rest, (sheet, 0, 0))
    page = made[sheet]
    if verb == "name":
        from openpyxl.workbook.defined_name import DefinedName

        name, _, address = rest.partition(" ")
        where, _, cell = address.rpartition("!")
        letters, digits = re.fullmatch(r"([A-Z]+)(\d+)", cell).groups()  # type: ignore[union-attr]
        made.defined_names[name] = DefinedName(name, attr_text=f"'{where.strip(chr(39)) or sheet}'!${letters}${digits}")
    elif verb == "format":
        address, _, code = rest.partition(" ")
        for row in page[address] if ":" in address else ((page[address],),):
            for cell in row:
                cell.number_format = code
    elif verb == "merge":
        page.merge_cells(rest)
    elif verb == "comment":
        address, _, text = rest.partition(" ")
        page[address].comment = Comment(text, "Checker")
    elif verb == "hide":
        what, _, which = rest.partition(" ")
        if what == "row":
            page.row_dimensions[int(which)].hidden = True
        elif what == "column":
            page.column_dimensions[which].hidden = True
        else:
            made[which].sheet_state = "hidden"
    elif verb == "iterate":
        made.calculation.iterate = True
    else:
        raise AssertionError(f"{book.name}: no such line: {line}")


def _store(book: Written, raw: Path, target: Path, fault: Fault | None) -> None:
    read = workbook_from(Package(raw))
    values = evaluate(build_graph(read))
    stored: dict[Place, Scalar] = {}
    for sheet, address, _ in read.formulas():
        value = values.value(sheet.name, address)
        stored[sheet.name, *address] = 0.0 if isinstance(value, NotEvaluated) or value is None else value
    for place, text in (fault.stored if fault else {}).items():
        stored[book.place(place)] = _value(text) if text else None
    if stored:
        write_filled(raw, target, {}, stored)
    else:
        target.write_bytes(raw.read_bytes())


def all_written(folder: str = "sheets") -> list[Written]:
    """Return all workbooks of a folder beside this file's."""
    return [read_written(path) for path in sorted((Path(__file__).parent / "seeded" / folder).glob("*.txt"))]
