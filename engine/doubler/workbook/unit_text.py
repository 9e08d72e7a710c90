"""Whether a text of a sheet is a unit, a word that looks like one, or a unit that can't be read."""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import lru_cache

from doubler.units import Unit, UnitError, kind, parse_unit
from doubler.workbook.roles import is_pure_number, kind_of_role, roles

LONGEST_UNIT = 24

DASHES = frozenset(
    {"-", "–", "—", "[-]", "(-)", "[–]", "--", "[1]", "dimensionless", "nondimensional", "unitless", "ratio"}
)
COUNTS = frozenset({"cycles", "cycle", "flights", "blocks", "pcs", "plies"})
"""Words that stand where a unit does and say that the number is a count."""
UNIT_HEADS = re.compile(r"^(?:units?|uom|u\.?o\.?m\.?|dim(?:ension)?s?|einheit|units? of measure)\s*:?$", re.IGNORECASE)

_WORDLIKE_TEXTS = "in a min bar at mil oz pt day year hand as pa gr gal rev rod can cal dB ea no max tex T t"
_WORDLIKE = frozenset(_WORDLIKE_TEXTS.split())
_SYMBOL_FIRST = re.compile(r"^\S+\s+[(\[]|^(?![NJWm]\b)[A-Za-z]\s+[A-Za-zµ°(]")
_MISSPELT = re.compile(r"^[A-Za-zµμΩ°%]+[23]?(?:\s?[/·*^.\-]\s?\(?[A-Za-zµμ°]+\)?\^?-?[0-9]*|\^-?[0-9.]+|[²³⁴])*$")
_PHRASE = re.compile(
    r"^(?:all\s+)?(?:units?(?:\s+(?:are|is))?(?:\s+in)?|values?\s+in|in|all\s+in|given\s+in)\s*[:=]?\s+"
    r"(?P<unit>\S+(?:\s\S+)?)$",
    re.IGNORECASE,
)
_LEADING = re.compile(r"^(?P<unit>[^\s,;(]+)\s*(?:[,;]\s|\()")


@dataclass(frozen=True, slots=True)
class UnitText:
    """A text looked at as a unit.

    Attributes
    ----------
    unit
        The unit, or None.
    doubtful
        True where the text is as likely a word, a symbol or a mark.
    complaint
        Why it can't be read, where it is plainly meant as a unit; else empty.
    """

    unit: Unit | None
    doubtful: bool = False
    complaint: str = ""


NOTHING = UnitText(None)


_POWERED = re.compile(
    r"^(?:[x×]\s*)?(?:10\^?\(?(?P<plain>[+\-−]?\d{1,2})\)?|1[eE](?P<typed>[+\-−]?\d{1,2})|10(?P<raised>[⁺⁻]?[⁰¹²³⁴⁵⁶⁷⁸⁹]+))"
    r"\s*(?P<sign>[/·*× ]?)\s*(?P<unit>[A-Za-zµ°].*)?$"
)
_RAISED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻−", "0123456789+--")


def _powered(match: re.Match[str], bare: str) -> UnitText:
    """Read a unit with a power of ten before it: ``10^-6/K``, ``×10⁶ mm⁴``."""
    exponent = match["plain"] or match["typed"] or match["raised"]
    rest = match["unit"]
    if "^" not in bare and match["plain"] and match["plain"][0] not in "+-−":
        return NOTHING  # '106 mm' may be a quantity
    try:
        unit = parse_unit(rest) if rest else parse_unit("1")
    except UnitError:
        return NOTHING
    if match["sign"] == "/":
        unit = parse_unit("1") / unit
    scale = 10.0 ** int(exponent.translate(_RAISED)) * unit.scale
    return UnitText(Unit(bare, unit.dimension, scale, system=unit.system))


