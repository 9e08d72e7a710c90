"""Curved bars: equilibrium over the section, the straight bar as limit, refusals."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from doubler.catalogue.formula_text import evaluate_text
from doubler.mechanics import curved_beam, curved_neutral_axis

NODES, WEIGHTS = np.polynomial.legendre.leggauss(60)
LOADS = st.floats(-1e5, 1e5)


@given(LOADS, LOADS, st.floats(5.0, 500.0), st.floats(2.0, 60.0), st.floats(0.0, 30.0), st.floats(1.0, 30.0))
def test_trapezium_carries_its_force_and_its_moment(force, moment, inner, depth, inside, outside) -> None:
    r = inner + depth * (1.0 + NODES) / 2.0
    pieces = (inside + (outside - inside) * (r - inner) / depth) * WEIGHTS * depth / 2.0
    stress = curved_beam.curved_trapezium(force, moment, inner, depth, inside, outside, r)
    centroid = np.sum(pieces * r) / np.sum(pieces)
    assert np.sum(stress * pieces) == pytest.approx(force, abs=1e-7 * (abs(force) + abs(moment)) + 1e-9)
    # A positive moment straightens the bar: tension at the inside.
    found = np.sum(stress * pieces * (centroid - r))
    assert found == pytest.approx(moment, abs=1e-7 * (abs(force) * depth + abs(moment)) + 1e-9)


@given(LOADS, LOADS, st.floats(0.51, 50.0))
def test_circle_carries_its_force_and_its_moment(force, moment, slenderness) -> None:
    diameter = 20.0
    centre = slenderness * diameter
    angle = np.pi * (1.0 + NODES) / 2.0
    r = centre - diameter / 2.0 * np.cos(angle)
    pieces = diameter * np.sin(angle) * diameter / 2.0 * np.sin(angle) * WEIGHTS * np.pi / 2.0
    stress = curved_beam.curved_circle(force, moment, centre, diameter, r)
    size = abs(force) * diameter + abs(moment)
    assert np.sum(stress * pieces) == pytest.approx(force, abs=1e-6 * size + 1e-9)
    assert np.sum(stress * pieces * (centre - r)) == pytest.approx(moment, abs=1e-6 * size + 1e-9)


def test_slightly_curved_bar_is_a_straight_one_to_many_digits() -> None:
    inner, depth, width = 1e6, 10.0, 4.0
    straight = 6.0 * 500.0 / (width * depth**2)
    assert curved_beam.curved_rectangle(0.0, 500.0, inner, depth, width, inner) == pytest.approx(straight, rel=1e-4)
    assert curved_neutral_axis.offset_rectangle(inner, depth) == pytest.approx(
        depth**2 / 12.0 / (inner + 5.0), rel=1e-9
    )
    assert curved_neutral_axis.offset_circle(1e6, 10.0) == pytest.approx(100.0 / 16.0 / 1e6, rel=1e-9)


def test_shapes_agree_with_each_other_and_with_the_general_section() -> None:
    rectangle = curved_beam.curved_rectangle(1e3, 9e5, 50.0, 40.0, 20.0, 60.0)
    assert curved_beam.curved_trapezium(1e3, 9e5, 50.0, 40.0, 20.0, 20.0, 60.0) == pytest.approx(rectangle)
    over = 20.0 * np.log(90.0 / 50.0)
    assert curved_beam.curved_general(1e3, 9e5, 800.0, 70.0, over, 60.0) == pytest.approx(rectangle)
    assert curved_neutral_axis.offset_trapezium(50.0, 40.0, 20.0, 20.0) == pytest.approx(70.0 - 800.0 / over)
    neutral = 800.0 / over
    assert curved_beam.curved_rectangle(0.0, 9e5, 50.0, 40.0, 20.0, neutral) == pytest.approx(0.0, abs=1e-9)


@pytest.mark.parametrize(
    ("formula", "words"),
    [
        ('=STRESS_CURVED_RECTANGLE("0 N","1 Nm","50 mm","10 mm","9 mm","61 mm")', "lie in the bar"),
        ('=STRESS_CURVED_RECTANGLE("0 N","1 Nm","0 mm","10 mm","9 mm","5 mm")', "inner_radius must be positive"),
        ('=STRESS_CURVED_CIRCLE("0 N","1 Nm","10 mm","20 mm","10 mm")', "above half the diameter"),
        ('=STRESS_CURVED_CIRCLE("0 N","1 Nm","30 mm","20 mm","41 mm")', "lie in the bar"),
        ('=STRESS_CURVED_TRAPEZIUM("0 N","1 Nm","30 mm","20 mm","0 mm","0 mm","31 mm")', "no area"),
        ('=STRESS_CURVED_GENERAL("0 N","1 Nm","8 cm2","68 mm","11 mm","50 mm")', "no section"),
        ('=SECTION_CURVED_OFFSET_CIRCLE("10 mm","20 mm")', "above half the diameter"),
        ('=SECTION_CURVED_OFFSET_TRAPEZIUM("9 mm","1 mm","0 mm","0 mm")', "no area"),
    ],
)
def test_outside_its_limits_there_is_a_reason_and_no_number(formula, words) -> None:
    assert words in "; ".join(evaluate_text(formula).reasons)
