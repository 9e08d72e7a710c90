"""Filling a template: right without recalculation, lossless, atomic, resumable."""

import datetime
import math
import os
import shutil
import subprocess
import sys
import zipfile
from collections.abc import Callable
from pathlib import Path

import openpyxl
import pytest

from doubler.cases import open_cases
from doubler.errors import InputError
from doubler.fill import LOG, fill
from strap_book import GOOD, cases_csv, strap_template


@pytest.fixture
def ready(tmp_path: Path) -> tuple[Path, Path, Path]:
    return strap_template(tmp_path / "strap.xlsx"), cases_csv(tmp_path / "cases.csv", GOOD), tmp_path / "out"


def stored(path: Path) -> dict[str, object]:
    sheet = openpyxl.load_workbook(path, data_only=True)["Strap"]
    return {f"C{row}": sheet[f"C{row}"].value for row in range(3, 13)}


def test_stored_values_are_right_without_a_spreadsheet_program(ready: tuple[Path, Path, Path]) -> None:
    report = fill(*ready)
    assert sorted(path.name for path in ready[2].glob("*.xlsx")) == [
        "heavy.xlsx", "light.xlsx", "steady.xlsx", "summary.xlsx",
    ]  # fmt: skip
    light = stored(ready[2] / "light.xlsx")
    assert light["C3"] == 10.0
    assert light["C9"] == 200.0
    assert light["C10"] == 50.0
    assert math.isclose(light["C11"], 320 / 75 - 1, rel_tol=1e-15)  # type: ignore[arg-type]
    assert stored(ready[2] / "heavy.xlsx")["C12"] == "fails"
    assert report.fails


def test_only_inputs_and_stored_values_change(ready: tuple[Path, Path, Path]) -> None:
    fill(*ready)
    with zipfile.ZipFile(ready[0]) as before, zipfile.ZipFile(ready[2] / "light.xlsx") as after:
        assert before.namelist() == after.namelist()
        changed = [name for name in before.namelist() if before.read(name) != after.read(name)]
    assert changed == ["xl/worksheets/sheet1.xml"]
    first, second = openpyxl.load_workbook(ready[0])["Strap"], openpyxl.load_workbook(ready[2] / "light.xlsx")["Strap"]
    differs = [c.coordinate for row in first.iter_rows() for c in row if c.value != second[c.coordinate].value]
    assert differs == ["C3"]


def test_the_summary_holds_every_case_and_the_governing_one(ready: tuple[Path, Path, Path]) -> None:
    fill(*ready)
    book = openpyxl.load_workbook(ready[2] / "summary.xlsx")
    rows = [[cell.value for cell in row] for row in book["Envelope"].iter_rows(min_row=6, max_row=6)]
    assert rows[0][0] == "ms_yield"
    assert rows[0][4] == "heavy"
    cases = book["Cases"]
    head = [cell.value for cell in cases[1]]
    column = head.index("Lowest margin")
    assert [cases[row][0].value for row in (3, 4, 5)] == ["light", "heavy", "steady"]
    assert math.isclose(cases[3][column].value, 320 / 75 - 1)
    assert len(book["Envelope"]._charts) == 1


def test_a_stopped_run_goes_on_where_it_was(ready: tuple[Path, Path, Path]) -> None:
    fill(*ready)
    (ready[2] / "heavy.xlsx").unlink()
    before = (ready[2] / "light.xlsx").stat().st_mtime_ns
    report = fill(*ready)
    assert (report.written, report.kept) == (1, 2)
    assert (ready[2] / "light.xlsx").stat().st_mtime_ns == before


def test_a_run_killed_in_the_middle_of_its_log_goes_on(ready: tuple[Path, Path, Path]) -> None:
    fill(*ready)
    log = ready[2] / LOG
    log.write_text(log.read_text()[:-30])
    (ready[2] / "summary.xlsx").unlink()
    report = fill(*ready)
    assert report.kept == 3


def test_a_run_killed_between_a_file_and_its_line_in_the_log_goes_on(ready: tuple[Path, Path, Path]) -> None:
    fill(*ready)
    log = ready[2] / LOG
    lines = log.read_text().splitlines()
    last = max(at for at, line in enumerate(lines) if "heavy.xlsx" in line)
    log.write_text("\n".join(lines[:last]))  # killed after the file was renamed, before its line
    for later in ("steady", "summary"):
        (ready[2] / f"{later}.xlsx").unlink()
    assert fill(*ready).written == 2
    again = fill(*ready)
    assert (again.written, again.kept) == (0, 3)


