"""The second recalculation: an independent engine beside ours, cell by cell.

The other engine reads the file itself and evaluates it itself; only our own worksheet functions are lent to it by
callback. Where it is known to be weak its answer is not asked for, and neither is that of any cell which depends on
such a one: a cell is a match, a difference, or not evaluated with the reason, and a weakness never makes a difference.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from typing import Any

from doubler.errors import ErrorValue
from doubler.workbook.evaluation import Evaluation, NotEvaluated, Where
from doubler.workbook.graph import Graph
from doubler.workbook.model import Address, Cell
from doubler.workbook.syntax import Call, nodes
from doubler.workbook.weak_points import weakness

RELATIVE = 1e-9
SECONDS = 20
"""The other engine stops after this time, and what it has not reached is not evaluated."""

_KINDS = {
    "Div": ErrorValue.DIV0,
    "Value": ErrorValue.VALUE,
    "Num": ErrorValue.NUM,
    "Na": ErrorValue.NA,
    "Ref": ErrorValue.REF,
    "Name": ErrorValue.NAME,
    "Null": ErrorValue.NULL,
    "Calc": ErrorValue.CALC,
    "Spill": ErrorValue.SPILL,
}
_NAMES = {value: kind for kind, value in _KINDS.items()}
_LONG_NUMBER = re.compile(r"\d*\.\d{9,}(?:[eE][+-]?\d+)?")
_CANNOT = {
    "NImpl": "the second engine does not know a function in it",
    "Circ": "the second engine takes it for a circular reference",
    "Spill": "its result of several cells has no room in the second engine",
    "Cancelled": "the second engine ran out of time",
}


@dataclass(frozen=True, slots=True)
class Difference:
    """A cell on which the two engines do not agree."""

    where: Where
    ours: Any
    theirs: Any


@dataclass
class SecondRecalculation:
    """What the second engine says of each formula cell.

    Attributes
    ----------
    matches
        The cells on which both agree.
    differences
        Those on which they do not.
    not_evaluated
        The others, by reason.
    """

    matches: list[Where] = field(default_factory=list)
    differences: list[Difference] = field(default_factory=list)
    not_evaluated: dict[str, list[Where]] = field(default_factory=dict)

    def verdict(self, where: Where) -> str:
        """Return ``match``, ``differ``, or why a cell was not evaluated."""
        if where in set(self.matches):
            return "match"
        if any(found.where == where for found in self.differences):
            return "differ"
        return next(reason for reason, cells in self.not_evaluated.items() if where in cells)

    def as_object(self) -> dict[str, int]:
        """Return the counts, for the JSON of a check."""
        return {
            "match": len(self.matches),
            "differ": len(self.differences),
            "not_evaluated": sum(map(len, self.not_evaluated.values())),
        }


def recalculate(graph: Graph, values: Evaluation) -> SecondRecalculation:
    """Let the second engine recalculate a workbook's file and compare it with our evaluation.

    Parameters
    ----------
    graph : Graph
        The workbook; its path is read again by the other engine.
    values : Evaluation
        Ours, over one case.

    Returns
    -------
    SecondRecalculation
        Every formula cell is in it once.
    """
    result = SecondRecalculation()
    reasons = _weak(graph)
    theirs: Callable[[Where], Any] | str
    theirs = _engine(graph) if any(reason == "" for reason in reasons) else ""
    for where, _, group in _cells(graph):
        ours = values.value(*where)
        reason = reasons[group] if group is not None else "it is filled by a spill"
        if isinstance(ours, NotEvaluated):
            reason = f"ours is not evaluated either: {ours.reason}"
        elif not reason and isinstance(theirs, str):
            reason = theirs
        if reason or isinstance(theirs, str):
            result.not_evaluated.setdefault(reason, []).append(where)
            continue
        other = theirs(where)
        if other is ErrorValue.NAME and ours is not other:
            other = _Cannot("the second engine does not know a function or name in it")
        if isinstance(other, _Cannot):
            result.not_evaluated.setdefault(other.reason, []).append(where)
        elif _same(ours, other, _largest_read(graph, values, group)):
            result.matches.append(where)
        else:
            result.differences.append(Difference(where, ours, other))
    return result


def _cells(graph: Graph) -> Iterator[tuple[Where, Cell, int | None]]:
    for sheet, address, cell in graph.workbook.formulas():
        found = graph.group_at(sheet.name, address)
        yield (sheet.name, address), cell, None if found is None else found[0]


def _weak(graph: Graph) -> list[str]:
    """Return for each group why the second engine's answer is not asked for; empty where it is."""
    reasons = [weakness(group) for group in graph.groups]
    for index, group in enumerate(graph.groups):
        if group.reason and not reasons[index]:
            reasons[index] = group.reason
    lost = {index for index, reason in enumerate(reasons) if reason}
    count = len(reasons)
    for node in graph.order:
        if node not in lost and not lost.isdisjoint(graph.edges[node]):
            lost.add(node)
            if node < count:
                reasons[node] = "it depends on a cell that the second engine is not asked for"
    return reasons


