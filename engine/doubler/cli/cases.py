"""The verbs `fill`, `sweep` and `size`."""

from __future__ import annotations

import argparse
import json
import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from typing import Any

from doubler.cli.progress import progress
from doubler.cli.terminal import envelope_table


def run_fill(options: argparse.Namespace) -> int:
    """Fill one workbook a case, and the summary."""
    from doubler.fill import fill

    with _progress("filling") as begun:
        report = fill(options.template, options.cases, options.out, fresh=options.fresh, begun=begun)
    for text in report.left_empty:
        print(f"doubler fill: no stored value for {text}", file=sys.stderr)
    if options.json:
        _print_json(
            {
                "folder": str(report.folder),
                "summary": str(report.summary),
                "written": report.written,
                "kept": report.kept,
                "envelope": [line.as_object() for line in report.envelope],
                "left_empty": report.left_empty,
            }
        )
    else:
        kept = f", {report.kept} {'was' if report.kept == 1 else 'were'} there and right" if report.kept else ""
        books = "workbook" if report.written == 1 else "workbooks"
        print(f"{report.written} {books} written to {report.folder}{kept}; summary in {report.summary}")
        envelope_table(report.envelope)
    return 1 if report.fails else 0


def run_sweep(options: argparse.Namespace) -> int:
    """Evaluate every case into one table."""
    from doubler.sweep import sweep

    with _progress("sweeping") as begun:
        report = sweep(options.template, options.cases, options.out, scheduler=options.scheduler, begun=begun)
    if options.json:
        _print_json(
            {
                "results": str(report.results),
                "cases": report.cases,
                "envelope": [line.as_object() for line in report.envelope],
            }
        )
    else:
        print(f"{report.cases} {'case' if report.cases == 1 else 'cases'} written to {report.results}")
        envelope_table(report.envelope)
    return 1 if report.fails else 0


def run_size(options: argparse.Namespace) -> int:
    """Solve one input so that every case meets the target."""
    from doubler.size import size

    answer = size(options.template, options.vary, options.between, options.target, options.cases)
    if options.json:
        _print_json(answer.as_object())
    else:
        print(answer.sentence)
    return 0 if answer.found else 1


def _print_json(content: Any) -> None:
    print(json.dumps(content, ensure_ascii=False, indent=1))


@contextmanager
def _progress(what: str) -> Iterator[Callable[[int], Callable[[int], None]]]:
    """Yield a function that opens the bar once the number of cases is known; it closes with the block."""
    from contextlib import ExitStack

    with ExitStack() as stack:
        yield lambda total: stack.enter_context(progress(what, total))
