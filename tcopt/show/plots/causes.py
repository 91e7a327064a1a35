"""The local temperature coefficient, stacked by cause."""

from __future__ import annotations

from textwrap import fill
from typing import TYPE_CHECKING, Any

import numpy as np
from matplotlib.figure import Figure

from tcopt.arrays import Array
from tcopt.show.plots.style import (
    BLUE,
    GREEN,
    INK,
    ORANGE,
    SKY,
    VERMILLION,
    drawn,
    new_figure,
    pretty,
    temperature_axis,
    with_title,
)
from tcopt.show.words import range_words

if TYPE_CHECKING:
    from tcopt.assess import Assessment

__all__ = ["causes_picture"]

_POINTS = 97
_LINE = 22
"""Characters after which a cause's name is broken."""
_NOTHING = 1e-9
"""Share of the largest cause up to which one is rounding."""
_LAYERS = (
    (BLUE, ""), (ORANGE, "///"), (SKY, ""), (VERMILLION, ".."), ("#f0e442", "xxx"),
    (GREEN, "\\\\\\"), ("#cc79a7", "++"), ("#bbbbbb", "o"),
)  # fmt: skip
"""Colour and hatch of each layer, largest first; the last is for all that is left over."""


@drawn
def causes_picture(found: Assessment) -> Figure:
    """Return ``(dI/dT)/I`` against temperature, split into its causes.

    What raises the current is stacked upwards, what lowers it downwards; the
    line is their sum.
    """
    study = found.operation.study
    over = study.range
    T = np.linspace(over.low, over.high, _POINTS)
    causes = _largest({name: 1e6 * share for name, share in found.operation.causes(T).items()})
    total = np.sum([np.zeros_like(T), *causes.values()], axis=0)
    figure, axes = new_figure()
    celsius = T - 273.15
    above, below = np.zeros_like(T), np.zeros_like(T)
    for (name, share), (colour, hatch) in zip(causes.items(), _LAYERS, strict=False):
        up, down = np.maximum(share, 0), np.minimum(share, 0)
        look: Any = {"facecolor": colour, "hatch": hatch, "edgecolor": INK, "linewidth": 0.5}
        axes.fill_between(celsius, above, above + up, label=fill(name, _LINE), **look)
        axes.fill_between(celsius, below, below + down, **look)
        above, below = above + up, below + down
    axes.plot(celsius, total, color="white", linewidth=4.5, zorder=4)
    axes.plot(celsius, total, color=INK, linewidth=2.2, zorder=5, label="all together")
    axes.axhline(0, color=INK, linewidth=0.8, zorder=3)
    axes.set_xlim(celsius[0], celsius[-1])
    axes.set_ylabel("(dI/dT)/I [ppm/K]")
    temperature_axis(axes)
    axes.legend(
        loc="upper left", bbox_to_anchor=(1.01, 1.0), borderaxespad=0,
        handlelength=2.4, handleheight=1.5,
    )  # fmt: skip
    with_title(
        figure,
        axes,
        _finding(causes, total),
        f"{study.title}. Local temperature coefficient of the output by cause, "
        f"{pretty(range_words(study))}",
        "Stacked upwards: what raises the current with temperature; downwards: what lowers it.",
    )
    return figure


def _largest(causes: dict[str, Array]) -> dict[str, Array]:
    """Return the causes, largest first, those beyond the number of layers added up."""
    sizes = {name: float(np.abs(share).max()) for name, share in causes.items()}
    ordered = sorted(causes, key=lambda name: -sizes[name])
    ordered = [name for name in ordered if sizes[name] > _NOTHING * max(sizes.values())]
    room = len(_LAYERS) - 1 if len(ordered) > len(_LAYERS) else len(ordered)
    found = {name: causes[name] for name in ordered[:room]}
    if rest := ordered[room:]:
        found[f"the other {len(rest)}"] = np.sum([causes[name] for name in rest], axis=0)
    return found


def _finding(causes: dict[str, Array], total: Array) -> str:
    up = max(causes, key=lambda name: float(causes[name].mean()), default="")
    down = min(causes, key=lambda name: float(causes[name].mean()), default="")
    words = []
    if up and causes[up].mean() > 0:
        words.append(f"{up} raises the current most")
    if down and causes[down].mean() < 0:
        words.append(f"{down} lowers it most")
    left = pretty(f"left: {total[0]:+.4g} ppm/K at the cold end, {total[-1]:+.4g} at the hot")
    sentence = "; ".join([", ".join(words), left] if words else [left])
    return sentence[0].upper() + sentence[1:]
