"""The exact match of need and offer in one slot: a linear program, solved a few times.

The smallest e for which a mix fits the band is wanted. For a given e the mixes
that fit are a polytope, and the polytopes are nested in e. So the program with
both edges linearised in e about e_k, whose optimum is e_(k+1), can only stand
still at the global optimum: were a smaller e feasible, so would be every one
between, and the linearised program at e_k would find one just below. Newton's
convergence makes a few programs enough; where an edge ends or bends too much
for it, the e between what is known to be too small and what is reached is
halved. Temperatures at which the finished mix pokes out between the nodes are
added as rows (the exchange method for semi-infinite programs; Hettich and
Kortanek 1993, *SIAM Review* 35). A free input current is one more variable,
linearised as e is.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from tcopt.arrays import Array
from tcopt.errors import NoSolutionError
from tcopt.mix.band import NOTHING, Band
from tcopt.mix.linear import MOST, Solved, solve
from tcopt.mix.offer import Offer
from tcopt.operation import Operation
from tcopt.solve import currents
from tcopt.symbols import resistance_name

__all__ = ["CLOSE", "FLOOR", "Fit", "best_fit", "chebyshev_nodes", "match", "peaks"]

CLOSE = 2e-5
"""Relative gap between the program's e and the full solution's at which both are the optimum."""
FLOOR = 1e-8
"""A deviation that counts as none."""
_NODES = 25
_FINE = 129
_ROUNDS = 40
_SETTLED = 1e-3
"""Relative step of e after which what its linearisation leaves is the square of this."""
_STILL = 1e-6
_SMALLEST_UNIT = 1e-6
"""Units of e below this would make the program's numbers so large that solvers give up."""


@dataclass(frozen=True)
class Fit:
    """The best mix that was found.

    Attributes
    ----------
    operation : the design with this mix in its slot
    deviation : ``max |I/I_target - 1|`` from the full solution, over a fine grid and peaks [1]
    bound : what no mix of the same offer falls below, by the program's multipliers [1]
    """

    operation: Operation
    deviation: float
    bound: float


def chebyshev_nodes(low: float, high: float, count: int) -> Array:
    """Return `count` temperatures [K], ends included, dense towards the ends."""
    nodes = (low + high) / 2 - (high - low) / 2 * np.cos(np.linspace(0, np.pi, count))
    nodes[0], nodes[-1] = low, high  # to the last bit: a target's table may end just there
    return np.asarray(nodes)


def best_fit(band: Band, offer: Offer) -> Fit | None:
    """Return the best mix of an offer, or None if no mix of it comes near the target at all.

    Parameters
    ----------
    band : the need of the open slot; over a free input, a stretch of it
    offer : materials and join
    """
    return match(band, offer)[0]


def match(band: Band, offer: Offer) -> tuple[Fit | None, float]:
    """Return the best mix as `best_fit`, and what no mix of the offer falls below [1].

    There is a bound without a fit where the best is a short, or nothing at all:
    that is no mix.
    """
    search = _Search(band, offer)
    for _ in range(_ROUNDS):
        if search.step():
            break
    best, bound = search.best, search.bound()
    if best is None or best.deviation >= _without(band, best.operation, search.fine) * (1 - CLOSE):
        return None, bound
    return replace(best, bound=bound), bound


