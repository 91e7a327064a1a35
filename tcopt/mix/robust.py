"""Mixes of several slots improved together for silicon: linear programs about the full solution.

As without spread (`tcopt.mix.joint`), with a copy of the target's band for each
scenario of spread and a free setting of the trim in each. The scenarios are
the worst points for the mixes at hand, added until none is worse than those
that the mixes were made for. The result is the best that was found, without a
proof; it serves any number of slots and whatever a trim scales.
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from tcopt.arrays import Array
from tcopt.mix.offer import Offer
from tcopt.mix.program import chebyshev_nodes
from tcopt.mix.robust_point import TYPICAL_WEIGHT, Point
from tcopt.mix.room import Room
from tcopt.mix.silicon import SiliconFit
from tcopt.operation import Operation

__all__ = ["robust_fit"]

_NODES = 11
_FINE = 41
_ROUNDS = 10
_STEPS = 5
_GAIN = 4e-3
_CLOSE = 1e-2


def robust_fit(
    operation: Operation,
    chosen: Mapping[str, Offer],
    start: Mapping[str, Array],
    room: Room,
    input_span: tuple[float, float] | None = None,
    points: Array | None = None,
    give_up: float = np.inf,
) -> SiliconFit | None:
    """Improve the mixes of some slots for silicon until nothing is gained.

    Parameters
    ----------
    operation : the design, the slots in `chosen` to be filled
    chosen : slot -> offer
    start : slot -> coefficients of the offer
    room : spread, trim, sigma and target
    input_span : least and largest input current [A] if it is free to choose
    points : scenarios to begin with, shape (points, causes)
    give_up : stop as soon as the scenarios at hand alone leave more than this [1]

    Returns
    -------
    SiliconFit | None
        None where the start gives no current. Its bound is its own deviation:
        nothing is proven.
    """
    span = operation.study.range
    knots = [k for k in room.target.knots if span.low < k < span.high]
    nodes = np.union1d(chebyshev_nodes(span.low, span.high, _NODES), knots)
    fine = np.union1d(np.linspace(span.low, span.high, _FINE), knots)
    n_causes = room.causes.count
    point = Point(
        operation, dict(chosen), dict(start), room,
        np.zeros((1, n_causes)), np.zeros((1, len(room.knobs.each))),
    )  # fmt: skip
    if points is not None and len(points):
        point = point.with_points(points, nodes)
    best: SiliconFit | None = None
    for _ in range(_ROUNDS):
        settled = _descend(point, nodes, fine, input_span)
        if settled is None:
            break
        point, each = settled
        if each.max() > give_up:
            break
        more = point.worst(nodes)
        here = float(each.max())
        deviation = max([here, *(worst.deviation for worst in more if not worst.at_most)])
        if best is None or deviation < best.deviation * (1 - 1e-4):
            best = SiliconFit(point.filled(), deviation, deviation, float(each[0]), point.points)
        elif deviation > 3 * best.deviation:
            break
        new = [worst.points for worst in more if worst.deviation > here * (1 + _CLOSE) + 1e-9]
        if not new:
            break
        point = point.without_idle(each).with_points(np.vstack(new), nodes)
    return best


def _descend(
    point: Point, nodes: Array, fine: Array, input_span: tuple[float, float] | None
) -> tuple[Point, Array] | None:
    """Step until nothing is gained; return where that is, and the deviation of each scenario."""
    off = point.off(fine)
    if off is None:
        return None
    each = _deviations(off)
    trust = 0.5
    for _ in range(_STEPS):
        before = each.max() + TYPICAL_WEIGHT * each[0]
        moved = point.step(nodes, trust, float(each.max()), input_span)
        if moved is None:
            break
        candidate, predicted = moved
        candidate = candidate.output_centred(fine)
        off = candidate.off(fine)
        reached = None if off is None else _deviations(off)
        after = np.inf if reached is None else reached.max() + TYPICAL_WEIGHT * reached[0]
        gain, hoped = before - after, before - predicted
        if reached is not None and gain > 0:
            point, each = candidate, reached
        if hoped <= _GAIN * before or before < 1e-9:
            break
        trust = min(1.0, 2 * trust) if gain > 0.5 * hoped else trust / (1.5 if gain > 0 else 5)
        if trust < 1e-5:
            break
    return point, each


def _deviations(off: Array) -> Array:
    """Return ``max |I/I_target - 1|`` of each scenario from ``ln(I/I_target)``."""
    return np.asarray(np.abs(np.expm1(off)).max(axis=1))
