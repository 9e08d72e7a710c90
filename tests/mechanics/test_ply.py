"""Plies and laminates: invariants under rotation, the isotropic plate, symmetry, equilibrium, refusals."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler import mechanics
from doubler.catalogue.formula_text import cell, evaluate_text
from doubler.errors import InputError
from doubler.mechanics import ply, ply_laminate, ply_response

mechanics.load()
FEW = settings(max_examples=25, deadline=None)
ANGLES = st.floats(-np.pi, np.pi)
PLIES = st.tuples(st.floats(20.0, 300.0), st.floats(2.0, 20.0), st.floats(-0.3, 0.45), st.floats(1.0, 10.0))
SHEET = (180.0, 10.0, 0.28, 7.0)
NUMBERS = st.floats(-5.0, 5.0)


def stiffness(angle: float, constants: tuple[float, ...]) -> np.ndarray:
    return ply.stiffness_turned(angle, *constants)


@given(PLIES, ANGLES)
@FEW
def test_rotation_keeps_the_invariants(constants: tuple[float, ...], angle: float) -> None:
    u = ply.invariants(*constants)
    q = stiffness(angle, constants)
    assert q[0, 0] + q[1, 1] + 2 * q[0, 1] == pytest.approx(2 * (u[0] + u[3]))
    assert q[2, 2] - q[0, 1] == pytest.approx(u[4] - u[3])
    c2, c4, s2, s4 = np.cos(2 * angle), np.cos(4 * angle), np.sin(2 * angle), np.sin(4 * angle)
    assert q[0, 0] == pytest.approx(u[0] + u[1] * c2 + u[2] * c4)
    assert q[0, 2] == pytest.approx(u[1] * s2 / 2 + u[2] * s4, abs=1e-9 * u[0])
    assert np.linalg.eigvalsh(q).min() > 0
    assert np.allclose(q, q.T)
    assert np.allclose(stiffness(angle + np.pi, constants), q)


@given(PLIES, ANGLES, NUMBERS, NUMBERS, NUMBERS)
@FEW
def test_strains_and_stiffness_are_inverse_and_stresses_do_the_same_work(
    constants: tuple[float, ...], angle: float, sx: float, sy: float, txy: float
) -> None:
    stresses = np.array([sx, sy, txy])
    strains = ply.strain_turned(sx, sy, txy, angle, *constants)
    assert stiffness(angle, constants) @ strains == pytest.approx(stresses, abs=1e-9)
    own = ply.stress_turned(sx, sy, txy, angle)
    assert own[0] + own[1] == pytest.approx(sx + sy, abs=1e-9)
    assert own[0] * own[1] - own[2] ** 2 == pytest.approx(sx * sy - txy**2, abs=1e-9)
    work = own @ np.linalg.solve(ply.stiffness(*constants), own)
    assert stresses @ strains == pytest.approx(work, abs=1e-12)
    moduli = ply.moduli_turned(angle, *constants)
    assert ply.strain_turned(1.0, 0.0, 0.0, angle, *constants)[0] == pytest.approx(1 / moduli[0])
    assert ply.strain_turned(0.0, 0.0, 1.0, angle, *constants)[2] == pytest.approx(1 / moduli[2])


@given(st.lists(ANGLES, min_size=1, max_size=5), st.floats(10.0, 300.0), st.floats(-0.4, 0.49), NUMBERS, NUMBERS)
@FEW
def test_a_laminate_of_isotropic_plies_is_the_plate(
    angles: list[float], modulus: float, ratio: float, force: float, moment: float
) -> None:
    thick = np.linspace(0.5, 1.5, len(angles))
    h = thick.sum()
    constants = [[modulus], [modulus], [ratio], [modulus / (2 * (1 + ratio))]]
    stack = (angles, thick, *constants)
    plane = modulus / (1 - ratio**2) * np.array([[1, ratio, 0], [ratio, 1, 0], [0, 0, (1 - ratio) / 2]])
    assert ply_laminate.stretching(*stack) == pytest.approx(plane * h, abs=1e-9)
    assert ply_laminate.coupling(*stack) == pytest.approx(np.zeros((3, 3)), abs=1e-9 * modulus * h**2)
    assert ply_laminate.bending(*stack) == pytest.approx(plane * h**3 / 12, abs=1e-9)
    for loading in ("in plane", "bending"):
        assert ply_laminate.moduli(loading, *stack) == pytest.approx([modulus, modulus, constants[3][0]])
        assert ply_laminate.poisson(loading, *stack) == pytest.approx([ratio, ratio], abs=1e-9)
    stress = ply_response.ply_stress(len(angles), "upper", [force, 0, 0], [moment, 0, 0], *stack)
    face = force / h + 6 * moment / h**2
    c, s = np.cos(angles[-1]), np.sin(angles[-1])
    assert stress == pytest.approx(face * np.array([c * c, s * s, -c * s]), abs=1e-9)


@pytest.mark.parametrize("count", [3, 4, 5, 6])
def test_plies_at_even_angles_are_isotropic_in_plane(count: int) -> None:
    angles = 0.3 + np.arange(count) * np.pi / count
    stack = (angles, np.full(count, 0.25), *[[value] for value in SHEET])
    a, u = ply_laminate.stretching(*stack) / (count * 0.25), ply.invariants(*SHEET)
    isotropic = [[u[0], u[3], 0], [u[3], u[0], 0], [0, 0, u[4]]]
    assert a == pytest.approx(np.array(isotropic), abs=1e-9)
    symmetric = (np.r_[angles, angles[::-1]], np.full(2 * count, 0.25), *[[value] for value in SHEET])
    moduli, ratios = ply_laminate.moduli("in plane", *symmetric), ply_laminate.poisson("in plane", *symmetric)
    assert moduli[0] == pytest.approx(moduli[1])
    assert moduli[2] == pytest.approx(moduli[0] / (2 * (1 + ratios[0])))


@given(st.lists(ANGLES, min_size=2, max_size=4), st.lists(NUMBERS, min_size=6, max_size=6), st.floats(-100.0, 100.0))
@FEW
def test_stresses_of_the_plies_balance_the_loads(angles: list[float], loads: list[float], change: float) -> None:
    thick = np.linspace(0.5, 1.0, len(angles))
    stack = (angles, thick, *[[value] for value in SHEET], None, [1e-6], [2e-4], change)
    forces, moments = np.zeros(3), np.zeros(3)
    z = -thick.sum() / 2
    for number, (angle, t) in enumerate(zip(angles, thick, strict=True), start=1):
        c, s = np.cos(angle), np.sin(angle)
        back = np.array([[c * c, s * s, -2 * c * s], [s * s, c * c, 2 * c * s], [c * s, -c * s, c * c - s * s]])
        for place, weight, height in (("lower", 1 / 6, z), ("middle", 4 / 6, z + t / 2), ("upper", 1 / 6, z + t)):
            stress = back @ ply_response.ply_stress(number, place, loads[:3], loads[3:], *stack)
            forces += weight * t * stress
            moments += weight * t * height * stress
        z += t
    assert forces == pytest.approx(loads[:3], abs=1e-8)
    assert moments == pytest.approx(loads[3:], abs=1e-8)


def test_free_expansion_of_one_ply_is_free_of_stress() -> None:
    stack = ([0.4], [1.0], *[[value] for value in SHEET], None, [1e-6], [3e-5], 50.0)
    none = ([0.0, 0.0, 0.0], [0.0, 0.0, 0.0])
    assert ply_response.ply_stress(1, "upper", *none, *stack) == pytest.approx(np.zeros(3), abs=1e-12)
    assert ply_response.ply_strain(1, "upper", *none, *stack) == pytest.approx([5e-5, 1.5e-3, 0.0], abs=1e-15)
    two = ([0.0, np.pi / 2], [1.0, 1.0], *[[value] for value in SHEET], None, [1e-6], [3e-5], -50.0)
    curved = ply_response.laminate_curvature(*none, *two)
    assert curved[0] == pytest.approx(-curved[1])
    # The upper ply has its fibres in y: on cooling it shrinks in x, so that the upper face is the shorter one there.
    assert curved[0] < 0
    middle = ply_response.laminate_strain(*none, *two)
    assert middle[0] == pytest.approx(middle[1])


def test_materials_stand_by_number_or_ply_by_ply() -> None:
    angles, thick = [0.1, 0.7, 0.1], [1.0, 2.0, 1.0]
    first, second = (180.0, 10.0, 0.28, 7.0), (40.0, 9.0, 0.25, 4.0)
    numbered = [[one, other] for one, other in zip(first, second, strict=True)]
    by_ply = [[one, other, one] for one, other in zip(first, second, strict=True)]
    a = ply_laminate.stretching(angles, thick, *numbered, [1.0, 2.0, 1.0])
    assert a == pytest.approx(ply_laminate.stretching(angles, thick, *by_ply))
    with pytest.raises(InputError, match="give one for all plies, one a ply, or name materials"):
        ply_laminate.stretching(angles, thick, *numbered)
    with pytest.raises(InputError, match="give the material of each ply"):
        ply_laminate.stretching(angles, thick, *numbered, [1.0, 2.0])
    for wrong in ([1.0, 3.0, 1.0], [0.0, 1.0, 1.0], [1.5, 1.0, 1.0]):
        with pytest.raises(InputError, match="whole numbers from 1 to 2"):
            ply_laminate.stretching(angles, thick, *numbered, wrong)


def test_impossible_plies_and_half_given_laminates_are_refused() -> None:
    with pytest.raises(InputError, match="too large for a stable material"):
        ply.stiffness(10.0, 180.0, 0.3, 5.0)
    with pytest.raises(InputError, match="too large for a stable material"):
        ply_laminate.stretching([0.0], [1.0], [10.0], [180.0], [0.3], [5.0])
    with pytest.raises(InputError, match="one entry each for every ply"):
        ply_laminate.stretching([0.0, 1.0], [1.0], *[[value] for value in SHEET])
    with pytest.raises(InputError, match="thicknesses must be positive"):
        ply_laminate.stretching([0.0, 1.0], [1.0, 0.0], *[[value] for value in SHEET])
    stack = ([0.0, 1.0], [1.0, 1.0], *[[value] for value in SHEET])
    for number in (0.0, 1.5, 3.0):
        with pytest.raises(InputError, match=r"ply (is the number|must be at least)"):
            ply_response.ply_stress(number, "lower", [1.0, 0, 0], [0.0, 0, 0], *stack)
    with pytest.raises(InputError, match="give three, for x, y and xy"):
        ply_response.ply_stress(1, "lower", [1.0, 0], [0.0, 0, 0], *stack)
    with pytest.raises(InputError, match="give all three, or none"):
        ply_response.ply_stress(1, "lower", [1.0, 0, 0], [0.0, 0, 0], *stack, temperature_change=5.0)


def test_a_column_of_ply_numbers_gives_a_row_for_each() -> None:
    laminate = '{100;0;0},{0;0;0},{"deg";0;90;0},{1;1;1},150000,10000,0.3,5000'
    rows = cell(f'=PLY_STRESS({{1;2;3}},"middle",{laminate},"N-mm")')
    alone = [cell(f'=PLY_STRESS({number},"middle",{laminate},"N-mm")')[0] for number in (1, 2, 3)]
    assert rows == alone
    assert sum(row[0] for row in rows[::2]) + rows[1][1] == pytest.approx(100.0)


def test_a_bare_angle_is_refused() -> None:
    found = evaluate_text('=PLY_STRESS_TURNED(1, 2, 3, 60, "N-mm")')
    assert "deg" in found.reasons[0]
