"""Newton's method over many points at once, in the logarithms of currents.

Points are taken in blocks that fit the processor's cache. A logarithm never
moves by more than a few units in one step, so nothing overflows and the
basin of the physical solution is not left.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np

from tcopt.arrays import Array

__all__ = [
    "Pin", "Pinned", "Start", "matrix", "shape_of", "solve", "solve_pinned", "through", "vector",
]  # fmt: skip

Start = Callable[[Mapping[str, Any]], tuple[Any, ...]]
"""Takes a block of quantities, returns a first guess of the unknowns."""
Pinned = tuple[tuple[Any, ...], Any]
"""The unknowns, and the resistance of a slot [ohm]."""

_BLOCK = 4096
_STEPS = 80
_REACH = 3.0
"""Largest change of a logarithm in one step."""
_SMALL_DROP = 1e-4
"""Drop across a needed resistance that counts as none [V]."""
_CLOSE = 1e-7
"""A step after which, convergence being quadratic, the next would be below rounding."""


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


def solve(
    step: Callable[..., Any],
    unknowns: tuple[str, ...],
    arguments: Mapping[str, Any],
    start: Start,
) -> tuple[Array, ...]:
    """Return the unknowns at which the loops hold; nan where Newton's method finds none.

    Parameters
    ----------
    step : takes unknowns and quantities, returns the change of each unknown
    unknowns : their names; those of logarithms begin with 'log_'
    arguments : quantities by name, broadcastable arrays
    start : first guess of the unknowns from a block of quantities
    """
    shape = shape_of(*arguments.values())
    size = int(np.prod(shape))
    flat = {
        name: value if value.ndim == 0 else np.broadcast_to(value, shape).reshape(-1)
        for name, value in arguments.items()
    }
    answers = [np.empty(size) for _ in unknowns]
    logs = [name.startswith("log_") for name in unknowns]
    for first in range(0, size, _BLOCK):
        block = {
            name: value if value.ndim == 0 else value[first : first + _BLOCK]
            for name, value in flat.items()
        }
        count = min(_BLOCK, size - first)
        found = _solve_block(step, logs, block, start(block), (count,))
        for answer, value in zip(answers, found, strict=True):
            answer[first : first + count] = value
    return tuple(answer.reshape(shape) for answer in answers)


def through(
    step: Callable[..., Any], unknowns: tuple[str, ...], plain: Mapping[str, float], start: Start
) -> Start:
    """Return a start that first solves with some quantities set to plain values."""
    logs = [name.startswith("log_") for name in unknowns]

    def guess(block: Mapping[str, Any]) -> tuple[Any, ...]:
        simple = {**block, **{name: v for name, v in plain.items() if name in block}}
        return tuple(_solve_block(step, logs, simple, start(block), shape_of(*block.values())))

    return guess


def _solve_block(
    step: Callable[..., Any],
    logs: list[bool],
    block: Mapping[str, Any],
    start: tuple[Any, ...],
    shape: tuple[int, ...],
) -> list[Array]:
    values = [np.array(np.broadcast_to(value, shape), dtype=float) for value in start]
    with np.errstate(all="ignore"):
        for _ in range(_STEPS):
            largest: Any = 0.0
            for k, change in enumerate(step(*values, **block)):
                if logs[k]:
                    # minimum and maximum keep nan, which marks a point without a solution
                    change = np.minimum(np.maximum(change, -_REACH), _REACH)  # noqa: PLW2901
                values[k] += change
                largest = np.maximum(largest, np.abs(change))
            open_points = largest > _CLOSE
            if not open_points.any():
                break
        else:
            for value in values:
                value[np.broadcast_to(open_points, shape)] = np.nan
    return values


@dataclass(frozen=True)
class Pin:
    """A circuit whose output is pinned by the resistance of one slot.

    Attributes
    ----------
    partials, outputs, unknowns : of the circuit, see `tcopt.solve.Numerics`
    position, resistance : of the slot's resistance among the quantities, and its name
    output : what the last current is to be [A]
    """

    partials: Callable[..., Any]
    outputs: Callable[..., Any]
    unknowns: tuple[str, ...]
    position: int
    resistance: str
    output: Array


def solve_pinned(pin: Pin, arguments: Mapping[str, Any], start: Pinned) -> Pinned:
    """Return the unknowns, and the resistance [ohm] with which the output is what it is pinned to.

    The loops are linear in the resistance, which may come out negative; nan
    where none is found.

    Parameters
    ----------
    pin : the circuit, the slot, the output
    arguments : all other quantities
    start : first guess
    """
    output, unknowns, position = pin.output, pin.unknowns, pin.position
    partials, outputs, resistance_name = pin.partials, pin.outputs, pin.resistance
    shape = np.broadcast_shapes(output.shape, shape_of(*arguments.values()))
    wanted = np.log(np.broadcast_to(output, shape))
    values = [np.array(np.broadcast_to(v, shape), dtype=float) for v in start[0]]
    resistance = np.array(np.broadcast_to(start[1], shape), dtype=float)
    logs = [name.startswith("log_") for name in unknowns]
    n = len(unknowns)
    settled = np.zeros(shape, dtype=bool)
    with np.errstate(all="ignore"):
        for _ in range(_STEPS):
            filled = {**arguments, resistance_name: resistance}
            loops, by_unknown, by_quantity = partials(*values, **filled)
            log_currents, own, _ = outputs(*values, **filled)
            jacobian = np.zeros((*shape, n + 1, n + 1))
            jacobian[..., :n, :n] = matrix(by_unknown, shape)
            jacobian[..., :n, n] = vector([row[position] for row in by_quantity], shape)
            jacobian[..., n, :n] = vector(own[-1], shape)
            right = vector([*loops, log_currents[-1] - wanted], shape)
            bad = ~np.isfinite(jacobian).all(axis=(-1, -2)) | ~np.isfinite(right).all(axis=-1)
            bad = bad | (np.linalg.det(np.where(bad[..., None, None], 0, jacobian)) == 0)
            jacobian[bad] = np.eye(n + 1)
            right[bad] = np.nan
            change = -np.linalg.solve(jacobian, right[..., None])[..., 0]
            largest = np.zeros(shape)
            for k in range(n):
                move = change[..., k]
                if logs[k]:
                    move = np.minimum(np.maximum(move, -_REACH), _REACH)
                values[k] = values[k] + move
                largest = np.maximum(largest, np.abs(move))
            resistance = resistance + change[..., n]
            relative = np.abs(change[..., n]) / (np.abs(resistance) + _SMALL_DROP / output)
            settled = ~(np.maximum(largest, relative) > _CLOSE)
            if settled.all():
                break
    return tuple(values), np.where(settled, resistance, np.nan)
