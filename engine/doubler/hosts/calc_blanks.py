"""Telling an empty cell, and an argument left out, from a true zero, inside LibreOffice.

Calc hands over 0.0 for a single empty cell (and, to a Basic function, for an argument left out in the middle). Where
a bare zero arrives, the formulas of the open documents say what stands there. Standard library and Python 3.8 only, as
`calc_client`; what touches a document is behind `Sheets`.
"""

from __future__ import annotations

import re
import time
from typing import Any, Dict, Iterable, Iterator, List, Sequence, Set, Tuple  # noqa: UP035 - Python 3.8

ZERO, EMPTY, OMITTED, UNKNOWN = "zero", "empty", "omitted", "unknown"

FRESH_SECONDS = 0.03
"""How long the formulas read are trusted without reading them anew, within one recalculation."""

_REFERENCE = re.compile(r"^(?:\$?('(?:[^']|'')+'|[^\s'.:!;()+*/&=<>^-]+)\.)?\$?([A-Z]{1,3})\$?([0-9]+)$")
_RANGE_END = re.compile(r"^(?:\$?('(?:[^']|'')+'|[^\s'.:!;()+*/&=<>^-]+)\.)?\$?([A-Z]{1,3})\$?([0-9]*)$")
_NUMBER = re.compile(r"^[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:E[+-]?[0-9]+)?$", re.IGNORECASE)

Reference = tuple[str, str]
"""Sheet (empty for the formula's own) and address of one cell."""


class Sheets:
    """What is asked of the open documents; the component gives one that does it over UNO."""

    def formulas(self) -> Iterable[Tuple[Any, str]]:  # noqa: UP006
        """Give (sheet, formula text) of every formula cell of the documents that may have made the call."""
        raise NotImplementedError

    def value(self, sheet: Any, reference: Reference) -> Any:
        """Give one cell's value: float, text, or None where it is empty."""
        raise NotImplementedError


def calls_in(formula: str, names: Set[str]) -> Iterator[Tuple[str, List[str]]]:  # noqa: UP006
    """Give (name, argument texts) of every call of one of `names` in a formula in Calc's own grammar."""
    stack: List[Tuple[str, int, List[str]]] = []  # noqa: UP006
    word, braces = "", 0
    position = 2 if formula.startswith("{=") else 0  # an array formula is told in braces
    while position < len(formula):
        char = formula[position]
        if char in "\"'":
            position = _after_quoted(formula, position)
            word = ""
            continue
        if char == "(":
            stack.append((word.rsplit(".", 1)[-1].upper(), position + 1, []))
            word = ""
        elif char in ";)" and stack and not braces:
            name, start, parts = stack.pop()
            parts.append(formula[start:position].strip())
            if char == ";":
                stack.append((name, position + 1, parts))
            elif name in names:
                yield name, parts
            word = ""
        else:
            braces += (char == "{") - (char == "}")
            word = word + char if char.isalnum() or char in "._" else ""
        position += 1


def _after_quoted(formula: str, position: int) -> int:
    """Return the place after a quoted text, in which a doubled quote stands for one."""
    quote = formula[position]
    position += 1
    while position < len(formula):
        if formula[position] == quote:
            if formula[position + 1 : position + 2] != quote:
                return position + 1
            position += 1
        position += 1
    return position


