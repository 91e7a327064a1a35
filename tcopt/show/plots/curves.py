"""Current and target, and what is left between them, against temperature."""

from __future__ import annotations

from itertools import pairwise
from typing import TYPE_CHECKING

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from tcopt.arrays import Array
from tcopt.show.plots.labels import Label, place
from tcopt.show.plots.style import (
    GREEN,
    GREY,
    INK,
    ORANGE,
    VERMILLION,
    drawn,
    new_figure,
    prefixed,
    pretty,
    temperature_axis,
    with_title,
)
from tcopt.show.words import (
    DEFINITIONS,
    figure_words,
    number,
    range_words,
    target_words,
    verdict_words,
)

if TYPE_CHECKING:
    from tcopt.assess import Assessment

__all__ = ["current_picture", "residual_picture"]

_POINTS = 241
_ZERO_CELSIUS = 273.15
_SMALLEST_SWING = 0.04
"""Least height of the current's axis, relative to the current: a flat line shall look flat."""
_WIDEST_BAND = 4.0
"""Width of the limit's band, in spans of the residual, beyond which it is told, not drawn."""


def _temperatures(found: Assessment) -> Array:
    over = found.operation.study.range
    return np.linspace(over.low, over.high, _POINTS)


@drawn
def current_picture(found: Assessment) -> Figure:
    """Return output current and target against temperature."""
    study = found.operation.study
    T = _temperatures(found)
    current, target = found.operation.output(T), found.target.current(T)
    scale, unit = prefixed(float(max(current.max(), target.max())), "A")
    figure, axes = new_figure()
    celsius = T - _ZERO_CELSIUS
    axes.plot(
        celsius,
        scale * target,
        color=ORANGE,
        linewidth=5,
        solid_capstyle="butt",
        label="target",
        zorder=2,
    )
    axes.plot(celsius, scale * current, color=INK, linewidth=1.6, label="current", zorder=3)
    low, high = (scale * float(end([current, target])) for end in (np.min, np.max))
    middle, least = (low + high) / 2, _SMALLEST_SWING * scale * float(np.abs(current).max())
    half = max(1.1 * (high - low), least) / 2
    axes.set_ylim(middle - half, middle + half)
    axes.set_ylabel(f"Output current [{unit}]")
    axes.ticklabel_format(axis="y", useOffset=False)
    temperature_axis(axes)
    axes.legend(loc="best")
    at_reference = np.interp(study.range.reference, T, scale * current)
    _reference_line(axes, study.range.reference)
    axes.annotate(
        "T_ref", (study.range.reference - _ZERO_CELSIUS, float(at_reference < middle)),
        xycoords=("data", "axes fraction"), xytext=(3, -11 if at_reference < middle else 3),
        textcoords="offset points", color="#444444",
    )  # fmt: skip
    left = found.residual_drift
    with_title(
        figure,
        axes,
        f"The current stays within {_percent(left.deviation_ppm)} of its target",
        f"{study.title}. Target {pretty(target_words(study))}; {pretty(range_words(study))}. "
        f"The current itself: {figure_words('box_ppm_per_K', found.drift.box_ppm_per_K)}; "
        f"against the target: {figure_words('box_ppm_per_K', left.box_ppm_per_K)}",
    )
    return figure


def _percent(ppm: float) -> str:
    return f"{ppm / 1e4:.3g} %" if ppm >= 1000 else f"{ppm:.3g} ppm"


def _reference_line(axes: Axes, reference: float) -> None:
    axes.axvline(reference - _ZERO_CELSIUS, color=GREY, linewidth=0.9, linestyle=":", zorder=1)


