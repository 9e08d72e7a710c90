"""Findings about a diameter used as a radius, or the reverse, where the dimension is right and the labels tell.

A formula that makes an area, a second moment or a section modulus of one length has a coefficient that only one of
the two can have: π/4·d² and π·r², π/64·d⁴ and π/4·r⁴. A stress from a pressure and a thickness, or from a moment and a
second moment, takes half of what is measured across the whole section. Each formula is asked with numbers of our own;
what it gives over what went in is the coefficient. The formulas are textbook ones (common practice).
"""

from __future__ import annotations

import math
import re
from collections.abc import Iterator
from dataclasses import dataclass

from doubler.check.fills import walk
from doubler.check.finding import Finding
from doubler.check.trials import Trials
from doubler.units import kind
from doubler.workbook.addresses import cell_name
from doubler.workbook.examined import Examined, Key, cell_name_of
from doubler.workbook.syntax import Call, Number

_DIAMETER = re.compile(
    r"\b(?:dia|diam|diameter|diameters|o\.?d\.?|i\.?d\.?|ø)\b|ø|⌀|(?:^|\s)[dD](?:_?[oim])?(?=$|[\s,([=])", re.IGNORECASE
)
_RADIUS = re.compile(r"\b(?:radius|radii)\b", re.IGNORECASE)
_WHOLE = re.compile(r"\b(?:diameter|dia|depth|height)\b", re.IGNORECASE)
_NOT_ROUND = re.compile(
    r"\b(?:surface|pitch|bolt circle|fillet|gyration|bend|lateral|sphere|spherical)\b", re.IGNORECASE
)
_HOOP = re.compile(r"\b(?:hoop|circumferential|tangential)\b", re.IGNORECASE)
_MEMBRANE = re.compile(r"\b(?:wall|thickness|plate|shell)\b|(?:^|\s)[te](?=$|[\s,([=])", re.IGNORECASE)

_CLOSE = 2e-3
_BY_POWER: dict[int, tuple[tuple[float, ...], tuple[float, ...]]] = {
    2: ((math.pi / 4,), (math.pi,)),
    3: ((math.pi / 32, math.pi / 16), (math.pi / 4, math.pi / 2)),
    4: ((math.pi / 64, math.pi / 32), (math.pi / 4, math.pi / 2)),
}
"""The coefficients that go with a diameter and with a radius, for area, section moduli and second moments."""


@dataclass(frozen=True)
class _Question:
    key: Key
    length: Key
    number: int
    over: float
    right: tuple[float, ...]
    wrong: tuple[float, ...]
    meant: str
    taken: str


def round_findings(book: Examined) -> Iterator[Finding]:
    """Find diameters used as radii and radii used as diameters."""
    asker = _Round(book)
    for group in book.graph.groups:
        if group.tree is not None:
            asker.look_at((book.workbook.sheets[group.run.sheet].name, group.run.cell(0)))
    if not asker.questions:
        return
    asker.trials.run()
    for question in asker.questions:
        answer = asker.trials.answers[question.number]
        if answer:
            factor = abs(answer) / question.over
            if any(abs(factor / k - 1) < _CLOSE for k in question.wrong):
                yield _finding(book, question, factor)


