"""The studies tell what the program finds: each is run again, and its README compared."""

from __future__ import annotations

import json
import math
from pathlib import Path
from typing import Any

import pytest
from typer.testing import CliRunner

from tcopt.cli import app

STUDIES = Path(__file__).parent.parent / "studies"
RECORDS = sorted(STUDIES.glob("*/figures.json"))
RUNS = [
    (record.parent, run)
    for record in RECORDS
    for run in json.loads(record.read_text(encoding="utf-8"))["runs"]
]


def at(document: Any, path: str) -> Any:
    """Return what lies at 'designs.0.drift' in a JSON document."""
    for step in path.split("."):
        document = document[int(step)] if isinstance(document, list) else document[step]
    return document


@pytest.mark.parametrize(
    ("folder", "run"), RUNS, ids=[f"{f.name}-{'-'.join(r['command'])}" for f, r in RUNS]
)
def test_a_study_gives_its_figures(folder: Path, run: dict[str, Any]) -> None:
    command, study, *options = run["command"]
    result = CliRunner().invoke(app, [command, str(folder / study), *options, "--json"])
    assert result.exit_code == run["exit"], result.output
    found = json.loads(result.stdout)
    for path, expected in run["figures"].items():
        value = at(found, path)
        if isinstance(expected, str):
            assert value == expected, path
        else:
            # figures stand in the README with four or five digits; half of the last one, twice
            digits = len(str(expected).replace("-", "").replace(".", "").strip("0"))
            step = 10 ** (math.floor(math.log10(abs(expected))) - min(max(digits, 3), 5) + 1)
            assert value == pytest.approx(expected, abs=step), path


@pytest.mark.parametrize("folder", [r.parent for r in RECORDS], ids=lambda folder: folder.name)
def test_a_readme_holds_its_figures_and_pictures(folder: Path) -> None:
    story = (folder / "README.md").read_text(encoding="utf-8")
    for _, run in (pair for pair in RUNS if pair[0] == folder):
        for path, expected in run["figures"].items():
            shown = str(expected).removesuffix(".0")
            assert shown in story or shown.replace("-", "") in story, path
        for picture in run.get("pictures", {}):
            assert f"({picture})" in story
            assert (folder / picture).stat().st_size > 10_000


def test_there_are_studies() -> None:
    assert {
        "cancel_ptat", "follow_temperature", "flat_sum_grade_0", "existing_design",
        "paper_and_silicon", "one_or_two_trims", "mos_constant_transconductance",
        "large_and_small_bias",
    } <= {record.parent.name for record in RECORDS}  # fmt: skip


def test_the_mix_for_silicon_drifts_a_fifth_of_the_mix_for_paper() -> None:
    """What that study is for; its figures are those of a run, see above."""
    (run,) = (run for _, run in RUNS if run["command"] == ["design", "silicon.toml"])
    chosen = run["figures"]["designs.0.silicon.box_ppm_per_K"]
    assert chosen <= run["figures"]["silicon.paper_optimum.silicon.box_ppm_per_K"] / 5
    assert chosen <= run["figures"]["silicon.best_single_material.silicon.box_ppm_per_K"]
