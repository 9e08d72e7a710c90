"""Pounds on a sheet: `lb` is a mass, and a sheet that writes it where only a force can stand means `lbf`."""

from __future__ import annotations

import re
from functools import lru_cache

from doubler.units import Unit, UnitError, kind, parse_unit
from doubler.workbook.roles import roles

_POUND = re.compile(r"\blbs?\b")
_MASS = re.compile(r"\b(?:mass|masses|weigh(?:t|ts|s|ed)?|density|areal)\b", re.IGNORECASE)
_FORCE_SYMBOL = re.compile(r"(?:^|[\s(,=])(?:P|F|V|R|T|Q|W|N)(?:_?\w{0,6})?(?=$|[\s),=:\[])")
_ONLY_FORCES = ("moment", "stress", "line_load")


def pounds_force(unit: Unit, words: str) -> Unit | None:
    """Return the unit that is meant where a unit in pounds can only be one of force; None where it is none.

    Parameters
    ----------
    unit : Unit
        As the sheet writes it.
    words : str
        The cell's label.

    Examples
    --------
    >>> pounds_force(parse_unit("in-lb"), "M").dimension == kind("moment").dimension
    True
    >>> pounds_force(parse_unit("lb"), "Mass of the hook") is None
    True
    """
    return _force(unit.text, words) if _POUND.search(unit.text) else None


@lru_cache(maxsize=4096)
def _force(text: str, words: str) -> Unit | None:
    try:
        force = parse_unit(_POUND.sub("lbf", text))
    except UnitError:
        return None
    if any(force.dimension == kind(name).dimension for name in _ONLY_FORCES):
        return None if _MASS.search(words) else force
    if force.dimension == kind("force").dimension:
        speaks = "force" in roles(words) or bool(_FORCE_SYMBOL.search(words))
        return force if speaks and not _MASS.search(words) else None
    return None
