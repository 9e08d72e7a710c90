"""Which cell of an earlier revision became which cell of the new one: by what cells mean, not by where they stand."""

from __future__ import annotations

import re
from bisect import bisect_right
from collections import Counter
from dataclasses import dataclass, field
from functools import cached_property, lru_cache

from doubler.check.alignment import FORMULA, NUMBER, TEXT, Line, Token, aligned
from doubler.errors import InputError
from doubler.workbook.addresses import parse_area, split_sheet
from doubler.workbook.examined import Examined, Key
from doubler.workbook.label_units import bracket_unit
from doubler.workbook.model import Address

_SPACES = re.compile(r"\s+")
_REFERENCE = re.compile(r"(?:(?:'[^']*'|[\w.]+)!)?\$?[A-Z]{1,3}\$?\d{1,7}(?![\w(])")
_ALIKE = 0.4
"""Two sheets of unlike name are one when they share so much of their content."""
_LAST_ROW, _LAST_COLUMN = 1_048_576, 16_384


@lru_cache(maxsize=65536)
def without_unit(text: str) -> str:
    """Return a text in lower case without the unit in its bracket or behind its comma, unless it is all there is.

    Examples
    --------
    >>> without_unit("Width  b [mm]"), without_unit("Load, kN"), without_unit("kN")
    ('width b', 'load', 'kn')
    """
    text = _SPACES.sub(" ", text).strip()
    unit, written, _ = bracket_unit(text)
    bare = _SPACES.sub(" ", text.replace(written, "", 1)).strip(" ,") if unit is not None and written else text
    return (bare or text).casefold()


class Side:
    """One of the two revisions: its cells of interest, their words, and what each holds."""

    def __init__(self, book: Examined) -> None:
        self.book = book
        self.tokens: dict[str, dict[Address, Token]] = {}
        self.words: dict[str, dict[Address, str]] = {}
        read = book.readers
        for sheet in book.workbook.sheets:
            tokens = self.tokens[sheet.name] = {}
            words = self.words[sheet.name] = {}
            for address in sorted(sheet.cells):
                cell = sheet.cells[address]
                if cell.formula is None and cell.value is None:
                    continue
                if cell.formula is not None:
                    tokens[address] = (FORMULA, _REFERENCE.sub("#", cell.formula))
                elif isinstance(cell.value, str):
                    text = without_unit(cell.value)
                    if not text:
                        continue
                    tokens[address] = (TEXT, text)
                else:
                    tokens[address] = (NUMBER, cell.value)
                if tokens[address][0] != TEXT or (sheet.name, address) in read:
                    words[address] = self._words((sheet.name, address))

    def _words(self, key: Key) -> str:
        label = self.book.label(key)
        if not (label.left or label.above):
            return label.name.casefold()
        return " ".join((*map(without_unit, label.left), "|", *map(without_unit, reversed(label.above))))

    def counts(self, key: Key) -> bool:
        """Return whether a number only counts lines: no formula reads it, and its neighbour's is one less or more."""
        sheet, (row, column) = key
        cells = self.book.workbook.sheet(sheet)
        if cells is None or key in self.book.readers:
            return False
        own = cells.cells[row, column].value
        if not isinstance(own, float) or own != int(own):
            return False
        near = [cells.cells.get((row + step, column)) for step in (-1, 1)]
        return any(
            cell is not None and cell.formula is None and cell.value == own + step
            for cell, step in zip(near, (-1, 1), strict=True)
        )

    @cached_property
    def named(self) -> dict[str, Key]:
        """The cells that a defined name means, one cell each."""
        found: dict[str, Key] = {}
        for name in self.book.workbook.names:
            if name.sheet is not None:
                continue
            sheet, rest = split_sheet(name.text)
            try:
                area = parse_area(rest)
            except (InputError, ValueError):
                continue
            page = None if sheet is None else self.book.workbook.sheet(sheet)
            if page is None or (area.first_row, area.first_column) != (area.last_row, area.last_column):
                continue
            key = (page.name, (area.first_row, area.first_column))
            if key[1] in self.words[page.name]:
                found[name.name.casefold()] = key
        return found

    @cached_property
    def content(self) -> dict[str, Counter[Token]]:
        """For each sheet what it holds, numbers left out."""
        return {
            name: Counter(token for token in tokens.values() if token[0] != NUMBER)
            for name, tokens in self.tokens.items()
        }


