"""A formula written for a reader: in symbols, and with the numbers and their units put in."""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

from doubler.errors import ErrorValue
from doubler.explain.notation import written
from doubler.workbook.addresses import area_name, cell_name, quote_sheet
from doubler.workbook.coerce import CannotEvaluateError
from doubler.workbook.evaluate import NotEvaluated
from doubler.workbook.examined import Examined, Key, Read, cell_name_of
from doubler.workbook.geometry import OutsideError, cells_in
from doubler.workbook.syntax import CellRef, ExternalRef, NameRef, Node, RangeRef, TableRef

LONGEST_WORDS = 40
"""Longer words are no name for a quantity in a formula; the address stands there instead."""
NO_BREAK = "\u00a0"
LARGEST_SHOWN = 4
"""Values of a range that are written out one by one."""

_SYMBOL = re.compile(r"(?:^|[\s,(=:])([A-Za-zΑ-Ωα-ω][A-Za-z0-9]{0,2}(?:[_.][A-Za-z0-9]{1,12})?)\s*(?:$|[\[,)=])")
_BRACKET = re.compile(r"\s*[\[(][^\[\]()]*[\])]\s*$")
_LETTERS = re.compile(r"[^\W\d]")
# Short words of everyday labels and units, which no one means as symbols.
_NO_SYMBOLS = frozenset(
    re.split(
        " ",
        "in of at to on by for per and or the a no arm tie use ice pin lug web end top mm cm m kn n lb lbf psi ksi "
        "mpa gpa kpa pa deg rad kg s h rev ok yes max min",
    )
)


@dataclass(frozen=True, slots=True)
class Written:
    """A cell as a reader wants it.

    Attributes
    ----------
    cell
        The cell, with its sheet.
    label
        The words that belong to it.
    text
        The formula as the workbook has it, with its ``=``; empty for a constant.
    symbols, numbers
        In symbols, and with numbers and units put in.
    result
        What it gives, with its unit; why not, where it could not be recalculated.
    """

    cell: str
    label: str
    text: str
    symbols: str
    numbers: str
    result: str


class Writer:
    """Writes the formulas of one workbook."""

    def __init__(self, book: Examined) -> None:
        self.book = book
        self._symbols: dict[Key, str] = {}

    def written(self, key: Key) -> Written:
        """Write a cell: its formula both ways, or for a constant its value alone."""
        cell = self.book.cell(key)
        formula = cell.formula if cell is not None else None
        label = self.book.label(key).text
        shown = self.quantity(key)
        tree = self.book.tree(key)
        if formula is None:
            return Written(cell_name_of(key), label, "", "", "", shown)
        if tree is None:
            return Written(cell_name_of(key), label, f"={formula}", formula, "", shown)
        return Written(
            cell_name_of(key),
            label,
            f"={formula}",
            written(tree, _References(self, key).symbol),
            written(tree, _References(self, key).number),
            shown,
        )

    def symbol(self, key: Key) -> str:
        """Return what a reader calls a cell: its name, the symbol in its label, its words, else its address."""
        if key not in self._symbols:
            self._symbols[key] = self._symbol(key)
        return self._symbols[key]

    def _symbol(self, key: Key) -> str:
        label = self.book.label(key)
        if label.name:
            return label.name
        for text in reversed(label.left):
            if found := _symbol_in(text):
                return found
        words = _BRACKET.sub("", " ".join(label.left)).strip()
        if label.above and (not words or len(label.left) == 1):
            header = next((text for text in label.above if not self._is_unit(key, text)), "")
            if header and len(header) <= LONGEST_WORDS and under_header(self.book, key):
                return _symbol_in(header) or _quoted(_BRACKET.sub("", header).strip()) or cell_name(*key[1])
        return _quoted(words) or cell_name(*key[1])

    def _is_unit(self, key: Key, text: str) -> bool:
        declared = self.book.declarations.unit(*key)
        return declared is not None and text.strip("[]() ") == declared.text.strip("[]() ")

    def unit(self, key: Key) -> str:
        """Return the unit of a cell as the sheet declares it; empty for a pure number and where none is known."""
        declared = self.book.declarations.unit(*key)
        if declared is None or declared.weak or declared.unit.text == "1":
            return ""
        return declared.unit.text

    def quantity(self, key: Key) -> str:
        """Return a cell's value with its unit."""
        value = self.book.value(key)
        if isinstance(value, NotEvaluated):
            return f"not recalculated; stored {number_shown(self.book.stored(key), self.unit(key))}"
        return number_shown(value, self.unit(key))


