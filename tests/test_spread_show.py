"""What `spread` found, as report, document, tables and pictures; and the command itself."""

from __future__ import annotations

import csv
import io
import json
import os
import subprocess
import sys
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest
import tomlkit
from rich.console import Console

from tcopt import cli
from tcopt.show import plots
from tcopt.show.folder import spread_files
from tcopt.show.json import json_text
from tcopt.show.spread_csv import (
    causes_csv,
    corners_csv,
    fan_csv,
    parts_csv,
    quantiles_csv,
)
from tcopt.show.spread_json import spread_document
from tcopt.show.tables.spread import spread_report
from tcopt.spread.figures import FIGURES
from tcopt.spread.result import LEVELS, SpreadResult
from tcopt.spread.run import spread
from tcopt.study import Limit
from tests.spread_designs import insertion, material, ptat_plus_vbe, sensed, transistor

PROCESS: dict[str, Any] = {
    "title": "Invented process",
    "reference": "27 degC",
    "materials": {"film": {"tc1": "100 ppm/K", "sheet_resistance": "300 ohm", "spread": "5 %"}},
}
STUDY: dict[str, Any] = {
    "title": "Invented study",
    "process": "process.toml",
    "range": {"from": "-40 degC", "to": "125 degC"},
    "circuit": {"topology": "reference over resistor", "reference_voltage": "1 V"},
    "target": {"shape": "flat", "current": "100 uA", "limit": "2 %"},
    "resistors": {"sense": {"parts": [{"material": "film", "value": "10k"}]}},
    "spread": {"samples": 4096},
}
TRIM = {"temperature": "27 degC", "scales": "output mirror", "range": "30 %", "bits": 6}


@pytest.fixture(scope="module")
def result() -> SpreadResult:
    film = material(tc1=2e-4, spread=0.05, tc1_spread=1e-4)
    second = insertion(temperature=373.15, scales="base", reach=0.6)
    study = ptat_plus_vbe(
        film,
        device=transistor(saturation_current_spread=0.1),
        trim=(insertion(bits=7, measurement_error=1e-3), second),
        limit=Limit(kind="box", value=60e-6),
    )
    return spread(study)


@pytest.fixture(scope="module")
def bare() -> SpreadResult:
    """Return a result without trim, limit or causes."""
    return spread(sensed((material(spread=0.05), 1e4), samples=100))


def _text(result: SpreadResult, width: int = 80) -> str:
    out = io.StringIO()
    Console(file=out, width=width, markup=False, highlight=False).print(spread_report(result))
    return out.getvalue()


def test_report_fits_a_narrow_terminal_and_is_ascii(result: SpreadResult) -> None:
    text = _text(result)
    assert text.isascii()
    assert max(len(line.rstrip()) for line in text.splitlines()) <= 80
    for words in (
        "4096 parts, scrambled Sobol sequence, seed 1, over -40 degC to 125 degC",
        "Limit not met: 99.7 % of the parts stay within",
        "untrimmed", "two", "insertions", "output mirror at 27 degC, +-30 %", "continuous",
        "One cause at a time at 3 sigma: box of I/I_target, ppm/K, two insertions",
        "trim at 27 degC: measurement", "Worst corner, all at 3 sigma at once",
        "current at T_ref and slope of I/I_target",
        "- TC2 of film: no spread is given",
    ):  # fmt: skip
        assert words in text


def test_report_without_limit_trim_or_causes(bare: SpreadResult) -> None:
    text = _text(bare)
    assert "99.7 % of the parts stay within 0 ppm/K (box of I/I_target)." in text
    assert "yield" not in text
    assert "Trim" not in text
    assert "share of the variance" not in text
    assert "the 99.7 % quantile rests on the outermost 0.3 of 100 parts" in " ".join(text.split())


def test_report_says_the_figures_of_the_parts(result: SpreadResult) -> None:
    """Quantiles in the report are those of the figures that were drawn."""
    box = np.quantile(result.sample.figures[1, :, FIGURES.index("residual_box")], 0.997)
    assert f"{1e6 * box:.4g}" in _text(result)
    passed = result.stages[2].passed
    assert passed is not None
    assert f"{100 * passed.share:.4g} %" in _text(result)


