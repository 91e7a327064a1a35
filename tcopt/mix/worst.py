"""The worst points of spread at a distance of so many sigma, to first order, in closed form."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import combinations

import numpy as np

from tcopt.arrays import Array

__all__ = ["estimates", "projected", "worst_points"]


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


def worst_points(
    off: Array, by_cause: Array, knobs: Sequence[Array], sigma: float
) -> tuple[float, Array]:
    """Return the largest deviation at sigma standard deviations, and the two points it is at.

    ``y(T) = y_0(T) + G(T) z``, ``|z| = sigma``. A knob that moves y by one number
    times ``b(T)`` leaves half the difference of ``y/b`` between two temperatures;
    the largest such difference is at ``z = sigma dG/|dG|``. A second knob is taken
    out by least squares. With no knob the largest ``|y|`` counts.

    Parameters
    ----------
    off : y_0, shape (n,)
    by_cause : G, shape (causes, n)
    knobs : what each knob does to y, shape (n,), that which rules first
    sigma : distance of the points

    Returns
    -------
    tuple
        the deviation, in the unit of y, and points of shape (2, causes), or of
        shape (0, causes) where nothing varies
    """
    if knobs:
        first = knobs[0]
        size = float(np.abs(first).mean())
        others = [np.ones_like(first), *(other / first for other in knobs[1:])]
        off, by_cause = off / first, by_cause / first
        if len(others) > 1:
            off, by_cause = projected(off, others), projected(by_cause, others)
        one, two = np.array(list(combinations(range(len(off)), 2))).T
        plain = (off[one] - off[two]) / 2
        apart = (by_cause[:, one] - by_cause[:, two]) / 2
    else:
        plain, apart, size = off, by_cause, 1.0
    length = np.sqrt((apart**2).sum(axis=0))
    total = np.abs(plain) + sigma * length
    worst = int(np.argmax(total))
    if length[worst] == 0:
        return size * float(total[worst]), np.empty((0, len(by_cause)))
    point = sigma * apart[:, worst] / length[worst] * (np.sign(plain[worst]) or 1.0)
    return size * float(total[worst]), np.stack([point, -point])


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
