"""Stress concentration at shoulder fillets of flat bars and shafts: fits to Peterson's charts."""

from __future__ import annotations

from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Length, Ratio
from doubler.catalogue.limits import POSITIVE, Condition, condition

# Rows C1 … C4, each a + b·√(h/r) + c·(h/r); the factor is the sum of C·(2h/D)^0 … 3.
_PLATE_TENSION = (
    ((1.006, 1.008, -0.044), (-0.115, -0.584, 0.315), (0.245, -1.006, -0.257), (-0.135, 0.582, -0.017)),
    ((1.020, 1.009, -0.048), (-0.065, -0.165, -0.007), (-3.459, 1.266, -0.016), (3.505, -2.109, 0.069)),
)
_PLATE_BENDING = (
    ((1.007, 1.000, -0.031), (-0.270, -2.404, 0.749), (0.677, 1.133, -0.904), (-0.414, 0.271, 0.186)),
    ((1.042, 0.982, -0.036), (-3.599, 1.619, -0.431), (6.084, -5.607, 1.158), (-2.527, 3.006, -0.691)),
)
_SHAFT_TENSION = (
    ((0.926, 1.157, -0.099), (0.012, -3.036, 0.961), (-0.302, 3.977, -1.744), (0.365, -2.098, 0.878)),
    ((1.200, 0.860, -0.022), (-1.805, -0.346, -0.038), (2.198, -0.486, 0.165), (-0.593, -0.028, -0.106)),
)
_SHAFT_BENDING = (
    ((0.947, 1.206, -0.131), (0.022, -3.405, 0.915), (0.869, 1.777, -0.555), (-0.810, 0.422, -0.260)),
    ((1.232, 0.832, -0.008), (-3.813, 0.968, -0.260), (7.423, -4.868, 0.869), (-3.839, 3.070, -0.600)),
)
_SHAFT_TORSION = ((0.905, 0.783, -0.075), (-0.437, -1.969, 0.553), (1.557, 1.073, -0.578), (-1.061, 0.171, 0.086))

_SIZES = {"larger": POSITIVE, "smaller": POSITIVE, "radius": POSITIVE}
_STEP = condition(
    "smaller must be below larger; without a step there is no fillet", lambda larger, smaller: smaller < larger
)


def _range(low: float, high: float) -> Condition:
    return condition(
        f"the step's height over the fillet's radius must lie from {low:g} to {high:g}, the range of the charts",
        lambda larger, smaller, radius: (
            (0.5 * (larger - smaller) >= low * radius * (1.0 - 1e-12))
            & (0.5 * (larger - smaller) <= high * radius * (1.0 + 1e-12))
        ),
    )


def _cubic(rows: Any, height: Any, root: Any, share: Any) -> Any:
    c1, c2, c3, c4 = (a + b * root + c * height for a, b, c in rows)
    # Where almost nothing is left of the wide part the fits end up to 3 % below the factor of an even bar.
    return np.maximum(c1 + share * (c2 + share * (c3 + share * c4)), 1.0)


def _factor(ranges: Any, larger: Any, smaller: Any, radius: Any) -> Any:
    height, share = 0.5 * (larger - smaller) / radius, 1.0 - smaller / larger
    root = np.sqrt(height)
    low, high = (_cubic(rows, height, root, share) for rows in ranges)
    return np.where(height <= 2.0, low, high)


@worksheet_function("STRESS_CONCENTRATION_STEP_PLATE", valid=_SIZES, conditions=(_STEP, _range(0.1, 20.0)))
def fillet_plate(larger: Length, smaller: Length, radius: Length) -> Ratio:
    r"""Stress concentration factor of the shoulder fillets of a stepped flat bar in tension.

    .. math:: K_t = C_1 + C_2 \frac{2h}{D} + C_3\left(\frac{2h}{D}\right)^2 + C_4\left(\frac{2h}{D}\right)^3,
        \quad h = \frac{D - d}{2}

    .. math:: C_i = a_i + b_i \sqrt{h/r} + c_i\, h/r

    Parameters
    ----------
    larger : length
        Width of the wide part, D.
    smaller : length
        Width of the narrow part, d.
    radius : length
        Radius of the fillets, r.

    Returns
    -------
    factor : ratio
        Largest stress over the mean stress of the narrow part.

    Notes
    -----
    Linear elastic; the wide part long beside its width. 0.1 ≤ h/r ≤ 20, in two ranges that meet at 2. Agrees
    with chart readings to some 5 %.

    References
    ----------
    W. D. Pilkey, Peterson's Stress Concentration Factors, chart for shoulder fillets of flat bars in tension,
    fit (coefficients from memory).

    Examples
    --------
    >>> cell('=STRESS_CONCENTRATION_STEP_PLATE("40 mm", "32 mm", "4 mm")')
    1.85592
    """
    return _factor(_PLATE_TENSION, larger, smaller, radius)


@worksheet_function("STRESS_CONCENTRATION_STEP_PLATE_BENDING", valid=_SIZES, conditions=(_STEP, _range(0.1, 20.0)))
def fillet_plate_bending(larger: Length, smaller: Length, radius: Length) -> Ratio:
    r"""Stress concentration factor of the shoulder fillets of a stepped flat bar bent in its plane.

    .. math:: K_t = C_1 + C_2 \frac{2h}{D} + C_3\left(\frac{2h}{D}\right)^2 + C_4\left(\frac{2h}{D}\right)^3,
        \quad h = \frac{D - d}{2}

    .. math:: C_i = a_i + b_i \sqrt{h/r} + c_i\, h/r

    Parameters
    ----------
    larger : length
        Depth of the deep part, D.
    smaller : length
        Depth of the shallow part, d.
    radius : length
        Radius of the fillets, r.

    Returns
    -------
    factor : ratio
        Largest stress over the bending stress 6M/(td²) of the shallow part.

    Notes
    -----
    Linear elastic. 0.1 ≤ h/r ≤ 20, in two ranges that meet at 2. Agrees with chart readings to some 10 %.

    References
    ----------
    W. D. Pilkey, Peterson's Stress Concentration Factors, chart for shoulder fillets of flat bars in bending,
    fit (coefficients from memory).

    Examples
    --------
    >>> cell('=STRESS_CONCENTRATION_STEP_PLATE_BENDING("40 mm", "32 mm", "4 mm")')
    1.627584
    """
    return _factor(_PLATE_BENDING, larger, smaller, radius)


