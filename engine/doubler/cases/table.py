"""Reading a table of load cases from CSV, Parquet or a workbook, in batches of rows."""

from __future__ import annotations

import csv
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from decimal import Decimal
from pathlib import Path
from typing import Any

from doubler.errors import ErrorValue, InputError
from doubler.units import Unit, UnitError, parse_unit, split_heading

BATCH = 65536
"""Rows a batch where nothing else is asked for."""


@dataclass(frozen=True, slots=True)
class Heading:
    """The head of a column: ``load_axial [kN]``.

    Attributes
    ----------
    text
        As it stands in the file.
    name
        Without its unit.
    unit
        The unit in its bracket, or None where it has none.
    """

    text: str
    name: str
    unit: Unit | None


@dataclass(frozen=True, slots=True)
class RawBatch:
    """Some rows of a table: their first row's number in the file, and one arrow array a column."""

    first_row: int
    columns: list[Any]


@dataclass(frozen=True)
class CaseTable:
    """A table of load cases whose headings are read and whose rows are read when asked for.

    Attributes
    ----------
    path
        The file.
    headings
        Of all columns, in order; `case_column` is the index of the one that names the cases.
    rows
        How many rows there are, or None where that is only known at the end.
    """

    path: Path
    headings: list[Heading]
    case_column: int
    rows: int | None
    _batches: Callable[[int], Iterator[RawBatch]]

    def batches(self, size: int = BATCH) -> Iterator[RawBatch]:
        """Yield the rows, at most `size` at a time; a table without rows is an error."""
        empty = True
        for batch in self._batches(size):
            if len(batch.columns[0]):
                empty = False
                yield batch
        if empty:
            raise InputError(f"{self.path} holds no load case: write one row a case below the headings")


def open_cases(path: Path | str) -> CaseTable:
    """Open a table of load cases.

    Parameters
    ----------
    path : Path or str
        A ``.csv``, ``.parquet`` or ``.xlsx`` file; its first row (or its schema) holds the headings.

    Returns
    -------
    CaseTable

    Raises
    ------
    InputError
        The file cannot be read, has no column ``case``, names a column twice, or a heading's unit cannot be read.
    """
    path = Path(path)
    openers = {
        ".csv": _open_csv, ".txt": _open_csv, ".tsv": _open_csv, ".parquet": _open_parquet,
        ".xlsx": _open_workbook, ".xlsm": _open_workbook,
    }  # fmt: skip
    opener = openers.get(path.suffix.casefold())
    if opener is None:
        raise InputError(f"{path} is no cases table: give a .csv, .parquet or .xlsx file")
    if not path.is_file():
        raise InputError(f"{path} is not there" if not path.exists() else f"{path} is not a file")
    try:
        return opener(path)
    except OSError as error:
        raise InputError(f"{path} cannot be read ({error.strerror or error})") from None


def _table(path: Path, texts: list[str], rows: int | None, batches: Callable[[int], Iterator[RawBatch]]) -> CaseTable:
    headings = [_heading(path, text, column) for column, text in enumerate(texts, start=1)]
    seen: dict[str, str] = {}
    for heading in headings:
        other = seen.setdefault(heading.name.casefold(), heading.text)
        if other != heading.text or [h.text for h in headings].count(heading.text) > 1:
            raise InputError(f"{path}: two columns are headed {heading.name!r}; keep one of them")
    case_column = next((i for i, h in enumerate(headings) if h.name.casefold() == "case"), None)
    if case_column is None:
        raise InputError(f"{path} has no column 'case'; head the column that names the load cases with: case")
    return CaseTable(path, headings, case_column, rows, batches)


def _heading(path: Path, text: str, column: int) -> Heading:
    text = " ".join(text.split())  # a heading may be broken into lines
    if not text:
        raise InputError(f"{path}: column {column} has no heading; head it with an input and its unit")
    name, unit_text, place = split_heading(text)
    if unit_text is None or place != "bracket":
        return Heading(text, text, None)
    try:
        return Heading(text, name, parse_unit(unit_text))
    except UnitError as error:
        raise InputError(f"{path}, column {text!r}: {error}") from None


def _open_csv(path: Path) -> CaseTable:
    head, delimiter, lines = _csv_head(path)

    def batches(size: int) -> Iterator[RawBatch]:
        import pyarrow as pa
        from pyarrow import csv as arrow_csv

        wrong: list[tuple[int | None, int]] = []

        def refuse(row: Any) -> str:
            wrong.append((row.number, row.actual_columns))
            return "error"

        names = [f"c{index}" for index in range(len(head))]
        try:
            reader = arrow_csv.open_csv(
                path,
                read_options=arrow_csv.ReadOptions(
                    column_names=names, skip_rows=lines, block_size=1 << 22, use_threads=False
                ),
                parse_options=arrow_csv.ParseOptions(
                    delimiter=delimiter, newlines_in_values=True, invalid_row_handler=refuse
                ),
                convert_options=arrow_csv.ConvertOptions(
                    column_types=dict.fromkeys(names, pa.string()), strings_can_be_null=False, check_utf8=True
                ),
            )
            row = 2
            with reader:  # closed also where a case is refused: its reading ahead must not outlive the program
                for block in reader:
                    for start in range(0, block.num_rows, size):
                        part = block.slice(start, size)
                        yield RawBatch(row, list(part.columns))
                        row += part.num_rows
        except pa.ArrowInvalid as error:
            if wrong:
                number, columns = wrong[0]
                where = "" if number is None else f", row {number}"
                raise InputError(
                    f"{path}{where}: a row has {columns} {'value' if columns == 1 else 'values'} where the head has "
                    f"{len(head)} columns; "
                    "write one value a column (a decimal comma splits a number in two: write a point)"
                ) from None
            if "UTF8" in str(error):
                raise InputError(f"{path} is not UTF-8 text; save it as CSV UTF-8") from None
            if "Empty CSV" in str(error):
                return
            raise InputError(f"{path} is not readable as CSV ({str(error).splitlines()[0]})") from None

    return _table(path, head, None, batches)


