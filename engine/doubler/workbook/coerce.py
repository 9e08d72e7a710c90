"""Conversions and comparison of single cell values, by the spreadsheet's rules.

The rules are those of the Office Open XML and OpenDocument formula languages: an empty cell counts as 0 and
as "", a logical as 1 or 0, text as the number it spells; numbers sort before text, text before logicals; text
compares without case.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable
from functools import lru_cache
from typing import Any

from doubler.errors import ErrorValue
from doubler.workbook.model import Scalar

_NUMBER = re.compile(
    r"""\s*(?P<open>\()?\s*(?P<sign>[+-])?\s*\$?\s*
        (?P<digits>(?:[0-9]{1,3}(?:,[0-9]{3})+|[0-9]+)(?:\.[0-9]*)?|\.[0-9]+)
        (?P<exponent>[eE][+-]?[0-9]+)?\s*(?P<percent>%)?\s*(?P<close>\))?\s*\Z""",
    re.VERBOSE,
)
_FRACTION = re.compile(r"\s*([+-]?)([0-9]+) ([0-9]+)/([0-9]+)\s*\Z")
_MAYBE_DATE = re.compile(
    r"""\s*(?: [0-9]{1,4}\s*[-/.]\s*[0-9]{1,2}(?:\s*[-/.]\s*[0-9]{1,4})?
          | [0-9]{1,2}:[0-9]{1,2}(?::[0-9]{1,2})?(?:\.[0-9]+)?(?:\s*[aApP][mM])?
          |
          (?:[0-9]{1,2}[\s-])?(?:jan|feb|mar|apr|may|jun|jul|aug|sep|oct|nov|dec)[a-z]*\.?[\s,-]*[0-9]{0,4}.*
          )
        (?:\s+[0-9:.]+(?:\s*[aApP][mM])?)?\s*\Z""",
    re.VERBOSE | re.IGNORECASE,
)


class CannotEvaluateError(Exception):
    """The formula cannot be evaluated with certainty; the message is the reason, in words for the reader."""


class WholeLineError(CannotEvaluateError):
    """A row or column is taken as a whole in some lanes, and a single entry in others.

    Attributes
    ----------
    line
        Gives the value for one lane's row and column.
    row, column
        Row and column over lanes.
    """

    def __init__(self, line: Callable[[Scalar, Scalar], Any], row: Any, column: Any) -> None:
        super().__init__("INDEX gives a whole row or column in some of the cases")
        self.line = line
        self.row = row
        self.column = column


@lru_cache(maxsize=4096)
def number_from_text(text: str) -> float | ErrorValue:
    """Return the number that a text spells, or #VALUE!.

    Raises
    ------
    CannotEvaluateError
        Where the text may be a date or time in the notation of one locale or another.
    """
    match = _NUMBER.match(text)
    if match and bool(match["open"]) == bool(match["close"]):
        number = float(match["digits"].replace(",", "") + (match["exponent"] or ""))
        if math.isinf(number):
            return ErrorValue.VALUE
        if match["percent"]:
            number /= 100.0
        negative = (match["sign"] == "-") != bool(match["open"])
        return -number if negative else number
    fraction = _FRACTION.match(text)
    if fraction and int(fraction[4]):
        number = int(fraction[2]) + int(fraction[3]) / int(fraction[4])
        return -number if fraction[1] == "-" else number
    if _MAYBE_DATE.match(text):
        from doubler.workbook.calendar import serial_from_text

        serial = serial_from_text(text)
        if serial is not None:
            return serial
        raise CannotEvaluateError(f"the text {text!r} may be a date or time, which depends on the locale")
    return ErrorValue.VALUE


def to_number(value: Scalar) -> float | ErrorValue:
    """Return a scalar as arithmetic reads it."""
    if type(value) is float or isinstance(value, ErrorValue):
        return value
    if value is None:
        return 0.0
    if isinstance(value, bool):
        return 1.0 if value else 0.0
    if isinstance(value, str):
        return number_from_text(value)
    return float(value)


def to_text(value: Scalar) -> str | ErrorValue:
    """Return a scalar as text reads it."""
    if isinstance(value, str | ErrorValue):
        return value
    if value is None:
        return ""
    if isinstance(value, bool):
        return "TRUE" if value else "FALSE"
    return number_text(value)


def to_logical(value: Scalar) -> bool | ErrorValue:
    """Return a scalar as a condition reads it."""
    if isinstance(value, bool | ErrorValue):
        return value
    if value is None:
        return False
    if isinstance(value, str):
        upper = value.upper()
        if upper in {"TRUE", "FALSE"}:
            return upper == "TRUE"
        return ErrorValue.VALUE
    return value != 0.0


def number_text(number: float) -> str:
    """Return a number as the General format writes it where width does not matter: up to 15 significant digits."""
    if number == 0.0:
        return "0"
    mantissa, _, exponent_text = f"{number:.14e}".partition("e")
    sign = "-" if mantissa.startswith("-") else ""
    digits = mantissa.lstrip("-").replace(".", "").rstrip("0")
    exponent = int(exponent_text)
    if 0 <= exponent <= 20:
        whole = digits[: exponent + 1].ljust(exponent + 1, "0")
        rest = digits[exponent + 1 :]
        return sign + whole + (f".{rest}" if rest else "")
    if exponent < 0 and len(digits) - exponent - 1 <= 20:
        return sign + "0." + "0" * (-exponent - 1) + digits
    body = digits[0] + (f".{digits[1:]}" if len(digits) > 1 else "")
    return f"{sign}{body}E{'-' if exponent < 0 else '+'}{abs(exponent):02d}"


def fold(text: str) -> str:
    """Return text as comparison reads it, without case."""
    return text.lower()


def compare(left: Scalar, right: Scalar) -> int | ErrorValue:
    """Order two scalars: negative, 0 or positive; an error value of either comes first.

    An empty cell takes the other side's kind; numbers come before text, text before logicals.
    """
    if isinstance(left, ErrorValue):
        return left
    if isinstance(right, ErrorValue):
        return right
    if left is None:
        left = _empty_like(right)
    if right is None:
        right = _empty_like(left)
    a, b = _rank(left), _rank(right)
    if a != b:
        return -1 if a < b else 1
    if isinstance(left, str) and isinstance(right, str):
        x, y = fold(left), fold(right)
        return (x > y) - (x < y)
    return (left > right) - (left < right)  # type: ignore[operator]  # of one rank, so both numbers or both logicals


def _empty_like(other: Scalar) -> Scalar:
    if isinstance(other, bool):
        return False
    return "" if isinstance(other, str) else 0.0


def _rank(value: Scalar) -> int:
    return 2 if isinstance(value, bool) else 1 if isinstance(value, str) else 0
