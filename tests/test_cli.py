"""The command line only translates: the call made, the text and the exit code returned."""

from __future__ import annotations

import json
import sys
from collections.abc import Callable
from dataclasses import dataclass, replace
from pathlib import Path
from types import SimpleNamespace
from typing import Any

import pytest

from tcopt import cli
from tcopt.assess import Verdict
from tcopt.check import CheckResult, check
from tcopt.errors import InputError, NoSolutionError
from tcopt.finish import finished_study
from tests.small import FIRST, first_design, process

STUDY = str(FIRST / "study.toml")
PROCESS = str(FIRST / "process.toml")


@dataclass(frozen=True)
class Answer:
    """What a run of the command line gave."""

    code: int
    out: str
    err: str


@pytest.fixture
def run(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> Callable[..., Answer]:
    """Return a function that runs the command line in this process."""

    def call(*arguments: str) -> Answer:
        monkeypatch.setattr(sys, "argv", ["tcopt", *arguments])
        with pytest.raises(SystemExit) as left:
            cli.main()
        captured = capsys.readouterr()
        return Answer(int(left.value.code or 0), captured.out, captured.err)

    return call


class Recorder:
    """Stands in for a function of the library: keeps the calls, gives one answer."""

    def __init__(self, answer: Any) -> None:
        self.answer = answer
        self.calls: list[tuple[Any, ...]] = []

    def __call__(self, *arguments: Any, **named: Any) -> Any:
        self.calls.append((*arguments, *named.values()))
        if isinstance(self.answer, BaseException):
            raise self.answer
        return self.answer


Stand = Callable[[str, Any], Recorder]


@pytest.fixture
def stand_in(monkeypatch: pytest.MonkeyPatch) -> Stand:
    """Return a function that puts a recorder in the place of a library function."""

    def put(name: str, answer: Any) -> Recorder:
        recorder = Recorder(answer)
        monkeypatch.setattr(name, recorder)
        return recorder

    return put


@pytest.fixture(scope="module")
def checked() -> CheckResult:
    return check(finished_study(first_design().winner.operation))


def _with_limit(result: CheckResult, met: bool | None) -> CheckResult:
    limit = None if met is None else Verdict(met, "box_ppm_per_K", 26.8, 100.0)
    return replace(result, assessment=replace(result.assessment, limit=limit))


# --- design ---


def test_design_searches_the_study_that_is_named(
    run: Callable[..., Answer], stand_in: Stand
) -> None:
    loaded = stand_in("tcopt.study.load_question", "the study")
    searched = stand_in("tcopt.mix.search.design", first_design())
    answer = run("design", "some/study.toml")
    assert loaded.calls == [(Path("some/study.toml"),)]
    assert searched.calls == [("the study", None)]  # no progress without a terminal
    assert (answer.code, answer.err) == (0, "")
    assert answer.out.startswith("First study: 10 uA from 100 uA, flat\n")


def test_design_as_json_is_one_document_and_nothing_else(
    run: Callable[..., Answer], stand_in: Stand
) -> None:
    stand_in("tcopt.mix.search.design", first_design())
    answer = run("design", STUDY, "--json")
    document = json.loads(answer.out)
    assert document["designs"][0]["limit"]["met"] is True
    assert (answer.code, answer.err) == (0, "")


@pytest.mark.parametrize(("met", "code"), [(True, 0), (False, 1), (None, 0)])
def test_the_exit_code_tells_whether_the_best_design_meets_the_limit(
    run: Callable[..., Answer], stand_in: Stand, met: bool | None, code: int
) -> None:
    result = first_design()
    limit = None if met is None else Verdict(met, "box_ppm_per_K", 26.8, 100.0)
    best = replace(result.winner, limit=limit)
    stand_in("tcopt.mix.search.design", replace(result, designs=(best, *result.designs[1:])))
    assert run("design", STUDY).code == code


def test_design_with_a_folder_writes_what_the_folder_gets(
    run: Callable[..., Answer], stand_in: Stand, tmp_path: Path
) -> None:
    stand_in("tcopt.mix.search.design", first_design())
    files = stand_in("tcopt.show.folder.design_files", {"a.txt": "a"})
    written = stand_in("tcopt.show.folder.write_folder", None)
    answer = run("design", STUDY, "--out", str(tmp_path / "out"))
    assert files.calls == [(first_design(), tmp_path / "out")]
    assert written.calls == [(tmp_path / "out", {"a.txt": "a"}, Path(STUDY))]
    assert answer.out.endswith(f"\nFiles written to {tmp_path / 'out'}\n")


# --- check ---


@pytest.mark.parametrize(("met", "code"), [(True, 0), (False, 1), (None, 0)])
@pytest.mark.parametrize("as_json", [True, False])
def test_check_says_whether_the_limit_is_met(
    run: Callable[..., Answer],
    stand_in: Stand,
    checked: CheckResult,
    met: bool | None,
    code: int,
    as_json: bool,
) -> None:
    stand_in("tcopt.study.load_question", "the study")
    called = stand_in("tcopt.check.check", _with_limit(checked, met))
    answer = run("check", "x.toml", *(["--json"] if as_json else []))
    assert called.calls == [("the study",)]
    assert (answer.code, answer.err) == (code, "")
    if as_json:
        limit = json.loads(answer.out)["limit"]
        assert (limit and limit["met"]) == met
    else:
        words = {True: "Limit met: ", False: "Limit not met: ", None: "No limit is set."}
        assert words[met] in answer.out


# --- derive, materials and start ---


@pytest.mark.parametrize(
    ("words", "style"), [((), "text"), (("--as", "latex"), "latex"), (("--as", "python"), "python")]
)
def test_derive_renders_what_explain_gives(
    run: Callable[..., Answer], stand_in: Stand, words: tuple[str, ...], style: str
) -> None:
    explained = stand_in("tcopt.explain.explain", "the derivation")
    rendered = stand_in("tcopt.derive.render", "the text")
    answer = run("derive", "ptat core", "--transistor", "mos", *words)
    assert explained.calls == [("ptat core", None, "mos", None)]
    assert rendered.calls == [("the derivation", style)]
    assert answer == Answer(0, "the text\n", "")


def test_derive_with_a_study_puts_its_numbers_in(
    run: Callable[..., Answer], stand_in: Stand, tmp_path: Path
) -> None:
    stand_in("tcopt.study.load_study", "the study")
    explained = stand_in("tcopt.explain.explain", "the derivation")
    stand_in("tcopt.derive.render", "the text\n")
    written = stand_in("tcopt.show.folder.write_folder", None)
    named = ("--study", "s.toml", "--input", "given", "--as", "latex", "--out", str(tmp_path))
    answer = run("derive", "degenerated mirror", *named, "--json")
    assert explained.calls == [("degenerated mirror", "given", None, "the study")]
    assert written.calls == [(tmp_path, {"derive.tex": "the text\n"}, Path("s.toml"))]
    assert json.loads(answer.out) == {
        "topology": "degenerated mirror",
        "as": "latex",
        "text": "the text\n",
    }


def test_materials_passes_the_words_of_the_range_on(
    run: Callable[..., Answer], stand_in: Stand
) -> None:
    from tcopt.menu import menu_range

    called = stand_in("tcopt.menu.menu_range", menu_range("commercial", None, None))
    answer = run("materials", PROCESS, "--from", "0 degC", "--to", "70 degC")
    assert called.calls == [(None, "0 degC", "70 degC")]
    assert answer.code == 0
    assert "over 0 degC to 70 degC" in " ".join(answer.out.split())


def test_materials_loads_the_process_that_is_named(
    run: Callable[..., Answer], stand_in: Stand
) -> None:
    from tests.small import material

    loaded = stand_in("tcopt.study.load_process", process(material("only", 120), title="A title"))
    answer = run("materials", "p.toml", "--json", "--grade", "military")
    assert loaded.calls == [(Path("p.toml"),)]
    document = json.loads(answer.out)
    assert document["title"] == "A title"
    assert document["range"]["low_K"] == pytest.approx(218.15)


def test_start_names_the_files_and_what_comes_next(
    run: Callable[..., Answer], stand_in: Stand
) -> None:
    paths = [Path("a b/process.toml"), Path("a b/study.toml")]
    called = stand_in("tcopt.study.write_first_study", paths)
    answer = run("start", "a b")
    assert called.calls == [(Path("a b"),)]
    assert answer.out.splitlines() == [
        *map(str, paths), "", "Now: tcopt design 'a b/study.toml'",
    ]  # fmt: skip
    assert json.loads(run("start", "a b", "--json").out) == {"files": list(map(str, paths))}


# --- errors ---


@pytest.mark.parametrize("error", [InputError("f: k: found x"), NoSolutionError("f: k: found x")])
@pytest.mark.parametrize("arguments", [("design", STUDY, "--json"), ("design", STUDY)])
def test_an_error_is_one_line_on_standard_error(
    run: Callable[..., Answer], stand_in: Stand, error: Exception, arguments: tuple[str, ...]
) -> None:
    stand_in("tcopt.mix.search.design", error)
    assert run(*arguments) == Answer(2, "", "tcopt: f: k: found x\n")


def test_an_interruption_is_no_traceback(run: Callable[..., Answer], stand_in: Stand) -> None:
    stand_in("tcopt.mix.search.design", KeyboardInterrupt())
    assert run("design", STUDY) == Answer(130, "", "tcopt: interrupted\n")


def test_a_defect_has_an_exit_code_of_its_own(run: Callable[..., Answer], stand_in: Stand) -> None:
    stand_in("tcopt.mix.search.design", ZeroDivisionError("a defect"))
    answer = run("design", STUDY)
    assert (answer.code, answer.out) == (70, "")
    assert "ZeroDivisionError: a defect" in answer.err
    assert answer.err.endswith("tcopt: this is a defect of the program, not of its input\n")


@pytest.mark.parametrize(
    ("arguments", "message"),
    [
        (("desing",), "No such command 'desing'"),
        (("design",), "Missing argument 'STUDY'"),
        (("check", "a", "b"), "unexpected extra argument"),
        (("check", STUDY, "--jsn"), "No such option: --jsn"),
        (("check", STUDY, "--out"), "requires an argument"),
        (("derive", "ptat core", "--as", "html"), "'html' is not one of 'text', 'latex', 'python'"),
    ],
)
def test_words_that_are_no_command_line_are_refused(
    run: Callable[..., Answer], arguments: tuple[str, ...], message: str
) -> None:
    answer = run(*arguments)
    assert (answer.code, answer.out) == (2, "")
    assert message in answer.err
    assert "Traceback" not in answer.err


def test_an_output_folder_that_cannot_be_made_leaves_nothing_printed(
    run: Callable[..., Answer], stand_in: Stand, tmp_path: Path
) -> None:
    stand_in("tcopt.mix.search.design", first_design())
    stand_in("tcopt.show.folder.design_files", {"a.txt": "a"})
    (tmp_path / "file").write_text("")
    answer = run("design", STUDY, "--out", str(tmp_path / "file" / "out"))
    assert (answer.code, answer.out) == (2, "")
    assert "found a folder that cannot be made or written" in answer.err


# --- help ---


@pytest.mark.parametrize("arguments", [(), ("--help",), ("-h",)])
def test_help_is_printed_without_arguments_too(
    run: Callable[..., Answer], arguments: tuple[str, ...]
) -> None:
    answer = run(*arguments)
    assert (answer.code, answer.err) == (0, "")
    assert answer.out.startswith("Usage: tcopt ")
    for command in ("start", "derive", "materials", "design", "check"):
        assert f"\n  {command} " in answer.out
    assert "..." not in answer.out.split("Commands:")[1]  # no line of help is cut short


def test_the_version_is_told(run: Callable[..., Answer]) -> None:
    from importlib.metadata import version

    assert run("--version") == Answer(0, f"tcopt {version('tcopt')}\n", "")


def test_the_module_runs_as_a_program(monkeypatch: pytest.MonkeyPatch) -> None:
    import runpy

    called = Recorder(None)
    monkeypatch.setattr(cli, "main", called)
    runpy.run_module("tcopt", run_name="__main__")
    assert called.calls == [()]


def test_standard_streams_without_an_encoding_are_left_alone(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    seen: list[str] = []
    plain = SimpleNamespace(write=seen.append, flush=lambda: None, isatty=lambda: False)
    monkeypatch.setattr(sys, "stdout", plain)
    monkeypatch.setattr(sys, "argv", ["tcopt", "--version"])
    with pytest.raises(SystemExit):
        cli.main()
    assert "".join(seen).startswith("tcopt ")
