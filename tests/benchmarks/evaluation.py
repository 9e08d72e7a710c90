"""The evaluation of a workbook over load cases, and of long fills."""

from __future__ import annotations

import time
import tracemalloc
from pathlib import Path
from typing import Any

import numpy as np
from tests.benchmarks.ratio import Ratio, in_fresh_processes, side_by_side

from doubler.workbook.evaluate import evaluate_blocks
from doubler.workbook.graph import Graph, build_graph
from doubler.workbook.model import Cell, Sheet, Workbook
from doubler.workbook.references import column_number

CASES = 1_000_000
FILL = 10_000

# One line a cell: the cell, its formula, and the same as plain NumPy on whole arrays. A1..A5 are the inputs: axial
# force, bending moment, torque, outer diameter, wall.
SHAFT = """
B1 A4-2*A5 | A4-2*A5
B2 PI()/4*(A4^2-B1^2) | np.pi/4*(A4**2-B1**2)
B3 PI()/64*(A4^4-B1^4) | np.pi/64*(A4**4-B1**4)
B4 2*B3 | 2*B3
B5 A4/2 | A4/2
B6 A1*1000/B2 | A1*1000/B2
B7 A2*B5/B3 | A2*B5/B3
B8 A3*B5/B4 | A3*B5/B4
B9 B6+B7 | B6+B7
B10 B6-B7 | B6-B7
B11 SQRT(B9^2+3*B8^2) | np.sqrt(B9**2+3*B8**2)
B12 SQRT(B10^2+3*B8^2) | np.sqrt(B10**2+3*B8**2)
B13 MAX(B11,B12) | np.maximum(B11,B12)
B14 B9/2 | B9/2
B15 SQRT(B14^2+B8^2) | np.sqrt(B14**2+B8**2)
B16 B14+B15 | B14+B15
B17 B14-B15 | B14-B15
B18 MAX(ABS(B16),ABS(B17),ABS(B16-B17)) | np.maximum(np.maximum(np.abs(B16),np.abs(B17)),np.abs(B16-B17))
B19 B10/2 | B10/2
B20 SQRT(B19^2+B8^2) | np.sqrt(B19**2+B8**2)
B21 MIN(B17,B19-B20) | np.minimum(B17,B19-B20)
B22 250/(1.1*B13)-1 | 250/(1.1*B13)-1
B23 420/(1.5*B13)-1 | 420/(1.5*B13)-1
B24 145/(1.1*B8)-1 | 145/(1.1*B8)-1
B25 MIN(B22,B23,B24) | np.minimum(np.minimum(B22,B23),B24)
B26 A3/(B4*80000) | A3/(B4*80000)
B27 B26*1500 | B26*1500
B28 A2*1500^2/(2*210000*B3) | A2*1500**2/(2*210000*B3)
B29 A1*1000*1500/(210000*B2) | A1*1000*1500/(210000*B2)
B30 SQRT(B28^2+B29^2) | np.sqrt(B28**2+B29**2)
B31 IF(B30>2,2/B30-1,1) | np.where(B30>2,2/B30-1,1.0)
B32 IF(B25<0,1,0) | np.where(B25<0,1.0,0.0)
B33 A4/A5 | A4/A5
B34 IF(B33>50,0.8,1) | np.where(B33>50,0.8,1.0)
B35 B34*250 | B34*250
B36 B35/B13 | B35/B13
B37 B36-1 | B36-1
B38 B6/250 | B6/250
B39 B7/275 | B7/275
B40 B8/145 | B8/145
B41 ABS(B38)+ABS(B39) | np.abs(B38)+np.abs(B39)
B42 B41^2+B40^2 | B41**2+B40**2
B43 1/SQRT(B42)-1 | 1/np.sqrt(B42)-1
B44 B3/B2 | B3/B2
B45 SQRT(B44) | np.sqrt(B44)
B46 1500/B45 | 1500/B45
B47 PI()^2*210000/B46^2 | np.pi**2*210000/B46**2
B48 B47*B2/1000 | B47*B2/1000
B49 B48/(1.5*A1)-1 | B48/(1.5*A1)-1
B50 B16*B34 | B16*B34
B51 B17*B34 | B17*B34
B52 (B50+B51)/2 | (B50+B51)/2
B53 (B50-B51)/2 | (B50-B51)/2
B54 ABS(B53)/145 | np.abs(B53)/145
B55 B52/3 | B52/3
B56 1-B55/250 | 1-B55/250
B57 B56*B43 | B56*B43
B58 B22+B23+B24 | B22+B23+B24
B59 B58/3 | B58/3
B60 MIN(B25,B37,B43,B49) | np.minimum(np.minimum(B25,B37),np.minimum(B43,B49))
"""


