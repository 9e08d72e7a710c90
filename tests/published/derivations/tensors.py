"""Elasticity as tensors of the fourth order: what the derivations of stiffness, stress and strain share.

Nothing here is written in engineering constants beyond Lamé's two; all else is index notation, turned or inverted
by numpy.
"""

from typing import Any

import numpy as np

PAIRS = ((0, 0), (1, 1), (2, 2), (0, 1), (1, 2), (2, 0))
"""Components in the order of the tool's rows: xx, yy, zz, xy, yz, zx."""


def isotropic(young: float, poisson: float) -> Any:
    """Return the stiffness tensor from Lamé's constants."""
    lame = young * poisson / ((1 + poisson) * (1 - 2 * poisson))
    shear = young / (2 * (1 + poisson))
    one = np.eye(3)
    crossed = np.einsum("ik,jl->ijkl", one, one) + np.einsum("il,jk->ijkl", one, one)
    return lame * np.einsum("ij,kl->ijkl", one, one) + shear * crossed


def stiffness_matrix(tensor: Any) -> Any:
    """Return stresses from engineering strains, 6 by 6."""
    return np.array([[tensor[i, j, k, l] for k, l in PAIRS] for i, j in PAIRS])


def stiffness_tensor(matrix: Any) -> Any:
    """Return the tensor of a 6 by 6 stiffness matrix."""
    tensor = np.zeros((3, 3, 3, 3))
    for row, (i, j) in enumerate(PAIRS):
        for column, (k, l) in enumerate(PAIRS):
            for a, b in ((i, j), (j, i)):
                for c, d in ((k, l), (l, k)):
                    tensor[a, b, c, d] = matrix[row][column]
    return tensor


def compliance_tensor(matrix: Any) -> Any:
    """Return the tensor of a 6 by 6 compliance matrix, whose shears are engineering strains."""
    half = np.array([1, 1, 1, 0.5, 0.5, 0.5])
    return stiffness_tensor(np.asarray(matrix) * np.outer(half, half))


def turned(tensor: Any, rotation: Any) -> Any:
    """Return a tensor of the fourth order in turned axes (the rows of the rotation)."""
    return np.einsum("ia,jb,kc,ld,abcd->ijkl", rotation, rotation, rotation, rotation, tensor)


def about_z(angle: float) -> Any:
    """Return the axes turned counter-clockwise about z, as rows."""
    c, s = np.cos(angle), np.sin(angle)
    return np.array([[c, s, 0], [-s, c, 0], [0, 0, 1]])


def ply_compliance(modulus_1: float, modulus_2: float, poisson: float, shear: float, angle: float) -> Any:
    """Return the in-plane compliance tensor of a ply whose fibres stand at that angle (radians) from x."""
    matrix = np.zeros((6, 6))
    matrix[0, 0], matrix[1, 1], matrix[3, 3] = 1 / modulus_1, 1 / modulus_2, 1 / shear
    matrix[0, 1] = matrix[1, 0] = -poisson / modulus_1
    return turned(compliance_tensor(matrix), about_z(-angle))


def plane_matrix(compliance: Any) -> Any:
    """Return strains xx, yy and engineering xy from the stresses xx, yy, xy."""
    pairs = ((0, 0), (1, 1), (0, 1))
    whole = np.array([[compliance[i, j, k, l] for k, l in pairs] for i, j in pairs])
    return whole * np.outer([1, 1, 2], [1, 1, 2])
