"""Where Newton's method leads nowhere from the first guess: shorter steps, and effects by degrees.

Each loop has a solution that is known, or easily found, with ideal transistors.
From there gain, Early effect and leakage are brought in as far as the solution
follows, until they are there in full or no step is small enough.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np

from tcopt.arrays import Array
from tcopt.newton import REACH, Block, Start, System, settled, taken

__all__ = ["DROP", "EFFECTS", "brought_in", "careful"]

DROP = "V_drop"
"""The unknown that stands for a resistance."""

EFFECTS = ("inverse_V_A", "inverse_beta", "I_L", "I_others")
"""Quantities that are nothing in the ideal transistor."""
_STEPS = 25
_SHORTEST = 2.0**-8
_VOLT = 0.1
"""Change of a voltage that weighs as much as one unit of a logarithm [V]."""
_GROWTH = 2.0
"""By how much the next step may be larger than the last."""
_ROUNDS = 12
_LEAST = 2.0**-10
"""Smallest part of the effects that is brought in at once."""


def careful(system: System, block: Block, guess: tuple[Any, ...], count: int) -> list[Array]:
    """Return the unknowns by Newton's method with steps short enough to stay where loops hold.

    A step that leaves the domain, or after which the next one would be much
    larger, is taken half as far.

    Parameters
    ----------
    system, block : the equations, and the quantities of ``count`` points
    guess : of the unknowns; nan or too far off is given up
    """
    x = np.array([np.broadcast_to(value, count) for value in guess], dtype=float)
    logs = np.array(system.logs)[:, None]
    weights = np.array([_weight(name) for name in system.unknowns])[:, None]
    done = np.zeros(count, dtype=bool)
    share = np.ones(count)
    change = _limited(system, x, block, logs)
    active = np.isfinite(change).all(axis=0)
    for _ in range(_STEPS):
        where = np.flatnonzero(active & ~done)
        if where.size == 0:
            break
        trial = x[:, where] + share[where] * change[:, where]
        after = _limited(system, trial, taken(block, where), logs)
        before, size = (np.abs(c * weights).max(axis=0) for c in (change[:, where], after))
        better = np.isfinite(after).all(axis=0) & ((size <= _GROWTH * before) | (size < 1e-3))
        kept = where[better]
        full = share[kept] == 1
        last = settled(trial[:, better], change[:, kept]).all(axis=0) & full
        x[:, kept], change[:, kept] = trial[:, better], after[:, better]
        done[kept[last]] = True
        share[kept] = np.minimum(1, 2 * share[kept])
        share[where[~better]] /= 2
        active &= share > _SHORTEST
    return list(np.where(done, x, np.nan))


def _weight(unknown: str) -> float:
    """Return how much a change weighs; a drop, in which the loops are linear, does not at all."""
    if unknown == DROP:
        return 0.0
    return 1.0 if unknown.startswith("log_") else 1 / _VOLT


def _limited(system: System, x: Array, block: Block, logs: Array) -> Array:
    change = np.array(
        [np.broadcast_to(c, x.shape[1:]) for c in system.step(*x, **block)], dtype=float
    )
    return np.where(logs, np.minimum(np.maximum(change, -REACH), REACH), change)


def brought_in(
    system: System,
    block: Block,
    start: Start,
    count: int,
    least: Mapping[str, float],
) -> tuple[Array, ...]:
    """Return the unknowns, the effects brought in by degrees; nan where that does not get through.

    Parameters
    ----------
    system, block : the equations, and the quantities of ``count`` points
    start : first guess without effects
    least : part of an effect that has to be there from the beginning, by its name [1]
    """
    effects = [name for name in EFFECTS if name in block]

    def at(part: Array, where: Any) -> dict[str, Any]:
        some = taken(block, where)
        for name in effects:
            some[name] = some[name] * np.maximum(part, least.get(name, 0.0))
        return some

    with np.errstate(all="ignore"):
        everything = np.arange(count)
        plain = at(np.zeros(count), everything)
        x = np.array(careful(system, plain, start(plain), count))
        part, more = np.zeros(count), np.ones(count)
        active = np.isfinite(x).all(axis=0)
        for _ in range(_ROUNDS):
            where = np.flatnonzero(active & (part < 1))
            if where.size == 0:
                break
            goal = np.minimum(1, part[where] + more[where])
            found = np.array(careful(system, at(goal, where), tuple(x[:, where]), where.size))
            through = np.isfinite(found).all(axis=0)
            x[:, where[through]] = found[:, through]
            part[where[through]] = goal[through]
            more[where] *= np.where(through, 4.0, 0.125)
            active &= more > _LEAST
    return tuple(np.where(part < 1, np.nan, x))
