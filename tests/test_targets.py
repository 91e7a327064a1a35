"""Targets in terms of what the current is for, against limiting cases and 30-digit solutions."""

from __future__ import annotations

import re
from pathlib import Path
from typing import Any

import mpmath
import numpy as np
import pytest

from tcopt.errors import InputError
from tcopt.study import load_study, study_text
from tcopt.targets import TargetCurrent, target_current
from tests.gate import PROCESS, STUDY, changed, write

NMOS = {
    "kind": "mos", "threshold_voltage": "0.5 V", "threshold_slope": "1 mV/K",
    "slope_factor": 1.3, "specific_current": "0.5 uA", "mobility_exponent": 1.5,
}  # fmt: skip
MENU = changed(PROCESS, {"transistors.nmos": NMOS})
MOS = {"shape": "mos transconductance", "transistor": "nmos", "inversion_coefficient": 1}
T_0 = 300.15


def loaded(folder: Path, target: dict[str, Any]) -> TargetCurrent:
    study = load_study(write(folder, MENU, changed(STUDY, {"target": target})))
    assert load_again(study, folder) == study
    made = target_current(study.target, study.range.reference)
    at_reference = float(made.current(np.array([T_0]))[0])
    assert study.target_current == pytest.approx(at_reference, rel=1e-15)
    return made


def load_again(study: Any, folder: Path) -> Any:
    again = folder / "again.toml"
    again.write_text(study_text(study, folder), encoding="utf-8")
    return load_study(again)


def slope_by_differences(made: TargetCurrent, T: Any) -> Any:
    h = 1e-3
    return np.log(made.current(T + h) / made.current(T - h)) / (2 * h)


def test_a_bipolar_pair_keeps_its_transconductance_with_a_ptat_current(tmp_path):
    """g_m = I/V_T: common practice, no source. V_T at 300.15 K from CODATA: 25.8649 mV."""
    made = loaded(tmp_path, {"shape": "bipolar transconductance", "transconductance": "400 uS"})
    T = np.array([233.15, T_0, 423.15])
    np.testing.assert_allclose(made.current(T) / (1.380649e-23 * T / 1.602176634e-19), 4e-4)
    assert made.current(np.array([T_0]))[0] == pytest.approx(400e-6 * 25.8649e-3, rel=1e-5)
    np.testing.assert_allclose(made.log_slope(T), 1 / T)
    by_current = loaded(tmp_path, {"shape": "bipolar transconductance", "current": "10 uA"})
    np.testing.assert_allclose(by_current.current(T), 10e-6 * T / T_0)


@pytest.mark.parametrize(("inversion", "power"), [(1e-6, 1.0), (9e5, 1.5)])
def test_weak_inversion_asks_for_ptat_and_strong_for_one_over_mobility(inversion, power, tmp_path):
    """By hand: weak, g_m = I/(n V_T); strong, g_m = sqrt(2 mu C_ox (W/L) I/n), mu ~ T^-1.5."""
    made = loaded(tmp_path, {**MOS, "inversion_coefficient": inversion, "current": "1 uA"})
    T = np.array([233.15, 260.0, T_0, 350.0, 423.15])
    np.testing.assert_allclose(made.current(T) / (1e-6 * (T / T_0) ** power), 1, atol=2e-3)
    np.testing.assert_allclose(made.log_slope(T) * T, power, atol=2e-3)


@pytest.mark.parametrize("inversion", [1e-3, 0.1, 1.0, 7.3, 300.0])
def test_the_transconductance_stands_still_at_any_inversion(inversion, tmp_path):
    """g_m by differentiation of I = I_spec ln^2(1 + exp(v/2)) in 30 digits, v by bracketing."""
    made = loaded(tmp_path, {**MOS, "inversion_coefficient": inversion, "current": "1 uA"})
    mp = mpmath.MPContext()
    mp.dps = 30

    def transconductance(T: float) -> Any:
        V_T = mp.mpf("1.380649e-23") * mp.mpf(T) / mp.mpf("1.602176634e-19")
        width = mp.mpf("1e-6") / (mp.mpf("0.5e-6") * mp.mpf(inversion))
        I_spec = width * mp.mpf("0.5e-6") * (mp.mpf(T) / mp.mpf(T_0)) ** mp.mpf("0.5")
        current = mp.mpf(float(made.current(np.array([T]))[0]))
        v = 2 * mp.log(mp.expm1(mp.sqrt(current / I_spec)))
        return mp.diff(lambda x: I_spec * mp.log1p(mp.exp(x / 2)) ** 2, v) / (mp.mpf("1.3") * V_T)

    wanted = transconductance(T_0)
    for T in (218.15, 273.15, 350.0, 448.15):
        assert float(abs(transconductance(T) / wanted - 1)) < 1e-13
    T = np.linspace(220.0, 440.0, 12)
    np.testing.assert_allclose(made.log_slope(T), slope_by_differences(made, T), rtol=1e-7)


