"""Documents, tables and folders: fixed keys, figures beside their definitions, whole or nothing."""

from __future__ import annotations

import csv
import json
import math
import re
import stat
import sys
from dataclasses import replace
from io import StringIO
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from rich.console import RenderableType

from tcopt.check import CheckResult, check
from tcopt.design import Bound, DesignResult
from tcopt.errors import InputError
from tcopt.finish import finished_study
from tcopt.menu import menu, menu_range
from tcopt.mix.search import design
from tcopt.show import folder as folders
from tcopt.show.console import console, say
from tcopt.show.csv import designs_csv, menu_csv, sweep_csv
from tcopt.show.folder import write_folder
from tcopt.show.json import check_document, design_document, json_text, menu_document
from tcopt.show.progress import progress
from tcopt.show.tables.check import check_report
from tcopt.show.tables.design import bound_sentence, design_report
from tcopt.show.tables.menu import menu_report
from tests.small import first_design, material, mirror_study, process

FIGURES = {"deviation_ppm", "box_ppm_per_K", "endpoint_ppm_per_K", "slope_ppm_per_K"}


@pytest.fixture(scope="module")
def checked() -> CheckResult:
    return check(finished_study(first_design().winner.operation))


def _parsed(document: dict[str, Any]) -> Any:
    def refuse(word: str) -> None:
        raise AssertionError(f"{word} is not JSON")

    return json.loads(json_text(document), parse_constant=refuse)


def _text(report: RenderableType, width: int = 80) -> str:
    out = console(StringIO())
    out.width = width
    with out.capture() as captured:
        out.print(report)
    return captured.get()


# --- documents ---


def test_what_is_not_finite_is_null() -> None:
    numbers = {"a": [1.0, math.nan], "b": {"c": math.inf}, "d": "nan", "e": -math.inf}
    assert _parsed(numbers) == {"a": [1.0, None], "b": {"c": None}, "d": "nan", "e": None}


def test_the_document_of_check(checked: CheckResult) -> None:
    found = _parsed(check_document(checked))
    assert {
        "title", "topology", "range", "temperature_K", "current_A", "target_A", "drift",
        "residual_drift", "limit", "budget", "warnings",
    } <= set(found)  # fmt: skip
    assert found["range"] == {"low_K": 233.15, "high_K": 423.15, "reference_K": 300.15}
    assert set(found["drift"]) >= FIGURES
    assert set(found["residual_drift"]) >= FIGURES
    assert found["current_A"] == checked.current.tolist()
    assert found["limit"] == {
        "met": True,
        "figure": "box_ppm_per_K",
        "value": found["residual_drift"]["box_ppm_per_K"],
        "bound": pytest.approx(100),
    }
    assert [row["place"] for row in found["budget"]] == ["cold", "reference", "hot"]
    for row in found["budget"]:
        assert sum(row["shares_ppm_per_K"].values()) == pytest.approx(row["total_ppm_per_K"])
    assert found["budget"][1]["total_ppm_per_K"] == pytest.approx(found["drift"]["slope_ppm_per_K"])


def test_the_document_of_design() -> None:
    found = _parsed(design_document(first_design()))
    best = found["designs"][0]
    assert {
        "resistors", "area_ratio", "mirror_ratio", "input_current_A", "drift", "residual_drift",
        "limit", "total_resistance_ohm", "plain_mirror",
    } <= set(best)  # fmt: skip
    parts = best["resistors"]["output"]["parts"]
    assert [set(part) for part in parts] == [{"material", "value_ohm"}] * 2
    assert best["total_resistance_ohm"] == sum(part["value_ohm"] for part in parts)
    assert (best["mirror_ratio"], best["input_current_A"]) == (None, 1e-4)
    # a plain mirror of equal areas takes what it gives: 10 uA
    assert best["plain_mirror"]["input_current_A"] == pytest.approx(1e-5)
    deviations = [each["residual_drift"]["deviation_ppm"] for each in found["designs"]]
    assert deviations == sorted(deviations)
    assert found["bound"]["deviation_ppm"] == 1e6 * first_design().bound.deviation
    assert found["bound"]["proven"] is True
    # flat from a constant input takes a resistor that goes with T: TC1 = 1/T, TC2 = 0
    assert found["needed"]["output"]["tc1_ppm_per_K"] == pytest.approx(1e6 / 300.15)
    assert found["needed"]["output"]["tc2_ppm_per_K2"] == pytest.approx(0, abs=1e-6)


def test_the_document_of_materials() -> None:
    found = _parsed(menu_document(menu(process(material("a", 120, 0.5)), menu_range(*[None] * 3))))
    (only,) = found["materials"]
    assert only["tc1_ppm_per_K"] == pytest.approx(120)
    assert only["tc2_ppm_per_K2"] == pytest.approx(0.5)
    assert only["role"] == "falls short of"
    assert set(only["drift"]) == FIGURES


