"""Numbers written in a number format, as the function TEXT does; what is not certain is refused.

The formats of numbers (digits, thousands, percent, exponent, literals, sections) and of dates and times are known. A
format with conditions, fractions or names of a locale is not.
"""

from __future__ import annotations

import re
from decimal import ROUND_HALF_UP, Decimal
from functools import lru_cache

from doubler.errors import ErrorValue
from doubler.workbook.calendar import clock_of, date_of
from doubler.workbook.coerce import CannotEvaluateError, number_text

_TOKEN = re.compile(
    r"""(?P<quoted>"[^"]*")|(?P<escaped>\\.)|(?P<skip>_.)|(?P<fill>\*.)|(?P<colour>\[(?:Black|Blue|Cyan|Green|Magenta|Red|
        White|Yellow|Color\ ?\d+)\])|(?P<elapsed>\[(?:h+|m+|s+)\])|(?P<bracket>\[[^\]]*\])|(?P<general>General)
        |(?P<exponent>[eE][+-])|(?P<clock>AM/PM|am/pm|A/P|a/p)|(?P<date>y+|m+|d+|h+|s+)|(?P<digit>[0\#?])|(?P<mark>.)""",
    re.VERBOSE | re.IGNORECASE | re.DOTALL,
)
_MONTHS = (
    "January", "February", "March", "April", "May", "June", "July", "August", "September", "October", "November",
    "December",
)  # fmt: skip
_DAYS = ("Sunday", "Monday", "Tuesday", "Wednesday", "Thursday", "Friday", "Saturday")

Tokens = tuple[tuple[str, str], ...]


@lru_cache(maxsize=512)
def _sections(code: str) -> tuple[Tokens, ...]:
    sections: list[list[tuple[str, str]]] = [[]]
    for match in _TOKEN.finditer(code):
        kind, text = str(match.lastgroup), match.group()
        if kind == "mark" and text == ";":
            sections.append([])
        elif kind == "bracket":
            raise CannotEvaluateError(f"the number format {code!r} holds a condition or a locale")
        else:
            sections[-1].append((kind, text))
    return tuple(tuple(section) for section in sections)


def formatted(value: float | str, code: str, date1904: bool = False) -> str | ErrorValue:
    """Return a value as a number format writes it.

    Examples
    --------
    >>> formatted(1234.567, "#,##0.00")
    '1,234.57'
    >>> formatted(0.285, "0.0%")
    '28.5%'
    """
    if not code:
        return ""
    sections = _sections(code)
    if isinstance(value, str):
        return _of_text(value, sections)
    if len(sections) > 4:
        return ErrorValue.VALUE
    numeric = [section for section in sections[:3] if not any(kind == "mark" and mark == "@" for kind, mark in section)]
    if not numeric:
        return number_text(value)
    section, number, sign = _chosen(numeric, value)
    kinds = {kind for kind, _ in section}
    if "date" in kinds or "elapsed" in kinds or "clock" in kinds:
        return _date(section, value, date1904)
    return _number(section, number, sign)


@lru_cache(maxsize=512)
def is_date(code: str) -> bool:
    """Return whether a number format shows a number as a date or a time.

    Examples
    --------
    >>> is_date("yyyy-mm-dd"), is_date("0.00"), is_date('0.0" mm"'), is_date("[$-409]d. mmm")
    (True, False, False, True)
    """
    told = {"date": True, "elapsed": True, "clock": True, "digit": False, "general": False}
    kinds = (str(match.lastgroup) for match in _TOKEN.finditer(code))
    return next((told[kind] for kind in kinds if kind in told), False)


def _of_text(value: str, sections: tuple[Tokens, ...]) -> str:
    last = sections[3] if len(sections) > 3 else sections[-1]
    if any(kind == "mark" and mark == "@" for kind, mark in last):
        return "".join(value if mark == "@" and kind == "mark" else _literal(kind, mark) for kind, mark in last)
    return value


def _chosen(sections: list[Tokens], value: float) -> tuple[Tokens, float, str]:
    """Return the section for a number, the number to write in it, and the sign that it does not write itself."""
    if value > 0.0 or len(sections) == 1:
        return sections[0], abs(value), "-" if value < 0.0 else ""
    if value < 0.0:
        return sections[1], -value, ""
    return (sections[2] if len(sections) > 2 else sections[0]), 0.0, ""


