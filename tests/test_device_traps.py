"""Traps of real transistors: each said where it is, with its temperature, and not elsewhere."""

from __future__ import annotations

import json
import math
from io import StringIO

import numpy as np
import pytest

from tcopt.check import check
from tcopt.errors import NoSolutionError
from tcopt.show.console import console
from tcopt.show.csv import sweep_csv
from tcopt.show.json import check_document, json_text
from tcopt.show.tables.check import check_report
from tests.device_studies import T_0, operation, resistor, study

CORE = {"topology": "ptat core", "transistor": "npn", "area_ratio": 8}
REAL = {"effects": ["current gain", "early effect", "leakage"], "output_voltage": "2 V"}
MIRROR = {
    "topology": "degenerated mirror", "transistor": "npn", "input_current": "100 uA",
    "area_ratio": 1,
}  # fmt: skip
BIAS = {
    "topology": "constant transconductance bias", "transistor": "nmos", "area_ratio": 4,
}  # fmt: skip


def said(folder, circuit, slots, **more):
    return check(study(folder, circuit, slots, **more)).warnings


def one(warnings, start):
    found = [text for text in warnings if start in text]
    assert len(found) == 1, warnings
    return found[0]


def none(warnings, start):
    assert not [text for text in warnings if start in text]


def test_an_output_voltage_in_saturation_is_named(tmp_path):
    """54 mV over R rise with V_T: 0.2 V on top are 0.24 V cold and 0.27 V hot (by hand)."""
    warnings = said(tmp_path, {**CORE, "output_voltage": "0.25 V"}, {"core": "5 kohm"})
    text = one(warnings, "the output transistor saturates")
    # V_T ln 8 = 0.05 V, the rest of 0.25 V above 0.2 V, at 279.0 K = 5.9 degC; of 61 places
    # 2.75 K apart the first one above it is 6.75 degC
    assert text.startswith(
        "the output transistor saturates from 6.75 degC to 125 degC: its node is at 0.25 V and "
        "needs 0.271 V at 125 degC"
    )
    none(said(tmp_path, {**CORE, "output_voltage": "0.3 V"}, {"core": "5 kohm"}), "saturates")


def test_a_supply_that_is_too_low_when_cold_is_named(tmp_path):
    """V_BE of 10 uA is 0.78 V at -40 degC and 0.65 V at 27 degC: 0.9 V less 0.2 V lie between."""
    circuit = {**CORE, "mirror_drop": "0.2 V"}
    text = one(said(tmp_path, {**circuit, "supply": "0.9 V"}, {"core": "5 kohm"}), "too low")
    assert text.startswith("the supply of 0.9 V is too low from -40 degC to ")
    assert text.endswith("the branch of the first transistor needs 0.983 V at -40 degC")
    scarce = said(tmp_path, {**circuit, "supply": "1.05 V"}, {"core": "5 kohm"})
    assert "only 0.067 V of the 1.05 V supply are left over at -40 degC" in one(scarce, "left over")
    ample = said(tmp_path, {**circuit, "supply": "3 V"}, {"core": "5 kohm"})
    none(ample, "left over")
    none(ample, "too low")


def test_what_stands_on_top_is_not_counted_without_its_key(tmp_path):
    text = one(said(tmp_path, {**CORE, "supply": "0.7 V"}, {"core": "5 kohm"}), "too low")
    assert text.endswith(", without what the mirror on top takes")


def test_a_fed_input_with_little_left(tmp_path):
    circuit = {"topology": "degenerated mirror", "transistor": "npn", "supply": "0.9 V"}
    text = one(said(tmp_path, circuit, {"feed": "20 kohm", "output": "1 kohm"}), "feed resistor")
    assert text.startswith("at -40 degC only 0.1")
    ample = said(tmp_path, {**circuit, "supply": "3 V"}, {"feed": "20 kohm", "output": "1 kohm"})
    none(ample, "feed resistor")


def test_base_current_left_out_is_estimated_when_cold(tmp_path):
    """A plain mirror loses 2/(beta + 2); beta is 120 (233.15/300.15)^1.5 = 82.2 at -40 degC."""
    text = one(said(tmp_path, MIRROR, {}), "base currents")
    beta = 120 * (233.15 / T_0) ** 1.5
    assert f"{-200 / (beta + 2):+.2f} % at -40 degC, where the gain is 82.2" in text
    assert f"and by {-200 / 122:+.2f} % at 27 degC" in text
    none(said(tmp_path, {**MIRROR, "effects": "current gain"}, {}), "base currents")