# --- tables in CSV ---


def _rows(text: str) -> list[dict[str, str]]:
    return list(csv.DictReader(StringIO(text)))


def test_the_sweep_keeps_every_digit(checked: CheckResult) -> None:
    rows = _rows(sweep_csv(checked))
    assert [float(row["current [A]"]) for row in rows] == checked.current.tolist()
    last = rows[-1]
    assert (last["temperature [K]"], last["temperature [degC]"]) == ("423.15", "150.0")
    causes = [float(value) for name, value in last.items() if name.endswith(("output [ppm/K]",))]
    others = [float(last[f"{name} [ppm/K]"]) for name in ("thermal voltage", "input current")]
    assert sum(causes + others) == pytest.approx(float(last["all causes [ppm/K]"]))
    assert float(last["residual [ppm]"]) == pytest.approx(1e6 * (checked.current[-1] / 1e-5 - 1))


def test_the_ranked_designs_as_a_table() -> None:
    rows = _rows(designs_csv(first_design()))
    assert [row["rank"] for row in rows] == [str(k + 1) for k in range(10)]
    assert rows[0]["limit met"] == "yes"
    assert rows[0]["mirror ratio"] == ""
    assert rows[0]["resistors"].startswith("output: ")


def test_the_materials_as_a_table() -> None:
    vanishing = material("vanishing", -20_000, valid=(250.0, 300.0))
    rows = _rows(menu_csv(menu(process(vanishing), menu_range(None, None, None))))
    assert rows[0]["role for a PTAT voltage"] == "falls short of 1/T"
    assert rows[0]["box of V_T/R [ppm/K]"] == ""
    assert rows[0]["valid from [K]"] == "250.0"


# --- reports ---


@pytest.fixture(scope="module")
def reports(checked: CheckResult) -> dict[str, RenderableType]:
    found = menu(first_design().study.process, menu_range("automotive 0", None, None))
    return {
        "check": check_report(checked),
        "design": design_report(first_design()),
        "materials": menu_report(found),
    }


@pytest.mark.parametrize("name", ["check", "design", "materials"])
@pytest.mark.parametrize("width", [80, 140])
def test_a_report_fits_its_width_in_plain_letters(
    reports: dict[str, RenderableType], name: str, width: int
) -> None:
    text = _text(reports[name], width)
    assert text.isascii()
    assert max(map(len, text.splitlines())) <= width
    assert "\x1b" not in text


@pytest.mark.parametrize("name", ["check", "design", "materials"])
def test_figures_of_drift_stand_beside_range_reference_and_definition(
    reports: dict[str, RenderableType], name: str
) -> None:
    text = " ".join(_text(reports[name]).split())
    assert "-40 degC to 150 degC" in text
    assert "T_ref = 27 degC" in text
    assert "(max - min)/(" in text


def test_no_value_is_torn_from_its_unit_in_the_ranking(
    reports: dict[str, RenderableType],
) -> None:
    text = _text(reports["design"], 80)
    assert re.search(r"silicide 5\.6708 kohm", text)
    assert re.search(r"\+ n_well 264\.07 ohm", text)


def test_the_report_of_check_gives_the_verdict_and_the_causes(checked: CheckResult) -> None:
    text = " ".join(_text(check_report(checked), 100).split())
    left = checked.assessment.residual_drift
    assert f"Limit met: {left.box_ppm_per_K:.2f} ppm/K (box) against 100 ppm/K (box)" in text
    total = 1e6 * checked.budget[0].total
    assert re.search(rf"all together \+{total:.1f} ", text)
    assert "only 0.24 squares" in text


def test_titles_are_shown_as_they_are_written() -> None:
    title = "[bold]not bold[/bold] :smile: $x$"
    one = material("a_material_whose_name_is_as_long_as_names_are_allowed_to_be_", 100)
    result = design(mirror_study(process(one), title=title))
    text = _text(design_report(result), 80)
    assert title in text
    assert text.isascii()
    assert "Limit not met by the best design" in text


def test_the_bound_is_said_with_or_without_proof() -> None:
    result = first_design()
    assert bound_sentence(result).startswith("No series mix of this menu, of however")
    guess = replace(result, bound=Bound(result.bound.deviation, proven=False))
    assert bound_sentence(guess).endswith("there is no proof that nothing comes closer.")
    settled = replace(result, needed={})
    assert bound_sentence(settled).startswith("No resistor is open; the best of all choices")


def test_a_ranking_of_settled_resistors_has_no_column_for_them() -> None:
    result: DesignResult = replace(first_design(), needed={})
    text = _text(design_report(result), 90)
    assert "Settled: output: 5.6708 kohm silicide + 264.07 ohm n_well" in text
    assert "\n    resistors" not in text


# --- folders ---


