"""A map of each sheet: every cell's state at a glance, drawn as inline SVG, with the same told in words."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from html import escape

from doubler.check.finding import SEVERITIES
from doubler.check.record_content import Content, cells_of
from doubler.workbook.addresses import area_name, cell_name, column_letters
from doubler.workbook.evaluate import NotEvaluated
from doubler.workbook.model import Address, Sheet
from doubler.workbook.unit_verdicts import NOT_TRACED, rectangles

STATES: dict[str, str] = {
    "error": "finding: error",
    "warning": "finding: warning",
    "note": "finding: note",
    "follows": "wrong or doubtful because of a finding",
    "untraced": "formula not traced or not recalculated",
    "traced": "formula traced and recalculated",
    "input": "input (a constant)",
    "text": "text",
}
"""The states of a cell, in words; an earlier one hides a later one."""

CELL_WIDTH, CELL_HEIGHT = 26, 15
LEFT, TOP = 44, 18
ALIKE = 5
"""So many rows (or columns) alike one after another are drawn as the first two, a gap, and the last."""
MOST_ROWS, MOST_COLUMNS = 400, 120
MOST_RANGES = 60
"""Ranges of one state that are named in words; how many more there are is said."""


@dataclass(frozen=True, slots=True)
class SheetMap:
    """The map of one sheet.

    Attributes
    ----------
    sheet
        Its name.
    hidden
        Whether the sheet is hidden.
    svg
        The drawing.
    words
        For each state that occurs: its key, its name, how many cells, and which.
    """

    sheet: str
    hidden: bool
    svg: str
    words: list[tuple[str, str, int, str]]


def sheet_maps(content: Content) -> list[SheetMap]:
    """Draw the maps of all sheets that hold something."""
    book = content.report.book
    numbers: dict[tuple[str, Address], int] = {}
    states: dict[str, dict[Address, str]] = {
        sheet.name: _states(content, sheet) for sheet in book.workbook.sheets if sheet.cells
    }
    for entry in content.entries:
        for text in entry.finding.follows:
            for name, at in cells_of(book, text, entry.finding.sheet):
                if states.get(name, {}).get(at) in ("traced", "untraced"):
                    states[name][at] = "follows"
    for entry in reversed(content.entries):  # the worst last, so that it shows
        for name, at in cells_of(book, entry.finding.cell, entry.finding.sheet):
            if name in states:
                states[name][at] = entry.finding.severity
                numbers[name, at] = entry.number
    maps = []
    for sheet in book.workbook.sheets:
        if cells := states.get(sheet.name):
            own = {at: number for (name, at), number in numbers.items() if name == sheet.name}
            maps.append(
                SheetMap(sheet.name, sheet.visibility != "visible", _svg(sheet.name, cells, own), _words(cells))
            )
    return maps


def _states(content: Content, sheet: Sheet) -> dict[Address, str]:
    book = content.report.book
    states: dict[Address, str] = {}
    for at, cell in sheet.cells.items():
        if cell.formula is not None:
            judgement = book.tracing.verdict(sheet.name, at)
            lost = judgement is None or judgement.state == NOT_TRACED
            lost = lost or isinstance(book.value((sheet.name, at)), NotEvaluated)
            states[at] = "untraced" if lost else "traced"
        elif isinstance(cell.value, str):
            if cell.value.strip():
                states[at] = "text"
        elif cell.value is not None:
            states[at] = "input"
    return states


def _words(cells: dict[Address, str]) -> list[tuple[str, str, int, str]]:
    found = []
    for state, name in STATES.items():
        own = [at for at, what in cells.items() if what == state]
        if own:
            ranges = [area_name(area) for area in rectangles(own)]
            more = f" and {len(ranges) - MOST_RANGES} ranges more" if len(ranges) > MOST_RANGES else ""
            found.append((state, name, len(own), ", ".join(ranges[:MOST_RANGES]) + more))
    return found


def _squeezed(signatures: Sequence[tuple[object, ...]], first: int, most: int) -> list[int | None]:
    """Return the lines to draw, by number; None stands for a gap of lines alike."""
    lines: list[int | None] = []
    start = 0
    while start < len(signatures):
        end = start
        while end + 1 < len(signatures) and signatures[end + 1] == signatures[start]:
            end += 1
        count = end - start + 1
        if count > ALIKE or (count > 2 and not signatures[start]):
            lines += [first + start, first + start + 1, None, first + end]
        else:
            lines += range(first + start, first + end + 1)
        start = end + 1
    return [*lines[:most], None] if len(lines) > most else lines


def _lines(cells: dict[Address, str], numbers: dict[Address, int], axis: int, most: int) -> list[int | None]:
    """Return the rows (axis 0) or columns (axis 1) to draw."""
    by_line: dict[int, list[tuple[int, str, int]]] = {}
    for at, state in cells.items():
        by_line.setdefault(at[axis], []).append((at[1 - axis], state, numbers.get(at, 0)))
    last = max(by_line)
    signatures = [tuple(sorted(by_line.get(line, ()))) for line in range(1, last + 1)]
    return _squeezed(signatures, 1, most)


def _svg(name: str, cells: dict[Address, str], numbers: dict[Address, int]) -> str:
    rows = _lines(cells, numbers, 0, MOST_ROWS)
    columns = _lines(cells, numbers, 1, MOST_COLUMNS)
    width = LEFT + CELL_WIDTH * len(columns) + 1
    height = TOP + CELL_HEIGHT * len(rows) + 1
    counts = {state: sum(what == state for what in cells.values()) for state in STATES}
    told = "; ".join(f"{counts[state]} {STATES[state]}" for state in STATES if counts[state])
    pieces = [
        (
            f'<svg class="map" viewBox="0 0 {width} {height}" width="{width}" height="{height}" role="group" '
            f'aria-label="Map of the sheet {escape(name, quote=True)}: {escape(told, quote=True)}">'
        )
    ]
    pieces += _axes(rows, columns, width, height)
    paths: dict[str, list[str]] = {}
    links: list[str] = []
    for i, row in enumerate(rows):
        if row is None:
            continue
        y = TOP + CELL_HEIGHT * i
        for j, column in enumerate(columns):
            state = cells.get((row, column)) if column is not None else None
            if state is None or column is None:
                continue
            x = LEFT + CELL_WIDTH * j
            paths.setdefault(state, []).append(f"M{x} {y}h{CELL_WIDTH}v{CELL_HEIGHT}h-{CELL_WIDTH}z")
            if (number := numbers.get((row, column))) is not None:
                links.append(_link(number, state, cell_name(row, column), x, y))
    for state in reversed(STATES):
        if state in paths:
            pieces.append(f'<path class="s-{state}" d="{"".join(paths[state])}"/>')
            if state in ("untraced", "follows"):
                pieces.append(f'<path class="h-{state}" d="{"".join(paths[state])}"/>')
    pieces += links
    pieces.append("</svg>")
    return "".join(pieces)


def _axes(rows: list[int | None], columns: list[int | None], width: int, height: int) -> list[str]:
    across = "".join(f"M{LEFT} {TOP + CELL_HEIGHT * i}H{width - 1}" for i in range(len(rows) + 1))
    down = "".join(f"M{LEFT + CELL_WIDTH * j} {TOP}V{height - 1}" for j in range(len(columns) + 1))
    pieces = [f'<path class="grid" d="{across}{down}"/>', '<g class="axis" aria-hidden="true">']
    for j, column in enumerate(columns):
        text = "…" if column is None else column_letters(column)
        pieces.append(f'<text x="{LEFT + CELL_WIDTH * (j + 0.5)}" y="{TOP - 6}" text-anchor="middle">{text}</text>')
    for i, row in enumerate(rows):
        text = "⋮" if row is None else str(row)
        y = TOP + CELL_HEIGHT * (i + 1) - 4
        pieces.append(f'<text x="{LEFT - 6}" y="{y}" text-anchor="end">{text}</text>')
    pieces.append("</g>")
    return pieces


def _link(number: int, state: str, cell: str, x: int, y: int) -> str:
    word = state if state in SEVERITIES else "finding"
    return (
        f'<a href="#f{number}" class="l-{state}" aria-label="{cell}: {word}, finding {number}">'
        f"<title>{cell}: {word}, finding {number}</title>"
        f'<rect x="{x}" y="{y}" width="{CELL_WIDTH}" height="{CELL_HEIGHT}"/>'
        f'<text x="{x + CELL_WIDTH / 2}" y="{y + CELL_HEIGHT - 4}" text-anchor="middle">{number}</text></a>'
    )
