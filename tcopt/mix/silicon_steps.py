"""Search for silicon over one open slot by refinement: for trims that no linear program holds.

Where a trim scales another slot than the one to design, or a part of one, the
band of that slot moves with it in no linear way. The offers are taken in the
order of their estimates, and the most promising refined from their best mixes on
paper. The result is the best that was found, without a proof.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np

from tcopt.mix.offer import offers
from tcopt.mix.program import Fit, best_fit
from tcopt.mix.robust import robust_fit
from tcopt.mix.room import Room
from tcopt.mix.screen import screened
from tcopt.mix.single import Best, Group
from tcopt.study import OpenSlot

__all__ = ["search_one_slot_by_steps"]

_REFINED = 30
_SINGLES = 6


def search_one_slot_by_steps(
    groups: Sequence[Group],
    slot: OpenSlot,
    room: Room,
    keep: int,
    progress: Callable[[int, int], None] | None = None,
) -> tuple[Best, Fit | None, float]:
    """Return the best designs of one open slot, the best single material, and the best found [1].

    Parameters
    ----------
    groups : one for each choice of ratios and input
    slot : materials, pieces and join
    room : what the search goes by
    keep : how many designs are wanted
    progress : called with combinations done and combinations in all
    """
    best = Best(keep)
    allowed = offers(slot)
    queue = [
        (estimate, number, band)
        for number, group in enumerate(groups)
        for band in group.bands
        for estimate in screened(band, allowed, room)
    ]
    queue.sort(key=lambda item: item[0].deviation)
    alone = [item for item in queue if len(item[0].offer.materials) == 1][:_SINGLES]
    chosen = alone + [item for item in queue if item not in alone][: max(_REFINED, 2 * keep)]
    best.skipped = len(queue) - len(chosen)
    single: Fit | None = None
    for done, (estimate, number, band) in enumerate(chosen):
        if progress is not None:
            progress(done, len(chosen))
        start = best_fit(band, estimate.offer)
        if start is None:
            continue
        values = estimate.offer.coefficients(start.operation.mixes[band.slot])
        span = groups[number].input_span
        fit = robust_fit(
            band.operation, {band.slot: estimate.offer}, {band.slot: values}, room, span,
            estimate.points,
        )  # fmt: skip
        made = fit.as_fit() if fit else None
        best.add(made, number)
        if made and len(estimate.offer.materials) == 1 and (
            single is None or made.deviation < single.deviation
        ):  # fmt: skip
            single = made
    if progress is not None:
        progress(len(chosen), len(chosen))
    return best, single, min((fit.deviation for fit in best.ranked()), default=np.inf)
