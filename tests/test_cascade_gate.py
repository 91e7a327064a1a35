"""Files of several outputs: what they mean, how they read back, and what is refused."""

from __future__ import annotations

import copy
import re
from pathlib import Path
from typing import Any

import pytest

from tcopt.errors import InputError
from tcopt.study import CascadeStudy, OpenSlot, Study, load_question, load_study, study_text

from .gate import GONE, PROCESS, STUDY, changed, write

PART = {"parts": [{"material": "poly", "value": "6k0"}]}
CASCADE: dict[str, Any] = {
    **{key: STUDY[key] for key in ("title", "process", "range")},
    "circuit": {
        "topology": "degenerated mirror",
        "transistor": "npn",
        "input_current": ["50 uA", "100 uA"],
    },
    "outputs": {
        "small": {
            "area_ratio": [1, 2],
            "output_voltage": "2 V",
            "target": STUDY["target"],
            "resistor": {"materials": ["poly", "well"], "pieces": 2},
        },
        "large": {"area_ratio": 4, "target": {"shape": "ptat", "current": "400 uA"}},
    },
    "resistors": {"input": PART},
}
TRANSISTOR = {
    **PROCESS["transistors"]["npn"], "current_gain": 100, "early_voltage": "90 V",
}  # fmt: skip
REAL = {**PROCESS, "transistors": {"npn": TRANSISTOR}}


def load(folder: Path, changes: dict[str, Any] | None = None, process: Any = None) -> CascadeStudy:
    found = load_question(write(folder, process or PROCESS, changed(CASCADE, changes or {})))
    assert isinstance(found, CascadeStudy)
    return found


def test_each_output_is_a_study_of_its_own(tmp_path: Path) -> None:
    found = load(tmp_path)
    assert (found.title, list(found.outputs)) == ("Invented study", ["small", "large"])
    small, large = found.outputs.values()
    assert (small.title, large.title) == ("Invented study: small", "Invented study: large")
    assert (small.circuit.area_ratio, large.circuit.area_ratio) == ((1.0, 2.0), (4.0,))
    assert (small.circuit.output_voltage, large.circuit.output_voltage) == (2.0, None)
    assert (small.target.current, large.target.current) == (1e-5, 4e-4)
    assert isinstance(small.resistors["output"], OpenSlot)
    assert list(large.resistors) == ["input"]
    for study in found.outputs.values():
        assert study.circuit.input_current == (5e-5, 1e-4)
        assert study.resistors["input"] == small.resistors["input"]
        assert study.path == tmp_path / "study.toml"
    assert not found.is_finished


def test_area_ratio_and_resistor_may_be_left_out(tmp_path: Path) -> None:
    found = load(tmp_path, {"outputs.large.area_ratio": GONE, "resistors": GONE})
    assert found.outputs["large"].circuit.area_ratio == (1.0,)
    assert found.outputs["large"].resistors == {}


def test_a_curve_is_read_from_beside_the_study(tmp_path: Path) -> None:
    (tmp_path / "c.csv").write_text("temperature [degC], current [uA]\n-60, 9\n150, 12\n")
    target = {"shape": "curve", "file": "c.csv"}
    curve = load(tmp_path, {"outputs.large.target": target}).outputs["large"].target.curve
    assert curve is not None
    assert curve[1] == (9e-6, 12e-6)


@pytest.mark.parametrize(
    "changes",
    [
        {},
        {"resistors": GONE, "search": {"digits": 3}},
        {"outputs.large.output_voltage": "1 V", "circuit.effects": ["current gain"]},
        {"circuit.effects": "current gain", "circuit.base_current": "through follower"},
        {"circuit.input_current": GONE, "circuit.supply": "5 V", "resistors.feed": PART},
        {"circuit.input_current": {"from": "10 uA", "to": "1 mA"}, "circuit.input_tc1": 1e-4},
        {"outputs.small.resistor": PART, "outputs.large.resistor": PART},
    ],
)
def test_what_is_written_reads_back(tmp_path: Path, changes: dict[str, Any]) -> None:
    found = load(tmp_path, changes, REAL)
    (tmp_path / "again.toml").write_text(study_text(found, tmp_path), encoding="utf-8")
    assert load_question(tmp_path / "again.toml") == found


