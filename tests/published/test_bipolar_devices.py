"""Bipolar transistors as they are: gain, Early effect, leakage, curvature of the bandgap."""

from __future__ import annotations

from math import log
from typing import Any

import numpy as np
import pytest

from tcopt.drift import drift_of
from tcopt.laws import generated as laws
from tcopt.laws.numbers import VOLT_PER_KELVIN, thermal_voltage
from tcopt.solve import numerics, sensitivities
from tests.published.worked import flat_at, output

V_300 = float(thermal_voltage(300.0))
"""Thermal voltage at 300 K [V]."""
IDEAL_BUT: dict[str, Any] = {
    "inverse_beta": 0.0,
    "inverse_V_A": 0.0,
    "V_out": 0.0,
    "I_L": 0.0,
    "I_others": 0.0,
}


def plain_mirror(device: str = "bipolar", N: float = 1.0, **effects: float) -> float:
    """Return output over input of a mirror without resistors, 0.65 V at 100 uA."""
    quantities = {**IDEAL_BUT, "N": N, "R_input": 0.0, "R_output": 0.0, "V_T": V_300}
    quantities |= {"log_I_S": log(1e-4) - 0.65 / V_300, "I_given": 1e-4, **effects}
    return float(output("degenerated mirror", "given", device=device, **quantities)) / 1e-4


class TestMirror:
    """Gray, Hurst, Lewis, Meyer, 5th ed., 4.2.2 and 4.2.3 (memory), and limits by hand."""

    @pytest.mark.parametrize("beta", [10.0, 100.0, 1000.0])
    def test_base_currents(self, beta: float) -> None:
        """1/(1 + 2/beta) for equal transistors, N/(1 + (1 + N)/beta) in general."""
        found = plain_mirror(inverse_beta=1 / beta)
        assert found == pytest.approx(1 / (1 + 2 / beta), rel=1e-9)
        found = plain_mirror(N=4.0, inverse_beta=1 / beta)
        assert found == pytest.approx(4 / (1 + 5 / beta), rel=1e-9)

    @pytest.mark.parametrize("beta", [10.0, 100.0, 1000.0])
    def test_base_currents_through_a_follower(self, beta: float) -> None:
        """1/(1 + 2/(beta (beta + 1))) for equal transistors."""
        found = plain_mirror("bipolar_followed", inverse_beta=1 / beta)
        assert found == pytest.approx(1 / (1 + 2 / (beta * (beta + 1))), rel=1e-9)

    def test_early_effect(self) -> None:
        """(1 + V_CE2/V_A)/(1 + V_CE1/V_A), V_CE1 being V_BE itself."""
        found = plain_mirror(inverse_V_A=1 / 50, V_out=5.65)
        V_BE = 0.65 - V_300 * np.log(1 + 0.65 / 50)
        assert found == pytest.approx((1 + 5.65 / 50) / (1 + V_BE / 50), rel=1e-5)
        at_equal_voltages = plain_mirror(inverse_V_A=1 / 50, V_out=float(V_BE))
        assert at_equal_voltages == pytest.approx(1, abs=1e-5)

    def test_output_resistance(self) -> None:
        """By hand, r_o = (V_A + V_CE)/I_C: the logarithm of the output rises by 1/(V_A + V_CE)."""
        low, high = (plain_mirror(inverse_V_A=1 / 50, V_out=V) for V in (1.999, 2.001))
        assert (high - low) / 0.002 / low == pytest.approx(1 / 52, rel=1e-4)

    def test_leakage(self) -> None:
        """By hand: the input loses one unit's leakage, the output gains that of N units."""
        found = plain_mirror(N=4.0, I_L=1e-6)
        assert found == pytest.approx(4 * (1 - 0.01) + 4 * 0.01, rel=1e-9)
        degenerated = plain_mirror(N=1.0, I_L=1e-6, R_output=V_300 / 1e-5 * log(9.9))
        assert degenerated == pytest.approx(0.1 + 0.01, rel=1e-9)

    def test_degeneration_weakens_the_early_effect(self) -> None:
        """By hand, without the resistor's drop in V_CE: divided by 1 + I R/V_T."""
        circuit = numerics("degenerated mirror", "given", "bipolar")
        quantities = {**IDEAL_BUT, "N": 1.0, "R_input": 0.0, "I_given": 1e-4, "V_T": V_300}
        quantities |= {"log_I_S": log(1e-4) - 0.65 / V_300, "inverse_V_A": 1e-4, "V_out": 5.0}
        R = V_300 / 1e-5 * log(10)
        by_V_out = sensitivities(circuit, {**quantities, "R_output": R})["V_out"] / 5.0
        assert by_V_out == pytest.approx(1e-4 / (1 + log(10)), rel=1e-3)


