"""Open data: how far published moduli of the elements agree with one another (item EC-10 of the check values).

The element table that the pymatgen package carries; its shares were counted independently of this package, with
G = E/(2(1+ν)) and K = E/(3(1−2ν)).
"""

import warnings

import numpy as np
import pytest
from pymatgen.core import Element

from doubler.mechanics import moduli_consistency

NAMES = ("youngs_modulus", "poissons_ratio", "rigidity_modulus", "bulk_modulus")


def table() -> np.ndarray:
    """Return E, ν, G and K (GPa) of each element that has all four, one a row."""
    rows = []
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # it warns of each value that it does not have
        for element in Element:
            row = [getattr(element, name) for name in NAMES]
            if None not in row:
                rows.append([float(value) for value in row])
    return np.array(rows)


YOUNG, RATIO, SHEAR, BULK = table().T


def test_fifty_elements_have_all_four() -> None:
    assert YOUNG.size == 50


@pytest.mark.parametrize(("within", "count"), [(0.01, 26), (0.02, 37), (0.03, 41), (0.05, 44), (0.10, 47)])
def test_shear_moduli_agree_with_youngs_modulus_and_poissons_ratio(within: float, count: int) -> None:
    off = moduli_consistency.consistency(young=YOUNG, poissons_ratio=RATIO, shear=SHEAR)
    assert int(np.sum(off <= within)) == count


@pytest.mark.parametrize(("within", "count"), [(0.01, 11), (0.02, 19), (0.05, 35), (0.10, 40)])
def test_bulk_moduli_agree_with_youngs_modulus_and_poissons_ratio(within: float, count: int) -> None:
    off = moduli_consistency.consistency(young=YOUNG, poissons_ratio=RATIO, bulk=BULK)
    assert int(np.sum(off <= within)) == count


def test_all_four_at_once_are_as_bad_as_the_worse_of_the_two() -> None:
    shear = moduli_consistency.consistency(young=YOUNG, poissons_ratio=RATIO, shear=SHEAR)
    bulk = moduli_consistency.consistency(young=YOUNG, poissons_ratio=RATIO, bulk=BULK)
    both = moduli_consistency.consistency(young=YOUNG, poissons_ratio=RATIO, shear=SHEAR, bulk=BULK)
    assert both == pytest.approx(np.maximum(shear, bulk), rel=1e-12)
