"""The resistor map: which material, or which mix, lies where the circuit needs it."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from contextlib import suppress
from itertools import pairwise
from textwrap import fill
from typing import TYPE_CHECKING

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from scipy.spatial import ConvexHull, QhullError

from tcopt.arrays import Array
from tcopt.laws.numbers import moved_coefficients
from tcopt.menu import FALLS_SHORT, MATCHES, OVER_COMPENSATES, TOLERANCE
from tcopt.mix.point import lever, mix_point
from tcopt.show.plots.labels import Label, Segment, place
from tcopt.show.plots.style import (
    BLUE,
    GREY,
    INK,
    PALE,
    VERMILLION,
    drawn,
    new_figure,
    pretty,
    with_title,
)
from tcopt.show.words import figure_words, number, range_words
from tcopt.units import format_quantity

if TYPE_CHECKING:
    from tcopt.design import DesignResult
    from tcopt.menu import Menu
    from tcopt.operation import Mix
    from tcopt.study import Material

__all__ = ["menu_map", "resistor_map"]

_PPM = 1e6
_ROLES = {
    FALLS_SHORT: "fall short of 1/T", MATCHES: "match it", OVER_COMPENSATES: "over-compensate",
}  # fmt: skip
_LINE = 26
"""Characters after which a material's name is broken."""
_FAR, _EDGE = 0.75, 0.3
"""How far outside the materials, in their extent, a needed point is drawn to scale; where else."""

Points = Sequence[tuple[float, float]]


@drawn
def resistor_map(result: DesignResult, slot: str) -> Figure:
    """Return the map of one designed slot, about the study's reference.

    Shows the slot's materials, the hull of their series mixes, the needed point
    and the best design's mix on its lever line.
    """
    study = result.study
    reference = study.range.reference
    mix = result.winner.operation.mixes[slot]
    materials = _menu_of(result, slot)
    points = [_ppm(moved_coefficients(material, reference)) for material in materials]
    needed = _ppm((result.needed[slot].tc1, result.needed[slot].tc2))
    at = mix_point(mix, reference)
    chosen = _ppm((at.tc1, at.tc2))
    figure, axes = new_figure(5.4)
    way = _way(mix, reference)
    away = _frame(axes, [*points, chosen, *way], needed)
    lines = _hull(axes, points) + _lever_lines(axes, mix, reference, chosen, way)
    _mark_points(axes, materials, points, mix)
    labels = [
        Label(*(away or needed), _needed_words(needed, away is not None), bold=True, radius=9)
    ]
    if away is None:
        axes.plot(*needed, "o", ms=15, mfc="none", mec=VERMILLION, mew=2.2, zorder=5)
    axes.plot(*chosen, "D", ms=6, mfc=BLUE, mec="white", mew=0.8, zorder=5)
    if len(mix.parts) > 1:
        labels.append(Label(*chosen, "chosen mix", bold=True, radius=7))
    labels += _material_labels(materials, points, mix, at.shares)
    with_title(figure, axes, _finding(result, slot), _context(result, slot), _note(mix))
    if away:
        figure.draw_without_rendering()  # the arrow's slant depends on the final layout
        lines.append(_arrow(axes, away, needed))
    place(figure, axes, labels, lines)
    return figure


@drawn
def menu_map(found: Menu) -> Figure:
    """Return the map of a whole process, with the line at 1/T that cancels a PTAT voltage."""
    process = found.process
    materials = [entry.material for entry in found.entries]
    points = [_ppm((entry.tc1, entry.tc2)) for entry in found.entries]
    inverse = _PPM / process.reference
    figure, axes = new_figure(5.4)
    away = _frame(axes, points, (inverse, 0.0))
    lines = _hull(axes, points)
    if away is None:
        low, high = (inverse * (1 + side * TOLERANCE) for side in (-1, 1))
        axes.axvspan(low, high, facecolor="none", edgecolor=VERMILLION, hatch="//", alpha=0.35)
        axes.axvline(inverse, color=VERMILLION, linestyle="--", linewidth=1.4)
        lines.append(((inverse, axes.get_ylim()[0]), (inverse, axes.get_ylim()[1])))
    _mark_points(axes, materials, points, None)
    words = "cancels V_T:\nTC1 = 1/T, TC2 = 0"
    labels = [] if away else [Label(inverse, 0.0, words, bold=True, radius=9)]
    if away is None:
        axes.plot(inverse, 0.0, "o", ms=15, mfc="none", mec=VERMILLION, mew=2.2, zorder=5)
    labels += _material_labels(materials, points, None, ())
    reference = pretty(format_quantity(process.reference, "K"))
    count = Counter(entry.role for entry in found.entries)
    roles = [f"{count[role]} {words}" for role, words in _ROLES.items() if count[role]]
    with_title(
        figure,
        axes,
        f"{process.title}: of {len(materials)} materials {', '.join(roles)}",
        f"1/T = {inverse:.0f} ppm/K at T_ref = {reference}; hatched: within "
        f"{100 * TOLERANCE:g} % of it",
        "Shaded: what series mixes of these materials reach (lever rule).",
    )
    place(figure, axes, labels, lines)
    return figure


