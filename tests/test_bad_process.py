"""Processes and curves that cannot be used: one message tells where, what and why."""

from __future__ import annotations

import math
import re

import pytest

from tcopt.errors import InputError
from tcopt.study import load_process, load_study

from .gate import GONE, PROCESS, STUDY, changed, write

PROCESS_REFUSALS = [
    ({"titel": "x"}, "titel: found an unknown key; accepted: title, reference, materials, transis"),
    ({"reference": GONE}, "reference: found nothing; accepted: a temperature such as '-40 degC'"),
    ({"reference": "0 K"}, "reference: found '0 K'; accepted: a temperature such as '-40 degC'"),
    ({"materials": GONE}, "materials: found nothing; accepted: at least one table such as [mater"),
    ({"materials": {}}, "materials: found no material; accepted: at least one table such as"),
    ({"materials": [1]}, "materials: found [1]; accepted: tables such as [materials.p_poly]"),
    ({"transistors": 1}, "transistors: found 1; accepted: tables such as [transistors.npn]"),
    ({"materials.poly": 3}, "materials.poly: found 3; accepted: a table with the keys reference,"),
    ({"materials.poly.name": "x"}, "materials.poly.name: found an unknown key; accepted: referenc"),
    ({"materials.poly.tc3": 1}, "materials.poly.tc3: found an unknown key; accepted: reference, t"),
    ({"materials.poly.tc1": GONE}, "materials.poly.tc1: found nothing; accepted: a temperature co"),
    ({"materials.poly.tc1": "-180 ppm"}, "materials.poly.tc1: found '-180 ppm'; accepted: a tempe"),
    ({"materials.poly.tc1": math.nan}, "materials.poly.tc1: found nan; accepted: a temperature co"),
    ({"materials.poly.tc2": "1 ppm/K"}, "materials.poly.tc2: found '1 ppm/K'; accepted: a second-"),
    ({"materials.poly.sheet_resistance": 0}, "poly.sheet_resistance: found 0; accepted: a resist"),
    ({"materials.poly.spread": "-5 %"}, "poly.spread: found '-5 %'; accepted: one standard deviat"),
    ({"materials.poly.spread": 5}, "materials.poly.spread: found 5; accepted: one standard deviat"),
    ({"materials.poly.matching": "2 %"}, "poly.matching: found '2 %'; accepted: a matching coeff"),
    ({"materials.poly.min_width": "0 um"}, "poly.min_width: found '0 um'; accepted: a length such"),
    ({"materials.poly.valid": [300, 300]}, "poly.valid: found a range that does not rise; accepte"),
    ({"materials.poly.valid": [400, 300]}, "poly.valid: found a range that does not rise; accepte"),
    ({"materials.poly.valid": [300]}, "poly.valid: found [300]; accepted: two temperatures, such"),
    ({"materials.poly.valid": "all"}, "poly.valid: found 'all'; accepted: two temperatures, such"),
    ({"materials.poly.valid": [-1, 300]}, "poly.valid[0]: found -1; accepted: a temperature such"),
    ({"materials.poly.source": 1}, "materials.poly.source: found 1; accepted: one line of text"),
    ({"materials.po[ly": {"tc1": 0}}, "materials.'po[ly': found 'po[ly'; accepted: a name of let"),
    (
        {"transistors.npn.base_emitter": GONE},
        "npn.saturation_current: found nothing; accepted: eit",
    ),
    (
        {"transistors.npn.saturation_current": 1e-16},
        "npn.saturation_current: found both; accepted:",
    ),
    (
        {"transistors.big.saturation_current": "2e-17"},
        "saturation_current: found '2e-17'; accepted",
    ),
    (
        {"transistors.npn.base_emitter": "0.65 V"},
        "npn.base_emitter: found '0.65 V'; accepted: a ta",
    ),
    (
        {"transistors.npn.base_emitter.voltage": "10 uA"},
        "transistors.npn.base_emitter.voltage: found '10 uA'; accepted: a voltage such as '0.65 V'",
    ),
    (
        {"transistors.npn.base_emitter.voltage": "90 V"},
        "npn.saturation_current: found 0.0; accepte",
    ),
    (
        {"transistors.npn.bandgap_voltage": GONE},
        "npn.bandgap_voltage: found nothing; accepted: a v",
    ),
    (
        {"transistors.npn.varshni_coefficient": "0.473 mV/K"},
        "npn.varshni_temperature: found nothing; accepted: a temperature such as '636 K', since v",
    ),
    (
        {"transistors.npn.varshni_temperature": "636 K"},
        "npn.varshni_coefficient: found nothing; accepted: a slope such as '0.473 mV/K', since v",
    ),
    (
        {"transistors.npn.temperature_exponent": "3 K"},
        "exponent: found '3 K'; accepted: a pure num",
    ),
    (
        {"transistors.npn.current_gain": 0},
        "npn.current_gain: found 0; accepted: a pure number, abov",
    ),
    (
        {"transistors.npn.early_voltage": -1},
        "npn.early_voltage: found -1; accepted: a voltage such",
    ),
]


