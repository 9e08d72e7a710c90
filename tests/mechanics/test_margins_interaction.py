"""Interaction: the margin is the true factor on all loads, whatever the exponents."""

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq

from doubler import mechanics
from doubler.catalogue.formula_text import evaluate_text
from doubler.errors import ErrorValue, InputError
from doubler.mechanics import margins_interaction as module

mechanics.load()

PAIRS = sorted(module._EXPONENTS)
RATIO = st.floats(0.001, 3.0)
EXPONENT = st.floats(0.5, 5.0)
TERMS = st.lists(st.tuples(RATIO, EXPONENT), min_size=1, max_size=5)
FEW = settings(max_examples=40, deadline=None)


@given(terms=TERMS)
@FEW
def test_loads_grown_by_margin_plus_one_just_reach_the_limit(terms) -> None:
    ratios, exponents = np.array(terms).T
    grown = ratios * (1.0 + module.interaction(ratios, exponents))
    assert np.sum(grown**exponents) == pytest.approx(1.0, abs=1e-9)


@given(terms=TERMS, by=st.floats(0.1, 10.0))
@FEW
def test_the_margin_scales_exactly_with_the_loads(terms, by: float) -> None:
    ratios, exponents = np.array(terms).T
    once = 1.0 + module.interaction(ratios, exponents)
    assert 1.0 + module.interaction(by * ratios, exponents) == pytest.approx(once / by, rel=1e-9)


@given(first=RATIO, second=RATIO, pair=st.sampled_from(PAIRS), by=st.floats(0.1, 10.0))
@FEW
def test_every_named_pair_scales_exactly_with_the_loads(first, second, pair, by) -> None:
    once = 1.0 + module.interaction_pair(first, second, pair)
    assert 1.0 + module.interaction_pair(by * first, by * second, pair) == pytest.approx(once / by, rel=1e-9)
    one, two = module._EXPONENTS[pair]
    assert (first * once) ** one + (second * once) ** two == pytest.approx(1.0, abs=1e-9)


@given(terms=st.lists(st.tuples(RATIO, st.floats(0.0, 0.9), EXPONENT), min_size=1, max_size=4))
@FEW
def test_beside_constant_loads_the_factor_is_the_root_that_a_bracketing_solver_finds(terms) -> None:
    ratios, constant, exponents = np.array(terms).T
    assume(np.sum(constant**exponents) < 0.99)
    root = brentq(lambda k: np.sum((constant + k * ratios) ** exponents) - 1.0, 0.0, 1.1 / ratios.min(), xtol=1e-14)
    assert 1.0 + module.interaction_constant(ratios, constant, exponents) == pytest.approx(root, rel=1e-7, abs=1e-10)


@given(terms=TERMS)
@FEW
def test_without_constant_loads_both_functions_agree(terms) -> None:
    ratios, exponents = np.array(terms).T
    plain = module.interaction(ratios, exponents)
    assert module.interaction_constant(ratios, 0.0 * ratios, exponents) == pytest.approx(plain, rel=1e-8, abs=1e-9)


def test_one_load_alone_has_the_margin_of_its_ratio() -> None:
    assert module.interaction(np.array([0.4]), np.array([3.0])) == pytest.approx(1.5)
    assert module.interaction(np.array([0.4, 0.0]), np.array([3.0, 2.0])) == pytest.approx(1.5)
    assert module.interaction_pair(0.4, 0.0, "bolt tension and shear") == pytest.approx(1.5)
    assert module.interaction_tube(0.0, 0.4, 0.0) == pytest.approx(1.5)


def test_the_margin_is_zero_on_the_limit_and_never_above_that_of_one_load() -> None:
    assert module.interaction_pair(0.6, 0.8, "tube bending and torsion") == pytest.approx(0.0, abs=1e-12)
    assert module.interaction(np.array([0.6, 0.8]), np.array([3.0, 2.0])) < 0.25


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (module.interaction, (np.array([0.5, -0.1]), np.array([2.0]))),
        (module.interaction_constant, (np.array([0.5, -0.1]), np.array([0.0, 0.0]), np.array([2.0]))),
        (module.interaction_constant, (np.array([0.5]), np.array([-0.1]), np.array([2.0]))),
        (module.interaction_pair, (0.5, -0.1, "linear")),
        (module.interaction_tube, (0.5, 0.1, -0.1)),
    ],
)
def test_a_relieving_ratio_is_refused(function, arguments) -> None:
    with pytest.raises(InputError, match="must not be negative"):
        function(*arguments)


