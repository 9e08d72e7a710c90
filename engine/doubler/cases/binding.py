"""Binding a cases table to a template: which column fills which input, in the unit that its cell declares."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from doubler.cases.names import CaseNames
from doubler.cases.table import BATCH, CaseTable, Heading
from doubler.errors import InputError
from doubler.units import Unit, UnitError, convert, factor
from doubler.workbook.model import Address, Scalar
from doubler.workbook.template import Port, Template, validation_fault

Values = NDArray[np.float64] | list[Scalar]
"""One value a case: numbers as an array, texts and logicals as a list."""


@dataclass(frozen=True, slots=True)
class CaseBatch:
    """Some load cases, converted to the units of the template.

    Attributes
    ----------
    start
        Number of the first case, from 0.
    names
        The cases' names.
    values
        By input: one value a case.
    """

    start: int
    names: list[str]
    values: dict[Port, Values]

    def inputs(self) -> dict[tuple[str, Address], Any]:
        """Return the values by cell, as the evaluation takes them."""
        return {
            (port.sheet, port.address): values if isinstance(values, np.ndarray) else _objects(values)
            for port, values in self.values.items()
        }


def _objects(values: Sequence[Scalar]) -> NDArray[Any]:
    lanes = np.empty(len(values), object)
    lanes[:] = values
    return lanes


@dataclass(frozen=True, slots=True)
class _Bound:
    index: int
    heading: Heading
    port: Port
    form: str
    """``number``, ``text``, ``logical``, or ``any`` where the template's cell is empty and declares no unit."""


class BoundCases:
    """A cases table whose columns are bound to a template's inputs; made by `bind_cases`.

    Attributes
    ----------
    inputs
        The inputs that the table sets, in the order of its columns.
    """

    def __init__(self, table: CaseTable, template: Template, columns: list[_Bound]) -> None:
        self.table = table
        self._template = template
        self._columns = columns
        self.inputs = [column.port for column in columns]

    def batches(self, size: int = BATCH) -> Iterator[CaseBatch]:
        """Yield the cases, checked and converted.

        Parameters
        ----------
        size : int
            Cases at most in one batch.

        Yields
        ------
        CaseBatch

        Raises
        ------
        InputError
            At the first name or value that is wrong; the sentence names file, row and column.
        """
        names = CaseNames(self.table.path)
        start = 0
        for raw in self.table.batches(size):
            taken = names.take(_texts(raw.columns[self.table.case_column]), raw.first_row)
            values = {
                column.port: self._values(column, raw.columns[column.index], raw.first_row, taken)
                for column in self._columns
            }
            yield CaseBatch(start, taken, values)
            start += len(taken)

    def _values(self, column: _Bound, raw: Any, first_row: int, names: list[str]) -> Values:
        where = _Where(self.table.path, column.heading, first_row, names)
        values: Values
        if column.form == "number":
            values = _converted(_numbers(raw, where), column.heading.unit, column.port)
        elif column.form == "text":
            values = [_text(value, where, i) for i, value in enumerate(_texts(raw))]
        elif column.form == "logical":
            values = [_logical(value, where, i) for i, value in enumerate(_texts(raw))]
        else:
            try:
                values = _numbers(raw, where)
            except InputError:
                values = list(_texts(raw))
        for rule in self._template.validations(column.port):
            fault = validation_fault(rule, values)
            if fault is not None:
                index, wants = fault
                raise InputError(
                    f"{where(index)}: {_shown(values[index])} in {column.port.place} breaks the template's data "
                    f"validation; it {wants}"
                )
        return values


@dataclass(frozen=True, slots=True)
class _Where:
    path: Any
    heading: Heading
    first_row: int
    names: list[str]

    def __call__(self, index: int) -> str:
        return f"{self.path}, row {self.first_row + index} (case {self.names[index]}), column {self.heading.text!r}"


def bind_cases(table: CaseTable, template: Template) -> BoundCases:
    """Find the input that each column of a cases table fills.

    Parameters
    ----------
    table : CaseTable
    template : Template

    Returns
    -------
    BoundCases

    Raises
    ------
    InputError
        A column that is no input, two columns for one input, a unit of the wrong dimension, a dimensional column
        without a unit, or an input that neither the template nor the table sets.
    """
    columns: list[_Bound] = []
    taken: dict[tuple[str, Address], Heading] = {}
    for index, heading in enumerate(table.headings):
        if index == table.case_column:
            title = _case_title(template)
            if title is not None:
                taken[title.sheet, title.address] = heading
                columns.append(_Bound(index, heading, title, "text"))
            continue
        where = f"{table.path}, column {heading.text!r}"
        port = template.find_input(heading.name, where)
        other = taken.setdefault((port.sheet, port.address), heading)
        if other is not heading:
            raise InputError(f"{where} and column {other.text!r} both fill {port.place}; keep one of them")
        columns.append(_Bound(index, heading, port, _form(template, port, heading, where)))
    read = template.cells_read()
    missing = [
        port
        for port in template.inputs.values()
        if (port.sheet, port.address) not in taken and _is_blank(template, port) and (port.sheet, port.address) in read
    ]
    if missing:
        names = ", ".join(f"{port.heading!r}" for port in missing)
        raise InputError(
            f"{table.path} has no column for {names}, and the template's cell is empty; add the column or fill the cell"
        )
    return BoundCases(table, template, columns)


def _case_title(template: Template) -> Port | None:
    """Return the input named ``case`` where it holds text or nothing: the sheet's own line for the case's name."""
    port = template.inputs.get("case")
    if port is None or port.unit is not None:
        return None
    cell = template.cell(port)
    return port if cell is None or cell.value is None or isinstance(cell.value, str) else None


