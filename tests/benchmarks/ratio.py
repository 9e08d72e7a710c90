"""A measured ratio and its target; and two things timed side by side."""

from __future__ import annotations

import statistics
import subprocess
import sys
import time
from collections.abc import Callable
from dataclasses import dataclass
from typing import Literal


@dataclass(frozen=True, slots=True)
class Ratio:
    """One result of a benchmark.

    Attributes
    ----------
    name
        What is compared with what.
    value
        The ratio measured.
    target
        What it has to be; None where it is shown for information only.
    direction
        Whether the target is a floor or a ceiling.
    """

    name: str
    value: float
    target: float | None
    direction: Literal["at least", "at most"] = "at most"

    @property
    def met(self) -> bool:
        """Whether the target is met; true where there is none."""
        if self.target is None:
            return True
        return self.value >= self.target if self.direction == "at least" else self.value <= self.target

    def line(self) -> str:
        """Return the result as a line of a table."""
        wanted = "" if self.target is None else f"{self.direction} {self.target:g}"
        verdict = "" if self.target is None else "met" if self.met else "MISSED"
        return f"{self.value:10.4g}  {wanted:<15} {verdict:<7} {self.name}"


def side_by_side(
    first: Callable[[], object], second: Callable[[], object], *, rounds: int = 15, calls: tuple[int, int] = (1, 1)
) -> tuple[float, float]:
    """Time two things in turn, so that whatever else the machine does meets both.

    Parameters
    ----------
    first, second : callable
    rounds : int, optional
        How often each is timed; the best of each counts.
    calls : tuple of int, optional
        Calls in one round, for things too short for the clock.

    Returns
    -------
    tuple of float
        Seconds of one call of each.
    """
    best = [float("inf"), float("inf")]
    for work in (first, second):
        work()
    for _ in range(rounds):
        for index, work in enumerate((first, second)):
            start = time.perf_counter()
            for _ in range(calls[index]):
                work()
            best[index] = min(best[index], (time.perf_counter() - start) / calls[index])
    return best[0], best[1]


def in_fresh_processes(module: str, first: str, second: str, *, rounds: int = 11) -> float:
    """Return how many times as long the first of two things takes as the second, each run as a script runs.

    Each is run once in a process of its own, in turn, and the median over the rounds counts. A process that has just
    begun has to be given its memory page by page; that is part of what large arrays cost, and a second run in the same
    process would not show it. Before the clock starts, the module's `once` runs the same on few cases, so that imports
    and first calls count for neither.

    Parameters
    ----------
    module : str
        A module of this folder with a function ``once(which)`` that returns the seconds of one run.
    first, second : str
        What `once` is called with.
    rounds : int, optional
    """

    def alone(which: str) -> float:
        call = f"from tests.benchmarks.{module} import once; print(once({which!r}))"
        done = subprocess.run([sys.executable, "-c", call], check=True, capture_output=True, text=True)
        return float(done.stdout)

    return statistics.median(alone(first) / alone(second) for _ in range(rounds))
