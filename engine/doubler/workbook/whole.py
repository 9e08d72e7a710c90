"""The evaluation of a whole workbook as it stands: every formula once, its cells taken out only where asked for.

Of a column of 100,000 copies the evaluation holds one array; a value for each cell beside it would cost more than to
compute them.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from doubler.workbook.binding import Store
from doubler.workbook.cell_forms import shown
from doubler.workbook.evaluation import Evaluation, NotEvaluated, Refusal, Where
from doubler.workbook.graph import Graph
from doubler.workbook.lanes import scalars, shape_of
from doubler.workbook.model import Address
from doubler.workbook.run import CaseRun, Plan


class WholeEvaluation(Evaluation):
    """The values of all formula cells, for the workbook as it stands.

    Parameters
    ----------
    plan : Plan
        Of the evaluation without inputs.
    store : Store
        The values of all groups.
    reasons : dict
        The groups without a value, and why.
    """

    def __init__(self, plan: Plan, store: Store, reasons: dict[int, NotEvaluated]) -> None:
        super().__init__(plan.graph, 1)
        self._plan = plan
        self._store = Store(0)
        self._store.values = list(store.values)
        self._store.epoch, self._store.run = store.epoch, store.run
        self._lists: dict[int, list[Any]] = {}
        for index, reason in reasons.items():
            if index < len(plan.graph.groups):
                for where in _cells_of(plan.graph, index):
                    self.keep(where, reason)

    def value(self, sheet: str, address: Address) -> Any:
        """Return a cell's value; see `Evaluation.value`."""
        index = self.graph.sheet_index(sheet)
        if index is None:
            raise KeyError(f"there is no sheet {sheet!r}")
        found = self.graph.occupancy[index].at(*address)
        if found is None:
            cell = self.graph.workbook.sheets[index].cells.get(address)
            return None if cell is None else cell.value
        node, lane = found
        lines = self._lists.get(node)
        if lines is not None:
            return lines[lane]
        if self.not_evaluated and (told := self.not_evaluated.get((sheet.casefold(), address))) is not None:
            return told
        if self.graph.groups[node].area is not None:
            return shown(self._plan.binder.single(index, *address)(self._store), 0, 1)
        value = self._store.values[node]
        shape = shape_of(value)
        if shape == ():
            return value
        lines = scalars(value)
        if shape[0] == 1:
            lines = lines * self.graph.groups[node].run.count
        self._lists[node] = lines
        return lines[lane]

    def items(self) -> Iterator[tuple[Where, Any]]:
        """Yield every formula cell with its value."""
        for index in range(len(self.graph.groups)):
            for sheet, address in _cells_of(self.graph, index):
                yield (sheet.casefold(), address), self.value(sheet, address)


def _cells_of(graph: Graph, index: int) -> Iterator[Where]:
    group = graph.groups[index]
    name = graph.workbook.sheets[group.run.sheet].name
    if group.area is not None:
        for address in group.area.addresses():
            yield name, address
    else:
        for lane in range(group.run.count):
            yield name, group.run.cell(lane)


class WholeRun(CaseRun):
    """One evaluation of all formulas without inputs."""

    def __init__(self, graph: Graph) -> None:
        super().__init__(graph, {}, ())

    def _needed(self) -> set[int]:
        return set(range(len(self.graph.groups)))

    def _collected(self, start: int, count: int, store: Store) -> Evaluation:
        evaluation = WholeEvaluation(self.plan, store, self.reasons)
        for node, told in self.refusals.items():
            evaluation.refusals[node] = [Refusal(start, count, lanes, text) for lanes, text in told]
        return evaluation
