"""From files to a process or a study; every failure is one `InputError`."""

from __future__ import annotations

import tomllib
from collections.abc import Callable
from functools import partial
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from tcopt.errors import InputError
from tcopt.files import read_text
from tcopt.study.cascade import CascadeStudy, key_in_cascade, single_studies
from tcopt.study.choices import FromFile
from tcopt.study.curve import read_curve
from tcopt.study.gate import INTERNAL, refused_input
from tcopt.study.process import Process
from tcopt.study.question import SLOT_TAGS
from tcopt.study.study import Study
from tcopt.study.transistors import TRANSISTOR_TAGS
from tcopt.units import shown

__all__ = ["load_process", "load_question", "load_study"]

_LONGEST_PATH = 1000
_LONGEST_LINE = 8000


def _read_toml(path: Path) -> dict[str, Any]:
    text = read_text(path)
    # The parser's time and memory go with the square of a dotted key's length.
    for number, line in enumerate(text.splitlines(), 1):
        if len(line) > _LONGEST_LINE:
            raise InputError(
                f"{path}: line {number}: found {len(line)} characters; "
                f"accepted: lines of at most {_LONGEST_LINE}"
            )
    try:
        return tomllib.loads(text)
    except RecursionError:
        problem = "values nested too deeply"
    except ValueError as error:  # TOMLDecodeError, and numbers of too many digits
        problem = str(error)
    raise InputError(f"{path}: found broken TOML: {problem}; accepted: a TOML file")


def _beside(path: Path, text: object, key: str, accepted: str) -> Path:
    if not isinstance(text, str) or not 0 < len(text) <= _LONGEST_PATH or not text.isprintable():
        raise InputError(f"{path}: {key}: found {shown(text)}; accepted: {accepted}")
    return path.parent / text


def load_process(path: str | Path) -> Process:
    """Return the process in a TOML file.

    Raises
    ------
    InputError : anything in the file, or the file itself, cannot be used
    """
    path = Path(path)
    data = {**_read_toml(path), f"{INTERNAL}path": path}
    try:
        return Process.model_validate(data, by_alias=True, by_name=False, context=FromFile())
    except ValidationError as error:
        raise refused_input(str(path), error, TRANSISTOR_TAGS) from None


def load_study(path: str | Path) -> Study:
    """Return the study in a TOML file, with the process that it names.

    Raises
    ------
    InputError : anything in either file, or a file itself, cannot be used
    """
    question = load_question(path)
    if isinstance(question, CascadeStudy):
        raise InputError(
            f"{path}: outputs: found several outputs; accepted: a study of one output, with a "
            "table [target]; only 'check' and 'design' take several"
        )
    return question


def load_question(path: str | Path) -> Study | CascadeStudy:
    """Return the study in a TOML file, be it of one output or of several.

    Raises
    ------
    InputError : anything in either file, or a file itself, cannot be used
    """
    path = Path(path)
    data = _read_toml(path)
    several: dict[str, dict[str, Any]] | None = None
    if "outputs" in data:
        try:
            several = single_studies(data)
        except InputError as error:
            raise InputError(f"{path}: {error}") from None
    process: Process | None = None
    if "process" in data:
        wanted = "the path of the process's file, from this file's folder"
        process = load_process(_beside(path, data["process"], "process", wanted))
    if several is None:
        return _study(path, data, process)
    outputs = {
        name: _study(path, tables, process, partial(key_in_cascade, name))
        for name, tables in several.items()
    }
    try:
        return CascadeStudy(data["title"], outputs, path)
    except InputError as error:
        raise InputError(f"{path}: {error}") from None


def _study(
    path: Path,
    tables: dict[str, Any],
    process: Process | None,
    renamed: Callable[[str], str] = str,
) -> Study:
    """Return the study in these tables of a file; ``renamed`` says how its keys stand there."""
    data = {**tables, f"{INTERNAL}path": path}
    if process is not None:
        data["process"] = process
    target = data.get("target")
    if isinstance(target, dict):
        data["target"] = target = {**target, f"{INTERNAL}curve": None}
        if "file" in target:
            wanted = "the path of a CSV file, from this file's folder"
            file = _beside(path, target["file"], renamed("target.file"), wanted)
            target |= {f"{INTERNAL}curve": read_curve(file), "file": file.resolve()}
    try:
        return Study.model_validate(data, by_alias=True, by_name=False, context=FromFile(process))
    except ValidationError as error:
        raise refused_input(str(path), error, SLOT_TAGS | TRANSISTOR_TAGS, renamed) from None
