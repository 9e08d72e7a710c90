"""Shear centre of thin-walled profiles: I, channel, tee, angle, zee, box."""

from __future__ import annotations

from typing import Any, Literal

import numpy as np

from doubler.catalogue import worksheet_function
from doubler.catalogue.annotations import Length, row
from doubler.catalogue.limits import POSITIVE, condition
from doubler.mechanics import profile_walls
from doubler.mechanics.profile_outlines import given, sound

Centre: Any = row(Length, "x", "y")
Thin = Literal["I", "channel", "tee", "angle", "zee", "box"]
_SIZES = {
    "depth": POSITIVE,
    "width": POSITIVE,
    "web": POSITIVE,
    "flange": POSITIVE,
    "bottom_width": POSITIVE,
    "bottom_flange": POSITIVE,
    "fillet": POSITIVE,
}


@worksheet_function(
    "SECTION_PROFILE_SHEAR_CENTRE",
    valid=_SIZES,
    conditions=(
        condition(
            "the walls (and fillets) must fit into the depth and the width of the section",
            lambda shape, depth, width, web, flange, bottom_width, bottom_flange, fillet: sound(
                shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet)
            ),
        ),
        condition(
            "each wall must be at least three times as long as it is thick",
            lambda shape, depth, width, web, flange, bottom_width, bottom_flange, fillet: profile_walls.thin(
                shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet)
            ),
        ),
    ),
)
def shear_centre(
    shape: Thin,
    depth: Length,
    width: Length | None = None,
    web: Length | None = None,
    flange: Length | None = None,
    bottom_width: Length | None = None,
    bottom_flange: Length | None = None,
    fillet: Length | None = None,
) -> Centre:
    r"""Place of the shear centre of a profile, through which a load bends it without twist.

    .. math:: e = \frac{3 b^2 t}{6 b t + h t_w} \text{ (channel, from the web's middle, away from the
        flanges)}

    .. math:: y_u = \frac{h\, I_{f1}}{I_{f1} + I_{f2}} \text{ (I, from the lower flange's middle)}

    Parameters
    ----------
    shape : thin
        I, channel, tee, angle, zee or box.
    depth : length
        Overall depth, along y.
    width : length, optional
        Overall width of the (upper) flange, along x; the horizontal leg of an angle.
    web : length, optional
        Thickness of the web (of each side wall of a box, of the upright leg of an angle).
    flange : length, optional
        Thickness of the (upper) flange, of the horizontal leg of an angle (its web's where left out).
    bottom_width : length, optional
        Width of the lower flange where it differs: I alone.
    bottom_flange : length, optional
        Thickness of the lower flange where it differs: I alone.
    fillet : length, optional
        Radius at the root between web and flange; it does not move the centre here.

    Returns
    -------
    centre : length
        Coordinates of the shear centre: x, y.

    Notes
    -----
    x from the centre line of a symmetric profile or of a zee's web, from the outer face of the web of a
    channel or angle; y from the foot. Thin walls along their middle lines, each at least three times as long
    as thick: h between the flanges' middles, b from the web's middle. Where two walls meet (tee, angle) it is
    their crossing. Channel and zee with like flanges only.

    References
    ----------
    J. M. Gere, Mechanics of Materials, sections 6.8 and 6.9 (from memory).

    Examples
    --------
    >>> cell('=SECTION_PROFILE_SHEAR_CENTRE("channel","102 mm","51 mm","2 mm","2 mm",,,,"mm")')
    [[-17.75, 51.0]]
    """
    centre = profile_walls.shear_centre(shape, given(depth, width, web, flange, bottom_width, bottom_flange, fillet))
    return np.stack(np.broadcast_arrays(*centre), axis=-1)
