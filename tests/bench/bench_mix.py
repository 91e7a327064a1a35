"""The exact mix beside a general global optimiser, and the time and memory of a whole `design`.

The optimiser, scipy's differential evolution, minimises the same objective, the largest
|I/I_target - 1| over the range from the same closed forms, over the eight resistances of a
series mix. It is helped where it can be: a whole generation is computed at once, every part
is bounded by what the need leaves room for, and what does not change is computed beforehand.
At its default settings it stops early. Tightened, it runs until it is within 0.1 % of the
program's optimum, which it is told; of the settings tried, the quickest counts.
"""

from __future__ import annotations

import resource
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np
from scipy.optimize import differential_evolution

from tcopt.arrays import Array
from tcopt.mix.band import Band
from tcopt.mix.offer import Offer
from tcopt.mix.program import best_fit
from tcopt.operation import Choices, Operation
from tcopt.solve import currents
from tcopt.study import OpenSlot, Study, load_study, write_first_study
from tcopt.targets import target_current
from tests.bench.figure import Figure
from tests.bench.ratio import one_core, time_beside

__all__ = ["Rival", "figures"]

_ROUNDS = 9
_SEEDS = 2
_POINTS = 129
_CLOSE = 1.001
_ROOM = 1.5
"""Largest value of a part, over what meets the need by itself."""
_TIGHTENED: tuple[dict[str, Any], ...] = (
    {"popsize": 10},
    {"popsize": 10, "mutation": (0.3, 0.9), "recombination": 0.9},
    {"popsize": 15},
)


def figures() -> list[Figure]:
    """Measure the mix by turns with the optimiser, and `design` in a process of its own."""
    with one_core(), tempfile.TemporaryDirectory() as folder:
        write_first_study(folder)
        return [*_mix(load_study(Path(folder) / "study.toml")), *_design(Path(folder))]


@dataclass
class Rival:
    """The same question for the exact search and for the optimiser."""

    study: Study

    def __post_init__(self) -> None:
        study = self.study
        slot = study.resistors["output"]
        if not isinstance(slot, OpenSlot):
            raise TypeError("the first study has its output resistor to design")
        self.offer = Offer(slot.materials, "series")
        self.operation = Operation(study, Choices(input_current=100e-6))
        self.target = target_current(study.target, study.range.reference)
        T = np.linspace(study.range.low, study.range.high, _POINTS)
        self.current, self.known = self.target.current(T), self.operation.quantities(T)
        columns = self.offer.columns(T)
        need = self.band.resistance(T, 0.0)
        self.most = _ROOM * (need[:, None] / columns).max(axis=0)
        self.columns = columns * self.most

    @property
    def band(self) -> Band:
        """The band, with nothing remembered from before."""
        return Band(self.operation, "output", self.target)

    def exact(self) -> float:
        """Return the deviation of the exact mix [1]."""
        fit = best_fit(self.band, self.offer)
        if fit is None:
            raise AssertionError("the first study has a best mix")
        return fit.deviation

    def objective(self, x: Array) -> Array:
        """Return the deviation [1] of mixes x, shape (parts,) or (parts, mixes)."""
        resistance = (self.columns @ x).T
        circuit = self.operation.circuit
        output = currents(circuit, {**self.known, "R_output": resistance})[circuit.currents[-1]]
        return np.asarray(np.abs(output / self.current - 1).max(axis=-1))

    def evolved(self, stop: float = 0.0, **settings: Any) -> float:
        """Return the deviation that the optimiser comes to, or at which it may stop [1]."""
        halt: Callable[..., bool] | None = None
        if stop > 0:

            def halt(x: Array, convergence: float = 0.0) -> bool:  # noqa: ARG001  scipy's words
                return bool(self.objective(x) <= stop)

        found = differential_evolution(
            self.objective,
            [(1e-6, 1.0)] * len(self.most),
            vectorized=True,
            updating="deferred",
            callback=halt,
            **settings,
        )
        return float(found.fun)


def _mix(study: Study) -> list[Figure]:
    rival = Rival(study)
    least = rival.exact()
    usual = [_beside(rival, rng=seed) for seed in range(_SEEDS)]
    reached = [deviation for _, deviation in usual]
    tightened = [
        _beside(rival, stop=_CLOSE * least, rng=0, tol=1e-10, maxiter=6000, polish=False, **each)
        for each in _TIGHTENED
    ]
    near = [(ratio, found) for ratio, found in tightened if found <= _CLOSE * least]
    tight, nearest = min(near, default=(np.inf, np.inf))
    return [
        Figure(
            "mix: deviation of the exact mix over the optimiser's best",
            least / min(reached),
            1 + 1e-6,
            "at most",
        ),
        Figure(
            f"mix: time of the optimiser at default ({100 * (min(reached) / least - 1):.1f} to "
            f"{100 * (max(reached) / least - 1):.1f} % worse), over exact",
            min(ratio for ratio, _ in usual),
            25,
            "at least",
        ),
        Figure(
            f"mix: time of the optimiser tightened (to {100 * (nearest / least - 1):.2f} %), "
            "over exact",
            tight,
            100,
            "at least",
        ),
    ]


def _beside(rival: Rival, **settings: Any) -> tuple[float, float]:
    """Return how many times as long the optimiser takes, and the deviation it comes to."""
    came_to: list[float] = []

    def evolve() -> None:
        came_to.append(rival.evolved(**settings))

    times = time_beside(rival.exact, evolve, _ROUNDS, second_rounds=1, clock=time.process_time)
    return times.second / times.first, came_to[0]


def _design(folder: Path) -> list[Figure]:
    """Time `tcopt design`: eight materials, three pieces, either join, eight area ratios."""
    study = folder / "study.toml"
    text = study.read_text(encoding="utf-8")
    asked = text.replace("area_ratio = [1, 2, 4, 8]", "area_ratio = [1, 2, 3, 4, 6, 8, 12, 16]")
    asked = asked.replace("pieces = 2", "pieces = 3").replace('join = "series"', 'join = "either"')
    if asked.count("either") < 2 or "pieces = 3" not in asked or "12, 16" not in asked:
        raise AssertionError("the first study no longer reads as this bench expects")
    study.write_text(asked, encoding="utf-8")
    started = time.perf_counter()
    done = subprocess.run(
        [sys.executable, "-m", "tcopt", "design", str(study), "--json"],
        capture_output=True,
        check=False,
    )
    wall = time.perf_counter() - started
    if done.returncode not in {0, 1}:
        raise AssertionError(done.stderr.decode())
    peak = resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss / 1024
    return [
        Figure("design: 8 materials, 3 pieces, either join, 8 ratios", wall, 10, "at most", "s"),
        Figure("design: peak memory", peak, 500, "at most", "MB"),
    ]
