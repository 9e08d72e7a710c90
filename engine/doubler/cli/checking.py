"""The verbs `check` and `explain`."""

from __future__ import annotations

import argparse
import json
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from doubler.cli.progress import progress
from doubler.cli.terminal import CAUTION, console
from doubler.errors import InputError

if TYPE_CHECKING:
    from doubler.check.examination import CheckReport

_STYLES = {"error": "bold red", "warning": "yellow", "note": "cyan"}


def run_check(options: argparse.Namespace) -> int:
    """Check workbooks, worst finding first."""
    from doubler.workbook.output import refuse_target, write_file

    paths = [Path(book) for book in options.books]
    if options.json and options.json != "-":
        refuse_target(Path(options.json))
    if options.against and len(paths) > 1:
        raise InputError(f"--against {options.against} is for one workbook, and {len(paths)} are given; name one")
    if options.mended:
        if len(paths) > 1:
            raise InputError(f"--mended {options.mended} is for one workbook, and {len(paths)} are given; name one")
        refuse_target(Path(options.mended))
    if options.record:
        from doubler.check.record import refuse_shared_names

        refuse_shared_names(paths, Path(options.record))
    reports = check_books(paths, second=options.second, policy=options.policy)
    records = []
    if options.record:
        from doubler.check.record import write_record

        records = [write_record(report, Path(options.record)) for report in reports]
    objects = [report.as_object() for report in reports]
    lines: list[str] = []
    if options.against:
        from doubler.check.against import as_lines, compare
        from doubler.check.examination import check

        comparison = compare(reports[0], check(Path(options.against), policy=options.policy))
        objects[0]["against"] = comparison.as_object()
        lines = as_lines(comparison)
    text = json.dumps(objects, ensure_ascii=False, indent=1)
    if options.json == "-":
        print(text)
    else:
        show_reports(reports)
        print(*lines, sep="\n", end="\n" if lines else "")
    if options.mended:
        from doubler.check.mended_copy import mended_as_text, write_mended

        lines = mended_as_text(write_mended(reports[0], Path(options.mended)))
        print(f"{len(lines)} mended in {options.mended}", *lines, sep="\n  ", file=sys.stderr)
    for record in records:
        print(f"check record of {record.name}: {record.html}", file=sys.stderr)
    if options.json and options.json != "-":
        write_file(Path(options.json), [text.encode(), b"\n"])
        print(f"findings written to {options.json}", file=sys.stderr)
    return 1 if any(report.counts["error"] for report in reports) else 0


def check_books(paths: Sequence[Path], *, second: bool = False, policy: str | None = None) -> list[CheckReport]:
    """Check workbooks one after the other, with a bar on a terminal; with a second engine where that is wanted."""
    from doubler.check.examination import check

    reports = []
    with progress("checking", len(paths)) as advance:
        for path in paths:
            report = check(path, policy=policy)
            if second:
                from doubler.check.confirmation import confirmed

                report = confirmed(report)
            reports.append(report)
            advance(1)
    return reports


def show_reports(reports: Sequence[CheckReport]) -> None:
    """Print the findings of each workbook as a table, worst first."""
    from rich import box
    from rich.table import Table
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
            told = report.second.as_object()
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
        table = Table(box=box.SIMPLE_HEAD, show_edge=False, pad_edge=False)
        table.add_column("", no_wrap=True)
        table.add_column("cell", no_wrap=True, max_width=28)
        table.add_column("kind", no_wrap=True)
        table.add_column("what, and what to write", ratio=1)
        for finding in report.findings:
            style = _STYLES[finding.severity]
            follows = f" ({len(finding.follows)} cells follow from it)" if finding.follows else ""
            table.add_row(
                Text(finding.severity, style),
                f"{finding.sheet}!{finding.cell}",
                Text(finding.kind, style),
                finding.message + follows,
            )
        screen.print(table)
        summary = ", ".join(f"{n} {word if n == 1 else word + 's'}" for word, n in counts.items() if n)
        screen.print(Text(f"  {summary}", "bold"))
        screen.print()
    screen.print(Text(CAUTION, "dim"))


def run_explain(options: argparse.Namespace) -> int:
    """Print the chain behind one cell."""
    from doubler.explain import as_markdown, as_text, explain

    explanation = explain(Path(options.book), options.cell)
    if options.json:
        print(json.dumps(explanation.as_object(), ensure_ascii=False, indent=1))
    else:
        print(as_markdown(explanation) if options.markdown else as_text(explanation))
    return 0
