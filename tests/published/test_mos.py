"""MOS transistors: worked examples and laws that texts quote, as limits of one formula."""

from __future__ import annotations

from math import exp, log, sqrt
from typing import Any

import numpy as np
import pytest
from scipy.optimize import brentq

from tcopt.laws import generated as laws
from tcopt.laws.numbers import thermal_voltage
from tcopt.solve import currents, numerics, sensitivities
from tests.published.worked import needed, output, slope

V_300 = float(thermal_voltage(300.0))
"""Thermal voltage at 300 K [V]."""
BARE: dict[str, Any] = {"inverse_V_A": 0.0, "V_out": 0.0, "I_L": 0.0}
"""Without Early effect and leakage."""


def square_law(process: float, width_over_length: float, V_T: float) -> dict[str, float]:
    """Return a device in a well of its own whose strong inversion is I = (k'/2)(W/L) V_ov^2.

    The slope factor is 1, as in the square law of the texts; I_spec = 2 n k' V_T^2 W/L.
    """
    return {"n": 1.0, "n_S": 1.0, "V_T": V_T, "I_spec": 2 * process * width_over_length * V_T**2}


def transconductance(I: Any, I_spec: Any, n: Any, V_T: Any) -> Any:
    """dI/dV_GS by hand: I = I_spec ln^2(1 + exp(v/2)), dI/dv = sqrt(I I_spec) (1 - exp(-s))."""
    s = np.sqrt(I / I_spec)
    return np.sqrt(I * I_spec) * (1 - np.exp(-s)) / (n * V_T)


class TestGrayWidlar:
    """Gray, Hurst, Lewis, Meyer, 5th ed., 4.4.1.2.

    100 uA into a MOS Widlar source with 4 kohm, k' 200 uA/V^2, W/L 25 for both: 25 uA,
    overdrives of 0.2 and 0.1 V. The book has the square law, which is the limit of strong
    inversion: so the thermal voltage is made small.
    """

    CIRCUIT = ("degenerated mirror", "given", "mos")

    def currents(self, V_T: float) -> dict[str, Any]:
        device = square_law(200e-6, 25, V_T)
        quantities = {**BARE, **device, "V_TH": 0.6, "N": 1.0, "R_input": 0.0, "R_output": 4e3}
        return currents(numerics(*self.CIRCUIT), {**quantities, "I_given": 1e-4})

    def test_output(self) -> None:
        assert self.currents(1e-4)["I_out"] == pytest.approx(25e-6, rel=1e-3)

    def test_overdrives(self) -> None:
        found = self.currents(1e-4)
        for current, overdrive in ((found["I_in"], 0.2), (found["I_out"], 0.1)):
            over = laws.gate_source_voltage(
                current, 1.0, 1e-4, 0.6, 1.0, square_law(200e-6, 25, 1e-4)["I_spec"]
            )
            assert over - 0.6 == pytest.approx(overdrive, rel=2e-3)

    def test_moderate_inversion_of_a_real_thermal_voltage(self) -> None:
        """At 300 K the inversion of the output is but 4: it gives 26.1 uA (by hand)."""
        found = float(self.currents(V_300)["I_out"])
        assert found == pytest.approx(26.1e-6, abs=0.05e-6)
        # by hand: the loop at this current, with s = sqrt(I/I_spec)
        I_spec = square_law(200e-6, 25, V_300)["I_spec"]
        s_in, s_out = sqrt(1e-4 / I_spec), sqrt(found / I_spec)
        over = 2 * V_300 * (log(exp(s_in) - 1) - log(exp(s_out) - 1))
        assert over == pytest.approx(found * 4e3, rel=1e-12)


