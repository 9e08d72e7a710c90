"""Many workbooks in one call: their order, faulty ones among them, no processes to be had, and a break."""

import json
import os
import signal
import subprocess
import sys
import time
from concurrent.futures.process import BrokenProcessPool
from pathlib import Path

import pytest

from check.record_books import small_book
from doubler.check import many
from doubler.check.examination import check
from doubler.check.many import Outcome, Refusal, Wish, check_many, put_in_place, waiting_room
from doubler.cli import main
from doubler.errors import InputError


def books(folder: Path, count: int) -> list[Path]:
    return [small_book(folder / f"lug{n}.xlsx", 10.0 + n) for n in range(count)]


def test_processes_give_what_one_process_gives_in_the_order_given(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    paths = books(tmp_path, 4)[::-1]
    done, there = [], []
    through = many._in_processes
    monkeypatch.setattr(many, "_in_processes", lambda *given: (there.append(one) or one for one in through(*given)))
    found = check_many(paths, Wish(), done.append, workers=2)
    assert len(there) == 4  # all of them came from other processes
    assert done == [1] * 4
    assert [one.told for one in found if isinstance(one, Outcome)] == [check(path).as_object() for path in paths]


@pytest.mark.parametrize("trouble", [BrokenProcessPool(), OSError(38, "no semaphores"), NotImplementedError()])
def test_without_processes_the_rest_is_done_in_this_one(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, trouble: Exception
) -> None:
    paths = books(tmp_path, 3)

    def some(given, wish, _count):
        yield 1, many.check_one(given[1], wish)
        raise trouble

    monkeypatch.setattr(many, "_in_processes", some)
    done: list[int] = []
    found = check_many(paths, Wish(), done.append, workers=2)
    assert [one.path for one in found] == paths
    assert sum(done) == 3


def test_one_or_two_workbooks_start_no_process(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(many, "_in_processes", lambda *_: pytest.fail("a process was started"))
    assert len(check_many(books(tmp_path, 2), Wish(), workers=2)) == 2


def damaged_inside(folder: Path) -> Path:
    """Write a workbook whose package is whole and whose sheet is not."""
    import zipfile

    whole, path = small_book(folder / "whole.xlsx"), folder / "inside.xlsx"
    with zipfile.ZipFile(whole) as source, zipfile.ZipFile(path, "w") as target:
        for name in source.namelist():
            target.writestr(name, source.read(name)[:200] if "sheet1" in name else source.read(name))
    whole.unlink()
    return path


def test_a_file_that_is_none_is_refused_before_anything_is_checked(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    paths = books(tmp_path, 3)
    for name in ("one.xlsx", "two.xlsx"):
        (tmp_path / name).write_bytes(b"no workbook")
    call = [*map(str, paths), str(tmp_path / "one.xlsx"), str(tmp_path / "two.xlsx")]
    assert main(["check", *call, "--record", str(tmp_path / "record"), "--json", str(tmp_path / "f.json")]) == 2
    said = capsys.readouterr()
    assert said.out == ""
    assert "one.xlsx" in said.err
    assert "two.xlsx" in said.err
    assert not (tmp_path / "record").exists()
    assert not (tmp_path / "f.json").exists()


def test_a_fault_deep_in_one_file_loses_no_other_and_writes_nothing(
    tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    paths = books(tmp_path, 3)
    bad = damaged_inside(tmp_path)
    before = sorted(path.name for path in tmp_path.iterdir())
    call = ["check", str(paths[0]), str(bad), *map(str, paths[1:]), "--record", str(tmp_path / "record")]
    assert main(call) == 2
    said = capsys.readouterr()
    assert all(path.name in said.out for path in paths)
    assert "inside.xlsx" in said.err
    assert sorted(path.name for path in tmp_path.iterdir()) == before


def test_a_fault_of_the_program_itself_names_the_file(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    paths = books(tmp_path, 3)

    def check_but_one(path: Path, **_given: object) -> object:
        if path == paths[1]:
            raise ZeroDivisionError("by nothing")
        return check(path)

    monkeypatch.setattr(many, "check", check_but_one)
    monkeypatch.setattr(many, "_cores", lambda: 1)
    assert main(["check", *map(str, paths)]) == 3
    assert f"{paths[1]}: ZeroDivisionError: by nothing" in capsys.readouterr().err


def test_all_records_are_put_in_place_together(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    paths = books(tmp_path, 3)
    record = tmp_path / "deep" / "record"
    assert main(["check", *map(str, paths), "--record", str(record), "--json", str(tmp_path / "f.json")]) == 1
    assert sorted(path.name for path in record.iterdir()) == sorted(
        name for n in range(3) for name in (f"lug{n}.check.html", f"lug{n}.checked.xlsx", f"lug{n}.findings.json")
    )
    assert [one["workbook"] for one in json.loads((tmp_path / "f.json").read_text())] == [p.name for p in paths]
    assert capsys.readouterr().err.count("check record of") == 3
    assert not list(tmp_path.glob(".doubler*"))


def test_the_waiting_room_is_gone_whatever_happens(tmp_path: Path) -> None:
    with pytest.raises(InputError, match=r"lug\.check\.html can't be written"), waiting_room(tmp_path / "r") as staged:
        put_in_place([many.record_paths(Path("lug.xlsx"), tmp_path / "r")], staged)
    assert not list(tmp_path.glob(".doubler*"))
    (tmp_path / "file").write_text("")
    with pytest.raises(InputError, match="is a file; give another"), waiting_room(tmp_path / "file" / "r"):
        pass


def test_what_cannot_be_checked_is_told_as_such(tmp_path: Path) -> None:
    found = many.check_one(tmp_path / "missing.xlsx", Wish())
    assert isinstance(found, Refusal)
    assert not found.own


@pytest.mark.skipif(os.name != "posix", reason="signals and /proc")
def test_a_break_ends_the_processes_and_leaves_nothing_behind(tmp_path: Path) -> None:
    paths = books(tmp_path, 40)
    call = [sys.executable, "-m", "doubler", "check", *map(str, paths), "--record", str(tmp_path / "record")]
    running = subprocess.Popen(call, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True)
    children: set[int] = set()
    for _ in range(200):
        children |= {pid for pid, _ in descendants(running.pid)}
        if any("spawn_main" in line for _, line in descendants(running.pid)):
            break
        time.sleep(0.02)
    running.send_signal(signal.SIGINT)
    _, said = running.communicate(timeout=60)
    assert running.returncode == 130, said
    assert "stopped" in said
    assert "Traceback" not in said
    for _ in range(200):
        if not any(Path(f"/proc/{pid}/cmdline").exists() for pid in children):
            break
        time.sleep(0.02)
    assert not [pid for pid in children if Path(f"/proc/{pid}/cmdline").exists()]
    assert not list(tmp_path.glob(".doubler*"))
    assert not (tmp_path / "record").exists()


def descendants(parent: int) -> list[tuple[int, str]]:
    """Return the processes that a process started, with their command lines."""
    found = []
    for folder in Path("/proc").glob("[0-9]*"):
        try:
            fields = (folder / "stat").read_text().rpartition(")")[2].split()
            line = (folder / "cmdline").read_text().replace("\0", " ")
        except OSError:
            continue
        if int(fields[1]) == parent:
            found.append((int(folder.name), line))
    return found
