"""The benches' own arithmetic, and that both sides of a ratio do the same work."""

from __future__ import annotations

import numpy as np
import pytest

from tcopt.solve import currents, numerics
from tests.bench.bench_devices import nested_root_finder, real_mirror
from tests.bench.bench_solve import (
    given_mirror,
    supplied_by_root_finder,
    supplied_mirror,
    wright_omega,
)
from tests.bench.figure import Figure, table
from tests.bench.ratio import time_beside


def test_root_finder_solves_the_same_loops() -> None:
    mirror = supplied_mirror(500)
    found = currents(numerics("degenerated mirror", "supply"), mirror)
    I_in, I_out = supplied_by_root_finder(mirror)
    np.testing.assert_allclose(found["I_in"], I_in, rtol=1e-8)
    np.testing.assert_allclose(found["I_out"], I_out, rtol=1e-8)


def test_nested_root_finder_solves_the_same_loops() -> None:
    mirror = real_mirror(200)
    found = currents(numerics("degenerated mirror", "given", "bipolar"), mirror)
    I_in, I_out = nested_root_finder(mirror)
    np.testing.assert_allclose(found["I_in"], I_in, rtol=1e-8)
    np.testing.assert_allclose(found["I_out"], I_out, rtol=1e-8)


def test_omega_is_asked_at_the_drops_of_the_same_mirrors() -> None:
    from scipy.special import wrightomega

    mirror = given_mirror(500)
    found = currents(numerics("degenerated mirror", "given"), mirror)["I_out"]
    drop = found * mirror["R_output"] / mirror["V_T"]
    np.testing.assert_allclose(drop, wrightomega(wright_omega(mirror)), rtol=1e-12)


def test_ratio_is_first_over_second() -> None:
    now = 0.0
    long, short = iter((9.0, 3.0, 2.0, 4.0)), iter((9.0, 0.5, 0.75, 0.6))

    def wait(seconds: float) -> None:
        nonlocal now
        now += seconds

    times = time_beside(
        lambda: wait(next(long)), lambda: wait(next(short)), rounds=3, clock=lambda: now
    )
    assert (times.first, times.second) == (2.0, 0.5)
    assert times.ratio == pytest.approx(4)
    calls: list[str] = []
    time_beside(lambda: calls.append("a"), lambda: calls.append("b"), rounds=3, second_rounds=1)
    assert calls == ["a", "a", "b", "a", "a"]


def test_table_says_what_is_not_met() -> None:
    figures = [Figure("slow", 3.0, 2.5, "at most"), Figure("small", 499.0, 500, "at most", "MB")]
    figures.append(Figure("fast", 9.99, 10, "at least"))
    assert [f.met for f in figures] == [False, True, False]
    assert table(figures).splitlines() == [
        "figure  measured  required        met",
        "slow    3         at most 2.5     NO",
        "small   499 MB    at most 500 MB  yes",
        "fast    9.99      at least 10     NO",
    ]
