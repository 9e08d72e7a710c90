"""A stretch of formulas as one straight list of array operations over a block of cases, in buffers that are reused.

It takes the common way only: every lane holds a finite number, no operation faults. Anything else makes it step aside
(`Tape.run` returns False), and the formulas of the stretch are evaluated for that block the exact way, one program
after the other (`doubler.workbook.program`). Its operations are those of the exact way, in the same order on the same
operands: a lane's value does not depend, to the last bit, on which of the two computed it.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass, field
from typing import Any, TypeAlias

import numpy as np

from doubler.workbook.lift import F8

Registers: TypeAlias = list[Any]
Step: TypeAlias = Callable[[Registers], Any]
Reader: TypeAlias = Callable[[Any], Any]


class StepAsideError(Exception):
    """The block holds something that the tape has no operation for."""


@dataclass(slots=True)
class Value:
    """A value of the tape, given once.

    Attributes
    ----------
    logical
        Whether its lanes are logicals and not numbers.
    constant
        What it is where it is the same in all cases, else None.
    read
        How it is read at the start of a block, where it comes from outside.
    """

    logical: bool = False
    constant: float | bool | None = None
    read: Reader | None = None


@dataclass(slots=True)
class Part:
    """Operations in order, and which value they end in; None where that cannot be had on the tape."""

    operations: list[Operation] = field(default_factory=list)
    result: int | None = None


@dataclass(slots=True)
class Operation:
    """One operation.

    Attributes
    ----------
    rule
        A NumPy function that takes `out`, or (`fresh`) any function that gives a new array.
    uses
        Its operands; for a choice the condition.
    gives
        The value that it gives.
    fresh
        Whether it makes its own array.
    branches
        For a choice what is computed where the condition holds, and where it does not.
    """

    rule: Any
    uses: tuple[int, ...]
    gives: int
    fresh: bool = False
    branches: tuple[Part, Part] | None = None

    def reads(self) -> set[int]:
        """Return all values that it reads, its branches too."""
        found = set(self.uses)
        for part in self.branches or ():
            found |= _read(part.operations)
            if part.result is not None:
                found.add(part.result)
        return found


def _read(operations: Iterable[Operation]) -> set[int]:
    return {value for operation in operations for value in operation.reads()}


class Tape:
    """Operations with their registers assigned.

    Parameters
    ----------
    values : list of Value
    operations : list of Operation
    nodes : list of int
        The groups of the stretch.
    kept : dict of int to int
        The groups whose values are read elsewhere, each with the value that it has.
    """

    def __init__(
        self, values: list[Value], operations: list[Operation], nodes: list[int], kept: dict[int, int]
    ) -> None:
        self.nodes = nodes
        self._values = values
        self._start: Registers = []
        self._of: dict[int, int] = {}
        self._operands: dict[int, int] = {}
        self._free: list[int] = []
        self._buffers: list[int] = []
        self._lasting: list[int] = []
        self._reads: list[tuple[Reader, int]] = []
        wanted = set(kept.values())
        for value in sorted(_read(operations) | wanted):
            read = values[value].read
            if read is not None:
                self._of[value] = self._register()
                self._reads.append((read, self._of[value]))
        self._steps = self._laid_out(operations, wanted, wanted)
        self._kept = [(node, self._number(value)) for node, value in kept.items()]
        self._sizes: dict[int, Registers] = {}
        self._stood_aside = 0
        self._ran = 0

    @property
    def live(self) -> int:
        """How many arrays of a block it works with at a time, about."""
        return len(self._buffers) + len(self._reads) + len(self._lasting)

    @property
    def idle(self) -> bool:
        """Whether it stands aside so often that it is not worth trying."""
        return self._stood_aside > self._ran + 2

    def run(self, store: Any, count: int) -> bool:
        """Compute a block, and put the values that are read elsewhere into the store; False where it stands aside."""
        registers = self._sizes.get(count)
        if registers is None:
            registers = list(self._start)
            for at in self._buffers:
                registers[at] = np.empty(count)
            self._sizes = {count: registers}
        self._stood_aside += 1
        for read, at in self._reads:
            value = read(store)
            if type(value) is not np.ndarray or value.dtype is not F8 or value.shape != (1, count):
                return False
            registers[at] = value.reshape(count)
        for at in self._lasting:
            registers[at] = np.empty(count)
        try:
            for step in self._steps:
                step(registers)
        except (FloatingPointError, StepAsideError):
            return False
        for node, at in self._kept:
            store.values[node] = registers[at].reshape(1, count)
        self._stood_aside -= 1
        self._ran += 1
        return True

    def _register(self, content: Any = None) -> int:
        self._start.append(content)
        return len(self._start) - 1

    def _buffer(self) -> int:
        if self._free:
            return self._free.pop()
        self._buffers.append(self._register())
        return self._buffers[-1]

    def _number(self, value: int) -> int:
        """Return the register of a value as a plain function takes it: a constant as a Python number."""
        if value not in self._of:
            self._of[value] = self._register(self._values[value].constant)
        return self._of[value]

    def _operand(self, value: int) -> int:
        """Return the register of a value as a NumPy function takes it fastest: a constant as an array of no axis."""
        constant = self._values[value].constant
        if constant is None:
            return self._of[value]
        if value not in self._operands:
            self._operands[value] = self._register(np.array(constant))
        return self._operands[value]

    def _laid_out(self, operations: list[Operation], held: set[int], lasting: set[int]) -> list[Step]:
        """Give every result a register, again free after its last use unless it is among those held."""
        last: dict[int, int] = {}
        made = {operation.gives for operation in operations}
        for at, operation in enumerate(operations):
            for value in operation.reads():
                last[value] = at
        steps = []
        for at, operation in enumerate(operations):
            over = {v for v in operation.reads() if v in made and last[v] == at and v not in held}
            steps.append(self._step(operation, over, operation.gives in lasting))
        return steps

    def _step(self, operation: Operation, over: set[int], lasting: bool) -> Step:
        uses = [self._number(v) if operation.fresh else self._operand(v) for v in operation.uses]
        if operation.fresh:
            self._release(over)
            self._of[operation.gives] = out = self._register()
            return _fresh(operation.rule, uses, out)
        if operation.branches is not None:
            out = self._target(operation.gives, lasting)
            step = self._choice(operation.branches, uses[0], out)
            self._release(over)
            return step
        # A result may take the place of an operand that is used for the last time: lane by lane, nothing is lost.
        self._release(over)
        out = self._target(operation.gives, lasting)
        rule = operation.rule
        if len(uses) == 1:
            (only,) = uses
            return lambda registers: rule(registers[only], out=registers[out])
        first, second = uses
        return lambda registers: rule(registers[first], registers[second], out=registers[out])

    def _target(self, value: int, lasting: bool) -> int:
        if value not in self._of:
            if lasting:
                self._of[value] = self._register()
                self._lasting.append(self._of[value])
            else:
                self._of[value] = self._buffer()
        return self._of[value]

    def _release(self, over: set[int]) -> None:
        buffers = set(self._buffers)
        self._free += sorted({self._of[value] for value in over if self._of.get(value) in buffers} - set(self._free))

    def _choice(self, branches: tuple[Part, Part], condition: int, out: int) -> Step:
        """Return the step of a choice; a branch that no lane takes is not computed."""
        yes, yes_at, yes_made = self._branch(branches[0], out)
        no, no_at, no_made = self._branch(branches[1], None)
        if no_made:
            self._release({branches[1].result or 0})

        def step(registers: Registers) -> None:
            truth = registers[condition]
            if truth.dtype is F8:
                truth = truth != 0.0
            if truth.all():
                _run(yes, registers)
                if not yes_made:
                    np.copyto(registers[out], registers[yes_at])
            elif not truth.any():
                _run(no, registers)
                if no_made:
                    registers[out], registers[no_at] = registers[no_at], registers[out]
                else:
                    np.copyto(registers[out], registers[no_at])
            else:
                _run(yes, registers)
                _run(no, registers)
                registers[out] = np.where(truth, registers[yes_at], registers[no_at])

        return step

    def _branch(self, part: Part, target: int | None) -> tuple[list[Step] | None, int, bool]:
        """Lay a branch out: its steps, the register of its result, and whether that is the branch's own."""
        if part.result is None:
            return None, 0, False
        own = {operation.gives: operation for operation in part.operations}
        made = part.result in own and not own[part.result].fresh
        if made and target is not None:
            self._of[part.result] = target
        steps = self._laid_out(part.operations, {part.result}, set())
        return steps, self._operand(part.result), made


def _run(steps: list[Step] | None, registers: Registers) -> None:
    if steps is None:
        raise StepAsideError
    for step in steps:
        step(registers)


def _fresh(rule: Callable[..., Any], uses: list[int], out: int) -> Step:
    def step(registers: Registers) -> None:
        operands = [registers[at] for at in uses]
        result = rule(*operands)
        if result.base is not None or any(result is operand for operand in operands):
            result = result.copy()
        registers[out] = result

    return step
