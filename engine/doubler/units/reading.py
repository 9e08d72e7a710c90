"""Cell text that may be a unit: a probe that does not raise, for the readers of other people's sheets."""

from __future__ import annotations

import re
from typing import Literal

from doubler.units.grammar import parse_unit
from doubler.units.table import atoms
from doubler.units.unit import Unit, UnitError

Place = Literal["unit cell", "bracket", "label tail", "number format"]

# Short words that are units only where a unit is expected with certainty.
_WORDS = frozenset(
    {
        "in",
        "a",
        "A",
        "s",
        "min",
        "bar",
        "h",
        "t",
        "g",
        "m",
        "K",
        "C",
        "F",
        "V",
        "W",
        "J",
        "N",
        "mil",
        "strain",
        "rev",
    }
)
_UNIT_LIKE = re.compile(r"^[A-Za-zµμΩε°ºΔ%‰√(/\d][\w\s.^*·⋅×/()\-–°º²³⁴⁶⁻¹√%µμε]*$")
_CASES = frozenset(
    {
        "mpa",
        "gpa",
        "kpa",
        "kn",
        "ksi",
        "psi",
        "msi",
        "knm",
        "nmm",
        "nm",
        "mm",
        "mm2",
        "mm^2",
        "n/mm2",
        "n/mm^2",
        "knmm",
    }
)


def read_unit(text: str, place: Place = "unit cell") -> Unit | UnitError | None:
    """Say what a text that may be a unit is, without raising.

    Parameters
    ----------
    text : str
        Text of a cell, or of a part of it.
    place : {"unit cell", "bracket", "label tail", "number format"}
        How surely a unit is expected there: a bracket behind a label and a literal in a number format nearly always
        hold one; a cell beside a number often; the tail of a label seldom.

    Returns
    -------
    Unit, UnitError or None
        None where it is plainly no unit (a word, a name, a revision letter); a `UnitError` where it is meant as a unit
        and cannot be read, or reads two ways.

    Examples
    --------
    >>> read_unit("N/mm2").text
    'N/mm2'
    >>> read_unit("N/A") is None
    True
    >>> type(read_unit("Mpa")).__name__
    'UnitError'
    """
    stripped = text.strip()
    if not stripped or len(stripped) > 30 or stripped.casefold() in {"n/a", "na", "tbd", "none", "ref", "note"}:
        return None
    if stripped in {"-", "–", "—", "1"}:
        return parse_unit("1") if place in ("unit cell", "bracket") else None
    if place == "label tail" and stripped in _WORDS:
        return None
    try:
        return parse_unit(stripped)
    except UnitError as error:
        return error if _meant_as_unit(stripped, place) else None


def _meant_as_unit(text: str, place: Place) -> bool:
    """Whether text that cannot be read was meant as a unit: its parts are units but for their case or their order."""
    if not _UNIT_LIKE.match(text) or place == "label tail":
        return text.casefold() in _CASES
    parts = [part for part in re.split(r"[\s.^*·⋅×/()\-–²³⁴⁶⁻¹√\d]+", text) if part]
    if not parts:
        return False
    folded = {spelling.casefold() for spelling in atoms()}
    known = [part for part in parts if part in atoms()]
    near = [part for part in parts if part.casefold() in folded]
    if len(parts) == 1:
        return parts[0].casefold() in _CASES or (parts[0] in ("mPa", "Mm", "Kg") and place != "unit cell")
    return len(near) == len(parts) and bool(known or any(part.casefold() in _CASES for part in parts))
