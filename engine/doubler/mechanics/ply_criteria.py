"""Failure criteria of plies as quadratics of the stresses, and the factor on a load that reaches the first of them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

MODES = ("fibre tension", "fibre compression", "matrix tension", "matrix compression", "shear")


@dataclass(frozen=True, slots=True)
class Mode:
    """One way to fail: f1 σ1 + f2 σ2 + F11 σ1² + F22 σ2² + F66 τ² + 2 F12 σ1 σ2 reaches one.

    `sign_1` and `sign_2` say for which signs of σ1 and σ2 it counts; zero for any.
    """

    f1: Any = 0.0
    f2: Any = 0.0
    f11: Any = 0.0
    f22: Any = 0.0
    f66: Any = 0.0
    f12: Any = 0.0
    sign_1: int = 0
    sign_2: int = 0

    def linear(self, stress: Any) -> Any:
        """Return the linear part."""
        return self.f1 * stress[0] + self.f2 * stress[1]

    def product(self, one: Any, two: Any) -> Any:
        """Return the bilinear part of two states of stress."""
        return (
            self.f11 * one[0] * two[0]
            + self.f22 * one[1] * two[1]
            + self.f66 * one[2] * two[2]
            + self.f12 * (one[0] * two[1] + one[1] * two[0])
        )


def max_stress(xt: Any, xc: Any, yt: Any, yc: Any, s: Any) -> list[Mode]:
    """Return the five modes of the greatest stress."""
    return [Mode(f1=1.0 / xt), Mode(f1=-1.0 / xc), Mode(f2=1.0 / yt), Mode(f2=-1.0 / yc), Mode(f66=1.0 / s**2)]


def max_strain(xt: Any, xc: Any, yt: Any, yc: Any, s: Any, ratio_12: Any, ratio_21: Any) -> list[Mode]:
    """Return the five modes of the greatest strain, whose limits are strengths over moduli."""
    return [
        Mode(f1=1.0 / xt, f2=-ratio_12 / xt),
        Mode(f1=-1.0 / xc, f2=ratio_12 / xc),
        Mode(f1=-ratio_21 / yt, f2=1.0 / yt),
        Mode(f1=ratio_21 / yc, f2=-1.0 / yc),
        Mode(f66=1.0 / s**2),
    ]


def tsai_hill(xt: Any, xc: Any, yt: Any, yc: Any, s: Any) -> list[Mode]:
    """Return Tsai's and Hill's quadratic for each pair of signs."""
    return [
        Mode(f11=1.0 / x**2, f22=1.0 / y**2, f66=1.0 / s**2, f12=-0.5 / x**2, sign_1=sign_1, sign_2=sign_2)
        for x, sign_1 in ((xt, 1), (xc, -1))
        for y, sign_2 in ((yt, 1), (yc, -1))
    ]


def tsai_wu(xt: Any, xc: Any, yt: Any, yc: Any, s: Any, interaction: Any) -> list[Mode]:
    """Return Tsai's and Wu's quadratic; `interaction` is F12/√(F11 F22)."""
    f11, f22 = 1.0 / (xt * xc), 1.0 / (yt * yc)
    f12 = interaction * np.sqrt(f11 * f22)
    return [Mode(1.0 / xt - 1.0 / xc, 1.0 / yt - 1.0 / yc, f11, f22, 1.0 / s**2, f12)]


def hashin(xt: Any, xc: Any, yt: Any, yc: Any, s: Any, across: Any) -> list[Mode]:
    """Return Hashin's four modes of plane stress; `across` is the shear strength across the fibres."""
    return [
        Mode(f11=1.0 / xt**2, f66=1.0 / s**2, sign_1=1),
        Mode(f11=1.0 / xc**2, sign_1=-1),
        Mode(f22=1.0 / yt**2, f66=1.0 / s**2, sign_2=1),
        Mode(f2=((0.5 * yc / across) ** 2 - 1.0) / yc, f22=0.25 / across**2, f66=1.0 / s**2, sign_2=-1),
    ]


def criterion_modes(
    criterion: str, strengths: tuple[Any, Any, Any, Any, Any], interaction: Any, across: Any
) -> list[Mode]:
    """Return the modes of a criterion that needs strengths alone."""
    if criterion == "Tsai-Hill":
        return tsai_hill(*strengths)
    if criterion == "Tsai-Wu":
        return tsai_wu(*strengths, interaction)
    if criterion == "Hashin":
        return hashin(*strengths, 0.5 * strengths[3] if across is None else across)
    return max_stress(*strengths)


def _while_positive(start: Any, rate: Any) -> tuple[Any, Any]:
    """Return between which k ≥ 0 the line start + k·rate is not negative; the first is infinite where nowhere."""
    turn = -start / np.where(rate == 0.0, 1.0, rate)
    begin = np.where(rate > 0.0, np.maximum(turn, 0.0), np.where((start >= 0.0), 0.0, np.inf))
    end = np.where(rate < 0.0, turn, np.inf)
    return np.where(end < begin, np.inf, begin), end


def _first_root(a: Any, b: Any, c: Any, above: Any) -> Any:
    """Return the smallest root of a k² + b k + c above a bound; infinite where there is none."""
    discriminant = b * b - 4.0 * a * c
    with np.errstate(all="ignore"):
        half = -0.5 * (b + np.where(b < 0.0, -1.0, 1.0) * np.sqrt(np.maximum(discriminant, 0.0)))
        roots = [half / a, c / half]
    usable = [np.where((discriminant >= 0.0) & np.isfinite(root) & (root > above), root, np.inf) for root in roots]
    return np.minimum(*usable)


def mode_factor(mode: Mode, constant: Any, scaled: Any) -> Any:
    """Return the smallest k ≥ 0 at which constant + k·scaled fails in that mode; infinite where it never does."""
    begin, end = np.zeros(()), np.full((), np.inf)
    for axis, sign in ((0, mode.sign_1), (1, mode.sign_2)):
        if sign:
            first, last = _while_positive(sign * constant[axis], sign * scaled[axis])
            begin, end = np.maximum(begin, first), np.minimum(end, last)
    a = mode.product(scaled, scaled)
    b = mode.linear(scaled) + 2.0 * mode.product(constant, scaled)
    c = mode.linear(constant) + mode.product(constant, constant) - 1.0
    inside = np.isfinite(begin) & (begin <= end)
    start = np.where(inside, begin, 0.0)
    at_once = (a * start + b) * start + c >= 0.0
    root = _first_root(a, b, c, start)
    return np.where(inside, np.where(at_once, start, np.where(root <= end, root, np.inf)), np.inf)


def mode_factors(modes: list[Mode], constant: Any, scaled: Any) -> Any:
    """Return the factor of each mode, modes on a new last axis. States of stress are triples of arrays."""
    return np.stack(np.broadcast_arrays(*(mode_factor(mode, constant, scaled) for mode in modes)), axis=-1)


def index_of(modes: list[Mode], stress: Any) -> Any:
    """Return the largest value of the quadratics that count at that stress."""
    found: Any = None
    for mode in modes:
        value = mode.linear(stress) + mode.product(stress, stress)
        for axis, sign in ((0, mode.sign_1), (1, mode.sign_2)):
            if sign:
                value = np.where(sign * stress[axis] >= 0.0, value, 0.0)
        found = value if found is None else np.maximum(found, value)
    return found
