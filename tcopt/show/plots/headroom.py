"""The lowest supply and the lowest output voltage against temperature."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from matplotlib.figure import Figure

from tcopt.circuits import SUPPLY
from tcopt.show.plots.labels import Label, place
from tcopt.show.plots.style import (
    BLUE,
    GREEN,
    INK,
    ORANGE,
    VERMILLION,
    drawn,
    new_figure,
    pretty,
    temperature_axis,
    with_title,
)
from tcopt.show.words import range_words
from tcopt.units import format_quantity

if TYPE_CHECKING:
    from tcopt.check import CheckResult
    from tcopt.headroom import Headroom

__all__ = ["headroom_picture"]

_ZERO_CELSIUS = 273.15
_LINES = ((ORANGE, "--"), (BLUE, "-."))
"""Colour and dash of each branch."""


@drawn
def headroom_picture(result: CheckResult, need: Headroom) -> Figure:
    """Return what output node and supply need against temperature, and what they are given.

    Parameters
    ----------
    result : of a check
    need : its headroom
    """
    made = result.study.circuit
    figure, axes = new_figure()
    celsius = need.temperature - _ZERO_CELSIUS
    axes.plot(celsius, need.lowest_output, color=INK, linewidth=1.8, label="output node needs")
    for (name, volts), (colour, dash) in zip(need.branches.items(), _LINES, strict=False):
        axes.plot(
            celsius, volts, color=colour, linestyle=dash, linewidth=1.8, label=f"{name} needs"
        )
    for name, given, colour in (
        ("output node has", made.output_voltage, VERMILLION),
        ("supply has", made.supply, GREEN),
    ):
        if given is not None:
            axes.axhline(given, color=colour, linestyle=":", linewidth=1.8, label=name)
    limits = [limit for limit in (need.output_limit, need.supply_limit) if limit is not None]
    labels = []
    for limit in limits:
        x = limit.temperature - _ZERO_CELSIUS
        axes.plot(x, limit.voltage, "^", ms=8, mfc=VERMILLION, mec=INK, mew=0.8, zorder=4)
        text = pretty(f"{limit.voltage:.3f} V\nat {x:.4g} °C")
        labels.append(Label(x, limit.voltage, text, radius=6))
    axes.margins(x=0.06, y=0.12)
    axes.set_ylim(bottom=0)
    axes.set_ylabel("Voltage to ground [V]")
    temperature_axis(axes)
    axes.legend(loc="upper left", bbox_to_anchor=(1.01, 1.0), borderaxespad=0)
    with_title(
        figure,
        axes,
        pretty("; ".join(_findings(result, need))),
        f"{result.study.title}. Headroom {pretty(range_words(result.study))}",
        "Triangles: the largest need. " + _caveat(need),
    )
    step = max(1, len(celsius) // 8)
    lines = [need.lowest_output, *need.branches.values()]
    pieces = [
        ((float(celsius[k]), float(line[k])), (float(celsius[k + step]), float(line[k + step])))
        for line in lines
        for k in range(0, len(celsius) - step, step)
    ]
    place(figure, axes, labels, pieces)
    return figure


def _findings(result: CheckResult, need: Headroom) -> list[str]:
    found = []
    for name, given, limit in (
        ("The output node", result.study.circuit.output_voltage, need.output_limit),
        ("the supply", result.study.circuit.supply, need.supply_limit),
    ):
        if limit is None:
            continue
        words = f"{name} needs {limit.voltage:.3f} V at {format_quantity(limit.temperature, 'K')}"
        if given is not None:
            fed = name == "the supply" and result.study.circuit.feed == SUPPLY
            enough = " without the drop of its feed" if fed else " and has it"
            words += enough if given >= limit.voltage else f", more than its {given:.4g} V"
        found.append(words)
    return found


def _caveat(need: Headroom) -> str:
    if not need.branches or need.complete:
        return ""
    highest = float(np.max(need.lowest_supply)) if need.lowest_supply is not None else 0.0
    return f"What stands on top of the branches is not counted in the {highest:.3f} V."