class _Search:
    """The state of Newton's method in e, and what is known of the optimum by now.

    ``impossible`` is an e at which some temperature by itself rules out every
    resistance, ``too_small`` one at which no mix was found.
    """

    def __init__(self, band: Band, offer: Offer) -> None:
        span = band.operation.study.range
        knots = [k for k in band.target.knots if span.low < k < span.high]
        self.band, self.offer = band, offer
        self.nodes = np.union1d(chebyshev_nodes(span.low, span.high, _NODES), knots)
        self.fine = np.union1d(np.linspace(span.low, span.high, _FINE), knots)
        self.best: Fit | None = None
        self.last: Solved | None = None
        self.impossible = self.too_small = self.e = 0.0
        self.unit = 1e-2
        low, high = band.shifts
        self.shift, self.reach = (low + high) / 2, (high - low) / 4

    @property
    def reached(self) -> float:
        """The deviation of the best so far."""
        return MOST if self.best is None else self.best.deviation

    def bound(self) -> float:
        """Return what no mix of the offer falls below [1]."""
        if self.last is None:
            return self.impossible
        guess = self.last.e if self.best is None else min(self.last.e, self.best.deviation)
        return max(self.impossible, self.last.proof.bound(self.band, self.offer.join, guess))

    def step(self) -> bool:
        """Solve one program and judge its mix; return whether that is the end."""
        try:
            solved = self._solve()
        except NoSolutionError:
            if self.best is None:
                raise
            return True
        if solved is None:
            self.too_small = self.e
            self.e = self.unit = (self.too_small + self.reached) / 2
            return self.reached - self.too_small < 1e-6 * self.reached
        self.last = solved
        step = abs(solved.e - self.e)
        settled = step <= _SETTLED * solved.e + FLOOR
        self.e, self.unit = solved.e, max(solved.e, _SMALLEST_UNIT)
        filled = _filled(self.band, self.offer, solved)
        where = np.union1d(self.fine, self.nodes)
        profile = None if filled is None else _profile(self.band, filled, where)
        if filled is None or profile is None:
            return settled
        deviation = float(np.abs(profile).max())
        self.nodes = np.union1d(self.nodes, peaks(where, profile))
        self.unit = max(self.unit, deviation / 100)
        gain, hoped = self.reached - deviation, self.reached - solved.e
        if gain > 0:
            self.best = Fit(filled, deviation, 0.0)
            self.shift = solved.shift
        if self.band.input_span is not None:
            # the input moves only as far as the linearisation has proved good for
            low, high = self.band.shifts
            self.reach = min(high - low, 3 * self.reach) if gain > hoped / 2 else self.reach / 4
            self.e = self.reached
        elif not self.too_small <= self.e <= self.reached * (1 + _SETTLED) + FLOOR:
            self.e = (self.too_small + self.reached) / 2
        # where the die's heat goes with the output, the band is not quite what the output keeps to
        stands_still = max(step, gain) <= _STILL * self.reached
        return settled and (stands_still or deviation <= solved.e * (1 + CLOSE) + FLOOR)

    def _solve(self) -> Solved | None:
        """Solve the program about where the search stands; None if nothing fits there."""
        edges = self.band.edges(self.nodes, self.offer.join, self.e, self.shift)
        if not edges.within_reach:
            if self.band.input_span is None:
                self.impossible = self.e
            return None
        low, high = self.band.shifts
        within = (max(low, self.shift - self.reach), min(high, self.shift + self.reach))
        about = (self.e, self.shift)
        return solve(self.band, self.offer, self.nodes, edges, about, self.unit, within)


def _without(band: Band, filled: Operation, fine: Array) -> float:
    """Return the deviation with a short in the slot, or with nothing, whichever is less [1]."""
    quantities = filled.quantities(band.die_temperature(fine))
    circuit = filled.circuit
    least = np.inf
    for resistance in (0.0, NOTHING):
        quantities[resistance_name(band.slot)] = np.asarray(resistance)
        output = currents(circuit, quantities)[circuit.currents[-1]]
        off = np.abs(output / band.target.current(fine) - 1).max()
        least = min(least, float(off) if np.isfinite(off) else np.inf)
    return least


def _filled(band: Band, offer: Offer, solved: Solved) -> Operation | None:
    """Return the operation with the mix in its slot and the input moved; None without a mix."""
    if not (solved.coefficients > 0).any():
        return None
    operation, choices = band.operation, band.operation.choices
    scale = float(band.scale(solved.shift)[0])
    coefficients = solved.coefficients * (scale if offer.join == "series" else 1 / scale)
    if band.input_span is not None and choices.input_current is not None:
        current = choices.input_current * float(np.exp(solved.shift))
        choices = replace(choices, input_current=current)
    try:
        mix = offer.mix(coefficients)
    except ValueError:
        return None  # of values that no resistor has
    return replace(operation, choices=choices, mixes={**operation.mixes, band.slot: mix})


def _profile(band: Band, filled: Operation, fine: Array) -> Array | None:
    """Return ``I/I_target - 1`` from the full solution, or None where there is no current."""
    try:
        output = filled.output(fine)
    except NoSolutionError:
        return None
    return output / band.target.current(fine) - 1


def peaks(temperature: Array, profile: Array) -> Array:
    """Return where |profile| is locally largest, refined by a parabola through three points."""
    size = np.abs(profile)
    inner = np.flatnonzero((size[1:-1] >= size[:-2]) & (size[1:-1] >= size[2:])) + 1
    before = temperature[inner] - temperature[inner - 1]
    after = temperature[inner + 1] - temperature[inner]
    up = (size[inner] - size[inner - 1]) / before
    down = (size[inner] - size[inner + 1]) / after
    total = up + down
    shift = np.divide(up * after - down * before, total, out=np.zeros_like(total), where=total > 0)
    return np.asarray(temperature[inner] + np.clip(shift / 2, -before, after))
