"""No kernel loops over lanes: a hundred times the lanes run through as many lines of Python."""

import ast
import sys
from pathlib import Path
from types import FrameType
from typing import Any

import numpy as np
import pytest

import doubler.mechanics
from mechanics.test_catalogue_sweep import EXAMPLES, NAMES

FOLDER = Path(doubler.mechanics.__file__).parent
SOURCES = sorted(FOLDER.glob("*.py"))
FEW, MANY = 3, 300
"""Both below the length from which calls are split into blocks."""
GROUPED = {"BUCKLING_PLATE_FACTOR", "BUCKLING_PLATE_K_SHEAR"}
"""Big eigenproblems are solved 64 lanes at a time, for memory."""


@pytest.mark.parametrize("source", SOURCES, ids=lambda path: path.name)
def test_nothing_is_vectorized_by_a_loop_in_disguise(source: Path) -> None:
    for node in ast.walk(ast.parse(source.read_text(encoding="utf-8"))):
        name = node.attr if isinstance(node, ast.Attribute) else node.id if isinstance(node, ast.Name) else ""
        assert name not in {"vectorize", "frompyfunc", "apply_along_axis", "apply_over_axes", "nditer", "ndenumerate"}


def lines_of(name: str, lanes: int) -> int:
    """Return how many lines of the folder run in one call with so many lanes."""
    example = EXAMPLES[name]
    entries = [argument.entries for argument in example.function.arguments]
    limits = [getattr(argument.limit, "words", "") for argument in example.function.arguments]
    near = np.linspace(1.0, 1.0 + 1e-6, lanes)

    def several(index: int, value: Any) -> Any:
        if entries[index] or limits[index] == "must be at least 1":
            return value
        return np.asarray(value, dtype=np.float64).reshape(-1)[:1] * near

    values = example.values(several)
    count = 0

    def trace(frame: FrameType, event: str, _: Any) -> Any:
        nonlocal count
        if not frame.f_code.co_filename.startswith(str(FOLDER)):
            return None
        count += event == "line"
        return trace

    before = sys.gettrace()
    example.outcome(values)  # what is kept from a first call counts for neither
    sys.settrace(trace)
    try:
        outcome = example.outcome(values)
    finally:
        sys.settrace(before)
    assert outcome is not None
    return count


def test_a_loop_is_seen() -> None:
    # Words are put together one lane at a time: there is no array work in them.
    assert lines_of("MODULUS_CHECK", MANY) > 5 * lines_of("MODULUS_CHECK", FEW)


@pytest.mark.parametrize(
    "name",
    [n for n in NAMES if EXAMPLES[n].function.result.quantity is not None and n not in GROUPED],
)
def test_many_lanes_run_through_no_more_lines_than_few(name: str) -> None:
    few, many = lines_of(name, FEW), lines_of(name, MANY)
    # A search ends a few steps later where more lanes have to settle.
    assert many <= 2 * few + 60
