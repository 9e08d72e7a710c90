"""One filled workbook a load case, and a summary over all of them."""

from __future__ import annotations

import errno
import hashlib
import io
import json
import os
import sys
from collections.abc import Callable, Iterable, Iterator
from dataclasses import dataclass
from itertools import repeat
from pathlib import Path
from typing import Any

import numpy as np

from doubler import __version__
from doubler.cases import BoundCases, CaseBatch, bind_cases, open_cases
from doubler.errors import InputError
from doubler.outcome import Envelope, EnvelopeLine
from doubler.summary import Summary
from doubler.workbook.addresses import full_name, parse_area
from doubler.workbook.evaluate import Evaluation, NotEvaluated, evaluate_blocks
from doubler.workbook.model import Scalar
from doubler.workbook.opened import OpenedTemplate, open_template, refuse_unknown
from doubler.workbook.output import refuse_target, remove_left_behind
from doubler.workbook.writer import CellKey, FillPlan, PackageTemplate

AT_ONCE = 512
"""Cases evaluated and then written before the next ones are: memory does not grow with their number."""
LOG = ".doubler-fill"
"""Keeps, in the results' folder, what was written from what; a stopped run goes on by it."""
_ANNOUNCED = ("", -1, -1)
_FAR_OFF = 1 << 30


@dataclass(frozen=True, slots=True)
class FillReport:
    """What a run did.

    Attributes
    ----------
    folder, summary
        Where the filled workbooks and the summary stand.
    written, kept
        Workbooks written in this run, and those of an earlier run that were right already.
    envelope
        Every output over all cases, margins first.
    left_empty
        Formula cells that cannot be evaluated, with the reason; the copies hold no stored value in them.
    """

    folder: Path
    summary: Path
    written: int
    kept: int
    envelope: list[EnvelopeLine]
    left_empty: list[str]

    @property
    def fails(self) -> bool:
        """Whether a margin falls below zero, or could not be computed, in some case."""
        return any(line.fails for line in self.envelope)


def fill(
    template: Path | str,
    cases: Path | str,
    out: Path | str,
    *,
    fresh: bool = False,
    begun: Callable[[int], Callable[[int], None]] | None = None,
) -> FillReport:
    """Fill a template with every load case of a table.

    Parameters
    ----------
    template : Path or str
        An ``.xlsx`` or ``.xlsm`` file.
    cases : Path or str
        A ``.csv``, ``.parquet`` or ``.xlsx`` table.
    out : Path or str
        Folder of the results; made where it is missing.
    fresh : bool
        Write every workbook anew, also those that are right already or were changed by hand since.
    begun : callable, optional
        Called once with the number of cases when the work begins; gives back what to call with the cases done.

    Returns
    -------
    FillReport

    Raises
    ------
    InputError
        The template, the table or the folder will not do; then nothing has been written.
    """
    if not str(out).strip():
        raise InputError("the name of the folder for the results is empty; give a folder, such as --out filled")
    folder = Path(out)
    opened = open_template(template)
    table = open_cases(cases)
    bound = bind_cases(table, opened.template)
    total = sum(len(batch.names) for batch in bound.batches())
    run = _Run(opened, bound, folder, fresh)
    try:
        run.refuse_foreign_files((opened.package.path, table.path))
        advance = begun(total) if begun else lambda _done: None
        return run.all(advance)
    finally:
        run.log.close()