@worksheet_function("STRESS_CONCENTRATION_STEP_SHAFT", valid=_SIZES, conditions=(_STEP, _range(0.1, 20.0)))
def fillet_shaft(larger: Length, smaller: Length, radius: Length) -> Ratio:
    r"""Stress concentration factor of the shoulder fillet of a stepped round bar in tension.

    .. math:: K_t = C_1 + C_2 \frac{2h}{D} + C_3\left(\frac{2h}{D}\right)^2 + C_4\left(\frac{2h}{D}\right)^3,
        \quad h = \frac{D - d}{2}

    .. math:: C_i = a_i + b_i \sqrt{h/r} + c_i\, h/r

    Parameters
    ----------
    larger : length
        Diameter of the thick part, D.
    smaller : length
        Diameter of the thin part, d.
    radius : length
        Radius of the fillet, r.

    Returns
    -------
    factor : ratio
        Largest stress over the mean stress of the thin part.

    Notes
    -----
    Linear elastic. 0.1 ≤ h/r ≤ 20, in two ranges that meet at 2.

    The charts are low in tension: finite elements of the shaft give 5 to 10 % more (h/r 0.15 to 0.9, r/d 0.03 to
    0.25; steeper steps not compared). Raise the factor by a tenth where it decides.

    References
    ----------
    W. D. Pilkey, Peterson's Stress Concentration Factors, chart for shoulder fillets of round bars in tension,
    fit (coefficients from memory).

    Examples
    --------
    >>> cell('=STRESS_CONCENTRATION_STEP_SHAFT("40 mm", "32 mm", "4 mm")')
    1.6418
    """
    return _factor(_SHAFT_TENSION, larger, smaller, radius)


@worksheet_function("STRESS_CONCENTRATION_STEP_SHAFT_BENDING", valid=_SIZES, conditions=(_STEP, _range(0.1, 20.0)))
def fillet_shaft_bending(larger: Length, smaller: Length, radius: Length) -> Ratio:
    r"""Stress concentration factor of the shoulder fillet of a stepped round bar in bending.

    .. math:: K_t = C_1 + C_2 \frac{2h}{D} + C_3\left(\frac{2h}{D}\right)^2 + C_4\left(\frac{2h}{D}\right)^3,
        \quad h = \frac{D - d}{2}

    .. math:: C_i = a_i + b_i \sqrt{h/r} + c_i\, h/r

    Parameters
    ----------
    larger : length
        Diameter of the thick part, D.
    smaller : length
        Diameter of the thin part, d.
    radius : length
        Radius of the fillet, r.

    Returns
    -------
    factor : ratio
        Largest stress over the bending stress 32M/(πd³) of the thin part.

    Notes
    -----
    Linear elastic. 0.1 ≤ h/r ≤ 20, in two ranges that meet at 2.

    Finite elements of the shaft give from 3 % less to 4 % more at r/d of 0.06 to 0.25, and up to 6 % more at r/d =
    0.03 (h/r 0.15 to 0.9; steeper steps not compared).

    References
    ----------
    W. D. Pilkey, Peterson's Stress Concentration Factors, chart for shoulder fillets of round bars in bending,
    fit (coefficients from memory).

    Examples
    --------
    >>> cell('=STRESS_CONCENTRATION_STEP_SHAFT_BENDING("40 mm", "32 mm", "4 mm")')
    1.606856
    """
    return _factor(_SHAFT_BENDING, larger, smaller, radius)


@worksheet_function("STRESS_CONCENTRATION_STEP_SHAFT_TORSION", valid=_SIZES, conditions=(_STEP, _range(0.25, 4.0)))
def fillet_shaft_torsion(larger: Length, smaller: Length, radius: Length) -> Ratio:
    r"""Stress concentration factor of the shoulder fillet of a stepped round bar in torsion.

    .. math:: K_{ts} = C_1 + C_2 \frac{2h}{D} + C_3\left(\frac{2h}{D}\right)^2 +
        C_4\left(\frac{2h}{D}\right)^3, \quad h = \frac{D - d}{2}

    .. math:: C_i = a_i + b_i \sqrt{h/r} + c_i\, h/r

    Parameters
    ----------
    larger : length
        Diameter of the thick part, D.
    smaller : length
        Diameter of the thin part, d.
    radius : length
        Radius of the fillet, r.

    Returns
    -------
    factor : ratio
        Largest shear stress over the torsion stress 16T/(πd³) of the thin part.

    Notes
    -----
    Linear elastic. 0.25 ≤ h/r ≤ 4.

    References
    ----------
    W. D. Pilkey, Peterson's Stress Concentration Factors, chart for shoulder fillets of round bars in torsion,
    fit (coefficients from memory).

    Examples
    --------
    >>> cell('=STRESS_CONCENTRATION_STEP_SHAFT_TORSION("40 mm", "20 mm", "3 mm")')
    1.329851835
    """
    height, share = 0.5 * (larger - smaller) / radius, 1.0 - smaller / larger
    return _cubic(_SHAFT_TORSION, height, np.sqrt(height), share)
