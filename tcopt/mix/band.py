"""The need: how far a slot's resistance may be off for the output to stay near its target.

The output is monotonic in each resistance, so "the current stays within ±e of
its target" is exactly "R(T) stays between R_low(T, e) and R_high(T, e)", and the
two edges are the needed resistances of the two currents at the edge.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from tcopt.arrays import Array
from tcopt.operation import Operation
from tcopt.targets import TargetCurrent

__all__ = ["Band", "Edges"]

_STEP = 1e-5
"""Step for the slopes of the edges; their curvature leaves an error of its square."""


@dataclass(frozen=True)
class Edges:
    """The band at some e, in what is linear in the offer's coefficients, and its slopes in e.

    Arrays of shape (n,) over temperature; infinite where there is no edge.
    """

    low: Array
    high: Array
    low_by_e: Array
    high_by_e: Array


@dataclass(frozen=True)
class Band:
    """The band of one open slot, all else in the operation being fixed."""

    operation: Operation
    slot: str
    target: TargetCurrent

    def with_input(self, current: float) -> Band:
        """Return the band with another input current [A]."""
        choices = replace(self.operation.choices, input_current=current)
        return replace(self, operation=replace(self.operation, choices=choices))

    def resistance(self, temperature: Array, off: float) -> Array:
        """Return the needed resistance [ohm] for the target times (1 + off)."""
        output = self.target.current(temperature) * (1 + off)
        return self.operation.needed(self.slot, output, temperature)

    def edges(self, temperature: Array, join: str, e: float) -> Edges:
        """Return the band's edges at e, and their slopes, in what is linear for this join.

        Where the current cannot reach the edge with any resistance, there is no
        edge: minus or plus infinity.
        """
        low, high = self._edge_pair(temperature, join, e)
        low_up, high_up = self._edge_pair(temperature, join, e + _STEP)
        low_down, high_down = self._edge_pair(temperature, join, e - _STEP)
        with np.errstate(invalid="ignore"):
            return Edges(
                low, high, (low_up - low_down) / (2 * _STEP), (high_up - high_down) / (2 * _STEP)
            )

    def _edge_pair(self, temperature: Array, join: str, e: float) -> tuple[Array, Array]:
        above, below = self.resistance(temperature, e), self.resistance(temperature, -e)
        if self._rises(temperature):
            above, below = below, above
        # `above` is now the lower edge in resistance, `below` the upper one
        if join == "series":
            return above, below
        with np.errstate(divide="ignore"):
            return 1 / below, np.where(above > 0, 1 / above, np.inf)

    def _rises(self, temperature: Array) -> bool:
        """Say whether the output rises with this slot's resistance."""
        middle = temperature[len(temperature) // 2 : len(temperature) // 2 + 1]
        return bool(self.resistance(middle, _STEP)[0] > self.resistance(middle, -_STEP)[0])
