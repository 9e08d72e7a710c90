"""Limits of validity: of one argument, and between arguments. Outside them there is no result, only a reason."""

from __future__ import annotations

import inspect
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np

from doubler.errors import InputError


class Refusal(InputError):
    """Raised by a kernel when its arguments as a whole admit no result (a wrong choice, too few of them)."""


@dataclass(frozen=True, slots=True)
class Limit:
    """An interval in which an argument must lie, in consistent units (so a dimensional limit is zero).

    Attributes
    ----------
    low, high
        The ends; infinite where there is none.
    low_open, high_open
        True where the end itself is excluded.
    words
        The interval as a sentence's end: ``must be positive``.
    """

    low: float
    high: float
    low_open: bool
    high_open: bool
    words: str

    def all_within(self, values: Any) -> bool:
        """Return whether every element lies inside; a NaN lies outside."""
        if isinstance(values, float):
            low_ok = values > self.low if self.low_open else values >= self.low
            return low_ok and (values < self.high if self.high_open else values <= self.high)
        if self.low != -np.inf:
            lowest = np.minimum.reduce(values, axis=None, initial=np.inf)
            if not (lowest > self.low if self.low_open else lowest >= self.low):
                return False
        if self.high != np.inf:
            highest = np.maximum.reduce(values, axis=None, initial=-np.inf)
            if not (highest < self.high if self.high_open else highest <= self.high):
                return False
        return True

    def within(self, values: Any) -> Any:
        """Return a boolean array: where the value lies inside."""
        above = values > self.low if self.low_open else values >= self.low
        below = values < self.high if self.high_open else values <= self.high
        return np.logical_and(above, below)


def between(low: float, high: float, *, low_open: bool = False, high_open: bool = False) -> Limit:
    """Return the limit ``low … high``, each end included unless said open."""
    left, right = ("above" if low_open else "at least"), ("below" if high_open else "at most")
    return Limit(low, high, low_open, high_open, f"must be {left} {low:g} and {right} {high:g}")


def at_least(low: float) -> Limit:
    """Return the limit ``≥ low``."""
    return Limit(low, np.inf, False, False, f"must be at least {low:g}")


def above(low: float) -> Limit:
    """Return the limit ``> low``."""
    return Limit(low, np.inf, True, False, f"must be above {low:g}")


def below(high: float) -> Limit:
    """Return the limit ``< high``."""
    return Limit(-np.inf, high, False, True, f"must be below {high:g}")


POSITIVE = Limit(0.0, np.inf, True, False, "must be positive")
NOT_NEGATIVE = Limit(0.0, np.inf, False, False, "must not be negative")
POISSON = Limit(-1.0, 0.5, True, False, "must be above -1 and at most 0.5, the range of a stable isotropic material")
POISSON_OPEN = Limit(
    -1.0,
    0.5,
    True,
    True,
    "must be above -1 and below 0.5; at 0.5 the material is incompressible and this has no result",
)
AT_LEAST_ONE = Limit(1.0, np.inf, False, False, "must be at least 1")


@dataclass(frozen=True, slots=True)
class Condition:
    """A limit between arguments.

    Attributes
    ----------
    words
        The condition as a sentence: ``the inner diameter must be smaller than the outer diameter``.
    holds
        Takes the arguments that it names (consistent units, None where omitted), gives a bool or a boolean array.
    names
        The arguments that `holds` takes.
    """

    words: str
    holds: Callable[..., Any]
    names: tuple[str, ...]

    def check(self, values: Mapping[str, Any]) -> Any:
        """Return where the condition holds."""
        return self.holds(*(values[name] for name in self.names))


def condition(words: str, holds: Callable[..., Any]) -> Condition:
    """Declare a limit between arguments; the parameters of `holds` name the arguments."""
    return Condition(words, holds, tuple(inspect.signature(holds).parameters))
