"""Findings and changes as tables on the terminal."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

from doubler.cli.terminal import CAUTION, console

if TYPE_CHECKING:
    from rich.console import Console
    from rich.table import Table

    from doubler.check.finding import Finding
    from doubler.check.many import Outcome
    from doubler.check.revisions import Comparison

_STYLES = {"error": "bold red", "warning": "yellow", "note": "cyan"}
MOST_CHANGES = 200
"""Changes shown at most; all of them stand in the JSON."""


def _table() -> Table:
    from rich import box
    from rich.table import Table

    return Table(box=box.SIMPLE_HEAD, show_edge=False, pad_edge=False)


def show_reports(reports: Sequence[Outcome], comparison: Comparison | None = None) -> None:
    """Print the findings of each workbook as a table, worst first; then what changed since an earlier revision."""
    from rich.text import Text

    screen = console()
    for report in reports:
        counts = report.counts
        title = Text(report.path.name, "bold")
        title.append(
            f"   {report.formulas} formulas, {report.recalculated} recalculated, {report.traced} traced through "
            "their units",
            "dim",
        )
        if report.second is not None:
            told = report.second
            title.append(
                f"\n  second engine: {told['match']} match, {told['differ']} differ, "
                f"{told['not_evaluated']} not evaluated",
                "dim",
            )
        screen.print(title)
        if not report.findings:
            screen.print(Text("  Nothing found: every formula was recalculated and every unit traced.", "green"))
            screen.print()
            continue
        table = _table()
        table.add_column("", no_wrap=True)
        table.add_column("cell", no_wrap=True, max_width=28)
        table.add_column("kind", no_wrap=True)
        table.add_column("what, and what to write", ratio=1)
        for finding in report.findings:
            style = _STYLES[finding.severity]
            count = len(finding.follows)
            follows = f" ({count} {'cell follows' if count == 1 else 'cells follow'} from it)" if count else ""
            table.add_row(
                Text(finding.severity, style),
                Text(f"{finding.sheet}!{finding.cell}"),
                Text(finding.kind, style),
                Text(finding.message + follows),
            )
        screen.print(table)
        summary = ", ".join(f"{n} {word if n == 1 else word + 's'}" for word, n in counts.items() if n)
        screen.print(Text(f"  {summary}", "bold"))
        screen.print()
    if comparison is not None:
        _show_changes(screen, comparison)
    screen.print(Text(CAUTION, "dim"))


def _show_changes(screen: Console, comparison: Comparison) -> None:
    from rich.text import Text

    screen.print(Text(f"Against {comparison.old}", "bold"))
    for line in _about_sheets(comparison):
        screen.print(Text(f"  {line}", "dim"))
    if not comparison.changes:
        screen.print(Text("  no input, formula, unit or margin changed"))
    else:
        table = _table()
        for name in ("changed", "cell"):
            table.add_column(name, no_wrap=True, max_width=28)
        table.add_column("called", max_width=40)
        for name in ("before", "now"):
            table.add_column(name, ratio=1)
        for change in comparison.changes[:MOST_CHANGES]:
            many = f" ({change.count} cells)" if change.count > 1 else ""
            texts = (change.what + many, change.cell, change.label, change.before, change.after)
            table.add_row(*map(Text, texts))
        screen.print(table)
        if len(comparison.changes) > MOST_CHANGES:
            screen.print(Text(f"  and {len(comparison.changes) - MOST_CHANGES} changes more, in the JSON"))
    if any(comparison.lowest):
        before, after = (text or "none" for text in comparison.lowest)
        screen.print(Text(f"  lowest margin: {before} before, {after} now", "bold"))
    for name, findings in (("gone", comparison.gone), ("left", comparison.left), ("new", comparison.new)):
        screen.print(Text(f"  findings {name}: {len(findings)}", "bold"))
        for finding in findings:
            if finding.severity != "note":
                screen.print(_one_line(finding))
    screen.print()


def _about_sheets(comparison: Comparison) -> list[str]:
    lines = [f"the sheet {before} is now {after}" for before, after in comparison.renamed]
    lines += [f"the sheet {name} is new" for name in comparison.sheets_added]
    lines += [f"the sheet {name} is gone" for name in comparison.sheets_gone]
    if comparison.moved:
        cells = "1 cell stands" if comparison.moved == 1 else f"{comparison.moved} cells stand"
        lines.append(f"{cells} elsewhere, which is no change")
    return lines


def _one_line(finding: Finding) -> object:
    from rich.text import Text

    line = Text("    ")
    line.append(finding.severity, _STYLES[finding.severity])
    return line.append(f" {finding.kind} {finding.sheet}!{finding.cell}")
