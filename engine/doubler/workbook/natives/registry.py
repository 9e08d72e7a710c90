"""The register of native worksheet functions: each one's value rule and unit rule, declared side by side."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any, Final


class Omitted:
    """The type of `OMITTED`."""

    __slots__ = ()

    def __repr__(self) -> str:
        return "OMITTED"


OMITTED: Final = Omitted()
"""Stands for an argument left out between commas, for functions that then use a default of their own."""


@dataclass(frozen=True, slots=True)
class Native:
    """A native worksheet function.

    Attributes
    ----------
    name
        In capitals, without a storage prefix.
    required, optional, repeated
        Kind of each argument, one letter each; see `native`.
    rule
        The value rule: values over lanes in, a value over lanes (or a `Grid`) out.
    units
        Name of the unit rule; see `doubler.workbook.natives`.
    with_frame
        Whether the rule's first argument is the frame of evaluation (own cell, date system).
    volatile
        Whether its result changes by itself; such functions are not evaluated.
    """

    name: str
    required: str
    optional: str
    repeated: str
    rule: Callable[..., Any]
    units: str
    with_frame: bool = False
    volatile: bool = False

    @property
    def unit_rule(self) -> str:
        """The name of the unit rule."""
        return self.units

    def kinds(self, count: int) -> str | None:
        """Return the kinds of `count` arguments; None where the function does not take that many."""
        if count < len(self.required):
            return None
        kinds = self.required + self.optional
        if count <= len(kinds):
            return kinds[:count]
        if not self.repeated:
            return None
        rest = count - len(kinds)
        if rest % len(self.repeated) and self.repeated != "v(v)":
            return None
        return kinds + self.repeated * (rest // len(self.repeated))

    @property
    def arity(self) -> str:
        """How many arguments it takes, in words."""
        low, high = len(self.required), len(self.required) + len(self.optional)
        if self.repeated:
            return f"at least {low}" + ("" if len(self.repeated) == 1 else f", then by {len(self.repeated)}")
        return str(low) if low == high else f"{low} to {high}"


NATIVES: dict[str, Native] = {}
"""All native functions by name."""


def native(
    *names: str, arguments: str, units: str, with_frame: bool = False, volatile: bool = False
) -> Callable[[Callable[..., Any]], Callable[..., Any]]:
    """Declare the value rule that follows as that of a native worksheet function.

    Parameters
    ----------
    *names : str
        Its name, and further names for the same function.
    arguments : str
        One letter an argument: required ones, then after ``;`` optional ones, then after ``*`` the group that
        repeats. ``v`` one value (a range meets the formula's own row or column, or is taken cell by cell in
        an array formula); ``o`` the same, and `OMITTED` where it is left out between commas, in place of an
        empty value; ``r`` a range or value, as a `Grid` where it is a range or a cell; ``a`` the same, its
        expression evaluated as in an array formula; ``b`` as ``a``, and `OMITTED` where it is left out; ``p``
        the place of a reference; ``l`` unevaluated, as a function of no argument.
    units : str
        Name of the unit rule.
    with_frame : bool
        Pass the frame of evaluation first.
    volatile : bool
        Its result changes by itself.

    Returns
    -------
    callable
        The decorator; it gives back the rule itself.
    """
    head, _, repeated = arguments.partition("*")
    required, _, optional = head.partition(";")

    def declare(rule: Callable[..., Any]) -> Callable[..., Any]:
        for name in names:
            if name in NATIVES:
                raise TypeError(f"{name} is declared twice")
            NATIVES[name] = Native(name, required, optional, repeated, rule, units, with_frame, volatile)
        return rule

    return declare
