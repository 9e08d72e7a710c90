"""Roots and what follows from them: one fault gives one finding, and under it stands what it spoils."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass, field, replace

from doubler.check.finding import FAMILY_OF, Finding
from doubler.check.margins import margins_in
from doubler.check.mend import key_of, keys_of, mend_of, values_when_mended
from doubler.workbook.addresses import cell_name
from doubler.workbook.examined import Examined, Key, cell_name_of, shown
from doubler.workbook.syntax import Number

_MARGIN_RULES = frozenset({"margin-form", "factor-missing", "allowable-mixed"})
MOST_MENDED = 40
"""Roots that are mended on trial to see what becomes of the margins behind them."""
MOST_MARGINS = 200

_UNITS = frozenset(kind for kind, family in FAMILY_OF.items() if family == "units")
_INPUTS = frozenset({"blank-input", "text-number", "circular", "external-link", "poisson-range", "modulus-mismatch"})
_FORMULAS = frozenset(
    {"pasted-number", "pattern-break", "short-range", "margin-form", "factor-missing", "allowable-mixed",
     "shear-strain-form"}
) | _UNITS  # fmt: skip
_SPOILT_BY: dict[str, frozenset[str]] = {
    "negative-margin": _INPUTS | _FORMULAS | {"error-value"},
    "error-value": _INPUTS | _FORMULAS,
    "not-recalculated": frozenset({"external-link", "circular", "error-value"}),
    "not-traced": frozenset({"external-link", "circular", "unit-text"}),
    "modulus-mismatch": frozenset({"poisson-range"}),
    "stale-value": frozenset({"circular"}),
    "factor-missing": frozenset({"margin-form"}),
    **{kind: frozenset({"blank-input", "text-number", "circular", "error-value"}) for kind in _UNITS},
}
"""For each kind that may be a mere consequence the kinds that may cause it."""
_AT_ONE_CELL = (
    "circular", "blank-input", "text-number", "external-link", "short-range", "pasted-number", "error-value",
    "unit-clash", "unit-label", "unit-scale", "angle-unit", "poisson-range", "shear-strain-form", "margin-form",
    "allowable-mixed", "factor-missing", "pattern-break", "stale-value", "negative-margin",
)  # fmt: skip
"""Of several findings at one cell the first of these speaks; the others stand beside it as notes."""


@dataclass
class _Root:
    finding: Finding
    keys: tuple[Key, ...]
    follows: dict[str, None] = field(default_factory=dict)
    told: list[str] = field(default_factory=list)
    turns: bool = False
    reached: set[Key] | None = None


def folded(book: Examined, findings: Iterable[Finding]) -> list[Finding]:
    """Return the findings with all that follows from another folded under it.

    Parameters
    ----------
    book : Examined
        The workbook.
    findings : iterable of Finding
        All that the rules found.

    Returns
    -------
    list of Finding
        Not yet ranked.
    """
    roots, notes = _one_a_cell(_typed_inputs(book, list(findings)))
    by_kind: dict[str, list[_Root]] = {}
    for root in roots:
        by_kind.setdefault(root.finding.kind, []).append(root)
    kept: list[_Root] = []
    dropped: set[int] = set()
    order = sorted(roots, key=lambda root: root.finding.kind == "negative-margin")
    for root in order:
        cause = _cause(book, root, by_kind, dropped)
        if cause is None:
            kept.append(root)
            continue
        dropped.add(id(root))
        cause.follows |= dict.fromkeys((*map(cell_name_of, root.keys), *root.finding.follows))
        if root.finding.kind == "negative-margin":
            cause.told.append(f"the margin in {cell_name_of(root.keys[0])}, {root.finding.found}, rests on it")
    _turned(book, kept)
    gone = {cell for root in roots if id(root) in dropped for cell in map(cell_name_of, root.keys)}
    notes = [note for note in notes if note.kind not in _SPOILT_BY or f"{note.sheet}!{note.cell}" not in gone]
    return [*(_with(root) for root in kept), *notes]


def _with(root: _Root) -> Finding:
    finding = root.finding
    told = "; ".join(root.told[:3])
    more = f" {told[0].upper()}{told[1:]}." if told else ""
    follows = tuple(dict.fromkeys((*finding.follows, *root.follows)))
    return replace(finding, message=finding.message + more, follows=follows, turns=root.turns)


def _one_a_cell(findings: list[Finding]) -> tuple[list[_Root], list[Finding]]:
    """Part the findings that matter from notes; of several at one cell the first in order speaks."""
    notes = [finding for finding in findings if finding.severity == "note"]
    at: dict[tuple[str, str], list[Finding]] = {}
    for finding in findings:
        if finding.severity != "note":
            at.setdefault((finding.sheet, re.split("[:,]", finding.cell)[0]), []).append(finding)
    roots: list[_Root] = []
    for here in at.values():
        here.sort(key=lambda f: _AT_ONE_CELL.index(f.kind) if f.kind in _AT_ONE_CELL else len(_AT_ONE_CELL))
        first, *others = here
        if first.kind in ("text-number", "blank-input"):
            others = [f for f in others if f.kind not in _UNITS]
        for other in others:
            if {first.kind, other.kind} <= {"modulus-mismatch", "poisson-range", "negative-margin", "stale-value"}:
                roots.append(_root(other))
            else:
                notes.append(replace(other, severity="note"))
        roots.append(_root(first))
    seen: set[tuple[str, str, str]] = set()
    single = []
    for note in notes:
        mark = (note.sheet, note.cell, note.kind)
        if mark not in seen:
            seen.add(mark)
            single.append(note)
    return roots, single


def _root(finding: Finding) -> _Root:
    line = (key for cell in finding.follows if (key := _key_in(cell)) is not None)
    return _Root(finding, (*keys_of(finding), *(line if finding.kind in _MARGIN_RULES else ())))


def _cause(book: Examined, root: _Root, by_kind: dict[str, list[_Root]], dropped: set[int]) -> _Root | None:
    """Return the root from which a finding follows, or None where it stands by itself."""
    kinds = _SPOILT_BY.get(root.finding.kind)
    if kinds is None or not root.keys:
        return None
    for kind in kinds:
        for other in by_kind.get(kind, ()):
            if other is root or id(other) in dropped or not other.keys:
                continue
            if other.reached is None:
                starts = set(other.keys)
                if kind in ("circular", "blank-input"):  # the ring itself; an empty cell has readers and no place
                    starts.update(key for key in map(_key_in, other.finding.cells) if key is not None)
                other.reached = book.downstream(starts) | starts
            if _reaches(other.reached, root) and _explains(book, other, root):
                return other
    return None


def _reaches(reached: set[Key], root: _Root) -> bool:
    """Return whether a finding lies in what is reached; one about an input's label, where all that it spoils does."""
    if root.keys[0] in reached:
        return True
    spoilt = [_key_in(cell) for cell in root.finding.follows or root.finding.cells]
    return root.finding.kind in _UNITS and bool(spoilt) and all(key in reached for key in spoilt)


