"""Margins of bolts and their holes: refusals, balance, and what must scale."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler import mechanics
from doubler.errors import InputError
from doubler.mechanics import margins_bolts as module

mechanics.load()
FEW = settings(max_examples=40, deadline=None)
FORCE = st.floats(10.0, 1e5)
RULES = ["exponents 2 and 3", "squares", "linear"]


@pytest.mark.parametrize("rule", RULES)
@given(tension=FORCE, shear=FORCE, by=st.floats(0.1, 10.0))
@FEW
def test_tension_with_shear_scales_exactly_with_the_loads(rule, tension, shear, by) -> None:
    once = 1.0 + module.combined(tension, shear, 3e4, 2e4, 1.5, rule)
    again = 1.0 + module.combined(by * tension, -by * shear, 3e4, 2e4, 1.5, rule)
    assert again == pytest.approx(once / by, rel=1e-9)


@given(tension=FORCE, shear=FORCE)
@FEW
def test_the_safer_rule_gives_the_lower_margin(tension, shear) -> None:
    loads = (tension, shear, 3e4, 2e4, 1.5)
    found = [module.combined(*loads, rule) for rule in RULES]
    assert found[2] <= found[1] + 1e-9


def test_one_load_alone_has_its_own_margin() -> None:
    assert module.combined(1e4, 0.0, 3e4, 2e4, 1.5, RULES[0]) == pytest.approx(1.0)
    alone = module.shear(-1e4, 2e4, 1.5)
    assert module.combined(0.0, -1e4, 3e4, 2e4, 1.5, RULES[0]) == pytest.approx(alone)
    assert module.shear(1e4, 2e4, 1.5, 2.0, 1.15) == pytest.approx(4e4 / (1.5 * 1.15 * 1e4) - 1.0)


@given(pull=FORCE, preload=st.floats(0.0, 1e5), share=st.floats(0.0, 1.0))
@FEW
def test_a_preload_or_a_larger_share_never_raises_the_margin_in_tension(pull, preload, share) -> None:
    found = module.tension(pull, 5e4, preload, share, 1.4)
    assert found <= module.tension(pull, 5e4, 0.0, share, 1.4) + 1e-12
    assert found >= module.tension(pull, 5e4, preload, 1.0, 1.4) - 1e-12
    assert found <= 5e4 / (1.4 * pull) - 1.0 + 1e-9


def test_a_preloaded_bolt_without_pull_is_judged_by_its_preload() -> None:
    assert module.tension(0.0, 3e4, 2e4, 0.25, 1.5) == pytest.approx(0.5)


@given(pull=FORCE, preload=FORCE, factor=st.floats(1.0, 2.0))
@FEW
def test_the_factored_pull_grown_by_the_margin_just_opens_the_joint(pull, preload, factor) -> None:
    assert pull * factor * (1.0 + module.separation(pull, preload, factor)) == pytest.approx(preload, rel=1e-9)


def test_an_edge_nearer_than_one_and_a_half_diameters_is_refused() -> None:
    assert module.tear_out(100.0, 10.0, 5.0, 15.0, 200.0, 1.5) == pytest.approx(2 * 5 * 10 * 200 / 150 - 1)
    with pytest.raises(InputError, match=r"1\.5 diameters"):
        module.tear_out(100.0, 10.0, 5.0, 14.9, 200.0, 1.5)


@pytest.mark.parametrize(
    ("call", "word"),
    [
        (lambda: module.tension(-1.0, 3e4, 2e4, 0.25, 1.5), "external must not be negative"),
        (lambda: module.tension(0.0, 3e4, 0.0, 0.25, 1.5), "zero load"),
        (lambda: module.tension(1e3, 0.0, 2e4, 0.25, 1.5), "allowable must be positive"),
        (lambda: module.tension(1e3, 3e4, 2e4, 0.25, 0.9), "at least 1"),
        (lambda: module.shear(0.0, 2e4, 1.5), "zero load"),
        (lambda: module.shear(1e3, -2e4, 1.5), "allowable must be positive"),
        (lambda: module.shear(1e3, 2e4, 1.5, 0.5), "shear_planes must be at least 1"),
        (lambda: module.combined(-1.0, 1.0, 3e4, 2e4, 1.5, "squares"), "tension must not be negative"),
        (lambda: module.combined(0.0, 0.0, 3e4, 2e4, 1.5, "squares"), "zero load"),
        (lambda: module.combined(1.0, 1.0, 0.0, 2e4, 1.5, "squares"), "tension_allowable must be positive"),
        (lambda: module.separation(0.0, 2e4, 1.2), "external must be positive"),
        (lambda: module.separation(1e3, 0.0, 1.2), "preload must be positive"),
        (lambda: module.separation(1e3, 2e4, 0.9), "at least 1"),
        (lambda: module.bearing(0.0, 10.0, 5.0, 200.0, 1.5), "zero load"),
        (lambda: module.bearing(1e3, 10.0, 5.0, 0.0, 1.5), "bearing_allowable must be positive"),
    ],
)
def test_what_has_no_margin_is_refused(call, word: str) -> None:
    with pytest.raises(InputError, match=word):
        call()


def test_arrays_agree_with_scalars() -> None:
    loads = np.array([100.0, 2e3, 4e4])
    assert module.tension(loads, 5e4, 1e4, 0.2, 1.4) == pytest.approx(
        [module.tension(v, 5e4, 1e4, 0.2, 1.4) for v in loads]
    )
    assert module.combined(loads, 5e3, 3e4, 2e4, 1.4, RULES[0]) == pytest.approx(
        [module.combined(v, 5e3, 3e4, 2e4, 1.4, RULES[0]) for v in loads]
    )
