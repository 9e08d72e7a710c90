"""Draw the sketches of the theory pages into docs/images/: ``.venv/bin/python docs/make_sketches.py``.

Only NumPy and Matplotlib, no part of the package: what is drawn is computed here once more, so that a test can hold
the package's functions against the sketches.
"""

from __future__ import annotations

import argparse
from collections.abc import Callable
from pathlib import Path
from typing import Any

import matplotlib as mpl

mpl.use("Agg")

import matplotlib.pyplot as plt
import numpy as np
from matplotlib.patches import Arc, Polygon

IMAGES = Path(__file__).parent / "images"
PAPER, INK, SOFT, LINE, ACCENT, WARM = "#fbfaf7", "#22282c", "#5c666c", "#b9b5aa", "#1c6166", "#b4521f"
STYLE = {
    "svg.hashsalt": "doubler",
    "font.family": "DejaVu Sans",
    "font.size": 9.5,
    "mathtext.fontset": "dejavusans",
    "axes.edgecolor": SOFT,
    "axes.labelcolor": INK,
    "xtick.color": SOFT,
    "ytick.color": SOFT,
    "text.color": INK,
    "figure.facecolor": PAPER,
    "axes.facecolor": PAPER,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "lines.solid_capstyle": "round",
}

MODULUS, PROOF, EXPONENT, TOE = 70e3, 300.0, 9.0, 0.0012
"""The light alloy of the stress-strain sketches: MPa, and the strain of its toe."""
STATE = (80.0, -20.0, 30.0)
"""The plane stress of Mohr's circle: σx, σy, τxy in MPa."""


def main() -> None:
    """Draw every sketch into the folder that the command line names, docs/images/ if none."""
    options = argparse.ArgumentParser(description="Draw the sketches of the theory pages.")
    options.add_argument("folder", type=Path, nargs="?", default=IMAGES, help="where to write them")
    for path in draw_all(options.parse_args().folder):
        print(path)


def draw_all(folder: Path) -> list[Path]:
    """Draw every sketch, each written beside its target and renamed."""
    folder.mkdir(parents=True, exist_ok=True)
    written = []
    with mpl.rc_context(STYLE):
        for name, draw in SKETCHES.items():
            figure = draw()
            target = folder / f"sketch_{name}.svg"
            temporary = target.with_name(f".{target.name}.part")
            figure.savefig(temporary, format="svg", bbox_inches="tight", metadata={"Date": None, "Creator": None})
            plt.close(figure)
            # Matplotlib leaves blanks at line ends.
            lines = temporary.read_text(encoding="utf-8").splitlines()
            temporary.write_text("\n".join(line.rstrip() for line in lines) + "\n", encoding="utf-8")
            temporary.replace(target)
            written.append(target)
    return written


def strain_of(stress: Any) -> Any:
    """Strain of the light alloy's curve, without its toe."""
    return stress / MODULUS + 0.002 * (stress / PROOF) ** EXPONENT


def _axes(width: float, height: float) -> tuple[Any, Any]:
    figure, axes = plt.subplots(figsize=(width, height))
    return figure, axes


def _bare(axes: Any) -> None:
    axes.set_aspect("equal")
    axes.axis("off")


def _arrow(
    axes: Any, start: tuple[float, float], end: tuple[float, float], color: str = INK, width: float = 1.3
) -> None:
    axes.annotate(
        "", end, start, arrowprops={"arrowstyle": "-|>", "color": color, "lw": width, "shrinkA": 0, "shrinkB": 0}
    )


def _diagram(axes: Any, right: float, top: float) -> None:
    axes.set_xlim(0.0, right)
    axes.set_ylim(0.0, top)
    axes.set_xlabel("strain ε")
    axes.set_ylabel("stress σ")
    axes.set_xticks([])
    axes.set_yticks([])


def record_with_toe() -> tuple[Any, Any]:
    """Return strain and stress of the light alloy's test: a toe, the elastic part, the knee."""
    stress = np.linspace(0.0, 345.0, 400)
    foot = 60.0 / MODULUS
    # The toe: a parabola that meets the elastic line at 60 MPa with its slope.
    start = TOE + foot - 2.0 * foot
    low = np.linspace(start, TOE + foot, 60)
    curved = 60.0 * ((low - start) / (2.0 * foot)) ** 2
    rest = stress[stress > 60.0]
    return np.concatenate([low, strain_of(rest) + TOE]), np.concatenate([curved, rest])


