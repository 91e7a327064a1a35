"""The laws of the parts, and the root that only this project has, against 50-digit arithmetic."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import constants

from tcopt.laws import generated as laws
from tcopt.laws.numbers import VOLT_PER_KELVIN
from tcopt.laws.roots import upper_root
from tests import junction, oracle

TEMPERATURES = np.linspace(218.15, 448.15, 24)
JUNCTION = (290.0, 3.6, 1.17)
MATERIAL = (280.0, -2.3e-3, 5e-6)


def exactly(law: Any, T: float, *data: float) -> Any:
    """A law of the oracle at the exact values of floats."""
    return law(oracle.mp.mpf(T), *(oracle.mp.mpf(value) for value in data))


def resistance_ratio(T: Any, *data: Any) -> Any:
    return oracle.resistance(T, 1, *data)


def log_saturation_growth(T: Any, *data: Any) -> Any:
    return oracle.log_saturation_current(T, 1, *data)


def slope(law: Any, T: float, *data: float) -> Any:
    return oracle.mp.diff(lambda t: law(t, *data), oracle.mp.mpf(T))


def test_constants_are_the_exact_ones_of_the_si() -> None:
    # CODATA 2018: k and e are exact since the revision of the SI in 2019
    assert oracle.mp.mpf("1.380649e-23") == oracle.BOLTZMANN
    assert oracle.mp.mpf("1.602176634e-19") == oracle.ELEMENTARY_CHARGE
    assert constants.k == float(oracle.BOLTZMANN)
    assert constants.e == float(oracle.ELEMENTARY_CHARGE)
    assert pytest.approx(float(oracle.thermal_voltage(1)), rel=1e-15) == VOLT_PER_KELVIN


@pytest.mark.parametrize("T", TEMPERATURES)
def test_laws(T: float) -> None:
    found_and_exact = (
        (laws.thermal_voltage(T, VOLT_PER_KELVIN), exactly(oracle.thermal_voltage, T)),
        (laws.resistance_ratio(T, *MATERIAL), exactly(resistance_ratio, T, *MATERIAL)),
        (laws.resistance_ratio_slope(T, *MATERIAL), slope(resistance_ratio, T, *MATERIAL)),
        (
            junction.log_saturation_growth(T, *JUNCTION),
            exactly(log_saturation_growth, T, *JUNCTION),
        ),
        (
            junction.log_saturation_slope(T, *JUNCTION),
            slope(log_saturation_growth, T, *JUNCTION),
        ),
    )
    for found, exact in found_and_exact:
        assert float(found) == pytest.approx(float(exact), rel=1e-13, abs=1e-14)


@given(
    T=st.floats(218.15, 448.15),
    T_1=st.floats(218.15, 448.15),
    TC1=st.floats(-2e-3, 5e-3),
    TC2=st.floats(0.0, 1e-5),
)
def test_moved_reference_is_the_same_resistor(T: float, T_1: float, TC1: float, TC2: float) -> None:
    about_1 = (laws.moved_tc1(T_1, 300.0, TC1, TC2), laws.moved_tc2(T_1, 300.0, TC1, TC2))
    there = laws.resistance_ratio(T_1, 300.0, TC1, TC2) * laws.resistance_ratio(T, T_1, *about_1)
    assert there == pytest.approx(float(exactly(resistance_ratio, T, 300.0, TC1, TC2)), rel=1e-12)
    back = (laws.moved_tc1(300.0, T_1, *about_1), laws.moved_tc2(300.0, T_1, *about_1))
    np.testing.assert_allclose(back, (TC1, TC2), rtol=1e-10, atol=1e-14)


def test_upper_root() -> None:
    near = 1 + np.logspace(-12, 0, 240, endpoint=False)
    # where one way to start gives way to another, and out to far more than any drop
    u = np.concatenate([near, np.linspace(3.9, 4.1, 21), np.logspace(np.log10(2), 6, 120)])
    exact = [oracle.upper_root(value) for value in u]
    found = upper_root(u)
    errors = [abs(oracle.mp.mpf(float(y)) / e - 1) for y, e in zip(found, exact, strict=True)]
    assert max(errors) <= 1e-12
    # the root's distance from 1, which is all there is of it near the branch point, is right too
    distance = [
        float(abs((oracle.mp.mpf(float(y)) - 1) / (e - 1) - 1))
        for y, e in zip(found, exact, strict=True)
    ]
    assert max(distance) <= 1e-8


def test_upper_root_at_and_below_its_end() -> None:
    np.testing.assert_array_equal(upper_root(1.0), 1.0)
    np.testing.assert_array_equal(
        upper_root([[1 - 1e-15, 0.0], [-1.0, np.nan]]), np.full((2, 2), np.nan)
    )


@pytest.mark.parametrize("T", TEMPERATURES[::4])
def test_a_bandgap_that_curves(T: float) -> None:
    """``I_S ~ T^eta exp(-V_G(T)/V_T)`` with Varshni's V_G (1967, *Physica* 34) in 50 digits."""
    T_0, eta, V_G0, a, b = 290.0, 3.6, 1.17, 0.473e-3, 636.0

    def log_current(t: Any) -> Any:
        m = oracle.mp.mpf
        gap = m(V_G0) - m(a) * t**2 / (t + m(b))
        return m(eta) * oracle.mp.log(t) - gap / oracle.thermal_voltage(t)

    data = (T_0, eta, V_G0, a, b, VOLT_PER_KELVIN)
    growth = log_current(oracle.mp.mpf(T)) - log_current(oracle.mp.mpf(T_0))
    assert laws.log_saturation_growth(T, *data) == pytest.approx(
        float(growth), rel=1e-13, abs=1e-13
    )
    by_slope = float(oracle.mp.diff(log_current, oracle.mp.mpf(T)))
    assert laws.log_saturation_slope(T, *data) == pytest.approx(by_slope, rel=1e-13)
