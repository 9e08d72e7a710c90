"""What a workbook holds, as read: sheets, cells, names, tables; nothing evaluated, nothing guessed.

Rows and columns count from 1. A cell's address inside a sheet is the pair ``(row, column)``.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path

from doubler.errors import ErrorValue

Scalar = float | str | bool | ErrorValue | None
"""One stored or evaluated cell value; ``None`` is an empty cell. Whole numbers are floats here."""

Address = tuple[int, int]
"""Row and column of a cell inside its sheet, both from 1."""


@dataclass(slots=True)
class Cell:
    """One cell as its sheet's XML gives it.

    Attributes
    ----------
    value
        The constant, or for a formula cell the stored value (``None`` where none is stored).
    formula
        Formula text without the leading ``=``; ``None`` for a constant. Copies of a shared formula carry their own,
        already shifted text.
    style
        Index into `Workbook.number_formats` and the other per-style lists.
    array_range
        For a legacy array formula or a dynamic-array formula, the range it fills (``"B2:B9"``), else ``None``.
    dynamic
        True where the formula is flagged as a dynamic array (it may spill).
    shared
        Index of the shared formula that the cell belongs to, else ``None``; equal indices on one sheet are copies of
        one relative formula.
    """

    value: Scalar
    formula: str | None = None
    style: int = 0
    array_range: str | None = None
    dynamic: bool = False
    shared: int | None = None


@dataclass(frozen=True, slots=True)
class Area:
    """A rectangle of cells, both corners inclusive."""

    first_row: int
    first_column: int
    last_row: int
    last_column: int

    def __contains__(self, address: Address) -> bool:
        row, column = address
        return self.first_row <= row <= self.last_row and self.first_column <= column <= self.last_column

    def addresses(self) -> Iterator[Address]:
        """Yield its cells row by row."""
        for row in range(self.first_row, self.last_row + 1):
            for column in range(self.first_column, self.last_column + 1):
                yield row, column


@dataclass(frozen=True, slots=True)
class DefinedName:
    """A defined name: its text as the file holds it, without a leading ``=``."""

    name: str
    text: str
    sheet: str | None = None
    hidden: bool = False


@dataclass(frozen=True, slots=True)
class Table:
    """A table (list object) of a sheet."""

    name: str
    sheet: str
    area: Area
    columns: tuple[str, ...]
    header_rows: int = 1
    total_rows: int = 0


@dataclass(frozen=True, slots=True)
class Validation:
    """A data validation rule on some areas of a sheet, as the file gives it."""

    areas: tuple[Area, ...]
    kind: str
    operator: str = "between"
    formula1: str | None = None
    formula2: str | None = None
    allow_blank: bool = True


@dataclass(slots=True)
class Sheet:
    """A worksheet: its cells by address, and what else of it bears on evaluation or checking."""

    name: str
    part: str
    cells: dict[Address, Cell] = field(default_factory=dict)
    visibility: str = "visible"
    hidden_rows: set[int] = field(default_factory=set)
    hidden_columns: set[int] = field(default_factory=set)
    merged: list[Area] = field(default_factory=list)
    comments: dict[Address, str] = field(default_factory=dict)
    validations: list[Validation] = field(default_factory=list)
    filtered: list[Area] = field(default_factory=list)
    """Where a filter with criteria hides rows, heading included."""


@dataclass(slots=True)
class Workbook:
    """A workbook as read from its package."""

    path: Path
    sha256: str
    sheets: list[Sheet]
    names: list[DefinedName] = field(default_factory=list)
    tables: list[Table] = field(default_factory=list)
    number_formats: list[str] = field(default_factory=lambda: ["General"])
    date1904: bool = False
    iterative: bool = False
    calculated_on_load: bool = False
    """Whether the file asks for all formulas to be calculated when it is opened."""
    external_links: list[str] = field(default_factory=list)

    def sheet(self, name: str) -> Sheet | None:
        """Return the sheet of that name (case-insensitive, as the spreadsheet reads it), or None."""
        for sheet in self.sheets:
            if sheet.name == name:
                return sheet
        wanted = name.casefold()
        return next((sheet for sheet in self.sheets if sheet.name.casefold() == wanted), None)

    def formulas(self) -> Iterator[tuple[Sheet, Address, Cell]]:
        """Yield every formula cell, sheet by sheet."""
        for sheet in self.sheets:
            for address, cell in sheet.cells.items():
                if cell.formula is not None:
                    yield sheet, address, cell
