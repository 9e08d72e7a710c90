"""Formulas written onto tapes: which stretches of an evaluation can run as straight lists of array operations."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any

import numpy as np

from doubler.workbook.binding import Binder, Store
from doubler.workbook.geometry import OutsideError, Run, cells_in
from doubler.workbook.graph import Graph
from doubler.workbook.lift import NumericRule
from doubler.workbook.natives.registry import NATIVES
from doubler.workbook.operators import BINARY, COMPARING, UNARY, compared, power
from doubler.workbook.syntax import Binary, Call, CellRef, Logical, Node, Number, RangeRef, Unary
from doubler.workbook.tape import Operation, Part, Tape, Value

LARGEST_RANGE = 64
"""Up to this many cells a range is folded cell by cell."""

_ARITHMETIC: dict[str, np.ufunc] = {"+": np.add, "-": np.subtract, "*": np.multiply, "/": np.divide}
_FOLDS: dict[str, tuple[np.ufunc, float | None]] = {
    "MAX": (np.maximum, None),
    "MIN": (np.minimum, None),
    "SUM": (np.add, 0.0),
}
_JUNCTIONS: dict[str, np.ufunc] = {"AND": np.logical_and, "OR": np.logical_or}


class _NotPlainError(Exception):
    """The formula holds something for which there is no operation on a tape."""


def taped(graph: Graph, binder: Binder, store: Store, often: Sequence[int], outputs: set[int]) -> list[int | Tape]:
    """Put stretches of groups that can be onto tapes.

    Parameters
    ----------
    graph : Graph
    binder : Binder
        With the inputs in their places and `varying` known.
    store : Store
        With the values of all that is the same in every case.
    often : sequence of int
        The groups that vary by case, in their order of evaluation; none that cannot be evaluated.
    outputs : set of int
        The groups whose values are wanted.

    Returns
    -------
    list
        Groups to be evaluated by their programs, and tapes, in order.
    """
    found: list[int | list[int]] = []
    writers: list[_Writer] = []
    for index in often:
        if not (writers and found and found[-1] is writers[-1].nodes):
            writer = _Writer(graph, binder, store)
        if writer.add(index):
            if not (found and found[-1] is writer.nodes):
                found.append(writer.nodes)
                writers.append(writer)
        else:
            found.append(index)
    by_list = {id(writer.nodes): writer for writer in writers}
    readers = {index: _reads(graph, index) for index in often}
    result: list[int | Tape] = []
    for item in found:
        if isinstance(item, int):
            result.append(item)
        elif len(item) < 2:
            result += item
        else:
            inside = set(item)
            elsewhere = outputs.union(*(reads for index, reads in readers.items() if index not in inside))
            result.append(by_list[id(item)].tape(elsewhere))
    return result


def _reads(graph: Graph, index: int) -> set[int]:
    """Return the groups that a group reads, those behind rectangles too."""
    groups = len(graph.groups)
    found: set[int] = set()
    work = list(graph.edges[index])
    while work:
        node = work.pop()
        if node not in found:
            found.add(node)
            if groups <= node < len(graph.edges):
                work += graph.edges[node]
    return found


class _Writer:
    """Writes consecutive groups onto one tape; equal operations on equal operands are written once."""

    def __init__(self, graph: Graph, binder: Binder, store: Store) -> None:
        self.graph = graph
        self.binder = binder
        self.store = store
        self.nodes: list[int] = []
        self.values: list[Value] = []
        self.of_node: dict[int, int] = {}
        self.constants: dict[tuple[type, str], int] = {}
        self.cells: dict[tuple[int, int, int], int] = {}
        self.scopes: list[tuple[Part, dict[Any, int]]] = [(Part(), {})]
        self.run: Run = Run(0, 1, 1)

    def add(self, index: int) -> bool:
        """Write a group; False, and nothing is written, where that cannot be."""
        group = self.graph.groups[index]
        if group.run.count != 1 or group.area is not None or group.resolved is None:
            return False
        self.run = group.run
        depth = len(self.scopes)
        self.scopes.append((Part(), {}))
        try:
            value = self.value(group.resolved)
            if self.values[value].constant is not None:
                return False
        except (_NotPlainError, OutsideError, FloatingPointError, RecursionError):
            return False
        else:
            part, known = self.scopes[depth]
            self.scopes[0][0].operations += part.operations
            self.scopes[0][1].update(known)
            self.of_node[index] = value
            self.nodes.append(index)
            return True
        finally:
            del self.scopes[depth:]

    def tape(self, elsewhere: set[int]) -> Tape:
        """Return the tape; `elsewhere` are the groups whose values are read by others."""
        kept = {index: value for index, value in self.of_node.items() if index in elsewhere}
        return Tape(self.values, self.scopes[0][0].operations, self.nodes, kept)

    def value(self, node: Node) -> int:
        """Write a node and return its value."""
        if isinstance(node, Number | Logical):
            return self._constant(node.value)
        if isinstance(node, CellRef):
            sheet, area = self.binder.geometry.places(node, self.run)[0]
            return self._cell(sheet, area.first_row, area.first_column)
        if isinstance(node, Unary):
            return self._unary(node)
        if isinstance(node, Binary):
            return self._binary(node)
        if isinstance(node, Call):
            return self._call(node)
        raise _NotPlainError

    def _new(self, value: Value) -> int:
        self.values.append(value)
        return len(self.values) - 1

    def _constant(self, constant: Any) -> int:
        """Return the value of a constant; 0 and -0 are two."""
        if type(constant) is not float and type(constant) is not bool:
            raise _NotPlainError
        key = (type(constant), repr(constant))
        if key not in self.constants:
            self.constants[key] = self._new(Value(type(constant) is bool, constant))
        return self.constants[key]

    def _cell(self, sheet: int, row: int, column: int) -> int:
        """Return the value of a cell: of the tape itself, the same in all cases, or read at the start of a block."""
        found = self.binder.occupancy[sheet].at(row, column)
        if found is not None and found[0] in self.of_node:
            return self.of_node[found[0]]
        read = self.binder.single(sheet, row, column)
        if found is None or found[0] not in self.binder.varying:
            return self._constant(read(self.store))
        key = (sheet, row, column)
        if key not in self.cells:
            self.cells[key] = self._new(Value(read=read))
        return self.cells[key]

    def _write(self, rule: Any, *uses: int, fresh: bool = False, logical: bool = False, key: Any = None) -> int:
        known_as = (rule if key is None else key, uses)
        for _, already in reversed(self.scopes):
            found: int | None = already.get(known_as)
            if found is not None:
                return found
        gives = self._new(Value(logical))
        part, known = self.scopes[-1]
        part.operations.append(Operation(rule, uses, gives, fresh))
        known[known_as] = gives
        return gives

    def _numbers(self, *values: int) -> None:
        if any(self.values[value].logical for value in values):
            raise _NotPlainError

    def _constants(self, *values: int) -> list[Any] | None:
        """Return the values as constants, None where one of them varies."""
        found = [self.values[value].constant for value in values]
        return None if None in found else found

    def _unary(self, node: Unary) -> int:
        if node.operator not in UNARY:
            raise _NotPlainError
        operand = self.value(node.operand)
        constants = self._constants(operand)
        if constants is not None:
            return self._constant(UNARY[node.operator](*constants))
        if node.operator == "+":
            return operand
        self._numbers(operand)
        if node.operator == "-":
            return self._write(np.negative, operand)
        return self._write(np.divide, operand, self._constant(100.0))

    def _binary(self, node: Binary) -> int:
        operator = node.operator
        if operator not in _ARITHMETIC and operator not in COMPARING and operator != "^":
            raise _NotPlainError
        left, right = self.value(node.left), self.value(node.right)
        constants = self._constants(left, right)
        if constants is not None:
            return self._constant(BINARY[operator](*constants))
        self._numbers(left, right)
        if operator == "^":
            return self._power(left, right)
        if operator in COMPARING:
            ufunc = COMPARING[operator]
            return self._write(lambda a, b: compared(ufunc, a, b), left, right, fresh=True, logical=True, key=operator)
        return self._write(_ARITHMETIC[operator], left, right)

    def _power(self, base: int, exponent: int) -> int:
        """Write a power by the products that `power` takes."""
        degree = self.values[exponent].constant
        if degree == 1.0:
            return base
        if degree == 0.5:
            return self._write(np.sqrt, base)
        if degree in (2.0, 3.0, 4.0):
            square = self._write(np.multiply, base, base)
            if degree == 2.0:
                return square
            return self._write(np.multiply, square, base if degree == 3.0 else square)
        return self._write(power, base, exponent, fresh=True)

    def _call(self, node: Call) -> int:
        if node.name == "IF" and 2 <= len(node.arguments) <= 3:
            return self._if(node.arguments)
        if node.name in _FOLDS:
            return self._fold(*_FOLDS[node.name], self._entries(node.arguments))
        if node.name in _JUNCTIONS:
            return self._junction(_JUNCTIONS[node.name], [self.value(argument) for argument in node.arguments])
        native = NATIVES.get(node.name)
        if native is None or native.with_frame or native.volatile:
            raise _NotPlainError
        kinds = native.kinds(len(node.arguments))
        if kinds is None or set(kinds) - {"v"}:
            raise _NotPlainError
        values = [self.value(argument) for argument in node.arguments]
        constants = self._constants(*values)
        if constants is not None:
            return self._constant(native.rule(*constants))
        if not isinstance(native.rule, NumericRule):
            raise _NotPlainError
        self._numbers(*values)
        vector = native.rule.vector
        if isinstance(vector, np.ufunc):
            return self._write(vector, *values)
        return self._write(vector, *values, fresh=True)

    def _entries(self, arguments: tuple[Node, ...]) -> list[int]:
        """Return the numbers of an aggregate's arguments, one after the other."""
        found: list[int] = []
        for argument in arguments:
            if not isinstance(argument, RangeRef):
                found.append(self.value(argument))
                continue
            for sheet, area in self.binder.geometry.places(argument, self.run):
                if cells_in(area) > LARGEST_RANGE:
                    raise _NotPlainError
                found += [self._cell(sheet, row, column) for row, column in area.addresses()]
        if not found or all(self.values[value].constant is not None for value in found):
            raise _NotPlainError
        self._numbers(*found)
        return found

    def _fold(self, ufunc: np.ufunc, start: float | None, entries: list[int]) -> int:
        total = None if start is None else self._constant(start)
        for entry in entries:
            if total is None:
                total = entry
                continue
            constants = self._constants(total, entry)
            if constants is not None:
                total = self._constant(float(ufunc(*constants)))
            else:
                total = self._write(ufunc, total, entry)
        assert total is not None
        return total

    def _junction(self, ufunc: np.ufunc, values: list[int]) -> int:
        if not values or not all(self.values[v].logical and self.values[v].constant is None for v in values):
            raise _NotPlainError
        total = values[0]
        for value in values[1:]:
            total = self._write(ufunc, total, value, fresh=True, logical=True)
        return total

    def _if(self, arguments: tuple[Node, ...]) -> int:
        condition = self.value(arguments[0])
        fixed = self.values[condition].constant
        if fixed is not None:
            if not fixed and len(arguments) < 3:
                raise _NotPlainError
            return self.value(arguments[1] if fixed else arguments[2])
        yes = self._branch(lambda: self.value(arguments[1]))
        no = self._branch(lambda: self.value(arguments[2])) if len(arguments) == 3 else Part()
        if yes.result is None and no.result is None:
            raise _NotPlainError
        gives = self._new(Value())
        self.scopes[-1][0].operations.append(Operation(None, (condition,), gives, branches=(yes, no)))
        return gives

    def _branch(self, write: Callable[[], int]) -> Part:
        """Write a branch as a part of its own; what it computes is not there outside of it."""
        depth = len(self.scopes)
        self.scopes.append((Part(), {}))
        try:
            result = write()
            self._numbers(result)
        except (_NotPlainError, OutsideError, FloatingPointError):
            return Part()
        else:
            part = self.scopes[depth][0]
            part.result = result
            return part
        finally:
            del self.scopes[depth:]
