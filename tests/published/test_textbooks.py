"""Worked examples of textbooks; V_T is 26 mV where the book says so, else k T/q."""

from __future__ import annotations

from math import exp, log

import numpy as np
import pytest

from tcopt.drift import drift_of
from tcopt.laws.numbers import VOLT_PER_KELVIN, thermal_voltage
from tcopt.solve import numerics, sensitivities
from tests.published.worked import flat_at, needed, output, slope, widlar

V_300 = float(thermal_voltage(300.0))
"""Thermal voltage at 300 K [V]."""


class TestGray:
    """Gray, Hurst, Lewis, Meyer, *Analysis and Design of Analog Integrated Circuits*, 5th ed."""

    def test_widlar_resistor(self) -> None:
        """4.4.1.1: 1 mA to 5 uA needs 137 mV, 27.4 kohm; calc: 27.55 kohm at 26 mV."""
        ohms = needed("degenerated mirror", "given", "output", 5e-6, **widlar(1e-3, 0.026))
        assert ohms == pytest.approx(27.55e3, abs=5)
        assert ohms * 5e-6 == pytest.approx(137e-3, abs=1e-3)
        ohms = needed("degenerated mirror", "given", "output", 5e-6, **widlar(1e-3, V_300))
        assert ohms == pytest.approx(27.39e3, abs=5)

    def test_widlar_sensitivity(self) -> None:
        """(4.215): 1/(1 + I R/V_T), about 0.16."""
        circuit = numerics("degenerated mirror", "given")
        quantities = {**widlar(1e-3, 0.026), "R_output": 27.4e3}
        found = sensitivities(circuit, quantities)["I_given"]
        assert found == pytest.approx(0.16, abs=0.005)

    def test_widlar_output(self) -> None:
        """4.4.1.1: 1 mA and 5 kohm, about 20 uA; calc: 20.27 uA at 26 mV."""
        found = output("degenerated mirror", "given", **widlar(1e-3, 0.026), R_output=5e3)
        assert found == pytest.approx(20.27e-6, abs=0.005e-6)

    def test_peaking_source(self) -> None:
        """4.4.1.3, (4.200): 10 uA to 100 nA, about 12 kohm."""
        ohms = needed("peaking source", "given", "drop", 1e-7, I_given=1e-5, N=1.0, V_T=0.026)
        assert ohms == pytest.approx(12e3, abs=50)

    def test_vbe_reference(self) -> None:
        """4.4.2.3: 100 uA, I_S 1e-14 A: 598 mV, 5.98 kohm; -2 mV/K, +1500: -4800 ppm/K.

        The book's (1/V_BE) dV_BE/dT - TC_R leaves out that V_BE falls further with the current
        itself; by hand, that divides the coefficient by 1 - V_T/V_BE, 4 %.
        """
        junction = {"V_T": 0.026, "log_I_S": log(1e-14)}
        ohms = needed("vbe reference", "self", "base", 1e-4, **junction)
        assert ohms == pytest.approx(5.98e3, abs=10)
        quantities = {**junction, "R_base": ohms}
        voltage = output("vbe reference", "self", **quantities) * ohms
        assert voltage == pytest.approx(598e-3, abs=1e-3)
        # V_BE = V_T (ln I - ln I_S) falls by 2 mV/K at a constant current
        law = (voltage / 300 + 2e-3) / 0.026
        moving = {"V_T": 1 / 300, "log_I_S": law, "R_base": 1500e-6}
        found = slope("vbe reference", "self", quantities, moving)
        assert found * (1 - 0.026 / voltage) * 1e6 == pytest.approx(-4800, abs=50)

    def test_thermal_voltage_reference(self) -> None:
        """4.4.2.3: 100 uA, ln 2: about 180 ohm; 3300 - 1500 = +1800 ppm/K."""
        core = {"N": 2.0, "M": 1.0, "V_T": 0.026}
        ohms = needed("ptat core", "self", "core", 1e-4, **core)
        assert ohms == pytest.approx(180, abs=0.5)
        moving = {"V_T": 1 / 300, "R_core": 1500e-6}
        found = slope("ptat core", "self", {**core, "R_core": ohms}, moving)
        assert found * 1e6 == pytest.approx(3300 - 1500, abs=50)

    def test_zero_temperature_coefficient_sum(self) -> None:
        """(4.254) to (4.256): V_G0 + V_T0 (gamma - alpha) = 1.262 V at 25 degC.

        V_G0 1.205 V; gamma 3.2 is the exponent of I_S; alpha 1: the current is PTAT.
        """
        for V_BE in (0.55, 0.65, 0.75):
            flat = flat_at(298.15, eta=3.2, V_G0=1.205, V_BE=V_BE)
            assert flat.voltage(298.15) == pytest.approx(1.262, abs=0.0005)

    def test_sum_that_is_set_too_high(self) -> None:
        """4.4.3: the same set to 1.280 V is flat at 411 K.

        The book rounds V_T (gamma - alpha) to 0.057 V, which moves the temperature by up to
        1 %. It prints 55 ppm/K for the slope at room temperature; its own formula
        V_T (gamma - alpha) ln(T_0/T)/T gives 47 ppm/K at 300 K, which is checked here.
        """
        flat = flat_at(411.0, eta=3.2, V_G0=1.205, V_BE=0.4)
        assert flat.voltage(300.0) == pytest.approx(1.280, abs=0.0005)
        by_formula = VOLT_PER_KELVIN * (3.2 - 1) * log(411 / 300) / flat.voltage(300.0)
        assert flat.slope(300.0) == pytest.approx(by_formula, rel=1e-9)
        assert flat.slope(300.0) * 1e6 == pytest.approx(47, abs=0.5)


