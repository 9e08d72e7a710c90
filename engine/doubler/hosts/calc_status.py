"""What keeps the functions from working in LibreOffice: each thing looked at, what was found, and its cure."""

from __future__ import annotations

import json
import os
import re
from collections.abc import Iterator
from dataclasses import asdict, dataclass
from pathlib import Path
from typing import Any

from doubler import __version__
from doubler.errors import InputError
from doubler.hosts import calc_profile
from doubler.hosts.calc_basic import PLAIN_NAMES_FROM
from doubler.hosts.calc_client import PROTOCOL
from doubler.hosts.calc_extension import settings
from doubler.hosts.calc_pipe import Rubbish, TimedOut, Worker

AGAIN = "run: doubler host calc install"
GREETING_SECONDS = 60.0

_SETTING = re.compile(
    r'<item oor:path="/org\.openoffice\.Office\.Common/Security/Scripting"><prop oor:name="(\w+)"[^>]*>'
    r"<value>([^<]*)</value>"
)


@dataclass(frozen=True, slots=True)
class Finding:
    """One thing that was looked at: what, whether it is as it should be, what was found, and the cure."""

    what: str
    right: bool
    found: str
    cure: str = ""


@dataclass(frozen=True, slots=True)
class Report:
    """What a command did or found: lines to print, findings, and whether all is right."""

    lines: tuple[str, ...]
    findings: tuple[Finding, ...] = ()
    right: bool = True

    def as_object(self) -> dict[str, Any]:
        """Return it for ``--json``."""
        return {"right": self.right, "lines": list(self.lines), "findings": [asdict(f) for f in self.findings]}


def report(found: list[Finding]) -> Report:
    """Return findings as a report: a line each, its cure where it is not right."""
    lines = [
        f"{'ok ' if f.right else 'BAD'} {f.what}: {f.found}" + ("" if f.right or not f.cure else f" -> {f.cure}")
        for f in found
    ]
    return Report(tuple(lines), tuple(found), all(f.right for f in found))


def installed_settings(profile: Path) -> list[dict[str, Any]]:
    """Return the settings of the extensions of ours that a profile has installed.

    The folder of a removed extension stays until LibreOffice starts the next time; the list beside it tells which hold.
    """
    cache = profile / "user" / "uno_packages" / "cache"
    listed = cache / "uno_packages.pmap"
    known = listed.read_bytes() if listed.is_file() else b""
    paths = sorted((cache / "uno_packages").glob("*/*/doubler_settings.json"))
    return [
        json.loads(path.read_text("utf-8"))
        for path in paths
        if path.parent.parent.name.removesuffix("_").encode() in known
    ]


def status(profile: Path) -> Report:
    """Name versions, and everything that keeps the functions from working, each with its cure."""
    found = [Finding("doubler", True, __version__)]
    try:
        program = calc_profile.program()
    except InputError as error:
        found.append(Finding("LibreOffice", False, "not found", str(error)))
        return report(found)
    version = calc_profile.version(program)
    found += _program(program, version)
    found += _profile(profile)
    installed = installed_settings(profile)
    found.append(Finding("extension", len(installed) == 1, f"{len(installed)} in the profile {profile}", AGAIN))
    for own in installed:
        found += _worker(own)
    if installed:
        found += _plain_names(profile, version)
    return report(found)


def _program(program: Path, version: tuple[int, ...]) -> Iterator[Finding]:
    told = ".".join(map(str, version)) or "it does not say its version"
    cure = "the program does not start; repair LibreOffice"
    yield Finding("LibreOffice", bool(version), f"{told} at {program}", cure)
    caged = _caged(program)
    if caged:
        yield Finding(
            "LibreOffice's package",
            False,
            f"it comes as a {caged} package, which may not start programs outside itself, as the functions need",
            "install LibreOffice from the distribution or from libreoffice.org instead",
        )
    yield Finding(
        "Python in LibreOffice",
        calc_profile.has_python_support(program),
        "the loader of Python components is there" if calc_profile.has_python_support(program) else "it is missing",
        "install LibreOffice's Python part (Debian: apt install python3-uno)",
    )
    python = calc_profile.uno_python(program)
    yield Finding(
        "Python with uno",
        python is not None,
        str(python or "none found"),
        "install it (Debian: apt install python3-uno); `install`, `remove` and `test` need it",
    )


def _caged(program: Path) -> str:
    """Return the kind of package that locks LibreOffice in, empty for none."""
    path = str(program.resolve())
    if "/snap/" in path or path.endswith("/usr/bin/snap"):
        return "Snap"
    return "Flatpak" if "/flatpak/" in path else ""


def _profile(profile: Path) -> Iterator[Finding]:
    folder = profile / "user"
    if profile.exists() and not os.access(folder if folder.exists() else profile, os.W_OK):
        yield Finding("profile", False, f"{profile} may not be written", "give it back to its user (chown)")
    if calc_profile.is_open(profile):
        yield Finding(
            "LibreOffice runs",
            True,
            "on this profile, or it ended badly (its file .lock is there): what is installed now works after a restart",
        )
    registry = folder / "registrymodifications.xcu"
    if not registry.is_file():
        return
    switched = dict(_SETTING.findall(registry.read_text(encoding="utf-8", errors="replace")))
    for name, what in (
        ("DisablePythonRuntime", "Python"),
        ("DisableMacrosExecution", "all macros, and with them the Basic functions for plain names"),
    ):
        if switched.get(name) == "true":
            yield Finding(
                "macro security",
                False,
                f"the setting {name} switches off {what}",
                f"set it to false under Tools > Options > Advanced > Open Expert Configuration ({name})",
            )


def _worker(own: dict[str, Any]) -> Iterator[Finding]:
    now = settings()
    interpreter = Path(own["command"][0])
    there = interpreter.is_file()
    yield Finding("worker's Python", there, str(interpreter), f"that Python is gone; {AGAIN}")
    same = (own["version"], own["digest"]) == (now["version"], now["digest"])
    yield Finding(
        "versions",
        same,
        f"installed by doubler {own['version']} ({own['digest']}), now {now['version']} ({now['digest']})",
        AGAIN,
    )
    if there:
        yield _greets(own)


def _greets(own: dict[str, Any]) -> Finding:
    """Start the worker as LibreOffice would, and see that it greets."""
    cure = f"call {' '.join(own['command'])} in a terminal to see why; then {AGAIN}"
    try:
        worker = Worker(own["command"])
    except OSError as error:
        return Finding("worker", False, f"it cannot be started ({error})", cure)
    try:
        greeting = worker.greeting(GREETING_SECONDS)
    except (Rubbish, TimedOut, OSError, ValueError) as error:
        return Finding("worker", False, f"it does not greet ({error or 'no answer in time'})", cure)
    finally:
        worker.end()
    told = {key: greeting.get(key) for key in ("protocol", "version", "digest")}
    right = told == {"protocol": PROTOCOL, "version": own["version"], "digest": own["digest"]}
    return Finding("worker", right, f"starts and is doubler {told['version']} ({told['digest']})", AGAIN)


def _plain_names(profile: Path, version: tuple[int, ...]) -> Iterator[Finding]:
    modules = list((profile / "user" / "basic" / "Standard").glob("doubler_cells_*.xba"))
    if version and version[:2] < PLAIN_NAMES_FROM:
        found = f"{len(modules)} Basic modules, which this version of LibreOffice needs for them"
        yield Finding("plain names in .xlsx", bool(modules), found, AGAIN)
    elif modules:
        found = f"{len(modules)} Basic modules of an older LibreOffice, which this version does not need"
        yield Finding("plain names in .xlsx", False, found, AGAIN)
