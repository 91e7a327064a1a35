"""A progress bar on standard error, for what takes more than a second and only on a terminal."""

from __future__ import annotations

import sys
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager

from tcopt.show.console import console

__all__ = ["progress"]

_PATIENCE = 1.0


@contextmanager
def progress(words: str) -> Iterator[Callable[[int, int], None] | None]:
    """Yield a function that takes what is done and what there is; None without a terminal."""
    if not sys.stderr.isatty():
        yield None
        return
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, TextColumn  # noqa: PLC0415
    from rich.progress import TimeRemainingColumn as Remaining  # noqa: PLC0415  slow to import

    columns = (TextColumn("{task.description}"), BarColumn(), MofNCompleteColumn(), Remaining())
    bar = Progress(*columns, console=console(sys.stderr), transient=True)
    task = bar.add_task(words, total=None)
    start = time.monotonic()

    def report(done: int, total: int) -> None:
        if not bar.live.is_started and time.monotonic() - start > _PATIENCE:
            bar.start()
        bar.update(task, completed=done, total=total)

    try:
        yield report
    finally:
        bar.stop()
