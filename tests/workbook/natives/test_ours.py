"""Our own functions over lanes: one kernel call, errors per lane, and the same value as each lane alone."""

from typing import Any

import numpy as np
import pytest

from doubler.catalogue import lookup
from doubler.workbook.natives import ours
from workbook.evaluated_books import at, run, shown

AXIAL = '=STRESS_AXIAL(A1:B1,A2:B2,"MPa")'
SHEET = {"A1": 12.0, "B1": "kN", "A2": 150.0, "B2": "mm^2", "C1": AXIAL}


def test_a_pair_whose_number_varies_is_one_call_of_the_kernel(monkeypatch: pytest.MonkeyPatch) -> None:
    calls = []
    real = ours.evaluate

    def counted(*arguments: Any) -> Any:
        calls.append(arguments)
        return real(*arguments)

    monkeypatch.setattr(ours, "evaluate", counted)
    loads = np.linspace(1.0, 5000.0, 5000)
    found = run(SHEET, {"A1": loads})
    np.testing.assert_allclose(found.value("S", at("C1")), loads * 1000.0 / 150.0, rtol=1e-14)
    assert len(calls) == 1


def test_a_lane_outside_the_limits_gets_its_error_and_its_reason() -> None:
    found = run(SHEET, {"A2": np.array([150.0, -1.0, 300.0])})
    assert shown(found, "C1") == [80.0, "#NUM!", 40.0]
    assert "area must be positive; it is -1 mm^2" in found.reason("S", at("C1"), 1)
    assert found.reason("S", at("C1"), 2) == ""


def test_units_that_vary_by_case_are_sorted_and_called_once_each() -> None:
    found = run(SHEET, {"B1": np.array(["kN", "N", "lbf", "mm", "kN"], dtype=object)})
    values = shown(found, "C1")
    assert values[0] == values[4] == 80.0
    assert values[1] == pytest.approx(0.08)
    assert values[2] == pytest.approx(12 * 4.4482216152605 / 150)
    assert values[3] == "#VALUE!"


def test_errors_and_empty_cells_among_numbers_stay_in_their_lane() -> None:
    from doubler.errors import ErrorValue

    kinds = np.array([12.0, None, ErrorValue.DIV0, "24", 6.0], dtype=object)
    assert shown(run(SHEET, {"A1": kinds}), "C1") == [80.0, "#VALUE!", "#DIV/0!", "#VALUE!", 40.0]


def test_without_a_result_unit_the_value_and_its_unit_fill_two_cells() -> None:
    cells = SHEET | {"C1:D1": "{=STRESS_AXIAL(A1:B1,A2:B2)}"}
    del cells["C1"]
    found = run(cells, {"A1": np.array([12.0, 24.0])})
    assert shown(found, "C1") == [80.0, 160.0]
    assert found.value("S", at("D1")) == "MPa"


def test_a_headed_column_gives_a_column_in_every_case() -> None:
    cells = {"A1": "kN", "A2": 12.0, "A3": 24.0, "B1": 150.0, "C1": "mm^2"}
    cells["D2:D3"] = '{=STRESS_AXIAL(A1:A3,B1:C1,"MPa")}'
    found = run(cells, {"A3": np.array([24.0, 48.0]), "B1": np.array([150.0, 300.0])})
    assert shown(found, "D2") == [80.0, 40.0]
    assert shown(found, "D3") == [160.0, 160.0]


def test_copies_of_a_fill_are_lanes_too() -> None:
    cells: dict[str, Any] = {}
    for row in range(1, 51):
        cells |= {f"A{row}": float(row), f"B{row}": "kN", f"C{row}": f'=STRESS_AXIAL(A{row}:B{row},"100 mm^2","MPa")'}
    found = run(cells)
    assert [shown(found, f"C{row}") for row in (1, 50)] == [10.0, 500.0]


def test_every_example_gives_over_lanes_what_it_gives_alone() -> None:
    """Each scalar function, its texts split into number and unit cells, the first number varying."""
    from doubler import catalogue, mechanics
    from doubler.catalogue.cells import call_cells
    from doubler.units import parse_quantity

    mechanics.load()
    tried = 0
    for name in catalogue.names():
        function = lookup(name)
        assert function is not None
        example = function.documentation.example
        texts = _texts(example, name)
        if texts is None or len(texts) < len([a for a in function.arguments if not a.optional]):
            continue
        try:
            number, unit = parse_quantity(texts[0])
        except Exception:
            continue
        if function.arguments[0].is_text or function.arguments[0].entries or unit.text in {"", "1"}:
            continue
        pairs = [[[number * k, unit.text]] for k in (1.0, 0.9, 1.1)]
        alone = [call_cells(function, [pair, *texts[1:]]) for pair in pairs]
        from doubler.workbook.lanes import Grid

        lanes = np.array([[number * k for k in (1.0, 0.9, 1.1)]])
        together = ours.call(function, [], [Grid(1, 2, cells=[lanes, unit.text]), *texts[1:]])
        cells = together.cells if isinstance(together, Grid) else [together]
        for case, result in enumerate(alone):
            flat = [cell for row in result.grid for cell in row]
            here = [_lane(cell, case) for cell in cells]
            assert here == flat or (len(set(map(str, flat))) == 1 and set(map(str, here)) == set(map(str, flat))), name
        tried += 1
    assert tried >= 15


def _texts(example: str, name: str) -> list[str] | None:
    import re

    match = re.fullmatch(rf"cell\(\'={name}\((.*)\)\'\)|.*={name}\((.*)\).*", example, re.DOTALL)
    if match is None:
        return None
    inner = match[1] or match[2]
    parts = re.findall(r'"([^"]*)"', inner)
    return parts if re.sub(r'"[^"]*"', "", inner).strip(", ") == "" else None


def _lane(cell: Any, case: int) -> Any:
    from doubler.workbook.lanes import Mixed, scalars

    return scalars(cell)[case] if isinstance(cell, np.ndarray | Mixed) else cell
