"""Findings about structure: pasted numbers, broken patterns, circles, links, hidden and unused inputs."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator

from doubler.check.fills import Fills, Gap, walk
from doubler.check.finding import Finding
from doubler.workbook.addresses import cell_name
from doubler.workbook.evaluate import NotEvaluated
from doubler.workbook.examined import Examined, Key, cell_name_of, shown
from doubler.workbook.model import Address, Sheet
from doubler.workbook.roles import is_total
from doubler.workbook.syntax import Call, ExternalRef

_REMARK = re.compile(
    r"\b(?:override|overridden|over-?ridden|measured|test(?:ed)?|per (?:drawing|report|test)|manual(?:ly)?|by "
    r"hand|as built|"
    r""
    r"assumed|agreed|conservative|estimate[d]?|vendor|given|from (?:fem|fea|test|report|drawing)|ref\.?)\b",
    re.IGNORECASE,
)


def filled_lines(book: Examined) -> Iterator[Finding]:
    """Find constants and odd formulas in lines of like formulas."""
    fills = Fills(book)
    found: dict[Key, Finding] = {}
    for gap in fills.gaps():
        for address in gap.cells:
            key = (gap.sheet, address)
            finding = _judge(book, fills, gap, address)
            if finding is not None and (key not in found or found[key].severity != "error"):
                found[key] = finding
    yield from found.values()


def _judge(book: Examined, fills: Fills, gap: Gap, address: Address) -> Finding | None:
    sheet = book.workbook.sheet(gap.sheet)
    assert sheet is not None
    cell = sheet.cells[address]
    line = len(gap.before) + len(gap.after)
    if cell.formula is None and _another_quantity(book, gap, address):
        return None
    if cell.formula is None:
        if gap.inside:
            sure = line >= 2 and len(gap.cells) < line
        else:
            due = 1 if line > 2 else 2
            sure = fills.same_kind_of_row(gap, due) and not (not gap.before and fills.reads_back(gap))
        return _pasted(book, fills, gap, address) if sure else None
    if _sums_up(book, fills, gap, address):
        return None
    if not gap.inside:
        due = 0 if line > 2 else 2
        if not gap.before or not _anchor_differs(fills, gap, address) or not fills.same_kind_of_row(gap, due):
            return None
    elif (
        len(gap.cells) > 1 or not _stands_out(fills, gap, address) or (line < 3 and not fills.same_kind_of_row(gap, 1))
    ):
        return None
    return _break(book, fills, gap, address)


def _stands_out(fills: Fills, gap: Gap, address: Address) -> bool:
    """Return whether an odd formula is not just the like of its neighbours in the other direction."""
    trees = fills.trees[gap.sheet]
    row, column = address
    sides = ((row, column - 1), (row, column + 1)) if gap.down else ((row - 1, column), (row + 1, column))
    return not any(trees.get(side) is trees[address] for side in sides)


def _another_quantity(book: Examined, gap: Gap, address: Address) -> bool:
    """Return whether a constant is declared as another quantity than its neighbours: it is no cell of their line."""
    own = book.declarations.unit(gap.sheet, address)
    sides = [book.declarations.unit(gap.sheet, side[0]) for side in (gap.before, gap.after) if side]
    if own is None or own.weak or None in sides:
        return False
    return all(side is not None and side.unit.dimension != own.unit.dimension for side in sides)


def _sums_up(book: Examined, fills: Fills, gap: Gap, address: Address) -> bool:
    """Return whether a cell is a subtotal among the lines that it parts: its label says so, or its row holds sums."""
    tree = fills.trees[gap.sheet][address]
    if not (isinstance(tree, Call) and tree.name in ("SUM", "SUBTOTAL", "MAX", "MIN", "AVERAGE")):
        return False
    return is_total(book.label((gap.sheet, address)).text)


def _anchor_differs(fills: Fills, gap: Gap, address: Address) -> bool:
    """Return whether an odd formula is the line's formula but for where it points."""
    trees = fills.trees[gap.sheet]
    own, model = list(walk(trees[address])), list(walk(trees[gap.model]))
    return len(own) == len(model) and all(type(a) is type(b) for a, b in zip(own, model, strict=True))