def _lines() -> list[tuple[str, str, str]]:
    found = []
    for line in SHAFT.strip().splitlines():
        cell, _, rest = line.partition(" ")
        formula, _, expression = rest.partition(" | ")
        found.append((cell, formula, expression))
    return found


def _address(cell: str) -> tuple[int, int]:
    return int(cell[1:]), column_number(cell[0])


def shaft() -> Graph:
    """Return the sheet as a graph."""
    cells = {_address(f"A{k}"): Cell(1.0) for k in range(1, 6)}
    cells |= {_address(cell): Cell(None, formula) for cell, formula, _ in _lines()}
    return build_graph(Workbook(Path("shaft.xlsx"), "", [Sheet("S", "", cells)]))


def inputs(count: int) -> dict[str, Any]:
    """Return load cases that keep every formula in range."""
    generator = np.random.default_rng(7)
    return {
        "A1": generator.uniform(5.0, 60.0, count),
        "A2": generator.uniform(1e5, 2e6, count),
        "A3": generator.uniform(1e5, 2e6, count),
        "A4": generator.uniform(40.0, 90.0, count),
        "A5": generator.uniform(2.0, 8.0, count),
    }


def ours(graph: Graph, given: dict[str, Any]) -> dict[str, Any]:
    """Evaluate all formulas block by block and keep two of them."""
    wanted = [("S", _address("B25")), ("S", _address("B60"))]
    every = [("S", _address(cell)) for cell, _, _ in _lines()]
    kept = {where: np.empty(len(given["A1"])) for where in wanted}
    for part in evaluate_blocks(graph, {("S", _address(cell)): values for cell, values in given.items()}, every):
        for where in wanted:
            kept[where][part.start : part.start + part.cases] = part.value(*where)
    return {"B25": kept[wanted[0]], "B60": kept[wanted[1]]}


def plain(code: Any, given: dict[str, Any]) -> dict[str, Any]:
    """Run the same formulas as whole-array NumPy."""
    names: dict[str, Any] = {"np": np, **given}
    exec(code, names)
    return names


def fill(count: int) -> Graph:
    """Return a sheet with one formula filled down."""
    cells: dict[tuple[int, int], Cell] = {}
    for row in range(1, count + 1):
        cells[row, 1] = Cell(float(row))
        cells[row, 2] = Cell(None, f"A{row}*2.5+SQRT(A{row})/$A$1")
    return build_graph(Workbook(Path("fill.xlsx"), "", [Sheet("S", "", cells)]))


def script() -> Any:
    """Return the plain NumPy form of all formulas, compiled."""
    return compile("\n".join(f"{cell} = {expression}" for cell, _, expression in _lines()), "shaft", "exec")


def once(which: str) -> float:
    """Run one of the two once and return its seconds: called in a process of its own."""
    graph, code = shaft(), script()

    def run(given: dict[str, Any]) -> float:
        start = time.perf_counter()
        _ = ours(graph, given) if which == "ours" else plain(code, given)
        return time.perf_counter() - start

    run(inputs(1000))
    return run(inputs(CASES))


def peak_memory(graph: Graph, count: int) -> int:
    """Return the most memory that an evaluation in blocks holds at a time, beside its inputs, in bytes."""
    given = {("S", _address(cell)): values for cell, values in inputs(count).items()}
    every = [("S", _address(cell)) for cell, _, _ in _lines()]
    tracemalloc.start()
    for _ in evaluate_blocks(graph, given, every):
        pass
    _, peak = tracemalloc.get_traced_memory()
    tracemalloc.stop()
    return peak


def ratios() -> list[Ratio]:
    """Return the measured ratios."""
    graph, given, code = shaft(), inputs(10_000), script()
    mine, theirs = ours(graph, given), plain(code, given)
    for cell in ("B25", "B60"):
        np.testing.assert_allclose(mine[cell], theirs[cell], rtol=1e-9, atol=1e-9)
    faster = in_fresh_processes("evaluation", "plain", "ours")
    memory = peak_memory(graph, CASES) / peak_memory(graph, CASES // 10)
    long, short = fill(FILL), fill(10)
    outputs = [("S", (1, 2))]

    def run(target: Graph) -> None:
        for _ in evaluate_blocks(target, {}, outputs):
            pass

    many, few = side_by_side(lambda: run(long), lambda: run(short), rounds=15)
    return [
        Ratio("60 formulas over 1,000,000 cases: whole-array NumPy / ours", faster, 3.0, "at least"),
        Ratio("peak memory beside the inputs: 1,000,000 cases / 100,000 cases", memory, 1.25, "at most"),
        Ratio("a fill of 10,000 copies / of 10 copies, evaluated", many / few, 10.0, "at most"),
    ]
