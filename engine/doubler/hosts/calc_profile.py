"""Finding LibreOffice: its program, its profile, the Python that has its ``uno`` module, and a driven session."""

from __future__ import annotations

import json
import os
import re
import shutil
import subprocess
import sys
from collections.abc import Iterator
from importlib import resources
from pathlib import Path
from types import TracebackType
from typing import Any

from doubler.errors import InputError

SYSTEM_FOLDERS = (
    "/usr/lib/libreoffice/program",
    "/opt/libreoffice/program",
    "/Applications/LibreOffice.app/Contents/MacOS",
    "C:/Program Files/LibreOffice/program",
    "C:/Program Files (x86)/LibreOffice/program",
)


def program() -> Path:
    """Return LibreOffice's program.

    Raises
    ------
    InputError
        Where it is not found.
    """
    for name in ("soffice", "libreoffice"):
        found = shutil.which(name)
        if found:
            return Path(found)
    for folder in SYSTEM_FOLDERS:
        for name in ("soffice", "soffice.exe"):
            if (Path(folder) / name).is_file():
                return Path(folder) / name
    raise InputError("LibreOffice was not found; install it, or put the folder of its program soffice on the PATH")


def version(of: Path) -> tuple[int, ...]:
    """Return the version of a LibreOffice program, empty where it does not say."""
    try:
        told = subprocess.run([str(of), "--version"], capture_output=True, text=True, timeout=60, check=False).stdout
    except (OSError, subprocess.TimeoutExpired):
        return ()
    found = re.search(r"(\d+(?:\.\d+)+)", told)
    return tuple(int(part) for part in found.group(1).split(".")) if found else ()


def default_profile() -> Path:
    """Return where LibreOffice keeps this user's profile."""
    home = Path.home()
    if sys.platform == "win32":
        return Path(os.environ.get("APPDATA", str(home / "AppData/Roaming"))) / "LibreOffice" / "4"
    if sys.platform == "darwin":
        return home / "Library/Application Support/LibreOffice/4"
    return Path(os.environ.get("XDG_CONFIG_HOME") or home / ".config") / "libreoffice" / "4"


def is_open(profile: Path) -> bool:
    """Return whether a LibreOffice has this profile open (its lock file is there)."""
    return (profile / ".lock").exists()


def has_python_support(of: Path) -> bool:
    """Return whether this LibreOffice can run Python components at all."""
    folders = {of.resolve().parent, *map(Path, SYSTEM_FOLDERS), of.resolve().parent.parent / "Resources"}
    return any((folder / "pythonloader.py").is_file() for folder in folders)


def _candidates(of: Path) -> Iterator[Path]:
    folder = of.resolve().parent
    yield folder / "python.exe"
    yield folder.parent / "Resources" / "python"
    yield folder / "python"
    yield Path("/usr/bin/python3")
    own = shutil.which("python3")
    if own:
        yield Path(own)


def uno_python(of: Path) -> Path | None:
    """Return a Python that has LibreOffice's ``uno`` module, or None."""
    for candidate in _candidates(of):
        if candidate.is_file():
            try:
                tried = subprocess.run(
                    [str(candidate), "-E", "-c", "import uno, unohelper"], capture_output=True, timeout=60, check=False
                )
            except (OSError, subprocess.TimeoutExpired):
                continue
            if tried.returncode == 0:
                return candidate
    return None


class Driven:
    """A LibreOffice on a profile, driven from here; use it in a ``with`` statement.

    Parameters
    ----------
    profile : Path
        The profile; made where it does not exist.
    of : Path, optional
        LibreOffice's program.
    visible : bool, optional
        Whether its windows are to be seen.

    Raises
    ------
    InputError
        Where LibreOffice, or a Python with its ``uno`` module, is missing, or the session does not start.
    """

    def __init__(self, profile: Path, of: Path | None = None, visible: bool = False) -> None:
        own = of or program()
        python = uno_python(own)
        if python is None:
            raise InputError(
                "no Python with LibreOffice's uno module was found; install it (Debian: apt install python3-uno)"
            )
        script = str(resources.files("doubler.hosts") / "calc_session.py")
        profile.mkdir(parents=True, exist_ok=True)
        self._process = subprocess.Popen(
            [str(python), "-E", script, str(own), profile.resolve().as_uri(), *(["visible"] if visible else [])],
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            text=True,
            encoding="utf-8",
        )
        try:
            self.version = str(self.answer())
        except InputError:
            self.close()
            raise

    def answer(self) -> Any:
        """Return the answer to what was asked."""
        assert self._process.stdout is not None
        line = self._process.stdout.readline()
        outcome, value = json.loads(line) if line else ("failed", "the session with LibreOffice ended")
        if outcome != "done":
            raise InputError(f"LibreOffice: {value}")
        return value

    def __call__(self, verb: str, *arguments: Any) -> Any:
        """Ask for one of the verbs of `calc_session.Session` and return its value."""
        self.send(verb, *arguments)
        return self.answer()

    def send(self, verb: str, *arguments: Any) -> None:
        """Ask without waiting; `answer` then waits."""
        assert self._process.stdin is not None
        try:
            self._process.stdin.write(json.dumps([verb, arguments]) + "\n")
            self._process.stdin.flush()
        except BrokenPipeError as error:
            raise InputError("LibreOffice: the session has ended") from error

    def close(self) -> None:
        """End the session and LibreOffice with it."""
        if self._process.stdin is not None and not self._process.stdin.closed:
            self._process.stdin.close()
        self._process.wait()
        if self._process.stdout is not None:
            self._process.stdout.close()

    def __enter__(self) -> Driven:
        """Give the session."""
        return self

    def __exit__(
        self, kind: type[BaseException] | None, value: BaseException | None, trace: TracebackType | None
    ) -> None:
        """End it."""
        self.close()
