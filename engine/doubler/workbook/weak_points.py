"""Where the second engine is known to be weak: functions and constructs on which its answer would prove nothing.

The list was made by running the formulas of ``tests/workbook/differential`` through it, where a spreadsheet program is
the third witness (``second.yaml`` there holds every formula on which it stands alone).
"""

from __future__ import annotations

from typing import Any

from doubler.workbook.graph import Group
from doubler.workbook.natives import NATIVES
from doubler.workbook.syntax import ArrayLiteral, Binary, Call, Omitted, RangeRef, TableRef, Unary, nodes

_DATES = """DATE DATEDIF DATEVALUE DAY DAYS DAYS360 EDATE EOMONTH HOUR ISOWEEKNUM MINUTE MONTH NETWORKDAYS
NETWORKDAYS.INTL NOW SECOND TIME TIMEVALUE TODAY WEEKDAY WEEKNUM WORKDAY WORKDAY.INTL YEAR YEARFRAC"""
_TEXTS = "TEXT VALUE FIXED DOLLAR PROPER NUMBERVALUE"
_PLACES = "OFFSET INDIRECT AREAS CELL INFO ISFORMULA FORMULATEXT TYPE SHEET SHEETS"
_NUMBERS = """CEILING CEILING.MATH CEILING.PRECISE ISO.CEILING FLOOR FLOOR.MATH FLOOR.PRECISE MOD MROUND CONVERT GCD LCM
AGGREGATE SUBTOTAL MMULT MINVERSE MDETERM"""
_CHANCE = "RAND RANDBETWEEN RANDARRAY"

WEAK_FUNCTIONS = frozenset(f"{_DATES} {_TEXTS} {_PLACES} {_NUMBERS} {_CHANCE}".split())
"""Functions that the second engine computes in its own way, or not at all."""


def weakness(group: Group) -> str:
    """Return why the second engine's answer for a group of formulas would prove nothing; empty where it would.

    Parameters
    ----------
    group : Group
        Copies of one formula.

    Returns
    -------
    str
        One clause.
    """
    if group.tree is None:
        return group.reason
    if group.spills:
        return "it is a dynamic array formula"
    if group.area is not None:
        return "it is an array formula"
    if group.program is not None and any(slot.way == "meet" for slot in group.program.slots):
        return "it takes one cell of a range by implicit intersection"
    told = (_weak_node(node) for tree in (group.tree, group.resolved) for node in nodes(tree))
    return next((reason for reason in told if reason), "")


def _weak_node(node: Any) -> str:
    if isinstance(node, TableRef):
        return "it refers to a table"
    if isinstance(node, RangeRef) and node.last_sheet is not None:
        return "it refers to a span of sheets"
    if isinstance(node, Unary) and node.operator in {"@", "#"}:
        return f"it uses the operator {node.operator}"
    if isinstance(node, Binary) and node.operator in {",", " "}:
        return "it refers to a union or an intersection of ranges"
    if isinstance(node, ArrayLiteral):
        return "it holds an array constant"
    if isinstance(node, Call):
        if node.name in WEAK_FUNCTIONS:
            return f"it uses {node.name}, which the second engine computes in its own way"
        if node.name not in NATIVES and any(isinstance(argument, Omitted) for argument in node.arguments):
            return f"it leaves out an argument of {node.name}, which reaches the second engine as 0"
    return ""
