"""Sweeping a template over a table: one table of outputs, the envelope, nothing half-written."""

from pathlib import Path

import numpy as np
import openpyxl
import pyarrow as pa
import pytest
from pyarrow import csv, parquet

from doubler.errors import InputError
from doubler.sweep import sweep
from strap_book import GOOD, cases_csv, strap_template


@pytest.fixture
def ready(tmp_path: Path) -> tuple[Path, Path]:
    return strap_template(tmp_path / "strap.xlsx"), cases_csv(tmp_path / "cases.csv", GOOD)


def test_each_table_holds_every_case(ready: tuple[Path, Path], tmp_path: Path) -> None:
    expected = [320 / (1.5 * 50) - 1, 320 / (1.5 * 3600) - 1, 320 / (1.5 * 120) - 1]
    report = sweep(*ready, tmp_path / "r.parquet")
    table = parquet.read_table(tmp_path / "r.parquet")
    assert table.column_names == ["case", "area [mm^2]", "stress [MPa]", "ms_yield", "verdict", "not computed"]
    assert table["case"].to_pylist() == ["light", "heavy", "steady"]
    np.testing.assert_allclose(table["ms_yield"].to_numpy(), expected, rtol=1e-15)
    assert report.envelope[0].lowest.case == "heavy"
    assert report.fails
    sweep(*ready, tmp_path / "r.csv")
    np.testing.assert_allclose(csv.read_csv(tmp_path / "r.csv")["ms_yield"].to_numpy(), expected, rtol=1e-15)
    sweep(*ready, tmp_path / "r.xlsx")
    sheet = openpyxl.load_workbook(tmp_path / "r.xlsx")["Results"]
    assert sheet["A2"].value == "light"
    np.testing.assert_allclose([sheet.cell(row, 4).value for row in (2, 3, 4)], expected, rtol=1e-15)


def test_what_cannot_be_computed_is_named_and_governs(tmp_path: Path) -> None:
    template = strap_template(tmp_path / "strap.xlsx", {"ms_yield": "=C6/(C7*C10)-1+0*SQRT(C3)"})
    cases = cases_csv(tmp_path / "cases.csv", "case,load [kN]\nup,10\ndown,-10\n")
    report = sweep(template, cases, tmp_path / "r.parquet")
    table = parquet.read_table(tmp_path / "r.parquet")
    assert table["ms_yield"].to_pylist()[1] is None
    assert "ms_yield: #NUM!" in table["not computed"].to_pylist()[1]
    margin = next(line for line in report.envelope if line.port.name == "ms_yield")
    assert str(margin.lowest.value) == "#NUM!"
    assert margin.lowest.case == "down"
    assert report.fails


def test_many_batches_equal_one(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    template = strap_template(tmp_path / "strap.xlsx")
    loads = np.linspace(1.0, 90.0, 1000)
    cases = tmp_path / "cases.parquet"
    parquet.write_table(pa.table({"case": [f"c{i}" for i in range(1000)], "load [kN]": loads}), cases)
    whole = sweep(template, cases, tmp_path / "one.parquet")
    monkeypatch.setattr("doubler.sweep.AT_ONCE", 77)
    parts = sweep(template, cases, tmp_path / "many.parquet")
    assert parquet.read_table(tmp_path / "one.parquet").equals(parquet.read_table(tmp_path / "many.parquet"))
    assert [line.as_object() for line in whole.envelope] == [line.as_object() for line in parts.envelope]


def test_a_fault_in_the_last_row_leaves_the_old_table(ready: tuple[Path, Path], tmp_path: Path) -> None:
    target = tmp_path / "r.csv"
    target.write_text("kept")
    cases_csv(ready[1], GOOD + "late,oops,40\n")
    with pytest.raises(InputError, match=r"row 5 \(case late\)"):
        sweep(*ready, target)
    assert target.read_text() == "kept"
    assert sorted(p.name for p in tmp_path.iterdir()) == ["cases.csv", "r.csv", "strap.xlsx"]


@pytest.mark.parametrize(
    ("out", "message"),
    [
        ("r.txt", r"written as \.parquet, \.csv or \.xlsx"),
        ("cases.csv", "is a file that is read"),
        ("no/r.csv", "does not exist"),
    ],
)
def test_targets_that_will_not_do(ready: tuple[Path, Path], tmp_path: Path, out: str, message: str) -> None:
    with pytest.raises(InputError, match=message):
        sweep(*ready, tmp_path / out)


def test_a_scheduler_s_workers_give_the_same_table(ready: tuple[Path, Path], tmp_path: Path) -> None:
    from distributed import LocalCluster

    sweep(*ready, tmp_path / "here.parquet")
    with LocalCluster(n_workers=1, threads_per_worker=1, processes=False, dashboard_address=None) as cluster:
        report = sweep(*ready, tmp_path / "there.parquet", scheduler=cluster.scheduler_address)
    assert report.cases == 3
    assert parquet.read_table(tmp_path / "here.parquet").equals(parquet.read_table(tmp_path / "there.parquet"))


def test_no_scheduler_at_the_address(ready: tuple[Path, Path], tmp_path: Path) -> None:
    with pytest.raises(InputError, match="no scheduler answers at nowhere"):
        sweep(*ready, tmp_path / "r.parquet", scheduler="nowhere")