def test_what_a_killed_run_was_writing_is_removed(ready: tuple[Path, Path, Path]) -> None:
    fill(*ready)
    dead = subprocess.Popen([sys.executable, "-c", ""])
    dead.wait()
    mine, foreign = f".doubler-{os.getpid()}-1-1.tmp", ".doubler-notes.tmp"
    for name in (f".doubler-{dead.pid}-140000033307520-132.tmp", mine, foreign):
        (ready[2] / name).write_bytes(b"half")
    fill(*ready)
    assert {path.name for path in ready[2].glob("*.tmp")} == {mine, foreign}


def test_a_second_run_into_the_same_folder_is_refused(ready: tuple[Path, Path, Path]) -> None:
    def begun(_total: int) -> Callable[[int], None]:
        return lambda _done: second()

    def second() -> None:
        with pytest.raises(InputError, match=r"another run is writing to .*out; wait until it has ended"):
            fill(*ready)

    assert fill(*ready, begun=begun).written == 3
    assert fill(*ready).kept == 3


@pytest.mark.parametrize("fresh", [False, True])
def test_the_files_that_are_read_are_not_written_over(tmp_path: Path, fresh: bool) -> None:
    table = cases_csv(tmp_path / "cases.csv", GOOD)
    for name in ("summary.xlsx", "light.xlsx"):
        template = strap_template(tmp_path / name)
        with pytest.raises(InputError, match=f"{name} is a file that is read; give another folder"):
            fill(template, table, tmp_path, fresh=fresh)
        template.unlink()
    template = strap_template(tmp_path / "strap.xlsx")
    as_workbook = tmp_path / "light.xlsx"
    book = openpyxl.Workbook()
    for row in (["case", "load [kN]"], ["light", 10]):
        book.active.append(row)
    book.save(as_workbook)
    with pytest.raises(InputError, match=r"light\.xlsx is a file that is read"):
        fill(template, as_workbook, tmp_path, fresh=fresh)
    assert sorted(path.name for path in tmp_path.iterdir()) == ["cases.csv", "light.xlsx", "strap.xlsx"]


def test_a_folder_whose_name_is_too_long_is_refused(ready: tuple[Path, Path, Path]) -> None:
    with pytest.raises(InputError, match=r"File name too long.*give another"):
        fill(ready[0], ready[1], ready[0].with_name("d" * 300))


def test_changed_inputs_are_written_anew(ready: tuple[Path, Path, Path]) -> None:
    fill(*ready)
    cases_csv(ready[1], GOOD.replace("light,10", "light,11"))
    report = fill(*ready)
    assert (report.written, report.kept) == (1, 2)
    assert stored(ready[2] / "light.xlsx")["C3"] == 11.0


