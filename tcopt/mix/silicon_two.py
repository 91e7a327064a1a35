"""Search for silicon over two open slots that are designed together.

Single materials in both slots come first: they track each other, whatever
becomes of the sheet resistance, so what silicon makes of a sum or a ratio is
often best there. Each pair is estimated over a grid of values; the most
promising are refined, the whole menu let into both slots from the best of them,
and from what it takes the allowed numbers of pieces are made. The best designs
on paper are refined, too. The result is the best that was found, without a proof.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import combinations, product

import numpy as np

from tcopt.arrays import Array
from tcopt.circuits import SUPPLY
from tcopt.mix.causes import share_of
from tcopt.mix.offer import Offer, whole_offers
from tcopt.mix.program import Fit, chebyshev_nodes
from tcopt.mix.question import Spanned
from tcopt.mix.robust import robust_fit
from tcopt.mix.room import Room
from tcopt.mix.silicon import SiliconFit
from tcopt.mix.single import Best
from tcopt.mix.worst import estimates
from tcopt.operation import Mix, Operation
from tcopt.solve import currents, needed_resistance
from tcopt.study import OpenSlot
from tcopt.symbols import resistance_name

__all__ = ["search_two_slots_for_silicon"]

_NODES = 9
_STEP = 1e-4
_PER_DECADE = 8
_VOLTS = (3e-3, 100.0)
"""Drops across the first slot at the target current between which its value is tried [V]."""
_INPUT_RATIO = 100.0
"""Input over output current, and its inverse, beyond which no fed input is looked for."""
_LEAST_SHARE = 3e-3


@dataclass(frozen=True)
class _Effort:
    """How many starts are refined: pairs of single materials, designs on paper, ..."""

    pairs: int
    paper: int
    wholes: int
    subsets: int


_FULL = _Effort(10, 3, 2, 10)
_BRIEF = _Effort(5, 1, 1, 4)


@dataclass(frozen=True)
class _Start:
    deviation: float
    group: int
    offers: Mapping[str, Offer]
    values: Mapping[str, Array]


def search_two_slots_for_silicon(
    groups: Sequence[Spanned],
    slots: Mapping[str, OpenSlot],
    room: Room,
    keep: int,
    paper: Sequence[Operation],
    progress: Callable[[int, int], None] | None = None,
    *,
    brief: bool = False,
) -> tuple[Best, Fit | None, float]:
    """Return the best designs of two open slots, the best of single materials, and the menu's best.

    Parameters
    ----------
    groups : operation with both slots open, and the input's span if it is free
    slots : the two open slots
    room : what the search goes by
    keep : how many designs are wanted
    paper : the best designs without spread
    progress : called with steps done and steps in all
    brief : from fewer starts
    """
    search = _Search(groups, slots, room, Best(keep), progress, _BRIEF if brief else _FULL)
    return search.run(paper)


class _Search:
    def __init__(
        self,
        groups: Sequence[Spanned],
        slots: Mapping[str, OpenSlot],
        room: Room,
        best: Best,
        progress: Callable[[int, int], None] | None,
        effort: _Effort,
    ) -> None:
        self.groups, self.slots, self.room = groups, slots, room
        self.best, self.progress = best, progress
        self.single: SiliconFit | None = None
        self.whole = np.inf
        self.done = 0
        self.effort = effort
        each = effort.subsets + 1
        self.steps = len(groups) + effort.pairs + effort.paper + effort.wholes * each

    def tick(self) -> None:
        self.done += 1
        if self.progress is not None:
            self.progress(min(self.done, self.steps - 1), self.steps)

    def refined(
        self, start: _Start, points: Array | None = None, *, counts: bool = True
    ) -> SiliconFit | None:
        """Refine a start; take it in unless it has more pieces than are allowed."""
        operation, span = self.groups[start.group]
        ranked = self.best.ranked()
        give_up = 4 * ranked[0].deviation if ranked else np.inf
        fit = robust_fit(operation, start.offers, start.values, self.room, span, points, give_up)
        self.tick()
        if counts:
            self.best.add(fit.as_fit() if fit else None, start.group)
        if fit is not None:
            self.whole = min(self.whole, fit.deviation)
        return fit

    def run(self, paper: Sequence[Operation]) -> tuple[Best, Fit | None, float]:
        starts: list[_Start] = []
        for number, (operation, _) in enumerate(self.groups):
            starts += _pairs(operation, number, self.slots, self.room)
            self.tick()
        starts.sort(key=lambda start: start.deviation)
        self.best.skipped = max(0, len(starts) - self.effort.pairs)
        fits: list[tuple[int, SiliconFit]] = []
        for start in starts[: self.effort.pairs]:
            fit = self.refined(start)
            if fit is not None:
                fits.append((start.group, fit))
        fits.sort(key=lambda item: item[1].deviation)
        self.single = fits[0][1] if fits else None
        for operation in paper[: self.effort.paper]:
            group = self._group_of(operation)
            own = {name: _own_offer(operation.mixes[name]) for name in self.slots}
            again = self._start_of(operation, group, own)
            fit = self.refined(again) if again else None
            if fit is not None:
                fits.append((group, fit))
        fits.sort(key=lambda item: item[1].deviation)
        if any(slot.pieces > 1 for slot in self.slots.values()):
            for group, fit in fits[: self.effort.wholes]:
                self._through_the_whole_menu(group, fit)
        if self.progress is not None:
            self.progress(self.steps, self.steps)
        single = self.single.as_fit() if self.single else None
        return self.best, single, self.whole

    def _through_the_whole_menu(self, group: int, fit: SiliconFit) -> None:
        wholes = [whole_offers(slot) for slot in self.slots.values()]
        reached: list[SiliconFit] = []
        for pair in product(*wholes):
            chosen = dict(zip(self.slots, pair, strict=True))
            start = self._start_of(fit.operation, group, chosen)
            reached_by = self.refined(start, fit.points[1:], counts=False) if start else None
            reached += [reached_by] if reached_by else []
        if not reached:
            return
        found = min(reached, key=lambda each: each.deviation)
        for offers in self._subsets(found.operation):
            start = self._start_of(found.operation, group, offers)
            if start is not None:
                self.refined(start, found.points[1:])

    def _subsets(self, operation: Operation) -> Iterator[Mapping[str, Offer]]:
        """Yield the allowed numbers of pieces of a design, those with most of it first."""
        T = np.array([operation.study.range.reference])
        options: list[list[tuple[float, str, Offer]]] = []
        for name, slot in self.slots.items():
            mix = operation.mixes[name]
            used = [
                (float(share_of(mix, part.material.name, T)[0]), part.material)
                for part in mix.parts
            ]
            used = [item for item in used if item[0] > _LEAST_SHARE]
            mine = []
            for count in range(1, min(slot.pieces, len(used)) + 1):
                for some in combinations(used, count):
                    left = 1 - sum(share for share, _ in some)
                    offer = Offer(tuple(m for _, m in some), mix.join)
                    mine.append((left, name, offer))
            options.append(mine)
        ranked = sorted(product(*options), key=lambda each: sum(item[0] for item in each))
        for each in ranked[: self.effort.subsets]:
            yield {name: offer for _, name, offer in each}

    def _group_of(self, operation: Operation) -> int:
        """Return the group with an operation's ratios, and its input where that is not free."""
        wanted = operation.choices
        for number, (each, span) in enumerate(self.groups):
            same = each.choices
            if (same.area_ratio, same.mirror_ratio) == (
                wanted.area_ratio,
                wanted.mirror_ratio,
            ) and (span is not None or same.input_current == wanted.input_current):
                return number
        raise AssertionError("a design on paper belongs to one of the choices of its study")

    def _start_of(
        self, operation: Operation, group: int, chosen: Mapping[str, Offer]
    ) -> _Start | None:
        """Return a design's values as a start for offers; None where the joins do not agree.

        Where an offer leaves parts out, the others are scaled up to the same whole.
        """
        T = np.array([operation.study.range.reference])
        offers, values = {}, {}
        for name in self.slots:
            offer, mix = chosen[name], operation.mixes[name]
            if len(mix.parts) > 1 and len(offer.materials) > 1 and mix.join != offer.join:
                return None
            by_name = {part.material.name: part.value for part in mix.parts}
            parts = np.array([by_name.get(m.name, 0.0) for m in offer.materials])
            if offer.join == "parallel":
                parts = np.divide(1.0, parts, out=np.zeros_like(parts), where=parts > 0)
            whole = offer.columns(T)[0] @ parts
            if whole <= 0:
                return None
            offers[name] = offer
            values[name] = parts * float(offer.linear(mix.resistance(T))[0] / whole)
        return _Start(0.0, group, offers, values)


