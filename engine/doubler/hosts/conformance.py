"""One workbook with every worksheet function in each argument form, generated from the catalogue, and its comparison.

The calls are the documented examples, restated in every form of the contract. The expected values are what the Python
call of the same cells gives; a spreadsheet program that shows others differs from the tool itself.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from doubler import catalogue, mechanics
from doubler.catalogue import Argument, WorksheetFunction
from doubler.catalogue.annotations import Quantity
from doubler.errors import ErrorValue
from doubler.units import UnitError, consistent_set, convert, kind, parse_quantity, parse_unit

TOLERANCE = 1e-12
SHEET = "calls"
RESULT_COLUMN = 3
"""Where the result of each call begins: column C."""
WIDTH = 12
"""Columns kept free for a result."""
SET = "N-mm"

Grid = list[list[Any]]


@dataclass(frozen=True, slots=True)
class Call:
    """One call: a function, the form of its arguments, their cells (None where left out), the cells expected."""

    function: str
    form: str
    arguments: tuple[Grid | None, ...]
    expected: Grid


@dataclass(frozen=True, slots=True)
class Placed:
    """A call in the workbook: its formula, the block of its result (A1 address), and its inputs by cell."""

    call: Call
    formula: str
    row: int
    block: str


def calls() -> list[Call]:
    """Return every call, in the order of the catalogue."""
    mechanics.load()
    found = []
    for name in catalogue.names():
        function = catalogue.lookup(name)
        if function is not None:
            found += list(_calls_of(function))
    return found


def _calls_of(function: WorksheetFunction) -> Iterable[Call]:
    documented = example_arguments(function)
    given = _result_last(function, documented)
    seen: list[Any] = []
    for form, restate in _FORMS.items():
        restated = documented if form == "as documented" else restate(function, given)
        if restated is None or restated in seen:
            continue
        seen.append(restated)
        while restated and restated[-1] is None:
            restated = restated[:-1]
        result = catalogue.call_cells(function, [_plain(argument) for argument in restated])
        yield Call(function.name, form, tuple(restated), [list(row) for row in result.grid])


def _plain(argument: Grid | None) -> Any:
    return None if argument is None else [list(row) for row in argument]


def example_arguments(function: WorksheetFunction) -> list[Grid | None]:
    """Return the arguments of the documented example as blocks of cells."""
    from formualizer import parse

    tree = parse(function.documentation.example).to_dict()
    return [_block(node) for node in tree["args"]]


def _result_last(function: WorksheetFunction, given: list[Grid | None]) -> list[Grid | None]:
    """Put the unit wanted at its own, last place, where the example has it right after the arguments it gives."""
    count = len(function.arguments)
    own = function.arguments[len(given) - 1] if 0 < len(given) <= count else None
    early = own is not None and not own.is_text and given[-1] is not None and _names_no_quantity(given[-1])
    wanted = given[-1] if early or len(given) > count else None
    kept = given[:-1] if early else given[:count]
    return [*kept, *[None] * (count - len(kept)), wanted]


def _names_no_quantity(block: Grid) -> bool:
    cell = block[0][0]
    return _size(block) == 1 and isinstance(cell, str) and not any(char.isdigit() for char in cell[:2])


def _block(node: dict[str, Any]) -> Grid | None:
    if node["node_type"] == "Omitted":
        return None
    if node["node_type"] == "Array":
        return [[_literal(item) for item in row] for row in node["rows"]]
    if node["node_type"] == "Function":
        inner = catalogue.lookup(node["name"])
        if inner is None:
            raise ValueError(f"an example calls {node['name']}")
        return catalogue.call_cells(inner, [_block(item) for item in node["args"]]).grid
    return [[_literal(node)]]


def _literal(node: dict[str, Any]) -> Any:
    if node["node_type"] == "UnaryOp":
        return -_literal(node["operand"]) if node["operator"] == "-" else _literal(node["operand"])
    value = node["value"]
    return float(value) if isinstance(value, int) and not isinstance(value, bool) else value


# -- the forms ---------------------------------------------------------------------------------------------------------


def _each_scalar(
    function: WorksheetFunction, given: list[Grid | None], change: Callable[[Argument, float, str], Grid | None]
) -> list[Grid | None] | None:
    """Restate every scalar quantity; None where there is none or one cannot be restated."""
    restated = list(given)
    changed = False
    for index, argument in enumerate(function.arguments):
        block = given[index]
        if block is None or argument.is_text or argument.entries or _size(block) != 1:
            continue
        cell = block[0][0]
        if not isinstance(cell, str):
            continue
        try:
            value, unit = parse_quantity(cell)
        except UnitError:
            continue
        new = change(argument, value, unit.text)
        if new is None:
            return None
        restated[index] = new
        changed = True
    return restated if changed else None


def _size(block: Grid) -> int:
    return len(block) * len(block[0])


def _pairs(function: WorksheetFunction, given: list[Grid | None]) -> list[Grid | None] | None:
    return _each_scalar(function, given, lambda _, value, unit: [[value, unit]])


def _headed_columns(function: WorksheetFunction, given: list[Grid | None]) -> list[Grid | None] | None:
    if function.result.size:
        return None
    return _each_scalar(
        function, given, lambda a, value, unit: [[f"{a.name} [{unit}]"], [value], [value * 1.0009765625]]
    )


def _headed_rows(function: WorksheetFunction, given: list[Grid | None]) -> list[Grid | None] | None:
    if function.result.extra_axes:
        return None
    return _each_scalar(function, given, lambda _, value, unit: [[unit, value, value * 1.0009765625]])


def _paired_columns(function: WorksheetFunction, given: list[Grid | None]) -> list[Grid | None] | None:
    if function.result.size:
        return None
    return _each_scalar(function, given, lambda _, value, unit: [[value, unit], [value * 1.0009765625, unit]])


def _bare(function: WorksheetFunction, given: list[Grid | None]) -> list[Grid | None] | None:
    chosen = consistent_set(SET)
    assert chosen is not None

    def bare(argument: Argument, value: float, unit: str) -> Grid | None:
        if not isinstance(argument.quantity, Quantity):
            return None
        own = kind(argument.quantity.kind)
        try:
            target = parse_unit("1") if own.dimensionless else chosen.bare_input(own.name)
            return [[float(convert(value, parse_unit(unit), target))]]
        except UnitError:
            return None

    restated = _each_scalar(function, given, bare)
    return None if restated is None else [*restated[:-1], [[SET]]]


def _without_first(function: WorksheetFunction, given: list[Grid | None]) -> list[Grid | None] | None:
    """Give an empty cell for the first argument: an error in every host.

    Where the example has a bare zero there, another unit is wanted: LibreOffice cannot tell two calls from one another
    that differ in nothing but an empty cell and a zero, and says so in both (docs/hosts.md).
    """
    if function.arguments[0].is_text:
        return None
    wanted = [["lbf-in"]] if given[0] == [[0.0]] else given[-1]
    return [[[None]], *given[1:-1], wanted]


_FORMS: dict[str, Callable[[WorksheetFunction, list[Grid | None]], list[Grid | None] | None]] = {
    "as documented": lambda _, given: given,
    "pairs": _pairs,
    "headed columns": _headed_columns,
    "headed rows": _headed_rows,
    "paired columns": _paired_columns,
    "bare numbers and a set": _bare,
    "first argument empty": _without_first,
}


# -- the workbook ------------------------------------------------------------------------------------------------------


def placed(known: Sequence[Call]) -> tuple[list[Placed], dict[tuple[int, int], Any]]:
    """Lay the calls out on the sheet: name, form, result, then the inputs to the right."""
    from openpyxl.utils import get_column_letter

    found: list[Placed] = []
    cells: dict[tuple[int, int], Any] = {}
    row = 2
    for call in known:
        column = RESULT_COLUMN + WIDTH
        references: list[str] = []
        for argument in call.arguments:
            if argument is None:
                references.append("")
                continue
            for r, line in enumerate(argument):
                for c, value in enumerate(line):
                    if value is not None:
                        cells[row + r, column + c] = value
            first = f"{get_column_letter(column)}{row}"
            last = f"{get_column_letter(column + len(argument[0]) - 1)}{row + len(argument) - 1}"
            references.append(first if first == last else f"{first}:{last}")
            column += len(argument[0]) + 1
        while references and not references[-1]:
            references.pop()
        cells[row, 1], cells[row, 2] = call.function, call.form
        high, wide = len(call.expected), len(call.expected[0])
        corner = f"{get_column_letter(RESULT_COLUMN)}{row}"
        block = f"{corner}:{get_column_letter(RESULT_COLUMN + wide - 1)}{row + high - 1}"
        found.append(Placed(call, f"{call.function}({','.join(references)})", row, block))
        row += max(high, *(len(a) for a in call.arguments if a is not None)) + 1
    return found, cells


def write_workbook(target: Path, known: Sequence[Call]) -> list[Placed]:
    """Write the workbook, formulas without stored values; return where each call stands."""
    import io

    import openpyxl
    from openpyxl.worksheet.formula import ArrayFormula

    from doubler.workbook.output import write_file

    book = openpyxl.Workbook()
    sheet = book.active
    sheet.title = SHEET
    where, cells = placed(known)
    for (row, column), value in [((1, 1), "function"), ((1, 2), "arguments"), ((1, 3), "result"), *cells.items()]:
        sheet.cell(row, column).value = value
    for item in where:
        corner = item.block.split(":")[0]
        sheet[corner] = ArrayFormula(item.block, "=" + item.formula)
    packed = io.BytesIO()
    book.save(packed)
    write_file(target, [packed.getvalue()])
    return where


def differences(shown: Grid, call: Call) -> list[str]:
    """Compare what a program shows with what is expected: numbers to 1e-12, text as it is, errors in kind.

    Parameters
    ----------
    shown : list of rows
        Numbers, text, `ErrorValue`; None for an empty cell.
    call : Call

    Returns
    -------
    list of str
        One sentence a differing cell; empty where all agree.
    """
    found = []
    scale = _scale(call.expected)
    for r, line in enumerate(call.expected):
        for c, expected in enumerate(line):
            value = shown[r][c] if r < len(shown) and c < len(shown[r]) else None
            if not _alike(value, expected, scale):
                where = f"{call.function}, {call.form}, row {r + 1} column {c + 1}"
                found.append(f"{where}: shows {_said(value)}, expected {_said(expected)}")
    return found


def _scale(grid: Grid) -> float:
    numbers = [abs(float(v)) for row in grid for v in row if isinstance(v, float | int | np.floating)]
    return max(numbers, default=0.0)


def _alike(value: Any, expected: Any, scale: float) -> bool:
    if isinstance(expected, ErrorValue) or isinstance(value, ErrorValue):
        return value is expected
    if expected is None or expected == "":
        return value is None or value == ""
    if isinstance(expected, str):
        return bool(value == expected)
    if isinstance(value, str) or value is None:
        return False
    return bool(abs(float(value) - float(expected)) <= TOLERANCE * max(abs(float(expected)), 1e-3 * scale))


def _said(value: Any) -> str:
    return repr(float(value)) if isinstance(value, float | int | np.floating) else str(value)
