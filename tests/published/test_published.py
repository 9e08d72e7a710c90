"""Every published or independently computed check value, one case each.

Each YAML file beside this one holds a list of items: ``id``, ``formula`` (as typed in a cell), ``expected`` (a number,
a text, or rows of them), ``tolerance`` (``abs`` or ``rel``, from the digits that the source prints), ``source``,
``confidence`` (``read``, ``computed`` or ``from memory``) and, where the source itself is wrong, ``source_error``: the
number that it prints, which must then lie outside the tolerance. ``derivation`` names the function that computes the
number by another way than the tool does (test_derivations.py).
"""

from pathlib import Path
from typing import Any

import pytest
import yaml

from doubler import mechanics
from doubler.workbook.evaluate import evaluate_formula

FOLDER = Path(__file__).parent
ITEMS = [
    pytest.param(item, id=f"{path.stem}:{item['id']}")
    for path in sorted(FOLDER.glob("*.yaml"))
    for item in yaml.safe_load(path.read_text(encoding="utf-8"))
]


def as_rows(value: Any) -> list[list[Any]]:
    if not isinstance(value, list):
        return [[value]]
    return value if isinstance(value[0], list) else [value]


def close(found: float, expected: float, tolerance: dict[str, float]) -> bool:
    return abs(found - expected) <= max(
        float(tolerance.get("abs", 0.0)), float(tolerance.get("rel", 0.0)) * abs(expected)
    )


@pytest.mark.parametrize("item", ITEMS)
def test_formula_gives_the_published_value(item: dict[str, Any]) -> None:
    mechanics.load()
    assert item["source"]
    assert item["confidence"] in {"read", "computed", "from memory"}
    found = evaluate_formula(item["formula"])
    rows, expected_rows = [list(row) for row in found.grid], as_rows(item["expected"])
    assert not found.reasons, found.reasons
    assert len(rows) == len(expected_rows)
    for row, expected_row in zip(rows, expected_rows, strict=True):
        assert len(row) == len(expected_row), (row, expected_row)
        for value, expected in zip(row, expected_row, strict=True):
            if isinstance(expected, str):
                assert value == expected
            elif expected is not None:
                assert close(value, expected, item["tolerance"]), f"{value!r} is not {expected!r}"
                if "source_error" in item:
                    assert not close(value, item["source_error"], item["tolerance"])
