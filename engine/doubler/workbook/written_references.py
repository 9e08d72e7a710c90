"""References that a formula computes from constants: OFFSET, INDIRECT, and the range that SUMIF adds up.

What such a reference covers must be known before anything is evaluated; where it hangs on values of cells it is not
evaluated, and the reason says so.
"""

from __future__ import annotations

from dataclasses import replace
from typing import Any

from doubler.errors import ErrorValue
from doubler.workbook.coerce import CannotEvaluateError, to_number
from doubler.workbook.model import Address
from doubler.workbook.references import LAST_COLUMN, LAST_ROW, read_reference
from doubler.workbook.syntax import (
    Axis,
    Binary,
    Call,
    CellRef,
    ErrorLiteral,
    Node,
    Omitted,
    RangeRef,
    TableRef,
    Unary,
)

DYNAMIC = {"OFFSET", "INDIRECT"}
"""Functions that give a reference."""


def constant_reference(name: str, arguments: tuple[Node, ...], host: Address, sheet: str) -> Node:
    """Return the reference that a call of OFFSET or INDIRECT stands for.

    Raises
    ------
    CannotEvaluateError
        Where it depends on the values of cells.
    """
    return _indirect(arguments, host, sheet) if name == "INDIRECT" else _offset(arguments, host, sheet)


def _constant(node: Node, host: Address, sheet: str, function: str) -> Any:
    """Return the value of an expression without references to values of cells."""
    from doubler.workbook.program import Frame, compile_tree

    program = compile_tree(node, False)
    if program.slots:
        raise CannotEvaluateError(f"the place that {function} means depends on the values of cells")
    return program.run(Frame([], None, (sheet, *host), 1, False))


def _indirect(arguments: tuple[Node, ...], host: Address, sheet: str) -> Node:
    if not 1 <= len(arguments) <= 2:
        raise CannotEvaluateError(f"INDIRECT takes 1 or 2 arguments, not {len(arguments)}")
    if len(arguments) == 2 and not to_number(_constant(arguments[1], host, sheet, "INDIRECT")):
        raise CannotEvaluateError("INDIRECT reads a reference in the notation R1C1")
    text = _constant(arguments[0], host, sheet, "INDIRECT")
    if not isinstance(text, str):
        return ErrorLiteral(text if isinstance(text, ErrorValue) else ErrorValue.REF)
    found = read_reference(text.strip(), (0, 0))
    if isinstance(found, CellRef):
        return replace(found, row=_fixed(found.row), column=_fixed(found.column))
    if isinstance(found, RangeRef):
        return replace(
            found,
            first_row=_fixed(found.first_row),
            last_row=_fixed(found.last_row),
            first_column=_fixed(found.first_column),
            last_column=_fixed(found.last_column),
        )
    if isinstance(found, TableRef):
        return found
    return ErrorLiteral(ErrorValue.REF) if not text.strip() else found


def _fixed(axis: Any) -> Any:
    """Return a coordinate that was read from row 0 or column 0 as an anchored one."""
    return None if axis is None else Axis(axis.number, anchored=True)


def _offset(arguments: tuple[Node, ...], host: Address, sheet: str) -> Node:
    if not 3 <= len(arguments) <= 5:
        raise CannotEvaluateError(f"OFFSET takes 3 to 5 arguments, not {len(arguments)}")
    start = arguments[0]
    if isinstance(start, CellRef):
        start = RangeRef(start.sheet, start.row, start.column, start.row, start.column)
    if not isinstance(start, RangeRef) or start.last_sheet is not None:
        raise CannotEvaluateError("OFFSET starts from something that is no plain range")
    if start.first_row is None or start.last_row is None or start.first_column is None or start.last_column is None:
        raise CannotEvaluateError("OFFSET starts from whole rows or columns")
    numbers: list[int | None] = []
    for argument in arguments[1:]:
        value = None if isinstance(argument, Omitted) else _constant(argument, host, sheet, "OFFSET")
        number = None if value is None else to_number(value)
        if isinstance(number, ErrorValue):
            return ErrorLiteral(number)
        numbers.append(None if number is None else int(number // 1))
    numbers += [None] * (4 - len(numbers))
    rows = _stretched(start.first_row, start.last_row, numbers[0] or 0, numbers[2], host[0], LAST_ROW)
    columns = _stretched(start.first_column, start.last_column, numbers[1] or 0, numbers[3], host[1], LAST_COLUMN)
    if rows is None or columns is None:
        return ErrorLiteral(ErrorValue.REF)
    if rows[0] == rows[1] and columns[0] == columns[1]:
        return CellRef(start.sheet, rows[0], columns[0])
    return RangeRef(start.sheet, rows[0], columns[0], rows[1], columns[1])


def _stretched(first: Axis, last: Axis, shift: int, size: int | None, own: int, end: int) -> tuple[Axis, Axis] | None:
    """Return one direction of a shifted and resized range; None where it leaves the sheet or has no size."""
    begin = replace(first, number=first.number + shift)
    finish = replace(last, number=last.number + shift)
    if size is not None:
        if size == 0:
            return None
        other = replace(begin, number=begin.number + size - (1 if size > 0 else -1))
        begin, finish = (begin, other) if size > 0 else (other, begin)
    places = begin.at(own), finish.at(own)
    return (begin, finish) if min(places) >= 1 and max(places) <= end else None


def sized_like(values: Node, like: Node) -> Node:
    """Return the range that SUMIF adds up: from the first cell of `values`, of the size of the criterion's range."""
    if not isinstance(like, RangeRef) or not isinstance(values, CellRef | RangeRef):
        return values
    if isinstance(values, CellRef):
        row, column = values.row, values.column
    elif values.first_row is None or values.first_column is None:
        return values
    else:
        row, column = values.first_row, values.first_column
    ends = []
    for first, from_axis, to_axis in (
        (row, like.first_row, like.last_row),
        (column, like.first_column, like.last_column),
    ):
        if from_axis is None or to_axis is None or from_axis.anchored != to_axis.anchored:
            return values
        ends.append(replace(first, number=first.number + to_axis.number - from_axis.number))
    return RangeRef(values.sheet, row, column, ends[0], ends[1])


def around_the_edge(node: Any, host: Address) -> Any:
    """Let the relative references of a defined name that lead over the sheet's edge go on at its other side."""
    if isinstance(node, tuple):
        return tuple(around_the_edge(part, host) for part in node)
    if isinstance(node, CellRef):
        return replace(
            node, row=_wrapped(node.row, host[0], LAST_ROW), column=_wrapped(node.column, host[1], LAST_COLUMN)
        )
    if isinstance(node, RangeRef):
        return replace(
            node,
            first_row=_wrapped(node.first_row, host[0], LAST_ROW),
            last_row=_wrapped(node.last_row, host[0], LAST_ROW),
            first_column=_wrapped(node.first_column, host[1], LAST_COLUMN),
            last_column=_wrapped(node.last_column, host[1], LAST_COLUMN),
        )
    if isinstance(node, Unary):
        return replace(node, operand=around_the_edge(node.operand, host))
    if isinstance(node, Binary):
        return replace(node, left=around_the_edge(node.left, host), right=around_the_edge(node.right, host))
    if isinstance(node, Call):
        return replace(node, arguments=around_the_edge(node.arguments, host))
    return node


def _wrapped(axis: Any, own: int, end: int) -> Any:
    if axis is None or axis.anchored or 1 <= axis.at(own) <= end:
        return axis
    return Axis((axis.at(own) - 1) % end + 1 - own, anchored=False)
