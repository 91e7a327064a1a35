"""The same speeds for tracking over time.

``python -m pytest tests/bench --benchmark-only -o addopts=`` (the usual run skips them).
"""

from __future__ import annotations

from typing import Any

import pytest
from pytest_benchmark.fixture import BenchmarkFixture

from tcopt.solve import currents, needed_resistance, numerics, sensitivities
from tests.bench.bench_devices import real_mirror
from tests.bench.bench_solve import given_mirror, supplied_mirror

COUNT = 100_000
MIRRORS = (("given", given_mirror), ("supply", supplied_mirror))


@pytest.mark.parametrize(("feed", "quantities"), MIRRORS)
def test_currents(benchmark: BenchmarkFixture, feed: str, quantities: Any) -> None:
    circuit, drawn = numerics("degenerated mirror", feed), quantities(COUNT)
    found = benchmark(currents, circuit, drawn)
    assert (found["I_out"] > 0).all()


@pytest.mark.parametrize(("feed", "quantities"), MIRRORS)
def test_sensitivities(benchmark: BenchmarkFixture, feed: str, quantities: Any) -> None:
    circuit, drawn = numerics("degenerated mirror", feed), quantities(COUNT)
    found = benchmark(sensitivities, circuit, drawn)
    assert (found["R_output"] < 0).all()


@pytest.mark.parametrize(("feed", "quantities"), MIRRORS)
def test_needed_resistance(benchmark: BenchmarkFixture, feed: str, quantities: Any) -> None:
    circuit, drawn = numerics("degenerated mirror", feed), quantities(COUNT)
    output = currents(circuit, drawn)["I_out"]
    others = {name: value for name, value in drawn.items() if name != "R_output"}
    found = benchmark(needed_resistance, circuit, "output", output, others)
    assert (found > 0).all()


def test_real_currents(benchmark: BenchmarkFixture) -> None:
    circuit, drawn = numerics("degenerated mirror", "given", "bipolar"), real_mirror(COUNT)
    found = benchmark(currents, circuit, drawn)
    assert (found["I_out"] > 0).all()


def test_real_needed_resistance(benchmark: BenchmarkFixture) -> None:
    circuit, drawn = numerics("degenerated mirror", "given", "bipolar"), real_mirror(COUNT)
    output = currents(circuit, drawn)["I_out"]
    others = {name: value for name, value in drawn.items() if name != "R_output"}
    found = benchmark(needed_resistance, circuit, "output", output, others)
    assert (found > 0).all()
