"""Search for silicon over one open slot: every allowed mix, what cannot be shown skipped by proof.

Offers are taken in the order of their estimates. One that is worse than the
worst design still shown is ruled out by a single program, linearised at that
design's deviation: if its optimum lies above, no mix of the offer, nor of any
part of it, comes below.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field

import numpy as np
from scipy.optimize import minimize_scalar

from tcopt.arrays import Array
from tcopt.mix.band import Band
from tcopt.mix.offer import Offer, offers, whole_offers
from tcopt.mix.program import Fit, best_fit
from tcopt.mix.room import Room
from tcopt.mix.screen import Estimate, screened
from tcopt.mix.silicon import SiliconFit, best_silicon_fit, silicon_outcome
from tcopt.mix.single import Best, Group
from tcopt.study import OpenSlot

__all__ = ["search_one_slot_for_silicon"]

_MARGIN = 1 + 1e-6


def search_one_slot_for_silicon(
    groups: Sequence[Group],
    slot: OpenSlot,
    room: Room,
    keep: int,
    progress: Callable[[int, int], None] | None = None,
) -> tuple[Best, Fit | None, float]:
    """Return the best designs of one open slot, the best single material, and the menu's bound [1].

    Parameters
    ----------
    groups : one for each choice of ratios and input; the input of one whose span is free
        is tried over its grid, and that of the designs that are kept then made finer
    slot : materials, pieces and join
    room : what the search goes by
    keep : how many designs are wanted
    progress : called with combinations done and combinations in all
    """
    best = Best(keep)
    single: SiliconFit | None = None
    allowed = offers(slot)
    cases = [
        _Case(number, band, screened(band, allowed, room))
        for number, group in enumerate(groups)
        for band in group.bands
    ]
    cases.sort(key=lambda case: case.promise)
    bound, worst = np.inf, None
    usable = []
    for case in cases:
        wholes = whole_offers(slot)
        reached = [
            silicon_outcome(case.band, whole, room, worst, bound, whole=True) for whole in wholes
        ]
        found = [outcome.fit for outcome in reached if outcome.fit is not None]
        if found:
            least = min(found, key=lambda fit: fit.bound)
            bound, worst = min(bound, least.bound), least.points[1:]
        # of a program that has no solution only this is sure: there may be mixes all the same
        unknown = [
            best_fit(case.band, whole) is not None
            for whole, outcome in zip(wholes, reached, strict=True)
            if outcome.fit is None and not outcome.ruled_out
        ]
        bound = 0.0 if any(unknown) else bound
        if found or np.isfinite(bound):
            usable.append(case)
    queue = [(estimate, case) for case in usable for estimate in case.estimates_of(allowed, room)]
    queue.sort(key=lambda item: item[0].deviation)
    best.skipped += len(allowed) * (len(cases) - len(usable))
    for done, (estimate, case) in enumerate(queue):
        if progress is not None:
            progress(done, len(queue))
        offer, points = estimate.offer, estimate.points
        alone = len(offer.materials) == 1
        give_up = best.threshold() * _MARGIN
        if alone and (single is None or give_up < single.deviation):
            give_up = np.inf if single is None else single.deviation
        elif case.rules_out(offer, slot, room, worst, give_up):
            best.skipped += 1
            continue
        outcome = silicon_outcome(case.band, offer, room, points, give_up)
        fit = outcome.fit
        if fit is None:
            best.skipped += 1
            # in parallel, the fewer the parts the less the area
            nested = not (room.is_limited and offer.join == "parallel")
            if outcome.ruled_out and not alone and nested:
                case.ruled_out.append(offer)
            continue
        if alone and (single is None or fit.deviation < single.deviation):
            single = fit
        best.add(fit.as_fit(), case.number)
    _polish(best, groups, slot, room)
    if progress is not None:
        progress(len(queue), len(queue))
    alone_best = single.as_fit() if single else None
    return best, alone_best, bound


@dataclass
class _Case:
    """One choice of ratios and input: its band, what offers could come to, what is ruled out."""

    number: int
    band: Band
    estimates: list[Estimate]
    ruled_out: list[Offer] = field(default_factory=list)
    whole_tried: bool = False

    @property
    def promise(self) -> float:
        """The least estimate; at the end of the line where there are none."""
        return min((each.deviation for each in self.estimates), default=np.inf)

    def estimates_of(self, allowed: Sequence[Offer], room: Room) -> list[Estimate]:
        """Return the estimates; where there are none, offers in no particular order."""
        nothing = np.empty((0, room.causes.count))
        return self.estimates or [Estimate(offer, np.inf, nothing) for offer in allowed]

    def rules_out(
        self, offer: Offer, slot: OpenSlot, room: Room, points: Array | None, give_up: float
    ) -> bool:
        """Say whether an offer is part of one that is proven not to come below `give_up`."""
        if np.isfinite(give_up) and not self.whole_tried:
            self.whole_tried = True
            for whole in whole_offers(slot):
                if silicon_outcome(
                    self.band, whole, room, points, give_up, try_once=True, whole=True
                ).ruled_out:  # fmt: skip
                    self.ruled_out.append(whole)
        return any(_within(offer, other) for other in self.ruled_out)


def _within(offer: Offer, other: Offer) -> bool:
    """Say whether every mix of an offer is also one of another."""
    same_join = offer.join == other.join or len(offer.materials) == 1
    return same_join and set(_names(offer)) <= set(_names(other))


def _names(offer: Offer) -> tuple[str, ...]:
    return tuple(material.name for material in offer.materials)


def _polish(best: Best, groups: Sequence[Group], slot: OpenSlot, room: Room) -> None:
    """Make a free input current finer for the designs that are shown."""
    by_parts = {
        (frozenset(_names(offer)), offer.join if len(offer.materials) > 1 else "series"): offer
        for offer in offers(slot)
    }
    for fit in best.ranked()[: best.keep]:
        choices = fit.operation.choices
        for number, group in enumerate(groups):
            same = group.band.operation.choices
            if (
                group.input_span is None
                or choices.input_current is None
                or (same.area_ratio, same.mirror_ratio)
                != (choices.area_ratio, choices.mirror_ratio)
            ):
                continue
            mix = fit.operation.mixes[group.band.slot]
            offer = by_parts[frozenset(p.material.name for p in mix.parts), mix.join]
            low, high = np.log(group.input_span)
            here = np.log(choices.input_current)
            reach = (high - low) / (len(group.bands) - 1)
            tried: list[SiliconFit] = []

            def deviation(
                log_input: float,
                group: Group = group,
                offer: Offer = offer,
                tried: list[SiliconFit] = tried,
            ) -> float:
                band = group.band.with_input(float(np.exp(log_input)))
                found = best_silicon_fit(band, offer, room)
                tried.extend([] if found is None else [found])
                return 1.0 if found is None else found.deviation

            minimize_scalar(
                deviation,
                bounds=(max(low, here - reach), min(high, here + reach)),
                method="bounded",
                options={"xatol": 0.02, "maxiter": 12},
            )
            for found in tried:
                best.add(found.as_fit(), number)
