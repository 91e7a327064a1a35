"""Spread: beside a loop over parts with a general root finder; workers; memory; evenness.

The study is a mirror fed from a supply, two materials in its output's emitter, every figure
invented. The loop solves the same parts one after the other, each at all temperatures at once
by ``scipy.optimize.root``, as fair as it can be made: in the logarithms of the currents, from
the solution of the design as stated, unknowns ordered so that the Jacobian is a band of three,
which the finder is told of. It is timed on a few hundred parts and scaled to the count.
"""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path
from typing import Any

import numpy as np

from tcopt.arrays import Array
from tcopt.operation import Choices, Mix
from tcopt.solve import currents, numerics
from tcopt.spread.crews import alone, processes
from tcopt.spread.engine import draw
from tcopt.spread.figures import FIGURES, GRID
from tcopt.spread.plan import Plan
from tcopt.spread.sample import block_count, normals, points
from tcopt.study import (
    CircuitChoices,
    CommonPart,
    FixedSlot,
    Material,
    Part,
    Process,
    Spread,
    Study,
    Target,
    TemperatureRange,
    Transistor,
)
from tests.bench.figure import Figure
from tests.bench.ratio import one_core, time_beside

__all__ = ["evenness", "figures", "mirror_plan", "mix_plan", "one_by_one"]

PARTS = 100_000
MANY = 1_000_000
LOOPED = 300
SHARED = 300_000
REPLICATES, PER_REPLICATE = 20, 32_768
_ROOT = Path(__file__).parents[2]


def mirror_plan(samples: int, sampling: str = "sobol", seed: int = 1) -> Plan:
    """Return a mirror from 5 V, 10 uA into a mix of two materials, and how it is drawn."""
    T_0 = 300.15
    common = (CommonPart(part="step", share=0.5),)
    poly = Material(
        name="poly", reference=T_0, tc1=-180e-6, tc2=0.7e-6, spread=0.05, tc1_spread=30e-6,
        common=common,
    )  # fmt: skip
    well = Material(
        name="well", reference=T_0, tc1=5600e-6, tc2=11e-6, spread=0.1, tc1_spread=100e-6
    )
    npn = Transistor(
        name="npn", reference=T_0, saturation_current=1.2e-16, bandgap_voltage=1.17,
        temperature_exponent=3.6, base_emitter_spread=5e-3, matching=2e-8, emitter_area=4e-12,
    )  # fmt: skip
    process = Process(
        title="Invented",
        reference=T_0,
        materials={"poly": poly, "well": well},
        transistors={"npn": npn},
    )
    output = FixedSlot(parts=(Part(material=poly, value=4e3), Part(material=well, value=1.5e3)))
    feed = FixedSlot(parts=(Part(material=poly, value=43e3),))
    study = Study(
        title="Invented mirror from a supply",
        process=process,
        range=TemperatureRange(low=233.15, high=423.15, reference=T_0),
        circuit=CircuitChoices(
            topology="degenerated mirror", transistor=npn, supply=5.0, area_ratio=(1.0,)
        ),
        target=Target(shape="flat", current=1e-5),
        resistors={"output": output, "feed": feed},
        spread=Spread(samples=samples, sampling=sampling, seed=seed, supply=0.02),
    )
    mixes = {"output": Mix(output.parts), "feed": Mix(feed.parts)}
    return Plan(study, Choices(area_ratio=1.0), mixes)


def one_by_one(plan: Plan, z: Array) -> Array:
    """Return the output of each part over the grid [A], by a general root finder in a loop."""
    from scipy.optimize import root

    T = plan.frame.grid
    all_parts = plan.variation.quantities(z, T)
    stated = currents(numerics("degenerated mirror", "supply"), plan.operation.quantities(T))
    start = np.stack([np.log(stated["I_in"]), np.log(stated["I_out"])], axis=1).ravel()
    found = np.empty((len(z), GRID))
    for part in range(len(z)):
        q: dict[str, Any] = {
            name: value[part] if np.ndim(value) == 2 and len(value) == len(z) else value
            for name, value in all_parts.items()
        }

        def loops(x: Array, q: dict[str, Any] = q) -> Array:
            log_in, log_out = x[0::2], x[1::2]
            I_in = np.exp(log_in)
            residual = np.empty_like(x)
            V_BE = q["V_T"] * (log_in - q["log_I_S"])
            residual[0::2] = q["V_CC"] - V_BE - I_in * q["R_feed"]
            drop = q["V_T"] * (np.log(q["N"]) + log_in - log_out)
            residual[1::2] = drop - np.exp(log_out) * q["R_output"]
            return residual

        solved = root(loops, start, method="hybr", options={"band": (1, 1), "xtol": 1e-9})
        found[part] = np.exp(solved.x[1::2])
    return found