def test_document(result: SpreadResult) -> None:
    document = json.loads(json_text(spread_document(result)))
    assert set(document) >= {
        "title", "topology", "range", "resistors", "samples", "limit", "stages", "corners",
        "missing", "warnings", "judged", "as_stated", "quantile_levels", "wanted_yield",
    }  # fmt: skip
    assert document["samples"]["drawn"] == 4096
    assert document["samples"]["partial"] is False
    assert document["judged"] == "residual_box_ppm_per_K"
    assert document["limit"] == {
        "met": False,
        "figure": "box_ppm_per_K",
        "value": pytest.approx(1e6 * result.judged_quantile[-1]),
        "bound": pytest.approx(60),
    }
    assert [stage["name"] for stage in document["stages"]] == [
        "untrimmed", "one insertion", "two insertions",
    ]  # fmt: skip
    stage = document["stages"][1]
    quantiles = stage["figures"]["slope_ppm_per_K"]["quantiles"]
    assert quantiles == pytest.approx((1e6 * result.stages[1].quantiles["slope"]).tolist())
    assert stage["figures"]["current_A"]["mean"] == pytest.approx(2e-5, rel=0.1)
    assert stage["yield"]["low"] < stage["yield"]["share"] < stage["yield"]["high"]
    assert sum(count for _, count in stage["trim"][0]["codes"]) == 4096
    assert sum(stage["histograms"]["current_A"]["counts"]) == 4096
    assert "scales_set" in document["stages"][2]["trim"][1]
    shares = [cause["share"] for cause in stage["causes"]["slope_ppm_per_K"]]
    assert shares == sorted(shares, reverse=True)
    assert len(stage["fan"]["current_A"]) == len(LEVELS)
    assert document["corners"]["worst"][0]["stage"] == "untrimmed"
    assert {"name", "sign"} == set(document["corners"]["worst"][0]["signs"][0])


def test_document_without_limit_and_trim(bare: SpreadResult) -> None:
    document = json.loads(json_text(spread_document(bare)))
    assert document["limit"] is None
    assert document["stages"][0]["yield"] is None
    assert document["stages"][0]["trim"] == []
    assert document["stages"][0]["causes"] == {}


def _rows(text: str) -> list[dict[str, str]]:
    return list(csv.DictReader(io.StringIO(text)))


def test_tables(result: SpreadResult) -> None:
    quantiles = _rows(quantiles_csv(result))
    assert len(quantiles) == 15
    assert float(quantiles[0]["quantile 50 %"]) == result.stages[0].quantiles["current"][3]
    causes = _rows(causes_csv(result))
    assert len(causes) == 3 * len(result.corners.single)
    assert float(causes[0]["box of I/I_target [ppm/K] [1]".replace(" [ppm/K]", "")]) <= 1
    corners = _rows(corners_csv(result))
    assert len(corners) == 3 * (2 * len(result.corners.single) + 1)
    assert corners[0]["corner"].startswith("3 sigma: + ")
    fan = _rows(fan_csv(result))
    assert len(fan) == 3 * 61
    assert float(fan[0]["temperature [K]"]) == 233.15
    parts = _rows(parts_csv(result))
    assert len(parts) == 3 * 4096
    assert parts[0]["scale 1 [1]"] == parts[1]["scale 2 [1]"] == ""
    assert float(parts[2]["scale 2 [1]"]) == result.sample.settings[1].scale[0, 1]


PICTURES: list[Callable[[SpreadResult], Any]] = [
    plots.fan_picture, plots.histogram_picture, plots.spread_causes_picture, plots.codes_picture,
]  # fmt: skip


@pytest.mark.parametrize("picture", PICTURES)
def test_pictures_are_drawn_and_the_same_each_time(
    picture: Callable[[SpreadResult], Any], result: SpreadResult
) -> None:
    first, again = plots.encoded(picture(result)), plots.encoded(picture(result))
    assert first == again
    assert first["png"].startswith(b"\x89PNG")