def _csv_head(path: Path) -> tuple[list[str], str, int]:
    """Return the headings of a CSV file, what separates its columns (comma, semicolon or tab), and the head's lines."""
    with path.open("rb") as stream:
        start = stream.read(4)
    if start[:2] in (b"\xff\xfe", b"\xfe\xff") or b"\x00" in start:
        raise InputError(f"{path} is not UTF-8 text; save it as CSV UTF-8")
    try:
        with path.open(encoding="utf-8-sig", newline="") as stream:
            line = stream.readline()
            delimiter = max(",;\t", key=line.count) if line else ","
            stream.seek(0)
            reader = csv.reader(stream, delimiter=delimiter)
            head = next(reader, [])
    except UnicodeDecodeError:
        raise InputError(f"{path} is not UTF-8 text; save it as CSV UTF-8") from None
    except csv.Error as error:
        raise InputError(f"{path} is not readable as CSV ({error})") from None
    if not any(text.strip() for text in head):
        what = f"{path} is empty" if not line else f"the first row of {path} is empty"
        raise InputError(f"{what}: write the headings in its first row and one row a load case below")
    return head, delimiter, reader.line_num


def _open_parquet(path: Path) -> CaseTable:
    import pyarrow as pa
    from pyarrow import parquet

    try:
        file = parquet.ParquetFile(path)
    except pa.ArrowInvalid as error:
        raise InputError(f"{path} is no Parquet file, or a damaged one ({str(error).splitlines()[0]})") from None

    def batches(size: int) -> Iterator[RawBatch]:
        row = 2
        for batch in parquet.ParquetFile(path).iter_batches(batch_size=size):
            yield RawBatch(row, list(batch.columns))
            row += batch.num_rows

    return _table(path, list(file.schema_arrow.names), file.metadata.num_rows, batches)


def _open_workbook(path: Path) -> CaseTable:
    """Read the first visible sheet of a workbook; its formulas are evaluated, its stored values not believed."""
    from doubler.workbook.addresses import cell_name
    from doubler.workbook.evaluate import NotEvaluated, evaluate
    from doubler.workbook.graph import build_graph
    from doubler.workbook.number_format import is_date
    from doubler.workbook.reader import read_workbook
    from doubler.workbook.unit_text import is_percent_format

    workbook = read_workbook(path)
    sheet = next((s for s in workbook.sheets if s.visibility == "visible"), None)
    if sheet is None or not sheet.cells:
        raise InputError(f"{path} is empty: write the headings in its first row and one row a load case below")
    formats = dict(enumerate(workbook.number_formats))  # a workbook may lack the styles that its cells name
    values = {address: cell.value for address, cell in sheet.cells.items()}
    if any(cell.formula is not None for cell in sheet.cells.values()):
        done = evaluate(build_graph(workbook))
        for address, cell in sheet.cells.items():
            if cell.formula is None:
                continue
            value = done.value(sheet.name, address)
            if isinstance(value, NotEvaluated):
                raise InputError(f"{path}, {sheet.name}!{cell_name(*address)}: {value}; write its value instead")
            values[address] = value
    values = {address: value for address, value in values.items() if value is not None and value != ""}
    for address, value in values.items():
        if isinstance(value, ErrorValue):
            raise InputError(f"{path}, {sheet.name}!{cell_name(*address)} shows {value}; write a value")
        shown = formats.get(sheet.cells[address].style, "General")
        if isinstance(value, float) and is_date(shown):
            raise InputError(
                f"{path}, {sheet.name}!{cell_name(*address)} shows a date or a time, which is kept as the number "
                f"{value:.12g}; give the cell a number format and write its number, or write it as text"
            )
    first = min(row for row, _ in values) if values else 1
    columns = sorted({column for row, column in values if row == first})
    texts = [str(values[first, column]) for column in columns]
    stray = next((address for address in values if address[1] not in columns), None)
    if stray is not None:
        raise InputError(f"{path}, {sheet.name}!{cell_name(*stray)} has no heading in row {first}; head its column")
    rows = sorted({row for row, _ in values if row > first})
    in_percent = {c for c, text in zip(columns, texts, strict=True) if split_heading(text.strip())[1] == "%"}
    for address, value in values.items():
        shown = formats.get(sheet.cells[address].style, "General")
        if address[1] in in_percent and isinstance(value, float) and is_percent_format(shown):
            values[address] = float(Decimal(repr(value)) * 100)  # the cell shows 5% and holds 0.05

    def batches(size: int) -> Iterator[RawBatch]:
        for part in _runs(rows, size):
            yield RawBatch(part[0], [_Listed([values.get((row, column)) for row in part]) for column in columns])

    return _table(path, texts, len(rows), batches)


def _runs(rows: list[int], size: int) -> Iterator[list[int]]:
    """Cut row numbers into runs without a gap, each of at most `size`: a message then names the row that it means."""
    start = 0
    for end in range(1, len(rows) + 1):
        if end == len(rows) or rows[end] != rows[end - 1] + 1 or end - start == size:
            yield rows[start:end]
            start = end


class _Listed(list[Any]):
    """A column of Python values with the little of an arrow array's face that the binding needs."""

    def to_pylist(self) -> list[Any]:
        """Return the values."""
        return list(self)
