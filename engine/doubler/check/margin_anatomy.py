"""A margin taken apart: the allowables, loads and factors behind it, and how it answers when they change.

Nothing is read from a formula's text. The allowables are doubled and the margin looked at; then the loads; then each
factor. So a margin over a chain of cells, with absolute values, roots, minima and conversions, is understood as well
as one in a single cell.
"""

from __future__ import annotations

import math
from collections.abc import Hashable, Iterable
from dataclasses import dataclass, field

from doubler.check.fills import walk
from doubler.check.roles import ALLOWABLE, APPLIED, FACTOR, MARGIN, RESERVE, USED, Role, Roles
from doubler.check.trials import Trials
from doubler.workbook.examined import Examined, Key
from doubler.workbook.graph import Group
from doubler.workbook.syntax import Number

DEEPEST = 8
WIDEST_READ = 64
LONGEST_LINE = 4096
MOST_APART = 256
"""Copies of one margin that are looked at one by one; in longer fills the first speaks for all."""
_CLOSE = 0.02

PROPER, LACKS_ONE, INVERTED, UTILISATION, COMPLEMENT, UNKNOWN = (
    "proper", "lacks one", "inverted", "utilisation", "complement", "unknown",
)  # fmt: skip
"""A/(f·s) - 1; A/(f·s); f·s/A - 1; f·s/A; 1 - f·s/A; none of these."""


@dataclass
class Anatomy:
    """One margin (of a line of like formulas the first).

    Attributes
    ----------
    key, role, value
        The cell, its role, what it gives.
    allowables, applied
        The nearest cells behind it with these roles.
    chain
        All formula cells between it and its constants, itself included.
    constants
        The constants behind it.
    line
        The other cells of its line of like formulas.
    form
        One of the forms above.
    answers
        For each factor (by its words) the reserve that remains when the factor is doubled, over that of today.
    load_answer
        The same for the loads.
    """

    key: Key
    role: Role
    value: float
    allowables: list[Key]
    applied: list[Key]
    chain: set[Key]
    constants: set[Key]
    line: tuple[Key, ...] = ()
    form: str = UNKNOWN
    answers: dict[str, float] = field(default_factory=dict)
    load_answer: float = 0.5

    def reserve(self, value: float) -> float | None:
        """Return the reserve factor that a value of this cell stands for, by its form."""
        if self.form == PROPER:
            found = value + 1
        elif self.form == LACKS_ONE:
            found = value
        elif self.form in (INVERTED, UTILISATION, COMPLEMENT):
            load = {INVERTED: value + 1, UTILISATION: value, COMPLEMENT: 1 - value}[self.form]
            if load == 0:
                return None
            found = 1 / load
        else:
            return None
        return found if found > 0 else None

    def level(self, roles: Roles) -> str:
        """Return the level at which it is meant: its own, else that of its allowables, else that of its loads."""
        if self.role.level:
            return self.role.level
        for keys in (self.allowables, self.applied):
            levels = {role.level for key in keys if (role := roles.at(key)) is not None}
            if len(levels) == 1 and "" not in levels:
                return levels.pop()
        return ""


@dataclass(frozen=True)
class FactorGroup:
    """The factors of one name."""

    name: str
    role: Role
    keys: tuple[Key, ...]
    value: float


