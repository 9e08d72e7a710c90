"""The rules that a policy adds: the factors and the smallest margin that it asks for, the units that it allows."""

from __future__ import annotations

import math
from collections.abc import Iterator

from doubler.check.finding import Finding
from doubler.check.margin_anatomy import UNKNOWN, Anatomy, Margins
from doubler.check.margins import margins_in
from doubler.check.policy import Policy
from doubler.check.roles import APPLIED, MARGIN, Role
from doubler.units import parse_unit
from doubler.workbook.addresses import cell_name
from doubler.workbook.examined import Examined, Key, cell_name_of, shown


def factors_too_small(margins: Margins, policy: Policy) -> Iterator[Finding]:
    """Find declared factors below the policy's, and margins to which no factor is applied that it asks for."""
    for group in margins.factors:
        for name, least in policy.factors.items():
            if not _named(group.role, name):
                continue
            for key in group.keys:
                value = margins.book.number(key)
                if value is not None and value < least * (1 - 1e-9):
                    yield Finding(
                        key[0],
                        cell_name(*key[1]),
                        "factor-missing",
                        "error",
                        f"The factor is {shown(value)} and the policy asks for {shown(least)} ({name}); write "
                        f"{shown(least)}.",
                        shown(value),
                        shown(least),
                    )
    for margin in margins.margins:
        for name, least in policy.factors.items():
            if margin.form == UNKNOWN or least <= 1.0 or not _asked_for(margins, margin, name):
                continue
            if not _applied(margins, margin, name, least):
                reserve = margin.reserve(margin.value)
                effect = ""
                if reserve is not None:
                    then = reserve / least - (1 if margin.role.part == MARGIN else 0)
                    effect = f" ({shown(margin.value)} as written, {shown(then)} when mended)"
                yield Finding(
                    margin.key[0],
                    cell_name(*margin.key[1]),
                    "factor-missing",
                    "error",
                    f"The policy asks for a factor of {shown(least)} ({name}) and the {margin.role.part} has none"
                    f"{effect}; apply it.",
                    "not applied",
                    shown(least),
                    (),
                    tuple(map(cell_name_of, margin.line)),
                )


def _named(role: Role, name: str) -> bool:
    return role.level == name if name in ("limit", "yield", "ultimate") else name in role.modes


def _asked_for(margins: Margins, margin: Anatomy, name: str) -> bool:
    if name in ("limit", "yield", "ultimate"):
        return margin.level(margins.roles) == name
    behind = (margins.roles.at(key) for key in margin.allowables)
    modes = margin.role.modes or frozenset().union(*(role.modes for role in behind if role is not None))
    return name in modes


def _applied(margins: Margins, margin: Anatomy, name: str, least: float) -> bool:
    """Return whether any factor acts on the margin that may be the one asked for, or its loads hold it already."""
    for group in margins.factors:
        answer = margin.answers.get(group.name, 1.0)
        if not math.isclose(answer, 1.0, rel_tol=0.02) and (_named(group.role, name) or not group.role.modes):
            return True
    if any(abs(value - least) < 1e-9 for value in margins.literals(margin)):
        return True
    loads = (margins.roles.at(key) for key in margin.constants)
    return name == "ultimate" and any(
        role is not None and role.part == APPLIED and role.level == "ultimate" for role in loads
    )


def margins_too_small(book: Examined, policy: Policy) -> Iterator[Finding]:
    """Find margins that are not below zero and yet below the smallest that the policy allows."""
    for key in margins_in(book):
        value = book.number(key)
        if value is not None and 0 <= value < policy.smallest_margin:
            yield Finding(
                key[0],
                cell_name(*key[1]),
                "negative-margin",
                "error",
                f"The margin of safety ({book.label(key).text}) is {shown(value)}, below the "
                f"{shown(policy.smallest_margin)} that the policy asks for; change the part, the load or the "
                "allowable.",
                shown(value),
                f"{shown(policy.smallest_margin)} or more",
            )


def units_not_allowed(book: Examined, policy: Policy) -> Iterator[Finding]:
    """Find units that the policy does not allow, each once."""
    if not policy.units:
        return
    allowed = [parse_unit("1" if text == "-" else text) for text in policy.units]
    seen: dict[str, tuple[Key, list[Key]]] = {}
    for sheet in book.workbook.sheets:
        for address, cell in sheet.cells.items():
            if cell.formula is None and not isinstance(cell.value, float):
                continue
            key = (sheet.name, address)
            declared = book.declarations.unit(*key)
            if declared is None or declared.weak:
                continue
            unit = declared.unit
            if any(one.dimension == unit.dimension and math.isclose(one.scale, unit.scale) for one in allowed):
                continue
            seen.setdefault(unit.text, (key, []))[1].append(key)
    for text, (first, keys) in seen.items():
        yield Finding(
            first[0],
            cell_name(*first[1]),
            "unit-text",
            "warning",
            f"The unit {text} is none of those that the policy allows ({', '.join(policy.units)}); it stands at "
            f"{len(keys)} {'cell' if len(keys) == 1 else 'cells'}.",
            text,
            "",
            tuple(cell_name_of(key) for key in keys[1:12]),
        )
