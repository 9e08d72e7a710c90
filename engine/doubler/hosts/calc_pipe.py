"""The line between LibreOffice and the worker: frames over pipes, with a time limit.

Standard library and Python 3.8 only: one end lives inside LibreOffice. The worker greets with one line of JSON, which
every version can read; then frames go both ways, each a header (mark, serial number, length, checksum) and values in
Python's marshal format 2, which all versions share. What has no such header or another checksum is never taken for an
answer. Waiting begins with a short look at the pipe again and again: to be woken takes longer than most answers.
"""

from __future__ import annotations

import gc
import json
import marshal
import os
import struct
import subprocess
import threading
import time
import zlib
from typing import Any, Dict, Optional, Sequence, Tuple  # noqa: UP035 - Python 3.8 inside LibreOffice

MARK = b"DBL2"
_HEADER = struct.Struct("<4sIII")
_MARSHAL = 2
LONGEST_GREETING = 65536
CHUNK = 1 << 20
LARGE = 1 << 16
SPIN_SECONDS = 0.0001
"""How long a pipe is looked at before the process lets itself be woken."""
CROWDED_SECONDS = 0.00003
"""Where others run for longer than this in between, the process lets itself be woken at once."""
POSIX = os.name == "posix"


class TimedOut(Exception):
    """No answer came in time."""


class Rubbish(Exception):
    """What came is no frame."""


def packed(serial: int, body: Any) -> bytes:
    """Return a frame: numbers, texts, None, booleans, and tuples, lists and dicts of them."""
    payload = marshal.dumps(body, _MARSHAL)
    return _HEADER.pack(MARK, serial & 0xFFFFFFFF, len(payload), zlib.crc32(payload)) + payload


def _unpacked(payload: bytes) -> Any:
    """Return the values; many rows at once must not set off the search for cycles, which they have none of."""
    if len(payload) < LARGE or not gc.isenabled():
        return marshal.loads(payload)
    gc.disable()
    try:
        return marshal.loads(payload)
    finally:
        gc.enable()


class Reader:
    """Takes frames from a descriptor.

    Parameters
    ----------
    descriptor : int
        Open for reading; set not to block where that is possible.
    """

    def __init__(self, descriptor: int) -> None:
        self.descriptor = descriptor
        self._kept = b""
        self._poll: Any = None
        if POSIX:
            import select

            os.set_blocking(descriptor, False)
            self._poll = select.poll()
            self._poll.register(descriptor, select.POLLIN)

    def frame(self, deadline: Optional[float]) -> Tuple[int, Any]:  # noqa: UP006, UP045
        """Return serial number and values of the next frame; `deadline` on the monotonic clock, None for never."""
        start = self._take(_HEADER.size, deadline)
        mark, serial, length, check = _HEADER.unpack(start)
        if mark != MARK:
            raise Rubbish(f"it said {start!r}")
        payload = self._take(length, deadline)
        if zlib.crc32(payload) != check:
            raise Rubbish("an answer is garbled")
        return serial, _unpacked(payload)

    def line(self, deadline: float) -> bytes:
        """Return the next line, without its end: the greeting."""
        while b"\n" not in self._kept:
            if len(self._kept) > LONGEST_GREETING:
                raise Rubbish("its greeting does not end")
            self._kept += self._more(deadline)
        found, _, self._kept = self._kept.partition(b"\n")
        return found

    def _take(self, count: int, deadline: Optional[float]) -> bytes:  # noqa: UP045
        if len(self._kept) < count:
            parts, have = [self._kept], len(self._kept)
            while have < count:
                parts.append(self._more(deadline))
                have += len(parts[-1])
            self._kept = b"".join(parts)
        found, self._kept = self._kept[:count], self._kept[count:]
        return found

    def _more(self, deadline: Optional[float]) -> bytes:  # noqa: UP045
        """Return what has come, at least one byte; OSError where the other side has ended."""
        spin_until = None
        while True:
            try:
                found = os.read(self.descriptor, CHUNK)
            except BlockingIOError:
                now = time.monotonic()
                if spin_until is None:
                    spin_until = now + SPIN_SECONDS
                if now < spin_until:
                    os.sched_yield()
                    if time.monotonic() - now > CROWDED_SECONDS:
                        spin_until = 0.0
                    continue
                if deadline is not None and now >= deadline:
                    raise TimedOut from None
                self._poll.poll(None if deadline is None else int((deadline - now) * 1000) + 1)
                continue
            if not found:
                raise OSError("it ended")
            return found


