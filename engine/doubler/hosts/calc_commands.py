"""`doubler host calc install | remove | status | test`."""

from __future__ import annotations

import tempfile
from collections.abc import Sequence
from pathlib import Path
from typing import Any

from doubler import __version__
from doubler.errors import ErrorValue, InputError
from doubler.hosts import calc_profile, conformance
from doubler.hosts.calc_basic import PLAIN_NAMES_FROM, install_basic, remove_basic
from doubler.hosts.calc_client import error_text
from doubler.hosts.calc_extension import IDENTIFIER, host_functions, write_extension
from doubler.hosts.calc_status import Finding, Report, status


def run(action: str, profile: Path | None) -> Report:
    """Do one of install, remove, status, test on a profile, by default the user's own."""
    where = (profile or calc_profile.default_profile()).resolve()
    return {"install": install, "remove": remove, "status": status, "test": test}[action](where)


def _closed(profile: Path) -> None:
    if calc_profile.is_open(profile):
        raise InputError(
            f"LibreOffice is open on the profile {profile} (its file .lock is there); close it, then call again"
        )


def install(profile: Path, command: Sequence[str] | None = None, timeout: float | None = None) -> Report:
    """Install the functions for the user of a profile; `command` and `timeout` as in `calc_extension.settings`."""
    program = calc_profile.program()
    _closed(profile)
    if not calc_profile.has_python_support(program):
        raise InputError(
            f"the LibreOffice at {program} cannot run Python; install its part for that (Debian: python3-uno)"
        )
    functions = host_functions()
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "doubler.oxt"
        write_extension(path, command, **({} if timeout is None else {"timeout": timeout}))
        with calc_profile.Driven(profile, program) as office:
            office("uninstall", IDENTIFIER)
            there = office("install", str(path))
            version = office.version
    if f"{IDENTIFIER} {__version__}" not in there:
        raise InputError(f"LibreOffice took the extension and does not list it; it lists: {', '.join(there) or 'none'}")
    lines = [
        f"{len(functions)} worksheet functions are installed for LibreOffice {version}, profile {profile}",
        "they are in the function wizard under Add-In; formulas begin with =STRESS_, =SECTION_, =MARGIN_ and so on",
    ]
    if _needs_basic(version):
        written = install_basic(profile, functions)
        lines.append(
            f"{len(written)} Basic modules in {profile / 'user' / 'basic' / 'Standard'} keep the plain names in .xlsx "
            "files, which this version of LibreOffice would not know"
        )
    else:
        remove_basic(profile)
    lines.append("to undo all of it: doubler host calc remove")
    return Report(tuple(lines))


def _needs_basic(version: str) -> bool:
    parts = tuple(int(part) for part in version.split(".")[:2] if part.isdigit())
    return parts < PLAIN_NAMES_FROM


def remove(profile: Path) -> Report:
    """Remove the functions from a profile."""
    if not profile.exists():
        return Report((f"there is no profile at {profile}; nothing was installed there",))
    _closed(profile)
    modules = remove_basic(profile)
    with calc_profile.Driven(profile) as office:
        before = [name for name in office("installed") if name.startswith(f"{IDENTIFIER} ")]
        left = office("uninstall", IDENTIFIER)
    if any(name.startswith(f"{IDENTIFIER} ") for name in left):
        raise InputError("LibreOffice did not remove the extension; remove it in Tools > Extension Manager")
    if not before and not modules:
        return Report((f"nothing of doubler was installed in the profile {profile}",))
    return Report(
        (f"removed from the profile {profile}: {', '.join(before) or 'no extension'}, {len(modules)} modules",)
    )


def test(profile: Path) -> Report:
    """Open the conformance workbook in LibreOffice and compare every function with the Python engine."""
    _closed(profile)
    known = conformance.calls()
    with tempfile.TemporaryDirectory() as folder, calc_profile.Driven(profile) as office:
        path = Path(folder) / "conformance.xlsx"
        where = conformance.write_workbook(path, known)
        wrong = compare(office, path, where)
        version = office.version
    names = {call.function for call in known}
    lines = [f"{len(names)} functions in {len(known)} calls, LibreOffice {version}: {len(wrong)} cells differ"]
    findings = tuple(Finding("call", False, sentence) for sentence in wrong)
    return Report((*lines, *wrong), findings, not wrong)


test.__test__ = False  # type: ignore[attr-defined]  # not a test of ours: a verb of the command line


def compare(office: calc_profile.Driven, path: Path, where: Sequence[conformance.Placed]) -> list[str]:
    """Open a conformance workbook in a session, recalculate it, and return a sentence for each cell that differs."""
    office("open", "conformance", str(path))
    try:
        office("calculate", "conformance")
        shown = office("read_many", "conformance", conformance.SHEET, [item.block for item in where])
    finally:
        office("shut", "conformance")
    return [
        sentence
        for item, grid in zip(where, shown, strict=True)
        for sentence in conformance.differences([[_value(cell) for cell in row] for row in grid], item.call)
    ]


def _value(cell: Any) -> Any:
    return ErrorValue(error_text(cell["error"])) if isinstance(cell, dict) else cell