@dataclass(frozen=True, slots=True)
class _Cannot:
    reason: str


def _engine(graph: Graph) -> Callable[[Where], Any] | str:
    """Let the other engine read and evaluate the file; return what asks it for a cell, or why it could not."""
    import formualizer

    settings = formualizer.EvaluationConfig()
    settings.max_eval_time_ms = SECONDS * 1000
    settings.date_system = "1904" if graph.workbook.date1904 else "1900"
    try:
        engine = formualizer.Workbook.from_path(
            str(graph.workbook.path), config=formualizer.WorkbookConfig(eval_config=settings)
        )
        for name in sorted(_of_ours(graph)):
            engine.register_function(name, _callback(name))
        engine.evaluate_all()
    except Exception as error:  # whatever it raises, it is no judgement on the workbook
        return f"the second engine could not evaluate the workbook ({_first_line(error)})"

    def ask(where: Where) -> Any:
        try:
            return _ours_form(engine.get_value(where[0], *where[1]))
        except Exception as error:
            return _Cannot(f"the second engine has no value for it ({_first_line(error)})")

    return ask


def _first_line(error: Exception) -> str:
    return next(iter(str(error).splitlines()), type(error).__name__)[:200]


def _of_ours(graph: Graph) -> set[str]:
    from doubler.workbook.natives import NATIVES

    called = {
        node.name
        for group in graph.groups
        for tree in (group.tree, group.resolved)
        for node in nodes(tree)
        if isinstance(node, Call)
    }
    return {name for name in called if name not in NATIVES and _lookup(name) is not None}


def _lookup(name: str) -> Any:
    from doubler import mechanics
    from doubler.catalogue.record import lookup

    mechanics.load()
    return lookup(name)


def _callback(name: str) -> Callable[..., Any]:
    """Lend one of our worksheet functions to the other engine."""
    import formualizer

    from doubler.catalogue.cells import call_cells

    function = _lookup(name)

    def called(*arguments: Any) -> Any:
        grid = call_cells(function, [_given(argument) for argument in arguments]).grid
        cells = [
            [
                formualizer.LiteralValue.error(_NAMES.get(cell, "Value"), "") if isinstance(cell, ErrorValue) else cell
                for cell in row
            ]
            for row in grid
        ]
        return cells[0][0] if len(cells) == 1 and len(cells[0]) == 1 else cells

    return called


def _given(argument: Any) -> Any:
    if isinstance(argument, list):
        return [[_given(cell) for cell in row] if isinstance(row, list) else _given(row) for row in argument]
    value = _ours_form(argument)
    return ErrorValue.VALUE if isinstance(value, _Cannot) else value


def _ours_form(value: Any) -> Any:
    """Turn a value of the other engine into one of ours."""
    if value is None or isinstance(value, bool | str):
        return value
    if isinstance(value, int | float):
        return float(value)
    if isinstance(value, dict):
        kind = str(value.get("kind", ""))
        return _Cannot(_CANNOT[kind]) if kind in _CANNOT else _KINDS.get(kind, ErrorValue.VALUE)
    if isinstance(value, list):
        return _Cannot("the second engine gives several values for it")
    return _Cannot("the second engine takes it for a date")


def _same(ours: Any, theirs: Any, largest: float) -> bool:
    if isinstance(ours, bool) or isinstance(theirs, bool):
        return ours is theirs
    if isinstance(ours, ErrorValue) and isinstance(theirs, ErrorValue):
        return True  # which error comes first is the engine's own order
    if isinstance(ours, float) and isinstance(theirs, float):
        return math.isclose(ours, theirs, rel_tol=RELATIVE, abs_tol=max(1e-12, 1e-13 * largest))
    if ours in (None, "", 0.0) and theirs in (None, "", 0.0):
        return True
    if isinstance(ours, str) and isinstance(theirs, str):
        return _short_numbers(ours) == _short_numbers(theirs)
    return bool(ours == theirs)


def _short_numbers(text: str) -> str:
    """Cut the numbers in a text to 12 digits: joined to text, the second engine writes more than 15."""
    return _LONG_NUMBER.sub(lambda found: f"{float(found[0]):.12g}", text)


def _largest_read(graph: Graph, values: Evaluation, group: int | None) -> float:
    """Return the largest number among the single cells that a group reads: what a difference is rounded at."""
    largest = 0.0
    for index, area in graph.places_read(group) if group is not None else []:
        for address in _few(area.first_row, area.first_column, area.last_row, area.last_column):
            sheet = graph.workbook.sheets[index]
            cell = sheet.cells.get(address)
            number = None if cell is None else cell.value
            if cell is not None and cell.formula is not None:
                number = values.value(sheet.name, address)
            if isinstance(number, float):
                largest = max(largest, abs(number))
    return largest


def _few(first_row: int, first_column: int, last_row: int, last_column: int) -> Iterator[Address]:
    for row in range(first_row, min(last_row, first_row + 63) + 1):
        for column in range(first_column, min(last_column, first_column + 15) + 1):
            yield row, column
