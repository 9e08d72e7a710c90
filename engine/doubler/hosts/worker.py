"""The worker: a long-lived process in the tool's own environment that answers calls, one line each.

A request is ``[serial, verb, name, body]``, an answer ``[serial, body]``, both JSON on one line. The first line it
writes is its greeting. It ends when its input ends, or when the process that started it is gone.
"""

from __future__ import annotations

import hashlib
import json
import os
import sys
import threading
import time
from typing import Any, BinaryIO

from doubler import __version__, catalogue
from doubler.errors import ErrorValue

PROTOCOL = 1


def catalogue_digest() -> str:
    """Return a digest of the catalogue's names and arguments: what an installed skin relies on."""
    signatures = [
        [name, [[a.name, a.optional] for a in function.arguments]]
        for name in catalogue.names()
        if (function := catalogue.lookup(name)) is not None
    ]
    return hashlib.sha256(json.dumps(signatures).encode()).hexdigest()[:16]


def greeting() -> dict[str, Any]:
    """Return what the worker says first, for the version handshake."""
    return {"protocol": PROTOCOL, "version": __version__, "digest": catalogue_digest()}


def decoded(body: Any) -> Any:
    """Turn a cell value or range of a request into what the catalogue takes: an error value is a list of its text."""
    if isinstance(body, list):
        return [[_cell(cell) for cell in row] for row in body]
    return _cell(body)


def _cell(cell: Any) -> Any:
    if type(cell) is float or type(cell) is str or cell is None:
        return cell
    if isinstance(cell, bool):
        return cell
    if isinstance(cell, int):
        return float(cell)
    if isinstance(cell, dict):
        return error_value(str(cell.get("error")))
    return str(cell)


def error_value(text: str) -> ErrorValue:
    """Return the error value of that text, #VALUE! where Excel has none such."""
    try:
        return ErrorValue(text)
    except ValueError:
        return ErrorValue.VALUE


def encoded(value: Any) -> Any:
    """Turn one value of a result into JSON: an error value is a list of its text."""
    if isinstance(value, ErrorValue):
        return [value.value]
    if isinstance(value, str) or value is None:
        return value
    number = float(value)
    return number if number - number == 0.0 else [ErrorValue.NUM.value]


def answer(verb: str, name: str, body: Any) -> Any:
    """Answer one request; a fault of our own becomes an error value with its reason, never silence."""
    function = catalogue.lookup(name)
    if function is None:
        grid: list[list[Any]] = [[["#NAME?"]]]
        reasons: tuple[str, ...] = (f"there is no worksheet function {name}",)
    else:
        try:
            result = catalogue.call_cells(function, [decoded(argument) for argument in body])
            grid, reasons = [[encoded(value) for value in row] for row in result.grid], result.reasons
        except Exception as fault:
            grid, reasons = [[["#VALUE!"]]], (f"{name}: a fault of the program: {type(fault).__name__}: {fault}",)
    return "; ".join(reasons) if verb == "reason" else [grid, list(reasons)]


def serve(source: BinaryIO, target: BinaryIO) -> None:
    """Answer requests until the input ends."""
    target.write(json.dumps(greeting()).encode("ascii") + b"\n")
    target.flush()
    for line in source:
        serial, verb, name, body = json.loads(line)
        reply = [serial, answer(verb, name, body)]
        target.write(json.dumps(reply, separators=(",", ":"), allow_nan=False).encode("ascii") + b"\n")
        target.flush()


def _end_with_parent(parent: int) -> None:
    """End this process when the one that started it is gone, even in the middle of a call."""
    while os.getppid() == parent:
        time.sleep(1.0)
    os._exit(0)


def main() -> None:
    """Run the worker on the process's standard input and output; stray output goes to standard error."""
    from doubler import mechanics

    # The pipe gets a number of its own: whatever prints, or writes to descriptor 1, cannot reach it.
    pipe = os.fdopen(os.dup(1), "wb")
    os.dup2(2, 1)
    source = os.fdopen(os.dup(0), "rb")
    nothing = os.open(os.devnull, os.O_RDONLY)
    os.dup2(nothing, 0)
    os.close(nothing)
    sys.stdout = sys.stderr
    if os.name == "posix":
        threading.Thread(target=_end_with_parent, args=(os.getppid(),), daemon=True).start()
    mechanics.load()
    try:
        serve(source, pipe)
    except BrokenPipeError:
        os._exit(0)


if __name__ == "__main__":
    main()
