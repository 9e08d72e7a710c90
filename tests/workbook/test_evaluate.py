"""A workbook as a function: cases, lanes, reasons, order, and what is not evaluated."""

import numpy as np
import pytest
from hypothesis import Phase, given, settings
from hypothesis import strategies as st

from doubler.errors import ErrorValue, InputError
from doubler.workbook.evaluate import NotEvaluated, evaluate, evaluate_blocks, evaluate_formula
from doubler.workbook.graph import build_graph
from doubler.workbook.model import Cell
from doubler.workbook.references import address_text
from workbook.differential.sheet import CASES, COLUMN, FIXED, NAMES, lines, placed
from workbook.evaluated_books import at, book, run, sheet, shown, values


def test_a_chain_of_formulas_over_sheets_is_evaluated_in_its_order() -> None:
    whole = book(sheet("A", {"A1": "=B!A1*2", "A2": "=A1+1"}), sheet("B", {"A1": "=3+C1", "C1": 4}))
    found = run(whole)
    assert shown(found, "A2", "A") == 15.0


def test_one_lane_with_an_error_does_not_spoil_the_others() -> None:
    found = run({"A1": 1, "A2": "=1/A1", "A3": "=A2+1", "A4": '=IFERROR(A3,"none")'}, {"A1": np.array([2.0, 0.0, 4.0])})
    assert shown(found, "A3") == [1.5, "#DIV/0!", 1.25]
    assert shown(found, "A4") == [1.5, "none", 1.25]


def test_an_input_may_hold_unlike_kinds_by_case() -> None:
    kinds = np.array([1.5, "12", "steel", True, None, ErrorValue.NA], dtype=object)
    found = run({"A1": 0, "B1": "=A1*2", "C1": '=A1&"x"', "D1": "=ISNUMBER(A1)"}, {"A1": kinds})
    assert shown(found, "B1") == [3.0, 24.0, "#VALUE!", 2.0, 0.0, "#N/A"]
    assert shown(found, "C1") == ["1.5x", "12x", "steelx", "TRUEx", "x", "#N/A"]
    assert shown(found, "D1") == [True, False, False, False, False, False]


def test_blocks_give_what_one_block_gives() -> None:
    cells = {"A1": 1, "B1": "=SIN(A1)+A1^0.3", "B2": "=IF(B1>1,B1,0)", "B3": "=SUM(B1:B2,A1)"}
    load = np.linspace(0.1, 30.0, 1000)
    whole = run(cells, {"A1": load})
    parts = run(cells, {"A1": load}, block=64)
    for place in ("B1", "B2", "B3"):
        np.testing.assert_array_equal(whole.value("S", at(place)), parts.value("S", at(place)))


def test_only_what_the_outputs_need_is_evaluated() -> None:
    graph = build_graph(book(sheet("S", {"A1": 2, "B1": "=A1*3", "C1": "=B1+1"})))
    (part,) = evaluate_blocks(graph, {}, [("S", at("B1"))])
    assert part.value("S", at("B1")) == 6.0
    with pytest.raises(KeyError, match="not among the outputs"):
        part.value("S", at("C1"))


def test_an_input_takes_the_place_of_a_formula() -> None:
    found = run({"A1": 2, "B1": "=A1*3", "C1": "=B1+1", "D1": "=SUM(A1:C1)"}, {"B1": 10.0})
    assert shown(found, "C1") == 11.0
    assert shown(found, "D1") == 23.0


def test_a_circle_is_named_and_the_rest_is_evaluated() -> None:
    found = run({"A1": "=B1+1", "B1": "=A1*2", "C1": "=A1", "D1": "=1+1"})
    assert "circular reference: S!A1, S!B1" in shown(found, "A1")
    reason = found.value("S", at("C1"))
    assert isinstance(reason, NotEvaluated)
    assert reason.root in {"S!A1", "S!B1"}
    assert shown(found, "D1") == 2.0


def test_a_running_total_that_reads_its_own_column_is_no_circle() -> None:
    cells = {"A1": 1, "A2": 2, "A3": 3, "B1": "=A1", "B2": "=B1+A2", "B3": "=B2+A3"}
    assert values(cells, "B3") == [6.0]


@pytest.mark.parametrize(
    ("formula", "reason"),
    [
        ("=NOSUCH(1)", "the function NOSUCH is not known here"),
        ("=NOW()", "changes by itself"),
        ("=[1]Other!A1", "another workbook"),
        ("=OFFSET(A1,A2,0)", "depends on the values of cells"),
        ('=A1+"3/4/2026"', "depends on the locale"),
        ("=SUM()", "takes"),
        ("=1+", "cannot be parsed"),
    ],
)
def test_what_is_not_evaluated_says_why_and_stops_nothing_else(formula: str, reason: str) -> None:
    found = run({"A1": 1, "A2": 1, "B1": formula, "B2": "=B1+1", "C1": "=A1+1"})
    assert reason in shown(found, "B1")
    assert reason in shown(found, "B2")
    assert shown(found, "C1") == 2.0


def test_inputs_that_are_no_numbers_are_refused_by_name() -> None:
    with pytest.raises(InputError, match="S!A1 is no finite number in case 2"):
        run({"A1": 1, "B1": "=A1"}, {"A1": np.array([1.0, np.nan])})
    with pytest.raises(InputError, match="unlike numbers of cases"):
        run({"A1": 1, "A2": 1, "B1": "=A1+A2"}, {"A1": np.array([1.0, 2.0]), "A2": np.array([1.0, 2.0, 3.0])})