class _Round:
    def __init__(self, book: Examined) -> None:
        self.book = book
        self.trials = Trials(book)
        self.questions: list[_Question] = []
        self.kinds = {name: kind(name).dimension for name in ("length", "area", "volume", "second_moment", "stress")}
        self.moment = kind("moment").dimension.without_angle()

    def look_at(self, key: Key) -> None:
        """Ask a formula, if what it gives and what it reads are such that a radius and a diameter can be told apart."""
        own = self._dimension(key)
        powers = (("area", 2), ("volume", 3), ("second_moment", 4))
        power = next((power for name, power in powers if own == self.kinds[name]), None)
        if power is None and own != self.kinds["stress"]:
            return
        words = self.book.label(key).text
        if _NOT_ROUND.search(words):
            return
        reads = list(dict.fromkeys(self.book.cells_read(key)))
        if not 1 <= len(reads) <= 4:
            return
        if power is not None:
            self._section(key, reads, power)
        elif len(reads) == 3:
            self._stress(key, words, reads)

    def _section(self, key: Key, reads: list[Key], power: int) -> None:
        if not self._has_pi(key) or any(self._dimension(read) != self.kinds["length"] for read in reads):
            return
        named = [self._named(read) for read in reads]
        for_diameter, for_radius = _BY_POWER[power]
        for read, name in zip(reads, named, strict=True):
            if name is None or (len(reads) > 1 and named.count(name) != len(reads)):
                return
            right, wrong = (for_diameter, for_radius) if name == "diameter" else (for_radius, for_diameter)
            none = {other: 0.0 for other in reads if other != read}
            self._ask(key, read, {**none, read: 1024.0}, 1024.0**power, power, right, wrong, name)

    def _stress(self, key: Key, words: str, reads: list[Key]) -> None:
        by = {self._dimension(read): read for read in reads}
        lengths = [read for read in reads if self._dimension(read) == self.kinds["length"]]
        if _HOOP.search(words) and self.kinds["stress"] in by and len(lengths) == 2:
            walls = [read for read in lengths if _MEMBRANE.search(self.book.label(read).text)]
            round_ones = [read for read in lengths if read not in walls and self._named(read)]
            if len(walls) == len(round_ones) == 1:
                self._ratio(key, round_ones[0], {by[self.kinds["stress"]]: 64.0, walls[0]: 2.0}, 32.0)
        elif self.kinds["second_moment"] in by and len(lengths) == 1 and len(by) == 3:
            moment = next((read for read in reads if self._dimension(read) == self.moment), None)
            if moment is not None and (self._named(lengths[0]) or _WHOLE.search(self.book.label(lengths[0]).text)):
                self._ratio(key, lengths[0], {moment: 64.0, by[self.kinds["second_moment"]]: 2.0}, 32.0)

    def _ratio(self, key: Key, length: Key, others: dict[Key, float], over: float) -> None:
        name = self._named(length) or "diameter"
        right, wrong = ((0.5,), (1.0,)) if name == "diameter" else ((1.0,), (0.5,))
        units = [self._scale(other) for other in others]
        scale = units[0] / units[1]
        self._ask(key, length, {**others, length: 1024.0}, over * 1024.0 * scale, 1, right, wrong, name)

    def _ask(
        self,
        key: Key,
        length: Key,
        changes: dict[Key, float],
        over: float,
        power: int,
        right: tuple[float, ...],
        wrong: tuple[float, ...],
        name: str,
    ) -> None:
        number = self.trials.ask(changes, key)
        due = over * self._scale(length) ** power / self._scale(key)
        taken = "radius" if name == "diameter" else "diameter"
        self.questions.append(_Question(key, length, number, due, right, wrong, name, taken))

    def _named(self, key: Key) -> str | None:
        words = self.book.label(key).text
        if _NOT_ROUND.search(words):
            return None
        diameter, radius = bool(_DIAMETER.search(words)), bool(_RADIUS.search(words))
        return None if diameter == radius else "diameter" if diameter else "radius"

    def _dimension(self, key: Key) -> object:
        declared = self.book.declarations.unit(*key)
        return None if declared is None else declared.unit.dimension.without_angle()

    def _scale(self, key: Key) -> float:
        declared = self.book.declarations.unit(*key)
        return 1.0 if declared is None else declared.unit.scale

    def _has_pi(self, key: Key) -> bool:
        tree = self.book.tree(key)
        if tree is None:
            return False
        return any(
            (isinstance(node, Call) and node.name == "PI")
            or (isinstance(node, Number) and abs(node.value - math.pi) < 2e-3)
            for node in walk(tree)
        )


def _finding(book: Examined, question: _Question, factor: float) -> Finding:
    cell = book.cell(question.key)
    formula = (cell.formula if cell is not None else None) or ""
    label = book.label(question.length).text
    times = min((factor / k for k in question.right), key=lambda ratio: abs(math.log2(ratio) - round(math.log2(ratio))))
    size = f"{times:.4g} times too large" if times > 1 else f"{1 / times:.4g} times too small"
    halved = question.meant == "diameter"
    taken = "half of it (a radius, an extreme fibre)" if halved else "a diameter"
    return Finding(
        question.key[0],
        cell_name(*question.key[1]),
        "unit-scale",
        "error",
        f"{cell_name(*question.length[1])} is labelled {label!r} and the formula takes it for {taken}: the result is "
        f"{size}; {'halve' if halved else 'double'} it in the formula, or mend the coefficient.",
        f"={formula}",
        "",
        (cell_name_of(question.length),),
    )
