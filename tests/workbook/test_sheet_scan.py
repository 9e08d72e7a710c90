"""The quick scan of a sheet gives exactly what the XML parser gives, or leaves the part to the parser."""

import io
from pathlib import Path
from typing import Any

import pytest

from doubler.errors import ErrorValue, InputError
from doubler.workbook.model import Sheet
from doubler.workbook.package import Package
from doubler.workbook.reader import read_workbook
from doubler.workbook.sheet_scan import NotPlainError, Scan
from workbook.raw_books import MAIN, raw_book, sheet_xml

PLAIN = (
    '<row r="1" spans="1:4"><c r="A1" s="3"><v>1.5</v></c><c r="B1" t="s"><v>0</v></c><c r="D1"/></row>'
    '<row r="2" hidden="1"/>'
    '<row r="3"><c r="A3" t="str"><f>"a"&amp;"&lt;_x0041_"</f><v>a&lt;A</v></c>'
    '<c r="B3"><f t="shared" ref="B3:B4" si="0">A1*2</f><v>3</v></c>'
    '<c r="C3" t="inlineStr"><is><t xml:space="preserve"> in &#10;line</t></is></c>'
    '<c r="D3" t="e"><v>#N/A</v></c><c r="E3" t="b"><v>1</v></c></row>\r\n'
    '<row r="4"><c r="A4"><f>SUM(A1:A3)</f><v></v></c><c r="B4"><f t="shared" si="0"/><v>0</v></c>'
    '<c r="C4"><f t="array" ref="C4:C5">A1:A2</f><v>1</v></c><c r="AA4" t="n"><v>1E400</v></c></row>'
)


def both(path: Path, monkeypatch: pytest.MonkeyPatch) -> tuple[Sheet, Sheet]:
    scanned = read_workbook(path).sheets[0]

    def give_up(_: Scan) -> Any:
        raise NotPlainError

    monkeypatch.setattr(Scan, "rows", give_up)
    return scanned, read_workbook(path).sheets[0]


def is_scanned(path: Path) -> bool:
    with Package(path).open("xl/worksheets/sheet1.xml") as stream:
        try:
            list(Scan(io.BytesIO(stream.read())).rows())
        except NotPlainError:
            return False
    return True


def test_plain_rows_are_scanned_as_the_parser_reads_them(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    path = raw_book(tmp_path / "a.xlsx", sheet_xml(PLAIN, after='<mergeCells><mergeCell ref="A8:B9"/></mergeCells>'))
    assert is_scanned(path)
    scanned, parsed = both(path, monkeypatch)
    assert scanned == parsed
    assert scanned.hidden_rows == {2}
    assert len(scanned.merged) == 1
    assert scanned.cells[3, 1].formula == '"a"&"<A"'
    assert scanned.cells[4, 2].formula == "A2*2"
    assert scanned.cells[3, 3].value == " in \nline"
    assert scanned.cells[4, 27].value is ErrorValue.NUM
    assert scanned.cells[1, 4].value is None


@pytest.mark.parametrize(
    "rows",
    [
        '<row r="1"><c r="A1"><v>1</v></c><!-- <c r="B1"><v>2</v></c> --></row>',
        '<row r="1"><c t="n" r="A1"><v>1</v></c></row>',
        "<row><c><v>1</v></c><c><v>2</v></c></row>",
        '<row r="1"><c r="A1"><v><![CDATA[7]]></v></c></row>',
        '<row r="1"><c r="A1" t="inlineStr"><is><r><t>a</t></r><r><t>b</t></r></is></c></row>',
        '<row r="1"><c r="A1"><v>1</v><extLst/></c></row>',
    ],
)
def test_unusual_rows_go_through_the_parser(tmp_path: Path, monkeypatch: pytest.MonkeyPatch, rows: str) -> None:
    path = raw_book(tmp_path / "a.xlsx", sheet_xml(rows))
    assert not is_scanned(path)
    scanned, parsed = both(path, monkeypatch)
    assert scanned == parsed
    assert scanned.cells


@pytest.mark.parametrize(
    ("rows", "told"),
    [
        ('<row r="1"><c r="A1"><v>1</v></c><c r="A1"><v>2</v></c></row>', "stored twice"),
        ('<row r="1"><c r="A2"><v>1</v></c></row>', "stands in row 1"),
        ('<row r="1"><c r="A1"><v>1</v></c><c r="B1"><v>2</c></row>', "not well-formed"),
        ('<row r="1"><c r="A1"><v>&bad;</v></c></row>', "not well-formed"),
        ('<row r="1"><c r="A1" t="s"><v>9</v></c></row>', "shared text"),
        ('<row r="1"><c r="A1"><f t="shared" si="3"/></c></row>', "copies shared formula 3"),
        ('<row r="1"><c r="XFE1"><v>1</v></c></row>', "column XFE is outside"),
        ('<row r="2000000"><c r="A2000000"><v>1</v></c></row>', "2000000"),
    ],
)
def test_damage_is_told_as_ever(tmp_path: Path, rows: str, told: str) -> None:
    path = raw_book(tmp_path / "a.xlsx", sheet_xml(rows))
    with pytest.raises(InputError, match=told):
        read_workbook(path)


def test_rows_longer_than_a_chunk(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    rows = "".join(f'<row r="{k}"><c r="A{k}"><v>{k}</v></c></row>' for k in range(1, 200))
    path = raw_book(tmp_path / "a.xlsx", sheet_xml(rows))
    monkeypatch.setattr("doubler.workbook.sheet_scan.CHUNK", 150)
    assert is_scanned(path)
    assert read_workbook(path).sheets[0].cells[199, 1].value == 199.0


def test_another_name_space_prefix_is_left_to_the_parser(tmp_path: Path) -> None:
    xml = (
        f'<x:worksheet xmlns:x="{MAIN}"><x:sheetData><x:row r="1"><x:c r="A1"><x:v>4</x:v></x:c></x:row></x:sheetData>'
    )
    path = raw_book(tmp_path / "a.xlsx", f"{xml}</x:worksheet>")
    assert not is_scanned(path)
    assert read_workbook(path).sheets[0].cells[1, 1].value == 4.0
