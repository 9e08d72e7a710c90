"""Criteria over cells of every kind.

Expected: the row 'Expected' of the sample workbook countif.xlsx of Gnumeric 1.12.55, which holds what Excel gave for
each criterion over the same nine cells (one bit a cell).
"""

from typing import Any

import numpy as np
import pytest

from workbook.evaluated_books import run, shown

CELLS = {"A1": 0, "A2": 1, "A3": 10, "A4": False, "A5": True, "A7": "0", "A8": "1", "A9": "String"}


@pytest.mark.parametrize(
    ("criterion", "bits"),
    [
        (0, 65), (1, 130), ("0", 65), ("1", 130), (False, 8), (True, 16), ("FALSE", 8), ("TRUE", 16), ("F", 0),
        ("String", 256), ("string", 256), ("str", 0), ("?", 192), ("*", 448), ("str*", 256), ("*0*", 64),
        ("=1", 130), (">1", 4), (">=1", 6), ("<>1", 509), ("<=1", 3), ("<1", 1), ("<>TRUE", 495), ("<=TRUE", 24),
    ],
)  # fmt: skip
def test_each_criterion_meets_the_cells_that_excel_counts(criterion: Any, bits: int) -> None:
    formulas = {f"B{k}": f"=COUNTIF(A{k},$D$1)" for k in range(1, 10)}
    found = run({**CELLS, "D1": criterion, **formulas})
    assert sum(2 ** (k - 1) * shown(found, f"B{k}") for k in range(1, 10)) == bits
    whole = run({**CELLS, "D1": criterion, "B1": "=COUNTIF(A1:A9,D1)"})
    assert shown(whole, "B1") == bin(bits).count("1")


def test_a_criterion_that_varies_by_case() -> None:
    found = run({**CELLS, "D1": 0, "B1": "=COUNTIF(A1:A9,D1)"}, {"D1": np.array([0.0, 1.0, 10.0, 7.0])})
    assert shown(found, "B1") == [2.0, 2.0, 1.0, 0.0]
