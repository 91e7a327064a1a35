"""Files to studies and back: what is accepted, and what it means in SI."""

from __future__ import annotations

import math
from pathlib import Path

import pydantic
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import Boltzmann, elementary_charge

from tcopt.circuits import CIRCUITS, GIVEN, SELF, SUPPLY
from tcopt.errors import InputError
from tcopt.files import write_atomically
from tcopt.study import (
    CircuitChoices,
    FixedSlot,
    Limit,
    Material,
    OpenSlot,
    Part,
    Process,
    Span,
    Study,
    Target,
    TemperatureRange,
    Transistor,
    load_process,
    load_study,
    study_text,
    write_first_study,
)

from .gate import GONE, PROCESS, STUDY, changed, write

CURVE = "temperature [degC], current [uA]\n-60, 9\n27, 10\n150, 12\n"
PART = {"parts": [{"material": "poly", "value": "6k0"}]}


@pytest.fixture
def load(tmp_path):
    def load(changes=None):
        (tmp_path / "curve.csv").write_text(CURVE)
        return load_study(write(tmp_path, PROCESS, changed(STUDY, changes or {})))

    return load


def test_process_in_si(tmp_path):
    write(tmp_path, PROCESS, None)
    process = load_process(tmp_path / "process.toml")
    poly, well = process.materials["poly"], process.materials["well"]
    assert (poly.name, poly.tc1, poly.tc2, poly.reference) == ("poly", -180e-6, 0.7e-6, 300.15)
    assert (well.reference, well.sheet_resistance, well.spread) == (298.15, None, None)
    assert process.materials["diving"].tc2 == 0
    assert process.transistors["big"].saturation_current == 2e-17
    assert process.transistors["big"].reference == 298.15


def test_saturation_current_from_a_base_emitter_point(tmp_path):
    write(tmp_path, PROCESS, None)
    npn = load_process(str(tmp_path / "process.toml")).transistors["npn"]
    thermal_voltage = Boltzmann * 300.15 / elementary_charge
    # the junction law read backwards must give the point's own voltage
    voltage = thermal_voltage * math.log(10e-6 / npn.saturation_current)
    assert voltage == pytest.approx(0.65, rel=1e-12)


def test_study_in_si(load, tmp_path):
    study = load()
    assert (study.range.low, study.range.high, study.range.reference) == (233.15, 398.15, 300.15)
    assert study.circuit.input_current == (1e-4,)
    assert study.circuit.area_ratio == (1.0, 2.0, 4.0, 8.0)
    assert study.circuit.mirror_ratio == (1.0,)
    assert study.circuit.transistor is study.process.transistors["npn"]
    assert study.target.limit == Limit(kind="box", value=1e-4)
    slot = study.resistors["output"]
    assert isinstance(slot, OpenSlot)
    assert [material.name for material in slot.materials] == ["poly", "well"]
    assert (slot.pieces, slot.join) == (2, "series")
    assert (study.search.digits, study.search.show) == (5, 10)
    assert study.path == tmp_path / "study.toml"
    assert study.process.path == tmp_path / "process.toml"
    assert not study.is_finished


@pytest.mark.parametrize(
    ("grade", "low", "high"),
    # AEC-Q100 grades 0 to 3; the others are common practice, no source
    [
        ("automotive 0", 233.15, 423.15), ("automotive 1", 233.15, 398.15),
        ("automotive 2", 233.15, 378.15), ("automotive 3", 233.15, 358.15),
        ("commercial", 273.15, 343.15), ("industrial", 233.15, 358.15),
        ("military", 218.15, 398.15),
    ],
)  # fmt: skip
def test_grades(load, grade, low, high):
    over = load({"range": {"grade": grade}}).range
    assert (over.low, over.high, over.reference) == (low, high, 300.15)


@pytest.mark.parametrize(
    ("limit", "kind", "value"),
    [
        ("100 ppm/K", "box", 1e-4), ("0.01 %/K", "box", 1e-4), ("0.5 %", "deviation", 5e-3),
        ("5000 ppm", "deviation", 5e-3), (0.005, "deviation", 5e-3),
    ],
)  # fmt: skip
def test_a_limit_says_what_it_limits(load, limit, kind, value):
    assert load({"target.limit": limit}).target.limit == Limit(kind=kind, value=value)


@pytest.mark.parametrize(
    ("changes", "feed"),
    [
        ({}, GIVEN),
        ({"circuit.input_current": GONE, "circuit.current_ratio": 10}, GIVEN),
        ({"circuit.input_current": GONE, "circuit.supply": "5 V", "resistors.feed": PART}, SUPPLY),
        (
            {"circuit": {"topology": "vbe reference", "transistor": "npn"},
             "resistors": {"base": PART}},
            SELF,
        ),
    ],
)  # fmt: skip
def test_feed_follows_from_what_is_given(load, changes, feed):
    assert load(changes).circuit.feed == feed


