"""Buckling beyond the proportional limit: tangent modulus columns, plasticity reduction of plates, crippling."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Area, Length, Modulus, Ratio, Strain, Stress
from doubler.catalogue.limits import AT_LEAST_ONE, POISSON, POSITIVE, between, condition
from doubler.mechanics.buckling_plates import SHAPES, THIN, plate_unit

Part = Literal[
    "flange, supported",
    "flange, clamped",
    "plate, supported",
    "plate, clamped",
    "plate as column",
    "shear",
]
_TANGENT_SHARES = {
    "flange, supported": (1.0, 0.0),
    "flange, clamped": (0.330, 0.335),
    "plate, supported": (0.500, 0.250),
    "plate, clamped": (0.352, 0.324),
    "shear": (1.0, 0.0),
}
_STEPS = 100
CURVE = {"modulus": POSITIVE, "proof_stress": POSITIVE, "exponent": AT_LEAST_ONE, "offset": POSITIVE}


def secant_share(stress: Any, modulus: Any, proof_stress: Any, exponent: Any, offset: Any) -> Any:
    """Return secant over Young's modulus of a Ramberg–Osgood curve."""
    return 1.0 / (1.0 + offset * modulus / proof_stress * (stress / proof_stress) ** (exponent - 1.0))


def tangent_share(stress: Any, modulus: Any, proof_stress: Any, exponent: Any, offset: Any) -> Any:
    """Return tangent over Young's modulus of a Ramberg–Osgood curve."""
    return 1.0 / (1.0 + exponent * offset * modulus / proof_stress * (stress / proof_stress) ** (exponent - 1.0))


def _reduction(
    part: str, stress: Any, modulus: Any, poissons_ratio: Any, proof_stress: Any, exponent: Any, offset: Any
) -> Any:
    """Return η at a stress; the elastic Poisson's ratio grows towards one half as the material yields."""
    along = np.sqrt(3.0) * stress if part == "shear" else stress
    secant = secant_share(along, modulus, proof_stress, exponent, offset)
    tangent = tangent_share(along, modulus, proof_stress, exponent, offset)
    poisson = 0.5 - (0.5 - poissons_ratio) * secant
    widened = secant * (1.0 - poissons_ratio**2) / (1.0 - poisson**2)
    if part == "plate as column":
        return widened * 0.25 * (1.0 + 3.0 * tangent / secant)
    first, second = _TANGENT_SHARES[part]
    return widened * (first + second * np.sqrt(1.0 + 3.0 * tangent / secant))


def _balanced(elastic: Any, top: Any, share: Any) -> Any:
    """Return the stress that equals the elastic stress times the share at that stress, at most `top`."""
    lanes = np.broadcast_shapes(np.shape(elastic), np.shape(top), np.shape(share(top)))
    low, high = np.zeros(lanes), np.broadcast_to(np.minimum(top, elastic), lanes)
    for _ in range(_STEPS):
        middle = 0.5 * (low + high)
        over = middle > share(middle) * elastic
        low, high = np.where(over, low, middle), np.where(over, middle, high)
        if np.all(high - low <= 1e-15 * high):
            break
    return 0.5 * (low + high)


@worksheet_function(
    "BUCKLING_TANGENT_STRESS",
    valid=CURVE | {"slenderness": POSITIVE},
    conditions=(
        condition(
            "so short a column passes its proof stress before it buckles; it fails by yielding or crippling",
            lambda slenderness, modulus, proof_stress, exponent, offset: (
                np.pi**2
                * modulus
                / slenderness**2
                * tangent_share(proof_stress, modulus, proof_stress, exponent, offset)
                <= proof_stress
            ),
        ),
    ),
)
def tangent_stress(
    slenderness: Ratio, modulus: Modulus, proof_stress: Stress, exponent: Ratio, offset: Strain = 0.002
) -> Stress:
    r"""Critical stress of a column by the tangent modulus (Engesser), with a Ramberg–Osgood curve; a magnitude.

    .. math:: \sigma_{cr} = \frac{\pi^2 E_t(\sigma_{cr})}{\lambda^2}, \quad \frac{1}{E_t} = \frac{1}{E} +
        \frac{n\,\varepsilon_o}{\sigma_{p}} \left(\frac{\sigma}{\sigma_{p}}\right)^{n-1}

    Parameters
    ----------
    slenderness : ratio
        Effective length over radius of gyration, from BUCKLING_SLENDERNESS.
    modulus : modulus
        Young's modulus in compression.
    proof_stress : stress
        Proof stress in compression, a positive magnitude.
    exponent : ratio
        Exponent n of the Ramberg–Osgood curve, at least 1.
    offset : strain, optional
        Plastic strain at the proof stress; 0.002 where left out.

    Returns
    -------
    stress : stress
        Critical compressive stress, a positive magnitude at most the proof stress.

    Notes
    -----
    Straight, centrally loaded, uniform, walls that do not cripple. The load at which a perfect column begins to bend
    (Shanley); it can rise little above it. Refused where it would lie above the proof stress.

    References
    ----------
    F. Engesser, 1889; F. R. Shanley, 1947; W. Ramberg, W. R. Osgood, NACA TN 902 (1943) (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_TANGENT_STRESS(50, "72 GPa", "300 MPa", 10, 0.002, "MPa")')
    219.8664104
    """
    elastic = np.pi**2 * modulus / slenderness**2
    return _balanced(elastic, proof_stress, lambda s: tangent_share(s, modulus, proof_stress, exponent, offset))


