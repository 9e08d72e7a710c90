"""Formulas on tapes give, to the last bit, what their programs give; where they cannot, they step aside."""

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from doubler.errors import ErrorValue
from doubler.workbook import run as running
from doubler.workbook.evaluate import Evaluation, evaluate
from doubler.workbook.graph import build_graph
from doubler.workbook.run import CaseRun
from doubler.workbook.tape import Tape
from workbook.evaluated_books import at, book, sheet

ANY = 10**9


@pytest.fixture(autouse=True)
def _always_taped(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(running, "TAPED_CASES", 2)


def both(cells: dict[str, object], inputs: dict[str, np.ndarray], block: int = 64) -> tuple[Evaluation, Evaluation]:
    """Evaluate with tapes and without."""
    graph = build_graph(book(sheet("S", cells)))
    given_ = {("S", at(cell)): values for cell, values in inputs.items()}
    taped = evaluate(graph, given_, block=block)
    before, running.TAPED_CASES = running.TAPED_CASES, ANY
    try:
        return taped, evaluate(graph, given_, block=block)
    finally:
        running.TAPED_CASES = before


def same(cells: dict[str, object], inputs: dict[str, np.ndarray], block: int = 64) -> Evaluation:
    """Hold every formula's values on tapes against those without, bit for bit; return the former."""
    taped, exact = both(cells, inputs, block)
    count = len(next(iter(inputs.values())))
    for (name, address), value in exact.items():
        found = taped.value(name, address)
        for case in range(count):
            a, b = (v[case] if isinstance(v, np.ndarray) else v for v in (found, value))
            assert type(a) is type(b) or isinstance(a, np.generic | float), (address, case, a, b)
            if isinstance(b, float):
                assert np.float64(a).tobytes() == np.float64(b).tobytes(), (address, case, a, b)
            else:
                assert a == b, (address, case, a, b)
    return taped


def tapes(cells: dict[str, object], inputs: dict[str, np.ndarray], outputs: list[str]) -> list[Tape]:
    """Return the tapes of one evaluation after it has run."""
    graph = build_graph(book(sheet("S", cells)))
    case_run = CaseRun(graph, {("S", at(c)): v for c, v in inputs.items()}, [("S", at(c)) for c in outputs])
    found: list[Tape] = []
    written = case_run._stretches

    def kept(often: list[int]) -> list[int | Tape]:
        stretches = written(often)
        found.extend(item for item in stretches if isinstance(item, Tape))
        return stretches

    case_run._stretches = kept  # type: ignore[method-assign]
    for _ in case_run.blocks(64):
        pass
    return found


LOADS = np.linspace(-3.0, 9.0, 250)

TERMS = """\
A1 A2 A3 1.5 0 -2 A1*A2 A2^2 A1^3 A2^4 A2^0.5 A1^A3 ABS(A1) SQRT(A2) SIN(A1) MAX(A1,A2,1) MIN(-1,A1,A3)
SUM(A1:A3) MAX(A1:A3) -A1 A2% PI() ROUND(A1,1) INT(A3) IF(A1>A2,A1,A2/A3) IF(A2>=0,A1*A2,NA()) EXP(A1) LN(A2)
IF(AND(A1>0,A2>1),A1,0) DEGREES(A1) MOD(A1,A2) POWER(A1,2) 2^A1"""


@st.composite
def sheets(draw: st.DrawFn) -> dict[str, object]:
    """Draw formulas that build on one another."""
    cells: dict[str, object] = {"A1": 1.0, "A2": 2.0, "A3": 3.0}
    known = TERMS.split()
    for row in range(1, draw(st.integers(2, 9))):
        left, right = draw(st.sampled_from(known)), draw(st.sampled_from(known))
        shape = draw(st.sampled_from(["+", "-", "*", "/", "IF", "IF2", "only"]))
        text = {"IF": f"IF({left}<{right},{left},{right})", "IF2": f"IF({left}>0,{left}*2,{right}-1)", "only": left}
        cells[f"B{row}"] = "=" + text.get(shape, f"({left}){shape}({right})")
        known += [f"B{row}"] * 3
    return cells


@settings(max_examples=150, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])
@given(cells=sheets(), seed=st.integers(0, 1000), scale=st.sampled_from([1.0, 1.0, 1e200]))
def test_tapes_give_bit_for_bit_what_programs_give(cells: dict[str, object], seed: int, scale: float) -> None:
    draw = np.random.default_rng(seed)
    inputs = {
        "A1": draw.choice([-2.0, -0.0, 0.0, 0.1 + 0.2, 0.3, 1.0, 7.5], 150) * scale,
        "A2": draw.uniform(0.5, 9.0, 150),
        "A3": draw.choice([0.0, 0.3, 2.0, 3.0, -1.25], 150, p=[0.02, 0.3, 0.3, 0.3, 0.08]),
    }
    same(cells, inputs)