class _References:
    """Writes the references of one formula."""

    def __init__(self, writer: Writer, key: Key) -> None:
        self.writer = writer
        self.book = writer.book
        self.key = key
        self.called: dict[str, set[Key]] = {}
        for read in self.book.reads(key):
            if (at := self._one(read)) is not None:
                self.called.setdefault(writer.symbol(at), set()).add(at)

    def symbol(self, node: Node) -> str:
        read = self._read(node)
        if read is None:
            return _as_typed(node)
        at = self._one(read)
        if at is None:
            return area_name(read.area) if read.sheet == self.key[0] else read_name(read)
        name = self.writer.symbol(at)
        return f"{name}[{cell_name(*at[1])}]" if len(self.called.get(name, ())) > 1 else name

    def number(self, node: Node) -> str:
        read = self._read(node)
        if read is None:
            return _as_typed(node)
        at = self._one(read)
        if at is not None:
            return self.writer.quantity(at)
        if cells_in(read.area) > 400:
            return read_name(read)
        keys = [key for key in self.book.cells_of(read) if self.book.number(key) is not None]
        if not keys:
            return f"{area_name(read.area)} (no numbers)"
        if len(keys) <= LARGEST_SHOWN:
            return "{" + "; ".join(self.writer.quantity(key) for key in keys) + "}"
        ordered = sorted(keys, key=lambda key: self.book.number(key) or 0.0)
        low, high = (self.writer.quantity(key) for key in (ordered[0], ordered[-1]))
        return f"{{{len(keys)} values, {low} … {high}}}"

    def _one(self, read: Read) -> Key | None:
        """Return the cell that is meant: the only one, or the value of a value and its unit side by side."""
        area = read.area
        first = (read.sheet, (area.first_row, area.first_column))
        if read.single is not None:
            return first
        if (area.last_row, area.last_column) != (area.first_row, area.first_column + 1):
            return None
        declared = self.book.declarations.unit(*first)
        second = (read.sheet, (area.first_row, area.last_column))
        pair = self.book.number(first) is not None and declared is not None and second in declared.cells
        return first if pair else None

    def _read(self, node: Node) -> Read | None:
        found = self.book.graph.group_at(*self.key)
        if found is None or not isinstance(node, CellRef | RangeRef):
            return None
        try:
            places = self.book.graph.geometry.places(node, self.book.graph.groups[found[0]].run, found[1])
        except (OutsideError, CannotEvaluateError):
            return None
        return Read(self.book.workbook.sheets[places[0][0]].name, places[0][1]) if len(places) == 1 else None


def under_header(book: Examined, key: Key) -> bool:
    """Return whether a cell stands in a table, where the header tells it apart and the row's label does not."""
    row, column = key[1]
    neighbours = ((row, column - 1), (row, column + 1))
    return any(book.number((key[0], at)) is not None for at in neighbours)


def _as_typed(node: Node) -> str:
    if isinstance(node, NameRef):
        return node.name
    if isinstance(node, TableRef):
        inner = ", ".join((*node.items, *node.columns))
        return f"{node.table}[{inner}]"
    return node.text if isinstance(node, ExternalRef) else "#REF!"


@lru_cache(maxsize=65536)
def _symbol_in(text: str) -> str:
    """Return the symbol that a label holds, such as the F of 'Force F [kN]'; empty where there is none.

    Examples
    --------
    >>> _symbol_in("Young's modulus E [MPa]"), _symbol_in("Force in bolt"), _symbol_in("σ_b")
    ('E', '', 'σ_b')
    """
    for match in _SYMBOL.finditer(text.strip()):
        if match[1].casefold() not in _NO_SYMBOLS:
            whole_word = len(match[1]) > 1 and match[1].isalpha() and match[1].islower()
            if not whole_word:
                return match[1]
    return ""


def _quoted(words: str) -> str:
    # The spaces do not break, and so the words count as one operand.
    return f"‹{words.replace(' ', NO_BREAK)}›" if len(words) <= LONGEST_WORDS and _LETTERS.search(words) else ""


def number_shown(value: Any, unit: str = "") -> str:
    """Write a value as a hand calculation does: six digits, a true minus sign, its unit behind.

    Examples
    --------
    >>> number_shown(-0.25), number_shown(412.0, "MPa"), number_shown(None)
    ('−0.25', '412 MPa', 'empty')
    """
    if value is None:
        return "empty"
    if isinstance(value, bool):
        return str(value).upper()
    if isinstance(value, float):
        text = f"{value:.6g}".replace("-", "−")
        return f"{text} {unit}" if unit else text
    if isinstance(value, ErrorValue):
        return str(value)
    return f"“{value}”" if isinstance(value, str) else str(value)


def read_name(read: Read) -> str:
    """Write a range with its sheet."""
    return f"{quote_sheet(read.sheet)}!{area_name(read.area)}"
