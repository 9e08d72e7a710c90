"""What the open spreadsheets hold, read in few calls: formulas, which cells are empty, what stands in the others.

Standard library and Python 3.8 only; it runs inside LibreOffice and is given LibreOffice's objects.
"""

from __future__ import annotations

import time
from bisect import bisect_right
from typing import Any, Callable, Dict, FrozenSet, Iterator, List, Optional, Tuple  # noqa: UP035 - Python 3.8

from doubler.hosts.calc_blanks import UNREAD, Reference, Sheets, literal, range_of
from doubler.hosts.calc_client import error_text

CONSTANTS, FORMULA_CELLS = 1 + 2 + 4, 16
"""Of com.sun.star.sheet.CellFlags: numbers, dates and texts; formulas."""
FAILED = 4
"""FormulaResult.ERROR."""
TEXT_RESULT = 2
"""FormulaResult.STRING."""


SEEN_SECONDS = 0.002
"""How long the list of open documents is taken for right; to open another takes longer."""
_seen: List[Tuple[float, List[Any], FrozenSet[str]]] = [(-1.0, [], frozenset())]  # noqa: UP006


class Held:
    """What one sheet held at the moment of reading.

    Parameters
    ----------
    sheet
        LibreOffice's sheet.
    """

    def __init__(self, sheet: Any) -> None:
        self.sheet = sheet
        self._filled: Dict[int, Tuple[List[int], List[int]]] = {}  # noqa: UP006
        self._constants: Optional[Dict[Tuple[int, int], Any]] = None  # noqa: UP006, UP045
        spans: Dict[int, List[Tuple[int, int]]] = {}  # noqa: UP006
        for area in sheet.queryContentCells(CONSTANTS + FORMULA_CELLS).getRangeAddresses():
            for column in range(area.StartColumn, area.EndColumn + 1):
                spans.setdefault(column, []).append((area.StartRow, area.EndRow))
        for column, found in spans.items():
            found.sort()
            self._filled[column] = ([first for first, _ in found], [last for _, last in found])

    def is_empty(self, column: int, row: int) -> bool:
        """Say whether a cell, counted from 0, is empty."""
        starts, ends = self._filled.get(column, ((), ()))
        at = bisect_right(starts, row) - 1
        return at < 0 or row > ends[at]

    def value(self, column: int, row: int) -> Tuple[Any, bool]:  # noqa: UP006
        """Give a cell's value, and whether a formula gives it; a formula is asked, which may compute it."""
        if self.is_empty(column, row):
            return None, False
        if self._constants is None:
            self._constants = dict(self._read_constants())
        if (column, row) in self._constants:
            return self._constants[column, row], False
        cell = self.sheet.getCellByPosition(column, row)
        if cell.getError():
            return UNREAD, True
        return (cell.getString() if cell.FormulaResultType2 == TEXT_RESULT else cell.getValue()), True

    def _read_constants(self) -> Iterator[Tuple[Tuple[int, int], Any]]:  # noqa: UP006
        for area in self.sheet.queryContentCells(CONSTANTS).getRangeAddresses():
            block = self.sheet.getCellRangeByPosition(area.StartColumn, area.StartRow, area.EndColumn, area.EndRow)
            for row, line in enumerate(block.getDataArray(), area.StartRow):
                for column, value in enumerate(line, area.StartColumn):
                    yield (column, row), value


class Place:
    """A sheet of a document, and what is known of that document's sheets."""

    def __init__(self, document: Any, sheet: Any, held: Dict[str, Held]) -> None:  # noqa: UP006
        self.document = document
        self.sheet = sheet
        self._name = sheet.getName()
        self._held = held

    def held(self, name: str) -> Held:
        """Give what a sheet holds, the own one where there is no name."""
        found = self._held.get(name or self._name)
        if found is None:
            sheet = self.document.getSheets().getByName(name) if name else self.sheet
            found = self._held[name or self._name] = Held(sheet)
        return found


class Documents(Sheets):
    """All open spreadsheets.

    Parameters
    ----------
    context
        LibreOffice's component context.
    caller
        The document that made the call, None where it is not known.
    listen : callable
        Called with each document that is read, so that a change of it is told.
    """

    def __init__(self, context: Any, caller: Any, listen: Callable[[Any], None]) -> None:
        self.context = context
        self.caller = caller
        self.listen = listen

    def formulas(self) -> Iterator[Tuple[Any, str]]:  # noqa: UP006
        """Give the place and the text of every formula."""
        for document in self.documents():
            self.listen(document)
            held: Dict[str, Held] = {}  # noqa: UP006
            for sheet in document.getSheets():
                place = Place(document, sheet, held)
                for block in sheet.queryContentCells(FORMULA_CELLS):
                    for row in block.getFormulaArray():
                        for formula in row:
                            yield place, formula

    def documents(self) -> List[Any]:  # noqa: UP006
        """Return the open spreadsheets, that which made the call first."""
        known = [self.caller] if self.caller is not None else []
        desktop = self.context.ServiceManager.createInstanceWithContext("com.sun.star.frame.Desktop", self.context)
        components = desktop.getComponents().createEnumeration()
        while components.hasMoreElements():
            document = components.nextElement()
            if hasattr(document, "getSheets") and document not in known:
                known.append(document)
        return known

    def state(self) -> Tuple[Any, bool]:  # noqa: UP006
        """Return which spreadsheets are open, and whether every change of them is told at once."""
        now = time.monotonic()
        caller = "" if self.caller is None else self.caller.RuntimeUID
        at, known, ids = _seen[0]
        if now - at > SEEN_SECONDS or (caller and caller not in ids):
            known = self.documents()
            ids = frozenset(document.RuntimeUID for document in known)
            _seen[0] = (now, known, ids)
        try:
            changing = known if self.caller is None else (self.caller,)
            return ids, not any(document.hasControllersLocked() for document in changing)
        except Exception:  # one was closed meanwhile
            _seen[0] = (-1.0, [], frozenset())
            return None, False

    def is_empty(self, sheet: Any, reference: Reference) -> bool:
        """Say whether a cell is empty."""
        return bool(sheet.held(reference[0]).is_empty(*reference[1]))

    def value(self, sheet: Any, reference: Reference) -> Tuple[Any, bool]:  # noqa: UP006
        """Give a cell's value, and whether a formula gives it."""
        found: Tuple[Any, bool] = sheet.held(reference[0]).value(*reference[1])  # noqa: UP006
        return found

    def block(self, document: Any, own: Any, text: str) -> Any:
        """Give what an argument's text stands for: a value, or rows; LookupError where it is an expression."""
        known, value = literal(text)
        if known:
            return value
        found = range_of(text)
        if found is None:
            raise LookupError(text)
        sheet = document.getSheets().getByName(found[0]) if found[0] else own
        area = sheet.getCellRangeByName(found[1])
        used = area.queryContentCells(CONSTANTS + FORMULA_CELLS)
        rows = [list(row) for row in area.getDataArray()] if used.getCount() else [[""]]
        corner = area.getRangeAddress()
        for failed in area.queryFormulaCells(FAILED):
            address = failed.getRangeAddress()
            for r in range(address.StartRow, address.EndRow + 1):
                for c in range(address.StartColumn, address.EndColumn + 1):
                    code = sheet.getCellByPosition(c, r).getError()
                    rows[r - corner.StartRow][c - corner.StartColumn] = {"error": error_text(code)}
        return rows
