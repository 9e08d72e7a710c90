"""Two revisions of tables, blocks side by side and workbooks of several sheets, edited as engineers edit them."""

import re
from collections.abc import Callable
from pathlib import Path

import openpyxl
import pytest
from openpyxl.worksheet.worksheet import Worksheet

from doubler.check.examination import check
from doubler.check.revisions import Comparison, compare

STATIONS = 12


def station_rows(stations: list[float], at: int = 4) -> list[list[object]]:
    """Rows without a word in them: station, moment, modulus, stress, margin."""
    return [
        [x, 40.0 + 3.0 * x, 9.0 + x / 10.0, f"=B{row}*1000/C{row}", f"=$B$1/(1.5*D{row})-1"]
        for row, x in enumerate(stations, start=at)
    ]


def stations(page: Worksheet, places: list[float]) -> None:
    """A beam along its stations: the allowable above, headers with units, no label in any row."""
    page.title = "Beam"
    page.append(["Allowable bending stress [MPa]", 9000.0])
    page.append([])
    page.append(["Station [m]", "Moment [kN·m]", "Section modulus [cm3]", "Stress [MPa]", "Margin of safety"])
    for row in station_rows(places):
        page.append(row)
    last = page.max_row
    page.append(["Lowest", None, None, f"=MAX(D4:D{last})", f"=MIN(E4:E{last})"])


def two_blocks(page: Worksheet, extra: bool) -> None:
    """Two tables side by side, which grow apart."""
    loads = [("A", 10.0), ("B", 12.0), ("C", 9.0), ("D", 14.0)]
    bolts = [(6.0, 28.0), (8.0, 50.0), (10.0, 78.0), (12.0, 113.0), (14.0, 154.0)]
    if extra:
        bolts.insert(1, (7.0, 38.0))
    page["A1"], page["B1"], page["C1"] = "Case", "Load [kN]", "Load [N]"
    page["E1"], page["F1"], page["G1"] = "Diameter [mm]", "Area [mm²]", "Twice [mm²]"
    for row, (name, load) in enumerate(loads, start=2):
        page.cell(row, 1, name)
        page.cell(row, 2, load)
        page.cell(row, 3, f"=B{row}*1000")
    for row, (diameter, area) in enumerate(bolts, start=2):
        page.cell(row, 5, diameter)
        page.cell(row, 6, area)
        page.cell(row, 7, f"=F{row}*2")


def strap(page: Worksheet, order: tuple[str, ...] = ("Load F [kN]", "Width b [mm]", "Thickness t [mm]")) -> None:
    """A label, its number; formulas below."""
    given = {"Load F [kN]": 12.0, "Width b [mm]": 40.0, "Thickness t [mm]": 3.0}
    where = {}
    for row, name in enumerate(order, start=1):
        page.append([name, given[name]])
        where[name[:3]] = f"B{row}"
    n = len(order) + 1
    page.append(["Area A [mm²]", f"={where['Wid']}*{where['Thi']}"])
    page.append(["Stress σ [MPa]", f"={where['Loa']}*1000/B{n}"])
    page.append(["Margin of safety", f"=355/(1.5*B{n + 1})-1"])


Draw = Callable[[openpyxl.Workbook], None]


def compared(folder: Path, old: Draw, new: Draw) -> Comparison:
    """Build both and compare."""
    reports = []
    for name, draw in (("new.xlsx", new), ("old.xlsx", old)):
        book = openpyxl.Workbook()
        draw(book)
        book.save(folder / name)
        reports.append(check(folder / name))
    return compare(*reports)


def told(result: Comparison) -> list[tuple[str, str, int]]:
    return [(change.what, change.cell, change.count) for change in result.changes]


PLACES = [0.5 * n for n in range(STATIONS)]


def test_a_station_put_in_between_is_added_and_nothing_else_changes(tmp_path: Path) -> None:
    more = [*PLACES[:5], 2.25, *PLACES[5:]]
    result = compared(tmp_path, lambda b: stations(b.active, PLACES), lambda b: stations(b.active, more))
    assert told(result) == [("input added", "Beam!A9", 1), ("input added", "Beam!B9", 1), ("input added", "Beam!C9", 1),
                            ("formula added", "Beam!D9", 1), ("margin added", "Beam!E9", 1)]  # fmt: skip
    assert result.moved == 7 * 5 + 2


def test_a_station_at_the_end_belongs_to_the_envelope_that_takes_it_in(tmp_path: Path) -> None:
    result = compared(tmp_path, lambda b: stations(b.active, PLACES), lambda b: stations(b.active, [*PLACES, 6.0, 6.5]))
    assert [change for change in result.changes if "added" not in change.what and change.what != "margin"] == []
    assert ("formula added", "Beam!D16:D17", 2) in told(result)


