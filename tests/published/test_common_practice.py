"""Figures that the trade passes on by word of mouth: common practice, no source."""

from __future__ import annotations

from math import log

import numpy as np
import pytest

from tests.published.worked import needed, output, slope, widlar


def test_widlar_by_hand_iteration() -> None:
    """1.72 mA, 1 kohm, V_T 26 mV: 79.8 uA; a guess of 100 mV walks 73.9, 81.8 ... towards it."""
    found = output("degenerated mirror", "given", **widlar(1.72e-3, 0.026), R_output=1e3)
    assert found == pytest.approx(79.8e-6, abs=0.05e-6)
    walk = [100e-3 / 1e3]
    for _ in range(30):
        walk.append(0.026 * log(1.72e-3 / walk[-1]) / 1e3)
    assert walk[1] == pytest.approx(73.9e-6, abs=0.1e-6)
    assert walk[2] == pytest.approx(81.8e-6, abs=0.1e-6)
    assert walk[-1] == pytest.approx(float(found), rel=1e-12)


def test_widlar_with_5_kohm() -> None:
    """733 uA with 5 kohm gives 19 uA."""
    found = output("degenerated mirror", "given", **widlar(733e-6, 0.026), R_output=5e3)
    assert found == pytest.approx(19e-6, abs=0.1e-6)


SEVEN_TENTHS = log(1e-3) - 0.7 / 0.025
"""ln I_S of a junction that drops 0.7 V at 1 mA, V_T 25 mV."""


def test_junction_at_a_hundredth_of_the_current() -> None:
    """A junction of 0.7 V at 1 mA shows 0.58 V at 10 uA (25 mV)."""
    ohms = needed("vbe reference", "self", "base", 1e-5, V_T=0.025, log_I_S=SEVEN_TENTHS)
    assert ohms * 1e-5 == pytest.approx(0.58, abs=0.005)


def test_plain_mirror_against_widlar_source() -> None:
    """10 uA from 10 V: a plain mirror needs 942 kohm, a Widlar source 9.3 and 11.5 kohm."""
    supply = {"V_CC": 10.0, "N": 1.0, "R_input": 0.0, "V_T": 0.025, "log_I_S": SEVEN_TENTHS}
    plain = needed("degenerated mirror", "supply", "feed", 1e-5, **supply, R_output=0.0)
    assert plain == pytest.approx(942e3, abs=1e3)
    at_1_mA = needed("degenerated mirror", "supply", "feed", 1e-3, **supply, R_output=0.0)
    assert at_1_mA == pytest.approx(9.3e3, abs=1)
    degenerated = needed("degenerated mirror", "supply", "output", 1e-5, **supply, R_feed=at_1_mA)
    assert degenerated == pytest.approx(11.5e3, abs=20)


def test_output_goes_with_the_logarithm_of_the_supply() -> None:
    """With the input far above the output, doubling the supply adds the same step each time."""
    supply = {"N": 1.0, "R_input": 0.0, "V_T": 0.025, "log_I_S": SEVEN_TENTHS}
    V_CC = 10.0 * 2.0 ** np.arange(8)
    found = output(
        "degenerated mirror", "supply", **supply, V_CC=V_CC, R_feed=9.3e3, R_output=115e3
    )
    steps = np.diff(found)
    # V_T ln 2/R, less what the output itself takes back: 1/(1 + V_T/(I_out R))
    taken_back = 1 + 0.025 / (found[1:] * 115e3)
    expected = 0.025 * log(2) / 115e3 / taken_back
    np.testing.assert_allclose(steps[2:], expected[2:], rtol=0.02)
    # 128 times the supply, less than twice the output
    assert found[-1] / found[0] < 2


def test_input_of_fifty_times_the_output() -> None:
    """At 50 times, resistors without TC leave an output that rises with temperature.

    A material above 1/T over-compensates it, one below falls short, one at 1/T holds it.
    """
    quantities = widlar(500e-6, 0.025852)
    ohms = needed("degenerated mirror", "given", "output", 10e-6, **quantities)
    quantities["R_output"] = ohms

    def drift(tc: float) -> float:
        moving = {"V_T": 1 / 300, "R_output": tc}
        return float(slope("degenerated mirror", "given", quantities, moving)) * 1e6

    x = log(50)
    assert drift(0.0) == pytest.approx(1e6 * x / (1 + x) / 300, rel=1e-9)
    assert drift(0.0) > 2500
    assert drift(3000e-6) > 100
    assert drift(1 / 300) == pytest.approx(0, abs=1e-6)
    assert drift(3930e-6) < -100
