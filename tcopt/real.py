"""Circuits with real transistors: first guess, Newton's method, and what it may answer."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from functools import partial
from typing import Any

import numpy as np

from tcopt import newton
from tcopt.arrays import Array
from tcopt.continuation import DROP, brought_in, careful
from tcopt.numerics import Numerics, Real
from tcopt.starts import from_above, from_currents, looked_round, some_voltage
from tcopt.symbols import resistance_name

__all__ = ["at_any_voltage", "log_currents", "needed", "real_of", "solution", "voltages_fit"]

_Rescue = Callable[[newton.Block, list[Array]], Any]
"""Takes a block and its unknowns, nan where none were found, and mends them in place."""

_DIODE, _EARLY = "V_D", "inverse_V_A"
_LEAST_OF_FOLLOWED = {"inverse_beta": 1.0}
"""A follower cannot be without base currents, since it carries them."""
_FINE = (10, 8)
"""Halvings and rounds of a closer look round."""
_PINNED_CURRENT, _SOME_DROP = "I_pinned", 0.1
_RATIOS = (0.5, 1e-2, 1e2, 1e-4, 1e4)
"""Other currents over the output, from which the search for a resistance starts."""


def real_of(circuit: Numerics) -> Real:
    """Return the numerics of real transistors."""
    if circuit.real is None:
        raise AssertionError("a circuit with ideal transistors has closed forms")
    return circuit.real


def solution(circuit: Numerics, arguments: Mapping[str, Any]) -> tuple[Array, ...]:
    """Return the unknowns at which the loops hold; nan where there is no such point.

    A diode-connected transistor without voltage across it is off, and an output
    below its emitter is no output, whatever the laws say there: no solution.
    """
    return _solved(circuit, arguments, lambda block, found: found)  # noqa: ARG005


def log_currents(circuit: Numerics, arguments: Mapping[str, Any]) -> tuple[Array, ...]:
    """Return the logarithms of the currents [ln A]; nan where there is no solution."""
    outputs = real_of(circuit).outputs
    return _solved(circuit, arguments, lambda block, found: outputs(*found, **block)[0])


def at_any_voltage(circuit: Numerics, arguments: Mapping[str, Any]) -> tuple[Array, ...]:
    """Return the unknowns at which the loops hold, be the transistors on or off."""
    return _solved(circuit, arguments, lambda block, found: found, on=False)  # noqa: ARG005


def _solved(
    circuit: Numerics, arguments: Mapping[str, Any], finish: newton.Finish, *, on: bool = True
) -> tuple[Array, ...]:
    """Return what ``finish`` makes of the unknowns, those with transistors off left out or not."""
    system = newton.System(real_of(circuit).step, circuit.unknowns)
    start = _start(circuit)
    rescue = _rescue(circuit, system, start)

    def rescued(block: newton.Block, found: list[Array]) -> Sequence[Array]:
        fit = rescue(block, found)
        if on and not np.all(fit):
            for value in found:
                value[~fit] = np.nan
        return finish(block, found)

    return newton.solve(system, arguments, start, rescued)


def voltages_fit(circuit: Numerics, arguments: Mapping[str, Any], found: Sequence[Array]) -> Any:
    """Say where the transistors have the voltages for which their laws are made.

    The output's counts where its Early effect does.
    """
    fit: Any = True
    if _DIODE in circuit.unknowns:
        fit = found[circuit.unknowns.index(_DIODE)] > 0
    with np.errstate(over="ignore", invalid="ignore"):
        for voltage in real_of(circuit).across(*found, **arguments):
            fit = fit & ((voltage > 0) | (arguments[_EARLY] == 0))
    return np.broadcast_to(fit, np.shape(found[0]))


def _last(circuit: Numerics) -> str:
    """Return the unknown of the output current."""
    return circuit.unknowns[len(circuit.currents) - 1]


def _ideal_currents(circuit: Numerics, block: newton.Block) -> dict[str, Any]:
    ideal = circuit.ideal
    if ideal is None or ideal.closed_form is None:
        raise AssertionError(f"no ideal transistors in {circuit}")
    found = ideal.closed_form(**{name: block[name] for name in ideal.quantities})
    return dict(zip(ideal.currents, found, strict=True))


def _start(circuit: Numerics) -> newton.Start:
    if circuit.ideal is None:
        return looked_round(real_of(circuit).loops, circuit.unknowns)
    return from_currents(
        circuit.unknowns,
        lambda block: _ideal_currents(circuit, block),
        followed=circuit.followed,
    )


def _rescue(circuit: Numerics, system: newton.System, start: newton.Start) -> _Rescue:
    """Return what is tried where the first guess leads nowhere; it says where voltages fit."""
    least = _LEAST_OF_FOLLOWED if circuit.followed else {}
    fine = looked_round(real_of(circuit).loops, circuit.unknowns, *_FINE)

    def rescue(block: newton.Block, found: list[Array]) -> Any:
        lost = np.flatnonzero(np.isnan(found[0]))
        if lost.size:
            brought = brought_in(system, newton.taken(block, lost), start, lost.size, least)
            for value, own in zip(found, brought, strict=True):
                value[lost] = own
        # leakage alone may make a current, and of two solutions the wrong one may be met
        fit = voltages_fit(circuit, block, found)
        if np.all(fit):
            return fit
        wrong = np.flatnonzero(~fit)
        some = newton.taken(block, wrong)
        again = careful(system, some, fine(some), wrong.size)
        there = np.isfinite(again[0])
        for value, own in zip(found, again, strict=True):
            value[wrong[there]] = own[there]
        return voltages_fit(circuit, block, found)

    return rescue


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
        lambda block: _ideal_currents(circuit, block),
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
) -> _Rescue:
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