@pytest.mark.parametrize(
    ("function", "arguments"),
    [
        (module.interaction, (np.zeros(2), np.array([2.0]))),
        (module.interaction_constant, (np.zeros(2), np.zeros(2), np.array([2.0]))),
        (module.interaction_pair, (0.0, 0.0, "linear")),
        (module.interaction_tube, (0.0, 0.0, 0.0)),
    ],
)
def test_no_load_at_all_has_no_margin_unless_a_cap_says_so(function, arguments) -> None:
    with pytest.raises(InputError, match="no finite margin"):
        function(*arguments)
    assert function(*arguments, cap=9.0) == 9.0


@pytest.mark.parametrize("exponent", [0.0, -1.0])
def test_an_exponent_that_is_not_positive_is_refused(exponent: float) -> None:
    with pytest.raises(InputError, match="exponents must be positive"):
        module.interaction(np.array([0.5, 0.5]), np.array([exponent]))


def test_lists_of_unlike_length_are_refused() -> None:
    with pytest.raises(InputError, match="one exponent a ratio"):
        module.interaction(np.array([0.5, 0.5, 0.1]), np.array([2.0, 3.0]))
    with pytest.raises(InputError, match="one constant ratio"):
        module.interaction_constant(np.array([0.5, 0.5]), np.array([0.1]), np.array([2.0]))


def test_constant_loads_that_fill_the_limit_leave_no_margin_to_tell() -> None:
    with pytest.raises(InputError, match="constant loads alone"):
        module.interaction_constant(np.array([0.5]), np.array([1.0]), np.array([2.0]))
    with pytest.raises(InputError, match="constant load alone"):
        module.constant_load(10.0, 50.0, 50.0, 1.5)


def test_a_constant_load_that_relieves_is_refused() -> None:
    with pytest.raises(InputError, match="relieves"):
        module.constant_load(10.0, -20.0, 50.0, 1.5)
    assert module.constant_load(-10.0, -20.0, 50.0, 1.5) == pytest.approx(1.0)


@given(applied=st.floats(1.0, 100.0), share=st.floats(0.0, 0.9), factor=st.floats(1.0, 3.0), other=st.floats(1.0, 1.5))
@FEW
def test_beside_a_constant_load_the_grown_sum_reaches_the_allowable(applied, share, factor, other) -> None:
    constant = share * 50.0 / (1.1 * other)
    grown = (1.0 + module.constant_load(applied, constant, 50.0, factor, 1.1, other)) * applied * factor * other
    assert grown + constant * 1.1 * other == pytest.approx(50.0, rel=1e-10)


def test_arrays_agree_with_scalars() -> None:
    first, second = np.array([0.1, 0.5, 2.0]), np.array([0.3, 0.5, 0.0])
    for pair in PAIRS:
        alone = [module.interaction_pair(a, b, pair) for a, b in zip(first, second, strict=True)]
        assert module.interaction_pair(first, second, pair) == pytest.approx(alone, rel=1e-14, abs=1e-14)
    lanes = np.stack([first, second], axis=-1)
    exponents = np.array([2.0, 3.0])
    alone = [module.interaction(lane, exponents) for lane in lanes]
    assert module.interaction(lanes, exponents) == pytest.approx(alone, rel=1e-14, abs=1e-14)


def test_an_error_among_the_ratios_is_an_error() -> None:
    inner = 'MARGIN_RESERVE_FACTOR({"10 MPa";"0 MPa"}, "10 MPa", 1.5)'
    assert evaluate_text(f"=MARGIN_INTERACTION({inner}, 2)").grid == [[ErrorValue.NUM]]


def test_an_unknown_pair_is_refused_with_the_list() -> None:
    found = evaluate_text('=MARGIN_INTERACTION_PAIR(0.5, 0.5, "bolts")')
    assert found.grid == [[ErrorValue.VALUE]]
    assert "plate compression and shear" in found.reasons[0]