def test_the_transconductance_gives_the_current(tmp_path):
    """By hand at IC = 1: s = 1, g_m = I (1 - 1/e)/(n V_T)."""
    made = loaded(tmp_path, {**MOS, "transconductance": "100 uS"})
    V_T = 1.380649e-23 * T_0 / 1.602176634e-19
    by_hand = 100e-6 * 1.3 * V_T / (1 - np.exp(-1))
    assert made.current(np.array([T_0]))[0] == pytest.approx(by_hand, rel=1e-14)


def test_a_slew_rate_goes_with_its_capacitor(tmp_path):
    """I = C dV/dt: 10 V/us at 5 pF take 50 uA; +1 % and +2 % at 100 K from there."""
    target = {"shape": "slew into capacitor", "slew_rate": "10 V/us", "capacitance": "5 pF"}
    made = loaded(tmp_path, {**target, "capacitor_tc1": "100 ppm/K", "capacitor_tc2": "1 ppm/K^2"})
    T = np.array([T_0, T_0 + 100])
    np.testing.assert_allclose(made.current(T), [50e-6, 51e-6], rtol=1e-13)
    np.testing.assert_allclose(made.log_slope(T), slope_by_differences(made, T), rtol=1e-7)
    flat = loaded(tmp_path, {"shape": "slew into capacitor", "current": "50 uA"})
    np.testing.assert_array_equal(flat.current(T), 50e-6)


BIPOLAR = {"shape": "bipolar transconductance"}
SLEW = {"shape": "slew into capacitor"}
REFUSALS: list[tuple[dict[str, Any], str]] = [
    (BIPOLAR, "target.current: found nothing; accepted: a current such as '10 uA', or transcond"),
    (
        {**BIPOLAR, "current": 1e-6, "transconductance": 1e-3},
        "target.transconductance: found transconductance beside a current; accepted: either current"
        ", or transconductance",
    ),
    (
        {**BIPOLAR, "transconductance": "0 S"},
        "target.transconductance: found '0 S'; accepted: a transconductance such as '400 uS', abov",
    ),
    (
        {**BIPOLAR, "current": 1e-6, "inversion_coefficient": 1},
        "target.inversion_coefficient: found a inversion_coefficient with shape 'bipolar transcond",
    ),
    (
        {"shape": "flat", "transconductance": "1 mS"},
        "target.transconductance: found a transconductance with shape 'flat'; accepted: "
        "transconductance with shape 'bipolar transconductance' or 'mos transconductance' alone",
    ),
    (
        {"shape": "mos transconductance", "current": 1e-6},
        "target.transistor: found nothing; accepted: the transistor that shape 'mos transcond",
    ),
    (
        {"shape": "mos transconductance", "current": 1e-6, "transistor": "nmos"},
        "target.inversion_coefficient: found nothing; accepted: the inversion_coefficient that",
    ),
    (
        {**MOS, "current": 1e-6, "transistor": "npn"},
        "target.transistor: found npn, a bipolar transistor; accepted: a mos transistor",
    ),
    (
        {**MOS, "current": 1e-6, "transistor": "pmos"},
        "target.transistor: found 'pmos'; accepted: npn, big, nmos",
    ),
    (
        {**MOS, "current": 1e-6, "inversion_coefficient": -1},
        "target.inversion_coefficient: found -1; accepted: a pure number such as 0.5, at least",
    ),
    ({**SLEW, "slew_rate": 1e6}, "target.capacitance: found nothing; accepted: either current, or"),
    (
        {**SLEW, "capacitance": 1e-12},
        "target.slew_rate: found nothing; accepted: either current, or slew_rate and capacitance",
    ),
    (
        {**SLEW, "current": 1e-6, "capacitance": 1e-12},
        "target.capacitance: found capacitance beside a current; accepted: either current, or slew",
    ),
    (
        {**SLEW, "slew_rate": "10 V", "capacitance": 1e-12},
        "target.slew_rate: found '10 V'; accepted: a slew rate such as '10 V/us', above 0 V/s and",
    ),
    (
        {**SLEW, "current": 1e-6, "capacitor_tc1": "-2 %/K"},
        "target.capacitor_tc1: found -0.96 times its value at 27 degC when at 125 degC; accepted",
    ),
    (
        {"shape": "ptat", "current": 1e-6, "capacitor_tc1": 0.0},
        "target.capacitor_tc1: found a capacitor_tc1 with shape 'ptat'; accepted: capacitor_tc1 w",
    ),
]


@pytest.mark.parametrize(("target", "message"), REFUSALS)
def test_refused(target, message, tmp_path):
    path = write(tmp_path, MENU, changed(STUDY, {"target": target}))
    with pytest.raises(InputError, match=re.escape(message)):
        load_study(path)
