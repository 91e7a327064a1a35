"""The linear program of one slot with a copy of its band for every scenario of spread.

See `tcopt.mix.silicon` for what it states and why it is exact.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import linprog

from tcopt.arrays import Array
from tcopt.errors import NoSolutionError
from tcopt.mix.band import Band
from tcopt.mix.causes import share_of
from tcopt.mix.offer import Offer
from tcopt.mix.program import chebyshev_nodes
from tcopt.mix.room import Room
from tcopt.mix.worst import Worst, is_known, worst_points
from tcopt.operation import Operation
from tcopt.solve import currents
from tcopt.symbols import resistance_name

__all__ = ["FULL", "Program", "Solved"]

_NODES = 13
_FINE = 65
_STEP = 1e-5
FULL = 1.002
"""Parts of the area allowed that count as within it."""
_WORTHLESS = 0.2
"""Deviation beyond which a design that fits into an area is none: its current is another."""
_Flags = NDArray[np.bool_]
_STANDS = 0.01
"""Change of a scale of the output, in deviations, up to which it is taken to be settled."""
_SETTLING = 0.75
"""Share of e by which a bound may fall while scales settle; 0.57 is the most that was seen."""
_TYPICAL_WEIGHT = 3e-3
"""What the deviation of the typical part counts beside that of the worst: it settles ties."""


@dataclass(frozen=True)
class Solved:
    """One optimum: coefficients, scales u_k, moves of the part with a knob, e, and the bound."""

    parts: Array
    scale: Array
    moves: Array
    e: float
    typical: float
    bound: float


_Line = tuple[Array, Array, Array, _Flags]
"""An edge, its slopes by e and by u_k, and where it limits anything; shape (K, n) each."""


def _line(edge: Array, by_e: Array, by_u: Array) -> _Line:
    # an edge that is not there, or comes from infinity within the step, limits nothing
    used = np.isfinite(edge) & np.isfinite(by_e) & np.isfinite(by_u)
    return np.where(used, edge, 0.0), np.where(used, by_e, 0.0), np.where(used, by_u, 0.0), used


class Program:
    """The scenario program of one band and one offer, and how far it has come.

    The first scenario is the typical part, which no trim touches.
    """

    def __init__(
        self, band: Band, offer: Offer, room: Room, points: Array | None, *, whole: bool
    ) -> None:
        span = band.operation.study.range
        knots = [k for k in band.target.knots if span.low < k < span.high]
        self.band = band if band.input_span is None else replace(band, input_span=None)
        self.offer, self.room = offer, room
        self.nodes = np.union1d(chebyshev_nodes(span.low, span.high, _NODES), knots)
        self.fine = np.union1d(np.linspace(span.low, span.high, _FINE), knots)
        self.points = np.zeros((1, room.causes.count))
        self.scale = np.ones(1)
        self.output_scale = np.ones(1)
        self.e, self.typical, self.unit = 0.0, 0.0, 1e-2
        self.whole = whole
        limited = room.is_limited and offer.join == "series"
        self.cuts = [np.ones(len(offer.materials))] if limited else []
        if points is not None and len(points):
            self._append(points)

    def _append(self, points: Array) -> None:
        more = np.ones(len(points))
        self.points = np.vstack([self.points, points])
        self.output_scale = np.append(self.output_scale, more)
        middle = [float(np.clip(1.0, *pair)) for pair in self._scale_bounds()]
        self.scale = np.append(self.scale, middle[len(self.scale) :])

    def take_in(self, points: Array) -> None:
        """Add scenarios."""
        self._append(points)

    def add_nodes(self, more: Array) -> None:
        """Add those temperatures that lie clear of the nodes there are."""
        apart = 0.01 * (self.nodes[-1] - self.nodes[0])
        clear = [T for T in more if np.abs(self.nodes - T).min() > apart]
        self.nodes = np.union1d(self.nodes, clear)

    @property
    def _trimmed_part(self) -> int | None:
        """Index of the part that has a knob of its own."""
        knob = self.room.knobs.part_of(self.band.slot)
        names = [material.name for material in self.offer.materials]
        return names.index(knob.material) if knob and knob.material in names else None

    def _columns(self, temperature: Array) -> Array:
        """Return what one unit of each part adds, shape (scenarios, n, parts).

        The die is taken to be as warm as with the output at its target.
        """
        ratio, die = self.room.causes.ratio, self.band.die_temperature(temperature)
        each = np.stack([ratio(m, self.points, die) for m in self.offer.materials], axis=-1)
        return each if self.offer.join == "series" else 1 / each

    def _scale_bounds(self) -> list[tuple[float, float]]:
        """Return the bounds of u_k, which divides what is linear for the join.

        So it is the inverse of a resistance's scale in series, and that scale in parallel.
        A knob of the output scales the current, which is nearly the inverse of
        the resistance, or of the conductance where it rises with the resistance:
        its band is taken about the scale that it had last, so
        that u_k comes to one and the band to what it should be.
        """
        slot, output = self.room.knobs.of(self.band.slot), self.room.knobs.output
        in_series = self.offer.join == "series"
        bounds = [(1.0, 1.0)]
        for c in self.output_scale[1:].tolist():
            if slot is not None:
                inverse = (1 / slot.high, 1 / slot.low)
                bounds.append(inverse if in_series else (slot.low, slot.high))
            elif output is not None:
                low, high = max(1 / 3, c * output.low), min(3.0, c * output.high)
                if self._grows_with_output:
                    low, high = 1 / high, 1 / low
                bounds.append((low, high) if low < high else (1.0, 1.0))
            else:
                bounds.append((1.0, 1.0))
        return bounds

    @property
    def _grows_with_output(self) -> bool:
        """Whether what is linear for the join is larger for a larger output."""
        return (self.offer.join == "series") == self.band.rises

    @property
    def _scales_output(self) -> bool:
        """Whether u_k stands for a scale of the output, not of the slot."""
        knobs = self.room.knobs
        return knobs.of(self.band.slot) is None and knobs.output is not None

    def _edges(self, e: Array, aim: Array) -> tuple[Array, Array]:
        """Return the edges of the band in each scenario, as `Band.pair`, shape (..., K, n)."""
        T, band = self.nodes, self.band
        die = band.die_temperature(T)
        quantities = self.room.causes.quantities(band.operation, self.points, die)
        about = self.output_scale[:, None] * aim
        return band.pair(T, self.offer.join, e, varied=quantities, aim=about)

    def _lines(self, e: Array) -> tuple[_Line, _Line] | None:
        """Return the lower and the upper edge to first order; None if there is no band."""
        one = np.ones_like(e)
        lows, highs = self._edges(
            np.stack([e, e + _STEP, e - _STEP, e, e]),
            np.stack([one, one, one, one + _STEP, one - _STEP]),
        )
        low, high = lows[0], highs[0]
        if not ((low < np.inf) & (high > 0)).all():
            return None
        with np.errstate(invalid="ignore"):
            low_by_e = (lows[1] - lows[2]) / (2 * _STEP)
            high_by_e = (highs[1] - highs[2]) / (2 * _STEP)
            # what u_k does: to a slot's scale the edges are proportional, to the output's they
            # are only where all the current goes through the slot
            low_by_u, high_by_u = low, high
            if self._scales_output:
                sense = 1 if self._grows_with_output else -1
                low_by_u = sense * (lows[3] - lows[4]) / (2 * _STEP)
                high_by_u = sense * (highs[3] - highs[4]) / (2 * _STEP)
        return _line(low, low_by_e, low_by_u), _line(high, high_by_e, high_by_u)

    def solve(self) -> Solved | None:
        """Solve the program linearised about the present e and scales; None if nothing fits there.

        That is no proof that nothing fits at a larger e, nor at other scales.
        """
        e = np.full((len(self.points), 1), self.e)
        e[0] = self.typical
        lines = self._lines(e)
        if lines is None:
            return None
        (low, low_by_e, _, _), (high, high_by_e, _, _) = lower, upper = lines
        columns = self._columns(self.nodes)
        K, n_nodes, n = columns.shape
        counted = next((edge[edge > 0] for edge in (low, high) if (edge > 0).any()), np.ones(1))
        size = float(np.median(counted))
        which = self._trimmed_part
        moving = K if which is not None else 0
        width = n + K + moving + 2
        scale = np.ones_like(e) if self._scales_output else self.scale[:, None]
        slope = np.where(low_by_e == 0, np.abs(high_by_e), np.abs(low_by_e))
        # rows count in units of e
        per_e = np.where(slope == 0, 1.0, slope) * scale * self.unit
        every = np.arange(K)
        deviation = np.where(every == 0, width - 2, width - 1)
        matrix, sides = [], []
        for sign, (edge, by_e, by_u, used) in ((1, upper), (-1, lower)):
            rows = np.zeros((K, n_nodes, width))
            rows[:, :, :n] = sign * columns * size
            rows[every, :, n + every] = -sign * by_u
            if which is not None:
                rows[every, :, n + K + every] = sign * columns[:, :, which] * size
            rows[every, :, deviation] = -sign * by_e * scale * self.unit
            matrix.append((rows / per_e[..., None])[used])
            sides.append((sign * (edge - by_u - by_e * scale * e) / per_e)[used])
        for rows, side in self._extra_rows(width, n, K, size):
            matrix.append(rows)
            sides.append(side)
        most = (_WORTHLESS if self.room.is_limited else 0.95) / self.unit
        variables: list[tuple[float | None, float | None]] = [(0, None)] * n
        variables += [*self._scale_bounds(), *([(None, None)] * moving), (0, most), (0, most)]
        cost = np.zeros(width)
        cost[-2:] = _TYPICAL_WEIGHT, 1
        answer = linprog(
            cost,
            A_ub=np.vstack(matrix),
            b_ub=np.concatenate(sides),
            bounds=variables,
            method="highs",
        )
        if answer.status == 2:
            return None
        if answer.status != 0:
            raise NoSolutionError(f"the linear program of a mix failed: {answer.message}")
        moves = answer.x[n + K : n + K + moving] * size if moving else np.zeros(K)
        typical, worst = (answer.x[-2:] * self.unit).tolist()
        bound = float(answer.fun) * self.unit / (1 + _TYPICAL_WEIGHT)
        return Solved(answer.x[:n] * size, answer.x[n : n + K], moves, worst, typical, bound)

    def _extra_rows(self, width: int, n: int, K: int, size: float) -> list[tuple[Array, Array]]:
        """Return the rows beside the band: the worst against the typical, knobs, area."""
        order = np.zeros((1, width))
        order[0, -2:] = 1, -1
        found = [(order, np.zeros(1))]
        knob, which = self.room.knobs.part_of(self.band.slot), self._trimmed_part
        if knob is not None and which is not None:
            least, most = knob.low, knob.high
            if self.offer.join == "parallel":
                least, most = 1 / most, 1 / least
            reach = np.zeros((2 * K, width))
            for k in range(K):
                up, down = (most - 1, 1 - least) if k else (0.0, 0.0)
                reach[k, n + K + k], reach[k, which] = 1, -up
                reach[K + k, n + K + k], reach[K + k, which] = -1, -down
            found.append((reach, np.zeros(2 * K)))
        for about in self.cuts:
            row, side = self.room.area_row(self.offer, about)
            found.append((np.append(row * size, np.zeros(width - n))[None, :], np.array([side])))
        return found

    def doubt(self, solved: Solved) -> float:
        """Return by what share of e the bound may be too high at the scales that came out.

        It is linearised about the scales of the output that were known before. Where they
        stand it is sure. Else its error goes with the square of the distance from them, and
        on top of it comes what the bound was seen to fall by while they settled, where only a
        part of the current goes through the slot.
        """
        if not self._scales_output:
            return 0.0
        distance = float(np.abs(solved.scale - 1).max())
        return 0.0 if distance < _STANDS * self.e else _SETTLING + 2 * distance**2 / self.e

    def cut_off(self, parts: Array) -> bool:
        """Cut off a mix that takes more than the area allowed; False if it does not.

        In parallel a part must not vanish, or its area has no bound: such mixes are those
        of smaller offers.
        """
        room = self.room
        if self.whole or not room.is_limited:
            return False
        vanishing = self.offer.join == "parallel" and bool((parts <= 0).any())
        if not vanishing and room.area(self.offer, parts) <= FULL * room.area_limit:
            return False
        self.cuts.append(np.maximum(parts, 1e-3 * parts.max()))
        return True

    def filled(self, solved: Solved) -> Operation:
        """Return the typical design."""
        mixes = {**self.band.operation.mixes, self.band.slot: self.offer.mix(solved.parts)}
        return replace(self.band.operation, mixes=mixes)

    def off(self, solved: Solved) -> Array | None:
        """Return ``I/I_target - 1`` in each scenario, trimmed, from the full solution.

        None where there is no current. A knob of the output is set anew.
        """
        columns = self._columns(self.fine)
        total = columns @ solved.parts
        if self._trimmed_part is not None:
            total = total + columns[:, :, self._trimmed_part] * solved.moves[:, None]
        if self.room.knobs.of(self.band.slot) is not None:
            total = total / solved.scale[:, None]
        if not (total > 0).all():
            return None
        operation = self.band.operation
        die = self.band.die_temperature(self.fine)
        quantities = self.room.causes.quantities(operation, self.points, die)
        R = total if self.offer.join == "series" else 1 / total
        quantities[resistance_name(self.band.slot)] = R
        output = currents(operation.circuit, quantities)["I_out"]
        if not (np.isfinite(output) & (output > 0)).all():
            return None
        ratio = output / self.band.target.current(self.fine)
        knob = self.room.knobs.output
        if knob is None:
            return np.asarray(ratio - 1)
        middle = (ratio.max(axis=1) + ratio.min(axis=1)) / 2
        low = 0.0 if knob.high == np.inf else 1 / knob.high
        high = np.inf if knob.low == 0 else 1 / knob.low
        middle = np.clip(middle, low, high)
        middle[0] = 1.0
        self.output_scale = middle
        return np.asarray(ratio / middle[:, None] - 1)

    def worst(self, operation: Operation) -> list[Worst]:
        """Return the worst points of spread, to first order, that are not among the scenarios."""
        T, slot, knobs = self.nodes, self.band.slot, self.room.knobs
        by_resistance = operation.sensitivities(T)[resistance_name(slot)]
        rows, reach = [], (-np.inf, np.inf)
        for knob, row in ((knobs.output, np.ones_like(T)), (knobs.of(slot), by_resistance)):
            if knob is not None:
                rows.append(row)
                reach = knob.reach
        rows.reverse()
        which = self._trimmed_part
        if which is not None:
            name = self.offer.materials[which].name
            share = share_of(operation.mixes[slot], name, self.band.die_temperature(T))
            rows += [by_resistance * share] if share.max() > 0 else []
        off = np.log(operation.output(T) / self.band.target.current(T))
        by_cause = self.room.causes.output_log_slopes(operation, T)
        found = worst_points(off, by_cause, rows, self.room.sigma, reach)
        return [
            each for each in found if len(each.points) and not is_known(self.points, each.points)
        ]
