"""Circuit to numpy: currents, sensitivities and needed resistances, over arrays of any shape.

All take the *quantities* of a circuit by name: resistances [ohm], ``V_T`` [V],
``log_I_S`` (I_S in A), ``N``, ``M`` [1], ``V_CC``, ``V_ref`` [V], ``I_given``
[A] and what real transistors add (`tcopt.symbols`), each a number or an array;
the arrays are broadcast against each other.

Ideal bipolar transistors have closed forms. All others are solved by Newton's
method (`tcopt.newton`) in the logarithms of the currents.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import lru_cache
from importlib import import_module
from types import MappingProxyType
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from tcopt import newton
from tcopt.arrays import Array
from tcopt.circuits import CIRCUITS, module_name
from tcopt.symbols import resistance_name

__all__ = ["IDEAL", "Numerics", "currents", "needed_resistance", "numerics", "sensitivities"]

Quantities = Mapping[str, ArrayLike]

IDEAL = "ideal"
"""The kind of transistor that has closed forms."""


@dataclass(frozen=True)
class Numerics:
    """The numpy functions that were made from one circuit, kind of input and of transistor.

    Attributes
    ----------
    currents : the currents' names, the output last
    unknowns : what the loops are solved for
    quantities : what the functions take
    closed_form, needs : with ideal transistors
    step, outputs : with all others
    partials : loops, and their partials by unknown and by quantity
    ideal : the same circuit with ideal transistors, where it can have them
    """

    device: str
    currents: tuple[str, ...]
    unknowns: tuple[str, ...]
    quantities: tuple[str, ...]
    partials: Callable[..., Any]
    closed_form: Callable[..., Any] | None
    needs: Mapping[str, Callable[..., Any]]
    step: Callable[..., Any] | None
    outputs: Callable[..., Any] | None
    ideal: Numerics | None


@lru_cache
def numerics(topology: str, feed: str, device: str = IDEAL) -> Numerics:
    """Return the numerics of a topology (`tcopt.circuits.CIRCUITS`) with one kind of input.

    ``device``: 'ideal', 'bipolar', 'bipolar_followed' or 'mos', as far as the topology has it.
    """
    circuit = CIRCUITS[topology]
    made = import_module(f"tcopt.circuits.generated.{module_name(topology, feed, device)}")
    has_ideal = device != IDEAL and "bipolar" in circuit.devices and device != "mos"
    return Numerics(
        device,
        made.CURRENTS,
        made.UNKNOWNS,
        made.QUANTITIES,
        made.partials,
        getattr(made, "closed_form", None),
        MappingProxyType(getattr(made, "NEEDS", {})),
        getattr(made, "step", None),
        getattr(made, "outputs", None),
        numerics(topology, feed) if has_ideal else None,
    )


def _arguments(names: tuple[str, ...], quantities: Quantities) -> dict[str, Any]:
    return {name: np.asarray(quantities[name], dtype=float) for name in names}


def currents(circuit: Numerics, quantities: Quantities) -> dict[str, Array]:
    """Solve the loops for all currents [A].

    The closed form in Wright's omega works on the logarithm of the current, so
    that no size of drop over- or underflows. Where no current solves the loops
    the result is nan, or not positive.

    Parameters
    ----------
    circuit : from `numerics`
    quantities : those of ``circuit.quantities``
    """
    if circuit.closed_form is None:
        found = _outputs(circuit, quantities, _solution(circuit, quantities))[0]
        with np.errstate(over="ignore"):
            return {
                name: np.asarray(np.exp(log))
                for name, log in zip(circuit.currents, found, strict=True)
            }
    # a short (R = 0) makes log(0) = -inf, for which omega(-inf) = 0 is the right answer
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        found = circuit.closed_form(**_arguments(circuit.quantities, quantities))
    return dict(zip(circuit.currents, map(np.asarray, found), strict=True))


def _solution(circuit: Numerics, quantities: Quantities) -> tuple[Array, ...]:
    """Return the unknowns of a circuit with real transistors."""
    if circuit.step is None:
        raise AssertionError("a circuit with ideal transistors has closed forms")
    arguments = _arguments(circuit.quantities, quantities)
    if circuit.ideal is not None:
        start = _from_ideal(circuit, circuit.ideal)
    else:
        start = newton.through(circuit.step, circuit.unknowns, _PLAIN, _far_above(circuit))
    return newton.solve(circuit.step, circuit.unknowns, arguments, start)


_PLAIN = {"inverse_V_A": 0.0, "I_L": 0.0}
"""Without Early effect and leakage a MOS loop is convex in the logarithm of its current."""


_OUTPUT = {"log_J_out", "log_I_out"}


def _far_above(circuit: Numerics) -> newton.Start:
    """Return a guess far above any solution, from where Newton's method comes down convexly."""
    guess = tuple(0.0 if name.startswith("log_") else 1.0 for name in circuit.unknowns)
    return lambda block: guess  # noqa: ARG005


