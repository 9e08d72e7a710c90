"""How a formula uses what it refers to: as a number, in a total, as text, or only to ask whether it is there."""

from __future__ import annotations

from dataclasses import dataclass

from doubler.workbook.natives import NATIVES
from doubler.workbook.syntax import (
    Apply,
    ArrayLiteral,
    Binary,
    Call,
    CellRef,
    Node,
    Number,
    RangeRef,
    Text,
    Unary,
)

ARITHMETIC, TOTAL, COMPARED, PASSED, OTHER = "arithmetic", "total", "compared", "passed", "other"
"""Reckoned with (text is read as a number, an empty cell as 0); part of a sum or extreme (text is skipped); compared;
handed on as it is; anything else."""

_RECKONING = {
    "rounded", "number", "pure", "root:2", "power", "product", "ratio_of_two", "angle_in", "angle_out", "angle_of_two",
    "to_radians", "to_degrees", "sign",
}  # fmt: skip
_TOTALS = {
    "SUM", "MIN", "MAX", "AVERAGE", "PRODUCT", "SUMSQ", "STDEV", "STDEV.S", "STDEV.P", "STDEVP", "VAR", "VAR.S",
    "VAR.P", "VARP", "MEDIAN", "LARGE", "SMALL", "GEOMEAN", "SUMPRODUCT", "SUBTOTAL", "AGGREGATE", "PERCENTILE",
    "QUARTILE", "PERCENTILE.INC", "SLOPE", "INTERCEPT", "RSQ", "CORREL", "LINEST", "FORECAST", "TREND",
}  # fmt: skip
_ASKING = {
    "ISBLANK", "ISNUMBER", "ISTEXT", "ISERROR", "ISERR", "ISNA", "ISLOGICAL", "ISNONTEXT", "LEN", "COUNT", "COUNTA",
    "COUNTBLANK", "N", "T", "TYPE", "IFERROR", "IFNA", "TRIM",
}  # fmt: skip
_BRANCHING = {"IF": 1, "IFS": 0, "CHOOSE": 1, "SWITCH": 1, "IFERROR": 0, "IFNA": 0}


@dataclass(frozen=True, slots=True)
class Use:
    """One reference and what is done with it."""

    node: CellRef | RangeRef
    how: str


def uses_of(tree: Node) -> tuple[list[Use], set[Node]]:
    """Return the uses of a formula's references, and the references that it tests before using them.

    Parameters
    ----------
    tree : Node

    Returns
    -------
    uses : list of Use
    tested : set of Node
        References that are compared, or asked whether they are blank, a number or text.
    """
    uses: list[Use] = []
    tested: set[Node] = set()
    _walk(tree, PASSED, uses, tested)
    return uses, tested


def _walk(node: Node, how: str, uses: list[Use], tested: set[Node]) -> None:
    if isinstance(node, CellRef | RangeRef):
        uses.append(Use(node, how))
    elif isinstance(node, Unary):
        _walk(node.operand, how if node.operator in "@#" else ARITHMETIC, uses, tested)
    elif isinstance(node, Binary):
        _binary(node, uses, tested)
    elif isinstance(node, Call):
        _call(node, how, uses, tested)
    elif isinstance(node, Apply):
        for part in (node.function, *node.arguments):
            _walk(part, OTHER, uses, tested)
    elif isinstance(node, ArrayLiteral):
        return


def _binary(node: Binary, uses: list[Use], tested: set[Node]) -> None:
    if node.operator in "+-*/^":
        how = ARITHMETIC
    elif node.operator in ("=", "<>", "<", "<=", ">", ">="):
        how = COMPARED
        for side, other in ((node.left, node.right), (node.right, node.left)):
            if isinstance(side, CellRef) and isinstance(other, Text | Number):
                tested.add(side)
    else:
        how = OTHER
    _walk(node.left, how, uses, tested)
    _walk(node.right, how, uses, tested)


def _call(node: Call, how: str, uses: list[Use], tested: set[Node]) -> None:
    name = node.name
    native = NATIVES.get(name)
    for index, argument in enumerate(node.arguments):
        if name in _ASKING and isinstance(argument, CellRef | RangeRef):
            tested.add(argument)
        if name in _BRANCHING and index >= _BRANCHING[name]:
            inner = how
        elif name in _TOTALS:
            inner = TOTAL
        elif native is not None and native.units in _RECKONING:
            inner = ARITHMETIC
        else:
            inner = OTHER
        _walk(argument, inner, uses, tested)
