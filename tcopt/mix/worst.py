"""The worst points of spread at a distance of so many sigma, to first order, in closed form."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from itertools import combinations

import numpy as np

from tcopt.arrays import Array

__all__ = ["Worst", "estimates", "is_known", "projected", "worst_points"]


def projected(profile: Array, directions: Sequence[Array]) -> Array:
    """Return profiles over temperature without what some directions can mend (least squares).

    Parameters
    ----------
    profile : shape (..., n)
    directions : each of shape (n,)
    """
    if not directions:
        return profile
    q, _ = np.linalg.qr(np.stack(directions, axis=-1))
    return np.asarray(profile - (profile @ q) @ q.T)


@dataclass(frozen=True)
class Worst:
    """Two points of spread that are worth a scenario.

    Attributes
    ----------
    deviation : at either of them, to first order [unit of y]
    points : shape (2 or 0, causes)
    at_most : the deviation is what is left if a second knob does nothing: it may well mend
        that, but how much, within its range, only the program tells
    """

    deviation: float
    points: Array
    at_most: bool = False


def worst_points(
    off: Array,
    by_cause: Array,
    knobs: Sequence[Array],
    sigma: float,
    reach: tuple[float, float] = (-np.inf, np.inf),
) -> list[Worst]:
    """Return the largest deviations at sigma standard deviations, the largest first.

    ``y(T) = y_0(T) + G(T) z``, ``|z| = sigma``. A knob that moves y by one number
    times ``b(T)`` leaves half the difference of ``y/b`` between two temperatures;
    the largest such difference is at ``z = sigma dG/|dG|``. A second knob is taken
    out by least squares, and as if it were not there (`Worst.at_most`). With no knob
    the largest ``|y|`` counts. What the first knob cannot reach is another deviation,
    at the points where the mean of ``y/b`` is largest.

    Parameters
    ----------
    off : y_0, shape (n,)
    by_cause : G, shape (causes, n)
    knobs : what each knob does to y, shape (n,), that which rules first
    sigma : distance of the points
    reach : least and largest number by which the first knob moves y
    """
    if not knobs:
        return [_largest(off, by_cause, sigma, 1.0)]
    first = knobs[0]
    size = float(np.abs(first).mean())
    others = [np.ones_like(first), *(other / first for other in knobs[1:])]
    off, by_cause = off / first, by_cause / first
    found = []
    level, middle = by_cause.mean(axis=1), float(off.mean())
    beyond = sigma * float(np.linalg.norm(level)) + max(middle + reach[0], -middle - reach[1])
    if beyond > 0:
        length = float(np.linalg.norm(level))
        # out of reach as it stands, and no cause moves it: no point is worse than another
        point = sigma * level / length if length > 0 else np.empty((0, len(level)))
        found.append(Worst(size * beyond, np.stack([point, -point]) if length > 0 else point))
    if len(others) > 1:
        idle = _largest(*_between(off, by_cause), sigma, size)
        found.append(replace(idle, at_most=True))
        off, by_cause = projected(off, others), projected(by_cause, others)
    found.append(_largest(*_between(off, by_cause), sigma, size))
    return sorted(found, key=lambda worst: -worst.deviation)


def _between(off: Array, by_cause: Array) -> tuple[Array, Array]:
    """Return half the differences between all pairs of temperatures."""
    one, two = np.array(list(combinations(range(len(off)), 2))).T
    return (off[one] - off[two]) / 2, (by_cause[:, one] - by_cause[:, two]) / 2


def is_known(points: Array, new: Array) -> bool:
    """Say whether the first of new points is, near enough, among those there are."""
    near = 0.02 * np.linalg.norm(new[0])
    return bool((np.linalg.norm(points - new[0], axis=1) < near).any())


def _largest(plain: Array, apart: Array, sigma: float, size: float) -> Worst:
    """Return the largest ``|plain + apart z|`` with ``|z| = sigma`` over the last axis."""
    length = np.sqrt((apart**2).sum(axis=0))
    total = np.abs(plain) + sigma * length
    worst = int(np.argmax(total))
    if length[worst] == 0:
        return Worst(size * float(total[worst]), np.empty((0, len(apart))))
    point = sigma * apart[:, worst] / length[worst] * (np.sign(plain[worst]) or 1.0)
    return Worst(size * float(total[worst]), np.stack([point, -point]))


def estimates(off: Array, by_cause: Array, knob: Array | None, sigma: float) -> Array:
    """Return the deviation of many designs at sigma standard deviations, to first order.

    As `worst_points`, with one knob at the most.

    Parameters
    ----------
    off : y_0, shape (designs, n)
    by_cause : G, shape (designs, causes, n)
    knob : what the knob does to y, shape (n,), or None
    sigma : distance of the points

    Returns
    -------
    Array
        shape (designs,), in the unit of y
    """
    if knob is None:
        return np.asarray((np.abs(off) + sigma * np.sqrt((by_cause**2).sum(axis=1))).max(axis=1))
    off, by_cause = off / knob, by_cause / knob
    one, two = np.array(list(combinations(range(off.shape[1]), 2))).T
    plain = np.abs(off[:, one] - off[:, two])
    apart = by_cause[:, :, one] - by_cause[:, :, two]
    total = plain + sigma * np.sqrt((apart**2).sum(axis=1))
    return np.asarray(np.abs(knob).mean() * total.max(axis=1) / 2)
