"""The chart of margins of a check record: horizontal bars about zero, as inline SVG."""

from __future__ import annotations

from collections.abc import Sequence
from html import escape

from doubler.check.record_content import Margin
from doubler.check.written_formula import number_shown

MOST_BARS = 40
LARGEST = 3.0
"""Margins beyond are drawn cut short, with a mark: what governs lies near zero."""

WIDTH, LABELS, VALUES = 720, 250, 76
BAR, STEP, TOP = 12, 20, 22
LONGEST_LABEL = 40


def margin_chart(margins: Sequence[Margin]) -> str:
    """Draw the lowest margins.

    Parameters
    ----------
    margins : sequence of Margin
        Lowest first; those without a number are left out.

    Returns
    -------
    str
        The SVG; empty where there is nothing to draw.
    """
    drawn = [(margin, excess) for margin in margins if (excess := margin.excess) is not None][:MOST_BARS]
    if not drawn:
        return ""
    low = min(0.0, max(-1.0, min(excess for _, excess in drawn)))
    high = max(0.5, min(LARGEST, max(excess for _, excess in drawn)))
    left = LABELS + 8
    right = WIDTH - VALUES
    scale = (right - left) / (high - low)
    zero = left - low * scale
    height = TOP + STEP * len(drawn) + 8
    pieces = [
        (
            f'<svg class="chart" viewBox="0 0 {WIDTH} {height}" width="{WIDTH}" height="{height}" role="img" '
            f'aria-label="Bars of the {len(drawn)} lowest margins, from {number_shown(drawn[0][1])} to '
            f'{number_shown(drawn[-1][1])}; the table below holds the values.">'
        )
    ]
    for tick in _ticks(low, high):
        x = left + (tick - low) * scale
        pieces.append(
            f'<path class="tick" d="M{x:.1f} {TOP - 4}V{height - 6}"/>'
            f'<text class="axis" x="{x:.1f}" y="{TOP - 9}" text-anchor="middle">{number_shown(tick)}</text>'
        )
    for place, (margin, excess) in enumerate(drawn):
        y = TOP + STEP * place
        drawn_to = left + (min(max(excess, low), high) - low) * scale
        start, width = (zero, drawn_to - zero) if excess >= 0 else (drawn_to, zero - drawn_to)
        kind = "below" if excess < 0 else "doubtful" if margin.rests_on else "above"
        label = f"{margin.cell}  {margin.label}"
        label = label if len(label) <= LONGEST_LABEL else label[: LONGEST_LABEL - 1] + "…"
        beyond = (" ›" if excess > high else "") if excess >= 0 else (" ‹" if excess < low else "")
        mark = " ?" if margin.rests_on else ""
        pieces.append(
            f'<text class="label" x="{LABELS}" y="{y + BAR - 1}" text-anchor="end">{escape(label)}</text>'
            f'<rect class="b-{kind}" x="{start:.1f}" y="{y + 1}" width="{max(width, 1.0):.1f}" height="{BAR}"/>'
            f'<text class="value" x="{WIDTH - 4}" y="{y + BAR - 1}" text-anchor="end">'
            f"{number_shown(float(f'{excess:.3g}'))}{beyond}{mark}</text>"
        )
    pieces.append(f'<path class="zero" d="M{zero:.1f} {TOP - 4}V{height - 4}"/></svg>')
    return "".join(pieces)


def _ticks(low: float, high: float) -> list[float]:
    step = next(step for step in (0.1, 0.2, 0.25, 0.5, 1.0) if (high - low) / step <= 8)
    first = int(low / step - 1e-9) - 1
    ticks = [round(step * n, 6) for n in range(first, int(high / step + 1e-9) + 1)]
    return [tick for tick in ticks if low - 1e-9 <= tick <= high + 1e-9]
