"""Finding the chain behind a cell: its inputs, then step by step what is computed from them."""

from __future__ import annotations

import re
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from doubler.errors import InputError
from doubler.explain.notation import written
from doubler.explain.remarks import Remarks
from doubler.units import UnitError, parse_unit
from doubler.workbook.addresses import area_name, cell_name, full_name, parse_cell, split_sheet
from doubler.workbook.evaluate import NotEvaluated
from doubler.workbook.examined import Examined, Key, Read
from doubler.workbook.geometry import OutsideError, cells_in
from doubler.workbook.syntax import Call, CellRef, Node, RangeRef

MOST_FOLLOWED = 12
"""A range with more formula cells than this is not followed cell by cell."""
MOST_SHOWN = 5
"""Values of a range that are written out."""


@dataclass(frozen=True, slots=True)
class Input:
    """A constant on which the cell rests."""

    symbol: str
    label: str
    value: str
    cell: str


@dataclass(frozen=True, slots=True)
class Step:
    """One formula of the chain.

    Attributes
    ----------
    symbol, label, cell
        What it is and where it stands.
    formula
        In symbols.
    numbers
        With numbers and units put in.
    result
        With its unit.
    notes
        Where units do not agree, which row a lookup took, which branch was taken, what a literal converts, the formula
        and source of one of our functions.
    """

    symbol: str
    label: str
    cell: str
    formula: str
    numbers: str
    result: str
    notes: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Explanation:
    """The chain behind a cell."""

    workbook: str
    cell: str
    inputs: tuple[Input, ...]
    steps: tuple[Step, ...]

    def as_object(self) -> dict[str, Any]:
        """Return the chain as the command line's JSON shows it."""
        return {
            "workbook": self.workbook,
            "cell": self.cell,
            "inputs": [{"symbol": i.symbol, "label": i.label, "value": i.value, "cell": i.cell} for i in self.inputs],
            "steps": [
                {
                    "symbol": s.symbol, "label": s.label, "cell": s.cell, "formula": s.formula, "numbers": s.numbers,
                    "result": s.result, "notes": list(s.notes),
                }
                for s in self.steps
            ],
        }  # fmt: skip


def explain(book: Examined | Path | str, cell: str) -> Explanation:
    """Return the chain behind a cell.

    Parameters
    ----------
    book : Examined, Path or str
        The workbook.
    cell : str
        An address with its sheet (``Sheet1!C5``), an address alone in a workbook of one sheet, or a defined name.

    Returns
    -------
    Explanation
        Inputs first, then the steps in the order of a hand calculation; the last one is the cell itself.

    Raises
    ------
    InputError
        There is no such cell, or it holds nothing.
    """
    examined = book if isinstance(book, Examined) else Examined.read(book)
    return _Chain(examined).behind(_find(examined, cell))


def _find(book: Examined, text: str) -> Key:
    name = book.workbook.path.name
    for defined in book.workbook.names:
        if defined.name.casefold() == text.strip().casefold():
            text = defined.text.lstrip("=")
    sheet_name, rest = split_sheet(text.strip())
    visible = [sheet for sheet in book.workbook.sheets if sheet.visibility == "visible"]
    sheet = book.workbook.sheet(sheet_name) if sheet_name else visible[0] if len(visible) == 1 else None
    try:
        address = parse_cell(rest)
    except InputError:
        raise InputError(
            f"{name} has no cell or name {text!r}; write an address such as {full_name(visible[0].name, 5, 3)}"
        ) from None
    if sheet is None:
        sheets = ", ".join(s.name for s in book.workbook.sheets)
        if sheet_name:
            raise InputError(f"{name} has no sheet {sheet_name!r}; it has {sheets}")
        raise InputError(f"{name}: say on which sheet {text!r} stands; it has {sheets}")
    if address not in sheet.cells and book.graph.group_at(sheet.name, address) is None:
        raise InputError(f"{name}: {full_name(sheet.name, *address)} is empty; give a cell with a formula")
    return sheet.name, address


