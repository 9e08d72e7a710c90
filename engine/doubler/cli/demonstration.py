"""The verb `demo`: the main job on shipped, invented data."""

from __future__ import annotations

import argparse
import shutil
from pathlib import Path

from doubler.cli.checking import check_books
from doubler.cli.progress import progress
from doubler.cli.reporting import show_reports
from doubler.cli.terminal import envelope_table
from doubler.errors import InputError


def run_demo(options: argparse.Namespace) -> int:
    """Fill a template with 200 load cases, check a colleague's workbook, write the record, and say where all is."""
    from contextlib import ExitStack

    from doubler.check.many import outcome_of
    from doubler.check.record import write_record
    from doubler.demo_data import templates_folder
    from doubler.fill import fill

    shipped = templates_folder()
    out = Path(options.out)
    try:
        out.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise InputError(f"the folder {out} can't be made ({error.strerror or error}); give another") from None
    inputs = out / "inputs"
    given = [
        shipped / "tension_strap.xlsx",
        shipped / "demo" / "strap_cases.csv",
        shipped / "demo" / "colleague_bracket.xlsx",
    ]
    _copy(given, inputs)
    template, cases, colleague = (inputs / path.name for path in given)

    print("1. A tension strap with a pin joint, filled with 200 invented load cases")
    with ExitStack() as stack:
        report = fill(template, cases, out / "filled", begun=lambda n: stack.enter_context(progress("filling", n)))
    envelope_table(report.envelope)
    print("\n2. A colleague's workbook, with faults put in on purpose, and one of the filled ones, which has none")
    filled = next(iter(sorted(report.folder.glob("*.xlsx"))))
    checked = check_books([colleague, filled])
    show_reports([outcome_of(one) for one in checked])
    pages = [write_record(one, out / "record") for one in checked]
    print("\n3. Where everything is")
    for what, where in (
        ("template, cases and colleague's workbook", inputs),
        (f"{report.written + report.kept} filled workbooks", report.folder),
        ("summary with envelope and chart", report.summary),
        *(("check record to read, print and sign", page.html) for page in pages),
        *(("the workbook with the findings marked", page.workbook) for page in pages),
    ):
        print(f"  {what:<44} {where}")
    found = any(one.counts["error"] for one in checked) or report.fails
    print("\nExit status 1: margins below zero and errors were found, as they are meant to be here.")
    return 1 if found else 0


def _copy(paths: list[Path], folder: Path) -> None:
    try:
        folder.mkdir(parents=True, exist_ok=True)
        for path in paths:
            part = folder / f".{path.name}.part"
            shutil.copyfile(path, part)
            part.replace(folder / path.name)
    except OSError as error:
        raise InputError(f"{folder} can't be written ({error.strerror or error}); give another folder") from None
