"""The command line as a user meets it: what it prints, where, and how it ends."""

import json
import os
import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

from doubler.cli import main
from doubler.cli.arguments import parser
from strap_book import GOOD, cases_csv, strap_template


def run(*words: str, **environment: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "doubler", *words],
        capture_output=True,
        text=True,
        env={**os.environ, **environment},
        check=False,
    )


@pytest.mark.parametrize(
    ("formula", "printed"),
    [
        ('=STRESS_AXIAL("12 kN","150 mm^2","MPa")', "80\n"),
        ('=STRESS_AXIAL("12 kN","150 mm^2")', "80\tMPa\n"),
        ('STRESS_AXIAL("12 kip","2 in^2")', "6\tksi\n"),
        ("=-2^2", "4\n"),
        ('={1,2;3,4}&""', "1\t2\n3\t4\n"),
        ("=1/3", "0.333333333333333\n"),
        ("=2>1", "TRUE\n"),
    ],
)
def test_eval_prints_rows_and_tabs(capsys: pytest.CaptureFixture[str], formula: str, printed: str) -> None:
    assert main(["eval", formula]) == 0
    assert capsys.readouterr().out == printed


@pytest.mark.parametrize(
    ("formula", "value", "reason"),
    [
        ('=STRESS_AXIAL(12,"150 mm^2","MPa")', "#VALUE!", "has no unit"),
        ('=STRESS_AXIAL("12 kN","-1 mm^2","MPa")', "#NUM!", "area"),
        ('=STRESS_AXIAL("12 lb","150 mm^2","MPa")', "#VALUE!", "lbf"),
        ("=1/0", "#DIV/0!", ""),
        ("=NOSUCH(1)", "#NAME?", "NOSUCH"),
    ],
)
def test_an_error_value_is_printed_with_its_reason_and_status_2(
    capsys: pytest.CaptureFixture[str], formula: str, value: str, reason: str
) -> None:
    assert main(["eval", formula]) == 2
    out, err = capsys.readouterr()
    assert out == f"{value}\n"
    assert reason in err


