"""The side that lives inside LibreOffice: cell values to a worker process and back.

This file is copied into the extension. It keeps to the standard library and to Python 3.8, because LibreOffice may run
its own interpreter; everything else happens in the worker, in the tool's own environment.
"""

from __future__ import annotations

import struct
import threading
import time
from collections import OrderedDict
from typing import Any, Dict, List, Optional, Sequence, Tuple, cast  # noqa: UP035 - Python 3.8 inside LibreOffice

from doubler.hosts.calc_pipe import Rubbish, TimedOut, Worker, packed

PROTOCOL = 2
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
KEPT_CALLS = 32768
"""Calls whose result is kept; then the memory is begun anew."""
START_SECONDS = 60.0
"""How long a fresh worker may take until it greets."""
REST_SECONDS = 30.0
"""After two time-outs in a row, how long calls are refused at once instead of waiting again."""

Grid = Tuple[Tuple[Any, ...], ...]  # noqa: UP006
Answer = Tuple[Grid, Tuple[str, ...]]  # noqa: UP006


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

    Left out is None; a range is a sequence of rows with empty text for an empty cell, its empty rows at the end
    dropped; a range of one filled cell is that cell's value.
    """
    if given is None or isinstance(given, (str, float)):
        return given
    if isinstance(given, (bool, int)):
        return float(given)
    if not given:
        return (("",),)
    rows = given if isinstance(given[0], (tuple, list)) else (tuple(given),)
    end = len(rows)
    if end > 1:
        blanks = (("",) * len(rows[0]), (None,) * len(rows[0]))
        while end > 1 and tuple(rows[end - 1]) in blanks:
            end -= 1
        rows = rows[:end] if end < len(rows) else rows
    if end == 1 and len(rows[0]) == 1 and rows[0][0] not in ("", None):
        return cell_argument(rows[0][0])
    return rows


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
        self.worker: Optional[Worker] = None  # noqa: UP045
        self.asked = 0
        self._known: Dict[Any, Answer] = {}  # noqa: UP006
        self._lock = threading.RLock()
        self._timeouts = 0
        self._rest_until = 0.0

    # -- what the worksheet calls ------------------------------------------------------------------------------------

    def call(self, name: str, arguments: Sequence[Any]) -> Grid:
        """Evaluate a worksheet function; never raises, an error is an error value in the grid.

        The functions depend on their arguments alone, so that a result is kept for the same call.
        """
        given = trimmed(arguments)
        key: Any = (name, *given)
        try:
            known = self._known.get(key)
        except TypeError:  # a list among them
            known, key = None, None
        if known is not None:
            if known[1]:
                self._keep(name, known[1])
            return known[0]
        try:
            grid, reasons = cast("Answer", self.ask("call", name, given))
        except WorkerTrouble as trouble:
            return self.refuse(name, str(trouble))
        if reasons:
            self._keep(name, reasons)
        if key is not None and len(grid) < 16 and all(type(a) is not tuple or len(a) < 16 for a in given):
            if len(self._known) >= KEPT_CALLS:
                self._known.clear()
            self._known[key] = (grid, reasons)
        return grid

    def refuse(self, name: str, reason: str) -> Grid:
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
            if self._rest_until and time.monotonic() < self._rest_until:
                raise WorkerTrouble(
                    "the worker did not answer in time, twice; calls are tried again shortly, recalculate then"
                )
            seconds = float(self.settings["timeout"])
            for attempt in (1, 2):
                self.asked += 1
                try:
                    frame = packed(self.asked, (verb, name, body))
                except ValueError as error:
                    raise WorkerTrouble(f"{name}: an argument cannot be handed over ({error})") from error
                try:
                    answer = self._running().exchange(self.asked, frame, seconds)
                    if not fits(verb, answer):
                        raise Rubbish("an answer of another shape")
                except TimedOut as error:
                    self.stop()
                    self._note_timeout()
                    raise WorkerTrouble(f"{name}: no answer within {seconds:g} s") from error
                except (Rubbish, OSError, ValueError, EOFError, TypeError) as error:
                    self.stop()
                    if attempt == 2:
                        raise WorkerTrouble(
                            f"the worker {self.settings['command'][0]} does not answer ({error}); "
                            "run: doubler host calc status"
                        ) from error
                    continue
                self._timeouts = 0
                return answer
            raise WorkerTrouble("the worker does not answer")

    def stop(self) -> None:
        """End the worker, if there is one."""
        worker, self.worker = self.worker, None
        self._known.clear()
        if worker is not None:
            worker.end()

    # -- the process -------------------------------------------------------------------------------------------------

    def _running(self) -> Worker:
        if self.worker is not None:
            return self.worker
        self.worker = worker = Worker(self.settings["command"])
        greeting = worker.greeting(START_SECONDS)
        own = {"protocol": PROTOCOL, "version": self.settings["version"], "digest": self.settings["digest"]}
        if {key: greeting.get(key) for key in own} != own:
            self.stop()
            raise WorkerTrouble(
                f"the functions were installed by doubler {own['version']} and doubler {greeting.get('version')} "
                "is there now, or its catalogue changed; run: doubler host calc install"
            )
        return worker

    def _note_timeout(self) -> None:
        self._timeouts += 1
        if self._timeouts >= 2:
            self._timeouts = 0
            self._rest_until = time.monotonic() + REST_SECONDS

    def _keep(self, name: str, reasons: Sequence[str]) -> None:
        for reason in reasons:
            self.reasons.pop(reason, None)
            self.reasons[reason] = [name]
        while len(self.reasons) > KEPT_REASONS:
            self.reasons.popitem(last=False)


def fits(verb: str, answer: Any) -> bool:
    """Say whether an answer is one to that request: a text, or rows of cells and the reasons."""
    if verb == "reason":
        return isinstance(answer, str)
    if not isinstance(answer, tuple) or len(answer) != 2 or not isinstance(answer[1], tuple):
        return False
    grid = answer[0]
    return isinstance(grid, tuple) and bool(grid) and isinstance(grid[0], tuple) and bool(grid[0])


def trimmed(arguments: Sequence[Any]) -> List[Any]:  # noqa: UP006
    """Return the arguments for the worker, without those left out at the end."""
    cells = [cell_argument(argument) for argument in arguments]
    while cells and cells[-1] is None:
        cells.pop()
    return cells
