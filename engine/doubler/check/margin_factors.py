"""Findings about factors that a sheet declares for its margins and that do not act on them once."""

from __future__ import annotations

import re
from collections.abc import Iterator

from doubler.check.finding import Finding
from doubler.check.margin_anatomy import UNKNOWN, Anatomy, FactorGroup, Margins
from doubler.check.roles import ALLOWABLE, APPLIED, FACTOR, MARGIN, Role
from doubler.workbook.addresses import cell_name
from doubler.workbook.examined import Key, cell_name_of, shown

_ALWAYS = frozenset({"fitting", "casting"})


def factor_findings(margins: Margins) -> Iterator[Finding]:
    """Find factors left out of a margin, or applied twice."""
    for group in margins.factors:
        missing: list[Anatomy] = []
        for margin in margins.margins:
            if margin.form == UNKNOWN or group.name not in margin.answers or not _meant_for(margins, group, margin):
                continue
            answer, once = margin.answers[group.name], margin.load_answer
            load_is_ultimate = _ultimate_input(margins, margin) and not group.role.modes
            if _like(answer, once * once) or (load_is_ultimate and _like(answer, once)):
                yield _twice(group, margin, load_is_ultimate and _like(answer, once))
            elif _in_part(margins, group, margin, answer):
                yield _partly(margins, group, margin)
            elif _like(answer, 1.0) and not load_is_ultimate and not _otherwise(margins, group, margin):
                missing.append(margin)
        yield from _missing(margins, group, missing)


_CHECKED = re.compile(
    r"\b(?:utili[sz]ation|usage|unity check|demand/capacity|ratio|unity|verification)\b|"
    r"(?:^|\s)(?:UF|UC|UR|D/C|η)(?=$|[\s_,(\[])",
    re.IGNORECASE,
)


def factors_unread(margins: Margins) -> Iterator[Finding]:
    """Find factors that no formula reads, on sheets whose results are utilisations, where no margin could tell it."""
    book = margins.book
    for sheet in book.workbook.sheets:
        for address, cell in sheet.cells.items():
            key = (sheet.name, address)
            if cell.formula is not None or not isinstance(cell.value, float) or not 1.0 < cell.value <= 5.0:
                continue
            if book.readers.get(key):
                continue
            role = margins.roles.at(key)
            if (
                role is None
                or role.part != FACTOR
                or any(group.name == role.words.casefold() for group in margins.factors)
            ):
                continue
            finding = _unread(margins, key, role, cell.value)
            if finding is not None:
                yield finding


def _unread(margins: Margins, key: Key, role: Role, value: float) -> Finding | None:
    """Tell an unread factor at the one formula that makes a resistance without a factor; else at the factor."""
    book, sheet = margins.book, key[0]
    formulas = [other for other, _ in book.formulas() if other[0] == sheet]
    checks = [other for other in formulas if _CHECKED.search(book.label(other).text)]
    if not checks:
        return None
    factored: list[Key] = []
    bare: list[Key] = []
    for other in formulas:
        roles = [margins.roles.at(read) for read in list(book.cells_read(other))[:12]]
        parts = {found.part for found in roles if found is not None}
        if ALLOWABLE in parts:
            (factored if FACTOR in parts else bare).append(other)
    behind = {other for other in bare if book.downstream([other]) & set(checks) or other in checks}
    lacking = [other for other in bare if other in behind and other not in checks]
    if not factored and not lacking:
        return None
    at = lacking[0] if factored and len(lacking) == 1 else key
    return Finding(
        at[0],
        cell_name(*at[1]),
        "factor-missing",
        "error" if at != key else "warning",
        f"The factor '{role.words.strip(' -[]')}' of {shown(value)} is declared in {cell_name(*key[1])} and no formula "
        f"reads it{f'; {cell_name(*at[1])} takes a strength without a factor' if at != key else ''}; apply it, or say "
        "that it is not meant here.",
        "not applied",
        f"applied once: {shown(value)}",
        (cell_name_of(key), *(cell_name_of(other) for other in lacking[:3])),
        tuple(cell_name_of(other) for other in checks[:6]),
    )


