"""One formula's units: the walk over its syntax tree.

The walk asks its `Surroundings` for the unit of each cell it meets, applies a rule at each operator and function, and
raises `UnitFault` at the first contradiction inside the formula.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import Protocol

from doubler.workbook.alike import (
    Constraint,
    NotTraced,
    independent,
    require_ratio,
    together,
)
from doubler.workbook.carried import (
    BLANK,
    LOGICAL,
    RATIO,
    TEXT,
    Carried,
    State,
    contradictory,
    divide,
    literal,
    multiply,
    power,
)
from doubler.workbook.conversions import as_fraction
from doubler.workbook.model import Address, Scalar
from doubler.workbook.syntax import (
    Apply,
    ArrayLiteral,
    Binary,
    Call,
    CellRef,
    ErrorLiteral,
    ExternalRef,
    Logical,
    NameRef,
    Node,
    Number,
    Omitted,
    RangeRef,
    TableRef,
    Text,
    Unary,
)

COMPARISONS = frozenset({"=", "<>", "<", "<=", ">", ">="})


@dataclass(frozen=True, slots=True)
class Block:
    """The units of a rectangle: the distinct ones of each of its columns, and of each of its rows where it is small."""

    rows: int
    columns: int
    by_column: tuple[tuple[Carried, ...], ...]
    by_row: tuple[tuple[Carried, ...], ...]

    @property
    def items(self) -> list[Carried]:
        """All distinct units."""
        seen: dict[int, Carried] = {}
        for column in self.by_column:
            for node in column:
                seen.setdefault(id(node), node)
        return list(seen.values())


class Surroundings(Protocol):
    """What a formula can ask of the sheet around it."""

    def cell_unit(self, node: CellRef, host: Address) -> Carried:
        """Return the unit of a cell."""

    def block_units(self, node: RangeRef, host: Address) -> Block:
        """Return the units of a rectangle."""

    def next_position(self) -> int:
        """Number the literals, those of unlike formulas apart."""

    def constant(self, node: Node, host: Address) -> Scalar:
        """Return the constant that a cell holds, or None; the result then hangs on that value."""

    def key_grid(self, node: Node, host: Address) -> list[list[Scalar]]:
        """Return the constants of a rectangle, among which a key is looked up."""

    def text_grid(self, node: Node, host: Address) -> list[list[Scalar]]:
        """Return the constants of a rectangle, for functions that read units from cells."""


class Walk:
    """Carries units through one formula."""

    def __init__(self, around: Surroundings, host: Address, constraints: list[Constraint]) -> None:
        self.around = around
        self.host = host
        self.constraints = constraints
        self._bound: dict[str, Carried | Block] = {}

    def node(self, node: Node) -> Carried | Block:
        """Return the unit of an expression; of a rectangle the units of its parts."""
        if isinstance(node, Number):
            return literal(node.value, node.text, self.next_position())
        if isinstance(node, CellRef):
            return self.around.cell_unit(node, self.host)
        if isinstance(node, Binary):
            return self._binary(node)
        if isinstance(node, Unary):
            return self._unary(node)
        if isinstance(node, RangeRef):
            return self.around.block_units(node, self.host)
        if isinstance(node, Call):
            return self._call(node)
        if isinstance(node, Text):
            return TEXT
        if isinstance(node, Logical):
            return LOGICAL
        if isinstance(node, Omitted):
            return BLANK
        if isinstance(node, ErrorLiteral):
            return BLANK
        if isinstance(node, NameRef):
            found = self._bound.get(node.name.casefold())
            if found is None:
                raise NotTraced(f"the name {node.name} has no meaning here")
            return found
        if isinstance(node, ArrayLiteral):
            return self._array(node)
        if isinstance(node, ExternalRef):
            raise NotTraced("it reads another workbook")
        if isinstance(node, TableRef | Apply):
            raise NotTraced("its units can't be followed through a function defined in the workbook")
        raise NotTraced("it holds a construct whose unit is not known")

    def one(self, node: Node) -> Carried:
        """Return the one unit of an expression."""
        return self.single(self.node(node))

    def single(self, found: Carried | Block, what: str = "put into one range") -> Carried:
        """Return the one unit of what a node gave."""
        if isinstance(found, Carried):
            return found
        items = found.items
        if len(items) == 1:
            return items[0]
        return together(items, self.constraints, what=what) if items else BLANK

    def items(self, node: Node) -> list[Carried]:
        """Return the units that an argument brings, one or several."""
        found = self.node(node)
        return [found] if isinstance(found, Carried) else found.items

    def block(self, node: Node) -> Block:
        """Return an argument as a rectangle."""
        found = self.node(node)
        if isinstance(found, Block):
            return found
        return Block(1, 1, ((found,),), ((found,),))

    def alike(self, nodes: list[Carried], what: str) -> Carried:
        """Return the one unit of operands that must be alike."""
        return together(nodes, self.constraints, what=what)

    def next_position(self) -> int:
        """Number the formula's literals."""
        return self.around.next_position()

    def bind(self, name: str, value: Carried | Block) -> None:
        """Give a LET variable its unit."""
        self._bound[name.casefold()] = value

    def _binary(self, node: Binary) -> Carried | Block:
        operator = node.operator
        if operator in "+-":
            return self._sum(node)
        if operator == "*":
            return multiply(self.one(node.left), self.one(node.right))
        if operator == "/":
            return divide(self.one(node.left), self.one(node.right))
        if operator == "^":
            return self.raised(node.left, node.right)
        if operator in COMPARISONS:
            sides = [self.one(node.left), self.one(node.right)]
            result = self.alike(sides, "compared")
            return result if result.state is State.CONTRADICTORY else LOGICAL
        if operator == "&":
            for side in (node.left, node.right):
                self.node(side)
            return TEXT
        items = self.items(node.left) + self.items(node.right)
        return Block(len(items), 1, (tuple(items),), tuple((item,) for item in items))

    def _sum(self, node: Node) -> Carried:
        """Take a chain of sums and differences at once, so that the odd one out is found among all its terms."""
        terms: list[tuple[Node, int]] = []

        def collect(part: Node, sign: int) -> None:
            if isinstance(part, Binary) and part.operator in ("+", "-"):
                collect(part.left, sign)
                collect(part.right, sign if part.operator == "+" else -sign)
            else:
                terms.append((part, sign))

        collect(node, 1)
        nodes = [self.one(part) for part, _ in terms]
        return together(nodes, self.constraints, signs=[sign for _, sign in terms], what="added")

    def _unary(self, node: Unary) -> Carried | Block:
        if node.operator in ("@", "#"):
            return self.node(node.operand)
        operand = self.one(node.operand)
        if node.operator == "%":
            return multiply(operand, replace(literal(0.01, "0.01", self.next_position()), factors=()))
        if node.operator == "-":
            return negated(operand)
        return operand

    def raised(self, base_node: Node, exponent_node: Node) -> Carried:
        """Return the unit of a power."""
        base, exponent = self.one(base_node), self.one(exponent_node)
        for part in (base, exponent):
            if part.state is State.CONTRADICTORY:
                return part
        if exponent.value is not None and exponent.state in (State.LITERAL, State.BLANK):
            if base.state is State.LITERAL and base.value == 10.0 and abs(exponent.value) < 30:
                return literal(10.0**exponent.value, f"10^{exponent.value:g}", self.next_position())
            return power(base, as_fraction(exponent.value))
        require_ratio(exponent, "an exponent")
        if base.state is State.LITERAL:
            return replace(RATIO, sources=independent(exponent.sources))
        if base.state is State.KNOWN and base.dimension.is_none and not base.opens and not base.angle_mark:
            plain = require_ratio(base, "the base of a variable power")
            return replace(RATIO, sources=independent(plain.sources + exponent.sources), factors=())
        held = self.around.constant(exponent_node, self.host)
        if isinstance(held, float) and abs(held) <= 12:
            return power(base, as_fraction(held))
        raise NotTraced("its exponent varies, so that the unit of the power is not fixed")

    def _array(self, node: ArrayLiteral) -> Block:
        items = tuple(tuple(self.one(cell) for cell in row) for row in node.rows)
        return Block(len(items), len(items[0]), tuple(zip(*items, strict=True)), items)

    def _call(self, node: Call) -> Carried | Block:
        from doubler.workbook.unit_rules import rule_for

        rule: Callable[[Walk, Call], Carried | Block] | None = rule_for(node.name)
        if rule is None:
            raise NotTraced(f"the unit rule of {node.name} is not known")
        return rule(self, node)


def negated(node: Carried) -> Carried:
    """Return the unit of a negative."""
    value = None if node.value is None else -node.value
    if any(r.weight for r in node.readings):
        return replace(
            node, value=value, readings=tuple(replace(r, weight=-r.weight, zero=-r.zero) for r in node.readings)
        )
    return replace(node, value=value) if value is not None else node


def spoilt(nodes: list[Carried]) -> Carried | None:
    """Return what to pass on where an argument is contradictory already."""
    roots = [key for node in nodes if node.state is State.CONTRADICTORY for key in node.rooted_at]
    bad = any(node.state is State.CONTRADICTORY for node in nodes)
    return contradictory(roots) if bad else None