@worksheet_function(
    "BUCKLING_PLASTICITY",
    valid=CURVE | {"stress": POSITIVE, "poissons_ratio": POISSON},
    conditions=(
        condition(
            "the stress must not pass the proof stress (in shear: 1/√3 of it), up to which the curve is trusted",
            lambda part, stress, proof_stress: (
                stress * (np.sqrt(3.0) if part == "shear" else 1.0) <= proof_stress * (1.0 + 1e-12)
            ),
        ),
    ),
)
def plasticity(
    part: Part,
    stress: Stress,
    modulus: Modulus,
    poissons_ratio: Ratio,
    proof_stress: Stress,
    exponent: Ratio,
    offset: Strain = 0.002,
) -> Ratio:
    r"""Plasticity reduction factor of a plate at a stress, by Stowell and Gerard, with a Ramberg–Osgood curve.

    .. math:: \eta = \frac{E_s}{E}\,\frac{1 - \nu_e^2}{1 - \nu^2}\left(a + b\sqrt{1 + 3\frac{E_t}{E_s}}\right), \quad
        \nu = \tfrac12 - \left(\tfrac12 - \nu_e\right)\frac{E_s}{E}

    Parameters
    ----------
    part : choice
        flange, supported or flange, clamped (one edge free); plate, supported or plate, clamped (long, both edges
        held); plate as column (wide, unheld edges); shear.
    stress : stress
        Compressive stress, in shear the shear stress; a positive magnitude.
    modulus : modulus
        Young's modulus in compression.
    poissons_ratio : ratio
        Elastic Poisson's ratio.
    proof_stress : stress
        Proof stress in compression, a positive magnitude.
    exponent : ratio
        Exponent n of the Ramberg–Osgood curve, at least 1.
    offset : strain, optional
        Plastic strain at the proof stress; 0.002 where left out.

    Returns
    -------
    ratio : ratio
        Factor on the elastic buckling stress at that stress.

    Notes
    -----
    Factors a, b: 1, 0 (flange, supported; shear); 0.330, 0.335; 0.500, 0.250; 0.352, 0.324; the plate as column has
    0.25 + 0.75 Et/Es. Shear takes both moduli at √3 τ (von Mises). Long plates. In the elastic range it is one.

    References
    ----------
    G. Gerard, H. Becker, Handbook of Structural Stability, part I, NACA TN 3781 (1957) (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_PLASTICITY("plate, supported", "250 MPa", "72 GPa", 0.3, "300 MPa", 10)')
    0.8429175001
    """
    return _reduction(part, stress, modulus, poissons_ratio, proof_stress, exponent, offset)


def _part_top(part: str, proof_stress: Any) -> Any:
    return proof_stress / np.sqrt(3.0) if part == "shear" else proof_stress


def _yields_first(
    part: str,
    coefficient: Any,
    thickness: Any,
    width: Any,
    modulus: Any,
    poissons_ratio: Any,
    proof_stress: Any,
    exponent: Any,
    offset: Any,
) -> Any:
    """Return where the plate buckles at or below its proof stress."""
    top = _part_top(part, proof_stress)
    elastic = coefficient * plate_unit(thickness, width, modulus, poissons_ratio)
    return elastic * _reduction(part, top, modulus, poissons_ratio, proof_stress, exponent, offset) <= top