def test_fan_shows_bands_target_and_limit(result: SpreadResult) -> None:
    figure = plots.fan_picture(result)
    first, _, last = figure.axes
    labels = {text.get_text() for text in first.get_legend().get_texts()}
    assert labels == {
        "99.7 % of the parts", "95 % of the parts", "68 % of the parts", "median", "target",
        "limit",
    }  # fmt: skip
    median = next(line for line in last.lines if line.get_label() == "median")
    np.testing.assert_allclose(
        median.get_ydata(), 1e6 * result.stages[2].fan.quantiles[3], rtol=1e-12
    )
    limits = [line.get_ydata()[0] for line in first.lines if line.get_linestyle() == "--"]
    assert limits == pytest.approx([20 * (1 - 60e-6 * 82.5), 20 * (1 + 60e-6 * 82.5)])


def test_histogram_has_the_limit_in_sight(result: SpreadResult) -> None:
    axes = plots.histogram_picture(result).axes[0]
    low, high = axes.get_xlim()
    assert low < 60 < high
    assert any(line.get_xdata()[0] == pytest.approx(60) for line in axes.lines)


def test_histogram_is_logarithmic_where_trim_moves_the_figure_far(result: SpreadResult) -> None:
    for name, factor in (("linear", 2.0), ("log", 0.05)):
        first = result.sample.figures[0]
        figures = np.stack([first, first, factor * first])
        far = replace(result, sample=replace(result.sample, figures=figures))
        judged, current = plots.histogram_picture(far).axes
        assert judged.get_xscale() == name
        assert current.get_xscale() == "linear"


def test_codes_share_bars_where_there_are_many(result: SpreadResult) -> None:
    for axes, effect in zip(plots.codes_picture(result).axes, result.stages[-1].trim, strict=True):
        assert len(axes.patches) <= 128
        shown = sum(bar.get_height() for bar in axes.patches)
        counted = sum(count for _, count in effect.codes)
        assert shown == pytest.approx(100 * counted / result.sample.drawn)


def test_pictures_of_parts_that_are_all_alike() -> None:
    """A single film has no drift to spread: histograms of nothing but one value."""
    result = spread(sensed((material(spread=0.05), 1e4)))
    for picture in PICTURES[:3]:
        assert plots.encoded(picture(result))


def test_a_perfect_trim_leaves_one_value_and_rounding() -> None:
    """Without steps and errors every part has the same current at the insertion."""
    film = material(tc1=2e-4, spread=0.05, tc1_spread=1e-4)
    found = spread(ptat_plus_vbe(film, trim=(insertion(),)))
    slices = spread_document(found)["stages"][1]["histograms"]["current_A"]
    assert sum(slices["counts"]) == found.sample.drawn
    assert all(np.diff(slices["edges"]) > 0)
    assert slices["edges"][0] == pytest.approx(slices["edges"][-1], rel=1e-8)
    assert plots.encoded(plots.histogram_picture(found))


def test_files(result: SpreadResult, bare: SpreadResult) -> None:
    tables = {"spread.json", "quantiles.csv", "causes.csv", "corners.csv", "fan.csv", "parts.csv"}
    pictures = {
        f"{name}.{kind}"
        for name in ("fan", "histograms", "causes", "codes")
        for kind in ("svg", "png")
    }
    assert set(spread_files(result)) == tables | pictures
    left_out = {f"{name}.{kind}" for name in ("causes", "codes") for kind in ("svg", "png")}
    assert set(spread_files(bare)) == tables | (pictures - left_out)


# the command


def _write(folder: Path, **tables: Any) -> str:
    (folder / "process.toml").write_text(tomlkit.dumps(PROCESS), encoding="utf-8")
    (folder / "study.toml").write_text(tomlkit.dumps({**STUDY, **tables}), encoding="utf-8")
    return str(folder / "study.toml")


