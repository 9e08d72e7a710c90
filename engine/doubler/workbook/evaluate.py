"""A workbook as a function: its values for given inputs, for one case or for any number of them at once.

Cells that no varying input reaches are evaluated once. The others are evaluated in blocks of cases so small
that a block's live columns stay in the processor's cache. Only the outputs asked for are kept.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from doubler.errors import ErrorValue, InputError
from doubler.workbook.binding import Binder, Store
from doubler.workbook.coerce import CannotEvaluateError
from doubler.workbook.graph import Graph, Group, build_graph
from doubler.workbook.lanes import Grid, Mixed, from_scalars, plain, scalars, shape_of, tidy
from doubler.workbook.lift import F8, strict
from doubler.workbook.model import Address, Cell, Scalar, Sheet, Workbook
from doubler.workbook.program import Frame, Lambda
from doubler.workbook.references import address_text

BLOCK = 8192
"""Cases a block: 64 kB a live column of numbers."""

Where: TypeAlias = tuple[str, Address]
"""A cell: sheet name, (row, column)."""


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
    """

    graph: Graph
    cases: int
    start: int = 0
    not_evaluated: dict[Where, NotEvaluated] = field(default_factory=dict)
    constants: set[Where] = field(default_factory=set)
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


def evaluate(
    graph: Graph,
    inputs: Mapping[Where, Any] | None = None,
    outputs: Iterable[Where] | None = None,
    block: int | None = None,
) -> Evaluation:
    """Evaluate a workbook for all cases and keep the outputs.

    Parameters
    ----------
    graph : Graph
        From `build_graph`.
    inputs : mapping of (sheet, address) to scalar or array of N, optional
        Put in place of what the workbook holds there.
    outputs : iterable of (sheet, address), optional
        The cells wanted; all formula cells where it is left out.
    block : int, optional
        Cases a block.

    Returns
    -------
    Evaluation
    """
    whole: Evaluation | None = None
    kept: dict[Where, Any] = {}
    for part in evaluate_blocks(graph, inputs, outputs, block):
        if whole is None:
            total = _case_count(inputs or {})
            if total == part.cases:
                return part
            whole = Evaluation(graph, total)
        for where, value in part.items():
            _store_part(kept, where, value, part, whole.cases)
    assert whole is not None
    for where, value in kept.items():
        whole.keep(where, value)
    return whole


def _store_part(kept: dict[Where, Any], where: Where, value: Any, part: Evaluation, cases: int) -> None:
    """Write one block's values of an output into the whole, which changes its type only where it must."""
    before = kept.get(where)
    if isinstance(before, NotEvaluated):
        return
    if isinstance(value, NotEvaluated):
        kept[where] = value
        return
    here = slice(part.start, part.start + part.cases)
    if before is None and where not in kept:
        if not isinstance(value, np.ndarray):
            if where in part.constants:
                kept[where] = value
                return
            value = _repeated(value, part.cases)
        before = np.empty(cases, value.dtype)
    elif not isinstance(before, np.ndarray):
        return
    elif not isinstance(value, np.ndarray):
        value = _repeated(value, part.cases)
    if before.dtype != value.dtype:
        before = before.astype(object)
        before[: part.start] = _python(before[: part.start])
        value = _python(value)
    before[here] = value
    kept[where] = before


def _python(values: NDArray[Any]) -> NDArray[Any]:
    out = np.empty(values.shape, object)
    out[:] = values.tolist() if values.dtype != object else values
    return out


def _repeated(value: Any, count: int) -> NDArray[Any]:
    if type(value) is float or type(value) is bool:
        return np.full(count, value)
    out = np.empty(count, object)
    out[:] = [value] * count
    return out


def evaluate_blocks(
    graph: Graph,
    inputs: Mapping[Where, Any] | None = None,
    outputs: Iterable[Where] | None = None,
    block: int | None = None,
) -> Iterator[Evaluation]:
    """Evaluate a workbook block by block of cases; see `evaluate`. Memory does not grow with the number of cases."""
    yield from _Run(graph, inputs or {}, outputs).blocks(block)


