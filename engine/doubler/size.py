"""Solving one input so that every load case meets a target: the smallest plate, the largest load."""

from __future__ import annotations

import operator
import re
from collections.abc import Callable
from dataclasses import dataclass
from decimal import ROUND_CEILING, ROUND_FLOOR, Decimal
from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from doubler.cases import bind_cases, open_cases
from doubler.errors import InputError
from doubler.units import Unit, UnitError, convert, parse_quantity
from doubler.workbook.evaluate import NotEvaluated, evaluate
from doubler.workbook.opened import OpenedTemplate, open_template, refuse_unknown
from doubler.workbook.template import Port

ONLY_CASE = "as in the template"
"""What the one case is called where no table of cases is given."""
STEPS = 64
"""Parts into which an interval is cut at each look; between two neighbours the target may change sides once."""
LANES = 1 << 19
"""Values times cases evaluated at once."""

_TARGET = re.compile(r"^\s*(?P<name>.+?)\s*(?P<sign>>=|<=|>|<|≥|≤)\s*(?P<bound>\S.*?)\s*$")
_SIGNS: dict[str, tuple[str, Callable[[Any, Any], Any]]] = {
    ">=": (">=", operator.ge), "≥": (">=", operator.ge), ">": (">", operator.gt),
    "<=": ("<=", operator.le), "≤": ("<=", operator.le), "<": ("<", operator.lt),
}  # fmt: skip


@dataclass(frozen=True, slots=True)
class Target:
    """An output and the bound that it must keep in every case."""

    output: Port
    sign: str
    bound: float

    @property
    def words(self) -> str:
        """The target as it was written, with the bound in the output's unit."""
        return f"{self.output.name} {self.sign} {_shown(self.bound, self.output.unit)}"


@dataclass(frozen=True, slots=True)
class Answer:
    """What was found.

    Attributes
    ----------
    varied
        The input that was solved for.
    target
        What every case must meet.
    stretches
        The values of the input, in the unit of its cell, for which every case meets it: pairs of a first and a last
        value inside the interval. Both ends of a pair meet the target.
    governing
        For each end of a stretch that lies inside the interval: value, governing case, and the output there.
    nearest
        Where there is no stretch: the value at which the target is missed least, the case and the output there.
    low, high
        The interval.
    cases
        How many load cases.
    """

    varied: Port
    target: Target
    stretches: list[tuple[float, float]]
    governing: list[tuple[float, str, float]]
    nearest: tuple[float, str, float | None] | None
    low: float
    high: float
    cases: int

    @property
    def found(self) -> bool:
        """Whether some value meets the target in every case."""
        return bool(self.stretches)

    @property
    def sentence(self) -> str:
        """The answer in words."""
        unit = self.varied.unit
        over = f"in all {self.cases} cases" if self.cases > 1 else "in the one case"
        between = f"between {_shown(self.low, None)} and {_shown(self.high, unit)}"
        if not self.stretches:
            assert self.nearest is not None
            value, case, worst = self.nearest
            there = "it cannot be computed" if worst is None else _shown(worst, self.target.output.unit)
            return (
                f"No {self.varied.name} {between} meets {self.target.words} {over}. "
                f"Nearest is {_shown(value, unit)}: {there} in case {case}."
            )
        parts = []
        for first, last in self.stretches:
            if (first, last) == (self.low, self.high):
                parts.append(f"every value {between}")
            elif last == self.high:
                parts.append(f"{_within(first, unit, ROUND_CEILING)} or more")
            elif first == self.low:
                parts.append(f"{_within(last, unit, ROUND_FLOOR)} or less")
            else:
                start, end = _within(first, None, ROUND_CEILING), _within(last, unit, ROUND_FLOOR)
                parts.append(f"{start} to {end}")
        lines = [f"{self.varied.name}: {' and '.join(parts)} meets {self.target.words} {over} ({between})."]
        starts = {first for first, _ in self.stretches}
        for value, case, worst in self.governing:
            at = _within(value, unit, ROUND_CEILING if value in starts else ROUND_FLOOR)
            governs = "" if case == ONLY_CASE else f" case {case} governs"
            lines.append(f"At {at}{governs}: {self.target.output.name} = {_shown(worst, self.target.output.unit)}.")
        return "\n".join(lines)

    def as_object(self) -> dict[str, Any]:
        """Return the answer as the command line's JSON shows it."""
        return {
            "input": self.varied.name,
            "unit": self.varied.unit.text if self.varied.unit else "",
            "target": self.target.words,
            "found": self.found,
            "between": [self.low, self.high],
            "meets": [list(pair) for pair in self.stretches],
            "governing": [{"at": at, "case": case, "output": worst} for at, case, worst in self.governing],
            "nearest": None if self.nearest is None else dict(zip(("at", "case", "output"), self.nearest, strict=True)),
            "cases": self.cases,
        }


