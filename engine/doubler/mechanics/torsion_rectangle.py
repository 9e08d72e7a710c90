"""Torsion of solid rectangular bars, by Saint-Venant's series summed to the last digit."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Length, Modulus, Moment, Stress, TwistRate
from doubler.catalogue.limits import POSITIVE

# Sums over odd n to infinity, so that only the exponentially small rest of each series is left to add up.
_SUM_INVERSE_FIFTHS = 1.0045237627951382  # (31/32) ζ(5)
_SUM_ALTERNATING_SQUARES = 0.9159655941772190  # Catalan's constant
_TERMS = (1, 3, 5, 7, 9, 11)  # the rest falls as exp(−nπ): below 1e-17 after the sixth


def _odd_powers(first: Any, odd: tuple[int, ...]) -> Iterator[tuple[int, Any]]:
    """Yield n and first**n for n = 1, 3, 5 …, each from the one before."""
    square, power = first * first, first
    for n in odd:
        yield n, power
        power = power * square


def torsion_constant(width: Any, thickness: Any) -> Any:
    """Return the torsion constant of a rectangle; which side is longer does not matter."""
    longer, shorter = np.maximum(width, thickness), np.minimum(width, thickness)
    ratio = longer / shorter
    tails = sum((2.0 / n**5) * small / (1.0 + small) for n, small in _odd_powers(np.exp(-np.pi * ratio), _TERMS))
    series = (64.0 / np.pi**5) * (_SUM_INVERSE_FIFTHS - tails) / ratio
    return longer * shorter**3 * (1.0 / 3.0 - series)


@worksheet_function("STRESS_TORSION_RECTANGLE", valid={"width": POSITIVE, "thickness": POSITIVE})
def torsion_rectangle(torque: Moment, width: Length, thickness: Length) -> Stress:
    r"""Largest shear stress of a solid rectangular bar in torsion, at the middle of the long sides.

    .. math:: \tau_{max} = \frac{T b}{J}\left[1 - \frac{8}{\pi^2}\sum_{n=1,3,5,\ldots} \frac{1}{n^2
        \cosh(n\pi a/2b)}\right], \quad a \ge b

    .. math:: J = a b^3\left[\frac13 - \frac{64}{\pi^5}\frac{b}{a}\sum_{n=1,3,5,\ldots} \frac{\tanh(n\pi
        a/2b)}{n^5}\right]

    Parameters
    ----------
    torque : moment
        Torque about the axis of the bar.
    width : length
        One side of the rectangle.
    thickness : length
        The other side; which of the two is longer does not matter.

    Returns
    -------
    stress : stress
        Shear stress, of the sign of the torque.

    Notes
    -----
    Warping is free: near an end held flat the stress differs. Sharp outer corners are free of stress; a bar
    much wider than thick tends to 3T/(ab²).

    References
    ----------
    B. de Saint-Venant, 1855; S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, section 109, torsion of
    rectangular bars (from memory).

    Examples
    --------
    >>> cell('=STRESS_TORSION_RECTANGLE("400 N*m", "40 mm", "30 mm", "MPa")')
    49.44286621
    """
    longer, shorter = np.maximum(width, thickness), np.minimum(width, thickness)
    ratio = longer / shorter
    # 1/cosh written with a falling exponential, which cannot overflow however thin the bar.
    falling = _odd_powers(np.exp(-0.5 * np.pi * ratio), (*_TERMS, 13, 15, 17, 19, 21, 23))
    series = sum((2.0 / n**2) * small / (1.0 + small * small) for n, small in falling)
    return torque * shorter / torsion_constant(width, thickness) * (1.0 - (8.0 / np.pi**2) * series)


@worksheet_function("STRESS_TORSION_RECTANGLE_SIDE", valid={"width": POSITIVE, "thickness": POSITIVE})
def torsion_rectangle_side(torque: Moment, width: Length, thickness: Length) -> Stress:
    r"""Shear stress of a solid rectangular bar in torsion at the middle of its short sides.

    .. math:: \tau = \frac{T b}{J}\,\frac{8}{\pi^2}\sum_{n=1,3,5,\ldots}
        \frac{(-1)^{(n-1)/2}}{n^2}\tanh\frac{n\pi a}{2b}, \quad a \ge b

    Parameters
    ----------
    torque : moment
        Torque about the axis of the bar.
    width : length
        One side of the rectangle.
    thickness : length
        The other side; which of the two is longer does not matter.

    Returns
    -------
    stress : stress
        Shear stress, of the sign of the torque.

    Notes
    -----
    Never above STRESS_TORSION_RECTANGLE; needed where the short side carries other stress as well. Warping is
    free.

    References
    ----------
    B. de Saint-Venant, 1855; S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, section 109, torsion of
    rectangular bars (from memory).

    Examples
    --------
    >>> cell('=STRESS_TORSION_RECTANGLE_SIDE("400 N*m", "40 mm", "30 mm", "MPa")')
    44.22331166
    """
    longer, shorter = np.maximum(width, thickness), np.minimum(width, thickness)
    ratio = longer / shorter
    powers = _odd_powers(np.exp(-np.pi * ratio), _TERMS)
    tails = sum((2.0 * (2 - n % 4) / n**2) * small / (1.0 + small) for n, small in powers)
    series = _SUM_ALTERNATING_SQUARES - tails
    return torque * shorter / torsion_constant(width, thickness) * (8.0 / np.pi**2) * series


@worksheet_function(
    "STIFFNESS_TWIST_RATE_RECTANGLE",
    valid={"width": POSITIVE, "thickness": POSITIVE, "shear_modulus": POSITIVE},
)
def twist_rate_rectangle(torque: Moment, width: Length, thickness: Length, shear_modulus: Modulus) -> TwistRate:
    r"""Twist per length of a solid rectangular bar in torsion.

    .. math:: \theta = \frac{T}{G J}

    Parameters
    ----------
    torque : moment
        Torque about the axis of the bar.
    width : length
        One side of the rectangle.
    thickness : length
        The other side; which of the two is longer does not matter.
    shear_modulus : modulus
        Shear modulus.

    Returns
    -------
    twist_rate : twist rate
        Angle per length, of the sign of the torque.

    Notes
    -----
    J as in STRESS_TORSION_RECTANGLE. Warping is free: an end held flat makes the bar stiffer.

    References
    ----------
    B. de Saint-Venant, 1855; S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, section 109, torsion of
    rectangular bars (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_TWIST_RATE_RECTANGLE("400 N*m", "40 mm", "30 mm", "77.5 GPa", "rad/m")')
    0.02648257032
    """
    return torque / (shear_modulus * torsion_constant(width, thickness))
