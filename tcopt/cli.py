"""The command line: words into one call of the library each, and its answer into text.

Everything slow to import is imported inside the command that needs it.
"""

from __future__ import annotations

import sys
from enum import StrEnum
from pathlib import Path
from typing import TYPE_CHECKING, Annotated, Any, NoReturn

import typer
from typer.core import TyperGroup

from tcopt.errors import TcoptError

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping

    from rich.console import RenderableType

    from tcopt.assess import Verdict
    from tcopt.check_cascade import CascadeVerdict
    from tcopt.study import CascadeStudy

__all__ = ["app", "main"]

MET, NOT_MET, UNUSABLE, DEFECT, INTERRUPTED = 0, 1, 2, 70, 130
"""Exit codes."""


class _Group(TyperGroup):
    """The one place where an exception becomes an exit text."""

    def invoke(self, ctx: Any) -> Any:
        try:
            return super().invoke(ctx)
        except TcoptError as error:
            print(f"tcopt: {error}", file=sys.stderr)
            raise typer.Exit(UNUSABLE) from None
        except KeyboardInterrupt:
            print("tcopt: interrupted", file=sys.stderr)
            raise typer.Exit(INTERRUPTED) from None


app = typer.Typer(
    cls=_Group,
    add_completion=False,
    pretty_exceptions_enable=False,
    rich_markup_mode=None,
    context_settings={"help_option_names": ["-h", "--help"]},
    epilog="A first study: tcopt start first, then tcopt design first/study.toml",
)

Json = Annotated[
    bool, typer.Option("--json", help="Print one JSON document, and nothing else, instead.")
]
Out = Annotated[
    Path | None,
    typer.Option(
        "--out", metavar="FOLDER", help="Also write the results as files: tables and pictures."
    ),
]
StudyFile = Annotated[Path, typer.Argument(metavar="STUDY", help="A study file (TOML).")]


class Style(StrEnum):
    """How `derive` writes."""

    TEXT = "text"
    LATEX = "latex"
    PYTHON = "python"


_DERIVED = {Style.TEXT: "derive.txt", Style.LATEX: "derive.tex", Style.PYTHON: "derive.py"}
"""File that `derive` writes."""


def main() -> None:
    """Run the command line; a defect of the program itself has an exit code of its own."""
    for stream in (sys.stdout, sys.stderr):
        # a title may hold letters that the terminal's encoding lacks
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="backslashreplace")
    try:
        app(prog_name="tcopt")
    except Exception:
        import traceback  # noqa: PLC0415

        traceback.print_exc()
        print("tcopt: this is a defect of the program, not of its input", file=sys.stderr)
        sys.exit(DEFECT)


def _version(wanted: bool) -> None:
    if wanted:
        from importlib.metadata import version  # noqa: PLC0415

        print(f"tcopt {version('tcopt')}")
        raise typer.Exit(MET)


@app.callback(invoke_without_command=True)
def tcopt(
    context: typer.Context,
    version: Annotated[  # noqa: ARG001  it acts by itself
        bool, typer.Option("--version", callback=_version, is_eager=True, help="Show the version.")
    ] = False,
) -> None:
    """Choose the resistor, or the mix of resistors, for a bias current.

    It gives the current the temperature behaviour that it owes over a range: flat, proportional
    to absolute temperature, of a given slope, or following a curve.

    Exit code 0: done, and the limit, if there is one, is met. 1: done, and the limit is not met.
    2: the input cannot be used.
    """
    if context.invoked_subcommand is None:
        print(context.get_help())
        raise typer.Exit(MET)


def _answer(
    document: Callable[[], Mapping[str, Any]],
    report: Callable[[], RenderableType],
    as_json: bool,
    written: Path | None = None,
) -> None:
    """Print the result, as a document or as a report."""
    from tcopt.show.console import say, say_report  # noqa: PLC0415

    if as_json:
        from tcopt.show.json import json_text  # noqa: PLC0415

        say(json_text(document()))
        return
    say_report(report())
    if written is not None:
        say(f"\nFiles written to {written}\n")


def _exit(limit: Verdict | CascadeVerdict | None) -> NoReturn:
    raise typer.Exit(MET if limit is None or limit.met else NOT_MET)


@app.command()
def start(
    folder: Annotated[Path, typer.Argument(metavar="FOLDER", help="Where to; made if need be.")],
    as_json: Json = False,
) -> None:
    """Write a first study, commented, that runs as it is."""
    from tcopt.show.console import say  # noqa: PLC0415
    from tcopt.study import write_first_study  # noqa: PLC0415

    files = [str(path) for path in write_first_study(folder)]
    if as_json:
        from tcopt.show.json import json_text  # noqa: PLC0415

        say(json_text({"files": files}))
        return
    import shlex  # noqa: PLC0415

    study = shlex.quote(str(folder / "study.toml"))
    lines = [*files, "", f"Now: tcopt design {study}"]
    say("\n".join(lines) + "\n")


