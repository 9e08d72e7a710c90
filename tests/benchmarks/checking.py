"""The check of a workbook of 10,000 formulas against what openpyxl takes to load it; and two revisions of it."""

from __future__ import annotations

import tempfile
import time
from collections.abc import Callable
from pathlib import Path

import openpyxl
from openpyxl.utils import get_column_letter as letters
from tests.benchmarks.ratio import Ratio, side_by_side

from doubler.check.examination import check
from doubler.check.record import write_record
from doubler.check.revisions import compare

ROWS = 250
GIVEN = (
    ("Station x [mm]", lambda n: 20.0 * n),
    ("Axial load N [kN]", lambda n: 12.0 + 0.05 * n),
    ("Bending moment M [kN·m]", lambda n: 1.5 + 0.004 * n),
    ("Torque T [kN·m]", lambda n: 0.4 + 0.001 * n),
    ("Width b [mm]", lambda n: 60.0 + n % 7),
    ("Height h [mm]", lambda n: 90.0 + n % 11),
)
DERIVED = (
    ("Area A [mm²]", "E{r}*F{r}"),
    ("Second moment I [mm⁴]", "E{r}*F{r}^3/12"),
    ("Section modulus W [mm³]", "H{r}/(F{r}/2)"),
    ("Axial stress [MPa]", "B{r}*1000/G{r}"),
    ("Bending stress [MPa]", "C{r}*1000000/I{r}"),
    ("Shear stress τ [MPa]", "3*D{r}*1000000/(E{r}^2*F{r})"),
    ("Normal stress σ [MPa]", "J{r}+K{r}"),
    ("Equivalent stress [MPa]", "SQRT(M{r}^2+3*L{r}^2)"),
    ("Margin of safety, yield", "$B$1/($B$3*N{r})-1"),
    ("Margin of safety, ultimate", "$B$2/($B$4*N{r})-1"),
)
MORE = ("{p}{r}*2", "MAX({p}{r},{q}{r})", "ABS({p}{r}-{q}{r})", "IF({p}{r}>{q}{r},{p}{r},{q}{r})", "({p}{r}+{q}{r})/2")
"""Further columns of stresses, made of the two columns before."""
COLUMNS = 40


def workbook(path: Path, rows: int = ROWS) -> Path:
    """Build it: 40 columns of formulas beside six of inputs, their stored values computed by us."""
    from doubler.workbook.evaluate import evaluate
    from doubler.workbook.graph import build_graph
    from doubler.workbook.reader import read_workbook
    from doubler.workbook.writer import write_filled

    book = openpyxl.Workbook()
    page = book.active
    page.title = "Beam"
    for row, (label, value) in enumerate(
        (("Yield strength [MPa]", 355.0), ("Ultimate strength [MPa]", 510.0), ("Safety factor, yield", 1.0),
         ("Safety factor, ultimate", 1.5)), start=1,
    ):  # fmt: skip
        page.cell(row, 1, label)
        page.cell(row, 2, value)
    heads = [name for name, _ in (*GIVEN, *DERIVED)]
    extra = COLUMNS - len(DERIVED)
    for column, name in enumerate([*heads, *(f"Stress σ{n} [MPa]" for n in range(extra))], start=1):
        page.cell(6, column, name)
    for n in range(rows):
        row = 7 + n
        for column, (_, given) in enumerate(GIVEN, start=1):
            page.cell(row, column, given(n))
        for column, (_, text) in enumerate(DERIVED, start=len(GIVEN) + 1):
            page.cell(row, column, "=" + text.format(r=row))
        for k in range(extra):
            column = len(heads) + 1 + k
            p, q = ("N", "M") if k < 2 else (letters(column - 1), letters(column - 2))
            page.cell(row, column, "=" + MORE[k % len(MORE)].format(p=p, q=q, r=row))
    blank = path.with_name("blank.xlsx")
    book.save(blank)
    read = read_workbook(blank)
    values = evaluate(build_graph(read))
    stored = {(sheet.name, *address): values.value(sheet.name, address) for sheet, address, _ in read.formulas()}
    write_filled(blank, path, {}, stored)
    blank.unlink()
    return path


def ratios() -> list[Ratio]:
    """Measure."""
    with tempfile.TemporaryDirectory() as place:
        folder = Path(place)
        book = workbook(folder / "beam.xlsx")

        def load() -> object:
            return openpyxl.load_workbook(book)

        alone, loaded = side_by_side(lambda: check(book), load, rounds=3)
        kept, again = side_by_side(lambda: write_record(check(book), folder / "record"), load, rounds=3)
        earlier = check(book)
        beside = _seconds(lambda: compare(earlier, check(book)))
    return [
        Ratio("check of 10,000 formulas over openpyxl's load", alone / loaded, 3),
        Ratio("the same with its check record", kept / again, 8),
        Ratio("the same against an earlier revision, that one's check not counted", beside / loaded, None),
    ]


def _seconds(work: Callable[[], object]) -> float:
    start = time.perf_counter()
    work()
    return time.perf_counter() - start