class _Chain:
    def __init__(self, book: Examined) -> None:
        self.book = book
        self.symbols: dict[Key, str] = {}
        self.taken: dict[str, Key] = {}
        self.inputs: dict[Key, Input] = {}
        self.steps: list[Step] = []

    def behind(self, key: Key) -> Explanation:
        order = self._order(key)
        for one in order:
            cell = self.book.cell(one)
            if cell is None or cell.formula is None:
                if cell is not None and cell.value is not None:
                    self.inputs[one] = Input(
                        self.symbol(one), self.label(one), self.value(one), full_name(one[0], *one[1])
                    )
            else:
                self.steps.append(self._step(one))
        return Explanation(
            self.book.workbook.path.name, full_name(key[0], *key[1]), tuple(self.inputs.values()), tuple(self.steps)
        )

    def _order(self, key: Key) -> list[Key]:
        """Return the cells of the chain, each after those that it reads."""
        order: list[Key] = []
        done: set[Key] = set()
        work: list[tuple[Key, bool]] = [(key, False)]
        while work:
            one, ready = work.pop()
            if ready:
                order.append(one)
            elif one not in done:
                done.add(one)
                work.append((one, True))
                work += [(read, False) for read in reversed(self._followed(one)) if read not in done]
        return order

    def _followed(self, key: Key) -> list[Key]:
        tree = self.book.tree(key)
        found: list[Key] = []
        for read in self.book.reads(key):
            cells = list(self.book.cells_of(read))
            if read.single is None and isinstance(tree, Call) and tree.name in ("MIN", "MAX"):
                governing = [cell for cell in cells if self.book.number(cell) == self.book.number(key)]
                found += governing[:1]
            elif read.single is not None or len(cells) <= MOST_FOLLOWED:
                found += [cell for cell in cells if not isinstance(self.book.stored(cell), str) or self._formula(cell)]
        return list(dict.fromkeys(found))

    def _formula(self, key: Key) -> str | None:
        cell = self.book.cell(key)
        return None if cell is None else cell.formula

    def symbol(self, key: Key) -> str:
        """Return the sign under which a cell goes: its symbol, its name, else its address."""
        known = self.symbols.get(key)
        if known is not None:
            return known
        label = self.book.label(key)
        symbol = ""
        signs = [text for text in label.left if _SYMBOL.fullmatch(text)]
        if len(label.left) >= 2 and signs and len(signs) < len(label.left):
            symbol = signs[-1]
        elif label.left and (match := _TRAILING.search(label.left[-1])):
            symbol = match[1]
        symbol = symbol or label.name or cell_name(*key[1])
        if self.taken.setdefault(symbol, key) != key:
            symbol = f"{symbol} ({cell_name(*key[1])})" if not symbol[0].isdigit() else full_name(key[0], *key[1])
        self.symbols[key] = symbol
        return symbol

    def label(self, key: Key) -> str:
        """Return the words of a cell without its symbol: its header and its row's words, or what there is of them."""
        label = self.book.label(key)
        texts = [text for text in label.left if text != self.symbols.get(key)]
        header = next((text for text in label.above if not _is_unit(text)), "")
        if texts and _is_header(header):
            return f"{header}, {' '.join(texts)}"
        return " ".join(texts) or " ".join(reversed(label.above))

    def unit(self, key: Key) -> str:
        """Return the unit that a cell declares, or what it carries where it declares none."""
        declared = self.book.declarations.unit(*key)
        if declared is not None:
            return "" if declared.weak or declared.unit.text == "1" else declared.unit.text
        return ""

    def value(self, key: Key) -> str:
        """Write a cell's value with its unit."""
        value = self.book.value(key)
        if isinstance(value, NotEvaluated):
            return f"not evaluated: {value.reason}"
        return quantity(value, self.unit(key))

    def _step(self, key: Key) -> Step:
        tree = self.book.tree(key)
        symbol = self.symbol(key)
        if tree is None:
            cell = self.book.cell(key)
            text = cell.formula if cell is not None and cell.formula else ""
            return Step(symbol, self.label(key), full_name(key[0], *key[1]), text, "", self.value(key))
        return Step(
            symbol,
            self.label(key),
            full_name(key[0], *key[1]),
            written(tree, lambda node: self.reference(key, node, self.symbol)),
            written(tree, lambda node: self.reference(key, node, self.value)),
            self.value(key),
            tuple(Remarks(self, key, tree).all()),
        )

    def reference(self, key: Key, node: Node, write: Any) -> str:
        read = self.read(key, node)
        if read is None:
            return "?"
        if read.single is not None:
            return str(write((read.sheet, read.single)))
        pair = self._pair(read)
        if pair is not None:
            return str(write(pair))
        text = area_name(read.area)
        if read.sheet != key[0]:
            text = f"{read.sheet}!{text}"
        if write == self.symbol or cells_in(read.area) > 400:
            return text
        values = [self.value(cell) for cell in self.book.cells_of(read)]
        if len(values) <= MOST_SHOWN:
            return ", ".join(values)
        return f"{', '.join(values[:3])}, … {values[-1]} [{len(values)} values]"

    def _pair(self, read: Read) -> Key | None:
        """Return the value cell of a value and its unit side by side, which are written as one quantity."""
        area = read.area
        if (area.last_row, area.last_column) != (area.first_row, area.first_column + 1):
            return None
        first = (read.sheet, (area.first_row, area.first_column))
        second = (read.sheet, (area.first_row, area.last_column))
        declared = self.book.declarations.unit(*first)
        holds = self.book.number(first) is not None and declared is not None and second in declared.cells
        return first if holds else None

    def read(self, key: Key, node: Node) -> Read | None:
        """Return where a reference of a formula lies."""
        found = self.book.graph.group_at(*key)
        if found is None or not isinstance(node, CellRef | RangeRef):
            return None
        try:
            places = self.book.graph.geometry.places(node, self.book.graph.groups[found[0]].run, found[1])
        except OutsideError:
            return None
        return Read(self.book.workbook.sheets[places[0][0]].name, places[0][1]) if places else None


_SYMBOL = re.compile(r"[^\W\d_][\w.,'′*]{0,11}")
_TRAILING = re.compile(r"(?:,|\s|\()\s*([A-Za-zΑ-ω][A-Za-z0-9_]{0,5})\s*\)?(?:\s*[\[(][^\])]*[\])])?\s*[:=]$")


def _is_unit(text: str) -> bool:
    try:
        parse_unit(text.strip(" ()[]"))
    except UnitError:
        return not any(character.isalpha() for character in text)
    return True


def _is_header(text: str) -> bool:
    """Return whether a text names a column of a table; a list of values headed so needs no such name."""
    plain = text.strip(" :").casefold()
    return 0 < len(plain) <= 30 and ":" not in text and plain not in _COLUMN_OF_VALUES


_COLUMN_OF_VALUES = {
    "value",
    "values",
    "val",
    "val.",
    "number",
    "input",
    "inputs",
    "result",
    "results",
    "data",
    "quantity",
}


def quantity(value: Any, unit: str) -> str:
    """Write a value with its unit as a hand calculation does."""
    if value is None:
        return "0 (empty)"
    if isinstance(value, bool):
        return str(value).upper()
    if not isinstance(value, float):
        return f'"{value}"' if isinstance(value, str) else str(value)
    text = f"{value:.6g}".replace("-", "−")
    return f"{text} {unit}" if unit else text
