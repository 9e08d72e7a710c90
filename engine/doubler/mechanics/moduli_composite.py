"""Constants of a unidirectional composite from those of fibre and matrix: rule of mixtures, Halpin-Tsai."""

from __future__ import annotations

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Modulus, Ratio
from doubler.catalogue.limits import POISSON, POSITIVE, between

_FRACTION = between(0.0, 1.0)
_STIFF = {"fibre": POSITIVE, "matrix": POSITIVE, "fibre_fraction": _FRACTION}


@worksheet_function("MODULUS_MIX_ALONG", valid=_STIFF)
def along(fibre: Modulus, matrix: Modulus, fibre_fraction: Ratio) -> Modulus:
    r"""Young's modulus of a unidirectional composite along the fibres, by the rule of mixtures.

    .. math:: E_1 = V_f E_f + (1 - V_f) E_m

    Parameters
    ----------
    fibre : modulus
        Young's modulus of the fibre, along it.
    matrix : modulus
        Young's modulus of the matrix.
    fibre_fraction : ratio
        Volume of fibre for each unit of volume of composite, 0 to 1.

    Returns
    -------
    modulus : modulus
        Young's modulus E1.

    Notes
    -----
    Fibres straight, parallel, bonded, no voids; linear elastic. Packed round fibres reach 0.907 at most. Strain
    alike in both (Voigt): close to tests in tension.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 3 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_MIX_ALONG("230 GPa", "3 GPa", 0.6, "GPa")')
    139.2
    """
    return fibre_fraction * fibre + (1.0 - fibre_fraction) * matrix


@worksheet_function("MODULUS_MIX_ACROSS", valid=_STIFF)
def across(fibre: Modulus, matrix: Modulus, fibre_fraction: Ratio) -> Modulus:
    r"""Young's modulus across the fibres or shear modulus, by the inverse rule of mixtures.

    .. math:: \frac{1}{E_2} = \frac{V_f}{E_f} + \frac{1 - V_f}{E_m}

    Parameters
    ----------
    fibre : modulus
        Modulus of the fibre across it: Young's for E2, shear for G12; a carbon fibre's is far below the one
        along it.
    matrix : modulus
        Modulus of the matrix of the same kind.
    fibre_fraction : ratio
        Volume of fibre for each unit of volume of composite, 0 to 1.

    Returns
    -------
    modulus : modulus
        Modulus E2 from Young's moduli, G12 from shear moduli.

    Notes
    -----
    Fibres straight, parallel, bonded, no voids; linear elastic. Packed round fibres reach 0.907 at most. Stress
    alike in both (Reuss): a lower bound, mostly below tests; MODULUS_HALPIN_TSAI comes closer.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 3 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_MIX_ACROSS("15 GPa", "3 GPa", 0.6, "GPa")')
    5.769230769
    """
    return 1.0 / (fibre_fraction / fibre + (1.0 - fibre_fraction) / matrix)


@worksheet_function(
    "MODULUS_MIX_POISSON",
    valid={"fibre": between(-1.0, 1.0, low_open=True, high_open=True), "matrix": POISSON, "fibre_fraction": _FRACTION},
)
def poisson(fibre: Ratio, matrix: Ratio, fibre_fraction: Ratio) -> Ratio:
    r"""Larger Poisson's ratio of a unidirectional composite, by the rule of mixtures.

    .. math:: \nu_{12} = V_f \nu_f + (1 - V_f) \nu_m

    Parameters
    ----------
    fibre : ratio
        Poisson's ratio ν12 of the fibre.
    matrix : ratio
        Poisson's ratio of the matrix.
    fibre_fraction : ratio
        Volume of fibre for each unit of volume of composite, 0 to 1.

    Returns
    -------
    ratio : ratio
        Poisson's ratio ν12: contraction across under stress along the fibres.

    Notes
    -----
    Fibres straight, parallel, bonded, no voids; linear elastic. Packed round fibres reach 0.907 at most.

    References
    ----------
    R. M. Jones, Mechanics of Composite Materials, chapter 3 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_MIX_POISSON(0.2, 0.35, 0.6)')
    0.26
    """
    return fibre_fraction * fibre + (1.0 - fibre_fraction) * matrix


@worksheet_function("MODULUS_HALPIN_TSAI", valid=_STIFF | {"shape": POSITIVE})
def halpin_tsai(fibre: Modulus, matrix: Modulus, fibre_fraction: Ratio, shape: Ratio) -> Modulus:
    r"""Modulus of a composite by the equations of Halpin and Tsai.

    .. math:: E = E_m \frac{1 + \xi\eta V_f}{1 - \eta V_f}, \quad \eta = \frac{E_f/E_m - 1}{E_f/E_m + \xi}

    Parameters
    ----------
    fibre : modulus
        Modulus of the fibre across it: Young's for E2, shear for G12; a carbon fibre's is far below the one
        along it.
    matrix : modulus
        Modulus of the matrix of the same kind.
    fibre_fraction : ratio
        Volume of fibre for each unit of volume of composite, 0 to 1.
    shape : ratio
        Shape and packing factor ξ, positive: for round fibres mostly 2 for E2 and 1 for G12, for short
        fibres 2·length/diameter for E1 (common practice).

    Returns
    -------
    modulus : modulus
        Modulus of the kind of those given.

    Notes
    -----
    Fibres straight, parallel, bonded, no voids; linear elastic. Packed round fibres reach 0.907 at most.
    Semi-empirical: ξ is a fit. A ξ near zero gives the inverse rule of mixtures, a large one the rule of
    mixtures. Above a fibre fraction of about 0.7 it falls short for round fibres.

    References
    ----------
    J. C. Halpin, J. L. Kardos, The Halpin-Tsai Equations: A Review, Polymer Engineering and Science 16 (1976)
    (from memory).

    Examples
    --------
    >>> cell('=MODULUS_HALPIN_TSAI("15 GPa", "3 GPa", 0.6, 2, "GPa")')
    7.695652174
    """
    part = (fibre - matrix) / (fibre + shape * matrix)
    return matrix * (1.0 + shape * part * fibre_fraction) / (1.0 - part * fibre_fraction)
