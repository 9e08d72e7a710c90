"""Telling an empty cell, and an argument left out, from a true zero, inside LibreOffice.

Calc hands over 0.0 for a single empty cell (and, to a Basic function, for an argument left out in the middle). Where
a bare zero arrives, the formulas of the open documents say what stands there. Standard library and Python 3.8 only, as
`calc_client`; what touches a document is behind `Sheets`.
"""

from __future__ import annotations

import re
import time
from abc import ABC, abstractmethod
from typing import Any, Dict, Iterable, Iterator, List, Sequence, Set, Tuple  # noqa: UP035 - Python 3.8

ZERO, EMPTY, OMITTED, UNKNOWN = "zero", "empty", "omitted", "unknown"

FRESH_SECONDS = 0.03
"""How long the formulas read are trusted while a document may be changed without that being told."""
TRUSTED_SECONDS = 5.0
"""How long they are trusted where every change is told, which makes them be read anew."""
COMPARED_CELLS = 16
"""Up to this many cells a range is compared with what stands in the sheet."""
KEPT_FORMULAS = 200_000
"""Formula texts whose calls are kept; then the memory is begun anew."""

_REFERENCE = re.compile(r"^(?:\$?('(?:[^']|'')+'|[^\s'.:!;()+*/&=<>^-]+)\.)?\$?([A-Z]{1,3})\$?([0-9]+)$")
_RANGE_END = re.compile(r"^(?:\$?('(?:[^']|'')+'|[^\s'.:!;()+*/&=<>^-]+)\.)?\$?([A-Z]{1,3})\$?([0-9]*)$")
_NUMBER = re.compile(r"^[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:E[+-]?[0-9]+)?$", re.IGNORECASE)

_TOKENS = re.compile(r'"(?:[^"]|"")*"?|\'(?:[^\']|\'\')*\'?|[\w.]+|.', re.DOTALL)
"""Quoted texts and names, words, and single characters of a formula."""

UNREAD = object()
_NOTHING: Set[str] = set()  # noqa: UP006
"""Stands for a value that cannot be told without computing it: an expression, a range, an error."""

Reference = Tuple[str, Tuple[int, int]]  # noqa: UP006
"""Sheet (empty for the formula's own), and column and row of one cell, counted from 0."""
Written = Tuple[Any, Sequence[Any], List[str]]  # noqa: UP006
"""A call as written: its sheet, its arguments (see `_argument`), and what stands there."""
Which = Tuple[str, int, str]  # noqa: UP006
"""A function, the place of an argument, and what may stand there beside a zero (empty for all its calls)."""
Table = Tuple[Dict[Tuple[Any, ...], Set[str]], List[Tuple[List[Any], str]]]  # noqa: UP006
"""Calls by the values of their arguments, and calls of which some are not known."""


class Sheets(ABC):
    """What is asked of the open documents; the component gives one that does it over UNO."""

    @abstractmethod
    def formulas(self) -> Iterable[Tuple[Any, str]]:  # noqa: UP006
        """Give (sheet, formula text) of every formula cell of the documents that may have made the call."""

    @abstractmethod
    def state(self) -> Tuple[Any, bool]:  # noqa: UP006
        """Return what tells one set of open documents from another, and whether every change of them is told."""

    @abstractmethod
    def value(self, sheet: Any, reference: Reference) -> Tuple[Any, bool]:  # noqa: UP006
        """Give one cell's value and whether a formula gives it.

        The value is a float, a text, None where the cell is empty, `UNREAD` where it shows an error.
        """

    @abstractmethod
    def is_empty(self, sheet: Any, reference: Reference) -> bool:
        """Say whether one cell is empty; nothing may be computed for that."""


