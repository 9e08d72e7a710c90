"""Vessels, fits and rotating discs: boundary stresses, equilibrium along the radius, refusals."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from doubler.catalogue.formula_text import evaluate_text
from doubler.catalogue.plan import CallError
from doubler.mechanics import interference, pressure, rotating_disc, thick_cylinder

PRESSURES = st.floats(0.0, 500.0)
WALLS = st.tuples(st.floats(1.0, 100.0), st.floats(1.02, 8.0)).map(lambda wall: (wall[0], wall[0] * wall[1]))
RATIOS = st.floats(0.0, 0.5)


@given(PRESSURES, PRESSURES, WALLS)
def test_lame_meets_its_pressures_and_the_equilibrium_of_half_a_ring(inner, outer, wall) -> None:
    a, b = wall
    for radial, hoop, power in (
        (thick_cylinder.radial, thick_cylinder.hoop, 1),
        (thick_cylinder.sphere_radial, thick_cylinder.sphere_hoop, 2),
    ):
        assert radial(inner, outer, a, b, a) == pytest.approx(-inner, abs=1e-7)
        assert radial(inner, outer, a, b, b) == pytest.approx(-outer, abs=1e-7)
        nodes, weights = np.polynomial.legendre.leggauss(40)
        r = 0.5 * (b + a) + 0.5 * (b - a) * nodes
        force = np.sum(hoop(inner, outer, a, b, r) * r ** (power - 1) * weights) * 0.5 * (b - a) * power
        assert force == pytest.approx(inner * a**power - outer * b**power, abs=1e-5 * (1.0 + inner + outer) * b**power)


@given(PRESSURES, PRESSURES, WALLS, RATIOS)
def test_axial_stress_by_the_ends(inner, outer, wall, ratio) -> None:
    a, b = wall
    closed = thick_cylinder.axial(inner, outer, a, b, ratio, "closed")
    assert closed * (b**2 - a**2) == pytest.approx(inner * a**2 - outer * b**2, abs=1e-6 * b**2)
    assert thick_cylinder.axial(inner, outer, a, b, ratio, "open") == 0.0
    middle = (a + b) / 2.0
    both = thick_cylinder.radial(inner, outer, a, b, middle) + thick_cylinder.hoop(inner, outer, a, b, middle)
    assert thick_cylinder.axial(inner, outer, a, b, ratio, "held") == pytest.approx(ratio * both, abs=1e-7)


def test_thin_wall_is_the_mean_over_a_thick_one() -> None:
    mean = 0.5 * sum(thick_cylinder.hoop(1.0, 0.0, 100.0, 100.1, r) for r in (100.0, 100.1))
    assert pressure.thin_cylinder_hoop(1.0, 100.0, 0.1) == pytest.approx(mean, rel=1e-5)
    assert pressure.thin_cylinder_axial(1.0, 100.0, 0.1) * 2.0 == pressure.thin_cylinder_hoop(1.0, 100.0, 0.1)
    ball = thick_cylinder.sphere_hoop(1.0, 0.0, 100.0, 100.1, 100.05)
    assert pressure.thin_sphere(1.0, 100.0, 0.1) == pytest.approx(ball, rel=2e-3)


@given(RATIOS)
def test_growth_is_hoop_strain_times_radius(ratio) -> None:
    hoop, axial = pressure.thin_cylinder_hoop(2.0, 50.0, 1.0), pressure.thin_cylinder_axial(2.0, 50.0, 1.0)
    growth = (hoop - ratio * axial) / 7e4 * 50.0
    assert pressure.cylinder_growth(2.0, 50.0, 1.0, 7e4, ratio) == pytest.approx(growth)
    ball = pressure.thin_sphere(2.0, 50.0, 1.0)
    assert pressure.sphere_growth(2.0, 50.0, 1.0, 7e4, ratio) == pytest.approx(ball * (1.0 - ratio) / 7e4 * 50.0)


@given(st.floats(0.0, 0.9), st.floats(1.1, 5.0), RATIOS, RATIOS, st.floats(1e4, 3e5), st.floats(1e4, 3e5))
def test_fit_pressure_closes_the_interference(bore, outside, hub_ratio, shaft_ratio, hub, shaft) -> None:
    joint, grip = 20.0, 0.02
    inner = bore * joint if bore > 0.01 else None
    found = interference.interference_pressure(grip, joint, outside * joint, hub, hub_ratio, shaft, shaft_ratio, inner)
    hub_hoop = thick_cylinder.hoop(found, 0.0, joint, outside * joint, joint)
    grown = joint / hub * (hub_hoop + hub_ratio * found)
    shaft_hoop = -found if inner is None else thick_cylinder.hoop(0.0, found, inner, joint, joint)
    shrunk = joint / shaft * (shaft_hoop + shaft_ratio * found)
    assert grown - shrunk == pytest.approx(grip, rel=1e-9)


@given(st.floats(0.05, 0.95), RATIOS, st.floats(0.0, 1.0))
def test_disc_is_in_equilibrium_and_free_at_rim_and_bore(bore, ratio, share) -> None:
    speed, density, rim = 500.0, 8e-9, 300.0
    a = bore * rim
    r = a + share * (rim - a)
    step = 1e-4 * rim
    r = min(max(r, a + step), rim - step)

    def radial(at):
        return rotating_disc.disc_radial(speed, rim, at, density, ratio, a)

    for edge in (a, rim):
        assert radial(edge) == pytest.approx(0.0, abs=1e-9)
    slope = (radial(r + step) * (r + step) - radial(r - step) * (r - step)) / (2.0 * step)
    hoop = rotating_disc.disc_hoop(speed, rim, r, density, ratio, a)
    assert slope - hoop + density * speed**2 * r**2 == pytest.approx(0.0, abs=1e-2)


def test_solid_disc_at_its_centre_and_a_pinhole_that_doubles_it() -> None:
    centre = rotating_disc.disc_hoop(500.0, 300.0, 0.0, 8e-9, 0.3)
    assert rotating_disc.disc_radial(500.0, 300.0, 0.0, 8e-9, 0.3) == pytest.approx(centre)
    assert rotating_disc.disc_hoop(500.0, 300.0, 1e-4, 8e-9, 0.3, 1e-4) == pytest.approx(2.0 * centre, rel=1e-9)
    r = np.linspace(100.0, 300.0, 20001)
    mean = np.trapezoid(rotating_disc.disc_hoop(500.0, 300.0, r, 8e-9, 0.3, 100.0), r) / 200.0
    assert rotating_disc.disc_hoop_mean(500.0, 300.0, 8e-9, 100.0) == pytest.approx(mean, rel=1e-7)


@pytest.mark.parametrize(
    ("formula", "words"),
    [
        ('=STRESS_THIN_CYLINDER_HOOP("1 MPa", "9.9 mm", "1 mm", "MPa")', "not thin"),
        ('=STRESS_THIN_CYLINDER_AXIAL("-1 MPa", "99 mm", "1 mm", "MPa")', "pressure must not be negative"),
        ('=STRESS_THIN_SPHERE("1 MPa", "99 mm", "0 mm", "MPa")', "thickness must be positive"),
        ('=STIFFNESS_SPHERE_GROWTH("1 MPa","99 mm","1 mm","70 GPa",0.6,"mm")', "poissons_ratio must be"),
        ('=STRESS_THICK_CYLINDER_HOOP("1 MPa","0 MPa","10 mm","9 mm","10 mm","MPa")', "smaller than the outer"),
        ('=STRESS_THICK_CYLINDER_HOOP("1 MPa","0 MPa","10 mm","19 mm","20 mm","MPa")', "lie in the wall"),
        ('=STRESS_THICK_CYLINDER_AXIAL("1 MPa","0 MPa","10 mm","19 mm",0.3,"free","MPa")', "closed"),
        ('=STRESS_THICK_SPHERE_RADIAL("1 MPa","0 MPa","10 mm","19 mm","9 mm","MPa")', "lie in the wall"),
        ('=STRESS_INTERFERENCE_PRESSURE("1 mm","20 mm","20 mm","9 GPa",0.3,"9 GPa",0.3)', "interface radius"),
        ('=STRESS_INTERFERENCE_PRESSURE("-1 mm","20 mm","30 mm","9 GPa",0.3,"9 GPa",0.3)', "interference must not"),
        ('=STRESS_INTERFERENCE_PRESSURE("1 mm","20 mm","30 mm","9 GPa",0.3,"9 GPa",0.3,"20 mm")', "inner radius"),
        ('=STRESS_DISC_HOOP("9 rad/s","30 mm","31 mm","9 kg/m^3",0.29,,"MPa")', "lie in the disc"),
        ('=STRESS_DISC_HOOP("9 rad/s","30 mm","9 mm","9 kg/m^3",0.29,"10 mm","MPa")', "lie in the disc"),
        ('=STRESS_DISC_HOOP("9 Hz","30 mm","9 mm","9 kg/m^3",0.29,,"MPa")', "rad/s"),
        ('=STRESS_DISC_HOOP_MEAN("9 rad/s","30 mm","9 kg/m^3","30 mm","MPa")', "smaller than the outer"),
    ],
)
def test_outside_its_limits_there_is_a_reason_and_no_number(formula, words) -> None:
    assert words in "; ".join(evaluate_text(formula).reasons)


def test_a_wall_given_in_another_unit_still_counts_as_its_own() -> None:
    assert evaluate_text('=STRESS_THICK_CYLINDER_HOOP("1 MPa","0 MPa","25.4 mm","3 in","1 in","MPa")').reasons == ()


def test_arrays_name_the_lane_that_is_outside() -> None:
    with pytest.raises(CallError, match="not thin"):
        pressure.thin_cylinder_hoop(1.0, np.array([10.0, 5.0]), 1.0)
    lanes = pressure.thin_cylinder_hoop(np.array([1.0, 2.0]), np.array([10.0, 50.0]), 1.0)
    np.testing.assert_allclose(lanes, [10.0, 100.0])
