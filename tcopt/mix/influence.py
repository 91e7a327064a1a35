"""What each part of a design does to its output: the ground on which sizes are chosen."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from tcopt.arrays import Array
from tcopt.assess import Assessment
from tcopt.mix.program import chebyshev_nodes
from tcopt.operation import Mix, Operation
from tcopt.spread.pelgrom import device_deviation
from tcopt.study import Part
from tcopt.symbols import resistance_name

__all__ = ["Influence", "Place", "mismatch_of"]

_NODES = 17

Place = tuple[str, int]
"""A part: the name of its slot and its index there."""


def _by_part(operation: Operation, T: Array) -> dict[Place, Array]:
    """Return ``d ln I_out/d ln value`` of every part at temperatures [K]."""
    by_quantity, die = operation.sensitivities(T), operation.die_temperature(T)
    found: dict[Place, Array] = {}
    for slot, mix in operation.mixes.items():
        total = mix.resistance(die)
        for index, part in enumerate(mix.parts):
            R = Mix((part,)).resistance(die)
            share = R / total if mix.join == "series" else total / R
            found[slot, index] = by_quantity[resistance_name(slot)] * share
    return found


@dataclass(frozen=True)
class Influence:
    """A design whose values are to be rounded.

    Attributes
    ----------
    found : the design
    slots : those whose parts are to be rounded
    """

    found: Assessment
    slots: Collection[str]

    @property
    def operation(self) -> Operation:
        """The design at its temperatures."""
        return self.found.operation

    @cached_property
    def parts(self) -> dict[Place, Part]:
        """The parts to be rounded."""
        return {
            (slot, index): part
            for slot, mix in self.operation.mixes.items()
            if slot in self.slots
            for index, part in enumerate(mix.parts)
        }

    def move(self, place: Place, part: Part) -> Array:
        """Return what another part in a place does to ``ln I_out`` at the nodes, to first order."""
        here = Mix((self.parts[place],)).resistance(self.nodes)
        return np.asarray(self.by_part[place] * np.log(Mix((part,)).resistance(self.nodes) / here))

    @cached_property
    def nodes(self) -> Array:
        """Temperatures at which rounding is judged [K]."""
        span = self.operation.study.range
        return chebyshev_nodes(span.low, span.high, _NODES)

    @cached_property
    def by_part(self) -> dict[Place, Array]:
        """``d ln I_out/d ln value`` of each part at the nodes."""
        return _by_part(self.operation, self.nodes)

    @cached_property
    def off(self) -> Array:
        """``ln(I/I_target)`` at the nodes."""
        return np.log1p(self.found.residual(self.nodes))

    @cached_property
    def at_reference(self) -> dict[Place, float]:
        """``|d ln I_out/d ln value|`` of every part at the reference."""
        T = np.array([self.operation.study.range.reference])
        return {place: abs(float(each[0])) for place, each in _by_part(self.operation, T).items()}


def mismatch_of(operation: Operation) -> float | None:
    """Return one standard deviation of the output at the reference from mismatch of resistors [1].

    Each part of a known area by itself (`tcopt.spread.pelgrom`), weighed by its
    influence; None if there is no such part.
    """
    T = np.array([operation.study.range.reference])
    total, known = 0.0, False
    for (slot, index), by_part in _by_part(operation, T).items():
        part = operation.mixes[slot].parts[index]
        if part.area is not None and part.material.matching is not None:
            known = True
            own = device_deviation(part.material.matching, part.area)
            total += (float(by_part[0]) * own) ** 2
    return float(np.sqrt(total)) if known else None