def write(descriptor: int, data: bytes, deadline: Optional[float]) -> None:  # noqa: UP045
    """Write all of it; on a descriptor that does not block within the time."""
    view = memoryview(data)
    while view:
        try:
            view = view[os.write(descriptor, view) :]
        except BlockingIOError:
            import select

            left = None if deadline is None else deadline - time.monotonic()
            if left is not None and left <= 0:
                raise TimedOut from None
            poll = select.poll()
            poll.register(descriptor, select.POLLOUT)
            poll.poll(None if left is None else int(left * 1000) + 1)


class Worker:
    """One worker process and the line to it.

    Parameters
    ----------
    command : sequence of str
        What starts it.
    """

    def __init__(self, command: Sequence[str]) -> None:
        clean = {
            key: value
            for key, value in os.environ.items()
            if not key.startswith("PYTHON") and key not in ("LD_LIBRARY_PATH", "DYLD_LIBRARY_PATH", "URE_BOOTSTRAP")
        }
        self.process = subprocess.Popen(
            list(command),
            stdin=subprocess.PIPE,
            stdout=subprocess.PIPE,
            stderr=subprocess.DEVNULL,
            bufsize=0,
            env=clean,
            creationflags=getattr(subprocess, "CREATE_NO_WINDOW", 0),
        )
        assert self.process.stdin is not None
        assert self.process.stdout is not None
        self._to = self.process.stdin.fileno()
        self._from = Reader(self.process.stdout.fileno())
        self._deadline: Optional[float] = None  # noqa: UP045
        self._timed_out = False
        if POSIX:
            os.set_blocking(self._to, False)
            _widen(self._to)
            _widen(self.process.stdout.fileno())
        else:
            threading.Thread(target=self._watch, name="doubler-watch", daemon=True).start()

    def greeting(self, seconds: float) -> Dict[str, Any]:  # noqa: UP006
        """Return what it says first."""
        line = self._in_time(seconds, self._from.line)
        found = json.loads(line)
        if not isinstance(found, dict):
            raise Rubbish("its greeting is no greeting")
        return found

    def exchange(self, serial: int, frame: bytes, seconds: float) -> Any:
        """Send a frame and return the values of the answer."""

        def ask(deadline: float) -> Tuple[int, Any]:  # noqa: UP006
            write(self._to, frame, deadline)
            return self._from.frame(deadline)

        told, body = self._in_time(seconds, ask)
        if told != serial & 0xFFFFFFFF:
            raise Rubbish("an answer to another question")
        return body

    def _in_time(self, seconds: float, work: Any) -> Any:
        deadline = time.monotonic() + seconds
        if POSIX:
            return work(deadline)
        self._deadline = deadline
        try:
            return work(deadline)
        except OSError:
            if self._timed_out:
                raise TimedOut from None
            raise
        finally:
            self._deadline = None

    def _watch(self) -> None:
        """End the worker that keeps a call waiting beyond its time, where reading cannot have a time limit."""
        while self.process.poll() is None:
            time.sleep(0.1)
            deadline = self._deadline
            if deadline is not None and time.monotonic() > deadline:
                self._timed_out = True
                self._deadline = None
                self.process.kill()

    def runs(self) -> bool:
        """Whether the process is there."""
        return self.process.poll() is None

    def end(self) -> None:
        """End the process and close the line."""
        for pipe in (self.process.stdin, self.process.stdout):
            try:
                if pipe is not None:
                    pipe.close()
            except OSError:
                pass
        if self.process.poll() is None:
            self.process.kill()
        self.process.wait()


def _widen(descriptor: int) -> None:
    """Let a pipe hold a whole column at once, where the system can."""
    try:
        import fcntl

        fcntl.fcntl(descriptor, getattr(fcntl, "F_SETPIPE_SZ", 1031), CHUNK)
    except (ImportError, OSError):
        pass
