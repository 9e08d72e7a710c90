"""Classical lamination theory: plies turned, stacked and loaded. Lanes first, then plies, then components.

The first ply is the lowest: z runs from −h/2 at its lower face to +h/2 at the upper face of the last one. Components
are x, y, xy (1, 2, 12 in the ply's own axes), shear strains engineering ones.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from doubler.catalogue.annotations import Array
from doubler.catalogue.limits import POSITIVE, Condition, Refusal, condition

STIFF = {"thicknesses": POSITIVE, "modulus_1": POSITIVE, "modulus_2": POSITIVE, "shear_modulus": POSITIVE}


def _stable(modulus_1: Any, modulus_2: Any, poissons_ratio: Any) -> Any:
    """Return where every ply is stable; columns that do not fit each other are told by the kernel."""
    try:
        return np.all(poissons_ratio**2 * modulus_2 < modulus_1, axis=-1)
    except ValueError:
        return True


PLIES_STABLE: Condition = condition(
    "poissons_ratio is too large for a stable material: its magnitude must stay below √(E1/E2); see that ν12 and ν21 "
    "are not exchanged",
    _stable,
)
EQUAL_PLIES: Condition = condition(
    "angles and thicknesses must have one entry each for every ply",
    lambda angles, thicknesses: angles.shape[-1] == thicknesses.shape[-1],
)
THERMAL_TOGETHER: Condition = condition(
    "expansion_1, expansion_2 and temperature_change belong together: give all three, or none",
    lambda expansion_1, expansion_2, temperature_change: (
        (expansion_1 is None) == (temperature_change is None) and (expansion_2 is None) == (temperature_change is None)
    ),
)
LAMINATE: tuple[Condition, ...] = (EQUAL_PLIES, PLIES_STABLE)


def reduced(modulus_1: Any, modulus_2: Any, poissons_ratio: Any, shear_modulus: Any) -> Array:
    """Return the plane-stress stiffness of plies in their own axes, 3 × 3 on the last axes."""
    e1, e2, ratio, shear = np.broadcast_arrays(modulus_1, modulus_2, poissons_ratio, shear_modulus)
    room = 1.0 - ratio**2 * e2 / e1
    matrix = np.zeros((*e1.shape, 3, 3))
    matrix[..., 0, 0], matrix[..., 1, 1], matrix[..., 2, 2] = e1 / room, e2 / room, shear
    matrix[..., 0, 1] = matrix[..., 1, 0] = ratio * e2 / room
    return matrix


def _clean(values: Any) -> Any:
    """Return cosines and sines with what rounding leaves at right angles made zero."""
    return np.where(np.abs(values) < 1e-15, 0.0, values)


def to_ply(angle: Any) -> Array:
    """Return the matrix that turns strains (engineering shear) from x, y to 1, 2; its transpose turns stresses back."""
    c, s = _clean(np.cos(angle)), _clean(np.sin(angle))
    rows = [[c * c, s * s, c * s], [s * s, c * c, -c * s], [-2.0 * c * s, 2.0 * c * s, c * c - s * s]]
    return np.stack([np.stack(np.broadcast_arrays(*row), axis=-1) for row in rows], axis=-2)


def turned(stiffness: Any, angle: Any) -> Array:
    """Return a ply's stiffness in x, y from that in its own axes."""
    turn = to_ply(angle)
    result: Array = np.matmul(np.swapaxes(turn, -1, -2), np.matmul(stiffness, turn))
    return result


def times(matrix: Any, vector: Any) -> Any:
    """Return matrix times vector on the last axes."""
    return np.matmul(matrix, vector[..., np.newaxis])[..., 0]


def of_plies(values: Any, materials: Any, count: int, name: str) -> Any:
    """Return a material's constant for every ply, on the last axis.

    Raises
    ------
    Refusal
        There are as many entries as neither plies nor materials, or a material's number has no entry.
    """
    if materials is None:
        if values.shape[-1] not in (1, count):
            have = f"{name} has {values.shape[-1]} entries"
            raise Refusal(f"{have}; give one for all plies, one a ply, or name materials")
        return np.broadcast_to(values, (*values.shape[:-1], count))
    if materials.shape[-1] != count:
        have = f"materials has {materials.shape[-1]} entries beside {count} plies"
        raise Refusal(f"{have}; give the material of each ply")
    whole = (materials == np.round(materials)) & (materials >= 1) & (materials <= values.shape[-1])
    if not np.all(whole):
        raise Refusal(f"materials holds numbers of the entries of {name}: whole numbers from 1 to {values.shape[-1]}")
    lanes = np.broadcast_shapes(values.shape[:-1], materials.shape[:-1])
    places = np.broadcast_to(materials.astype(np.int64) - 1, (*lanes, count))
    return np.take_along_axis(np.broadcast_to(values, (*lanes, values.shape[-1])), places, axis=-1)