def offset_line() -> Any:
    """Draw a record with a toe, its elastic line, the offset line and what is read from them."""
    figure, axes = _axes(5.6, 3.6)
    strain, stress = record_with_toe()
    _diagram(axes, 0.0145, 390.0)
    axes.plot(strain, stress, color=INK, lw=2.0)
    top = np.array([0.0, 372.0])
    axes.plot(TOE + top / MODULUS, top, color=ACCENT, lw=1.2)
    axes.plot(TOE + 0.002 + top / MODULUS, top, color=ACCENT, lw=1.2, ls=(0, (5, 3)))
    at = TOE + 0.002 + PROOF / MODULUS
    axes.plot([at], [PROOF], "o", color=WARM, ms=6, zorder=3)
    axes.plot([0.0, at], [PROOF, PROOF], color=WARM, lw=0.9, ls=":")
    axes.text(0.0002, PROOF + 7.0, r"proof stress $\sigma_p$", color=WARM)
    for level, name in ((75.0, "low"), (180.0, "high")):
        axes.plot([TOE + level / MODULUS], [level], "s", color=ACCENT, ms=5)
        axes.text(TOE + level / MODULUS - 0.0002, level + 3.0, name, color=ACCENT, ha="right")
    axes.annotate("", (TOE + 0.002, 12.0), (TOE, 12.0), arrowprops={"arrowstyle": "<->", "color": SOFT, "lw": 1.0})
    axes.text(TOE + 0.0027, 6.0, "offset", color=SOFT)
    axes.text(TOE + 0.0001, -26.0, r"toe $\varepsilon_0$", color=SOFT, ha="center", clip_on=False)
    axes.text(TOE + 0.002 + 200.0 / MODULUS + 0.0003, 192.0, r"slope $E$", color=ACCENT)
    axes.xaxis.set_label_coords(0.9, -0.03)
    return figure


def yield_point() -> Any:
    """Draw a curve with a yield point, its strength and its elongations."""
    figure, axes = _axes(5.6, 3.6)
    _diagram(axes, 0.335, 480.0)
    plateau = np.linspace(0.012, 0.075, 80)
    harden = np.linspace(0.075, 0.29, 120)
    top, end = 0.19, 0.29
    rise = 420.0 - 135.0 * ((top - harden) / (top - 0.075)) ** 2
    fall = 420.0 - 90.0 * ((harden - top) / (end - top)) ** 2
    wave = 285.0 + 4.0 * np.sin((plateau - 0.012) / 0.063 * 6.0 * np.pi)
    strain = np.concatenate([[0.0, 0.008, 0.0095, 0.0105], plateau, harden])
    stress = np.concatenate([[0.0, 335.0, 290.0, 279.0], wave, np.where(harden < top, rise, fall)])
    axes.plot(strain, stress, color=INK, lw=2.0)
    axes.plot([end], [330.0], "x", color=WARM, ms=8, mew=2)
    for level, name, left in ((335.0, r"upper yield $R_{eH}$", 0.01), (420.0, r"strength $R_m$", 0.012)):
        axes.plot([0.0, 0.008 if level < 400.0 else top], [level, level], color=WARM, lw=0.9, ls=":")
        axes.text(left, level + 8.0, name, color=WARM)
    axes.plot([0.0105, 0.12], [279.0, 279.0], color=WARM, lw=0.9, ls=":")
    axes.text(0.07, 268.0, r"lower yield $R_{eL}$", color=WARM, va="top")
    slope = 335.0 / 0.008
    for x, y, name, level in ((top, 420.0, "$A_g$", 46.0), (end, 330.0, "$A$", 92.0)):
        axes.plot([x, x - y / slope], [y, 0.0], color=ACCENT, lw=1.1, ls=(0, (5, 3)))
        axes.annotate(
            "", (x - y / slope, level - 30.0), (0.0, level - 30.0), arrowprops={"arrowstyle": "<->", "color": ACCENT}
        )
        axes.text(0.5 * (x - y / slope), level - 24.0, name, color=ACCENT, ha="center")
    axes.text(end + 0.004, 318.0, "break", color=WARM, va="top")
    return figure


