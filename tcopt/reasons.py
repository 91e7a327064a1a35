"""Why a circuit has no solution: what stands in its way, found by taking it out of the way."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

import numpy as np

from tcopt.numerics import Numerics, arguments_of
from tcopt.real import at_any_voltage, solution
from tcopt.solve import currents
from tcopt.symbols import INVERSE

__all__ = ["reason"]

_BETA, _EARLY, _DIODE = INVERSE["beta"], INVERSE["V_A"], "V_D"
_NEXT_TO_NOTHING = {_BETA: 1e-9}
"""What stands for nothing where a follower carries the base currents."""


def reason(circuit: Numerics, quantities: Mapping[str, Any]) -> str:
    """Return why no positive currents solve the loops, for a message.

    Parameters
    ----------
    circuit : from `tcopt.solve.numerics`
    quantities : numbers, those of ``circuit.quantities``, at which it has no solution
    """
    q = {name: float(quantities[name]) for name in circuit.quantities}
    for found in (*_by_inspection(q), *_off(circuit, q), *_by_trial(circuit, q)):
        return found
    return _left(circuit, q)


def _by_inspection(q: Mapping[str, float]) -> Iterator[str]:
    """Yield what the quantities alone show."""
    leakage, given = q.get("I_L", 0.0), q.get("I_given")
    if given is not None and leakage >= given:
        yield f"a unit transistor's leakage of {leakage:.3g} A is above the input's {given:.3g} A"
    if "M" in q and q["N"] * q["M"] <= 1:
        yield (
            f"area ratio times mirror ratio is {q['N'] * q['M']:.4g}, not above 1, which leaves "
            "no voltage across the core's resistor"
        )


def _off(circuit: Numerics, q: Mapping[str, float]) -> Iterator[str]:
    """Yield which voltage is none, where the loops hold with a transistor off."""
    if circuit.real is None:
        return
    arguments = arguments_of(circuit.quantities, q)
    found = at_any_voltage(circuit, arguments)
    if not np.isfinite(found[0]):
        return
    voltages = [float(v) for v in circuit.real.across(*found, **arguments)]
    named = dict(zip(circuit.unknowns, map(float, found), strict=True))
    diode = named.get(_DIODE)
    if diode is not None and diode <= 0:
        supply = f" at the supply of {q['V_CC']:.4g} V" if "V_CC" in q else ""
        yield (
            f"the voltage across the input transistor would be {diode:.3g} V{supply}, which "
            f"leaves it off{_beside(q)}"
        )
    for voltage in voltages:
        if voltage <= 0 and voltage != diode:
            yield (
                f"the output voltage of {q['V_out']:.4g} V is not above the output transistor's "
                f"emitter or source, at {q['V_out'] - voltage:.4g} V"
            )


def _beside(q: Mapping[str, float]) -> str:
    leakage = q.get("I_L", 0.0)
    return f"; a unit transistor leaks {leakage:.3g} A" if leakage > 0 else ""


def _by_trial(circuit: Numerics, q: Mapping[str, float]) -> Iterator[str]:
    """Yield the effect without which there is a solution, or say that it takes all of them."""
    effects = {
        "I_L": "leakage of {0:.3g} A of a unit transistor",
        _BETA: "base currents at a gain of {1:.3g}",
        _EARLY: "Early effect with {1:.3g} V, at an output voltage of {2:.3g} V",
        "I_others": "base currents of the other outputs, {0:.3g} A",
    }
    there = {name: words for name, words in effects.items() if q.get(name, 0.0) > 0}
    for name, words in there.items():
        if _solved(circuit, _without(circuit, q, name)):
            value = q[name]
            words = words.format(value, 1 / value, q.get("V_out", 0.0))  # noqa: PLW2901
            yield f"there would be one without the {words}"
            return
    if len(there) > 1 and _solved(circuit, _without(circuit, q, *there)):
        each = (w.format(q[n], 1 / q[n], q.get("V_out", 0.0)) for n, w in there.items())
        yield f"there would be one without {' and '.join(each)}"


def _without(circuit: Numerics, q: Mapping[str, float], *names: str) -> dict[str, float]:
    least = _NEXT_TO_NOTHING if circuit.followed else {}
    return {**q, **{name: least.get(name, 0.0) for name in names}}


def _solved(circuit: Numerics, q: Mapping[str, float]) -> bool:
    return bool(np.isfinite(solution(circuit, arguments_of(circuit.quantities, q))[0]))


def _left(circuit: Numerics, q: Mapping[str, float]) -> str:
    """Return what can be said where not even ideal transistors would help."""
    for name, current in currents(circuit, q).items():
        if current <= 0 or np.isposinf(current):
            return f"{name} would be {float(current):.4g} A"
    resistors = [
        f"{name} of {value:.4g} ohm"
        for name, value in q.items()
        if name.startswith("R_") and value > 0
    ]
    return f"no current drives {', '.join(resistors)} as the loop demands"
