"""Whether a formula of an earlier revision and one of the new one say the same, wherever their cells have moved."""

from __future__ import annotations

from doubler.check.revision_match import Matching, Side
from doubler.explain.notation import written
from doubler.workbook.coerce import CannotEvaluateError
from doubler.workbook.examined import Key
from doubler.workbook.geometry import OutsideError, cells_in
from doubler.workbook.model import Area
from doubler.workbook.syntax import CellRef, Node, RangeRef

_WIDEST = 4096
_REFERENCE = "⟨⟩"

Read = tuple[str, Area]


class Formulas:
    """The formulas of two revisions, compared through the cells that they read."""

    def __init__(self, old: Side, new: Side, matched: Matching) -> None:
        self.old, self.new, self.matched = old, new, matched
        self._became = set(matched.cells.values())
        self._shapes: dict[int, tuple[str, list[Node]]] = {}

    def same(self, key: Key, other: Key) -> bool:
        """Return whether two formula cells hold the same formula: the same operations on cells that mean the same."""
        first, second = self._taken_apart(self.old, key), self._taken_apart(self.new, other)
        if first is None or second is None:
            texts = [side.book.cell(at) for side, at in ((self.old, key), (self.new, other))]
            return len({None if cell is None else cell.formula for cell in texts}) == 1
        return (
            first[0] == second[0] and len(first[1]) == len(second[1]) and all(map(self._same_read, first[1], second[1]))
        )

    def _taken_apart(self, side: Side, key: Key) -> tuple[str, list[Read]] | None:
        """Return a formula without its references, and what these cover in order."""
        found = side.book.graph.group_at(*key)
        tree = side.book.tree(key)
        if found is None or tree is None:
            return None
        shape, nodes = self._shape(tree)
        run = side.book.graph.groups[found[0]].run
        sheets = side.book.workbook.sheets
        reads: list[Read] = []
        for node in nodes:
            try:
                places = side.book.graph.geometry.places(node, run, found[1])
            except (OutsideError, CannotEvaluateError):
                return None
            reads += [(sheets[index].name, area) for index, area in places]
        return shape, reads

    def _shape(self, tree: Node) -> tuple[str, list[Node]]:
        """Return a tree's text with its references left out, and these; once for all copies of a fill."""
        known = self._shapes.get(id(tree))
        if known is None:
            nodes: list[Node] = []

            def reference(node: Node) -> str:
                if isinstance(node, CellRef | RangeRef):
                    nodes.append(node)
                    return _REFERENCE
                return str(getattr(node, "name", None) or getattr(node, "text", None) or node).casefold()

            known = self._shapes[id(tree)] = (written(tree, reference), nodes)
        return known

    def _same_read(self, first: Read, second: Read) -> bool:
        """Return whether two references mean the same: the same ends, or the same cells among those that stayed."""
        (sheet, area), (other_sheet, other) = first, second
        ends = ((area.first_row, area.first_column), (area.last_row, area.last_column))
        places = [self.matched.place((sheet, end)) for end in ends]
        wanted = [
            (other_sheet, (other.first_row, other.first_column)),
            (other_sheet, (other.last_row, other.last_column)),
        ]
        if places == wanted:
            return True
        if cells_in(area) == 1 or cells_in(other) == 1 or max(cells_in(area), cells_in(other)) > _WIDEST:
            return False
        held, holds = self.old.words.get(sheet, {}), self.new.words.get(other_sheet, {})
        before = {self.matched.cells.get((sheet, at)) for at in area.addresses() if at in held} - {None}
        after = {(other_sheet, at) for at in other.addresses() if at in holds} & self._became
        return bool(before) and before == after
