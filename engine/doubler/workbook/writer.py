"""Filling a template: a copy of its package in which inputs and stored results differ, and nothing else.

The template is opened and indexed once. A filled copy then costs the joining of some bytes, the packing of the
sheets that changed, and one write.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path

from doubler.errors import InputError
from doubler.workbook.addresses import cell_name, full_name
from doubler.workbook.archive import Archive
from doubler.workbook.cell_spans import CellSpan, SheetSpans, split_at_type
from doubler.workbook.cell_xml import value_xml
from doubler.workbook.model import Address, Scalar, Sheet, Workbook
from doubler.workbook.output import write_file
from doubler.workbook.package import Package
from doubler.workbook.reader import workbook_from

CellKey = tuple[str, int, int]
"""Name of the sheet, row and column."""


@dataclass(frozen=True, slots=True)
class _Slot:
    """One cell that changes: its bytes without type and value, and which value goes into it."""

    number: int
    constant: bool
    where: str
    head: str
    head_end: str
    inside: str
    tail: str
    close: str
    before: Scalar
    original: bytes | None
    """The cell as the template holds it, kept where the value is what stands there already."""


@dataclass(frozen=True, slots=True)
class _SheetPlan:
    """A sheet's part cut at the cells that change: fixed bytes before each slot, and behind the last."""

    key: str
    fixed: tuple[bytes, ...]
    slots: tuple[_Slot, ...]
    prefix: str
    encoding: str


class PackageTemplate:
    """A template's package, opened once, from which filled copies are made.

    Parameters
    ----------
    package : Package
        The opened template.
    book : Workbook, optional
        What was read from the same package; read here where it is left out.

    Examples
    --------
    >>> template = PackageTemplate(Package("strap.xlsx"))  # doctest: +SKIP
    >>> plan = template.plan(inputs=[("Strap", 5, 3)], stored=[("Strap", 9, 3)])  # doctest: +SKIP
    >>> plan.write(Path("LC1.xlsx"), [12.5], [83.3])  # doctest: +SKIP
    """

    def __init__(self, package: Package, book: Workbook | None = None) -> None:
        self.package = package
        self.book = book if book is not None else workbook_from(package)
        self.archive = Archive(package)

    def plan(self, inputs: Sequence[CellKey], stored: Sequence[CellKey]) -> FillPlan:
        """Find the places of the cells that will change.

        Parameters
        ----------
        inputs : sequence of (str, int, int)
            Cells that take constants; a cell that the sheet lacks is put in.
        stored : sequence of (str, int, int)
            Formula cells, or cells of an array formula's range, whose stored values will be set.

        Returns
        -------
        FillPlan
            Makes the copies.

        Raises
        ------
        InputError
            Where an input is a formula cell, a stored cell is none, or there is no such sheet.
        """
        wanted: dict[str, dict[Address, tuple[int, bool]]] = {}
        sheets: dict[str, Sheet] = {}
        for constant, keys in ((True, inputs), (False, stored)):
            for number, (name, row, column) in enumerate(keys):
                sheet = self._sheet(name)
                sheets[sheet.part] = sheet
                cells = wanted.setdefault(sheet.part, {})
                if (row, column) in cells:
                    raise InputError(
                        f"{self.package.path}: cell {full_name(name, row, column)} is to be filled twice; fill it once"
                    )
                cells[row, column] = (number, constant)
        plans = tuple(self._sheet_plan(sheets[part], cells) for part, cells in wanted.items())
        return FillPlan(self, plans, len(inputs), len(stored))

    def _sheet(self, name: str) -> Sheet:
        sheet = self.book.sheet(name)
        if sheet is None:
            names = ", ".join(f"'{known.name}'" for known in self.book.sheets)
            raise InputError(f"{self.package.path} has no sheet '{name}'; it has {names}")
        return sheet

    def _sheet_plan(self, sheet: Sheet, cells: Mapping[Address, tuple[int, bool]]) -> _SheetPlan:
        data = self.package.read(sheet.part)
        spans = SheetSpans(data, f"{self.package.path}, part {sheet.part}", cells)
        slots: list[tuple[int, int, Address, _Slot]] = []
        absent: list[tuple[Address, _Slot]] = []
        for (row, column), (number, constant) in cells.items():
            where = f"{self.package.path}, cell {full_name(sheet.name, row, column)}"
            span = spans.cells.get((row, column))
            self._check(spans, span, (row, column), constant, where)
            if span is None:
                absent.append(((row, column), _new_slot(spans, row, column, number, constant, where)))
            else:
                known = sheet.cells[row, column]
                slot = _slot(spans, span, number, constant, where, known.value)
                slots.append((span.start, span.end, (row, column), slot))
        return _cut(sheet.part.lower(), spans, slots, absent)

    def _check(
        self,
        spans: SheetSpans,
        span: CellSpan | None,
        address: Address,
        constant: bool,
        where: str,
    ) -> None:
        formula = span is not None and span.formula is not None
        in_array = any(address in area for area in spans.arrays)
        if constant and formula:
            raise InputError(f"{where} holds a formula, which a case can't replace; give the column of an input cell")
        if constant and in_array:
            raise InputError(
                f"{where} is filled by the array formula of another cell; give the column of an input cell"
            )
        if not constant and not (formula or in_array):
            raise InputError(f"{where} holds no formula, so it has no result to store; give it as an input")


