"""Evaluate and check every workbook of some folders: ``python -m tests.corpus.run FOLDER [FOLDER ...]``.

Each workbook is read, evaluated and checked in a process of its own that has ten seconds. Printed are a table with a
line a folder, the reasons for which formulas are not evaluated, and every stored value that is not reproduced, by kind.
"""

from __future__ import annotations

import math
import multiprocessing
import re
import sys
import time
import traceback
from collections import Counter
from collections.abc import Iterable
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

SECONDS = 10.0
RELATIVE = 1e-9


@dataclass
class Result:
    """What came of one workbook.

    Attributes
    ----------
    refused
        The sentence with which it was refused; empty where it was read.
    trouble
        A crash or a hang: its last lines.
    formulas, evaluated, stored, reproduced
        Numbers of formulas, of those evaluated, of those of these whose file stores a value other than none, and of
        those reproduced.
    reasons
        Why formulas are not evaluated, and how many.
    missed
        The stored values not reproduced: cell, stored, ours, kind.
    findings
        Kinds and severities of the findings of the check.
    told
        The errors and warnings in full.
    """

    path: str
    refused: str = ""
    trouble: str = ""
    formulas: int = 0
    evaluated: int = 0
    stored: int = 0
    reproduced: int = 0
    seconds: float = 0.0
    reasons: Counter[str] = field(default_factory=Counter)
    missed: list[tuple[str, str, str, str]] = field(default_factory=list)
    findings: Counter[tuple[str, str]] = field(default_factory=Counter)
    told: list[str] = field(default_factory=list)


def examine(path: Path) -> Result:
    """Read, evaluate and check one workbook."""
    from doubler.check.examination import check
    from doubler.errors import InputError
    from doubler.workbook.evaluate import NotEvaluated
    from doubler.workbook.examined import cell_name_of

    result = Result(str(path))
    start = time.monotonic()
    try:
        report = check(path)
    except InputError as error:
        result.refused = str(error).replace(str(path), path.name)
        return result
    except Exception:
        result.trouble = "crash: " + " | ".join(traceback.format_exc(limit=-3).splitlines()[-4:])
        return result
    result.seconds = time.monotonic() - start
    never = _never_stored(report.book)
    for key, cell in report.book.formulas():
        result.formulas += 1
        value = report.book.value(key)
        if isinstance(value, NotEvaluated):
            result.reasons[_general(value.reason)] += 1
            continue
        result.evaluated += 1
        if cell.value is None:
            continue
        result.stored += 1
        if alike(cell.value, value):
            result.reproduced += 1
        else:
            kind = "never stored by its writer" if never else "differs"
            result.missed.append((cell_name_of(key), repr(cell.value), repr(value), kind))
    for finding in report.findings:
        result.findings[finding.kind, finding.severity] += 1
        if finding.severity != "note":
            result.told.append(f"{finding.sheet}!{finding.cell} {finding.kind} {finding.severity}: {finding.message}")
    return result


def _never_stored(book: Any) -> bool:
    """Say whether the writer put 0 as the value of every formula, which only a spreadsheet program would replace."""
    values = [cell.value for _, cell in book.formulas()]
    return bool(values) and all(value in (None, 0.0) for value in values)


def _general(reason: str) -> str:
    """Write a reason without what belongs to the one formula."""
    reason = re.sub(r"circular reference: .*", "circular reference", reason)
    return re.sub(r"\[\d+\]\S*|\d{3,}", "…", reason)


def alike(stored: Any, value: Any) -> bool:
    """Say whether two values show the same."""
    if isinstance(stored, bool) or isinstance(value, bool):
        return stored is value
    if isinstance(stored, float) and isinstance(value, float):
        return math.isclose(stored, value, rel_tol=RELATIVE, abs_tol=1e-12)
    if value is None:
        return stored in ("", 0.0)
    return bool(stored == value)


def examined_aside(path: Path) -> Result:
    """Examine a workbook in a process of its own."""
    context = multiprocessing.get_context("fork")
    ours, theirs = context.Pipe(duplex=False)
    process = context.Process(target=_send, args=(theirs, path))
    process.start()
    theirs.close()
    result = Result(str(path), trouble=f"hang: more than {SECONDS:g} s")
    if ours.poll(SECONDS):
        try:
            result = ours.recv()
        except EOFError:
            result.trouble = "crash: the process ended"
    else:
        process.terminate()
    process.join()
    return result


def _send(connection: Any, path: Path) -> None:
    connection.send(examine(path))
    connection.close()


def workbooks(folder: Path) -> list[Path]:
    """Return the workbooks under a folder."""
    return sorted(p for p in folder.rglob("*") if p.suffix.lower() in {".xlsx", ".xlsm"} and p.is_file())


def warm() -> None:
    """Load once what every check needs, so that a child inherits it."""
    from doubler.check.examination import report_on
    from doubler.workbook.examined import Examined
    from doubler.workbook.model import Cell, Sheet, Workbook

    cells = {(1, 1): Cell("Force P [kN]"), (1, 2): Cell(2.0), (1, 3): Cell(None, "B1*2")}
    report_on(Examined(Workbook(Path("warm.xlsx"), "", [Sheet("S", "", cells)])), Path("warm.xlsx"))


def table(names: Iterable[str], results: dict[str, list[Result]]) -> list[str]:
    """Return the table as Markdown."""
    lines = [
        "| folder | workbooks | refused | crashed or hung | formulas | evaluated | stored | reproduced | slowest |",
        "| --- | --- | --- | --- | --- | --- | --- | --- | --- |",
    ]
    for name in names:
        found = results[name]
        stored, reproduced = sum(r.stored for r in found), sum(r.reproduced for r in found)
        share = f"{reproduced} ({100 * reproduced / stored:.1f} %)" if stored else "-"
        refused, trouble = sum(bool(r.refused) for r in found), sum(bool(r.trouble) for r in found)
        lines.append(
            f"| {name} | {len(found)} | {refused} | {trouble} | "
            f"{sum(r.formulas for r in found)} | {sum(r.evaluated for r in found)} | {stored} | {share} | "
            f"{max((r.seconds for r in found), default=0.0):.1f} s |"
        )
    return lines


def main(folders: list[str]) -> int:
    """Print what came of the workbooks in some folders; return 1 where one crashed or hung."""
    from doubler import mechanics

    mechanics.load()
    warm()
    results = {Path(folder).name: [examined_aside(path) for path in workbooks(Path(folder))] for folder in folders}
    every = [result for found in results.values() for result in found]
    print("\n".join(table(results, results)))
    print("\nTrouble:")
    for result in every:
        if result.trouble:
            print(f"- {result.path}: {result.trouble}")
    print("\nRefused:")
    for result in every:
        if result.refused:
            print(f"- {result.refused}")
    print("\nNot evaluated:")
    for reason, count in sum((r.reasons for r in every), Counter()).most_common():
        print(f"- {count}: {reason}")
    print("\nNot reproduced:")
    for result in every:
        for cell, stored, value, kind in result.missed:
            print(f"- {Path(result.path).name} {cell}: stored {stored}, ours {value} ({kind})")
    print("\nFindings:")
    for (kind, severity), count in sorted(sum((r.findings for r in every), Counter()).items()):
        print(f"- {count} {severity} {kind}")
    for result in every:
        for line in result.told:
            print(f"  {Path(result.path).name} {line}")
    return 1 if any(result.trouble for result in every) else 0


if __name__ == "__main__":
    if len(sys.argv) < 2:
        sys.exit("give the folders that hold the workbooks")
    sys.exit(main(sys.argv[1:]))
