"""What the trace of units says of each formula cell, and the faults that it found."""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from dataclasses import dataclass, field

from doubler.workbook.alike import Constraint
from doubler.workbook.carried import Carried, Hidden, Key, Use
from doubler.workbook.declared import Declarations, Declared
from doubler.workbook.graph import Graph
from doubler.workbook.model import Address, Area
from doubler.workbook.references import address_text
from doubler.workbook.syntax import Node

SOUND = "sound"
FOUND = "found"
NOT_TRACED = "not traced"


def cell_text(key: Key) -> str:
    """Write a cell with its sheet.

    Examples
    --------
    >>> cell_text(("Lug", (14, 4)))
    'Lug!D14'
    """
    return f"{key[0]}!{address_text(key[1])}"


@dataclass(frozen=True, slots=True)
class UnitFinding:
    """A fault of units, where it is made.

    Attributes
    ----------
    sheet, address
        The cell; of several equal formulas the first.
    kind
        ``unit-clash``, ``unit-label``, ``unit-scale``, ``angle-unit`` or ``unit-text``.
    severity
        ``error``, ``warning`` or ``note``.
    message
        One sentence: what is wrong and what to write.
    factor
        Number found over number right, where the fault is a factor.
    found, expected
        What stands there and what should, as text; empty where there is no such thing.
    cells
        The cells that bear on it.
    areas
        The rectangles of cells that have it, for equal formulas; the first begins at `address`.
    follows
        Formula cells that miss because of it, where it is reported at the cell that they read.
    """

    sheet: str
    address: Address
    kind: str
    severity: str
    message: str
    factor: float | None = None
    found: str = ""
    expected: str = ""
    cells: tuple[Key, ...] = ()
    areas: tuple[Area, ...] = ()
    follows: tuple[Key, ...] = ()

    @property
    def place(self) -> str:
        """The cell, or the ranges, as they are written."""
        if not self.areas:
            return address_text(self.address)
        return ",".join(_area_text(area) for area in self.areas)


def _area_text(area: Area) -> str:
    first, last = address_text((area.first_row, area.first_column)), address_text((area.last_row, area.last_column))
    return first if first == last else f"{first}:{last}"


@dataclass(frozen=True, slots=True)
class Fault:
    """A fault of one formula before it is put in its place: what it is, and what it hangs on.

    `carried` is the unit found and `due` the dimension and scale that it should have; both only where another label
    on one input could put it right.
    """

    kind: str
    severity: str
    message: str
    factor: float | None = None
    found: str = ""
    expected: str = ""
    cells: tuple[Key, ...] = ()
    sides: tuple[tuple[Carried, Carried], ...] = ()


@dataclass(slots=True, eq=False)
class Judgement:
    """What was found of one formula; equal formulas over equally declared cells share one.

    Attributes
    ----------
    state
        `SOUND`, `FOUND` or `NOT_TRACED`.
    carried
        The unit that its arithmetic carries; None where it was not found.
    passed
        What a cell that reads it gets, where it declares nothing itself.
    uses
        Its literals that were taken as conversions.
    hidden
        Its literals that were taken to carry a unit.
    declared
        The unit that its cell declares.
    reason, root
        Why it is not traced, and the cell on which that hangs.
    confirms
        Whether its being sound speaks for the labels that it reads.
    """

    state: str
    carried: Carried | None
    passed: Carried
    declared: Declared | None = None
    uses: tuple[Use, ...] = ()
    hidden: tuple[Hidden, ...] = ()
    faults: tuple[Fault, ...] = ()
    notes: tuple[str, ...] = ()
    reason: str = ""
    root: Key | None = None
    constraints: tuple[Constraint, ...] = ()
    met: frozenset[Key] = frozenset()
    confirms: bool = True
    host: Key = ("", (1, 1))
    tree: Node | None = None


@dataclass(slots=True)
class Tracing:
    """The units of a workbook, traced.

    Attributes
    ----------
    findings
        The faults, each where it is made, in the order of the sheets.
    notes
        What was taken to be so that the formulas are sound: literals that must have a unit.
    declarations
        The declared units on which it rests.
    settled
        The units that results settle for undeclared inputs, by cell (or by the head of a column).
    """

    graph: Graph
    declarations: Declarations
    findings: list[UnitFinding] = field(default_factory=list)
    notes: list[UnitFinding] = field(default_factory=list)
    settled: dict[Key, Carried] = field(default_factory=dict)
    _lanes: dict[int, list[Judgement]] = field(default_factory=dict)

    def verdict(self, sheet: str, address: Address) -> Judgement | None:
        """Return what was found of a formula cell; None for a cell without a formula."""
        found = self.graph.group_at(sheet, address)
        if found is None:
            return None
        group, lane = found
        lanes = self._lanes.get(group)
        return None if not lanes else lanes[min(lane, len(lanes) - 1)]

    def cells(self) -> Iterator[tuple[Key, Judgement]]:
        """Yield every formula cell with what was found of it."""
        for index, lanes in self._lanes.items():
            run = self.graph.groups[index].run
            name = self.graph.workbook.sheets[run.sheet].name
            for lane, judgement in enumerate(lanes):
                yield (name, run.cell(lane)), judgement

    def not_traced(self) -> dict[Key, list[Key]]:
        """Return the cells that could not be traced, under the cell at which each loses its trace."""
        found: dict[Key, list[Key]] = {}
        for key, judgement in self.cells():
            if judgement.state == NOT_TRACED:
                found.setdefault(judgement.root or key, []).append(key)
        return found

    def reason(self, root: Key) -> str:
        """Return why the trace is lost at a cell."""
        judgement = self.verdict(*root)
        if judgement is None:
            return ""
        return judgement.reason or "its own units contradict each other"

    def counts(self) -> dict[str, int]:
        """Return how many formula cells are sound, found at fault and not traced."""
        found = {SOUND: 0, FOUND: 0, NOT_TRACED: 0}
        for lanes in self._lanes.values():
            for judgement in lanes:
                found[judgement.state] += 1
        return found


def rectangles(cells: Iterable[Address]) -> tuple[Area, ...]:
    """Put cells together to rectangles, down the columns first, then across.

    Examples
    --------
    >>> [(a.first_row, a.last_row) for a in rectangles([(3, 2), (4, 2), (7, 2)])]
    [(3, 4), (7, 7)]
    """
    ordered = sorted(set(cells), key=lambda cell: (cell[1], cell[0]))
    columns: list[Area] = []
    for row, column in ordered:
        last = columns[-1] if columns else None
        if last is not None and last.last_column == column and last.last_row == row - 1:
            columns[-1] = Area(last.first_row, column, row, column)
        else:
            columns.append(Area(row, column, row, column))
    areas: list[Area] = []
    for area in sorted(columns, key=lambda a: (a.first_row, a.last_row, a.first_column)):
        last = areas[-1] if areas else None
        joins = last is not None and (last.first_row, last.last_row) == (area.first_row, area.last_row)
        if joins and last is not None and last.last_column == area.first_column - 1:
            areas[-1] = Area(last.first_row, last.first_column, area.last_row, area.last_column)
        else:
            areas.append(area)
    return tuple(areas)
