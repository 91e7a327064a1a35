"""Search over two open slots that are designed together.

With two mixes free the output is no longer linear in the parts, so there is no
single program to solve. First every pair of offers is screened: a grid of
values for the one slot, the need of the other for each, and its least-squares
fit. Then the most promising are refined by a sequence of linear programs about
the full solution, within a region in which the linearisation is trusted
(Fletcher, *Practical Methods of Optimization*, 2nd ed., chapter 14), until
nothing is gained. The result is the best that was found, without a proof.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import linprog

from tcopt.arrays import Array
from tcopt.circuits import SUPPLY
from tcopt.errors import NoSolutionError
from tcopt.mix.offer import Offer, offers, whole_offers
from tcopt.mix.program import Fit, chebyshev_nodes, peaks
from tcopt.mix.single import Best
from tcopt.operation import Operation
from tcopt.solve import currents, needed_resistance
from tcopt.study import OpenSlot
from tcopt.symbols import resistance_name
from tcopt.targets import TargetCurrent

__all__ = ["refine", "search_two_slots"]

_NODES = 25
_FINE = 129
_SCREEN_NODES = 9
_PER_DECADE = 6
_VOLTS = (1e-3, 300.0)
"""Drops across the first slot at the target current between which its value is tried [V]."""
_SHARES = (0.15, 0.5, 0.85)
_INPUT_RATIO = 100.0
"""Input over output current, and its inverse, beyond which no fed input is looked for."""
_REFINED = 30
_ROUNDS = 30
_STEP = 1e-4
_GAIN = 1e-4


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
        best.add(refine(operation, chosen, values, target, span), start.group)
    whole = _whole_menu(best, groups, names, slots, target)
    if progress is not None:
        progress(steps, steps)
    return best, whole


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


def _shapes(offer: Offer) -> Iterator[Array]:
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
        for shares in _shapes(offer):
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
    return np.asarray(((ratio < _INPUT_RATIO) & (ratio > 1 / _INPUT_RATIO)).all(axis=-1))


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


def refine(
    operation: Operation,
    chosen: Mapping[str, Offer],
    start: Mapping[str, Array],
    target: TargetCurrent,
    input_span: tuple[float, float] | None = None,
) -> Fit | None:
    """Improve the mixes of several slots together until nothing is gained.

    Parameters
    ----------
    operation : the design, the slots in `chosen` to be filled
    chosen : slot -> offer
    start : slot -> coefficients of the offer
    target : what the current should be
    input_span : least and largest input current [A] if it is free to choose
    """
    span = operation.study.range
    knots = [k for k in target.knots if span.low < k < span.high]
    fine = np.union1d(np.linspace(span.low, span.high, _FINE), knots)
    nodes = np.union1d(chebyshev_nodes(span.low, span.high, _NODES), knots)
    point = _Point(operation, dict(chosen), dict(start), target)
    profile = point.profile(fine)
    if profile is None:
        return None
    trust = 0.5
    for _ in range(_ROUNDS):
        deviation = float(np.abs(profile).max())
        active = np.union1d(nodes, peaks(fine, profile))
        moved = point.step(active, trust, deviation, input_span)
        if moved is None:
            break
        candidate, predicted = moved
        new_profile = candidate.profile(fine)
        reached = np.inf if new_profile is None else float(np.abs(new_profile).max())
        gain, hoped = deviation - reached, deviation - predicted
        if new_profile is not None and gain > 0:
            point, profile = candidate, new_profile
        if hoped <= _GAIN * deviation or deviation < 1e-9:
            break
        trust = min(1.0, 2 * trust) if gain > 0.5 * hoped else trust / (1.5 if gain > 0 else 5)
        if trust < 1e-7:
            break
    deviation = float(np.abs(profile).max())
    return Fit(point.filled(), deviation, deviation)


def _rows_of_band(
    matrix: Array, off: Array, deviation: float, unit: float
) -> tuple[list[Array], list[Array]]:
    """Return ``|I/I_t - 1| <= e`` as rows, with ln(1 +- e) linearised about the deviation now."""
    top = (off - np.log1p(deviation) + deviation / (1 + deviation)) / unit
    bottom = (-off + np.log1p(-deviation) + deviation / (1 - deviation)) / unit
    e_top = np.full((len(off), 1), -1 / (1 + deviation))
    e_bottom = np.full((len(off), 1), -1 / (1 - deviation))
    return [np.hstack([matrix, e_top]), np.hstack([-matrix, e_bottom])], [-top, -bottom]


@dataclass(frozen=True)
class _Point:
    """Where the refinement stands."""

    operation: Operation
    chosen: dict[str, Offer]
    values: dict[str, Array]
    target: TargetCurrent

    def filled(self) -> Operation:
        mixes = {name: offer.mix(self.values[name]) for name, offer in self.chosen.items()}
        return replace(self.operation, mixes={**self.operation.mixes, **mixes})

    def profile(self, T: Array) -> Array | None:
        """Return ``I/I_target - 1`` from the full solution, or None where there is no current."""
        if not all((values > 0).any() for values in self.values.values()):
            return None
        try:
            return self.filled().output(T) / self.target.current(T) - 1
        except NoSolutionError:
            return None

    def step(
        self, T: Array, trust: float, deviation: float, input_span: tuple[float, float] | None
    ) -> tuple[_Point, float] | None:
        """Solve the program linearised here; return the new point and the deviation it predicts."""
        filled = self.filled()
        try:
            off = np.log(filled.output(T) / self.target.current(T))
            by_quantity = filled.sensitivities(T)
            die = filled.die_temperature(T)
        except NoSolutionError:
            return None
        blocks, limits = [], []
        for name, offer in self.chosen.items():
            columns = offer.columns(die)
            total = columns @ self.values[name]
            # relative change of R per unit of each coefficient's share of the whole
            relative = columns * total.mean() / total[:, None]
            limits.append(relative[:: max(1, len(T) // 6)])
            sign = 1 if offer.join == "series" else -1
            blocks.append(sign * by_quantity[resistance_name(name)][:, None] * relative)
        scales = [
            float((offer.columns(die) @ self.values[name]).mean())
            for name, offer in self.chosen.items()
        ]
        sizes = [block.shape[1] for block in blocks]
        lower = [-self.values[n][i] / s for n, s in zip(self.chosen, scales, strict=True)
                 for i in range(len(self.values[n]))]  # fmt: skip
        bounds: list[tuple[float, float | None]] = [(low, None) for low in lower]
        log_input = 0.0
        if input_span is not None and filled.choices.input_current is not None:
            log_input = float(np.log(filled.choices.input_current))
            blocks.append(by_quantity["I_given"][:, None])
            low, high = np.log(input_span) - log_input
            bounds.append((max(low, -trust), min(high, trust)))
        unit = max(deviation, 1e-9)
        matrix = np.hstack(blocks) / unit
        rows, sides = _rows_of_band(matrix, off, deviation, unit)
        at = 0
        for size, limit in zip(sizes, limits, strict=True):
            block = np.zeros((len(limit), matrix.shape[1] + 1))
            block[:, at : at + size] = limit
            at += size
            rows += [block, -block]
            sides += [np.full(len(limit), trust), np.full(len(limit), trust * 0.9)]
        if filled.study.circuit.feed == SUPPLY:
            rows_of, sides_of = self._input_rows(filled, T, scales)
            rows.append(rows_of)
            sides.append(sides_of)
        answer = linprog(
            np.append(np.zeros(matrix.shape[1]), 1.0),
            A_ub=np.vstack(rows),
            b_ub=np.concatenate(sides),
            bounds=[*bounds, (0, None)],
            method="highs",
        )
        if answer.status != 0:
            return None
        values, at = {}, 0
        for (name, old), scale, size in zip(self.values.items(), scales, sizes, strict=True):
            new = old + scale * answer.x[at : at + size]
            values[name] = np.where(new > 1e-9 * scale, new, 0.0)
            at += size
        operation = self.operation
        if input_span is not None:
            current = float(np.exp(log_input + answer.x[at]))
            operation = replace(
                operation, choices=replace(operation.choices, input_current=current)
            )
        return replace(self, operation=operation, values=values), float(answer.x[-1]) * unit

    def _input_rows(
        self, filled: Operation, T: Array, scales: Sequence[float]
    ) -> tuple[Array, Array]:
        """Return rows that keep a fed input within a sensible multiple of the target."""
        middle = T[len(T) // 2 : len(T) // 2 + 1]
        by_quantity = filled.sensitivities(middle, of="I_in")
        ratio = float(np.log(filled.currents(middle)["I_in"] / self.target.current(middle))[0])
        blocks = []
        for (name, offer), scale in zip(self.chosen.items(), scales, strict=True):
            columns = offer.columns(filled.die_temperature(middle))
            sign = 1 if offer.join == "series" else -1
            total = columns @ self.values[name]
            blocks.append(sign * by_quantity[resistance_name(name)] * columns * scale / total)
        row = np.hstack([*blocks, np.zeros((1, 1))])
        reach = np.log(_INPUT_RATIO)
        return np.vstack([row, -row]), np.array([reach - ratio, reach + ratio])
