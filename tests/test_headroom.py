"""Lowest supply, lowest output voltage, output resistance, inversion: by hand and as published."""

from __future__ import annotations

import numpy as np
import pytest

from tcopt.headroom import headroom, inversion
from tcopt.laws import generated
from tcopt.laws.numbers import log_saturation_current, resistance_ratio
from tcopt.sweep import sweep
from tests.device_studies import T_0, operation

T = np.array([233.15, T_0, 398.15])
V_T = 1.380649e-23 * T / 1.602176634e-19
CORE = {"topology": "ptat core", "transistor": "npn", "area_ratio": 8}
MIRROR = {
    "topology": "degenerated mirror", "transistor": "npn", "input_current": "100 uA",
    "area_ratio": 1,
}  # fmt: skip
BIAS = {
    "topology": "constant transconductance bias", "transistor": "nmos", "area_ratio": 4,
}  # fmt: skip


def V_BE(design, current, area=1.0):
    npn = design.study.circuit.transistor
    return V_T * (np.log(current / area) - log_saturation_current(npn, T))


def drop(design, slot, current):
    (part,) = design.mixes[slot].parts
    return current * part.value * resistance_ratio(part.material, T)


def test_the_saturation_voltage_between_its_limits():
    """Enz, Krummenacher, Vittoz (1995): 4 V_T in weak inversion, the overdrive over n in strong."""
    assert generated.saturation_voltage(1e-12, 0.0259) == pytest.approx(4 * 0.0259, rel=1e-9)
    overdrive = 2 * 1.3 * 0.0259 * np.sqrt(1e6)  # of I = I_spec ((V_GS - V_TH)/(2 n V_T))^2
    assert generated.saturation_voltage(1e6, 0.0259) == pytest.approx(overdrive / 1.3, rel=2e-3)


def test_a_mirror_by_hand(tmp_path):
    """The output node needs I R and 0.2 V; the input V_BE + I R and what its source takes."""
    design = operation(
        tmp_path, {**MIRROR, "mirror_drop": "0.3 V"}, {"input": "1 kohm", "output": "5 kohm"}
    )
    found = headroom(design, T)
    output = design.output(T)
    np.testing.assert_allclose(found.lowest_output, drop(design, "output", output) + 0.2)
    by_hand = V_BE(design, 1e-4) + drop(design, "input", 1e-4) + 0.3
    np.testing.assert_allclose(found.branches["the input branch"], by_hand)
    assert found.complete
    assert found.supply_limit.temperature == 233.15
    assert found.supply_limit.voltage == pytest.approx(by_hand[0], rel=1e-12)


def test_a_core_by_hand(tmp_path):
    """Either branch: V_BE and a drop on top; V_T ln 8, 0.2 V and a drop on top."""
    design = operation(tmp_path, {**CORE, "mirror_drop": "0.25 V"}, {"core": "5 kohm"})
    found = headroom(design, T)
    first = V_BE(design, design.output(T)) + 0.25
    second = V_T * np.log(8) + 0.2 + 0.25
    np.testing.assert_allclose(found.branches["the branch of the first transistor"], first)
    np.testing.assert_allclose(found.branches["the branch of the second transistor"], second)
    np.testing.assert_allclose(found.lowest_supply, np.maximum(first, second))


def test_a_vbe_reference_stacks_two_junctions(tmp_path):
    """2 V_BE at equal currents; towards the cold some 2 mV/K each (common practice, no source)."""
    circuit = {"topology": "vbe reference", "transistor": "npn"}
    design = operation(tmp_path, circuit, {"base": "60 kohm"})
    found = headroom(design, T)
    assert not found.complete
    np.testing.assert_allclose(found.lowest_supply, 2 * V_BE(design, design.output(T)))
    per_kelvin = (found.lowest_supply[0] - found.lowest_supply[1]) / (T[1] - T[0]) / 2
    assert 1.7e-3 < per_kelvin < 2.3e-3


