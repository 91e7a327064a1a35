"""Figures of drift: extremes against 30-digit ones, the box by hand, and curves to refuse."""

from __future__ import annotations

import re
from collections.abc import Callable
from typing import Any

import mpmath
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tcopt.arrays import Array
from tcopt.assess import assess
from tcopt.drift import drift_of, extreme_points
from tcopt.errors import NoSolutionError
from tcopt.operation import Choices, Mix, Operation
from tcopt.study import Part
from tests.mixes import any_study
from tests.small import T_REF, material

LOW, HIGH = 233.15, 423.15
FUNCTIONS: dict[str, Callable[[Any, Any], Any]] = {
    "bell": lambda m, T: 1 + 0.02 * m.exp(-(((T - 311) / 40) ** 2)),
    "wave that dies": lambda m, T: 1 + m.sin((T - 250) / 9) * m.exp(-(T - 233) / 60) / 50,
    "pole nearby": lambda m, T: 1 / (1 + ((T - 300) / 12) ** 2) + m.exp(T / 400),
    "curvature of a junction": lambda m, T: 1 - 1e-3 * (T / 300) * m.log(T / 300),
    "ripple of a part in 1e9": lambda m, T: 1 + 1e-9 * m.cos(T / 11),
    "flat top": lambda m, T: m.exp(-(((T - 320) / 100) ** 4)),
    "many waves": lambda m, T: 3 + m.sin(T / 2),
    "inflection without an extreme": lambda m, T: m.exp(((T - 320) / 100) ** 3),
}


def halved(f: Callable[[Any], Any], a: Any, b: Any) -> Any:
    """Return where the slope changes its sign, by halving, which no flatness can mislead."""
    rises = mpmath.diff(f, a) > 0
    for _ in range(60):
        middle = (a + b) / 2
        a, b = (middle, b) if (mpmath.diff(f, middle) > 0) == rises else (a, middle)
    return (a + b) / 2


def exact_extremes(function: Callable[[Any, Any], Any]) -> tuple[Any, Any]:
    """Return the least and the largest value in 30 digits, from roots of the derivative."""
    with mpmath.workdps(30):

        def f(T: Any) -> Any:
            return function(mpmath, T)

        grid = [mpmath.mpf(LOW) + (HIGH - mpmath.mpf(LOW)) * k / 1500 for k in range(1501)]
        slopes = [mpmath.diff(f, T) for T in grid]
        places = [grid[0], grid[-1]]
        for a, b, before, after in zip(grid, grid[1:], slopes, slopes[1:], strict=False):
            if before * after <= 0:
                places.append(halved(f, a, b))
        values = [f(T) for T in places]
        return min(values), max(values)


def numeric(function: Callable[[Any, Any], Any]) -> Callable[[Array], Array]:
    return lambda T: np.asarray(function(np, T))


@pytest.mark.parametrize("name", FUNCTIONS)
def test_extremes_are_those_of_a_30_digit_search(name: str) -> None:
    function = numeric(FUNCTIONS[name])
    least, largest = (float(value) for value in exact_extremes(FUNCTIONS[name]))
    values = function(extreme_points(function, LOW, HIGH))
    assert values.min() == pytest.approx(least, rel=1e-14, abs=1e-15)
    assert values.max() == pytest.approx(largest, rel=1e-14, abs=1e-15)
    box = drift_of(function, 0.0, 0.0, LOW, HIGH, T_REF).box_ppm_per_K
    at_reference = float(function(np.array([T_REF]))[0])
    expected = (largest - least) / at_reference / (HIGH - LOW) * 1e6
    assert box == pytest.approx(expected, rel=1e-6)


@pytest.mark.parametrize("name", FUNCTIONS)
def test_no_sampling_finds_more_and_fine_sampling_comes_near(name: str) -> None:
    function = numeric(FUNCTIONS[name])
    values = function(extreme_points(function, LOW, HIGH))
    spread = np.ptp(values)
    seen = []
    for count in (50, 500, 50_000):
        sampled = function(np.linspace(LOW, HIGH, count))
        assert sampled.max() <= values.max() + 1e-15
        assert sampled.min() >= values.min() - 1e-15
        seen.append(np.ptp(sampled))
    assert seen[-1] == pytest.approx(spread, rel=1e-6)


def test_points_at_which_a_wave_hides_are_not_trusted() -> None:
    """T_34 is the same at all 17 Chebyshev points of degree 16, where it looks constant."""
    middle, half = (LOW + HIGH) / 2, (HIGH - LOW) / 2

    def wave(T: Array) -> Array:
        return np.asarray(1 + 0.1 * np.cos(34 * np.arccos(np.clip((T - middle) / half, -1, 1))))

    values = wave(extreme_points(wave, LOW, HIGH))
    assert (values.min(), values.max()) == (pytest.approx(0.9), pytest.approx(1.1))
    assert len(values) >= 35


@settings(max_examples=40, derandomize=True, deadline=None)
@given(st.lists(st.floats(-1, 1), min_size=1, max_size=12), st.floats(0.3, 3))
def test_box_holds_all_of_a_polynomial_and_touches_it(rest: list[float], level: float) -> None:
    proxy = np.polynomial.Chebyshev([level, *(0.1 * c for c in rest)], domain=[LOW, HIGH])
    found = drift_of(proxy, 0.0, 0.0, LOW, HIGH, T_REF)
    sampled = proxy(np.linspace(LOW, HIGH, 2001))
    room = 1e-13 * (1 + level)
    assert found.lowest.value <= sampled.min() + room
    assert found.highest.value >= sampled.max() - room
    # the grid misses an extreme by no more than its curvature over half a step
    bend = np.abs(proxy.deriv(2)(np.linspace(LOW, HIGH, 2001))).max() if len(rest) > 1 else 0.0
    missed = 1.1 * bend * ((HIGH - LOW) / 2000) ** 2 / 8 + room
    assert found.highest.value - sampled.max() <= missed
    assert sampled.min() - found.lowest.value <= missed
    for extreme in (found.lowest, found.highest):
        assert float(proxy(extreme.temperature)) == pytest.approx(extreme.value, rel=1e-12)


