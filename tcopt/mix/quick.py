"""A bound that costs next to nothing: what rules most offers out before any program is solved.

A mix that keeps the output within e keeps ``s = (R - middle)/half`` of the band
within one at every temperature. So for any weights w: ``sum w s <= sum |w|``. With
the residual of a non-negative least-squares fit of the offer to the band as
weights, no part can make the left side smaller (that is the condition of its
optimum; Lawson and Hanson 1974, *Solving Least Squares Problems*, chapter 23),
so if it is then larger than the right, the offer cannot keep within e.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from scipy.optimize import nnls

from tcopt.arrays import Array
from tcopt.mix.band import Band
from tcopt.mix.offer import Offer
from tcopt.mix.program import chebyshev_nodes

__all__ = ["QuickBound"]

_NODES = 17


@dataclass(frozen=True)
class _Taken:
    """A band at some e as ``|C c - start - move s| <= half``, 0 <= s <= 1 over a free input."""

    half: Array
    start: Array
    move: Array
    high: Array


@dataclass
class QuickBound:
    """The quick bound of one band, over a stretch of input if that is free."""

    band: Band
    nodes: Array = field(init=False)
    _taken: dict[tuple[str, float], _Taken | None] = field(init=False, default_factory=dict)

    def __post_init__(self) -> None:
        span = self.band.operation.study.range
        self.nodes = chebyshev_nodes(span.low, span.high, _NODES)

    def excess(self, offer: Offer, e: float) -> float:
        """Return by how many times, at least, the offer's best mix is out of the band at e.

        Above 1: no mix of the offer keeps the output within e. 0 where nothing is known.
        """
        key = (offer.join, e)
        if key not in self._taken:
            self._taken[key] = self._take(offer.join, e)
        taken = self._taken[key]
        if taken is None:
            return 0.0
        columns = offer.columns(self.band.die_temperature(self.nodes))
        # counted so that no share exceeds 1 in the band
        scaled = columns * (taken.high[:, None] / columns).min(axis=0) / taken.half[:, None]
        wanted = taken.start / taken.half
        best = _certain(scaled, wanted, scaled, wanted)
        if self.band.input_span is not None:
            moved = taken.move / taken.half
            with_move = np.column_stack([scaled, -moved])
            best = max(
                _certain(scaled, wanted + moved / 2, with_move, wanted),
                _certain(with_move, wanted, with_move, wanted),
            )
        return best

    def _take(self, join: str, e: float) -> _Taken | None:
        """Take the band at e; over a free input between chords, with room for what they miss."""
        shifts = np.linspace(*self.band.shifts, 3 if self.band.input_span is not None else 1)
        low, high = self.band.pair(self.nodes, join, e, shifts[:, None])
        low, high = np.atleast_2d(low, high)
        if not (np.isfinite(low).all() and np.isfinite(high).all() and (high > 0).all()):
            return None  # so odd a band is left to the program
        half, middle = (high - low) / 2, (high + low) / 2
        missed = np.zeros_like(half[0])
        if len(shifts) == 3:
            # twice the sagitta at the middle, for a curve that is nearly a parabola
            missed = 2 * np.abs(middle[1] - (middle[0] + middle[2]) / 2)
            missed += 2 * np.abs(half[1] - (half[0] + half[2]) / 2)
        move = middle[-1] - middle[0]
        return _Taken(half.max(axis=0) + missed, middle[0], move, high.max(axis=0) + missed)


def _certain(fitted: Array, to: Array, scaled: Array, wanted: Array) -> float:
    """Return what ``max |wanted - scaled x|`` is at least, for any x between 0 and 1.

    Parameters
    ----------
    fitted, to : the least-squares problem whose residual serves as weights
    scaled, wanted : matrix and right side of what is bounded
    """
    try:
        x, _ = nnls(fitted, to)
    except RuntimeError:
        return 0.0  # it did not converge: nothing is known
    weights = to - fitted @ x
    total = np.abs(weights).sum()
    # what a column could still take off, be it by rounding alone, is taken off
    certain = weights @ wanted - np.maximum(0, weights @ scaled).sum()
    return float(certain / total) if total > 0 else 0.0
