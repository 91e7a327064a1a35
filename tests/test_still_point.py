"""The gate voltage at which a MOS current stands still: limiting cases and 30 digits."""

from __future__ import annotations

import mpmath
import numpy as np
import pytest

from tcopt.still_point import still_point
from tests.device_studies import MENU, T_0, operation
from tests.gate import STUDY, changed, write

BIAS = {
    "topology": "gate voltage bias", "transistor": "nmos", "reference_voltage": "0.8 V",
    "area_ratio": 3,
}  # fmt: skip


def with_nmos(folder, **data):
    from tcopt.check import finished_operation
    from tcopt.study import load_study

    menu = changed(MENU, {f"transistors.nmos.{key}": value for key, value in data.items()})
    target = {"shape": "flat", "current": "10 uA"}
    table = changed(STUDY, {"circuit": BIAS, "target": target, "resistors": {}})
    return finished_operation(load_study(write(folder, menu, table)))


def test_in_strong_inversion_the_overdrive_is_two_a_T_over_m(tmp_path):
    """Square law by hand: mu (V_G - V_TH)^2 stands still where V_G - V_TH = 2 a T/m."""
    found = still_point(with_nmos(tmp_path, threshold_slope="4 mV/K"))
    assert found.gate_voltage - 0.5 == pytest.approx(2 * 4e-3 * T_0 / 1.5, rel=2e-3)
    assert found.inversion_coefficient > 100


def test_with_mobility_like_one_over_T_squared_it_stands_still_everywhere(tmp_path):
    """T^-2 (a T)^2 is a constant, whatever the range (square law by hand)."""
    found = still_point(with_nmos(tmp_path, threshold_slope="4 mV/K", mobility_exponent=2))
    assert found.box_ppm_per_K < 1
    other = still_point(with_nmos(tmp_path, threshold_slope="4 mV/K", mobility_exponent=1.5))
    assert other.box_ppm_per_K > 20


def test_the_slope_is_zero_in_thirty_digits(tmp_path):
    """d ln I/dT of I = 3 I_spec ln^2(1 + exp((V_G - V_TH)/(2 n V_T))) by mpmath."""
    found = still_point(operation(tmp_path, BIAS, {}))
    mp = mpmath.MPContext()
    mp.dps = 30

    def log_current(T):
        V_T = mp.mpf("1.380649e-23") * T / mp.mpf("1.602176634e-19")
        V_TH = mp.mpf("0.5") - mp.mpf("1e-3") * (T - mp.mpf(T_0))
        I_spec = 3 * mp.mpf("0.5e-6") * mp.sqrt(T / mp.mpf(T_0))
        over = (mp.mpf(found.gate_voltage) - V_TH) / (2 * mp.mpf("1.3") * V_T)
        return mp.log(I_spec * mp.log1p(mp.exp(over)) ** 2)

    assert abs(float(mp.diff(log_current, mp.mpf(T_0)))) < 1e-15
    assert found.current == pytest.approx(float(mp.exp(log_current(mp.mpf(T_0)))), rel=1e-12)
    assert found.inversion_coefficient == pytest.approx(found.current / 1.5e-6, rel=1e-12)
    T = np.linspace(233.15, 398.15, 2001)
    current = np.array([float(mp.exp(log_current(mp.mpf(t)))) for t in T[::20]])
    box = 1e6 * np.ptp(current) / found.current / 165
    assert found.box_ppm_per_K == pytest.approx(box, rel=1e-3)


def test_resistor_and_effects_count(tmp_path):
    """At the point that it names, the budget's total is nothing."""
    effects = {"effects": ["early effect", "leakage"], "output_voltage": "3 V"}
    found = still_point(operation(tmp_path, {**BIAS, **effects}, {"source": "2 kohm"}))
    again = operation(
        tmp_path,
        {**BIAS, **effects, "reference_voltage": found.gate_voltage},
        {"source": "2 kohm"},
    )
    total = sum(share[0] for share in again.causes(T_0).values())
    assert abs(total) < 1e-14
    assert again.output(np.array([T_0]))[0] == pytest.approx(found.current, rel=1e-12)


def test_none_where_mobility_does_not_fall(tmp_path):
    assert still_point(with_nmos(tmp_path, mobility_exponent=-1)) is None


def test_none_for_another_circuit(tmp_path):
    core = {"topology": "ptat core", "transistor": "npn", "area_ratio": 8}
    assert still_point(operation(tmp_path, core, {"core": "5 kohm"})) is None


def test_what_is_known_stays_where_heat_takes_the_rest(tmp_path):
    """The voltage at a cold die is known whatever the heat; the study's own 0.2 V hardly heats."""
    cold = still_point(operation(tmp_path, BIAS, {}))
    biased = {**BIAS, "reference_voltage": "0.2 V", "output_voltage": "10 V"}
    hot = still_point(operation(tmp_path, biased, {}, range__thermal_resistance=1e7))
    assert hot.gate_voltage == pytest.approx(cold.gate_voltage, rel=1e-12)
    assert (hot.current, hot.inversion_coefficient, hot.box_ppm_per_K) == (None, None, None)
    assert hot.why_not.startswith("range.thermal_resistance: found 1e+07 K/W, with which the die")


def test_no_box_where_heat_takes_an_end_of_the_range(tmp_path):
    """A reference that rises as the square of temperature, 3.9 times at 125 degC."""
    biased = {**BIAS, "reference_voltage": "0.2 V", "output_voltage": "10 V"}
    rising = {**biased, "reference_tc2": 3e-4}
    found = still_point(operation(tmp_path, rising, {}, range__thermal_resistance=1e3))
    assert found.current == pytest.approx(53.28e-6, rel=1e-3)
    assert found.box_ppm_per_K is None
    assert found.why_not.startswith("range.thermal_resistance: found 1000 K/W, with which the")


@pytest.mark.parametrize(
    ("heat", "sentence"),
    [
        (1e7, "would stand still at T_ref, but there is none: range.thermal_resistance: found"),
        (1e3, "stands still at T_ref; it does not exist all over the range: range.thermal"),
    ],
)
def test_the_report_says_why(heat, sentence, tmp_path):
    from tcopt.show.tables.devices import still_sentence

    biased = {**BIAS, "reference_voltage": "0.2 V", "output_voltage": "10 V"}
    rising = {**biased, "reference_tc2": 3e-4}
    found = still_point(operation(tmp_path, rising, {}, range__thermal_resistance=heat))
    assert sentence in still_sentence(found)
