"""Hand blocks to a crew and gather what comes back, in bounded memory.

The blocks are cut the same whoever works on them, and are put together by number,
so the result does not depend on who was first.
"""

from __future__ import annotations

import pickle
from collections.abc import Callable
from concurrent.futures import FIRST_COMPLETED, Executor, Future, wait
from contextlib import suppress
from dataclasses import dataclass

import numpy as np

from tcopt.arrays import Array
from tcopt.errors import NoSolutionError
from tcopt.spread.crews import Crew
from tcopt.spread.figures import FIGURES, GRID
from tcopt.spread.plan import FAN_PARTS, Block, Plan, Sums, run_block
from tcopt.spread.sample import BLOCK, block_count
from tcopt.spread.trim import Setting

__all__ = ["Sample", "draw"]

_AHEAD = 2
"""Blocks handed out for each one that can be worked on, so that no worker waits."""
_TRIES = 3
"""How often in a row, without a block coming back, work is handed out again to a new crew."""


@dataclass(frozen=True)
class Sample:
    """All parts that were drawn.

    Attributes
    ----------
    wanted : parts asked for
    stopped : why there are fewer; empty if there are not
    figures : shape (stages, parts, figures), see `tcopt.spread.figures.FIGURES`
    settings : of each stage after the first
    sums : see `tcopt.spread.plan.Sums`
    current : of the first parts over the grid [A], shape (stages, parts kept, 61)
    """

    wanted: int
    stopped: str
    figures: Array
    settings: tuple[Setting, ...]
    sums: Sums
    current: Array

    @property
    def drawn(self) -> int:
        """Parts drawn."""
        return int(self.figures.shape[1])


def draw(plan: Plan, crew: Crew, progress: Callable[[int, int], None] | None = None) -> Sample:
    """Return the sample of a plan, or what there is of it if Ctrl-C or dying workers stop it.

    Parameters
    ----------
    plan : the design, and how many parts are drawn and how
    crew : who does the work
    progress : called with parts done and parts in all

    Raises
    ------
    KeyboardInterrupt
        If it comes before the first block is finished.
    NoSolutionError
        If workers keep dying before the first block is finished.
    """
    gathering = _Gathering(plan, progress)
    stopped = ""
    tries = 0
    try:
        while True:
            before = gathering.parts
            with crew.opened() as executor:
                if gathering.work(executor, crew):
                    break
            tries = 0 if gathering.parts > before else tries + 1
            if tries > _TRIES:
                stopped = "its workers kept dying"
                break
    except KeyboardInterrupt:
        if not gathering.parts:
            raise
        stopped = "it was interrupted"
    if not gathering.parts:
        raise NoSolutionError(
            f"workers: found that they died {tries} times without finishing anything; accepted: "
            "workers that have enough memory and are left alone"
        )
    return gathering.sample(stopped)


class _Gathering:
    def __init__(self, plan: Plan, progress: Callable[[int, int], None] | None) -> None:
        samples, stages = plan.spread.samples, plan.stages
        self.plan = plan
        self.parts = 0
        self._progress = progress
        self._done = np.zeros(block_count(samples), dtype=bool)
        self._figures = np.empty((stages, samples, len(FIGURES)))
        self._settings = [
            Setting(np.empty((samples, k)), np.empty((samples, k), dtype=bool))
            for k in range(1, stages)
        ]
        kept = min(samples, FAN_PARTS)
        self._current = np.empty((stages, kept, GRID), dtype=np.float32)
        self._sums: Sums | None = None
        self._early: dict[int, Sums] = {}
        self._added = 0

    def work(self, executor: Executor, crew: Crew) -> bool:
        """Do what is left; return False if a worker died and something is still left."""
        packed = pickle.dumps(self.plan)
        left = iter(np.flatnonzero(~self._done).tolist())
        running: set[Future[Block]] = set()
        lost = False
        try:
            while True:
                with suppress(*crew.lost):
                    while not lost and len(running) < _AHEAD * crew.width:
                        number = next(left, None)
                        if number is None:
                            break
                        running.add(executor.submit(run_block, packed, number))
                if not running:
                    return bool(self._done.all())
                finished, running = wait(running, return_when=FIRST_COMPLETED)
                for future in finished:
                    try:
                        self._take(future.result())
                    except crew.lost:
                        lost = True
        except KeyboardInterrupt:
            for future in running:
                if not future.cancel() and future.done() and future.exception() is None:
                    self._take(future.result())
            raise

    def _take(self, block: Block) -> None:
        """Keep a finished block."""
        if self._done[block.number]:
            return
        start = block.number * BLOCK
        stop = start + block.figures.shape[1]
        self._figures[:, start:stop] = block.figures
        for whole, part in zip(self._settings, block.settings, strict=True):
            whole.scale[start:stop], whole.beyond[start:stop] = part.scale, part.beyond
        if block.current is not None:
            self._current[:, start:stop] = block.current
        self._early[block.number] = block.sums
        while self._added in self._early:
            self._add(self._early.pop(self._added))
            self._added += 1
        self._done[block.number] = True
        self.parts += stop - start
        if self._progress is not None:
            self._progress(self.parts, self.plan.spread.samples)

    def _add(self, sums: Sums) -> None:
        """Add sums up in order of the blocks, or the last bits would tell who was first."""
        before = self._sums
        self._sums = (
            sums if before is None else Sums(before.count + sums.count, before.total + sums.total)
        )

    def sample(self, stopped: str) -> Sample:
        """Return what is finished, in order of the blocks."""
        for number in sorted(self._early):
            self._add(self._early[number])
        if self._sums is None:
            raise AssertionError("no block is finished")
        samples = self.plan.spread.samples
        if self._done.all():
            current = self._current.astype(float)
            return Sample(samples, "", self._figures, tuple(self._settings), self._sums, current)
        there = np.repeat(self._done, BLOCK)[:samples]
        settings = tuple(Setting(s.scale[there], s.beyond[there]) for s in self._settings)
        # what no block has filled may hold anything: it is left out before it is converted
        current = self._current[:, there[: self._current.shape[1]]].astype(float)
        return Sample(samples, stopped, self._figures[:, there], settings, self._sums, current)
