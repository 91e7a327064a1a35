"""The offer: what resistances a set of materials, in series or in parallel, can make."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import combinations
from typing import TYPE_CHECKING

import numpy as np

from tcopt.arrays import Array
from tcopt.laws.numbers import resistance_ratio
from tcopt.operation import Mix

if TYPE_CHECKING:
    from tcopt.study import Material, OpenSlot

__all__ = ["Offer", "offers", "whole_offers"]


@dataclass(frozen=True)
class Offer:
    """Materials and how they are joined.

    A series mix is linear in the parts' resistances, ``R = sum r_i m_i(T)``, a
    parallel mix in their conductances, ``1/R = sum g_i/m_i(T)``. Either way the
    mix is ``columns(T) @ coefficients`` with coefficients that are not negative.
    """

    materials: tuple[Material, ...]
    join: str

    def columns(self, temperature: Array) -> Array:
        """Return what one unit of each part adds at temperatures [K], shape (n, materials)."""
        each = np.stack([resistance_ratio(m, temperature) for m in self.materials], axis=-1)
        return each if self.join == "series" else 1 / each

    def linear(self, resistance: Array) -> Array:
        """Return what is linear in the coefficients: the resistance, or its inverse."""
        return resistance if self.join == "series" else 1 / resistance

    def coefficients(self, mix: Mix) -> Array:
        """Return the coefficients of a mix of these materials, shape (materials,)."""
        values = {part.material.name: part.value for part in mix.parts}
        each = np.array([values.get(material.name, 0.0) for material in self.materials])
        if self.join == "series":
            return each
        return np.asarray(np.divide(1.0, each, out=np.zeros_like(each), where=each > 0))

    def mix(self, coefficients: Array) -> Mix:
        """Return the mix of these coefficients, without the parts that are not used."""
        from tcopt.study import Part  # noqa: PLC0415  keeps this layer below the gate

        used = [(m, float(c)) for m, c in zip(self.materials, coefficients, strict=True) if c > 0]
        parts = tuple(
            Part(material=m, value=c if self.join == "series" else 1 / c) for m, c in used
        )
        return Mix(parts, self.join if len(parts) > 1 else "series")


def _joins(slot: OpenSlot) -> tuple[str, ...]:
    return ("series", "parallel") if slot.join == "either" else (slot.join,)


def offers(slot: OpenSlot) -> list[Offer]:
    """Return every combination that the slot allows; a single part is in series with nothing."""
    found = [Offer((material,), "series") for material in slot.materials]
    for pieces in range(2, min(slot.pieces, len(slot.materials)) + 1):
        for join in _joins(slot):
            found += [Offer(chosen, join) for chosen in combinations(slot.materials, pieces)]
    return found


def whole_offers(slot: OpenSlot) -> list[Offer]:
    """Return the whole menu at once, once per join, for the bound."""
    return [Offer(slot.materials, join) for join in _joins(slot)]
