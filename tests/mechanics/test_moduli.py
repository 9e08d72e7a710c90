from itertools import combinations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from doubler.catalogue import CallError, cell
from doubler.catalogue.formula_text import evaluate_text
from doubler.errors import InputError
from doubler.mechanics import moduli
from doubler.mechanics.moduli_pairs import NAMES

FUNCTIONS = dict(
    zip(
        NAMES,
        (
            moduli.young_modulus,
            moduli.poissons_ratio_of,
            moduli.shear_modulus,
            moduli.bulk_modulus,
            moduli.lame_constant,
            moduli.p_wave_modulus,
        ),
        strict=True,
    )
)
PAIRS = list(combinations(NAMES, 2))


def six(young: float, ratio: float) -> dict[str, float]:
    """All six constants, from Young's modulus and Poisson's ratio by the textbook forms."""
    room = (1 + ratio) * (1 - 2 * ratio)
    return {
        "young": young,
        "poissons_ratio": ratio,
        "shear": young / (2 * (1 + ratio)),
        "bulk": young / (3 * (1 - 2 * ratio)),
        "lame": young * ratio / room,
        "p_wave": young * (1 - ratio) / room,
    }


def branch_of(pair: tuple[str, str], ratio: float) -> str | None:
    return None if pair != ("young", "p_wave") else "positive" if ratio > 0 else "negative"


@pytest.mark.parametrize("pair", PAIRS, ids="-".join)
@settings(max_examples=25)
@given(young=st.floats(1.0, 1e6), ratio=st.floats(0.1, 0.45))
def test_every_pair_gives_back_all_six(pair: tuple[str, str], young: float, ratio: float) -> None:
    known = six(young, ratio)
    two = {name: known[name] for name in pair}
    for name, function in FUNCTIONS.items():
        assert function(**two, branch=branch_of(pair, ratio)) == pytest.approx(known[name], rel=1e-12), name


@pytest.mark.parametrize("pair", PAIRS, ids="-".join)
@pytest.mark.parametrize("ratio", [-0.6, -0.2, 0.49])
def test_every_pair_holds_for_auxetic_and_for_nearly_incompressible_material(pair, ratio: float) -> None:
    known = six(210e3, ratio)
    two = {name: known[name] for name in pair}
    for name, function in FUNCTIONS.items():
        assert function(**two, branch=branch_of(pair, ratio)) == pytest.approx(known[name], rel=1e-11), name


def test_a_rubber_keeps_its_bulk_modulus_to_the_last_digits() -> None:
    # 1 − 2ν is 2.5e-4 here; taken from a rounded ν it would have lost four digits.
    young = 9 * 2000.0 * 0.5 / (3 * 2000.0 + 0.5)
    assert moduli.p_wave_modulus(young=young, bulk=2000.0) == pytest.approx(2000.0 + 4 / 3 * 0.5, rel=1e-14)


@pytest.mark.parametrize("count", [0, 1, 3, 6])
def test_exactly_two_constants_are_asked_for(count: int) -> None:
    known = six(200e3, 0.3)
    with pytest.raises(CallError, match=f"exactly two of young.*{count} are given"):
        moduli.shear_modulus(**{name: known[name] for name in NAMES[:count]})


def test_young_with_p_wave_belongs_to_two_materials() -> None:
    with pytest.raises(CallError, match="shared by two materials"):
        moduli.shear_modulus(young=200e3, p_wave=220e3)
    for branch, sign in (("positive", 1), ("negative", -1)):
        ratio = moduli.poissons_ratio_of(young=200e3, p_wave=220e3, branch=branch)
        assert np.sign(ratio) == sign
        assert six(200e3, ratio)["p_wave"] == pytest.approx(220e3, rel=1e-12)
    with pytest.raises(CallError, match="leave it out"):
        moduli.shear_modulus(young=200e3, poissons_ratio=0.3, branch="negative")


@pytest.mark.parametrize(
    "two",
    [
        {"young": 300.0, "shear": 80.0},
        {"young": 10.0, "bulk": 1.0},
        {"young": 200.0, "p_wave": 190.0, "branch": "positive"},
        {"shear": 80.0, "lame": -60.0},
        {"shear": 80.0, "p_wave": 100.0},
        {"bulk": 100.0, "lame": 101.0},
        {"bulk": 100.0, "p_wave": 100.0},
        {"lame": 100.0, "p_wave": 90.0},
        {"lame": -60.0, "p_wave": 100.0},
        {"poissons_ratio": 0.3, "lame": -10.0},
        {"poissons_ratio": -0.3, "lame": 10.0},
    ],
)
def test_constants_of_no_stable_material_are_refused(two) -> None:
    for function in FUNCTIONS.values():
        with pytest.raises(CallError, match="no stable isotropic material"):
            function(**two)


def test_zero_ratio_with_zero_lame_leaves_the_others_open() -> None:
    with pytest.raises(CallError, match="leave the other constants open"):
        moduli.young_modulus(poissons_ratio=0.0, lame=0.0)


@pytest.mark.parametrize("name", ["bulk", "lame", "p_wave"])
def test_an_incompressible_material_has_no_finite_bulk_modulus(name: str) -> None:
    with pytest.raises(CallError, match="incompressible"):
        FUNCTIONS[name](young=3.0, poissons_ratio=0.5)
    assert moduli.shear_modulus(young=3.0, poissons_ratio=0.5) == 1.0


def test_a_given_constant_comes_back_untouched() -> None:
    assert moduli.poissons_ratio_of(young=200e3, poissons_ratio=0.3) == 0.3
    lanes = moduli.young_modulus(young=200e3, poissons_ratio=np.array([0.2, 0.3]))
    assert lanes.tolist() == [200e3, 200e3]


def test_empty_cells_count_as_left_out_and_a_bad_lane_is_lost_alone() -> None:
    assert cell('=MODULUS_SHEAR("200 GPa",0.25,,,,,,"MPa")') == 80e3
    found = evaluate_text('=MODULUS_SHEAR({"200 GPa";"200 GPa"},{0.25;0.6},"GPa")')
    assert found.grid[0] == [80.0]
    assert "poissons_ratio" in found.reasons[0]
    with pytest.raises(InputError, match="exactly two"):
        cell('=MODULUS_SHEAR(,,,,,"200 GPa")')


def test_a_unit_in_the_place_of_the_branch_is_the_unit_wanted() -> None:
    assert cell('=MODULUS_YOUNG(,,"80 GPa",,"80 GPa",,"GPa")') == pytest.approx(200.0)
    assert cell('=MODULUS_YOUNG(,,"80 GPa",,,"240 GPa","GPa")') == pytest.approx(200.0)
    with pytest.raises(InputError, match='"positive", "negative"'):
        cell('=MODULUS_SHEAR("200 GPa",,,,,"220 GPa","both","GPa")')
