"""Hostile and odd files: one clear sentence and nothing written, or the right values."""

import io
import struct
import time
import zipfile
from collections.abc import Callable
from pathlib import Path

import pytest

from doubler.check.examination import check
from doubler.cli import main
from doubler.errors import InputError
from doubler.workbook.evaluate import evaluate
from doubler.workbook.graph import build_graph
from doubler.workbook.reader import read_workbook
from workbook.raw_books import HEAD, MAIN, parts_of, sheet_xml, write_parts

SHEET = "xl/worksheets/sheet1.xml"
GOOD = sheet_xml('<row r="1"><c r="A1"><v>2</v></c><c r="B1"><f>A1*3</f><v>6</v></c></row>')
STRICT_MAIN = "http://purl.oclc.org/ooxml/spreadsheetml/main"
STRICT_RELATIONS = "http://purl.oclc.org/ooxml/officeDocument/relationships"


def changed(path: Path, **parts: str | bytes | None) -> Path:
    """Write a good workbook with some parts changed, or left out where None is given; names by their last word."""
    whole: dict[str, str | bytes] = {**parts_of(GOOD)}
    for word, content in parts.items():
        (name,) = [name for name in whole if name.rsplit("/", 1)[-1].lower() == f"{word}.xml"]
        if content is None:
            del whole[name]
        else:
            whole[name] = content
    return write_parts(path, whole)


def encrypted(path: Path) -> Path:
    """Write the outline of a password-protected workbook: a compound file with the stream that holds the package."""
    path.write_bytes(b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + bytes(504) + "EncryptedPackage".encode("utf-16-le"))
    return path


def zip_password(path: Path) -> Path:
    """Set the encryption flag of every entry, in both places where a zip file keeps it."""
    changed(path)
    data = bytearray(path.read_bytes())
    for mark, offset in ((b"PK\x03\x04", 6), (b"PK\x01\x02", 8)):
        at = data.find(mark)
        while at >= 0:
            data[at + offset] |= 1
            at = data.find(mark, at + 4)
    path.write_bytes(bytes(data))
    return path


def cut_off(path: Path) -> Path:
    changed(path)
    path.write_bytes(path.read_bytes()[:-200])
    return path


def wrong_bytes(path: Path) -> Path:
    """Spoil the packed bytes of the sheet, so that they cannot be unpacked or fail their checksum."""
    changed(path)
    with zipfile.ZipFile(path) as package:
        info = package.getinfo(SHEET)
    data = bytearray(path.read_bytes())
    length, extra = struct.unpack("<HH", data[info.header_offset + 26 : info.header_offset + 30])
    start = info.header_offset + 30 + length + extra
    for at in range(start + 20, start + 40):
        data[at] ^= 0xFF
    path.write_bytes(bytes(data))
    return path


def bomb(path: Path) -> Path:
    return changed(path, sheet1=sheet_xml('<row r="1"/>' + " " * 20_000_000))


def many_parts(path: Path) -> Path:
    with zipfile.ZipFile(path, "w") as package:
        for name, content in parts_of(GOOD).items():
            package.writestr(name, content)
        for number in range(20_001):
            package.writestr(zipfile.ZipInfo(f"junk/{number}"), b"")
    return path


def lying_size(path: Path) -> Path:
    """Let the directory claim that the sheet unpacks to 600 MiB."""
    changed(path)
    data = bytearray(path.read_bytes())
    at = data.find(b"PK\x01\x02")
    while data[at + 46 : at + 46 + len(SHEET)] != SHEET.encode():
        at = data.find(b"PK\x01\x02", at + 4)
    data[at + 24 : at + 28] = struct.pack("<I", 600 * 1024**2)
    path.write_bytes(bytes(data))
    return path


ENTITIES = (
    '<?xml version="1.0"?><!DOCTYPE worksheet [<!ENTITY a "aaaaaaaaaa"><!ENTITY b "&a;&a;&a;&a;&a;&a;&a;&a;">]>'
    f'<worksheet xmlns="{MAIN}"><sheetData><row r="1"><c r="A1" t="str"><v>&b;</v></c></row></sheetData></worksheet>'
)
OUTSIDE = ENTITIES.replace('"aaaaaaaaaa"', 'SYSTEM "file:///etc/passwd"')


