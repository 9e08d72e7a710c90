"""The check of one workbook: all rules, findings ranked and folded under their roots, what was covered."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

from doubler.check import coverage, elastic, margins, shear_form, strength, structure, units, values
from doubler.check.finding import SEVERITIES, Finding, rank
from doubler.check.folding import folded
from doubler.check.short_range import short_ranges
from doubler.workbook.evaluate import NotEvaluated
from doubler.workbook.examined import Examined

if TYPE_CHECKING:
    from doubler.workbook.second import SecondRecalculation

Rule = Callable[[Examined], Iterable[Finding]]

RULES: tuple[Rule, ...] = (
    units.unit_findings,
    values.stale_values,
    values.error_values,
    values.text_numbers,
    values.blank_inputs,
    structure.filled_lines,
    short_ranges,
    structure.circles,
    structure.external_links,
    structure.hidden_inputs,
    structure.unused_inputs,
    elastic.poisson_ranges,
    elastic.modulus_mismatches,
    strength.margin_findings,
    shear_form.shear_findings,
    margins.negative_margins,
    coverage.not_recalculated,
    coverage.not_traced,
    coverage.notes_on_units,
)
"""All rules; each looks at the whole workbook and yields what it finds."""


@dataclass(frozen=True)
class CheckReport:
    """The check of one workbook.

    Attributes
    ----------
    path, sha256
        The file and the hash of its bytes.
    formulas, recalculated, traced
        How many formula cells there are, how many were recalculated, and how many were traced through their units.
    findings
        Worst first.
    book
        The workbook as examined, for the record.
    second
        The second engine's recalculation, where it was asked for (`doubler.check.confirmation`).
    """

    path: Path
    sha256: str
    formulas: int
    recalculated: int
    traced: int
    findings: list[Finding]
    book: Examined
    second: SecondRecalculation | None = None

    @property
    def counts(self) -> dict[str, int]:
        """How many findings there are of each severity."""
        return {severity: sum(f.severity == severity for f in self.findings) for severity in SEVERITIES}

    def as_object(self) -> dict[str, Any]:
        """Return the check as the contract's JSON object."""
        coverage: dict[str, Any] = {
            "formulas": self.formulas,
            "recalculated": self.recalculated,
            "traced": self.traced,
        }
        if self.second is not None:
            coverage["second"] = self.second.as_object()
        return {
            "workbook": self.path.name,
            "sha256": self.sha256,
            "coverage": coverage,
            "counts": self.counts,
            "findings": [finding.as_object() for finding in self.findings],
        }


def check(path: Path | str, rules: Iterable[Rule] = RULES) -> CheckReport:
    """Check a workbook.

    Parameters
    ----------
    path : Path or str
        An ``.xlsx`` or ``.xlsm`` file; it is only read.
    rules : iterable of Rule, optional
        The rules to apply.

    Returns
    -------
    CheckReport

    Raises
    ------
    InputError
        The file is no workbook, is damaged, encrypted or hostile.
    """
    book = Examined.read(path)
    return report_on(book, Path(path), rules)


def report_on(book: Examined, path: Path, rules: Iterable[Rule] = RULES) -> CheckReport:
    """Apply the rules to a workbook that has been examined."""
    found = [finding for rule in rules for finding in rule(book)]
    total = recalculated = 0
    for key, _ in book.formulas():
        total += 1
        recalculated += not isinstance(book.value(key), NotEvaluated)
    lost = sum(len(keys) for keys in book.tracing.not_traced().values())
    findings = sorted(folded(book, found), key=rank)
    return CheckReport(path, book.workbook.sha256, total, recalculated, total - lost, findings, book)