def _documented(book: Examined, gap: Gap, address: Address) -> bool:
    sheet = book.workbook.sheet(gap.sheet)
    assert sheet is not None
    if sheet.comments.get(address):
        return True
    row, column = address
    return any(
        cell.formula is None and isinstance(cell.value, str) and _REMARK.search(cell.value)
        for (r, c), cell in sheet.cells.items()
        if r == row and c > column
    )


def _pasted(book: Examined, fills: Fills, gap: Gap, address: Address) -> Finding:
    key = (gap.sheet, address)
    formula = fills.formula_for(gap, address)
    value = fills.value_with(key, formula)
    number = book.stored(key)
    differs = not (isinstance(value, float) and isinstance(number, float) and math.isclose(value, number, rel_tol=1e-6))
    documented = _documented(book, gap, address)
    given = "" if isinstance(value, NotEvaluated) else f", which gives {shown(value)}"
    severity = "note" if documented else "error" if differs and gap.inside else "warning"
    if documented:
        message = (
            f"The constant {shown(number)} stands among formulas and a remark says so; "
            f"the line's formula is ={formula}{given}."
        )
    elif differs:
        message = (
            f"The constant {shown(number)} stands where its neighbours hold a formula; write ={formula}{given}, "
            "or say beside it why it differs."
        )
    else:
        message = (
            f"The constant {shown(number)} is today's result of its neighbours' formula and will not follow a change; "
            f"write ={formula}."
        )
    neighbours = [*gap.before[:1], *gap.after[:1]]
    return Finding(
        gap.sheet,
        cell_name(*address),
        "pasted-number",
        severity,
        message,
        shown(number),
        f"={formula}",
        tuple(cell_name_of((gap.sheet, a)) for a in neighbours),
    )


def _break(book: Examined, fills: Fills, gap: Gap, address: Address) -> Finding | None:
    key = (gap.sheet, address)
    sheet = book.workbook.sheet(gap.sheet)
    assert sheet is not None
    own = sheet.cells[address].formula or ""
    formula = fills.formula_for(gap, address)
    value, mended = book.value(key), fills.value_with(key, formula)
    same = isinstance(value, float) and isinstance(mended, float) and math.isclose(value, mended, rel_tol=1e-9)
    documented = _documented(book, gap, address)
    severity = "note" if documented or same else "warning"
    effect = (
        "both give the same today"
        if same
        else f"it gives {shown(value)} and theirs would give {shown(mended)}"
        if not isinstance(value, NotEvaluated) and not isinstance(mended, NotEvaluated)
        else "the two cannot be compared"
    )
    return Finding(
        gap.sheet,
        cell_name(*address),
        "pattern-break",
        severity,
        f"The formula ={own} is unlike its neighbours' ({effect}); write ={formula}, or say beside it why it differs.",
        f"={own}",
        f"={formula}",
        tuple(cell_name_of((gap.sheet, a)) for a in (*gap.before[:1], *gap.after[:1])),
    )


def circles(book: Examined) -> Iterator[Finding]:
    """Find circular references, each once."""
    for ring in book.graph.cycles:
        first = ring[0]
        names = [cell_name_of((sheet, address)) for sheet, address in ring]
        iterative = (
            " The workbook asks for iteration, whose end depends on where it begins." if book.workbook.iterative else ""
        )
        yield Finding(
            first[0],
            cell_name(*first[1]),
            "circular",
            "error",
            f"The formula reads its own result by way of {', '.join(names[:6])}{', …' if len(names) > 6 else ''}; "
            f"break the circle.{iterative}",
            "",
            "",
            tuple(names[1:]),
        )


def external_links(book: Examined) -> Iterator[Finding]:
    """Find formulas that read other workbooks, once a group of like formulas."""
    for group in book.graph.groups:
        tree = group.tree
        if tree is None:
            continue
        outside = next((node for node in walk(tree) if isinstance(node, ExternalRef)), None)
        if outside is None:
            continue
        run = group.run
        sheet = book.workbook.sheets[run.sheet].name
        last = run.cell(run.count - 1)
        place = cell_name(run.row, run.column) + (f":{cell_name(*last)}" if run.count > 1 else "")
        yield Finding(
            sheet,
            place,
            "external-link",
            "warning",
            f"The formula reads {outside.text} in another workbook, which this check does not see; bring the value "
            "in as an input "
            "with its source beside it.",
            outside.text,
        )


