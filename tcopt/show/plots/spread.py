"""What silicon makes of a design: fan of currents, histograms, causes, codes of a trim."""

from __future__ import annotations

from textwrap import fill
from typing import TYPE_CHECKING, Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.ticker import FuncFormatter, LogLocator, NullFormatter

from tcopt.arrays import Array
from tcopt.show.plots.style import (
    BLUE,
    GREEN,
    GREY,
    INK,
    ORANGE,
    SKY,
    VERMILLION,
    drawn,
    new_figure,
    prefixed,
    pretty,
    temperature_axis,
    with_title,
)
from tcopt.show.spread_words import FIGURE, insertion_words, sample_words, verdict_sentence
from tcopt.show.words import limit_words, number, range_words, target_words
from tcopt.spread.figures import FIGURES
from tcopt.spread.result import LEVELS

if TYPE_CHECKING:
    from tcopt.spread.result import SpreadResult, Stage

__all__ = ["codes_picture", "fan_picture", "histogram_picture", "spread_causes_picture"]

_ZERO_CELSIUS = 273.15
_BANDS = ((0.0015, 0.9985, "#d6dde4"), (0.025, 0.975, "#a9bac9"), (0.16, 0.84, "#738ba1"))
"""Quantiles of each band and its shade of grey, widest first."""
_SLICES = 70
_OUTERMOST = 0.9995
"""Quantile up to which a histogram is drawn; what lies further is told."""
_ALIKE = 1e-9
"""Relative width up to which a figure of all parts is one value and rounding."""
_FAR_APART = 8.0
"""Times between the medians of two stages from which on their axis is logarithmic."""
_MOST_BARS = 128
"""Codes of a trim beyond which neighbours share a bar."""
_MOST_CAUSES = 9
_LINE = 26
"""Characters after which a cause's name is broken."""
_LOOKS: tuple[dict[str, Any], ...] = (
    {"color": VERMILLION, "linestyle": "-", "linewidth": 1.8},
    {"color": BLUE, "linestyle": "--", "linewidth": 1.8},
    {"color": INK, "linestyle": ":", "linewidth": 2.2},
)
_BARS: tuple[dict[str, Any], ...] = (
    {"facecolor": VERMILLION, "hatch": ""},
    {"facecolor": SKY, "hatch": "///"},
    {"facecolor": BLUE, "hatch": "..."},
)
"""How the stages look, untrimmed first; lines differ in dash, bars in hatch."""


def _axes_below(height: float, rows: int, *, alike: bool = False) -> tuple[Figure, list[Axes]]:
    """Return a figure with axes under each other, the horizontal one common to all or not."""
    figure, _ = new_figure(height)
    figure.clear()
    made = figure.subplots(rows, 1, sharex=alike, squeeze=False)
    return figure, list(made[:, 0])


@drawn
def fan_picture(result: SpreadResult) -> Figure:
    """Return the bands of the current against temperature, untrimmed and after each insertion."""
    study, stages = result.study, result.stages
    figure, every = _axes_below(2.0 + 2.5 * len(stages), len(stages), alike=True)
    top = max(float(np.nanmax(stage.fan.quantiles)) for stage in stages)
    scale, unit = prefixed(top, "A")
    target = _target(result)
    for axes, stage in zip(every, stages, strict=True):
        _fan(axes, stage, scale)
        celsius = stage.fan.temperature - _ZERO_CELSIUS
        axes.plot(celsius, scale * target, color=ORANGE, linewidth=2.4, label="target", zorder=4)
        _allowed(axes, result, celsius, scale * target)
        axes.set_ylabel(f"{stage.name}\nOutput current [{unit}]")
        axes.ticklabel_format(axis="y", useOffset=False)
        axes.set_xlim(celsius[0], celsius[-1])
    temperature_axis(every[-1])
    every[0].legend(loc="upper left", bbox_to_anchor=(1.01, 1.0), borderaxespad=0)
    with_title(
        figure,
        every[0],
        verdict_sentence(result),
        f"{study.title}. {sample_words(result)}; target {pretty(target_words(study))}, "
        f"{pretty(range_words(study))}",
        f"Bands hold the middle 99.7, 95 and 68 % of the parts at each temperature, of the first "
        f"{stages[0].fan.parts} parts. {_allowed_words(result)}{_scale_words(len(stages))}",
    )
    return figure


def _target(result: SpreadResult) -> Array:
    from tcopt.targets import target_current  # noqa: PLC0415

    study = result.study
    grid = result.stages[0].fan.temperature
    return target_current(study.target, study.range.reference).current(grid)