def _like(answer: float, due: float) -> bool:
    return abs(answer - due) <= 0.02 * due


def _meant_for(margins: Margins, group: FactorGroup, margin: Anatomy) -> bool:
    """Return whether a factor's words say that it belongs to a margin."""
    if not _near(margins, group, margin):
        return False
    modes, level = group.role.modes - _ALWAYS, margin.level(margins.roles)
    if modes and not modes & (margin.role.modes or _modes_behind(margins, margin)):
        return False
    if group.role.level and level and group.role.level != level:
        return False
    if group.role.level == "limit":
        return False
    if group.role.level or group.role.modes or level != "yield":
        return True
    here = [other for other in margins.margins if other.key[0] == margin.key[0]]
    if any(m.level(margins.roles) == "yield" and not _like(m.answers.get(group.name, 1.0), 1.0) for m in here):
        return True  # the sheet applies it on yield too
    return not any(other.level(margins.roles) == "ultimate" for other in here)


def _near(margins: Margins, group: FactorGroup, margin: Anatomy) -> bool:
    sheet = margin.key[0]
    return any(
        key[0] == sheet or any(reader[0] == sheet for reader in margins.book.readers.get(key, ())) for key in group.keys
    )


def _modes_behind(margins: Margins, margin: Anatomy) -> frozenset[str]:
    found: frozenset[str] = frozenset()
    for key in (*margin.allowables, *margin.applied):
        role = margins.roles.at(key)
        found |= role.modes if role is not None else frozenset()
    return found


def _ultimate_input(margins: Margins, margin: Anatomy) -> bool:
    """Return whether a load behind the margin is an input that is called ultimate."""
    for key in margin.constants:
        role = margins.roles.at(key)
        if role is not None and role.part == APPLIED and role.level == "ultimate":
            return True
    return False


def _otherwise(margins: Margins, group: FactorGroup, margin: Anatomy) -> bool:
    """Return whether the factor acts in another way: typed as a number, or by a factor that takes its place."""
    if group.value in margins.literals(margin):  # typed in place of the cell
        return True
    if group.role.modes:
        return False
    return any(
        not other.role.modes and other is not group and not _like(margin.answers.get(other.name, 1.0), 1.0)
        for other in margins.factors
    )


def _missing(margins: Margins, group: FactorGroup, missing: list[Anatomy]) -> Iterator[Finding]:
    if not missing:
        return
    root = _common_root(margins, missing) if len(missing) > 1 else None
    users = [m for m in margins.margins if not _like(m.answers.get(group.name, 1.0), 1.0)]
    doubtful = bool(group.role.modes & _ALWAYS) and bool(users)
    for margin in missing if root is None else missing[:1]:
        key = root or margin.key
        yield Finding(
            key[0],
            cell_name(*key[1]),
            "factor-missing",
            "warning" if doubtful and len(users) >= 3 else "error",
            f"{_named(group)} is declared in {cell_name(*group.keys[0][1])} and {_where(root, missing, margin)} leaves "
            f"it out{_effect(margin, 1 / group.value)}; apply it, or say that it is not meant here.",
            "not applied",
            f"applied once: {shown(group.value)}",
            tuple(cell_name_of(k) for k in group.keys[:3]),
            tuple(cell_name_of(m.key) for m in missing) if root is not None else tuple(map(cell_name_of, margin.line)),
        )


def _where(root: Key | None, missing: list[Anatomy], margin: Anatomy) -> str:
    if root is not None:
        return f"the load that leads to {', '.join(cell_name(*m.key[1]) for m in missing[:4])}"
    return f"the {margin.role.part} in {cell_name(*margin.key[1])}"