@drawn
def residual_picture(found: Assessment) -> Figure:
    """Return ``I/I_target - 1`` against temperature, with the limit as a band.

    A limit on the box figure allows a band of width limit times span, wherever
    it lies; it is drawn about the middle of the residual.
    """
    study = found.operation.study
    left = found.residual_drift
    T = np.unique([*_temperatures(found), left.lowest.temperature, left.highest.temperature])
    residual = 1e6 * found.residual(T)
    figure, axes = new_figure()
    axes.plot(T - _ZERO_CELSIUS, residual, color=INK, linewidth=1.8, zorder=3)
    note, edges = _band(axes, found)
    axes.axhline(0, color=GREY, linewidth=0.9, zorder=1)
    _reference_line(axes, study.range.reference)
    axes.set_ylabel(pretty("I/I_target - 1 [ppm]"))
    axes.ticklabel_format(axis="y", useOffset=False, style="plain")
    temperature_axis(axes)
    axes.margins(x=0.06)
    at, foot = study.range.reference - _ZERO_CELSIUS, axes.get_ylim()
    labels = []
    for extreme, marker in ((left.lowest, "v"), (left.highest, "^")):
        x, y = extreme.temperature - _ZERO_CELSIUS, 1e6 * (extreme.value - 1)
        axes.plot(x, y, marker, ms=8, mfc=VERMILLION, mec=INK, mew=0.8, zorder=4)
        labels.append(Label(x, y, pretty(f"{y:+.0f} ppm\nat {x:.4g} °C"), radius=6))
    labels.append(Label(at, foot[0], "T_ref", radius=1))
    if found.limit:
        verdict = verdict_words(found.limit)
    else:
        verdict = f"The current stays within {_percent(left.deviation_ppm)}; no limit is set"
    definitions = "; ".join(f"{name} = {DEFINITIONS[name][1]}" for name in ("deviation", "box"))
    with_title(
        figure,
        axes,
        verdict,
        f"{study.title}. Against the target ({pretty(target_words(study))}) "
        f"{pretty(range_words(study))}: "
        f"{figure_words('deviation_ppm', left.deviation_ppm)}, "
        f"{figure_words('box_ppm_per_K', left.box_ppm_per_K)}",
        f"{note}Triangles: lowest and highest. {definitions}, here of I/I_target.",
    )
    ends = axes.get_xlim()
    lines = [*_pieces(T - _ZERO_CELSIUS, residual), ((at, foot[0]), (at, foot[1]))]
    lines += [((ends[0], edge), (ends[1], edge)) for edge in edges]
    place(figure, axes, labels, lines)
    return figure


def _pieces(x: Array, y: Array) -> list[tuple[tuple[float, float], tuple[float, float]]]:
    points = list(zip(x[::8].tolist(), y[::8].tolist(), strict=True))
    return list(pairwise(points))


def _band(axes: Axes, found: Assessment) -> tuple[str, tuple[float, ...]]:
    """Draw the limit's band; return the words that explain it, and where its edges are drawn."""
    limit = found.limit
    if limit is None:
        return "", ()
    over, left = found.operation.study.range, found.residual_drift
    lowest, highest = 1e6 * (left.lowest.value - 1), 1e6 * (left.highest.value - 1)
    if limit.figure == "box_ppm_per_K":
        at_reference = 1 + float(found.residual(np.array([over.reference]))[0])
        half = limit.bound * (over.high - over.low) * at_reference / 2
        middle = (lowest + highest) / 2
        words = f"Band: limit x span = {number(2 * half)} ppm, laid about the middle of the curve. "
    else:
        half, middle = limit.bound, 0.0
        words = f"Band: the limit, ±{number(limit.bound)} ppm. "
    reach = max(abs(lowest - middle), abs(highest - middle), 1e-3)
    if half > _WIDEST_BAND * reach:
        height = 1.6 * reach
        axes.set_ylim(middle - height, middle + height)
        axes.axhspan(middle - height, middle + height, facecolor=GREEN, alpha=0.15, zorder=0)
        return words.replace("Band:", "Shaded, wider than the picture:"), ()
    edges = (middle - half, middle + half)
    axes.axhspan(*edges, facecolor=GREEN, alpha=0.15, zorder=0)
    for edge in edges:
        axes.axhline(edge, color=GREEN, linewidth=1.4, linestyle="--", zorder=1)
    top, bottom = max(highest, middle + half), min(lowest, middle - half)
    axes.set_ylim(bottom - 0.15 * (top - bottom), top + 0.15 * (top - bottom))
    return words, edges
