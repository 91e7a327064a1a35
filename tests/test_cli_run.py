"""The command line as its users meet it: processes, pipes, files, encodings."""

from __future__ import annotations

import json
import os
import signal
import subprocess
import sys
import time
from pathlib import Path
from typing import Any

import pytest

ROOT = Path(__file__).parents[1]
TCOPT = [sys.executable, "-m", "tcopt"]


def _environment(**changes: str) -> dict[str, str]:
    return {**os.environ, "PYTHONPATH": str(ROOT), "OMP_NUM_THREADS": "1", **changes}


def _run(*arguments: str, at: Path = ROOT, **changes: str) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [*TCOPT, *arguments],
        cwd=at,
        env=_environment(**changes),
        capture_output=True,
        text=True,
        encoding="utf-8",
        check=False,
    )


@pytest.fixture(scope="module")
def first(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Return a folder in which a newcomer has started, and designed into ``out``."""
    folder = tmp_path_factory.mktemp("newcomer")
    started = _run("start", "first", at=folder)
    assert (started.returncode, started.stderr) == (0, "")
    designed = _run("design", "first/study.toml", "--out", "out", at=folder)
    assert (designed.returncode, designed.stderr) == (0, "")
    return folder


def test_what_design_writes_is_what_check_reads(first: Path) -> None:
    assert sorted(path.name for path in (first / "out").iterdir()) == sorted(
        ["design.json", "designs.csv", "winner.toml"]
        + [
            f"{name}.{kind}"
            for name in ("map_output", "current", "residual", "causes", "ratio_output")
            for kind in ("svg", "png")
        ]
    )
    answer = _run("check", "out/winner.toml", "--json", at=first)
    assert (answer.returncode, answer.stderr) == (0, "")
    checked = json.loads(answer.stdout)
    designed = json.loads((first / "out" / "design.json").read_text())["designs"][0]
    for key in ("drift", "residual_drift", "limit", "resistors", "area_ratio", "input_current_A"):
        assert checked[key] == designed[key]


def test_check_and_materials_write_their_folders(first: Path) -> None:
    assert _run("check", "out/winner.toml", "--out", "checked", at=first).returncode == 0
    assert {"check.json", "sweep.csv", "causes.svg"} <= {
        path.name for path in (first / "checked").iterdir()
    }
    assert _run("materials", "first/process.toml", "--out", "menu", at=first).returncode == 0
    assert sorted(path.name for path in (first / "menu").iterdir()) == [
        "materials.csv",
        "materials.json",
        "materials.png",
        "materials.svg",
    ]


def test_an_unfinished_design_is_not_checked(first: Path) -> None:
    answer = _run("check", "first/study.toml", "--json", "--out", "nothing", at=first)
    assert (answer.returncode, answer.stdout) == (2, "")
    assert answer.stderr.startswith("tcopt: first/study.toml: found slots or choices that are ")
    assert answer.stderr.count("\n") == 1
    assert not (first / "nothing").exists()


def test_a_second_start_writes_nothing(first: Path) -> None:
    before = (first / "first" / "study.toml").read_bytes()
    answer = _run("start", "first", at=first)
    assert (answer.returncode, answer.stdout) == (2, "")
    assert "process.toml: found a file; accepted: a folder without one" in answer.stderr
    assert (first / "first" / "study.toml").read_bytes() == before


def test_a_closed_pipe_is_no_traceback(first: Path) -> None:
    for arguments in (["design", "first/study.toml"], ["check", "out/winner.toml", "--json"]):
        process = subprocess.Popen(
            [*TCOPT, *arguments],
            cwd=first,
            env=_environment(),
            stdout=subprocess.PIPE,
            stderr=subprocess.PIPE,
        )
        assert process.stdout is not None
        assert process.stderr is not None
        process.stdout.close()
        assert process.stderr.read() == b""
        assert process.wait(60) == 0
        process.stderr.close()


def test_letters_that_the_encoding_lacks_are_no_traceback(first: Path) -> None:
    text = (first / "out" / "winner.toml").read_text(encoding="utf-8")
    odd = first / "out" / "odd.toml"
    odd.write_text(text.replace("First study", "Étude 電流"), encoding="utf-8")
    answer = _run("check", "out/odd.toml", at=first, PYTHONIOENCODING="ascii")
    assert answer.returncode == 0
    assert answer.stdout.startswith("\\xc9tude \\u96fb\\u6d41: 10 uA from 100 uA, flat\n")
    answer = _run("check", "out/odd.toml", "--json", at=first, PYTHONIOENCODING="ascii")
    assert json.loads(answer.stdout)["title"].startswith("Étude 電流")


def test_a_report_in_a_pipe_is_80_columns_wide_and_without_colour(first: Path) -> None:
    answer = _run("check", "out/winner.toml", at=first, TERM="xterm-256color")
    assert max(map(len, answer.stdout.splitlines())) <= 80
    assert "\x1b" not in answer.stdout


@pytest.mark.skipif(os.name == "nt", reason="there is no such signal")
def test_an_interrupted_design_leaves_nothing_behind(first: Path) -> None:
    text = (first / "first" / "study.toml").read_text(encoding="utf-8")
    slow = first / "first" / "slow.toml"
    many = ", ".join(str(1 + k / 50) for k in range(250))
    slow.write_text(text.replace("[1, 2, 4, 8]", f"[{many}]").replace("pieces = 2", "pieces = 4"))
    # a process that was started in the background may have been told to ignore the signal
    heeds = (
        "import signal, sys; signal.signal(signal.SIGINT, signal.default_int_handler); "
        "from tcopt.cli import main; sys.argv[0] = 'tcopt'; main()"
    )
    process = subprocess.Popen(
        [sys.executable, "-c", heeds, "design", "first/slow.toml", "--out", "interrupted"],
        cwd=first,
        env=_environment(),
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
    )
    time.sleep(6)
    assert process.poll() is None, "it was over too soon to be interrupted"
    process.send_signal(signal.SIGINT)
    out, err = process.communicate(timeout=60)
    assert (process.returncode, out, err) == (130, b"", b"tcopt: interrupted\n")
    assert not (first / "interrupted").exists()


def _loaded(*arguments: str, at: Path) -> set[str]:
    """Return the modules that a command has loaded when it is done."""
    code = (
        "import sys, atexit\n"
        "from tcopt import cli\n"
        "atexit.register(lambda: print('\\n'.join(sys.modules), file=sys.stderr))\n"
        f"sys.argv = ['tcopt', *{list(arguments)!r}]\n"
        "cli.main()\n"
    )
    run = subprocess.run(
        [sys.executable, "-c", code],
        cwd=at,
        env=_environment(),
        capture_output=True,
        text=True,
        check=True,
    )
    return set(run.stderr.split())


def test_help_loads_nothing_that_computes(first: Path) -> None:
    heavy = {"numpy", "scipy", "sympy", "matplotlib", "pint", "rich"}
    assert not (heavy | {"pydantic"}) & _loaded("--help", at=first)
    # typer itself takes pydantic to read a command's words
    assert not heavy & _loaded("design", "--help", at=first)


def test_check_loads_neither_sympy_nor_matplotlib_nor_an_optimiser(first: Path) -> None:
    heavy = {"sympy", "matplotlib", "scipy.optimize", "scipy.spatial", "scipy.stats"}
    assert not heavy & _loaded("check", "out/winner.toml", at=first)


def test_the_same_design_is_written_the_same_twice(first: Path) -> None:
    assert _run("design", "first/study.toml", "--out", "again", at=first).returncode == 0
    for path in (first / "out").iterdir():
        if path.name not in {"odd.toml"}:
            assert (first / "again" / path.name).read_bytes() == path.read_bytes(), path.name


@pytest.mark.parametrize(
    ("change", "message"),
    [
        (("[circuit]", "[circuit"), "broken TOML"),
        (('"10 uA"', '"10 uV"'), "target.current: found '10 uV'; accepted: a current such as"),
        (('"npn"', '"pnp"'), "circuit.transistor: found 'pnp'; accepted: npn"),
    ],
)
def test_bad_input_is_one_message_and_nothing_written(
    first: Path, change: tuple[str, str], message: str
) -> None:
    text = (first / "first" / "study.toml").read_text(encoding="utf-8")
    assert change[0] in text
    bad = first / "first" / "bad.toml"
    bad.write_text(text.replace(*change), encoding="utf-8")
    answer: Any = _run("design", "first/bad.toml", "--out", "nothing", at=first)
    assert (answer.returncode, answer.stdout) == (2, "")
    assert answer.stderr.startswith("tcopt: first/bad.toml: ")
    assert message in answer.stderr
    assert answer.stderr.count("\n") == 1
    assert not (first / "nothing").exists()
