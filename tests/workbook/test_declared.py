"""Declared units: where a sheet writes them, and words that merely look like units."""

from __future__ import annotations

import pytest

from doubler.workbook.declared import Declarations, declare
from doubler.workbook.model import Area
from workbook.small_books import book, cell_of, rows, sheet_of


def declared(cells, formats=None, number_formats=None) -> Declarations:
    return declare(book(sheet_of("S1", cells, formats), number_formats=number_formats))


def unit(cells, place, **more) -> str | None:
    found = declared(cells, **more).unit("S1", cell_of(place))
    return None if found is None else found.unit.text


PLACES = [
    (rows(("Force", 12, "kN")), "B1", "kN"),
    (rows(("Axial load [kN]", 12)), "B1", "kN"),
    (rows(("Area (mm²)", 12)), "B1", "mm²"),
    (rows(("Span, mm", 12)), "B1", "mm"),
    (rows(("Force", "F", 12, "kN")), "C1", "kN"),
    (rows(("Case", "P [kN]"), ("1", 3), ("2", 4)), "B3", "kN"),
    (rows(("Case", "Load", "Area"), (None, "kN", "mm2"), ("1", 3, 5), ("2", 4, 6)), "C4", "mm2"),
    (rows(("Case", "Load", "Area"), (None, "[kN]", "[mm2]"), ("1", 3, 5)), "B3", "kN"),
    (rows(("Parameter", "Unit", "Value"), ("Force", "kN", 3), ("Area", "mm2", 5)), "C3", "mm2"),
    (rows(("Force / kN", 3)), "B1", "kN"),
    (rows(("x (in)", "F (N)"), (3, 4)), "A2", "in"),
    (rows(("x (in)", "F (N)"), (3, 4)), "B2", "N"),
    (rows(("t mm", "A mm2"), (3, 4)), "B2", "mm2"),
    (rows(("Diameter", 0.25, "in"), ("Length", 2, "in")), "B1", "in"),
    (rows(("Loads", 1, 2, 3, "kN")), "B1", "kN"),
    (rows(("Expansion", 23.1, "10^-6/K")), "B1", "10^-6/K"),
    (rows(("Limit load", 8200, "LBF")), "B1", "lbf"),
    (rows(("FTU, PSI", 68000)), "B1", "psi"),
    (rows(("Moment (IN-LBF)", 68000)), "B1", "in-lbf"),
    (rows(("BOLT SHANK",), ("AXIAL LOAD", 3, "KN"), ("SHANK AREA", 5, "MM2"), ("STRESS", 6, "MPA")), "B4", "MPa"),
    (rows(("BOLT SHANK",), ("AXIAL LOAD (KN)", 3), ("SHANK AREA", 5, "MM2")), "B2", "kN"),
]


@pytest.mark.parametrize(("cells", "place", "expected"), PLACES)
def test_a_unit_is_read_where_engineers_write_it(cells, place, expected) -> None:
    assert unit(cells, place) == expected


def test_the_number_format_declares_a_unit_and_comes_last() -> None:
    formats = ["General", '0.0" MPa"']
    assert unit(rows(("s", 3)), "B1", formats={"B1": 1}, number_formats=formats) == "MPa"
    assert unit(rows(("s", 3, "ksi")), "B1", formats={"B1": 1}, number_formats=formats) == "ksi"


@pytest.mark.parametrize("literal", ['0.0"°"', r"0.0\°", "0.0°", r"[$-409]0.0\°_)", r"0.0\°;-0.0\°"])
def test_a_number_format_may_escape_its_unit_instead_of_quoting_it(literal) -> None:
    assert unit(rows(("Twist", 3)), "B1", formats={"B1": 1}, number_formats=["General", literal]) == "deg"


def test_a_symbol_of_one_letter_does_not_quarrel_with_the_unit_cell() -> None:
    found = declared(rows(("Item", "Unit", "LC1"), ("Axial force N", "kN", 120), ("Moment M", "kNm", 3)))
    assert found.disagreements == []


def test_a_total_of_another_column_has_not_the_unit_of_the_column_it_stands_in() -> None:
    cells = rows(("Block", "Range [MPa]", "D"), ("1", 120, 0.1), ("2", 90, 0.2), (), ("Total damage", "=SUM(C2:C3)"))
    found = declared(cells).unit("S1", (5, 2))
    assert found is None or found.unit.text == "1"
    assert unit(rows(("Case", "P [kN]"), ("1", 3), ("2", 4), (), ("Total", "=SUM(B2:B3)")), "B5") == "kN"


