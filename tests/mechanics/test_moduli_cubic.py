import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler.catalogue import CallError, cell
from doubler.errors import InputError
from doubler.mechanics import moduli, moduli_averages, moduli_composite, moduli_cubic

COPPER_LIKE = (168e3, 121e3, 75e3)


def matrix_of(c11: float, c12: float, c44: float) -> np.ndarray:
    matrix = np.diag([c11] * 3 + [c44] * 3).astype(float)
    matrix[:3, :3] += c12 * (1 - np.eye(3))
    return matrix


def rotations(count: int) -> np.ndarray:
    """Rotations drawn evenly over all directions, from normal quaternions."""
    q = np.random.default_rng(7).normal(size=(count, 4))
    w, x, y, z = (q / np.linalg.norm(q, axis=1, keepdims=True)).T
    rows = [
        [1 - 2 * (y * y + z * z), 2 * (x * y - z * w), 2 * (x * z + y * w)],
        [2 * (x * y + z * w), 1 - 2 * (x * x + z * z), 2 * (y * z - x * w)],
        [2 * (x * z - y * w), 2 * (y * z + x * w), 1 - 2 * (x * x + y * y)],
    ]
    return np.moveaxis(np.array(rows), -1, 0)


PLANES = ((0, 0), (1, 1), (2, 2), (0, 1), (1, 2), (2, 0))


def full_tensor(matrix: np.ndarray) -> np.ndarray:
    tensor = np.zeros((3, 3, 3, 3))
    for row, (i, j) in enumerate(PLANES):
        for column, (k, m) in enumerate(PLANES):
            for a, b in {(i, j), (j, i)}:
                for c, d in {(k, m), (m, k)}:
                    tensor[a, b, c, d] = matrix[row, column]
    return tensor


def test_stiffness_and_compliance_are_inverse() -> None:
    s11, s12, s44 = moduli_cubic.compliance(*COPPER_LIKE)
    inverse = np.linalg.inv(matrix_of(*COPPER_LIKE))
    assert [s11, s12, s44] == pytest.approx([inverse[0, 0], inverse[0, 1], inverse[3, 3]], rel=1e-12)
    assert moduli_cubic.stiffness(s11, s12, s44) == pytest.approx(COPPER_LIKE, rel=1e-12)


def test_the_modulus_in_any_direction_is_that_of_the_turned_compliance() -> None:
    soft = moduli_cubic.compliance(*COPPER_LIKE)
    # A compliance of engineering shear strain becomes a tensor with a half for each shear index.
    half = np.diag([1.0] * 3 + [0.5] * 3)
    tensor = full_tensor(half @ np.linalg.inv(matrix_of(*COPPER_LIKE)) @ half)
    for direction in ((1, 0, 0), (1, 1, 0), (1, 1, 1), (3, -1, 2)):
        n = np.array(direction) / np.linalg.norm(direction)
        expected = 1 / np.einsum("i,j,k,l,ijkl", n, n, n, n, tensor)
        assert moduli_cubic.young(*soft, *map(float, direction)) == pytest.approx(expected, rel=1e-12)


def test_a_direction_of_zero_length_is_refused() -> None:
    with pytest.raises(CallError, match="must not be zero"):
        moduli_cubic.young(0.008, -0.0028, 0.0086, 0.0, 0.0, 0.0)


def test_an_isotropic_crystal_has_a_zener_ratio_of_one_and_averages_alike() -> None:
    young, ratio = 200e3, 0.3
    p_wave, lame = moduli.p_wave_modulus(young, ratio), moduli.lame_constant(young, ratio)
    shear = moduli.shear_modulus(young, ratio)
    assert moduli_cubic.zener(p_wave, lame, shear) == pytest.approx(1.0, rel=1e-14)
    assert moduli_cubic.shear_averages(p_wave, lame, shear) == pytest.approx([shear] * 3, rel=1e-14)
    assert moduli_cubic.bulk(p_wave, lame) == pytest.approx(moduli.bulk_modulus(young, ratio), rel=1e-14)
    assert moduli_averages.anisotropy(matrix_of(p_wave, lame, shear).ravel()) == pytest.approx(0.0, abs=1e-12)