def test_a_chain_runs_as_one_tape_in_few_buffers() -> None:
    cells = {"A1": 1.0} | {f"B{k}": f"=A1*{k}+" + ("A1" if k == 1 else f"B{k - 1}^2/7") for k in range(1, 30)}
    (tape,) = tapes(cells, {"A1": LOADS / 100.0}, ["B29"])
    assert len(tape.nodes) == 29
    assert tape.live <= 5
    assert not tape.idle
    same(cells, {"A1": LOADS / 100.0})


def test_what_is_written_twice_is_computed_once() -> None:
    cells = {"A1": 1.0, "B1": "=A1^2+3*A1^2", "B2": "=3*A1^2-A1^2", "B3": "=B1*B2"}
    (tape,) = tapes(cells, {"A1": LOADS}, ["B1", "B2", "B3"])
    assert len(tape._steps) == 5


def test_a_fault_in_one_case_leaves_the_block_to_the_programs() -> None:
    cells = {"A1": 1.0, "B1": "=1/A1", "B2": "=B1+1", "B3": "=IF(A1=0,0,B2*2)"}
    load = np.arange(200.0)
    found = same(cells, {"A1": load})
    assert found.value("S", at("B1"))[0] is ErrorValue.DIV0
    assert found.value("S", at("B3"))[0] == 0.0
    (tape,) = tapes(cells, {"A1": load}, ["B3"])
    assert (tape._stood_aside, tape._ran) == (1, 3)


def test_a_tape_that_never_fits_is_given_up() -> None:
    cells = {"A1": 1.0, "B1": "=1/A1", "B2": "=B1+1"}
    load = np.zeros(640)
    same(cells, {"A1": load})
    (tape,) = tapes(cells, {"A1": load}, ["B2"])
    assert tape.idle
    assert tape._stood_aside == 3


def test_numbers_that_agree_in_15_digits_are_equal_on_a_tape_too() -> None:
    cells = {"A1": 1.0, "A2": 1.0, "B1": "=IF(A1=A2,10,20)", "B2": "=IF(A1>0.3,B1+1,B1)", "B3": "=B1+B2"}
    inputs = {"A1": np.where(np.arange(200) % 2, 0.1 + 0.2, 0.7), "A2": np.full(200, 0.3)}
    found = same(cells, inputs)
    assert found.value("S", at("B1"))[:4].tolist() == [20.0, 10.0, 20.0, 10.0]
    assert tapes(cells, inputs, ["B3"])[0]._stood_aside == 0


@pytest.mark.parametrize(
    "formula",
    ['=A1&"x"', "=LEN(A1)", "=IF(A1>0,A1)", '=IF(A1>2,"no",A1)', "=VLOOKUP(A1,A1:A2,1)", "=A1=TRUE", "=A4+A1",
     "=MAX(A1,A4)", "=SUM(A1:A4)", "=A1+A5", "=IFERROR(1/A1,7)", "=A1>0", "=AND(A1>0,A2>0)+1", "=LET(x,A1,x+1)"],
)  # fmt: skip
def test_what_is_no_plain_number_is_left_to_the_programs(formula: str) -> None:
    cells = {
        "A1": 1.0,
        "A2": 4.0,
        "A5": "text",
        "B1": "=A1*2",
        "B2": formula,
        "B3": "=B1+1",
        "B4": "=B2",
        "B5": "=B3/7",
    }
    same(cells, {"A1": np.round(LOADS)})


def test_inputs_of_unlike_kinds_are_left_to_the_programs() -> None:
    mixed = np.array([1.0, "2", None, True] * 50, dtype=object)
    same({"A1": 1.0, "B1": "=A1*2", "B2": "=B1+1"}, {"A1": mixed})


def test_results_of_an_earlier_block_stay_as_they_were() -> None:
    from doubler.workbook.evaluate import evaluate_blocks

    graph = build_graph(book(sheet("S", {"A1": 1.0, "B1": "=A1*2", "B2": "=IF(B1>0,B1+1,B1*3)", "B3": "=B2*B1"})))
    outputs = [("S", at(cell)) for cell in ("B2", "B3")]
    parts = list(evaluate_blocks(graph, {("S", at("A1")): LOADS}, outputs, 64))
    whole = np.concatenate([part.value("S", at("B2")) for part in parts])
    np.testing.assert_array_equal(whole, np.where(LOADS > 0, LOADS * 2 + 1, LOADS * 2 * 3))
    np.testing.assert_array_equal(np.concatenate([p.value("S", at("B3")) for p in parts]), whole * LOADS * 2)