@dataclass(frozen=True, slots=True)
class Laminate:
    """A stack of plies.

    Attributes
    ----------
    angles
        Angle of each ply from x to its fibres.
    own, along
        Stiffness of each ply in its own axes, and in x, y.
    faces
        z of the faces over the laminate's thickness, from −1/2 to 1/2: one more than there are plies.
    height
        Thickness of the laminate, with an axis of one behind the lanes.
    """

    angles: Any
    own: Any
    along: Any
    faces: Any
    height: Any

    def weights(self, power: int) -> Any:
        """Return the integral of (z/h)^power over each ply, for sums over plies."""
        return np.diff(self.faces ** (power + 1), axis=-1) / (power + 1)

    def block(self, power: int) -> Any:
        """Return A/h, B/h² or D/h³ (power 0, 1, 2)."""
        return (self.weights(power)[..., np.newaxis, np.newaxis] * self.along).sum(axis=-3)

    def compliance(self) -> Any:
        """Return the inverse of the 6 × 6 matrix of A/h, B/h², D/h³."""
        a, b, d = (self.block(power) for power in range(3))
        upper, lower = np.concatenate([a, b], axis=-1), np.concatenate([b, d], axis=-1)
        return np.linalg.inv(np.concatenate([upper, lower], axis=-2))


def laminate(
    angles: Any,
    thicknesses: Any,
    modulus_1: Any,
    modulus_2: Any,
    poissons_ratio: Any,
    shear_modulus: Any,
    materials: Any,
) -> Laminate:
    """Stack plies of constants given for each material."""
    count = angles.shape[-1]
    named = {
        "modulus_1": modulus_1,
        "modulus_2": modulus_2,
        "poissons_ratio": poissons_ratio,
        "shear_modulus": shear_modulus,
    }
    own = reduced(*(of_plies(values, materials, count, name) for name, values in named.items()))
    height = thicknesses.sum(axis=-1, keepdims=True)
    tops = np.cumsum(thicknesses, axis=-1) / height
    faces = np.concatenate([np.zeros_like(height), tops], axis=-1) - 0.5
    return Laminate(angles, own, turned(own, angles), faces, height)


def free_strains(expansion_1: Any, expansion_2: Any, temperature_change: Any, materials: Any, count: int) -> Any:
    """Return the free thermal strains of each ply in its own axes; None where none are given."""
    if temperature_change is None:
        return None
    first = of_plies(expansion_1, materials, count, "expansion_1")
    second = of_plies(expansion_2, materials, count, "expansion_2")
    first, second = np.broadcast_arrays(first, second)
    return np.stack([first, second, np.zeros_like(first)], axis=-1) * temperature_change[..., np.newaxis, np.newaxis]


def middle_strains(stack: Laminate, loads: Any, moments: Any, free: Any) -> Any:
    """Return the strains of the middle plane and the curvatures times thickness, six on the last axis.

    The free strains of the plies (None for none) act as loads; loads and moments are None where they alone do.
    """
    total: Any = 0.0
    if loads is not None:
        for name, column in (("loads", loads), ("moments", moments)):
            if column.shape[-1] != 3:
                raise Refusal(f"{name} has {column.shape[-1]} entries; give three, for x, y and xy")
        pulled, bent = np.broadcast_arrays(loads / stack.height, moments / stack.height**2)
        total = np.concatenate([pulled, bent], axis=-1)
    if free is not None:
        turn = np.swapaxes(to_ply(stack.angles), -1, -2)
        stressed = times(turn, times(stack.own, free))
        sums = [(stack.weights(power)[..., np.newaxis] * stressed).sum(axis=-2) for power in (0, 1)]
        total = total + np.concatenate(sums, axis=-1)
    return times(stack.compliance(), total)


def ply_strains(stack: Laminate, middle: Any, place: Any) -> Any:
    """Return the total strains of every ply in its own axes at z/h = `place` (plies on its last axis)."""
    here = middle[..., np.newaxis, :3] + place[..., np.newaxis] * middle[..., np.newaxis, 3:]
    return times(to_ply(stack.angles), here)


def ply_stresses(stack: Laminate, strains: Any, free: Any) -> Any:
    """Return the stresses of every ply in its own axes from its total strains."""
    return times(stack.own, strains if free is None else strains - free)
