"""The need: how far a slot's resistance may be off for the output to stay near its target.

The output is monotonic in each resistance, so "the current stays within ±e of
its target" is exactly "R(T) stays between R_low(T, e) and R_high(T, e)", and the
two edges are the needed resistances of the two currents at the edge.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from functools import cached_property
from itertools import pairwise

import numpy as np
from numpy.typing import ArrayLike

from tcopt.arrays import Array
from tcopt.operation import Operation
from tcopt.solve import currents, needed_resistance
from tcopt.symbols import resistance_name
from tcopt.targets import TargetCurrent

__all__ = ["NOTHING", "Band", "Edges"]

_STEP = 1e-5
"""Step for the slopes of the edges; their curvature leaves an error of its square."""
NOTHING = 1e30
"""A resistance [ohm] as good as none at all."""
_SENSE_NODES = 5


@dataclass(frozen=True)
class Edges:
    """The band at some e and input, in what is linear in the offer's coefficients.

    Arrays of shape (n,) over temperature. An edge that is not there is infinite;
    its slopes, by e and by the logarithm of the input current, are then nan.
    """

    low: Array
    high: Array
    low_by_e: Array
    high_by_e: Array
    low_by_input: Array
    high_by_input: Array

    @property
    def within_reach(self) -> bool:
        """Whether, at each temperature by itself, some resistance lies in the band."""
        return bool(((self.low < np.inf) & (self.high > 0)).all())


@dataclass(frozen=True)
class Band:
    """The band of one open slot, all else in the operation being fixed.

    Attributes
    ----------
    operation : the design, the slot left open
    slot : its name
    target : what the current should be
    input_span : least and largest input current [A], if that is free to choose
    """

    operation: Operation
    slot: str
    target: TargetCurrent
    input_span: tuple[float, float] | None = None

    @property
    def shifts(self) -> tuple[float, float]:
        """The span of a free input, as ``ln(I_in/I)`` about the operation's own input I."""
        current = self.operation.choices.input_current
        if self.input_span is None or current is None:
            return 0.0, 0.0
        low, high = np.log(self.input_span) - np.log(current)
        return float(low), float(high)

    def with_input(self, current: float) -> Band:
        """Return the band with another input current [A], and that settled."""
        choices = replace(self.operation.choices, input_current=current)
        return replace(self, operation=replace(self.operation, choices=choices), input_span=None)

    def over_input(self, low: float, high: float) -> Band:
        """Return the band with an input that is free from low to high [A]."""
        return replace(self.with_input(float(np.sqrt(low * high))), input_span=(low, high))

    def split(self, widest: float) -> tuple[Band, ...]:
        """Return the band over equal stretches of a free input, in logarithm not above `widest`."""
        if self.input_span is None:
            return (self,)
        low, high = self.input_span
        count = max(1, int(np.ceil(np.log(high / low) / widest)))
        ends = np.geomspace(low, high, count + 1).tolist()
        return tuple(self.over_input(a, b) for a, b in pairwise(ends))

    def halves(self) -> tuple[Band, Band]:
        """Return the band over each half of a free input."""
        if self.input_span is None:
            raise AssertionError("only a free input can be halved")
        low, high = self.input_span
        middle = float(np.sqrt(low * high))
        return self.over_input(low, middle), self.over_input(middle, high)

    @cached_property
    def _die(self) -> dict[bytes, Array]:
        return {}

    @cached_property
    def _known(self) -> dict[tuple[bytes, str, float, float], Edges]:
        return {}

    def die_temperature(self, temperature: Array) -> Array:
        """Return the circuit's temperatures [K] with the output at its target."""
        key = temperature.tobytes()
        if key not in self._die:
            output = self.target.current(temperature)
            self._die[key] = self.operation.pinned_die_temperature(self.slot, output, temperature)
        return self._die[key]

    def resistance(
        self,
        temperature: Array,
        off: ArrayLike,
        shift: ArrayLike = 0.0,
        varied: Mapping[str, Array] | None = None,
    ) -> Array:
        """Return the needed resistance [ohm] for the target times (1 + off).

        Parameters
        ----------
        temperature : [K], shape (n,)
        off, shift : deviation [1], and ``ln`` of input over the operation's own input [1]; for
            arrays of shape (..., 1) the result has shape (..., n)
        varied : quantities of parts that are not typical, each a number or of shape (..., n)

        Not positive where even a short gives too little (or, where the output rises with the
        resistance, too much); inf where an open slot gives no less (or no more); nan where no
        resistance gives that current.
        """
        operation = self.operation
        quantities = (
            operation.quantities(self.die_temperature(temperature))
            if varied is None
            else dict(varied)
        )
        if np.any(shift):
            quantities["I_given"] = quantities["I_given"] * np.exp(shift)
        output = self.target.current(temperature) * (1 + np.asarray(off))
        needed = needed_resistance(operation.circuit, self.slot, output, quantities)
        if (needed > 0).all():
            return needed
        # a need that passes infinity comes back from below zero: tell the two apart
        quantities[resistance_name(self.slot)] = np.asarray(NOTHING)
        opened = currents(operation.circuit, quantities)[operation.circuit.currents[-1]]
        beyond = output >= opened if self.rises else output <= opened
        return np.where((needed <= 0) & beyond, np.inf, needed)

    def edges(self, temperature: Array, join: str, e: float, shift: float = 0.0) -> Edges:
        """Return the band's edges at e and an input, and their slopes, as is linear for a join."""
        key = (temperature.tobytes(), join, e, shift)
        if key in self._known:
            return self._known[key]
        # all in one call: its overhead is that of several hundred temperatures
        es = [e, e + _STEP, e - _STEP]
        shifts = [shift, shift, shift]
        if self.input_span is not None:
            es += [e, e]
            shifts += [shift + _STEP, shift - _STEP]
        low, high = self.pair(temperature, join, np.array([es]).T, np.array([shifts]).T)
        with np.errstate(invalid="ignore"):
            slopes = [(edge[k] - edge[k + 1]) / (2 * _STEP)
                      for k in range(1, len(es), 2) for edge in (low, high)]  # fmt: skip
        still = [np.zeros_like(low[0])] * 2 if self.input_span is None else []
        self._known[key] = Edges(low[0], high[0], *slopes, *still)
        return self._known[key]

    def pair(
        self,
        temperature: Array,
        join: str,
        e: ArrayLike,
        shift: ArrayLike = 0.0,
        varied: Mapping[str, Array] | None = None,
        aim: ArrayLike = 1.0,
    ) -> tuple[Array, Array]:
        """Return the two edges alone; e and shift as off and shift of `resistance`, so varied.

        ``aim`` scales the target about which the band lies, shape (..., 1).

        The lower edge is plus infinity, or the upper one not above 0, where no
        resistance at all lies in the band.
        """
        off = np.asarray(e, dtype=float)
        if off.ndim == 0:
            off = off.reshape((1,) * max(1, np.ndim(shift)))
        about = np.asarray(aim) * (1 + np.stack([off, -off]))
        more, less = self.resistance(temperature, about - 1, shift, varied)
        # A current so large that nothing gives it is no edge; one so small is out of reach. Both
        # lie where the output is larger than any that the slot can make.
        beyond = np.inf if self.rises else -np.inf
        more, less = (np.where(np.isnan(edge), beyond, edge) for edge in (more, less))
        low, high = (less, more) if self.rises else (more, less)
        if self.input_span is not None:
            scale = self.scale(shift)
            low, high = low / scale, high / scale
        if join == "series":
            return low, high
        with np.errstate(divide="ignore"):
            return np.where(high > 0, 1 / high, np.inf), np.where(low > 0, 1 / low, np.inf)

    def scale(self, shift: ArrayLike) -> Array:
        """Return the resistance in which the edges are counted [ohm].

        Over a free input it is the need in the middle of the range, so that what
        is left of the input in the edges is the shape of the need, which changes
        little: a mix can be of any size.
        """
        if self.input_span is None:
            return np.ones(1)
        needed = self.resistance(self._middle, 0.0, shift)
        return np.where((needed > 0) & np.isfinite(needed), needed, 1.0)

    @cached_property
    def _middle(self) -> Array:
        span = self.operation.study.range
        return np.array([(span.low + span.high) / 2])

    @cached_property
    def rises(self) -> bool:
        """Whether the output rises with this slot's resistance."""
        span = self.operation.study.range
        T = np.linspace(span.low, span.high, _SENSE_NODES)
        quantities = self.operation.quantities(self.die_temperature(T))
        circuit, output = self.operation.circuit, self.target.current(T)
        up, down = (
            needed_resistance(circuit, self.slot, output * (1 + off), quantities)
            for off in (_STEP, -_STEP)
        )
        return bool((up > down).any())
