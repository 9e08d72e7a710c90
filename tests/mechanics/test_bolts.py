"""Preloaded bolts: preload, stiffness share, and the load in the bolt before and after the joint opens."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad

from doubler import mechanics
from doubler.errors import InputError
from doubler.mechanics import bolts

mechanics.load()
FEW = settings(max_examples=40, deadline=None)


@given(torque=st.floats(1e2, 1e6), factor=st.floats(0.05, 0.4), scatter=st.floats(0.0, 0.5), lost=st.floats(0.0, 0.3))
@FEW
def test_least_nominal_and_largest_preload_stand_in_order(torque, factor, scatter, lost) -> None:
    least, nominal, largest = bolts.preload(torque, 10.0, factor, scatter, lost)
    assert least <= nominal <= largest
    assert nominal * factor * 10.0 == pytest.approx(torque)
    assert least == pytest.approx((1 - scatter) * (1 - lost) * nominal)


@pytest.mark.parametrize("place", [3, 4])
@pytest.mark.parametrize("bad", [-0.1, 1.0, 25.0])
def test_scatter_and_relaxation_are_fractions(place: int, bad: float) -> None:
    arguments = [5e4, 10.0, 0.2, 0.25, 0.05]
    arguments[place] = bad
    with pytest.raises(InputError, match="must be at least 0 and below 1"):
        bolts.preload(*arguments)


def test_without_friction_the_torque_s_work_is_the_preload_s_work() -> None:
    """One turn: T 2 pi = F P."""
    assert bolts.preload_friction(5e4, 1.5, 9.026, 0.0, 13.0, 0.0) == pytest.approx(2.0 * np.pi * 5e4 / 1.5)


@given(thread=st.floats(0.0, 0.3), face=st.floats(0.0, 0.3), more=st.floats(0.01, 0.2))
@FEW
def test_more_friction_leaves_less_preload(thread, face, more) -> None:
    sizes = (5e4, 1.5, 9.026)
    reference = bolts.preload_friction(*sizes, thread, 13.0, face)
    assert bolts.preload_friction(*sizes, thread + more, 13.0, face) < reference
    assert bolts.preload_friction(*sizes, thread, 13.0, face + more) < reference


def test_forces_on_an_inclined_flank_balance() -> None:
    """A wedge of the lead's slope with friction mu / cos(alpha): push over load, by its force triangle."""
    lead, friction = np.arctan(1.5 / (np.pi * 9.026)), np.arctan(0.12 / np.cos(np.pi / 6.0))
    arm = 9.026 / 2.0 * np.tan(lead + friction)
    assert bolts.preload_friction(5e4, 1.5, 9.026, 0.12, 13.0, 0.0) == pytest.approx(5e4 / arm, rel=1e-12)


@pytest.mark.parametrize("angle", [None, 0.4, 0.7])
def test_the_cones_stiffness_is_that_of_their_slices_in_series(angle: float | None) -> None:
    slope = np.tan(np.pi / 6.0 if angle is None else angle)
    slices = quad(lambda x: 1.0 / (70e3 * np.pi * ((7.5 + x * slope) ** 2 - 25.0)), 0.0, 10.0)[0]
    assert bolts.members(20.0, 10.0, 15.0, 70e3, angle) == pytest.approx(1.0 / (2.0 * slices), rel=1e-9)


@given(preload=st.floats(0.0, 1e5), pull=st.floats(0.0, 1e5), share=st.floats(0.0, 1.0))
@FEW
def test_a_bolt_never_carries_less_than_its_preload_or_the_pull(preload, pull, share) -> None:
    found = bolts.load(preload, pull, share)
    assert found >= max(preload, pull)
    assert found <= preload + pull
    closed = pull * (1.0 - share) <= preload
    assert found == pytest.approx(preload + share * pull if closed else pull)


def test_the_share_is_the_bolt_s_part_of_the_stiffness() -> None:
    assert bolts.share(250.0, 750.0) == 0.25
    assert bolts.share(250.0, 750.0, 0.5) == 0.125


def test_a_unified_thread_has_the_smaller_area() -> None:
    assert bolts.stress_area(6.35, 1.27, "unified") < bolts.stress_area(6.35, 1.27)


@pytest.mark.parametrize(
    ("call", "word"),
    [
        (lambda: bolts.stress_area(10.0, 4.0), "third of the diameter"),
        (lambda: bolts.stress_area(10.0, 0.0), "pitch must be positive"),
        (lambda: bolts.preload(0.0, 10.0, 0.2, 0.25, 0.05), "torque must be positive"),
        (lambda: bolts.preload(5e4, 10.0, 0.0, 0.25, 0.05), "nut_factor must be positive"),
        (lambda: bolts.preload_friction(5e4, 1.5, 9.0, -0.1, 13.0, 0.1), "must not be negative"),
        (lambda: bolts.preload_friction(5e4, 30.0, 9.0, 0.9, 13.0, 0.1), "no torque tightens"),
        (lambda: bolts.members(20.0, 15.0, 15.0, 7e4), "larger than the hole"),
        (lambda: bolts.members(20.0, 10.0, 15.0, 7e4, 1.2), "cone_angle must be"),
        (lambda: bolts.share(0.0, 750.0), "bolt must be positive"),
        (lambda: bolts.share(250.0, 750.0, 1.2), "loading_plane_factor must be"),
        (lambda: bolts.load(20.0, -1.0, 0.25), "external must not be negative"),
        (lambda: bolts.load(20.0, 1.0, 1.1), "share must be"),
    ],
)
def test_outside_its_range_there_is_no_result(call, word: str) -> None:
    with pytest.raises(InputError, match=word):
        call()
