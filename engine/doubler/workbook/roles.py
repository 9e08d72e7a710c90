"""What a label's words say of the kind of number beside it: enough to tell a unit from a word that looks like one.

The words are the trade's, in English, and are matched as words. They never make a unit; they only decide whether a
doubtful text (``in``, ``min``, ``A``) can be one, and whether a number without a unit is a pure number by its nature.
"""

from __future__ import annotations

import re
from functools import lru_cache

_WORDS: tuple[tuple[str, str], ...] = (
    ("length", (r"length|width|height|depth|thick|thickness|diameter|dia|radius|span|distance|pitch|gap|edge|offset|"
     r"lever|arm|extension|elongation|deflection|displacement|position|station|spacing|gauge|gage|perimeter|"
     r"eccentricity|clearance|size|leg|throat|web|flange|stroke|coordinate|grip|overhang|chord|stringer")),
    ("time", r"time|duration|period|hours|seconds|minutes|life"),
    ("pressure", r"pressure|vacuum"),
    ("stress", r"stress|strength|yield|ultimate|allowable|modulus|bearing"),
    ("force", r"force|load|reaction|shear|thrust|weight|tension|compression|preload|pull|push|axial"),
    ("moment", r"moment|torque|couple|bending|torsion"),
    ("mass", r"mass|weight"),
    ("temperature", r"temperature|temp|temps"),
    ("angle", r"angle|slope|rotation|inclination|sweep|dihedral|twist|phase|direction"),
    ("current", r"current|ampere|amps"),
    ("area", r"area"),
    ("speed", r"speed|velocity"),
    ("acceleration", r"acceleration|gravity"),
    ("voltage", r"voltage|excitation"),
    ("frequency", r"frequency"),
)  # fmt: skip
_COMPILED = tuple((name, re.compile(rf"\b(?:{words})\b", re.IGNORECASE)) for name, words in _WORDS)

_PURE = re.compile(
    r"\b(?:factors?|ratio|ratios|poisson(?:'s|s)?|coefficient|coeff|efficiency|number|no\.? of|count|qty|quantity|"
    r"margins?|reserve|utili[sz]ation|cycles|exponent|index|strain|percentage|multiplier|"
    r"friction|proportion|fraction|safety|knockdown|ncycles|probability|damage)\b"
    r"|^\s*#\s*(?:of\b|$)"
    r"|^\s*(?:MS|M\.S\.|RF|R\.F\.|FS|F\.S\.|SF|S\.F\.|FF|FoS|MoS|Kt|K_t|Kf|ν|nu|µ_f|MS_\w+|RF_\w+|FS_\w+|SF_\w+|FF_\w+|"
    r"(?:γ|gamma)_?[MFGQ][\w,]{0,5})\s*[:=]?\s*$",
    re.IGNORECASE,
)
_SYMBOL_AT_END = re.compile(r"[,(\s](?:MS|RF|FS|SF|FF|FoS|MoS|Kt|ν|nu|γ_?[MFGQ]\w{0,2})\s*\)?\s*[:=]?\s*$")
_NOT_PURE = re.compile(
    r"\b(?:expansion|conversion|intensity|stiffness|spring|film|heat|transfer|thermal|influence|drag|conductivity|"
    r"unit|fatigue strength|scale|paris|basquin|load|stress|temperature|rate|resistance|converts?|moment|shear flow|"
    r"area|volume|length|temp|reserve (?:force|load)|increment|part|drawing|page|sheet|revision|rev)\b",
    re.IGNORECASE,
)
_MARGIN = re.compile(
    r"\bmargins?\b(?: of safety)?|\breserve factor\b|\bsafety factor\b|\bfactor of safety\b|\butili[sz]ation\b|"
    r"\b(?:load|impact|dynamic|gust|amplification|magnification) (?:factor|coefficient)\b|"
    r"^\s*(?:MS|M\.S\.|RF|R\.F\.|MoS|FoS)(?:[_ ]\w+)?\s*[:=]?\s*$|[,(\s](?:MS|RF)\s*\)?\s*[:=]?\s*$",
    re.IGNORECASE,
)
_LOAD_FACTOR = re.compile(r"\b(?:load|stress|strain|safety|shape|temperature) (?:factor|ratio)\b", re.IGNORECASE)
_DIFFERENCE = re.compile(
    r"Δ|\b(?:delta|difference|change|rise|drop|increase|decrease|gradient|range|dT|gain|fall|increment|above|below|uplift)\b",
    re.IGNORECASE,
)
_CONVERTS = re.compile(r"\b(?:conversion|convert|converts|conv)\b", re.IGNORECASE)


