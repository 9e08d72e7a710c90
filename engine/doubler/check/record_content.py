"""What a check record holds, worked out once for its page, its sheet and its JSON."""

from __future__ import annotations

import datetime
from collections.abc import Iterable, Iterator
from dataclasses import dataclass, field

from doubler import __version__
from doubler.check.dispositions import Behind, Disposition, Earlier, Lapsed, SignOff, carried
from doubler.check.examination import CheckReport
from doubler.check.finding import FAMILY_OF, Finding
from doubler.check.plane_states import PlaneState, plane_states
from doubler.check.recognise import is_named, quantities
from doubler.check.revisions import Comparison
from doubler.check.written_formula import LONGEST_WORDS, Writer, Written, number_shown, under_header
from doubler.errors import InputError
from doubler.workbook.addresses import parse_area, split_sheet
from doubler.workbook.evaluate import NotEvaluated
from doubler.workbook.examined import Examined, Key, cell_name_of

CAUTION = (
    "An aid to checking. It does not replace the judgement of a qualified engineer, who checks and approves the "
    "calculation; the codes and regulations that apply where the part is used prevail."
)
MOST_IN_A_RANGE = 2000
"""A finding over more cells marks the first of them only."""


@dataclass(frozen=True, slots=True)
class Entry:
    """One finding of the record.

    Attributes
    ----------
    number
        From 1, worst first.
    finding
        The finding.
    at
        Its cell; of a range the first.
    written
        The cell's formula in symbols and numbers; None where the cell is not there.
    behind
        The hash of the cells behind it.
    disposition
        What was decided on it in an earlier record and still holds.
    """

    number: int
    finding: Finding
    at: Key
    written: Written | None
    behind: str
    disposition: Disposition | None

    @property
    def family(self) -> str:
        """The family of the finding's kind."""
        return FAMILY_OF[self.finding.kind]


@dataclass(frozen=True, slots=True)
class Margin:
    """One margin of safety or reserve factor.

    Attributes
    ----------
    key
        Its cell.
    quantity
        ``margin of safety`` or ``reserve factor``.
    label
        What it is a margin of.
    value, stored
        As re-derived, and as the file shows it; None where that is no number.
    shown, shown_stored
        Both as text.
    confirmed
        Whether both agree.
    rests_on
        Numbers of the findings (errors and warnings) on its cell or on cells on which it depends.
    derived
        Whether a formula gives it; False for a number that was typed in.
    """

    key: Key
    quantity: str
    label: str
    value: float | None
    stored: float | None
    shown: str
    shown_stored: str
    confirmed: bool
    rests_on: tuple[int, ...]
    derived: bool

    @property
    def cell(self) -> str:
        """The cell with its sheet."""
        return cell_name_of(self.key)

    @property
    def excess(self) -> float | None:
        """How far it lies above what is just enough: the margin itself, or the reserve factor less 1."""
        if self.value is None or self.quantity == "margin of safety":
            return self.value
        return self.value - 1.0


@dataclass(frozen=True)
class Content:
    """All that a record tells."""

    report: CheckReport
    version: str
    date: str
    entries: list[Entry]
    margins: list[Margin]
    lapsed: list[Lapsed]
    sign_off: SignOff | None
    sign_off_void: bool
    writer: Writer
    comparison: Comparison | None = None
    states: list[tuple[PlaneState, tuple[int, ...]]] = field(default_factory=list)
    """The plane stress states, the highest equivalent stress first, each with the findings on which it rests."""

    @property
    def unjudged(self) -> list[Entry]:
        """The findings that say what could not be judged."""
        return [entry for entry in self.entries if entry.family == "coverage"]


