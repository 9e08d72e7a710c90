"""Columns of text that stand beside columns of numbers in a user's table."""

from __future__ import annotations

from collections.abc import Sequence

from doubler.catalogue.limits import Refusal


def aligned(texts: Sequence[str], count: int, name: str) -> list[str]:
    """Return `count` texts, a heading above them dropped.

    A headed column of numbers loses its heading when it is read; the texts beside it then have one cell more.

    Raises
    ------
    Refusal
        The lengths do not fit.
    """
    found = [text.strip() for text in texts]
    if len(found) == count + 1:
        found = found[1:]
    if len(found) != count:
        raise Refusal(f"{name} has {len(found)} cells beside {count} values; give both over the same rows")
    return found


def same_text(first: str, second: str) -> bool:
    """Return whether two texts are the same name: case and runs of spaces apart."""
    return " ".join(first.split()).casefold() == " ".join(second.split()).casefold()
