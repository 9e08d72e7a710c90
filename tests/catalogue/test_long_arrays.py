"""Long arrays: in blocks, over threads, with factors folded, and the same as one lane at a time."""

import os
import signal
from typing import Any

import numpy as np
import pytest

from doubler import mechanics
from doubler.catalogue import WorksheetFunction, blocks, call_cells, lookup
from doubler.catalogue.annotations import Force, Length, Moment, Stress, column, row
from doubler.catalogue.evaluation import Outcome, evaluate
from doubler.catalogue.limits import POSITIVE, Refusal, condition
from doubler.catalogue.plan import CallError, Plan, folded, plan_for
from doubler.errors import ErrorValue
from doubler.units import parse_unit

mechanics.load()
LANES = 3000


@pytest.fixture(params=[1, 3])
def small_blocks(request: pytest.FixtureRequest, monkeypatch: pytest.MonkeyPatch) -> int:
    """Make every array of some hundred lanes a long one, in one thread and in several."""
    monkeypatch.setattr(blocks, "BLOCK", 256)
    monkeypatch.setattr(blocks, "SHARED", 1000)
    monkeypatch.setattr(blocks, "SHARED_BLOCK", 300)
    monkeypatch.setattr(blocks, "MOST_THREADS", request.param)
    monkeypatch.setattr(blocks, "cores", lambda: request.param)
    return int(request.param)


def planned(function: WorksheetFunction, units: list[str], wanted: str) -> Plan:
    return plan_for(function, tuple(parse_unit(text) for text in units), wanted)


def own(kernel: Any, conditions: tuple[Any, ...] = (), **valid: Any) -> WorksheetFunction:
    return WorksheetFunction("UNIT_OWN", kernel, valid, conditions)


def axial_kernel(force: Force, area: Length) -> Stress:
    return force / area**2


AXIAL = own(axial_kernel, area=POSITIVE)
RANDOM = np.random.default_rng(7)
FORCE, SIDE = RANDOM.normal(size=LANES), RANDOM.uniform(1.0, 2.0, LANES)


def failed(outcome: Outcome) -> dict[str, list[int]]:
    return {f.reason: np.flatnonzero(np.broadcast_to(f.lanes, LANES)).tolist() for f in outcome.failures}


def test_blocks_give_what_the_expression_gives(small_blocks: int) -> None:
    outcome = evaluate(AXIAL, planned(AXIAL, ["kN", "mm"], "MPa"), [FORCE, SIDE])
    np.testing.assert_allclose(outcome.values, FORCE * 1000.0 / SIDE**2, rtol=1e-14)
    assert not outcome.failures


def test_one_value_for_all_lanes_goes_with_long_arrays(small_blocks: int) -> None:
    outcome = evaluate(AXIAL, planned(AXIAL, ["kN", "in"], "MPa"), [FORCE, np.array([2.0])])
    np.testing.assert_allclose(outcome.values, FORCE * 1000.0 / 50.8**2, rtol=1e-14)


def test_lanes_outside_the_limits_fail_alone(small_blocks: int) -> None:
    side = SIDE.copy()
    side[[5, 700, 2999]] = [-1.0, np.nan, 0.0]
    outcome = evaluate(AXIAL, planned(AXIAL, ["kN", "mm"], "MPa"), [FORCE, side])
    bad = sorted(lane for lanes in failed(outcome).values() for lane in lanes)
    assert bad == [5, 700, 2999]
    assert np.isnan(outcome.values[bad]).all()
    assert "area must be positive; it is -1 mm" in failed(outcome)
    good = np.delete(np.arange(LANES), bad)
    np.testing.assert_allclose(outcome.values[good], FORCE[good] * 1000.0 / SIDE[good] ** 2, rtol=1e-14)


def test_a_fixed_value_outside_its_limit_fails_every_lane(small_blocks: int) -> None:
    outcome = evaluate(AXIAL, planned(AXIAL, ["kN", "mm"], "MPa"), [FORCE, np.array([-1.0])])
    assert sorted(lane for f in outcome.failures for lane in np.flatnonzero(f.lanes)) == list(range(LANES))


@pytest.mark.parametrize("bad", [np.inf, -np.inf, np.nan, 1e308])
def test_lanes_without_a_finite_result_fail_alone(small_blocks: int, bad: float) -> None:
    force = FORCE.copy()
    force[[0, 1234]] = bad
    outcome = evaluate(AXIAL, planned(AXIAL, ["kN", "mm"], "Pa"), [force, SIDE])
    assert failed(outcome)
    assert sorted(lane for lanes in failed(outcome).values() for lane in lanes) == [0, 1234]
    assert np.isnan(outcome.values[[0, 1234]]).all()


def test_large_values_that_overflow_only_when_summed_are_results(small_blocks: int) -> None:
    outcome = evaluate(AXIAL, planned(AXIAL, ["N", "mm"], "MPa"), [np.full(LANES, 1e308), np.ones(LANES)])
    assert not outcome.failures
    assert (outcome.values == 1e308).all()


