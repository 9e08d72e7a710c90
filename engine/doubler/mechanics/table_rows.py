"""Columns of text that stand beside columns of numbers in a user's table."""

from __future__ import annotations

from collections.abc import Sequence

from doubler.catalogue.limits import Refusal


def aligned(texts: Sequence[str], count: int, name: str) -> list[str]:
    """Return the texts beside `count` numbers, without the spaces around them.

    A heading above both is taken off before, when the cells are read; here one text more than there are numbers is a
    mistake, since each text would stand beside its neighbour's number.

    Raises
    ------
    Refusal
        The lengths do not fit.
    """
    if len(texts) != count:
        raise Refusal(f"{name} has {len(texts)} cells beside {count} values; give both over the same rows")
    return [text.strip() for text in texts]


def same_text(first: str, second: str) -> bool:
    """Return whether two texts are the same name: case and runs of spaces apart."""
    return " ".join(first.split()).casefold() == " ".join(second.split()).casefold()
