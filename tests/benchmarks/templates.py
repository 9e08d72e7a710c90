"""The shaft template over many cases: ours against a general engine in a loop, and against whole-array NumPy."""

from __future__ import annotations

import time
from collections.abc import Callable
from typing import Any

import numpy as np
from tests.benchmarks.ratio import Ratio, in_fresh_processes

from doubler import catalogue, mechanics
from doubler.demo_data import templates_folder
from doubler.errors import ErrorValue
from doubler.workbook.evaluate import evaluate
from doubler.workbook.opened import OpenedTemplate, open_template

CASES = 1_000_000
LOOPED = 150
VARIED = ("load_transverse", "load_axial", "torque", "outer_diameter", "span")
NATIVE = (28, 29, 30, 31, 35, 36, 37, 38, 40, 41, 42, 43, 44, 45, 46, 48, 49, 50, 51, 52, 54, 55, 57, 58)
"""Rows of the template in which column E holds the native formulas."""

MARGINS = NATIVE[-4:]


def values(count: int) -> dict[str, np.ndarray[Any, Any]]:
    """Return invented loads and sizes."""
    draw = np.random.default_rng(7)
    return {
        "load_transverse": draw.uniform(2.0, 14.0, count),
        "load_axial": draw.uniform(-20.0, 30.0, count),
        "torque": draw.uniform(0.2, 3.0, count),
        "outer_diameter": draw.uniform(55.0, 90.0, count),
        "span": draw.uniform(600.0, 1200.0, count),
    }


def ratios() -> list[Ratio]:
    """Measure."""
    opened = open_template(templates_folder() / "shaft.xlsx")
    given = values(CASES)
    cells = {name: (p.sheet, p.address) for name in VARIED for p in (opened.template.find_input(name, "here"),)}
    inputs = {cells[name]: array for name, array in given.items()}
    outputs = [(port.sheet, port.address) for port in opened.template.outputs.values()]
    start = time.perf_counter()
    evaluate(opened.template.graph, inputs, outputs)
    ours = (time.perf_counter() - start) / CASES
    _agree(opened, cells)
    looped = _looped(opened, cells, given, outputs)
    return [
        Ratio(
            "shaft template, a case: general engine in a loop over ours, 1,000,000 cases",
            looped / ours,
            500,
            "at least",
        ),
        Ratio(
            "shaft template, the four margins by native formulas: whole-array NumPy over ours",
            in_fresh_processes("templates", "plain margins", "ours margins"),
            3,
            "at least",
        ),
        Ratio(
            "shaft template, all 24 native formulas kept: whole-array NumPy over ours",
            in_fresh_processes("templates", "plain columns", "ours columns"),
            None,
            "at least",
        ),
    ]


def once(which: str) -> float:
    """Run one of the two once and return its seconds: called in a process of its own.

    Both compute all 24 native formulas and keep all columns, or those that the four margins need and keep these.
    """
    side, _, what = which.partition(" ")
    opened = open_template(templates_folder() / "shaft.xlsx")
    cells = {name: (p.sheet, p.address) for name in VARIED for p in (opened.template.find_input(name, "here"),)}
    kept = NATIVE if what == "columns" else MARGINS

    def run(given: dict[str, np.ndarray[Any, Any]]) -> float:
        inputs = {cells[name]: array for name, array in given.items()}
        outputs = [("Shaft", (row, 5)) for row in kept]
        script = _whole_array(opened, given, margins_only=what == "margins")
        start = time.perf_counter()
        _ = script() if side == "plain" else evaluate(opened.template.graph, inputs, outputs)
        return time.perf_counter() - start

    run(values(1000))
    return run(values(CASES))


def _agree(opened: OpenedTemplate, cells: dict[str, Any]) -> None:
    """Hold the script's columns against ours on some cases."""
    given = values(1000)
    outputs = [("Shaft", (row, 5)) for row in NATIVE]
    found = evaluate(opened.template.graph, {cells[name]: array for name, array in given.items()}, outputs)
    for column, output in zip(_whole_array(opened, given, margins_only=False)(), outputs, strict=True):
        np.testing.assert_allclose(found.value(*output), column, rtol=1e-12)


