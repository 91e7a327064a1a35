"""The report of `spread`."""

from __future__ import annotations

from typing import TYPE_CHECKING

from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from tcopt.show.spread_words import (
    FIGURE,
    corner_words,
    insertion_words,
    sample_words,
    share_words,
    verdict_sentence,
)
from tcopt.show.tables.parts import heading, listed, new_table, row
from tcopt.show.words import circuit_words, mix_words, number, range_words, target_words
from tcopt.spread.figures import FIGURES
from tcopt.spread.result import LEVELS
from tcopt.units import format_quantity

if TYPE_CHECKING:
    from tcopt.spread.result import SpreadResult

__all__ = ["spread_report"]

_MOST_CAUSES = 8
_MOST_CORNERS = 6
_LEAST_SHARE = 0.001
_TWO_SIDED, _ONE_SIDED = (0.0015, 0.5, 0.9985), (0.5, 0.997)
"""Quantiles in the report: of what may go either way, and of what is never negative."""


def spread_report(result: SpreadResult) -> RenderableType:
    """Return the report of `spread`: figures before and after trim, verdict, causes, corners."""
    study, choices = result.study, result.operation.choices
    circuit = circuit_words(study, choices.area_ratio, choices.mirror_ratio, choices.input_current)
    mixes = "; ".join(f"{slot}: {mix_words(mix)}" for slot, mix in result.operation.mixes.items())
    parts: list[RenderableType] = [
        Text(study.title, style="bold"),
        Text(f"{circuit}; target {target_words(study)}"),
        Text(mixes),
        heading(f"{sample_words(result)}, {range_words(study)}"),
        _figures(result),
        Text(
            "Box = (max - min)/(value at T_ref x (T_max - T_min)); deviation = max |I/I_target - "
            "1|; slope at T_ref. A percentage is a quantile; 99.7 % of all parts lie between "
            "0.15 % and 99.85 %."
        ),
        _verdict(result),
    ]
    if len(result.stages) > 1:
        parts += [heading("Trim"), _trim(result), Text(_slope_words(result))]
    if any(stage.causes for stage in result.stages):
        parts += [heading("Causes, by their share of the variance"), _causes(result)]
    parts += [heading(_corner_heading(result)), _corners(result), Text(_worst_words(result))]
    parts += [heading("Rank correlation between figures of a part"), _correlation(result)]
    if result.missing:
        parts += [heading("Not in these figures, or taken at its worst"), listed(result.missing)]
    if result.warnings:
        parts += [heading("Warnings"), listed(result.warnings)]
    return Group(*parts)


def _shown(name: str, value: float) -> str:
    if name == "current":
        return format_quantity(value, "A")
    return number(FIGURE[name].factor * value, signed=name == "slope")


def _stage_headings(result: SpreadResult) -> list[str]:
    return [stage.name.replace(" ", "\n") for stage in result.stages]


def _figures(result: SpreadResult) -> Table:
    names = ("figure", "", "as\nstated", *_stage_headings(result))
    table = new_table(*names, numbers=range(2, len(names)))
    for k, name in enumerate(FIGURES):
        shown = FIGURE[name]
        label = shown.words if name == "current" else f"{shown.words}, {shown.unit}"
        levels = _TWO_SIDED if name in {"current", "slope"} else _ONE_SIDED
        typical = _shown(name, float(result.corners.typical[0, k]))
        for level in levels:
            at = LEVELS.index(level)
            cells = [_shown(name, float(s.quantiles[name][at])) for s in result.stages]
            words = "median" if level == 0.5 else f"{100 * level:g} %"
            first, stated = level == levels[0], typical if level == 0.5 else ""
            row(table, label if first else "", words, stated, *cells)
        if name == "current":
            cells = [share_words(s.deviation[name] / s.mean[name]) for s in result.stages]
            row(table, "", "sigma", "", *cells)
    if result.limit is not None:
        table.add_section()
        for label, words, attribute in (
            ("yield, parts that pass", "drawn", "share"),
            ("", "at least", "low"),
            ("", "at most", "high"),
        ):
            cells = [f"{100 * getattr(stage.passed, attribute):.4g} %" for stage in result.stages]
            row(table, label, words, "", *cells)
    return table


