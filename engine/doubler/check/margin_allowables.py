"""Findings about margins that compare a load with the allowable of another mode or level."""

from __future__ import annotations

import re
from collections.abc import Iterator

from doubler.check.fills import walk
from doubler.check.finding import Finding
from doubler.check.margin_anatomy import UNKNOWN, Anatomy, Margins
from doubler.check.roles import ALLOWABLE, MARGIN, Role
from doubler.units import kind
from doubler.workbook.addresses import cell_name
from doubler.workbook.examined import Key, cell_name_of, shown
from doubler.workbook.syntax import Call, Number

_GOES_WITH: dict[str, frozenset[str]] = {
    "shear": frozenset({"shear"}),
    "bearing": frozenset({"bearing"}),
    "tension": frozenset({"tension", "bending"}),
    "compression": frozenset({"compression", "buckling"}),
    "bending": frozenset({"tension", "compression", "bending", "buckling"}),
    "buckling": frozenset({"compression", "buckling"}),
}
"""For a mode of loading the modes of the allowables that serve it (common practice)."""

_EQUIVALENT = re.compile(r"\b(?:mises|equivalent|combined|interaction|principal|tresca)\b", re.IGNORECASE)


def allowables_mixed(margins: Margins) -> Iterator[Finding]:
    """Find margins whose allowable belongs to another mode of failure or another level."""
    for margin in margins.margins:
        if len(margin.allowables) != 1:
            continue
        key = margin.allowables[0]
        role = margins.roles.at(key)
        if role is None:
            continue
        wrong = (
            _wrong_mode(margins, margin, role) or _wrong_level(margin, role) or _wrong_sign(margins, margin, key, role)
        )
        if wrong:
            yield _finding(margins, margin, key, role, *wrong)


def _modes(margins: Margins, margin: Anatomy) -> frozenset[str]:
    """Return the modes of loading: those that the margin's own words name, else those of its loads."""
    known = frozenset(_GOES_WITH)
    if _EQUIVALENT.search(margin.role.words):
        return frozenset()
    if margin.role.modes & known:
        return margin.role.modes & known
    found: frozenset[str] = frozenset()
    for key in margin.applied:
        role = margins.roles.at(key)
        if role is None or _EQUIVALENT.search(role.words) or not role.modes & known:
            return frozenset()
        found |= role.modes & known
    return found


def _wrong_mode(margins: Margins, margin: Anatomy, role: Role) -> tuple[frozenset[str], str] | None:
    modes, own = _modes(margins, margin), role.modes & frozenset(_GOES_WITH)
    if not modes or not own:
        return None
    stresses = _modes_of_stresses(margins, margin)
    if stresses and margin.role.modes and not own & frozenset().union(*(_GOES_WITH[mode] for mode in stresses)):
        modes = stresses  # the allowable is the margin's, and the stress another's
    served = frozenset().union(*(_GOES_WITH[mode] for mode in modes))
    if own & served or _converted(margins, margin):
        return None
    return served, f"the load is {_and(modes)} and {role.words!r} is the allowable for {_and(own)}"


def _modes_of_stresses(margins: Margins, margin: Anatomy) -> frozenset[str]:
    """Return the modes that the stresses behind a margin name; a force is named by its direction and tells no mode."""
    found: frozenset[str] = frozenset()
    for key in margin.applied:
        declared, role = margins.book.declarations.unit(*key), margins.roles.at(key)
        named = frozenset() if role is None else role.modes & frozenset(_GOES_WITH)
        if declared is None or declared.unit.dimension != kind("stress").dimension or not named:
            return frozenset()
        if _EQUIVALENT.search(role.words if role is not None else ""):
            return frozenset()
        found |= named
    return found


def _wrong_level(margin: Anatomy, role: Role) -> tuple[frozenset[str], str] | None:
    level = margin.role.level
    if level not in ("yield", "ultimate") or role.level not in ("yield", "ultimate") or role.level == level:
        return None
    return frozenset(), f"it is a margin on {level} and {role.words!r} is the allowable for {role.level}"


def _wrong_sign(margins: Margins, margin: Anatomy, key: Key, role: Role) -> tuple[frozenset[str], str] | None:
    """Tell a load below zero, which is compression, from the tension allowable that it is compared with.

    Only where the sheet has an allowable for compression too: else the one that stands there is meant for both.
    """
    if role.modes & frozenset(_GOES_WITH) != {"tension"} or len(margin.applied) != 1 or margin.form == UNKNOWN:
        return None
    load = margins.roles.at(margin.applied[0])
    value = margins.book.number(margin.applied[0])
    if load is None or load.modes & frozenset(_GOES_WITH) or value is None or value >= 0:
        return None
    served = _GOES_WITH["compression"]
    if _instead(margins, margin, key, role, served, modes_only=True) is None:
        return None
    where = cell_name_of(margin.applied[0])
    return served, f"{where} is {shown(value)}, compression, and {role.words!r} is the allowable for tension"