class _Run:
    def __init__(self, opened: OpenedTemplate, bound: BoundCases, folder: Path, fresh: bool) -> None:
        self.opened = opened
        self.template = opened.template
        self.path = opened.package.path
        self.bound = bound
        self.folder = folder
        self.suffix = self.path.suffix.lower()
        self.log = _Log(folder, fresh)
        self.outputs = list(self.template.outputs.values())
        self.stored = list(_stored_cells(opened))
        self.left_empty: dict[CellKey, str] = {}

    def refuse_foreign_files(self, read: Iterable[Path]) -> None:
        """Refuse to write over the files that are read, what this tool did not write, or what was changed by hand."""
        if _is_there(self.folder) and not self.folder.is_dir():
            raise InputError(f"{self.folder} is a file; give a folder for the filled workbooks")
        if not self.folder.is_dir():
            return
        given = {(state.st_dev, state.st_ino) for state in map(Path.stat, read)}
        for batch in self.bound.batches():
            for name in [*batch.names, "summary"]:
                target = self.folder / f"{name}{'.xlsx' if name == 'summary' else self.suffix}"
                if not _is_there(target):
                    continue
                state = target.stat()
                if (state.st_dev, state.st_ino) in given:
                    raise InputError(f"{target} is a file that is read; give another folder for the filled workbooks")
                if not self.log.fresh and not self.log.is_ours(target):
                    raise InputError(
                        f"{target} is there already and is not as this tool wrote it; "
                        "give another folder, or --fresh to write over it"
                    )

    def all(self, advance: Callable[[int], None]) -> FillReport:
        """Write all workbooks and the summary."""
        writer = PackageTemplate(self.opened.package, self.template.workbook)
        plan = writer.plan(
            [(port.sheet, *port.address) for port in self.bound.inputs],
            self.stored,
        )
        envelope = Envelope(self.outputs)
        summary = Summary(self.bound.inputs, self.outputs)
        try:
            written, kept = self._workbooks(plan, envelope, summary, advance)
            target = self.folder / "summary.xlsx"
            lines = envelope.lines()
            self.log.announce(target)
            summary.write(target, self.path.name, lines)
        except BaseException:
            summary.abandon()
            raise
        self.log.note(target, "summary")
        return FillReport(self.folder, target, written, kept, lines, sorted(set(self.left_empty.values())))

    def _workbooks(
        self, plan: FillPlan, envelope: Envelope, summary: Summary, advance: Callable[[int], None]
    ) -> tuple[int, int]:
        """Write the workbooks batch by batch; return how many were written and how many were right already."""
        written = kept = 0
        for batch in self.bound.batches(AT_ONCE):
            part = self._evaluated(batch)
            results = self._results(part)
            if not self.folder.is_dir():
                _make_folder(self.folder)
            self.log.open()
            envelope.take(batch.names, results)
            summary.take(batch, results)
            for name, inputs, values in self._rows(batch, part):
                if self._write(plan, name, inputs, values):
                    written += 1
                else:
                    kept += 1
                advance(1)
        return written, kept

    def _evaluated(self, batch: CaseBatch) -> Evaluation:
        cells = [(sheet, (row, column)) for sheet, row, column in self.stored]
        (part,) = evaluate_blocks(self.template.graph, batch.inputs(), cells, block=len(batch.names))
        return part

    def _results(self, part: Evaluation) -> dict[str, Any]:
        results = {}
        for port in self.outputs:
            value = part.value(port.sheet, port.address)
            if isinstance(value, NotEvaluated):
                raise refuse_unknown(self.path, port, value)
            results[port.name] = value
        return results

    def _rows(self, batch: CaseBatch, part: Evaluation) -> Iterator[tuple[str, tuple[Scalar, ...], tuple[Scalar, ...]]]:
        """Yield for each case its name, its inputs and the stored values of all formula cells."""
        columns = []
        for key in self.stored:
            sheet, row, column = key
            value = part.value(sheet, (row, column))
            if isinstance(value, NotEvaluated):
                self.left_empty.setdefault(key, f"{full_name(sheet, row, column)}: {value.root}: {value.reason}")
                value = None
            columns.append(value.tolist() if isinstance(value, np.ndarray) else repeat(value, len(batch.names)))
        inputs = [v.tolist() if isinstance(v, np.ndarray) else v for v in batch.values.values()]
        given = zip(*inputs, strict=True) if inputs else repeat((), len(batch.names))
        yield from zip(batch.names, given, zip(*columns, strict=True), strict=True)

    def _write(self, plan: FillPlan, name: str, inputs: tuple[Scalar, ...], values: tuple[Scalar, ...]) -> bool:
        target = self.folder / f"{name}{self.suffix}"
        mark = self._mark(inputs)
        if self.log.holds(target, mark):
            return False
        self.log.announce(target)
        plan.write(target, inputs, values)
        self.log.note(target, mark)
        return True

    def _mark(self, inputs: tuple[Scalar, ...]) -> str:
        text = repr((__version__, self.template.workbook.sha256, [p.place for p in self.bound.inputs], inputs))
        return hashlib.sha256(text.encode()).hexdigest()[:32]


