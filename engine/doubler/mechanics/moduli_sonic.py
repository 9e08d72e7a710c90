"""Elastic constants from the speed of sound: bulk waves, shear waves, a thin rod."""

from __future__ import annotations

from typing import Any

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Density, Modulus, Ratio, Speed
from doubler.catalogue.limits import POSITIVE, condition

_LIMITS = {"longitudinal_speed": POSITIVE, "shear_speed": POSITIVE}
_DENSE = _LIMITS | {"density": POSITIVE}
_STABLE = (
    condition(
        "the longitudinal speed must be more than 2/√3 = 1.1547 times the shear speed for a stable material; "
        "see that the two are not exchanged",
        lambda longitudinal_speed, shear_speed: 3.0 * longitudinal_speed**2 > 4.0 * shear_speed**2,
    ),
)


def _shear_part(longitudinal_speed: Any, shear_speed: Any) -> Any:
    """Return G/M, the square of the ratio of speeds."""
    return (shear_speed / longitudinal_speed) ** 2


@worksheet_function("MODULUS_SONIC_YOUNG", valid=_DENSE, conditions=_STABLE)
def young(density: Density, longitudinal_speed: Speed, shear_speed: Speed) -> Modulus:
    r"""Young's modulus from density and the speeds of longitudinal and shear waves.

    .. math:: E = \rho v_s^2 \frac{3 v_l^2 - 4 v_s^2}{v_l^2 - v_s^2}

    Parameters
    ----------
    density : density
        Density of the material.
    longitudinal_speed : speed
        Speed of longitudinal (P) waves in the bulk of the material.
    shear_speed : speed
        Speed of shear (S) waves.

    Returns
    -------
    modulus : modulus
        Dynamic Young's modulus.

    Notes
    -----
    Bulk waves: the part is wide beside the wavelength. Isotropic, without damping. These are adiabatic moduli,
    in metals at most about a per cent above static ones; in damped materials much above (common practice).

    References
    ----------
    H. Kolsky, Stress Waves in Solids, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_SONIC_YOUNG("2700 kg/m^3", "6000 m/s", "3000 m/s", "GPa")')
    64.8
    """
    part = _shear_part(longitudinal_speed, shear_speed)
    return density * shear_speed**2 * (3.0 - 4.0 * part) / (1.0 - part)


@worksheet_function("MODULUS_SONIC_SHEAR", valid={"density": POSITIVE, "shear_speed": POSITIVE})
def shear(density: Density, shear_speed: Speed) -> Modulus:
    r"""Shear modulus from density and the speed of shear waves.

    .. math:: G = \rho v_s^2

    Parameters
    ----------
    density : density
        Density of the material.
    shear_speed : speed
        Speed of shear (S) waves.

    Returns
    -------
    modulus : modulus
        Dynamic shear modulus.

    Notes
    -----
    Bulk waves: the part is wide beside the wavelength. Isotropic, without damping. These are adiabatic moduli,
    in metals at most about a per cent above static ones; in damped materials much above (common practice).

    References
    ----------
    H. Kolsky, Stress Waves in Solids, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_SONIC_SHEAR("2700 kg/m^3", "3000 m/s", "GPa")')
    24.3
    """
    return density * shear_speed**2


@worksheet_function("MODULUS_SONIC_BULK", valid=_DENSE, conditions=_STABLE)
def bulk(density: Density, longitudinal_speed: Speed, shear_speed: Speed) -> Modulus:
    r"""Bulk modulus from density and the speeds of longitudinal and shear waves.

    .. math:: K = \rho \left(v_l^2 - \tfrac43 v_s^2\right)

    Parameters
    ----------
    density : density
        Density of the material.
    longitudinal_speed : speed
        Speed of longitudinal (P) waves in the bulk of the material.
    shear_speed : speed
        Speed of shear (S) waves.

    Returns
    -------
    modulus : modulus
        Dynamic (adiabatic) bulk modulus.

    Notes
    -----
    Bulk waves: the part is wide beside the wavelength. Isotropic, without damping. These are adiabatic moduli,
    in metals at most about a per cent above static ones; in damped materials much above (common practice).

    References
    ----------
    H. Kolsky, Stress Waves in Solids, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_SONIC_BULK("2700 kg/m^3", "6000 m/s", "3000 m/s", "GPa")')
    64.8
    """
    return density * (longitudinal_speed**2 - 4.0 / 3.0 * shear_speed**2)


@worksheet_function("MODULUS_SONIC_P_WAVE", valid={"density": POSITIVE, "longitudinal_speed": POSITIVE})
def p_wave(density: Density, longitudinal_speed: Speed) -> Modulus:
    r"""P-wave modulus from density and the speed of longitudinal waves in the bulk.

    .. math:: M = \rho v_l^2

    Parameters
    ----------
    density : density
        Density of the material.
    longitudinal_speed : speed
        Speed of longitudinal (P) waves in the bulk of the material.

    Returns
    -------
    modulus : modulus
        Dynamic P-wave modulus: not Young's modulus, which is lower.

    Notes
    -----
    Bulk waves: the part is wide beside the wavelength. Isotropic, without damping. These are adiabatic moduli,
    in metals at most about a per cent above static ones; in damped materials much above (common practice).

    References
    ----------
    H. Kolsky, Stress Waves in Solids, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_SONIC_P_WAVE("2700 kg/m^3", "6000 m/s", "GPa")')
    97.2
    """
    return density * longitudinal_speed**2


@worksheet_function("MODULUS_SONIC_POISSON", valid=_LIMITS, conditions=_STABLE)
def poisson(longitudinal_speed: Speed, shear_speed: Speed) -> Ratio:
    r"""Poisson's ratio from the speeds of longitudinal and shear waves.

    .. math:: \nu = \frac{v_l^2 - 2 v_s^2}{2 (v_l^2 - v_s^2)}

    Parameters
    ----------
    longitudinal_speed : speed
        Speed of longitudinal (P) waves in the bulk of the material.
    shear_speed : speed
        Speed of shear (S) waves.

    Returns
    -------
    ratio : ratio
        Dynamic Poisson's ratio; negative where the longitudinal speed is below √2 times the shear speed.

    Notes
    -----
    Bulk waves: the part is wide beside the wavelength. Isotropic, without damping. These are adiabatic moduli,
    in metals at most about a per cent above static ones; in damped materials much above (common practice).

    References
    ----------
    H. Kolsky, Stress Waves in Solids, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_SONIC_POISSON("6000 m/s", "3000 m/s")')
    0.3333333333
    """
    part = _shear_part(longitudinal_speed, shear_speed)
    return 0.5 * (1.0 - 2.0 * part) / (1.0 - part)


@worksheet_function("MODULUS_SONIC_ROD", valid={"density": POSITIVE, "rod_speed": POSITIVE})
def rod(density: Density, rod_speed: Speed) -> Modulus:
    r"""Young's modulus from density and the speed of longitudinal waves along a thin rod.

    .. math:: E = \rho v^2

    Parameters
    ----------
    density : density
        Density of the material.
    rod_speed : speed
        Speed of longitudinal waves along a rod that is thin beside the wavelength.

    Returns
    -------
    modulus : modulus
        Dynamic Young's modulus.

    Notes
    -----
    Thin rod, low frequency. In a part that is wide beside the wavelength the wave is the faster bulk wave, and
    the result would be the P-wave modulus: see MODULUS_SONIC_P_WAVE.

    References
    ----------
    H. Kolsky, Stress Waves in Solids, chapter 2 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_SONIC_ROD("2700 kg/m^3", "5000 m/s", "GPa")')
    67.5
    """
    return density * rod_speed**2
