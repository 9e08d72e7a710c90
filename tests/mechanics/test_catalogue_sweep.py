"""Every worksheet function, from its own example: alike in all argument forms, never without a reason, lane by lane.

The example of each docstring is a valid call. It is written anew in every form of the contract, its numbers are moved
about (within the limits and beyond them), and three of it stand side by side.
"""

from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from formualizer import parse
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler import mechanics
from doubler.catalogue import CellResult, WorksheetFunction, call_cells, cells, lookup, names
from doubler.catalogue.annotations import Quantity
from doubler.catalogue.evaluation import Outcome, evaluate
from doubler.catalogue.forms import Bound
from doubler.catalogue.formula_text import _literal
from doubler.catalogue.plan import CallError, Plan, plan_for
from doubler.units import Unit, consistent_set, factor, kind, parse_unit

mechanics.load()
FEW = settings(max_examples=12, deadline=None, derandomize=True)
NO_REASON = "there is no finite result"
SET = consistent_set("N-mm")
TWO_WAYS = {"angle", "twist_rate", "angular_speed", "temperature", "temperature_change"}
"""Kinds of which a bare number in a set is refused, since it reads two ways."""
NAMES = names()


class Example:
    """The call in a function's docstring, read."""

    def __init__(self, name: str) -> None:
        function = lookup(name)
        assert function is not None
        tree: dict[str, Any] = parse(function.documentation.example).to_dict()
        assert tree["node_type"] == "Function", "the example is a plain call"
        assert tree["name"].upper() == name
        self.function: WorksheetFunction = function
        self.bound, self.wanted = cells.bind_all(function, [_literal(argument) for argument in tree["args"]])
        self.plan: Plan = plan_for(function, tuple(item.unit for item in self.bound), self.wanted)

    @property
    def pairs(self) -> list[tuple[Any, Bound]]:
        return list(zip(self.function.arguments, self.bound, strict=True))

    def values(self, change: Callable[[int, Any], Any]) -> list[Any]:
        """Return the values of the arguments, those that are numbers changed."""
        numbered = enumerate(zip(self.function.arguments, self.bound, strict=True))
        return [b.values if a.is_text or b.values is None else change(i, b.values) for i, (a, b) in numbered]

    def outcome(self, values: list[Any]) -> Outcome | None:
        """Return what the function gives; None where the call as a whole is refused, with a reason."""
        try:
            return evaluate(self.function, self.plan, values)
        except CallError as error:
            if not error.reasons or any(NO_REASON in reason for reason in error.reasons):
                raise
            return None


EXAMPLES = {name: Example(name) for name in NAMES}


def words(unit: Unit | None) -> str:
    return "" if unit is None or unit.text in ("", "1") else unit.text


def texts(argument: Any, number: Any, unit: Unit | None) -> Any:
    return [[f"{n!r} {words(unit)}" if words(unit) else n] for n in number]


def pairs(argument: Any, number: Any, unit: Unit | None) -> Any:
    return [[n, words(unit)] if words(unit) else [n] for n in number]


def headed(argument: Any, number: Any, unit: Unit | None) -> Any:
    return [[words(unit) or "Value"], *([n] for n in number)]


def labelled(argument: Any, number: Any, unit: Unit | None) -> Any:
    return [[f"Value [{words(unit)}]" if words(unit) else "Value"], *([n] for n in number)]


def bare(argument: Any, number: Any, unit: Unit | None) -> Any:
    """Return bare numbers of the set; angles and temperatures, which have no unit in it, keep theirs."""
    if unit is None or not words(unit) or SET is None:
        return [[n] for n in number]
    if getattr(argument.quantity, "kind", "") in TWO_WAYS:
        return pairs(argument, number, unit)
    return [[n * factor(unit, SET.unit_for(unit.dimension))] for n in number]


def _bare_is_enough(argument: Any) -> bool:
    return not isinstance(argument.quantity, Quantity) or kind(argument.quantity.kind).dimensionless


def written(example: Example, form: Callable[[Any, Any, Unit | None], Any]) -> list[Any]:
    """Return the example's arguments in a form of the contract; texts and what is left out stay."""
    arguments: list[Any] = []
    for argument, item in example.pairs:
        if item.values is None or isinstance(item.values, str):
            arguments.append(item.values)
        elif item.unit is None and not argument.is_text and not _bare_is_enough(argument):
            arguments.append(None)  # left out in the example: a default
        elif argument.is_text:
            arguments.append([[text] for text in item.values])
        else:
            numbers = [float(n) for n in np.asarray(item.values).reshape(-1)]
            arguments.append(form(argument, numbers, item.unit))
    return arguments


