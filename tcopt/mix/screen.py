"""What every offer of one slot could come to in silicon, estimated over a grid of shares.

To first order in the spread, and without solving a program: it tells which
offers are worth one, in which order, and from which scenarios to begin.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import cache
from itertools import product

import numpy as np

from tcopt.arrays import Array
from tcopt.mix.band import Band
from tcopt.mix.offer import Offer
from tcopt.mix.program import chebyshev_nodes
from tcopt.mix.room import Room
from tcopt.mix.worst import estimates, worst_points
from tcopt.solve import needed_resistance

__all__ = ["Estimate", "screened"]

_NODES = 9
_STEP = 1e-4
_DIVISIONS = {1: 1, 2: 40, 3: 16, 4: 9}
"""Into how many parts the whole is cut, by number of pieces."""


@dataclass(frozen=True)
class Estimate:
    """What an offer could come to.

    Attributes
    ----------
    offer : the offer
    deviation : estimated, at its best shares [1]
    points : the worst points of spread there, shape (2 or 0, causes)
    """

    offer: Offer
    deviation: float
    points: Array


@cache
def _shares(pieces: int) -> Array:
    """Return shares of that many pieces, each above zero, shape (designs, pieces)."""
    parts = _DIVISIONS[pieces]
    counts = [
        (*head, parts - sum(head))
        for head in product(range(1, parts + 1), repeat=pieces - 1)
        if sum(head) < parts
    ]
    return np.array(counts, dtype=float) / parts


def screened(band: Band, allowed: Sequence[Offer], room: Room) -> list[Estimate]:
    """Return an estimate for each offer; none where the need is not that of a resistor.

    Parameters
    ----------
    band : the need of the open slot
    allowed : the offers
    room : what the search goes by
    """
    operation = band.operation
    span = operation.study.range
    T = chebyshev_nodes(span.low, span.high, _NODES)
    die = band.die_temperature(T)
    need, up, down = (band.resistance(T, off) for off in (0.0, _STEP, -_STEP))
    if not ((need > 0) & (up > 0) & (down > 0)).all():
        return []
    by_resistance = 2 * _STEP / np.log(up / down)
    causes = room.causes
    need_by_cause = np.zeros((0, _NODES))
    if causes.count:
        quantities = causes.quantities(operation, causes.both_ways(), die)
        shifted = needed_resistance(
            operation.circuit, band.slot, band.target.current(T), quantities
        )
        shifted = np.broadcast_to(shifted, (2 * causes.count, _NODES))
        need_by_cause = causes.slopes(np.log(np.where(shifted > 0, shifted, np.nan)))
        if not np.isfinite(need_by_cause).all():
            return []
    materials = {m.name: m for offer in allowed for m in offer.materials}
    slopes = {name: causes.material_log_slopes(m, die) for name, m in materials.items()}
    knob = by_resistance if room.knobs.of(band.slot) is not None else None
    if knob is None and room.knobs.each:
        knob = np.ones(_NODES)
    middle = _NODES // 2
    found = []
    for offer in allowed:
        columns = offer.columns(die)
        columns = columns / columns[middle]
        shares = _shares(len(offer.materials))
        total = shares @ columns.T
        weights = shares[:, None, :] * columns / total[..., None]
        log_total = np.log(total) if offer.join == "series" else -np.log(total)
        off = (log_total - np.log(need)) * by_resistance
        off -= off.mean(axis=1, keepdims=True)
        own = np.stack([slopes[m.name] for m in offer.materials])
        moving = np.flatnonzero((np.abs(own).sum(axis=(0, 2)) > 0) | (need_by_cause != 0).any(1))
        by_cause = np.einsum("btn,nct->bct", weights, own[:, moving]) - need_by_cause[moving]
        by_cause = by_cause * by_resistance
        each = estimates(off, by_cause, knob, room.sigma)
        best = int(np.argmin(each))
        points = np.empty((0, causes.count))
        if len(moving):
            knobs = [] if knob is None else [knob]
            near = worst_points(off[best], by_cause[best], knobs, room.sigma)[0].points
            points = np.zeros((len(near), causes.count))
            points[:, moving] = near
        found.append(Estimate(offer, float(each[best]), points))
    return found
