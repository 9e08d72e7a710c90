"""The side that lives inside LibreOffice: cell values to a worker process and back.

This file is copied into the extension. It keeps to the standard library and to Python 3.8, because LibreOffice may run
its own interpreter; everything else happens in the worker, in the tool's own environment.
"""

from __future__ import annotations

import json
import os
import struct
import subprocess
import threading
import time
from collections import OrderedDict
from typing import Any, Dict, List, Optional, Sequence, Tuple  # noqa: UP035 - Python 3.8 inside LibreOffice

PROTOCOL = 1
CODES = {
    "#NULL!": 521,
    "#DIV/0!": 532,
    "#VALUE!": 519,
    "#REF!": 524,
    "#NAME?": 525,
    "#NUM!": 503,
    "#N/A": 32767,
}
"""Calc's error code of each error value."""

KEPT_REASONS = 2000
START_SECONDS = 60.0
"""How long a fresh worker may take until it greets."""
REST_SECONDS = 30.0
"""After two time-outs in a row, how long calls are refused at once instead of waiting again."""


def error_text(code: int) -> str:
    """Return the error value of a Calc error code; codes of Calc alone count as #VALUE!."""
    return next((text for text, own in CODES.items() if own == code), "#VALUE!")


def error_number(text: str) -> float:
    """Return the NaN that Calc shows as an error value: its payload is the error code."""
    code = CODES.get(text, CODES["#VALUE!"])
    return float(struct.unpack("<d", struct.pack("<Q", 0x7FF8000000000000 | code))[0])


ERRORS = {text: error_number(text) for text in CODES}


class WorkerTrouble(Exception):
    """The worker gave no answer; the sentence says why."""


def cell_argument(given: Any) -> Any:
    """Turn one argument as Calc hands it over into what the worker reads.

    Left out is None; a range is a list of rows with None for an empty cell, its empty rows and columns at the end
    dropped; a range of one filled cell is that cell's value.
    """
    if given is None or isinstance(given, (str, float)):
        return given
    if isinstance(given, (bool, int)):
        return float(given)
    rows = list(given)
    if not rows:
        return [[None]]
    if not isinstance(rows[0], (tuple, list)):
        rows = [tuple(rows)]
    blanks = (("",) * len(rows[0]), (None,) * len(rows[0]))
    while len(rows) > 1 and tuple(rows[-1]) in blanks:
        rows.pop()
    if len(rows) == 1 and len(rows[0]) == 1 and rows[0][0] not in ("", None):
        return cell_argument(rows[0][0])
    return [[None if cell == "" else cell for cell in row] for row in rows]


def grid_of(reply: Sequence[Sequence[Any]]) -> tuple[tuple[Any, ...], ...]:
    """Turn the rows of a reply into what Calc shows: an error stands in the reply as a list of its text."""
    return tuple(
        tuple(
            ERRORS.get(cell[0], ERRORS["#VALUE!"]) if isinstance(cell, list) else ("" if cell is None else cell)
            for cell in row
        )
        for row in reply
    )


