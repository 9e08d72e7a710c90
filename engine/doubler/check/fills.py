"""Lines of like formulas, down a column or along a row: what a fill is, and what interrupts it."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from doubler.check.altered import values_altered
from doubler.workbook.evaluate import NotEvaluated
from doubler.workbook.examined import Examined, Key
from doubler.workbook.model import Address, Cell, Scalar, Sheet
from doubler.workbook.shift import MovableFormula
from doubler.workbook.syntax import Axis, Binary, Call, CellRef, Node, Unary

WIDEST_GAP = 3
"""Cells that may interrupt a fill one after another."""


@dataclass(frozen=True, slots=True)
class Gap:
    """Cells that stand in a line of like formulas and are unlike them.

    Attributes
    ----------
    sheet
        The sheet.
    cells
        The cells, one to three.
    before, after
        The formula cells of the line on both sides, nearest first; `after` is empty where the line ends with the gap,
        `before` where it begins with it.
    down
        Whether the line runs down a column.
    """

    sheet: str
    cells: tuple[Address, ...]
    before: tuple[Address, ...]
    after: tuple[Address, ...]
    down: bool

    @property
    def inside(self) -> bool:
        """Whether the line goes on behind the gap."""
        return bool(self.before and self.after)

    @property
    def model(self) -> Address:
        """The nearest formula of the line."""
        return (self.before or self.after)[0]


class Fills:
    """The formula trees of a workbook by cell, and the gaps in their lines."""

    def __init__(self, book: Examined) -> None:
        self.book = book
        self.trees: dict[str, dict[Address, Node]] = {sheet.name: {} for sheet in book.workbook.sheets}
        self._crossing: dict[tuple[str, bool], dict[int, list[Address]]] = {}
        known: dict[Node, Node] = {}
        for group in book.graph.groups:
            if group.tree is None:
                continue
            tree = known.setdefault(group.tree, group.tree)
            trees = self.trees[book.workbook.sheets[group.run.sheet].name]
            for lane in range(group.run.count):
                trees[group.run.cell(lane)] = tree

    def gaps(self) -> Iterator[Gap]:
        """Yield every gap of one to three cells between, before or behind like formulas."""
        for sheet in self.book.workbook.sheets:
            trees = self.trees[sheet.name]
            for down in (True, False):
                yield from self._lines(sheet, trees, down=down)

    def _lines(self, sheet: Sheet, trees: dict[Address, Node], *, down: bool) -> Iterator[Gap]:
        step = (1, 0) if down else (0, 1)
        order = sorted(trees, key=lambda a: (a[1], a[0]) if down else a)
        runs: list[list[Address]] = []
        for address in order:
            before = (address[0] - step[0], address[1] - step[1])
            if runs and runs[-1][-1] == before and trees[before] is trees[address]:
                runs[-1].append(address)
            else:
                runs.append([address])
        by_start = {run[0]: run for run in runs}
        for run in runs:
            yield from self._behind(sheet, trees, run, by_start, step, down=down)
            yield from self._ahead(sheet, run, step, down=down)

    def _behind(
        self,
        sheet: Sheet,
        trees: dict[Address, Node],
        run: list[Address],
        by_start: dict[Address, list[Address]],
        step: Address,
        *,
        down: bool,
    ) -> Iterator[Gap]:
        gap: list[Address] = []
        row, column = run[-1]
        for _ in range(WIDEST_GAP):
            row, column = row + step[0], column + step[1]
            cell = sheet.cells.get((row, column))
            if cell is None or (cell.formula is None and not _is_number(cell)):
                break
            gap.append((row, column))
            following = by_start.get((row + step[0], column + step[1]))
            if following is not None and trees[following[0]] is trees[run[0]]:
                yield Gap(sheet.name, tuple(gap), tuple(reversed(run)), tuple(following), down)
                return
        if gap and len(run) >= 2:
            yield Gap(sheet.name, tuple(gap[:1]), tuple(reversed(run)), (), down)

    @staticmethod
    def _ahead(sheet: Sheet, run: list[Address], step: Address, *, down: bool) -> Iterator[Gap]:
        address = (run[0][0] - step[0], run[0][1] - step[1])
        cell = sheet.cells.get(address)
        if len(run) >= 3 and cell is not None and cell.formula is None and _is_number(cell):
            yield Gap(sheet.name, (address,), (), tuple(run), down)

    def _line_through(self, sheet: Sheet, address: Address, *, row: bool) -> list[Address]:
        """Return the filled cells of the row (or column) through a cell."""
        known = self._crossing.get((sheet.name, row))
        if known is None:
            known = self._crossing[sheet.name, row] = {}
            for cell in sheet.cells:
                known.setdefault(cell[0] if row else cell[1], []).append(cell)
        return known.get(address[0] if row else address[1], [])

    def same_kind_of_row(self, gap: Gap, formulas: int = 0) -> bool:
        """Return whether the rest of the gap's row (or column) is filled as that of its neighbour in the line.

        At least so many of it must be `formulas` alike.
        """
        sheet = self.book.workbook.sheet(gap.sheet)
        assert sheet is not None
        trees = self.trees[gap.sheet]
        own, model = gap.cells[0], gap.model
        far = gap.after[0] if gap.inside else None
        others = [a for a in self._line_through(sheet, model, row=gap.down) if a != model]
        alike = same = 0
        for address in others:
            cell = sheet.cells[address]
            here = (own[0], address[1]) if gap.down else (address[0], own[1])
            mine = sheet.cells.get(here)
            if cell.formula is None and not _is_number(cell):
                continue
            if far is not None:
                beyond = (far[0], address[1]) if gap.down else (address[0], far[1])
                if not _alike(trees, sheet, address, beyond):
                    continue  # the lines on both sides of the gap do not agree here: a total, a remark
            if mine is None:
                return False
            if cell.formula is not None:
                if mine.formula is None or trees.get(here) is not trees.get(address):
                    return False
                alike, same = alike + 1, same + 1
            elif not _is_number(mine):
                return False
            else:
                alike += 1
        return alike > 0 and same >= formulas

    def reads_back(self, gap: Gap) -> bool:
        """Return whether the line's formula reads the cell before it in the line: the first cell is then its start."""
        step = (-1, 0) if gap.down else (0, -1)
        return any(
            isinstance(node, CellRef)
            and node.sheet is None
            and _offset(node.row, step[0], gap.down)
            and _offset(node.column, step[1], not gap.down)
            for node in walk(self.trees[gap.sheet][gap.model])
        )

    def formula_for(self, gap: Gap, address: Address) -> str:
        """Return the line's formula as it would stand in a cell of the gap, without its leading ``=``."""
        sheet = self.book.workbook.sheet(gap.sheet)
        assert sheet is not None
        model = sheet.cells[gap.model].formula or ""
        return MovableFormula(model).moved(address[0] - gap.model[0], address[1] - gap.model[1])

    def value_with(self, key: Key, formula: str) -> Scalar | NotEvaluated:
        """Return what a cell gives with another formula in it."""
        return values_altered(self.book, {key: formula}, [key])[key]


def walk(node: Node) -> Iterator[Node]:
    """Yield a tree's nodes."""
    yield node
    if isinstance(node, Unary):
        yield from walk(node.operand)
    elif isinstance(node, Binary):
        yield from walk(node.left)
        yield from walk(node.right)
    elif isinstance(node, Call):
        for argument in node.arguments:
            yield from walk(argument)


def _alike(trees: dict[Address, Node], sheet: Sheet, one: Address, other: Address) -> bool:
    """Return whether two cells hold copies of one formula, or both a number."""
    first, second = sheet.cells[one], sheet.cells.get(other)
    if second is None or (first.formula is None) != (second.formula is None):
        return False
    return trees.get(one) is trees.get(other) if first.formula is not None else _is_number(second)


def _offset(axis: Axis, number: int, moving: bool) -> bool:
    return not axis.anchored and axis.number == (number if moving else 0)


def _is_number(cell: Cell) -> bool:
    return isinstance(cell.value, float) and not isinstance(cell.value, bool)
