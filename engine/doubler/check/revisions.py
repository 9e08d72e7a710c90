"""Two revisions of a workbook side by side: what changed in inputs, formulas, units and margins, and in findings."""

from __future__ import annotations

import math
from collections.abc import Iterable, Iterator
from dataclasses import dataclass, field
from typing import Any

from doubler.check.examination import CheckReport
from doubler.check.finding import Finding
from doubler.check.margins import margins_in
from doubler.check.mend import key_of
from doubler.check.revision_formulas import Formulas
from doubler.check.revision_match import Matching, Side, match
from doubler.workbook.addresses import area_name
from doubler.workbook.evaluate import NotEvaluated
from doubler.workbook.examined import Examined, Key, cell_name_of, shown
from doubler.workbook.model import Address
from doubler.workbook.unit_verdicts import rectangles

SORTS = ("input", "formula", "unit", "margin")
"""What may change; each word may have ``added`` or ``gone`` behind it."""

LONGEST_HEAD = 40


@dataclass(frozen=True, slots=True)
class Change:
    """One thing that changed, in one cell or alike in a block of cells.

    Attributes
    ----------
    what
        ``input``, ``formula``, ``unit`` or ``margin``, alone or with ``added`` or ``gone``; or ``input made a formula``
        and the reverse.
    cell
        Where it stands now, or stood where it is gone: a cell or a range with its sheet.
    label
        What the cell is called.
    before, after
        What it was and what it is; empty where there was or is none.
    was
        Where it stood, where that is another place.
    count
        How many cells.
    """

    what: str
    cell: str
    label: str
    before: str
    after: str
    was: str = ""
    count: int = 1

    def as_object(self) -> dict[str, Any]:
        """Return it for JSON."""
        found = {
            "what": self.what,
            "cell": self.cell,
            "label": self.label,
            "before": self.before,
            "after": self.after,
        }
        more: dict[str, Any] = {"was": self.was} if self.was else {}
        return {**found, **more, "count": self.count}


@dataclass
class Comparison:
    """What changed from an old workbook to a new one.

    Attributes
    ----------
    old, sha256
        Name and hash of the old file.
    changes
        Inputs, formulas, units and margins that differ, that are new, or that are gone.
    gone, left, new
        Findings of the old check that are no more, that are still there, and those that came. Those that are no more
        stand at their place in the old workbook.
    renamed
        Sheets that have another name now: the old name and the new one.
    sheets_added, sheets_gone
        Sheets without a counterpart.
    moved
        How many cells stand elsewhere, which is no change.
    lowest
        The lowest margin, before and after, each with its cell; empty where there is none.
    """

    old: str
    sha256: str = ""
    changes: list[Change] = field(default_factory=list)
    gone: list[Finding] = field(default_factory=list)
    left: list[Finding] = field(default_factory=list)
    new: list[Finding] = field(default_factory=list)
    renamed: list[tuple[str, str]] = field(default_factory=list)
    sheets_added: list[str] = field(default_factory=list)
    sheets_gone: list[str] = field(default_factory=list)
    moved: int = 0
    lowest: tuple[str, str] = ("", "")

    @property
    def counts(self) -> dict[str, int]:
        """How many cells changed, by what changed."""
        found: dict[str, int] = {}
        for change in self.changes:
            found[change.what] = found.get(change.what, 0) + change.count
        return found

    def as_object(self) -> dict[str, Any]:
        """Return it for JSON."""
        return {
            "old": self.old,
            "sha256": self.sha256,
            "counts": self.counts,
            "changes": [change.as_object() for change in self.changes],
            "sheets": {
                "renamed": [{"before": before, "after": after} for before, after in self.renamed],
                "added": self.sheets_added,
                "gone": self.sheets_gone,
            },
            "moved": self.moved,
            "lowest_margin": {"before": self.lowest[0], "after": self.lowest[1]},
            "findings": {
                "gone": [finding.as_object() for finding in self.gone],
                "left": [finding.as_object() for finding in self.left],
                "new": [finding.as_object() for finding in self.new],
            },
        }