def test_an_envelope_that_leaves_out_what_it_took_in_has_changed(tmp_path: Path) -> None:
    def shorter(book: openpyxl.Workbook) -> None:
        stations(book.active, PLACES)
        book.active["E16"] = "=MIN(E4:E13)"

    result = compared(tmp_path, lambda b: stations(b.active, PLACES), shorter)
    assert ("formula", "Beam!E16", 1) in told(result)


def test_stations_taken_out_are_gone_and_the_margin_of_the_rest_stays(tmp_path: Path) -> None:
    fewer = PLACES[:3] + PLACES[5:]
    result = compared(tmp_path, lambda b: stations(b.active, PLACES), lambda b: stations(b.active, fewer))
    assert {change.what for change in result.changes} == {"input gone", "formula gone", "margin gone"}
    assert {row for change in result.changes for row in re.findall(r"\d+", change.cell)} == {"7", "8"}
    assert sum(change.count for change in result.changes) == 10


def test_changed_numbers_beside_a_row_that_was_put_in(tmp_path: Path) -> None:
    def changed(book: openpyxl.Workbook) -> None:
        stations(book.active, [*PLACES[:5], 2.25, *PLACES[5:]])
        book.active["B10"] = 49.0

    result = compared(tmp_path, lambda b: stations(b.active, PLACES), changed)
    assert [(c.cell, c.was, c.before, c.after) for c in result.changes if c.what == "input"] == [
        ("Beam!B10", "Beam!B9", "47.5 kN·m", "49 kN·m")
    ]
    assert [(c.cell, c.was) for c in result.changes if c.what == "margin"] == [("Beam!E10", "Beam!E9")]


def test_a_filled_formula_that_changed_is_told_once_for_all_its_copies(tmp_path: Path) -> None:
    def changed(book: openpyxl.Workbook) -> None:
        stations(book.active, PLACES)
        for row in range(4, 4 + STATIONS):
            book.active[f"E{row}"] = f"=$B$1/(1.25*D{row})-1"

    result = compared(tmp_path, lambda b: stations(b.active, PLACES), changed)
    assert [(c.what, c.cell, c.count, c.before, c.after) for c in result.changes if c.what == "formula"] == [
        ("formula", "Beam!E4:E15", STATIONS, "=$B$1/(1.5*D4)-1", "=$B$1/(1.25*D4)-1")
    ]
    assert result.counts["margin"] == STATIONS + 1
    assert result.lowest[0] != result.lowest[1]


def test_a_column_put_in_moves_the_others_and_changes_none(tmp_path: Path) -> None:
    def wider(book: openpyxl.Workbook) -> None:
        page = book.active
        stations(page, PLACES)
        for row in range(3, 17):
            for column in range(5, 2, -1):
                page.cell(row, column + 1).value = page.cell(row, column).value
            page.cell(row, 3).value = "Shear [kN]" if row == 3 else float(row) if row < 16 else None
            if 4 <= row < 16:
                page.cell(row, 5).value = f"=B{row}*1000/D{row}"
                page.cell(row, 6).value = f"=$B$1/(1.5*E{row})-1"
        page["E16"], page["F16"] = "=MAX(E4:E15)", "=MIN(F4:F15)"

    result = compared(tmp_path, lambda b: stations(b.active, PLACES), wider)
    assert told(result) == [("input added", "Beam!C4:C15", STATIONS)]


def test_blocks_side_by_side_move_apart(tmp_path: Path) -> None:
    result = compared(tmp_path, lambda b: two_blocks(b.active, False), lambda b: two_blocks(b.active, True))
    assert told(result) == [("input added", "Sheet!E3", 1), ("input added", "Sheet!F3", 1),
                            ("formula added", "Sheet!G3", 1)]  # fmt: skip


def test_rows_that_changed_places_are_no_change(tmp_path: Path) -> None:
    turned = ("Thickness t [mm]", "Load F [kN]", "Width b [mm]")
    result = compared(tmp_path, lambda b: strap(b.active), lambda b: strap(b.active, turned))
    assert told(result) == []
    assert result.moved == 3


def test_a_formula_that_reads_another_row_after_the_move_has_changed(tmp_path: Path) -> None:
    def wrong(book: openpyxl.Workbook) -> None:
        strap(book.active, ("Thickness t [mm]", "Load F [kN]", "Width b [mm]"))
        book.active["B4"] = "=B2*B3"  # the same text as before the rows changed places, but another product

    result = compared(tmp_path, lambda b: strap(b.active), wrong)
    assert ("formula", "Sheet!B4", 1) in told(result)


def test_a_renamed_label_is_no_new_input(tmp_path: Path) -> None:
    def relabelled(book: openpyxl.Workbook) -> None:
        strap(book.active)
        book.active["A2"] = "Net width b [mm]"
        book.active["B2"] = 38.0

    result = compared(tmp_path, lambda b: strap(b.active), relabelled)
    assert [(c.what, c.label, c.before, c.after) for c in result.changes if c.what != "margin"] == [
        ("input", "Net width b [mm]", "40 mm", "38 mm")
    ]


