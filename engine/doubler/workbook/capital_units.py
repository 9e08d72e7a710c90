"""Units written in capitals, as drawing offices letter their sheets: ``LOAD, LBF``, ``STRESS (KSI)``, ``IN-LBF``.

US customary units have no prefixes, so that capitals lose nothing: ``PSI`` is psi wherever it stands. SI units need
their case (``mN`` and ``MN``); in capitals they are read only on a sheet whose words are all in capitals, as a wrong
case stands out there no more.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from functools import lru_cache

_US = "in ft yd lbf kip kips psi ksi lbm slug deg rpm in2 in3 in4 ft2 ft3 sec hr min mph"
_SI = (
    "mm cm km m N kN Pa kPa MPa GPa Nm kNm Nmm kNmm mm2 mm3 mm4 cm2 cm3 cm4 m2 m3 m4 kg g t s Hz kHz rad K J kJ W kW C"
)
_CUSTOMARY = {text.upper(): text for text in _US.split()} | {"LB": "lb", "LBS": "lbs", "PSIG": "psig", "MSI": "Msi"}
_METRIC = {text.upper(): text for text in _SI.split()}
_DEGREES = {"°C": "°C", "°F": "°F"}
_PARTS = re.compile(r"([/·*.\-^() ]+|\d+(?=$|[/·*.\-^)])|[²³⁴])")
_WHERE = (
    re.compile(r"^(?P<unit>[^\s,;=]+(?: [A-Z]{1,4})?)$"),
    re.compile(r"[\[(](?P<unit>[^\[\]()]+)[\])]"),
    re.compile(r",\s*(?P<unit>[^\s,]+)\s*[:=]?$"),
    re.compile(r"(?:\s/|/|\sIN)\s+(?P<unit>[^\s,]+)\s*[:=]?$"),
    re.compile(r"\s(?P<unit>[^\s,]+)\s*[:=]?$"),
)
_ENOUGH = 3
_LETTERS = 4
_CAPITALS = re.compile(r"[A-Z]")


def in_capitals(texts: Iterable[str]) -> bool:
    """Return whether the words of a sheet are all in capitals; a few short texts tell nothing."""
    written = 0
    for text in texts:
        letters = [c for c in text if c.isalpha()]
        if len(letters) < _LETTERS:
            continue
        lower = sum(c.islower() for c in letters)
        if lower > 1 and 10 * lower > len(letters):
            return False
        written += not lower
    return written >= _ENOUGH


@lru_cache(maxsize=65536)
def in_right_case(text: str, metric: bool = False) -> str:
    """Return a text with the unit in it, if that is in capitals, in its right case.

    Parameters
    ----------
    text : str
        A unit, or a label with a unit in a bracket, behind a comma or at its end.
    metric : bool
        Whether SI units in capitals are meant too.

    Examples
    --------
    >>> in_right_case("FTU, PSI"), in_right_case("MOMENT (IN-LBF)"), in_right_case("MPA"), in_right_case("MPA", True)
    ('FTU, psi', 'MOMENT (in-lbf)', 'MPA', 'MPa')
    """
    if not _CAPITALS.search(text) or len(text) > 120:
        return text
    for where in _WHERE:
        match = where.search(text)
        if match is None:
            continue
        right = _right(match["unit"].strip(), metric)
        if right is not None:
            return text[: match.start("unit")] + right + text[match.end("unit") :]
    return text


def _right(unit: str, metric: bool) -> str | None:
    """Return a unit in its right case; None if it is none, or if it is right as it is."""
    if len(unit) < 2:
        return None  # a single letter is a symbol as often as a unit
    whole = _word(unit, metric)
    if whole is not None:
        return whole if whole != unit else None
    found: list[str] = []
    words = 0
    for part in _PARTS.split(unit):
        if not part or _PARTS.fullmatch(part):
            found.append(part)
            continue
        word = _word(part, metric)
        if word is None:
            return None
        words += 1
        found.append(word)
    right = "".join(found)
    return right if words and right != unit else None


def _word(text: str, metric: bool) -> str | None:
    found = _CUSTOMARY.get(text) or (_METRIC.get(text) if metric else None) or _DEGREES.get(text)
    if found is None and text in ("N", "S", "M", "1"):
        return text
    return found