def compare(new: CheckReport, old: CheckReport) -> Comparison:
    """Compare two checks, cells matched by meaning; moved rows and renamed sheets are no changes.

    Parameters
    ----------
    new, old : CheckReport

    Returns
    -------
    Comparison
    """
    before, after = Side(old.book), Side(new.book)
    matched = match(before, after)
    result = Comparison(old.path.name, old.sha256)
    result.renamed = [(a, b) for a, b in matched.sheets.items() if a != b]
    result.sheets_added = [name for name in after.words if name not in matched.sheets.values()]
    result.sheets_gone = [name for name in before.words if name not in matched.sheets]
    result.moved = sum(a[1] != b[1] or matched.sheets.get(a[0]) != b[0] for a, b in matched.cells.items())
    old_margins, margins = set(margins_in(old.book)), set(margins_in(new.book))
    raw: list[_Raw] = []
    formulas = Formulas(before, after, matched)
    for key, other in matched.cells.items():
        raw += _changes(formulas, key, other, margin=other in margins)
    here = set(matched.cells.values())
    for key in matched.lost:
        raw.append(_alone(old.book, key, "gone", margin=key in old_margins))
    for sheet, cells in after.words.items():
        for address in cells:
            if (sheet, address) not in here:
                raw.append(_alone(new.book, (sheet, address), "added", margin=(sheet, address) in margins))
    result.changes = list(_grouped(raw, [*after.words, *before.words]))
    result.lowest = (_lowest(old.book, old_margins), _lowest(new.book, margins))
    _findings(result, new, old, matched)
    return result


@dataclass(frozen=True, slots=True)
class _Raw:
    """A change of one cell, and with which others it may be told together."""

    what: str
    key: Key
    was: Key
    label: str
    before: str
    after: str
    together: object = None


def _kind(book: Examined, key: Key) -> str:
    cell = book.cell(key)
    return "formula" if cell is not None and cell.formula is not None else "input"


def _unit(book: Examined, key: Key) -> tuple[str, object]:
    """Return a cell's declared unit as text, and what it is whichever way it is written."""
    declared = book.declarations.unit(*key)
    if declared is None or declared.weak:
        return "", None
    unit = declared.unit
    return unit.text, (unit.dimension, f"{unit.scale:.12g}", unit.offset)


def _told(book: Examined, key: Key) -> str:
    cell = book.cell(key)
    if cell is not None and cell.formula is not None:
        return f"={cell.formula}"
    return shown(book.value(key), _unit(book, key)[0])


def _label(book: Examined, key: Key) -> str:
    """Return what a cell is called: its row's words, and its column's where it has both."""
    label = book.label(key)
    head = label.above[0] if label.left and label.above and label.above[0] not in label.left else ""
    return f"{label.text}, {head}" if head and len(head) <= LONGEST_HEAD else label.text


def _group(book: Examined, key: Key) -> object:
    found = book.graph.group_at(*key)
    return None if found is None else found[0]


def _alone(book: Examined, key: Key, word: str, *, margin: bool) -> _Raw:
    """Return the change of a cell that stands in one of the two revisions only."""
    kind, label = _kind(book, key), _label(book, key)
    text = _told(book, key)
    above = book.label(key).above
    together = ("copies", _group(book, key)) if kind == "formula" else ("like", above[0] if above else label)
    if margin:
        kind, text, together = "margin", shown(book.value(key)), ("one", key[0])
    before, after = (text, "") if word == "gone" else ("", text)
    return _Raw(f"{kind} {word}", key, key, label, before, after, None if margin else together)


