"""The need: how far a slot's resistance may be off for the output to stay near its target.

The output is monotonic in each resistance, so "the current stays within ±e of
its target" is exactly "R(T) stays between R_low(T, e) and R_high(T, e)", and the
two edges are the needed resistances of the two currents at the edge.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike

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

    @cached_property
    def _die(self) -> dict[bytes, Array]:
        return {}

    @cached_property
    def _known(self) -> dict[tuple[bytes, str, float], Edges]:
        return {}

    def resistance(self, temperature: Array, off: ArrayLike) -> Array:
        """Return the needed resistance [ohm] for the target times (1 + off)."""
        output = self.target.current(temperature) * (1 + np.asarray(off))
        return self.operation.needed(self.slot, output, self.die_temperature(temperature))

    def die_temperature(self, temperature: Array) -> Array:
        """Return the circuit's temperatures [K] with the output at its target."""
        key = temperature.tobytes()
        if key not in self._die:
            output = self.target.current(temperature)
            self._die[key] = self.operation.pinned_die_temperature(self.slot, output, temperature)
        return self._die[key]

    def edges(self, temperature: Array, join: str, e: float) -> Edges:
        """Return the band's edges at e, and their slopes, in what is linear for this join.

        Where the current cannot reach the edge with any resistance, there is no
        edge: minus or plus infinity.
        """
        key = (temperature.tobytes(), join, e)
        if key not in self._known:
            # all in one call: its overhead is that of several hundred temperatures
            offs = np.array([e, e + _STEP, e - _STEP])
            above, below = self.resistance(temperature, np.stack([offs, -offs])[..., None])
            if self._rises:
                above, below = below, above
            # `above` is now the lower edge in resistance, `below` the upper one
            if join == "parallel":
                with np.errstate(divide="ignore"):
                    above, below = 1 / below, np.where(above > 0, 1 / above, np.inf)
            with np.errstate(invalid="ignore"):
                slopes = [(edge[1] - edge[2]) / (2 * _STEP) for edge in (above, below)]
            self._known[key] = Edges(above[0], below[0], slopes[0], slopes[1])
        return self._known[key]

    @cached_property
    def _rises(self) -> bool:
        """Whether the output rises with this slot's resistance."""
        span = self.operation.study.range
        middle = np.array([(span.low + span.high) / 2])
        return bool(self.resistance(middle, _STEP)[0] > self.resistance(middle, -_STEP)[0])