def test_a_condition_between_arguments_fails_its_lanes(small_blocks: int) -> None:
    function = own(axial_kernel, (condition("the force must exceed the side", lambda force, area: force > area),))
    force = np.full(LANES, 5.0)
    force[42] = 0.5
    outcome = evaluate(function, planned(function, ["N", "mm"], "MPa"), [force, np.ones(LANES)])
    assert failed(outcome) == {"the force must exceed the side": [42]}


def test_rows_and_whole_columns_go_through_blocks(small_blocks: int) -> None:
    def kernel(force: Force, arms: column(Length)) -> row(Moment, "first", "last"):  # type: ignore[valid-type]
        moments = force[..., None] * arms
        return np.stack([moments[..., 0], moments[..., -1]], axis=-1)

    function = own(kernel)
    arms = RANDOM.uniform(1.0, 2.0, (LANES, 4))
    outcome = evaluate(function, planned(function, ["kN", "m"], "kN·m"), [FORCE, arms])
    np.testing.assert_allclose(outcome.values, np.stack([FORCE * arms[:, 0], FORCE * arms[:, -1]], -1), rtol=1e-14)
    shared = evaluate(function, planned(function, ["kN", "m"], "kN·m"), [FORCE, arms[:1]])
    np.testing.assert_allclose(shared.values[:, 1], FORCE * arms[0, -1], rtol=1e-14)


def test_temperatures_keep_their_zero_in_blocks(small_blocks: int) -> None:
    function = lookup("UNIT_CONVERT")
    assert function is not None
    outcome = evaluate(function, planned(function, ["°F"], "°C"), [np.full(LANES, 68.0)])
    np.testing.assert_allclose(outcome.values, 20.0, rtol=1e-12)


def test_a_kernel_that_refuses_or_breaks_is_told_after_all_threads_ended(small_blocks: int) -> None:
    def refuses(force: Force) -> Force:
        raise Refusal("no result for these")

    def breaks(force: Force) -> Force:
        raise ZeroDivisionError("a fault")

    for kernel, kind, says in ((refuses, CallError, "no result for these"), (breaks, ZeroDivisionError, "a fault")):
        function = own(kernel)
        with pytest.raises(kind, match=says):
            evaluate(function, planned(function, ["N"], "N"), [FORCE])


def test_a_kernel_that_breaks_outside_its_limits_is_not_blamed(small_blocks: int) -> None:
    def kernel(force: Force) -> Force:
        if (force <= 0).any():
            raise np.linalg.LinAlgError("singular")
        return force

    function = own(kernel, force=POSITIVE)
    force = np.ones(LANES)
    force[17] = -1.0
    assert failed(evaluate(function, planned(function, ["N"], "N"), [force])) == {
        "force must be positive; it is -1 N": [17]
    }


def test_what_is_given_is_left_as_it_was(small_blocks: int) -> None:
    before = FORCE.copy()
    evaluate(AXIAL, planned(AXIAL, ["kN", "mm"], "ksi"), [FORCE, SIDE])
    np.testing.assert_array_equal(FORCE, before)


def test_every_lane_is_met_once_in_order(small_blocks: int) -> None:
    for lanes in (1, 999, 1000, 1001, 2999):
        seen = blocks.in_shares(lanes, lambda start, stop: list(range(start, stop)))
        assert seen == list(range(lanes))


def test_factors_are_folded_into_the_result() -> None:
    plan = planned(AXIAL, ["kN", "mm"], "MPa")
    assert plan.factors == (1000.0, None)
    assert folded(plan).factors == (None, None)
    assert folded(plan).result_factor == 1000.0
    plain = planned(AXIAL, ["N", "mm"], "MPa")
    assert folded(plain) is plain
    assert folded(planned(AXIAL, ["kip", "in"], "ksi")).factors == (None, None)


@pytest.mark.skipif(not hasattr(os, "fork"), reason="this system has no fork")
def test_a_forked_process_begins_without_the_threads_of_its_parent(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(blocks, "SHARED", 1000)
    monkeypatch.setattr(blocks, "cores", lambda: 2)
    assert len(blocks.in_shares(2000, lambda start, stop: list(range(start, stop)))) == 2000
    child = os.fork()
    if child == 0:
        signal.alarm(20)  # a child that waits for threads it does not have ends, and the test fails
        alone = blocks._pool is None
        os._exit(
            0 if alone and len(blocks.in_shares(2000, lambda start, stop: list(range(start, stop)))) == 2000 else 1
        )
    assert os.waitstatus_to_exitcode(os.waitpid(child, 0)[1]) == 0


def test_a_cell_with_a_long_column_gives_its_failures_in_place(small_blocks: int) -> None:
    function = lookup("STRESS_AXIAL")
    assert function is not None
    areas: list[list[Any]] = [["mm^2"], *[[2.0] for _ in range(LANES)]]
    areas[100] = [0.0]
    grid = call_cells(function, ("4 N", areas, "MPa")).grid
    assert grid[99] == [ErrorValue.NUM]
    assert sum(line == [2.0] for line in grid) == LANES - 1
