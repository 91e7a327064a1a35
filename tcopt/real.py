"""Circuits with real transistors: first guess, Newton's method, and what it may answer."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from typing import Any

import numpy as np

from tcopt import newton
from tcopt.arrays import Array
from tcopt.continuation import brought_in, careful
from tcopt.numerics import Numerics, Real
from tcopt.starts import from_currents, looked_round

__all__ = [
    "Rescue",
    "at_any_voltage",
    "ideal_currents",
    "log_currents",
    "real_of",
    "solution",
    "voltages_fit",
]

Rescue = Callable[[newton.Block, list[Array]], Any]
"""Takes a block and its unknowns, nan where none were found, and mends them in place."""

_DIODE, _EARLY = "V_D", "inverse_V_A"
_LEAST_OF_FOLLOWED = {"inverse_beta": 1.0}
"""A follower cannot be without base currents, since it carries them."""
_FINE = (10, 8)
"""Halvings and rounds of a closer look round."""


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


def ideal_currents(circuit: Numerics, block: newton.Block) -> dict[str, Any]:
    """Return the currents [A] of the same circuit with ideal transistors."""
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
        lambda block: ideal_currents(circuit, block),
        followed=circuit.followed,
    )


def _rescue(circuit: Numerics, system: newton.System, start: newton.Start) -> Rescue:
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
        wrong = np.flatnonzero(~fit if circuit.rests_at_zero else np.isnan(found[0]))
        if wrong.size == 0:
            return fit
        some = newton.taken(block, wrong)
        again = careful(system, some, fine(some), wrong.size)
        there = np.isfinite(again[0])
        for value, own in zip(found, again, strict=True):
            value[wrong[there]] = own[there]
        return voltages_fit(circuit, block, found)

    return rescue
