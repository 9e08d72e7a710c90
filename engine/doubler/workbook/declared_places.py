"""What the places of a sheet say of a cell's unit: a declared unit, a text that can't be read, a disagreement."""

from __future__ import annotations

import re
from dataclasses import dataclass

from doubler.units import Unit
from doubler.workbook.carried import Key
from doubler.workbook.model import Address, Cell
from doubler.workbook.references import column_number


@dataclass(frozen=True, slots=True)
class Declared:
    """A declared unit.

    Attributes
    ----------
    unit
        The unit; for a temperature that is a level its offset counts, see `absolute`.
    text
        The text as it stands in the sheet.
    place
        Where it was read, in words.
    cells
        The cells that say so.
    weak
        True where only a label's words say that the number is a pure one.
    absolute
        True for a temperature that is a level and not a difference.
    """

    unit: Unit
    text: str
    place: str
    cells: tuple[Key, ...]
    weak: bool = False
    absolute: bool = False


@dataclass(frozen=True, slots=True)
class Unreadable:
    """A text that stands for a unit and can't be read as one."""

    sheet: str
    address: Address
    text: str
    complaint: str
    at: Key


@dataclass(frozen=True, slots=True)
class Disagreement:
    """Two places that declare unlike units for one cell; `first` is the one believed."""

    sheet: str
    address: Address
    first: Declared
    second: Declared


@dataclass(slots=True)
class Found:
    """What one place says."""

    unit: Unit
    text: str
    place: str
    at: Key
    weak: bool = False
    words: str | None = None


def row_against_column(first: Found, second: Found) -> bool:
    """Return whether one place belongs to the row and the other to the column: stacked blocks, no quarrel."""
    by_column = ("header", "unit row")
    return first.place.endswith(by_column) != second.place.endswith(by_column) and "number format" not in (
        first.place,
        second.place,
    )


def units_alike(first: Unit, second: Unit) -> bool:
    """Return whether two units are of one dimension and scale."""
    return (
        first.dimension.without_angle() == second.dimension.without_angle()
        and abs(first.scale / second.scale - 1) < 1e-9
    )


def mere_symbol(found: Found) -> bool:
    """Return whether a unit at a label's end is one letter, which is a symbol where another place has the unit."""
    return found.place in ("label", "header") and len(found.unit.text) == 1 and found.unit.text.isalpha()


def reads_own_column(cell: Cell | None, column: int) -> bool:
    """Return whether a cell is a constant, or a formula that reads something of the column in which it stands."""
    if cell is None or cell.formula is None:
        return True
    if "[" in cell.formula or re.search(r"\$?\d+:\$?\d+", re.sub(r"[A-Z]\$?\d+", "", cell.formula)):
        return True
    for first, last in _COLUMNS.findall(cell.formula):
        one = column_number(first)
        if one <= column <= (column_number(last) if last else one):
            return True
    return not _COLUMNS.search(cell.formula)


_COLUMNS = re.compile(r"(?<![A-Za-z0-9_.])\$?([A-Z]{1,3})\$?\d+(?::\$?([A-Z]{1,3})\$?\d+)?(?![\w(])")