@pytest.mark.parametrize(
    ("changes", "currents"),
    [
        ({}, (1e-4,)),
        ({"circuit.input_current": ["20 uA", "50 uA"]}, (2e-5, 5e-5)),
        ({"circuit.input_current": {"from": "20 uA", "to": "500 uA"}}, Span(2e-5, 5e-4)),
        ({"circuit.input_current": GONE, "circuit.current_ratio": [2, 8]}, (2e-5, 8e-5)),
        (
            {"circuit.input_current": GONE, "circuit.current_ratio": {"from": 2, "to": 50}},
            Span(2e-5, 5e-4),
        ),
        (
            {"circuit.input_current": GONE, "circuit.current_ratio": 4,
             "target": {"shape": "curve", "file": "curve.csv"}},
            (4e-5,),  # the table has a point at the reference: 10 uA
        ),
        ({"circuit.input_current": GONE, "circuit.supply": 5, "resistors.feed": PART}, None),
    ],
)  # fmt: skip
def test_input_currents(load, changes, currents):
    found = load(changes).input_currents
    if isinstance(currents, tuple):
        assert found == pytest.approx(currents, rel=1e-15)
    elif currents is None:
        assert found is None
    else:
        assert (found.low, found.high) == pytest.approx((currents.low, currents.high), rel=1e-15)


def test_an_open_slot_without_materials_may_use_all_of_the_process(load):
    study = load({"resistors.output": {}, "range": {"grade": "commercial"}})
    assert study.resistors["output"].materials == tuple(study.process.materials.values())
    assert study.resistors["output"].pieces == 1


@pytest.mark.parametrize(
    ("changes", "finished"),
    [
        ({"circuit.area_ratio": 8, "resistors.output": PART}, True),
        ({"circuit.area_ratio": [8], "resistors": {}}, True),
        ({"circuit.area_ratio": 8}, False),
        ({"resistors.output": PART}, False),
        (
            {"circuit.area_ratio": 8, "resistors.output": PART,
             "circuit.input_current": {"from": 1e-5, "to": 2e-5}},
            False,
        ),
        (
            {"circuit.area_ratio": 8, "resistors.output": PART,
             "circuit.input_current": GONE, "circuit.current_ratio": [2, 3]},
            False,
        ),
    ],
)  # fmt: skip
def test_finished_when_nothing_is_left_to_choose(load, changes, finished):
    assert load(changes).is_finished is finished


def test_a_curve_from_a_file(load, tmp_path):
    target = load({"target": {"shape": "curve", "file": "curve.csv"}}).target
    assert target.curve == ((213.15, 300.15, 423.15), (9e-6, 1e-5, 1.2e-5))
    assert target.file == (tmp_path / "curve.csv").resolve()


def test_a_curve_as_spreadsheets_write_it(load, tmp_path):
    load()
    text = '\ufeff"temperature [K]","current [nA]"\r\n# measured\r\n\r\n200,1e1\r\n"450",20\r\n'
    (tmp_path / "sheet.csv").write_bytes(text.encode())
    target = load({"target": {"shape": "curve", "file": "sheet.csv"}}).target
    assert target.curve == ((200.0, 450.0), (1e-8, 2e-8))


SELF_MADE = {"topology": "ptat core", "transistor": "big"}
VARIANTS = [
    {},
    {"range": {"grade": "automotive 2"}},
    {"circuit.input_current": {"from": "20 uA", "to": "0.5 mA"}, "circuit.input_tc1": "30 ppm/K"},
    {"circuit.input_current": GONE, "circuit.current_ratio": [1.5, 10, 1000 / 3]},
    {"circuit.input_current": GONE, "circuit.current_ratio": {"from": 2, "to": 50}},
    {
        "circuit.input_current": GONE,
        "circuit.supply": "3.3 V",
        "circuit.area_ratio": 1 / 3,
        "resistors.feed": {
            "join": "parallel",
            "parts": [{"material": "poly", "value": 12345.678}, {"material": "well", "value": 7}],
        },
    },
    {"target.limit": "0.0123 %", "search": {"digits": 3, "show": 4}},
    {"target.limit": GONE, "target.shape": "ptat"},
    {"target.shape": "slope", "target.slope": "-1234.5 ppm/K"},
    {"target.shape": "slope", "target.slope": 0},
    {"target.shape": "over material", "target.material": "well"},
    {"target": {"shape": "curve", "file": "curve.csv", "limit": 0.01}},
    {"circuit": {**SELF_MADE, "mirror_ratio": [2, 4]}, "resistors": {"core": PART}},
    {
        "circuit": {"topology": "ptat plus vbe", "transistor": "npn", "area_ratio": 8},
        "resistors": {"core": {"join": "either", "materials": ["well"], "pieces": 3}, "base": PART},
    },
    {
        "circuit": {
            "topology": "reference over resistor",
            "reference_voltage": "1.2 V",
            "reference_tc1": "20 ppm/K",
            "reference_tc2": "-0.1 ppm/K^2",
        },
        "resistors": {"sense": {"materials": ["poly", "well"]}},
    },
    {"title": 'quotes " and \\ and \N{GREEK SMALL LETTER OMEGA} and [brackets] # no comment'},
]


