"""Natural frequencies: a mass on a spring, and uniform beams in bending."""

from __future__ import annotations

from typing import Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import (
    Frequency,
    Length,
    Mass,
    MassPerLength,
    Modulus,
    Ratio,
    SecondMoment,
    Stiffness,
    Values,
)
from doubler.catalogue.limits import POSITIVE, between, condition

Ends = Literal["cantilever", "simply supported", "fixed-fixed", "propped", "free-free"]
_MODES = 20
_STEPS = 30


def _roots(guesses: Values, sign: float) -> Values:
    """Return the roots of cos(u) + sign/cosh(u) near the guesses, by Newton's steps."""
    u = np.array(guesses)
    for _ in range(_STEPS):
        slope = -np.sin(u) - sign * np.tanh(u) / np.cosh(u)
        u = u - (np.cos(u) + sign / np.cosh(u)) / slope
    return u


def _tangent_roots(guesses: Values) -> Values:
    """Return the roots of tan(u) = tanh(u) near the guesses, by Newton's steps on sin - cos·tanh."""
    u = np.array(guesses)
    for _ in range(_STEPS):
        value = np.sin(u) - np.cos(u) * np.tanh(u)
        u = u - value / (np.cos(u) + np.sin(u) * np.tanh(u) - np.cos(u) / np.cosh(u) ** 2)
    return u


_COUNT = np.arange(1, _MODES + 1)
_BUILT_IN = _roots((_COUNT + 0.5) * np.pi, -1.0)
_WAVES = {
    "cantilever": _roots((_COUNT - 0.5) * np.pi + np.where(_COUNT == 1, 0.3, 0.0), 1.0),
    "simply supported": _COUNT * np.pi,
    "fixed-fixed": _BUILT_IN,
    "propped": _tangent_roots((_COUNT + 0.25) * np.pi),
    "free-free": _BUILT_IN,
}
"""Wave number × length of each mode; the two rigid modes of a free beam are not counted."""


@worksheet_function("STIFFNESS_FREQUENCY_MASS", valid={"stiffness": POSITIVE, "mass": POSITIVE})
def mass_on_spring(stiffness: Stiffness, mass: Mass) -> Frequency:
    r"""Natural frequency of a mass on a spring.

    .. math:: f = \frac{1}{2\pi} \sqrt{k/m}

    Parameters
    ----------
    stiffness : stiffness
        Stiffness of the spring.
    mass : mass
        Mass; the spring's own must be small beside it.

    Returns
    -------
    frequency : frequency
        Natural frequency, in cycles per time.

    Notes
    -----
    One direction, no damping, spring without mass: the true frequency is a little lower.

    References
    ----------
    S. S. Rao, Mechanical Vibrations, section on undamped free vibration (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_FREQUENCY_MASS("100 N/mm", "10 kg", "Hz")')
    15.91549431
    """
    return np.sqrt(stiffness / mass) / (2.0 * np.pi)


@worksheet_function(
    "STIFFNESS_FREQUENCY_BEAM",
    valid={
        "length": POSITIVE,
        "second_moment": POSITIVE,
        "modulus": POSITIVE,
        "mass_per_length": POSITIVE,
        "mode": between(1.0, float(_MODES)),
    },
    conditions=(condition("the mode must be a whole number", lambda mode: mode == np.floor(mode)),),
)
def beam(
    supports: Ends,
    length: Length,
    second_moment: SecondMoment,
    modulus: Modulus,
    mass_per_length: MassPerLength,
    mode: Ratio = 1.0,
) -> Frequency:
    r"""Natural frequency of a uniform beam in bending.

    .. math:: f_n = \frac{(\beta_n L)^2}{2 \pi L^2} \sqrt{\frac{E I}{\mu}}

    Parameters
    ----------
    supports : choice
        cantilever, simply supported, fixed-fixed, propped (built in and simply supported), or free-free.
    length : length
        Length of the beam.
    second_moment : second moment
        Second moment of area about the axis of bending.
    modulus : modulus
        Young's modulus.
    mass_per_length : mass per length
        Mass per length, that of whatever the beam carries evenly spread included.
    mode : ratio, optional
        Number of the mode, 1 to 20; 1, the lowest, where left out. A free beam's rigid modes are not counted.

    Returns
    -------
    frequency : frequency
        Natural frequency, in cycles per time.

    Notes
    -----
    Slender (no shear, no rotary inertia, which lower the higher modes), no axial force, no damping, supports without
    give. :math:`\beta_n L` are the roots of cos·cosh = -1 (cantilever), cos·cosh = 1 (fixed-fixed, free-free) and
    tan = tanh (propped).

    References
    ----------
    S. S. Rao, Mechanical Vibrations, section on lateral vibration of beams (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_FREQUENCY_BEAM("cantilever", "1 m", "1e6 mm^4", "200 GPa", "10 kg/m", "Hz")')
    79.13814785
    """
    waves = _WAVES[supports][mode.astype(np.intp) - 1]
    return (waves / length) ** 2 / (2.0 * np.pi) * np.sqrt(modulus * second_moment / mass_per_length)
