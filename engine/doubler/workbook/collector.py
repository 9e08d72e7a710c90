"""Holding the collector of circles still while many objects are made that form none."""

from __future__ import annotations

import gc
from collections.abc import Iterator
from contextlib import contextmanager


@contextmanager
def collector_held() -> Iterator[None]:
    """Hold the collector of circles still: it would walk over all new cells time and again, and find none.

    What was made meanwhile counts as old afterwards, so that it is not walked over at once either.
    """
    was_on = gc.isenabled()
    gc.disable()
    try:
        yield
    finally:
        if was_on:
            if gc.get_freeze_count() == 0:
                gc.freeze()
                gc.unfreeze()
            gc.enable()
