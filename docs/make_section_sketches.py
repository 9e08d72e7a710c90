"""Draw the sketches of margins, beams, pressure, fasteners, stability, plies and notches into docs/images/.

Run ``.venv/bin/python docs/make_section_sketches.py``. Colours and style are those of ``make_sketches.py``; what is
drawn is computed here, with NumPy alone.
"""

from __future__ import annotations

import argparse
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numpy as np
from make_sketches import ACCENT, IMAGES, INK, LINE, SOFT, STYLE, WARM, mpl, plt

TWO = {"arrowstyle": "<->", "color": SOFT, "lw": 1.0, "shrinkA": 0, "shrinkB": 0}


def main() -> None:
    """Draw every sketch into the folder that the command line names, docs/images/ if none."""
    options = argparse.ArgumentParser(description="Draw sketches of the theory pages.")
    options.add_argument("folder", type=Path, nargs="?", default=IMAGES, help="where to write them")
    for path in draw_all(options.parse_args().folder):
        print(path)


def draw_all(folder: Path) -> list[Path]:
    """Draw every sketch into the folder; return the files."""
    folder.mkdir(parents=True, exist_ok=True)
    written = []
    with mpl.rc_context(STYLE):
        for name, draw in SKETCHES.items():
            figure = draw()
            written.append(folder / f"sketch_{name}.svg")
            save(figure, written[-1])
            plt.close(figure)
    return written


def save(figure: Any, target: Path) -> None:
    """Write a figure beside its target, without the blanks at line ends, and rename it."""
    temporary = target.with_name(f".{target.name}.part")
    figure.savefig(temporary, format="svg", bbox_inches="tight", metadata={"Date": None, "Creator": None})
    lines = temporary.read_text(encoding="utf-8").splitlines()
    temporary.write_text("\n".join(line.rstrip() for line in lines) + "\n", encoding="utf-8")
    temporary.replace(target)


def _arrow(
    axes: Any, start: tuple[float, float], end: tuple[float, float], color: str = INK, width: float = 1.4
) -> None:
    style = {"arrowstyle": "-|>", "color": color, "lw": width, "shrinkA": 0, "shrinkB": 0}
    axes.annotate("", end, start, arrowprops=style)


def _graph(axes: Any, across: str, up: str) -> None:
    axes.set_xlabel(across)
    axes.set_ylabel(up)
    axes.set_xlim(left=0.0)
    axes.set_ylim(bottom=0.0)


def _bare(axes: Any) -> None:
    axes.set_aspect("equal")
    axes.axis("off")


def interaction() -> Any:
    """Draw an interaction curve, the ratios of a load case, and the ray along which both loads grow."""
    figure, axes = plt.subplots(figsize=(4.6, 4.0))
    first = np.linspace(0.0, 1.0, 200)
    axes.plot(first, (1.0 - first**2) ** (1.0 / 3.0), color=INK, lw=2.0)
    at = np.array([0.45, 0.42])
    low, high = 1.0, 4.0
    for _ in range(60):
        k = 0.5 * (low + high)
        low, high = (k, high) if (k * at[0]) ** 2 + (k * at[1]) ** 3 < 1.0 else (low, k)
    axes.plot([0.0, k * at[0]], [0.0, k * at[1]], color=ACCENT, lw=1.2, ls=(0, (5, 3)))
    axes.plot(*at, "o", color=ACCENT, ms=6)
    axes.plot(*(k * at), "o", color=WARM, ms=6)
    axes.text(at[0] + 0.03, at[1] - 0.07, "$(R_1, R_2)$", color=ACCENT)
    axes.text(k * at[0] + 0.04, k * at[1] + 0.02, "$(kR_1, kR_2)$", color=WARM)
    axes.text(0.42, 0.1, "both loads grow together:\n$MS = k - 1$", color=SOFT, va="bottom", fontsize=8.5)
    axes.text(0.12, 1.03, "$R_1^{\\,2} + R_2^{\\,3} = 1$", color=INK)
    axes.set_aspect("equal")
    _graph(axes, "$R_1$ = applied × factors / allowable, first load", "$R_2$, second load")
    axes.set_xlim(0.0, 1.15)
    axes.set_ylim(0.0, 1.15)
    return figure