def _verdict(result: SpreadResult) -> Text:
    words = f"{verdict_sentence(result)}."
    if result.limit is None:
        return Text(words)
    return Text(words, style="bold green" if result.limit.met else "bold red")


def _trim(result: SpreadResult) -> Table:
    table = new_table(
        "stage", "scales", "codes used", "of", "out of\nrange", "slope\nppm/K per %",
        numbers=(4, 5),
    )  # fmt: skip
    for stage in result.stages[1:]:
        for index, effect in enumerate(stage.trim):
            codes = effect.insertion.codes
            used = [value for value, count in effect.codes if count]
            ends = (min(used), max(used))
            text = "{:+.0f} to {:+.0f}" if codes else "{:.4f} to {:.4f}"
            row(
                table,
                stage.name if index == 0 else "",
                insertion_words(effect.insertion),
                text.format(*ends),
                "{:+d} to {:+d}".format(*codes) if codes else "continuous",
                share_words(effect.beyond),
                number(1e6 * effect.slope_per_percent, 3, signed=True),
            )
    return table


def _slope_words(result: SpreadResult) -> str:
    changes = (
        f"{stage.name} {number(1e6 * stage.slope_change[0], 3, signed=True)} ppm/K on average, "
        f"sigma {number(1e6 * stage.slope_change[1], 3)} ppm/K"
        for stage in result.stages[1:]
    )
    return f"What the trim does to the slope: {'; '.join(changes)}."


def _causes(result: SpreadResult) -> Table:
    """Tabulate the largest causes, of the current untrimmed and of the judged figure."""
    judged = FIGURE[result.judged].words.split(" ")[0]
    columns = [(0, "current", "current\nuntrimmed")]
    columns += [
        (index, result.judged, f"{judged}\n{words}")
        for index, words in enumerate(_stage_headings(result))
    ]
    shares = [
        {cause.variate.name: cause.share for cause in result.stages[index].causes.get(name, ())}
        for index, name, _ in columns
    ]
    names = ("cause", *(words for *_, words in columns))
    table = new_table(*names, numbers=range(1, len(names)))
    most = {name: max(share[name] for share in shares) for name in shares[0]}
    top = sorted(most, key=lambda name: -most[name])[:_MOST_CAUSES]
    for name in sorted(top, key=lambda name: [-shares[-1][name], -most[name]]):
        if most[name] >= _LEAST_SHARE:
            row(table, name, *(share_words(share[name]) for share in shares))
    table.add_section()
    rest = (max(0.0, 1 - sum(share[name] for name in top)) for share in shares)
    row(table, "others, and what works only together", *map(share_words, rest))
    return table


def _corner_heading(result: SpreadResult) -> str:
    shown = FIGURE[result.judged]
    return (
        f"One cause at a time at {result.corners.sigma:g} sigma: {shown.words}, {shown.unit}, "
        f"{result.stages[-1].name}"
    )


def _corners(result: SpreadResult) -> Table:
    which = FIGURES.index(result.judged)
    sigma = result.corners.sigma
    table = new_table("cause", f"+{sigma:g} sigma", f"-{sigma:g} sigma", numbers=(1, 2))
    for pair in result.corners.single[:_MOST_CORNERS]:
        cells = (_shown(result.judged, float(corner.figures[-1, which])) for corner in pair)
        row(table, pair[0].signs[0][0].name, *cells)
    return table


def _worst_words(result: SpreadResult) -> str:
    which = FIGURES.index(result.judged)
    worst = result.corners.worst[-1]
    value = _shown(result.judged, float(worst.figures[-1, which]))
    stated = _shown(result.judged, float(result.corners.typical[-1, which]))
    return (
        f"As stated: {stated}. Worst corner, all at {result.corners.sigma:g} sigma at once, a "
        f"bound that no part will meet: {value} {FIGURE[result.judged].unit} at "
        f"{corner_words(worst.signs, _MOST_CORNERS)}."
    )


def _correlation(result: SpreadResult) -> Table:
    names = ("", *_stage_headings(result))
    table = new_table(*names, numbers=range(1, len(names)))
    for other in ("residual_box", "slope", "deviation"):
        at = FIGURES.index("current"), FIGURES.index(other)
        cells = (f"{stage.correlation[at]:+.2f}" for stage in result.stages)
        row(table, f"current at T_ref and {FIGURE[other].words}", *cells)
    return table
