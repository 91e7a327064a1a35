"""The bench of spread: both sides of its ratio give the same currents."""

from __future__ import annotations

import numpy as np

from tcopt.spread.sample import normals, points
from tests.bench.bench_spread import PARTS, mirror_plan, one_by_one


def test_the_loop_gives_the_currents_that_are_drawn() -> None:
    plan = mirror_plan(PARTS)
    z = normals(points("sobol", 1, len(plan.variation.variates), 20, 0))
    np.testing.assert_allclose(one_by_one(plan, z), plan.made(z).current[0], rtol=1e-7)


def test_everything_that_may_vary_in_the_bench_does() -> None:
    names = [variate.name for variate in mirror_plan(PARTS).variation.variates]
    assert len(names) == 9
    assert {"step step", "sheet resistance of well", "mismatch of the npn pair", "supply"} <= set(
        names
    )
