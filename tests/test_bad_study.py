"""Studies that cannot be used: one message says where, what was found, what is accepted."""

from __future__ import annotations

import math
import re

import pytest

from tcopt.errors import InputError
from tcopt.study import load_study

from .gate import GONE, PROCESS, STUDY, changed, write

PART = {"parts": [{"material": "poly", "value": "6k0"}]}
SUPPLIED = {"circuit.input_current": GONE, "circuit.supply": "5 V", "resistors.feed": PART}
CORE = {"topology": "ptat core", "transistor": "npn", "area_ratio": 8}
SENSE = {"topology": "reference over resistor", "reference_voltage": "1.2 V"}
RATIOED = {"circuit.input_current": GONE, "circuit.current_ratio": 10}

CURRENT = "a current such as '10 uA', or a bare number in A, above 0 A and below 1000 A"

STUDY_REFUSALS = [
    # keys
    ({"titel": "x"}, "titel: found an unknown key; accepted: title, process, range, circuit,"),
    ({"path": "x"}, "path: found an unknown key; accepted: title, process,"),
    ({"odd key": 1}, "'odd key': found an unknown key; accepted: title"),
    ({"range.low": 1}, "range.low: found an unknown key; accepted: grade, from, to, reference"),
    ({"circuit.feed": "given"}, "circuit.feed: found an unknown key; accepted: topology, trans"),
    ({"target.curve": []}, "target.curve: found an unknown key; accepted: shape, current, limit"),
    ({"target.Shape": "flat"}, "target.Shape: found an unknown key"),
    ({"resistors.output.material": "poly"}, "resistors.output.material: found an unknown key"),
    (
        {"resistors.output": {"parts": [{"material": "poly", "value": 1, "colour": 1}]}},
        "resistors.output.parts[0].colour: found an unknown key; accepted: material, value, width",
    ),
    ({"search.rows": 1}, "search.rows: found an unknown key; accepted: digits, show"),
    *(({key: GONE}, f"{key}: found nothing; accepted: ") for key in STUDY if key != "resistors"),
    ({"circuit.topology": GONE}, "circuit.topology: found nothing; accepted: '"),
    ({"target.shape": GONE}, "target.shape: found nothing; accepted: 'flat', 'ptat'"),
    ({"target.current": GONE}, "target.current: found nothing; accepted: a current such as"),
    ({"range.to": GONE}, "range.to: found nothing; accepted: either from and to, or grade"),
    ({"resistors.output": {"parts": [{"value": 1}]}}, "parts[0].material: found nothing; accepted"),
    # shapes of values
    ({"range": 5}, "range: found 5; accepted: a table with the keys grade, from, to, reference"),
    ({"circuit": []}, "circuit: found []; accepted: a table with the keys"),
    ({"target": "flat"}, "target: found 'flat'; accepted: a table with the keys"),
    ({"resistors": 3}, "resistors: found 3; accepted: a table"),
    ({"resistors.output": "poly"}, "resistors.output: found 'poly'; accepted: a table"),
    ({"resistors.output.materials": "poly"}, "output.materials: found 'poly'; accepted: a list"),
    ({"resistors.output": {"parts": 5}}, "resistors.output.parts: found 5; accepted: a list"),
    ({"resistors.output": {"parts": [5]}}, "parts[0]: found 5; accepted: a table with the keys"),
    ({"title": 5}, "title: found 5; accepted: one line of text, at most 200 characters"),
    ({"title": ""}, "title: found ''; accepted: one line of text"),
    ({"title": "two\nlines"}, r"title: found 'two\nlines'; accepted: one line of text"),
    ({"title": "x" * 5000}, "title: found 'xxxxxxxxxxxxxx"),
    ({"process": 5}, "process: found 5; accepted: the path of the process's file"),
    ({"process": ""}, "process: found ''; accepted: the path of the process's file"),
    ({"process": "x" * 5000}, "accepted: the path of the process's file"),
    # names
    ({"circuit.topology": "mirror"}, "circuit.topology: found 'mirror'; accepted: '"),
    ({"circuit.transistor": "pnp"}, "circuit.transistor: found 'pnp'; accepted: npn, big"),
    ({"circuit.transistor": {}}, "circuit.transistor: found {}; accepted: npn, big"),
    ({"target.shape": "round"}, "target.shape: found 'round'; accepted: 'flat', 'ptat', 'slope',"),
    ({"range": {"grade": "automotive 4"}}, "range.grade: found 'automotive 4'; accepted: 'autom"),
    ({"resistors.output.materials": ["poly", "gold"]}, "materials[1]: found 'gold'; accepted: po"),
    ({"resistors.output.join": "delta"}, "resistors.output.join: found 'delta'; accepted: 'serie"),
    (
        {"resistors.output": {**PART, "join": "either"}},
        "resistors.output.join: found 'either'; accepted: 'series', 'parallel'",
    ),
    ({"resistors.outptu": PART}, "resistors.outptu: found an unknown slot; accepted: input (in"),
    ({"resistors": {"a b": PART}}, "resistors.'a b': found an unknown slot; accepted: input (in"),
    # quantities: dimension, NaN, infinite, zero, negative, text, length
    *(
        ({key: value}, f"{key}: found {shown}; accepted: {CURRENT}")
        for key, accepted in (
            ("circuit.input_current", "a current such as '10 uA', or a bare number in A, above 0"),
            ("target.current", "a current such as '10 uA', or a bare number in A, above 0 A"),
        )
        for value, shown in (
            ("5 V", "'5 V'"), ("10", "'10'"), (math.nan, "nan"), (math.inf, "inf"), (0, "0"),
            (-1e-6, "-1e-06"), ("-10 uA", "'-10 uA'"), ("0 A", "'0 A'"), ("many", "'many'"),
            (True, "True"), ("2 kA", "'2 kA'"), ("__import__('os')", '"__import__(\'os\')"'),
        )
    ),
    ({"target.current": []}, "target.current: found []; accepted: a current such as"),
    ({"target.current": "9" * 5000}, "target.current: found '99999"),
    ({"circuit.input_tc1": "5 ppm"}, "circuit.input_tc1: found '5 ppm'; accepted: a temperature c"),
    ({"circuit.input_tc1": 3}, "circuit.input_tc1: found 3; accepted: a temperature coefficient"),
    ({"circuit.input_tc2": "5 ppm/K"}, "circuit.input_tc2: found '5 ppm/K'; accepted: a second-or"),
    ({"target.limit": "5 A"}, "target.limit: found '5 A'; accepted: a box drift such as '100 ppm/"),
    ({"target.limit": 0}, "target.limit: found 0; accepted: a box drift such as '100 ppm/K', or a"),
    ({"target.limit": 100}, "target.limit: found 100; accepted: a box drift such as"),
    ({"target.limit": "-5 %"}, "target.limit: found '-5 %'; accepted: a box drift such as"),
    (
        {"resistors.output": {"parts": [{"material": "poly", "value": "0 ohm"}]}},
        "resistors.output.parts[0].value: found '0 ohm'; accepted: a resistance such as '4.7 kohm'",
    ),
    ({"search.digits": 1}, "search.digits: found 1; accepted: a whole number from 2 to 8"),
    ({"search.digits": 3.0}, "search.digits: found 3.0; accepted: a whole number from 2 to 8"),
    ({"search.show": True}, "search.show: found True; accepted: a whole number from 1 to 1000"),
    ({"resistors.output.pieces": 0}, "output.pieces: found 0; accepted: a whole number from 1 to"),
    ({"resistors.output.pieces": "2"}, "output.pieces: found '2'; accepted: a whole number from"),
    # ranges and lists
    ({"range.from": "-300 degC"}, "range.from: found '-300 degC'; accepted: a temperature such as"),
    ({"range.from": -40}, "range.from: found -40; accepted: a temperature such as '-40 degC', or"),
    ({"range.from": "150 degC"}, "range.to: found 125 degC, not above 150 degC; accepted: a range"),
    ({"range.to": "-40 degC"}, "range.to: found -40 degC, not above -40 degC; accepted: a range t"),
    ({"range.to": "5000 K"}, "range.to: found '5000 K'; accepted: a temperature such as '-40 degC"),
    (
        {"range.reference": "130 degC"},
        "range.reference: found 130 degC; accepted: inside the range, -40 degC to 125 degC",
    ),
    ({"range.grade": "industrial"}, "range.from: found '-40 degC' beside grade 'industrial'; acce"),
    ({"circuit.area_ratio": []}, "circuit.area_ratio: found an empty list; accepted: one to 256"),
    ({"circuit.area_ratio": [1, 2, 1.0]}, "circuit.area_ratio[2]: found 1.0 twice; accepted: each"),
    ({"circuit.area_ratio": [1, -2]}, "circuit.area_ratio[1]: found -2; accepted: a pure number"),
    ({"circuit.area_ratio": "8 um"}, "circuit.area_ratio: found '8 um'; accepted: a pure number"),
    ({"circuit.area_ratio": {"from": 1, "to": 2}}, "circuit.area_ratio: found {'from': 1, 'to': 2"),
    ({"circuit.area_ratio": list(range(1, 300))}, "found a list of 299; accepted: one to 256 entr"),
    (
        {"circuit.input_current": ["10 uA", "10000 nA"]},
        "circuit.input_current[1]: found '10000 nA' twice; accepted: each value once",
    ),
    (
        {"circuit.input_current": {"from": "20 uA", "to": "2 uA"}},
        "circuit.input_current.to: found '2 uA', not above 'from'; accepted: a range that rises",
    ),
    ({"circuit.input_current": {"from": "1 A"}}, "circuit.input_current.to: found nothing; accept"),
    (
        {"circuit.input_current": {"from": "1 A", "to": "2 A", "step": 1}},
        "circuit.input_current.step: found an unknown key; accepted: from, to",
    ),
    (
        {"circuit.input_current": {"from": "1 uV", "to": "2 A"}},
        "circuit.input_current.from: found '1 uV'; accepted: a current such as",
    ),
    ({"resistors.output.materials": []}, "output.materials: found an empty list; accepted: at lea"),
    (
        {"resistors.output.materials": ["poly", "well", "poly"]},
        "resistors.output.materials[2]: found poly twice; accepted: each entry once",
    ),
    ({"resistors.output": {"parts": []}}, "resistors.output.parts: found an empty list; accepted"),
    (
        {"resistors.output": {"parts": PART["parts"] * 17}},
        "resistors.output.parts: found 17 parts; accepted: one to 16 parts",
    ),
    # over- and under-specified
    ({"circuit.input_current": GONE}, "circuit: found no input; accepted: exactly one of input_cu"),
    (
        {"circuit.supply": "5 V"},
        "circuit.supply: found input_current and supply; accepted: exactly one of input_current,",
    ),
    ({"circuit.current_ratio": 3}, "circuit.current_ratio: found input_current and current_ratio;"),
    ({**SUPPLIED, "resistors.feed": GONE}, "resistors.feed: found nothing; accepted: a table with"),
    ({"resistors.feed": PART}, "resistors.feed: found an unknown slot; accepted: input (in the"),
    (
        {**SUPPLIED, "circuit.input_tc1": "1 ppm/K"},
        "circuit.input_tc1: found input_tc1 with a supply; accepted: it with input_current or",
    ),
    ({"circuit.transistor": GONE}, "circuit.transistor: found nothing; accepted: the name of a tr"),
    (
        {"circuit": {**SENSE, "transistor": "npn"}, "resistors": {"sense": PART}},
        "circuit.transistor: found a key that 'reference over resistor' does not have; accepted: "
        "topology, reference_voltage, reference_tc1",
    ),
    (
        {"circuit": {**SENSE, "area_ratio": 2}, "resistors": {"sense": PART}},
        "circuit.area_ratio: found a key that 'reference over resistor' does not have; accepted: t",
    ),
    (
        {"circuit": {"topology": "reference over resistor"}, "resistors": {"sense": PART}},
        "circuit.reference_voltage: found nothing; accepted: a voltage such as '1.2 V'",
    ),
    ({"circuit.reference_voltage": 1}, "circuit.reference_voltage: found a key that 'degenerated"),
    ({"circuit.mirror_ratio": 2}, "circuit.mirror_ratio: found a key that 'degenerated mirror' do"),
    (
        {"circuit": {**CORE, "input_current": 1e-6}, "resistors": {"core": PART}},
        "circuit.input_current: found a key that 'ptat core' does not have; accepted: topology, tr",
    ),
    (
        {"circuit": {**SENSE, "supply": 5}, "resistors": {"sense": PART}},
        "circuit.supply: found a key that 'reference over resistor' does not have; accepted: topol",
    ),
    (
        {"circuit": {**SENSE, "mirror_drop": 0.2}, "resistors": {"sense": PART}},
        "circuit.mirror_drop: found a key that 'reference over resistor' does not have; accepted: ",
    ),
    (
        {**SUPPLIED, "circuit.mirror_drop": 0.2},
        "circuit.mirror_drop: found a key that 'degenerated mirror' does not have; accepted: topol",
    ),
    (
        {"circuit.mirror_transistor": "npn"},
        "circuit.mirror_transistor: found a key that 'degenerated mirror' does not have; accepted:",
    ),
    (
        {
            "circuit": {**CORE, "mirror_drop": 0.2, "mirror_transistor": "npn"},
            "resistors": {"core": PART},
        },
        "circuit.mirror_transistor: found both; accepted: either mirror_drop or mirror_transistor",
    ),
    (
        {"range.thermal_resistance": "100 K/W"},
        "circuit.output_voltage: found nothing; accepted: the voltage of the output node, for the",
    ),
    (
        {
            "circuit": CORE,
            "resistors": {"core": PART},
            "range.thermal_resistance": "100 K/W",
        },
        "circuit.supply: found nothing; accepted: the supply of its branches, for the power that",
    ),
    (
        {"range.thermal_resistance": "100 ohm"},
        "range.thermal_resistance: found '100 ohm'; accepted: a thermal resistance such as '150 K/",
    ),
    ({"circuit": CORE, "resistors": {}}, "resistors.core: found nothing; accepted: a table with"),
    (
        {"circuit": {**CORE, "area_ratio": [8, 1]}, "resistors": {"core": PART}},
        "circuit.area_ratio: found area_ratio 1 with mirror_ratio 1; accepted: a product above 1",
    ),
    (
        {"circuit": {**CORE, "mirror_ratio": [1, 0.125]}, "resistors": {"core": PART}},
        "circuit.area_ratio: found area_ratio 8 with mirror_ratio 0.125; accepted: a product above",
    ),
    ({"target.slope": 0.001}, "target.slope: found a slope with shape 'flat'; accepted: slope wit"),
    ({"target.shape": "slope"}, "target.slope: found nothing; accepted: the slope that shape 'slo"),
    ({"target.material": "poly"}, "target.material: found a material with shape 'flat'; accepted:"),
    ({"target.shape": "over material"}, "target.material: found nothing; accepted: the material t"),
    ({"target": {"shape": "curve"}}, "target.file: found nothing; accepted: the file that shape '"),
    # what turns negative inside the range
    (
        {"resistors.output.materials": ["poly", "diving"], "range.to": "150 degC"},
        "resistors.output.materials[1]: found -0.107 times its value at 27 degC when at 150 degC; "
        "accepted: what stays above zero over the whole range",
    ),
    (
        {"resistors.output": {"parts": [{"material": "diving", "value": 1}]}, "range.to": 430},
        "resistors.output.parts[0].material: found -0.169 times",
    ),
    (
        {"target": {"shape": "over material", "material": "diving", "current": 1e-6},
         "range.to": "150 degC"},
        "target.material: found -0.107 times its value at 27 degC when at 150 degC",
    ),
    # 1 - 0.03 d + 0.0002 d^2 is 1 - 0.03^2/(4 * 0.0002) = -0.125 at d = 75 K, above 0 at both ends
    (
        {"circuit.input_tc1": -0.03, "circuit.input_tc2": 0.0002, "range.to": "180 degC"},
        "circuit.input_tc1: found -0.125 times its value at 27 degC when at 102 degC",
    ),
    (
        {"target.shape": "slope", "target.slope": "2 %/K"},
        "target.slope: found -0.34 times its value at 27 degC when at -40 degC",
    ),
]  # fmt: skip


@pytest.mark.parametrize(("changes", "message"), STUDY_REFUSALS)
def test_study_refused(changes, message, tmp_path):
    path = write(tmp_path, PROCESS, changed(STUDY, changes))
    with pytest.raises(InputError, match=re.escape(message)) as refused:
        load_study(path)
    said = str(refused.value)
    assert said.startswith(f"{path}: ")
    assert "found " in said
    assert "\n" not in said
    assert len(said) < 600 + len(str(path))


def test_several_problems_are_counted(tmp_path):
    changes = {"target.current": "5 V", "search.digits": 0, "range.from": "x"}
    with pytest.raises(InputError, match=r"range\.from: found 'x'; .*\(and 2 more\)$"):
        load_study(write(tmp_path, PROCESS, changed(STUDY, changes)))


def test_a_name_where_the_process_has_none(tmp_path):
    path = write(tmp_path, changed(PROCESS, {"transistors": GONE}), STUDY)
    with pytest.raises(
        InputError, match="found 'npn'; accepted: one of the process's transistors, wh"
    ):
        load_study(path)
