"""The units of a workbook's cells as its formulas read them: declared, settled by results, or passed on by formulas."""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Callable, Hashable
from dataclasses import dataclass
from fractions import Fraction

from doubler.errors import ErrorValue
from doubler.workbook.alike import NotTraced
from doubler.workbook.carried import BLANK, LOGICAL, TEXT, Carried, Key, Source, known, literal, unknown
from doubler.workbook.declared import Declarations, Declared
from doubler.workbook.graph import Graph
from doubler.workbook.model import Address, Cell, Scalar
from doubler.workbook.roles import is_conversion
from doubler.workbook.syntax import Axis, Binary, CellRef, ErrorLiteral, Node, Number, RangeRef, Text, Unary
from doubler.workbook.unit_verdicts import Judgement
from doubler.workbook.unit_walk import Block

SMALL_BLOCK = 400
"""Up to so many cells a rectangle is kept entry by entry."""

_ONE = Fraction(1)
_PLAIN: dict[Hashable, Carried] = {"blank": BLANK, "text": TEXT, "logical": LOGICAL}

JudgementOf = Callable[[int, int], Judgement]


@dataclass(slots=True)
class _Segment:
    """Consecutive cells of a column that read alike; `group` where their unit is what a group of formulas passes on."""

    first: int
    last: int
    identity: Hashable
    group: int = -1