def test_box_of_a_worked_current_source() -> None:
    """248, 252 and 267 uA at 0, 25 and 85 degC: 887 ppm/K.

    Harrison, *Current Sources and Voltage References*.
    """
    T = np.array([273.15, 298.15, 358.15])
    measured = np.array([248e-6, 252e-6, 267e-6])
    found = drift_of(
        lambda t: np.interp(t, T, measured), 0.0, 0.0, T[0], T[-1], 298.15, tuple(T.tolist())
    )
    assert round(found.box_ppm_per_K) == 887
    assert found.endpoint_ppm_per_K == pytest.approx(found.box_ppm_per_K)
    assert (found.lowest.temperature, found.highest.temperature) == (273.15, 358.15)


def test_box_by_hand() -> None:
    """(max - min)/(nominal x span), Gray, Hurst, Lewis and Meyer, 5th ed., (4.260).

    ``1 - d^2`` about the middle: the top in the middle, both ends equal.
    """
    middle, half = (LOW + HIGH) / 2, (HIGH - LOW) / 2
    found = drift_of(lambda T: 1 - 0.01 * ((T - middle) / half) ** 2, 0.0, 0.0, LOW, HIGH, middle)
    assert found.box_ppm_per_K == pytest.approx(0.01 / (HIGH - LOW) * 1e6)
    assert found.endpoint_ppm_per_K == pytest.approx(0, abs=1e-9)
    assert found.highest.temperature == pytest.approx(middle)
    falling = drift_of(lambda T: 2 - T / 400, 0.0, 0.0, LOW, HIGH, middle)
    assert falling.endpoint_ppm_per_K == pytest.approx(-falling.box_ppm_per_K)
    assert falling.box_ppm_per_K == pytest.approx(1e6 / 400 / (2 - middle / 400))


def test_a_kink_is_found_where_it_is_told_and_refused_where_not() -> None:
    def roof(T: Array) -> Array:
        return np.asarray(1 - 1e-4 * np.abs(T - 301.7))

    values = roof(extreme_points(roof, LOW, HIGH, (301.7,)))
    assert values.max() == 1.0
    message = (
        "between 233.15 K and 423.15 K the curve is too rough for its extremes to be located; "
        "accepted: curves that are smooth between their points"
    )
    with pytest.raises(NoSolutionError, match=re.escape(message)):
        extreme_points(roof, LOW, HIGH)


def test_knots_outside_the_range_do_not_matter() -> None:
    def line(T: Array) -> Array:
        return np.asarray(T / 300)

    np.testing.assert_array_equal(extreme_points(line, LOW, HIGH, (100.0, LOW, 500.0)), [LOW, HIGH])


def test_a_curve_that_is_not_there_is_refused() -> None:
    with pytest.raises(NoSolutionError, match="too rough for its extremes to be located"):
        extreme_points(lambda T: np.full_like(T, np.nan), LOW, HIGH)


@pytest.mark.parametrize("noise", [0.0, 1e-16, 1e-14, 1e-12, 3e-11])
def test_noise_of_a_solution_is_no_shape(noise: float) -> None:
    rng = np.random.default_rng(4)

    def nearly_constant(T: Array) -> Array:
        return np.asarray(1 + noise * rng.uniform(-1, 1, T.shape))

    found = drift_of(nearly_constant, 0.0, 0.0, LOW, HIGH, T_REF)
    assert abs(found.box_ppm_per_K) <= 2 * noise * 1e6 / (HIGH - LOW) * 1.001


def test_noise_does_not_hide_a_shape() -> None:
    rng = np.random.default_rng(4)

    def bump(T: Array) -> Array:
        shape = 1 + 1e-6 * np.exp(-(((T - 311) / 30) ** 2))
        return np.asarray(shape + 1e-13 * rng.uniform(-1, 1, T.shape))

    found = drift_of(bump, 0.0, 0.0, LOW, HIGH, T_REF)
    assert found.highest.temperature == pytest.approx(311, abs=0.5)
    assert found.highest.value - 1 == pytest.approx(1e-6, rel=1e-4)


def test_a_ptat_current_has_nothing_left_over_a_ptat_target() -> None:
    """A core with a resistor without drift: what is left is rounding, and that is no failure."""
    study = any_study(
        {"topology": "ptat core", "area_ratio": (8.0,)},
        {"shape": "ptat"},
        {"core": {"materials": (material("m", 0.0),), "pieces": 1}},
    )
    operation = Operation(study, Choices(area_ratio=8.0))
    need = float(operation.needed("core", np.array([1e-5]), np.array([T_REF]))[0])
    part = Part(material=material("m", 0.0), value=need)
    found = assess(Operation(study, Choices(area_ratio=8.0), {"core": Mix((part,))}))
    left = found.residual_drift
    assert max(left.deviation_ppm, left.box_ppm_per_K, abs(left.slope_ppm_per_K)) < 1e-8
    assert found.drift.box_ppm_per_K == pytest.approx(1e6 / T_REF, rel=1e-12)
    assert found.drift.slope_ppm_per_K == pytest.approx(1e6 / T_REF, rel=1e-12)
