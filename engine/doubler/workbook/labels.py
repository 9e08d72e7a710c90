"""Where the words of a sheet stand: the label beside a cell, the headers above it, its name and its comment."""

from __future__ import annotations

import re
from bisect import bisect_left
from dataclasses import dataclass
from functools import cached_property

from doubler.workbook.capital_units import in_capitals, in_right_case
from doubler.workbook.model import Address, Area, Sheet, Workbook

LONG_LIST = 64
"""So many numbers below each other without a text are a list of one quantity."""
LONGEST_LABEL = 160
"""Longer texts are prose, not labels."""
WIDEST_RUN = 60
"""How many numbers may stand between a label and its cell, or under one another's headers across."""
LARGEST_GAP = 2
"""Empty rows that a column may have below its header without ending."""


@dataclass(frozen=True, slots=True)
class Label:
    """The words that belong to a cell.

    Attributes
    ----------
    left
        Texts at the left, the nearest last: label, then perhaps symbol.
    above
        Header texts above, the nearest first.
    name
        A defined name of the cell.
    comment
        Its comment.
    """

    left: tuple[str, ...] = ()
    above: tuple[str, ...] = ()
    name: str = ""
    comment: str = ""

    @property
    def text(self) -> str:
        """The label in one line: the texts at the left, else the headers."""
        if self.left:
            return " ".join(self.left)
        return " ".join(reversed(self.above)) or self.name

    @property
    def words(self) -> str:
        """All words that bear on the cell, in one line."""
        return " ".join((*self.left, *reversed(self.above), self.name.replace("_", " ")))