def _from_ideal(circuit: Numerics, ideal: Numerics) -> newton.Start:
    """Return what makes the first guess from the solution with ideal transistors."""
    voltage = 1.3 if circuit.device.endswith("followed") else 0.65

    def guess(block: Mapping[str, Any]) -> tuple[Any, ...]:
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            found = currents(ideal, block)
            return tuple(
                np.log(found[_current_of(name)]) if name.startswith("log_") else voltage
                for name in circuit.unknowns
            )

    return guess


def _outputs(
    circuit: Numerics, quantities: Quantities, solution: tuple[Array, ...]
) -> tuple[Any, Any, Any]:
    """Return the logarithms of the currents and their partials by unknown and by quantity."""
    if circuit.outputs is None:
        raise AssertionError("a circuit with ideal transistors is solved for its currents")
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        found: tuple[Any, Any, Any] = circuit.outputs(
            *solution, **_arguments(circuit.quantities, quantities)
        )
    return found


def sensitivities(
    circuit: Numerics,
    quantities: Quantities,
    of: str = "I_out",
) -> dict[str, Array]:
    """Return ``d ln I / d ln q`` for each quantity q (for ``log_I_S``: per unit of it).

    By the implicit function theorem on the loops F(x, q) = 0:
    ``dx/d ln q = -(dF/dx)^-1 dF/d ln q``.

    Parameters
    ----------
    circuit, quantities : as for `currents`
    of : the current whose sensitivities are wanted
    """
    arguments = _arguments(circuit.quantities, quantities)
    index = circuit.currents.index(of)
    if circuit.closed_form is None:
        solution = _solution(circuit, quantities)
        _, by_unknown, by_quantity = _outputs(circuit, quantities, solution)
        row, direct = by_unknown[index], by_quantity[index]
    else:
        solution = tuple(_log(current) for current in currents(circuit, quantities).values())
        row = tuple(float(k == index) for k in range(len(circuit.unknowns)))
        direct = (0.0,) * len(circuit.quantities)
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        _, jacobian, right = circuit.partials(*solution, **arguments)
    shape = newton.shape_of(jacobian, right, row, direct)
    change = -np.linalg.solve(newton.matrix(jacobian, shape), newton.matrix(right, shape))
    total = np.einsum("...i,...iq->...q", newton.vector(row, shape), change)
    total = total + newton.vector(direct, shape)
    return {
        name: np.asarray(total[..., k] * (arguments[name] if name.startswith("R_") else 1.0))
        for k, name in enumerate(circuit.quantities)
    }


def _log(current: ArrayLike) -> Array:
    """Return the logarithm of a current, nan where it is no solution: -inf is a singular matrix."""
    amperes = np.asarray(current, dtype=float)
    return np.log(np.where(amperes > 0, amperes, np.nan))


def needed_resistance(
    circuit: Numerics, slot: str, output: ArrayLike, quantities: Quantities
) -> Array:
    """Return the resistance [ohm] that a slot needs for the output to be ``output`` [A].

    nan, or not positive, where no resistance brings it there.
    """
    own = resistance_name(slot)
    names = tuple(q for q in circuit.quantities if q != own)
    arguments = _arguments(names, quantities)
    pinned = np.asarray(output, dtype=float)
    if circuit.closed_form is not None:
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            return np.asarray(circuit.needs[slot](pinned, **arguments), dtype=float)
    if circuit.outputs is None:
        raise AssertionError("no outputs to pin")
    pin = newton.Pin(
        circuit.partials,
        circuit.outputs,
        circuit.unknowns,
        circuit.quantities.index(own),
        own,
        pinned,
    )
    if circuit.ideal is not None:
        start = _pinned_ideal(circuit, circuit.ideal, slot, pinned, arguments)
    else:
        first = tuple(
            np.log(pinned / (1 if name in _OUTPUT else 2)) if name.startswith("log_") else 1.0
            for name in circuit.unknowns
        )
        start = newton.solve_pinned(pin, {**arguments, **_plain(arguments)}, (first, 0.0))
    return np.asarray(newton.solve_pinned(pin, arguments, start)[1])


def _plain(arguments: Mapping[str, Any]) -> dict[str, Any]:
    return {name: np.asarray(value) for name, value in _PLAIN.items() if name in arguments}


def _pinned_ideal(
    circuit: Numerics, ideal: Numerics, slot: str, output: Array, arguments: Mapping[str, Any]
) -> newton.Pinned:
    """Return a first guess of unknowns and resistance from the ideal transistors."""
    own = resistance_name(slot)
    known = {name: arguments[name] for name in ideal.quantities if name != own}
    resistance = needed_resistance(ideal, slot, output, known)
    filled = {**known, own: np.where(resistance > 0, resistance, 0.0)}
    guess = _from_ideal(circuit, ideal)(filled)
    unknowns = tuple(
        np.log(output) if name in _OUTPUT else value
        for name, value in zip(circuit.unknowns, guess, strict=True)
    )
    return unknowns, resistance


def _current_of(unknown: str) -> str:
    return unknown.removeprefix("log_").replace("J_", "I_")
