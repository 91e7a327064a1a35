"""Results for several outputs of one reference branch: documents and files."""

from __future__ import annotations

import csv
from io import StringIO
from pathlib import Path
from typing import TYPE_CHECKING

from tcopt.show.folder import Files, check_files, design_files
from tcopt.show.json import (
    Document,
    check_document,
    design_document,
    figures_document,
    json_text,
    study_heading,
)
from tcopt.show.words import mix_words

if TYPE_CHECKING:
    from tcopt.check_cascade import CascadeCheck, CascadeVerdict
    from tcopt.design_cascade import CascadeDesign
    from tcopt.study import CascadeStudy

__all__ = [
    "cascade_check_document", "cascade_check_files", "cascade_design_document",
    "cascade_design_files", "cascade_designs_csv",
]  # fmt: skip


_COLUMNS = (
    "rank", "input current [A]", "output", "resistors", "area ratio", "deviation [ppm]",
    "box [ppm/K]", "endpoint [ppm/K]", "slope [ppm/K]", "of its limit [1]", "limit met",
)  # fmt: skip


def cascade_check_document(result: CascadeCheck) -> Document:
    """Return what `check` found; ``outputs`` has what a single output has, each by its name."""
    return {
        **_heading(result.study),
        "outputs": {name: check_document(found) for name, found in result.outputs.items()},
        "limit": _limit(result.limit),
        "base_share": None if result.base_share is None else list(result.base_share),
        "warnings": list(result.warnings),
    }


def cascade_design_document(result: CascadeDesign) -> Document:
    """Return what `design` found, complete designs best first, and each output beside the best."""
    return {
        **_heading(result.study),
        "designs": [
            {
                "input_current_A": candidate.input_current,
                "outputs": {
                    name: figures_document(found) for name, found in candidate.outputs.items()
                },
                "limit": _limit(candidate.limit),
            }
            for candidate in result.designs
        ],
        "outputs": {name: design_document(found) for name, found in result.outputs.items()},
        "limit": _limit(result.winner.limit),
        "warnings": list(result.warnings),
        "examined": result.examined,
        "skipped": result.skipped,
    }


def cascade_check_files(result: CascadeCheck) -> Files:
    """Return the document, and each output's sweep and pictures with its name in front."""
    files: Files = {"check.json": json_text(cascade_check_document(result))}
    for name, found in result.outputs.items():
        files |= _named(name, check_files(found), ("check.json",))
    return files


def cascade_design_files(result: CascadeDesign, folder: Path) -> Files:
    """Return the document, the tables, the winner's study, and each output's pictures.

    ``folder`` is where they will stand: the winner names its process from there.
    """
    from tcopt.mix.cascade import finished_cascade  # noqa: PLC0415  only where files are wanted
    from tcopt.study import study_text  # noqa: PLC0415

    files: Files = {
        "design.json": json_text(cascade_design_document(result)),
        "designs.csv": cascade_designs_csv(result),
        "winner.toml": study_text(finished_cascade(result.study, result.winner), folder),
    }
    for name, found in result.outputs.items():
        files |= _named(name, design_files(found, folder), ("design.json", "winner.toml"))
    return files


def cascade_designs_csv(result: CascadeDesign) -> str:
    """Return the complete designs, a row for each output of each, best first; values in SI."""
    text = StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(_COLUMNS)
    digits = result.study.shared.search.digits
    for rank, candidate in enumerate(result.designs, start=1):
        for name, found in candidate.outputs.items():
            left, limit = found.residual_drift, found.limit
            mixes = found.operation.mixes.items()
            writer.writerow(
                [
                    rank,
                    candidate.input_current,
                    name,
                    "; ".join(f"{slot}: {mix_words(mix, digits)}" for slot, mix in mixes),
                    found.operation.choices.area_ratio,
                    left.deviation_ppm,
                    left.box_ppm_per_K,
                    left.endpoint_ppm_per_K,
                    left.slope_ppm_per_K,
                    limit and limit.value / limit.bound,
                    limit and ("yes" if limit.met else "no"),
                ]
            )
    return text.getvalue()


def _heading(study: CascadeStudy) -> Document:
    return study_heading(study.shared) | {"title": study.title}


def _limit(limit: CascadeVerdict | None) -> Document | None:
    if limit is None:
        return None
    return {"met": limit.met, "output": limit.worst, "relative": limit.relative}


def _named(name: str, files: Files, but: tuple[str, ...]) -> Files:
    return {f"{name}_{file}": content for file, content in files.items() if file not in but}
