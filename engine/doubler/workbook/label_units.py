"""Units inside a label's own text: in its bracket, behind its comma or slash, at its end; and in a note for a sheet."""

from __future__ import annotations

import re
from functools import lru_cache

from doubler.units import Unit
from doubler.workbook.roles import is_pure_number
from doubler.workbook.unit_text import UnitText, phrase_unit, read_unit_text, role_agrees

_SYMBOL = re.compile(r"^[A-Za-zΔσετθαβνρδ](?:[a-z]?\d{0,2}|_\w{1,6})$")
_BARE = re.compile(r"^[A-Za-z]{1,12}[ _.-]?\d{1,6}[A-Za-z]?$")
_BRACKET = re.compile(r"([\[(])([^\[\]()]*(?:\([^()]*\)[^\[\]()]*)?)[\])]")
_COMMA = re.compile(r",\s*(\S{1,20}(?:\s\S{1,8})?)\s*[:=]?\s*$")
_SLASH = re.compile(r"^(?P<label>.*\S)\s*/\s*(?P<unit>\(?[^\s/].*)$")
_TAIL = re.compile(r"^(?P<label>.*\S)\s+(?:in\s+)?(?P<unit>[^\s()\[\]]+)\s*[:=]?\s*$")
_NOUN_FOLLOWS = re.compile(
    r"\b(?:of|per|the|an?|for|at|on|to|and|each|round|square|flat|solid|hollow|hex|tie|tension|torsion|steel|cross)$",
    re.IGNORECASE,
)
_SHEET_NOTE = re.compile(
    r"^(?:note\s*:?\s*)?(?:all\s+)?(?P<what>\w+(?:\s+and\s+\w+)?)\s+(?:are\s+)?(?:given\s+)?in\s+(?P<unit>[^\s,;.]+)"
    r"(?:\s+(?:unless|u\.?n\.?o).*)?\.?$",
    re.IGNORECASE,
)


def bracket_unit(text: str) -> tuple[Unit | None, str, str]:
    """Return the unit in a label's bracket or behind its comma, its text, and the complaint of one that is none."""
    complaint, wrong = "", ""
    for match in reversed(list(_BRACKET.finditer(text))):
        inner = match[2].strip()
        if not inner:
            continue
        words = text[: match.start()] + " " + text[match.end() :]
        read = read_unit_text(inner)
        if read.unit is not None and _fits(read, words, square=match[1] == "["):
            return read.unit, match.group(), ""
        if read.complaint and not complaint:
            complaint, wrong = read.complaint, match.group()
        phrase = phrase_unit(inner)
        if phrase.unit is not None:
            return phrase.unit, match.group(), ""
    comma = _COMMA.search(text)
    if comma is not None:
        read = read_unit_text(comma[1])
        if read.unit is not None and comma[1] != "1" and _fits(read, text[: comma.start()], square=False):
            return read.unit, comma[1], ""
        if read.complaint and not complaint:
            complaint, wrong = read.complaint, comma[1]
    return None, wrong, complaint


def _fits(read: UnitText, words: str, *, square: bool) -> bool:
    if not read.doubtful or read.unit is None:
        return True
    if square and read.unit.text == "in":
        return True  # nothing else is written so; where the label speaks of an area, the unit is wrong and said to be
    agrees = role_agrees(read.unit, words)
    if square or read.unit.text == "in" or _SYMBOL.match(words.strip(" ,:=")):
        return agrees is not False
    return agrees is True


def loose_unit(text: str) -> Unit | None:
    """Return the unit at the end of a label that has it without a bracket: ``Force / kN``, ``Stress in MPa``.

    A text that is a unit as a whole, such as ``kN/mm``, is a unit cell and no label with a unit at its end.
    """
    if read_unit_text(text).unit is not None:
        return None
    for pattern in (_SLASH, _TAIL):
        match = pattern.match(text)
        if match is None or len(text) > 60:
            continue
        read = read_unit_text(match["unit"])
        if read.doubtful and _NOUN_FOLLOWS.search(match["label"]):
            continue  # 'Section modulus of bar'
        if read.unit is None or match["unit"].casefold() in ("ratio", "strain", "-", "1", "–", "%"):
            continue
        agrees = role_agrees(read.unit, match["label"])
        symbol = bool(_SYMBOL.match(match["label"])) and not read.doubtful
        if (
            agrees is True
            or (agrees is None and symbol)
            or (agrees is None and not read.doubtful and pattern is _SLASH and len(match["unit"]) > 1)
        ):
            return read.unit
    return None


@lru_cache(maxsize=65536)
def is_bare_name(text: str) -> bool:
    """Return whether a text at the start of a row is a mere name that no unit can be in: ``LC 12``, ``Bolt 3``."""
    return bool(_BARE.match(text)) and read_unit_text(text).unit is None and not is_pure_number(text)


def sheet_note_unit(text: str) -> Unit | None:
    """Return the unit of a note for a whole sheet: ``All dimensions in mm unless noted``."""
    if not 10 <= len(text) <= 90 or " in " not in text:
        return None
    match = _SHEET_NOTE.match(text)
    if match and (text.casefold().startswith(("all", "note")) or "unless" in text.casefold()):
        return read_unit_text(match["unit"]).unit
    return None
