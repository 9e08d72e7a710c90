"""The marked copy: valid, marked where findings are, and else the same package byte for byte."""

import shutil
import subprocess
import zipfile
from pathlib import Path

import openpyxl
import pytest
import xlsxwriter
from lxml import etree

from check.record_books import colleague, parts, recorded, small_book

CHANGED = ("[Content_Types].xml", "xl/workbook.xml", "xl/_rels/workbook.xml.rels", "xl/styles.xml")


def test_parts_that_need_no_change_are_copied_byte_for_byte(tmp_path: Path) -> None:
    book = small_book(tmp_path / "lug.xlsx")
    with zipfile.ZipFile(book, "a") as package:
        package.writestr("xl/printerSettings/printerSettings1.bin", bytes(range(256)))
        package.writestr("customXml/item1.xml", "<a>kept  as it is</a>")
    record = recorded(book, tmp_path / "out")
    before, after = parts(book), parts(record.workbook)
    sheets = {name for name in before if name.startswith("xl/worksheets/")}
    for name in before:
        if name not in CHANGED and name not in sheets:
            assert after[name] == before[name], name
    added = set(after) - set(before)
    assert all("Check" in name or name.startswith("xl/worksheets/_rels/") for name in added), added


def test_a_sheet_without_findings_is_copied_byte_for_byte(tmp_path: Path) -> None:
    book = small_book(tmp_path / "lug.xlsx")
    more = openpyxl.load_workbook(book)
    more.create_sheet("Notes")["A1"] = "Nothing to find here"
    more.save(book)
    record = recorded(book, tmp_path / "out")
    assert parts(record.workbook)["xl/worksheets/sheet2.xml"] == parts(book)["xl/worksheets/sheet2.xml"]
    assert parts(record.workbook)["xl/worksheets/sheet1.xml"] != parts(book)["xl/worksheets/sheet1.xml"]


def test_cells_formulas_and_number_formats_are_those_of_the_original(tmp_path: Path) -> None:
    record = recorded(colleague(), tmp_path)
    before, after = openpyxl.load_workbook(colleague()), openpyxl.load_workbook(record.workbook)
    assert after.sheetnames == [*before.sheetnames, "Check record"]
    for page in before:
        for row in page.iter_rows():
            for cell in row:
                same = after[page.title][cell.coordinate]
                assert (same.value, same.number_format) == (cell.value, cell.number_format)
                assert same.alignment.horizontal == cell.alignment.horizontal


def test_a_cell_with_a_finding_has_our_border_and_fill_and_a_comment(tmp_path: Path) -> None:
    record = recorded(colleague(), tmp_path)
    page = openpyxl.load_workbook(record.workbook)["Bracket"]
    assert page["B9"].border.left.style == "medium"
    assert page["B9"].fill.fgColor.rgb == "FFF6D9DC"
    assert "it is 1000 times too small" in page["B9"].comment.text
    assert page["B4"].comment is None
    assert page["B4"].fill.patternType is None


def test_a_finding_is_written_below_the_comment_that_stands_there(tmp_path: Path) -> None:
    book = small_book(tmp_path / "lug.xlsx", comment="From the load report.")
    more = openpyxl.load_workbook(book)
    more["Lug"]["A8"], more["Lug"]["B8"] = "Bolt strength [MPa]", 640
    more.save(book)
    record = recorded(book, tmp_path / "out")
    text = openpyxl.load_workbook(record.workbook)["Lug"]["B3"].comment.text
    assert text.startswith("From the load report.")
    assert "unit-scale" in text
    drawings = [one for name, one in parts(record.workbook).items() if b"urn:schemas-microsoft-com:vml" in one]
    assert len(drawings) == 1  # the sheet's own, with our boxes added
    assert drawings[0].count(b'ObjectType="Note"') == 2
    etree.fromstring(drawings[0])
    assert "unused-input" in openpyxl.load_workbook(record.workbook)["Lug"]["B8"].comment.text


def test_a_sheet_that_is_called_check_record_already_is_kept(tmp_path: Path) -> None:
    record = recorded(small_book(tmp_path / "lug.xlsx", sheet="Check record"), tmp_path / "out")
    assert openpyxl.load_workbook(record.workbook).sheetnames == ["Check record", "Check record (2)"]
    again = recorded(tmp_path / "lug.xlsx", tmp_path / "out")
    assert again.workbook == record.workbook


