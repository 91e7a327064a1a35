"""The look of all pictures: sizes, colours, titles that fit.

Colours are those of Okabe and Ito (2008, *Color Universal Design*), which stay
apart for colour-blind readers; they are taken in an order in which they also
differ in lightness, and each is paired with a mark, a dash or a hatch.
"""

from __future__ import annotations

import math
import re
import warnings
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from functools import wraps
from typing import Any, ParamSpec

import matplotlib as mpl
from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

__all__ = [
    "BLUE", "GREEN", "GREY", "INK", "ORANGE", "PALE", "SKY", "SMALL", "VERMILLION",
    "drawn", "house", "new_figure", "prefixed", "pretty", "temperature_axis", "with_title",
]  # fmt: skip

INK, GREY, PALE = "#1a1a1a", "#767676", "#e4e9ee"
BLUE, ORANGE, GREEN, VERMILLION, SKY = "#0072b2", "#e69f00", "#009e73", "#d55e00", "#56b4e9"
SMALL = 8.0
"""Smallest text [pt]."""
_PREFIXES = {-15: "f", -12: "p", -9: "n", -6: "µ", -3: "m", 0: "", 3: "k", 6: "M"}
_WIDTH, _HEIGHT = 7.2, 4.8
_MARGIN = 0.02
_MINUS = re.compile(r"(?<![\w)])-(?=[0-9])")
_UNIT = re.compile(r"(?<=[0-9]) (?=[%°a-zA-ZµΩ])")

_SETTINGS = {
    "axes.axisbelow": True,
    "axes.edgecolor": GREY,
    "axes.grid": True,
    "axes.labelsize": 9,
    "axes.spines.right": False,
    "axes.spines.top": False,
    "axes.titlelocation": "left",
    "axes.titlesize": SMALL,
    "figure.dpi": 100,
    "font.family": "DejaVu Sans",
    "font.size": SMALL,
    "grid.color": "#dddddd",
    "grid.linewidth": 0.6,
    "hatch.linewidth": 0.6,
    "legend.fontsize": SMALL,
    "legend.frameon": False,
    "savefig.dpi": 160,
    "svg.hashsalt": "tcopt",
    "text.color": INK,
    # names and titles are what users typed, dollar signs included
    "text.parse_math": False,
    "xtick.labelsize": SMALL,
    "ytick.labelsize": SMALL,
}

P = ParamSpec("P")


@contextmanager
def house() -> Iterator[None]:
    """Draw in the settings of the house, whatever the user's own matplotlib is set to."""
    usual = {key: mpl.rcParamsDefault[key] for key in mpl.rcParamsDefault if key != "backend"}
    settings: Any = usual | _SETTINGS
    with mpl.rc_context(settings), warnings.catch_warnings():
        # a title may be in a script that the font lacks; the picture is still of use
        warnings.filterwarnings("ignore", message="Glyph .* missing from font")
        yield


def drawn(function: Callable[P, Figure]) -> Callable[P, Figure]:
    """Make a function draw in the settings of the house."""

    @wraps(function)
    def inside(*args: P.args, **kwargs: P.kwargs) -> Figure:
        with house():
            return function(*args, **kwargs)

    return inside


def new_figure(height: float = _HEIGHT) -> tuple[Figure, Axes]:
    """Return a figure with one pair of axes; height in inches."""
    figure = Figure(figsize=(_WIDTH, height), layout="constrained")
    FigureCanvasAgg(figure)
    return figure, figure.add_subplot()


def with_title(figure: Figure, axes: Axes, finding: str, context: str, note: str = "") -> None:
    """Put the finding on top, the context under it, and a note at the foot, broken to fit."""
    figure.suptitle(
        _broken(figure, finding, 10.5, "bold"),
        x=_MARGIN, ha="left", fontsize=10.5, fontweight="bold",
    )  # fmt: skip
    axes.set_title(_broken(figure, context, SMALL), fontsize=SMALL, color=INK, loc="left", x=0)
    if note:
        figure.supxlabel(
            _broken(figure, note, SMALL), x=_MARGIN, ha="left", fontsize=SMALL, color="#444444"
        )


def _broken(figure: Figure, text: str, size: float, weight: str = "normal") -> str:
    """Break a text into lines that fit the figure's width, by measuring them."""
    room = figure.bbox.width * (1 - 2 * _MARGIN) * (0.9 if size <= SMALL else 1.0)
    probe = figure.text(0, 0, "", fontsize=size, fontweight=weight)

    def fits(line: str) -> bool:
        probe.set_text(line)
        return bool(probe.get_window_extent().width <= room)

    lines: list[str] = []
    # no number loses its unit, no T_ref its value, to the next line
    text = _UNIT.sub("\N{NO-BREAK SPACE}", text)
    text = text.replace("T_ref = ", "T_ref\N{NO-BREAK SPACE}=\N{NO-BREAK SPACE}")
    for paragraph in text.split("\n"):
        line = ""
        for word in paragraph.split(" "):
            longer = f"{line} {word}" if line else word
            if line and not fits(longer):
                lines.append(line)
                longer = word
            while not fits(longer):
                cut = next(k for k in range(len(longer) - 1, 0, -1) if fits(longer[:k]) or k == 1)
                lines.append(longer[:cut])
                longer = longer[cut:]
            line = longer
        lines.append(line)
    probe.remove()
    return "\n".join(lines)


def temperature_axis(axes: Axes) -> None:
    """Name the axis of temperature."""
    axes.set_xlabel("Temperature [°C]")


def prefixed(largest: float, unit: str) -> tuple[float, str]:
    """Return the factor and the unit in which a quantity up to `largest` is best shown.

    >>> prefixed(9.97e-6, "A")
    (1000000.0, 'µA')
    """
    power = 3 * math.floor(math.log10(largest) / 3)
    power = min(max(power, min(_PREFIXES)), max(_PREFIXES))
    return float(f"1e{-power}"), f"{_PREFIXES[power]}{unit}"


def pretty(text: str) -> str:
    """Return quantities as they are printed: '-40 degC' with a true minus and degree sign."""
    for plain, printed in (("degC", "°C"), ("ohm", "Ω"), ("uA", "µA"), ("^2", "²")):
        text = text.replace(plain, printed)
    return _MINUS.sub("\N{MINUS SIGN}", text)
