"""Every load case's outputs as one table, and the envelope over them; no workbook a case."""

from __future__ import annotations

from abc import ABC, abstractmethod
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any, Protocol

import numpy as np

from doubler.cases import CaseBatch, bind_cases, open_cases
from doubler.errors import ErrorValue, InputError
from doubler.outcome import Envelope, EnvelopeLine
from doubler.workbook.evaluate import NotEvaluated, evaluate
from doubler.workbook.opened import OpenedTemplate, open_template, refuse_unknown
from doubler.workbook.output import output_error, refuse_target, temporary_beside
from doubler.workbook.template import Port

AT_ONCE = 65536
"""Cases read, evaluated and written before the next ones are."""
SHEET_ROWS = 1_048_576 - 1
"""Cases that one sheet of a workbook holds below its headings."""


@dataclass(frozen=True, slots=True)
class SweepReport:
    """What a sweep found.

    Attributes
    ----------
    results
        The table written: a row a case with its name, its outputs and, in the last column, what could not be computed.
    cases
        How many there were.
    envelope
        Every output over all cases, margins first.
    """

    results: Path
    cases: int
    envelope: list[EnvelopeLine]

    @property
    def fails(self) -> bool:
        """Whether a margin falls below zero, or could not be computed, in some case."""
        return any(line.fails for line in self.envelope)


def sweep(
    template: Path | str,
    cases: Path | str,
    out: Path | str,
    *,
    scheduler: str | None = None,
    begun: Callable[[int], Callable[[int], None]] | None = None,
) -> SweepReport:
    """Evaluate a template for every load case of a table and write the outputs as one table.

    Parameters
    ----------
    template : Path or str
        An ``.xlsx`` or ``.xlsm`` file.
    cases : Path or str
        A ``.csv``, ``.parquet`` or ``.xlsx`` table.
    out : Path or str
        The table to write: ``.parquet``, ``.csv`` or ``.xlsx``.
    scheduler : str, optional
        Address of a dask scheduler over whose workers the cases are shared.
    begun : callable, optional
        Called once with the number of cases (0 where it is not known) when the work begins; gives back what to call
        with the cases done.

    Returns
    -------
    SweepReport

    Raises
    ------
    InputError
        The template, the table or the target will not do; then nothing has been written.
    """
    out = Path(out)
    writers: dict[str, type[_Writer]] = {".parquet": _ParquetWriter, ".csv": _CsvWriter, ".xlsx": _SheetWriter}
    kind = writers.get(out.suffix.casefold())
    if kind is None:
        raise InputError(f"{out}: results are written as .parquet, .csv or .xlsx; give the file one of these endings")
    refuse_target(out)
    opened = open_template(template)
    table = open_cases(cases)
    if out.exists() and any(out.samefile(given) for given in (opened.package.path, table.path)):
        raise InputError(f"{out} is a file that is read; write the results to another name")
    bound = bind_cases(table, opened.template)
    outputs = list(opened.template.outputs.values())
    envelope = Envelope(outputs)
    advance = begun(table.rows or 0) if begun else lambda _done: None
    part = temporary_beside(out)
    try:
        writer = kind(part, outputs)
        try:
            for batch, results in _evaluated(opened, outputs, bound.batches(AT_ONCE), scheduler):
                envelope.take(batch.names, results)
                writer.take(batch.names, results)
                advance(len(batch.names))
            writer.close()
            part.replace(out)
        finally:
            writer.abandon()
            part.unlink(missing_ok=True)
    except OSError as error:
        raise output_error(out, error) from None
    return SweepReport(out, envelope.cases, envelope.lines())


def _evaluated(
    opened: OpenedTemplate, outputs: list[Port], batches: Iterator[CaseBatch], scheduler: str | None
) -> Iterator[tuple[CaseBatch, dict[str, Any]]]:
    if scheduler is not None:
        yield from _shared(opened, batches, scheduler)
        return
    for batch in batches:
        yield batch, results_of(opened, outputs, batch)


