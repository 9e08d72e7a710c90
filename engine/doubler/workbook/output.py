"""Writing a file so that it is whole or not there: a temporary file beside the target, then one rename."""

from __future__ import annotations

import errno
import itertools
import os
import re
import stat
import threading
from collections.abc import Iterable
from pathlib import Path

from doubler.errors import InputError

_COUNTER = itertools.count()
_TEMPORARY = re.compile(r"\.doubler-(\d+)-\d+-\d+\.tmp")
_FULL = {errno.ENOSPC, errno.EDQUOT, errno.EFBIG}


def write_file(target: Path, pieces: Iterable[bytes | memoryview]) -> None:
    """Write a file from pieces; where it fails, the target is as it was and nothing is left beside it.

    Parameters
    ----------
    target : Path
        The file to write or to replace.
    pieces : iterable of bytes
        Its content.

    Raises
    ------
    InputError
        Where the folder is missing, the target is read-only or a folder, or the disk is full.
    """
    refuse_target(target)
    temporary = temporary_beside(target)
    try:
        # Not opened for replacing: a file of that name is not ours.
        descriptor = os.open(temporary, os.O_CREAT | os.O_EXCL | os.O_WRONLY | getattr(os, "O_BINARY", 0), 0o666)
        try:
            with open(descriptor, "wb") as stream:
                stream.write(b"".join(pieces))
            os.replace(temporary, target)
        except BaseException:
            temporary.unlink(missing_ok=True)
            raise
    except OSError as error:
        raise output_error(target, error) from None


def temporary_beside(target: Path) -> Path:
    """Return a free name for a temporary file in the target's folder, short whatever the target is called."""
    return target.with_name(f".doubler-{os.getpid()}-{threading.get_ident()}-{next(_COUNTER)}.tmp")


def remove_left_behind(folder: Path) -> None:
    """Remove the temporary files of processes that were killed while they wrote into a folder.

    Parameters
    ----------
    folder : Path
        The folder; the caller keeps other runs out of it. Nothing is done where the system cannot say which processes
        are alive.
    """
    if os.name != "posix":
        return
    for path in folder.glob(".doubler-*.tmp"):
        owner = _TEMPORARY.fullmatch(path.name)
        if owner and not _is_alive(int(owner[1])):
            path.unlink(missing_ok=True)


def _is_alive(process: int) -> bool:
    try:
        os.kill(process, 0)
    except ProcessLookupError:
        return False
    except (OSError, OverflowError):
        return True
    return True


def refuse_target(target: Path) -> None:
    """Refuse a target that cannot be written, or is marked as not to be; a rename would pass over the mark.

    Parameters
    ----------
    target : Path
        The file to be written.

    Raises
    ------
    InputError
        Where the target or its folder is read-only, the target is a folder, or its folder is missing.
    """
    try:
        mode = target.stat().st_mode
    except FileNotFoundError as error:
        if not target.parent.is_dir():
            raise output_error(target, error) from None
        mode = None
    except PermissionError:
        mode = None
    except OSError as error:
        raise output_error(target, error) from None
    if mode is not None:
        if stat.S_ISDIR(mode):
            raise InputError(f"{target} is a folder; give the name of a file")
        if not mode & 0o222:
            raise InputError(f"{target} is read-only; write to another name, or allow writing to it")
    # On Windows the mark on a folder does not forbid writing into it.
    if os.name == "posix":
        try:
            if not target.parent.stat().st_mode & 0o222:
                raise InputError(f"{target.parent} is read-only; write to another folder, or allow writing to it")
        except OSError:
            return


def output_error(target: Path, error: OSError) -> InputError:
    """Say in one sentence why a file could not be written.

    Parameters
    ----------
    target : Path
        The file.
    error : OSError
        What the system reported.

    Returns
    -------
    InputError
        To be raised.
    """
    if error.errno in _FULL:
        return InputError(f"{target} can't be written: the disk is full; free some space or write elsewhere")
    if isinstance(error, (FileNotFoundError, NotADirectoryError)):
        return InputError(f"{target} can't be written: the folder {target.parent} does not exist; make it first")
    if isinstance(error, PermissionError):
        return InputError(f"{target} can't be written: no permission; close it in other programs or write elsewhere")
    return InputError(f"{target} can't be written ({error.strerror or error}); write to another name or folder")