def test_a_unit_spelled_otherwise_is_no_change_and_another_unit_is(tmp_path: Path) -> None:
    def respelled(book: openpyxl.Workbook) -> None:
        strap(book.active)
        book.active["A4"] = "Area A [mm2]"
        book.active["A5"] = "Stress σ [N/mm²]"
        book.active["A3"] = "Thickness t [cm]"
        book.active["B3"] = 0.3

    result = compared(tmp_path, lambda b: strap(b.active), respelled)
    assert [(c.what, c.cell, c.before, c.after) for c in result.changes if c.what == "unit"] == [
        ("unit", "Sheet!B3", "mm", "cm")
    ]


def test_renamed_and_added_sheets_are_told_and_their_cells_matched(tmp_path: Path) -> None:
    def old(book: openpyxl.Workbook) -> None:
        strap(book.active)
        book.active.title = "Strap"
        stations(book.create_sheet(), PLACES)
        book["Beam"]["H1"] = "Stress in the strap [MPa]"
        book["Beam"]["I1"] = "=Strap!B5"

    def new(book: openpyxl.Workbook) -> None:
        book.active.title = "Notes"
        strap(book.create_sheet("Rev B (2) strap"))
        stations(book.create_sheet(), PLACES)
        book["Beam"]["H1"] = "Stress in the strap [MPa]"
        book["Beam"]["I1"] = "='Rev B (2) strap'!B5"

    result = compared(tmp_path, old, new)
    assert told(result) == []
    assert (result.renamed, result.sheets_added) == ([("Strap", "Rev B (2) strap")], ["Notes"])


def test_two_sheets_that_swapped_their_names_are_told_apart_by_what_they_hold(tmp_path: Path) -> None:
    def drawn(names: tuple[str, str]) -> Draw:
        def draw(book: openpyxl.Workbook) -> None:
            strap(book.active)
            stations(book.create_sheet(), PLACES)
            book.worksheets[0].title, book.worksheets[1].title = names

        return draw

    result = compared(tmp_path, drawn(("One", "Two")), drawn(("Two", "One")))
    assert told(result) == []
    assert dict(result.renamed) == {"One": "Two", "Two": "One"}


def test_a_text_that_a_formula_reads_is_an_input_and_a_running_number_is_none(tmp_path: Path) -> None:
    def drawn(material: str, items: list[str]) -> Draw:
        def draw(book: openpyxl.Workbook) -> None:
            page = book.active
            page.append(["Material", material])
            page.append(["Strength [MPa]", '=IF(B1="2024-T3",440,510)'])
            page.append([])
            page.append(["No.", "Part", "Mass [kg]"])
            for number, item in enumerate(items, start=1):
                page.append([float(number), item, 2.0 + len(item)])

        return draw

    result = compared(
        tmp_path, drawn("2024-T3", ["rib", "stringer", "web"]), drawn("7075-T6", ["rib", "clip", "stringer", "web"])
    )
    changed = [(c.what, c.cell) for c in result.changes if "added" not in c.what]
    assert changed == [("input", "Sheet!B1")]
    assert "Sheet!C6" in [c.cell for c in result.changes if c.what == "input added"]


def test_a_constant_inside_a_formula_and_a_formula_pasted_over(tmp_path: Path) -> None:
    def pasted(book: openpyxl.Workbook) -> None:
        strap(book.active)
        book.active["B4"] = 120.0
        book.active["B6"] = "=355/(1.4*B5)-1"

    result = compared(tmp_path, lambda b: strap(b.active), pasted)
    assert {("formula", "Sheet!B6", 1), ("margin", "Sheet!B6", 1)} <= set(told(result))
    made = next(c for c in result.changes if c.what == "formula made an input")
    assert (made.cell, made.before, made.after) == ("Sheet!B4", "=B2*B3", "120 mm²")


@pytest.mark.parametrize("rows", [0, 1, 7])
def test_findings_follow_their_cell(tmp_path: Path, rows: int) -> None:
    def faulty(down: int) -> Draw:
        def draw(book: openpyxl.Workbook) -> None:
            strap(book.active)
            book.active["B5"] = "=B1/B4"
            if down:
                book.active.insert_rows(1, down)
                for row, text in ((4, f"=B{2 + down}*B{3 + down}"), (5, f"=B{1 + down}/B{4 + down}"),
                                  (6, f"=355/(1.5*B{5 + down})-1")):  # fmt: skip
                    book.active.cell(row + down, 2, text)

        return draw

    result = compared(tmp_path, faulty(0), faulty(rows))
    assert [(f.kind, f.cell) for f in result.left if f.severity == "error"] == [("unit-scale", f"B{5 + rows}")]
    assert not result.gone
    assert not result.new
