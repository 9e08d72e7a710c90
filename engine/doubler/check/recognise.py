"""What a labelled number is, in the trade's terms: Young's modulus, Poisson's ratio, a margin of safety.

Words are matched as words and symbols as symbols, and the declared unit must agree before anything is concluded: a
cell called E in mm is no modulus.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from functools import lru_cache
from weakref import WeakKeyDictionary

from doubler.units import kind
from doubler.workbook.examined import Examined, Key

_YOUNG = (
    r"young'?s? modulus|young’s modulus|modulus of elasticity|elastic(?:ity)? modulus|elastic mod\.?|"
    r"tensile modulus|e[- ]modulus"
)
_SHEAR = r"shear modulus|modulus of rigidity|rigidity modulus|modulus in shear"
_BULK = r"bulk modulus|modulus of compression|volumetric modulus"
_TERMS: tuple[tuple[str, str, str, str], ...] = (
    # quantity, kind of unit, words, symbols
    ("shear modulus", "stress", _SHEAR, r"G|G_?xy|G_?12"),
    ("bulk modulus", "stress", _BULK, r"K"),
    ("young's modulus", "stress", _YOUNG, r"E|E_?t|E_?c"),
    ("poisson's ratio", "ratio", r"poisson(?:'s|s|’s)?(?: ratio| number)?", r"ν|nu|n_u|μ|v_?xy|v"),
    ("margin of safety", "ratio", r"margins?(?: of safety)?|minimum margin|min\.? margin", r"M\.?S\.?|MoS"),
    ("reserve factor", "ratio", r"reserve factors?", r"R\.?F\.?"),
    (
        "utilisation",
        "ratio",
        r"utili[sz]ations?|utili[sz]ation (?:ratio|factor)|unity check|usage factor",
        r"U\.?[FRC]\.?",
    ),
)
_WORDS = {name: re.compile(rf"(?<![\w]){'(?:' + words + ')'}(?![\w])", re.IGNORECASE) for name, _, words, _ in _TERMS}
_SYMBOLS = {
    name: re.compile(rf"(?:^|[\s(,=:])(?:{symbols})(?:_\w{{1,12}})?(?=$|[\s),=:\[])") for name, _, _, symbols in _TERMS
}
_KINDS = {name: unit for name, unit, _, _ in _TERMS}
_NO_MARGIN = re.compile(
    r"\b(?:profit|gross|operating|contribution|sales|price|policy|required|minimum required|target|allowable margin|"
    r"page|edge margin|negative margins?|count|number of|cases below|governing (?:case|mode|item))\b",
    re.IGNORECASE,
)
_OTHER_MODULUS = re.compile(
    r"\b(?:section|plastic|secant|tangent|reduced|effective|complex|storage|loss|foundation)\b", re.IGNORECASE
)


@lru_cache(maxsize=65536)
def quantity_of(words: str) -> str | None:
    """Return the quantity that a label names; None for none of those known here.

    Examples
    --------
    >>> quantity_of("Shear modulus G [MPa]"), quantity_of("ν"), quantity_of("Edge distance E")
    ('shear modulus', "poisson's ratio", "young's modulus")
    """
    other = bool(_OTHER_MODULUS.search(words))
    for patterns in (_WORDS, _SYMBOLS):
        for name, pattern in patterns.items():
            if not (other and _KINDS[name] == "stress") and pattern.search(words):
                return name
    return None


def is_named(words: str, quantity: str) -> bool:
    """Return whether a label names a quantity by its words and not only by a symbol."""
    return bool(_WORDS[quantity].search(words))


def quantities(book: Examined) -> Iterator[tuple[Key, str]]:
    """Yield every cell that holds a number whose label and unit say what it is."""
    if book not in _QUANTITIES:
        _QUANTITIES[book] = list(_quantities(book))
    yield from _QUANTITIES[book]


_QUANTITIES: WeakKeyDictionary[Examined, list[tuple[Key, str]]] = WeakKeyDictionary()


def _quantities(book: Examined) -> Iterator[tuple[Key, str]]:
    for sheet in book.workbook.sheets:
        for address, cell in sheet.cells.items():
            if cell.formula is None and not isinstance(cell.value, float):
                continue
            key = (sheet.name, address)
            name = quantity_at(book, key)
            if name is not None:
                yield key, name


def quantity_at(book: Examined, key: Key) -> str | None:
    """Return the quantity that a cell holds, or None; label and declared unit must agree."""
    label = book.label(key)
    declared = book.declarations.unit(*key)
    left = " ".join(label.left) if len(label.left) > 1 else label.left[0] if label.left else ""
    for words in (left, *label.above[:3], label.name.replace("_", " ")):
        name = quantity_of(words) if words else None
        if name is None:
            continue
        if name == "margin of safety" and (_NO_MARGIN.search(words) or not _of_safety(book, key[0], words)):
            return None
        if _agrees(declared, name, words):
            return name
    return None


_STRICT = re.compile(r"(?<!\w)(?:margins? of safety|safety margins?|M\.?S\.?|MoS)(?!\w)|(?<!\w)MS_\w+", re.IGNORECASE)


def _of_safety(book: Examined, sheet: str, words: str) -> bool:
    """Return whether a margin is one of safety: its words say so, or its sheet deals with loads or stresses."""
    if _STRICT.search(words):
        return True
    known = _MECHANICAL.setdefault(book, {})
    if sheet not in known:
        page = book.workbook.sheet(sheet)
        wanted = {kind(name).dimension for name in ("stress", "force", "moment")}
        units = (book.declarations.unit(sheet, address) for address in (page.cells if page is not None else ()))
        known[sheet] = any(unit is not None and unit.unit.dimension in wanted for unit in units)
    return known[sheet]


_MECHANICAL: WeakKeyDictionary[Examined, dict[str, bool]] = WeakKeyDictionary()


def _agrees(declared: object, name: str, words: str) -> bool:
    wanted = kind(_KINDS[name]).dimension
    if declared is None:
        return _KINDS[name] == "ratio" or is_named(words, name)
    unit = declared.unit  # type: ignore[attr-defined]  # a Declared
    return bool(unit.dimension == wanted)