@pytest.mark.parametrize("constants", [(100.0, 110.0, 75.0), (100.0, -60.0, 75.0)])
def test_an_unstable_crystal_is_refused(constants) -> None:
    for function in (moduli_cubic.compliance, moduli_cubic.zener, moduli_cubic.shear_averages):
        with pytest.raises(CallError, match="stable crystal"):
            function(*constants)
    with pytest.raises(CallError, match="stable material"):
        moduli_averages.shear(matrix_of(*constants).ravel())


def test_averages_over_all_directions_agree_with_sampled_rotations() -> None:
    rng = np.random.default_rng(3)
    root = rng.normal(size=(6, 6))
    stiffness = root @ root.T + 6 * np.eye(6)
    tensor = full_tensor(stiffness)
    turned = np.einsum("nia,njb,nkc,nld,abcd->nijkl", *[rotations(20_000)] * 4, tensor, optimize=True).mean(axis=0)
    bulk = moduli_averages.bulk(stiffness.ravel())
    shear = moduli_averages.shear(stiffness.ravel())
    assert np.einsum("iijj", turned) / 9 == pytest.approx(bulk[0], rel=1e-10)
    assert turned[0, 1, 0, 1] == pytest.approx(shear[0], rel=0.02)
    for averages in (bulk, shear):
        voigt, reuss, hill = averages
        assert reuss < hill < voigt
    assert moduli_averages.anisotropy(stiffness.ravel()) > 0


def test_reuss_is_voigt_of_the_compliance() -> None:
    stiffness = matrix_of(*COPPER_LIKE)
    assert moduli_averages.shear(stiffness.ravel()) == pytest.approx(moduli_cubic.shear_averages(*COPPER_LIKE))
    zener = moduli_cubic.zener(*COPPER_LIKE)
    assert moduli_averages.anisotropy(stiffness.ravel()) == pytest.approx(6 * (zener - 1) ** 2 / (5 * zener))


@pytest.mark.parametrize(("formula", "why"), [("{1,2;2,1}", "six rows of six"), (None, "symmetric")])
def test_a_matrix_that_is_none_is_refused(formula: str | None, why: str) -> None:
    if formula is None:
        matrix = matrix_of(160, 110, 75)
        matrix[0, 1] = 101
        formula = "{" + ";".join(",".join(f"{value:g}" for value in row) for row in matrix) + "}"
    for name in ("BULK", "SHEAR"):
        with pytest.raises(InputError, match=why):
            cell(f'=MODULUS_AVERAGE_{name}({formula},"N-mm")')


FRACTION = st.floats(0.0, 1.0)


@settings(max_examples=40)
@given(st.floats(1.0, 500.0), st.floats(1.0, 10.0), FRACTION, st.floats(0.01, 100.0))
def test_halpin_tsai_lies_between_the_two_rules_of_mixtures(fibre, matrix, fraction, shape) -> None:
    low = moduli_composite.across(fibre, matrix, fraction)
    high = moduli_composite.along(fibre, matrix, fraction)
    found = moduli_composite.halpin_tsai(fibre, matrix, fraction, shape)
    assert low * (1 - 1e-12) <= found <= high * (1 + 1e-12)


@pytest.mark.parametrize("fraction", [-0.01, 1.01, 60.0])
def test_a_fraction_outside_nought_to_one_is_refused(fraction: float) -> None:
    for function in (moduli_composite.along, moduli_composite.across):
        with pytest.raises(CallError, match="fibre_fraction"):
            function(230.0, 3.0, fraction)


def test_ends_of_the_rules_are_the_constituents() -> None:
    for rule in (moduli_composite.along, moduli_composite.across):
        assert [rule(230.0, 3.0, 0.0), rule(230.0, 3.0, 1.0)] == pytest.approx([3.0, 230.0])
    assert moduli_composite.halpin_tsai(230.0, 3.0, 1.0, 2.0) == pytest.approx(230.0)
    assert moduli_composite.poisson(0.2, 0.35, 0.6) == pytest.approx(0.26)
