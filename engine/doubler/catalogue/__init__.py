"""What a worksheet function is: declaring one, looking it up, calling it with cell values or from Python."""

from doubler.catalogue.cells import CellResult, bind_all, call_cells
from doubler.catalogue.formula_text import cell
from doubler.catalogue.limits import Condition, Limit, Refusal, condition
from doubler.catalogue.plan import CallError
from doubler.catalogue.record import (
    CATEGORIES,
    Argument,
    Result,
    WorksheetFunction,
    lookup,
    names,
    worksheet_function,
)

__all__ = [
    "CATEGORIES",
    "Argument",
    "CallError",
    "CellResult",
    "Condition",
    "Limit",
    "Refusal",
    "Result",
    "WorksheetFunction",
    "bind_all",
    "call_cells",
    "cell",
    "condition",
    "lookup",
    "names",
    "worksheet_function",
]