def size(
    template: Path | str,
    vary: str,
    between: tuple[str, str] | list[str],
    target: str,
    cases: Path | str | None = None,
) -> Answer:
    """Find the values of one input for which every case meets a target.

    Parameters
    ----------
    template : Path or str
        An ``.xlsx`` or ``.xlsm`` file.
    vary : str
        The input: a defined name, an address, or a label.
    between : pair of str
        Its smallest and largest value: numbers in the unit of its cell, or numbers with a unit (``12 mm``).
    target : str
        ``NAME >= 0``; also ``<=``, ``<`` and ``>``, and a bound with a unit.
    cases : Path or str, optional
        A table of load cases; without it the template's own values are the one case.

    Returns
    -------
    Answer

    Raises
    ------
    InputError
        The input, the output, the interval or the table will not do.

    Notes
    -----
    The interval is cut into 64 parts and every part in which the target is met at one end only is cut again until its
    ends agree to the last digits. A stretch narrower than a 64th of the interval, within which the target is met
    or missed and left again, is not seen.
    """
    opened = open_template(template)
    varied = opened.template.find_input(vary, "--vary")
    goal = _target(opened, target)
    low, high = (_bound(text, varied, "--between") for text in between)
    if not low < high:
        raise InputError(f"--between {between[0]} {between[1]}: the first value must be the smaller one")
    search = _Search(opened, varied, goal, *_case_values(opened, cases, varied))
    return search.answer(low, high)


def _target(opened: OpenedTemplate, text: str) -> Target:
    match = _TARGET.match(text)
    if match is None:
        raise InputError(f'--target {text!r}: write an output and its bound, such as "ms_ultimate >= 0"')
    output = opened.template.find_output(match["name"])
    return Target(output, _SIGNS[match["sign"]][0], _bound(match["bound"], output, "--target"))


def _bound(text: str, port: Port, option: str) -> float:
    try:
        number = float(text)
    except ValueError:
        try:
            value, unit = parse_quantity(text)
            if port.unit is None:
                raise InputError(f"{option}: {port.place} declares no unit; write {value:g}") from None
            return float(convert(value, unit, port.unit))
        except UnitError as error:
            raise InputError(f"{option}: {error}") from None
    if not np.isfinite(number):
        raise InputError(f"{option}: {text} is no finite number; write a number")
    return number


def _case_values(opened: OpenedTemplate, cases: Path | str | None, varied: Port) -> tuple[list[str], dict[Any, Any]]:
    if cases is None:
        return [ONLY_CASE], {}
    bound = bind_cases(open_cases(cases), opened.template)
    if any((port.sheet, port.address) == (varied.sheet, varied.address) for port in bound.inputs):
        raise InputError(f"{cases} sets {varied.name} itself; drop its column, since --vary solves for it")
    names: list[str] = []
    parts: dict[Any, list[Any]] = {}
    for batch in bound.batches():
        names += batch.names
        for where, values in batch.inputs().items():
            parts.setdefault(where, []).append(values)
    return names, {where: np.concatenate(found) for where, found in parts.items()}