@pytest.mark.parametrize("changes", VARIANTS)
@pytest.mark.parametrize("there", [".", "made", "../beside"])
def test_text_of_a_study_reads_back_as_an_equal_study(load, changes, there, tmp_path):
    study = load(changes)
    folder = tmp_path / "of" / there
    folder.mkdir(parents=True)
    written = folder / "written.toml"
    write_atomically(written, study_text(study, folder))
    again = load_study(written)
    assert again == study
    assert again.path != study.path


@given(
    value=st.floats(1e-3, 1e12),
    current=st.floats(1e-15, 1.0),
    temperature=st.floats(240.0, 390.0),
    tc1=st.floats(-1e-3, 1e-3),
    ratio=st.floats(1e-3, 1e3),
)
def test_any_numbers_read_back_as_the_very_same(value, current, temperature, tc1, ratio, made):
    folder, process = made
    study = Study(
        title="Invented",
        process=process,
        range=TemperatureRange(low=233.15, high=398.15, reference=temperature),
        circuit=CircuitChoices(
            topology="degenerated mirror",
            transistor=process.transistors["npn"],
            input_current=(current, 2.0),
            input_tc1=tc1,
            area_ratio=(ratio,),
        ),
        target=Target(shape="slope", slope=tc1, current=current),
        resistors={
            "output": FixedSlot(parts=(Part(material=process.materials["poly"], value=value),))
        },
    )
    (folder / "any.toml").write_text(study_text(study, folder), encoding="utf-8")
    assert load_study(folder / "any.toml") == study


@pytest.fixture(scope="module")
def made(tmp_path_factory):
    folder = tmp_path_factory.mktemp("made")
    write(folder, PROCESS, None)
    return folder, load_process(folder / "process.toml")


def test_a_study_made_in_python_needs_no_file():
    film = Material(name="film", tc1=-60e-6, reference=298.15)
    npn = Transistor(
        name="npn",
        reference=300.0,
        saturation_current=1e-16,
        bandgap_voltage=1.17,
        temperature_exponent=3.6,
    )
    process = Process(
        title="Invented", reference=300.0, materials={"film": film}, transistors={"npn": npn}
    )
    study = Study(
        title="Invented",
        process=process,
        range=TemperatureRange(grade="industrial"),
        circuit=CircuitChoices(topology="ptat core", transistor=npn, area_ratio=8.0),
        target=Target(shape="ptat", current=1e-5),
        resistors={"core": OpenSlot()},
    )
    assert study.resistors["core"].materials == (film,)
    assert study.circuit.area_ratio == (8.0,)
    with pytest.raises(InputError, match="process: found no file; accepted: a process read from"):
        study_text(study, Path())


def test_made_in_python_the_same_rules_hold():
    with pytest.raises(pydantic.ValidationError, match=r"found -1\.0; accepted: a resistance such"):
        Part(material=Material(name="film", tc1=0.0, reference=300.0), value=-1.0)
    with pytest.raises(pydantic.ValidationError, match="found 'film' under another name"):
        Process(
            title="Invented",
            reference=300.0,
            materials={"other": Material(name="film", tc1=0.0, reference=300.0)},
        )
    with pytest.raises(pydantic.ValidationError, match=r"found 16\.85 degC after 26\.85 degC"):
        Target(shape="curve", curve=((300.0, 290.0), (1e-6, 1e-6)))


def test_studies_are_frozen(load):
    with pytest.raises(pydantic.ValidationError, match="frozen"):
        load().target.current = 1.0


def test_studies_that_differ_are_not_equal(load):
    study = load()
    for changes in VARIANTS[1:]:
        assert load(changes) != study
    assert study != "study"


def test_first_study_runs_the_gate_as_it_is(tmp_path):
    paths = write_first_study(tmp_path / "new" / "folder")
    assert [path.name for path in paths] == ["process.toml", "study.toml"]
    study = load_study(paths[1])
    assert study.path == paths[1]
    assert len(study.process.materials) == 8
    assert {material.tc1 > 0 for material in study.process.materials.values()} == {True, False}
    assert not study.is_finished
    (slot,) = study.resistors.values()
    assert len(slot.materials) == 8


def test_first_study_overwrites_nothing(tmp_path):
    (tmp_path / "study.toml").write_text("mine")
    with pytest.raises(InputError, match=r"study\.toml: found a file; accepted: a folder without"):
        write_first_study(tmp_path)
    assert [path.name for path in tmp_path.iterdir()] == ["study.toml"]
    assert (tmp_path / "study.toml").read_text() == "mine"


def test_first_study_needs_a_folder(tmp_path):
    (tmp_path / "file").write_text("")
    with pytest.raises(InputError, match=r"found a folder that cannot be made \(.+\); accepted"):
        write_first_study(tmp_path / "file")


def test_every_topology_is_offered():
    with pytest.raises(pydantic.ValidationError) as refused:
        CircuitChoices(topology="none")
    assert all(repr(topology) in str(refused.value) for topology in CIRCUITS)
