"""Worksheet functions over a million lanes, against the bare NumPy expression with its unit factors written in."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np
from tests.benchmarks.ratio import Ratio, side_by_side

from doubler import mechanics
from doubler.catalogue import blocks, lookup
from doubler.catalogue.evaluation import evaluate
from doubler.catalogue.plan import plan_for
from doubler.units import parse_unit

LANES = 1_000_000
TARGET = 1.3
Bare = Callable[..., Any]


def _principal(x: Any, y: Any, t: Any) -> Any:
    return 0.5 * (x + y) + np.sqrt((0.5 * (x - y)) ** 2 + t**2)


def _hertz(f: Any, r: Any, l: Any, e: Any, v: Any, e2: Any, v2: Any, r2: Any) -> Any:
    contact = 1.0 / ((1.0 - v**2) / (e * 1e9) + (1.0 - v2**2) / (e2 * 1e9))
    return np.sqrt(f * 1e3 * contact * (1e3 / r + 1e3 / r2) / (np.pi * l * 1e-3)) * 1e-6


def _coulomb_mohr(x: Any, y: Any, t: Any, tension: Any, compression: Any) -> Any:
    centre, radius = 0.5 * (x + y), np.sqrt((0.5 * (x - y)) ** 2 + t**2)
    return np.maximum(centre + radius, 0.0) - np.minimum(centre - radius, 0.0) * tension / compression


def _column(length: Any, second: Any, area: Any, modulus: Any, strength: Any) -> Any:
    share = length**2 * 1e6 * area / second * strength / (2.0 * np.pi**2 * modulus * 1e3)
    return 1e-3 * area * strength * np.where(share < 1.0, 1.0 - 0.5 * share, 0.5 / np.maximum(share, 1.0))


# Name, the columns' units with the range each is drawn from, the result's unit, and the same as plain NumPy.
CASES: list[tuple[str, str, str | None, Bare]] = [
    ("STRESS_AXIAL", "kN -50 50|mm^2 100 200", "MPa", lambda f, a: f * 1e3 / a),
    ("STRESS_PIN_SHEAR", "kN 1 50|mm 5 20", "MPa", lambda f, d: f * 1e3 / (np.pi / 4.0 * d**2)),
    ("STRESS_BENDING", "kN*m -5 5|mm -50 50|mm^4 1e5 1e6", "MPa", lambda m, y, i: m * 1e6 * y / i),
    (
        "STRESS_AXIAL_BIAXIAL_MAX",
        "kN -50 50|kN*m -5 5|kN*m -5 5|mm^2 100 900|mm^3 1e4 9e4|mm^3 1e4 9e4",
        "MPa",
        lambda f, m, n, a, w, v: f * 1e3 / a + np.abs(m) * 1e6 / w + np.abs(n) * 1e6 / v,
    ),
    ("STRESS_SHEAR_BEAM", "kN 1 9|mm^3 1e3 9e3|mm^4 1e5 9e5|mm 1 9", "MPa", lambda v, q, i, t: v * 1e3 * q / (i * t)),
    (
        "STRESS_TORSION_ROUND",
        "kN*m 1 9|mm 20 40|mm 5 19",
        "MPa",
        lambda t, d, b: 16.0 / np.pi * t * 1e6 * d / (d**4 - b**4),
    ),
    ("STRESS_THIN_CYLINDER_HOOP", "MPa 1 9|mm 100 900|mm 1 9", "MPa", lambda p, r, t: p * r / t),
    (
        "STRESS_THICK_CYLINDER_HOOP",
        "MPa 1 9|MPa 1 9|mm 10 20|mm 40 50|mm 25 35",
        "MPa",
        lambda p, q, a, b, r: (p * a**2 - q * b**2 + (p - q) * a**2 * b**2 / r**2) / (b**2 - a**2),
    ),
    ("STRESS_PRINCIPAL_MAX", "MPa -90 90|MPa -90 90|MPa -90 90", "MPa", _principal),
    (
        "STRESS_VON_MISES",
        "MPa -90 90|MPa -90 90|MPa -90 90",
        "MPa",
        lambda x, y, t: np.sqrt(x**2 - x * y + y**2 + 3.0 * t**2),
    ),
    (
        "STRESS_VON_MISES_3D",
        "MPa -90 90|MPa -90 90|MPa -90 90|MPa -90 90|MPa -90 90|MPa -90 90",
        "MPa",
        lambda x, y, z, a, b, c: np.sqrt(
            0.5 * ((x - y) ** 2 + (y - z) ** 2 + (z - x) ** 2) + 3.0 * (a**2 + b**2 + c**2)
        ),
    ),
    ("STRESS_COULOMB_MOHR", "MPa -90 90|MPa -90 90|MPa -90 90|MPa 100 200|MPa 300 900", "MPa", _coulomb_mohr),
    (
        "STRESS_ROTATED_NORMAL",
        "MPa -90 90|MPa -90 90|MPa -90 90|deg -90 90",
        "MPa",
        lambda x, y, t, a: (
            0.5 * (x + y) + 0.5 * (x - y) * np.cos(2.0 * a * np.pi / 180.0) + t * np.sin(2.0 * a * np.pi / 180.0)
        ),
    ),
    (
        "STRESS_HERTZ_CYLINDERS",
        "kN 1 9|mm 40 90|mm 10 40|GPa 60 210|1 0.2 0.4|GPa 60 210|1 0.2 0.4|mm 40 90",
        "MPa",
        _hertz,
    ),
    (
        "STRESS_CONCENTRATION_HOLE",
        "mm 50 90|mm 5 20",
        None,
        lambda w, d: 3.0 - 3.13 * (d / w) + 3.66 * (d / w) ** 2 - 1.53 * (d / w) ** 3,
    ),
    (
        "STRESS_THERMAL_PLATE",
        "K 1 90|GPa 60 210|ppm/K 8 24|1 0.2 0.4",
        "MPa",
        lambda t, e, a, v: -e * 1e3 * a * 1e-6 * t / (1.0 - v),
    ),
    ("STRAIN_TRUE", "1 0.01 0.2", "%", lambda e: 100.0 * np.log(1.0 + e)),
    (
        "STRAIN_PRINCIPAL_MAX",
        "µε -900 900|µε -900 900|µε -900 900",
        "µε",
        lambda x, y, g: 0.5 * (x + y) + 0.5 * np.sqrt((x - y) ** 2 + g**2),
    ),
    ("SECTION_ROUND_SECOND_MOMENT", "mm 20 40|mm 5 19", "mm^4", lambda d, b: np.pi / 64.0 * (d**4 - b**4)),
    ("SECTION_RECTANGLE_MODULUS", "mm 20 40|mm 20 40", "mm^3", lambda h, b: b * h**2 / 6.0),
    (
        "STIFFNESS_CANTILEVER_DEFLECTION",
        "N 1 90|mm 100 900|mm^4 1e4 9e4|GPa 60 210",
        "mm",
        lambda f, l, i, e: f * l**3 / (3.0 * e * 1e3 * i),
    ),
    (
        "STIFFNESS_FREQUENCY_MASS",
        "N/mm 1 900|kg 1 90",
        "Hz",
        lambda k, m: np.sqrt(k * 1e3 / m) / (2.0 * np.pi),
    ),
    ("BUCKLING_COLUMN", "m 0.5 3|mm^4 1e4 9e4|mm^2 100 400|GPa 60 210|MPa 200 400", "kN", _column),
    (
        "MARGIN_STRENGTH",
        "MPa 1 90|MPa 100 400|1 1.5 2|1 1 1.2",
        None,
        lambda a, r, f, g: np.abs(r) / (f * g * np.abs(a)) - 1.0,
    ),
    (
        "MARGIN_INTERACTION_TUBE",
        "1 0.1 0.9|1 0.1 0.9|1 0.1 0.9",
        None,
        lambda c, b, t: 1.0 / (c + np.sqrt(b**2 + t**2)) - 1.0,
    ),
]


def ratios() -> list[Ratio]:
    """Measure all of this module, in one thread: the expression beside it has no more."""
    mechanics.load()
    most, blocks.MOST_THREADS = blocks.MOST_THREADS, 1
    try:
        return [measured(*case) for case in CASES]
    finally:
        blocks.MOST_THREADS = most


def measured(name: str, columns: str, wanted: str | None, bare: Bare, lanes: int = LANES) -> Ratio:
    """Compare the values of a function with those of its bare expression, then their times."""
    function = lookup(name)
    assert function is not None
    random = np.random.default_rng(1)
    units, drawn = [], []
    for column in columns.split("|"):
        unit, low, high = column.split()
        units.append(None if unit == "1" else parse_unit(unit))
        drawn.append(random.uniform(float(low), float(high), lanes))
    defaults = [None if a.default is None else np.array([a.default]) for a in function.arguments[len(drawn) :]]
    plan = plan_for(function, (*units, *(None for _ in defaults)), wanted)
    given = [*drawn, *defaults]
    outcome = evaluate(function, plan, given)
    assert not outcome.failures, outcome.failures
    np.testing.assert_allclose(outcome.values, bare(*drawn), rtol=1e-9, atol=1e-9 * np.max(np.abs(outcome.values)))
    plain, ours = side_by_side(lambda: bare(*drawn), lambda: evaluate(function, plan, given), rounds=11)
    return Ratio(f"{name}, a million lanes / bare NumPy", ours / plain, TARGET)