def _fan(axes: Axes, stage: Stage, scale: float) -> None:
    celsius = stage.fan.temperature - _ZERO_CELSIUS
    quantile = dict(zip(LEVELS, scale * stage.fan.quantiles, strict=True))
    for low, high, shade in _BANDS:
        label = f"{100 * (high - low):g} % of the parts"
        axes.fill_between(
            celsius, quantile[low], quantile[high], facecolor=shade, linewidth=0, label=label
        )
    axes.plot(celsius, quantile[0.5], color=INK, linewidth=1.6, label="median", zorder=5)


def _half_height(result: SpreadResult) -> float | None:
    """Return half of what the limit allows, relative to the target [1]."""
    limit = result.study.target.limit
    if limit is None:
        return None
    over = result.study.range
    return limit.value if limit.kind == "deviation" else limit.value * (over.high - over.low) / 2


def _allowed(axes: Axes, result: SpreadResult, celsius: Array, target: Array) -> None:
    half = _half_height(result)
    if half is None:
        return
    for side in (1 - half, 1 + half):
        label = "limit" if side > 1 else None
        axes.plot(
            celsius,
            side * target,
            color=GREEN,
            linestyle="--",
            linewidth=1.4,
            zorder=4,
            label=label,
        )


def _allowed_words(result: SpreadResult) -> str:
    limit = result.study.target.limit
    if limit is None:
        return ""
    if limit.kind == "deviation":
        return "Dashed: the limit about the target. "
    return "Dashed: the height that the limit (box) allows, laid about the target. "


def _scale_words(stages: int) -> str:
    return "Each picture has its own scale of current." if stages > 1 else ""


@drawn
def histogram_picture(result: SpreadResult) -> Figure:
    """Return histograms of the judged figure and of the current, before and after trim."""
    figure, every = _axes_below(6.4, 2)
    for axes, name in zip(every, (result.judged, "current"), strict=True):
        _histogram(axes, result, name)
    bound = _bound(result)
    if bound is not None:
        every[0].axvline(bound, color=GREEN, linestyle="--", linewidth=1.8)
        every[0].annotate(
            "limit", (bound, 1), xycoords=("data", "axes fraction"), xytext=(3, -10),
            textcoords="offset points", color=INK,
        )  # fmt: skip
    every[0].legend(loc="upper left", bbox_to_anchor=(1.01, 1.0), borderaxespad=0)
    with_title(
        figure,
        every[0],
        verdict_sentence(result),
        f"{result.study.title}. {sample_words(result)}, {pretty(range_words(result.study))}",
        _pass_words(result),
    )
    return figure


def _bound(result: SpreadResult) -> float | None:
    limit = result.study.target.limit
    return None if limit is None else FIGURE[result.judged].factor * limit.value


def _pass_words(result: SpreadResult) -> str:
    if result.limit is None:
        return ""
    words = (
        f"{stage.name} {100 * stage.passed.share:.4g} % ({100 * stage.passed.low:.4g} to "
        f"{100 * stage.passed.high:.4g} %)"
        for stage in result.stages
        if stage.passed is not None
    )
    allowed = limit_words(result.limit.figure, result.limit.bound)
    return f"Pass the limit of {allowed}, with the 95 % interval: {'; '.join(words)}."


def _histogram(axes: Axes, result: SpreadResult, name: str) -> None:
    k = FIGURES.index(name)
    shown = FIGURE[name]
    columns = [figures[np.isfinite(figures).all(axis=1), k] for figures in result.sample.figures]
    scale, unit = shown.factor, shown.unit
    if name == "current":
        scale, unit = prefixed(max(float(column.max()) for column in columns), "A")
    medians = [float(np.median(column)) for column in columns]
    logarithmic = (
        name != "current"
        and min(float(np.quantile(column, 1 - _OUTERMOST)) for column in columns) > 0
        and max(medians) > _FAR_APART * min(medians)
    )
    cut = np.geomspace if logarithmic else np.linspace
    spans = [
        [scale * float(np.quantile(column, q)) for q in (1 - _OUTERMOST, _OUTERMOST)]
        for column in columns
    ]
    slim = max(high - low for low, high in spans) / (2 * _SLICES)
    ends: list[float] = []
    for (low, high), column, stage, look in zip(
        spans, columns, result.stages, _LOOKS, strict=False
    ):
        if high - low > _ALIKE * abs(high):
            edges = cut(low, high, _SLICES + 1)
        else:
            half = max(slim, 2 * _ALIKE * abs(low)) or 1.0
            edges = np.array([low - half, high + half])
        counts = np.histogram(scale * column, edges)[0]
        height = counts / max(1, counts.max())
        axes.stairs(height, edges, label=stage.name, **look)
        axes.stairs(height, edges, fill=True, facecolor=look["color"], alpha=0.12)
        ends += [low, high]
    bound = _bound(result)
    if name == result.judged and bound is not None:
        ends.append(bound)
    if logarithmic:
        axes.set_xscale("log")
        axes.xaxis.set_major_locator(LogLocator(subs=(1.0, 2.0, 5.0)))
        axes.xaxis.set_major_formatter(FuncFormatter(lambda x, _: f"{x:.10g}"))
        axes.xaxis.set_minor_formatter(NullFormatter())
        axes.set_xlim(min(ends) / 1.15, 1.15 * max(ends))
    else:
        pad = 0.04 * (max(ends) - min(ends)) or 0.01 * max(ends) or 1.0
        axes.set_xlim(min(ends) - pad, max(ends) + pad)
    axes.set_ylim(0)
    axes.set_xlabel(f"{shown.words[0].upper()}{shown.words[1:]} [{unit}]")
    axes.set_ylabel("Parts, to the fullest bin [1]")


