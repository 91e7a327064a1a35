"""How long one thing takes beside another, in one run and under the same load."""

from __future__ import annotations

import gc
import os
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass

__all__ = ["Times", "one_core", "time_beside"]


@dataclass(frozen=True)
class Times:
    """The shortest of several runs of two callables [s]."""

    first: float
    second: float

    @property
    def ratio(self) -> float:
        """How many times as long the first takes as the second."""
        return self.first / self.second


def time_beside(
    first: Callable[[], object],
    second: Callable[[], object],
    rounds: int = 7,
    second_rounds: int | None = None,
    clock: Callable[[], float] = time.perf_counter,
) -> Times:
    """Run both in turn, ``rounds`` times after one round that does not count, and keep the minima.

    Taking turns lets both meet the same load of the machine; the minimum is the run that was
    disturbed least. ``second_rounds``: fewer turns for a second that takes very long (0 is not
    enough); its first run then counts. ``clock``: what the time [s] is read from.
    """
    turns = rounds if second_rounds is None else second_rounds
    first()
    if second_rounds is None:
        second()
    shortest = [float("inf"), float("inf")]
    was_on = gc.isenabled()
    gc.disable()
    try:
        for turn in range(rounds):
            for k, thing in enumerate((first, second)):
                if k == 1 and turn >= turns:
                    continue
                start = clock()
                thing()
                shortest[k] = min(shortest[k], clock() - start)
    finally:
        if was_on:
            gc.enable()
    return Times(*shortest)


@contextmanager
def one_core() -> Iterator[None]:
    """Keep this process on one core, where the system allows it."""
    if not hasattr(os, "sched_setaffinity"):
        yield
        return
    before = os.sched_getaffinity(0)
    os.sched_setaffinity(0, {min(before)})
    try:
        yield
    finally:
        os.sched_setaffinity(0, before)