def test_a_file_changed_by_hand_is_not_written_over(ready: tuple[Path, Path, Path]) -> None:
    fill(*ready)
    shutil.copyfile(ready[0], ready[2] / "light.xlsx")
    with pytest.raises(InputError, match=r"light\.xlsx is there already .* --fresh"):
        fill(*ready)
    assert fill(*ready, fresh=True).written == 3


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("case,load [kN]\n", "holds no load case"),
        ("", "is empty: write the headings"),
        ("load [kN]\n10\n", "has no column 'case'"),
        ("case,load [kN]\na,10\na,11\n", r"row 3: the case's name 'a' stands in row 2 too"),
        ("case,load [kN]\na,10\nA,11\n", r"row 3: the case's name 'A' stands in row 2 too"),
        ("case,load [kN]\n../x,10\n", r"row 2: the case's name '\.\./x' holds a character that no file name takes"),
        ("case,load [kN]\n=cmd,10\n", "begins like a formula"),
        (f"case,load [kN]\n{'n' * 300},10\n", "is 300 characters long; write at most 100"),
        (f"case,load [kN]\n{'漢' * 90},10\n", "takes 270 bytes in a file's name; write fewer characters"),
        ("case,load [kN]\né,10\ne\u0301,11\n", "row 3: the case's name 'e\u0301' stands in row 2 too"),
        ("case,load [kN]\n\u202egpj,10\n", "holds a control character"),
        ("\ncase,load [kN]\na,10\n", "the first row of .* is empty: write the headings"),
        ("case,load [kN]\ncon,10\n", "is a device's name"),
        ("case,load [kN]\nLPT1.txt,10\n", "is a device's name"),
        ("case,load [kN]\nsummary,10\n", r"would take the place of summary\.xlsx"),
        ("case,load [kN]\n,10\n", "is empty; give every case a name"),
        ("case,lod [kN]\na,10\n", r"no input 'lod'; did you mean 'load'\?"),
        ("case,load [mm]\na,10\n", r"column 'load \[mm\]': mm is a unit of length, and Strap!C3 wants force \(kN\)"),
        ("case,load\na,10\n", r"column 'load' has no unit; Strap!C3 is in kN: head the column 'load \[kN\]'"),
        ("case,load [kN]\na,ten\n", r"row 2 \(case a\), column 'load \[kN\]': 'ten' is text where a number is due"),
        ("case,load [kN]\na,12 kN\n", "write the number alone"),
        ("case,load [kN]\na,\n", "is empty; write a number"),
        ("case,load [kN]\na,nan\n", "nan is no finite number"),
        ("case,load [kN]\na,1e999\n", "inf is no finite number"),
        ('case,load [kN]\na,"12,5"\n', "holds a comma; write a decimal point"),
        ("case;load [kN]\na;12,5\n", "holds a comma; write a decimal point"),
        ("case,load [kN]\na,12,5\n", "a row has 3 values where the head has 2 columns"),
        ("case,stress [MPa]\na,10\n", "is an output of the template"),
        ("case,Strap!C10 [MPa]\na,10\n", "a case never overwrites a formula"),
        ("case,load [kN],load [N]\na,10,10\n", "two columns are headed 'load'"),
        ("case,load [kN],Strap!C3 [N]\na,10,10\n", "both fill Strap!C3"),
        ("case,load [kNn]\na,10\n", r"column 'load \[kNn\]'"),
        ("case,width [mm]\na,-5\n", r"-5 in Strap!C4 breaks the template's data validation; it must be above 0"),
        ("case,load [kN],\na,10,1\n", "column 3 has no heading"),
    ],
)
def test_bad_cases_are_refused_in_one_sentence_and_nothing_is_written(
    ready: tuple[Path, Path, Path], text: str, message: str
) -> None:
    cases_csv(ready[1], text)
    with pytest.raises(InputError, match=message) as caught:
        fill(*ready)
    assert "\n" not in str(caught.value)
    assert not ready[2].exists()


def test_a_case_with_text_like_a_formula_stays_text(ready: tuple[Path, Path, Path]) -> None:
    cases_csv(ready[1], "case,load [kN],case_name\na,10,=1+1\n")
    fill(*ready)
    cell = openpyxl.load_workbook(ready[2] / "a.xlsx")["Strap"]["C8"]
    assert (cell.value, cell.data_type) == ("=1+1", "s")


def test_units_are_converted_to_those_of_the_template(ready: tuple[Path, Path, Path]) -> None:
    cases_csv(ready[1], "case,load [lbf],width [in]\na,1000,2\n")
    fill(*ready)
    values = stored(ready[2] / "a.xlsx")
    assert math.isclose(values["C3"], 4.4482216152605)  # type: ignore[arg-type]
    assert math.isclose(values["C4"], 50.8)  # type: ignore[arg-type]


def test_labels_serve_where_there_are_no_names(tmp_path: Path) -> None:
    template = strap_template(tmp_path / "plain.xlsx", names=False)
    cases = cases_csv(tmp_path / "cases.csv", "case,Force [kN],Strap!C4 [mm]\na,20,50\n")
    fill(template, cases, tmp_path / "out")
    assert stored(tmp_path / "out" / "a.xlsx")["C10"] == 80.0


def test_a_missing_input_is_named(tmp_path: Path) -> None:
    template = strap_template(tmp_path / "blank.xlsx", {"thickness": None})
    cases = cases_csv(tmp_path / "cases.csv", "case,load [kN]\na,20\n")
    with pytest.raises(InputError, match=r"no column for 'thickness \[mm\]', and the template's cell is empty"):
        fill(template, cases, tmp_path / "out")


def test_a_circular_output_is_refused(tmp_path: Path) -> None:
    template = strap_template(tmp_path / "circular.xlsx", {"area": "=C4*C5+C10"})
    cases = cases_csv(tmp_path / "cases.csv", "case,load [kN]\na,20\n")
    with pytest.raises(InputError, match="circular"):
        fill(template, cases, tmp_path / "out")


