"""Self-heating: a case by hand, a 30-digit solution, and that the budget still adds up."""

from __future__ import annotations

import math
from functools import partial
from typing import Any

import mpmath
import numpy as np
import pytest

from tcopt.check import check, finished_operation
from tcopt.errors import InputError, NoSolutionError
from tcopt.heating import heated
from tcopt.mix import search
from tcopt.study import load_study
from tests.gate import GONE, PROCESS, STUDY, changed, write

T_0 = 300.15
MENU = changed(
    PROCESS,
    {
        "materials.diffused": {"tc1": "1500 ppm/K", "tc2": "0.9 ppm/K^2"},
        "materials.flat": {"tc1": "20 ppm/K"},
        "transistors.npn.current_gain": 120,
        "transistors.npn.current_gain_exponent": 1.5,
        "transistors.npn.early_voltage": "60 V",
        "transistors.npn.leakage_current": "1 pA",
    },
)
DIFFUSED = {"parts": [{"material": "diffused", "value": "6 kohm"}]}
HOT = {"range.thermal_resistance": "150 K/W", "range.to": "150 degC"}
SENSE = {
    "circuit": {
        "topology": "reference over resistor", "reference_voltage": "1 V", "output_voltage": "20 V",
    },
    "resistors": {"sense": {"parts": [{"material": "diffused", "value": "100 ohm"}]}},
    "target": {"shape": "flat", "current": "10 mA"},
}  # fmt: skip
MIRROR = {
    "circuit.input_current": "5 mA", "circuit.area_ratio": 1, "circuit.output_voltage": "10 V",
    "target.current": "2 mA", "target.limit": GONE, "resistors.input": DIFFUSED,
    "resistors.output": DIFFUSED,
}  # fmt: skip
SMALL = {"parts": [{"material": "diffused", "value": "20 ohm"}]}
CORE = {
    "circuit": {"topology": "ptat core", "transistor": "npn", "area_ratio": 8, "supply": "12 V"},
    "resistors": {"core": SMALL},
    "target": {"shape": "ptat", "current": "2.6 mA"},
}


def loaded(folder: Any, changes: dict[str, Any], **more: Any) -> Any:
    return load_study(write(folder, MENU, changed(STUDY, {**changes, **HOT, **more})))


def test_a_reference_over_a_resistor_by_hand(tmp_path):
    """With tc2 = 0 the die's rise x solves R0 (1 + a (d + x)) x = R_th V_out V_ref.

    At 27 degC, 100 ohm, 1500 ppm/K, 150 K/W, 20 V and 1 V: 0.15 x^2 + 100 x - 3000 = 0,
    x = 28.7594 K, and 1 V over 104.3139 ohm is 9.58645 mA.
    """
    slot = {"parts": [{"material": "straight", "value": "100 ohm"}]}
    menu = changed(MENU, {"materials.straight": {"tc1": "1500 ppm/K"}})
    table = changed(STUDY, {**SENSE, **HOT, "resistors": {"sense": slot}})
    operation = finished_operation(load_study(write(tmp_path, menu, table)))
    T = np.array([T_0])
    rise = operation.die_temperature(T) - T
    by_hand = (-100 + math.sqrt(100**2 + 4 * 0.15 * 3000)) / 0.3
    assert by_hand == pytest.approx(28.7594, abs=1e-4)
    assert rise[0] == pytest.approx(by_hand, rel=1e-12)
    assert operation.output(T)[0] == pytest.approx(9.58645e-3, rel=1e-6)


REAL_MIRROR = {
    **MIRROR, "resistors.input": SMALL, "resistors.output": SMALL, "circuit.area_ratio": 2,
}  # fmt: skip
EFFECTS = {
    "circuit.effects": ["current gain", "early effect", "leakage"],
    "circuit.base_current": "from input",
}


