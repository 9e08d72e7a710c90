"""Two lists of lines laid side by side: which line of the one became which of the other."""

from __future__ import annotations

import re
from bisect import bisect_left
from collections import Counter
from collections.abc import Hashable, Iterator, Sequence
from dataclasses import dataclass
from functools import cached_property

TEXT, NUMBER, FORMULA = "text", "number", "formula"

Token = tuple[Hashable, ...]
"""What a cell holds, without its place: its sort (one of the three above), then what tells it from others."""

_LARGEST_TABLE = 20_000
"""Gaps with more pairs of lines than this are not compared line with line."""
_ALIKE = 0.36
"""Lines with a smaller share in common are two lines and not one that was changed."""
_WORD = re.compile(r"\w+")


@dataclass(frozen=True)
class Line:
    """A row or a column: its tokens in order."""

    tokens: tuple[Token, ...]

    @cached_property
    def keys(self) -> tuple[Hashable | None, ...]:
        """What it is known by, the strictest first; None where it has no such thing."""
        plain = tuple(token for token in self.tokens if token[0] != FORMULA)
        shape = tuple(token if token[0] != NUMBER else NUMBER for token in self.tokens)
        first = next((token for token in self.tokens if token[0] == TEXT), None)
        return self.tokens or None, plain or None, shape or None, first, self.tokens[0] if self.tokens else None

    @cached_property
    def counted(self) -> Counter[Token]:
        """How often it holds each token."""
        return Counter(self.tokens)

    @cached_property
    def words(self) -> frozenset[str]:
        """The words of its texts."""
        return frozenset(w for token in self.tokens if token[0] == TEXT for w in _WORD.findall(str(token[-1])))


def likeness(first: Line, second: Line) -> float:
    """Return the share of two lines that is the same: 1 where all is, 0 where nothing is.

    Examples
    --------
    >>> one = Line((("text", "load"), ("number", 12.0), ("text", "kn")))
    >>> round(likeness(one, Line((("text", "load"), ("number", 13.0), ("text", "kn")))), 2)
    0.89
    """
    every = len(first.tokens) + len(second.tokens)
    if not every:
        return 0.0
    same = 2 * (first.counted & second.counted).total() / every
    words = first.words | second.words
    shared = len(first.words & second.words) / len(words) if words else same
    return (same + 2 * shared) / 3


def aligned(first: Sequence[Line], second: Sequence[Line]) -> dict[int, int]:
    """Return for each line of the first list its line in the second, both by their index; lost lines are left out.

    Parameters
    ----------
    first, second : sequence of Line

    Notes
    -----
    What is the same at both ends and lines that occur once in each list fix the order; what lies between is laid side
    by side by ever weaker keys, and at last by what the lines have in common. Lines that changed places are found
    among the rest by what only they hold.
    """
    found: dict[int, int] = {}
    _between(first, second, (0, len(first), 0, len(second)), 0, found)
    taken = set(found.values())
    left = [i for i in range(len(first)) if i not in found]
    free = [j for j in range(len(second)) if j not in taken]
    for level, least in ((0, 0.0), (3, 0.5)):
        once, other = _unique(first, left, level), _unique(second, free, level)
        for key, i in once.items():
            j = other.get(key)
            if j is not None and i not in found and j not in taken and likeness(first[i], second[j]) >= least:
                found[i] = j
                taken.add(j)
    return found


Gap = tuple[int, int, int, int]


def _between(first: Sequence[Line], second: Sequence[Line], gap: Gap, level: int, found: dict[int, int]) -> None:
    i, i_end, j, j_end = gap
    if i >= i_end or j >= j_end:
        return
    small = (i_end - i) * (j_end - j) <= _LARGEST_TABLE
    if level >= len(first[i].keys):
        if small:
            found.update(_by_likeness(first, second, gap))
        else:
            _ends(first, second, gap, 2, found)
        return
    if level < 2:
        gap = _ends(first, second, gap, level, found)
        i, i_end, j, j_end = gap
    once, other = _unique(first, range(i, i_end), level), _unique(second, range(j, j_end), level)
    pairs = [(a, other[key]) for key, a in once.items() if key in other]
    if level < 2 and not pairs:
        _between(first, second, gap, level + 1, found)
        return
    before = (i, j)
    for a, b in [*_rising(pairs), (i_end, j_end)]:
        _between(first, second, (before[0], a, before[1], b), level + (0 if level < 2 else 1), found)
        if a < i_end:
            found[a] = b
        before = (a + 1, b + 1)


def _ends(first: Sequence[Line], second: Sequence[Line], gap: Gap, level: int, found: dict[int, int]) -> Gap:
    """Match what is the same at both ends of a gap and return the gap that is left."""
    i, i_end, j, j_end = gap
    while i < i_end and j < j_end and first[i].keys[level] == second[j].keys[level] is not None:
        found[i] = j
        i, j = i + 1, j + 1
    while i < i_end and j < j_end and first[i_end - 1].keys[level] == second[j_end - 1].keys[level] is not None:
        i_end, j_end = i_end - 1, j_end - 1
        found[i_end] = j_end
    return i, i_end, j, j_end


def _unique(lines: Sequence[Line], places: Sequence[int], level: int) -> dict[Hashable, int]:
    seen: dict[Hashable, int | None] = {}
    for place in places:
        key = lines[place].keys[level]
        if key is not None:
            seen[key] = None if key in seen else place
    return {key: place for key, place in seen.items() if place is not None}


def _rising(pairs: Sequence[tuple[int, int]]) -> Iterator[tuple[int, int]]:
    """Yield the longest series of pairs that rises on both sides."""
    tails: list[int] = []
    ends: list[int] = []
    before: list[int] = []
    pairs = sorted(pairs)
    for index, (_, b) in enumerate(pairs):
        place = bisect_left(tails, b)
        before.append(ends[place - 1] if place else -1)
        if place == len(tails):
            tails.append(b)
            ends.append(index)
        else:
            tails[place], ends[place] = b, index
    series = []
    at = ends[-1] if ends else -1
    while at >= 0:
        series.append(pairs[at])
        at = before[at]
    yield from reversed(series)


def _by_likeness(first: Sequence[Line], second: Sequence[Line], gap: Gap) -> dict[int, int]:
    """Lay the lines of a gap side by side so that together they have most in common."""
    i, i_end, j, j_end = gap
    rows, columns = i_end - i, j_end - j
    alike = [[likeness(first[i + a], second[j + b]) for b in range(columns)] for a in range(rows)]
    best = [[0.0] * (columns + 1) for _ in range(rows + 1)]
    for a in range(rows - 1, -1, -1):
        for b in range(columns - 1, -1, -1):
            both = alike[a][b] + best[a + 1][b + 1] if alike[a][b] >= _ALIKE else -1.0
            best[a][b] = max(both, best[a + 1][b], best[a][b + 1])
    found = {}
    a = b = 0
    while a < rows and b < columns:
        if alike[a][b] >= _ALIKE and best[a][b] == alike[a][b] + best[a + 1][b + 1]:
            found[i + a] = j + b
            a, b = a + 1, b + 1
        elif best[a][b] == best[a + 1][b]:
            a += 1
        else:
            b += 1
    return found
