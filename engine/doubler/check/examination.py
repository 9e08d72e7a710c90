"""The check of one workbook: all rules, findings ranked and folded under their roots, what was covered."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass, field
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING, Any

from doubler.check import coverage, elastic, margins, shear_form, strength, structure, units, values
from doubler.check.finding import SEVERITIES, Finding, rank
from doubler.check.folding import folded
from doubler.check.pairs import odd_pairs
from doubler.check.policy import Policy, policy_for
from doubler.check.policy_rules import margins_too_small, units_not_allowed
from doubler.check.round_sections import round_findings
from doubler.check.short_range import short_ranges
from doubler.workbook.collector import collector_held
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
    odd_pairs,
    short_ranges,
    structure.circles,
    structure.external_links,
    structure.hidden_inputs,
    structure.unused_inputs,
    elastic.poisson_ranges,
    elastic.modulus_mismatches,
    strength.margin_findings,
    shear_form.shear_findings,
    round_findings,
    margins.negative_margins,
    coverage.not_recalculated,
    coverage.not_traced,
    coverage.notes_on_units,
)
"""All rules; each looks at the whole workbook and yields what it finds."""


def rules_under(policy: Policy) -> tuple[Rule, ...]:
    """Return all rules with a policy's tolerances, factors, smallest margin and units."""
    given: dict[Rule, Rule] = {
        values.stale_values: partial(values.stale_values, relative=policy.stored),
        elastic.modulus_mismatches: partial(elastic.modulus_mismatches, doubtful=policy.moduli),
        strength.margin_findings: partial(strength.margin_findings, policy=policy),
    }
    more = (partial(margins_too_small, policy=policy), partial(units_not_allowed, policy=policy))
    return (*(given.get(rule, rule) for rule in RULES), *more)


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
    policy, silenced
        The policy under which it was checked, and the findings that it silences.
    """

    path: Path
    sha256: str
    formulas: int
    recalculated: int
    traced: int
    findings: list[Finding]
    book: Examined
    second: SecondRecalculation | None = None
    policy: Policy = field(default_factory=Policy)
    silenced: list[Finding] = field(default_factory=list)

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
        found = {
            "workbook": self.path.name,
            "sha256": self.sha256,
            "coverage": coverage,
            "counts": self.counts,
            "findings": [finding.as_object() for finding in self.findings],
        }
        if self.policy.path is not None:
            found["policy"] = self.policy.as_object(self.silenced)
        return found


def check(path: Path | str, rules: Iterable[Rule] | None = None, policy: Path | str | None = None) -> CheckReport:
    """Check a workbook.

    Parameters
    ----------
    path : Path or str
        An ``.xlsx`` or ``.xlsm`` file; it is only read.
    rules : iterable of Rule, optional
        The rules to apply; all where they are left out.
    policy : Path or str, optional
        The policy file; where it is left out, ``doubler.toml`` beside the workbook, if there is one.

    Returns
    -------
    CheckReport

    Raises
    ------
    InputError
        The file is no workbook, is damaged, encrypted or hostile.
    """
    asked = policy_for(Path(path), policy)
    with collector_held():
        return report_on(Examined.read(path), Path(path), rules, asked)


def report_on(
    book: Examined, path: Path, rules: Iterable[Rule] | None = None, policy: Policy | None = None
) -> CheckReport:
    """Apply the rules to a workbook that has been examined."""
    policy = policy or Policy()
    found = [finding for rule in (rules_under(policy) if rules is None else rules) for finding in rule(book)]
    total = sum(1 for _ in book.formulas())
    recalculated = total
    if book.values.not_evaluated:
        recalculated = sum(not isinstance(book.value(key), NotEvaluated) for key, _ in book.formulas())
    lost = sum(len(keys) for keys in book.tracing.not_traced().values())
    kept, silenced = policy.applied(folded(book, found))
    return CheckReport(
        path,
        book.workbook.sha256,
        total,
        recalculated,
        total - lost,
        sorted(kept, key=rank),
        book,
        policy=policy,
        silenced=silenced,
    )
