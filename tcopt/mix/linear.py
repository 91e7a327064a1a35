"""One linear program: the band's edges linearised about an e, and about a free input."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.optimize import linprog

from tcopt.arrays import Array
from tcopt.errors import NoSolutionError
from tcopt.mix.band import Band, Edges
from tcopt.mix.certificate import Certificate
from tcopt.mix.offer import Offer

__all__ = ["MOST", "Solved", "solve"]

MOST = 0.95
"""A deviation at which a current has nothing to do with its target any more."""
_NOTHING = 1e-9
"""A share of the whole that is no part but rounding."""


@dataclass(frozen=True)
class Solved:
    """The optimum of a linearised program.

    Attributes
    ----------
    coefficients : of the offer, in the scale in which the band counts its edges
    e : the deviation [1]
    shift : of a free input, as `tcopt.mix.band.Band.shifts`
    proof : the multipliers
    """

    coefficients: Array
    e: float
    shift: float
    proof: Certificate


def solve(
    band: Band,
    offer: Offer,
    nodes: Array,
    edges: Edges,
    about: tuple[float, float],
    unit: float,
    within: tuple[float, float],
) -> Solved | None:
    """Solve the program linearised about an e and an input; None if nothing fits there.

    Parameters
    ----------
    band, offer : need and offer
    nodes : temperatures [K]
    edges : the band there, at the e and the input
    about : e [1], and the input's shift
    unit : the size in which e is counted [1]
    within : between what the input's shift may move

    Raises
    ------
    NoSolutionError
        If the solver gives up.
    """
    e, shift = about
    columns = offer.columns(band.die_temperature(nodes))
    if not np.isfinite(columns).all():
        return None  # the die's own power runs away
    sloped = np.isfinite([edges.high_by_e, edges.high_by_input, edges.low_by_e, edges.low_by_input])
    top = np.isfinite(edges.high) & sloped[:2].all(axis=0) & (edges.high_by_e > 0)
    bottom = np.isfinite(edges.low) & sloped[2:].all(axis=0) & (edges.low_by_e < 0)
    if not (top.any() or bottom.any()):
        return None
    size = float(np.median(np.abs(edges.high[top] if top.any() else edges.low[bottom])))
    rows, sides, scales = [], [], []
    for used, sign, edge, by_e, by_input in (
        (top, 1, edges.high, edges.high_by_e, edges.high_by_input),
        (bottom, -1, edges.low, edges.low_by_e, edges.low_by_input),
    ):
        scale = sign * by_e[used] * unit  # rows count in units of e, so tolerances do too
        parts = [sign * columns[used] * size, -scale[:, None]]
        side = sign * (edge[used] - by_e[used] * e)
        if band.input_span is not None:
            parts.append(-sign * by_input[used, None])
            side = side - sign * by_input[used] * shift
        rows.append(np.hstack(parts) / scale[:, None])
        sides.append(side / scale)
        scales.append(scale)
    n = columns.shape[1]
    bounds: list[tuple[float, float | None]] = [*[(0, None)] * n, (0, MOST / unit)]
    bounds += [within] if band.input_span is not None else []
    answer = linprog(
        (np.arange(len(bounds)) == n).astype(float),
        A_ub=np.vstack(rows),
        b_ub=np.concatenate(sides),
        bounds=bounds,
        method="highs",
    )
    if answer.status == 2:
        return None
    if answer.status != 0:
        raise NoSolutionError(f"the linear program of a mix failed: {answer.message}")
    high, low = np.zeros(len(nodes)), np.zeros(len(nodes))
    multipliers = np.maximum(0, -answer.ineqlin.marginals)
    high[top] = multipliers[: top.sum()] / scales[0] * size
    low[bottom] = multipliers[top.sum() :] / scales[1] * size
    coefficients = answer.x[:n] * size
    share = coefficients * columns.mean(axis=0)
    coefficients = np.where(share > _NOTHING * share.sum(), coefficients, 0.0)
    moved = float(answer.x[n + 1]) if band.input_span is not None else shift
    proof = Certificate(nodes, columns, high, low)
    return Solved(coefficients, float(answer.x[n]) * unit, moved, proof)
