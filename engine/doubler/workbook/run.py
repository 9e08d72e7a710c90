"""One evaluation of a graph: which groups are needed, which of them vary by case, and their values block by block."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from typing import Any

import numpy as np

from doubler.errors import InputError
from doubler.workbook.binding import Binder, Store
from doubler.workbook.cell_forms import as_lanes, case_count, cell_value, shown
from doubler.workbook.coerce import CannotEvaluateError
from doubler.workbook.evaluation import Evaluation, NotEvaluated, Refusal, Where
from doubler.workbook.graph import Graph
from doubler.workbook.lanes import shape_of, tidy
from doubler.workbook.lift import strict
from doubler.workbook.program import Frame
from doubler.workbook.tape import Tape
from doubler.workbook.tape_writing import taped

BLOCK = 12288
"""Cases a block: 96 kB a live column, so that a block stays in cache and the calls around it cost little."""

LIVE_NUMBERS = 850_000
LEAST_BLOCK, LARGEST_BLOCK = BLOCK, 28672
"""Where cases are many, a block has so many that all its live columns together hold `LIVE_NUMBERS`: few calls for a
sheet of few formulas, and a third of a shared cache at most for one of many."""

TAPED_CASES = 32768
"""From how many cases on formulas are put onto tapes: below, writing these costs more than they bring."""

KEPT_BYTES = 1 << 24


def keep_memory() -> None:
    """Let the C library keep the memory of freed arrays for the next ones.

    By default it gives every array of a block back to the system and gets it again, page by page; that can take longer
    than the arithmetic. Where a large piece was freed once, it keeps pieces up to that size (GNU C library, `mallopt`,
    M_MMAP_THRESHOLD: the threshold adjusts itself). Elsewhere this does nothing.
    """
    np.empty(KEPT_BYTES, np.uint8)


class Plan:
    """What stays the same for all evaluations with the same input cells: the bound readers."""

    def __init__(self, graph: Graph, nodes: dict[tuple[int, int, int], int]) -> None:
        self.graph = graph
        self.nodes = nodes
        self.binder = Binder(graph, nodes)
        self.frames: dict[int, Frame] = {}
        self.store = Store(len(graph.edges) + len(nodes))
        self.readers_of_input = self._readers()

    def frame(self, index: int) -> Frame:
        """Return a group's frame, bound at first need."""
        frame = self.frames.get(index)
        if frame is None:
            group = self.graph.groups[index]
            assert group.program is not None
            run = group.run
            readers = [self.binder.reader(slot, run) for slot in group.program.slots]
            cell = (self.graph.workbook.sheets[run.sheet].name, run.row, run.column)
            frame = Frame(readers, self.store, cell, run.count, self.graph.workbook.date1904, (run.down, run.across))
            self.frames[index] = frame
        return frame

    def _readers(self) -> dict[int, set[int]]:
        """Return for each input the groups (and rectangles) that read its cell."""
        found: dict[int, set[int]] = {node: set() for node in self.nodes.values()}
        if not found:
            return found
        by_column: dict[tuple[int, int], list[tuple[int, int]]] = {}
        for (sheet, row, column), node in self.nodes.items():
            by_column.setdefault((sheet, column), []).append((row, node))
        for index in range(len(self.graph.groups)):
            for sheet, area in self.graph.places_read(index):
                if area.last_column - area.first_column > len(by_column):
                    columns = [c for s, c in by_column if s == sheet and area.first_column <= c <= area.last_column]
                else:
                    columns = list(range(area.first_column, area.last_column + 1))
                for column in columns:
                    for row, node in by_column.get((sheet, column), ()):
                        if area.first_row <= row <= area.last_row:
                            found[node].add(index)
        return found