@pytest.fixture
def run(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> Callable[..., tuple[int, str, str]]:
    """Return a function that runs the command line in this process."""

    def call(*arguments: str) -> tuple[int, str, str]:
        monkeypatch.setattr(sys, "argv", ["tcopt", "spread", *arguments])
        with pytest.raises(SystemExit) as left:
            cli.main()
        out, err = capsys.readouterr()
        return int(left.value.code or 0), out, err

    return call


def test_exit_codes_go_by_the_limit(run: Callable[..., Any], tmp_path: Path) -> None:
    code, out, err = run(_write(tmp_path))
    assert (code, err) == (1, "")
    assert "Limit not met" in out
    code, out, err = run(_write(tmp_path, trim={"first": TRIM}))
    assert (code, err) == (0, "")
    assert "Limit met: 99.7 % of the parts stay within" in out
    code, out, err = run(_write(tmp_path, trim={"first": {**TRIM, "range": "1 %"}}))
    assert (code, out) == (2, "")
    assert "trim.first.range: found 1 %, which moves the current by 1 %, less than one" in err


def test_json_is_one_document_and_options_count(run: Callable[..., Any], tmp_path: Path) -> None:
    code, out, _ = run(_write(tmp_path), "--json", "--samples", "300", "--seed", "5")
    document = json.loads(out)
    assert code == 1
    assert document["samples"]["drawn"] == 300
    assert document["samples"]["seed"] == 5


def test_files_are_written(run: Callable[..., Any], tmp_path: Path) -> None:
    code, out, _ = run(_write(tmp_path), "--out", str(tmp_path / "out"), "--samples", "300")
    assert code == 1
    assert f"Files written to {tmp_path / 'out'}" in out
    assert (tmp_path / "out" / "fan.svg").read_text(encoding="utf-8").startswith("<?xml")


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (("--samples", "0"), "command line: samples: found 0; accepted: a whole number from 1"),
        (("--workers", "0"), "workers: found 0; accepted: a whole number from 1 to"),
        (("--workers", "5000"), "workers: found 5000; accepted: a whole number from 1 to"),
        (("--scheduler", "here"), "scheduler: found none that answers within 5 s at 'here'"),
        (("--scheduler", "tcp://a:1", "--workers", "2"), "workers: found it beside a scheduler"),
    ],
)
def test_bad_options_leave_nothing_behind(
    arguments: tuple[str, ...], message: str, run: Callable[..., Any], tmp_path: Path
) -> None:
    code, out, err = run(_write(tmp_path), *arguments, "--out", str(tmp_path / "out"))
    assert (code, out) == (2, "")
    assert message in err
    assert err.count("\n") == 1
    assert not (tmp_path / "out").exists()


INTERRUPTED = """
import os, signal, sys
from contextlib import contextmanager
from tcopt import cli
from tcopt.show import progress as shown

# a process that was started in the background may have been told to ignore the signal
signal.signal(signal.SIGINT, signal.default_int_handler)

@contextmanager
def interrupting(words):
    def report(done, total):
        if done > 8000:
            os.killpg(0, signal.SIGINT)
    yield report

shown.progress = interrupting
sys.argv = ["tcopt", *sys.argv[1:]]
cli.main()
"""
"""The command, which gets the Ctrl-C of a terminal once two blocks are done."""


@pytest.mark.skipif(sys.platform != "linux", reason="a group of processes that are copies")
@pytest.mark.parametrize("workers", ["1", "2"])
def test_interrupt_keeps_what_is_finished(workers: str, tmp_path: Path) -> None:
    """Ctrl-C reaches every process of the terminal; one report comes of it, said to be partial."""
    study = _write(tmp_path)
    done = subprocess.run(
        [sys.executable, "-c", INTERRUPTED, "spread", study, "--json", "--workers", workers,
         "--samples", "10000000", "--out", str(tmp_path / "out")],
        capture_output=True, text=True, start_new_session=True, timeout=300, check=False,
        cwd=Path(__file__).parents[1], env={**os.environ, "OMP_NUM_THREADS": "1"},
    )  # fmt: skip
    assert done.stderr == ""
    assert done.returncode == 130
    document = json.loads(done.stdout)
    assert 8192 <= document["samples"]["drawn"] < 100_000
    assert document["samples"]["wanted"] == 10_000_000
    assert document["samples"]["partial"] is True
    assert document["warnings"][0].startswith("partial: it was interrupted after ")
    assert json.loads((tmp_path / "out" / "spread.json").read_text()) == document
