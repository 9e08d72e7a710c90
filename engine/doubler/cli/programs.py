"""The verb `host`: the worksheet functions in a spreadsheet program."""

from __future__ import annotations

import argparse
import json
from pathlib import Path

from doubler.cli import DONE, FOUND


def run_host(options: argparse.Namespace) -> int:
    """Install, remove, look at or test the functions in Calc or Excel; say what was done and how to undo it."""
    profile = Path(options.profile) if options.profile else None
    if options.program == "calc":
        from doubler.hosts import calc_commands

        report = calc_commands.run(options.action, profile)
    else:
        from doubler.hosts import excel_commands

        report = excel_commands.run(options.action, profile)
    if options.json:
        print(json.dumps(report.as_object(), ensure_ascii=False, indent=1))
    else:
        print("\n".join(report.lines))
    return DONE if report.right else FOUND
