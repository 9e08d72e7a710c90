"""The factor on loads that brings a sum of powers of ratios to one."""

from __future__ import annotations

import numpy as np

from doubler.catalogue.annotations import Values

_STEPS = 200
"""More than ever needed: the loops end as soon as no element moves by more than rounding."""

_ENOUGH = 1e-14
"""A step so small, as a share of the factor, changes no digit that rounding has left."""


def factor_on_all(ratios: Values, exponents: Values) -> Values:
    """Return k > 0 with ``sum((k * ratios) ** exponents) = 1`` on the last axis.

    In u = ln k the logarithm of the sum is convex and rises with a slope between the smallest and the
    largest exponent, so Newton's steps from the right of the root run down to it without a bracket.

    Parameters
    ----------
    ratios, exponents : array
        Ratios not negative, exponents positive, entries on the last axis. Where all are zero, k is infinite.
    """
    with np.errstate(divide="ignore"):
        logs = np.log(ratios)
    largest = logs.max(axis=-1)
    empty = np.isneginf(largest)
    logs = np.where(empty[..., np.newaxis], 0.0, logs)
    u = np.where(empty, 0.0, -largest)
    for _ in range(_STEPS):
        terms = exponents * (u[..., np.newaxis] + logs)
        top = terms.max(axis=-1)
        weights = np.exp(terms - top[..., np.newaxis])
        total = weights.sum(axis=-1)
        step = (top + np.log(total)) * total / (weights * exponents).sum(axis=-1)
        u = u - step
        if np.all(np.abs(step) <= _ENOUGH * np.maximum(np.abs(u), 1.0)):
            break
    return np.where(empty, np.inf, np.exp(u))


def factor_on_scaled(scaled: Values, constant: Values, exponents: Values) -> Values:
    """Return k > 0 with ``sum((constant + k * scaled) ** exponents) = 1`` on the last axis.

    Newton's steps, each replaced by a bisection where it would leave the bracket.

    Parameters
    ----------
    scaled, constant, exponents : array
        None negative; the constant ones alone sum to less than one. Where none is scaled, k is infinite.
    """
    scaled, constant, exponents = np.broadcast_arrays(scaled, constant, exponents)
    with np.errstate(divide="ignore", invalid="ignore"):
        high = np.where(scaled > 0.0, (1.0 - constant) / scaled, np.inf).min(axis=-1)
    empty = np.isposinf(high)
    high = np.where(empty, 1.0, high)
    low = np.zeros_like(high)
    k = high
    for _ in range(_STEPS):
        together = constant + k[..., np.newaxis] * scaled
        excess = (together**exponents).sum(axis=-1) - 1.0
        with np.errstate(divide="ignore", invalid="ignore"):
            powers = np.where(together > 0.0, exponents * together ** (exponents - 1.0) * scaled, 0.0)
            newton = k - excess / powers.sum(axis=-1)
        low, high = np.where(excess < 0.0, k, low), np.where(excess >= 0.0, k, high)
        fresh = np.where((newton >= low) & (newton <= high), newton, 0.5 * (low + high))
        done = np.all(np.abs(fresh - k) <= _ENOUGH * k)
        k = fresh
        if done:
            break
    return np.where(empty, np.inf, k)
