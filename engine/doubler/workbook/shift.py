"""Moving a formula: relative references follow, anchored ones stay, text and names are left alone.

A spreadsheet stores a formula that was filled over a block once, as written in the block's first cell; the
copies are that text moved. Each formula is cut into pieces once, so that a copy costs one join of strings.
"""

from __future__ import annotations

import re

from doubler.workbook.addresses import MAX_COLUMN, MAX_ROW, column_letters, column_number

# In this order: what may look like a reference and is none comes first.
_TOKEN = re.compile(
    r"""
    "(?:[^"]|"")*"                                              # text
    | '(?:[^']|'')*'!?                                          # sheet name in quotes
    | \[(?:[^\[\]']|'.|\[(?:[^\[\]']|'.)*\])*\]                 # table columns, number of another workbook
    | \#[A-Z][A-Z_]*(?:/[A0])?[!?]?                             # error value
    | (?<!!)[^\W\d][\w.]*:[\w.]+!                               # span of sheets
    | [^\W\d][\w.]*!                                            # sheet name
    | (?P<rows>\$?[0-9]{1,7}:\$?[0-9]{1,7})(?![\w.(])
    | (?P<columns>\$?[A-Za-z]{1,3}:\$?[A-Za-z]{1,3})(?![\w.(!$])
    | (?P<cell>\$?[A-Za-z]{1,3}\$?[0-9]{1,7})(?![\w.\\?(!])
    | [\w.\\?]+                                                 # number, function, name
    """,
    re.VERBOSE | re.DOTALL,
)
_CELL_PARTS = re.compile(r"(\$?)([A-Za-z]+)(\$?)([0-9]+)")
_AXIS_PARTS = re.compile(r"(\$?)([A-Za-z]+|[0-9]+)")

# A piece is fixed text, or a relative row, column or cell as (kind, row, column).
_Piece = str | tuple[str, int, int]


class MovableFormula:
    """A formula cut into fixed text and relative references.

    Parameters
    ----------
    text : str
        Formula without its leading ``=``.

    Examples
    --------
    >>> MovableFormula('B2*$C$1+LOG10(A2)&"B2"').moved(3, 1)
    'C5*$C$1+LOG10(B5)&"B2"'
    """

    __slots__ = ("_pieces", "text")

    def __init__(self, text: str) -> None:
        self.text = text
        pieces: list[_Piece] = []
        done = 0
        for match in _TOKEN.finditer(text):
            cut = _cut(match)
            if cut is None:
                continue
            pieces.append(text[done : match.start()])
            pieces += cut
            done = match.end()
        pieces.append(text[done:])
        self._pieces = pieces

    def moved(self, rows: int, columns: int) -> str:
        """Return the text as it reads in a cell that lies `rows` below and `columns` right of the first.

        Parameters
        ----------
        rows, columns : int
            The move; negative is up and left.

        Returns
        -------
        str
            A reference that leaves the sheet becomes ``#REF!``, as in the spreadsheet program.
        """
        parts: list[str] = []
        for piece in self._pieces:
            if isinstance(piece, str):
                parts.append(piece)
                continue
            kind, row, column = piece
            new_row, new_column = row + rows, column + columns
            if (kind != "column" and not 1 <= new_row <= MAX_ROW) or (
                kind != "row" and not 1 <= new_column <= MAX_COLUMN
            ):
                return self._moved_off_sheet(rows, columns)
            if kind == "cell":
                parts.append(f"{column_letters(new_column)}{new_row}")
            else:
                parts.append(str(new_row) if kind == "row" else column_letters(new_column))
        return "".join(parts)

    def _moved_off_sheet(self, rows: int, columns: int) -> str:
        """Write the references that leave the sheet as errors: the rare and slow way."""

        def replace(match: re.Match[str]) -> str:
            cut = _cut(match)
            if cut is None:
                return match[0]
            moved = [_move_axis(part, rows, columns) for part in _AXIS_PARTS.findall(match[0])]
            if None in moved:
                return "#REF!"
            texts = [text for text in moved if text is not None]
            return ("" if match.lastgroup == "cell" else ":").join(texts)

        return _TOKEN.sub(replace, self.text)


def _cut(match: re.Match[str]) -> list[_Piece] | None:
    """Cut a reference into fixed and relative pieces; None where the token is none, or does not move."""
    if match.lastgroup is None:
        return None
    return _cut_cell(match[0]) if match.lastgroup == "cell" else _cut_span(match[0])


def _cut_cell(reference: str) -> list[_Piece] | None:
    match = _CELL_PARTS.fullmatch(reference)
    assert match is not None
    column_anchor, letters, row_anchor, digits = match.groups()
    row = int(digits)
    if not 1 <= row <= MAX_ROW or (len(letters) == 3 and letters.upper() > "XFD"):
        return None  # a name such as ABC9999999 or XYZ1: no cell of any sheet
    if column_anchor and row_anchor:
        return None
    if column_anchor:
        return [f"${letters}", ("row", row, 0)]
    if row_anchor:
        return [("column", 0, column_number(letters)), f"${digits}"]
    return [("cell", row, column_number(letters))]


def _cut_span(reference: str) -> list[_Piece] | None:
    pieces: list[_Piece] = []
    for anchor, axis in _AXIS_PARTS.findall(reference):
        if pieces:
            pieces.append(":")
        if axis.isdigit():
            if not 1 <= int(axis) <= MAX_ROW:
                return None
            pieces.append(f"${axis}" if anchor else ("row", int(axis), 0))
        else:
            if len(axis) == 3 and axis.upper() > "XFD":
                return None
            pieces.append(f"${axis}" if anchor else ("column", 0, column_number(axis)))
    return pieces


def _move_axis(part: tuple[str, str], rows: int, columns: int) -> str | None:
    anchor, axis = part
    if anchor:
        return f"${axis}"
    if axis.isdigit():
        row = int(axis) + rows
        return str(row) if 1 <= row <= MAX_ROW else None
    column = column_number(axis) + columns
    return column_letters(column) if 1 <= column <= MAX_COLUMN else None
