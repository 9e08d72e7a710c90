"""Reading, evaluating and checking whole workbooks: beside openpyxl's load, and beside another engine."""

from __future__ import annotations

import gc
import math
import subprocess
import sys
import tempfile
from pathlib import Path

from tests.benchmarks.ratio import Ratio, side_by_side

CHECKED_ROWS = 1_000
FILLED_ROWS = 40_000

HEADS = (
    "case", "P [kN]", "M [kN*mm]", "A [mm^2]", "W [mm^3]", "Fty [MPa]", "sigma axial [MPa]", "sigma bending [MPa]",
    "sigma [MPa]", "tau [MPa]", "von Mises [MPa]", "RF [-]", "MS yield [-]", "largest [MPa]", "share [-]", "verdict",
)  # fmt: skip


def checked(path: Path) -> None:
    """Write a calculation of 1,000 load cases by ten formulas, each with its unit in the heading."""
    import xlsxwriter

    with xlsxwriter.Workbook(str(path)) as book:
        sheet = book.add_worksheet("Calc")
        sheet.write_row(0, 0, HEADS)
        for row in range(1, CHECKED_ROWS + 1):
            force, moment, area, modulus, strength = 10.0 + row % 37, 100.0 + row % 91, 450.0 + row % 11, 2900.0, 250.0
            sheet.write_row(row, 0, [f"LC{row}", force, moment, area, modulus, strength])
            axial, bending = force * 1000 / area, moment * 1000 / modulus
            sigma = axial + bending
            mises = math.sqrt(sigma**2 + 3 * (0.3 * sigma) ** 2)
            largest = max(axial, bending, sigma)
            n = row + 1
            for column, (formula, value) in enumerate(
                [
                    (f"=B{n}*1000/D{n}", axial),
                    (f"=C{n}*1000/E{n}", bending),
                    (f"=G{n}+H{n}", sigma),
                    (f"=0.3*I{n}", 0.3 * sigma),
                    (f"=SQRT(I{n}^2+3*J{n}^2)", mises),
                    (f"=F{n}/K{n}", strength / mises),
                    (f"=L{n}-1", strength / mises - 1),
                    (f"=MAX(G{n}:I{n})", largest),
                    (f"=G{n}/N{n}", axial / largest),
                    (f'=IF(M{n}<0,"low","ok")', "low" if strength < mises else "ok"),
                ],
                start=6,
            ):
                sheet.write_formula(row, column, formula, None, value)


def filled(path: Path) -> None:
    """Write five formulas filled down 40,000 rows."""
    import xlsxwriter

    with xlsxwriter.Workbook(str(path), {"constant_memory": True}) as book:
        sheet = book.add_worksheet("Fill")
        for row in range(FILLED_ROWS):
            n, first, second = row + 1, 1.0 + row % 97, 2.0 + row % 53
            c = first * 2.5
            d = math.sqrt(c) / second
            e = c + d
            f = max(e, 10.0)
            sheet.write_row(row, 0, [first, second])
            for column, (formula, value) in enumerate(
                [
                    (f"=A{n}*2.5", c),
                    (f"=SQRT(C{n})/B{n}", d),
                    (f"=C{n}+D{n}", e),
                    (f"=IF(E{n}>10,E{n},10)", f),
                    (f"=F{n}/E{n}-1", f / e - 1),
                ],
                start=2,
            ):
                sheet.write_formula(row, column, formula, None, value)


def ours(path: Path) -> object:
    """Read and evaluate a workbook."""
    from doubler.workbook.evaluate import evaluate
    from doubler.workbook.graph import build_graph
    from doubler.workbook.reader import read_workbook

    return evaluate(build_graph(read_workbook(path)))


def theirs(path: Path) -> object:
    """Let the other engine read and evaluate it."""
    import formualizer

    book = formualizer.Workbook.from_path(str(path))
    book.evaluate_all()
    return book


def loaded(path: Path) -> object:
    """Load it with openpyxl."""
    import openpyxl

    return openpyxl.load_workbook(path)


def examined(path: Path) -> object:
    """Check it, without a record."""
    from doubler.check.examination import check

    return check(path)


def grown(which: str, path: str) -> float:
    """Return by how many bytes one of these makes the process grow at its peak, what it imports not counted."""
    from doubler.workbook import evaluate, reader  # noqa: F401  imports are not what is measured

    work = {"ours": ours, "loaded": loaded, "examined": examined}[which]
    with tempfile.TemporaryDirectory() as folder:
        small = Path(folder) / "small.xlsx"
        import xlsxwriter

        with xlsxwriter.Workbook(str(small)) as book:
            book.add_worksheet().write_formula(0, 0, "=1+1", None, 2)
        work(small)
    gc.collect()
    before = peak()
    kept = work(Path(path))
    after = peak()
    del kept
    return after - before


def peak() -> float:
    """Return the largest size of this process so far, in bytes."""
    status = Path("/proc/self/status")
    if status.exists():
        line = next(line for line in status.read_text().splitlines() if line.startswith("VmHWM"))
        return float(line.split()[1]) * 1024
    import resource

    return float(resource.getrusage(resource.RUSAGE_SELF).ru_maxrss)


def memory(which: str, path: Path) -> float:
    """Return `grown`, measured in a fresh process."""
    call = f"from tests.benchmarks.reading import grown; print(grown({which!r}, {str(path)!r}))"
    return float(subprocess.run([sys.executable, "-c", call], check=True, capture_output=True, text=True).stdout)


def ratios() -> list[Ratio]:
    """Return the measured ratios."""
    with tempfile.TemporaryDirectory() as folder:
        calc, fill = Path(folder) / "calc.xlsx", Path(folder) / "fill.xlsx"
        checked(calc)
        filled(fill)
        check, load = side_by_side(lambda: examined(calc), lambda: loaded(calc), rounds=9)
        mine, other = side_by_side(lambda: ours(fill), lambda: theirs(fill), rounds=5)
        return [
            Ratio("check of a 10,000-formula workbook / openpyxl's load of it", check / load, 3.0),
            Ratio("200,000 filled formulas read and evaluated: ours / formualizer", mine / other, 2.0),
            Ratio(
                "memory to read and evaluate 200,000 formulas / openpyxl's to load them",
                memory("ours", fill) / memory("loaded", fill),
                3.0,
            ),
            Ratio(
                "memory to check 10,000 formulas / openpyxl's to load them",
                memory("examined", calc) / memory("loaded", calc),
                3.0,
            ),
        ]
