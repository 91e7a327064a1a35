"""Standard values for boards: the series of preferred numbers of IEC 60063."""

from __future__ import annotations

from itertools import product

import numpy as np

from tcopt.assess import Assessment
from tcopt.drift import extreme_points
from tcopt.mix.influence import Influence
from tcopt.mix.rounding import Option
from tcopt.operation import Mix
from tcopt.study import Part

__all__ = ["standard_options", "standard_values", "within_tolerance"]

_NEAR = 4
"""Standard values tried to either side."""
_CORNERS = 4096


def standard_values(series: str, value: float, count: int = _NEAR) -> list[float]:
    """Return the nearest standard values, `count` below (or at) and as many above.

    Parameters
    ----------
    series : 'E3' to 'E192'
    value : above zero

    >>> standard_values("E24", 4.62e3, 2)
    [3900.0, 4300.0, 4700.0, 5100.0]
    """
    from eseries import ESeries, erange  # noqa: PLC0415  for boards alone

    key = ESeries[series]
    reach = 10 ** ((count + 1.5) / int(key))
    near = [float(f"{each:.6g}") for each in erange(key, value / reach, value * reach)]
    below = [each for each in near if each <= value * (1 + 1e-9)]
    above = [each for each in near if each > value * (1 + 1e-9)]
    return below[-count:] + above[:count]


def standard_options(influence: Influence, series: str) -> list[list[Option]]:
    """Return, for each part, the options to order it."""
    return [
        [
            Option({place: Part(material=part.material, value=value)})
            for value in standard_values(series, part.value)
        ]
        for place, part in influence.parts.items()
    ]


def within_tolerance(
    found: Assessment, slots: frozenset[str], tolerance: float
) -> tuple[float, float] | None:
    """Return the largest deviation [1] and box drift [1/K] with every part at either limit.

    Both of the residual; of the corners of all parts of the slots, each at its value
    times 1 + or - the tolerance. None where there are too many to try.
    """
    operation = found.operation
    places = [
        (slot, index) for slot in sorted(slots) for index in range(len(operation.mixes[slot].parts))
    ]
    if 2 ** len(places) > _CORNERS:
        return None
    span = operation.study.range
    T = extreme_points(lambda T: found.residual(T) + 1, span.low, span.high, found.target.knots)
    T = np.union1d(T, np.linspace(span.low, span.high, 33))
    middle = np.array([span.reference])
    deviation = box = 0.0
    for signs in product((-1, 1), repeat=len(places)):
        factor = {place: 1 + sign * tolerance for place, sign in zip(places, signs, strict=True)}
        mixes = {
            slot: Mix(
                tuple(
                    part.model_copy(update={"value": part.value * factor.get((slot, k), 1.0)})
                    for k, part in enumerate(mix.parts)
                ),
                mix.join,
            )
            for slot, mix in operation.mixes.items()
        }
        moved = type(operation)(operation.study, operation.choices, mixes, operation.other_bases)
        ratio = moved.output(T) / found.target.current(T)
        level = float(moved.output(middle)[0] / found.target.current(middle)[0])
        deviation = max(deviation, float(np.abs(ratio - 1).max()))
        box = max(box, float(ratio.max() - ratio.min()) / level / (span.high - span.low))
    return deviation, box