def called(example: Example, form: Callable[[Any, Any, Unit | None], Any], wanted: str | None) -> CellResult:
    return call_cells(example.function, [*written(example, form), wanted])


def assert_alike(one: CellResult, other: CellResult) -> None:
    assert not one.reasons
    assert not other.reasons, other.reasons
    flat, second = ([v for row in result.grid for v in row] for result in (one, other))
    assert len(flat) == len(second)
    largest = max((abs(v) for v in flat if isinstance(v, float)), default=0.0)
    for mine, theirs in zip(flat, second, strict=True):
        if isinstance(mine, str):
            assert mine == theirs
        else:
            assert mine == pytest.approx(theirs, rel=1e-9, abs=1e-10 * largest)


# A unit that is text itself, and what a cell beside it holds, are the very arguments of these.
OF_UNITS = {"UNIT_ATTACH", "UNIT_OF", "UNIT_CONVERT"}


@pytest.mark.parametrize("name", [name for name in NAMES if name not in OF_UNITS])
@pytest.mark.parametrize("form", [pairs, headed, labelled], ids=lambda form: form.__name__)
def test_all_forms_give_the_same(name: str, form: Callable[[Any, Any, Unit | None], Any]) -> None:
    example = EXAMPLES[name]
    assert_alike(called(example, texts, example.wanted), called(example, form, example.wanted))


@pytest.mark.parametrize("name", [name for name in NAMES if name not in OF_UNITS])
def test_bare_numbers_of_a_set_give_the_same(name: str) -> None:
    example = EXAMPLES[name]
    assert_alike(called(example, texts, "N-mm"), called(example, bare, "N-mm"))


def lacking(outcome: Outcome | None, values: Any) -> list[str]:
    """Return the reasons that are none: the limits let the values pass, and the result is not finite."""
    if outcome is None:
        return []
    return [f"{failure.reason}: {values}" for failure in outcome.failures if NO_REASON in failure.reason]


@pytest.mark.parametrize("name", NAMES)
@given(factors=st.lists(st.floats(0.2, 5.0), min_size=14, max_size=14))
@FEW
def test_finite_input_gives_a_finite_result_or_a_reason(name: str, factors: list[float]) -> None:
    example = EXAMPLES[name]
    values = example.values(lambda index, value: value * factors[index])
    assert not lacking(example.outcome(values), values)


@pytest.mark.parametrize("name", NAMES)
@pytest.mark.parametrize("edge", [0.0, -1.0], ids=["zero", "opposite sign"])
def test_zero_or_the_opposite_sign_gives_a_finite_result_or_a_reason(name: str, edge: float) -> None:
    example = EXAMPLES[name]
    faults: list[str] = []
    for place, (argument, item) in enumerate(example.pairs):
        if not argument.is_text and item.values is not None:
            values = example.values(lambda index, value, place=place: value * edge if index == place else value)
            faults += [f"{argument.name}: {fault}" for fault in lacking(example.outcome(values), values)]
    assert not faults


@pytest.mark.parametrize("name", NAMES)
def test_three_side_by_side_are_three_alone(name: str) -> None:
    example = EXAMPLES[name]
    factors = np.array([0.93, 1.0, 1.04])
    entries = [argument.entries for argument in example.function.arguments]
    whole = [getattr(argument.limit, "words", "") == "must be at least 1" for argument in example.function.arguments]

    def several(index: int, value: Any) -> Any:
        if entries[index] or whole[index]:
            return value
        return np.asarray(value, dtype=np.float64).reshape(-1)[:1] * factors

    try:
        together = evaluate(example.function, example.plan, example.values(several))
    except CallError:
        together = None
    results = []
    for lane in range(3):
        values = example.values(
            lambda index, value, lane=lane: (
                value if entries[index] or whole[index] else several(index, value)[lane : lane + 1]
            )
        )
        results.append(example.outcome(values))
    if together is None:
        assert None in results, "together it is refused, and each alone is not"
        return
    for lane, alone in enumerate(results):
        assert alone is not None
        if example.function.result.quantity is None:
            mine = np.broadcast_to(together.values, (3, *together.values.shape[1:]))[lane]
            assert mine == alone.values[0]
            continue
        mine = together.values[lane if together.values.shape[0] == 3 else 0]
        largest = float(np.nanmax(np.abs(mine))) if np.isfinite(mine).any() else 0.0
        np.testing.assert_allclose(mine, alone.values[0], rtol=1e-10, atol=1e-12 * largest, equal_nan=True)


def test_parse_unit_reads_every_unit_the_examples_name() -> None:
    for example in EXAMPLES.values():
        for _, item in example.pairs:
            if item.unit is not None and words(item.unit):
                assert parse_unit(words(item.unit)).dimension == item.unit.dimension