def text_document(path: Path) -> Path:
    parts = parts_of(GOOD)
    parts["_rels/.rels"] = parts["_rels/.rels"].replace("xl/workbook.xml", "word/document.xml")
    parts["word/document.xml"] = f"{HEAD}<document/>"
    return write_parts(path, parts)


def open_document(path: Path) -> Path:
    return write_parts(path, {"mimetype": "application/vnd.oasis.opendocument.spreadsheet", "content.xml": "<x/>"})


def plain(content: bytes) -> Callable[[Path], Path]:
    def write(path: Path) -> Path:
        path.write_bytes(content)
        return path

    return write


def sheet_of(xml: str | bytes | None) -> Callable[[Path], Path]:
    return lambda path: changed(path, sheet1=xml)


REFUSED: dict[str, tuple[Callable[[Path], Path], str]] = {
    "text": (plain(b"case,load\n1,2\n"), "is not a workbook: it is no zip package"),
    "empty": (plain(b""), "is empty; give a workbook"),
    "old format": (plain(b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + bytes(600)), "is in the old .xls format"),
    "password": (encrypted, "password protected; save it without a password"),
    "zip password": (zip_password, "protected by a zip password"),
    "cut off": (cut_off, "is damaged: its zip file can't be opened"),
    "wrong bytes": (wrong_bytes, "damaged"),
    "bomb": (bomb, "more than 250 times its packed size, which is the limit"),
    "many parts": (many_parts, "parts; the limit is 20000"),
    "lying size": (lying_size, "the limit is 512 MiB a part"),
    "entities": (sheet_of(ENTITIES), "declares a document type"),
    "outside entity": (sheet_of(OUTSIDE), "declares a document type"),
    "utf-7": (sheet_of('<?xml version="1.0" encoding="UTF-7"?><worksheet/>'), "in the encoding UTF-7"),
    "no xml": (sheet_of(b"\x00\x01binary"), "is not XML"),
    "cut xml": (sheet_of(GOOD[:-30]), "not well-formed XML"),
    "no sheet part": (sheet_of(None), "of its sheet 'S' is missing"),
    "no workbook part": (lambda path: changed(path, workbook=None), "no workbook part"),
    "another root": (lambda path: changed(path, workbook=f"{HEAD}<html/>"), "is not a workbook: its main part"),
    "no sheets": (lambda path: changed(path, workbook=f'{HEAD}<workbook xmlns="{MAIN}"/>'), "holds no worksheet"),
    "text document": (text_document, "a text document or a presentation"),
    "open document": (open_document, "OpenDocument"),
    "zip of other things": (lambda path: write_parts(path, {"a.txt": "x"}), "a zip file but not a workbook"),
    "row too far": (sheet_of(sheet_xml('<row r="1048577"/>')), "has a row numbered '1048577'"),
}


@pytest.mark.parametrize("kind", REFUSED)
def test_it_is_refused_in_one_sentence(tmp_path: Path, kind: str) -> None:
    write, told = REFUSED[kind]
    path = write(tmp_path / "book.xlsx")
    start = time.monotonic()
    with pytest.raises(InputError) as refusal:
        read_workbook(path)
    message = str(refusal.value)
    assert told in message
    assert str(path) in message
    assert "\n" not in message
    assert time.monotonic() - start < 5


@pytest.mark.parametrize("kind", ["text", "password", "cut off", "bomb", "entities", "no sheet part", "wrong bytes"])
def test_the_command_line_says_it_and_writes_nothing(
    tmp_path: Path, kind: str, capsys: pytest.CaptureFixture[str]
) -> None:
    path = REFUSED[kind][0](tmp_path / "book.xlsx")
    cases = tmp_path / "cases.csv"
    cases.write_text("case,S!A1\n1,2\n", encoding="utf-8")
    before = sorted(tmp_path.rglob("*"))
    calls = [
        ["check", str(path), "--record", str(tmp_path / "record"), "--json", str(tmp_path / "found.json")],
        ["fill", str(path), str(cases), "--out", str(tmp_path / "filled")],
        ["sweep", str(path), str(cases), "--out", str(tmp_path / "results.csv")],
        ["explain", str(path), "S!B1"],
    ]
    for call in calls:
        assert main(call) == 2
        told = capsys.readouterr()
        assert REFUSED[kind][1] in told.err.replace("\n", " ")
        assert "Traceback" not in told.err
        assert not told.out
    assert sorted(tmp_path.rglob("*")) == before


