"""Filled workbooks: ours against load, set, recalculate and save with general libraries; memory over many cases."""

from __future__ import annotations

import subprocess
import sys
import tempfile
import time
from pathlib import Path

from tests.benchmarks.ratio import Ratio

from doubler.demo_data import templates_folder
from doubler.fill import fill

OURS, THEIRS = 400, 12
MANY, FEW = 10_000, 1_000


def ratios() -> list[Ratio]:
    """Measure."""
    template = templates_folder() / "shaft.xlsx"
    with tempfile.TemporaryDirectory() as name:
        folder = Path(name)
        cases = _cases(folder / "cases.csv", OURS)
        start = time.perf_counter()
        fill(template, cases, folder / "filled")
        ours = (time.perf_counter() - start) / OURS
        start = time.perf_counter()
        for case in range(THEIRS):
            _by_libraries(template, folder / f"by_libraries_{case}.xlsx", 2.0 + 0.01 * case)
        theirs = (time.perf_counter() - start) / THEIRS
        few, many = (_peak_memory(template, folder, count) for count in (FEW, MANY))
    return [
        Ratio("a filled workbook: openpyxl and a general engine over ours", theirs / ours, 10, "at least"),
        Ratio(f"peak memory of filling: {MANY} cases over {FEW}", many / few, 1.25, "at most"),
    ]


def _cases(path: Path, count: int) -> Path:
    rows = ["case,load_transverse [kN],torque [N*m]"]
    rows += [f"c{case:05d},{2.0 + 0.001 * case:.3f},{300 + case % 700}" for case in range(count)]
    path.write_text("\n".join(rows) + "\n")
    return path


def _by_libraries(template: Path, target: Path, load: float) -> None:
    """Load, set an input, recalculate and save: what a script of general libraries does."""
    import formualizer
    import openpyxl

    book = openpyxl.load_workbook(template)
    book["Shaft"]["C9"] = load
    book.save(target)
    formualizer.recalculate_file(str(target))


def _peak_memory(template: Path, folder: Path, count: int) -> int:
    """Return the peak memory of a process of its own that fills so many workbooks."""
    cases = _cases(folder / f"cases_{count}.csv", count)
    script = (
        "import resource, sys; from doubler.fill import fill; fill(*sys.argv[1:4]); "
        "print(resource.getrusage(resource.RUSAGE_SELF).ru_maxrss)"
    )
    done = subprocess.run(
        [sys.executable, "-c", script, str(template), str(cases), str(folder / f"filled_{count}")],
        capture_output=True,
        text=True,
        check=True,
    )
    return int(done.stdout)
