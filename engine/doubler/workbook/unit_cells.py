"""Cells that hold nothing but a unit: beside a number, in a column or a row of units.

A text that looks like a unit is one when its surroundings say so: the column's heading, the other texts of its
column or row, the words of the label beside the number.
"""

from __future__ import annotations

from dataclasses import dataclass

from doubler.workbook.labels import Layout
from doubler.workbook.model import Address
from doubler.workbook.unit_text import NOTHING, UNIT_HEADS, UnitText, phrase_unit, read_unit_text, role_agrees

_NEVER_ALONE = frozenset(
    {"min", "a", "A", "bar", "at", "C", "F", "T", "V", "W", "E", "G", "I", "L", "R", "S", "B", "D", "P"}
)
_NO_UNITS = frozenset(
    {"n/a", "na", "n.a.", "none", "text", "type", "tbd", "see note", "name", "unit", "units", "bool", "y/n"}
    # What goods are counted and sold in, in lists of articles (common practice).
    | {"l", "ltr", "litre", "litres", "liter", "liters", "box", "boxes", "bag", "bags", "roll", "rolls", "set", "sets"}
    | {"pair", "pairs", "pack", "packs", "pallet", "pallets", "each", "sheet", "sheets", "bottle", "carton", "drum"}
    | {"pc", "piece", "pieces", "item", "items", "lot", "job", "dozen", "person", "persons", "visit", "trip"}
)


@dataclass(frozen=True, slots=True)
class _Support:
    """What the texts of a column or a row are."""

    firm: int
    doubtful: int
    kinds: int
    other: int
    headed: bool
    titled: bool
    head_row: int = 0


class UnitCells:
    """Judges the texts of one sheet."""

    def __init__(self, layout: Layout) -> None:
        self._layout = layout
        self._columns: dict[int, _Support] = {}
        self._rows: dict[int, _Support] = {}

    def headed(self, at: Address) -> bool:
        """Return whether the column of a text is headed as one of units."""
        return self._column(at[1]).headed

    def accepts(self, at: Address, words: str, *, leading: bool = False) -> UnitText:
        """Look at a text beside a number; `words` is the number's label, `leading` a text at the number's left."""
        text = self._layout.unit_text(at)
        read = read_unit_text(text)
        column = self._column(at[1])
        if text == "M" and self._layout.capitals and column.firm > max(column.other, 1):
            return read_unit_text("m")  # among units in capitals
        if read.unit is None:
            if read.complaint:
                return read
            if (
                column.headed
                and at[0] > column.head_row
                and " " not in text
                and len(text) <= 12
                and text.casefold() not in _NO_UNITS
                and any(c.isalpha() for c in text)
            ):
                return UnitText(None, complaint=f"{text} is no unit that can be read")
            return NOTHING if leading else phrase_unit(text)
        if column.headed:
            return read
        if leading:
            others = column.firm > 0 and column.firm + column.doubtful > 2 * column.other
            return read if others else NOTHING
        if not read.doubtful:
            return read if not (column.titled and column.other > column.firm) else NOTHING
        agrees = role_agrees(read.unit, words)
        if agrees is not None:
            # In a column of units a wrong one is read for what it says, so that it is found.
            plainly = column.firm > column.other and text not in _NEVER_ALONE
            plainly = plainly and (text == "in" or not text.islower())
            return read if agrees or plainly else NOTHING
        if column.firm and column.firm + column.doubtful > column.other:
            return read
        if column.other or column.titled or text in _NEVER_ALONE:
            return NOTHING
        return read

    def in_unit_row(self, at: Address, words: str) -> UnitText:
        """Look at a header text as one of a row of units."""
        text = self._layout.unit_text(at)
        read = read_unit_text(text)
        row = self._row(at[0])
        if read.unit is None:
            return read if read.complaint and row.firm > row.other else NOTHING
        if not read.doubtful:
            return read if row.firm + row.doubtful > row.other or role_agrees(read.unit, words) is True else NOTHING
        if row.firm and row.firm + row.doubtful > row.other:
            return read
        return read if role_agrees(read.unit, words.replace(text, " ")) is True and not row.other else NOTHING

    def _column(self, column: int) -> _Support:
        known = self._columns.get(column)
        if known is None:
            layout = self._layout
            texts: list[str] = []
            heads: list[str] = []
            head_row = 0
            for row in layout.rows_of_text.get(column, ()):
                text = layout.unit_text((row, column))
                if not head_row and UNIT_HEADS.match(text):
                    head_row = row
                beside = layout.holds_number((row, column - 1)) or layout.holds_number((row, column + 1))
                (texts if beside else heads).append(text)
            headed = any(UNIT_HEADS.match(text) for text in heads + texts)
            headed = headed and any(read_unit_text(text).unit is not None for text in texts)
            titled = bool(heads) and not headed
            known = self._columns[column] = _count(texts, headed=headed, titled=titled, head_row=head_row)
        return known

    def _row(self, row: int) -> _Support:
        known = self._rows.get(row)
        if known is None:
            texts = [self._layout.unit_text((row, c)) for c in self._layout.columns_of_text.get(row, ())]
            known = self._rows[row] = _count(texts, headed=False, titled=False)
        return known


def _count(texts: list[str], *, headed: bool, titled: bool, head_row: int = 0) -> _Support:
    firm = doubtful = other = 0
    kinds: set[str] = set()
    for text in texts:
        read = read_unit_text(text)
        if read.unit is None:
            other += 1
        elif read.doubtful:
            doubtful += 1
            kinds.add(text)
        elif read.unit.text != "1":
            firm += 1
    return _Support(firm, doubtful, len(kinds), other, headed, titled, head_row)