def test_an_output_that_cannot_be_computed_is_refused(tmp_path: Path) -> None:
    template = strap_template(tmp_path / "unknown.xlsx", {"area": "=NOSUCHFUNCTION(C4,C5)"})
    cases = cases_csv(tmp_path / "cases.csv", "case,load [kN]\na,20\n")
    with pytest.raises(InputError, match="cannot be computed"):
        fill(template, cases, tmp_path / "out")
    assert not list(tmp_path.glob("out/*.xlsx"))


@pytest.mark.skipif(os.name != "posix", reason="folder marks are POSIX's")
def test_a_read_only_folder_is_refused(ready: tuple[Path, Path, Path]) -> None:
    ready[2].mkdir()
    ready[2].chmod(0o555)
    try:
        with pytest.raises(InputError, match="read-only"):
            fill(*ready)
    finally:
        ready[2].chmod(0o755)
    assert not list(ready[2].iterdir())


def test_a_full_disk_leaves_nothing_half_written(
    ready: tuple[Path, Path, Path], monkeypatch: pytest.MonkeyPatch
) -> None:
    def full(*_: object) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr("doubler.workbook.output.os.replace", full)
    with pytest.raises(InputError, match="the disk is full"):
        fill(*ready)
    assert [path.name for path in ready[2].iterdir()] == []


@pytest.mark.parametrize("suffix", [".parquet", ".xlsx"])
def test_cases_come_from_other_tables_too(ready: tuple[Path, Path, Path], suffix: str) -> None:
    table = ready[1].with_suffix(suffix)
    if suffix == ".parquet":
        import pyarrow as pa
        from pyarrow import parquet

        parquet.write_table(pa.table({"case": ["a", "b"], "load [kN]": [10, 20], "factor": [1.5, 2.0]}), table)
    else:
        book = openpyxl.Workbook()
        for row in (["case", "load [kN]", "factor"], ["a", 10, 1.5], ["b", "=2*B2", 2]):
            book.active.append(row)
        book.save(table)
    fill(ready[0], table, ready[2])
    assert stored(ready[2] / "b.xlsx")["C3"] == 20.0
    assert stored(ready[2] / "b.xlsx")["C7"] == 2.0


def test_a_date_in_a_table_of_cases_is_no_number(ready: tuple[Path, Path, Path]) -> None:
    """A program that takes '1.5' or a case's name '3-4' for a date keeps its count of days."""
    table = ready[1].with_suffix(".xlsx")
    for row, cell in ((["light", datetime.date(2026, 5, 1)], "B2"), ([datetime.date(2026, 4, 3), 10], "A2")):
        book = openpyxl.Workbook()
        for entries in (["case", "load [kN]"], row):
            book.active.append(entries)
        book.save(table)
        with pytest.raises(InputError, match=rf"Sheet!{cell} shows a date or a time, which is kept as the number 461"):
            fill(ready[0], table, ready[2])


def test_a_row_below_a_gap_is_named_by_its_own_number(ready: tuple[Path, Path, Path]) -> None:
    table = ready[1].with_suffix(".xlsx")
    book = openpyxl.Workbook()
    for entries in (["case", "load [kN]"], ["light", 10], [], [], ["steady", 11], ["heavy", "much"]):
        book.active.append(entries)
    book.save(table)
    with pytest.raises(InputError, match=r"row 6 \(case heavy\)"):
        fill(ready[0], table, ready[2])


@pytest.mark.parametrize(("heading", "due"), [("knock [%]", 7.0), ("knock [-]", 0.07)])
def test_a_cell_that_shows_a_percentage_is_read_as_it_shows(tmp_path: Path, heading: str, due: float) -> None:
    book = openpyxl.Workbook()
    for row in (["case", heading], ["light", 0.07]):
        book.active.append(row)
    book.active["B2"].number_format = "0%"
    book.save(tmp_path / "cases.xlsx")
    (batch,) = open_cases(tmp_path / "cases.xlsx").batches()
    assert batch.columns[1].to_pylist() == [due]


@pytest.mark.parametrize("suffix", [".csv", ".xlsx"])
def test_a_heading_may_be_broken_into_lines(ready: tuple[Path, Path, Path], suffix: str) -> None:
    table = ready[1].with_suffix(suffix)
    if suffix == ".csv":
        table.write_text('case,"load\n[kN]"\nlight,11\n')
    else:
        book = openpyxl.Workbook()
        for row in (["case", "load\n[kN]"], ["light", 11]):
            book.active.append(row)
        book.save(table)
    fill(ready[0], table, ready[2])
    assert stored(ready[2] / "light.xlsx")["C3"] == 11.0