@app.command()
def derive(
    topology: Annotated[
        str, typer.Argument(metavar="TOPOLOGY", help="A circuit, such as 'degenerated mirror'.")
    ],
    study: Annotated[
        Path | None,
        typer.Option("--study", metavar="STUDY", help="Put the numbers of this study in."),
    ] = None,
    style: Annotated[
        Style, typer.Option("--as", help="A note to read, LaTeX to take in, or a Python module.")
    ] = Style.TEXT,
    feed: Annotated[
        str | None,
        typer.Option("--input", metavar="INPUT", help="Where its input comes from: given, supply."),
    ] = None,
    transistor: Annotated[
        str | None,
        typer.Option(metavar="KIND", help="Kind of transistor: ideal, bipolar or mos, say."),
    ] = None,
    as_json: Json = False,
    out: Out = None,
) -> None:
    """Derive the formulas of a circuit and the resistor it needs.

    The loops, the currents, their temperature coefficients of first and second order, the rules
    for flat and for PTAT, and the coefficients that the perfect resistor would have. A word that
    is no circuit is answered with the list of those that are.
    """
    from tcopt.derive import render  # noqa: PLC0415
    from tcopt.explain import explain  # noqa: PLC0415

    question = None
    if study is not None:
        from tcopt.study import load_study  # noqa: PLC0415

        question = load_study(study)
    text = render(explain(topology, feed, transistor, question), style.value)
    if out is not None:
        from tcopt.show.folder import write_folder  # noqa: PLC0415

        write_folder(out, {_DERIVED[style]: text}, read=study)
    from tcopt.show.console import say  # noqa: PLC0415

    if as_json:
        from tcopt.show.json import json_text  # noqa: PLC0415

        say(json_text({"topology": topology, "as": style.value, "text": text}))
        return
    say(text if text.endswith("\n") else f"{text}\n")


@app.command()
def materials(
    process: Annotated[Path, typer.Argument(metavar="PROCESS", help="A process file (TOML).")],
    grade: Annotated[
        str | None,
        typer.Option(metavar="GRADE", help="Range of the drift figures, such as 'automotive 0'."),
    ] = None,
    low: Annotated[
        str | None,
        typer.Option("--from", metavar="TEMPERATURE", help="Or its cold end, such as '-40 degC'."),
    ] = None,
    high: Annotated[
        str | None,
        typer.Option("--to", metavar="TEMPERATURE", help="And its hot end, such as '125 degC'."),
    ] = None,
    as_json: Json = False,
    out: Out = None,
) -> None:
    """Show the materials of a process and the role of each.

    The role is that for a PTAT voltage: its current through a resistor is flat where the
    resistor's temperature coefficient matches 1/T. Without a range the figures are for the
    industrial one.
    """
    from tcopt.menu import menu, menu_range  # noqa: PLC0415
    from tcopt.study import load_process  # noqa: PLC0415

    found = menu(load_process(process), menu_range(grade, low, high))
    if out is not None:
        from tcopt.show.folder import menu_files, write_folder  # noqa: PLC0415

        write_folder(out, menu_files(found), read=process)
    from tcopt.show.json import menu_document  # noqa: PLC0415
    from tcopt.show.tables.menu import menu_report  # noqa: PLC0415

    _answer(lambda: menu_document(found), lambda: menu_report(found), as_json, out)


@app.command()
def design(study: StudyFile, as_json: Json = False, out: Out = None) -> None:
    """Find the resistors and ratios that come closest to the target.

    The input current, too, where it is left open. Shows the best designs beside the bound that
    no mix of the menu, joined as the study allows, can beat. With --out the best one is written
    as a finished study, winner.toml, which check reads. Several outputs of one reference branch,
    in tables [outputs.NAME], are designed and solved together.
    """
    from tcopt.mix import search  # noqa: PLC0415
    from tcopt.show.progress import progress  # noqa: PLC0415
    from tcopt.study import CascadeStudy, load_question  # noqa: PLC0415

    question = load_question(study)
    if isinstance(question, CascadeStudy):
        _design_several(question, study, as_json, out)
    with progress("Combinations") as report:
        result = search.design(question, report)
    if out is not None:
        from tcopt.show.folder import design_files, write_folder  # noqa: PLC0415

        write_folder(out, design_files(result, out), read=study)
    from tcopt.show.json import design_document  # noqa: PLC0415
    from tcopt.show.tables.design import design_report  # noqa: PLC0415

    _answer(lambda: design_document(result), lambda: design_report(result), as_json, out)
    _exit(result.verdict)