def beam_stress() -> Any:
    """Draw bending and shear stress over the depth of an I, and the shear flow of a closed and an open section."""
    figure, (left, right) = plt.subplots(1, 2, figsize=(7.6, 3.5), gridspec_kw={"width_ratios": [1.25, 1.0]})
    _bare(left)
    outline = np.array([(-1, -2), (1, -2), (1, -1.6), (0.15, -1.6), (0.15, 1.6), (1, 1.6), (1, 2), (-1, 2), (-1, 1.6), (-0.15, 1.6), (-0.15, -1.6), (-1, -1.6)])  # fmt: skip  # noqa: E501
    left.fill(*outline.T, facecolor=LINE, edgecolor=INK, lw=1.2, alpha=0.5)
    left.plot([-1.4, 6.9], [0, 0], color=SOFT, lw=0.9, ls=(0, (6, 3)))
    left.plot([2.7, 2.7], [-2, 2], color=INK, lw=0.9)
    left.fill([2.7, 3.6, 2.7], [0, 2, 2], color=ACCENT, alpha=0.3)
    left.fill([2.7, 1.8, 2.7], [0, -2, -2], color=WARM, alpha=0.3)
    left.plot([1.8, 3.6], [-2, 2], color=INK, lw=1.4)
    left.text(2.7, 2.25, "σ = M y / I", ha="center")
    y = np.linspace(-2.0, 2.0, 401)
    width = np.where(np.abs(y) > 1.6, 2.0, 0.3)
    above = np.where(np.abs(y) > 1.6, (4.0 - y**2), (4.0 - 1.6**2) + 0.15 * (1.6**2 - y**2))
    shear = above / width
    shear = 0.95 * shear / shear.max()
    left.fill_betweenx(y, 5.6, 5.6 + shear, color=ACCENT, alpha=0.3)
    left.plot(5.6 + shear, y, color=INK, lw=1.4)
    left.plot([5.6, 5.6], [-2, 2], color=INK, lw=0.9)
    left.text(6.1, 2.25, "τ = V Q / (I t)", ha="center")
    _bare(right)
    right.add_patch(plt.Rectangle((-3.4, -1.2), 2.6, 2.4, fill=False, lw=3.0, color=INK))
    for start, end in (((-3.05, 0.85), (-1.15, 0.85)), ((-1.15, -0.85), (-3.05, -0.85))):
        _arrow(right, start, end, ACCENT)
    right.text(-2.1, 0.0, "$q = T/2A_m$", ha="center", va="center", color=ACCENT)
    right.text(-2.1, -1.95, "closed: one flow\nall round", ha="center", va="top", color=SOFT, fontsize=8.5)
    right.plot([2.6, 0.2, 0.2, 2.6], [1.2, 1.2, -1.2, -1.2], lw=3.0, color=INK)
    _arrow(right, (0.55, 0.5), (0.55, -0.5), WARM)
    _arrow(right, (-0.15, -0.5), (-0.15, 0.5), WARM)
    right.text(1.7, 0.0, "$\\tau = T\\,t/J$", ha="center", va="center", color=WARM)
    right.text(1.5, -1.95, "open: to and fro\nwithin the wall", ha="center", va="top", color=SOFT, fontsize=8.5)
    right.set_xlim(-3.9, 3.0)
    right.set_ylim(-2.9, 2.0)
    return figure