def test_a_study_of_one_output_is_still_one(tmp_path: Path) -> None:
    assert isinstance(load_question(write(tmp_path, PROCESS, STUDY)), Study)


def test_where_one_output_is_wanted_several_are_refused(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="outputs: found several outputs; accepted: a study of on"):
        load_study(write(tmp_path, PROCESS, CASCADE))


TARGET = {"shape": "flat", "current": "1 uA"}
REFUSALS = [
    # keys in the wrong place
    ({"target": TARGET}, "target: found it beside [outputs]; accepted: a table [outputs.NAME.targ"),
    ({"resistors.output": PART}, "resistors.output: found it beside [outputs]; accepted: a table "),
    ({"circuit.area_ratio": 2}, "circuit.area_ratio: found it beside [outputs]; accepted: area_ra"),
    ({"circuit.output_voltage": 2}, "circuit.output_voltage: found it beside [outputs]; accepted:"),
    ({"spread": {}}, "spread: found it beside [outputs]; accepted: it in a study of one output"),
    ({"trim": {}}, "trim: found it beside [outputs]; accepted: it in a study of one output"),
    ({"layout": {}}, "layout: found it beside [outputs]; accepted: it in a study of one output"),
    ({"circuit.current_ratio": 2}, "circuit.current_ratio: found it with several outputs, which h"),
    ({"search.for": "silicon"}, "search.for: found 'silicon' with several outputs; accepted: 'pap"),
    ({"range.thermal_resistance": "9 K/W"}, "range.thermal_resistance: found it with several outp"),
    ({"circuit.topology": "peaking source"}, "circuit.topology: found 'peaking source' with sever"),
    # keys
    ({"output": {}}, "output: found an unknown key; accepted: title, process, range, circuit, out"),
    ({"circuit.mirror_ratio": 2}, "circuit.mirror_ratio: found an unknown key; accepted: topology"),
    ({"circuit.reference_voltage": 2}, "circuit.reference_voltage: found an unknown key; accepted"),
    ({"outputs.small.area": 2}, "outputs.small.area: found an unknown key; accepted: area_ratio, "),
    ({"outputs.small.target": GONE}, "outputs.small.target: found nothing; accepted: a table [out"),
    # the table itself
    ({"outputs": 5}, "outputs: found 5; accepted: a table [outputs.NAME] for each of at least two"),
    ({"outputs": {}}, "outputs: found an empty table; accepted: a table [outputs.NAME] for each o"),
    ({"outputs.large": GONE}, "outputs: found only small; accepted: a table [outputs.NAME] for ea"),
    ({"outputs.small": 5}, "outputs.small: found 5; accepted: a table with the keys area_ratio, o"),
    ({"outputs": {"a b": {}, "c": {}}}, "outputs: found an output 'a b'; accepted: a name of lett"),
    ({"outputs": {"a" * 61: {}, "c": {}}}, "accepted: a name of letters, digits, '_' and '-', at "),
    ({"outputs": {"../up": {}, "c": {}}}, "outputs: found an output '../up'; accepted: a name of "),
    ({"outputs": {"a": {}, "A": {}}}, "outputs: found a and A; accepted: names that differ in mor"),
    # what any study refuses, by the key as it stands in this file
    ({"outputs.small.area_ratio": 0}, "outputs.small.area_ratio: found 0; accepted: a pure number"),
    ({"outputs.small.area_ratio": [1, 1]}, "outputs.small.area_ratio[1]: found 1 twice; accepted:"),
    ({"outputs.small.output_voltage": "x"}, "outputs.small.output_voltage: found 'x'; accepted: a"),
    ({"outputs.small.target.current": GONE}, "outputs.small.target.current: found nothing; accept"),
    ({"outputs.small.target.shape": "odd"}, "outputs.small.target.shape: found 'odd'; accepted: '"),
    ({"outputs.small.target.slope": 1}, "outputs.small.target.slope: found "),
    ({"outputs.small.target": 5}, "outputs.small.target: found 5; accepted: a table with the keys"),
    ({"outputs.small.resistor": 5}, "outputs.small.resistor: found 5; accepted: a table"),
    (
        {"outputs.small.resistor.materials": ["tin"]},
        "outputs.small.resistor.materials[0]: found 'tin'; accepted: poly, well, diving",
    ),
    (
        {
            "range.to": "150 degC",
            "outputs.small.resistor": {"parts": [{"material": "diving", "value": "1k"}]},
        },
        "outputs.small.resistor.parts[0].material: found -0.107 times its value at 27 degC when at",
    ),
    (
        {"outputs.large.target": {"shape": "curve", "file": "none.csv"}},
        "none.csv: found no such file",
    ),
    ({"outputs.large.target": {"shape": "curve", "file": 5}}, "outputs.large.target.file: found 5"),
    ({"title": 5}, "title: found 5; accepted: one line of text"),
    ({"title": GONE}, "title: found nothing; accepted"),
    ({"range.to": GONE}, "range.to: found nothing; accepted: either from and to, or grade"),
    ({"circuit": 5}, "circuit: found 5; accepted: a table with the keys"),
    ({"circuit.topology": GONE}, "circuit.topology: found nothing; accepted: '"),
    ({"circuit.input_current": GONE}, "circuit: found no input; accepted: exactly one of input_cu"),
    ({"resistors": 5}, "resistors: found 5; accepted: a table"),
    ({"resistors.base": PART}, "resistors.base: found an unknown slot; accepted: input (in the em"),
]  # fmt: skip