def test_a_mirror_in_thirty_digits(tmp_path):
    """Loops, laws and the heat balance at once, by Newton in 30 digits, at both ends."""
    operation = finished_operation(loaded(tmp_path, REAL_MIRROR))
    mp = mpmath.MPContext()
    mp.dps = 30
    k_q = mp.mpf("1.380649e-23") / mp.mpf("1.602176634e-19")
    I_S0 = mp.mpf(operation.study.circuit.transistor.saturation_current)

    def balance(ambient: Any, I_out: Any, T: Any) -> list[Any]:
        d, V_T = T - mp.mpf(T_0), k_q * T
        R = 20 * (1 + mp.mpf("1500e-6") * d + mp.mpf("0.9e-6") * d * d)
        bandgap = mp.mpf("1.17") / k_q * (1 / mp.mpf(T_0) - 1 / T)
        I_S = I_S0 * (T / mp.mpf(T_0)) ** mp.mpf("3.6") * mp.exp(bandgap)
        V_in = V_T * mp.log(mp.mpf("5e-3") / I_S) + mp.mpf("5e-3") * R
        V_2 = V_T * mp.log(I_out / (2 * I_S)) + I_out * R
        watts = V_in * mp.mpf("5e-3") + 10 * I_out
        return [V_in - V_2, ambient + 150 * watts - T]

    for ambient in (233.15, T_0, 423.15):
        at = mp.mpf(ambient)
        I_exact, T_exact = mp.findroot(partial(balance, at), (mp.mpf("6e-3"), at + 10))
        T = np.array([ambient])
        assert float(abs(operation.die_temperature(T)[0] / T_exact - 1)) < 1e-14
        assert float(abs(operation.output(T)[0] / I_exact - 1)) < 1e-13


@pytest.mark.parametrize(
    "changes",
    [
        SENSE,
        REAL_MIRROR,
        REAL_MIRROR | EFFECTS,
        CORE,
        {**CORE, "circuit": {**CORE["circuit"], "effects": ["current gain", "leakage"]}},
    ],
    ids=["sense", "mirror", "real mirror", "core", "real core"],
)
def test_the_budget_adds_up(changes, tmp_path):
    """Against a difference quotient of the full solution, self-heating and Early effect in."""
    study = loaded(tmp_path, changes)
    operation = finished_operation(study)
    for T in (240.0, T_0, 420.0):
        h = 0.02
        up, down = (operation.output(np.array([T + s]))[0] for s in (h, -h))
        causes = operation.causes(T)
        assert abs(causes["self-heating"][0]) > 1e-8
        total = sum(float(share[0]) for share in causes.values())
        assert total == pytest.approx(math.log(up / down) / (2 * h), rel=2e-5, abs=1e-9)
    found = check(study)
    for row in found.budget:
        assert row.total == pytest.approx(sum(row.shares.values()), rel=1e-12)


def test_without_a_thermal_resistance_the_die_is_as_warm_as_the_range(tmp_path):
    study = load_study(write(tmp_path, MENU, changed(STUDY, {**MIRROR, "resistors.input": SMALL})))
    operation = finished_operation(study)
    T = np.linspace(233.0, 390.0, 5)
    np.testing.assert_array_equal(operation.die_temperature(T), T)
    assert "self-heating" not in operation.causes(T)


def test_a_design_is_made_for_the_warm_die(tmp_path):
    """The mix keeps the target in the full solution; one chosen for a cold die does not.

    By hand: 10 V, 2 mA and 150 K/W warm it by some 3 K, which a slope of 1000 ppm/K makes
    0.3 % of current.
    """
    slot = {"materials": ["poly", "well", "diffused", "flat"], "pieces": 3}
    rising = {**MIRROR, "resistors.input": GONE, "target.shape": "slope", "target.slope": 1e-3}
    study = loaded(tmp_path, {**rising, "resistors.output": slot})
    found = search.design(study)
    best = found.winner.residual_drift.deviation_ppm / 1e6
    assert best == pytest.approx(found.bound.deviation, rel=0.05)
    cool = {**rising, "range.to": "150 degC", "resistors.output": slot}
    other = search.design(load_study(write(tmp_path, MENU, changed(STUDY, cool)))).winner
    parts = other.operation.mixes["output"].parts
    settled = {"parts": [{"material": p.material.name, "value": p.value} for p in parts]}
    warmed = finished_operation(loaded(tmp_path, {**rising, "resistors.output": settled}))
    T = np.linspace(233.15, 423.15, 41)
    off = float(np.abs(warmed.output(T) / found.winner.target.current(T) - 1).max())
    assert off - other.residual_drift.deviation_ppm / 1e6 == pytest.approx(3e-3, rel=0.3)
    assert off > best + 3e-3
    mix = found.winner.operation.mixes["output"]
    needed = found.needed["output"].resistance
    assert needed == pytest.approx(float(mix.resistance(T_0)), rel=3 * best)


