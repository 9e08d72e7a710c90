"""The shipped templates, filled by `fill` and recalculated by LibreOffice with the add-in: equal in all cells."""

import math
import re
import shutil
import zipfile

import pytest

from doubler.demo_data import templates_folder
from doubler.errors import ErrorValue
from doubler.fill import fill
from doubler.hosts.calc_client import error_text
from doubler.workbook.reader import read_workbook
from doubler.workbook.references import address_text

pytestmark = pytest.mark.office

CASES = {
    "tension_strap": None,
    "shaft": "case,load_transverse [kN],load_axial [kN],torque [kN m],outer_diameter [mm]\n"
    "pull,42,15,3.6,78\nreversed,-35,-80,-2.1,82\nunloaded,0,0,0,78\nhollow,20,5,1,31\n",
    "elastic_constants": "case,basis,young_modulus [GPa],poisson_ratio [1],shear_modulus [GPa],bulk_modulus [GPa]\n"
    "steel,E and nu,206,0.3,79.2,172\ncross,E and G,206,0.3,79.2,172\nwrong,E and G,206,0.3,60,172\n"
    "bulk,E and K,206,0.3,79,170\n",
}


def alike(shown, stored):
    if isinstance(stored, ErrorValue) or isinstance(shown, dict):
        return isinstance(shown, dict) and error_text(shown["error"]) == str(stored)
    if isinstance(stored, bool):
        return float(shown) == float(stored)
    if isinstance(stored, float):
        return isinstance(shown, float) and math.isclose(shown, stored, rel_tol=1e-12, abs_tol=1e-13)
    return (shown or "") == (stored or "")


OURS = re.compile(r"\b(?:STRESS|SECTION|STIFFNESS|MARGIN|MODULUS)_[A-Z_0-9]+\(")


def two_errors(shown, cell):
    """Whether a native formula that met two unlike errors shows one: LibreOffice 25.2 the right operand's."""
    return isinstance(shown, dict) and isinstance(cell.value, ErrorValue) and not OURS.search(cell.formula)


def without_stored_values(path, target):
    """Copy a workbook without its formulas' values: a cell that kept its stored value would pass unseen."""
    with zipfile.ZipFile(path) as source, zipfile.ZipFile(target, "w") as made:
        for item in source.infolist():
            data = source.read(item)
            if item.filename.startswith("xl/worksheets/sheet"):
                data, count = re.subn(rb"(</f>|<f[^>]*/>)<v>[^<]*</v>", rb"\1", data)
                assert count
            made.writestr(item, data)
    return target


@pytest.mark.parametrize("name", CASES)
def test_libreoffice_computes_what_fill_stored_in_every_cell(office, tmp_path, name):
    template = tmp_path / f"{name}.xlsx"
    shutil.copy(templates_folder() / template.name, template)
    cases = templates_folder() / "demo" / "strap_cases.csv"
    if CASES[name]:
        cases = tmp_path / "cases.csv"
        cases.write_text(CASES[name])
    fill(template, cases, tmp_path / "out")
    books = [path for path in sorted((tmp_path / "out").rglob("*.xlsx")) if path.name != "summary.xlsx"]
    assert len(books) >= 4
    compared = ours = 0
    for path in books:
        workbook = read_workbook(path)
        office("open", "filled", str(without_stored_values(path, tmp_path / f"bare-{path.name}")))
        try:
            for sheet in workbook.sheets:
                formulas = {a: cell for a, cell in sheet.cells.items() if cell.formula}
                office("calculate", "filled")
                places = [address_text(address) for address in formulas]
                blocks = office("read_many", "filled", sheet.name, places)
                for place, cell, block in zip(places, formulas.values(), blocks, strict=True):
                    where = f"{path.name} {sheet.name}!{place} ={cell.formula}"
                    shown = block[0][0]
                    right = alike(shown, cell.value) or two_errors(shown, cell)
                    assert right, f"{where}: shows {shown}, stored {cell.value}"
                    compared += 1
                    ours += bool(OURS.search(cell.formula))
        finally:
            office("shut", "filled")
    assert compared >= 38 * len(books)
    assert ours >= 4 * len(books)
