"""The envelope over load cases, batch by batch."""

import numpy as np

from doubler.errors import ErrorValue
from doubler.outcome import Envelope
from doubler.workbook.template import Port

MARGIN = Port("ms_yield", "S", (1, 1), None, "Margin of safety")
STRESS = Port("stress", "S", (2, 1), None, "Stress")
WORD = Port("verdict", "S", (3, 1), None, "Verdict")


def lines(*batches: tuple[list[str], dict[str, object]]) -> dict[str, object]:
    envelope = Envelope([MARGIN, STRESS, WORD])
    for names, results in batches:
        envelope.take(names, {"ms_yield": 1.0, "stress": 1.0, "verdict": "ok", **results})
    return {line.port.name: line for line in envelope.lines()}


def test_extremes_and_their_cases_over_batches() -> None:
    found = lines(
        (["a", "b"], {"ms_yield": np.array([0.2, -0.1])}),
        (["c", "d"], {"ms_yield": np.array([-0.3, 0.5])}),
    )
    margin = found["ms_yield"]
    assert (margin.lowest.value, margin.lowest.case) == (-0.3, "c")  # type: ignore[attr-defined]
    assert (margin.highest.value, margin.highest.case) == (0.5, "d")  # type: ignore[attr-defined]
    assert margin.below_zero == 2  # type: ignore[attr-defined]
    assert list(found) == ["ms_yield", "stress"]


def test_one_value_for_all_cases_counts_for_each() -> None:
    margin = lines((["a", "b", "c"], {"ms_yield": -0.25}))["ms_yield"]
    assert margin.below_zero == 3  # type: ignore[attr-defined]
    assert margin.lowest.case == "a"  # type: ignore[attr-defined]
    assert margin.fails  # type: ignore[attr-defined]


def test_an_error_governs_the_whole_envelope() -> None:
    lanes = np.empty(2, object)
    lanes[:] = [0.4, ErrorValue.DIV0]
    margin = lines((["a", "b"], {"ms_yield": lanes}), (["c"], {"ms_yield": -9.0}))["ms_yield"]
    assert (margin.lowest.value, margin.lowest.case) == (ErrorValue.DIV0, "b")  # type: ignore[attr-defined]
    assert (margin.below_zero, margin.not_computed) == (1, 1)  # type: ignore[attr-defined]
    assert lines((["a", "b"], {"ms_yield": ErrorValue.NUM}))["ms_yield"].not_computed == 2  # type: ignore[attr-defined]
