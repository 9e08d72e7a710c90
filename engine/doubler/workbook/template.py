"""A workbook as a function: which cells are its inputs and outputs, and how a cases table addresses them."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from doubler.errors import InputError
from doubler.units import Unit, split_heading
from doubler.workbook.addresses import full_name, parse_cell, split_sheet
from doubler.workbook.declared import Declarations, declare
from doubler.workbook.graph import Graph, build_graph
from doubler.workbook.model import Address, Cell, Scalar, Sheet, Validation, Workbook

_MARGIN_NAME = re.compile(r"(^|_)(ms|margin)(_|$)", re.IGNORECASE)
_MARGIN_LABEL = re.compile(r"\b(margin of safety|MS|M\.S\.|margin)\b")


@dataclass(frozen=True, slots=True)
class Port:
    """An input or output cell of a workbook.

    Attributes
    ----------
    name
        Its defined name; else the text of its label; else its address.
    sheet, address
        Where it stands.
    unit
        The unit that the cell declares, or None.
    label
        The text that says what it is, or an empty string.
    absolute
        True for a temperature that is a level and not a difference.
    """

    name: str
    sheet: str
    address: Address
    unit: Unit | None
    label: str
    absolute: bool = False

    @property
    def place(self) -> str:
        """The address with its sheet, as in a formula."""
        return full_name(self.sheet, *self.address)

    @property
    def is_margin(self) -> bool:
        """Whether its name or label says that it is a margin of safety."""
        return bool(_MARGIN_NAME.search(self.name) or _MARGIN_LABEL.search(self.label))

    @property
    def heading(self) -> str:
        """Name and unit, as a table's column is headed."""
        has_unit = self.unit is not None and self.unit.text not in ("", "1")
        return f"{self.name} [{self.unit.text}]" if has_unit and self.unit is not None else self.name


class Template:
    """A workbook with its inputs and outputs.

    Attributes
    ----------
    workbook, graph, declarations
        The workbook, its formulas, and the units that its cells declare.
    inputs
        Cells with a defined name that hold a constant, by casefolded name.
    outputs
        Cells with a defined name that hold a formula, by casefolded name; in a workbook without names, the formula
        cells that no other formula reads and that carry a label.
    """

    def __init__(self, workbook: Workbook) -> None:
        self.workbook = workbook
        self.graph: Graph = build_graph(workbook)
        self.declarations: Declarations = declare(workbook)
        self.inputs: dict[str, Port] = {}
        self.outputs: dict[str, Port] = {}
        for name in workbook.names:
            place = self._place(name.text)
            if place is None or name.hidden:
                continue
            sheet, address = place
            cell = sheet.cells.get(address)
            ports = self.inputs if cell is None or cell.formula is None else self.outputs
            ports[name.name.casefold()] = self._port(name.name, sheet, address)
        if not self.outputs:
            self._take_results_for_outputs()

    def _place(self, text: str) -> tuple[Sheet, Address] | None:
        """Return the one cell that a name's text or a heading means, with its sheet; None where it means none."""
        name, cell = split_sheet(text.strip().lstrip("="))
        sheet = None if name is None else self.workbook.sheet(name)
        if sheet is None:
            return None
        try:
            return sheet, parse_cell(cell)
        except InputError:
            return None

    def _port(self, name: str, sheet: Sheet, address: Address) -> Port:
        declared = self.declarations.unit(sheet.name, address)
        label = self.declarations.label(sheet.name, address).text
        if declared is None:
            return Port(name, sheet.name, address, None, label)
        return Port(name, sheet.name, address, declared.unit, label, declared.absolute)

    def _take_results_for_outputs(self) -> None:
        read = self.cells_read()
        for sheet, address, _ in self.workbook.formulas():
            if (sheet.name, address) in read:
                continue
            label = self.declarations.label(sheet.name, address).text
            if label:
                name = label if label.casefold() not in self.outputs else full_name(sheet.name, *address)
                self.outputs[name.casefold()] = self._port(name, sheet, address)

    def cells_read(self) -> set[tuple[str, Address]]:
        """Return the cells (of those that hold something) that some formula reads."""
        read: set[tuple[str, Address]] = set()
        for group in range(len(self.graph.groups)):
            for index, area in self.graph.places_read(group):
                sheet = self.workbook.sheets[index]
                rows = area.last_row - area.first_row + 1
                if rows * (area.last_column - area.first_column + 1) <= len(sheet.cells):
                    for row in range(area.first_row, area.last_row + 1):
                        for column in range(area.first_column, area.last_column + 1):
                            read.add((sheet.name, (row, column)))
                else:
                    read.update((sheet.name, address) for address in sheet.cells if address in area)
        return read

    def cell(self, port: Port) -> Cell | None:
        """Return the cell of a port, or None where the sheet holds none there."""
        sheet = self.workbook.sheet(port.sheet)
        return None if sheet is None else sheet.cells.get(port.address)

    def find_input(self, heading: str, where: str) -> Port:
        """Return the input that a heading of a cases table means.

        Parameters
        ----------
        heading : str
            A defined name, an address such as ``Sheet1!C5``, or the text of the label beside the cell.
        where : str
            File and column, for the message.

        Raises
        ------
        InputError
            No cell, several cells, or a formula cell is meant.
        """
        found = self.inputs.get(heading.casefold()) or self._by_address(heading) or self._by_label(heading, where)
        if found is None:
            if heading.casefold() in self.outputs:
                raise InputError(
                    f"{where}: {heading!r} is an output of the template (it holds a formula); drop the column"
                )
            raise InputError(f"{where}: the template has no input {heading!r}{_near(heading, self.inputs)}")
        cell = self.cell(found)
        if cell is not None and cell.formula is not None:
            raise InputError(
                f"{where}: {found.place} holds a formula (={cell.formula}); a case never overwrites a formula"
            )
        return found

    def _by_address(self, heading: str) -> Port | None:
        place = self._place(heading)
        return None if place is None else self._port(full_name(place[0].name, *place[1]), *place)

    def _by_label(self, heading: str, where: str) -> Port | None:
        wanted = _words(heading)
        found = [
            self._port(heading, sheet, address)
            for sheet in self.workbook.sheets
            for address, cell in sheet.cells.items()
            if cell.formula is None
            and isinstance(cell.value, float)
            and wanted in self._label_words(sheet.name, address)
        ]
        if len(found) > 1:
            places = ", ".join(port.place for port in found)
            raise InputError(f"{where}: {heading!r} labels several cells ({places}); head the column with an address")
        return found[0] if found else None

    def _label_words(self, sheet: str, address: Address) -> set[str]:
        label = self.declarations.label(sheet, address)
        return {_words(text) for text in (label.text, *label.left)} | ({_words(label.text)} if label.above else set())

    def find_output(self, name: str) -> Port:
        """Return the output of that name or address."""
        found = self.outputs.get(name.casefold()) or self._by_address(name)
        if found is None:
            raise InputError(f"the template has no output {name!r}{_near(name, self.outputs)}")
        return found

    def validations(self, port: Port) -> list[Validation]:
        """Return the data validation rules that lie on a port's cell."""
        sheet = self.workbook.sheet(port.sheet)
        rules = sheet.validations if sheet else []
        return [rule for rule in rules if any(port.address in area for area in rule.areas)]