class FillPlan:
    """Makes filled copies of one template for one choice of cells; made by `PackageTemplate.plan`."""

    def __init__(self, template: PackageTemplate, sheets: tuple[_SheetPlan, ...], inputs: int, stored: int) -> None:
        self._template = template
        self._sheets = sheets
        self._counts = (inputs, stored)

    def render(self, inputs: Sequence[Scalar], stored: Sequence[Scalar]) -> list[bytes | memoryview]:
        """Return a filled copy as pieces of bytes.

        Parameters
        ----------
        inputs : sequence
            Values in the order of the plan's inputs: float, str, bool, or None for an empty cell.
        stored : sequence
            Values in the order of the plan's stored cells; also `ErrorValue`.

        Returns
        -------
        list of bytes
            The copy's file, in pieces.

        Raises
        ------
        InputError
            Where a value can't stand in a cell.
        ValueError
            Where a number is not finite, or the values are not as many as the cells.
        """
        if (len(inputs), len(stored)) != self._counts:
            raise ValueError(
                f"the plan takes {self._counts} inputs and stored values, not {(len(inputs), len(stored))}"
            )
        replaced = {}
        for plan in self._sheets:
            content = _fill_sheet(plan, inputs, stored)
            if content is not None:
                replaced[plan.key] = content
        return self._template.archive.assemble(replaced)

    def write(self, target: Path, inputs: Sequence[Scalar], stored: Sequence[Scalar]) -> None:
        """Write a filled copy; the target appears whole or not at all.

        Parameters
        ----------
        target : Path
            The file to write.
        inputs, stored : sequence
            As for `render`.

        Raises
        ------
        InputError
            As for `render`, where the target can't be written, or where it is the template itself.
        """
        refuse_own_file(target, self._template.package.path)
        write_file(target, self.render(inputs, stored))


def write_filled(
    template: Path | str,
    target: Path | str,
    inputs: Mapping[CellKey, Scalar],
    stored: Mapping[CellKey, Scalar],
) -> None:
    """Fill one copy of a template; for many copies make one `FillPlan` and use it again.

    Parameters
    ----------
    template : Path or str
        The template's file.
    target : Path or str
        The file to write.
    inputs : mapping of (str, int, int) to float, str, bool or None
        Constants by cell.
    stored : mapping of (str, int, int) to float, str, bool, ErrorValue or None
        Results by formula cell.
    """
    plan = PackageTemplate(Package(template)).plan(list(inputs), list(stored))
    plan.write(Path(target), list(inputs.values()), list(stored.values()))


def refuse_own_file(target: Path, source: Path) -> None:
    """Refuse to write over the file that is being read.

    Parameters
    ----------
    target, source : Path
        The file to be written and the one that was read.
    """
    try:
        same = target.samefile(source)
    except OSError:
        same = False
    if same:
        raise InputError(f"{target} is the file that is read; write to another name")


def _fill_sheet(plan: _SheetPlan, inputs: Sequence[Scalar], stored: Sequence[Scalar]) -> bytes | None:
    """Return the sheet's new bytes, or None where all values are those of the template."""
    parts = [plan.fixed[0]]
    changed = False
    for slot, fixed in zip(plan.slots, plan.fixed[1:], strict=True):
        value = (inputs if slot.constant else stored)[slot.number]
        if slot.original is not None and type(value) is type(slot.before) and value == slot.before:
            parts += (slot.original, fixed)
            continue
        changed = True
        attribute, element = value_xml(value, plan.prefix, slot.where, constant=slot.constant)
        if slot.inside or element or slot.tail:
            text = f"{slot.head}{attribute}{slot.head_end}>{slot.inside}{element}{slot.tail}{slot.close}"
        else:
            text = f"{slot.head}{attribute}{slot.head_end}/>"
        parts += (text.encode(plan.encoding, "xmlcharrefreplace"), fixed)
    return b"".join(parts) if changed else None


