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
from tcopt.symbols import resistance_name

__all__ = ["at_any_voltage", "needed", "real_of", "solution", "voltages_fit"]

_DIODE, _EARLY = "V_D", "inverse_V_A"
_LEAST_OF_FOLLOWED = {"inverse_beta": 1.0}
"""A follower cannot be without base currents, since it carries them."""
_FINE = 8
"""Halvings of the interval in which a loop changes sign, where two did not do."""
_PINNED_CURRENT, _GIVEN = "I_pinned", "I_given"
_SOME_VOLTAGE, _SOME_DROP = 0.65, 0.1
_RATIOS = (1.0, 1e-2, 1e2, 1e-4, 1e4)
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
    found = at_any_voltage(circuit, arguments)
    on = voltages_fit(circuit, arguments, found)
    return tuple(np.where(on, value, np.nan) for value in found)


def at_any_voltage(circuit: Numerics, arguments: Mapping[str, Any]) -> tuple[Array, ...]:
    """Return the unknowns at which the loops hold, be the transistors on or off."""
    system = newton.System(real_of(circuit).step, circuit.unknowns)
    start = _start(circuit)
    return newton.solve(system, arguments, start, _rescue(circuit, system, start))


def voltages_fit(
    circuit: Numerics, arguments: Mapping[str, Any], found: tuple[Array, ...]
) -> Array:
    """Say where the transistors have the voltages for which their laws are made.

    The output's counts where its Early effect does.
    """
    fit: Any = True
    if _DIODE in circuit.unknowns:
        fit = found[circuit.unknowns.index(_DIODE)] > 0
    with np.errstate(over="ignore", invalid="ignore"):
        for voltage in real_of(circuit).across(*found, **arguments):
            fit = fit & ((voltage > 0) | (arguments[_EARLY] == 0))
    return np.asarray(fit)


def _diode_voltage(circuit: Numerics) -> float:
    return 1.3 if circuit.followed else 0.65


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
        circuit.unknowns, lambda block: _ideal_currents(circuit, block), _diode_voltage(circuit)
    )


def _rescue(circuit: Numerics, system: newton.System, start: newton.Start) -> newton.Rescue:
    """Return what is tried where the first guess leads nowhere."""
    least = _LEAST_OF_FOLLOWED if circuit.followed else {}
    fine = looked_round(real_of(circuit).loops, circuit.unknowns, _FINE, with_early_effect=True)

    def rescue(block: newton.Block, count: int) -> tuple[Array, ...]:
        found = [np.full(count, np.nan) for _ in system.unknowns]
        attempts: tuple[_Attempt, ...] = (
            lambda some, size: careful(system, some, start(some), size),
            lambda some, size: brought_in(system, some, start, size, least),
            lambda some, size: careful(system, some, fine(some), size),
        )
        _fill(found, block, attempts, np.arange(count))
        return tuple(found)

    return rescue


_Attempt = Callable[[newton.Block, int], Sequence[Array]]
"""Takes a block of so many points, returns the unknowns; nan where it fails."""


def _fill(
    found: Sequence[Array], block: newton.Block, attempts: Sequence[_Attempt], lost: Any
) -> None:
    """Make the attempts one after the other, each for the points that are still lost."""
    for attempt in attempts:
        if lost.size == 0:
            return
        with np.errstate(all="ignore"):
            again = attempt(newton.taken(block, lost), lost.size)
        for value, own in zip(found, again, strict=True):
            value[lost] = own
        lost = lost[np.isnan(again[0])]


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
    real, last = real_of(circuit), circuit.unknowns[len(circuit.currents) - 1]
    step, unknowns = real.pins[slot]
    constants = {name: value for name, value in arguments.items() if not name.startswith("R_")}
    with np.errstate(invalid="ignore", divide="ignore"):
        pinned = real.pinned(I_out=output, **constants)

    def by_drop(*values: Any, I_pinned: Any, **block: Any) -> tuple[Any, ...]:
        """Step with the drop of the output current for the resistance, to have volts."""
        *others, change = step(*values[:-1], values[-1] / I_pinned, **block)
        return (*others, change * I_pinned)

    system = newton.System(by_drop, (*unknowns[:-1], "V_drop"))
    everything = {**arguments, last: np.asarray(pinned), _PINNED_CURRENT: output}
    start = _pinned_start(circuit, slot, unknowns)
    rescue = _pinned_rescue(system, unknowns, last)
    found = newton.solve(system, everything, start, rescue)
    return np.asarray(found[-1] / output)


def _pinned_start(circuit: Numerics, slot: str, unknowns: tuple[str, ...]) -> newton.Start:
    ideal = circuit.ideal
    if ideal is None:
        return lambda block: _near_the_output(unknowns, block, 1.0)
    own = resistance_name(slot)
    currents = from_currents(
        unknowns[:-1], lambda block: _ideal_currents(circuit, block), _diode_voltage(circuit)
    )

    def guess(block: newton.Block) -> tuple[Any, ...]:
        output = block[_PINNED_CURRENT]
        known = {name: block[name] for name in ideal.quantities if name != own}
        with np.errstate(invalid="ignore", divide="ignore", over="ignore"):
            resistance = ideal.needs[slot](output, **known)
            filled = {**block, own: np.where(resistance > 0, resistance, 0.0)}
        return (*currents(filled), resistance * output)

    return guess


def _near_the_output(unknowns: tuple[str, ...], block: newton.Block, ratio: float) -> Any:
    """Return a guess in which all other currents are what is given, or a part of the output."""
    currents = {"log_J_in": block[_GIVEN]} if _GIVEN in block else {}
    some = block[_PINNED_CURRENT] * ratio
    return (
        *(
            np.log(currents.get(name, some)) if name.startswith("log_") else _SOME_VOLTAGE
            for name in unknowns[:-1]
        ),
        _SOME_DROP,
    )


def _pinned_rescue(system: newton.System, unknowns: tuple[str, ...], last: str) -> newton.Rescue:
    """Return what is tried where the first guess leads to no resistance."""

    def rescue(block: newton.Block, count: int) -> tuple[Array, ...]:
        found = [np.full(count, np.nan) for _ in unknowns]

        def attempt(ratio: float) -> _Attempt:
            return lambda some, size: careful(
                system, some, _near_the_output(unknowns, some, ratio), size
            )

        possible = np.broadcast_to(np.isfinite(block[last]), count)
        _fill(found, block, tuple(map(attempt, _RATIOS)), np.flatnonzero(possible))
        return tuple(found)

    return rescue
