"""What a formula asks of a cell itself and not of its value: ISFORMULA, FORMULATEXT, CELL.

Such facts are known before anything is evaluated: each call is replaced by what it gives for the one cell in which it
stands.
"""

from __future__ import annotations

from dataclasses import fields, is_dataclass, replace
from typing import Any

from doubler.errors import ErrorValue
from doubler.workbook.coerce import CannotEvaluateError
from doubler.workbook.geometry import Geometry, OutsideError, Place, Run
from doubler.workbook.model import Workbook
from doubler.workbook.references import column_letters
from doubler.workbook.syntax import Call, CellRef, ErrorLiteral, Logical, Node, Number, RangeRef, Text, nodes

NAMES = {"ISFORMULA", "FORMULATEXT", "CELL"}


def asks_of_cells(tree: Node | None) -> bool:
    """Say whether a formula asks for a fact of a cell."""
    return any(isinstance(node, Call) and node.name in NAMES for node in nodes(tree))


def with_facts(tree: Any, run: Run, workbook: Workbook, geometry: Geometry) -> Any:
    """Return a formula with the facts that it asks for in place of the calls that ask.

    Parameters
    ----------
    tree : Node
        Resolved.
    run : Run
        The one cell in which it stands.
    workbook : Workbook
    geometry : Geometry

    Raises
    ------
    CannotEvaluateError
        Where it asks for something that the file does not tell.
    """
    if isinstance(tree, tuple):
        return tuple(with_facts(item, run, workbook, geometry) for item in tree)
    if isinstance(tree, Call) and tree.name in NAMES:
        return _fact(tree, run, workbook, geometry)
    if not is_dataclass(tree) or isinstance(tree, type):
        return tree
    changes = {}
    for item in fields(tree):
        before = getattr(tree, item.name)
        after = with_facts(before, run, workbook, geometry)
        if after is not before and after != before:
            changes[item.name] = after
    return replace(tree, **changes) if changes else tree


def _fact(call: Call, run: Run, workbook: Workbook, geometry: Geometry) -> Node:
    wanted = call.arguments[0] if call.name == "CELL" and call.arguments else None
    if len(call.arguments) != (2 if call.name == "CELL" else 1):
        raise CannotEvaluateError(f"{call.name} is not told of which cell")
    node = call.arguments[-1]
    if not isinstance(node, CellRef | RangeRef):
        raise CannotEvaluateError(f"{call.name} of a reference that is computed is not evaluated here")
    try:
        place = geometry.places(node, run)[0]
    except OutsideError:
        return ErrorLiteral(ErrorValue.REF)
    index, area = place
    cell = workbook.sheets[index].cells.get((area.first_row, area.first_column))
    formula = None if cell is None else cell.formula
    if call.name == "ISFORMULA":
        return Logical(formula is not None)
    if call.name == "FORMULATEXT":
        return ErrorLiteral(ErrorValue.NA) if formula is None else Text(_written(formula, cell))
    if not isinstance(wanted, Text):
        raise CannotEvaluateError("CELL is told by a formula what to give, which is not evaluated here")
    return _told(wanted.value.casefold(), node, place, run, workbook)


def _written(formula: str, cell: Any) -> str:
    return f"{{={formula}}}" if cell.array_range is not None and not cell.dynamic else f"={formula}"


def _told(wanted: str, node: CellRef | RangeRef, place: Place, run: Run, workbook: Workbook) -> Node:
    index, area = place
    if wanted == "row":
        return Number(float(area.first_row))
    if wanted == "col":
        return Number(float(area.first_column))
    if wanted == "address":
        name = workbook.sheets[index].name
        beyond = "" if index == run.sheet else f"{name}!" if name.isalnum() else "'" + name.replace("'", "''") + "'!"
        return Text(f"{beyond}${column_letters(area.first_column)}${area.first_row}")
    first = CellRef(node.sheet, node.row, node.column) if isinstance(node, CellRef) else _first(node)
    if wanted == "contents":
        return first
    if wanted == "type":
        text = Call("IF", (Call("ISTEXT", (first,)), Text("l"), Text("v")))
        return Call("IF", (Call("ISBLANK", (first,)), Text("b"), text))
    raise CannotEvaluateError(f'CELL("{wanted}") depends on the program and its window, so it is not evaluated')


def _first(node: RangeRef) -> CellRef:
    if node.first_row is None or node.first_column is None or node.last_sheet is not None:
        raise CannotEvaluateError("CELL of whole rows, columns or sheets is not evaluated here")
    return CellRef(node.sheet, node.first_row, node.first_column)
