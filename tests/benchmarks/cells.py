"""Worksheet functions from a cell: against pint quantities, and against the bare NumPy expression."""

from __future__ import annotations

import numpy as np
from tests.benchmarks.ratio import Ratio, side_by_side

from doubler import mechanics
from doubler.catalogue import WorksheetFunction, blocks, call_cells, lookup
from doubler.catalogue.evaluation import evaluate
from doubler.catalogue.plan import plan_for
from doubler.units import parse_unit

LANES = 1_000_000


def ratios() -> list[Ratio]:
    """Measure all of this module."""
    mechanics.load()
    return [warm_cell(), *long_vector(), column_of_rows()]


def axial() -> WorksheetFunction:
    function = lookup("STRESS_AXIAL")
    assert function is not None
    return function


def warm_cell() -> Ratio:
    """A cell that is recalculated, against pint quantities that are built from the same texts."""
    import pint

    registry = pint.UnitRegistry()
    function, texts = axial(), ("12 kN", "150 mm^2", "MPa")

    def by_pint() -> float:
        return float((registry.Quantity(texts[0]) / registry.Quantity(texts[1])).to(texts[2]).magnitude)

    def by_cell() -> object:
        return call_cells(function, texts)

    assert call_cells(function, texts).grid[0][0] == 80.0
    assert abs(by_pint() - 80.0) < 1e-9
    theirs, ours = side_by_side(by_pint, by_cell, calls=(200, 5000))
    return Ratio('pint quantities / warm cell =STRESS_AXIAL("12 kN","150 mm^2","MPa")', theirs / ours, 80.0, "at least")


def long_vector() -> list[Ratio]:
    """A million values, limits and result checked, against the expression with its unit factors written in."""
    function = axial()
    random = np.random.default_rng(1)
    force, area = random.uniform(-50.0, 50.0, LANES), random.uniform(100.0, 200.0, LANES)
    plan = plan_for(function, (parse_unit("kN"), parse_unit("mm^2")), "MPa")

    def bare() -> object:
        return force * 1000.0 / area

    def checked() -> object:
        return evaluate(function, plan, [force, area])

    np.testing.assert_allclose(evaluate(function, plan, [force, area]).values, force * 1000.0 / area, rtol=1e-14)
    plain, ours = side_by_side(bare, checked, rounds=60)
    found = [Ratio(f"a million stresses from kN and mm^2 / bare NumPy, {threads()}", ours / plain, 1.2)]
    most, blocks.MOST_THREADS = blocks.MOST_THREADS, 1
    try:
        plain, ours = side_by_side(bare, checked, rounds=60)
    finally:
        blocks.MOST_THREADS = most
    return [*found, Ratio("the same in one thread", ours / plain, None)]


def threads() -> str:
    count = blocks.threads_for(LANES)
    return "1 thread" if count == 1 else f"{count} threads"


def column_of_rows() -> Ratio:
    """A column of 100,000 numbers as a host hands it over, against NumPy's own reading of the same list."""
    function = axial()
    column: list[list[object]] = [["kN"], *[[float(value)] for value in range(100_000)]]

    def read() -> object:
        return np.array(column[1:], dtype=np.float64)

    def call() -> object:
        return call_cells(function, (column, "150 mm^2", "MPa"))

    plain, ours = side_by_side(read, call, rounds=9)
    return Ratio("call with a column of 100,000 rows / np.array of the same rows", ours / plain, None)