@dataclass
class Matching:
    """What became what.

    Attributes
    ----------
    sheets
        For each sheet of the old workbook the sheet of the new one.
    cells
        For each cell of interest (a number, a formula, a text that a formula reads) the cell that it became.
    lost
        Cells of interest of the old workbook that became none.
    lines
        For each sheet and block of columns of the old workbook how its rows and columns moved.
    """

    sheets: dict[str, str] = field(default_factory=dict)
    cells: dict[Key, Key] = field(default_factory=dict)
    lost: set[Key] = field(default_factory=set)
    lines: dict[str, list[Block]] = field(default_factory=dict)

    def place(self, key: Key) -> Key | None:
        """Return where a cell of the old workbook, also an empty one, stands in the new one; None where it is gone."""
        if key in self.cells or key in self.lost:
            return self.cells.get(key)
        sheet = self.sheets.get(key[0])
        if sheet is None:
            return None
        for block in self.lines.get(key[0], ()):
            if block.first <= key[1][1] <= block.last:
                return sheet, (_moved(key[1][0], block.rows, _LAST_ROW), _moved(key[1][1], block.columns, _LAST_COLUMN))
        return sheet, key[1]


@dataclass(frozen=True)
class Block:
    """How the rows and columns of some columns moved: from the first to the last column, old numbering."""

    first: int
    last: int
    rows: dict[int, int]
    columns: dict[int, int]


def _moved(line: int, moves: dict[int, int], most: int) -> int:
    """Return where a row or column went; one that holds nothing went with the one before it."""
    if line in moves:
        return moves[line]
    if line in (1, most) or not moves:
        return line
    known = sorted(moves)
    before = bisect_right(known, line)
    near = known[before - 1] if before else known[0]
    return max(1, moves[near] + line - near)


def match(old: Side, new: Side) -> Matching:
    """Match the cells of two revisions.

    Parameters
    ----------
    old, new : Side

    Returns
    -------
    Matching
    """
    found = Matching(sheets_matched(old, new))
    taken: set[Key] = set()

    def pair(key: Key, other: Key) -> None:
        if key not in found.cells and other not in taken:
            found.cells[key] = other
            taken.add(other)

    for name, key in old.named.items():
        if name in new.named:
            pair(key, new.named[name])
    for before, after in found.sheets.items():
        found.lines[before] = _blocks(old.tokens[before], new.tokens[after])
        lined = _lined_up(found.lines[before], old.words[before], new.words[after])
        tokens, others = old.tokens[before], new.tokens[after]
        once, other_once = _once(old.words[before]), _once(new.words[after])
        for words, address in once.items():
            target, beside = other_once.get(words), lined.get(address)
            # Where lines that stayed alike lead elsewhere, words that two cells happen to share count for less.
            alike = beside is not None and others[beside] == tokens[address]
            if target is None:
                continue
            sure = len(found.lines[before]) == 1 and others[target] == tokens[address]
            if sure or not alike or target == beside:
                pair((before, address), (after, target))
        for address, beside in lined.items():
            pair((before, address), (after, beside))
    _the_rest(old, new, found, taken)
    found.lost = {(sheet, a) for sheet, cells in old.words.items() for a in cells} - found.cells.keys()
    return found


def _lined_up(blocks: list[Block], cells: dict[Address, str], others: dict[Address, str]) -> dict[Address, Address]:
    """Return where the lines of a sheet lead its cells, for those that find a cell there."""
    found: dict[Address, Address] = {}
    for block in blocks:
        for row, column in cells:
            if block.first <= column <= block.last and row in block.rows and column in block.columns:
                target = (block.rows[row], block.columns[column])
                if target in others:
                    found[row, column] = target
    return found


def _the_rest(old: Side, new: Side, found: Matching, taken: set[Key]) -> None:
    """Match what is left by its words: on the same sheet one after the other, then across sheets where they are one."""
    left = [(sheet, a) for sheet, cells in old.words.items() for a in cells if (sheet, a) not in found.cells]
    free = [(sheet, a) for sheet, cells in new.words.items() for a in cells if (sheet, a) not in taken]
    waiting: dict[tuple[str, str], list[Key]] = {}
    anywhere: dict[str, list[Key]] = {}
    for key in free:
        waiting.setdefault((key[0], new.words[key[0]][key[1]]), []).append(key)
    for key in left:
        words = old.words[key[0]][key[1]]
        ready = waiting.get((found.sheets.get(key[0], ""), words))
        if words.strip("| ") and ready:
            found.cells[key] = ready.pop(0)
            taken.add(found.cells[key])
    for key in free:
        if key not in taken:
            anywhere.setdefault(new.words[key[0]][key[1]], []).append(key)
    wanted: dict[str, list[Key]] = {}
    for key in left:
        if key not in found.cells:
            wanted.setdefault(old.words[key[0]][key[1]], []).append(key)
    for words, keys in wanted.items():
        others = anywhere.get(words, [])
        if words.strip("| ") and len(keys) == len(others) == 1:
            found.cells[keys[0]] = others[0]
            taken.add(others[0])


