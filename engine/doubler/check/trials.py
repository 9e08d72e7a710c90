"""What cells would give if others held something else: many questions, one evaluation."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from doubler.workbook.evaluate import evaluate
from doubler.workbook.examined import Examined, Key

MOST = 2048
"""Questions asked in one evaluation."""


class Trials:
    """Questions about a workbook, collected and then answered together.

    In every question all cells that any question changes are held at what they give today, except those that the
    question itself changes; a cell that one question changes and another wants parts the two. So questions that change
    formula cells and questions that change what these read do not belong into one collection.
    """

    def __init__(self, book: Examined) -> None:
        self.book = book
        self._changes: list[Mapping[Key, float]] = []
        self._wanted: list[Key] = []
        self.answers: list[float | None] = []

    def ask(self, changes: Mapping[Key, float], wanted: Key) -> int:
        """Ask what a cell gives when others hold these numbers; return the question's number."""
        self._changes.append(changes)
        self._wanted.append(wanted)
        return len(self._changes) - 1

    def run(self) -> None:
        """Answer all questions; a question without a number for its answer gets None."""
        self.answers = [None] * len(self._changes)
        batches: list[tuple[list[int], set[Key], set[Key]]] = []
        for number, (changed, wanted) in enumerate(zip(self._changes, self._wanted, strict=True)):
            for numbers, all_changed, all_wanted in batches:
                if len(numbers) < MOST and wanted not in all_changed and all_wanted.isdisjoint(changed):
                    break
            else:
                numbers, all_changed, all_wanted = [], set(), set()
                batches.append((numbers, all_changed, all_wanted))
            numbers.append(number)
            all_changed.update(changed)
            all_wanted.add(wanted)
        for numbers, _, _ in batches:
            self._run(numbers)

    def _run(self, numbers: list[int]) -> None:
        count = len(numbers)
        changes, wanted = [self._changes[n] for n in numbers], [self._wanted[n] for n in numbers]
        inputs: dict[Key, np.ndarray[tuple[int], np.dtype[np.float64]]] = {}
        for at, changed in enumerate(changes):
            for key, number in changed.items():
                if key not in inputs:
                    inputs[key] = np.full(count, self.book.number(key) or 0.0)
                inputs[key][at] = number
        values = evaluate(self.book.graph, inputs, dict.fromkeys(wanted))
        for at, key in enumerate(wanted):
            value: object = values.value(*key)
            if isinstance(value, np.ndarray):
                value = value[at]
            known = isinstance(value, int | float) and not isinstance(value, bool) and np.isfinite(value)
            self.answers[numbers[at]] = float(value) if known and isinstance(value, int | float) else None
