"""Torsion of thin-walled sections: open, and closed of one cell."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Area, Length, Modulus, Moment, Stress, TwistRate, column
from doubler.catalogue.limits import POSITIVE, Refusal, condition

Lengths: Any = column(Length)

_ROUNDED = 0.98
"""What lengths and areas rounded to a sheet's digits may leave of the bound that only a circle reaches."""


def _thin(wall_lengths: Any, wall_thicknesses: Any) -> Any:
    # Columns of unlike lengths are refused by the kernel, with the counts.
    if wall_lengths.shape[-1] != wall_thicknesses.shape[-1]:
        return True
    return np.all(wall_lengths >= 10.0 * wall_thicknesses, axis=-1)


THIN_WALLS = condition("a wall is shorter than 10 times its thickness, and not thin", _thin)


def alike_columns(**columns: Any) -> None:
    """Refuse columns of unlike lengths."""
    counts = {name: column.shape[-1] for name, column in columns.items()}
    if len(set(counts.values())) > 1:
        told = ", ".join(f"{name} has {count}" for name, count in counts.items())
        raise Refusal(f"every wall needs one entry in each column; {told}")


def open_constant(lengths: Any, thicknesses: Any) -> Any:
    """Return the torsion constant of an open thin-walled section."""
    alike_columns(wall_lengths=lengths, wall_thicknesses=thicknesses)
    return np.sum(lengths * thicknesses**3, axis=-1) / 3.0


@worksheet_function(
    "STRESS_TORSION_OPEN",
    valid={"wall_lengths": POSITIVE, "wall_thicknesses": POSITIVE},
    conditions=(THIN_WALLS,),
)
def torsion_open(torque: Moment, wall_lengths: Lengths, wall_thicknesses: Lengths) -> Stress:
    r"""Largest shear stress of an open thin-walled section in torsion.

    .. math:: \tau_{max} = \frac{T\, t_{max}}{J}

    .. math:: J = \tfrac13 \sum s\, t^3

    Parameters
    ----------
    torque : moment
        Torque about the axis of the bar.
    wall_lengths : column of length
        Length of the middle line of each straight or curved wall.
    wall_thicknesses : column of length
        Thickness of each wall.

    Returns
    -------
    stress : stress
        Shear stress at the surface of the thickest wall, of the sign of the torque.

    Notes
    -----
    Saint-Venant torsion alone: both ends must be free to warp. Where one is held flat, axial stresses arise
    that are not in this number and can exceed it. Walls at least 10 times as long as thick (common practice:
    for a single strip the stress is then at most 7 % low); a wall curved as an arc counts with its length.
    Fillets at the joints are left out.

    References
    ----------
    T. H. G. Megson, Aircraft Structures for Engineering Students, section 18.2 (from memory).

    Examples
    --------
    >>> cell('=STRESS_TORSION_OPEN("10 N*m",{"mm";25;50;25},{"mm";1.5;2.5;1.5},"MPa")')
    78.94736842
    """
    constant = open_constant(wall_lengths, wall_thicknesses)
    return torque * np.max(wall_thicknesses, axis=-1) / constant


@worksheet_function(
    "STIFFNESS_TWIST_RATE_OPEN",
    valid={"wall_lengths": POSITIVE, "wall_thicknesses": POSITIVE, "shear_modulus": POSITIVE},
    conditions=(THIN_WALLS,),
)
def twist_rate_open(
    torque: Moment, wall_lengths: Lengths, wall_thicknesses: Lengths, shear_modulus: Modulus
) -> TwistRate:
    r"""Twist per length of an open thin-walled section in torsion.

    .. math:: \theta = \frac{T}{G J}

    .. math:: J = \tfrac13 \sum s\, t^3

    Parameters
    ----------
    torque : moment
        Torque about the axis of the bar.
    wall_lengths : column of length
        Length of the middle line of each straight or curved wall.
    wall_thicknesses : column of length
        Thickness of each wall.
    shear_modulus : modulus
        Shear modulus.

    Returns
    -------
    twist_rate : twist rate
        Angle per length, of the sign of the torque.

    Notes
    -----
    Both ends free to warp; walls at least 10 times as long as thick (common practice).

    References
    ----------
    T. H. G. Megson, Aircraft Structures for Engineering Students, section 18.2 (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_TWIST_RATE_OPEN("10 N*m",{"mm";25;50;25},{"mm";1.5;2.5;1.5},"70 GPa","rad/m")')
    0.4511278195
    """
    return torque / (shear_modulus * open_constant(wall_lengths, wall_thicknesses))


def encloses(lengths: Any, area: Any, *, along: int = -1) -> Any:
    """Return whether the walls along an axis can go round an area: a circle encloses the most, P² ≥ 4πA."""
    return np.sum(lengths, axis=along) ** 2 >= 4.0 * np.pi * area * _ROUNDED


@worksheet_function(
    "STIFFNESS_TWIST_RATE_CLOSED",
    valid={
        "enclosed_area": POSITIVE,
        "wall_lengths": POSITIVE,
        "wall_thicknesses": POSITIVE,
        "shear_modulus": POSITIVE,
    },
    conditions=(
        condition(
            "the walls are too short to go round enclosed_area, whatever the shape; see that no wall is left out",
            lambda enclosed_area, wall_lengths: encloses(wall_lengths, enclosed_area),
        ),
    ),
)
def twist_rate_closed(
    torque: Moment,
    enclosed_area: Area,
    wall_lengths: Lengths,
    wall_thicknesses: Lengths,
    shear_modulus: Modulus,
) -> TwistRate:
    r"""Twist per length of a thin-walled closed section of one cell, by Bredt's second formula.

    .. math:: \theta = \frac{T}{4 A_m^2 G} \sum \frac{s}{t}

    Parameters
    ----------
    torque : moment
        Torque about the axis of the bar.
    enclosed_area : area
        Area enclosed by the middle line of the wall.
    wall_lengths : column of length
        Length of the middle line of each straight or curved wall.
    wall_thicknesses : column of length
        Thickness of each wall.
    shear_modulus : modulus
        Shear modulus.

    Returns
    -------
    twist_rate : twist rate
        Angle per length, of the sign of the torque.

    Notes
    -----
    Thin walls of one material, free to warp. A wall left out would make the cell too stiff: walls that cannot go
    round the area are refused.

    References
    ----------
    R. Bredt, 1896; T. H. G. Megson, Aircraft Structures for Engineering Students, section 18.2 (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_TWIST_RATE_CLOSED("1 kN*m","80 cm2",{"mm";100;80;100;80},{"mm";2;2;2;2},"27 GPa")')
    [[1.492077591, 'deg/m']]
    """
    alike_columns(wall_lengths=wall_lengths, wall_thicknesses=wall_thicknesses)
    slenderness = np.sum(wall_lengths / wall_thicknesses, axis=-1)
    return torque * slenderness / (4.0 * enclosed_area**2 * shear_modulus)
