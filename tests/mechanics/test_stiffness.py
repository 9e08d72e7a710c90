"""Stiffness and deflection of bars and springs."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler.catalogue.formula_text import evaluate_text
from doubler.errors import ErrorValue, InputError
from doubler.mechanics import springs, stiffness

LENGTH, SECTION, MODULUS = st.floats(10.0, 5e3), st.floats(1.0, 1e6), st.floats(1e3, 3e5)
FORCE = st.floats(-1e5, 1e5)
FEW = settings(max_examples=40, deadline=None)
PAIRS = [
    (stiffness.axial, stiffness.elongation),
    (stiffness.cantilever, stiffness.cantilever_deflection),
    (stiffness.midspan, stiffness.midspan_deflection),
    (stiffness.torsional, stiffness.twist),
]


@pytest.mark.parametrize(("rate", "movement"), PAIRS, ids=lambda function: function.name)
@given(force=FORCE, length=LENGTH, section=SECTION, modulus=MODULUS)
@FEW
def test_stiffness_times_movement_is_the_load_in_size_and_sign(rate, movement, force, length, section, modulus) -> None:
    moved = movement(force, length, section, modulus)
    assert rate(length, section, modulus) * moved == pytest.approx(force, rel=1e-9)


@pytest.mark.parametrize("function", [pair[0] for pair in PAIRS], ids=lambda function: function.name)
@pytest.mark.parametrize("place", [0, 1, 2])
@pytest.mark.parametrize("bad", [0.0, -1.0])
def test_sizes_and_moduli_that_are_not_positive_are_refused(function, place: int, bad: float) -> None:
    arguments = [100.0, 1000.0, 2e5]
    arguments[place] = bad
    with pytest.raises(InputError, match="must be positive"):
        function(*arguments)
    with pytest.raises(InputError, match="must be positive"):
        dict(PAIRS)[function](10.0, *arguments)


def test_bending_stiffness_refuses_what_is_not_positive() -> None:
    assert stiffness.bending(1e4, 2e5) == 2e9
    with pytest.raises(InputError, match="must be positive"):
        stiffness.bending(0.0, 2e5)


@given(rates=st.lists(st.floats(0.1, 1e5), min_size=1, max_size=6))
@FEW
def test_a_chain_is_softer_and_a_bundle_stiffer_than_any_spring(rates: list[float]) -> None:
    chain, bundle = springs.series(np.array(rates)), springs.parallel(np.array(rates))
    assert chain <= min(rates) * (1 + 1e-12)
    assert bundle >= max(rates)
    assert 1.0 / chain == pytest.approx(sum(1.0 / rate for rate in rates))
    assert bundle == pytest.approx(sum(rates))


@pytest.mark.parametrize("function", [springs.series, springs.parallel], ids=lambda function: function.name)
def test_a_spring_without_stiffness_is_refused(function) -> None:
    with pytest.raises(InputError, match="must be positive"):
        function(np.array([100.0, 0.0]))
    with pytest.raises(InputError, match="must be positive"):
        function(np.array([100.0, -5.0]))


def test_an_empty_cell_among_springs_is_an_error() -> None:
    found = evaluate_text('=STIFFNESS_PARALLEL({"N/mm";100;""}, "N/mm")')
    assert found.grid == [[ErrorValue.VALUE]]


def test_arrays_agree_with_scalars() -> None:
    lengths = np.array([50.0, 100.0, 900.0])
    for rate, movement in PAIRS:
        assert list(rate(lengths, 1e3, 2e5)) == [rate(length, 1e3, 2e5) for length in lengths]
        assert list(movement(-7.0, lengths, 1e3, 2e5)) == [movement(-7.0, length, 1e3, 2e5) for length in lengths]