def calls_in(formula: str, names: Set[str]) -> Iterator[Tuple[str, List[str]]]:  # noqa: UP006
    """Give (name, argument texts) of every call of one of `names` in a formula in Calc's own grammar."""
    stack: List[Tuple[str, int, List[str]]] = []  # noqa: UP006
    word, braces = "", 0
    # An array formula is told in braces.
    for token in _TOKENS.finditer(formula, 2 if formula.startswith("{=") else 0):
        text, position = token.group(), token.start()
        mark = text[0]
        if mark == "(":
            stack.append((word.rsplit(".", 1)[-1].upper(), position + 1, []))
        elif mark in ";)" and stack and not braces:
            name, start, parts = stack.pop()
            parts.append(formula[start:position].strip())
            if mark == ";":
                stack.append((name, position + 1, parts))
            elif name in names:
                yield name, parts
        elif mark in "{}":
            braces += 1 if mark == "{" else -1
        word = text if mark.isalnum() or mark in "._" else ""


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
        self._calls: Dict[str, List[Written]] = {}  # noqa: UP006
        self._doubtful: Dict[Tuple[str, int, str], List[Written]] = {}  # noqa: UP006
        self._tables: Dict[Which, Table] = {}  # noqa: UP006
        self._computed = False
        self._parsed: Dict[str, Tuple[Tuple[str, Tuple[Any, ...]], ...]] = {}  # noqa: UP006
        self._state: Any = None
        self._read_at = -1.0
        self._took = 0.0
        self._reading = False

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
        if not self._reading:
            state, told = sheets.state()
            trusted = TRUSTED_SECONDS if told and not self._computed else max(FRESH_SECONDS, 2 * self._took)
            if self._read_at < 0 or state != self._state or time.monotonic() - self._read_at > trusted:
                self._read(sheets, state)
        if not self._calls.get(name):
            return UNKNOWN
        doubtful = self._doubtful.get((name, index, blank))
        if not doubtful:
            return ZERO
        if self._reading:
            # A cell that is only now computed, because its value was asked for here: nothing more may be computed.
            return UNKNOWN
        key = _key([_plain(given) for given in arguments])
        if not self._found(sheets, (name, index, blank), key, doubtful) and not self._computed:
            return ZERO
        found = self._found(sheets, (name, index, ""), key, self._calls[name]) & {ZERO, blank}
        return found.pop() if len(found) == 1 else UNKNOWN

    def _read(self, sheets: Sheets, state: Any) -> None:
        start = time.monotonic()
        self._calls, self._doubtful, self._tables, self._computed = {}, {}, {}, False
        for sheet, formula in sheets.formulas():
            for name, given in self._calls_of(formula):
                kinds = [_kind(sheets, sheet, argument) for argument in given]
                written = (sheet, given, kinds)
                self._calls.setdefault(name, []).append(written)
                for index, kind in enumerate(kinds):
                    if kind != ZERO:
                        self._doubtful.setdefault((name, index, kind), []).append(written)
        self._state = state
        self._read_at = time.monotonic()
        self._took = self._read_at - start

    def _calls_of(self, formula: str) -> Tuple[Tuple[str, Tuple[Any, ...]], ...]:  # noqa: UP006
        found = self._parsed.get(formula)
        if found is None:
            if len(self._parsed) >= KEPT_FORMULAS:
                self._parsed.clear()
            calls = calls_in(formula, self.names)
            found = tuple((name, tuple(_argument(text) for text in texts)) for name, texts in calls)
            self._parsed[formula] = found
        return found

    def _found(self, sheets: Sheets, which: Which, key: Tuple[Any, ...], calls: Sequence[Written]) -> Set[str]:  # noqa: UP006
        """Return what stands in that place in those of the calls that could have had these arguments."""
        table = self._tables.get(which)
        if table is None:
            start = time.monotonic()
            self._reading = True
            try:
                table = self._tables[which] = self._table(sheets, calls, which[1])
            finally:
                self._reading = False
            self._took += time.monotonic() - start
        exact, loose = table
        return exact.get(key, _NOTHING) | {kind for expected, kind in loose if _may_match(expected, key)}

    def _table(self, sheets: Sheets, calls: Iterable[Written], index: int) -> Table:
        """Sort calls by the values that their arguments have; those with an unread argument are kept aside."""
        exact: Dict[Tuple[Any, ...], Set[str]] = {}  # noqa: UP006
        loose: List[Tuple[List[Any], str]] = []  # noqa: UP006
        for sheet, given, kinds in calls:
            expected = []
            for argument in given:
                value, computed = _expected(sheets, sheet, argument)
                expected.append(value)
                self._computed = self._computed or computed
            kind = kinds[index] if index < len(kinds) else OMITTED
            if any(value is UNREAD for value in expected):
                loose.append((expected, kind))
            else:
                exact.setdefault(_key(expected), set()).add(kind)
        return exact, loose


