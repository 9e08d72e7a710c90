"""Findings about margins: below zero."""

from __future__ import annotations

from collections.abc import Iterator

from doubler.check.finding import Finding
from doubler.check.recognise import quantities
from doubler.workbook.addresses import cell_name
from doubler.workbook.examined import Examined, Key, cell_name_of, shown


def margins_in(book: Examined) -> Iterator[Key]:
    """Yield the cells that are margins of safety."""
    return (key for key, name in quantities(book) if name == "margin of safety")


def negative_margins(book: Examined) -> Iterator[Finding]:
    """Find margins of safety below zero; of a line of like formulas and of envelopes over it, the lowest one."""
    below: dict[Key, float] = {}
    for key in margins_in(book):
        value = book.number(key)
        if value is not None and value < 0:
            below[key] = value
    groups: dict[object, list[Key]] = {}
    for key in below:
        at = book.graph.group_at(*key)
        groups.setdefault(("line", at[0]) if at is not None else key, []).append(key)
    envelopes = {key for key in below if any(read in below for read in book.cells_read(key))}
    for keys in groups.values():
        keys.sort(key=lambda key: below[key])
        if all(key in envelopes for key in keys):
            continue
        worst = keys[0]
        others = keys[1:]
        label = book.label(worst).text
        more = f" and {len(others)} more below zero in the same line" if others else ""
        yield Finding(
            worst[0],
            cell_name(*worst[1]),
            "negative-margin",
            "error",
            f"The margin of safety{f' ({label})' if label else ''} is {shown(below[worst])}{more}: the part does not "
            "carry the load with the factors asked for; change the part, the load or the allowable.",
            shown(below[worst]),
            "0 or more",
            tuple(cell_name_of(key) for key in others[:12]),
            tuple(cell_name_of(key) for key in sorted(envelopes & book.downstream(keys))),
        )
