"""One formula without a workbook around it: ``=STRESS_AXIAL("12 kN","150 mm^2","MPa")``.

Serves the examples in docstrings. Formulas with references and native functions belong to the workbook's evaluation.
"""

from __future__ import annotations

from typing import Any

from doubler.catalogue.cells import CellResult, call_cells
from doubler.catalogue.record import lookup
from doubler.errors import ErrorValue, InputError


def cell(formula: str) -> Any:
    """Evaluate one call of a worksheet function with literal arguments.

    Parameters
    ----------
    formula : str
        ``=NAME(…)`` with texts, numbers, TRUE/FALSE and array constants such as ``{1,2;3,4}``.

    Returns
    -------
    float, str or list
        The value; a list of rows where several cells fill. Numbers are rounded to 10 significant digits, so that an
        example reads as a sheet shows it.

    Raises
    ------
    InputError
        The formula is not such a call, or gives an error; the sentence says why.

    Examples
    --------
    >>> cell('=UNIT_CONVERT("1 in", "mm")')
    25.4
    """
    result = evaluate_text(formula)
    if result.reasons:
        raise InputError("; ".join(result.reasons))
    rows = [[_round(value) for value in row] for row in result.grid]
    if len(rows) == 1 and len(rows[0]) == 1:
        return rows[0][0]
    return rows


def evaluate_text(formula: str) -> CellResult:
    """Evaluate like `cell`, but give the grid and the reasons instead of raising."""
    from formualizer import ParserError, parse

    try:
        tree = parse(formula if formula.startswith("=") else "=" + formula).to_dict()
    except (ParserError, ValueError) as error:
        raise InputError(f"{formula!r} is no formula: {error}") from error
    if tree["node_type"] != "Function":
        raise InputError(f"{formula!r} is no call of a worksheet function")
    function = lookup(tree["name"])
    if function is None:
        raise InputError(f"there is no worksheet function {tree['name']}")
    return call_cells(function, [_literal(argument) for argument in tree["args"]])


def _literal(node: dict[str, Any]) -> Any:
    kind = node["node_type"]
    if kind == "Literal":
        value = node["value"]
        return float(value) if isinstance(value, int) and not isinstance(value, bool) else value
    if kind == "Omitted":
        return None
    if kind == "Array":
        return [[_literal(item) for item in row] for row in node["rows"]]
    if kind == "UnaryOp" and node["operator"] in "+-":
        value = _literal(node["operand"])
        return -value if node["operator"] == "-" else value
    if kind == "Function":
        inner = lookup(node["name"])
        if inner is not None:
            return call_cells(inner, [_literal(item) for item in node["args"]]).grid
    raise InputError("only texts, numbers, array constants and calls can stand in such a formula")


def _round(value: Any) -> Any:
    if isinstance(value, float) and not isinstance(value, bool):
        return float(f"{value:.10g}")
    return str(value) if isinstance(value, ErrorValue) else value
