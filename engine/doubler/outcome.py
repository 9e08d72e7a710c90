"""Results of load cases as they come in, and the envelope over them: lowest and highest value, governing case."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.model import Scalar
from doubler.workbook.template import Port


@dataclass(frozen=True, slots=True)
class Extreme:
    """The lowest or highest value of an output over all cases.

    Attributes
    ----------
    value
        A number, or the error value of the first case that has one: what could not be computed governs.
    case
        The name of the case that gives it.
    """

    value: Scalar
    case: str


@dataclass(frozen=True, slots=True)
class EnvelopeLine:
    """One output over all cases.

    Attributes
    ----------
    port
        The output.
    lowest, highest
        With the cases that govern.
    below_zero
        How many cases of a margin lie below zero; 0 for other outputs.
    not_computed
        How many cases show an error value.
    """

    port: Port
    lowest: Extreme
    highest: Extreme
    below_zero: int
    not_computed: int

    @property
    def fails(self) -> bool:
        """Whether it is a margin that falls below zero or could not be computed in some case."""
        return self.port.is_margin and (self.below_zero > 0 or self.not_computed > 0)

    def as_object(self) -> dict[str, Any]:
        """Return the line as the command line's JSON shows it."""
        return {
            "output": self.port.name,
            "cell": self.port.place,
            "unit": self.port.unit.text if self.port.unit else "",
            "margin": self.port.is_margin,
            "lowest": _plain(self.lowest.value),
            "governing_case": self.lowest.case,
            "highest": _plain(self.highest.value),
            "highest_case": self.highest.case,
            "cases_below_zero": self.below_zero,
            "cases_not_computed": self.not_computed,
        }


def _plain(value: Scalar) -> Scalar | str:
    return str(value) if isinstance(value, ErrorValue) else value


@dataclass(slots=True)
class _Running:
    low: float = float("inf")
    high: float = float("-inf")
    low_case: str = ""
    high_case: str = ""
    below: int = 0
    faults: int = 0
    fault: Extreme | None = None


@dataclass
class Envelope:
    """Takes results batch by batch and keeps the extremes; memory does not grow with the number of cases.

    Parameters
    ----------
    outputs : sequence of Port
    """

    outputs: Sequence[Port]
    cases: int = 0
    _running: dict[str, _Running] = field(default_factory=dict)

    def take(self, names: Sequence[str], results: dict[str, Any]) -> None:
        """Add a batch of cases.

        Parameters
        ----------
        names : sequence of str
        results : dict
            By output: one value for all, or an array with one value a case.
        """
        self.cases += len(names)
        for port in self.outputs:
            values = results[port.name]
            running = self._running.setdefault(port.name, _Running())
            if isinstance(values, np.ndarray) and values.dtype == np.float64:
                self._take_numbers(running, values, names, np.arange(len(names)), port)
                continue
            if not isinstance(values, np.ndarray):  # the same in all cases: the first one stands for them
                self._take_one(running, values, names, port)
                continue
            lanes = values.tolist()
            for index, value in enumerate(lanes):
                if isinstance(value, ErrorValue):
                    running.faults += 1
                    running.fault = running.fault or Extreme(value, names[index])
            at = np.array([i for i, value in enumerate(lanes) if type(value) is float], dtype=int)
            if at.size:
                self._take_numbers(running, np.array([lanes[i] for i in at]), names, at, port)

    @staticmethod
    def _take_one(running: _Running, value: Any, names: Sequence[str], port: Port) -> None:
        if isinstance(value, ErrorValue):
            running.faults += len(names)
            running.fault = running.fault or Extreme(value, names[0])
        elif type(value) is float:
            Envelope._take_numbers(running, np.array([value]), names, np.array([0]), port)
            if port.is_margin and value < 0:
                running.below += len(names) - 1

    @staticmethod
    def _take_numbers(running: _Running, values: Any, names: Sequence[str], at: Any, port: Port) -> None:
        least, most = int(values.argmin()), int(values.argmax())
        if values[least] < running.low:
            running.low, running.low_case = float(values[least]), names[int(at[least])]
        if values[most] > running.high:
            running.high, running.high_case = float(values[most]), names[int(at[most])]
        if port.is_margin:
            running.below += int((values < 0).sum())

    def lines(self) -> list[EnvelopeLine]:
        """Return a line for every output that gave numbers or errors; margins first, the lowest on top."""
        found = []
        for port in self.outputs:
            running = self._running.get(port.name)
            if running is None:
                continue
            if running.fault is not None:
                low = high = running.fault
            elif running.low_case:
                low, high = Extreme(running.low, running.low_case), Extreme(running.high, running.high_case)
            else:
                continue
            found.append(EnvelopeLine(port, low, high, running.below, running.faults))
        return sorted(found, key=_order)


def _order(line: EnvelopeLine) -> tuple[bool, bool, float]:
    value = line.lowest.value
    if not line.port.is_margin:
        return (True, False, 0.0)
    return (False, isinstance(value, float), value if isinstance(value, float) else 0.0)