@pytest.mark.parametrize(("changes", "message"), REFUSALS)
def test_refusals(tmp_path: Path, changes: dict[str, Any], message: str) -> None:
    path = write(tmp_path, PROCESS, changed(CASCADE, changes))
    with pytest.raises(InputError, match=re.escape(message)) as caught:
        load_question(path)
    assert str(caught.value).startswith(str(tmp_path))


def test_an_output_voltage_that_is_needed_is_asked_for_where_it_belongs(tmp_path: Path) -> None:
    path = write(tmp_path, REAL, changed(CASCADE, {"circuit.effects": ["early effect"]}))
    message = "outputs.large.output_voltage: found nothing; accepted: the voltage of the output no"
    with pytest.raises(InputError, match=re.escape(message)):
        load_question(path)


def test_studies_that_do_not_share_the_rest_are_refused(tmp_path: Path) -> None:
    small, large = load(tmp_path).outputs.values()
    warmer = large.model_copy(update={"range": large.range.model_copy(update={"high": 430.0})})
    with pytest.raises(InputError, match=r"outputs\.b: found another range than in a; accepted"):
        CascadeStudy("Invented", {"a": small, "b": warmer})
    other = large.circuit.model_copy(update={"input_current": (1e-3,)})
    fed = large.model_copy(update={"circuit": other})
    with pytest.raises(InputError, match=r"outputs\.b: found another circuit\.input_current than"):
        CascadeStudy("Invented", {"a": small, "b": fed})
    bare = large.model_copy(update={"resistors": copy.copy(small.resistors) | {"input": PART}})
    with pytest.raises(InputError, match=r"outputs\.b: found another shared resistor than in a"):
        CascadeStudy("Invented", {"a": small, "b": bare})
    with pytest.raises(InputError, match="outputs: found 1; accepted: a table"):
        CascadeStudy("Invented", {"a": small})