def test_a_die_that_runs_away_is_named(tmp_path):
    """V/R with a falling resistor: the power grows with the temperature that it makes."""
    falling = {
        **SENSE,
        "circuit": {**SENSE["circuit"], "output_voltage": "400 V"},
        "resistors": {"sense": {"parts": [{"material": "diving", "value": "1 kohm"}]}},
    }
    operation = finished_operation(loaded(tmp_path, falling, **{"range.to": "60 degC"}))
    with pytest.raises(NoSolutionError, match=r"range.thermal_resistance: found 150 K/W, with whi"):
        operation.output(np.array([T_0]))


def test_a_search_without_an_end_is_not_called_running_away():
    """Newton's method on the signed root x/sqrt(|x|) goes from x to -x for ever (by hand).

    There x = T - 350 K and the room for heat, 1/(2 sqrt(|x|)), is above zero everywhere.
    """
    ambient, R = np.array([300.0]), 100.0

    def power(T):
        x = T - 350.0
        root = np.sqrt(np.abs(x))
        return (T - ambient - np.sign(x) * root) / R, (1 - 0.5 / root) / R

    message = r"100 K/W, with which the temperature of the die at 26.85 degC was not found in 40 st"
    with pytest.raises(NoSolutionError, match=message):
        heated(ambient, R, power)


def test_several_outputs_do_not_heat_yet(tmp_path):
    from tcopt.study import load_question

    study = changed(
        STUDY,
        {
            **HOT,
            "circuit.area_ratio": GONE,
            "target": GONE,
            "resistors": GONE,
            "outputs": {
                name: {
                    "area_ratio": 1,
                    "output_voltage": "2 V",
                    "target": {"shape": "flat", "current": "10 uA"},
                    "resistor": DIFFUSED,
                }
                for name in ("one", "two")
            },
        },
    )
    with pytest.raises(InputError, match=r"range.thermal_resistance: found it with several output"):
        load_question(write(tmp_path, MENU, study))


@pytest.mark.parametrize("on_top", [{"mirror_drop": "0.3 V"}, {"mirror_transistor": "npn"}])
def test_a_study_with_all_of_it_reads_back_equal(on_top, tmp_path):
    from tcopt.study import study_text

    circuit = {**CORE["circuit"], "output_voltage": "2 V", **on_top}
    study = loaded(tmp_path, {**CORE, "circuit": circuit})
    again = tmp_path / "again.toml"
    again.write_text(study_text(study, tmp_path), encoding="utf-8")
    assert load_study(again) == study
    assert study.range.thermal_resistance == 150


def test_two_open_slots_are_designed_for_the_warm_die(tmp_path):
    """5 V times some 0.6 mA through 5000 K/W are some 15 K; the target is met at that heat."""
    slot = {"materials": ["poly", "diffused", "well"], "pieces": 1}
    changes = {
        "circuit": {
            "topology": "ptat plus vbe", "transistor": "npn", "area_ratio": 8, "supply": "5 V",
        },
        "resistors": {"core": slot, "base": slot},
        "target": {"shape": "flat", "current": "500 uA"},
    }  # fmt: skip
    study = load_study(
        write(tmp_path, MENU, changed(STUDY, {**changes, "range.thermal_resistance": "5000 K/W"}))
    )
    found = search.design(study).winner
    at = np.array([T_0])
    operation = found.operation
    rise = float((operation.die_temperature(at) - at)[0])
    current = operation.output(at)[0] + operation.currents(at)["I_core"][0]
    assert rise == pytest.approx(5000 * 5 * current, rel=1e-9)  # M = 1: core, core and falling
    assert rise > 12
    left = operation.output(at)[0] / 500e-6 - 1
    assert abs(left) <= found.residual_drift.deviation_ppm / 1e6
