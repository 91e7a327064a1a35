"""The resistance that a slot of a circuit with real transistors needs for a given output.

The output's unknown is then known, and the resistance takes its place among the
unknowns; the loops are linear in it, or nearly so.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from functools import partial
from typing import Any

import numpy as np

from tcopt import newton
from tcopt.arrays import Array
from tcopt.continuation import DROP, careful
from tcopt.numerics import Numerics
from tcopt.real import Rescue, ideal_currents, real_of
from tcopt.starts import from_above, from_currents, some_voltage
from tcopt.symbols import resistance_name

__all__ = ["needed"]

_PINNED_CURRENT, _SOME_DROP = "I_pinned", 0.1
_RATIOS = (0.5, 1e-2, 1e2, 1e-4, 1e4)
"""Other currents over the output, from which the search for a resistance starts."""


def _last(circuit: Numerics) -> str:
    """Return the unknown of the output current."""
    return circuit.unknowns[len(circuit.currents) - 1]


def needed(circuit: Numerics, slot: str, output: Array, arguments: Mapping[str, Any]) -> Array:
    """Return the resistance [ohm] of a slot that makes the last current ``output`` [A].

    It may come out negative; nan where none is found.

    Parameters
    ----------
    circuit : with real transistors
    slot : one of its slots
    output : array [A]
    arguments : all quantities but the slot's resistance
    """
    real, last = real_of(circuit), _last(circuit)
    step, unknowns, apart = real.pins[slot]
    constants = {name: value for name, value in arguments.items() if not name.startswith("R_")}
    with np.errstate(invalid="ignore", divide="ignore"):
        pinned = real.pinned(I_out=output, **constants)

    def by_drop(*values: Any, I_pinned: Any, **block: Any) -> tuple[Any, ...]:
        """Step with the drop of a current for the resistance, to have volts."""
        largest = _fed(I_pinned, block)
        *others, change = step(*values[:-1], values[-1] / largest, **block)
        return (*others, change * largest)

    system = newton.System(by_drop, (*unknowns[:-1], DROP))
    everything = {**arguments, last: np.asarray(pinned), _PINNED_CURRENT: output}
    look = _pinned_look(circuit, slot, unknowns, apart)
    start = look if circuit.ideal is None else _pinned_ideal(circuit, slot, unknowns)
    rescue = _pinned_rescue(system, unknowns, last, look)

    def rescued(block: newton.Block, values: list[Array]) -> Sequence[Array]:
        rescue(block, values)
        return values

    found = newton.solve(system, everything, start, rescued)
    return np.asarray(found[-1] / _fed(output, arguments))


def _fed(output: Any, block: newton.Block) -> Any:
    """Return about the largest current: what is fed in, or the output [A]."""
    fed = block.get("I_given", 0.0)
    if "R_feed" in block:
        fed = block["V_CC"] / block["R_feed"]
    return np.maximum(fed, output)


def _pinned_ideal(circuit: Numerics, slot: str, unknowns: tuple[str, ...]) -> newton.Start:
    """Return the guess of resistance and other currents from ideal transistors."""
    ideal, own = circuit.ideal, resistance_name(slot)
    if ideal is None:
        raise AssertionError(f"no ideal transistors in {circuit}")
    currents = from_currents(
        unknowns[:-1],
        lambda block: ideal_currents(circuit, block),
        followed=circuit.followed,
    )

    def guess(block: newton.Block) -> tuple[Any, ...]:
        output = block[_PINNED_CURRENT]
        known = {name: block[name] for name in ideal.quantities if name != own}
        with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
            resistance = ideal.needs[slot](output, **known)
            filled = {**block, own: np.where(resistance > 0, resistance, 0.0)}
        return (*currents(filled), resistance * _fed(output, block))

    return guess


def _pinned_look(
    circuit: Numerics, slot: str, unknowns: tuple[str, ...], apart: tuple[int, ...]
) -> newton.Start:
    """Return the guess in which the other currents come from the loops without the resistance.

    Of two currents that do, it is the larger one.
    """
    real, last, own = real_of(circuit), _last(circuit), resistance_name(slot)
    logs = [name for name in unknowns if name.startswith("log_")]

    def guess(block: newton.Block) -> tuple[Any, ...]:
        values = dict(zip(unknowns, _near_the_output(unknowns, block, _RATIOS[0]), strict=True))
        del values[own]
        values[last] = block[last]
        known = {name: block[name] for name in circuit.quantities if name != own}
        with np.errstate(all="ignore"):
            for name, k in zip(logs, apart, strict=False):
                values[name] = from_above(real.loops, values, name, k, {**known, own: 0.0})
        return (*(values[name] for name in unknowns[:-1]), _SOME_DROP)

    return guess


def _near_the_output(unknowns: tuple[str, ...], block: newton.Block, ratio: float) -> Any:
    """Return a guess in which all other currents are what is fed, or a part of the output."""
    some = block[_PINNED_CURRENT] * ratio
    is_fed = "I_given" in block or "R_feed" in block
    fed = _fed(0.0, block) * (1.0 if "I_given" in block else np.minimum(ratio, 1.0))
    currents = {"log_J_in": fed} if is_fed else {}
    voltage = some_voltage(block)
    return (
        *(
            np.log(currents.get(name, some)) if name.startswith("log_") else voltage
            for name in unknowns[:-1]
        ),
        _SOME_DROP,
    )


def _pinned_rescue(
    system: newton.System, unknowns: tuple[str, ...], last: str, look: newton.Start
) -> Rescue:
    """Return what is tried where the first guess leads to no resistance."""

    guesses: list[newton.Start] = [look]
    guesses += [partial(_near_the_output, unknowns, ratio=ratio) for ratio in _RATIOS]

    def rescue(block: newton.Block, found: list[Array]) -> None:
        """Start from all guesses at once, and take the first that leads somewhere."""
        lost = np.flatnonzero(np.isnan(found[0]) & np.isfinite(block[last]))
        if lost.size == 0:
            return
        some = newton.taken(block, lost)
        rows = [[np.broadcast_to(v, lost.size) for v in guess(some)] for guess in guesses]
        many = {n: v if np.ndim(v) == 0 else np.tile(v, len(guesses)) for n, v in some.items()}
        started = tuple(map(np.concatenate, zip(*rows, strict=True)))
        again = careful(system, many, started, lost.size * len(guesses))
        table = np.reshape(again, (len(unknowns), len(guesses), lost.size))
        first = np.argmax(np.isfinite(table[0]), axis=0)
        for value, values in zip(found, table, strict=True):
            value[lost] = values[first, np.arange(lost.size)]

    return rescue
