"""Designs of several outputs: optima found otherwise, limiting cases, what is written and shown."""

from __future__ import annotations

import csv
import io
import json
from collections.abc import Callable
from dataclasses import replace
from functools import cache
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from numpy.polynomial import Chebyshev
from rich.console import RenderableType
from scipy.optimize import minimize
from typer.testing import CliRunner

from tcopt.assess import Assessment, assess
from tcopt.cascade import Cascade
from tcopt.check_cascade import check_cascade
from tcopt.cli import app
from tcopt.design_cascade import CascadeDesign
from tcopt.errors import InputError, NoSolutionError
from tcopt.mix.cascade import design_cascade, finished_cascade
from tcopt.mix.search import design
from tcopt.operation import Mix, Operation
from tcopt.show.cascade import (
    cascade_check_document,
    cascade_check_files,
    cascade_design_document,
    cascade_design_files,
)
from tcopt.show.console import console
from tcopt.show.plots import causes_picture
from tcopt.show.tables.cascade import cascade_check_report, cascade_design_report
from tcopt.study import (
    CascadeStudy,
    Limit,
    Material,
    OpenSlot,
    Span,
    Study,
    Target,
    load_question,
    study_text,
)
from tests import chain_oracle as oracle
from tests.small import FIRST
from tests.test_cascade import ALL, FALLING, ONE, RISING, T_0, material, study_of

INPUT = 1e-4
STEEP = Material(name="steep", reference=T_0, tc1=4.5e-3, tc2=8e-6)
OPEN = OpenSlot(materials=(material(RISING), material(FALLING), STEEP), pieces=2)
ONE_PIECE = OPEN.model_copy(update={"pieces": 1})


def study(area: tuple[float, ...], target: Target, effects: Any, inputs: Any, slot: Any) -> Study:
    """Return the study of one output."""
    chain = replace(ONE, gain=(40.0, 1.2), R_input=0.0)
    made = study_of(chain, oracle.Output(1.0, 1e3, RISING, 2.0, 1e-5), effects)
    circuit = made.circuit.model_copy(update={"area_ratio": area, "input_current": inputs})
    changes = {"circuit": circuit, "target": target, "resistors": {"output": slot}}
    return made.model_copy(update=changes)


def question(
    effects: Any = ALL,
    inputs: Any = (INPUT,),
    large: tuple[float, ...] = (8.0,),
    small: tuple[float, ...] = (2.0,),
    slot: OpenSlot = OPEN,
) -> CascadeStudy:
    """Return a large bias that is PTAT and a small one that is flat."""
    ptat = Target(shape="ptat", current=2e-4, limit=Limit(kind="deviation", value=0.05))
    flat = Target(shape="flat", current=8e-6, limit=Limit(kind="box", value=1e-4))
    return CascadeStudy(
        "Invented",
        {
            "large": study(large, ptat, effects, inputs, slot),
            "small": study(small, flat, effects, inputs, slot),
        },
    )


@cache
def real() -> CascadeDesign:
    return design_cascade(question())


def alone(result: CascadeDesign) -> dict[str, Operation]:
    found = result.winner.outputs
    return {name: replace(each.operation, other_bases=None) for name, each in found.items()}


# --- optima ---


@pytest.mark.parametrize("name", ["large", "small"])
def test_a_simplex_on_the_whole_chain_finds_nothing_better(name: str) -> None:
    result = real()
    operations = alone(result)
    found = result.winner.outputs[name]
    span = found.operation.study.range
    T = np.linspace(span.low, span.high, 39)
    target = found.target.current(T)
    parts = found.operation.mixes["output"].parts

    def deviation(scales: Any) -> float:
        values = tuple(
            part.model_copy(update={"value": part.value * float(s)})
            for part, s in zip(parts, scales, strict=True)
        )
        moved = replace(operations[name], mixes={"output": Mix(values)})
        output = Cascade({**operations, name: moved}).together()[name].output(T)
        return float(np.abs(output / target - 1).max())

    start = np.full(len(parts), 1.07)
    answer = minimize(
        deviation, start, method="Nelder-Mead", options={"fatol": 1e-7, "xatol": 1e-5}
    )
    assert deviation(start) > 2 * answer.fun
    # values of five digits, and temperatures on a grid
    assert found.residual_drift.deviation_ppm / 1e6 == pytest.approx(answer.fun, rel=2e-3)
    assert result.outputs[name].bound.deviation == pytest.approx(answer.fun, rel=2e-3)
    assert result.outputs[name].bound.proven


