"""What an evaluation gives: the values of cells over cases, why some have none, and why some are errors."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import Any, TypeAlias

import numpy as np

from doubler.errors import ErrorValue
from doubler.workbook.graph import Graph
from doubler.workbook.model import Address
from doubler.workbook.references import address_text

Where: TypeAlias = tuple[str, Address]
"""A cell: sheet name, (row, column)."""

MEANING = {
    ErrorValue.DIV0: "something is divided by zero or by an empty cell, or a mean is taken of no numbers",
    ErrorValue.VALUE: "an argument is of the wrong kind: text that spells no number, or ranges of unlike size",
    ErrorValue.NUM: "there is no finite result for these numbers",
    ErrorValue.NA: "what is looked for is not there",
    ErrorValue.REF: "a reference leads to a place that does not exist",
    ErrorValue.NAME: "a name is not known",
    ErrorValue.NULL: "two ranges that are intersected have no cell in common",
    ErrorValue.CALC: "an array would be empty, or a function value is left uncalled",
    ErrorValue.SPILL: "an array has no room",
}
"""What an error value of a native function or operator means."""


@dataclass(frozen=True, slots=True)
class NotEvaluated:
    """What stands in the place of a value that is not known.

    Attributes
    ----------
    reason
        One clause: why.
    root
        The cell where the reason lies, as ``Sheet!B3``; for a cell that only depends on it, the root is named
        here.
    """

    reason: str
    root: str

    def __str__(self) -> str:
        return f"not evaluated: {self.root}: {self.reason}"


@dataclass
class Refusal:
    """Lanes of one group in which one of our functions gave an error value, and why.

    Attributes
    ----------
    start, cases
        The first case and how many.
    lanes
        True for all lanes, else an array of truths over (copies, cases).
    text
        The reason.
    """

    start: int
    cases: int
    lanes: Any
    text: str

    def holds(self, copy: int, case: int) -> bool:
        """Whether it concerns a copy in a case (from 0)."""
        at = case - self.start
        if not 0 <= at < self.cases:
            return False
        if self.lanes is True:
            return True
        rows, columns = self.lanes.shape
        return bool(self.lanes[copy if rows > 1 else 0, at if columns > 1 else 0])


@dataclass
class Evaluation:
    """The values of a workbook's cells, for all cases or one block of them.

    Attributes
    ----------
    cases
        How many cases; 1 where no input varies.
    start
        Number of the first case, from 0.
    not_evaluated
        The formula cells among the outputs that have no value, and why.
    constants
        The outputs that no varying input reaches.
    refusals
        For each group of formulas the reasons that our functions gave.
    """

    graph: Graph
    cases: int
    start: int = 0
    not_evaluated: dict[Where, NotEvaluated] = field(default_factory=dict)
    constants: set[Where] = field(default_factory=set)
    refusals: dict[int, list[Refusal]] = field(default_factory=dict)
    _values: dict[Where, Any] = field(default_factory=dict)

    def value(self, sheet: str, address: Address) -> Any:
        """Return a cell's value.

        Returns
        -------
        float, str, bool, None, ErrorValue
            Where it is the same in all cases.
        numpy.ndarray
            Over the cases: float64, bool, or object where the cases hold unlike things.
        NotEvaluated
            Where it is not known.
        """
        where = (sheet.casefold(), address)
        if where in self._values:
            return self._values[where]
        if where in self.not_evaluated:
            return self.not_evaluated[where]
        found = self.graph.workbook.sheet(sheet)
        if found is None:
            raise KeyError(f"there is no sheet {sheet!r}")
        cell = found.cells.get(address)
        if cell is not None and cell.formula is not None:
            raise KeyError(f"{sheet}!{address_text(address)} was not among the outputs asked for")
        return None if cell is None else cell.value

    def reason(self, sheet: str, address: Address, case: int = 0) -> str:
        """Say why a cell has an error value, or none at all, in a case.

        Parameters
        ----------
        sheet : str
        address : (int, int)
        case : int, optional
            From 0, counted over all cases.

        Returns
        -------
        str
            Empty where the cell has a value. The reason that one of our functions gave, here or in a cell that
            this one depends on (then with that cell's name); else what the error value means.
        """
        value = self.value(sheet, address)
        if isinstance(value, NotEvaluated):
            return str(value)
        if isinstance(value, np.ndarray):
            value = value[case - self.start]
        if not isinstance(value, ErrorValue):
            return ""
        found = self.graph.group_at(sheet, address)
        if found is None:
            return f"the cell holds the error {value}"
        group, copy = found
        told = self._told(group, copy, case)
        if told:
            return told
        return self._before(group, case) or f"{value}: {MEANING.get(value, 'an error value')}"

    def _told(self, group: int, copy: int | None, case: int) -> str:
        known = self.refusals.get(group, ())
        copies = self.graph.groups[group].run.count if group < len(self.graph.groups) else 1
        for refusal in known:
            if any(refusal.holds(k, case) for k in ([copy] if copy is not None else range(copies))):
                return refusal.text
        return ""

    def _before(self, group: int, case: int) -> str:
        """Return the nearest reason among the formulas that a group depends on."""
        if not self.refusals:
            return ""
        seen = {group}
        layer = [group]
        while layer:
            layer = [n for node in layer for n in sorted(self.graph.edges[node]) if n not in seen]
            layer = list(dict.fromkeys(layer))
            seen.update(layer)
            for node in layer:
                told = self._told(node, None, case)
                if told:
                    return f"{self.graph.name_of(node)}: {told}"
        return ""

    def keep(self, where: Where, value: Any) -> None:
        """Put in a value (or why there is none)."""
        key = (where[0].casefold(), where[1])
        if isinstance(value, NotEvaluated):
            self.not_evaluated[key] = value
        else:
            self._values[key] = value

    def items(self) -> Iterator[tuple[Where, Any]]:
        """Yield every output with its value."""
        yield from self._values.items()
        yield from self.not_evaluated.items()