def test_a_formula_that_cannot_be_read(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["eval", "=SUM(1"]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.startswith("doubler eval: ")
    assert err.count("\n") == 1


def test_functions_as_json_hold_what_the_contract_names(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["functions", "--json"]) == 0
    listed = json.loads(capsys.readouterr().out)
    assert len(listed) > 150
    for one in listed:
        assert {"name", "summary", "arguments", "result", "source", "example"} <= one.keys()
        assert all(one[key] for key in ("name", "summary", "result", "source", "example")), one["name"]


def test_one_function_and_one_category(capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["functions", "stress_axial"]) == 0
    shown = capsys.readouterr().out
    assert "STRESS_AXIAL(force, area, [result])" in shown
    assert "σ = F/A" in shown
    assert main(["functions", "MARGIN_"]) == 0
    assert "MARGIN_YIELD" in capsys.readouterr().out
    assert main(["functions", "STRES_AXIAL"]) == 2
    assert "did you mean STRESS_AXIAL" in capsys.readouterr().err


def test_fill_ends_with_1_on_a_negative_margin_and_0_without(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    template = strap_template(tmp_path / "strap.xlsx")
    cases = cases_csv(tmp_path / "cases.csv", GOOD)
    assert main(["fill", str(template), str(cases), "--out", str(tmp_path / "a"), "--json"]) == 1
    out, err = capsys.readouterr()
    told = json.loads(out)
    assert told["written"] == 3
    assert told["envelope"][0]["governing_case"] == "heavy"
    assert err == ""
    cases_csv(cases, "case,load [kN]\nlight,10\n")
    assert main(["fill", str(template), str(cases), "--out", str(tmp_path / "b")]) == 0


def test_sweep_size_and_explain_report(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    template = str(strap_template(tmp_path / "strap.xlsx"))
    cases = str(cases_csv(tmp_path / "cases.csv", GOOD))
    assert main(["sweep", template, cases, "--out", str(tmp_path / "r.csv"), "--json"]) == 1
    assert json.loads(capsys.readouterr().out)["cases"] == 3
    call = ["size", template, "--vary", "thickness", "--between", "1", "50", "--target", "ms_yield >= 0"]
    assert main([*call, "--json"]) == 0
    assert json.loads(capsys.readouterr().out)["found"] is True
    assert main([*call[:-1], "ms_yield >= 99"]) == 1
    assert main(["explain", template, "ms_yield"]) == 0
    assert "yield_strength / (factor × stress) − 1" in capsys.readouterr().out


def test_check_prints_json_and_ends_with_1_on_an_error(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    bad = strap_template(tmp_path / "bad.xlsx", {"stress": "=C3/C9"})
    before = bad.read_bytes()
    assert main(["check", str(bad), "--json", "-"]) == 1
    (report,) = json.loads(capsys.readouterr().out)
    assert report.keys() >= {"workbook", "sha256", "coverage", "counts", "findings"}
    assert report["coverage"].keys() >= {"formulas", "recalculated", "traced"}
    found = report["findings"][0]
    assert (found["sheet"], found["cell"], found["kind"], found["severity"]) == ("Strap", "C10", "unit-scale", "error")
    assert {"message", "found", "expected", "cells"} <= found.keys()
    assert bad.read_bytes() == before
    assert main(["check", str(bad), "--json", str(tmp_path / "f.json")]) == 1
    assert json.loads((tmp_path / "f.json").read_text())[0] == report


def test_check_writes_over_no_file_that_it_reads(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    book, older = strap_template(tmp_path / "book.xlsx"), strap_template(tmp_path / "older.xlsx")
    policy = tmp_path / "rules.toml"
    policy.write_text("")
    before = [path.read_bytes() for path in (book, older, policy)]
    for option in ("--json", "--mended"):
        for target in (book, older, policy):
            call = ["check", str(book), "--against", str(older), "--policy", str(policy), option, str(target)]
            assert main(call) == 2
            said = capsys.readouterr()
            assert said.out == ""
            assert f"{target} is a file that is read; write to another name" in said.err
    assert [path.read_bytes() for path in (book, older, policy)] == before


def test_a_target_in_no_folder_is_refused_before_the_check(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    book = strap_template(tmp_path / "book.xlsx")
    for option in ("--json", "--mended"):
        for target in (tmp_path / "none" / "x.xlsx", book / "x.xlsx", tmp_path / ("x" * 300)):
            assert main(["check", str(book), option, str(target)]) == 2
            said = capsys.readouterr()
            assert said.out == ""
            assert "can't be written" in said.err
            assert said.err.count("\n") == 1


def unreadable(folder: Path) -> dict[str, Path]:
    """Write files that are no workbooks, each in its way."""
    made: dict[str, bytes] = {
        "text.xlsx": b"case,load\n",
        "empty.xlsx": b"",
        "old.xls": b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + bytes(600),
        "encrypted.xlsx": b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1" + bytes(600),
    }
    for name, content in made.items():
        (folder / name).write_bytes(content)
    whole = strap_template(folder / "whole.xlsx").read_bytes()
    (folder / "damaged.xlsx").write_bytes(whole[: len(whole) // 2])
    with zipfile.ZipFile(folder / "other.xlsx", "w") as package:
        package.writestr("hello.txt", "hello")
    with zipfile.ZipFile(folder / "bomb.xlsx", "w", zipfile.ZIP_DEFLATED) as package:
        package.writestr("xl/workbook.xml", bytes(400_000_000))
    (folder / "folder.xlsx").mkdir()
    return {path.name: path for path in folder.iterdir() if path.name != "whole.xlsx"}


def test_what_is_no_workbook_is_refused_in_one_sentence(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    books = tmp_path / "books"
    books.mkdir()
    cases = cases_csv(tmp_path / "cases.csv", GOOD)
    for name, path in {**unreadable(books), "missing.xlsx": tmp_path / "missing.xlsx"}.items():
        calls = (
            ["check", str(path), "--record", str(tmp_path / "record")],
            ["fill", str(path), str(cases), "--out", str(tmp_path / "out")],
            ["sweep", str(path), str(cases), "--out", str(tmp_path / "r.csv")],
            ["explain", str(path), "A1"],
        )
        for call in calls:
            assert main(call) == 2, (name, call[0])
            out, err = capsys.readouterr()
            assert out == ""
            assert err.count("\n") == 1, (name, err)
            assert name in err
    assert sorted(path.name for path in tmp_path.iterdir()) == ["books", "cases.csv"]


def test_a_wrong_call_ends_with_2() -> None:
    assert run().returncode == 2
    assert run("fil").returncode == 2
    assert run("check").returncode == 2


def test_every_verb_has_help_with_an_example() -> None:
    top = parser()
    verbs = next(action for action in top._actions if getattr(action, "choices", None))
    assert set(verbs.choices) == {  # type: ignore[arg-type]
        "demo", "eval", "functions", "fill", "sweep", "size", "check", "explain", "host",
    }  # fmt: skip
    for name, verb in verbs.choices.items():  # type: ignore[union-attr]
        assert f"doubler {name}" in verb.format_help().split("Example")[1]


def test_no_colour_and_no_bar_in_a_pipe(tmp_path: Path) -> None:
    template = strap_template(tmp_path / "strap.xlsx")
    cases = cases_csv(tmp_path / "cases.csv", GOOD)
    done = run("fill", str(template), str(cases), "--out", str(tmp_path / "out"))
    assert "\x1b" not in done.stdout + done.stderr
    assert done.stderr == ""
    assert "\x1b" not in run("check", str(template), NO_COLOR="1", FORCE_COLOR="1").stdout


def test_a_reader_that_leaves_is_no_fault(tmp_path: Path) -> None:
    command = f"{sys.executable} -m doubler functions --json | head -c 10"
    done = subprocess.run(["bash", "-c", f"set -o pipefail; {command}"], capture_output=True, text=True, check=False)
    assert "Traceback" not in done.stderr
    assert done.returncode == 0


@pytest.mark.skipif(not hasattr(os, "mkfifo"), reason="there are no named pipes here")
def test_a_pipe_is_no_workbook_to_wait_for(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    os.mkfifo(tmp_path / "pipe.xlsx")
    assert main(["check", str(tmp_path / "pipe.xlsx")]) == 2
    assert "is a pipe or a device" in capsys.readouterr().err


def test_an_empty_folder_name_is_no_folder(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    template = strap_template(tmp_path / "strap.xlsx")
    cases = cases_csv(tmp_path / "cases.csv", GOOD)
    assert main(["fill", str(template), str(cases), "--out", ""]) == 2
    assert "give a folder" in capsys.readouterr().err
