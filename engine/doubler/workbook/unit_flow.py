"""Units traced through every formula of a workbook, each cell's edge judged.

A formula is walked once for all its copies that read equally declared cells. A declared unit is believed by everything
that reads the cell, so that a fault shows where it is made; a cell that declares nothing passes on what it carries.
Undeclared inputs take the unit that the declared results settle, and what they touch is then judged again.
"""

from __future__ import annotations

from collections.abc import Hashable

from doubler.workbook.alike import Constraint, NotTraced, UnitFault, note_constraint
from doubler.workbook.carried import BLANK, Carried, Key, Reading, State, contradictory
from doubler.workbook.declared import Declarations, Declared, declare
from doubler.workbook.graph import Graph, Group
from doubler.workbook.model import Address, Workbook
from doubler.workbook.references import address_text
from doubler.workbook.roles import is_margin
from doubler.workbook.syntax import Node, RangeRef
from doubler.workbook.unit_edge import Edge, fault_inside, judge_edge, notes_of
from doubler.workbook.unit_settle import Settlement, gathered, settle
from doubler.workbook.unit_sheets import SheetUnits, references_in
from doubler.workbook.unit_verdicts import FOUND, NOT_TRACED, SOUND, Judgement, Tracing
from doubler.workbook.unit_walk import Block, Walk

MOST_PASSES = 4
"""How often what undeclared inputs settle may lead to further ones."""


def trace(workbook: Workbook, graph: Graph, declarations: Declarations | None = None) -> Tracing:
    """Trace the units of a workbook.

    Parameters
    ----------
    workbook : Workbook
        As read.
    graph : Graph
        Its formula graph.
    declarations : Declarations, optional
        The declared units of its cells; left out, they are found.

    Returns
    -------
    Tracing
        A verdict on each formula cell, and the faults.
    """
    tracer = _Tracer(graph, declarations if declarations is not None else declare(workbook))
    settlement = Settlement()
    stale: set[Key] | None = None
    for _ in range(MOST_PASSES):
        tracer.run(stale)
        settlement = settle(tracer.lanes, tracer.declarations, tracer.settled)
        if not settlement.units:
            break
        stale = set(settlement.units)
        tracer.settled.update(settlement.units)
    else:
        tracer.run(stale)
    tracing = Tracing(graph, tracer.declarations, settled=tracer.settled)
    tracing._lanes = tracer.lanes
    gathered(tracing, settlement)
    return tracing


