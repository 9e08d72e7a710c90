"""The call from a cell: arguments in any form, a grid of values back, errors as true error values with a reason."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field, replace
from typing import Any

import numpy as np

from doubler.catalogue import familiar
from doubler.catalogue.evaluation import Outcome, evaluate, scaled_values, shift
from doubler.catalogue.forms import OMITTED, ArgumentError, Bound, bind, due
from doubler.catalogue.plan import CallError, Plan, plan_for
from doubler.catalogue.record import Argument, WorksheetFunction
from doubler.errors import ErrorValue
from doubler.units import ConsistentSet, Unit, UnitError, consistent_set, parse_unit

MEMO_SIZE = 4096
"""Calls of one function with texts only whose reading is kept; then the memory is begun anew."""


@dataclass(slots=True)
class CellResult:
    """What a cell shows.

    Attributes
    ----------
    grid
        Rows of values: float, text, or `ErrorValue`; over cases a value may be a float64 array.
    reasons
        Why there are errors in it, one sentence each.
    unit
        Unit of the numbers; None for pure numbers and text.
    failures
        Over cases: (boolean array of lanes, error value, reason).
    """

    grid: list[list[Any]]
    reasons: tuple[str, ...] = ()
    unit: Unit | None = None
    failures: tuple[Any, ...] = field(default=())


@dataclass(slots=True)
class Reading:
    """How a call whose arguments are all text was read: all that its next evaluation needs.

    It is kept only for a call that gives one finite number and raises no floating-point flag on the way.
    """

    kernel: Callable[..., Any]
    arguments: tuple[Any, ...]
    factor: float
    shift: float
    unit: Unit | None
    shown_unit: str | None


def call_cells(function: WorksheetFunction, arguments: Sequence[Any]) -> CellResult:
    """Call a worksheet function with cell values, as every host does.

    Parameters
    ----------
    function : WorksheetFunction
    arguments : sequence
        A cell value or a list of rows for each argument, in order; None where left out. The last, optional one is the
        unit or the consistent set wanted.

    Returns
    -------
    CellResult
        Never raises for bad arguments: the grid then holds one error value and `reasons` says why.
    """
    try:  # only calls whose arguments are all text are kept, so that no other can be found
        reading = function.readings.get(tuple(arguments))
    except TypeError:  # a list of rows is no key
        reading = None
    if reading is not None:
        value = reading.kernel(*reading.arguments).item() * reading.factor - reading.shift
        shown = reading.shown_unit
        return CellResult([[value]] if shown is None else [[value, shown]], (), reading.unit)
    form = familiar.form_of(function, arguments)
    if form is not None:
        found = familiar.answer(function, *form)
        if found is not None:
            value, shown, unit = found
            return CellResult([[value]] if shown is None else [[value, shown]], (), unit)
    try:
        bound, wanted = bind_all(function, arguments)
        plan = plan_for(function, tuple(b.unit for b in bound), wanted)
        shape, values = _vector_shape(function, bound)
        outcome = evaluate(function, plan, values)
    except CallError as error:
        return CellResult([[error.value]], tuple(f"{function.name}: {reason}" for reason in error.reasons))
    if shape == (1, 1) and not outcome.failures and all(type(a) is str for a in arguments):
        _remember(function, tuple(arguments), plan, values, wanted is None)
    if shape == (1, 1) and not outcome.failures and form is not None:
        familiar.learn(function, *form, bound, plan, wanted is None)
    result = _layout(function, outcome, plan, shape, wanted is None)
    return _with_blanks(function, result, bound, shape, wanted is None)


def _remember(
    function: WorksheetFunction, key: tuple[str, ...], plan: Plan, values: Sequence[Any], show_unit: bool
) -> None:
    """Keep the reading of a call whose arguments are all text (not its result) for the next time it is met."""
    if function.result.quantity is None or function.result.extra_axes:
        return
    scaled = tuple(scaled_values(plan, values))
    try:
        with np.errstate(all="raise"):
            raw = function.kernel(*scaled)
    except FloatingPointError:
        return
    if not isinstance(raw, np.ndarray | np.float64) or raw.size != 1:
        return
    if len(function.readings) >= MEMO_SIZE:
        function.readings.clear()
    unit = plan.result_unit
    shown = unit.text if show_unit and unit is not None else None
    function.readings[key] = Reading(function.kernel, scaled, plan.result_factor, shift(plan), unit, shown)


def bind_all(
    function: WorksheetFunction, arguments: Sequence[Any], lanes: bool = False
) -> tuple[list[Bound], str | None]:
    """Read all arguments; every bad one is reported at once.

    Returns
    -------
    bound : list of Bound
    wanted : str or None
        The unit or set wanted of the result.

    Raises
    ------
    CallError
    """
    declared = function.arguments
    given, wanted, chosen = _split_result(function, list(arguments))
    reasons: list[str] = []
    value: ErrorValue | None = None
    bound: list[Bound] = []
    for index, argument in enumerate(declared):
        item = given[index] if index < len(given) else None
        if item is None and not argument.optional:
            reasons.append(f"{argument.name} is missing, or its cell is empty; write {due(argument)}")
            value = ErrorValue.VALUE
            continue
        if item is None:
            bound.append(_default(argument.default))
            continue
        try:
            read = bind(argument, item, chosen, lanes)
            bound.append(_default(argument.default) if read is OMITTED else read)
        except ArgumentError as error:
            reasons.append(str(error))
            value = value or error.value
    if reasons:
        raise CallError(function.name, reasons, value or ErrorValue.VALUE)
    _alike_forms(function, bound)
    return _without_headings(function, given, bound), wanted


def _without_headings(function: WorksheetFunction, given: Sequence[Any], bound: list[Bound]) -> list[Bound]:
    """Drop the heading of a column of texts where a column of numbers over as many cells has one.

    One text more than there are numbers is no sign of a heading: an empty cell below the numbers looks the same, and
    every text would then stand beside its neighbour's number.
    """
    columns = [
        (item, argument.is_text, read)
        for argument, item, read in zip(function.arguments, given, bound, strict=False)
        if argument.entries and isinstance(item, list | tuple)
    ]
    headed = {_extent(item) for item, is_text, read in columns if not is_text and _is_headed(item, read)}
    drop = {id(read) for item, is_text, read in columns if is_text and _extent(item) in headed}
    return [replace(read, values=read.values[1:]) if id(read) in drop else read for read in bound]


def _extent(item: Sequence[Sequence[Any]]) -> tuple[int, int]:
    return len(item), len(item[0])


def _is_headed(item: Sequence[Sequence[Any]], read: Bound) -> bool:
    """Return whether a column of numbers was read without its first cell, a heading; empty cells end it."""
    flat = [cell for row in item for cell in row]
    while flat and flat[-1] is None:
        flat.pop()
    return isinstance(flat[0], str) and read.values.shape[-1] == len(flat) - 1


def _default(default: Any) -> Bound:
    if default is None or isinstance(default, str):
        return Bound(default, None)
    return Bound(np.array([float(default)]), None)


def _alike_forms(function: WorksheetFunction, bound: Sequence[Bound]) -> None:
    """Refuse bare numbers beside numbers with a unit where a function wants quantities that are alike."""
    from doubler.catalogue.annotations import Alike

    dimensionless = parse_unit("1").dimension
    seen: dict[str, list[tuple[str, bool]]] = {}
    for argument, item in zip(function.arguments, bound, strict=True):
        if isinstance(argument.quantity, Alike) and item.values is not None and item.unit is not None:
            letter = argument.quantity.letter or ""
            seen.setdefault(letter, []).append((argument.name, item.unit.dimension == dimensionless))
    for pairs in seen.values():
        if len({bare for _, bare in pairs}) > 1:
            bare_names = ", ".join(name for name, bare in pairs if bare)
            raise CallError(function.name, [f"{bare_names} has no unit and the others have one; write its unit"])


def _split_result(function: WorksheetFunction, given: list[Any]) -> tuple[list[Any], str | None, ConsistentSet | None]:
    """Take the closing result argument off: at its own place, or as the last one given where it can be nothing else."""
    declared = function.arguments
    if len(given) > len(declared) + 1:
        raise CallError(function.name, [f"takes at most {len(declared) + 1} arguments, got {len(given)}"])
    wanted: Any = None
    if len(given) == len(declared) + 1 or (
        given and not _may_take(declared[len(given) - 1], _single(given[-1])) and _names_a_unit(_single(given[-1]))
    ):
        wanted = _single(given.pop())
    if wanted is None or wanted == "":
        return given, None, None
    if isinstance(wanted, ErrorValue):
        raise CallError(function.name, [f"the unit wanted is the error {wanted}"], wanted)
    if wanted is False:
        raise CallError(function.name, ['the last argument names one unit or one set, such as "MPa"; it is a range'])
    if not isinstance(wanted, str):
        raise CallError(function.name, [f'the last argument names a unit or a set, such as "MPa"; it is {wanted!r}'])
    try:
        return given, wanted, consistent_set(wanted)
    except UnitError as error:
        raise CallError(function.name, [str(error)]) from error


def _may_take(argument: Argument, item: Any) -> bool:
    """Return whether text in the place of this argument can be meant for it and not be the unit wanted."""
    if not argument.choices or not argument.optional:
        return argument.is_text
    return isinstance(item, str) and item.strip().casefold() in {choice.casefold() for choice in argument.choices}


def _single(item: Any) -> Any:
    if isinstance(item, list | tuple):
        return item[0][0] if len(item) == 1 and len(item[0]) == 1 else False
    return item


def _names_a_unit(item: Any) -> bool:
    if not isinstance(item, str) or not item.strip():
        return False
    text = item.strip()
    if text[0].isdigit() and not text.startswith("1/"):
        return False
    try:
        return consistent_set(item) is not None or parse_unit(item) is not None
    except UnitError:
        return False


def _vector_shape(function: WorksheetFunction, bound: Sequence[Bound]) -> tuple[tuple[int, int], list[Any]]:
    """Find the one shape of all vector arguments; unlike lengths are an error."""
    shape = (1, 1)
    first = ""
    for argument, item in zip(function.arguments, bound, strict=True):
        if argument.entries or item.shape == (1, 1):
            continue
        if shape == (1, 1):
            shape, first = item.shape, argument.name
        elif item.shape != shape and not (1 in shape and sorted(item.shape) == sorted(shape)):
            lengths = f"{first} has {_count(shape)} values and {argument.name} has {_count(item.shape)}"
            raise CallError(function.name, [f"{lengths}; give vectors of one length"])
    return shape, [item.values for item in bound]


def _count(shape: tuple[int, int]) -> str:
    return str(shape[0] * shape[1]) if 1 in shape else f"{shape[0]} × {shape[1]}"


def _layout(
    function: WorksheetFunction, outcome: Outcome, plan: Plan, shape: tuple[int, int], show_unit: bool
) -> CellResult:
    """Arrange values (and units, side by side) as the sheet shows them."""
    unit = plan.result_unit
    extra = function.result.extra_axes
    values = outcome.values
    if shape == (1, 1) and not extra and not outcome.failures:
        value = values.reshape(-1)[0] if values.dtype == object else values.item()
        return CellResult([[value, unit.text]] if show_unit and unit is not None else [[value]], (), unit)
    count = shape[0] * shape[1]
    if not extra and not outcome.failures and values.size == count:
        grid = values.reshape(shape).tolist()
        return CellResult(_add_units(grid, unit.text, shape) if show_unit and unit is not None else grid, (), unit)
    flat = np.broadcast_to(values, (count, *values.shape[values.ndim - extra :])).astype(object)
    for failure in outcome.failures:
        flat[np.broadcast_to(failure.lanes, (count,))] = failure.value
    reasons = tuple(dict.fromkeys(failure.reason for failure in outcome.failures))
    if (extra == 2 and count > 1) or (extra == 1 and shape[1] > 1):
        reason = f"{function.name}: gives several values a lane; give its vectors as columns, or one lane at a time"
        return CellResult([[ErrorValue.VALUE]], (reason,))
    if extra == 2:
        grid = [list(line) for line in flat[0]]
    elif extra == 1:
        grid = [list(line) for line in flat]
    else:
        grid = [list(line) for line in flat.reshape(shape)]
    if show_unit and unit is not None:
        grid = _add_units(grid, unit.text, shape)
    return CellResult(grid, tuple(f"{function.name}: {reason}" for reason in reasons), unit)


def _add_units(grid: list[list[Any]], text: str, shape: tuple[int, int]) -> list[list[Any]]:
    if shape[0] == 1 and shape[1] > 1:
        return [*grid, [text] * shape[1]]
    return [[*line, text] for line in grid]


def _with_blanks(
    function: WorksheetFunction, result: CellResult, bound: Sequence[Bound], shape: tuple[int, int], show_unit: bool
) -> CellResult:
    """Put the error of an element that holds no number in that element's place."""
    blanks = [blank for item in bound for blank in item.blanks]
    if not blanks:
        return result
    grid = [list(line) for line in result.grid]
    width = len(grid[0]) - (1 if show_unit and result.unit is not None and shape[1] == 1 else 0)
    for index, value, _ in blanks:
        row, column = divmod(index, shape[1])
        cells = range(width) if shape[1] == 1 else [column]
        for position in cells:
            grid[row][position] = value
    told = tuple(dict.fromkeys((*(f"{function.name}: {reason}" for _, _, reason in blanks), *result.reasons)))
    return CellResult(grid, told, result.unit)