def _ppm(point: tuple[float, float]) -> tuple[float, float]:
    return _PPM * point[0], _PPM * point[1]


def _menu_of(result: DesignResult, slot: str) -> tuple[Material, ...]:
    from tcopt.study import OpenSlot  # noqa: PLC0415  pictures lie below the gate

    open_slot = result.study.resistors[slot]
    return open_slot.materials if isinstance(open_slot, OpenSlot) else ()


def _frame(axes: Axes, points: Points, needed: tuple[float, float]) -> tuple[float, float] | None:
    """Set the axes to hold all points; a needed point far away is returned moved to the edge."""
    array = np.array(points)
    low, high = array.min(axis=0), array.max(axis=0)
    extent = np.maximum(high - low, np.maximum([200.0, 0.5], 0.05 * np.abs(array).max(axis=0)))
    shown = np.array(needed)
    away = bool(((shown < low - _FAR * extent) | (shown > high + _FAR * extent)).any())
    if away:
        shown = np.clip(shown, low - _EDGE * extent, high + _EDGE * extent)
    low, high = np.minimum(low, shown), np.maximum(high, shown)
    pad = 0.16 * np.maximum(high - low, extent)
    axes.set_xlim(low[0] - pad[0], high[0] + pad[0])
    axes.set_ylim(low[1] - pad[1], high[1] + pad[1])
    axes.set_xlabel("TC1 [ppm/K]")
    axes.set_ylabel("TC2 [ppm/K²]")
    return (float(shown[0]), float(shown[1])) if away else None


def _hull(axes: Axes, points: Points) -> list[Segment]:
    """Shade what series mixes reach; return its edges for labels to avoid."""
    outline = _outline(np.array(points))
    if len(outline) > 2:
        axes.fill(*outline.T, facecolor=PALE, edgecolor=GREY, linewidth=0.8, zorder=1)
    elif len(outline) == 2:
        axes.plot(*outline.T, color="#c3ccd5", linewidth=5, solid_capstyle="round", zorder=1)
    corners = [(float(x), float(y)) for x, y in outline]
    return list(zip(corners, [*corners[1:], corners[0]], strict=True))


def _outline(points: Array) -> Array:
    """Return the corners of the hull: a polygon, a piece of a line, or one point."""
    size = np.ptp(points, axis=0)
    scaled = (points - points.min(axis=0)) / np.where(size > 0, size, 1.0)
    if len(points) > 2:
        with suppress(QhullError):  # all on one line
            return np.asarray(points[ConvexHull(scaled).vertices])
    along = scaled @ (scaled[np.argmax(np.linalg.norm(scaled - scaled[0], axis=1))] - scaled[0])
    return points[sorted({int(np.argmin(along)), int(np.argmax(along))})]


def _way(mix: Mix, reference: float) -> list[tuple[float, float]]:
    """Return the way of a two-part mix from part to part; straight in series."""
    if len(mix.parts) != 2:
        return []
    ends = [moved_coefficients(part.material, reference) for part in mix.parts]
    return [_ppm(lever(ends, (1 - w, w), mix.join)) for w in np.linspace(0, 1, 41).tolist()]