class TestCarusone:
    """Carusone, Johns, Martin, *Analog Integrated Circuit Design*, 2nd ed."""

    def test_ptat_voltage(self) -> None:
        """Example 7.3: density ratio 10 at 300 K: 59.5 mV, 0.198 mV/K."""
        core = {"N": 10.0, "M": 1.0, "R_core": 1.0, "V_T": V_300}
        voltage = output("ptat core", "self", **core)
        assert voltage == pytest.approx(59.5e-3, abs=0.05e-3)
        rise = voltage * slope("ptat core", "self", core, {"V_T": 1 / 300})
        assert rise == pytest.approx(0.198e-3, abs=0.0005e-3)

    def test_sum(self) -> None:
        """Example 7.4: V_G0 1.206 V, m 2.3, flat at 20 degC: 1.24 V; at 0 degC 8 uV/K, 6.5 ppm."""
        flat = flat_at(293.15, eta=2.3, V_G0=1.206)
        assert flat.voltage(293.15) == pytest.approx(1.24, abs=0.005)
        assert flat.slope(273.15) * flat.voltage(273.15) == pytest.approx(8e-6, abs=0.5e-6)
        assert flat.slope(273.15) * 1e6 == pytest.approx(6.5, abs=0.2)

    def test_sum_resistor_ratio(self) -> None:
        """(7.36): 8:1, V_BE 0.65 V at 300 K: R1/R2 = 5.5.

        Both equal currents pass R1 there (memory), so it is half of the ratio that a sum of
        two separate currents needs.
        """
        flat = flat_at(300.0, eta=2.3, V_G0=1.206, V_BE=0.65)
        assert flat.N == 8
        assert flat.R_base / flat.R_core / 2 == pytest.approx(5.5, abs=0.05)


def test_widlar_exercise() -> None:
    """A textbook exercise: 3 mA, 33 kohm: 5.0 uA at 300 K, 5.7 at 350 K; calc 5.00978, 5.72309."""
    for T, microamperes in ((300.0, 5.00978), (350.0, 5.72309)):
        quantities = widlar(3e-3, float(thermal_voltage(T)))
        found = output("degenerated mirror", "given", **quantities, R_output=33e3)
        assert found * 1e6 == pytest.approx(microamperes, abs=0.5e-5)


def test_widlar_temperature_coefficient() -> None:
    """x/(1 + x) (1/T - TC_R), x = ln(I_in/I_out): 2804 ppm/K at ratio 200, 300 K, TC_R 0 (calc)."""
    quantities = widlar(1e-3, V_300)
    ohms = needed("degenerated mirror", "given", "output", 5e-6, **quantities)
    found = slope("degenerated mirror", "given", {**quantities, "R_output": ohms}, {"V_T": 1 / 300})
    assert found * 1e6 == pytest.approx(2804, abs=0.5)


def test_peak_of_the_peaking_source() -> None:
    """The largest output is I_in/e, at I_in R = V_T (calc)."""
    fixed = {"N": 1.0, "V_T": V_300}
    at_peak = output("peaking source", "given", **fixed, R_drop=V_300 / 1e-5, I_given=1e-5)
    assert at_peak == pytest.approx(1e-5 / exp(1), rel=1e-12)
    around = output(
        "peaking source", "given", **fixed, R_drop=V_300 / 1e-5, I_given=np.geomspace(1e-7, 1e-3)
    )
    assert np.all(around < at_peak)
    circuit = numerics("peaking source", "given")
    quantities = {**fixed, "R_drop": V_300 / 1e-5, "I_given": 1e-5}
    by_input = sensitivities(circuit, quantities)["I_given"]
    assert by_input == pytest.approx(0, abs=1e-12)


def test_box_method() -> None:
    """(max - min)/(nominal x span), Gray (4.260).

    Harrison, *Current Sources and Voltage References*: a worked current source with 248, 252,
    267 uA at 0, 25, 85 degC has 887 ppm/K.
    """
    through = np.polynomial.Polynomial.fit([273.15, 298.15, 358.15], [248e-6, 252e-6, 267e-6], 2)
    drift = drift_of(through, 0.0, 0.0, 273.15, 358.15, 298.15)
    assert drift.box_ppm_per_K == pytest.approx(887, abs=0.5)
    assert drift.endpoint_ppm_per_K == pytest.approx(887, abs=0.5)


@pytest.mark.parametrize(("T", "ppm_per_K"), [(315.65, 15), (300.0, 18)])
def test_curvature_left_after_linear_cancellation(T: float, ppm_per_K: float) -> None:
    """T ln T leaves 15 to 19 ppm/K over -40..125 degC, eta 4, PTAT-biased (calc).

    15 where the sum is flat in the middle of the range; more where it is flat elsewhere.
    """
    flat = flat_at(T, eta=4.0, V_G0=1.17, V_BE=0.6)
    drift = drift_of(flat.voltage, 0.0, 0.0, 233.15, 398.15, 300.15)
    assert drift.box_ppm_per_K == pytest.approx(ppm_per_K, abs=0.5)


def test_offset_of_a_core() -> None:
    """1 mV is 1.9 % of 53.8 mV, ln 8 at 300 K (calc)."""
    drop = output("ptat core", "self", N=8.0, M=1.0, R_core=1.0, V_T=V_300)
    assert drop == pytest.approx(53.8e-3, abs=0.05e-3)
    assert 1e-3 / drop == pytest.approx(0.019, abs=0.0005)
