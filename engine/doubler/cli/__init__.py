"""The command line. Parsing loads nothing heavy; each verb loads what it needs when it is called."""

from __future__ import annotations

import errno
import os
import sys
from collections.abc import Sequence

from doubler.errors import InputError

DONE, FOUND, WRONG_INPUT, OWN_FAULT = 0, 1, 2, 3
"""Exit statuses: done; done, and an error or a negative margin was found; wrong call or input; our own fault."""
_FROM_OUTSIDE = {
    errno.ENAMETOOLONG, errno.ELOOP, errno.ENOSPC, errno.EDQUOT, errno.EFBIG, errno.EROFS, errno.EACCES, errno.EPERM,
}  # fmt: skip


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command and return its exit status.

    Parameters
    ----------
    arguments : sequence of str, optional
        The words after ``doubler``; by default those of the process.

    Returns
    -------
    int
        0 done, 1 something of severity error or a negative margin was found, 2 the call or its input is wrong, 3 the
        program's own fault.
    """
    from doubler.cli.arguments import parser

    try:
        options = parser().parse_args(arguments)
    except SystemExit as stop:
        return int(stop.code or 0)
    try:
        return _run(options.verb, options)
    except InputError as error:
        print(f"doubler {options.verb}: {error}", file=sys.stderr)
        return WRONG_INPUT
    except BrokenPipeError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return DONE
    except KeyboardInterrupt:
        print(f"doubler {options.verb}: stopped; what is written is whole, the same call goes on", file=sys.stderr)
        return 130
    except Exception as fault:
        if isinstance(fault, OSError) and fault.errno in _FROM_OUTSIDE:
            where = f"{fault.filename}: " if fault.filename else ""
            reason = (fault.strerror or str(fault)).lower()
            print(f"doubler {options.verb}: {where}{reason}; give another file or folder, or mend it", file=sys.stderr)
            return WRONG_INPUT
        print(
            f"doubler {options.verb}: a fault of the program itself: {type(fault).__name__}: {fault}", file=sys.stderr
        )
        if os.environ.get("DOUBLER_TRACEBACK"):
            raise
        print("Set DOUBLER_TRACEBACK=1 to see where; please report it with the file that shows it.", file=sys.stderr)
        return OWN_FAULT


def _run(verb: str, options: object) -> int:
    import importlib

    module = importlib.import_module(f"doubler.cli.{_MODULES[verb]}")
    return int(getattr(module, f"run_{verb}")(options))


_MODULES = {
    "demo": "demonstration",
    "eval": "calculator",
    "functions": "calculator",
    "fill": "cases",
    "sweep": "cases",
    "size": "cases",
    "check": "checking",
    "explain": "checking",
    "host": "programs",
}
