"""Search over one open slot whose resistance the output does not follow one way only.

Past the peak of a peaking source the output rises with the feed, below it the
output falls: two resistances give one current, so the band of `tcopt.mix.band`
has two branches and no single program holds both. Values are tried over a grid
in the full solution instead, the best of each offer is refined
(`tcopt.mix.refine`), and what is found has no proof.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence

import numpy as np

from tcopt.arrays import Array
from tcopt.circuits import CIRCUITS
from tcopt.mix.joint import shapes
from tcopt.mix.offer import Offer, offers, whole_offers
from tcopt.mix.program import chebyshev_nodes
from tcopt.mix.question import Spanned
from tcopt.mix.refine import INPUT_RATIO, refine
from tcopt.mix.single import Best
from tcopt.operation import Operation
from tcopt.solve import currents, sensitivities
from tcopt.study import OpenSlot, Study
from tcopt.symbols import resistance_name
from tcopt.targets import TargetCurrent

__all__ = ["is_two_sided", "need_near", "search_two_sided"]

_NODES = 9
_STEPS = 30
_VALUES = 160
_VOLTS = (1e-2, 300.0)
"""Drops across the slot, at currents from a hundredth to a hundred times the target's [V]."""


def is_two_sided(study: Study, name: str) -> bool:
    """Say whether two resistances in a slot can give one current."""
    made = study.circuit
    slots = CIRCUITS[made.topology].slots_for(made.feed)
    return any(slot.name == name and not slot.one_way for slot in slots)


def need_near(operation: Operation, name: str, output: Array, die: Array) -> Array:
    """Return the needed resistance [ohm] on the branch of the mix that is in the slot.

    Newton's method on the logarithms, from the mix's own resistance.

    Parameters
    ----------
    operation : the design, the slot filled
    name : the slot
    output : wanted [A]
    die : temperatures of the die [K]
    """
    quantities = dict(operation.quantities(die))
    own = resistance_name(name)
    for _ in range(_STEPS):
        found = currents(operation.circuit, quantities)[operation.circuit.currents[-1]]
        slope = sensitivities(operation.circuit, quantities)[own]
        step = np.clip(np.log(output / found) / slope, -0.5, 0.5)
        quantities[own] = quantities[own] * np.exp(step)
    return np.asarray(quantities[own])


def search_two_sided(
    groups: Sequence[Spanned],
    name: str,
    slot: OpenSlot,
    target: TargetCurrent,
    keep: int,
    progress: Callable[[int, int], None] | None = None,
) -> tuple[Best, float]:
    """Return the best designs, and the best found with the whole menu in the slot [1].

    Parameters
    ----------
    groups : operation with the slot open, and the input's span if it is free
    name, slot : the open slot
    target : what the current should be
    keep : how many designs are wanted
    progress : called with offers done and offers in all
    """
    best, reached = Best(keep), [np.inf]
    allowed = offers(slot)
    for number, (operation, span) in enumerate(groups):
        for done, offer in enumerate([*allowed, *whole_offers(slot)]):
            if progress is not None:
                tried = number * len(allowed) + min(done, len(allowed))
                progress(tried, len(groups) * len(allowed))
            start = _start(operation, name, offer, target)
            fit = start and refine(operation, {name: offer}, {name: start[0]}, target, span)
            if done < len(allowed):
                best.add(fit or None, number)
            reached += [fit.deviation] if fit else []
    return best, min(reached)


def _start(
    operation: Operation, name: str, offer: Offer, target: TargetCurrent
) -> tuple[Array] | None:
    """Return the coefficients of the offer that come closest on a grid; None if none conducts."""
    span = operation.study.range
    T = chebyshev_nodes(span.low, span.high, _NODES)
    current = target.current(T)
    columns = offer.columns(T)
    grid = np.geomspace(_VOLTS[0] / INPUT_RATIO, _VOLTS[1] * INPUT_RATIO, _VALUES) / current.mean()
    choices = []
    for shares in shapes(offer) if len(offer.materials) <= 3 else [np.ones(columns.shape[1])]:
        size = float(offer.linear(columns @ shares).mean())
        scale = grid / size if offer.join == "series" else size / grid
        choices.append(shares * scale[:, None])
    coefficients = np.concatenate(choices)
    resistance = offer.linear(coefficients @ columns.T)
    quantities = {**operation.quantities(T), resistance_name(name): resistance}
    found = currents(operation.circuit, quantities)
    with np.errstate(divide="ignore", invalid="ignore"):
        off = np.abs(np.log(found[operation.circuit.currents[-1]] / current)).max(axis=-1)
        ratio = np.abs(np.log(found["I_in"] / current)).max(axis=-1)
    off = np.where(np.isfinite(off) & (ratio < np.log(INPUT_RATIO)), off, np.inf)
    place = int(np.argmin(off))
    return (coefficients[place],) if np.isfinite(off[place]) else None
