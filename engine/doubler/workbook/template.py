"""A workbook as a function: which cells are its inputs and outputs, and how a cases table addresses them."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass

from doubler.errors import InputError
from doubler.units import Unit
from doubler.workbook.addresses import format_reference, parse_reference
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
    """

    name: str
    sheet: str
    address: Address
    unit: Unit | None
    label: str

    @property
    def place(self) -> str:
        """The address with its sheet, as in a formula."""
        return format_reference(self.sheet, self.address)

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
            place = parse_reference(name.text)
            sheet = None if place is None else workbook.sheet(place[0])
            if place is None or sheet is None:
                continue
            cell = sheet.cells.get(place[1])
            ports = self.inputs if cell is None or cell.formula is None else self.outputs
            ports[name.name.casefold()] = self._port(name.name, sheet, place[1])
        if not self.outputs:
            self._take_results_for_outputs()

    def _port(self, name: str, sheet: Sheet, address: Address) -> Port:
        declared = self.declarations.unit(sheet.name, address)
        label = self.declarations.label(sheet.name, address) or ""
        return Port(name, sheet.name, address, declared.unit if declared else None, label)

    def _take_results_for_outputs(self) -> None:
        for sheet, address, _ in self.workbook.formulas():
            if self.graph.dependents(sheet.name, address):
                continue
            label = self.declarations.label(sheet.name, address)
            if label:
                name = label if label.casefold() not in self.outputs else format_reference(sheet.name, address)
                self.outputs[name.casefold()] = self._port(name, sheet, address)

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
        place = parse_reference(heading)
        sheet = None if place is None else self.workbook.sheet(place[0])
        if place is None or sheet is None:
            return None
        return self._port(format_reference(sheet.name, place[1]), sheet, place[1])

    def _by_label(self, heading: str, where: str) -> Port | None:
        wanted = heading.casefold()
        found = [
            self._port(heading, sheet, address)
            for sheet in self.workbook.sheets
            for address, cell in sheet.cells.items()
            if cell.formula is None
            and isinstance(cell.value, float)
            and (self.declarations.label(sheet.name, address) or "").casefold() == wanted
        ]
        if len(found) > 1:
            places = ", ".join(port.place for port in found)
            raise InputError(f"{where}: {heading!r} labels several cells ({places}); head the column with an address")
        return found[0] if found else None

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


def _near(name: str, known: Iterable[str]) -> str:
    import difflib

    names = list(known)
    near = difflib.get_close_matches(name.casefold(), names, n=1, cutoff=0.6)
    if near:
        return f"; did you mean {near[0]!r}?"
    return f"; it has {', '.join(sorted(names)[:12])}" if names else ""


def validation_fault(rule: Validation, value: Scalar) -> str | None:
    """Return why a value breaks a data validation rule, or None where it does not or the rule cannot be judged.

    Rules whose limits are formulas are left to the spreadsheet; whole-number, decimal, text-length and list rules with
    constants are held.
    """
    low, high = _constant(rule.formula1), _constant(rule.formula2)
    if rule.kind == "list" and rule.formula1 and rule.formula1.startswith('"'):
        allowed = [item.strip() for item in rule.formula1.strip('"').split(",")]
        shown = f"{value:g}" if isinstance(value, float) else str(value)
        return None if shown in allowed else f"must be one of {', '.join(allowed)}"
    if rule.kind not in ("whole", "decimal", "textLength"):
        return None
    measured = len(str(value)) if rule.kind == "textLength" else value
    if not isinstance(measured, int | float):
        return "must be a number"
    if rule.kind == "whole" and measured != int(measured):
        return "must be a whole number"
    return _bound_fault(rule.operator, float(measured), low, high)


def _constant(text: str | None) -> float | None:
    try:
        return None if text is None else float(text)
    except ValueError:
        return None


def _bound_fault(operator: str, value: float, low: float | None, high: float | None) -> str | None:
    if low is None or (operator in ("between", "notBetween") and high is None):
        return None
    top = high if high is not None else low
    tests = {
        "between": (low <= value <= top, f"must be between {low:g} and {top:g}"),
        "notBetween": (not low <= value <= top, f"must not be between {low:g} and {top:g}"),
        "equal": (value == low, f"must be {low:g}"),
        "notEqual": (value != low, f"must not be {low:g}"),
        "greaterThan": (value > low, f"must be above {low:g}"),
        "lessThan": (value < low, f"must be below {low:g}"),
        "greaterThanOrEqual": (value >= low, f"must be at least {low:g}"),
        "lessThanOrEqual": (value <= low, f"must be at most {low:g}"),
    }
    holds, words = tests.get(operator, (True, ""))
    return None if holds else words
