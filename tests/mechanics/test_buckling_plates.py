"""Plates and cylinders: coefficients against independent series, reduction, loads together, refusals."""

import numpy as np
import pytest
from scipy import linalg

from doubler.errors import InputError
from doubler.mechanics import buckling_cylinders, buckling_inelastic, buckling_plates
from doubler.mechanics.plate_modes import compression_coefficient, plate_coefficient, strip_coefficient

EDGES = [*buckling_plates._HELD]
SHEET = {"thickness": 1.0, "width": 50.0, "modulus": 70e3, "poissons_ratio": 0.3}


def sine_load_factor(aspect: float, compression: float, bending: float, shear: float, terms: int = 10) -> float:
    """Return the factor on loads of a supported plate by a double sine series, its integrals in closed form."""
    pairs = [(m, n) for m in range(1, terms + 1) for n in range(1, terms + 1)]
    stiff = np.diag([np.pi**4 / 4 * aspect * ((m / aspect) ** 2 + n**2) ** 2 for m, n in pairs])
    load = np.zeros((len(pairs), len(pairs)))
    for row, (m, n) in enumerate(pairs):
        for place, (p, q) in enumerate(pairs):
            if m == p:
                uneven = 8.0 / np.pi**2 * n * q / (n**2 - q**2) ** 2 if (n + q) % 2 else 0.0
                load[row, place] += np.pi**2 * m**2 / aspect * (compression * 0.25 * (n == q) + bending * 0.5 * uneven)
            if (m + p) % 2 and (n + q) % 2:
                load[row, place] += shear * 8.0 * m * n * p * q / ((m**2 - p**2) * (q**2 - n**2))
    return 1.0 / float(linalg.eigvalsh(np.pi**2 * load, stiff)[-1])


@pytest.mark.parametrize("loads", [(1.0, 0.0, 0.0), (0.0, 0.0, 1.0), (0.0, 1.0, 0.0), (1.0, 3.0, 2.0)])
@pytest.mark.parametrize("aspect", [0.7, 1.0, 1.9, 2.3])
def test_supported_plates_agree_with_a_double_sine_series(aspect: float, loads: tuple[float, float, float]) -> None:
    found = plate_coefficient(1, np.array([aspect]), *loads)[0]
    assert found == pytest.approx(sine_load_factor(aspect, *loads), rel=4e-4)


@pytest.mark.parametrize("edges", EDGES)
@pytest.mark.parametrize("ratio", [1.0, 0.3, -0.5, -1.0])
def test_no_number_of_half_waves_gives_less(edges: str, ratio: float) -> None:
    held = buckling_plates._HELD[edges]
    aspects = np.array([0.3, 0.9, 1.7, 3.3, 8.1])
    found = compression_coefficient(held, aspects, ratio, 0.3)
    for aspect, k in zip(aspects, found, strict=True):
        every = strip_coefficient(held, aspect / np.arange(1.0, 60.0), np.full(59, ratio), np.full(59, 0.3))
        assert k == pytest.approx(every.min(), rel=1e-9)


def test_supported_edges_follow_the_closed_form() -> None:
    aspects = np.linspace(0.2, 6.0, 59)
    waves = np.arange(1.0, 20.0)[:, None]
    closed = ((waves / aspects + aspects / waves) ** 2).min(axis=0)
    assert buckling_plates.coefficient("simply supported", aspects) == pytest.approx(closed, rel=1e-8)


def test_both_functions_agree_and_named_edges_exchange_with_the_stress() -> None:
    plate = buckling_plates.coefficient("simply supported", 1.3, -1.0)
    assert plate_coefficient(1, np.array([1.3]), 0.0, 1.0, 0.0)[0] == pytest.approx(plate, rel=1e-6)
    for one, other in (("clamped-free", "free-clamped"), ("simply supported-clamped", "clamped-simply supported")):
        even = [buckling_plates.coefficient(edges, 2.0) for edges in (one, other)]
        assert even[0] == pytest.approx(even[1], rel=1e-8)
    free = buckling_plates.coefficient("free-simply supported", 2.0, 0.0)
    assert free < buckling_plates.coefficient("simply supported-free", 2.0, 0.0)


def test_the_elastic_stress_is_refused_above_the_limit_and_for_blocks() -> None:
    stress = buckling_plates.stress(4.0, **SHEET, proportional_limit=200.0)
    assert stress == pytest.approx(4 * np.pi**2 * 70e3 / (12 * 0.91) / 2500)
    with pytest.raises(InputError, match="above the proportional limit"):
        buckling_plates.stress(4.0, **SHEET, proportional_limit=0.99 * stress)
    with pytest.raises(InputError, match="no thin plate"):
        buckling_plates.stress(4.0, **(SHEET | {"width": 9.0}), proportional_limit=1e9)
    with pytest.raises(InputError, match="aspect must be at least 1"):
        buckling_plates.coefficient_shear("clamped", 5.01)
    with pytest.raises(InputError, match="aspect must be at least 1"):
        buckling_plates.coefficient_shear_fit("clamped", 0.9)


