import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from doubler.catalogue import CallError
from doubler.mechanics import hooke, hooke_orthotropic, hooke_strain, moduli_orthotropic

FIBRE = (155e3, 12.1e3, 11.0e3, 0.248, 0.458, 0.26)
SHEARS = (4.4e3, 3.2e3, 4.0e3)
MODULUS = st.floats(1e3, 2e5)
RATIO = st.floats(-0.6, 0.9)


def compliance_of(e1, e2, e3, n12, n23, n13) -> np.ndarray:
    """The normal block, each element written out by itself."""
    return np.array([[1 / e1, -n12 / e1, -n13 / e1], [-n12 / e1, 1 / e2, -n23 / e2], [-n13 / e1, -n23 / e2, 1 / e3]])


@settings(max_examples=60)
@given(MODULUS, MODULUS, MODULUS, RATIO, RATIO, RATIO)
def test_stable_is_what_has_positive_energy_and_nothing_else_has_a_matrix(e1, e2, e3, n12, n23, n13) -> None:
    block = compliance_of(e1, e2, e3, n12, n23, n13)
    scale = np.sqrt(np.diag(block))
    lowest = np.linalg.eigvalsh(block / np.outer(scale, scale))[0]
    assume(abs(lowest) > 1e-6)
    verdict = hooke_orthotropic.check(e1, e2, e3, n12, n23, n13)
    assert (verdict == "stable") == (lowest > 0), verdict
    if lowest > 0:
        stiffness = moduli_orthotropic.stiffness(e1, e2, e3, n12, n23, n13, *SHEARS)
        assert stiffness[:3, :3] == pytest.approx(np.linalg.inv(block), rel=1e-6, abs=1e-6 * np.abs(stiffness).max())
    else:
        for function in (moduli_orthotropic.stiffness, moduli_orthotropic.compliance):
            with pytest.raises(CallError, match="stable material"):
                function(e1, e2, e3, n12, n23, n13, *SHEARS)


def test_compliance_and_stiffness_are_inverse_and_symmetric() -> None:
    compliance = moduli_orthotropic.compliance(*FIBRE, *SHEARS)
    stiffness = moduli_orthotropic.stiffness(*FIBRE, *SHEARS)
    assert compliance @ stiffness == pytest.approx(np.eye(6), abs=1e-12)
    assert np.array_equal(stiffness, stiffness.T)
    assert np.diag(stiffness)[3:].tolist() == list(SHEARS)


def test_rows_stand_in_the_order_of_hookes_law_in_three_dimensions() -> None:
    young, ratio = 200e3, 0.3
    shear = young / (2 * (1 + ratio))
    alike = (young, young, young, ratio, ratio, ratio, shear, shear, shear)
    stress = np.array([120.0, -40.0, 30.0, 25.0, -15.0, 60.0])
    strains = hooke_strain.three_dimensional(*stress, young, ratio)
    assert moduli_orthotropic.compliance(*alike) @ stress == pytest.approx(strains, rel=1e-12)
    assert moduli_orthotropic.stiffness(*alike) @ strains == pytest.approx(
        hooke.three_dimensional(*strains, young, ratio), rel=1e-10
    )


def test_shear_moduli_stand_at_their_own_planes() -> None:
    compliance = moduli_orthotropic.compliance(*FIBRE, *SHEARS)
    assert [1 / compliance[i, i] for i in (3, 4, 5)] == pytest.approx([4.4e3, 3.2e3, 4.0e3])


def test_transverse_isotropy_is_orthotropy_with_an_isotropic_plane() -> None:
    e1, e2, n12, n23, g12 = 155e3, 12.1e3, 0.248, 0.458, 4.4e3
    whole = (e1, e2, e2, n12, n23, n12, g12, e2 / (2 * (1 + n23)), g12)
    assert moduli_orthotropic.transverse_compliance(e1, e2, n12, n23, g12) == pytest.approx(
        moduli_orthotropic.compliance(*whole), rel=1e-14
    )
    stiffness = moduli_orthotropic.transverse_stiffness(e1, e2, n12, n23, g12)
    assert stiffness == pytest.approx(moduli_orthotropic.stiffness(*whole), rel=1e-12)
    assert (stiffness[1, 1] - stiffness[1, 2]) / 2 == pytest.approx(stiffness[4, 4], rel=1e-12)


@pytest.mark.parametrize("ratios", [(3.7, 0.3), (0.248, 0.995), (0.25, -1.0)])
def test_transverse_isotropy_has_its_own_limits(ratios) -> None:
    with pytest.raises(CallError):
        moduli_orthotropic.transverse_stiffness(155e3, 12.1e3, *ratios, 4.4e3)


def test_exchanged_poissons_ratios_are_named() -> None:
    with pytest.raises(CallError, match="ν12 and ν21 are not exchanged"):
        moduli_orthotropic.stiffness(10e3, 150e3, 150e3, 0.3, 0.3, 0.02, *SHEARS)


@settings(max_examples=30)
@given(*[st.floats(-300, 300)] * 3)
def test_hookes_law_goes_round(x: float, y: float, z: float) -> None:
    strains = hooke_orthotropic.strains(x, y, z, *FIBRE)
    assert strains == pytest.approx(compliance_of(*FIBRE) @ [x, y, z], abs=1e-15)
    assert hooke_orthotropic.stresses(*strains, *FIBRE) == pytest.approx([x, y, z], abs=1e-9)


def test_the_reciprocal_ratio_keeps_the_compliance_symmetric() -> None:
    ratio = hooke_orthotropic.reciprocal(0.3, 150e3, 10e3)
    assert ratio / 10e3 == pytest.approx(0.3 / 150e3, rel=1e-14)
    assert hooke_orthotropic.reciprocal(ratio, 10e3, 150e3) == pytest.approx(0.3)
    with pytest.raises(CallError, match="exchanged"):
        hooke_orthotropic.reciprocal(0.3, 10e3, 150e3)


def test_verdicts_come_lane_by_lane() -> None:
    verdicts = hooke_orthotropic.check(155e3, 12e3, 12e3, np.array([0.25, 4.0]), 0.45, 0.25)
    assert verdicts[0] == "stable"
    assert verdicts[1].startswith("poissons_ratio_12 is too large")
