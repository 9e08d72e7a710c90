"""Two revisions of a workbook side by side: what changed in inputs, formulas, units and margins, and in findings."""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from typing import Any

from doubler.check.examination import CheckReport
from doubler.check.finding import Finding
from doubler.check.margins import margins_in
from doubler.check.meaning import Meanings, cells_matched
from doubler.check.mend import key_of
from doubler.workbook.evaluate import NotEvaluated
from doubler.workbook.examined import Examined, Key, cell_name_of, shown


@dataclass(frozen=True, slots=True)
class Change:
    """One thing that changed: what it is, where it stands now, what it was and what it is."""

    what: str
    cell: str
    label: str
    before: str
    after: str

    def as_object(self) -> dict[str, str]:
        """Return it for JSON."""
        return {
            "what": self.what,
            "cell": self.cell,
            "label": self.label,
            "before": self.before,
            "after": self.after,
        }


@dataclass
class Comparison:
    """What changed from an old workbook to a new one.

    Attributes
    ----------
    old
        Name of the old file.
    changes
        Inputs, formulas, units and margins that differ, that are new, or that are gone.
    gone, left, new
        Findings of the old check that are no more, that are still there, and those that came.
    """

    old: str
    changes: list[Change] = field(default_factory=list)
    gone: list[Finding] = field(default_factory=list)
    left: list[Finding] = field(default_factory=list)
    new: list[Finding] = field(default_factory=list)

    def as_object(self) -> dict[str, Any]:
        """Return it for JSON."""
        return {
            "old": self.old,
            "changes": [change.as_object() for change in self.changes],
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
    before, after = Meanings(old.book), Meanings(new.book)
    matched = cells_matched(before, after)
    result = Comparison(old.path.name)
    margins = set(margins_in(new.book))
    for key, other in matched.items():
        result.changes += _changes(before, after, key, other, margin=other in margins)
    here = set(matched.values())
    for key in before.of:
        if key not in matched and _labelled(before, key):
            result.changes.append(Change(_kind(old.book, key) + " gone", cell_name_of(key), *_told(old.book, key), ""))
    for key in after.of:
        if key not in here and _labelled(after, key):
            label, value = _told(new.book, key)
            result.changes.append(Change(_kind(new.book, key) + " added", cell_name_of(key), label, "", value))
    _findings(result, new, old, matched)
    return result


def _labelled(meanings: Meanings, key: Key) -> bool:
    return bool(meanings.of[key].words)


def _kind(book: Examined, key: Key) -> str:
    cell = book.cell(key)
    return "formula" if cell is not None and cell.formula is not None else "input"


def _unit(book: Examined, key: Key) -> str:
    declared = book.declarations.unit(*key)
    return "" if declared is None or declared.weak else declared.unit.text


def _told(book: Examined, key: Key) -> tuple[str, str]:
    cell = book.cell(key)
    if cell is not None and cell.formula is not None:
        return book.label(key).text, f"={cell.formula}"
    return book.label(key).text, shown(book.value(key), _unit(book, key))


def _changes(before: Meanings, after: Meanings, key: Key, other: Key, *, margin: bool) -> list[Change]:
    old, new = before.book, after.book
    found: list[Change] = []
    cell, label = cell_name_of(other), new.label(other).text
    kinds = _kind(old, key), _kind(new, other)
    units = _unit(old, key), _unit(new, other)
    values = old.value(key), new.value(other)
    if kinds[0] != kinds[1]:
        texts = _told(old, key)[1], _told(new, other)[1]
        found.append(Change("input made a formula" if kinds[1] == "formula" else "formula made an input", cell, label,
                            *texts))  # fmt: skip
    elif kinds[1] == "formula":
        if before.formula(key) != after.formula(other):
            found.append(Change("formula", cell, label, _told(old, key)[1], _told(new, other)[1]))
    elif not _same(*values):
        found.append(Change("input", cell, label, shown(values[0], units[0]), shown(values[1], units[1])))
    if units[0] != units[1]:
        found.append(Change("unit", cell, label, units[0] or "none", units[1] or "none"))
    if margin and not _same(*values):
        found.append(Change("margin", cell, label, shown(values[0]), shown(values[1])))
    return found


def _same(first: Any, second: Any) -> bool:
    if isinstance(first, NotEvaluated) or isinstance(second, NotEvaluated):
        return isinstance(first, NotEvaluated) and isinstance(second, NotEvaluated)
    if isinstance(first, float) and isinstance(second, float):
        return math.isclose(first, second, rel_tol=1e-9, abs_tol=1e-12)
    return bool(first == second)


def _findings(result: Comparison, new: CheckReport, old: CheckReport, matched: dict[Key, Key]) -> None:
    places: dict[tuple[str, Key | None], Finding] = {}
    for finding in old.findings:
        key = key_of(finding)
        places.setdefault((finding.kind, matched.get(key, key) if key is not None else None), finding)
    for finding in new.findings:
        earlier = places.pop((finding.kind, key_of(finding)), None)
        (result.new if earlier is None else result.left).append(finding)
    result.gone = list(places.values())


def as_lines(comparison: Comparison) -> list[str]:
    """Return the comparison as lines of text."""
    lines = [f"Against {comparison.old}:"]
    for change in comparison.changes:
        arrow = f"{change.before} → {change.after}" if change.before and change.after else change.before or change.after
        lines.append(f"  {change.what:<22} {change.cell:<16} {change.label}: {arrow}")
    if not comparison.changes:
        lines.append("  no input, formula, unit or margin changed")
    for name, findings in (("gone", comparison.gone), ("left", comparison.left), ("new", comparison.new)):
        lines.append(f"  findings {name}: {len(findings)}")
        lines += [f"    {f.severity} {f.kind} {f.sheet}!{f.cell}" for f in findings if f.severity != "note"]
    return lines
