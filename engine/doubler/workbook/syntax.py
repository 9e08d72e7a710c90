"""The syntax tree of a formula, written relative to its own cell.

A reference that is not anchored is kept as an offset from the cell that holds the formula, so that all copies of a
filled-down formula share one tree: that is what lets a column of copies be evaluated as one array, and be judged once.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, fields, is_dataclass
from typing import cast

from doubler.errors import ErrorValue


@dataclass(frozen=True, slots=True)
class Axis:
    """One coordinate of a reference: an anchored row or column number, or an offset from the formula's own cell."""

    number: int
    anchored: bool

    def at(self, own: int) -> int:
        """Return the row or column meant when the formula stands in row or column `own`."""
        return self.number if self.anchored else own + self.number


@dataclass(frozen=True, slots=True)
class Number:
    """A number written in the formula; `text` keeps the digits as typed, which tell its precision."""

    value: float
    text: str = ""


@dataclass(frozen=True, slots=True)
class Text:
    """A text literal."""

    value: str


@dataclass(frozen=True, slots=True)
class Logical:
    """TRUE or FALSE."""

    value: bool


@dataclass(frozen=True, slots=True)
class ErrorLiteral:
    """An error written in the formula, such as #REF!."""

    value: ErrorValue


@dataclass(frozen=True, slots=True)
class Omitted:
    """An argument left out between commas."""


@dataclass(frozen=True, slots=True)
class CellRef:
    """A reference to one cell; `sheet` is None for the formula's own sheet."""

    sheet: str | None
    row: Axis
    column: Axis


@dataclass(frozen=True, slots=True)
class RangeRef:
    """A reference to a rectangle; rows are None for whole columns, columns are None for whole rows.

    `last_sheet` is set for a reference across a span of sheets.
    """

    sheet: str | None
    first_row: Axis | None
    first_column: Axis | None
    last_row: Axis | None
    last_column: Axis | None
    last_sheet: str | None = None


@dataclass(frozen=True, slots=True)
class NameRef:
    """A defined name, or a LET/LAMBDA variable."""

    name: str
    sheet: str | None = None


@dataclass(frozen=True, slots=True)
class TableRef:
    """A structured reference.

    Attributes
    ----------
    table
        Table name; empty for a reference inside its own table.
    items
        Any of ``#Headers``, ``#Data``, ``#Totals``, ``#All``, ``#This Row``.
    columns
        First and last column name, unescaped; empty for all columns.
    """

    table: str
    items: tuple[str, ...] = ()
    columns: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class ExternalRef:
    """A reference into another workbook, kept as its text."""

    text: str


@dataclass(frozen=True, slots=True)
class Unary:
    """Prefix ``+ - @`` or postfix ``% #`` on an operand."""

    operator: str
    operand: Node


@dataclass(frozen=True, slots=True)
class Binary:
    """``+ - * / ^ & = <> < <= > >=``, and on references ``:`` (range), ``,`` (union), `` `` (intersection)."""

    operator: str
    left: Node
    right: Node


@dataclass(frozen=True, slots=True)
class Call:
    """A function call; `name` in capitals without a storage prefix such as ``_xlfn.``."""

    name: str
    arguments: tuple[Node, ...]


@dataclass(frozen=True, slots=True)
class Apply:
    """A call of what an expression gives, as in ``LAMBDA(x, x+1)(3)``."""

    function: Node
    arguments: tuple[Node, ...]


@dataclass(frozen=True, slots=True)
class ArrayLiteral:
    """An array constant, row by row."""

    rows: tuple[tuple[Node, ...], ...]


Node = (
    Number
    | Text
    | Logical
    | ErrorLiteral
    | Omitted
    | CellRef
    | RangeRef
    | NameRef
    | TableRef
    | ExternalRef
    | Unary
    | Binary
    | Call
    | Apply
    | ArrayLiteral
)


def nodes(tree: Node | None) -> Iterator[Node]:
    """Yield every node of a syntax tree.

    Parameters
    ----------
    tree : Node or None
    """
    work: list[object] = [tree]
    while work:
        node = work.pop()
        if isinstance(node, tuple):
            work += node
        elif is_dataclass(node):
            yield cast(Node, node)
            work += [getattr(node, item.name) for item in fields(node)]
