"""Whatever keeps the functions from working in LibreOffice is named, with its cure."""

import json
import sys
from pathlib import Path

import pytest

from doubler.errors import InputError
from doubler.hosts import calc_profile, calc_status
from doubler.hosts.calc_extension import settings


@pytest.fixture
def program(tmp_path, monkeypatch):
    """A LibreOffice in which all is right; its version and place can be changed."""
    folder = tmp_path / "office" / "program"
    folder.mkdir(parents=True)
    (folder / "soffice").write_text("")
    (folder / "pythonloader.py").write_text("")
    monkeypatch.setattr(calc_profile, "program", lambda: folder / "soffice")
    monkeypatch.setattr(calc_profile, "SYSTEM_FOLDERS", ())
    monkeypatch.setattr(calc_profile, "version", lambda _: (25, 2, 3))
    monkeypatch.setattr(calc_profile, "uno_python", lambda _: Path("/usr/bin/python3"))
    return folder


@pytest.fixture
def profile(tmp_path, program):
    """A profile as `install` leaves it."""
    made = tmp_path / "profile"
    folder = made / "user" / "uno_packages" / "cache" / "uno_packages" / "lu1.tmp_" / "doubler.oxt"
    folder.mkdir(parents=True)
    (folder / "doubler_settings.json").write_text(json.dumps(settings()))
    (folder.parents[2] / "uno_packages.pmap").write_bytes(b"Pmp1\0doubler.functions\0lu1.tmp\0doubler.oxt\0")
    return made


def change(profile, **told):
    [path] = profile.rglob("doubler_settings.json")
    path.write_text(json.dumps({**json.loads(path.read_text()), **told}))


def bad(profile):
    report = calc_status.status(profile)
    found = {finding.what: finding for finding in report.findings if not finding.right}
    assert report.right is not bool(found)
    assert all(finding.cure for finding in found.values())
    assert all(f.cure in line for f in found.values() for line in report.lines if line.startswith(f"BAD {f.what}"))
    return found


def test_where_all_is_right_nothing_is_named_and_the_worker_was_started(profile):
    assert not bad(profile)
    assert any("worker: starts and is doubler" in line for line in calc_status.status(profile).lines)


def test_no_libreoffice(monkeypatch, profile):
    def missing():
        raise InputError("LibreOffice was not found; install it")

    monkeypatch.setattr(calc_profile, "program", missing)
    assert set(bad(profile)) == {"LibreOffice"}


def test_no_python_in_libreoffice_and_none_with_uno(monkeypatch, profile, program):
    (program / "pythonloader.py").unlink()
    monkeypatch.setattr(calc_profile, "uno_python", lambda _: None)
    assert set(bad(profile)) == {"Python in LibreOffice", "Python with uno"}


@pytest.mark.parametrize("place", ["snap/libreoffice/1/program", "flatpak/app/program"])
def test_a_package_that_locks_libreoffice_in(tmp_path, monkeypatch, profile, place):
    folder = tmp_path / place
    folder.mkdir(parents=True)
    for name in ("soffice", "pythonloader.py"):
        (folder / name).write_text("")
    monkeypatch.setattr(calc_profile, "program", lambda: folder / "soffice")
    assert set(bad(profile)) == {"LibreOffice's package"}


def test_nothing_installed_or_only_the_remains_of_it(profile):
    [listed] = profile.rglob("uno_packages.pmap")
    listed.write_bytes(b"Pmp1\0")
    assert set(bad(profile)) == {"extension"}
    assert set(bad(profile / "other")) == {"extension"}


def test_a_worker_whose_python_is_gone_or_that_does_not_greet(profile, tmp_path):
    change(profile, command=["/no/such/python"])
    assert set(bad(profile)) == {"worker's Python"}
    change(profile, command=[sys.executable, "-c", "print('hello')"])
    assert set(bad(profile)) == {"worker"}
    change(profile, command=[sys.executable, "-c", "import json; print(json.dumps({'version': '9'}))"])
    assert set(bad(profile)) == {"worker"}


def test_another_version(profile):
    change(profile, version="0.0.1")
    assert set(bad(profile)) == {"versions", "worker"}
    change(profile, **settings())
    change(profile, digest="0")
    assert set(bad(profile)) == {"versions", "worker"}


def test_macro_security(profile):
    item = '<item oor:path="/org.openoffice.Office.Common/Security/Scripting"><prop oor:name="{}" oor:op="fuse">'
    registry = profile / "user" / "registrymodifications.xcu"
    for name in ("DisableMacrosExecution", "DisablePythonRuntime"):
        registry.write_text(f"<oor:items>{item.format(name)}<value>true</value></prop></item></oor:items>")
        assert name in bad(profile)["macro security"].cure
    registry.write_text(f"<oor:items>{item.format('DisableMacrosExecution')}<value>false</value></prop></item>")
    assert not bad(profile)


def test_plain_names_follow_the_version(monkeypatch, profile):
    monkeypatch.setattr(calc_profile, "version", lambda _: (7, 4, 7))
    assert set(bad(profile)) == {"plain names in .xlsx"}
    standard = profile / "user" / "basic" / "Standard"
    standard.mkdir(parents=True)
    (standard / "doubler_cells_0.xba").write_text("")
    assert not bad(profile)
    monkeypatch.setattr(calc_profile, "version", lambda _: (25, 2))
    assert set(bad(profile)) == {"plain names in .xlsx"}


def test_an_open_libreoffice_is_told_and_is_no_fault(profile):
    (profile / ".lock").write_text("")
    assert not bad(profile)
    assert any("after a restart" in line for line in calc_status.status(profile).lines)
