"""Spread as independent causes, for designs that are still being made.

A *point* is a value for each cause, in standard deviations. The points at a
distance s from the middle are the worst that "s sigma" allows, whichever
causes conspire. What varies, and with what, is told by `tcopt.spread`; here it
is told for the whole menu at once. Mismatch is left out: it averages out over
area, and what area buys is the layout's affair.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from tcopt.arrays import Array
from tcopt.laws import generated
from tcopt.operation import Mix, Operation
from tcopt.solve import currents
from tcopt.spread.build import variation_of
from tcopt.spread.variation import FROM_OUTSIDE, LOT, Scale, Variation

if TYPE_CHECKING:
    from tcopt.study import Material

__all__ = ["Causes", "causes_of", "no_causes", "share_of"]

_STEP = 0.05
"""Standard deviations by which a slope is taken; central, so its square is what is left."""


def share_of(mix: Mix, material: str, temperature: Array) -> Array:
    """Return a material's share of a mix [1]: of the resistance in series, else of 1/R."""
    total = mix.resistance(temperature)
    own = Mix(tuple(part for part in mix.parts if part.material.name == material), mix.join)
    if not own.parts:
        return np.zeros_like(total)
    R = own.resistance(temperature)
    return np.asarray(R / total if mix.join == "series" else total / R)


@dataclass(frozen=True)
class Causes:
    """What varies in designs of one study, whatever materials they take.

    Attributes
    ----------
    variation : of the whole menu, mismatch and errors of the test left out
    """

    variation: Variation

    @property
    def count(self) -> int:
        """How many independent causes there are."""
        return len(self.variation.variates)

    def ratio(self, material: Material, points: Array, temperature: Array) -> Array:
        """Return ``R(T)/R_0`` of a material, R_0 the typical one at its reference.

        Parameters
        ----------
        points : shape (points, causes)
        temperature : [K], shape (n,)

        Returns
        -------
        Array
            shape (points, n)
        """
        sheet, tc1, tc2 = (
            self.variation.deviation((key, material.name), points)
            for key in ("sheet", "tc1", "tc2")
        )
        ratio = generated.resistance_ratio(
            temperature, material.reference, material.tc1 + tc1, material.tc2 + tc2
        )
        return np.asarray((1 + sheet) * ratio)

    def quantities(
        self,
        operation: Operation,
        points: Array,
        temperature: Array,
        scales: Mapping[Scale, Array] | None = None,
    ) -> dict[str, Array]:
        """Return a design's quantities at die temperatures [K], shape (points, n) where they vary.

        ``scales``: what a trim makes of settled slots or a material of one, (points, 1).
        """
        varied = replace(self.variation, operation=operation)
        return varied.quantities(points, temperature, scales)

    def both_ways(self) -> Array:
        """Return the points at which slopes are taken: each cause up, then each down."""
        eye = _STEP * np.eye(self.count)
        return np.vstack([eye, -eye])

    def slopes(self, logarithms: Array) -> Array:
        """Return slopes by cause from what was found at `both_ways`, shape (causes, n)."""
        up, down = np.split(logarithms, 2)
        return np.asarray((up - down) / (2 * _STEP))

    def output_log_slopes(self, operation: Operation, temperature: Array) -> Array:
        """Return ``d ln I_out/d cause`` at the typical point, shape (causes, n)."""
        if self.count == 0:
            return np.zeros((0, len(temperature)))
        die = operation.die_temperature(temperature)
        quantities = self.quantities(operation, self.both_ways(), die)
        output = currents(operation.circuit, quantities)["I_out"]
        shape = (2 * self.count, len(temperature))
        return self.slopes(np.log(np.broadcast_to(output, shape)))

    def material_log_slopes(self, material: Material, temperature: Array) -> Array:
        """Return ``d ln R/d cause`` of a material at the typical point, shape (causes, n)."""
        if self.count == 0:
            return np.zeros((0, len(temperature)))
        return self.slopes(np.log(self.ratio(material, self.both_ways(), temperature)))


def causes_of(operation: Operation, slots: Iterable[tuple[str, Iterable[Material]]]) -> Causes:
    """Return what varies in any design of a study.

    Parameters
    ----------
    operation : the slots to design still open
    slots : those slots, each with its menu
    """
    from tcopt.study import Part  # noqa: PLC0415  this layer lies below the gate

    whole = {
        slot: Mix(tuple(Part(material=material, value=1.0) for material in menu))
        for slot, menu in slots
    }
    found = variation_of(replace(operation, mixes={**operation.mixes, **whole}))
    kept = [
        index for index, variate in enumerate(found.variates) if variate.kind in {LOT, FROM_OUTSIDE}
    ]
    place = {old: new for new, old in enumerate(kept)}
    loads = {
        figure: tuple((place[column], weight) for column, weight in load)
        for figure, load in found.loads.items()
        if all(column in place for column, _ in load)
    }
    return Causes(Variation(operation, tuple(found.variates[k] for k in kept), loads))


def no_causes(operation: Operation) -> Causes:
    """Return that nothing varies, for a search on paper."""
    return Causes(Variation(operation, (), {}))
