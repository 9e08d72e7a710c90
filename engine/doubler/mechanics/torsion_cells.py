"""Torsion of thin-walled sections of several closed cells, by Bredt and Batho."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Area, Length, Modulus, Moment, Ratio, Stress, TwistRate, column
from doubler.catalogue.limits import AT_LEAST_ONE, NOT_NEGATIVE, POSITIVE, Refusal
from doubler.mechanics.torsion_walls import alike_columns, encloses

Lengths: Any = column(Length)
Areas: Any = column(Area)
Numbers: Any = column(Ratio)


def _unit_twist(areas: Any, lengths: Any, thicknesses: Any, cell: Any, neighbour: Any) -> tuple[Any, Any]:
    """Return the flow of each wall, and the torque, for a twist rate times shear modulus of 1.

    A wall's flow is that of its cell less that of the neighbour behind it. In each cell the integral of flow
    over thickness round the walls is 2·area·G·θ.
    """
    alike_columns(wall_lengths=lengths, wall_thicknesses=thicknesses, wall_cells=cell, wall_neighbours=neighbour)
    count = areas.shape[-1]
    numbers = np.arange(1, count + 1)
    whole = (cell == np.round(cell)) & (neighbour == np.round(neighbour))
    known = (cell >= 1) & (cell <= count) & (neighbour >= 0) & (neighbour <= count) & (cell != neighbour)
    if not np.all(whole & known):
        raise Refusal(f"wall_cells holds the cell's number, 1 to {count}; wall_neighbours another's, or 0 for outside")
    touches = (cell[..., np.newaxis] == numbers).astype(np.float64) - (neighbour[..., np.newaxis] == numbers)
    if not np.all(np.any(touches != 0.0, axis=-2)):
        raise Refusal("a cell has no wall; give each of enclosed_areas its walls")
    if not np.all(_reach_outside(touches)):
        raise Refusal("a group of cells has no wall with the outside behind it (wall_neighbours 0)")
    if not np.all(encloses(np.abs(touches) * lengths[..., np.newaxis], areas, along=-2)):
        raise Refusal(
            "the walls of a cell are too short to go round its area, whatever its shape; see that none is missing"
        )
    slenderness = (lengths / thicknesses)[..., np.newaxis]
    flexibility = np.matmul(np.swapaxes(touches, -1, -2), slenderness * touches)
    cell_flows = np.linalg.solve(flexibility, 2.0 * areas[..., np.newaxis])
    torque = np.sum(2.0 * areas * cell_flows[..., 0], axis=-1)
    return np.matmul(touches, cell_flows)[..., 0], torque


def _reach_outside(touches: Any) -> Any:
    """Return for each cell whether it has an outer wall, or a neighbour that has one, and so on."""
    belongs = touches != 0.0
    inner = belongs.sum(axis=-1) == 2
    reached = np.any(belongs & ~inner[..., np.newaxis], axis=-2)
    shared = (belongs & inner[..., np.newaxis]).astype(np.int64)
    beside = np.matmul(np.swapaxes(shared, -1, -2), shared) > 0
    for _ in range(belongs.shape[-1] - 1):
        reached = reached | np.any(beside & reached[..., np.newaxis, :], axis=-1)
    return reached


@worksheet_function(
    "STRESS_TORSION_CELLS",
    valid={
        "enclosed_areas": POSITIVE,
        "wall_lengths": POSITIVE,
        "wall_thicknesses": POSITIVE,
        "wall_cells": AT_LEAST_ONE,
        "wall_neighbours": NOT_NEGATIVE,
        "wall": AT_LEAST_ONE,
    },
)
def torsion_cells(
    torque: Moment,
    enclosed_areas: Areas,
    wall_lengths: Lengths,
    wall_thicknesses: Lengths,
    wall_cells: Numbers,
    wall_neighbours: Numbers,
    wall: Ratio,
) -> Stress:
    r"""Shear stress in one wall of a thin-walled section of several closed cells in torsion.

    .. math:: \frac{1}{2 A_i G}\oint_i \frac{q}{t}\,ds = \theta \ \text{for every cell}

    .. math:: T = \sum 2 A_i q_i

    .. math:: \tau_w = \frac{q_i - q_j}{t_w}

    Parameters
    ----------
    torque : moment
        Torque about the axis of the bar.
    enclosed_areas : column of area
        Area enclosed by the middle lines of the walls of each cell; the cells are numbered 1, 2, … in this
        order.
    wall_lengths : column of length
        Length of the middle line of each straight or curved wall.
    wall_thicknesses : column of length
        Thickness of each wall.
    wall_cells : column of ratio
        Number of the cell to which each wall belongs.
    wall_neighbours : column of ratio
        Number of the cell on the other side of each wall; 0 where that is the outside.
    wall : ratio
        The wall asked for: 1 for the first entry of the columns.

    Returns
    -------
    stress : stress
        Mean over the thickness; positive in the sense of the torque round the wall's own cell.

    Notes
    -----
    Thin walls of one material, free to warp; all cells twist equally. Each wall stands once in the columns: an
    inner wall with the numbers of the two cells it parts.

    References
    ----------
    R. Bredt, 1896, C. Batho, 1915; T. H. G. Megson, Aircraft Structures for Engineering Students, section
    23.4 (from memory).

    Examples
    --------
    >>> cell('=STRESS_TORSION_CELLS("1 Nm",{"mm2";9;9},{"cm";1;1;.3},{"mm";1;1;1},{1;2;1},{0;0;2},1,"kPa")')
    27777.77778
    """
    flows, unit_torque = _unit_twist(enclosed_areas, wall_lengths, wall_thicknesses, wall_cells, wall_neighbours)
    count = wall_thicknesses.shape[-1]
    if not np.all((wall == np.round(wall)) & (wall <= count)):
        raise Refusal(f"wall is a whole number from 1 to {count}")
    stresses = flows / wall_thicknesses
    chosen = wall.astype(np.int64)[..., np.newaxis] - 1
    lanes = (*np.broadcast_shapes(stresses.shape[:-1], chosen.shape[:-1]), count)
    return torque / unit_torque * np.take_along_axis(np.broadcast_to(stresses, lanes), chosen, axis=-1)[..., 0]


@worksheet_function(
    "STRESS_TORSION_CELLS_MAX",
    valid={
        "enclosed_areas": POSITIVE,
        "wall_lengths": POSITIVE,
        "wall_thicknesses": POSITIVE,
        "wall_cells": AT_LEAST_ONE,
        "wall_neighbours": NOT_NEGATIVE,
    },
)
def torsion_cells_max(
    torque: Moment,
    enclosed_areas: Areas,
    wall_lengths: Lengths,
    wall_thicknesses: Lengths,
    wall_cells: Numbers,
    wall_neighbours: Numbers,
) -> Stress:
    r"""Largest shear stress in the walls of a thin-walled section of several closed cells in torsion.

    .. math:: \frac{1}{2 A_i G}\oint_i \frac{q}{t}\,ds = \theta \ \text{for every cell}

    .. math:: \tau_{max} = \max_w \frac{|q_i - q_j|}{t_w}

    Parameters
    ----------
    torque : moment
        Torque about the axis of the bar.
    enclosed_areas : column of area
        Area enclosed by the middle lines of the walls of each cell; the cells are numbered 1, 2, … in this
        order.
    wall_lengths : column of length
        Length of the middle line of each straight or curved wall.
    wall_thicknesses : column of length
        Thickness of each wall.
    wall_cells : column of ratio
        Number of the cell to which each wall belongs.
    wall_neighbours : column of ratio
        Number of the cell on the other side of each wall; 0 where that is the outside.

    Returns
    -------
    stress : stress
        Size of the largest mean stress over a thickness, not negative.

    Notes
    -----
    Thin walls of one material, free to warp; all cells twist equally. Each wall stands once in the columns.
    Re-entrant corners have more.

    References
    ----------
    R. Bredt, 1896, C. Batho, 1915; T. H. G. Megson, Aircraft Structures for Engineering Students, section
    23.4 (from memory).

    Examples
    --------
    >>> cell('=STRESS_TORSION_CELLS_MAX("1 Nm",{"mm2";9;9},{"cm";1;1;.3},{"mm";1;1;1},{1;2;1},{0;0;2},"kPa")')
    27777.77778
    """
    flows, unit_torque = _unit_twist(enclosed_areas, wall_lengths, wall_thicknesses, wall_cells, wall_neighbours)
    return np.abs(torque) / unit_torque * np.max(np.abs(flows) / wall_thicknesses, axis=-1)


@worksheet_function(
    "STIFFNESS_TWIST_RATE_CELLS",
    valid={
        "enclosed_areas": POSITIVE,
        "wall_lengths": POSITIVE,
        "wall_thicknesses": POSITIVE,
        "wall_cells": AT_LEAST_ONE,
        "wall_neighbours": NOT_NEGATIVE,
        "shear_modulus": POSITIVE,
    },
)
def twist_rate_cells(
    torque: Moment,
    enclosed_areas: Areas,
    wall_lengths: Lengths,
    wall_thicknesses: Lengths,
    wall_cells: Numbers,
    wall_neighbours: Numbers,
    shear_modulus: Modulus,
) -> TwistRate:
    r"""Twist per length of a thin-walled section of several closed cells.

    .. math:: \frac{1}{2 A_i G}\oint_i \frac{q}{t}\,ds = \theta \ \text{for every cell}

    .. math:: T = \sum 2 A_i q_i

    Parameters
    ----------
    torque : moment
        Torque about the axis of the bar.
    enclosed_areas : column of area
        Area enclosed by the middle lines of the walls of each cell; the cells are numbered 1, 2, … in this
        order.
    wall_lengths : column of length
        Length of the middle line of each straight or curved wall.
    wall_thicknesses : column of length
        Thickness of each wall.
    wall_cells : column of ratio
        Number of the cell to which each wall belongs.
    wall_neighbours : column of ratio
        Number of the cell on the other side of each wall; 0 where that is the outside.
    shear_modulus : modulus
        Shear modulus.

    Returns
    -------
    twist_rate : twist rate
        Angle per length, of the sign of the torque.

    Notes
    -----
    Thin walls of one material, free to warp; all cells twist equally. Each wall stands once in the columns.

    References
    ----------
    R. Bredt, 1896, C. Batho, 1915; T. H. G. Megson, Aircraft Structures for Engineering Students, section
    23.4 (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_TWIST_RATE_CELLS("1 Nm",{"mm2";90},{"mm";38},{"mm";1},{1},{0},"9 GPa")')
    [[7.466528194, 'deg/m']]
    """
    _, unit_torque = _unit_twist(enclosed_areas, wall_lengths, wall_thicknesses, wall_cells, wall_neighbours)
    return torque / (unit_torque * shear_modulus)