class Blanks:
    """Decides what a zero is; the formulas read are kept for the moment of one recalculation.

    Parameters
    ----------
    names : iterable of str
        The worksheet functions.
    """

    def __init__(self, names: Iterable[str]) -> None:
        self.names = set(names)
        self._calls: Dict[str, List[Tuple[Any, List[str]]]] = {}  # noqa: UP006
        self._doubtful: Dict[str, Set[int]] = {}  # noqa: UP006
        self._read_at = -1.0
        self._took = 0.0

    def forget(self) -> None:
        """Read the formulas anew at the next zero: a document has changed."""
        self._read_at = -1.0

    def kind(self, sheets: Sheets, name: str, arguments: Sequence[Any], index: int, blank: str) -> str:
        """Say what the zero at `index` of this call is.

        Parameters
        ----------
        sheets : Sheets
        name : str
        arguments : sequence
            As Calc handed them over.
        index : int
            Whose value is 0.0.
        blank : str
            What it may be beside a true zero: `EMPTY` in a call from Calc, `OMITTED` in one from Basic.

        Returns
        -------
        str
            `ZERO`, `EMPTY`, `OMITTED`, or `UNKNOWN` where no formula, or formulas that differ in this, could have
            made the call.
        """
        now = time.monotonic()
        if self._read_at < 0 or now - self._read_at > max(FRESH_SECONDS, 2 * self._took):
            self._read(sheets)
        calls = self._calls.get(name, ())
        if not calls:
            return UNKNOWN
        if index not in self._doubtful[name]:
            return ZERO
        found = {
            _kind(sheets, sheet, texts[index] if index < len(texts) else "")
            for sheet, texts in calls
            if _may_match(sheets, sheet, texts, arguments)
        } & {ZERO, blank}
        return found.pop() if len(found) == 1 else UNKNOWN

    def _read(self, sheets: Sheets) -> None:
        start = time.monotonic()
        self._calls, self._doubtful = {}, {}
        for sheet, formula in sheets.formulas():
            for name, texts in calls_in(formula, self.names):
                self._calls.setdefault(name, []).append((sheet, texts))
                doubtful = self._doubtful.setdefault(name, set())
                doubtful.update(i for i, text in enumerate(texts) if _kind(sheets, sheet, text) != ZERO)
        self._read_at = time.monotonic()
        self._took = self._read_at - start


def _kind(sheets: Sheets, sheet: Any, text: str) -> str:
    if not text:
        return OMITTED
    reference = _REFERENCE.match(text)
    if reference and sheets.value(sheet, _cell(reference)) is None:
        return EMPTY
    return ZERO


def literal(text: str) -> Tuple[bool, Any]:  # noqa: UP006
    """Return (True, value) for a number, a text or an argument left out, (False, None) for anything else."""
    if not text:
        return True, None
    if _NUMBER.match(text):
        return True, float(text)
    if text[0] == '"' and _after_quoted(text, 0) == len(text):
        return True, text[1:-1].replace('""', '"')
    return False, None


def range_of(text: str) -> Any:
    """Return (sheet, address) of a reference to a cell, a range or whole columns, or None."""
    first, colon, last = text.partition(":")
    begin = _RANGE_END.match(first)
    end = _RANGE_END.match(last.lstrip(".")) if colon else begin
    if begin is None or end is None or (colon and end.group(1)) or (not colon and not begin.group(3)):
        return None
    sheet = _sheet_name(begin.group(1) or "")
    address = begin.group(2) + begin.group(3)
    return sheet, f"{address}:{end.group(2)}{end.group(3)}" if colon else address


def _cell(reference: re.Match[str]) -> Reference:
    return _sheet_name(reference.group(1) or ""), reference.group(2) + reference.group(3)


def _sheet_name(text: str) -> str:
    return text[1:-1].replace("''", "'") if text.startswith("'") else text


def _may_match(sheets: Sheets, sheet: Any, texts: Sequence[str], arguments: Sequence[Any]) -> bool:
    """Return whether a call written so could have had these arguments; what cannot be told counts as yes."""
    for index in range(max(len(texts), len(arguments))):
        text = texts[index] if index < len(texts) else ""
        given = arguments[index] if index < len(arguments) else None
        while isinstance(given, (tuple, list)) and len(given) == 1:
            given = given[0]
        if isinstance(given, (tuple, list)):
            if _REFERENCE.match(text) or _NUMBER.match(text):
                return False
            continue
        reference = _REFERENCE.match(text)
        if not text:
            expected: Any = None
        elif reference:
            expected = sheets.value(sheet, _cell(reference))
        else:
            known, expected = literal(text)
            if not known:
                continue
        blank = given in (None, "", 0.0)
        if blank and expected in (None, "", 0.0):
            continue
        if given != expected:
            return False
    return True