def ramberg_osgood() -> Any:
    """Draw a Ramberg-Osgood curve with its secant and tangent modulus, elastic and plastic strain."""
    figure, axes = _axes(5.6, 3.6)
    _diagram(axes, 0.0118, 380.0)
    stress = np.linspace(0.0, 348.0, 300)
    axes.plot(strain_of(stress), stress, color=INK, lw=2.0)
    at = 322.0
    e = strain_of(at)
    axes.plot([0.0, 365.0 / MODULUS], [0.0, 365.0], color=SOFT, lw=1.0, ls=(0, (5, 3)))
    axes.text(330.0 / MODULUS - 0.0002, 338.0, r"$E$", color=SOFT, ha="right")
    axes.plot([0.0, e], [0.0, at], color=ACCENT, lw=1.3)
    axes.text(0.55 * e, 0.71 * at, r"secant $E_s$", color=ACCENT, ha="center")
    tangent = 1.0 / (1.0 / MODULUS + 0.002 * EXPONENT / PROOF * (at / PROOF) ** (EXPONENT - 1.0))
    span = np.array([-0.0024, 0.0024])
    axes.plot(e + span, at + tangent * span, color=WARM, lw=1.3)
    axes.text(e + 0.0011, at + tangent * 0.0011 + 17.0, r"tangent $E_t$", color=WARM, ha="center")
    axes.plot([e], [at], "o", color=INK, ms=5)
    axes.plot([e, e], [0.0, at], color=LINE, lw=0.9)
    axes.plot([e - at / MODULUS, e], [0.0, at], color=LINE, lw=1.0, ls=(0, (2, 2)))
    plastic = e - at / MODULUS
    for left, right, name in ((0.0, plastic, r"$\varepsilon_{pl}$"), (plastic, e, r"$\sigma/E$")):
        axes.annotate("", (right, 16.0), (left, 16.0), arrowprops={"arrowstyle": "<->", "color": SOFT, "lw": 1.0})
        axes.text(0.5 * (left + right), 24.0, name, color=SOFT, ha="center")
    return figure


def mohr() -> tuple[float, float, float]:
    """Return centre and radius of Mohr's circle and the angle to the larger principal stress, in degrees."""
    x, y, shear = STATE
    return 0.5 * (x + y), float(np.hypot(0.5 * (x - y), shear)), float(np.degrees(0.5 * np.arctan2(2 * shear, x - y)))


def mohrs_circle() -> Any:
    """Draw Mohr's circle of a plane stress, shear drawn downward where it turns counter-clockwise."""
    figure, axes = _axes(5.2, 4.2)
    _bare(axes)
    x, y, shear = STATE
    centre, radius, angle = mohr()
    axes.add_patch(plt.Circle((centre, 0.0), radius, fill=False, color=INK, lw=1.8))
    _arrow(axes, (centre - 1.35 * radius, 0.0), (centre + 1.5 * radius, 0.0), SOFT)
    _arrow(axes, (0.0, 1.2 * radius), (0.0, -1.25 * radius), SOFT)
    axes.text(centre + 1.5 * radius, -9.0, "σ", ha="center")
    axes.text(-4.0, -1.22 * radius, "τ", ha="right", va="center")
    axes.plot([x, y], [-shear, shear], color=ACCENT, lw=1.3)
    axes.plot([x, y], [-shear, shear], "o", color=ACCENT, ms=6)
    axes.text(x + 4.0, -shear - 2.0, r"X ($\sigma_x$, $\tau_{xy}$)", color=ACCENT, va="top")
    axes.text(y - 4.0, shear + 2.0, r"Y ($\sigma_y$, $-\tau_{xy}$)", color=ACCENT, ha="right", va="bottom")
    for value, name, side in ((centre + radius, r"$\sigma_1$", 1.0), (centre - radius, r"$\sigma_2$", -1.0)):
        axes.plot([value], [0.0], "o", color=WARM, ms=6)
        axes.text(value + 3.0 * side, 4.0, name, color=WARM, ha="left" if side > 0 else "right")
    axes.add_patch(
        Arc((centre, 0.0), 0.9 * radius, 0.9 * radius, theta1=-2.0 * angle, theta2=0.0, color=ACCENT, lw=1.2)
    )
    axes.text(centre + 0.5 * radius, -0.18 * radius, r"$2\theta_p$", color=ACCENT)
    axes.plot([centre, centre], [0.0, radius], color=WARM, lw=0.9, ls=":")
    axes.plot([centre], [0.0], "o", color=INK, ms=3)
    axes.text(centre + 2.0, 0.55 * radius, r"$\tau_{max}$", color=WARM)
    axes.set_xlim(centre - 1.7 * radius, centre + 1.75 * radius)
    axes.set_ylim(-1.35 * radius, 1.3 * radius)
    return figure


