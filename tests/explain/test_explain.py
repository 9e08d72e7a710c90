"""The chain behind a cell reads as a hand calculation."""

from pathlib import Path

import pytest
from openpyxl import Workbook

from doubler.errors import InputError
from doubler.explain import as_markdown, as_text, explain
from strap_book import strap_template


def test_the_chain_of_a_margin(tmp_path: Path) -> None:
    found = explain(strap_template(tmp_path / "strap.xlsx"), "ms_yield")
    assert [one.symbol for one in found.inputs] == ["yield_strength", "factor", "load", "width", "thickness"]
    area, stress, margin = found.steps
    assert (area.formula, area.numbers, area.result) == ("width × thickness", "40 mm × 5 mm", "200 mm^2")
    assert stress.formula == "load × 1000 / area"
    assert stress.numbers == "12 kN × 1000 / (200 mm^2)"
    assert stress.notes == ("1000 converts units",)
    assert margin.formula == "yield_strength / (factor × stress) − 1"
    assert margin.result == "2.55556"
    assert margin.cell == "Strap!C11"


def test_an_address_serves_as_well_as_a_name(tmp_path: Path) -> None:
    template = strap_template(tmp_path / "strap.xlsx")
    assert explain(template, "Strap!C11") == explain(template, "MS_YIELD")


def test_text_and_markdown_hold_every_step(tmp_path: Path) -> None:
    found = explain(strap_template(tmp_path / "strap.xlsx"), "verdict")
    for text in (as_text(found), as_markdown(found)):
        for step in found.steps:
            assert step.formula in text
            assert step.result in text
    assert "2.55556 < 0 does not hold" in as_text(found)


def table_book(path: Path, formula: str) -> Path:
    book = Workbook()
    sheet = book.active
    sheet.title = "Bolts"
    for row in (["size", "area [mm^2]"], ["M12", 84.3], ["M16", 157.0], ["M20", 245.0]):
        sheet.append(row)
    sheet["D1"], sheet["D2"], sheet["D3"] = "M16", formula, "=MIN(B2:B4)"
    book.save(path)
    return path


@pytest.mark.parametrize(
    "formula", ["=VLOOKUP(D1,A2:B4,2,FALSE)", "=INDEX(B2:B4,MATCH(D1,A2:A4,0))", "=XLOOKUP(D1,A2:A4,B2:B4)"]
)
def test_a_lookup_names_the_row_that_it_takes(tmp_path: Path, formula: str) -> None:
    found = explain(table_book(tmp_path / "bolts.xlsx", formula), "Bolts!D2")
    assert any('takes row 3 of Bolts, "M16"' in note for note in found.steps[-1].notes), found.steps[-1].notes


def test_an_extreme_names_what_governs(tmp_path: Path) -> None:
    found = explain(table_book(tmp_path / "bolts.xlsx", "=1"), "Bolts!D3")
    assert [one.cell for one in found.inputs] == ["Bolts!B2"]
    assert any("governed by Bolts!B2" in note for note in found.steps[-1].notes)


def test_signs_and_powers_keep_their_order(tmp_path: Path) -> None:
    book = Workbook()
    book.active["A1"] = 3
    book.active["A2"] = "=-A1^2-(A1-(2-A1))/(A1/2)"
    book.save(tmp_path / "signs.xlsx")
    (step,) = explain(tmp_path / "signs.xlsx", "A2").steps
    assert step.numbers == "(−3)^2 − (3 − (2 − 3)) / (3 / 2)"


@pytest.mark.parametrize(
    ("cell", "message"),
    [
        ("nothing", "has no cell or name"),
        ("Strap!Z99", "is empty"),
        ("C5", "say on which sheet"),
        ("Nowhere!C5", "has no sheet 'Nowhere'; it has Strap"),
    ],
)
def test_a_cell_that_is_not_there(tmp_path: Path, cell: str, message: str) -> None:
    with pytest.raises(InputError, match=message):
        explain(strap_template(tmp_path / "strap.xlsx"), cell)


def test_a_step_whose_units_do_not_agree_says_so(tmp_path: Path) -> None:
    """Numbers with units stand beside a result: where the equation is false, it says so."""
    bad = strap_template(tmp_path / "bad.xlsx", {"stress": "=C3/C9"})
    steps = explain(bad, "ms_yield").steps
    said = [remark for step in steps for remark in step.notes]
    assert any("The units do not agree: C10 is labelled MPa" in remark for remark in said), said
    sound = explain(strap_template(tmp_path / "good.xlsx"), "ms_yield").steps
    assert not any("do not agree" in remark for step in sound for remark in step.notes)
