"""A label or column heading that carries its unit: ``Axial load [kN]``, ``Length (mm)``, ``Moment, kN·m``."""

from __future__ import annotations

import re

_BRACKETED = re.compile(r"^(?P<label>.*?)\s*[\[(](?P<unit>[^\[\]]*)[\])]\s*[:=]?\s*$", re.DOTALL)
_COMMA = re.compile(r"^(?P<label>.*\S),\s+(?P<unit>\S+(?:\s\S+)?)\s*[:=]?\s*$", re.DOTALL)


def split_heading(text: str) -> tuple[str, str | None, str]:
    """Split a heading into its label and the text that stands where a unit would.

    Parameters
    ----------
    text : str
        A label or heading.

    Returns
    -------
    label : str
        What is left without the unit part.
    unit_text : str or None
        The text in the closing bracket, or behind the last comma; None where there is neither. Whether it is a unit
        is for the caller to find out.
    place : str
        ``"bracket"``, ``"comma"`` or ``""``.

    Examples
    --------
    >>> split_heading("Axial load [kN]")
    ('Axial load', 'kN', 'bracket')
    >>> split_heading("Bending moment, kN·m")
    ('Bending moment', 'kN·m', 'comma')
    >>> split_heading("Safety factor")
    ('Safety factor', None, '')
    """
    for pattern, place in ((_BRACKETED, "bracket"), (_COMMA, "comma")):
        match = pattern.match(text)
        if match:
            return match["label"].strip(), match["unit"].strip(), place
    return text.strip(), None, ""