def test_a_mirror_of_transistors_on_top(tmp_path):
    """A PMOS mirror: V_GS on its diode's side, V_DSsat of the same inversion on the other."""
    circuit = {**BIAS, "mirror_ratio": 2, "mirror_transistor": "pmos"}
    design = operation(tmp_path, circuit, {"core": "5 kohm"})
    found, current = headroom(design, T), design.output(T)
    I_spec = 0.2e-6 * np.sqrt(T / T_0)
    s = np.sqrt(current / I_spec)
    V_GS = 0.6 - 1.2e-3 * (T - T_0) + 2 * 1.35 * V_T * np.log(np.expm1(s))
    across = V_T * (2 * np.sqrt(s**2 + 0.25) + 3)
    own = V_T * (2 * np.sqrt(current / 4 / (0.5e-6 * np.sqrt(T / T_0)) + 0.25) + 3)
    second = drop(design, "core", current) + own + V_GS
    np.testing.assert_allclose(found.branches["the branch of the second transistor"], second)
    s_1 = np.sqrt(2 * current / (0.5e-6 * np.sqrt(T / T_0)))
    V_1 = 0.5 - 1e-3 * (T - T_0) + 2 * 1.3 * V_T * np.log(np.expm1(s_1))
    np.testing.assert_allclose(found.branches["the branch of the first transistor"], V_1 + across)
    coefficients = inversion(design, T)
    np.testing.assert_allclose(coefficients["input"], s_1**2)
    np.testing.assert_allclose(coefficients["output"], s_1**2 / 8)


def test_the_largest_need_is_located_inside_the_range(tmp_path):
    circuit = {"topology": "gate source reference", "transistor": "nmos"}
    design = operation(tmp_path, circuit, {"gate": "60 kohm"})
    fine = np.linspace(233.15, 398.15, 200_001)
    found = headroom(design, fine)
    k = int(np.argmax(found.lowest_output))
    assert 0 < k < len(fine) - 1
    assert found.output_limit.temperature == pytest.approx(fine[k], abs=1e-3)
    assert found.output_limit.voltage == pytest.approx(found.lowest_output[k], rel=1e-12)


@pytest.mark.parametrize("resistance", ["1 mohm", "5 kohm"])
def test_the_output_resistance_of_a_mirror(resistance, tmp_path):
    """Without gain and leakage (V_A + V_CE)/I (1 + I R/V_T) + R, from the loop by hand.

    Gray et al., 5th ed., 4.2: the emitter resistor multiplies r_o by 1 + g_m R.
    """
    circuit = {**MIRROR, "effects": "early effect", "output_voltage": "2 V"}
    design = operation(tmp_path, circuit, {"output": resistance})
    current = design.output(T)
    lifted = drop(design, "output", current)
    by_hand = (60 + 2 - lifted) / current * (1 + lifted / V_T) + lifted / current
    np.testing.assert_allclose(sweep(design, T).output_resistance, by_hand, rtol=1e-9)


def test_the_output_resistance_is_a_difference_quotient(tmp_path):
    circuit = {
        **MIRROR, "effects": ["current gain", "early effect", "leakage"], "output_voltage": "2 V",
    }  # fmt: skip
    slots = {"output": "5 kohm", "input": "400 ohm"}
    low, middle, high = (
        operation(tmp_path, {**circuit, "output_voltage": volts}, slots)
        for volts in ("1.99 V", "2 V", "2.01 V")
    )
    quotient = 0.02 / (high.output(T) - low.output(T))
    np.testing.assert_allclose(sweep(middle, T).output_resistance, quotient, rtol=1e-5)


def test_what_does_not_apply_is_not_there(tmp_path):
    design = operation(tmp_path, MIRROR, {"output": "5 kohm"})
    found = sweep(design, T)
    assert found.output_resistance is None
    assert found.supply_sensitivity is None
    assert found.die_temperature is None
    assert not found.inversion
    assert not headroom(design, T).complete


def test_supply_sensitivity_of_a_widlar_source(tmp_path):
    """Gray et al., 5th ed., (4.215): d ln I_out/d ln I_in = 1/(1 + I R/V_T), times the input's.

    The input's own: V_CC/(V_CC - V_BE + V_T), from V_CC = V_BE + I_in R by hand.
    """
    circuit = {"topology": "degenerated mirror", "transistor": "npn", "supply": "5 V"}
    design = operation(tmp_path, circuit, {"feed": "43 kohm", "output": "5 kohm"})
    currents = design.currents(T)
    of_input = 5 / (5 - V_BE(design, currents["I_in"]) + V_T)
    by_hand = of_input / (1 + drop(design, "output", currents["I_out"]) / V_T)
    np.testing.assert_allclose(sweep(design, T).supply_sensitivity, by_hand, rtol=1e-9)