def _changes(formulas: Formulas, key: Key, other: Key, *, margin: bool) -> Iterator[_Raw]:
    old, new = formulas.old.book, formulas.new.book
    label = _label(new, other)
    kinds = _kind(old, key), _kind(new, other)
    values = old.value(key), new.value(other)
    if kinds[0] != kinds[1]:
        what = "input made a formula" if kinds[1] == "formula" else "formula made an input"
        yield _Raw(what, other, key, label, _told(old, key), _told(new, other))
    elif kinds[1] == "formula":
        if not formulas.same(key, other):
            together = (_group(old, key), _group(new, other))
            yield _Raw("formula", other, key, label, _told(old, key), _told(new, other), together)
    elif not _same(*values) and not (formulas.old.counts(key) and formulas.new.counts(other)):
        yield _Raw("input", other, key, label, _told(old, key), _told(new, other))
    units = _unit(old, key), _unit(new, other)
    if units[0][1] != units[1][1]:
        texts = units[0][0] or "none", units[1][0] or "none"
        yield _Raw("unit", other, key, label, *texts, texts)
    if margin and not _same(*values):
        yield _Raw("margin", other, key, label, shown(values[0]), shown(values[1]))


def _same(first: Any, second: Any) -> bool:
    if isinstance(first, NotEvaluated) or isinstance(second, NotEvaluated):
        return isinstance(first, NotEvaluated) and isinstance(second, NotEvaluated)
    if isinstance(first, float) and isinstance(second, float):
        return math.isclose(first, second, rel_tol=1e-9, abs_tol=1e-12)
    return type(first) is type(second) and bool(first == second)


def _grouped(raw: Iterable[_Raw], sheets: list[str]) -> Iterator[Change]:
    """Yield the changes in the order of the sheets, those of copies of one formula together."""
    order = {name: number for number, name in reversed(list(enumerate(sheets)))}
    groups: dict[object, dict[Address, _Raw]] = {}
    for one in raw:
        place = one.key if one.together is None else one.together
        groups.setdefault((one.what, one.key[0], place), {})[one.key[1]] = one
    found: list[tuple[tuple[int, int, Address], Change]] = []
    for cells in groups.values():
        for area in rectangles(cells):
            inside = sorted(at for at in cells if at in area) if len(cells) > 1 else list(cells)
            first, last = cells[inside[0]], cells[inside[-1]]
            sheet = first.key[0]
            name = cell_name_of(first.key)
            if len(inside) > 1:
                name = f"{name.rpartition('!')[0]}!{area_name(area)}"
            before, after = first.before, first.after
            if len(inside) > 1 and first.together is not None and first.what.startswith("input"):
                before, after = (f"{a} … {b}" if a else "" for a, b in ((before, last.before), (after, last.after)))
            moved = first.was != first.key
            change = Change(first.what, name, first.label, before, after, cell_name_of(first.was) if moved else "",
                            len(inside))  # fmt: skip
            sort = next((n for n, word in enumerate(SORTS) if first.what.split()[0] == word), len(SORTS))
            found.append(((sort, order.get(sheet, len(order)), inside[0]), change))
    yield from (change for _, change in sorted(found, key=lambda pair: pair[0]))


def _lowest(book: Examined, margins: Iterable[Key]) -> str:
    """Return the lowest margin and its cell, as text."""
    known = [(value, key) for key in margins if (value := book.number(key)) is not None]
    if not known:
        return ""
    value, key = min(known)
    return f"{shown(value)} in {cell_name_of(key)}"


def _findings(result: Comparison, new: CheckReport, old: CheckReport, matched: Matching) -> None:
    places: dict[tuple[str, Key], list[Finding]] = {}
    for finding in old.findings:
        key = key_of(finding)
        place = None if key is None else matched.place(key)
        if place is None:
            result.gone.append(finding)
        else:
            places.setdefault((finding.kind, place), []).append(finding)
    for finding in new.findings:
        key = key_of(finding)
        earlier = None if key is None else places.get((finding.kind, key))
        if earlier:
            earlier.pop()
            result.left.append(finding)
        else:
            result.new.append(finding)
    rest = {id(finding) for findings in places.values() for finding in findings}
    rest |= {id(finding) for finding in result.gone}
    result.gone = [finding for finding in old.findings if id(finding) in rest]