def test_leakage_left_out_is_estimated_when_hot(tmp_path):
    """I_out + I_L against I_in - I_L: by 2^9.8 = 891 pA of 100 nA each way, +0 % in a mirror

    of equal areas; of four times the area, 4 (I_in - I_L) + 4 I_L: nothing either. A core
    of 8 gains from its leakage instead.
    """
    slots = {"core": "500 kohm"}
    text = one(said(tmp_path, CORE, slots), "leakage, which")
    with_it = operation(tmp_path, {**CORE, "effects": "leakage"}, slots)
    hot = np.array([398.15])
    moved = 100 * (with_it.output(hot) / operation(tmp_path, CORE, slots).output(hot) - 1)
    assert f"move the output by {moved[0]:+.2f} % at 125 degC" in text
    assert "a unit junction leaks 891 pA" in text
    none(said(tmp_path, {**CORE, "effects": "leakage"}, slots), "leakage, which")
    none(said(tmp_path, MIRROR, {}), "leakage")


def test_leakage_above_the_current(tmp_path):
    """0.5 nA in, and 0.89 nA leak at 125 degC: left out, a warning; in, no solution, with both."""
    small = {**MIRROR, "input_current": "0.5 nA"}
    text = one(said(tmp_path, small, {}), "above the current")
    assert text.startswith("leakage, which the study leaves out, is above the current at 125 degC")
    with pytest.raises(NoSolutionError, match=r"leakage of \S+ A is above the input's 5e-10 A"):
        said(tmp_path, {**small, "effects": "leakage"}, {})


def test_leakage_that_rules_the_output(tmp_path):
    tiny = said(tmp_path, {**CORE, "effects": "leakage"}, {"core": "20 Mohm"})
    assert "at 125 degC leakage makes" in one(tiny, "of the output current")


def test_ptat_is_not_constant_transconductance_in_mos(tmp_path):
    ptat = {"target__shape": "ptat"}
    text = one(said(tmp_path, BIAS, {"core": "5 kohm"}, **ptat), "'mos transconductance'")
    assert "inversion coefficients like 108" in text
    weak = said(tmp_path, BIAS, {"core": "2 Mohm"}, **ptat)
    none(weak, "'mos transconductance'")
    none(said(tmp_path, BIAS, {"core": "5 kohm"}), "'mos transconductance'")


def test_the_rule_of_a_mos_core(tmp_path):
    core = {**CORE, "transistor": "nmos"}
    text = one(said(tmp_path, core, {"core": "50 kohm"}), "the rule V_T ln(N M)/R")
    assert "reach an inversion coefficient of" in text
    none(said(tmp_path, core, {"core": "5 Mohm"}), "the rule")


def test_a_transconductance_that_moves(tmp_path):
    """Widths of 16: 2 (1 - sqrt(1/16)) = 1.5 in strong inversion (Carusone et al., 2nd ed., 7.8),
    ln 16/n = 2.13 in weak (Vittoz and Fellrath 1977, memory); a resistor that doubles moves
    the circuit between them.
    """
    wide = {**BIAS, "area_ratio": 16}
    slots = {"resistors": {"core": resistor("20 kohm", "well")}}
    text = one(said(tmp_path, wide, {}, **slots), "g_m R of the first transistor")
    assert "g_m R of the first transistor, 1.28 at 27 degC, moves by -3.7 % at -40 degC" in text
    assert "since its inversion coefficient goes from 28.9 to 10.7" in text
    steady = {"resistors": {"core": resistor("20 Mohm", "well")}}
    none(said(tmp_path, wide, {}, **steady), "g_m R")


def test_a_loop_that_rests_is_told_with_its_start_up(tmp_path):
    text = one(said(tmp_path, CORE, {"core": "5 kohm"}), "rests at zero")
    assert text.startswith(
        "the loop of a ptat core also rests at zero current: it needs a start-up of more than "
        "891 pA at 125 degC into base and collector of the diode-connected transistor; one that "
        "stays on adds 0.1 % to the output at "
    )
    assert "of a millionth of its current it makes 8 times that" in text
    reference = {"topology": "vbe reference", "transistor": "npn"}
    text = one(said(tmp_path, reference, {"base": "60 kohm"}), "rests at zero")
    assert "its second solution lies at 23.1 pA at 125 degC, and below it the current" in text
    without = {**CORE, "transistor": "big"}
    assert "for which no data are given" in one(
        said(tmp_path, without, {"core": "5 kohm"}), "rests"
    )
    none(said(tmp_path, MIRROR, {}), "rests at zero")