def thick_wall() -> Any:
    """Draw hoop and radial stress over a thick wall, and pressure and shear below a Hertz line contact."""
    figure, (left, right) = plt.subplots(1, 2, figsize=(7.6, 3.4))
    inner, outer = 1.0, 2.0
    r = np.linspace(inner, outer, 200)
    mean, part = inner**2 / (outer**2 - inner**2), inner**2 * outer**2 / (outer**2 - inner**2)
    left.axhline(0.0, color=SOFT, lw=0.9)
    left.plot(r, mean + part / r**2, color=ACCENT, lw=2.0)
    left.plot(r, mean - part / r**2, color=WARM, lw=2.0)
    left.axhline(inner / (outer - inner) / 1.0, xmin=0.045, xmax=0.955, color=LINE, lw=1.2, ls=(0, (5, 3)))
    left.text(1.32, 1.5, "hoop $\\sigma_\\theta / p$", color=ACCENT)
    left.text(1.3, -0.72, "radial $\\sigma_r / p$", color=WARM)
    left.text(1.03, 0.84, "mean of the hoop stress", color=SOFT, fontsize=8)
    left.set_xlabel("radius, from the bore a to the outside b = 2a")
    left.set_xticks([1, 2], ["a", "b"])
    depth = np.linspace(0.0, 3.0, 1001)
    root = np.sqrt(1.0 + depth**2)
    across, down = -((1.0 + 2.0 * depth**2) / root - 2.0 * depth), -1.0 / root
    for value, color, name, place in ((across, WARM, "$\\sigma_x$", 1.05), (down, INK, "$\\sigma_z$", 1.7)):
        right.plot(depth, value, color=color, lw=1.6)
        right.text(place, float(np.interp(place, depth, value)) - 0.09, name, color=color, va="top")
    shear = 0.5 * np.abs(across - down)
    top = int(np.argmax(shear))
    right.plot(depth, shear, color=ACCENT, lw=2.0)
    right.plot(depth[top], shear[top], "o", color=ACCENT, ms=5)
    right.text(
        depth[top] + 0.1, shear[top] + 0.06, f"$\\tau$ = {shear[top]:.2f} $p_0$ at {depth[top]:.2f} b", color=ACCENT
    )
    right.axhline(0.0, color=SOFT, lw=0.9)
    right.set_ylim(-1.1, 0.6)
    right.set_xlabel("depth below a line contact, in half widths b")
    right.set_ylabel("stress / $p_0$")
    figure.tight_layout()
    return figure


def bolt_group() -> Any:
    """Draw a bolt group with the forces on its bolts, and the diagram of a preloaded joint."""
    figure, (left, right) = plt.subplots(1, 2, figsize=(7.6, 3.4))
    _bare(left)
    places = np.array([(-1, 1), (1, 1), (-1, -1), (1, -1.0)])
    left.add_patch(plt.Rectangle((-1.7, -1.7), 6.2, 3.4, facecolor=LINE, alpha=0.35, edgecolor=SOFT))
    load, arm = np.array([0.0, -1.6]), 3.9
    moment = arm * load[1]
    for place in places:
        direct = load / len(places)
        turning = moment * np.array([-place[1], place[0]]) / (places**2).sum()
        left.add_patch(plt.Circle(place, 0.17, color=INK))
        _arrow(left, tuple(place), tuple(place + direct), SOFT, 1.2)
        _arrow(left, tuple(place), tuple(place + turning), ACCENT, 1.2)
        _arrow(left, tuple(place), tuple(place + direct + turning), WARM, 1.8)
    left.plot(0, 0, "+", color=INK, ms=9)
    left.text(0.12, 0.12, "centroid", fontsize=8.5)
    _arrow(left, (arm, 0.6), (arm, -1.2), INK, 2.0)
    left.text(arm + 0.12, -0.4, "P")
    left.text(-1.6, -2.9, "direct share · share of the moment · their sum", color=SOFT, fontsize=8.5)
    left.set_xlim(-2.4, 4.7)
    left.set_ylim(-3.1, 2.9)
    preload, share = 1.0, 0.3
    opens = preload / (1.0 - share)
    pull = np.linspace(0.0, 2.1, 200)
    right.plot(pull, np.maximum(preload + share * pull, pull), color=INK, lw=2.0)
    right.plot(pull, pull, color=SOFT, lw=1.0, ls=(0, (5, 3)))
    right.plot([opens, opens], [0.0, opens], color=WARM, lw=0.9, ls=":")
    right.text(opens + 0.04, 0.12, "joint opens", color=WARM)
    right.text(0.08, 1.22, "slope $\\Phi$", color=ACCENT)
    right.text(0.05, 0.84, "$F_0$", color=INK)
    right.text(1.62, 1.25, "bolt carries\nall of it", color=SOFT, fontsize=8.5)
    _graph(right, "external pull P / preload", "tension of the bolt / preload")
    figure.tight_layout()
    return figure