def _words(text: str) -> str:
    """Return a label without its unit and without differences of case and spacing."""
    return " ".join(split_heading(text)[0].casefold().replace(":", " ").split())


def _near(name: str, known: Iterable[str]) -> str:
    import difflib

    names = list(known)
    near = difflib.get_close_matches(name.casefold(), names, n=1, cutoff=0.6)
    if near:
        return f"; did you mean {near[0]!r}?"
    return f"; it has {', '.join(sorted(names)[:12])}" if names else ""


def validation_fault(rule: Validation, values: Sequence[Scalar] | NDArray[Any]) -> tuple[int, str] | None:
    """Return the first value that breaks a data validation rule and what the rule wants.

    Parameters
    ----------
    rule : Validation
    values : sequence or array
        One value a case.

    Returns
    -------
    tuple of int and str, or None
        None where no value breaks the rule or the rule cannot be judged: limits that are formulas are left to the
        spreadsheet; whole numbers, decimals, lengths of text and lists with constants are held.
    """
    if rule.kind == "list" and rule.formula1 and rule.formula1.startswith('"'):
        allowed = [item.strip() for item in rule.formula1.strip('"').split(",")]
        for index, value in enumerate(values):
            shown = f"{value:g}" if isinstance(value, float) else str(value)
            if shown not in allowed:
                return index, f"must be one of {', '.join(allowed)}"
        return None
    if rule.kind not in ("whole", "decimal", "textLength"):
        return None
    if rule.kind == "textLength":
        values = [float(len(str(value))) for value in values]
    try:
        numbers = np.asarray(values, dtype=float)
    except (TypeError, ValueError):
        return 0, "must be a number"
    if rule.kind == "whole" and (uneven := np.flatnonzero(numbers != np.rint(numbers))).size:
        return int(uneven[0]), "must be a whole number"
    return _bound_fault(rule.operator, numbers, _constant(rule.formula1), _constant(rule.formula2))


def _constant(text: str | None) -> float | None:
    try:
        return None if text is None else float(text)
    except ValueError:
        return None


def _bound_fault(
    operator: str, values: NDArray[np.float64], low: float | None, high: float | None
) -> tuple[int, str] | None:
    if low is None or (operator in ("between", "notBetween") and high is None):
        return None
    top = high if high is not None else low
    tests = {
        "between": ((low <= values) & (values <= top), f"must be between {low:g} and {top:g}"),
        "notBetween": (~((low <= values) & (values <= top)), f"must not be between {low:g} and {top:g}"),
        "equal": (values == low, f"must be {low:g}"),
        "notEqual": (values != low, f"must not be {low:g}"),
        "greaterThan": (values > low, f"must be above {low:g}"),
        "lessThan": (values < low, f"must be below {low:g}"),
        "greaterThanOrEqual": (values >= low, f"must be at least {low:g}"),
        "lessThanOrEqual": (values <= low, f"must be at most {low:g}"),
    }
    if operator not in tests:
        return None
    holds, words = tests[operator]
    wrong = np.flatnonzero(~holds)
    return (int(wrong[0]), words) if wrong.size else None
