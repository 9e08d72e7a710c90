"""Why unit text is refused, and what to write instead."""

from __future__ import annotations

import difflib
from functools import cache

from doubler.units.table import atoms
from doubler.units.unit import UnitError

_WHOLE = {
    "": "the unit is empty; write one, such as MPa, or 1 for a pure number",
    '"': "'\"' is refused as a unit: write in",
    "'": '"\'" is refused as a unit: write ft',
    "n/a": "'N/A' is no unit; write 1 for a pure number",
    "ton": "'ton' reads several ways; write t (1000 kg), 2000 lbf or 2240 lbf as it is meant",
    "tons": "'tons' reads several ways; write t (1000 kg), 2000 lbf or 2240 lbf as it is meant",
    "cal": "'cal' reads several ways; write J",
    "''": "\"''\" is refused as a unit: write in",
    "#": "'#' is refused as a unit: write lbf for a force, lb for a mass",
}
_ATOMS = {
    "mPa": "write MPa (a millipascal is a thousand million times smaller)",
    "Mm": "write mm (a megametre is 1000 km)",
    "C": "write °C for a temperature (C alone is a coulomb)",
    "F": "write °F for a temperature, lbf or N for a force",
    "M": "write m for metres, N·m for a moment",
    "k": "write K for kelvin, kip or kN for a force",
    "Kg": "write kg",
    "KG": "write kg",
    "pound_force": "write lbf",
    "G": "write GPa for a modulus, g0 for gravity",
    "gf": "write N or kgf",
    "ksc": "write kgf/cm^2",
    "tf": "write kN (9.80665 kN to the tonne-force)",
    "l": "write mm^3, cm^3 or m^3",
    "L": "write mm^3, cm^3 or m^3",
    "hp": "write W or ft·lbf/s",
    "me": "write µε for microstrain or mm/mm for strain",
    "mue": "write µε for microstrain",
    "pa": "write Pa",
    "mK": "write K; a product below the bar stands in brackets, as in W/(m·K)",
    "cc": "write cm^3",
    "µ": "write µm for a length, µε for a strain",
    "u": "write µm for a length, µε for a strain",
    "micron": "write µm",
    "microns": "write µm",
    "psia": "write psi (and say in the label that the pressure is absolute)",
    "psig": "write psi (and say in the label that the pressure is above the atmosphere's)",
    "hbar": "write MPa (1 hbar is 10 MPa)",
    "inlb": "write in·lbf",
    "inlbf": "write in·lbf",
    "ftlb": "write ft·lbf",
    "ftlbf": "write ft·lbf",
    "lbin": "write lbf·in",
    "lbft": "write lbf·ft",
    "lbfin": "write lbf·in",
    "lbfft": "write lbf·ft",
    "kipin": "write kip·in",
    "kipft": "write kip·ft",
    "degK": "write K",
    "degR": "write °F or K",
    "grad": "write deg (1 grad is 0.9 deg)",
    "gon": "write deg (1 gon is 0.9 deg)",
    "arcsec": "write deg (3600 arcsec are 1 deg)",
    "turn": "write rev",
    "turns": "write rev",
    "cycle": "write rev for a turn, Hz for cycles a second",
    "cycles": "write rev for turns, Hz for cycles a second",
    "cps": "write Hz",
    "mph": "write ft/s or m/s",
    "kph": "write m/s (1 km/h is written km/h)",
    "knot": "write m/s or ft/s",
    "kt": "write m/s or ft/s for knots, kN for a force",
    "dyn": "write N (100000 dyn are 1 N)",
    "erg": "write J",
    "Btu": "write J",
    "BTU": "write J",
}


def refuse_whole(text: str) -> None:
    """Raise where the text as a whole is known to be no unit, or to read several ways."""
    why = _WHOLE.get(text.casefold())
    if why:
        raise UnitError(why)


@cache
def _by_case() -> dict[str, list[str]]:
    found: dict[str, list[str]] = {}
    for spelling in atoms():
        found.setdefault(spelling.casefold(), []).append(spelling)
    return found


def refuse_atom(text: str, given: str) -> str:
    """Return the sentence that refuses one part of a unit, with the spelling that was likely meant."""
    where = f"{text!r}" if text == given.strip() else f"{text!r} in {given!r}"
    if text in _ATOMS:
        return f"{where} is refused as a unit: {_ATOMS[text]}"
    same_letters = [spelling for spelling in _by_case().get(text.casefold(), []) if spelling != text]
    if same_letters:
        return f"{where} has the wrong case; write {' or '.join(dict.fromkeys(same_letters))}"
    near = difflib.get_close_matches(text, list(atoms()), n=1, cutoff=0.75)
    offer = (
        f"; did you mean {near[0]}?" if near else "; doubler reads units such as N, kN, lbf, mm, in, MPa, ksi, N·m, µε"
    )
    return f"{where} is no unit that doubler knows{offer}"
