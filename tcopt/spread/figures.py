"""Currents of many parts over the range, reduced to a few figures for each.

On a grid of 61 temperatures; an extreme inside the range is that of the parabola
through the three points about it. The curves of bias currents are so smooth that
this is the continuous figure to within 0.01 ppm of the current. That does not hold of
``residual_box`` and ``deviation`` for a target of shape ``curve``: its curvature jumps
at the points of its table, which may lie between those of the grid, so an extreme
there is seen less exactly the closer the table and the harder its turns. `tcopt.assess`,
which looks at one design, takes each point of the table in.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from tcopt.arrays import Array

__all__ = ["FIGURES", "GRID", "Frame", "figures_of"]

GRID = 61
"""Temperatures over the range at which every part is solved."""
_REACH = 0.5
"""Kelvin to either side of the reference over which the slope is taken."""

FIGURES = ("current", "box", "residual_box", "deviation", "slope")
"""Figures of a part, in the order in which they are kept.

``current`` at T_ref [A]; ``box`` of the current [1/K]; ``residual_box`` of I/I_target
[1/K]; ``deviation`` max |I/I_target - 1| [1]; ``slope`` of ln(I/I_target) at T_ref [1/K].
"""


@dataclass(frozen=True)
class Frame:
    """Temperatures and target.

    Attributes
    ----------
    low, high, reference : [K]
    target : on the grid [A], shape (61,)
    target_at_reference : [A]
    target_slope : logarithmic slope of the target at the reference [1/K]
    """

    low: float
    high: float
    reference: float
    target: Array
    target_at_reference: float
    target_slope: float

    @property
    def grid(self) -> Array:
        """The temperatures over the range [K], shape (61,)."""
        return np.linspace(self.low, self.high, GRID)

    @property
    def temperature(self) -> Array:
        """Where parts are solved [K], shape (64,): grid, reference, and to either side of it."""
        about = [self.reference, self.reference - _REACH, self.reference + _REACH]
        return np.concatenate([self.grid, about])


def figures_of(frame: Frame, current: Array) -> Array:
    """Return the figures of each part, shape (parts, 5); nan where it has no current somewhere.

    Parameters
    ----------
    frame : temperatures and target
    current : at ``frame.temperature`` [A], shape (parts, 64)
    """
    I = current[:, :GRID]
    middle, before, after = current[:, GRID:].T
    span = frame.high - frame.low
    good = np.isfinite(current).all(axis=1) & (current > 0).all(axis=1)
    with np.errstate(all="ignore"):
        lowest, highest = _extremes(I)
        residual_lowest, residual_highest = _extremes(I / frame.target)
        at_reference = middle / frame.target_at_reference
        found = np.stack(
            [
                middle,
                (highest - lowest) / (middle * span),
                (residual_highest - residual_lowest) / (at_reference * span),
                np.maximum(residual_highest - 1, 1 - residual_lowest),
                np.log(after / before) / (2 * _REACH) - frame.target_slope,
            ],
            axis=1,
        )
    found[~good] = np.nan
    return found


def _extremes(curves: Array) -> tuple[Array, Array]:
    """Return lowest and highest value of each curve, between the points where it bends there."""
    return -_highest(-curves), _highest(curves)


def _highest(curves: Array) -> Array:
    rows = np.arange(len(curves))
    at = curves.argmax(axis=1)
    inside = np.clip(at, 1, GRID - 2)
    left, top, right = (curves[rows, inside + k] for k in (-1, 0, 1))
    bend = left - 2 * top + right
    rise = np.where(bend < 0, -((right - left) ** 2) / (8 * bend), 0.0)
    return np.asarray(np.where(inside == at, top + rise, curves[rows, at]))