class CaseRun:
    """One evaluation: which groups are needed, which of them vary, and what is kept."""

    def __init__(self, graph: Graph, inputs: Mapping[Where, Any], outputs: Iterable[Where] | None) -> None:
        self.graph = graph
        self.cases = case_count(inputs)
        values: dict[tuple[int, int, int], Any] = {}
        for (sheet, (row, column)), value in inputs.items():
            values[self._sheet(sheet), row, column] = as_lanes(value, sheet, (row, column))
        cells = tuple(sorted(values))
        plan = graph.plans.get(cells)
        if plan is None:
            if len(graph.plans) >= 16:
                graph.plans.clear()
            nodes = {cell: len(graph.edges) + at for at, cell in enumerate(cells)}
            plan = graph.plans[cells] = Plan(graph, nodes)
        self.plan: Plan = plan
        self.inputs = {self.plan.nodes[cell]: value for cell, value in values.items()}
        self.reasons: dict[int, NotEvaluated] = {}
        self.refusals: dict[int, list[tuple[Any, str]]] = {}
        self.outputs = self._locate(outputs)
        self.needed = self._needed()
        self.varying = self._varying()
        self.plan.binder.varying = self.varying
        self._blame()

    def _sheet(self, name: str) -> int:
        index = self.graph.sheet_index(name)
        if index is None:
            raise InputError(f"there is no sheet {name!r} in {self.graph.workbook.path.name}")
        return index

    def _locate(self, outputs: Iterable[Where] | None) -> list[tuple[Where, int, int, int]]:
        """Find node and copy of each output; constants need none."""
        if outputs is None:
            outputs = [(sheet.name, address) for sheet, address, _ in self.graph.workbook.formulas()]
            outputs += [(self.graph.workbook.sheets[s].name, (r, c)) for s, r, c in self.plan.nodes]
            for group in self.graph.groups:
                if group.area is not None:
                    name = self.graph.workbook.sheets[group.run.sheet].name
                    outputs += [(name, address) for address in group.area.addresses()]
        found = []
        for sheet, (row, column) in dict.fromkeys(outputs):
            index = self._sheet(sheet)
            at = self.plan.binder.occupancy[index].at(row, column)
            if at is not None:
                found.append(((sheet, (row, column)), *at, index))
        return found

    def _needed(self) -> set[int]:
        """Find all nodes that the outputs depend on."""
        count = len(self.graph.groups)
        overridden = set(self.plan.nodes.values())
        work = [node for _, node, _, _ in self.outputs if node not in overridden]
        needed: set[int] = set(work)
        while work:
            for before in self.graph.edges[work.pop()]:
                if before not in needed:
                    needed.add(before)
                    work.append(before)
        return {node for node in needed if node < count}

    def _varying(self) -> set[int]:
        """Find the nodes that a varying input reaches."""
        varying = {node for node, value in self.inputs.items() if shape_of(value) != ()}
        if not varying:
            return set()
        direct = {index for node in varying for index in self.plan.readers_of_input[node]}
        inputs = set(varying)
        reached: set[int] = set()
        for node in self.graph.order:
            if node in direct or not reached.isdisjoint(self.graph.edges[node]):
                reached.add(node)
        groups = {node for node in reached if node < len(self.graph.groups)}
        return groups | inputs

    def _blame(self) -> None:
        """Find the groups that cannot be evaluated, and pass the reason on to all that depend on them."""
        for index, group in enumerate(self.graph.groups):
            if group.reason:
                self.reasons[index] = NotEvaluated(group.reason, self.graph.name_of(index))
        self._pass_on()

    def _pass_on(self) -> None:
        if not self.reasons:
            return
        for node in self.graph.order:
            if node not in self.reasons:
                for before in self.graph.edges[node]:
                    if before in self.reasons:
                        self.reasons[node] = self.reasons[before]
                        break

    def blocks(self, block: int | None) -> Iterator[Evaluation]:
        """Evaluate block by block."""
        groups = len(self.graph.groups)
        store = self.plan.store
        store.epoch += 1
        store.run += 1
        store.refusals = self.refusals
        for node, value in self.inputs.items():
            store.values[node] = value
        order = [node for node in self.graph.order if node < groups and node in self.needed]
        once = [node for node in order if node not in self.varying]
        often = [node for node in order if node in self.varying]
        with strict():
            for node in once:
                self._evaluate(node, store)
            stretches = self._stretches(often)
        size = block or self._block_size(often, stretches)
        if self.cases > size:
            keep_memory()
        start = 0
        while start < self.cases:
            count = min(size, self.cases - start)
            store.epoch += 1
            for node, value in self.inputs.items():
                if shape_of(value) != ():
                    store.values[node] = tidy(value[:, start : start + count])
            with strict():
                for stretch in stretches:
                    self._advance(stretch, count)
            yield self._collected(start, count, store)
            start += count

    def _stretches(self, often: list[int]) -> list[int | Tape]:
        """Put stretches of formulas onto tapes where the cases are so many that it pays."""
        often = [node for node in often if node not in self.reasons]
        if self.cases < TAPED_CASES:
            return list(often)
        outputs = {node for _, node, _, _ in self.outputs}
        return taped(self.graph, self.plan.binder, self.plan.store, often, outputs)

    def _advance(self, stretch: int | Tape, count: int) -> None:
        """Evaluate a group, or a stretch of them, for the block that the store holds."""
        store = self.plan.store
        if isinstance(stretch, int):
            self._evaluate(stretch, store)
        elif stretch.idle or not self.reasons.keys().isdisjoint(stretch.nodes) or not stretch.run(store, count):
            for node in stretch.nodes:
                self._evaluate(node, store)

    def _block_size(self, often: list[int], stretches: list[int | Tape]) -> int:
        """Choose the cases a block so that wide fills do not leave the cache."""
        widest = max((self.graph.groups[node].run.count for node in often), default=1)
        size = BLOCK
        if self.cases >= TAPED_CASES:
            live = sum(1 if isinstance(stretch, int) else stretch.live for stretch in stretches)
            size = min(max(LIVE_NUMBERS // max(live, 1) // 1024 * 1024, LEAST_BLOCK), LARGEST_BLOCK)
        return max(size // max(widest // 4, 1), 64)

    def _evaluate(self, node: int, store: Store) -> None:
        if node in self.reasons:
            return
        group = self.graph.groups[node]
        try:
            assert group.program is not None
            frame = self.plan.frame(node)
            frame.refusals = []
            store.values[node] = cell_value(group.program.run(frame), group)
            if frame.refusals:
                self.refusals[node] = frame.refusals
            else:
                self.refusals.pop(node, None)
        except CannotEvaluateError as error:
            self._give_up(node, str(error))
        except RecursionError:
            self._give_up(node, "the formula is nested too deeply")
        except Exception as error:
            # One bad formula never stops the rest; what went wrong is said, not hidden.
            self._give_up(node, f"the evaluation failed: {type(error).__name__}: {error}")

    def _give_up(self, node: int, reason: str) -> None:
        self.reasons[node] = NotEvaluated(reason, self.graph.name_of(node))
        self._pass_on()

    def _collected(self, start: int, count: int, store: Store) -> Evaluation:
        evaluation = Evaluation(self.graph, count, start)
        for node, told in self.refusals.items():
            evaluation.refusals[node] = [Refusal(start, count, lanes, text) for lanes, text in told]
        for where, node, lane, sheet in self.outputs:
            if node not in self.varying:
                evaluation.constants.add((where[0].casefold(), where[1]))
            if node in self.reasons:
                evaluation.keep(where, self.reasons[node])
            elif node >= len(self.graph.groups):
                evaluation.keep(where, shown(store.values[node], 0, count))
            else:
                group = self.graph.groups[node]
                if group.area is not None:
                    read = self.plan.binder.single(sheet, *where[1])
                    evaluation.keep(where, shown(read(store), 0, count))
                else:
                    evaluation.keep(where, shown(store.values[node], lane, count))
        return evaluation
