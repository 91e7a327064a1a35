"""The reports of `check` and `design` for several outputs of one reference branch."""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from tcopt.show.tables.check import check_report
from tcopt.show.tables.parts import heading, listed, new_table, row
from tcopt.show.words import mix_words, number, range_words, target_words
from tcopt.units import format_quantity

if TYPE_CHECKING:
    from tcopt.assess import Assessment
    from tcopt.check_cascade import CascadeCheck, CascadeVerdict
    from tcopt.design_cascade import CascadeCandidate, CascadeDesign
    from tcopt.study import CascadeStudy

__all__ = ["cascade_check_report", "cascade_design_report"]

_TOGETHER = (
    "Figures against the target, all outputs solved together: deviation = max |I/I_target - 1|; "
    "box = (max - min)/(value at T_ref x (T_max - T_min)) of I/I_target."
)


def cascade_check_report(result: CascadeCheck) -> RenderableType:
    """Return the report of `check`: all outputs side by side, then each."""
    found = {name: each.assessment for name, each in result.outputs.items()}
    current = next(iter(found.values())).operation.choices.input_current
    parts: list[RenderableType] = [
        *_title(result.study, current),
        heading(f"Outputs {range_words(result.study.shared)}"),
        _outputs(found),
        Text(_TOGETHER),
        _verdict(result.limit),
    ]
    if result.warnings:
        parts += [heading("Warnings for the outputs together"), listed(result.warnings)]
    for each in result.outputs.values():
        parts += [Text(), check_report(each)]
    return Group(*parts)


def cascade_design_report(result: CascadeDesign) -> RenderableType:
    """Return the report of `design`: the best design of all outputs, the inputs, then each."""
    from tcopt.show.tables.design import design_report  # noqa: PLC0415  what check does not need

    best = result.winner
    parts: list[RenderableType] = [
        *_title(result.study, best.input_current),
        heading(f"The best design, {range_words(result.study.shared)}"),
        _outputs(best.outputs),
        Text(_TOGETHER),
        _verdict(best.limit),
    ]
    if len(result.designs) > 1:
        parts += [
            heading("Input currents, best first"),
            _inputs(result),
            Text(
                "Ranked by the output whose figure is largest relative to its limit; outputs "
                "without a limit decide, by their deviation, between equals."
            ),
        ]
    if result.warnings:
        parts += [heading("Warnings for the outputs together"), listed(result.warnings)]
    parts += [
        Text(),
        Text(
            "Below, the designs of each output: they, and their bound, hold with the other "
            "outputs as in the best design."
        ),
    ]
    for each in result.outputs.values():
        parts += [Text(), design_report(each)]
    return Group(*parts)


def _title(study: CascadeStudy, input_current: float | None) -> list[RenderableType]:
    made = study.shared.circuit
    words = [f"{made.topology}, {len(study.outputs)} outputs on one reference branch"]
    if input_current is not None:
        words.append(f"input {format_quantity(input_current, 'A')}")
    if made.supply is not None:
        words.append(f"supply {format_quantity(made.supply, 'V')}")
    if made.effects:
        words.append(f"with {' and '.join(made.effects)}")
    if made.base_current == "through follower":
        words.append("base currents through a follower")
    return [Text(study.title, style="bold"), Text(", ".join(words))]


def _outputs(outputs: Mapping[str, Assessment]) -> Table:
    table = new_table(
        "output", "target", "area\nratio", "its resistor", "deviation\nppm", "box\nppm/K",
        "of its\nlimit", "limit", numbers=(2, 4, 5, 6),
    )  # fmt: skip
    for name, found in outputs.items():
        operation, left, limit = found.operation, found.residual_drift, found.limit
        mix = operation.mixes.get("output")
        row(
            table,
            name,
            target_words(operation.study).removesuffix(" at T_ref"),
            f"{operation.choices.area_ratio:.6g}",
            "none" if mix is None else mix_words(mix, operation.study.search.digits),
            number(left.deviation_ppm),
            number(left.box_ppm_per_K),
            "-" if limit is None else _percent(limit.value / limit.bound),
            "-" if limit is None else ("met" if limit.met else "not met"),
        )
    return table


def _percent(relative: float) -> str:
    return f"{number(100 * relative, 3)} %"


def _verdict(limit: CascadeVerdict | None) -> Text:
    if limit is None:
        return Text("No limit is set.")
    where = f"{limit.worst} is worst, at {_percent(limit.relative)} of its limit"
    if limit.met:
        return Text(f"All limits met: {where}.", style="bold green")
    return Text(f"Limits not met: {where}.", style="bold red")


def _inputs(result: CascadeDesign) -> Table:
    names = list(result.study.outputs)
    columns = [f"{name}\n{_unit(result.winner, name)}" for name in names]
    table = new_table("", "input", *columns, "worst", numbers=(0, 1, *range(2, 2 + len(names))))
    for index, candidate in enumerate(result.designs):
        row(
            table,
            str(index + 1),
            format_quantity(candidate.input_current or 0.0, "A"),
            *(_figure(candidate.outputs[name]) for name in names),
            "" if candidate.limit is None else candidate.limit.worst,
        )
    return table


def _unit(candidate: CascadeCandidate, name: str) -> str:
    return "ppm" if candidate.outputs[name].limit is None else "% of limit"


def _figure(found: Assessment) -> str:
    if found.limit is None:
        return number(found.residual_drift.deviation_ppm)
    return number(100 * found.limit.value / found.limit.bound, 3)
