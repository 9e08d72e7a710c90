"""The page of a check record: one self-contained HTML file for screen and paper."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from typing import TYPE_CHECKING, Any

from doubler.check.finding import SEVERITIES
from doubler.check.margin_chart import MOST_BARS, margin_chart
from doubler.check.mohr_circle import mohr_circle
from doubler.check.record_content import CAUTION, Content, Margin
from doubler.check.sheet_map import STATES, sheet_maps
from doubler.check.written_formula import number_shown
from doubler.explain import Explanation, explain

if TYPE_CHECKING:
    from jinja2 import Template

    from doubler.check.examination import CheckReport

MOST_FINDINGS = 400
MOST_MARGINS = 200
"""What a page shows at most; how much more there is, and where it stands, is said on it."""
MOST_CHANGES = 400
MOST_STATES = 60
MOST_CIRCLES = 4
MOST_CHAINS = 4
"""Sheets whose governing margin is followed down to its inputs."""


@dataclass(frozen=True, slots=True)
class Chain:
    """The chain behind the margin that governs a sheet."""

    margin: Margin
    explanation: Explanation


def page(content: Content) -> str:
    """Return the page of a record.

    Parameters
    ----------
    content : Content
        What the record holds.
    """
    from markupsafe import Markup

    maps = sheet_maps(content)
    numbered = [margin for margin in content.margins if margin.value is not None]
    return _template().render(
        content=content,
        report=content.report,
        caution=CAUTION,
        severities=SEVERITIES,
        entries=content.entries[:MOST_FINDINGS],
        maps=[(one, Markup(one.svg)) for one in maps],
        states=STATES,
        chart=Markup(margin_chart(content.margins)),
        bars=min(MOST_BARS, len(numbered)),
        margins=[(margin, content.writer.written(margin.key)) for margin in content.margins[:MOST_MARGINS]],
        chains=list(_chains(content)),
        share=_share,
        circles=[(state, Markup(mohr_circle(state)), on) for state, on in content.states[:MOST_CIRCLES]],
        states_listed=content.states[:MOST_STATES],
        number=number_shown,
        rounded=lambda value: float(f"{value:.5g}") + 0.0,
        against=content.comparison,
        policy=_policy(content.report),
        changes=content.comparison.changes[:MOST_CHANGES] if content.comparison else [],
    )


def _policy(report: CheckReport) -> dict[str, Any] | None:
    """Return what is printed of the policy, or None where the workbook was checked without one."""
    return None if report.policy.path is None else report.policy.as_object(report.silenced)


def _share(part: int, whole: int) -> str:
    """Return a share in per cent that never rounds up to all."""
    return "100" if part == whole else f"{int(1000 * part / whole) / 10:g}"


def _chains(content: Content) -> list[Chain]:
    """Return the chain behind the lowest margin of each sheet, the lowest of all first."""
    governing: dict[str, Margin] = {}
    for margin in content.margins:
        if margin.derived and margin.value is not None:
            governing.setdefault(margin.key[0], margin)
    return [
        Chain(margin, explain(content.report.book, margin.cell)) for margin in list(governing.values())[:MOST_CHAINS]
    ]


@cache
def _template() -> Template:
    from jinja2 import Environment, PackageLoader, StrictUndefined

    filters: dict[str, Any] = {"plural": lambda n, word: f"{n} {word}" if n == 1 else f"{n} {word}s"}
    environment = Environment(
        loader=PackageLoader("doubler.check", "."),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    environment.filters.update(filters)
    return environment.get_template("record.html.j2")
