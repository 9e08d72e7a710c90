"""Natural frequencies: known wave numbers, an independent eigenvalue problem, and refusals."""

import numpy as np
import pytest
from scipy.linalg import eigh

from doubler import mechanics
from doubler.errors import InputError
from doubler.mechanics import stiffness_frequency as module

mechanics.load()
FIXED = {
    "cantilever": (0, 1),
    "simply supported": (0, -2),
    "fixed-fixed": (0, 1, -2, -1),
    "propped": (0, 1, -2),
    "free-free": (),
}


def by_elements(supports: str, modes: int) -> np.ndarray:
    """Return the lowest frequencies of a unit beam by cubic elements with consistent mass."""
    count, h = 61, 1.0 / 60
    k = np.array(
        [
            [12, 6 * h, -12, 6 * h],
            [6 * h, 4 * h**2, -6 * h, 2 * h**2],
            [-12, -6 * h, 12, -6 * h],
            [6 * h, 2 * h**2, -6 * h, 4 * h**2],
        ]
    )
    m = np.array(
        [
            [156, 22 * h, 54, -13 * h],
            [22 * h, 4 * h**2, 13 * h, -3 * h**2],
            [54, 13 * h, 156, -22 * h],
            [-13 * h, -3 * h**2, -22 * h, 4 * h**2],
        ]
    )
    stiff, mass = np.zeros((2 * count, 2 * count)), np.zeros((2 * count, 2 * count))
    for node in range(count - 1):
        part = slice(2 * node, 2 * node + 4)
        stiff[part, part] += k / h**3
        mass[part, part] += m * h / 420
    free = np.setdiff1d(np.arange(2 * count), [index % (2 * count) for index in FIXED[supports]])
    rigid = 2 if supports == "free-free" else 0
    values = eigh(stiff[np.ix_(free, free)], mass[np.ix_(free, free)], eigvals_only=True)
    return np.sqrt(values[rigid : rigid + modes]) / (2.0 * np.pi)


@pytest.mark.parametrize("supports", sorted(FIXED))
def test_frequencies_are_the_eigenvalues_of_finite_elements(supports: str) -> None:
    modes = np.arange(1.0, 6.0)
    assert module.beam(supports, 1.0, 1.0, 1.0, 1.0, modes) == pytest.approx(by_elements(supports, 5), rel=2e-5)


@pytest.mark.parametrize("supports", sorted(FIXED))
def test_wave_numbers_solve_their_equation_and_rise_mode_by_mode(supports: str) -> None:
    u = np.sqrt(2.0 * np.pi * module.beam(supports, 1.0, 1.0, 1.0, 1.0, np.arange(1.0, 21.0)))
    residual = {
        "cantilever": np.cos(u) + 1.0 / np.cosh(u),
        "simply supported": np.sin(u),
        "fixed-fixed": np.cos(u) - 1.0 / np.cosh(u),
        "free-free": np.cos(u) - 1.0 / np.cosh(u),
        "propped": np.sin(u) - np.cos(u) * np.tanh(u),
    }[supports]
    assert residual == pytest.approx(np.zeros(20), abs=1e-12)
    assert np.diff(u) == pytest.approx(np.full(19, np.pi), abs=0.33)


def test_frequency_goes_with_the_root_of_stiffness_over_mass() -> None:
    once = module.beam("cantilever", 2.0, 3.0, 5.0, 7.0)
    assert module.beam("cantilever", 4.0, 3.0, 5.0, 7.0) == pytest.approx(once / 4.0)
    assert module.beam("cantilever", 2.0, 12.0, 5.0, 7.0) == pytest.approx(2.0 * once)
    assert module.beam("cantilever", 2.0, 3.0, 5.0, 28.0) == pytest.approx(once / 2.0)
    assert module.mass_on_spring(4.0 * np.pi**2, 1.0) == pytest.approx(1.0)


@pytest.mark.parametrize("mode", [0.0, 21.0, 1.5, -1.0])
def test_a_mode_that_is_not_in_the_table_is_refused(mode: float) -> None:
    with pytest.raises(InputError, match="mode must be"):
        module.beam("cantilever", 1.0, 1.0, 1.0, 1.0, mode)


@pytest.mark.parametrize("place", range(4))
def test_sizes_and_masses_that_are_not_positive_are_refused(place: int) -> None:
    sizes = [1.0, 1.0, 1.0, 1.0]
    sizes[place] = 0.0
    with pytest.raises(InputError, match="must be positive"):
        module.beam("propped", *sizes)
    with pytest.raises(InputError, match="must be positive"):
        module.mass_on_spring(*sizes[:2] if place < 2 else (1.0, -1.0))