def column_curve() -> Any:
    """Draw critical stress over slenderness: Johnson's parabola, Euler's curve and where they meet."""
    figure, axes = plt.subplots(figsize=(5.4, 3.5))
    modulus, strength = 70e3, 300.0
    meet = float(np.sqrt(2.0 * np.pi**2 * modulus / strength))
    slenderness = np.linspace(1.0, 160.0, 400)
    euler = np.pi**2 * modulus / slenderness**2
    johnson = strength * (1.0 - strength * slenderness**2 / (4.0 * np.pi**2 * modulus))
    axes.plot(slenderness[slenderness <= meet], johnson[slenderness <= meet], color=ACCENT, lw=2.2)
    axes.plot(slenderness[slenderness >= meet], euler[slenderness >= meet], color=INK, lw=2.2)
    above = (slenderness < meet) & (euler < 1.25 * strength)
    axes.plot(slenderness[above], euler[above], color=INK, lw=1.0, ls=(0, (5, 3)))
    axes.axhline(strength, color=LINE, lw=1.0)
    axes.plot(meet, 0.5 * strength, "o", color=WARM, ms=6)
    axes.text(meet + 3.0, 0.5 * strength + 6.0, "$\\sigma_y/2$ at $\\lambda_1$", color=WARM)
    axes.text(20.0, 0.76 * strength, "Johnson", color=ACCENT)
    axes.text(118.0, 66.0, "Euler")
    axes.text(41.0, 1.12 * strength, "Euler, unsafe here", color=SOFT, ha="right", fontsize=8.5)
    axes.text(158.0, strength + 6.0, "$\\sigma_y$", color=SOFT, ha="right")
    _graph(axes, "slenderness $K L / r$", "critical stress [MPa]")
    axes.set_ylim(0.0, 1.3 * strength)
    return figure


def ply() -> Any:
    """Draw the axes of a ply in its laminate, and the modulus of a ply over its angle."""
    figure, (left, right) = plt.subplots(1, 2, figsize=(7.6, 3.3))
    _bare(left)
    angle = np.radians(30.0)
    along, across = np.array([np.cos(angle), np.sin(angle)]), np.array([-np.sin(angle), np.cos(angle)])
    left.add_patch(plt.Circle((0, 0), 1.15, facecolor=LINE, alpha=0.3, edgecolor=SOFT))
    for step in np.linspace(-0.95, 0.95, 12):
        half = np.sqrt(1.15**2 - step**2)
        line = np.array([step * across - half * along, step * across + half * along])
        left.plot(*line.T, color=SOFT, lw=0.8)
    for end, name, color in ((np.array([1.7, 0.0]), "x", INK), (np.array([0.0, 1.7]), "y", INK), (1.7 * along, "1", ACCENT), (1.7 * across, "2", ACCENT)):  # fmt: skip  # noqa: E501
        _arrow(left, (0.0, 0.0), tuple(end), color, 1.6)
        left.text(*(1.12 * end), name, color=color, ha="center", va="center")
    turn = np.linspace(0.0, angle, 40)
    left.plot(1.35 * np.cos(turn), 1.35 * np.sin(turn), color=WARM, lw=1.2)
    left.text(1.5, 0.36, "θ", color=WARM)
    left.set_xlim(-1.4, 2.1)
    left.set_ylim(-1.3, 2.1)
    e1, e2, g, nu = 140.0, 10.0, 5.0, 0.3
    degrees = np.linspace(0.0, 90.0, 300)
    c, s = np.cos(np.radians(degrees)), np.sin(np.radians(degrees))
    ex = 1.0 / (c**4 / e1 + s**4 / e2 + (1.0 / g - 2.0 * nu / e1) * s**2 * c**2)
    gxy = 1.0 / (2.0 * (2.0 / e1 + 2.0 / e2 + 4.0 * nu / e1 - 1.0 / g) * s**2 * c**2 + (s**4 + c**4) / g)
    right.plot(degrees, ex, color=INK, lw=2.0)
    right.plot(degrees, 10.0 * gxy, color=ACCENT, lw=1.6)
    right.text(7.0, 118.0, "$E_x$")
    right.text(45.0, 10.0 * gxy.max() + 5.0, "$10\\,G_{xy}$", color=ACCENT, ha="center")
    right.set_xticks([0, 15, 30, 45, 60, 75, 90])
    _graph(right, "angle of the fibres θ [°]", "modulus of one ply [GPa]")
    figure.tight_layout()
    return figure


