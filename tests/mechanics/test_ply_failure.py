"""Failure of plies: uniaxial strengths, scaling, the true root, thermal parts, the first ply by brute force."""

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from doubler.errors import InputError
from doubler.mechanics import ply_failure, ply_first, ply_response
from doubler.mechanics.ply_criteria import criterion_modes, mode_factors

FEW = settings(max_examples=30, deadline=None)
STRENGTHS = (1500.0, 1200.0, 50.0, 200.0, 70.0)
CRITERIA = ("max stress", "Tsai-Hill", "Tsai-Wu", "Hashin")
STRESSES = st.floats(-400.0, 400.0)
SHEET = [[150e3], [10e3], [0.3], [5e3]]


@pytest.mark.parametrize("criterion", CRITERIA)
def test_each_strength_alone_is_met(criterion: str) -> None:
    states = np.array([[1.0, 0, 0], [-1.0, 0, 0], [0, 1.0, 0], [0, -1.0, 0], [0, 0, 1.0], [0, 0, -1.0]]).T
    found = ply_failure.reserve(criterion, *states, *STRENGTHS)
    assert found == pytest.approx([*STRENGTHS, STRENGTHS[-1]])
    modes = ply_failure.mode(criterion, *states, *STRENGTHS)
    wanted = ["fibre tension", "fibre compression", "matrix tension", "matrix compression"]
    assert list(modes[:4]) == wanted
    if criterion != "Hashin":
        assert list(modes[4:]) == ["shear", "shear"]


@pytest.mark.parametrize("criterion", CRITERIA)
@given(one=STRESSES, two=STRESSES, shear=STRESSES, factor=st.floats(0.1, 10.0))
@FEW
def test_the_reserve_scales_and_leads_to_an_index_of_one(
    criterion: str, one: float, two: float, shear: float, factor: float
) -> None:
    assume(abs(one) + abs(two) + abs(shear) > 1.0)
    reserve = ply_failure.reserve(criterion, one, two, shear, *STRENGTHS)
    assert ply_failure.reserve(criterion, factor * one, factor * two, factor * shear, *STRENGTHS) == pytest.approx(
        reserve / factor
    )
    index = ply_failure.index(criterion, reserve * one, reserve * two, reserve * shear, *STRENGTHS)
    assert index == pytest.approx(1.0, rel=1e-9)
    below = ply_failure.index(
        criterion, *(np.linspace(0.0, 0.999, 40) * reserve * value for value in (one, two, shear)), *STRENGTHS
    )
    assert np.all(below < 1.0)
    assert ply_failure.reserve(criterion, one, two, -shear, *STRENGTHS) == pytest.approx(reserve)


def test_tsai_wus_reserve_is_no_square_root_of_its_index() -> None:
    state = (0.0, -100.0, 0.0)
    assert ply_failure.reserve("Tsai-Wu", *state, *STRENGTHS) == pytest.approx(2.0)
    assert ply_failure.index("Tsai-Wu", *state, *STRENGTHS) == pytest.approx(-0.5)
    bound = [ply_failure.reserve("Tsai-Wu", 900.0, 20.0, 10.0, *STRENGTHS, f) for f in (-0.99, -0.5, 0.99)]
    assert bound[0] > bound[1] > bound[2]
    with pytest.raises(InputError, match="interaction must be above -1 and below 1"):
        ply_failure.reserve("Tsai-Wu", *state, *STRENGTHS, 1.0)


def test_hashins_matrix_compression_takes_the_shear_strength_across() -> None:
    state = (0.0, -100.0, 40.0)
    half = ply_failure.reserve("Hashin", *state, *STRENGTHS)
    assert half == pytest.approx(1.0 / np.hypot(100 / 200, 40 / 70))
    assert ply_failure.reserve("Hashin", *state, *STRENGTHS, shear_23=100.0) == pytest.approx(half)
    a, b = (100.0 / 160.0) ** 2 + (40 / 70) ** 2, ((200 / 160.0) ** 2 - 1.0) * -100.0 / 200.0
    root = (-b + np.sqrt(b * b + 4 * a)) / (2 * a)
    assert ply_failure.reserve("Hashin", *state, *STRENGTHS, shear_23=80.0) == pytest.approx(root)


def test_no_stress_has_no_reserve_and_strengths_must_be_positive() -> None:
    with pytest.raises(InputError, match="no stress acts"):
        ply_failure.reserve("Hashin", 0.0, 0.0, 0.0, *STRENGTHS)
    with pytest.raises(InputError, match="compression_2 must be positive"):
        ply_failure.reserve("Hashin", 1.0, 0.0, 0.0, 1.0, 1.0, 1.0, -1.0, 1.0)
    with pytest.raises(InputError, match="no strain acts"):
        ply_failure.reserve_strain(0.0, 0.0, 0.0, 0.01, 0.008, 0.004, 0.012, 0.015)
    with pytest.raises(InputError, match="compression_1 must be above 0 and at most"):
        ply_failure.reserve_strain(-0.003, 0.0, 0.0, 0.01, 8.0, 0.004, 0.012, 0.015)


