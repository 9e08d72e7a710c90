"""The check record: a page to read and to print, a marked copy of the workbook, and the JSON."""

from __future__ import annotations

import json
from collections.abc import Iterable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from doubler.check.dispositions import Earlier
from doubler.check.examination import CheckReport
from doubler.check.marked_copy import marked_copy
from doubler.check.record_content import Content, content_of
from doubler.check.record_page import page
from doubler.check.record_sheet import read_record
from doubler.check.revisions import Comparison
from doubler.errors import InputError
from doubler.workbook.output import refuse_target, write_file


@dataclass(frozen=True, slots=True)
class Record:
    """Where a check record was written.

    Attributes
    ----------
    name
        The workbook that was checked.
    html, workbook, json
        The page, the marked copy and the findings.
    """

    name: str
    html: Path
    workbook: Path
    json: Path


def record_paths(book: Path, folder: Path) -> Record:
    """Return where the record of a workbook goes.

    Parameters
    ----------
    book : Path
        The workbook that is checked.
    folder : Path
        The folder for records.

    Examples
    --------
    >>> record_paths(Path("lug.xlsx"), Path("out")).workbook.name
    'lug.checked.xlsx'
    """
    stem = book.stem
    return Record(
        book.name,
        folder / f"{stem}.check.html",
        folder / f"{stem}.checked{book.suffix}",
        folder / f"{stem}.findings.json",
    )


def write_record(
    report: CheckReport,
    folder: Path,
    date: str | None = None,
    comparison: Comparison | None = None,
    staged: Path | None = None,
) -> Record:
    """Write the check record of one workbook.

    Parameters
    ----------
    report : CheckReport
        The check.
    folder : Path
        Where the record goes; made where it is missing. Dispositions of an earlier record in it are carried over.
    date : str, optional
        The day of the check, ISO form; today where it is left out.
    comparison : Comparison, optional
        What changed since an earlier revision, where one was given.
    staged : Path, optional
        A folder where the record waits until it is moved to its own.

    Returns
    -------
    Record

    Raises
    ------
    InputError
        The folder can't be written, or what stands under the record's names is no record.
    """
    if staged is None:
        _make(folder)
    record = record_paths(report.path, folder)
    if folder.is_dir():
        for target in (record.html, record.workbook, record.json):
            refuse_target(target)
    earlier = read_record(record.workbook) if record.workbook.exists() else Earlier()
    content = content_of(report, earlier, date, comparison)
    if staged is not None:
        record = record_paths(report.path, staged)
    write_file(record.workbook, marked_copy(content))
    write_file(record.html, [page(content).encode()])
    write_file(record.json, [json.dumps(as_object(content), ensure_ascii=False, indent=1).encode(), b"\n"])
    return record


def as_object(content: Content) -> dict[str, Any]:
    """Return the record as JSON: the check's object, and what the record adds to it."""
    found = content.report.as_object()
    found["doubler"] = content.version
    found["date"] = content.date
    for entry, one in zip(content.entries, found["findings"], strict=True):
        one["number"] = entry.number
        one["behind"] = entry.behind
        if entry.written is not None and entry.written.text:
            one["formula"] = {
                "text": entry.written.text,
                "symbols": entry.written.symbols,
                "numbers": entry.written.numbers,
                "result": entry.written.result,
            }
        if entry.disposition is not None:
            given = entry.disposition
            one["disposition"] = {"text": given.text, "by": given.by, "date": given.date}
    found["margins"] = [
        {
            "cell": margin.cell,
            "quantity": margin.quantity,
            "label": margin.label,
            "value": margin.value,
            "stored": margin.stored,
            "rests_on": list(margin.rests_on),
        }
        for margin in content.margins
    ]
    if content.states:
        found["plane_stress"] = [state.as_object() | {"rests_on": list(on)} for state, on in content.states]
    if content.comparison is not None:
        found["against"] = content.comparison.as_object()
    return found


def refuse_shared_names(books: Iterable[Path], folder: Path) -> None:
    """Refuse workbooks whose records would go under one name.

    Parameters
    ----------
    books : iterable of Path
        All workbooks of one call.
    folder : Path
        The folder for records.

    Raises
    ------
    InputError
        Two of them share a name.
    """
    taken: dict[str, Path] = {}
    for book in books:
        name = record_paths(book, folder).html.name.casefold()
        before = taken.setdefault(name, book)
        if before != book:
            raise InputError(
                f"{before} and {book} would both have their check record at {folder / name}; check them in two calls, "
                "each with its own folder for --record"
            )


def _make(folder: Path) -> None:
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as error:
        raise InputError(f"the folder {folder} can't be made ({error.strerror or error}); give another") from None
