"""A bar on the terminal while something takes long; nothing where nobody watches."""

from __future__ import annotations

import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager

__all__ = ["progress_bar"]


@contextmanager
def progress_bar(title: str) -> Iterator[Callable[[int, int], None] | None]:
    """Give a function to call with what is done so far and how much there is.

    The bar goes to the standard error and is gone when the work is done; ``None`` where that is
    no terminal.
    """
    if not sys.stderr.isatty():
        yield None
        return
    from rich.console import Console
    from rich.progress import Progress

    with Progress(console=Console(stderr=True), transient=True) as bar:
        task = bar.add_task(title, total=None)
        yield lambda done, of: bar.update(task, completed=done, total=of)
