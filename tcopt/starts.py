"""First guesses for Newton's method: from ideal transistors, or from a look round."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

import numpy as np

from tcopt.arrays import Array
from tcopt.newton import Block, Start

__all__ = ["from_above", "from_currents", "looked_round", "some_voltage"]

_TOP, _BOTTOM = 5.0, -45.0
"""Logarithms of currents [A] between which is looked: 150 A to 3e-20 A."""
_COARSE = 10.0
_HALVINGS = 6
_EARLY = "inverse_V_A"
_LEAST_VOLTAGE, _JUNCTION = 0.1, 0.65


def from_currents(
    unknowns: tuple[str, ...],
    currents: Callable[[Block], Mapping[str, Any]],
    *,
    followed: bool,
) -> Start:
    """Return a guess from currents that are about right, such as those of ideal transistors.

    Parameters
    ----------
    unknowns : their names
    currents : the currents [A] of a block, by name
    followed : whether a follower supplies the base currents
    """

    def guess(block: Block) -> tuple[Any, ...]:
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            found = {name: np.log(current) for name, current in currents(block).items()}
            return tuple(
                found[name.removeprefix("log_").replace("J_", "I_")]
                if name.startswith("log_")
                else _junction(found, block, followed=followed)
                for name in unknowns
            )

    return guess


def _junction(logs: Mapping[str, Any], block: Block, *, followed: bool) -> Any:
    """Return about the voltage across the input transistor [V], one or two junctions."""
    current = (
        logs["I_in"] if "I_in" in logs else next(iter(logs.values())) + np.log(block.get("M", 1.0))
    )
    voltage = block["V_T"] * (current - block["log_I_S"])
    if followed:
        voltage = voltage + block["V_T"] * (
            current + np.log(block["inverse_beta"]) - block["log_I_S"]
        )
    return np.fmax(voltage, _LEAST_VOLTAGE)


def looked_round(
    loops: Callable[..., Any],
    unknowns: tuple[str, ...],
    halvings: int = _HALVINGS,
    rounds: int = 1,
) -> Start:
    """Return a guess just above the largest current at which each loop in turn holds.

    Without base currents a loop depends on its own current and those before it
    alone, and beyond its solution it bends away from it, so that Newton's method
    from above gets there in a few steps.

    Parameters
    ----------
    loops : takes unknowns and quantities, returns what is left of each loop
    unknowns : their names, in the order of the loops
    halvings : of the interval in which the loop changes sign
    rounds : of going through the loops; the first assumes some voltage across the
        diode-connected transistor, each later one goes half the way to what follows
    """

    def guess(block: Block) -> tuple[Any, ...]:
        values = {n: 0.0 if n.startswith("log_") else some_voltage(block) for n in unknowns}
        with np.errstate(all="ignore"):
            for number in range(rounds):
                for k, name in enumerate(unknowns):
                    if name.startswith("log_"):
                        values[name] = from_above(loops, values, name, k, block, halvings)
                    else:
                        left = loops(**values, **block)[k] * (0.5 if number else 1)
                        values[name] = np.fmax(values[name] - left, _LEAST_VOLTAGE)
        return tuple(values.values())

    return guess


def some_voltage(block: Block) -> Any:
    """Return a guess of the voltage of a diode-connected transistor [V]."""
    return np.maximum(block.get("V_TH", _JUNCTION), _LEAST_VOLTAGE)


def from_above(
    loops: Callable[..., Any],
    values: Mapping[str, Any],
    name: str,
    k: int,
    block: Block,
    halvings: int = _HALVINGS,
) -> Array:
    """Return a logarithm above the largest at which a loop changes sign, or near where it might.

    Where a current is so large that it drives the output below its emitter, and
    the Early effect out of its law, the loop counts as not having changed sign.

    Parameters
    ----------
    loops, block, halvings : as for `looked_round`
    values : of the unknowns
    name : of the one that is varied
    k : number of the loop
    """

    def left(x: Any, quantities: Block = block) -> Any:
        return loops(**{**values, name: x}, **quantities)[k]

    at_top = left(_TOP, {**block, _EARLY: 0.0} if _EARLY in block else block)
    above = at_top > 0

    def beyond(value: Any) -> Any:
        return ((value > 0) == above) | np.isnan(value)

    high: Any = np.full(np.shape(at_top), np.nan)
    nearest, least = np.full(np.shape(at_top), _TOP), np.abs(at_top)
    for x in np.arange(_TOP - _COARSE, _BOTTOM - _COARSE / 2, -_COARSE):
        here = left(x)
        high = np.where(np.isnan(high) & ~beyond(here), x + _COARSE, high)
        nearest = np.where(np.abs(here) < least, x, nearest)
        least = np.fmin(np.abs(here), least)
    missed = np.isnan(high)
    high = np.where(missed, np.minimum(nearest + _COARSE, _TOP), high)
    step = _COARSE
    for _ in range(halvings):
        step /= 2
        high = np.where(beyond(left(high - step)) & ~missed, high - step, high)
    return np.asarray(np.where(np.isnan(left(high)) & ~missed, high - step, high))