def results_of(opened: OpenedTemplate, outputs: list[Port], batch: CaseBatch) -> dict[str, Any]:
    """Return the outputs of a batch of cases by name: one value for all, or an array with one value a case.

    Parameters
    ----------
    opened : OpenedTemplate
    outputs : list of Port
    batch : CaseBatch

    Raises
    ------
    InputError
        An output cannot be computed at all.
    """
    done = evaluate(opened.template.graph, batch.inputs(), [(port.sheet, port.address) for port in outputs])
    results = {}
    for port in outputs:
        value = done.value(port.sheet, port.address)
        if isinstance(value, NotEvaluated):
            raise refuse_unknown(opened.package.path, port, value)
        results[port.name] = value
    return results


def _shared(
    opened: OpenedTemplate, batches: Iterator[CaseBatch], scheduler: str
) -> Iterator[tuple[CaseBatch, dict[str, Any]]]:
    """Evaluate batches on the workers of a scheduler, a few ahead of the one being written."""
    try:
        from distributed import Client
    except ImportError:
        raise InputError("--scheduler needs dask: install doubler with its extra 'cluster'") from None
    content = opened.package.path.read_bytes()
    try:
        client = Client(scheduler, timeout="10s")
    except (OSError, ValueError) as error:
        raise InputError(
            f"no scheduler answers at {scheduler} ({error}); give its address as tcp://host:8786"
        ) from None
    with client:
        shared = client.scatter(content, broadcast=True)
        ahead = max(2 * sum(client.nthreads().values()), 2)
        waiting: list[tuple[CaseBatch, Any]] = []
        for batch in batches:
            waiting.append((batch, client.submit(_on_worker, shared, opened.package.path.name, batch, pure=False)))
            if len(waiting) >= ahead:
                first, future = waiting.pop(0)
                yield first, future.result()
        for first, future in waiting:
            yield first, future.result()


_OPENED: dict[bytes, tuple[OpenedTemplate, list[Port]]] = {}


def _on_worker(content: bytes, name: str, batch: CaseBatch) -> dict[str, Any]:
    """Evaluate a batch in a worker's process, which keeps the template that it opened last."""
    import hashlib
    import tempfile

    key = hashlib.sha256(content).digest()
    if key not in _OPENED:
        with tempfile.TemporaryDirectory() as folder:
            path = Path(folder) / name
            path.write_bytes(content)
            opened = open_template(path)
        _OPENED.clear()
        _OPENED[key] = opened, list(opened.template.outputs.values())
    return results_of(*_OPENED[key], batch)


class _Writer(Protocol):
    def __init__(self, path: Path, outputs: list[Port]) -> None: ...

    def take(self, names: list[str], results: dict[str, Any]) -> None:
        """Add a batch."""

    def close(self) -> None:
        """Finish the file."""

    def abandon(self) -> None:
        """Let go of the file, finished or not."""


def _columns(outputs: list[Port], names: list[str], results: dict[str, Any]) -> tuple[list[Any], list[str]]:
    """Return one list or number array a column (None where there is no value), and what could not be computed."""
    columns: list[Any] = []
    faults: dict[int, list[str]] = {}
    for port in outputs:
        values = results[port.name]
        if isinstance(values, np.ndarray) and values.dtype == np.float64:
            columns.append(values)
            continue
        if type(values) is float:
            columns.append(np.full(len(names), values))
            continue
        lanes = values.tolist() if isinstance(values, np.ndarray) else [values] * len(names)
        for index, value in enumerate(lanes):
            if isinstance(value, ErrorValue):
                faults.setdefault(index, []).append(f"{port.name}: {value}")
                lanes[index] = None
        columns.append(lanes)
    texts = [""] * len(names)
    for index, found in faults.items():
        texts[index] = "; ".join(found)
    return columns, texts