def test_current_gain_rises() -> None:
    """Gray, Hurst, Lewis, Meyer, 5th ed., ch. 1: +7000 ppm/K.

    That is an exponent of 2.1 at 300 K: chi/T (by hand).
    """
    assert laws.current_gain_slope(300.0, 2.1) == pytest.approx(7000e-6, rel=1e-12)
    grown = laws.current_gain_ratio(310.0, 300.0, 2.1)
    assert grown - 1 == pytest.approx(0.07, abs=0.002)


def test_leakage_grows() -> None:
    """It doubles every 10 K, so it grows 5800 times from 25 to 150 degC (calc)."""
    assert laws.leakage_ratio(423.15, 298.15) == pytest.approx(5800, rel=2e-3)
    assert laws.leakage_slope() * 10 == pytest.approx(log(2), rel=1e-12)


class TestVarshni:
    """V_G(T) = 1.17 V - 4.73e-4 T^2/(T + 636), Varshni 1967 (figures: memory)."""

    @staticmethod
    def bandgap(T: float) -> float:
        """The bandgap voltage out of I_S: V_G - T dV_G/dT is k/q T^2 d(ln I_S)/dT without eta."""
        slope = laws.log_saturation_slope(T, 300.0, 0.0, 1.17, 4.73e-4, 636.0, VOLT_PER_KELVIN)
        return float(VOLT_PER_KELVIN * T**2 * slope)

    def test_extrapolated_from_room_temperature(self) -> None:
        """V_G - T dV_G/dT at 300 K, where the tangent meets 0 K: 1.2009 V (by hand)."""
        T, a, b = 300.0, 4.73e-4, 636.0
        by_hand = 1.17 - a * T**2 / (T + b) + T * a * (T**2 + 2 * b * T) / (T + b) ** 2
        assert self.bandgap(T) == pytest.approx(by_hand, rel=1e-12)
        assert by_hand == pytest.approx(1.2009, abs=1e-4)

    def test_growth_of_the_saturation_current(self) -> None:
        """By hand: ln of the ratio is (V_G(T_0)/T_0 - V_G(T)/T) q/k for eta 0."""

        def gap(T: float) -> float:
            return 1.17 - 4.73e-4 * T**2 / (T + 636)

        found = laws.log_saturation_growth(350.0, 300.0, 0.0, 1.17, 4.73e-4, 636.0, VOLT_PER_KELVIN)
        by_hand = (gap(300.0) / 300 - gap(350.0) / 350) / VOLT_PER_KELVIN
        assert found == pytest.approx(by_hand, rel=1e-12)
        assert gap(300.0) == pytest.approx(1.1245, abs=1e-4)

    def test_without_curvature_it_is_a_constant(self) -> None:
        found = laws.log_saturation_growth(350.0, 300.0, 3.0, 1.2, 0.0, 636.0, VOLT_PER_KELVIN)
        by_hand = 3 * log(350 / 300) + 1.2 / VOLT_PER_KELVIN * (1 / 300 - 1 / 350)
        assert found == pytest.approx(by_hand, rel=1e-12)


@pytest.mark.parametrize("inverse_beta", [0.0, 0.01])
def test_supply_sensitivity(inverse_beta: float) -> None:
    """1/(1 + I R/V_T), Gray (4.215): base currents do not change it, but through their ratio."""
    circuit = numerics("degenerated mirror", "given", "bipolar")
    quantities = {**IDEAL_BUT, "N": 1.0, "R_input": 0.0, "R_output": 27.4e3, "I_given": 1e-3}
    quantities |= {"V_T": 0.026, "log_I_S": log(1e-15), "inverse_beta": inverse_beta}
    found = sensitivities(circuit, quantities)["I_given"]
    I_out = float(output("degenerated mirror", "given", device="bipolar", **quantities))
    by_hand = 1 / (1 + I_out * (1 + inverse_beta) * 27.4e3 / 0.026)
    assert found == pytest.approx(by_hand, rel=1e-4)
    assert found == pytest.approx(0.16, abs=0.005)


@pytest.mark.parametrize("T", [300.0, 315.65, 330.0])
def test_curvature_left_after_linear_cancellation(T: float) -> None:
    """T ln T leaves 15 to 19 ppm/K over -40..125 degC, eta 4, PTAT-biased (calc).

    15 where the sum is flat in the middle of the range. With real transistors that have no
    effect it is the same as with ideal ones.
    """
    flat = flat_at(T, eta=4.0, V_G0=1.17, V_BE=0.6)

    def box(device: str, **effects: float) -> float:
        def voltage(kelvin: Any) -> Any:
            quantities = {**flat.quantities(kelvin), **effects}
            return output("ptat plus vbe", "self", device=device, **quantities) * flat.R_base

        return drift_of(voltage, 0.0, 0.0, 233.15, 398.15, 300.15).box_ppm_per_K

    none = {"inverse_V_A": 0.0, "V_out": 0.0, "I_L": 0.0}
    real = box("bipolar", inverse_beta=0.0, **none)
    assert real == pytest.approx(box("ideal"), rel=1e-6)
    if T == 315.65:
        assert real == pytest.approx(15, abs=0.5)
