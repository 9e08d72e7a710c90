"""The third comparator: every formula on which the second engine stands alone, listed one by one.

``second.yaml`` holds them, with what each gives in the first case and why; formulas that it cannot evaluate at all are
in it too. That list is what `doubler.workbook.weak_points` is made from.
"""

import math
from pathlib import Path
from typing import Any

import formualizer
import yaml

from doubler.errors import ErrorValue
from doubler.workbook.graph import build_graph
from doubler.workbook.reader import read_workbook
from doubler.workbook.weak_points import weakness
from workbook.differential.sheet import COLUMN, FOLDER, lines, placed, write
from workbook.differential.test_differential import TOLERANCE, evaluated, ours

REASONS = {
    "unknown": "It does not know the function, or this form of it.",
    "date": "It gives a date or time where a number is due.",
    "array": "It does not take the argument cell by cell in an array formula or for an array constant.",
    "error-kind": "Both give an error; the kind is that of the function reference in ours.",
    "rule": "Ours is what the function reference says, and what the spreadsheet program gives.",
    "three-ways": "All three differ; differences.yaml says which rule we hold to.",
    "rounding": "It leaves a remainder in the last digits where ours leaves none.",
}


def theirs(engine: Any, row: int, column: int) -> Any:
    """Return what the second engine gives: a number, text, logical, error text, or why there is none."""
    try:
        value = engine.get_value("S", row, column)
    except Exception as error:
        return f"none: {type(error).__name__}"
    if isinstance(value, dict):
        kind = str(value["kind"])
        names = {"Div": "#DIV/0!", "Na": "#N/A", "Name": "#NAME?", "Value": "#VALUE!", "Circ": "none: circular"}
        return names.get(kind, f"none: {kind}" if kind in {"NImpl", "Spill"} else f"#{kind.upper()}!")
    if isinstance(value, bool | str | None):
        return value
    return float(value) if isinstance(value, int | float) else f"none: {type(value).__name__}"


def alike(mine: Any, other: Any) -> bool:
    if isinstance(mine, float) and isinstance(other, float):
        return mine == other or math.isclose(mine, other, rel_tol=TOLERANCE, abs_tol=1e-300)
    if mine in (None, "", 0.0) and other in (None, "", 0.0) and not isinstance(mine, bool):
        return True
    return type(mine) is type(other) and bool(mine == other)


def differences(folder: Path) -> list[dict[str, Any]]:
    """Return every formula on which the second engine differs from ours, in the first case."""
    chosen = lines()
    mine = evaluated(folder, chosen)
    path = folder / "case.xlsx"
    write(path, 0, chosen)
    engine = formualizer.Workbook.from_path(str(path))
    engine.evaluate_all()
    found = []
    for row, line in placed(chosen):
        cells = [(r, c) for r in range(row, row + line.rows) for c in range(COLUMN, COLUMN + line.columns)]
        pairs = [(ours(mine, r, c, 0), theirs(engine, r, c)) for r, c in cells]
        if not all(alike(*pair) for pair in pairs):
            found.append({"formula": line.text, "array": line.array, "pairs": pairs})
    return found


def test_every_difference_is_listed_with_its_reason(tmp_path: Path) -> None:
    listed = yaml.safe_load((FOLDER / "second.yaml").read_text(encoding="utf-8"))
    known = {(item["formula"], item.get("array", False)): item for item in listed}
    found = {(item["formula"], item["array"]): item for item in differences(tmp_path)}
    assert set(found) == set(known)
    for key, item in found.items():
        assert known[key]["reason"] in REASONS
        mine, other = next(pair for pair in item["pairs"] if not alike(*pair))
        assert (known[key]["ours"], known[key]["second"]) == (mine, other), key


def test_most_differences_are_passed_over_as_weak_points(tmp_path: Path) -> None:
    listed = yaml.safe_load((FOLDER / "second.yaml").read_text(encoding="utf-8"))
    chosen = lines()
    path = tmp_path / "ours.xlsx"
    write(path, 0, chosen)
    graph = build_graph(read_workbook(path))
    weak = {}
    for row, line in placed(chosen):
        at = graph.group_at("S", (row, COLUMN))
        weak[line.text, line.array] = at is not None and bool(weakness(graph.groups[at[0]]))
    left = [item["formula"] for item in listed if not weak[item["formula"], item.get("array", False)]]
    assert not [text for text in left if any(name in text for name in ("TEXT(", "DATE", "TIME", "T1:T3!"))]
    assert len(left) <= 40, left


def listing(folder: Path) -> list[dict[str, Any]]:
    """Return the list as it is kept, with a first guess of each reason."""
    known = {item["formula"] for item in yaml.safe_load((FOLDER / "differences.yaml").read_text(encoding="utf-8"))}
    out = []
    for item in differences(folder):
        mine, other = next(pair for pair in item["pairs"] if not alike(*pair))
        errors = [isinstance(x, str) and x in {e.value for e in ErrorValue} for x in (mine, other)]
        if other in ("none: NImpl", "#NAME?"):
            reason = "unknown"
        elif (isinstance(other, str) and other.startswith("none: date")) or other == "none: time":
            reason = "date"
        elif all(errors):
            reason = "error-kind"
        elif item["array"] or "{" in item["formula"]:
            reason = "array"
        elif isinstance(mine, float) and isinstance(other, float) and abs(mine - other) < 1e-12:
            reason = "rounding"
        else:
            reason = "three-ways" if item["formula"] in known else "rule"
        entry = {"formula": item["formula"], "reason": reason, "ours": mine, "second": other}
        out.append(entry | ({"array": True} if item["array"] else {}))
    return out


if __name__ == "__main__":
    import tempfile

    with tempfile.TemporaryDirectory() as name:
        print(yaml.safe_dump(listing(Path(name)), allow_unicode=True, sort_keys=False, width=200))
