"""What a check says of a cell: the finding, its kind, and how severe it is."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Any

SEVERITIES = ("error", "warning", "note")
"""The result is wrong or can't be relied on; likely wrong, a person must look; worth knowing."""

FAMILIES: dict[str, tuple[str, ...]] = {
    "units": ("unit-clash", "unit-label", "unit-scale", "angle-unit", "unit-text"),
    "values": ("stale-value", "error-value", "text-number", "blank-input"),
    "structure": (
        "pasted-number",
        "pattern-break",
        "short-range",
        "circular",
        "external-link",
        "hidden-input",
        "unused-input",
    ),
    "mechanics": (
        "modulus-mismatch",
        "poisson-range",
        "shear-strain-form",
        "margin-form",
        "factor-missing",
        "allowable-mixed",
        "negative-margin",
    ),
    "coverage": ("not-recalculated", "not-traced"),
}
"""The kinds of finding, by family; each kind has its page in docs/findings/."""

FAMILY_OF = {kind: family for family, kinds in FAMILIES.items() for kind in kinds}


@dataclass(frozen=True, slots=True)
class Finding:
    """One finding, as the JSON of ``doubler check`` gives it.

    Attributes
    ----------
    sheet, cell
        Where it is: the sheet's name and the address inside it (a range where a whole fill is meant).
    kind
        One of `FAMILY_OF`.
    severity
        One of `SEVERITIES`.
    message
        One sentence that says what is wrong and what to write.
    found, expected
        What stands there and what should, as text; empty where there is no such thing.
    cells
        Other cells that bear on it, with their sheets.
    follows
        Cells that are wrong because this one is: what was folded under it.
    turns
        Whether a margin that is positive as written is negative when this is mended: such a finding comes first.
    """

    sheet: str
    cell: str
    kind: str
    severity: str
    message: str
    found: str = ""
    expected: str = ""
    cells: tuple[str, ...] = ()
    follows: tuple[str, ...] = field(default=())
    turns: bool = False

    def __post_init__(self) -> None:
        if self.kind not in FAMILY_OF:
            raise ValueError(f"no such kind of finding: {self.kind}")
        if self.severity not in SEVERITIES:
            raise ValueError(f"no such severity: {self.severity}")

    def as_object(self) -> dict[str, Any]:
        """Return the finding as the contract's JSON object."""
        found: dict[str, Any] = {
            "sheet": self.sheet,
            "cell": self.cell,
            "kind": self.kind,
            "severity": self.severity,
            "message": self.message,
            "found": self.found,
            "expected": self.expected,
            "cells": list(self.cells),
        }
        if self.follows:
            found["follows"] = list(self.follows)
        return found


def rank(finding: Finding) -> tuple[bool, int, int, str, str]:
    """Return a sort key: worst first, then family by family, then where it stands."""
    order = list(FAMILY_OF)
    return not finding.turns, SEVERITIES.index(finding.severity), order.index(finding.kind), finding.sheet, finding.cell