class SheetUnits:
    """Gives the unit of every cell of a workbook.

    Parameters
    ----------
    graph : Graph
    declarations : Declarations
    judgement : callable
        Gives what was found of a copy of a group, judging it first where that is still to do.
    settled : dict
        The units that results settle for undeclared inputs.
    """

    def __init__(
        self, graph: Graph, declarations: Declarations, judgement: JudgementOf, settled: dict[Key, Carried]
    ) -> None:
        self.graph = graph
        self.declarations = declarations
        self.judgement = judgement
        self.settled = settled
        self.demoted: frozenset[Key] = frozenset()
        self.met: set[Key] = set()
        self.asked: list[Node] = []
        self.position = 0
        self._names = [sheet.name for sheet in graph.workbook.sheets]
        self._static: dict[tuple[int, int, int], Hashable] = {}
        self._nodes: dict[tuple[int, int, int], Carried] = {}
        self._rows: dict[int, dict[int, list[int]]] = {}
        self._segments: dict[tuple[int, int], list[_Segment]] = {}
        self._ends: dict[int, tuple[int, int]] = {}
        self._sorts: dict[int, int] = {}
        self._sorted: dict[Hashable, int] = {}
        self._own = 0

    def at(self, sheet: int) -> SheetUnits:
        """Take a sheet as that of the formula which asks."""
        self._own = sheet
        return self

    # What the walk asks for.

    def next_position(self) -> int:
        """Number the literals of all formulas, so that those which a cell passes on keep apart."""
        self.position += 1
        return self.position

    def cell_unit(self, node: CellRef, host: Address) -> Carried:
        """Return the unit of a cell."""
        sheet = self._sheet(node.sheet)
        if sheet is None:
            return BLANK
        return self.node(sheet, node.row.at(host[0]), node.column.at(host[1]))

    def block_units(self, node: RangeRef, host: Address) -> Block:
        """Return the units of a rectangle."""
        sheets, rows, columns = self._extent(node, host)
        by_column: list[tuple[Carried, ...]] = []
        height, width = rows[1] - rows[0] + 1, columns[1] - columns[0] + 1
        for column in range(columns[0], columns[1] + 1):
            found: dict[Hashable, Carried] = {}
            for sheet in sheets:
                self._collect(sheet, column, rows, found)
            by_column.append(tuple(found.values()))
        by_row: tuple[tuple[Carried, ...], ...] = ()
        if height * width <= SMALL_BLOCK and len(sheets) == 1:
            by_row = tuple(
                tuple(self.node(sheets[0], row, column) for column in range(columns[0], columns[1] + 1))
                for row in range(rows[0], rows[1] + 1)
            )
        return Block(height, width, tuple(by_column), by_row)

    def constant(self, node: Node, host: Address) -> Scalar:
        """Return the constant that a cell holds, or None; the formula's judgement then hangs on that value."""
        self.asked.append(node)
        return self.value(node, host)

    def value(self, node: Node, host: Address) -> Scalar:
        """Return the constant that a node is, or that the cell which it names holds."""
        if isinstance(node, Number | Text):
            return node.value
        if isinstance(node, Unary) and node.operator == "-":
            held = self.value(node.operand, host)
            return -held if isinstance(held, float) else None
        if isinstance(node, CellRef):
            sheet = self._sheet(node.sheet)
            if sheet is None:
                return None
            cell = self.graph.workbook.sheets[sheet].cells.get((node.row.at(host[0]), node.column.at(host[1])))
            return None if cell is None or cell.formula is not None else cell.value
        return None

    def key_grid(self, node: Node, host: Address) -> list[list[Scalar]]:
        """Return the constants of a rectangle, among which a key is looked up."""
        self.asked.append(node)
        if not isinstance(node, RangeRef):
            return [[self.value(node, host)]]
        sheets, rows, columns = self._extent(node, host)
        cells = self.graph.workbook.sheets[sheets[0]].cells
        return [
            [_constant_of(cells.get((row, column))) for column in range(columns[0], columns[1] + 1)]
            for row in range(rows[0], rows[1] + 1)
        ]

    def text_grid(self, node: Node, host: Address) -> list[list[Scalar]]:
        """Return the constants of a rectangle, 1 for each number, for functions that read units from cells."""
        self.asked.append(node)
        return self.grid(node, host)

    def grid(self, node: Node, host: Address) -> list[list[Scalar]]:
        """Return the texts of a rectangle, and 1 for each number."""
        if isinstance(node, RangeRef):
            sheets, rows, columns = self._extent(node, host)
            cells = self.graph.workbook.sheets[sheets[0]].cells
            return [
                [_stand_in(cells.get((row, column))) for column in range(columns[0], columns[1] + 1)]
                for row in range(rows[0], rows[1] + 1)
            ]
        if isinstance(node, CellRef):
            sheet = self._sheet(node.sheet)
            if sheet is None:
                return [[ErrorValue.REF]]
            cells = self.graph.workbook.sheets[sheet].cells
            return [[_stand_in(cells.get((node.row.at(host[0]), node.column.at(host[1]))))]]
        if isinstance(node, Text):
            return [[node.value]]
        if isinstance(node, ErrorLiteral):
            return [[node.value]]
        return [[1.0]]

    # Cells.

    def node(self, sheet: int, row: int, column: int) -> Carried:
        """Return the unit of a cell as a formula reads it."""
        at = (sheet, row, column)
        found = self._nodes.get(at)
        key = (self._names[sheet], (row, column))
        if found is None or key in self.demoted:
            found = self._read(sheet, row, column, key)
        if found.opens:
            self.met.update(item.key for item in found.opens)
        return found

    def _read(self, sheet: int, row: int, column: int, key: Key) -> Carried:
        identity = self.identity(sheet, row, column)
        at = (sheet, row, column)
        if isinstance(identity, Judgement):
            return identity.passed
        if isinstance(identity, Declared):
            if key in self.demoted:
                return unknown(key)
            unit = identity.unit
            source = Source(identity.cells[0], key, unit.text, _ONE, unit.system, identity.weak)
            node = known(unit.dimension, unit.scale, source, offset=unit.offset, absolute=identity.absolute)
        elif isinstance(identity, float):
            node = literal(identity, repr(identity).removesuffix(".0"), self.next_position(), key)
        elif isinstance(identity, tuple):
            own: Key = identity
            return self.settled.get(own) or unknown(own)
        else:
            node = _PLAIN[identity]
        self._nodes[at] = node
        return node

    def identity(self, sheet: int, row: int, column: int) -> Hashable:
        """Return what tells how a cell reads: cells of one identity read alike."""
        at = (sheet, row, column)
        found = self._static.get(at)
        if found is not None:
            return found
        group = self.graph.occupancy[sheet].at(row, column)
        if group is None:
            found = self._static[at] = self._constant(sheet, (row, column))
            return found
        declared = self.declarations.unit(self._names[sheet], (row, column))
        if declared is not None and not declared.weak:
            self._static[at] = declared
            return declared
        return self.judgement(*group)

    def _constant(self, sheet: int, address: Address) -> Hashable:
        cell = self.graph.workbook.sheets[sheet].cells.get(address)
        value = None if cell is None else cell.value
        if not isinstance(value, float):
            if isinstance(value, bool):
                return "logical"
            return "text" if isinstance(value, str) else "blank"
        name = self._names[sheet]
        declared = self.declarations.unit(name, address)
        if declared is not None:
            return declared
        words = self.declarations.label(name, address).words
        return value if is_conversion(words) and value else self.open_key(name, address)

    def sort_of(self, declared: Declared | None) -> int:
        """Number the declared units that say the same, wherever they stand."""
        if declared is None:
            return -1
        known_one = self._sorts.get(id(declared))
        if known_one is None:
            says = (declared.unit, declared.text, declared.place, declared.weak, declared.absolute)
            known_one = self._sorts[id(declared)] = self._sorted.setdefault(says, len(self._sorted))
        return known_one

    def open_key(self, sheet: str, address: Address) -> Key:
        """Return what stands for an undeclared input: its own cell where a label is beside it, else its column."""
        layout = self.declarations.labels.layout(sheet)
        left = layout.left_texts(address)
        if left and layout.touches_left(address, left[0]):
            return sheet, address
        return self.declarations.head(sheet, address)

    # References over the copies of a formula.

    def reference_identity(self, node: CellRef | RangeRef, host: Address) -> Hashable:
        """Return what tells how a reference reads from a copy of the formula at `host`."""
        if isinstance(node, CellRef):
            sheet = self._own if node.sheet is None else self._sheet(node.sheet)
            if sheet is None:
                return "blank"
            found_one = self.identity(sheet, node.row.at(host[0]), node.column.at(host[1]))
            return self.sort_of(found_one) if isinstance(found_one, Declared) else found_one
        sheets, rows, columns = self._extent(node, host)
        found: list[Hashable] = [rows[1] - rows[0], columns[1] - columns[0]]
        for sheet in sheets:
            for column in range(columns[0], columns[1] + 1):
                seen: dict[Hashable, Carried] = {}
                self._collect(sheet, column, rows, seen)
                found.append(tuple(seen))
        return tuple(found)

    def _collect(self, sheet: int, column: int, rows: tuple[int, int], found: dict[Hashable, Carried]) -> None:
        segments = self._column(sheet, column)
        start = max(bisect_right(segments, rows[0], key=lambda s: s.first) - 1, 0)
        for segment in segments[start:]:
            if segment.first > rows[1]:
                break
            first, last = max(segment.first, rows[0]), min(segment.last, rows[1])
            if first > last:
                continue
            if segment.group >= 0:
                for row in range(first, last + 1):
                    identity = self.identity(sheet, row, column)
                    if identity not in found:
                        found[identity] = self.node(sheet, row, column)
            elif segment.identity not in found:
                found[segment.identity] = self.node(sheet, first, column)

    def _column(self, sheet: int, column: int) -> list[_Segment]:
        segments = self._segments.get((sheet, column))
        if segments is not None:
            return segments
        rows = self._rows.get(sheet)
        if rows is None:
            rows = self._rows[sheet] = {}
            for row, at in self.graph.workbook.sheets[sheet].cells:
                rows.setdefault(at, []).append(row)
        segments = self._segments[sheet, column] = []
        occupancy = self.graph.occupancy[sheet]
        for row in sorted(rows.get(column, ())):
            group = occupancy.at(row, column)
            declared = None if group is None else self.declarations.unit(self._names[sheet], (row, column))
            own = -1
            identity: Hashable
            if group is not None and (declared is None or declared.weak):
                own, identity = group[0], ("group", group[0])
            else:
                identity = _by_unit(self.identity(sheet, row, column))
                if identity == "blank":
                    continue
            last = segments[-1] if segments else None
            if last is not None and last.identity == identity and last.last == row - 1:
                last.last = row
            else:
                segments.append(_Segment(row, row, identity, own))
        return segments

    def _extent(self, node: RangeRef, host: Address) -> tuple[list[int], tuple[int, int], tuple[int, int]]:
        first = self._sheet(node.sheet)
        if first is None:
            raise NotTraced("it reads a sheet that is not there")
        sheets = [first]
        if node.last_sheet is not None:
            last = self._sheet(node.last_sheet)
            if last is None:
                raise NotTraced("it reads a sheet that is not there")
            sheets = list(range(min(first, last), max(first, last) + 1))
        used_rows, used_columns = 1, 1
        for sheet in sheets:
            bottom, right = self._used(sheet)
            used_rows, used_columns = max(used_rows, bottom), max(used_columns, right)
        rows = _span(node.first_row, node.last_row, host[0], used_rows)
        columns = _span(node.first_column, node.last_column, host[1], used_columns)
        return sheets, rows, columns

    def _used(self, sheet: int) -> tuple[int, int]:
        found = self._ends.get(sheet)
        if found is None:
            cells = self.graph.workbook.sheets[sheet].cells
            found = (max((r for r, _ in cells), default=1), max((c for _, c in cells), default=1))
            self._ends[sheet] = found
        return found

    def _sheet(self, name: str | None) -> int | None:
        return self._own if name is None else self.graph.sheet_index(name)


