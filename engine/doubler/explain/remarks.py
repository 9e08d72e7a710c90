"""What is worth saying beside a step: which row a lookup took, which branch, what governs, where a formula is from."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import Any, Protocol

from doubler.errors import InputError
from doubler.explain.notation import written
from doubler.workbook.addresses import cell_name, full_name, quote_sheet
from doubler.workbook.evaluate import evaluate
from doubler.workbook.examined import Examined, Key, Read
from doubler.workbook.graph import build_graph
from doubler.workbook.model import Area, Cell
from doubler.workbook.syntax import Axis, Binary, Call, CellRef, Node, Number, RangeRef, Unary


class Chain(Protocol):
    """What a remark needs of the chain in which the step stands."""

    book: Examined

    def symbol(self, key: Key) -> str:
        """Return the sign under which a cell goes."""

    def label(self, key: Key) -> str:
        """Return the words of a cell."""

    def value(self, key: Key) -> str:
        """Write a cell's value with its unit."""

    def read(self, key: Key, node: Node) -> Read | None:
        """Return where a reference of a formula lies."""

    def reference(self, key: Key, node: Node, write: Any) -> str:
        """Write a reference of a formula."""


@dataclass
class Remarks:
    """What is worth saying beside a step."""

    chain: Chain
    key: Key
    tree: Node
    found: list[str] = field(default_factory=list)

    def all(self) -> list[str]:
        """Return the remarks, each once."""
        judgement = self.chain.book.tracing.verdict(*self.key)
        for fault in judgement.faults if judgement is not None else ():
            self.found.append(f"The units do not agree: {fault.message}")
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
        return self.chain.reference(self.key, node, self.chain.value)

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


def _edges(area: Area, *, down: bool) -> tuple[Any, Any, Any, Any]:
    last_row = area.last_row if down else area.first_row
    last_column = area.first_column if down else area.last_column
    ends = (area.first_row, area.first_column, last_row, last_column)
    return tuple(Axis(number, anchored=True) for number in ends)  # type: ignore[return-value]


def _as_typed(node: Node, row: int, column: int) -> str | None:
    """Write a part of a formula as it would be typed in its cell; None where it holds what cannot be typed."""

    def reference(part: Node) -> str:
        if isinstance(part, CellRef):
            sheet = f"{quote_sheet(part.sheet)}!" if part.sheet else ""
            return sheet + cell_name(part.row.at(row), part.column.at(column))
        if isinstance(part, RangeRef) and part.first_row and part.first_column and part.last_row and part.last_column:
            sheet = f"{quote_sheet(part.sheet)}!" if part.sheet else ""
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