class _ArrowWriter(ABC):
    """Shared by the two tables that arrow writes: the columns' types are settled by the first batch."""

    def __init__(self, path: Path, outputs: list[Port]) -> None:
        self.path = path
        self.outputs = outputs
        self.writer: Any = None
        self.schema: Any = None

    @abstractmethod
    def _open(self) -> Any:
        """Open the file for the schema."""

    def take(self, names: list[str], results: dict[str, Any]) -> None:
        import pyarrow as pa

        columns, faults = _columns(self.outputs, names, results)
        if self.schema is None:
            types = [_arrow_type(values) for values in columns]
            fields = [pa.field(port.heading, kind) for port, kind in zip(self.outputs, types, strict=True)]
            self.schema = pa.schema([pa.field("case", pa.string()), *fields, pa.field("not computed", pa.string())])
            self.writer = self._open()
        arrays = [pa.array(names, pa.string())]
        for port, values, field in zip(self.outputs, columns, list(self.schema)[1:], strict=False):
            arrays.append(pa.array(_fitting(port, values, text=field.type == pa.string()), field.type))
        arrays.append(pa.array(faults, pa.string()))
        self.writer.write_batch(pa.record_batch(arrays, schema=self.schema))

    def close(self) -> None:
        self.writer.close()
        self.writer = None

    def abandon(self) -> None:
        if self.writer is not None:
            self.writer.close()
            self.writer = None


def _fitting(port: Port, values: Any, *, text: bool) -> Any:
    """Return a column's values as its type takes them."""
    if text:
        return [None if v is None else v if isinstance(v, str) else _shown(v) for v in values]
    wrong = next((v for v in values if isinstance(v, str)), None) if isinstance(values, list) else None
    if wrong is not None:
        raise InputError(
            f"the output {port.name} gives numbers in some cases and the text {wrong!r} in others; "
            "a table's column holds one of them: sweep to .xlsx, or fill workbooks"
        )
    return values


def _arrow_type(values: Any) -> Any:
    import pyarrow as pa

    if isinstance(values, np.ndarray):
        return pa.float64()
    kinds = {type(value) for value in values if value is not None}
    if str in kinds:
        return pa.string()
    return pa.bool_() if kinds == {bool} else pa.float64()


def _shown(value: Any) -> str:
    return str(value).upper() if isinstance(value, bool) else f"{value:.15g}"


class _ParquetWriter(_ArrowWriter):
    def _open(self) -> Any:
        from pyarrow import parquet

        return parquet.ParquetWriter(self.path, self.schema)


class _CsvWriter(_ArrowWriter):
    def _open(self) -> Any:
        from pyarrow import csv

        return csv.CSVWriter(self.path, self.schema, write_options=csv.WriteOptions(quoting_style="needed"))


class _SheetWriter:
    def __init__(self, path: Path, outputs: list[Port]) -> None:
        from openpyxl import Workbook

        self.path, self.outputs = path, outputs
        self.book = Workbook(write_only=True)
        self.sheet = self.book.create_sheet("Results")
        self.rows = 0
        self.sheet.append([self._cell(text) for text in ("case", *(p.heading for p in outputs), "not computed")])

    def _cell(self, value: Any) -> Any:
        from openpyxl.cell import WriteOnlyCell

        cell = WriteOnlyCell(self.sheet)
        if isinstance(value, str):
            cell._value, cell.data_type = value, "s"  # the setter would read a formula into '=text'
        else:
            cell.value = value
        return cell

    def take(self, names: list[str], results: dict[str, Any]) -> None:
        self.rows += len(names)
        if self.rows > SHEET_ROWS:
            raise InputError(f"a sheet holds {SHEET_ROWS} cases and there are more; write .parquet or .csv")
        columns, faults = _columns(self.outputs, names, results)
        lists = [values.tolist() if isinstance(values, np.ndarray) else values for values in columns]
        for name, fault, *values in zip(names, faults, *lists, strict=True):
            self.sheet.append([self._cell(value) for value in (name, *values, fault)])

    def close(self) -> None:
        self.book.save(self.path)

    def abandon(self) -> None:
        return
