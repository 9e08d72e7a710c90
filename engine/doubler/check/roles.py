"""What part a number plays in a strength check: allowable, applied, factor, margin; for which mode, at which level.

The words and symbols are the table ``terms.toml``; a policy file extends it. A role is only given where the words
and the declared unit agree.
"""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import lru_cache
from importlib.resources import files
from typing import Any

from doubler.check.recognise import quantity_at
from doubler.units import kind
from doubler.workbook.examined import Examined, Key
from doubler.workbook.unit_text import read_unit_text

Terms = Mapping[str, Mapping[str, Any]]

ALLOWABLE, APPLIED, FACTOR, MARGIN, RESERVE, USED = (
    "allowable", "applied", "factor", "margin of safety", "reserve factor", "utilisation",
)  # fmt: skip


@dataclass(frozen=True, slots=True)
class Role:
    """What part a number plays.

    Attributes
    ----------
    part
        `ALLOWABLE`, `APPLIED`, `FACTOR`, `MARGIN`, `RESERVE` or `USED`.
    modes
        The modes of failure or loading that its words name: shear, bearing, tension …
    level
        ``limit``, ``yield`` or ``ultimate``; empty where the words name none or several.
    words
        The words that say so.
    """

    part: str
    modes: frozenset[str]
    level: str
    words: str


def _alternatives(words: Iterable[str]) -> re.Pattern[str]:
    """Return a pattern for words of several letters, without regard to case."""
    texts = sorted(words, key=len, reverse=True)
    return re.compile(rf"(?<![\w-])(?:{'|'.join(map(re.escape, texts)) or '(?!)'})(?![\w-])", re.IGNORECASE)


def _exact(symbols: Iterable[str]) -> re.Pattern[str]:
    texts = sorted(symbols, key=len, reverse=True)
    body = "|".join(map(re.escape, texts)) or "(?!)"
    return re.compile(rf"(?:^|[\s(,=:\[])(?:{body})(?:_[\w.,]{{1,12}})?(?=$|[\s),=:\[\]])")


class Table:
    """The words and symbols of the roles, compiled."""

    def __init__(self, more: Terms | None = None) -> None:
        own: dict[str, dict[str, Any]] = tomllib.loads(
            files("doubler.check").joinpath("terms.toml").read_text(encoding="utf-8")
        )
        for section, entries in (more or {}).items():
            for name, texts in entries.items():
                own[section][name] = [*own[section].get(name, ()), *texts]
        self.strain = kind("strain").dimension
        self.parts: dict[str, tuple[re.Pattern[str], re.Pattern[str], frozenset[Any]]] = {}
        for part in (FACTOR, ALLOWABLE, APPLIED):
            entry = own[part]
            dimensions = frozenset(kind(name).dimension for name in entry["units"])
            self.parts[part] = (_alternatives(entry["words"]), _exact(entry["symbols"]), dimensions)
        self.modes = {name: self._modifier(texts) for name, texts in own["mode"].items()}
        self.levels = {name: self._modifier(texts) for name, texts in own["level"].items()}
        self._modifiers = lru_cache(maxsize=65536)(self._modifiers_of)

    @staticmethod
    def _modifier(texts: Iterable[str]) -> tuple[re.Pattern[str], re.Pattern[str]]:
        words = [text for text in texts if text.islower() and len(text) > 2]
        return _alternatives(words), _exact(text for text in texts if text not in words)

    def modifiers(self, words: str) -> tuple[frozenset[str], str]:
        """Return the modes and the level that words name."""
        return self._modifiers(words)

    def _modifiers_of(self, words: str) -> tuple[frozenset[str], str]:
        modes = frozenset(name for name, (by, at) in self.modes.items() if by.search(words) or at.search(words))
        levels = [name for name, (by, at) in self.levels.items() if by.search(words) or at.search(words)]
        return modes, levels[0] if len(levels) == 1 else ""

    def part_of(self, words: str, dimension: Any) -> str | None:
        """Return the part that words and a unit's dimension agree on."""
        for part, (by_words, symbols, dimensions) in self.parts.items():
            if dimension not in dimensions:
                continue
            if dimension == self.strain and part != FACTOR and not _STRAIN.search(words):
                continue  # an allowed ratio or damage is no allowable strain
            if by_words.search(words) or symbols.search(words):
                return part
        return None


_STRAIN = re.compile(r"\bstrains?\b|[εµμ]", re.IGNORECASE)
_OTHER = re.compile(r"\b(?:modulus|concentration|intensity factor|range|amplitude|mean stress)\b", re.IGNORECASE)


def stacked_headers(book: Examined, key: Key) -> list[str]:
    """Return the header texts above a cell that stand right on one another, the nearest first."""
    layout = book.declarations.labels.layout(key[0])
    found: list[str] = []
    last = None
    for row, column in layout.headers(key[1]):
        if last is not None and last - row > 1 and (len(found) > 1 or read_unit_text(found[0]).unit is None):
            break  # only a row of units may stand off from its headers
        found.append(layout.texts[row, column])
        last = row
    return found


class Roles:
    """The roles of a workbook's cells, found when asked for."""

    def __init__(self, book: Examined, table: Table | None = None) -> None:
        self.book = book
        self.table = table or Table()
        self._known: dict[Key, Role | None] = {}

    def at(self, key: Key) -> Role | None:
        """Return a cell's role, or None where its words and unit do not agree on one."""
        if key not in self._known:
            self._known[key] = self._find(key)
        return self._known[key]

    def _find(self, key: Key) -> Role | None:
        book = self.book
        if book.number(key) is None:
            return None
        label = book.label(key)
        texts = [" ".join(label.left), *stacked_headers(book, key), label.name.replace("_", " "), label.name]
        texts = [text for text in dict.fromkeys(texts) if text]
        named = quantity_at(book, key)
        if named in (MARGIN, RESERVE, USED):
            words = next((text for text in texts if self.names(text, named)), texts[0])
            modes, level = self.table.modifiers(words)
            return Role(named, modes, level, words)
        if named is not None:
            return None
        declared = book.declarations.unit(*key)
        dimension = kind("ratio").dimension if declared is None else declared.unit.dimension
        for words in texts:
            if _OTHER.search(words):
                return None
            part = self.table.part_of(words, dimension)
            if part is None:
                continue
            modes, level = self.table.modifiers(words)
            return Role(part, modes, level, words)
        return None

    @staticmethod
    def names(words: str, quantity: str) -> bool:
        """Return whether words name a quantity."""
        from doubler.check.recognise import quantity_of

        return quantity_of(words) == quantity
