"""Search over one open slot: every allowed mix, skipping what cannot be among the best.

Offers are taken in the order of a quick bound (`tcopt.mix.quick`); one that it
shows to be worse than the worst design still shown is skipped, with proof. A
free input current is cut into stretches, each searched like a choice of its
own, so that the bound holds over all of them.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from functools import cached_property

import numpy as np

from tcopt.mix.band import Band
from tcopt.mix.offer import Offer, offers, whole_offers
from tcopt.mix.program import FLOOR, Fit, best_fit, match
from tcopt.mix.quick import QuickBound
from tcopt.operation import Operation
from tcopt.study import OpenSlot

__all__ = ["Best", "Group", "search_one_slot"]

_MARGIN = 1 + 1e-6
_STRETCH = 0.5
"""Widest stretch of a free input, in its logarithm, that is searched at once."""
_INPUTS = 9
_SPLITS = 24
_NOMINAL = 1e-5
_WIDEST = 0.9
"""Above this a band says too little for the quick bound."""
_TIGHT = 1e-3
"""Relative gap at which what is proven of the whole menu and what it reaches agree."""


@dataclass(frozen=True)
class Group:
    """One choice of ratios and input: the band it makes, and the input's span if it is free."""

    band: Band
    input_span: tuple[float, float] | None = None

    @cached_property
    def bands(self) -> tuple[Band, ...]:
        """The band, or one for each input current of a grid, for searches that need it settled."""
        if self.input_span is None:
            return (self.band,)
        return tuple(map(self.band.with_input, np.geomspace(*self.input_span, _INPUTS).tolist()))

    @property
    def stretches(self) -> tuple[Band, ...]:
        """The band, or one for each stretch of a free input, over which it is free."""
        if self.input_span is None:
            return (self.band,)
        return self.band.over_input(*self.input_span).split(_STRETCH)


@dataclass
class Best:
    """The best designs so far, one for each set of parts and choices.

    A design whose parts include all those of a better one with the same choices
    is none: its further parts are for nothing.
    """

    keep: int
    found: dict[tuple[int, _Parts], Fit] = field(default_factory=dict)
    examined: int = 0
    skipped: int = 0
    _ranked: list[Fit] | None = None

    def add(self, fit: Fit | None, group: int) -> None:
        """Take in a design of a group of choices, unless the same parts do better already."""
        self.examined += 1
        if fit is None:
            return
        key = (group, _parts(fit.operation))
        if key not in self.found or fit.deviation < self.found[key].deviation:
            self.found[key] = fit
            self._ranked = None

    def ranked(self) -> list[Fit]:
        """Return the designs, best first."""
        if self._ranked is None:
            better: dict[int, list[_Parts]] = {}
            self._ranked = []
            for (group, parts), fit in sorted(
                self.found.items(), key=lambda item: item[1].deviation
            ):
                of_group = better.setdefault(group, [])
                if not any(_includes(parts, fewer) for fewer in of_group):
                    of_group.append(parts)
                    self._ranked.append(fit)
        return self._ranked

    def threshold(self) -> float:
        """Return the deviation that a newcomer must stay below to be shown [1]."""
        ranked = self.ranked()
        return ranked[self.keep - 1].deviation if len(ranked) >= self.keep else np.inf


_Parts = tuple[tuple[str, str, frozenset[str]], ...]
"""What makes a design the same design but for its values: slot, join and materials of each mix."""


def _parts(operation: Operation) -> _Parts:
    return tuple(
        (slot, mix.join, frozenset(part.material.name for part in mix.parts))
        for slot, mix in operation.mixes.items()
    )


def _includes(parts: _Parts, fewer: _Parts) -> bool:
    """Say whether a design has all the parts of another, joined in the same way."""
    return all(
        names <= more and (join == joined or len(names) == 1)
        for (_, joined, more), (_, join, names) in zip(parts, fewer, strict=True)
    )


def search_one_slot(
    groups: Sequence[Group],
    slot: OpenSlot,
    keep: int,
    progress: Callable[[int, int], None] | None = None,
) -> tuple[Best, float, float]:
    """Return the best designs of one open slot, and of the whole menu what is proven and reached.

    The two last [1]: what no mix of any number of pieces falls below, and what
    the best that was found reaches. They agree, except where a free input's
    stretches would have to be cut too often for it.

    Parameters
    ----------
    groups : one for each choice of ratios and input
    slot : materials, pieces and join
    keep : how many designs have to be the best with proof
    progress : called with combinations done and combinations in all
    """
    best = Best(keep)
    allowed = offers(slot)
    proven = reached = np.inf
    queue: list[tuple[float, int, QuickBound, Offer]] = []
    for number, group in enumerate(groups):
        stretches = group.stretches
        bound, deviation = _whole_menu(stretches, slot)
        proven, reached = min(proven, bound), min(reached, deviation)
        if not np.isfinite(deviation):
            best.skipped += len(allowed) * len(stretches)
            continue
        nominal = max(deviation, _NOMINAL)
        for stretch in stretches:
            quick = QuickBound(stretch)
            queue += [
                (nominal * quick.excess(offer, nominal), number, quick, offer) for offer in allowed
            ]
    queue.sort(key=lambda item: item[0])
    here: dict[tuple[int, Offer], float] = {}
    for done, (_, number, quick, offer) in enumerate(queue):
        if progress is not None:
            progress(done, len(queue))
        limit = min(best.threshold(), here.get((number, offer), np.inf)) * _MARGIN
        if limit < _WIDEST and quick.excess(offer, limit) > 1:
            best.skipped += 1
            continue
        fit = best_fit(quick.band, offer)
        if fit is not None:
            here[number, offer] = min(fit.deviation, here.get((number, offer), np.inf))
        best.add(fit, number)
    if progress is not None:
        progress(len(queue), len(queue))
    return best, proven, reached


def _whole_menu(stretches: Sequence[Band], slot: OpenSlot) -> tuple[float, float]:
    """Return what is proven, and what is reached, with every material in the mix [1].

    A stretch of a free input over which the proof falls short of what is
    reached is halved (branch and bound; Land and Doig 1960, *Econometrica* 28).
    """
    waiting = [(stretch, whole) for whole in whole_offers(slot) for stretch in stretches]
    proven = reached = np.inf
    splits = _SPLITS
    while waiting:
        stretch, whole = waiting.pop(0)
        if reached < _WIDEST and QuickBound(stretch).excess(whole, reached) > 1:
            proven = min(proven, reached)
            continue
        fit, bound = match(stretch, whole)
        reached = min(reached, np.inf if fit is None else fit.deviation)
        if bound < reached * (1 - _TIGHT) - FLOOR and stretch.input_span is not None and splits > 0:
            splits -= 1
            waiting += [(half, whole) for half in stretch.halves()]
        else:
            proven = min(proven, bound)
    return proven, reached