class _Plan:
    """What stays the same for all evaluations with the same input cells: the bound readers."""

    def __init__(self, graph: Graph, nodes: dict[tuple[int, int, int], int]) -> None:
        self.graph = graph
        self.nodes = nodes
        self.binder = Binder(graph, nodes)
        self.frames: dict[int, Frame] = {}
        self.store = Store(len(graph.groups) + len(nodes))
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
            frame = Frame(readers, self.store, cell, run.count, self.graph.workbook.date1904)
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


class _Run:
    """One evaluation: which groups are needed, which of them vary, and what is kept."""

    def __init__(self, graph: Graph, inputs: Mapping[Where, Any], outputs: Iterable[Where] | None) -> None:
        self.graph = graph
        self.cases = _case_count(inputs)
        values: dict[tuple[int, int, int], Any] = {}
        for (sheet, (row, column)), value in inputs.items():
            values[self._sheet(sheet), row, column] = _as_lanes(value, sheet, (row, column))
        cells = tuple(sorted(values))
        plan = graph.plans.get(cells)
        if plan is None:
            if len(graph.plans) >= 16:
                graph.plans.clear()
            nodes = {cell: len(graph.groups) + at for at, cell in enumerate(cells)}
            plan = graph.plans[cells] = _Plan(graph, nodes)
        self.plan: _Plan = plan
        self.inputs = {self.plan.nodes[cell]: value for cell, value in values.items()}
        self.reasons: dict[int, NotEvaluated] = {}
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
        return {node for node in needed if node < count or node < len(self.graph.edges)}

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
        for node, value in self.inputs.items():
            store.values[node] = value
        order = [node for node in self.graph.order if node < groups and node in self.needed]
        once = [node for node in order if node not in self.varying]
        often = [node for node in order if node in self.varying]
        with strict():
            for node in once:
                self._evaluate(node, store)
        size = block or self._block_size(often)
        start = 0
        while start < self.cases:
            count = min(size, self.cases - start)
            store.epoch += 1
            for node, value in self.inputs.items():
                if shape_of(value) != ():
                    store.values[node] = tidy(value[:, start : start + count])
            with strict():
                for node in often:
                    self._evaluate(node, store)
            yield self._collected(start, count, store)
            start += count

    def _block_size(self, often: list[int]) -> int:
        """Choose the cases a block so that wide fills do not leave the cache."""
        widest = max((self.graph.groups[node].run.count for node in often), default=1)
        return max(BLOCK // max(widest // 4, 1), 64)

    def _evaluate(self, node: int, store: Store) -> None:
        if node in self.reasons:
            return
        group = self.graph.groups[node]
        try:
            assert group.program is not None
            store.values[node] = _result(group.program.run(self.plan.frame(node)), group)
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
        for where, node, lane, sheet in self.outputs:
            if node not in self.varying:
                evaluation.constants.add((where[0].casefold(), where[1]))
            if node in self.reasons:
                evaluation.keep(where, self.reasons[node])
            elif node >= len(self.graph.groups):
                evaluation.keep(where, _shown(store.values[node], 0, count))
            else:
                group = self.graph.groups[node]
                if group.area is not None:
                    read = self.plan.binder.single(sheet, *where[1])
                    evaluation.keep(where, _shown(read(store), 0, count))
                else:
                    evaluation.keep(where, _shown(store.values[node], lane, count))
        return evaluation


def _case_count(inputs: Mapping[Where, Any]) -> int:
    counts = {len(value) for value in inputs.values() if isinstance(value, np.ndarray)}
    if len(counts) > 1:
        raise InputError(f"the inputs have unlike numbers of cases: {sorted(counts)}")
    return counts.pop() if counts else 1


def _as_lanes(value: Any, sheet: str, address: Address) -> Any:
    """Bring an input into the form in which it is evaluated."""
    name = f"{sheet}!{address_text(address)}"
    if isinstance(value, np.ndarray):
        if value.ndim != 1:
            raise InputError(f"the input {name} must be a row of cases, not an array with {value.ndim} axes")
        if value.dtype == np.bool_:
            return value.reshape(1, -1)
        if value.dtype.kind in "fiu":
            numbers = value.astype(F8, copy=False)
            if not np.isfinite(numbers).all():
                case = int(np.flatnonzero(~np.isfinite(numbers))[0]) + 1
                raise InputError(f"the input {name} is no finite number in case {case}; give a number")
            return np.ascontiguousarray(numbers).reshape(1, -1)
        return from_scalars([_scalar(item, name) for item in value.tolist()], (1, len(value)))
    return _scalar(value, name)


def _scalar(value: Any, name: str) -> Scalar:
    if isinstance(value, bool | np.bool_):
        return bool(value)
    if isinstance(value, int | float | np.number):
        number = float(value)
        if not np.isfinite(number):
            raise InputError(f"the input {name} is {number}; give a finite number")
        return number
    if value is None or isinstance(value, str | ErrorValue):
        return value
    raise InputError(f"the input {name} is of no kind that a cell can hold: {value!r}")


def _result(value: Any, group: Group) -> Any:
    """Bring a program's result into the form in which a cell holds it."""
    if type(value) is float or (type(value) is np.ndarray and value.size > 1):
        return value
    if group.area is not None and isinstance(value, Grid):
        return value
    if isinstance(value, tuple):
        value = value[0] if len(value) == 1 else ErrorValue.VALUE
    if isinstance(value, Grid):
        value = value.cell(0, 0)
    value = tidy(value)
    if value is None:
        return 0.0
    if isinstance(value, Mixed):
        return _without_empty(value)
    if isinstance(value, np.generic):
        return value.item()
    if isinstance(value, float | str | bool | ErrorValue | np.ndarray):
        return value
    return ErrorValue.CALC if isinstance(value, Lambda) else ErrorValue.VALUE


def _without_empty(value: Mixed) -> Any:
    """Let empty lanes be 0, as a cell shows them."""
    if None not in value.items:
        return value
    empty = np.array([item is None for item in value.items])[value.slot] & (value.slot >= 0)
    return plain(value.numbers, np.where(empty, -1, value.slot).astype(np.int32), value.items)


def _shown(value: Any, lane: int, cases: int) -> Any:
    """Return one copy's values as users get them: a scalar, or an array over the cases."""
    if shape_of(value) == ():
        return 0.0 if value is None else value
    line = value if value.shape[0] == 1 else value[lane : lane + 1]
    if line.shape[1] == 1:
        return scalars(line)[0] if shape_of(line) else line
    if isinstance(line, Mixed):
        out = np.empty(cases, object)
        out[:] = scalars(line)
        return out
    return line[0]


def evaluate_formula(text: str) -> list[list[Any]] | NotEvaluated:
    """Evaluate one formula without a workbook.

    Parameters
    ----------
    text : str
        The formula, with or without its leading ``=``.

    Returns
    -------
    list of rows, or NotEvaluated
        The grid of values that it gives.

    Examples
    --------
    >>> evaluate_formula("=-2^2")
    [[4.0]]
    >>> evaluate_formula("={1,2}*10")
    [[10.0, 20.0]]
    """
    sheet = Sheet("Sheet1", "", {(1, 1): Cell(None, text.removeprefix("="), dynamic=True)})
    graph = build_graph(Workbook(Path("formula"), "", [sheet]))
    run = _Run(graph, {}, None)
    for _ in run.blocks(None):
        if 0 in run.reasons:
            return run.reasons[0]
    value = run.plan.store.values[0]
    if isinstance(value, Grid):
        cells = [0.0 if cell is None else cell for cell in value.cells]
        return [cells[row * value.columns : (row + 1) * value.columns] for row in range(value.rows)]
    return [[value]]