class Margins:
    """All margins of a workbook, taken apart."""

    def __init__(self, book: Examined, roles: Roles) -> None:
        self.book = book
        self.roles = roles
        found = list(self._anatomies())
        self.margins = [margin for margin in found if margin.role.part != USED]
        self.utilisations = [margin for margin in found if margin.role.part == USED]
        self.factors = self._factors() if self.margins else []
        if found:
            self._find_forms(found)
        if self.margins:
            self._ask_factors()

    def _anatomies(self) -> Iterable[Anatomy]:
        book = self.book
        for group in book.graph.groups:
            key = (book.workbook.sheets[group.run.sheet].name, group.run.cell(0))
            if group.tree is None:
                continue
            role = self.roles.at(key)
            value = book.number(key)
            if role is None or role.part not in (MARGIN, RESERVE, USED) or value is None:
                continue
            direct = self._read_by(key)
            if direct is None or any(self._is_margin(read) for read in direct):
                continue
            for lanes in self._like_lanes(group, key[0]):
                own = (key[0], group.run.cell(lanes[0]))
                number, found = book.number(own), self._frontier(own)
                its = self.roles.at(own)
                if found is None or number is None or its is None:
                    continue
                line = tuple((key[0], group.run.cell(lane)) for lane in lanes[1:LONGEST_LINE])
                yield Anatomy(own, its, number, *found, line)

    def _like_lanes(self, group: Group, sheet: str) -> list[list[int]]:
        """Part the copies of a formula by what stands behind the cells that they read: each part is one margin."""
        count = group.run.count
        if count == 1:
            return [[0]]
        if count > MOST_APART:
            return [list(range(min(count, LONGEST_LINE)))]
        parts: dict[Hashable, list[int]] = {}
        for lane in range(count):
            parts.setdefault(self._behind((sheet, group.run.cell(lane)), 3), []).append(lane)
        return list(parts.values())

    def _behind(self, key: Key, depth: int) -> Hashable:
        """Return what tells the chain behind a cell, so far as it is near: the formulas that it and its inputs are."""
        found: list[Hashable] = []
        for read in self._read_by(key) or ():
            at = self.book.graph.group_at(*read)
            tree = None if at is None else self.book.graph.groups[at[0]].tree
            found.append(None if tree is None else (tree, self._behind(read, depth - 1) if depth > 1 else None))
        return tuple(found)

    def _is_margin(self, key: Key) -> bool:
        role = self.roles.at(key)
        return role is not None and role.part in (MARGIN, RESERVE, USED)

    def _read_by(self, key: Key) -> list[Key] | None:
        reads = list(dict.fromkeys(self.book.cells_read(key)))
        return reads if len(reads) <= WIDEST_READ else None

    def _frontier(self, start: Key) -> tuple[list[Key], list[Key], set[Key], set[Key]] | None:
        allowables: dict[Key, None] = {}
        applied: dict[Key, None] = {}
        chain: set[Key] = {start}
        constants: set[Key] = set()
        work = [(start, 0, True)]
        seen = {start}
        while work:
            key, depth, searching = work.pop()
            reads = self._read_by(key)
            if reads is None or depth > 40:
                return None
            for read in reads:
                role = self.roles.at(read)
                still = searching
                if searching and role is not None and role.part in (ALLOWABLE, APPLIED):
                    (allowables if role.part == ALLOWABLE else applied)[read] = None
                    still = False
                if read in seen:
                    continue
                seen.add(read)
                cell = self.book.cell(read)
                if cell is None or cell.formula is None:
                    constants.add(read)
                else:
                    chain.add(read)
                    work.append((read, depth + 1, still and depth < DEEPEST and (role is None or role.part != FACTOR)))
        return list(allowables), list(applied), chain, constants

    def _factors(self) -> list[FactorGroup]:
        """Collect the constants that are factors."""
        groups: dict[str, list[Key]] = {}
        for sheet in self.book.workbook.sheets:
            for address, cell in sheet.cells.items():
                key = (sheet.name, address)
                if cell.formula is not None or not isinstance(cell.value, float) or not 1.0 < cell.value <= 10.0:
                    continue
                role = self.roles.at(key)
                if role is not None and role.part == FACTOR:
                    groups.setdefault(role.words.casefold(), []).append(key)
        found = []
        for name, keys in groups.items():
            role = self.roles.at(keys[0])
            assert role is not None
            found.append(FactorGroup(name, role, tuple(keys), self.book.number(keys[0]) or 1.0))
        return found

    def _find_forms(self, margins: list[Anatomy]) -> None:
        trials = Trials(self.book)
        asked: list[tuple[Anatomy, int | None, int | None]] = []
        for margin in margins:
            numbers = []
            for keys in (margin.allowables, margin.applied):
                held = {key: self.book.number(key) or 0.0 for key in keys}
                doubled = {key: 2 * value for key, value in held.items()}
                # Cells of the chain that are not doubled keep what they hold.
                numbers.append(trials.ask(doubled, margin.key) if any(held.values()) else None)
            asked.append((margin, numbers[0], numbers[1]))
        trials.run()
        for margin, by_allowable, by_load in asked:
            with_allowable = None if by_allowable is None else trials.answers[by_allowable]
            with_load = None if by_load is None else trials.answers[by_load]
            margin.form = form_of(margin.value, with_allowable, with_load)
            before = margin.reserve(margin.value)
            after = None if with_load is None else margin.reserve(with_load)
            if before and after and not math.isclose(before, after):
                margin.load_answer = after / before

    def _ask_factors(self) -> None:
        trials = Trials(self.book)
        asked: list[tuple[Anatomy, FactorGroup, int]] = []
        for margin in self.margins:
            if margin.form == UNKNOWN:
                continue
            for group in self.factors:
                mine = [key for key in group.keys if key in margin.constants]
                if not mine:
                    margin.answers[group.name] = 1.0
                    continue
                doubled = {key: 2 * (self.book.number(key) or 0.0) for key in mine}
                asked.append((margin, group, trials.ask(doubled, margin.key)))
        if not asked:
            return
        trials.run()
        for margin, group, number in asked:
            answer = trials.answers[number]
            before, after = margin.reserve(margin.value), None if answer is None else margin.reserve(answer)
            if before and after:
                margin.answers[group.name] = after / before

    def literals(self, margin: Anatomy) -> set[float]:
        """Return the numbers typed in a margin's formula and in those that lead to ultimate or design loads."""
        found: set[float] = set()
        for key in margin.chain:
            role = self.roles.at(key)
            if key != margin.key and (role is None or not (role.level or "design" in role.words.casefold())):
                continue
            tree = self.book.tree(key)
            if tree is not None:
                found |= {node.value for node in walk(tree) if isinstance(node, Number)}
        return found


def form_of(value: float, with_allowable: float | None, with_load: float | None) -> str:
    """Return a margin's form from what it gives with its allowables doubled and with its loads doubled."""
    forms = []
    if with_allowable is not None:
        forms.append(_form(value, with_allowable))
    if with_load is not None:
        # Doubling the loads of A/(f·s) - 1 is halving its allowables: 2·after = before - 1 and so on.
        forms.append(_form(with_load, value))
    if not forms or any(form != forms[0] for form in forms):
        return UNKNOWN
    return forms[0]


def _form(before: float, doubled: float) -> str:
    """Tell the form from the value and the value for twice the reserve."""
    tolerance = _CLOSE + 1e-9 * (abs(before) + abs(doubled))
    rising, falling = doubled - 2 * before, 2 * doubled - before
    if abs(before - doubled) <= 1e-12 * max(1.0, abs(before)):
        return UNKNOWN
    if abs(rising - 1) <= tolerance:
        return PROPER
    if abs(rising) <= tolerance * min(1.0, abs(before)):
        return LACKS_ONE
    if abs(falling + 1) <= tolerance:
        return INVERTED
    if abs(falling) <= tolerance * min(1.0, abs(doubled)):
        return UTILISATION
    if abs(falling - 1) <= tolerance:
        return COMPLEMENT
    return UNKNOWN