class _Tracer:
    """Judges the groups of a graph in the order in which they read each other."""

    def __init__(self, graph: Graph, declarations: Declarations) -> None:
        self.graph = graph
        self.declarations = declarations
        self.settled: dict[Key, Carried] = {}
        self.lanes: dict[int, list[Judgement]] = {}
        self.hidden: dict[str, tuple[Hashable, float, str]] = {}
        self._busy: set[int] = set()
        self._units = SheetUnits(graph, declarations, self.judgement, self.settled)

    def run(self, stale: set[Key] | None) -> None:
        """Judge all groups, or those that met an input whose unit has been settled since."""
        if stale is not None:
            for index, lanes in list(self.lanes.items()):
                if any(not stale.isdisjoint(judgement.met) for judgement in lanes):
                    del self.lanes[index]
        count = len(self.graph.groups)
        for index in (*(node for node in self.graph.order if node < count), *range(count)):
            if index not in self.lanes:
                self._judge_group(index)

    def judgement(self, group: int, lane: int) -> Judgement:
        """Return what was found of a copy, judging its group where that is still to do."""
        lanes = self.lanes.get(group)
        if lanes is None:
            if group in self._busy:
                run = self.graph.groups[group].run
                key = (self.graph.workbook.sheets[run.sheet].name, run.cell(lane))
                raise NotTraced("it is part of a circular reference", (key,))
            lanes = self._judge_group(group)
        return lanes[min(lane, len(lanes) - 1)]

    def _judge_group(self, index: int) -> list[Judgement]:
        group = self.graph.groups[index]
        sheet = group.run.sheet
        name = self.graph.workbook.sheets[sheet].name
        units = self._units
        held = units.asked, units.met, units._own
        self._busy.add(index)
        try:
            units.asked, units.met = [], set()
            units.at(sheet)
            lanes = self._lanes(group, sheet, name)
        finally:
            units.asked, units.met, units._own = held
            self._busy.discard(index)
        self.lanes[index] = lanes
        return lanes

    def _lanes(self, group: Group, sheet: int, name: str) -> list[Judgement]:
        run = group.run
        tree = group.resolved or group.tree
        if tree is None or group.resolved is None:
            lost = self._lost((name, run.cell(0)), group.reason or "it can't be read", None, tree)
            return [lost] * run.count
        references = references_in(tree) if run.count > 1 else []
        units = self._units
        known: dict[Hashable, Judgement] = {}
        lanes: list[Judgement] = []
        for lane in range(run.count):
            host = run.cell(lane)
            declared = self.declarations.unit(name, host)
            if run.count == 1:
                return [self._judge(tree, sheet, (name, host), declared, group)]
            try:
                read = tuple([units.reference_identity(node, host) for node in references])
            except NotTraced as lost:
                lanes.append(self._lost((name, host), lost.reason, declared, tree, lost.cells))
                continue
            signature: Hashable = (
                units.sort_of(declared),
                read,
                tuple(_asked(units, node, host) for node in units.asked),
            )
            found = known.get(signature)
            if found is None:
                found = self._judge(tree, sheet, (name, host), declared, group)
                signature = (units.sort_of(declared), read, tuple(_asked(units, node, host) for node in units.asked))
                known[signature] = found
            lanes.append(found)
        return lanes

    def _judge(self, tree: Node, sheet: int, key: Key, declared: Declared | None, group: Group) -> Judgement:
        units = self._units
        outer, units.met = units.met, set()
        constraints: list[Constraint] = []
        try:
            units.at(sheet)
            walk = Walk(units, key[1], constraints)
            found = walk.node(tree)
            carried = _of_cell(walk, found, group, key[1])
            judgement = self._at_edge(carried, declared, key, constraints)
        except UnitFault as fault:
            judgement = self._inside(fault, declared, key)
        except NotTraced as lost:
            judgement = self._lost(key, lost.reason, declared, tree, lost.cells)
        except RecursionError:
            judgement = self._lost(key, "its formula, or the chain behind it, is nested too deeply", declared, tree)
        except Exception as error:
            # One bad formula never stops the rest; what went wrong is said, not hidden.
            reason = group.reason or f"the trace failed: {type(error).__name__}: {error}"
            judgement = self._lost(key, reason, declared, tree)
        judgement.met = frozenset(units.met)
        judgement.constraints = tuple(constraints)
        judgement.host, judgement.tree = key, tree
        units.met = outer
        return judgement

    def _lost(
        self, key: Key, reason: str, declared: Declared | None, tree: Node | None, cells: tuple[Key, ...] = ()
    ) -> Judgement:
        root = cells[0] if cells else key
        return Judgement(
            NOT_TRACED, None, contradictory((root,)), declared, reason=reason, root=root, host=key, tree=tree
        )

    def _inside(self, fault: UnitFault, declared: Declared | None, key: Key) -> Judgement:
        for node in (fault.first, fault.second):
            doubt = None if node is None else self._doubt(node, key)
            if doubt is not None:
                return self._lost(key, doubt[1], declared, None, (doubt[0],))
        made = fault_inside(fault.kind, fault.words, fault.first, fault.second, fault.factor, address_text(key[1]))
        return Judgement(FOUND, None, contradictory((key,)), declared, faults=(made,), host=key)

    def _at_edge(
        self, carried: Carried, declared: Declared | None, key: Key, constraints: list[Constraint]
    ) -> Judgement:
        cell = address_text(key[1])
        if carried.state is State.CONTRADICTORY:
            root = carried.rooted_at[0] if carried.rooted_at else key
            reason = f"it reads {address_text(root[1])}, whose own units are not clear"
            return Judgement(NOT_TRACED, None, carried, declared, reason=reason, root=root)
        if declared is None or carried.state not in (State.KNOWN, State.UNKNOWN):
            notes = self._hidden_notes(carried, cell)
            return Judgement(SOUND, carried, carried, declared, hidden=carried.hidden, notes=notes)
        if carried.opens:
            due = Reading(declared.unit.scale)
            if not declared.weak:
                own = declared.unit.dimension
                note_constraint(
                    carried, own.without_angle(), (due,), constraints, declared.unit.system, own != own.without_angle()
                )
            return Judgement(SOUND, carried, carried, declared, hidden=carried.hidden)
        sheet = self.graph.workbook.sheet(key[0])
        held = sheet.cells.get(key[1]) if sheet is not None else None
        words = self.declarations.label(*key).words
        edge = judge_edge(carried, declared, words, None if held is None else held.value, cell)
        if edge.faults and edge.faults[0].severity == "error":
            doubt = self._doubt(carried, key)
            if doubt is not None:
                return self._lost(key, doubt[1], declared, None, (doubt[0],))
        return self._concluded(edge, carried, declared, key, cell)

    def _concluded(self, edge: Edge, carried: Carried, declared: Declared, key: Key, cell: str) -> Judgement:
        clash = self._hidden_clash((*carried.hidden, *edge.hidden), key)
        if clash:
            return self._lost(key, clash, declared, None)
        return Judgement(
            FOUND if edge.faults else SOUND,
            carried,
            carried,
            declared,
            edge.uses,
            (*carried.hidden, *edge.hidden),
            edge.faults,
            (*notes_of(carried.hidden, cell), *edge.notes),
            confirms=edge.agrees,
        )

    def _doubt(self, carried: Carried, key: Key) -> tuple[Key, str] | None:
        """Return the cell that is taken as a pure number by a word which may as well mean a coefficient with a unit."""
        del key
        for source in carried.sources:
            if source.weak and not is_surely_pure(self.declarations.label(*source.cell).words):
                reason = f"{address_text(source.cell[1])} declares no unit, and as a pure number it does not fit"
                return source.cell, reason
        return None

    def _hidden_notes(self, carried: Carried, cell: str) -> tuple[str, ...]:
        return notes_of(carried.hidden, cell)

    def _hidden_clash(self, hidden: tuple[object, ...], key: Key) -> str:
        """Let a literal carry the same unit wherever it recurs; return what is wrong where it can't."""
        from doubler.workbook.carried import Hidden

        for item in hidden:
            if not isinstance(item, Hidden) or not item.text[0].isdigit() or len(item.text.strip("0.")) < 3:
                continue
            first = self.hidden.setdefault(item.text, (item.dimension, item.scale, address_text(key[1])))
            if first[0] != item.dimension or abs(first[1] / item.scale - 1) > 1e-6:
                return f"its {item.text} would have to be in another unit than in {first[2]}"
        return ""