def test_headers_are_not_stacked_on_the_labels_of_the_block_above() -> None:
    cells = rows(("Q11 [GPa]", 136, "Q12 [GPa]", 2.7), (), ("Ply", "t [mm]", "s"), ("1", 0.125, 0.7))
    assert unit(cells, "C4") is None


def test_a_title_that_names_a_unit_is_no_header_of_the_numbered_column() -> None:
    cells = rows(
        ("Lap joint, loads in kN",), ("Shear strength", "kN", 7), ("LC", "F1", "F2"), (None, "kN", "kN"), (7, 3, 4)
    )
    assert unit(cells, "A5") is None
    assert unit(cells, "B5") == "kN"


NO_UNITS = [
    rows(("Rev", 3, "A")),
    rows(("Note", 5, "see page 3")),
    rows(("Bolt", 6, "T6")),
    rows(("Material no.", 7075, "T")),
    rows(("Cases", 4, "min"), ("Others", 5, "max")),
    rows(("Count", 4, "N/A")),
    rows(("Type in", 4)),
    rows(("Answer", 4, "OK")),
    rows(("Section modulus of bar", 21206)),
    rows(("Stress in the bar", 4)),
    rows(("Bolt(s)", 4)),
    rows(("Section (A)", 4)),
    rows(("Load (max)", 4)),
    rows(("Load (min)", 4)),
    rows(("Item", 4, "a"), ("Item", 5, "b"), ("Item", 6, "c")),
]


@pytest.mark.parametrize("cells", NO_UNITS)
def test_words_that_look_like_units_are_none(cells) -> None:
    found = declared(cells)
    one = found.unit("S1", (1, 2))
    assert one is None or one.weak
    assert found.unreadable == []


UNREADABLE = [
    (rows(("Force", 12, "KN")), "kN"),
    (rows(("Stress [mpa]", 12)), "MPa"),
    (rows(("Parameter", "Value", "Unit"), ("Force", 3, "kN"), ("Area", 5, "sqmm")), "sqmm"),
    (rows(("Case", "P [KN]"), ("1", 3), ("2", 4)), "kN"),
]


@pytest.mark.parametrize(("cells", "says"), UNREADABLE)
def test_a_text_that_is_meant_as_a_unit_and_is_none_is_told_once(cells, says) -> None:
    found = declared(cells).unreadable
    assert len(found) == 1
    assert says in found[0].complaint


def test_the_heading_of_a_column_of_units_is_needed_above_a_text_that_is_called_unreadable() -> None:
    cells = rows(("Project", "wing", 7, "Date"), ("Name", "Symbol", "Value", "Unit"), ("Load", "P", 4, "kN"))
    assert declared(cells).unreadable == []


def test_two_places_that_disagree_are_told_and_the_first_is_believed() -> None:
    found = declared(rows(("Force [N]", 12, "kN")))
    one = found.unit("S1", (1, 2))
    assert one is not None
    assert one.unit.text == "kN"
    assert [(d.first.unit.text, d.second.unit.text) for d in found.disagreements] == [("kN", "N")]


def test_blocks_stacked_under_one_another_do_not_quarrel() -> None:
    cells = rows(("Case", "P [kN]"), ("1", 3), ("2", 4), ("Max stress [MPa]", 300))
    found = declared(cells)
    assert found.disagreements == []
    one = found.unit("S1", (4, 2))
    assert one is not None
    assert one.unit.text == "MPa"


def test_a_header_merged_over_columns_gives_its_unit_to_all() -> None:
    sheet = sheet_of("S1", rows(("Case", "Stress [MPa]"), (None, "x", "y"), ("1", 3, 4)))
    sheet.merged.append(Area(1, 2, 1, 3))
    found = declare(book(sheet)).unit("S1", (3, 3))
    assert found is not None
    assert found.unit.text == "MPa"


def test_a_temperature_is_a_level_unless_its_words_say_difference() -> None:
    found = declared(rows(("Temperature", 20, "°C"), ("Temperature rise", 20, "°C")))
    level, rise = found.unit("S1", (1, 2)), found.unit("S1", (2, 2))
    assert level is not None
    assert rise is not None
    assert (level.absolute, rise.absolute) == (True, False)


def test_a_label_that_names_a_pure_number_declares_it_weakly() -> None:
    found = declared(rows(("Safety factor", 1.5), ("Poisson's ratio", 0.3), ("Width", 5)))
    assert [getattr(found.unit("S1", (r, 2)), "weak", None) for r in (1, 2, 3)] == [True, True, None]
