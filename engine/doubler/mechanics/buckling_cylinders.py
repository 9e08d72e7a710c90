"""Buckling of thin-walled round cylinders: axial compression, bending, external pressure, with knock-down."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Length, Modulus, Pressure, Ratio, Stress
from doubler.catalogue.limits import POISSON, POSITIVE, between, condition
from doubler.mechanics.buckling_columns import ROUNDING

Loading = Literal["compression", "bending"]
Ends = Literal["lateral", "hydrostatic"]
_DEPTHS = {"compression": 0.901, "bending": 0.731}
_PRESSURE_KNOCK_DOWN = 0.75
_LOBES = 256
"""More circumferential waves than any cylinder within the limits has."""
_SLENDER = between(20.0, 1500.0)
_SIZES = {
    "radius": POSITIVE,
    "thickness": POSITIVE,
    "length": POSITIVE,
    "modulus": POSITIVE,
    "poissons_ratio": POISSON,
    "proportional_limit": POSITIVE,
}
_THIN = condition(
    "the radius must be 20 to 1500 times the thickness, the range of the tests behind the knock-down",
    lambda radius, thickness: (
        (radius >= 20.0 * thickness * (1.0 - 1e-9)) & (radius <= 1500.0 * thickness * (1.0 + 1e-9))
    ),
)


def _knock_down(loading: str, slenderness: Any) -> Any:
    """Return NASA's factor for radius over thickness."""
    return 1.0 - _DEPTHS[loading] * -np.expm1(-np.sqrt(slenderness) / 16.0)


def _curvature(radius: Any, thickness: Any, length: Any, poissons_ratio: Any) -> Any:
    """Return Batdorf's curvature parameter Z."""
    return length**2 / (radius * thickness) * np.sqrt(1.0 - poissons_ratio**2)


def _axial(loading: str, radius: Any, thickness: Any, modulus: Any, poissons_ratio: Any) -> Any:
    classical = modulus * thickness / (radius * np.sqrt(3.0 * (1.0 - poissons_ratio**2)))
    return _knock_down(loading, radius / thickness) * classical


@worksheet_function("BUCKLING_CYLINDER_KNOCKDOWN", valid={"slenderness": _SLENDER})
def knock_down(loading: Loading, slenderness: Ratio) -> Ratio:
    r"""Knock-down factor of a thin-walled round cylinder for its imperfections, by NASA SP-8007.

    .. math:: \gamma = 1 - c\left(1 - e^{-\frac{1}{16}\sqrt{r/t}}\right), \quad c = 0.901\ \text{or}\ 0.731

    Parameters
    ----------
    loading : choice
        compression (c = 0.901) or bending (c = 0.731).
    slenderness : ratio
        Radius over thickness, 20 to 1500.

    Returns
    -------
    ratio : ratio
        Factor γ on the classical buckling stress.

    Notes
    -----
    A lower bound of tests of unstiffened isotropic cylinders; isolated worse tests exist. Not for cut-outs, dents or
    uneven loads.

    References
    ----------
    Buckling of Thin-Walled Circular Cylinders, NASA SP-8007 (1965, revised 1968) (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_CYLINDER_KNOCKDOWN("compression", 256)')
    0.4304593765
    """
    return _knock_down(loading, slenderness)