def _common_root(margins: Margins, missing: list[Anatomy]) -> Key | None:
    """Return the one formula behind all these margins in which other factors are applied."""
    shared = set.intersection(*(margin.chain for margin in missing))
    found = [
        key
        for key in shared
        if any((role := margins.roles.at(read)) is not None and role.part == FACTOR
               for read in margins.book.cells_read(key))
    ]  # fmt: skip
    return found[0] if len(found) == 1 else None


def _twice(group: FactorGroup, margin: Anatomy, ultimate: bool) -> Finding:
    why = (
        "the load is called ultimate and so holds it already"
        if ultimate
        else "the load or the allowable that the formula reads holds it already"
    )
    return Finding(
        margin.key[0],
        cell_name(*margin.key[1]),
        "factor-missing",
        "error",
        f"{_named(group)} ({cell_name(*group.keys[0][1])}) is applied twice in the {margin.role.part}: {why}"
        f"{_effect(margin, group.value)}; apply it once.",
        "applied twice",
        f"applied once: {shown(group.value)}",
        tuple(cell_name_of(key) for key in (*group.keys[:3], *margin.applied[:3])),
        tuple(map(cell_name_of, margin.line)),
    )


_UNFACTORED = re.compile(
    r"\b(?:pre-?load|pre-?tension|pre-?stress|clamp\w*|thermal|temperature|residual|dead|permanent|self-?weight|weight|"
    r"fit|interference|shrink|pressure|torque|ultimate|ult|design)\b|(?:^|\s)(?:γ|ψ)",
    re.IGNORECASE,
)


def _in_part(margins: Margins, group: FactorGroup, margin: Anatomy, answer: float) -> bool:
    """Return whether a factor acts on some of a margin's loads only, and nothing says that the others are without it.

    Loads that are known for certain (preload, dead weight, temperature) commonly have no factor or one of their own.
    """
    once = margin.load_answer
    if not once < 1 or group.role.modes or not 1.05 * once < answer < 0.95:
        return False
    others = [other for other in margins.factors if other is not group and not other.role.modes]
    if any(not _like(margin.answers.get(other.name, 1.0), 1.0) for other in others):
        return False
    loads = [margins.roles.at(key) for key in margin.constants]
    if any(role is not None and role.part == APPLIED and _UNFACTORED.search(role.words) for role in loads):
        return False
    return len(_without(margins, group, margin)) == 1


def _without(margins: Margins, group: FactorGroup, margin: Anatomy) -> list[Key]:
    """Return the formulas behind a margin that make loads of constants alone and that a factor does not reach."""
    reached = margins.book.downstream(group.keys)
    found = []
    for key in margin.chain - reached:
        role = margins.roles.at(key)
        reads = margins.book.cells_read(key)
        if role is not None and role.part == APPLIED and not any(read in margin.chain for read in reads):
            found.append(key)
    return found


def _partly(margins: Margins, group: FactorGroup, margin: Anatomy) -> Finding:
    (key,) = _without(margins, group, margin)
    return Finding(
        key[0],
        cell_name(*key[1]),
        "factor-missing",
        "warning",
        f"{_named(group)} ({cell_name(*group.keys[0][1])}) acts on some loads of the {margin.role.part} in "
        f"{cell_name(*margin.key[1])}, and {cell_name(*key[1])} is without it; apply it here too, or say why it is not "
        "meant.",
        "not applied",
        f"applied once: {shown(group.value)}",
        tuple(cell_name_of(k) for k in (*group.keys[:3], margin.key)),
        (cell_name_of(margin.key),),
    )


def _named(group: FactorGroup) -> str:
    return f"The factor '{group.role.words.strip(' -[]')}' of {shown(group.value)}"


def _effect(margin: Anatomy, change: float) -> str:
    """Say what the margin is and what it would be with its reserve changed."""
    before = margin.reserve(margin.value)
    if before is None:
        return ""
    name = "MS" if margin.role.part == MARGIN else "RF"
    mended = before * change - (1 if margin.role.part == MARGIN else 0)
    return f" ({name} {shown(margin.value)} as written, {shown(mended)} when mended)"
