"""What a cell means, told by its words and not by where it stands: so that two revisions can be laid side by side."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass

from doubler.explain.notation import written
from doubler.workbook.coerce import CannotEvaluateError
from doubler.workbook.examined import Examined, Key
from doubler.workbook.geometry import OutsideError, Place
from doubler.workbook.syntax import CellRef, Node, RangeRef

_SPACES = re.compile(r"\s+")
_ALIKE = 0.4
"""Two sheets of unlike name are one when they share so much of their cells' meanings."""


@dataclass(frozen=True, slots=True)
class Meaning:
    """A cell's words, and which of several cells with these words it is."""

    words: str
    number: int


class Meanings:
    """The meanings of all cells of a workbook that hold a number, a formula or an input."""

    def __init__(self, book: Examined) -> None:
        self.book = book
        self.of: dict[Key, Meaning] = {}
        self.at: dict[str, dict[Meaning, Key]] = {}
        for sheet in book.workbook.sheets:
            counts: dict[str, int] = {}
            place = self.at[sheet.name] = {}
            for address in sorted(sheet.cells):
                cell = sheet.cells[address]
                if cell.formula is None and not isinstance(cell.value, float):
                    continue
                words = self._words((sheet.name, address))
                counts[words] = counts.get(words, 0) + 1
                meaning = Meaning(words, counts[words])
                place[meaning] = (sheet.name, address)
                self.of[sheet.name, address] = meaning

    def _words(self, key: Key) -> str:
        label = self.book.label(key)
        texts = [*label.left, "|", *reversed(label.above)] if label.left or label.above else [label.name]
        return _SPACES.sub(" ", " ".join(texts)).strip().casefold()

    def formula(self, key: Key) -> str:
        """Return a formula with its references by their meaning, so that moved cells do not change it."""
        found = self.book.graph.group_at(*key)
        tree = self.book.tree(key)
        if found is None or tree is None:
            cell = self.book.cell(key)
            return "" if cell is None or cell.formula is None else f"={cell.formula}"
        run = self.book.graph.groups[found[0]].run

        def reference(node: Node) -> str:
            if not isinstance(node, CellRef | RangeRef):
                return str(getattr(node, "name", None) or getattr(node, "text", None) or node)
            try:
                places = self.book.graph.geometry.places(node, run, found[1])
            except (OutsideError, CannotEvaluateError):
                return "?"
            return ":".join(self._ends(places))

        return f"={written(tree, reference)}"

    def _ends(self, places: list[Place]) -> Iterator[str]:
        for index, area in places:
            name = self.book.workbook.sheets[index].name
            first = (area.first_row, area.first_column)
            last = (area.last_row, area.last_column)
            for address in dict.fromkeys((first, last)):
                meaning = self.of.get((name, address))
                if meaning is None:
                    yield self._words((name, address)) or "an empty cell"
                else:
                    yield meaning.words + (f" #{meaning.number}" if meaning.number > 1 else "")


def sheets_matched(old: Meanings, new: Meanings) -> dict[str, str]:
    """Return for each sheet of the old workbook the sheet of the new one that it became: by name, else by content."""
    names = {name.casefold(): name for name in new.at}
    matched = {name: names[name.casefold()] for name in old.at if name.casefold() in names}
    left = [name for name in new.at if name not in matched.values()]
    for name in old.at:
        if name in matched or not left:
            continue
        best = max(left, key=lambda other: _share(old.at[name], new.at[other]))
        if _share(old.at[name], new.at[best]) >= _ALIKE:
            matched[name] = best
            left.remove(best)
    return matched


def _share(first: dict[Meaning, Key], second: dict[Meaning, Key]) -> float:
    every = len(first.keys() | second.keys())
    return len(first.keys() & second.keys()) / every if every else 0.0


def cells_matched(old: Meanings, new: Meanings) -> dict[Key, Key]:
    """Return for each cell of the old workbook the cell of the new one that means the same."""
    matched: dict[Key, Key] = {}
    for before, after in sheets_matched(old, new).items():
        for meaning, key in old.at[before].items():
            other = new.at[after].get(meaning)
            if other is not None:
                matched[key] = other
    return matched