def _key_in(cell: str) -> Key | None:
    sheet, _, address = cell.rpartition("!")
    stub = Finding(sheet.strip("'").replace("''", "'"), address, "circular", "note", "")
    return key_of(stub)


def _explains(book: Examined, cause: _Root, symptom: _Root) -> bool:
    """Return whether mending the cause would mend a negative margin; other symptoms are taken to follow."""
    if symptom.finding.kind != "negative-margin":
        return True
    if symptom.keys[0] in cause.keys:
        return True
    mend = mend_of(book, cause.finding)
    if mend is None:
        return True
    value = values_when_mended(book, mend, [symptom.keys[0]]).get(symptom.keys[0])
    if value is None:
        return True
    if value < 0:
        symptom.told.append(f"it would be {shown(value)} with {cause.finding.sheet}!{cause.finding.cell} mended")
        return False
    return True


def _turned(book: Examined, roots: list[_Root]) -> None:
    """Say of each root which margins it turns from positive to negative when it is mended."""
    tried = 0
    positive: list[Key] | None = None
    for root in roots:
        if root.finding.kind not in _INPUTS | _FORMULAS or not root.keys or tried >= MOST_MENDED:
            continue
        mend = mend_of(book, root.finding)
        if mend is None:
            continue
        if positive is None:
            positive = [key for key in margins_in(book) if (book.number(key) or 0.0) >= 0]
        reached = book.downstream([mend.key]) | {mend.key}
        margins = [key for key in positive if key in reached][:MOST_MARGINS]
        if not margins:
            continue
        tried += 1
        when = values_when_mended(book, mend, margins)
        turned = sorted((value, key) for key, value in when.items() if value < 0)
        if turned:
            value, key = turned[0]
            root.turns = True
            now = shown(book.number(key))
            told = f"MS {now} in {cell_name_of(key)} as written, {shown(value)} when mended"
            others = f", and {len(turned) - 1} more margins turn negative" if len(turned) > 1 else ""
            if "when mended)" in root.finding.message and len(turned) == 1 and key == root.keys[0]:
                continue
            root.told.insert(0, told + others)


def _typed_inputs(book: Examined, findings: list[Finding]) -> list[Finding]:
    """Let an input that nobody reads explain the formula that has its number typed in."""
    unused = [f for f in findings if f.kind == "unused-input"]
    wrong = {key_of(f): f for f in findings if f.kind in _UNITS and f.severity != "note"}
    if not unused:
        return findings
    pasted = {(f.sheet, f.cell.lstrip("ABCDEFGHIJKLMNOPQRSTUVWXYZ")) for f in findings if f.kind == "pasted-number"}
    found = [f for f in findings if f.kind != "unused-input"]
    for finding in unused:
        if (finding.sheet, finding.cell.lstrip("ABCDEFGHIJKLMNOPQRSTUVWXYZ")) in pasted:
            continue
        key = key_of(finding)
        value = None if key is None else book.number(key)
        typed = [
            other for other in wrong
            if other is not None and value not in (None, 0.0, 1.0) and value in _literals(book, other)
        ]  # fmt: skip
        if not typed:
            found.append(finding)
            continue
        names = ", ".join(cell_name(*other[1]) for other in typed)
        found = [f for f in found if not (f.kind in _UNITS and key_of(f) in typed)]
        found.append(
            replace(
                finding,
                severity="warning",
                message=f"No formula reads this input ({book.label(key).text}); "  # type: ignore[arg-type]
                f"{names} {'has' if len(typed) == 1 else 'have'} its number typed in: write {finding.cell} there.",
                cells=tuple(cell_name_of(other) for other in typed),
            )
        )
    return found


def _literals(book: Examined, key: Key) -> set[float]:
    from doubler.check.fills import walk

    tree = book.tree(key)
    return {node.value for node in walk(tree) if isinstance(node, Number)} if tree is not None else set()