def _lever_lines(
    axes: Axes,
    mix: Mix,
    reference: float,
    chosen: tuple[float, float],
    way: Points,
) -> list[Segment]:
    """Draw the way from part to part on which the mix lies; return it for labels to avoid."""
    if way:
        array = np.array(way)
        axes.plot(*array.T, color=BLUE, linewidth=2.0, zorder=2)
        if mix.join == "parallel":
            axes.plot(*array[[0, -1]].T, color=BLUE, linewidth=1.0, linestyle=":", zorder=2)
        return list(pairwise(way[::4]))
    if len(mix.parts) == 1:
        return []
    ends = [_ppm(moved_coefficients(part.material, reference)) for part in mix.parts]
    for x, y in ends:
        axes.plot([x, chosen[0]], [y, chosen[1]], color=BLUE, linewidth=1.4, zorder=2)
    return [(end, chosen) for end in ends]


def _mark_points(
    axes: Axes, materials: Sequence[Material], points: Points, mix: Mix | None
) -> None:
    used = {part.material.name for part in mix.parts} if mix else set()
    for material, point in zip(materials, points, strict=True):
        in_mix = material.name in used
        axes.plot(
            *point, "s" if in_mix else "o", ms=7 if in_mix else 5.5,
            mfc=BLUE if in_mix else "white", mec=INK, mew=1.1, zorder=4,
        )  # fmt: skip


def _material_labels(
    materials: Sequence[Material], points: Points, mix: Mix | None, shares: Sequence[float]
) -> list[Label]:
    held: dict[str, float] = {}
    for part, share in zip(mix.parts if mix else (), shares, strict=True):
        held[part.material.name] = held.get(part.material.name, 0.0) + share
    labels = []
    for material, point in zip(materials, points, strict=True):
        text = fill(material.name, _LINE)
        if material.name in held:
            text += f"\n{100 * held[material.name]:.3g} %" if len(held) > 1 else "\n(chosen)"
        labels.append(Label(*point, text, bold=material.name in held))
    return sorted(labels, key=lambda label: not label.bold)


def _arrow(axes: Axes, at: tuple[float, float], to: tuple[float, float]) -> Segment:
    """Draw an arrow that ends at a place and points to where it belongs; return the arrow."""
    tip = axes.transData.transform(at)
    x, y = axes.transData.transform(to) - tip
    tail = (-28 * x / np.hypot(x, y), -28 * y / np.hypot(x, y))
    axes.annotate(
        "", xy=at, xytext=tail, textcoords="offset points",
        arrowprops={"arrowstyle": "->", "color": VERMILLION, "linewidth": 2.5, "shrinkB": 0},
    )  # fmt: skip
    end = axes.transData.inverted().transform(tip + np.array(tail) * axes.figure.dpi / 72)
    return at, (float(end[0]), float(end[1]))


def _needed_words(needed: tuple[float, float], away: bool) -> str:
    words = pretty(f"needed\nTC1 {number(needed[0])}, TC2 {number(needed[1], 3)}")
    return f"{words}\n(outside the picture)" if away else words


def _finding(result: DesignResult, slot: str) -> str:
    mix = result.winner.operation.mixes[slot]
    shares = mix_point(mix, result.study.range.reference).shares
    if len(shares) == 1:
        return f"Resistor {slot}: {mix.parts[0].material.name} alone fits best"
    words = " + ".join(
        f"{100 * share:.3g} % {part.material.name}"
        for share, part in zip(shares, mix.parts, strict=True)
    )
    return f"Resistor {slot}: {words} in {mix.join} fits best"


def _context(result: DesignResult, slot: str) -> str:
    left = result.winner.residual_drift
    point = result.needed[slot]
    value = format_quantity(point.resistance, "ohm")
    tc1, tc2 = number(_PPM * point.tc1), number(_PPM * point.tc2, 3)
    needed = pretty(f"Needed: {value}, TC1 {tc1} ppm/K, TC2 {tc2} ppm/K^2.")
    return (
        f"{result.study.title}. {needed} Remaining drift {pretty(range_words(result.study))}: "
        f"{figure_words('box_ppm_per_K', left.box_ppm_per_K)}, "
        f"{figure_words('deviation_ppm', left.deviation_ppm)}"
    )


def _note(mix: Mix) -> str:
    words = "Shaded: what series mixes of the menu reach (lever rule). "
    if len(mix.parts) == 1:
        return words.strip()
    share = "resistance" if mix.join == "series" else "conductance"
    words += f"Blue: mixes of the chosen parts; shares of the {share} at T_ref. "
    if mix.join == "parallel":
        words += (
            "In parallel the lever rule holds for TC1 alone: the mix lies below the straight "
            "line (dotted), which is exact in series only."
        )
    return words.strip()