class Layout:
    """The texts of one sheet, arranged so that the words of a cell are found without walking the sheet."""

    def __init__(self, sheet: Sheet) -> None:
        self.sheet = sheet
        self.cells = sheet.cells
        self.texts: dict[Address, str] = {}
        for address, cell in sheet.cells.items():
            value = cell.value
            if type(value) is str and cell.formula is None:
                text = value.strip()
                if text:
                    self.texts[address] = text
        self._spread_merged()
        self.rows_of_text: dict[int, list[int]] = {}
        self.columns_of_text: dict[int, list[int]] = {}
        for row, column in sorted(self.texts):
            self.rows_of_text.setdefault(column, []).append(row)
            self.columns_of_text.setdefault(row, []).append(column)
        self._ends: dict[tuple[int, int], int] = {}
        self._above: dict[tuple[int, int], tuple[Address, ...]] = {}
        self._gaps: dict[int, int] = {}
        self._shapes: dict[int, int] | None = None
        self._lists: dict[int, list[tuple[int, int]]] | None = None
        self._last_head: dict[int, tuple[int, int, int]] = {}
        self._left: dict[Address, tuple[Address, ...]] = {}
        self._words: dict[tuple[Address, ...], tuple[str, ...]] = {}
        self._filled = {row for (row, _), cell in self.cells.items() if cell.formula or cell.value is not None}

    def _spread_merged(self) -> None:
        """Let a text that is merged over several cells stand over all of them."""
        self.merged_from: dict[Address, Address] = {}
        for area in self.sheet.merged:
            anchor = (area.first_row, area.first_column)
            text = self.texts.get(anchor)
            if text is None or _size(area) > 400:
                continue
            for row in range(area.first_row, area.last_row + 1):
                for column in range(area.first_column, area.last_column + 1):
                    if (row, column) != anchor and (row, column) not in self.texts:
                        self.texts[row, column] = text
                        self.merged_from[row, column] = anchor

    @cached_property
    def capitals(self) -> bool:
        """Whether the sheet's words are all in capitals."""
        return in_capitals(self.texts.values())

    def unit_text(self, address: Address) -> str:
        """Return a text with a unit that is in capitals in its right case."""
        return in_right_case(self.texts[address], self.capitals)

    def origin(self, address: Address) -> Address:
        """Return the cell that really holds the text which stands at `address`."""
        return self.merged_from.get(address, address)

    def holds_number(self, address: Address) -> bool:
        """Return whether a cell holds a number or a formula."""
        cell = self.cells.get(address)
        return cell is not None and (cell.formula is not None or isinstance(cell.value, float))

    def left_texts(self, address: Address) -> tuple[Address, ...]:
        """Return the texts at the left, across a run of numbers, the nearest first and up to three."""
        row, column = address
        columns = self.columns_of_text.get(row)
        if not columns:
            return ()
        index = bisect_left(columns, column) - 1
        if index < 0 or column - columns[index] > WIDEST_RUN:
            return ()
        known = self._left.get((row, columns[index]))
        if known is not None:
            return known
        nearest = (row, columns[index])
        found = [nearest]
        while index > 0 and len(found) < 3 and columns[index] - columns[index - 1] == 1:
            index -= 1
            if self.origin((row, columns[index])) != self.origin(found[-1]):
                found.append((row, columns[index]))
        known = self._left[nearest] = tuple(found)
        return known

    def list_top(self, address: Address) -> int:
        """Return the first row of the long list of numbers in which a cell stands; its own row where there is none."""
        row, column = address
        if self._lists is None:
            rows: dict[int, list[int]] = {}
            for at, cell in self.cells.items():
                if cell.formula is not None or isinstance(cell.value, float):
                    rows.setdefault(at[1], []).append(at[0])
            self._lists = {line: _stretches(sorted(found)) for line, found in rows.items()}
        stretches = self._lists.get(column, [])
        index = bisect_left(stretches, (row + 1, 0)) - 1
        if index < 0 or stretches[index][1] < row:
            return row
        first, last = stretches[index]
        return first if last - first >= LONG_LIST else row

    def row_shape(self, row: int) -> int:
        """Return a number that rows share which hold numbers and texts in the same columns, bare names told apart."""
        if self._shapes is None:
            from doubler.workbook.label_units import is_bare_name

            numbers: dict[int, list[int]] = {}
            for (at, column), cell in self.cells.items():
                if cell.formula is not None or isinstance(cell.value, float):
                    numbers.setdefault(at, []).append(column)
            known: dict[object, int] = {}
            self._shapes = {}
            for at in {*numbers, *self.columns_of_text}:
                columns = self.columns_of_text.get(at, ())
                origins = [self.origin((at, column)) for column in columns]
                texts = tuple(
                    [
                        (column, is_bare_name(self.texts[at, column]), first - at, origin)
                        for column, (first, origin) in zip(columns, origins, strict=True)
                    ]
                )
                shape = (texts, tuple(sorted(numbers.get(at, ()))))
                self._shapes[at] = known.setdefault(shape, len(known))
        return self._shapes.get(row, -1)

    def words(self, places: tuple[Address, ...]) -> tuple[str, ...]:
        """Return what stands in some cells, cut to the length of a label."""
        known = self._words.get(places)
        if known is None:
            known = self._words[places] = tuple([self.texts[place][:LONGEST_LABEL] for place in places])
        return known

    def touches_left(self, address: Address, text: Address) -> bool:
        """Return whether only empty cells stand between a text and the cell at its right."""
        row, cells = address[0], self.cells
        for column in range(text[1] + 1, address[1]):
            cell = cells.get((row, column))
            if cell is not None and (cell.formula is not None or isinstance(cell.value, float)):
                return False
        return True

    def right_text(self, address: Address) -> Address | None:
        """Return the text right of the run of numbers in which the cell stands, or None."""
        row, column = address
        columns = self.columns_of_text.get(row)
        if not columns:
            return None
        index = bisect_left(columns, column + 1)
        if index == len(columns) or columns[index] - column > WIDEST_RUN:
            return None
        if any(not self.holds_number((row, c)) for c in range(column + 1, columns[index])):
            return None
        return (row, columns[index])

    def header_row(self, address: Address) -> int | None:
        """Return the row of the nearest text above in the column, if the column runs on from there to the cell."""
        row, column = address
        last = self._last_head.get(column)
        if last is not None and last[0] < row < last[1]:
            return last[0] if row <= last[2] else None
        rows = self.rows_of_text.get(column)
        if not rows:
            return None
        index = bisect_left(rows, row) - 1
        if index < 0:
            return None
        head = rows[index]
        following = rows[index + 1] if index + 1 < len(rows) else 1 << 21
        end = self._ends.get((head, column))
        if end is None:
            end = self._block_end(head, column, following)
            self._ends[head, column] = end
        self._last_head[column] = (head, following, end)
        return head if row <= end else None

    def _block_end(self, head: int, column: int, following: int) -> int:
        last, row, cells = head, head + 1, self.cells
        while row < following and row - last <= LARGEST_GAP + 1:
            cell = cells.get((row, column))
            if cell is not None and (cell.formula is not None or cell.value is not None):
                last = row
            row += 1
        return last

    def apart(self, head: int, row: int) -> bool:
        """Return whether an empty row of the sheet stands between a header's row and a row below."""
        gap = self._gaps.get(head)
        if gap is None:
            gap = head + 1
            while gap in self._filled:
                gap += 1
            self._gaps[head] = gap
        return row > gap

    def headers(self, address: Address) -> tuple[Address, ...]:
        """Return the header texts above a cell, the nearest first and up to four, stacked on one another."""
        head = self.header_row(address)
        if head is None:
            return ()
        column = address[1]
        known = self._above.get((head, column))
        if known is not None:
            return known
        found = [(head, column)]
        row = head - 1
        while row > 0 and len(found) < 4 and head - row <= 4:
            if (row, column) in self.texts:
                if self.holds_number((row, column + 1)) and row + 1 not in self._filled:
                    break  # the label of another block
                if self.origin((row, column)) != self.origin(found[-1]):
                    found.append((row, column))
            elif self.holds_number((row, column)):
                break
            row -= 1
        self._above[head, column] = tuple(found)
        return self._above[head, column]


