"""Where a mix lies in the plane of TC1 and TC2: the lever rule, and how far parallel mixes miss it.

In series the coefficients are the parts' averages, each part weighing by its
share of the resistance: ``TC1 = sum w a``, ``TC2 = sum w b``; every such mix lies
in the convex hull of its parts. In parallel the shares are those of the
conductance and, from the expansion of ``1/sum(g/m)``,
``TC2 = sum w b - (sum w a^2 - (sum w a)^2)``: the variance of the parts' TC1 is
lost, so parallel mixes lie below the lever line.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from tcopt.laws.numbers import moved_coefficients, resistance_ratio
from tcopt.operation import Mix

__all__ = ["MixPoint", "lever", "mix_point"]


@dataclass(frozen=True, slots=True)
class MixPoint:
    """A mix about a reference temperature.

    Attributes
    ----------
    tc1, tc2 : [1/K], [1/K^2]
    shares : of the resistance in series, of the conductance in parallel, part by part [1]
    """

    tc1: float
    tc2: float
    shares: tuple[float, ...]


def lever(
    points: Sequence[tuple[float, float]], shares: Sequence[float], join: str
) -> tuple[float, float]:
    """Return TC1 [1/K] and TC2 [1/K^2] of parts at these points with these shares.

    Parameters
    ----------
    points : TC1 and TC2 of each part, about one reference
    shares : of the resistance in series, of the conductance in parallel; they add up to 1
    join : 'series' or 'parallel'
    """
    a, b = np.array(points).T
    w = np.array(shares)
    tc1, tc2 = float(w @ a), float(w @ b)
    if join == "parallel":
        tc2 -= float(w @ (a - tc1) ** 2)
    return tc1, tc2


def mix_point(mix: Mix, reference: float) -> MixPoint:
    """Return where a mix lies about a reference [K]."""
    R = np.array([p.value * float(resistance_ratio(p.material, reference)) for p in mix.parts])
    weights = R if mix.join == "series" else 1 / R
    shares = tuple(float(share) for share in weights / weights.sum())
    points = [moved_coefficients(part.material, reference) for part in mix.parts]
    return MixPoint(*lever(points, shares, mix.join), shares)
