"""A cell's value as the XML of a sheet holds it; text is always text, never a formula."""

from __future__ import annotations

import math
import re

from doubler.errors import ErrorValue, InputError
from doubler.workbook.model import Scalar

MAX_TEXT = 32_767
"""Characters that one cell can hold."""

# What XML 1.0 can't hold, the carriage return (parsers drop it), and text that looks like an escape.
_TO_ESCAPE = re.compile("[\x00-\x08\x0b\x0c\x0d\x0e-\x1f\ufffe\uffff]|_(?=x[0-9A-Fa-f]{4}_)")
_HALF_CHARACTER = re.compile("[\ud800-\udfff]")
# Errors that came after the format are stored by it as #VALUE!; a program may refuse the file otherwise.
_STORABLE = {
    error: error.value if error not in {ErrorValue.SPILL, ErrorValue.CALC, ErrorValue.FIELD} else "#VALUE!"
    for error in ErrorValue
}


def number_text(value: float) -> str:
    """Return the shortest text that reads back as the same number.

    Parameters
    ----------
    value : float
        A finite number.

    Raises
    ------
    ValueError
        Where the number is infinite or not a number: no cell can hold it.

    Examples
    --------
    >>> number_text(412.0), number_text(0.1)
    ('412', '0.1')
    """
    if not math.isfinite(value):
        raise ValueError(f"{value} is no number that a cell can hold")
    text = repr(value)
    return text[:-2] if text.endswith(".0") and text != "-0.0" else ("0" if text == "-0.0" else text)


def escape_text(text: str, where: str) -> str:
    """Return a text as the content of an XML element.

    Parameters
    ----------
    text : str
        Any text; characters that XML can't hold are written as ``_xHHHH_``.
    where : str
        The cell, for messages.

    Raises
    ------
    InputError
        Where the text is longer than a cell can hold, or contains half of a character.

    Examples
    --------
    >>> escape_text("a<b", "Lug!C5")
    'a&lt;b'
    """
    if len(text) > MAX_TEXT:
        raise InputError(f"{where}: the text has {len(text)} characters; a cell holds at most {MAX_TEXT}")
    if _HALF_CHARACTER.search(text):
        raise InputError(f"{where}: the text contains half of a character (a lone surrogate); mend the text")
    escaped = _TO_ESCAPE.sub(lambda match: f"_x{ord(match[0]):04X}_", text)
    return escaped.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;")


def value_xml(value: Scalar, prefix: str, where: str, *, constant: bool) -> tuple[str, str]:
    """Return the type attribute and the value element of a cell.

    Parameters
    ----------
    value : float, str, bool, ErrorValue or None
        None leaves the cell empty.
    prefix : str
        Namespace prefix of the sheet's elements with its colon, or nothing.
    where : str
        The cell, for messages.
    constant : bool
        True for an input, whose text stands in the cell; False for the stored result of a formula.

    Returns
    -------
    attribute : str
        Such as ``' t="str"'``; empty for numbers and empty cells.
    element : str
        Such as ``'<v>412</v>'``; empty for an empty cell.

    Examples
    --------
    >>> value_xml("=A1", "", "Lug!C5", constant=True)
    (' t="inlineStr"', '<is><t xml:space="preserve">=A1</t></is>')
    >>> value_xml(True, "", "Lug!C5", constant=False)
    (' t="b"', '<v>1</v>')
    """
    if type(value) is float:
        return "", f"<{prefix}v>{number_text(value)}</{prefix}v>"
    if value is None:
        return "", ""
    # A NumPy scalar is unpacked first: a logical one must not become a number.
    value = getattr(value, "item", lambda: value)()
    if isinstance(value, str):
        text = escape_text(value, where)
        if constant:
            inner = f'<{prefix}t xml:space="preserve">{text}</{prefix}t>'
            return ' t="inlineStr"', f"<{prefix}is>{inner}</{prefix}is>"
        return ' t="str"', f"<{prefix}v>{text}</{prefix}v>"
    if isinstance(value, bool):
        attribute, text = ' t="b"', str(int(value))
    elif isinstance(value, ErrorValue):
        attribute, text = ' t="e"', _STORABLE[value]
    else:
        attribute, text = "", number_text(float(value))
    return attribute, f"<{prefix}v>{text}</{prefix}v>"
