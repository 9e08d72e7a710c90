"""Long arrays worked through in blocks that stay in cache, shared over the processor's cores.

NumPy lets go of the interpreter's lock inside its loops, so that plain threads run side by side. A kernel is a pure
function of its arrays; blocks are independent of one another: the result is the same however many threads there are.
"""

from __future__ import annotations

import os
import threading
from collections.abc import Callable
from concurrent.futures import Future, ThreadPoolExecutor
from typing import TypeVar

BLOCK = 65536
"""Lanes evaluated at a time: large against the cost of a NumPy call, small enough for a core's own cache."""

SHARED = 262144
"""From how many lanes on the blocks are shared over threads; below, waking a thread costs more than it brings."""

SHARED_BLOCK = 196608
"""Lanes at a time where threads share the work, each taking the next block when it is done with one.

A thread that finds the interpreter's lock taken wakes later than a short NumPy loop lasts: small blocks would make one
wait for the other. Large ones would make the first wait for a second whose core is busy elsewhere.
"""

MOST_THREADS = 4
"""More threads than these wait for the memory, not for one another."""

Found = TypeVar("Found")
_lock = threading.Lock()
_pool: ThreadPoolExecutor | None = None


def cores() -> int:
    """Return how many cores this process may use."""
    if hasattr(os, "sched_getaffinity"):
        return len(os.sched_getaffinity(0))
    return os.cpu_count() or 1


def threads_for(lanes: int) -> int:
    """Return over how many threads an array of that length is shared."""
    return min(cores(), MOST_THREADS) if lanes >= SHARED else 1


def size_for(lanes: int) -> int:
    """Return how many lanes to evaluate at a time."""
    return BLOCK if threads_for(lanes) == 1 else SHARED_BLOCK


def in_shares(lanes: int, work: Callable[[int, int], list[Found]]) -> list[Found]:
    """Call ``work(start, stop)`` so that every lane is met once, and return what it found, in order of the lanes.

    Parameters
    ----------
    lanes : int
    work : callable
        Evaluates the lanes from `start` to before `stop`, and returns a list; called from several threads at once.

    Returns
    -------
    list

    Raises
    ------
    Exception
        The first that `work` raised, after all shares have ended.
    """
    count = threads_for(lanes)
    if count < 2:
        return work(0, lanes)
    starts = iter(range(0, lanes, SHARED_BLOCK))
    taking = threading.Lock()
    found: dict[int, list[Found]] = {}
    faults: list[BaseException] = []

    def take_blocks() -> None:
        """Take one block after the other until none is left, or one has failed."""
        while not faults:
            with taking:
                start = next(starts, None)
            if start is None:
                return
            try:
                found[start] = work(start, min(start + SHARED_BLOCK, lanes))
            except BaseException as error:  # raised again below, when no thread writes any more
                faults.append(error)

    helping = [_submitted(take_blocks) for _ in range(count - 1)]
    take_blocks()
    for future in helping:
        # One that has not begun by now, its core being busy, has nothing left to do.
        if future is not None and not future.cancel():
            future.result()
    if faults:
        raise faults[0]
    return [item for start in sorted(found) for item in found[start]]


def _submitted(work: Callable[[], None]) -> Future[None] | None:
    """Hand work to the pool; None where no thread can be had (the interpreter is ending)."""
    global _pool  # noqa: PLW0603  # one pool for the process, made when first needed
    with _lock:
        if _pool is None:
            _pool = ThreadPoolExecutor(MOST_THREADS, thread_name_prefix="doubler-block")
        pool = _pool
    try:
        return pool.submit(work)
    except RuntimeError:
        return None


def _forget_pool() -> None:
    """Begin without threads in a forked process: those of the parent did not come along."""
    global _pool, _lock
    _pool, _lock = None, threading.Lock()


if hasattr(os, "register_at_fork"):
    os.register_at_fork(after_in_child=_forget_pool)
