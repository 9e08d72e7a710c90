"""The shipped templates: right as they are, the same when built again, and in agreement with another spreadsheet."""

import math
import random
import re
import subprocess
import sys
from pathlib import Path
from typing import Any

import openpyxl
import pytest

from doubler import catalogue, mechanics
from doubler.demo_data import templates_folder
from doubler.errors import ErrorValue
from doubler.workbook.evaluate import evaluate
from doubler.workbook.reader import read_workbook
from doubler.workbook.template import Template, validation_fault
from doubler.workbook.writer import write_filled

mechanics.load()
FOLDER = templates_folder()
NAMES = ("tension_strap.xlsx", "shaft.xlsx", "elastic_constants.xlsx")
OURS = re.compile(r"\b(?:STRESS|SECTION|STIFFNESS|MARGIN|MODULUS)_[A-Z_0-9]+\(")
CASES = 10


def template(name: str) -> Template:
    return Template(read_workbook(FOLDER / name))


def stored(name: str) -> dict[str, Any]:
    opened = template(name)
    return {port.name: opened.cell(port).value for port in opened.outputs.values()}


@pytest.mark.parametrize("name", NAMES)
def test_stored_values_are_what_the_formulas_give(name: str) -> None:
    opened = template(name)
    values = evaluate(opened.graph)
    assert not values.not_evaluated
    for sheet, address, cell in opened.workbook.formulas():
        assert not isinstance(cell.value, ErrorValue)
        assert values.value(sheet.name, address) == cell.value, f"{sheet.name} {address}"


@pytest.mark.parametrize("name", NAMES)
def test_native_formulas_agree_with_ours(name: str) -> None:
    sheet = template(name).workbook.sheets[0]
    differences = [cell.value for (_, column), cell in sheet.cells.items() if column == 7 and cell.formula]
    assert differences
    assert set(differences) == {0.0}


@pytest.mark.parametrize("name", NAMES)
def test_no_name_hides_a_worksheet_function(name: str) -> None:
    assert not [item.name for item in template(name).workbook.names if catalogue.lookup(item.name.upper())]


@pytest.mark.parametrize("name", NAMES)
def test_inputs_are_validated_and_admit_what_they_hold(name: str) -> None:
    opened = template(name)
    for port in opened.inputs.values():
        if port.name == "case":
            continue
        rules = opened.validations(port)
        assert rules, f"{port.name} has no validation"
        assert [validation_fault(rule, [opened.cell(port).value]) for rule in rules] == [None]


@pytest.mark.parametrize("name", NAMES)
def test_the_page_is_one_wide_with_a_print_area(name: str) -> None:
    sheet = openpyxl.load_workbook(FOLDER / name).active
    assert sheet.sheet_properties.pageSetUpPr.fitToPage
    assert sheet.page_setup.fitToWidth == 1
    assert sheet.print_area.endswith(f"$H${sheet.max_row}")
    assert "never replace" in sheet["A5"].value


def test_strap_by_hand() -> None:
    # Plain arithmetic on the shipped inputs: 96 kN; 80 × 16 mm, hole 32.2 mm, pin 32 mm, e = 50 mm, double shear.
    values = stored("tension_strap.xlsx")
    assert values["net_stress"] == pytest.approx(96e3 / (47.8 * 16), rel=1e-12)
    assert values["bearing_stress"] == pytest.approx(96e3 / (32 * 16), rel=1e-12)
    assert values["shear_out_stress"] == pytest.approx(96e3 / (2 * 33.9 * 16), rel=1e-12)
    assert values["pin_shear_stress"] == pytest.approx(96e3 / (2 * math.pi * 16**2), rel=1e-12)
    assert values["ms_shear_out_yield"] == pytest.approx(205 / (1.15 * 1.15 * 96e3 / (2 * 33.9 * 16)) - 1, rel=1e-12)
    assert values["ms_minimum"] == values["ms_shear_out_yield"]
    assert values["governing"] == "Shear-out, yield"


@pytest.mark.parametrize(
    ("name", "given", "output"),
    [
        ("tension_strap.xlsx", {"pin_diameter": 33.0}, "ms_minimum"),
        ("tension_strap.xlsx", {"hole_diameter": 81.0, "pin_diameter": 80.0}, "ms_net_yield"),
        ("tension_strap.xlsx", {"edge_distance": 16.0}, "ms_shear_out_yield"),
        ("shaft.xlsx", {"inner_diameter": 78.0}, "ms_yield"),
        ("elastic_constants.xlsx", {"basis": "E and G", "shear_modulus": 60.0}, "bulk_result"),
    ],
)
def test_impossible_geometry_or_material_has_no_result(name: str, given: dict[str, Any], output: str) -> None:
    opened = template(name)
    inputs = {(p.sheet, p.address): value for k, value in given.items() for p in [opened.inputs[k]]}
    port = opened.outputs[output]
    result = evaluate(opened.graph, inputs, [(port.sheet, port.address)]).value(port.sheet, port.address)
    assert isinstance(result, ErrorValue)


