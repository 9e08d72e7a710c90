"""Dates and times, as serial numbers of days."""

from __future__ import annotations

import datetime
from collections.abc import Callable
from typing import Any

from doubler.errors import ErrorValue
from doubler.workbook.calendar import LAST_SERIAL, OFFSET_1904, date_of, serial_from_text, serial_of
from doubler.workbook.coerce import CannotEvaluateError, to_number
from doubler.workbook.lift import ScalarRule
from doubler.workbook.natives.by_lane import by_lane
from doubler.workbook.natives.registry import OMITTED, native


def _number_rule(rule: Callable[..., Any]) -> Callable[..., Any]:
    """Lift a rule on the date system and Python floats."""

    def lifted(frame: Any, *arguments: Any) -> Any:
        def single(*values: Any) -> Any:
            numbers: list[float] = []
            for value in values:
                number = to_number(value)
                if isinstance(number, ErrorValue):
                    return number
                numbers.append(number)
            return rule(frame.date1904, *numbers)

        return ScalarRule(single)(*arguments)

    return lifted


def _declare(name: str, arguments: str, rule: Callable[..., Any]) -> None:
    native(name, arguments=arguments, units="number", with_frame=True)(_number_rule(rule))


def _date(date1904: bool, year: float, month: float, day: float) -> Any:
    if not 0 <= year < 10000 or abs(month) > 1e6 or abs(day) > 1e7:
        return ErrorValue.NUM
    return serial_of(int(year // 1), int(month // 1), int(day // 1), date1904)


def _time(_: bool, hour: float, minute: float, second: float) -> Any:
    if max(abs(hour), abs(minute), abs(second)) > 32767:
        return ErrorValue.NUM
    total = int(hour // 1) * 3600 + int(minute // 1) * 60 + int(second // 1)
    return (total % 86_400) / 86_400.0 if total >= 0 else ErrorValue.NUM


def _part(index: int) -> Callable[[bool, float], Any]:
    def rule(date1904: bool, serial: float) -> Any:
        found = date_of(serial, date1904)
        return found if isinstance(found, ErrorValue) else float(found[index])

    return rule


def _clock(index: int) -> Callable[[bool, float], Any]:
    def rule(_: bool, serial: float) -> Any:
        if serial < 0.0 or serial > LAST_SERIAL + 1:
            return ErrorValue.NUM
        seconds = round((serial - serial // 1) * 86_400)
        found = (seconds // 3600 % 24, seconds // 60 % 60, seconds % 60)
        return float(found[index])

    return rule


def _weekday_index(date1904: bool, serial: float) -> int | ErrorValue:
    """Return 0 for Sunday to 6 for Saturday."""
    day = int(serial // 1) + (int(OFFSET_1904) if date1904 else 0)
    return (day - 1) % 7 if 0 <= day <= LAST_SERIAL else ErrorValue.NUM


def _weekday(date1904: bool, serial: float, kind: float = 1.0) -> Any:
    index = _weekday_index(date1904, serial)
    if isinstance(index, ErrorValue):
        return index
    way = int(kind)
    if way in {1, 17}:
        return float(index + 1)
    if way == 3:
        return float((index - 1) % 7)
    start = 1 if way == 2 else way - 10
    return float((index - start) % 7 + 1) if way == 2 or 11 <= way <= 16 else ErrorValue.NUM


def _calendar_day(date1904: bool, serial: float) -> datetime.date | ErrorValue:
    found = date_of(serial, date1904)
    if isinstance(found, ErrorValue):
        return found
    try:
        return datetime.date(*found)
    except ValueError:
        raise CannotEvaluateError("a day before March 1900 is no day of the calendar") from None


def _week(date1904: bool, serial: float, kind: float = 1.0) -> Any:
    if int(kind) == 21:
        return _iso_week(date1904, serial)
    day = _calendar_day(date1904, serial)
    if isinstance(day, ErrorValue):
        return day
    starts = {1: 6, 2: 0, 11: 0, 12: 1, 13: 2, 14: 3, 15: 4, 16: 5, 17: 6}
    if int(kind) not in starts:
        return ErrorValue.NUM
    first = datetime.date(day.year, 1, 1)
    lead = (first.weekday() - starts[int(kind)]) % 7
    return float(((day - first).days + lead) // 7 + 1)


def _iso_week(date1904: bool, serial: float) -> Any:
    day = _calendar_day(date1904, serial)
    return day if isinstance(day, ErrorValue) else float(day.isocalendar()[1])


def _shifted(end: bool) -> Callable[[bool, float, float], Any]:
    def rule(date1904: bool, serial: float, months: float) -> Any:
        found = date_of(serial, date1904)
        if isinstance(found, ErrorValue):
            return found
        year, month = divmod(found[0] * 12 + found[1] - 1 + int(months), 12)
        if not 1900 <= year <= 9999:
            return ErrorValue.NUM
        last = (datetime.date(year + month // 11, (month + 1) % 12 + 1, 1) - datetime.timedelta(days=1)).day
        return serial_of(year, month + 1, last if end else min(found[2], last), date1904)

    return rule


def days_between_360(first: tuple[int, int, int], last: tuple[int, int, int], european: bool) -> int:
    """Return the days between two dates in a year of twelve months of 30 days."""
    y1, m1, d1 = first
    y2, m2, d2 = last
    if european:
        d1, d2 = min(d1, 30), min(d2, 30)
    else:
        if d1 == _last_day(y1, m1):
            d1 = 30
        if d2 == 31:
            if d1 < 30:
                m2, d2 = m2 + 1, 1
            else:
                d2 = 30
    return (y2 - y1) * 360 + (m2 - m1) * 30 + d2 - d1


def _last_day(year: int, month: int) -> int:
    return 31 if month == 12 else (datetime.date(year, month + 1, 1) - datetime.timedelta(days=1)).day


def _days360(date1904: bool, first: float, last: float, european: float = 0.0) -> Any:
    a, b = date_of(first, date1904), date_of(last, date1904)
    if isinstance(a, ErrorValue) or isinstance(b, ErrorValue):
        return ErrorValue.NUM
    return float(days_between_360(a, b, bool(european)))


def _days(_: bool, last: float, first: float) -> Any:
    if min(first, last) < 0.0 or max(first, last) > LAST_SERIAL:
        return ErrorValue.NUM
    return float(int(last) - int(first))


_declare("DATE", "vvv", _date)
_declare("TIME", "vvv", _time)
_declare("YEAR", "v", _part(0))
_declare("MONTH", "v", _part(1))
_declare("DAY", "v", _part(2))
_declare("HOUR", "v", _clock(0))
_declare("MINUTE", "v", _clock(1))
_declare("SECOND", "v", _clock(2))
_declare("WEEKDAY", "v;v", _weekday)
_declare("WEEKNUM", "v;v", _week)
_declare("ISOWEEKNUM", "v", _iso_week)
_declare("EDATE", "vv", _shifted(False))
_declare("EOMONTH", "vv", _shifted(True))
_declare("DAYS360", "vv;v", _days360)
_declare("DAYS", "vv", _days)


def _from_text(part: Callable[[float], float], frame_offset: bool) -> Callable[..., Any]:
    def lifted(frame: Any, value: Any) -> Any:
        def single(text: Any) -> Any:
            if isinstance(text, ErrorValue):
                return text
            if not isinstance(text, str):
                return ErrorValue.VALUE
            serial = serial_from_text(text)
            if serial is None:
                if any(mark.isdigit() for mark in text):
                    raise CannotEvaluateError(f"the text {text!r} may be a date or time, which depends on the locale")
                return ErrorValue.VALUE
            shift = OFFSET_1904 if frame_offset and frame.date1904 else 0.0
            return part(serial) - shift

        return ScalarRule(single)(value)

    return lifted


native("DATEVALUE", arguments="v", units="number", with_frame=True)(_from_text(lambda s: float(s // 1), True))
native("TIMEVALUE", arguments="v", units="number", with_frame=True)(_from_text(lambda s: s - s // 1, False))


def _holidays(value: Any) -> set[int] | ErrorValue:
    if value is OMITTED or value is None:
        return set()
    found: set[int] = set()
    for cell in [c for row in value for c in row] if isinstance(value, list) else [value]:
        if cell is None:
            continue
        number = to_number(cell)
        if isinstance(number, ErrorValue):
            return number
        found.add(int(number))
    return found


def _workdays(counts: bool) -> Callable[..., Any]:
    def lifted(frame: Any, start: Any, end: Any, free: Any = OMITTED) -> Any:
        def single(first: Any, second: Any, holidays: Any) -> Any:
            a, b, off = to_number(first), to_number(second), _holidays(holidays)
            for item in (a, b, off):
                if isinstance(item, ErrorValue):
                    return item
            assert isinstance(a, float)
            assert isinstance(b, float)
            assert isinstance(off, set)
            if not 0 <= a <= LAST_SERIAL:
                return ErrorValue.NUM

            def works(day: int) -> bool:
                index = _weekday_index(frame.date1904, float(day))
                return index not in {0, 6} and day not in off

            if counts:
                low, high = sorted((int(a), int(b)))
                number = float(sum(1 for day in range(low, high + 1) if works(day)))
                return number if b >= a else -number
            return _after(int(a), int(b), works)

        return by_lane(single)(start, end, free)

    return lifted


def _after(day: int, count: int, works: Callable[[int], bool]) -> float | ErrorValue:
    step = 1 if count > 0 else -1
    left = abs(count)
    while left:
        day += step
        if not 0 <= day <= LAST_SERIAL:
            return ErrorValue.NUM
        left -= works(day)
    return float(day)


native("NETWORKDAYS", arguments="vv;r", units="number", with_frame=True)(_workdays(True))
native("WORKDAY", arguments="vv;r", units="number", with_frame=True)(_workdays(False))


def _year_share(date1904: bool, first: float, last: float, basis: float = 0.0) -> Any:
    low, high = sorted((first // 1, last // 1))
    a, b = date_of(low, date1904), date_of(high, date1904)
    if isinstance(a, ErrorValue) or isinstance(b, ErrorValue) or not 0 <= basis < 5:
        return ErrorValue.NUM
    way = int(basis)
    if way == 0:
        return days_between_360(a, b, False) / 360.0
    if way == 4:
        return days_between_360(a, b, True) / 360.0
    if way in {2, 3}:
        return (high - low) / (360.0 if way == 2 else 365.0)
    raise CannotEvaluateError("YEARFRAC by actual days over actual years is not evaluated here")


_declare("YEARFRAC", "vv;v", _year_share)
for _name in ("TODAY", "NOW", "RAND"):
    native(_name, arguments="", units="number", volatile=True)(lambda: ErrorValue.NA)
native("RANDBETWEEN", arguments="vv", units="number", volatile=True)(lambda *_: ErrorValue.NA)
native("RANDARRAY", arguments=";vvvvv", units="number", volatile=True)(lambda *_: ErrorValue.NA)


def _date_difference(frame: Any, first: Any, last: Any, unit: Any) -> Any:
    def single(start: Any, end: Any, code: Any) -> Any:
        a, b = to_number(start), to_number(end)
        for item in (a, b, code):
            if isinstance(item, ErrorValue):
                return item
        assert isinstance(a, float)
        assert isinstance(b, float)
        one, other = date_of(a, frame.date1904), date_of(b, frame.date1904)
        if isinstance(one, ErrorValue) or isinstance(other, ErrorValue) or a > b or not isinstance(code, str):
            return ErrorValue.NUM
        months = (other[0] - one[0]) * 12 + other[1] - one[1] - (other[2] < one[2])
        known = {"Y": months // 12, "M": months, "D": int(b) - int(a), "YM": months % 12}
        if code.upper() in {"MD", "YD"}:
            raise CannotEvaluateError("DATEDIF by days that leave out months or years has no certain rule")
        found = known.get(code.upper())
        return ErrorValue.NUM if found is None else float(found)

    return ScalarRule(single)(first, last, unit)


native("DATEDIF", arguments="vvv", units="number", with_frame=True)(_date_difference)