def stress_element() -> Any:
    """Draw the stresses on an element in their positive sense, and the element turned to the principal directions."""
    figure, (left, right) = plt.subplots(1, 2, figsize=(6.4, 3.0))
    for axes, turn in ((left, 0.0), (right, mohr()[2])):
        _bare(axes)
        along = np.array([np.cos(np.radians(turn)), np.sin(np.radians(turn))])
        across = np.array([-along[1], along[0]])
        corners = [a * along + b * across for a, b in ((-1, -1), (1, -1), (1, 1), (-1, 1))]
        axes.add_patch(Polygon(corners, closed=True, facecolor="#ebe8df", edgecolor=INK, lw=1.4))
        first, second = ("σx", "σy") if not turn else ("σ1", "σ2")
        for normal, name, length in ((along, first, 0.8), (across, second, 0.8)):
            inward = bool(turn) and normal is across
            for side in (1.0, -1.0):
                near, far = side * 1.08 * normal, side * (1.08 + length) * normal
                _arrow(axes, tuple(far if inward else near), tuple(near if inward else far), WARM if turn else ACCENT)
            axes.text(
                *(normal * 2.15), rf"$\sigma_{name[1]}$", color=WARM if turn else ACCENT, ha="center", va="center"
            )
        if not turn:
            for normal, tangent in ((along, across), (across, along)):
                for side in (1.0, -1.0):
                    begin = side * (1.17 * normal - 0.75 * tangent)
                    _arrow(axes, tuple(begin), tuple(begin + side * 1.5 * tangent), INK)
            axes.text(1.5, 1.25, r"$\tau_{xy}$", ha="center")
        else:
            axes.plot([0.0, 1.0], [0.0, 0.0], color=SOFT, lw=0.9, ls=":")
            axes.plot([0.0, along[0]], [0.0, along[1]], color=SOFT, lw=0.9, ls=":")
            axes.add_patch(Arc((0, 0), 1.3, 1.3, theta1=0.0, theta2=turn, color=SOFT, lw=1.0))
            axes.text(0.72, -0.38, r"$\theta_p$", color=SOFT)
        axes.set_xlim(-2.5, 2.5)
        axes.set_ylim(-2.5, 2.5)
    _arrow(left, (-2.4, -2.3), (-1.6, -2.3), SOFT, 1.0)
    _arrow(left, (-2.4, -2.3), (-2.4, -1.5), SOFT, 1.0)
    left.text(-1.5, -2.3, "x", color=SOFT, va="center")
    left.text(-2.4, -1.35, "y", color=SOFT, ha="center")
    return figure


def rosettes() -> Any:
    """Draw a rectangular, a delta and a tee rosette with their angles."""
    figure, row = plt.subplots(1, 3, figsize=(7.2, 2.7))
    kinds = (("rectangular", (0, 45, 90)), ("delta", (0, 60, 120)), ("tee", (0, 90)))
    for axes, (name, angles) in zip(row, kinds, strict=True):
        _bare(axes)
        axes.plot([-0.2, 2.5], [0.0, 0.0], color=LINE, lw=0.9, ls=":")
        for letter, degrees in zip("abc", angles, strict=False):
            turn = np.radians(degrees)
            along, across = np.array([np.cos(turn), np.sin(turn)]), np.array([-np.sin(turn), np.cos(turn)])
            corners = [a * along + b * across for a, b in ((0.75, -0.22), (1.85, -0.22), (1.85, 0.22), (0.75, 0.22))]
            axes.add_patch(Polygon(corners, closed=True, facecolor="#e2ecea", edgecolor=ACCENT, lw=1.2))
            for b in (-0.11, 0.0, 0.11):
                start, end = 0.9 * along + b * across, 1.7 * along + b * across
                axes.plot([start[0], end[0]], [start[1], end[1]], color=ACCENT, lw=0.8)
            axes.text(*(2.12 * along), letter, ha="center", va="center", weight="bold")
            if degrees:
                size = 0.55 + 0.005 * degrees
                axes.add_patch(Arc((0, 0), size, size, theta1=0.0, theta2=degrees, color=SOFT, lw=0.9))
        axes.plot([0.0], [0.0], "o", color=INK, ms=3)
        axes.text(0.75, -0.75, f"{name}: {', '.join(f'{a}°' for a in angles)}", ha="center", color=SOFT)
        axes.text(2.55, 0.0, "x", color=SOFT, va="center")
        axes.set_xlim(-1.4, 2.8)
        axes.set_ylim(-1.0, 2.4)
    return figure