@lru_cache(maxsize=65536)
def read_unit_text(text: str) -> UnitText:
    """Look at a text as a unit.

    Examples
    --------
    >>> read_unit_text("kN/mm2").unit.scale
    1000000000.0
    >>> read_unit_text("in").doubtful, read_unit_text("Description").unit
    (True, None)
    """
    bare = text.strip()
    if len(bare) > 2 and bare[0] + bare[-1] in ("[]", "()"):
        bare = bare[1:-1].strip()
    if not bare or len(bare) > LONGEST_UNIT:
        return NOTHING
    if bare.casefold() in DASHES or bare == "1":
        return UnitText(parse_unit("1"))
    if bare.casefold() in COUNTS:
        return UnitText(parse_unit("1"))
    powered = _POWERED.match(bare)
    if powered is not None:
        return _powered(powered, bare)
    odd = bare[0].isdigit() or bare[0] in "=+<>~#'\"" or "?" in bare
    if odd and not bare.startswith("1/"):
        return NOTHING  # '1/K' is a unit, '10 mm' a quantity
    if _SYMBOL_FIRST.match(bare):
        return NOTHING  # 'A (in2)' and 't mm' are symbols with their units
    if _symbol_over_unit(bare):
        return NOTHING  # 'F / kN' and 'A/mm²' too, though F is a farad and A an ampere
    try:
        unit = parse_unit(bare)
    except UnitError as error:
        return UnitText(None, complaint=str(error) if _meant_as_unit(bare) else "")
    letters = sum(c.isalpha() for c in bare)
    doubtful = bare in _WORDLIKE or (letters <= 1 and not any(c in "%°/µ‰" for c in bare) and bare != "m")
    return UnitText(unit, doubtful)


_USUAL = {
    **dict.fromkeys("FPQVNRHS", "force"), **dict.fromkeys("MT", "moment"), **dict.fromkeys("EGK", "stress"),
    **dict.fromkeys("IJ", "second_moment"), **dict.fromkeys("WZ", "volume"),
    **dict.fromkeys("lLbBhHdDtrRsewa", "length"),
    "A": "area", "m": "mass", "p": "stress",
}  # fmt: skip
"""What single letters stand for in labels (common practice)."""
_OVER = re.compile(r"^(?P<symbol>[A-Za-z])\s*/\s*(?P<unit>[^\s/]+)$")


def _symbol_over_unit(text: str) -> bool:
    """Return whether a text is a symbol over its unit, as DIN and ISO 80000 head columns: the two agree."""
    match = _OVER.match(text)
    usual = _USUAL.get(match["symbol"]) if match else None
    if match is None or usual is None:
        return False
    try:
        return bool(parse_unit(match["unit"]).dimension == kind(usual).dimension)
    except UnitError:
        return False


_BY_CASE = (
    "mm cm km in ft N kN MN lbf kip kips Pa kPa MPa GPa psi ksi Msi Nm kNm Nmm N/mm2 N/mm^2 kN/m N/m N/mm mm2 "
    "mm^2 mm3 mm^3 mm4 mm^4 in2 in^2 in3 in^3 in4 in^4 lbf/in lb/in kg g Hz kHz rad deg °C °F m/s m/s2 kg/m3 "
    "kg/m^3 N·m kN·m in-lbf ft-lbf lbf-in lbf-ft in-lb ft-lb rpm N/m2 N/m^2 kN/m2 kN/m^2 kN/mm2 cm2 cm3 cm4 m2 m3 "
    "m4 lbf/in2 lbf/in^2 mm/mm 1/°C 1/K ppm/°C J kJ kW"
)
_FOLDED = {text.casefold(): text for text in _BY_CASE.split()}


def _meant_as_unit(text: str) -> bool:
    """Return whether a text that is no unit is one with a wrong case or a wrong sign."""
    right = _FOLDED.get(text.casefold())
    if right is not None and right != text and len(text) > 1:
        return True
    parts = re.split(r"[/·*]", text)
    if len(parts) < 2 or not _MISSPELT.match(text):
        return False
    return all(_unit_like(part) for part in parts) and any(len(part) > 1 for part in parts)


def _unit_like(part: str) -> bool:
    stem = re.sub(r"(?:\^?-?\d+|[²³⁴])$", "", part.strip("() "))
    return stem.casefold() in _FOLDED or stem.casefold() in ("m", "n", "s", "h", "k", "c")


def role_agrees(unit: Unit, words: str) -> bool | None:
    """Return whether the words beside a number speak of the quantity that a unit measures; None if they say nothing."""
    return _role_agrees(unit, unit.text, words)


