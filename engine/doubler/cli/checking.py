"""The verbs `check` and `explain`."""

from __future__ import annotations

import argparse
import json
import os
import sys
from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

from doubler.cli.progress import progress
from doubler.cli.reporting import show_reports
from doubler.errors import InputError

if TYPE_CHECKING:
    from doubler.check.examination import CheckReport


def run_check(options: argparse.Namespace) -> int:
    """Check workbooks, worst finding first."""
    from doubler.workbook.output import refuse_target, write_file

    paths = [Path(book) for book in options.books]
    if options.json and options.json != "-":
        _refuse_read(Path(options.json), paths, options)
        refuse_target(Path(options.json))
    if options.against and len(paths) > 1:
        raise InputError(f"--against {options.against} is for one workbook, and {len(paths)} are given; name one")
    if options.mended:
        if len(paths) > 1:
            raise InputError(f"--mended {options.mended} is for one workbook, and {len(paths)} are given; name one")
        _refuse_read(Path(options.mended), paths, options)
        refuse_target(Path(options.mended))
    if options.record:
        from doubler.check.record import refuse_shared_names

        refuse_shared_names(paths, Path(options.record))
    reports = check_books(paths, second=options.second, policy=options.policy)
    comparison = None
    if options.against:
        from doubler.check.examination import check
        from doubler.check.revisions import compare

        comparison = compare(reports[0], check(Path(options.against), policy=options.policy))
    records = []
    if options.record:
        from doubler.check.record import write_record

        records = [write_record(report, Path(options.record), comparison=comparison) for report in reports]
    objects = [report.as_object() for report in reports]
    if comparison is not None:
        objects[0]["against"] = comparison.as_object()
    text = json.dumps(objects, ensure_ascii=False, indent=1)
    if options.json == "-":
        print(text)
    else:
        show_reports(reports, comparison)
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


def _refuse_read(target: Path, books: Sequence[Path], options: argparse.Namespace) -> None:
    """Refuse to write over a file that the call reads: a checked workbook is only read."""
    read = [*books, *(Path(name) for name in (options.against, options.policy) if name)]
    if any(os.path.exists(path) and os.path.exists(target) and target.samefile(path) for path in read):
        raise InputError(f"{target} is a file that is read; write to another name")


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


def run_explain(options: argparse.Namespace) -> int:
    """Print the chain behind one cell."""
    from doubler.explain import as_markdown, as_text, explain

    explanation = explain(Path(options.book), options.cell)
    if options.json:
        print(json.dumps(explanation.as_object(), ensure_ascii=False, indent=1))
    else:
        print(as_markdown(explanation) if options.markdown else as_text(explanation))
    return 0
