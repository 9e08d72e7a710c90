"""A unit: its text, dimension and factor to coherent SI units."""

from __future__ import annotations

from fractions import Fraction
from typing import Any, Literal

from doubler.errors import InputError
from doubler.units.dimension import Dimension

System = Literal["metric", "us", ""]


class UnitError(InputError):
    """Unit text that cannot be read, or reads two ways; the sentence says what to write instead."""


class Unit:
    """A unit of measure; immutable, hashable, picklable.

    Attributes
    ----------
    text
        How it is shown.
    dimension
        Its dimension.
    scale
        Factor to the coherent SI unit (m, kg, s, K, A, rad).
    offset
        For °C and °F standing alone: what is added, in kelvin, after scaling; else 0.
    system
        ``"metric"``, ``"us"`` (US customary), or ``""`` where it belongs to neither.
    kind
        ``"energy"`` for units built on the joule, ``"change"`` for a temperature difference, else ``""``.
    exact
        The factor as a fraction where it is rational.

    Examples
    --------
    >>> from doubler.units import parse_unit
    >>> (parse_unit("N") * parse_unit("mm")).text
    'N·mm'
    >>> parse_unit("MPa").scale
    1000000.0
    """

    __slots__ = ("_hash", "dimension", "exact", "kind", "offset", "scale", "system", "text")

    text: str
    dimension: Dimension
    scale: float
    offset: float
    system: System
    kind: str
    exact: Fraction | None

    def __init__(
        self,
        text: str,
        dimension: Dimension,
        scale: Fraction | float,
        *,
        offset: float = 0.0,
        system: System = "",
        kind: str = "",
    ) -> None:
        put = object.__setattr__
        put(self, "text", text)
        put(self, "dimension", dimension)
        put(self, "exact", scale if isinstance(scale, Fraction) else None)
        put(self, "scale", float(scale))
        put(self, "offset", offset)
        put(self, "system", system)
        put(self, "kind", kind)
        put(self, "_hash", hash((dimension, self.scale, offset, kind)))

    def __setattr__(self, name: str, value: object) -> None:
        raise AttributeError("a Unit is immutable")

    def __reduce__(self) -> tuple[Any, ...]:
        scale = self.scale if self.exact is None else self.exact
        return _rebuild, (self.text, self.dimension, scale, self.offset, self.system, self.kind)

    def __eq__(self, other: object) -> bool:
        return self is other or (
            isinstance(other, Unit)
            and self.scale == other.scale
            and self.dimension == other.dimension
            and self.offset == other.offset
            and self.kind == other.kind
        )

    def __hash__(self) -> int:
        return int(self._hash)  # type: ignore[attr-defined]  # set through object.__setattr__

    def __mul__(self, other: Unit) -> Unit:
        text = "·".join(part for part in (self._factor_text(), other._factor_text()) if part) or "1"
        return self._combined(text, self.dimension * other.dimension, other, 1)

    def __truediv__(self, other: Unit) -> Unit:
        below = other._factor_text()
        if "·" in below or "/" in below:
            below = f"({below})"
        above = self._factor_text() or "1"
        return self._combined(f"{above}/{below}" if below else above, self.dimension / other.dimension, other, -1)

    def __pow__(self, power: Fraction | int) -> Unit:
        power = Fraction(power)
        text = self._factor_text()
        if power != 1 and text:
            text = f"({text})^{_power_text(power)}" if any(c in text for c in "·/^") else f"{text}^{_power_text(power)}"
        whole = power.denominator == 1 and self.exact is not None
        scale: Fraction | float = self.exact**power.numerator if whole and self.exact else self.scale ** float(power)
        return Unit(text or "1", self.dimension**power, scale, system=self.system, kind=self.kind)

    def _factor_text(self) -> str:
        return "" if self.text == "1" else self.text

    def _combined(self, text: str, dimension: Dimension, other: Unit, sign: int) -> Unit:
        systems = {unit.system for unit in (self, other) if unit.system}
        system: System = systems.pop() if len(systems) == 1 else ("metric" if systems else "")
        if self.exact is not None and other.exact is not None:
            scale: Fraction | float = self.exact * other.exact if sign > 0 else self.exact / other.exact
        else:
            scale = self.scale * other.scale if sign > 0 else self.scale / other.scale
        energy = "energy" in (self.kind, other.kind) and sign > 0 and dimension == _ENERGY
        return Unit(text, dimension, scale, system=system, kind="energy" if energy else "")

    def __repr__(self) -> str:
        return f"<Unit {self.text}>"


_ENERGY = Dimension.of(length=2, mass=1, time=-2)


def _power_text(power: Fraction) -> str:
    return str(power.numerator) if power.denominator == 1 else f"({power})"


def _rebuild(
    text: str, dimension: Dimension, scale: Fraction | float, offset: float, system: System, kind: str
) -> Unit:
    return Unit(text, dimension, scale, offset=offset, system=system, kind=kind)
