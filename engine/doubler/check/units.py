"""Findings about units, taken from the trace of units through the workbook."""

from __future__ import annotations

from collections.abc import Iterator

from doubler.check.finding import Finding
from doubler.workbook.examined import Examined, cell_name_of


def unit_findings(book: Examined) -> Iterator[Finding]:
    """Turn the faults of the trace into findings."""
    for fault in book.tracing.findings:
        yield Finding(
            fault.sheet,
            fault.place,
            fault.kind,
            fault.severity,
            _sentence(fault.message),
            fault.found,
            fault.expected,
            tuple(cell_name_of(key) for key in fault.cells),
            tuple(cell_name_of(key) for key in fault.follows),
        )


def _sentence(text: str) -> str:
    """Begin with a capital, unless it is a cell's address already, and end with a full stop."""
    text = text[0].upper() + text[1:]
    return text if text.endswith((".", "!", "?")) else f"{text}."