def test_ideal_outputs_are_designed_as_if_alone() -> None:
    asked = question(effects=())
    result = design_cascade(asked)
    for name, single in asked.outputs.items():
        same = design(single)
        assert result.outputs[name].bound == same.bound
        found = result.outputs[name].designs
        assert [each.operation for each in found] == [each.operation for each in same.designs]
        assert [each.drift for each in found] == [each.drift for each in same.designs]
        assert result.winner.outputs[name] is found[0]


def test_the_input_is_the_one_whose_worst_output_is_best() -> None:
    inputs = (6e-5, 1e-4, 1.5e-4)
    result = design_cascade(question((), inputs, slot=ONE_PIECE))
    worst = {}
    for value in inputs:
        asked = question((), (value,), slot=ONE_PIECE)
        outputs = {name: design(single) for name, single in asked.outputs.items()}
        limits = [found.winner.limit for found in outputs.values()]
        worst[value] = max(each.value / each.bound for each in limits if each is not None)
    ranked = sorted(worst, key=lambda value: worst[value])
    assert [candidate.input_current for candidate in result.designs] == ranked
    for candidate in result.designs:
        assert candidate.limit is not None
        assert candidate.limit.relative == worst[candidate.input_current or 0.0]


def test_a_free_input_is_as_good_as_the_best_of_a_fine_list() -> None:
    low, high = 4e-5, 4e-4
    free = design_cascade(question((), Span(low, high), slot=ONE_PIECE)).winner
    fine = tuple(float(f"{value:.5g}") for value in np.geomspace(low, high, 17))
    listed = design_cascade(question((), fine, slot=ONE_PIECE)).winner
    assert free.limit is not None
    assert listed.limit is not None
    assert free.limit.relative <= 1.005 * listed.limit.relative
    assert low <= (free.input_current or 0.0) <= high


def test_area_ratios_are_chosen_with_the_leakage_that_they_bring() -> None:
    best = design_cascade(question(large=(8.0, 16.0), small=(1.0, 4.0), slot=ONE_PIECE)).winner
    areas = {name: found.operation.choices.area_ratio for name, found in best.outputs.items()}
    other_areas = (24.0 - areas["large"], 5.0 - areas["small"])
    each = {
        (a, b): design_cascade(question(large=(a,), small=(b,), slot=ONE_PIECE)).winner
        for a, b in ((areas["large"], areas["small"]), other_areas)
    }
    same = each[areas["large"], areas["small"]]
    for name, found in best.outputs.items():
        figure = same.outputs[name].residual_drift.deviation_ppm
        assert found.residual_drift.deviation_ppm == pytest.approx(figure, rel=1e-4)
    for candidate in each.values():
        for name, found in best.outputs.items():
            other = candidate.outputs[name].residual_drift.deviation_ppm
            # what the other output takes differs, a little, with its area ratio
            assert found.residual_drift.deviation_ppm < 1.02 * other


# --- what is written, and what there is no design for ---


def test_the_winner_checks_to_the_figures_of_the_design() -> None:
    finished = finished_cascade(question(), real().winner)
    assert finished.is_finished
    checked = check_cascade(finished)
    for name, found in checked.outputs.items():
        assert found.assessment.residual_drift == real().winner.outputs[name].residual_drift
    assert checked.limit == real().winner.limit


def test_each_list_is_ranked_and_led_by_the_winner() -> None:
    for name, result in real().outputs.items():
        figures = [found.residual_drift.deviation_ppm for found in result.designs]
        assert figures == sorted(figures)
        assert result.winner is real().winner.outputs[name]
        assert len(result.designs) > 1


def test_without_a_design_the_output_is_named() -> None:
    # 8 units and 10 uA in: 80 uA at the most, which is less than 200 uA
    with pytest.raises(NoSolutionError, match=r"outputs\.large: .*no allowed mix gives the target"):
        design_cascade(question(inputs=(1e-5,)))


def test_inputs_without_a_design_are_left_out() -> None:
    result = design_cascade(question((), (1e-5, 1e-4), slot=ONE_PIECE))
    assert [candidate.input_current for candidate in result.designs] == [1e-4]