class _Search:
    def __init__(
        self, opened: OpenedTemplate, varied: Port, target: Target, names: list[str], inputs: dict[Any, Any]
    ) -> None:
        self.opened, self.varied, self.target = opened, varied, target
        self.names, self.inputs = names, inputs
        self.upward = target.sign.startswith(">")

    def worst(self, values: NDArray[np.float64]) -> tuple[NDArray[np.float64], NDArray[np.int64]]:
        """Return for each value of the input the output of the governing case, and that case; NaN: not computed."""
        count = len(self.names)
        worst = np.empty(len(values))
        which = np.empty(len(values), np.int64)
        step = max(1, LANES // count)
        for start in range(0, len(values), step):
            part = values[start : start + step]
            grid = self._outputs(part).reshape(len(part), count)
            lost = np.isnan(grid)
            filled = np.where(lost, -np.inf if self.upward else np.inf, grid)
            governing = filled.argmin(axis=1) if self.upward else filled.argmax(axis=1)
            which[start : start + step] = governing
            worst[start : start + step] = grid[np.arange(len(part)), governing]
        return worst, which

    def _outputs(self, part: NDArray[np.float64]) -> NDArray[np.float64]:
        count = len(self.names)
        given = {where: np.tile(values, len(part)) for where, values in self.inputs.items()}
        given[self.varied.sheet, self.varied.address] = np.repeat(part, count)
        port = self.target.output
        where = (port.sheet, port.address)
        value = evaluate(self.opened.template.graph, given, [where]).value(*where)
        if isinstance(value, NotEvaluated):
            raise refuse_unknown(self.opened.package.path, port, value)
        if not isinstance(value, np.ndarray):
            value = np.full(len(part) * count, value, dtype=object)
        if value.dtype == object:
            lanes = [v if type(v) is float else np.nan for v in value.tolist()]
            return np.array(lanes, dtype=float)
        return np.asarray(value, dtype=float)

    def meets(self, worst: NDArray[np.float64]) -> NDArray[np.bool_]:
        """Return where the target is met; what is not computed does not meet it."""
        return np.asarray(_SIGNS[self.target.sign][1](worst, self.target.bound))

    def answer(self, low: float, high: float) -> Answer:
        values = np.linspace(low, high, STEPS + 1)
        worst, which = self.worst(values)
        good = self.meets(worst)
        stretches: list[tuple[float, float]] = []
        governing: list[tuple[float, str, float]] = []
        first: float | None = low if good[0] else None
        for index in np.flatnonzero(good[1:] != good[:-1]).tolist():
            edge, case, there = self._edge(float(values[index]), float(values[index + 1]), rising=bool(good[index + 1]))
            edge, there = self._snapped(edge, there)
            governing.append((edge, self.names[case], there))
            if good[index + 1]:
                first = edge
            elif first is not None:
                stretches.append((first, edge))
                first = None
        if first is not None:
            stretches.append((first, high))
        nearest = None if stretches else self._nearest(values, worst, which)
        return Answer(self.varied, self.target, stretches, governing, nearest, low, high, len(self.names))

    def _edge(self, left: float, right: float, *, rising: bool) -> tuple[float, int, float]:
        """Return the value nearest the change that still meets the target, with its governing case."""
        while True:
            values = np.linspace(left, right, STEPS + 1)
            worst, which = self.worst(values)
            good = self.meets(worst)
            index = int(np.argmax(good)) if rising else int(np.argmin(good)) - 1
            good_one = float(values[index])
            bad_one = float(values[index - 1] if rising else values[index + 1])
            near, far = min(good_one, bad_one), max(good_one, bad_one)
            if (near, far) == (left, right) or far - near <= 1e-13 * max(abs(near), abs(far)):
                return good_one, int(which[index]), float(worst[index])
            left, right = near, far

    def _snapped(self, edge: float, there: float) -> tuple[float, float]:
        """Return the edge without the dust of the search in its last digits, where that meets the target too."""
        plain = float(f"{edge:.12g}")
        worst, _ = self.worst(np.array([plain]))
        return (plain, float(worst[0])) if self.meets(worst)[0] else (edge, there)

    def _nearest(
        self, values: NDArray[np.float64], worst: NDArray[np.float64], which: NDArray[np.int64]
    ) -> tuple[float, str, float | None]:
        if np.isnan(worst).all():
            return float(values[0]), self.names[int(which[0])], None
        index = int(np.nanargmax(worst) if self.upward else np.nanargmin(worst))
        return float(values[index]), self.names[int(which[index])], float(worst[index])


def _within(value: float, unit: Unit | None, toward: str) -> str:
    """Show the end of a stretch rounded into it: a thickness rounded down would miss its margin."""
    exact = Decimal(value)
    if not exact:
        return _shown(value, unit)
    rounded = exact.quantize(Decimal(1).scaleb(exact.adjusted() - 5), rounding=toward)
    return _shown(float(rounded), unit)


def _shown(value: float, unit: Unit | None) -> str:
    text = f"{value:.6g}"
    return f"{text} {unit.text}" if unit is not None and unit.text not in ("", "1") else text
