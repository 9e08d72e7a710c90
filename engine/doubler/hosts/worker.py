"""The worker: a long-lived process in the tool's own environment that answers calls.

The first line it writes is its greeting. Then requests come as frames of ``(verb, name, arguments)`` and are answered
by frames of what LibreOffice shows (`calc_pipe`). It ends when its input ends, or when the process that started it is
gone.
"""

from __future__ import annotations

import gc
import hashlib
import json
import math
import os
import sys
import threading
import time
from itertools import chain
from typing import Any

from doubler import __version__, catalogue
from doubler.errors import ErrorValue
from doubler.hosts.calc_client import ERRORS, PROTOCOL
from doubler.hosts.calc_pipe import Reader, packed, write

_PLAIN = {float, str}


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


def decoded(given: Any) -> Any:
    """Turn an argument into what the catalogue takes: empty text is an empty cell, a dict an error value."""
    kind = type(given)
    if kind is float or kind is str or given is None:
        return given
    if kind is not tuple and kind is not list:
        return _cell(given)
    if len(given) > 1:
        flat = list(chain.from_iterable(given))
        if set(map(type, flat)) <= _PLAIN and "" not in flat:
            return given
    return [[_cell(cell) for cell in row] for row in given]


def _cell(cell: Any) -> Any:
    if type(cell) is float:
        return cell
    if cell == "" or cell is None:
        return None
    if type(cell) is str or isinstance(cell, bool):
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
    """Turn one value of a result into what Calc shows: an error value is a NaN that names it."""
    if type(value) is float:
        return value if value - value == 0.0 else ERRORS[ErrorValue.NUM.value]
    if isinstance(value, ErrorValue):
        return ERRORS[value.value]
    if isinstance(value, str) or value is None:
        return value or ""
    return encoded(float(value))


def shown(grid: list[list[Any]]) -> tuple[tuple[Any, ...], ...]:
    """Turn a result into what Calc shows."""
    if len(grid) > 1:
        flat = list(chain.from_iterable(grid))
        if set(map(type, flat)) == {float} and all(map(math.isfinite, flat)):
            return tuple(map(tuple, grid))
    return tuple([tuple([encoded(value) for value in row]) for row in grid])


def answer(verb: str, name: str, body: Any) -> Any:
    """Answer one request; a fault of our own becomes an error value with its reason, never silence."""
    function = catalogue.lookup(name)
    grid: tuple[tuple[Any, ...], ...]
    reasons: tuple[str, ...]
    if function is None:
        grid, reasons = ((ERRORS["#NAME?"],),), (f"there is no worksheet function {name}",)
    else:
        try:
            result = catalogue.call_cells(function, [decoded(argument) for argument in body])
            grid, reasons = shown(result.grid), result.reasons
        except Exception as fault:
            grid, reasons = (
                ((ERRORS["#VALUE!"],),),
                (f"{name}: a fault of the program: {type(fault).__name__}: {fault}",),
            )
    return "; ".join(reasons) if verb == "reason" else (grid, reasons)


def serve(source: int, target: int) -> None:
    """Answer requests until the input ends; both are descriptors."""
    write(target, json.dumps(greeting()).encode("ascii") + b"\n", None)
    reader = Reader(source)
    while True:
        try:
            serial, (verb, name, body) = reader.frame(None)
        except OSError:
            return
        write(target, packed(serial, answer(verb, name, body)), None)


def _end_with_parent(parent: int) -> None:
    """End this process when the one that started it is gone, even in the middle of a call."""
    while os.getppid() == parent:
        time.sleep(1.0)
    os._exit(0)


def main() -> None:
    """Run the worker on the process's standard input and output; stray output goes to standard error."""
    from doubler import mechanics

    # The pipe gets a number of its own: whatever prints, or writes to descriptor 1, cannot reach it.
    target = os.dup(1)
    os.dup2(2, 1)
    source = os.dup(0)
    nothing = os.open(os.devnull, os.O_RDONLY)
    os.dup2(nothing, 0)
    os.close(nothing)
    sys.stdout = sys.stderr
    if os.name == "posix":
        threading.Thread(target=_end_with_parent, args=(os.getppid(),), daemon=True).start()
    mechanics.load()
    # What is loaded stays; a column of a hundred thousand rows must not set off a search through all of it.
    gc.collect()
    gc.freeze()
    gc.set_threshold(200_000, 20, 20)
    try:
        serve(source, target)
    except BrokenPipeError:
        os._exit(0)


if __name__ == "__main__":
    main()
