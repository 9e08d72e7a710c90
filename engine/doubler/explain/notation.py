"""Writing a formula's tree as it would stand in a hand calculation."""

from __future__ import annotations

from collections.abc import Callable

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

_STRENGTH = {
    "=": 1, "<>": 1, "<": 1, "<=": 1, ">": 1, ">=": 1, "&": 2, "+": 3, "-": 3, "*": 4, "/": 4, "^": 5,
    ",": 8, " ": 8, ":": 9,
}  # fmt: skip
_SIGNS = {"*": " × ", "/": " / ", "+": " + ", "-": " − ", "^": "^", "<=": " ≤ ", ">=": " ≥ ", "<>": " ≠ "}
_ATOM = 10

Reference = Callable[[Node], str]
"""Writes a reference: its symbol, or its number with its unit."""


def written(node: Node, reference: Reference) -> str:
    """Write a tree.

    Parameters
    ----------
    node : Node
    reference : callable
        Writes each reference.

    Returns
    -------
    str
        With ``×`` and ``−``, and no more brackets than the order of operations needs; a power of a negated number is
        written with the brackets that the spreadsheet thinks: ``(−2)^2``.
    """
    return _write(node, reference)[0]


def _write(node: Node, reference: Reference) -> tuple[str, int]:
    if isinstance(node, CellRef | RangeRef | NameRef | TableRef | ExternalRef):
        text = reference(node)
        return text, 4 if " " in text and not text.startswith("(") else _ATOM
    if isinstance(node, Number):
        return node.text or f"{node.value:.15g}", _ATOM
    if isinstance(node, Text):
        return '"' + node.value.replace('"', '""') + '"', _ATOM
    if isinstance(node, Logical):
        return str(node.value).upper(), _ATOM
    if isinstance(node, ErrorLiteral):
        return str(node.value), _ATOM
    if isinstance(node, Omitted):
        return "", _ATOM
    if isinstance(node, Unary):
        return _unary(node, reference)
    if isinstance(node, Binary):
        return _binary(node, reference)
    if isinstance(node, Call):
        return f"{node.name}({'; '.join(written(a, reference) for a in node.arguments)})", _ATOM
    if isinstance(node, Apply):
        inner = "; ".join(written(a, reference) for a in node.arguments)
        return f"{written(node.function, reference)}({inner})", _ATOM
    assert isinstance(node, ArrayLiteral)
    rows = "; ".join(", ".join(written(cell, reference) for cell in row) for row in node.rows)
    return "{" + rows + "}", _ATOM


def _unary(node: Unary, reference: Reference) -> tuple[str, int]:
    text, strength = _write(node.operand, reference)
    if node.operator in "%#":
        return f"{_held(text, strength, 6)}{node.operator}", 6
    sign = "−" if node.operator == "-" else node.operator
    return f"{sign}{_held(text, strength, 6)}", 6 if node.operator == "@" else 3


def _binary(node: Binary, reference: Reference) -> tuple[str, int]:
    own = _STRENGTH[node.operator]
    left, left_strength = _write(node.left, reference)
    right, right_strength = _write(node.right, reference)
    tight = own if node.operator in "+*" else own + 1
    # A power binds to the left here, and a sign before its base belongs to the base.
    left = _held(left, left_strength, own + 1 if node.operator == "^" else own)
    right = _held(right, right_strength, tight)
    return f"{left}{_SIGNS.get(node.operator, f' {node.operator} ')}{right}", own


def _held(text: str, strength: int, needed: int) -> str:
    return text if strength >= needed else f"({text})"
