"""The formula graph of a workbook: groups of equal formulas, what they read, their order of evaluation."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field
from typing import Any

from doubler.workbook.cell_facts import asks_of_cells, with_facts
from doubler.workbook.coerce import CannotEvaluateError
from doubler.workbook.geometry import Geometry, Place, Run
from doubler.workbook.model import Address, Area, Cell, Sheet, Workbook
from doubler.workbook.occupancy import Occupancy
from doubler.workbook.ordering import strongly_connected
from doubler.workbook.parse import FormulaError, FormulaParser
from doubler.workbook.program import Program, compile_tree
from doubler.workbook.references import address_text, read_area
from doubler.workbook.resolve import Resolver
from doubler.workbook.subtotals_within import SubtotalRanges, holds_subtotal
from doubler.workbook.syntax import Node, RangeRef


@dataclass(slots=True)
class Group:
    """Consecutive copies of one formula, evaluated as one.

    Attributes
    ----------
    run
        Where the copies stand.
    tree
        The formula as parsed, None where it cannot be; `resolved` without names and structured references.
    program
        Its compiled form, None where it cannot be evaluated.
    reason
        Why it cannot be evaluated; empty where it can.
    area
        For an array formula the rectangle that it fills.
    spills
        Whether it is a dynamic array formula.
    """

    run: Run
    tree: Node | None
    resolved: Node | None = None
    program: Program | None = None
    reason: str = ""
    area: Area | None = None
    spills: bool = False


@dataclass
class Graph:
    """A workbook as a function: its groups of formulas in the order of evaluation.

    Attributes
    ----------
    workbook
        The workbook.
    groups
        All groups.
    edges
        For each node what it reads: first the groups, then rectangles that hold several groups.
    order
        The nodes, each after those that it reads; without the members of cycles.
    cycles
        The circular references found: the cells of each.
    occupancy
        For each sheet which cells are computed.
    """

    workbook: Workbook
    geometry: Geometry
    groups: list[Group]
    edges: list[set[int]]
    order: list[int]
    cycles: list[list[tuple[str, Address]]]
    occupancy: list[Occupancy]
    areas: dict[Place, int] = field(default_factory=dict)
    plans: dict[Any, Any] = field(default_factory=dict)

    def sheet_index(self, name: str) -> int | None:
        """Return the index of the sheet of that name, or None."""
        return self.geometry.sheets.get(name.casefold())

    def group_at(self, sheet: str, address: Address) -> tuple[int, int] | None:
        """Return the group and copy that compute a cell; None where it is a constant or empty."""
        index = self.sheet_index(sheet)
        return None if index is None else self.occupancy[index].at(*address)

    def places_read(self, group: int) -> list[Place]:
        """Return the rectangles that a group reads, over all its copies."""
        program = self.groups[group].program
        if program is None:
            return []
        return [place for slot in program.slots for place in self.geometry.covered(slot, self.groups[group].run)]

    def name_of(self, group: int, lane: int = 0) -> str:
        """Return a copy's cell as it is written, with its sheet."""
        run = self.groups[group].run
        return f"{self.workbook.sheets[run.sheet].name}!{address_text(run.cell(lane))}"


def build_graph(workbook: Workbook) -> Graph:
    """Build the formula graph of a workbook.

    Parameters
    ----------
    workbook : Workbook
        As read.

    Returns
    -------
    Graph
        Never fails for a formula: what cannot be evaluated keeps its reason.
    """
    builder = _Builder(workbook)
    groups = builder.groups()
    while True:
        occupancy = _occupied(workbook, groups)
        edges, areas = _edges(builder.geometry, groups, occupancy)
        order, rings = _ordered(edges, len(groups))
        wide = {index for ring in rings for index in ring if groups[index].run.count > 1}
        if not wide:
            break
        # A fill that reads itself (a running total) is evaluated copy by copy.
        groups = [part for index, group in enumerate(groups) for part in (_split(group) if index in wide else [group])]
    graph = Graph(workbook, builder.geometry, groups, edges, order, [], occupancy, areas)
    for ring in rings:
        cells = [(workbook.sheets[groups[i].run.sheet].name, groups[i].run.cell(0)) for i in ring]
        graph.cycles.append(sorted(cells))
        shown = ", ".join(graph.name_of(i) for i in ring[:6]) + (", …" if len(ring) > 6 else "")
        for index in ring:
            groups[index].reason = f"it is part of a circular reference: {shown}"
    return graph