def test_an_open_resistor_that_all_share_is_refused() -> None:
    asked = question()
    outputs = {
        name: single.model_copy(update={"resistors": {**single.resistors, "input": OPEN}})
        for name, single in asked.outputs.items()
    }
    with pytest.raises(InputError, match=r"resistors\.input: found an open resistor that all outp"):
        design_cascade(CascadeStudy("Invented", outputs))
    with pytest.raises(InputError, match=r"found slots or choices .* open \(large, small\); accep"):
        check_cascade(asked)


def test_without_a_limit_the_largest_deviation_decides() -> None:
    asked = question((), (6e-5, 1.5e-4), slot=ONE_PIECE)
    outputs = {
        name: single.model_copy(update={"target": single.target.model_copy(update={"limit": None})})
        for name, single in asked.outputs.items()
    }
    result = design_cascade(CascadeStudy("Invented", outputs))
    worst = [
        max(found.residual_drift.deviation_ppm for found in candidate.outputs.values())
        for candidate in result.designs
    ]
    assert worst == sorted(worst)
    assert result.winner.limit is None


# --- what is shown ---


def _text(report: RenderableType) -> str:
    out = console(io.StringIO())
    out.width = 100
    with out.capture() as captured:
        out.print(report)
    return captured.get()


def test_reports_show_outputs_side_by_side_and_each() -> None:
    result = real()
    shown = _text(cascade_design_report(result))
    checked = _text(
        cascade_check_report(check_cascade(finished_cascade(question(), result.winner)))
    )
    for text in (shown, checked):
        assert text.startswith(
            "Invented\ndegenerated mirror, 2 outputs on one reference branch, in"
        )
        assert text.isascii()
        worst = result.winner.limit
        assert worst is not None
        word = "All limits met" if worst.met else "Limits not met"
        assert f"{word}: {worst.worst} is worst, at" in text
        assert "so the outputs are coupled" in " ".join(text.split())
    assert "base current of the other outputs" in checked
    assert "they, and their bound, hold with the other outputs" in " ".join(shown.split())


def test_inputs_are_listed_where_there_are_several() -> None:
    text = _text(cascade_design_report(design_cascade(question((), (6e-5, 1e-4), slot=ONE_PIECE))))
    assert "Input currents, best first" in text
    assert "Ranked by the output whose figure is largest relative to its limit" in text


@pytest.mark.parametrize("smooth", [True, False])
def test_designs_without_a_solution_are_counted(
    smooth: bool, monkeypatch: pytest.MonkeyPatch
) -> None:
    """Whether the load is the polynomial of the search, or what the chosen others draw."""
    whole = real().outputs["small"]
    second = whole.designs[1].operation.mixes

    def failing(operation: Operation) -> Assessment:
        load = operation.other_bases
        now = load is not None and isinstance(load.value, Chebyshev) == smooth
        if now and operation.mixes == second:
            raise NoSolutionError("no solution")
        return assess(operation)

    monkeypatch.setattr("tcopt.mix.cascade.assess", failing)
    result = design_cascade(question())
    found = result.outputs["small"]
    assert all(each.operation.mixes != second for each in found.designs)
    assert found.skipped == whole.skipped + 1
    assert result.skipped > real().skipped


def test_documents_have_what_a_single_output_has() -> None:
    designed = cascade_design_document(real())
    assert set(designed) == {
        "title", "topology", "range", "designs", "outputs", "limit", "warnings", "examined",
        "skipped",
    }  # fmt: skip
    assert (
        list(designed["outputs"]) == list(designed["designs"][0]["outputs"]) == ["large", "small"]
    )
    assert designed["designs"][0]["input_current_A"] == INPUT
    first = designed["outputs"]["small"]["designs"][0]
    assert first["residual_drift"] == designed["designs"][0]["outputs"]["small"]["residual_drift"]
    checked = cascade_check_document(check_cascade(finished_cascade(question(), real().winner)))
    assert set(checked) == {
        "title", "topology", "range", "outputs", "limit", "base_share", "warnings",
    }  # fmt: skip
    assert checked["limit"] == designed["limit"] == designed["designs"][0]["limit"]
    assert len(checked["outputs"]["large"]["budget"]) == 3


