"""What a checker decided on each finding, carried from one record to the next while the cells behind it stand.

Each finding has a hash of the cells behind it: its own cell, the cells that it names, and all on which these depend,
with their formulas, constants and declared units. A disposition holds for that hash and for no other.
"""

from __future__ import annotations

import hashlib
from collections.abc import Iterable
from dataclasses import dataclass, field

from doubler.check.finding import Finding
from doubler.errors import InputError
from doubler.workbook.addresses import parse_area, split_sheet
from doubler.workbook.examined import Examined, Key, cell_name_of

HASH_DIGITS = 16

FindingKey = tuple[str, str, str, int]
"""Sheet, cell, kind, and which of several such findings it is."""

CELLS_CHANGED = "cells behind it changed"
FINDING_GONE = "finding is gone"


@dataclass(frozen=True, slots=True)
class Disposition:
    """What a checker wrote beside a finding.

    Attributes
    ----------
    text, by, date
        As entered.
    behind
        The hash of the cells behind the finding when it was entered.
    """

    text: str
    by: str = ""
    date: str = ""
    behind: str = ""

    @property
    def empty(self) -> bool:
        """Whether nothing was entered."""
        return not (self.text or self.by or self.date)


@dataclass(frozen=True, slots=True)
class Lapsed:
    """A disposition that fell away, and why."""

    sheet: str
    cell: str
    kind: str
    disposition: Disposition
    reason: str


@dataclass(frozen=True, slots=True)
class SignOff:
    """Who signed an earlier record, and for which file.

    Attributes
    ----------
    sha256
        The file that was signed.
    fields
        What was entered, by role and column: ``("Checker", "Name")``.
    """

    sha256: str = ""
    fields: dict[tuple[str, str], str] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class Earlier:
    """What an earlier record holds of its checker's decisions."""

    dispositions: dict[FindingKey, Disposition] = field(default_factory=dict)
    sign_off: SignOff = SignOff()


class Behind:
    """Hashes of cells together with all on which they depend; each cell is looked at once."""

    def __init__(self, book: Examined) -> None:
        self.book = book
        self._known: dict[Key, bytes] = {}

    def of(self, finding: Finding) -> str:
        """Return the hash of the cells behind a finding, in hexadecimal digits."""
        total = hashlib.sha256()
        own = set(self._cells(f"{finding.sheet}!{finding.cell}", finding.sheet))
        named = {key for cell in finding.cells for key in self._cells(cell, finding.sheet)}
        for key in sorted(own | named):
            total.update(self.cell(key))
            if key in own and finding.kind in ("stale-value", "error-value"):
                total.update(_text(self.book.stored(key)).encode())
        return total.hexdigest()[:HASH_DIGITS]

    def cell(self, key: Key) -> bytes:
        """Return the hash of a cell and of all on which it depends."""
        work = [key]
        entered: set[Key] = set()
        while work:
            one = work[-1]
            if one in self._known:
                work.pop()
                continue
            reads = list(dict.fromkeys(self.book.cells_read(one)))
            waiting = [read for read in reads if read not in self._known and read not in entered]
            if one not in entered:
                entered.add(one)
                if waiting:
                    work += waiting
                    continue
            work.pop()
            # Within a circle a cell that is not finished yet counts by its own content alone.
            parts = [self._content(one), *(self._known.get(read) or self._content(read) for read in reads)]
            self._known[one] = hashlib.sha256(b"\0".join(parts)).digest()
        return self._known[key]

    def _content(self, key: Key) -> bytes:
        cell = self.book.cell(key)
        declared = self.book.declarations.unit(*key)
        unit = "" if declared is None else declared.text
        if cell is None:
            what = "empty"
        elif cell.formula is not None:
            what = f"={cell.formula}"
        else:
            what = _text(cell.value)
        return f"{cell_name_of(key)}\0{what}\0{unit}".encode("utf-8", "surrogatepass")

    def _cells(self, text: str, sheet: str) -> Iterable[Key]:
        """Return the cells of an address or of ranges, with or without a sheet."""
        named, rest = split_sheet(text)
        found = self.book.workbook.sheet(named or sheet) or self.book.workbook.sheet(sheet)
        if found is None:
            return []
        keys: list[Key] = []
        for part in rest.split(","):
            try:
                area = parse_area(part.strip())
            except InputError:
                continue
            size = (area.last_row - area.first_row + 1) * (area.last_column - area.first_column + 1)
            inside = area.addresses() if size <= len(found.cells) else (at for at in found.cells if at in area)
            keys += [(found.name, at) for at in inside]
        return keys


def _text(value: object) -> str:
    return f"{value:.15g}" if isinstance(value, float) else f"{type(value).__name__}:{value}"


def keyed(findings: Iterable[Finding]) -> list[FindingKey]:
    """Return the key of each finding; equal ones are counted."""
    seen: dict[tuple[str, str, str], int] = {}
    keys = []
    for finding in findings:
        at = (finding.sheet, finding.cell, finding.kind)
        seen[at] = seen.get(at, 0) + 1
        keys.append((*at, seen[at]))
    return keys


def carried(
    earlier: Earlier, findings: Iterable[Finding], hashes: Iterable[str]
) -> tuple[list[Disposition | None], list[Lapsed]]:
    """Carry the dispositions of an earlier record over.

    Parameters
    ----------
    earlier : Earlier
        What the earlier record holds.
    findings : iterable of Finding
        Those of the new check.
    hashes : iterable of str
        The hash of the cells behind each.

    Returns
    -------
    carried : list of Disposition or None
        One a finding.
    lapsed : list of Lapsed
        Those that fell away: their cells changed, or their finding is gone.
    """
    left = dict(earlier.dispositions)
    kept: list[Disposition | None] = []
    lapsed: list[Lapsed] = []
    for key, behind in zip(keyed(findings), hashes, strict=True):
        before = left.pop(key, None)
        if before is None or before.empty:
            kept.append(None)
        elif before.behind == behind:
            kept.append(before)
        else:
            kept.append(None)
            lapsed.append(Lapsed(*key[:3], before, CELLS_CHANGED))
    lapsed += [Lapsed(*key[:3], before, FINDING_GONE) for key, before in left.items() if not before.empty]
    return kept, lapsed
