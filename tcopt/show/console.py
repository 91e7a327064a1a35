"""Where text leaves the program: standard output for results, standard error for the rest."""

from __future__ import annotations

import os
import sys
from typing import TYPE_CHECKING, Any

from tcopt.errors import InputError

if TYPE_CHECKING:
    from rich.console import Console, RenderableType

__all__ = ["console", "say", "say_report"]

_PIPE_WIDTH = 80


def console(file: Any) -> Console:
    """Return a rich console that takes text as it is: no markup, no emoji, no guessed colours."""
    from rich.console import Console  # noqa: PLC0415  slow to import

    settled = file.isatty() or "COLUMNS" in os.environ
    return Console(
        file=file,
        markup=False,
        emoji=False,
        highlight=False,
        width=None if settled else _PIPE_WIDTH,
    )


def say(text: str) -> None:
    """Write text to standard output; a reader that has had enough is no failure."""
    try:
        sys.stdout.write(text)
        sys.stdout.flush()
    except OSError as error:
        # so that the interpreter's own flush on the way out does not meet it again
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        if not isinstance(error, BrokenPipeError):
            raise InputError(
                f"standard output: found {error.strerror or error}; accepted: one that can be "
                "written to"
            ) from None


def say_report(report: RenderableType) -> None:
    """Write a report to standard output, as wide as it is there."""
    out = console(sys.stdout)
    with out.capture() as captured:
        out.print(report)
    say("\n".join(line.rstrip() for line in captured.get().splitlines()) + "\n")