def test_files_carry_the_names_of_the_outputs(
    monkeypatch: pytest.MonkeyPatch, tmp_path: Path
) -> None:
    monkeypatch.setattr("tcopt.show.folder._encoded", lambda pictures: dict.fromkeys(pictures, b""))
    result = real()
    path = {"path": FIRST / "process.toml"}
    outputs = {
        name: replace(
            found,
            designs=tuple(
                replace(each, operation=_in_process(each.operation, path)) for each in found.designs
            ),
        )
        for name, found in result.outputs.items()
    }
    best = replace(
        result.winner, outputs={name: found.designs[0] for name, found in outputs.items()}
    )
    files = cascade_design_files(replace(result, outputs=outputs, designs=(best,)), tmp_path)
    assert {"design.json", "designs.csv", "winner.toml", "large_designs.csv"} <= set(files)
    assert {"small_current", "small_map_output", "small_residual", "small_causes"} <= set(files)
    assert not {"small_winner.toml", "small_design.json"} & set(files)
    rows = list(csv.DictReader(io.StringIO(str(files["designs.csv"]))))
    assert [row["output"] for row in rows] == ["large", "small"]
    assert float(rows[0]["deviation [ppm]"]) == best.outputs["large"].residual_drift.deviation_ppm
    checked = check_cascade(finished_cascade(question(), result.winner))
    assert {"check.json", "large_sweep.csv", "small_sweep.csv"} <= set(cascade_check_files(checked))


def _in_process(operation: Operation, path: dict[str, Any]) -> Operation:
    made = operation.study
    process = made.process.model_copy(update=path)
    return replace(operation, study=made.model_copy(update={"process": process}))


STUDY = """
title = "Invented"
process = "{process}"
[range]
from = "0 degC"
to = "70 degC"
[circuit]
topology = "degenerated mirror"
transistor = "npn"
input_current = "100 uA"
[outputs.first]
target = {{ shape = "flat", current = "100 uA", limit = "{limit}" }}
[outputs.second]
area_ratio = 2
target = {{ shape = "flat", current = "200 uA" }}
"""


@pytest.fixture
def run(tmp_path: Path) -> Callable[..., Any]:
    def call(*words: str, limit: str = "1 %") -> Any:
        text = STUDY.format(process=(FIRST / "process.toml").as_posix(), limit=limit)
        (tmp_path / "study.toml").write_text(text, encoding="utf-8")
        return CliRunner().invoke(app, [words[0], str(tmp_path / "study.toml"), *words[1:]])

    return call


@pytest.mark.parametrize("command", ["check", "design"])
def test_commands_take_several_outputs(run: Callable[..., Any], command: str) -> None:
    answer = run(command, "--json")
    assert answer.exit_code == 0, answer.output
    limit = json.loads(answer.stdout)["limit"]
    assert limit == {"met": True, "output": "first", "relative": pytest.approx(0, abs=1e-9)}


def test_one_output_that_misses_its_limit_makes_the_exit_code(
    run: Callable[..., Any], monkeypatch: pytest.MonkeyPatch
) -> None:
    # a plain mirror of ideal transistors is exact, so the target is moved away from it
    monkeypatch.setattr(
        "tests.test_cascade_design.STUDY", STUDY.replace('"100 uA", limit', '"103 uA", limit')
    )
    assert run("check", limit="2 %").exit_code == 1
    assert run("check", limit="3 %").exit_code == 0


def test_an_output_without_any_drift_has_a_picture_of_causes(
    run: Callable[..., Any], tmp_path: Path
) -> None:
    run("check")  # writes the study
    plain = load_question(tmp_path / "study.toml")
    assert isinstance(plain, CascadeStudy)
    (line, *_) = causes_picture(check_cascade(plain).outputs["first"].assessment).axes[0].lines
    assert np.abs(line.get_ydata()).max() < 1e-6


def test_other_commands_refuse_several_outputs(run: Callable[..., Any]) -> None:
    answer = run("spread")
    assert answer.exit_code == 2
    assert "outputs: found several outputs; accepted: a study of one output" in answer.stderr


def test_a_study_of_several_outputs_is_written_by_design_and_read_by_check(
    run: Callable[..., Any], tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr("tcopt.show.folder._encoded", lambda pictures: dict.fromkeys(pictures, b""))
    assert run("design", "--out", str(tmp_path / "out")).exit_code == 0
    winner = load_question(tmp_path / "out" / "winner.toml")
    assert isinstance(winner, CascadeStudy)
    assert winner.is_finished
    assert study_text(winner, tmp_path / "out") == (tmp_path / "out" / "winner.toml").read_text()