def mix_plan() -> Plan:
    """Return a reference voltage over a mix of two materials, +-1500 ppm/K, 5 % each."""
    T_0 = 300.15
    rising, falling = (
        Material(name=name, reference=T_0, tc1=tc1, spread=0.05)
        for name, tc1 in (("rising", 1500e-6), ("falling", -1500e-6))
    )
    slot = FixedSlot(parts=tuple(Part(material=m, value=5e3) for m in (rising, falling)))
    study = Study(
        title="Invented mix of two materials",
        process=Process(
            title="Invented", reference=T_0, materials={"rising": rising, "falling": falling}
        ),
        range=TemperatureRange(low=233.15, high=423.15, reference=T_0),
        circuit=CircuitChoices(topology="reference over resistor", reference_voltage=1.0),
        target=Target(shape="flat", current=1e-4),
        resistors={"sense": slot},
    )
    return Plan(study, Choices(), {"sense": Mix(slot.parts)})


def evenness(plan: Plan, figure: str, level: float) -> float:
    """Return the standard error of a quantile with Sobol points over that with plain numbers."""
    sobol, plain = (_error(plan, figure, level, sampling) for sampling in ("sobol", "plain"))
    return sobol / plain


def _error(plan: Plan, figure: str, level: float, sampling: str) -> float:
    """Return the standard error of a quantile, from replicates with seeds of their own."""
    found = []
    count = len(plan.variation.variates)
    for seed in range(REPLICATES):
        values = [
            plan.made(
                plan.variates_of(points(sampling, seed, count, PER_REPLICATE, block))
            ).figures[0]
            for block in range(block_count(PER_REPLICATE))
        ]
        column = np.concatenate(values)[:, FIGURES.index(figure)]
        found.append(np.quantile(column, level))
    return float(np.std(found, ddof=1))


def _peak_of_many() -> float:
    """Return the peak of the resident memory of a million parts [MB], in a process of its own."""
    code = (
        "import resource\n"
        "from tests.bench.bench_spread import MANY, mirror_plan\n"
        "from tcopt.spread.crews import alone\n"
        "from tcopt.spread.engine import draw\n"
        "assert draw(mirror_plan(MANY), alone()).drawn == MANY\n"
        "print(resource.getrusage(resource.RUSAGE_SELF).ru_maxrss)\n"
    )
    environment = {**os.environ, "OMP_NUM_THREADS": "1", "PYTHONPATH": str(_ROOT)}
    done = subprocess.run(
        [sys.executable, "-c", code], check=True, capture_output=True, text=True, env=environment
    )
    return float(done.stdout) / 1024


def figures() -> list[Figure]:
    """Measure all of them."""
    plan = mirror_plan(PARTS)
    with one_core():
        z = normals(points("sobol", 1, len(plan.variation.variates), LOOPED, 0))
        looped = time_beside(
            lambda: one_by_one(plan, z), lambda: draw(plan, alone()), rounds=3, second_rounds=3
        )
    faster = looped.ratio * PARTS / LOOPED
    long = mirror_plan(SHARED)
    shared = time_beside(
        lambda: draw(long, alone()), lambda: draw(long, processes(2)), rounds=2
    )
    return [
        Figure(
            f"spread of {PARTS} parts: time of a loop with scipy.optimize.root over it "
            f"({LOOPED} parts timed, scaled)",
            faster, 20, "at least",
        ),
        Figure(f"spread of {SHARED} parts: one worker's time over that of two", shared.ratio, 1.7,
               "at least"),
        Figure(f"spread of {MANY} parts: peak memory", _peak_of_many(), 1000, "at most", "MB"),
        Figure("99.7 % quantile of the box, mix of two materials: standard error, Sobol over plain",
               evenness(mix_plan(), "residual_box", 0.997), 0.5, "at most"),
        Figure("median of the box, mirror of nine variates: standard error, Sobol over plain",
               evenness(mirror_plan(PER_REPLICATE), "residual_box", 0.5), 0.5, "at most"),
    ]  # fmt: skip
