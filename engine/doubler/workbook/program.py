"""A syntax tree made into a program: functions that, given a frame, compute the tree's value over lanes.

A tree is compiled once for all its copies. Its references become numbered slots; what each slot reads is
bound for every group of copies (`doubler.workbook.binding`).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any, TypeAlias

from doubler.errors import ErrorValue
from doubler.workbook.coerce import CannotEvaluateError
from doubler.workbook.given_ranges import cut_at_index, met_by_own_place, over_cells, top_left
from doubler.workbook.lanes import Grid, from_scalars
from doubler.workbook.lift import NumericRule, ScalarRule
from doubler.workbook.natives.registry import NATIVES, OMITTED, Native
from doubler.workbook.operators import BINARY, UNARY
from doubler.workbook.syntax import (
    Apply,
    ArrayLiteral,
    Binary,
    Call,
    CellRef,
    ErrorLiteral,
    Logical,
    NameRef,
    Node,
    Number,
    Omitted,
    RangeRef,
    Text,
    Unary,
)

REASON = "UNIT_REASON"
REFERENCE_OPERATORS = {":", ",", " "}
CHOOSES_A_REFERENCE = {"IF", "IFS", "CHOOSE", "SWITCH"}
"""Functions that give one of their arguments as it is, a range as a range."""


class Frame:
    """What a program needs to run for one group of copies.

    Attributes
    ----------
    readers
        One for each slot: a function from the store of values to the value read.
    store
        The values of all groups and inputs.
    variables
        Values of LET and LAMBDA variables.
    cell
        Sheet name, row and column of the group's first cell.
    date1904
        Whether the workbook counts days from 1904.
    steps
        By how many rows and columns each copy lies beyond the one before.
    refusals
        Lanes in which one of our functions gave an error value, and why.
    """

    __slots__ = ("cell", "copies", "date1904", "readers", "refusals", "steps", "store", "variables")

    def __init__(
        self,
        readers: list[Any],
        store: Any,
        cell: tuple[str, int, int],
        copies: int,
        date1904: bool,
        steps: tuple[int, int] = (0, 0),
    ) -> None:
        self.readers = readers
        self.store = store
        self.variables: dict[int, Any] = {}
        self.cell = cell
        self.copies = copies
        self.date1904 = date1904
        self.steps = steps
        self.refusals: list[tuple[Any, str]] = []


Step: TypeAlias = Callable[[Frame], Any]


@dataclass(frozen=True, slots=True)
class Slot:
    """A reference of a tree, and how it is read.

    Attributes
    ----------
    node
        The reference.
    way
        ``cell`` one cell; ``meet`` where a range meets the own row or column; ``grid`` all of it; ``place``
        where it lies; ``spill`` the whole result of the array formula in that cell;
        ``reason`` why the cell shows an error value.
    """

    node: Node
    way: str


@dataclass(slots=True)
class Program:
    """A compiled tree."""

    run: Step
    slots: list[Slot]
    reads_own_place: bool = False


class Lambda:
    """A function value: its variables and body."""

    __slots__ = ("body", "variables")

    def __init__(self, variables: tuple[int, ...], body: Step) -> None:
        self.variables = variables
        self.body = body

    def __call__(self, frame: Frame, *arguments: Any) -> Any:
        """Call it with values for its variables."""
        if len(arguments) > len(self.variables):
            return ErrorValue.VALUE
        for at, variable in enumerate(self.variables):
            frame.variables[variable] = arguments[at] if at < len(arguments) else OMITTED
        return self.body(frame)


def compile_tree(tree: Node, array: bool) -> Program:
    """Compile a resolved tree.

    Parameters
    ----------
    tree : Node
        Without names or structured references.
    array : bool
        Whether it stands in an array formula, where a range is taken cell by cell.

    Raises
    ------
    CannotEvaluateError
        Where the tree holds a function or construct that is not known here.
    """
    compiler = Compiler()
    run = compiler.value(tree, array)
    return Program(run, compiler.slots, compiler.reads_own_place)


def is_reference(node: Node) -> bool:
    """Whether a node is a reference, or an expression of references by ``:``, ``,`` and blank."""
    if isinstance(node, CellRef | RangeRef):
        return True
    return (
        isinstance(node, Binary)
        and node.operator in REFERENCE_OPERATORS
        and is_reference(node.left)
        and is_reference(node.right)
    )


@dataclass
class Compiler:
    """Compiles one tree."""

    slots: list[Slot] = field(default_factory=list)
    variables: dict[str, int] = field(default_factory=dict)
    count: int = 0
    reads_own_place: bool = False
    _index: dict[tuple[Node, str], int] = field(default_factory=dict)

    def slot(self, node: Node, way: str) -> Step:
        """Return the step that reads a reference."""
        index = self._index.get((node, way))
        if index is None:
            index = self._index[node, way] = len(self.slots)
            self.slots.append(Slot(node, way))
        at = index
        return lambda frame: frame.readers[at](frame.store)

    def value(self, node: Node, array: bool) -> Step:
        """Return the step that gives a node's value."""
        if isinstance(node, Number | Text | Logical | ErrorLiteral):
            constant = node.value
            return lambda _: constant
        if isinstance(node, CellRef):
            return self.slot(node, "cell")
        if is_reference(node):
            return self.slot(node, "grid" if array else "meet")
        if isinstance(node, Omitted):
            return lambda _: None
        if isinstance(node, Unary):
            return self._unary(node, array)
        if isinstance(node, Binary):
            return self._binary(node, array)
        if isinstance(node, Call):
            step = self._call(node, array)
            return met_by_own_place(step) if node.name == "INDEX" and not array else step
        if isinstance(node, ArrayLiteral):
            return self._array(node)
        if isinstance(node, NameRef):
            return self._variable(node)
        if isinstance(node, Apply):
            return self._apply(node, array)
        raise CannotEvaluateError(f"it holds a construct that is not evaluated here: {type(node).__name__}")

    def _unary(self, node: Unary, array: bool) -> Step:
        if node.operator == "@":
            if is_reference(node.operand):
                return self.slot(node.operand, "meet")
            inner = self.value(node.operand, array)
            return lambda frame: top_left(inner(frame))
        if node.operator == "#":
            return self.slot(node.operand, "spill")
        rule = UNARY[node.operator]
        operand = self.value(node.operand, array)
        return lambda frame: rule(operand(frame))

    def _binary(self, node: Binary, array: bool) -> Step:
        if node.operator in REFERENCE_OPERATORS:
            return self._joined_reference(node)
        rule = BINARY[node.operator]
        left, right = self.value(node.left, array), self.value(node.right, array)
        return lambda frame: rule(left(frame), right(frame))

    def _joined_reference(self, node: Binary) -> Step:
        """Return the step of ``A1:INDEX(A1:A9, n)``: the rectangle over both is read, and cut where INDEX points."""
        call = node.right
        if (
            node.operator == ":"
            and isinstance(node.left, CellRef)
            and isinstance(call, Call)
            and call.name == "INDEX"
            and 2 <= len(call.arguments) <= 3
            and isinstance(call.arguments[0], RangeRef)
        ):
            hull = self.slot(Binary(":", node.left, call.arguments[0]), "grid")
            start, table = self.slot(node.left, "place"), self.slot(call.arguments[0], "place")
            numbers = [self.value(argument, False) for argument in call.arguments[1:]]
            return lambda frame: cut_at_index(
                hull(frame), start(frame), table(frame), [number(frame) for number in numbers]
            )
        raise CannotEvaluateError(f"a reference that is computed, joined by {node.operator!r}, is not evaluated here")

    def _array(self, node: ArrayLiteral) -> Step:
        values: list[Any] = []
        for row in node.rows:
            for item in row:
                if not isinstance(item, Number | Text | Logical | ErrorLiteral):
                    raise CannotEvaluateError("an array constant holds something else than constants")
                values.append(item.value)
        rows, columns = len(node.rows), len(node.rows[0])
        grid = Grid(rows, columns, data=from_scalars(values, (rows, columns, 1, 1)))
        return lambda _: grid

    def _variable(self, node: NameRef) -> Step:
        index = self.variables.get(node.name.casefold())
        if index is None:
            raise CannotEvaluateError(f"the name {node.name} is not known here")
        return lambda frame: frame.variables[index]

    def bind(self, node: Node) -> int:
        """Begin a LET or LAMBDA variable."""
        if not isinstance(node, NameRef):
            raise CannotEvaluateError("a variable of LET or LAMBDA has no name that can be read")
        self.count += 1
        self.variables[node.name.casefold()] = self.count
        return self.count

    def _call(self, node: Call, array: bool, whole: bool = False) -> Step:
        """Return the step of a call; `whole` where its result is taken as a range, as in SUM(IF(…))."""
        if node.name == "LET":
            return self._let(node, array)
        if node.name == "LAMBDA":
            return self._lambda(node, array)
        if node.name == REASON and len(node.arguments) == 1 and isinstance(node.arguments[0], CellRef | RangeRef):
            return self._reason(node.arguments[0])
        function = NATIVES.get(node.name)
        if function is None:
            return self._ours(node, array)
        if function.volatile:
            raise CannotEvaluateError(f"{node.name} changes by itself, so its value is not reproduced")
        kinds = function.kinds(len(node.arguments))
        if kinds is None:
            raise CannotEvaluateError(f"{node.name} takes {function.arity} arguments, not {len(node.arguments)}")
        self.reads_own_place = self.reads_own_place or function.with_frame
        whole = whole and node.name in CHOOSES_A_REFERENCE
        steps = [self.argument(a, kind, array, whole) for a, kind in zip(node.arguments, kinds, strict=True)]
        return self._invoke(function, kinds, steps)

    def argument(self, node: Node, kind: str, array: bool, whole: bool = False) -> Step:
        """Return the step that gives an argument in the way a native function wants it."""
        if kind == "l":
            if whole and (is_reference(node) or isinstance(node, Call)):
                chosen = self.argument(node, "r", array)
                return lambda frame: lambda: chosen(frame)
            inner = self.value(node, array)
            return lambda frame: lambda: inner(frame)
        if kind == "o":
            return (lambda _: OMITTED) if isinstance(node, Omitted) else self.value(node, array)
        if kind == "b" and isinstance(node, Omitted):
            return lambda _: OMITTED
        if kind == "p":
            if is_reference(node):
                return self.slot(node, "place")
            raise CannotEvaluateError("a function that wants a reference is given something that is computed")
        if kind in "rab" and is_reference(node):
            return self.slot(node, "grid")
        if kind in "rab" and isinstance(node, Call) and node.name not in {"LET", "LAMBDA"}:
            return self._call(node, array or kind in "ab", whole=True)
        return self.value(node, array or kind in "ab")

    def _invoke(self, function: Native, kinds: str, steps: list[Step]) -> Step:
        rule = function.rule
        if not isinstance(rule, NumericRule | ScalarRule) and any(kind in "vo" for kind in kinds) and "l" not in kinds:
            rule = over_cells(rule, kinds)
        if function.with_frame:
            return lambda frame: rule(frame, *[step(frame) for step in steps])
        if len(steps) == 1:
            (only,) = steps
            return lambda frame: rule(only(frame))
        if len(steps) == 2:
            first, second = steps
            return lambda frame: rule(first(frame), second(frame))
        return lambda frame: rule(*[step(frame) for step in steps])

    def _let(self, node: Call, array: bool) -> Step:
        if len(node.arguments) < 3 or len(node.arguments) % 2 == 0:
            raise CannotEvaluateError("LET takes pairs of a name and a value, and a last expression")
        shadowed = dict(self.variables)
        assignments = []
        for at in range(0, len(node.arguments) - 1, 2):
            step = self.argument(node.arguments[at + 1], "r", array)
            assignments.append((self.bind(node.arguments[at]), step))
        body = self.value(node.arguments[-1], array)
        self.variables = shadowed

        def run(frame: Frame) -> Any:
            for index, step in assignments:
                frame.variables[index] = step(frame)
            return body(frame)

        return run

    def _lambda(self, node: Call, array: bool) -> Step:
        shadowed = dict(self.variables)
        variables = tuple(self.bind(argument) for argument in node.arguments[:-1])
        function = Lambda(variables, self.value(node.arguments[-1], array))
        self.variables = shadowed
        return lambda _: function

    def _apply(self, node: Apply, array: bool) -> Step:
        function = self.value(node.function, array)
        arguments = [self.value(argument, array) for argument in node.arguments]

        def run(frame: Frame) -> Any:
            called = function(frame)
            if not isinstance(called, Lambda):
                return ErrorValue.NAME if called is ErrorValue.NAME else ErrorValue.VALUE
            return called(frame, *[argument(frame) for argument in arguments])

        return run

    def _reason(self, node: CellRef | RangeRef) -> Step:
        """Return the step that says why a cell shows an error value; of a range the first cell is meant."""
        from doubler.workbook.natives.reasons import reason_of_cell

        if isinstance(node, RangeRef):
            if node.first_row is None or node.first_column is None:
                raise CannotEvaluateError(f"{REASON} wants one cell")
            node = CellRef(node.sheet, node.first_row, node.first_column)
        value, told = self.slot(node, "cell"), self.slot(node, "reason")
        return lambda frame: reason_of_cell(value(frame), *told(frame))

    def _ours(self, node: Call, array: bool) -> Step:
        from doubler.workbook.natives.ours import find

        rule = find(node.name)
        if rule is None:
            raise CannotEvaluateError(f"the function {node.name} is not known here")
        steps = [
            self.argument(argument, "o" if isinstance(argument, Omitted) else "a", array) for argument in node.arguments
        ]
        return lambda frame: rule(frame.refusals, [step(frame) for step in steps])
