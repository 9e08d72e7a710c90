"""How many of the seeded faults the check finds, how often it cries wolf, and how much it covers."""

from __future__ import annotations

import re
import tempfile
from dataclasses import dataclass, field
from pathlib import Path

from tests.check.written_sheets import Fault, Written, all_written, build

from doubler.check.examination import CheckReport, check
from doubler.check.finding import FAMILY_OF, Finding


@dataclass
class Outcome:
    """What the check said of one workbook."""

    book: Written
    fault: Fault | None
    report: CheckReport
    hits: list[Finding] = field(default_factory=list)
    strays: list[Finding] = field(default_factory=list)

    @property
    def found(self) -> bool:
        """Whether the fault was found, once and where it is."""
        several = self.fault is not None and self.fault.kind == "negative-margin"
        return len(self.hits) == 1 or (several and bool(self.hits))

    @property
    def name(self) -> str:
        """What was checked, in words."""
        return self.book.name + (f" #{self.fault.number} {self.fault.kind} at {self.fault.at}" if self.fault else "")


def outcome(book: Written, fault: Fault | None, folder: Path) -> Outcome:
    """Build a workbook, check it, and part what was found into the fault and strays."""
    report = check(build(book, folder / f"{book.name}_{fault.number if fault else 0}.xlsx", fault))
    result = Outcome(book, fault, report)
    for finding in report.findings:
        if fault is not None and finding.kind == fault.kind and stands_at(book, fault, finding):
            result.hits.append(finding)
        elif finding.severity != "note" and not _goes_with(book, fault, finding):
            result.strays.append(finding)
    return result


def _goes_with(book: Written, fault: Fault | None, finding: Finding) -> bool:
    """Return whether a finding is right beside the fault: a margin below zero too, or trouble at one cell."""
    if fault is None:
        return False
    return fault.kind == finding.kind == "negative-margin" or stands_at(book, fault, finding)


def stands_at(book: Written, fault: Fault, finding: Finding) -> bool:
    """Return whether a finding stands at the fault's cell, or at the line of like formulas that begins there."""
    places = [book.address(at) for at in fault.at.split("|")]
    return (finding.sheet, re.split("[:,]", finding.cell)[0]) in places


def measured(folder: Path | None = None) -> tuple[list[Outcome], list[Outcome], list[Outcome]]:
    """Return the outcomes of all seeded workbooks, of their clean twins, and of those that are no calculations."""
    with tempfile.TemporaryDirectory() as made:
        place = folder or Path(made)
        books = all_written()
        seeded = [outcome(book, fault, place) for book in books for fault in book.faults]
        clean = [outcome(book, None, place) for book in books]
        others = [outcome(book, None, place) for book in all_written("others")]
    return seeded, clean, others


def table(seeded: list[Outcome], clean: list[Outcome], others: list[Outcome]) -> str:
    """Write the figures as a Markdown table, a kind a line."""
    lines = [
        "| kind | seeded | found | recall | false alarms in seeded books |",
        "| --- | ---: | ---: | ---: | ---: |",
    ]
    kinds = [kind for kind in FAMILY_OF if any(o.fault and o.fault.kind == kind for o in seeded)]
    for kind in kinds:
        mine = [o for o in seeded if o.fault and o.fault.kind == kind]
        lines.append(_line(kind, mine))
    lines.append(_line("**all**", seeded))
    formulas = sum(o.report.formulas for o in [*clean, *others])
    strays = sum(len(o.strays) for o in [*clean, *others])
    all_formulas = formulas + sum(o.report.formulas for o in seeded)
    all_strays = strays + sum(len(o.strays) for o in seeded)
    traced = sum(o.report.traced for o in clean) / max(1, sum(o.report.formulas for o in clean))
    recalculated = sum(o.report.recalculated for o in clean) / max(1, sum(o.report.formulas for o in clean))
    return "\n".join(
        [
            *lines,
            "",
            f"- Clean calculations: {len(clean)}; workbooks that are no stress calculations: {len(others)}.",
            (
                f"- False findings in clean workbooks: {strays} in {formulas} formulas "
                f"({1000 * strays / max(1, formulas):.2f} a thousand)."
            ),
            (
                f"- Findings beside the seeded fault, over all workbooks: {all_strays} in {all_formulas} formulas "
                f"({1000 * all_strays / max(1, all_formulas):.2f} a thousand)."
            ),
            (
                f"- Of the clean calculations' formulas {100 * traced:.1f} % were traced and "
                f"{100 * recalculated:.1f} % recalculated."
            ),
        ]
    )


def _line(kind: str, outcomes: list[Outcome]) -> str:
    found = sum(o.found for o in outcomes)
    strays = sum(len(o.strays) for o in outcomes)
    return f"| {kind} | {len(outcomes)} | {found} | {100 * found / len(outcomes):.0f} % | {strays} |"
