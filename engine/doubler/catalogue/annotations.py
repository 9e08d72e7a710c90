"""What a declaration says about each argument and the result, written as type annotations.

A kernel is annotated with the aliases of this module (``force: Force``); the record of the function reads them back.
At run time a kernel receives plain floats or float64 arrays in consistent units, whatever the alias.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Annotated, Any

import numpy as np
from numpy.typing import NDArray

Values = Any
"""A float or a float64 array; lanes (cases, rows) on the leading axes."""

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Quantity:
    """A physical quantity of one kind of `doubler.units.KINDS`."""

    kind: str


@dataclass(frozen=True, slots=True)
class Alike:
    """A quantity of any dimension, the same in all arguments (and the result) that carry the same letter.

    `powers` maps letters to exponents, so that ``Alike({"y": 1, "x": -1})`` is a slope 'y per x'.
    """

    powers: tuple[tuple[str, int], ...]

    def __init__(self, powers: str | Mapping[str, int]) -> None:
        pairs = {powers: 1} if isinstance(powers, str) else powers
        object.__setattr__(self, "powers", tuple(sorted(pairs.items())))

    @property
    def letter(self) -> str | None:
        """The single letter of an argument's own dimension; None for a derived one."""
        return self.powers[0][0] if len(self.powers) == 1 and self.powers[0][1] == 1 else None


@dataclass(frozen=True, slots=True)
class Words:
    """A text argument or a text result: a name, a label, a key of a table."""


@dataclass(frozen=True, slots=True)
class Entries:
    """Marks a whole column (or row) as one argument: its entries stand on the last axis of the array."""


@dataclass(frozen=True, slots=True)
class Row:
    """Marks a result of several values side by side, each with a name; they stand on the last axis."""

    names: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Square:
    """Marks a result that is a square matrix on the last two axes."""

    size: int


def of(kind: str, *marks: object) -> Any:
    """Return the annotation of a quantity of that kind."""
    return Annotated[(Values, Quantity(kind), *marks)]


def column(annotation: Any) -> Any:
    """Return the annotation of a whole column of that quantity (or of text), entries on the last axis."""
    return Annotated[annotation, Entries()]


def row(annotation: Any, *names: str) -> Any:
    """Return the annotation of a result row: one value under each of `names`."""
    return Annotated[annotation, Row(names)]


def square(annotation: Any, size: int) -> Any:
    """Return the annotation of a result that is a `size` × `size` matrix."""
    return Annotated[annotation, Square(size)]


Text = Annotated[Any, Words()]
X = Annotated[Values, Alike("x")]
Y = Annotated[Values, Alike("y")]
YPerX = Annotated[Values, Alike({"y": 1, "x": -1})]

Force = Annotated[Values, Quantity("force")]
Length = Annotated[Values, Quantity("length")]
Area = Annotated[Values, Quantity("area")]
SectionModulus = Annotated[Values, Quantity("volume")]
FirstMoment = Annotated[Values, Quantity("volume")]
Volume = Annotated[Values, Quantity("volume")]
SecondMoment = Annotated[Values, Quantity("second_moment")]
TorsionConstant = Annotated[Values, Quantity("second_moment")]
WarpingConstant = Annotated[Values, Quantity("warping_constant")]
Moment = Annotated[Values, Quantity("moment")]
Stress = Annotated[Values, Quantity("stress")]
Pressure = Annotated[Values, Quantity("pressure")]
Modulus = Annotated[Values, Quantity("modulus")]
Strain = Annotated[Values, Quantity("strain")]
ShearStrain = Annotated[Values, Quantity("shear_strain")]
Ratio = Annotated[Values, Quantity("ratio")]
Angle = Annotated[Values, Quantity("angle")]
Temperature = Annotated[Values, Quantity("temperature")]
TemperatureChange = Annotated[Values, Quantity("temperature_change")]
ThermalExpansion = Annotated[Values, Quantity("thermal_expansion")]
Energy = Annotated[Values, Quantity("energy")]
EnergyDensity = Annotated[Values, Quantity("energy_density")]
Stiffness = Annotated[Values, Quantity("stiffness")]
RotationalStiffness = Annotated[Values, Quantity("rotational_stiffness")]
BendingStiffness = Annotated[Values, Quantity("bending_stiffness")]
LineLoad = Annotated[Values, Quantity("line_load")]
ShearFlow = Annotated[Values, Quantity("shear_flow")]
AngularSpeed = Annotated[Values, Quantity("angular_speed")]
Frequency = Annotated[Values, Quantity("frequency")]
Mass = Annotated[Values, Quantity("mass")]
MassPerLength = Annotated[Values, Quantity("mass_per_length")]
Density = Annotated[Values, Quantity("density")]
Speed = Annotated[Values, Quantity("speed")]
Acceleration = Annotated[Values, Quantity("acceleration")]
Curvature = Annotated[Values, Quantity("curvature")]
TwistRate = Annotated[Values, Quantity("twist_rate")]
Compliance = Annotated[Values, Quantity("compliance")]
VoltageRatio = Annotated[Values, Quantity("voltage_ratio")]
Resistance = Annotated[Values, Quantity("resistance")]
StressSquared = Annotated[Values, Quantity("stress_squared")]
StressCubed = Annotated[Values, Quantity("stress_cubed")]
