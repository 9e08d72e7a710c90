"""Many workbooks in one call: checked in as many processes as there are cores, their records put in place together."""

from __future__ import annotations

import multiprocessing
import os
import shutil
import signal
import tempfile
import threading
from collections.abc import Callable, Iterator, Sequence
from concurrent.futures import Future, ProcessPoolExecutor, as_completed
from concurrent.futures.process import BrokenProcessPool
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from doubler.check.examination import CheckReport, check
from doubler.check.finding import Finding
from doubler.check.record import Record, record_paths, write_record
from doubler.errors import InputError
from doubler.workbook.output import output_error

ALONE = 2
"""So many workbooks, or fewer, are checked in the process itself: starting others would take longer."""


@dataclass(frozen=True)
class Outcome:
    """What a check found, without the workbook itself: light enough to be handed from one process to another.

    Attributes
    ----------
    path
        The file.
    formulas, recalculated, traced, counts, findings
        As in `CheckReport`.
    second
        The second engine's recalculation as an object, where it was asked for.
    told
        The check as the contract's JSON object.
    record
        Where its record goes, where one is wanted.
    """

    path: Path
    formulas: int
    recalculated: int
    traced: int
    counts: dict[str, int]
    findings: list[Finding]
    second: dict[str, Any] | None
    told: dict[str, Any]
    record: Record | None = None


def outcome_of(report: CheckReport, record: Record | None = None) -> Outcome:
    """Return what a report says, without the workbook behind it."""
    return Outcome(
        report.path,
        report.formulas,
        report.recalculated,
        report.traced,
        report.counts,
        report.findings,
        None if report.second is None else report.second.as_object(),
        report.as_object(),
        record,
    )


@dataclass(frozen=True, slots=True)
class Refusal:
    """A workbook that could not be checked, and why; a fault of the program itself where `own` is true."""

    path: Path
    sentence: str
    own: bool = False


@dataclass(frozen=True, slots=True)
class Wish:
    """What is wanted of every workbook.

    Attributes
    ----------
    policy
        The policy file.
    second
        Whether a second engine recalculates too.
    records
        The folder for the records; None for none.
    staged
        Where the records wait until all are there.
    """

    policy: str | None = None
    second: bool = False
    records: Path | None = None
    staged: Path | None = None


def check_many(
    paths: Sequence[Path], wish: Wish, advance: Callable[[int], object] = lambda _done: None, workers: int | None = None
) -> list[Outcome | Refusal]:
    """Check workbooks on all cores.

    Parameters
    ----------
    paths : sequence of Path
    wish : Wish
        What is wanted of each.
    advance : callable, optional
        Called with the number of workbooks done since the last call.
    workers : int, optional
        How many processes; as many as there are cores where it is left out.

    Returns
    -------
    list of Outcome or Refusal
        In the order given. What cannot be read, or breaks the check, takes no other with it.
    """
    count = min(len(paths), workers or _cores())
    found: dict[int, Outcome | Refusal] = {}
    if count > 1 and len(paths) > ALONE and multiprocessing.parent_process() is None:
        try:
            for number, outcome in _in_processes(paths, wish, count):
                found[number] = outcome
                advance(1)
        except (BrokenProcessPool, OSError, NotImplementedError, ImportError):
            pass  # no processes to be had here, or one was killed: what is left is done without them
    for number, path in enumerate(paths):
        if number not in found:
            found[number] = check_one(path, wish)
            advance(1)
    return [found[number] for number in range(len(paths))]


def check_one(path: Path, wish: Wish) -> Outcome | Refusal:
    """Check one workbook and write its record to where records wait."""
    try:
        report = check(path, policy=wish.policy)
        if wish.second:
            from doubler.check.confirmation import confirmed

            report = confirmed(report)
        record = None
        if wish.records is not None:
            record = record_paths(path, wish.records)
            write_record(report, wish.records, staged=wish.staged)
        return outcome_of(report, record)
    except InputError as error:
        return Refusal(path, str(error))
    except Exception as fault:
        return Refusal(path, f"{path}: {type(fault).__name__}: {fault}", own=True)


def refused_at_once(paths: Sequence[Path]) -> list[Refusal]:
    """Return the files that are no workbooks, looking no further than their package."""
    from doubler.workbook.package import Package

    found = []
    for path in paths:
        try:
            Package(path)
        except InputError as error:
            found.append(Refusal(path, str(error)))
    return found


@contextmanager
def waiting_room(folder: Path) -> Iterator[Path]:
    """Give a folder beside the records' folder where they wait until all are there; it is gone afterwards."""
    near = folder.absolute()
    while not near.is_dir():
        if near.exists():
            raise InputError(f"the folder {folder} can't be made: {near} is a file; give another")
        near = near.parent
    try:
        place = Path(tempfile.mkdtemp(prefix=".doubler-", suffix=".tmp", dir=near))
    except OSError as error:
        raise output_error(folder, error) from None
    try:
        yield place
    finally:
        shutil.rmtree(place, ignore_errors=True)


def put_in_place(records: Sequence[Record], staged: Path) -> None:
    """Move records from where they wait to where they go."""
    for record in records:
        for target in (record.html, record.workbook, record.json):
            try:
                target.parent.mkdir(parents=True, exist_ok=True)
                os.replace(staged / target.name, target)
            except OSError as error:
                raise output_error(target, error) from None


def _cores() -> int:
    if hasattr(os, "sched_getaffinity"):
        return len(os.sched_getaffinity(0))
    return os.cpu_count() or 1


def _in_processes(paths: Sequence[Path], wish: Wish, count: int) -> Iterator[tuple[int, Outcome | Refusal]]:
    """Yield each workbook's number and outcome as it is done; on a break the processes are ended."""
    before = set(multiprocessing.active_children())
    pool = ProcessPoolExecutor(count, multiprocessing.get_context("spawn"), _begin)
    try:
        waiting: dict[Future[Outcome | Refusal], int] = {
            pool.submit(check_one, path, wish): number for number, path in enumerate(paths)
        }
        for done in as_completed(waiting):
            yield waiting.pop(done), done.result()
        pool.shutdown()
    except BaseException:
        pool.shutdown(wait=False, cancel_futures=True)
        for child in set(multiprocessing.active_children()) - before:
            child.terminate()
        raise


def _begin() -> None:
    """Begin a process: a break from the keyboard is the parent's to handle, and without a parent there is no work."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    parent = multiprocessing.parent_process()
    if parent is not None:
        threading.Thread(target=_end_with, args=(parent,), daemon=True).start()


def _end_with(parent: Any) -> None:
    parent.join()
    os._exit(1)
