"""What a trim may set right in each part of silicon, as the search sees it."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from tcopt.study import Study

__all__ = ["Knob", "Knobs", "knobs_of"]


@dataclass(frozen=True, slots=True)
class Knob:
    """A scale that may be set anew in every part of silicon.

    Attributes
    ----------
    slot : resistor slot that it scales; None for the output current
    material : in that slot, the material whose parts alone are scaled; None for all
    low, high : least and largest scale [1]
    """

    slot: str | None
    material: str | None
    low: float
    high: float

    @property
    def reach(self) -> tuple[float, float]:
        """The logarithms of least and largest scale."""
        return (
            -math.inf if self.low == 0 else math.log(self.low),
            math.inf if self.high == math.inf else math.log(self.high),
        )


@dataclass(frozen=True, slots=True)
class Knobs:
    """The knobs of a study.

    Attributes
    ----------
    each : the knobs
    from_trim : False where the study has no trim. The absolute value then spreads and
        nothing can mend it, so that the search compares the shape of the drift alone,
        with a free scale of the output; the spread of the value is told apart.
    """

    each: tuple[Knob, ...]
    from_trim: bool

    def of(self, slot: str) -> Knob | None:
        """Return the knob that scales a whole slot."""
        return next((k for k in self.each if k.slot == slot and k.material is None), None)

    def part_of(self, slot: str) -> Knob | None:
        """Return the knob that scales one material of a slot."""
        return next((k for k in self.each if k.slot == slot and k.material is not None), None)

    @property
    def is_linear(self) -> bool:
        """Whether every knob scales resistances, so that it is exact in a linear program."""
        return all(knob.slot is not None for knob in self.each)

    @property
    def output(self) -> Knob | None:
        """The knob that scales the output current."""
        return next((k for k in self.each if k.slot is None), None)


def knobs_of(study: Study) -> Knobs:
    """Return what a study's trim may scale, or, without one, a free scale of the output."""
    from tcopt.study.spread import OUTPUT_MIRROR  # noqa: PLC0415  this layer lies below the gate

    trim = study.trim
    if trim is None:
        return Knobs((Knob(None, None, 0.0, math.inf),), from_trim=False)
    return Knobs(
        tuple(
            Knob(
                None if each.scales == OUTPUT_MIRROR else each.scales,
                each.material,
                1 - each.reach,
                1 + each.reach,
            )
            for each in trim.insertions
        ),
        from_trim=True,
    )
