"""The fifteen pairs of isotropic elastic constants, each brought to shear modulus and Poisson's ratio."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import Any, NamedTuple

import numpy as np

from doubler.catalogue.limits import Refusal

NAMES = ("young", "poissons_ratio", "shear", "bulk", "lame", "p_wave")
TWO = 2
_TWO_MATERIALS = ("young", "p_wave")


class State(NamedTuple):
    """An isotropic material: G, ν, and 1 − 2ν apart, which near ν = 0.5 can't be taken from ν without loss."""

    shear: Any
    ratio: Any
    compressibility: Any


def chosen(given: Sequence[Any]) -> tuple[str, ...]:
    """Return the names of the constants that are given, in the order of `NAMES`."""
    return tuple(name for name, value in zip(NAMES, given, strict=True) if value is not None)


def is_settled(given: Sequence[Any], branch: str | None) -> bool:
    """Return whether the constants given, with the branch, settle one material."""
    names = chosen(given)
    return len(names) == TWO and (branch is None) != (names == _TWO_MATERIALS)


def refuse_unless_settled(given: Sequence[Any], branch: str | None) -> None:
    """Raise where the constants given do not settle one material.

    Raises
    ------
    Refusal
        Fewer or more than two are given, or a branch is missing or out of place.
    """
    names = chosen(given)
    if len(names) != TWO:
        found = ", ".join(names) if names else "none"
        more = "" if len(names) < TWO else "; whether three or more agree, MODULUS_CONSISTENCY tells"
        raise Refusal(
            f"give exactly two of {', '.join(NAMES)} and leave the others out; {len(names)} are given ({found}){more}"
        )
    if names == _TWO_MATERIALS and branch is None:
        raise Refusal(
            'young and p_wave are shared by two materials, one with a negative Poisson\'s ratio; write "positive" or '
            '"negative" as branch, or give another constant'
        )
    if names != _TWO_MATERIALS and branch is not None:
        raise Refusal("branch is for young with p_wave alone; leave it out")


def solve(given: Sequence[Any], branch: str | None) -> State:
    """Return the material of two constants that are settled; NaN or values that are not stable where there is none."""
    first, second = chosen(given)
    one, other = (value for value in given if value is not None)
    if branch == "negative":
        return _young_p_wave(one, other, auxetic=True)
    return _PAIRS[first, second](one, other)


def is_stable(state: State) -> Any:
    """Return where the material is stable: G > 0 and −1 < ν ≤ 0.5 (then E > 0 and K > 0)."""
    return (
        np.isfinite(state.shear)
        & (state.shear > 0.0)
        & (state.ratio > -1.0)
        & (state.compressibility >= 0.0)
        & np.isfinite(state.compressibility)
    )


def value_of(name: str, state: State) -> Any:
    """Return one constant of the material."""
    shear, ratio, compressibility = state
    if name == "poissons_ratio":
        return ratio
    if name == "shear":
        return shear
    if name == "young":
        return 2.0 * shear * (1.0 + ratio)
    top = {"bulk": (1.0 + ratio) / 3.0, "lame": ratio, "p_wave": 1.0 - ratio}[name]
    return 2.0 * shear * top / compressibility


def _young_ratio(young: Any, ratio: Any) -> State:
    return State(0.5 * young / (1.0 + ratio), ratio, 1.0 - 2.0 * ratio)


def _young_shear(young: Any, shear: Any) -> State:
    return State(shear, (young - 2.0 * shear) / (2.0 * shear), (3.0 * shear - young) / shear)


def _young_bulk(young: Any, bulk: Any) -> State:
    return State(3.0 * bulk * young / (9.0 * bulk - young), (3.0 * bulk - young) / (6.0 * bulk), young / (3.0 * bulk))


def _young_lame(young: Any, lame: Any) -> State:
    root = np.sqrt(young**2 + 9.0 * lame**2 + 2.0 * young * lame)
    # One form each side of 3λ = E, so that nothing is lost where the terms cancel.
    rest = 3.0 * lame - young
    shear = np.where(rest > 0.0, 2.0 * young * lame / (root + np.abs(rest)), 0.25 * (root - rest))
    return State(shear, 2.0 * lame / (young + lame + root), shear / (lame + shear))


def _young_p_wave(young: Any, p_wave: Any, *, auxetic: bool = False) -> State:
    root = np.sqrt((p_wave - young) * (9.0 * p_wave - young))
    total = 3.0 * p_wave + young + root
    shear = 0.125 * total if auxetic else 2.0 * young * p_wave / total
    ratio = (young - p_wave - root if auxetic else young - p_wave + root) / (4.0 * p_wave)
    return State(shear, ratio, shear / (p_wave - shear))


def _ratio_shear(ratio: Any, shear: Any) -> State:
    return State(shear, ratio, 1.0 - 2.0 * ratio)


def _ratio_bulk(ratio: Any, bulk: Any) -> State:
    return State(1.5 * bulk * (1.0 - 2.0 * ratio) / (1.0 + ratio), ratio, 1.0 - 2.0 * ratio)


def _ratio_lame(ratio: Any, lame: Any) -> State:
    return State(0.5 * lame * (1.0 - 2.0 * ratio) / ratio, ratio, 1.0 - 2.0 * ratio)


def _ratio_p_wave(ratio: Any, p_wave: Any) -> State:
    return State(0.5 * p_wave * (1.0 - 2.0 * ratio) / (1.0 - ratio), ratio, 1.0 - 2.0 * ratio)


def _shear_bulk(shear: Any, bulk: Any) -> State:
    whole = 3.0 * bulk + shear
    return State(shear, 0.5 * (3.0 * bulk - 2.0 * shear) / whole, 3.0 * shear / whole)


def _shear_lame(shear: Any, lame: Any) -> State:
    return State(shear, 0.5 * lame / (lame + shear), shear / (lame + shear))


def _shear_p_wave(shear: Any, p_wave: Any) -> State:
    return State(shear, 0.5 * (p_wave - 2.0 * shear) / (p_wave - shear), shear / (p_wave - shear))


def _bulk_lame(bulk: Any, lame: Any) -> State:
    whole = 3.0 * bulk - lame
    return State(1.5 * (bulk - lame), lame / whole, 3.0 * (bulk - lame) / whole)


def _bulk_p_wave(bulk: Any, p_wave: Any) -> State:
    whole = 3.0 * bulk + p_wave
    return State(0.75 * (p_wave - bulk), (3.0 * bulk - p_wave) / whole, 3.0 * (p_wave - bulk) / whole)


def _lame_p_wave(lame: Any, p_wave: Any) -> State:
    return State(0.5 * (p_wave - lame), lame / (p_wave + lame), (p_wave - lame) / (p_wave + lame))


_PAIRS: dict[tuple[str, str], Callable[[Any, Any], State]] = {
    ("young", "poissons_ratio"): _young_ratio,
    ("young", "shear"): _young_shear,
    ("young", "bulk"): _young_bulk,
    ("young", "lame"): _young_lame,
    ("young", "p_wave"): _young_p_wave,
    ("poissons_ratio", "shear"): _ratio_shear,
    ("poissons_ratio", "bulk"): _ratio_bulk,
    ("poissons_ratio", "lame"): _ratio_lame,
    ("poissons_ratio", "p_wave"): _ratio_p_wave,
    ("shear", "bulk"): _shear_bulk,
    ("shear", "lame"): _shear_lame,
    ("shear", "p_wave"): _shear_p_wave,
    ("bulk", "lame"): _bulk_lame,
    ("bulk", "p_wave"): _bulk_p_wave,
    ("lame", "p_wave"): _lame_p_wave,
}
