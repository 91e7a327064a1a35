"""Loops that rest at zero: gain and second solutions by hand and in 30 digits."""

from __future__ import annotations

from dataclasses import replace

import mpmath
import numpy as np
import pytest

from tcopt.laws.numbers import log_saturation_current
from tcopt.start_up import start_up
from tests.device_studies import T_0, operation

CORE = {"topology": "ptat core", "transistor": "npn", "area_ratio": 8}
T = np.array([233.15, T_0, 398.15])

mp = mpmath.MPContext()
mp.dps = 30


def V_T(at):
    return mp.mpf("1.380649e-23") * mp.mpf(at) / mp.mpf("1.602176634e-19")


@pytest.mark.parametrize(
    ("circuit", "slots"),
    [
        (CORE, {"core": "5 kohm"}),
        ({**CORE, "topology": "ptat plus vbe"}, {"core": "5 kohm", "base": "60 kohm"}),
        ({**CORE, "transistor": "nmos"}, {"core": "500 kohm"}),
        (
            {**CORE, "transistor": "nmos", "topology": "constant transconductance bias"},
            {"core": "500 kohm"},
        ),
        ({**CORE, "transistor": "nmos", "well": "own"}, {"core": "500 kohm"}),
    ],
)
def test_a_core_gains_by_its_ratios_at_small_currents(circuit, slots, tmp_path):
    """No drop across the resistor: N M times, in bipolar and in weak inversion alike."""
    design = operation(tmp_path, {**circuit, "mirror_ratio": 1.5}, slots)
    found = start_up(design)
    np.testing.assert_allclose(found.gain, 12, rtol=5e-3)
    assert np.isnan(found.second_current).all()
    np.testing.assert_array_equal(found.temperature, T)


def test_current_gain_takes_from_it(tmp_path):
    """The node takes J1 (1 + 1/beta) and J2/beta of M J2: N (M - 1/beta)/(1 + 1/beta) at R = 0."""
    design = operation(tmp_path, {**CORE, "effects": "current gain"}, {"core": "5 kohm"})
    beta = 120 * (T / T_0) ** 1.5
    by_hand = 8 * (1 - 1 / beta) / (1 + 1 / beta)
    np.testing.assert_allclose(start_up(design).gain, by_hand, rtol=1e-4)


def test_the_second_solution_of_a_vbe_reference(tmp_path):
    """V_T ln(I/I_S) = I R has one just above I_S, in 30 digits; below it the drop rules."""
    circuit = {"topology": "vbe reference", "transistor": "npn"}
    design = operation(tmp_path, circuit, {"base": "60 kohm"})
    found = start_up(design)
    npn = design.study.circuit.transistor
    for k, at in enumerate(T):
        log_I_S = mp.mpf(float(log_saturation_current(npn, at)))
        d = mp.mpf(at) - mp.mpf(T_0)
        R = 60_000 * (1 + mp.mpf("1500e-6") * d + mp.mpf("0.9e-6") * d * d)
        root = mp.findroot(lambda x: V_T(at) * (x - log_I_S) - mp.exp(x) * R, log_I_S)  # noqa: B023
        assert found.second_current[k] == pytest.approx(float(mp.exp(root)), rel=1e-12)
        assert found.second_current[k] < 1e-4 * found.current[k]
        # of a current forced into the first transistor its V_BE makes another over R
        current = found.current[k] * 1e-6
        by_hand = V_T(at) * (mp.log(current) - log_I_S) / (current * R)
        assert found.gain[k] == pytest.approx(float(by_hand), rel=1e-9)


def test_the_second_solution_of_a_gate_source_reference(tmp_path):
    """I = I_spec ln^2(1 + exp((I R - V_TH)/(2 n V_T))) from below, in 30 digits."""
    circuit = {"topology": "gate source reference", "transistor": "nmos"}
    found = start_up(operation(tmp_path, circuit, {"gate": "60 kohm"}))
    for k, at in enumerate(T):
        d = mp.mpf(at) - mp.mpf(T_0)
        R = 60_000 * (1 + mp.mpf("1500e-6") * d + mp.mpf("0.9e-6") * d * d)
        I_spec = mp.mpf("0.5e-6") * mp.sqrt(mp.mpf(at) / mp.mpf(T_0))
        V_TH, current = mp.mpf("0.5") - mp.mpf("1e-3") * d, mp.mpf(0)
        for _ in range(60):
            over = (current * R - V_TH) / (2 * mp.mpf("1.3") * V_T(at))
            current = I_spec * mp.log1p(mp.exp(over)) ** 2
        assert found.second_current[k] == pytest.approx(float(current), rel=1e-11)


def test_the_least_start_up_beats_the_leakage(tmp_path):
    """1 pA at 27 degC that doubles every 10 K is 891 pA at 125 degC: 2^9.8 by hand."""
    found = start_up(operation(tmp_path, CORE, {"core": "5 kohm"}))
    np.testing.assert_allclose(found.least, 1e-12 * 2 ** ((T - T_0) / 10), rtol=1e-12)
    assert found.least[2] == pytest.approx(891e-12, rel=1e-3)


def test_a_start_up_that_stays_on_costs_what_is_said(tmp_path):
    """It acts like so much more mirror ratio: solved again with that, 0.1 % at its worst."""
    design = operation(tmp_path, {**CORE, "mirror_ratio": 2}, {"core": "5 kohm"})
    most = start_up(design).most
    before = design.output(T)
    moved = []
    for k, current in enumerate(before):
        ratio = replace(design.choices, mirror_ratio=2 + most / current)
        moved.append(replace(design, choices=ratio).output(T)[k] / current - 1)
    assert max(moved) == pytest.approx(1e-3, rel=2e-3)


def test_leakage_starts_a_hot_loop_by_itself(tmp_path):
    """More than a millionth of the current leaks through it: no so small a current is left."""
    effects = {"effects": ["leakage"]}
    found = start_up(operation(tmp_path, {**CORE, **effects}, {"core": "5 kohm"}))
    assert np.isnan(found.gain[2])
    assert np.isfinite(found.gain[0])
    assert found.gain[0] > 8


def test_a_mirror_needs_none(tmp_path):
    circuit = {"topology": "degenerated mirror", "transistor": "npn", "input_current": "1 uA"}
    assert start_up(operation(tmp_path, circuit, {"output": "5 kohm"})) is None
