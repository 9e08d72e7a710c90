"""The verbs `eval` and `functions`."""

from __future__ import annotations

import argparse
import json
import sys
from typing import Any

from doubler.errors import ErrorValue, InputError


def run_eval(options: argparse.Namespace) -> int:
    """Evaluate one formula and print it as a sheet would show it: a row a line, cells separated by tabs."""
    from doubler.workbook.evaluate import evaluate_formula

    _refuse_cells(options.formula)
    result = evaluate_formula(options.formula)
    failed = any(isinstance(value, ErrorValue) for row in result.grid for value in row)
    if options.json:
        rows = [[str(v) if isinstance(v, ErrorValue) else v for v in row] for row in result.grid]
        print(json.dumps({"rows": rows, "reasons": list(result.reasons)}, ensure_ascii=False))
    else:
        for row in result.grid:
            print("\t".join(shown(value) for value in row))
    for reason in result.reasons:
        print(reason, file=sys.stderr)
    return 2 if failed else 0


def _refuse_cells(formula: str) -> None:
    """Refuse a formula that reads cells: there are none here, and an empty one would count as 0."""
    from doubler.workbook.parse import FormulaError, parse
    from doubler.workbook.syntax import CellRef, RangeRef, nodes

    try:
        tree = parse(formula.strip(), (1, 1))
    except FormulaError:
        return  # told with its reason where it is evaluated
    if any(isinstance(node, CellRef | RangeRef) for node in nodes(tree)):
        raise InputError(f"the formula {formula!r} reads cells, and there are none here; write their values instead")


def shown(value: Any) -> str:
    """Return a cell value as text: 15 significant digits, as a spreadsheet keeps them."""
    if value is None:
        return ""
    if isinstance(value, bool):
        return str(value).upper()
    return f"{value:.15g}" if isinstance(value, float | int) else str(value)


def run_functions(options: argparse.Namespace) -> int:
    """List the catalogue by category, or show one function."""
    from doubler import catalogue, mechanics

    mechanics.load()
    wanted = (options.name or "").upper()
    if wanted and not wanted.endswith("_"):
        function = catalogue.lookup(wanted)
        if function is None:
            raise InputError(_unknown(wanted, catalogue.names()))
        if options.json:
            print(json.dumps([as_object(function)], ensure_ascii=False, indent=1))
        else:
            print(describe(function))
        return 0
    chosen = [name for name in catalogue.names() if name.startswith(wanted)]
    if not chosen:
        categories = ", ".join(f"{category}_" for category in catalogue.CATEGORIES)
        raise InputError(f"there is no category {wanted}; the categories are {categories}")
    functions = [f for name in chosen if (f := catalogue.lookup(name)) is not None]
    if options.json:
        print(json.dumps([as_object(function) for function in functions], ensure_ascii=False, indent=1))
        return 0
    width = max(len(name) for name in chosen)
    category = ""
    for function in functions:
        if function.category != category:
            category = function.category
            print(f"\n{category}_  {catalogue.CATEGORIES[category]}")
        print(f"  {function.name:<{width}}  {function.documentation.summary}")
    return 0


def _unknown(name: str, known: list[str]) -> str:
    import difflib

    near = difflib.get_close_matches(name, known, n=3, cutoff=0.5)
    offer = f"did you mean {', '.join(near)}?" if near else "doubler functions lists them all"
    return f"there is no worksheet function {name}; {offer}"


def as_object(function: Any) -> dict[str, Any]:
    """Return one function as the object that ``functions --json`` prints."""
    documentation = function.documentation
    return {
        "name": function.name,
        "category": function.category,
        "summary": documentation.summary,
        "formula": documentation.formula,
        "arguments": [
            {
                "name": argument.name,
                "kind": argument.kind_name,
                "column": argument.entries,
                "optional": argument.optional,
                "default": argument.default,
                "choices": list(argument.choices),
                "limit": argument.limit.words if argument.limit else "",
                "description": argument.description,
            }
            for argument in function.arguments
        ],
        "result": {
            "name": function.result.name,
            "kind": function.result.kind_name,
            "columns": list(function.result.names),
            "description": function.result.description,
        },
        "conditions": [rule.words for rule in function.conditions],
        "notes": documentation.notes,
        "source": documentation.sources,
        "example": documentation.example,
        "example_result": documentation.example_result,
    }


def describe(function: Any) -> str:
    """Return one function as a page for the terminal."""
    from doubler.catalogue.plain_math import plain

    documentation = function.documentation
    names = [f"[{a.name}]" if a.optional else a.name for a in function.arguments]
    lines = [f"{function.name}({', '.join([*names, '[result]'])})", "", documentation.summary, ""]
    lines += [f"  {plain(formula)}" for formula in documentation.formula.splitlines()]
    lines.append("")
    for argument in function.arguments:
        what = ("column of " if argument.entries else "") + argument.kind_name
        limit = f" ({argument.limit.words})" if argument.limit else ""
        choices = f" One of {', '.join(argument.choices)}." if argument.choices else ""
        lines.append(f"  {argument.name}  [{what}]  {argument.description}{limit}{choices}")
    result = function.result
    lines.append(f"  result  [{result.kind_name}]  {result.description}")
    lines += [f"  Condition: {rule.words}." for rule in function.conditions]
    lines.append('  The last argument names the unit of the result (such as "MPa") or a consistent set ("N-mm").')
    for title, text in (("Assumptions and limits", documentation.notes), ("Source", documentation.sources)):
        if text:
            lines += ["", title, *(f"  {line}" for line in text.splitlines())]
    shown_result = documentation.example_result
    lines += ["", "Example", f"  {documentation.example}", f"  gives {shown_result}"]
    return "\n".join(lines)
