"""Findings about a margin's form: a reserve factor called a margin of safety, a margin upside down."""

from __future__ import annotations

import re
from collections.abc import Iterator

from doubler.check.finding import Finding
from doubler.check.margin_anatomy import (
    COMPLEMENT,
    INVERTED,
    LACKS_ONE,
    PROPER,
    UNKNOWN,
    UTILISATION,
    Anatomy,
    Margins,
)
from doubler.check.roles import MARGIN
from doubler.workbook.addresses import cell_name
from doubler.workbook.examined import cell_name_of, shown

_MINUS_ONE = re.compile(r"^(.*\S)\s*-\s*1(?:\.0*)?\s*$", re.DOTALL)
_ROUNDS = re.compile(r"(?:ROUND|ROUNDUP|ROUNDDOWN|TRUNC|INT|FLOOR|CEILING|MROUND)(?:\.MATH)?\(", re.IGNORECASE)
_SAYS = {
    LACKS_ONE: "it is allowable over load, a reserve factor",
    INVERTED: "it is load over allowable: the ratio is upside down",
    UTILISATION: "it is load over allowable, a utilisation",
    COMPLEMENT: "it is 1 minus load over allowable, which is no margin of safety and smaller than it",
    PROPER: "it is allowable over load minus 1, a margin of safety",
}


def margin_forms(margins: Margins) -> Iterator[Finding]:
    """Find cells whose label and form do not go together."""
    for margin in margins.margins:
        due = PROPER if margin.role.part == MARGIN else LACKS_ONE
        if margin.form in (UNKNOWN, due):
            continue
        yield _finding(margins, margin, due)
    for margin in margins.utilisations:
        if margin.form in (LACKS_ONE, PROPER, INVERTED):
            yield _finding(margins, margin, UTILISATION)


def _finding(margins: Margins, margin: Anatomy, due: str) -> Finding:
    cell = margins.book.cell(margin.key)
    formula = (cell.formula if cell is not None else None) or ""
    rounded = margin.form not in (LACKS_ONE, PROPER) and _ROUNDS.search(formula)
    mended = "" if rounded else _mended(formula, margin.form, due)
    reserve = margin.reserve(margin.value)
    right = None if reserve is None else {PROPER: reserve - 1, UTILISATION: 1 / reserve}.get(due, reserve)
    name = {PROPER: "margin of safety", UTILISATION: "utilisation"}.get(due, "reserve factor")
    value = "" if right is None else f" ({shown(margin.value)} as written, {shown(right)} when mended)"
    lacking = ": the -1 is missing" if due == PROPER and margin.form == LACKS_ONE else ""
    law = "factors × load/allowable" if due == UTILISATION else "allowable/(factors × load)"
    law += " - 1" if due == PROPER else ""
    advice = f"write ={mended}" if mended else f"write {law} inside the rounding"
    return Finding(
        margin.key[0],
        cell_name(*margin.key[1]),
        "margin-form",
        "error",
        f"The cell is labelled a {name} and {_SAYS[margin.form]}{lacking}{value}; {advice}.",
        f"={formula}",
        f"={mended}" if mended else "",
        tuple(cell_name_of(key) for key in (*margin.allowables, *margin.applied)[:12]),
        tuple(map(cell_name_of, margin.line)),
    )


def _mended(formula: str, form: str, due: str) -> str:
    """Return the formula that gives what the label says."""
    less = _MINUS_ONE.match(formula)
    inside = less[1] if less else formula
    if due == PROPER:
        if form == LACKS_ONE:
            return f"{formula}-1"
        if form == INVERTED:
            return f"1/({inside})-1" if less else f"1/({formula}+1)-1"
        return f"1/({formula})-1" if form == UTILISATION else f"1/(1-({formula}))-1"
    if due == UTILISATION:
        if form == INVERTED:
            return inside if less else f"{formula}+1"
        return f"1/({inside if form == PROPER and less else formula}{'' if form == LACKS_ONE or less else '+1'})"
    if form == PROPER:
        return inside if less else f"{formula}+1"
    if form == UTILISATION:
        return f"1/({formula})"
    return f"1/({formula}+1)" if form == INVERTED else f"1/(1-({formula}))"
