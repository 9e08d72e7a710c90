"""The record of workbooks with macros and with threads of comments: what is not ours stays byte for byte."""

import io
import json
import shutil
import subprocess
import zipfile
from pathlib import Path

import openpyxl
import pytest
import xlsxwriter
from lxml import etree

from check.record_books import parts, recorded, small_book
from doubler.cli import main

MACROS = bytes(range(256)) * 40
THREAD = (
    '<?xml version="1.0" encoding="UTF-8" standalone="yes"?>\n'
    '<ThreadedComments xmlns="http://schemas.microsoft.com/office/spreadsheetml/2018/threadedcomments">'
    '<threadedComment ref="B3" dT="2031-02-03T08:00:00.00" personId="{0D9B4D40-0000-4000-8000-000000000001}" '
    'id="{8A4C2F10-0000-4000-8000-000000000002}"><text>Is the area net?</text></threadedComment></ThreadedComments>'
)
PERSONS = (
    '<?xml version="1.0" encoding="UTF-8" standalone="yes"?>\n'
    '<personList xmlns="http://schemas.microsoft.com/office/spreadsheetml/2018/threadedcomments">'
    '<person displayName="engineer" id="{0D9B4D40-0000-4000-8000-000000000001}" userId="e" providerId="None"/>'
    "</personList>"
)


def with_macros(path: Path) -> Path:
    """Build a workbook with macros, with a stress 1000 times too small."""
    with xlsxwriter.Workbook(str(path)) as book:
        page = book.add_worksheet("Lug")
        for row, (label, value) in enumerate(
            [("Load F [kN]", 12.0), ("Area A [mm²]", 80.0), ("Stress σ [MPa]", "=B1/B2"),
             ("Yield strength [MPa]", 355.0), ("Margin of safety", "=B4/(1.5*B3)-1")]
        ):  # fmt: skip
            page.write(row, 0, label)
            page.write(row, 1, value)
        book.add_vba_project(io.BytesIO(MACROS), is_stream=True)
    return path


def with_thread(path: Path) -> Path:
    """Build a workbook with a thread of comments on the faulty cell, as a spreadsheet program stores it."""
    plain = small_book(path.with_name("plain.xlsx"), comment="[Threaded comment] Is the area net?")
    with zipfile.ZipFile(plain) as source, zipfile.ZipFile(path, "w", zipfile.ZIP_DEFLATED) as target:
        for name in source.namelist():
            data = source.read(name)
            if name == "[Content_Types].xml":
                data = data.replace(
                    b"</Types>",
                    b'<Override PartName="/xl/threadedComments/threadedComment1.xml" '
                    b'ContentType="application/vnd.ms-excel.threadedcomments+xml"/>'
                    b'<Override PartName="/xl/persons/person.xml" '
                    b'ContentType="application/vnd.ms-excel.person+xml"/></Types>',
                )
            elif name == "xl/worksheets/_rels/sheet1.xml.rels":
                data = data.replace(
                    b"</Relationships>",
                    b'<Relationship Id="rIdThread" Target="/xl/threadedComments/threadedComment1.xml" '
                    b'Type="http://schemas.microsoft.com/office/2017/10/relationships/threadedComment"/>'
                    b"</Relationships>",
                )
            elif name == "xl/_rels/workbook.xml.rels":
                data = data.replace(
                    b"</Relationships>",
                    b'<Relationship Id="rIdPersons" Target="/xl/persons/person.xml" '
                    b'Type="http://schemas.microsoft.com/office/2017/10/relationships/person"/></Relationships>',
                )
            target.writestr(name, data)
        target.writestr("xl/threadedComments/threadedComment1.xml", THREAD)
        target.writestr("xl/persons/person.xml", PERSONS)
    plain.unlink()
    return path