def _once(words: dict[Address, str]) -> dict[str, Address]:
    counts = Counter(words.values())
    return {text: address for address, text in words.items() if counts[text] == 1 and text.strip("| ")}


def sheets_matched(old: Side, new: Side) -> dict[str, str]:
    """Return for each sheet of the old workbook the one that it became: by content, and by name where that is kept."""
    pairs = []
    for before, held in old.content.items():
        for after, holds in new.content.items():
            every = (held | holds).total()
            share = (held & holds).total() / every if every else 0.0
            same = before.casefold() == after.casefold()
            if same or share >= _ALIKE:
                pairs.append((share + (0.5 if same else 0.0), before, after))
    found: dict[str, str] = {}
    for _, before, after in sorted(pairs, key=lambda pair: -pair[0]):
        if before not in found and after not in found.values():
            found[before] = after
    return found


def _lines(cells: dict[Address, Token], axis: int) -> tuple[list[int], list[Line]]:
    """Return the filled rows (axis 0) or columns (axis 1) in order, by number and by content."""
    tokens: dict[int, list[tuple[int, Token]]] = {}
    for address, token in cells.items():
        tokens.setdefault(address[axis], []).append((address[1 - axis], token))
    numbers = sorted(tokens)
    return numbers, [Line(tuple(token for _, token in sorted(tokens[n], key=lambda p: p[0]))) for n in numbers]


def _rows(old: dict[Address, Token], new: dict[Address, Token]) -> dict[int, int]:
    (before, first), (after, second) = _lines(old, 0), _lines(new, 0)
    return {before[i]: after[j] for i, j in aligned(first, second).items()}


def _columns(old: dict[Address, Token], new: dict[Address, Token], rows: dict[int, int]) -> dict[int, int]:
    """Align the columns over those rows that stand in both, each cell with its row."""
    kept = set(rows.values())
    held: dict[Address, Token] = {
        (rows[r], c): (token[0], rows[r], token[1]) for (r, c), token in old.items() if r in rows
    }
    holds: dict[Address, Token] = {(r, c): (t[0], r, t[1]) for (r, c), t in new.items() if r in kept}
    (before, first), (after, second) = _lines(held, 1), _lines(holds, 1)
    return {before[i]: after[j] for i, j in aligned(first, second).items()}


def _blocks(old: dict[Address, Token], new: dict[Address, Token]) -> list[Block]:
    """Return how rows and columns moved; where blocks stand side by side and moved apart, block by block."""
    if not old or not new:
        return []
    rows = _rows(old, new)
    columns = _columns(old, new, rows)
    ends = _side_by_side({column for _, column in old})
    whole = [Block(1, _LAST_COLUMN, rows, columns)]
    if len(ends) == 1:
        return whole
    blocks = []
    for number, (first, last) in enumerate(ends):
        own = {at: token for at, token in old.items() if first <= at[1] <= last}
        targets = {columns[column] for column in range(first, last + 1) if column in columns}
        other = {at: token for at, token in new.items() if at[1] in targets}
        alone = _rows(own, other)
        chosen = alone if _kept(own, other, alone, columns) > _kept(own, other, rows, columns) else rows
        start = 1 if number == 0 else first
        end = _LAST_COLUMN if number == len(ends) - 1 else ends[number + 1][0] - 1
        blocks.append(Block(start, end, chosen, columns))
    return whole if all(block.rows is rows for block in blocks) else blocks


def _side_by_side(columns: set[int]) -> list[tuple[int, int]]:
    """Return the runs of filled columns."""
    runs: list[tuple[int, int]] = []
    for column in sorted(columns):
        if runs and column == runs[-1][1] + 1:
            runs[-1] = (runs[-1][0], column)
        else:
            runs.append((column, column))
    return runs


def _kept(old: dict[Address, Token], new: dict[Address, Token], rows: dict[int, int], columns: dict[int, int]) -> int:
    """Return how many cells hold the same after a move."""
    return sum(new.get((rows.get(row, 0), columns.get(column, 0))) == token for (row, column), token in old.items())