@worksheet_function(
    "BUCKLING_CYLINDER",
    valid=_SIZES,
    conditions=(
        _THIN,
        condition(
            "so short a cylinder buckles as a wide plate: γ·Z, with Z = L²/(r·t)·√(1 − ν²), must be at least 2.85",
            lambda loading, radius, thickness, length, poissons_ratio: (
                _knock_down(loading, radius / thickness) * _curvature(radius, thickness, length, poissons_ratio)
                >= np.pi**2 / (2.0 * np.sqrt(3.0))
            ),
        ),
        condition(
            "so long a cylinder may buckle as a column, and the tests behind the knock-down end at a length of 5 times "
            "its radius; see BUCKLING_COLUMN for longer ones",
            lambda length, radius: length <= 5.0 * radius * (1.0 + 1e-9),
        ),
        condition(
            "the elastic buckling stress lies above the proportional limit, where this formula is unsafe",
            lambda loading, radius, thickness, modulus, poissons_ratio, proportional_limit: (
                _axial(loading, radius, thickness, modulus, poissons_ratio) <= ROUNDING * proportional_limit
            ),
        ),
    ),
)
def cylinder(
    loading: Loading,
    radius: Length,
    thickness: Length,
    length: Length,  # noqa: ARG001, judged by the conditions
    modulus: Modulus,
    poissons_ratio: Ratio,
    proportional_limit: Stress,  # noqa: ARG001, judged by the condition
) -> Stress:
    r"""Buckling stress of a thin-walled round cylinder in axial compression or bending, with knock-down; a magnitude.

    .. math:: \sigma_{cr} = \gamma\,\frac{E}{\sqrt{3(1 - \nu^2)}}\,\frac{t}{r}

    Parameters
    ----------
    loading : choice
        compression or bending (of the whole tube, the largest stress of it).
    radius : length
        Radius of the middle of the wall.
    thickness : length
        Thickness of the wall.
    length : length
        Length between stiff rings or ends; it serves the checks alone.
    modulus : modulus
        Young's modulus in compression.
    poissons_ratio : ratio
        Poisson's ratio.
    proportional_limit : stress
        Stress up to which the material is linear in compression.

    Returns
    -------
    stress : stress
        Allowable buckling stress, a positive magnitude.

    Notes
    -----
    Cylinders of moderate length, isotropic, unstiffened, without internal pressure (which helps), ends held round. The
    knock-down γ is that of BUCKLING_CYLINDER_KNOCKDOWN. Both loadings together: ratios add linearly.

    References
    ----------
    Buckling of Thin-Walled Circular Cylinders, NASA SP-8007 (1965, revised 1968) (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_CYLINDER("compression", "256 mm", "1 mm", "0.5 m", "70 GPa", 0.3, "200 MPa", "MPa")')
    71.23754158
    """
    return _axial(loading, radius, thickness, modulus, poissons_ratio)


def _pressure_modes(ends: str, radius: Any, thickness: Any, length: Any, poissons_ratio: Any) -> Any:
    """Return Donnell's coefficient for each number of lobes from 2 on, on a new last axis."""
    lobes = np.arange(2.0, _LOBES)
    wave = (lobes * (length / (np.pi * radius))[..., np.newaxis]) ** 2
    curved = 12.0 * (_curvature(radius, thickness, length, poissons_ratio) ** 2)[..., np.newaxis] / np.pi**4
    pushed = wave + (0.5 if ends == "hydrostatic" else 0.0)
    return ((1.0 + wave) ** 2 + curved / (1.0 + wave) ** 2) / pushed


def _cylinder_pressure(
    ends: str, radius: Any, thickness: Any, length: Any, modulus: Any, poissons_ratio: Any
) -> tuple[Any, Any]:
    """Return the pressure with knock-down, and the number of lobes."""
    radius, thickness, length, poissons_ratio = np.broadcast_arrays(radius, thickness, length, poissons_ratio)
    modes = _pressure_modes(ends, radius, thickness, length, poissons_ratio)
    stiffness = modulus * thickness**3 / (12.0 * (1.0 - poissons_ratio**2))
    lobes = 2 + np.argmin(modes, axis=-1)
    return _PRESSURE_KNOCK_DOWN * np.min(modes, axis=-1) * np.pi**2 * stiffness / (radius * length**2), lobes


def _pressure_within(
    ends: str,
    radius: Any,
    thickness: Any,
    length: Any,
    modulus: Any,
    poissons_ratio: Any,
    proportional_limit: Any,
) -> Any:
    pressure, _ = _cylinder_pressure(ends, radius, thickness, length, modulus, poissons_ratio)
    return pressure * radius <= ROUNDING * proportional_limit * thickness