def test_macros_stay_byte_for_byte_from_the_command_line_to_the_file(tmp_path: Path) -> None:
    book = with_macros(tmp_path / "lug.xlsm")
    before = book.read_bytes()
    assert main(["check", str(book), "--record", str(tmp_path / "record")]) == 1
    assert book.read_bytes() == before
    checked = tmp_path / "record" / "lug.checked.xlsm"
    old, new = parts(book), parts(checked)
    assert new["xl/vbaProject.bin"] == old["xl/vbaProject.bin"] == MACROS
    types = etree.fromstring(new["[Content_Types].xml"])
    kinds = {one.get("PartName") or one.get("Extension"): one.get("ContentType") for one in types}
    assert kinds["/xl/workbook.xml"] == "application/vnd.ms-excel.sheet.macroEnabled.main+xml"
    assert "application/vnd.ms-office.vbaProject" in kinds.values()
    kept = openpyxl.load_workbook(checked, keep_vba=True)
    assert kept.sheetnames == ["Lug", "Check record"]
    assert "1000 times too small" in kept["Lug"]["B3"].comment.text
    found = json.loads((tmp_path / "record" / "lug.findings.json").read_text(encoding="utf-8"))
    assert found["workbook"] == "lug.xlsm"
    assert "lug.xlsm" in (tmp_path / "record" / "lug.check.html").read_text(encoding="utf-8")


def test_a_disposition_in_a_record_with_macros_is_carried_over(tmp_path: Path) -> None:
    book = with_macros(tmp_path / "lug.xlsm")
    checked = recorded(book, tmp_path / "record").workbook
    kept = openpyxl.load_workbook(checked, keep_vba=True)
    page = kept["Check record"]
    cell = next(c for row in page.iter_rows() for c in row if c.value == "Disposition")
    page.cell(cell.row + 1, cell.column, "accepted for test")
    kept.save(checked)
    found = json.loads(recorded(book, tmp_path / "record").json.read_text(encoding="utf-8"))
    assert found["findings"][0]["disposition"]["text"] == "accepted for test"


def test_a_thread_of_comments_is_left_alone_and_the_cell_is_marked_all_the_same(tmp_path: Path) -> None:
    book = with_thread(tmp_path / "lug.xlsx")
    record = recorded(book, tmp_path / "record")
    old, new = parts(book), parts(record.workbook)
    for name in ("xl/threadedComments/threadedComment1.xml", "xl/persons/person.xml"):
        assert new[name] == old[name]
    rels = etree.fromstring(new["xl/worksheets/_rels/sheet1.xml.rels"])
    assert any(one.get("Type").endswith("/threadedComment") for one in rels)
    page = openpyxl.load_workbook(record.workbook)["Lug"]
    assert page["B3"].comment.text == "[Threaded comment] Is the area net?"
    assert page["B3"].border.left.style == "medium"
    told = openpyxl.load_workbook(record.workbook)["Check record"]
    assert any("1000 times too small" in str(c.value) for row in told.iter_rows() for c in row)


@pytest.mark.office
@pytest.mark.parametrize("build", [with_macros, with_thread], ids=["macros", "thread"])
def test_a_spreadsheet_program_opens_the_marked_copy(tmp_path: Path, build) -> None:
    suffix = ".xlsm" if build is with_macros else ".xlsx"
    record = recorded(build(tmp_path / f"lug{suffix}"), tmp_path / "record")
    office = shutil.which("soffice") or "soffice"
    subprocess.run(
        [office, f"-env:UserInstallation=file://{tmp_path}/profile", "--headless", "--convert-to", "pdf",
         "--outdir", str(tmp_path), str(record.workbook)],
        check=True, capture_output=True, timeout=180,
    )  # fmt: skip
    pdf = tmp_path / "lug.checked.pdf"
    assert pdf.stat().st_size > 5_000
    if shutil.which("pdftotext"):
        text = subprocess.run(["pdftotext", "-layout", str(pdf), "-"], check=True, capture_output=True, text=True)
        assert "unit-scale" in text.stdout
        assert "Err:" not in text.stdout
