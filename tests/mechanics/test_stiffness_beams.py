"""Deflection lines: against finite elements that are exact for them, reciprocity, and the ends' conditions."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler import mechanics
from doubler.catalogue.formula_text import evaluate_text
from doubler.errors import InputError
from doubler.mechanics import stiffness, stiffness_beam_slopes, stiffness_beams

mechanics.load()
SUPPORTS = ["cantilever", "simply supported", "fixed-fixed", "propped"]
FIXED = {"cantilever": (0, 1), "simply supported": (0, -2), "fixed-fixed": (0, 1, -2, -1), "propped": (0, 1, -2)}
STEPS = st.integers(1, 19)
FEW = settings(max_examples=25, deadline=None)
LENGTH, INERTIA, MODULUS = 2.0, 5.0, 3.0
BEAM = (LENGTH, INERTIA, MODULUS)


def elements(supports: str, force: float, couple: float, load: float, at: float) -> tuple[np.ndarray, np.ndarray]:
    """Return deflection and slope at 21 nodes by cubic elements, exact at the nodes for these loads."""
    count = 21
    h = LENGTH / (count - 1)
    k = np.array(
        [
            [12, 6 * h, -12, 6 * h],
            [6 * h, 4 * h**2, -6 * h, 2 * h**2],
            [-12, -6 * h, 12, -6 * h],
            [6 * h, 2 * h**2, -6 * h, 4 * h**2],
        ]
    )
    whole, loads = np.zeros((2 * count, 2 * count)), np.zeros(2 * count)
    for node in range(count - 1):
        part = slice(2 * node, 2 * node + 4)
        whole[part, part] += INERTIA * MODULUS / h**3 * k
        loads[part] += load * h * np.array([0.5, h / 12, 0.5, -h / 12])
    place = round(at / h)
    loads[2 * place] += force
    loads[2 * place + 1] += couple
    free = np.setdiff1d(np.arange(2 * count), [index % (2 * count) for index in FIXED[supports]])
    moved = np.zeros(2 * count)
    moved[free] = np.linalg.solve(whole[np.ix_(free, free)], loads[free])
    return moved[::2], moved[1::2]


@pytest.mark.parametrize("supports", SUPPORTS)
@given(step=st.integers(0, 20))
@FEW
def test_lines_agree_with_exact_finite_elements(supports: str, step: int) -> None:
    x, a = np.linspace(0.0, LENGTH, 21), step * LENGTH / 20
    for module, pick in ((stiffness_beams, 0), (stiffness_beam_slopes, 1)):
        found = module.force(supports, x, 7.0, a, *BEAM)
        assert found == pytest.approx(elements(supports, 7.0, 0.0, 0.0, a)[pick], abs=1e-8)
        found = module.couple(supports, x, 7.0, a, *BEAM)
        assert found == pytest.approx(elements(supports, 0.0, 7.0, 0.0, a)[pick], abs=1e-8)
        found = module.line_load(supports, x, 7.0, *BEAM)
        assert found == pytest.approx(elements(supports, 0.0, 0.0, 7.0, 0.0)[pick], abs=1e-8)


@pytest.mark.parametrize("supports", SUPPORTS)
@given(first=STEPS, second=STEPS)
@FEW
def test_what_a_force_here_does_there_a_force_there_does_here(supports: str, first: int, second: int) -> None:
    a, b = first / 10.0, second / 10.0
    there = stiffness_beams.force(supports, b, 1.0, a, *BEAM)
    assert there == pytest.approx(stiffness_beams.force(supports, a, 1.0, b, *BEAM), abs=1e-12)
    turned = stiffness_beams.couple(supports, b, 1.0, a, *BEAM)
    assert turned == pytest.approx(stiffness_beam_slopes.force(supports, a, 1.0, b, *BEAM), abs=1e-12)


def test_the_named_cases_agree_with_the_functions_of_their_own() -> None:
    tip = stiffness_beams.force("cantilever", LENGTH, 7.0, LENGTH, *BEAM)
    assert tip == pytest.approx(stiffness.cantilever_deflection(7.0, *BEAM))
    middle = stiffness_beams.force("simply supported", LENGTH / 2, 7.0, LENGTH / 2, *BEAM)
    assert middle == pytest.approx(stiffness.midspan_deflection(7.0, *BEAM))
    spread = stiffness_beams.line_load("simply supported", LENGTH / 2, 7.0, *BEAM)
    assert spread == pytest.approx(5 * 7.0 * LENGTH**4 / (384 * INERTIA * MODULUS))
    assert stiffness_beams.line_load("fixed-fixed", LENGTH / 2, 7.0, *BEAM) == pytest.approx(spread / 5)


@pytest.mark.parametrize("module", [stiffness_beams, stiffness_beam_slopes], ids=["deflection", "slope"])
def test_points_and_loads_beside_the_beam_are_refused(module) -> None:
    for at, load_at, word in ((2.1, 1.0, "must lie on the beam"), (1.0, 2.1, "must act on the beam")):
        for function in (module.force, module.couple):
            with pytest.raises(InputError, match=word):
                function("propped", at, 1.0, load_at, *BEAM)
    with pytest.raises(InputError, match="must lie on the beam"):
        module.line_load("propped", 2.1, 1.0, *BEAM)
    with pytest.raises(InputError, match="at must not be negative"):
        module.line_load("propped", -0.1, 1.0, *BEAM)
    with pytest.raises(InputError, match="load_at must not be negative"):
        module.force("propped", 0.1, 1.0, -0.1, *BEAM)
    for place in range(3):
        sizes = [*BEAM]
        sizes[place] = 0.0
        with pytest.raises(InputError, match="must be positive"):
            module.line_load("propped", 0.0, 1.0, *sizes)


def test_unknown_supports_are_refused_with_the_list() -> None:
    found = evaluate_text('=STIFFNESS_BEAM_SLOPE_LINE_LOAD("hinged", "0 m", "2 N/m", "1 m", "1 m^4", "3 Pa", "rad")')
    assert "simply supported" in found.reasons[0]


def test_arrays_agree_with_scalars() -> None:
    places = np.array([0.0, 0.7, 2.0])
    for supports in SUPPORTS:
        alone = [stiffness_beams.force(supports, x, 1.0, 0.7, *BEAM) for x in places]
        assert list(stiffness_beams.force(supports, places, 1.0, 0.7, *BEAM)) == alone
