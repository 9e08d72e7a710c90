"""Our evaluation against a real spreadsheet program, formula by formula, over three cases at once."""

import math
import shutil
import subprocess
from pathlib import Path
from typing import Any

import numpy as np
import openpyxl
import pytest
import yaml

from doubler.errors import ErrorValue
from doubler.workbook.evaluate import Evaluation, NotEvaluated, evaluate
from doubler.workbook.graph import build_graph
from doubler.workbook.reader import read_workbook
from workbook.differential.sheet import CASES, COLUMN, FOLDER, Line, lines, placed, write

TOLERANCE = 1e-12


def known_differences() -> dict[str, dict[str, Any]]:
    items = yaml.safe_load((FOLDER / "differences.yaml").read_text(encoding="utf-8"))
    return {item["formula"]: item for item in items}


def recalculated(folder: Path, chosen: list[Line]) -> list[dict[tuple[int, int], Any]]:
    """Return what the program gives for every cell, case by case."""
    paths = []
    for case in range(len(CASES)):
        paths.append(folder / f"case{case}.xlsx")
        write(paths[-1], case, chosen)
    out = folder / "out"
    office = shutil.which("soffice")
    assert office is not None
    profile = f"-env:UserInstallation=file://{folder / 'profile'}"
    command = [office, profile, "--headless", "--convert-to", "xlsx", "--outdir", str(out), *map(str, paths)]
    subprocess.run(command, check=True, capture_output=True, timeout=300)
    found = []
    for path in paths:
        sheet = openpyxl.load_workbook(out / path.name, data_only=True)["S"]
        found.append({(cell.row, cell.column): cell.value for row in sheet.iter_rows() for cell in row})
    return found


def evaluated(folder: Path, chosen: list[Line]) -> Evaluation:
    """Return what we give, all cases at once."""

    path = folder / "ours.xlsx"
    write(path, 0, chosen)
    inputs = {}
    for address in CASES[0]:
        row, column = openpyxl.utils.cell.coordinate_to_tuple(address)
        values = [case[address] for case in CASES]
        numbers = all(type(value) is float for value in values)
        array = np.array(values) if numbers else np.array(values, dtype=object)
        inputs["S", (row, column)] = array
    return evaluate(build_graph(read_workbook(path)), inputs)


def ours(evaluation: Evaluation, row: int, column: int, case: int) -> Any:
    value = evaluation.value("S", (row, column))
    if isinstance(value, NotEvaluated):
        return f"not evaluated: {value.reason}"
    if hasattr(value, "dtype"):
        value = value[case]
        value = value.item() if isinstance(value, np.generic) else value
    return str(value) if isinstance(value, ErrorValue) else value


def same(mine: Any, theirs: Any) -> bool:
    if theirs is None:
        return mine is None or mine == ""
    if hasattr(theirs, "isoformat"):
        return True  # a date format was added on the way; its number is compared by the formulas with +0
    if isinstance(mine, bool | str | None) or isinstance(theirs, bool | str):
        return type(mine) is type(theirs) and mine == theirs
    return bool(mine == theirs or math.isclose(mine, theirs, rel_tol=TOLERANCE, abs_tol=1e-300))


def compare(folder: Path, chosen: list[Line]) -> list[dict[str, Any]]:
    """Return every formula on which the two differ."""
    theirs = recalculated(folder, chosen)
    mine = evaluated(folder, chosen)
    differences = []
    for row, line in placed(chosen):
        pairs = [
            (ours(mine, r, c, case), theirs[case].get((r, c)))
            for case in range(len(CASES))
            for r in range(row, row + line.rows)
            for c in range(COLUMN, COLUMN + line.columns)
        ]
        wrong = [pair for pair in pairs if not same(*pair)]
        if wrong:
            differences.append({"formula": line.text, "ours": [m for m, _ in pairs], "office": [t for _, t in pairs]})
    return differences


def test_no_formula_is_listed_twice() -> None:
    texts = [(line.text, line.array) for line in lines()]
    assert len(texts) == len(set(texts))


@pytest.mark.office
def test_every_formula_gives_what_the_spreadsheet_program_gives(tmp_path: Path) -> None:
    chosen = lines()
    known = known_differences()
    found = {item["formula"]: item for item in compare(tmp_path, chosen)}
    unexplained = [item for text, item in found.items() if text not in known]
    assert not unexplained, "\n".join(map(str, unexplained))
    reasons = yaml.safe_load((FOLDER / "reasons.yaml").read_text(encoding="utf-8"))
    assert {item["reason"] for item in known.values()} == set(reasons)
    assert set(known) == set(found), "differences listed that are none any more"
    for text, item in found.items():
        assert item["ours"] == known[text]["ours"], text


if __name__ == "__main__":
    import tempfile

    with tempfile.TemporaryDirectory() as folder:
        print(yaml.safe_dump(compare(Path(folder), lines()), allow_unicode=True, sort_keys=False, width=400))
