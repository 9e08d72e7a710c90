"""The benchmarks' own frame; no test measures time."""

import pytest
from tests.benchmarks.__main__ import modules
from tests.benchmarks.ratio import Ratio, side_by_side


def test_modules_with_ratios_are_found() -> None:
    assert {"cells", "start"} <= set(modules([]))
    assert modules(["start"]) == ["start"]
    assert "ratio" not in modules([])


@pytest.mark.parametrize(
    ("value", "target", "direction", "met"),
    [
        (81.0, 80.0, "at least", True),
        (79.0, 80.0, "at least", False),
        (1.3, 1.2, "at most", False),
        (9.0, None, "at most", True),
    ],
)
def test_a_target_is_met_or_missed(value: float, target: float | None, direction: str, met: bool) -> None:
    ratio = Ratio("name", value, target, direction)  # type: ignore[arg-type]
    assert ratio.met is met
    assert ("MISSED" in ratio.line()) is not met


def test_both_sides_are_called_in_turn() -> None:
    seen: list[str] = []
    side_by_side(lambda: seen.append("a"), lambda: seen.append("b"), rounds=2, calls=(1, 2))
    assert seen == ["a", "b", "a", "b", "b", "a", "b", "b"]