@pytest.mark.parametrize(("changes", "message"), PROCESS_REFUSALS)
def test_process_refused(changes, message, tmp_path):
    study = write(tmp_path, changed(PROCESS, changes), STUDY)
    path = tmp_path / "process.toml"
    with pytest.raises(InputError, match=re.escape(message)) as refused:
        load_process(path)
    assert str(refused.value).startswith(f"{path}: ")
    with pytest.raises(InputError, match=re.escape(message)):
        load_study(study)


CURVES = [
    ("", "found no points; accepted: the header 'temperature [degC], current [uA]'"),
    ("27,10\n30,10\n", "line 1: found '27,10'; accepted: the header"),
    ("current [uA],temperature [K]\n", "line 1: found 'current [uA],temperature [K]'; accepted"),
    ("temperature [degC],current [uA]\n", "found no points; accepted: the header"),
    ("temperature [degC],current [uA]\n\n27,10\n", "line 3: found 1 temperatures and 1 currents"),
    ("temperature [uA],current [uA]\n2,1\n", "line 2: found '2 uA'; accepted: a temperature such"),
    ("temperature [K],current [V]\n2,1\n", "line 2: found '1 V'; accepted: a current such as"),
    ("temperature [K],current [A]\n2,nan\n", "line 2: found '2,nan'; accepted: two numbers with"),
    ("temperature [K],current [A]\n2;3\n", "line 2: found '2;3'; accepted: two numbers with"),
    ("temperature [K],current [A]\n2,3,4\n", "line 2: found '2,3,4'; accepted: two numbers with"),
    ("temperature [K],current [A]\n2,1 %\n", "line 2: found '2,1 %'; accepted: two numbers with"),
    ("temperature [K],current [A]\n2,1e999\n", "line 2: found '1e999 A'; accepted: a current"),
    ("temperature [K],current [A]\n2,1\n2,1\n", "line 3: found -271.2 degC after -271.2 degC; acc"),
    ("temperature [degC],current [A]\n-300,1\n1,1\n", "line 2: found -300 degC after -273.2 degC"),
    ("temperature [K],current [mA]\n200,1\n\n#\n300,0\n", "line 5: found 0 A; accepted: a current"),
    ("temperature [K],current [mA]\n200,1\n300,-1\n", "line 3: found -1 mA; accepted: a current"),
    ('temperature [K],current [mA]\n"200,1\n', "line 2: found broken CSV (unexpected end of data)"),
]


@pytest.mark.parametrize(("text", "message"), CURVES)
def test_curve_refused(text, message, tmp_path):
    (tmp_path / "curve.csv").write_text(text)
    changes = {"target": {"shape": "curve", "file": "curve.csv"}}
    with pytest.raises(InputError, match=re.escape(message)) as refused:
        load_study(write(tmp_path, PROCESS, changed(STUDY, changes)))
    assert str(refused.value).startswith(f"{tmp_path / 'curve.csv'}: ")


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"target.file": "curve.csv"}, "target.file: found a file with shape 'flat'; accepted: f"),
        (
            {"target.file": "curve.csv", "target.shape": "curve"},
            "target.current: found a current beside a curve; accepted: the curve alone",
        ),
        (
            {"target": {"shape": "curve", "file": "curve.csv"}, "range.to": "130 degC"},
            "target.file: found a curve from -50 degC to 125 degC; accepted: one that covers the "
            "range, -40 degC to 130 degC",
        ),
        ({"target": {"shape": "curve", "file": 5}}, "target.file: found 5; accepted: the path of"),
        ({"target": {"shape": "curve", "file": "none.csv"}}, "none.csv: found no such file; accep"),
    ],
)
def test_curve_and_study_disagree(changes, message, tmp_path):
    (tmp_path / "curve.csv").write_text("temperature [degC],current [uA]\n-50,1\n125,1\n")
    with pytest.raises(InputError, match=re.escape(message)):
        load_study(write(tmp_path, PROCESS, changed(STUDY, changes)))
