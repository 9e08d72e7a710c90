"""Findings about shear that enters a formula in the wrong form: tensor for engineering strain, a wrong coefficient.

Each formula is asked what it gives for shear alone; the answer over the shear that went in is a pure number that the
law fixes: 1 for τ = G·γ, 1/2 for the radius of Mohr's circle of strain, √3 for the von Mises stress.
"""

from __future__ import annotations

import math
import re
from collections.abc import Iterator
from dataclasses import dataclass

from doubler.check.fills import walk
from doubler.check.finding import Finding
from doubler.check.margin_allowables import pointed
from doubler.check.recognise import quantity_at
from doubler.check.trials import Trials
from doubler.units import kind
from doubler.workbook.addresses import cell_name
from doubler.workbook.examined import Examined, Key, cell_name_of, shown
from doubler.workbook.syntax import Binary, Call, Number

_SHEAR_STRAIN = re.compile(r"\bshear strain\b|(?:^|[\s(,=])(?:γ|gamma)(?:_?\w{1,6})?(?=$|[\s),=:\[])", re.IGNORECASE)
_TENSOR = re.compile(
    r"\btensor(?:ial)?\b|(?:^|[\s(,=])(?:ε|eps|epsilon|e)_?(?:xy|yz|xz|zx|12|13|23)(?=$|[\s),=:\[])", re.IGNORECASE
)
_STRAIN = re.compile(
    r"\bstrain\b|\bgau?ge\b|(?:^|[\s(,=])(?:ε|eps|epsilon)(?:_?\w{1,6})?(?=$|[\s),=:\[])", re.IGNORECASE
)
_SHEAR_STRESS = re.compile(
    r"\bshear(?:ing)? stress\b|(?:^|[\s(,=])(?:τ|tau)(?:_?\w{1,6})?(?=$|[\s),=:\[])", re.IGNORECASE
)
_STRESS = re.compile(r"\bstress\b|(?:^|[\s(,=])(?:σ|τ|sigma|tau)(?:_?\w{1,6})?(?=$|[\s),=:\[])", re.IGNORECASE)
_MISES = re.compile(
    r"\b(?:von[ -]?mises|mises|hmh|equivalent stress|effective stress)\b|σ_?(?:vm|v|eq)\b", re.IGNORECASE
)
_TRESCA = re.compile(r"\btresca\b|\bmaximum shear theory\b", re.IGNORECASE)
_CIRCLE = re.compile(r"\bprincipal\b|\bmohr\b|\bradius of (?:the )?circle\b|^radius\b|\bcircle radius\b", re.IGNORECASE)
_FIRST = re.compile(r"(?:^|[\s(,=])(?:ε|eps|epsilon|σ|sigma)_?[123I]{1,3}(?=$|[\s),=:\[])", re.IGNORECASE)
"""Symbols of principal values; along a ply's fibre they stand for others, so that the formula must be a circle's."""
_RADIUS = re.compile(r"\bradius\b", re.IGNORECASE)
_NOT_VALUE = re.compile(r"\b(?:direction|angle|allowable|strength|sum|invariant)\b", re.IGNORECASE)

CLOSE = 0.01


@dataclass(frozen=True)
class _Question:
    """A formula asked for shear alone: what went in, what is due, and how the finding is told."""

    key: Key
    shear: Key
    number: int
    doubled: int
    unit_in: float
    unit_out: float
    due: tuple[float, ...]
    law: str
    modulus: Key | None = None


def shear_findings(book: Examined) -> Iterator[Finding]:
    """Find shear in the wrong form, and Young's modulus where the shear modulus belongs, or the reverse."""
    yield from _Shear(book).findings()


