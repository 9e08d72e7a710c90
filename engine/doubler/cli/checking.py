"""The verbs `check` and `explain`."""

from __future__ import annotations

import argparse
import json
import os
import sys
from collections.abc import Sequence
from contextlib import ExitStack
from pathlib import Path
from typing import TYPE_CHECKING

from doubler.cli.progress import progress
from doubler.cli.reporting import show_reports
from doubler.errors import InputError

if TYPE_CHECKING:
    from doubler.check.examination import CheckReport
    from doubler.check.many import Outcome
    from doubler.check.record import Record
    from doubler.check.revisions import Comparison


def run_check(options: argparse.Namespace) -> int:
    """Check workbooks, worst finding first."""
    from doubler.check.many import ALONE, outcome_of
    from doubler.workbook.output import refuse_target

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
    if len(paths) > ALONE:
        return _check_many(paths, options)
    reports = check_books(paths, second=options.second, policy=options.policy)
    comparison = None
    if options.against:
        from doubler.check.examination import check
        from doubler.check.revisions import compare

        comparison = compare(reports[0], check(Path(options.against), policy=options.policy))
    records: list[Record | None] = [None] * len(reports)
    if options.record:
        from doubler.check.record import write_record

        records = [write_record(report, Path(options.record), comparison=comparison) for report in reports]
    outcomes = [outcome_of(report, record) for report, record in zip(reports, records, strict=True)]
    if comparison is not None:
        outcomes[0].told["against"] = comparison.as_object()
    _show(outcomes, options, comparison)
    if options.mended:
        from doubler.check.mended_copy import mended_as_text, write_mended

        lines = mended_as_text(write_mended(reports[0], Path(options.mended)))
        print(f"{len(lines)} mended in {options.mended}", *lines, sep="\n  ", file=sys.stderr)
    _tell_files(outcomes, options)
    return _status(outcomes)


def _check_many(paths: Sequence[Path], options: argparse.Namespace) -> int:
    """Check more workbooks than one process should; where one of them is none, nothing is written."""
    from doubler.check.many import Refusal, Wish, check_many, put_in_place, refused_at_once, waiting_room

    if refused := refused_at_once(paths):
        raise InputError("\n".join(one.sentence for one in refused))
    with ExitStack() as stack:
        folder = Path(options.record) if options.record else None
        staged = None if folder is None else stack.enter_context(waiting_room(folder))
        wish = Wish(options.policy, options.second, folder, staged)
        with progress("checking", len(paths)) as advance:
            found = check_many(paths, wish, advance)
        outcomes = [one for one in found if not isinstance(one, Refusal)]
        if refused := [one for one in found if isinstance(one, Refusal)]:
            if options.json != "-":
                show_reports(outcomes)
            sentences = "\n".join(one.sentence for one in refused)
            if any(one.own for one in refused):
                raise RuntimeError(sentences)
            raise InputError(sentences)
        if staged is not None:
            put_in_place([one.record for one in outcomes if one.record is not None], staged)
    _show(outcomes, options)
    _tell_files(outcomes, options)
    return _status(outcomes)


def _show(outcomes: Sequence[Outcome], options: argparse.Namespace, comparison: Comparison | None = None) -> None:
    if options.json == "-":
        print(_as_json(outcomes))
    else:
        show_reports(outcomes, comparison)


def _as_json(outcomes: Sequence[Outcome]) -> str:
    return json.dumps([one.told for one in outcomes], ensure_ascii=False, indent=1)


def _tell_files(outcomes: Sequence[Outcome], options: argparse.Namespace) -> None:
    from doubler.workbook.output import write_file

    for one in outcomes:
        if one.record is not None:
            print(f"check record of {one.record.name}: {one.record.html}", file=sys.stderr)
    if options.json and options.json != "-":
        write_file(Path(options.json), [_as_json(outcomes).encode(), b"\n"])
        print(f"findings written to {options.json}", file=sys.stderr)


def _status(outcomes: Sequence[Outcome]) -> int:
    return 1 if any(one.counts["error"] for one in outcomes) else 0


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