def _split(group: Group) -> list[Group]:
    run = group.run
    return [
        Group(Run(run.sheet, *run.cell(lane)), group.tree, group.resolved, group.program, group.reason)
        for lane in range(run.count)
    ]


class _Builder:
    def __init__(self, workbook: Workbook) -> None:
        self.workbook = workbook
        self.geometry = Geometry(workbook)
        self.parser = FormulaParser()
        self.resolver = Resolver(workbook)
        self.programs: dict[tuple[int, bool], Program | str] = {}
        self.kept: list[Node] = []
        self.by_cell: dict[int, bool] = {}
        self.ranges: SubtotalRanges | None = None

    def groups(self) -> list[Group]:
        found: list[Group] = []
        for index, sheet in enumerate(self.workbook.sheets):
            found += self._sheet(index, sheet)
        return found

    def _sheet(self, index: int, sheet: Sheet) -> list[Group]:
        groups: list[Group] = []
        shared: dict[int, Node] = {}
        columns: dict[int, _Fill] = {}
        fills: list[_Fill] = []
        parsed = self.parser.tree
        for address, cell in sheet.cells.items():
            if cell.formula is None:
                continue
            try:
                tree = shared.get(cell.shared) if cell.shared is not None else None
                if tree is None:
                    tree = parsed(cell.formula, address)
                    if cell.shared is not None:
                        shared[cell.shared] = tree
            except FormulaError as error:
                groups.append(Group(Run(index, *address), None, reason=str(error)))
                continue
            if cell.array_range is not None or cell.dynamic:
                groups.append(self._array_group(index, sheet, address, cell, tree))
                continue
            row, column = address
            fill = columns.get(column)
            if fill is not None and fill.tree is tree and fill.last == row - 1:
                fill.last = row
            else:
                fill = columns[column] = _Fill(tree, column, row, row)
                fills.append(fill)
        for run, tree in _runs(index, fills):
            groups += self._grouped(run, sheet, tree)
        return groups

    def _array_group(self, index: int, sheet: Sheet, address: Address, cell: Cell, tree: Node) -> Group:
        group = Group(Run(index, *address), tree, spills=cell.dynamic)
        group.area = Area(*address, *address)
        if cell.array_range:
            area = read_area(cell.array_range, (0, 0), None)
            if isinstance(area, RangeRef):
                rows, columns = (area.first_row, area.last_row), (area.first_column, area.last_column)
                assert rows[0] is not None
                assert rows[1] is not None
                assert columns[0] is not None
                assert columns[1] is not None
                group.area = Area(rows[0].number, columns[0].number, rows[1].number, columns[1].number)
        self._compile(group, sheet, array=True)
        return group

    def _grouped(self, run: Run, sheet: Sheet, tree: Node) -> list[Group]:
        if self._by_cell(tree):
            return [part for part in _split(Group(run, tree)) if self._compile(part, sheet, array=False)]
        if run.count > 1 and not self.resolver.is_plain(tree) and not self._alike(run, sheet, tree):
            return [part for part in _split(Group(run, tree)) if self._compile(part, sheet, array=False)]
        group = Group(run, tree)
        self._compile(group, sheet, array=False)
        if group.program is not None and any(self.geometry.must_split(slot, run) for slot in group.program.slots):
            return _split(group)
        return [group]

    def _by_cell(self, tree: Node) -> bool:
        """Whether a formula means another thing in each of its copies."""
        known = self.by_cell.get(id(tree))
        if known is None:
            known = self.by_cell[id(tree)] = holds_subtotal(tree) or asks_of_cells(tree)
        return known

    def _alike(self, run: Run, sheet: Sheet, tree: Node) -> bool:
        """Whether 'this row' of a table means the same in all copies: some may stand beside the table's end."""
        try:
            first = self.resolver.resolve(tree, sheet, run.cell(0))
            return first == self.resolver.resolve(tree, sheet, run.last)
        except CannotEvaluateError:
            return True

    def _compile(self, group: Group, sheet: Sheet, *, array: bool) -> bool:
        assert group.tree is not None
        tree = group.tree
        try:
            if not self.resolver.is_plain(tree):
                tree = self.resolver.resolve(tree, sheet, group.run.cell(0))
                self.kept.append(tree)
            if self._by_cell(group.tree):
                self.ranges = self.ranges or SubtotalRanges(self.workbook, self.geometry)
                tree = with_facts(self.ranges.cut(tree, group.run), group.run, self.workbook, self.geometry)
                self.kept.append(tree)
        except CannotEvaluateError as error:
            group.reason = str(error)
            return True
        group.resolved = tree
        program = self.programs.get((id(tree), array))
        if program is None:
            try:
                program = compile_tree(tree, array)
            except CannotEvaluateError as error:
                program = str(error)
            except RecursionError:
                program = "the formula is nested too deeply"
            self.programs[id(tree), array] = program
        if isinstance(program, str):
            group.reason = program
        else:
            group.program = program
        return True