def hole() -> Any:
    """Draw the stress beside a hole in a wide plate (Kirsch), and Neuber's rule on a stress-strain curve."""
    figure, (left, right) = plt.subplots(1, 2, figsize=(7.6, 3.4))
    x = np.linspace(1.0, 4.0, 300)
    stress = 0.5 * (2.0 + 1.0 / x**2 + 3.0 / x**4)
    turn = np.linspace(0.0, 0.5 * np.pi, 60)
    left.fill(np.append(np.cos(turn), 0.0), np.append(np.sin(turn), 0.0), facecolor=LINE, edgecolor=INK, alpha=0.6)
    left.plot(x, stress, color=ACCENT, lw=2.0)
    left.axhline(1.0, color=SOFT, lw=0.9, ls=(0, (5, 3)))
    left.plot(1.0, 3.0, "o", color=WARM, ms=6)
    left.text(1.15, 2.95, "$K_t = 3$", color=WARM)
    left.text(3.9, 0.83, "far from the hole", color=SOFT, ha="right", fontsize=8.5)
    left.text(0.3, 0.3, "hole", color=INK)
    _graph(left, "distance from the centre / radius", "stress along the load / mean stress")
    left.set_xlim(0.0, 4.0)
    modulus, coefficient, exponent, elastic = 70e3, 550.0, 0.1, 620.0
    curve = np.linspace(0.0, 420.0, 400)
    strain = curve / modulus + (curve / coefficient) ** (1.0 / exponent)
    energy = elastic**2 / modulus
    at = int(np.argmin(np.abs(curve * strain - energy)))
    right.plot(100.0 * strain, curve, color=INK, lw=2.0)
    right.plot([0.0, 100.0 * elastic / modulus], [0.0, elastic], color=SOFT, lw=1.0, ls=(0, (5, 3)))
    span = np.linspace(0.0062, 0.03, 200)
    right.plot(100.0 * span, energy / span, color=ACCENT, lw=1.4)
    right.plot(100.0 * elastic / modulus, elastic, "o", color=SOFT, ms=5)
    right.plot(100.0 * strain[at], curve[at], "o", color=WARM, ms=6)
    right.text(0.95, elastic, "$K_t S$, elastic", color=SOFT, va="bottom")
    right.text(1.25, 520.0, "$\\sigma\\varepsilon = (K_t S)^2/E$", color=ACCENT)
    right.text(100.0 * strain[at], curve[at] - 22.0, "local state", color=WARM, ha="center", va="top")
    _graph(right, "strain [%]", "stress [MPa]")
    right.set_xlim(0.0, 2.8)
    right.set_ylim(0.0, 760.0)
    figure.tight_layout()
    return figure


SKETCHES: dict[str, Callable[[], Any]] = {
    "interaction": interaction,
    "beam_stress": beam_stress,
    "thick_wall": thick_wall,
    "bolt_group": bolt_group,
    "column_curve": column_curve,
    "ply": ply,
    "hole": hole,
}
"""Each sketch by the name of its file."""


if __name__ == "__main__":
    main()