class TestConstantTransconductance:
    """g_m = 2 (1 - sqrt(1/K))/R in strong inversion, V_T ln K / R in weak, by one formula."""

    CIRCUIT = ("constant transconductance bias", "self", "mos")

    def biased(self, inversion: float, K: float, n: float = 1.0) -> dict[str, float]:
        """Return the input transistor's current, and R, at an inversion coefficient."""
        I_spec = 1e-6
        quantities = {**BARE, "V_T": V_300, "V_TH": 0.5, "n": n, "n_S": n, "I_spec": I_spec}
        quantities |= {"N": K, "M": 1.0}
        R = needed(*self.CIRCUIT[:2], "core", inversion * I_spec, device="mos", **quantities)
        quantities["R_core"] = R
        I = float(output(*self.CIRCUIT[:2], device="mos", **quantities))
        assert pytest.approx(inversion * I_spec, rel=1e-9) == I
        return {**quantities, "I": I}

    @pytest.mark.parametrize("K", [1.5, 2.0, 4.0, 9.0, 16.0])
    def test_strong_inversion(self, K: float) -> None:
        """Carusone, Johns, Martin, 2nd ed., (7.8): g_m = 2 (1 - sqrt(1/K))/R."""
        found = self.biased(1e6, K)
        g_m = transconductance(found["I"], found["I_spec"], 1.0, V_300)
        # n_S = n = 1, as in the book, which has no body effect there
        assert g_m * found["R_core"] == pytest.approx(2 * (1 - sqrt(1 / K)), rel=1e-6)

    def test_four_times_the_width(self) -> None:
        """Carusone, Johns, Martin, 2nd ed., (7.9): 1/R at K = 4."""
        found = self.biased(1e6, 4.0)
        g_m = transconductance(found["I"], found["I_spec"], 1.0, V_300)
        assert g_m * found["R_core"] == pytest.approx(1, rel=1e-6)

    @pytest.mark.parametrize("K", [1.5, 4.0, 16.0])
    @pytest.mark.parametrize("n", [1.0, 1.4])
    def test_weak_inversion(self, K: float, n: float) -> None:
        """V_T ln K / R (Vittoz and Fellrath 1977, memory), whatever the slope factor."""
        found = self.biased(1e-6, K, n)
        assert found["I"] * found["R_core"] == pytest.approx(V_300 * log(K), rel=1e-3)

    def test_from_one_limit_to_the_other(self) -> None:
        """g_m R runs from ln K in weak inversion to 2 (1 - sqrt(1/K)) in strong (by hand)."""
        K = 4.0
        inversions = np.geomspace(1e-6, 1e3, 10)
        products = []
        for inversion in inversions:
            found = self.biased(float(inversion), K)
            g_m = transconductance(found["I"], found["I_spec"], 1.0, V_300)
            products.append(float(g_m * found["R_core"]))
        assert products[0] == pytest.approx(log(K), rel=2e-3)
        assert products[-1] == pytest.approx(2 * (1 - sqrt(1 / K)), rel=2e-3)
        assert np.all(np.diff(products) < 0)

    def test_weak_inversion_is_proportional_to_temperature(self) -> None:
        """The output then rises by 1/T, whatever the threshold does."""
        found = self.biased(1e-6, 8.0, n=1.3)
        quantities = {name: value for name, value in found.items() if name != "I"}
        moving = {"V_T": 1 / 300, "V_TH": -2e-3, "I_spec": 0.5 / 300}
        rise = slope(*self.CIRCUIT[:2], quantities, moving, device="mos")
        assert rise * 300 == pytest.approx(1, rel=1e-3)


def test_mobility() -> None:
    """Carusone, Johns, Martin, 2nd ed.: mobility as T^-1.5, -27 % at 373 K."""
    # the specific current goes as T^2 times the mobility
    ratio = laws.specific_current_ratio(373.0, 300.0, 1.5) / (373 / 300) ** 2
    assert ratio - 1 == pytest.approx(-0.27, abs=0.01)


def test_threshold_falls_linearly() -> None:
    """By hand: V_TH0 - a (T - T_0)."""
    assert laws.threshold_voltage(350.0, 300.0, 0.5, 1e-3) == pytest.approx(0.45, rel=1e-12)
    assert laws.threshold_slope(350.0, 300.0, 0.5, 1e-3) == pytest.approx(-1e-3 / 0.45, rel=1e-12)


class TestPointWithoutTemperatureCoefficient:
    """The gate voltage at which a current does not move with temperature, by hand.

    In strong inversion with mobility as T^-2, ``sqrt(I)`` is (V_GS - V_TH)/T up to a factor,
    V_TH falling by a: it stands still where V_GS = V_TH0 + a T_0 less nothing at any
    temperature, for then (V_GS - V_TH)/T = a. With another exponent m it stands still at T
    alone, at the overdrive 2 a T/m.
    """

    CIRCUIT = ("gate voltage bias", "self")
    A, V_TH0, T_0 = 1.2e-3, 0.55, 300.0

    def quantities(self, T: Any, V_ref: Any, m: float) -> dict[str, Any]:
        """Return a device that is deep in strong inversion, as I_spec is small."""
        ratio = laws.specific_current_ratio(T, self.T_0, m)
        threshold = laws.threshold_voltage(T, self.T_0, self.V_TH0, self.A)
        device = {"V_T": thermal_voltage(T) * 1e-3, "n": 1.0, "n_S": 1.0, "I_spec": 1e-10 * ratio}
        return {**BARE, **device, "V_TH": threshold, "N": 1.0, "R_source": 0.0, "V_ref": V_ref}

    def test_mobility_squared(self) -> None:
        T = np.linspace(233.15, 423.15, 9)
        V_ref = self.V_TH0 + self.A * self.T_0
        found = output(*self.CIRCUIT, device="mos", **self.quantities(T, V_ref, 2.0))
        np.testing.assert_allclose(found, found[4], rtol=1e-3)
        off = output(*self.CIRCUIT, device="mos", **self.quantities(T, V_ref + 0.1, 2.0))
        assert off[0] / off[-1] > 1.2

    @pytest.mark.parametrize("m", [1.2, 1.5, 2.5])
    def test_overdrive(self, m: float) -> None:
        circuit = numerics(*self.CIRCUIT, "mos")
        T = 320.0

        def by_temperature(V_ref: float) -> float:
            quantities = self.quantities(T, V_ref, m)
            by_quantity = sensitivities(circuit, quantities)
            moving = {
                "V_T": 1 / T,
                "V_TH": float(laws.threshold_slope(T, self.T_0, self.V_TH0, self.A)),
                "I_spec": float(laws.specific_current_slope(T, m)),
            }
            return float(sum(by_quantity[name] * value for name, value in moving.items()))

        still = brentq(by_temperature, 0.7, 2.0, xtol=1e-12)
        threshold = self.V_TH0 - self.A * (T - self.T_0)
        assert still - threshold == pytest.approx(2 * self.A * T / m, rel=2e-3)
