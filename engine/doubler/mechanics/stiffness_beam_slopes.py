"""Slopes of single-span beams by standard cases: force, spread load, couple."""

from __future__ import annotations

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Angle, Force, Length, LineLoad, Modulus, Moment, SecondMoment
from doubler.catalogue.limits import NOT_NEGATIVE, POSITIVE, condition
from doubler.mechanics.beam_line import Support, couple_slope, force_slope, line_load_slope

_SIZES = {
    "at": NOT_NEGATIVE,
    "load_at": NOT_NEGATIVE,
    "length": POSITIVE,
    "second_moment": POSITIVE,
    "modulus": POSITIVE,
}
_OVER_ALL = {name: limit for name, limit in _SIZES.items() if name != "load_at"}
_ON_BEAM = condition("the point asked for must lie on the beam", lambda at, length: at <= length * (1.0 + 1e-12))
_LOAD_ON_BEAM = condition("the load must act on the beam", lambda load_at, length: load_at <= length * (1.0 + 1e-12))


@worksheet_function("STIFFNESS_BEAM_SLOPE_FORCE", valid=_SIZES, conditions=(_ON_BEAM, _LOAD_ON_BEAM))
def force(
    supports: Support,
    at: Length,
    force: Force,
    load_at: Length,
    length: Length,
    second_moment: SecondMoment,
    modulus: Modulus,
) -> Angle:
    r"""Slope of a beam at any point under a transverse force at a point.

    .. math:: E I\, v'' = -M(x), \quad M(x) = M_0 + V_0\,x - P\,\langle x - a \rangle

    Parameters
    ----------
    supports : choice
        cantilever (built in at the first end), simply supported, fixed-fixed, or propped (built in at the first
        end, simply supported at the other).
    at : length
        Where the slope is asked for, from the first end.
    force : force
        Transverse force.
    load_at : length
        Where it acts, from the first end.
    length : length
        Length of the beam.
    second_moment : second moment
        Second moment of area about the axis of bending.
    modulus : modulus
        Young's modulus.

    Returns
    -------
    slope : angle
        Slope: rise of the deflection along the beam.

    Notes
    -----
    The end values :math:`M_0` and :math:`V_0` follow from the supports. Uniform, slender (shear deflection left out),
    linear elastic, small deflections, supports without give.

    References
    ----------
    J. M. Gere, Mechanics of Materials, chapter on deflections of beams (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_BEAM_SLOPE_FORCE("cantilever", "1 m", "2 N", "1 m", "1 m", "1 m^4", "3 Pa", "rad")')
    0.3333333333
    """
    return force_slope(supports, at, force, load_at, length, modulus * second_moment)


@worksheet_function("STIFFNESS_BEAM_SLOPE_LINE_LOAD", valid=_OVER_ALL, conditions=(_ON_BEAM,))
def line_load(
    supports: Support, at: Length, line_load: LineLoad, length: Length, second_moment: SecondMoment, modulus: Modulus
) -> Angle:
    r"""Slope of a beam at any point under a load spread evenly over its length.

    .. math:: E I\, v'' = -M(x), \quad M(x) = M_0 + V_0\,x - \tfrac{1}{2} w\,x^2

    Parameters
    ----------
    supports : choice
        cantilever (built in at the first end), simply supported, fixed-fixed, or propped (built in at the first
        end, simply supported at the other).
    at : length
        Where the slope is asked for, from the first end.
    line_load : line load
        Load per length, over the whole beam.
    length : length
        Length of the beam.
    second_moment : second moment
        Second moment of area about the axis of bending.
    modulus : modulus
        Young's modulus.

    Returns
    -------
    slope : angle
        Slope: rise of the deflection along the beam.

    Notes
    -----
    The end values :math:`M_0` and :math:`V_0` follow from the supports. Uniform, slender (shear deflection left out),
    linear elastic, small deflections, supports without give.

    References
    ----------
    J. M. Gere, Mechanics of Materials, chapter on deflections of beams (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_BEAM_SLOPE_LINE_LOAD("cantilever", "1 m", "2 N/m", "1 m", "1 m^4", "3 Pa", "rad")')
    0.1111111111
    """
    return line_load_slope(supports, at, line_load, length, modulus * second_moment)


@worksheet_function("STIFFNESS_BEAM_SLOPE_COUPLE", valid=_SIZES, conditions=(_ON_BEAM, _LOAD_ON_BEAM))
def couple(
    supports: Support,
    at: Length,
    couple: Moment,
    load_at: Length,
    length: Length,
    second_moment: SecondMoment,
    modulus: Modulus,
) -> Angle:
    r"""Slope of a beam at any point under a couple at a point.

    .. math:: E I\, v'' = -M(x), \quad M(x) = M_0 + V_0\,x + C\,\langle x - a \rangle^0

    Parameters
    ----------
    supports : choice
        cantilever (built in at the first end), simply supported, fixed-fixed, or propped (built in at the first
        end, simply supported at the other).
    at : length
        Where the slope is asked for, from the first end.
    couple : moment
        Couple, positive where it turns the beam as a positive slope does.
    load_at : length
        Where it acts, from the first end.
    length : length
        Length of the beam.
    second_moment : second moment
        Second moment of area about the axis of bending.
    modulus : modulus
        Young's modulus.

    Returns
    -------
    slope : angle
        Slope: rise of the deflection along the beam.

    Notes
    -----
    The end values :math:`M_0` and :math:`V_0` follow from the supports. Uniform, slender (shear deflection left out),
    linear elastic, small deflections, supports without give.

    References
    ----------
    J. M. Gere, Mechanics of Materials, chapter on deflections of beams (from memory).

    Examples
    --------
    >>> cell('=STIFFNESS_BEAM_SLOPE_COUPLE("cantilever", "1 m", "2 N*m", "1 m", "1 m", "1 m^4", "3 Pa", "rad")')
    0.6666666667
    """
    return couple_slope(supports, at, couple, load_at, length, modulus * second_moment)
