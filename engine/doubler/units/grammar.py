"""Unit text to a unit: products, quotients, powers and roots of the units in the table, as engineers write them."""

from __future__ import annotations

import re
from fractions import Fraction
from functools import lru_cache

from doubler.units.dimension import Dimension
from doubler.units.refusals import refuse_atom, refuse_whole
from doubler.units.table import TEMPERATURE, atoms
from doubler.units.unit import Unit, UnitError

ONE = Unit("1", Dimension.none(), Fraction(1))
DIMENSIONLESS_TEXTS = frozenset({"1", "-", "–", "—", "[-]", "(-)"})
_SUPERSCRIPTS = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁻", "0123456789-")
_SUPERSCRIPT = re.compile(r"[⁻]?[⁰¹²³⁴⁵⁶⁷⁸⁹]+")
_TOKEN = re.compile(
    r"\s*(?:(?P<sqrt>sqrt\s*\(|√)|(?P<power>\^|\*\*)|(?P<times>[·⋅∙•*×])|(?P<over>/|÷)|(?P<open>\()|(?P<close>\))"
    r"|(?P<number>[+-]?\d+(?:\.\d+)?)|(?P<atom>g0(?![A-Za-z0-9])|Δ?\s?[°º℃℉]\s?[CF]?|Δ?[A-Za-zµμΩΩε%‰_]+(?:\d(?=_))?)|(?P<dash>[-‐‑–.]))"
)

_POWER_OF_TEN = re.compile(r"(?<![\w.])(?:[x×*·]\s*)?(?:10\s*(?:\^|\*\*|[⁻⁰¹²³⁴⁵⁶⁷⁸⁹])|1?[eE][+\-−]?\d)")
_BARE_FRACTION = re.compile(r"(?:\^|\*\*)\s*(-?\d+/\d+)")
_DEGREE_OF = re.compile(r"[°º]\s?([ABD-EG-Za-z])")
_DEGREES = {"K": "write K", "R": "write °F or K", "c": "write °C", "f": "write °F"}
_DOTTED = re.compile(r"\b(in|ft|yd|lb|lbs|lbf|sq|cu|sec|min|hr|rev)\.(?=$|[\s\-/^²³⁴)*·])")


@lru_cache(maxsize=8192)
def parse_unit(text: str) -> Unit:
    """Read unit text.

    Parameters
    ----------
    text : str
        As engineers write it: ``N/mm2``, ``kNm``, ``in-lbf``, ``µm/m/K``, ``MPa·√m``.

    Returns
    -------
    Unit

    Raises
    ------
    UnitError
        The text is no unit, has the wrong case, or reads two ways; the sentence says what to write.

    Examples
    --------
    >>> parse_unit("N/mm²").scale
    1000000.0
    >>> parse_unit("kNm").dimension.name
    'moment'
    """
    stripped = text.strip()
    if stripped in DIMENSIONLESS_TEXTS:
        return ONE
    refuse_whole(stripped)
    known = atoms().get(stripped) or atoms().get(_normal(stripped))
    if known is not None:
        return known
    if stripped.startswith("(") and stripped.endswith(")") and not set("()") & set(stripped[1:-1]):
        return parse_unit(stripped[1:-1])
    _refuse_written(stripped)
    reader = _Reader(_normal(stripped), text)
    unit = reader.read()
    if reader.degrees and unit.dimension == TEMPERATURE:
        raise UnitError(f"{text!r} reads two ways; write °C or °F for a temperature, K for a difference")
    return Unit(stripped, unit.dimension, _scale(unit), system=unit.system, kind=unit.kind)


def _refuse_written(text: str) -> None:
    """Refuse what the trade writes in place of a unit, and a unit alone cannot mean."""
    if _POWER_OF_TEN.search(text):
        raise UnitError(
            f"{text!r} holds a power of ten, which is part of the number; write a unit with a prefix, such as ppm/K or "
            f"µm/m/K for 10^-6/K, kN for 10^3 N"
        )
    half = _BARE_FRACTION.search(text)
    if half:
        raise UnitError(f"{text!r} reads two ways; write the power in brackets, ^({half[1]})")
    wrong = _DEGREE_OF.search(text)
    if wrong:
        where = f"{text!r}" if wrong[0] == text else f"{wrong[0]!r} in {text!r}"
        raise UnitError(f"{where} is refused as a unit: {_DEGREES.get(wrong[1], 'write deg or °C')}")


def _scale(unit: Unit) -> Fraction | float:
    return unit.scale if unit.exact is None else unit.exact


def _normal(text: str) -> str:
    text = _DOTTED.sub(r"\1", text.replace("−", "-"))
    text = text.replace("μ", "µ").replace("º", "°").replace("\u2126", "Ω").replace("²", "^2").replace("³", "^3")
    text = text.replace("¹", "^1") if "⁻¹" not in text else text
    text = re.sub(r"⁻\^([23])", r"^-\1", text)
    text = _SUPERSCRIPT.sub(lambda m: "^" + m[0].translate(_SUPERSCRIPTS), text.replace("⁻¹", "^-1"))
    text = re.sub(r"\b(sq|cu)\.?\s+(in|ft|mm|cm|m)\b", lambda m: f"{m[2]}^{2 if m[1] == 'sq' else 3}", text)
    return re.sub(r"\bper\b", "/", text)