@drawn
def spread_causes_picture(result: SpreadResult) -> Figure:
    """Return the largest causes of the judged figure's variance at each stage, as bars."""
    shares = [
        {cause.variate.name: cause.share for cause in stage.causes[result.judged]}
        for stage in result.stages
    ]
    most = {name: max(share[name] for share in shares) for name in shares[0]}
    names = sorted(most, key=lambda name: -most[name])[:_MOST_CAUSES]
    figure, axes = new_figure(2.4 + 0.42 * len(names))
    high = 0.8 / len(shares)
    for index, (share, stage, look) in enumerate(zip(shares, result.stages, _BARS, strict=False)):
        at = np.arange(len(names)) + (index - (len(shares) - 1) / 2) * high
        axes.barh(
            at, [100 * share[name] for name in names], high, label=stage.name,
            edgecolor=INK, linewidth=0.6, **look,
        )  # fmt: skip
    axes.set_yticks(np.arange(len(names)), [fill(pretty(name), _LINE) for name in names])
    axes.invert_yaxis()
    axes.grid(visible=False, axis="y")
    axes.set_xlabel(f"Share of the variance of the {FIGURE[result.judged].words} [%]")
    axes.legend(loc="lower right")
    last = max(shares[-1], key=lambda name: shares[-1][name])
    after = "" if len(shares) == 1 else f", {result.stages[-1].name}"
    with_title(
        figure,
        axes,
        f"Largest cause, {100 * shares[-1][last]:.3g} % of the variance: {pretty(last)}{after}",
        "",
        f"{result.study.title}. {sample_words(result)}, {pretty(range_words(result.study))}. Each "
        "by itself (first-order index); what is missing to 100 % works only together.",
    )
    return figure


@drawn
def codes_picture(result: SpreadResult) -> Figure:
    """Return how many parts got which code at each insertion of the last stage."""
    effects = result.stages[-1].trim
    figure, every = _axes_below(2.0 + 2.2 * len(effects), len(effects))
    drawn_parts = result.sample.drawn
    for axes, effect in zip(every, effects, strict=True):
        codes = effect.insertion.codes
        values, counts = (np.array(column) for column in zip(*effect.codes, strict=True))
        wide = float(np.diff(values).min()) if len(values) > 1 else 1.0
        together = 1 if codes is None else -(-(codes[1] - codes[0] + 1) // _MOST_BARS)
        if together > 1:
            bar = np.floor((values - values.min()) / together).astype(int)
            counts = np.bincount(bar, weights=counts)
            values = values.min() + (np.arange(len(counts)) + 0.5) * together - 0.5
            wide = float(together)
        axes.bar(
            values, 100 * counts / drawn_parts, wide, facecolor=SKY, edgecolor=INK, linewidth=0.4
        )
        reach = effect.insertion.reach
        ends = (codes[0] - 0.5, codes[1] + 0.5) if codes else (1 - reach, 1 + reach)
        for end in ends:
            axes.axvline(end, color=VERMILLION, linestyle="--", linewidth=1.4)
        pad = 0.03 * (ends[1] - ends[0])
        axes.set_xlim(ends[0] - pad, ends[1] + pad)
        what = "Code" if codes else "Scale"
        words = insertion_words(effect.insertion).replace("+-", "\N{PLUS-MINUS SIGN}")
        axes.set_xlabel(f"{what} of {pretty(words)}")
        axes.set_ylabel("Parts [%]" if together == 1 else f"Parts [%],\nin {together} codes")
        axes.axvline(0 if codes else 1, color=GREY, linewidth=0.9, linestyle=":")
    worst = max(effect.beyond for effect in effects)
    with_title(
        figure,
        every[0],
        f"The trim reaches {number(100 * (1 - worst))} % of the parts",
        f"{result.study.title}. {sample_words(result)}; {result.stages[-1].name}",
        "Dashed: the ends of the range; dotted: the part as it is.",
    )
    return figure