def _slot(spans: SheetSpans, span: CellSpan, number: int, constant: bool, where: str, before: Scalar) -> _Slot:
    data = spans.data
    head, head_end = split_at_type(data[span.start : span.tag_end])
    content_end = span.end if span.empty_tag else data.rindex(b"<", span.start, span.end)
    # The value goes where it stood, else behind the formula, else first; order is part of the format.
    values = [part for part in (span.value, span.inline) if part is not None]
    behind_formula = span.formula[1] if span.formula is not None else span.tag_end
    start = min((part[0] for part in values), default=behind_formula)
    end = max((part[1] for part in values), default=behind_formula)
    inside, tail = data[span.tag_end : start], data[end:content_end]
    return _Slot(
        number=number,
        constant=constant,
        where=where,
        head=head.decode(spans.encoding),
        head_end=head_end.decode(spans.encoding),
        inside=inside.decode(spans.encoding),
        tail=tail.decode(spans.encoding),
        close=f"</{spans.prefix}c>",
        before=before,
        original=data[span.start : span.end],
    )


def _new_slot(spans: SheetSpans, row: int, column: int, number: int, constant: bool, where: str) -> _Slot:
    style = spans.default_style(row, column)
    head = f'<{spans.prefix}c r="{cell_name(row, column)}"' + (f' s="{style}"' if style is not None else "")
    return _Slot(number, constant, where, head, "", "", "", f"</{spans.prefix}c>", None, None)


def _cut(
    key: str,
    spans: SheetSpans,
    slots: list[tuple[int, int, Address, _Slot]],
    absent: list[tuple[Address, _Slot]],
) -> _SheetPlan:
    """Cut the part at all places that change, in the order of its bytes."""
    # (place, end of what is replaced there, order among equals, bytes before, slot, bytes behind)
    cuts = [(start, end, address, b"", slot, b"") for start, end, address, slot in slots]
    cuts += _insertions(spans, absent)
    cuts.sort(key=lambda cut: (cut[0], cut[2]))
    fixed: list[bytes] = []
    done, behind = 0, b""
    for start, end, _, before, _, after in cuts:
        fixed.append(behind + spans.data[done:start] + before)
        done, behind = end, after
    fixed.append(behind + spans.data[done:])
    return _SheetPlan(key, tuple(fixed), tuple(cut[4] for cut in cuts), spans.prefix, spans.encoding)


def _insertions(
    spans: SheetSpans, absent: list[tuple[Address, _Slot]]
) -> list[tuple[int, int, Address, bytes, _Slot, bytes]]:
    """Say where cells go that the sheet lacks, with the rows around them where these lack too."""
    cuts = []
    prefix = spans.prefix
    by_row: dict[int, list[tuple[Address, _Slot]]] = {}
    for address, slot in sorted(absent, key=lambda pair: pair[0]):
        by_row.setdefault(address[0], []).append((address, slot))
    data_tag = spans.sheet_data
    assert data_tag is not None
    new_rows = [row for row in by_row if row not in spans.rows]
    for row, cells in by_row.items():
        span = spans.rows.get(row)
        before, behind = b"", b""
        if span is None:
            place, end = spans.row_place(row), 0
            before = f'<{prefix}row r="{row}">'.encode()
            behind = f"</{prefix}row>".encode()
            if data_tag.empty_tag:
                place, end = data_tag.start, data_tag.tag_end
                opened = spans.data[data_tag.start : data_tag.tag_end - 2].rstrip() + b">"
                before = (opened if row == new_rows[0] else b"") + before
                behind += f"</{prefix}sheetData>".encode() if row == new_rows[-1] else b""
        elif span.empty_tag:
            place, end = span.start, span.tag_end
            before = spans.data[span.start : span.tag_end - 2].rstrip() + b">"
            behind = f"</{prefix}row>".encode()
        else:
            place, end = -1, 0
        for number, (address, slot) in enumerate(cells):
            here = place
            if span is not None and not span.empty_tag:
                following = next((i for i, known in enumerate(span.columns) if known > address[1]), None)
                here = span.content_end if following is None else span.starts[following]
            first, last = number == 0, number == len(cells) - 1
            cuts.append((here, end or here, address, before if first else b"", slot, behind if last else b""))
    return cuts