def _own_offer(mix: Mix) -> Offer:
    return Offer(tuple(part.material for part in mix.parts), mix.join)


def _pairs(
    operation: Operation, number: int, slots: Mapping[str, OpenSlot], room: Room
) -> list[_Start]:
    """Return a start for every pair of single materials that can give the current at all."""
    span = operation.study.range
    T = chebyshev_nodes(span.low, span.high, _NODES)
    target = room.target.current(T)
    # the estimate takes the die for as warm as the range
    (outer_name, outer_slot), (inner_name, inner_slot) = slots.items()
    count = round(np.log10(_VOLTS[1] / _VOLTS[0]) * _PER_DECADE)
    grid = np.geomspace(*_VOLTS, count) / target.mean()
    causes = room.causes
    points = np.vstack([np.zeros((1, causes.count)), causes.both_ways()])
    knob = np.ones(_NODES) if room.knobs.each else None
    found = []
    for outer in outer_slot.materials:
        ratio = causes.ratio(outer, points, T)
        quantities = causes.quantities(operation, points, T)
        quantities[resistance_name(outer_name)] = grid[:, None, None] * ratio

        def need(off: float, q: Mapping[str, Array] = quantities) -> Array:
            wanted = needed_resistance(operation.circuit, inner_name, target * (1 + off), q)
            return np.broadcast_to(wanted, (len(grid), len(points), _NODES))

        middle, up, down = need(0.0), need(_STEP)[:, 0], need(-_STEP)[:, 0]
        with np.errstate(invalid="ignore", divide="ignore"):
            slope = 2 * _STEP / np.log(up / down)
        usable = ((middle > 0).all(axis=(1, 2)) & (up > 0).all(axis=1) & (down > 0).all(axis=1)
                  & np.isfinite(slope).all(axis=1))  # fmt: skip
        usable &= _input_in_reach(operation, quantities, inner_name, middle, target)
        if not usable.any():
            continue
        log_need, slope, values = np.log(middle[usable]), slope[usable], grid[usable]
        by_cause = np.stack([causes.slopes(each[1:]) for each in log_need])
        for inner in inner_slot.materials:
            own = np.log(causes.ratio(inner, points[:1], T)[0])
            level = (log_need[:, 0] - own).mean(axis=1)
            off = slope * (level[:, None] + own - log_need[:, 0])
            moving = slope[:, None] * (causes.material_log_slopes(inner, T) - by_cause)
            each = estimates(off, moving, knob, room.sigma)
            k = int(np.argmin(each))
            offers = {outer_name: Offer((outer,), "series"), inner_name: Offer((inner,), "series")}
            start = {outer_name: values[k : k + 1], inner_name: np.exp(level[k : k + 1])}
            found.append(_Start(float(each[k]), number, offers, start))
    return found


def _input_in_reach(
    operation: Operation, quantities: Mapping[str, Array], inner: str, need: Array, target: Array
) -> np.ndarray[tuple[int, ...], np.dtype[np.bool_]]:
    """Say for which values a fed input stays within a sensible multiple of the target current."""
    if operation.study.circuit.feed != SUPPLY:
        return np.ones(len(need), dtype=bool)
    full = {**quantities, resistance_name(inner): np.abs(need)}
    ratio = currents(operation.circuit, full)["I_in"] / target
    return np.asarray(((ratio < _INPUT_RATIO) & (ratio > 1 / _INPUT_RATIO)).all(axis=(1, 2)))
