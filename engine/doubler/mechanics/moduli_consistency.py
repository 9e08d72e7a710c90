"""Whether three or more elastic constants of one isotropic material agree with one another."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Modulus, Ratio, Text
from doubler.catalogue.limits import POSITIVE, Refusal, between, condition
from doubler.mechanics.moduli_pairs import NAMES, TWO, chosen, is_stable, solve, value_of

_STABLE_RATIO = between(-1.0, 0.5, low_open=True, high_open=True)
_LIMITS = {"young": POSITIVE, "poissons_ratio": _STABLE_RATIO, "shear": POSITIVE, "bulk": POSITIVE, "p_wave": POSITIVE}


def _reference(given: Sequence[Any]) -> list[Any]:
    """Return the first two constants given, None in the places of the others."""
    first = chosen(given)[:TWO]
    return [value if name in first else None for name, value in zip(NAMES, given, strict=True)]


def _stable(young: Any, poissons_ratio: Any, shear: Any, bulk: Any, lame: Any, p_wave: Any) -> Any:
    given = (young, poissons_ratio, shear, bulk, lame, p_wave)
    return len(chosen(given)) <= TWO or is_stable(solve(_reference(given), None))


_RULES = (
    condition(
        "the first two of the constants given belong to no stable isotropic material (its moduli are positive and its "
        "Poisson's ratio lies between -1 and 0.5)",
        _stable,
    ),
)


def deviations(given: Sequence[Any]) -> dict[str, Any]:
    """Return, for each constant after the first two, by what part it is off from what the first two give."""
    names = chosen(given)
    if len(names) <= TWO:
        raise Refusal(
            f"give at least three of {', '.join(NAMES)}; {len(names)} are given, and two always agree"
            if len(names) == TWO
            else f"give at least three of {', '.join(NAMES)}; {len(names)} are given"
        )
    state = solve(_reference(given), None)
    found: dict[str, Any] = {}
    for name in names[TWO:]:
        own, expected = given[NAMES.index(name)], value_of(name, state)
        # Lamé's first constant may be zero or of either sign: λ is measured by M = λ + 2G, whose part it is.
        scale = value_of("p_wave", state) if name == "lame" else own
        found[name] = (expected - own) / scale
    return found


@worksheet_function("MODULUS_CONSISTENCY", valid=_LIMITS, conditions=_RULES)
def consistency(
    young: Modulus | None = None,
    poissons_ratio: Ratio | None = None,
    shear: Modulus | None = None,
    bulk: Modulus | None = None,
    lame: Modulus | None = None,
    p_wave: Modulus | None = None,
) -> Ratio:
    r"""Largest disagreement of three or more elastic constants of an isotropic material; zero where they agree.

    .. math:: d = \max_i \left|\frac{c_i^{calculated}}{c_i} - 1\right|

    Parameters
    ----------
    young : modulus, optional
        Young's modulus E.
    poissons_ratio : ratio, optional
        Poisson's ratio ν, below 0.5.
    shear : modulus, optional
        Shear modulus G.
    bulk : modulus, optional
        Bulk modulus K.
    lame : modulus, optional
        Lamé's first constant λ; its disagreement is measured by the P-wave modulus.
    p_wave : modulus, optional
        P-wave modulus M.

    Returns
    -------
    disagreement : ratio
        The largest one by magnitude: 0.05 means that a constant is 5 % of its value off from what the others give.

    Notes
    -----
    The first two constants given, in the order of the arguments, give each of the others; these are compared with
    what stands there. The disagreement says that they do not belong together, not which one is wrong. Published sets
    come from different tests: some per cent on G, and more on K, are usual (common practice). An anisotropic material
    is not bound by these relations.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_CONSISTENCY("200 GPa", 0.25, "100 GPa")')
    0.2
    """
    parts = deviations((young, poissons_ratio, shear, bulk, lame, p_wave))
    worst = np.zeros(1)
    for part in parts.values():
        worst = np.maximum(worst, np.abs(part))
    return worst


@worksheet_function("MODULUS_CHECK", valid=_LIMITS | {"tolerance": POSITIVE}, conditions=_RULES)
def check(
    young: Modulus | None = None,
    poissons_ratio: Ratio | None = None,
    shear: Modulus | None = None,
    bulk: Modulus | None = None,
    lame: Modulus | None = None,
    p_wave: Modulus | None = None,
    tolerance: Ratio = 0.02,
) -> Text:
    r"""Whether three or more elastic constants of an isotropic material agree, and which one does not.

    .. math:: \left|\frac{c_i^{calculated}}{c_i} - 1\right| \le d

    Parameters
    ----------
    young : modulus, optional
        Young's modulus E.
    poissons_ratio : ratio, optional
        Poisson's ratio ν, below 0.5.
    shear : modulus, optional
        Shear modulus G.
    bulk : modulus, optional
        Bulk modulus K.
    lame : modulus, optional
        Lamé's first constant λ; its disagreement is measured by the P-wave modulus.
    p_wave : modulus, optional
        P-wave modulus M.
    tolerance : ratio, optional
        Largest disagreement that passes; 2 % where left out.

    Returns
    -------
    verdict : text
        "agree", or by what part each constant calculated from the first two given is off from the one that stands
        there.

    Notes
    -----
    As MODULUS_CONSISTENCY, in words. The constant named may be right and one of the first two wrong.

    References
    ----------
    S. P. Timoshenko, J. N. Goodier, Theory of Elasticity, chapter 1 (from memory).

    Examples
    --------
    >>> cell('=MODULUS_CHECK("200 GPa", 0.3, "77 GPa")')
    'agree'
    >>> cell('=MODULUS_CHECK("200 GPa", 0.25, "100 GPa")')
    'shear from young and poissons_ratio is -20.0% off the one given'
    """
    given = (young, poissons_ratio, shear, bulk, lame, p_wave)
    parts = deviations(given)
    first = " and ".join(chosen(given)[:TWO])
    names = list(parts)
    table = np.stack(np.broadcast_arrays(tolerance, *parts.values()), axis=-1)
    flat = table.reshape(-1, table.shape[-1])
    verdicts = np.empty(len(flat), dtype=object)
    for lane, (limit, *found) in enumerate(flat.tolist()):
        off = [
            f"{name} from {first} is {part:+.1%} off the one given"
            for name, part in zip(names, found, strict=True)
            if not abs(part) <= limit
        ]
        verdicts[lane] = "; ".join(off) if off else "agree"
    return verdicts.reshape(table.shape[:-1])
