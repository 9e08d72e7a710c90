"""The rules about margins, over one taking apart of all margins of a workbook."""

from __future__ import annotations

from collections.abc import Iterator

from doubler.check.finding import Finding
from doubler.check.margin_allowables import allowables_mixed
from doubler.check.margin_anatomy import Margins
from doubler.check.margin_factors import factor_findings, factors_unread
from doubler.check.margin_form import margin_forms
from doubler.check.policy import Policy
from doubler.check.policy_rules import factors_too_small
from doubler.check.roles import Roles, Table
from doubler.workbook.examined import Examined

NO_POLICY = Policy()


def margin_findings(book: Examined, policy: Policy = NO_POLICY) -> Iterator[Finding]:
    """Find margins of the wrong form, with the wrong allowable, without a factor or with one too many."""
    margins = Margins(book, Roles(book, Table(policy.terms)))
    yield from factors_too_small(margins, policy)
    yield from margin_forms(margins)
    yield from allowables_mixed(margins)
    yield from factor_findings(margins)
    yield from factors_unread(margins)
