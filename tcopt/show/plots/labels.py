"""Labels beside points, placed so that they cover neither each other nor the points."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import cos, hypot, pi, sin
from typing import NamedTuple

from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.patheffects import withStroke

from tcopt.arrays import Array
from tcopt.show.plots.style import GREY, INK, SMALL

__all__ = ["Label", "place"]

_DISTANCES = (5.0, 9.0, 15.0, 23.0, 33.0, 45.0, 60.0, 80.0, 105.0, 135.0)
_ANGLES = tuple(k * pi / 12 for k in (0, 2, -2, 4, -4, 12, 10, -10, 8, -8, 6, -6, 1, -1, 3, -3,
                                      5, -5, 7, -7, 9, -9, 11, -11))  # fmt: skip
_NEAR = 7.0
"""Gap [pt] from which on a line leads from the label to its point."""

Segment = tuple[tuple[float, float], tuple[float, float]]


@dataclass(frozen=True, slots=True)
class Label:
    """A text for a point in data coordinates; ``radius`` of the point's mark in points."""

    x: float
    y: float
    text: str
    bold: bool = False
    radius: float = 4.0


class _Box(NamedTuple):
    """A rectangle in pixels; matplotlib's own is ten times slower, and thousands are tried."""

    x0: float
    y0: float
    x1: float
    y1: float

    @classmethod
    def about(cls, x: float, y: float, width: float, height: float) -> _Box:
        return cls(x - width / 2, y - height / 2, x + width / 2, y + height / 2)

    @property
    def middle(self) -> tuple[float, float]:
        return (self.x0 + self.x1) / 2, (self.y0 + self.y1) / 2

    def padded(self, by: float) -> _Box:
        return _Box(self.x0 - by, self.y0 - by, self.x1 + by, self.y1 + by)

    def overlaps(self, other: _Box) -> bool:
        return (
            self.x0 < other.x1 and other.x0 < self.x1 and self.y0 < other.y1 and other.y0 < self.y1
        )

    def inside(self, frame: _Box) -> bool:
        return (
            self.x0 >= frame.x0 and self.x1 <= frame.x1 and self.y0 >= frame.y0
            and self.y1 <= frame.y1
        )  # fmt: skip

    def distance(self, x: float, y: float) -> float:
        return hypot(max(self.x0 - x, 0.0, x - self.x1), max(self.y0 - y, 0.0, y - self.y1))


class _Spot(NamedTuple):
    box: _Box
    leader: Segment
    cost: float


def place(
    figure: Figure, axes: Axes, labels: Sequence[Label], lines: Sequence[Segment] = ()
) -> None:
    """Put all labels into the axes; call it last, when nothing moves any more.

    Parameters
    ----------
    figure, axes : with everything else drawn
    labels : those that come first get the better places
    lines : pieces of drawn lines, in data coordinates, that labels should stay off
    """
    figure.draw_without_rendering()
    figure.set_layout_engine("none")
    pixels = figure.dpi / 72
    to_pixels = axes.transData.transform
    points = [_pair(to_pixels((label.x, label.y))) for label in labels]
    marks = [
        _Box.about(float(x), float(y), 2 * r, 2 * r)
        for (x, y), r in zip(points, (label.radius * pixels for label in labels), strict=True)
    ]
    obstacles = [(_pair(to_pixels(a)), _pair(to_pixels(b))) for a, b in lines]
    frame = _Box(*map(float, axes.get_window_extent().padded(-3 * pixels).extents))
    placed: list[_Spot] = []
    for label, (x, y) in zip(labels, points, strict=True):
        text = axes.text(
            label.x, label.y, label.text,
            fontsize=SMALL, fontweight="bold" if label.bold else "normal", color=INK,
            ha="center", va="center", linespacing=1.15, zorder=6,
        )  # fmt: skip
        size = text.get_window_extent()
        spot = min(
            _spots(x, y, size.width, size.height, label.radius, pixels, placed, marks, obstacles,
                   frame),
            key=lambda found: found.cost,
        )  # fmt: skip
        placed.append(spot)
        box = spot.box
        if any(_crosses(a, b, box) for a, b in obstacles):
            text.set_path_effects([withStroke(linewidth=2.5, foreground="white", alpha=0.85)])
        centre = axes.transData.inverted().transform(box.middle)
        text.set_position((float(centre[0]), float(centre[1])))
        (x0, y0), (x1, y1) = spot.leader
        length, start = hypot(x1 - x0, y1 - y0), label.radius * pixels
        if length > start + _NEAR * pixels:
            x0, y0 = x0 + (x1 - x0) * start / length, y0 + (y1 - y0) * start / length
            ends = axes.transData.inverted().transform([(x0, y0), (x1, y1)])
            axes.plot(
                ends[:, 0], ends[:, 1], color=GREY, linewidth=0.7, zorder=3,
                scalex=False, scaley=False,
            )  # fmt: skip


def _spots(
    x: float,
    y: float,
    width: float,
    height: float,
    radius: float,
    pixels: float,
    placed: Sequence[_Spot],
    marks: Sequence[_Box],
    lines: Sequence[Segment],
    frame: _Box,
) -> list[_Spot]:
    found = []
    for distance in _DISTANCES:
        reach = (radius + distance) * pixels
        for rank, angle in enumerate(_ANGLES):
            dx, dy = cos(angle), sin(angle)
            # the box touches the circle of this reach from outside
            cx = x + dx * (reach + width / 2) if abs(dx) > 0.3 else x + dx * (reach + width)
            cy = y + dy * (reach + height / 2)
            box = _Box.about(cx, cy, width, height)
            end = (min(max(x, box.x0), box.x1), min(max(y, box.y0), box.y1))
            leader = ((x, y), end)
            cost = distance + 0.15 * rank
            cost += 0 if box.inside(frame) else 1e6
            wide = box.padded(1.5 * pixels)
            cost += sum(1e4 for other in placed if wide.overlaps(other.box))
            cost += sum(3e3 for mark in marks if wide.overlaps(mark))
            cost += sum(60 for a, b in lines if _crosses(a, b, wide))
            own = box.distance(x, y)
            cost += sum(25 for m in marks if box.distance(*m.middle) < 1.4 * own)
            long = distance > _NEAR
            cost += sum(4e2 for other in placed if long and _crosses(*leader, other.box))
            cost += sum(4e2 for other in placed if _crosses(*other.leader, wide))
            found.append(_Spot(box, leader, cost))
    return found


def _pair(point: Array) -> tuple[float, float]:
    return float(point[0]), float(point[1])


def _crosses(a: tuple[float, float], b: tuple[float, float], box: _Box) -> bool:
    """Say whether a straight piece passes through a box (Liang and Barsky's clipping)."""
    low, high = 0.0, 1.0
    for start, end, least, most in ((a[0], b[0], box.x0, box.x1), (a[1], b[1], box.y0, box.y1)):
        step = end - start
        if step == 0:
            if not least <= start <= most:
                return False
            continue
        first, last = sorted(((least - start) / step, (most - start) / step))
        low, high = max(low, first), min(high, last)
    return low < high