def test_a_fill_of_copies_is_one_group() -> None:
    cells = {f"A{k}": float(k) for k in range(1, 501)} | {f"B{k}": f"=A{k}*2+$A$1" for k in range(1, 501)}
    graph = build_graph(book(sheet("S", cells)))
    assert len(graph.groups) == 1
    found = run(cells | {"C1": "=SUM(B1:B500)"})
    assert shown(found, "B500") == 1001.0
    assert shown(found, "C1") == 251_000.0


def test_a_second_evaluation_with_other_inputs_reads_its_ranges_anew() -> None:
    graph = build_graph(book(sheet("S", {"A1": 1, "A2": "=A1*2", "B1": "=SUM(A1:A2)"})))
    assert [evaluate(graph, {("S", at("A1")): x}).value("S", at("B1")) for x in (1.0, 2.0, 5.0)] == [3.0, 6.0, 15.0]


def test_equal_to_fifteen_digits_is_equal() -> None:
    cells = {"A1": "=0.1+0.2", "B1": "=A1=0.3", "B2": "=A1>0.3", "B3": "=A1>=0.3", "B4": "=1=1+1E-13"}
    assert values(cells, "B1", "B2", "B3", "B4") == [True, False, True, False]
    found = run({"A1": 1, "B1": "=A1+0.2=0.3"}, {"A1": np.array([0.1, 0.1000001])})
    assert shown(found, "B1") == [True, False]


def test_the_reason_of_our_own_function_is_found_from_a_cell_that_depends_on_it() -> None:
    cells = {"A1": "12 kN", "B1": '=STRESS_AXIAL(A1,"150 mm^2","MPa")', "C1": "=B1/2", "D1": "=MAX(C1,1)"}
    found = run(cells, {"A1": np.array(["12 kN", "12 mm"], dtype=object)})
    assert shown(found, "D1") == [40.0, "#VALUE!"]
    assert found.reason("S", at("D1"), 0) == ""
    assert found.reason("S", at("B1"), 1).startswith("STRESS_AXIAL: force")
    assert found.reason("S", at("D1"), 1).startswith("S!B1: STRESS_AXIAL: force")


def test_the_reason_of_a_native_error_says_what_it_means() -> None:
    assert "divided by zero" in run({"A1": "=1/0"}).reason("S", at("A1"))


def test_one_formula_without_a_workbook() -> None:
    assert evaluate_formula("=-2^2").grid == [[4.0]]
    assert evaluate_formula("={1,2;3,4}").grid == [[1.0, 2.0], [3.0, 4.0]]
    assert evaluate_formula('=STRESS_AXIAL("12 kN","150 mm^2")').grid == [[80.0, "MPa"]]
    wrong = evaluate_formula("=STRES_AXIAL(1)")
    assert wrong.grid == [[ErrorValue.NAME]]
    assert "STRESS_AXIAL" in wrong.reasons[0]
    with pytest.raises(InputError, match="cannot be parsed"):
        evaluate_formula("=1+")


# Each case alone -------------------------------------------------------------------------------------------------

_ALL = placed(lines())
_KINDS = st.one_of(
    st.floats(-1e6, 1e6, allow_nan=False),
    st.sampled_from([0.0, 1.0, 2.0, -3.0, 4.0, "text", "12", "", True, False, None, ErrorValue.NA]),
)


def _graph() -> object:
    front = sheet("S", {**FIXED, **CASES[0]})
    for row, line in _ALL:
        if line.array:
            last = (row + line.rows - 1, COLUMN + line.columns - 1)
            span = f"{address_text((row, COLUMN))}:{address_text(last)}"
            front.cells[row, COLUMN] = Cell(None, line.text[1:], array_range=span)
        else:
            front.cells[row, COLUMN] = Cell(None, line.text[1:])
    others = [sheet(f"T{n}", {"A1": n * 1.5, "A2": n * 10.0, "B1": f"t{n}"}) for n in (1, 2, 3)]
    return build_graph(book(front, *others, names=NAMES))


GRAPH = _graph()


def _same(a: object, b: object) -> bool:
    if isinstance(a, float) and isinstance(b, float):
        return np.float64(a).tobytes() == np.float64(b).tobytes()
    return type(a) is type(b) and a == b


@settings(max_examples=12, deadline=None, phases=[Phase.explicit, Phase.generate])
@given(st.data())
def test_many_cases_at_once_give_bit_for_bit_what_each_alone_gives(data: st.DataObject) -> None:
    count = data.draw(st.integers(2, 5))
    inputs = {}
    for place in ("A1", "A2", "A3", "A5", "B5", "A9"):
        if data.draw(st.booleans()):
            drawn = data.draw(st.lists(_KINDS, min_size=count, max_size=count))
        else:
            drawn = data.draw(st.lists(st.floats(-1e3, 1e3, allow_nan=False), min_size=count, max_size=count))
        array = np.empty(count, object)
        array[:] = drawn
        numbers = all(type(item) is float for item in drawn)
        inputs["S", at(place)] = array.astype(np.float64) if numbers else array
    together = evaluate(GRAPH, inputs)
    wrong = []
    for case in range(count):
        alone = evaluate(GRAPH, {where: array[case] for where, array in inputs.items()})
        for where, value in alone.items():
            other = together.value(*where)
            if isinstance(value, NotEvaluated) or isinstance(other, NotEvaluated):
                continue  # a case with a text that cannot be read takes its formula out for all cases
            other = other[case] if isinstance(other, np.ndarray) else other
            other = other.item() if isinstance(other, np.generic) else other
            if not _same(value, other):
                text = dict(_ALL).get(where[1][0])
                wrong.append((text and text.text, {w[1]: a[case] for w, a in inputs.items()}, value, other))
    assert not wrong