def test_the_record_sheet_holds_findings_margins_and_room_to_sign(tmp_path: Path) -> None:
    record = recorded(colleague(), tmp_path)
    page = openpyxl.load_workbook(record.workbook)["Check record"]
    first = [row[0] for row in page.iter_rows(values_only=True)]
    assert {"SHA-256 of the file", "Author", "Checker", "Caution"} <= set(first)
    kinds = [row[2] for row in page.iter_rows(values_only=True)]
    assert kinds.count("unused-input") == 4
    assert kinds.count("margin of safety") == 7


@pytest.mark.office
def test_the_spreadsheet_program_opens_the_copy_with_all_its_sheets(tmp_path: Path) -> None:
    record = recorded(colleague(), tmp_path)
    profile = f"-env:UserInstallation=file://{tmp_path}/profile"
    command = [
        shutil.which("soffice") or "soffice",
        "--headless",
        profile,
        "--convert-to",
        "xlsx:Calc MS Excel 2007 XML",
    ]
    subprocess.run(
        [*command, "--outdir", str(tmp_path / "again"), str(record.workbook)],
        check=True,
        capture_output=True,
        timeout=180,
    )
    again = openpyxl.load_workbook(tmp_path / "again" / record.workbook.name)
    assert again.sheetnames == ["Data", "Bracket", "Cases", "Check record"]
    assert "unit-scale" in again["Bracket"]["B9"].comment.text
    assert again["Bracket"]["B9"].value == "=B7*1000/B4"


def test_a_workbook_of_another_writer_keeps_chart_comments_and_styles(tmp_path: Path) -> None:
    path = tmp_path / "lug.xlsx"
    with xlsxwriter.Workbook(path) as book:
        page = book.add_worksheet("Lug")
        dark = book.add_format({"bg_color": "#102030", "font_color": "#FFFFFF", "num_format": "0.000"})
        for number, (label, value) in enumerate((("Load F [kN]", 12), ("Area A [mm²]", 80)), start=1):
            page.write(number, 0, label)
            page.write(number, 1, value)
        page.write(3, 0, "Stress σ [MPa]")
        page.write_formula(3, 1, "=B2/B3", dark, 0.15)
        page.write_comment("A2", "limit load")
        chart = book.add_chart({"type": "column"})
        chart.add_series({"values": "=Lug!$B$2:$B$3"})
        page.insert_chart("E2", chart)
    record = recorded(path, tmp_path / "out")
    before, after = parts(path), parts(record.workbook)
    for name in before:
        if "chart" in name or name.startswith("xl/drawings/drawing"):
            assert after[name] == before[name], name
    marked = openpyxl.load_workbook(record.workbook)["Lug"]
    assert marked["A2"].comment.text.endswith("limit load")
    assert "1000 times" in marked["B4"].comment.text
    assert marked["B4"].number_format == "0.000"
    assert marked["B4"].font.color.rgb == "FF1C2A30"  # our pale fill under white digits would hide them
    order = [etree.QName(one).localname for one in etree.fromstring(after["xl/worksheets/sheet1.xml"])]
    assert order.index("drawing") < order.index("legacyDrawing")


def test_a_workbook_without_a_stylesheet_gets_one(tmp_path: Path) -> None:
    full = small_book(tmp_path / "full.xlsx")
    bare = tmp_path / "bare.xlsx"
    with zipfile.ZipFile(bare, "w") as package:
        for name, content in parts(full).items():
            text = content
            if name in ("[Content_Types].xml", "xl/_rels/workbook.xml.rels"):
                root = etree.fromstring(content)
                for one in [one for one in root if "styles" in str(one.attrib)]:
                    root.remove(one)
                text = etree.tostring(root)
            if name != "xl/styles.xml":
                package.writestr(name, text)
    record = recorded(bare, tmp_path / "out")
    page = openpyxl.load_workbook(record.workbook)["Lug"]
    assert page["B3"].border.left.style == "medium"
    assert page["B1"].border.left.style is None
