"""Every function in every form gives the same through every path: numbers to 1e-12, errors in kind.

The paths through xlwings and through LibreOffice stand in `test_excel` and `test_calc_office`.
"""

import json
import subprocess
import sys

import pytest

from doubler import catalogue
from doubler.errors import ErrorValue
from doubler.hosts import conformance
from doubler.units import consistent_set, convert, from_pint, is_pint_quantity, parse_quantity, parse_unit, to_pint
from doubler.workbook.evaluate import NotEvaluated, evaluate, evaluate_formula
from doubler.workbook.opened import open_template
from hosts.second_engine import shown_by_formualizer


@pytest.fixture(scope="module")
def known():
    return conformance.calls()


@pytest.fixture(scope="module")
def book(known, tmp_path_factory):
    path = tmp_path_factory.mktemp("conformance") / "conformance.xlsx"
    return path, conformance.write_workbook(path, known)


def wrong_in(pairs):
    return [sentence for grid, call in pairs for sentence in conformance.differences(grid, call)]


def test_the_calls_cover_the_catalogue_in_every_form(known):
    assert {call.function for call in known} == set(catalogue.names())
    assert len({call.form for call in known}) == 7
    assert sum(isinstance(call.expected[0][0], ErrorValue) for call in known if call.form == "as documented") == 0
    with_errors = [call for call in known if call.form == "first argument empty"]
    assert all(any(isinstance(v, ErrorValue) for row in call.expected for v in row) for call in with_errors)


def test_a_difference_is_told():
    call = conformance.Call("NAME", "pairs", (), [[1.0, "MPa"], [ErrorValue.NUM, None]])
    assert not conformance.differences([[1.0 + 1e-13, "MPa"], [ErrorValue.NUM, None]], call)
    assert len(conformance.differences([[1.0 + 1e-11, "mPa"], [ErrorValue.VALUE, 0.0]], call)) == 4
    assert len(conformance.differences([[ErrorValue.NUM]], call)) == 3


def as_quantity(argument, block):
    """One cell as the Python call takes it: a quantity, a number, text; None where it cannot be given so."""
    value = block[0][0]
    if not isinstance(value, str) or argument.is_text:
        return value
    number, unit = parse_quantity(value)
    return number if unit.text == "1" else to_pint(number, unit)


def python_call(call):
    """The call with quantities, its result in the unit that the cells show; None where columns or a set are given."""
    function = catalogue.lookup(call.function)
    count = len(function.arguments)
    if function.result.extra_axes or any(
        block is not None and (len(block), len(block[0])) != (1, 1) for block in call.arguments
    ):
        return None
    wanted = call.arguments[count] if len(call.arguments) > count else None
    shown = call.expected[0][1] if len(call.expected[0]) == 2 else wanted[0][0] if wanted else None
    if not isinstance(shown, str) or consistent_set(shown) is not None:
        return None
    given = {
        argument.name: as_quantity(argument, block)
        for argument, block in zip(function.arguments, call.arguments, strict=False)
        if block is not None
    }
    result = function(**given)
    if not is_pint_quantity(result):
        return None
    value, unit = from_pint(result)
    return [[float(convert(value, unit, parse_unit(shown))), *call.expected[0][1:]]]


def test_the_python_call_with_quantities_gives_the_same(known):
    found = [(grid, c) for c in known if c.form == "as documented" and (grid := python_call(c)) is not None]
    assert len(found) > 100
    assert not wrong_in(found)


def constant(value):
    if value is None:
        return '""'
    return f'"{value}"' if isinstance(value, str) else repr(value)


def as_text(call):
    """The call as typed on the command line; None where it has an empty cell that an argument left out is not."""
    declared = catalogue.lookup(call.function).arguments
    parts = []
    for index, block in enumerate(call.arguments):
        if block is None or (block == [[None]] and not declared[index].optional):
            parts.append("")
        elif any(value is None for row in block for value in row):
            return None
        elif len(block) == 1 and len(block[0]) == 1:
            parts.append(constant(block[0][0]))
        else:
            parts.append("{" + ";".join(",".join(constant(v) for v in row) for row in block) + "}")
    return f"={call.function}({','.join(parts)})"


def test_eval_of_one_formula_gives_the_same(known):
    typed = [(text, call) for call in known if (text := as_text(call)) is not None]
    assert len(typed) > 0.99 * len(known)
    assert not wrong_in((evaluate_formula(text).grid, call) for text, call in typed)


def test_the_command_line_prints_the_same(known):
    for call in (known[0], next(c for c in known if c.form == "first argument empty")):
        words = [sys.executable, "-m", "doubler", "eval", as_text(call), "--json"]
        told = subprocess.run(words, capture_output=True, text=True, timeout=60, check=False)
        shown = json.loads(told.stdout)
        errors = {value.value: value for value in ErrorValue}
        assert not conformance.differences([[errors.get(v, v) for v in row] for row in shown["rows"]], call)
        assert bool(shown["reasons"]) == (told.returncode == 2)


def test_our_evaluation_of_the_workbook_gives_the_same(book):
    path, where = book
    opened = open_template(path)
    values = evaluate(opened.template.graph, {}, None)

    def cell(row, column):
        value = values.value(conformance.SHEET, (row, column))
        assert not isinstance(value, NotEvaluated), value
        return value

    found = []
    for item in where:
        high, wide = len(item.call.expected), len(item.call.expected[0])
        first = conformance.RESULT_COLUMN
        found.append(([[cell(item.row + r, first + c) for c in range(wide)] for r in range(high)], item.call))
    assert not wrong_in(found)


def test_a_second_engine_that_calls_our_functions_gives_the_same(known):
    assert not wrong_in(zip(shown_by_formualizer(known), known, strict=True))
