"""Finding the chain behind a cell: its inputs, then step by step what is computed from them."""

from __future__ import annotations

import re
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from doubler.errors import InputError
from doubler.explain.notation import written
from doubler.workbook.addresses import area_name, cell_name, full_name, parse_cell, split_sheet
from doubler.workbook.evaluate import NotEvaluated, evaluate
from doubler.workbook.examined import Examined, Key, Read
from doubler.workbook.geometry import OutsideError, cells_in
from doubler.workbook.graph import build_graph
from doubler.workbook.model import Cell
from doubler.workbook.syntax import Binary, Call, CellRef, Node, Number, RangeRef, Unary

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
        Which row a lookup took, which branch was taken, what a literal converts, the formula and source of one of our
        functions.
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
        """Return the words beside a cell without its symbol."""
        label = self.book.label(key)
        texts = [text for text in label.left if text != self.symbols.get(key)] or list(reversed(label.above))
        return " ".join(texts)

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
            written(tree, lambda node: self._reference(key, node, self.symbol)),
            written(tree, lambda node: self._reference(key, node, self.value)),
            self.value(key),
            tuple(_Notes(self, key, tree).all()),
        )

    def _reference(self, key: Key, node: Node, write: Any) -> str:
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


@dataclass
class _Notes:
    """What is worth saying beside a step."""

    chain: _Chain
    key: Key
    tree: Node
    found: list[str] = field(default_factory=list)

    def all(self) -> list[str]:
        judgement = self.chain.book.tracing.verdict(*self.key)
        for use in judgement.uses if judgement is not None else ():
            self.found.append(f"{use.text} converts units")
        self._visit(self.tree)
        return list(dict.fromkeys(self.found))

    def _visit(self, node: Node) -> None:
        if isinstance(node, Unary):
            self._visit(node.operand)
        elif isinstance(node, Binary):
            self._visit(node.left)
            self._visit(node.right)
        elif isinstance(node, Call):
            self._call(node)
            for argument in node.arguments:
                self._visit(argument)

    def _call(self, node: Call) -> None:
        if node.name in ("VLOOKUP", "HLOOKUP", "MATCH", "LOOKUP", "XLOOKUP"):
            self._lookup(node)
        elif node.name == "IF" and len(node.arguments) >= 2:
            holds = self._evaluated(node.arguments[0])
            if isinstance(holds, bool | float):
                condition = written(node.arguments[0], self._numbers)
                self.found.append(f"{condition} {'holds' if holds else 'does not hold'}")
        elif node.name in ("MIN", "MAX"):
            self._governing(node)
        else:
            self._ours(node)

    def _numbers(self, node: Node) -> str:
        return self.chain._reference(self.key, node, self.chain.value)

    def _governing(self, node: Call) -> None:
        value = self.chain.book.number(self.key)
        if self.tree is not node or value is None:
            return
        for argument in node.arguments:
            read = self.chain.read(self.key, argument)
            for cell in self.chain.book.cells_of(read) if read is not None else ():
                if self.chain.book.number(cell) == value:
                    words = self.chain.label(cell) or self.chain.symbol(cell)
                    self.found.append(f"governed by {full_name(cell[0], *cell[1])} ({words})")
                    return

    def _lookup(self, node: Call) -> None:
        """Say which line of the table was taken."""
        if len(node.arguments) < 2:
            return
        read = self.chain.read(self.key, node.arguments[1])
        if read is None:
            return
        area = read.area
        down = node.name == "VLOOKUP" or (node.name != "HLOOKUP" and area.first_column == area.last_column)
        first = RangeRef(read.sheet, *_edges(area, down=down))
        kind: Node = Number(1.0, "1")
        if node.name in ("VLOOKUP", "HLOOKUP") and len(node.arguments) > 3:
            exact = self._evaluated(node.arguments[3])
            kind = Number(1.0, "1") if exact else Number(0.0, "0")
        elif node.name == "MATCH" and len(node.arguments) > 2:
            kind = node.arguments[2]
        elif node.name == "XLOOKUP":
            kind = Number(0.0, "0")
        place = self._evaluated(Call("MATCH", (node.arguments[0], first, kind)))
        if not isinstance(place, float):
            return
        row = area.first_row + int(place) - 1 if down else area.first_row
        column = area.first_column if down else area.first_column + int(place) - 1
        text = self.chain.value((read.sheet, (row, column)))
        line = f"row {row}" if down else f"column {cell_name(1, column)[:-1]}"
        self.found.append(f"{node.name} takes {line} of {read.sheet}, {text}")

    def _evaluated(self, node: Node) -> Any:
        """Return the value of a part of the formula, worked out in the place of the formula itself."""
        book = self.chain.book
        sheet = book.workbook.sheet(self.key[0])
        if sheet is None:
            return None
        row, column = self.key[1]
        text = _as_typed(node, row, column)
        if text is None:
            return None
        cells = dict(sheet.cells)
        cells[self.key[1]] = Cell(None, text)
        from dataclasses import replace

        sheets = [replace(s, cells=cells) if s is sheet else s for s in book.workbook.sheets]
        changed = replace(book.workbook, sheets=sheets)
        return evaluate(build_graph(changed), None, [self.key]).value(*self.key)

    def _ours(self, node: Call) -> None:
        from doubler import catalogue, mechanics
        from doubler.catalogue.plain_math import plain

        mechanics.load()
        function = catalogue.lookup(node.name)
        if function is None:
            return
        formula = "; ".join(plain(line) for line in function.documentation.formula.splitlines() if line.strip())
        source = " ".join(function.documentation.sources.split())
        self.found.append(f"{node.name}: {formula}. {source}")


def _edges(area: Any, *, down: bool) -> tuple[Any, Any, Any, Any]:
    from doubler.workbook.syntax import Axis

    last_row = area.last_row if down else area.first_row
    last_column = area.first_column if down else area.last_column
    ends = (area.first_row, area.first_column, last_row, last_column)
    return tuple(Axis(number, anchored=True) for number in ends)  # type: ignore[return-value]


def _as_typed(node: Node, row: int, column: int) -> str | None:
    """Write a part of a formula as it would be typed in its cell; None where it holds what cannot be typed."""

    def reference(part: Node) -> str:
        if isinstance(part, CellRef):
            sheet = f"{_quoted(part.sheet)}!" if part.sheet else ""
            return sheet + cell_name(part.row.at(row), part.column.at(column))
        if isinstance(part, RangeRef) and part.first_row and part.first_column and part.last_row and part.last_column:
            sheet = f"{_quoted(part.sheet)}!" if part.sheet else ""
            first = cell_name(part.first_row.at(row), part.first_column.at(column))
            return f"{sheet}{first}:{cell_name(part.last_row.at(row), part.last_column.at(column))}"
        raise ValueError

    try:
        text = written(node, reference)
    except (ValueError, InputError):
        return None
    swaps = (("×", "*"), ("−", "-"), ("≤", "<="), ("≥", ">="), ("≠", "<>"), ("; ", ","))
    for mark, typed in swaps:
        text = text.replace(mark, typed)
    return text


def _quoted(sheet: str | None) -> str:
    from doubler.workbook.addresses import quote_sheet

    return quote_sheet(sheet or "")