@worksheet_function(
    "BUCKLING_CYLINDER_PRESSURE",
    valid=_SIZES,
    conditions=(
        _THIN,
        condition(
            "the cylinder is so long that it buckles in fewer than 4 lobes, where Donnell's equations "
            "are unsafe; use BUCKLING_RING_PRESSURE",
            lambda ends, radius, thickness, length, poissons_ratio: (
                _cylinder_pressure(ends, radius, thickness, length, 1.0, poissons_ratio)[1] >= 4
            ),
        ),
        condition(
            "so short a cylinder is no shell of moderate length: Z = L²/(r·t)·√(1 − ν²) must be at least 10",
            lambda radius, thickness, length, poissons_ratio: (
                _curvature(radius, thickness, length, poissons_ratio) >= 10.0
            ),
        ),
        condition(
            "the hoop stress at buckling lies above the proportional limit, where this elastic formula is unsafe",
            _pressure_within,
        ),
    ),
)
def cylinder_pressure(
    ends: Ends,
    radius: Length,
    thickness: Length,
    length: Length,
    modulus: Modulus,
    poissons_ratio: Ratio,
    proportional_limit: Stress,  # noqa: ARG001, judged by the condition
) -> Pressure:
    r"""External pressure at which a thin-walled round cylinder buckles, with knock-down; a magnitude.

    .. math:: p_{cr} = 0.75\,\frac{\pi^2 D}{r L^2}\,\min_n \frac{(1 + \beta^2)^2 + \frac{12 Z^2}{\pi^4 (1 +
        \beta^2)^2}}{\beta^2 + \frac12 h}, \quad \beta = \frac{n L}{\pi r}

    Parameters
    ----------
    ends : choice
        lateral (pressure on the wall alone, h = 0) or hydrostatic (on closed ends too, h = 1).
    radius : length
        Radius of the middle of the wall.
    thickness : length
        Thickness of the wall.
    length : length
        Length between stiff rings or ends, simply supported there.
    modulus : modulus
        Young's modulus in compression.
    poissons_ratio : ratio
        Poisson's ratio.
    proportional_limit : stress
        Stress up to which the material is linear in compression.

    Returns
    -------
    pressure : pressure
        Allowable external pressure, a positive magnitude.

    Notes
    -----
    Donnell's equations of the shallow shell, one half wave along, the whole number n of lobes that gives the least; the
    factor 0.75 (√γ, γ = 0.56) for imperfections. Refused below four lobes, where they give too much.

    References
    ----------
    S. B. Batdorf, NACA Report 874 (1947); Buckling of Thin-Walled Circular Cylinders, NASA SP-8007 (1968) (both from
    memory).

    Examples
    --------
    >>> cell('=BUCKLING_CYLINDER_PRESSURE("lateral", "0.5 m", "2 mm", "0.8 m", "70 GPa", 0.3, "0.2 GPa", "kPa")')
    32.70378841
    """
    return _cylinder_pressure(ends, radius, thickness, length, modulus, poissons_ratio)[0]


@worksheet_function(
    "BUCKLING_RING_PRESSURE",
    valid={name: limit for name, limit in _SIZES.items() if name != "length"},
    conditions=(
        condition(
            "the wall is no thin one: the radius must be at least 10 times the thickness",
            lambda radius, thickness: radius >= 10.0 * thickness * (1.0 - 1e-9),
        ),
        condition(
            "the hoop stress at buckling lies above the proportional limit, where this elastic formula is unsafe",
            lambda radius, thickness, modulus, poissons_ratio, proportional_limit: (
                modulus / (4.0 * (1.0 - poissons_ratio**2)) * (thickness / radius) ** 2 <= ROUNDING * proportional_limit
            ),
        ),
    ),
)
def ring_pressure(
    radius: Length,
    thickness: Length,
    modulus: Modulus,
    poissons_ratio: Ratio,
    proportional_limit: Stress,  # noqa: ARG001, judged by the condition
) -> Pressure:
    r"""External pressure at which a long thin-walled tube collapses, without knock-down; a magnitude.

    .. math:: p_{cr} = \frac{E}{4\,(1 - \nu^2)}\left(\frac{t}{r}\right)^3

    Parameters
    ----------
    radius : length
        Radius of the middle of the wall.
    thickness : length
        Thickness of the wall.
    modulus : modulus
        Young's modulus in compression.
    poissons_ratio : ratio
        Poisson's ratio; 0 for a ring cut out of a tube.
    proportional_limit : stress
        Stress up to which the material is linear in compression.

    Returns
    -------
    pressure : pressure
        Collapse pressure of the perfectly round tube, a positive magnitude.

    Notes
    -----
    Elastic, round, of even thickness, far from ends and rings: a lower bound of the elastic pressure of any length.
    Ovality lowers it; NASA SP-8007 takes a factor of 0.9 for long cylinders.

    References
    ----------
    S. P. Timoshenko, J. M. Gere, Theory of Elastic Stability, section 7.5 (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_RING_PRESSURE("50 mm", "1 mm", "72.8 GPa", 0.3, "200 MPa", "kPa")')
    160.0
    """
    return modulus / (4.0 * (1.0 - poissons_ratio**2)) * (thickness / radius) ** 3