@pytest.mark.parametrize("T", [233.15, T_0, 398.15])
def test_the_early_effect_has_a_share(T, tmp_path):
    """The others are those of the circuit without it; the sum is that of the full solution."""
    slots = {"output": "5 kohm", "input": "400 ohm"}
    effects = {**MIRROR, **REAL}
    design = operation(tmp_path, effects, slots)
    causes = {name: float(share[0]) for name, share in design.causes(T).items()}
    h = 0.01
    up, down = (design.output(np.array([T + s]))[0] for s in (h, -h))
    assert sum(causes.values()) == pytest.approx(math.log(up / down) / (2 * h), rel=1e-5)
    plain = operation(tmp_path, {**effects, "effects": ["current gain", "leakage"]}, slots)
    without = {name: float(share[0]) for name, share in plain.causes(T).items()}
    early = causes.pop("Early effect")
    assert causes == pytest.approx(without, rel=1e-9, abs=1e-15)
    assert abs(early) > 1e-7


def test_the_document_carries_it_all(tmp_path):
    """Every array stands against temperature_K, every key has its unit, nan is null."""
    circuit = {**BIAS, "mirror_transistor": "pmos", "supply": "3 V", "output_voltage": "2 V",
               "effects": ["early effect", "leakage"]}  # fmt: skip
    heat = {"range__thermal_resistance": "200 K/W"}
    result = check(study(tmp_path, circuit, {"core": "5 kohm"}, **heat))
    document = json.loads(json_text(check_document(result)))
    count = len(document["temperature_K"])
    across, need = document["across"], document["headroom"]
    for values in (
        *across["inversion_coefficient"].values(),
        across["output_resistance_ohm"], across["die_temperature_K"], across["power_W"],
        need["lowest_output_V"], need["lowest_supply_V"], *need["branches_V"].values(),
    ):  # fmt: skip
        assert len(values) == count
    assert across["supply_sensitivity"] is None
    assert need["supply_limit"]["set_by"] == "the branch of the second transistor"
    assert need["supply_limit"]["voltage_V"] == pytest.approx(
        max(need["lowest_supply_V"]), rel=1e-6
    )
    assert document["start_up"]["gain_at_a_millionth"][2] is None
    assert document["start_up"]["most_A"] > 0
    assert document["zero_temperature_coefficient"] is None
    heading = sweep_csv(result).splitlines()[0].split(",")
    assert heading[-7:] == [
        "inversion coefficient input [1]", "inversion coefficient output [1]",
        "output resistance [ohm]", "die temperature [K]", "power [W]",
        "lowest output voltage [V]", "lowest supply [V]",
    ]  # fmt: skip


def printed(result):
    out = console(StringIO())
    out.width = 90
    with out.capture() as captured:
        out.print(check_report(result))
    return captured.get()


def test_the_report_says_it_in_tables(tmp_path):
    circuit = {**CORE, **REAL, "mirror_drop": "0.2 V", "supply": "3 V"}
    heat = {"range__thermal_resistance": "200 K/W"}
    text = printed(check(study(tmp_path, circuit, {"core": "5 kohm"}, **heat)))
    for line in (
        "temperature of the die", "power that heats it", "output resistance",
        "output node (given: 2 V)", "Lowest supply (given: 3 V): 0.98", "at -40 degC.",
        "start-up current needed at least", "gain of the loop at a millionth of it",
        "Early effect", "self-heating",
    ):  # fmt: skip
        assert line in text, text
    assert "is not given and not counted" not in text
    bare = printed(check(study(tmp_path, CORE, {"core": "5 kohm"})))
    assert "is not given and not counted" in " ".join(bare.split())
    assert "Across the range" not in bare


def test_the_zero_point_is_in_document_and_report(tmp_path):
    bias = {"topology": "gate voltage bias", "transistor": "nmos", "reference_voltage": "0.8 V"}
    result = check(study(tmp_path, bias, {}))
    document = check_document(result)
    assert document["zero_temperature_coefficient"]["gate_voltage_V"] == pytest.approx(
        0.9, abs=0.01
    )
    assert document["start_up"] is None
    assert "At a gate voltage of 900.6" in " ".join(printed(result).split())


def test_the_picture_of_headroom_tells_what_lacks(tmp_path):
    from tcopt.show.plots import headroom_picture

    circuit = {**CORE, "supply": "0.7 V", "output_voltage": "1 V"}
    result = check(study(tmp_path, circuit, {"core": "5 kohm"}))
    figure = headroom_picture(result, result.headroom)
    title = " ".join(figure.get_suptitle().split())
    assert "The output node needs 0.271 V" in title
    assert "and has it; the supply needs 0.783 V" in title
    assert title.endswith("more than its 0.7 V")