def test_the_factor_on_loads_together_is_that_of_one_alone_and_falls_with_each() -> None:
    unit = np.pi**2 * 70e3 / (12 * 0.91) / 2500
    rest = {"length": 75.0, **SHEET, "proportional_limit": 1e9}
    alone = buckling_plates.factor("simply supported", 10.0, 0.0, 0.0, **rest)
    assert alone == pytest.approx(buckling_plates.coefficient("simply supported", 1.5) * unit / 10.0, rel=1e-6)
    shear = buckling_plates.factor("clamped", 0.0, 0.0, -10.0, **rest)
    assert shear == pytest.approx(buckling_plates.coefficient_shear("clamped", 1.5) * unit / 10.0, rel=1e-6)
    both = buckling_plates.factor("simply supported", 10.0, 0.0, np.array([0.0, 5.0, 10.0]), **rest)
    assert np.all(np.diff(both) < 0)
    long = buckling_plates.factor("simply supported", 20.0, 0.0, 20.0, **(rest | {"length": 250.0}))
    ratios = long * 20.0 / unit / np.array([4.0, 5.53])  # the published parabola Rc + Rs² = 1
    assert ratios[0] + ratios[1] ** 2 == pytest.approx(1.0, abs=0.03)
    scaled = buckling_plates.factor("simply supported", 20.0, 6.0, 4.0, **rest)
    assert buckling_plates.factor("simply supported", 10.0, 3.0, 2.0, **rest) == pytest.approx(2 * scaled)
    with pytest.raises(InputError, match="beyond the proportional limit"):
        buckling_plates.factor("clamped", 10.0, 0.0, 0.0, **(rest | {"proportional_limit": 100.0}))
    with pytest.raises(InputError, match="times the width"):
        buckling_plates.factor("clamped", 10.0, 0.0, 0.0, **(rest | {"length": 300.0}))
    with pytest.raises(InputError, match="no stress acts"):
        buckling_plates.factor("clamped", 0.0, 0.0, 0.0, **rest)


@pytest.mark.parametrize("part", ["flange, supported", "flange, clamped", "plate, clamped", "plate as column", "shear"])
def test_plasticity_reduces_nothing_when_elastic_and_balances_the_stress(part: str) -> None:
    curve = (72e3, 0.3, 300.0, 12.0)
    share = buckling_inelastic.plasticity(part, np.array([1.0, 100.0, 150.0, 173.0]), *curve)
    assert share[0] == pytest.approx(1.0, abs=1e-3 if part.startswith(("plate, c", "flange, c")) else 1e-9)
    assert np.all(np.diff(share) < 0)
    sheet = (1.0, 20.0, 72e3, 0.3, 300.0, 12.0)
    coefficient = 0.8 if part == "flange, supported" else 1.2
    stress = buckling_inelastic.plate_plastic(part, coefficient, *sheet)
    elastic = coefficient * np.pi**2 * 72e3 / (12 * 0.91) / 400
    assert stress == pytest.approx(elastic * buckling_inelastic.plasticity(part, stress, *curve), rel=1e-9)
    with pytest.raises(InputError, match="before it buckles"):
        buckling_inelastic.plate_plastic(part, 40.0, *sheet)
    with pytest.raises(InputError, match="must not pass the proof stress"):
        buckling_inelastic.plasticity(part, 301.0, *curve)


CAN = {"radius": 500.0, "thickness": 1.0, "length": 600.0, "modulus": 70e3, "poissons_ratio": 0.3}


def test_cylinders_are_refused_outside_the_tests_behind_the_knock_down() -> None:
    stress = buckling_cylinders.cylinder("bending", **CAN, proportional_limit=200.0)
    assert stress > buckling_cylinders.cylinder("compression", **CAN, proportional_limit=200.0)
    for change, words in (
        ({"thickness": 30.0}, "20 to 1500 times"),
        ({"thickness": 0.3}, "20 to 1500 times"),
        ({"length": 30.0}, "buckles as a wide plate"),
        ({"length": 5.01 * CAN["radius"]}, "as a column"),
    ):
        with pytest.raises(InputError, match=words):
            buckling_cylinders.cylinder("bending", **(CAN | change), proportional_limit=1e9)
    with pytest.raises(InputError, match="above the proportional limit"):
        buckling_cylinders.cylinder("bending", **CAN, proportional_limit=0.9 * stress)


def test_external_pressure_takes_the_worst_number_of_lobes() -> None:
    can = CAN | {"proportional_limit": 200.0}
    pressure = buckling_cylinders.cylinder_pressure("lateral", **can)
    stiffness = 70e3 / (12 * 0.91)
    lobes = np.arange(2, 60)
    b2 = (lobes * 600.0 / (np.pi * 500.0)) ** 2
    z2 = 600.0**4 * 0.91 / 500.0**2
    every = 0.75 * np.pi**2 * stiffness / (500 * 600**2) * ((1 + b2) ** 2 + 12 * z2 / np.pi**4 / (1 + b2) ** 2) / b2
    assert pressure == pytest.approx(every.min())
    assert buckling_cylinders.cylinder_pressure("hydrostatic", **can) < pressure
    with pytest.raises(InputError, match="fewer than 4 lobes"):
        buckling_cylinders.cylinder_pressure("lateral", **(can | {"length": 20000.0}))
    with pytest.raises(InputError, match="moderate length"):
        buckling_cylinders.cylinder_pressure("lateral", **(can | {"length": 50.0}))
    with pytest.raises(InputError, match="hoop stress"):
        buckling_cylinders.cylinder_pressure("lateral", **(can | {"proportional_limit": 0.1}))
    assert buckling_cylinders.ring_pressure(500.0, 1.0, 70e3, 0.3, 200.0) < pressure