def _by_unit(identity: Hashable) -> Hashable:
    """Return an identity under which equally declared cells of a column are alike wherever their units stand."""
    if isinstance(identity, Declared):
        return (identity.unit, identity.weak, identity.absolute)
    return identity


def _span(first: Axis | None, last: Axis | None, own: int, used: int) -> tuple[int, int]:
    if first is None or last is None:
        return 1, used
    low, high = sorted((first.at(own), last.at(own)))
    return low, max(low, min(high, used))


def _constant_of(cell: Cell | None) -> Scalar:
    return None if cell is None or cell.formula is not None else cell.value


def _stand_in(cell: Cell | None) -> Scalar:
    if cell is None:
        return None
    if isinstance(cell.value, str):
        return cell.value
    return 1.0 if cell.formula is not None or isinstance(cell.value, float) else cell.value


def references_in(tree: Node) -> list[CellRef | RangeRef]:
    """Return the references of a formula, each once."""
    from doubler.workbook.syntax import Apply, ArrayLiteral, Call

    found: dict[CellRef | RangeRef, None] = {}
    stack: list[Node] = [tree]
    while stack:
        node = stack.pop()
        if isinstance(node, CellRef | RangeRef):
            found[node] = None
        elif isinstance(node, Binary):
            stack += (node.left, node.right)
        elif isinstance(node, Unary):
            stack.append(node.operand)
        elif isinstance(node, Call):
            stack += node.arguments
        elif isinstance(node, Apply):
            stack += (node.function, *node.arguments)
        elif isinstance(node, ArrayLiteral):
            stack += [entry for row in node.rows for entry in row]
    return list(found)
