"""The second recalculation as a confirmation of the check: counts, and a word where two engines disagree."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from typing import TYPE_CHECKING

from doubler.check.finding import Finding, rank
from doubler.workbook.addresses import cell_name
from doubler.workbook.examined import Examined, Key, cell_name_of, shown
from doubler.workbook.second import SecondRecalculation, recalculate

if TYPE_CHECKING:
    from doubler.check.examination import CheckReport


def confirmed(report: CheckReport) -> CheckReport:
    """Return a check's report with the second engine's recalculation beside ours.

    Parameters
    ----------
    report : CheckReport
        Of `doubler.check.examination.check`.

    Returns
    -------
    CheckReport
        With `second` set, and a ``not-recalculated`` warning for every root on which the engines disagree.
    """
    second = recalculate(report.book.graph, report.book.values)
    findings = sorted([*report.findings, *_disagreements(report.book, second)], key=rank)
    return replace(report, findings=findings, second=second)


def _disagreements(book: Examined, second: SecondRecalculation) -> Iterator[Finding]:
    found: dict[Key, tuple[str, str]] = {
        difference.where: (shown(difference.ours), shown(difference.theirs)) for difference in second.differences
    }
    if not found:
        return
    downstream = {key: book.downstream([key]) for key in found}
    roots = [key for key in found if not any(key in reached for other, reached in downstream.items() if other != key)]
    for key in roots:
        ours, theirs = found[key]
        yield Finding(
            key[0],
            cell_name(*key[1]),
            "not-recalculated",
            "warning",
            f"Two independent recalculations disagree: {ours} and {theirs}; recalculate the cell by hand.",
            ours,
            theirs,
            (),
            tuple(cell_name_of(other) for other in sorted(downstream[key] & found.keys())),
        )
