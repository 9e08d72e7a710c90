"""Cell addresses as text and as numbers: ``C5`` and (5, 3), ``B2:D9`` and an area, sheet names in quotes."""

from __future__ import annotations

import re
from functools import lru_cache

from doubler.errors import InputError
from doubler.workbook.model import Address, Area

MAX_ROW = 1_048_576
MAX_COLUMN = 16_384

_CELL = re.compile(r"\$?([A-Za-z]{1,3})\$?([0-9]{1,7})", re.ASCII)
_COLUMNS = re.compile(r"\$?([A-Za-z]{1,3}):\$?([A-Za-z]{1,3})", re.ASCII)
_ROWS = re.compile(r"\$?([0-9]{1,7}):\$?([0-9]{1,7})", re.ASCII)
# Names that a formula may write without quotes: a letter or underscore first, then word characters and dots.
_PLAIN_SHEET = re.compile(r"[^\W\d][\w.]*")
# What would be read as a reference of either style, or as a logical value, is quoted all the same.
_READ_AS_OTHER = re.compile(
    r"[A-Za-z]{1,3}[0-9]+|[Rr][0-9]*|[Cc][0-9]*|[Rr][0-9]*[Cc][0-9]*|true|false", re.ASCII | re.IGNORECASE
)
_QUOTED_PREFIX = re.compile(r"'((?:[^']|'')*)'!(.*)", re.DOTALL)


@lru_cache(maxsize=MAX_COLUMN)
def column_letters(column: int) -> str:
    """Return the letters of a column.

    Parameters
    ----------
    column : int
        Column number from 1.

    Raises
    ------
    InputError
        Where no sheet has such a column.

    Examples
    --------
    >>> column_letters(28)
    'AB'
    """
    if not 1 <= column <= MAX_COLUMN:
        raise InputError(f"column {column} is outside the sheet: columns run from 1 (A) to {MAX_COLUMN} (XFD)")
    letters = ""
    rest = column
    while rest:
        rest, letter = divmod(rest - 1, 26)
        letters = chr(65 + letter) + letters
    return letters


@lru_cache(maxsize=MAX_COLUMN)
def column_number(letters: str) -> int:
    """Return the number of a column, from 1.

    Parameters
    ----------
    letters : str
        Column letters, capitals or not.

    Raises
    ------
    InputError
        Where no sheet has such a column.

    Examples
    --------
    >>> column_number("AB")
    28
    """
    number = 0
    for letter in letters.upper():
        if not "A" <= letter <= "Z":
            raise InputError(f"'{letters}' is no column: write letters from A to XFD")
        number = number * 26 + ord(letter) - 64
        if number > MAX_COLUMN:
            raise InputError(f"column {letters.upper()} is outside the sheet: the last column is XFD")
    if not number:
        raise InputError("a column needs letters from A to XFD")
    return number


def cell_name(row: int, column: int) -> str:
    """Return the A1 text of a cell.

    Parameters
    ----------
    row, column : int
        Both from 1.

    Examples
    --------
    >>> cell_name(5, 3)
    'C5'
    """
    if not 1 <= row <= MAX_ROW:
        raise InputError(f"row {row} is outside the sheet: rows run from 1 to {MAX_ROW}")
    return f"{column_letters(column)}{row}"


def parse_cell(text: str) -> Address:
    """Read a cell address such as ``C5`` or ``$C$5``.

    Parameters
    ----------
    text : str
        The address, without a sheet name.

    Returns
    -------
    tuple of int
        Row and column, from 1.

    Raises
    ------
    InputError
        Where the text is no address, or the address is outside the sheet.

    Examples
    --------
    >>> parse_cell("$C$5")
    (5, 3)
    """
    match = _CELL.fullmatch(text)
    if not match:
        raise InputError(f"'{text}' is no cell address: write it as C5")
    return _row_number(match[2]), column_number(match[1])


def parse_area(text: str) -> Area:
    """Read a range such as ``B2:D9``, ``C5``, ``A:C`` or ``2:9``.

    Parameters
    ----------
    text : str
        The range, without a sheet name; the corners may stand in any order.

    Returns
    -------
    Area
        The rectangle, corners inclusive.

    Raises
    ------
    InputError
        Where the text is no range, or leaves the sheet.

    Examples
    --------
    >>> parse_area("B2:D9")
    Area(first_row=2, first_column=2, last_row=9, last_column=4)
    """
    if match := _COLUMNS.fullmatch(text):
        columns = sorted((column_number(match[1]), column_number(match[2])))
        return Area(1, columns[0], MAX_ROW, columns[1])
    if match := _ROWS.fullmatch(text):
        rows = sorted((_row_number(match[1]), _row_number(match[2])))
        return Area(rows[0], 1, rows[1], MAX_COLUMN)
    first, _, last = text.partition(":")
    try:
        row_a, column_a = parse_cell(first)
        row_b, column_b = parse_cell(last or first)
    except InputError as error:
        if "outside" in str(error):
            raise
        raise InputError(f"'{text}' is no range: write it as B2:D9") from None
    return Area(min(row_a, row_b), min(column_a, column_b), max(row_a, row_b), max(column_a, column_b))


def area_name(area: Area) -> str:
    """Return the A1 text of an area; a single cell gives its own address.

    Parameters
    ----------
    area : Area
        The rectangle.

    Examples
    --------
    >>> area_name(Area(2, 2, 9, 4))
    'B2:D9'
    """
    first = cell_name(area.first_row, area.first_column)
    last = cell_name(area.last_row, area.last_column)
    return first if first == last else f"{first}:{last}"


def quote_sheet(name: str) -> str:
    """Return a sheet's name as a formula writes it, in quotes where it needs them.

    Parameters
    ----------
    name : str
        The name on the sheet's tab.

    Examples
    --------
    >>> quote_sheet("Lug")
    'Lug'
    >>> quote_sheet("Lug 2's")
    "'Lug 2''s'"
    """
    if _PLAIN_SHEET.fullmatch(name) and not _READ_AS_OTHER.fullmatch(name):
        return name
    return "'" + name.replace("'", "''") + "'"


def split_sheet(text: str) -> tuple[str | None, str]:
    """Split ``Sheet1!C5`` into the sheet's name, without quotes, and the rest.

    Parameters
    ----------
    text : str
        An address or a range with or without its sheet.

    Returns
    -------
    sheet : str or None
        None where the text names no sheet.
    rest : str
        What stands behind the exclamation mark.

    Examples
    --------
    >>> split_sheet("'My sheet'!C5")
    ('My sheet', 'C5')
    >>> split_sheet("C5")
    (None, 'C5')
    """
    if match := _QUOTED_PREFIX.fullmatch(text):
        return match[1].replace("''", "'"), match[2]
    sheet, mark, rest = text.rpartition("!")
    return (sheet, rest) if mark else (None, text)


def full_name(sheet: str, row: int, column: int) -> str:
    """Return the address of a cell with its sheet, as messages and findings write it.

    Parameters
    ----------
    sheet : str
        The sheet's name.
    row, column : int
        Both from 1.

    Examples
    --------
    >>> full_name("Lug", 9, 4)
    'Lug!D9'
    """
    return f"{quote_sheet(sheet)}!{cell_name(row, column)}"


def _row_number(digits: str) -> int:
    row = int(digits)
    if not 1 <= row <= MAX_ROW:
        raise InputError(f"row {digits} is outside the sheet: rows run from 1 to {MAX_ROW}")
    return row
