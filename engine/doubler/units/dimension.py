"""Dimensions as exponents over six base quantities; the angle is one of them, so that degrees are told from ratios."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

BASES = ("length", "mass", "time", "temperature", "current", "angle")
_NAMES: dict[tuple[Fraction, ...], str] = {}


class Dimension:
    """Exponents over length, mass, time, temperature, current and angle; immutable.

    Parameters
    ----------
    exponents : sequence of six numbers
        One for each of `BASES`.

    Examples
    --------
    >>> Dimension.of(length=1, mass=1, time=-2) / Dimension.of(length=2) == Dimension.of(length=-1, mass=1, time=-2)
    True
    """

    __slots__ = ("_hash", "exponents")

    exponents: tuple[Fraction, ...]

    def __init__(self, exponents: tuple[Fraction | int, ...]) -> None:
        object.__setattr__(self, "exponents", tuple([e if type(e) is Fraction else Fraction(e) for e in exponents]))
        object.__setattr__(self, "_hash", hash(self.exponents))

    def __setattr__(self, name: str, value: object) -> None:
        raise AttributeError("a Dimension is immutable")

    def __reduce__(self) -> tuple[type[Dimension], tuple[tuple[Fraction, ...]]]:
        return Dimension, (self.exponents,)

    @classmethod
    def of(cls, **exponents: Fraction | int) -> Dimension:
        """Build a dimension from named exponents."""
        unknown = set(exponents) - set(BASES)
        if unknown:
            raise ValueError(f"no such base quantity: {', '.join(sorted(unknown))}")
        return cls(tuple(exponents.get(base, 0) for base in BASES))

    @classmethod
    def none(cls) -> Dimension:
        """Return the dimension of a pure number."""
        return _NONE

    def __mul__(self, other: Dimension) -> Dimension:
        return Dimension(tuple(a + b for a, b in zip(self.exponents, other.exponents, strict=True)))

    def __truediv__(self, other: Dimension) -> Dimension:
        return Dimension(tuple(a - b for a, b in zip(self.exponents, other.exponents, strict=True)))

    def __pow__(self, power: Fraction | int) -> Dimension:
        return Dimension(tuple(a * Fraction(power) for a in self.exponents))

    def __eq__(self, other: object) -> bool:
        return isinstance(other, Dimension) and self.exponents == other.exponents

    def __hash__(self) -> int:
        return int(self._hash)  # type: ignore[attr-defined]  # set through object.__setattr__

    def without_angle(self) -> Dimension:
        """Return the dimension with the angle left out: radians are ratios in a formula's arithmetic."""
        return Dimension((*self.exponents[:-1], 0)) if self.exponents[-1] else self

    @property
    def is_none(self) -> bool:
        """Whether it is the dimension of a pure number."""
        return not any(self.exponents)

    @property
    def name(self) -> str:
        """The trade's name of the quantity (``stress``), or its exponents (``length^2·time^-1``)."""
        return _NAMES.get(self.exponents) or "·".join(
            base if e == 1 else f"{base}^{e}" for base, e in zip(BASES, self.exponents, strict=True) if e
        )

    def __repr__(self) -> str:
        return f"<Dimension {self.name}>"


_NONE = Dimension((0, 0, 0, 0, 0, 0))


def name_dimensions(names: Mapping[str, Dimension]) -> None:
    """Give dimensions their trade names; the first name given to a dimension stays."""
    for name, dimension in names.items():
        _NAMES.setdefault(dimension.exponents, name)