@app.command()
def check(study: StudyFile, as_json: Json = False, out: Out = None) -> None:
    """Check a finished design: drift, its causes, limit, traps.

    A design is finished when every resistor has its parts and every choice is a single value.
    Several outputs of one reference branch are solved together.
    """
    from tcopt import check as checking  # noqa: PLC0415
    from tcopt.study import CascadeStudy, load_question  # noqa: PLC0415

    question = load_question(study)
    if isinstance(question, CascadeStudy):
        _check_several(question, study, as_json, out)
    result = checking.check(question)
    if out is not None:
        from tcopt.show.folder import check_files, write_folder  # noqa: PLC0415

        write_folder(out, check_files(result), read=study)
    from tcopt.show.json import check_document  # noqa: PLC0415
    from tcopt.show.tables.check import check_report  # noqa: PLC0415

    _answer(lambda: check_document(result), lambda: check_report(result), as_json, out)
    _exit(result.assessment.limit)


def _design_several(
    question: CascadeStudy, study: Path, as_json: bool, out: Path | None
) -> NoReturn:
    """Design several outputs of one reference branch."""
    from tcopt.mix.cascade import design_cascade  # noqa: PLC0415
    from tcopt.show import cascade as shown  # noqa: PLC0415
    from tcopt.show.progress import progress  # noqa: PLC0415
    from tcopt.show.tables.cascade import cascade_design_report  # noqa: PLC0415

    with progress("Searches") as report:
        result = design_cascade(question, report)
    if out is not None:
        from tcopt.show.folder import write_folder  # noqa: PLC0415

        write_folder(out, shown.cascade_design_files(result, out), read=study)
    document, table = shown.cascade_design_document, cascade_design_report
    _answer(lambda: document(result), lambda: table(result), as_json, out)
    _exit(result.winner.limit)


def _check_several(
    question: CascadeStudy, study: Path, as_json: bool, out: Path | None
) -> NoReturn:
    """Check several outputs of one reference branch."""
    from tcopt.check_cascade import check_cascade  # noqa: PLC0415
    from tcopt.show import cascade as shown  # noqa: PLC0415
    from tcopt.show.tables.cascade import cascade_check_report  # noqa: PLC0415

    result = check_cascade(question)
    if out is not None:
        from tcopt.show.folder import write_folder  # noqa: PLC0415

        write_folder(out, shown.cascade_check_files(result), read=study)
    document, table = shown.cascade_check_document, cascade_check_report
    _answer(lambda: document(result), lambda: table(result), as_json, out)
    _exit(result.limit)


@app.command()
def spread(
    study: StudyFile,
    samples: Annotated[
        int | None, typer.Option(metavar="COUNT", help="Parts to draw, instead of the study's.")
    ] = None,
    seed: Annotated[
        int | None, typer.Option(metavar="NUMBER", help="Seed, instead of the study's.")
    ] = None,
    workers: Annotated[
        int | None,
        typer.Option(metavar="COUNT", help="Processes of this machine that share the work."),
    ] = None,
    scheduler: Annotated[
        str | None,
        typer.Option(metavar="ADDRESS", help="Or a Dask scheduler whose workers share it."),
    ] = None,
    as_json: Json = False,
    out: Out = None,
) -> None:
    """Draw parts of a finished design: what silicon makes of it.

    Quantiles, yield, causes and corners, before and after the study's trim. The same seed gives
    the same result whoever shares the work. The limit is met if the wanted share of the parts
    (yield in the study's table [spread], 99.7 % without) stays within it, after trim if there
    is one. Ctrl-C keeps what is finished, says that it is partial, and exits with 130.
    """
    from tcopt.show.progress import progress  # noqa: PLC0415
    from tcopt.spread import run  # noqa: PLC0415
    from tcopt.spread.crews import crew_for  # noqa: PLC0415
    from tcopt.study import load_study  # noqa: PLC0415

    question = run.asked(load_study(study), samples=samples, seed=seed)
    crew = crew_for(workers, scheduler)
    with progress("Parts") as report:
        result = run.spread(question, crew, report)
    if out is not None:
        from tcopt.show.folder import spread_files, write_folder  # noqa: PLC0415

        write_folder(out, spread_files(result), read=study)
    from tcopt.show.spread_json import spread_document  # noqa: PLC0415
    from tcopt.show.tables.spread import spread_report  # noqa: PLC0415

    _answer(lambda: spread_document(result), lambda: spread_report(result), as_json, out)
    if result.partial:
        raise typer.Exit(INTERRUPTED)
    _exit(result.limit)
