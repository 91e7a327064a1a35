"""The laws of real transistors, and functions of one argument, against 50-digit arithmetic."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np
import pytest

from tcopt.laws import generated as laws
from tcopt.laws.numbers import VOLT_PER_KELVIN
from tcopt.laws.roots import inversion_bend, inversion_root, log_expm1
from tests.oracle import mp

TEMPERATURES = np.linspace(218.15, 448.15, 12)


def worst(found: Any, exact: list[Any]) -> float:
    """Return the largest relative error."""
    return max(
        float(abs(mp.mpf(float(a)) / b - 1)) for a, b in zip(np.ravel(found), exact, strict=True)
    )


def varshni(T: Any, T_0: float, eta: float) -> Any:
    """ln(I_S(T)/I_S(T_0)) with V_G = 1.17 - 4.73e-4 T^2/(T + 636) in V."""

    def gap_over_T(kelvin: Any) -> Any:
        return (mp.mpf(1.17) - mp.mpf(4.73e-4) * kelvin**2 / (kelvin + 636)) / kelvin

    return eta * mp.log(T / T_0) + (gap_over_T(mp.mpf(T_0)) - gap_over_T(T)) / mp.mpf(
        VOLT_PER_KELVIN
    )


LAWS: tuple[tuple[str, Callable[[Any], Any], tuple[float, ...]], ...] = (
    ("current_gain_ratio", lambda T: (T / 300) ** mp.mpf(1.7), (300.0, 1.7)),
    ("leakage_ratio", lambda T: mp.mpf(2) ** ((T - 300) / 10), (300.0,)),
    ("specific_current_ratio", lambda T: (T / 300) ** (2 - mp.mpf(1.4)), (300.0, 1.4)),
    (
        "threshold_voltage",
        lambda T: mp.mpf(0.8) - mp.mpf(1.1e-3) * (T - 300),
        (300.0, 0.8, 1.1e-3),
    ),
)
SLOPES = {
    "current_gain_ratio": lambda T: laws.current_gain_slope(T, 1.7),
    "leakage_ratio": lambda T: laws.leakage_slope(),  # noqa: ARG005
    "specific_current_ratio": lambda T: laws.specific_current_slope(T, 1.4),
    "threshold_voltage": lambda T: laws.threshold_slope(T, 300.0, 0.8, 1.1e-3),
}


@pytest.mark.parametrize(("name", "exact", "data"), LAWS)
def test_law_and_slope(name: str, exact: Callable[[Any], Any], data: tuple[float, ...]) -> None:
    for T in TEMPERATURES.tolist():
        assert worst(getattr(laws, name)(T, *data), [exact(mp.mpf(T))]) <= 1e-14
        slope = mp.diff(lambda t: mp.log(exact(t)), mp.mpf(T))
        assert worst(SLOPES[name](T), [slope]) <= 1e-13


@pytest.mark.parametrize("eta", [0.0, 3.6])
def test_saturation_current_with_a_curved_bandgap(eta: float) -> None:
    data = (290.0, eta, 1.17, 4.73e-4, 636.0, VOLT_PER_KELVIN)
    for T in TEMPERATURES.tolist():
        exact = varshni(mp.mpf(T), 290.0, eta)
        assert laws.log_saturation_growth(T, *data) == pytest.approx(float(exact), rel=1e-12)
        slope = mp.diff(lambda t: varshni(t, 290.0, eta), mp.mpf(T))
        assert laws.log_saturation_slope(T, *data) == pytest.approx(float(slope), rel=1e-12)


def test_log_expm1() -> None:
    """From far below to far above what ``exp`` takes in floats; relative where it crosses 0."""
    s = np.concatenate([np.geomspace(1e-12, 1e6, 181), np.log(2) + np.linspace(-1e-3, 1e-3, 21)])
    found = log_expm1(s)
    for x, value in zip(s.tolist(), found.tolist(), strict=True):
        exact = mp.log(mp.expm1(mp.mpf(x)))
        assert abs(value - exact) <= 4e-16 * max(1, abs(exact))


def test_inversion_root_and_bend() -> None:
    s = np.geomspace(1e-4, 1e4, 81)
    c = [mp.mpf(x) * -mp.expm1(-mp.mpf(x)) for x in s.tolist()]
    # the argument is rounded to a float: the root moves by no more than that
    assert worst(inversion_root(np.array([float(x) for x in c])), [mp.mpf(x) for x in s]) <= 1e-14
    bend = [1 + mp.mpf(x) / mp.expm1(mp.mpf(x)) for x in s.tolist()]
    assert worst(inversion_bend(s), bend) <= 1e-14


def test_gate_source_voltage_has_both_limits() -> None:
    """By hand: 2 n V_T sqrt(i) in strong inversion, n V_T ln i in weak, above the threshold."""
    n, V_T, V_TH, I_spec = 1.3, 0.0258, 0.5, 1e-7
    strong = laws.gate_source_voltage(1e6 * I_spec, 1.0, V_T, V_TH, n, I_spec)
    assert strong - V_TH == pytest.approx(2 * n * V_T * 1e3, rel=1e-12)
    weak = laws.gate_source_voltage(1e-8 * I_spec, 1.0, V_T, V_TH, n, I_spec)
    assert weak - V_TH == pytest.approx(n * V_T * np.log(1e-8), rel=1e-5)
    wide = laws.gate_source_voltage(4e-7, 4.0, V_T, V_TH, n, I_spec)
    assert wide == pytest.approx(laws.gate_source_voltage(1e-7, 1.0, V_T, V_TH, n, I_spec))