def test_a_new_folder_is_made_with_all_files(tmp_path: Path) -> None:
    folder = tmp_path / "a" / "b"
    write_folder(folder, {"x.txt": "text", "y.bin": b"\x00"})
    assert sorted(path.name for path in folder.iterdir()) == ["x.txt", "y.bin"]
    assert (folder / "y.bin").read_bytes() == b"\x00"
    assert stat.S_IMODE(folder.stat().st_mode) == 0o777 & ~folders._umask()
    assert [path.name for path in (tmp_path / "a").iterdir()] == ["b"]


def test_files_of_others_are_left_alone(tmp_path: Path) -> None:
    (tmp_path / "out").mkdir()
    (tmp_path / "out" / "mine.txt").write_text("mine")
    (tmp_path / "out" / "x.txt").write_text("old")
    write_folder(tmp_path / "out", {"x.txt": "new"})
    assert (tmp_path / "out" / "mine.txt").read_text() == "mine"
    assert (tmp_path / "out" / "x.txt").read_text() == "new"


@pytest.mark.parametrize("there", [True, False])
def test_after_a_failure_nothing_has_changed(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, there: bool
) -> None:
    folder = tmp_path / "out"
    if there:
        folder.mkdir()
        (folder / "x.txt").write_text("old")
    real = folders.write_atomically

    def fails(path: Path, content: str | bytes) -> None:
        if path.name == "y.txt":
            raise OSError(28, "No space left on device")
        real(path, content)

    monkeypatch.setattr(folders, "write_atomically", fails)
    with pytest.raises(InputError, match=r"out'.*\(No space left on device\); accepted: a folder"):
        write_folder(folder, {"x.txt": "new", "y.txt": "new"})
    assert sorted(path.name for path in tmp_path.iterdir()) == (["out"] if there else [])
    if there:
        assert (folder / "x.txt").read_text() == "old"


def test_a_file_in_the_way_is_refused(tmp_path: Path) -> None:
    (tmp_path / "out").write_text("a file")
    with pytest.raises(InputError, match=r"out'.*\(.*[Nn]ot a directory.*\)|found a file"):
        write_folder(tmp_path / "out", {"x.txt": "new"})
    assert (tmp_path / "out").read_text() == "a file"
    assert [path.name for path in tmp_path.iterdir()] == ["out"]


def test_a_folder_where_a_file_should_stand_is_refused(tmp_path: Path) -> None:
    (tmp_path / "x.txt").mkdir()
    with pytest.raises(InputError, match=r"x\.txt: found a folder; accepted: a place for a file"):
        write_folder(tmp_path, {"a.txt": "new", "x.txt": "new"})
    assert [path.name for path in tmp_path.iterdir()] == ["x.txt"]


def test_the_file_that_was_read_is_never_written_over(tmp_path: Path) -> None:
    study = tmp_path / "winner.toml"
    study.write_text("question")
    with pytest.raises(InputError, match=r"winner\.toml: found the very file that was read"):
        write_folder(tmp_path, {"winner.toml": "answer"}, read=study)
    assert study.read_text() == "question"


# --- standard output and standard error ---


def test_a_reader_that_has_had_enough_is_no_failure(
    monkeypatch: pytest.MonkeyPatch, tmp_path: Path
) -> None:
    with (tmp_path / "out").open("w") as stand_in:

        class Closed:
            def write(self, _text: str) -> None:
                raise BrokenPipeError

            def fileno(self) -> int:
                return stand_in.fileno()

        monkeypatch.setattr(sys, "stdout", Closed())
        say("text")
        stand_in.write("goes nowhere")
    assert (tmp_path / "out").read_text() == ""


def test_no_progress_without_a_terminal(capsys: pytest.CaptureFixture[str]) -> None:
    with progress("Combinations") as report:
        assert report is None
    assert capsys.readouterr() == ("", "")


def test_progress_is_shown_after_a_second_on_a_terminal(monkeypatch: pytest.MonkeyPatch) -> None:
    class Terminal(StringIO):
        def isatty(self) -> bool:
            return True

    monkeypatch.setenv("TERM", "xterm")
    clock = iter([0.0, 0.5, 1.5])
    monkeypatch.setattr("tcopt.show.progress.time.monotonic", lambda: next(clock))
    monkeypatch.setattr(sys, "stderr", terminal := Terminal())
    with progress("Combinations") as report:
        assert report is not None
        report(1, 9)
        assert terminal.getvalue() == ""
        report(2, 9)
    assert "Combinations" in terminal.getvalue()
    assert "2/9" in terminal.getvalue()


def test_the_sweep_of_the_document_is_the_sweep_of_the_table(checked: CheckResult) -> None:
    document = check_document(checked)
    rows = _rows(sweep_csv(checked))
    assert np.array_equal(
        document["temperature_K"], [float(row["temperature [K]"]) for row in rows]
    )
