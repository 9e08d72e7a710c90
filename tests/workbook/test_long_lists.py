"""A long list of numbers without a heading is one quantity: its unit is asked for once."""

from doubler.workbook.unit_verdicts import Tracing
from workbook.small_books import Value, rows, told, traced


def listed(count: int) -> dict[str, Value]:
    lines: list[tuple[Value, ...]] = [(float(k), 2.0, f"=A{k}+B{k}") for k in range(1, count + 1)]
    return rows(*lines)


def unknowns(tracing: Tracing) -> int:
    return len({item.key for _, judgement in tracing.cells() for item in judgement.passed.opens})


def test_a_long_list_is_one_unknown_and_a_short_one_is_many() -> None:
    assert unknowns(traced(listed(100))) <= 2
    assert unknowns(traced(listed(10))) > 2
    assert not told(traced(listed(100)))
