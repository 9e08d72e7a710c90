"""Formula text to syntax tree, each distinct relative formula parsed once.

Copies of a filled formula differ only in their references, and not at all once these are written relative to
the formula's own cell. `relative_key` finds that form with one scan of the text, so that a column of ten
thousand copies costs ten thousand scans and one parse.
"""

from __future__ import annotations

import re
from typing import Any

from doubler.errors import ErrorValue
from doubler.workbook.model import Address
from doubler.workbook.parse_reasons import why_unparsed
from doubler.workbook.references import column_number, read_reference, without_prefix
from doubler.workbook.syntax import (
    Apply,
    ArrayLiteral,
    Binary,
    Call,
    ErrorLiteral,
    Logical,
    Node,
    Number,
    Omitted,
    Text,
    Unary,
)

LONGEST_FORMULA = 8192
"""The limit of the file format on a formula's length, in characters."""

_SCAN = re.compile(
    r"""
      "(?:[^"]|"")*"                                   # text
    | '(?:[^']|'')*'                                   # quoted sheet name
    | \[[^\[\]]*\]                                     # table columns, workbook numbers
    | (?<![\w.\\$])(\$?)([A-Za-z]{1,3})(\$?)([0-9]{1,7})(?![\w.(\\!\[])(?!:[\w.]+!)     # one cell
    | (?<![\w.\\$])(\$?)([A-Za-z]{1,3}):(\$?)([A-Za-z]{1,3})(?![\w.(\\!\[])             # whole columns
    | (?<![\w.\\$:])(\$?)([0-9]{1,7}):(\$?)([0-9]{1,7})(?![\w.(!])                      # whole rows
    """,
    re.VERBOSE,
)

_FIRST_MARK = 0xE000
"""Marks are characters of the private use area, which no formula needs."""
_MOST_MARKS = 16

_columns: dict[str, int] = {}


class FormulaError(ValueError):
    """The formula's text cannot be parsed; the message says why."""


def relative_key(text: str, host: Address) -> str:
    """Return the formula's text with its references written relative to its own cell.

    Two formulas have equal keys exactly where one is a filled copy of the other.

    Examples
    --------
    >>> relative_key("A1*$B$1", (1, 3)) == relative_key("A7*$B$1", (7, 3))
    True
    >>> relative_key("A1*B1", (1, 3)) == relative_key("A7*$B$1", (7, 3))
    False
    """
    own_row, own_column = host

    def replace(match: re.Match[str]) -> str:
        kind = match.lastindex
        if kind is None:
            return match.group()
        if kind == 4:
            column_mark, letters, row_mark, digits = match.group(1, 2, 3, 4)
            column = _columns.get(letters) or _columns.setdefault(letters, column_number(letters))
            row = digits if row_mark else f"~{int(digits) - own_row}"
            return f"\x01{row},{column}" if column_mark else f"\x01{row},~{column - own_column}"
        if kind == 8:
            ends = [
                (match.group(5), column_number(match.group(6))),
                (match.group(7), column_number(match.group(8))),
            ]
            own = own_column
        else:
            ends = [(match.group(9), int(match.group(10))), (match.group(11), int(match.group(12)))]
            own = own_row
        return "\x02" + ":".join(str(n) if mark else f"~{n - own}" for mark, n in ends)

    return _SCAN.sub(replace, text)


def _fill_down(text: str, row: int) -> tuple[str, tuple[tuple[str, int], ...]] | None:
    """Return a formula's text with marks in place of its relative rows, and the offset that each mark stands for.

    None where its copies below are not this text with other row numbers.
    """
    marks: dict[int, str] = {}
    pieces: list[str] = []
    done = 0
    for match in _SCAN.finditer(text):
        if match.lastindex == 4 and not match[3]:
            offset = int(match[4]) - row
            pieces += (text[done : match.start(4)], marks.setdefault(offset, chr(_FIRST_MARK + len(marks))))
            done = match.end()
        elif match.lastindex == 12 and not (match[9] and match[11]):
            return None
    pieces.append(text[done:])
    if len(marks) > _MOST_MARKS or any(chr(_FIRST_MARK + at) in text for at in range(len(marks))):
        return None
    return "".join(pieces), tuple((mark, offset) for offset, mark in marks.items())


class FormulaParser:
    """Parses formulas, once for each distinct relative formula."""

    def __init__(self) -> None:
        self._trees: dict[str, Node | FormulaError] = {}
        self._last: dict[int, Node] = {}
        self._fills: dict[int, tuple[str, tuple[tuple[str, int], ...], Node]] = {}

    def tree(self, text: str, host: Address) -> Node:
        """Return the syntax tree of a formula at `host`; copies of one formula share one tree.

        Where a column is being filled down, the text of the next copy is foretold and only compared.

        Raises
        ------
        FormulaError
            Where the text is no formula.
        """
        row, column = host
        fill = self._fills.get(column)
        if fill is not None:
            foretold, marks, tree = fill
            for mark, offset in marks:
                foretold = foretold.replace(mark, str(row + offset))
            if foretold == text:
                return tree
            del self._fills[column]
        found = self._scanned(text, host)
        if self._last.get(column) is found:
            pattern = _fill_down(text, row)
            if pattern is not None:
                self._fills[column] = (*pattern, found)
        self._last[column] = found
        return found

    def _scanned(self, text: str, host: Address) -> Node:
        key = relative_key(text, host)
        tree = self._trees.get(key)
        if tree is None:
            try:
                tree = parse(text, host)
            except FormulaError as error:
                tree = error
            self._trees[key] = tree
        if isinstance(tree, FormulaError):
            raise tree
        return tree


