"""Why a formula cannot be parsed, in words that say what to write; the parser's own speak of its tokens."""

from __future__ import annotations

import re

_STRING = re.compile(r'"(?:[^"]|"")*"')
_SHEET = re.compile(r"'(?:[^']|'')*'")
_PLACE = re.compile(r"position (\d+)")
_SPAN = re.compile(r"start: (\d+), end: (\d+)")
_WITH_UNIT = re.compile(r"(?<![\w.$])(\d+(?:\.\d+)?(?:[eE][-+]?\d+)?\s+[A-Za-z°µ]+(?:[\^*/·]?[\w²³]+)*)")


def why_unparsed(body: str, error: Exception) -> str:
    """Say in one clause why a formula cannot be parsed.

    Parameters
    ----------
    body : str
        The formula without its leading ``=``.
    error : Exception
        What the parser raised.

    Returns
    -------
    str
        What is wrong, where that is known, and what to write instead.

    Examples
    --------
    >>> why_unparsed("SUM(1;2)", ValueError("…"))
    "its arguments are parted by ';'; write ',' as the file format does"
    >>> why_unparsed("STRESS_AXIAL(12 kN,1)", ValueError("…"))
    'a value with its unit is a text; write "12 kN"'
    """
    if "too deep" in str(error) or "height limit" in str(error):
        return "it is nested too deeply, or joins more than 250 terms in a row; part it over several cells"
    if not body.strip():
        return "it is empty; write a formula after the ="
    if re.search("[“”„]", body):
        return 'it holds typographic quotation marks; write straight ones (")'
    bare = _SHEET.sub("''", _STRING.sub('""', body))
    for mark, name in (('"', "a quotation mark"), ("'", "an apostrophe")):
        if bare.count(mark) % 2:
            return f"{name} is opened and not closed; write the {mark} that is missing"
    for opening, closing in ("()", "{}", "[]"):
        missing = bare.count(opening) - bare.count(closing)
        if missing:
            which = closing if missing > 0 else opening
            return f"its brackets do not pair; write the {which!r} that is missing, or take one away"
    if ";" in re.sub(r"\{[^}]*\}", "", bare):
        return "its arguments are parted by ';'; write ',' as the file format does"
    value = _WITH_UNIT.search(bare)
    if value:
        return f'a value with its unit is a text; write "{value[1]}"'
    return _place(body, str(error))


def _place(body: str, said: str) -> str:
    if "equal length" in said:
        return "the rows of an array are not equally long; write as many values in each"
    span = _SPAN.search(said)
    whole = "=" + body
    if span and (found := whole[int(span[1]) : int(span[2])].strip()):
        return f"{found!r} is not expected where it stands (character {int(span[1]) + 1}); mend what is before it"
    if "end of" in said:
        return "it ends where a value is due; write what is missing"
    place = _PLACE.search(said)
    return f"it goes wrong near character {int(place[1]) + 1}; mend it there" if place else "it is no formula; mend it"
