"""The exact match of need and offer in one slot: a linear program, solved a few times.

The smallest e for which a mix fits the band is wanted. For a given e the mixes
that fit are a polytope, and the polytopes are nested in e. So the program with
both edges linearised in e about e_k, whose optimum is e_(k+1), can only stand
still at the global optimum: were a smaller e feasible, so would be every one
between, and the linearised program at e_k would find one just below. Newton's
convergence makes a few programs enough. Temperatures at which the finished mix
pokes out between the nodes are added as rows (the exchange method for
semi-infinite programs; Hettich and Kortanek 1993, *SIAM Review* 35).
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from scipy.optimize import linprog

from tcopt.arrays import Array
from tcopt.errors import NoSolutionError
from tcopt.mix.band import Band
from tcopt.mix.offer import Offer
from tcopt.operation import Operation

__all__ = ["Fit", "best_fit", "chebyshev_nodes", "peaks"]

_NODES = 25
_FINE = 129
_ROUNDS = 14
_CLOSE = 2e-5
"""Relative gap between the program's e and the full solution's at which both are the optimum."""
_FLOOR = 1e-10
"""A deviation that counts as none."""


@dataclass(frozen=True)
class Fit:
    """The best mix that was found.

    Attributes
    ----------
    operation : the design with this mix in its slot
    deviation : ``max |I/I_target - 1|`` from the full solution, over a fine grid [1]
    bound : the program's optimum, which no mix of the same offer falls below [1]
    """

    operation: Operation
    deviation: float
    bound: float


def chebyshev_nodes(low: float, high: float, count: int) -> Array:
    """Return `count` temperatures [K], ends included, dense towards the ends."""
    return np.asarray((low + high) / 2 - (high - low) / 2 * np.cos(np.linspace(0, np.pi, count)))


def best_fit(band: Band, offer: Offer) -> Fit | None:
    """Return the best mix of an offer, or None if no mix of it gives a current at all.

    Parameters
    ----------
    band : the need of the open slot
    offer : materials and join
    """
    span = band.operation.study.range
    knots = [k for k in band.target.knots if span.low < k < span.high]
    nodes = np.union1d(chebyshev_nodes(span.low, span.high, _NODES), knots)
    fine = np.union1d(np.linspace(span.low, span.high, _FINE), knots)
    best: Fit | None = None
    e, unit = 0.0, 1e-2
    for _ in range(_ROUNDS):
        solved = _program(band, offer, nodes, e, unit)
        if solved is None and e == 0:
            e, unit = 0.5, 0.5  # a need so odd that only a wide band can hold it
            continue
        if solved is None:
            break
        coefficients, bound = solved
        profile = _profile(band, offer, coefficients, fine)
        if profile is None:
            break
        deviation = float(np.abs(profile).max())
        if best is None or deviation < best.deviation:
            best = Fit(_filled(band, offer, coefficients), deviation, bound)
        best = replace(best, bound=min(bound, best.deviation))
        settled = abs(bound - e) <= 0.01 * bound + _FLOOR
        if settled and deviation <= bound * (1 + _CLOSE) + _FLOOR:
            break
        e, unit = min(bound, 0.9), max(bound, 1e-8)
        nodes = np.union1d(nodes, peaks(fine, profile))
    return best


def _program(
    band: Band, offer: Offer, nodes: Array, e: float, unit: float
) -> tuple[Array, float] | None:
    """Solve the program linearised about e; unit is the size in which e is counted."""
    edges = band.edges(nodes, offer.join, e)
    if not (np.isfinite(edges.low).all() and (edges.high > 0).all()):
        return None
    bounded = np.isfinite(edges.high) & np.isfinite(edges.high_by_e)
    columns = offer.columns(band.die_temperature(nodes))
    size = float(np.median(np.abs(edges.low)))
    per_e = np.abs(edges.low_by_e) * unit  # rows count in units of e, so tolerances do too
    upper = np.column_stack([columns * size, -edges.high_by_e * unit]) / per_e[:, None]
    upper_side = (edges.high - edges.high_by_e * e) / per_e
    lower = np.column_stack([-columns * size, edges.low_by_e * unit]) / per_e[:, None]
    lower_side = (-edges.low + edges.low_by_e * e) / per_e
    n = columns.shape[1]
    answer = linprog(
        np.append(np.zeros(n), 1.0),
        A_ub=np.vstack([upper[bounded], lower]),
        b_ub=np.concatenate([upper_side[bounded], lower_side]),
        bounds=[(0, None)] * n + [(0, 0.95 / unit)],
        method="highs",
    )
    if answer.status == 2:
        return None
    if answer.status != 0:
        raise NoSolutionError(f"the linear program of a mix failed: {answer.message}")
    return answer.x[:n] * size, float(answer.x[n]) * unit


def _filled(band: Band, offer: Offer, coefficients: Array) -> Operation:
    mixes = {**band.operation.mixes, band.slot: offer.mix(coefficients)}
    return replace(band.operation, mixes=mixes)


def _profile(band: Band, offer: Offer, coefficients: Array, fine: Array) -> Array | None:
    """Return ``I/I_target - 1`` from the full solution, or None where there is no current."""
    if not (coefficients > 0).any():
        return None
    try:
        output = _filled(band, offer, coefficients).output(fine)
    except NoSolutionError:
        return None
    return output / band.target.current(fine) - 1


def peaks(temperature: Array, profile: Array) -> Array:
    """Return where |profile| is locally largest, refined by a parabola through three points."""
    size = np.abs(profile)
    inner = np.flatnonzero((size[1:-1] >= size[:-2]) & (size[1:-1] >= size[2:])) + 1
    left, middle, right = size[inner - 1], size[inner], size[inner + 1]
    bend = left - 2 * middle + right
    shift = np.divide(0.5 * (left - right), bend, out=np.zeros_like(bend), where=bend < 0)
    step = temperature[inner + 1] - temperature[inner]
    return np.asarray(temperature[inner] + np.clip(shift, -1, 1) * step)
