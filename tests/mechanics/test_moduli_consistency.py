import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from doubler.catalogue import CallError
from doubler.catalogue.formula_text import evaluate_text
from doubler.mechanics import moduli_consistency


def six(young: float, ratio: float) -> dict[str, float]:
    room = (1 + ratio) * (1 - 2 * ratio)
    return {
        "young": young,
        "poissons_ratio": ratio,
        "shear": young / (2 * (1 + ratio)),
        "bulk": young / (3 * (1 - 2 * ratio)),
        "lame": young * ratio / room,
        "p_wave": young * (1 - ratio) / room,
    }


@settings(max_examples=40)
@given(st.floats(1.0, 1e6), st.floats(-0.8, 0.45), st.sets(st.sampled_from(list(six(1, 0))), min_size=3))
def test_constants_of_one_material_agree(young: float, ratio: float, names: set[str]) -> None:
    # With lambda alone beside it, a Poisson's ratio near zero settles nothing: lambda is then zero for any stiffness.
    assume(
        "young" in names or abs(ratio) > 1e-3 or not {"poissons_ratio", "lame"} <= names or names & {"shear", "bulk"}
    )
    known = {name: value for name, value in six(young, ratio).items() if name in names}
    assert moduli_consistency.consistency(**known) == pytest.approx(0.0, abs=1e-9)
    assert moduli_consistency.check(**known) == "agree"


def test_the_largest_disagreement_counts_whatever_its_sign() -> None:
    known = six(200.0, 0.25)
    known["bulk"] *= 1.01
    known["shear"] /= 0.8
    assert moduli_consistency.consistency(**known) == pytest.approx(0.2, rel=1e-12)
    words = moduli_consistency.check(**known)
    assert "shear from young and poissons_ratio is -20.0%" in words
    assert "bulk" not in words


@pytest.mark.parametrize("count", [0, 1, 2])
def test_fewer_than_three_constants_say_nothing(count: int) -> None:
    known = dict(list(six(200.0, 0.3).items())[:count])
    with pytest.raises(CallError, match="at least three"):
        moduli_consistency.consistency(**known)
    with pytest.raises(CallError, match="at least three"):
        moduli_consistency.check(**known)


def test_a_pair_of_no_stable_material_is_refused_and_not_called_near() -> None:
    with pytest.raises(CallError, match="no stable isotropic material"):
        moduli_consistency.consistency(young=300.0, shear=80.0, bulk=200.0)


def test_a_bad_lane_is_lost_alone() -> None:
    found = evaluate_text('=MODULUS_CHECK("200 GPa",{0.3;0.7;0.2},"77 GPa")')
    assert found.grid[0] == ["agree"]
    assert found.grid[2] == ["shear from young and poissons_ratio is +8.2% off the one given"]
    assert "poissons_ratio" in found.reasons[0]
    assert "#NUM!" in str(found.grid[1][0])


def test_the_tolerance_is_the_users() -> None:
    known = {"young": 200.0, "poissons_ratio": 0.25, "shear": 82.0}
    assert moduli_consistency.check(**known, tolerance=0.03) == "agree"
    assert moduli_consistency.check(**known, tolerance=0.01) != "agree"