def value(path: Path, sheet: str = "S", address: tuple[int, int] = (1, 2)) -> object:
    return evaluate(build_graph(read_workbook(path))).value(sheet, address)


def test_wrong_content_types_do_not_matter(tmp_path: Path) -> None:
    parts = parts_of(GOOD)
    parts["[Content_Types].xml"] = parts["[Content_Types].xml"].replace("sheet.main+xml", "template.main+xml")
    assert value(write_parts(tmp_path / "a.xlsx", parts)) == 6.0
    del parts["[Content_Types].xml"]
    assert value(write_parts(tmp_path / "b.xlsx", parts)) == 6.0


def test_missing_styles_and_texts_do_not_matter(tmp_path: Path) -> None:
    assert value(changed(tmp_path / "a.xlsx", sharedstrings=None)) == 6.0


def test_the_strict_form_of_the_standard_is_read(tmp_path: Path) -> None:
    sheet = sheet_xml(
        '<row r="1"><c r="A1"><v>2</v></c><c r="B1"><f>A1*3</f></c><c r="C1" t="d"><v>2026-03-14</v></c>'
        '<c r="D1"><f>C1+1</f></c></row>',
        main=STRICT_MAIN,
    )
    path = write_parts(tmp_path / "a.xlsx", parts_of(sheet, main=STRICT_MAIN, relations=STRICT_RELATIONS))
    assert value(path) == 6.0
    assert value(path, address=(1, 4)) == 46096.0


def test_backslashes_and_capitals_in_part_names(tmp_path: Path) -> None:
    parts = {name.replace("xl/worksheets/", "XL\\Worksheets\\"): text for name, text in parts_of(GOOD).items()}
    assert value(write_parts(tmp_path / "a.xlsx", parts)) == 6.0


def test_few_cells_in_all_rows_of_a_sheet(tmp_path: Path) -> None:
    rows = (
        '<row r="1"><c r="A1"><v>2</v></c><c r="B1"><f>SUM(A:A)</f></c><c r="C1"><f>COUNTA(2:1048576)</f></c>'
        '<c r="D1"><f>SUMIF(A:A,"&gt;2")</f></c></row>'
        '<row r="1048576"><c r="A1048576"><v>5</v></c><c r="XFD1048576"><v>1</v></c></row>'
    )
    path = changed(tmp_path / "a.xlsx", sheet1=sheet_xml(rows))
    start = time.monotonic()
    found = evaluate(build_graph(read_workbook(path)))
    assert [found.value("S", (1, column)) for column in (2, 4)] == [7.0, 5.0]
    assert "it reads a range of 17,179,852,800 cells" in str(found.value("S", (1, 3)))
    check(path)
    assert time.monotonic() - start < 5


def test_all_rows_of_a_sheet_listed_though_empty(tmp_path: Path) -> None:
    rows = "".join(f'<row r="{row}"/>' for row in range(2, 200_000))
    good = '<row r="1"><c r="A1"><v>2</v></c><c r="B1"><f>A1*3</f></c></row>'
    path = tmp_path / "a.xlsx"
    parts = parts_of(sheet_xml(good + rows))
    with zipfile.ZipFile(path, "w", zipfile.ZIP_STORED) as package:
        for name, content in parts.items():
            package.writestr(name, content)
    assert value(path) == 6.0
    assert len(read_workbook(path).sheets[0].cells) == 2


