"""Search over two open slots that are designed together.

With two mixes free the output is no longer linear in the parts, so there is no
single program to solve. First every pair of offers is screened: a grid of
values for the one slot, the need of the other for each, and its least-squares
fit. Then the most promising are refined (`tcopt.mix.refine`). The result is the
best that was found, without a proof.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from tcopt.arrays import Array
from tcopt.circuits import SUPPLY
from tcopt.mix.offer import Offer, offers, whole_offers
from tcopt.mix.program import Fit, chebyshev_nodes
from tcopt.mix.refine import INPUT_RATIO, refine
from tcopt.mix.single import Best
from tcopt.operation import Operation
from tcopt.solve import currents, needed_resistance
from tcopt.study import OpenSlot
from tcopt.symbols import resistance_name
from tcopt.targets import TargetCurrent

__all__ = ["search_two_slots", "shapes"]

_SCREEN_NODES = 9
_PER_DECADE = 6
_VOLTS = (1e-3, 300.0)
"""Drops across the first slot at the target current between which its value is tried [V]."""
_NO_DROP = 1e-5
"""Drop at the target current below which a resistor is a short [V]."""
_SHARES = (0.15, 0.5, 0.85)
_REFINED = 30
_STEP = 1e-4


@dataclass(frozen=True)
class _Start:
    score: float
    group: int
    outer: Offer
    inner: Offer
    outer_coefficients: Array
    inner_coefficients: Array


def search_two_slots(
    groups: Sequence[tuple[Operation, tuple[float, float] | None]],
    slots: Mapping[str, OpenSlot],
    target: TargetCurrent,
    keep: int,
    progress: Callable[[int, int], None] | None = None,
) -> tuple[Best, float]:
    """Return the best designs of two open slots, and the best found with the whole menu in both.

    Parameters
    ----------
    groups : operation with both slots open, and the input's span if it is free
    slots : the two open slots
    target : what the current should be
    keep : how many designs are wanted
    progress : called with steps done and steps in all
    """
    names = tuple(slots)
    starts: list[_Start] = []
    steps = len(groups) + max(_REFINED, 3 * keep) + 3
    for number, (operation, _) in enumerate(groups):
        if progress is not None:
            progress(number, steps)
        starts += _screen(operation, number, names, slots, target)
    chosen_starts = _promising(starts, max(_REFINED, 3 * keep))
    best = Best(keep)
    best.skipped = len(starts) - len(chosen_starts)
    steps = len(groups) + len(chosen_starts) + 3
    for done, start in enumerate(chosen_starts):
        if progress is not None:
            progress(len(groups) + done, steps)
        operation, span = groups[start.group]
        chosen = {names[0]: start.outer, names[1]: start.inner}
        values = {names[0]: start.outer_coefficients, names[1]: start.inner_coefficients}
        fit = refine(operation, chosen, values, target, span)
        best.add(None if fit is None or _vanishes(fit, names, target) else fit, start.group)
    whole = _whole_menu(best, groups, names, slots, target)
    if progress is not None:
        progress(steps, steps)
    return best, whole


def _vanishes(fit: Fit, names: Sequence[str], target: TargetCurrent) -> bool:
    """Say whether a slot came out as a resistor of no drop: no part that anybody draws."""
    T = np.array([fit.operation.study.range.reference])
    drops = (float((fit.operation.mixes[n].resistance(T) * target.current(T))[0]) for n in names)
    return any(drop < _NO_DROP for drop in drops)


def _promising(starts: Sequence[_Start], count: int) -> list[_Start]:
    """Return the best starts of each limit on the pieces.

    So whatever a search with fewer pieces refines, one with more refines too, and
    allowing more pieces never gives a worse design.
    """
    sizes = {(len(s.outer.materials), len(s.inner.materials)) for s in starts}
    found: dict[int, _Start] = {}
    for outer, inner in sizes:
        within = [
            s
            for s in starts
            if len(s.outer.materials) <= outer and len(s.inner.materials) <= inner
        ]
        for start in sorted(within, key=lambda s: s.score)[:count]:
            found[id(start)] = start
    return sorted(found.values(), key=lambda s: s.score)


def _whole_menu(
    best: Best,
    groups: Sequence[tuple[Operation, tuple[float, float] | None]],
    names: tuple[str, ...],
    slots: Mapping[str, OpenSlot],
    target: TargetCurrent,
) -> float:
    """Let every material into both slots, from the best designs, and return the deviation."""
    reached = [fit.deviation for fit in best.ranked()[:1]]
    spans = {id(operation.choices): span for operation, span in groups}
    for fit in best.ranked()[:3]:
        for first in whole_offers(slots[names[0]]):
            for second in whole_offers(slots[names[1]]):
                chosen = {names[0]: first, names[1]: second}
                values: dict[str, Array] = {}
                for name, offer in chosen.items():
                    mix = fit.operation.mixes[name]
                    if len(mix.parts) > 1 and mix.join != offer.join:
                        break
                    by_name = {part.material.name: part.value for part in mix.parts}
                    parts = np.array([by_name.get(m.name, 0.0) for m in offer.materials])
                    values[name] = parts if offer.join == "series" else _inverse(parts)
                else:
                    span = spans.get(id(fit.operation.choices))
                    better = refine(fit.operation, chosen, values, target, span)
                    reached += [] if better is None else [better.deviation]
    return min(reached, default=np.inf)


def _inverse(values: Array) -> Array:
    return np.divide(1.0, values, out=np.zeros_like(values), where=values > 0)


def shapes(offer: Offer) -> Iterator[Array]:
    """Yield shares of an offer's parts, from corner to corner."""
    n = len(offer.materials)
    if n == 1:
        yield np.ones(1)
    elif n == 2:
        for share in _SHARES:
            yield np.array([share, 1 - share])
    else:
        yield np.full(n, 1 / n)
        for k in range(n):
            yield np.where(np.arange(n) == k, 0.6, 0.4 / (n - 1))


