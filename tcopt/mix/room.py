"""What a search for silicon goes by, and the room that a layout leaves it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np

from tcopt.arrays import Array
from tcopt.mix.causes import Causes
from tcopt.mix.knobs import Knobs
from tcopt.mix.offer import Offer
from tcopt.targets import TargetCurrent

__all__ = ["Room"]


@dataclass(frozen=True)
class Room:
    """What a search for silicon goes by.

    Attributes
    ----------
    target : what the current should be
    causes : what varies
    knobs : what a trim sets right
    sigma : how many standard deviations out the scenarios lie
    area_limit : all open slots together [m^2]
    area_per_ohm : by material: least area of one ohm at its narrowest [m^2/ohm]
    """

    target: TargetCurrent
    causes: Causes
    knobs: Knobs
    sigma: float
    area_limit: float = np.inf
    area_per_ohm: Mapping[str, float] = field(default_factory=dict)

    @property
    def is_limited(self) -> bool:
        """Whether there is a limit on the area."""
        return bool(np.isfinite(self.area_limit))

    def area(self, offer: Offer, coefficients: Array) -> float:
        """Return the area that a mix of an offer takes at least [m^2]."""
        each = np.array([self.area_per_ohm[m.name] for m in offer.materials])
        if offer.join == "series":
            return float(each @ coefficients)
        used = coefficients > 0
        return float((each[used] / coefficients[used]).sum())

    def area_row(self, offer: Offer, about: Array) -> tuple[Array, float]:
        """Return ``row @ coefficients <= side``: the limit on the area, in parts of the limit.

        Exact in series; in parallel the tangent of ``sum a_i/g_i`` at `about`, which cuts
        off nothing that is allowed, since the sum is convex.
        """
        each = np.array([self.area_per_ohm[m.name] for m in offer.materials]) / self.area_limit
        if offer.join == "series":
            return each, 1.0
        return -each / about**2, 1.0 - 2 * float((each / about).sum())
