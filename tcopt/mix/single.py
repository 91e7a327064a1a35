"""Search over one open slot: every allowed mix, skipping what cannot be among the best.

A mix that keeps the output within e keeps ``(R - middle)/half`` of the band
within one at every temperature, so also its root mean square over any set of
temperatures. The least-squares residual of an offer, signs of the parts left
free, is therefore a lower bound that costs next to nothing: offers are taken
in its order, and one whose residual at the e of the worst design still shown
exceeds one is skipped, with proof.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np
from scipy.optimize import minimize_scalar

from tcopt.arrays import Array
from tcopt.mix.band import Band
from tcopt.mix.offer import Offer, offers, whole_offers
from tcopt.mix.program import Fit, best_fit, chebyshev_nodes
from tcopt.operation import Operation
from tcopt.study import OpenSlot

__all__ = ["Best", "Group", "search_one_slot"]

_NODES = 17
_MARGIN = 1 + 1e-6
_INPUTS = 9
_NOMINAL = 1e-3


@dataclass(frozen=True)
class Group:
    """One choice of ratios and input: the band it makes, and the input's span if it is free.

    A free input current is searched over a grid in its logarithm by the quick
    bound, then by Brent's method on the program's optimum around the best of it.
    """

    band: Band
    input_span: tuple[float, float] | None = None

    @cached_property
    def nodes(self) -> Array:
        """The temperatures of the quick bound [K]."""
        span = self.band.operation.study.range
        return chebyshev_nodes(span.low, span.high, _NODES)

    @cached_property
    def bands(self) -> tuple[Band, ...]:
        """The band, or one for each input current of the grid."""
        if self.input_span is None:
            return (self.band,)
        grid = np.geomspace(*self.input_span, _INPUTS)
        return tuple(self.band.with_input(float(current)) for current in grid)

    def fit(self, offer: Offer) -> Fit | None:
        """Return the best mix of an offer, and the best input current if it is free."""
        if self.input_span is None:
            return best_fit(self.band, offer)
        quick = [float(residuals(band, self.nodes, [offer], _NOMINAL)[0]) for band in self.bands]
        middle = int(np.argmin(quick))
        logs = np.log(np.geomspace(*self.input_span, _INPUTS))
        fits: list[Fit] = []

        def deviation(log_input: float) -> float:
            fit = best_fit(self.band.with_input(float(np.exp(log_input))), offer)
            if fit is None:
                return 1.0
            fits.append(fit)
            return fit.deviation

        here = deviation(logs[middle])
        if middle in {0, _INPUTS - 1}:
            inwards = logs[1] - logs[0] if middle == 0 else logs[-2] - logs[-1]
            if deviation(logs[middle] + 0.03 * inwards) > here:
                return fits[0]  # falling out of the span: the end is the best
        near = (logs[max(0, middle - 1)], logs[min(_INPUTS - 1, middle + 1)])
        minimize_scalar(deviation, bounds=near, method="bounded", options={"xatol": 1e-3})
        return min(fits, key=lambda fit: fit.deviation, default=None)


@dataclass
class Best:
    """The best designs so far, one for each set of parts and choices."""

    keep: int
    found: dict[object, Fit] = field(default_factory=dict)
    examined: int = 0
    skipped: int = 0

    def add(self, fit: Fit | None, group: int) -> None:
        """Take in a design of a group of choices, unless the same parts do better already."""
        self.examined += 1
        if fit is None:
            return
        key = (group, *_parts(fit.operation))
        if key not in self.found or fit.deviation < self.found[key].deviation:
            self.found[key] = fit

    def ranked(self) -> list[Fit]:
        """Return the designs, best first."""
        return sorted(self.found.values(), key=lambda fit: fit.deviation)

    def threshold(self) -> float:
        """Return the deviation that a newcomer must stay below to be shown [1]."""
        ranked = self.ranked()
        return ranked[self.keep - 1].deviation if len(ranked) >= self.keep else np.inf


def _parts(operation: Operation) -> tuple[object, ...]:
    """Return what makes a design the same design but for its values."""
    return tuple(
        (slot, mix.join, frozenset(part.material.name for part in mix.parts))
        for slot, mix in operation.mixes.items()
    )


def residuals(band: Band, nodes: Array, allowed: Sequence[Offer], e: float) -> Array:
    """Return the root mean square of ``(R - middle)/half`` that each offer leaves at least [1].

    Parameters
    ----------
    band : the need
    nodes : temperatures [K]
    allowed : offers
    e : the deviation at which the band is taken [1]
    """
    result = np.zeros(len(allowed))
    for join in {offer.join for offer in allowed}:
        edges = band.edges(nodes, join, e)
        if not (np.isfinite(edges.low) & np.isfinite(edges.high) & (edges.low > 0)).all():
            continue  # the quick bound says nothing about so odd a band
        half = (edges.high - edges.low) / 2
        side = (edges.high + edges.low) / 2 / half
        die = band.die_temperature(nodes)
        for index, offer in enumerate(allowed):
            if offer.join == join:
                q, _ = np.linalg.qr(offer.columns(die) / half[:, None])
                left = side - q @ (q.T @ side)
                result[index] = np.sqrt(np.mean(left**2))
    return result


def _least_residuals(group: Group, allowed: Sequence[Offer], e: float) -> Array:
    """Return `residuals`, over a free input the smallest of its grid."""
    each = np.stack([residuals(band, group.nodes, allowed, e) for band in group.bands])
    return np.asarray(each.min(axis=0))


def search_one_slot(
    groups: Sequence[Group],
    slot: OpenSlot,
    keep: int,
    progress: Callable[[int, int], None] | None = None,
) -> tuple[Best, float]:
    """Return the best designs of one open slot, and the bound of the whole menu [1].

    Parameters
    ----------
    groups : one for each choice of ratios and input
    slot : materials, pieces and join
    keep : how many designs have to be the best with proof
    progress : called with combinations done and combinations in all
    """
    best = Best(keep)
    allowed = offers(slot)
    wholes: list[float] = []
    queue: list[tuple[float, int, Offer]] = []
    for number, group in enumerate(groups):
        fits = [group.fit(whole) for whole in whole_offers(slot)]
        reached = [fit.bound for fit in fits if fit is not None]
        if not reached:
            best.skipped += len(allowed)
            continue
        wholes.append(min(reached))
        nominal = max(min(reached), 1e-5)
        estimates = nominal * _least_residuals(group, allowed, nominal)
        queue += [(float(e), number, offer) for e, offer in zip(estimates, allowed, strict=True)]
    queue.sort(key=lambda item: item[0])
    known: dict[tuple[int, float], dict[Offer, float]] = {}
    for done, (estimate, number, offer) in enumerate(queue):
        if progress is not None:
            progress(done, len(queue))
        limit = best.threshold() * _MARGIN
        if np.isfinite(limit) and estimate > limit:
            key = (number, limit)
            if key not in known:
                left = _least_residuals(groups[number], allowed, min(limit, 0.9))
                known[key] = dict(zip(allowed, map(float, left), strict=True))
            if known[key][offer] > 1:
                best.skipped += 1
                continue
        best.add(groups[number].fit(offer), number)
    if progress is not None:
        progress(len(queue), len(queue))
    return best, min(wholes, default=np.inf)
