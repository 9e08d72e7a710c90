"""Text: taken apart, put together, searched, and turned into numbers and back."""

from __future__ import annotations

import unicodedata
from collections.abc import Callable
from typing import Any

from doubler.errors import ErrorValue
from doubler.workbook.coerce import CannotEvaluateError, fold, number_from_text, to_logical, to_number, to_text
from doubler.workbook.lift import ScalarRule
from doubler.workbook.matching import wildcard
from doubler.workbook.natives.by_lane import by_lane
from doubler.workbook.natives.registry import OMITTED, native
from doubler.workbook.number_format import fixed_text, formatted

LONGEST_TEXT = 32767


def _converted(kinds: str, rule: Callable[..., Any]) -> Callable[..., Any]:
    """Return a rule on scalars that converts its arguments: ``t`` text, ``n`` number, ``w`` whole number."""

    def single(*values: Any) -> Any:
        found: list[Any] = []
        for value, kind in zip(values, kinds, strict=False):
            item: Any = to_text(value) if kind == "t" else to_number(value)
            if isinstance(item, ErrorValue):
                return item
            found.append(int(item // 1) if kind == "w" else item)
        result = rule(*found)
        return ErrorValue.VALUE if isinstance(result, str) and len(result) > LONGEST_TEXT else result

    return single


def _declare(names: str, arguments: str, kinds: str, units: str, rule: Callable[..., Any]) -> None:
    native(*names.split(), arguments=arguments, units=units)(ScalarRule(_converted(kinds, rule)))


def _left(text: str, count: int = 1) -> Any:
    return text[:count] if count >= 0 else ErrorValue.VALUE


def _right(text: str, count: int = 1) -> Any:
    if count < 0:
        return ErrorValue.VALUE
    return text[-count:] if count else ""


def _middle(text: str, start: int, count: int) -> Any:
    return text[start - 1 : start - 1 + count] if start >= 1 and count >= 0 else ErrorValue.VALUE


def _replace(text: str, start: int, count: int, new: str) -> Any:
    if start < 1 or count < 0:
        return ErrorValue.VALUE
    return text[: start - 1] + new + text[start - 1 + count :]


def _substitute(text: str, old: str, new: str, which: int | None = None) -> Any:
    if which is not None and which < 1:
        return ErrorValue.VALUE
    if not old:
        return text
    if which is None:
        return text.replace(old, new)
    at = -1
    for _ in range(which):
        at = text.find(old, at + 1)
        if at < 0:
            return text
    return text[:at] + new + text[at + len(old) :]


def _find(wanted: str, text: str, start: int = 1) -> Any:
    at = text.find(wanted, start - 1) if 1 <= start <= len(text) + 1 else -1
    return float(at + 1) if at >= 0 else ErrorValue.VALUE


def _search(wanted: str, text: str, start: int = 1) -> Any:
    if not 1 <= start <= len(text) + 1:
        return ErrorValue.VALUE
    pattern = wildcard(wanted)
    if pattern is None:
        at = fold(text).find(fold(wanted), start - 1)
        return float(at + 1) if at >= 0 else ErrorValue.VALUE
    match = pattern.search(text, start - 1)
    return float(match.start() + 1) if match else ErrorValue.VALUE


def _proper(text: str) -> str:
    out, after_letter = [], False
    for mark in text:
        out.append(mark.lower() if after_letter else mark.upper())
        after_letter = mark.isalpha()
    return "".join(out)


def _character(code: int) -> Any:
    if not 1 <= code <= 255:
        return ErrorValue.VALUE
    return bytes([code]).decode("cp1252", errors="replace")


def _code(text: str) -> Any:
    if not text:
        return ErrorValue.VALUE
    return float(text[0].encode("cp1252", errors="replace")[0])


def _unicode_character(code: int) -> Any:
    if not 1 <= code <= 0x10FFFF or 0xD800 <= code <= 0xDFFF:
        return ErrorValue.VALUE
    return chr(code)


def _clean(text: str) -> str:
    return "".join(mark for mark in text if unicodedata.category(mark) != "Cc")


def _repeated(text: str, count: int) -> Any:
    if count < 0 or len(text) * count > LONGEST_TEXT:
        return ErrorValue.VALUE
    return text * count


_declare("LEFT", "v;v", "tw", "text", _left)
_declare("RIGHT", "v;v", "tw", "text", _right)
_declare("MID", "vvv", "tww", "text", _middle)
_declare("LEN", "v", "t", "number", lambda text: float(len(text)))
_declare("TRIM", "v", "t", "text", lambda text: " ".join(part for part in text.split(" ") if part))
_declare("CLEAN", "v", "t", "text", _clean)
_declare("UPPER", "v", "t", "text", str.upper)
_declare("LOWER", "v", "t", "text", str.lower)
_declare("PROPER", "v", "t", "text", _proper)
_declare("SUBSTITUTE", "vvv;v", "tttw", "text", _substitute)
_declare("REPLACE", "vvvv", "twwt", "text", _replace)
_declare("FIND", "vv;v", "ttw", "number", _find)
_declare("SEARCH", "vv;v", "ttw", "number", _search)
_declare("EXACT", "vv", "tt", "logical", lambda a, b: a == b)
_declare("REPT", "vv", "tw", "text", _repeated)
_declare("CHAR", "v", "w", "text", _character)
_declare("CODE", "v", "t", "number", _code)
_declare("UNICHAR", "v", "w", "text", _unicode_character)
_declare("UNICODE", "v", "t", "number", lambda text: float(ord(text[0])) if text else ErrorValue.VALUE)
_declare("CONCATENATE", "v*v", "t" * 255, "text", lambda *parts: "".join(parts))


def _value(value: Any) -> Any:
    if isinstance(value, bool):
        return ErrorValue.VALUE
    return number_from_text(value) if isinstance(value, str) else to_number(value)


native("VALUE", arguments="v", units="number_from_text")(ScalarRule(_value))


def _number_value(text: str, decimal: str = ".", group: str = ",") -> Any:
    if not decimal:
        return ErrorValue.VALUE
    compact = "".join(text.split()).replace(group[:1], "") if group else "".join(text.split())
    if not compact:
        return 0.0
    percents = len(compact) - len(compact.rstrip("%"))
    number = number_from_text(compact.rstrip("%").replace(decimal[0], "."))
    return number if isinstance(number, ErrorValue) else number / 100.0**percents


_declare("NUMBERVALUE", "v;vv", "ttt", "number", _number_value)


def _flat(values: tuple[Any, ...]) -> list[Any]:
    cells: list[Any] = []
    for value in values:
        cells += [cell for row in value for cell in row] if isinstance(value, list) else [value]
    return cells


def _concat(*values: Any) -> Any:
    parts = []
    for cell in _flat(values):
        text = to_text(cell)
        if isinstance(text, ErrorValue):
            return text
        parts.append(text)
    joined = "".join(parts)
    return joined if len(joined) <= LONGEST_TEXT else ErrorValue.VALUE


native("CONCAT", arguments="a*a", units="text")(by_lane(_concat))


def _text_join(between: Any, skip: Any, *values: Any) -> Any:
    marks = [to_text(cell) for cell in _flat((between,))]
    ignore = to_logical(skip)
    for item in (*marks, ignore):
        if isinstance(item, ErrorValue):
            return item
    parts: list[str] = []
    for cell in _flat(values):
        text = to_text(cell)
        if isinstance(text, ErrorValue):
            return text
        if text or not ignore:
            parts.append(text)
    joined = "".join(
        part + (str(marks[at % len(marks)]) if at < len(parts) - 1 else "") for at, part in enumerate(parts)
    )
    return joined if len(joined) <= LONGEST_TEXT else ErrorValue.VALUE


native("TEXTJOIN", arguments="ava*a", units="text")(by_lane(_text_join))


def _text(frame: Any, value: Any, code: Any) -> Any:
    picture = to_text(code)
    for item in (value, picture):
        if isinstance(item, ErrorValue):
            return item
    if isinstance(value, bool):
        return "TRUE" if value else "FALSE"
    given = value
    if isinstance(value, str):
        try:
            number = number_from_text(value)
        except CannotEvaluateError:
            number = ErrorValue.VALUE
        given = value if isinstance(number, ErrorValue) else number
    return formatted(0.0 if given is None else given, str(picture), frame.date1904)


@native("TEXT", arguments="vv", units="text", with_frame=True)
def text(frame: Any, value: Any, code: Any) -> Any:
    """Text of a number in a number format."""
    return ScalarRule(lambda v, c: _text(frame, v, c))(value, code)


def _fixed(number: Any, digits: Any = 2.0, plain: Any = False) -> Any:
    value, places = to_number(number), 2.0 if digits is OMITTED else to_number(digits)
    no_commas = False if plain is OMITTED else to_logical(plain)
    for item in (value, places, no_commas):
        if isinstance(item, ErrorValue):
            return item
    assert isinstance(value, float)
    assert isinstance(places, float)
    return fixed_text(value, int(places), not no_commas)


native("FIXED", arguments="v;oo", units="text")(ScalarRule(_fixed))


def _between(before: bool) -> Callable[..., Any]:
    def rule(whole: str, mark: str, which: int = 1) -> Any:
        if which == 0:
            return ErrorValue.VALUE
        if not mark:
            return ("" if before else whole) if which > 0 else (whole if before else "")
        places = []
        at = whole.find(mark)
        while at >= 0:
            places.append(at)
            at = whole.find(mark, at + len(mark))
        index = which - 1 if which > 0 else len(places) + which
        if not 0 <= index < len(places):
            return ErrorValue.NA
        return whole[: places[index]] if before else whole[places[index] + len(mark) :]

    return rule


_declare("TEXTBEFORE", "vv;v", "ttw", "text", _between(True))
_declare("TEXTAFTER", "vv;v", "ttw", "text", _between(False))
