"""Calls through formualizer's own workbook, with our functions registered by callback."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any

import formualizer

from doubler import catalogue, mechanics
from doubler.errors import ErrorValue
from doubler.hosts import conformance

KINDS = {
    ErrorValue.NULL: "Null",
    ErrorValue.DIV0: "Div",
    ErrorValue.VALUE: "Value",
    ErrorValue.REF: "Ref",
    ErrorValue.NAME: "Name",
    ErrorValue.NUM: "Num",
    ErrorValue.NA: "Na",
}
"""What that engine calls the error values."""
_VALUES = {kind: value for value, kind in KINDS.items()}


def shown_by_formualizer(known: Sequence[conformance.Call]) -> list[list[list[Any]]]:
    """Lay the calls out as in the conformance workbook, and return the cells of each as that engine computes them."""
    where, cells = conformance.placed(known)
    book = formualizer.Workbook()
    book.add_sheet(conformance.SHEET)
    mechanics.load()
    left_out: set[int] = set()
    for name in catalogue.names():
        book.register_function(name, _callback(name, left_out), max_args=None)
    for (row, column), value in cells.items():
        if value is not None:
            book.set_value(conformance.SHEET, row, column, value)
    found = []
    for item in where:
        book.set_formula(conformance.SHEET, item.row, conformance.RESULT_COLUMN, "=" + item.formula)
        high, wide = len(item.call.expected), len(item.call.expected[0])
        targets = [
            (conformance.SHEET, item.row + r, conformance.RESULT_COLUMN + c) for r in range(high) for c in range(wide)
        ]
        left_out.clear()
        left_out.update(index for index, argument in enumerate(item.call.arguments) if argument is None)
        values = [_read(value) for value in book.evaluate_cells(targets)]
        found.append([values[r * wide : (r + 1) * wide] for r in range(high)])
    return found


def _callback(name: str, left_out: set[int]) -> Callable[..., Any]:
    function = catalogue.lookup(name)
    assert function is not None

    def call(*arguments: Any) -> Any:
        # That engine hands over 0.0 for an argument left out, which looks like a zero; so it is told from outside.
        given = [None if index in left_out else _given(argument) for index, argument in enumerate(arguments)]
        grid = [[_shown(value) for value in row] for row in catalogue.call_cells(function, given).grid]
        return grid[0][0] if len(grid) == 1 and len(grid[0]) == 1 else grid

    return call


def _given(argument: Any) -> Any:
    rows = argument if isinstance(argument, list) else [[argument]]
    return [[_read(cell) for cell in row] for row in rows]


def _read(value: Any) -> Any:
    return _VALUES[value["kind"]] if isinstance(value, dict) else value


def _shown(value: Any) -> Any:
    if isinstance(value, ErrorValue):
        return {"type": "Error", "kind": KINDS[value]}
    return value or "" if isinstance(value, str) or value is None else float(value)