def test_a_changed_unit_cell_shows_as_a_difference() -> None:
    opened = template("tension_strap.xlsx")
    port = opened.inputs["load_axial"]
    row, column = port.address
    values = evaluate(opened.graph, {(port.sheet, (row, column + 1)): "kip"})
    stress = opened.outputs["net_stress"].address
    assert values.value("Strap", stress) == pytest.approx(96 * 4448.2216152605 / (47.8 * 16), rel=1e-12)
    assert abs(values.value("Strap", (stress[0], 7))) > 0.5


def test_no_load_has_the_largest_margin_that_is_reported() -> None:
    opened = template("shaft.xlsx")
    loads = ("load_transverse", "load_axial", "torque")
    inputs = {(p.sheet, p.address): 0.0 for k in loads for p in [opened.inputs[k]]}
    values = evaluate(opened.graph, inputs)
    sheet = opened.workbook.sheets[0]
    for name, port in opened.outputs.items():
        if name.startswith("ms_"):
            row, column = port.address
            assert values.value(sheet.name, (row, column)) == values.value(sheet.name, (row, column + 2)) == 20.0


def test_building_again_gives_the_same_bytes(tmp_path: Path) -> None:
    script = Path(__file__).parents[2] / "workbook_templates" / "build.py"
    subprocess.run([sys.executable, str(script), str(tmp_path)], check=True, capture_output=True)
    made = {path.relative_to(tmp_path) for path in tmp_path.rglob("*.*")}
    demo = {Path("demo") / n for n in ("strap_cases.csv", "colleague_bracket.xlsx", "colleague_faults.yaml")}
    assert made == {Path(name) for name in NAMES} | demo
    for path in made:
        assert (tmp_path / path).read_bytes() == (FOLDER / path).read_bytes(), path


def random_inputs(opened: Template, pick: random.Random) -> dict[tuple[str, int, int], Any]:
    """Vary every number by up to 15 %, within what its validation admits, and choose from the lists."""
    found: dict[tuple[str, int, int], Any] = {}
    scale = pick.uniform(0.85, 1.15)
    for port in opened.inputs.values():
        if port.name == "case":
            continue
        rule, value = opened.validations(port)[0], opened.cell(port).value
        if rule.kind == "list":
            items = rule.formula1.strip('"').split(",")
            choice = pick.choice(items)
            value = float(choice) if isinstance(value, float) else choice
        elif port.unit is not None and port.unit.text == "mm":
            value *= scale  # geometry as a whole, so that holes stay inside widths
        elif port.name in ("poisson_ratio", "shear_modulus", "bulk_modulus", "young_modulus"):
            value *= pick.uniform(0.97, 1.03)
        else:
            value = max(value * pick.uniform(0.85, 1.15), 1.0 if port.name.startswith("factor_") else 1e-6)
        assert validation_fault(rule, [value]) is None
        found[port.sheet, *port.address] = value
    return found


def fill(name: str, target: Path, seed: int) -> None:
    opened = template(name)
    inputs = random_inputs(opened, random.Random(seed))
    values = evaluate(opened.graph, {(s, (r, c)): v for (s, r, c), v in inputs.items()})
    results = {(s.name, *a): values.value(s.name, a) for s, a, _ in opened.workbook.formulas()}
    write_filled(FOLDER / name, target, inputs, results)


def without_ours(filled: Path, target: Path) -> dict[tuple[int, int], Any]:
    """Write the workbook with our functions' cells as stored and all else unstored; return the native stored values."""
    sheet = read_workbook(filled).sheets[0]
    book = openpyxl.load_workbook(filled)
    native = {}
    for address, cell in sheet.cells.items():
        if cell.formula is None:
            continue
        if OURS.search(cell.formula):
            book.active.cell(*address).value = cell.value
        else:
            native[address] = cell.value
    book.save(target)
    return native


@pytest.mark.office
def test_native_formulas_agree_with_a_spreadsheet_program(tmp_path: Path) -> None:
    (tmp_path / "in").mkdir()
    expected = {}
    for name in NAMES:
        for number in range(CASES):
            filled = tmp_path / f"{number}-{name}"
            fill(name, filled, seed=100 + number)
            expected[filled.name] = without_ours(filled, tmp_path / "in" / filled.name)
    profile = f"-env:UserInstallation=file://{tmp_path / 'profile'}"
    command = ["soffice", profile, "--headless", "--convert-to", "xlsx", "--outdir", str(tmp_path / "out")]
    inputs = [str(path) for path in sorted((tmp_path / "in").iterdir())]
    subprocess.run([*command, *inputs], check=True, capture_output=True, timeout=300)
    compared = 0
    for name, native in expected.items():
        sheet = openpyxl.load_workbook(tmp_path / "out" / name, data_only=True).active
        for address, value in native.items():
            theirs = sheet.cell(*address).value
            if isinstance(value, float):
                assert theirs == pytest.approx(value, rel=1e-12, abs=1e-12), f"{name} {address}"
            else:
                assert theirs == value, f"{name} {address}"
            compared += 1
    assert compared > 30 * 25