def test_strains_each_have_their_own_limit() -> None:
    limits = (0.01, 0.008, 0.004, 0.012, 0.015)
    strains = np.array([[2e-3, 1e-3, 0], [-2e-3, 1e-3, 0], [0, -3e-3, 3e-3], [0, 1e-3, -6e-3]]).T
    assert ply_failure.reserve_strain(*strains, *limits) == pytest.approx([4.0, 4.0, 4.0, 2.5])


@pytest.mark.parametrize("criterion", CRITERIA)
@given(st.lists(STRESSES, min_size=6, max_size=6))
@FEW
def test_the_factor_on_a_part_is_the_first_crossing(criterion: str, values: list[float]) -> None:
    """Constant and growing part at random: no failure before the factor, failure just after it."""
    constant, scaled = np.array(values[:3]) * 0.08, np.array(values[3:])
    assume(np.abs(scaled).max() > 1.0)
    modes = criterion_modes(criterion, STRENGTHS, -0.5, None)
    factor = float(mode_factors(modes, tuple(constant), tuple(scaled)).min())
    assert np.isfinite(factor)
    at_start = ply_failure.index(criterion, *constant, *STRENGTHS)
    if at_start >= 1.0:
        assert factor == 0.0
        return
    path = constant[:, None] + scaled[:, None] * factor * np.array([*np.linspace(0.0, 0.9999, 60), 1.0 + 1e-6])
    index = ply_failure.index(criterion, *path, *STRENGTHS)
    assert np.all(index[:-1] < 1.0)
    assert index[-1] >= 1.0


LAMINATE = (np.deg2rad([0.0, 45.0, -45.0, 90.0]), np.full(4, 0.25), *SHEET)
COOLED = (None, [0.0], [2.5e-5], -60.0)


@pytest.mark.parametrize("criterion", [*CRITERIA, "max strain"])
@pytest.mark.parametrize("thermal", [False, True])
def test_the_first_ply_is_the_least_of_all_plies_and_faces(criterion: str, thermal: bool) -> None:
    loads, moments = [60.0, -20.0, 15.0], [2.0, 1.0, -1.0]
    rest = COOLED if thermal else ()
    factor = ply_first.first_reserve(criterion, loads, moments, *LAMINATE, STRENGTHS, *rest)
    scale = factor * np.array([0.999, 1.001])
    worst = []
    names = {}
    for k in scale:
        indices = {}
        for number in range(1, 5):
            for place in ("lower", "upper"):
                stress = ply_response.ply_stress(
                    number, place, k * np.array(loads), k * np.array(moments), *LAMINATE, *rest
                )
                if criterion == "max strain":
                    strained = (stress[0] - 0.3 * stress[1], stress[1] - 0.02 * stress[0], stress[2])
                    indices[number, place] = ply_failure.index("max stress", *strained, *STRENGTHS)
                else:
                    indices[number, place] = ply_failure.index(criterion, *stress, *STRENGTHS)
        worst.append(max(indices.values()))
        names = indices
    assert worst[0] < 1.0 < worst[1]
    number, place = max(names, key=lambda key: names[key])
    said = ply_first.first_failure(criterion, loads, moments, *LAMINATE, STRENGTHS, *rest)
    assert str(said).startswith(f"ply {number}, {place} face: ")


def test_first_ply_failure_over_many_loads_and_two_materials() -> None:
    loads = np.array([[60.0, -20.0, 15.0], [10.0, 0.0, 0.0], [0.0, 0.0, -30.0]])
    moments = np.zeros((3, 3))
    together = ply_first.first_reserve("Hashin", loads, moments, *LAMINATE, STRENGTHS)
    alone = [ply_first.first_reserve("Hashin", load, np.zeros(3), *LAMINATE, STRENGTHS) for load in loads]
    assert list(together) == alone
    twice = [[value[0], value[0]] for value in SHEET]
    stack = (LAMINATE[0], LAMINATE[1], *twice)
    numbered = ply_first.first_reserve("Hashin", loads, moments, *stack, [*STRENGTHS, *STRENGTHS], [1.0, 2.0, 2.0, 1.0])
    assert list(numbered) == alone
    texts = ply_first.first_failure("Hashin", loads, moments, *LAMINATE, STRENGTHS)
    single = [ply_first.first_failure("Hashin", load, np.zeros(3), *LAMINATE, STRENGTHS) for load in loads]
    assert list(texts) == single
    assert len(set(single)) > 1
    with pytest.raises(InputError, match="give five a material"):
        ply_first.first_reserve("Hashin", loads, moments, *LAMINATE, STRENGTHS[:4])
    with pytest.raises(InputError, match="neither a load nor a moment"):
        ply_first.first_reserve("Hashin", np.zeros(3), np.zeros(3), *LAMINATE, STRENGTHS)


def test_thermal_stresses_that_break_a_ply_leave_no_reserve() -> None:
    hot = (None, [0.0], [2.5e-5], -2000.0)
    assert ply_first.first_reserve("Tsai-Wu", [1.0, 0, 0], [0.0, 0, 0], *LAMINATE, STRENGTHS, *hot) == 0.0