def _literal(kind: str, text: str) -> str:
    if kind == "quoted":
        return text[1:-1]
    if kind == "escaped":
        return text[1]
    if kind == "skip":
        return " "
    return "" if kind in {"fill", "colour"} else text


def _number(section: Tokens, number: float, sign: str) -> str:
    if any(kind == "mark" and mark == "/" for kind, mark in section):
        raise CannotEvaluateError("a number format with a fraction is not written here")
    if not any(kind in {"digit", "general"} for kind, _ in section):
        return sign + "".join(_literal(kind, mark) for kind, mark in section)
    if any(kind == "general" for kind, _ in section):
        return sign + "".join(number_text(number) if kind == "general" else _literal(kind, m) for kind, m in section)
    percent = sum(1 for kind, mark in section if kind == "mark" and mark == "%")
    first = min(at for at, (kind, _) in enumerate(section) if kind == "digit")
    last = max(at for at, (kind, _) in enumerate(section) if kind == "digit")
    point = next((at for at, (k, m) in enumerate(section) if k == "mark" and m == "."), None)
    power = next((at for at, (k, _) in enumerate(section) if k == "exponent"), None)
    ends = [at for at in (point, power) if at is not None]
    whole_end = min(ends) if ends else last + 1
    grouped = any(k == "mark" and m == "," for k, m in section[first : min(whole_end, last + 1)])
    scale = 0
    after = whole_end if point is None and power is None else last + 1
    if point is None and power is None:
        after = last + 1
    while after < len(section) and section[after] == ("mark", ","):
        scale += 1
        after += 1
    decimals_end = power if power is not None else last + 1
    decimals = [m for k, m in section[point + 1 : decimals_end] if k == "digit"] if point is not None else []
    amount = Decimal(repr(number)).scaleb(2 * percent - 3 * scale)
    whole_pattern = [m for k, m in section[:whole_end] if k == "digit"]
    exponent = 0
    if power is not None and amount:
        exponent = amount.adjusted() - (max(len(whole_pattern), 1) - 1)
        rounded = _rounded(amount.scaleb(-exponent), len(decimals))
        if rounded.adjusted() >= max(len(whole_pattern), 1):
            exponent += 1
        amount = amount.scaleb(-exponent)
    digits = f"{_rounded(amount, len(decimals)):f}"
    whole, _, fraction = digits.partition(".")
    fraction = _trimmed(fraction, decimals)
    if not any(mark != "0" for mark in whole + fraction):
        sign = sign if number and power is not None else ""
    body = _whole(whole, whole_pattern, grouped)
    return sign + _assembled(section, body, fraction, point, exponent, (whole_end, first, last))


def _rounded(amount: Decimal, places: int) -> Decimal:
    """Round half away from zero the number that 15 digits show."""
    shown = Decimal(f"{amount:.14e}")
    return shown.quantize(Decimal(1).scaleb(-places), rounding=ROUND_HALF_UP)


def _trimmed(fraction: str, pattern: list[str]) -> str:
    kept = len(fraction)
    while kept and pattern[kept - 1] == "#" and fraction[kept - 1] == "0":
        kept -= 1
    return fraction[:kept]


def _whole(whole: str, pattern: list[str], grouped: bool) -> str:
    least = sum(1 for mark in pattern if mark == "0")
    stripped = whole.lstrip("0").rjust(least, "0")
    if grouped:
        parts: list[str] = []
        while len(stripped) > 3:
            parts.insert(0, stripped[-3:])
            stripped = stripped[:-3]
        stripped = ",".join([stripped, *parts])
    return stripped


def _assembled(
    section: Tokens,
    whole: str,
    fraction: str,
    point: int | None,
    exponent: int,
    bounds: tuple[int, int, int],
) -> str:
    whole_end, first, _ = bounds
    pattern_places = [at for at, (k, _) in enumerate(section[:whole_end]) if k == "digit"]
    out: list[str] = []
    digits = list(whole)
    extra = len(digits) - sum(1 for mark in whole if mark == ",") - len(pattern_places)
    at_fraction = 0
    in_power = False
    power_digits = ""
    for at, (kind, mark) in enumerate(section):
        if kind == "exponent":
            in_power = True
            count = sum(1 for k, _ in section[at:] if k == "digit")
            lead = "-" if exponent < 0 else "+" if mark[1] == "+" else ""
            power_digits = f"{mark[0]}{lead}{str(abs(exponent)).rjust(count, '0')}"
            out.append(power_digits)
        elif kind == "digit" and in_power:
            continue
        elif kind == "digit" and (point is None or at < point):
            if at == (pattern_places[0] if pattern_places else first):
                take = max(extra, 0) + 1
                out.append(_take(digits, take if extra >= 0 else 1 + extra))
            else:
                left = sum(1 for place in pattern_places if place >= at)
                held = sum(1 for d in digits if d != ",")
                out.append(_take(digits, held - left + 1))
        elif kind == "digit":
            out.append(fraction[at_fraction : at_fraction + 1])
            at_fraction += 1
        elif kind == "mark" and mark == ",":
            continue
        elif at == point:
            if not pattern_places:
                out.append(whole)
            out.append(mark)
        else:
            out.append(_literal(kind, mark))
    return "".join(out)