def hidden_inputs(book: Examined) -> Iterator[Finding]:
    """Find hidden cells that hold numbers and feed visible results, one finding a block of hidden rows or columns."""
    sheets = book.workbook.sheets
    if not any(sheet.visibility != "visible" or sheet.hidden_rows or sheet.hidden_columns for sheet in sheets):
        return
    hidden = {sheet.name: _Hidden(sheet) for sheet in sheets}
    places: dict[tuple[str, str], list[Key]] = {}
    for key in book.readers:
        cell = book.cell(key)
        where = hidden[key[0]].by(key[1])
        if where is None or cell is None or (cell.value is None and cell.formula is None):
            continue
        if cell.formula is None and not isinstance(cell.value, float):
            continue
        if any(hidden[reader[0]].by(reader[1]) is None for reader in book.readers[key]):
            places.setdefault((key[0], where), []).append(key)
    for (sheet, where), keys in places.items():
        keys.sort(key=lambda key: key[1])
        readers = sorted(
            {reader for key in keys for reader in book.readers[key] if hidden[reader[0]].by(reader[1]) is None}
        )
        cells = [cell_name(*key[1]) for key in keys]
        named = f"{', '.join(cells[:5])}{', …' if len(cells) > 5 else ''}"
        yield Finding(
            sheet,
            cells[0],
            "hidden-input",
            "warning",
            f"{named} in {where} {'feeds' if len(cells) == 1 else 'feed'} {cell_name_of(readers[0])} and cannot be "
            f"seen; show {where}.",
            "hidden",
            "visible",
            tuple(cell_name_of(reader) for reader in readers[:12]),
        )


class _Hidden:
    """What hides the cells of a sheet."""

    def __init__(self, sheet: Sheet) -> None:
        self.sheet = sheet
        self.rows = _blocks(sheet.hidden_rows)
        self.columns = _blocks(sheet.hidden_columns)

    def by(self, address: Address) -> str | None:
        """Return what hides a cell, or None."""
        if self.sheet.visibility != "visible":
            return f"the hidden sheet {self.sheet.name}"
        row, column = self.rows.get(address[0]), self.columns.get(address[1])
        if row is not None:
            return f"the hidden row {row[0]}" if row[0] == row[1] else f"the hidden rows {row[0]}:{row[1]}"
        if column is None:
            return None
        first, last = (cell_name(1, end)[:-1] for end in column)
        return f"the hidden column {first}" if first == last else f"the hidden columns {first}:{last}"


def _blocks(lines: set[int]) -> dict[int, tuple[int, int]]:
    """Return for each hidden row or column the first and last of those hidden with it."""
    found: dict[int, tuple[int, int]] = {}
    block: list[int] = []
    for line in [*sorted(lines), 0]:
        if block and line != block[-1] + 1:
            found.update(dict.fromkeys(block, (block[0], block[-1])))
            block = []
        block.append(line)
    return found


def unused_inputs(book: Examined) -> Iterator[Finding]:
    """Find labelled numbers with a unit that no formula reads, on sheets that compute."""
    read: set[Key] = set()
    for key, _ in book.formulas():
        read.update(book.cells_read(key))
    for sheet in book.workbook.sheets:
        mine = {address for name, address in read if name == sheet.name}
        if not mine or sheet.visibility != "visible":
            continue
        for address, cell in sheet.cells.items():
            key = (sheet.name, address)
            if (
                cell.formula is not None
                or not isinstance(cell.value, float)
                or isinstance(cell.value, bool)
                or address in mine
            ):
                continue
            declared = book.declarations.unit(*key)
            label = book.label(key)
            if declared is None or not label.left or not _among_inputs(mine, address):
                continue
            yield Finding(
                sheet.name,
                cell_name(*address),
                "unused-input",
                "note",
                f"No formula reads this input ({label.text}); remove it, or use it where it was meant.",
                shown(cell.value, "" if declared.weak else declared.unit.text),
            )


def _among_inputs(read: set[Address], address: Address) -> bool:
    """Return whether a cell above or below it within three rows is read: it stands in a block of inputs."""
    row, column = address
    return any((row + step, column) in read for step in (-3, -2, -1, 1, 2, 3))
