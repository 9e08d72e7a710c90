"""Small workbooks in memory, evaluated: what the tests of the evaluation share."""

from pathlib import Path
from typing import Any

from doubler.errors import ErrorValue
from doubler.workbook.evaluate import Evaluation, NotEvaluated, evaluate
from doubler.workbook.graph import build_graph
from doubler.workbook.model import Address, Area, Cell, DefinedName, Sheet, Table, Workbook
from doubler.workbook.references import column_number

Cells = dict[str, Any]


def at(text: str) -> Address:
    letters = text.rstrip("0123456789")
    return int(text[len(letters) :]), column_number(letters)


def area(text: str) -> Area:
    first, _, last = text.partition(":")
    return Area(*at(first), *at(last or first))


def sheet(name: str, cells: Cells) -> Sheet:
    """A sheet; text that begins with ``=`` is a formula, with ``{=`` an array formula over ``cell:cell``."""
    found = {}
    for place, value in cells.items():
        if isinstance(value, str) and value.startswith("{="):
            found[at(place.partition(":")[0])] = Cell(None, value[2:-1], array_range=place)
        elif isinstance(value, str) and value.startswith("#="):
            found[at(place.partition(":")[0])] = Cell(None, value[2:], array_range=place, dynamic=True)
        elif isinstance(value, str) and value.startswith("="):
            found[at(place)] = Cell(None, value[1:])
        else:
            found[at(place)] = Cell(float(value) if type(value) is int else value)
    return Sheet(name, "", found)


def book(
    *sheets: Sheet, names: dict[str, str] | None = None, tables: tuple[Table, ...] = (), date1904: bool = False
) -> Workbook:
    defined = [DefinedName(name, text) for name, text in (names or {}).items()]
    return Workbook(Path("book.xlsx"), "", list(sheets), names=defined, tables=list(tables), date1904=date1904)


def run(workbook: Workbook | Cells, inputs: Cells | None = None, **options: Any) -> Evaluation:
    """Evaluate a workbook, or one sheet S of cells, with inputs by address on its first sheet."""
    whole = book(sheet("S", workbook)) if isinstance(workbook, dict) else workbook
    name = whole.sheets[0].name
    given = {(name, at(place)): value for place, value in (inputs or {}).items()}
    return evaluate(build_graph(whole), given, **options)


def shown(evaluation: Evaluation, place: str, name: str = "S") -> Any:
    """A cell's value with error values as their text; over cases a list."""
    value = evaluation.value(name, at(place))
    if isinstance(value, NotEvaluated):
        return f"not evaluated: {value.reason}"
    if hasattr(value, "tolist"):
        return [str(item) if isinstance(item, ErrorValue) else item for item in value.tolist()]
    return str(value) if isinstance(value, ErrorValue) else value


def values(cells: Cells, *places: str) -> list[Any]:
    evaluation = run(cells)
    return [shown(evaluation, place) for place in places]