def test_styles_by_the_ten_thousand(tmp_path: Path) -> None:
    formats = "".join(f'<numFmt numFmtId="{164 + k}" formatCode="0.0&quot; N{k}&quot;"/>' for k in range(30_000))
    styles = "".join(f'<xf numFmtId="{164 + k}" applyNumberFormat="1"/>' for k in range(64_000))
    parts = parts_of(GOOD.replace('<c r="A1">', '<c r="A1" s="29999">'))
    parts["xl/styles.xml"] = (
        f'{HEAD}<styleSheet xmlns="{MAIN}"><numFmts>{formats}</numFmts><cellXfs>{styles}</cellXfs></styleSheet>'
    )
    relations = parts["xl/_rels/workbook.xml.rels"]
    parts["xl/_rels/workbook.xml.rels"] = relations.replace(
        "</Relationships>",
        '<Relationship Id="r9" Type="http://schemas.openxmlformats.org/officeDocument/2006/relationships/styles" '
        'Target="styles.xml"/></Relationships>',
    )
    start = time.monotonic()
    book = read_workbook(write_parts(tmp_path / "a.xlsx", parts))
    assert len(book.number_formats) == 64_000
    assert book.number_formats[book.sheets[0].cells[1, 1].style] == '0.0" N29999"'
    assert time.monotonic() - start < 5


def test_names_that_shadow_functions_and_cells(tmp_path: Path) -> None:
    names = (
        '<definedNames><definedName name="SUM">S!$A$1</definedName><definedName name="pi">S!$A$1</definedName>'
        '<definedName name="STRESS_AXIAL">S!$A$1</definedName><definedName name="R_">S!$A$1</definedName>'
        "</definedNames>"
    )
    parts = parts_of(
        sheet_xml(
            '<row r="1"><c r="A1"><v>2</v></c><c r="B1"><f>SUM(A1,SUM)</f></c><c r="C1"><f>pi*PI()</f></c>'
            '<c r="D1"><f>STRESS_AXIAL+R_</f></c></row>'
        )
    )
    parts["xl/workbook.xml"] = parts["xl/workbook.xml"].replace("</sheets>", f"</sheets>{names}")
    path = write_parts(tmp_path / "a.xlsx", parts)
    found = evaluate(build_graph(read_workbook(path)))
    assert [found.value("S", (1, column)) for column in (2, 4)] == [4.0, 4.0]
    assert found.value("S", (1, 3)) == pytest.approx(6.283185307179586, rel=1e-15)


def test_a_name_that_means_itself_is_said(tmp_path: Path) -> None:
    parts = parts_of(sheet_xml('<row r="1"><c r="B1"><f>loop+1</f></c></row>'))
    names = '<definedNames><definedName name="loop">loop*2</definedName></definedNames>'
    parts["xl/workbook.xml"] = parts["xl/workbook.xml"].replace("</sheets>", f"</sheets>{names}")
    assert "not evaluated" in str(value(write_parts(tmp_path / "a.xlsx", parts)))


def test_very_deep_and_very_long_formulas_do_not_stop_the_rest(tmp_path: Path) -> None:
    deep = "(" * 2_000 + "1" + ")" * 2_000
    long = "+".join(["A1"] * 2_500)
    rows = (
        f'<row r="1"><c r="A1"><v>2</v></c><c r="B1"><f>A1*3</f></c><c r="C1"><f>{deep}</f></c>'
        f'<c r="D1"><f>{long}</f></c><c r="E1"><f>1+</f></c></row>'
    )
    path = changed(tmp_path / "a.xlsx", sheet1=sheet_xml(rows))
    report = check(path)
    assert report.formulas == 4
    assert report.book.value(("S", (1, 2))) == 6.0
    for column in (3, 4):
        found = report.book.value(("S", (1, column)))
        assert found in (1.0, 5000.0) or "deep" in str(found)
    assert "not evaluated" in str(report.book.value(("S", (1, 5))))


def test_a_folder_and_a_missing_file(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="is a folder"):
        read_workbook(tmp_path)
    with pytest.raises(InputError, match="does not exist"):
        read_workbook(tmp_path / "none.xlsx")


def test_bytes_after_the_package_do_not_matter(tmp_path: Path) -> None:
    path = changed(tmp_path / "a.xlsx")
    buffer = io.BytesIO(path.read_bytes())
    path.write_bytes(buffer.getvalue() + b"\0" * 100)
    assert value(path) == 6.0
