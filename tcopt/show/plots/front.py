"""Drift against area: the front of what was found, and the designs behind it."""

from __future__ import annotations

from itertools import pairwise

from matplotlib.figure import Figure
from matplotlib.ticker import LogLocator, NullFormatter

from tcopt.design import DesignResult, FrontPoint
from tcopt.show.plots.labels import Label, place
from tcopt.show.plots.style import (
    BLUE,
    GREY,
    INK,
    VERMILLION,
    drawn,
    new_figure,
    pretty,
    with_title,
)
from tcopt.show.words import number, range_words

__all__ = ["front_picture"]

_LOGARITHMIC = 12.0
"""Largest figure, in smallest ones, from which on an axis is logarithmic."""


@drawn
def front_picture(result: DesignResult) -> Figure:
    """Return drift against the area of all resistors, each step of the front by its materials."""
    figure, axes = new_figure()
    silicon = result.silicon
    front = result.front
    areas = [1e12 * point.area for point in front]
    drifts = [_drift(point) for point in front]
    others = [
        (1e12 * sizes.area, drift)
        for index, sizes in enumerate(result.sizes)
        if sizes.area is not None
        and (drift := _of_design(result, index)) <= 3 * max(drifts)
    ]  # fmt: skip
    for low, high, set_scale, axis in (
        (min(areas), max(areas), axes.set_xscale, axes.xaxis),
        (min(drifts), max(drifts), axes.set_yscale, axes.yaxis),
    ):
        if low > 0 and high > _LOGARITHMIC * low:
            set_scale("log")
            axis.set_major_locator(LogLocator(subs=(1, 2, 5)))
            axis.set_major_formatter(lambda value, _: f"{value:g}")
            axis.set_minor_formatter(NullFormatter())
    axes.step(
        [*areas, 1.3 * areas[-1]], [*drifts, drifts[-1]], where="post", color=INK,
        linewidth=1.6, zorder=3,
    )  # fmt: skip
    if others:
        axes.plot(*zip(*others, strict=True), "x", ms=6, color=GREY, mew=1.4, zorder=2)
    axes.plot(areas, drifts, "o", ms=7, mfc=BLUE, mec="white", zorder=4)
    layout = result.study.layout
    limit = layout.area_limit if layout is not None else None
    widest = max([*areas, *(area for area, _ in others)])
    if limit is not None and 1e12 * limit > 1.6 * widest:
        limit = None  # far off to the right, it would only squeeze the rest
    if limit is not None:
        axes.axvline(1e12 * limit, color=VERMILLION, linestyle="--", linewidth=1.4, zorder=2)
    if silicon is None:
        what, unit = "Deviation", "ppm"
        axes.set_ylabel("Deviation of I/I_target [ppm]")
    else:
        what, unit = "Box drift", "ppm/K"
        share = f"{100 * silicon.quantile:.4g} %"
        axes.set_ylabel(f"Box of I/I_target, {share} of the parts [ppm/K]")
    axes.set_xlabel("Area of all resistors [µm²]")
    axes.margins(x=0.06, y=0.12)
    labels = [
        Label(x, y, _materials(point), radius=6)
        for x, y, point in zip(areas, drifts, front, strict=True)
    ]
    best, least = front[-1], front[0]
    with_title(
        figure,
        axes,
        f"{what} falls from {number(_drift(least), 3)} to {number(_drift(best), 3)} {unit} as the "
        f"area grows from {number(areas[0], 3)} to {number(areas[-1], 3)} µm²",
        f"{result.study.title}, {pretty(range_words(result.study))}. Sizes as drawn",
        "Round: no design that was found is better in both. Crosses: other designs of the table."
        + ("" if limit is None else " Dashed: the limit on the area."),
    )
    steps = list(zip(areas, drifts, strict=True))
    corners = [((x0, y0), (x1, y0)) for (x0, y0), (x1, _) in pairwise(steps)]
    corners += [(steps[-1], (1.3 * areas[-1], drifts[-1]))]
    corners += [((x1, y0), (x1, y1)) for (_, y0), (x1, y1) in pairwise(steps)]
    corners += [((x, y), (1.001 * x, y)) for x, y in others]
    place(figure, axes, labels, corners)
    return figure


def _drift(point: FrontPoint) -> float:
    if point.silicon is not None:
        return point.silicon.box_ppm_per_K
    return point.found.residual_drift.deviation_ppm


def _of_design(result: DesignResult, index: int) -> float:
    if result.silicon is not None:
        return result.silicon.figures[index].box_ppm_per_K
    return result.designs[index].residual_drift.deviation_ppm


def _materials(point: FrontPoint) -> str:
    """Return the materials of each slot that was drawn, one slot a line."""
    lines = []
    mixes = point.found.operation.mixes
    for slot, mix in mixes.items():
        if any(part.length is not None for part in mix.parts):
            sign = " + " if mix.join == "series" else " || "
            names = sign.join(part.material.name for part in mix.parts)
            lines.append(f"{slot}: {names}" if len(mixes) > 1 else names)
    return "\n".join(lines)
