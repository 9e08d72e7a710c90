"""What mends a finding, and what the workbook gives when it is mended.

Only what follows from the workbook itself is a mend: the neighbours' formula, a range drawn to its end, a number for a
text. Where a formula and a label disagree, either may be right; the number that the label asks for is then known, and
serves to say what the margins would be, but nothing is written.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass

from doubler.check.altered import values_altered
from doubler.check.finding import Finding
from doubler.workbook.evaluate import evaluate
from doubler.workbook.examined import Examined, Key
from doubler.workbook.parse import FormulaError, parse
from doubler.workbook.references import column_number

MOST_CELLS = 4096
_ADDRESS = re.compile(r"^([A-Z]{1,3})(\d+)")


@dataclass(frozen=True, slots=True)
class Mend:
    """What to put in a cell.

    Attributes
    ----------
    key
        The cell.
    formula
        The formula, without its ``=``; None where a number is meant.
    number
        The number; for a formula that stays as it is, what it should give.
    written
        Whether it may be written into a copy: there is but one way to mend it.
    """

    key: Key
    formula: str | None
    number: float | None = None
    written: bool = True


def key_of(finding: Finding) -> Key | None:
    """Return the cell at which a finding stands; of a range the first."""
    match = _ADDRESS.match(finding.cell)
    return None if match is None else (finding.sheet, (int(match[2]), column_number(match[1])))


def keys_of(finding: Finding) -> list[Key]:
    """Return all cells of a finding's place, which may be a range or several; at most `MOST_CELLS`."""
    found: list[Key] = []
    for part in finding.cell.split(","):
        ends = [_ADDRESS.match(end) for end in part.split(":")]
        if None in ends:
            continue
        corners = [(int(end[2]), column_number(end[1])) for end in ends if end is not None]
        (top, left), (bottom, right) = corners[0], corners[-1]
        for row in range(top, bottom + 1):
            for column in range(left, right + 1):
                found.append((finding.sheet, (row, column)))
                if len(found) >= MOST_CELLS:
                    return found
    return found


def mend_of(book: Examined, finding: Finding) -> Mend | None:
    """Return what mends a finding, or None where that is not known."""
    key = key_of(finding)
    cell = None if key is None else book.cell(key)
    if key is None or cell is None:
        return None
    if finding.kind == "text-number":
        try:
            return Mend(key, None, float(str(cell.value).strip()))
        except ValueError:
            return None
    if finding.kind == "short-range" and cell.formula is not None and finding.found in cell.formula:
        return _parsed(key, cell.formula.replace(finding.found, finding.expected))
    if finding.expected.startswith("=") and len(finding.expected) > 1:
        sure = finding.kind != "shear-strain-form" and finding.severity == "error"
        return _parsed(key, finding.expected[1:], written=sure or finding.kind == "pattern-break")
    factor = _factor(book, finding, key)
    value = book.number(key)
    if factor and value is not None:
        return Mend(key, None, value / factor, written=False)
    return None


def _parsed(key: Key, formula: str, *, written: bool = True) -> Mend | None:
    try:
        parse(formula, key[1])
    except FormulaError:
        return None
    return Mend(key, formula, None, written)


def _factor(book: Examined, finding: Finding, key: Key) -> float | None:
    """Return by how much a formula's number is off, where the trace of units says so."""
    for fault in book.tracing.findings:
        if (fault.sheet, fault.address) == key and fault.kind == finding.kind and fault.severity != "note":
            return fault.factor
    return None


def values_when_mended(book: Examined, mend: Mend, wanted: Iterable[Key]) -> dict[Key, float]:
    """Return what cells give when one finding is mended; those without a number are left out."""
    keys = list(wanted)
    values: dict[Key, object]
    if mend.formula is not None:
        values = {**values_altered(book, {mend.key: mend.formula}, keys)}
    else:
        evaluated = evaluate(book.graph, {mend.key: mend.number}, keys)
        values = {key: mend.number if key == mend.key else evaluated.value(*key) for key in keys}
    found: dict[Key, float] = {}
    for key, value in values.items():
        if isinstance(value, float) and not isinstance(value, bool):
            found[key] = value
    return found
