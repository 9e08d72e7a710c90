"""Columns: against a finite-difference eigenproblem, the meeting of the curves, radii used alike, refusals."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import linalg, optimize

from doubler import mechanics
from doubler.catalogue.formula_text import cell
from doubler.errors import InputError
from doubler.mechanics import buckling_beam_columns, buckling_columns, buckling_inelastic, buckling_torsional

mechanics.load()
FEW = settings(max_examples=25, deadline=None)
LENGTH, INERTIA, AREA, MODULUS, LIMIT = 2.0, 3.0, 0.5, 7.0, 1e9
NAMES = ("pinned-pinned", "fixed-fixed", "fixed-pinned", "fixed-free", "fixed-guided", "pinned-guided")
HELD = {"pinned": (0,), "fixed": (0, 1), "free": (), "guided": (1,)}


def eigen_load(ends: str, elements: int = 24) -> float:
    """Return the critical load by cubic finite elements with their geometric stiffness."""
    h = LENGTH / elements
    bend = np.array(
        [
            [12, 6 * h, -12, 6 * h],
            [6 * h, 4 * h**2, -6 * h, 2 * h**2],
            [-12, -6 * h, 12, -6 * h],
            [6 * h, 2 * h**2, -6 * h, 4 * h**2],
        ]
    ) * (MODULUS * INERTIA / h**3)
    push = np.array(
        [
            [36, 3 * h, -36, 3 * h],
            [3 * h, 4 * h**2, -3 * h, -(h**2)],
            [-36, -3 * h, 36, -3 * h],
            [3 * h, -(h**2), -3 * h, 4 * h**2],
        ]
    ) / (30 * h)
    size = 2 * elements + 2
    stiff, load = np.zeros((size, size)), np.zeros((size, size))
    for part in range(elements):
        place = slice(2 * part, 2 * part + 4)
        stiff[place, place] += bend
        load[place, place] += push
    first, last = ends.split("-")
    held = [*HELD[first], *(size - 2 + kind for kind in HELD[last])]
    free = np.setdiff1d(np.arange(size), held)
    inside = np.ix_(free, free)
    return float(linalg.eigvalsh(stiff[inside], load[inside])[0])


@pytest.mark.parametrize("ends", NAMES)
def test_end_factors_and_euler_agree_with_an_eigenproblem(ends: str) -> None:
    factor = buckling_columns.end_factor(ends)
    euler = buckling_columns.euler(LENGTH, INERTIA, AREA, MODULUS, LIMIT, factor)
    assert euler == pytest.approx(eigen_load(ends), rel=1e-5)


@given(st.floats(0.1, 10.0), st.floats(0.1, 10.0), st.floats(0.1, 10.0), st.floats(0.5, 2.0), st.floats(1e-4, 1e3))
@FEW
def test_load_and_stress_and_slenderness_use_one_radius_of_gyration(
    length: float, inertia: float, area: float, factor: float, strength: float
) -> None:
    slender = buckling_columns.slenderness(length, inertia, area, factor)
    radius = (inertia / area) ** 0.5
    assert slender == pytest.approx(factor * length / radius)
    column = buckling_columns.column(length, inertia, area, MODULUS, strength, factor)
    assert column == pytest.approx(area * buckling_columns.stress(slender, MODULUS, strength))
    euler = buckling_columns.euler(length, inertia, area, MODULUS, LIMIT, factor)
    assert euler == pytest.approx(area * buckling_columns.euler_stress(slender, MODULUS, LIMIT))
    assert column <= euler * (1 + 1e-12)
    assert column <= strength * area


def test_the_section_functions_radius_is_the_one_that_slenderness_uses() -> None:
    by_section = cell(
        '=BUCKLING_SLENDERNESS("3 m",SECTION_ROUND_SECOND_MOMENT("60 mm","50 mm"),SECTION_ROUND_AREA("60 mm","50 mm"))'
    )
    radius = cell('=SECTION_ROUND_RADIUS("60 mm","50 mm","mm")')
    assert by_section == pytest.approx(3000.0 / radius)


def test_johnson_meets_euler_with_one_value_and_one_slope() -> None:
    strength = 3e-3
    edge = buckling_columns.transition(MODULUS, strength)
    step = 1e-5 * edge
    below, at, above = buckling_columns.stress(np.array([edge - step, edge, edge + step]), MODULUS, strength)
    assert at == pytest.approx(strength / 2)
    assert (at - below) / step == pytest.approx((above - at) / step, rel=1e-3)
    assert (above - at) / step == pytest.approx(-2 * np.pi**2 * MODULUS / edge**3, rel=1e-3)
    assert buckling_columns.stress(0.0, MODULUS, strength) == strength


def test_euler_is_refused_beyond_the_proportional_limit() -> None:
    with pytest.raises(InputError, match="above the proportional limit"):  # the steel of check value BU-01
        cell('=BUCKLING_EULER("12 ft","37 in^4","9.13 in^2","29000 ksi","36 ksi",1,"kip")')
    with pytest.raises(InputError, match="above the proportional limit"):
        buckling_columns.euler_stress(10.0, 70.0, 6.0)
    assert buckling_columns.euler_stress(10.0, 70.0, 7.0) == pytest.approx(np.pi**2 * 0.7)
    with pytest.raises(InputError, match="must be positive"):
        buckling_columns.euler(-1.0, 1.0, 1.0, 1.0, 1.0)


CRITICAL = np.pi**2 * MODULUS * INERTIA / LENGTH**2


def test_the_secant_formula_agrees_with_its_moment_and_inverts() -> None:
    shares = np.array([0.0, 0.2, 0.6, 0.95])
    loads = shares * CRITICAL
    side = buckling_beam_columns.secant_deflection(loads, 0.1, LENGTH, INERTIA, MODULUS)
    stress = buckling_beam_columns.secant_stress(loads, 0.1, 0.7, LENGTH, INERTIA, AREA, MODULUS)
    assert stress == pytest.approx(loads / AREA + loads * (0.1 + side) * 0.7 / INERTIA)
    moment = buckling_beam_columns.amplification_moment("equal end moments", loads, CRITICAL)
    assert moment == pytest.approx(1.0 + side / 0.1)
    back = buckling_beam_columns.secant_load(stress[1:], 0.1, 0.7, LENGTH, INERTIA, AREA, MODULUS)
    assert back == pytest.approx(loads[1:], rel=1e-12)
    straight = buckling_beam_columns.secant_load(np.array([1e-3, 1e9]), 0.0, 0.7, LENGTH, INERTIA, AREA, MODULUS)
    assert straight == pytest.approx([1e-3 * AREA, CRITICAL])


@pytest.mark.parametrize("case", ["equal end moments", "force at midspan", "spread load"])
def test_amplification_has_no_step_where_the_series_ends_and_grows_from_one(case: str) -> None:
    edge = (0.1 / (np.pi / 2)) ** 2
    for function in (buckling_beam_columns.amplification_moment, buckling_beam_columns.amplification_deflection):
        below, above = function(case, np.array([edge * (1 - 1e-12), edge * (1 + 1e-12)]), 1.0)
        assert below == pytest.approx(above, rel=2e-11)
        grown = function(case, np.linspace(0.0, 0.999, 50), 1.0)
        assert grown[0] == 1.0
        assert np.all(np.diff(grown) > 0)
    about = buckling_beam_columns.amplification(np.linspace(0.0, 0.9, 10), 1.0)
    exact = buckling_beam_columns.amplification_deflection(case, np.linspace(0.0, 0.9, 10), 1.0)
    assert about == pytest.approx(exact, rel=0.03)


def test_at_and_above_the_critical_load_there_is_no_amplification() -> None:
    for load in (1.0, 1.1):
        with pytest.raises(InputError, match="reaches the critical load"):
            buckling_beam_columns.amplification(load, 1.0)
    with pytest.raises(InputError, match="reaches Euler's load"):
        buckling_beam_columns.secant_stress(1.01 * CRITICAL, 0.1, 0.7, LENGTH, INERTIA, AREA, MODULUS)
    with pytest.raises(InputError, match="compression must not be negative"):
        buckling_beam_columns.amplification(-0.1, 1.0)


def test_tangent_modulus_turns_into_euler_and_is_refused_past_the_proof_stress() -> None:
    curve = (72e3, 300.0, 10.0)
    assert buckling_inelastic.tangent_stress(300.0, *curve) == pytest.approx(np.pi**2 * 72e3 / 300.0**2, rel=1e-6)
    slender = np.linspace(35.0, 300.0, 40)
    stress = buckling_inelastic.tangent_stress(slender, *curve)
    assert np.all(np.diff(stress) < 0)
    tangent = buckling_inelastic.tangent_share(stress, *curve, 0.002)
    assert stress == pytest.approx(np.pi**2 * 72e3 * tangent / slender**2, rel=1e-12)
    with pytest.raises(InputError, match="passes its proof stress"):
        buckling_inelastic.tangent_stress(10.0, *curve)


def test_twist_alone_and_sideways_agree_with_their_limits() -> None:
    beam = {"minor_second_moment": 2.0, "section_modulus": 1.0, "modulus": 3.0, "shear_modulus": 1.2}
    rest = {"torsion_constant": 0.7, "warping_constant": 0.0, "proportional_limit": 1e9}
    narrow = buckling_torsional.lateral_torsional(length=5.0, **beam, **rest)
    assert narrow == pytest.approx(np.pi / 5 * np.sqrt(3.0 * 2.0 * 1.2 * 0.7))
    assert buckling_torsional.lateral_torsional(length=5.0, **beam, **rest, moment_factor=1.75) == 1.75 * narrow
    with pytest.raises(InputError, match="above the proportional limit"):
        buckling_torsional.lateral_torsional(length=5.0, **beam, **(rest | {"proportional_limit": 0.9 * narrow}))
    with pytest.raises(InputError, match="cannot both be zero"):
        buckling_torsional.torsional(1.0, 0.0, 0.0, 1.0, 1.0, 1.0, 1.0, 1.0)
    with pytest.raises(InputError, match="above the proportional limit"):
        buckling_torsional.torsional(1.0, 1.0, 0.0, 1.0, 1.0, 1.0, 1.0, 0.99)
    assert buckling_torsional.torsional(1.0, 1.0, 0.0, 1.0, 1.0, 1.0, 1.0, 1.01) == pytest.approx(1.0)
    assert buckling_torsional.moment_factor(np.array([1.0, -1.0])) == pytest.approx([1.0, 2.3])


def test_moment_factor_is_about_that_of_the_differential_equation() -> None:
    """A narrow strip under a linear moment: GJ φ'' + M(z)²/(E I) φ = 0, solved by finite differences."""
    z = np.linspace(0.0, 1.0, 402)[1:-1]
    step = z[1] - z[0]
    stiff = (2 * np.eye(400) - np.eye(400, k=1) - np.eye(400, k=-1)) / step**2
    for ratio, slack in ((1.0, 1e-3), (0.5, 0.02), (0.0, 0.08)):
        shape = 1.0 - (1.0 - ratio) * z
        critical = linalg.eigh(stiff, np.diag(shape**2), eigvals_only=True, subset_by_index=[0, 0])[0] ** 0.5 / np.pi
        assert buckling_torsional.moment_factor(ratio) == pytest.approx(critical, rel=slack)


def test_crippling_is_capped_and_refused_for_solid_sections() -> None:
    section = "tee, cruciform or H"
    thick = buckling_inelastic.crippling(section, 3.0, 150.0, 72e3, 280.0, 3.0, 0.8)
    assert thick == pytest.approx(0.8 * 280.0)
    thin = buckling_inelastic.crippling(section, 1.0, 150.0, 72e3, 280.0, 3.0, 0.8)
    assert thin == pytest.approx(280 * 0.67 * (3 / 150 * np.sqrt(72e3 / 280)) ** 0.4)
    with pytest.raises(InputError, match="no thin-walled one"):
        buckling_inelastic.crippling(section, 5.0, 150.0, 72e3, 280.0, 3.0)
    with pytest.raises(InputError, match="a whole number"):
        buckling_inelastic.crippling(section, 1.0, 150.0, 72e3, 280.0, 2.5)


def test_fixed_pinned_factor_is_the_root_of_tan_x_equal_to_x() -> None:
    root = optimize.brentq(lambda x: np.tan(x) - x, 4.4, 4.6, xtol=1e-14)
    assert buckling_columns.end_factor("fixed-pinned") == pytest.approx(np.pi / root, rel=1e-12)