@dataclass(slots=True)
class _Fill:
    """Copies of one formula below each other."""

    tree: Node
    column: int
    first: int
    last: int


def _runs(sheet: int, fills: list[_Fill]) -> Iterable[tuple[Run, Node]]:
    """Yield runs of equal trees: first those down the columns, then along the rows what is left."""
    single: list[_Fill] = []
    for fill in _joined(fills):
        if fill.first == fill.last:
            single.append(fill)
        else:
            yield Run(sheet, fill.first, fill.column, fill.last - fill.first + 1, 1, 0), fill.tree
    single.sort(key=lambda fill: (fill.first, fill.column))
    start = 0
    for at in range(1, len(single) + 1):
        if at < len(single):
            here, before = single[at], single[at - 1]
            if here.first == before.first and here.column == before.column + 1 and here.tree is before.tree:
                continue
        across = 1 if at - start > 1 else 0
        yield Run(sheet, single[start].first, single[start].column, at - start, 0, across), single[start].tree
        start = at


def _joined(fills: list[_Fill]) -> list[_Fill]:
    """Order fills by column and row; join those that were read out of order."""
    fills.sort(key=lambda fill: (fill.column, fill.first))
    found: list[_Fill] = []
    for fill in fills:
        last = found[-1] if found else None
        if last and last.column == fill.column and last.last == fill.first - 1 and last.tree is fill.tree:
            last.last = fill.last
        else:
            found.append(fill)
    return found


def _occupied(workbook: Workbook, groups: list[Group]) -> list[Occupancy]:
    occupancy = [Occupancy() for _ in workbook.sheets]
    for index, group in enumerate(groups):
        run, there = group.run, occupancy[group.run.sheet]
        if group.area is not None:
            for column in range(group.area.first_column, group.area.last_column + 1):
                there.add(column, group.area.first_row, group.area.last_row, index)
        elif run.across:
            for lane in range(run.count):
                there.add(run.column + lane, run.row, run.row, index, lane)
        else:
            there.add(run.column, run.row, run.last[0], index)
    for there in occupancy:
        there.settle()
    return occupancy


def _edges(
    geometry: Geometry, groups: list[Group], occupancy: list[Occupancy]
) -> tuple[list[set[int]], dict[Place, int]]:
    """Find what each group reads.

    A rectangle over several groups becomes a node of its own, so that many formulas over one large range cost
    their number plus its size, not the product.
    """
    edges: list[set[int]] = [set() for _ in groups]
    areas: dict[Place, int] = {}
    for index, group in enumerate(groups):
        if group.program is None:
            continue
        for slot in group.program.slots:
            for place in geometry.covered(slot, group.run):
                node = areas.get(place)
                if node is None:
                    found = occupancy[place[0]].groups(place[1])
                    if len(found) <= 1:
                        edges[index] |= found
                        continue
                    node = areas[place] = len(edges)
                    edges.append(found)
                edges[index].add(node)
    return edges, areas


def _ordered(edges: list[set[int]], count: int) -> tuple[list[int], list[list[int]]]:
    """Return the nodes in order, and the rings among the first `count` of them."""
    order: list[int] = []
    rings: list[list[int]] = []
    for component in strongly_connected(edges):
        if len(component) > 1 or component[0] in edges[component[0]]:
            rings.append(sorted(index for index in component if index < count))
        else:
            order.append(component[0])
    return order, rings