def _converted(margins: Margins, margin: Anatomy) -> bool:
    """Return whether the formula itself makes one allowable of another: 0.577, 1/√3, 1/2."""
    tree = margins.book.tree(margin.key)
    if tree is None:
        return False
    for node in walk(tree):
        if isinstance(node, Number) and (0.45 <= node.value <= 0.8 or node.value in (2.0, 3.0) or node.text == "1.732"):
            return True
        if isinstance(node, Call) and node.name == "SQRT":
            return True
    return False


def _finding(margins: Margins, margin: Anatomy, key: Key, role: Role, served: frozenset[str], why: str) -> Finding:
    right = _instead(margins, margin, key, role, served)
    cell = margins.book.cell(margin.key)
    formula = (cell.formula if cell is not None else None) or ""
    mended = None if right is None else pointed(formula, margin.key, key, right)
    effect, value = "", margins.book.number(key)
    reserve = margin.reserve(margin.value)
    if right is not None and value and reserve is not None and (due := _in_unit_of(margins, right, key)) is not None:
        then = reserve * due / value - (1 if margin.role.part == MARGIN else 0)
        effect = f" ({shown(margin.value)} as written, {shown(then)} when mended)"
    advice = (
        f"write ={mended}"
        if mended
        else f"use {margins.roles.at(right).words!r} ({cell_name_of(right)})"  # type: ignore[union-attr]
        if right is not None
        else "use the allowable that belongs to it"
    )
    sure = right is not None or margin.role.level != "ultimate"
    return Finding(
        margin.key[0],
        cell_name(*margin.key[1]),
        "allowable-mixed",
        "error" if sure else "warning",
        f"The {margin.role.part} takes the wrong allowable: {why}{effect}; {advice}.",
        f"={formula}",
        f"={mended}" if mended else "",
        (cell_name_of(key), *(cell_name_of(load) for load in margin.applied[:3])),
        tuple(map(cell_name_of, margin.line)),
    )


def _instead(
    margins: Margins, margin: Anatomy, key: Key, role: Role, served: frozenset[str], *, modes_only: bool = False
) -> Key | None:
    """Return the one allowable of the sheet that would be right; None where there is none or several."""
    book = margins.book
    declared = book.declarations.unit(*key)
    sheet = book.workbook.sheet(key[0])
    found = []
    for address in sheet.cells if sheet is not None and declared is not None else ():
        other = (key[0], address)
        role_there = margins.roles.at(other) if other != key else None
        unit = book.declarations.unit(*other)
        if role_there is None or role_there.part != ALLOWABLE or unit is None:
            continue
        if unit.unit.dimension != declared.unit.dimension:  # type: ignore[union-attr]
            continue
        level = margin.role.level or ("" if modes_only else role.level)
        if served and not role_there.modes & served:
            continue
        if not served and (role_there.level != margin.role.level or not role_there.modes & (role.modes or served)):
            continue
        if level and role_there.level and role_there.level != level:
            continue
        found.append(other)
    return found[0] if len(found) == 1 else None


def _in_unit_of(margins: Margins, key: Key, like: Key) -> float | None:
    value = margins.book.number(key)
    own, other = margins.book.declarations.unit(*key), margins.book.declarations.unit(*like)
    if value is None or own is None or other is None:
        return None
    return value * own.unit.scale / other.unit.scale


def pointed(formula: str, host: Key, wrong: Key, right: Key) -> str | None:
    """Return the formula with a reference pointed at another cell; None where it does not name the cell by address."""
    if wrong[0] != right[0] or host[0] != wrong[0]:
        return None
    letters = re.match(r"([A-Z]+)(\d+)", cell_name(*wrong[1]))
    due = re.match(r"([A-Z]+)(\d+)", cell_name(*right[1]))
    assert letters is not None
    assert due is not None
    pattern = re.compile(rf"(?<![A-Za-z0-9_!.])(\$?){letters[1]}(\$?){letters[2]}(?![0-9A-Za-z_(])")
    text, count = pattern.subn(lambda m: f"{m[1]}{due[1]}{m[2]}{due[2]}", formula)
    return text if count else None


def _and(modes: frozenset[str]) -> str:
    return " and ".join(sorted(modes))
