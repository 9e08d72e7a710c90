"""Tables on the terminal: coloured where it is one and wants colour, plain text in a pipe."""

from __future__ import annotations

import os
import shutil
import sys
from collections.abc import Sequence
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from rich.console import Console

    from doubler.outcome import EnvelopeLine

CAUTION = (
    "An aid to calculation: results are to be checked and approved by a qualified engineer under the codes that apply."
)


def console() -> Console:
    """Return a console on standard output that wraps nothing away in a pipe and honours NO_COLOR."""
    from rich.console import Console

    terminal = sys.stdout.isatty()
    width = shutil.get_terminal_size().columns if terminal or "COLUMNS" in os.environ else 160
    plain = not terminal or bool(os.environ.get("NO_COLOR"))
    return Console(
        width=width,
        highlight=False,
        soft_wrap=False,
        emoji=False,
        markup=False,
        color_system=None if plain else "auto",
        no_color=plain,
    )


def envelope_table(lines: Sequence[EnvelopeLine]) -> None:
    """Print every output over all cases, margins first, what fails in red and in words."""
    from rich import box
    from rich.table import Table
    from rich.text import Text

    table = Table(box=box.SIMPLE_HEAD, show_edge=False, pad_edge=False)
    for head, side in (("output", "left"), ("unit", "left"), ("lowest", "right"), ("governing case", "left")):
        table.add_column(head, justify=side, no_wrap=head != "governing case")  # type: ignore[arg-type]
    table.add_column("highest", justify="right", no_wrap=True)
    table.add_column("in case")
    table.add_column("", no_wrap=True)
    for line in lines:
        style = "bold red" if line.fails else "bold" if line.port.is_margin else ""
        word = f"{line.below_zero} below zero" if line.below_zero else ""
        if line.not_computed:
            word = f"{line.not_computed} not computed"
        table.add_row(
            Text(line.port.name, style),
            line.port.unit.text if line.port.unit else "",
            Text(_shown(line.lowest.value), style),
            line.lowest.case,
            _shown(line.highest.value),
            line.highest.case,
            Text(word, "bold red"),
        )
    screen = console()
    screen.print(table)
    screen.print(Text(CAUTION, "dim"))


def _shown(value: object) -> str:
    return f"{value:.4g}" if isinstance(value, float) else str(value)