class _Shear:
    def __init__(self, book: Examined) -> None:
        self.book = book
        self.trials = Trials(book)
        self.questions: list[_Question] = []
        self.rosettes: list[tuple[Key, list[Key], list[int], bool]] = []
        self._words: dict[Key, str] = {}
        self.stress, self.ratio = kind("stress").dimension, kind("ratio").dimension

    def findings(self) -> Iterator[Finding]:
        for group in self.book.graph.groups:
            if group.tree is not None:
                self._look_at((self.book.workbook.sheets[group.run.sheet].name, group.run.cell(0)))
        if not self.questions and not self.rosettes:
            return
        self.trials.run()
        for question in self.questions:
            yield from self._judge(question)
        for key, strains, numbers, tensor in self.rosettes:
            yield from self._judge_rosette(key, strains, numbers, tensor)

    def words(self, key: Key) -> str:
        """Return the words that name a cell: those at its left, in a table its headers."""
        known = self._words.get(key)
        if known is None:
            label = self.book.label(key)
            left, above = " ".join(label.left), " ".join(reversed(label.above[:2]))
            known = self._words[key] = left if _STRESS.search(left) or _STRAIN.search(left) else f"{left} {above}"
        return known

    def _dimension(self, key: Key) -> object:
        declared = self.book.declarations.unit(*key)
        return None if declared is None else declared.unit.dimension.without_angle()  # γ may be given in rad

    def _scale(self, key: Key) -> float:
        declared = self.book.declarations.unit(*key)
        return 1.0 if declared is None else declared.unit.scale

    def _look_at(self, key: Key) -> None:
        words, dimension = self.words(key), self._dimension(key)
        strains = dimension in (self.ratio, None) and bool(_STRAIN.search(words) or _SHEAR_STRAIN.search(words)
                                                           or _CIRCLE.search(words))  # fmt: skip
        circle = bool(_CIRCLE.search(words) or (_FIRST.search(words) and self._has_root(key)))
        stresses = dimension == self.stress and bool(_STRESS.search(words) or _CIRCLE.search(words))
        if not (strains or stresses) or _NOT_VALUE.search(words) or self.book.number(key) is None:
            return
        reads = list(dict.fromkeys(self.book.cells_read(key)))
        if len(reads) == 1 and strains and self._is_shear_strain(key):
            self._restated(key, reads[0])
        if not 2 <= len(reads) <= 12:
            return
        shear_strains = [read for read in reads if self._is_shear_strain(read)]
        shear_stresses = [
            read for read in reads if self._dimension(read) == self.stress and _SHEAR_STRESS.search(self.words(read))
            and quantity_at(self.book, read) is None
        ]  # fmt: skip
        if stresses and _SHEAR_STRESS.search(words) and len(shear_strains) == 1:
            self._law_of_hooke(key, shear_strains[0], reads, inverse=False)
        elif strains and self._is_shear_strain(key) and len(shear_stresses) == 1 and not shear_strains:
            self._law_of_hooke(key, shear_stresses[0], reads, inverse=True)
        elif stresses and len(shear_stresses) == 1 and not shear_strains:
            self._criterion(key, words, shear_stresses[0], reads, circle=circle)
        elif strains and len(shear_strains) == 1 and circle:
            tensor = bool(_TENSOR.search(self.words(shear_strains[0])))
            self._alone(key, shear_strains[0], reads, (1.0 if tensor else 0.5,), "Mohr's circle of strain")
        elif strains and self._is_shear_strain(key) and not shear_strains and not shear_stresses:
            self._rosette(key, [read for read in reads if _STRAIN.search(self.words(read))])

    def _is_shear_strain(self, key: Key) -> bool:
        words = self.words(key)
        if self._dimension(key) not in (self.ratio, None):
            return False
        return bool(_SHEAR_STRAIN.search(words) or _TENSOR.search(words))

    def _restated(self, key: Key, read: Key) -> None:
        """Ask a shear strain made of one other strain: tensor of engineering, or twice the circle's radius."""
        tensor, words = bool(_TENSOR.search(self.words(key))), self.words(read)
        if self._dimension(read) not in (self.ratio, None):
            return
        if self._is_shear_strain(read) and bool(_TENSOR.search(words)) != tensor:
            self._ask(key, read, [], self._scale(read), (0.5 if tensor else 2.0,), "tensor shear strain", None)
        elif _RADIUS.search(words) and not self._is_shear_strain(read):
            self._ask(key, read, [], self._scale(read), (1.0 if tensor else 2.0,), "Mohr's circle of strain", None)

    def _law_of_hooke(self, key: Key, shear: Key, reads: list[Key], *, inverse: bool) -> None:
        named = {read: quantity_at(self.book, read) for read in reads}
        moduli = [read for read, name in named.items() if name in ("shear modulus", "young's modulus")]
        if len(moduli) != 1 or "poisson's ratio" in named.values():
            return
        strain = key if inverse else shear
        due = 2.0 if _TENSOR.search(self.words(strain)) else 1.0
        law = "γ = τ/G" if inverse else "τ = G·γ"
        value = self.book.number(moduli[0])
        if not value:
            return
        modulus = value * self._scale(moduli[0])
        unit = self._scale(shear) / modulus if inverse else self._scale(shear) * modulus
        self._ask(key, shear, [], unit, (1 / due if inverse else due,), law, moduli[0])

    def _has_root(self, key: Key) -> bool:
        """Return whether a formula takes a square root and turns nothing by an angle."""
        tree = self.book.tree(key)
        names = {node.name for node in walk(tree) if isinstance(node, Call)} if tree is not None else set()
        powers = tree is not None and any(
            isinstance(node, Binary) and node.operator == "^" and node.right == Number(0.5, "0.5")
            for node in walk(tree)
        )
        return ("SQRT" in names or powers) and not names & {"SIN", "COS", "TAN"}

    def _criterion(self, key: Key, words: str, shear: Key, reads: list[Key], *, circle: bool) -> None:
        if _MISES.search(words):
            named = re.search("mises|hmh", words, re.IGNORECASE) or re.search(r"σ_?vm\b", words)
            due = (math.sqrt(3.0),) if named else (math.sqrt(3.0), 2.0)
            self._alone(key, shear, reads, due, "the von Mises stress")
        elif _TRESCA.search(words):
            self._alone(key, shear, reads, (2.0,), "Tresca's stress")
        elif circle:
            self._alone(key, shear, reads, (1.0,), "Mohr's circle of stress")

    def _alone(self, key: Key, shear: Key, reads: list[Key], due: tuple[float, ...], law: str) -> None:
        others = [read for read in reads if read != shear]
        if any(self._dimension(read) not in (self._dimension(shear), None) for read in others):
            return
        self._ask(key, shear, others, self._scale(shear), due, law, None)

    def _ask(
        self, key: Key, shear: Key, zero: list[Key], unit: float, due: tuple[float, ...], law: str, modulus: Key | None
    ) -> None:
        none = dict.fromkeys(zero, 0.0)
        number = self.trials.ask({**none, shear: 1024.0}, key)
        doubled = self.trials.ask({**none, shear: 2048.0}, key)
        self.questions.append(_Question(key, shear, number, doubled, unit, self._scale(key), due, law, modulus))

    def _judge(self, question: _Question) -> Iterator[Finding]:
        one, two = self.trials.answers[question.number], self.trials.answers[question.doubled]
        if one is None or two is None or not one or not math.isclose(two, 2 * one, rel_tol=1e-6):
            return
        factor = abs(one) * question.unit_out / (1024.0 * question.unit_in)
        if any(abs(factor / due - 1) < CLOSE for due in question.due):
            swapped = question.modulus is not None and quantity_at(self.book, question.modulus) == "young's modulus"
            if swapped:
                yield self._wrong_modulus(question)
            return
        if question.modulus is not None and quantity_at(self.book, question.modulus) != "shear modulus":
            return
        due = question.due[0]
        if not 0.2 < factor / due < 5:
            return  # a factor of units: another rule's
        yield self._wrong_form(question, factor, due)

    def _wrong_form(self, question: _Question, factor: float, due: float) -> Finding:
        key = question.key
        if "Mises" in question.law or "Tresca" in question.law:
            what = (
                f"{question.law} of shear alone is {shown(due)} times it, {shown(due * due)} under the root, and "
                f"this formula gives {shown(factor)} times, {shown(factor * factor)} under the root"
            )
            advice = f"write {shown(round(due * due, 6))} before the square of the shear stress"
        else:
            what = (
                f"the formula gives {shown(factor)} times the shear in {cell_name_of(question.shear)} where "
                f"{question.law} gives {shown(due)} times"
            )
            advice = "tensor shear strain is half the engineering shear strain: use one of them throughout"
        return Finding(
            key[0],
            cell_name(*key[1]),
            "shear-strain-form",
            "error",
            f"Shear enters in the wrong form: {what}; {advice}.",
            shown(factor),
            shown(due),
            tuple(dict.fromkeys(cell_name_of(k) for k in (question.shear, question.modulus) if k is not None)),
        )

    def _wrong_modulus(self, question: _Question) -> Finding:
        key, modulus = question.key, question.modulus
        assert modulus is not None
        sheet = self.book.workbook.sheet(modulus[0])
        assert sheet is not None
        right = [
            (modulus[0], address)
            for address, cell in sheet.cells.items()
            if cell.value is not None and quantity_at(self.book, (modulus[0], address)) == "shear modulus"
        ]
        cell = self.book.cell(key)
        formula = (cell.formula if cell is not None else None) or ""
        mended = pointed(formula, key, modulus, right[0]) if len(right) == 1 else None
        advice = f"write ={mended}" if mended else "write G, or E/(2(1 + ν))"
        return Finding(
            key[0],
            cell_name(*key[1]),
            "modulus-mismatch",
            "error",
            f"Young's modulus ({cell_name_of(modulus)}) stands where the shear modulus belongs, as {question.law}; "
            f"{advice}.",
            f"={formula}",
            f"={mended}" if mended else "",
            (cell_name_of(modulus), cell_name_of(question.shear)),
        )

    def _rosette(self, key: Key, strains: list[Key]) -> None:
        if not 2 <= len(strains) <= 3 or any(self._dimension(read) not in (self.ratio, None) for read in strains):
            return
        numbers = [
            self.trials.ask({other: 1024.0 if other == read else 0.0 for other in strains}, key) for read in strains
        ]
        self.rosettes.append((key, strains, numbers, bool(_TENSOR.search(self.words(key)))))

    def _judge_rosette(self, key: Key, strains: list[Key], numbers: list[int], tensor: bool) -> Iterator[Finding]:
        shares = []
        for read, number in zip(strains, numbers, strict=True):
            answer = self.trials.answers[number]
            if answer is None:
                return
            shares.append(abs(answer) * self._scale(key) / (1024.0 * self._scale(read)))
        shares.sort()
        engineering = [[1.0, 1.0, 2.0], [2 / math.sqrt(3)] * 2, [0.0, *[2 / math.sqrt(3)] * 2]]
        for law in engineering:
            for halved in (False, True):
                due = [share / 2 if halved else share for share in law]
                if len(due) == len(shares) and all(abs(a - b) < CLOSE for a, b in zip(shares, due, strict=True)):
                    if halved != tensor:
                        yield self._half(key, strains, halved)
                    return

    def _half(self, key: Key, strains: list[Key], halved: bool) -> Finding:
        cell = self.book.cell(key)
        formula = (cell.formula if cell is not None else None) or ""
        mended = f"2*({formula})" if halved else f"({formula})/2"
        is_, due = ("tensor", "engineering") if halved else ("engineering", "tensor")
        value = self.book.number(key) or 0.0
        return Finding(
            key[0],
            cell_name(*key[1]),
            "shear-strain-form",
            "error",
            f"The cell is labelled as {due} shear strain and the rosette's formula gives the {is_} shear strain"
            f" ({shown(value)} as written, {shown(value * (2 if halved else 0.5))} when mended); write ={mended}, or "
            "label it so.",
            f"={formula}",
            f"={mended}",
            tuple(cell_name_of(read) for read in strains),
        )