def _looped(
    opened: OpenedTemplate, cells: dict[str, Any], given: dict[str, Any], outputs: list[tuple[str, tuple[int, int]]]
) -> float:
    """Return the seconds a case of setting the inputs and evaluating the outputs with a general engine."""
    import formualizer

    book = formualizer.load_workbook(str(opened.package.path))
    mechanics.load()
    for name in catalogue.names():
        book.register_function(name, _callback(name), max_args=None)
    targets = [(sheet, row, column) for sheet, (row, column) in outputs]
    start = time.perf_counter()
    for case in range(LOOPED):
        for name in VARIED:
            sheet, (row, column) = cells[name]
            book.set_value(sheet, row, column, float(given[name][case]))
        found = book.evaluate_cells(targets)
    seconds = (time.perf_counter() - start) / LOOPED
    due = evaluate(opened.template.graph, {cells[n]: float(given[n][LOOPED - 1]) for n in VARIED}, outputs)
    for value, (sheet, address) in zip(found, outputs, strict=True):
        assert isinstance(value, float), (sheet, address, value)
        assert abs(value - due.value(sheet, address)) <= 1e-9 * abs(value), (sheet, address, value)
    return seconds


def _callback(name: str) -> Callable[..., Any]:
    function = catalogue.lookup(name)
    assert function is not None

    optional = [argument.optional for argument in function.arguments] + [True]

    def call(*arguments: Any) -> Any:
        # This engine hands an omitted argument over as 0.
        given = [None if a == 0.0 and may else a for a, may in zip(arguments, optional, strict=False)]
        value = catalogue.call_cells(function, given).grid[0][0]
        if isinstance(value, ErrorValue):
            raise ValueError(str(value))
        return value

    return call


def _whole_array(opened: OpenedTemplate, given: dict[str, Any], margins_only: bool) -> Callable[[], list[Any]]:
    """Return the template's native formulas, written as a NumPy script over whole arrays."""
    sheet = opened.template.workbook.sheets[0]
    fixed = {
        name: sheet.cells[port.address].value
        for name, port in opened.template.inputs.items()
        if name not in VARIED and port.address in sheet.cells
    }

    def script() -> list[Any]:
        load, axial, torque, outer, span = (given[name] for name in VARIED)
        inner, young, shear = fixed["inner_diameter"], fixed["young_modulus"], fixed["shear_modulus"]
        area = np.where(outer > inner, np.pi / 4 * (outer**2 - inner**2), np.nan)
        second = np.where(outer > inner, np.pi / 64 * (outer**4 - inner**4), np.nan)
        modulus = second / (outer / 2)
        polar = 2 * second
        s_axial = axial * 1000 / area
        s_bending = load * 1000 * span / 4 / modulus
        s_torsion = torque * 1000000 * outer / 2 / polar
        s_shear = load * 1000 / 2 * 4 / (3 * area) * (outer**2 + outer * inner + inner**2) / (outer**2 + inner**2)
        top = s_axial + s_bending
        top_equivalent = np.sqrt(top**2 + 3 * s_torsion**2)
        bottom = s_axial - s_bending
        bottom_equivalent = np.sqrt(bottom**2 + 3 * s_torsion**2)
        middle = np.abs(s_torsion) + np.abs(s_shear)
        middle_equivalent = np.sqrt(s_axial**2 + 3 * middle**2)
        equivalent = np.maximum(np.maximum(top_equivalent, bottom_equivalent), middle_equivalent)
        midspan = 48 * young * second / span**3
        deflection = load / midspan
        torsional = shear * polar / fixed["length_torsion"] / 1000
        twist = np.degrees(torque / torsional)
        cap, dynamic = fixed["margin_cap"], fixed["factor_dynamic"]

        def margin(allowable: Any, applied: Any) -> Any:
            return np.where(applied == 0, cap, np.minimum(cap, allowable / applied - 1))

        margins = [
            margin(fixed["tensile_yield"], fixed["factor_yield"] * dynamic * equivalent),
            margin(fixed["tensile_ultimate"], fixed["factor_ultimate"] * dynamic * equivalent),
            margin(fixed["deflection_limit"], np.abs(deflection)),
            margin(fixed["twist_limit"], np.abs(twist)),
        ]
        if margins_only:
            return margins
        bending = young * second / 1000000
        return [
            area, second, modulus, polar, s_axial, s_bending, s_torsion, s_shear, top, top_equivalent, bottom,
            bottom_equivalent, middle, middle_equivalent, equivalent, bending, midspan, deflection, torsional, twist,
            *margins,
        ]  # fmt: skip

    return script
