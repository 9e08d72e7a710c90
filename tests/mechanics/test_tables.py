"""Quantities in cells, and tables that are never read beyond their ends."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler import mechanics
from doubler.catalogue.formula_text import evaluate_text
from doubler.errors import ErrorValue, InputError
from doubler.mechanics import tables
from doubler.mechanics.table_rows import aligned, same_text

mechanics.load()


def value(formula: str):
    found = evaluate_text(formula)
    assert not found.reasons, found.reasons
    return found.grid[0][0]


@pytest.mark.parametrize(
    ("given_", "wanted", "expected"),
    [
        ("68 °F", "°F", 68.0),
        ("68 °F", "°C", 20.0),
        ("68 °F", "K", 293.15),
        ("20 °C", "°F", 68.0),
        ("20 °C", "°C", 20.0),
        ("-40 °F", "°C", -40.0),
    ],
)
def test_temperatures_keep_their_zero_in_either_set(given_: str, wanted: str, expected: float) -> None:
    assert value(f'=UNIT_CONVERT("{given_}", "{wanted}")') == pytest.approx(expected, abs=1e-9)


def test_temperatures_of_us_units_alone_are_interpolated_and_given_back_in_them() -> None:
    formula = '=UNIT_INTERPOLATE("70 °F", {"50 °F";"100 °F"}, {"0 °F";"100 °F"}, "°F")'
    assert value(formula) == pytest.approx(40.0, abs=1e-9)


@pytest.mark.parametrize("text", ["12.5 N/mm2", "Stress [N/mm2]", "N/mm2"])
def test_a_unit_is_given_back_in_its_own_spelling(text: str) -> None:
    assert value(f'=UNIT_OF("{text}")') == "N/mm2"


@pytest.mark.parametrize("pair", [("1 in", "mm"), ("3 kip", "kN"), ("2 Msi", "GPa"), ("7 lbf*ft", "N*m")])
def test_there_and_back_is_the_same(pair: tuple[str, str]) -> None:
    text, unit = pair
    there = value(f'=UNIT_CONVERT("{text}", "{unit}")')
    own = text.split(" ")[1]
    assert value(f'=UNIT_CONVERT("{there!r} {unit}", "{own}")') == pytest.approx(float(text.split(" ")[0]), rel=1e-14)


@pytest.mark.parametrize(
    ("formula", "word"),
    [
        ('=UNIT_CONVERT("12 mm", "kN")', "length"),
        ('=UNIT_CONVERT(12, "mm")', "no unit"),
        ('=UNIT_ATTACH(12.5, "KN")', "write kN"),
        ('=UNIT_OF("5")', "no unit"),
        ('=UNIT_INTERPOLATE("101 °C", {"20 °C";"100 °C"}, {"70 GPa";"66 GPa"}, "GPa")', "outside the table"),
        ('=UNIT_INTERPOLATE("19.9 °C", {"20 °C";"100 °C"}, {"70 GPa";"66 GPa"}, "GPa")', "outside the table"),
        ('=UNIT_INTERPOLATE("30 °C", {"20 °C";"100 °C";"50 °C"}, {"7 GPa";"6 GPa";"5 GPa"}, "GPa")', "rise or fall"),
        ('=UNIT_INTERPOLATE("30 °C", {"20 °C";"20 °C";"50 °C"}, {"7 GPa";"6 GPa";"5 GPa"}, "GPa")', "rise or fall"),
        ('=UNIT_INTERPOLATE("30 °C", {"20 °C";"100 °C"}, {"7 GPa";"6 GPa";"5 GPa"}, "GPa")', "equally long"),
        ('=UNIT_INTERPOLATE_GRID(3, 50, {0;0;2;2}, {0;100;0;100}, {1;2;3;4}, "N-mm")', "first argument lies outside"),
        ('=UNIT_INTERPOLATE_GRID(1, -1, {0;0;2;2}, {0;100;0;100}, {1;2;3;4}, "N-mm")', "second argument lies outside"),
        ('=UNIT_INTERPOLATE_GRID(1, 50, {0;0;2}, {0;100;0}, {1;2;3}, "N-mm")', "one row a pair"),
        ('=UNIT_INTERPOLATE_GRID(1, 50, {0;0;2;2}, {0;100;0;0}, {1;2;3;4}, "N-mm")', "stands twice"),
    ],
)
def test_what_cannot_be_read_is_an_error_with_its_reason(formula: str, word: str) -> None:
    found = evaluate_text(formula)
    assert isinstance(found.grid[0][0], ErrorValue)
    assert word in " ".join(found.reasons)


def test_the_ends_of_a_table_belong_to_it_whatever_the_unit_of_the_value() -> None:
    table = '{"20 °C";"100 °C"}, {"70 GPa";"66 GPa"}, "GPa")'
    assert value(f'=UNIT_INTERPOLATE("212 °F", {table}') == pytest.approx(66.0)
    assert value(f'=UNIT_INTERPOLATE("68 °F", {table}') == pytest.approx(70.0)


@given(
    steps=st.lists(st.floats(0.1, 5.0), min_size=2, max_size=6),
    share=st.floats(0.0, 1.0),
    slope=st.floats(-3.0, 3.0),
    falling=st.booleans(),
)
@settings(max_examples=40, deadline=None)
def test_a_straight_line_is_read_exactly_in_either_order(steps, share, slope, falling) -> None:
    x = np.cumsum(steps)
    y = 2.0 + slope * x
    at = x[0] + share * (x[-1] - x[0])
    order = slice(None, None, -1) if falling else slice(None)
    assert tables.interpolate(at, x[order], y[order]) == pytest.approx(2.0 + slope * at, abs=1e-9)


def test_a_table_of_its_own_for_each_case_agrees_with_one_case_at_a_time() -> None:
    x = np.array([[0.0, 1.0, 3.0], [5.0, 2.0, 1.0]])
    y = np.array([[1.0, 2.0, 0.0], [4.0, 1.0, 9.0]])
    at = np.array([2.0, 1.5])
    alone = [tables.interpolate(at[i], x[i], y[i]) for i in range(2)]
    assert tables.interpolate(at, x, y) == pytest.approx(alone)
    assert alone == pytest.approx([1.0, 5.0])


def test_a_bilinear_surface_is_read_exactly_in_any_order_of_rows() -> None:
    first, second = (grid.ravel() for grid in np.meshgrid([0.0, 1.0, 4.0], [10.0, 30.0], indexing="ij"))
    surface = 1.0 + 2.0 * first + 0.5 * second + 0.1 * first * second
    mixed = np.array([3, 0, 5, 1, 4, 2])
    found = tables.interpolate_grid(2.2, 17.0, first[mixed], second[mixed], surface[mixed])
    assert found == pytest.approx(1.0 + 4.4 + 8.5 + 3.74)


@given(number=st.floats(-1e12, 1e12))
@settings(max_examples=50, deadline=None)
def test_an_attached_number_is_read_back_as_itself(number: float) -> None:
    text = str(tables.attach(number, "kN"))
    assert float(text.split(" ", maxsplit=1)[0]) == number


def test_texts_beside_numbers_are_as_many_and_a_name_is_the_same_in_any_case() -> None:
    assert aligned([" a", "b "], 2, "names") == ["a", "b"]
    for texts in (["a"], ["Name", "a", "b"]):
        with pytest.raises(InputError, match="same rows"):
            aligned(texts, 2, "names")
    assert same_text("Al  2024-T3", "al 2024-t3")
    assert not same_text("2024-T3", "2024-T351")