def _stored_cells(opened: OpenedTemplate) -> Iterator[CellKey]:
    """Yield every cell that shows a formula's result: formula cells, and the cells that an array formula fills."""
    seen: set[CellKey] = set()
    for sheet, (row, column), cell in opened.template.workbook.formulas():
        keys = [(sheet.name, row, column)]
        if cell.array_range:
            area = parse_area(cell.array_range)
            keys = [
                (sheet.name, r, c)
                for r in range(area.first_row, area.last_row + 1)
                for c in range(area.first_column, area.last_column + 1)
            ]
        for key in keys:
            if key not in seen:
                seen.add(key)
                yield key


def _make_folder(folder: Path) -> None:
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise InputError(f"the folder {folder} can't be made ({error.strerror or error}); give another") from None


def _is_there(path: Path) -> bool:
    try:
        return path.exists()
    except OSError as error:  # a name that is too long, for one
        raise InputError(f"{path} can't be looked for ({error.strerror or error}); give another folder") from None


class _Log:
    """What was written into the folder, from what, and how the file looked then; one line a file.

    A file is announced before it is written, so that a run killed between the two does not take its own file for
    somebody else's. While a run goes on it holds a lock on the log, and a second run into the folder is refused.
    """

    def __init__(self, folder: Path, fresh: bool) -> None:
        self.path = folder / LOG
        self.fresh = fresh
        self._known: dict[str, tuple[str, int, int]] = {}
        self._stream: Any = None
        self._bare = False
        if os.path.exists(self.path):  # unlike Path.exists, false for a name that is too long
            self.open()
        if fresh:
            return
        try:
            lines = self.path.read_text(encoding="utf-8").splitlines()
        except OSError:
            return
        for line in lines:
            try:
                name, mark, size, time = json.loads(line)
            except ValueError:  # the last line of a run that was killed
                continue
            self._known[name] = (mark, size, time)

    def is_ours(self, target: Path) -> bool:
        """Return whether a file is as it was written, or was being written when a run was killed."""
        known = self._known.get(target.name)
        try:
            state = target.stat()
        except OSError:
            return False
        return known is not None and (known == _ANNOUNCED or known[1:] == (state.st_size, state.st_mtime_ns))

    def holds(self, target: Path, mark: str) -> bool:
        """Return whether a file is as it was written, from these very inputs."""
        return self._known.get(target.name, ("",))[0] == mark and self.is_ours(target)

    def announce(self, target: Path) -> None:
        """Say that a file is about to be written."""
        self._line(target.name, *_ANNOUNCED)

    def note(self, target: Path, mark: str) -> None:
        """Note a file just written."""
        state = target.stat()
        self._line(target.name, mark, state.st_size, state.st_mtime_ns)
        self._bare = False

    def _line(self, *entries: str | int) -> None:
        self.open()
        print(json.dumps(entries), file=self._stream, flush=True)

    def open(self) -> None:
        """Open the log for more lines, and keep other runs out of the folder."""
        if self._stream is not None:
            return
        refuse_target(self.path)
        self._bare = not self.path.exists()
        try:
            stream = self.path.open("ab+")
        except OSError as error:
            raise InputError(f"{self.path} can't be written ({error.strerror or error}); give another folder") from None
        if not _locked(stream.fileno()):
            stream.close()
            raise InputError(
                f"another run is writing to {self.path.parent}; wait until it has ended, or give another folder"
            )
        remove_left_behind(self.path.parent)
        if stream.tell() and not self.path.read_bytes().endswith(b"\n"):  # a run was killed within a line
            stream.write(b"\n")
        self._stream = io.TextIOWrapper(stream, encoding="utf-8")

    def close(self) -> None:
        """Close the log and let other runs in."""
        if self._stream is not None:
            if self._bare:  # nothing was written after all
                self.path.unlink(missing_ok=True)
            self._stream.close()
            self._stream = None


def _locked(descriptor: int) -> bool:
    """Lock an open file; return False where another run holds it. The system lets go of it when a process ends."""
    try:
        if sys.platform == "win32":
            import msvcrt

            os.lseek(descriptor, _FAR_OFF, os.SEEK_SET)  # a lock there hides no line from a reader
            msvcrt.locking(descriptor, msvcrt.LK_NBLCK, 1)
        else:
            import fcntl

            fcntl.flock(descriptor, fcntl.LOCK_EX | fcntl.LOCK_NB)
    except OSError as error:
        return error.errno not in (errno.EAGAIN, errno.EACCES, errno.EDEADLK)  # else the file system knows no locks
    return True