def _stretches(rows: list[int]) -> list[tuple[int, int]]:
    """Return the first and last of each stretch of neighbouring rows."""
    found: list[tuple[int, int]] = []
    start = before = rows[0]
    for row in rows[1:]:
        if row != before + 1:
            found.append((start, before))
            start = row
        before = row
    return [*found, (start, before)]


def _size(area: Area) -> int:
    return (area.last_row - area.first_row + 1) * (area.last_column - area.first_column + 1)


_ONE_CELL = re.compile(r"^(?:'((?:[^']|'')+)'|([^'!]+))!\$?([A-Za-z]{1,3})\$?(\d+)$")


class Labels:
    """The words of every cell of a workbook, found when asked for."""

    def __init__(self, workbook: Workbook) -> None:
        self.workbook = workbook
        self._layouts: dict[str, Layout] = {}
        self._known: dict[tuple[str, Address], Label] = {}
        self._sheets = {sheet.name: sheet for sheet in workbook.sheets}

    def layout(self, sheet: str) -> Layout:
        """Return the layout of a sheet."""
        found = self._layouts.get(sheet)
        if found is None:
            found = self._layouts[sheet] = Layout(self._sheets[sheet])
        return found

    @cached_property
    def names(self) -> dict[tuple[str, Address], str]:
        """Defined names that mean one cell, by that cell."""
        from doubler.workbook.references import column_number

        found: dict[tuple[str, Address], str] = {}
        by_case = {name.casefold(): name for name in self._sheets}
        for item in self.workbook.names:
            match = _ONE_CELL.match(item.text.lstrip("="))
            if not match:
                continue
            sheet = by_case.get((match[1] or match[2]).replace("''", "'").casefold())
            if sheet is not None:
                found.setdefault((sheet, (int(match[4]), column_number(match[3].upper()))), item.name)
        return found

    def label(self, sheet: str, address: Address) -> Label:
        """Return the words that belong to a cell."""
        known = self._known.get((sheet, address))
        if known is None:
            known = self._known[sheet, address] = self._label(sheet, address)
        return known

    def _label(self, sheet: str, address: Address) -> Label:
        layout = self.layout(sheet)
        left = layout.left_texts(address)
        return Label(
            layout.words(left[::-1]),
            layout.words(layout.headers(address)),
            self.names.get((sheet, address), ""),
            layout.sheet.comments.get(address, ""),
        )
