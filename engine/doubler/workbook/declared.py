"""The unit that a sheet declares for a cell, and where it was read.

In this order: a unit cell at the right; a bracket in the label or header; a unit row under the header; the literal of
the number format. Then what other habits there are: a unit at the end of a row of numbers, a unit cell or a column of
units at the left, ``Force / kN`` in a header, a note beside, a comment, a note for the whole sheet; and last, weakly, a
label that names a pure number.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field

from doubler.units import Unit, parse_unit
from doubler.workbook.carried import Key
from doubler.workbook.declared_places import (
    Declared,
    Disagreement,
    Found,
    Unreadable,
    mere_symbol,
    reads_own_column,
    row_against_column,
    units_alike,
)
from doubler.workbook.label_units import bracket_unit, is_bare_name, loose_unit, sheet_note_unit
from doubler.workbook.labels import Label, Labels, Layout
from doubler.workbook.model import Address, Workbook
from doubler.workbook.pounds import pounds_force
from doubler.workbook.roles import is_difference, is_pure_number, is_pure_row, is_total
from doubler.workbook.unit_cells import UnitCells
from doubler.workbook.unit_text import (
    conversion_unit,
    format_unit,
    is_percent_format,
    phrase_unit,
    read_unit_text,
    role_agrees,
)


@dataclass(slots=True)
class Declarations:
    """The declared units of a workbook's cells, found when asked for and then kept."""

    workbook: Workbook
    labels: Labels
    _known: dict[Key, Declared | None] = field(default_factory=dict)
    _shared: dict[tuple[Key, str, bool, bool], Declared] = field(default_factory=dict)
    _cells: dict[str, UnitCells] = field(default_factory=dict)
    _heads: dict[tuple[str, int, int], tuple[Found | None, Found | None, Found | None]] = field(default_factory=dict)
    _notes: dict[str, list[Found]] = field(default_factory=dict)
    _unreadable: dict[Key, Unreadable] = field(default_factory=dict)
    _disagreements: dict[Key, Disagreement] = field(default_factory=dict)
    _columns: dict[tuple[str, int, int, int, bool], Declared | None] = field(default_factory=dict)
    _pounds: dict[Key, tuple[str, Address, str, Unit]] = field(default_factory=dict)
    _complete: bool = False
    _apart_from_texts: dict[tuple[str, int, int], bool] = field(default_factory=dict)

    def label(self, sheet: str, address: Address) -> Label:
        """Return the words that belong to a cell."""
        return self.labels.label(sheet, address)

    def unit(self, sheet: str, address: Address) -> Declared | None:
        """Return the declared unit of a cell, or None."""
        key = (sheet, address)
        try:
            return self._known[key]
        except KeyError:
            found = self._known[key] = self._declare(sheet, address)
            return found

    @property
    def unreadable(self) -> list[Unreadable]:
        """Texts that stand where a number's unit stands and can't be read, each once."""
        self._ask_all()
        seen: dict[Key, Unreadable] = {}
        for item in self._unreadable.values():
            seen.setdefault(item.at, item)
        return list(seen.values())

    @property
    def disagreements(self) -> list[Disagreement]:
        """Cells for which two places declare unlike units."""
        self._ask_all()
        return list(self._disagreements.values())

    @property
    def pounds(self) -> dict[Key, tuple[str, Address, str, Unit]]:
        """Places that write a force in pounds of mass: first cell, the text there, and the unit that it is read as."""
        self._ask_all()
        return dict(self._pounds)

    def head(self, sheet: str, address: Address) -> Key:
        """Return the cell that stands for a column: its header, the top of a long list, or the cell itself."""
        layout = self.labels.layout(sheet)
        row = layout.header_row(address)
        return sheet, (layout.list_top(address) if row is None else row, address[1])

    def _ask_all(self) -> None:
        if self._complete:
            return
        self._complete = True
        for sheet in self.workbook.sheets:
            for address, cell in sheet.cells.items():
                if cell.formula is not None or isinstance(cell.value, float):
                    self.unit(sheet.name, address)

    def _declare(self, sheet: str, address: Address) -> Declared | None:
        layout = self.labels.layout(sheet)
        quick = self._under_header(sheet, layout, address)
        if quick is not None:
            held = self._columns.get(quick, quick)
            if not isinstance(held, tuple):
                return held
        finds = self._places(sheet, layout, address)
        first = next(finds, None)
        if first is None:
            if quick is not None:
                self._columns[quick] = None
            return None
        declared = self._share(sheet, layout, address, first)
        if not first.weak:
            for second in finds:
                if second.weak or second.place.startswith(("note", "comment")):
                    break
                if row_against_column(first, second) or mere_symbol(second):
                    continue
                if not units_alike(first.unit, second.unit) and second.at != first.at:
                    other = self._share(sheet, layout, address, second)
                    self._disagreements[sheet, address] = Disagreement(sheet, address, declared, other)
                    break
        if quick is not None and first.unit.dimension != _temperature():
            self._columns[quick] = declared
        return declared

    def _under_header(self, sheet: str, layout: Layout, address: Address) -> tuple[str, int, int, int, bool] | None:
        """Return the column from whose header alone a cell has its unit: no text beside it could tell another."""
        row, column = address
        shape = (sheet, layout.row_shape(row), column)
        apart = self._apart_from_texts.get(shape)
        if apart is None:
            apart = self._apart_from_texts[shape] = self._no_text_tells(layout, address)
        if not apart or address in layout.sheet.comments or (sheet, address) in self.labels.names:
            return None
        head = layout.header_row(address)
        cell = layout.cells.get(address)
        return None if head is None or cell is None else (sheet, head, column, cell.style, layout.apart(head, row))

    @staticmethod
    def _no_text_tells(layout: Layout, address: Address) -> bool:
        """Return whether no text of its row bears on a cell's unit; the same in all rows of one shape."""
        row, column = address
        texts = layout.columns_of_text.get(row)
        if not texts:
            return True
        if texts[-1] > column and (
            (row, column + 1) in layout.texts
            or (row, column + 2) in layout.texts
            or layout.right_text(address) is not None
        ):
            return False
        left = layout.left_texts(address) if texts[0] < column else ()
        return not left or (
            len(left) == 1 and is_bare_name(layout.texts[left[0]]) and not layout.touches_left(address, left[0])
        )

    def _share(self, sheet: str, layout: Layout, address: Address, found: Found) -> Declared:
        absolute = False
        unit = found.unit
        if unit.dimension == _temperature():
            words = found.words if found.words is not None else self.label(sheet, address).words
            absolute = not is_difference(words)
        force = pounds_force(unit, found.words if found.words is not None else self.label(sheet, address).words)
        if force is not None:
            unit = force
            self._pounds.setdefault(found.at, (sheet, address, found.text, force))
        if unit.text == "%" and self._percent(layout, address):
            unit = parse_unit("1")
        key = (found.at, found.place, absolute, unit is found.unit)
        shared = self._shared.get(key)
        if shared is None:
            shared = Declared(unit, found.text, found.place, (found.at,), found.weak, absolute)
            self._shared[key] = shared
        return shared

    def _percent(self, layout: Layout, address: Address) -> bool:
        cell = layout.cells.get(address)
        return cell is not None and is_percent_format(self._format(cell.style))

    def _format(self, style: int) -> str:
        formats = self.workbook.number_formats
        return formats[style] if 0 <= style < len(formats) else "General"

    def _unit_cells(self, sheet: str, layout: Layout) -> UnitCells:
        found = self._cells.get(sheet)
        if found is None:
            found = self._cells[sheet] = UnitCells(layout)
        return found

    def _places(self, sheet: str, layout: Layout, address: Address) -> Iterator[Found]:
        row, column = address
        left = layout.left_texts(address)
        beside = bool(left) and layout.touches_left(address, left[0])
        unit_cells = self._unit_cells(sheet, layout)
        right = (row, column + 1)
        if right in layout.texts:
            found = self._unit_cell(sheet, layout, address, right, "unit cell at the right", unit_cells, left)
            if found is not None:
                yield found
        in_label = self._in_label(sheet, layout, address, left)
        if beside and in_label is not None:
            yield in_label
        in_header, unit_row, loose_header = self._in_headers(sheet, layout, address, unit_cells)
        if in_header is not None:
            yield in_header
        if not beside and in_label is not None:
            yield in_label
        if unit_row is not None:
            yield unit_row
        cell = layout.cells.get(address)
        if cell is not None and cell.style:
            found = self._in_format(sheet, address, cell.style)
            if found is not None:
                yield found
        yield from self._other_habits(sheet, layout, address, unit_cells, left, beside, loose_header)

    def _other_habits(
        self,
        sheet: str,
        layout: Layout,
        address: Address,
        unit_cells: UnitCells,
        left: tuple[Address, ...],
        beside: bool,
        loose_header: Found | None,
    ) -> Iterator[Found]:
        row, column = address
        if len(left) > 1 or (left and unit_cells.headed(left[0])):
            found = self._unit_at_left(sheet, layout, address, left, unit_cells)
            if found is not None:
                yield found
        end = layout.right_text(address)
        if end is not None and end[1] > column + 1:
            found = self._unit_cell(sheet, layout, address, end, "unit cell at the end of the row", unit_cells, left)
            if found is not None:
                yield found
        if beside:
            for text_at in left:
                loose = loose_unit(layout.unit_text(text_at))
                if loose is not None:
                    yield Found(loose, layout.unit_text(text_at), "label", (sheet, layout.origin(text_at)))
        if loose_header is not None:
            yield loose_header
        for offset in (1, 2):
            note = layout.texts.get((row, column + offset))
            if note is not None:
                noted = phrase_unit(note)
                if noted.unit is not None:
                    yield Found(noted.unit, note, "note beside", (sheet, (row, column + offset)))
                break
        comment = layout.sheet.comments.get(address)
        if comment:
            for line in comment.splitlines():
                noted = phrase_unit(line.split(":", 1)[-1] if line.lower().startswith("unit") else line)
                whole = read_unit_text(line.split(":", 1)[-1]) if line.lower().startswith("unit") else noted
                unit = noted.unit or whole.unit
                if unit is not None:
                    yield Found(unit, line.strip(), "comment", (sheet, address))
                    break
        yield from self._from_words(sheet, layout, address, left, beside)

    def _from_words(
        self, sheet: str, layout: Layout, address: Address, left: tuple[Address, ...], beside: bool
    ) -> Iterator[Found]:
        headers = layout.headers(address)
        name = self.labels.names.get((sheet, address), "")
        places = [*left, *headers[:2]] if beside else [*headers[:2], *left]
        for at in places:
            unit = conversion_unit(layout.texts[at])
            if unit is not None:
                yield Found(unit, layout.texts[at], "label", (sheet, layout.origin(at)))
                return
        cell = layout.cells.get(address)
        if cell is not None and cell.style and is_percent_format(self._format(cell.style)):
            yield Found(parse_unit("1"), "%", "number format", (sheet, address), weak=True)
            return
        own = left if beside else headers[:1]
        words = " ".join([*(layout.texts[a] for a in reversed(own))])
        for note in self._sheet_notes(sheet, layout):
            if role_agrees(note.unit, words) is True and not is_pure_number(words):
                yield note
                return
        if own and any(is_pure_number(layout.texts[a]) for a in own):
            yield Found(parse_unit("1"), layout.texts[own[0]], "label", (sheet, layout.origin(own[0])), weak=True)
        elif name and is_pure_number(name.replace("_", " ")):
            yield Found(parse_unit("1"), name, "name", (sheet, address), weak=True)

    def _sheet_notes(self, sheet: str, layout: Layout) -> list[Found]:
        notes = self._notes.get(sheet)
        if notes is None:
            notes = []
            for at, text in layout.texts.items():
                unit = None if at in layout.merged_from else sheet_note_unit(text)
                if unit is not None:
                    notes.append(Found(unit, text, "note on the sheet", (sheet, at)))
            self._notes[sheet] = notes
        return notes

    def _unit_cell(
        self,
        sheet: str,
        layout: Layout,
        address: Address,
        at: Address,
        place: str,
        unit_cells: UnitCells,
        left: tuple[Address, ...],
    ) -> Found | None:
        text = layout.unit_text(at)
        read = unit_cells.accepts(at, " ".join(layout.texts[a] for a in reversed(left)))
        if read.unit is not None:
            return Found(read.unit, text, place, (sheet, layout.origin(at)))
        if read.complaint:
            self._cannot_read(sheet, address, text, read.complaint, at)
        return None

    def _cannot_read(self, sheet: str, address: Address, text: str, complaint: str, at: Address) -> None:
        self._unreadable[sheet, address] = Unreadable(sheet, address, text, complaint, (sheet, at))

    def _unit_at_left(
        self, sheet: str, layout: Layout, address: Address, left: tuple[Address, ...], unit_cells: UnitCells
    ) -> Found | None:
        at = left[0]
        if layout.holds_number((at[0], at[1] - 1)):
            return None  # it is the unit of the number at its left
        read = unit_cells.accepts(at, " ".join(layout.texts[a] for a in left[1:]), leading=True)
        if read.unit is None:
            if read.complaint and unit_cells.headed(at):
                self._cannot_read(sheet, address, layout.texts[at], read.complaint, at)
            return None
        place = "unit cell at the left" if layout.touches_left(address, at) else "column of units"
        return Found(read.unit, layout.unit_text(at), place, (sheet, layout.origin(at)))

    def _in_label(self, sheet: str, layout: Layout, address: Address, left: tuple[Address, ...]) -> Found | None:
        for at in left:
            text = layout.unit_text(at)
            unit, shown, complaint = bracket_unit(text)
            if unit is not None:
                if shown in ("[1]",) and len(left) > 1:
                    continue
                return Found(unit, shown, "bracket in the label", (sheet, layout.origin(at)), words=None)
            if complaint:
                self._cannot_read(sheet, address, shown, complaint, at)
        return None

    def _in_headers(
        self, sheet: str, layout: Layout, address: Address, unit_cells: UnitCells
    ) -> tuple[Found | None, Found | None, Found | None]:
        head = layout.header_row(address)
        if head is None:
            return None, None, None
        left = layout.left_texts(address)
        if left and is_pure_row(layout.texts[left[-1]]) and layout.touches_left(address, left[0]):
            return None, None, None
        if layout.apart(head, address[0]) and left and layout.touches_left(address, left[0]):
            total = is_total(layout.texts[left[-1]]) and reads_own_column(layout.cells.get(address), address[1])
            if not total:
                return None, None, None  # a block of its own below the table
        key = (sheet, head, address[1])
        known = self._heads.get(key)
        if known is None:
            known = self._heads[key] = self._read_headers(sheet, layout, address, unit_cells)
        return known

    def _read_headers(
        self, sheet: str, layout: Layout, address: Address, unit_cells: UnitCells
    ) -> tuple[Found | None, Found | None, Found | None]:
        bracket: Found | None = None
        unit_row: Found | None = None
        loose: Found | None = None
        headers = layout.headers(address)
        words = " ".join(layout.texts[a] for a in reversed(headers))
        for above, at in enumerate(headers):
            text = layout.unit_text(at)
            origin = (sheet, layout.origin(at))
            read = unit_cells.in_unit_row(at, words)
            if read.unit is not None:
                unit_row = unit_row or Found(read.unit, text, "unit row", origin, words=words)
                continue
            if read.complaint:
                self._cannot_read(sheet, address, text, read.complaint, at)
            unit, shown, complaint = bracket_unit(text)
            if unit is not None:
                bracket = bracket or Found(unit, shown, "bracket in the header", origin, words=words)
            elif complaint:
                self._cannot_read(sheet, address, shown, complaint, at)
            tail = loose_unit(text) if above < 2 else None  # farther up stand titles and notes
            if tail is not None:
                loose = loose or Found(tail, text, "header", origin, words=words)
        return bracket, unit_row, loose

    def _in_format(self, sheet: str, address: Address, style: int) -> Found | None:
        number_format = self._format(style)
        read = format_unit(number_format)
        if read.unit is not None:
            return Found(read.unit, number_format, "number format", (sheet, address))
        if read.complaint:
            self._cannot_read(sheet, address, number_format, read.complaint, address)
        return None


def _temperature() -> object:
    from doubler.units import kind

    return kind("temperature").dimension


__all__ = ["Declarations", "Declared", "Disagreement", "Unreadable", "declare"]


def declare(workbook: Workbook) -> Declarations:
    """Return the declared units of a workbook; each is found when it is first asked for."""
    return Declarations(workbook, Labels(workbook))