def _take(digits: list[str], count: int) -> str:
    """Take that many digits, with the separators before them, off the front."""
    out = ""
    while count > 0 and digits:
        mark = digits.pop(0)
        out += mark
        count -= mark != ","
    return out


def fixed_text(number: float, places: int, grouped: bool) -> str | ErrorValue:
    """Return a number rounded to decimals, as FIXED writes it."""
    if not -127 <= places <= 127:
        return ErrorValue.VALUE
    rounded = _rounded(Decimal(repr(abs(number))), places)
    whole, _, fraction = f"{rounded:f}".partition(".")
    body = _whole(whole, ["0"], grouped)
    text = f"{body}.{fraction}" if fraction else body
    return f"-{text}" if number < 0.0 and any(mark not in "0.," for mark in text) else text


def _date(section: Tokens, value: float, date1904: bool) -> str | ErrorValue:
    parts = date_of(value, date1904)
    if isinstance(parts, ErrorValue):
        return ErrorValue.VALUE
    year, month, day = parts
    fraction = sum(1 for at, token in enumerate(section) if token == ("digit", "0") and at)
    if fraction:
        raise CannotEvaluateError("a number format with parts of a second is not written here")
    seconds = round((value - value // 1) * 86_400)
    shown = value // 1 + seconds / 86_400
    if seconds == 86_400:
        again = date_of(shown, date1904)
        if isinstance(again, ErrorValue):
            return ErrorValue.VALUE
        year, month, day = again
    hour, minute, second_float = clock_of(shown)
    second = int(second_float)
    half = any(kind == "clock" for kind, _ in section)
    out = []
    for at, (kind, mark) in enumerate(section):
        low = mark.lower()
        if kind == "elapsed":
            total = int(value // 1) * 86_400 + seconds
            unit = {"h": 3600, "m": 60, "s": 1}[low[1]]
            out.append(str(total // unit).rjust(len(mark) - 2, "0"))
        elif kind == "clock":
            out.append(("AM" if hour < 12 else "PM") if len(mark) == 5 else ("A" if hour < 12 else "P"))
        elif kind != "date":
            out.append(_literal(kind, mark))
        elif low[0] == "y":
            out.append(f"{year % 100:02d}" if len(mark) <= 2 else str(year))
        elif low[0] == "m" and _is_minute(section, at):
            out.append(str(minute).rjust(min(len(mark), 2), "0"))
        elif low[0] == "m":
            out.append(_month(month, len(mark)))
        elif low[0] == "d":
            out.append(_day(value, day, len(mark), date1904))
        elif low[0] == "h":
            shown_hour = (hour % 12 or 12) if half else hour
            out.append(str(shown_hour).rjust(min(len(mark), 2), "0"))
        else:
            out.append(str(second).rjust(min(len(mark), 2), "0"))
    return "".join(out)


def _month(month: int, count: int) -> str:
    name = _MONTHS[month - 1]
    return {1: str(month), 2: f"{month:02d}", 3: name[:3], 5: name[0]}.get(count, name)


def _day(value: float, day: int, count: int, date1904: bool) -> str:
    serial = int(value // 1) + (1462 if date1904 else 0)
    name = _DAYS[(serial - 1) % 7]
    return {1: str(day), 2: f"{day:02d}", 3: name[:3]}.get(count, name)


def _is_minute(section: Tokens, at: int) -> bool:
    """Whether an ``m`` means minutes: after hours, or before seconds."""
    before = [text for kind, text in section[:at] if kind in {"date", "elapsed"}]
    after = [text for kind, text in section[at + 1 :] if kind in {"date", "elapsed"}]
    return bool((before and "h" in before[-1].lower()) or (after and "s" in after[0].lower()))