@lru_cache(maxsize=65536)
def roles(label: str) -> frozenset[str]:
    """Return the kinds of quantity that a label's words speak of."""
    return frozenset(name for name, words in _COMPILED if words.search(label))


@lru_cache(maxsize=65536)
def is_pure_number(label: str) -> bool:
    """Return whether a label names what is a pure number by its nature: a factor, a ratio, a margin, a count.

    Examples
    --------
    >>> is_pure_number("Safety factor"), is_pure_number("Poisson's ratio"), is_pure_number("Width")
    (True, True, False)
    """
    if _LOAD_FACTOR.search(label) and "intensity" not in label.casefold():
        return True
    if is_margin(label):
        return True
    return bool(_PURE.search(label) or _SYMBOL_AT_END.search(label)) and not _NOT_PURE.search(label)


@lru_cache(maxsize=65536)
def is_margin(label: str) -> bool:
    """Return whether a label names a margin of safety, a reserve factor or a utilisation: surely a pure number."""
    return bool(_MARGIN.search(label))


_PURE_ROW = re.compile(
    r"^\s*(?:\d[\d.]*\s+)?(?:(?:utili[sz]ation|usage|stress|load|demand/capacity|interaction|strength)?\s*ratio|"
    r"utili[sz]ation|usage|reserve factor|margin(?: of safety)?|unity check|R\.?F\.?|M\.?S\.?|U\.?[FRC]\.?|D/C)"
    r"\s*[:=]?\s*$",
    re.IGNORECASE,
)


@lru_cache(maxsize=65536)
def is_pure_row(label: str) -> bool:
    """Return whether a row's whole label names a ratio, so that a unit over its columns is not meant for it."""
    return bool(_PURE_ROW.match(label))


@lru_cache(maxsize=65536)
def is_difference(label: str) -> bool:
    """Return whether a label names a change and not a level: temperature rise, ΔT."""
    return bool(_DIFFERENCE.search(label))


_TOTAL = re.compile(
    r"\b(?:sum|total|totals|max|min|maximum|minimum|mean|average|avg|envelope|worst|critical|governing|std|median|rss|"
    r"subtotal|resultant)\b|[ΣΔ∑]",
    re.IGNORECASE,
)


@lru_cache(maxsize=65536)
def is_total(label: str) -> bool:
    """Return whether a label names what stands below a column and sums it up: a sum, an extreme, a mean.

    Examples
    --------
    >>> is_total("Total load"), is_total("Slope k")
    (True, False)
    """
    return bool(_TOTAL.search(label))


@lru_cache(maxsize=65536)
def is_conversion(label: str) -> bool:
    """Return whether a label says that the number beside it converts units."""
    return bool(_CONVERTS.search(label))


_DIMENSIONS = {
    "length": "length",
    "time": "time",
    "pressure": "stress",
    "stress": "stress",
    "force": "force",
    "moment": "moment",
    "mass": "mass",
    "temperature": "temperature",
    "angle": "angle",
    "area": "area",
    "speed": "speed",
    "acceleration": "acceleration",
    "frequency": "frequency",
}


def kind_of_role(role: str) -> str | None:
    """Return the quantity kind whose dimension a role has; None for one that no kind covers."""
    return _DIMENSIONS.get(role)