def content_of(
    report: CheckReport, earlier: Earlier, date: str | None = None, comparison: Comparison | None = None
) -> Content:
    """Work out what the record of a check holds.

    Parameters
    ----------
    report : CheckReport
        The check.
    earlier : Earlier
        What an earlier record of the same workbook holds.
    date : str, optional
        The day of the check, ISO form; today where it is left out.
    comparison : Comparison, optional
        What changed since an earlier revision, where one was given.
    """
    book = report.book
    behind = Behind(book)
    hashes = [behind.of(finding) for finding in report.findings]
    kept, lapsed = carried(earlier, report.findings, hashes)
    writer = Writer(book)
    entries = []
    for number, (finding, digits, disposition) in enumerate(zip(report.findings, hashes, kept, strict=True), start=1):
        at = first_cell(finding)
        known = book.cell(at) is not None
        entries.append(Entry(number, finding, at, writer.written(at) if known else None, digits, disposition))
    touched = _touched(book, entries)
    states = sorted(plane_states(book), key=lambda state: -state.von_mises * state.scale)
    signed = any(earlier.sign_off.fields.values())
    same = earlier.sign_off.sha256 == report.sha256
    return Content(
        report,
        __version__,
        date or datetime.date.today().isoformat(),
        entries,
        list(_margins(book, touched)),
        lapsed,
        earlier.sign_off if signed and same else None,
        signed and not same,
        writer,
        comparison,
        [(state, _rests_on(state.cells, touched)) for state in states],
    )


def first_cell(finding: Finding) -> Key:
    """Return the cell of a finding; of a range its first."""
    area = parse_area(finding.cell.split(",")[0].strip())
    return finding.sheet, (area.first_row, area.first_column)


def cells_of(book: Examined, text: str, sheet: str) -> Iterator[Key]:
    """Yield the cells that an address, or ranges, of a finding mean; of a very large range its filled cells."""
    named, rest = split_sheet(text)
    found = book.workbook.sheet(named or sheet)
    if found is None:
        return
    for part in rest.split(","):
        try:
            area = parse_area(part.strip())
        except InputError:
            continue
        size = (area.last_row - area.first_row + 1) * (area.last_column - area.first_column + 1)
        if size <= MOST_IN_A_RANGE:
            yield from ((found.name, at) for at in area.addresses())
        else:
            yield from ((found.name, at) for at in found.cells if at in area)


def _touched(book: Examined, entries: list[Entry]) -> dict[Key, list[int]]:
    """Return for each cell the numbers of the findings (errors and warnings) on it or on what it hangs on."""
    touched: dict[Key, list[int]] = {}
    for entry in entries:
        if entry.finding.severity == "note" or entry.finding.kind == "negative-margin":
            continue
        roots = list(cells_of(book, entry.finding.cell, entry.finding.sheet))
        for key in {*roots, *book.downstream(roots)}:
            touched.setdefault(key, []).append(entry.number)
    return touched


def _rests_on(cells: Iterable[Key], touched: dict[Key, list[int]]) -> tuple[int, ...]:
    return tuple(sorted({number for key in cells for number in touched.get(key, ())}))


def _margins(book: Examined, touched: dict[Key, list[int]]) -> Iterator[Margin]:
    """Yield the margins, lowest first; those without a number come first of all."""
    found = []
    for key, quantity in quantities(book):
        if quantity not in ("margin of safety", "reserve factor"):
            continue
        cell = book.cell(key)
        value, stored = book.value(key), book.stored(key)
        number = value if isinstance(value, float) else None
        before = stored if isinstance(stored, float) else None
        agrees = number is not None and before is not None and abs(number - before) <= 1e-9 * max(1.0, abs(number))
        shown = "not recalculated" if isinstance(value, NotEvaluated) else number_shown(value)
        found.append(
            Margin(
                key,
                quantity,
                margin_label(book, key),
                number,
                before,
                shown,
                number_shown(stored),
                agrees,
                tuple(touched.get(key, ())),
                cell is not None and cell.formula is not None,
            )
        )
    yield from sorted(found, key=lambda m: (m.excess is not None, m.excess or 0.0, m.key))


def margin_label(book: Examined, key: Key) -> str:
    """Return what a margin is a margin of: its row's words, and its column's where it stands in a table."""
    label = book.label(key)
    row = " ".join(label.left)
    if not row:
        return label.text or cell_name_of(key)
    told = [text for text in label.above if len(text) <= LONGEST_WORDS and under_header(book, key)]
    column = told[0] if told and not any(map(_says_margin, told)) else ""
    return f"{row} · {column}" if column else row


def _says_margin(words: str) -> bool:
    """Return whether a header says no more than that its column holds margins."""
    return any(is_named(words, quantity) for quantity in ("margin of safety", "reserve factor"))
