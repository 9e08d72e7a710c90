"""Groups of fasteners: the forces on them are in balance with the load, whatever the pattern."""

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from doubler import mechanics
from doubler.catalogue.formula_text import evaluate_text
from doubler.errors import ErrorValue, InputError
from doubler.mechanics import bolt_group

mechanics.load()
PLACE = st.integers(-100, 100).map(float)
PATTERN = st.lists(st.tuples(PLACE, PLACE, st.floats(10.0, 200.0)), min_size=3, max_size=7, unique_by=lambda p: p[:2])
LOAD = st.floats(-1e4, 1e4)
FEW = settings(max_examples=40, deadline=None)


@given(pattern=PATTERN, px=LOAD, py=LOAD, at_x=PLACE, at_y=PLACE, moment=LOAD)
@FEW
def test_shear_forces_add_up_to_the_load_and_its_moment(pattern, px, py, at_x, at_y, moment) -> None:
    x, y, areas = np.array(pattern).T
    found = bolt_group.shear(x, y, x, y, px, py, at_x, at_y, moment, areas)
    assert found[:, 0].sum() == pytest.approx(px, abs=1e-6)
    assert found[:, 1].sum() == pytest.approx(py, abs=1e-6)
    turned = (x * found[:, 1] - y * found[:, 0]).sum()
    assert turned == pytest.approx(moment + at_x * py - at_y * px, rel=1e-8, abs=1e-4)
    assert found[:, 2] == pytest.approx(np.hypot(found[:, 0], found[:, 1]))


@given(pattern=PATTERN, pull=LOAD, about_x=LOAD, about_y=LOAD)
@FEW
def test_tensions_add_up_to_the_pull_and_its_moments(pattern, pull, about_x, about_y) -> None:
    x, y, areas = np.array(pattern).T
    assume(np.linalg.matrix_rank(np.stack([x - x.mean(), y - y.mean()]), tol=5.0) == 2)
    found = bolt_group.tension(x, y, x, y, pull, about_x, about_y, areas)
    x0, y0 = bolt_group.centroid(x, y, areas)
    assert found.sum() == pytest.approx(pull, abs=1e-5)
    assert ((y - y0) * found).sum() == pytest.approx(about_x, rel=1e-7, abs=1e-3)
    assert (-(x - x0) * found).sum() == pytest.approx(about_y, rel=1e-7, abs=1e-3)


def test_a_moment_about_x_stretches_the_upper_and_one_about_y_the_left_fasteners() -> None:
    x, y = np.array([40.0, -40.0, -40.0, 40.0]), np.array([30.0, 30.0, -30.0, -30.0])
    assert list(np.sign(bolt_group.tension(x, y, x, y, 0.0, 1.0, 0.0))) == [1, 1, -1, -1]
    assert list(np.sign(bolt_group.tension(x, y, x, y, 0.0, 0.0, 1.0))) == [-1, 1, 1, -1]


def test_a_counter_clockwise_moment_pushes_the_right_fastener_up() -> None:
    found = bolt_group.shear(50.0, 0.0, np.array([50.0, -50.0]), np.zeros(2), 0.0, 0.0, 0.0, 0.0, 1000.0)
    assert list(found) == pytest.approx([0.0, 10.0, 10.0])


def test_turning_a_fitting_about_its_heel_balances_the_moment() -> None:
    arms = np.array([15.0, 60.0, 60.0, 105.0])
    found = bolt_group.heel(arms, arms, 5000.0)
    assert (found * arms).sum() == pytest.approx(5000.0)
    assert found[3] / found[0] == pytest.approx(7.0)


def test_all_fasteners_at_once_agree_with_one_at_a_time() -> None:
    x, y, areas = np.array([0.0, 60.0, 70.0]), np.array([0.0, 5.0, 50.0]), np.array([50.0, 80.0, 20.0])
    load = (3.0, 7.0, 90.0, -20.0, 400.0, areas)
    alone = [bolt_group.shear(a, b, x, y, *load) for a, b in zip(x, y, strict=True)]
    assert bolt_group.shear(x, y, x, y, *load) == pytest.approx(np.array(alone))


@pytest.mark.parametrize(
    ("call", "word"),
    [
        (
            lambda: bolt_group.shear(1.0, 0.0, np.array([0.0, 50.0]), np.zeros(2), 1.0, 0.0, 0.0, 0.0, 0.0),
            "no fastener",
        ),
        (lambda: bolt_group.shear(0.0, 0.0, np.zeros(2), np.zeros(2), 1.0, 0.0, 0.0, 0.0, 0.0), "one place"),
        (lambda: bolt_group.shear(0.0, 0.0, np.zeros(1), np.zeros(1), 1.0, 0.0, 0.0, 0.0, 0.0), "one place"),
        (lambda: bolt_group.shear(0.0, 0.0, np.zeros(2), np.zeros(3), 1.0, 0.0, 0.0, 0.0, 0.0), "as many x as y"),
        (lambda: bolt_group.centroid(np.zeros(2), np.zeros(2), np.array([10.0, 0.0])), "areas must be positive"),
        (lambda: bolt_group.centroid(np.zeros(3), np.zeros(3), np.array([10.0, 5.0])), "one area a fastener"),
        (lambda: bolt_group.tension(0.0, 0.0, np.array([0.0, 50.0]), np.zeros(2), 1.0, 1.0, 0.0), "one line"),
        (lambda: bolt_group.heel(20.0, np.array([0.0, 0.0]), 10.0), "heel line"),
        (lambda: bolt_group.heel(20.0, np.array([10.0, 30.0]), 10.0), "this arm"),
        (lambda: bolt_group.heel(10.0, np.array([10.0, 30.0]), -10.0), "moment must not be negative"),
        (lambda: bolt_group.heel(10.0, np.array([10.0, -30.0]), 10.0), "group_arms must not be negative"),
    ],
)
def test_a_group_that_cannot_carry_it_is_refused(call, word: str) -> None:
    with pytest.raises(InputError, match=word):
        call()


def test_an_error_among_the_fasteners_is_an_error() -> None:
    found = evaluate_text('=STRESS_BOLT_GROUP_HEEL("20 mm", {"mm";20;""}, "680 N*m", "kN")')
    assert found.grid == [[ErrorValue.VALUE]]
