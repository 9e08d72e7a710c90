"""Mohr's circle of a plane stress state, drawn as inline SVG."""

from __future__ import annotations

from html import escape
from math import atan2, ceil, cos, floor, log10, radians, sin

from doubler.check.plane_states import PlaneState
from doubler.check.written_formula import number_shown

WIDTH, HEIGHT = 440, 330
LEFT, RIGHT, TOP, BOTTOM = 46, 62, 30, 34
TICKS = 6
"""Marks on an axis, about."""


def mohr_circle(state: PlaneState) -> str:
    """Draw the circle of a state.

    Parameters
    ----------
    state : PlaneState

    Returns
    -------
    str
        The SVG. Normal stress to the right; shear stress downwards, so that a turn of 2θ on the circle has the sense of
        the turn θ in the part: X stands for the face across x, at (σx, τxy), Y for the face across y, at (σy, −τxy).
    """
    low, high = min(0.0, state.sigma_2), max(0.0, state.sigma_1)
    centre, radius = (state.sigma_x + state.sigma_y) / 2, state.shear_in_plane
    across = (high - low) or 1.0
    scale = min((WIDTH - LEFT - RIGHT) / across, (HEIGHT - TOP - BOTTOM) / (2 * radius) if radius else 1e300)
    offset = (LEFT + WIDTH - RIGHT - scale * across) / 2
    middle = (TOP + HEIGHT - BOTTOM) / 2

    def x(stress: float) -> float:
        return offset + (stress - low) * scale

    def y(shear: float) -> float:
        return middle + shear * scale

    words = (
        f"Mohr's circle: centre {_shown(centre, state)}, radius {_shown(radius, state)}, principal stresses "
        f"{_shown(state.sigma_1, state)} and {_shown(state.sigma_2, state)}"
    )
    if state.angle is not None:
        words += f", the first at {_angle(state.angle)} from the x axis"
    pieces = [
        (
            f'<svg class="mohr" viewBox="0 0 {WIDTH} {HEIGHT}" width="{WIDTH}" height="{HEIGHT}" role="img" '
            f'aria-label="{escape(words, quote=True)}">'
        )
    ]
    for tick in _ticks(low, high):
        pieces.append(f'<path class="tick" d="M{x(tick):.1f} {middle - 4:.1f}v8"/>')
        if tick:
            pieces.append(_text(x(tick), HEIGHT - 8, number_shown(tick), "middle", "axis"))
            pieces.append(f'<path class="guide" d="M{x(tick):.1f} {TOP - 8}V{HEIGHT - 20}"/>')
    pieces += [
        f'<path class="zero" d="M{LEFT - 34} {middle:.1f}H{WIDTH - RIGHT + 38}M{x(0):.1f} {TOP - 16}V{HEIGHT - 18}"/>',
        _text(WIDTH - 4, middle + 16, f"σ [{state.unit}]", "end", "axis"),
        _text(x(0) + 4, HEIGHT - 20, "τ", "start", "axis"),
        f'<circle class="round" cx="{x(centre):.1f}" cy="{middle:.1f}" r="{max(radius * scale, 1.5):.1f}"/>',
        f'<circle class="dot" cx="{x(centre):.1f}" cy="{middle:.1f}" r="2"/>',
    ]
    if radius:
        pieces.append(
            f'<path class="across" d="M{x(state.sigma_x):.1f} {y(state.tau_xy):.1f}'
            f'L{x(state.sigma_y):.1f} {y(-state.tau_xy):.1f}"/>'
        )
        pieces += _turn(state, x(centre), middle, radius * scale)
    for name, stress, shear in (("X", state.sigma_x, state.tau_xy), ("Y", state.sigma_y, -state.tau_xy)):
        pieces += _point(name, x(stress), y(shear), x(centre), middle)
    names = (("σ₁", state.sigma_1, 1), ("σ₂", state.sigma_2, -1))
    for name, stress, side in names if radius else names[:1]:
        pieces.append(f'<path class="mark" d="M{x(stress):.1f} {middle - 6:.1f}v12"/>')
        pieces.append(_text(x(stress) + 5 * side, middle - 8, name, "start" if side > 0 else "end", "name"))
    return "".join([*pieces, "</svg>"])


def _turn(state: PlaneState, at_x: float, at_y: float, radius: float) -> list[str]:
    """Draw the arc of 2θ from X to σ1, where there is one to be seen."""
    if state.angle is None or abs(state.angle) < 2:
        return []
    start = atan2(state.tau_xy, state.sigma_x - (state.sigma_x + state.sigma_y) / 2)
    small = min(0.38 * radius, 34.0)
    first = (at_x + small * cos(start), at_y + small * sin(start))
    # Shear is drawn downwards: the angle of X below the axis is what a turn to the axis takes back.
    half = start - radians(state.angle)
    middle = (at_x + (small + 13) * cos(half), at_y + (small + 13) * sin(half) + 4)
    sweep = int(state.angle < 0)
    start_at, end_at = f"{first[0]:.1f} {first[1]:.1f}", f"{at_x + small:.1f} {at_y:.1f}"
    return [
        f'<path class="turn" d="M{start_at}A{small:.1f} {small:.1f} 0 0 {sweep} {end_at}"/>',
        _text(*middle, "2θ", "middle", "name"),
    ]


def _point(name: str, at_x: float, at_y: float, centre_x: float, centre_y: float) -> list[str]:
    side = 1 if at_x >= centre_x else -1
    down = 14 if at_y > centre_y else -6
    return [
        f'<circle class="point" cx="{at_x:.1f}" cy="{at_y:.1f}" r="3.6"/>',
        _text(at_x + 6 * side, at_y + down, name, "start" if side > 0 else "end", "name"),
    ]


def _text(x: float, y: float, text: str, anchor: str, name: str) -> str:
    return f'<text class="{name}" x="{x:.1f}" y="{y:.1f}" text-anchor="{anchor}">{escape(text)}</text>'


def _ticks(low: float, high: float) -> list[float]:
    step = 10.0 ** floor(log10(((high - low) or 1.0) / TICKS))
    step *= next(more for more in (1, 2, 5, 10) if (high - low) / (step * more) <= TICKS)
    first, last = ceil(low / step - 1e-9), floor(high / step + 1e-9)
    return [float(f"{n * step:.12g}") for n in range(first, last + 1)]


def _shown(value: float, state: PlaneState) -> str:
    return number_shown(float(f"{value:.5g}"), state.unit)


def _angle(angle: float) -> str:
    return f"{number_shown(round(angle, 2))}°"
