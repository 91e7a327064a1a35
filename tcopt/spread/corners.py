"""Parts on purpose: one variate at a time far out, and the worst of many at once.

All at once is no part that will be met in practice: ten variates at three sigma
each lie nine and a half sigma out. It is a bound, and its signs tell what to fear.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import product

import numpy as np

from tcopt.arrays import Array
from tcopt.spread.figures import FIGURES
from tcopt.spread.plan import Plan
from tcopt.spread.sample import BLOCK
from tcopt.spread.variation import Variate

__all__ = ["Corner", "Corners", "corners_of"]

_MOST = 12
"""Variates of which every combination of signs is tried: those that do most by themselves."""


@dataclass(frozen=True)
class Corner:
    """A part with some variates far out.

    Attributes
    ----------
    signs : (variate, +1 or -1) of each that is not typical
    figures : shape (stages, figures), see `tcopt.spread.figures.FIGURES`
    """

    signs: tuple[tuple[Variate, int], ...]
    figures: Array


@dataclass(frozen=True)
class Corners:
    """The corners of a design.

    Attributes
    ----------
    sigma : how far out [1]
    typical : figures of the design as stated, shape (stages, figures)
    single : one variate at a time, up and down, largest change of the judged figure first
    worst : of each stage, the combination with the largest judged figure
    left_out : variates that were not combined, since they do less by themselves
    """

    sigma: float
    typical: Array
    single: tuple[tuple[Corner, Corner], ...]
    worst: tuple[Corner, ...]
    left_out: int


def corners_of(plan: Plan, judged: str) -> Corners:
    """Return the corners of a plan's design.

    Parameters
    ----------
    plan : the design
    judged : name of the figure that makes a corner worse
    """
    sigma, variates = plan.spread.sigma, plan.variation.variates
    count, which = len(variates), FIGURES.index(judged)
    typical = plan.made(np.zeros((1, count))).figures[:, 0]
    eye = sigma * np.eye(count)
    figures = _figures(plan, np.vstack([eye, -eye]))
    change = np.nan_to_num(np.abs(figures[:, :, which] - typical[:, None, which]), nan=np.inf)
    change = np.maximum(change[:, :count], change[:, count:])
    pairs = [
        (
            Corner(((variates[k], 1),), figures[:, k]),
            Corner(((variates[k], -1),), figures[:, count + k]),
        )
        for k in np.argsort(-change[-1], kind="stable")
    ]
    worst = tuple(_worst(plan, stage, which, change[stage]) for stage in range(plan.stages))
    return Corners(sigma, typical, tuple(pairs), worst, max(0, count - _MOST))


def _worst(plan: Plan, stage: int, which: int, change: Array) -> Corner:
    variates = plan.variation.variates
    moved = np.argsort(-change, kind="stable")[:_MOST]
    signs = np.array(list(product((1, -1), repeat=len(moved))))
    z = np.zeros((len(signs), len(variates)))
    z[:, moved] = plan.spread.sigma * signs
    figures = _figures(plan, z)
    at = int(np.argmax(np.nan_to_num(figures[stage, :, which], nan=np.inf)))
    named = _named(variates, moved.tolist(), signs[at].tolist())
    return Corner(named, figures[:, at])


def _named(
    variates: Sequence[Variate], moved: Sequence[int], signs: Sequence[int]
) -> tuple[tuple[Variate, int], ...]:
    return tuple((variates[k], sign) for k, sign in zip(moved, signs, strict=True))


def _figures(plan: Plan, z: Array) -> Array:
    pieces = [plan.made(z[start : start + BLOCK]).figures for start in range(0, len(z), BLOCK)]
    return np.concatenate(pieces, axis=1)
