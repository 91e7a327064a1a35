"""Drift against the ratio of a two-part mix: the optimum, and how much it forgives."""

from __future__ import annotations

import numpy as np
from matplotlib.figure import Figure
from matplotlib.ticker import LogLocator

from tcopt.assess import Assessment
from tcopt.mix.ratio import RatioSweep
from tcopt.show.plots.labels import Label, place
from tcopt.show.plots.style import (
    BLUE,
    GREEN,
    INK,
    VERMILLION,
    drawn,
    new_figure,
    pretty,
    with_title,
)
from tcopt.show.words import DEFINITIONS, figure_words, limit_words, range_words

__all__ = ["ratio_picture"]

_LOGARITHMIC = 12.0
"""Largest figure, in smallest ones, from which on the axis is logarithmic."""


@drawn
def ratio_picture(sweep: RatioSweep, found: Assessment) -> Figure:
    """Return the drift of a design against the ratio of one of its two-part mixes."""
    study = found.operation.study
    name = sweep.figure.split("_", 1)[0]
    unit, definition = DEFINITIONS[name]
    share, drift = 100 * sweep.share, sweep.drift
    figure, axes = new_figure()
    axes.plot(share, drift, color=INK, linewidth=1.8, zorder=3)
    least, most = float(np.nanmin(drift)), float(np.nanmax(drift))
    least = min(least, sweep.best_drift)
    if least > 0 and most > _LOGARITHMIC * least:
        axes.set_yscale("log")
        axes.set_ylim(least / 1.8, most * 1.5)
        axes.yaxis.set_major_locator(LogLocator(subs=(1, 2, 5)))
        axes.yaxis.set_major_formatter(lambda value, _: f"{value:g}")
    else:
        axes.set_ylim(0, 1.15 * most)
    low, high = 100 * sweep.low, 100 * sweep.high
    axes.axvspan(low, high, facecolor=GREEN, alpha=0.18, zorder=0)
    axes.axhline(sweep.bound, color=GREEN, linestyle="--", linewidth=1.4, zorder=2)
    best = 100 * sweep.best
    axes.plot(best, sweep.best_drift, "o", ms=13, mfc="none", mec=VERMILLION, mew=2, zorder=4)
    axes.plot(100 * sweep.chosen, sweep.chosen_drift, "D", ms=6, mfc=BLUE, mec="white", zorder=5)
    axes.set_xlim(0, 100)
    what = "total value" if sweep.join == "series" else "total conductance (1/value)"
    axes.set_xlabel(f"Share of {sweep.names[0]} in the {what} [%], the rest {sweep.names[1]}")
    axes.set_ylabel(f"{name.capitalize()} of I/I_target [{unit}]")
    bound = (
        f"limit {limit_words(sweep.figure, sweep.bound)}"
        if sweep.bound_is_limit
        else f"twice the optimum, {figure_words(sweep.figure, sweep.bound)}"
    )
    labels = [
        Label(best, sweep.best_drift, f"optimum {best:.4g} %\n{sweep.best_drift:.4g} {unit}",
              bold=True, radius=9),
    ]  # fmt: skip
    if abs(sweep.chosen - sweep.best) > 0.01:
        labels.append(Label(100 * sweep.chosen, sweep.chosen_drift, "chosen", radius=6))
    with_title(
        figure,
        axes,
        f"Resistor {sweep.slot}: {low:.3g} to {high:.3g} % of {sweep.names[0]} "
        f"{'meet the limit' if sweep.bound_is_limit else 'stay within twice the best drift'}",
        f"{study.title}, {pretty(range_words(study))}. Ratio moved at constant {what}, circuit "
        "solved anew at each",
        f"Shaded: the tolerance of the ratio, up to the dashed line ({bound}). "
        f"{name.capitalize()} = {definition}{', of I/I_target' if name == 'box' else ''}.",
    )
    x, y = share.tolist(), drift.tolist()
    pieces = [
        ((x[k], y[k]), (x[k + 1], y[k + 1]))
        for k in range(len(x) - 1)
        if np.isfinite(y[k]) and np.isfinite(y[k + 1])
    ]
    place(figure, axes, labels, pieces)
    return figure
