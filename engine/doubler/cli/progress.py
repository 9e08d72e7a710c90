"""Progress of long work: a bar on a terminal, nothing in a pipe."""

from __future__ import annotations

import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager


@contextmanager
def progress(what: str, total: int) -> Iterator[Callable[[int], None]]:
    """Show a bar on standard error while the work goes on, where that is a terminal.

    Parameters
    ----------
    what : str
        What is being done, in a word or two.
    total : int
        How many steps there are.

    Yields
    ------
    callable
        To be called with the number of steps done since the last call.
    """
    if not sys.stderr.isatty():
        yield lambda _done: None
        return
    from rich.console import Console
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, TextColumn, TimeRemainingColumn

    columns = (TextColumn("{task.description}"), BarColumn(), MofNCompleteColumn(), TimeRemainingColumn())
    with Progress(*columns, console=Console(stderr=True), transient=True) as bar:
        task = bar.add_task(what, total=total)
        yield lambda done: bar.advance(task, done)
