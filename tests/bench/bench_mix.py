"""The exact mix beside a general global optimiser, and the time and memory of a whole `design`.

The optimiser minimises the same objective, the largest |I/I_target - 1| over the same
temperatures from the same closed forms, over the eight resistances of a series mix. At its
default settings it stops early; tightened, it runs until it comes within 0.1 % of the
program's optimum, with the settings that reached it soonest of those tried.
"""

from __future__ import annotations

import resource
import subprocess
import sys
import tempfile
from pathlib import Path
from time import perf_counter

import numpy as np
from scipy.optimize import differential_evolution

from tcopt.arrays import Array
from tcopt.mix.band import Band
from tcopt.mix.offer import Offer
from tcopt.mix.program import Fit, best_fit
from tcopt.operation import Choices, Operation
from tcopt.solve import currents
from tcopt.study import Study, load_study, write_first_study
from tcopt.targets import target_current
from tests.bench.figure import Figure
from tests.bench.ratio import one_core

__all__ = ["figures"]

_ROUNDS = 3


def figures() -> list[Figure]:
    """Measure the mix by turns with the optimiser, and `design` in a process of its own."""
    with one_core(), tempfile.TemporaryDirectory() as folder:
        write_first_study(folder)
        return [*_mix(load_study(Path(folder) / "study.toml")), *_design(Path(folder))]


def _mix(study: Study) -> list[Figure]:
    slot = study.resistors["output"]
    offer = Offer(slot.materials, "series")
    operation = Operation(study, Choices(input_current=100e-6))
    target = target_current(study.target, study.range.reference)
    T = np.linspace(study.range.low, study.range.high, 129)
    columns, current, known = offer.columns(T), target.current(T), operation.quantities(T)

    def objective(parts: Array) -> float:
        output = currents(operation.circuit, {**known, "R_output": columns @ parts})["I_out"]
        return float(np.abs(output / current - 1).max())

    def exact() -> Fit:
        fit = best_fit(Band(operation, "output", target), offer)
        if fit is None:
            raise AssertionError("the first study has a best mix")
        return fit

    bounds = [(1e-3, 12e3)] * len(slot.materials)
    ours = usual = np.inf
    worst = 0.0
    for seed in range(_ROUNDS):
        started = perf_counter()
        fit = exact()
        ours = min(ours, perf_counter() - started)
        started = perf_counter()
        found = differential_evolution(objective, bounds, rng=seed)
        usual = min(usual, perf_counter() - started)
        worst = max(worst, fit.deviation / found.fun)
    started = perf_counter()
    found = differential_evolution(
        objective, bounds, rng=0, tol=1e-8, maxiter=3000, popsize=20,
        callback=lambda x, convergence: objective(x) <= 1.001 * fit.deviation,  # noqa: ARG005
    )  # fmt: skip
    tight = perf_counter() - started
    return [
        Figure("mix: exact over the optimiser's default, deviation", worst, 1 + 1e-6, "at most"),
        Figure("mix: time of the optimiser's default over exact", usual / ours, 25, "at least"),
        Figure(
            f"mix: time of the optimiser tightened (to {found.fun / fit.deviation:.4f}) over exact",
            tight / ours, 100, "at least",
        ),
    ]  # fmt: skip


def _design(folder: Path) -> list[Figure]:
    """Time `tcopt design`: eight materials, three pieces, either join, eight area ratios."""
    study = folder / "study.toml"
    text = study.read_text(encoding="utf-8")
    asked = text.replace("area_ratio = [1, 2, 4, 8]", "area_ratio = [1, 2, 3, 4, 6, 8, 12, 16]")
    asked = asked.replace("pieces = 2", "pieces = 3").replace('join = "series"', 'join = "either"')
    if asked.count("either") < 2 or "pieces = 3" not in asked or "12, 16" not in asked:
        raise AssertionError("the first study no longer reads as this bench expects")
    study.write_text(asked, encoding="utf-8")
    started = perf_counter()
    done = subprocess.run(
        [sys.executable, "-m", "tcopt", "design", str(study), "--json"],
        capture_output=True,
        check=False,
    )
    wall = perf_counter() - started
    if done.returncode not in {0, 1}:
        raise AssertionError(done.stderr.decode())
    peak = resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss / 1024
    return [
        Figure("design: 8 materials, 3 pieces, either join, 8 ratios", wall, 10, "at most", "s"),
        Figure("design: peak memory", peak, 500, "at most", "MB"),
    ]
