"""The formulas, one topic a file, NumPy alone. `load` registers them all."""

from __future__ import annotations

import importlib
import pkgutil
from functools import cache


@cache
def load() -> tuple[str, ...]:
    """Import every topic, so that the catalogue knows every worksheet function.

    Returns
    -------
    tuple of str
        The names of the topics.
    """
    topics = tuple(sorted(module.name for module in pkgutil.iter_modules(__path__)))
    for topic in topics:
        importlib.import_module(f"{__name__}.{topic}")
    return topics
