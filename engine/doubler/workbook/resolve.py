"""Names and structured references replaced by what they stand for: a tree then holds plain references only."""

from __future__ import annotations

from dataclasses import dataclass, field, replace

from doubler.errors import ErrorValue
from doubler.workbook.coerce import CannotEvaluateError
from doubler.workbook.model import Address, DefinedName, Sheet, Table, Workbook
from doubler.workbook.parse import FormulaError, parse
from doubler.workbook.syntax import (
    Apply,
    ArrayLiteral,
    Axis,
    Binary,
    Call,
    CellRef,
    ErrorLiteral,
    ExternalRef,
    NameRef,
    Node,
    RangeRef,
    TableRef,
    Unary,
)
from doubler.workbook.written_references import DYNAMIC, around_the_edge, constant_reference, sized_like

DEEPEST = 64
"""How deep defined names may stand on other names."""


@dataclass
class Resolver:
    """Resolves trees of one workbook."""

    workbook: Workbook
    _names: dict[tuple[str, str | None], DefinedName] = field(init=False)
    _tables: dict[str, Table] = field(init=False)
    _trees: dict[int, Node] = field(init=False, default_factory=dict)
    _plain: dict[int, bool] = field(init=False, default_factory=dict)

    def __post_init__(self) -> None:
        self._names = {
            (name.name.casefold(), name.sheet.casefold() if name.sheet else None): name for name in self.workbook.names
        }
        self._tables = {table.name.casefold(): table for table in self.workbook.tables}

    def is_plain(self, tree: Node) -> bool:
        """Whether a tree holds neither names nor structured references, so that it stands for itself on any sheet."""
        known = self._plain.get(id(tree))
        if known is None:
            known = self._plain[id(tree)] = not _holds_names(tree)
        return known

    def resolve(self, tree: Node, sheet: Sheet, host: Address) -> Node:
        """Return the tree with names and structured references replaced.

        Raises
        ------
        CannotEvaluateError
            Where a reference leads to another workbook, or names stand on each other in a circle.
        """
        return self._node(tree, sheet, host, frozenset(), 0)

    def _node(self, node: Node, sheet: Sheet, host: Address, bound: frozenset[str], depth: int) -> Node:
        if isinstance(node, NameRef):
            return self._name(node, sheet, host, bound, depth)
        if isinstance(node, TableRef):
            return self._table(node, sheet, host)
        if isinstance(node, ExternalRef):
            raise CannotEvaluateError(f"it reads another workbook: {node.text}")
        if isinstance(node, Unary):
            return replace(node, operand=self._node(node.operand, sheet, host, bound, depth))
        if isinstance(node, Binary):
            left = self._node(node.left, sheet, host, bound, depth)
            return replace(node, left=left, right=self._node(node.right, sheet, host, bound, depth))
        if isinstance(node, Call):
            return self._call(node, sheet, host, bound, depth)
        if isinstance(node, Apply):
            function = self._node(node.function, sheet, host, bound, depth)
            return Apply(function, tuple(self._node(a, sheet, host, bound, depth) for a in node.arguments))
        if isinstance(node, ArrayLiteral):
            return node
        return node

    def _call(self, node: Call, sheet: Sheet, host: Address, bound: frozenset[str], depth: int) -> Node:
        arguments = list(node.arguments)
        if node.name in {"LET", "LAMBDA"} and arguments:
            step = 2 if node.name == "LET" else 1
            for at in range(0, len(arguments) - 1, step):
                variable = arguments[at]
                if node.name == "LET":
                    arguments[at + 1] = self._node(arguments[at + 1], sheet, host, bound, depth)
                if isinstance(variable, NameRef):
                    bound |= {variable.name.casefold()}
            arguments[-1] = self._node(arguments[-1], sheet, host, bound, depth)
            return Call(node.name, tuple(arguments))
        resolved = tuple(self._node(argument, sheet, host, bound, depth) for argument in arguments)
        if node.name in DYNAMIC:
            return self._node(constant_reference(node.name, resolved, host, sheet.name), sheet, host, bound, depth + 1)
        if node.name in {"SUMIF", "AVERAGEIF"} and len(resolved) == 3:
            resolved = (resolved[0], resolved[1], sized_like(resolved[2], resolved[0]))
        if node.name.casefold() in bound:
            return Apply(NameRef(node.name), resolved)
        named = self._names.get((node.name.casefold(), None))
        if named is not None and depth < DEEPEST:
            from doubler.workbook.natives import NATIVES

            if node.name not in NATIVES:
                return Apply(self._name(NameRef(node.name), sheet, host, bound, depth), resolved)
        return Call(node.name, resolved)

    def _name(self, node: NameRef, sheet: Sheet, host: Address, bound: frozenset[str], depth: int) -> Node:
        wanted = node.name.casefold()
        if node.sheet is None and wanted in bound:
            return node
        scope = (node.sheet or sheet.name).casefold()
        name = self._names.get((wanted, scope)) or self._names.get((wanted, None))
        if name is None:
            if wanted in self._tables:
                return self._table(TableRef(node.name), sheet, host)
            return ErrorLiteral(ErrorValue.NAME)
        if depth >= DEEPEST:
            raise CannotEvaluateError(f"the defined name {node.name} leads back to itself")
        try:
            tree = self._trees.get(id(name))
            if tree is None:
                # References in a name that are not anchored are kept as seen from cell A1.
                tree = self._trees[id(name)] = parse(name.text, (1, 1))
        except FormulaError as error:
            raise CannotEvaluateError(f"the defined name {node.name} cannot be read: {error}") from error
        return self._node(around_the_edge(tree, host), sheet, host, frozenset(), depth + 1)

    def _table(self, node: TableRef, sheet: Sheet, host: Address) -> Node:
        table = self._tables.get(node.table.casefold()) if node.table else self._table_at(sheet, host)
        if table is None:
            return ErrorLiteral(ErrorValue.REF)
        area = table.area
        first, last = area.first_column, area.last_column
        if node.columns:
            places = {name.casefold(): area.first_column + k for k, name in enumerate(table.columns)}
            wanted = [places.get(column.casefold()) for column in node.columns]
            if any(place is None for place in wanted):
                return ErrorLiteral(ErrorValue.REF)
            found = [place for place in wanted if place is not None]
            first, last = min(found), max(found)
        top, bottom = area.first_row + table.header_rows, area.last_row - table.total_rows
        items = set(node.items)
        if "#This Row" in items:
            if not top <= host[0] <= bottom:
                return ErrorLiteral(ErrorValue.VALUE)
            row = Axis(0, anchored=False)
            return _rectangle(table.sheet, row, first, row, last)
        rows = {"#All": (area.first_row, area.last_row), "#Headers": (area.first_row, top - 1)}
        rows |= {"#Totals": (bottom + 1, area.last_row), "#Data": (top, bottom)}
        chosen = [rows[item] for item in items if item in rows] or [rows["#Data"]]
        first_row, last_row = min(a for a, _ in chosen), max(b for _, b in chosen)
        if last_row < first_row:
            return ErrorLiteral(ErrorValue.REF)
        return _rectangle(table.sheet, Axis(first_row, anchored=True), first, Axis(last_row, anchored=True), last)

    def _table_at(self, sheet: Sheet, host: Address) -> Table | None:
        return next(
            (t for t in self.workbook.tables if t.sheet.casefold() == sheet.name.casefold() and host in t.area),
            None,
        )


def _rectangle(sheet: str, first_row: Axis, first: int, last_row: Axis, last: int) -> Node:
    if first == last and first_row == last_row:
        return CellRef(sheet, first_row, Axis(first, anchored=True))
    return RangeRef(sheet, first_row, Axis(first, anchored=True), last_row, Axis(last, anchored=True))


def _holds_names(node: Node) -> bool:
    if isinstance(node, NameRef | TableRef | ExternalRef | Apply):
        return True
    if isinstance(node, Unary):
        return _holds_names(node.operand)
    if isinstance(node, Binary):
        return _holds_names(node.left) or _holds_names(node.right)
    if isinstance(node, Call):
        from doubler.workbook.natives import NATIVES

        if node.name in DYNAMIC or (node.name in {"SUMIF", "AVERAGEIF"} and len(node.arguments) == 3):
            return True
        return node.name not in NATIVES or any(_holds_names(argument) for argument in node.arguments)
    return False
