"""The catalogue as xlwings worksheet functions: what Excel calls through xlwings, and nothing else.

xlwings imports this module by its name and serves every function in it. Only its open-source part is used. Ranges come
as lists of rows, empty cells as None, errors as their text; a result goes back as rows, its error values as marked text
that the generated VBA turns into true error values (`excel_vba`).
"""

from __future__ import annotations

import inspect
import sys
from collections.abc import Callable
from typing import Any

from doubler import catalogue
from doubler.errors import ErrorValue
from doubler.hosts.calc_extension import REASON, HostFunction, host_functions
from doubler.hosts.excel_names import vba_names
from doubler.hosts.worker import error_value

CATEGORY = "doubler"
MARK = "\ue000"
"""Begins the text that stands for an error value on the way to Excel; no cell holds it."""

Decorate = Callable[..., Any]
_EXCEL_ERRORS = {value.value for value in ErrorValue}


def from_excel(given: Any) -> Any:
    """Turn one argument as xlwings hands it over into cell values; a date is no number, and stays text."""
    if given is None:
        return None
    rows = given if isinstance(given, list) else [[given]]
    return [[_cell(cell) for cell in row] for row in rows]


def _cell(cell: Any) -> Any:
    if cell is None or isinstance(cell, bool):
        return cell
    if isinstance(cell, str):
        return error_value(cell) if cell in _EXCEL_ERRORS else cell
    if hasattr(cell, "isoformat"):
        return f"the date {cell.isoformat()}"
    return float(cell)


def to_excel(grid: list[list[Any]]) -> list[list[Any]]:
    """Turn a result into what xlwings hands to Excel: an error value, and what is not finite, as marked text."""
    return [[_shown(value) for value in row] for row in grid]


def _shown(value: Any) -> Any:
    if isinstance(value, ErrorValue):
        return MARK + value.value
    if isinstance(value, str) or value is None:
        return value or ""
    number = float(value)
    return number if number - number == 0.0 else MARK + ErrorValue.NUM.value


def _called(name: str, given: tuple[Any, ...]) -> catalogue.CellResult:
    function = catalogue.lookup(name)
    if function is None:
        return catalogue.CellResult([[ErrorValue.NAME]], (f"there is no worksheet function {name}",))
    arguments = [from_excel(argument) for argument in given]
    while arguments and arguments[-1] is None:
        arguments.pop()
    return catalogue.call_cells(function, arguments)


def excel_function(host: HostFunction, func: Decorate, arg: Decorate) -> Callable[..., Any]:
    """Return one worksheet function decorated for xlwings.

    Parameters
    ----------
    host : HostFunction
    func, arg : callable
        xlwings' decorators.

    Returns
    -------
    callable
    """

    def evaluate(*given: Any) -> list[list[Any]]:
        if host.name == REASON:
            name = str(given[0][0][0]) if given[0] else ""
            return [["; ".join(_called(name.upper(), given[1:]).reasons)]]
        return to_excel(_called(host.name, given).grid)

    evaluate.__name__ = evaluate.__qualname__ = host.name
    evaluate.__doc__ = host.help
    names = vba_names(host)
    evaluate.__signature__ = inspect.Signature(  # type: ignore[attr-defined]
        [
            inspect.Parameter(
                name,
                inspect.Parameter.POSITIONAL_OR_KEYWORD,
                default=None if argument.optional else inspect.Parameter.empty,
            )
            for name, argument in zip(names, host.arguments, strict=True)
        ]
    )
    evaluate.__annotations__ = {}
    made = evaluate
    for name, argument in zip(names, host.arguments, strict=True):
        made = arg(name, doc=argument.help, ndim=2, err_to_str=True)(made)
    decorated: Callable[..., Any] = func(category=CATEGORY, volatile=False)(made)
    return decorated


def excel_functions() -> list[HostFunction]:
    """Return what Excel registers; the companion takes the call, since Excel hands over no formula.

    Its required arguments come first in every function: Excel lets only the last ones be left out.
    """
    from doubler.hosts.calc_extension import HostArgument

    known = [host for host in host_functions() if host.name != REASON]
    longest = max(len(host.arguments) for host in known)
    first = HostArgument("function", 'The name of the function that gives the error, such as "STRESS_AXIAL".', False)
    rest = tuple(
        HostArgument(f"argument_{n}", "As in the call that gives the error.", True) for n in range(1, longest + 1)
    )
    return [*known, HostFunction(REASON, "Says in words why a call gives an error value.", (first, *rest))]


def register(target: dict[str, Any], func: Decorate, arg: Decorate) -> list[str]:
    """Put every function, decorated, into a module's namespace and return their names."""
    known = excel_functions()
    for host in known:
        target[host.name] = excel_function(host, func, arg)
    return [host.name for host in known]


if sys.platform == "win32":
    import xlwings

    register(globals(), xlwings.func, xlwings.arg)