@lru_cache(maxsize=65536)
def _role_agrees(unit: Unit, text: str, words: str) -> bool | None:
    found = roles(words)
    if not found:
        return False if is_pure_number(words) and unit.scale != 1.0 else None
    own = unit.dimension.without_angle()
    for role in found:
        name = kind_of_role(role)
        if name is not None and kind(name).dimension.without_angle() == own:
            return True
    compound = len(text) > 3 or "/" in text
    return bool(compound and not is_pure_number(words) and found & {"stress", "mass", "force"} and _related(unit))


def _related(unit: Unit) -> bool:
    return unit.dimension.without_angle() != kind("length").dimension


@lru_cache(maxsize=16384)
def phrase_unit(text: str) -> UnitText:
    """Read a unit out of a note such as ``in kN``, ``Units: mm`` or ``MPa (from test)``."""
    for pattern in (_PHRASE, _LEADING):
        match = pattern.match(text.strip().strip("()[]").rstrip("."))
        if match:
            found = read_unit_text(match["unit"])
            if found.unit is not None and not found.doubtful:
                return found
    return NOTHING


_PER = re.compile(r"(?:^|[\s(\[,:])(?P<over>[^\s()\[\]]+)\s+per\s+(?P<under>[^\s()\[\],]+)", re.IGNORECASE)
_TO = re.compile(r"(?:^|[\s(\[,:])(?P<old>[^\s()\[\]]+)\s+(?:to|->|→)\s+(?P<new>[^\s()\[\],]+)", re.IGNORECASE)


@lru_cache(maxsize=16384)
def conversion_unit(label: str) -> Unit | None:
    """Return the unit of a conversion constant that its label states: ``N per kN``, ``in to mm``.

    Examples
    --------
    >>> conversion_unit("N per kN").scale
    0.001
    >>> conversion_unit("Span") is None
    True
    """
    for pattern, over, under in ((_PER, "over", "under"), (_TO, "new", "old")):
        match = pattern.search(label)
        if match:
            top, bottom = _named(match[over]), _named(match[under])
            if top is not None and bottom is not None and top.dimension == bottom.dimension:
                return top / bottom
    return None


_SPELT = {
    "inch": "in", "inches": "in", "foot": "ft", "feet": "ft", "newton": "N", "newtons": "N",
    "pound": "lbf", "pounds": "lbf",
    "millimetre": "mm", "millimetres": "mm", "millimeter": "mm", "millimeters": "mm", "metre": "m", "meter": "m",
    "metres": "m", "meters": "m", "degree": "deg", "degrees": "deg", "radian": "rad", "radians": "rad",
    "hour": "h", "hours": "h", "second": "s", "seconds": "s", "minute": "min", "minutes": "min",
}  # fmt: skip


def _named(text: str) -> Unit | None:
    try:
        return parse_unit(_SPELT.get(text.casefold(), text))
    except UnitError:
        return None


_FORMAT_TAIL = re.compile(r"""[0#?](?:\.?E[+-]0+)?((?:"[^"]*"|\\.|_.|[ °])*)$""")
_FORMAT_PARTS = re.compile(r"""(?:_.)|"([^"]*)"|\\(.)|([ °])""")
"""The literals behind a number's last digit: quoted, or, as programs write a single letter, escaped."""


@lru_cache(maxsize=4096)
def format_unit(number_format: str) -> UnitText:
    """Read the unit that a number format prints behind the number, ``0.0" MPa"``."""
    section = number_format.split(";", maxsplit=1)[0]
    tail = _FORMAT_TAIL.search(section)
    written = "" if tail is None else "".join(
        quoted or escaped or plain for quoted, escaped, plain in _FORMAT_PARTS.findall(tail[1])
    )  # fmt: skip
    if not written.strip():
        return NOTHING
    found = read_unit_text(written)
    return found if found.unit is not None or found.complaint else NOTHING


def is_percent_format(number_format: str) -> bool:
    """Return whether a number format shows the number times a hundred with a percent sign."""
    return "%" in re.sub(r'"[^"]*"|\\.', "", number_format.split(";", maxsplit=1)[0])
