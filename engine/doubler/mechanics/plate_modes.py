"""Buckling modes of rectangular plates by Ritz's method with polynomials that meet the supports.

Lengths are in units of the width b, stresses in units of π²D/(b²t): the eigenvalue is the buckling coefficient k.
"""

from __future__ import annotations

from functools import cache
from typing import Any

import numpy as np
from numpy.polynomial import legendre

from doubler.catalogue.annotations import Array

Held = tuple[int, int]
"""Held derivatives at both ends: 0 free, 1 supported, 2 clamped."""

_TERMS = 12
_HALVINGS = 64
_CHUNK = 64
"""Plates whose two-dimensional eigenproblems are solved together; more would only use more memory."""


@cache
def strip(held: Held, terms: int) -> dict[str, Array]:
    """Return integrals over 0 … 1 of products of `terms` orthonormal functions that meet the supports.

    ``bend`` is ∫φi″φj″, ``slope`` ∫φi′φj′, ``mixed`` ∫φi φj″, ``turn`` ∫φi φj′, ``arm`` ∫φi y φj.
    """
    points, weights = legendre.leggauss(terms + 8)
    y, weights = 0.5 * (points + 1.0), 0.5 * weights
    root = np.polynomial.Polynomial(
        np.polynomial.polynomial.polyfromroots([0.0] * held[0] + [1.0] * held[1]) if sum(held) else [1.0]
    )
    values, firsts, seconds = (np.empty((terms, y.size)) for _ in range(3))
    for n in range(terms):
        shape = legendre.Legendre.basis(n, domain=[0.0, 1.0])
        first, second = shape.deriv(), shape.deriv(2)
        values[n] = root(y) * shape(y)
        firsts[n] = root.deriv()(y) * shape(y) + root(y) * first(y)
        seconds[n] = root.deriv(2)(y) * shape(y) + 2.0 * root.deriv()(y) * first(y) + root(y) * second(y)
    mass = (values * weights) @ values.T
    turn = np.linalg.inv(np.linalg.cholesky(mass))
    values, firsts, seconds = turn @ values, turn @ firsts, turn @ seconds

    def product(left: Array, right: Array) -> Array:
        result: Array = (left * weights) @ right.T
        return result

    return {
        "bend": product(seconds, seconds),
        "slope": product(firsts, firsts),
        "mixed": product(values, seconds),
        "turn": product(values, firsts),
        "arm": product(values, y * values),
    }


def _largest(load: Any, stiffness: Any) -> Any:
    """Return the largest eigenvalue μ of ``load v = μ stiffness v``; stiffness is positive definite."""
    factor = np.linalg.cholesky(stiffness)
    half = np.linalg.solve(factor, load)
    whole = np.linalg.solve(factor, np.swapaxes(half, -1, -2))
    return np.linalg.eigvalsh(0.5 * (whole + np.swapaxes(whole, -1, -2)))[..., -1]


def strip_coefficient(held: Held, half_wave: Any, stress_ratio: Any, poissons_ratio: Any) -> Any:
    """Return k of a plate whose loaded edges are simply supported, for one half wave of the length given.

    The mode is sin(πx/λ) Y(y), which is exact along the load. The stress falls from σ at y = 0 to ratio·σ at y = 1.
    """
    parts = strip(held, _TERMS)
    beta2, ratio, poisson = (
        np.asarray(v)[..., np.newaxis, np.newaxis] for v in ((np.pi / half_wave) ** 2, stress_ratio, poissons_ratio)
    )
    unit = np.eye(_TERMS)
    crossed = 2.0 * (1.0 - poisson) * parts["slope"] - poisson * (parts["mixed"] + parts["mixed"].T)
    stiffness = parts["bend"] + beta2 * crossed + beta2**2 * unit
    load = np.pi**2 * beta2 * (unit - (1.0 - ratio) * parts["arm"])
    return 1.0 / _largest(np.broadcast_to(load, stiffness.shape), stiffness)


def compression_coefficient(held: Held, aspect: Any, stress_ratio: Any, poissons_ratio: Any) -> Any:
    """Return the least k over all whole numbers of half waves along the plate.

    Over the number of half waves k falls, then rises (a curve with a single valley), so that halving finds its floor.
    """
    aspect, ratio, poisson = np.broadcast_arrays(aspect, stress_ratio, poissons_ratio)
    low, high = np.ones(aspect.shape), np.ceil(4.0 * aspect) + 1.0
    for _ in range(_HALVINGS):
        if not np.any(low < high):
            break
        middle = np.floor(0.5 * (low + high))
        here = strip_coefficient(held, aspect / middle, ratio, poisson)
        further = strip_coefficient(held, aspect / (middle + 1.0), ratio, poisson)
        falls = (further < here) & (low < high)
        low, high = np.where(falls, middle + 1.0, low), np.where(falls, high, np.minimum(middle, high))
    return strip_coefficient(held, aspect / low, ratio, poisson)


def plate_coefficient(held: int, aspect: Any, compression: Any, bending: Any, shear: Any) -> Any:
    """Return the factor on stresses together at which a plate held alike on all four edges buckles.

    Parameters
    ----------
    held : int
        1 simply supported, 2 clamped.
    aspect : array
        Length along the compression over width.
    compression, bending, shear : array
        Stresses in units of π²D/(b²t): uniform compression, the outer stress of in-plane bending, shear. Not all zero.
    """
    lanes = np.broadcast(aspect, compression, bending, shear).shape
    inputs = [np.broadcast_to(v, lanes).reshape(-1) for v in (aspect, compression, bending, shear)]
    distinct, back = np.unique(np.stack(inputs, axis=-1), axis=0, return_inverse=True)
    found = np.empty(len(distinct))
    short = int(np.count_nonzero(distinct[:, 0] <= 2.0))  # the rows are in order of the aspect
    for begin, end, along in ((0, short, 12), (short, len(distinct), 18)):
        for start in range(begin, end, _CHUNK):
            stop = min(start + _CHUNK, end)
            piece = distinct[start:stop, :, np.newaxis, np.newaxis]
            found[start:stop] = _plates(held, along, piece[:, 0], piece[:, 1], piece[:, 2], piece[:, 3])
    return found[back.reshape(-1)].reshape(lanes)


def _plates(held: int, along: int, aspect: Any, compression: Any, bending: Any, shear: Any) -> Any:
    """Solve a chunk of plates, lanes first, two axes of one behind, with `along` by nine polynomials."""
    x, y = strip((held, held), along), strip((held, held), 9)
    one_x, one_y = np.eye(along), np.eye(9)

    def times(first: Array, second: Array) -> Any:
        return np.kron(first, second)

    stiffness = (
        times(x["bend"], one_y) / aspect**4 + 2.0 * times(x["slope"], y["slope"]) / aspect**2 + times(one_x, y["bend"])
    )
    pushed = times(x["slope"], one_y)
    bent = times(x["slope"], one_y - 2.0 * y["arm"])
    sheared = times(x["turn"], y["turn"].T)
    sheared = sheared + sheared.T
    load = np.pi**2 * ((compression * pushed + bending * bent) / aspect**2 + shear * sheared / aspect)
    return 1.0 / _largest(load, stiffness)