def moduli() -> Any:
    """Draw G/E, K/E and λ/E of an isotropic material over Poisson's ratio."""
    figure, axes = _axes(5.4, 3.3)
    ratio = np.linspace(-0.99, 0.49, 500)
    axes.plot(ratio, 1.0 / (2.0 * (1.0 + ratio)), color=ACCENT, lw=1.8)
    axes.plot(ratio, 1.0 / (3.0 * (1.0 - 2.0 * ratio)), color=WARM, lw=1.8)
    axes.plot(ratio, ratio / ((1.0 + ratio) * (1.0 - 2.0 * ratio)), color=INK, lw=1.8)
    axes.set_ylim(-1.0, 2.2)
    axes.set_xlim(-1.0, 0.5)
    axes.axhline(0.0, color=LINE, lw=0.8)
    axes.axvspan(0.25, 0.35, color="#ebe8df", zorder=0)
    axes.text(0.3, -0.9, "most metals", ha="center", color=SOFT, rotation=90, va="bottom")
    for x, y, name, color in ((-0.83, 1.3, "G/E", ACCENT), (0.39, 1.95, "K/E", WARM), (-0.42, -0.75, "λ/E", INK)):
        axes.text(x, y, name, color=color, ha="right")
    axes.set_xlabel("Poisson's ratio ν")
    axes.set_xticks([-1.0, -0.5, 0.0, 0.25, 0.5])
    axes.set_yticks([-1, 0, 1, 2])
    return figure


def outlines() -> dict[str, list[Any]]:
    """Return the outline of each section, an outer one and perhaps a hole, in its own measure."""
    h, b, t, w = 2.0, 1.3, 0.22, 0.16
    c, d = b / 2, w / 2
    turn = np.linspace(0.0, 2.0 * np.pi, 181)[:-1]
    circle = np.column_stack([np.cos(turn), np.sin(turn)])
    right = [(c, 0), (c, t), (d, t), (d, h - t), (c, h - t), (c, h)]
    return {
        "I": [[*right, *((-x, y) for x, y in reversed(right))]],
        "channel": [[(0, 0), (b, 0), (b, t), (w, t), (w, h - t), (b, h - t), (b, h), (0, h)]],
        "angle": [[(0, 0), (b, 0), (b, t), (t, t), (t, h), (0, h)]],
        "box": [
            [(-c, 0), (c, 0), (c, h), (-c, h)],
            [(-c + w, t), (c - w, t), (c - w, h - t), (-c + w, h - t)],
        ],
        "tube": [(0, h / 2) + 0.95 * circle, (0, h / 2) + 0.75 * circle],
    }


def centroid(rings: list[Any]) -> tuple[float, float]:
    """Return the centroid of an outline less its holes, by Green's theorem."""
    sums = np.zeros(3)
    for sign, ring in zip((1.0, -1.0), rings, strict=False):
        x, y = np.transpose(np.asarray(ring, dtype=float))
        nx, ny = np.roll(x, -1), np.roll(y, -1)
        cross = x * ny - nx * y
        part = np.array([cross.sum() / 2, ((x + nx) * cross).sum() / 6, ((y + ny) * cross).sum() / 6])
        sums += sign * part * np.sign(part[0])
    return float(sums[1] / sums[0]), float(sums[2] / sums[0])


def sections() -> Any:
    """Draw sections with the axes through their centroid: I, channel, angle, box, tube."""
    figure, row = plt.subplots(1, 5, figsize=(8.6, 2.3))
    for axes, (name, rings) in zip(row, outlines().items(), strict=True):
        _bare(axes)
        for ring, color in zip(rings, ("#e2ecea", PAPER), strict=False):
            axes.add_patch(Polygon(ring, closed=True, facecolor=color, edgecolor=INK, lw=1.3))
        x, y = centroid(rings)
        axes.plot([x - 1.2, x + 1.2], [y, y], color=WARM, lw=0.9, ls="-.")
        axes.plot([x, x], [-0.3, 2.3], color=WARM, lw=0.9, ls="-.")
        axes.plot([x], [y], "o", color=WARM, ms=4)
        axes.text(x + 1.25, y, "x", color=WARM, va="center")
        axes.text(x, 2.36, "y", color=WARM, ha="center")
        axes.text(x, -0.75, name, color=SOFT, ha="center")
        axes.set_xlim(x - 1.4, x + 1.5)
        axes.set_ylim(-0.9, 2.6)
    return figure


SKETCHES: dict[str, Callable[[], Any]] = {
    "offset_line": offset_line,
    "yield_point": yield_point,
    "ramberg_osgood": ramberg_osgood,
    "mohrs_circle": mohrs_circle,
    "stress_element": stress_element,
    "rosettes": rosettes,
    "moduli": moduli,
    "sections": sections,
}
"""Every sketch by its name."""


if __name__ == "__main__":
    main()
