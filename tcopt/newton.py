"""Newton's method over many points at once, in the logarithms of currents.

Points are taken in blocks that fit the processor's cache. A logarithm never
moves by more than a few units in one step, so nothing overflows and the
basin of the physical solution is not left. The few points that take longer
than most go on by themselves; the few that do not get through are handed to
whoever can bring them home.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from tcopt.arrays import Array

__all__ = ["REACH", "Block", "Finish", "Start", "System", "matrix", "settled", "shape_of", "solve",
           "taken", "vector"]  # fmt: skip

Block = Mapping[str, Any]
"""Quantities by name: numbers, or arrays of one length."""
Start = Callable[[Block], tuple[Any, ...]]
"""Takes a block, returns a first guess of the unknowns."""
Finish = Callable[[Block, list[Array]], Sequence[Array]]
"""Takes a block and its unknowns, nan where none were found; returns what is asked for."""

_BLOCK = 4096
_FIRST_STEPS = 8
"""Steps after which the points that are still on their way go on by themselves."""
_STEPS = 40
REACH = 3.0
"""Largest change of a logarithm in one step."""
_CLOSE = 1e-7
"""A step after which, convergence being quadratic, the next would be below rounding."""
_MUCH = 1e3
"""A voltage, or a logarithm, beyond which that step does not grow any more with the value."""


def shape_of(*nested: Any) -> tuple[int, ...]:
    """Return the common shape of arrays in nested tuples."""
    found: tuple[int, ...] = ()
    for item in nested:
        own = shape_of(*item) if isinstance(item, tuple) else np.shape(item)
        found = np.broadcast_shapes(found, own)
    return found


def vector(items: Any, shape: tuple[int, ...]) -> Array:
    """Stack arrays along a new last axis, broadcast to one shape."""
    return np.stack([np.broadcast_to(item, shape) for item in items], axis=-1).astype(float)


def matrix(rows: Any, shape: tuple[int, ...]) -> Array:
    """Stack rows of arrays into matrices along two new last axes."""
    return np.stack([vector(row, shape) for row in rows], axis=-2)


@dataclass(frozen=True)
class System:
    """Equations to be solved.

    Attributes
    ----------
    step : takes unknowns and quantities, returns the change of each unknown in one
        step of Newton's method
    unknowns : their names; those of logarithms begin with 'log_', others are volts
    """

    step: Callable[..., Any]
    unknowns: tuple[str, ...]

    @property
    def logs(self) -> tuple[bool, ...]:
        """Which unknowns are logarithms."""
        return tuple(name.startswith("log_") for name in self.unknowns)


def taken(block: Block, where: Any) -> dict[str, Any]:
    """Return some points of a block, by a mask or by indices."""
    return {name: v if np.ndim(v) == 0 else v[where] for name, v in block.items()}


def settled(value: Any, change: Any) -> Any:
    """Say of each point whether a step is so small that it was the last."""
    return np.abs(change) <= _CLOSE * (1 + np.minimum(np.abs(value), _MUCH))


def solve(system: System, arguments: Block, start: Start, finish: Finish) -> tuple[Array, ...]:
    """Return what ``finish`` makes of the unknowns at which the loops hold.

    Parameters
    ----------
    system : the equations
    arguments : quantities by name, broadcastable arrays
    start : first guess of the unknowns from a block of quantities
    finish : what is left to do with a block
    """
    shape = np.broadcast_shapes(*(value.shape for value in arguments.values()))
    size = math.prod(shape)
    flat = {
        name: value if value.ndim == 0 else _spread(value, shape).reshape(-1)
        for name, value in arguments.items()
    }
    if size <= _BLOCK:
        found = _solve_block(system, flat, start, finish, size)
        return tuple(_spread(value, (size,)).reshape(shape) for value in found)
    answers: list[Array] = []
    for first in range(0, size, _BLOCK):
        last = min(first + _BLOCK, size)
        block = {n: v if v.ndim == 0 else v[first:last] for n, v in flat.items()}
        found = _solve_block(system, block, start, finish, last - first)
        answers = answers or [np.empty(size) for _ in found]
        for answer, value in zip(answers, found, strict=True):
            answer[first:last] = value
    return tuple(answer.reshape(shape) for answer in answers)


def _spread(value: Any, shape: tuple[int, ...]) -> Any:
    """Return the value in this shape; broadcasting what has it already takes time."""
    return value if np.shape(value) == shape else np.broadcast_to(value, shape)


def _solve_block(
    system: System, block: Block, start: Start, finish: Finish, count: int
) -> Sequence[Array]:
    with np.errstate(all="ignore"):
        values = [np.array(_spread(guess, (count,)), dtype=float) for guess in start(block)]
        on_the_way = _iterate(system, block, values, _FIRST_STEPS)
        if on_the_way.any():
            where = np.flatnonzero(on_the_way)
            some = [value[where] for value in values]
            lost = _iterate(system, taken(block, where), some, _STEPS)
            for value, own in zip(values, some, strict=True):
                value[where] = np.where(lost, np.nan, own)
        return finish(block, values)


def _iterate(system: System, block: Block, values: list[Array], steps: int) -> Array:
    """Take steps in place; return which points are still on their way."""
    logs = system.logs
    changes: list[Any] = []
    for _ in range(steps):
        changes = list(system.step(*values, **block))
        largest = [np.abs(change).max() for change in changes]
        for k, is_log in enumerate(logs):
            # minimum and maximum keep nan, which marks a point that has left the domain
            if is_log and not largest[k] <= REACH:
                changes[k] = np.minimum(np.maximum(changes[k], -REACH), REACH)
            values[k] += changes[k]
        most = np.max(largest)
        if most <= _CLOSE:
            return np.zeros(values[0].shape, dtype=bool)
        # a point by point look only where it may end the matter
        if not most > _CLOSE * _MUCH and not _on_the_way(values, changes).any():
            break
    return _on_the_way(values, changes)


def _on_the_way(values: list[Array], changes: list[Any]) -> Array:
    """Say which points are neither there nor lost."""
    lost, there = np.isnan(values[0]), np.asarray(True)
    for value, change in zip(values, changes, strict=True):
        there = there & settled(value, change)
    return np.asarray(~(lost | there))