def _is_blank(template: Template, port: Port) -> bool:
    cell = template.cell(port)
    return cell is None or cell.value is None


def _form(template: Template, port: Port, heading: Heading, where: str) -> str:
    cell = template.cell(port)
    value = None if cell is None else cell.value
    if isinstance(value, bool):
        form = "logical"
    elif isinstance(value, str):
        form = "text"
    elif isinstance(value, float) or port.unit is not None:
        form = "number"
    else:
        form = "any"
    _hold_units(port, heading, where, form)
    return form


def _hold_units(port: Port, heading: Heading, where: str, form: str) -> None:
    unit = heading.unit
    if form in ("text", "logical"):
        if unit is not None:
            raise InputError(
                f"{where}: {port.place} takes a {form}, which has no unit; head the column {heading.name!r}"
            )
        return
    if port.unit is None:
        if unit is not None and unit.dimension.name != "ratio":
            raise InputError(
                f"{where}: the template's cell {port.place} declares no unit, so {unit.text} cannot be converted; "
                f"write the unit beside the cell or head the column {heading.name!r}"
            )
        return
    if unit is None:
        if _is_plain(port.unit):
            return
        raise InputError(
            f"{where} has no unit; {port.place} is in {port.unit.text}: head the column "
            f"'{heading.name} [{port.unit.text}]' or with another unit of {port.unit.dimension.name}"
        )
    try:
        convert(1.0, unit, port.unit)
    except UnitError:
        raise InputError(
            f"{where}: {unit.text} is a unit of {unit.dimension.name}, and {port.place} wants "
            f"{port.unit.dimension.name} ({port.unit.text})"
        ) from None


def _is_plain(unit: Unit) -> bool:
    return unit.dimension.name == "ratio" and unit.scale == 1.0


def _converted(values: NDArray[np.float64], unit: Unit | None, port: Port) -> NDArray[np.float64]:
    if port.unit is None:
        return values if unit is None else values * unit.scale
    if unit is None:
        return values
    if unit.offset or port.unit.offset:
        if port.absolute:
            return np.asarray(convert(values, unit, port.unit))
        return values * (unit.scale / port.unit.scale)
    ratio = factor(unit, port.unit)
    return values if ratio == 1.0 else values * ratio


def _numbers(raw: Any, where: _Where) -> NDArray[np.float64]:
    """Return a column as finite numbers."""
    values = _fast_numbers(raw)
    if values is None:
        values = np.array([_number(value, where, i) for i, value in enumerate(raw.to_pylist())], dtype=float)
    if not np.isfinite(values).all():
        index = int(np.flatnonzero(~np.isfinite(values))[0])
        raise InputError(f"{where(index)}: {values[index]} is no finite number; write a number")
    return values


def _fast_numbers(raw: Any) -> NDArray[np.float64] | None:
    """Cast a whole arrow column at once; None where some value needs a closer look."""
    if not hasattr(raw, "type"):
        return None
    import pyarrow as pa
    from pyarrow import compute

    try:
        if pa.types.is_string(raw.type):
            raw = compute.utf8_trim_whitespace(raw)
        if raw.null_count or pa.types.is_boolean(raw.type):
            return None
        return np.asarray(raw.cast(pa.float64()).to_numpy(zero_copy_only=False))
    except (pa.ArrowInvalid, pa.ArrowNotImplementedError):
        return None


def _number(value: Any, where: _Where, index: int) -> float:
    if value is None or (isinstance(value, str) and not value.strip()):
        raise InputError(f"{where(index)} is empty; write a number (0 where it is none)")
    if isinstance(value, bool):
        raise InputError(f"{where(index)}: {value} is no number; write a number")
    if isinstance(value, int | float):
        return float(value)
    text = str(value).strip()
    try:
        return float(text) if "_" not in text else _refuse_number(text, where, index)
    except ValueError:
        return _refuse_number(text, where, index)


def _refuse_number(text: str, where: _Where, index: int) -> float:
    shown = _shown(text)
    if "," in text and text.replace(",", "").replace(".", "").lstrip("+-").isdigit():
        raise InputError(f"{where(index)}: {shown} holds a comma; write a decimal point and no thousands separators")
    if text and (text[0].isdigit() or text[0] in "+-.") and any(c.isalpha() for c in text):
        raise InputError(f"{where(index)}: {shown} is text; write the number alone, its unit stands in the heading")
    raise InputError(f"{where(index)}: {shown} is text where a number is due; write a number")


def _texts(raw: Any) -> list[Any]:
    values = raw.to_pylist()
    if all(type(value) is str for value in values):
        return list(values)
    return ["" if v is None else f"{v:.15g}" if isinstance(v, float) else str(v) for v in values]


def _text(value: str, where: _Where, index: int) -> Scalar:
    if len(value) > 32767:
        raise InputError(f"{where(index)}: the text is longer than a cell holds (32767 characters); shorten it")
    return value or None


def _logical(value: str, where: _Where, index: int) -> bool:
    known = {"true": True, "1": True, "yes": True, "false": False, "0": False, "no": False}
    try:
        return known[value.strip().casefold()]
    except KeyError:
        raise InputError(f"{where(index)}: {_shown(value)} is neither TRUE nor FALSE; write one of them") from None


def _shown(value: Any) -> str:
    return (
        f"{value:.6g}" if isinstance(value, float) else repr(value if len(str(value)) <= 40 else str(value)[:37] + "…")
    )