class Client:
    """Keeps one worker for the program's life, starts it when first needed, and ends it with the program.

    Parameters
    ----------
    settings : dict
        ``command`` (the worker's words), ``version`` and ``digest`` of the tool that made the extension,
        ``timeout`` in seconds, ``functions`` (the names served).
    """

    def __init__(self, settings: Dict[str, Any]) -> None:  # noqa: UP006
        self.settings = settings
        self.reasons: OrderedDict[str, List[str]] = OrderedDict()  # noqa: UP006
        self._process: Optional[subprocess.Popen[bytes]] = None  # noqa: UP045
        self._lock = threading.RLock()
        self._serial = 0
        self._deadline: Optional[float] = None  # noqa: UP045
        self._timed_out = False
        self._timeouts = 0
        self._rest_until = 0.0
        self._watching = False

    # -- what the worksheet calls ------------------------------------------------------------------------------------

    def call(self, name: str, arguments: Sequence[Any]) -> Tuple[Tuple[Any, ...], ...]:  # noqa: UP006
        """Evaluate a worksheet function; never raises, an error is an error value in the grid."""
        try:
            grid, reasons = self.ask("call", name, trimmed(arguments))
        except WorkerTrouble as trouble:
            return self.refuse(name, str(trouble))
        if reasons:
            self._keep(name, reasons)
        return grid_of(grid)

    def refuse(self, name: str, reason: str) -> Tuple[Tuple[float]]:  # noqa: UP006
        """Give the error value #VALUE! and keep the reason."""
        self._keep(name, [reason])
        return ((ERRORS["#VALUE!"],),)

    def reason(self, name: str, arguments: Sequence[Any]) -> str:
        """Say why the call of that function with these arguments gives an error; empty text where it gives none."""
        try:
            return str(self.ask("reason", name, trimmed(arguments)))
        except WorkerTrouble as trouble:
            return str(trouble)

    def ask(self, verb: str, name: str, body: Any) -> Any:
        """Send one request and return the answer; a worker that died is started anew and asked once more."""
        with self._lock:
            if time.monotonic() < self._rest_until:
                raise WorkerTrouble(
                    "the worker did not answer in time, twice; calls are tried again shortly, recalculate then"
                )
            for attempt in (1, 2):
                self._serial += 1
                line = json.dumps([self._serial, verb, name, body], separators=(",", ":")).encode("ascii") + b"\n"
                try:
                    process = self._running()
                    answer = self._exchange(process, line, float(self.settings["timeout"]))
                    if answer[0] != self._serial:
                        raise ValueError("an answer to another question")
                except (OSError, ValueError, IndexError, KeyError, TypeError) as error:
                    self.stop()
                    if self._timed_out:
                        self._note_timeout()
                        raise WorkerTrouble(f"{name}: no answer within {self.settings['timeout']:g} s") from error
                    if attempt == 2:
                        raise WorkerTrouble(
                            f"the worker {self.settings['command'][0]} does not answer ({error}); "
                            "run: doubler host calc status"
                        ) from error
                    continue
                self._timeouts = 0
                return answer[1]
            raise WorkerTrouble("the worker does not answer")

    def stop(self) -> None:
        """End the worker, if there is one."""
        process, self._process = self._process, None
        if process is None:
            return
        for pipe in (process.stdin, process.stdout):
            try:
                if pipe is not None:
                    pipe.close()
            except OSError:
                pass
        if process.poll() is None:
            process.kill()
        process.wait()

    # -- the process -------------------------------------------------------------------------------------------------

    def _running(self) -> subprocess.Popen[bytes]:
        if self._process is not None and self._process.poll() is None:
            return self._process
        self.stop()
        clean = {
            key: value
            for key, value in os.environ.items()
            if not key.startswith("PYTHON") and key not in ("LD_LIBRARY_PATH", "DYLD_LIBRARY_PATH", "URE_BOOTSTRAP")
        }
        process = subprocess.Popen(
            self.settings["command"],
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            stderr=subprocess.DEVNULL,
            env=clean,
            creationflags=getattr(subprocess, "CREATE_NO_WINDOW", 0),
        )
        self._process = process
        greeting = self._exchange(process, b"", START_SECONDS)
        own = {"protocol": PROTOCOL, "version": self.settings["version"], "digest": self.settings["digest"]}
        if {key: greeting.get(key) for key in own} != own:
            self.stop()
            raise WorkerTrouble(
                f"the functions were installed by doubler {own['version']} and doubler {greeting.get('version')} "
                "is there now, or its catalogue changed; run: doubler host calc install"
            )
        return process

    def _exchange(self, process: subprocess.Popen[bytes], line: bytes, seconds: float) -> Any:
        if not self._watching:
            self._watching = True
            threading.Thread(target=self._watch, name="doubler-watch", daemon=True).start()
        assert process.stdin is not None
        assert process.stdout is not None
        self._timed_out = False
        self._deadline = time.monotonic() + seconds
        try:
            if line:
                process.stdin.write(line)
                process.stdin.flush()
            reply = process.stdout.readline()
        finally:
            self._deadline = None
        if not reply:
            raise OSError("it ended")
        return json.loads(reply)

    def _watch(self) -> None:
        """Kill the worker that keeps a call waiting beyond its time: reading and writing then come back at once."""
        while True:
            time.sleep(0.1)
            deadline, process = self._deadline, self._process
            if deadline is not None and process is not None and time.monotonic() > deadline:
                self._timed_out = True
                self._deadline = None
                process.kill()

    def _note_timeout(self) -> None:
        self._timeouts += 1
        if self._timeouts >= 2:
            self._timeouts = 0
            self._rest_until = time.monotonic() + REST_SECONDS

    def _keep(self, name: str, reasons: List[str]) -> None:  # noqa: UP006
        for reason in reasons:
            self.reasons.pop(reason, None)
            self.reasons[reason] = [name]
        while len(self.reasons) > KEPT_REASONS:
            self.reasons.popitem(last=False)


def trimmed(arguments: Sequence[Any]) -> List[Any]:  # noqa: UP006
    """Return the arguments for the worker, without those left out at the end."""
    cells = [cell_argument(argument) for argument in arguments]
    while cells and cells[-1] is None:
        cells.pop()
    return cells
