"""The junction and the thermal voltage: constants, and slopes that every text quotes."""

from __future__ import annotations

import numpy as np
import pytest

from tcopt.laws.numbers import VOLT_PER_KELVIN, thermal_voltage
from tests import junction
from tests.published.worked import slope


@pytest.mark.parametrize(("T", "millivolt"), [(300.0, 25.852), (298.15, 25.693)])
def test_thermal_voltage(T: float, millivolt: float) -> None:
    """CODATA: 25.852 mV at 300 K, 25.693 mV at 25 degC (calc)."""
    assert thermal_voltage(T) * 1e3 == pytest.approx(millivolt, abs=0.0005)


def base_emitter(T: float, V_BE_300: float, current: float = 1e-4) -> float:
    """V_BE [V] of a junction that drops V_BE_300 at 300 K and a current; it stays the same."""
    log_I_S0 = np.log(current) - V_BE_300 / thermal_voltage(300.0)
    grown = junction.log_saturation_growth(T, 300.0, 3.6, 1.17)
    return float(thermal_voltage(T) * (np.log(current) - log_I_S0 - grown))


def base_emitter_slope(V_BE_300: float) -> float:
    step = 1e-3
    rise = base_emitter(300 + step, V_BE_300) - base_emitter(300 - step, V_BE_300)
    return rise / (2 * step)


def test_slope_of_the_junction() -> None:
    """-2 mV/K at hand-analysis currents (common practice, no source)."""
    assert base_emitter_slope(0.65) == pytest.approx(-2e-3, abs=0.1e-3)


def test_change_of_the_slope() -> None:
    """1/T: 3.33 uV/K per mV of V_BE at 300 K (calc; 3.9 measured, Milkovic 1967)."""
    change = base_emitter_slope(0.651) - base_emitter_slope(0.650)
    assert change == pytest.approx(3.33e-6, abs=0.005e-6)


def test_slope_law_is_the_slope_of_the_law() -> None:
    """dV_BE/dT = V_BE/T - V_T d(ln I_S)/dT at a constant current (by hand)."""
    law = junction.log_saturation_slope(300.0, 300.0, 3.6, 1.17)
    by_law = 0.65 / 300 - thermal_voltage(300.0) * law
    assert base_emitter_slope(0.65) == pytest.approx(float(by_law), rel=1e-8)
    # and as (V_BE - V_G0 - eta V_T)/T
    by_hand = (0.65 - 1.17 - 3.6 * 0.0258520) / 300
    assert base_emitter_slope(0.65) == pytest.approx(by_hand, rel=1e-6)


def test_junction_at_a_current_that_rises_with_temperature() -> None:
    """A PTAT current adds k/q to the slope of V_BE: V_T d(ln I)/dT = V_T/T (by hand)."""
    log_I_S = np.log(1e-4) - 0.65 / thermal_voltage(300.0)
    law = junction.log_saturation_slope(300.0, 300.0, 3.6, 1.17)
    # the sum's V_BE part alone: a base resistor so small that it takes nearly all current
    core = {"N": 8.0, "M": 1.0, "V_T": 0.0258520, "R_base": 1e-3, "log_I_S": log_I_S}
    quantities = {**core, "R_core": 0.0258520 * np.log(8.0) / 1e-4}
    found = slope("ptat plus vbe", "self", quantities, {"V_T": 1 / 300, "log_I_S": law})
    assert found * 0.65 == pytest.approx(base_emitter_slope(0.65) + VOLT_PER_KELVIN, rel=1e-5)