class _Reader:
    """Reads one unit expression from left to right."""

    def __init__(self, text: str, given: str) -> None:
        self.given = given
        self.tokens: list[tuple[str, str]] = []
        self.apart: list[bool] = []
        self.degrees = False
        position = 0
        while position < len(text):
            match = _TOKEN.match(text, position)
            if match is None or match.end() == position:
                raise UnitError(f"{given!r} is no unit: {text[position:].strip()[:1]!r} cannot stand in one")
            self.tokens.append((str(match.lastgroup), match[0].strip()))
            self.apart.append(match[0][:1].isspace())
            position = match.end()
        self.at = 0

    def peek(self) -> tuple[str, str]:
        return self.tokens[self.at] if self.at < len(self.tokens) else ("end", "")

    def take(self) -> tuple[str, str]:
        token = self.peek()
        self.at += 1
        return token

    def read(self) -> Unit:
        if not self.tokens:
            raise UnitError("the unit is empty; write one, such as MPa, or 1 for a pure number")
        unit = self.expression()
        if self.peek()[0] != "end":
            raise UnitError(f"{self.given!r} is no unit: {self.peek()[1]!r} is left over")
        return unit

    def expression(self) -> Unit:
        unit = ONE if self.peek()[0] == "over" else self.factor()
        below = False
        while True:
            kind, _ = self.peek()
            if kind in ("times", "dash"):
                self.take()
                if below:
                    self.two_ways()
                unit = unit * self.factor()
            elif kind == "over":
                self.take()
                below = True
                unit = unit / self.factor()
            elif kind in ("atom", "open", "sqrt"):
                if below:
                    self.two_ways()
                unit = unit * self.factor()
            else:
                return unit

    def two_ways(self) -> None:
        first, _, rest = self.given.partition("/")
        rest = re.sub(r"\s*[·*×.\- ]\s*", "·", rest.strip())
        raise UnitError(f"{self.given!r} reads two ways; write {first.strip()}/({rest}) or put the product in front")

    def factor(self) -> Unit:
        kind, text = self.take()
        if kind == "sqrt":
            unit = self.factor() ** Fraction(1, 2) if text.startswith("√") else self.inside() ** Fraction(1, 2)
        elif kind == "open":
            unit = self.inside()
        elif kind == "number":
            if text != "1":
                raise UnitError(f"{self.given!r}: a unit holds no number {text}; write the number before the unit")
            unit = ONE
        elif kind == "atom":
            unit = self.atom(text)
        else:
            raise UnitError(
                f"{self.given!r} is no unit: something is missing before {text!r}"
                if text
                else f"{self.given!r} is no unit: something is missing at its end"
            )
        return self.powered(unit)

    def inside(self) -> Unit:
        unit = self.expression()
        if self.take()[0] != "close":
            raise UnitError(f"{self.given!r} is no unit: a bracket is not closed")
        return unit

    def atom(self, text: str) -> Unit:
        known = atoms().get(text) or atoms().get(text.replace(" ", ""))
        if known is None:
            raise UnitError(refuse_atom(text, self.given))
        if known.offset:  # inside a compound a degree is a difference
            if len(self.tokens) == 1:
                return known
            self.degrees = True
            return Unit(known.text, known.dimension, known.exact or known.scale, system=known.system)
        return known

    def powered(self, unit: Unit) -> Unit:
        kind, text = self.peek()
        if kind == "power":
            self.take()
            return unit ** self.not_zero(self.exponent())
        if kind == "number" and self.at and self.tokens[self.at - 1][0] in ("atom", "close"):
            if self.apart[self.at]:
                raise UnitError(f"{self.given!r} is no unit: {text} stands apart; write a power as ^{text}")
            self.take()
            return unit ** self.not_zero(Fraction(text))
        if (
            kind == "dash"
            and text == "-"
            and self.at + 1 < len(self.tokens)
            and self.tokens[self.at + 1][0] == "number"
        ):
            self.take()
            return unit ** -self.not_zero(Fraction(self.take()[1]))
        return unit

    def not_zero(self, power: Fraction) -> Fraction:
        if power == 0:
            raise UnitError(
                f"{self.given!r} is no unit: a power of zero leaves nothing of it; write 1 for a pure number"
            )
        return power

    def exponent(self) -> Fraction:
        kind, text = self.take()
        if kind == "number":
            return Fraction(text)
        if kind == "dash":
            return -self.exponent()
        if kind == "open":
            top = self.exponent()
            kind, _ = self.take()
            if kind == "over":
                bottom = self.exponent()
                if bottom == 0:
                    raise UnitError(f"{self.given!r} is no unit: its power has a zero below the bar")
                top, kind = top / bottom, self.take()[0]
            if kind == "close":
                return top
        raise UnitError(f"{self.given!r} is no unit: after ^ a power is due, such as ^2 or ^(1/2)")