def _screen(
    operation: Operation,
    number: int,
    names: tuple[str, ...],
    slots: Mapping[str, OpenSlot],
    target: TargetCurrent,
) -> list[_Start]:
    """Return a start for every pair of offers that can give the current at all."""
    span = operation.study.range
    T = chebyshev_nodes(span.low, span.high, _SCREEN_NODES)
    current = target.current(T)
    decades = np.log10(_VOLTS[1] / _VOLTS[0])
    grid = np.geomspace(*_VOLTS, round(decades * _PER_DECADE)) / current.mean()
    outer_name, inner_name = names
    fixed = operation.quantities(T)
    choices: list[tuple[Offer, Array]] = []
    rows: list[Array] = []
    for offer in offers(slots[outer_name]):
        columns = offer.columns(T)
        for shares in shapes(offer):
            shape = offer.linear(columns @ shares)
            for value in grid:
                # shares scale with the value in series, against it in parallel
                scale = value / shape.mean()
                choices.append((offer, shares * (scale if offer.join == "series" else 1 / scale)))
                rows.append(shape * scale)
    quantities = {**fixed, resistance_name(outer_name): np.stack(rows)}

    def need(off: float) -> Array:
        return needed_resistance(operation.circuit, inner_name, current * (1 + off), quantities)

    needs, above, below = need(0.0), need(_STEP), need(-_STEP)
    sensible = _input_in_reach(operation, quantities, inner_name, needs, current)
    with np.errstate(invalid="ignore", divide="ignore"):
        weight = np.abs(2 * _STEP / np.log(below / above))
    usable = np.flatnonzero(
        sensible & ((needs > 0) & (above > 0) & (below > 0) & np.isfinite(weight)).all(axis=-1)
    )
    if usable.size == 0:
        return []
    needs, weight = needs[usable], weight[usable]
    kinds = {offer: k for k, offer in enumerate(dict.fromkeys(offer for offer, _ in choices))}
    owner = np.array([kinds[choices[i][0]] for i in usable])
    found: list[_Start] = []
    for inner in offers(slots[inner_name]):
        coefficients, score = _fit_inner(inner, T, needs, weight)
        for kind in np.unique(owner):
            mine = np.flatnonzero(owner == kind)
            k = int(mine[np.argmin(score[mine])])
            if np.isfinite(score[k]):
                outer, outer_coefficients = choices[usable[k]]
                found.append(
                    _Start(
                        float(score[k]), number, outer, inner, outer_coefficients, coefficients[k]
                    )
                )
    return found


def _input_in_reach(
    operation: Operation,
    quantities: Mapping[str, Array],
    inner: str,
    needs: Array,
    current: Array,
) -> NDArray[np.bool_]:
    """Say for which rows a fed input stays within a sensible multiple of the target current."""
    if operation.study.circuit.feed != SUPPLY:
        return np.ones(len(needs), dtype=bool)
    full = {**quantities, resistance_name(inner): np.abs(needs)}
    ratio = currents(operation.circuit, full)["I_in"] / current
    return np.asarray(((ratio < INPUT_RATIO) & (ratio > 1 / INPUT_RATIO)).all(axis=-1))


def _fit_inner(inner: Offer, T: Array, needs: Array, weight: Array) -> tuple[Array, Array]:
    """Fit an offer to many needs at once by least squares; infinite where a part is negative."""
    wanted = needs if inner.join == "series" else 1 / needs
    matrix = weight[..., None] * inner.columns(T) / wanted[..., None]
    size = np.sqrt((matrix**2).sum(axis=1, keepdims=True))
    matrix = matrix / size
    normal = np.einsum("bki,bkj->bij", matrix, matrix) + 1e-12 * np.eye(matrix.shape[-1])
    right = np.einsum("bki,bk->bi", matrix, weight)
    solved = np.linalg.solve(normal, right[..., None])[..., 0]
    left = weight - np.einsum("bki,bi->bk", matrix, solved)
    score = np.sqrt((left**2).mean(axis=-1))
    score = np.where((solved > 0).all(axis=-1), score, np.inf)
    return solved / size[:, 0, :], score