def _asked(units: SheetUnits, node: Node, host: Address) -> Hashable:
    """Return what a copy reads as a constant where the judgement hangs on it."""
    if isinstance(node, RangeRef):
        ends = (node.first_row, node.first_column, node.last_row, node.last_column)
        return None if all(axis is None or axis.anchored for axis in ends) else host
    return units.value(node, host), str(units.grid(node, host))


def _of_cell(walk: Walk, found: Carried | Block, group: Group, host: Address) -> Carried:
    """Return the unit of the cell that holds the formula; of a rectangle its first column's, where it spills."""
    if isinstance(found, Carried):
        return found
    if group.area is not None and found.by_column and found.columns > 1:
        items = list(found.by_column[0])
        return walk.alike(items, "put into one column") if items else BLANK
    del host
    return walk.single(found)


def is_surely_pure(words: str) -> bool:
    """Return whether a label names a number that is pure by its nature, and not perhaps a coefficient with a unit."""
    import re

    return is_margin(words) or bool(
        re.search(
            r"\b(?:safety|fitting|ratio|poisson\w*|count|qty|quantity|number of|no\.? of|cycles|knockdown|reserve|"
            r"fractions?|concentration|utili[sz]ation|efficiency|percentage|FS|SF|FF|Kt|ν|nu)\b",
            words,
            re.IGNORECASE,
        )
    )


__all__ = ["Tracing", "trace"]
