"""Our own worksheet functions, called over lanes: the one seam between the evaluation and the catalogue."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from doubler.workbook.natives.by_lane import by_lane
from doubler.workbook.natives.registry import OMITTED


def find(name: str) -> Callable[[list[Any]], Any] | None:
    """Return the rule of one of our worksheet functions, called with the list of its arguments; None if unknown."""
    from doubler import catalogue

    record = catalogue.lookup(name)
    if record is None:
        return None

    def one_lane(*arguments: Any) -> Any:
        given = [None if argument is OMITTED else argument for argument in arguments]
        return catalogue.call_cells(record, given).grid

    lifted = by_lane(one_lane)
    return lambda arguments: lifted(*arguments)
