"""Dates and times as serial numbers, in the 1900 system (with its day 60 that never was) and the 1904 system."""

from __future__ import annotations

import datetime
import re

from doubler.errors import ErrorValue

_ISO = re.compile(
    r"\s*(?:(\d{4})-(\d{1,2})-(\d{1,2}))?(?:[T ]?\s*(\d{1,2}):(\d{2})(?::(\d{2}(?:\.\d+)?))?\s*([aApP][mM])?)?\s*\Z"
)
_EPOCH = datetime.date(1899, 12, 31)
LAST_SERIAL = 2_958_465.0
"""31 December 9999 in the 1900 system."""
OFFSET_1904 = 1462.0
"""Days between the beginnings of the two systems."""


def serial_of(year: int, month: int, day: int, date1904: bool = False) -> float | ErrorValue:
    """Return the serial number of a date; months and days beyond their range carry over."""
    if 0 <= year < 1900:
        year += 1900
    month_index = year * 12 + month - 1
    year, month = divmod(month_index, 12)
    if not 1900 <= year <= 9999:
        return ErrorValue.NUM
    days = (datetime.date(year, month + 1, 1) - _EPOCH).days
    if days >= 60:
        days += 1
    serial = days - 1 + day
    # A day that carries over February 1900 counts the day that never was, as the serial numbers do.
    if date1904:
        serial -= int(OFFSET_1904)
    return float(serial) if 0 <= serial <= LAST_SERIAL else ErrorValue.NUM


def date_of(serial: float, date1904: bool = False) -> tuple[int, int, int] | ErrorValue:
    """Return year, month and day of a serial number."""
    day = int(serial // 1) + (int(OFFSET_1904) if date1904 else 0)
    if serial < 0 or day > LAST_SERIAL:
        return ErrorValue.NUM
    if day == 0:
        return 1900, 1, 0
    if day == 60:
        return 1900, 2, 29
    date = _EPOCH + datetime.timedelta(days=day if day < 60 else day - 1)
    return date.year, date.month, date.day


def clock_of(serial: float) -> tuple[int, int, float]:
    """Return hour, minute and second of a serial number, to the millisecond."""
    milliseconds = round((serial - serial // 1) * 86_400_000)
    hours, rest = divmod(milliseconds, 3_600_000)
    minutes, rest = divmod(rest, 60_000)
    return hours % 24, minutes, rest / 1000.0


def serial_from_text(text: str) -> float | None:
    """Read a date or time whose notation is the same in every locale: ISO dates and clock times."""
    match = _ISO.match(text)
    if match is None or (match[1] is None and match[4] is None):
        return None
    serial = 0.0
    if match[1] is not None:
        try:
            datetime.date(int(match[1]), int(match[2]), int(match[3]))
        except ValueError:
            return None
        day = serial_of(int(match[1]), int(match[2]), int(match[3]))
        if isinstance(day, ErrorValue):
            return None
        serial = day
    if match[4] is not None:
        hours, minutes, seconds = int(match[4]), int(match[5]), float(match[6] or 0.0)
        if match[7] is not None:
            if not 1 <= hours <= 12:
                return None
            hours = hours % 12 + (12 if match[7].lower() == "pm" else 0)
        if minutes > 59 or seconds >= 60.0:
            return None
        serial += (hours * 3600 + minutes * 60 + seconds) / 86_400.0
    return serial