def parse(text: str, host: Address = (1, 1)) -> Node:
    """Parse a formula, with or without its leading ``=``, as it stands in the cell `host`.

    Raises
    ------
    FormulaError
        Where the text is no formula.

    Examples
    --------
    >>> parse("1.50*A1", (1, 2))
    Binary(operator='*', left=Number(value=1.5, text='1.50'), right=CellRef(sheet=None, row=Axis(number=0, \
anchored=False), column=Axis(number=-1, anchored=False)))
    """
    import formualizer

    body = text[1:] if text.startswith("=") else text
    if len(body) > LONGEST_FORMULA:
        raise FormulaError(f"the formula has {len(body)} characters; the file format allows {LONGEST_FORMULA}")
    try:
        parsed = formualizer.parse("=" + body)
        return _node(parsed, host)
    except FormulaError:
        raise
    except RecursionError:
        raise FormulaError("the formula is nested too deeply") from None
    except Exception as error:  # the parser's own exception types share no documented root
        raise FormulaError(f"the formula cannot be parsed: {why_unparsed(body, error)}") from error


def _node(parsed: Any, host: Address) -> Node:
    kind = parsed.node_type()
    if kind == "Literal":
        return _literal(parsed)
    if kind == "Reference":
        token = parsed.get_source_token()
        return read_reference(token.value if token is not None else parsed.get_reference_string(), host)
    if kind == "Omitted":
        return Omitted()
    children = parsed.children()
    if kind == "BinaryOp":
        return _binary(parsed.get_operator(), _node(children[0], host), _node(children[1], host))
    if kind == "UnaryOp":
        return _unary(parsed.get_operator(), _node(children[0], host))
    if kind == "Function":
        name = without_prefix(parsed.get_function_name()).upper()
        arguments = tuple(_node(child, host) for child in children)
        if name == "SINGLE" and len(arguments) == 1:
            return Unary("@", arguments[0])
        if name == "ANCHORARRAY" and len(arguments) == 1:
            return Unary("#", arguments[0])
        return Call(name, arguments)
    if kind == "Array":
        return _array(parsed, host)
    if kind == "Call":
        return Apply(_node(children[0], host), tuple(_node(child, host) for child in children[1:]))
    raise FormulaError(f"the formula holds a construct that is not known here: {kind}")


def _binary(operator: str, left: Node, right: Node) -> Node:
    from doubler.workbook.syntax import CellRef, RangeRef

    if (
        operator == ":"
        and isinstance(left, CellRef)
        and isinstance(right, CellRef)
        and (right.sheet is None or (left.sheet or "").casefold() == right.sheet.casefold())
    ):
        # Sheet1!A1:Sheet1!B3 is one rectangle.
        return RangeRef(left.sheet, left.row, left.column, right.row, right.column)
    return Binary(operator, left, right)


def _unary(operator: str, operand: Node) -> Node:
    # Inside an array constant a sign belongs to its number; elsewhere too it changes nothing to keep it
    # apart.
    return Unary(operator, operand)


def _literal(parsed: Any) -> Node:
    value = parsed.get_literal_value()
    token = parsed.get_source_token()
    typed = token.value if token is not None else ""
    if isinstance(value, bool):
        return Logical(value)
    if isinstance(value, int | float):
        return Number(float(value), typed)
    if isinstance(value, str):
        if typed.startswith("#") or (not typed and value.startswith("#")):
            try:
                return ErrorLiteral(ErrorValue(value.upper()))
            except ValueError:
                raise FormulaError(f"{value} is no error value that is known here") from None
        return Text(value)
    raise FormulaError(f"the formula holds a constant that is not known here: {value!r}")


def _array(parsed: Any, host: Address) -> Node:
    """Read an array constant; its rows come from the dictionary form, its items in order from the children."""
    items = iter(parsed.children())
    rows = []
    for row in parsed.to_dict()["rows"]:
        cells = []
        for _ in row:
            node = _node(next(items), host)
            if isinstance(node, Unary) and isinstance(node.operand, Number) and node.operator in "+-":
                sign = -1.0 if node.operator == "-" else 1.0
                node = Number(sign * node.operand.value, node.operator + node.operand.text)
            cells.append(node)
        rows.append(tuple(cells))
    if len({len(row) for row in rows}) != 1:
        raise FormulaError("the rows of an array constant differ in length")
    return ArrayLiteral(tuple(rows))