def _key(values: Sequence[Any]) -> Tuple[Any, ...]:  # noqa: UP006
    """Return the values for comparing: nothing, empty text and zero are one; those at the end are left away."""
    key = [None if value in ("", 0.0) else value for value in values]
    while key and key[-1] is None:
        key.pop()
    return tuple(key)


def _plain(given: Any) -> Any:
    """Return an argument as Calc handed it over for comparing; a large range is not compared."""
    while isinstance(given, (tuple, list)) and len(given) == 1 and not isinstance(given[0], tuple):
        given = given[0]
    if not isinstance(given, (tuple, list)):
        return given
    if not given or not isinstance(given[0], tuple) or len(given) * len(given[0]) > COMPARED_CELLS:
        return UNREAD
    return given[0][0] if len(given) == 1 and len(given[0]) == 1 else tuple(given)


def _argument(text: str) -> Any:
    """Return a written argument: the cell to which it refers, a small range, its value in a list; None for others."""
    reference = _REFERENCE.match(text)
    if reference:
        return _cell(reference)
    known, value = literal(text)
    if known:
        return [value]
    found = range_of(text)
    if found is None:
        return None
    first, _, last = found[1].partition(":")
    if not first[-1].isdigit() or not last[-1:].isdigit():
        return None
    (left, top), (right, bottom) = cell_address(first), cell_address(last)
    if not 1 < (right - left + 1) * (bottom - top + 1) <= COMPARED_CELLS:
        return None
    return found[0], range(left, right + 1), range(top, bottom + 1)


def _expected(sheets: Sheets, sheet: Any, argument: Any) -> Tuple[Any, bool]:  # noqa: UP006
    """Return the value that an argument has, and whether a formula gives it."""
    if argument is None:
        return UNREAD, False
    if isinstance(argument, list):
        return argument[0], False
    if len(argument) == 2:
        return sheets.value(sheet, argument)
    name, columns, rows = argument
    found = [[sheets.value(sheet, (name, (column, row))) for column in columns] for row in rows]
    if any(value is UNREAD for line in found for value, _ in line):
        return UNREAD, True
    block = tuple(tuple("" if value is None else value for value, _ in line) for line in found)
    return block, any(computed for line in found for _, computed in line)


def _kind(sheets: Sheets, sheet: Any, argument: Any) -> str:
    if isinstance(argument, tuple) and len(argument) == 2:
        return EMPTY if sheets.is_empty(sheet, argument) else ZERO
    return OMITTED if argument == [None] else ZERO


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
    return _sheet_name(reference.group(1) or ""), cell_address(reference.group(2) + reference.group(3))


def cell_address(text: str) -> Tuple[int, int]:  # noqa: UP006
    """Return column and row, counted from 0, of an address such as ``C5``."""
    column = at = 0
    while text[at].isalpha():
        column = column * 26 + ord(text[at]) - 64
        at += 1
    return column - 1, int(text[at:]) - 1


def _sheet_name(text: str) -> str:
    return text[1:-1].replace("''", "'") if text.startswith("'") else text


def _may_match(expected: Sequence[Any], key: Sequence[Any]) -> bool:
    """Return whether a call could have had these arguments; what was not read counts as yes."""
    for index in range(max(len(expected), len(key))):
        one = expected[index] if index < len(expected) else None
        other = key[index] if index < len(key) else None
        if one is not UNREAD and other is not UNREAD and _key([one]) != _key([other]):
            return False
    return True