@worksheet_function(
    "BUCKLING_PLATE_PLASTIC",
    valid=SHAPES | CURVE | {"coefficient": POSITIVE},
    conditions=(
        THIN,
        condition(
            "the plate passes its proof stress (in shear: 1/√3 of it) before it buckles; it fails by yielding or "
            "crippling",
            _yields_first,
        ),
    ),
)
def plate_plastic(
    part: Part,
    coefficient: Ratio,
    thickness: Length,
    width: Length,
    modulus: Modulus,
    poissons_ratio: Ratio,
    proof_stress: Stress,
    exponent: Ratio,
    offset: Strain = 0.002,
) -> Stress:
    r"""Buckling stress of a flat plate with plasticity reduction by Stowell and Gerard; a magnitude.

    .. math:: \sigma_{cr} = \eta(\sigma_{cr})\,k\,\frac{\pi^2 E}{12\,(1 - \nu_e^2)}\left(\frac{t}{b}\right)^2

    Parameters
    ----------
    part : choice
        flange, supported or flange, clamped (one edge free); plate, supported or plate, clamped (long, both edges
        held); plate as column (wide, unheld edges); shear.
    coefficient : ratio
        Elastic coefficient k of that part, as for BUCKLING_PLATE.
    thickness : length
        Thickness.
    width : length
        Width to which the coefficient belongs.
    modulus : modulus
        Young's modulus in compression.
    poissons_ratio : ratio
        Elastic Poisson's ratio.
    proof_stress : stress
        Proof stress in compression, a positive magnitude.
    exponent : ratio
        Exponent n of the Ramberg–Osgood curve, at least 1.
    offset : strain, optional
        Plastic strain at the proof stress; 0.002 where left out.

    Returns
    -------
    stress : stress
        Buckling stress, a positive magnitude: compression, or shear for the part shear.

    Notes
    -----
    Solved for the stress at which elastic stress times BUCKLING_PLASTICITY equals it. Flat, thin; refused where the
    proof stress comes first.

    References
    ----------
    G. Gerard, H. Becker, Handbook of Structural Stability, part I, NACA TN 3781 (1957) (from memory).

    Examples
    --------
    >>> cell('=BUCKLING_PLATE_PLASTIC("plate, supported",4,"2 mm","60 mm","72 GPa",0.3,"300 MPa",10,0.002,"MPa")')
    247.0727297
    """
    return _balanced(
        coefficient * plate_unit(thickness, width, modulus, poissons_ratio),
        _part_top(part, proof_stress),
        lambda s: _reduction(part, s, modulus, poissons_ratio, proof_stress, exponent, offset),
    )


Section = Literal["angle, tube or V groove", "tee, cruciform or H", "zee or channel"]
_GERARD = {
    "angle, tube or V groove": (0.56, 0.85, 1 / 2),
    "tee, cruciform or H": (0.67, 0.40, 1 / 2),
    "zee or channel": (3.2, 0.75, 1 / 3),
}


@worksheet_function(
    "BUCKLING_CRIPPLING",
    valid={
        "thickness": POSITIVE,
        "area": POSITIVE,
        "modulus": POSITIVE,
        "yield_strength": POSITIVE,
        "pieces": between(1.0, 20.0),
        "largest_share": between(0.1, 1.0),
    },
    conditions=(
        condition(
            "the section is no thin-walled one: its area must be at least 10 thickness²",
            lambda area, thickness: area >= 10.0 * thickness**2 * (1.0 - 1e-9),
        ),
        condition(
            "pieces is the number of cuts and flanges: a whole number",
            lambda pieces: pieces == np.round(pieces),
        ),
    ),
)
def crippling(
    section: Section,
    thickness: Length,
    area: Area,
    modulus: Modulus,
    yield_strength: Stress,
    pieces: Ratio,
    largest_share: Ratio = 0.7,
) -> Stress:
    r"""Crippling stress of a thin-walled formed or extruded section, by Gerard's method; a magnitude.

    .. math:: \frac{F_{cc}}{F_{cy}} = 0.56\left[\frac{g t^2}{A}\sqrt{\frac{E}{F_{cy}}}\right]^{0.85},\ 0.67\left[
        \frac{g t^2}{A}\sqrt{\frac{E}{F_{cy}}}\right]^{0.40}\ \text{or}\ 3.2\left[\frac{t^2}{A}
        \left(\frac{E}{F_{cy}}\right)^{1/3}\right]^{0.75}

    Parameters
    ----------
    section : choice
        angle, tube or V groove (first form: distorted unloaded edges; other multi-corner sections and hats too); tee,
        cruciform or H (second form: straight unloaded edges); zee or channel (third form: two corners).
    thickness : length
        Thickness of the walls, the same in all.
    area : area
        Area of the section.
    modulus : modulus
        Young's modulus in compression.
    yield_strength : stress
        Yield strength in compression.
    pieces : ratio
        Number g: of flanges plus the cuts that part the section into a series of flanges (angle 2, tee 3, cruciform 4,
        zee and channel 5, H 7, square tube 12). The third form does not use it.
    largest_share : ratio, optional
        Largest crippling stress over yield strength; 0.7 where left out, the method's limit for angles; it allows 0.8
        for tees, H and tubes and 0.9 for zees and channels.

    Returns
    -------
    stress : stress
        Crippling stress, a mean over the section, a positive magnitude.

    Notes
    -----
    A fit to tests of short pieces (slenderness below about 20), with a scatter of ± 10 %. Sheet without cladding,
    walls of one thickness. A longer column follows by BUCKLING_COLUMN with this stress in the place of yield strength.

    References
    ----------
    G. Gerard, Handbook of Structural Stability, part IV, NACA TN 3784 (1957); E. F. Bruhn, Analysis and Design of
    Flight Vehicle Structures, section C7.3 (both from memory).

    Examples
    --------
    >>> cell('=BUCKLING_CRIPPLING("angle, tube or V groove","1.6 mm","90 mm^2","72 GPa","280 MPa",2,"MPa")')
    145.0252223
    """
    factor, power, root = _GERARD[section]
    count = 1.0 if section == "zee or channel" else pieces
    share = factor * (count * thickness**2 / area * (modulus / yield_strength) ** root) ** power
    return yield_strength * np.minimum(share, largest_share)
