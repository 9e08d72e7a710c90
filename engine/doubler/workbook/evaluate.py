"""A workbook as a function: its values for given inputs, for one case or for any number of them at once.

Cells that no varying input reaches are evaluated once. The others are evaluated in blocks of cases so small
that a block's live columns stay in the processor's cache. Only the outputs asked for are kept.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from doubler.errors import ErrorValue, InputError
from doubler.workbook.cell_forms import case_count
from doubler.workbook.evaluation import MEANING, Evaluation, NotEvaluated, Where
from doubler.workbook.graph import Graph, build_graph
from doubler.workbook.lanes import Grid
from doubler.workbook.model import Cell, Sheet, Workbook
from doubler.workbook.run import BLOCK, CaseRun
from doubler.workbook.whole import WholeRun

__all__ = [
    "BLOCK",
    "Evaluation",
    "FormulaValue",
    "NotEvaluated",
    "Where",
    "evaluate",
    "evaluate_blocks",
    "evaluate_formula",
]


def evaluate(
    graph: Graph,
    inputs: Mapping[Where, Any] | None = None,
    outputs: Iterable[Where] | None = None,
    block: int | None = None,
) -> Evaluation:
    """Evaluate a workbook for all cases and keep the outputs.

    Parameters
    ----------
    graph : Graph
        From `build_graph`.
    inputs : mapping of (sheet, address) to scalar or array of N, optional
        Put in place of what the workbook holds there.
    outputs : iterable of (sheet, address), optional
        The cells wanted; all formula cells where it is left out.
    block : int, optional
        Cases a block.

    Returns
    -------
    Evaluation
    """
    whole: Evaluation | None = None
    kept: dict[Where, Any] = {}
    for part in evaluate_blocks(graph, inputs, outputs, block):
        if whole is None:
            total = case_count(inputs or {})
            if total == part.cases:
                return part
            whole = Evaluation(graph, total)
        for node, told in part.refusals.items():
            whole.refusals.setdefault(node, []).extend(told)
        for where, value in part.items():
            _store_part(kept, where, value, part, whole.cases)
    assert whole is not None
    for where, value in kept.items():
        whole.keep(where, value)
    return whole


def _store_part(kept: dict[Where, Any], where: Where, value: Any, part: Evaluation, cases: int) -> None:
    """Write one block's values of an output into the whole, which changes its type only where it must."""
    before = kept.get(where)
    if isinstance(before, NotEvaluated):
        return
    if isinstance(value, NotEvaluated):
        kept[where] = value
        return
    here = slice(part.start, part.start + part.cases)
    if before is None and where not in kept:
        if not isinstance(value, np.ndarray):
            if where in part.constants:
                kept[where] = value
                return
            value = _repeated(value, part.cases)
        before = np.empty(cases, value.dtype)
    elif not isinstance(before, np.ndarray):
        return
    elif not isinstance(value, np.ndarray):
        value = _repeated(value, part.cases)
    if before.dtype != value.dtype:
        before = before.astype(object)
        before[: part.start] = _python(before[: part.start])
        value = _python(value)
    before[here] = value
    kept[where] = before


def _python(values: NDArray[Any]) -> NDArray[Any]:
    out = np.empty(values.shape, object)
    out[:] = values.tolist() if values.dtype != object else values
    return out


def _repeated(value: Any, count: int) -> NDArray[Any]:
    if type(value) is float or type(value) is bool:
        return np.full(count, value)
    out = np.empty(count, object)
    out[:] = [value] * count
    return out


def evaluate_blocks(
    graph: Graph,
    inputs: Mapping[Where, Any] | None = None,
    outputs: Iterable[Where] | None = None,
    block: int | None = None,
) -> Iterator[Evaluation]:
    """Evaluate a workbook block by block of cases; see `evaluate`. Memory does not grow with the number of cases."""
    run = WholeRun(graph) if not inputs and outputs is None else CaseRun(graph, inputs or {}, outputs)
    yield from run.blocks(block)


@dataclass(frozen=True, slots=True)
class FormulaValue:
    """What one formula gives.

    Attributes
    ----------
    grid
        Rows of values: float, text, logical or `ErrorValue`.
    reasons
        Why there are errors in it, one sentence each.
    """

    grid: list[list[Any]]
    reasons: tuple[str, ...] = ()


def evaluate_formula(text: str) -> FormulaValue:
    """Evaluate one formula without a workbook.

    Parameters
    ----------
    text : str
        The formula, with or without its leading ``=``.

    Returns
    -------
    FormulaValue
        The grid of values that it gives, and why there are errors in it.

    Raises
    ------
    InputError
        The formula cannot be read, or its value cannot be given with certainty.

    Examples
    --------
    >>> evaluate_formula("=-2^2").grid
    [[4.0]]
    >>> evaluate_formula("={1,2}*10").grid
    [[10.0, 20.0]]
    """
    sheet = Sheet("Sheet1", "", {(1, 1): Cell(None, text.strip().removeprefix("="), dynamic=True)})
    graph = build_graph(Workbook(Path("formula"), "", [sheet]))
    unknown = unknown_functions(graph.groups[0].resolved or graph.groups[0].tree)
    if unknown:
        return FormulaValue([[ErrorValue.NAME]], tuple(_unknown(name) for name in unknown))
    run = CaseRun(graph, {}, None)
    refusals: tuple[str, ...] = ()
    for part in run.blocks(None):
        if 0 in run.reasons:
            raise InputError(f"the formula {text!r} is not evaluated: {run.reasons[0].reason}")
        refusals = tuple(dict.fromkeys(refusal.text for refusal in part.refusals.get(0, ())))
    value = run.plan.store.values[0]
    grid = [[value]]
    if isinstance(value, Grid):
        cells = [0.0 if cell is None else cell for cell in value.cells]
        grid = [cells[row * value.columns : (row + 1) * value.columns] for row in range(value.rows)]
    errors = dict.fromkeys(cell for row in grid for cell in row if isinstance(cell, ErrorValue))
    if not errors:
        return FormulaValue(grid)
    told = tuple(f"{error}: {MEANING.get(error, 'an error value')}" for error in errors)
    return FormulaValue(grid, refusals or told)


def unknown_functions(tree: Any) -> list[str]:
    """Return the names of the functions in a tree that are neither native nor ours."""
    from dataclasses import fields, is_dataclass

    from doubler.workbook.natives import NATIVES
    from doubler.workbook.natives.ours import find
    from doubler.workbook.syntax import Call

    found: list[str] = []
    work = [tree]
    while work:
        node = work.pop()
        if isinstance(node, tuple):
            work += reversed(node)
        elif is_dataclass(node):
            if (
                isinstance(node, Call)
                and node.name not in NATIVES
                and node.name not in {"LET", "LAMBDA"}
                and find(node.name) is None
            ):
                found.append(node.name)
            work += [getattr(node, field.name) for field in reversed(fields(node))]
    return list(dict.fromkeys(found))


def _unknown(name: str) -> str:
    import difflib

    from doubler import catalogue
    from doubler.workbook.natives import NATIVES

    near = difflib.get_close_matches(name, [*NATIVES, *catalogue.names()], n=3, cutoff=0.6)
    offer = f"did you mean {', '.join(near)}?" if near else "doubler functions lists those that there are"
    return f"there is no function {name}; {offer}"
