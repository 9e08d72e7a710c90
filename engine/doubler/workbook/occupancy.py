"""Which cells of a sheet are computed, and by which group: looked up by column and row."""

from __future__ import annotations

from bisect import bisect_left, bisect_right, insort
from collections.abc import Iterator
from dataclasses import dataclass, field

from doubler.workbook.model import Area

Piece = tuple[int, int, int, int]
"""First row, last row, group, and the group's copy that stands in the first row."""


@dataclass
class Occupancy:
    """The computed cells of one sheet, as runs of rows by column."""

    columns: dict[int, list[Piece]] = field(default_factory=dict)
    order: list[int] = field(default_factory=list)

    def add(self, column: int, first: int, last: int, group: int, lane: int = 0) -> None:
        """Put in a run of cells; `settle` must follow before the first look-up."""
        self.columns.setdefault(column, []).append((first, last, group, lane))

    def settle(self) -> None:
        """Bring the runs into order."""
        for pieces in self.columns.values():
            pieces.sort()
        self.order = sorted(self.columns)

    def override(self, row: int, column: int, group: int) -> None:
        """Let one cell be held by another group (an input that is put in place of what stands there)."""
        pieces = self.columns.setdefault(column, [])
        if len(self.order) != len(self.columns):
            insort(self.order, column)
        at = bisect_right(pieces, row, key=lambda piece: piece[0]) - 1
        if at >= 0 and pieces[at][1] >= row:
            first, last, other, lane = pieces.pop(at)
            if first < row:
                insort(pieces, (first, row - 1, other, lane))
            if last > row:
                insort(pieces, (row + 1, last, other, lane + row + 1 - first))
        insort(pieces, (row, row, group, 0))

    def at(self, row: int, column: int) -> tuple[int, int] | None:
        """Return group and copy that compute a cell, or None."""
        pieces = self.columns.get(column)
        if not pieces:
            return None
        if len(pieces) == 1:
            first, last, group, lane = pieces[0]
            return (group, lane + row - first) if first <= row <= last else None
        at = bisect_right(pieces, row, key=lambda piece: piece[0]) - 1
        if at < 0 or pieces[at][1] < row:
            return None
        first, _, group, lane = pieces[at]
        return group, lane + row - first

    def runs(self, column: int, first: int, last: int) -> Iterator[Piece]:
        """Yield the runs of a column that overlap some rows, cut to them."""
        pieces = self.columns.get(column)
        if not pieces:
            return
        at = max(bisect_right(pieces, first, key=lambda piece: piece[0]) - 1, 0)
        for start, end, group, lane in pieces[at:]:
            if start > last:
                break
            if end >= first:
                top = max(start, first)
                yield top, min(end, last), group, lane + top - start

    def groups(self, area: Area) -> set[int]:
        """Return the groups that compute any cell of a rectangle."""
        found: set[int] = set()
        at = bisect_left(self.order, area.first_column)
        for column in self.order[at:]:
            if column > area.last_column:
                break
            found.update(group for _, _, group, _ in self.runs(column, area.first_row, area.last_row))
        return found

    def copied(self) -> Occupancy:
        """Return a copy that can be changed by itself."""
        return Occupancy({column: list(pieces) for column, pieces in self.columns.items()}, list(self.order))
